// Laws of a run, for random films: what must hold whatever the route from areas to thickness.

#include <cmath>
#include <numbers>
#include <string>
#include <vector>

#include "pellicle/job/thickness_job.hpp"
#include "pellicle/signal/overlayer.hpp"
#include "property/generators.hpp"
#include "support/close_to.hpp"
#include "support/sample_run.hpp"

using namespace pellicle;
using test::close_to;
using test::holds;
using test::log_uniform;
using test::rel;
using test::uniform;

namespace {

/// Roundings of one run: areas, their product, the root, and an exponential of the layers above.
constexpr double kRounding = 1e-11;

/// Hafnia on silicon with layers above, all lengths given. The areas are those of the forward model.
struct Sample {
  double x, film_length, substrate_length, reference, emission, scale;
  std::vector<double> above_nm;  ///< thickness of each layer above, outermost first
  double above_film_length = 2.9, above_substrate_length = 3.3;

  [[nodiscard]] double thickness() const { return x * film_length * std::cos(emission * std::numbers::pi / 180.0); }
  [[nodiscard]] double loss(double length) const {
    double kept = 1.0;
    for (const double d : above_nm) kept *= substrate_signal(d, length, emission);
    return kept;
  }
  [[nodiscard]] double film_area() const { return scale * reference * film_signal(thickness(), film_length, emission) * loss(above_film_length); }
  [[nodiscard]] double substrate_area() const {
    return scale * substrate_signal(thickness(), substrate_length, emission) * loss(above_substrate_length);
  }

  [[nodiscard]] Run run(ThicknessMethod method = ThicknessMethod::ratio) const {
    Run run;
    run.place = "run.toml";
    run.tables = {"areas.csv"};
    run.source = photon_source("Al Ka");
    run.emission_deg = emission;
    run.emission_sd_deg = 1.0;
    run.method = method;
    run.uncertainty.method = IntervalMethod::gum;
    for (std::size_t i = 0; i < above_nm.size(); ++i)
      run.sample.layers.push_back({"above" + std::to_string(i), catalogue_material("hydrocarbon"), Quantity(above_nm[i], (method == ThicknessMethod::ratio ? 0.1 : 1e-5) * above_nm[i])});
    run.sample.layers.push_back({"film", catalogue_material("hfo2")});
    run.sample.substrate = catalogue_material("Si");
    run.lines = {test::line(run, "f", "Hf 4f", "film"), test::line(run, "s", "Si 2p", "substrate")};
    run.lines[0].length_nm["film"] = Quantity(film_length, 0.1 * film_length);
    run.lines[1].length_nm["film"] = Quantity(substrate_length, 0.1 * substrate_length);
    for (std::size_t i = 0; i < above_nm.size(); ++i) {
      run.lines[0].length_nm["above" + std::to_string(i)] = Quantity(above_film_length, 0.0);
      run.lines[1].length_nm["above" + std::to_string(i)] = Quantity(above_substrate_length, 0.0);
    }
    if (method == ThicknessMethod::ratio) {
      run.references = {{"f", "s", Quantity(reference, 0.05 * reference)}};
    } else {
      // Exact enough for the thickest film to keep a distance from its reference; else there is only a bound.
      run.lines[0].reference_area = Quantity(scale * reference, 1e-5 * scale * reference);
      run.lines[1].reference_area = Quantity(scale, 1e-5 * scale);
    }
    const auto measured = [&](const char* label, double value) {
      AreaRow row = test::area("1", label, value);
      row.area_sd = (method == ThicknessMethod::ratio ? 0.01 : 1e-5) * value;
      run.areas.push_back(row);
    };
    measured("f", film_area());
    measured("s", substrate_area());
    return run;
  }
};

Sample any_sample(std::size_t layers_above) {
  Sample s{};
  s.x = *log_uniform(1e-3, 8.0).as("x");
  s.film_length = *log_uniform(0.5, 20.0).as("film length");
  s.substrate_length = s.film_length / *log_uniform(0.4, 2.5).as("length ratio");
  s.reference = *log_uniform(0.05, 20.0).as("reference ratio");
  s.emission = *uniform(0.0, 70.0).as("emission angle");
  s.scale = *log_uniform(1e-3, 1e9).as("scale of the areas");
  for (std::size_t i = 0; i < layers_above; ++i) s.above_nm.push_back(*uniform(0.0, 2.0).as("thickness above"));
  return s;
}

Thickness only(const Run& run) {
  const ThicknessResults all = run_thickness(run);
  RC_ASSERT(all.results.size() == 1U);
  if (!all.results[0].thickness) RC_FAIL(all.results[0].failure);
  return *all.results[0].thickness;
}

void assert_close(double actual, double expected, double relative) {
  const auto outcome = close_to(actual, expected, rel(relative));
  RC_LOG() << outcome;
  RC_ASSERT(static_cast<bool>(outcome));
}

}  // namespace

