#pragma once
/// A Run: one measurement set, as plain data. Files and command lines are read into it; every command
/// works from it.

#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "pellicle/lines/photon_source.hpp"
#include "pellicle/sample/stack.hpp"
#include "pellicle/signal/area.hpp"
#include "pellicle/signal/line.hpp"
#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

/// Reference ratio of one film line to one substrate line.
struct ReferenceRatio {
  std::string film;       ///< label of the film's line
  std::string substrate;  ///< label of the substrate's line
  Quantity ratio;
};

/// One row of the area table.
struct AreaRow {
  std::string spot;                    ///< analysed position
  std::optional<double> emission_deg;  ///< nothing: the angle of the run
  std::string line;                    ///< label
  double area = 0.0;
  std::optional<double> area_sd;
  CountingConditions counting;
  std::string place;                   ///< file and line, for messages
};

struct Run {
  std::string title;
  std::vector<std::pair<std::string, std::string>> record;  ///< echoed; see record_keys()
  PhotonSource source;
  std::optional<double> emission_deg;      ///< of rows that state none
  std::optional<double> emission_sd_deg;   ///< nothing: assumed, with a finding
  Stack sample;
  std::string length_set;                  ///< calibrated set for lengths not given; empty: predicted
  std::vector<Line> lines;
  std::vector<ReferenceRatio> references;
  AreaUnit area_unit = AreaUnit::arbitrary;
  std::vector<AreaRow> areas;
  std::string place;                       ///< file name, for messages

  /// Line with this label, or nullptr.
  [[nodiscard]] const Line* find_line(std::string_view label) const noexcept;
};

/// What `[record]` may hold: specimen, analyst, date, instrument_id, pass_energy_ev, background, fit_model,
/// charge_reference, damage_check.
[[nodiscard]] const std::vector<std::string>& record_keys();

/// A value that pellicle assumes where nothing was stated, from reference/data/defaults.csv.
/// Names: emission_sd_deg, area_relative_sd, film_density_relative_sd, bulk_density_relative_sd,
/// computed_reference_ratio_relative_sd, sensitivity_relative_sd. Common practice, no source.
[[nodiscard]] double assumed_value(std::string_view name);

}  // namespace pellicle
