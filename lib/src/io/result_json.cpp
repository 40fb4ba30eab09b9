#include "pellicle/io/result_json.hpp"

#include <algorithm>

#include <fmt/format.h>
#include <nlohmann/json.hpp>

#include "io/digest.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/base/parallel.hpp"
#include "pellicle/base/version.hpp"
#include "pellicle/lines/photoionisation.hpp"
#include "pellicle/transport/calibrated_length.hpp"

namespace pellicle {
namespace {

using Json = nlohmann::ordered_json;

template <typename T>
Json or_null(const std::optional<T>& value) {
  return value ? Json(*value) : Json(nullptr);
}

Json quantity_json(const Quantity& q) { return {{"value", q.value}, {"sd", or_null(q.standard_uncertainty)}}; }

Json findings_json(const Findings& findings) {
  Json all = Json::array();
  for (const Finding& f : findings) {
    all.push_back({{"code", f.code}, {"severity", severity_name(f.severity)}, {"text", f.text},
                   {"value", or_null(f.value)}, {"limit", or_null(f.limit)}});
  }
  return all;
}

Json material_json(const Material& m) {
  return {{"id", m.id}, {"name", m.name}, {"formula", m.formula.text()}, {"category", m.category},
          {"density_g_cm3", m.density_g_cm3}, {"band_gap_ev", or_null(m.band_gap_ev)},
          {"valence_electrons", or_null(valence_electrons(m).count)},
          {"density_source", m.density_source}, {"density_mark", m.density_mark},
          {"gap_source", m.gap_source}, {"gap_mark", m.gap_mark}};
}

Json line_json(const Line& line) {
  Json lengths = Json::object();
  for (const auto& [layer, length] : line.length_nm) lengths[layer] = quantity_json(length);
  Json components = Json::array();
  for (const Component& part : line.components) components.push_back({{"label", part.label}, {"weight", part.weight}});
  const auto maybe = [](const std::optional<Quantity>& q) { return q ? quantity_json(*q) : Json(nullptr); };
  return {{"label", line.label}, {"components", components}, {"level", line.level ? Json(line.level->name) : Json(nullptr)},
          {"kinetic_energy_ev", line.kinetic_energy_ev}, {"from", line.from}, {"length_nm", lengths},
          {"main_peak_fraction", maybe(line.main_peak_fraction)}, {"reference_area", maybe(line.reference_area)},
          {"reference_emission_deg", or_null(line.reference_emission_deg)}, {"sensitivity", maybe(line.sensitivity)},
          {"transmission", maybe(line.transmission)}};
}

Json area_json(const Run& run, const AreaRow& row) {
  Json area = {{"spot", row.spot}, {"emission_deg", or_null(row.emission_deg)}, {"line", row.line}, {"area", or_null(row.area)},
               {"area_sd", or_null(row.area_sd)}, {"background_counts", or_null(row.counting.background_counts)},
               {"dwell_s", or_null(row.counting.dwell_s)}, {"step_ev", or_null(row.counting.step_ev)}};
  if (run.tables.size() > 1) area["table"] = run.tables[row.table];
  return area;
}

/// All of a run but its areas.
Json run_json(const Run& run) {
  Json record = Json::object();
  for (const std::string& key : record_keys()) {
    record[key] = "not stated";
    for (const auto& [name, value] : run.record) {
      if (name == key) record[key] = value;
    }
  }
  Json layers = Json::array();
  for (const Layer& layer : run.sample.layers) {
    layers.push_back({{"name", layer.name}, {"material", material_json(layer.material)},
                      {"thickness_nm", layer.thickness_nm ? quantity_json(*layer.thickness_nm) : Json(nullptr)}});
  }
  Json lines = Json::array();
  for (const Line& line : run.lines) lines.push_back(line_json(line));
  Json references = Json::array();
  for (const ReferenceRatio& r : run.references) {
    const Json ratio = r.origin == ReferenceOrigin::given      ? quantity_json(r.ratio)
                       : r.origin == ReferenceOrigin::computed ? Json("computed")
                                                               : Json("table:" + r.table_key);
    references.push_back({{"film", r.film}, {"substrate", r.substrate}, {"ratio", ratio}});
  }
  Json correlations = Json::array();
  for (const AreaCorrelation& c : run.area_correlations) correlations.push_back({{"lines", {c.first, c.second}}, {"r", c.coefficient}});
  Json includes = Json::array();
  if (run.sensitivity_includes_transmission) includes.push_back("transmission");
  if (run.sensitivity_includes_escape_depth) includes.push_back("escape-depth");
  if (run.sensitivity_includes_asymmetry) includes.push_back("asymmetry");
  const Geometry& g = run.geometry;
  return {{"title", run.title},
          {"record", record},
          {"source", run.source.name},
          {"photon_energy_ev", run.source.photon_energy_ev},
          {"source_analyser_angle_deg", or_null(g.source_analyser_angle_deg)},
          {"acceptance_half_angle_deg", g.acceptance_half_angle_deg},
          {"signal_area", signal_area_name(g.signal_area)},
          {"tilt_direction", g.tilt_direction ? Json(tilt_direction_name(*g.tilt_direction)) : Json(nullptr)},
          {"emission_at_zero_tilt_deg", g.emission_at_zero_tilt_deg},
          {"emission_deg", or_null(run.emission_deg)},
          {"emission_sd_deg", or_null(run.emission_sd_deg)},
          {"substrate", material_json(run.sample.substrate)},
          {"layers", layers},
          {"length_set", run.length_set.empty() ? Json(nullptr) : Json(run.length_set)},
          {"method", method_name(run.method)},
          {"lines", lines},
          {"sensitivity_kind", sensitivity_kind_name(run.sensitivity_kind)},
          {"sensitivity_includes", includes},
          {"references", references},
          {"contamination", run.contamination ? Json({{"layer", run.contamination->layer}, {"line", run.contamination->line},
                                                      {"route", contamination_route_name(run.contamination->route)}})
                                              : Json(nullptr)},
          {"area_unit", area_unit_name(run.area_unit)},
          {"transmission", run.transmission_corrected ? "corrected" : "raw"},
          {"correlation", correlations}};
}

/// Inputs of a run on one line, the areas last.
std::string compact_inputs(const Run& run) {
  std::string text = run_json(run).dump();
  text.back() = ',';
  text += "\"areas\":[";
  for (const AreaRow& row : run.areas) (text += area_json(run, row).dump()) += ',';
  if (!run.areas.empty()) text.pop_back();
  return text + "]}";
}

/// Writes an object member by member, and long arrays row by row: a document of a million results never stands in
/// memory as a tree.
class ObjectText {
 public:
  explicit ObjectText(std::size_t depth = 1) : margin_(2 * depth, ' ') {}

