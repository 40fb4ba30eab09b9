#include "pellicle/report/text.hpp"

#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "pellicle/base/number.hpp"
#include "pellicle/lines/photoionisation.hpp"
#include "report/text_table.hpp"
#include "report/wording.hpp"

namespace pellicle {
namespace {

using Rows = std::vector<std::vector<std::string>>;

constexpr std::size_t kWidth = 100;
constexpr const char* kNone = "–";

std::string findings_text(const Findings& findings) {
  std::string text;
  for (const Finding& f : findings) {
    text += fmt::format("  {:<8} ", severity_name(f.severity)) + detail::wrapped(f.code + ": " + f.text, kWidth - 11, "           ") + "\n";
  }
  return text;
}

/// Each sentence once, whatever numbers raised it; what matters most comes first.
Findings distinct(const Findings& findings) {
  Findings once;
  for (const Finding& finding : findings) add_finding(once, finding);
  std::stable_sort(once.begin(), once.end(), [](const Finding& a, const Finding& b) { return a.severity > b.severity; });
  return once;
}

std::string quantity_text(const Quantity& q, const char* unit) {
  return value_with_uncertainty(q.value, q.standard_uncertainty) + (*unit ? std::string(" ") + unit : std::string()) +
         (q.standard_uncertainty ? "" : " (uncertainty not given)");
}

std::string optional_text(const std::optional<double>& value, int digits) {
  return value ? rounded_text(*value, digits) : std::string(kNone);
}

std::string reference_text(const ThicknessRoute& route) {
  if (!route.reference_ratio) return route.reference_origin;
  std::string text = quantity_text(*route.reference_ratio, "") + " (" + route.reference_origin + ")";
  std::string applied;
  for (const std::string& item : route.reference_applied) applied += (applied.empty() ? ": " : ", ") + item;
  return text.substr(0, text.size() - 1) + applied + ")";
}

std::string length_text(const LengthUsed& used) {
  return fmt::format("{} in {} at {} eV ({})", quantity_text(used.length_nm, "nm"), used.material, energy_text(used.energy_ev), used.origin);
}

std::string route_text(const Run& run, const ThicknessRoute& route) {
  const Material& layer = run.sample.material(route.layer);
  const auto quoted = [&](const std::optional<std::size_t>& line) { return "\"" + run.lines[*line].label + "\""; };
  std::string lines = route.film_line ? quoted(route.film_line) : quoted(route.substrate_line);
  if (route.film_line && route.substrate_line) lines += " over " + quoted(route.substrate_line);
  if (route.contamination) lines += std::string(", route ") + contamination_route_name(*route.contamination);
  if (route.method != ThicknessMethod::ratio && !route.contamination) lines += std::string(", method ") + method_name(route.method);
  const std::size_t below = run.sample.position(route.layer) + 1;
  const Material& under = below < run.sample.layers.size() ? run.sample.layers[below].material : run.sample.substrate;
  std::string text = fmt::format("{} on {}: {}, {} ({} eV)\n", layer.id, under.id, lines, run.source.name,
                                 number_text(run.source.photon_energy_ev));
  text += fmt::format("  {:<17} {}\n", route.method == ThicknessMethod::ratio ? "reference ratio" : "reference", reference_text(route));
  text += fmt::format("  {:<17} {}\n", route.substrate_length ? "film line" : "attenuation", length_text(route.film_length));
  if (route.substrate_length) text += fmt::format("  {:<17} {}\n", "substrate line", length_text(*route.substrate_length));
  text += fmt::format("  {:<17} {} {} g/cm3, {} {} g/cm3\n", "densities", layer.id, number_text(layer.density_g_cm3),
                      run.sample.substrate.id, number_text(run.sample.substrate.density_g_cm3));
  return text;
}

std::string budget_text(const Budget& budget) {
  Rows rows = {{"contribution", "nm", "share", "kind"}};
  for (const BudgetRow& row : budget.rows) {
    rows.push_back({row.name, rounded_text(row.contribution, 2), fmt::format("{:.1f} %", 100.0 * row.share),
                    contribution_kind_name(row.kind)});
  }
  return detail::text_table(rows);
}

std::string scale_text(const Thickness& t) { return t.scale_stated ? rounded_text(t.budget.scale, 2) + " nm" : "not stated"; }

std::string bound_text(const ThicknessBound& bound) {
  return std::string(bound.upper ? "<= " : ">= ") + rounded_text(bound.at95_nm, 3);
}

std::string one_result_text(const ThicknessResult& r) {
  std::string text = fmt::format("spot {}, emission {} deg from the normal (take-off {} deg from the surface)\n", r.spot,
                                 rounded_text(r.emission_deg, 4), rounded_text(90.0 - r.emission_deg, 4));
  if (r.bound) return text + fmt::format("  thickness         {} nm (95 % bound)\n", bound_text(*r.bound));
  if (!r.thickness) return text + "  no thickness: " + r.failure + "\n";
  const Thickness& t = *r.thickness;
  const double sd = r.standard_uncertainty_nm();
  text += fmt::format("  thickness         {} nm   (95 %: {} nm, {})\n", value_with_uncertainty(t.value_nm, sd),
                      detail::interval_words(r.interval_nm(), sd), r.monte_carlo ? "Monte Carlo" : "GUM");
  if (r.monte_carlo) {
    text += fmt::format("  GUM               {} nm   (95 %: {} nm), {}\n", value_with_uncertainty(t.value_nm, t.standard_uncertainty_nm),
                        detail::interval_words(t.interval_nm, t.standard_uncertainty_nm),
                        r.monte_carlo->gum_agrees ? "agrees with Monte Carlo (JCGM 101, clause 8)" : "differs from Monte Carlo (JCGM 101, clause 8)");
  }
  if (!t.scale_stated) text += "  These uncertainties leave the thickness scale out: it is not stated.\n";
  text += fmt::format("  repeatability     {} nm, thickness scale: {}\n", rounded_text(t.budget.repeatability, 2), scale_text(t));
  text += fmt::format("  areal density     {} ug/cm2", value_with_uncertainty(r.areal_density_ug_cm2->value, r.areal_density_ug_cm2->standard_uncertainty));
  if (r.emitting_atoms_per_nm2) {
    text += fmt::format(", {} emitting atoms/nm2", value_with_uncertainty(r.emitting_atoms_per_nm2->value, r.emitting_atoms_per_nm2->standard_uncertainty));
  }
  return text + "\n\n" + budget_text(t.budget);
}

/// Rows a terminal shows before it points to --csv.
constexpr std::size_t kMostRows = 60;

std::string many_results_text(const Run& run, const ThicknessResults& all, std::size_t route) {
  const bool tables = run.tables.size() > 1;
  const bool drawn = std::any_of(all.results.begin(), all.results.end(), [&](const ThicknessResult& r) { return r.route == route && r.monte_carlo; });
  Rows rows = {{"spot", "emission deg", "thickness nm", "sd nm", drawn ? "95 % nm (Monte Carlo)" : "95 % nm (GUM)", "repeatability nm", "ug/cm2", "findings"}};
  if (tables) rows[0].insert(rows[0].begin(), "table");
  std::size_t left_out = 0;
  for (const ThicknessResult& r : all.results) {
    if (r.route != route) continue;
    if (rows.size() > kMostRows) {
      ++left_out;
      continue;
    }
    std::string codes;
    for (const std::uint32_t i : r.findings) {
      const Finding& f = all.findings[i];
      if (f.severity != Severity::note && codes.find(f.code) == std::string::npos) codes += (codes.empty() ? "" : ", ") + f.code;
    }
    std::vector<std::string> row = {r.spot, detail::angle_words(r.emission_deg), kNone, kNone, kNone, kNone, kNone, codes};
    if (r.thickness) {
      const Thickness& t = *r.thickness;
      const double sd = r.standard_uncertainty_nm();
      row[2] = detail::value_words(t.value_nm, sd);
      row[3] = rounded_text(sd, 2);
      row[4] = detail::interval_words(r.interval_nm(), sd);
      row[5] = rounded_text(t.budget.repeatability, 2);
      row[6] = rounded_text(r.areal_density_ug_cm2->value, 3);
    } else if (r.bound) {
      row[2] = bound_text(*r.bound);
    } else {
      row[7] = r.failure;
    }
    if (tables) row.insert(row.begin(), run.tables[r.table]);
    rows.push_back(std::move(row));
  }
  std::string text = detail::text_table(rows);
  if (left_out > 0) text += fmt::format("  … and {} more; --csv or --json lists all\n", left_out);
  return text;
}

std::string summary_text(const Run& run, const ThicknessResults& all, const ThicknessSummary& s) {
  if (s.count == 0) {
    return fmt::format("no thickness from {}: {}, {} without an answer\n", detail::counted(s.failed + s.bounds, "measurement", "measurements"),
                       detail::counted(s.bounds, "bound", "bounds"), s.failed);
  }
  std::string text = fmt::format("mean of {}: {} nm, repeatability of the mean {} nm", detail::counted(s.count, "spot", "spots"),
                                 rounded_text(s.mean_nm, 4), rounded_text(s.repeatability_of_mean_nm, 2));
  if (s.standard_deviation_nm) text += fmt::format(", standard deviation between spots {} nm", rounded_text(*s.standard_deviation_nm, 2));
  text += fmt::format(";\nthickness scale: {} (common to all, does not average)", s.scale_stated ? rounded_text(s.scale_nm, 2) + " nm" : "not stated");
  if (s.thicknesses > s.count) text += fmt::format(";\nthe {} thicknesses of each spot at its angles are averaged first", s.thicknesses);
  if (s.bounds > 0) text += "; not in the mean: " + detail::counted(s.bounds, "bound", "bounds");
  if (s.failed > 0) text += fmt::format("; {} without an answer", s.failed);
  if (!s.outliers.empty()) {
    std::vector<std::string> spots;
    for (const std::size_t i : s.outliers) {
      const std::string spot = detail::spot_words(run, all.results[i]);
      if (spots.empty() || spots.back() != spot) spots.push_back(spot);
    }
    constexpr std::size_t kMostNamed = 10;
    text += "\nin the mean, but far from the rest:";
    for (std::size_t k = 0; k < spots.size() && k < kMostNamed; ++k) text += (k == 0 ? " " : ", ") + spots[k];
    if (spots.size() > kMostNamed) text += fmt::format(" and {} more", spots.size() - kMostNamed);
  }
  return text + "\n";
}

}  // namespace

const std::string& cautions_text() {
  static const std::string text =
      "A thickness is that of a flat, uniform, continuous film; islands, roughness and gradients change it.\n"
      "X-rays, high voltage and UHV need interlocks and trained staff; follow local codes. A safety-critical\n"
      "film is released by the responsible, licensed person, not by this number.\n";
  return text;
}

std::string lengths_text(const std::vector<LengthQuery>& queries) {
  std::string text;
  for (const LengthQuery& q : queries) {
    if (!text.empty()) text += "\n";
    const AttenuationLength& l = q.length;
    text += fmt::format("{} ({}, {} g/cm3, gap {}), electrons of {} eV\n", q.material.id, q.material.formula.text(),
                        number_text(q.material.density_g_cm3),
                        q.material.band_gap_ev ? number_text(*q.material.band_gap_ev) + " eV" : "not given", energy_text(q.energy_ev));
    text += l.model.empty() ? "  attenuation length: no model holds here\n\n"
                            : fmt::format("  attenuation length {} nm   ({}{})\n\n", value_with_uncertainty(l.value_nm, l.standard_uncertainty_nm),
                                          l.model, l.imfp_model.empty() ? "" : " on " + l.imfp_model);
    Rows rows = {{"kind", "model", "nm", "remark"}};
    for (const ModelValue& m : l.imfp) rows.push_back({"IMFP", m.model, optional_text(m.value_nm, 4), m.refusal});
    for (const ModelValue& m : l.models) {
      const std::string remark = !m.value_nm ? m.refusal : m.model == l.model ? "used" : m.legacy ? "legacy, for comparison" : "";
      rows.push_back({"EAL", m.model, optional_text(m.value_nm, 4), remark});
    }
    text += detail::text_table(rows);
    if (!l.findings.empty()) text += "\n" + findings_text(l.findings);
  }
  return text;
}

std::string thickness_text(const Run& run, const ThicknessResults& results) {
  std::string text = run.title.empty() ? "" : run.title + "\n\n";
  for (std::size_t p = 0; p < results.routes.size(); ++p) {
    if (p > 0) text += "\n";
    text += route_text(run, results.routes[p]);
    const ThicknessSummary& summary = results.summaries[p];
    if (summary.count + summary.bounds + summary.failed == 1) {
      for (const ThicknessResult& r : results.results) {
        if (r.route == p) text += "\n" + one_result_text(r);
      }
    } else {
      text += "\n" + many_results_text(run, results, p) + "\n" + summary_text(run, results, summary);
    }
  }
  const std::string findings = findings_text(distinct(results.findings));
  if (!findings.empty()) text += "\n" + findings;
  return text + "\n" + cautions_text();
}

std::string materials_text(const std::vector<Material>& materials) {
  Rows rows = {{"id", "formula", "g/cm3", "gap eV", "name", "density from", "gap from"}};
  const auto origin = [](const std::string& source, const std::string& mark) {
    return source == mark || mark.empty() ? source : source + " (" + mark + ")";
  };
  for (const Material& m : materials) {
    rows.push_back({m.id, m.formula.text(), number_text(m.density_g_cm3), m.band_gap_ev ? number_text(*m.band_gap_ev) : kNone, m.name,
                    origin(m.density_source, m.density_mark), origin(m.gap_source, m.gap_mark)});
  }
  return detail::text_table(rows);
}

std::string lines_text(const std::vector<CoreLevel>& levels, const PhotonSource* source) {
  Rows rows = {{"line", "binding eV", "kinetic eV", "cross section barn", "asymmetry", "remark"}};
  for (const CoreLevel& level : levels) {
    std::string kinetic = kNone, section_text = kNone, beta_text = kNone, remark;
    if (source) {
      const double energy = source->photon_energy_ev - level.binding_energy_ev;
      if (energy > 0.0) kinetic = energy_text(energy);
      const TabulatedValue section = photoionisation_cross_section_barn(level, *source);
      section_text = optional_text(section.value, 4);
      beta_text = optional_text(asymmetry_parameter(level, *source).value, 3);
      remark = section.reason;
    }
    if (level.outer) remark += (remark.empty() ? "" : "; ") + std::string("outer level, energy is nominal");
    rows.push_back({level.name, energy_text(level.binding_energy_ev), kinetic, section_text, beta_text, remark});
  }
  return detail::text_table(rows);
}

std::string check_text(const Run& run, const ThicknessResults& results) {
  std::string text = run.title.empty() ? "" : run.title + "\n\n";
  for (const ThicknessRoute& route : results.routes) text += route_text(run, route);
  std::size_t failed = 0;
  std::string failures;
  for (const ThicknessResult& r : results.results) {
    if (r.failure.empty()) continue;
    if (++failed <= kMostRows) failures += fmt::format("  no thickness: {}\n", r.failure);
  }
  text += fmt::format("\n{} areas, {} thicknesses can be computed, {} cannot\n{}", run.areas.size(), results.results.size() - failed, failed, failures);
  const std::string findings = findings_text(distinct(results.findings));
  if (!findings.empty()) text += "\n" + findings;
  return text;
}

}  // namespace pellicle
