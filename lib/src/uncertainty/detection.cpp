#include "pellicle/uncertainty/detection.hpp"

#include <cmath>
#include <numbers>

#include <boost/math/special_functions/erf.hpp>

#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle {

double decision_level_counts(double background_counts) noexcept { return 2.33 * std::sqrt(background_counts); }

double detection_limit_counts(double background_counts) noexcept { return 2.71 + 4.65 * std::sqrt(background_counts); }

double upper_bound_95(double area, double standard_uncertainty) {
  if (!std::isfinite(area)) throw InputError("area", number_text(area) + " is not a number");
  if (!(standard_uncertainty > 0.0) || !std::isfinite(standard_uncertainty)) {
    throw InputError("area_sd", number_text(standard_uncertainty) + " is not a number > 0");
  }
  const double reduced = area / standard_uncertainty;
  // Far below zero the posterior is exponential with mean s²/|a|, and Φ(a/s) nears the smallest double.
  if (reduced < -30.0) return standard_uncertainty / -reduced * std::log(20.0);
  const double above_zero = 0.5 * std::erfc(-reduced / std::numbers::sqrt2);
  return area + standard_uncertainty * std::numbers::sqrt2 * boost::math::erfc_inv(2.0 * 0.05 * above_zero);
}

}  // namespace pellicle
