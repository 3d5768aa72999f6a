"""Flight of a shaken bed against an event-driven simulation, an integrator with gas drag, and closed forms."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from containment.physics.bed.flight import (
    FIRST_DOUBLING,
    UNBROKEN_FLIGHT,
    flight,
    landing_pattern,
    largest_gap,
    take_off_gamma,
    take_off_phase,
    take_off_velocity,
)
from tests.independent.bouncing_bed import inelastic_landings

G, F = 9.80665, 25.0
W = 2.0 * math.pi * F


def simulated(gamma, periods=40):
    return inelastic_landings(gamma * G / W**2, F, gravity=G, periods=periods)


@pytest.mark.parametrize("gamma", np.round(np.concatenate([[1.02, 1.1], np.arange(1.25, 8.01, 0.25)]), 3))
def test_first_flight_is_the_simulated_one(gamma):
    first, ours = simulated(gamma, periods=6)[0], flight(float(gamma))
    assert ours.duration / W == pytest.approx(first.landed - first.took_off, rel=1e-6)
    assert ours.landing_velocity * G / W == pytest.approx(first.closing_speed, rel=1e-5, abs=1e-7)
    assert ours.gap * G / W**2 == pytest.approx(first.largest_gap, rel=1e-5)


@pytest.mark.parametrize("gamma", [1.2, 2.0, 3.0, 3.4, 3.6, 3.85, 4.2, 4.55, 4.8, 5.5, 6.1, 6.5, 7.0, 7.6, 8.0])
def test_settled_pattern_is_the_simulated_one(gamma):
    landings = simulated(gamma, periods=200)[-24:]
    durations = sorted({round((x.landed - x.took_off) * W, 2) for x in landings})
    pattern = sorted({round(f.duration, 2) for f in landing_pattern(gamma)})
    assert len(durations) == len(pattern)
    assert durations == pytest.approx(pattern, abs=0.011)


def test_flight_lasts_a_period_and_doubling_follows():
    """sqrt(1 + pi^2): Mehta & Luck 1990, from memory. sqrt(4 + pi^2) follows from the map; the simulation brackets it."""
    assert flight(UNBROKEN_FLIGHT).duration == pytest.approx(2.0 * math.pi, abs=1e-9)
    assert pytest.approx(3.297, abs=5e-4) == UNBROKEN_FLIGHT
    assert pytest.approx(3.724, abs=5e-4) == FIRST_DOUBLING
    spread = []
    for gamma in (FIRST_DOUBLING - 0.06, FIRST_DOUBLING + 0.06):
        times = [x.landed - x.took_off for x in simulated(gamma, periods=600)[-8:]]
        spread.append((max(times) - min(times)) * F)
    assert spread[0] < 1e-3 and spread[1] > 0.03
    assert len(landing_pattern(FIRST_DOUBLING - 0.06)) == 1 and len(landing_pattern(FIRST_DOUBLING + 0.06)) == 2


@pytest.mark.parametrize("gamma", [1.5, 2.5, 3.5, 6.0])
@pytest.mark.parametrize("drag", [0.01, 0.3, 2.0])
def test_gas_drag_against_an_integrator(gamma, drag):
    phase = math.asin(1.0 / gamma)

    def slopes(t, y):
        return [y[1], gamma * math.sin(phase + t) - 1.0 - drag * y[1]]

    def back(t, y):
        return y[0]

    back.terminal, back.direction = True, -1
    run = solve_ivp(slopes, (0.0, 40.0), [1e-13, 0.0], events=back, rtol=1e-11, atol=1e-13, max_step=0.02)
    assert flight(gamma, drag=drag).duration == pytest.approx(run.t_events[0][0], rel=1e-5)
    assert flight(gamma, drag=drag).gap == pytest.approx(run.y[0].max(), rel=1e-4)


def test_drag_fades_smoothly():
    for drag in (1e-300, 1e-12, 1e-7, 1e-6):
        assert flight(1.01, drag=drag).gap == pytest.approx(flight(1.01).gap, rel=2e-6)
        assert flight(9.0, drag=drag).duration == pytest.approx(flight(9.0).duration, rel=1e-5)


@settings(max_examples=60, deadline=None)
@given(st.floats(1.01, 60.0), st.floats(0.0, 1.0), st.floats(0.0, 1.0))
def test_earliest_launch_gives_the_largest_gap(gamma, share, drag):
    first = math.asin(1.0 / gamma)
    other = flight(gamma, first + share * (math.pi - 2.0 * first))
    assert other is None or other.gap <= largest_gap(gamma) * (1.0 + 1e-6)
    assert largest_gap(gamma, drag=drag) <= largest_gap(gamma) * (1.0 + 1e-5)


def test_gap_grows_with_gamma():
    gaps = [largest_gap(float(g)) for g in np.linspace(0.5, 40.0, 200)]
    assert all(b >= a for a, b in zip(gaps, gaps[1:], strict=False))


def test_closed_forms_and_scaling():
    assert float(take_off_phase(2.0)) == pytest.approx(math.radians(30.0))
    assert np.isnan(take_off_phase(0.9))
    a, w = 30.0, 100.0
    v = float(take_off_velocity(acceleration=a, angular_frequency=w, gravity=G))
    assert v == pytest.approx(a / w * math.cos(float(take_off_phase(a / G))))  # velocity of the base at take-off
    # velocities scale with g/w at a fixed Gamma
    assert float(take_off_velocity(acceleration=2 * a, angular_frequency=2 * w, gravity=2 * G)) == pytest.approx(v)
    base = dict(bulk_density=500.0, depth=0.1, tensile_strength=100.0, gravity=G)
    extra = float(take_off_gamma(**base)) - 1.0
    assert float(take_off_gamma(**base | {"depth": 0.2})) - 1.0 == pytest.approx(extra / 2)
    assert float(take_off_gamma(**base | {"tensile_strength": 300.0})) - 1.0 == pytest.approx(3 * extra)


@pytest.mark.parametrize("bad", [dict(gamma=-1.0), dict(gamma=2e4), dict(gamma=2.0, drag=-1.0), dict(gamma=float("nan"))])
def test_out_of_range_raises(bad):
    with pytest.raises(ValueError, match="out of range"):
        flight(**bad)


def test_no_throw_below_one():
    assert flight(1.0) is None and landing_pattern(0.99) == () and largest_gap(1.0) == 0.0
    assert flight(2.0, math.pi) is None  # the base is not falling fast enough there
