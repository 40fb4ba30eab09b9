#include "pellicle/io/result_json.hpp"

#include <fmt/format.h>
#include <nlohmann/json.hpp>

#include "io/digest.hpp"
#include "pellicle/base/number.hpp"
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
  return {{"label", line.label}, {"level", line.level ? Json(line.level->name) : Json(nullptr)},
          {"kinetic_energy_ev", line.kinetic_energy_ev}, {"from", line.from}, {"length_nm", lengths},
          {"reference_area", line.reference_area ? quantity_json(*line.reference_area) : Json(nullptr)}};
}

Json run_json(const Run& run) {
  Json record = Json::object();
  for (const std::string& key : record_keys()) {
    record[key] = "not stated";
    for (const auto& [name, value] : run.record) {
      if (name == key) record[key] = value;
    }
  }
  Json layers = Json::array();
  for (const Layer& layer : run.sample.layers) layers.push_back({{"name", layer.name}, {"material", material_json(layer.material)}});
  Json lines = Json::array();
  for (const Line& line : run.lines) lines.push_back(line_json(line));
  Json references = Json::array();
  for (const ReferenceRatio& r : run.references) {
    references.push_back({{"film", r.film}, {"substrate", r.substrate}, {"ratio", quantity_json(r.ratio)}});
  }
  Json areas = Json::array();
  for (const AreaRow& row : run.areas) {
    areas.push_back({{"spot", row.spot}, {"emission_deg", or_null(row.emission_deg)}, {"line", row.line}, {"area", row.area},
                     {"area_sd", or_null(row.area_sd)}, {"background_counts", or_null(row.counting.background_counts)},
                     {"dwell_s", or_null(row.counting.dwell_s)}, {"step_ev", or_null(row.counting.step_ev)}});
  }
  return {{"title", run.title},
          {"record", record},
          {"source", run.source.name},
          {"photon_energy_ev", run.source.photon_energy_ev},
          {"emission_deg", or_null(run.emission_deg)},
          {"emission_sd_deg", or_null(run.emission_sd_deg)},
          {"substrate", material_json(run.sample.substrate)},
          {"layers", layers},
          {"length_set", run.length_set.empty() ? Json(nullptr) : Json(run.length_set)},
          {"lines", lines},
          {"references", references},
          {"area_unit", area_unit_name(run.area_unit)},
          {"areas", areas}};
}

/// The frame that every result shares.
std::string document(const char* command, const Json& inputs, Json results, Json summary) {
  Json doc = {{"schema", "pellicle.result/1"},
              {"version", version()},
              {"command", command},
              {"inputs_sha256", detail::sha256_hex(inputs.dump())},
              {"seed", nullptr},
              {"inputs", inputs},
              {"results", std::move(results)},
              {"summary", std::move(summary)}};
  return doc.dump(2) + "\n";
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

Json thickness_result_json(const ThicknessResult& r, const ThicknessPair& pair) {
  Json result = {{"spot", r.spot},
                 {"emission_deg", r.emission_deg},
                 {"takeoff_deg", 90.0 - r.emission_deg},
                 {"layer", pair.layer},
                 {"film_line", pair.film_line},
                 {"substrate_line", pair.substrate_line},
                 {"thickness_nm", nullptr},
                 {"repeatability_nm", nullptr},
                 {"scale_nm", nullptr},
                 {"film_area", quantity_json(r.film_area)},
                 {"substrate_area", quantity_json(r.substrate_area)},
                 {"reference_ratio", quantity_json(pair.reference_ratio)},
                 {"length_nm", length_used_json(pair.film_length)},
                 {"substrate_line_length_nm", pair.substrate_length ? length_used_json(*pair.substrate_length) : Json(nullptr)},
                 {"budget", Json::array()},
                 {"findings", findings_json(pair.findings)},
                 {"failure", nullptr}};
  result["reference_ratio"]["origin"] = pair.reference_origin;
  if (!r.thickness) {
    if (r.film_area.value == 0.0 && r.substrate_area.value == 0.0) result["film_area"] = result["substrate_area"] = nullptr;
    result["failure"] = r.failure;
    return result;
  }
  const Thickness& t = *r.thickness;
  result["thickness_nm"] = {{"value", t.value_nm}, {"sd", t.standard_uncertainty_nm}, {"low95", t.interval_nm.low95},
                            {"high95", t.interval_nm.high95}, {"interval_from", "gum"}};
  result["repeatability_nm"] = t.budget.repeatability;
  result["scale_nm"] = t.scale_stated ? Json(t.budget.scale) : Json(nullptr);
  result["budget"] = budget_json(t.budget);
  result["findings"] = findings_json(t.findings);
  return result;
}

Json summary_json(const ThicknessSummary& s, const ThicknessPair& pair) {
  const bool any = s.count > 0;
  return {{"film_line", pair.film_line},
          {"substrate_line", pair.substrate_line},
          {"count", s.count},
          {"failed", s.failed},
          {"mean_nm", any ? Json(s.mean_nm) : Json(nullptr)},
          {"standard_deviation_nm", or_null(s.standard_deviation_nm)},
          {"repeatability_of_mean_nm", any ? Json(s.repeatability_of_mean_nm) : Json(nullptr)},
          {"scale_nm", any && s.scale_stated ? Json(s.scale_nm) : Json(nullptr)}};
}

Json summaries_json(const ThicknessResults& results) {
  Json all = Json::array();
  for (const ThicknessSummary& s : results.summaries) all.push_back(summary_json(s, results.pairs[s.pair]));
  return all;
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
                       {"attenuation_length_nm", {{"value", q.length.value_nm}, {"sd", q.length.standard_uncertainty_nm},
                                                  {"model", q.length.model},
                                                  {"imfp_model", q.length.imfp_model.empty() ? Json(nullptr) : Json(q.length.imfp_model)}}},
                       {"attenuation_models_nm", model_values(q.length.models)},
                       {"refusals", refusals},
                       {"findings", findings_json(q.length.findings)}});
  }
  return document("lengths", inputs, results, nullptr);
}

