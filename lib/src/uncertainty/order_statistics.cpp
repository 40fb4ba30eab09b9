#include "uncertainty/order_statistics.hpp"

#include <algorithm>
#include <boost/sort/pdqsort/pdqsort.hpp>
#include <cmath>
#include <cstddef>
#include <memory>
#include <mutex>
#include <optional>
#include <vector>

#include "pellicle/base/parallel.hpp"
#include "uncertainty/tasks.hpp"

namespace pellicle::detail {
namespace {

/// Places in the sorted sample, counted from 0. JCGM 101:2008, 7.7: an interval holds q steps.
struct Places {
  std::size_t size, q;

  Places(std::size_t n, double coverage_probability)
      : size(n), q(static_cast<std::size_t>(std::floor(coverage_probability * static_cast<double>(n) + 0.5))) {
    q = std::clamp<std::size_t>(q, 1, n - 1);
  }
  std::size_t tail() const { return size - q; }  // number of intervals
  std::size_t low() const { return (size - q + 1) / 2 - 1; }
  std::size_t high() const { return low() + q; }
  std::size_t upper_median() const { return size / 2; }
  bool has_two_medians() const { return size % 2 == 0; }
};

/// Middle of the two medians without overflow, or the one.
double median_of(double lower, double upper) { return lower + 0.5 * (upper - lower); }

/// Of the intervals from lowest[i] to highest[i].
CoverageInterval shortest(std::span<const double> lowest, std::span<const double> highest) {
  std::size_t best = 0;
  for (std::size_t i = 1; i < lowest.size(); ++i) {
    if (highest[i] - lowest[i] < highest[best] - lowest[best]) best = i;
  }
  return {lowest[best], highest[best]};
}

OrderStatistics by_sorting(std::span<double> values, const Places& places) {
  boost::sort::pdqsort(values.begin(), values.end());
  OrderStatistics result;
  const std::size_t middle = places.upper_median();
  result.median = median_of(values[places.has_two_medians() ? middle - 1 : middle], values[middle]);
  result.symmetric = {values[places.low()], values[places.high()]};
  result.shortest = shortest(values.first(places.tail()), values.last(places.tail()));
  return result;
}

/// Parts of the sample: what lies below `low`, from `middle_low` to `middle_high`, and above `high`.
struct Cuts {
  double low, middle_low, middle_high, high;
};

/// Cuts from every n-th value, five standard deviations beyond the places that are looked for, so that hardly ever too
/// little is cut out.
Cuts pilot_cuts(std::span<const double> values, const Places& places) {
  constexpr std::size_t kPilot = 4096;
  std::vector<double> pilot(kPilot);
  for (std::size_t i = 0; i < kPilot; ++i) pilot[i] = values[i * (values.size() / kPilot)];
  boost::sort::pdqsort(pilot.begin(), pilot.end());
  const double n = static_cast<double>(kPilot);
  const double tail = static_cast<double>(places.tail()) / static_cast<double>(places.size);
  const double outer = n * tail + 5.0 * std::sqrt(n * tail * (1.0 - tail)) + 2.0;
  const double half = 2.5 * std::sqrt(n) + 2.0;
  const auto at = [&](double place) { return pilot[static_cast<std::size_t>(std::clamp(place, 0.0, n - 1.0))]; };
  return {at(outer), at(0.5 * n - half), at(0.5 * n + half), at(n - 1.0 - outer)};
}

/// The three parts, each in any order, and how many values lie below the middle one.
struct Parts {
  std::vector<double> low, middle, high;
  std::size_t below_middle = 0;
};

/// Copies of one block. Written without branches: which way a value goes cannot be foretold. A value that does not
/// belong to a part is written over by the next one.
void cut_block(std::span<const double> values, const Cuts cuts, Parts& parts, std::mutex& mutex) {
  const auto buffer = std::make_unique_for_overwrite<double[]>(3 * kBlockSize);
  double *const low = buffer.get(), *const middle = low + kBlockSize, *const high = middle + kBlockSize;
  std::ptrdiff_t l = 0, m = 0, h = 0, below = 0;
  for (const double value : values) {
    low[l] = middle[m] = high[h] = value;
    const std::ptrdiff_t below_middle = value<cuts.middle_low, above_middle = value> cuts.middle_high;
    l += static_cast<std::ptrdiff_t>(value < cuts.low);
    m += 1 - below_middle - above_middle;
    h += static_cast<std::ptrdiff_t>(value > cuts.high);
    below += below_middle;
  }
  const std::lock_guard lock(mutex);
  parts.low.insert(parts.low.end(), low, low + l);
  parts.middle.insert(parts.middle.end(), middle, middle + m);
  parts.high.insert(parts.high.end(), high, high + h);
  parts.below_middle += static_cast<std::size_t>(below);
}

Parts cut(std::span<const double> values, const Cuts& cuts, unsigned threads) {
  Parts parts;
  for (auto* part : {&parts.low, &parts.middle, &parts.high}) part->reserve(values.size() / 8);
  std::mutex mutex;
  for_each_block(
      values.size(),
      [&](std::size_t begin, std::size_t end) { cut_block(values.subspan(begin, end - begin), cuts, parts, mutex); },
      threads);
  return parts;
}

/// From the parts alone; nothing when one of them does not hold what is looked for.
std::optional<OrderStatistics> by_cutting(std::span<const double> values, const Places& places, unsigned threads) {
  Parts parts = cut(values, pilot_cuts(values, places), threads);
  const std::size_t tail = places.tail();
  const std::size_t first_median = places.upper_median() - (places.has_two_medians() ? 1 : 0);
  if (parts.low.size() < tail || parts.high.size() < tail || first_median < parts.below_middle ||
      places.upper_median() >= parts.below_middle + parts.middle.size()) {
    return std::nullopt;
  }
  OrderStatistics result;
  for_each_task(
      3,
      [&](std::size_t task) {
        if (task == 0) {
          boost::sort::pdqsort(parts.low.begin(), parts.low.end());
        } else if (task == 1) {
          boost::sort::pdqsort(parts.high.begin(), parts.high.end());
        } else {
          const auto upper =
              parts.middle.begin() + static_cast<std::ptrdiff_t>(places.upper_median() - parts.below_middle);
          std::nth_element(parts.middle.begin(), upper, parts.middle.end());
          const double lower = places.has_two_medians() ? *std::max_element(parts.middle.begin(), upper) : *upper;
          result.median = median_of(lower, *upper);
        }
      },
      threads);
  const std::span<const double> lowest = std::span(parts.low).first(tail), highest = std::span(parts.high).last(tail);
  result.symmetric = {lowest[places.low()], highest[places.low()]};
  result.shortest = shortest(lowest, highest);
  return result;
}

/// Negative zero becomes zero: equal values may come in any order.
CoverageInterval without_signed_zero(const CoverageInterval& i) { return {i.low + 0.0, i.high + 0.0}; }

}  // namespace

OrderStatistics order_statistics(std::span<double> values, double coverage_probability, unsigned threads) {
  constexpr std::size_t kSmall = 8 * kBlockSize;
  const Places places(values.size(), coverage_probability);
  OrderStatistics result;
  const bool tails_are_small = 4 * places.tail() < values.size();
  const auto cut = values.size() >= kSmall && tails_are_small ? by_cutting(values, places, threads) : std::nullopt;
  result = cut ? *cut : by_sorting(values, places);
  return {result.median + 0.0, without_signed_zero(result.symmetric), without_signed_zero(result.shortest)};
}

CoverageInterval symmetric_interval(std::span<double> values, double coverage_probability) {
  const Places places(values.size(), coverage_probability);
  const auto low = values.begin() + static_cast<std::ptrdiff_t>(places.low());
  const auto high = values.begin() + static_cast<std::ptrdiff_t>(places.high());
  std::nth_element(values.begin(), low, values.end());
  if (high > low) std::nth_element(low + 1, high, values.end());
  return without_signed_zero({*low, *high});
}

}  // namespace pellicle::detail
