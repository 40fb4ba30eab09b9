#include "pellicle/estimate/thickness.hpp"

#include <algorithm>
#include <cmath>
#include <functional>
#include <limits>
#include <map>
#include <random>
#include <stdexcept>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/signal/overlayer.hpp"
#include "support/close_to.hpp"
#include "support/film_oracle.hpp"

using namespace pellicle;
using test::close_to;
using test::contains;
using test::error_of;
using test::rel;
using test::thickness_by_bisection;

namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kInf = std::numeric_limits<double>::infinity();

/// The error the library states for the range below.
constexpr double kSolver = 1e-13;
constexpr double kThinnest = 1e-6, kThickest = 50.0, kLeastRatio = 0.2, kMostRatio = 5.0;
/// Central differences in long double with steps of 1e-5: truncation of about 1e-10, rounding far below.
constexpr double kDifference = 1e-8;
constexpr long double kStep = 1e-5L;

/// Silica on silicon; length and reference ratio recalled [seah2004].
RatioMeasurement silica() {
  RatioMeasurement m;
  m.ratio = 2.0;
  m.reference_ratio = 0.9329;
  m.film_line_length_nm = 3.448;
  m.emission_deg = 34.0;
  return m;
}

/// Lines of different energy, invented numbers.
RatioMeasurement two_energies() {
  RatioMeasurement m;
  m.ratio = 1.3;
  m.reference_ratio = 0.8;
  m.film_line_length_nm = 3.0;
  m.substrate_line_length_nm = 2.2;
  m.emission_deg = 45.0;
  return m;
}

AreaMeasurement areas() {
  AreaMeasurement m;
  m.film_area = 20000.0;
  m.substrate_area = 10000.0;
  m.reference_ratio = 0.9329;
  m.film_line_length_nm = 3.448;
  m.emission_deg = 34.0;
  return m;
}

const BudgetRow& row_of(const Thickness& t, const std::string& name) {
  for (const BudgetRow& row : t.budget.rows) {
    if (row.name == name) return row;
  }
  FAIL("the budget has no row " << name);
  throw std::logic_error("FAIL throws, so this line is never reached");
}

Quantity with_sd(Quantity q, double sd) {
  q.standard_uncertainty = sd;
  return q;
}

/// |∂t/∂v| as the budget shows it: the contribution of an uncertainty of one unit.
double sensitivity(RatioMeasurement m, const std::string& name) {
  if (name == "ratio") m.ratio = with_sd(m.ratio, 1.0);
  if (name == "reference_ratio") m.reference_ratio = with_sd(m.reference_ratio, 1.0);
  if (name == "length_nm" || name == "film_line_length_nm") m.film_line_length_nm = with_sd(m.film_line_length_nm, 1.0);
  if (name == "substrate_line_length_nm") m.substrate_line_length_nm = with_sd(*m.substrate_line_length_nm, 1.0);
  if (name == "emission_deg") m.emission_deg = with_sd(m.emission_deg, 1.0);
  return row_of(thickness_from_ratio(m), name).contribution;
}

/// ∂t/∂v by central differences of the bisection solver, v scaled by 1 ± kStep (an angle shifted by ± kStep degrees).
double difference(const RatioMeasurement& m, const std::string& name) {
  const auto t = [&](long double sign) {
    long double ratio = m.ratio.value, reference = m.reference_ratio.value, film = m.film_line_length_nm.value,
                angle = m.emission_deg.value;
    long double substrate = m.substrate_line_length_nm ? m.substrate_line_length_nm->value : film;
    const long double scale = 1.0L + sign * kStep;
    if (name == "ratio") ratio *= scale;
    if (name == "reference_ratio") reference *= scale;
    if (name == "film_line_length_nm") film *= scale;
    if (name == "substrate_line_length_nm") substrate *= scale;
    if (name == "length_nm") film *= scale, substrate *= scale;
    if (name == "emission_deg") angle += sign * kStep;
    return thickness_by_bisection(ratio, reference, film, substrate, angle);
  };
  const std::map<std::string, long double> values = {
      {"ratio", m.ratio.value},
      {"reference_ratio", m.reference_ratio.value},
      {"length_nm", m.film_line_length_nm.value},
      {"film_line_length_nm", m.film_line_length_nm.value},
      {"substrate_line_length_nm", m.substrate_line_length_nm ? m.substrate_line_length_nm->value : 0.0},
      {"emission_deg", 1.0L}};
  return static_cast<double>((t(1.0L) - t(-1.0L)) / (2.0L * kStep * values.at(name)));
}

}  // namespace

