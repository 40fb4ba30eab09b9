#include "pellicle/signal/overlayer.hpp"

#include <boost/math/quadrature/exp_sinh.hpp>
#include <boost/math/quadrature/gauss_kronrod.hpp>
#include <cmath>
#include <limits>
#include <string>

#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"
#include "support/film_oracle.hpp"

using namespace pellicle;
using test::close_to;
using test::error_of;
using test::rel;

namespace {

constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
constexpr double kInf = std::numeric_limits<double>::infinity();

/// Both quadratures are asked for 1e-14 and the closed form is good to a few roundings.
constexpr double kQuadrature = 1e-12;

using boost::math::quadrature::exp_sinh;
using boost::math::quadrature::gauss_kronrod;

/// Signal of one line from the depths a to b [nm]: electrons born at depth z leave along the emission direction and
/// survive exp(−path/length); `length` in the film above depth t, `below` in the substrate under it.
struct Emission {
  double thickness, length, below, emission_deg;

  double survival(double z) const {
    const double slant = 1.0 / static_cast<double>(std::cos(test::radians(emission_deg)));
    const double in_film = std::min(z, thickness) * slant;
    const double in_substrate = std::max(z - thickness, 0.0) * slant;
    return std::exp(-in_film / length) * std::exp(-in_substrate / below);
  }
  double film() const {
    return gauss_kronrod<double, 61>::integrate([&](double z) { return survival(z); }, 0.0, thickness, 15, 1e-14);
  }
  double substrate() const {
    exp_sinh<double> integrator;
    return integrator.integrate([&](double depth) { return survival(thickness + depth); }, 1e-14);
  }
};

/// An infinitely thick film and a bare substrate.
double thick_film(double length, double emission_deg) { return Emission{0.0, 1.0, length, emission_deg}.substrate(); }

}  // namespace

