#include "bind.hpp"

namespace pellicle::python {

Material material_of(const PyMaterial& m) {
  if (const Material* material = std::get_if<Material>(&m)) return *material;
  return define_material(std::get<std::string>(m));
}

void register_matter(py::module_& m) {
  py::class_<Material>(m, "Material", R"(A homogeneous solid.

Parameters
----------
formula : str
    Chemical formula, e.g. "Al2O3", "Ca10(PO4)6(OH)2", "CuSO4*5H2O".
density_g_cm3 : float
    Density [g/cm3], > 0 and <= 30.
band_gap_ev : float or None
    Band gap [eV], 0 for metals. None: not known; lengths then use 0 and say so.
valence_electrons : float or None
    Valence electrons per formula unit; None: summed over the elements (TPP convention).

Raises
------
InputError
    A fault in the formula (with its position) or a number out of range.

Examples
--------
>>> import pellicle
>>> film = pellicle.Material(formula="Al2O3", density_g_cm3=3.1, band_gap_ev=7.0)
>>> film.molar_mass_g_mol
101.96...
)")
      .def(py::init([](const std::string& formula, double density, std::optional<double> gap, std::optional<double> electrons) {
             return make_material(formula, density, gap, electrons);
           }),
           py::kw_only(), "formula"_a, "density_g_cm3"_a, "band_gap_ev"_a = py::none(), "valence_electrons"_a = py::none())
      .def_readonly("id", &Material::id, "Catalogue id, or the formula of a material of your own.")
      .def_readonly("name", &Material::name, "Name in words.")
      .def_readonly("category", &Material::category, "'oxide', 'element', 'polymer', ...; 'inline' for a material of your own.")
      .def_property_readonly("formula", [](const Material& x) { return x.formula.text(); }, "Chemical formula.")
      .def_readonly("density_g_cm3", &Material::density_g_cm3, "Density [g/cm3].")
      .def_readonly("band_gap_ev", &Material::band_gap_ev, "Band gap [eV], or None.")
      .def_readonly("density_source", &Material::density_source, "Key in reference/sources.bib.")
      .def_readonly("density_mark", &Material::density_mark, "'printed', 'from memory' or 'given'.")
      .def_readonly("gap_source", &Material::gap_source, "Key in reference/sources.bib.")
      .def_readonly("gap_mark", &Material::gap_mark, "'printed', 'from memory', 'definition' or 'given'.")
      .def_property_readonly("valence_electrons", [](const Material& x) { return valence_electrons(x).count; },
                             "Valence electrons per formula unit; None where they could not be decided.")
      .def_property_readonly("molar_mass_g_mol", [](const Material& x) { return x.formula.molar_mass_g_mol(); }, "Molar mass [g/mol].")
      .def("atom_density_per_nm3", [](const Material& x, const std::string& symbol) { return atom_density_per_nm3(x, symbol); },
           "symbol"_a, "Atoms of one element per volume [1/nm3]; 0 when it is absent.")
      .def("__repr__", [](const Material& x) { return "<Material " + x.id + ", " + number_text(x.density_g_cm3) + " g/cm3>"; });

  m.def("material", [](const std::string& name, std::optional<double> density, std::optional<double> gap, std::optional<double> electrons) {
          return define_material(name, {density, gap, electrons});
        },
        "id_or_formula"_a, py::kw_only(), "density_g_cm3"_a = py::none(), "band_gap_ev"_a = py::none(), "valence_electrons"_a = py::none(),
        R"(A material by catalogue id or formula, with numbers that replace the catalogue's.

"SiO2" means thermal oxide, 2.20 g/cm3; any other formula with several catalogued solids is an error
that lists their ids. A formula with `density_g_cm3` owes nothing to the catalogue.

Raises
------
InputError
    Unknown or ambiguous name, or a number out of range.

Examples
--------
>>> import pellicle
>>> pellicle.material("SiO2").id
'sio2-thermal'
)");
  m.def("catalogue", [] { return std::vector<Material>(catalogue().begin(), catalogue().end()); },
        R"(All catalogued solids, as a list of Material.

Examples
--------
>>> import pellicle
>>> len(pellicle.catalogue()) > 200
True
)");
}

}  // namespace pellicle::python
