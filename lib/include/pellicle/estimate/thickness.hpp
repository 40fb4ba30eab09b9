#pragma once
/// Film thickness from the ratio of the film's line to the substrate's line.
///
///   R / R₀ = [1 − exp(−x)] exp(ϱ x),  x = t/(L_f cosθ),  ϱ = L_f/L_s                    (forward model:
///   t = L cosθ ln(1 + R/R₀)                 when L_f = L_s = L (same line)     signal/overlayer.hpp) [hill1976]; as used
///                                                                          for oxides in [seah2002]
///
/// The left side rises strictly from 0 to ∞, so every R > 0 has exactly one thickness. Numerical error:
/// at most 1e-13 relative for x from 1e-6 to 50 and ϱ from 0.2 to 5. Model error: that of the flat,
/// uniform, continuous film; islands, roughness and gradients change t.

#include <cstddef>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "pellicle/base/finding.hpp"
#include "pellicle/base/status.hpp"
#include "pellicle/uncertainty/budget.hpp"
#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

/// One measured ratio and all it takes to turn it into a thickness.
struct RatioMeasurement {
  Quantity ratio;                 ///< R = film area / substrate area, >= 0
  Quantity reference_ratio;       ///< R₀ > 0: infinitely thick film / bare substrate, same instrument
  Quantity film_line_length_nm;   ///< L_f > 0 [nm], attenuation length in the film of the film's line
  std::optional<Quantity> substrate_line_length_nm = std::nullopt;  ///< L_s [nm]; nothing: the same as L_f
  Quantity emission_deg = 0.0;    ///< θ [deg] from the surface normal, 0 <= θ < 90
  double length_correlation = 0.0;///< of L_f and L_s; formulas share most of their error
};

/// Areas instead of their ratio, so that each stands in the budget by itself.
struct AreaMeasurement {
  Quantity film_area;             ///< >= 0, any unit common to all areas
  Quantity substrate_area;        ///< > 0
  /// Reference ratio, or the two reference areas it is made of.
  std::optional<Quantity> reference_ratio = std::nullopt;
  std::optional<Quantity> reference_film_area = std::nullopt;       ///< of an infinitely thick film
  std::optional<Quantity> reference_substrate_area = std::nullopt;  ///< of the bare substrate
  Quantity film_line_length_nm;
  std::optional<Quantity> substrate_line_length_nm = std::nullopt;
  Quantity emission_deg = 0.0;
  double length_correlation = 0.0;
};

/// A thickness with its uncertainty after the GUM.
struct Thickness {
  double value_nm = 0.0;
  double standard_uncertainty_nm = 0.0;
  Interval interval_nm;             ///< 95 %; its lower end is never below zero
  double reduced_thickness = 0.0;   ///< x = t/(L_f cosθ)
  Budget budget;                    ///< contributions in nm
  bool scale_stated = true;         ///< false: a length came without uncertainty, so the thickness scale is not stated
  Findings findings;
};

/// Thickness from a ratio. First-order sensitivities, JCGM 100:2008 eq. (16).
/// @throws InputError when an argument is outside the range stated with it
/// @throws DomainError when the ratio is infinite: no substrate signal gives a bound only
/// @cite hill1976 jcgm100
[[nodiscard]] Thickness thickness_from_ratio(const RatioMeasurement& measurement);

/// Thickness from areas; R₀ from `reference_ratio` or from both reference areas, never from a mixture.
/// @throws as thickness_from_ratio; InputError when neither or both kinds of reference are given
[[nodiscard]] Thickness thickness_from_areas(const AreaMeasurement& measurement);

/// How a signal becomes a reduced thickness x = t/(L cosθ). With r the product of the factors:
///
/// | method         | r                                     | equation                              |
/// |----------------|---------------------------------------|---------------------------------------|
/// | ratio          | R/R₀                                  | [1 − exp(−x)] exp(ϱ x) = r            |
/// | substrate_line | substrate area / its reference area   | x = −ln r                             |
/// | film_line      | film area / its reference area        | x = −ln(1 − r)                        |
/// | atomic_percent | apparent atomic fraction of C, 0 … 1  | x = −ln(1 − r)                        |
enum class ThicknessMethod { ratio, substrate_line, film_line, atomic_percent };

