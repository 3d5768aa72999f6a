"""Plug, wall stress, gas support, drag, liquid bridges, powder groups: by hand, by integration, limits and scaling."""

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from containment.errors import NotComputableError
from containment.physics.bed.cohesion import arch_outlet
from containment.physics.bed.gas_drag import flight_drag, gas_compliance
from containment.physics.bed.liquid_bridge import bridge_force, bridge_strength, saturation
from containment.physics.bed.permeability import gas_velocity, permeability, pressure_gradient
from containment.physics.bed.powder_group import compaction_drop, powder_group, segregates, sifts_through
from containment.physics.bed.trapped_gas import carrying_drop, pocket_frequency, sink_velocity, support_time
from containment.physics.bed.wall_plug import perimeter_over_area, plug_gamma, plug_load, wall_shear_strength
from containment.physics.bed.wall_stress import lateral_stress_ratio, vertical_stress

G = 9.80665


def test_rough_wall_plug_is_the_arch_of_a_round_opening_or_a_slot():
    tau = float(wall_shear_strength(800.0, wall_friction=1.0))
    for shape, factor in (("cylinder", 2.0), ("slot", 1.0)):
        widest = float(arch_outlet(yield_strength=800.0, bulk_density=500.0, gamma=0.5, shape_factor=factor, gravity=G))
        load = plug_load(bulk_density=500.0, gamma=0.5, perimeter_ratio=perimeter_over_area(shape, widest), gravity=G)
        assert float(load) == pytest.approx(tau)


def test_wall_shear_by_mohr_circle():
    """Largest shear of the circle (0, sigma_c) whose shear over normal stress stays below the wall friction, by search."""
    b = np.linspace(0.0, 0.5 * math.pi, 200001)
    shear, normal = 0.5 * np.sin(2 * b), np.cos(b) ** 2
    for m in (0.1, 0.4, 0.9, 1.5):
        best = shear[shear <= m * normal * (1 + 1e-9)].max()
        assert float(wall_shear_strength(1.0, wall_friction=m)) == pytest.approx(best, rel=1e-4)


def test_plug_gamma_is_where_the_load_meets_the_strength():
    where = dict(bulk_density=450.0, perimeter_ratio=60.0, gravity=G)
    gamma = float(plug_gamma(shear_strength=200.0, **where))
    assert float(plug_load(gamma=gamma, **where)) == pytest.approx(200.0)
    assert perimeter_over_area("box", 0.1, 0.1) == pytest.approx(perimeter_over_area("cylinder", 0.1))
    assert perimeter_over_area("annulus", 0.06, 0.1) == pytest.approx(perimeter_over_area("slot", 0.02))
    assert perimeter_over_area("unbounded") == 0.0


BIN = dict(bulk_density=800.0, perimeter_ratio=4.0 / 2.0, wall_friction=0.4, stress_ratio=0.45, gravity=G)


def test_wall_stress_against_integrated_force_balance():
    depth = np.array([0.1, 1.0, 5.0, 30.0])
    run = solve_ivp(
        lambda z, s: 800.0 * G - 0.4 * 0.45 * 2.0 * s, (0.0, 30.0), [0.0], t_eval=depth, rtol=1e-10, atol=1e-6
    )
    np.testing.assert_allclose(vertical_stress(depth=depth, **BIN), run.y[0], rtol=1e-7)
    # limits: shallow is hydrostatic, deep is rho g D/(4 m K)
    assert float(vertical_stress(depth=1e-6, **BIN)) == pytest.approx(800.0 * G * 1e-6, rel=1e-5)
    assert float(vertical_stress(depth=1e3, **BIN)) == pytest.approx(800.0 * G * 2.0 / (4 * 0.4 * 0.45))
    assert float(vertical_stress(depth=2.0, **BIN | {"wall_friction": 0.0})) == pytest.approx(1600.0 * G)
    assert float(lateral_stress_ratio(math.radians(30.0))) == pytest.approx(0.5)


def test_wall_stress_scales():
    s = float(vertical_stress(depth=3.0, **BIN))
    assert float(vertical_stress(depth=6.0, **BIN | {"perimeter_ratio": 1.0})) == pytest.approx(2 * s)


@given(st.floats(1e-6, 1e-2), st.floats(0.3, 0.8), st.floats(10.0, 1e5))
def test_gas_velocity_is_the_inverse_of_the_gradient(diameter, voidage, gradient):
    v = gas_velocity(gradient, diameter=diameter, voidage=voidage)
    assert float(pressure_gradient(v, diameter=diameter, voidage=voidage)) == pytest.approx(gradient, rel=1e-9)


@given(st.floats(1e-6, 1e-2), st.floats(1.01, 10.0), st.floats(0.3, 0.8))
def test_finer_is_less_permeable_and_sinks_slower(diameter, factor, voidage):
    fine = dict(diameter=diameter, voidage=voidage)
    coarse = dict(diameter=factor * diameter, voidage=voidage)
    assert float(permeability(**coarse)) == pytest.approx(factor**2 * float(permeability(**fine)))
    assert sink_velocity(bulk_density=800.0, gravity=G, **fine) < sink_velocity(bulk_density=800.0, gravity=G, **coarse)


