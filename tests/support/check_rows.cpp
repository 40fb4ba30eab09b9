#include "support/check_rows.hpp"

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <stdexcept>

#include "base/csv.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle::test {

std::string source_folder() { return PELLICLE_SOURCE_FOLDER; }

std::vector<std::string> split(std::string_view text, char separator) {
  std::vector<std::string> parts;
  while (true) {
    const std::size_t end = text.find(separator);
    std::string_view part = text.substr(0, end);
    while (!part.empty() && part.front() == ' ') part.remove_prefix(1);
    while (!part.empty() && part.back() == ' ') part.remove_suffix(1);
    parts.emplace_back(part);
    if (end == std::string_view::npos) return parts;
    text.remove_prefix(end + 1);
  }
}

std::string read_whole_file(const std::string& path) {
  std::ifstream file(path, std::ios::binary);
  if (!file) throw std::runtime_error("cannot read " + path);
  return {std::istreambuf_iterator<char>(file), {}};
}

RowInputs::RowInputs(const std::string& text) {
  for (const std::string& part : split(text, ';')) {
    const std::size_t equals = part.find('=');
    if (equals == std::string::npos) throw std::runtime_error("input \"" + part + "\" is not of the form name=value");
    if (!values_.emplace(part.substr(0, equals), part.substr(equals + 1)).second) {
      throw std::runtime_error("input \"" + part + "\" stands twice");
    }
  }
}

const std::string& RowInputs::text(const std::string& name) const {
  const auto found = values_.find(name);
  if (found == values_.end()) throw std::runtime_error("the row has no input " + name);
  read_.insert(name);
  return found->second;
}

double RowInputs::number(const std::string& name) const {
  const std::string& field = text(name);
  const auto value = parse_number(field);
  if (!value) throw std::runtime_error("input " + name + "=" + field + " is not a number");
  return *value;
}

std::vector<std::string> RowInputs::unread() const {
  std::vector<std::string> names;
  for (const auto& [name, value] : values_) {
    if (!read_.contains(name)) names.push_back(name);
  }
  return names;
}

std::string CheckRow::name() const {
  return file + ":" + std::to_string(line) + ": " + id + " [" + source + "], " + mark;
}

std::vector<CheckRow> read_check_rows(const std::string& path) {
  const std::string file = std::filesystem::path(path).filename().string();
  const std::string text = read_whole_file(path);
  std::vector<std::string> header;
  std::vector<CheckRow> rows;
  detail::read_csv(text, file, [&](const detail::CsvRow& fields) {
    if (header.empty()) {
      header.assign(fields.fields.begin(), fields.fields.end());
      return;
    }
    const std::string place = file + ":" + std::to_string(fields.line) + ": ";
    if (fields.fields.size() != header.size()) throw std::runtime_error(place + "the row is not as wide as the header");
    const detail::CsvRecord record(header, fields, file);
    CheckRow row;
    row.file = file;
    row.line = fields.line;
    row.id = record.text("id");
    row.quantity = record.text("quantity");
    row.source = record.text("source");
    row.mark = record.text("mark");
    row.note = record.text("note");
    row.expected = record.number("expected");
    try {
      row.inputs = RowInputs(record.text("inputs"));
    } catch (const std::runtime_error& e) {
      throw std::runtime_error(place + e.what());
    }
    const std::string kind = record.text("tolerance_kind");
    if (kind != "abs" && kind != "rel") throw std::runtime_error(place + "tolerance_kind is neither abs nor rel");
    row.tolerance = {kind == "abs" ? Tolerance::Kind::absolute : Tolerance::Kind::relative, record.number("tolerance")};
    if (!(row.tolerance.size > 0.0)) throw std::runtime_error(place + "the tolerance is not a number > 0");
    rows.push_back(std::move(row));
  });
  return rows;
}

std::vector<std::string> check_tables() {
  std::vector<std::string> paths;
  for (const auto& entry : std::filesystem::directory_iterator(source_folder() + "/reference/published")) {
    if (entry.path().extension() == ".csv") paths.push_back(entry.path().string());
  }
  std::sort(paths.begin(), paths.end());
  return paths;
}

}  // namespace pellicle::test
