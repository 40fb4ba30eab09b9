#include <nlohmann/json.hpp>
#include <set>
#include <sstream>
#include <string>
#include <vector>

#include "base/csv.hpp"
#include "io/digest.hpp"
#include "pellicle/base/version.hpp"
#include "pellicle/io/result_json.hpp"
#include "pellicle/report/text.hpp"
#include "report/text_table.hpp"
#include "support/close_to.hpp"
#include "support/sample_run.hpp"

using namespace pellicle;
using test::area;
using test::close_to;
using test::contains;
using test::silica_run;

namespace {

using Json = nlohmann::ordered_json;

Json thickness_document(const Run& run) { return Json::parse(thickness_json(run, run_thickness(run))); }

/// What every document must carry.
void check_frame(const Json& document, const std::string& command) {
  CHECK(document.at("schema") == "pellicle.result/1");
  CHECK(document.at("version") == std::string(version()));
  CHECK(document.at("command") == command);
  CHECK(document.at("seed").is_null());
  CHECK(document.at("results").is_array());
  CHECK(document.contains("summary"));
  // The digest is that of the inputs as they stand in the document.
  CHECK(document.at("inputs_sha256") == detail::sha256_hex(document.at("inputs").dump()));
}

LengthQuery query(const std::string& name, double energy) {
  const Material m = define_material(name);
  return {name, m, energy, attenuation_length(m, energy)};
}

std::vector<std::string> lines_of(const std::string& text) {
  std::istringstream in(text);
  std::vector<std::string> all;
  for (std::string l; std::getline(in, l);) all.push_back(l);
  return all;
}

}  // namespace

