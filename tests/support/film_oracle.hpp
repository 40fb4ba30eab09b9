#pragma once
/// The thickness of a film by a second road: long double bisection on the equation of the forward model. Shares nothing
/// with the library, is slow, and cannot fail to converge.

#include <cmath>
#include <numbers>

namespace pellicle::test {

/// x of ln(1 − exp(−x)) + ρ x = ln r, r > 0, by bisection in ln x. Good to about 1e-18.
inline long double reduced_thickness_by_bisection(long double reduced_ratio, long double length_ratio) {
  const long double target = std::log(reduced_ratio);
  const auto above = [&](long double x) { return std::log(-std::expm1(-x)) + length_ratio * x > target; };
  long double low = -11000.0L, high = 11000.0L;  // ln x over the range of a long double
  for (int i = 0; i < 200; ++i) {
    const long double middle = (low + high) / 2.0L;
    (above(std::exp(middle)) ? high : low) = middle;
  }
  return std::exp((low + high) / 2.0L);
}

inline long double radians(long double degrees) { return degrees * std::numbers::pi_v<long double> / 180.0L; }

/// t of a film [nm]; the length ratio may be one.
inline long double thickness_by_bisection(long double ratio, long double reference_ratio, long double film_length,
                                          long double substrate_length, long double emission_deg) {
  return reduced_thickness_by_bisection(ratio / reference_ratio, film_length / substrate_length) * film_length *
         std::cos(radians(emission_deg));
}

}  // namespace pellicle::test
