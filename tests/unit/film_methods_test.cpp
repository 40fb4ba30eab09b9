#include <algorithm>
#include <boost/math/quadrature/gauss_kronrod.hpp>
#include <cmath>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/estimate/thickness.hpp"
#include "support/close_to.hpp"
#include "support/film_oracle.hpp"

using namespace pellicle;
using test::close_to;
using test::contains;
using test::error_of;
using test::rel;

namespace {

/// One logarithm and a few products.
constexpr double kRounding = 1e-14;

/// A line by itself: its area over its reference area, r = area/reference.
FilmMeasurement single_line(ThicknessMethod method, double area, double reference, double length, double emission) {
  FilmMeasurement m;
  m.method = method;
  const std::string line = method == ThicknessMethod::substrate_line ? "substrate" : "film";
  m.factors = {{line + "_area", area, 1.0, ContributionKind::repeatability, true},
               {"reference_" + line + "_area", reference, -1.0, ContributionKind::scale, true}};
  m.film_line_length_nm = length;
  m.emission_deg = emission;
  return m;
}

FilmMeasurement ratio(double r, double film_length, double substrate_length, double emission) {
  FilmMeasurement m;
  m.factors = {{"ratio", r, 1.0, ContributionKind::repeatability, true}};
  m.film_line_length_nm = film_length;
  m.substrate_line_length_nm = substrate_length;
  m.emission_deg = emission;
  return m;
}

/// Signals of film and substrate averaged over a cone of directions about the axis, each direction weighted by the
/// cosine of its emission angle: numerical quadrature over polar angle and azimuth.
struct ConeSignals {
  double film = 0.0, substrate = 0.0;
};

ConeSignals cone(double t, double film_length, double substrate_length, double emission_deg, double half_angle_deg) {
  using boost::math::quadrature::gauss_kronrod;
  const double axis = static_cast<double>(test::radians(emission_deg));
  const double edge = static_cast<double>(test::radians(half_angle_deg)), pi = std::acos(-1.0);
  const auto average = [&](auto signal) {
    return gauss_kronrod<double, 31>::integrate(
        [&](double polar) {
          return std::sin(polar) * gauss_kronrod<double, 31>::integrate(
                                       [&](double azimuth) {
                                         const double c = std::cos(axis) * std::cos(polar) +
                                                          std::sin(axis) * std::sin(polar) * std::cos(azimuth);
                                         return c > 0.0 ? c * signal(c) : 0.0;
                                       },
                                       0.0, pi, 8, 1e-12);
        },
        0.0, edge, 8, 1e-12);
  };
  const double all = average([](double) { return 1.0; });
  return {average([&](double c) { return 1.0 - std::exp(-t / (film_length * c)); }) / all,
          average([&](double c) { return std::exp(-t / (substrate_length * c)); }) / all};
}

}  // namespace