  void add(const char* key, const Json& value) {
    begin(key);
    append_indented(value.dump(2));
  }

  /// Elements of an array, each from `row`(i): on a line of its own, or spread out.
  template <typename Row>
  void add_rows(const char* key, std::size_t size, bool one_line, Row&& row) {
    begin(key);
    if (size == 0) {
      text_ += "[]";
      return;
    }
    text_ += '[';
    const std::string outer = margin_;
    margin_ += "  ";
    for (std::size_t i = 0; i < size; ++i) {
      text_ += (i == 0 ? "\n" : ",\n") + margin_;
      if (one_line) {
        text_ += row(i).dump();
      } else {
        append_indented(row(i).dump(2));
      }
    }
    margin_ = outer;
    text_ += '\n' + margin_ + ']';
  }

  void add_object(const char* key, const ObjectText& object) {
    begin(key);
    text_ += object.text();
  }

  [[nodiscard]] std::string text() const { return "{" + text_ + '\n' + margin_.substr(2) + '}'; }

 private:
  void begin(const char* key) {
    text_ += (text_.empty() ? "\n" : ",\n") + margin_ + '"' + key + "\": ";
  }
  void append_indented(const std::string& value) {
    for (const char c : value) {
      text_ += c;
      if (c == '\n') text_ += margin_;
    }
  }

