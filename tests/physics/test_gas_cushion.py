"""A layer on trapped gas: resonance and response against a direct integration of the layer's motion."""

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.gas_cushion import (
    compressed_gap,
    cushion_pressure,
    cushion_resonance,
    motion_ratio,
    vessel_acceleration,
)

LAYER = {"density": 1200.0, "depth": 0.04}


def test_natural_frequency_of_the_full_gas_law():
    """Integrate rho h y'' = p0 (H/(H + y))^n - p0 for a small start: the period of the free motion."""
    gap, exponent = 0.02, 1.4
    pressure = cushion_pressure(ambient_pressure=101325.0, **LAYER)
    f0 = float(cushion_resonance(pressure=pressure, gap=gap, exponent=exponent, **LAYER))
    mass = LAYER["density"] * LAYER["depth"]

    def motion(t, y):
        return [y[1], (pressure * (gap / (gap + y[0])) ** exponent - pressure) / mass]

    crossing = lambda t, y: y[0]  # noqa: E731
    crossing.direction = -1
    free = solve_ivp(motion, (0, 5.2 / f0), [1e-6 * gap, 0.0], events=crossing, rtol=1e-10, atol=1e-15, max_step=0.02 / f0)
    periods = np.diff(free.t_events[0])
    assert 1 / periods.mean() == pytest.approx(f0, rel=1e-5)


@pytest.mark.parametrize("damping", [0.02, 0.3])
@pytest.mark.parametrize("ratio", [0.3, 0.9, 1.0, 2.5])
def test_response_by_integration(damping, ratio):
    """Steady amplitude of y'' = -w0^2 (y - x) - 2 d w0 (y' - x'), x = cos wt."""
    w0, w = 1.0, ratio

    def motion(t, y):
        return [y[1], -(w0**2) * (y[0] - np.cos(w * t)) - 2 * damping * w0 * (y[1] + w * np.sin(w * t))]

    end = 12 / damping
    period = 2 * np.pi / w
    t = np.linspace(end, end + period, 400)
    run = solve_ivp(motion, (0, end + period), [0, 0], t_eval=t, rtol=1e-9, atol=1e-11)
    assert motion_ratio(ratio, resonance=1.0, damping_ratio=damping) == pytest.approx(np.abs(run.y[0]).max(), rel=2e-3)


def test_limits_and_scaling():
    assert motion_ratio(1e-3, resonance=50.0) == pytest.approx(1.0)
    assert motion_ratio(50.0, resonance=50.0) == np.inf
    assert motion_ratio(500.0, resonance=50.0) == pytest.approx(1 / 99)
    base = cushion_resonance(pressure=1e5, gap=0.05, **LAYER)
    assert cushion_resonance(pressure=4e5, gap=0.05, **LAYER) == pytest.approx(2 * base)
    assert cushion_resonance(pressure=1e5, gap=0.2, **LAYER) == pytest.approx(base / 2)
    assert cushion_resonance(pressure=1e5, gap=0.05, density=4800.0, depth=0.04) == pytest.approx(base / 2)
    assert cushion_resonance(pressure=1e5, gap=0.05, density=1200.0, depth=0.16) == pytest.approx(base / 2)
    assert cushion_resonance(pressure=1e5, gap=0.05, exponent=1.4 * 9, **LAYER) == pytest.approx(3 * base)
    needed = vessel_acceleration(200.0, 80.0, resonance=50.0, damping_ratio=0.1)
    assert needed * motion_ratio(80.0, resonance=50.0, damping_ratio=0.1) == pytest.approx(200.0)


def test_static_compression_balances_the_weight():
    gap = compressed_gap(0.1, ambient_pressure=9e4, exponent=1.2, **LAYER)
    assert 9e4 * (0.1 / gap) ** 1.2 - 9e4 == pytest.approx(1200 * 0.04 * G)
    assert cushion_pressure(ambient_pressure=9e4, **LAYER) == pytest.approx(9e4 + 1200 * 0.04 * G)
    assert compressed_gap(0.3, ambient_pressure=9e4, exponent=1.2, **LAYER) == pytest.approx(3 * gap)
