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

/// 1/E^0.75: takes the escape depth of an average matrix out of what holds it.
double average_escape_depth_weight(double energy_ev) { return std::pow(energy_ev, -kAverageMatrixExponent); }

/// IMFP of a thick layer's signal: TPP-2M, or S1 where that is refused. @throws DomainError when both are
ModelValue signal_imfp(const Material& material, double energy_ev) {
  ModelValue value = predict_imfp(material, energy_ev, ImfpModel::tpp2m);
  if (!value.value_nm) value = predict_imfp(material, energy_ev, ImfpModel::s1);
  if (!value.value_nm) throw DomainError(material.id, value.refusal, "give the reference ratio or reference areas");
  return value;
}

/// Signal of an infinitely thick layer of a line's material, up to a constant common to all lines.
struct ThickSignal {
  std::vector<SignalFactor> factors;  ///< with power +1
  std::vector<std::string> applied;   ///< in words
  std::string imfp_formula;
};

void add_imfp(const Run& run, const Line& line, ThickSignal& signal) {
  const ModelValue imfp = signal_imfp(run.sample.material(line.from), line.kinetic_energy_ev);
  signal.factors.push_back({tag("imfp", line), relative(*imfp.value_nm, kImfpRelativeSd), 1.0, ContributionKind::scale});
  signal.imfp_formula = imfp.model;
}