  std::string margin_, text_;
};

void add_head(const char* command, const std::string& digest, std::optional<std::uint64_t> seed, ObjectText& doc) {
  doc.add("schema", "pellicle.result/1");
  doc.add("version", version());
  doc.add("command", command);
  doc.add("inputs_sha256", digest);
  doc.add("seed", or_null(seed));
}

void add_inputs(const Run& run, ObjectText& doc) {
  ObjectText inputs(2);
  const Json head = run_json(run);
  for (const auto& [key, value] : head.items()) inputs.add(key.c_str(), value);
  inputs.add_rows("areas", run.areas.size(), true, [&](std::size_t i) { return area_json(run, run.areas[i]); });
  doc.add_object("inputs", inputs);
}

/// A document without a run.
std::string document(const char* command, const Json& inputs, const Json& results) {
  ObjectText doc;
  add_head(command, detail::sha256_hex(inputs.dump()), std::nullopt, doc);
  doc.add("inputs", inputs);
  doc.add("results", results);
  doc.add("summary", nullptr);
  return doc.text() + "\n";
}

Json length_used_json(const LengthUsed& used) {
  return {{"value", used.length_nm.value}, {"sd", or_null(used.length_nm.standard_uncertainty)}, {"origin", used.origin},
          {"material", used.material}, {"energy_ev", used.energy_ev}};
}

Json budget_json(const Budget& budget) {
  Json rows = Json::array();
  for (const BudgetRow& row : budget.rows) {
    rows.push_back({{"name", row.name}, {"contribution_nm", row.contribution}, {"share", row.share},
                    {"kind", contribution_kind_name(row.kind)}});
  }
  return rows;
}

Json label_or_null(const Run& run, const std::optional<std::size_t>& line) {
  return line ? Json(run.lines[*line].label) : Json(nullptr);
}

Json quantity_or_null(const std::optional<Quantity>& q) { return q ? quantity_json(*q) : Json(nullptr); }

Json reference_json(const ThicknessRoute& route) {
  Json reference = route.reference_ratio ? quantity_json(*route.reference_ratio) : Json{{"value", nullptr}, {"sd", nullptr}};
  reference["origin"] = route.reference_origin;
  if (!route.reference_applied.empty()) reference["applied"] = route.reference_applied;
  return reference;
}

Json interval_json(const Interval& i, double sd) { return {{"sd", sd}, {"low95", i.low95}, {"high95", i.high95}}; }

Json thickness_value_json(const ThicknessResult& r) {
  if (r.bound) return {{"bound", r.bound->upper ? "upper" : "lower"}, {"at95", r.bound->at95_nm}};
  if (!r.thickness) return nullptr;
  const Interval i = r.interval_nm();
  return {{"value", r.thickness->value_nm}, {"sd", r.standard_uncertainty_nm()}, {"low95", i.low95}, {"high95", i.high95},
          {"interval_from", r.monte_carlo ? "monte-carlo" : "gum"}};
}

Json thickness_result_json(const Run& run, const ThicknessResults& all, const ThicknessResult& r) {
  const ThicknessRoute& route = all.routes[r.route];
  Json result = {{"spot", r.spot},
                 {"emission_deg", r.emission_deg},
                 {"takeoff_deg", 90.0 - r.emission_deg},
                 {"layer", route.layer},
                 {"method", method_name(route.method)},
                 {"film_line", label_or_null(run, route.film_line)},
                 {"substrate_line", label_or_null(run, route.substrate_line)},
                 {"thickness_nm", thickness_value_json(r)},
                 {"gum_nm", nullptr},
                 {"monte_carlo_nm", nullptr},
                 {"repeatability_nm", nullptr},
                 {"scale_nm", nullptr},
                 {"areal_density_ug_cm2", quantity_or_null(r.areal_density_ug_cm2)},
                 {"emitting_atoms_per_nm2", quantity_or_null(r.emitting_atoms_per_nm2)},
                 {"film_area", quantity_or_null(r.film_area)},
                 {"substrate_area", quantity_or_null(r.substrate_area)},
                 {"reference_ratio", reference_json(route)},
                 {"length_nm", length_used_json(route.film_length)},
                 {"substrate_line_length_nm", route.substrate_length ? length_used_json(*route.substrate_length) : Json(nullptr)},
                 {"budget", Json::array()},
                 {"findings", findings_json(all.findings_of(r))},
                 {"failure", r.failure.empty() ? Json(nullptr) : Json(r.failure)}};
  if (run.tables.size() > 1) result["table"] = run.tables[r.table];
  if (route.contamination) result["contamination_route"] = contamination_route_name(*route.contamination);
  if (!r.thickness) return result;
  const Thickness& t = *r.thickness;
  result["gum_nm"] = interval_json(t.interval_nm, t.standard_uncertainty_nm);
  if (r.monte_carlo) {
    const MonteCarloThickness& mc = *r.monte_carlo;
    result["monte_carlo_nm"] = interval_json(mc.interval_nm, mc.standard_uncertainty_nm);
    result["monte_carlo_nm"]["mean"] = mc.mean_nm;
    result["monte_carlo_nm"]["draws"] = mc.draws;
    result["monte_carlo_nm"]["rejected"] = mc.rejected;
    result["monte_carlo_nm"]["endless"] = mc.endless;
    result["monte_carlo_nm"]["gum_agrees"] = mc.gum_agrees;
  }
  result["repeatability_nm"] = t.budget.repeatability;
  result["scale_nm"] = t.scale_stated ? Json(t.budget.scale) : Json(nullptr);
  result["budget"] = budget_json(t.budget);
  return result;
}

Json summary_json(const Run& run, const ThicknessResults& all, const ThicknessSummary& s) {
  const ThicknessRoute& route = all.routes[s.route];
  const bool any = s.count > 0;
  Json outliers = Json::array();
  for (const std::size_t i : s.outliers) outliers.push_back({{"spot", all.results[i].spot}, {"emission_deg", all.results[i].emission_deg}});
  return {{"layer", route.layer},
          {"method", method_name(route.method)},
          {"film_line", label_or_null(run, route.film_line)},
          {"substrate_line", label_or_null(run, route.substrate_line)},
          {"count", s.count},
          {"thicknesses", s.thicknesses},
          {"bounds", s.bounds},
          {"failed", s.failed},
          {"mean_nm", any ? Json(s.mean_nm) : Json(nullptr)},
          {"standard_deviation_nm", or_null(s.standard_deviation_nm)},
          {"repeatability_of_mean_nm", any ? Json(s.repeatability_of_mean_nm) : Json(nullptr)},
          {"scale_nm", any && s.scale_stated ? Json(s.scale_nm) : Json(nullptr)},
          {"outliers", outliers}};
}

Json summaries_json(const Run& run, const ThicknessResults& results) {
  Json all = Json::array();
  for (const ThicknessSummary& s : results.summaries) all.push_back(summary_json(run, results, s));
  return all;
}

Json chosen_length_json(const AttenuationLength& length) {
  if (length.model.empty()) return nullptr;
  return {{"value", length.value_nm}, {"sd", length.standard_uncertainty_nm}, {"model", length.model},
          {"imfp_model", length.imfp_model.empty() ? Json(nullptr) : Json(length.imfp_model)}};
}

Json model_values(const std::vector<ModelValue>& models) {
  Json values = Json::object();
  for (const ModelValue& m : models) values[m.model] = or_null(m.value_nm);
  return values;
}

std::string csv_cell(const std::string& text) {
  if (text.find_first_of(",\"\n\r") == std::string::npos) return text;
  std::string quoted = "\"";
  for (const char c : text) {
    if (c == '"') quoted += '"';
    quoted += c;
  }
  return quoted + "\"";
}

}  // namespace

std::string lengths_json(const std::vector<LengthQuery>& queries) {
  Json inputs = Json::array();
  Json results = Json::array();
  for (const LengthQuery& q : queries) {
    inputs.push_back({{"material", material_json(q.material)}, {"energy_ev", q.energy_ev}});
    Json refusals = Json::object();
    for (const auto* models : {&q.length.imfp, &q.length.models}) {
      for (const ModelValue& m : *models) {
        if (!m.value_nm) refusals[m.model] = m.refusal;
      }
    }
    results.push_back({{"material", q.asked},
                       {"material_id", q.material.id},
                       {"formula", q.material.formula.text()},
                       {"density_g_cm3", q.material.density_g_cm3},
                       {"band_gap_ev", or_null(q.material.band_gap_ev)},
                       {"energy_ev", q.energy_ev},
                       {"imfp_nm", model_values(q.length.imfp)},
                       {"attenuation_length_nm", chosen_length_json(q.length)},
                       {"attenuation_models_nm", model_values(q.length.models)},
                       {"refusals", refusals},
                       {"findings", findings_json(q.length.findings)}});
  }
  return document("lengths", inputs, results);
}

std::string thickness_json(const Run& run, const ThicknessResults& results) {
  // More results than a person reads take one line each.
  constexpr std::size_t kMostSpreadOut = 100;
  const bool drawn = std::any_of(results.results.begin(), results.results.end(), [](const ThicknessResult& r) { return r.monte_carlo.has_value(); });
  ObjectText doc;
  add_head("thickness", inputs_sha256(run), drawn ? std::optional(run.uncertainty.seed) : std::nullopt, doc);
  add_inputs(run, doc);
  doc.add_rows("results", results.results.size(), results.results.size() > kMostSpreadOut,
               [&](std::size_t i) { return thickness_result_json(run, results, results.results[i]); });
  doc.add("summary", summaries_json(run, results));
  return doc.text() + "\n";
}

std::string inputs_sha256(const Run& run) { return detail::sha256_hex(compact_inputs(run)); }

std::string materials_json(const std::vector<Material>& materials) {
  Json rows = Json::array();
  for (const Material& m : materials) rows.push_back(material_json(m));
  return document("materials", Json::object(), rows);
}

std::string lines_json(const std::vector<CoreLevel>& levels, const PhotonSource* source) {
  Json rows = Json::array();
  for (const CoreLevel& level : levels) {
    Json row = {{"line", level.name}, {"element", level.element->symbol}, {"binding_energy_ev", level.binding_energy_ev},
                {"occupancy", level.occupancy}, {"outer", level.outer}, {"source", level.source}, {"mark", level.mark},
                {"kinetic_energy_ev", nullptr}, {"cross_section_barn", nullptr}, {"asymmetry", nullptr}, {"refusals", Json::array()}};
    if (source) {
      const double energy = source->photon_energy_ev - level.binding_energy_ev;
      if (energy > 0.0) row["kinetic_energy_ev"] = energy;
      const TabulatedValue section = photoionisation_cross_section_barn(level, *source);
      const TabulatedValue beta = asymmetry_parameter(level, *source);
      row["cross_section_barn"] = or_null(section.value);
      row["asymmetry"] = or_null(beta.value);
      for (const TabulatedValue* v : {&section, &beta}) {
        if (!v->value) row["refusals"].push_back(v->refusal);
      }
    }
    rows.push_back(std::move(row));
  }
  const Json inputs = {{"source", source ? Json(source->name) : Json(nullptr)}};
  return document("lines", inputs, rows);
}

std::string calibrated_lengths_json() {
  Json rows = Json::array();
  for (const CalibratedLength& row : calibrated_lengths()) {
    rows.push_back({{"set", row.set}, {"material", row.material}, {"line", row.line}, {"photon_source", row.photon_source},
                    {"kinetic_energy_ev", row.kinetic_energy_ev}, {"length_nm", quantity_json(row.length_nm)},
                    {"source", row.source}, {"mark", row.mark}, {"note", row.note}});
  }
  return document("lengths", Json::object(), rows);
}

std::string photon_sources_json() {
  Json rows = Json::array();
  for (const PhotonSource& s : photon_sources()) rows.push_back({{"name", s.name}, {"photon_energy_ev", s.photon_energy_ev}});
  return document("lines", Json::object(), rows);
}

std::string check_json(const Run& run, const ThicknessResults& results) {
  Json failures = Json::array();
  for (const ThicknessResult& r : results.results) {
    if (!r.failure.empty()) failures.push_back({{"spot", r.spot}, {"emission_deg", r.emission_deg}, {"failure", r.failure}});
  }
  Json routes = Json::array();
  for (const ThicknessRoute& route : results.routes) {
    routes.push_back({{"layer", route.layer}, {"method", method_name(route.method)}, {"film_line", label_or_null(run, route.film_line)},
                      {"substrate_line", label_or_null(run, route.substrate_line)}, {"reference_ratio", reference_json(route)},
                      {"length_nm", length_used_json(route.film_length)}});
  }
  const Json row = {{"ok", failures.empty()}, {"routes", routes}, {"areas", run.areas.size()}, {"results", results.results.size()},
                    {"failures", failures}, {"findings", findings_json(results.findings)}};
  ObjectText doc;
  add_head("check", inputs_sha256(run), std::nullopt, doc);
  add_inputs(run, doc);
  doc.add("results", Json::array({row}));
  doc.add("summary", nullptr);
  return doc.text() + "\n";
}

std::string thickness_csv(const Run& run, const ThicknessResults& results) {
  const bool tables = run.tables.size() > 1;
  // What all rows of a route share, written once.
  std::vector<std::string> shared;
  for (const ThicknessRoute& route : results.routes) {
    const auto label = [&](const std::optional<std::size_t>& line) { return line ? csv_cell(run.lines[*line].label) : std::string(); };
    shared.push_back(fmt::format("{},{},{},{}", csv_cell(route.layer), method_name(route.method), label(route.film_line), label(route.substrate_line)));
  }
  std::vector<std::string> parts((results.results.size() + kBlockSize - 1) / kBlockSize);
  for_each_block(results.results.size(), [&](std::size_t begin, std::size_t end) {
    fmt::memory_buffer csv;
    const auto out = std::back_inserter(csv);
    for (std::size_t n = begin; n < end; ++n) {
      const ThicknessResult& r = results.results[n];
      if (tables) fmt::format_to(out, "{},", csv_cell(run.tables[r.table]));
      fmt::format_to(out, "{},{},{},", csv_cell(r.spot), r.emission_deg, shared[r.route]);
      if (r.thickness) {
        const Thickness& t = *r.thickness;
        const Interval i = r.interval_nm();
        fmt::format_to(out, "{},{},{},{},,{},", t.value_nm, r.standard_uncertainty_nm(), i.low95, i.high95, t.budget.repeatability);
        if (t.scale_stated) fmt::format_to(out, "{}", t.budget.scale);
        fmt::format_to(out, ",{},", r.areal_density_ug_cm2->value);
      } else if (r.bound) {
        fmt::format_to(out, "{},,,,{},,,,", r.bound->at95_nm, r.bound->upper ? "upper95" : "lower95");
      } else {
        fmt::format_to(out, ",,,,,,,,");
      }
      for (std::size_t k = 0; k < r.findings.size(); ++k) {
        if (k > 0) csv.push_back(' ');
        csv.append(results.findings[r.findings[k]].code);
      }
      csv.push_back(',');
      csv.append(csv_cell(r.failure));
      csv.push_back('\n');
    }
    parts[begin / kBlockSize] = fmt::to_string(csv);
  });
  std::string text = fmt::format("{}spot,emission_deg,layer,method,film_line,substrate_line,thickness_nm,sd_nm,low95_nm,high95_nm,bound,"
                                 "repeatability_nm,scale_nm,areal_density_ug_cm2,findings,failure\n", tables ? "table," : "");
  std::size_t size = text.size();
  for (const std::string& part : parts) size += part.size();
  text.reserve(size);
  for (const std::string& part : parts) text += part;
  return text;
}

}  // namespace pellicle
