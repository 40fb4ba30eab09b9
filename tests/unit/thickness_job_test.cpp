#include "pellicle/job/thickness_job.hpp"

#include <algorithm>
#include <cmath>
#include <functional>
#include <set>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"
#include "support/sample_run.hpp"

using namespace pellicle;
using test::area;
using test::close_to;
using test::contains;
using test::error_of;
using test::line;
using test::rel;
using test::silica_run;

namespace {

/// Hafnia on silicon: lines of different elements and energies. Areas and reference ratio invented.
Run hafnia_run() {
  Run run;
  run.place = "run.toml";
  run.uncertainty.method = IntervalMethod::gum;
  run.source = photon_source("Al Ka");
  run.emission_deg = 0.0;
  run.emission_sd_deg = 1.0;
  run.sample.layers.push_back({"hafnia", catalogue_material("hfo2")});
  run.sample.substrate = catalogue_material("Si");
  run.lines = {line(run, "Hf", "Hf 4f", "hafnia"), line(run, "Si", "Si 2p", "substrate")};
  run.references = {{"Hf", "Si", Quantity(4.0, 0.4)}};
  run.areas = {area("1", "Hf", 9000.0), area("1", "Si", 3000.0)};
  for (AreaRow& row : run.areas) row.area_sd = 50.0;
  return run;
}

const Thickness& only(const ThicknessResults& all) {
  REQUIRE(all.results.size() == 1);
  REQUIRE_MESSAGE(all.results[0].thickness.has_value(), all.results[0].failure);
  return *all.results[0].thickness;
}

InputError refused(const std::function<void(Run&)>& spoil) {
  Run run = silica_run();
  spoil(run);
  return error_of<InputError>([&] { (void)run_thickness(run); });
}

}  // namespace

