"""Which exception says what: one line of place, fact and hint."""

import math
import re

import pytest

import pellicle

RATIO = {"reference_ratio": 0.9329, "film_line_length_nm": 3.448}
AREAS = {"film_area": 2.0, "substrate_area": 1.0, "film_line_length_nm": 3.0}


def test_errors_derive_from_one_base_and_from_the_nearest_builtin():
    assert issubclass(pellicle.Error, Exception)
    for kind, builtin in ((pellicle.InputError, ValueError), (pellicle.DomainError, ArithmeticError),
                          (pellicle.ConvergenceError, ArithmeticError)):
        assert issubclass(kind, pellicle.Error) and issubclass(kind, builtin)
    assert not issubclass(pellicle.InputError, pellicle.DomainError)
    assert not issubclass(pellicle.ConvergenceError, pellicle.DomainError)


INPUT_ERRORS = {
    "negative ratio": (lambda: pellicle.thickness_nm(-1.0, **RATIO), "legal range"),
    "ratio not a number": (lambda: pellicle.thickness_nm(math.nan, **RATIO), "legal range"),
    "reference ratio of zero": (lambda: pellicle.thickness_nm(1.0, reference_ratio=0.0, film_line_length_nm=3.0), "legal range"),
    "length of zero": (lambda: pellicle.thickness_nm(1.0, reference_ratio=1.0, film_line_length_nm=0.0), "legal range"),
    "grazing by 90 deg": (lambda: pellicle.thickness_nm(1.0, **RATIO, emission_deg=90.0), "legal range"),
    "negative angle": (lambda: pellicle.thickness_from_ratio(ratio=1.0, **RATIO, emission_deg=-1.0), "surface normal"),
    "one bad element": (lambda: pellicle.thickness_nm([1.0, 2.0, -3.0], **RATIO), "1 of 3 elements failed, first at flat index 2"),
    "negative uncertainty": (lambda: pellicle.thickness_from_ratio(ratio=(1.0, -0.1), **RATIO), "ratio_sd"),
    "correlation above 1": (lambda: pellicle.thickness_from_ratio(ratio=1.0, **RATIO, substrate_line_length_nm=(2.0, 0.2),
                                                                  length_correlation=1.1), "correlation"),
    "no reference": (lambda: pellicle.thickness_from_areas(**AREAS), "no reference ratio is given"),
    "half a reference": (lambda: pellicle.thickness_from_areas(**AREAS, reference_film_area=1.0), "one of the two reference areas"),
    "two references": (lambda: pellicle.thickness_from_areas(**AREAS, reference_ratio=1.0, reference_film_area=1.0,
                                                             reference_substrate_area=1.0), "both"),
    "negative thickness": (lambda: pellicle.ratio_of_film(-1.0, **RATIO), "thickness_nm"),
    "negative energy": (lambda: pellicle.attenuation_length("SiO2", -1.0), "energy_ev"),
    "unknown IMFP model": (lambda: pellicle.imfp_nm("SiO2", 1000.0, model="TPP"), "expected one of: TPP-2M, S1"),
    "density of zero": (lambda: pellicle.Material(formula="Al2O3", density_g_cm3=0.0), "density_g_cm3"),
    "density not a number": (lambda: pellicle.Material(formula="Al2O3", density_g_cm3=math.nan), "density_g_cm3"),
    "negative band gap": (lambda: pellicle.Material(formula="Al2O3", density_g_cm3=3.0, band_gap_ev=-1.0), "band_gap_ev"),
    "no valence electrons": (lambda: pellicle.Material(formula="Al2O3", density_g_cm3=3.0, valence_electrons=0.0),
                             "valence_electrons"),
    "unknown element": (lambda: pellicle.Material(formula="AlX3", density_g_cm3=3.0), "character 3"),
    "open bracket": (lambda: pellicle.Material(formula="Al2(SO4", density_g_cm3=3.0), "character 4"),
    "empty formula": (lambda: pellicle.Material(formula="", density_g_cm3=3.0), "empty"),
    "ambiguous formula": (lambda: pellicle.material("TiO2"), "tio2-rutile, tio2-anatase"),
    "misspelt id": (lambda: pellicle.material("tio2-rutil"), 'did you mean "tio2-rutile"?'),
    "unknown formula": (lambda: pellicle.material("SiO3"), "no catalogued material"),
    "unknown level": (lambda: pellicle.binding_energy_ev("Si 3d"), "Si 2p3/2"),
    "no level": (lambda: pellicle.binding_energy_ev("Si"), "element level"),
    "unknown source": (lambda: pellicle.kinetic_energy_ev("Si 2p", source="Al Kb"), "Al Ka"),
    "missing run file": (lambda: pellicle.Run.read("no-such-run.toml"), "no-such-run.toml"),
}

DOMAIN_ERRORS = {
    "infinite ratio": (lambda: pellicle.thickness_nm(math.inf, **RATIO), "no finite answer"),
    "no substrate signal": (lambda: pellicle.thickness_from_areas(film_area=1.0, substrate_area=0.0, reference_ratio=1.0,
                                                                  film_line_length_nm=3.0), "lower bound"),
    "ratio beyond numbers": (lambda: pellicle.ratio_of_film(1e5, **RATIO), "too small for a number"),
    "IMFP below its range": (lambda: pellicle.imfp_nm("SiO2", 10.0), "50 to 200000 eV"),
    "IMFP above its range": (lambda: pellicle.imfp_nm("SiO2", 20000.0, model="S1"), "100 to 10000 eV"),
    "IMFP of diamond": (lambda: pellicle.imfp_nm("diamond", 1000.0), "known to fail"),
    "length nowhere valid": (lambda: pellicle.attenuation_length("SiO2", 10.0), "10 eV"),
    "photon too weak": (lambda: pellicle.kinetic_energy_ev("U 1s", source="Al Ka"), "cannot reach"),
    "cross section below threshold": (lambda: pellicle.cross_section_barn("Si 1s", source="Al Ka"), "below the threshold"),
    "cross section of another source": (lambda: pellicle.cross_section_barn("Si 2p", source="Cu Ka"), "photon energy"),
    "asymmetry not tabulated": (lambda: pellicle.asymmetry("Si 3p", source="Al Ka"), "asymmetry"),
}

