#include "pellicle/matter/material.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <map>
#include <set>
#include <string>
#include <vector>

#include "pellicle/base/error.hpp"
#include "support/close_to.hpp"

using namespace pellicle;
using test::close_to;
using test::contains;
using test::error_of;
using test::rel;

namespace {

MaterialOverrides density(double value) {
  MaterialOverrides overrides;
  overrides.density_g_cm3 = value;
  return overrides;
}

MaterialOverrides gap(double value) {
  MaterialOverrides overrides;
  overrides.band_gap_ev = value;
  return overrides;
}

MaterialOverrides electrons(double value) {
  MaterialOverrides overrides;
  overrides.valence_electrons = value;
  return overrides;
}

}  // namespace

TEST_SUITE("materials") {

TEST_CASE("the catalogue holds at least two hundred solids with unique ids and stated origins") {
  const auto all = catalogue();
  CHECK(all.size() >= 200);
  std::set<std::string> ids;
  for (const Material& m : all) {
    CAPTURE(m.id);
    CHECK(ids.insert(m.id).second);
    CHECK(m.density_g_cm3 > 0.0);
    CHECK(m.density_g_cm3 <= 22.6);  // osmium, the densest solid, 22.57 g/cm³ [periodictable]
    CHECK_FALSE(m.name.empty());
    CHECK_FALSE(m.category.empty());
    CHECK_FALSE(m.density_source.empty());
    CHECK_FALSE(m.density_mark.empty());
    if (m.band_gap_ev) {
      CHECK(*m.band_gap_ev >= 0.0);
      CHECK(*m.band_gap_ev <= 14.0);  // lithium fluoride, the widest of all solids, 13.6 eV [strehlow1973]
      CHECK_FALSE(m.gap_source.empty());
      CHECK_FALSE(m.gap_mark.empty());
    }
  }
}

TEST_CASE("an id names its own solid") {
  for (const Material& m : catalogue()) CHECK(&catalogue_material(m.id) == &m);
}

TEST_CASE("a formula that one solid has names it in any spelling") {
  CHECK(catalogue_material("MgO").id == "mgo");
  CHECK(catalogue_material("OMg").id == "mgo");
  CHECK(catalogue_material("Mg2O2").id == "mgo");
}

TEST_CASE("silica means thermal oxide of 2.20 grams per cubic centimetre") {
  // Fused silica and thermal oxide, 2.20 g/cm³ [xraydb].
  for (const std::string name : {"SiO2", "O2Si", "sio2-thermal"}) {
    CHECK(catalogue_material(name).id == "sio2-thermal");
    CHECK(catalogue_material(name).density_g_cm3 == 2.20);
  }
}

TEST_CASE("a formula that several solids share is refused with all their ids") {
  const auto error = error_of<InputError>([] { (void)catalogue_material("Al2O3"); });
  std::size_t found = 0;
  for (const Material& m : catalogue()) {
    if (!m.formula.same_composition(Formula::parse("Al2O3"))) continue;
    ++found;
    CHECK(contains(error.hint(), m.id));
  }
  CHECK(found >= 3);
  CHECK(contains(error.fact(), "Al2O3"));
  // Every shared formula, not this one alone.
  for (const Material& m : catalogue()) {
    std::size_t shared = 0;
    for (const Material& other : catalogue()) shared += m.formula.same_composition(other.formula) ? 1 : 0;
    const bool is_an_id = std::any_of(catalogue().begin(), catalogue().end(),
                                      [&](const Material& o) { return o.id == m.formula.text(); });
    if (shared < 2 || is_an_id || m.formula.same_composition(Formula::parse("SiO2"))) continue;
    CAPTURE(m.id);
    CHECK(contains(error_of<InputError>([&] { (void)catalogue_material(m.formula.text()); }).hint(), m.id));
  }
}

TEST_CASE("an unknown id is answered with the nearest one and an unknown formula with the way to define it") {
  CHECK(contains(error_of<InputError>([] { (void)catalogue_material("sio2-termal"); }).hint(), "sio2-thermal"));
  CHECK(contains(error_of<InputError>([] { (void)catalogue_material("polystyren"); }).hint(), "polystyrene"));
  CHECK(contains(error_of<InputError>([] { (void)catalogue_material("Al7Si13"); }).hint(), "density"));
  CHECK(contains(error_of<InputError>([] { (void)catalogue_material("Al(Si"); }).where(), "character 3"));
}

TEST_CASE("a material defined by its numbers keeps them") {
  const Material m = make_material("Al2O3", 3.1, 7.0, 24.0);
  CHECK(m.id == "Al2O3");
  CHECK(m.category == "inline");
  CHECK(m.density_g_cm3 == 3.1);
  CHECK(m.band_gap_ev == 7.0);
  CHECK(m.valence_electrons == 24.0);
  CHECK_FALSE(make_material("Al2O3", 3.1).band_gap_ev.has_value());
  CHECK_FALSE(make_material("Al2O3", 3.1).valence_electrons.has_value());
}

TEST_CASE("numbers no solid can have are refused by the name of their field") {
  constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
  constexpr double kInf = std::numeric_limits<double>::infinity();
  for (const double value : {0.0, 9.9e-5, -1.0, 30.1, kNan, kInf, -kInf}) {
    CHECK(error_of<InputError>([&] { (void)make_material("Al", value); }).where() == "density_g_cm3");
  }
  for (const double value : {-0.1, 30.1, kNan, kInf}) {
    CHECK(error_of<InputError>([&] { (void)make_material("Al", 2.7, value); }).where() == "band_gap_ev");
  }
  for (const double value : {0.0, -3.0, kNan, kInf}) {
    CHECK(error_of<InputError>([&] { (void)make_material("Al", 2.7, 0.0, value); }).where() == "valence_electrons");
  }
  CHECK_NOTHROW((void)make_material("Al", 30.0, 30.0));
  CHECK_NOTHROW((void)make_material("Al", 1e-4, 0.0));
}

TEST_CASE("overrides replace what they name and leave the rest of the catalogue row") {
  const Material& row = catalogue_material("al2o3-amorphous");
  const Material dense = define_material("al2o3-amorphous", density(3.4));
  CHECK(dense.id == row.id);
  CHECK(dense.density_g_cm3 == 3.4);
  CHECK(dense.density_source == "given");
  CHECK(dense.band_gap_ev == row.band_gap_ev);
  CHECK(dense.gap_source == row.gap_source);
  const Material wide = define_material("al2o3-amorphous", gap(6.2));
  CHECK(wide.band_gap_ev == 6.2);
  CHECK(wide.gap_mark == "given");
  CHECK(wide.density_g_cm3 == row.density_g_cm3);
  CHECK(define_material("al2o3-amorphous", electrons(22.0)).valence_electrons == 22.0);
  CHECK(define_material("al2o3-amorphous").density_g_cm3 == row.density_g_cm3);
  CHECK(error_of<InputError>([] { (void)define_material("al2o3-amorphous", density(-1.0)); }).where() ==
        "density_g_cm3");
}

TEST_CASE("a formula with its density owes nothing to the catalogue") {
  const Material m = define_material("SiO2", density(2.3));
  CHECK(m.category == "inline");
  CHECK(m.density_g_cm3 == 2.3);
  CHECK_FALSE(m.band_gap_ev.has_value());
  // Without a density the formula must be one of the catalogue.
  CHECK(define_material("SiO2", gap(8.9)).id == "sio2-thermal");
}

TEST_CASE("organic solids are told from the rest") {
  for (const std::string id : {"polyethylene", "ptfe", "hydrocarbon", "polystyrene", "protein"})
    CHECK(catalogue_material(id).is_organic());
  for (const std::string id : {"graphite", "diamond", "sio2-thermal", "caco3", "Al", "water"})
    CHECK_FALSE(catalogue_material(id).is_organic());
  for (const std::string formula : {"CH2", "C8H8", "C2F4", "C6H11NO"}) CHECK(make_material(formula, 1.0).is_organic());
  for (const std::string formula : {"C", "SiC", "CO2", "CaCO3", "NH3", "C60"})
    CHECK_FALSE(make_material(formula, 1.0).is_organic());
}

TEST_CASE("atom density follows mass density in proportion") {
  // N = 602.214076 k / V per nm³ with the constant of the SI; corundum has V = 25.575 cm³/mol [dick2019]
  // [helgeson1978].
  const Material& corundum = catalogue_material("al2o3-corundum");
  constexpr double kDensityRounding = 1.3e-4;  // 3.987 is printed with four digits
  CHECK(close_to(atom_density_per_nm3(corundum, "Al"), 2 * 602.214076 / 25.575, rel(kDensityRounding)));
  CHECK(close_to(atom_density_per_nm3(corundum, "O"), 3 * 602.214076 / 25.575, rel(kDensityRounding)));
  CHECK(atom_density_per_nm3(corundum, "Si") == 0.0);
  const Material twice = make_material("Al2O3", 2 * corundum.density_g_cm3);
  CHECK(close_to(atom_density_per_nm3(twice, "Al"), 2 * atom_density_per_nm3(corundum, "Al"), rel(1e-14)));
  CHECK(close_to(atom_density_per_nm3(make_material("Al4O6", 3.987), "Al"),
                 atom_density_per_nm3(make_material("Al2O3", 3.987), "Al"), rel(1e-14)));
}

TEST_CASE("the mean atomic spacing cubed is the volume of one atom") {
  // Corundum, 25.575 cm³/mol of five atoms [dick2019] [helgeson1978]; rock salt, 27.015 cm³/mol of two.
  constexpr double kDensityRounding = 1.0e-4;  // a third of that of a density of four digits
  CHECK(close_to(mean_spacing_nm(catalogue_material("al2o3-corundum")), std::cbrt(25.575 / (5 * 602.214076)),
                 rel(kDensityRounding)));
  CHECK(close_to(mean_spacing_nm(catalogue_material("nacl")), std::cbrt(27.015 / (2 * 602.214076)),
                 rel(kDensityRounding)));
  // The size of the formula unit does not matter.
  CHECK(
      close_to(mean_spacing_nm(make_material("CH2", 0.94)), mean_spacing_nm(make_material("C3H6", 0.94)), rel(1e-14)));
}

TEST_CASE("valence electrons are summed over the formula unit") {
  // Convention of [tanuma1994]; W 6 as printed in [tanuma2011], the others recalled.
  struct Row {
    std::string formula;
    double electrons;
  };
  for (const Row& row : {Row{"SiO2", 16}, Row{"Al2O3", 24}, Row{"Al", 3}, Row{"Si", 4}, Row{"Cu", 11}, Row{"Au", 11},
                         Row{"W", 6}, Row{"WO3", 24}, Row{"HfO2", 16}, Row{"Ta2O5", 40}, Row{"KBr", 8}, Row{"CH2", 6},
                         Row{"GaAs", 8}, Row{"Fe2O3", 34}}) {
    CAPTURE(row.formula);
    const ValenceElectrons v = valence_electrons(make_material(row.formula, 1.0));
    REQUIRE(v.count.has_value());
    CHECK(*v.count == row.electrons);
    CHECK(v.refusal.empty());
    CHECK(v.findings.empty());
  }
  CHECK(close_to(*valence_electrons(make_material("TiC0.95", 4.9)).count, 4 + 4 * 0.95, rel(1e-14)));
}

TEST_CASE("stated valence electrons prevail over the convention") {
  const ValenceElectrons v = valence_electrons(make_material("CeO2", 7.2, 3.2, 20.0));
  CHECK(v.count == 20.0);
  CHECK(v.findings.empty());
}

TEST_CASE("valence electrons that could not be decided are refused with the element named") {
  for (const std::string symbol : {"Cs", "Ce", "La", "U", "Yb"}) {
    CAPTURE(symbol);
    const ValenceElectrons v = valence_electrons(make_material(std::string(symbol) + "O2", 5.0));
    CHECK_FALSE(v.count.has_value());
    CHECK(contains(v.refusal, std::string(" of ") + symbol + " could not be decided"));
    CHECK(contains(v.refusal, "state valence_electrons"));
  }
}

TEST_CASE("doubtful valence electrons are used but said to be doubtful") {
  for (const std::string symbol : {"Zn", "Cd", "In", "Sn", "Gd"}) {
    CAPTURE(symbol);
    const ValenceElectrons v = valence_electrons(make_material(symbol, 5.0));
    CHECK(v.count.has_value());
    CHECK(has_finding(v.findings, "valence_electrons_doubtful"));
  }
}

}  // TEST_SUITE("materials")
