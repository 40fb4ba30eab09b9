#include "pellicle/uncertainty/monte_carlo.hpp"

#include <Eigen/Dense>
#include <algorithm>
#include <array>
#include <atomic>
#include <cmath>
#include <limits>
#include <memory>
#include <mutex>
#include <optional>
#include <string>
#include <thread>
#include <utility>

#include "pellicle/base/parallel.hpp"
#include "pellicle/base/random.hpp"
#include "uncertainty/order_statistics.hpp"
#include "uncertainty/sampler.hpp"
#include "uncertainty/tasks.hpp"

namespace pellicle {
namespace {

constexpr std::size_t kFewestDraws = 1000;
constexpr std::size_t kFirstBatches = 8;

/// Number of values, their mean and the sum of squared deviations from it.
struct Moments {
  std::size_t size = 0;
  double mean = 0.0;
  double squares = 0.0;

  [[nodiscard]] double sd() const { return size > 1 ? std::sqrt(squares / static_cast<double>(size - 1)) : 0.0; }
};

/// Sum in eight interleaved parts: as fast as memory, and the same on every processor.
template <typename Term>
double sum(std::span<const double> values, Term&& term) {
  constexpr std::size_t kParts = 8;
  double part[kParts] = {};
  std::size_t i = 0;
  for (; i + kParts <= values.size(); i += kParts) {
    for (std::size_t j = 0; j < kParts; ++j) part[j] += term(values[i + j]);
  }
  for (std::size_t j = 0; i < values.size(); ++i, ++j) part[j] += term(values[i]);
  return ((part[0] + part[1]) + (part[2] + part[3])) + ((part[4] + part[5]) + (part[6] + part[7]));
}

Moments moments(std::span<const double> values) {
  if (values.empty()) return {};
  const double mean = sum(values, [](double y) { return y; }) / static_cast<double>(values.size());
  return {values.size(), mean, sum(values, [mean](double y) { return (y - mean) * (y - mean); })};
}

/// The pairwise update of Chan, Golub and LeVeque (1983) [chan1983].
Moments together(const Moments& a, const Moments& b) {
  if (a.size == 0) return b;
  if (b.size == 0) return a;
  const double na = static_cast<double>(a.size), nb = static_cast<double>(b.size);
  const double difference = b.mean - a.mean;
  return {a.size + b.size, a.mean + difference * (nb / (na + nb)),
          a.squares + b.squares + difference * difference * (na * nb / (na + nb))};
}

/// Matrix F with F Fᵀ = R, the correlation matrix; F times independent normal numbers are correlated ones. R may be
/// singular, as it is for a coefficient of 1.
Eigen::MatrixXd factor(const Eigen::MatrixXd& correlation) {
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> solver(correlation);
  if (solver.info() != Eigen::Success ||
      solver.eigenvalues().minCoeff() < -1e-12 * static_cast<double>(correlation.rows())) {
    throw InputError("correlation", "no quantities can have these coefficients together");
  }
  return solver.eigenvectors() * solver.eigenvalues().cwiseMax(0.0).cwiseSqrt().asDiagonal();
}

/// Draws blocks of all inputs.
class InputDraws {
 public:
  InputDraws(const std::vector<ModelInput>& inputs, const std::vector<Correlation>& correlations, std::uint64_t seed)
      : seed_(seed) {
    std::vector<UncertainInput> checked;  // combine() refuses what cannot be
    for (const ModelInput& input : inputs) {
      samplers_.emplace_back(input.distribution);
      constants_.push_back(input.distribution.sd() == 0.0 ? std::optional(input.distribution.mean()) : std::nullopt);
      checked.push_back({input.name, input.distribution.mean(), input.distribution.sd(), 1.0, input.kind});
    }
    (void)combine(checked, correlations);
    for (std::size_t i = 0; i < inputs.size(); ++i) {
      if (constants_[i]) continue;
      const bool correlated = std::any_of(correlations.begin(), correlations.end(), [&](const Correlation& c) {
        return c.coefficient != 0.0 && (c.first == i || c.second == i) && !constants_[c.first] && !constants_[c.second];
      });
      (correlated ? correlated_ : independent_).push_back(i);
    }
    if (correlated_.empty()) return;
    const auto size = static_cast<Eigen::Index>(correlated_.size());
    Eigen::MatrixXd matrix = Eigen::MatrixXd::Identity(size, size);
    const auto place = [&](std::size_t input) {
      return std::find(correlated_.begin(), correlated_.end(), input) - correlated_.begin();
    };
    for (const Correlation& c : correlations) {
      if (place(c.first) >= size || place(c.second) >= size) continue;
      matrix(place(c.first), place(c.second)) += c.coefficient;
      matrix(place(c.second), place(c.first)) += c.coefficient;
    }
    factor_ = factor(matrix);
  }

