"""Cohesive arch over a hopper outlet: worked examples.

Source: a public university course's solution sheet (powder flow, tutorial 2), read; it follows the straight-line fit of
Jenike's (1964) chart that textbooks give. The sheet rounds to three figures and takes g = 9.81 m/s^2.
"""

import math

import pytest

from containment.physics.bed.cohesion import arch_outlet, arch_shape_factor


@pytest.mark.parametrize(
    ("half_angle", "strength", "density", "slot", "outlet"),
    [
        (29.5, 1820.0, 900.0, False, 0.514),
        (35.0, 2043.0, 1800.0, False, 0.299),
    ],
)
def test_outlet_of_the_worked_example(half_angle, strength, density, slot, outlet):
    factor = arch_shape_factor(slot=slot, half_angle=math.radians(half_angle))
    found = arch_outlet(yield_strength=strength, bulk_density=density, gamma=0.0, shape_factor=factor, gravity=9.81)
    assert float(found) == pytest.approx(outlet, abs=1e-3)


def test_shape_factors_of_the_worked_example():
    assert arch_shape_factor(slot=False, half_angle=math.radians(29.5)) == pytest.approx(2.492, abs=5e-4)
    assert arch_shape_factor(slot=False, half_angle=math.radians(35.0)) == pytest.approx(2.5833, abs=1e-4)
    assert arch_shape_factor(slot=True, half_angle=math.radians(29.5)) == pytest.approx(1.1639, abs=1e-4)
    assert arch_shape_factor(slot=True, half_angle=math.radians(35.0)) == pytest.approx(1.1944, abs=1e-4)
