#include "pellicle/uncertainty/detection.hpp"

#include <algorithm>
#include <array>
#include <boost/math/quadrature/gauss_kronrod.hpp>
#include <boost/math/tools/roots.hpp>
#include <cmath>
#include <cstdint>
#include <limits>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/base/random.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;
using test::error_of;
using test::rel;

namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kInf = std::numeric_limits<double>::infinity();
/// One-sided 95 % point of the normal distribution.
constexpr double kOneSided95 = 1.6448536269514722;

/// The bound by brute force: normal likelihood exp(−(x − a)²/2) over x >= 0, integrated in pieces and searched.
double bound_by_quadrature(double a, double exceeded) {
  // Divided by its value at 0 where a lies below, so that nothing underflows.
  const auto likelihood = [&](double x) { return std::exp(-0.5 * (a < 0.0 ? x * (x - 2.0 * a) : (x - a) * (x - a))); };
  const double width = a < -1.0 ? -1.0 / a : 1.0;  // scale on which it falls
  const auto area = [&](double from, double to) {
    double sum = 0.0;
    const int pieces = 200;
    for (int i = 0; i < pieces; ++i) {
      const double step = (to - from) / pieces;
      sum += boost::math::quadrature::gauss_kronrod<double, 31>::integrate(likelihood, from + i * step,
                                                                           from + (i + 1) * step, 0, 0);
    }
    return sum;
  };
  const double end = std::max(0.0, a) + 40.0 * width;
  const double whole = area(0.0, end);
  std::uintmax_t steps = 200;
  const auto [low, high] =
      boost::math::tools::toms748_solve([&](double x) { return area(x, end) / whole - exceeded; }, 0.0, end,
                                        boost::math::tools::eps_tolerance<double>(50), steps);
  return 0.5 * (low + high);
}

}  // namespace

