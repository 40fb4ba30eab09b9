"""Monte Carlo of a thickness, a million draws: pellicle against NumPy.

    python tests/bench/monte_carlo_bench.py

needs a virtual environment with pellicle and NumPy. Both sides run in one process, take turns, and the shortest time
of each counts. pellicle uses all processors, NumPy one: its random numbers and ufuncs know no more.
"""

import pathlib
import tempfile
import time

import numpy as np

import pellicle

DRAWS = 1_000_000
ROUNDS = 15
GOAL = 10.0

# The measurement of reference/published (SiO2 on Si, recalled constants), uncertainties invented.
FILM, SUBSTRATE = (20000.0, 141.4), (10000.0, 100.0)
LENGTH_NM, REFERENCE, EMISSION_DEG = (3.448, 0.3448), (0.9329, 0.0466), (34.0, 1.0)

RUN = f"""
[instrument]
source = "Al Ka"
emission_deg = {EMISSION_DEG[0]}
emission_sd_deg = {EMISSION_DEG[1]}
[sample]
substrate = "Si"
[[sample.layer]]
name = "film"
material = "SiO2"
[[line]]
label = "oxide"
level = "Si 2p"
from = "film"
length_nm = {{ film = {{ value = {LENGTH_NM[0]}, sd = {LENGTH_NM[1]} }} }}
[[line]]
label = "metal"
level = "Si 2p"
from = "substrate"
[[reference]]
film = "oxide"
substrate = "metal"
ratio = {{ value = {REFERENCE[0]}, sd = {REFERENCE[1]} }}
[thickness]
interval = "monte-carlo"
draws = {DRAWS}
[data]
areas = "areas.csv"
"""
AREAS = f"line,area,area_sd\noxide,{FILM[0]},{FILM[1]}\nmetal,{SUBSTRATE[0]},{SUBSTRATE[1]}\n"


def lognormal(random, quantity):
    value, sd = quantity
    variance = np.log1p((sd / value) ** 2)
    return random.lognormal(np.log(value) - 0.5 * variance, np.sqrt(variance), DRAWS)


def numpy_monte_carlo(seed):
    random = np.random.default_rng(seed)
    ratio = random.normal(*FILM, DRAWS) / random.normal(*SUBSTRATE, DRAWS)
    cosine = np.cos(np.radians(random.normal(*EMISSION_DEG, DRAWS)))
    thickness = lognormal(random, LENGTH_NM) * cosine * np.log1p(ratio / lognormal(random, REFERENCE))
    return thickness.mean(), thickness.std(ddof=1), *np.quantile(thickness, [0.025, 0.975])


def seconds(action):
    begin = time.perf_counter()
    action()
    return time.perf_counter() - begin


def main():
    with tempfile.TemporaryDirectory() as folder:
        path = pathlib.Path(folder)
        (path / "run.toml").write_text(RUN)
        (path / "areas.csv").write_text(AREAS)
        run = pellicle.Run.read(path / "run.toml")
    ours = pellicle.thickness(run)["results"][0]["monte_carlo_nm"]
    theirs = numpy_monte_carlo(1)
    if not np.allclose([ours[k] for k in ("mean", "sd", "low95", "high95")], theirs, rtol=2e-3):
        raise SystemExit(f"pellicle {ours} and NumPy {theirs} disagree")
    own = numpy_time = float("inf")
    for seed in range(ROUNDS):
        own = min(own, seconds(lambda: pellicle.thickness(run)))
        numpy_time = min(numpy_time, seconds(lambda seed=seed: numpy_monte_carlo(seed)))
    print(f"{DRAWS} draws of a thickness with 5 uncertain inputs: mean, sd, 95 % interval; NumPy {np.__version__}")
    print(f"  pellicle.thickness (JSON and all)  {own * 1e3:8.1f} ms")
    print(f"  NumPy, vectorised                  {numpy_time * 1e3:8.1f} ms   ratio {numpy_time / own:6.1f}   goal >= {GOAL:g}")


if __name__ == "__main__":
    main()