TEST_SUITE("thickness from a ratio") {

TEST_CASE("silica of the worked example is 3.27429 nm thick") {
  // t = L cosθ ln(1 + R/R0) with the length and reference ratio recalled of [seah2004].
  const Thickness t = thickness_from_ratio(silica());
  CHECK(close_to(t.value_nm, 3.27429, test::abs(5e-6)));
  CHECK(close_to(t.reduced_thickness, std::log(1.0 + 2.0 / 0.9329), rel(1e-14)));
}

TEST_CASE("every ratio gives the thickness that bisection finds") {
  for (const double rho : {0.2, 0.5, 0.75, 0.999999, 1.0, 1.000001, 1.25, 2.0, 5.0}) {
    for (const double ratio : {1e-12, 1e-6, 1e-3, 0.1, 0.5, 0.99, 1.0, 1.01, 2.0, 10.0, 1e3, 1e6, 1e12, 1e100}) {
      for (const double angle : {0.0, 34.0, 75.0}) {
        RatioMeasurement m;
        m.ratio = ratio;
        m.reference_ratio = 0.7;
        m.film_line_length_nm = 3.0;
        m.substrate_line_length_nm = 3.0 / rho;
        m.emission_deg = angle;
        CAPTURE(rho);
        CAPTURE(ratio);
        const double expected =
            static_cast<double>(thickness_by_bisection(ratio, 0.7, 3.0, m.substrate_line_length_nm->value, angle));
        CHECK(close_to(thickness_from_ratio(m).value_nm, expected, rel(kSolver)));
      }
    }
  }
}

TEST_CASE("the stated accuracy holds over the whole range it is stated for") {
  std::mt19937_64 engine(20240605);  // any seed would do; a fixed one repeats
  const auto draw = [&](double low, double high) {
    return std::exp(std::uniform_real_distribution<double>(std::log(low), std::log(high))(engine));
  };
  double worst = 0.0;
  for (int i = 0; i < 5000; ++i) {
    const double x = draw(kThinnest, kThickest), rho = draw(kLeastRatio, kMostRatio);
    RatioMeasurement m;
    m.ratio = -std::expm1(-x) * std::exp(rho * x);
    m.reference_ratio = 1.0;
    m.film_line_length_nm = 3.0;
    m.substrate_line_length_nm = 3.0 / rho;
    const long double expected =
        thickness_by_bisection(m.ratio.value, 1.0L, 3.0L, m.substrate_line_length_nm->value, 0.0L);
    const long double off = thickness_from_ratio(m).value_nm / expected - 1.0L;
    worst = std::max(worst, static_cast<double>(std::abs(off)));
  }
  CHECK_MESSAGE(worst < kSolver, worst);
}

TEST_CASE("the forward model of the thickness gives the ratio back") {
  for (const double ratio : {1e-5, 0.3, 1.0, 7.0, 300.0}) {
    RatioMeasurement m = two_energies();
    m.ratio = ratio;
    const double t = thickness_from_ratio(m).value_nm;
    CHECK(close_to(ratio_of_film(t, 0.8, 3.0, 2.2, 45.0), ratio, rel(1e-11)));
  }
}

TEST_CASE("sensitivities of one line are the slopes of the thickness") {
  for (const double ratio : {1e-4, 0.2, 2.0, 40.0}) {
    RatioMeasurement m = silica();
    m.ratio = ratio;
    for (const std::string name : {"ratio", "reference_ratio", "length_nm", "emission_deg"}) {
      CAPTURE(ratio);
      CHECK(close_to(sensitivity(m, name), std::abs(difference(m, name)), rel(kDifference), name));
    }
  }
}

TEST_CASE("sensitivities of two lines are the slopes of the thickness") {
  for (const double substrate_length : {1.1, 2.2, 3.0, 7.5}) {
    for (const double ratio : {1e-3, 0.2, 1.3, 40.0}) {
      RatioMeasurement m = two_energies();
      m.ratio = ratio;
      m.substrate_line_length_nm = substrate_length;
      for (const std::string name :
           {"ratio", "reference_ratio", "film_line_length_nm", "substrate_line_length_nm", "emission_deg"}) {
        CAPTURE(ratio);
        CAPTURE(substrate_length);
        // A slope that passes through zero is compared on the scale of t/v.
        const double floor = thickness_from_ratio(m).value_nm / 3.0;
        CHECK(close_to(sensitivity(m, name), std::abs(difference(m, name)),
                       test::abs(kDifference * std::max(floor, std::abs(difference(m, name)))), name));
      }
    }
  }
}

TEST_CASE("two lengths wrong by one common factor are as wrong as one") {
  // With correlation 1 the two slopes add with their signs: ∂ln t/∂ln Lf + ∂ln t/∂ln Ls = 1.
  RatioMeasurement m = two_energies();
  m.film_line_length_nm = Quantity(3.0, 0.3);
  m.substrate_line_length_nm = Quantity(2.2, 0.22);
  m.length_correlation = 1.0;
  const Thickness t = thickness_from_ratio(m);
  CHECK(close_to(t.standard_uncertainty_nm / t.value_nm, 0.1, rel(1e-12)));
  // Signs and squares, by differences: u² = a² + b² + 2 r a b.
  const double a = 0.3 * difference(m, "film_line_length_nm"), b = 0.22 * difference(m, "substrate_line_length_nm");
  for (const double r : {-1.0, -0.4, 0.0, 0.9}) {
    m.length_correlation = r;
    CHECK(
        close_to(thickness_from_ratio(m).standard_uncertainty_nm, std::sqrt(a * a + b * b + 2 * r * a * b), rel(1e-7)));
  }
}

TEST_CASE("the combined uncertainty is the sum of squares of all contributions") {
  RatioMeasurement m = silica();
  m.ratio = Quantity(2.0, 0.05);
  m.reference_ratio = Quantity(0.9329, 0.03);
  m.film_line_length_nm = Quantity(3.448, 0.2);
  m.emission_deg = Quantity(34.0, 1.0);
  const Thickness t = thickness_from_ratio(m);
  double squares = 0.0, shares = 0.0, scale = 0.0;
  for (const auto& [name, sd] : std::map<std::string, double>{
           {"ratio", 0.05}, {"reference_ratio", 0.03}, {"length_nm", 0.2}, {"emission_deg", 1.0}}) {
    const double part = sd * difference(m, name);
    squares += part * part;
    if (name != "ratio") scale += part * part;
    shares += row_of(t, name).share;
    CHECK(close_to(row_of(t, name).contribution, std::abs(part), rel(kDifference), name));
  }
  CHECK(t.budget.rows.size() == 4);
  CHECK(close_to(t.standard_uncertainty_nm, std::sqrt(squares), rel(kDifference)));
  CHECK(close_to(shares, 1.0, rel(1e-13)));
  CHECK(close_to(t.budget.scale, std::sqrt(scale), rel(kDifference)));
  CHECK(close_to(t.budget.repeatability, row_of(t, "ratio").contribution, rel(1e-13)));
  CHECK(row_of(t, "ratio").kind == ContributionKind::repeatability);
  CHECK(row_of(t, "reference_ratio").kind == ContributionKind::scale);
  CHECK(row_of(t, "length_nm").kind == ContributionKind::scale);
  CHECK(row_of(t, "emission_deg").kind == ContributionKind::scale);
  CHECK(t.interval_nm.low95 < t.value_nm);
  CHECK(close_to((t.interval_nm.high95 - t.value_nm) / t.standard_uncertainty_nm, 1.959963984540054, rel(1e-12)));
  CHECK(t.findings.empty());
  CHECK(t.scale_stated);
}

TEST_CASE("a thin film is measured by its ratio alone") {
  // R ≪ R0: t → L cosθ R/R0; the correction is −R/(2 R0).
  RatioMeasurement m = silica();
  for (const double ratio : {1e-300, 1e-100, 1e-12, 1e-8}) {
    m.ratio = ratio;
    const double limit = static_cast<double>(3.448L * std::cos(test::radians(34.0L)) * ratio / 0.9329L);
    CHECK(close_to(thickness_from_ratio(m).value_nm, limit, rel(std::max(1e-14, ratio))));
  }
  m.substrate_line_length_nm = 2.0;
  m.ratio = 1e-100;
  CHECK(close_to(thickness_from_ratio(m).value_nm,
                 static_cast<double>(3.448L * std::cos(test::radians(34.0L)) * 1e-100L / 0.9329L), rel(1e-13)));
}

TEST_CASE("a vanishing ratio is a vanishing film with a finite uncertainty") {
  RatioMeasurement m = silica();
  m.ratio = Quantity(0.0, 0.01);
  for (const bool two_lines : {false, true}) {
    if (two_lines) m.substrate_line_length_nm = 2.0;
    const Thickness t = thickness_from_ratio(m);
    CHECK(t.value_nm == 0.0);
    CHECK(t.reduced_thickness == 0.0);
    // Slope at zero: L cosθ / R0.
    CHECK(close_to(t.standard_uncertainty_nm,
                   static_cast<double>(0.01L * 3.448L * std::cos(test::radians(34.0L)) / 0.9329L), rel(1e-13)));
    CHECK(t.interval_nm.low95 == 0.0);
    CHECK(t.interval_nm.high95 > 0.0);
    CHECK(has_finding(t.findings, "interval_reaches_zero"));
  }
}

TEST_CASE("a thick film grows with the logarithm of the ratio") {
  // R ≫ R0: t → L cosθ ln(R/R0), or L_s cosθ ln(R/R0) for two lines.
  RatioMeasurement m = silica();
  m.ratio = 1e200;
  const long double cosine = std::cos(test::radians(34.0L));
  CHECK(close_to(thickness_from_ratio(m).value_nm, static_cast<double>(3.448L * cosine * std::log(1e200L / 0.9329L)),
                 rel(1e-13)));
  m.substrate_line_length_nm = 2.0;
  CHECK(close_to(thickness_from_ratio(m).value_nm, static_cast<double>(2.0L * cosine * std::log(1e200L / 0.9329L)),
                 rel(1e-13)));
}

TEST_CASE("equal lengths stated twice give the thickness of one") {
  RatioMeasurement one = silica(), two = silica();
  one.film_line_length_nm = Quantity(3.448, 0.3);
  two.film_line_length_nm = Quantity(3.448, 0.3);
  two.substrate_line_length_nm = Quantity(3.448, 0.3);
  two.length_correlation = 1.0;
  CHECK(test::same_bits(thickness_from_ratio(one).value_nm, thickness_from_ratio(two).value_nm));
  CHECK(close_to(thickness_from_ratio(two).standard_uncertainty_nm, thickness_from_ratio(one).standard_uncertainty_nm,
                 rel(1e-12)));
}

TEST_CASE("nearly equal lengths give nearly the same thickness") {
  RatioMeasurement m = silica();
  const double equal = thickness_from_ratio(m).value_nm;
  for (const double apart : {1e-15, 1e-12, 1e-9}) {
    m.substrate_line_length_nm = 3.448 * (1.0 + apart);
    CHECK(close_to(thickness_from_ratio(m).value_nm, equal, rel(2 * apart + 2e-13)));
  }
}

TEST_CASE("the thickness does not depend on what is common to ratio and reference") {
  RatioMeasurement m = two_energies();
  const double t = thickness_from_ratio(m).value_nm;
  m.ratio = 1.3 * 1024;
  m.reference_ratio = 0.8 * 1024;
  CHECK(test::same_bits(thickness_from_ratio(m).value_nm, t));
}

TEST_CASE("numbers that no measurement gives are refused by name") {
  const auto where = [](const std::function<void(RatioMeasurement&)>& spoil) {
    RatioMeasurement m = two_energies();
    spoil(m);
    return error_of<InputError>([&] { (void)thickness_from_ratio(m); }).where();
  };
  for (const double bad : {-1e-300, -1.0, kNan, -kInf}) {
    CHECK(where([&](auto& m) { m.ratio = bad; }) == "ratio");
  }
  for (const double bad : {0.0, -1.0, kNan, kInf, -kInf}) {
    CHECK(where([&](auto& m) { m.reference_ratio = bad; }) == "reference_ratio");
    CHECK(where([&](auto& m) { m.film_line_length_nm = bad; }) == "film_line_length_nm");
    CHECK(where([&](auto& m) { m.substrate_line_length_nm = bad; }) == "substrate_line_length_nm");
  }
  for (const double bad : {-1.0, 90.0, 180.0, kNan, kInf}) {
    CHECK(where([&](auto& m) { m.emission_deg = bad; }) == "emission_deg");
  }
  for (const double bad : {-1e-300, -1.0, kNan, kInf}) {
    CHECK(where([&](auto& m) { m.ratio = Quantity(1.0, bad); }) == "ratio_sd");
    CHECK(where([&](auto& m) { m.reference_ratio = Quantity(1.0, bad); }) == "reference_ratio_sd");
    CHECK(where([&](auto& m) { m.film_line_length_nm = Quantity(1.0, bad); }) == "film_line_length_nm_sd");
    CHECK(where([&](auto& m) { m.emission_deg = Quantity(1.0, bad); }) == "emission_deg_sd");
  }
  for (const double bad : {1.1, -1.1, kNan}) {
    CHECK(contains(where([&](auto& m) { m.length_correlation = bad; }), "correlation"));
  }
}

TEST_CASE("an infinite ratio bounds the thickness but does not give it") {
  RatioMeasurement m = silica();
  m.ratio = kInf;
  CHECK(contains(error_of<DomainError>([&] { (void)thickness_from_ratio(m); }).hint(), "lower bound"));
}

TEST_CASE("each input without uncertainty is named") {
  const Thickness t = thickness_from_ratio(two_energies());
  for (const std::string name :
       {"ratio", "reference_ratio", "film_line_length_nm", "substrate_line_length_nm", "emission_deg"}) {
    const bool named = std::any_of(t.findings.begin(), t.findings.end(), [&](const Finding& f) {
      return f.code == "uncertainty_not_given" && contains(f.text, " for " + name + ";");
    });
    CHECK_MESSAGE(named, name);
  }
  CHECK(t.standard_uncertainty_nm == 0.0);
}

TEST_CASE("a length without uncertainty leaves the thickness scale unstated") {
  RatioMeasurement m = two_energies();
  m.film_line_length_nm = Quantity(3.0, 0.3);
  CHECK_FALSE(thickness_from_ratio(m).scale_stated);
  CHECK(has_finding(thickness_from_ratio(m).findings, "scale_not_stated"));
  m.substrate_line_length_nm = Quantity(2.2, 0.2);
  CHECK(thickness_from_ratio(m).scale_stated);
  CHECK_FALSE(has_finding(thickness_from_ratio(m).findings, "scale_not_stated"));
  // An uncertainty of zero is a statement.
  m.substrate_line_length_nm = Quantity(2.2, 0.0);
  CHECK(thickness_from_ratio(m).scale_stated);
}

TEST_CASE("films beyond three lengths and grazing angles are warned of") {
  RatioMeasurement m = silica();
  m.reference_ratio = 1.0;
  m.ratio = std::expm1(2.999);
  CHECK_FALSE(has_finding(thickness_from_ratio(m).findings, "film_thick"));
  m.ratio = std::expm1(3.001);
  CHECK(has_finding(thickness_from_ratio(m).findings, "film_thick"));
  m.emission_deg = 70.0;
  CHECK(has_finding(thickness_from_ratio(m).findings, "emission_angle"));
}

}  // TEST_SUITE("thickness from a ratio")

