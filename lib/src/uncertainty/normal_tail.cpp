#include "uncertainty/normal_tail.hpp"

#include <algorithm>
#include <boost/math/special_functions/erf.hpp>
#include <cmath>
#include <numbers>

namespace pellicle::detail {
namespace {

/// [1 − Φ(x)]/φ(x) by its continued fraction, Abramowitz and Stegun (1964), 26.2.14 [abramowitz1964]; exact to rounding
/// for x >= kTail.
double mills_ratio(double x) {
  double fraction = x;
  for (int k = 60; k >= 1; --k) fraction = x + k / fraction;
  return 1.0 / fraction;
}

constexpr double kTail = 4.0;

}  // namespace

double normal_density(double z) {
  return std::exp(-0.5 * z * z) * (0.5 * std::numbers::inv_sqrtpi * std::numbers::sqrt2);
}

double normal_below(double z) { return 0.5 * std::erfc(-z / std::numbers::sqrt2); }

double normal_above(double z) { return 0.5 * std::erfc(z / std::numbers::sqrt2); }

double normal_quantile(double p) { return -std::numbers::sqrt2 * boost::math::erfc_inv(2.0 * p); }

double normal_excess(double alpha, double log_q) {
  if (log_q >= 0.0) return 0.0;
  if (alpha < kTail) {
    // From the nearer tail: what lies above α + d, or below it.
    const double whole = normal_above(alpha);
    const double above = std::exp(log_q) * whole, below = normal_below(alpha) - std::expm1(log_q) * whole;
    return std::max(0.0, (above < 0.5 ? -normal_quantile(above) : normal_quantile(below)) - alpha);
  }
  // −ln of both sides: α d + d²/2 + ln m(α) − ln m(α + d) = −ln q with the Mills ratio m. The left side rises with
  // slope 1/m(α + d) and is convex, so Newton steps from the right, d = −ln q/α, stay there and converge.
  double d = -log_q / alpha;
  for (int i = 0; i < 50; ++i) {
    const double m = mills_ratio(alpha + d);
    const double step = m * (d * (alpha + 0.5 * d) - std::log(m / mills_ratio(alpha)) + log_q);
    d -= step;
    if (std::abs(step) <= 1e-15 * d) break;
  }
  return std::max(0.0, d);
}

}  // namespace pellicle::detail
