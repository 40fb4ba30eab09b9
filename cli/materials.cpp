// pellicle materials: the catalogue of solids.

#include <algorithm>
#include <memory>

#include "command.hpp"
#include "pellicle/pellicle.hpp"

namespace pellicle::cli {
namespace {

struct Options {
  std::string filter;
  Output output;
};

std::string lower(std::string text) {
  std::transform(text.begin(), text.end(), text.begin(), [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return text;
}

bool is_element(const std::string& text) {
  try {
    const Formula formula = Formula::parse(text);
    return formula.terms().size() == 1 && formula.terms()[0].element->symbol == text;
  } catch (const InputError&) {
    return false;
  }
}

/// An element symbol asks for the solids that hold the element, anything else is part of a word.
bool matches(const Material& m, const std::string& filter) {
  if (is_element(filter)) return m.formula.count(filter) > 0.0;
  const std::string wanted = lower(filter);
  for (const std::string& field : {m.id, m.name, m.formula.text(), m.category}) {
    if (lower(field).find(wanted) != std::string::npos) return true;
  }
  return false;
}

int materials(const Options& o) {
  std::vector<Material> found;
  for (const Material& m : catalogue()) {
    if (matches(m, o.filter)) found.push_back(m);
  }
  if (found.empty()) throw InputError("", "no catalogued material matches \"" + o.filter + "\"", "give an element symbol, or part of an id, name, formula or category");
  deliver(o.output, o.output.json ? materials_json(found) : materials_text(found));
  return kDone;
}

}  // namespace

Run add_materials(CLI::App& app) {
  auto o = std::make_shared<Options>();
  CLI::App* c = app.add_subcommand("materials", "The catalogue of solids: density, band gap, and where each number comes from.");
  c->footer("  pellicle materials\n  pellicle materials alumin\n  pellicle materials Ti --json\n"
            "  Sources are keys of reference/sources.bib; \"from memory\" marks a number not confirmed in print.\n");
  c->add_option("filter", o->filter, "an element symbol, or part of an id, name, formula or category")->type_name("TEXT");
  add_output_options(*c, o->output);
  return [o] { return materials(*o); };
}

}  // namespace pellicle::cli
