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

enum Column { kSpot, kEmission, kTakeoff, kTilt, kLine, kArea, kAreaSd, kBackground, kDwell, kStep, kColumns };

const std::vector<std::string>& column_names() {
  static const std::vector<std::string> names = {"spot", "emission_deg", "takeoff_deg", "tilt_deg", "line", "area",
                                                 "area_sd", "background_counts", "dwell_s", "step_ev"};
  return names;
}

/// Where the areas of one label stand in a wide table.
struct WideColumn {
  std::string label;
  std::size_t area = 0;
  std::optional<std::size_t> sd;
};

/// Where each of our columns stands in this table.
struct Header {
  std::array<std::optional<std::size_t>, kColumns> at;
  std::array<std::string, kColumns> name;  ///< as the file calls it
  std::vector<WideColumn> wide;
  std::vector<std::string> unread;
};

/// One header field → our name for it.
std::string our_name(const std::string& field, const AreaTableOptions& options) {
  for (const auto& [ours, theirs] : options.columns) {
    if (theirs == field) return ours;
    if (options.wide && theirs + " sd" == field) return ours + " sd";
  }
  return field;
}

void check_mapping(const std::string& where, const detail::CsvRow& row, const AreaTableOptions& options) {
  const std::vector<std::string> fields(row.fields.begin(), row.fields.end());
  for (const auto& [ours, theirs] : options.columns) {
    if (std::find(fields.begin(), fields.end(), theirs) == fields.end()) {
      throw InputError(where, "the header has no column \"" + theirs + "\", to which " + ours + " is mapped", detail::name_hint(theirs, fields));
    }
  }
}

Header read_header(const detail::CsvRow& row, const std::string& place, const AreaTableOptions& options) {
  const std::string where = place + ":" + std::to_string(row.line);
  check_mapping(where, row, options);
  Header header;
  std::vector<std::string> known = column_names();
  if (options.wide) {
    std::erase_if(known, [](const std::string& n) { return n == "line" || n == "area" || n == "area_sd"; });
    for (const std::string& label : options.labels) {
      known.push_back(label);
      known.push_back(label + " sd");
    }
  }
  std::map<std::string, std::size_t> positions;
  for (std::size_t i = 0; i < row.fields.size(); ++i) {
    const std::string name = our_name(row.fields[i], options);
    if (std::find(known.begin(), known.end(), name) == known.end()) {
      // Tables carry remarks and more; but what is nearly one of our names was meant to be it.
      const std::string meant = detail::nearest_name(name, known);
      if (!meant.empty()) throw InputError(where, "unknown column \"" + row.fields[i] + "\"", "did you mean \"" + meant + "\"?");
      header.unread.push_back(row.fields[i]);
      continue;
    }
    if (!positions.emplace(name, i).second) throw InputError(where, "column \"" + name + "\" stands twice in the header");
    const auto found = std::find(column_names().begin(), column_names().end(), name);
    if (found == column_names().end()) continue;
    const auto column = static_cast<std::size_t>(found - column_names().begin());
    header.at[column] = i;
    header.name[column] = row.fields[i];
  }
  if (options.wide) {
    for (const std::string& label : options.labels) {
      const auto area = positions.find(label);
      if (area == positions.end()) continue;
      const auto sd = positions.find(label + " sd");
      header.wide.push_back({label, area->second, sd == positions.end() ? std::nullopt : std::optional(sd->second)});
    }
    if (header.wide.empty()) throw InputError(where, "no column carries the label of a line", "expected one column per line: " + detail::join_names(options.labels));
  } else {
    for (const Column needed : {kLine, kArea}) {
      if (!header.at[needed]) {
        throw InputError(where, "column \"" + column_names()[needed] + "\" is missing from the header", "expected at least line and area");
      }
    }
  }
  std::string angles;
  int angle_count = 0;
  for (const Column angle : {kEmission, kTakeoff, kTilt}) {
    if (!header.at[angle]) continue;
    ++angle_count;
    angles += (angles.empty() ? "" : " and ") + column_names()[angle];
  }
  if (angle_count > 1) throw InputError(where, "both " + angles + " are given", "keep one; emission_deg = 90 - takeoff_deg");
  return header;
}

/// One row, its cells read by our column names.
class Cells {
 public:
  Cells(const detail::CsvRow& row, const Header& header, const std::string& place) : row_(row), header_(header), place_(place) {}

  [[nodiscard]] const std::string& text(Column column) const {
    static const std::string none;
    return header_.at[column] ? row_.fields[*header_.at[column]] : none;
  }
  [[nodiscard]] const std::string& field(std::size_t i) const { return row_.fields[i]; }

  [[nodiscard]] std::optional<double> number(Column column) const { return number_in(text(column), column_names()[column]); }

  [[nodiscard]] std::optional<double> number_in(const std::string& cell, const std::string& name) const {
    if (cell.empty()) return std::nullopt;
    const std::optional<double> value = parse_number(cell);
    if (!value) {
      const bool comma = cell.find(',') != std::string::npos;
      throw error(name, "\"" + cell + "\" is not a number", comma ? "write the decimal sign as a point" : "expected a number such as 1234.5");
    }
    return value;
  }

