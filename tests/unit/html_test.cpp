#include "pellicle/report/html.hpp"

#include <algorithm>
#include <cmath>
#include <nlohmann/json.hpp>
#include <regex>
#include <string>
#include <vector>

#include "pellicle/base/number.hpp"
#include "pellicle/base/version.hpp"
#include "pellicle/io/result_json.hpp"
#include "support/close_to.hpp"
#include "support/markup.hpp"
#include "support/sample_run.hpp"

using namespace pellicle;
using nlohmann::json;
using test::area;
using test::contains;
using test::count_of;
using test::silica_run;

namespace {

/// Spots on silica with counts, backgrounds and a stated scale. Invented.
Run spots_run(std::size_t count) {
  Run run = silica_run();
  run.area_unit = AreaUnit::counts;
  run.emission_sd_deg = 0.5;
  run.lines[1].length_nm["oxide"] = Quantity(3.448, 0.1);
  run.references[0].ratio = Quantity(0.9329, 0.02);
  run.areas.clear();
  for (std::size_t i = 0; i < count; ++i) {
    const std::string spot = "s" + std::to_string(i + 1);
    run.areas.push_back(area(spot, "Si 2p oxide", 20000.0 + 300.0 * std::sin(static_cast<double>(i))));
    run.areas.push_back(area(spot, "Si 2p metal", 10000.0));
  }
  for (AreaRow& row : run.areas) row.counting.background_counts = 900.0;
  return run;
}

std::string html_of(const Run& run, const ReportOrigin& origin = {}) {
  return thickness_html(run, run_thickness(run), origin);
}

/// The whole text of a number as the report carries it.
std::string data_of(const json& number) { return "<data value=\"" + number_text(number.get<double>()) + "\">"; }

/// Part of the report between two headings.
std::string section(const std::string& html, const std::string& id) {
  const std::size_t begin = html.find("<h2 id=\"" + id + "\">");
  REQUIRE(begin != std::string::npos);
  return html.substr(begin, html.find("</section>", begin) - begin);
}

}  // namespace