TEST_SUITE("thickness of a run") {

TEST_CASE("the run of the worked example gives 3.27429 nm") {
  const ThicknessResults all = run_thickness(silica_run());
  CHECK(close_to(only(all).value_nm, 3.27429, test::abs(5e-6)));  // seah2004, recalled
  REQUIRE(all.routes.size() == 1);
  CHECK(all.routes[0].layer == "oxide");
  CHECK(all.routes[0].film_length.origin == "given");
  CHECK(all.routes[0].reference_origin == "given");
  CHECK_FALSE(all.routes[0].substrate_length.has_value());
  CHECK(all.results[0].emission_deg == 34.0);
}

TEST_CASE("a length may be given to either of two equal lines but not two lengths to one") {
  Run run = silica_run();
  run.lines[0].length_nm["oxide"] = 3.448;
  run.lines[1].length_nm.clear();
  CHECK(close_to(only(run_thickness(run)).value_nm, 3.27429, test::abs(5e-6)));
  run.lines[1].length_nm["oxide"] = 3.448;
  CHECK_NOTHROW((void)run_thickness(run));
  run.lines[1].length_nm["oxide"] = 3.485;
  CHECK(contains(error_of<InputError>([&] { (void)run_thickness(run); }).fact(), "different lengths"));
}

TEST_CASE("a calibrated set gives its own length and no other") {
  for (const auto& [set, length] : {std::pair{"sio2-2004", 3.448}, {"sio2-2005", 3.485}}) {
    Run run = silica_run();
    run.lines[1].length_nm.clear();
    run.length_set = set;
    const ThicknessResults all = run_thickness(run);
    CHECK(all.routes[0].film_length.length_nm.value == length);
    CHECK(all.routes[0].film_length.origin == std::string("set ") + set);
    CHECK(has_finding(all.findings_of(all.results[0]), "length_from_memory"));
    CHECK(close_to(only(all).value_nm, length * std::cos(34.0 * std::acos(-1.0) / 180.0) * std::log1p(2.0 / 0.9329),
                   rel(1e-13)));
  }
  Run run = silica_run();
  run.lines[1].length_nm.clear();
  run.length_set = "sio2-2005";
  run.source = photon_source("Ag La");
  for (Line& l : run.lines) l.kinetic_energy_ev = kinetic_energy_ev(*l.level, run.source);
  CHECK(contains(error_of<InputError>([&] { (void)run_thickness(run); }).fact(), "Ag La"));
  // A length given outright goes before the set.
  run.lines[1].length_nm["oxide"] = 5.0;
  CHECK(run_thickness(run).routes[0].film_length.length_nm.value == 5.0);
}

TEST_CASE("without a length it is predicted and the prediction brings its uncertainty") {
  Run run = silica_run();
  run.lines[1].length_nm.clear();
  const ThicknessResults all = run_thickness(run);
  const AttenuationLength predicted = attenuation_length(catalogue_material("SiO2"), 1387.2);
  CHECK(close_to(all.routes[0].film_length.length_nm.value, predicted.value_nm, rel(1e-12)));
  CHECK(close_to(all.routes[0].film_length.length_nm.sd(), predicted.standard_uncertainty_nm, rel(1e-12)));
  CHECK(all.routes[0].film_length.origin == "predicted: Seah-Gilmore on TPP-2M");
  CHECK(has_finding(all.findings_of(all.results[0]), "length_predicted"));
  CHECK(only(all).scale_stated);
}

TEST_CASE("lines of different energy get a length each and share the error of their formula") {
  const Run run = hafnia_run();
  const ThicknessResults all = run_thickness(run);
  const Material& hafnia = run.sample.layers[0].material;
  const AttenuationLength film = attenuation_length(hafnia, run.lines[0].kinetic_energy_ev);
  const AttenuationLength substrate = attenuation_length(hafnia, run.lines[1].kinetic_energy_ev);
  AreaMeasurement m;
  m.film_area = Quantity(9000.0, 50.0);
  m.substrate_area = Quantity(3000.0, 50.0);
  m.reference_ratio = Quantity(4.0, 0.4);
  m.film_line_length_nm = Quantity(film.value_nm, film.standard_uncertainty_nm);
  m.substrate_line_length_nm = Quantity(substrate.value_nm, substrate.standard_uncertainty_nm);
  m.emission_deg = Quantity(0.0, 1.0);
  m.length_correlation = 0.9;
  const Thickness expected = thickness_from_areas(m);
  CHECK(close_to(only(all).value_nm, expected.value_nm, rel(1e-14)));
  CHECK(close_to(only(all).standard_uncertainty_nm, expected.standard_uncertainty_nm, rel(1e-14)));
  // Correlated errors of the two lengths add up; taken as independent they would look smaller.
  m.length_correlation = 0.0;
  CHECK(thickness_from_areas(m).standard_uncertainty_nm < only(all).standard_uncertainty_nm);
  // Given lengths are not assumed to share anything.
  Run given = hafnia_run();
  given.lines[0].length_nm["hafnia"] = m.film_line_length_nm;
  given.lines[1].length_nm["hafnia"] = *m.substrate_line_length_nm;
  CHECK(close_to(only(run_thickness(given)).standard_uncertainty_nm, thickness_from_areas(m).standard_uncertainty_nm,
                 rel(1e-14)));
  // Nor do a given and a predicted one.
  for (const std::size_t predicted : {0, 1}) {
    Run mixed = given;
    mixed.lines[predicted].length_nm.clear();
    CHECK(close_to(only(run_thickness(mixed)).standard_uncertainty_nm, thickness_from_areas(m).standard_uncertainty_nm,
                   rel(1e-14)));
  }
}

TEST_CASE("contamination above the film matters for lines of different energy only") {
  Run silica = silica_run();
  silica.sample.layers.insert(silica.sample.layers.begin(), {"contamination", catalogue_material("hydrocarbon")});
  CHECK(close_to(only(run_thickness(silica)).value_nm, 3.27429, test::abs(5e-6)));
  CHECK_FALSE(has_finding(run_thickness(silica).findings, "contamination_uncorrected"));
  Run hafnia = hafnia_run();
  CHECK_FALSE(has_finding(run_thickness(hafnia).findings, "contamination_uncorrected"));
  hafnia.sample.layers.insert(hafnia.sample.layers.begin(), {"contamination", catalogue_material("hydrocarbon")});
  CHECK(has_finding(run_thickness(hafnia).findings, "contamination_uncorrected"));
}

TEST_CASE("reference areas make a reference ratio with the uncertainty of both") {
  Run run = silica_run();
  run.references.clear();
  run.lines[0].reference_area = Quantity(9329.0, 93.29);
  run.lines[1].reference_area = Quantity(10000.0, 200.0);
  const ThicknessResults all = run_thickness(run);
  CHECK(close_to(only(all).value_nm, 3.27429, test::abs(5e-6)));
  CHECK(all.routes[0].reference_origin == "reference areas");
  CHECK(close_to(all.routes[0].reference_ratio->value, 0.9329, rel(1e-14)));
  CHECK(close_to(all.routes[0].reference_ratio->sd(), 0.9329 * std::hypot(0.01, 0.02), rel(1e-12)));
  // A stated ratio overrides the areas of its pair.
  run.references = {{"Si 2p oxide", "Si 2p metal", 2.0}};
  const ThicknessResults stated = run_thickness(run);
  REQUIRE(stated.routes.size() == 1);
  CHECK(stated.routes[0].reference_ratio->value == 2.0);
}

TEST_CASE("areas come with stated or counted or assumed uncertainty in this order") {
  Run run = silica_run();
  const auto sd = [&] { return run_thickness(run).results[0].film_area->sd(); };
  // Assumed: 2 % of the area, common practice, no source.
  CHECK(close_to(sd(), 400.0, rel(1e-14)));
  CHECK(has_finding(run_thickness(run).findings, "assumed"));
  // Counted: the root of the counts and twice the background [currie1968].
  run.area_unit = AreaUnit::counts;
  CHECK(close_to(sd(), std::sqrt(20000.0), rel(1e-14)));
  CHECK(has_finding(run_thickness(run).findings, "background_not_given"));
  for (AreaRow& row : run.areas) row.counting.background_counts = 5000.0;
  CHECK(close_to(sd(), std::sqrt(30000.0), rel(1e-14)));
  CHECK_FALSE(has_finding(run_thickness(run).findings, "background_not_given"));
  // Stated.
  run.areas[0].area_sd = 77.0;
  CHECK(sd() == 77.0);
}

TEST_CASE("an angle without uncertainty is assumed to be set to one degree") {
  Run run = silica_run();
  const auto contribution = [&] {
    const ThicknessResults all = run_thickness(run);
    for (const BudgetRow& row : only(all).budget.rows) {
      if (row.name == "emission_deg") return row.contribution;
    }
    return -1.0;
  };
  // t tanθ per radian.
  const double slope = 3.27429 * std::tan(34.0 * std::acos(-1.0) / 180.0) * std::acos(-1.0) / 180.0;
  CHECK(close_to(contribution(), slope, rel(1e-5)));
  CHECK(has_finding(run_thickness(run).findings, "assumed"));
  run.emission_sd_deg = 0.25;
  CHECK(close_to(contribution(), 0.25 * slope, rel(1e-5)));
}

TEST_CASE("assumed values are those of the table and unknown ones are refused") {
  CHECK(assumed_value("emission_sd_deg") == 1.0);
  CHECK(assumed_value("area_relative_sd") == 0.02);
  CHECK(assumed_value("film_density_relative_sd") == 0.10);
  CHECK(assumed_value("bulk_density_relative_sd") == 0.02);
  CHECK(assumed_value("computed_reference_ratio_relative_sd") == 0.40);
  CHECK(assumed_value("sensitivity_relative_sd") == 0.10);
  CHECK_THROWS_AS((void)assumed_value("luck"), InputError);
}

TEST_CASE("full and half doublets are not compared and the factor between them is named") {
  Run run = silica_run();
  run.lines[0] = line(run, "Si 2p oxide", "Si 2p3/2", "oxide");
  const auto error = error_of<InputError>([&] { (void)run_thickness(run); });
  CHECK(contains(error.fact(), "Si 2p3/2"));
  CHECK(contains(error.fact(), "1.50"));  // six electrons against four
  run.lines[1] = line(run, "Si 2p metal", "Si 2p1/2", "substrate");
  CHECK(contains(error_of<InputError>([&] { (void)run_thickness(run); }).fact(), " 0.5"));  // two against four
  run.lines[0] = line(run, "Si 2p oxide", "Si 2p", "oxide");
  CHECK(contains(error_of<InputError>([&] { (void)run_thickness(run); }).fact(), "3.00"));  // six against two
  run.lines[1] = line(run, "Si 2p metal", "Si 2p", "substrate");
  run.lines[1].length_nm["oxide"] = 3.448;
  CHECK_NOTHROW((void)run_thickness(run));
  run.lines[0] = line(run, "Si 2p oxide", "Si 2p3/2", "oxide");
  run.lines[1] = line(run, "Si 2p metal", "Si 2p3/2", "substrate");
  CHECK_NOTHROW((void)run_thickness(run));
}

TEST_CASE("runs that cannot be a film on a substrate are refused with the reason") {
  CHECK(contains(refused([](Run& r) { r.references.clear(); }).fact(), "no reference ratio is given"));
  CHECK(contains(refused([](Run& r) { r.references[0].ratio = 0.0; }).fact(), "not a number > 0"));
  CHECK(contains(refused([](Run& r) { r.references.push_back(r.references[0]); }).fact(),
                 "two references name the pair"));
  CHECK(contains(refused([](Run& r) { r.references[0].film = "Si 2p oxid"; }).hint(), "Si 2p oxide"));
  CHECK(contains(refused([](Run& r) { r.lines[0].from = "substrate"; }).fact(), "comes from the substrate"));
  CHECK(contains(refused([](Run& r) { r.lines[1].from = "oxide"; }).fact(), "comes from layer"));
  CHECK(contains(refused([](Run& r) {
                   r.sample.layers.push_back({"suboxide", catalogue_material("sio")});
                 }).fact(),
                 "lies between film"));
  CHECK(contains(refused([](Run& r) { r.sample.layers[0].material = catalogue_material("al2o3-amorphous"); }).fact(),
                 "does not hold"));
  CHECK(contains(refused([](Run& r) { r.sample.substrate = catalogue_material("Al"); }).fact(), "does not hold"));
}

TEST_CASE("rows of the table that fit no run are refused at their place") {
  const auto error = refused([](Run& r) {
    r.areas.push_back(area("2", "Si 2p metl", 1.0));
    r.areas.back().line_number = 4;
  });
  CHECK(error.where() == "areas.csv:4");
  CHECK(contains(error.hint(), "Si 2p metal"));
  CHECK(contains(refused([](Run& r) { r.emission_deg.reset(); }).fact(), "no emission angle"));
  CHECK(contains(refused([](Run& r) { r.areas.push_back(r.areas[0]); }).fact(), "twice"));
  CHECK(contains(refused([](Run& r) { r.areas.clear(); }).fact(), "no areas"));
}

TEST_CASE("a net area below zero is data within three standard uncertainties and a fault beyond") {
  const auto spoil = [](Run& r, double value, std::optional<double> sd, std::optional<double> background) {
    r.areas[0].area = value;
    r.areas[0].area_sd = sd;
    r.areas[0].counting.background_counts = background;
    r.areas[0].line_number = 7;
    if (background) r.area_unit = AreaUnit::counts;
  };
  const auto error = refused([&](Run& r) { spoil(r, -31.0, 10.0, std::nullopt); });
  CHECK(error.where() == "areas.csv:7: area");
  CHECK(contains(error.fact(), "more than 3"));
  CHECK(contains(refused([&](Run& r) { spoil(r, -1.0, std::nullopt, std::nullopt); }).fact(), "negative area"));
  // Background 50 counts: the noise of nothing is 10 counts.
  CHECK(contains(refused([&](Run& r) { spoil(r, -31.0, std::nullopt, 50.0); }).fact(), "more than 3"));
  for (const auto& [sd, background] : {std::pair<std::optional<double>, std::optional<double>>{10.0, std::nullopt}, {std::nullopt, 50.0}}) {
    Run run = silica_run();
    spoil(run, -29.0, sd, background);
    const ThicknessResults all = run_thickness(run);
    REQUIRE(all.results[0].bound.has_value());
    CHECK(all.results[0].bound->upper);
    CHECK(all.results[0].bound->at95_nm > 0.0);
  }
}

TEST_CASE("a spot without an answer fails alone and says why") {
  Run run = silica_run();
  run.areas.push_back(area("2", "Si 2p oxide", 100.0));  // no metal
  run.areas.push_back(area("3", "Si 2p oxide", 100.0));
  run.areas.push_back(area("3", "Si 2p metal", 0.0));  // nothing under it
  run.areas.push_back(area("4", "Si 2p oxide", 0.0));
  run.areas.push_back(area("4", "Si 2p metal", 100.0));  // no oxide
  const ThicknessResults all = run_thickness(run);
  REQUIRE(all.results.size() == 4);
  CHECK(all.results[0].thickness.has_value());
  CHECK_FALSE(all.results[1].thickness.has_value());
  CHECK(contains(all.results[1].failure, "no area of line \"Si 2p metal\""));
  CHECK_FALSE(all.results[2].thickness.has_value());
  // A zero without a noise bounds nothing: how weak might the line be?
  CHECK(contains(all.results[2].failure, "neither area_sd nor background_counts"));
  CHECK(contains(all.results[3].failure, "neither area_sd nor background_counts"));
  CHECK(all.summaries[0].count == 1);
  CHECK(all.summaries[0].failed == 3);
}

TEST_CASE("spots and angles are kept apart in the order in which they appear") {
  Run run = silica_run();
  run.areas.clear();
  for (const std::string spot : {"b", "a"}) {
    for (const double angle : {45.0, 0.0}) {
      for (const std::string label : {"Si 2p oxide", "Si 2p metal"}) {
        AreaRow row = area(spot, label, 1000.0);
        row.emission_deg = angle;
        run.areas.push_back(row);
      }
    }
  }
  const ThicknessResults all = run_thickness(run);
  REQUIRE(all.results.size() == 4);
  CHECK(all.results[0].spot == "b");
  CHECK(all.results[0].emission_deg == 45.0);
  CHECK(all.results[1].emission_deg == 0.0);
  CHECK(all.results[3].spot == "a");
  // The same ratio at 45° means a film thinner by cos 45°.
  CHECK(close_to(all.results[0].thickness->value_nm / all.results[1].thickness->value_nm, std::sqrt(0.5), rel(1e-14)));
}

TEST_CASE("the summary averages what varies and keeps what is common") {
  Run run = silica_run();
  run.lines[1].length_nm["oxide"] = Quantity(3.448, 0.3);
  run.emission_sd_deg = 1.0;
  run.areas.clear();
  const std::vector<double> film = {20000, 21000, 19500, 20500};  // invented
  for (std::size_t i = 0; i < film.size(); ++i) {
    run.areas.push_back(area(std::to_string(i), "Si 2p oxide", film[i]));
    run.areas.push_back(area(std::to_string(i), "Si 2p metal", 10000.0));
  }
  const auto check = [&](double area_sd) {
    for (AreaRow& row : run.areas) row.area_sd = area_sd;
    const ThicknessResults all = run_thickness(run);
    const ThicknessSummary& s = all.summaries[0];
    double mean = 0.0, squares = 0.0, repeatability = 0.0, scale = 0.0;
    for (const ThicknessResult& r : all.results) mean += r.thickness->value_nm / 4.0;
    for (const ThicknessResult& r : all.results) {
      squares += std::pow(r.thickness->value_nm - mean, 2);
      repeatability += std::pow(r.thickness->budget.repeatability, 2);
      scale += r.thickness->budget.scale / 4.0;
    }
    CHECK(s.count == 4);
    CHECK(close_to(s.mean_nm, mean, rel(1e-13)));
    CHECK(close_to(*s.standard_deviation_nm, std::sqrt(squares / 3.0), rel(1e-12)));
    CHECK(close_to(s.scale_nm, scale, rel(1e-12)));
    const double from_spots = std::sqrt(squares / 3.0) / 2.0, from_counting = std::sqrt(repeatability) / 4.0;
    CHECK(close_to(s.repeatability_of_mean_nm, std::max(from_spots, from_counting), rel(1e-12)));
    return from_spots > from_counting;
  };
  CHECK(check(10.0));         // the spots differ by more than the areas promise
  CHECK_FALSE(check(900.0));  // and by less
}

TEST_CASE("one spot has no standard deviation and an unstated length no scale") {
  const ThicknessResults all = run_thickness(silica_run());
  CHECK(all.summaries[0].count == 1);
  CHECK_FALSE(all.summaries[0].standard_deviation_nm.has_value());
  CHECK_FALSE(all.summaries[0].scale_stated);
}

TEST_CASE("two films of one run give two routes") {
  Run run = hafnia_run();
  Line hf4d = line(run, "Hf 4d", "Hf 4d", "hafnia");
  run.lines.push_back(hf4d);
  run.references.push_back({"Hf 4d", "Si", Quantity(6.0, 0.6)});
  AreaRow row = area("1", "Hf 4d", 14000.0);
  row.area_sd = 80.0;
  run.areas.push_back(row);
  const ThicknessResults all = run_thickness(run);
  REQUIRE(all.routes.size() == 2);
  REQUIRE(all.results.size() == 2);
  CHECK(all.results[0].route == 0);
  CHECK(all.results[1].route == 1);
  CHECK(all.summaries.size() == 2);
}

TEST_CASE("a line known by its kinetic energy alone needs no level") {
  Run run = hafnia_run();
  run.lines[0].level.reset();
  run.lines[0].kinetic_energy_ev = 1600.0;
  CHECK_NOTHROW((void)run_thickness(run));
  CHECK(close_to(run_thickness(run).routes[0].film_length.length_nm.value,
                 attenuation_length(catalogue_material("hfo2"), 1600.0).value_nm, rel(1e-14)));
}

}  // TEST_SUITE("thickness of a run")