  /// Columns of one block, in a buffer that is used for one block after the other.
  class Buffer {
   public:
    explicit Buffer(const InputDraws& draws) : numbers_(draws.samplers_.size() * kBlockSize) {
      for (std::size_t i = 0; i < draws.samplers_.size(); ++i) {
        if (draws.constants_[i]) std::fill_n(column(i, kBlockSize).begin(), kBlockSize, *draws.constants_[i]);
      }
      normal_.resize(draws.correlated_.size() * kBlockSize);
      views_.resize(draws.samplers_.size());
    }

   private:
    friend class InputDraws;
    [[nodiscard]] std::span<double> column(std::size_t i, std::size_t size) {
      return std::span(numbers_).subspan(i * kBlockSize, size);
    }

    std::vector<double> numbers_;
    std::vector<double> normal_;  // independent normal numbers, to be correlated
    std::vector<std::span<const double>> views_;
  };

  /// The first `size` draws of a block. What is returned lives until the next call with the same buffer.
  [[nodiscard]] std::span<const std::span<const double>> draw(std::size_t block, std::size_t size,
                                                              Buffer& buffer) const {
    RandomStream stream(seed_, block);
    for (const std::size_t i : independent_) samplers_[i].draw(stream, buffer.column(i, size));
    for (std::size_t j = 0; j < correlated_.size(); ++j)
      stream.fill_normal(std::span(buffer.normal_).subspan(j * kBlockSize, size));
    for (std::size_t row = 0; row < correlated_.size(); ++row) {
      const std::span<double> column = buffer.column(correlated_[row], size);
      std::fill(column.begin(), column.end(), 0.0);
      for (std::size_t j = 0; j < correlated_.size(); ++j) {
        const double weight = factor_(static_cast<Eigen::Index>(row), static_cast<Eigen::Index>(j));
        const double* normal = buffer.normal_.data() + j * kBlockSize;
        for (std::size_t k = 0; k < size; ++k) column[k] += weight * normal[k];
      }
      samplers_[correlated_[row]].from_normal(column);
    }
    for (std::size_t i = 0; i < samplers_.size(); ++i) buffer.views_[i] = buffer.column(i, size);
    return buffer.views_;
  }

 private:
  std::uint64_t seed_;
  std::vector<detail::Sampler> samplers_;
  std::vector<std::optional<double>> constants_;
  std::vector<std::size_t> independent_, correlated_;
  Eigen::MatrixXd factor_;
};

/// Buffers that no thread uses at the moment.
class BufferPool {
 public:
  explicit BufferPool(const InputDraws& draws) : draws_(draws) {}

  [[nodiscard]] std::unique_ptr<InputDraws::Buffer> take() {
    const std::lock_guard lock(mutex_);
    if (free_.empty()) return std::make_unique<InputDraws::Buffer>(draws_);
    auto buffer = std::move(free_.back());
    free_.pop_back();
    return buffer;
  }
  void give_back(std::unique_ptr<InputDraws::Buffer> buffer) {
    const std::lock_guard lock(mutex_);
    free_.push_back(std::move(buffer));
  }

 private:
  const InputDraws& draws_;
  std::mutex mutex_;
  std::vector<std::unique_ptr<InputDraws::Buffer>> free_;
};

/// Values of the model for all draws so far.
class Values {
 public:
  Values(const BlockModel& model, const InputDraws& draws, const MonteCarloOptions& options, std::size_t most)
      : model_(model),
        draws_(draws),
        options_(options),
        pool_(draws),
        values_(std::make_unique_for_overwrite<double[]>(most)),
        blocks_((most + kBlockSize - 1) / kBlockSize) {}

  /// Draws until there are `planned` draws; all blocks before the last must have been whole.
  void extend_to(std::size_t planned) {
    const std::size_t before = made_;
    std::atomic<std::size_t> done{before};
    std::atomic<bool> cancelled{false};
    const auto caller = std::this_thread::get_id();
    for_each_block(
        planned - before,
        [&](std::size_t begin, std::size_t end) {
          if (cancelled) return;
          evaluate(before + begin, before + end);
          done += end - begin;
          if (options_.progress && std::this_thread::get_id() == caller && !options_.progress(done, planned)) {
            cancelled = true;
            throw Cancelled("Monte Carlo", "cancelled");
          }
        },
        options_.threads);
    made_ = planned;
  }

