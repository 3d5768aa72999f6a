"""Arching, discharge and cohesion: by hand, limits and scaling."""

import math

import numpy as np
import pytest

from containment.physics.bed.arching import grains_before_arch, lasting_arch_outlet, passes_outlet
from containment.physics.bed.cohesion import (
    arch_outlet,
    arch_shape_factor,
    arch_stress,
    bond_number,
    contact_force,
    tensile_strength,
    yield_strength_from_cohesion,
)
from containment.physics.bed.discharge import discharge_rate, pressure_factor, slot_discharge_rate

G = 9.80665
HOLE = dict(outlet=0.02, diameter=0.001, bulk_density=1500.0, gravity=G)
SLOT = dict(width=0.02, length=0.2, diameter=0.001, bulk_density=1500.0, gravity=G)


def test_discharge_by_hand():
    # 0.58 * 1500 * 3.1316 * (0.0186)^2.5 = 2724.5 * 4.7182e-5 (exponents by hand)
    assert float(discharge_rate(**HOLE)) == pytest.approx(0.12855, rel=1e-3)
    assert float(discharge_rate(**HOLE | {"outlet": 0.0014})) == 0.0
    assert float(slot_discharge_rate(**SLOT | {"width": 0.001})) == 0.0


def test_discharge_scales_with_its_dimensions():
    w = float(discharge_rate(**HOLE))
    assert float(discharge_rate(**HOLE | {"outlet": 0.04, "diameter": 0.002})) == pytest.approx(2**2.5 * w)
    assert float(discharge_rate(**HOLE | {"gravity": 4 * G})) == pytest.approx(2 * w)
    assert float(discharge_rate(**HOLE | {"bulk_density": 3000.0})) == pytest.approx(2 * w)
    s = float(slot_discharge_rate(**SLOT))
    assert float(slot_discharge_rate(**SLOT | {"width": 0.04, "length": 0.4, "diameter": 0.002})) == pytest.approx(2**2.5 * s)


def test_pressure_factor():
    assert float(pressure_factor(pressure_gradient=0.0, bulk_density=1500.0, gravity=G)) == 1.0
    assert float(pressure_factor(pressure_gradient=3 * 1500.0 * G, bulk_density=1500.0, gravity=G)) == pytest.approx(2.0)
    assert float(pressure_factor(pressure_gradient=-1e6, bulk_density=1500.0, gravity=G)) == 0.0


def test_arch_by_chance():
    assert float(lasting_arch_outlet(diameter=1e-3)) == pytest.approx(4.94e-3)
    with pytest.raises(KeyError):
        lasting_arch_outlet(diameter=1e-3, shape="cubes")
    assert np.all(np.diff(grains_before_arch(np.linspace(1.0, 4.9, 50))) > 0.0)
    assert np.isinf(grains_before_arch(4.94)) and np.isinf(grains_before_arch(9.0))
    assert bool(passes_outlet(outlet=1e-3, smallest_grain=1e-3)) and not bool(passes_outlet(outlet=9e-4, smallest_grain=1e-3))


def test_arch_stress_and_outlet_are_inverse_and_scale():
    base = dict(bulk_density=600.0, gamma=0.7, shape_factor=2.0, gravity=G)
    size = float(arch_outlet(yield_strength=500.0, **base))
    assert float(arch_stress(outlet=size, **base)) == pytest.approx(500.0)
    assert float(arch_outlet(yield_strength=1000.0, **base)) == pytest.approx(2 * size)
    assert float(arch_outlet(yield_strength=500.0, **base | {"gamma": 2.4})) == pytest.approx(size / 2)
    assert float(arch_outlet(yield_strength=500.0, **base | {"bulk_density": 300.0})) == pytest.approx(2 * size)


def test_mohr_circles():
    """The two strengths are the circles that touch the locus tau = c + s tan(f): distance from their centre by geometry."""
    c, f = 100.0, math.radians(35.0)
    sigma_c = float(yield_strength_from_cohesion(c, friction_angle=f))
    sigma_t = float(tensile_strength(sigma_c, friction_angle=f))
    for centre, radius in ((sigma_c / 2, sigma_c / 2), (-sigma_t / 2, sigma_t / 2)):
        assert (c + centre * math.tan(f)) * math.cos(f) == pytest.approx(radius)
    assert float(yield_strength_from_cohesion(c)) == 200.0
    assert sigma_c > 200.0


def test_shape_factor():
    assert arch_shape_factor(slot=False, half_angle=math.radians(30.0)) == pytest.approx(2.5)
    assert arch_shape_factor(slot=True, half_angle=math.radians(18.0)) == pytest.approx(1.1)


def test_bond_number_scaling():
    force = float(contact_force(100.0, diameter=1e-4, voidage=0.5))
    assert float(contact_force(100.0, diameter=2e-4, voidage=0.5)) == pytest.approx(4 * force)
    b = float(bond_number(force, diameter=1e-4, particle_density=2500.0, gravity=G))
    assert float(bond_number(force, diameter=2e-4, particle_density=2500.0, gravity=G)) == pytest.approx(b / 8)
    # by hand: 1e-6 N over 4/3 pi (50 um)^3 2500 kg/m^3 9.80665 m/s^2 = 1.2837e-8 N
    assert b == pytest.approx(1e-6 / 1.2837e-8, rel=1e-3)
