#pragma once
/// The check tables of reference/published: one row is one number that pellicle must reproduce.

#include <map>
#include <set>
#include <string>
#include <string_view>
#include <vector>

#include "support/close_to.hpp"

namespace pellicle::test {

/// Top folder of the sources.
[[nodiscard]] std::string source_folder();

/// The inputs of a row, "formula=Al;energy_ev=1000", read by name. Remembers which were asked for.
class RowInputs {
 public:
  RowInputs() = default;
  /// @throws std::runtime_error for a part without "=" or a name that stands twice
  explicit RowInputs(const std::string& text);

  [[nodiscard]] const std::string& text(const std::string& name) const;
  [[nodiscard]] double number(const std::string& name) const;
  [[nodiscard]] bool has(const std::string& name) const { return values_.contains(name); }
  /// Names that nobody asked for: a check that ignores an input checks something else.
  [[nodiscard]] std::vector<std::string> unread() const;

 private:
  std::map<std::string, std::string> values_;
  mutable std::set<std::string> read_;
};

struct CheckRow {
  std::string file;  ///< file name without its folder
  std::size_t line = 0;
  std::string id, quantity, source, mark, note;
  RowInputs inputs;
  double expected = 0.0;
  Tolerance tolerance{};

  /// "curves.csv:12: s1-al-500 [seah2012imfp], published"
  [[nodiscard]] std::string name() const;
};

/// All rows of one table. @throws std::runtime_error naming file and line for a row that cannot be read
[[nodiscard]] std::vector<CheckRow> read_check_rows(const std::string& path);

/// Paths of all tables in reference/published, sorted.
[[nodiscard]] std::vector<std::string> check_tables();

/// Parts of a text between separators, without blanks at their ends.
[[nodiscard]] std::vector<std::string> split(std::string_view text, char separator);

/// Whole content of a file of the sources. @throws std::runtime_error when it cannot be read
[[nodiscard]] std::string read_whole_file(const std::string& path);

}  // namespace pellicle::test