TEST_SUITE("results as JSON") {

TEST_CASE("a thickness document keeps the spelling that scripts read") {
  Run run = silica_run();
  run.lines[1].length_nm["oxide"] = Quantity(3.448, 0.1);
  run.emission_sd_deg = 1.0;
  const Json d = thickness_document(run);
  check_frame(d, "thickness");
  const Json& r = d.at("results").at(0);
  CHECK(close_to(r.at("thickness_nm").at("value"), 3.27429, test::abs(5e-6)));
  CHECK(r.at("thickness_nm").at("interval_from") == "gum");
  const double sd = r.at("thickness_nm").at("sd");
  CHECK(sd > 0.0);
  CHECK(close_to(r.at("thickness_nm").at("high95").get<double>() - r.at("thickness_nm").at("low95").get<double>(),
                 2 * 1.959963984540054 * sd, test::rel(1e-12)));
  CHECK(r.at("spot") == "1");
  CHECK(r.at("emission_deg") == 34.0);
  CHECK(r.at("takeoff_deg") == 56.0);
  CHECK(r.at("layer") == "oxide");
  CHECK(r.at("length_nm").at("origin") == "given");
  CHECK(r.at("length_nm").at("sd") == 0.1);
  CHECK(r.at("substrate_line_length_nm").is_null());
  CHECK(r.at("reference_ratio").at("value") == 0.9329);
  CHECK(r.at("reference_ratio").at("sd").is_null());
  CHECK(r.at("failure").is_null());
  double shares = 0.0;
  std::set<std::string> names;
  for (const Json& row : r.at("budget")) {
    shares += row.at("share").get<double>();
    names.insert(row.at("name"));
    CHECK(row.at("contribution_nm").is_number());
    CHECK((row.at("kind") == "repeatability" || row.at("kind") == "scale"));
  }
  CHECK(close_to(shares, 1.0, test::rel(1e-12)));
  CHECK(names == std::set<std::string>{"film_area", "substrate_area", "reference_ratio", "length_nm", "emission_deg"});
  for (const Json& f : r.at("findings")) {
    CHECK(f.at("code").is_string());
    CHECK(f.at("text").is_string());
    CHECK((f.at("severity") == "note" || f.at("severity") == "warning" || f.at("severity") == "error"));
    CHECK((f.at("value").is_null() || f.at("value").is_number()));
    CHECK((f.at("limit").is_null() || f.at("limit").is_number()));
  }
  const Json& s = d.at("summary").at(0);
  CHECK(s.at("count") == 1);
  CHECK(s.at("standard_deviation_nm").is_null());
  CHECK(s.at("scale_nm").is_number());
}

TEST_CASE("a length without uncertainty leaves the scale null and not zero") {
  const Json d = thickness_document(silica_run());
  CHECK(d.at("results").at(0).at("scale_nm").is_null());
  CHECK(d.at("summary").at(0).at("scale_nm").is_null());
}

TEST_CASE("a failed spot is a row with its reason and null numbers") {
  Run run = silica_run();
  run.areas.push_back(area("2", "Si 2p oxide", 5.0));
  const Json d = thickness_document(run);
  const Json& r = d.at("results").at(1);
  CHECK(r.at("thickness_nm").is_null());
  CHECK(r.at("film_area").is_null());
  CHECK(contains(r.at("failure"), "no area"));
  CHECK(r.at("budget").empty());
  run.areas = {area("1", "Si 2p oxide", 5.0)};
  const Json s = thickness_document(run).at("summary").at(0);
  CHECK(s.at("mean_nm").is_null());
  CHECK(s.at("failed") == 1);
}

TEST_CASE("the inputs repeat the run and their digest tells runs apart") {
  Run run = silica_run();
  run.title = "A title";
  run.record = {{"specimen", "S-1"}};
  const Json d = thickness_document(run);
  const Json& in = d.at("inputs");
  CHECK(in.at("title") == "A title");
  CHECK(in.at("record").at("specimen") == "S-1");
  CHECK(in.at("record").at("analyst") == "not stated");
  CHECK(in.at("record").size() == record_keys().size());
  CHECK(in.at("photon_energy_ev") == 1486.6);
  CHECK(in.at("layers").at(0).at("material").at("density_g_cm3") == 2.20);
  CHECK(in.at("layers").at(0).at("material").at("density_source").is_string());
  CHECK(in.at("lines").at(1).at("length_nm").at("oxide").at("value") == 3.448);
  CHECK(in.at("areas").size() == 2);
  CHECK(thickness_document(run).at("inputs_sha256") == d.at("inputs_sha256"));
  std::set<std::string> digests = {d.at("inputs_sha256")};
  const auto digest_after = [&](auto change) {
    Run other = run;
    change(other);
    return thickness_document(other).at("inputs_sha256").get<std::string>();
  };
  digests.insert(digest_after([](Run& r) { r.areas[0].area = std::nextafter(20000.0, 0.0); }));
  digests.insert(digest_after([](Run& r) { r.emission_deg = 35.0; }));
  digests.insert(digest_after([](Run& r) { r.emission_sd_deg = 1.0; }));
  digests.insert(digest_after([](Run& r) { r.references[0].ratio.standard_uncertainty = 0.01; }));
  digests.insert(digest_after([](Run& r) { r.lines[1].length_nm["oxide"] = 3.485; }));
  digests.insert(digest_after([](Run& r) { r.sample.layers[0].material.density_g_cm3 = 2.21; }));
  digests.insert(digest_after([](Run& r) { r.record[0].second = "S-2"; }));
  CHECK(digests.size() == 8);
}

TEST_CASE("a length document keeps the spelling that scripts read") {
  const Json d = Json::parse(lengths_json({query("SiO2", 1387.1), query("diamond", 1000.0)}));
  check_frame(d, "lengths");
  const Json& r = d.at("results").at(0);
  CHECK(r.at("material") == "SiO2");
  CHECK(r.at("material_id") == "sio2-thermal");
  CHECK(r.at("energy_ev") == 1387.1);
  const AttenuationLength l = attenuation_length(catalogue_material("SiO2"), 1387.1);
  CHECK(r.at("attenuation_length_nm").at("value") == l.value_nm);
  CHECK(r.at("attenuation_length_nm").at("sd") == l.standard_uncertainty_nm);
  CHECK(r.at("attenuation_length_nm").at("model") == "Seah-Gilmore");
  for (const ImfpModel model : imfp_models()) {
    CHECK(r.at("imfp_nm").at(model_info(model).name) == imfp_nm(catalogue_material("SiO2"), 1387.1, model));
  }
  for (const AttenuationModel model : attenuation_models()) {
    const auto value = predict_attenuation_length(catalogue_material("SiO2"), 1387.1, model).value_nm;
    const Json& shown = r.at("attenuation_models_nm").at(model_info(model).name);
    if (value) {
      CHECK(shown == *value);
    } else {
      CHECK(shown.is_null());
      CHECK(r.at("refusals").contains(model_info(model).name));
    }
  }
  const Json& diamond = d.at("results").at(1);
  CHECK(diamond.at("imfp_nm").at("TPP-2M").is_null());
  CHECK(contains(diamond.at("refusals").at("TPP-2M"), "fail"));
  CHECK(diamond.at("attenuation_length_nm").at("imfp_model") == "S1");
}

TEST_CASE("materials and lines and sources and sets are documents as well") {
  const Json materials = Json::parse(materials_json({catalogue_material("SiO2"), make_material("CeO2", 7.2)}));
  check_frame(materials, "materials");
  CHECK(materials.at("results").at(0).at("density_g_cm3") == 2.2);
  CHECK(materials.at("results").at(0).at("valence_electrons") == 16.0);
  CHECK(materials.at("results").at(1).at("valence_electrons").is_null());
  CHECK(materials.at("results").at(1).at("band_gap_ev").is_null());

  const PhotonSource& al = photon_source("Al Ka");
  const Json lines = Json::parse(lines_json(core_levels(element("Si")), &al));
  check_frame(lines, "lines");
  CHECK(lines.at("results").at(0).at("line") == "Si 1s");
  CHECK(lines.at("results").at(0).at("kinetic_energy_ev").is_null());  // 1839 eV is out of reach
  CHECK(contains(lines.at("results").at(0).at("refusals").at(0), "give sensitivity"));
  for (const Json& row : lines.at("results")) {
    if (row.at("line") == "Si 2p") {
      CHECK(close_to(row.at("kinetic_energy_ev"), 1387.2, test::abs(1e-9)));
      CHECK(row.at("cross_section_barn").get<double>() > 0.0);
    }
  }
  CHECK(Json::parse(lines_json({core_level("Si 2p")}, nullptr)).at("results").at(0).at("kinetic_energy_ev").is_null());

  const Json sources = Json::parse(photon_sources_json());
  check_frame(sources, "lines");
  CHECK(sources.at("results").size() == photon_sources().size());
  const Json sets = Json::parse(calibrated_lengths_json());
  check_frame(sets, "lengths");
  CHECK(sets.at("results").at(0).at("length_nm").at("value") == 3.448);
  CHECK(sets.at("results").at(0).at("mark") == "from memory");
}

TEST_CASE("a check document says what can be computed") {
  Run run = silica_run();
  run.areas.push_back(area("2", "Si 2p oxide", 5.0));
  const Json d = Json::parse(check_json(run, run_thickness(run)));
  check_frame(d, "check");
  const Json& r = d.at("results").at(0);
  CHECK(r.at("ok") == false);
  CHECK(r.at("areas") == 3);
  CHECK(r.at("results") == 2);
  CHECK(r.at("failures").at(0).at("spot") == "2");
  CHECK(r.at("routes").size() == 1);
  CHECK(Json::parse(check_json(silica_run(), run_thickness(silica_run()))).at("results").at(0).at("ok") == true);
}

}  // TEST_SUITE("results as JSON")

