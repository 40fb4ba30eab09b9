// pellicle lengths: mean free paths and attenuation lengths of a material.

#include <algorithm>
#include <memory>

#include "command.hpp"
#include "material_options.hpp"
#include "pellicle/pellicle.hpp"

namespace pellicle::cli {
namespace {

struct Options {
  std::vector<std::string> materials;
  std::vector<double> energies_ev;
  std::string line, source;
  MaterialOverrides overrides;
  bool sets = false;
  Output output;
};

std::vector<double> energies(const Options& o) {
  if (!o.energies_ev.empty()) {
    if (!o.line.empty()) throw InputError("--line", "both --energy-ev and --line are given", "keep one");
    return o.energies_ev;
  }
  if (o.line.empty() || o.source.empty()) {
    throw InputError("--energy-ev", "no energy is given", "give --energy-ev, or --line with --source");
  }
  return {kinetic_energy_ev(core_level(o.line), photon_source(o.source))};
}

std::string sets_text() {
  std::string text;
  for (const CalibratedLength& row : calibrated_lengths()) {
    text += "  " + row.set + ": " + row.material + " " + row.line + " " + row.photon_source + " " +
            value_with_uncertainty(row.length_nm.value, row.length_nm.standard_uncertainty) + " nm (" + row.source + ", " + row.mark + ")\n";
  }
  return text + "  Sets are never mixed. Verify them against your copy of the source before use.\n";
}

int lengths(const Options& o) {
  if (o.sets) {
    deliver(o.output, o.output.json ? calibrated_lengths_json() : sets_text());
    return kDone;
  }
  if (o.materials.empty()) throw InputError("--material", "it is missing", "give a catalogue id or a formula; see pellicle materials");
  std::vector<LengthQuery> queries;
  for (const std::string& name : o.materials) {
    const Material material = define_material(name, o.overrides);
    for (const double energy : energies(o)) queries.push_back({name, material, energy, survey_lengths(material, energy)});
  }
  deliver(o.output, o.output.json ? lengths_json(queries) : lengths_text(queries));
  const bool all = std::all_of(queries.begin(), queries.end(), [](const LengthQuery& q) { return !q.length.model.empty(); });
  if (!all) remark(o.output, "pellicle lengths: no attenuation-length model holds for some of these; see the remarks");
  return all ? kDone : kNoAnswer;
}

}  // namespace

Run add_lengths(CLI::App& app) {
  auto o = std::make_shared<Options>();
  CLI::App* c = app.add_subcommand("lengths", "Mean free paths and attenuation lengths of a material, by every model.");
  c->footer("  pellicle lengths --material SiO2 --energy-ev 1387.1\n"
            "  pellicle lengths --material al2o3-amorphous --line \"Al 2p\" --source \"Al Ka\"\n"
            "  pellicle lengths --material Al2O3 --density-g-cm3 3.1 --band-gap-ev 7 --energy-ev 1000,1400 --json\n"
            "  pellicle lengths --sets\n");
  c->add_option("--material", o->materials, "catalogue id or formula")->type_name("MATERIAL")->delimiter(',');
  c->add_option("--energy-ev", o->energies_ev, "kinetic energies")->type_name("NUMBER")->delimiter(',');
  c->add_option("--line", o->line, "core level, with --source, instead of an energy")->type_name("LINE");
  c->add_option("--source", o->source, "photon source, e.g. \"Al Ka\"")->type_name("NAME");
  add_material_options(*c, "", o->overrides);
  c->add_flag("--sets", o->sets, "list the sets of calibrated lengths");
  add_output_options(*c, o->output);
  return [o] { return lengths(*o); };
}

}  // namespace pellicle::cli
