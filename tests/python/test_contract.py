"""The names, arguments and results that scripts rely on."""

import inspect
import statistics

import numpy as np
import pytest

import pellicle

# t = L cos(theta) ln(1 + R/R0) with R = 2, R0 = 0.9329, L = 3.448 nm, theta = 34 deg, to the digits of
# reference/published/same_line.csv, row sio2-al-34.
SILICA = {"reference_ratio": 0.9329, "film_line_length_nm": 3.448, "emission_deg": 34.0}
SILICA_NM = 3.27429
HALF_LAST_DIGIT = 5e-6

ENERGIES = np.array([[200.0, 500.0, 1000.0], [1387.1, 2500.0, 9000.0]])

# The same numbers in every form that an array can arrive in.
ARRAY_FORMS = {
    "list": lambda a: a.tolist(),
    "tuple": lambda a: tuple(map(tuple, a.tolist())),
    "C order": lambda a: a,
    "Fortran order": np.asfortranarray,
    "every second column": lambda a: np.repeat(a, 2, axis=1)[:, ::2],
    "reversed twice": lambda a: a[::-1, ::-1].copy()[::-1, ::-1],
    "broadcast view": lambda a: np.broadcast_to(a, a.shape),
    "big endian": lambda a: a.astype(">f8"),
    "unaligned": lambda a: np.frombuffer(b"\0" + a.tobytes(), dtype=np.uint8)[1:].view(a.dtype).reshape(a.shape),
}


def same_bits(a, b):
    return np.array_equal(np.asarray(a, float).view(np.uint64), np.asarray(b, float).view(np.uint64))


# ---- spellings


def test_the_package_exports_what_it_lists():
    assert sorted(pellicle.__all__) == list(pellicle.__all__)
    for name in pellicle.__all__:
        assert hasattr(pellicle, name), name


def test_every_public_name_has_a_docstring():
    for name in pellicle.__all__:
        if name != "__version__":
            assert getattr(pellicle, name).__doc__.strip(), name


def test_thickness_nm_takes_the_ratio_and_keywords():
    parameters = inspect.signature(pellicle.thickness_nm).parameters
    assert list(parameters) == ["ratio", "reference_ratio", "film_line_length_nm", "substrate_line_length_nm",
                                "emission_deg", "status"]
    assert all(p.kind is p.KEYWORD_ONLY for name, p in parameters.items() if name != "ratio")
    assert parameters["substrate_line_length_nm"].default is None
    assert parameters["emission_deg"].default == 0.0
    with pytest.raises(TypeError):
        pellicle.thickness_nm(2.0, 0.9329)


@pytest.mark.parametrize("call", [
    lambda: pellicle.imfp_nm("SiO2", 1000.0, "S1"),
    lambda: pellicle.Material("Al2O3", 3.1),
    lambda: pellicle.kinetic_energy_ev("Si 2p", "Al Ka"),
    lambda: pellicle.ratio_of_film(2.0, 0.9329),
    lambda: pellicle.thickness_from_ratio(2.0),
    lambda: pellicle.thickness_from_areas(2.0, 1.0),
], ids=["imfp_nm", "Material", "kinetic_energy_ev", "ratio_of_film", "thickness_from_ratio", "thickness_from_areas"])
def test_confusable_arguments_are_keywords_only(call):
    with pytest.raises(TypeError):
        call()


# ---- mean free paths and attenuation lengths


def test_imfp_of_a_scalar_is_a_float():
    for energy in (1387.1, np.float64(1387.1), np.array(1387.1)):
        value = pellicle.imfp_nm("SiO2", energy, model="TPP-2M")
        assert type(value) is float
        assert value == pellicle.imfp_nm("SiO2", 1387.1)


@pytest.mark.parametrize("model", ["TPP-2M", "S1"])
@pytest.mark.parametrize("form", ARRAY_FORMS)
def test_imfp_of_an_array_is_that_of_its_elements(form, model):
    values = pellicle.imfp_nm("SiO2", ARRAY_FORMS[form](ENERGIES), model=model)
    assert values.shape == ENERGIES.shape and values.dtype == np.float64
    assert same_bits(values, [[pellicle.imfp_nm("SiO2", e, model=model) for e in row] for row in ENERGIES])


