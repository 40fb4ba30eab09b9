#include "pellicle/matter/element.hpp"

#include <algorithm>
#include <vector>

#include "base/csv.hpp"
#include "base/nearest.hpp"
#include "pellicle/base/error.hpp"

namespace pellicle {
namespace {

ValenceStatus parse_status(const std::string& text) {
  if (text == "optical-set") return ValenceStatus::optical_set;
  if (text == "group-rule") return ValenceStatus::group_rule;
  if (text == "doubtful") return ValenceStatus::doubtful;
  return ValenceStatus::undecided;
}

std::vector<Element> load() {
  std::vector<Element> all;
  detail::for_each_record("elements", [&](const detail::CsvRecord& row) {
    all.push_back({static_cast<int>(row.number("z")), row.text("symbol"), row.text("name"),
                   row.number("atomic_weight_g_mol"), static_cast<int>(row.number("valence_electrons")),
                   parse_status(row.text("valence_status"))});
  });
  return all;
}

}  // namespace

std::span<const Element> elements() {
  static const std::vector<Element> all = load();
  return all;
}

const Element* find_element(std::string_view symbol) {
  const auto all = elements();
  const auto found = std::find_if(all.begin(), all.end(), [&](const Element& e) { return e.symbol == symbol; });
  return found == all.end() ? nullptr : &*found;
}

const Element& element(std::string_view symbol) {
  if (const Element* found = find_element(symbol)) return *found;
  std::vector<std::string> symbols;
  for (const Element& e : elements()) symbols.push_back(e.symbol);
  std::string near = detail::nearest_name(symbol, symbols);
  if (detail::edit_distance(near, symbol) > 1) near.clear();  // any two letters are near to some symbol
  throw InputError("", "unknown element \"" + std::string(symbol) + "\"",
                   near.empty() ? "expected the symbol of an element from H to U" : "did you mean \"" + near + "\"?");
}

const Element& element(int z) {
  const auto all = elements();
  if (z < 1 || z > static_cast<int>(all.size())) {
    throw InputError("", "no element has atomic number " + std::to_string(z), "expected 1 to 92");
  }
  return all[static_cast<std::size_t>(z) - 1];
}

}  // namespace pellicle
