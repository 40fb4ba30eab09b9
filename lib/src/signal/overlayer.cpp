#include "pellicle/signal/overlayer.hpp"

#include <cmath>

#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/sample/emission.hpp"

namespace pellicle {
namespace {

void require_positive(const char* name, double value) {
  if (!(value > 0.0) || !std::isfinite(value)) {
    throw InputError(name, number_text(value) + " is not a number > 0");
  }
}

/// x = t/(L cosθ) of checked arguments.
double reduced_thickness(double thickness_nm, double length_nm, double emission_deg) {
  if (!(thickness_nm >= 0.0) || !std::isfinite(thickness_nm)) {
    throw InputError("thickness_nm", number_text(thickness_nm) + " is not a number >= 0");
  }
  require_positive("length_nm", length_nm);
  check_emission_deg(emission_deg);
  // No film is no film, even where the smallest length times a grazing cosine is no number any more.
  return thickness_nm == 0.0 ? 0.0 : thickness_nm / (length_nm * std::cos(emission_deg * kRadianPerDegree));
}

}  // namespace

double film_signal(double thickness_nm, double length_nm, double emission_deg) {
  return -std::expm1(-reduced_thickness(thickness_nm, length_nm, emission_deg));
}

double substrate_signal(double thickness_nm, double length_nm, double emission_deg) {
  return std::exp(-reduced_thickness(thickness_nm, length_nm, emission_deg));
}

double ratio_of_film(double thickness_nm, double reference_ratio, double film_line_length_nm,
                     double substrate_line_length_nm, double emission_deg) {
  require_positive("reference_ratio", reference_ratio);
  const double film = reduced_thickness(thickness_nm, film_line_length_nm, emission_deg);
  const double substrate = reduced_thickness(thickness_nm, substrate_line_length_nm, emission_deg);
  const double ratio = reference_ratio * -std::expm1(-film) * std::exp(substrate);
  if (!std::isfinite(ratio)) {
    throw DomainError("thickness_nm", "the substrate's signal through " + number_text(thickness_nm) + " nm is too small for a number");
  }
  return ratio;
}

}  // namespace pellicle
