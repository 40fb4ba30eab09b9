#!/usr/bin/env python3
"""Regenerate the tables of reference/data that come from open packages.

Tables and where their numbers come from
  elements.csv         atomic weights from `periodictable`; names, valence
                       electrons and their status are kept by hand in the CSV
                       and are preserved.
  core_levels.csv      binding energies from `xraydb`, electrons per subshell
                       from `xraylib`, plus the hand-made rows in
                       SOLID_STATE and the exceptions below.
  photoionisation.csv  subshell cross sections from `xraylib`. That library
                       returns barn per ELECTRON; the table holds barn per
                       ATOM for the full subshell. The rules in `refusal`
                       leave out what its tables do not give reliably.

Packages used for the committed tables: periodictable 2.1.0, xraydb 4.5.8,
xraylib 4.3.0 (install them from the Python package index).
"""

import argparse
import csv
import io
import math
import pathlib
import sys

import periodictable
import xraydb
import xraylib

DATA = pathlib.Path(__file__).resolve().parent / "data"
FIRST_Z, LAST_Z = 3, 92

# Laboratory energies, eV, in the order of the columns of photoionisation.csv.
SOURCES = {
    "Mg Ka": 1253.6,
    "Al Ka": 1486.6,
    "Ag La": 2984.3,
    "Cr Ka": 5414.8,
    "Ga Ka": 9251.7,
}

LEVELS = {
    "K": "1s",
    "L1": "2s", "L2": "2p1/2", "L3": "2p3/2",
    "M1": "3s", "M2": "3p1/2", "M3": "3p3/2", "M4": "3d3/2", "M5": "3d5/2",
    "N1": "4s", "N2": "4p1/2", "N3": "4p3/2", "N4": "4d3/2", "N5": "4d5/2",
    "N6": "4f5/2", "N7": "4f7/2",
    "O1": "5s", "O2": "5p1/2", "O3": "5p3/2", "O4": "5d3/2", "O5": "5d5/2",
    "P1": "6s", "P2": "6p1/2", "P3": "6p3/2",
}
SHELLS = {level: shell for shell, level in LEVELS.items()}

# The compilation refers these to the vacuum level of the free atom.
RARE_GASES = {"Ne", "Ar", "Kr", "Xe", "Rn"}

# N, O, F and Cl stand in the compilation as gases. Their XPS lines are
# replaced by values for solids (common practice, no source).
SOLID_STATE = {
    ("N", "1s"): 398.0,
    ("O", "1s"): 531.0,
    ("F", "1s"): 685.0,
    ("Cl", "2p1/2"): 200.6,
    ("Cl", "2p3/2"): 199.0,
}
# Valence-like 2s and 2p of the gases N2, O2, F2: no solid-state value to hand.
DROPPED = {(s, l) for s in ("N", "O", "F") for l in ("2s", "2p1/2", "2p3/2")}
NOTES = {
    ("Cl", "1s"): "kept from the compilation, which refers chlorine to the gas; its 2p lies 1.0 to 1.4 eV above the solid-state value",
    ("Cl", "2s"): "kept from the compilation, which refers chlorine to the gas; its 2p lies 1.0 to 1.4 eV above the solid-state value",
    ("Na", "2p1/2"): "the compilation gives the doublet in inverted order",
    ("Na", "2p3/2"): "the compilation gives the doublet in inverted order",
    ("Co", "3p1/2"): "the compilation gives the doublet in inverted order",
    ("Co", "3p3/2"): "the compilation gives the doublet in inverted order",
    ("Hf", "4f5/2"): "shallow but core-like: not counted as an outer level",
    ("Hf", "4f7/2"): "shallow but core-like: not counted as an outer level",
}

# At and below this energy (eV) the compilation holds rounded filler values.
OUTER_LIMIT = 16.0
CORE_LIKE = {("Hf", "4f5/2"), ("Hf", "4f7/2")}

ENERGY_ABOVE = 2000.0        # eV: where outer levels are no longer reliable
KINETIC_LIMIT = 30.0         # eV above threshold
RARE_EARTH_LIMIT = 150.0     # eV above threshold, 3d of La to Lu
LIGHT_LIMIT = {3: 2000.0, 4: 5000.0, 5: 9000.0, 6: 9000.0}   # Z: eV
PARABOLA = {("B", "1s"), ("C", "1s")}                        # at Ga Ka
PARABOLA_NOTE = "Ga Ka: log-log parabola through 1486.6, 2984.3, 5414.8 eV"


def symbol(z):
    return periodictable.elements[z].symbol


def occupancy(z, shell):
    """Electrons in a subshell of the free atom; 0 when it is empty."""
    try:
        return xraylib.ElectronConfig(z, getattr(xraylib, shell + "_SHELL"))
    except ValueError:
        return 0.0


def number(value, digits):
    return f"{value:.{digits}g}" if value < 10**digits else f"{value:.0f}"


def elements():
    """Existing rows with the atomic weights replaced."""
    rows = read("elements.csv")
    for row in rows:
        row["atomic_weight_g_mol"] = repr(float(periodictable.elements[int(row["z"])].mass))
    return rows