/// "ratio", "substrate-line", "film-line" or "atomic-percent".
[[nodiscard]] const char* method_name(ThicknessMethod method) noexcept;

/// One factor of r: quantity^power.
struct SignalFactor {
  std::string name;        ///< as the budget shows it
  Quantity quantity;       ///< > 0; an area of the film may be 0
  double power = 1.0;
  ContributionKind kind = ContributionKind::scale;
  bool is_area = false;    ///< an area has a normal error cut off at zero, any other factor a lognormal one
};

/// Correlation of two inputs of a measurement, by their names in the budget.
struct NamedCorrelation {
  std::string first, second;
  double coefficient = 0.0;
};

/// The general measurement: any product of factors, lengths, angle, acceptance.
struct FilmMeasurement {
  ThicknessMethod method = ThicknessMethod::ratio;
  std::vector<SignalFactor> factors;
  Quantity film_line_length_nm;   ///< L_f; for the single-line methods the length of that line in the film
  std::optional<Quantity> substrate_line_length_nm = std::nullopt;
  Quantity emission_deg = 0.0;
  double acceptance_half_angle_deg = 0.0;
  /// ln of those factors that go with the emission angle as exp(k/cosθ), at emission_deg: layers above the film.
  double log_of_layers_above = 0.0;
  bool length_given_for_angle = false;   ///< the length was determined for this very angle
  std::vector<NamedCorrelation> correlations = {};
};

/// Names of the lengths and the angle in a budget.
inline constexpr const char* kLengthName = "length_nm";
inline constexpr const char* kFilmLengthName = "film_line_length_nm";
inline constexpr const char* kSubstrateLengthName = "substrate_line_length_nm";
inline constexpr const char* kEmissionName = "emission_deg";

/// Thickness of a general measurement with its uncertainty after the GUM. The acceptance cone is averaged over
/// before the ratio is formed; sensitivities are those of the axis, scaled by what the cone does to t.
/// @throws InputError for a factor, length or angle outside its range
/// @throws DomainError when r has no finite thickness (film_line with r >= 1, substrate_line with r > 1)
/// @cite hill1976 jcgm100
[[nodiscard]] Thickness thickness_from_factors(const FilmMeasurement& measurement);

/// t [nm] of many draws of all inputs, without uncertainty; NaN where there is no answer. Order of the inputs: factors,
/// film line length, substrate line length (if any), emission angle; inputs[i][k] is input i of draw k. A single line
/// beyond its reference has its limit: 0 for the substrate's line, +infinity for the film's.
/// @param out as many as there are draws, at most kBlockSize
/// @param cone_factor t over what the axis alone gives, from cone_factor()
void thickness_of_draws(const FilmMeasurement& measurement, std::span<const std::span<const double>> inputs, double cone_factor,
                        std::span<double> out);

/// What the acceptance cone does to the thickness: t with the cone over t of the axis, near 1.
/// @throws as thickness_from_factors()
[[nodiscard]] double cone_factor(const FilmMeasurement& measurement);

/// Arrays of one size or single values that stand for all elements.
struct RatioArrays {
  std::span<const double> ratio;
  std::span<const double> reference_ratio;
  std::span<const double> film_line_length_nm;
  std::span<const double> substrate_line_length_nm = {};  ///< empty: the same as the film line's
  std::span<const double> emission_deg;
};

/// Thickness [nm] for many ratios: a value and a status per element, NaN where the status is not ok.
/// Never throws for an element. Parallel; neither thread count nor position changes a bit of a result.
/// @throws InputError when the sizes do not fit together
void thickness_nm(const RatioArrays& input, std::span<double> thickness_nm, std::span<Status> status);

}  // namespace pellicle
