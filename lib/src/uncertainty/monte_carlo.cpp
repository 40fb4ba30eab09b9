#include "pellicle/uncertainty/monte_carlo.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <numeric>
#include <optional>

#include <Eigen/Eigenvalues>
#include <boost/math/special_functions/erf.hpp>

#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/base/parallel.hpp"
#include "pellicle/base/random.hpp"

namespace pellicle {
namespace {

constexpr std::size_t kFewestDraws = 1000;
constexpr std::size_t kMostSteps = 100;

double upper_tail(double z) { return 0.5 * std::erfc(z / std::numbers::sqrt2); }

/// Standard normal number → number of the wanted shape.
class Transform {
 public:
  explicit Transform(const RandomInput& input) : input_(input) {
    if (input.shape == Shape::lognormal) {
      const double relative = input.standard_deviation / input.mean;
      log_sd_ = std::sqrt(std::log1p(relative * relative));
      log_mean_ = std::log(input.mean) - 0.5 * log_sd_ * log_sd_;
    } else if (input.shape == Shape::truncated_normal && input.standard_deviation > 0.0) {
      above_zero_ = upper_tail(-input.mean / input.standard_deviation);
    }
  }

  void apply(std::span<double> z) const {
    const double sd = input_.standard_deviation;
    switch (input_.shape) {
      case Shape::normal:
        for (double& v : z) v = input_.mean + sd * v;
        return;
      case Shape::lognormal:
        for (double& v : z) v = std::exp(log_mean_ + log_sd_ * v);
        return;
      case Shape::rectangular:
        // Φ(z) is uniform on 0 … 1; the half width is √3 standard deviations.
        for (double& v : z) v = input_.mean + sd * std::numbers::sqrt3 * (1.0 - 2.0 * upper_tail(v));
        return;
      case Shape::truncated_normal: break;
    }
    // Five standard deviations above zero the cut is below the noise of any Monte Carlo.
    if (!(sd > 0.0) || input_.mean > 5.0 * sd) {
      for (double& v : z) v = std::max(input_.mean + sd * v, 0.0);
      return;
    }
    for (double& v : z) {
      const double tail = std::clamp(upper_tail(v) * above_zero_, 1e-300, 1.0);
      v = std::max(input_.mean + sd * std::numbers::sqrt2 * boost::math::erfc_inv(2.0 * tail), 0.0);
    }
  }

