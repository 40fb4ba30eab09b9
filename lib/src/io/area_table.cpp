#include "pellicle/io/area_table.hpp"

#include <algorithm>
#include <array>
#include <optional>

#include "base/csv.hpp"
#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/sample/emission.hpp"

namespace pellicle {
namespace {

enum Column { kSpot, kEmission, kTakeoff, kLine, kArea, kAreaSd, kBackground, kDwell, kStep, kColumns };

const std::vector<std::string>& column_names() {
  static const std::vector<std::string> names = {"spot", "emission_deg", "takeoff_deg", "line", "area",
                                                 "area_sd", "background_counts", "dwell_s", "step_ev"};
  return names;
}

/// Where each of our columns stands in this table.
using Header = std::array<std::optional<std::size_t>, kColumns>;

Header read_header(const detail::CsvRow& row, const std::string& place) {
  const std::string where = place + ":" + std::to_string(row.line);
  Header header;
  for (std::size_t i = 0; i < row.fields.size(); ++i) {
    const auto found = std::find(column_names().begin(), column_names().end(), row.fields[i]);
    if (found == column_names().end()) {
      throw InputError(where, "unknown column \"" + row.fields[i] + "\"", detail::name_hint(row.fields[i], column_names()));
    }
    auto& slot = header[static_cast<std::size_t>(found - column_names().begin())];
    if (slot) throw InputError(where, "column \"" + row.fields[i] + "\" stands twice in the header");
    slot = i;
  }
  for (const Column needed : {kLine, kArea}) {
    if (!header[needed]) {
      throw InputError(where, "column \"" + column_names()[needed] + "\" is missing from the header",
                       "expected at least line and area");
    }
  }
  if (header[kEmission] && header[kTakeoff]) {
    throw InputError(where, "both emission_deg and takeoff_deg are given", "keep one; emission_deg = 90 - takeoff_deg");
  }
  return header;
}

/// One row, its cells read by our column names.
class Cells {
 public:
  Cells(const detail::CsvRow& row, const Header& header, const std::string& place)
      : row_(row), header_(header), where_(place + ":" + std::to_string(row.line)) {}

  [[nodiscard]] std::string text(Column column) const {
    return header_[column] ? row_.fields[*header_[column]] : std::string();
  }

  [[nodiscard]] std::optional<double> number(Column column, const char* expected = "expected a number such as 1234.5") const {
    const std::string cell = text(column);
    if (cell.empty()) return std::nullopt;
    const std::optional<double> value = parse_number(cell);
    if (!value) throw error(column, "\"" + cell + "\" is not a number", hint_for(cell, expected));
    return value;
  }

  [[nodiscard]] std::optional<double> bounded(Column column, bool zero_allowed) const {
    const std::optional<double> value = number(column);
    if (value && !(zero_allowed ? *value >= 0.0 : *value > 0.0)) {
      throw error(column, number_text(*value) + " is out of range", zero_allowed ? "expected a number >= 0" : "expected a number > 0");
    }
    return value;
  }

  [[nodiscard]] InputError error(Column column, const std::string& fact, const std::string& hint) const {
    return {where_ + ": " + column_names()[column], fact, hint};
  }

  [[nodiscard]] const std::string& where() const { return where_; }

 private:
  static std::string hint_for(const std::string& cell, const char* expected) {
    if (cell.find(',') != std::string::npos) return "write the decimal sign as a point";
    return expected;
  }

  const detail::CsvRow& row_;
  const Header& header_;
  std::string where_;
};

AreaRow read_row(const Cells& cells) {
  AreaRow row;
  row.place = cells.where();
  row.line = cells.text(kLine);
  if (row.line.empty()) throw cells.error(kLine, "the cell is empty", "expected the label of a line");
  row.spot = cells.text(kSpot);
  if (row.spot.empty()) row.spot = "1";
  try {
    if (const auto emission = cells.number(kEmission)) {
      check_emission_deg(*emission);
      row.emission_deg = emission;
    } else if (const auto takeoff = cells.number(kTakeoff)) {
      row.emission_deg = emission_deg_from_takeoff(*takeoff);
    }
  } catch (const InputError& e) {
    if (e.where().starts_with(cells.where())) throw;
    throw InputError(cells.where() + ": " + e.where(), e.fact(), e.hint());
  }
  row.area_sd = cells.bounded(kAreaSd, false);
  const std::optional<double> area = cells.number(kArea);
  if (!area) throw cells.error(kArea, "the cell is empty", "expected the fitted area");
  row.area = *area == 0.0 ? 0.0 : *area;  // −0 is 0
  const double allowed = -3.0 * row.area_sd.value_or(0.0);
  if (row.area < allowed) {
    throw cells.error(kArea, number_text(row.area) + " is a negative area" + (row.area_sd ? ", more than 3 area_sd below zero" : ""),
                      "a net area is >= 0 within 3 area_sd; check the background");
  }
  row.counting.background_counts = cells.bounded(kBackground, true);
  row.counting.dwell_s = cells.bounded(kDwell, false);
  row.counting.step_ev = cells.bounded(kStep, false);
  return row;
}

}  // namespace

std::vector<AreaRow> read_area_table(std::string_view csv, const std::string& place) {
  std::vector<AreaRow> rows;
  Header header;
  std::size_t width = 0;
  detail::read_csv(csv, place, [&](const detail::CsvRow& row) {
    if (width == 0) {
      header = read_header(row, place);
      width = row.fields.size();
      return;
    }
    if (row.fields.size() != width) {
      throw InputError(place + ":" + std::to_string(row.line),
                       "the row has " + std::to_string(row.fields.size()) + " fields where the header has " + std::to_string(width),
                       "a decimal comma or a missing separator is the usual cause");
    }
    rows.push_back(read_row(Cells(row, header, place)));
  });
  if (width == 0) throw InputError(place, "the table is empty", "expected a header such as spot,emission_deg,line,area");
  if (rows.empty()) throw InputError(place, "the table has a header but no rows");
  return rows;
}

}  // namespace pellicle
