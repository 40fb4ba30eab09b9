#pragma once
/// The standard normal distribution, accurate in both tails.

namespace pellicle::detail {

/// φ(z).
[[nodiscard]] double normal_density(double z);

/// Probability of less than z, Φ(z).
[[nodiscard]] double normal_below(double z);

/// Probability of more than z, 1 − Φ(z) without cancellation.
[[nodiscard]] double normal_above(double z);

/// z with Φ(z) = p. @param p 0 < p < 1
[[nodiscard]] double normal_quantile(double p);

/// d >= 0 with 1 − Φ(α + d) = q [1 − Φ(α)]: how far above α a normal number lies that is known to lie above α and
/// exceeds α + d with probability q. Any α: far in the tail neither probability is formed.
/// @param log_q ln q, −700 … 0
[[nodiscard]] double normal_excess(double alpha, double log_q);

}  // namespace pellicle::detail
