#pragma once
/// Comma-separated values, read with libcsv (RFC 4180), each row with the line it begins on.

#include <functional>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace pellicle::detail {

struct CsvRow {
  std::size_t line;                     ///< 1-based line of the file on which the row begins
  std::span<const std::string> fields;  ///< white space around unquoted fields is gone
};

/// Calls `on_row` for every row that is not blank. `place` names the text in errors.
/// @throws InputError for a stray or unclosed quote.
void read_csv(std::string_view text, const std::string& place, const std::function<void(const CsvRow&)>& on_row,
              char separator = ',');

/// One row of a table with a header, fields by column name.
class CsvRecord {
 public:
  CsvRecord(const std::vector<std::string>& header, const CsvRow& row, const std::string& table)
      : header_(header), row_(row), table_(table) {}

  /// Field of this column; empty text when the cell is empty.
  [[nodiscard]] const std::string& text(std::string_view column) const;
  /// Number in this column. @throws InputError naming table, line and column otherwise.
  [[nodiscard]] double number(std::string_view column) const;
  /// Number in this column or nothing for an empty cell.
  [[nodiscard]] std::optional<double> optional_number(std::string_view column) const;

 private:
  const std::vector<std::string>& header_;
  const CsvRow& row_;
  const std::string& table_;
};

/// Rows of one of the tables compiled into the library.
void for_each_record(std::string_view embedded_name, const std::function<void(const CsvRecord&)>& on_record);

}  // namespace pellicle::detail
