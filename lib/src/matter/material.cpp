#include "pellicle/matter/material.hpp"

#include <algorithm>
#include <cmath>

#include "base/csv.hpp"
#include "base/nearest.hpp"
#include "pellicle/base/constants.hpp"
#include "pellicle/base/error.hpp"
#include "pellicle/base/number.hpp"

namespace pellicle {
namespace {

/// The solid meant by the plain formula SiO2: thermal oxide is what the trade measures.
constexpr std::string_view kSilicaId = "sio2-thermal";

std::vector<Material> load_catalogue() {
  std::vector<Material> all;
  detail::for_each_record("materials", [&](const detail::CsvRecord& row) {
    Material m = make_material(row.text("formula"), row.number("density_g_cm3"), row.optional_number("band_gap_ev"));
    m.id = row.text("id");
    m.name = row.text("name");
    m.category = row.text("category");
    m.density_source = row.text("density_source");
    m.density_mark = row.text("density_mark");
    m.gap_source = row.text("gap_source");
    m.gap_mark = row.text("gap_mark");
    all.push_back(std::move(m));
  });
  return all;
}

void check_range(const char* field, double value, double low, bool low_allowed, double high) {
  const bool inside = (low_allowed ? value >= low : value > low) && value <= high;
  if (inside) return;
  throw InputError(field, number_text(value) + " is out of range",
                   std::string("expected ") + (low_allowed ? ">= " : "> ") + number_text(low) + " and <= " + number_text(high));
}

}  // namespace

bool Material::is_organic() const noexcept {
  if (category == "polymer" || category == "organic") return true;
  if (category != "inline") return false;
  // Only C, H and the elements of ordinary organic matter, with hydrogen or fluorine on the carbon.
  static constexpr std::string_view kOrganic[] = {"C", "H", "N", "O", "F", "S", "Cl", "P"};
  const bool known = std::all_of(formula.terms().begin(), formula.terms().end(), [](const FormulaTerm& t) {
    return std::find(std::begin(kOrganic), std::end(kOrganic), t.element->symbol) != std::end(kOrganic);
  });
  const double carbon = formula.count("C");
  return known && carbon > 0.0 && (formula.count("H") > 0.0 || formula.count("F") > 0.0) && carbon / formula.atoms() >= 0.15;
}

Material make_material(std::string_view formula, double density_g_cm3, std::optional<double> band_gap_ev,
                       std::optional<double> valence_electrons) {
  check_range("density_g_cm3", density_g_cm3, 1e-4, true, 30.0);
  if (band_gap_ev) check_range("band_gap_ev", *band_gap_ev, 0.0, true, 30.0);
  if (valence_electrons) check_range("valence_electrons", *valence_electrons, 0.0, false, 1e9);
  Material m;
  m.formula = Formula::parse(formula);
  m.id = m.name = m.formula.text();
  m.category = "inline";
  m.density_g_cm3 = density_g_cm3;
  m.band_gap_ev = band_gap_ev;
  m.valence_electrons = valence_electrons;
  m.density_source = m.gap_source = "given";
  m.density_mark = m.gap_mark = "given";
  return m;
}

double atom_density_per_nm3(const Material& material, std::string_view symbol) {
  // 1 cm³ = 1e21 nm³
  return kAvogadroPerMol * 1e-21 * material.density_g_cm3 * material.formula.count(symbol) /
         material.formula.molar_mass_g_mol();
}

double mean_spacing_nm(const Material& material) {
  return std::cbrt(1e21 * material.formula.molar_mass_g_mol() /
                   (material.density_g_cm3 * kAvogadroPerMol * material.formula.atoms()));
}

ValenceElectrons valence_electrons(const Material& material) {
  ValenceElectrons result;
  if (material.valence_electrons) {
    result.count = material.valence_electrons;
    return result;
  }
  double sum = 0.0;
  for (const FormulaTerm& term : material.formula.terms()) {
    const Element& e = *term.element;
    if (e.valence_status == ValenceStatus::undecided) {
      result.refusal = "the number of valence electrons of " + e.symbol +
                       " could not be decided from the published convention; state valence_electrons to use TPP-2M";
      return result;
    }
    if (e.valence_status == ValenceStatus::doubtful) {
      add_finding(result.findings, {"valence_electrons_doubtful", Severity::note,
                                    "the valence electrons of " + e.symbol + " (" + std::to_string(e.valence_electrons) +
                                        " per atom) are doubtful in TPP-2M",
                                    static_cast<double>(e.valence_electrons)});
    }
    sum += term.count * e.valence_electrons;
  }
  result.count = sum;
  return result;
}

std::span<const Material> catalogue() {
  static const std::vector<Material> all = load_catalogue();
  return all;
}

const Material& catalogue_material(std::string_view id_or_formula) {
  const auto all = catalogue();
  const auto by_id = [&](std::string_view id) {
    return std::find_if(all.begin(), all.end(), [&](const Material& m) { return m.id == id; });
  };
  if (const auto found = by_id(id_or_formula); found != all.end()) return *found;

  std::vector<std::string> ids;
  for (const Material& m : all) ids.push_back(m.id);
  const std::string text(id_or_formula);
  const std::string near = detail::nearest_name(text, ids);
  Formula formula;
  try {
    formula = Formula::parse(id_or_formula);
  } catch (const InputError& e) {
    // A word with a hyphen or a lower-case start was meant as an id; anything else as a formula.
    const bool meant_as_id = text.find('-') != std::string::npos || text.empty() || (text[0] >= 'a' && text[0] <= 'z');
    if (!meant_as_id) throw;
    std::vector<std::string> meant;
    for (const Material& m : all) {
      if (m.formula.text().size() == text.size() && detail::edit_distance(m.formula.text(), text) == 0) meant.push_back(m.id);
    }
    throw InputError("", "no catalogued material has the id \"" + text + "\"",
                     !meant.empty() ? "did you mean: " + detail::join_names(meant) + "?"
                     : near.empty() ? "see `pellicle materials`" : "did you mean \"" + near + "\"?");
  }
  std::vector<std::string> same;
  for (const Material& m : all) {
    if (m.formula.same_composition(formula)) same.push_back(m.id);
  }
  if (std::find(same.begin(), same.end(), kSilicaId) != same.end()) return *by_id(kSilicaId);
  if (same.size() == 1) return *by_id(same.front());
  if (same.empty()) {
    throw InputError("", "no catalogued material has the formula \"" + text + "\"",
                     "give its density and band gap beside the formula");
  }
  throw InputError("", "\"" + text + "\" names several catalogued materials",
                   "choose one of: " + detail::join_names(same));
}

Material define_material(std::string_view id_or_formula, const MaterialOverrides& overrides) {
  const auto all = catalogue();
  const bool is_id = std::any_of(all.begin(), all.end(), [&](const Material& m) { return m.id == id_or_formula; });
  if (overrides.density_g_cm3 && !is_id) {
    return make_material(id_or_formula, *overrides.density_g_cm3, overrides.band_gap_ev, overrides.valence_electrons);
  }
  Material m = catalogue_material(id_or_formula);
  if (!overrides.any()) return m;
  // Through make_material, so that the ranges are checked in one place.
  const Material checked = make_material(m.formula.text(), overrides.density_g_cm3.value_or(m.density_g_cm3),
                                         overrides.band_gap_ev ? overrides.band_gap_ev : m.band_gap_ev,
                                         overrides.valence_electrons ? overrides.valence_electrons : m.valence_electrons);
  m.density_g_cm3 = checked.density_g_cm3;
  m.band_gap_ev = checked.band_gap_ev;
  m.valence_electrons = checked.valence_electrons;
  if (overrides.density_g_cm3) m.density_source = m.density_mark = "given";
  if (overrides.band_gap_ev) m.gap_source = m.gap_mark = "given";
  return m;
}

}  // namespace pellicle
