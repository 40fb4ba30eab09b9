#include "pellicle/report/text.hpp"

#include <algorithm>
#include <cmath>

#include <fmt/format.h>

#include "pellicle/base/number.hpp"
#include "pellicle/lines/photoionisation.hpp"
#include "report/text_table.hpp"

namespace pellicle {
namespace {

using Rows = std::vector<std::vector<std::string>>;

constexpr std::size_t kWidth = 100;
constexpr const char* kNone = "–";

std::string findings_text(const Findings& findings) {
  std::string text;
  for (const Finding& f : findings) {
    text += fmt::format("  {:<8} ", severity_name(f.severity)) + detail::wrapped(f.code + ": " + f.text, kWidth, "           ") + "\n";
  }
  return text;
}

std::string quantity_text(const Quantity& q, const char* unit) {
  return value_with_uncertainty(q.value, q.standard_uncertainty) + (*unit ? std::string(" ") + unit : std::string()) +
         (q.standard_uncertainty ? "" : " (uncertainty not given)");
}

std::string optional_text(const std::optional<double>& value, int digits) {
  return value ? rounded_text(*value, digits) : std::string(kNone);
}

std::string pair_text(const Run& run, const ThicknessPair& pair) {
  const Material& film = run.sample.material(pair.layer);
  std::string text = fmt::format("{} on {}: \"{}\" over \"{}\", {} ({} eV)\n", film.id, run.sample.substrate.id, pair.film_line,
                                 pair.substrate_line, run.source.name, number_text(run.source.photon_energy_ev));
  text += fmt::format("  reference ratio   {} ({})\n", quantity_text(pair.reference_ratio, ""), pair.reference_origin);
  text += fmt::format("  attenuation       {} in {} at {} eV ({})\n", quantity_text(pair.film_length.length_nm, "nm"),
                      pair.film_length.material, energy_text(pair.film_length.energy_ev), pair.film_length.origin);
  if (pair.substrate_length) {
    text += fmt::format("  substrate line    {} in {} at {} eV ({})\n", quantity_text(pair.substrate_length->length_nm, "nm"),
                        pair.substrate_length->material, energy_text(pair.substrate_length->energy_ev),
                        pair.substrate_length->origin);
  }
  text += fmt::format("  densities         {} {} g/cm3, {} {} g/cm3\n", film.id, number_text(film.density_g_cm3),
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

std::string one_result_text(const ThicknessResult& r) {
  std::string text = fmt::format("spot {}, emission {} deg from the normal (take-off {} deg from the surface)\n", r.spot,
                                 rounded_text(r.emission_deg, 4), rounded_text(90.0 - r.emission_deg, 4));
  if (!r.thickness) return text + "  no thickness: " + r.failure + "\n";
  const Thickness& t = *r.thickness;
  const int decimals = t.standard_uncertainty_nm > 0.0
                           ? std::clamp(1 - static_cast<int>(std::floor(std::log10(t.standard_uncertainty_nm))), 0, 6)
                           : 3;
  text += fmt::format("  thickness         {} nm   (95 %: {:.{}f} to {:.{}f} nm)\n",
                      value_with_uncertainty(t.value_nm, t.standard_uncertainty_nm), t.interval_nm.low95, decimals,
                      t.interval_nm.high95, decimals);
  text += fmt::format("  repeatability     {} nm, thickness scale: {}\n\n", rounded_text(t.budget.repeatability, 2), scale_text(t));
  return text + budget_text(t.budget);
}

std::string many_results_text(const ThicknessResults& all, std::size_t pair) {
  Rows rows = {{"spot", "emission deg", "thickness nm", "sd nm", "95 % nm", "repeatability nm", "findings"}};
  for (const ThicknessResult& r : all.results) {
    if (r.pair != pair) continue;
    const std::string angle = rounded_text(r.emission_deg, 4);
    if (!r.thickness) {
      rows.push_back({r.spot, angle, kNone, kNone, kNone, kNone, r.failure});
      continue;
    }
    const Thickness& t = *r.thickness;
    std::string codes;
    for (const Finding& f : t.findings) {
      if (f.severity != Severity::note) codes += (codes.empty() ? "" : ", ") + f.code;
    }
    rows.push_back({r.spot, angle, rounded_text(t.value_nm, 4), rounded_text(t.standard_uncertainty_nm, 2),
                    rounded_text(t.interval_nm.low95, 4) + " to " + rounded_text(t.interval_nm.high95, 4),
                    rounded_text(t.budget.repeatability, 2), codes});
  }
  return detail::text_table(rows);
}

std::string summary_text(const ThicknessSummary& s) {
  if (s.count == 0) return fmt::format("no thickness from {} rows\n", s.failed);
  std::string text = fmt::format("mean of {}: {} nm, repeatability of the mean {} nm", s.count, rounded_text(s.mean_nm, 4),
                                 rounded_text(s.repeatability_of_mean_nm, 2));
  if (s.standard_deviation_nm) text += fmt::format(", standard deviation between results {} nm", rounded_text(*s.standard_deviation_nm, 2));
  text += fmt::format(";\nthickness scale: {} (common to all, does not average)", s.scale_stated ? rounded_text(s.scale_nm, 2) + " nm" : "not stated");
  if (s.failed > 0) text += fmt::format("; {} without an answer", s.failed);
  return text + "\n";
}

Findings all_findings(const ThicknessResults& results) {
  Findings findings;
  for (const ThicknessPair& pair : results.pairs) add_findings(findings, pair.findings);
  for (const ThicknessResult& r : results.results) {
    if (r.thickness) add_findings(findings, r.thickness->findings);
  }
  return findings;
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
    text += fmt::format("  attenuation length {} nm   ({}{})\n\n", value_with_uncertainty(l.value_nm, l.standard_uncertainty_nm),
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
  for (std::size_t p = 0; p < results.pairs.size(); ++p) {
    if (p > 0) text += "\n";
    text += pair_text(run, results.pairs[p]);
    const ThicknessSummary& summary = results.summaries[p];
    if (summary.count + summary.failed == 1) {
      for (const ThicknessResult& r : results.results) {
        if (r.pair == p) text += "\n" + one_result_text(r);
      }
    } else {
      text += "\n" + many_results_text(results, p) + "\n" + summary_text(summary);
    }
  }
  const Findings findings = all_findings(results);
  if (!findings.empty()) text += "\n" + findings_text(findings);
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
      remark = section.refusal;
    }
    if (level.outer) remark += (remark.empty() ? "" : "; ") + std::string("outer level, energy is nominal");
    rows.push_back({level.name, energy_text(level.binding_energy_ev), kinetic, section_text, beta_text, remark});
  }
  return detail::text_table(rows);
}

std::string check_text(const Run& run, const ThicknessResults& results) {
  std::string text = run.title.empty() ? "" : run.title + "\n\n";
  for (const ThicknessPair& pair : results.pairs) text += pair_text(run, pair);
  std::size_t failed = 0;
  std::string failures;
  for (const ThicknessResult& r : results.results) {
    if (r.thickness) continue;
    ++failed;
    failures += fmt::format("  no thickness: {}\n", r.failure);
  }
  text += fmt::format("\n{} areas, {} thicknesses can be computed, {} cannot\n{}", run.areas.size(), results.results.size() - failed, failed, failures);
  const Findings findings = all_findings(results);
  if (!findings.empty()) text += "\n" + findings_text(findings);
  return text;
}

}  // namespace pellicle
