"""Two-energy thickness of a million ratios on one thread: pellicle against NumPy and SciPy.

    python tests/bench/thickness_bench.py

needs a virtual environment with pellicle, NumPy and SciPy. Both sides run in one process, take turns, and the
shortest time of each counts. Each instruction set is a process of its own, because both libraries choose theirs
when they start; NumPy is held to the same set as pellicle.
"""

import argparse
import os
import subprocess
import sys
import time

SIZE = 1_000_000
BRENTQ_SIZE = 10_000
ROUNDS = 15
TOLERANCE = 1e-13
SETS = {"AVX3": "AVX-512", "AVX2": "AVX2"}
GOALS = {"AVX3": 30.0, "AVX2": 12.0}
BRENTQ_GOAL = 1000.0

# Invented: film line 2.4 nm, substrate line 3.0 nm.
REFERENCE_RATIO, FILM_LENGTH_NM, SUBSTRATE_LENGTH_NM, EMISSION_DEG = 0.8, 2.4, 3.0, 30.0


def numpy_features():
    """What NumPy runs with here and can be told not to use."""
    try:
        from numpy._core import _multiarray_umath as core
    except ImportError:  # before NumPy 2
        from numpy.core import _multiarray_umath as core
    return [name for name in core.__cpu_dispatch__ if core.__cpu_features__.get(name)], core.__cpu_features__


def is_avx512(feature):
    return "AVX512" in feature or feature == "X86_V4"


def run_all_sets():
    dispatched, features = numpy_features()
    sets = [name for name in SETS if (name == "AVX3" and features.get("AVX512F")) or (name == "AVX2" and features.get("AVX2"))]
    if not sets:
        sys.exit("this processor has neither AVX-512 nor AVX2")
    for name in sets:
        environment = dict(os.environ, PELLICLE_THREADS="1", PELLICLE_INSTRUCTION_SET=name)
        if name == "AVX2":
            environment["NPY_DISABLE_CPU_FEATURES"] = " ".join(f for f in dispatched if is_avx512(f))
        subprocess.run([sys.executable, __file__, "--set", name], env=environment, check=True)


def plain_newton(np, ratio):
    """Newton's method for ln(1 - exp(-x)) + rho x = ln r from the root for rho = 1, as it is mostly written: an array
    for every result, steps until the largest relative change is below 1e-13, halved where they would pass zero.
    """
    rho = FILM_LENGTH_NM / SUBSTRATE_LENGTH_NM
    log_r = np.log(ratio / REFERENCE_RATIO)
    x = np.log1p(ratio / REFERENCE_RATIO)
    for _ in range(60):
        decay = np.expm1(-x)
        step = (np.log(-decay) + rho * x - log_r) / (rho - (1.0 + decay) / decay)
        x = np.where(step < x, x - step, 0.5 * x)
        if np.all(np.abs(step) <= TOLERANCE * x):
            return x * FILM_LENGTH_NM * np.cos(np.radians(EMISSION_DEG))
    raise RuntimeError("NumPy's solver did not converge")


class TunedNewton:
    """The same in ln x, made as fast as NumPy lets us: every operation in place in arrays made beforehand, and as many
    steps as are known to be enough, without looking.
    """

    def __init__(self, np, size):
        self.np = np
        self.log_r, self.x, self.decay, self.slope, self.value = (np.empty(size) for _ in range(5))

    def start(self, ratio):
        np = self.np
        r = ratio / REFERENCE_RATIO
        np.log(r, out=self.log_r)
        np.divide(self.log_r, FILM_LENGTH_NM / SUBSTRATE_LENGTH_NM, out=self.x)
        self.x += 1.0
        np.copyto(self.x, r, where=r < 1.0)

    def step(self):
        """One step; the change of ln x is in self.value."""
        np, rho = self.np, FILM_LENGTH_NM / SUBSTRATE_LENGTH_NM
        np.negative(self.x, out=self.decay)
        np.expm1(self.decay, out=self.decay)
        np.negative(self.decay, out=self.decay)  # 1 - exp(-x)
        np.log(self.decay, out=self.value)
        np.divide(1.0, self.decay, out=self.slope)
        self.slope += rho - 1.0  # rho + 1/(exp(x) - 1)
        self.slope *= self.x
        np.multiply(self.x, rho, out=self.decay)
        self.value += self.decay
        np.subtract(self.log_r, self.value, out=self.value)
        self.value /= self.slope
        np.exp(self.value, out=self.decay)
        self.x *= self.decay

    def steps_needed(self, ratio):
        self.start(ratio)
        for count in range(1, 60):
            self.step()
            if self.np.abs(self.value).max() < TOLERANCE:
                return count
        raise RuntimeError("NumPy's solver did not converge")

    def solve(self, ratio, steps):
        self.start(ratio)
        for _ in range(steps):
            self.step()
        self.x *= FILM_LENGTH_NM * self.np.cos(self.np.radians(EMISSION_DEG))
        return self.x


