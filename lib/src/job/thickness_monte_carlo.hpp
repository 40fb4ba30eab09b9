#pragma once

#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// Monte Carlo of one measurement: areas normal and cut off at zero, the angle normal, everything else lognormal.
/// @param gum what the GUM says, for the comparison
[[nodiscard]] MonteCarloThickness thickness_by_monte_carlo(const FilmMeasurement& measurement, const Thickness& gum,
                                                           const UncertaintyOptions& options, std::uint64_t stream);

/// 95 % (upper) or 5 % (lower) quantile of the thickness, for a measurement with an undetected_area().
[[nodiscard]] double bound_by_monte_carlo(const FilmMeasurement& measurement, bool upper, const UncertaintyOptions& options,
                                          std::uint64_t stream);

}  // namespace pellicle::detail
