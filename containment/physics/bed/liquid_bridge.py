"""Liquid bridges between moist grains: saturation from moisture, force of a bridge, strength of the bed."""

import math
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.errors import NotComputableError

__all__ = ["BRIDGE_SATURATION", "bridge_force", "bridge_strength", "saturation"]

Real = npt.NDArray[np.float64]
Values = float | Real

BRIDGE_SATURATION: Final = 0.3
"""Share of the pores filled up to which separate bridges exist: Rumpf (1962) (from memory)."""


def saturation(*, moisture: Values, particle_density: Values, voidage: Values, liquid_density: float = 998.2) -> Real:
    """Return the share of the pores that the liquid fills.

    Parameters
    ----------
    moisture : array_like
        Mass of liquid over mass of dry grains, on their surface: what the grains soak up does not count.
    particle_density, voidage, liquid_density
        kg/m^3; e; kg/m^3 (water at 20 degC by default).

    Examples
    --------
    >>> float(saturation(moisture=0.02, particle_density=2650.0, voidage=0.4).round(4))
    0.0796
    """
    e = np.asarray(voidage, np.float64)
    solids = (1.0 - e) * np.asarray(particle_density, np.float64)
    result: Real = np.asarray(moisture, np.float64) * solids / (liquid_density * e)
    return result


def bridge_force(*, diameter: Values, surface_tension: Values = 0.0728, contact_angle: float = 0.0) -> Real:
    """Return the force of a small bridge between touching smooth spheres, N: pi d gamma cos(t).

    Notes
    -----
    Nearly independent of the bridge's volume. Roughness lowers it, often tenfold, until the liquid fills the roughness:
    an upper estimate.

    References
    ----------
    Fisher (1926), J. Agric. Sci. 16, 492; textbook capillarity (from memory).

    Examples
    --------
    >>> float((1e6 * bridge_force(diameter=1e-4)).round(1))
    22.9
    """
    result: Real = math.pi * np.asarray(diameter, np.float64) * surface_tension * math.cos(contact_angle)
    return result


def bridge_strength(
    *,
    diameter: float,
    voidage: float,
    moisture: float,
    particle_density: float,
    surface_tension: float = 0.0728,
    contact_angle: float = 0.0,
) -> float:
    """Return the tensile strength of a bed with separate liquid bridges, Pa: (1 - e)/e F/d^2; 0 without moisture.

    Raises
    ------
    NotComputableError
        More liquid than separate bridges hold: the strength first rises, then is lost when the pores fill.

    References
    ----------
    Rumpf (1962) (from memory).

    Examples
    --------
    >>> s = bridge_strength(diameter=1e-4, voidage=0.4, moisture=0.02, particle_density=2650.0)
    >>> round(s)
    3431
    """
    filled = float(saturation(moisture=moisture, particle_density=particle_density, voidage=voidage))
    if filled > BRIDGE_SATURATION:
        raise NotComputableError(
            f"moisture: {moisture:g} fills {100.0 * filled:.0f} % of the pores; separate bridges exist up to "
            f"{100.0 * BRIDGE_SATURATION:.0f} %, and no strength is claimed above"
        )
    if moisture <= 0.0:
        return 0.0
    force = float(bridge_force(diameter=diameter, surface_tension=surface_tension, contact_angle=contact_angle))
    return (1.0 - voidage) / voidage * force / diameter**2