  [[nodiscard]] std::optional<double> bounded_in(const std::string& cell, const std::string& name, bool zero_allowed) const {
    const std::optional<double> value = number_in(cell, name);
    if (value && !(zero_allowed ? *value >= 0.0 : *value > 0.0)) {
      throw error(name, number_text(*value) + " is out of range", zero_allowed ? "expected a number >= 0" : "expected a number > 0");
    }
    return value;
  }

  [[nodiscard]] std::optional<double> bounded(Column column, bool zero_allowed) const {
    return bounded_in(text(column), column_names()[column], zero_allowed);
  }

  [[nodiscard]] InputError error(const std::string& name, const std::string& fact, const std::string& hint) const {
    return {where() + ": " + name, fact, hint};
  }

  [[nodiscard]] std::string where() const { return place_ + ":" + std::to_string(row_.line); }
  [[nodiscard]] std::size_t line() const { return row_.line; }

 private:
  const detail::CsvRow& row_;
  const Header& header_;
  const std::string& place_;
};

std::optional<double> read_angle(const Cells& cells, const Geometry& geometry) {
  try {
    if (const auto emission = cells.number(kEmission)) {
      check_emission_deg(*emission);
      return *emission == 0.0 ? 0.0 : *emission;
    }
    if (const auto takeoff = cells.number(kTakeoff)) return emission_deg_from_takeoff(*takeoff);
    if (const auto tilt = cells.number(kTilt)) return emission_deg_of_tilt(geometry, *tilt);
    return std::nullopt;
  } catch (const InputError& e) {
    if (e.where().starts_with(cells.where())) throw;
    throw InputError(cells.where() + ": " + e.where(), e.fact(), e.hint());
  }
}

void read_area(const Cells& cells, const std::string& cell, const std::string& name, AreaRow& row) {
  if (cell == "nd") return;
  const std::optional<double> area = cells.number_in(cell, name);
  if (!area) throw cells.error(name, "the cell is empty", "expected the fitted area, or nd for not detected");
  row.area = *area == 0.0 ? 0.0 : *area;  // −0 is 0
}

void read_rows(const Cells& cells, const Header& header, const AreaTableOptions& options, std::vector<AreaRow>& rows) {
  AreaRow row;
  row.table = options.table;
  row.line_number = cells.line();
  row.spot = cells.text(kSpot);
  if (row.spot.empty()) row.spot = "1";
  row.emission_deg = read_angle(cells, options.geometry);
  row.counting.background_counts = cells.bounded(kBackground, true);
  row.counting.dwell_s = cells.bounded(kDwell, false);
  row.counting.step_ev = cells.bounded(kStep, false);
  if (!options.wide) {
    row.line = cells.text(kLine);
    if (row.line.empty()) throw cells.error("line", "the cell is empty", "expected the label of a line");
    row.area_sd = cells.bounded(kAreaSd, false);
    read_area(cells, cells.text(kArea), "area", row);
    rows.push_back(std::move(row));
    return;
  }
  for (const WideColumn& column : header.wide) {
    // An empty cell of a wide table: this spot has no such line.
    if (cells.field(column.area).empty()) continue;
    AreaRow one = row;
    one.line = column.label;
    if (column.sd) one.area_sd = cells.bounded_in(cells.field(*column.sd), column.label + " sd", false);
    read_area(cells, cells.field(column.area), column.label, one);
    rows.push_back(std::move(one));
  }
}

/// Semicolons or tabs separate when the first line holds them and no comma.
char separator_of(std::string_view csv) {
  const std::string_view first = csv.substr(0, csv.find('\n'));
  if (first.find(',') != std::string_view::npos) return ',';
  if (first.find(';') != std::string_view::npos) return ';';
  return first.find('\t') != std::string_view::npos ? '\t' : ',';
}

}  // namespace

AreaTable read_area_table(std::string_view csv, const std::string& place, const AreaTableOptions& options) {
  std::vector<AreaRow> rows;
  Header header;
  std::size_t width = 0;
  const char separator = separator_of(csv);
  detail::read_csv(csv, place, [&](const detail::CsvRow& row) {
    if (width == 0) {
      header = read_header(row, place, options);
      width = row.fields.size();
      return;
    }
    if (row.fields.size() != width) {
      throw InputError(place + ":" + std::to_string(row.line),
                       "the row has " + std::to_string(row.fields.size()) + " fields where the header has " + std::to_string(width),
                       "a decimal comma or a missing separator is the usual cause");
    }
    read_rows(Cells(row, header, place), header, options, rows);
  }, separator);
  if (width == 0) throw InputError(place, "the table is empty", "expected a header such as spot,emission_deg,line,area");
  if (rows.empty()) throw InputError(place, "the table has a header but no rows");
  return {std::move(rows), std::move(header.unread)};
}

}  // namespace pellicle
