#pragma once
/// The one root of [1 − exp(−x)] exp(ϱ x) = r.

#include <cmath>

#include "pellicle/base/status.hpp"

namespace pellicle::detail {

struct RootResult {
  double x;
  Status status;
};

/// g(x) = ln(1 − e^−x) + ϱ x rises strictly (g' = ϱ + 1/(e^x − 1) > 0), and as a function of ln x it is
/// convex, so Newton's steps in ln x close in from above after the first one and need no bracket.
/// @param reduced_ratio r = R/R₀, finite and > 0 @param length_ratio ϱ = L_f/L_s > 0
inline RootResult overlayer_root(double reduced_ratio, double length_ratio) {
  if (length_ratio == 1.0) return {std::log1p(reduced_ratio), Status::ok};
  const double target = std::log(reduced_ratio);
  // Right for small and for large r, within a factor of a few between.
  double x = reduced_ratio < 1.0 ? reduced_ratio : 1.0 + std::log(reduced_ratio) / length_ratio;
  constexpr int kMostSteps = 60;
  for (int step = 0; step < kMostSteps; ++step) {
    const double slope = length_ratio + 1.0 / std::expm1(x);
    const double residual = std::log(-std::expm1(-x)) + length_ratio * x - target;
    const double log_step = residual / (x * slope);
    x *= std::exp(-log_step);
    if (std::abs(log_step) < 1e-8) {
      // Quadratic convergence: one more step of this size is below double precision.
      const double last = std::log(-std::expm1(-x)) + length_ratio * x - target;
      return {x - last / (length_ratio + 1.0 / std::expm1(x)), Status::ok};
    }
  }
  return {x, Status::not_converged};
}

}  // namespace pellicle::detail
