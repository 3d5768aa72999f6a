"""How high a shaken bed and single grains rise above the vessel that throws them, and how high a bed heaps."""

from typing import Final

import numpy as np
import numpy.typing as npt

from containment.physics.bed.flight import largest_gap

__all__ = ["GRAIN_KICKS", "bed_rise", "grain_rise_bound", "heap_rise", "surface_throw"]

Real = npt.NDArray[np.float64]
Values = float | Real

GRAIN_KICKS: Final = {"deep": 0.3, "shallow": 0.9}
"""Restitution assumed for a grain that falls back on a deep bed, and on a bed of few layers over a bare base."""


def bed_rise(*, acceleration: float, angular_frequency: float, gravity: float) -> float:
    """Return the largest gap under the bed, by which its surface rises over the vessel, m; 0 where the bed rides.

    Parameters
    ----------
    acceleration, angular_frequency, gravity : float
        Peak, m/s^2; rad/s; m/s^2.

    Notes
    -----
    Completely inelastic bed without gas: gas and wall friction lower it. Loosening of the bed in flight is left out.

    Examples
    --------
    >>> import math
    >>> round(1e3 * bed_rise(acceleration=29.42, angular_frequency=2 * math.pi * 25.0, gravity=9.80665), 2)
    2.83
    """
    return largest_gap(acceleration / gravity) * gravity / angular_frequency**2


def surface_throw(*, velocity: Values, gravity: float) -> Real:
    """Return how high a grain flies that leaves at the base's peak velocity, m: v^2/(2 g).

    Examples
    --------
    >>> float(surface_throw(velocity=0.5, gravity=9.80665).round(5))
    0.01275
    """
    result: Real = np.square(np.asarray(velocity, np.float64)) / (2.0 * gravity)
    return result


def grain_rise_bound(*, velocity: Values, amplitude: Values, restitution: Values, gravity: float) -> Real:
    """Return a bound on how high a grain that bounces on the moving surface rises over the vessel, m.

    Parameters
    ----------
    velocity, amplitude : array_like
        Peak velocity A w, m/s; amplitude A of the base, zero to peak, m.
    restitution : array_like
        Of a grain on the surface, below 1.
    gravity : float
        m/s^2.

    Notes
    -----
    A grain that comes down at u on a surface that rises at A w leaves at e u + (1 + e) A w, so that no speed beyond
    A w (1 + e)/(1 - e) is ever built up. The vessel may be lower by 2 A when the grain is at its highest. Grains that
    are struck by other grains in flight are left out.

    References
    ----------
    Velocity bound: Barroso, Carneiro & Macau (2009), Phys. Rev. E 79, 026206 (abstract read).

    Examples
    --------
    >>> float(grain_rise_bound(velocity=0.5, amplitude=0.003, restitution=0.3, gravity=9.80665).round(4))
    0.05
    """
    e = np.asarray(restitution, np.float64)
    speed = np.asarray(velocity, np.float64) * (1.0 + e) / (1.0 - e)
    result: Real = speed**2 / (2.0 * gravity) + 2.0 * np.asarray(amplitude, np.float64)
    return result


def heap_rise(*, width: Values, angle: Values) -> Real:
    """Return how far a bed that heaps against one wall rises there over its level, m: (width/2) tan(angle).

    Parameters
    ----------
    width, angle : array_like
        Widest horizontal extent, m; angle of repose, rad.

    Notes
    -----
    A shaken heap is flatter than a poured one, so this is a bound. Heaping is driven by the gas that the bed pumps; it
    appears above Gamma = 1 in grains below about 1 mm.

    References
    ----------
    Hsiau & Pan (1998), Powder Technology 96, 219 (opening read: heaping near 1.5 g). Pak, van Doorn & Behringer (1995),
    Phys. Rev. Lett. 74, 4643 (abstract read: above Gamma = 1, ambient gas matters below 1 mm).

    Examples
    --------
    >>> import math
    >>> float(heap_rise(width=0.07, angle=math.radians(30.0)).round(4))
    0.0202
    """
    result: Real = 0.5 * np.asarray(width, np.float64) * np.tan(np.asarray(angle, np.float64))
    return result
