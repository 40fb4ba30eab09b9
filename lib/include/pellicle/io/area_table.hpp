#pragma once
/// Area tables (CSV). Separator: comma; a header without commas may use semicolons or tabs.
///
/// Long layout, one row per spot, angle and line:
///
/// | column            | meaning                                                          |
/// |-------------------|------------------------------------------------------------------|
/// | line              | label of the line or component (required)                        |
/// | area              | fitted net area (required): >= 0, below 0 within 3 area_sd, or nd (not detected) |
/// | spot              | analysed position; default "1"                                   |
/// | emission_deg      | emission angle from the surface normal, 0 <= … < 90              |
/// | takeoff_deg       | take-off angle from the surface plane                            |
/// | tilt_deg          | stage tilt; the run file must state the geometry                 |
/// | area_sd           | standard uncertainty of the area, > 0                            |
/// | background_counts | counts of the background under the peak, >= 0                    |
/// | dwell_s           | dwell time per channel, all sweeps, > 0 [s]                      |
/// | step_ev           | channel width, > 0 [eV]                                          |
///
/// Only one of the three angle columns. Wide layout, one row per spot and angle: spot, an angle, and one column per
/// line or component label with its area; optionally "<label> sd" with its standard uncertainty.
///
/// Other columns are left unread and named, unless their name is nearly one of these.

#include <map>
#include <string>
#include <string_view>
#include <vector>

#include "pellicle/job/run.hpp"

namespace pellicle {

struct AreaTableOptions {
  bool wide = false;
  std::vector<std::string> labels;             ///< wide layout: the labels to look for
  std::map<std::string, std::string> columns;  ///< our column name (or label) → the header's
  Geometry geometry;                           ///< maps tilt_deg
  std::size_t table = 0;                       ///< stored in every row
};

struct AreaTable {
  std::vector<AreaRow> rows;
  std::vector<std::string> unread_columns;  ///< as the header calls them
};

/// Reads a table. @param place file name, for messages
/// @throws InputError naming file, line, column, what was wrong and what was expected
[[nodiscard]] AreaTable read_area_table(std::string_view csv, const std::string& place, const AreaTableOptions& options = {});

}  // namespace pellicle
