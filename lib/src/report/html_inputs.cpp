// Sections 1 to 6: what went in.
#include <fmt/format.h>

#include <algorithm>
#include <set>
#include <utility>

#include "pellicle/base/number.hpp"
#include "pellicle/matter/element.hpp"
#include "pellicle/transport/attenuation_length.hpp"
#include "report/html_report.hpp"
#include "report/html_sketch.hpp"
#include "report/wording.hpp"

namespace pellicle::detail {

void write_specimen(const Report& report, HtmlWriter& w) {
  const Run& run = report.run;
  w.section("specimen", "Specimen and record");
  w.begin_facts();
  // What belongs to instrument and areas stands there.
  static const std::vector<std::pair<std::string, std::string>> own = {{"specimen", "Specimen"},
                                                                       {"analyst", "Analyst"},
                                                                       {"date", "Date of measurement"},
                                                                       {"charge_reference", "Charge reference"},
                                                                       {"damage_check", "Check for X-ray damage"}};
  static const std::set<std::string> elsewhere = {"instrument_id", "pass_energy_ev", "background", "fit_model"};
  std::set<std::string> known = elsewhere;
  for (const auto& [key, name] : own) {
    w.fact(name, record_of(run, key));
    known.insert(key);
  }
  for (const auto& [key, value] : run.record) {
    if (!known.contains(key)) w.fact(key, value);
  }
  w.end_facts();
  Rows rows;
  for (const Layer& layer : run.sample.layers) {
    rows.push_back({text_cell(layer.name), text_cell(layer.material.id), text_cell(layer.material.formula.text()),
                    layer.thickness_nm ? Cell{stated_html(*layer.thickness_nm, "nm")} : Cell{"not given"}});
  }
  const Material& bottom = run.sample.substrate;
  rows.push_back(
      {text_cell(kSubstrate), text_cell(bottom.id), text_cell(bottom.formula.text()), Cell{"taken as infinite"}});
  w.table("Sample as modelled, outermost layer first", {"Layer", "Material", "Composition", "Thickness put in"}, rows);
  w.end_section();
}

namespace {

std::string angles_words(const std::set<double>& angles, bool takeoff) {
  std::vector<std::string> words;
  for (const double a : angles) words.push_back(angle_words(takeoff ? 90.0 - a : a) + "°");
  return joined(words);
}

}  // namespace

void write_instrument(const Report& report, HtmlWriter& w) {
  const Run& run = report.run;
  const Geometry& g = run.geometry;
  std::set<double> angles;
  for (const ThicknessResult& r : report.all.results) angles.insert(r.emission_deg);
  w.section("instrument", "Instrument and geometry");
  w.begin_facts();
  w.fact("Instrument", record_of(run, "instrument_id"));
  w.fact("X-ray source", run.source.name + (run.source.name.find("eV") == std::string::npos
                                                ? ", " + number_text(run.source.photon_energy_ev) + " eV"
                                                : ""));
  const std::string pass = record_of(run, "pass_energy_ev");
  w.fact("Pass energy", pass.empty() ? "" : pass + " eV");
  w.fact("Emission angle, from the surface normal", angles_words(angles, false));
  w.fact("Take-off angle, from the surface plane", angles_words(angles, true));
  w.fact("Standard uncertainty of the angle",
         run.emission_sd_deg ? angle_words(*run.emission_sd_deg) + "°"
                             : "not stated; " + angle_words(assumed_value("emission_sd_deg")) + "° assumed");
  w.fact("Angle between X-rays and analyser",
         g.source_analyser_angle_deg ? angle_words(*g.source_analyser_angle_deg) + "°" : "");
  w.fact("Acceptance of the analyser",
         g.acceptance_half_angle_deg > 0.0
             ? "cone of half angle " + angle_words(g.acceptance_half_angle_deg) + "°, averaged over"
             : "not stated; the axis alone is used");
  w.fact("Analysed patch is limited by",
         g.signal_area == SignalArea::analyser ? "the analyser's field of view" : "the X-ray spot");
  if (g.tilt_direction) w.fact("Tilt direction", tilt_direction_name(*g.tilt_direction));
  w.end_facts();
  w.figure(geometry_sketch(run.sample), "Both angle conventions and the order of the layers; not to scale.");
  w.end_section();
}

namespace {

/// Areas shown; they are inputs, and the JSON result repeats all of them.
constexpr std::size_t kMostAreaRows = 200;

/// How many areas have an uncertainty of which origin.
std::string area_uncertainty_words(const Run& run) {
  std::size_t stated = 0, counted_with = 0, counted_without = 0, assumed = 0, missing = 0;
  for (const AreaRow& row : run.areas) {
    if (row.area_sd) {
      ++stated;
    } else if (!row.area) {
      ++missing;
    } else if (counting_uncertainty(*row.area, run.area_unit, row.counting)) {
      ++(row.counting.background_counts ? counted_with : counted_without);
    } else {
      ++assumed;
    }
  }
  std::vector<std::string> parts;
  if (stated > 0) parts.push_back(std::to_string(stated) + " stated");
  if (counted_with > 0) parts.push_back(std::to_string(counted_with) + " by counting statistics, background included");
  if (counted_without > 0)
    parts.push_back(std::to_string(counted_without) + " by counting statistics, background not given");
  if (assumed > 0) {
    parts.push_back(fmt::format("{} assumed, {} % (common practice, no source)", assumed,
                                rounded_text(100.0 * assumed_value("area_relative_sd"), 2)));
  }
  if (missing > 0) parts.push_back(std::to_string(missing) + " not detected");
  return joined(parts);
}

std::string sensitivity_words(const Run& run) {
  const bool any =
      std::any_of(run.lines.begin(), run.lines.end(), [](const Line& l) { return l.sensitivity.has_value(); });
  if (!any) return {};
  std::string text = std::string(sensitivity_kind_name(run.sensitivity_kind)) + " sensitivities";
  if (run.sensitivity_includes_transmission) text += ", transmission included";
  if (run.sensitivity_includes_escape_depth) text += ", escape depth included";
  if (run.sensitivity_includes_asymmetry) text += ", asymmetry included";
  return text;
}

std::string components_words(const Line& line) {
  std::vector<std::string> parts;
  for (const Component& c : line.components)
    parts.push_back(c.label + (c.weight == 1.0 ? "" : " × " + number_text(c.weight)));
  return joined(parts);
}

std::string line_remarks_html(const Line& line) {
  std::string html;
  const auto add = [&](const char* name, const std::optional<Quantity>& q) {
    if (q) html += (html.empty() ? "" : "; ") + std::string(name) + " " + stated_html(*q, "");
  };
  add("main-peak fraction", line.main_peak_fraction);
  add("sensitivity", line.sensitivity);
  add("transmission", line.transmission);
  add("reference area", line.reference_area);
  if (line.reference_area && line.reference_emission_deg)
    html += " at " + angle_words(*line.reference_emission_deg) + "° emission";
  return html.empty() ? kNone : html;
}

/// What became of the layers above the film.
std::string overlayer_words(const Run& run, const ThicknessRoute& route) {
  const std::size_t position = run.sample.position(route.layer);
  if (position == 0) return "none: the film is the outermost layer";
  std::vector<std::string> names;
  bool known = true;
  for (std::size_t i = 0; i < position; ++i) {
    const Layer& layer = run.sample.layers[i];
    const bool measured = i == 0 && run.contamination && !layer.thickness_nm;
    names.push_back(
        layer.name +
        (layer.thickness_nm
             ? ", " + value_with_uncertainty(layer.thickness_nm->value, layer.thickness_nm->standard_uncertainty) +
                   " nm put in"
         : measured ? ", from " + run.contamination->line
                    : ""));
    known = known && (layer.thickness_nm || measured);
  }
  const std::string what = joined(names) + ": ";
  if (route.method == ThicknessMethod::ratio && !route.substrate_length)
    return what + "cancels, because both lines have the same kinetic energy";
  return what + (known ? "corrected for" : "not corrected for, because its thickness is not given");
}

std::string unit_words(AreaUnit unit) {
  switch (unit) {
    case AreaUnit::counts:
      return "counts";
    case AreaUnit::counts_per_s:
      return "counts/s";
    case AreaUnit::counts_ev:
      return "counts·eV";
    case AreaUnit::counts_ev_per_s:
      return "counts·eV/s";
    case AreaUnit::arbitrary:
      return "arbitrary units, the same for all";
    case AreaUnit::atomic_percent:
      break;
  }
  return "apparent atomic %";
}

std::string area_cell(const std::optional<Quantity>& area) { return area ? quantity_html(*area) : kNone; }

void write_area_table(const Report& report, std::size_t p, HtmlWriter& w) {
  const ThicknessRoute& route = report.all.routes[p];
  std::vector<std::string> header = {"Spot", "Emission (°)"};
  if (route.film_line) header.push_back(report.run.lines[*route.film_line].label);
  if (route.substrate_line) header.push_back(report.run.lines[*route.substrate_line].label);
  if (several_tables(report.run)) header.insert(header.begin() + 1, "Table");
  Rows rows;
  for (const std::size_t i : report.of_route[p]) {
    if (rows.size() == kMostAreaRows) break;
    const ThicknessResult& r = report.all.results[i];
    std::vector<Cell> row = {text_cell(r.spot)};
    if (several_tables(report.run)) row.push_back(text_cell(report.run.tables[r.table]));
    row.push_back(number_cell(angle_words(r.emission_deg)));
    if (route.film_line) row.push_back(number_cell(area_cell(r.film_area)));
    if (route.substrate_line) row.push_back(number_cell(area_cell(r.substrate_area)));
    rows.push_back(std::move(row));
  }
  w.table("Areas for " + lines_words(report.run, route) + " ± standard uncertainty, summed over components, in " +
              unit_words(report.run.area_unit),
          header, rows);
  note_cut(w, kMostAreaRows, report.of_route[p].size(), "JSON");
}

}  // namespace

void write_areas(const Report& report, HtmlWriter& w) {
  const Run& run = report.run;
  w.section("areas", "Areas and how they were obtained");
  w.begin_facts();
  w.fact("Unit of the areas", unit_words(run.area_unit));
  w.fact("Source",
         counted(run.areas.size(), "area", "areas") + (run.tables.empty() ? "" : " in " + joined(run.tables)));
  w.fact("Standard uncertainty", area_uncertainty_words(run));
  w.fact("Background", record_of(run, "background"));
  w.fact("Fit model", record_of(run, "fit_model"));
  w.fact("Analyser transmission", run.transmission_corrected ? "areas are corrected for it" : "areas are raw");
  if (const std::string sensitivities = sensitivity_words(run); !sensitivities.empty())
    w.fact("Sensitivities", sensitivities);
  std::vector<std::string> correlations;
  for (const AreaCorrelation& c : run.area_correlations) {
    correlations.push_back(c.first + " with " + c.second + ", r = " + number_text(c.coefficient));
  }
  w.fact("Correlation of fitted areas", correlations.empty() ? "none stated; taken as zero" : joined(correlations));
  for (const ThicknessRoute& route : report.all.routes) {
    if (!route.contamination) w.fact("Layers above " + route.layer, overlayer_words(run, route));
  }
  w.end_facts();
  Rows rows;
  for (const Line& line : run.lines) {
    rows.push_back({text_cell(line.label), text_cell(line.level ? line.level->name : kNone),
                    number_cell(escaped(energy_text(line.kinetic_energy_ev))), text_cell(line.from),
                    text_cell(components_words(line)), Cell{line_remarks_html(line)}});
  }
  w.table("Lines", {"Line", "Core level", "Kinetic energy (eV)", "Emitted by", "Fitted components", "Factors"}, rows);
  for (std::size_t p = 0; p < report.all.routes.size(); ++p) write_area_table(report, p, w);
  w.end_section();
}

namespace {

/// Energy range of the model behind a predicted length.
std::string range_words(const LengthUsed& used) {
  constexpr std::string_view kPredicted = "predicted: ";
  if (!used.origin.starts_with(kPredicted)) return "as stated with it";
  const std::string_view model = std::string_view(used.origin).substr(kPredicted.size());
  for (const AttenuationModel m : attenuation_models()) {
    const ModelInfo& info = model_info(m);
    const bool same =
        model == info.name || (model.starts_with(info.name) && model.substr(info.name.size()).starts_with(" on "));
    if (same)
      return number_text(info.lowest_energy_ev) + " to " + number_text(info.highest_energy_ev) + " eV [" +
             info.citation + "]";
  }
  return kNone;
}

std::vector<Cell> length_row(const std::string& line, const LengthUsed& used) {
  const double relative = 100.0 * used.length_nm.sd() / used.length_nm.value;
  return {text_cell(line),
          text_cell(used.material),
          number_cell(escaped(energy_text(used.energy_ev))),
          number_cell(quantity_html(used.length_nm)),
          number_cell(used.length_nm.standard_uncertainty ? fmt::format("{:.1f}", relative) : "not given"),
          text_cell(used.origin),
          text_cell(range_words(used))};
}

}  // namespace

void write_lengths(const Report& report, HtmlWriter& w) {
  w.section("lengths", "Attenuation lengths and where they come from");
  w.paragraph(
      "Every length is an effective attenuation length (EAL) for overlayer thickness, not an inelastic mean free path "
      "(IMFP).");
  Rows rows;
  for (const ThicknessRoute& route : report.all.routes) {
    const auto label = [&](const std::optional<std::size_t>& line) {
      return line ? report.run.lines[*line].label : std::string(kNone);
    };
    const bool one = !route.substrate_length;
    const std::string both = route.film_line && route.substrate_line && one
                                 ? "both lines"
                                 : label(route.film_line ? route.film_line : route.substrate_line);
    rows.push_back(length_row(one ? both : label(route.film_line), route.film_length));
    if (!one) rows.push_back(length_row(label(route.substrate_line), *route.substrate_length));
  }
  w.table("Effective attenuation lengths used",
          {"Line", "Material crossed", "Energy (eV)", "EAL (nm) ± standard uncertainty", "Relative (%)", "Origin",
           "Range of the model"},
          rows);
  if (report.run.length_given_for_angle)
    w.paragraph("The given lengths are stated to hold for the angle of this measurement.");
  w.end_section();
}

void write_reference(const Report& report, HtmlWriter& w) {
  w.section("reference", "Reference ratio and where it comes from");
  w.paragraph(
      "The reference ratio R₀ is the ratio of film to substrate line that an infinitely thick film and a bare "
      "substrate would give on the same "
      "instrument; a single line has the area of an infinitely thick layer instead.");
  Rows rows;
  for (const ThicknessRoute& route : report.all.routes) {
    rows.push_back({text_cell(lines_words(report.run, route)),
                    text_cell(route.method == ThicknessMethod::ratio ? "R₀"
                              : route.reference_ratio                ? "area"
                                                                     : kNone),
                    number_cell(route.reference_ratio ? stated_html(*route.reference_ratio, "") : kNone),
                    text_cell(route.reference_origin),
                    text_cell(route.reference_applied.empty() ? kNone : joined(route.reference_applied, 40))});
  }
  w.table("References used", {"Lines", "Kind", "Value ± standard uncertainty", "Origin", "What was applied"}, rows);
  w.end_section();
}

namespace {

std::vector<Cell> density_row(const Run& run, const std::string& name, const Material& m) {
  std::set<std::string> elements;
  for (const Line& line : run.lines) {
    if (line.from == name && line.level && line.level->element) elements.insert(line.level->element->symbol);
  }
  std::vector<std::string> atoms;
  for (const std::string& symbol : elements)
    atoms.push_back(symbol + " " + rounded_text(atom_density_per_nm3(m, symbol), 4));
  const std::string source =
      m.density_source.empty()
          ? "given in the run"
          : m.density_source +
                (m.density_mark.empty() || m.density_mark == m.density_source ? "" : " (" + m.density_mark + ")");
  return {text_cell(name), text_cell(m.id), number_cell(data_html(m.density_g_cm3, number_text(m.density_g_cm3))),
          text_cell(source), text_cell(atoms.empty() ? kNone : joined(atoms))};
}

}  // namespace

void write_densities(const Report& report, HtmlWriter& w) {
  w.section("densities", "Densities");
  Rows rows;
  for (const Layer& layer : report.run.sample.layers)
    rows.push_back(density_row(report.run, layer.name, layer.material));
  rows.push_back(density_row(report.run, std::string(kSubstrate), report.run.sample.substrate));
  w.table("Densities used", {"Layer", "Material", "Density (g/cm³)", "Source", "Emitting atoms (1/nm³)"}, rows);
  w.paragraph(
      "A thickness is an equivalent thickness: that of a film of the density stated here. A porous or hydrated film is "
      "thicker for the same amount of matter.");
  w.end_section();
}

}  // namespace pellicle::detail
