"""Bubbles: the mean force against a time average, the sinking threshold, the gas at the base."""

import numpy as np
import pytest

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.bubbles import (
    base_gas_resonance,
    bubble_resonance,
    bubble_sinking_acceleration,
    bubble_sinking_distance,
    drift_force,
    largest_gas_gap,
    rise_time_to_base,
)
from containment.physics.gas_cushion import motion_ratio

WATER = {"density": 1000.0, "ambient_pressure": 101325.0}


@pytest.mark.parametrize("exponent", [1.0, 1.4])
def test_mean_force_is_a_time_average(exponent):
    """Mean of V dp/dz over a period with the full gas law, depth z under an upper surface, gravity left out."""
    rho, z, a, pressure = 1000.0, 0.1, 30.0, 1e5
    phase = np.arange(4096) * 2 * np.pi / 4096
    gradient = rho * a * np.cos(phase)
    volume = (pressure / (pressure + gradient * z)) ** (1 / exponent)
    upwards = np.mean(volume * gradient)
    found = drift_force(a, density=rho, distance=z, pressure=pressure, exponent=exponent)
    assert -upwards == pytest.approx(found, rel=3e-3)


def test_sinking_threshold_balances_buoyancy():
    for z in (0.01, 0.1, 2.0):
        a = bubble_sinking_acceleration(distance=z, exponent=1.3, **WATER)
        local = 101325.0 + 1000.0 * G * z
        assert drift_force(a, density=1000.0, distance=z, pressure=local, exponent=1.3) == pytest.approx(1000.0 * G)
        assert bubble_sinking_distance(a, exponent=1.3, **WATER) == pytest.approx(z)
    assert bubble_sinking_distance(1.4 * G, exponent=1.0, **WATER) == np.inf


def test_scaling():
    base = drift_force(100.0, density=1000.0, distance=0.1, pressure=1e5)
    assert drift_force(200.0, density=1000.0, distance=0.1, pressure=1e5) == pytest.approx(4 * base)
    assert drift_force(100.0, density=2000.0, distance=0.1, pressure=1e5) == pytest.approx(4 * base)
    assert drift_force(100.0, density=1000.0, distance=0.2, pressure=1e5) == pytest.approx(2 * base)
    assert drift_force(100.0, density=1000.0, distance=0.1, pressure=2e5) == pytest.approx(base / 2)
    f = bubble_resonance(1e-3, density=1000.0, pressure=1e5)
    assert bubble_resonance(2e-3, density=1000.0, pressure=4e5) == pytest.approx(f)
    assert bubble_resonance(1e-3, density=4000.0, pressure=1e5) == pytest.approx(f / 2)
    layer = {"density": 1410.0, "depth": 0.03, "ambient_pressure": 101325.0}
    t = rise_time_to_base(1e-3, 0.0, viscosity=10.0, **layer)
    assert rise_time_to_base(2e-3, 0.0, viscosity=10.0, **layer) == pytest.approx(t / 4)
    assert rise_time_to_base(1e-3, 0.0, viscosity=20.0, **layer) == pytest.approx(2 * t)
    assert rise_time_to_base(1e-3, 0.0, viscosity=10.0, clean=False, **layer) == pytest.approx(1.5 * t)
    assert rise_time_to_base(1e-3, 900.0, viscosity=10.0, **layer) < t
    gap = largest_gas_gap(50.0, amplification=1.1, **layer)
    assert largest_gas_gap(100.0, amplification=1.1, **layer) == pytest.approx(gap / 4)
    assert base_gas_resonance(4 * gap, **layer) == pytest.approx(base_gas_resonance(gap, **layer) / 2)


def test_minnaert():
    """f r = 3.26 m/s for air in water at 1 atm (textbook; from memory)."""
    assert bubble_resonance(1e-3, density=998.0, pressure=101325.0) * 1e-3 == pytest.approx(3.26, rel=0.01)


def test_gas_at_the_base_amplifies_as_stated():
    layer = {"density": 1410.0, "depth": 0.03, "ambient_pressure": 101325.0}
    gap = largest_gas_gap(50.0, amplification=1.1, **layer)
    assert motion_ratio(50.0, resonance=base_gas_resonance(gap, **layer)) == pytest.approx(1.1)
