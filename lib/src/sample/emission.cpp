#include "pellicle/sample/emission.hpp"

#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle {
namespace {

constexpr double kNoteAboveDeg = 50.0;
constexpr double kWarningAboveDeg = 60.0;
constexpr double kErrorAboveDeg = 80.0;

}  // namespace

double emission_deg_from_takeoff(double takeoff_deg) {
  if (!(takeoff_deg > 0.0 && takeoff_deg <= 90.0)) {
    throw InputError("takeoff_deg", number_text(takeoff_deg) + " is not a take-off angle",
                     "expected 0 < takeoff_deg <= 90, counted from the surface plane");
  }
  return 90.0 - takeoff_deg;
}

void check_emission_deg(double emission_deg) {
  if (!(emission_deg >= 0.0 && emission_deg < 90.0)) {
    throw InputError("emission_deg", number_text(emission_deg) + " is not an emission angle",
                     "expected 0 <= emission_deg < 90, counted from the surface normal");
  }
}

Findings emission_findings(double emission_deg, bool length_given_for_angle) {
  if (length_given_for_angle || !(emission_deg > kNoteAboveDeg)) return {};
  const std::string angle = "the emission angle of " + rounded_text(emission_deg, 3) + " deg from the normal is above ";
  if (emission_deg > kErrorAboveDeg) {
    return {{"emission_angle", Severity::error,
             angle + "80 deg, where no constant attenuation length holds; give a length for that angle",
             emission_deg, kErrorAboveDeg}};
  }
  if (emission_deg > kWarningAboveDeg) {
    return {{"emission_angle", Severity::warning,
             angle + "60 deg, where elastic scattering changes the attenuation length with angle and thickness",
             emission_deg, kWarningAboveDeg}};
  }
  return {{"emission_angle", Severity::note,
           angle + "50 deg, where elastic scattering begins to change the attenuation length", emission_deg,
           kNoteAboveDeg}};
}

}  // namespace pellicle