TEST_SUITE("laws of a run") {

TEST_CASE("a run undoes the forward model of film and layers above by every method") {
  holds("run(areas(t)) = t", [] {
    const Sample s = any_sample(*rc::gen::inRange<std::size_t>(0, 3).as("layers above"));
    assert_close(only(s.run()).value_nm, s.thickness(), kRounding);
    // A single line loses digits where it hardly differs from its reference.
    assert_close(only(s.run(ThicknessMethod::film_line)).value_nm, s.thickness(), kRounding * std::exp(s.x));
    assert_close(only(s.run(ThicknessMethod::substrate_line)).value_nm, s.thickness(), 1e-13 * (1.0 + 10.0 / s.x) * s.film_length / s.substrate_length + kRounding);
  });
}

TEST_CASE("a layer of no thickness above is neutral") {
  holds("d = 0", [] {
    Sample s = any_sample(*rc::gen::inRange<std::size_t>(0, 2).as("layers above"));
    const Thickness without = only(s.run());
    s.above_nm.push_back(0.0);
    const Thickness with = only(s.run());
    assert_close(with.value_nm, without.value_nm, kRounding);
    assert_close(with.standard_uncertainty_nm, without.standard_uncertainty_nm, 1e-9);
  });
}

TEST_CASE("a layer above split in two of the same material is one layer") {
  holds("attenuation above multiplies", [] {
    Sample s = any_sample(1);
    const double whole = s.above_nm[0], part = *uniform(0.0, 1.0).as("part");
    const double one = only(s.run()).value_nm;
    s.above_nm = {part * whole, (1.0 - part) * whole};
    // The same areas: only the description is split.
    Run split = s.run();
    Sample together = s;
    together.above_nm = {whole};
    split.areas[0].area = together.film_area();
    split.areas[1].area = together.substrate_area();
    assert_close(only(split).value_nm, one, kRounding);
  });
}

TEST_CASE("areas in another unit give the same thickness and uncertainty") {
  holds("free of scale", [] {
    const Sample s = any_sample(*rc::gen::inRange<std::size_t>(0, 2).as("layers above"));
    const double factor = *log_uniform(1e-6, 1e6).as("factor");
    for (const ThicknessMethod method : {ThicknessMethod::ratio, ThicknessMethod::film_line, ThicknessMethod::substrate_line}) {
      Run run = s.run(method);
      const Thickness before = only(run);
      for (AreaRow& row : run.areas) {
        row.area = *row.area * factor;
        row.area_sd = *row.area_sd * factor;
      }
      for (Line& line : run.lines) {
        if (line.reference_area) line.reference_area = Quantity(line.reference_area->value * factor, line.reference_area->sd() * factor);
      }
      const Thickness after = only(run);
      const double lost = method == ThicknessMethod::film_line ? std::exp(s.x) : method == ThicknessMethod::substrate_line ? 1.0 + 1.0 / (s.x * s.film_length / s.substrate_length) : 1.0;
      assert_close(after.value_nm, before.value_nm, kRounding * lost);
      assert_close(after.standard_uncertainty_nm, before.standard_uncertainty_nm, 1e-9 * lost);
    }
  });
}

TEST_CASE("more film or less substrate is a thicker film by every method") {
  holds("monotone", [] {
    const Sample s = any_sample(*rc::gen::inRange<std::size_t>(0, 2).as("layers above"));
    Sample thicker = s;
    // Up to nine lengths: beyond, the film line comes so close to its reference that there is only a bound.
    thicker.x = std::min(9.0, s.x * (1.0 + *log_uniform(1e-3, 1.0).as("growth")));
    for (const ThicknessMethod method : {ThicknessMethod::ratio, ThicknessMethod::film_line, ThicknessMethod::substrate_line}) {
      RC_ASSERT(only(thicker.run(method)).value_nm > only(s.run(method)).value_nm);
    }
    // Each area by itself.
    const double before = only(s.run()).value_nm, growth = 1.0 + *log_uniform(1e-6, 1.0).as("growth of an area");
    Run run = s.run();
    run.areas[0].area = *run.areas[0].area * growth;
    RC_ASSERT(only(run).value_nm > before);
    run = s.run();
    run.areas[1].area = *run.areas[1].area * growth;
    RC_ASSERT(only(run).value_nm < before);
    run = s.run();
    run.references[0].ratio = Quantity(s.reference * growth, 0.05 * s.reference);
    RC_ASSERT(only(run).value_nm < before);
  });
}

TEST_CASE("a layer above one line of two of equal energy does not matter at all") {
  holds("equal energies cancel", [] {
    Run run = test::silica_run();
    run.emission_deg = *uniform(0.0, 70.0).as("emission angle");
    run.areas[0].area = *log_uniform(1.0, 1e6).as("film area");
    const double bare = only(run).value_nm;
    run.sample.layers.insert(run.sample.layers.begin(),
                             {"above", catalogue_material("hydrocarbon"), Quantity(*uniform(0.0, 5.0).as("thickness above"), 0.1)});
    RC_ASSERT(test::same_bits(only(run).value_nm, bare));
  });
}

}  // TEST_SUITE("laws of a run")
