#include "io/toml_section.hpp"

#include <algorithm>
#include <cmath>
#include <stdexcept>
#include <utility>

#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle::detail {
namespace {

std::string at(const std::string& file, const toml::source_position& position) {
  return file + ":" + std::to_string(position.line) + ":" + std::to_string(position.column);
}

std::string kind_of(const toml::node& node) {
  switch (node.type()) {
    case toml::node_type::table: return "a table";
    case toml::node_type::array: return "an array";
    case toml::node_type::string: return "text";
    case toml::node_type::integer:
    case toml::node_type::floating_point: return "a number";
    case toml::node_type::boolean: return "true or false";
    default: return "a date or time";
  }
}

double finite_number(const toml::node& node, const std::string& where) {
  const std::optional<double> value = node.is_number() ? node.value<double>() : std::nullopt;
  if (!value) throw InputError(where, "this is " + kind_of(node), "expected a number");
  if (!std::isfinite(*value)) throw InputError(where, "this is not a finite number");
  return *value;
}

/// Characters beyond ASCII stand in quotation marks and comments only. toml++ 3.0 relies on that without checking it:
/// a letter such as µ between keys is undefined behaviour there.
void refuse_bare_letters(std::string_view text, const std::string& file) {
  if (text.starts_with("\xEF\xBB\xBF")) text.remove_prefix(3);  // byte-order mark
  std::string_view quote;  // that closes what is open; "#" for a comment, which the line closes
  std::size_t line = 1, line_begin = 0;
  for (std::size_t i = 0; i < text.size(); ++i) {
    const char c = text[i];
    const bool multi_line = quote.size() == 3;
    if (c == '\n') {
      ++line;
      line_begin = i + 1;
      // A string that the line ends is an error which the parser names.
      if (!multi_line) quote = {};
    } else if (quote == "#") {
      continue;
    } else if (!quote.empty()) {
      if (c == '\\' && quote.front() == '"') {
        // What follows is escaped; a line break is still counted.
        if (i + 1 < text.size() && text[i + 1] != '\n') ++i;
      } else if (text.substr(i).starts_with(quote)) {
        i += quote.size() - 1;
        quote = {};
      }
    } else if (c == '#') {
      quote = "#";
    } else if (c == '"' || c == '\'') {
      const std::string_view three = c == '"' ? "\"\"\"" : "'''";
      quote = text.substr(i).starts_with(three) ? three : three.substr(0, 1);
      i += quote.size() - 1;
    } else if (static_cast<unsigned char>(c) >= 0x80) {
      throw InputError(file + ":" + std::to_string(line) + ":" + std::to_string(i - line_begin + 1),
                       "a character beyond ASCII stands outside quotation marks", "put text into quotation marks");
    }
  }
}

}  // namespace

toml::table parse_toml(std::string_view text, const std::string& file) {
  refuse_bare_letters(text, file);
  try {
    return toml::parse(text, file);
  } catch (const toml::parse_error& e) {
    throw InputError(at(file, e.source().begin), std::string(e.description()), "see https://toml.io for the notation");
  }
}

Quantity read_quantity(const toml::node& node, const std::string& file, const std::string& where) {
  if (!node.is_table()) {
    if (!node.is_number()) {
      throw InputError(where, "this is " + kind_of(node), "expected a number or { value = …, sd = … }");
    }
    return finite_number(node, where);
  }
  TomlSection table(*node.as_table(), file, "");
  table.allow({"value", "sd", "relative_sd"});
  const std::optional<double> value = table.number("value");
  const std::optional<double> sd = table.number("sd");
  const std::optional<double> relative = table.number("relative_sd");
  if (!value) throw InputError(where, "value is missing", "expected { value = …, sd = … }");
  if (sd && relative) throw InputError(where, "both sd and relative_sd are given", "keep one");
  Quantity quantity = *value;
  if (sd) quantity.standard_uncertainty = *sd;
  if (relative) quantity.standard_uncertainty = *relative * std::abs(*value);
  if (quantity.standard_uncertainty && !(*quantity.standard_uncertainty >= 0.0)) {
    throw InputError(where, "the standard uncertainty is negative", "expected a number >= 0");
  }
  return quantity;
}

TomlSection::TomlSection(const toml::table& table, std::string file, std::string path)
    : table_(table), file_(std::move(file)), path_(std::move(path)) {}