std::string thickness_json(const Run& run, const ThicknessResults& results) {
  Json rows = Json::array();
  for (const ThicknessResult& r : results.results) rows.push_back(thickness_result_json(r, results.pairs[r.pair]));
  return document("thickness", run_json(run), rows, summaries_json(results));
}

std::string materials_json(const std::vector<Material>& materials) {
  Json rows = Json::array();
  for (const Material& m : materials) rows.push_back(material_json(m));
  return document("materials", Json::object(), rows, nullptr);
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
  return document("lines", inputs, rows, nullptr);
}

std::string calibrated_lengths_json() {
  Json rows = Json::array();
  for (const CalibratedLength& row : calibrated_lengths()) {
    rows.push_back({{"set", row.set}, {"material", row.material}, {"line", row.line}, {"photon_source", row.photon_source},
                    {"kinetic_energy_ev", row.kinetic_energy_ev}, {"length_nm", quantity_json(row.length_nm)},
                    {"source", row.source}, {"mark", row.mark}, {"note", row.note}});
  }
  return document("lengths", Json::object(), rows, nullptr);
}

std::string photon_sources_json() {
  Json rows = Json::array();
  for (const PhotonSource& s : photon_sources()) rows.push_back({{"name", s.name}, {"photon_energy_ev", s.photon_energy_ev}});
  return document("lines", Json::object(), rows, nullptr);
}

std::string check_json(const Run& run, const ThicknessResults& results) {
  Findings findings;
  Json failures = Json::array();
  for (const ThicknessResult& r : results.results) {
    if (r.thickness) {
      add_findings(findings, r.thickness->findings);
    } else {
      failures.push_back({{"spot", r.spot}, {"emission_deg", r.emission_deg}, {"failure", r.failure}});
    }
  }
  Json pairs = Json::array();
  for (const ThicknessPair& pair : results.pairs) {
    pairs.push_back({{"layer", pair.layer}, {"film_line", pair.film_line}, {"substrate_line", pair.substrate_line},
                     {"reference_ratio", quantity_json(pair.reference_ratio)}, {"length_nm", length_used_json(pair.film_length)}});
  }
  const Json row = {{"ok", failures.empty()}, {"pairs", pairs}, {"areas", run.areas.size()}, {"results", results.results.size()},
                    {"failures", failures}, {"findings", findings_json(findings)}};
  return document("check", run_json(run), Json::array({row}), nullptr);
}

std::string thickness_csv(const ThicknessResults& results) {
  std::string csv = "spot,emission_deg,layer,film_line,substrate_line,thickness_nm,sd_nm,low95_nm,high95_nm,"
                    "repeatability_nm,scale_nm,findings,failure\n";
  for (const ThicknessResult& r : results.results) {
    const ThicknessPair& pair = results.pairs[r.pair];
    csv += fmt::format("{},{},{},{},{},", csv_cell(r.spot), r.emission_deg, csv_cell(pair.layer), csv_cell(pair.film_line),
                       csv_cell(pair.substrate_line));
    if (!r.thickness) {
      csv += fmt::format(",,,,,,,{}\n", csv_cell(r.failure));
      continue;
    }
    const Thickness& t = *r.thickness;
    std::string codes;
    for (const Finding& f : t.findings) codes += (codes.empty() ? "" : " ") + f.code;
    csv += fmt::format("{},{},{},{},{},{},{},\n", t.value_nm, t.standard_uncertainty_nm, t.interval_nm.low95, t.interval_nm.high95,
                       t.budget.repeatability, t.scale_stated ? number_text(t.budget.scale) : std::string(), codes);
  }
  return csv;
}

}  // namespace pellicle