TEST_SUITE("thickness by single lines") {

TEST_CASE("film and substrate line alone give the same film") {
  // 35 % of a thick film's signal leaves 65 % of the substrate's: t = −L cosθ ln 0.65, L = 2.5 nm, 45 degrees.
  const double expected = static_cast<double>(-2.5L * std::cos(test::radians(45.0L)) * std::log(0.65L));
  CHECK(close_to(expected, 0.761523803, test::abs(5e-10)));
  for (const auto& m : {single_line(ThicknessMethod::film_line, 350.0, 1000.0, 2.5, 45.0),
                        single_line(ThicknessMethod::substrate_line, 650.0, 1000.0, 2.5, 45.0)}) {
    CHECK(close_to(thickness_from_factors(m).value_nm, expected, rel(kRounding), method_name(m.method)));
  }
}

TEST_CASE("carbon of twenty and thirty and fifty per cent is so thick") {
  // −L cosθ ln(1 − x) [smith2005] with L = 3.281 nm of [seah2011], both recalled; normal emission.
  struct Row {
    double fraction, thickness;
  };
  for (const Row& row : {Row{0.20, 0.7321}, Row{0.30, 1.1702}, Row{0.50, 2.2742}}) {
    FilmMeasurement m;
    m.method = ThicknessMethod::atomic_percent;
    m.factors = {{"atomic_fraction", row.fraction, 1.0, ContributionKind::repeatability, true}};
    m.film_line_length_nm = 3.281;
    CHECK(close_to(thickness_from_factors(m).value_nm, row.thickness, test::abs(1e-4)));
  }
}

TEST_CASE("sensitivities of a single line are the slopes of the thickness") {
  // t = −L cosθ ln(1 − A/A0) or −L cosθ ln(A/A0): derivatives by hand, invented numbers.
  const double length = 2.5, angle = 40.0, area = 300.0, reference = 800.0;
  const double unit = static_cast<double>(length * std::cos(test::radians(angle)));
  for (const auto method : {ThicknessMethod::film_line, ThicknessMethod::substrate_line}) {
    FilmMeasurement m = single_line(method, area, reference, length, angle);
    for (SignalFactor& f : m.factors) f.quantity.standard_uncertainty = 1.0;
    m.film_line_length_nm.standard_uncertainty = 1.0;
    m.emission_deg.standard_uncertainty = 1.0;
    const Thickness t = thickness_from_factors(m);
    const double by_area = method == ThicknessMethod::film_line ? unit / (reference - area) : unit / area;
    for (const BudgetRow& row : t.budget.rows) {
      double expected = by_area;
      if (row.name.starts_with("reference")) expected = by_area * area / reference;
      if (row.name == kLengthName) expected = t.value_nm / length;
      if (row.name == kEmissionName) {
        expected = t.value_nm * static_cast<double>(std::tan(test::radians(angle)) * test::radians(1.0));
      }
      CHECK(close_to(row.contribution, expected, rel(1e-12), row.name));
    }
    CHECK(t.budget.rows.size() == 4);
  }
}

TEST_CASE("an error common to both areas of a ratio cancels and an opposed one doubles") {
  // 3 % each: together 0 or 6 % of the ratio, and ∂t/∂ln R = L cosθ r/(1 + r). Invented numbers.
  FilmMeasurement m;
  m.factors = {{"film_area", Quantity(900.0, 27.0), 1.0, ContributionKind::repeatability, true},
               {"substrate_area", Quantity(600.0, 18.0), -1.0, ContributionKind::repeatability, true}};
  m.film_line_length_nm = 2.0;
  const double slope = 2.0 * 1.5 / 2.5;
  m.correlations = {{"film_area", "substrate_area", 1.0}};
  CHECK(thickness_from_factors(m).standard_uncertainty_nm < 1e-8);
  m.correlations[0].coefficient = -1.0;
  CHECK(close_to(thickness_from_factors(m).standard_uncertainty_nm, 0.06 * slope, rel(1e-12)));
  m.correlations[0].coefficient = 0.0;
  CHECK(close_to(thickness_from_factors(m).standard_uncertainty_nm, 0.03 * std::sqrt(2.0) * slope, rel(1e-12)));
  m.correlations[0].second = "no such area";
  CHECK_THROWS_AS((void)thickness_from_factors(m), InputError);
}

TEST_CASE("a factor counts as often as its power says") {
  // 1.2² in the ratio, and twice its relative uncertainty. Invented numbers.
  FilmMeasurement m;
  m.factors = {{"ratio", 1.5, 1.0, ContributionKind::repeatability, true}, {"factor", Quantity(1.2, 0.012), 2.0}};
  m.film_line_length_nm = 2.0;
  const Thickness t = thickness_from_factors(m);
  const double r = 1.5 * 1.2 * 1.2;
  CHECK(close_to(t.value_nm, 2.0 * std::log1p(r), rel(1e-14)));
  CHECK(close_to(t.standard_uncertainty_nm, 2.0 * 0.01 * 2.0 * r / (1.0 + r), rel(1e-12)));
}

TEST_CASE("a line stronger or weaker than its reference allows has no thickness but a bound") {
  const auto refused = [](const FilmMeasurement& m) {
    return error_of<DomainError>([&] { (void)thickness_from_factors(m); }).hint();
  };
  CHECK(contains(refused(single_line(ThicknessMethod::film_line, 1000.0, 1000.0, 2.5, 0.0)), "lower bound"));
  CHECK(contains(refused(single_line(ThicknessMethod::film_line, 1001.0, 1000.0, 2.5, 0.0)), "lower bound"));
  CHECK(contains(refused(single_line(ThicknessMethod::substrate_line, 1001.0, 1000.0, 2.5, 0.0)), "upper bound"));
  CHECK(thickness_from_factors(single_line(ThicknessMethod::substrate_line, 1000.0, 1000.0, 2.5, 0.0)).value_nm == 0.0);
  CHECK(thickness_from_factors(single_line(ThicknessMethod::film_line, 0.0, 1000.0, 2.5, 0.0)).value_nm == 0.0);
}

}  // TEST_SUITE("thickness by single lines")

TEST_SUITE("acceptance cone") {

TEST_CASE("the cone is undone by averaging the signals over its rays") {
  // The error the library states for half angles up to 20 and emission up to 60 degrees.
  constexpr double kRays = 1e-8;
  for (const double angle : {0.0, 34.0, 60.0}) {
    for (const double half_angle : {6.0, 10.0, 20.0}) {
      for (const double t : {0.3, 1.5, 6.0}) {
        CAPTURE(angle);
        CAPTURE(half_angle);
        const ConeSignals one = cone(t, 3.448, 3.448, angle, half_angle);
        FilmMeasurement m = ratio(one.film / one.substrate, 3.448, 3.448, angle);
        m.acceptance_half_angle_deg = half_angle;
        CHECK(close_to(thickness_from_factors(m).value_nm, t, rel(kRays), "one energy"));
        const ConeSignals two = cone(t, 3.0, 2.2, angle, half_angle);
        m = ratio(two.film / two.substrate, 3.0, 2.2, angle);
        m.acceptance_half_angle_deg = half_angle;
        CHECK(close_to(thickness_from_factors(m).value_nm, t, rel(kRays), "two energies"));
      }
    }
  }
}

TEST_CASE("a narrow cone about 34 degrees makes a film look a quarter of a per cent too thick") {
  // 6 degrees, t = 1.5 nm, L = 3.448 nm: +0.24 % when the angle of the axis is used; the limit of [iso14701].
  const ConeSignals s = cone(1.5, 3.448, 3.448, 34.0, 6.0);
  FilmMeasurement m = ratio(s.film / s.substrate, 3.448, 3.448, 34.0);
  CHECK(close_to(100.0 * (thickness_from_factors(m).value_nm / 1.5 - 1.0), 0.24, test::abs(0.005)));
  m.acceptance_half_angle_deg = 6.0;
  CHECK(close_to(100.0 * (1.0 / cone_factor(m) - 1.0), 0.24, test::abs(0.005)));
}

TEST_CASE("no cone changes nothing") {
  const FilmMeasurement m = ratio(1.3, 3.0, 2.2, 45.0);
  CHECK(cone_factor(m) == 1.0);
}

}  // TEST_SUITE("acceptance cone")
