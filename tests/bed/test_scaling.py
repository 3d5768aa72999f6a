"""How each mechanism scales with its dimensions, where the other files do not say it already; references by hand."""

import math

import numpy as np
import pytest

from containment.physics.bed.arching import lasting_arch_outlet
from containment.physics.bed.cohesion import contact_force, tensile_strength, yield_strength_from_cohesion
from containment.physics.bed.flight import flight
from containment.physics.bed.permeability import gas_velocity, permeability, pressure_gradient, reynolds_number
from containment.physics.bed.powder_group import powder_group
from containment.physics.bed.throw import grain_rise_bound
from containment.physics.bed.trapped_gas import carrying_drop, pocket_frequency, sink_velocity, support_time
from containment.physics.bed.wall_plug import plug_gamma, plug_load, wall_shear_strength
from containment.physics.bed.wall_stress import vertical_stress

G = 9.80665
GRAIN = dict(diameter=1e-4, voidage=0.45)


def value(function, **arguments):
    return float(function(**arguments))


def test_strengths_are_proportional():
    tension = float(tensile_strength(100.0, friction_angle=0.6))
    assert float(tensile_strength(300.0, friction_angle=0.6)) == pytest.approx(3 * tension)
    assert float(yield_strength_from_cohesion(60.0, friction_angle=0.6)) == pytest.approx(
        2 * float(yield_strength_from_cohesion(30.0, friction_angle=0.6))
    )
    shear = float(wall_shear_strength(300.0, wall_friction=0.3))
    assert float(wall_shear_strength(900.0, wall_friction=0.3)) == pytest.approx(3 * shear)
    # a smooth wall: shear in proportion to its friction; nothing without friction
    smooth = float(wall_shear_strength(1.0, wall_friction=1e-4))
    assert float(wall_shear_strength(1.0, wall_friction=2e-4)) == pytest.approx(2 * smooth)
    assert float(wall_shear_strength(1.0, wall_friction=0.0)) == 0.0
    force = float(contact_force(10.0, **GRAIN))
    assert float(contact_force(30.0, **GRAIN)) == pytest.approx(3 * force)
    # e/(1 - e): 0.45/0.55 against 0.6/0.4
    assert float(contact_force(10.0, diameter=1e-4, voidage=0.6)) == pytest.approx(force * 1.5 / (0.45 / 0.55))


def test_plug_scales_with_the_width_and_not_with_its_length():
    base = dict(bulk_density=600.0, gamma=0.5, perimeter_ratio=80.0, gravity=G)
    load = value(plug_load, **base)
    assert value(plug_load, **base | {"perimeter_ratio": 40.0}) == pytest.approx(2 * load)
    assert value(plug_load, **base | {"gamma": 2.0}) == pytest.approx(2 * load)
    assert value(plug_load, **base | {"bulk_density": 1800.0}) == pytest.approx(3 * load)
    where = dict(bulk_density=600.0, perimeter_ratio=80.0, gravity=G)
    one = value(plug_gamma, shear_strength=200.0, **where) + 1.0
    assert value(plug_gamma, shear_strength=400.0, **where) + 1.0 == pytest.approx(2 * one)


def test_gas_scales():
    gradient = 9000.0
    slow = value(gas_velocity, gradient=gradient, diameter=1e-5, voidage=0.45)
    assert value(gas_velocity, gradient=2 * gradient, diameter=1e-5, voidage=0.45) == pytest.approx(2 * slow, rel=1e-3)
    assert value(gas_velocity, gradient=gradient, diameter=2e-5, voidage=0.45) == pytest.approx(4 * slow, rel=1e-3)
    # coarse grains, fast gas: the square root of gradient and of diameter
    fast = value(gas_velocity, gradient=1e8, diameter=0.05, voidage=0.45)
    assert value(gas_velocity, gradient=4e8, diameter=0.05, voidage=0.45) == pytest.approx(2 * fast, rel=1e-3)
    assert value(gas_velocity, gradient=1e8, diameter=0.2, voidage=0.45) == pytest.approx(2 * fast, rel=1e-3)
    assert value(pressure_gradient, velocity=-0.1, **GRAIN) == pytest.approx(-value(pressure_gradient, velocity=0.1, **GRAIN))
    assert value(permeability, **GRAIN, constant=90.0) == pytest.approx(2 * value(permeability, **GRAIN))
    number = value(reynolds_number, velocity=0.1, diameter=1e-4)
    assert value(reynolds_number, velocity=0.2, diameter=1e-3) == pytest.approx(20 * number)
    # by hand: 1.204 * 0.1 * 1e-4/1.82e-5
    assert value(reynolds_number, velocity=0.1, diameter=1e-4) == pytest.approx(0.66154, rel=1e-4)
    sink = value(sink_velocity, bulk_density=500.0, diameter=1e-5, voidage=0.5, gravity=G)
    assert value(sink_velocity, bulk_density=1000.0, diameter=1e-5, voidage=0.5, gravity=G) == pytest.approx(2 * sink, rel=1e-3)
    half = value(sink_velocity, bulk_density=500.0, diameter=1e-5, voidage=0.5, gravity=G, gas_viscosity=3.64e-5)
    assert half == pytest.approx(sink / 2, rel=1e-3)


