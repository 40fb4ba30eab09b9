#pragma once
/// Propagation of distributions by Monte Carlo, JCGM 101:2008. [jcgm101]
///
/// Inputs get the distributions below, correlated by a Gaussian copula; the model is evaluated block by block, each
/// block with a random stream of its own, so that neither thread count nor machine changes a bit of the result.

#include <cstddef>
#include <cstdint>
#include <functional>
#include <span>
#include <vector>

#include "pellicle/uncertainty/budget.hpp"
#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

/// Shape of an input with a given mean and standard deviation.
enum class Shape {
  normal,
  rectangular,
  lognormal,        ///< mean and standard deviation are those of the quantity itself; mean > 0
  truncated_normal  ///< normal of this mode and spread, cut off below zero
};

struct RandomInput {
  double mean = 0.0;
  double standard_deviation = 0.0;  ///< >= 0
  Shape shape = Shape::normal;
};

/// Model over a block: one span of draws per input; NaN where there is no answer.
using BlockModel = std::function<void(std::span<const std::span<const double>> inputs, std::span<double> result)>;

struct MonteCarloOptions {
  std::size_t draws = 1'000'000;
  std::uint64_t seed = 1;
  std::uint64_t stream = 0;     ///< independent streams of one seed
  /// Go on in steps of `draws` until mean, standard deviation and interval ends are stable to two significant digits
  /// of the standard deviation (JCGM 101, 7.9), at most 100 steps.
  bool adaptive = false;
  bool shortest = true;         ///< false: the shortest interval is not looked for, which saves sorting
};

struct MonteCarloResult {
  double mean = 0.0;
  double standard_deviation = 0.0;
  Interval symmetric;           ///< probabilistically symmetric 95 % interval, by order statistics
  Interval shortest;            ///< shortest 95 % interval; the symmetric one when it was not looked for
  std::size_t draws = 0;        ///< with an answer
  std::size_t rejected = 0;     ///< without
};

/// @throws InputError for a standard deviation < 0, a lognormal or truncated mean that is not > 0 (not >= 0), a
///         correlation outside [−1, 1] or correlations that contradict one another, or fewer than 1000 draws
/// @throws DomainError when fewer than half of the draws have an answer
/// @cite jcgm101
[[nodiscard]] MonteCarloResult propagate_by_monte_carlo(const std::vector<RandomInput>& inputs, const std::vector<Correlation>& correlations,
                                                        const BlockModel& model, const MonteCarloOptions& options = {});

/// JCGM 101:2008, clause 8: whether the ends of a GUM interval agree with those of Monte Carlo to `digits` significant
/// digits of the standard uncertainty: |difference| <= ½ 10^l, u = c 10^l with c of that many digits.
[[nodiscard]] bool intervals_agree(const Interval& gum, const Interval& monte_carlo, double standard_uncertainty, int digits = 1);

}  // namespace pellicle