void TomlSection::allow(std::vector<std::string> keys) {
  allowed_ = std::move(keys);
  for (const auto& [key, value] : table_) {
    const std::string_view name = key.str();
    if (std::find(allowed_.begin(), allowed_.end(), name) != allowed_.end()) continue;
    throw InputError(at(file_, key.source().begin) + ": " + dotted(name), "unknown key \"" + std::string(name) + "\"",
                     name_hint(name, allowed_));
  }
}

std::string TomlSection::dotted(std::string_view key) const {
  return path_.empty() ? std::string(key) : path_ + "." + std::string(key);
}

std::string TomlSection::where(std::string_view key) const {
  const toml::node* node = table_.get(key);
  return at(file_, node ? node->source().begin : table_.source().begin) + ": " + dotted(key);
}

const toml::node* TomlSection::find(std::string_view key) const {
  if (!allowed_.empty() && std::find(allowed_.begin(), allowed_.end(), key) == allowed_.end()) {
    throw std::logic_error(dotted(key) + " is read but not allowed");
  }
  return table_.get(key);
}

const toml::node* TomlSection::node(std::string_view key) { return find(key); }

std::vector<std::string> TomlSection::keys() const {
  std::vector<std::string> names;
  for (const auto& [key, value] : table_) names.emplace_back(key.str());
  return names;
}

std::optional<std::string> TomlSection::text(std::string_view key) {
  const toml::node* node = find(key);
  if (!node) return std::nullopt;
  const std::optional<std::string> value = node->is_string() ? node->value<std::string>() : std::nullopt;
  if (!value) throw InputError(where(key), "this is " + kind_of(*node), "expected text in quotation marks");
  return value;
}

std::string TomlSection::required_text(std::string_view key) {
  if (std::optional<std::string> value = text(key)) return *value;
  throw InputError(where(key), "this key is missing", "expected text in quotation marks");
}

std::optional<double> TomlSection::number(std::string_view key) {
  const toml::node* node = find(key);
  if (!node) return std::nullopt;
  return finite_number(*node, where(key));
}

std::optional<bool> TomlSection::flag(std::string_view key) {
  const toml::node* node = find(key);
  if (!node) return std::nullopt;
  if (!node->is_boolean()) throw InputError(where(key), "this is " + kind_of(*node), "expected true or false");
  return node->value<bool>();
}

std::optional<Quantity> TomlSection::quantity(std::string_view key) {
  const toml::node* node = find(key);
  if (!node) return std::nullopt;
  return read_quantity(*node, file_, where(key));
}

std::optional<TomlSection> TomlSection::section(std::string_view key) {
  const toml::node* node = find(key);
  if (!node) return std::nullopt;
  if (!node->is_table()) throw InputError(where(key), "this is " + kind_of(*node), "expected a table");
  return TomlSection(*node->as_table(), file_, dotted(key));
}

std::vector<TomlSection> TomlSection::sections(std::string_view key) {
  std::vector<TomlSection> all;
  const toml::node* node = find(key);
  if (!node) return all;
  if (!node->is_array()) {
    throw InputError(where(key), "this is " + kind_of(*node), "expected an array of tables, [[" + dotted(key) + "]]");
  }
  std::size_t number = 0;
  for (const toml::node& entry : *node->as_array()) {
    ++number;
    if (!entry.is_table()) {
      throw InputError(at(file_, entry.source().begin) + ": " + dotted(key), "this is " + kind_of(entry), "expected a table");
    }
    all.emplace_back(*entry.as_table(), file_, dotted(key) + "[" + std::to_string(number) + "]");
  }
  return all;
}

std::optional<std::string> TomlSection::echo(std::string_view key) {
  const toml::node* node = find(key);
  if (!node) return std::nullopt;
  if (const auto text = node->value_exact<std::string>()) return text;
  if (node->is_number()) return number_text(finite_number(*node, where(key)));
  if (node->is_date()) {
    const toml::date day = *node->value<toml::date>();
    const auto two = [](unsigned n) { return (n < 10 ? "0" : "") + std::to_string(n); };
    return std::to_string(day.year) + "-" + two(day.month) + "-" + two(day.day);
  }
  throw InputError(where(key), "this is " + kind_of(*node), "expected text or a number");
}

}  // namespace pellicle::detail
