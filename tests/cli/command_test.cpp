#include "cli/command.hpp"

#include <algorithm>
#include <filesystem>
#include <nlohmann/json.hpp>
#include <string>
#include <utility>
#include <vector>

#include "pellicle/base/version.hpp"
#include "support/check_rows.hpp"
#include "support/close_to.hpp"
#include "support/scratch_folder.hpp"

using nlohmann::json;
using pellicle::test::close_to;
using pellicle::test::CommandResult;
using pellicle::test::contains;
using pellicle::test::pellicle_command;
using pellicle::test::read_whole_file;
using pellicle::test::ScratchFolder;
using pellicle::test::text_lines;
namespace fs = std::filesystem;

namespace {

using Words = std::vector<std::string>;

const Words kCommands = {"thickness", "lengths", "materials", "lines", "check", "new"};

Words operator+(Words a, const Words& b) {
  a.insert(a.end(), b.begin(), b.end());
  return a;
}

/// The command line of the worked example; length and reference ratio recalled [seah2004], areas invented.
const Words kSilica = {"thickness", "--film",           "SiO2",  "--substrate",       "Si",     "--line",
                       "Si 2p",     "--source",         "Al Ka", "--emission-deg",    "34",     "--film-area",
                       "20000",     "--substrate-area", "10000", "--reference-ratio", "0.9329", "--length-nm",
                       "3.448"};

Words without(Words words, const std::string& option) {
  const auto at = std::find(words.begin(), words.end(), option);
  REQUIRE(at != words.end());
  words.erase(at, at + 2);
  return words;
}

/// An error: one line on standard error that names the command, nothing on standard output.
void check_one_line(const CommandResult& r, int code, const std::string& part) {
  CHECK(r.code == code);
  CHECK(r.out.empty());
  CHECK_MESSAGE(text_lines(r.err).size() == 1, r.err);
  CHECK(r.err.starts_with("pellicle"));
  CHECK(r.err.ends_with("\n"));
  CHECK_MESSAGE(contains(r.err, part), r.err);
}

/// A done command: something on standard output and nothing said about it.
void check_done(const CommandResult& r) {
  CHECK(r.code == 0);
  CHECK_FALSE(r.out.empty());
  CHECK_MESSAGE(r.err.empty(), r.err);
}

/// A run of three spots of which the second lacks a line. Invented numbers.
std::string write_run(const ScratchFolder& folder, const std::string& areas) {
  folder.write("areas.csv", areas);
  return folder.write("run.toml", R"(title = "Invented"
[instrument]
source = "Al Ka"
emission_deg = 0
emission_sd_deg = 1
[sample]
substrate = "Si"
[[sample.layer]]
name = "oxide"
material = "SiO2"
[[line]]
label = "ox"
level = "Si 2p"
from = "oxide"
length_nm = { oxide = { value = 3.448, sd = 0.1 } }
[[line]]
label = "si"
level = "Si 2p"
from = "substrate"
[[reference]]
film = "ox"
substrate = "si"
ratio = { value = 0.9329, sd = 0.01 }
[data]
areas = "areas.csv"
)");
}

const std::string kGoodAreas = "spot,line,area,area_sd\n1,ox,100,2\n1,si,200,3\n2,ox,110,2\n2,si,190,3\n";
const std::string kOneBadSpot = "spot,line,area,area_sd\n1,ox,100,2\n1,si,200,3\n2,ox,110,2\n";
const std::string kAllBad = "spot,line,area,area_sd\n1,ox,100,2\n2,si,190,3\n";

}  // namespace