@pytest.mark.parametrize("dtype", ["float32", "float16", "int16", "int64", "uint32"])
def test_imfp_accepts_other_number_types(dtype):
    energies = np.array([200, 500, 1000], dtype=dtype)
    assert same_bits(pellicle.imfp_nm("Al", energies), pellicle.imfp_nm("Al", energies.astype(float)))


@pytest.mark.parametrize("shape", [(0,), (2, 0, 3), (1,), (1, 1, 1), (3, 1, 2)])
def test_imfp_keeps_the_shape(shape):
    values, codes = pellicle.imfp_nm("Al", np.full(shape, 1000.0), status=True)
    assert values.shape == codes.shape == pellicle.imfp_nm("Al", np.full(shape, 1000.0)).shape == shape
    assert not codes.any()


def test_imfp_takes_a_name_a_formula_or_a_material():
    own = pellicle.Material(formula="SiO2", density_g_cm3=2.2, band_gap_ev=9.0)
    expected = pellicle.imfp_nm("SiO2", 1000.0)
    assert pellicle.imfp_nm("sio2-thermal", 1000.0) == expected
    assert pellicle.imfp_nm(pellicle.material("SiO2"), 1000.0) == expected
    assert pellicle.imfp_nm(own, 1000.0) == expected


def test_letter_case_of_a_model_does_not_matter():
    assert pellicle.imfp_nm("SiO2", 1000.0, model="tpp-2m") == pellicle.imfp_nm("SiO2", 1000.0, model="TPP-2M")


def test_imfp_status_tells_why_an_element_has_no_number():
    values, codes = pellicle.imfp_nm("SiO2", [49.0, 50.0, -1.0, np.nan, np.inf, 200000.0, 200001.0], status=True)
    assert codes.tolist() == [2, 0, 1, 1, 1, 0, 2]
    assert np.isnan(values).tolist() == [code != 0 for code in codes]


def test_attenuation_length_carries_value_uncertainty_and_models():
    length = pellicle.attenuation_length("SiO2", 1387.1)
    assert {"Seah-Gilmore", "S3", "CS2", "organic", "Seah-Dench"} <= set(length.models)
    assert set(length.imfp_nm) == {"TPP-2M", "S1"}
    assert length.value_nm == length.models[length.model]
    assert length.models["organic"] is None and "organic" in length.refusals
    assert set(length.refusals) == {name for name, value in {**length.models, **length.imfp_nm}.items() if value is None}
    assert length.imfp_nm["TPP-2M"] == pellicle.imfp_nm("SiO2", 1387.1)


@pytest.mark.parametrize("name", ["SiO2", "al2o3-amorphous", "Au", "polystyrene", "HfO2"])
@pytest.mark.parametrize("energy", [300.0, 1000.0, 1400.0])
def test_uncertainty_of_a_predicted_length_is_the_spread_but_at_least_a_tenth(name, energy):
    length = pellicle.attenuation_length(name, energy)
    counted = [v for model, v in length.models.items() if v is not None and model != "Seah-Dench"]
    expected = max(0.10 * length.value_nm, statistics.stdev(counted))
    assert length.standard_uncertainty_nm == pytest.approx(expected, rel=1e-12)


def test_organic_solids_use_the_organic_law():
    length = pellicle.attenuation_length("polystyrene", 1200.0)
    assert length.model == "organic" and length.imfp_model == ""
    assert length.value_nm == pytest.approx(0.00837 * 1200.0**0.842, rel=1e-14)


# ---- thickness


def test_thickness_of_the_worked_example():
    value = pellicle.thickness_nm(2.0, reference_ratio=0.9329, film_line_length_nm=3.448,
                                  substrate_line_length_nm=None, emission_deg=34.0)
    assert type(value) is float
    assert value == pytest.approx(SILICA_NM, abs=HALF_LAST_DIGIT)


@pytest.mark.parametrize("ratio", [2, np.float32(2.0), np.int8(2), np.array(2.0), np.array(2, dtype=">i4")])
def test_any_scalar_gives_a_float(ratio):
    value = pellicle.thickness_nm(ratio, **SILICA)
    assert type(value) is float and value == pellicle.thickness_nm(2.0, **SILICA)


