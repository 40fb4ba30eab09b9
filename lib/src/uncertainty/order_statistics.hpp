#pragma once
/// Median and coverage intervals of a large sample.

#include <span>

#include "pellicle/uncertainty/propagation.hpp"

namespace pellicle::detail {

struct OrderStatistics {
  double median = 0.0;
  CoverageInterval symmetric, shortest;
};

/// Exact order statistics of the sample, JCGM 101:2008, 7.7 [jcgm101]; nothing is interpolated. Only what is looked for
/// is sorted, on up to `threads` threads; the outcome depends on the values alone. The shortest interval is the lowest
/// of several equally short ones. Zeros come out without sign.
/// @param values finite, at least two; left in another order
[[nodiscard]] OrderStatistics order_statistics(std::span<double> values, double coverage_probability, unsigned threads);

/// The symmetric interval alone.
[[nodiscard]] CoverageInterval symmetric_interval(std::span<double> values, double coverage_probability);

}  // namespace pellicle::detail
