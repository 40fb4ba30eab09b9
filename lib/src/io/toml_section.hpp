#pragma once
/// Reading of one TOML table: typed access, located errors, and unknown keys refused.

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include <toml++/toml.h>

#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle::detail {

/// A table of a run file. allow() comes first, so that a misspelt key is called unknown before another is missed.
class TomlSection {
 public:
  /// @param path dotted name of the table, for messages; empty for the root
  TomlSection(const toml::table& table, std::string file, std::string path);

  /// Names the keys of this table.
  /// @throws InputError for any other that stands in it, with the nearest known key
  void allow(std::vector<std::string> keys);

  std::optional<std::string> text(std::string_view key);
  std::string required_text(std::string_view key);
  std::optional<double> number(std::string_view key);
  std::optional<bool> flag(std::string_view key);
  /// `2.8`, `{ value = 2.8, sd = 0.2 }` or `{ value = 2.8, relative_sd = 0.07 }`.
  std::optional<Quantity> quantity(std::string_view key);
  std::optional<TomlSection> section(std::string_view key);
  std::vector<TomlSection> sections(std::string_view key);
  /// Text or number as text; for entries that are only echoed.
  std::optional<std::string> echo(std::string_view key);
  /// The value as it stands, for keys with several shapes.
  const toml::node* node(std::string_view key);
  /// Keys of this table, in the order of the file.
  [[nodiscard]] std::vector<std::string> keys() const;

  /// "file:line:column: path.key"
  [[nodiscard]] std::string where(std::string_view key) const;
  [[nodiscard]] const std::string& file() const { return file_; }

 private:
  [[nodiscard]] const toml::node* find(std::string_view key) const;
  [[nodiscard]] std::string dotted(std::string_view key) const;

  const toml::table& table_;
  std::string file_, path_;
  std::vector<std::string> allowed_;  ///< empty: any key
};

/// Parses TOML text. @throws InputError with file, line and column.
[[nodiscard]] toml::table parse_toml(std::string_view text, const std::string& file);

/// A quantity written as one TOML value. @param where place for messages
[[nodiscard]] Quantity read_quantity(const toml::node& node, const std::string& file, const std::string& where);

}  // namespace pellicle::detail
