"""Throw heights: grains against an event-driven simulation; scaling."""

import math

import numpy as np
import pytest

from containment.physics.bed.throw import bed_rise, grain_rise_bound, heap_rise, surface_throw
from tests.independent.bouncing_bed import grain_bounces

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


def test_scaling():
    a, w = 3 * G, 150.0
    rise = bed_rise(acceleration=a, angular_frequency=w, gravity=G)
    assert bed_rise(acceleration=a, angular_frequency=2 * w, gravity=G) == pytest.approx(rise / 4)
    assert bed_rise(acceleration=2 * a, angular_frequency=w, gravity=2 * G) == pytest.approx(2 * rise)
    assert float(surface_throw(velocity=2.0, gravity=G)) == pytest.approx(4 * float(surface_throw(velocity=1.0, gravity=G)))
    assert float(heap_rise(width=0.2, angle=0.5)) == pytest.approx(2 * float(heap_rise(width=0.1, angle=0.5)))
    one = float(grain_rise_bound(velocity=1.0, amplitude=0.0, restitution=0.0, gravity=G))
    assert one == pytest.approx(float(surface_throw(velocity=1.0, gravity=G)))
