#include "pellicle/uncertainty/budget.hpp"

#include <array>
#include <cmath>
#include <limits>
#include <numeric>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;
using test::error_of;
using test::rel;

namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kInf = std::numeric_limits<double>::infinity();
/// Sums of a few products of double numbers.
constexpr double kRounding = 1e-13;

double sum_of_shares(const Budget& b) {
  return std::accumulate(b.rows.begin(), b.rows.end(), 0.0,
                         [](double sum, const BudgetRow& row) { return sum + row.share; });
}

}  // namespace

TEST_SUITE("uncertainty budget") {

TEST_CASE("independent contributions add in squares") {
  // JCGM 100:2008, eq. (10) [jcgm100]: 3, 4 and 12 make 13. Invented numbers.
  const Budget b = combine({{"a", 1.0, 1.5, 2.0}, {"b", 1.0, 0.4, -10.0}, {"c", 1.0, 12.0, 1.0}});
  CHECK(close_to(b.standard_uncertainty, 13.0, rel(kRounding)));
  REQUIRE(b.rows.size() == 3);
  CHECK(b.rows[0].name == "c");  // largest share first
  CHECK(b.rows[1].name == "b");
  CHECK(b.rows[2].name == "a");
  CHECK(close_to(b.rows[1].contribution, 4.0, rel(kRounding)));  // without sign
  CHECK(close_to(b.rows[0].share, 144.0 / 169.0, rel(kRounding)));
  CHECK(close_to(sum_of_shares(b), 1.0, rel(kRounding)));
}

TEST_CASE("the published example of resistance and reactance and impedance is met") {
  // JCGM 100:2008, H.2 [jcgm100]: five sets of voltage V, current in mA and phase in rad. Data and results recalled,
  // not confirmed in print; the data give back all three results.
  constexpr std::array<std::array<double, 5>, 3> kData = {{{5.007, 4.994, 5.005, 4.990, 4.999},
                                                           {19.663, 19.639, 19.640, 19.685, 19.678},
                                                           {1.0456, 1.0438, 1.0468, 1.0428, 1.0433}}};
  std::array<double, 3> mean{}, sd{};
  std::array<std::array<double, 3>, 3> covariance{};
  for (std::size_t i = 0; i < 3; ++i) mean[i] = std::accumulate(kData[i].begin(), kData[i].end(), 0.0) / 5.0;
  for (std::size_t i = 0; i < 3; ++i) {
    for (std::size_t j = 0; j < 3; ++j) {
      for (std::size_t k = 0; k < 5; ++k) covariance[i][j] += (kData[i][k] - mean[i]) * (kData[j][k] - mean[j]) / 20.0;
    }
    sd[i] = std::sqrt(covariance[i][i]);
  }
  const double v = mean[0], current = mean[1] * 1e-3, phase = mean[2];
  const std::vector<Correlation> correlations = {{0, 1, covariance[0][1] / (sd[0] * sd[1])},
                                                 {0, 2, covariance[0][2] / (sd[0] * sd[2])},
                                                 {1, 2, covariance[1][2] / (sd[1] * sd[2])}};
  const auto combined = [&](double by_v, double by_current, double by_phase) {
    const Budget b =
        combine({{"V", v, sd[0], by_v}, {"I", current, sd[1] * 1e-3, by_current}, {"phase", phase, sd[2], by_phase}},
                correlations);
    CHECK(close_to(sum_of_shares(b), 1.0, rel(1e-10)));  // large terms cancel here
    return b.standard_uncertainty;
  };
  const double c = std::cos(phase), s = std::sin(phase);
  CHECK(close_to(v / current * c, 127.732, test::abs(5e-4)));
  CHECK(close_to(combined(c / current, -v * c / (current * current), -v * s / current), 0.071, test::abs(5e-4), "R"));
  CHECK(close_to(combined(s / current, -v * s / (current * current), v * c / current), 0.295, test::abs(1e-3),
                 "X, printed from rounded inputs"));
  CHECK(close_to(combined(1.0 / current, -v / (current * current), 0.0), 0.236, test::abs(5e-4), "Z"));
}

TEST_CASE("fully correlated contributions add as they are and opposed ones cancel") {
  const std::vector<UncertainInput> inputs = {{"a", 1.0, 0.3, 1.0}, {"b", 1.0, 0.4, 1.0}};
  CHECK(close_to(combine(inputs, {{0, 1, 1.0}}).standard_uncertainty, 0.7, rel(kRounding)));
  CHECK(close_to(combine(inputs, {{0, 1, 0.0}}).standard_uncertainty, 0.5, rel(kRounding)));
  CHECK(close_to(combine(inputs, {{0, 1, -1.0}}).standard_uncertainty, 0.1, rel(1e-12)));
  CHECK(close_to(combine(inputs, {{1, 0, 0.5}}).standard_uncertainty, std::sqrt(0.09 + 0.16 + 0.12), rel(kRounding)));
  // The sign of a sensitivity turns a correlation around.
  CHECK(close_to(combine({{"a", 1.0, 0.3, 1.0}, {"b", 1.0, 0.4, -1.0}}, {{0, 1, 1.0}}).standard_uncertainty, 0.1,
                 rel(1e-12)));
  // Nearly equal and opposed: next to nothing is left, and never NaN from a square root of −1e-17.
  for (int i = 1; i < 300; ++i) {
    for (const double apart : {0.0, 1e-16, 3e-16, 1e-15}) {
      const double a = 0.1 * i, b = a * (1.0 + apart);
      const double left = combine({{"a", 1.0, a, 1.0}, {"b", 1.0, b, 1.0}}, {{0, 1, -1.0}}).standard_uncertainty;
      CHECK(left >= 0.0);
      CHECK(left < 1e-7 * a);
    }
  }
}

TEST_CASE("correlated shares sum to one and part the common term evenly") {
  const Budget b =
      combine({{"a", 1.0, 2.0, 1.0}, {"b", 1.0, 1.0, 1.0}, {"c", 1.0, 3.0, 1.0}}, {{0, 1, 0.5}, {1, 2, -0.25}});
  const double total = 4.0 + 1.0 + 9.0 + 2 * 0.5 * 2.0 - 2 * 0.25 * 3.0;
  CHECK(close_to(b.standard_uncertainty * b.standard_uncertainty, total, rel(kRounding)));
  CHECK(close_to(sum_of_shares(b), 1.0, rel(kRounding)));
  for (const BudgetRow& row : b.rows) {
    const double own = row.name == "a" ? 4.0 + 1.0 : row.name == "b" ? 1.0 + 1.0 - 0.75 : 9.0 - 0.75;
    CHECK(close_to(row.share, own / total, rel(kRounding), row.name));
  }
}

TEST_CASE("repeatability and scale are combined apart") {
  using Kind = ContributionKind;
  const Budget b = combine({{"a", 1.0, 3.0, 1.0, Kind::repeatability},
                            {"b", 1.0, 4.0, 1.0, Kind::repeatability},
                            {"c", 1.0, 5.0, 1.0, Kind::scale},
                            {"d", 1.0, 12.0, 1.0, Kind::scale}},
                           {{2, 3, 1.0}, {0, 2, 0.1}});
  CHECK(close_to(b.repeatability, 5.0, rel(kRounding)));
  CHECK(close_to(b.scale, 17.0, rel(kRounding)));
  // A correlation across the kinds counts in the whole only.
  CHECK(close_to(b.standard_uncertainty * b.standard_uncertainty, 25.0 + 289.0 + 2 * 0.1 * 15.0, rel(kRounding)));
  CHECK(std::string(contribution_kind_name(Kind::scale)) == "scale");
  CHECK(std::string(contribution_kind_name(Kind::repeatability)) == "repeatability");
}

TEST_CASE("without uncertainty the rows stay and the shares are zero") {
  const Budget b = combine({{"a", 1.0, 0.0, 5.0}, {"b", 1.0, 0.0, -5.0}});
  CHECK(b.standard_uncertainty == 0.0);
  REQUIRE(b.rows.size() == 2);
  for (const BudgetRow& row : b.rows) {
    CHECK(row.contribution == 0.0);
    CHECK(row.share == 0.0);
  }
  CHECK(combine({}).standard_uncertainty == 0.0);
}

TEST_CASE("uncertainties and correlations that cannot be are refused by name") {
  for (const double bad : {-1e-300, -1.0, kNan, kInf}) {
    CHECK(error_of<InputError>([&] { (void)combine({{"length_nm", 1.0, bad, 1.0}}); }).where() == "length_nm");
  }
  const std::vector<UncertainInput> two = {{"a", 1.0, 1.0, 1.0}, {"b", 1.0, 1.0, 1.0}};
  for (const double bad : {1.0000001, -1.0000001, kNan, kInf}) {
    CHECK(error_of<InputError>([&] { (void)combine(two, {{0, 1, bad}}); }).where() == "correlation of a and b");
  }
  for (const Correlation& bad : {Correlation{0, 2, 0.5}, Correlation{2, 0, 0.5}, Correlation{1, 1, 0.5}}) {
    CHECK(error_of<InputError>([&] { (void)combine(two, {bad}); }).where() == "correlation");
  }
}

TEST_CASE("a normal quantity lies within 1.96 standard uncertainties with 95 per cent probability") {
  // JCGM 100:2008, table G.1 [jcgm100]; that erf(k/√2) = 0.95 settles the digits.
  const Interval i = normal_interval(3.0, 0.5);
  const double k = (i.high95 - 3.0) / 0.5;
  CHECK(close_to(std::erf(k / std::sqrt(2.0)), 0.95, rel(1e-14)));
  CHECK(close_to(3.0 - i.low95, i.high95 - 3.0, rel(kRounding)));
  CHECK(normal_interval(3.0, 0.0).low95 == 3.0);
}

}  // TEST_SUITE("uncertainty budget")
