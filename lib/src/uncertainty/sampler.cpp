#include "uncertainty/sampler.hpp"

#include <algorithm>
#include <cmath>
#include <utility>

#include "base/exponential.hpp"
#include "uncertainty/normal_tail.hpp"

namespace pellicle::detail {
namespace {

using Kind = DistributionKind;

constexpr double kLastZ = 9.0;
constexpr int kIntervals = 288;
constexpr double kStep = 2.0 * kLastZ / kIntervals;

bool is_tabulated(Kind kind) {
  return kind == Kind::student_t || kind == Kind::gamma || kind == Kind::poisson_count ||
         kind == Kind::truncated_normal;
}

/// These are tabulated as logarithms: never negative, and nearly a parabola in z at the lower end.
bool is_tabulated_as_log(Kind kind) { return kind == Kind::gamma || kind == Kind::poisson_count; }

/// Slopes of a table by central differences of fourth order, of lower order next to the ends.
std::vector<double> slopes(const std::vector<double>& y) {
  const std::size_t last = y.size() - 1;
  std::vector<double> slope(y.size());
  slope[0] = (y[1] - y[0]) / kStep;
  slope[last] = (y[last] - y[last - 1]) / kStep;
  for (std::size_t i = 1; i < last; ++i) slope[i] = (y[i + 1] - y[i - 1]) / (2.0 * kStep);
  for (std::size_t i = 2; i + 2 <= last; ++i)
    slope[i] = (8.0 * (y[i + 1] - y[i - 1]) - (y[i + 2] - y[i - 2])) / (12.0 * kStep);
  return slope;
}

}  // namespace

Sampler::Sampler(const Distribution& distribution) : distribution_(distribution) {
  const Distribution& d = distribution;
  // Cut off far beyond what is drawn (1e-33 of it is missing), a normal distribution needs no table.
  constexpr double kWholeFrom = 12.0;
  whole_ = d.kind() == Kind::truncated_normal && d.a_ >= kWholeFrom * d.b_;
  if (whole_ || !is_tabulated(d.kind())) return;
  std::vector<double> values(kIntervals + 1);
  for (int i = 0; i <= kIntervals; ++i) {
    const double x = distribution.at_normal(std::min(kLastZ, i * kStep - kLastZ));
    values[static_cast<std::size_t>(i)] = is_tabulated_as_log(distribution_.kind()) ? std::log(x) : x;
  }
  std::vector<double> slope = slopes(values);
  table_.emplace(std::move(values), std::move(slope), -kLastZ, kStep);
}

void Sampler::draw(RandomStream& stream, std::span<double> numbers) const {
  const Distribution& d = distribution_;
  if (d.kind() == Kind::constant) {
    std::fill(numbers.begin(), numbers.end(), d.mean_);
  } else if (d.kind() == Kind::rectangular) {
    stream.fill_uniform(numbers);
    const double low = d.a_, width = d.b_ - d.a_;
    for (double& x : numbers) x = std::min(d.b_, low + width * x);
  } else if (d.kind() == Kind::triangular) {
    stream.fill_uniform(numbers);
    const double low = d.a_, high = d.b_, width = d.b_ - d.a_;
    for (double& x : numbers)
      x = x < 0.5 ? low + width * std::sqrt(0.5 * x) : high - width * std::sqrt(0.5 * (1.0 - x));
  } else {
    stream.fill_normal(numbers);
    from_normal(numbers);
  }
}

void Sampler::from_normal(std::span<double> numbers) const {
  const Distribution& d = distribution_;
  if (d.kind() == Kind::normal) {
    const double mean = d.mean_, sd = d.sd_;
    for (double& x : numbers) x = mean + sd * x;
  } else if (d.kind() == Kind::lognormal) {
    const double mean = d.a_, sd = d.b_;
    exponential_of_linear(mean, sd, numbers);
  } else if (whole_) {
    const double mean = d.a_, sd = d.b_;
    for (double& x : numbers) x = mean + sd * std::min(kLastZ, std::max(-kLastZ, x));
  } else if (table_) {
    for (double& x : numbers) x = (*table_)(std::clamp(x, -kLastZ, kLastZ));
    if (is_tabulated_as_log(d.kind())) {
      exponential_of_linear(0.0, 1.0, numbers);
    } else if (d.kind() == Kind::truncated_normal) {
      for (double& x : numbers) x = std::max(0.0, x);
    }
  } else {
    for (double& x : numbers) x = d.at_normal(std::clamp(x, -kLastZ, kLastZ));
  }
}

}  // namespace pellicle::detail
