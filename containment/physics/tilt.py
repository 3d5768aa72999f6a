r"""Slope of the mean surface of a held layer in a tilted vessel.

A vessel tilted by theta adds g sin(theta) along x. Mode by mode the mean surface answers with the amplitude

    zeta_k = g sin(theta) x_k / stiffness,    stiffness = (g - gamma k^2/rho) (a^2/a_low^2 - 1) for a mode that falls,

x_k the part of x that the mode takes; for a mode that stands at rest the static (gamma k^2/rho - g) is taken, without
the vibration's help. Summed at the wall it says how far the surface comes to the rim. Just above a_low the stiffness of
the slowest mode is nearly nothing: a reason to want margin.
"""

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY

__all__ = [
    "annulus_tilt_heights",
    "box_tilt_heights",
    "cylinder_tilt_heights",
    "largest_tilt",
    "mean_stiffness",
    "tilted_rise",
]

Real = npt.NDArray[np.float64]


def cylinder_tilt_heights(wavenumber: npt.ArrayLike, *, radius: float) -> Real:
    """Return the part of x that each mode with one nodal diameter takes, at the wall of a round vessel, m.

    Parameters
    ----------
    wavenumber : array_like
        k = j'(1,n)/R, 1/m.
    radius : float
        R, m.

    Notes
    -----
    2 R / ((kR)^2 - 1); over all n they add up to R. Modes with another number of nodal diameters take none.

    References
    ----------
    Green's identity of x with the mode; sum rule of the zeros of J_1'.

    Examples
    --------
    >>> float(cylinder_tilt_heights(1.8411837813 / 0.035, radius=0.035).round(5))
    0.02929
    """
    kr2 = (np.asarray(wavenumber, np.float64) * radius) ** 2
    result: Real = 2.0 * radius / (kr2 - 1.0)
    return result


def annulus_tilt_heights(wavenumber: npt.ArrayLike, *, inner: float, outer: float) -> Real:
    """Return the part of x that each mode with one nodal diameter takes, at the outer wall of a ring, m.

    Examples
    --------
    >>> float(annulus_tilt_heights(1.8411838 / 0.035, inner=1e-6, outer=0.035).round(5))
    0.02929
    """
    from scipy.special import jv, jvp, yv, yvp  # slow to import, and only a ring needs it

    k = np.asarray(wavenumber, np.float64)
    j_slope, y_slope = jvp(1, k * outer), yvp(1, k * outer)
    f_in, f_out = (jv(1, k * r) * y_slope - yv(1, k * r) * j_slope for r in (inner, outer))
    norm = 0.5 * ((outer**2 - 1.0 / k**2) * f_out**2 - (inner**2 - 1.0 / k**2) * f_in**2)
    result: Real = (outer * f_out - inner * f_in) / k**2 / norm * f_out
    return result


def box_tilt_heights(half_waves: npt.ArrayLike, *, width: float) -> Real:
    """Return the part of x that each mode of p half-waves across takes, at the wall of a box or slot, m.

    Parameters
    ----------
    half_waves : array_like of int
        p; the modes that also vary along the other side take none.
    width : float
        Side along the tilt, m.

    Notes
    -----
    4 W / (pi p)^2 for odd p, 0 for even p; they add up to W/2.

    Examples
    --------
    >>> box_tilt_heights([1, 2, 3], width=0.06).round(6).tolist()
    [0.024317, 0.0, 0.002702]
    """
    p = np.asarray(half_waves, np.float64)
    result: Real = np.where(p % 2 == 1, 4.0 * width / (np.pi * np.where(p > 0, p, 1.0)) ** 2, 0.0)
    return result


def mean_stiffness(
    wavenumber: npt.ArrayLike,
    acceleration: npt.ArrayLike,
    lower: npt.ArrayLike,
    *,
    density: float,
    surface_tension: float,
    gravity: float = STANDARD_GRAVITY,
) -> Real:
    """Return the mean stiffness of held modes over the density, m/s^2; 0 where a mode is not held.

    Parameters
    ----------
    wavenumber : array_like
        k, 1/m.
    acceleration : array_like
        Peak acceleration, m/s^2.
    lower : array_like
        Acceleration from which the mode is held, a_low(k), m/s^2; ignored for modes that stand at rest.
    density, surface_tension, gravity : float
        kg/m^3; N/m; g, m/s^2.

    Notes
    -----
    Leading order of the fast limit, where the mean force grows with a^2; exact at a = a_low, where it vanishes. For
    slow, very viscous modes the growth with a is not quadratic: take it as an estimate.

    References
    ----------
    Landau & Lifshitz, Mechanics, section 30 (fast oscillating field; from memory).

    Examples
    --------
    >>> float(mean_stiffness(50.0, 200.0, 100.0, density=1000.0, surface_tension=0.0))
    29.41995
    """
    k, a = np.asarray(wavenumber, np.float64), np.asarray(acceleration, np.float64)
    falling = gravity - surface_tension * k * k / density
    below = np.where(falling > 0.0, np.asarray(lower, np.float64), 1.0)
    held = falling * np.maximum((a / below) ** 2 - 1.0, 0.0)
    result: Real = np.where(falling > 0.0, held, -falling)
    return result


def tilted_rise(
    heights: npt.ArrayLike, stiffness: npt.ArrayLike, *, tilt: float, gravity: float = STANDARD_GRAVITY
) -> Real:
    """Return how far the mean surface moves at the wall of a tilted vessel, m: towards the rim on the lower side.

    Parameters
    ----------
    heights, stiffness : array_like, shape (..., modes)
        Part of x that each mode takes at the wall, m, and its mean stiffness, m/s^2; summed over the last axis.
    tilt : float
        theta, rad.

    Returns
    -------
    array
        m; infinite where a mode is not held. Spilled when it reaches the rim.

    Notes
    -----
    Linear: slopes well below 1. It counts the modes that are given; the tail of a cut sum is left out, so give the modes
    that fall at rest at least, and some above.

    Examples
    --------
    >>> float(tilted_rise([0.02, 0.002], [10.0, 40.0], tilt=0.01).round(7))
    0.000201
    """
    heights, stiffness = np.broadcast_arrays(np.asarray(heights, np.float64), np.asarray(stiffness, np.float64))
    lost = stiffness <= 0.0
    moved = np.where(lost, np.where(heights == 0.0, 0.0, np.inf), heights / np.where(lost, 1.0, stiffness))
    along = gravity * np.sin(tilt)
    result: Real = along * moved.sum(axis=-1) if along else np.zeros(moved.shape[:-1])
    return result


def largest_tilt(
    heights: npt.ArrayLike, stiffness: npt.ArrayLike, *, freeboard: float, gravity: float = STANDARD_GRAVITY
) -> Real:
    """Return the tilt at which the mean surface reaches the rim, rad; at most a right angle, 0 where nothing is held.

    Parameters
    ----------
    heights, stiffness : array_like, shape (..., modes)
        As for `tilted_rise`.
    freeboard : float
        Distance from the level surface to the rim, m.

    Examples
    --------
    >>> float(np.degrees(largest_tilt([0.02, 0.002], [10.0, 40.0], freeboard=0.005)).round(2))
    14.4
    """
    per_sine = tilted_rise(heights, stiffness, tilt=0.5 * np.pi, gravity=gravity)
    with np.errstate(divide="ignore"):
        result: Real = np.arcsin(np.minimum(freeboard / per_sine, 1.0))
    return result
