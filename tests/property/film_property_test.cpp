#include <cmath>
#include <string>
#include <vector>

#include "pellicle/estimate/thickness.hpp"
#include "pellicle/sample/emission.hpp"
#include "pellicle/signal/overlayer.hpp"
#include "property/generators.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;
using test::holds;
using test::log_uniform;
using test::rel;
using test::uniform;

namespace {

/// The range for which the library states its accuracy of 1e-13, and what the forward model's own rounding adds.
constexpr double kRoundTrip = 1e-12;
constexpr double kThinnest = 1e-6, kThickest = 50.0, kLeastRatio = 0.2, kMostRatio = 5.0;

struct Film {
  double x, rho, length, reference, emission;
  [[nodiscard]] double thickness() const { return x * length * std::cos(emission * std::acos(-1.0) / 180.0); }
  [[nodiscard]] double ratio() const { return ratio_of_film(thickness(), reference, length, length / rho, emission); }
};

Film any_film() {
  Film f{};
  f.x = *log_uniform(kThinnest, kThickest).as("x");
  f.rho = *rc::gen::oneOf(log_uniform(kLeastRatio, kMostRatio), rc::gen::just(1.0)).as("length ratio");
  f.length = *log_uniform(0.3, 30.0).as("film length");
  f.reference = *log_uniform(0.01, 100.0).as("reference ratio");
  f.emission = *uniform(0.0, 85.0).as("emission angle");
  return f;
}

RatioMeasurement measured(const Film& f, double ratio) {
  RatioMeasurement m;
  m.ratio = ratio;
  m.reference_ratio = f.reference;
  m.film_line_length_nm = f.length;
  if (f.rho != 1.0) m.substrate_line_length_nm = f.length / f.rho;
  m.emission_deg = f.emission;
  return m;
}

}  // namespace

