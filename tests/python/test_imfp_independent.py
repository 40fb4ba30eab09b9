"""TPP-2M and S1 written down a second time, in NumPy, from the published equations.

Masses and mean atomic numbers come from periodictable, valence electrons from the list below, so that only density and
band gap are shared with the library. TPP-2M: [shinotsuka2015], beta of [tanuma1994]. S1: [seah2012imfp].
"""

import numpy as np
import periodictable
import pytest

import pellicle

ENERGIES_EV = np.array([50.0, 99.5, 100.0, 200.0, 500.0, 1000.0, 1253.6, 1486.6, 3000.0, 5414.8, 9251.7, 10000.0,
                        30000.0, 200000.0])
ROUNDING = 1e-13  # the same sum in another order

# Valence electrons per atom, convention of the TPP papers.
VALENCE = {"H": 1, "C": 4, "N": 5, "O": 6, "F": 7, "Mg": 2, "Al": 3, "Si": 4, "Ti": 4, "Cr": 6, "Fe": 8, "Ni": 10, "Cu": 11,
           "Ge": 4, "Y": 3, "Zr": 4, "Ta": 5, "W": 6, "Hf": 4, "Au": 11}

MATERIALS = ["Al", "Si", "Ti", "Cr", "Fe", "Ni", "Cu", "Ge", "Ta", "W", "Au", "sio2-thermal", "al2o3-amorphous", "al2o3-corundum",
             "mgo", "tio2-rutile", "cr2o3", "hfo2", "zro2", "ta2o5", "y2o3", "polyethylene", "polystyrene", "ptfe"]


def composition(material):
    """Molar mass [g/mol], mean atomic number, atoms and valence electrons of a formula unit."""
    parsed = periodictable.formula(material.formula)
    atoms = sum(parsed.atoms.values())
    number = sum(e.number * n for e, n in parsed.atoms.items()) / atoms
    return parsed.mass, number, atoms, sum(VALENCE[e.symbol] * n for e, n in parsed.atoms.items())


def tpp2m_nm(energy, density, mass, electrons, gap):
    u = electrons * density / mass
    plasmon = 28.816 * np.sqrt(u)
    alpha = (1 + energy / 1021999.8) / (1 + energy / 510998.9) ** 2
    beta = -1.0 + 9.44 / np.sqrt(plasmon**2 + gap**2) + 0.69 * density**0.1
    gamma = 0.191 / np.sqrt(density)
    c, d = 19.7 - 9.1 * u, 534 - 208 * u
    return alpha * energy / (plasmon**2 * (beta * np.log(gamma * alpha * energy) - c / energy + d / energy**2))


def s1_nm(energy, density, mass, number, atoms, gap):
    spacing = np.cbrt(1e21 * mass / (density * 6.02214076e23 * atoms))
    return (4 + 0.44 * number**0.5 + 0.104 * energy**0.872) * spacing**1.7 / (number**0.3 * (1 - 0.02 * gap))


@pytest.mark.parametrize("name", MATERIALS)
def test_tpp2m(rows, name):
    material = pellicle.material(name)
    mass, _, _, electrons = composition(material)
    own = pellicle.imfp_nm(material, ENERGIES_EV, model="TPP-2M")
    with rows("TPP-2M (written again in NumPy)") as r:
        for energy, value, expected in zip(ENERGIES_EV, own, tpp2m_nm(ENERGIES_EV, material.density_g_cm3, mass, electrons,
                                                                      material.band_gap_ev), strict=True):
            r.compare(f"{name} {energy} eV", value, expected, relative=ROUNDING)


@pytest.mark.parametrize("name", MATERIALS)
def test_s1(rows, name):
    material = pellicle.material(name)
    mass, number, atoms, _ = composition(material)
    energies = ENERGIES_EV[(ENERGIES_EV >= 100.0) & (ENERGIES_EV <= 10000.0)]
    own = pellicle.imfp_nm(material, energies, model="S1")
    with rows("S1 (written again in NumPy)") as r:
        for energy, value, expected in zip(energies, own, s1_nm(energies, material.density_g_cm3, mass, number, atoms,
                                                                material.band_gap_ev), strict=True):
            r.compare(f"{name} {energy} eV", value, expected, relative=ROUNDING)


@pytest.mark.parametrize("name", MATERIALS)
def test_valence_electrons(name):
    assert pellicle.material(name).valence_electrons == composition(pellicle.material(name))[3]
