#pragma once
/// What is known of an input of a model, as a probability distribution with its mean and standard deviation.
///
/// | distribution     | support     | when                                               | JCGM 101:2008 [jcgm101] |
/// |------------------|-------------|----------------------------------------------------|-------------------------|
/// | constant         | one value   | exact, or nothing stated                           |                         |
/// | normal           | all numbers | value and standard uncertainty are all one has     | 6.4.7                   |
/// | lognormal        | > 0         | positive, relative uncertainty: lengths, ratios    |                         |
/// | rectangular      | low … high  | limits only                                        | 6.4.2                   |
/// | triangular       | low … high  | limits, the middle more likely                     | 6.4.5                   |
/// | Student t        | all numbers | mean of few repeated measurements                  | 6.4.9                   |
/// | gamma            | > 0         | positive, wide                                     |                         |
/// | Poisson count    | > 0         | expected counts after a count has been taken       | 6.4.11                  |
/// | truncated normal | >= 0        | normal, but known not to be negative               |                         |
///
/// Anything else is a model of these: an arcsine distribution is the sine of a rectangular angle.

#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

namespace detail {
class Sampler;
}

/// Which of them.
enum class DistributionKind {
  constant,
  normal,
  lognormal,
  rectangular,
  triangular,
  student_t,
  gamma,
  poisson_count,
  truncated_normal
};

/// "constant", "normal", "lognormal", "rectangular", "triangular", "student t", "gamma", "poisson count" or
/// "truncated normal".
[[nodiscard]] const char* distribution_kind_name(DistributionKind kind) noexcept;

/// A distribution. Units are those of the input. A standard deviation of zero gives a constant. Numbers that are not
/// finite are refused like those outside the stated range.
class Distribution {
 public:
  /// An exact value, or one whose uncertainty is not stated.
  [[nodiscard]] static Distribution constant(double value);

  /// @param sd >= 0 @throws InputError @cite jcgm101 (6.4.7)
  [[nodiscard]] static Distribution normal(double mean, double sd);

  /// Mean m and standard deviation s of the quantity itself, not of its logarithm: ln x is normal with variance
  /// ln(1 + s²/m²) and mean ln m − ½ ln(1 + s²/m²). @param mean > 0 @param sd >= 0 @throws InputError
  /// @cite johnson1994
  [[nodiscard]] static Distribution lognormal(double mean, double sd);

  /// Standard deviation (high − low)/√12. @param high >= low @throws InputError @cite jcgm101 (6.4.2)
  [[nodiscard]] static Distribution rectangular(double low, double high);

  /// Most likely in the middle. Standard deviation (high − low)/√24. @param high >= low @throws InputError
  /// @cite jcgm101 (6.4.5)
  [[nodiscard]] static Distribution triangular(double low, double high);

  /// t distribution shifted and stretched so that its standard deviation is `sd`. The mean of n readings of sample
  /// standard deviation s has ν = n − 1 and sd = (s/√n) √(ν/(ν − 2)); the standard uncertainty that JCGM 100 gives it
  /// is s/√n. @param sd >= 0 @param degrees_of_freedom ν > 2, else there is no standard deviation
  /// @throws InputError @cite jcgm101 (6.4.9)
  [[nodiscard]] static Distribution student_t(double mean, double sd, double degrees_of_freedom);

  /// Shape (m/s)², scale s²/m. @param mean > 0 @param sd 0 … 3 mean @throws InputError @cite johnson1994
  [[nodiscard]] static Distribution gamma(double mean, double sd);

  /// The expected number of counts when q were counted and nothing was known before: gamma distribution with mean
  /// and variance q + 1. @param counts q >= 0 @throws InputError @cite jcgm101 (6.4.11)
  [[nodiscard]] static Distribution poisson_count(double counts);

  /// The part of a normal distribution at and above zero. mean() and sd() are those of what remains.
  /// @param normal_mean of the whole normal, may be negative, but not below −30 normal_sd
  /// @param normal_sd >= 0 @throws InputError @cite johnson1994
  [[nodiscard]] static Distribution truncated_normal(double normal_mean, double normal_sd);

  /// Normal, or constant when no uncertainty is stated. @throws InputError as normal()
  [[nodiscard]] static Distribution of(const Quantity& quantity);

  [[nodiscard]] DistributionKind kind() const noexcept { return kind_; }  ///< which of them
  [[nodiscard]] double mean() const noexcept { return mean_; }            ///< expected value
  [[nodiscard]] double sd() const noexcept { return sd_; }                ///< standard deviation, >= 0

  /// The value that is not exceeded with this probability. Numerical error below 1e-11 of the standard deviation or of
  /// the value, whichever is larger. @param probability 1e-18 <= p < 1 @throws InputError
  [[nodiscard]] double quantile(double probability) const;

  /// The value at the same probability as z has in the standard normal distribution, accurate in both tails.
  /// @param z -9 … 9 @throws InputError
  [[nodiscard]] double at_normal(double z) const;

 private:
  friend class detail::Sampler;
  Distribution(DistributionKind kind, double mean, double sd, double a, double b)
      : kind_(kind), mean_(mean), sd_(sd), a_(a), b_(b) {}

  DistributionKind kind_;
  double mean_, sd_;
  double a_, b_;  // parameters of the kind; see distribution.cpp
};

}  // namespace pellicle
