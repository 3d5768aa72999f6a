r"""Bubbles in a shaken layer: which way they drift, and the gas that gathers at the base of an inverted layer.

The pressure at the distance z from the free surface swings by rho z a; a small bubble's volume answers with
-V rho z a/(n p), in phase, so the mean force per volume is rho^2 z a^2 / (2 n p), away from the free surface. In a layer
that floats on a gas cushion this opposes buoyancy under the upper surface. In an inverted layer buoyancy and vibration
both drive bubbles to the base, where none can leave.
"""

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY

__all__ = [
    "base_gas_resonance",
    "bubble_resonance",
    "bubble_sinking_acceleration",
    "bubble_sinking_distance",
    "drift_force",
    "largest_gas_gap",
    "rise_time_to_base",
]

Real = npt.NDArray[np.float64]
Values = float | Real


def drift_force(
    acceleration: Values,
    *,
    density: Values,
    distance: Values,
    pressure: Values,
    exponent: float = 1.4,
) -> Real:
    """Return the mean force of the vibration on a small bubble over its volume, Pa/m, away from the free surface.

    Parameters
    ----------
    acceleration : array_like
        Peak acceleration of the liquid, m/s^2.
    density, distance : array_like
        rho, kg/m^3; distance z from the free surface, m.
    pressure : array_like
        Mean absolute pressure at the bubble, Pa.
    exponent : float
        Polytropic exponent of the gas: 1.4 adiabatic (default), 1 for bubbles small enough to stay isothermal, which
        makes the force larger.

    Notes
    -----
    Bubbles well below their resonance at the drive frequency (`bubble_resonance`), pressure swing small against the
    pressure, rigid vessel, few bubbles: a bubbly liquid is softer and the pressure swing larger.

    References
    ----------
    Bleich, H. H. (1956), Jet Propulsion 26, 958-964 (from memory); derived anew above.

    Examples
    --------
    >>> float(drift_force(300.0, density=1000.0, distance=0.1, pressure=1.0e5).round(1))
    32142.9
    """
    swing = np.asarray(density, np.float64) * np.asarray(acceleration, np.float64)
    result: Real = swing**2 * distance / (2.0 * exponent * np.asarray(pressure, np.float64))
    return result


def bubble_sinking_acceleration(
    *,
    density: Values,
    distance: Values,
    ambient_pressure: Values,
    exponent: float = 1.0,
    gravity: float = STANDARD_GRAVITY,
) -> Real:
    """Return the peak acceleration above which a small bubble sinks at a depth under an upper free surface, m/s^2.

    Parameters
    ----------
    density, distance : array_like
        rho, kg/m^3; depth z of the bubble under the surface, m. The layer's whole depth gives the lowest threshold.
    ambient_pressure : array_like
        Absolute pressure on that surface, Pa.
    exponent : float
        Polytropic exponent; 1 (default) is the cautious one.

    Notes
    -----
    a^2 = 2 n (p + rho g z) g / (rho z), from `drift_force` against rho g. Range as there.

    References
    ----------
    Bleich, H. H. (1956), Jet Propulsion 26, 958-964 (from memory).

    Examples
    --------
    >>> a = bubble_sinking_acceleration(density=1000.0, distance=0.1, ambient_pressure=101325.0)
    >>> float((a / 9.80665).round(2))
    14.44
    """
    head = np.asarray(density, np.float64) * distance
    result: Real = np.sqrt(2.0 * exponent * gravity * (np.asarray(ambient_pressure, np.float64) / head + gravity))
    return result


def bubble_sinking_distance(
    acceleration: Values,
    *,
    density: Values,
    ambient_pressure: Values,
    exponent: float = 1.0,
    gravity: float = STANDARD_GRAVITY,
) -> Real:
    """Return the depth below which small bubbles sink, m; infinite where none do at any depth.

    Examples
    --------
    >>> float(bubble_sinking_distance(141.65, density=1000.0, ambient_pressure=101325.0).round(4))
    0.1
    """
    a2 = np.asarray(acceleration, np.float64) ** 2
    rest = a2 - 2.0 * exponent * gravity * gravity
    top = 2.0 * exponent * gravity * np.asarray(ambient_pressure, np.float64) / np.asarray(density, np.float64)
    result: Real = np.where(rest > 0.0, top / np.where(rest > 0.0, rest, 1.0), np.inf)
    return result


def bubble_resonance(
    radius: Values, *, density: Values, pressure: Values, exponent: float = 1.4
) -> Real:
    """Return the natural frequency of a bubble, Hz: sqrt(3 n p / rho) / (2 pi r); the drive must lie well below it.

    References
    ----------
    Minnaert, M. (1933), Phil. Mag. 16, 235-248 (from memory). No surface tension, no viscosity.

    Examples
    --------
    >>> float(bubble_resonance(1e-3, density=998.0, pressure=101325.0).round(0))
    3287.0
    """
    p, rho = np.asarray(pressure, np.float64), np.asarray(density, np.float64)
    result: Real = np.sqrt(3.0 * exponent * p / rho) / (2.0 * np.pi * np.asarray(radius, np.float64))
    return result