  [[nodiscard]] std::size_t made() const { return made_; }

  /// Of the draws [begin, end), whole blocks; those with a value only.
  [[nodiscard]] Moments moments_of(std::size_t begin, std::size_t end) const {
    Moments all;
    for (std::size_t b = begin / kBlockSize; b * kBlockSize < end; ++b) all = together(all, blocks_[b]);
    return all;
  }
  [[nodiscard]] std::vector<double> values_of(std::size_t begin, std::size_t end) const {
    std::vector<double> all;
    for (std::size_t b = begin / kBlockSize; b * kBlockSize < end; ++b) {
      const double* first = values_.get() + b * kBlockSize;
      all.insert(all.end(), first, first + blocks_[b].size);
    }
    return all;
  }

  /// All values, one after the other; afterwards only this may be called.
  [[nodiscard]] std::span<double> compact() {
    std::size_t size = 0;
    for (std::size_t b = 0; b * kBlockSize < made_; ++b) {
      if (size != b * kBlockSize) std::copy_n(values_.get() + b * kBlockSize, blocks_[b].size, values_.get() + size);
      size += blocks_[b].size;
    }
    return {values_.get(), size};
  }

 private:
  /// One block. Values that are not finite are left out, the others moved up.
  void evaluate(std::size_t begin, std::size_t end) {
    const std::size_t block = begin / kBlockSize;
    const std::span<double> result(values_.get() + begin, end - begin);
    auto buffer = pool_.take();
    model_(draws_.draw(block, result.size(), *buffer), result);
    pool_.give_back(std::move(buffer));
    blocks_[block] = moments(result);
    if (std::isfinite(blocks_[block].squares)) return;  // then all values are
    const auto finite_end = std::remove_if(result.begin(), result.end(), [](double y) { return !std::isfinite(y); });
    blocks_[block] = moments({result.begin(), finite_end});
  }

  const BlockModel& model_;
  const InputDraws& draws_;
  const MonteCarloOptions& options_;
  BufferPool pool_;
  std::unique_ptr<double[]> values_;
  std::vector<Moments> blocks_;
  std::size_t made_ = 0;
};

/// Batches of JCGM 101:2008, 7.9.4 b), in whole blocks.
std::size_t batch_size(double coverage_probability) {
  const double least = std::max(1e4, std::ceil(100.0 / (1.0 - coverage_probability)));
  return (static_cast<std::size_t>(least) + kBlockSize - 1) / kBlockSize * kBlockSize;
}

/// Mean, standard deviation and both ends of the interval of each batch; JCGM 101:2008, 7.9.4 f) to k) [jcgm101].
class BatchRecord {
 public:
  void extend(const Values& values, std::size_t batch, const MonteCarloOptions& options) {
    const std::size_t before = rows_.size();
    rows_.resize(values.made() / batch);
    detail::for_each_task(
        rows_.size() - before,
        [&](std::size_t task) {
          const std::size_t row = before + task;
          std::vector<double> y = values.values_of(row * batch, (row + 1) * batch);
          if (y.size() < 2) return;  // the draws are refused as a whole later
          const Moments m = values.moments_of(row * batch, (row + 1) * batch);
          const CoverageInterval i = detail::symmetric_interval(y, options.coverage_probability);
          rows_[row] = {m.mean, m.sd(), i.low, i.high};
        },
        options.threads);
  }

  /// Twice the standard deviation of the mean over the batches does not exceed the tolerance, for all four.
  [[nodiscard]] bool stable(double tolerance) const {
    for (std::size_t column = 0; column < 4; ++column) {
      std::vector<double> results;
      for (const auto& row : rows_) results.push_back(row[column]);
      if (2.0 * moments(results).sd() / std::sqrt(static_cast<double>(rows_.size())) > tolerance) return false;
    }
    return true;
  }