TEST_SUITE("results as CSV and text") {

TEST_CASE("a CSV of results has one row per result and units in its header") {
  Run run = silica_run();
  for (AreaRow& row : run.areas) row.spot = "left, \"upper\"";
  run.areas.push_back(area("2", "Si 2p oxide", 5.0));
  std::vector<std::vector<std::string>> rows;
  detail::read_csv(thickness_csv(run, run_thickness(run)), "t",
                   [&](const detail::CsvRow& row) { rows.emplace_back(row.fields.begin(), row.fields.end()); });
  REQUIRE(rows.size() == 3);
  CHECK(rows[0] == std::vector<std::string>{"spot", "emission_deg", "layer", "method", "film_line", "substrate_line",
                                            "thickness_nm", "sd_nm", "low95_nm", "high95_nm", "bound", "repeatability_nm",
                                            "scale_nm", "areal_density_ug_cm2", "findings", "failure"});
  for (const auto& row : rows) CHECK(row.size() == 16);
  CHECK(rows[1][0] == "left, \"upper\"");
  CHECK(close_to(std::stod(rows[1][6]), 3.27429, test::abs(5e-6)));
  CHECK(rows[1][12].empty());  // the scale is not stated
  CHECK(contains(rows[1][14], "scale_not_stated"));
  CHECK(rows[2][6].empty());
  CHECK(contains(rows[2][15], "no area"));
}

TEST_CASE("a report states value and uncertainty and both angles and densities and cautions") {
  Run run = silica_run();
  run.title = "A title";
  const std::string text = thickness_text(run, run_thickness(run));
  for (const std::string part : {"A title", "3.274 ± 0.067 nm", "95 %", "emission 34.00 deg from the normal",
                                 "take-off 56.00 deg from the surface", "2.2 g/cm3", "thickness scale: not stated",
                                 "0.9329", "3.448", "uncertainty_not_given", "film_area", "share"}) {
    CHECK_MESSAGE(contains(text, part), part);
  }
  CHECK(contains(text, cautions_text()));
  CHECK(contains(cautions_text(), "flat, uniform, continuous film"));
}

TEST_CASE("a report of many spots ends with their mean and what failed") {
  Run run = silica_run();
  run.areas.push_back(area("2", "Si 2p oxide", 21000.0));
  run.areas.push_back(area("2", "Si 2p metal", 10000.0));
  run.areas.push_back(area("3", "Si 2p oxide", 5.0));
  const std::string text = thickness_text(run, run_thickness(run));
  CHECK(contains(text, "mean of 2 spots:"));
  CHECK(contains(text, "1 without an answer"));
  CHECK(contains(text, "no area of line"));
  CHECK(contains(check_text(run, run_thickness(run)), "2 thicknesses can be computed, 1 cannot"));
}

TEST_CASE("a report of lengths shows every model and the reason of each refusal") {
  const std::string text = lengths_text({query("diamond", 1000.0)});
  for (const std::string part : {"diamond", "3.52 g/cm3", "TPP-2M", "S1", "S3", "CS2", "organic", "Seah-Dench", "used",
                                 "legacy", "known to fail"}) {
    CHECK_MESSAGE(contains(text, part), part);
  }
}

TEST_CASE("lists of materials and lines show sources and marks and refusals") {
  const std::string materials = materials_text({catalogue_material("SiO2"), catalogue_material("si-amorphous")});
  CHECK(contains(materials, "xraydb"));
  CHECK(contains(materials, "from memory"));
  const PhotonSource& al = photon_source("Al Ka");
  const std::string lines = lines_text({core_level("Al 1s"), core_level("Al 2p"), core_level("Al 3s")}, &al);
  CHECK(contains(lines, "below the threshold"));
  CHECK(contains(lines, "1414"));
  CHECK(contains(lines, "nominal"));
}

TEST_CASE("columns of a table line up and carry no blanks at their ends") {
  const auto lines = lines_of(detail::text_table({{"name", "nm"}, {"α", "1.5"}, {"beta", "12.25"}}));
  REQUIRE(lines.size() == 3);
  CHECK(lines[1] == "  α        1.5");
  CHECK(lines[2] == "  beta   12.25");
  CHECK(detail::text_table({}).empty());
  CHECK(detail::wrapped("one two three", 7, "> ") == "one two\n> three");
}

}  // TEST_SUITE("results as CSV and text")
