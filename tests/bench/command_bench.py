"""Times of the command: start to a GUM result, start to a Monte Carlo result, a table of a million rows.

    python tests/bench/command_bench.py PELLICLE

The shortest of several runs counts.
"""

import pathlib
import random
import subprocess
import sys
import tempfile
import time

OPTIONS = ["thickness", "--film", "SiO2", "--substrate", "Si", "--line", "Si 2p", "--source", "Al Ka", "--emission-deg", "34",
           "--emission-deg-sd", "1", "--film-area", "20000", "--substrate-area", "10000", "--area-unit", "counts",
           "--reference-ratio", "0.9329", "--reference-ratio-sd", "0.047", "--length-nm", "3.448", "--length-nm-sd", "0.345"]
ROWS = 1_000_000


def shortest_ms(command, rounds, folder=None):
    best = float("inf")
    for _ in range(rounds):
        begin = time.perf_counter()
        subprocess.run(command, cwd=folder, check=True, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
        best = min(best, time.perf_counter() - begin)
    return best * 1e3


def show(what, milliseconds, goal):
    print(f"  {what:<42} {milliseconds:8.0f} ms   goal <= {goal} ms", flush=True)


def main():
    command = str(pathlib.Path(sys.argv[1]).resolve())
    print("The command")
    show("start to a GUM result", shortest_ms([command, *OPTIONS, "--interval", "gum"], 15), 30)
    show("start to a Monte Carlo result, 1e6 draws", shortest_ms([command, *OPTIONS], 15), 150)
    with tempfile.TemporaryDirectory() as folder:
        path = pathlib.Path(folder)
        subprocess.run([command, "new", "map.toml", "--quiet"], cwd=folder, check=True)
        draw = random.Random(1)
        with (path / "map.csv").open("w") as table:  # invented
            table.write("spot,emission_deg,line,area,area_sd\n")
            for spot in range(ROWS // 2):
                table.write(f"s{spot},34,Al 2p oxide,{draw.gauss(20000, 100):.1f},100\ns{spot},34,Al 2p metal,{draw.gauss(10000, 100):.1f},90\n")
        for output in ([], ["--csv"]):
            show(f"a table of {ROWS} rows, {(output or ['text'])[0]}", shortest_ms([command, "thickness", "map.toml", *output], 3, folder), 3000)


if __name__ == "__main__":
    main()
