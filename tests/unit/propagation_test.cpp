#include "pellicle/uncertainty/propagation.hpp"

#include <cmath>
#include <functional>
#include <limits>
#include <span>
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
/// What propagation.hpp promises.
constexpr double kDerivative = 1e-8;

using Inputs = std::span<const double>;

ModelInput input(double mean, double sd, double degrees_of_freedom = kInf) {
  return {"x", Distribution::normal(mean, sd), ContributionKind::repeatability, degrees_of_freedom};
}

/// ∂f/∂x of a model of one input.
double slope(const std::function<double(double)>& f, double mean, double sd) {
  return propagate([&](Inputs x) { return f(x[0]); }, {input(mean, sd)}).sensitivities.at(0);
}

}  // namespace

TEST_SUITE("propagation") {

TEST_CASE("sensitivities are the derivatives of the model") {
  CHECK(close_to(slope([](double x) { return std::exp(x); }, 1.3, 0.1), std::exp(1.3), rel(kDerivative)));
  CHECK(close_to(slope([](double x) { return std::log(x); }, 3e-6, 1e-7), 1.0 / 3e-6, rel(kDerivative)));
  CHECK(close_to(slope([](double x) { return std::sqrt(x); }, 1e8, 3e7), 0.5e-4, rel(kDerivative)));
  CHECK(close_to(slope([](double x) { return 1.0 / x; }, -7.0, 1e-9), -1.0 / 49.0, rel(kDerivative)));
  CHECK(close_to(slope([](double x) { return std::tan(x); }, 1.5, 0.01), 1.0 / std::pow(std::cos(1.5), 2),
                 rel(kDerivative)));
  CHECK(close_to(slope([](double x) { return std::sin(x); }, 0.0, 1e-3), 1.0, rel(kDerivative)));
  CHECK(close_to(slope([](double x) { return x * x * x; }, 0.0, 1.0), 0.0, test::abs(1e-12)));
  // A spread as large as the mean: the widest steps leave the domain or come near its edge.
  CHECK(close_to(slope([](double x) { return std::log(x); }, 0.02, 0.02), 50.0, rel(kDerivative)));
  CHECK(close_to(slope([](double x) { return std::log(x); }, 0.02, 5.0), 50.0, rel(kDerivative)));
  // A small part of a large result, as for a gauge block of 5e7 nm.
  CHECK(close_to(slope([](double x) { return 5e7 + 3.0 * x; }, 0.0, 2.0), 3.0, rel(kDerivative)));
  // Smooth only on a scale far below the spread: the modulus of a small number, JCGM 102:2011 [jcgm102].
  CHECK(close_to(slope([](double x) { return std::hypot(x, 1e-4); }, 1e-3, 1e-2), 1e-3 / std::hypot(1e-3, 1e-4),
                 rel(kDerivative)));
}

TEST_CASE("a model that throws or has no value outside its domain is probed inside") {
  const auto picky = [](double x) {
    if (x <= 0.95) throw DomainError("x", "too small");
    return x > 1.06 ? kNan : x * x;
  };
  CHECK(close_to(slope(picky, 1.0, 0.5), 2.0, rel(kDerivative)));
  CHECK(error_of<DomainError>([] { (void)slope([](double x) { return std::sqrt(x); }, 0.0, 1.0); }).where() == "x");
  CHECK_THROWS_AS((void)slope([](double x) { return 1.0 / x; }, 0.0, 1.0), DomainError);
  CHECK_THROWS_AS((void)slope([](double) { return kNan; }, 0.0, 1.0), DomainError);
  // At the means an error of the model is the answer.
  CHECK(error_of<DomainError>([&] { (void)slope(picky, 0.5, 0.1); }).where() == "x");
}

TEST_CASE("the budget is the combination of sensitivities and standard deviations") {
  const Model model = [](Inputs x) { return x[0] * x[1] / x[2]; };
  const std::vector<ModelInput> inputs = {{"a", Distribution::lognormal(2.0, 0.1), ContributionKind::scale},
                                          {"b", Distribution::rectangular(2.9, 3.1)},
                                          {"c", Distribution::constant(4.0)}};
  const std::vector<Correlation> correlations = {{0, 1, -0.4}};
  const Propagation p = propagate(model, inputs, correlations);
  CHECK(p.value == 1.5);
  const double ua = 0.1 * 0.75, ub = 0.1 / std::sqrt(3.0) * 0.5;
  CHECK(close_to(p.standard_uncertainty, std::sqrt(ua * ua + ub * ub - 2.0 * 0.4 * ua * ub), rel(kDerivative)));
  CHECK(p.budget.standard_uncertainty == p.standard_uncertainty);
  REQUIRE(p.budget.rows.size() == 3);
  CHECK(p.budget.rows[0].name == "a");
  CHECK(p.budget.rows[0].kind == ContributionKind::scale);
  CHECK(close_to(p.budget.scale, ua, rel(kDerivative)));
  CHECK(p.sensitivities.at(2) == 0.0);
  CHECK(close_to(p.coverage_factor, 1.959963984540054, rel(1e-14)));
  CHECK(close_to(p.interval.high, 1.5 + p.coverage_factor * p.standard_uncertainty, rel(1e-15)));
  CHECK(close_to(p.interval.low, 1.5 - p.coverage_factor * p.standard_uncertainty, rel(1e-15)));
}

TEST_CASE("the sign of a correlation tells a sum from a difference") {
  const std::vector<ModelInput> two = {input(1.0, 0.3), input(2.0, 0.4)};
  const Model sum = [](Inputs x) { return x[0] + x[1]; };
  const Model difference = [](Inputs x) { return x[0] - x[1]; };
  CHECK(close_to(propagate(sum, two, {{0, 1, 1.0}}).standard_uncertainty, 0.7, rel(1e-9)));
  CHECK(close_to(propagate(difference, two, {{0, 1, 1.0}}).standard_uncertainty, 0.1, rel(1e-8)));
  CHECK(close_to(propagate(difference, two, {{0, 1, -1.0}}).standard_uncertainty, 0.7, rel(1e-9)));
}

TEST_CASE("second order terms give the exact variance of a product and of a square") {
  PropagationOptions second;
  second.second_order = true;
  constexpr double kDifferences = 1e-6;
  // Independent normal x, y: var(x y) = x²v² + y²u² + u²v²; var(x²) = 4 x²u² + 2 u⁴.
  const auto product = propagate([](Inputs x) { return x[0] * x[1]; }, {input(3.0, 0.5), input(-2.0, 0.7)}, {}, second);
  CHECK(close_to(product.standard_uncertainty, std::sqrt(9.0 * 0.49 + 4.0 * 0.25 + 0.25 * 0.49), rel(kDifferences)));
  CHECK(close_to(product.budget.standard_uncertainty, std::sqrt(9.0 * 0.49 + 4.0 * 0.25), rel(kDerivative)));
  const auto square = propagate([](Inputs x) { return x[0] * x[0]; }, {input(0.3, 0.5)}, {}, second);
  CHECK(close_to(square.standard_uncertainty, std::sqrt(4.0 * 0.09 * 0.25 + 2.0 * 0.0625), rel(kDifferences)));
  CHECK(close_to(propagate([](Inputs x) { return x[0] * x[0]; }, {input(0.0, 0.5)}, {}, second).standard_uncertainty,
                 std::sqrt(2.0) * 0.25, rel(kDifferences)));
}

TEST_CASE("second order terms contain the third derivatives") {
  PropagationOptions second;
  second.second_order = true;
  // By hand from the note to 5.1.2 of JCGM 100:2008 [jcgm100].
  // x³: (3x²u)² + ½(6x)²u⁴ + 3x²·6 u⁴.
  const double x = 2.0, u = 0.1;
  const auto cube = propagate([](Inputs v) { return v[0] * v[0] * v[0]; }, {input(x, u)}, {}, second);
  CHECK(close_to(cube.standard_uncertainty, std::sqrt(9.0 * std::pow(x, 4) * u * u + 36.0 * x * x * std::pow(u, 4)),
                 rel(1e-6)));
  // x y²: first order y⁴u² + 4x²y²v²; second: both mixed pairs ½(2y)²u²v², ½(2x)²v⁴, and y²·2 u²v².
  const double y = 3.0, v = 0.4;
  const auto mixed = propagate([](Inputs w) { return w[0] * w[1] * w[1]; }, {input(x, u), input(y, v)}, {}, second);
  const double first = std::pow(y, 4) * u * u + 4.0 * x * x * y * y * v * v;
  const double more = 4.0 * y * y * u * u * v * v + 2.0 * x * x * std::pow(v, 4) + 2.0 * y * y * u * u * v * v;
  CHECK(close_to(mixed.standard_uncertainty, std::sqrt(first + more), rel(1e-6)));
}

TEST_CASE("effective degrees of freedom are those of Welch and Satterthwaite") {
  // Equal parts of equal degrees of freedom add up; a part known for certain raises them with the fourth power.
  const Model sum = [](Inputs x) { return x[0] + 2.0 * x[1]; };
  CHECK(close_to(propagate(sum, {input(0.0, 2.0, 5.0), input(0.0, 1.0, 5.0)}).effective_degrees_of_freedom.value(),
                 10.0, rel(1e-7)));
  const Propagation certain = propagate(sum, {input(0.0, 2.0, 5.0), input(0.0, 1.0)});
  CHECK(close_to(certain.effective_degrees_of_freedom.value(), 20.0, rel(1e-7)));
  // t of 19 or 20 degrees, cut to an integer; both bracket the rounding of 20.
  CHECK(certain.coverage_factor > 2.085);
  CHECK(certain.coverage_factor < 2.094);
  CHECK(std::isinf(propagate(sum, {input(0.0, 2.0), input(0.0, 1.0)}).effective_degrees_of_freedom.value()));
  CHECK(std::isinf(
      propagate(sum, {input(0.0, 2.0), input(0.0, 1.0)}, {{0, 1, 0.5}}).effective_degrees_of_freedom.value()));
  CHECK_FALSE(propagate(sum, {input(0.0, 2.0, 5.0), input(0.0, 1.0)}, {{0, 1, 0.5}}).effective_degrees_of_freedom);
  // 7.9 degrees count as 7: 2.365, not 2.31.
  const Propagation cut = propagate(sum, {input(0.0, 2.0, 3.95), input(0.0, 1.0, 3.95)});
  CHECK(close_to(cut.effective_degrees_of_freedom.value(), 7.9, rel(1e-7)));
  CHECK(close_to(cut.coverage_factor, 2.36, test::abs(0.005)));
}

TEST_CASE("coverage factors are those of the published table") {
  // JCGM 100:2008, table G.2 [jcgm100].
  CHECK(close_to(coverage_factor(0.95, 1.0), 12.71, test::abs(0.005)));
  CHECK(close_to(coverage_factor(0.95, 10.0), 2.23, test::abs(0.005)));
  CHECK(close_to(coverage_factor(0.99, 16.0), 2.92, test::abs(0.005)));
  CHECK(close_to(coverage_factor(0.6827, 2.0), 1.32, test::abs(0.005)));
  CHECK(close_to(coverage_factor(0.9545, 20.0), 2.13, test::abs(0.005)));
  CHECK(close_to(coverage_factor(0.95), 1.960, test::abs(0.0005)));
  CHECK(close_to(coverage_factor(0.99), 2.576, test::abs(0.0005)));
  // Cauchy distribution: tan(π p/2).
  CHECK(close_to(coverage_factor(0.9, 1.0), std::tan(0.45 * std::acos(-1.0)), rel(1e-13)));
}

TEST_CASE("a coverage probability asked for is used") {
  PropagationOptions options;
  options.coverage_probability = 0.99;
  const Propagation p = propagate([](Inputs x) { return x[0]; }, {input(1.0, 2.0, 16.0)}, {}, options);
  CHECK(close_to(p.interval.high - p.interval.low, 2.0 * 2.0 * 2.92, test::abs(0.02)));
}

TEST_CASE("a model of constants has a value and no uncertainty") {
  const Propagation p = propagate([](Inputs x) { return x[0] + 1.0; }, {{"c", Distribution::constant(2.0)}}, {}, {});
  CHECK(p.value == 3.0);
  CHECK(p.standard_uncertainty == 0.0);
  CHECK(p.interval.low == 3.0);
  CHECK(std::isinf(p.effective_degrees_of_freedom.value()));
  CHECK(propagate([](Inputs) { return 7.0; }, {}).value == 7.0);
}

TEST_CASE("arguments that cannot be are refused") {
  const Model model = [](Inputs x) { return x[0] + x[1]; };
  const std::vector<ModelInput> two = {input(1.0, 1.0), input(1.0, 1.0)};
  for (const double bad : {0.0, -1.0, kNan}) {
    CHECK(error_of<InputError>([&] { (void)propagate(model, {input(1.0, 1.0, bad), input(1.0, 1.0)}); }).where() ==
          "x");
    CHECK_THROWS_AS((void)coverage_factor(0.95, bad), InputError);
  }
  for (const double bad : {0.0, 1.0, -0.5, kNan}) {
    PropagationOptions options;
    options.coverage_probability = bad;
    CHECK(error_of<InputError>([&] { (void)propagate(model, two, {}, options); }).where() == "coverage probability");
  }
  PropagationOptions second;
  second.second_order = true;
  CHECK(error_of<InputError>([&] { (void)propagate(model, two, {{0, 1, 0.5}}, second); }).where() == "second order");
  CHECK_THROWS_AS((void)propagate(model, two, {{0, 2, 0.5}}), InputError);
  CHECK_THROWS_AS((void)propagate(model, two, {{0, 1, 1.5}}), InputError);
}

}  // TEST_SUITE("propagation")
