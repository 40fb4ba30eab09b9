#include "pellicle/uncertainty/monte_carlo.hpp"

#include <algorithm>
#include <atomic>
#include <cmath>
#include <limits>
#include <span>
#include <string>
#include <thread>
#include <vector>

#include "pellicle/base/parallel.hpp"
#include "pellicle/base/random.hpp"
#include "support/close_to.hpp"
#include "uncertainty/order_statistics.hpp"

using namespace pellicle;
using test::close_to;
using test::error_of;
using test::rel;

namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
/// Deviation of a simulated number, in its own standard deviations, that is exceeded once in 15,000 times. Seeds are
/// fixed: what passes once passes always.
constexpr double kUnlikely = 4.0;

using Columns = std::span<const std::span<const double>>;

ModelInput normal(double mean, double sd) { return {"x", Distribution::normal(mean, sd)}; }

/// Sum of all inputs.
void sum(Columns x, std::span<double> y) {
  for (std::size_t k = 0; k < y.size(); ++k) {
    y[k] = 0.0;
    for (const auto& column : x) y[k] += column[k];
  }
}

/// The first input itself.
void same(Columns x, std::span<double> y) { std::copy(x[0].begin(), x[0].end(), y.begin()); }

bool same_bits(const MonteCarlo& a, const MonteCarlo& b) {
  const auto numbers = [](const MonteCarlo& m) {
    return std::vector<double>{m.mean,           m.sd,           m.median,       m.symmetric.low,
                               m.symmetric.high, m.shortest.low, m.shortest.high};
  };
  return a.draws == b.draws && a.rejected == b.rejected && test::same_bits(numbers(a), numbers(b));
}

MonteCarloOptions options_with(std::size_t draws, std::uint64_t seed = 1, unsigned threads = 0) {
  MonteCarloOptions options;
  options.draws = draws;
  options.seed = seed;
  options.threads = threads;
  return options;
}

/// Standard deviation of a quantile of a normal sample, in units of its sd: √(p(1 − p)/n)/φ(z).
double quantile_error(double p, double z, double draws) {
  return std::sqrt(p * (1.0 - p) / draws) / (std::exp(-0.5 * z * z) / std::sqrt(2.0 * std::acos(-1.0)));
}

/// JCGM 101:2008, 7.7 [jcgm101], word by word, with places counted from 1.
detail::OrderStatistics by_definition(std::vector<double> y, double p) {
  std::sort(y.begin(), y.end());
  const auto at = [&](std::size_t r) { return y[r - 1]; };
  const std::size_t m = y.size();
  const double pm = p * static_cast<double>(m);
  const auto q = static_cast<std::size_t>(pm == std::floor(pm) ? pm : std::floor(pm + 0.5));
  const std::size_t r = (m - q) % 2 == 0 ? (m - q) / 2 : (m - q + 1) / 2;
  detail::OrderStatistics result;
  result.symmetric = {at(r), at(r + q)};
  result.shortest = {at(1), at(1 + q)};
  for (std::size_t i = 2; i <= m - q; ++i) {
    if (at(i + q) - at(i) < result.shortest.high - result.shortest.low) result.shortest = {at(i), at(i + q)};
  }
  result.median = m % 2 == 1 ? at((m + 1) / 2) : at(m / 2) + 0.5 * (at(m / 2 + 1) - at(m / 2));
  return result;
}

}  // namespace

