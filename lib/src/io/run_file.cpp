#include "pellicle/io/run_file.hpp"

#include <algorithm>
#include <set>

#include "base/nearest.hpp"
#include "io/toml_section.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"
#include "pellicle/io/area_table.hpp"
#include "pellicle/io/file.hpp"
#include "pellicle/sample/emission.hpp"

namespace pellicle {
namespace {

using detail::TomlSection;

/// Errors of the parts know no file; this puts the place in front.
template <typename Function>
auto located(const std::string& where, Function&& function) {
  try {
    return function();
  } catch (const InputError& e) {
    throw InputError(e.where().empty() ? where : where + ": " + e.where(), e.fact(), e.hint());
  } catch (const DomainError& e) {
    throw DomainError(e.where().empty() ? where : where + ": " + e.where(), e.fact(), e.hint());
  }
}

Material read_material(TomlSection& section, std::string_view key) {
  const toml::node* node = section.node(key);
  const std::string where = section.where(key);
  if (!node) throw InputError(where, "this key is missing", "expected a catalogue id, a formula, or { formula = …, density_g_cm3 = … }");
  if (const auto text = node->value_exact<std::string>()) {
    return located(where, [&] { return define_material(*text); });
  }
  if (!node->is_table()) throw InputError(where, "this is not a material", "expected text or { formula = …, density_g_cm3 = … }");
  TomlSection table(*node->as_table(), section.file(), std::string(key));
  const std::optional<std::string> formula = table.text("formula");
  const std::optional<std::string> id = table.text("id");
  MaterialOverrides overrides;
  overrides.density_g_cm3 = table.number("density_g_cm3");
  overrides.band_gap_ev = table.number("band_gap_ev");
  overrides.valence_electrons = table.number("valence_electrons");
  table.finish();
  if (formula.has_value() == id.has_value()) {
    throw InputError(where, formula ? "both formula and id are given" : "neither formula nor id is given",
                     "give formula with density_g_cm3, or the id of a catalogued material");
  }
  return located(where, [&] { return define_material(formula ? *formula : *id, overrides); });
}

void read_instrument(TomlSection& root, Run& run) {
  auto section = root.section("instrument");
  if (!section) throw InputError(run.place, "the table [instrument] is missing", "expected [instrument] with source = \"Al Ka\"");
  const auto source = section->text("source");
  const auto energy = section->number("photon_energy_ev");
  if (source.has_value() == energy.has_value()) {
    throw InputError(section->where(source ? "photon_energy_ev" : "source"),
                     source ? "both source and photon_energy_ev are given" : "neither source nor photon_energy_ev is given",
                     "give one of them");
  }
  run.source = located(section->where(source ? "source" : "photon_energy_ev"),
                       [&] { return source ? photon_source(*source) : photon_source_of_energy(*energy); });
  const auto emission = section->number("emission_deg");
  const auto takeoff = section->number("takeoff_deg");
  if (emission && takeoff) {
    throw InputError(section->where("takeoff_deg"), "both emission_deg and takeoff_deg are given", "keep one; emission_deg = 90 - takeoff_deg");
  }
  if (emission) {
    located(section->where("emission_deg"), [&] { check_emission_deg(*emission); return 0; });
    run.emission_deg = emission;
  }
  if (takeoff) run.emission_deg = located(section->where("takeoff_deg"), [&] { return emission_deg_from_takeoff(*takeoff); });
  run.emission_sd_deg = section->number("emission_sd_deg");
  if (run.emission_sd_deg && !(*run.emission_sd_deg >= 0.0)) {
    throw InputError(section->where("emission_sd_deg"), "the standard uncertainty is negative", "expected a number >= 0");
  }
  section->finish();
}

void read_sample(TomlSection& root, Run& run) {
  auto section = root.section("sample");
  if (!section) throw InputError(run.place, "the table [sample] is missing", "expected [sample] with substrate and [[sample.layer]]");
  run.sample.substrate = read_material(*section, "substrate");
  std::set<std::string> names;
  for (TomlSection& entry : section->sections("layer")) {
    Layer layer{entry.required_text("name"), read_material(entry, "material")};
    if (layer.name == kSubstrate) throw InputError(entry.where("name"), "a layer cannot be called \"substrate\"");
    if (!names.insert(layer.name).second) throw InputError(entry.where("name"), "two layers are called \"" + layer.name + "\"");
    entry.finish();
    run.sample.layers.push_back(std::move(layer));
  }
  section->finish();
}

void read_lengths(TomlSection& entry, const Run& run, Line& line) {
  auto section = entry.section("length_nm");
  if (!section) return;
  for (const std::string& layer : section->keys()) {
    const std::string where = section->where(layer);
    located(where, [&] { return run.sample.position(layer); });
    const Quantity length = *section->quantity(layer);
    if (!(length.value > 0.0)) throw InputError(where, number_text(length.value) + " is not a length", "expected a number > 0");
    line.length_nm[layer] = length;
  }
}

Line read_line(TomlSection& entry, const Run& run) {
  Line line;
  line.label = entry.required_text("label");
  const auto level = entry.text("level");
  const auto kinetic = entry.number("kinetic_energy_ev");
  const auto binding = entry.number("binding_energy_ev");
  if (level.has_value() == kinetic.has_value()) {
    throw InputError(entry.where(level ? "kinetic_energy_ev" : "level"),
                     level ? "both level and kinetic_energy_ev are given" : "neither level nor kinetic_energy_ev is given",
                     "give level, e.g. \"Al 2p\", or kinetic_energy_ev for a line without a level (Auger)");
  }
  if (level) {
    line.level = located(entry.where("level"), [&] { return core_level(*level); });
    if (binding) {
      if (!(*binding >= 0.0)) throw InputError(entry.where("binding_energy_ev"), "the binding energy is negative");
      line.level->binding_energy_ev = *binding;
      line.level->source = line.level->mark = "given";
      line.level->outer = false;
    }
    line.kinetic_energy_ev = located(entry.where("level"), [&] { return kinetic_energy_ev(*line.level, run.source); });
  } else {
    if (binding) throw InputError(entry.where("binding_energy_ev"), "binding_energy_ev needs a level", "give kinetic_energy_ev alone");
    if (!(*kinetic > 0.0)) throw InputError(entry.where("kinetic_energy_ev"), number_text(*kinetic) + " is not a kinetic energy", "expected a number > 0");
    line.kinetic_energy_ev = *kinetic;
  }
  line.from = entry.required_text("from");
  located(entry.where("from"), [&] { return run.sample.position(line.from); });
  line.reference_area = entry.quantity("reference_area");
  if (line.reference_area && !(line.reference_area->value > 0.0)) {
    throw InputError(entry.where("reference_area"), number_text(line.reference_area->value) + " is not an area", "expected a number > 0");
  }
  read_lengths(entry, run, line);
  entry.finish();
  return line;
}

void read_lines(TomlSection& root, Run& run) {
  for (TomlSection& entry : root.sections("line")) {
    Line line = read_line(entry, run);
    if (run.find_line(line.label)) throw InputError(entry.where("label"), "two lines are labelled \"" + line.label + "\"");
    run.lines.push_back(std::move(line));
  }
  if (run.lines.empty()) throw InputError(run.place, "the run declares no lines", "expected [[line]] with label, level and from");
}

void read_references(TomlSection& root, Run& run) {
  for (TomlSection& entry : root.sections("reference")) {
    ReferenceRatio reference{entry.required_text("film"), entry.required_text("substrate"), 0.0};
    for (const auto& [key, label] : {std::pair{"film", &reference.film}, std::pair{"substrate", &reference.substrate}}) {
      if (run.find_line(*label)) continue;
      std::vector<std::string> labels;
      for (const Line& line : run.lines) labels.push_back(line.label);
      throw InputError(entry.where(key), "no line is labelled \"" + *label + "\"", detail::name_hint(*label, labels));
    }
    const auto ratio = entry.quantity("ratio");
    if (!ratio) throw InputError(entry.where("ratio"), "this key is missing", "expected a number or { value = …, sd = … }");
    if (!(ratio->value > 0.0)) throw InputError(entry.where("ratio"), number_text(ratio->value) + " is not a ratio", "expected a number > 0");
    reference.ratio = *ratio;
    entry.finish();
    run.references.push_back(std::move(reference));
  }
}

void read_data(TomlSection& root, Run& run) {
  auto section = root.section("data");
  if (!section) throw InputError(run.place, "the table [data] is missing", "expected [data] with areas = \"table.csv\"");
  if (const auto unit = section->text("area_unit")) {
    run.area_unit = located(section->where("area_unit"), [&] { return area_unit(*unit); });
  }
  const std::string table = path_beside(run.place, section->required_text("areas"));
  section->finish();
  run.areas = read_area_table(read_text_file(table), table);
}

}  // namespace

Run parse_run(std::string_view text, const std::string& place) {
  Run run;
  run.place = place;
  const toml::table table = detail::parse_toml(text, place);
  TomlSection root(table, place, "");
  run.title = root.text("title").value_or("");
  if (auto record = root.section("record")) {
    for (const std::string& key : record_keys()) {
      if (auto value = record->echo(key)) run.record.emplace_back(key, *value);
    }
    record->finish();
  }
  // Every top-level key is known before any is judged, so that a misspelt table is not reported as missing.
  for (const char* key : {"instrument", "sample", "line", "reference", "data", "length_set"}) (void)root.node(key);
  root.finish();
  read_instrument(root, run);
  read_sample(root, run);
  run.length_set = root.text("length_set").value_or("");
  read_lines(root, run);
  read_references(root, run);
  read_data(root, run);
  return run;
}

Run read_run_file(const std::string& path) {
  return parse_run(read_text_file(path), path);
}

}  // namespace pellicle
