#pragma once
/// Generators of legal inputs, and the bridge from RapidCheck to doctest.
///
/// A run uses one fixed seed, so that it repeats; RC_PARAMS="seed=… max_success=…" in the environment asks for another.

#include <doctest/doctest.h>
#include <rapidcheck.h>

#include <cmath>
#include <cstdint>
#include <cstdlib>
#include <limits>
#include <string>
#include <vector>

namespace pellicle::test {

/// Checks a property; the counterexample that RapidCheck prints says how to repeat it.
template <typename Property>
void holds(const std::string& name, Property&& property) {
  setenv("RC_PARAMS", "seed=20240604 max_success=1000", 0);
  CHECK(rc::check(name, std::forward<Property>(property)));
}

/// Numbers from low to high, evenly over the logarithm.
inline rc::Gen<double> log_uniform(double low, double high) {
  constexpr std::int64_t kSteps = 1'000'000'000;
  return rc::gen::map(rc::gen::inRange<std::int64_t>(0, kSteps + 1), [=](std::int64_t step) {
    const double part = static_cast<double>(step) / static_cast<double>(kSteps);
    return std::min(high, std::max(low, low * std::exp(part * std::log(high / low))));
  });
}

inline rc::Gen<double> uniform(double low, double high) {
  constexpr std::int64_t kSteps = 1'000'000'000;
  return rc::gen::map(rc::gen::inRange<std::int64_t>(0, kSteps + 1), [=](std::int64_t step) {
    return low + (high - low) * static_cast<double>(step) / static_cast<double>(kSteps);
  });
}

/// Every double > 0 has a chance: ordinary sizes, the whole range of exponents, and the ends.
inline rc::Gen<double> any_positive() {
  using Limits = std::numeric_limits<double>;
  return rc::gen::oneOf(
      log_uniform(1e-3, 1e3),
      rc::gen::map(uniform(-323.0, 308.0),
                   [](double decade) { return std::max(Limits::denorm_min(), std::pow(10.0, decade)); }),
      rc::gen::element(Limits::denorm_min(), 1e-310, Limits::min(), Limits::epsilon(), 1.0, std::nextafter(1.0, 2.0),
                       1e150, Limits::max()));
}

inline rc::Gen<double> any_not_negative() { return rc::gen::oneOf(any_positive(), rc::gen::just(0.0)); }

/// Emission angles, the grazing ones included.
inline rc::Gen<double> any_emission_deg() {
  return rc::gen::oneOf(uniform(0.0, 89.0),
                        rc::gen::element(0.0, 1e-300, 45.0, 60.0, 89.999999, std::nextafter(90.0, 0.0)));
}

}  // namespace pellicle::test
