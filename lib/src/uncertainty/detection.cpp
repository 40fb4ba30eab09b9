#include "pellicle/uncertainty/detection.hpp"

#include <algorithm>
#include <cmath>

#include "pellicle/base/error.hpp"
#include "uncertainty/normal_tail.hpp"

namespace pellicle {
namespace {

double root_of_background(double background_counts) {
  if (!(background_counts >= 0.0) || !std::isfinite(background_counts)) {
    throw InputError("background counts", "they are not a number >= 0");
  }
  return std::sqrt(background_counts);
}

/// What the truth exceeds with probability q.
double exceeded(double area, double sd, double q) {
  if (!std::isfinite(area)) throw InputError("area", "it is not a number");
  if (!(sd >= 0.0) || !std::isfinite(sd)) throw InputError("standard deviation of the area", "it is not a number >= 0");
  if (sd == 0.0) return std::max(area, 0.0);
  return sd * detail::normal_excess(-area / sd, std::log(q));
}

}  // namespace

double decision_level_counts(double background_counts) { return 2.33 * root_of_background(background_counts); }

double detection_limit_counts(double background_counts) { return 2.71 + 4.65 * root_of_background(background_counts); }

double upper_bound_95(double area, double sd) { return exceeded(area, sd, 0.05); }

double lower_bound_95(double area, double sd) { return exceeded(area, sd, 0.95); }

}  // namespace pellicle
