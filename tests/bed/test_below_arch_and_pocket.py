"""What hangs below an arch, the sudden drop and the swing on trapped gas: by geometry, by integration, limits and scaling."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from containment.physics.bed.below_arch import arch_rise, hanging_stress, shallow_factor
from containment.physics.bed.trapped_gas import carrying_drop, pocket_swing, sudden_drop

G = 9.80665
BED = dict(pocket=0.02, bulk_density=600.0, depth=0.05, ambient_pressure=101325.0)


def test_arch_rise_by_integrating_its_slope():
    """An arch of constant thrust T under the load q per plan length: y'' = q/T, integrated from the crown to the wall."""
    span, slope = 0.12, 0.6
    x = np.linspace(0.0, span / 2.0, 2001)
    y = np.concatenate([[0.0], np.cumsum(np.diff(x) * (slope / (span / 2.0)) * 0.5 * (x[1:] + x[:-1]))])
    assert float(arch_rise(span=span, slope=slope)) == pytest.approx(y[-1], rel=1e-9)
    # a dome whose rings bear nothing, y' = slope (r/R)^2, is flatter
    assert slope * x[-1] / 3.0 < float(arch_rise(span=span, slope=slope))
    assert float(arch_rise(span=2 * span, slope=slope / 2)) == pytest.approx(float(arch_rise(span=span, slope=slope)))


def test_hanging_stress_by_hand_and_scaling():
    base = dict(thickness=0.01, bulk_density=800.0, gamma=0.5, gravity=G)
    assert float(hanging_stress(**base)) == pytest.approx(0.01 * 800.0 * 9.80665 * 1.5)
    for name in ("thickness", "bulk_density", "gravity"):
        assert float(hanging_stress(**base | {name: 2 * base[name]})) == pytest.approx(2 * float(hanging_stress(**base)))
    assert float(hanging_stress(**base | {"gamma": 2.0})) == pytest.approx(2 * float(hanging_stress(**base)))


def test_shallow_factor_by_search():
    """Least stress of a three-hinged arch over all rises inside the bed, against that of a deep slot, rho g B."""
    for depth in (0.002, 0.01, 0.03):
        rise = np.linspace(0.01, 0.99, 9801) * depth
        least = (depth * 0.08**2 / (8.0 * rise * (depth - rise))).min()
        assert float(shallow_factor(depth=depth, span=0.08)) == pytest.approx(0.08 / least, rel=1e-6)
    assert float(shallow_factor(depth=0.04, span=0.08)) == float(shallow_factor(depth=9.0, span=0.08)) == 1.0
    assert float(shallow_factor(depth=0.02, span=0.16)) == pytest.approx(float(shallow_factor(depth=0.01, span=0.08)))


@pytest.mark.parametrize("depth", [0.001, 0.05, 1.0, 8.0])
def test_sudden_drop_against_an_integrator(depth):
    bed = BED | {"depth": depth}
    scale = float(carrying_drop(**bed, gravity=G))

    def slopes(t, y):
        pressure = 101325.0 * 0.02 / (0.02 + y[0])
        return [y[1], G - (101325.0 - pressure) / (600.0 * depth)]

    def turns(t, y):
        return y[1]

    turns.terminal, turns.direction = True, -1
    run = solve_ivp(slopes, (0.0, 100.0), [0.0, 1e-12], events=turns, rtol=1e-11, atol=1e-14, max_step=0.01)
    found = float(sudden_drop(**bed, gravity=G))
    assert found == pytest.approx(run.y_events[0][0][0], rel=1e-6)
    assert found > 2.0 * scale or depth == 0.001 and found == pytest.approx(2.0 * scale, rel=1e-4)


def test_sudden_drop_scales_and_ends():
    x = float(sudden_drop(**BED, gravity=G))
    assert float(sudden_drop(**BED | {"pocket": 0.06}, gravity=G)) == pytest.approx(3 * x)
    # only weight over pressure counts
    assert float(sudden_drop(**BED | {"depth": 0.1, "ambient_pressure": 202650.0}, gravity=G)) == pytest.approx(x)
    assert np.isinf(sudden_drop(**BED | {"depth": 20.0}, gravity=G))
    assert float(sudden_drop(**BED | {"pocket": 0.0}, gravity=G)) == 0.0


@pytest.mark.parametrize("exponent", [1.0, 1.25])
@pytest.mark.parametrize("permeability", [1e-12, 1.2e-11, 3e-10])
@pytest.mark.parametrize("w", [100.0, 390.0, 430.0, 1500.0])
def test_swing_against_an_integrator(exponent, permeability, w):
    """Bed on gas that leaks: m x'' = m A w^2 sin(w t) - q, q' = n (p0/H0)(x' - K q/(mu L)); steady amplitude of x."""
    mu, amplitude = 1.82e-5, 1e-5
    stiffness, mass = exponent * 101325.0 / 0.02, 600.0 * 0.05

    def slopes(t, y):
        x, v, q = y
        return [v, amplitude * w * w * math.sin(w * t) - q / mass, stiffness * (v - permeability * q / (mu * 0.05))]

    # start on the bounded answer: integrate long, then take the drift out of the last periods
    span = 400 * 2 * math.pi / w
    late = np.linspace(span - 4 * 2 * math.pi / w, span, 2001)
    run = solve_ivp(slopes, (0.0, span), [0.0, 0.0, 0.0], t_eval=late, rtol=1e-9, atol=1e-13)
    columns = np.stack([np.ones_like(late), late, np.sin(w * late), np.cos(w * late)], axis=1)
    fit = np.linalg.lstsq(columns, run.y[0], rcond=None)[0]
    measured = math.hypot(fit[2], fit[3])
    found = pocket_swing(
        amplitude=amplitude, angular_frequency=w, permeability=permeability, exponents=(exponent, exponent), **BED
    )
    above = w * w * mass >= stiffness
    assert found == pytest.approx(max(measured, amplitude) if above else measured, rel=2e-2)


@settings(max_examples=60, deadline=None)
@given(st.floats(20.0, 5000.0), st.floats(1e-13, 1e-9), st.floats(1.0, 1.4))
def test_swing_between_the_exponents_is_covered(w, permeability, exponent):
    case = dict(amplitude=1e-4, angular_frequency=w, permeability=permeability, **BED)
    assert pocket_swing(**case, exponents=(exponent, exponent)) <= pocket_swing(**case) * 1.02


def test_swing_scales():
    case = dict(amplitude=1e-4, angular_frequency=350.0, permeability=1e-11, **BED)
    swing = pocket_swing(**case)
    assert pocket_swing(**case | {"amplitude": 3e-4}) == pytest.approx(3 * swing)
    # the same spring, mass and leak from twice the pocket at twice the pressure
    assert pocket_swing(**case | {"pocket": 0.04, "ambient_pressure": 202650.0}) == pytest.approx(swing)
    # far below resonance the bed goes with its vessel: swing A (w/w0)^2, softest gas
    slow = pocket_swing(**case | {"angular_frequency": 1.0, "permeability": 1e-18})
    assert slow == pytest.approx(1e-4 * 600.0 * 0.05 * 0.02 / 101325.0, rel=1e-3)
