"""Film thickness and depth profiles, with their uncertainty, from fitted photoelectron (XPS) peak areas.

Lengths are in nm, energies in eV, angles in degrees from the surface normal, densities in g/cm3; every
name says its unit. Errors derive from :class:`pellicle.Error` and are one line of place, fact and hint.

>>> import pellicle
>>> pellicle.thickness_nm(2.0, reference_ratio=0.9329, film_line_length_nm=3.448, emission_deg=34.0)
3.274...
"""

from ._core import (
    AttenuationLength,
    BudgetRow,
    ConvergenceError,
    DomainError,
    Error,
    Finding,
    InputError,
    Material,
    Run,
    Thickness,
    __version__,
    asymmetry,
    attenuation_length,
    binding_energy_ev,
    catalogue,
    cross_section_barn,
    kinetic_energy_ev,
    material,
    photon_energy_ev,
    ratio_of_film,
    thickness_from_areas,
    thickness_from_ratio,
)
from ._lengths import imfp_nm
from ._thickness import thickness, thickness_nm

__all__ = [
    "AttenuationLength",
    "BudgetRow",
    "ConvergenceError",
    "DomainError",
    "Error",
    "Finding",
    "InputError",
    "Material",
    "Run",
    "Thickness",
    "__version__",
    "asymmetry",
    "attenuation_length",
    "binding_energy_ev",
    "catalogue",
    "cross_section_barn",
    "imfp_nm",
    "kinetic_energy_ev",
    "material",
    "photon_energy_ev",
    "ratio_of_film",
    "thickness",
    "thickness_from_areas",
    "thickness_from_ratio",
    "thickness_nm",
]
