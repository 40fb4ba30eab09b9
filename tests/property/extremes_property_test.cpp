// The whole legal range, its ends included: a finite result or a typed error, never NaN and never an infinity.

#include <array>
#include <cmath>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/estimate/thickness.hpp"
#include "pellicle/signal/overlayer.hpp"
#include "pellicle/transport/attenuation_length.hpp"
#include "property/generators.hpp"

using namespace pellicle;
using test::any_emission_deg;
using test::any_not_negative;
using test::any_positive;
using test::holds;

namespace {

/// Quantity of any size, with an uncertainty of up to its size or none.
Quantity any_quantity(double value) {
  Quantity q = value;
  const int kind = *rc::gen::inRange(0, 3);
  if (kind == 1) q.standard_uncertainty = 0.0;
  if (kind == 2) q.standard_uncertainty = value * *test::uniform(0.0, 1.0);
  return q;
}

void assert_finite(const Thickness& t) {
  RC_ASSERT(std::isfinite(t.value_nm));
  RC_ASSERT(t.value_nm >= 0.0);
  RC_ASSERT(std::isfinite(t.standard_uncertainty_nm));
  RC_ASSERT(std::isfinite(t.interval_nm.low95));
  RC_ASSERT(std::isfinite(t.interval_nm.high95));
  RC_ASSERT(std::isfinite(t.reduced_thickness));
  for (const BudgetRow& row : t.budget.rows) {
    RC_ASSERT(std::isfinite(row.contribution));
    RC_ASSERT(std::isfinite(row.share));
  }
}

}  // namespace