@pytest.mark.parametrize("form", ARRAY_FORMS)
def test_thickness_of_an_array_is_that_of_its_elements(form):
    ratios = ENERGIES / 1000.0
    values = pellicle.thickness_nm(ARRAY_FORMS[form](ratios), **SILICA)
    assert values.shape == ratios.shape and values.dtype == np.float64
    assert same_bits(values, [[pellicle.thickness_nm(r, **SILICA) for r in row] for row in ratios])


@pytest.mark.parametrize("dtype", ["float32", "float16", "int16", "int64", "uint32"])
def test_thickness_accepts_other_number_types(dtype):
    ratios = np.array([0, 1, 2, 7], dtype=dtype)
    assert same_bits(pellicle.thickness_nm(ratios, **SILICA), pellicle.thickness_nm(ratios.astype(float), **SILICA))


@pytest.mark.parametrize("shapes", [
    [(), (), (), (), ()],
    [(4,), (), (), (), ()],
    [(), (4,), (), (), ()],
    [(), (), (), (), (4,)],
    [(3, 1), (4,), (), (1,), (1, 1)],
    [(2, 1, 1), (1, 3, 1), (1, 1, 4), (4,), (3, 1)],
    [(1,), (1,), (1,), (1,), (1,)],
    [(0,), (1,), (), (), ()],
    [(2, 0, 3), (3,), (1, 1), (), (2, 1, 1)],
])
@pytest.mark.parametrize("equal_lengths", [True, False])
def test_all_arguments_broadcast(shapes, equal_lengths):
    random = np.random.default_rng(20240501)
    bounds = [(0.01, 20.0), (0.2, 3.0), (1.0, 5.0), (1.0, 5.0), (0.0, 60.0)]
    ratio, reference, film, substrate, angle = (random.uniform(*b, size=s) for b, s in zip(bounds, shapes, strict=True))
    second = None if equal_lengths else substrate
    shape = np.broadcast_shapes(*(s for i, s in enumerate(shapes) if i != 3 or not equal_lengths))
    values, codes = pellicle.thickness_nm(ratio, reference_ratio=reference, film_line_length_nm=film,
                                          substrate_line_length_nm=second, emission_deg=angle, status=True)
    assert np.shape(values) == np.shape(codes) == shape
    spread = [np.broadcast_to(a, shape) for a in (ratio, reference, film, film if equal_lengths else substrate, angle)]
    for index in np.ndindex(shape):
        r, r0, lf, ls, theta = (float(a[index]) for a in spread)
        one = pellicle.thickness_nm(r, reference_ratio=r0, film_line_length_nm=lf, emission_deg=theta,
                                    substrate_line_length_nm=None if equal_lengths else ls)
        assert same_bits(np.asarray(values)[index], one)


def test_an_element_does_not_depend_on_its_neighbours():
    random = np.random.default_rng(7)
    ratios = random.lognormal(0.0, 2.0, size=10_000)  # more than two blocks of the kernel
    lengths = {"reference_ratio": 0.8, "film_line_length_nm": 3.0, "substrate_line_length_nm": 2.5}
    order = random.permutation(ratios.size)
    whole = pellicle.thickness_nm(ratios, **lengths)
    assert same_bits(pellicle.thickness_nm(ratios[order], **lengths), whole[order])
    assert same_bits(np.concatenate([pellicle.thickness_nm(part, **lengths) for part in np.array_split(ratios, 7)]), whole)


def test_thickness_status_tells_why_an_element_has_no_number():
    ratio = [2.0, 0.0, -1.0, np.nan, np.inf]
    values, codes = pellicle.thickness_nm(ratio, **SILICA, status=True)
    assert codes.tolist() == [0, 0, 1, 1, 3]
    assert values[1] == 0.0
    assert np.isnan(values).tolist() == [code != 0 for code in codes]


def test_status_of_a_scalar_is_a_pair_of_scalars():
    value, code = pellicle.thickness_nm(2.0, **SILICA, status=True)
    assert type(value) is float and type(code) is int and code == 0
    value, code = pellicle.thickness_nm(-2.0, **SILICA, status=True)
    assert np.isnan(value) and code == 1


def test_the_inputs_are_left_as_they_were():
    ratios = np.array([1.0, 2.0])
    ratios.setflags(write=False)
    pellicle.thickness_nm(ratios, **SILICA)
    assert ratios.tolist() == [1.0, 2.0]