 private:
  RandomInput input_;
  double log_mean_ = 0.0, log_sd_ = 0.0, above_zero_ = 1.0;
};

void check(const std::vector<RandomInput>& inputs, const MonteCarloOptions& options) {
  for (const RandomInput& input : inputs) {
    if (!std::isfinite(input.mean) || !(input.standard_deviation >= 0.0) || !std::isfinite(input.standard_deviation)) {
      throw InputError("Monte Carlo", "an input has no finite mean or standard deviation >= 0");
    }
    if (input.shape == Shape::lognormal && !(input.mean > 0.0)) throw InputError("Monte Carlo", "a lognormal input has a mean that is not > 0");
  }
  if (options.draws < kFewestDraws) {
    throw InputError("draws", std::to_string(options.draws) + " draws are too few", "expected at least " + std::to_string(kFewestDraws));
  }
}

/// Symmetric root of the correlation matrix; nothing when all inputs are independent.
std::optional<Eigen::MatrixXd> correlation_root(std::size_t size, const std::vector<Correlation>& correlations) {
  const bool any = std::any_of(correlations.begin(), correlations.end(), [](const Correlation& c) { return c.coefficient != 0.0; });
  if (!any) return std::nullopt;
  const auto n = static_cast<Eigen::Index>(size);
  Eigen::MatrixXd matrix = Eigen::MatrixXd::Identity(n, n);
  for (const Correlation& c : correlations) {
    if (c.first >= size || c.second >= size || c.first == c.second || !(std::abs(c.coefficient) <= 1.0)) {
      throw InputError("correlation", "it names an input that does not exist, or lies outside [-1, 1]");
    }
    matrix(static_cast<Eigen::Index>(c.first), static_cast<Eigen::Index>(c.second)) = c.coefficient;
    matrix(static_cast<Eigen::Index>(c.second), static_cast<Eigen::Index>(c.first)) = c.coefficient;
  }
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> solver(matrix);
  if (solver.eigenvalues().minCoeff() < -1e-10) throw InputError("correlation", "the correlations contradict one another");
  const Eigen::VectorXd roots = solver.eigenvalues().cwiseMax(0.0).cwiseSqrt();
  return solver.eigenvectors() * roots.asDiagonal() * solver.eigenvectors().transpose();
}

/// Draws [begin, begin + out.size()) of a run; `begin` is a multiple of the block size.
void draw(const std::vector<Transform>& transforms, const std::optional<Eigen::MatrixXd>& root, const BlockModel& model,
          const MonteCarloOptions& options, std::size_t begin, std::span<double> out) {
  const std::size_t inputs = transforms.size();
  for_each_block(out.size(), [&](std::size_t low, std::size_t high) {
    const std::size_t size = high - low;
    std::vector<double> numbers(inputs * size);
    RandomStream random(options.seed, options.stream, (begin + low) / kBlockSize);
    random.fill_normal(numbers);
    if (root) {
      using Columns = Eigen::Map<Eigen::Matrix<double, Eigen::Dynamic, Eigen::Dynamic, Eigen::RowMajor>>;
      Columns block(numbers.data(), static_cast<Eigen::Index>(inputs), static_cast<Eigen::Index>(size));
      block = (*root * block).eval();
    }
    std::vector<std::span<const double>> columns;
    for (std::size_t i = 0; i < inputs; ++i) {
      const std::span<double> column(numbers.data() + i * size, size);
      transforms[i].apply(column);
      columns.emplace_back(column);
    }
    model(columns, out.subspan(low, size));
  });
}

/// The k-th smallest (0-based) of values from `from` on, which all lie above what stands before.
double order_statistic(std::vector<double>& values, std::size_t from, std::size_t k) {
  const auto at = values.begin() + static_cast<std::ptrdiff_t>(k);
  std::nth_element(values.begin() + static_cast<std::ptrdiff_t>(from), at, values.end());
  return *at;
}

MonteCarloResult summarise(std::vector<double>& values, bool with_shortest) {
  MonteCarloResult result;
  const std::size_t all = values.size();
  std::erase_if(values, [](double v) { return !std::isfinite(v); });
  result.draws = values.size();
  result.rejected = all - values.size();
  if (2 * values.size() < all || values.empty()) {
    throw DomainError("Monte Carlo", std::to_string(result.rejected) + " of " + std::to_string(all) + " draws have no answer");
  }
  const double n = static_cast<double>(values.size());
  result.mean = std::accumulate(values.begin(), values.end(), 0.0) / n;
  double squares = 0.0;
  for (const double v : values) squares += (v - result.mean) * (v - result.mean);
  result.standard_deviation = std::sqrt(squares / (n - 1.0));
  // JCGM 101, 7.7.2: with q = 0.95 M draws inside, r = (M − q)/2 lie below.
  const std::size_t inside = static_cast<std::size_t>(0.95 * n + 0.5);
  const std::size_t below = (values.size() - inside) / 2;
  if (!with_shortest) {
    result.symmetric.low95 = order_statistic(values, 0, below);
    result.symmetric.high95 = order_statistic(values, below, std::min(below + inside, values.size() - 1));
    result.shortest = result.symmetric;
    return result;
  }
  std::sort(values.begin(), values.end());
  result.symmetric = {values[below], values[std::min(below + inside, values.size() - 1)]};
  result.shortest = result.symmetric;
  for (std::size_t r = 0; r + inside < values.size(); ++r) {
    if (values[r + inside] - values[r] < result.shortest.high95 - result.shortest.low95) result.shortest = {values[r], values[r + inside]};
  }
  return result;
}

/// Half a unit of the last of `digits` significant digits of u (JCGM 101, 7.9.2).
double numerical_tolerance(double standard_uncertainty, int digits) {
  if (!(standard_uncertainty > 0.0)) return 0.0;
  return 0.5 * std::pow(10.0, std::floor(std::log10(standard_uncertainty)) - (digits - 1));
}

/// Twice the standard deviation of the mean of each figure over the steps, against the tolerance.
bool stable(const std::vector<MonteCarloResult>& steps, double tolerance) {
  if (steps.size() < 2) return false;
  const double h = static_cast<double>(steps.size());
  const auto settled = [&](auto figure) {
    double mean = 0.0, squares = 0.0;
    for (const MonteCarloResult& s : steps) mean += figure(s) / h;
    for (const MonteCarloResult& s : steps) squares += std::pow(figure(s) - mean, 2);
    return 2.0 * std::sqrt(squares / (h * (h - 1.0))) <= tolerance;
  };
  return settled([](const MonteCarloResult& s) { return s.mean; }) && settled([](const MonteCarloResult& s) { return s.standard_deviation; }) &&
         settled([](const MonteCarloResult& s) { return s.symmetric.low95; }) && settled([](const MonteCarloResult& s) { return s.symmetric.high95; });
}

}  // namespace

MonteCarloResult propagate_by_monte_carlo(const std::vector<RandomInput>& inputs, const std::vector<Correlation>& correlations,
                                          const BlockModel& model, const MonteCarloOptions& options) {
  check(inputs, options);
  const std::optional<Eigen::MatrixXd> root = correlation_root(inputs.size(), correlations);
  const std::vector<Transform> transforms(inputs.begin(), inputs.end());
  std::vector<double> values(options.draws);
  draw(transforms, root, model, options, 0, values);
  if (!options.adaptive) return summarise(values, options.shortest);

  // Steps begin at multiples of the block size, so that no two share a random stream.
  const std::size_t stride = (options.draws + kBlockSize - 1) / kBlockSize * kBlockSize;
  std::vector<MonteCarloResult> steps;
  std::vector<double> step = values;
  steps.push_back(summarise(step, false));
  while (steps.size() < kMostSteps && !stable(steps, numerical_tolerance(steps.front().standard_deviation, 2))) {
    step.resize(options.draws);
    draw(transforms, root, model, options, steps.size() * stride, step);
    values.insert(values.end(), step.begin(), step.end());
    steps.push_back(summarise(step, false));
  }
  return summarise(values, options.shortest);
}

bool intervals_agree(const Interval& gum, const Interval& monte_carlo, double standard_uncertainty, int digits) {
  const double tolerance = numerical_tolerance(standard_uncertainty, digits);
  return std::abs(gum.low95 - monte_carlo.low95) <= tolerance && std::abs(gum.high95 - monte_carlo.high95) <= tolerance;
}

}  // namespace pellicle
