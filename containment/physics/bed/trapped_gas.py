"""A bed under a closed pocket of gas: as it sinks the pocket's pressure falls until it carries the bed, for a time.

The atmosphere under the bed then drives gas up through the pores, and the bed sinks at the velocity at which that gas
refills the pocket.
"""

import numpy as np
import numpy.typing as npt

from containment.physics.bed.permeability import AIR_DENSITY, AIR_VISCOSITY, gas_velocity

__all__ = ["carrying_drop", "pocket_frequency", "pocket_swing", "sink_velocity", "sudden_drop", "support_time"]

Real = npt.NDArray[np.float64]
Values = float | Real


def carrying_drop(
    *, pocket: Values, bulk_density: Values, depth: Values, ambient_pressure: Values, gravity: float
) -> Real:
    """Return how far a bed drops until the pocket carries it, m; infinite where the pocket cannot.

    Parameters
    ----------
    pocket, depth : array_like
        Height H_0 of the pocket before the drop; depth L of the bed, m.
    bulk_density : array_like
        kg/m^3.
    ambient_pressure : array_like
        p_0, absolute, Pa.
    gravity : float
        m/s^2.

    Notes
    -----
    Isothermal: p_0 H_0 = (p_0 - rho_b g L)(H_0 + x), so x = H_0 rho_b g L/(p_0 - rho_b g L); about H_0 rho_b g L/p_0.

    References
    ----------
    Gas law and force balance.

    Examples
    --------
    >>> x = carrying_drop(pocket=0.1, bulk_density=1000.0, depth=0.1, ambient_pressure=101325.0, gravity=9.80665)
    >>> float((1e3 * x).round(3))
    0.977
    """
    load = np.asarray(bulk_density, np.float64) * gravity * np.asarray(depth, np.float64)
    rest = np.asarray(ambient_pressure, np.float64) - load
    result: Real = np.where(rest > 0.0, np.asarray(pocket, np.float64) * load / np.where(rest > 0.0, rest, 1.0), np.inf)
    return result


def sudden_drop(
    *, pocket: Values, bulk_density: Values, depth: Values, ambient_pressure: Values, gravity: float
) -> Real:
    """Return how far a bed that lets go at once drops before the pocket throws it back, m; infinite where it cannot.

    Parameters
    ----------
    pocket, bulk_density, depth, ambient_pressure, gravity
        As in `carrying_drop`.

    Notes
    -----
    Isothermal gas without leak or friction: the weight's work equals that of the gas, which gives
    ln(1 + y) = (1 - rho_b g L/p_0) y for y = x/H_0; a little more than twice `carrying_drop`. A bound: gas that leaks in
    the meantime damps the fall.

    References
    ----------
    Gas law and energy balance.

    Examples
    --------
    >>> x = sudden_drop(pocket=0.1, bulk_density=1000.0, depth=0.1, ambient_pressure=101325.0, gravity=9.80665)
    >>> float((1e3 * x).round(3))
    1.961
    """
    load = np.asarray(bulk_density, np.float64) * gravity * np.asarray(depth, np.float64)
    share = load / np.asarray(ambient_pressure, np.float64)
    safe = np.where(share < 1.0, share, 0.5)
    # Newton from above, where the convex difference of the two sides is positive: ln(1 + y) <= y/sqrt(1 + y)
    y = safe * (2.0 - safe) / (1.0 - safe) ** 2
    for _ in range(60):
        y = y - ((1.0 - safe) * y - np.log1p(y)) / ((1.0 - safe) - 1.0 / (1.0 + y))
    result: Real = np.where(share < 1.0, np.asarray(pocket, np.float64) * y, np.inf)
    return result


def pocket_frequency(
    *, pocket: Values, bulk_density: Values, depth: Values, ambient_pressure: Values, exponent: float = 1.0
) -> Real:
    """Return the natural frequency of a bed on the pocket's gas as a spring, Hz: w^2 = n p_0/(rho_b L H_0).

    Notes
    -----
    The bed follows the vessel only well below it. Gas that leaks through the bed softens the spring; n = 1 (default) is
    the soft side.

    Examples
    --------
    >>> float(pocket_frequency(pocket=0.1, bulk_density=1000.0, depth=0.1, ambient_pressure=101325.0).round(2))
    16.02
    """
    mass = np.asarray(bulk_density, np.float64) * depth
    w2 = exponent * np.asarray(ambient_pressure, np.float64) / (mass * np.asarray(pocket, np.float64))
    result: Real = np.sqrt(w2) / (2.0 * np.pi)
    return result