TEST_SUITE("monte carlo") {

TEST_CASE("a normal quantity comes out with mean and spread and intervals") {
  constexpr double mean = 3.0, sd = 0.5, n = 1e6;
  const MonteCarlo m = monte_carlo(same, {normal(mean, sd)});
  CHECK(m.draws == 1'000'000);
  CHECK(m.rejected == 0);
  CHECK(m.findings.empty());
  CHECK(close_to(m.mean, mean, test::abs(kUnlikely * sd / std::sqrt(n))));
  CHECK(close_to(m.sd, sd, test::abs(kUnlikely * sd / std::sqrt(2.0 * n))));
  CHECK(close_to(m.median, mean, test::abs(kUnlikely * sd * quantile_error(0.5, 0.0, n))));
  const double end = kUnlikely * sd * quantile_error(0.025, 1.96, n);
  CHECK(close_to(m.symmetric.low, mean - 1.959964 * sd, test::abs(end)));
  CHECK(close_to(m.symmetric.high, mean + 1.959964 * sd, test::abs(end)));
  CHECK(m.shortest.high - m.shortest.low <= m.symmetric.high - m.symmetric.low);
  CHECK(close_to(m.shortest.high - m.shortest.low, 2.0 * 1.959964 * sd, test::abs(2.0 * end)));
}

TEST_CASE("intervals of a skewed quantity are those of its distribution function") {
  // Exponential of mean 1: symmetric −ln 0.975 … −ln 0.025, shortest 0 … −ln 0.05, median ln 2.
  const MonteCarlo m = monte_carlo(same, {{"x", Distribution::poisson_count(0.0)}});
  const auto error = [](double above) { return kUnlikely * std::sqrt((1.0 - above) / above / 1e6); };
  CHECK(close_to(m.symmetric.low, -std::log(0.975), test::abs(error(0.975))));
  CHECK(close_to(m.symmetric.high, -std::log(0.025), test::abs(error(0.025))));
  CHECK(close_to(m.median, std::log(2.0), test::abs(error(0.5))));
  CHECK(close_to(m.shortest.low, 0.0, test::abs(1e-3)));
  CHECK(close_to(m.shortest.high, -std::log(0.05), test::abs(error(0.05))));
}

TEST_CASE("neither threads nor their number change a bit") {
  const BlockModel model = [](Columns x, std::span<double> y) {
    for (std::size_t k = 0; k < y.size(); ++k) y[k] = std::log(x[0][k] / x[1][k]) * x[2][k];
  };
  // The logarithm of a negative ratio is not a number; some draws are rejected, in each block others.
  const std::vector<ModelInput> inputs = {
      normal(1.0, 0.4), {"b", Distribution::lognormal(2.0, 0.3)}, {"c", Distribution::rectangular(0.0, 1.0)}};
  for (const bool adaptive : {false, true}) {
    MonteCarloOptions options = options_with(3 * kBlockSize * 30 + 17, 5, 1);
    options.adaptive = adaptive;
    const MonteCarlo one = monte_carlo(model, inputs, {{0, 1, 0.3}}, options);
    CHECK(one.rejected > 100);
    for (const unsigned threads : {2U, 3U, 16U}) {
      options.threads = threads;
      CHECK(same_bits(one, monte_carlo(model, inputs, {{0, 1, 0.3}}, options)));
    }
    options.seed = 6;
    CHECK_FALSE(same_bits(one, monte_carlo(model, inputs, {{0, 1, 0.3}}, options)));
  }
}

TEST_CASE("means of other seeds scatter as their standard error says") {
  constexpr double draws = 2000.0;
  double squares = 0.0;
  constexpr int runs = 400;
  for (int seed = 0; seed < runs; ++seed) {
    const double mean = monte_carlo(sum, {normal(1.0, 3.0), normal(0.0, 4.0)}, {},
                                    options_with(2000, static_cast<std::uint64_t>(seed), 1))
                            .mean;
    squares += (mean - 1.0) * (mean - 1.0) * draws / 25.0;
  }
  // χ² of 400 degrees of freedom: 400 ± √800.
  CHECK(std::abs(squares - runs) / std::sqrt(2.0 * runs) < kUnlikely);
}

TEST_CASE("mean and spread and intervals are those of the values drawn") {
  // One thread takes the blocks in their order, so the values can be written down; the last block is short. A small
  // sample, in which n and n − 1 differ.
  std::vector<double> values;
  const BlockModel recorded = [&](Columns x, std::span<double> y) {
    same(x, y);
    values.insert(values.end(), y.begin(), y.end());
  };
  for (const std::size_t draws : {std::size_t{1000}, 9 * kBlockSize + 7}) {
    values.clear();
    const MonteCarlo m = monte_carlo(recorded, {normal(1.0, 1.0)}, {}, options_with(draws, 3, 1));
    REQUIRE(values.size() == draws);
    long double sum_of_values = 0.0L, squares = 0.0L;
    for (const double v : values) sum_of_values += v;
    const long double mean = sum_of_values / static_cast<long double>(draws);
    for (const double v : values) squares += (v - mean) * (v - mean);
    CHECK(close_to(m.mean, static_cast<double>(mean), rel(1e-13)));
    CHECK(close_to(m.sd, static_cast<double>(std::sqrt(squares / static_cast<long double>(draws - 1))), rel(1e-13)));
    const auto expected = by_definition(values, 0.95);
    CHECK(m.median == expected.median);
    CHECK(m.symmetric.low == expected.symmetric.low);
    CHECK(m.symmetric.high == expected.symmetric.high);
    CHECK(m.shortest.low == expected.shortest.low);
    CHECK(m.shortest.high == expected.shortest.high);
  }
}

TEST_CASE("a small spread on a large value keeps its digits") {
  const MonteCarlo m = monte_carlo(sum, {normal(1e9, 1.0), {"c", Distribution::constant(3.0)}});
  CHECK(close_to(m.mean, 1e9 + 3.0, test::abs(kUnlikely * 1e-3)));
  CHECK(close_to(m.sd, 1.0, test::abs(kUnlikely / std::sqrt(2e6))));
}

TEST_CASE("correlated inputs are correlated as asked") {
  const std::vector<ModelInput> three = {normal(0.0, 1.0), normal(0.0, 2.0), normal(0.0, 3.0)};
  const auto sd = [&](const std::vector<Correlation>& r) { return monte_carlo(sum, three, r).sd; };
  // JCGM 100:2008, eq. (16) [jcgm100]; the standard deviation of a standard deviation is 1/√(2n) of it.
  const double error = kUnlikely / std::sqrt(2e6);
  CHECK(close_to(sd({}), std::sqrt(14.0), rel(error)));
  CHECK(close_to(sd({{0, 1, 0.5}}), std::sqrt(16.0), rel(error)));
  CHECK(close_to(sd({{0, 1, -0.5}}), std::sqrt(12.0), rel(error)));
  CHECK(close_to(sd({{0, 1, 0.5}, {1, 2, -0.5}, {2, 0, 0.25}}), std::sqrt(14.0 + 2.0 - 6.0 + 1.5), rel(error)));
  CHECK(close_to(sd({{0, 1, 1.0}, {0, 2, 1.0}, {1, 2, 1.0}}), 6.0, rel(error)));
  // Cancels but for rounding: a singular matrix.
  CHECK(monte_carlo(sum, {normal(0.0, 2.0), normal(0.0, 2.0)}, {{0, 1, -1.0}}).sd < 1e-7);
}

TEST_CASE("correlated inputs keep their own distributions") {
  const std::vector<ModelInput> inputs = {{"a", Distribution::rectangular(2.0, 3.0)},
                                          {"b", Distribution::gamma(1.0, 0.8)},
                                          {"c", Distribution::constant(5.0)}};
  const std::vector<Correlation> r = {{0, 1, 0.9}, {2, 0, 0.5}};  // a constant correlates with nothing
  const MonteCarlo a = monte_carlo(same, inputs, r);
  CHECK(close_to(a.mean, 2.5, test::abs(kUnlikely * 0.29e-3)));
  CHECK(close_to(a.sd, 1.0 / std::sqrt(12.0), rel(1e-3)));
  CHECK(close_to(a.symmetric.low, 2.025, test::abs(kUnlikely * 0.16e-3)));
  const MonteCarlo b =
      monte_carlo([](Columns x, std::span<double> y) { std::copy(x[1].begin(), x[1].end(), y.begin()); }, inputs, r);
  CHECK(close_to(b.mean, 1.0, test::abs(kUnlikely * 0.8e-3)));
  CHECK(close_to(b.sd, 0.8, rel(5e-3)));
}

TEST_CASE("the logarithms of lognormal inputs have the correlation that was asked for") {
  const double s = std::sqrt(std::log(1.0 + 0.25));  // sd 50 % of the mean
  const MonteCarlo m = monte_carlo(
      [](Columns x, std::span<double> y) {
        for (std::size_t k = 0; k < y.size(); ++k) y[k] = std::log(x[0][k]) - std::log(x[1][k]);
      },
      {{"a", Distribution::lognormal(1.0, 0.5)}, {"b", Distribution::lognormal(2.0, 1.0)}}, {{0, 1, 0.8}});
  CHECK(close_to(m.sd, s * std::sqrt(2.0 - 2.0 * 0.8), rel(kUnlikely / std::sqrt(2e6))));
  CHECK(close_to(m.mean, -std::log(2.0), test::abs(kUnlikely * 1e-3 * m.sd)));
}

TEST_CASE("correlations that cannot be together are refused") {
  const std::vector<ModelInput> three = {normal(0.0, 1.0), normal(0.0, 1.0), normal(0.0, 1.0)};
  CHECK(error_of<InputError>([&] {
          (void)monte_carlo(sum, three, {{0, 1, 0.9}, {1, 2, 0.9}, {0, 2, -0.9}});
        }).where() == "correlation");
  CHECK_THROWS_AS((void)monte_carlo(sum, three, {{0, 1, 1.1}}), InputError);
  CHECK_THROWS_AS((void)monte_carlo(sum, three, {{0, 3, 0.1}}), InputError);
  CHECK_THROWS_AS((void)monte_carlo(sum, three, {{0, 1, 0.9}, {1, 0, 0.9}}), InputError);
}

TEST_CASE("draws without a value are counted and reported and left out") {
  const BlockModel root = [](Columns x, std::span<double> y) {
    for (std::size_t k = 0; k < y.size(); ++k) y[k] = std::sqrt(x[0][k]);
  };
  const MonteCarlo m = monte_carlo(root, {{"x", Distribution::rectangular(-1.0, 9.0)}}, {}, options_with(100'000));
  CHECK(m.draws + m.rejected == 100'000);
  CHECK(close_to(static_cast<double>(m.rejected), 1e4, test::abs(kUnlikely * std::sqrt(1e4 * 0.9))));
  CHECK(close_to(m.mean, 2.0, test::abs(kUnlikely * 0.71 / std::sqrt(9e4))));  // √x of x uniform on 0 … 9
  CHECK(close_to(m.median, std::sqrt(4.5), test::abs(0.02)));
  REQUIRE(m.findings.size() == 1);
  CHECK(m.findings[0].code == "monte_carlo_draws_rejected");
  CHECK(m.findings[0].severity == Severity::warning);
  CHECK(close_to(m.findings[0].value.value(), static_cast<double>(m.rejected) / 1e5, rel(1e-15)));
  CHECK(test::contains(m.findings[0].text, std::to_string(m.rejected) + " of 100000"));

  CHECK_THROWS_AS((void)monte_carlo(root, {{"x", Distribution::rectangular(-6.0, 4.0)}}, {}, options_with(100'000)),
                  DomainError);
  CHECK_THROWS_AS((void)monte_carlo([](Columns, std::span<double> y) { std::fill(y.begin(), y.end(), kNan); },
                                    {normal(0.0, 1.0)}, {}, options_with(1000)),
                  DomainError);
  // Infinite is as bad as not a number.
  const MonteCarlo infinite = monte_carlo(
      [](Columns x, std::span<double> y) {
        for (std::size_t k = 0; k < y.size(); ++k) y[k] = x[0][k] > 0.9 ? std::numeric_limits<double>::infinity() : 1.0;
      },
      {{"x", Distribution::rectangular(0.0, 1.0)}}, {}, options_with(10'000));
  CHECK(infinite.rejected > 800);
  CHECK(infinite.mean == 1.0);
  CHECK(infinite.sd == 0.0);
}

TEST_CASE("a model of one draw at a time gives the same and its errors reject the draw") {
  const Model product = [](std::span<const double> x) {
    if (x[0] < 0.0) throw DomainError("x", "negative");
    return x[0] * x[1];
  };
  const BlockModel block = [](Columns x, std::span<double> y) {
    for (std::size_t k = 0; k < y.size(); ++k) y[k] = x[0][k] < 0.0 ? kNan : x[0][k] * x[1][k];
  };
  const std::vector<ModelInput> inputs = {normal(1.0, 0.8), normal(2.0, 0.1)};
  const MonteCarlo m = monte_carlo(block_model(product), inputs, {}, options_with(50'000));
  CHECK(same_bits(m, monte_carlo(block, inputs, {}, options_with(50'000))));
  CHECK(m.rejected > 4000);
}

TEST_CASE("an error of a block model comes out as it is") {
  const BlockModel failing = [](Columns, std::span<double>) { throw ConvergenceError("model", "stopped"); };
  CHECK(error_of<ConvergenceError>([&] { (void)monte_carlo(failing, {normal(0.0, 1.0)}); }).fact() == "stopped");
}

TEST_CASE("order statistics are those of the definition for any sample") {
  RandomStream stream(31, 0);
  for (const std::size_t size : {std::size_t{1000}, std::size_t{1001}, 8 * kBlockSize - 1, 8 * kBlockSize,
                                 std::size_t{100'000}, std::size_t{123'457}}) {
    std::vector<double> z(size);
    stream.fill_normal(z);
    std::vector<double> rounded = z, clamped = z, sorted = z, falling, outliers = z;
    for (double& v : rounded) v = std::round(4.0 * v) / 4.0;  // many ties
    for (double& v : clamped) v = std::max(0.0, v);           // half of it in one point
    for (double& v : outliers) v = std::exp(v * v);           // heavy tail
    std::sort(sorted.begin(), sorted.end());
    falling.assign(sorted.rbegin(), sorted.rend());
    for (const auto& sample : {z, rounded, clamped, sorted, falling, outliers, std::vector<double>(size, 2.0)}) {
      for (const double p : {0.5, 0.8, 0.95, 0.99, 0.999}) {
        CAPTURE(size);
        CAPTURE(p);
        const auto expected = by_definition(sample, p);
        for (const unsigned threads : {1U, 3U}) {
          std::vector<double> work = sample;
          const auto actual = detail::order_statistics(work, p, threads);
          CHECK(actual.median == expected.median);
          CHECK(actual.symmetric.low == expected.symmetric.low);
          CHECK(actual.symmetric.high == expected.symmetric.high);
          CHECK(actual.shortest.low == expected.shortest.low);
          CHECK(actual.shortest.high == expected.shortest.high);
        }
        std::vector<double> work = sample;
        const auto interval = detail::symmetric_interval(work, p);
        CHECK(interval.low == expected.symmetric.low);
        CHECK(interval.high == expected.symmetric.high);
      }
    }
  }
}

TEST_CASE("a zero among the results has no sign") {
  std::vector<double> zeros(100'000, -0.0);
  for (std::size_t i = 0; i < zeros.size(); i += 3) zeros[i] = 0.0;
  const auto o = detail::order_statistics(zeros, 0.95, 2);
  for (const double v : {o.median, o.symmetric.low, o.symmetric.high, o.shortest.low, o.shortest.high})
    CHECK(test::same_bits(v, 0.0));
}

TEST_CASE("adaptive draws end when two digits are stable") {
  MonteCarloOptions options;
  options.adaptive = true;
  const MonteCarlo m = monte_carlo(same, {normal(10.0, 0.34)}, {}, options);
  CHECK(m.stable);
  CHECK(m.findings.empty());
  // u = 0.34 to two digits: δ = 0.005. Ends of the interval: 2 · 0.34 · 2.67/√n <= 0.005 wants about 130,000.
  CHECK(m.draws > 8 * 3 * kBlockSize);
  CHECK(m.draws <= 300'000);
  CHECK(close_to(m.sd, 0.34, test::abs(0.005)));
  CHECK(close_to(m.symmetric.low, 10.0 - 1.96 * 0.34, test::abs(0.005)));
  CHECK(close_to(m.symmetric.high, 10.0 + 1.96 * 0.34, test::abs(0.005)));
  // One digit needs less: the first look suffices.
  options.significant_digits = 1;
  const MonteCarlo coarse = monte_carlo(same, {normal(10.0, 0.34)}, {}, options);
  CHECK(coarse.stable);
  CHECK(coarse.draws == 8 * 3 * kBlockSize);
  // Just below a power of ten δ is smallest against u: 0.00005 for 0.0097.
  options.significant_digits = 2;
  CHECK(monte_carlo(same, {normal(0.0, 0.0097)}, {}, options).draws > 500'000);
}

TEST_CASE("adaptive draws of a quantity without a stable spread end at the most with a warning") {
  MonteCarloOptions options;
  options.adaptive = true;
  options.most_draws = 300'000;
  const MonteCarlo m = monte_carlo(
      [](Columns x, std::span<double> y) {  // Cauchy
        for (std::size_t k = 0; k < y.size(); ++k) y[k] = x[0][k] / x[1][k];
      },
      {normal(0.0, 1.0), normal(0.0, 1.0)}, {}, options);
  CHECK_FALSE(m.stable);
  CHECK(has_finding(m.findings, "monte_carlo_not_stable"));
  CHECK(m.draws <= 300'000);
  CHECK(m.draws > 280'000);
  CHECK(close_to(m.symmetric.high, std::tan(0.475 * std::acos(-1.0)), rel(0.05)));
}

TEST_CASE("a constant is stable at once") {
  MonteCarloOptions options;
  options.adaptive = true;
  const MonteCarlo m = monte_carlo(same, {{"c", Distribution::constant(2.5)}}, {}, options);
  CHECK(m.stable);
  CHECK(m.mean == 2.5);
  CHECK(m.sd == 0.0);
  CHECK(m.shortest.low == 2.5);
  CHECK(m.shortest.high == 2.5);
}

TEST_CASE("progress is told on the calling thread") {
  MonteCarloOptions options = options_with(200 * kBlockSize);
  const auto caller = std::this_thread::get_id();
  std::size_t calls = 0, last = 0;
  bool elsewhere = false, fell = false, wrong_plan = false;
  options.progress = [&](std::size_t done, std::size_t planned) {
    ++calls;
    elsewhere = elsewhere || std::this_thread::get_id() != caller;
    fell = fell || done < last;
    wrong_plan = wrong_plan || planned != 200 * kBlockSize || done > planned;
    last = done;
    return true;
  };
  for (const unsigned threads : {1U, 3U}) {
    options.threads = threads;
    last = 0;
    (void)monte_carlo(same, {normal(0.0, 1.0)}, {}, options);
    if (threads == 1) CHECK(calls == 200);
    if (threads == 1) CHECK(last == 200 * kBlockSize);
  }
  CHECK_FALSE(elsewhere);
  CHECK_FALSE(fell);
  CHECK_FALSE(wrong_plan);
}

TEST_CASE("progress can end the work") {
  for (const unsigned threads : {1U, 3U}) {
    MonteCarloOptions options = options_with(10'000 * kBlockSize, 1, threads);
    std::size_t calls = 0;
    options.progress = [&](std::size_t, std::size_t) { return ++calls < 3; };
    std::atomic<std::size_t> blocks{0};
    const BlockModel counted = [&](Columns x, std::span<double> y) {
      ++blocks;
      same(x, y);
    };
    CHECK_THROWS_AS((void)monte_carlo(counted, {normal(0.0, 1.0)}, {}, options), Cancelled);
    CHECK(calls == 3);
    CHECK(blocks < 10'000);
    if (threads == 1) CHECK(blocks == 3);
  }
}

TEST_CASE("options outside their ranges are refused by name") {
  const auto refused = [](auto&& change) {
    MonteCarloOptions options;
    change(options);
    return error_of<InputError>([&] { (void)monte_carlo(same, {normal(0.0, 1.0)}, {}, options); }).where();
  };
  CHECK(refused([](auto& o) { o.draws = 999; }) == "draws");
  for (const double p : {0.49, 0.9991, kNan}) {
    CHECK(refused([&](auto& o) { o.coverage_probability = p; }) == "coverage probability");
  }
  CHECK(refused([](auto& o) { o.significant_digits = 3; }) == "significant digits");
  CHECK(refused([](auto& o) {
          o.adaptive = true;
          o.most_draws = 98'303;
        }) == "most_draws");
}

TEST_CASE("numerical tolerances are those of the published examples") {
  // JCGM 101:2008, 7.9.2.2 [jcgm101]: u = 0.000 35 g with two digits; u = 2 K with one.
  CHECK(close_to(numerical_tolerance(0.00035, 2), 0.000005, rel(1e-12)));
  CHECK(close_to(numerical_tolerance(0.00035, 1), 0.00005, rel(1e-12)));
  CHECK(close_to(numerical_tolerance(2.0, 1), 0.5, rel(1e-12)));
  // Rounding up to one digit more.
  CHECK(close_to(numerical_tolerance(0.0996, 2), 0.005, rel(1e-12)));
  CHECK(close_to(numerical_tolerance(0.0994, 2), 0.0005, rel(1e-12)));
  CHECK(close_to(numerical_tolerance(1000.0, 2), 50.0, rel(1e-12)));
  CHECK(close_to(numerical_tolerance(1e-300, 2), 5e-302, rel(1e-12)));
  for (const double bad : {0.0, -1.0, kNan}) CHECK_THROWS_AS((void)numerical_tolerance(bad), InputError);
  CHECK_THROWS_AS((void)numerical_tolerance(1.0, 0), InputError);
  CHECK_THROWS_AS((void)numerical_tolerance(1.0, 16), InputError);
}

TEST_CASE("an interval is validated where both its ends agree to the tolerance") {
  const CoverageInterval draws{1.0, 2.0};
  CHECK(compare_intervals({1.004, 1.996}, draws, 0.34).agree);
  CHECK_FALSE(compare_intervals({1.006, 2.0}, draws, 0.34).agree);
  CHECK_FALSE(compare_intervals({1.0, 1.994}, draws, 0.34).agree);
  CHECK(compare_intervals({1.04, 1.96}, draws, 0.34, 1).agree);
  const IntervalAgreement a = compare_intervals({0.9, 2.3}, draws, 0.34);
  CHECK(close_to(a.tolerance, 0.005, rel(1e-12)));
  CHECK(close_to(a.low_difference, 0.1, rel(1e-12)));
  CHECK(close_to(a.high_difference, 0.3, rel(1e-12)));
}

}  // TEST_SUITE("monte carlo")
