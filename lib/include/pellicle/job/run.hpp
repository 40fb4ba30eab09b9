#pragma once
/// A Run: one measurement set, as plain data. Files and command lines are read into it; every command
/// works from it.

#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

#include "pellicle/estimate/thickness.hpp"
#include "pellicle/lines/photon_source.hpp"
#include "pellicle/sample/geometry.hpp"
#include "pellicle/sample/stack.hpp"
#include "pellicle/signal/area.hpp"
#include "pellicle/signal/line.hpp"
#include "pellicle/signal/sensitivity.hpp"
#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

/// Where the reference ratio of a pair comes from.
enum class ReferenceOrigin { given, table, computed };

/// Reference ratio of one film line to one substrate line.
struct ReferenceRatio {
  std::string film;       ///< label of the film's line
  std::string substrate;  ///< label of the substrate's line
  Quantity ratio;         ///< when given
  ReferenceOrigin origin = ReferenceOrigin::given;
  std::string table_key = {};  ///< when from a table: a key of reference/data/reference_ratios.csv
};

/// How the thickness of a contamination layer follows from its C 1s line.
enum class ContaminationRoute {
  reference,      ///< C 1s against the area of an infinitely thick contamination layer
  sensitivities,  ///< C 1s against the sum of all lines from below, each over its response per atom
  atomic_percent  ///< from the apparent atomic % C; assumes equal lengths and matrix factors
};

/// "reference", "sensitivities" or "atomic-percent".
[[nodiscard]] const char* contamination_route_name(ContaminationRoute route) noexcept;
/// @throws InputError with the known names.
[[nodiscard]] ContaminationRoute contamination_route(std::string_view name);

struct Contamination {
  std::string layer;      ///< name of the layer, the outermost one
  std::string line;       ///< label of its C 1s line; contamination components only
  ContaminationRoute route = ContaminationRoute::reference;
};

/// Correlation of two fitted areas, by component label.
struct AreaCorrelation {
  std::string first, second;
  double coefficient = 0.0;
};

/// One row of the area table.
struct AreaRow {
  std::string spot;                    ///< analysed position
  std::optional<double> emission_deg;  ///< nothing: the angle of the run
  std::string line;                    ///< label of a component
  std::optional<double> area;          ///< nothing: not detected ("nd")
  std::optional<double> area_sd;
  CountingConditions counting;
  std::size_t table = 0;               ///< position in Run::tables
  std::size_t line_number = 0;         ///< in that file
};

/// How an interval is found.
enum class IntervalMethod { automatic, gum, monte_carlo, adaptive_monte_carlo };

/// Settings of the uncertainty evaluation.
struct UncertaintyOptions {
  IntervalMethod method = IntervalMethod::automatic;  ///< automatic: Monte Carlo for up to 20 results, else GUM
  std::size_t draws = 1'000'000;
  std::uint64_t seed = 1;
};

struct Run {
  std::string title;
  std::vector<std::pair<std::string, std::string>> record;  ///< echoed; see record_keys()
  PhotonSource source;
  Geometry geometry;
  std::optional<double> emission_deg;      ///< of rows that state none
  std::optional<double> emission_sd_deg;   ///< nothing: assumed, with a finding
  Stack sample;
  std::string length_set;                  ///< calibrated set for lengths not given; empty: predicted
  bool length_given_for_angle = false;     ///< the given lengths were determined for the angle of measurement
  ThicknessMethod method = ThicknessMethod::ratio;
  std::vector<Line> lines;
  SensitivityKind sensitivity_kind = SensitivityKind::atomic;
  bool sensitivity_includes_transmission = false;
  bool sensitivity_includes_escape_depth = false;  ///< that of an average matrix, ∝ E^0.75
  bool sensitivity_includes_asymmetry = false;
  std::vector<ReferenceRatio> references;
  std::optional<Contamination> contamination;
  AreaUnit area_unit = AreaUnit::arbitrary;
  bool transmission_corrected = true;
  std::vector<AreaCorrelation> area_correlations;
  std::vector<std::string> tables;         ///< names of the area tables, for messages and results
  std::vector<AreaRow> areas;
  std::vector<std::string> unread_columns; ///< columns of the tables that mean nothing to us
  UncertaintyOptions uncertainty;
  std::string place;                       ///< file name, for messages

  /// Line with this label, or nullptr.
  [[nodiscard]] const Line* find_line(std::string_view label) const noexcept;
  /// "file:line" of a row.
  [[nodiscard]] std::string place_of(const AreaRow& row) const;
};

/// What `[record]` may hold: specimen, analyst, date, instrument_id, pass_energy_ev, background, fit_model,
/// charge_reference, damage_check.
[[nodiscard]] const std::vector<std::string>& record_keys();

/// A value that pellicle assumes where nothing was stated, from reference/data/defaults.csv.
/// Names: emission_sd_deg, area_relative_sd, film_density_relative_sd, bulk_density_relative_sd,
/// computed_reference_ratio_relative_sd, sensitivity_relative_sd. Common practice, no source.
[[nodiscard]] double assumed_value(std::string_view name);

}  // namespace pellicle
