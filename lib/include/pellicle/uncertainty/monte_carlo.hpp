#pragma once
/// Propagation of distributions through any model by random draws: JCGM 101:2008 [jcgm101].
///
/// Draws are made in blocks of kBlockSize, each with random streams of its own (base/random.hpp), and evaluated a block
/// at a time. Sums run within blocks, then over blocks in their order. So the result depends on the seed and on nothing
/// else: not on threads, not on chance.

#include <cstddef>
#include <cstdint>
#include <functional>
#include <span>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/base/finding.hpp"
#include "pellicle/uncertainty/propagation.hpp"

namespace pellicle {

/// y for many draws: `inputs[i][k]` is input i of draw k, `result[k]` its y. All spans have one size, at most
/// kBlockSize. It is called from several threads at once. What is not finite in `result` counts as a draw for which
/// the model has no value. It may throw an Error only for what concerns all draws.
using BlockModel = std::function<void(std::span<const std::span<const double>> inputs, std::span<double> result)>;

/// A block model that calls `model` for one draw after the other. An Error it throws makes that draw NaN.
[[nodiscard]] BlockModel block_model(Model model);

/// How to draw.
struct MonteCarloOptions {
  std::size_t draws = 1'000'000;  ///< fixed number; not used when adaptive
  /// Draw until the results are stable to `significant_digits` of the standard uncertainty (JCGM 101:2008, 7.9),
  /// looking first after eight batches, then after every quarter more.
  bool adaptive = false;
  int significant_digits = 2;          ///< 1 or 2
  std::size_t most_draws = 4'000'000;  ///< adaptive: end here, stable or not; eight bytes are kept per draw
  double coverage_probability = 0.95;  ///< 0.5 … 0.999
  std::uint64_t seed = 20080101;       ///< any; the same seed, the same result
  unsigned threads = 0;                ///< at most so many; 0: thread_count()
  /// Called now and then, from the thread that called monte_carlo(), with the draws made and those planned so far.
  /// False ends the work.
  std::function<bool(std::size_t done, std::size_t planned)> progress = {};
};

/// monte_carlo() was ended by its progress function.
class Cancelled : public Error {
 public:
  using Error::Error;
};

/// The distribution of y in numbers. Those of draws are themselves uncertain by about 1/√draws of the standard
/// deviation; ends of 95 % intervals by three times that.
struct MonteCarlo {
  double mean = 0.0;
  double sd = 0.0;
  double median = 0.0;
  CoverageInterval symmetric;  ///< equal probability below and above; JCGM 101:2008, 7.7.2
  CoverageInterval shortest;   ///< JCGM 101:2008, 7.7.4; for a distribution with one peak
  double coverage_probability = 0.95;
  std::uint64_t seed = 0;
  std::size_t draws = 0;     ///< with a value; the results rest on these
  std::size_t rejected = 0;  ///< for which the model has no finite value
  bool stable = true;        ///< adaptive: the results were stable before most_draws
  /// monte_carlo_draws_rejected (warning), monte_carlo_not_stable (warning)
  Findings findings;
};

/// Draws from the distributions of the inputs and evaluates the model.
/// Correlated inputs: normal numbers with these correlation coefficients, each turned into its distribution at equal
/// probability (Gaussian copula) [nelsen2006]. For normal inputs the coefficients are those of the inputs themselves;
/// for lognormal inputs of 10 % these come out smaller by less than 0.5 %.
/// @throws InputError for options outside their ranges, fewer than 1000 draws, correlations as combine(), a set of
///         correlations that no quantities can have
/// @throws DomainError when fewer than half of the draws have a value
/// @throws Cancelled
/// @cite jcgm101 salmon2011
[[nodiscard]] MonteCarlo monte_carlo(const BlockModel& model, const std::vector<ModelInput>& inputs,
                                     const std::vector<Correlation>& correlations = {},
                                     const MonteCarloOptions& options = {});

/// Half a unit of the last of the significant digits of a standard uncertainty, its numerical tolerance δ:
/// 0.34 with two digits: 0.005. @param standard_uncertainty > 0 @param significant_digits 1 … 15
/// @throws InputError @cite jcgm101 (7.9.2)
[[nodiscard]] double numerical_tolerance(double standard_uncertainty, int significant_digits = 2);

/// Outcome of the comparison of two intervals.
struct IntervalAgreement {
  double tolerance = 0.0;        ///< δ
  double low_difference = 0.0;   ///< |difference| of the lower ends
  double high_difference = 0.0;  ///< |difference| of the upper ends
  bool agree = false;            ///< neither exceeds δ: the GUM result may be used
};

/// Validates an interval after the GUM by one from draws.
/// @param standard_uncertainty of the GUM result, > 0 @throws InputError @cite jcgm101 (8.1)
[[nodiscard]] IntervalAgreement compare_intervals(const CoverageInterval& gum, const CoverageInterval& draws,
                                                  double standard_uncertainty, int significant_digits = 2);

}  // namespace pellicle
