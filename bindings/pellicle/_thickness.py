"""Thickness in Python's terms: broadcasting, and run files to plain dictionaries."""

import json

import numpy as np

from . import _core
from ._arrays import as_real, broadcast, scalar_or_array


def thickness_nm(ratio, *, reference_ratio, film_line_length_nm, substrate_line_length_nm=None, emission_deg=0.0, status=False):
    """Film thickness [nm] from the ratio of film area to substrate area.

    All arguments broadcast. For a scalar or an array without uncertainty; with it see
    :func:`thickness_from_ratio`.

    Parameters
    ----------
    ratio : float or array
        Film area over substrate area, >= 0.
    reference_ratio : float or array
        The same for an infinitely thick film and the bare substrate, > 0.
    film_line_length_nm, substrate_line_length_nm : float or array
        Attenuation lengths in the film of the film's and of the substrate's line [nm], > 0.
        None for the second: the same line, hence the same length.
    emission_deg : float or array
        Emission angle from the surface normal, 0 to below 90 [deg].
    status : bool
        False: an element without an answer raises. True: return (values, codes); such an element is NaN
        with a code other than 0 (1 invalid input, 3 no solution, 4 not converged).

    Returns
    -------
    float, or array of the broadcast shape.

    Raises
    ------
    InputError, DomainError, ConvergenceError
        Naming the first element that failed.

    References
    ----------
    Hill et al., Chem. Phys. Lett. 44 (1976) 225.

    Examples
    --------
    >>> import pellicle
    >>> pellicle.thickness_nm([1.0, 2.0], reference_ratio=0.9329, film_line_length_nm=3.448).round(3)
    array([2.512, 3.95 ])
    """
    arrays = {
        "ratio": as_real("ratio", ratio),
        "reference_ratio": as_real("reference_ratio", reference_ratio),
        "film_line_length_nm": as_real("film_line_length_nm", film_line_length_nm),
        "emission_deg": as_real("emission_deg", emission_deg),
    }
    if substrate_line_length_nm is not None:
        arrays["substrate_line_length_nm"] = as_real("substrate_line_length_nm", substrate_line_length_nm)
    shape = broadcast(**arrays)
    # One-element inputs stand for all elements in the core; only true arrays are spread out.
    spread = {n: a if a.size == 1 else np.ascontiguousarray(np.broadcast_to(a, shape)) for n, a in arrays.items()}
    result = _core._thickness_arrays(
        spread["ratio"],
        spread["reference_ratio"],
        spread["film_line_length_nm"],
        spread.get("substrate_line_length_nm"),
        spread["emission_deg"],
        shape,
        status,
    )
    return scalar_or_array(result, shape, status)


def thickness(run):
    """Thicknesses of a run, as the dictionary that ``pellicle thickness --json`` prints.

    Parameters
    ----------
    run : Run, str or path
        A run, or the name of a run file.

    Returns
    -------
    dict
        Schema "pellicle.result/1": ``results`` (one per spot and angle, with ``thickness_nm``, ``budget``,
        ``findings``), ``summary``, ``inputs`` and their digest.

    Raises
    ------
    InputError
        With file, line, key, what was wrong and what was expected.
    DomainError
        No attenuation length can be predicted.

    Examples
    --------
    >>> import pellicle
    >>> result = pellicle.thickness("coupon.toml")  # doctest: +SKIP
    >>> result["results"][0]["thickness_nm"]["value"]  # doctest: +SKIP
    3.37
    """
    if not isinstance(run, _core.Run):
        run = _core.Run.read(run)
    return json.loads(_core._thickness_json(run))
