#pragma once
/// Whether a line is there at all, and what a line that is not seen still says.
///
/// Counts N of a peak over a background of B counts that is measured in as many channels as the peak ("paired
/// observations"), 5 % risk of either error, Poisson counting [currie1968]:
///
///   decision level   2.33 √B           a net area above it is a signal
///   detection limit  2.71 + 4.65 √B    a true net area of this size is found in 95 of 100 measurements
///
/// A net area a with standard deviation s may come out negative, the true one A may not. With a normal likelihood and
/// nothing known of A but A >= 0, A has the normal distribution of mean a and standard deviation s cut off at zero; its
/// quantiles are the bounds below.

namespace pellicle {

/// 2.33 √B, net counts. The factor is 1.645 √2, rounded as published.
/// @param background_counts B >= 0; the approximation of a normal distribution wants B above about 30
/// @throws InputError @cite currie1968 (table II)
[[nodiscard]] double decision_level_counts(double background_counts);

/// 2.71 + 4.65 √B, net counts. The numbers are 1.645² and 2 · 1.645 √2, rounded as published.
/// @param background_counts B >= 0 @throws InputError @cite currie1968 (table II)
[[nodiscard]] double detection_limit_counts(double background_counts);

/// The value that the truth exceeds with a probability of 5 % only, given a measured area and truth >= 0. Any unit; the
/// same for ratios, or anything else that is measured with normal spread and cannot be negative.
/// Relative error below 1e-12, also far below zero: area = −1000 sd gives 2.996e-3 sd, not zero.
/// @param area measured, may be negative @param sd its standard deviation, >= 0
/// @return > 0; max(area, 0) for sd = 0 @throws InputError for arguments that are not finite, or sd < 0
/// @cite johnson1994
[[nodiscard]] double upper_bound_95(double area, double sd);

/// The value that the truth exceeds with a probability of 95 %. Same arguments, errors and accuracy as upper_bound_95.
[[nodiscard]] double lower_bound_95(double area, double sd);

}  // namespace pellicle
