#include "pellicle/uncertainty/distribution.hpp"

#include <algorithm>
#include <boost/math/quadrature/gauss_kronrod.hpp>
#include <cmath>
#include <functional>
#include <limits>
#include <string>
#include <utility>
#include <vector>

#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"
#include "uncertainty/sampler.hpp"

using namespace pellicle;
using test::close_to;
using test::error_of;
using test::rel;

namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kInf = std::numeric_limits<double>::infinity();
const double kPi = std::acos(-1.0);

struct Named {
  std::string name;
  Distribution distribution;
};

/// One of each kind and some far from the middle. Invented numbers.
std::vector<Named> examples() {
  return {{"normal", Distribution::normal(-3.0, 0.7)},
          {"lognormal", Distribution::lognormal(3.448, 0.3448)},
          {"wide lognormal", Distribution::lognormal(2.0, 3.0)},
          {"rectangular", Distribution::rectangular(-1.5, 4.0)},
          {"triangular", Distribution::triangular(2.0, 2.5)},
          {"t of 4", Distribution::student_t(10.0, 2.0, 4.0)},
          {"t of 18", Distribution::student_t(-1.0, 0.1, 18.0)},
          {"gamma", Distribution::gamma(2.0, 0.5)},
          {"wide gamma", Distribution::gamma(1.0, 3.0)},
          {"no counts", Distribution::poisson_count(0.0)},
          {"counts", Distribution::poisson_count(20000.0)},
          {"truncated above", Distribution::truncated_normal(2.0, 1.0)},
          {"truncated in the middle", Distribution::truncated_normal(0.0, 3.0)},
          {"hardly truncated", Distribution::truncated_normal(10.0, 1.0)},
          {"not truncated", Distribution::truncated_normal(1000.0, 1.0)},
          {"truncated below", Distribution::truncated_normal(-7.0, 1.0)},
          {"truncated far below", Distribution::truncated_normal(-30.0, 1.0)}};
}

/// E g(x), as an integral over the standard normal z to the same probability.
double expected(const Distribution& d, const std::function<double(double)>& g) {
  const auto integrand = [&](double z) { return g(d.at_normal(z)) * std::exp(-0.5 * z * z) / std::sqrt(2.0 * kPi); };
  double sum = 0.0;  // in pieces, since some quantiles have a kink in the middle and some rise steeply
  for (int i = -18; i < 18; ++i)
    sum += boost::math::quadrature::gauss_kronrod<double, 31>::integrate(integrand, 0.5 * i, 0.5 * (i + 1), 5, 1e-13);
  return sum;
}

double normal_cdf(double z) { return 0.5 * std::erfc(-z / std::sqrt(2.0)); }

}  // namespace

