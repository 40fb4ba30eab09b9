#pragma once
/// Where source, analyser and sample stand, and what a tilt does to the signal.
///
/// The analyser looks along a fixed direction; the source stands at the source–analyser angle ψ from it. Tilting the
/// sample turns its normal toward the source, away from it, or across (out of the plane of source and analyser):
///
///   toward: α = |ψ − θ|    away: α = ψ + θ    across: cosα = cosψ cosθ
///
/// with emission angle θ and X-ray incidence α, both from the surface normal.

#include <optional>
#include <string_view>

#include "pellicle/base/finding.hpp"

namespace pellicle {

/// What limits the analysed patch: "analyser" (its field of view, rate of a pure material independent of tilt) or
/// "x-ray-spot" (the footprint of the beam, rate ∝ cosθ cosα(0)/cosα(θ)).
enum class SignalArea { analyser, x_ray_spot };
enum class TiltDirection { toward_source, away_from_source, across };

/// As a run file names it.
[[nodiscard]] const char* signal_area_name(SignalArea area) noexcept;
/// @throws InputError with the known names.
[[nodiscard]] SignalArea signal_area(std::string_view name);
/// As a run file names it.
[[nodiscard]] const char* tilt_direction_name(TiltDirection direction) noexcept;
/// @throws InputError with the known names.
[[nodiscard]] TiltDirection tilt_direction(std::string_view name);

struct Geometry {
  std::optional<double> source_analyser_angle_deg;  ///< ψ, 0 < ψ < 180; nothing: not stated
  double acceptance_half_angle_deg = 0.0;           ///< semi-angle of a circular cone, 0 <= … < 45; 0: none
  SignalArea signal_area = SignalArea::analyser;
  std::optional<TiltDirection> tilt_direction;      ///< needed for tilt angles and for "x-ray-spot"
  double emission_at_zero_tilt_deg = 0.0;
};

/// Emission angle of a tilt [deg]: emission at zero tilt + tilt, its absolute value.
/// @throws InputError when no tilt direction is stated, or the result is 90° or more
[[nodiscard]] double emission_deg_of_tilt(const Geometry& geometry, double tilt_deg);

/// X-ray incidence angle from the surface normal [deg].
/// @throws InputError when tilt direction or source–analyser angle are not stated; DomainError when the X-rays come
///         from below the surface
[[nodiscard]] double incidence_deg(const Geometry& geometry, double emission_deg);

/// Signal of a thick pure material at this tilt over that at normal emission: 1 for "analyser",
/// cosθ cosα(0)/cosα(θ) for "x-ray-spot". @throws as incidence_deg()
[[nodiscard]] double tilt_factor(const Geometry& geometry, double emission_deg);

}  // namespace pellicle
