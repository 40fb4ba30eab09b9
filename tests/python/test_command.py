"""The command and the package are two doors to one calculation: the same numbers, the same messages."""

import csv
import io
import json

import numpy as np
import pytest

import pellicle

SILICA = ["thickness", "--film", "SiO2", "--substrate", "Si", "--line", "Si 2p", "--source", "Al Ka", "--emission-deg", "34",
          "--film-area", "20000", "--substrate-area", "10000", "--reference-ratio", "0.9329", "--length-nm", "3.448"]

# A run that uses what the demo does not: two kinetic energies, reference areas, a given length, take-off angles, counts
# per second, a spot that fails. All numbers are invented.
TWO_ENERGIES = """
title = "Two energies (invented)"

[instrument]
photon_energy_ev = 1253.6
takeoff_deg = 60.0

[sample]
substrate = "Ta"

[[sample.layer]]
name = "contamination"
material = "hydrocarbon"

[[sample.layer]]
name = "film"
material = { formula = "Al2O3", density_g_cm3 = 3.1, band_gap_ev = 7.0 }

[[line]]
label = "Al 2s"
level = "Al 2s"
from = "film"
length_nm = { film = { value = 2.6, relative_sd = 0.08 } }
reference_area = { value = 900.0, sd = 20.0 }

[[line]]
label = "Ta 4f"
level = "Ta 4f"
from = "substrate"
reference_area = 12000.0

[data]
areas = "areas.csv"
area_unit = "counts/s"
"""
TWO_ENERGIES_AREAS = """spot,takeoff_deg,line,area,background_counts,dwell_s
a,60,Al 2s,310.5,800,12
a,60,Ta 4f,5210.0,2000,12
a,45,Al 2s,355.0,800,12
a,45,Ta 4f,4120.0,2000,12
b,,Al 2s,300.0,,
"""


def values_of(process):
    assert process.stderr == "" and process.returncode == 0
    return json.loads(process.stdout)


@pytest.fixture
def two_energies(tmp_path):
    (tmp_path / "run.toml").write_text(TWO_ENERGIES, encoding="utf-8")
    (tmp_path / "areas.csv").write_text(TWO_ENERGIES_AREAS, encoding="utf-8")
    return tmp_path / "run.toml"


# ---- the same run file


def test_both_doors_give_the_same_document(pellicle_command, coupon):
    assert values_of(pellicle_command("thickness", coupon, "--json")) == pellicle.thickness(coupon)


def test_both_doors_agree_on_a_run_with_a_failed_spot(pellicle_command, two_energies):
    shown = pellicle_command("thickness", two_energies, "--json")
    assert shown.returncode == 0 and "1 of 3 results failed" in shown.stderr
    document = json.loads(shown.stdout)
    assert document == pellicle.thickness(two_energies)
    assert [r["takeoff_deg"] for r in document["results"]] == [60.0, 45.0, 60.0]
    assert document["results"][2]["thickness_nm"] is None and "Ta 4f" in document["results"][2]["failure"]


def test_the_run_is_the_calculation_of_thickness_from_areas(two_energies):
    first = pellicle.thickness(two_energies)["results"][0]
    film, substrate, film_length, substrate_length = (
        (first[key]["value"], first[key]["sd"])
        for key in ("film_area", "substrate_area", "length_nm", "substrate_line_length_nm"))
    # u = sqrt(N + 2B)/t for N net counts over B background counts in t seconds.
    assert film == (310.5, pytest.approx(np.sqrt(310.5 * 12 + 2 * 800) / 12, rel=1e-14))
    assert film_length == (2.6, pytest.approx(0.08 * 2.6, rel=1e-14)) and first["length_nm"]["origin"] == "given"
    own = pellicle.thickness_from_areas(film_area=film, substrate_area=substrate, reference_film_area=(900.0, 20.0),
                                        reference_substrate_area=12000.0, film_line_length_nm=film_length,
                                        substrate_line_length_nm=substrate_length, emission_deg=(30.0, 1.0))
    assert first["thickness_nm"]["value"] == own.value_nm
    assert first["gum_nm"]["sd"] == own.standard_uncertainty_nm
    assert [row["contribution_nm"] for row in first["budget"]] == [row.contribution_nm for row in own.budget]


def test_a_result_does_not_depend_on_the_number_of_threads(pellicle_command, coupon, monkeypatch):
    outputs = set()
    for threads in ("1", "2", "7"):
        monkeypatch.setenv("PELLICLE_THREADS", threads)
        outputs.add(pellicle_command("thickness", coupon, "--json").stdout)
    assert len(outputs) == 1


def test_csv_holds_the_numbers_of_the_json(pellicle_command, two_energies):
    table = list(csv.DictReader(io.StringIO(pellicle_command("thickness", two_energies, "--csv").stdout)))
    results = pellicle.thickness(two_energies)["results"]
    assert len(table) == len(results)
    for row, result in zip(table, results, strict=True):
        assert (row["spot"], float(row["emission_deg"])) == (result["spot"], result["emission_deg"])
        if result["thickness_nm"] is None:
            assert row["thickness_nm"] == "" and row["failure"] == result["failure"]
            continue
        assert float(row["thickness_nm"]) == result["thickness_nm"]["value"]
        assert float(row["sd_nm"]) == result["thickness_nm"]["sd"]
        assert row["findings"].split() == [f["code"] for f in result["findings"]]