def core_levels():
    rows = []
    for z in range(FIRST_Z, LAST_Z + 1):
        name = symbol(z)
        edges = xraydb.xray_edges(name)
        for shell, level in LEVELS.items():
            electrons = occupancy(z, shell)
            key = (name, level)
            if shell not in edges or electrons == 0 or key in DROPPED:
                continue
            tabulated = edges[shell].energy
            energy = SOLID_STATE.get(key, tabulated)
            solid = key in SOLID_STATE
            outer = energy <= OUTER_LIMIT and key not in CORE_LIKE
            note = NOTES.get(key, "")
            if solid:
                note = f"solid-state value in place of the gas-phase {tabulated:g} eV of the compilation"
            elif outer:
                note = "outer level: rounded or filler value"
            gas = name in RARE_GASES or (name == "Cl" and not solid)
            rows.append({
                "z": str(z), "symbol": name, "level": level,
                "binding_energy_ev": f"{energy:g}",
                "occupancy": f"{electrons:g}",
                "reference_level": "Fermi level" if solid else "vacuum level" if gas else "Fermi level or valence-band top",
                "outer": "1" if outer else "0",
                "source": "common-practice" if solid else "xraydb;elam2002",
                "mark": "common practice, no source" if solid else "library",
                "note": note,
            })
    return rows


def refusal(z, level, binding, outer, photon):
    """Why the library value is not used, in plain words, or an empty string."""
    kinetic = photon - binding
    if kinetic <= 0:
        return "photon energy below the binding energy"
    if kinetic < KINETIC_LIMIT:
        return "kinetic energy below 30 eV"
    if 57 <= z <= 71 and level.startswith("3d") and kinetic < RARE_EARTH_LIMIT:
        return "rare-earth 3d within 150 eV of threshold"
    if photon > LIGHT_LIMIT.get(z, math.inf):
        return "table extrapolates for light elements at high photon energy"
    if outer and photon > ENERGY_ABOVE:
        return "outer level above 2 keV"
    return ""


def library_cross_section(z, shell, photon):
    """Barn per atom for the full subshell (the library counts per electron)."""
    per_electron = xraylib.CSb_Photo_Partial(z, getattr(xraylib, shell + "_SHELL"), photon / 1000.0)
    return per_electron * occupancy(z, shell)


def parabola(z, shell, photon):
    """Parabola in log-log through the three middle laboratory energies."""
    nodes = [math.log(SOURCES[s]) for s in ("Al Ka", "Ag La", "Cr Ka")]
    values = [math.log(library_cross_section(z, shell, math.exp(x))) for x in nodes]
    x = math.log(photon)
    total = 0.0
    for i, value in enumerate(values):
        others = [nodes[j] for j in range(3) if j != i]
        total += value * math.prod((x - o) / (nodes[i] - o) for o in others)
    return math.exp(total)


def photoionisation():
    rows = []
    for core in core_levels():
        z, level, shell = int(core["z"]), core["level"], SHELLS[core["level"]]
        cells, reasons = {}, {}
        for source, photon in SOURCES.items():
            column = source.lower().replace(" ", "_") + "_barn"
            cells[column] = ""
            reason = refusal(z, level, float(core["binding_energy_ev"]), core["outer"] == "1", photon)
            if reason and (core["symbol"], level) in PARABOLA and source == "Ga Ka":
                cells[column] = number(parabola(z, shell, photon), 3)
                continue
            if not reason:
                try:
                    cells[column] = number(library_cross_section(z, shell, photon), 5)
                    continue
                except ValueError:
                    reason = "no value in the table"
            reasons.setdefault(reason, []).append(source)
        extrapolated = (core["symbol"], level) in PARABOLA
        rows.append({
            "z": core["z"], "symbol": core["symbol"], "level": level, **cells,
            "refused": "; ".join(f"{', '.join(s)}: {r}" for r, s in reasons.items()),
            "source": "xraylib",
            "note": PARABOLA_NOTE if extrapolated else "",
        })
    return rows


TABLES = {
    "elements.csv": elements,
    "core_levels.csv": core_levels,
    "photoionisation.csv": photoionisation,
}


def read(name):
    with open(DATA / name, newline="", encoding="utf-8") as handle:
        return list(csv.DictReader(handle))


def to_text(rows):
    buffer = io.StringIO()
    writer = csv.DictWriter(buffer, fieldnames=list(rows[0]), lineterminator="\n")
    writer.writeheader()
    writer.writerows(rows)
    return buffer.getvalue()


def main(arguments=None):
    parser = argparse.ArgumentParser(
        description="Regenerate elements.csv, core_levels.csv and photoionisation.csv from open packages.",
        epilog="examples:\n"
               "  python reference/generate_tables.py --check\n"
               "  python reference/generate_tables.py --write\n"
               "  python reference/generate_tables.py --write --table core_levels.csv\n",
        formatter_class=argparse.RawDescriptionHelpFormatter)
    action = parser.add_mutually_exclusive_group(required=True)
    action.add_argument("--check", action="store_true", help="compare with the committed tables; exit 1 if one differs")
    action.add_argument("--write", action="store_true", help="rewrite the tables")
    parser.add_argument("--table", choices=sorted(TABLES), action="append", help="only this table; may be repeated")
    options = parser.parse_args(arguments)

    differs = False
    for name in options.table or TABLES:
        text = to_text(TABLES[name]())
        path = DATA / name
        if options.write:
            path.write_text(text, encoding="utf-8", newline="\n")
            print(f"{name}: written, {text.count(chr(10)) - 1} rows")
            continue
        old = path.read_text(encoding="utf-8").splitlines() if path.exists() else []
        new = text.splitlines()
        if old == new:
            print(f"{name}: identical, {len(new) - 1} rows")
            continue
        differs = True
        print(f"{name}: differs ({len(old)} lines committed, {len(new)} generated)")
        for number_, (a, b) in enumerate(zip(old, new), start=1):
            if a != b:
                print(f"  first difference, line {number_}:\n  - {a}\n  + {b}")
                break
    return 1 if differs else 0


if __name__ == "__main__":
    sys.exit(main())
