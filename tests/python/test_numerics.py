"""Roots, integrals, quantiles and derivatives against SciPy and NumPy.

The film and the substrate signal are integrals over depth; the thickness is the root of their ratio. Both are found
here by general numerical methods that share nothing with the closed forms and the solver of the library.
"""

import itertools
import math

import numpy as np
import pytest
from scipy import integrate, optimize, stats

import pellicle

# R/R0 = [1 - exp(-x)] exp(rho x), x = t/(L_f cos theta), rho = L_f/L_s [hill1976].
REDUCED_RATIOS = np.logspace(-6, 6, 25)
LENGTH_RATIOS = [0.2, 0.5, 0.75, 0.9, 1.0, 1.1, 1.25, 1.5, 2.0, 5.0]
ANGLES_DEG = [0.0, 34.0, 60.0, 85.0]

SOLVER = 1e-12      # brentq stops at four units in the last place; its equation loses three digits near x = 0
QUADRATURE = 1e-9   # asked of quad


def root_by_bisection(reduced_ratio, length_ratio):
    """x by brentq on ln x, so that thin films are found to the same relative error as thick ones."""
    def excess(log_x):
        x = math.exp(log_x)
        return math.log(-math.expm1(-x)) + length_ratio * x - math.log(reduced_ratio)

    return math.exp(optimize.brentq(excess, -40.0, 10.0, xtol=1e-15, rtol=4 * np.finfo(float).eps))


@pytest.mark.parametrize("length_ratio", LENGTH_RATIOS)
def test_thickness_is_the_root_that_brentq_finds(rows, length_ratio):
    film_length, reference = 3.1, 0.8
    with rows("thickness as a root (SciPy brentq)") as r:
        for reduced, angle in itertools.product(REDUCED_RATIOS, ANGLES_DEG):
            own = pellicle.thickness_nm(reduced * reference, reference_ratio=reference, film_line_length_nm=film_length,
                                        substrate_line_length_nm=film_length / length_ratio, emission_deg=angle)
            # The ratio of the two lengths is rounded once; take the rounded one.
            rho = film_length / (film_length / length_ratio)
            expected = root_by_bisection(reduced * reference / reference, rho) * film_length * math.cos(math.radians(angle))
            r.compare(f"R/R0 {reduced:g}, rho {length_ratio}, {angle} deg", own, expected, relative=SOLVER)


def signals_by_quadrature(thickness, film_length, substrate_length, angle_deg):
    """Film and substrate signal per signal of an infinite layer: depth by depth, exp(-z/(L cos theta))."""
    cosine = math.cos(math.radians(angle_deg))

    def per_depth(z, length):
        return math.exp(-z / (length * cosine)) / (length * cosine)

    film, _ = integrate.quad(per_depth, 0.0, thickness, args=(film_length,), epsabs=0.0, epsrel=QUADRATURE)
    substrate, _ = integrate.quad(per_depth, thickness, np.inf, args=(substrate_length,), epsabs=0.0, epsrel=QUADRATURE)
    return film, substrate


@pytest.mark.parametrize("film_length, substrate_length", [(3.0, None), (3.0, 2.4), (2.0, 3.4)])
def test_forward_model_is_an_integral_over_depth(rows, film_length, substrate_length):
    reference = 0.7
    with rows("film over substrate signal (SciPy quad)") as r:
        for thickness, angle in itertools.product([0.05, 0.3, 1.0, 2.5, 5.0, 9.0], [0.0, 34.0, 60.0]):
            film, substrate = signals_by_quadrature(thickness, film_length, substrate_length or film_length, angle)
            lengths = {"reference_ratio": reference, "film_line_length_nm": film_length,
                       "substrate_line_length_nm": substrate_length, "emission_deg": angle}
            what = f"{thickness} nm, {angle} deg"
            r.compare(what, pellicle.ratio_of_film(thickness, **lengths), reference * film / substrate, relative=10 * QUADRATURE)
            r.compare(what, pellicle.thickness_nm(reference * film / substrate, **lengths), thickness, relative=10 * QUADRATURE)


