"""Warming: the energy balance and the conduction profile, and how they scale."""

import numpy as np
import pytest
from scipy.special import erfc

from containment.physics.warming import heated_depth, shear_warming_rate

LIQUID = {"density": 1261.0, "heat_capacity": 2400.0}


def test_energy_balance():
    """1 m^3 of 2 Pa s at 30 1/s takes 1800 W and warms by that over its heat capacity."""
    assert shear_warming_rate(30.0, viscosity=2.0, **LIQUID) == pytest.approx(1800.0 / (1261.0 * 2400.0))
    assert shear_warming_rate(60.0, viscosity=2.0, **LIQUID) == pytest.approx(7200.0 / (1261.0 * 2400.0))


def test_sixteen_per_cent_of_the_step():
    """Explicit finite differences of the heat equation: erfc(1) of the step at the depth named."""
    alpha, end, length, n = 0.3 / (1261.0 * 2400.0), 60.0, 0.04, 401
    x = np.linspace(0, length, n)
    temperature = np.zeros(n)
    temperature[0] = 1.0
    step = 0.4 * (x[1] - x[0]) ** 2 / alpha
    steps = int(np.ceil(end / step))
    for _ in range(steps):
        temperature[1:-1] += alpha * end / steps / (x[1] - x[0]) ** 2 * np.diff(temperature, 2)
    depth = heated_depth(end, thermal_conductivity=0.3, **LIQUID)
    assert np.interp(depth, x, temperature) == pytest.approx(erfc(1.0), abs=2e-3)
    assert heated_depth(4 * end, thermal_conductivity=0.3, **LIQUID) == pytest.approx(2 * depth)
