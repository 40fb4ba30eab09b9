// Notation of comments: thick-layer signal I∞ = S N λ T W or σ W N λ T times the share of the fitted peak.
#include "job/reference.hpp"

#include <algorithm>
#include <cmath>

#include "base/csv.hpp"
#include "base/nearest.hpp"
#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/lines/photoionisation.hpp"

namespace pellicle::detail {
namespace {

/// Angle between X-rays and analyser taken where none is stated: there the asymmetry has no effect.
constexpr double kMagicAngleDeg = 54.7;
/// Energy dependence of the IMFP of the average matrix, from memory.
constexpr double kAverageMatrixExponent = 0.75;
/// A computed asymmetry parameter is good to this.
constexpr double kAsymmetrySd = 0.05;
/// Evaluated cross sections of two sources agree to this.
constexpr double kCrossSectionRelativeSd = 0.03;
/// Relative standard uncertainty of a predicted IMFP.
constexpr double kImfpRelativeSd = 0.10;
/// Quantities from one formula share most of their error.
constexpr double kSameFormulaCorrelation = 0.9;

struct TableRatio {
  std::string key, film, substrate, line, source, mark;
  Quantity ratio;
};

const std::vector<TableRatio>& table_ratios() {
  static const std::vector<TableRatio> all = [] {
    std::vector<TableRatio> rows;
    for_each_record("reference_ratios", [&](const CsvRecord& row) {
      Quantity ratio = row.number("ratio");
      ratio.standard_uncertainty = row.optional_number("sd");
      rows.push_back({row.text("key"), row.text("film"), row.text("substrate"), row.text("line"), row.text("source"), row.text("mark"), ratio});
    });
    return rows;
  }();
  return all;
}

const TableRatio& table_ratio(const Run& run, const ReferenceRatio& reference, const Line& film, const Line& substrate) {
  std::vector<std::string> keys;
  for (const TableRatio& row : table_ratios()) {
    keys.push_back(row.key);
    if (row.key != reference.table_key) continue;
    const bool fits = run.sample.material(film.from).id == row.film && run.sample.substrate.id == row.substrate && film.level &&
                      substrate.level && film.level->subshell == substrate.level->subshell &&
                      film.level->element->symbol + " " + film.level->subshell == row.line;
    if (!fits) {
      throw InputError(run.place, "the table ratio \"" + row.key + "\" is for " + row.line + " of " + row.film + " on " + row.substrate,
                       "it does not fit \"" + film.label + "\" and \"" + substrate.label + "\"");
    }
    return row;
  }
  throw InputError(run.place, "unknown table ratio \"" + reference.table_key + "\"", name_hint(reference.table_key, keys));
}

Quantity relative(double value, double relative_sd) { return {value, relative_sd * value}; }

bool is_film(const Line& line) { return line.from != kSubstrate; }

std::string tag(const char* what, const Line& line) { return std::string(what) + (is_film(line) ? "_film" : "_substrate"); }

/// N of the emitting element, with the uncertainty of the density.
SignalFactor atom_density(const Run& run, const Line& line) {
  const Material& material = run.sample.material(line.from);
  const double sd = assumed_value(is_film(line) ? "film_density_relative_sd" : "bulk_density_relative_sd");
  return {tag("density", line), relative(atom_density_per_nm3(material, line.level->element->symbol), sd), 1.0, ContributionKind::scale};
}

ModelValue primary_imfp(const Material& material, double energy_ev) {
  ModelValue value = predict_imfp(material, energy_ev, ImfpModel::tpp2m);
  return value.value_nm ? value : predict_imfp(material, energy_ev, ImfpModel::s1);
}

double required_imfp_nm(const Material& material, double energy_ev) {
  const ModelValue value = primary_imfp(material, energy_ev);
  if (!value.value_nm) throw DomainError(material.id, value.refusal, "give the reference ratio or reference areas");
  return *value.value_nm;
}

SignalFactor imfp_factor(const Run& run, const Line& line) {
  return {tag("imfp", line), relative(required_imfp_nm(run.sample.material(line.from), line.kinetic_energy_ev), kImfpRelativeSd), 1.0,
          ContributionKind::scale};
}

/// W = 1 + (β/2)(3/2 sin²γ − 1), unpolarised X-rays. @cite reilman1976
SignalFactor asymmetry_factor(const Run& run, const Line& line, Findings& findings) {
  if (!run.geometry.source_analyser_angle_deg) {
    add_finding(findings, {"assumed", Severity::note,
                           "the angle between X-rays and analyser is assumed to be 54.7 deg, where asymmetry has no effect "
                           "(common practice, no source)",
                           kMagicAngleDeg});
  }
  const double gamma = run.geometry.source_analyser_angle_deg.value_or(kMagicAngleDeg) * kRadianPerDegree;
  const double slope = 0.5 * (1.5 * std::sin(gamma) * std::sin(gamma) - 1.0);
  const TabulatedValue beta = asymmetry_parameter(*line.level, run.source);
  if (!beta.value) {
    if (std::abs(slope) < 1e-3) return {tag("asymmetry", line), Quantity(1.0, 0.0), 1.0, ContributionKind::scale};
    throw DomainError(run.place, beta.refusal, "or measure at 54.7 deg between X-rays and analyser");
  }
  return {tag("asymmetry", line), Quantity(1.0 + *beta.value * slope, kAsymmetrySd * std::abs(slope)), 1.0, ContributionKind::scale};
}

void add_transmission(const Run& run, const Line& line, std::vector<SignalFactor>& factors) {
  if (!line.transmission) {
    throw InputError(run.place, "areas are raw and line \"" + line.label + "\" states no transmission",
                     "give transmission for every line, or correct the areas and say transmission = \"corrected\"");
  }
  factors.push_back({tag("transmission", line), *line.transmission, 1.0, ContributionKind::scale});
}

/// Factors of a sensitivity that already hold the escape depth or relate to pure elements or an average matrix.
void add_matrix_factors(const Run& run, const Line& line, bool shared_line, std::vector<SignalFactor>& factors,
                        std::vector<std::string>& applied) {
  factors.push_back(atom_density(run, line));
  applied.emplace_back("atom density");
  if (run.sensitivity_kind == SensitivityKind::atomic) {
    if (!run.sensitivity_includes_escape_depth) {
      factors.push_back(imfp_factor(run, line));
      applied.emplace_back("IMFP (Q = 1)");
    }
    return;
  }
  if (run.sensitivity_includes_escape_depth) {
    throw InputError(run.place, std::string(sensitivity_kind_name(run.sensitivity_kind)) + " sensitivities hold the escape depth by definition",
                     "leave \"escape-depth\" out of sensitivity_includes");
  }
  factors.push_back(imfp_factor(run, line));
  if (shared_line) return;
  if (run.sensitivity_kind == SensitivityKind::elemental) {
    const Material& pure = catalogue_material(line.level->element->symbol);
    const double own = atom_density_per_nm3(pure, line.level->element->symbol) * required_imfp_nm(pure, line.kinetic_energy_ev);
    factors.push_back({tag("pure_element", line), relative(1.0 / own, assumed_value("bulk_density_relative_sd")), 1.0, ContributionKind::scale});
    applied.emplace_back("density and IMFP over those of the pure element");
  } else {
    // The average matrix is the same for both lines but for the energy of its IMFP.
    factors.push_back({tag("average_matrix", line), Quantity(std::pow(line.kinetic_energy_ev, -kAverageMatrixExponent), 0.0), 1.0, ContributionKind::scale});
    applied.emplace_back("density and IMFP over those of an average matrix (IMFP ∝ E^0.75)");
  }
}

/// Everything that depends on level and energy alone is one for a pair of the same line.
bool same_level(const Line& a, const Line& b) { return a.level && b.level && a.level->name == b.level->name; }

void correlate(ThicknessRoute& route, const std::string& a, const std::string& b) {
  const auto has = [&](const std::string& name) {
    return std::any_of(route.factors.begin(), route.factors.end(), [&](const SignalFactor& f) { return f.name == name; });
  };
  if (has(a) && has(b)) route.correlations.push_back({a, b, kSameFormulaCorrelation});
}

/// The lengths of the film and the IMFPs of a computed signal come from one formula.
void correlate_lengths(ThicknessRoute& route) {
  correlate(route, "imfp_film", "imfp_substrate");
  if (!route.film_length.predicted) return;
  const char* film_name = route.substrate_length ? kFilmLengthName : kLengthName;
  for (const char* imfp : {"imfp_film", "imfp_substrate"}) {
    const bool present = std::any_of(route.factors.begin(), route.factors.end(), [&](const SignalFactor& f) { return f.name == imfp; });
    if (!present) continue;
    route.correlations.push_back({imfp, film_name, kSameFormulaCorrelation});
    if (route.substrate_length && route.substrate_length->predicted) {
      route.correlations.push_back({imfp, kSubstrateLengthName, kSameFormulaCorrelation});
    }
  }
}

void add_computed_ratio(const Run& run, const Line& film, const Line& substrate, bool from_sensitivity, ThicknessRoute& route) {
  if (from_sensitivity && run.area_unit == AreaUnit::atomic_percent) {
    throw InputError(run.place, "the areas are in atomic-percent, which hold the sensitivities already",
                     "leave sensitivity out and give a [[reference]] ratio, for example \"computed\"");
  }
  std::vector<std::string> applied;
  const bool shared = same_level(film, substrate);
  std::vector<SignalFactor> film_signal = thick_signal(run, film, from_sensitivity, shared, applied, route.findings);
  applied.clear();
  std::vector<SignalFactor> substrate_signal = thick_signal(run, substrate, from_sensitivity, shared, applied, route.findings);
  if (shared && from_sensitivity && film.sensitivity->value == substrate.sensitivity->value) {
    // One factor for both: it cancels, its error too.
    for (auto* factors : {&film_signal, &substrate_signal}) {
      std::erase_if(*factors, [](const SignalFactor& f) { return f.name.starts_with("sensitivity_"); });
    }
  }
  const double ratio = product(film_signal).value / product(substrate_signal).value;
  for (SignalFactor& f : film_signal) {
    f.power = -f.power;
    route.factors.push_back(f);
  }
  for (const SignalFactor& f : substrate_signal) route.factors.push_back(f);
  route.reference_applied = applied;
  route.reference_origin = from_sensitivity ? "sensitivities" : "computed";
  double variance = std::pow(product(film_signal).sd() / product(film_signal).value, 2) +
                    std::pow(product(substrate_signal).sd() / product(substrate_signal).value, 2);
  if (!from_sensitivity) {
    const double sd = assumed_value("computed_reference_ratio_relative_sd");
    route.factors.push_back({"computed_reference_ratio", Quantity(1.0, sd), -1.0, ContributionKind::scale});
    variance += sd * sd;
    add_finding(route.findings,
                {"reference_computed", Severity::warning,
                 "the reference ratio is computed: intrinsic losses outside the fitted peaks are not in it, and it may be wrong by "
                 "a factor of nearly two (silicon dioxide on silicon: 0.5 computed, 0.93 measured)",
                 ratio});
  }
  add_finding(route.findings, {"elastic_factor_not_applied", Severity::note,
                               "the signal of a thick layer is taken as density times IMFP, without the factor Q of elastic scattering "
                               "(1 here); it would change a ratio by a few per cent"});
  route.reference_ratio = Quantity(ratio, ratio * std::sqrt(variance));
  correlate_lengths(route);
}

void add_tilt_factor(const Run& run, const Line& line, double power, ThicknessRoute& route, const char* name) {
  if (!line.reference_emission_deg || run.geometry.signal_area == SignalArea::analyser) return;
  route.factors.push_back({name, Quantity(tilt_factor(run.geometry, *line.reference_emission_deg), 0.0), power, ContributionKind::scale});
}

}  // namespace

Quantity product(const std::vector<SignalFactor>& factors) {
  double value = 1.0, variance = 0.0;
  for (const SignalFactor& f : factors) {
    value *= std::pow(f.quantity.value, f.power);
    variance += std::pow(f.power * f.quantity.sd() / f.quantity.value, 2);
  }
  return {value, std::abs(value) * std::sqrt(variance)};
}

Quantity with_assumed_sensitivity(Quantity s, Findings& findings) {
  if (s.standard_uncertainty) return s;
  const double sd = assumed_value("sensitivity_relative_sd");
  s.standard_uncertainty = sd * s.value;
  add_finding(findings, {"assumed", Severity::warning,
                         "the uncertainty of the sensitivities is assumed to be " + rounded_text(100.0 * sd, 2) + " % (common practice, no source)", sd});
  return s;
}

LineScale line_scale(const Run& run) {
  std::string areas, sensitivities, none;
  const auto list = [](std::string& text, const Line& line) { text += (text.empty() ? "\"" : ", \"") + line.label + "\""; };
  for (const Line& line : run.lines) {
    if (line.reference_area && line.sensitivity) {
      throw InputError(run.place, "line \"" + line.label + "\" states both reference_area and sensitivity", "state one of them, the same for all lines");
    }
    const bool covered = std::any_of(run.references.begin(), run.references.end(), [&](const ReferenceRatio& r) {
      return r.film == line.label || r.substrate == line.label;
    });
    const bool contamination = run.contamination && run.contamination->line == line.label && run.contamination->route == ContaminationRoute::reference;
    if (line.reference_area) {
      if (!contamination) list(areas, line);
    } else if (line.sensitivity) {
      list(sensitivities, line);
    } else if (!covered) {
      list(none, line);
    }
  }
  if ((!areas.empty()) + (!sensitivities.empty()) + (!none.empty()) > 1 && (!areas.empty() || !sensitivities.empty())) {
    std::string fact = "the lines mix their scales:";
    if (!areas.empty()) fact += " reference_area on " + areas;
    if (!sensitivities.empty()) fact += (areas.empty() ? "" : ",") + std::string(" sensitivity on ") + sensitivities;
    if (!none.empty()) fact += ", neither on " + none;
    throw InputError(run.place, fact, "state one kind on every line, or give a [[reference]] ratio");
  }
  if (!areas.empty()) return LineScale::reference_area;
  return sensitivities.empty() ? LineScale::none : LineScale::sensitivity;
}

std::vector<SignalFactor> thick_signal(const Run& run, const Line& line, bool from_sensitivity, bool shared_line,
                                       std::vector<std::string>& applied, Findings& findings) {
  if (!line.level) {
    throw InputError(run.place, "line \"" + line.label + "\" is known by its kinetic energy alone, so no atom density can be worked out for it",
                     "give level, or reference areas");
  }
  std::vector<SignalFactor> factors;
  if (from_sensitivity) {
    factors.push_back({tag("sensitivity", line), with_assumed_sensitivity(*line.sensitivity, findings), 1.0, ContributionKind::scale});
    applied.push_back(std::string(sensitivity_kind_name(run.sensitivity_kind)) + " sensitivity");
    add_matrix_factors(run, line, shared_line, factors, applied);
    if (run.sensitivity_includes_transmission && run.transmission_corrected) {
      throw InputError(run.place, "the sensitivities hold the transmission, but the areas are corrected for it already",
                       "give raw areas with transmission = \"raw\", or sensitivities without it");
    }
    if (!shared_line && !run.transmission_corrected && !run.sensitivity_includes_transmission) {
      add_transmission(run, line, factors);
      applied.emplace_back("transmission");
    }
    if (!shared_line && run.sensitivity_kind == SensitivityKind::atomic) {
      factors.push_back(asymmetry_factor(run, line, findings));
      applied.emplace_back("asymmetry");
    }
  } else {
    factors.push_back(atom_density(run, line));
    factors.push_back(imfp_factor(run, line));
    applied = {"atom density", "IMFP (Q = 1)"};
    if (!shared_line && run.area_unit != AreaUnit::atomic_percent) {
      const TabulatedValue section = photoionisation_cross_section_barn(*line.level, run.source);
      if (!section.value) throw DomainError(run.place, section.refusal);
      factors.push_back({tag("cross_section", line), relative(*section.value, kCrossSectionRelativeSd), 1.0, ContributionKind::scale});
      factors.push_back(asymmetry_factor(run, line, findings));
      applied.emplace_back("cross section");
      applied.emplace_back("asymmetry");
      if (!run.transmission_corrected) {
        add_transmission(run, line, factors);
        applied.emplace_back("transmission");
      }
    }
  }
  if (line.main_peak_fraction) {
    factors.push_back({tag("main_peak_fraction", line), *line.main_peak_fraction, 1.0, ContributionKind::scale});
    applied.emplace_back("main-peak fraction");
  }
  return factors;
}

Quantity response_per_atom(const Run& run, const Line& line, std::vector<std::string>& applied, Findings& findings) {
  std::vector<SignalFactor> factors;
  if (run.area_unit == AreaUnit::atomic_percent) {
    factors = {imfp_factor(run, line), {"average_matrix", Quantity(std::pow(line.kinetic_energy_ev, -kAverageMatrixExponent), 0.0)}};
    applied = {"IMFP over that of an average matrix (IMFP ∝ E^0.75)"};
  } else {
    factors = thick_signal(run, line, true, false, applied, findings);
  }
  std::erase_if(factors, [](const SignalFactor& f) { return f.name.starts_with("density_"); });
  for (SignalFactor& f : factors) {
    if (f.name.starts_with("imfp_")) f.quantity.standard_uncertainty = 0.0;
  }
  return product(factors);
}

void add_reference_ratio(const Run& run, const ReferenceRatio* reference, const Line& film, const Line& substrate, ThicknessRoute& route) {
  if (reference && reference->origin == ReferenceOrigin::computed) {
    add_computed_ratio(run, film, substrate, false, route);
    return;
  }
  if (reference && reference->origin == ReferenceOrigin::table) {
    const TableRatio& row = table_ratio(run, *reference, film, substrate);
    route.factors.push_back({"reference_ratio", row.ratio, -1.0, ContributionKind::scale});
    route.reference_ratio = row.ratio;
    route.reference_origin = "table:" + row.key;
    if (row.mark != "published") {
      add_finding(route.findings, {"reference_from_memory", Severity::note,
                                   "the reference ratio of table " + row.key + " (" + row.source + ") is " + row.mark +
                                       "; verify it against your copy of the source",
                                   row.ratio.value});
    }
    return;
  }
  if (reference) {
    if (!(reference->ratio.value > 0.0)) {
      throw InputError(run.place, "the reference ratio " + number_text(reference->ratio.value) + " is not a number > 0");
    }
    route.factors.push_back({"reference_ratio", reference->ratio, -1.0, ContributionKind::scale});
    route.reference_ratio = reference->ratio;
    route.reference_origin = "given";
    return;
  }
  if (film.sensitivity) {
    add_computed_ratio(run, film, substrate, true, route);
    return;
  }
  const Quantity& f = *film.reference_area;
  const Quantity& s = *substrate.reference_area;
  route.factors.push_back({"reference_film_area", f, -1.0, ContributionKind::scale, true});
  route.factors.push_back({"reference_substrate_area", s, 1.0, ContributionKind::scale, true});
  add_tilt_factor(run, film, 1.0, route, "tilt_of_film_reference");
  add_tilt_factor(run, substrate, -1.0, route, "tilt_of_substrate_reference");
  if (film.reference_emission_deg.has_value() != substrate.reference_emission_deg.has_value() && run.geometry.signal_area != SignalArea::analyser) {
    throw InputError(run.place, "only one of the reference areas states its emission_deg", "state both angles");
  }
  route.reference_origin = "reference areas";
  route.reference_ratio = Quantity(f.value / s.value);
  if (f.standard_uncertainty && s.standard_uncertainty) {
    route.reference_ratio->standard_uncertainty = route.reference_ratio->value * std::hypot(f.sd() / f.value, s.sd() / s.value);
  }
}

void add_reference_area(const Run& run, const Line& line, ThicknessRoute& route) {
  if (!line.reference_area) {
    throw InputError(run.place, "line \"" + line.label + "\" states no reference_area", "a single line needs the area of an infinitely thick layer of its material");
  }
  route.factors.push_back({"reference_area", *line.reference_area, -1.0, ContributionKind::scale, true});
  route.reference_ratio = line.reference_area;
  route.reference_origin = "reference area";
  add_tilt_factor(run, line, 1.0, route, "tilt_of_reference");
}

}  // namespace pellicle::detail