def test_a_95_percent_interval_spans_the_normal_quantiles(rows):
    result = pellicle.thickness_from_ratio(ratio=(2.0, 0.03), reference_ratio=(0.9329, 0.02), film_line_length_nm=(3.448, 0.05),
                                           emission_deg=(34.0, 0.5))
    low, high = stats.norm.interval(0.95, loc=result.value_nm, scale=result.standard_uncertainty_nm)
    with rows("interval (SciPy norm)") as r:
        r.compare("low", result.low95_nm, low, relative=1e-13)
        r.compare("high", result.high95_nm, high, relative=1e-13)
        r.compare("coverage factor", (result.high95_nm - result.value_nm) / result.standard_uncertainty_nm,
                  stats.norm.ppf(0.975), relative=1e-12)


def test_the_lower_end_of_an_interval_is_never_below_zero():
    result = pellicle.thickness_from_ratio(ratio=(0.01, 0.02), reference_ratio=(0.9329, 0.02), film_line_length_nm=(3.448, 0.05))
    assert result.low95_nm == 0.0
    assert "interval_reaches_zero" in {f.code for f in result.findings}


SENSITIVE = {"ratio": 2.0, "reference_ratio": 0.72, "film_line_length_nm": 2.8, "substrate_line_length_nm": 2.3,
             "emission_deg": 40.0}


@pytest.mark.parametrize("ratio", [0.05, 0.7, 2.0, 30.0])
@pytest.mark.parametrize("equal_lengths", [True, False])
def test_each_contribution_is_a_derivative_times_an_uncertainty(rows, ratio, equal_lengths):
    values = {**SENSITIVE, "ratio": ratio}
    if equal_lengths:
        del values["substrate_line_length_nm"]
    uncertainties = {name: 0.01 * value for name, value in values.items()}
    result = pellicle.thickness_from_ratio(**{name: (value, uncertainties[name]) for name, value in values.items()})
    parts = {row.name: row for row in result.budget}

    def thickness(point):
        return pellicle.thickness_nm(point[0], **dict(zip(list(values)[1:], point[1:], strict=True)))

    slopes = optimize.approx_fprime(list(values.values()), thickness, [1e-6 * v for v in values.values()])
    with rows("sensitivities (SciPy finite differences)") as r:
        for name, slope in zip(values, slopes, strict=True):
            own = parts.get(name) or parts["length_nm"]
            r.compare(name, own.contribution_nm, abs(slope) * uncertainties[name], relative=2e-5)


@pytest.mark.parametrize("correlation", [-1.0, -0.5, 0.0, 0.9, 1.0])
def test_correlated_lengths_combine_as_the_guide_says(correlation):
    # u^2 = sum_i sum_j c_i u_i r_ij c_j u_j, JCGM 100:2008 eq. (16) [jcgm100], with a full matrix.
    values = {name: (value, 0.05 * value) for name, value in SENSITIVE.items()}
    result = pellicle.thickness_from_ratio(**values, length_correlation=correlation)
    names = list(values)
    parts = {row.name: row.contribution_nm for row in result.budget}
    x = result.reduced_thickness
    rho = SENSITIVE["film_line_length_nm"] / SENSITIVE["substrate_line_length_nm"]
    amplification = 1.0 / (rho + 1.0 / math.expm1(x))
    # dt/dLf has the sign of 1 - rho * amplification, dt/dLs is positive: from d ln(R/R0) = 0 along the root.
    signs = {name: 1.0 for name in names} | {"film_line_length_nm": math.copysign(1.0, 1.0 - rho * amplification)}
    terms = np.array([signs[name] * parts[name] for name in names])
    matrix = np.eye(len(names))
    film, substrate = names.index("film_line_length_nm"), names.index("substrate_line_length_nm")
    matrix[film, substrate] = matrix[substrate, film] = correlation
    assert result.standard_uncertainty_nm == pytest.approx(math.sqrt(terms @ matrix @ terms), rel=1e-12)
    assert sum(row.share for row in result.budget) == pytest.approx(1.0, abs=1e-12)


def test_first_order_uncertainty_agrees_with_random_draws():
    # Small uncertainties, so that the model is linear over their spread; 200 000 draws fix the deviation to 0.2 %.
    random = np.random.default_rng(11)
    values = {name: (value, 0.01 * value) for name, value in SENSITIVE.items()}
    draws = {name: random.normal(*pair, size=200_000) for name, pair in values.items()}
    spread = pellicle.thickness_nm(draws.pop("ratio"), **draws).std(ddof=1)
    assert pellicle.thickness_from_ratio(**values).standard_uncertainty_nm == pytest.approx(spread, rel=0.01)
