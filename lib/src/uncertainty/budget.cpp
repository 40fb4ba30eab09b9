#include "pellicle/uncertainty/budget.hpp"

#include <algorithm>
#include <cmath>

#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle {
namespace {

/// Variance of the inputs of one kind (or of all), with the correlations between them.
double variance(const std::vector<UncertainInput>& inputs, const std::vector<double>& signed_parts,
                const std::vector<Correlation>& correlations, bool all, ContributionKind kind) {
  const auto counted = [&](std::size_t i) { return all || inputs[i].kind == kind; };
  double sum = 0.0;
  for (std::size_t i = 0; i < inputs.size(); ++i) {
    if (counted(i)) sum += signed_parts[i] * signed_parts[i];
  }
  for (const Correlation& c : correlations) {
    if (counted(c.first) && counted(c.second)) {
      sum += 2.0 * c.coefficient * signed_parts[c.first] * signed_parts[c.second];
    }
  }
  return std::max(sum, 0.0);
}

void check(const std::vector<UncertainInput>& inputs, const std::vector<Correlation>& correlations) {
  for (const UncertainInput& input : inputs) {
    if (!(input.standard_uncertainty >= 0.0) || !std::isfinite(input.standard_uncertainty)) {
      throw InputError(input.name, "the standard uncertainty is not a number >= 0");
    }
  }
  for (const Correlation& c : correlations) {
    if (c.first >= inputs.size() || c.second >= inputs.size() || c.first == c.second) {
      throw InputError("correlation", "it names an input that does not exist, or one input twice");
    }
    if (!(std::abs(c.coefficient) <= 1.0)) {
      throw InputError("correlation of " + inputs[c.first].name + " and " + inputs[c.second].name,
                       "the coefficient lies outside [-1, 1]");
    }
  }
}

}  // namespace

const char* contribution_kind_name(ContributionKind kind) noexcept {
  return kind == ContributionKind::scale ? "scale" : "repeatability";
}

Budget combine(const std::vector<UncertainInput>& inputs, const std::vector<Correlation>& correlations) {
  check(inputs, correlations);
  std::vector<double> parts(inputs.size());
  std::transform(inputs.begin(), inputs.end(), parts.begin(),
                 // What has no uncertainty adds none, even where its derivative is too large for a number.
                 [](const UncertainInput& i) { return i.standard_uncertainty == 0.0 ? 0.0 : i.sensitivity * i.standard_uncertainty; });

  const double total = variance(inputs, parts, correlations, true, {});
  Budget budget;
  budget.standard_uncertainty = std::sqrt(total);
  budget.repeatability = std::sqrt(variance(inputs, parts, correlations, false, ContributionKind::repeatability));
  budget.scale = std::sqrt(variance(inputs, parts, correlations, false, ContributionKind::scale));

  std::vector<double> shared(inputs.size());
  for (std::size_t i = 0; i < inputs.size(); ++i) shared[i] = parts[i] * parts[i];
  for (const Correlation& c : correlations) {
    const double half = c.coefficient * parts[c.first] * parts[c.second];
    shared[c.first] += half;
    shared[c.second] += half;
  }
  for (std::size_t i = 0; i < inputs.size(); ++i) {
    budget.rows.push_back({inputs[i].name, inputs[i].kind, std::abs(parts[i]), total > 0.0 ? shared[i] / total : 0.0});
  }
  std::stable_sort(budget.rows.begin(), budget.rows.end(),
                   [](const BudgetRow& a, const BudgetRow& b) { return a.share > b.share; });
  return budget;
}

Interval normal_interval(double value, double standard_uncertainty) noexcept {
  return {value - kNormal95 * standard_uncertainty, value + kNormal95 * standard_uncertainty};
}

}  // namespace pellicle