def test_pocket_scales():
    bed = dict(pocket=0.05, bulk_density=900.0, depth=0.2, ambient_pressure=101325.0)
    drop = value(carrying_drop, **bed, gravity=G)
    assert value(carrying_drop, **bed | {"pocket": 0.1}, gravity=G) == pytest.approx(2 * drop)
    assert value(carrying_drop, **bed | {"depth": 0.4, "ambient_pressure": 202650.0}, gravity=G) == pytest.approx(drop)
    own = value(pocket_frequency, **bed)
    assert value(pocket_frequency, **bed | {"pocket": 0.2}) == pytest.approx(own / 2)
    assert value(pocket_frequency, **bed | {"depth": 0.8}) == pytest.approx(own / 2)
    assert value(pocket_frequency, **bed | {"ambient_pressure": 405300.0}) == pytest.approx(2 * own)
    time = value(support_time, allowed_drop=0.02, first_drop=0.005, velocity=0.001)
    assert value(support_time, allowed_drop=0.04, first_drop=0.01, velocity=0.001) == pytest.approx(2 * time)
    assert value(support_time, allowed_drop=0.02, first_drop=0.005, velocity=0.002) == pytest.approx(time / 2)


def test_wall_stress_is_proportional_to_weight():
    base = dict(depth=3.0, bulk_density=800.0, perimeter_ratio=2.0, wall_friction=0.4, stress_ratio=0.45, gravity=G)
    stress = value(vertical_stress, **base)
    assert value(vertical_stress, **base | {"bulk_density": 1600.0}) == pytest.approx(2 * stress)
    assert value(vertical_stress, **base | {"gravity": 3 * G}) == pytest.approx(3 * stress)
    # only the product of friction and stress ratio counts
    assert value(vertical_stress, **base | {"wall_friction": 0.2, "stress_ratio": 0.9}) == pytest.approx(stress)


def test_throw_of_grains_scales():
    base = dict(velocity=0.4, amplitude=0.002, restitution=0.5, gravity=G)
    rise = value(grain_rise_bound, **base)
    assert value(grain_rise_bound, **base | {"velocity": 0.8, "amplitude": 0.008}) == pytest.approx(4 * rise)
    # by hand: (3 * 0.4)^2/(2 g) + 2 * 2 mm
    assert rise == pytest.approx(1.44 / (2 * G) + 0.004)


@pytest.mark.parametrize("gamma", [1.01, 1.001, 1.0001])
def test_weak_shaking_makes_short_flights(gamma):
    """By hand, with c = Gamma cos(p0) = sqrt(Gamma^2 - 1): s'' = c t - t^2/2 near the top, so s = c t^3/6 - t^4/24, which
    is zero again at t = 4 c; the landing velocity c t^2/2 - t^3/6 there is -8 c^3/3, the largest gap, at t = 3 c, 9 c^4/8."""
    c, one = math.sqrt(gamma**2 - 1.0), flight(gamma)
    assert one.duration == pytest.approx(4.0 * c, rel=1.1 * (gamma - 1.0) + 1e-4)
    assert one.landing_velocity == pytest.approx(8.0 * c**3 / 3.0, rel=4.0 * (gamma - 1.0) + 1e-3)
    assert one.gap == pytest.approx(9.0 * c**4 / 8.0, rel=4.0 * (gamma - 1.0) + 1e-3)


def test_arch_and_groups_scale():
    assert float(lasting_arch_outlet(diameter=3e-3)) == pytest.approx(3 * float(lasting_arch_outlet(diameter=1e-3)))
    assert float(lasting_arch_outlet(diameter=1e-3, shape="elongated")) > float(lasting_arch_outlet(diameter=1e-3))
    # the border from A to B lies at constant density times diameter, that to D at constant density times diameter squared
    borders = []
    for density in (1000.0, 2000.0):
        sizes = np.geomspace(31e-6, 5e-3, 4000)
        groups = [powder_group(diameter=float(d), particle_density=density) for d in sizes]
        borders.append((sizes[groups.index("B")], sizes[groups.index("D")]))
    assert borders[0][0] / borders[1][0] == pytest.approx(2.0, rel=5e-3)
    assert borders[0][1] / borders[1][1] == pytest.approx(math.sqrt(2.0), rel=5e-3)