def pocket_swing(
    *,
    amplitude: float,
    angular_frequency: float,
    pocket: float,
    bulk_density: float,
    depth: float,
    ambient_pressure: float,
    permeability: float,
    gas_viscosity: float = AIR_VISCOSITY,
    exponents: tuple[float, float] = (1.0, 1.4),
) -> float:
    """Return by how much a shaken bed swings against its vessel on the pocket's gas, zero to peak, m.

    Parameters
    ----------
    amplitude, angular_frequency : float
        Of the vessel, zero to peak, m; rad/s.
    pocket, bulk_density, depth, ambient_pressure
        As in `carrying_drop`.
    permeability : float
        K of the bed, m^2.
    gas_viscosity : float
        Pa s.
    exponents : (float, float)
        Least and largest polytropic exponent n; the largest swing between them is returned.

    Notes
    -----
    The gas is a spring k = n p_0/H_0 per area in series with the leak through the bed, mu L/K: a Maxwell element on the mass
    rho_b L. With r^2 = rho_b L w^2/k and t = w mu L/(K k) the swing is A r^2/|i t/(1 + i t) - r^2|; above resonance no less
    than A, so that a fast drive is not credited with the bed standing still. Small swings, bed without cracks.

    References
    ----------
    Gas law, Darcy's law and force balance, linear.

    Examples
    --------
    >>> bed = dict(pocket=0.02, bulk_density=600.0, depth=0.05, ambient_pressure=101325.0, permeability=1.2e-11)
    >>> [round(1e3 * pocket_swing(amplitude=1e-3, angular_frequency=w, **bed), 3) for w in (50.0, 411.0, 4000.0)]
    [0.025, 6.233, 1.015]
    """
    least, most = exponents
    mass = bulk_density * depth
    # the peak over n lies at one of the ends or close to where the drive meets the natural frequency
    meeting = mass * angular_frequency**2 * pocket / ambient_pressure
    n = np.unique(np.append(np.linspace(least, most, 81), min(max(meeting, least), most)))
    stiffness = n * ambient_pressure / pocket
    r2 = mass * angular_frequency**2 / stiffness
    leak = angular_frequency * gas_viscosity * depth / (permeability * stiffness)
    swing = float(np.max(amplitude * r2 / np.abs(1j * leak / (1.0 + 1j * leak) - r2)))
    return max(swing, amplitude) if r2.max() >= 1.0 else swing


def sink_velocity(
    *,
    bulk_density: Values,
    diameter: Values,
    voidage: Values,
    gravity: float,
    gas_viscosity: float = AIR_VISCOSITY,
    gas_density: float = AIR_DENSITY,
) -> Real:
    """Return the velocity at which a carried bed sinks, m/s: the gas velocity at the gradient rho_b g.

    Notes
    -----
    K rho_b g/mu while the particle Reynolds number is small; the quadratic law otherwise. A bed without cracks or
    channels: one channel ends the support at once.

    References
    ----------
    Darcy; Ergun (1952), see `permeability.pressure_gradient`.

    Examples
    --------
    >>> v = sink_velocity(bulk_density=600.0, diameter=2e-5, voidage=0.6, gravity=9.80665)
    >>> float((1e3 * v).round(3))
    1.164
    """
    load = np.asarray(bulk_density, np.float64) * gravity
    return gas_velocity(load, diameter=diameter, voidage=voidage, gas_viscosity=gas_viscosity, gas_density=gas_density)


def support_time(*, allowed_drop: Values, first_drop: Values, velocity: Values) -> Real:
    """Return how long the gas carries the bed within an allowed drop, s; 0 where the first drop already exceeds it.

    Examples
    --------
    >>> float(support_time(allowed_drop=0.011, first_drop=0.001, velocity=0.001).round(9))
    10.0
    """
    left = np.maximum(np.asarray(allowed_drop, np.float64) - np.asarray(first_drop, np.float64), 0.0)
    result: Real = left / np.asarray(velocity, np.float64)
    return result
