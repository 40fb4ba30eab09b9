// Sections 7 to 9: what came out.
#include <fmt/format.h>

#include <algorithm>
#include <set>
#include <tuple>

#include "pellicle/base/number.hpp"
#include "pellicle/report/figure.hpp"
#include "report/html_report.hpp"
#include "report/wording.hpp"

namespace pellicle::detail {
namespace {

std::string equation_html(const Run& run, const ThicknessRoute& route) {
  std::string text;
  switch (route.method) {
    case ThicknessMethod::ratio:
      text = "t = L cos θ ln(1 + R/R₀)";
      if (route.substrate_length || route.contamination) {
        text =
            "R/R₀ = [1 − exp(−t/(L<sub>f</sub> cos θ))] exp(t/(L<sub>s</sub> cos θ)), solved for t; f: film line, "
            "s: substrate line";
      }
      break;
    case ThicknessMethod::substrate_line:
      text = "t = −L cos θ ln(I/I₀), I₀ from the bare substrate";
      break;
    case ThicknessMethod::film_line:
      text = "t = −L cos θ ln(1 − I/I∞), I∞ from an infinitely thick film";
      break;
    case ThicknessMethod::atomic_percent:
      text = "t = −L cos θ ln(1 − X), X the apparent atomic fraction of C";
      break;
  }
  if (run.geometry.acceptance_half_angle_deg > 0.0) text += "; signals averaged over the acceptance cone";
  return text;
}

/// Codes of what is more than a note, or the reason why there is no thickness.
std::string remarks_of(const Report& report, const ThicknessResult& r, bool outlier) {
  if (!r.failure.empty()) return r.failure;
  std::vector<std::string> codes;
  if (outlier) codes.emplace_back("outlier");
  for (const std::uint32_t i : r.findings) {
    const Finding& f = report.all.findings[i];
    if (f.severity != Severity::note && std::find(codes.begin(), codes.end(), f.code) == codes.end())
      codes.push_back(f.code);
  }
  return joined(codes);
}

std::vector<Cell> result_row(const Report& report, const ThicknessResult& r, bool outlier) {
  const std::string dash = kNone;
  std::vector<Cell> row = {text_cell(r.spot)};
  if (several_tables(report.run)) row.push_back(text_cell(report.run.tables[r.table]));
  row.push_back(number_cell(angle_words(r.emission_deg)));
  std::string thickness = dash, interval = dash, method = dash, repeatability = dash;
  if (r.thickness) {
    const double sd = r.standard_uncertainty_nm();
    thickness = quantity_html(r.thickness->value_nm, sd);
    interval = interval_html(r.interval_nm(), sd);
    method = interval_method(r);
    repeatability = data_html(r.thickness->budget.repeatability, rounded_text(r.thickness->budget.repeatability, 2));
  } else if (r.bound) {
    thickness =
        std::string(r.bound->upper ? "≤ " : "≥ ") + data_html(r.bound->at95_nm, rounded_text(r.bound->at95_nm, 3));
    method = "95 % bound";
  }
  row.push_back(number_cell(thickness));
  row.push_back(number_cell(interval));
  row.push_back(word_cell(method));
  row.push_back(number_cell(repeatability));
  row.push_back(number_cell(r.areal_density_ug_cm2 ? quantity_html(*r.areal_density_ug_cm2) : dash));
  row.push_back(number_cell(r.emitting_atoms_per_nm2 ? quantity_html(*r.emitting_atoms_per_nm2) : dash));
  row.push_back(text_cell(remarks_of(report, r, outlier)));
  return row;
}

void write_gum_against_monte_carlo(const Report& report, std::size_t p, HtmlWriter& w) {
  Rows rows;
  std::size_t drawn = 0;
  for (const std::size_t i : report.of_route[p]) {
    const ThicknessResult& r = report.all.results[i];
    if (!r.thickness || !r.monte_carlo || ++drawn > kMostRows) continue;
    const Thickness& t = *r.thickness;
    const MonteCarloThickness& mc = *r.monte_carlo;
    std::string draws = std::to_string(mc.draws);
    if (mc.rejected > 0) draws += fmt::format(", {} without an answer", mc.rejected);
    rows.push_back({text_cell(spot_words(report.run, r)), number_cell(angle_words(r.emission_deg)),
                    number_cell(quantity_html(t.value_nm, t.standard_uncertainty_nm)),
                    number_cell(interval_html(t.interval_nm, t.standard_uncertainty_nm)),
                    number_cell(quantity_html(mc.mean_nm, mc.standard_uncertainty_nm)),
                    number_cell(interval_html(mc.interval_nm, mc.standard_uncertainty_nm)), number_cell(escaped(draws)),
                    word_cell(mc.gum_agrees ? "agree" : "differ")});
  }
  if (rows.empty()) return;
  w.table("GUM against Monte Carlo (JCGM 101); the Monte Carlo interval is the one quoted",
          {"Spot", "Emission (°)", "GUM (nm)", "GUM 95 % (nm)", "Monte Carlo mean (nm)", "Monte Carlo 95 % (nm)",
           "Draws", "Intervals"},
          rows);
  note_cut(w, kMostRows, drawn, "JSON");
}

void write_summary(const Report& report, std::size_t p, HtmlWriter& w) {
  const ThicknessSummary& s = report.all.summaries[p];
  if (report.of_route[p].size() < 2) return;
  w.begin_facts();
  w.fact("Results", fmt::format("{}, {}, {} without an answer", counted(s.thicknesses, "thickness", "thicknesses"),
                                counted(s.bounds, "bound", "bounds"), s.failed));
  if (s.count > 0) {
    const auto nm = [](double value, int digits) { return data_html(value, rounded_text(value, digits)) + " nm"; };
    w.fact_html("Mean of " + counted(s.count, "spot", "spots"),
                data_html(s.mean_nm, value_words(s.mean_nm, std::max(s.repeatability_of_mean_nm, s.scale_nm))) + " nm");
    w.fact_html("Standard deviation between spots",
                s.standard_deviation_nm ? nm(*s.standard_deviation_nm, 2) : "one spot only");
    w.fact_html("Repeatability of the mean", nm(s.repeatability_of_mean_nm, 2) + ", falls with the number of spots");
    w.fact_html("Thickness scale",
                s.scale_stated ? nm(s.scale_nm, 2) + ", common to all spots, does not average" : "not stated");
    std::vector<std::string> outliers;
    for (const std::size_t i : s.outliers) outliers.push_back(spot_words(report.run, report.all.results[i]));
    w.fact("Outliers (in the mean)", outliers.empty() ? "none" : joined(outliers, 40) + "; modified z score above 3.5 and beyond three repeatabilities");
  }
  w.end_facts();
}

}  // namespace

void write_results(const Report& report, HtmlWriter& w) {
  w.section("results", "Results");
  w.paragraph(
      "± is the standard uncertainty (coverage factor 1). The 95 % interval is probabilistically symmetric; after the "
      "GUM it is the value ± 1.96 "
      "standard uncertainties. Repeatability differs from spot to spot, the thickness scale moves all of them "
      "together.");
  for (std::size_t p = 0; p < report.all.routes.size(); ++p) {
    const ThicknessRoute& route = report.all.routes[p];
    w.heading("Thickness of " + route_words(report.run, route) + ", from " + lines_words(report.run, route));
    w.begin_facts();
    std::string method = method_name(route.method);
    if (route.contamination)
      method += std::string(", contamination route ") + contamination_route_name(*route.contamination);
    w.fact("Method", method);
    w.fact_html("Equation", equation_html(report.run, route));
    w.end_facts();
    const std::vector<std::size_t>& own = report.of_route[p];
    if (own.size() > 1) {
      Figure figure = thickness_figure(report.run, report.all, p);
      figure.subtitle.clear();
      w.figure(figure_svg(figure), figure.caption);
    }
    const std::set<std::size_t> outliers(report.all.summaries[p].outliers.begin(),
                                         report.all.summaries[p].outliers.end());
    Rows rows;
    for (std::size_t k = 0; k < own.size() && k < kMostRows; ++k) {
      rows.push_back(result_row(report, report.all.results[own[k]], outliers.contains(own[k])));
    }
    std::vector<std::string> header = {
        "Spot",          "Emission (°)",       "Thickness (nm)",         "95 % interval (nm)",
        "Interval from", "Repeatability (nm)", "Areal density (µg/cm²)", "Emitting atoms (1/nm²)",
        "Remarks"};
    if (several_tables(report.run)) header.insert(header.begin() + 1, "Table");
    w.table("Results of every spot and angle", header, rows);
    note_cut(w, kMostRows, own.size());
    write_gum_against_monte_carlo(report, p, w);
    write_summary(report, p, w);
  }
  w.end_section();
}

namespace {

/// The result whose thickness is the middle one of its route: its budget stands for the others.
std::optional<std::size_t> middle_result(const Report& report, std::size_t p) {
  std::vector<std::size_t> with;
  for (const std::size_t i : report.of_route[p]) {
    if (report.all.results[i].thickness) with.push_back(i);
  }
  if (with.empty()) return std::nullopt;
  const auto middle = with.begin() + static_cast<std::ptrdiff_t>((with.size() - 1) / 2);
  std::nth_element(with.begin(), middle, with.end(), [&](std::size_t a, std::size_t b) {
    const double ta = report.all.results[a].thickness->value_nm, tb = report.all.results[b].thickness->value_nm;
    return ta != tb ? ta < tb : a < b;
  });
  return *middle;
}

}  // namespace

void write_budget(const Report& report, HtmlWriter& w) {
  w.section("budget", "Uncertainty budget");
  for (std::size_t p = 0; p < report.all.routes.size(); ++p) {
    const std::optional<std::size_t> i = middle_result(report, p);
    const std::string film = route_words(report.run, report.all.routes[p]);
    if (!i) {
      w.paragraph("No budget for " + film + ": no spot gave a thickness.");
      continue;
    }
    const ThicknessResult& r = report.all.results[*i];
    const Budget& budget = r.thickness->budget;
    Figure figure = budget_figure(report.run, report.all, *i);
    figure.subtitle.clear();
    std::string caption = figure.caption;
    if (report.of_route[p].size() > 1)
      caption += " It is the spot of median thickness; the JSON result holds the budgets of all.";
    w.figure(figure_svg(figure), caption);
    Rows rows;
    for (const BudgetRow& row : budget.rows) {
      rows.push_back({text_cell(input_words(row.name)),
                      number_cell(data_html(row.contribution, rounded_text(row.contribution, 2))),
                      number_cell(data_html(row.share, fmt::format("{:.1f}", 100.0 * row.share))),
                      word_cell(contribution_kind_name(row.kind))});
    }
    const auto sum = [&](const char* name, double value) {
      rows.push_back(
          {text_cell(name), number_cell(data_html(value, rounded_text(value, 2))), number_cell(""), word_cell("")});
    };
    sum("repeatability, combined", budget.repeatability);
    if (r.thickness->scale_stated) sum("thickness scale, combined", budget.scale);
    sum("standard uncertainty (GUM)", budget.standard_uncertainty);
    w.table("Contributions to the standard uncertainty of " + film + ", spot " + spot_words(report.run, r),
            {"Input", "Contribution (nm)", "Share of the variance (%)", "Kind"}, rows);
    if (!r.thickness->scale_stated)
      w.paragraph("The thickness scale is not stated: a length came without an uncertainty.", "alarm");
  }
  w.end_section();
}

void write_findings(const Report& report, HtmlWriter& w) {
  w.section("findings", "Findings");
  bool any = false;
  // The shapes tell the severities apart where colour does not print.
  for (const auto& [severity, title, mark] : {std::tuple{Severity::error, "Errors", "■"},
                                              {Severity::warning, "Warnings", "▲"},
                                              {Severity::note, "Notes", "○"}}) {
    Rows rows;
    std::size_t left_out = 0;
    for (const FindingCount& f : report.findings) {
      if (f.finding.severity != severity) continue;
      if (rows.size() == kMostFindings) {
        ++left_out;
        continue;
      }
      const auto number = [](const std::optional<double>& v) {
        return number_cell(v ? data_html(*v, rounded_text(*v, 4)) : kNone);
      };
      rows.push_back({Cell{std::string(mark) + " <code>" + escaped(f.finding.code) + "</code>", CellKind::word},
                      text_cell(f.finding.text), number(f.finding.value), number(f.finding.limit),
                      number_cell(std::to_string(f.results))});
    }
    if (rows.empty()) continue;
    any = true;
    w.table(title, {"Code", "Finding", "Value", "Limit", "Results concerned"}, rows);
    if (left_out > 0) w.paragraph(fmt::format("{} more in the JSON result.", left_out), "remark");
  }
  std::size_t failed = 0;
  const ThicknessResult* first = nullptr;
  for (const ThicknessResult& r : report.all.results) {
    if (r.failure.empty()) continue;
    ++failed;
    if (!first) first = &r;
  }
  if (first) w.paragraph(counted(failed, "result has", "results have") + " no answer; first: " + first->failure);
  if (!any && !first) w.paragraph("None.");
  w.end_section();
}

}  // namespace pellicle::detail
