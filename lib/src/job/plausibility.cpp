#include "job/plausibility.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle::detail {
namespace {

/// Catalogued solids of the same composition.
std::vector<const Material*> same_solids(const Material& material) {
  std::vector<const Material*> all;
  for (const Material& m : catalogue()) {
    if (m.formula.same_composition(material.formula)) all.push_back(&m);
  }
  return all;
}

/// The value of ours/catalogue nearest to 1 over all catalogued pairs; nothing when the catalogue holds none.
std::optional<double> nearest_quotient(double ours, const Material& film, const Material& substrate, const std::string& symbol) {
  std::optional<double> best;
  for (const Material* f : same_solids(film)) {
    for (const Material* s : same_solids(substrate)) {
      const double quotient = ours / (atom_density_per_nm3(*f, symbol) / atom_density_per_nm3(*s, symbol));
      if (!best || std::abs(std::log(quotient)) < std::abs(std::log(*best))) best = quotient;
    }
  }
  return best;
}

std::optional<double> own_imfp_nm(const Material& material, double energy_ev) {
  ModelValue value = predict_imfp(material, energy_ev, ImfpModel::tpp2m);
  if (!value.value_nm) value = predict_imfp(material, energy_ev, ImfpModel::s1);
  return value.value_nm;
}

}  // namespace

void note_implausible(const Run& run, const Line& film, const Line& substrate, ThicknessRoute& route) {
  if (!film.level || !substrate.level || film.level->name != substrate.level->name) return;
  const Material& oxide = run.sample.material(film.from);
  const Material& metal = run.sample.substrate;
  const std::string& symbol = film.level->element->symbol;
  const double densities = atom_density_per_nm3(oxide, symbol) / atom_density_per_nm3(metal, symbol);
  if (const auto quotient = nearest_quotient(densities, oxide, metal, symbol); quotient && (*quotient < 0.7 || *quotient > 1.4)) {
    add_finding(route.findings, {"density_implausible", Severity::warning,
                                 "the atom-density ratio of film and substrate is " + rounded_text(*quotient, 2) +
                                     " times that of the catalogued pair; check the densities",
                                 *quotient, *quotient < 0.7 ? 0.7 : 1.4});
  }
  if (!route.reference_ratio || route.reference_origin == "computed") return;
  const auto in_film = own_imfp_nm(oxide, film.kinetic_energy_ev);
  const auto in_metal = own_imfp_nm(metal, substrate.kinetic_energy_ev);
  if (!in_film || !in_metal) return;
  const double implied = route.reference_ratio->value * *in_metal / *in_film;
  if (const auto quotient = nearest_quotient(implied, oxide, metal, symbol); quotient && (*quotient < 0.5 || *quotient > 2.0)) {
    add_finding(route.findings, {"reference_ratio_implausible", *quotient < 0.2 || *quotient > 5.0 ? Severity::error : Severity::warning,
                                 "the reference ratio implies an atom-density ratio of film and substrate " + rounded_text(*quotient, 2) +
                                     " times that of the catalogued pair; is it film over substrate?",
                                 *quotient, *quotient < 0.5 ? 0.5 : 2.0});
  }
}

}  // namespace pellicle::detail