TEST_SUITE("detection") {

TEST_CASE("decision level and detection limit are those of the published table") {
  // Currie (1968), table II, paired observations [currie1968]: 2.33 √B and 2.71 + 4.65 √B.
  CHECK(close_to(decision_level_counts(100.0), 23.3, rel(1e-15)));
  CHECK(close_to(detection_limit_counts(100.0), 49.21, rel(1e-15)));
  CHECK(decision_level_counts(0.0) == 0.0);
  CHECK(detection_limit_counts(0.0) == 2.71);
  // What the rounded factors stand for: k √2, k² and 2 k √2 with k = 1.645.
  CHECK(close_to(decision_level_counts(1.0), kOneSided95 * std::sqrt(2.0), test::abs(0.005)));
  CHECK(close_to(detection_limit_counts(0.0), kOneSided95 * kOneSided95, test::abs(0.005)));
  CHECK(close_to(detection_limit_counts(1.0) - detection_limit_counts(0.0), 2.0 * kOneSided95 * std::sqrt(2.0),
                 test::abs(0.005)));
}

TEST_CASE("a background alone exceeds the decision level in five of a hundred cases and a peak at the limit in 95") {
  // Counting simulated with normal numbers, background 400 counts, twice: gross minus background.
  constexpr std::size_t draws = 400'000;
  constexpr double background = 400.0;
  std::vector<double> gross(draws), blank(draws);
  RandomStream stream(1, 1);
  stream.fill_normal(gross);
  stream.fill_normal(blank);
  const double limit = detection_limit_counts(background), level = decision_level_counts(background);
  double false_alarms = 0.0, found = 0.0;
  for (std::size_t i = 0; i < draws; ++i) {
    const double b = background + std::sqrt(background) * blank[i];
    false_alarms += background + std::sqrt(background) * gross[i] - b > level ? 1.0 : 0.0;
    found += background + limit + std::sqrt(background + limit) * gross[i] - b > level ? 1.0 : 0.0;
  }
  CHECK(close_to(false_alarms / draws, 0.05, test::abs(0.002)));  // the factor is rounded, 0.0005; draws, 4 · 0.00035
  CHECK(close_to(found / draws, 0.95, test::abs(0.002)));
}

TEST_CASE("bounds agree with integration of the likelihood") {
  for (const double area : {-1000.0, -30.0, -10.0, -5.0, -4.001, -3.999, -2.0, -1.0, 0.0, 0.5, 1.0, 3.0, 10.0}) {
    CAPTURE(area);
    CHECK(close_to(upper_bound_95(area, 1.0), bound_by_quadrature(area, 0.05), rel(1e-11)));
    CHECK(close_to(lower_bound_95(area, 1.0), bound_by_quadrature(area, 0.95), rel(1e-11)));
  }
}

TEST_CASE("bounds have the values of a calculation with sixty digits") {
  // ln Q(α + d) = ln Q(α) + ln q solved for d with 60 digits; Q the upper tail of the normal distribution.
  struct Known {
    double area, upper, lower;
  };
  constexpr std::array<Known, 8> known = {{{-1000.0, 0.00299572479065616823, 0.0000512932417789143299},
                                           {-40.0, 0.074776778474636261, 0.0012815118971927172},
                                           {-10.0, 0.292467137788024504, 0.00507823810895621474},
                                           {-4.0, 0.65967280305439518, 0.0121221031275107739},
                                           {-1.0, 1.41199439578720144, 0.0333396406805637344},
                                           {0.0, 1.95996398454005424, 0.0627067779432137841},
                                           {2.0, 3.65598435671382823, 0.536114554286068739},
                                           {10.0, 11.6448536269514727, 8.35514637304852729}}};
  for (const Known& k : known) {
    CAPTURE(k.area);
    CHECK(close_to(upper_bound_95(k.area, 1.0), k.upper, rel(1e-13)));
    CHECK(close_to(lower_bound_95(k.area, 1.0), k.lower, rel(1e-12)));
  }
}

TEST_CASE("bounds tend to those of the two limits") {
  // Far above zero the cut does not matter; far below, an exponential of mean sd²/|area| is left.
  CHECK(close_to(upper_bound_95(1e4, 1.0), 1e4 + kOneSided95, rel(1e-15)));
  CHECK(close_to(lower_bound_95(1e4, 1.0), 1e4 - kOneSided95, rel(1e-15)));
  CHECK(close_to(upper_bound_95(-1e9, 1.0), 1e-9 * -std::log(0.05), rel(1e-14)));
  CHECK(close_to(lower_bound_95(-1e9, 1.0), 1e-9 * -std::log(0.95), rel(1e-14)));
  // Measured zero: the two-sided 95 % point, since half of the likelihood is cut off.
  CHECK(close_to(upper_bound_95(0.0, 1.0), 1.959963984540054, rel(1e-14)));
}

TEST_CASE("bounds scale with the unit and rise with the area") {
  double last_upper = 0.0, last_lower = 0.0;
  for (double area = -50.0; area < 50.0; area += 0.37) {
    const double upper = upper_bound_95(area, 1.0), lower = lower_bound_95(area, 1.0);
    CHECK(upper > last_upper);
    CHECK(lower > last_lower);
    CHECK(upper > lower);
    CHECK(close_to(upper_bound_95(1e-7 * area, 1e-7), 1e-7 * upper, rel(1e-12)));
    CHECK(close_to(lower_bound_95(1e7 * area, 1e7), 1e7 * lower, rel(1e-11)));
    last_upper = upper;
    last_lower = lower;
  }
}

TEST_CASE("without spread the area itself is the bound") {
  CHECK(upper_bound_95(3.0, 0.0) == 3.0);
  CHECK(lower_bound_95(3.0, 0.0) == 3.0);
  CHECK(upper_bound_95(-3.0, 0.0) == 0.0);
}

TEST_CASE("what is no area and no background is refused") {
  for (const double bad : {-1.0, kNan, kInf}) {
    CHECK_THROWS_AS((void)decision_level_counts(bad), InputError);
    CHECK_THROWS_AS((void)detection_limit_counts(bad), InputError);
    CHECK(error_of<InputError>([&] { (void)upper_bound_95(1.0, bad); }).where() == "standard deviation of the area");
  }
  for (const double bad : {kNan, kInf, -kInf}) {
    CHECK(error_of<InputError>([&] { (void)upper_bound_95(bad, 1.0); }).where() == "area");
    CHECK(error_of<InputError>([&] { (void)lower_bound_95(bad, 1.0); }).where() == "area");
  }
}

}  // TEST_SUITE("detection")