 private:
  std::vector<std::array<double, 4>> rows_;
};

/// Draws in batches until the results are stable. @return whether they are
bool draw_until_stable(Values& values, const MonteCarloOptions& options) {
  const std::size_t batch = batch_size(options.coverage_probability);
  const std::size_t most_batches = options.most_draws / batch;
  BatchRecord record;
  for (std::size_t batches = kFirstBatches;;) {
    values.extend_to(batches * batch);
    record.extend(values, batch, options);
    const double u = values.moments_of(0, values.made()).sd();
    if (record.stable(u > 0.0 ? numerical_tolerance(u, options.significant_digits) : 0.0)) return true;
    if (batches == most_batches) return false;
    batches = std::min(most_batches, batches + std::max<std::size_t>(1, batches / 4));
  }
}

void check(const MonteCarloOptions& options) {
  if (!(options.coverage_probability >= 0.5 && options.coverage_probability <= 0.999)) {
    throw InputError("coverage probability", "it lies outside 0.5 to 0.999");
  }
  if (!options.adaptive && options.draws < kFewestDraws) {
    throw InputError("draws", "fewer than 1000 do not give an interval");
  }
  if (options.adaptive && options.most_draws < kFirstBatches * batch_size(options.coverage_probability)) {
    throw InputError("most_draws", "fewer than " +
                                       std::to_string(kFirstBatches * batch_size(options.coverage_probability)) +
                                       " cannot show whether the results are stable");
  }
  if (options.significant_digits != 1 && options.significant_digits != 2) {
    throw InputError("significant digits", "neither 1 nor 2");
  }
}

}  // namespace

BlockModel block_model(Model model) {
  return [model = std::move(model)](std::span<const std::span<const double>> inputs, std::span<double> result) {
    std::vector<double> point(inputs.size());
    for (std::size_t k = 0; k < result.size(); ++k) {
      for (std::size_t i = 0; i < inputs.size(); ++i) point[i] = inputs[i][k];
      try {
        result[k] = model(point);
      } catch (const Error&) {  // outside the domain of the model
        result[k] = std::numeric_limits<double>::quiet_NaN();
      }
    }
  };
}

MonteCarlo monte_carlo(const BlockModel& model, const std::vector<ModelInput>& inputs,
                       const std::vector<Correlation>& correlations, const MonteCarloOptions& options) {
  check(options);
  const InputDraws draws(inputs, correlations, options.seed);
  Values values(model, draws, options, options.adaptive ? options.most_draws : options.draws);

  MonteCarlo result;
  if (options.adaptive) {
    result.stable = draw_until_stable(values, options);
  } else {
    values.extend_to(options.draws);
  }
  const Moments all = values.moments_of(0, values.made());
  result.draws = all.size;
  result.rejected = values.made() - all.size;
  if (2 * all.size < values.made()) {
    throw DomainError("model", "it has no finite value for " + std::to_string(result.rejected) + " of " +
                                   std::to_string(values.made()) + " draws");
  }
  const auto order = detail::order_statistics(values.compact(), options.coverage_probability, options.threads);
  result.mean = all.mean;
  result.sd = all.sd();
  result.median = order.median;
  result.symmetric = order.symmetric;
  result.shortest = order.shortest;
  result.coverage_probability = options.coverage_probability;
  result.seed = options.seed;
  if (result.rejected > 0) {
    add_finding(result.findings, {"monte_carlo_draws_rejected", Severity::warning,
                                  "the model has no value for " + std::to_string(result.rejected) + " of " +
                                      std::to_string(values.made()) + " draws; they were left out",
                                  static_cast<double>(result.rejected) / static_cast<double>(values.made())});
  }
  if (!result.stable) {
    add_finding(result.findings, {"monte_carlo_not_stable", Severity::warning,
                                  "the results were not stable to the digits asked for after " +
                                      std::to_string(values.made()) + " draws"});
  }
  return result;
}

double numerical_tolerance(double standard_uncertainty, int significant_digits) {
  if (!(standard_uncertainty > 0.0) || !std::isfinite(standard_uncertainty)) {
    throw InputError("standard uncertainty", "it is not a number > 0");
  }
  if (significant_digits < 1 || significant_digits > 15) throw InputError("significant digits", "outside 1 to 15");
  // u = c 10^l with c of so many digits; rounding up may add a digit.
  int l = static_cast<int>(std::floor(std::log10(standard_uncertainty))) - (significant_digits - 1);
  if (std::round(standard_uncertainty / std::pow(10.0, l)) >= std::pow(10.0, significant_digits)) ++l;
  return 0.5 * std::pow(10.0, l);
}

IntervalAgreement compare_intervals(const CoverageInterval& gum, const CoverageInterval& draws,
                                    double standard_uncertainty, int significant_digits) {
  IntervalAgreement result;
  result.tolerance = numerical_tolerance(standard_uncertainty, significant_digits);
  result.low_difference = std::abs(gum.low - draws.low);
  result.high_difference = std::abs(gum.high - draws.high);
  result.agree = result.low_difference <= result.tolerance && result.high_difference <= result.tolerance;
  return result;
}

}  // namespace pellicle