TEST_SUITE("extremes") {

TEST_CASE("a thickness from any ratio is finite or a typed error") {
  holds("thickness_from_ratio", [] {
    RatioMeasurement m;
    m.ratio = any_quantity(*any_not_negative().as("ratio"));
    m.reference_ratio = any_quantity(*any_positive().as("reference ratio"));
    m.film_line_length_nm = any_quantity(*any_positive().as("film length"));
    if (*rc::gen::arbitrary<bool>()) m.substrate_line_length_nm = any_quantity(*any_positive().as("substrate length"));
    m.emission_deg = any_quantity(*any_emission_deg().as("emission angle"));
    try {
      assert_finite(thickness_from_ratio(m));
    } catch (const Error& e) {
      RC_ASSERT(!e.fact().empty());
    }
  });
}

TEST_CASE("a thickness from any areas is finite or a typed error") {
  holds("thickness_from_areas", [] {
    AreaMeasurement m;
    m.film_area = any_quantity(*any_not_negative().as("film area"));
    m.substrate_area = any_quantity(*any_not_negative().as("substrate area"));
    if (*rc::gen::arbitrary<bool>()) {
      m.reference_ratio = any_quantity(*any_positive().as("reference ratio"));
    } else {
      m.reference_film_area = any_quantity(*any_positive().as("reference film area"));
      m.reference_substrate_area = any_quantity(*any_positive().as("reference substrate area"));
    }
    m.film_line_length_nm = any_quantity(*any_positive().as("film length"));
    if (*rc::gen::arbitrary<bool>()) m.substrate_line_length_nm = any_quantity(*any_positive().as("substrate length"));
    m.emission_deg = any_quantity(*any_emission_deg().as("emission angle"));
    try {
      assert_finite(thickness_from_areas(m));
    } catch (const Error& e) {
      RC_ASSERT(!e.fact().empty());
    }
  });
}

TEST_CASE("a thickness of an array is finite exactly where its status says so") {
  holds("thickness_nm", [] {
    const double ratio = *any_not_negative().as("ratio"), reference = *any_positive().as("reference ratio");
    const double film = *any_positive().as("film length"), substrate = *any_positive().as("substrate length");
    const double emission = *any_emission_deg().as("emission angle");
    const auto one = [](const double& v) { return std::span(&v, 1); };
    double t = 0.0;
    Status status{};
    thickness_nm({one(ratio), one(reference), one(film), one(substrate), one(emission)}, std::span(&t, 1),
                 std::span(&status, 1));
    RC_ASSERT((status == Status::ok) == (std::isfinite(t) && t >= 0.0));
    RC_ASSERT(status != Status::invalid_input);
  });
}

TEST_CASE("one measurement and an array agree on whether there is an answer") {
  holds("scalar and array", [] {
    const double ratio = *any_not_negative().as("ratio"), reference = *any_positive().as("reference ratio");
    const double film = *any_positive().as("film length"), substrate = *any_positive().as("substrate length");
    const double emission = *any_emission_deg().as("emission angle");
    const auto one = [](const double& v) { return std::span(&v, 1); };
    double t = 0.0;
    Status status{};
    thickness_nm({one(ratio), one(reference), one(film), one(substrate), one(emission)}, std::span(&t, 1),
                 std::span(&status, 1));
    RatioMeasurement m;
    m.ratio = ratio;
    m.reference_ratio = reference;
    m.film_line_length_nm = film;
    m.substrate_line_length_nm = substrate;
    m.emission_deg = emission;
    bool answered = true;
    try {
      (void)thickness_from_ratio(m);
    } catch (const Error&) {
      answered = false;
    }
    RC_ASSERT(answered == (status == Status::ok));
  });
}

TEST_CASE("the forward model is finite or a typed error") {
  holds("signals", [] {
    const double t = *any_not_negative().as("thickness"), length = *any_positive().as("length"),
                 other = *any_positive().as("other length");
    const double emission = *any_emission_deg().as("emission angle"), reference = *any_positive().as("reference ratio");
    const double film = film_signal(t, length, emission), substrate = substrate_signal(t, length, emission);
    RC_ASSERT(film >= 0.0);
    RC_ASSERT(film <= 1.0);
    RC_ASSERT(substrate >= 0.0);
    RC_ASSERT(substrate <= 1.0);
    try {
      const double ratio = ratio_of_film(t, reference, length, other, emission);
      RC_ASSERT(std::isfinite(ratio));
      RC_ASSERT(ratio >= 0.0);
    } catch (const DomainError& e) {
      RC_ASSERT(!e.fact().empty());
    }
  });
}

TEST_CASE("a length of any solid is finite and positive or refused with a reason") {
  holds("lengths", [] {
    const std::string formula =
        *rc::gen::element<std::string>("Al", "SiO2", "CH2", "Au", "UO2", "Cs", "He", "HfO2", "Li");
    const double density = *test::log_uniform(1e-4, 30.0).as("density");
    const double gap = *test::uniform(0.0, 30.0).as("gap");
    std::optional<double> electrons;
    if (*rc::gen::arbitrary<bool>()) electrons = *test::log_uniform(1e-3, 1e3).as("valence electrons");
    const double energy = *rc::gen::oneOf(any_positive(), test::log_uniform(30.0, 3e5)).as("energy");
    const Material m = make_material(formula, density, gap, electrons);
    const auto check = [](const ModelValue& v) {
      RC_ASSERT(v.value_nm.has_value() == v.refusal.empty());
      if (v.value_nm) {
        RC_ASSERT(std::isfinite(*v.value_nm));
        RC_ASSERT(*v.value_nm > 0.0);
      }
    };
    for (const ImfpModel model : imfp_models()) {
      check(predict_imfp(m, energy, model));
      double value = 0.0;
      Status status{};
      imfp_nm(m, std::span(&energy, 1), model, std::span(&value, 1), std::span(&status, 1));
      RC_ASSERT((status == Status::ok) == std::isfinite(value));
      RC_ASSERT((status == Status::ok) == predict_imfp(m, energy, model).value_nm.has_value());
    }
    for (const AttenuationModel model : attenuation_models()) check(predict_attenuation_length(m, energy, model));
    try {
      const AttenuationLength l = attenuation_length(m, energy);
      RC_ASSERT(std::isfinite(l.value_nm));
      RC_ASSERT(std::isfinite(l.standard_uncertainty_nm));
      RC_ASSERT(l.standard_uncertainty_nm >= 0.0999999 * l.value_nm);
    } catch (const DomainError& e) {
      RC_ASSERT(!e.hint().empty());
    }
  });
}

}  // TEST_SUITE("extremes")
