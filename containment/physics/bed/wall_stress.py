"""Stress in a tall bed whose wall carries part of the weight."""

import numpy as np
import numpy.typing as npt

__all__ = ["lateral_stress_ratio", "vertical_stress"]

Real = npt.NDArray[np.float64]
Values = float | Real


def lateral_stress_ratio(friction_angle: Values) -> Real:
    """Return lateral over vertical stress of a bed at rest: 1 - sin(f).

    References
    ----------
    Jaky (1944) (from memory). Stored bulk solids mostly lie between 0.3 and 0.6: Schulze, Stresses in Silos (opening read,
    0.3; upper figure from memory).

    Examples
    --------
    >>> float(lateral_stress_ratio(0.5235988).round(6))
    0.5
    """
    result: Real = 1.0 - np.sin(np.asarray(friction_angle, np.float64))
    return result


def vertical_stress(
    *,
    depth: Values,
    bulk_density: Values,
    perimeter_ratio: Values,
    wall_friction: Values,
    stress_ratio: Values,
    gravity: float,
) -> Real:
    """Return the vertical stress at a depth of a bed at rest, Pa.

    Parameters
    ----------
    depth : array_like
        z below the surface, m.
    bulk_density : array_like
        rho_b, kg/m^3.
    perimeter_ratio : array_like
        Perimeter over area, 1/m; 4/D for a tube.
    wall_friction, stress_ratio : array_like
        Coefficient m of wall friction; lateral over vertical stress K.
    gravity : float
        m/s^2.

    Notes
    -----
    L (1 - exp(-z/L)) rho_b g with L = 1/(m K perimeter_ratio); rho_b g z where the wall is smooth or absent. Shaking wakes
    and turns the wall friction within each stroke: for a shaken bed take rho_b g z (1 + Gamma) as the bound.

    References
    ----------
    Janssen (1895), Z. VDI 39, 1045 (from memory; quoted so in all textbooks).

    Examples
    --------
    >>> s = vertical_stress(
    ...     depth=10.0, bulk_density=1000.0, perimeter_ratio=4.0, wall_friction=0.5, stress_ratio=0.5, gravity=10.0
    ... )
    >>> float(s.round(1))
    9999.5
    """
    rate = np.asarray(perimeter_ratio, np.float64) * wall_friction * stress_ratio
    z = np.asarray(depth, np.float64)
    weight = np.asarray(bulk_density, np.float64) * gravity
    safe = np.where(rate > 0.0, rate, 1.0)
    result: Real = weight * np.where(rate > 0.0, -np.expm1(-safe * z) / safe, z)
    return result
