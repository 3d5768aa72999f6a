"""Liquids, vessels, motions and drives: values kept in SI, and every promised refusal."""

import dataclasses
import math

import pytest

import containment as ct
from containment.errors import InputError

GOOD = {"density": 1410.0, "viscosity": 10.0, "surface_tension": 0.08}


def test_liquid_takes_text_numbers_and_nothing_else():
    assert ct.Liquid(density="1.41 g/cm**3", viscosity="10 Pa*s", surface_tension="80 mN/m").density == pytest.approx(1410.0)
    assert ct.liquid("custom", **GOOD).viscosity == 10.0
    with pytest.raises(dataclasses.FrozenInstanceError):
        ct.Liquid(**GOOD).density = 1.0


@pytest.mark.parametrize(
    ("name", "value"),
    [
        ("viscosity", 0.0), ("viscosity", -1.0), ("viscosity", math.nan), ("viscosity", math.inf), ("viscosity", "0 Pa*s"),
        ("viscosity", "10"), ("density", 0.0), ("density", -5.0), ("density", 1e9), ("surface_tension", -0.01),
        ("surface_tension", "80 mN"), ("density", None), ("density", True),
    ],
)  # fmt: skip
def test_liquid_refuses(name, value):
    with pytest.raises(InputError, match=name.replace("_", " ")):
        ct.Liquid(**GOOD | {name: value})


def test_custom_liquid_needs_all_three():
    with pytest.raises(InputError, match="viscosity, surface tension missing"):
        ct.liquid("custom", density=1000.0)


def test_misspelt_and_positional_arguments_are_refused():
    with pytest.raises(TypeError):
        ct.Liquid(density=1.0, viscosity=1.0, tension=1.0)
    with pytest.raises(TypeError):
        ct.Liquid(1000.0, 1.0, 0.05)
    with pytest.raises(TypeError):
        ct.Cylinder("70 mm", "30 mm")
    with pytest.raises(TypeError):
        ct.Motion(frequency=50.0, accelaration=100.0)
    with pytest.raises(TypeError):
        ct.Motion(50.0, 100.0)


@pytest.mark.parametrize(
    "make",
    [
        lambda: ct.Cylinder(diameter="70 mm", depth="-3 mm"),
        lambda: ct.Cylinder(diameter="70 mm", depth=0.0),
        lambda: ct.Cylinder(diameter=math.nan, depth=0.03),
        lambda: ct.Cylinder(diameter="70", depth="30 mm"),
        lambda: ct.Cylinder(diameter="1e400 m", depth="30 mm"),
        lambda: ct.Cylinder(diameter=0.07, depth=0.03, contact_line="stuck"),
        lambda: ct.Box(width=0.0, length=0.1, depth=0.03),
        lambda: ct.Slot(width="8 kg", depth=0.03),
        lambda: ct.Annulus(inner_diameter=0.08, outer_diameter=0.06, depth=0.03),
        lambda: ct.Annulus(inner_diameter=0.06, outer_diameter=0.06, depth=0.03),
        lambda: ct.Annulus(inner_diameter=1e-5, outer_diameter=0.06, depth=0.03),
        lambda: ct.Unbounded(depth=math.inf),
    ],
)
def test_vessels_refuse(make):
    with pytest.raises(InputError) as caught:
        make()
    assert str(caught.value).isprintable()


def test_vessels_know_their_size():
    assert ct.Cylinder(diameter=0.07, depth=0.03).area == pytest.approx(math.pi * 0.035**2)
    ring = ct.Annulus(inner_diameter=0.04, outer_diameter=0.07, depth=0.03)
    assert ring.area == pytest.approx(math.pi * (0.035**2 - 0.02**2))
    assert ct.Box(width=0.06, length=0.08, depth=0.03).narrowest == 0.06
    assert ring.narrowest == pytest.approx(0.015)
    assert ct.Unbounded(depth=0.03).area is None
    assert ct.Unbounded(depth=0.03).narrowest is None


def test_measures_of_size_are_kept_apart():
    """A = a / w^2 = stroke / 2 = v / w: stroke is peak to peak, amplitude zero to peak."""
    w = 2.0 * math.pi * 50.0
    for motion in (
        ct.Motion(frequency="50 Hz", amplitude="2.5 mm"),
        ct.Motion(frequency="50 Hz", stroke="5 mm"),
        ct.Motion(frequency="3000 rpm", velocity=2.5e-3 * w),
        ct.Motion(frequency=50.0, acceleration=2.5e-3 * w * w),
    ):
        assert motion.acceleration == pytest.approx(2.5e-3 * w * w, rel=1e-12)
        assert motion.amplitude == pytest.approx(2.5e-3, rel=1e-12)
        assert motion.stroke == pytest.approx(5e-3, rel=1e-12)
        assert motion.velocity == pytest.approx(2.5e-3 * w, rel=1e-12)


@pytest.mark.parametrize(
    "arguments",
    [
        {},
        {"stroke": "5 mm", "amplitude": "2.5 mm"},
        {"acceleration": "25 g"},
        {"acceleration": "25"},
        {"acceleration": 0.0},
        {"acceleration": -1.0},
        {"acceleration": math.inf},
        {"velocity": "5 mm"},
        {"stroke": "5 mm/s"},
    ],
)
def test_motion_refuses(arguments):
    with pytest.raises(InputError):
        ct.Motion(frequency="50 Hz", **arguments)


@pytest.mark.parametrize("frequency", ["300 rad/s", "50", 0.0, -50.0, math.nan, "1 MHz", "0 Hz"])
def test_motion_refuses_frequencies(frequency):
    with pytest.raises(InputError, match="frequency"):
        ct.Motion(frequency=frequency, stroke="5 mm")


def test_drive_limits_bind_where_they_should():
    """Stroke at low, velocity at middle, acceleration at high frequency: the usual diagram of a shaker."""
    drive = ct.DriveLimits(
        max_stroke="25 mm", max_velocity="1 m/s", max_acceleration="50 g_n", frequency_range=("5 Hz", "500 Hz")
    )
    low, middle, high, outside = drive.largest_acceleration([6.0, 30.0, 400.0, 501.0], product_mass=1.0)
    assert low == pytest.approx(0.0125 * (2 * math.pi * 6.0) ** 2)
    assert middle == pytest.approx(2 * math.pi * 30.0)
    assert high == pytest.approx(50 * 9.80665)
    assert outside == 0.0
    force = ct.DriveLimits(max_force="1 kN", moving_mass="9 kg")
    assert force.largest_acceleration(50.0, product_mass=1.0) == pytest.approx(100.0)


@pytest.mark.parametrize(
    "arguments",
    [
        {"max_stroke": 0.0}, {"max_stroke": "-5 mm"}, {"max_force": "1 kN"}, {"moving_mass": -1.0},
        {"frequency_range": (60.0, 5.0)}, {"frequency_range": (5.0, 5.0)}, {"max_acceleration": "50 g"},
    ],
)  # fmt: skip
def test_drive_limits_refuse(arguments):
    with pytest.raises(InputError):
        ct.DriveLimits(**arguments)
