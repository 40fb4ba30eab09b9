#pragma once
/// One-sided 95 % bounds of a thickness where a line is not detected, or reaches its own reference.

#include <optional>

#include "job/measurements.hpp"
#include "pellicle/job/thickness_job.hpp"

namespace pellicle::detail {

/// The area of an undetected line as it enters a measurement: what was measured; or, where only "nd" is stated, the
/// largest area that counts as not detected, so that its 95 % limit is the detection limit. @cite currie1968
[[nodiscard]] Quantity undetected_area(const LineArea& area);

/// Bound from a measurement whose factor `lost` is an undetected_area(). The area is taken at the 95 % quantile of the
/// truth, given area ± sd and truth >= 0; what the other inputs add one-sidedly is combined with that in squares.
/// @param upper true: the film's line is lost @throws as thickness_from_factors()
[[nodiscard]] double bound_of_undetected(const FilmMeasurement& measurement, const char* lost, bool upper);

/// A single line that cannot give a thickness with two ends: the substrate's exceeds its reference area, or the film's
/// comes within 1.96 u of it. The bound follows from the same truncation at zero: of t, or of what the film still
/// lets through. Nothing for any other measurement.
[[nodiscard]] std::optional<ThicknessBound> bound_of_single_line(const FilmMeasurement& measurement);

}  // namespace pellicle::detail
