#include "pellicle/io/run_file.hpp"

#include <algorithm>
#include <cmath>
#include <iterator>
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
  const auto full = [&](const Error& e) { return e.where().empty() || where.ends_with(e.where()) ? where : where + ": " + e.where(); };
  try {
    return function();
  } catch (const InputError& e) {
    throw InputError(full(e), e.fact(), e.hint());
  } catch (const DomainError& e) {
    throw DomainError(full(e), e.fact(), e.hint());
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
  table.allow({"formula", "id", "density_g_cm3", "band_gap_ev", "valence_electrons"});
  const std::optional<std::string> formula = table.text("formula");
  const std::optional<std::string> id = table.text("id");
  MaterialOverrides overrides;
  overrides.density_g_cm3 = table.number("density_g_cm3");
  overrides.band_gap_ev = table.number("band_gap_ev");
  overrides.valence_electrons = table.number("valence_electrons");
  if (formula.has_value() == id.has_value()) {
    throw InputError(where, formula ? "both formula and id are given" : "neither formula nor id is given",
                     "give formula with density_g_cm3, or the id of a catalogued material");
  }
  return located(where, [&] { return define_material(formula ? *formula : *id, overrides); });
}

void read_instrument(TomlSection& root, Run& run) {
  auto section = root.section("instrument");
  if (!section) throw InputError(run.place, "the table [instrument] is missing", "expected [instrument] with source = \"Al Ka\"");
  section->allow({"source", "photon_energy_ev", "emission_deg", "takeoff_deg", "emission_sd_deg", "source_analyser_angle_deg",
                  "acceptance_half_angle_deg", "signal_area", "tilt_direction", "emission_at_zero_tilt_deg"});
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
  Geometry& g = run.geometry;
  g.source_analyser_angle_deg = section->number("source_analyser_angle_deg");
  if (g.source_analyser_angle_deg && !(*g.source_analyser_angle_deg > 0.0 && *g.source_analyser_angle_deg < 180.0)) {
    throw InputError(section->where("source_analyser_angle_deg"), number_text(*g.source_analyser_angle_deg) + " is out of range", "expected > 0 and < 180");
  }
  g.acceptance_half_angle_deg = section->number("acceptance_half_angle_deg").value_or(0.0);
  if (!(g.acceptance_half_angle_deg >= 0.0 && g.acceptance_half_angle_deg < 45.0)) {
    throw InputError(section->where("acceptance_half_angle_deg"), number_text(g.acceptance_half_angle_deg) + " is out of range", "expected >= 0 and < 45");
  }
  if (const auto area = section->text("signal_area")) g.signal_area = located(section->where("signal_area"), [&] { return signal_area(*area); });
  if (const auto direction = section->text("tilt_direction")) {
    g.tilt_direction = located(section->where("tilt_direction"), [&] { return tilt_direction(*direction); });
  }
  g.emission_at_zero_tilt_deg = section->number("emission_at_zero_tilt_deg").value_or(0.0);
  located(section->where("emission_at_zero_tilt_deg"), [&] { check_emission_deg(g.emission_at_zero_tilt_deg); return 0; });
  run.emission_sd_deg = section->number("emission_sd_deg");
  if (run.emission_sd_deg && !(*run.emission_sd_deg >= 0.0)) {
    throw InputError(section->where("emission_sd_deg"), "the standard uncertainty is negative", "expected a number >= 0");
  }
}

