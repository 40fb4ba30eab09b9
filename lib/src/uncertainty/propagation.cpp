#include "pellicle/uncertainty/propagation.hpp"

#include <algorithm>
#include <array>
#include <boost/math/distributions/students_t.hpp>
#include <cmath>
#include <limits>

#include "pellicle/base/error.hpp"
#include "uncertainty/normal_tail.hpp"

namespace pellicle {
namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kEpsilon = std::numeric_limits<double>::epsilon();

/// The model along one or two of its inputs, the others at their means.
class Surroundings {
 public:
  Surroundings(const Model& model, const std::vector<ModelInput>& inputs) : model_(model) {
    for (const ModelInput& input : inputs) means_.push_back(input.distribution.mean());
    point_ = means_;
  }

  double at_means() { return model_(means_); }
  double mean(std::size_t i) const { return means_[i]; }

  /// NaN where the model refuses.
  double at(std::size_t i, double x) { return at(i, x, i, x); }
  double at(std::size_t i, double x, std::size_t j, double y) {
    point_[i] = x;
    point_[j] = y;
    double value = kNan;
    try {
      value = model_(point_);
    } catch (const Error&) {  // outside the domain of the model
    }
    point_[i] = means_[i];
    point_[j] = means_[j];
    return value;
  }

 private:
  const Model& model_;
  std::vector<double> means_, point_;
};

/// ∂f/∂xᵢ by central differences over halved steps, extrapolated to step zero; of all extrapolations the one with the
/// smallest estimated error (rounding included) is taken, Ridders (1982) [ridders1982]. All steps are tried, since a
/// model may be smooth only over the small ones.
double derivative(Surroundings& f, std::size_t i, const ModelInput& input) {
  constexpr int kSteps = 16, kDepth = 6, kHalvings = 60;
  const double x = f.mean(i);
  double step = std::max(input.distribution.sd(), 0.1 * std::abs(x));
  std::array<double, kDepth> above{}, row{};  // extrapolations of the last step and of this one
  double best = kNan, best_error = std::numeric_limits<double>::infinity();
  int good = 0;
  for (int k = 0; k < kHalvings + kSteps && good < kSteps; ++k, step *= 0.5) {
    const double right = x + step, left = x - step;
    const double up = f.at(i, right), down = f.at(i, left);
    if (!std::isfinite(up) || !std::isfinite(down) || !(right > left)) {
      good = 0;
      continue;
    }
    const double rounding = 4.0 * kEpsilon * std::max(std::abs(up), std::abs(down)) / (right - left);
    row[0] = (up - down) / (right - left);
    double power = 1.0;
    for (int j = 1; j < kDepth && j <= good; ++j) {
      const auto at = static_cast<std::size_t>(j);
      power *= 4.0;
      row[at] = (power * row[at - 1] - above[at - 1]) / (power - 1.0);
      const double error = std::max(std::abs(row[at] - row[at - 1]), std::abs(row[at] - above[at - 1])) + rounding;
      if (error < best_error) {
        best_error = error;
        best = row[at];
      }
    }
    above = row;
    ++good;
  }
  if (!std::isfinite(best)) throw DomainError(input.name, "the model has no finite values on both sides of its mean");
  return best;
}

/// uᵢ uⱼ ∂²f/∂xᵢ∂xⱼ and uᵢ uⱼ² ∂³f/∂xᵢ∂xⱼ².
struct HigherDerivatives {
  double second, third;
};

/// By central differences over the fraction s of each standard deviation.
HigherDerivatives differences(Surroundings& f, std::size_t i, double ui, std::size_t j, double uj, double s) {
  const auto at = [&](double a, double b) {
    return i == j ? f.at(i, f.mean(i) + a * ui) : f.at(i, f.mean(i) + a * ui, j, f.mean(j) + b * uj);
  };
  if (i == j) {
    const double up = at(s, 0.0), down = at(-s, 0.0), middle = at(0.0, 0.0);
    return {(up - 2.0 * middle + down) / (s * s),
            (at(2.0 * s, 0.0) - 2.0 * up + 2.0 * down - at(-2.0 * s, 0.0)) / (2.0 * s * s * s)};
  }
  const double pp = at(s, s), pm = at(s, -s), mp = at(-s, s), mm = at(-s, -s);
  return {(pp - pm - mp + mm) / (4.0 * s * s),
          (pp - 2.0 * at(s, 0.0) + pm - mp + 2.0 * at(-s, 0.0) - mm) / (2.0 * s * s * s)};
}

/// The same, extrapolated to s = 0 once; the error falls with the fourth power of s.
HigherDerivatives higher_derivatives(Surroundings& f, std::size_t i, const ModelInput& a, std::size_t j,
                                     const ModelInput& b) {
  for (double s = 0.25; s > 1e-3; s *= 0.5) {
    const HigherDerivatives wide = differences(f, i, a.distribution.sd(), j, b.distribution.sd(), s);
    const HigherDerivatives narrow = differences(f, i, a.distribution.sd(), j, b.distribution.sd(), 0.5 * s);
    const HigherDerivatives limit{(4.0 * narrow.second - wide.second) / 3.0, (4.0 * narrow.third - wide.third) / 3.0};
    if (std::isfinite(limit.second) && std::isfinite(limit.third)) return limit;
  }
  throw DomainError(a.name, "the model has no finite values beside its mean", "leave the second order out");
}

/// Σᵢ Σⱼ [½ (∂²f/∂xᵢ∂xⱼ)² + ∂f/∂xᵢ ∂³f/∂xᵢ∂xⱼ²] u²(xᵢ) u²(xⱼ), JCGM 100:2008, note to 5.1.2 [jcgm100].
double second_order_variance(Surroundings& f, const std::vector<ModelInput>& inputs,
                             const std::vector<double>& sensitivities) {
  double sum = 0.0;
  for (std::size_t i = 0; i < inputs.size(); ++i) {
    for (std::size_t j = 0; j < inputs.size(); ++j) {
      const double ui = inputs[i].distribution.sd(), uj = inputs[j].distribution.sd();
      if (ui == 0.0 || uj == 0.0) continue;
      const HigherDerivatives d = higher_derivatives(f, i, inputs[i], j, inputs[j]);
      sum += 0.5 * d.second * d.second + sensitivities[i] * ui * d.third;
    }
  }
  return sum;
}

/// JCGM 100:2008, (G.2b) [jcgm100].
std::optional<double> effective_degrees_of_freedom(const std::vector<ModelInput>& inputs,
                                                   const std::vector<double>& sensitivities, bool correlated,
                                                   double standard_uncertainty) {
  double sum = 0.0;
  for (std::size_t i = 0; i < inputs.size(); ++i) {
    const double part = std::abs(sensitivities[i]) * inputs[i].distribution.sd() / standard_uncertainty;
    if (std::isfinite(inputs[i].degrees_of_freedom) && part > 0.0)
      sum += part * part * part * part / inputs[i].degrees_of_freedom;
  }
  if (sum == 0.0) return std::numeric_limits<double>::infinity();
  if (correlated) return std::nullopt;
  return 1.0 / sum;
}

}  // namespace

