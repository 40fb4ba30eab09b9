// pellicle thickness: film thickness from a run file, or from a few numbers on the command line.

#include <algorithm>
#include <filesystem>
#include <memory>

#include "command.hpp"
#include "material_options.hpp"
#include "pellicle/pellicle.hpp"
#include "picture.hpp"

namespace pellicle::cli {
namespace {

struct Options {
  std::string run_file;
  std::vector<std::string> tables;
  std::string interval;
  std::optional<std::size_t> draws;
  std::optional<std::uint64_t> seed;
  std::string reference_table;
  bool reference_computed = false;
  std::string film, substrate, line, source, length_set, area_unit = "arbitrary";
  std::optional<double> photon_energy_ev;
  MaterialOverrides film_overrides;
  QuantityOption emission, takeoff, film_area, substrate_area, reference_ratio, reference_film_area, reference_substrate_area, length;
  PictureOptions picture;
  Output output;
};

/// The error of a part, with the option it belongs to in front.
template <typename Function>
auto for_option(const std::string& option, Function&& function) {
  try {
    return function();
  } catch (const InputError& e) {
    const bool same = e.where() == "emission_deg" || e.where() == "takeoff_deg" || e.where().empty();
    throw InputError(same ? option : option + ": " + e.where(), e.fact(), e.hint());
  }
}

std::string required(const std::string& value, const std::string& option) {
  if (value.empty()) throw InputError(option, "it is missing", "give a run file, or --film, --substrate, --line, --source and the areas");
  return value;
}

Quantity required(const QuantityOption& option, const std::string& name) {
  const std::optional<Quantity> q = option.quantity(name);
  if (!q) throw InputError("--" + name, "it is missing", "give a run file, or both areas and a reference");
  return *q;
}

pellicle::Run run_from_options(const Options& o) {
  pellicle::Run run;
  run.place = "command line";
  if (o.source.empty() == !o.photon_energy_ev.has_value()) {
    throw InputError("--source", o.source.empty() ? "it is missing" : "both --source and --photon-energy-ev are given", "give one of them");
  }
  run.source = for_option("--source", [&] { return o.photon_energy_ev ? photon_source_of_energy(*o.photon_energy_ev) : photon_source(o.source); });
  run.sample.layers.push_back({"film", for_option("--film", [&] { return define_material(required(o.film, "--film"), o.film_overrides); })});
  run.sample.substrate = for_option("--substrate", [&] { return define_material(required(o.substrate, "--substrate")); });
  run.length_set = o.length_set;
  run.area_unit = for_option("--area-unit", [&] { return area_unit(o.area_unit); });

  const std::optional<Quantity> emission = o.emission.quantity("emission-deg");
  const std::optional<Quantity> takeoff = o.takeoff.quantity("takeoff-deg");
  if (emission && takeoff) throw InputError("--takeoff-deg", "both --emission-deg and --takeoff-deg are given", "keep one; emission = 90 - take-off");
  if (!emission && !takeoff) throw InputError("--emission-deg", "it is missing", "give --emission-deg, counted from the surface normal, or --takeoff-deg, from the surface");
  run.emission_sd_deg = emission ? emission->standard_uncertainty : takeoff->standard_uncertainty;
  run.emission_deg = for_option(emission ? "--emission-deg" : "--takeoff-deg", [&] {
    if (takeoff) return emission_deg_from_takeoff(takeoff->value);
    check_emission_deg(emission->value);
    return emission->value;
  });

  Line film;
  film.label = "film";
  film.level = for_option("--line", [&] { return core_level(required(o.line, "--line")); });
  film.kinetic_energy_ev = for_option("--line", [&] { return kinetic_energy_ev(*film.level, run.source); });
  film.from = "film";
  film.components = {{film.label, 1.0}};
  Line substrate = film;
  substrate.label = substrate.from = kSubstrate;
  substrate.components = {{substrate.label, 1.0}};
  if (const auto length = o.length.quantity("length-nm")) {
    if (!run.length_set.empty()) throw InputError("--length-set", "both --length-nm and --length-set are given", "keep one");
    if (!(length->value > 0.0)) throw InputError("--length-nm", number_text(length->value) + " is not a length", "expected a number > 0");
    substrate.length_nm["film"] = *length;
  }
  film.reference_area = o.reference_film_area.quantity("reference-film-area");
  substrate.reference_area = o.reference_substrate_area.quantity("reference-substrate-area");
  const std::optional<Quantity> ratio = o.reference_ratio.quantity("reference-ratio");
  const bool computed = o.reference_computed;
  const int stated = (ratio ? 1 : 0) + (computed ? 1 : 0) + (o.reference_table.empty() ? 0 : 1);
  if (stated > 1) throw InputError("--reference-ratio", "more than one reference is given", "keep one of --reference-ratio, --reference-table and --reference-computed");
  if (stated > 0 && (film.reference_area || substrate.reference_area)) {
    throw InputError("--reference-ratio", "both a reference ratio and reference areas are given", "keep one kind");
  }
  if (stated == 0 && !(film.reference_area && substrate.reference_area)) {
    throw InputError("--reference-ratio", "no reference ratio is given",
                     "give --reference-ratio, or both --reference-film-area and --reference-substrate-area, or --reference-table, or --reference-computed");
  }
  run.lines = {film, substrate};
  if (ratio || computed || !o.reference_table.empty()) {
    ReferenceRatio reference{"film", std::string(kSubstrate), ratio.value_or(Quantity(0.0)), ReferenceOrigin::given, o.reference_table};
    if (computed) reference.origin = ReferenceOrigin::computed;
    if (!o.reference_table.empty()) reference.origin = ReferenceOrigin::table;
    run.references.push_back(std::move(reference));
  }

  for (const auto& [option, name, label] : {std::tuple{&o.film_area, "film-area", "film"}, {&o.substrate_area, "substrate-area", "substrate"}}) {
    const Quantity area = required(*option, name);
    if (!(area.value >= 0.0)) throw InputError("--" + std::string(name), number_text(area.value) + " is not an area", "expected a number >= 0");
    AreaRow row;
    row.spot = "1";
    row.line = label;
    row.area = area.value;
    row.area_sd = area.standard_uncertainty;
    run.areas.push_back(row);
  }
  return run;
}

int exit_code(const Options& o, const ThicknessResults& results) {
  std::size_t failed = 0;
  const std::string* first = nullptr;
  for (const ThicknessResult& r : results.results) {
    if (r.failure.empty()) continue;
    ++failed;
    if (!first) first = &r.failure;
  }
  const bool error_finding = std::any_of(results.findings.begin(), results.findings.end(), [](const Finding& f) { return f.severity == Severity::error; });
  if (failed > 0) {
    remark(o.output, "pellicle thickness: " + std::to_string(failed) + " of " + std::to_string(results.results.size()) +
                         " results failed; first: " + *first);
  }
  if (failed == results.results.size()) return kNoAnswer;
  return o.output.strict && (failed > 0 || error_finding) ? kNoAnswer : kDone;
}

void set_uncertainty(const Options& o, pellicle::Run& run) {
  if (o.draws) {
    run.uncertainty.draws = *o.draws;
    run.uncertainty.method = IntervalMethod::monte_carlo;
  }
  if (o.seed) run.uncertainty.seed = *o.seed;
  if (o.interval == "gum") run.uncertainty.method = IntervalMethod::gum;
  if (o.interval == "monte-carlo") run.uncertainty.method = IntervalMethod::monte_carlo;
  if (o.interval == "adaptive") run.uncertainty.method = IntervalMethod::adaptive_monte_carlo;
}

/// A table that stands twice would count twice.
void check_tables(const std::vector<std::string>& tables) {
  for (std::size_t i = 0; i < tables.size(); ++i) {
    for (std::size_t k = 0; k < i; ++k) {
      std::error_code failure;
      if (tables[i] == tables[k] || std::filesystem::equivalent(tables[i], tables[k], failure)) {
        throw UsageError("--areas names " + tables[i] + " twice");
      }
    }
  }
}

int thickness(const Options& o, const CLI::App& command) {
  check_tables(o.tables);
  pellicle::Run run = o.run_file.empty() ? run_from_options(o) : read_run_file(o.run_file, o.tables);
  set_uncertainty(o, run);
  std::vector<std::string> inputs = run.tables;
  if (!o.run_file.empty()) inputs.push_back(o.run_file);
  check_targets(inputs, {{"--out", o.output.out}, {"--plot", o.picture.plot.value_or("")}, {"--report", o.picture.report}});
  ProgressLine progress(o.output, "results");
  const ThicknessResults results = run_thickness(run, [&](std::size_t done, std::size_t all) { return progress(done, all); });
  progress.clear();
  deliver(o.output, o.output.json  ? thickness_json(run, results)
                    : o.output.csv ? thickness_csv(run, results)
                                   : thickness_text(run, results));
  if (!o.picture.report.empty()) {
    deliver_report(o.picture, o.output, thickness_html(run, results, {inputs_sha256(run), repeating_command(command)}));
  }
  if (o.picture.plot) deliver_plot(o.picture, o.output, result_figure(run, results));
  return exit_code(o, results);
}

}  // namespace

Run add_thickness(CLI::App& app) {
  auto o = std::make_shared<Options>();
  CLI::App* c = app.add_subcommand("thickness", "Film thickness from a line in film and substrate, with budget and findings.");
  c->footer("  pellicle thickness coupon.toml\n"
            "  pellicle thickness coupon.toml --json --out coupon.json\n"
            "  pellicle thickness coupon.toml --report coupon.html --plot coupon.svg\n"
            "  pellicle thickness coupon.toml --areas week-1.csv week-2.csv --csv --out all.csv\n"
            "  pellicle thickness --film SiO2 --substrate Si --line \"Si 2p\" --source \"Al Ka\" --emission-deg 34 \\\n"
            "      --film-area 20000 --substrate-area 10000 --area-unit counts --reference-ratio 0.9329 \\\n"
            "      --reference-ratio-sd 0.0093 --length-nm 3.448 --length-nm-sd 0.034\n"
            "  Equation: t = L cos(emission) ln(1 + (film area / substrate area) / reference ratio)\n");
  CLI::Option* file = c->add_option("run", o->run_file, "run file (TOML); - reads standard input")->type_name("RUN.toml");
  c->add_option("--areas", o->tables, "area tables that take the place of the run file's; results name their table")->type_name("TABLE.csv");
  c->add_option("--film", o->film, "film: catalogue id or formula")->type_name("MATERIAL");
  add_material_options(*c, "film-", o->film_overrides);
  c->add_option("--substrate", o->substrate, "substrate: catalogue id or formula")->type_name("MATERIAL");
  c->add_option("--line", o->line, "line fitted in film and substrate, e.g. \"Si 2p\"")->type_name("LINE");
  c->add_option("--source", o->source, "photon source, e.g. \"Al Ka\"")->type_name("NAME");
  c->add_option("--photon-energy-ev", o->photon_energy_ev, "photon energy instead of --source")->type_name("NUMBER");
  add_quantity(*c, "emission-deg", o->emission, "emission angle from the surface normal");
  add_quantity(*c, "takeoff-deg", o->takeoff, "take-off angle from the surface plane instead");
  add_quantity(*c, "film-area", o->film_area, "fitted area of the film's component");
  add_quantity(*c, "substrate-area", o->substrate_area, "fitted area of the substrate's component");
  c->add_option("--area-unit", o->area_unit, "counts or arbitrary (default): counts get their Poisson uncertainty")->type_name("UNIT");
  add_quantity(*c, "reference-ratio", o->reference_ratio, "film over substrate for infinitely thick film and bare substrate");
  c->add_option("--reference-table", o->reference_table, "tabulated reference ratio, e.g. sio2-si")->type_name("KEY");
  c->add_flag("--reference-computed", o->reference_computed, "compute the reference ratio from densities and mean free paths");
  add_quantity(*c, "reference-film-area", o->reference_film_area, "area of an infinitely thick film");
  add_quantity(*c, "reference-substrate-area", o->reference_substrate_area, "area of the bare substrate");
  add_quantity(*c, "length-nm", o->length, "attenuation length in the film; absent: predicted");
  c->add_option("--length-set", o->length_set, "calibrated lengths, e.g. sio2-2004 (see pellicle lengths --sets)")->type_name("SET");
  c->add_option("--interval", o->interval, "how the 95 % interval is found; default: monte-carlo for up to 20 results, else gum")
      ->check(CLI::IsMember({"automatic", "gum", "monte-carlo", "adaptive"}))
      ->type_name("METHOD");
  c->add_option("--draws", o->draws, "Monte Carlo draws, 1000 to 1e8 (default 1000000)")->check(CLI::Range(1e3, 1e8))->type_name("NUMBER");
  c->add_option("--seed", o->seed, "seed of the Monte Carlo draws (default 1)")->check(CLI::NonNegativeNumber)->type_name("NUMBER");
  add_picture_options(*c, o->picture);
  add_output_options(*c, o->output, true, true);
  // What describes a measurement on the command line makes no sense beside a run file.
  static const std::vector<std::string> with_file = {"--json", "--csv", "--out", "--strict", "--quiet", "--help",
                                                     "--areas", "--interval", "--draws", "--seed", "--plot", "--report"};
  std::vector<const CLI::Option*> alone;
  for (const CLI::Option* option : c->get_options()) {
    if (option != file && std::find(with_file.begin(), with_file.end(), option->get_name()) == with_file.end()) alone.push_back(option);
  }
  return [o, alone, c] {
    check_picture_options(o->picture, o->output);
    const auto used = std::find_if(alone.begin(), alone.end(), [](const CLI::Option* option) { return option->count() > 0; });
    if (o->run_file.empty() && !o->tables.empty()) throw UsageError("--areas needs a run file, which stands before --areas");
    if (!o->run_file.empty() && used != alone.end()) throw UsageError((*used)->get_name() + " cannot stand beside a run file; write it into the run file");
    if (o->run_file.empty() && used == alone.end()) throw UsageError("give a run file, or --film, --substrate, --line, --source, an angle, areas and a reference");
    return thickness(*o, *c);
  };
}

}  // namespace pellicle::cli