def rise_time_to_base(
    radius: Values,
    acceleration: Values,
    *,
    density: Values,
    viscosity: Values,
    depth: Values,
    ambient_pressure: Values,
    exponent: float = 1.4,
    gravity: float = STANDARD_GRAVITY,
    clean: bool = True,
) -> Real:
    """Return the time that a bubble takes through an inverted layer to its base, s.

    Parameters
    ----------
    radius : array_like
        Bubble radius r, m.
    acceleration : array_like
        Peak acceleration, m/s^2.
    density, viscosity, depth, ambient_pressure : array_like
        kg/m^3; Pa s; m; Pa.
    clean : bool
        Whether the bubble's surface is mobile: velocity force r^2 / (3 mu) (True, sooner: cautious), or rigid,
        2 force r^2 / (9 mu).

    Notes
    -----
    From half the depth's distance to the surface on: the force per volume is rho g plus the vibration's at z = h/2, the
    bubble starts at the free surface. Creeping motion, Reynolds number 2 r v rho/mu below about 1; for faster bubbles
    the time is too short.

    References
    ----------
    Stokes; Hadamard 1911, Rybczynski 1911 (from memory).

    Examples
    --------
    >>> t = rise_time_to_base(5e-4, 0.0, density=1410.0, viscosity=10.0, depth=0.03, ambient_pressure=101325.0)
    >>> float(t.round(1))
    260.4
    """
    rho, h = np.asarray(density, np.float64), np.asarray(depth, np.float64)
    middle = np.asarray(ambient_pressure, np.float64) - 0.5 * rho * gravity * h
    force = rho * gravity + drift_force(
        acceleration, density=rho, distance=0.5 * h, pressure=middle, exponent=exponent
    )
    share = 1.0 / 3.0 if clean else 2.0 / 9.0
    velocity = share * force * np.asarray(radius, np.float64) ** 2 / np.asarray(viscosity, np.float64)
    result: Real = h / velocity
    return result


def base_gas_resonance(
    gas_gap: Values,
    *,
    density: Values,
    depth: Values,
    ambient_pressure: Values,
    exponent: float = 1.0,
    gravity: float = STANDARD_GRAVITY,
) -> Real:
    """Return the natural frequency of an inverted layer on the gas gathered at its base, Hz: n p / (rho h delta).

    Parameters
    ----------
    gas_gap : array_like
        Thickness delta of the gas spread over the base: its volume over the area, m.
    density, depth, ambient_pressure : array_like
        kg/m^3; m; Pa. The gas is at p - rho g h.
    exponent : float
        Polytropic exponent; a thin film between wall and liquid stays isothermal, 1 (default, softer: cautious).

    Examples
    --------
    >>> float(base_gas_resonance(1e-4, density=1410.0, depth=0.03, ambient_pressure=101325.0).round(0))
    777.0
    """
    rho, h = np.asarray(density, np.float64), np.asarray(depth, np.float64)
    pressure = np.asarray(ambient_pressure, np.float64) - rho * gravity * h
    w2 = exponent * pressure / (rho * h * np.asarray(gas_gap, np.float64))
    result: Real = np.sqrt(w2) / (2.0 * np.pi)
    return result


def largest_gas_gap(
    frequency: Values,
    *,
    amplification: float,
    density: Values,
    depth: Values,
    ambient_pressure: Values,
    exponent: float = 1.0,
    gravity: float = STANDARD_GRAVITY,
) -> Real:
    """Return the thickness of gas at the base up to which the layer moves at most so much more than the vessel, m.

    Parameters
    ----------
    frequency : array_like
        Drive frequency, Hz.
    amplification : float
        Largest ratio of the layer's amplitude to the vessel's, above 1 (1.05: five per cent more).

    Notes
    -----
    From 1 / (1 - (w/w0)^2) <= amplification without damping. Divided by the depth it is the gas fraction that the layer
    may give off: usually well below 1 %.

    Examples
    --------
    >>> gap = largest_gas_gap(50.0, amplification=1.1, density=1410.0, depth=0.03, ambient_pressure=101325.0)
    >>> float((gap * 1e3).round(2))
    2.2
    """
    one = base_gas_resonance(
        1.0, density=density, depth=depth, ambient_pressure=ambient_pressure, exponent=exponent, gravity=gravity
    )
    result: Real = (1.0 - 1.0 / amplification) * (one / np.asarray(frequency, np.float64)) ** 2
    return result