TEST_SUITE("signal of film and substrate") {

TEST_CASE("the film signal is the integral of what escapes from every depth of the film") {
  // [hill1976]; the outside reference is numerical quadrature over depth.
  for (const double length : {0.5, 2.4, 3.448, 20.0}) {
    for (const double angle : {0.0, 34.0, 45.0, 60.0, 85.0}) {
      for (const double t : {1e-4, 0.03, 0.5, 2.0, 6.0, 15.0}) {
        const double brute = Emission{t, length, 1.0, angle}.film() / thick_film(length, angle);
        CAPTURE(length);
        CAPTURE(angle);
        CAPTURE(t);
        CHECK(close_to(film_signal(t, length, angle), brute, rel(kQuadrature)));
      }
    }
  }
}

TEST_CASE("the substrate signal is the integral over the substrate of what crosses the film") {
  // Whatever the length inside the substrate, 1.3 nm or 4 nm (invented), it cancels against the bare substrate.
  for (const double below : {1.3, 4.0}) {
    for (const double length : {0.5, 2.4, 3.448, 20.0}) {
      for (const double angle : {0.0, 34.0, 45.0, 60.0, 85.0}) {
        for (const double t : {1e-4, 0.03, 0.5, 2.0, 6.0}) {
          const double brute = Emission{t, length, below, angle}.substrate() / thick_film(below, angle);
          if (brute < 1e-290) continue;  // the quadrature sees nothing there
          CAPTURE(below);
          CAPTURE(length);
          CAPTURE(angle);
          CAPTURE(t);
          CHECK(close_to(substrate_signal(t, length, angle), brute, rel(kQuadrature)));
        }
      }
    }
  }
}

TEST_CASE("the ratio of film to substrate is the ratio of the two integrals") {
  // Invented numbers: atoms per volume and cross section enter through the reference ratio alone.
  const double film_atoms = 22.05, substrate_atoms = 49.96, below = 2.9, in_thick_film = 3.1;
  for (const double substrate_line : {1.8, 3.1, 4.4}) {
    for (const double angle : {0.0, 34.0, 60.0}) {
      for (const double t : {1e-3, 0.4, 1.5, 5.0}) {
        const double film = film_atoms * Emission{t, in_thick_film, 1.0, angle}.film();
        const double substrate = substrate_atoms * Emission{t, substrate_line, below, angle}.substrate();
        const double reference =
            film_atoms * thick_film(in_thick_film, angle) / (substrate_atoms * thick_film(below, angle));
        CAPTURE(substrate_line);
        CAPTURE(angle);
        CAPTURE(t);
        CHECK(close_to(ratio_of_film(t, reference, in_thick_film, substrate_line, angle), film / substrate,
                       rel(5 * kQuadrature)));
      }
    }
  }
}

TEST_CASE("film and substrate signals of one line add up to one") {
  for (const double t : {0.0, 1e-9, 0.5, 3.0, 50.0}) {
    CHECK(close_to(film_signal(t, 3.448, 34.0) + substrate_signal(t, 3.448, 34.0), 1.0, rel(1e-15)));
  }
}

TEST_CASE("no film means no film signal and an undimmed substrate") {
  CHECK(film_signal(0.0, 3.0, 45.0) == 0.0);
  CHECK(substrate_signal(0.0, 3.0, 45.0) == 1.0);
  CHECK(ratio_of_film(0.0, 0.7, 3.0, 2.4, 45.0) == 0.0);
}

TEST_CASE("a vanishing film keeps its signal to the last digit") {
  // 1 − exp(−x) → x: a plain difference would lose all digits.
  CHECK(close_to(film_signal(1e-17, 2.0, 0.0), 5e-18, rel(1e-15)));
  CHECK(close_to(ratio_of_film(1e-200, 0.5, 2.0, 3.0, 0.0), 2.5e-201, rel(1e-15)));
}

TEST_CASE("an infinitely thick film hides the substrate") {
  CHECK(film_signal(1e4, 3.0, 0.0) == 1.0);
  CHECK(substrate_signal(1e4, 3.0, 0.0) == 0.0);
}

TEST_CASE("a tilted film looks thicker by the secant of the emission angle") {
  // cos 60° is one half.
  CHECK(close_to(film_signal(1.0, 3.0, 60.0), film_signal(2.0, 3.0, 0.0), rel(1e-14)));
  CHECK(close_to(substrate_signal(1.0, 3.0, 60.0), substrate_signal(2.0, 3.0, 0.0), rel(1e-14)));
}

TEST_CASE("the hyperbolic form of the two-energy ratio is the same equation") {
  // ln(R/R0) − (ρ − 1/2) x − ln 2 = ln sinh(x/2), the relation behind [cumpson2000].
  for (const double rho : {0.3, 0.75, 1.0, 1.25, 2.5}) {
    for (const double x : {0.05, 0.5, 1.0, 3.0, 8.0}) {
      const double ratio = ratio_of_film(x, 1.0, 1.0, 1.0 / rho, 0.0);
      CHECK(
          close_to(std::log(ratio) - (rho - 0.5) * x - std::log(2.0), std::log(std::sinh(x / 2.0)), test::abs(1e-13)));
    }
  }
}

TEST_CASE("arguments outside their ranges are refused by name") {
  const auto where = [](double t, double length, double angle) {
    const std::string film = error_of<InputError>([&] { (void)film_signal(t, length, angle); }).where();
    CHECK(error_of<InputError>([&] { (void)substrate_signal(t, length, angle); }).where() == film);
    CHECK(error_of<InputError>([&] { (void)ratio_of_film(t, 1.0, length, length, angle); }).where() == film);
    return film;
  };
  for (const double bad : {-1e-300, -1.0, kNan, kInf, -kInf}) CHECK(where(bad, 3.0, 0.0) == "thickness_nm");
  for (const double bad : {0.0, -1.0, kNan, kInf}) CHECK(where(1.0, bad, 0.0) == "length_nm");
  for (const double bad : {90.0, -1.0, 180.0, kNan, kInf}) CHECK(where(1.0, 3.0, bad) == "emission_deg");
  for (const double bad : {0.0, -1.0, kNan, kInf}) {
    CHECK(error_of<InputError>([&] { (void)ratio_of_film(1.0, bad, 3.0, 3.0, 0.0); }).where() == "reference_ratio");
    CHECK_THROWS_AS((void)ratio_of_film(1.0, 1.0, 3.0, bad, 0.0), InputError);
  }
}

TEST_CASE("a substrate too deep for any signal has no ratio") {
  CHECK_THROWS_AS((void)ratio_of_film(1e4, 1.0, 3.0, 3.0, 0.0), DomainError);
  CHECK(std::isfinite(ratio_of_film(2000.0, 1.0, 3.0, 3.0, 0.0)));
}

}  // TEST_SUITE("signal of film and substrate")
