"""Physical sanity of every entry of the built-in tables."""

import math

import numpy as np
import pytest

from containment.errors import InputError
from containment.given.liquid import liquid
from containment.given.tables import drive_entry, drive_names, grain_entry, grain_names, liquid_entry, liquid_names

MELTS = {"gallium", "tin melt", "soda-lime glass melt", "cyclohexanol"}  # solid at room temperature
NOT_GIVEN_AT_ROOM_TEMPERATURE = {"glucose syrup 42 DE", "corn syrup 77"}  # their sources start above
PRESSURE_OF_WATER = 2339.0  # Pa at 20 degC, handbook value


@pytest.fixture(params=liquid_names())
def entry(request):
    return liquid_entry(request.param)


def test_values_are_finite_positive_and_within_bounds(entry):
    bounds = {
        "density": (600.0, 14000.0), "viscosity": (1e-4, 2e4), "surface_tension": (0.01, 1.0), "vapour_pressure": (0.0, 1.1e5),
    }  # fmt: skip
    for of in entry.properties:
        values = of.value(np.linspace(*of.range_K, 301))
        assert np.all(np.isfinite(values))
        assert np.all((values > bounds[of.name][0]) & (values < bounds[of.name][1])), of.name


def test_values_move_the_right_way_without_a_jump(entry):
    for of in entry.properties:
        if of.law == "constant":
            continue
        kelvin = np.linspace(*of.range_K, 2001)
        steps = np.diff(np.log(of.value(kelvin)))
        if of.name == "vapour_pressure":
            assert np.all(steps > 0.0)
        elif of.name == "density" and entry.name == "water":
            assert np.all(steps[kelvin[1:] > 277.2] < 0.0)  # densest at 4 degC
        else:
            assert np.all(steps < 0.0), of.name
        # no law bends so hard that a step is far larger than its neighbours
        assert np.max(np.abs(steps)) < 0.05
        assert np.all(np.abs(np.diff(steps)) < 1e-2)


def test_scalars_and_arrays_agree(entry):
    for of in entry.properties:
        kelvin = np.linspace(*of.range_K, 5).reshape(5, 1)
        values = of.value(kelvin)
        assert values.shape == (5, 1)
        for t, value in zip(kelvin[:, 0], values[:, 0], strict=True):
            single = of.value(float(t))
            assert isinstance(single, float)
            assert single == pytest.approx(value, rel=1e-13)


@pytest.mark.parametrize("beyond", [-0.01, 0.01, math.nan, math.inf, -math.inf])
def test_nothing_is_extrapolated(entry, beyond):
    for of in entry.properties:
        low, high = of.range_K
        bad = low + beyond if beyond < 0.0 else high + beyond
        with pytest.raises(InputError, match="range"):
            of.value(bad)
        with pytest.raises(InputError, match="range"):
            of.value(np.array([0.5 * (low + high), bad]))


def test_is_given_at_room_temperature(entry):
    low, high = entry.range_K
    assert (low <= 293.15 <= high) == (entry.name not in MELTS | NOT_GIVEN_AT_ROOM_TEMPERATURE)


def test_vapour_pressure_is_given_wherever_the_liquid_is(entry):
    # where it is not, the limit on pull-off would count it as unknown; for what holds water it must not be a mere note
    watery = any(word in entry.name for word in ("water", "sucrose", "honey", "syrup", "gel", "silicate"))
    if watery:
        assert entry.vapour_pressure is not None
    if entry.vapour_pressure is not None:
        low, high = entry.vapour_pressure.range_K
        frozen = {"ethylene glycol-water 50", "propylene glycol-water 50"}  # water's law starts at 0 degC
        assert low <= entry.range_K[0] + 1e-6 or (entry.name in frozen and low < 273.3)
        assert high >= entry.range_K[1] - 1e-6
        if watery and low <= 293.15 <= high:
            assert entry.vapour_pressure.value(293.15) <= 1.01 * PRESSURE_OF_WATER
    else:
        assert "negligible" in entry.vapour_pressure_note