def test_a_run_can_come_from_standard_input(pellicle_command, coupon):
    shown = pellicle_command("thickness", "-", "--json", folder=coupon.parent, text=coupon.read_text(encoding="utf-8"))
    assert values_of(shown)["results"] == pellicle.thickness(coupon)["results"]


def test_out_writes_what_would_have_been_printed(pellicle_command, coupon):
    target = coupon.parent / "result.json"
    shown = pellicle_command("thickness", coupon, "--json", "--out", target, "--quiet")
    assert (shown.stdout, shown.stderr, shown.returncode) == ("", "", 0)
    assert json.loads(target.read_text(encoding="utf-8")) == pellicle.thickness(coupon)


@pytest.mark.parametrize("old, new", [("area_unit", "area_units"), ('"Al Ka"', '"Al Kb"'), ("value = 0.65", "value = 0.0")])
def test_both_doors_say_the_same_of_a_fault(pellicle_command, coupon, old, new):
    coupon.write_text(coupon.read_text(encoding="utf-8").replace(old, new, 1), encoding="utf-8")
    shown = pellicle_command("thickness", coupon)
    with pytest.raises(pellicle.InputError) as caught:
        pellicle.thickness(coupon)
    assert (shown.stdout, shown.stderr, shown.returncode) == ("", f"pellicle thickness: {caught.value}\n", 3)


# ---- the same options


def test_thickness_from_options(pellicle_command):
    document = json.loads(pellicle_command(*SILICA, "--json").stdout)
    expected = pellicle.thickness_nm(2.0, reference_ratio=0.9329, film_line_length_nm=3.448, emission_deg=34.0)
    assert document["results"][0]["thickness_nm"]["value"] == expected
    assert expected == pytest.approx(3.27429, abs=5e-6)  # reference/published/same_line.csv, row sio2-al-34


def test_lengths(pellicle_command):
    shown = values_of(pellicle_command("lengths", "--material", "SiO2,al2o3-amorphous,Au,diamond,polystyrene",
                                       "--energy-ev", "300,1387.1", "--json"))["results"]
    assert len(shown) == 10
    for result in shown:
        own = pellicle.attenuation_length(result["material"], result["energy_ev"])
        assert result["imfp_nm"] == own.imfp_nm
        assert result["attenuation_models_nm"] == own.models
        assert result["refusals"] == own.refusals
        assert result["attenuation_length_nm"] == {"value": own.value_nm, "sd": own.standard_uncertainty_nm, "model": own.model,
                                                   "imfp_model": own.imfp_model or None}
        assert [f["code"] for f in result["findings"]] == [f.code for f in own.findings]


def test_lines(pellicle_command):
    shown = values_of(pellicle_command("lines", "Ti", "--source", "Mg Ka", "--json"))["results"]
    assert {"Ti 1s", "Ti 2p", "Ti 2p1/2", "Ti 2p3/2"} <= {row["line"] for row in shown}
    for row in shown:
        assert row["binding_energy_ev"] == pellicle.binding_energy_ev(row["line"])
        for key, function in (("kinetic_energy_ev", pellicle.kinetic_energy_ev),
                              ("cross_section_barn", pellicle.cross_section_barn), ("asymmetry", pellicle.asymmetry)):
            if row[key] is not None:
                assert row[key] == function(row["line"], source="Mg Ka")
                continue
            with pytest.raises(pellicle.DomainError):
                function(row["line"], source="Mg Ka")


def test_materials(pellicle_command):
    shown = values_of(pellicle_command("materials", "--json"))["results"]
    catalogue = pellicle.catalogue()
    assert [row["id"] for row in shown] == [m.id for m in catalogue]
    for row, m in zip(shown, catalogue, strict=True):
        assert {key: getattr(m, key) for key in row} == row


def test_sources(pellicle_command):
    for row in values_of(pellicle_command("lines", "--sources", "--json"))["results"]:
        assert pellicle.photon_energy_ev(row["name"]) == row["photon_energy_ev"]


# ---- a new run


def test_the_starter_passes_check_and_gives_thicknesses(pellicle_command, tmp_path):
    made = pellicle_command("new", "start.toml", folder=tmp_path)
    assert made.returncode == 0 and made.stdout == "" and "start.csv" in made.stderr
    assert pellicle_command("check", "start.toml", "--strict", folder=tmp_path).returncode == 0
    results = pellicle.thickness(tmp_path / "start.toml")["results"]
    assert all(0.0 < r["thickness_nm"]["value"] < 10.0 for r in results)
    again = pellicle_command("new", "start.toml", folder=tmp_path)
    assert again.returncode == 3 and "exists already" in again.stderr
