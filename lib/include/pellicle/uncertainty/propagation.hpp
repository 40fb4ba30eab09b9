#pragma once
/// Propagation of uncertainty through any model y = f(x₁ … xₙ), after the GUM.
///
///   cᵢ = ∂f/∂xᵢ at the means,  u² = Σᵢ Σⱼ cᵢ u(xᵢ) r(xᵢ, xⱼ) cⱼ u(xⱼ)     JCGM 100:2008, (13), (16)     [jcgm100]
///
/// The derivatives are numerical. The model is taken as straight over the spread of its inputs; second-order terms
/// mend that in part, monte_carlo.hpp wholly.

#include <functional>
#include <limits>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "pellicle/uncertainty/budget.hpp"
#include "pellicle/uncertainty/distribution.hpp"

namespace pellicle {

/// y of one set of inputs, in their order. Outside its domain it returns something that is not finite or throws an
/// Error.
using Model = std::function<double(std::span<const double> inputs)>;

/// One input of a model.
struct ModelInput {
  std::string name;
  Distribution distribution;
  ContributionKind kind = ContributionKind::repeatability;
  /// Of the standard uncertainty itself: n − 1 when it comes from n readings. Infinite: known for certain.
  double degrees_of_freedom = std::numeric_limits<double>::infinity();
};

/// Interval that holds the quantity with the coverage probability of its computation. Unit of the quantity.
struct CoverageInterval {
  double low = 0.0;
  double high = 0.0;
};

/// What propagate() computes beyond the first order.
struct PropagationOptions {
  double coverage_probability = 0.95;  ///< 0 < p < 1
  /// Adds the next terms of the Taylor series: JCGM 100:2008, note to 5.1.2. They hold for independent inputs with
  /// symmetric distributions.
  bool second_order = false;
};

/// A value with its uncertainty after the GUM.
struct Propagation {
  double value = 0.0;                 ///< the model at the means
  std::vector<double> sensitivities;  ///< cᵢ in the order of the inputs; 0 for constants, which add nothing
  Budget budget;                      ///< first order
  double standard_uncertainty = 0.0;  ///< of the budget, or with the second-order terms
  /// ν after Welch and Satterthwaite, u⁴/ν = Σ uᵢ⁴/νᵢ; infinite when those of all inputs are. Nothing for correlated
  /// inputs with finite ones, for which the formula does not hold. JCGM 100:2008, (G.2b)
  std::optional<double> effective_degrees_of_freedom;
  /// Two-sided, of the t distribution with ν cut to an integer (JCGM 100:2008, G.4.1), else of the normal one.
  double coverage_factor = 0.0;
  CoverageInterval interval;  ///< value ± coverage factor · standard uncertainty
};

/// Propagates means, standard deviations and correlations through the model.
/// Sensitivities: relative error below 1e-8 for a model that is smooth over a tenth of each input, or over its standard
/// deviation, and known to full precision.
/// @throws InputError for correlations as combine(), for degrees of freedom that are not above zero, for a coverage
///         probability outside 0 … 1, for second order with correlations
/// @throws DomainError when the model has no finite value at the means, or beside them
/// @cite jcgm100 ridders1982
[[nodiscard]] Propagation propagate(const Model& model, const std::vector<ModelInput>& inputs,
                                    const std::vector<Correlation>& correlations = {},
                                    const PropagationOptions& options = {});

/// Factor k of an interval ± k u of this probability: t distribution, normal for infinite degrees of freedom.
/// @param probability 0 < p < 1 @param degrees_of_freedom > 0
/// @throws InputError @cite jcgm100 (G.3)
[[nodiscard]] double coverage_factor(double probability,
                                     double degrees_of_freedom = std::numeric_limits<double>::infinity());

}  // namespace pellicle
