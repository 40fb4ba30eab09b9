#pragma once
/// Reading of one TOML table: typed access, located errors, and unknown keys refused.

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include <toml++/toml.h>

#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle::detail {

/// A table of a run file. Call every accessor the section knows, then finish(), which refuses the rest.
class TomlSection {
 public:
  /// @param path dotted name of the table, for messages; empty for the root
  TomlSection(const toml::table& table, std::string file, std::string path);

  [[nodiscard]] bool has(std::string_view key) const { return table_.contains(key); }
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
  /// The value as it stands, for keys with several shapes. Counts as known.
  const toml::node* node(std::string_view key);
  /// Keys of this table, in the order of the file.
  [[nodiscard]] std::vector<std::string> keys() const;

  /// @throws InputError for a key that no accessor has asked for, with the nearest known key.
  void finish() const;

  /// "file:line:column: path.key"
  [[nodiscard]] std::string where(std::string_view key) const;
  [[nodiscard]] const std::string& file() const { return file_; }

 private:
  const toml::node* find(std::string_view key);
  [[nodiscard]] std::string dotted(std::string_view key) const;

  const toml::table& table_;
  std::string file_, path_;
  std::vector<std::string> known_;
};

/// Parses TOML text. @throws InputError with file, line and column.
[[nodiscard]] toml::table parse_toml(std::string_view text, const std::string& file);

/// A quantity written as one TOML value. @param where place for messages
[[nodiscard]] Quantity read_quantity(const toml::node& node, const std::string& file, const std::string& where);

}  // namespace pellicle::detail
