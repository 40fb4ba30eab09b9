"""Mean free paths in Python's terms."""

import numpy as np

from . import _core
from ._arrays import as_real, scalar_or_array


def imfp_nm(material, energy_ev, *, model="TPP-2M", status=False):
    """Inelastic mean free path [nm].

    Parameters
    ----------
    material : str or Material
        Catalogue id, formula, or Material.
    energy_ev : float or array
        Kinetic energy [eV], any shape.
    model : str
        "TPP-2M" (relativistic, 50 eV to 200 keV) or "S1" (100 eV to 10 keV).
    status : bool
        False: an element that fails raises. True: return (values, codes); a failed element is NaN with a
        code other than 0 (1 invalid input, 2 out of range, 3 no solution).

    Returns
    -------
    float, or array of the shape of energy_ev.

    Raises
    ------
    InputError
        Unknown material or model, or an energy that is not a number > 0.
    DomainError
        The model refuses this material or energy; the message says why.

    References
    ----------
    Shinotsuka et al., Surf. Interface Anal. 47 (2015) 871; Seah, Surf. Interface Anal. 44 (2012) 497.

    Examples
    --------
    >>> import pellicle
    >>> round(pellicle.imfp_nm("SiO2", 1387.1), 3)
    3.889
    >>> pellicle.imfp_nm("SiO2", [500.0, 1000.0], model="S1").shape
    (2,)
    """
    energies = as_real("energy_ev", energy_ev)
    values, codes = _core._imfp_arrays(material, np.asarray(energies, order="C"), model)
    if not status and codes.any():
        # The scalar function knows the reason in words.
        _core._imfp_scalar(material, float(energies.ravel()[int(np.flatnonzero(codes.ravel())[0])]), model)
    return scalar_or_array((values, codes) if status else values, energies.shape, status)