TEST_SUITE("report") {

TEST_CASE("a report has its sections in the order of the reporting standard") {
  const std::string html = html_of(spots_run(3));
  std::size_t last = html.find("class=\"answer\"");
  CHECK(last != std::string::npos);
  int number = 0;
  for (const char* id : {"specimen", "instrument", "areas", "lengths", "reference", "densities", "results", "budget",
                         "findings", "cautions", "not-stated", "repeat"}) {
    const std::size_t at =
        html.find("<h2 id=\"" + std::string(id) + "\"><span class=\"count\">" + std::to_string(++number) + "</span>");
    REQUIRE_MESSAGE(at != std::string::npos, id);
    CHECK_MESSAGE(at > last, id);
    last = at;
  }
  CHECK(count_of(html, "<h2") == 12);
  CHECK(count_of(html, "<h1") == 1);
}

TEST_CASE("the numbers of a report are those of the JSON result") {
  for (const IntervalMethod method : {IntervalMethod::gum, IntervalMethod::monte_carlo}) {
    Run run = spots_run(3);
    run.uncertainty.method = method;
    run.uncertainty.draws = 20000;
    const ThicknessResults all = run_thickness(run);
    const std::string html = thickness_html(run, all);
    const json doc = json::parse(thickness_json(run, all));
    const std::string results = section(html, "results");
    for (const json& r : doc["results"]) {
      const json& t = r["thickness_nm"];
      for (const json& number :
           {t["value"], t["sd"], t["low95"], t["high95"], r["repeatability_nm"], r["areal_density_ug_cm2"]["value"],
            r["areal_density_ug_cm2"]["sd"], r["emitting_atoms_per_nm2"]["value"]}) {
        CHECK_MESSAGE(contains(results, data_of(number)), number.dump());
      }
      if (method == IntervalMethod::monte_carlo) {
        for (const char* key : {"mean", "sd", "low95", "high95"})
          CHECK_MESSAGE(contains(results, data_of(r["monte_carlo_nm"][key])), key);
        CHECK(contains(results, data_of(r["gum_nm"]["low95"])));
      }
      CHECK(contains(section(html, "areas"), data_of(r["film_area"]["sd"])));
    }
    const json& s = doc["summary"][0];
    for (const char* key : {"mean_nm", "standard_deviation_nm", "repeatability_of_mean_nm", "scale_nm"}) {
      CHECK_MESSAGE(contains(results, data_of(s[key])), key);
    }
    CHECK(contains(html.substr(0, html.find("<main>")), data_of(s["mean_nm"])));
    CHECK(contains(section(html, "lengths"), data_of(doc["results"][0]["length_nm"]["value"])));
    CHECK(contains(section(html, "reference"), data_of(doc["results"][0]["reference_ratio"]["sd"])));
    // The budget shown is that of one result, whole.
    const std::string budget = section(html, "budget");
    const auto whole = [&](const json& r) {
      return std::all_of(r["budget"].begin(), r["budget"].end(), [&](const json& row) {
        return contains(budget, data_of(row["contribution_nm"])) && contains(budget, data_of(row["share"]));
      });
    };
    CHECK(std::count_if(doc["results"].begin(), doc["results"].end(), whole) == 1);
  }
}

TEST_CASE("a single result leads the report with its interval and method") {
  const Run run = spots_run(1);
  const std::string html = html_of(run);
  const std::string brief = html.substr(0, html.find("<main>"));
  CHECK(std::regex_search(
      brief,
      std::regex(
          "class=\"answer\"><data value=\"[0-9.]+\">[0-9.]+</data> ± <data value=\"[0-9.]+\">[0-9.]+</data> nm")));
  CHECK(contains(brief, "(GUM)"));
  CHECK(contains(brief, "href=\"#findings\""));
}

TEST_CASE("text from outside stays text") {
  Run run = spots_run(2);
  const std::string evil = "</title><script>alert(1)</script><img src=x onerror='x'>\"&";
  run.title = evil;
  run.record = {{"specimen", evil}, {"background", evil}};
  for (AreaRow& row : run.areas) {
    row.spot += evil;
    if (row.line == "Si 2p oxide") row.line += evil;
  }
  run.lines[0].label += evil;
  run.lines[0].components[0].label += evil;
  run.references[0].film += evil;
  run.sample.layers[0].name = evil;
  run.lines[0].from = evil;
  run.lines[1].length_nm = {{evil, Quantity(3.448, 0.1)}};
  run.tables = {evil};
  const std::string html = html_of(run, {evil, evil});
  CHECK(test::unbalanced_tag(html) == "");
  for (const char* bad : {"<script", "<img", "onerror='", "</title><"}) CHECK_MESSAGE(count_of(html, bad) == 0, bad);
  CHECK(contains(html, "&lt;script&gt;alert(1)&lt;/script&gt;"));
  CHECK(count_of(html, "<title>") == 1 + count_of(html, "<svg"));
}

TEST_CASE("bytes that are no text become marks") {
  Run run = spots_run(1);
  run.title =
      "a\x01\xFF\xC3(\xE2\x80\xAE"
      "b\n";
  const std::string html = html_of(run);
  CHECK(contains(html,
                 "<h1>a\xEF\xBF\xBD\xEF\xBF\xBD\xEF\xBF\xBD(\xEF\xBF\xBD"
                 "b </h1>"));
}

TEST_CASE("a report needs nothing but itself") {
  const std::string html = html_of(spots_run(3), {"digest", "pellicle thickness run.toml"});
  CHECK(html.starts_with("<!DOCTYPE html>\n<html lang=\"en\">"));
  CHECK(test::unbalanced_tag(html) == "");
  CHECK(contains(html, "default-src 'none'"));
  CHECK(contains(html, "@media print"));
  for (const char* bad : {"src=", "url(", "@import", "<link", "<script", "https:"})
    CHECK_MESSAGE(!contains(html, bad), bad);
  CHECK(count_of(html, "http:") == count_of(html, "http://www.w3.org/2000/svg"));
  CHECK(count_of(html, "href=") == count_of(html, "href=\"#"));
  CHECK(count_of(html, "<svg") == count_of(html, "role=\"img\""));
  CHECK(count_of(html, "<table") == count_of(html, "<caption>"));
}

TEST_CASE("the same inputs give the same report") {
  CHECK(html_of(spots_run(3), {"digest", "command"}) == html_of(spots_run(3), {"digest", "command"}));
}

TEST_CASE("what is absent reads not stated and is listed") {
  Run run = spots_run(1);
  run.record = {{"specimen", "S-1"}, {"fit_model", "two doublets"}};
  run.emission_sd_deg.reset();
  const std::string html = html_of(run);
  CHECK(contains(section(html, "specimen"), "<dd>S-1</dd>"));
  CHECK(contains(section(html, "areas"), "<dd>two doublets</dd>"));
  CHECK(count_of(section(html, "specimen"), "not stated") == 4);
  const std::string absent = section(html, "not-stated");
  for (const char* item :
       {"analyst", "date of measurement", "instrument", "pass energy", "background", "charge reference",
        "check for X-ray damage", "angle between X-rays and analyser", "uncertainty of the emission angle"}) {
    CHECK_MESSAGE(contains(absent, item), item);
  }
  CHECK(!contains(absent, "specimen"));
  CHECK(!contains(absent, "fit model"));
  CHECK(contains(absent, "assumed to be 1"));
}

TEST_CASE("both angle conventions and all origins and densities are printed") {
  Run run = spots_run(1);
  run.geometry.source_analyser_angle_deg = 54.7;
  run.geometry.acceptance_half_angle_deg = 6.0;
  const std::string html = html_of(run);
  const std::string instrument = section(html, "instrument");
  CHECK(contains(instrument, "<dd>34°</dd>"));
  CHECK(contains(instrument, "<dd>56°</dd>"));
  CHECK(contains(instrument, "Al Ka, 1486.6 eV"));
  CHECK(contains(instrument, "54.7°"));
  CHECK(contains(instrument, "half angle 6°"));
  CHECK(contains(section(html, "lengths"), "EAL"));
  CHECK(contains(section(html, "lengths"), "given"));
  CHECK(contains(section(html, "densities"), "g/cm³"));
  CHECK(contains(section(html, "results"), "t = L cos θ ln(1 + R/R₀); signals averaged over the acceptance cone"));
  run.lines[1].length_nm.clear();
  CHECK(contains(section(html_of(run), "lengths"), "200 to 2000 eV [seah2001elastic]"));
}

TEST_CASE("missing uncertainties are named where they are missing") {
  Run run = silica_run();
  const std::string html = html_of(run);
  CHECK(contains(section(html, "reference"), "uncertainty not given"));
  CHECK(contains(section(html, "lengths"), "not given"));
  CHECK(contains(html.substr(0, html.find("<main>")), "thickness scale is not stated"));
  CHECK(contains(section(html, "budget"), "thickness scale is not stated"));
}

TEST_CASE("bounds and failures say what they are") {
  Run run = spots_run(3);
  run.areas[0].area.reset();
  run.areas.pop_back();
  const ThicknessResults all = run_thickness(run);
  const std::string html = thickness_html(run, all);
  const std::string results = section(html, "results");
  CHECK(contains(results, "≤ <data value=\"" + number_text(all.results[0].bound->at95_nm) + "\">"));
  CHECK(contains(results, "95 % bound"));
  CHECK(contains(results, "has no area of line"));
  CHECK(contains(section(html, "findings"), "1 result has no answer"));
  CHECK(contains(html.substr(0, html.find("<main>")), "1 bound, 1 without an answer"));

  Run alone = spots_run(1);
  alone.areas[0].area.reset();
  CHECK(contains(html_of(alone), "class=\"answer\">at most <data"));
  alone.areas.pop_back();
  const std::string none = html_of(alone);
  CHECK(contains(none, "class=\"answer\">no thickness</p>"));
  CHECK(contains(section(none, "budget"), "No budget"));
  CHECK(test::unbalanced_tag(none) == "");
}

TEST_CASE("findings are grouped by severity from the worst and each sentence stands once") {
  Run run = spots_run(2);
  run.emission_deg = 82.0;
  run.emission_sd_deg.reset();
  const ThicknessResults all = run_thickness(run);
  const std::string html = thickness_html(run, all);
  const std::string findings = section(html, "findings");
  const std::size_t errors = findings.find("<caption>Errors"), warnings = findings.find("<caption>Warnings"),
                    notes = findings.find("<caption>Notes");
  REQUIRE(errors != std::string::npos);
  REQUIRE(notes != std::string::npos);
  CHECK(errors < notes);
  if (warnings != std::string::npos) CHECK((errors < warnings && warnings < notes));
  CHECK(count_of(findings, "emission_angle") == 1);
  CHECK(contains(html.substr(0, html.find("<main>")), "do not use the number"));
  CHECK(!contains(html_of(spots_run(2)), "do not use the number"));
}

TEST_CASE("cautions name the hazards and the limits of the number") {
  const std::string cautions = section(html_of(spots_run(1)), "cautions");
  for (const char* item : {"uniform", "stated density", "X-rays", "High voltage", "vacuum", "hydrofluoric", "Sputter",
                           "Nanopowders", "licensed"}) {
    CHECK_MESSAGE(contains(cautions, item), item);
  }
}

TEST_CASE("thousands of spots make a short report that says where the rest is") {
  const Run run = spots_run(2500);
  const std::string html = html_of(run);
  const std::string results = section(html, "results");
  CHECK(count_of(results, "<tr>") == 201);
  CHECK(contains(results, "200 of 2500 results shown; the other 2300 are in the JSON and CSV result"));
  CHECK(html.size() < 300000);
}

TEST_CASE("a report says how to repeat its numbers") {
  Run run = spots_run(1);
  run.uncertainty.method = IntervalMethod::monte_carlo;
  run.uncertainty.draws = 2000;
  run.uncertainty.seed = 4711;
  const ThicknessResults all = run_thickness(run);
  const std::string digest = inputs_sha256(run);
  CHECK(json::parse(thickness_json(run, all))["inputs_sha256"] == digest);
  const std::string repeat =
      section(thickness_html(run, all, {digest, "pellicle thickness 'my run.toml' --seed 4711"}), "repeat");
  CHECK(contains(repeat, "pellicle " + std::string(version())));
  CHECK(contains(repeat, digest));
  CHECK(contains(repeat, "<dd>4711</dd>"));
  CHECK(contains(repeat, "pellicle thickness &#39;my run.toml&#39; --seed 4711"));
  const std::string bare = section(thickness_html(run, all), "repeat");
  CHECK(!contains(bare, "SHA-256"));
  CHECK(!contains(bare, "Command"));
}

TEST_CASE("several tables name themselves in every row") {
  Run run = spots_run(1);
  run.tables = {"week-1.csv", "week-2.csv"};
  run.areas.push_back(run.areas[0]);
  run.areas.push_back(run.areas[1]);
  run.areas[2].table = run.areas[3].table = 1;
  const std::string html = html_of(run);
  CHECK(contains(section(html, "results"), "<td>week-2.csv</td>"));
  CHECK(contains(section(html, "areas"), "4 areas in week-1.csv, week-2.csv"));
}

}  // TEST_SUITE("report")
