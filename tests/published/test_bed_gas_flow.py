"""Gas through a bed against general-purpose reference libraries: `fluids` (packed beds) and CoolProp (air)."""

import numpy as np
import pytest
from CoolProp.CoolProp import PropsSI
from fluids.packed_bed import Carman, Ergun

from containment.physics.bed.permeability import AIR_DENSITY, AIR_VISCOSITY, gas_velocity, permeability, pressure_gradient
from containment.physics.bed.trapped_gas import sink_velocity

BEDS = [(d, e) for d in (2e-5, 1e-4, 5e-4, 3e-3) for e in (0.35, 0.4, 0.6)]


@pytest.mark.parametrize(("diameter", "voidage"), BEDS)
@pytest.mark.parametrize("velocity", [1e-4, 1e-2, 0.5])
def test_pressure_gradient_is_that_of_the_reference_library(diameter, voidage, velocity):
    expected = Ergun(dp=diameter, voidage=voidage, vs=velocity, rho=AIR_DENSITY, mu=AIR_VISCOSITY, L=1.0)
    assert float(pressure_gradient(velocity, diameter=diameter, voidage=voidage)) == pytest.approx(expected, rel=1e-12)


def test_example_of_the_reference_library():
    """Value printed in the documentation of `fluids.packed_bed.Ergun`."""
    found = pressure_gradient(1e-3, diameter=8e-4, voidage=0.4, gas_viscosity=1e-3, gas_density=1e3)
    assert float(found) == pytest.approx(1338.8671874999995, rel=1e-12)


@pytest.mark.parametrize(("diameter", "voidage"), BEDS)
def test_permeability_is_the_slow_limit_of_the_reference_library(diameter, voidage):
    """Carman's correlation is 180 (1 - e)/Re plus a term in Re^-0.1 that fades against it as the flow slows."""
    velocity = 1e-9
    gradient = Carman(dp=diameter, voidage=voidage, vs=velocity, rho=AIR_DENSITY, mu=AIR_VISCOSITY, L=1.0)
    k = AIR_VISCOSITY * velocity / gradient
    assert float(permeability(diameter=diameter, voidage=voidage)) == pytest.approx(k, rel=1e-4)


@pytest.mark.parametrize(("diameter", "voidage"), BEDS)
def test_sink_velocity_balances_the_bed_in_the_reference_library(diameter, voidage):
    v = float(sink_velocity(bulk_density=700.0, diameter=diameter, voidage=voidage, gravity=9.80665))
    held = Ergun(dp=diameter, voidage=voidage, vs=v, rho=AIR_DENSITY, mu=AIR_VISCOSITY, L=1.0)
    assert held == pytest.approx(700.0 * 9.80665, rel=1e-9)


def test_air_is_that_of_the_reference_library():
    state = ("T", 293.15, "P", 101325.0, "Air")
    assert PropsSI("V", *state) == pytest.approx(AIR_VISCOSITY, rel=5e-3)
    assert PropsSI("D", *state) == pytest.approx(AIR_DENSITY, rel=1e-3)


def test_slow_flow_is_darcy():
    gradient = np.array([1.0, 10.0, 100.0])
    k = permeability(diameter=5e-5, voidage=0.4, constant=150.0)
    np.testing.assert_allclose(gas_velocity(gradient, diameter=5e-5, voidage=0.4), k * gradient / AIR_VISCOSITY, rtol=1e-3)
