"""How easily gas passes through a bed: permeability, pressure gradient, and the velocity at a given gradient."""

from typing import Final

import numpy as np
import numpy.typing as npt

__all__ = ["AIR_DENSITY", "AIR_VISCOSITY", "gas_velocity", "permeability", "pressure_gradient", "reynolds_number"]

Real = npt.NDArray[np.float64]
Values = float | Real

AIR_VISCOSITY: Final = 1.82e-5
"""Air at 20 degC, Pa s (handbook value, checked against CoolProp in the tests)."""

AIR_DENSITY: Final = 1.204
"""Air at 20 degC and 101.325 kPa, kg/m^3 (likewise)."""

_VISCOUS: Final = 150.0
_INERTIAL: Final = 1.75
_KOZENY: Final = 180.0


def permeability(*, diameter: Values, voidage: Values, constant: float = _KOZENY) -> Real:
    """Return the permeability of a bed, m^2: e^3 d^2/(180 (1 - e)^2).

    Parameters
    ----------
    diameter : array_like
        Of spheres with the bed's volume to surface ratio, m.
    voidage : array_like
        e, 0 to 1.
    constant : float
        180 (Carman); 150 makes it the viscous part of `pressure_gradient`, more permeable.

    References
    ----------
    Kozeny (1927), Carman (1937) (from memory; checked against the Carman function of a fluids library in the tests).

    Examples
    --------
    >>> float((permeability(diameter=1e-4, voidage=0.4) * 1e12).round(6))
    9.876543
    """
    e = np.asarray(voidage, np.float64)
    result: Real = e**3 * np.square(np.asarray(diameter, np.float64)) / (constant * (1.0 - e) ** 2)
    return result


def _terms(diameter: Values, voidage: Values, viscosity: float, density: float) -> tuple[Real, Real]:
    d, e = np.asarray(diameter, np.float64), np.asarray(voidage, np.float64)
    linear = _VISCOUS * viscosity * (1.0 - e) ** 2 / (e**3 * d * d)
    square = _INERTIAL * density * (1.0 - e) / (e**3 * d)
    return linear, square


def pressure_gradient(
    velocity: Values,
    *,
    diameter: Values,
    voidage: Values,
    gas_viscosity: float = AIR_VISCOSITY,
    gas_density: float = AIR_DENSITY,
) -> Real:
    """Return the pressure gradient of gas that passes a bed at a superficial velocity, Pa/m.

    Notes
    -----
    150 mu (1-e)^2 v/(e^3 d^2) + 1.75 rho (1-e) v^2/(e^3 d), spheres, Reynolds number over (1 - e) up to about 700.

    References
    ----------
    Ergun (1952), Chem. Eng. Prog. 48, 89 (checked against a fluids library in the tests).

    Examples
    --------
    >>> float(pressure_gradient(1e-3, diameter=8e-4, voidage=0.4, gas_viscosity=1e-3, gas_density=1e3).round(3))
    1338.867
    """
    linear, square = _terms(diameter, voidage, gas_viscosity, gas_density)
    v = np.asarray(velocity, np.float64)
    result: Real = linear * v + square * v * np.abs(v)
    return result


def gas_velocity(
    gradient: Values,
    *,
    diameter: Values,
    voidage: Values,
    gas_viscosity: float = AIR_VISCOSITY,
    gas_density: float = AIR_DENSITY,
) -> Real:
    """Return the superficial velocity that a pressure gradient (Pa/m) drives through a bed, m/s.

    Notes
    -----
    The positive root of `pressure_gradient`. At the gradient rho_b g it is the velocity at which the gas carries the bed.

    Examples
    --------
    >>> float(gas_velocity(14709.975, diameter=1e-4, voidage=0.4).round(4))
    0.0096
    """
    linear, square = _terms(diameter, voidage, gas_viscosity, gas_density)
    g = np.asarray(gradient, np.float64)
    # the form that does not cancel where the flow is slow
    result: Real = 2.0 * g / (linear + np.sqrt(linear * linear + 4.0 * square * g))
    return result


def reynolds_number(
    velocity: Values, *, diameter: Values, gas_viscosity: float = AIR_VISCOSITY, gas_density: float = AIR_DENSITY
) -> Real:
    """Return the particle Reynolds number of the gas: rho v d/mu.

    Examples
    --------
    >>> float(reynolds_number(0.01, diameter=1e-4).round(4))
    0.0662
    """
    result: Real = gas_density * np.asarray(velocity, np.float64) * np.asarray(diameter, np.float64) / gas_viscosity
    return result
