#pragma once
/// From a Run to thicknesses: which lines pair up, which length and reference each uses, and one result per spot
/// and angle.

#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "pellicle/base/finding.hpp"
#include "pellicle/estimate/thickness.hpp"
#include "pellicle/job/run.hpp"
#include "pellicle/transport/attenuation_length.hpp"

namespace pellicle {

/// An attenuation length and where it comes from.
struct LengthUsed {
  Quantity length_nm;
  std::string origin;           ///< "given", "set sio2-2004", "predicted: Seah-Gilmore on TPP-2M"
  std::string material;         ///< id of the material that attenuates
  double energy_ev = 0.0;       ///< kinetic energy of the electrons
  bool predicted = false;
  std::string formula;          ///< with what it shares its error: "TPP-2M", "S1", "S3", "set …"; empty: it stands alone
  double density_exponent = 0.0;  ///< d ln L/d ln ρ of a predicted length; 0 for any other
  Findings findings;
};

/// One way to a thickness, with everything that all its spots share.
struct ThicknessRoute {
  ThicknessMethod method = ThicknessMethod::ratio;
  std::string layer;                           ///< the layer whose thickness it gives
  std::optional<std::size_t> film_line, substrate_line;  ///< positions in Run::lines
  std::optional<ContaminationRoute> contamination;  ///< set when it gives the contamination layer
  std::vector<SignalFactor> factors;           ///< of r, besides the areas
  std::vector<NamedCorrelation> correlations;
  std::vector<std::pair<std::string, std::string>> formulas;  ///< inputs that come from a formula or set, and which
  std::optional<Quantity> reference_ratio;     ///< R₀, or the reference area of a single line
  std::string reference_origin;                ///< "given", "reference areas", "sensitivities", "table:…", "computed"
  std::vector<std::string> reference_applied;  ///< what a computed ratio is made of
  LengthUsed film_length;                      ///< of the (film's) line in the layer
  std::optional<LengthUsed> substrate_length;  ///< nothing: the same line, hence the same length
  double density_g_cm3 = 0.0;                  ///< of the layer
  double emitter_density_per_nm3 = 0.0;        ///< emitting atoms per volume of the layer; 0: not known
  Findings findings;
};

/// A one-sided 95 % bound of a thickness.
struct ThicknessBound {
  bool upper = true;
  double at95_nm = 0.0;
};

/// What Monte Carlo says of a thickness. @cite jcgm101
struct MonteCarloThickness {
  double mean_nm = 0.0;
  double standard_uncertainty_nm = 0.0;
  Interval interval_nm;             ///< probabilistically symmetric, 95 %
  std::size_t draws = 0;
  std::size_t rejected = 0;         ///< draws without a thickness
  /// Draws of a single line with no end to the thickness, since the film is as good as infinitely thick. They count in
  /// the interval; mean and standard uncertainty do not exist then, and hold the median and a quarter of the interval.
  std::size_t endless = 0;
  bool gum_agrees = false;          ///< JCGM 101 clause 8: to half a unit of the first digit of the uncertainty
};

/// One spot at one angle by one route.
struct ThicknessResult {
  std::size_t table = 0;               ///< position in Run::tables
  std::string spot;
  double emission_deg = 0.0;
  std::size_t route = 0;               ///< position in ThicknessResults::routes
  std::optional<Quantity> film_area, substrate_area;
  std::optional<Thickness> thickness;  ///< nothing: a bound, or failed. Its findings are in `findings`.
  std::optional<MonteCarloThickness> monte_carlo;
  std::optional<ThicknessBound> bound;
  std::string failure;                 ///< the reason, one sentence
  std::optional<Quantity> areal_density_ug_cm2;    ///< thickness × density
  std::optional<Quantity> emitting_atoms_per_nm2;  ///< thickness × atom density
  std::vector<std::uint32_t> findings; ///< positions in ThicknessResults::findings

  /// Standard uncertainty to quote: Monte Carlo where it was run, else GUM.
  [[nodiscard]] double standard_uncertainty_nm() const;
  /// 95 % interval to quote, and the method it is from.
  [[nodiscard]] Interval interval_nm() const;
};

/// Over all spots that gave a thickness by one route. The angles of a spot are averaged first.
struct ThicknessSummary {
  std::size_t route = 0;
  std::size_t count = 0;                 ///< spots with a thickness, over which the mean is taken
  std::size_t thicknesses = 0;           ///< results with a thickness: spots times angles
  std::size_t bounds = 0;
  std::size_t failed = 0;
  double mean_nm = 0.0;
  std::optional<double> standard_deviation_nm;  ///< between spots; nothing for fewer than two
  double repeatability_of_mean_nm = 0.0; ///< falls with the number of spots
  double scale_nm = 0.0;                 ///< common to all spots, does not average
  bool scale_stated = true;
  std::vector<std::size_t> outliers;     ///< positions in ThicknessResults::results of spots far from the rest; they
                                         ///< are in the mean
};

struct ThicknessResults {
  std::vector<ThicknessRoute> routes;
  std::vector<ThicknessResult> results;
  std::vector<ThicknessSummary> summaries;
  Findings findings;                     ///< each once; results point into it

  /// The findings of one result.
  [[nodiscard]] Findings findings_of(const ThicknessResult& result) const;
};

/// Called with results done and results in all; false stops the work.
using Progress = std::function<bool(std::size_t done, std::size_t all)>;

/// The routes a run asks for.
/// @throws InputError naming what is missing or contradictory: no reference, a film line from the substrate, an
///         element the layer does not hold, a layer between film and substrate, a doublet against half of one,
///         lines that mix reference areas and sensitivities
/// @throws DomainError when no length or reference ratio can be computed
[[nodiscard]] std::vector<ThicknessRoute> thickness_routes(const Run& run);

/// All thicknesses of a run. A spot without one of its lines, or without an answer, is a failed result and not an
/// exception; an undetected line gives a bound.
/// @throws as thickness_routes(); InputError for a row whose line is not declared or a doubled row
[[nodiscard]] ThicknessResults run_thickness(const Run& run, const Progress& progress = {});

}  // namespace pellicle