def test_sink_velocity_by_hand():
    # K = 0.6^3 (20 um)^2/(150 0.4^2) = 3.6e-12 m^2; K rho g/mu = 3.6e-12 * 5884 / 1.82e-5 = 1.1638e-3 m/s
    v = float(sink_velocity(bulk_density=600.0, diameter=20e-6, voidage=0.6, gravity=G))
    assert v == pytest.approx(1.1638e-3, rel=2e-3)
    assert float(support_time(allowed_drop=5e-3, first_drop=1e-3, velocity=v)) == pytest.approx(4e-3 / v)
    assert float(support_time(allowed_drop=1e-3, first_drop=5e-3, velocity=v)) == 0.0


def test_carrying_drop_by_gas_law():
    load = 900.0 * G * 0.2
    x = float(carrying_drop(pocket=0.05, bulk_density=900.0, depth=0.2, ambient_pressure=101325.0, gravity=G))
    assert pytest.approx((101325.0 - load) * (0.05 + x)) == 101325.0 * 0.05
    assert x == pytest.approx(0.05 * load / 101325.0, rel=0.02)
    assert np.isinf(carrying_drop(pocket=0.05, bulk_density=9000.0, depth=2.0, ambient_pressure=101325.0, gravity=G))
    # spring of the gas: stiffness dp/dx = p0/H0 over the mass per area, by a finite difference of the gas law
    dx = 1e-7
    stiffness = (101325.0 - 101325.0 * 0.05 / (0.05 + dx)) / dx
    own = math.sqrt(stiffness / (900.0 * 0.2)) / (2 * math.pi)
    found = pocket_frequency(pocket=0.05, bulk_density=900.0, depth=0.2, ambient_pressure=101325.0)
    assert float(found) == pytest.approx(own, rel=1e-5)


def test_gas_numbers_scale():
    base = dict(diameter=1e-4, voidage=0.4, bulk_density=1500.0, angular_frequency=100.0)
    d = float(flight_drag(**base))
    assert float(flight_drag(**base | {"diameter": 2e-4})) == pytest.approx(d / 4)
    assert float(flight_drag(**base | {"angular_frequency": 200.0})) == pytest.approx(d / 2)
    base = dict(diameter=1e-4, voidage=0.4, depth=0.1, angular_frequency=100.0, ambient_pressure=1e5)
    c = float(gas_compliance(**base))
    assert float(gas_compliance(**base | {"depth": 0.2})) == pytest.approx(4 * c)
    assert float(gas_compliance(**base | {"ambient_pressure": 2e5})) == pytest.approx(c / 2)


def test_liquid_bridges():
    # saturation by volumes: 1 m^3 of bed with 0.6 m^3 of 2650 kg/m^3 grains, 2 % of 1590 kg = 31.8 kg of water
    assert float(saturation(moisture=0.02, particle_density=2650.0, voidage=0.4)) == pytest.approx(31.8 / 998.2 / 0.4)
    assert float(bridge_force(diameter=2e-4)) == pytest.approx(2 * float(bridge_force(diameter=1e-4)))
    grain = dict(voidage=0.4, moisture=0.02, particle_density=2650.0)
    assert bridge_strength(diameter=2e-4, **grain) == pytest.approx(bridge_strength(diameter=1e-4, **grain) / 2)
    assert bridge_strength(diameter=1e-4, voidage=0.4, moisture=0.0, particle_density=2650.0) == 0.0
    with pytest.raises(NotComputableError, match="fills"):
        bridge_strength(diameter=1e-4, voidage=0.4, moisture=0.2, particle_density=2650.0)


def test_powder_groups_and_settling():
    # catalyst, sand, cement and gravel: the groups that textbooks name for them
    cases = {"A": (60e-6, 1400.0), "B": (300e-6, 2650.0), "C": (14e-6, 3100.0), "D": (3e-3, 2650.0)}
    assert all(powder_group(diameter=d, particle_density=rho) == group for group, (d, rho) in cases.items())
    assert compaction_drop(depth=0.1, voidage=0.36) == 0.0
    assert compaction_drop(depth=0.2, voidage=0.5) == pytest.approx(2 * compaction_drop(depth=0.1, voidage=0.5))
    # three spheres of diameter 1 touch: the circle between them has the radius (2/sqrt(3) - 1)/2
    inner = 1.0 / math.sqrt(3.0) - 0.5
    assert sifts_through(fine=2 * inner * 0.999, coarse=1.0) and not sifts_through(fine=2 * inner * 1.001, coarse=1.0)
    assert segregates(fine=1.0, coarse=1.31) and not segregates(fine=1.0, coarse=1.29)
