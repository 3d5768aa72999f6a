"""Pull-off of a hanging layer from its base: the pressure there, and what it must stay above."""

import math

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_ATMOSPHERE, STANDARD_GRAVITY
from containment.errors import InputError

__all__ = ["ambient_pressure", "least_base_pressure", "pull_off_acceleration", "vapour_pressure_between"]

Real = npt.NDArray[np.float64]
Values = float | Real


def least_base_pressure(
    acceleration: Values,
    *,
    ambient_pressure: Values,
    density: Values,
    depth: Values,
    gravity: float = STANDARD_GRAVITY,
) -> Real:
    """Return the least absolute pressure at the base of a hanging layer in a period, Pa: p - rho h (g + a).

    Parameters
    ----------
    acceleration : array_like
        Peak acceleration of the vessel, m/s^2; 0 at rest.
    ambient_pressure, density, depth : array_like
        Absolute pressure on the free surface, Pa; rho, kg/m^3; h, m.
    gravity : float
        g, m/s^2.

    Notes
    -----
    Flat layer that moves with the vessel. Waves, bubbles and a base that is not wetted lower the margin; the layer's
    strength in tension is not counted on. A negative value means tension.

    References
    ----------
    Hydrostatics in the vessel's frame.

    Examples
    --------
    >>> float(least_base_pressure(196.133, ambient_pressure=101325.0, density=1410.0, depth=0.03).round(1))
    92613.8
    """
    load = np.asarray(density, np.float64) * depth * (gravity + np.asarray(acceleration, np.float64))
    result: Real = np.asarray(ambient_pressure, np.float64) - load
    return result


def pull_off_acceleration(
    *,
    ambient_pressure: Values,
    vapour_pressure: Values,
    density: Values,
    depth: Values,
    gravity: float = STANDARD_GRAVITY,
) -> Real:
    """Return the peak acceleration at which the base pressure meets the vapour pressure, m/s^2.

    Parameters
    ----------
    ambient_pressure, vapour_pressure : array_like
        Absolute, Pa. For a liquid with dissolved gas take the gas's saturation pressure instead if it is higher.
    density, depth : array_like
        rho, kg/m^3; h, m.
    gravity : float
        g, m/s^2.

    Returns
    -------
    array
        m/s^2; negative where the layer lets go at rest.

    Examples
    --------
    >>> a = pull_off_acceleration(ambient_pressure=101325.0, vapour_pressure=2339.0, density=998.0, depth=0.03)
    >>> float((a / 9.80665).round(1))
    336.1
    """
    room = np.asarray(ambient_pressure, np.float64) - vapour_pressure
    result: Real = room / (np.asarray(density, np.float64) * depth) - gravity
    return result


def ambient_pressure(altitude: Values) -> Real:
    """Return the pressure of the standard atmosphere at an altitude, Pa.

    Parameters
    ----------
    altitude : array_like
        Geopotential altitude above mean sea level, m, from -2000 to 11000.

    Raises
    ------
    InputError
        An altitude is out of that range.

    Notes
    -----
    101325 (1 - 0.0065 z / 288.15)^5.25588. Weather moves it by a few per cent, usually less than 5 % at sea level.

    References
    ----------
    ISO 2533:1975, Standard Atmosphere (from memory; agrees with the `fluids` package).

    Examples
    --------
    >>> float(ambient_pressure(2000.0).round(0))
    79495.0
    """
    z = np.asarray(altitude, np.float64)
    if not np.all((z >= -2000.0) & (z <= 11000.0)):
        raise InputError(f"altitude: {z} m; it must lie between -2000 and 11000 m")
    result: Real = STANDARD_ATMOSPHERE * (1.0 - 0.0065 * z / 288.15) ** 5.25588
    return result


def vapour_pressure_between(
    temperature: Values, *, cold: tuple[float, float], warm: tuple[float, float]
) -> Real:
    """Return the vapour pressure at a temperature from two known points, Pa: ln p linear in 1/T.

    Parameters
    ----------
    temperature : array_like
        K.
    cold, warm : tuple of float
        (temperature, K; vapour pressure, Pa), the first colder than the second.

    Raises
    ------
    InputError
        The points are not in order, or a pressure is not positive.

    Notes
    -----
    Clausius-Clapeyron with a constant enthalpy. The true curve lies above the chord in ln p against 1/T as a rule
    (enthalpy falls on warming), so the value is somewhat low between the points (1 % for water, 20 to 60 degC) and
    somewhat high outside. A pressure from outside the two points is an extrapolation.

    References
    ----------
    Textbook thermodynamics; checked against CoolProp for water and ethanol.

    Examples
    --------
    >>> water = {"cold": (293.15, 2339.3), "warm": (333.15, 19946.0)}
    >>> float((vapour_pressure_between(313.15, **water) / 1e3).round(2))
    7.31
    """
    (t1, p1), (t2, p2) = cold, warm
    if not (0.0 < t1 < t2 and 0.0 < p1 < p2):
        raise InputError(f"vapour pressure points: {cold}, {warm}; temperature and pressure must rise and be above 0")
    enthalpy_over_r = math.log(p2 / p1) / (1.0 / t1 - 1.0 / t2)
    result: Real = p1 * np.exp(enthalpy_over_r * (1.0 / t1 - 1.0 / np.asarray(temperature, np.float64)))
    return result