void read_sample(TomlSection& root, Run& run) {
  auto section = root.section("sample");
  if (!section) throw InputError(run.place, "the table [sample] is missing", "expected [sample] with substrate and [[sample.layer]]");
  section->allow({"substrate", "layer"});
  run.sample.substrate = read_material(*section, "substrate");
  std::set<std::string> names;
  for (TomlSection& entry : section->sections("layer")) {
    entry.allow({"name", "material", "thickness_nm"});
    Layer layer{entry.required_text("name"), read_material(entry, "material")};
    layer.thickness_nm = entry.quantity("thickness_nm");
    if (layer.thickness_nm && !(layer.thickness_nm->value >= 0.0)) {
      throw InputError(entry.where("thickness_nm"), number_text(layer.thickness_nm->value) + " is not a thickness", "expected a number >= 0");
    }
    if (layer.name == kSubstrate) throw InputError(entry.where("name"), "a layer cannot be called \"substrate\"");
    if (!names.insert(layer.name).second) throw InputError(entry.where("name"), "two layers are called \"" + layer.name + "\"");
    run.sample.layers.push_back(std::move(layer));
  }
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

/// `components = ["a", { label = "b", weight = 0.75 }]`; default: the label of the line.
void read_components(TomlSection& entry, Line& line) {
  const toml::node* node = entry.node("components");
  const std::string where = entry.where("components");
  if (!node) {
    line.components = {{line.label, 1.0}};
    return;
  }
  if (!node->is_array() || node->as_array()->empty()) throw InputError(where, "this is not a list of components", "expected [\"label\", { label = …, weight = … }]");
  for (const toml::node& item : *node->as_array()) {
    Component component;
    if (const auto label = item.value_exact<std::string>()) {
      component.label = *label;
    } else if (item.is_table()) {
      TomlSection table(*item.as_table(), entry.file(), "components");
      table.allow({"label", "weight"});
      component.label = table.required_text("label");
      component.weight = table.number("weight").value_or(1.0);
      if (!(component.weight > 0.0)) throw InputError(where, "a weight is not a number > 0");
    } else {
      throw InputError(where, "a component is neither text nor a table", "expected \"label\" or { label = …, weight = … }");
    }
    for (const Component& other : line.components) {
      if (other.label == component.label) throw InputError(where, "component \"" + component.label + "\" stands twice");
    }
    line.components.push_back(std::move(component));
  }
}

std::optional<Quantity> positive_quantity(TomlSection& entry, std::string_view key, double most = 1e300) {
  const auto q = entry.quantity(key);
  if (q && !(q->value > 0.0 && q->value <= most)) {
    throw InputError(entry.where(key), number_text(q->value) + " is out of range", most < 1e300 ? "expected > 0 and <= " + number_text(most) : "expected a number > 0");
  }
  return q;
}

/// `reference_area = { value =, sd =, emission_deg = }`: a quantity that may state the angle it was measured at.
void read_reference_area(TomlSection& entry, Line& line) {
  const toml::node* node = entry.node("reference_area");
  if (!node) return;
  const std::string where = entry.where("reference_area");
  if (node->is_table()) {
    toml::table copy = *node->as_table();
    if (const toml::node* angle = copy.get("emission_deg")) {
      line.reference_emission_deg = angle->value<double>();
      if (!line.reference_emission_deg) throw InputError(where, "emission_deg is not a number");
      located(where, [&] { check_emission_deg(*line.reference_emission_deg); return 0; });
      copy.erase("emission_deg");
    }
    line.reference_area = detail::read_quantity(copy, entry.file(), where);
  } else {
    line.reference_area = detail::read_quantity(*node, entry.file(), where);
  }
  if (!(line.reference_area->value > 0.0)) throw InputError(where, number_text(line.reference_area->value) + " is not an area", "expected a number > 0");
}

Line read_line(TomlSection& entry, const Run& run) {
  entry.allow({"label", "level", "kinetic_energy_ev", "binding_energy_ev", "from", "components", "reference_area",
               "main_peak_fraction", "sensitivity", "transmission", "length_nm"});
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
  read_components(entry, line);
  read_reference_area(entry, line);
  line.main_peak_fraction = positive_quantity(entry, "main_peak_fraction", 1.0);
  line.sensitivity = positive_quantity(entry, "sensitivity");
  line.transmission = positive_quantity(entry, "transmission");
  read_lengths(entry, run, line);
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

/// `ratio` is a quantity, "computed", or "table:<key>".
void read_ratio(TomlSection& entry, ReferenceRatio& reference) {
  const toml::node* node = entry.node("ratio");
  const std::string where = entry.where("ratio");
  const char* expected = "expected a number, { value = …, sd = … }, \"computed\" or \"table:<key>\"";
  if (!node) throw InputError(where, "this key is missing", expected);
  if (const auto text = node->value_exact<std::string>()) {
    if (*text == "computed") {
      reference.origin = ReferenceOrigin::computed;
    } else if (text->starts_with("table:")) {
      reference.origin = ReferenceOrigin::table;
      reference.table_key = text->substr(6);
    } else {
      throw InputError(where, "\"" + *text + "\" is not a ratio", expected);
    }
    return;
  }
  reference.ratio = detail::read_quantity(*node, entry.file(), where);
  if (!(reference.ratio.value > 0.0)) throw InputError(where, number_text(reference.ratio.value) + " is not a ratio", "expected a number > 0");
}

void read_references(TomlSection& root, Run& run) {
  for (TomlSection& entry : root.sections("reference")) {
    entry.allow({"film", "substrate", "ratio"});
    ReferenceRatio reference;
    reference.film = entry.required_text("film");
    reference.substrate = entry.required_text("substrate");
    for (const auto& [key, label] : {std::pair{"film", &reference.film}, std::pair{"substrate", &reference.substrate}}) {
      if (run.find_line(*label)) continue;
      std::vector<std::string> labels;
      for (const Line& line : run.lines) labels.push_back(line.label);
      throw InputError(entry.where(key), "no line is labelled \"" + *label + "\"", detail::name_hint(*label, labels));
    }
    read_ratio(entry, reference);
    run.references.push_back(std::move(reference));
  }
}

void read_contamination(TomlSection& root, Run& run) {
  auto section = root.section("contamination");
  if (!section) return;
  section->allow({"layer", "line", "route"});
  Contamination c;
  c.layer = section->required_text("layer");
  located(section->where("layer"), [&] { return run.sample.position(c.layer); });
  c.line = section->required_text("line");
  if (!run.find_line(c.line)) throw InputError(section->where("line"), "no line is labelled \"" + c.line + "\"");
  c.route = located(section->where("route"), [&] { return contamination_route(section->required_text("route")); });
  run.contamination = std::move(c);
}

void read_thickness_options(TomlSection& root, Run& run) {
  auto section = root.section("thickness");
  if (!section) return;
  section->allow({"method", "interval", "draws", "seed", "length_given_for_angle"});
  if (const auto method = section->text("method")) {
    const std::vector<std::string> names = {"ratio", "substrate-line", "film-line"};
    if (*method == names[0]) run.method = ThicknessMethod::ratio;
    else if (*method == names[1]) run.method = ThicknessMethod::substrate_line;
    else if (*method == names[2]) run.method = ThicknessMethod::film_line;
    else throw InputError(section->where("method"), "unknown method \"" + *method + "\"", detail::name_hint(*method, names));
  }
  if (const auto interval = section->text("interval")) {
    const std::vector<std::string> names = {"automatic", "gum", "monte-carlo", "adaptive"};
    const auto found = std::find(names.begin(), names.end(), *interval);
    if (found == names.end()) throw InputError(section->where("interval"), "unknown interval \"" + *interval + "\"", detail::name_hint(*interval, names));
    run.uncertainty.method = static_cast<IntervalMethod>(found - names.begin());
  }
  if (const auto draws = section->number("draws")) {
    if (!(*draws >= 1000.0 && *draws <= 1e8)) throw InputError(section->where("draws"), number_text(*draws) + " is out of range", "expected 1000 to 1e8");
    run.uncertainty.draws = static_cast<std::size_t>(*draws);
  }
  if (const auto seed = section->number("seed")) {
    if (!(*seed >= 0.0 && *seed <= 9007199254740992.0)) throw InputError(section->where("seed"), "the seed is out of range", "expected a whole number >= 0");
    run.uncertainty.seed = static_cast<std::uint64_t>(*seed);
  }
  run.length_given_for_angle = section->flag("length_given_for_angle").value_or(false);
}

void read_sensitivity_options(TomlSection& root, Run& run) {
  if (const auto kind = root.text("sensitivity_kind")) run.sensitivity_kind = located(root.where("sensitivity_kind"), [&] { return sensitivity_kind(*kind); });
  const toml::node* includes = root.node("sensitivity_includes");
  if (!includes) return;
  const std::string where = root.where("sensitivity_includes");
  const std::vector<std::string> names = {"transmission", "escape-depth", "asymmetry"};
  if (!includes->is_array()) throw InputError(where, "this is not a list", "expected a list of: " + detail::join_names(names));
  for (const toml::node& item : *includes->as_array()) {
    const auto name = item.value_exact<std::string>();
    if (name == "transmission") run.sensitivity_includes_transmission = true;
    else if (name == "escape-depth") run.sensitivity_includes_escape_depth = true;
    else if (name == "asymmetry") run.sensitivity_includes_asymmetry = true;
    else throw InputError(where, "\"" + name.value_or("?") + "\" is not known here", "expected a list of: " + detail::join_names(names));
  }
}

void read_correlations(TomlSection& section, const std::vector<std::string>& labels, Run& run) {
  for (TomlSection& entry : section.sections("correlation")) {
    entry.allow({"lines", "r"});
    const toml::node* lines = entry.node("lines");
    const std::string where = entry.where("lines");
    AreaCorrelation c;
    const toml::array* pair = lines ? lines->as_array() : nullptr;
    const auto first = pair && pair->size() == 2 ? (*pair)[0].value_exact<std::string>() : std::nullopt;
    const auto second = pair && pair->size() == 2 ? (*pair)[1].value_exact<std::string>() : std::nullopt;
    if (!first || !second || *first == *second) throw InputError(where, "this is not a pair of labels", "expected lines = [\"a\", \"b\"]");
    for (const std::string& label : {*first, *second}) {
      if (std::find(labels.begin(), labels.end(), label) == labels.end()) throw InputError(where, "no component is labelled \"" + label + "\"", detail::name_hint(label, labels));
    }
    const auto r = entry.number("r");
    if (!r || !(std::abs(*r) <= 1.0)) throw InputError(entry.where("r"), r ? "the correlation lies outside [-1, 1]" : "this key is missing", "expected r = -0.4");
    run.area_correlations.push_back({*first, *second, *r});
  }
}

void read_data(TomlSection& root, const std::vector<std::string>& tables, Run& run) {
  auto section = root.section("data");
  if (!section) throw InputError(run.place, "the table [data] is missing", "expected [data] with areas = \"table.csv\"");
  section->allow({"areas", "area_unit", "transmission", "layout", "columns", "correlation"});
  if (const auto unit = section->text("area_unit")) {
    run.area_unit = located(section->where("area_unit"), [&] { return area_unit(*unit); });
  }
  if (const auto transmission = section->text("transmission")) {
    if (*transmission != "raw" && *transmission != "corrected") {
      throw InputError(section->where("transmission"), "\"" + *transmission + "\" is not known here", "expected raw or corrected");
    }
    run.transmission_corrected = *transmission == "corrected";
  }
  AreaTableOptions options;
  if (const auto layout = section->text("layout")) {
    if (*layout != "long" && *layout != "wide") throw InputError(section->where("layout"), "unknown layout \"" + *layout + "\"", "expected long or wide");
    options.wide = *layout == "wide";
  }
  for (const Line& line : run.lines) {
    for (const Component& part : line.components) {
      if (std::find(options.labels.begin(), options.labels.end(), part.label) == options.labels.end()) options.labels.push_back(part.label);
    }
  }
  if (auto columns = section->section("columns")) {
    for (const std::string& ours : columns->keys()) options.columns[ours] = columns->required_text(ours);
  }
  options.geometry = run.geometry;
  read_correlations(*section, options.labels, run);
  // Tables named on the command line take the place of the run file's.
  if (tables.empty()) {
    run.tables = {path_beside(run.place, section->required_text("areas"))};
  } else {
    (void)section->text("areas");
    run.tables = tables;
  }
  for (std::size_t i = 0; i < run.tables.size(); ++i) {
    options.table = i;
    AreaTable table = read_area_table(read_text_file(run.tables[i]), run.tables[i], options);
    run.areas.insert(run.areas.end(), std::make_move_iterator(table.rows.begin()), std::make_move_iterator(table.rows.end()));
    for (std::string& column : table.unread_columns) {
      if (std::find(run.unread_columns.begin(), run.unread_columns.end(), column) == run.unread_columns.end()) run.unread_columns.push_back(std::move(column));
    }
  }
}

}  // namespace

Run parse_run(std::string_view text, const std::string& place, const std::vector<std::string>& tables) {
  Run run;
  run.place = place;
  const toml::table table = detail::parse_toml(text, place);
  TomlSection root(table, place, "");
  root.allow({"title", "record", "instrument", "sample", "line", "reference", "contamination", "thickness", "data", "length_set",
              "sensitivity_kind", "sensitivity_includes"});
  run.title = root.text("title").value_or("");
  if (auto record = root.section("record")) {
    record->allow(record_keys());
    for (const std::string& key : record_keys()) {
      if (auto value = record->echo(key)) run.record.emplace_back(key, *value);
    }
  }
  read_instrument(root, run);
  read_sample(root, run);
  run.length_set = root.text("length_set").value_or("");
  read_sensitivity_options(root, run);
  read_lines(root, run);
  read_references(root, run);
  read_contamination(root, run);
  read_thickness_options(root, run);
  read_data(root, tables, run);
  return run;
}

Run read_run_file(const std::string& path, const std::vector<std::string>& tables) {
  return parse_run(read_text_file(path), path, tables);
}

}  // namespace pellicle