TEST_SUITE("film on substrate") {

TEST_CASE("thickness to ratio to thickness is the identity") {
  holds("t(R(t)) = t", [] {
    const Film f = any_film();
    const auto outcome =
        close_to(thickness_from_ratio(measured(f, f.ratio())).value_nm, f.thickness(), rel(kRoundTrip));
    RC_LOG() << outcome;
    RC_ASSERT(static_cast<bool>(outcome));
  });
}

TEST_CASE("arrays undo the forward model as well") {
  holds("array t(R(t)) = t", [] {
    const auto films = *rc::gen::container<std::vector<int>>(rc::gen::inRange(0, 1000000)).as("films");
    std::vector<double> ratio, reference, length, substrate, emission, expected;
    for (const int seed : films) {
      const double x = std::exp(std::log(kThinnest) + std::log(kThickest / kThinnest) * (seed % 1000) / 1000.0);
      const double rho =
          std::exp(std::log(kLeastRatio) + std::log(kMostRatio / kLeastRatio) * ((seed / 1000) % 1000) / 1000.0);
      const Film f{x, rho, 0.5 + 0.01 * (seed % 300), 0.1 + 0.01 * (seed % 200), static_cast<double>(seed % 80)};
      ratio.push_back(f.ratio());
      reference.push_back(f.reference);
      length.push_back(f.length);
      substrate.push_back(f.length / f.rho);
      emission.push_back(f.emission);
      expected.push_back(f.thickness());
    }
    std::vector<double> t(films.size());
    std::vector<Status> status(films.size());
    // Two or more: a single element would stand for all.
    RC_PRE(films.size() != 1U);
    thickness_nm({ratio, reference, length, substrate, emission}, t, status);
    for (std::size_t i = 0; i < t.size(); ++i) {
      RC_ASSERT(status[i] == Status::ok);
      RC_ASSERT(static_cast<bool>(close_to(t[i], expected[i], rel(kRoundTrip))));
    }
  });
}

TEST_CASE("a thicker film always has the larger ratio") {
  holds("R rises with t", [] {
    const Film f = any_film();
    Film thicker = f;
    thicker.x = f.x * (1.0 + *log_uniform(1e-9, 1.0).as("growth"));
    RC_ASSERT(thicker.ratio() > f.ratio());
    RC_ASSERT(thickness_from_ratio(measured(f, thicker.ratio())).value_nm >
              thickness_from_ratio(measured(f, f.ratio())).value_nm);
  });
}

TEST_CASE("a more grazing emission always has the larger ratio") {
  holds("R rises with the emission angle", [] {
    Film f = any_film();
    f.x = std::min(f.x, 20.0);
    const double t = f.thickness();
    const double steeper = f.emission, flatter = steeper + *log_uniform(1e-3, 4.0).as("more degrees");
    const double ls = f.length / f.rho;
    RC_ASSERT(ratio_of_film(t, f.reference, f.length, ls, flatter) >
              ratio_of_film(t, f.reference, f.length, ls, steeper));
  });
}

TEST_CASE("only ratios of areas matter") {
  holds("areas are free of scale", [] {
    const Film f = any_film();
    AreaMeasurement m;
    m.substrate_area = *log_uniform(1.0, 1e6).as("substrate area");
    m.film_area = f.ratio() * m.substrate_area.value;
    m.reference_film_area = f.reference * 1000.0;
    m.reference_substrate_area = 1000.0;
    m.film_line_length_nm = f.length;
    if (f.rho != 1.0) m.substrate_line_length_nm = f.length / f.rho;
    m.emission_deg = f.emission;
    const double t = thickness_from_areas(m).value_nm;
    AreaMeasurement scaled = m;
    const double factor = *log_uniform(1e-6, 1e6).as("factor of the areas");
    const double of_references = *log_uniform(1e-6, 1e6).as("factor of the reference areas");
    scaled.film_area.value *= factor;
    scaled.substrate_area.value *= factor;
    scaled.reference_film_area->value *= of_references;
    scaled.reference_substrate_area->value *= of_references;
    // Four roundings in the reduced ratio; the thickness follows with a slope of at most one.
    RC_ASSERT(static_cast<bool>(close_to(thickness_from_areas(scaled).value_nm, t, rel(kRoundTrip))));
  });
}

TEST_CASE("a film of no thickness leaves no trace") {
  holds("t = 0 is neutral", [] {
    const Film f = any_film();
    RC_ASSERT(film_signal(0.0, f.length, f.emission) == 0.0);
    RC_ASSERT(substrate_signal(0.0, f.length, f.emission) == 1.0);
    RC_ASSERT(ratio_of_film(0.0, f.reference, f.length, f.length / f.rho, f.emission) == 0.0);
    RC_ASSERT(thickness_from_ratio(measured(f, 0.0)).value_nm == 0.0);
  });
}

TEST_CASE("a film split in two of the same material is the same film") {
  holds("attenuation multiplies", [] {
    const Film f = any_film();
    const double part = *uniform(0.0, 1.0).as("part");
    const double upper = part * f.thickness(), lower = f.thickness() - upper;
    const double whole = substrate_signal(f.thickness(), f.length, f.emission);
    // exp(−50) with an argument rounded to 2e-16 of itself.
    RC_ASSERT(static_cast<bool>(
        close_to(substrate_signal(upper, f.length, f.emission) * substrate_signal(lower, f.length, f.emission), whole,
                 rel(1e-13))));
    const double below = film_signal(lower, f.length, f.emission) * substrate_signal(upper, f.length, f.emission);
    RC_ASSERT(static_cast<bool>(close_to(film_signal(upper, f.length, f.emission) + below,
                                         film_signal(f.thickness(), f.length, f.emission), rel(1e-12))));
  });
}

TEST_CASE("all lengths in other units give the thickness in other units") {
  holds("t is homogeneous in the lengths", [] {
    const Film f = any_film();
    RatioMeasurement m = measured(f, f.ratio());
    m.film_line_length_nm.standard_uncertainty = 0.1 * f.length;
    if (m.substrate_line_length_nm) m.substrate_line_length_nm->standard_uncertainty = 0.1 * f.length / f.rho;
    const Thickness t = thickness_from_ratio(m);
    constexpr double kUnit = 1024.0;  // a power of two, so that nothing is rounded
    m.film_line_length_nm = Quantity(f.length * kUnit, 0.1 * f.length * kUnit);
    if (m.substrate_line_length_nm)
      m.substrate_line_length_nm = Quantity(m.substrate_line_length_nm->value * kUnit,
                                            *m.substrate_line_length_nm->standard_uncertainty * kUnit);
    const Thickness scaled = thickness_from_ratio(m);
    RC_ASSERT(test::same_bits(scaled.value_nm, t.value_nm * kUnit));
    RC_ASSERT(
        static_cast<bool>(close_to(scaled.standard_uncertainty_nm, t.standard_uncertainty_nm * kUnit, rel(1e-13))));
  });
}

TEST_CASE("the budget is complete") {
  holds("shares sum to one and squares to the whole", [] {
    const Film f = any_film();
    RatioMeasurement m = measured(f, f.ratio());
    m.ratio.standard_uncertainty = m.ratio.value * *log_uniform(1e-4, 0.5).as("sd of the ratio");
    m.reference_ratio.standard_uncertainty = f.reference * *log_uniform(1e-4, 0.5).as("sd of the reference");
    m.film_line_length_nm.standard_uncertainty = f.length * *log_uniform(1e-4, 0.5).as("sd of the length");
    m.emission_deg.standard_uncertainty = *log_uniform(1e-3, 3.0).as("sd of the angle");
    if (m.substrate_line_length_nm) {
      m.substrate_line_length_nm->standard_uncertainty =
          m.substrate_line_length_nm->value * *log_uniform(1e-4, 0.5).as("sd of the other length");
      m.length_correlation = *uniform(-1.0, 1.0).as("correlation");
    }
    const Thickness t = thickness_from_ratio(m);
    double shares = 0.0, squares = 0.0;
    for (const BudgetRow& row : t.budget.rows) {
      shares += row.share;
      squares += row.contribution * row.contribution;
    }
    RC_ASSERT(static_cast<bool>(close_to(shares, 1.0, rel(1e-9))));
    if (m.length_correlation == 0.0)
      RC_ASSERT(static_cast<bool>(close_to(std::sqrt(squares), t.standard_uncertainty_nm, rel(1e-12))));
    RC_ASSERT(t.interval_nm.low95 >= 0.0);
    RC_ASSERT(t.interval_nm.low95 <= t.value_nm);
    RC_ASSERT(t.interval_nm.high95 >= t.value_nm);
    const double apart = t.budget.repeatability * t.budget.repeatability + t.budget.scale * t.budget.scale;
    RC_ASSERT(static_cast<bool>(close_to(std::sqrt(apart), t.standard_uncertainty_nm, rel(1e-12))));
  });
}

TEST_CASE("take-off and emission angle are each other's complement") {
  holds("90 − (90 − a) = a", [] {
    const double takeoff = *uniform(1e-6, 90.0).as("take-off angle");
    const double emission = emission_deg_from_takeoff(takeoff);
    RC_ASSERT(emission >= 0.0);
    RC_ASSERT(emission < 90.0);
    RC_ASSERT(static_cast<bool>(close_to(90.0 - emission, takeoff, test::abs(1.5e-14))));  // one rounding at 90
  });
}

}  // TEST_SUITE("film on substrate")