double coverage_factor(double probability, double degrees_of_freedom) {
  if (!(probability > 0.0 && probability < 1.0)) throw InputError("coverage probability", "it lies outside 0 to 1");
  if (!(degrees_of_freedom > 0.0)) throw InputError("degrees of freedom", "they are not a number > 0");
  const double tail = 0.5 * (1.0 - probability);
  if (std::isinf(degrees_of_freedom)) return -detail::normal_quantile(tail);
  return quantile(complement(boost::math::students_t(degrees_of_freedom), tail));
}

Propagation propagate(const Model& model, const std::vector<ModelInput>& inputs,
                      const std::vector<Correlation>& correlations, const PropagationOptions& options) {
  for (const ModelInput& input : inputs) {
    if (!(input.degrees_of_freedom > 0.0)) throw InputError(input.name, "the degrees of freedom are not a number > 0");
  }
  if (options.second_order && !correlations.empty()) {
    throw InputError("second order", "its formula holds for independent inputs only", "use Monte Carlo");
  }
  Surroundings f(model, inputs);
  Propagation result;
  result.value = f.at_means();
  if (!std::isfinite(result.value)) throw DomainError("model", "it has no finite value at the means of its inputs");

  std::vector<UncertainInput> parts;
  for (std::size_t i = 0; i < inputs.size(); ++i) {
    const Distribution& d = inputs[i].distribution;
    result.sensitivities.push_back(d.sd() > 0.0 ? derivative(f, i, inputs[i]) : 0.0);
    parts.push_back({inputs[i].name, d.mean(), d.sd(), result.sensitivities[i], inputs[i].kind});
  }
  result.budget = combine(parts, correlations);
  result.standard_uncertainty = result.budget.standard_uncertainty;
  result.effective_degrees_of_freedom =
      effective_degrees_of_freedom(inputs, result.sensitivities, !correlations.empty(), result.standard_uncertainty);
  if (options.second_order) {
    const double more = second_order_variance(f, inputs, result.sensitivities);
    const double first = result.standard_uncertainty;
    result.standard_uncertainty = std::sqrt(std::max(0.0, first * first + more));
  }
  const double degrees = result.effective_degrees_of_freedom.value_or(std::numeric_limits<double>::infinity());
  result.coverage_factor =
      coverage_factor(options.coverage_probability, std::isinf(degrees) ? degrees : std::max(1.0, std::floor(degrees)));
  const double half_width = result.coverage_factor * result.standard_uncertainty;
  result.interval = {result.value - half_width, result.value + half_width};
  return result;
}

}  // namespace pellicle