def test_ratio_of_film_undoes_thickness_nm():
    thicknesses = np.linspace(0.0, 12.0, 25).reshape(5, 5)
    lengths = {"reference_ratio": 0.7, "film_line_length_nm": 3.0, "substrate_line_length_nm": 2.4, "emission_deg": 45.0}
    ratios = pellicle.ratio_of_film(thicknesses, **lengths)
    assert ratios.shape == thicknesses.shape
    np.testing.assert_allclose(pellicle.thickness_nm(ratios, **lengths), thicknesses, rtol=1e-13)
    assert type(pellicle.ratio_of_film(2.0, **lengths)) is float


# ---- one thickness with its uncertainty


def test_a_quantity_is_a_number_or_a_pair():
    bare = pellicle.thickness_from_ratio(ratio=2.0, **SILICA)
    for same in (2, np.float64(2.0), (2.0, None), [2.0, None]):
        assert pellicle.thickness_from_ratio(ratio=same, **SILICA).value_nm == bare.value_nm
    assert bare.value_nm == pellicle.thickness_nm(2.0, **SILICA)
    assert bare.standard_uncertainty_nm == 0.0 and bare.scale_nm is None
    assert {f.code for f in bare.findings} == {"uncertainty_not_given", "scale_not_stated"}


def test_budget_of_the_worked_example():
    # reference/published/uncertainty.csv, rows gum-*: areas are counts, 5 %, 10 %, 1 deg.
    result = pellicle.thickness_from_areas(film_area=(20000.0, 20000.0**0.5), substrate_area=(10000.0, 100.0),
                                           reference_ratio=(0.9329, 0.05 * 0.9329), film_line_length_nm=(3.448, 0.3448),
                                           emission_deg=(34.0, 1.0))
    parts = {row.name: row for row in result.budget}
    assert result.value_nm == pytest.approx(SILICA_NM, abs=HALF_LAST_DIGIT)
    assert result.standard_uncertainty_nm == pytest.approx(0.34462, abs=HALF_LAST_DIGIT)
    assert parts["length_nm"].contribution_nm == pytest.approx(0.32743, abs=HALF_LAST_DIGIT)
    assert parts["emission_deg"].contribution_nm == pytest.approx(0.03855, abs=HALF_LAST_DIGIT)
    assert parts["reference_ratio"].contribution_nm == pytest.approx(0.09746, abs=HALF_LAST_DIGIT)
    areas = np.hypot(parts["film_area"].contribution_nm, parts["substrate_area"].contribution_nm)
    assert areas == pytest.approx(0.02387, abs=HALF_LAST_DIGIT)
    assert sum(row.share for row in result.budget) == pytest.approx(1.0, abs=1e-12)
    assert [row.share for row in result.budget] == sorted((row.share for row in result.budget), reverse=True)
    assert {row.kind for row in result.budget} == {"repeatability", "scale"}
    assert np.hypot(result.repeatability_nm, result.scale_nm) == pytest.approx(result.standard_uncertainty_nm, rel=1e-12)
    assert not result.findings


def test_reference_areas_stand_for_their_ratio():
    lengths = {"film_line_length_nm": (3.0, 0.3), "substrate_line_length_nm": (2.4, 0.24), "emission_deg": (20.0, 1.0)}
    by_areas = pellicle.thickness_from_areas(film_area=(300.0, 9.0), substrate_area=(200.0, 6.0), **lengths,
                                             reference_film_area=(700.0, 21.0), reference_substrate_area=(1000.0, 40.0))
    by_ratio = pellicle.thickness_from_ratio(ratio=(1.5, 1.5 * np.hypot(0.03, 0.03)),
                                             reference_ratio=(0.7, 0.7 * np.hypot(0.03, 0.04)), **lengths)
    assert by_areas.value_nm == pytest.approx(by_ratio.value_nm, rel=1e-14)
    assert by_areas.standard_uncertainty_nm == pytest.approx(by_ratio.standard_uncertainty_nm, rel=1e-12)


def test_results_are_read_only():
    result = pellicle.thickness_from_ratio(ratio=2.0, **SILICA)
    with pytest.raises(AttributeError):
        result.value_nm = 1.0
    with pytest.raises(AttributeError):
        pellicle.material("SiO2").density_g_cm3 = 3.0


