#pragma once
/// The angle of the detected electrons, and how far a thickness may rest on it.
///
/// The emission angle is counted from the surface normal (ISO 18115-1). The take-off angle is counted
/// from the surface plane and is accepted only by that name. Swapping them is exact both ways:
/// emission = 90° − take-off. @cite iso18115

#include "pellicle/base/finding.hpp"

namespace pellicle {

/// Emission angle of a take-off angle [deg]. @throws InputError unless 0 < takeoff_deg <= 90.
[[nodiscard]] double emission_deg_from_takeoff(double takeoff_deg);

/// @throws InputError unless 0 <= emission_deg < 90.
void check_emission_deg(double emission_deg);

/// Elastic scattering makes a constant attenuation length wrong at grazing emission: note above 50°,
/// warning above 60°, error above 80°, unless the length was given for that very angle.
/// @cite cumpson1997
[[nodiscard]] Findings emission_findings(double emission_deg, bool length_given_for_angle = false);

}  // namespace pellicle