CONVERGENCE_ERRORS = {
    "lengths beyond all numbers": (lambda: pellicle.thickness_from_ratio(ratio=1.0, reference_ratio=1.0, film_line_length_nm=1e300,
                                                                         substrate_line_length_nm=1e-300), "tolerance"),
}


@pytest.mark.parametrize("kind, case", [
    *[pytest.param(pellicle.InputError, case, id=name) for name, case in INPUT_ERRORS.items()],
    *[pytest.param(pellicle.DomainError, case, id=name) for name, case in DOMAIN_ERRORS.items()],
    *[pytest.param(pellicle.ConvergenceError, case, id=name) for name, case in CONVERGENCE_ERRORS.items()],
])
def test_error(kind, case):
    call, part = case
    with pytest.raises(pellicle.Error, match=re.escape(part)) as caught:
        call()
    assert type(caught.value) is kind
    assert "\n" not in str(caught.value)


@pytest.mark.parametrize("call", [lambda: pellicle.imfp_nm("SiO2", "abc"), lambda: pellicle.thickness_nm(1j, **RATIO)],
                         ids=["energy of letters", "complex ratio"])
def test_what_is_no_real_number_is_an_input_error(call):
    with pytest.raises(pellicle.InputError, match="not a number"):
        call()


@pytest.mark.parametrize("call", [
    lambda: pellicle.imfp_nm(3.0, 1000.0),
    lambda: pellicle.thickness(3),
    lambda: pellicle.Material(formula="Al2O3"),
], ids=["number as material", "number as run", "no density"])
def test_a_wrong_type_is_a_type_error(call):
    with pytest.raises(TypeError):
        call()


def test_shapes_that_do_not_fit_are_a_value_error():
    with pytest.raises(ValueError, match="shape|broadcast"):
        pellicle.thickness_nm([1.0, 2.0, 3.0], reference_ratio=[1.0, 2.0], film_line_length_nm=3.0)


# ---- run files and area tables: file, line, key, what was wrong, what was expected

RUN_FAULTS = {
    "unknown key": ("area_unit", "area_units", ['did you mean "area_unit"?']),
    "unknown table": ("[data]", "[date]", ['did you mean "data"?']),
    "unknown source": ('"Al Ka"', '"Al Kb"', ["instrument.source", "Al Ka"]),
    "unknown layer": ('from = "oxide"', 'from = "oxyde"', ["line[1].from", 'did you mean "oxide"?']),
    "unknown level": ('level = "Al 2p"', 'level = "Al 3d"', ["line[1].level", "Al 2p3/2"]),
    "negative ratio": ("ratio = { value = 0.65", "ratio = { value = -0.65", ["reference[1].ratio", "expected a number > 0"]),
    "negative uncertainty": ("ratio = { value = 0.65, sd = 0.03", "ratio = { value = 0.65, sd = -0.03", ["expected a number >= 0"]),
    "text for a number": ("emission_sd_deg = 0.5", 'emission_sd_deg = "0.5"',
                          ["emission_sd_deg", "this is text", "expected a number"]),
    "TOML": ("[sample]", "[sample", ["expected"]),
}

TABLE_FAULTS = {
    "decimal comma": ("41250", "41,250", ["fields"]),
    "quoted decimal comma": ("41250", '"41,250"', ["area", "point"]),
    "text for a number": ("41250", "n/a", ["area", "not a number"]),
    "negative area": ("41250", "-41250", ["area", "negative"]),
    "90 deg": ("rim,0,Al 2p oxide", "rim,90,Al 2p oxide", ["emission_deg", "surface normal"]),
    "unknown line": ("Al 2p oxide,41250", "Al 2p oxid,41250", ['did you mean "Al 2p oxide"?']),
    "unknown column": ("background_counts", "background_count", ['did you mean "background_counts"?']),
    "doubled row": ("centre,0,Al 2p oxide", "rim,0,Al 2p oxide", ["twice"]),
}


def spoil(path, old, new):
    """Replaces the first `old` in a file; the place of it as messages write it."""
    text = path.read_text(encoding="utf-8")
    assert old in text
    path.write_text(text.replace(old, new, 1), encoding="utf-8")
    return f"{path}:{text[:text.index(old)].count(chr(10)) + 1}:"


@pytest.mark.parametrize("suffix, fault", [
    *[pytest.param(".toml", fault, id=f"run file: {name}") for name, fault in RUN_FAULTS.items()],
    *[pytest.param(".csv", fault, id=f"area table: {name}") for name, fault in TABLE_FAULTS.items()],
])
def test_a_fault_is_located(coupon, suffix, fault):
    old, new, parts = fault
    place = spoil(coupon.with_suffix(suffix), old, new)
    with pytest.raises(pellicle.InputError) as caught:
        pellicle.thickness(coupon)
    assert str(caught.value).startswith(place)
    for part in parts:
        assert part in str(caught.value)


def test_a_missing_area_table_is_named(coupon):
    coupon.with_suffix(".csv").unlink()
    with pytest.raises(pellicle.InputError, match=r"coupon-07\.csv: cannot be read"):
        pellicle.thickness(coupon)
