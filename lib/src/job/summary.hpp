#pragma once
/// Results seen together: angles of one spot, spots of one route, outliers, and the mean.

#include "job/finding_pool.hpp"
#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// Adds `angles_disagree` to the results of every spot whose angles give different thicknesses.
void compare_angles(ThicknessResults& all, FindingPool& pool);

/// Mean over spots, the angles of a spot averaged first. Adds `spots_differ` to the results of a route whose spots
/// scatter more than their repeatability lets them.
[[nodiscard]] ThicknessSummary summarise(ThicknessResults& all, std::size_t route, FindingPool& pool);

}  // namespace pellicle::detail