TEST_SUITE("command line") {

TEST_CASE("lengths of silica come as scripts read them") {
  const CommandResult r = pellicle_command({"lengths", "--material", "SiO2", "--energy-ev", "1387.1", "--json"});
  check_done(r);
  const json d = json::parse(r.out);
  CHECK(d.at("schema") == "pellicle.result/1");
  CHECK(d.at("command") == "lengths");
  const json& first = d.at("results").at(0);
  CHECK(first.at("material") == "SiO2");
  CHECK(first.at("energy_ev") == 1387.1);
  CHECK(first.at("imfp_nm").at("TPP-2M").is_number());
  CHECK(first.at("imfp_nm").at("S1").is_number());
  CHECK(first.at("attenuation_length_nm").at("value").is_number());
  CHECK(first.at("attenuation_length_nm").at("sd").is_number());
  CHECK(first.at("attenuation_models_nm").at("S3").is_number());
}

TEST_CASE("the thickness of the worked example comes as scripts read it") {
  const CommandResult r = pellicle_command(kSilica + Words{"--json"});
  check_done(r);
  const json d = json::parse(r.out);
  CHECK(d.at("command") == "thickness");
  CHECK(d.at("version") == std::string(pellicle::version()));
  CHECK(d.at("inputs_sha256").get<std::string>().size() == 64);
  CHECK(close_to(d.at("results").at(0).at("thickness_nm").at("value"), 3.27429,
                 pellicle::test::abs(1e-5)));  // seah2004, recalled
}

TEST_CASE("the same run gives the same bytes") {
  CHECK(pellicle_command(kSilica + Words{"--json"}).out == pellicle_command(kSilica + Words{"--json"}).out);
}

TEST_CASE("a take-off angle is the complement of the emission angle") {
  const Words by_takeoff = without(kSilica, "--emission-deg") + Words{"--takeoff-deg", "56", "--json"};
  const json d = json::parse(pellicle_command(by_takeoff).out);
  CHECK(d.at("results").at(0).at("emission_deg") == 34.0);
  CHECK(close_to(d.at("results").at(0).at("thickness_nm").at("value"), 3.27429, pellicle::test::abs(1e-5)));
}

TEST_CASE("uncertainties given on the command line make the budget") {
  // The worked budget of the check tables: length 10 %, ratio 5 %, angle 1 degree, areas counted [jcgm100].
  const CommandResult r =
      pellicle_command(kSilica + Words{"--length-nm-sd", "0.3448", "--reference-ratio-sd", "0.046645",
                                       "--emission-deg-sd", "1", "--area-unit", "counts", "--json"});
  check_done(r);
  const json result = json::parse(r.out).at("results").at(0);
  CHECK(close_to(result.at("gum_nm").at("sd"), 0.34462, pellicle::test::abs(5e-6)));
  // Length and ratio lognormal: the Monte Carlo figures of the same table, mean 3.277, sd 0.345, 2.653 to 4.004.
  const json& t = result.at("thickness_nm");
  CHECK(t.at("interval_from") == "monte-carlo");
  CHECK(close_to(result.at("monte_carlo_nm").at("mean"), 3.277, pellicle::test::abs(0.01)));
  CHECK(close_to(t.at("sd"), 0.345, pellicle::test::abs(0.01)));
  CHECK(close_to(t.at("low95"), 2.653, pellicle::test::abs(0.01)));
  CHECK(close_to(t.at("high95"), 4.004, pellicle::test::abs(0.01)));
}

TEST_CASE("a calibrated set or a prediction stands in for a length") {
  const Words bare = without(kSilica, "--length-nm");
  const json set = json::parse(pellicle_command(bare + Words{"--length-set", "sio2-2005", "--json"}).out);
  CHECK(set.at("results").at(0).at("length_nm").at("value") == 3.485);  // seah2005, recalled
  const json predicted = json::parse(pellicle_command(bare + Words{"--json"}).out);
  CHECK(contains(predicted.at("results").at(0).at("length_nm").at("origin"), "predicted"));
  check_one_line(pellicle_command(kSilica + Words{"--length-set", "sio2-2005"}), 3, "--length-set");
}

TEST_CASE("reference areas stand in for their ratio") {
  const Words bare = without(kSilica, "--reference-ratio");
  const json d = json::parse(
      pellicle_command(bare + Words{"--reference-film-area", "9329", "--reference-substrate-area", "10000", "--json"})
          .out);
  CHECK(close_to(d.at("results").at(0).at("thickness_nm").at("value"), 3.27429, pellicle::test::abs(1e-5)));
  check_one_line(pellicle_command(bare + Words{"--reference-film-area", "9329"}), 3, "--reference-substrate-area");
  check_one_line(pellicle_command(kSilica + Words{"--reference-film-area", "9329", "--reference-substrate-area", "1"}),
                 3, "--reference-ratio");
}

TEST_CASE("help begins with the purpose and goes on with examples") {
  for (const std::string& name : kCommands) {
    const CommandResult r = pellicle_command({name, "--help"});
    CAPTURE(name);
    check_done(r);
    const auto lines = text_lines(r.out);
    REQUIRE(lines.size() > 5);
    CHECK(lines[0].ends_with("."));
    CHECK(lines[0].size() > 30);
    CHECK(lines[1].empty());
    CHECK(lines[2] == "Examples");
    CHECK(contains(lines[3], "pellicle " + name));
    CHECK(contains(r.out, "--help"));
  }
  const CommandResult all = pellicle_command({"--help"});
  check_done(all);
  CHECK(text_lines(all.out)[2] == "Examples");
  for (const std::string& name : kCommands) CHECK(contains(all.out, "pellicle ") == contains(all.out, name));
}

TEST_CASE("every example of the help runs as it stands") {
  for (const std::string& name : kCommands) {
    const auto lines = text_lines(pellicle_command({name, "--help"}).out);
    for (std::size_t i = 3; i < lines.size() && !lines[i].empty(); ++i) {
      std::string line = lines[i];
      while (line.ends_with("\\")) {
        line.pop_back();
        const std::string& next = lines[++i];
        line += next.substr(next.find_first_not_of(' '));
      }
      const std::size_t begin = line.find("pellicle ");
      if (begin != 2) continue;  // a remark
      line = line.substr(begin + 9, line.find("   ", begin) - begin - 9);
      line = line.substr(0, line.find(" && "));
      Words words;
      std::string word;
      bool quoted = false;
      for (const char c : line + " ") {
        if (c == '"')
          quoted = !quoted;
        else if (c != ' ' || quoted)
          word += c;
        else if (!word.empty())
          words.push_back(std::exchange(word, ""));
      }
      const ScratchFolder folder;
      const bool needs_run = name == "check" || std::any_of(words.begin(), words.end(),
                                                            [](const std::string& w) { return w == "coupon.toml"; });
      if (needs_run && name != "new") REQUIRE(pellicle_command({"new", "coupon.toml"}, folder.path()).code == 0);
      for (const char* table : {"week-1.csv", "week-2.csv"}) {
        if (needs_run && name != "new") std::filesystem::copy_file(folder.file("coupon.csv"), folder.file(table));
      }
      CAPTURE(line);
      const CommandResult r = pellicle_command(words, folder.path());
      CHECK_MESSAGE(r.code == 0, r.err);
    }
  }
}

TEST_CASE("the version is printed alone") {
  const CommandResult r = pellicle_command({"--version"});
  check_done(r);
  CHECK(r.out == "pellicle " + std::string(pellicle::version()) + "\n");
}

TEST_CASE("wrong usage exits with two and one line") {
  check_one_line(pellicle_command({"thicknes"}), 2, "--help");
  check_one_line(pellicle_command({"--frobnicate"}), 2, "--help");
  check_one_line(pellicle_command({"lengths", "--frobnicate"}), 2, "pellicle lengths --help");
  check_one_line(pellicle_command({"lengths", "--energy-ev", "many"}), 2, "energy-ev");
  check_one_line(pellicle_command({"thickness", "--emission-deg"}), 2, "emission-deg");
  check_one_line(pellicle_command({"check"}), 2, "run");
  check_one_line(pellicle_command({"new"}), 2, "run");
  check_one_line(pellicle_command({"thickness", "run.toml", "--film", "SiO2"}), 2, "--film");
  check_one_line(pellicle_command({"thickness", "run.toml", "--json", "--csv"}), 2, "--csv");
  check_one_line(pellicle_command({"lines", "Si", "extra"}), 2, "extra");
}

TEST_CASE("the bare command shows its help and exits with two") {
  const CommandResult r = pellicle_command({});
  CHECK(r.code == 2);
  CHECK(contains(r.out, "Examples"));
}

TEST_CASE("wrong input exits with three and one line that names the option") {
  check_one_line(pellicle_command({"lengths", "--material", "SiO2"}), 3, "--energy-ev");
  check_one_line(pellicle_command({"lengths", "--energy-ev", "1000"}), 3, "--material");
  check_one_line(pellicle_command({"lengths", "--material", "Al2O3", "--energy-ev", "1000"}), 3, "al2o3-amorphous");
  check_one_line(pellicle_command({"lengths", "--material", "SiO2", "--energy-ev", "-5"}), 3, "energy_ev");
  check_one_line(pellicle_command({"lengths", "--material", "SiO2", "--energy-ev", "1", "--line", "Si 2p"}), 3,
                 "--line");
  check_one_line(pellicle_command({"lengths", "--material", "Sx", "--energy-ev", "1000"}), 3, "character 1");
  check_one_line(pellicle_command({"lines"}), 3, "no element");
  check_one_line(pellicle_command({"lines", "Al 3d"}), 3, "Al 2p");
  check_one_line(pellicle_command({"lines", "Si", "--source", "Zz Ka"}), 3, "Al Ka");
  check_one_line(pellicle_command({"materials", "unobtainium"}), 3, "unobtainium");
  for (const std::string option : {"--film", "--substrate", "--line", "--source", "--emission-deg", "--film-area",
                                   "--substrate-area", "--reference-ratio"}) {
    check_one_line(pellicle_command(without(kSilica, option)), 3, option);
  }
  check_one_line(pellicle_command(without(kSilica, "--film-area") + Words{"--film-area", "-1"}), 3, "--film-area");
  check_one_line(pellicle_command(without(kSilica, "--film") + Words{"--film", "Al2O3"}), 3, "--film");
  check_one_line(pellicle_command(without(kSilica, "--emission-deg") + Words{"--emission-deg", "95"}), 3, "emission");
  check_one_line(pellicle_command(without(kSilica, "--length-nm") + Words{"--length-nm", "0"}), 3, "--length-nm");
  check_one_line(pellicle_command(without(kSilica, "--reference-ratio") + Words{"--reference-ratio", "-1"}), 3,
                 "reference ratio");
  check_one_line(pellicle_command(kSilica + Words{"--film-area-sd", "-1"}), 3, "--film-area-sd");
  check_one_line(pellicle_command(without(kSilica, "--length-nm") + Words{"--length-nm-sd", "1"}), 3, "--length-nm-sd");
  check_one_line(pellicle_command(kSilica + Words{"--takeoff-deg", "56"}), 3, "--takeoff-deg");
  check_one_line(pellicle_command(kSilica + Words{"--area-unit", "cps"}), 3, "--area-unit");
  check_one_line(pellicle_command(kSilica + Words{"--photon-energy-ev", "1486.6"}), 3, "--photon-energy-ev");
}

TEST_CASE("files that cannot be read exit with three and one line that names them") {
  const ScratchFolder folder;
  check_one_line(pellicle_command({"thickness", "absent.toml"}, folder.path()), 3, "absent.toml");
  check_one_line(pellicle_command({"check", "absent.toml"}, folder.path()), 3, "absent.toml");
  write_run(folder, "spot,line,area\n1,ox,x\n");
  check_one_line(pellicle_command({"thickness", "run.toml"}, folder.path()), 3, "areas.csv:2: area");
  folder.write("bad.toml", "[instrument]\nsource = \"Al Ka\"\nemision_deg = 3\n");
  check_one_line(pellicle_command({"check", "bad.toml"}, folder.path()), 3, "bad.toml:3:1: instrument.emision_deg");
  folder.write("latin.toml", "title = \"\xE9\"\n");
  check_one_line(pellicle_command({"check", "latin.toml"}, folder.path()), 3, "UTF-8");
}

TEST_CASE("no answer exits with one and one line") {
  const CommandResult far = pellicle_command({"lengths", "--material", "SiO2", "--energy-ev", "20000"});
  CHECK(far.code == 1);
  CHECK(text_lines(far.err).size() == 1);
  CHECK(contains(far.err, "no attenuation-length model holds"));
  CHECK(contains(far.out, "TPP-2M"));  // which does hold there
  check_one_line(pellicle_command({"lengths", "--material", "Al", "--line", "Al 1s", "--source", "Al Ka"}), 1,
                 "cannot reach");
  const CommandResult r = pellicle_command(without(kSilica, "--substrate-area") + Words{"--substrate-area", "0"});
  CHECK(r.code == 1);
  CHECK(text_lines(r.err).size() == 1);
  CHECK(contains(r.err, "no area"));
  CHECK(contains(r.out, "no thickness"));
}

TEST_CASE("a new run passes check and gives thicknesses and is never overwritten") {
  const ScratchFolder folder;
  const CommandResult made = pellicle_command({"new", "coupon.toml"}, folder.path());
  CHECK(made.code == 0);
  CHECK(made.out.empty());
  CHECK(contains(made.err, "coupon.toml"));
  CHECK(folder.entries() == 2);
  check_done(pellicle_command({"check", "coupon.toml"}, folder.path()));
  check_done(pellicle_command({"check", "coupon.toml", "--strict"}, folder.path()));
  const CommandResult r = pellicle_command({"thickness", "coupon.toml", "--json"}, folder.path());
  check_done(r);
  CHECK(json::parse(r.out).at("results").size() == 2);

  const std::string mine = folder.write("coupon.toml", "mine");
  check_one_line(pellicle_command({"new", "coupon.toml"}, folder.path()), 3, "exists already");
  CHECK(read_whole_file(mine) == "mine");
  fs::remove(mine);
  const std::string table = folder.write("coupon.csv", "my table");
  check_one_line(pellicle_command({"new", "coupon.toml"}, folder.path()), 3, "coupon.csv");
  CHECK(read_whole_file(table) == "my table");
  CHECK_FALSE(fs::exists(mine));
  check_one_line(pellicle_command({"new", "coupon.txt"}, folder.path()), 3, ".toml");
  const CommandResult quiet = pellicle_command({"new", "quiet.toml", "--quiet"}, folder.path());
  CHECK(quiet.code == 0);
  CHECK(quiet.err.empty());
}

TEST_CASE("results leave as text or JSON or CSV") {
  const ScratchFolder folder;
  write_run(folder, kGoodAreas);
  const CommandResult text = pellicle_command({"thickness", "run.toml"}, folder.path());
  check_done(text);
  CHECK(contains(text.out, "mean of 2"));
  CHECK(contains(text.out, "flat, uniform, continuous film"));
  const CommandResult csv = pellicle_command({"thickness", "run.toml", "--csv"}, folder.path());
  check_done(csv);
  const auto lines = text_lines(csv.out);
  REQUIRE(lines.size() == 3);
  CHECK(lines[0].starts_with("spot,emission_deg,layer,method,film_line,substrate_line,thickness_nm,sd_nm"));
  const json d = json::parse(pellicle_command({"thickness", "run.toml", "--json"}, folder.path()).out);
  const auto field = pellicle::test::split(lines[1], ',');
  CHECK(close_to(std::stod(field.at(6)), d.at("results").at(0).at("thickness_nm").at("value"),
                 pellicle::test::rel(1e-15)));
  CHECK(d.at("summary").at(0).at("count") == 2);
}

TEST_CASE("a result goes to the file of --out whole and standard output stays empty") {
  const ScratchFolder folder;
  write_run(folder, kGoodAreas);
  const CommandResult r = pellicle_command({"thickness", "run.toml", "--json", "--out", "result.json"}, folder.path());
  CHECK(r.code == 0);
  CHECK(r.out.empty());
  CHECK(r.err == "wrote result.json\n");
  CHECK(json::parse(read_whole_file(folder.file("result.json"))).at("results").size() == 2);
  const CommandResult quiet =
      pellicle_command({"thickness", "run.toml", "--json", "--out", "result.json", "--quiet"}, folder.path());
  CHECK(quiet.code == 0);
  CHECK(quiet.err.empty());
  check_one_line(pellicle_command({"thickness", "run.toml", "--out", "absent/result.json"}, folder.path()), 3,
                 "absent/result.json");
  // "-" is standard output.
  check_done(pellicle_command({"thickness", "run.toml", "--out", "-"}, folder.path()));
}

TEST_CASE("a batch with some failed rows is done and says so and strict makes it fail") {
  const ScratchFolder folder;
  write_run(folder, kOneBadSpot);
  const CommandResult r = pellicle_command({"thickness", "run.toml", "--json"}, folder.path());
  CHECK(r.code == 0);
  CHECK(text_lines(r.err).size() == 1);
  CHECK(contains(r.err, "1 of 2 results failed"));
  CHECK(json::parse(r.out).at("results").at(1).at("thickness_nm").is_null());
  CHECK(pellicle_command({"thickness", "run.toml", "--strict"}, folder.path()).code == 1);
  CHECK(pellicle_command({"check", "run.toml", "--strict"}, folder.path()).code == 1);
  CHECK(pellicle_command({"check", "run.toml"}, folder.path()).code == 0);
  const CommandResult quiet = pellicle_command({"thickness", "run.toml", "--quiet"}, folder.path());
  CHECK(quiet.code == 0);
  CHECK(quiet.err.empty());
  write_run(folder, kAllBad);
  CHECK(pellicle_command({"thickness", "run.toml"}, folder.path()).code == 1);
  CHECK(pellicle_command({"check", "run.toml"}, folder.path()).code == 1);
  write_run(folder, kGoodAreas);
  CHECK(pellicle_command({"thickness", "run.toml", "--strict"}, folder.path()).code == 0);
}

TEST_CASE("strict fails on a finding of error grade") {
  // 85 degrees: no constant length holds there [cumpson1997].
  const Words grazing = without(kSilica, "--emission-deg") + Words{"--emission-deg", "85"};
  CHECK(pellicle_command(grazing).code == 0);
  CHECK(pellicle_command(grazing + Words{"--strict"}).code == 1);
}

TEST_CASE("a run is read from standard input") {
  const ScratchFolder folder;
  write_run(folder, kGoodAreas);
  const std::string text = read_whole_file(folder.file("run.toml"));
  const CommandResult r = pellicle_command({"thickness", "-", "--json"}, folder.path(), text);
  check_done(r);
  CHECK(json::parse(r.out).at("results").size() == 2);
  check_done(pellicle_command({"check", "-"}, folder.path(), text));
  // Errors name standard input where there is no file.
  check_one_line(pellicle_command({"check", "-"}, folder.path(), "titel = 1\n"), 3, ":1:1: titel");
  check_one_line(pellicle_command({"check", "-"}, folder.path(), "\xFF"), 3, "standard input:1");
}

TEST_CASE("lists are printed and found") {
  const CommandResult materials = pellicle_command({"materials", "--json"});
  check_done(materials);
  CHECK(json::parse(materials.out).at("results").size() >= 200);
  const CommandResult alumina = pellicle_command({"materials", "Al2O3"});
  check_done(alumina);
  CHECK(contains(alumina.out, "al2o3-amorphous"));
  CHECK(contains(pellicle_command({"materials", "ALUMINIUM OXIDE"}).out, "al2o3-corundum"));
  check_done(pellicle_command({"lines", "Si", "--source", "Al Ka"}));
  CHECK(json::parse(pellicle_command({"lines", "--sources", "--json"}).out).at("results").at(0).at("name") == "Mg Ka");
  const CommandResult sets = pellicle_command({"lengths", "--sets"});
  check_done(sets);
  CHECK(contains(sets.out, "3.448"));
  CHECK(contains(sets.out, "3.485"));
  const json two =
      json::parse(pellicle_command({"lengths", "--material", "SiO2,Si", "--energy-ev", "1000,1400", "--json"}).out);
  CHECK(two.at("results").size() == 4);
  const json by_line = json::parse(
      pellicle_command({"lengths", "--material", "SiO2", "--line", "Si 2p", "--source", "Al Ka", "--json"}).out);
  CHECK(close_to(by_line.at("results").at(0).at("energy_ev"), 1387.2, pellicle::test::abs(1e-9)));
}

TEST_CASE("an inline material needs no catalogue") {
  const json d = json::parse(pellicle_command({"lengths", "--material", "Al2O3", "--density-g-cm3", "3.1",
                                               "--band-gap-ev", "7", "--energy-ev", "1400", "--json"})
                                 .out);
  CHECK(d.at("results").at(0).at("density_g_cm3") == 3.1);
  CHECK(d.at("results").at(0).at("band_gap_ev") == 7.0);
  const json film =
      json::parse(pellicle_command(without(kSilica, "--length-nm") +
                                   Words{"--film-density-g-cm3", "2.3", "--film-band-gap-ev", "8.9", "--json"})
                      .out);
  CHECK(film.at("inputs").at("layers").at(0).at("material").at("density_g_cm3") == 2.3);
}

TEST_CASE("a full standard output is an error and not a silent loss") {
  if (!fs::exists("/dev/full")) return;  // only Linux has this device
  for (const Words& words : {kSilica, kSilica + Words{"--json"}, Words{"materials"}, Words{"lines", "--sources"}}) {
    check_one_line(pellicle_command(words, ".", "", "/dev/full"), 3, "standard output");
  }
}

}  // TEST_SUITE("command line")