/// What a sensitivity, or an atomic percentage, with an average escape depth in it has of E^0.75 already.
void take_out_escape_depth(const Line& line, ThickSignal& signal) {
  signal.factors.push_back({tag("escape_depth", line), Quantity(average_escape_depth_weight(line.kinetic_energy_ev), 0.0), 1.0, ContributionKind::scale});
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

void add_transmission(const Run& run, const Line& line, ThickSignal& signal) {
  if (!line.transmission) {
    throw InputError(run.place, "areas are raw and line \"" + line.label + "\" states no transmission",
                     "give transmission for every line, or correct the areas and say transmission = \"corrected\"");
  }
  signal.factors.push_back({tag("transmission", line), *line.transmission, 1.0, ContributionKind::scale});
  signal.applied.emplace_back("transmission");
}

void add_asymmetry(const Run& run, const Line& line, ThickSignal& signal, Findings& findings) {
  signal.factors.push_back(asymmetry_factor(run, line, findings));
  signal.applied.emplace_back("asymmetry");
}

/// The solid that "elemental" sensitivities of an element were measured on.
const Material& pure_solid(const Run& run, const Line& line) {
  const std::string& symbol = line.level->element->symbol;
  // Of the forms of carbon the one that is common practice.
  if (symbol == "C") return catalogue_material("graphite");
  try {
    return catalogue_material(symbol);
  } catch (const InputError&) {
    throw InputError(run.place, "no pure solid of " + symbol + " is catalogued, so the elemental sensitivity of \"" + line.label + "\" cannot be turned into a signal",
                     "give atomic or average-matrix sensitivities");
  }
}

/// Atoms and escape depth, as the kind of the sensitivity asks for them.
void add_matrix_factors(const Run& run, const Line& line, bool shared_line, ThickSignal& signal) {
  const Material& material = run.sample.material(line.from);
  const bool by_definition = run.sensitivity_kind != SensitivityKind::atomic;
  if (by_definition && run.sensitivity_includes_escape_depth) {
    throw InputError(run.place, std::string(sensitivity_kind_name(run.sensitivity_kind)) + " sensitivities hold the escape depth by definition",
                     "leave \"escape-depth\" out of sensitivity_includes");
  }
  if (run.sensitivity_kind == SensitivityKind::elemental && !shared_line) {
    if (material.formula.terms().size() == 1) {
      signal.applied.emplace_back("nothing more: it is the pure element");
      return;
    }
    const Material& pure = pure_solid(run, line);
    const double own = atom_density_per_nm3(pure, line.level->element->symbol) * *signal_imfp(pure, line.kinetic_energy_ev).value_nm;
    signal.factors.push_back({tag("pure_element", line), relative(1.0 / own, assumed_value("bulk_density_relative_sd")), 1.0, ContributionKind::scale});
    signal.factors.push_back(atom_density(run, line));
    add_imfp(run, line, signal);
    signal.applied.emplace_back("density and IMFP over those of the pure element");
    return;
  }
  signal.factors.push_back(atom_density(run, line));
  add_imfp(run, line, signal);
  signal.applied.emplace_back("atom density");
  if (run.sensitivity_kind == SensitivityKind::elemental || (!by_definition && !run.sensitivity_includes_escape_depth)) {
    signal.applied.emplace_back("IMFP (Q = 1)");
    return;
  }
  // An average escape depth is the same for both lines but for its energy, so nothing is taken out for one line.
  if (!shared_line) take_out_escape_depth(line, signal);
  signal.applied.emplace_back("IMFP over that of an average matrix (∝ E^0.75)");
}

ThickSignal signal_from_sensitivity(const Run& run, const Line& line, bool shared_line, Findings& findings) {
  ThickSignal signal;
  signal.factors.push_back({tag("sensitivity", line), with_assumed_sensitivity(*line.sensitivity, findings), 1.0, ContributionKind::scale});
  signal.applied.push_back(std::string(sensitivity_kind_name(run.sensitivity_kind)) + " sensitivity");
  add_matrix_factors(run, line, shared_line, signal);
  if (run.sensitivity_includes_transmission && run.transmission_corrected) {
    throw InputError(run.place, "the sensitivities hold the transmission, but the areas are corrected for it already",
                     "give raw areas with transmission = \"raw\", or sensitivities without it");
  }
  if (shared_line) return signal;
  if (!run.transmission_corrected && !run.sensitivity_includes_transmission) add_transmission(run, line, signal);
  if (run.sensitivity_kind == SensitivityKind::atomic) {
    if (!run.sensitivity_includes_asymmetry) add_asymmetry(run, line, signal, findings);
  } else if (const double angle = run.geometry.source_analyser_angle_deg.value_or(kMagicAngleDeg); std::abs(angle - kMagicAngleDeg) > 2.0) {
    add_finding(findings, {"asymmetry_not_applied", Severity::note,
                           std::string(sensitivity_kind_name(run.sensitivity_kind)) +
                               " sensitivities are taken to belong to the angle between X-rays and analyser of this instrument, which is not 54.7 deg",
                           angle, kMagicAngleDeg});
  }
  return signal;
}

ThickSignal computed_signal(const Run& run, const Line& line, bool shared_line, Findings& findings) {
  ThickSignal signal;
  signal.factors.push_back(atom_density(run, line));
  add_imfp(run, line, signal);
  signal.applied = {"atom density", "IMFP (Q = 1)"};
  if (shared_line) return signal;
  if (run.area_unit == AreaUnit::atomic_percent) {
    take_out_escape_depth(line, signal);
    signal.applied.back() = "IMFP over that of an average matrix (∝ E^0.75)";
    add_finding(findings, {"atomic_percent_assumption", Severity::warning,
                           "apparent atomic % is taken as area over a sensitivity that holds cross section, asymmetry, transmission and an average "
                           "escape depth (common practice, no source)"});
    return signal;
  }
  const TabulatedValue section = photoionisation_cross_section_barn(*line.level, run.source);
  if (!section.value) throw DomainError(run.place, section.refusal);
  signal.factors.push_back({tag("cross_section", line), relative(*section.value, kCrossSectionRelativeSd), 1.0, ContributionKind::scale});
  signal.applied.emplace_back("cross section");
  add_asymmetry(run, line, signal, findings);
  if (!run.transmission_corrected) add_transmission(run, line, signal);
  return signal;
}

/// @param shared_line the other line of the pair is the same line, so whatever depends on level and energy alone
///        (cross section, asymmetry, transmission) cancels and is neither used nor asked for
ThickSignal thick_signal(const Run& run, const Line& line, bool from_sensitivity, bool shared_line, Findings& findings) {
  if (!line.level) {
    throw InputError(run.place, "line \"" + line.label + "\" is known by its kinetic energy alone, so no atom density can be worked out for it",
                     "give level, or reference areas");
  }
  ThickSignal signal = from_sensitivity ? signal_from_sensitivity(run, line, shared_line, findings) : computed_signal(run, line, shared_line, findings);
  if (line.main_peak_fraction) {
    signal.factors.push_back({tag("main_peak_fraction", line), *line.main_peak_fraction, 1.0, ContributionKind::scale});
    signal.applied.emplace_back("main-peak fraction");
  }
  return signal;
}

/// Everything that depends on level and energy alone is one for a pair of the same line.
bool same_level(const Line& a, const Line& b) { return a.level && b.level && a.level->name == b.level->name; }

void add_computed_ratio(const Run& run, const Line& film, const Line& substrate, bool from_sensitivity, ThicknessRoute& route) {
  const bool shared = same_level(film, substrate);
  ThickSignal film_signal = thick_signal(run, film, from_sensitivity, shared, route.findings);
  ThickSignal substrate_signal = thick_signal(run, substrate, from_sensitivity, shared, route.findings);
  if (shared && from_sensitivity && film.sensitivity->value == substrate.sensitivity->value) {
    // One factor for both: it cancels, its error too.
    for (ThickSignal* signal : {&film_signal, &substrate_signal}) {
      std::erase_if(signal->factors, [](const SignalFactor& f) { return f.name.starts_with("sensitivity_"); });
    }
  }
  const Quantity film_product = product(film_signal.factors), substrate_product = product(substrate_signal.factors);
  const double ratio = film_product.value / substrate_product.value;
  double variance = std::pow(film_product.sd() / film_product.value, 2) + std::pow(substrate_product.sd() / substrate_product.value, 2);
  if (!film_signal.imfp_formula.empty() && film_signal.imfp_formula == substrate_signal.imfp_formula) {
    variance -= 2.0 * kSameFormulaCorrelation * kImfpRelativeSd * kImfpRelativeSd;
  }
  for (SignalFactor& f : film_signal.factors) {
    f.power = -f.power;
    route.factors.push_back(f);
  }
  for (const SignalFactor& f : substrate_signal.factors) route.factors.push_back(f);
  for (const auto& [name, signal] : {std::pair{"imfp_film", &film_signal}, {"imfp_substrate", &substrate_signal}}) {
    if (!signal->imfp_formula.empty()) route.formulas.emplace_back(name, signal->imfp_formula);
  }
  route.reference_applied = substrate_signal.applied.size() > film_signal.applied.size() ? substrate_signal.applied : film_signal.applied;
  route.reference_origin = from_sensitivity ? "sensitivities" : "computed";
  if (!from_sensitivity || shared) {
    const double sd = assumed_value("computed_reference_ratio_relative_sd");
    route.factors.push_back({"computed_reference_ratio", Quantity(1.0, sd), -1.0, ContributionKind::scale});
    variance += sd * sd;
    add_finding(route.findings,
                {"reference_computed", Severity::warning,
                 std::string(from_sensitivity ? "film and substrate show the same line, so its sensitivity cancels and the reference ratio is computed"
                                              : "the reference ratio is computed") +
                     ": intrinsic losses outside the fitted peaks are not in it, and it may be wrong by "
                     "a factor of nearly two (silicon dioxide on silicon: 0.5 computed, 0.93 measured)",
                 ratio});
  }
  add_finding(route.findings, {"elastic_factor_not_applied", Severity::note,
                               "elastic scattering is left out of the signal of a thick layer: density times IMFP without the factor Q (1 here), "
                               "and the asymmetry of free atoms; this would change a ratio by a few per cent"});
  route.reference_ratio = Quantity(ratio, ratio * std::sqrt(variance));
}

/// What the tilt did to a reference area, as power of r. @return the factor
double add_tilt_factor(const Run& run, const Line& line, double power, ThicknessRoute& route, const char* name) {
  if (!line.reference_emission_deg || run.geometry.signal_area == SignalArea::analyser) return 1.0;
  const double factor = tilt_factor(run.geometry, *line.reference_emission_deg);
  route.factors.push_back({name, Quantity(factor, 0.0), power, ContributionKind::scale});
  return factor;
}

}  // namespace

