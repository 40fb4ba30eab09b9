#include "pellicle/io/run_file.hpp"

#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "pellicle/io/starter.hpp"
#include "pellicle/job/thickness_job.hpp"
#include "support/close_to.hpp"
#include "support/scratch_folder.hpp"

using namespace pellicle;
using test::contains;
using test::error_of;
using test::ScratchFolder;

namespace {

/// A legal run, invented numbers.
const std::string kRun = R"(title = "Invented"

[record]
specimen = "S-1"
date = 2024-05-06
pass_energy_ev = 20

[instrument]
source = "Al Ka"
emission_deg = 34.0
emission_sd_deg = 0.5

[sample]
substrate = "Si"

[[sample.layer]]
name = "contamination"
material = "hydrocarbon"

[[sample.layer]]
name = "oxide"
material = { formula = "SiO2", density_g_cm3 = 2.2, band_gap_ev = 9.0 }

[[line]]
label = "film"
level = "Si 2p"
from = "oxide"
length_nm = { oxide = { value = 3.448, relative_sd = 0.05 } }

[[line]]
label = "bulk"
level = "Si 2p"
from = "substrate"

[[reference]]
film = "film"
substrate = "bulk"
ratio = { value = 0.9329, sd = 0.01 }

[data]
areas = "areas.csv"
area_unit = "counts"
)";

const std::string kAreas = "line,area\nfilm,20000\nbulk,10000\n";

/// The run with one passage replaced. A passage that is not there fails the test.
std::string altered(const std::string& passage, const std::string& replacement) {
  const std::size_t at = kRun.find(passage);
  REQUIRE_MESSAGE(at != std::string::npos, passage);
  std::string text = kRun;
  return text.replace(at, passage.size(), replacement);
}

/// "line:column" of the first place where `needle` stands.
std::string position(const std::string& text, const std::string& needle) {
  const std::size_t at = text.find(needle);
  REQUIRE_MESSAGE(at != std::string::npos, needle);
  std::size_t line = 1, column = 1;
  for (std::size_t i = 0; i < at; ++i) {
    ++column;
    if (text[i] == '\n') ++line, column = 1;
  }
  return std::to_string(line) + ":" + std::to_string(column);
}

Run parse(const ScratchFolder& folder, const std::string& text) { return parse_run(text, folder.file("run.toml")); }

}  // namespace

