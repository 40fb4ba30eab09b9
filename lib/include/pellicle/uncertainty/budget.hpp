#pragma once
/// Uncertainty after the GUM: sensitivities times standard uncertainties, with correlation.
///
///   u² = Σᵢ Σⱼ cᵢ u(xᵢ) r(xᵢ, xⱼ) cⱼ u(xⱼ)           JCGM 100:2008, eq. (16)      [jcgm100]
///
/// The model is taken as linear over the spread of the inputs; where it is not, use Monte Carlo.

#include <cstddef>
#include <string>
#include <vector>

#include "pellicle/uncertainty/quantity.hpp"

namespace pellicle {

/// Whether an input varies from one measurement to the next or shifts all of them together.
enum class ContributionKind { repeatability, scale };

/// "repeatability" or "scale".
[[nodiscard]] const char* contribution_kind_name(ContributionKind kind) noexcept;

/// One input of a model at its estimate.
struct UncertainInput {
  std::string name;
  double value = 0.0;
  double standard_uncertainty = 0.0;  ///< unit of value, >= 0
  double sensitivity = 0.0;           ///< ∂result/∂value
  ContributionKind kind = ContributionKind::repeatability;
};

/// Correlation coefficient of two inputs, by their position.
struct Correlation {
  std::size_t first = 0;
  std::size_t second = 0;
  double coefficient = 0.0;  ///< −1 … 1
};

/// One row of the budget.
struct BudgetRow {
  std::string name;
  ContributionKind kind = ContributionKind::repeatability;
  double contribution = 0.0;  ///< |cᵢ| u(xᵢ), unit of the result
  double share = 0.0;         ///< part of u², correlation included; the shares of a budget sum to 1
};

/// Combined standard uncertainty with what makes it up, largest share first.
struct Budget {
  double standard_uncertainty = 0.0;
  double repeatability = 0.0;  ///< combined from the repeatability rows alone
  double scale = 0.0;          ///< combined from the scale rows alone
  std::vector<BudgetRow> rows;
};

/// Combines the inputs by JCGM 100:2008 eq. (16). Inputs without uncertainty get a row of zero.
/// @throws InputError for a negative or non-finite uncertainty, a correlation outside [−1, 1] or a
///         position that does not exist.
/// @cite jcgm100
[[nodiscard]] Budget combine(const std::vector<UncertainInput>& inputs,
                             const std::vector<Correlation>& correlations = {});

/// Symmetric 95 % interval value ± 1.96 u of a normal quantity. @cite jcgm100 (G.1.3)
[[nodiscard]] Interval normal_interval(double value, double standard_uncertainty) noexcept;

}  // namespace pellicle