# ---- materials


def test_a_material_of_ones_own():
    film = pellicle.Material(formula="Al2O3", density_g_cm3=3.1, band_gap_ev=7.0, valence_electrons=None)
    assert (film.formula, film.density_g_cm3, film.band_gap_ev) == ("Al2O3", 3.1, 7.0)
    assert film.valence_electrons == 2 * 3 + 3 * 6
    assert film.category == "inline" and film.density_mark == "given"
    assert pellicle.Material(formula="Al2O3", density_g_cm3=3.1).band_gap_ev is None
    assert pellicle.Material(formula="Al2O3", density_g_cm3=3.1, valence_electrons=20).valence_electrons == 20.0


def test_catalogue_numbers_can_be_replaced():
    film = pellicle.material("al2o3-amorphous", density_g_cm3=2.9)
    assert film.id == "al2o3-amorphous" and film.density_g_cm3 == 2.9 and film.density_mark == "given"
    assert film.band_gap_ev == pellicle.material("al2o3-amorphous").band_gap_ev


def test_silica_means_thermal_oxide():
    assert pellicle.material("SiO2").id == "sio2-thermal"
    assert pellicle.material("SiO2").density_g_cm3 == 2.20


def test_every_catalogued_solid_has_its_numbers_and_their_sources():
    catalogue = pellicle.catalogue()
    assert len(catalogue) >= 200
    assert len({m.id for m in catalogue}) == len(catalogue)
    for m in catalogue:
        assert 0.0 < m.density_g_cm3 < 25.0, m.id
        assert m.density_source and m.density_mark in {"printed", "from memory"}, m.id
        if m.band_gap_ev is not None:
            assert 0.0 <= m.band_gap_ev < 15.0, m.id
            assert m.gap_source and m.gap_mark in {"printed", "from memory", "definition"}, m.id


def test_atom_density_counts_atoms():
    # 602.214 rho k / M: silicon 49.96, silicon in SiO2 22.05 per nm3 (reference/published/atom_density.csv).
    assert pellicle.material("Si").atom_density_per_nm3("Si") == pytest.approx(49.96, abs=0.005)
    assert pellicle.material("SiO2").atom_density_per_nm3("O") == pytest.approx(2 * 22.0507, abs=0.0002)
    assert pellicle.material("SiO2").atom_density_per_nm3("Al") == 0.0


# ---- lines


def test_kinetic_energy_is_photon_energy_less_binding_energy():
    for line in ("Si 2p", "Al 2p3/2", "O 1s", "Au 4f7/2"):
        expected = pellicle.photon_energy_ev("Mg Ka") - pellicle.binding_energy_ev(line)
        assert pellicle.kinetic_energy_ev(line, source="Mg Ka") == expected


@pytest.mark.parametrize("spelling", ["Al Ka", "AlKa", "al kα", "Al K-alpha", "ALKA"])
def test_a_photon_source_has_many_spellings(spelling):
    assert pellicle.photon_energy_ev(spelling) == 1486.6


@pytest.mark.parametrize("spelling", ["Ti 2p3/2", "Ti2p3/2", " Ti  2p3/2 "])
def test_blanks_in_a_line_do_not_matter(spelling):
    assert pellicle.binding_energy_ev(spelling) == pellicle.binding_energy_ev("Ti 2p3/2")


def test_s_levels_have_full_asymmetry():
    for line in ("C 1s", "Si 2s", "Au 4s"):
        assert pellicle.asymmetry(line, source="Al Ka") == 2.0
    assert -1.0 <= pellicle.asymmetry("Si 2p", source="Al Ka") <= 2.0


# ---- runs


def test_a_run_reads_its_file_and_table(coupon):
    run = pellicle.Run.read(coupon)
    assert run.title.startswith("Coupon 07")
    assert run.lines == ["Al 2p oxide", "Al 2p metal"]


def test_thickness_takes_a_path_text_or_run(coupon):
    result = pellicle.thickness(coupon)
    assert result == pellicle.thickness(str(coupon)) == pellicle.thickness(pellicle.Run.read(coupon))
    assert result["schema"] == "pellicle.result/1" and result["command"] == "thickness"
    assert [r["spot"] for r in result["results"]] == ["rim", "centre", "weld"]