TEST_SUITE("distributions") {

TEST_CASE("mean and standard deviation are the integrals over the distribution") {
  for (const auto& [name, d] : examples()) {
    INFO(name);
    const double mean = expected(d, [](double x) { return x; });
    CHECK(close_to(mean, d.mean(), test::abs(1e-9 * d.sd())));
    // The tails that are left out of the integral, beyond z = 9, hold 1e-8 of the variance of t with 4 degrees.
    const double variance = expected(d, [&d = d](double x) { return (x - d.mean()) * (x - d.mean()); });
    CHECK(close_to(std::sqrt(variance), d.sd(), rel(1e-7)));
  }
}

TEST_CASE("quantiles agree with distribution functions in closed form") {
  using Cdf = std::function<double(double)>;
  // t with 4 degrees, unit scale: F = 1/2 + (3/8) s (1 − s²/12 · x²/(1 + x²/4)) … with s = x/√(1 + x²/4).
  const auto t4 = [](double x) {
    const double s = x / std::sqrt(1.0 + 0.25 * x * x);
    return 0.5 + 0.375 * s * (1.0 - s * s / 12.0);
  };
  const double k = 9.0, theta = 1.0 / 3.0;  // gamma of mean 3 and sd 1: shape 9, scale 1/3
  const auto gamma9 = [&](double x) {
    double sum = 0.0, term = 1.0;
    for (int i = 0; i < static_cast<int>(k); ++i) {
      sum += term;
      term *= x / theta / (i + 1);
    }
    return 1.0 - std::exp(-x / theta) * sum;
  };
  const std::vector<std::pair<Distribution, Cdf>> known = {
      {Distribution::normal(1.0, 2.0), [](double x) { return normal_cdf((x - 1.0) / 2.0); }},
      {Distribution::rectangular(2.0, 6.0), [](double x) { return (x - 2.0) / 4.0; }},
      {Distribution::triangular(2.0, 6.0),
       [](double x) { return x < 4.0 ? (x - 2.0) * (x - 2.0) / 8.0 : 1.0 - (6.0 - x) * (6.0 - x) / 8.0; }},
      {Distribution::student_t(0.0, std::sqrt(2.0), 4.0), t4},
      {Distribution::gamma(3.0, 1.0), gamma9},
      {Distribution::poisson_count(8.0), [&](double x) { return gamma9(x * theta); }},
      {Distribution::poisson_count(0.0), [](double x) { return -std::expm1(-x); }},
      {Distribution::truncated_normal(1.0, 2.0),
       [](double x) { return (normal_cdf((x - 1.0) / 2.0) - normal_cdf(-0.5)) / normal_cdf(0.5); }},
      {Distribution::lognormal(std::exp(0.5), std::exp(0.5) * std::sqrt(std::exp(1.0) - 1.0)),
       [](double x) { return normal_cdf(std::log(x)); }}};
  for (const auto& [d, below] : known) {
    for (const double p : {1e-6, 0.025, 0.3, 0.5, 0.7, 0.975, 0.999999}) {
      CHECK(close_to(below(d.quantile(p)), p, test::abs(1e-13), distribution_kind_name(d.kind())));
      CHECK(d.quantile(p) < d.quantile(p + 1e-7));
    }
  }
}

TEST_CASE("standard deviations of the simple shapes are those of the guide") {
  // JCGM 101:2008, table 1 and 6.4 [jcgm101]: half width over √3, over √6; counts and one more.
  CHECK(close_to(Distribution::rectangular(-1.0, 1.0).sd(), 1.0 / std::sqrt(3.0), rel(1e-15)));
  CHECK(close_to(Distribution::triangular(-1.0, 1.0).sd(), 1.0 / std::sqrt(6.0), rel(1e-15)));
  CHECK(Distribution::rectangular(1.0, 4.0).mean() == 2.5);
  CHECK(Distribution::poisson_count(99.0).mean() == 100.0);
  CHECK(Distribution::poisson_count(99.0).sd() == 10.0);
  // Half of a normal: mean √(2/π), variance 1 − 2/π.
  const Distribution half = Distribution::truncated_normal(0.0, 1.0);
  CHECK(close_to(half.mean(), std::sqrt(2.0 / kPi), rel(1e-15)));
  CHECK(close_to(half.sd(), std::sqrt(1.0 - 2.0 / kPi), rel(1e-14)));
}

TEST_CASE("no spread makes a constant") {
  for (const Distribution& d :
       {Distribution::normal(2.0, 0.0), Distribution::lognormal(2.0, 0.0), Distribution::rectangular(2.0, 2.0),
        Distribution::triangular(2.0, 2.0), Distribution::student_t(2.0, 0.0, 5.0), Distribution::gamma(2.0, 0.0),
        Distribution::truncated_normal(2.0, 0.0), Distribution::of(2.0), Distribution::of(Quantity(2.0, 0.0))}) {
    CHECK(d.kind() == DistributionKind::constant);
    CHECK(d.mean() == 2.0);
    CHECK(d.sd() == 0.0);
    CHECK(d.quantile(0.01) == 2.0);
  }
  CHECK(Distribution::of(Quantity(2.0, 0.5)).kind() == DistributionKind::normal);
  CHECK(Distribution::of(Quantity(2.0, 0.5)).sd() == 0.5);
}

TEST_CASE("what cannot be is refused with the name of the distribution") {
  using D = Distribution;
  const std::vector<std::pair<std::string, std::function<D()>>> refused = {
      {"constant", [] { return D::constant(kNan); }},
      {"normal", [] { return D::normal(kInf, 1.0); }},
      {"normal", [] { return D::normal(0.0, -1.0); }},
      {"normal", [] { return D::normal(0.0, kNan); }},
      {"lognormal", [] { return D::lognormal(0.0, 1.0); }},
      {"lognormal", [] { return D::lognormal(-1.0, 1.0); }},
      {"rectangular", [] { return D::rectangular(1.0, 0.0); }},
      {"rectangular", [] { return D::rectangular(0.0, kInf); }},
      {"rectangular", [] { return D::rectangular(-1.5e308, 1.5e308); }},
      {"triangular", [] { return D::triangular(kNan, 0.0); }},
      {"student t", [] { return D::student_t(0.0, 1.0, 2.0); }},
      {"student t", [] { return D::student_t(0.0, 1.0, kNan); }},
      {"gamma", [] { return D::gamma(0.0, 1.0); }},
      {"gamma", [] { return D::gamma(1.0, 3.01); }},
      {"poisson count", [] { return D::poisson_count(-1.0); }},
      {"truncated normal", [] { return D::truncated_normal(-31.0, 1.0); }},
      {"truncated normal", [] { return D::truncated_normal(-1.0, 0.0); }}};
  for (const auto& [name, make] : refused)
    CHECK(error_of<InputError>([&make = make] { (void)make(); }).where() == name + " distribution");
  for (const double p : {0.0, 1e-19, 1.0, -0.1, kNan}) {
    CHECK_THROWS_AS((void)D::normal(0.0, 1.0).quantile(p), InputError);
  }
  for (const double z : {9.1, -9.1, kNan}) CHECK_THROWS_AS((void)D::normal(0.0, 1.0).at_normal(z), InputError);
}

TEST_CASE("draws fall below each quantile as often as they should") {
  constexpr std::size_t draws = 400'000;
  std::vector<double> x(draws), correlated(draws);
  for (const auto& [name, d] : examples()) {
    const detail::Sampler sampler(d);
    RandomStream stream(4, 2);
    sampler.draw(stream, x);
    RandomStream(4, 3).fill_normal(correlated);
    sampler.from_normal(correlated);
    for (const double p : {0.001, 0.025, 0.2, 0.5, 0.8, 0.975, 0.999}) {
      const double limit = 4.0 * std::sqrt(p * (1.0 - p) * static_cast<double>(draws));
      for (const auto* numbers : {&x, &correlated}) {
        const double q = d.quantile(p);
        const auto below = std::count_if(numbers->begin(), numbers->end(), [q](double v) { return v < q; });
        CHECK(close_to(static_cast<double>(below), p * static_cast<double>(draws), test::abs(limit), name));
      }
    }
  }
}

TEST_CASE("draws stay inside the support") {
  std::vector<double> x(200'000);
  for (const auto& [name, d] : examples()) {
    INFO(name);
    RandomStream stream(8, 1);
    detail::Sampler(d).draw(stream, x);
    const auto [least, most] = std::minmax_element(x.begin(), x.end());
    if (d.kind() == DistributionKind::rectangular) {
      CHECK(*least >= -1.5);
      CHECK(*most <= 4.0);
    } else if (d.kind() == DistributionKind::triangular) {
      CHECK(*least >= 2.0);
      CHECK(*most <= 2.5);
    } else if (d.kind() != DistributionKind::normal && d.kind() != DistributionKind::student_t) {
      CHECK(*least >= 0.0);
    }
    CHECK(std::isfinite(*least));
    CHECK(std::isfinite(*most));
  }
}

TEST_CASE("the interpolation of draws is as good as stated") {
  for (const auto& [name, d] : examples()) {
    const detail::Sampler sampler(d);
    for (double z = -4.999; z < 5.0; z += 0.00371) {
      double x = z;
      sampler.from_normal({&x, 1});
      const double exact = d.at_normal(z);
      const double scale = std::max(d.sd(), std::abs(exact - d.mean()));
      if (!close_to(x, exact, test::abs(1e-6 * scale))) FAIL(name << " at " << z << ": " << x << " " << exact);
    }
    if (d.kind() == DistributionKind::normal || d.kind() == DistributionKind::lognormal) continue;
    double far = 40.0, low = -40.0;  // beyond the table, taken for 9 and −9
    sampler.from_normal({&far, 1});
    sampler.from_normal({&low, 1});
    CHECK(close_to(far, d.at_normal(9.0), rel(1e-9), name));
    CHECK(close_to(low, d.at_normal(-9.0), d.at_normal(-9.0) < 1e-15 ? test::abs(1e-15) : rel(1e-9), name));
  }
}

}  // TEST_SUITE("distributions")
