#pragma once
/// A physical number with its standard uncertainty, as people write it.

#include <optional>

namespace pellicle {

/// `Quantity q = 2.8` has no stated uncertainty, which is not the same as an uncertainty of zero:
/// it adds nothing to a budget and raises the finding `uncertainty_not_given`.
struct Quantity {
  double value = 0.0;
  std::optional<double> standard_uncertainty;  ///< same unit as value, >= 0

  constexpr Quantity() = default;
  constexpr Quantity(double v) : value(v) {}  // NOLINT: implicit on purpose, a bare number is a quantity
  constexpr Quantity(double v, double u) : value(v), standard_uncertainty(u) {}

  /// The uncertainty to compute with: zero when none was stated.
  [[nodiscard]] constexpr double sd() const { return standard_uncertainty.value_or(0.0); }
};

/// Two-sided 95 % interval, same unit as the quantity.
struct Interval {
  double low95 = 0.0;
  double high95 = 0.0;
};

}  // namespace pellicle
