#include "base/csv.hpp"

#include <csv.h>

#include <algorithm>
#include <memory>
#include <vector>

#include "base/embedded.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle::detail {
namespace {

/// Fields of the row being read. The strings are reused from row to row.
struct RowBuffer {
  std::vector<std::string> fields;
  std::size_t count = 0;
  bool complete = false;

  void add(const char* data, std::size_t size) {
    if (count == fields.size()) fields.emplace_back();
    fields[count++].assign(data, size);
  }
};

void on_field(void* data, std::size_t size, void* buffer) {
  static_cast<RowBuffer*>(buffer)->add(static_cast<const char*>(data), size);
}

void on_row_end(int, void* buffer) { static_cast<RowBuffer*>(buffer)->complete = true; }

[[noreturn]] void throw_quote_error(const std::string& place, std::size_t line) {
  throw InputError(place + ":" + std::to_string(line), "a quotation mark stands where none may",
                   "quote whole fields and double a quotation mark inside them");
}

}  // namespace

void read_csv(std::string_view text, const std::string& place, const std::function<void(const CsvRow&)>& on_row,
              char separator) {
  struct ParserDeleter {
    void operator()(csv_parser* p) const { csv_free(p); }
  };
  csv_parser parser;
  if (csv_init(&parser, CSV_STRICT | CSV_STRICT_FINI) != 0) throw std::bad_alloc();
  const std::unique_ptr<csv_parser, ParserDeleter> cleanup(&parser);
  csv_set_delim(&parser, static_cast<unsigned char>(separator));

  RowBuffer row;
  std::size_t line = 0;
  std::size_t first_line = 1;
  // Errors must not cross the C library, so rows are handed on between calls, one line per call.
  bool in_row = false;
  const auto hand_on = [&] {
    if (!row.complete) return;
    in_row = false;
    const bool blank = row.count == 1 && row.fields[0].empty();
    if (!blank) on_row({first_line, std::span(row.fields.data(), row.count)});
    row.count = 0;
    row.complete = false;
  };
  std::size_t begin = 0;
  while (begin < text.size()) {
    const std::size_t newline = text.find('\n', begin);
    const std::size_t size = (newline == std::string_view::npos ? text.size() : newline + 1) - begin;
    ++line;
    if (!in_row) {
      first_line = line;
      in_row = text.substr(begin, size).find_first_not_of(" \t\r\n") != std::string_view::npos;
    }
    if (csv_parse(&parser, text.data() + begin, size, on_field, on_row_end, &row) != size) throw_quote_error(place, line);
    hand_on();
    begin += size;
  }
  if (csv_fini(&parser, on_field, on_row_end, &row) != 0) throw_quote_error(place, first_line);
  hand_on();
}

const std::string& CsvRecord::text(std::string_view column) const {
  const auto found = std::find(header_.begin(), header_.end(), column);
  const auto index = static_cast<std::size_t>(found - header_.begin());
  if (found == header_.end() || index >= row_.fields.size()) {
    throw InputError(table_ + ":" + std::to_string(row_.line), "column \"" + std::string(column) + "\" is missing");
  }
  return row_.fields[index];
}

std::optional<double> CsvRecord::optional_number(std::string_view column) const {
  if (text(column).empty()) return std::nullopt;
  return number(column);
}

double CsvRecord::number(std::string_view column) const {
  const std::string& field = text(column);
  const std::optional<double> value = parse_number(field);
  if (!value) {
    throw InputError(table_ + ":" + std::to_string(row_.line) + ": " + std::string(column),
                     "\"" + field + "\" is not a number", "expected a decimal number");
  }
  return *value;
}

void for_each_record(std::string_view embedded_name, const std::function<void(const CsvRecord&)>& on_record) {
  const std::string table(embedded_name);
  std::vector<std::string> header;
  read_csv(embedded_table(embedded_name), table, [&](const CsvRow& row) {
    if (header.empty()) {
      header.assign(row.fields.begin(), row.fields.end());
    } else {
      on_record(CsvRecord(header, row, table));
    }
  });
}

}  // namespace pellicle::detail