TEST_SUITE("run file") {

TEST_CASE("every key of a run arrives where it belongs") {
  const ScratchFolder folder;
  folder.write("areas.csv", kAreas);
  const Run run = parse(folder, kRun);
  CHECK(run.title == "Invented");
  using Pairs = std::vector<std::pair<std::string, std::string>>;
  CHECK(run.record == Pairs{{"specimen", "S-1"}, {"date", "2024-05-06"}, {"pass_energy_ev", "20"}});
  CHECK(run.source.name == "Al Ka");
  CHECK(run.emission_deg == 34.0);
  CHECK(run.emission_sd_deg == 0.5);
  CHECK(run.sample.substrate.id == "Si");
  REQUIRE(run.sample.layers.size() == 2);
  CHECK(run.sample.layers[0].material.id == "hydrocarbon");
  CHECK(run.sample.layers[1].name == "oxide");
  CHECK(run.sample.layers[1].material.band_gap_ev == 9.0);
  REQUIRE(run.lines.size() == 2);
  CHECK(run.lines[0].level->name == "Si 2p");
  CHECK(run.lines[0].from == "oxide");
  CHECK(test::close_to(run.lines[0].kinetic_energy_ev, 1387.2, test::abs(1e-9)));
  CHECK(run.lines[0].length_nm.at("oxide").value == 3.448);
  CHECK(test::close_to(run.lines[0].length_nm.at("oxide").sd(), 0.1724, test::rel(1e-12)));
  REQUIRE(run.references.size() == 1);
  CHECK(run.references[0].ratio.sd() == 0.01);
  CHECK(run.area_unit == AreaUnit::counts);
  REQUIRE(run.areas.size() == 2);
  CHECK(run.areas[1].area == 10000.0);
  CHECK(run.place_of(run.areas[1]) == folder.file("areas.csv") + ":3");
}

TEST_CASE("the same things may be said in other ways") {
  const ScratchFolder folder;
  folder.write("areas.csv", kAreas);
  CHECK(parse(folder, altered("source = \"Al Ka\"", "photon_energy_ev = 1253.6")).source.name == "Mg Ka");
  CHECK(parse(folder, altered("emission_deg = 34.0", "takeoff_deg = 56")).emission_deg == 34.0);
  CHECK_FALSE(parse(folder, altered("emission_deg = 34.0\nemission_sd_deg = 0.5\n", "")).emission_deg.has_value());
  CHECK(parse(folder, altered("{ value = 0.9329, sd = 0.01 }", "1")).references[0].ratio.value == 1.0);
  CHECK_FALSE(parse(folder, altered("{ value = 0.9329, sd = 0.01 }", "1.5"))
                  .references[0]
                  .ratio.standard_uncertainty.has_value());
  CHECK(parse(folder, altered("{ formula = \"SiO2\", density_g_cm3 = 2.2, band_gap_ev = 9.0 }", "\"SiO2\""))
            .sample.layers[1]
            .material.id == "sio2-thermal");
  CHECK(parse(folder, altered("{ formula = \"SiO2\", density_g_cm3 = 2.2, band_gap_ev = 9.0 }",
                              "{ id = \"sio2-thermal\", density_g_cm3 = 2.3 }"))
            .sample.layers[1]
            .material.density_g_cm3 == 2.3);
  const Run auger =
      parse(folder, altered("level = \"Si 2p\"\nfrom = \"oxide\"", "kinetic_energy_ev = 1610\nfrom = \"oxide\""));
  CHECK_FALSE(auger.lines[0].level.has_value());
  CHECK(auger.lines[0].kinetic_energy_ev == 1610.0);
  const Run shifted = parse(folder, altered("level = \"Si 2p\"\nfrom = \"oxide\"",
                                            "level = \"Si 2p\"\nbinding_energy_ev = 103.3\nfrom = \"oxide\""));
  CHECK(test::close_to(shifted.lines[0].kinetic_energy_ev, 1383.3, test::abs(1e-9)));
  const Run with_area = parse(
      folder,
      altered("from = \"substrate\"", "from = \"substrate\"\nreference_area = { value = 5000, relative_sd = 0.02 }"));
  CHECK(test::close_to(with_area.lines[1].reference_area->sd(), 100.0, test::rel(1e-12)));
  CHECK(parse(folder, "length_set = \"sio2-2004\"\n" + kRun).length_set == "sio2-2004");
}

TEST_CASE("the starter is a legal run and says that its numbers are invented") {
  const ScratchFolder folder;
  folder.write("areas.csv", starter_areas());
  const std::string text = starter_run("areas.csv");
  CHECK(contains(text, "invented"));
  const Run run = parse(folder, text);
  const ThicknessResults results = run_thickness(run);
  CHECK(results.results.size() == 2);
  for (const ThicknessResult& r : results.results) CHECK(r.thickness.has_value());
  // A table whose name needs quoting.
  folder.write("a \"b\" \\c.csv", starter_areas());
  CHECK(parse(folder, starter_run("a \"b\" \\c.csv")).areas.size() == run.areas.size());
}

TEST_CASE("every fault of a run is named with file and line and column and key") {
  struct Fault {
    std::string passage, replacement, needle, key, fact;
  };
  const std::vector<Fault> faults = {
      // values of the wrong kind
      {"title = \"Invented\"", "title = 7", "7", "title", "a number"},
      {"source = \"Al Ka\"", "source = 1486.6", "1486.6", "instrument.source", "a number"},
      {"emission_deg = 34.0", "emission_deg = \"34\"", "\"34\"", "instrument.emission_deg", "text"},
      {"emission_deg = 34.0", "emission_deg = true", "true", "instrument.emission_deg", "true or false"},
      {"emission_deg = 34.0", "emission_deg = nan", "nan", "instrument.emission_deg", "not a finite number"},
      {"emission_deg = 34.0", "emission_deg = inf", "inf", "instrument.emission_deg", "not a finite number"},
      {"emission_deg = 34.0", "emission_deg = [34]", "[34]", "instrument.emission_deg", "an array"},
      {"emission_deg = 34.0", "emission_deg = 2024-01-01", "2024-01-01", "instrument.emission_deg", "a date"},
      {"specimen = \"S-1\"", "specimen = true", "true", "record.specimen", "true or false"},
      {"substrate = \"Si\"", "substrate = 14", "14\n", "sample.substrate", "not a material"},
      {"length_nm = { oxide = { value = 3.448, relative_sd = 0.05 } }", "length_nm = 3.448", "3.448",
       "line[1].length_nm", "a number"},
      {"{ value = 0.9329, sd = 0.01 }", "\"0.9329\"", "\"0.9329\"", "reference[1].ratio", "is not a ratio"},
      // values out of range
      {"source = \"Al Ka\"", "source = \"Zz Ka\"", "\"Zz Ka\"", "instrument.source", "unknown photon source"},
      {"source = \"Al Ka\"", "photon_energy_ev = 5", "5\n", "instrument.photon_energy_ev",
       "out of range"},
      {"emission_deg = 34.0", "emission_deg = 95", "95", "instrument.emission_deg",
       "not an emission angle"},
      {"emission_deg = 34.0", "takeoff_deg = 0", "0\nemission_sd", "instrument.takeoff_deg",
       "not a take-off angle"},
      {"emission_sd_deg = 0.5", "emission_sd_deg = -0.5", "-0.5", "instrument.emission_sd_deg", "negative"},
      {"value = 3.448, relative_sd = 0.05", "value = 0", "{ value = 0 }", "line[1].length_nm.oxide", "not a length"},
      {"value = 3.448, relative_sd = 0.05", "value = 3, sd = -1", "{ value = 3, sd = -1 }", "line[1].length_nm.oxide",
       "negative"},
      {"{ value = 0.9329, sd = 0.01 }", "0", "0\n\n[data]", "reference[1].ratio", "not a ratio"},
      {"{ value = 0.9329, sd = 0.01 }", "-1", "-1\n\n[data]", "reference[1].ratio", "not a ratio"},
      {"density_g_cm3 = 2.2", "density_g_cm3 = -2.2", "{ formula", "sample.layer[2].material: density_g_cm3",
       "out of range"},
      {"from = \"substrate\"", "from = \"substrate\"\nreference_area = 0", "0\n\n[[reference]]",
       "line[2].reference_area", "not an area"},
      {"level = \"Si 2p\"\nfrom = \"oxide\"", "kinetic_energy_ev = -1\nfrom = \"oxide\"", "-1\nfrom",
       "line[1].kinetic_energy_ev", "not a kinetic energy"},
      {"area_unit = \"counts\"", "area_unit = \"cps\"", "\"cps\"", "data.area_unit", "unknown area unit"},
      // names of nothing
      {"substrate = \"Si\"", "substrate = \"Sii\"", "\"Sii\"", "sample.substrate: formula \"Sii\", character 1",
       "unknown element"},
      {"substrate = \"Si\"", "substrate = \"Al2O3\"", "\"Al2O3\"", "sample.substrate", "several catalogued materials"},
      {"level = \"Si 2p\"", "level = \"Si 9z\"", "\"Si 9z\"", "line[1].level", "no tabulated level"},
      {"from = \"oxide\"", "from = \"oxid\"", "\"oxid\"", "line[1].from", "no layer \"oxid\""},
      {"{ oxide = {", "{ oxid = {", "{ value = 3.448", "line[1].length_nm.oxid", "no layer \"oxid\""},
      {"film = \"film\"", "film = \"flim\"", "\"flim\"", "reference[1].film", "no line is labelled \"flim\""},
      {"substrate = \"bulk\"", "substrate = \"bluk\"", "\"bluk\"", "reference[1].substrate",
       "no line is labelled \"bluk\""},
      // keys that exclude or need one another
      {"source = \"Al Ka\"", "source = \"Al Ka\"\nphoton_energy_ev = 1486.6", "1486.6", "instrument.photon_energy_ev",
       "both source"},
      {"source = \"Al Ka\"\n", "", "[instrument]", "instrument.source", "neither source"},
      {"emission_deg = 34.0", "emission_deg = 34.0\ntakeoff_deg = 56", "56", "instrument.takeoff_deg",
       "both emission_deg"},
      {"level = \"Si 2p\"", "level = \"Si 2p\"\nkinetic_energy_ev = 1", "1\nfrom", "line[1].kinetic_energy_ev",
       "both level"},
      {"level = \"Si 2p\"\nfrom = \"oxide\"", "from = \"oxide\"", "[[line]]", "line[1].level", "neither level"},
      {"level = \"Si 2p\"\nfrom = \"oxide\"", "kinetic_energy_ev = 1\nbinding_energy_ev = 2\nfrom = \"oxide\"",
       "2\nfrom", "line[1].binding_energy_ev", "needs a level"},
      {"value = 3.448, relative_sd", "value = 3.448, sd = 0.1, relative_sd", "{ value = 3.448",
       "line[1].length_nm.oxide", "both sd and relative_sd"},
      {"value = 0.9329, sd = 0.01", "sd = 0.01", "{ sd = 0.01", "reference[1].ratio", "value is missing"},
      {"{ formula = \"SiO2\", ", "{ ", "{ density", "sample.layer[2].material", "neither formula nor id"},
      {"{ formula = \"SiO2\", ", "{ id = \"sio2-thermal\", formula = \"SiO2\", ", "{ id", "sample.layer[2].material",
       "both formula and id"},
      // what is missing
      {"label = \"film\"\n", "", "[[line]]", "line[1].label", "missing"},
      {"from = \"oxide\"\n", "", "[[line]]", "line[1].from", "missing"},
      {"name = \"oxide\"\n", "", "[[sample.layer]]\nmaterial = {", "sample.layer[2].name", "missing"},
      {"substrate = \"Si\"\n", "", "[sample]", "sample.substrate", "missing"},
      {"ratio = { value = 0.9329, sd = 0.01 }\n", "", "[[reference]]", "reference[1].ratio", "missing"},
      {"areas = \"areas.csv\"\n", "", "[data]", "data.areas", "missing"},
      // what stands twice
      {"label = \"bulk\"", "label = \"film\"", "\"film\"\nlevel = \"Si 2p\"\nfrom = \"substrate\"", "line[2].label",
       "two lines are labelled"},
      {"name = \"oxide\"", "name = \"contamination\"", "\"contamination\"\nmaterial = {", "sample.layer[2].name",
       "two layers are called"},
      {"name = \"oxide\"", "name = \"substrate\"", "\"substrate\"\nmaterial", "sample.layer[2].name",
       "cannot be called"},
      // tables that are none
      {"[instrument]\nsource = \"Al Ka\"\nemission_deg = 34.0\nemission_sd_deg = 0.5\n",
       "[[instrument]]\nsource = \"Al Ka\"\n", "[[instrument]]", "instrument", "an array"},
      {"[[reference]]", "[reference]", "[reference]", "reference", "a table"},
  };
  const ScratchFolder folder;
  folder.write("areas.csv", kAreas);
  for (const Fault& fault : faults) {
    const std::string text = altered(fault.passage, fault.replacement);
    CAPTURE(fault.replacement);
    CAPTURE(fault.key);
    const auto error = error_of<InputError>([&] { (void)parse(folder, text); });
    CHECK(error.where() == folder.file("run.toml") + ":" + position(text, fault.needle) + ": " + fault.key);
    CHECK_MESSAGE(contains(error.fact(), fault.fact), error.fact());
  }
}

TEST_CASE("a photon that cannot reach the level is a matter of physics and named in place") {
  const ScratchFolder folder;
  folder.write("areas.csv", kAreas);
  const std::string text = altered("level = \"Si 2p\"", "level = \"Si 1s\"");
  const auto error = error_of<DomainError>([&] { (void)parse(folder, text); });
  CHECK(error.where() == folder.file("run.toml") + ":" + position(text, "\"Si 1s\"") + ": line[1].level");
  CHECK(contains(error.fact(), "cannot reach"));
}

TEST_CASE("an unknown key is refused where it stands with the nearest known one") {
  struct Fault {
    std::string passage, replacement, needle, key, nearest;
  };
  const std::vector<Fault> faults = {
      {"title =", "titel =", "titel", "titel", "title"},
      {"[instrument]", "[instrumnt]", "instrumnt", "instrumnt", "instrument"},
      {"[[line]]", "[[lines]]\nlabel = \"x\"\n\n[[line]]", "lines", "lines", "line"},
      {"specimen", "speciman", "speciman", "record.speciman", "specimen"},
      {"emission_deg = 34.0", "emision_deg = 34.0", "emision_deg", "instrument.emision_deg", "emission_deg"},
      {"substrate = \"Si\"", "substrate = \"Si\"\nlayers = 1", "layers = 1", "sample.layers", "layer"},
      {"material = \"hydrocarbon\"", "material = \"hydrocarbon\"\nthicknes_nm = 1", "thicknes_nm",
       "sample.layer[1].thicknes_nm", ""},
      {"from = \"oxide\"", "from = \"oxide\"\nbinding_energy = 1", "binding_energy", "line[1].binding_energy",
       "binding_energy_ev"},
      {"film = \"film\"", "film = \"film\"\nratios = 1", "ratios", "reference[1].ratios", "ratio"},
      {"area_unit", "area_units", "area_units", "data.area_units", "area_unit"},
      {"band_gap_ev", "bandgap_ev", "bandgap_ev", "material.bandgap_ev", "band_gap_ev"},
      {"value = 0.9329, sd = 0.01", "value = 0.9329, std = 0.01", "std", "std", "sd"},
  };
  const ScratchFolder folder;
  folder.write("areas.csv", kAreas);
  for (const Fault& fault : faults) {
    const std::string text = altered(fault.passage, fault.replacement);
    CAPTURE(fault.key);
    const auto error = error_of<InputError>([&] { (void)parse(folder, text); });
    CHECK(contains(error.where(), folder.file("run.toml") + ":" + position(text, fault.needle) + ": "));
    CHECK(error.where().ends_with(fault.key));
    CHECK(contains(error.fact(), "unknown key"));
    if (!fault.nearest.empty()) CHECK(error.hint() == "did you mean \"" + fault.nearest + "\"?");
  }
}

TEST_CASE("text that is not TOML is named with line and column") {
  const ScratchFolder folder;
  for (const auto& [text, place] : std::vector<std::pair<std::string, std::string>>{
           {"a = \n", ":1:5"}, {"title = \"x\"\n[instrument\n", ":2:12"}, {"x = 1\nx = 2\n", ":2:"}}) {
    const auto error = error_of<InputError>([&] { (void)parse(folder, text); });
    CAPTURE(text);
    CHECK_MESSAGE(contains(error.where(), "run.toml" + place), error.where());
    CHECK(contains(error.hint(), "toml.io"));
  }
}

TEST_CASE("a run without its tables names the file and the table") {
  const ScratchFolder folder;
  folder.write("areas.csv", kAreas);
  for (const std::string table : {"instrument", "sample", "data"}) {
    std::string text = kRun;
    const std::size_t begin = text.find("[" + table + "]");
    std::size_t end = text.find("\n[", begin);
    if (table == "sample") end = text.find("\n[[line", begin);
    text.erase(begin, end == std::string::npos ? std::string::npos : end + 1 - begin);
    const auto error = error_of<InputError>([&] { (void)parse(folder, text); });
    CAPTURE(table);
    CHECK(error.where() == folder.file("run.toml"));
    CHECK(error.fact() == "the table [" + table + "] is missing");
  }
  std::string text = kRun;
  text.erase(text.find("[[line]]"), text.find("[[reference]]") - text.find("[[line]]"));
  CHECK(contains(error_of<InputError>([&] { (void)parse(folder, text); }).what(), "line"));
}

TEST_CASE("faults of the area table name the table and not the run") {
  const ScratchFolder folder;
  folder.write("run.toml", kRun);
  CHECK(error_of<InputError>([&] { (void)read_run_file(folder.file("run.toml")); }).where() ==
        folder.file("areas.csv"));
  folder.write("areas.csv", "line,area\nfilm,x\n");
  CHECK(error_of<InputError>([&] { (void)read_run_file(folder.file("run.toml")); }).where() ==
        folder.file("areas.csv") + ":2: area");
  folder.write("areas.csv", kAreas);
  CHECK(read_run_file(folder.file("run.toml")).areas.size() == 2);
}

}  // TEST_SUITE("run file")
