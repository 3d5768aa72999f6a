"""Pull-off: force balance, the standard atmosphere and vapour pressures against reference libraries."""

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from fluids.atmosphere import ATMOSPHERE_1976
from hypothesis import given
from hypothesis import strategies as st

from containment.constants import STANDARD_GRAVITY as G
from containment.errors import InputError
from containment.physics.pull_off import (
    ambient_pressure,
    least_base_pressure,
    pull_off_acceleration,
    vapour_pressure_between,
)

CASE = {"ambient_pressure": 101325.0, "density": 1410.0, "depth": 0.03}


def test_pressure_meets_the_vapour_pressure_at_the_limit():
    a = pull_off_acceleration(**CASE, vapour_pressure=5000.0)
    assert least_base_pressure(a, **CASE) == pytest.approx(5000.0)
    assert least_base_pressure(0.0, **CASE) == pytest.approx(101325 - 1410 * G * 0.03)


def test_column_of_water_that_the_atmosphere_just_holds():
    """10.3 m (the suction pump's limit, textbook): the same column lets go at rest."""
    at_rest = pull_off_acceleration(ambient_pressure=101325.0, vapour_pressure=0.0, density=1000.0, depth=10.33)
    assert at_rest == pytest.approx(0.0, abs=0.01)


@given(factor=st.floats(0.1, 10.0), a=st.floats(0.0, 1e4))
def test_scaling(factor, a):
    """The drop of pressure goes with density and depth alike, and with g + a."""
    drop = 101325.0 - least_base_pressure(a, **CASE)
    denser = least_base_pressure(a, ambient_pressure=101325.0, density=1410.0 * factor, depth=0.03)
    deeper = least_base_pressure(a, ambient_pressure=101325.0, density=1410.0, depth=0.03 * factor)
    assert 101325.0 - denser == pytest.approx(factor * drop, rel=1e-9)
    assert deeper == pytest.approx(denser, rel=1e-9, abs=1e-6)


@pytest.mark.parametrize("altitude", [-1000.0, 0.0, 500.0, 2000.0, 5000.0, 10900.0])
def test_standard_atmosphere(altitude):
    """Reference: the `fluids` package, US Standard Atmosphere 1976, which takes geometric altitude."""
    geometric = altitude * 6356766.0 / (6356766.0 - altitude)
    assert ambient_pressure(altitude) == pytest.approx(ATMOSPHERE_1976(geometric).P, rel=2e-5)


def test_altitude_out_of_range():
    with pytest.raises(InputError, match="altitude: 12000"):
        ambient_pressure(12000.0)
    with pytest.raises(InputError, match="altitude"):
        ambient_pressure(np.array([0.0, np.nan]))


@pytest.mark.parametrize("fluid", ["Water", "Ethanol"])
def test_vapour_pressure_between_two_points(fluid):
    """Reference: CoolProp saturation curves."""
    t1, t2 = 293.15, 333.15
    points = {"cold": (t1, PropsSI("P", "T", t1, "Q", 0, fluid)), "warm": (t2, PropsSI("P", "T", t2, "Q", 0, fluid))}
    assert vapour_pressure_between(t1, **points) == pytest.approx(points["cold"][1], rel=1e-12)
    assert vapour_pressure_between(t2, **points) == pytest.approx(points["warm"][1], rel=1e-12)
    for t in (298.15, 313.15, 328.15):
        truth = PropsSI("P", "T", t, "Q", 0, fluid)
        assert 0.985 * truth < vapour_pressure_between(t, **points) < truth


def test_vapour_pressure_points_out_of_order():
    with pytest.raises(InputError, match="vapour pressure points"):
        vapour_pressure_between(300.0, cold=(330.0, 2e4), warm=(290.0, 2e3))
    with pytest.raises(InputError, match="vapour pressure points"):
        vapour_pressure_between(300.0, cold=(290.0, 0.0), warm=(330.0, 2e3))
