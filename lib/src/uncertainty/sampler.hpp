#pragma once
/// Draws from a distribution, many at a time.

#include <boost/math/interpolators/cubic_hermite.hpp>
#include <optional>
#include <span>
#include <vector>

#include "pellicle/base/random.hpp"
#include "pellicle/uncertainty/distribution.hpp"

namespace pellicle::detail {

/// Turns standard normal numbers into numbers of a distribution, at equal probability. So correlated normal numbers
/// become correlated numbers of any distributions (Gaussian copula). Student t, gamma, Poisson count and truncated
/// normal are interpolated between values of Distribution::at_normal(): within 1e-6 of the distance from the mean, or
/// of the standard deviation where that is larger, for |z| < 5; draws beyond |z| = 9 are taken for 9.
class Sampler {
 public:
  explicit Sampler(const Distribution& distribution);

  /// Independent numbers.
  void draw(RandomStream& stream, std::span<double> numbers) const;

  /// Normal numbers become numbers of the distribution, in place.
  void from_normal(std::span<double> numbers) const;

 private:
  Distribution distribution_;
  bool whole_ = false;  ///< a truncated normal of which nothing is cut off
  std::optional<boost::math::interpolators::cardinal_cubic_hermite<std::vector<double>>> table_;
};

}  // namespace pellicle::detail