def brentq_thickness(np, ratios):
    from math import exp, expm1

    from scipy.optimize import brentq

    rho = FILM_LENGTH_NM / SUBSTRATE_LENGTH_NM
    unit = FILM_LENGTH_NM * np.cos(np.radians(EMISSION_DEG))
    result = np.empty(len(ratios))
    for i, ratio in enumerate(ratios):
        r = float(ratio) / REFERENCE_RATIO
        result[i] = unit * brentq(lambda x: -expm1(-x) * exp(rho * x) - r, 1e-9, 60.0, xtol=1e-14, rtol=1e-13)
    return result


def run_one_set(name):
    import numpy as np

    import pellicle

    _, features = numpy_features()
    dispatched, _ = numpy_features()
    in_use = sorted(f for f in dispatched if is_avx512(f))
    if (name == "AVX3") != bool(in_use):
        sys.exit(f"NumPy does not run with {SETS[name]}")

    rho = FILM_LENGTH_NM / SUBSTRATE_LENGTH_NM
    x = np.random.default_rng(1).uniform(0.01, 5.0, SIZE)
    ratio = REFERENCE_RATIO * -np.expm1(-x) * np.exp(rho * x)

    def ours(values):
        return pellicle.thickness_nm(
            values, reference_ratio=REFERENCE_RATIO, film_line_length_nm=FILM_LENGTH_NM,
            substrate_line_length_nm=SUBSTRATE_LENGTH_NM, emission_deg=EMISSION_DEG,
        )

    newton = TunedNewton(np, SIZE)
    steps = newton.steps_needed(ratio)
    some = ratio[:BRENTQ_SIZE]
    for other in (newton.solve(ratio, steps), plain_newton(np, ratio)):
        if not np.allclose(ours(ratio), other, rtol=1e-12, atol=0.0):
            sys.exit("pellicle and NumPy disagree")
    if not np.allclose(ours(some), brentq_thickness(np, some), rtol=1e-9, atol=0.0):
        sys.exit("pellicle and SciPy disagree")

    def seconds(action):
        begin = time.perf_counter()
        action()
        return time.perf_counter() - begin

    own = plain_time = tuned_time = float("inf")
    for _ in range(ROUNDS):
        own = min(own, seconds(lambda: ours(ratio)))
        plain_time = min(plain_time, seconds(lambda: plain_newton(np, ratio)))
        tuned_time = min(tuned_time, seconds(lambda: newton.solve(ratio, steps)))
    brentq_time = min(seconds(lambda: brentq_thickness(np, some)) for _ in range(3)) * (SIZE / BRENTQ_SIZE)

    print(f"{SIZE} ratios, one thread, {SETS[name]}; NumPy {np.__version__} {' '.join(in_use)}")
    print(f"  pellicle.thickness_nm            {own * 1e3:10.2f} ms")
    print(f"  NumPy, Newton                    {plain_time * 1e3:10.2f} ms   ratio {plain_time / own:8.1f}"
          f"   goal >= {GOALS[name]:g}")
    print(f"  NumPy, Newton, tuned, {steps} steps    {tuned_time * 1e3:10.2f} ms   ratio {tuned_time / own:8.1f}")
    print(f"  SciPy, brentq loop (from {BRENTQ_SIZE})  {brentq_time * 1e3:10.0f} ms   ratio {brentq_time / own:8.0f}"
          f"   goal >= {BRENTQ_GOAL:g}", flush=True)


def main():
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--set", choices=SETS, help="measure this instruction set in this process")
    arguments = parser.parse_args()
    if arguments.set:
        run_one_set(arguments.set)
    else:
        run_all_sets()


if __name__ == "__main__":
    main()
