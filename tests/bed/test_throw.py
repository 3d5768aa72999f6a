"""Throw heights: grains against an event-driven simulation; scaling."""

import math

import numpy as np
import pytest

from containment.physics.bed.throw import bed_rise, grain_rise_bound, heap_rise, surface_throw
from tests.independent.bouncing_bed import grain_bounces, grain_over_vessel

G = 9.80665


@pytest.mark.parametrize("restitution", [0.3, 0.6, 0.9])
@pytest.mark.parametrize("gamma", [1.5, 4.0, 10.0])
def test_no_simulated_grain_passes_the_bound(restitution, gamma):
    f = 30.0
    w = 2 * math.pi * f
    amplitude = gamma * G / w**2
    velocity = amplitude * w
    bound = float(grain_rise_bound(velocity=velocity, amplitude=amplitude, restitution=restitution, gravity=G))
    most = velocity * (1 + restitution) / (1 - restitution)
    rng = np.random.default_rng(7)
    seen = 0.0
    for drop in rng.uniform(0.1, 1.0, 6) * bound:
        bounces = grain_bounces(amplitude, f, restitution, gravity=G, drop=float(drop), bounces=30)
        # the first fall comes from the height it is given; the bound is for what the base throws
        assert all(b.speed_after <= most * (1 + 1e-9) for b in bounces[1:])
        seen = max([seen, *(b.height_over_base for b in bounces[1:])])
    assert seen <= bound * (1 + 1e-9)


@pytest.mark.parametrize("restitution", [0.0, 0.3, 0.7])
@pytest.mark.parametrize("gamma", [1.5, 3.0, 3.6, 5.0, 8.0])
def test_no_grain_on_a_flying_bed_passes_the_bound(restitution, gamma):
    w = 2 * math.pi * 30.0
    amplitude = gamma * G / w**2
    bound = float(grain_rise_bound(velocity=amplitude * w, amplitude=amplitude, restitution=restitution, gravity=G))
    rise = bed_rise(acceleration=gamma * G, angular_frequency=w, gravity=G)
    seen = [
        grain_over_vessel(amplitude, 30.0, restitution, gravity=G, drop=share * bound, periods=40, steps=1000)
        for share in (0.05, 0.4, 0.95)
    ]
    assert 0.9 * rise < max(seen) <= bound
    if restitution == 0.0:  # the grain stays with the bed, whose own throw is the bound then
        assert max(seen) == pytest.approx(rise, rel=0.03)


def test_scaling():
    a, w = 3 * G, 150.0
    rise = bed_rise(acceleration=a, angular_frequency=w, gravity=G)
    assert bed_rise(acceleration=a, angular_frequency=2 * w, gravity=G) == pytest.approx(rise / 4)
    assert bed_rise(acceleration=2 * a, angular_frequency=w, gravity=2 * G) == pytest.approx(2 * rise)
    assert float(surface_throw(velocity=2.0, gravity=G)) == pytest.approx(4 * float(surface_throw(velocity=1.0, gravity=G)))
    assert float(heap_rise(width=0.2, angle=0.5)) == pytest.approx(2 * float(heap_rise(width=0.1, angle=0.5)))
    one = float(grain_rise_bound(velocity=1.0, amplitude=0.0, restitution=0.0, gravity=G))
    assert one == pytest.approx(float(surface_throw(velocity=1.0, gravity=G)))
