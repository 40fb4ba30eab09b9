#include "bind.hpp"

namespace pellicle::python {
namespace {

double required(const TabulatedValue& value) {
  if (!value.value) throw DomainError("", value.refusal);
  return *value.value;
}

}  // namespace

void register_lines(py::module_& m) {
  m.def("photon_energy_ev", [](const std::string& source) { return photon_source(source).photon_energy_ev; }, "source"_a,
        R"(Photon energy of a named source [eV]: "Mg Ka", "Al Ka", "Ag La", "Cr Ka", "Ga Ka", ...

Raises
------
InputError
    Unknown source; the message lists the known ones.

Examples
--------
>>> import pellicle
>>> pellicle.photon_energy_ev("Al Ka")
1486.6
)");
  m.def("binding_energy_ev", [](const std::string& line) { return core_level(line).binding_energy_ev; }, "line"_a,
        R"(Binding energy of a core level [eV]; of a full doublet the mean weighted by occupancy.

Parameters
----------
line : str
    "Al 2p", "Ti 2p3/2". Elements Li to U.

Raises
------
InputError
    Unknown element or level; the message lists the levels there are.

Examples
--------
>>> import pellicle
>>> pellicle.binding_energy_ev("Au 4f7/2")
83.9
)");
  m.def("kinetic_energy_ev", [](const std::string& line, const std::string& source) {
          return kinetic_energy_ev(core_level(line), photon_source(source));
        }, "line"_a, py::kw_only(), "source"_a,
        R"(Kinetic energy of a photoelectron line [eV], referred to the Fermi level.

Raises
------
InputError
    Unknown line or source.
DomainError
    The photon cannot reach the level.

Examples
--------
>>> import pellicle
>>> round(pellicle.kinetic_energy_ev("Si 2p", source="Al Ka"), 1)
1387.2
)");
  m.def("cross_section_barn", [](const std::string& line, const std::string& source) {
          return required(photoionisation_cross_section_barn(core_level(line), photon_source(source)));
        }, "line"_a, py::kw_only(), "source"_a,
        R"(Photoionisation cross section of all electrons of a level [barn per atom].

Tabulated for Mg Ka, Al Ka, Ag La, Cr Ka and Ga Ka. Source: xraylib (Schoonjans et al. 2011).

Raises
------
DomainError
    No reliable value; give a sensitivity.

Examples
--------
>>> import pellicle
>>> 13500 < pellicle.cross_section_barn("C 1s", source="Al Ka") < 13800
True
)");
  m.def("asymmetry", [](const std::string& line, const std::string& source) {
          return required(asymmetry_parameter(core_level(line), photon_source(source)));
        }, "line"_a, py::kw_only(), "source"_a,
        R"(Photoelectron asymmetry parameter, -1 to 2 (dipole, unpolarised light); 2 for s levels.

Computed values with an uncertainty of 0.05.

Raises
------
DomainError
    Not tabulated for this level or source.

Examples
--------
>>> import pellicle
>>> pellicle.asymmetry("C 1s", source="Al Ka")
2.0
)");
}

}  // namespace pellicle::python
