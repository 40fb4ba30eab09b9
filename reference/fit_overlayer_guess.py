"""Coefficients of the first guess in lib/src/estimate/overlayer_kernel.cpp (GuessTerms).

    python reference/fit_overlayer_guess.py

needs NumPy and SciPy and takes about a minute. The root x of (1 - exp(-x)) exp(rho x) = r is guessed as

    x0 = v (1 + n1 v + ... + n4 v^4)/(1 + d1 v + ... + d4 v^4),  v = ln(1 + r),

every n and d a quartic in tau = (rho - 1)/(rho + 1). The error that counts is what the step after it starts from,
|F/T|, which is (rho + 1/(exp(x) - 1)) dx to first order. It is held below the limit of that step, by linear
programming: a rational function is linear in its coefficients once its denominator is taken from the round before.
"""

import numpy as np
from numpy.polynomial import chebyshev, polynomial
from scipy.optimize import linprog

DEGREE = 4  # in v
ORDER = 4  # in tau
LOWEST, HIGHEST = 0.2, 5.0  # rho
TIGHT_LOWEST, TIGHT_HIGHEST, LOOSER = 0.35, 3.0, 6.0  # between these one step is enough; outside, up to LOOSER times that
LARGEST_LOG_R = 69.3  # ln 2^100
ROUNDS = 45


def tau(rho):
    return (rho - 1.0) / (rho + 1.0)


def limit(rho):
    """StepTerms' limit in overlayer_kernel.cpp, and what is allowed where more steps follow."""
    allowed = min(5e-3, 2.4e-4 + 6.8e-3 * rho)
    if TIGHT_LOWEST <= rho <= TIGHT_HIGHEST:
        return allowed
    beyond = abs(np.log(rho / (TIGHT_LOWEST if rho < TIGHT_LOWEST else TIGHT_HIGHEST)))
    return allowed * min(LOOSER, 1.0 + (LOOSER - 1.0) * beyond / np.log(1.3))


def samples():
    """Columns v, tau, x/v and the weight that turns an error of x/v into parts of the limit."""
    points = 3 * ORDER + 8
    middle, half = 0.5 * (tau(LOWEST) + tau(HIGHEST)), 0.5 * (tau(HIGHEST) - tau(LOWEST))
    nodes = middle + half * np.cos(np.pi * (np.arange(points) + 0.5) / points)[::-1]
    columns = []
    for t in np.concatenate([[tau(LOWEST)], nodes, [tau(HIGHEST)]]):
        rho = (1.0 + t) / (1.0 - t)
        x = np.concatenate([np.geomspace(1e-4, 0.05, 8), np.linspace(0.06, 8.0, 80), np.geomspace(8.1, 400.0, 40)])
        log_r = np.log(-np.expm1(-x)) + rho * x
        x, log_r = x[log_r < LARGEST_LOG_R], log_r[log_r < LARGEST_LOG_R]
        v = np.log1p(np.exp(log_r))
        columns.append(np.stack([v, np.full_like(v, t), x / v, (rho + 1.0 / np.expm1(x)) * v / limit(rho)]))
    return np.concatenate(columns, axis=1)


def scaled(t):
    return (2.0 * t - tau(LOWEST) - tau(HIGHEST)) / (tau(HIGHEST) - tau(LOWEST))


def fit():
    v, t, target, weight = samples()
    basis = chebyshev.chebvander(scaled(t), ORDER)
    everywhere = chebyshev.chebvander(np.linspace(-1.0, 1.0, 6 * ORDER + 5), ORDER)
    terms = DEGREE * (ORDER + 1)
    powers = np.concatenate([basis * (v**i)[:, None] for i in range(1, DEGREE + 1)], axis=1)
    # No coefficient may be negative for any tau, so that the denominator has no zero.
    positive = np.kron(np.eye(2 * DEGREE), -everywhere)
    denominator = (1.0 + v) ** DEGREE
    best, chosen = np.inf, None
    for _ in range(ROUNDS):
        scale = weight / denominator
        matrix = np.concatenate([powers, -target[:, None] * powers], axis=1) * scale[:, None]
        size = np.abs(matrix).max(axis=0)
        matrix /= size
        right = -(1.0 - target) * scale
        ones = np.ones((len(v), 1))
        bounds = positive / size
        bounds /= np.abs(bounds).max(axis=1)[:, None]
        result = linprog(
            np.append(np.zeros(2 * terms), 1.0),
            A_ub=np.vstack([np.hstack([matrix, -ones]), np.hstack([-matrix, -ones]), np.hstack([bounds, np.zeros((len(bounds), 1))])]),
            b_ub=np.concatenate([right, -right, np.zeros(len(bounds))]),
            bounds=[(None, None)] * (2 * terms) + [(0.0, None)],
            method="highs-ipm",
        )
        coefficients = (result.x[:-1] / size).reshape(2, DEGREE, ORDER + 1)
        numerator = 1.0 + powers @ coefficients[0].ravel()
        next_denominator = 1.0 + powers @ coefficients[1].ravel()
        error = np.abs((numerator / next_denominator - target) * weight).max()
        if error < best:
            best, chosen = error, coefficients
        if np.allclose(denominator, next_denominator, rtol=1e-3):
            break
        denominator = next_denominator
    return best, chosen


def in_powers_of_tau(series):
    """A Chebyshev series of the scaled tau as a polynomial of tau itself."""
    width = tau(HIGHEST) - tau(LOWEST)
    inner = np.array([-(tau(LOWEST) + tau(HIGHEST)) / width, 2.0 / width])
    sum_of_powers = np.zeros(1)
    for c in chebyshev.cheb2poly(series)[::-1]:
        sum_of_powers = polynomial.polyadd(polynomial.polymul(sum_of_powers, inner), [c])
    return sum_of_powers[: ORDER + 1]


def main():
    worst, coefficients = fit()
    print(f"// largest error: {worst:.3f} of the limit")
    for letter, rows in zip("nd", coefficients):
        for i, row in enumerate(rows, start=1):
            print(f"{letter}{i} = Quartic(t, " + ", ".join(f"{c:.7e}f" for c in in_powers_of_tau(row)) + ");")


if __name__ == "__main__":
    main()
