// Which thicknesses a run asks for, and what all spots of each share.
#include <algorithm>
#include <cmath>

#include "base/nearest.hpp"
#include "job/contamination.hpp"
#include "job/length_choice.hpp"
#include "job/plausibility.hpp"
#include "job/reference.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/job/thickness_job.hpp"

namespace pellicle {
namespace {

std::size_t line_index(const Run& run, const std::string& label) {
  std::vector<std::string> labels;
  for (std::size_t i = 0; i < run.lines.size(); ++i) {
    if (run.lines[i].label == label) return i;
    labels.push_back(run.lines[i].label);
  }
  throw InputError(run.place, "no line is labelled \"" + label + "\"", detail::name_hint(label, labels));
}

bool is_contamination(const Run& run, const Line& line) { return run.contamination && line.label == run.contamination->line; }

void check_emitter(const Run& run, const Line& line) {
  if (!line.level) return;
  const Material& material = run.sample.material(line.from);
  if (material.formula.count(line.level->element->symbol) > 0.0) return;
  throw InputError(run.place, "line \"" + line.label + "\" is a line of " + line.level->element->symbol + ", which " +
                                  material.id + " (" + line.from + ") does not hold",
                   "check from and level of this line");
}

/// Position of the film's layer, which must lie directly on the substrate.
void check_on_substrate(const Run& run, const std::string& layer) {
  const std::size_t position = run.sample.position(layer);
  if (position + 1 < run.sample.layers.size()) {
    throw InputError(run.place, "layer \"" + run.sample.layers[position + 1].name + "\" lies between film \"" + layer +
                                    "\" and the substrate",
                     "this equation is for a film that lies directly on the substrate");
  }
}

void check_pair(const Run& run, const Line& film, const Line& substrate) {
  if (film.from == kSubstrate) {
    throw InputError(run.place, "the film line \"" + film.label + "\" comes from the substrate",
                     "the film line of a reference comes from a layer");
  }
  if (substrate.from != kSubstrate) {
    throw InputError(run.place, "the substrate line \"" + substrate.label + "\" comes from layer \"" + substrate.from + "\"",
                     "the substrate line of a reference comes from the substrate");
  }
  check_on_substrate(run, film.from);
  check_emitter(run, film);
  check_emitter(run, substrate);
  if (!film.level || !substrate.level) return;
  const CoreLevel& f = *film.level;
  const CoreLevel& s = *substrate.level;
  if (f.element != s.element || f.subshell != s.subshell || f.levels == s.levels) return;
  const double factor = f.is_half_doublet() ? s.occupancy / f.occupancy : f.occupancy / s.occupancy;
  throw InputError(run.place, "\"" + film.label + "\" is " + f.name + " but \"" + substrate.label + "\" is " + s.name +
                                  ": their areas differ by a factor of about " + rounded_text(factor, 3) + " for the doublet alone",
                   "fit both lines as full doublets or both as the same half");
}

bool same_line(const Line& film, const Line& substrate) {
  if (!film.level || !substrate.level) return film.kinetic_energy_ev == substrate.kinetic_energy_ev;
  return film.level->name == substrate.level->name;
}

void set_layer(const Run& run, const std::string& layer, const Line* emitter, ThicknessRoute& route) {
  const Material& material = run.sample.material(layer);
  route.layer = layer;
  route.density_g_cm3 = material.density_g_cm3;
  if (emitter && emitter->level) route.emitter_density_per_nm3 = atom_density_per_nm3(material, emitter->level->element->symbol);
}

void set_pair_lengths(const Run& run, const Line& film, const Line& substrate, ThicknessRoute& route) {
  const std::string& layer = route.layer;
  const bool given_in_film = film.length_nm.contains(layer);
  const bool given_in_substrate_line = substrate.length_nm.contains(layer);
  if (same_line(film, substrate)) {
    // One line, one length: that of the substrate's line, whose electrons cross the film.
    if (given_in_film && given_in_substrate_line && film.length_nm.at(layer).value != substrate.length_nm.at(layer).value) {
      throw InputError(run.place, "\"" + film.label + "\" and \"" + substrate.label + "\" are the same line but state different lengths in layer \"" +
                                      layer + "\"", "state one length for both");
    }
    route.film_length = detail::choose_length(run, given_in_film ? film : substrate, layer, substrate.kinetic_energy_ev);
  } else {
    route.film_length = detail::choose_length(run, film, layer, film.kinetic_energy_ev);
    route.substrate_length = detail::choose_length(run, substrate, layer, substrate.kinetic_energy_ev);
    add_findings(route.findings, route.substrate_length->findings);
    constexpr double kFarApart = 1.5;
    const double apart = std::max(film.kinetic_energy_ev, substrate.kinetic_energy_ev) / std::min(film.kinetic_energy_ev, substrate.kinetic_energy_ev);
    if (apart > kFarApart) {
      add_finding(route.findings, {"energies_far_apart", Severity::warning,
                                   "the kinetic energies of the two lines differ by a factor of " + rounded_text(apart, 2) +
                                       "; the thickness hangs on the ratio of two lengths, on the transmission and on the contamination",
                                   apart, kFarApart});
    }
  }
  add_findings(route.findings, route.film_length.findings);
  if (!route.film_length.formula.empty()) route.formulas.emplace_back(route.substrate_length ? kFilmLengthName : kLengthName, route.film_length.formula);
  if (route.substrate_length && !route.substrate_length->formula.empty()) route.formulas.emplace_back(kSubstrateLengthName, route.substrate_length->formula);
}

ThicknessRoute pair_route(const Run& run, const ReferenceRatio* reference, std::size_t film_index, std::size_t substrate_index) {
  const Line& film = run.lines[film_index];
  const Line& substrate = run.lines[substrate_index];
  check_pair(run, film, substrate);
  ThicknessRoute route;
  route.film_line = film_index;
  route.substrate_line = substrate_index;
  set_layer(run, film.from, &film, route);
  set_pair_lengths(run, film, substrate, route);
  detail::add_reference_ratio(run, reference, film, substrate, route);
  detail::correlate_formulas(route);
  detail::note_implausible(run, film, substrate, route);
  return route;
}

ThicknessRoute single_line_route(const Run& run, ThicknessMethod method, std::size_t index) {
  const Line& line = run.lines[index];
  ThicknessRoute route;
  route.method = method;
  check_emitter(run, line);
  if (method == ThicknessMethod::substrate_line) {
    if (run.sample.layers.empty()) throw InputError(run.place, "the sample has no layer whose thickness could be found");
    const std::string& film = run.sample.layers.back().name;
    route.substrate_line = index;
    set_layer(run, film, nullptr, route);
  } else {
    route.film_line = index;
    set_layer(run, line.from, &line, route);
  }
  route.film_length = detail::choose_length(run, line, route.layer, line.kinetic_energy_ev);
  add_findings(route.findings, route.film_length.findings);
  detail::add_reference_area(run, line, route);
  add_finding(route.findings, {"absolute_area", Severity::note,
                               "the thickness rests on absolute areas: flux, alignment and contamination must be the same as for the reference"});
  return route;
}

void note_route(ContaminationRoute route, Findings& findings) {
  switch (route) {
    case ContaminationRoute::reference: return;
    case ContaminationRoute::sensitivities:
      add_finding(findings, {"contamination_assumption", Severity::warning,
                             "the contamination thickness assumes that all other lines come from one solid, the layer just below it"});
      return;
    case ContaminationRoute::atomic_percent: break;
  }
  add_finding(findings, {"contamination_assumption", Severity::warning,
                         "the contamination thickness from apparent atomic % C assumes that all lines have the attenuation length of C 1s "
                         "and that all carbon is contamination [smith2005]"});
}

ThicknessRoute contamination_route_of(const Run& run) {
  const Contamination& c = *run.contamination;
  const std::size_t index = line_index(run, c.line);
  const Line& line = run.lines[index];
  if (line.from != c.layer || run.sample.position(c.layer) != 0) {
    throw InputError(run.place, "the contamination line \"" + c.line + "\" must come from the outermost layer", "expected layer \"" + c.layer + "\" first in [[sample.layer]]");
  }
  check_emitter(run, line);
  ThicknessRoute route;
  route.contamination = c.route;
  route.film_line = index;
  set_layer(run, c.layer, &line, route);
  route.film_length = detail::choose_length(run, line, c.layer, line.kinetic_energy_ev);
  add_findings(route.findings, route.film_length.findings);
  note_route(c.route, route.findings);
  switch (c.route) {
    case ContaminationRoute::reference:
      route.method = ThicknessMethod::film_line;
      detail::add_reference_area(run, line, route);
      return route;
    case ContaminationRoute::atomic_percent:
      route.method = ThicknessMethod::atomic_percent;
      if (run.area_unit != AreaUnit::atomic_percent) {
        throw InputError(run.place, "the contamination route atomic-percent needs areas in atomic-percent", "set area_unit = \"atomic-percent\", or choose another route");
      }
      route.factors.push_back({"percent", Quantity(100.0, 0.0), -1.0, ContributionKind::scale});
      route.reference_origin = "apparent atomic %";
      return route;
    case ContaminationRoute::sensitivities: break;
  }
  route.method = ThicknessMethod::ratio;
  detail::add_carbon_reference(run, line, route);
  return route;
}

}  // namespace

std::vector<ThicknessRoute> thickness_routes(const Run& run) {
  std::vector<ThicknessRoute> routes;
  if (run.area_unit == AreaUnit::atomic_percent) {
    for (const Line& line : run.lines) {
      if (!line.sensitivity) continue;
      throw InputError(run.place, "line \"" + line.label + "\" states a sensitivity, but areas in atomic-percent are divided by one already",
                       "leave sensitivity out, or give the areas before that division");
    }
  }
  if (run.contamination) routes.push_back(contamination_route_of(run));
  if (run.method != ThicknessMethod::ratio) {
    for (std::size_t i = 0; i < run.lines.size(); ++i) {
      const bool wanted = (run.lines[i].from == kSubstrate) == (run.method == ThicknessMethod::substrate_line);
      if (wanted && !is_contamination(run, run.lines[i])) routes.push_back(single_line_route(run, run.method, i));
    }
    if (routes.empty()) throw InputError(run.place, std::string("no line fits the method ") + method_name(run.method));
    return routes;
  }
  const auto known = [&](std::size_t film, std::size_t substrate) {
    return std::any_of(routes.begin(), routes.end(), [&](const ThicknessRoute& r) { return r.film_line == film && r.substrate_line == substrate; });
  };
  for (const ReferenceRatio& reference : run.references) {
    const std::size_t film = line_index(run, reference.film);
    const std::size_t substrate = line_index(run, reference.substrate);
    if (known(film, substrate)) {
      throw InputError(run.place, "two references name the pair \"" + reference.film + "\" and \"" + reference.substrate + "\"");
    }
    routes.push_back(pair_route(run, &reference, film, substrate));
  }
  const detail::LineScale scale = detail::line_scale(run);
  for (std::size_t f = 0; f < run.lines.size(); ++f) {
    const Line& film = run.lines[f];
    const bool film_scaled = scale == detail::LineScale::sensitivity ? film.sensitivity.has_value() : film.reference_area.has_value();
    if (film.from == kSubstrate || !film_scaled || is_contamination(run, film)) continue;
    for (std::size_t s = 0; s < run.lines.size(); ++s) {
      const Line& substrate = run.lines[s];
      const bool scaled = scale == detail::LineScale::sensitivity ? substrate.sensitivity.has_value() : substrate.reference_area.has_value();
      if (substrate.from == kSubstrate && scaled && !known(f, s)) routes.push_back(pair_route(run, nullptr, f, s));
    }
  }
  if (routes.empty()) {
    throw InputError(run.place, "no reference ratio is given",
                     "add a [[reference]] with film, substrate and ratio, or reference_area or sensitivity to every line");
  }
  return routes;
}

}  // namespace pellicle