TEST_SUITE("thickness from areas") {

TEST_CASE("areas give the thickness of their ratio") {
  CHECK(test::same_bits(thickness_from_areas(areas()).value_nm, thickness_from_ratio(silica()).value_nm));
  AreaMeasurement m = areas();
  m.reference_ratio.reset();
  m.reference_film_area = 9329.0;
  m.reference_substrate_area = 10000.0;
  CHECK(close_to(thickness_from_areas(m).value_nm, thickness_from_ratio(silica()).value_nm, rel(1e-14)));
}

TEST_CASE("sensitivities to areas are the slopes of the thickness") {
  const auto slope = [](AreaMeasurement m, const std::string& name) {
    if (name == "film_area") m.film_area = with_sd(m.film_area, 1.0);
    if (name == "substrate_area") m.substrate_area = with_sd(m.substrate_area, 1.0);
    if (name == "reference_film_area") m.reference_film_area = with_sd(*m.reference_film_area, 1.0);
    if (name == "reference_substrate_area") m.reference_substrate_area = with_sd(*m.reference_substrate_area, 1.0);
    return row_of(thickness_from_areas(m), name).contribution;
  };
  for (const bool two_lines : {false, true}) {
    AreaMeasurement m = areas();  // invented numbers
    m.film_area = 1700.0;
    m.substrate_area = 950.0;
    m.reference_ratio.reset();
    m.reference_film_area = 5200.0;
    m.reference_substrate_area = 6100.0;
    if (two_lines) m.substrate_line_length_nm = 2.5;
    const double ls = two_lines ? 2.5 : 3.448;
    const auto t = [&](long double f, long double s, long double rf, long double rs) {
      return thickness_by_bisection(f / s, rf / rs, 3.448L, ls, 34.0L);
    };
    const long double up = 1.0L + kStep, down = 1.0L - kStep;
    const auto d = [&](long double above, long double below, long double value) {
      return std::abs(static_cast<double>((above - below) / (2.0L * kStep * value)));
    };
    CAPTURE(two_lines);
    CHECK(close_to(slope(m, "film_area"), d(t(1700 * up, 950, 5200, 6100), t(1700 * down, 950, 5200, 6100), 1700),
                   rel(kDifference)));
    CHECK(close_to(slope(m, "substrate_area"), d(t(1700, 950 * up, 5200, 6100), t(1700, 950 * down, 5200, 6100), 950),
                   rel(kDifference)));
    CHECK(close_to(slope(m, "reference_film_area"),
                   d(t(1700, 950, 5200 * up, 6100), t(1700, 950, 5200 * down, 6100), 5200), rel(kDifference)));
    CHECK(close_to(slope(m, "reference_substrate_area"),
                   d(t(1700, 950, 5200, 6100 * up), t(1700, 950, 5200, 6100 * down), 6100), rel(kDifference)));
  }
}

TEST_CASE("areas of a spot vary from spot to spot and references do not") {
  AreaMeasurement m = areas();
  m.reference_ratio.reset();
  m.reference_film_area = Quantity(9329.0, 93.0);
  m.reference_substrate_area = Quantity(10000.0, 100.0);
  m.film_area = Quantity(20000.0, 141.0);
  m.substrate_area = Quantity(10000.0, 100.0);
  m.film_line_length_nm = Quantity(3.448, 0.3);
  m.emission_deg = Quantity(34.0, 1.0);
  const Thickness t = thickness_from_areas(m);
  for (const std::string name : {"film_area", "substrate_area"})
    CHECK(row_of(t, name).kind == ContributionKind::repeatability);
  for (const std::string name : {"reference_film_area", "reference_substrate_area", "length_nm", "emission_deg"}) {
    CHECK(row_of(t, name).kind == ContributionKind::scale);
  }
  CHECK(t.findings.empty());
  CHECK(close_to(t.budget.repeatability * t.budget.repeatability + t.budget.scale * t.budget.scale,
                 t.standard_uncertainty_nm * t.standard_uncertainty_nm, rel(1e-12)));
}

TEST_CASE("one kind of reference is needed and only one") {
  AreaMeasurement m = areas();
  m.reference_film_area = 1.0;
  m.reference_substrate_area = 1.0;
  CHECK(contains(error_of<InputError>([&] { (void)thickness_from_areas(m); }).fact(), "both"));
  m.reference_ratio.reset();
  CHECK_NOTHROW((void)thickness_from_areas(m));
  m.reference_substrate_area.reset();
  CHECK(contains(error_of<InputError>([&] { (void)thickness_from_areas(m); }).fact(), "missing"));
  m.reference_film_area.reset();
  CHECK(contains(error_of<InputError>([&] { (void)thickness_from_areas(m); }).fact(), "no reference"));
}

TEST_CASE("no substrate signal bounds the thickness and no film signal makes it zero") {
  AreaMeasurement m = areas();
  m.substrate_area = 0.0;
  CHECK(contains(error_of<DomainError>([&] { (void)thickness_from_areas(m); }).hint(), "lower bound"));
  m = areas();
  m.film_area = Quantity(0.0, 50.0);
  const Thickness t = thickness_from_areas(m);
  CHECK(t.value_nm == 0.0);
  CHECK(close_to(t.standard_uncertainty_nm,
                 static_cast<double>(50.0L / 10000.0L / 0.9329L * 3.448L * std::cos(test::radians(34.0L))),
                 rel(1e-13)));
}

TEST_CASE("areas that no spectrum gives are refused by name") {
  const auto where = [](const std::function<void(AreaMeasurement&)>& spoil) {
    AreaMeasurement m = areas();
    spoil(m);
    return error_of<InputError>([&] { (void)thickness_from_areas(m); }).where();
  };
  for (const double bad : {-1.0, kNan, kInf, -kInf}) {
    CHECK(where([&](auto& m) { m.film_area = bad; }) == "film_area");
    CHECK(where([&](auto& m) { m.substrate_area = bad; }) == "substrate_area");
  }
  for (const double bad : {0.0, -1.0, kNan, kInf}) {
    CHECK(where([&](auto& m) { m.reference_ratio = bad; }) == "reference_ratio");
    CHECK(where([&](auto& m) {
            m.reference_ratio.reset(), m.reference_film_area = bad, m.reference_substrate_area = 1.0;
          }) == "reference_film_area");
    CHECK(where([&](auto& m) {
            m.reference_ratio.reset(), m.reference_film_area = 1.0, m.reference_substrate_area = bad;
          }) == "reference_substrate_area");
    CHECK(where([&](auto& m) { m.film_line_length_nm = bad; }) == "film_line_length_nm");
  }
  for (const double bad : {-1.0, kNan, kInf}) {
    CHECK(where([&](auto& m) { m.film_area = Quantity(1.0, bad); }) == "film_area_sd");
    CHECK(where([&](auto& m) { m.substrate_area = Quantity(1.0, bad); }) == "substrate_area_sd");
  }
  // A ratio beyond the numbers of a computer.
  CHECK(where([](auto& m) { m.film_area = 1e300, m.substrate_area = 1e-300; }) == "areas");
}

}  // TEST_SUITE("thickness from areas")
