#include "pellicle/job/thickness_job.hpp"

#include <algorithm>
#include <cmath>
#include <map>
#include <set>
#include <tuple>

#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/sample/emission.hpp"
#include "pellicle/transport/calibrated_length.hpp"

namespace pellicle {
namespace {

/// Two lengths predicted by one formula for one material share nearly all of their error.
constexpr double kSameFormulaCorrelation = 0.9;

const Line& line_of(const Run& run, const std::string& label) {
  if (const Line* line = run.find_line(label)) return *line;
  std::vector<std::string> labels;
  for (const Line& line : run.lines) labels.push_back(line.label);
  throw InputError(run.place, "no line is labelled \"" + label + "\"", detail::name_hint(label, labels));
}

void check_emitter(const Run& run, const Line& line) {
  if (!line.level) return;
  const Material& material = run.sample.material(line.from);
  if (material.formula.count(line.level->element->symbol) > 0.0) return;
  throw InputError(run.place, "line \"" + line.label + "\" is a line of " + line.level->element->symbol + ", which " +
                                  material.id + " (" + line.from + ") does not hold",
                   "check from and level of this line");
}

void check_geometry(const Run& run, const Line& film, const Line& substrate) {
  if (film.from == kSubstrate) {
    throw InputError(run.place, "the film line \"" + film.label + "\" comes from the substrate",
                     "the film line of a reference comes from a layer");
  }
  if (substrate.from != kSubstrate) {
    throw InputError(run.place, "the substrate line \"" + substrate.label + "\" comes from layer \"" + substrate.from + "\"",
                     "the substrate line of a reference comes from the substrate");
  }
  const std::size_t position = run.sample.position(film.from);
  if (position + 1 != run.sample.layers.size()) {
    throw InputError(run.place, "layer \"" + run.sample.layers[position + 1].name + "\" lies between film \"" + film.from +
                                    "\" and the substrate",
                     "this equation is for a film that lies directly on the substrate");
  }
  check_emitter(run, film);
  check_emitter(run, substrate);
}

bool same_line(const Line& film, const Line& substrate) {
  if (!film.level || !substrate.level) return film.kinetic_energy_ev == substrate.kinetic_energy_ev;
  return film.level->name == substrate.level->name;
}

void check_doublets(const Run& run, const Line& film, const Line& substrate) {
  if (!film.level || !substrate.level) return;
  const CoreLevel& f = *film.level;
  const CoreLevel& s = *substrate.level;
  if (f.element != s.element || f.subshell != s.subshell || f.levels == s.levels) return;
  const bool film_is_half = f.is_half_doublet();
  const double factor = film_is_half ? s.occupancy / f.occupancy : f.occupancy / s.occupancy;
  throw InputError(run.place, "\"" + film.label + "\" is " + f.name + " but \"" + substrate.label + "\" is " + s.name +
                                  ": their areas differ by a factor of about " + rounded_text(factor, 3) + " for the doublet alone",
                   "fit both lines as full doublets or both as the same half");
}

LengthUsed length_of(const Run& run, const Line& line, const std::string& layer, double energy_ev) {
  const Material& material = run.sample.material(layer);
  LengthUsed used;
  used.material = material.id;
  used.energy_ev = energy_ev;
  if (const auto given = line.length_nm.find(layer); given != line.length_nm.end()) {
    used.length_nm = given->second;
    used.origin = "given";
    return used;
  }
  if (!run.length_set.empty() && line.level) {
    const CalibratedLength& row = calibrated_length(run.length_set, material.id, line.level->name, run.source.name);
    used.length_nm = row.length_nm;
    used.origin = "set " + row.set;
    if (row.mark != "published") {
      add_finding(used.findings, {"length_from_memory", Severity::note,
                                  "the length set " + row.set + " (" + row.source + ") is " + row.mark +
                                      "; verify it against your copy of the source"});
    }
    return used;
  }
  const AttenuationLength predicted = attenuation_length(material, energy_ev);
  used.length_nm = Quantity(predicted.value_nm, predicted.standard_uncertainty_nm);
  used.origin = "predicted: " + predicted.model + (predicted.imfp_model.empty() ? "" : " on " + predicted.imfp_model);
  used.findings = predicted.findings;
  add_finding(used.findings, {"length_predicted", Severity::note,
                              "the attenuation length in " + material.id + " at " + energy_text(energy_ev) +
                                  " eV is predicted (" + predicted.model + "), not measured",
                              predicted.value_nm});
  return used;
}

ThicknessPair make_pair(const Run& run, const Line& film, const Line& substrate) {
  check_geometry(run, film, substrate);
  check_doublets(run, film, substrate);
  ThicknessPair pair;
  pair.layer = film.from;
  pair.film_line = film.label;
  pair.substrate_line = substrate.label;

  const bool given_in_film = film.length_nm.contains(pair.layer);
  const bool given_in_substrate_line = substrate.length_nm.contains(pair.layer);
  if (same_line(film, substrate)) {
    // One line, one length: that of the substrate's line, whose electrons cross the film.
    if (given_in_film && given_in_substrate_line &&
        film.length_nm.at(pair.layer).value != substrate.length_nm.at(pair.layer).value) {
      throw InputError(run.place, "\"" + film.label + "\" and \"" + substrate.label + "\" are the same line but state different lengths in layer \"" +
                                      pair.layer + "\"", "state one length for both");
    }
    pair.film_length = length_of(run, given_in_film ? film : substrate, pair.layer, substrate.kinetic_energy_ev);
  } else {
    pair.film_length = length_of(run, film, pair.layer, film.kinetic_energy_ev);
    pair.substrate_length = length_of(run, substrate, pair.layer, substrate.kinetic_energy_ev);
    add_findings(pair.findings, pair.substrate_length->findings);
    if (run.sample.position(pair.layer) > 0) {
      add_finding(pair.findings, {"contamination_uncorrected", Severity::warning,
                                  "layers above the film attenuate the two lines differently, since their energies differ; "
                                  "this is not corrected",
                                  film.kinetic_energy_ev - substrate.kinetic_energy_ev, 0.0});
    }
  }
  add_findings(pair.findings, pair.film_length.findings);
  return pair;
}

void set_reference_areas(const Run& run, ThicknessPair& pair, const Line& film, const Line& substrate) {
  const Quantity& f = *film.reference_area;
  const Quantity& s = *substrate.reference_area;
  if (!(f.value > 0.0) || !(s.value > 0.0)) throw InputError(run.place, "a reference_area is not a number > 0");
  pair.reference_film_area = f;
  pair.reference_substrate_area = s;
  pair.reference_origin = "reference areas";
  pair.reference_ratio = f.value / s.value;
  if (f.standard_uncertainty && s.standard_uncertainty) {
    pair.reference_ratio.standard_uncertainty = pair.reference_ratio.value * std::hypot(f.sd() / f.value, s.sd() / s.value);
  }
}

/// The area of a row with its uncertainty: stated, counted, or assumed with a finding.
Quantity area_quantity(const AreaRow& row, AreaUnit unit, Findings& findings) {
  if (row.area_sd) return {row.area, *row.area_sd};
  if (const std::optional<double> sd = counting_uncertainty(row.area, unit, row.counting)) {
    if (!row.counting.background_counts) {
      add_finding(findings, {"background_not_given", Severity::note,
                             "no background counts are given, so the counting uncertainty leaves the background out"});
    }
    return {row.area, *sd};
  }
  const double relative = assumed_value("area_relative_sd");
  add_finding(findings, {"assumed", Severity::warning,
                         "the uncertainty of the areas is assumed to be " + rounded_text(100.0 * relative, 2) +
                             " % (common practice, no source)",
                         relative});
  return {row.area, relative * std::abs(row.area)};
}

Quantity emission_quantity(const Run& run, double emission_deg, Findings& findings) {
  if (run.emission_sd_deg) return {emission_deg, *run.emission_sd_deg};
  const double sd = assumed_value("emission_sd_deg");
  add_finding(findings, {"assumed", Severity::note,
                         "the uncertainty of the emission angle is assumed to be " + rounded_text(sd, 2) +
                             " deg (common practice, no source)",
                         sd});
  return {emission_deg, sd};
}

void estimate(const Run& run, const ThicknessPair& pair, const AreaRow& film, const AreaRow& substrate, ThicknessResult& result) {
  Findings findings;
  AreaMeasurement m;
  m.film_area = area_quantity(film, run.area_unit, findings);
  m.substrate_area = area_quantity(substrate, run.area_unit, findings);
  if (pair.reference_film_area) {
    m.reference_film_area = pair.reference_film_area;
    m.reference_substrate_area = pair.reference_substrate_area;
  } else {
    m.reference_ratio = pair.reference_ratio;
  }
  m.film_line_length_nm = pair.film_length.length_nm;
  if (pair.substrate_length) {
    m.substrate_line_length_nm = pair.substrate_length->length_nm;
    if (pair.film_length.origin == pair.substrate_length->origin && pair.film_length.origin != "given") {
      m.length_correlation = kSameFormulaCorrelation;
    }
  }
  m.emission_deg = emission_quantity(run, result.emission_deg, findings);
  result.film_area = m.film_area;
  result.substrate_area = m.substrate_area;
  try {
    Thickness thickness = thickness_from_areas(m);
    add_findings(thickness.findings, findings);
    add_findings(thickness.findings, pair.findings);
    result.thickness = std::move(thickness);
  } catch (const Error& e) {
    result.failure = e.what();
  }
}

ThicknessSummary summarise(const std::vector<ThicknessResult>& results, std::size_t pair) {
  ThicknessSummary summary;
  summary.pair = pair;
  double sum = 0.0, repeatability_squares = 0.0, scale_sum = 0.0;
  for (const ThicknessResult& r : results) {
    if (r.pair != pair) continue;
    if (!r.thickness) {
      ++summary.failed;
      continue;
    }
    ++summary.count;
    sum += r.thickness->value_nm;
    repeatability_squares += r.thickness->budget.repeatability * r.thickness->budget.repeatability;
    scale_sum += r.thickness->budget.scale;
    summary.scale_stated = summary.scale_stated && r.thickness->scale_stated;
  }
  if (summary.count == 0) return summary;
  const double n = static_cast<double>(summary.count);
  summary.mean_nm = sum / n;
  // A common error moves every result the same way, so it is averaged over results but not divided by √n.
  summary.scale_nm = scale_sum / n;
  summary.repeatability_of_mean_nm = std::sqrt(repeatability_squares) / n;
  if (summary.count < 2) return summary;
  double squares = 0.0;
  for (const ThicknessResult& r : results) {
    if (r.pair == pair && r.thickness) squares += std::pow(r.thickness->value_nm - summary.mean_nm, 2);
  }
  summary.standard_deviation_nm = std::sqrt(squares / (n - 1.0));
  // What the spots really do counts more than what counting statistics promises.
  summary.repeatability_of_mean_nm = std::max(summary.repeatability_of_mean_nm, *summary.standard_deviation_nm / std::sqrt(n));
  return summary;
}

}  // namespace

std::vector<ThicknessPair> thickness_pairs(const Run& run) {
  std::vector<ThicknessPair> pairs;
  const auto known = [&](const std::string& film, const std::string& substrate) {
    return std::any_of(pairs.begin(), pairs.end(), [&](const ThicknessPair& p) {
      return p.film_line == film && p.substrate_line == substrate;
    });
  };
  for (const ReferenceRatio& reference : run.references) {
    if (known(reference.film, reference.substrate)) {
      throw InputError(run.place, "two references name the pair \"" + reference.film + "\" and \"" + reference.substrate + "\"");
    }
    if (!(reference.ratio.value > 0.0)) {
      throw InputError(run.place, "the reference ratio " + number_text(reference.ratio.value) + " is not a number > 0");
    }
    ThicknessPair pair = make_pair(run, line_of(run, reference.film), line_of(run, reference.substrate));
    pair.reference_ratio = reference.ratio;
    pair.reference_origin = "given";
    pairs.push_back(std::move(pair));
  }
  for (const Line& film : run.lines) {
    if (film.from == kSubstrate || !film.reference_area) continue;
    for (const Line& substrate : run.lines) {
      if (substrate.from != kSubstrate || !substrate.reference_area || known(film.label, substrate.label)) continue;
      ThicknessPair pair = make_pair(run, film, substrate);
      set_reference_areas(run, pair, film, substrate);
      pairs.push_back(std::move(pair));
    }
  }
  if (pairs.empty()) {
    throw InputError(run.place, "no reference ratio is given",
                     "add a [[reference]] with film, substrate and ratio, or reference_area to a film line and a substrate line");
  }
  return pairs;
}

ThicknessResults run_thickness(const Run& run) {
  ThicknessResults all;
  all.pairs = thickness_pairs(run);

  // Rows by spot and angle, in the order in which they first appear.
  std::map<std::pair<std::string, double>, std::size_t> index;
  struct Group {
    std::string spot;
    double emission_deg;
    std::map<std::string, const AreaRow*, std::less<>> by_line;
  };
  std::vector<Group> groups;
  for (const AreaRow& row : run.areas) {
    if (!run.find_line(row.line)) {
      std::vector<std::string> labels;
      for (const Line& line : run.lines) labels.push_back(line.label);
      throw InputError(row.place, "line \"" + row.line + "\" is not declared", detail::name_hint(row.line, labels));
    }
    if (!row.emission_deg && !run.emission_deg) {
      throw InputError(row.place, "the row states no emission angle", "add a column emission_deg, or emission_deg under [instrument]");
    }
    const double emission = row.emission_deg.value_or(run.emission_deg.value_or(0.0));
    const auto [found, fresh] = index.try_emplace({row.spot, emission}, groups.size());
    if (fresh) groups.push_back({row.spot, emission, {}});
    if (!groups[found->second].by_line.try_emplace(row.line, &row).second) {
      throw InputError(row.place, "spot \"" + row.spot + "\" has line \"" + row.line + "\" twice at " + number_text(emission) + " deg emission",
                       "give repeated measurements spots of their own");
    }
  }
  if (groups.empty()) throw InputError(run.place, "the run holds no areas", "give [data] areas");

  for (const Group& group : groups) {
    for (std::size_t p = 0; p < all.pairs.size(); ++p) {
      const ThicknessPair& pair = all.pairs[p];
      ThicknessResult result;
      result.spot = group.spot;
      result.emission_deg = group.emission_deg;
      result.pair = p;
      const auto film = group.by_line.find(pair.film_line);
      const auto substrate = group.by_line.find(pair.substrate_line);
      if (film == group.by_line.end() || substrate == group.by_line.end()) {
        const std::string& missing = film == group.by_line.end() ? pair.film_line : pair.substrate_line;
        result.failure = "spot \"" + group.spot + "\" has no area of line \"" + missing + "\"";
      } else {
        estimate(run, pair, *film->second, *substrate->second, result);
      }
      all.results.push_back(std::move(result));
    }
  }
  for (std::size_t p = 0; p < all.pairs.size(); ++p) all.summaries.push_back(summarise(all.results, p));
  return all;
}

}  // namespace pellicle
