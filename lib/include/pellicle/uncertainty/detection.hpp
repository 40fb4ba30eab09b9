#pragma once
/// What an undetected or barely detected peak still says.

namespace pellicle {

/// Decision level of a net area over a background of `background_counts` taken from an equal window: 2.33 √B counts.
/// A peak above it counts as detected (5 % false alarms). @cite currie1968
[[nodiscard]] double decision_level_counts(double background_counts) noexcept;

/// Detection limit 2.71 + 4.65 √B counts: the true signal that is detected 95 times in 100. @cite currie1968
[[nodiscard]] double detection_limit_counts(double background_counts) noexcept;

/// The 95 % quantile of the true signal given a measured one and the knowledge that it is not negative: normal
/// likelihood, flat on >= 0. Closed form u = a + s z, Φ(−z) = 0.05 Φ(a/s); relative error below 1e-9 for a/s down
/// to −30, below 1 % beyond.
/// @param area measured value, may be negative @param standard_uncertainty > 0, same unit
/// @return upper bound, > 0, same unit @throws InputError for arguments out of range
[[nodiscard]] double upper_bound_95(double area, double standard_uncertainty);

}  // namespace pellicle
