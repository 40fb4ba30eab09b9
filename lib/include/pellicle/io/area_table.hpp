#pragma once
/// Area tables: CSV with one row per spot, angle and line.
///
/// | column            | meaning                                                          |
/// |-------------------|------------------------------------------------------------------|
/// | line              | label of the line (required)                                     |
/// | area              | fitted net area (required); >= 0, or below 0 within 3 area_sd    |
/// | spot              | analysed position; default "1"                                   |
/// | emission_deg      | emission angle from the surface normal, 0 <= … < 90              |
/// | takeoff_deg       | take-off angle from the surface plane; not together with emission_deg |
/// | area_sd           | standard uncertainty of the area, > 0                            |
/// | background_counts | counts of the background under the peak, >= 0                    |
/// | dwell_s           | dwell time per channel, all sweeps, > 0 [s]                      |
/// | step_ev           | channel width, > 0 [eV]                                          |

#include <string>
#include <string_view>
#include <vector>

#include "pellicle/job/run.hpp"

namespace pellicle {

/// Reads a table. @param place file name, for messages
/// @throws InputError naming file, line, column, what was wrong and what was expected
[[nodiscard]] std::vector<AreaRow> read_area_table(std::string_view csv, const std::string& place);

}  // namespace pellicle