def test_every_property_says_where_it_comes_from(entry):
    for of in entry.properties:
        assert len(of.source) > 10
        assert 1e-5 <= of.relative_uncertainty <= 1.0
        if of.source_read:
            assert "read" in of.source or "chemicals" in of.source or "CoolProp" in of.source
        else:
            assert any(word in of.source for word in ("memory", "estimate", "typical", "common practice", "read", "this entry"))


def test_uncertainty_covers_at_least_what_memory_allows(entry):
    # figures from memory are not claimed to better than 1 %, densities and mercury's excepted
    for of in entry.properties:
        if not of.source_read and of.name != "density" and entry.name != "mercury":
            assert of.relative_uncertainty >= 0.01, of.name


def test_hazards_have_topic_and_sentence(entry):
    for hazard in entry.hazards:
        topic, colon, sentence = hazard.partition(": ")
        assert topic.islower() and colon and len(sentence) > 8


def test_what_burns_easily_says_so(entry):
    if entry.flash_point_K is not None and entry.flash_point_K < 333.15:  # 60 degC: flammable liquid under UN GHS
        assert any(hazard.startswith("flammable") for hazard in entry.hazards)


def test_melts_say_that_they_are_hot(entry):
    if entry.range_K[0] > 400.0:
        assert any(hazard.startswith("hot") for hazard in entry.hazards)


def test_becomes_a_liquid_for_the_verdict(entry):
    middle = 0.5 * sum(entry.range_K)
    made = liquid(entry.name, temperature=middle)
    assert made.viscosity == pytest.approx(entry.viscosity.value(middle))
    assert made.uncertainty.keys() >= {"density", "viscosity", "surface_tension"}


@pytest.mark.parametrize("name", grain_names())
def test_granular_material(name):
    grain = grain_entry(name)
    assert 100.0 < grain.bulk_density < grain.particle_density < 12000.0
    assert 0.25 < 1.0 - grain.bulk_density / grain.particle_density < 0.9  # porosity of poured grains
    assert 0.0 < grain.d10 <= grain.d50 <= grain.d90 < 0.1
    assert 15.0 < math.degrees(grain.angle_of_repose_rad) < 70.0
    assert 0.1 < grain.wall_friction < 1.0
    if grain.unconfined_yield_strength_Pa is None:
        assert grain.d50 > 5e-5  # fine powders do not flow freely
    else:
        assert 10.0 < grain.unconfined_yield_strength_Pa < 1e5
    assert all(grain.sources.values())
    assert set(grain.sources) == set(grain.source_read)


@pytest.mark.parametrize("name", drive_names())
def test_drive(name):
    drive = drive_entry(name)
    assert drive.frequency_range is not None
    low, high = drive.frequency_range
    assert 0.1 <= low < high <= 1e5
    if drive.max_force is not None:
        assert drive.moving_mass is not None
        if drive.max_acceleration is not None:
            # the bare table reaches most of the stated acceleration with the stated force
            assert drive.max_force / drive.moving_mass > 0.3 * drive.max_acceleration
    assert "common practice" in drive.source
    assert drive.note


@pytest.mark.parametrize(
    ("find", "names", "other"),
    [
        (liquid_entry, liquid_names, "unobtainium"),
        (grain_entry, grain_names, "unobtainium"),
        (drive_entry, drive_names, "treadmill"),
    ],
)
def test_names_are_found_however_they_are_written(find, names, other):
    for name in names():
        assert find(name.upper().replace(" ", "_")).name == name
        assert find("  " + name.replace(" ", "-") + " ").name == name
        for synonym in find(name).synonyms:
            assert find(synonym).name == name
    with pytest.raises(InputError, match="not in the table"):
        find(other)


@pytest.mark.parametrize("name", ["", " ", "\x1b[31m", "a" * 100_000, "[bold]", "../../etc/passwd", "=1+1", "\u202e"])
def test_odd_names_get_one_printable_line(name):
    with pytest.raises(InputError) as error:
        liquid_entry(name)
    assert str(error.value).isprintable()
    assert len(str(error.value)) < 400
