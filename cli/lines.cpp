// pellicle lines: core levels of an element, their energies and cross sections.

#include <memory>

#include "command.hpp"
#include "pellicle/pellicle.hpp"

namespace pellicle::cli {
namespace {

struct Options {
  std::string what, source;
  bool sources = false;
  Output output;
};

int lines(const Options& o) {
  if (o.sources) {
    std::string text;
    for (const PhotonSource& s : photon_sources()) text += "  " + s.name + "   " + number_text(s.photon_energy_ev) + " eV\n";
    deliver(o.output, o.output.json ? photon_sources_json() : text);
    return kDone;
  }
  if (o.what.empty()) throw InputError("", "no element or line is given", "for example: pellicle lines Si --source \"Al Ka\"");
  const Element* element = find_element(o.what);
  const std::vector<CoreLevel> levels = element ? core_levels(*element) : std::vector<CoreLevel>{core_level(o.what)};
  std::optional<PhotonSource> source;
  if (!o.source.empty()) source = photon_source(o.source);
  const PhotonSource* used = source ? &*source : nullptr;
  deliver(o.output, o.output.json ? lines_json(levels, used) : lines_text(levels, used));
  return kDone;
}

}  // namespace

Run add_lines(CLI::App& app) {
  auto o = std::make_shared<Options>();
  CLI::App* c = app.add_subcommand("lines", "Core levels of an element: energies, cross sections, asymmetry.");
  c->footer("  pellicle lines Si --source \"Al Ka\"\n  pellicle lines \"Ti 2p3/2\" --source \"Mg Ka\" --json\n  pellicle lines --sources\n");
  c->add_option("what", o->what, "element (Si) or line (\"Si 2p\")")->type_name("ELEMENT|LINE");
  c->add_option("--source", o->source, "photon source, for kinetic energies, cross sections and asymmetry")->type_name("NAME");
  c->add_flag("--sources", o->sources, "list the photon sources");
  add_output_options(*c, o->output);
  return [o] { return lines(*o); };
}

}  // namespace pellicle::cli
