// Parameters a, b of each kind: lognormal, mean and standard deviation of the logarithm; rectangular and triangular,
// limits; Student t, degrees of freedom and scale; gamma and Poisson count, shape and scale; truncated normal, mean and
// standard deviation of the whole normal. The others have none.

#include "pellicle/uncertainty/distribution.hpp"

#include <boost/math/distributions/gamma.hpp>
#include <boost/math/distributions/students_t.hpp>
#include <cmath>
#include <string>

#include "pellicle/base/error.hpp"
#include "uncertainty/normal_tail.hpp"

namespace pellicle {
namespace {

constexpr double kWidestGamma = 3.0;         // sd/mean; beyond, the lower tail leaves the range of a double
constexpr double kDeepestTruncation = 30.0;  // standard deviations
constexpr double kLargestZ = 9.0;            // probability beyond: 1e-19
constexpr double kSmallestProbability = 1e-18;

void require(bool holds, DistributionKind kind, const char* fact) {
  if (!holds) throw InputError(std::string(distribution_kind_name(kind)) + " distribution", fact);
}

void require_spread(double mean, double sd, DistributionKind kind) {
  require(std::isfinite(mean), kind, "the mean is not a number");
  require(sd >= 0.0 && std::isfinite(sd), kind, "the standard deviation is not a number >= 0");
}

void require_limits(double low, double high, DistributionKind kind) {
  require(std::isfinite(low) && std::isfinite(high), kind, "a limit is not a number");
  require(low <= high, kind, "the lower limit lies above the upper one");
  require(std::isfinite(high - low), kind, "the limits are too far apart");
}

/// Quantile of a distribution of Boost at the probability of z, from the nearer tail.
template <typename BoostDistribution>
double boost_quantile(const BoostDistribution& d, double z) {
  return z < 0.0 ? quantile(d, detail::normal_below(z)) : quantile(complement(d, detail::normal_above(z)));
}

}  // namespace

const char* distribution_kind_name(DistributionKind kind) noexcept {
  switch (kind) {
    case DistributionKind::constant: return "constant";
    case DistributionKind::normal: return "normal";
    case DistributionKind::lognormal: return "lognormal";
    case DistributionKind::rectangular: return "rectangular";
    case DistributionKind::triangular: return "triangular";
    case DistributionKind::student_t: return "student t";
    case DistributionKind::gamma: return "gamma";
    case DistributionKind::poisson_count: return "poisson count";
    case DistributionKind::truncated_normal: return "truncated normal";
  }
  return "unknown";
}

Distribution Distribution::constant(double value) {
  require_spread(value, 0.0, DistributionKind::constant);
  return {DistributionKind::constant, value, 0.0, 0.0, 0.0};
}

Distribution Distribution::normal(double mean, double sd) {
  require_spread(mean, sd, DistributionKind::normal);
  if (sd == 0.0) return constant(mean);
  return {DistributionKind::normal, mean, sd, 0.0, 0.0};
}

Distribution Distribution::lognormal(double mean, double sd) {
  require_spread(mean, sd, DistributionKind::lognormal);
  require(mean > 0.0, DistributionKind::lognormal, "the mean is not above zero");
  if (sd == 0.0) return constant(mean);
  const double relative = sd / mean;
  const double log_variance = std::log1p(relative * relative);
  return {DistributionKind::lognormal, mean, sd, std::log(mean) - 0.5 * log_variance, std::sqrt(log_variance)};
}

Distribution Distribution::rectangular(double low, double high) {
  require_limits(low, high, DistributionKind::rectangular);
  if (low == high) return constant(low);
  return {DistributionKind::rectangular, low + 0.5 * (high - low), (high - low) / std::sqrt(12.0), low, high};
}

Distribution Distribution::triangular(double low, double high) {
  require_limits(low, high, DistributionKind::triangular);
  if (low == high) return constant(low);
  return {DistributionKind::triangular, low + 0.5 * (high - low), (high - low) / std::sqrt(24.0), low, high};
}

Distribution Distribution::student_t(double mean, double sd, double degrees_of_freedom) {
  require_spread(mean, sd, DistributionKind::student_t);
  require(degrees_of_freedom > 2.0 && std::isfinite(degrees_of_freedom), DistributionKind::student_t,
          "the degrees of freedom are not a number > 2");
  if (sd == 0.0) return constant(mean);
  return {DistributionKind::student_t, mean, sd, degrees_of_freedom,
          sd * std::sqrt((degrees_of_freedom - 2.0) / degrees_of_freedom)};
}

Distribution Distribution::gamma(double mean, double sd) {
  require_spread(mean, sd, DistributionKind::gamma);
  require(mean > 0.0, DistributionKind::gamma, "the mean is not above zero");
  require(sd <= kWidestGamma * mean, DistributionKind::gamma, "the standard deviation exceeds three times the mean");
  if (sd == 0.0) return constant(mean);
  return {DistributionKind::gamma, mean, sd, (mean / sd) * (mean / sd), sd / mean * sd};
}

Distribution Distribution::poisson_count(double counts) {
  require(counts >= 0.0 && std::isfinite(counts), DistributionKind::poisson_count, "the counts are not a number >= 0");
  return {DistributionKind::poisson_count, counts + 1.0, std::sqrt(counts + 1.0), counts + 1.0, 1.0};
}

Distribution Distribution::truncated_normal(double normal_mean, double normal_sd) {
  require_spread(normal_mean, normal_sd, DistributionKind::truncated_normal);
  require(normal_mean >= -kDeepestTruncation * normal_sd, DistributionKind::truncated_normal,
          "the normal lies more than 30 standard deviations below zero");
  if (normal_sd == 0.0) return constant(normal_mean);
  // mean + sd h and sd² (1 + α h − h²) with h = φ(α)/[1 − Φ(α)], α = −mean/sd: Johnson, Kotz and Balakrishnan (1994),
  // chapter 13, section 10.1 [johnson1994].
  const double alpha = -normal_mean / normal_sd;
  const double h = detail::normal_density(alpha) / detail::normal_above(alpha);
  const double variance = 1.0 + (alpha - h) * h;
  return {DistributionKind::truncated_normal, normal_mean + normal_sd * h, normal_sd * std::sqrt(variance), normal_mean,
          normal_sd};
}

Distribution Distribution::of(const Quantity& quantity) { return normal(quantity.value, quantity.sd()); }

double Distribution::quantile(double probability) const {
  require(probability >= kSmallestProbability && probability < 1.0, kind_, "the probability lies outside 1e-18 to 1");
  return at_normal(detail::normal_quantile(probability));
}

double Distribution::at_normal(double z) const {
  require(std::abs(z) <= kLargestZ, kind_, "z lies outside [-9, 9]");
  switch (kind_) {
    case DistributionKind::constant: return mean_;
    case DistributionKind::normal: return mean_ + sd_ * z;
    case DistributionKind::lognormal: return std::exp(a_ + b_ * z);
    case DistributionKind::rectangular:
      return z < 0.0 ? a_ + (b_ - a_) * detail::normal_below(z) : b_ - (b_ - a_) * detail::normal_above(z);
    case DistributionKind::triangular:
      return z < 0.0 ? a_ + (b_ - a_) * std::sqrt(0.5 * detail::normal_below(z))
                     : b_ - (b_ - a_) * std::sqrt(0.5 * detail::normal_above(z));
    case DistributionKind::student_t: return mean_ + b_ * boost_quantile(boost::math::students_t(a_), z);
    case DistributionKind::gamma:
    case DistributionKind::poisson_count: return boost_quantile(boost::math::gamma_distribution<>(a_, b_), z);
    case DistributionKind::truncated_normal:
      return b_ * detail::normal_excess(
                      -a_ / b_, z < 0.0 ? std::log1p(-detail::normal_below(z)) : std::log(detail::normal_above(z)));
  }
  return mean_;
}

}  // namespace pellicle
