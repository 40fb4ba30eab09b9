#include "pellicle/report/html.hpp"

#include <fmt/format.h>

#include <algorithm>
#include <map>
#include <set>
#include <utility>

#include "pellicle/base/number.hpp"
#include "pellicle/base/version.hpp"
#include "pellicle/report/text.hpp"
#include "report/html_report.hpp"
#include "report/html_style.hpp"
#include "report/wording.hpp"

namespace pellicle {
namespace {

using namespace detail;

Report prepare(const Run& run, const ThicknessResults& all, const ReportOrigin& origin) {
  Report report{run, all, origin, {}, {}};
  std::map<std::pair<std::string, std::string>, std::size_t> known;
  std::vector<std::size_t> group(all.findings.size());
  for (std::size_t i = 0; i < all.findings.size(); ++i) {
    const Finding& f = all.findings[i];
    const auto [at, fresh] = known.try_emplace({f.code, f.text}, report.findings.size());
    if (fresh) report.findings.push_back({f, 0});
    group[i] = at->second;
  }
  report.of_route.resize(all.routes.size());
  for (std::size_t i = 0; i < all.results.size(); ++i) {
    report.of_route[all.results[i].route].push_back(i);
    std::set<std::size_t> own;
    for (const std::uint32_t f : all.results[i].findings) own.insert(group[f]);
    for (const std::size_t f : own) ++report.findings[f].results;
  }
  return report;
}

std::size_t count_of(const Report& report, Severity severity) {
  return static_cast<std::size_t>(std::count_if(report.findings.begin(), report.findings.end(),
                                                [&](const FindingCount& f) { return f.finding.severity == severity; }));
}

std::string brief_of_one(const ThicknessResult& r) {
  if (r.bound) {
    return fmt::format("<p class=\"answer\">{} {} nm</p><p>One-sided 95 % bound; the findings say why.</p>",
                       r.bound->upper ? "at most" : "at least",
                       data_html(r.bound->at95_nm, rounded_text(r.bound->at95_nm, 3)));
  }
  if (!r.thickness) return "<p class=\"answer\">no thickness</p><p>" + escaped(r.failure) + "</p>";
  const double sd = r.standard_uncertainty_nm();
  const Interval i = r.interval_nm();
  const double value = r.thickness->value_nm, up = i.high95 - value, down = value - i.low95;
  // Where ± one number would mislead, the ends stand in its place.
  constexpr double kSymmetric = 1.25;
  const bool symmetric = std::max(up, down) <= kSymmetric * std::min(up, down);
  const std::string answer = symmetric ? quantity_html(value, sd) : data_html(value, value_words(value, sd));
  std::string text = "<p class=\"answer\">" + answer + " nm</p><p>95 % interval " +
                     interval_html(r.interval_nm(), sd) + " nm (" + interval_method(r) +
                     (symmetric ? "); ± is the standard uncertainty." : "); it is not symmetric, so quote its two ends.");
  if (!r.thickness->scale_stated)
    text += " The thickness scale is not stated, so that these uncertainties leave it out.";
  return text + "</p>";
}

std::string brief_of_many(const ThicknessSummary& s) {
  std::string text;
  if (s.count == 0) {
    text = "<p class=\"answer\">no thickness</p>";
  } else {
    const double sd = std::max(s.repeatability_of_mean_nm, s.scale_nm);
    const auto part = [](double value) { return "± " + data_html(value, rounded_text(value, 2)) + " nm "; };
    text =
        "<p class=\"answer\">" + data_html(s.mean_nm, value_words(s.mean_nm, sd)) + " nm</p><p>" +
        (s.count == 1 ? std::string("The one spot with a thickness") : fmt::format("Mean of {} spots", s.count)) +
        (s.thicknesses > s.count ? ", the angles of each averaged first" : "") +
        ", with standard uncertainties<br>" + part(s.repeatability_of_mean_nm) + "repeatability of the mean<br>" +
        (s.scale_stated ? part(s.scale_nm) + "thickness scale, common to all spots, does not average"
                        : std::string("thickness scale not stated")) +
        "</p>";
  }
  std::vector<std::string> rest;
  if (s.bounds > 0) rest.push_back(counted(s.bounds, "bound", "bounds"));
  if (s.failed > 0) rest.push_back(std::to_string(s.failed) + " without an answer");
  if (!rest.empty()) text += "<p>Not in the mean: " + joined(rest) + ".</p>";
  if (!s.outliers.empty()) text += "<p>In the mean, but far from the rest: " + counted(s.outliers.size(), "result", "results") + ".</p>";
  return text;
}

void write_brief(const Report& report, HtmlWriter& w) {
  const std::string title = report.run.title.empty() ? "Film thickness" : report.run.title;
  w.raw("<header>\n<p class=\"kind\">Film thickness by X-ray photoelectron spectroscopy</p>\n<h1>" + escaped(title) +
        "</h1>\n<div class=\"brief\">\n");
  for (std::size_t p = 0; p < report.all.routes.size(); ++p) {
    const ThicknessRoute& route = report.all.routes[p];
    w.raw("<p class=\"film\">Thickness of " + escaped(route_words(report.run, route)) + ", from " +
          escaped(lines_words(report.run, route)) + "</p>");
    const std::vector<std::size_t>& own = report.of_route[p];
    w.raw(own.size() == 1 ? brief_of_one(report.all.results[own[0]]) : brief_of_many(report.all.summaries[p]));
    w.raw("\n");
  }
  const std::size_t errors = count_of(report, Severity::error), warnings = count_of(report, Severity::warning);
  w.raw(fmt::format("<p class=\"tally\"><a href=\"#findings\">Findings</a>: {}, {}, {}.</p>\n",
                    counted(errors, "error", "errors"), counted(warnings, "warning", "warnings"),
                    counted(count_of(report, Severity::note), "note", "notes")));
  if (errors > 0)
    w.raw("<p class=\"alarm\">An error stands against this result: do not use the number before it is settled.</p>\n");
  w.raw("</div>\n</header>\n<main>\n");
}

void write_cautions(HtmlWriter& w) {
  w.section("cautions", "Cautions");
  w.paragraph(cautions_text());
  w.heading("About the number");
  w.list(
      {"The equations hold for a flat film of equal thickness, without islands or gradients. One angle cannot test "
       "that; several can.",
       "The thickness is that of a film of the stated density.",
       "Length and reference ratio belong together: values of different origin do not fit each other.",
       "Charging, a metal line fitted without its asymmetry, and losses of one line under another change areas before "
       "any of this begins."});
  w.heading("In the laboratory");
  w.list({"X-rays: run the source only with its interlocks, shielding and leak check.",
          "High voltage on source, analyser, ion gun and flood gun: discharge, then lock out, before opening.",
          "Ultra-high vacuum: viewports can implode, baked parts burn, liquid nitrogen displaces air; vent cold and "
          "slowly.",
          "Acids, hydrofluoric acid above all: trained staff, never alone, calcium gluconate at hand.",
          "Sputter guns reduce oxides, roughen and implant; a toxic specimen coats the chamber.",
          "Nanopowders: fixed to the holder, handled enclosed, never loose in the vacuum; do not sputter them."});
  w.end_section();
}

void write_not_stated(const Report& report, HtmlWriter& w) {
  const Run& run = report.run;
  static const std::map<std::string, std::string> names = {{"specimen", "specimen"},
                                                           {"analyst", "analyst"},
                                                           {"date", "date of measurement"},
                                                           {"instrument_id", "instrument"},
                                                           {"pass_energy_ev", "pass energy"},
                                                           {"background", "background of the peak fit"},
                                                           {"fit_model", "fit model"},
                                                           {"charge_reference", "charge reference"},
                                                           {"damage_check", "check for X-ray damage"}};
  std::vector<std::string> absent;
  for (const std::string& key : record_keys()) {
    if (!record_of(run, key).empty()) continue;
    const auto name = names.find(key);
    absent.push_back(name == names.end() ? key : name->second);
  }
  if (!run.geometry.source_analyser_angle_deg) absent.emplace_back("angle between X-rays and analyser");
  if (!(run.geometry.acceptance_half_angle_deg > 0.0)) absent.emplace_back("acceptance of the analyser");
  if (!run.emission_sd_deg) absent.emplace_back("uncertainty of the emission angle");
  if (run.area_correlations.empty()) absent.emplace_back("correlation of the fitted areas");
  for (const Layer& layer : run.sample.layers) {
    const bool above =
        std::any_of(report.all.routes.begin(), report.all.routes.end(), [&](const ThicknessRoute& route) {
          return run.sample.position(layer.name) < run.sample.position(route.layer);
        });
    const bool measured = run.contamination && run.contamination->layer == layer.name;
    if (above && !measured && !layer.thickness_nm) absent.push_back("thickness of " + layer.name);
  }
  w.section("not-stated", "What was not stated");
  if (absent.empty()) {
    w.paragraph("Nothing of what this report asks for.");
  } else {
    w.paragraph("Absent from the run: " + joined(absent, 60) + ".");
  }
  static const std::set<std::string> codes = {"assumed", "uncertainty_not_given", "scale_not_stated",
                                              "background_not_given"};
  std::vector<std::string> instead;
  for (const FindingCount& f : report.findings) {
    if (codes.contains(f.finding.code) && instead.size() < kMostFindings) instead.push_back(f.finding.text);
  }
  if (!instead.empty()) {
    w.paragraph("What that means for the numbers:");
    w.list(instead);
  }
  w.end_section();
}

void write_repeat(const Report& report, HtmlWriter& w) {
  const bool drawn = std::any_of(report.all.results.begin(), report.all.results.end(),
                                 [](const ThicknessResult& r) { return r.monte_carlo.has_value(); });
  w.section("repeat", "To repeat these numbers");
  w.begin_facts();
  w.fact("Program", "pellicle " + std::string(version()));
  if (!report.origin.inputs_sha256.empty())
    w.fact_html("SHA-256 of the inputs", "<code>" + escaped(report.origin.inputs_sha256) + "</code>");
  w.fact("Seed of the Monte Carlo draws", drawn ? std::to_string(report.run.uncertainty.seed) : "no draws were made");
  w.end_facts();
  if (!report.origin.command.empty())
    w.raw("<p>Command:</p>\n<pre><code>" + escaped(report.origin.command) + "</code></pre>\n");
  w.raw("<div class=\"signature\"><div>Analyst</div><div>Date</div><div>Signature</div></div>\n");
  w.end_section();
}

}  // namespace

std::string thickness_html(const Run& run, const ThicknessResults& results, const ReportOrigin& origin) {
  const Report report = prepare(run, results, origin);
  HtmlWriter w;
  // Nothing may be fetched, whatever a specimen is called.
  w.raw(
      "<!DOCTYPE html>\n<html lang=\"en\">\n<head>\n<meta charset=\"utf-8\">\n"
      "<meta http-equiv=\"Content-Security-Policy\" content=\"default-src 'none'; style-src 'unsafe-inline'\">\n"
      "<meta name=\"viewport\" content=\"width=device-width, initial-scale=1\">\n<title>");
  w.raw(escaped(run.title.empty() ? "Film thickness" : run.title) + " – thickness report</title>\n<style>");
  w.raw(detail::kReportStyle);
  w.raw("</style>\n</head>\n<body>\n");
  write_brief(report, w);
  write_specimen(report, w);
  write_instrument(report, w);
  write_areas(report, w);
  write_lengths(report, w);
  write_reference(report, w);
  write_densities(report, w);
  write_results(report, w);
  write_budget(report, w);
  write_findings(report, w);
  write_cautions(w);
  write_not_stated(report, w);
  write_repeat(report, w);
  w.raw(
      "</main>\n<footer>Words in square brackets and under Source are keys of pellicle's bibliography, "
      "reference/sources.bib.</footer>\n</body>\n</html>\n");
  return w.take();
}

}  // namespace pellicle