void correlate_formulas(ThicknessRoute& route) {
  for (std::size_t a = 0; a < route.formulas.size(); ++a) {
    for (std::size_t b = a + 1; b < route.formulas.size(); ++b) {
      if (route.formulas[a].second != route.formulas[b].second) continue;
      route.correlations.push_back({route.formulas[a].first, route.formulas[b].first, kSameFormulaCorrelation});
    }
  }
}

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

Quantity response_per_atom(const Run& run, const Line& line, std::vector<std::string>& applied, Findings& findings) {
  ThickSignal signal = thick_signal(run, line, run.area_unit != AreaUnit::atomic_percent, false, findings);
  std::erase_if(signal.factors, [](const SignalFactor& f) { return f.name.starts_with("density_"); });
  for (SignalFactor& f : signal.factors) {
    if (f.name.starts_with("imfp_")) f.quantity.standard_uncertainty = 0.0;
  }
  applied = signal.applied;
  return product(signal.factors);
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
  const double film_tilt = add_tilt_factor(run, film, 1.0, route, "tilt_of_film_reference");
  const double substrate_tilt = add_tilt_factor(run, substrate, -1.0, route, "tilt_of_substrate_reference");
  if (film.reference_emission_deg.has_value() != substrate.reference_emission_deg.has_value() && run.geometry.signal_area != SignalArea::analyser) {
    throw InputError(run.place, "only one of the reference areas states its emission_deg", "state both angles");
  }
  route.reference_origin = "reference areas";
  route.reference_ratio = Quantity(f.value / film_tilt / (s.value / substrate_tilt));
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
