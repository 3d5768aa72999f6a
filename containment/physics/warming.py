"""Warming of a layer: by its own shear, and by a heated wall."""

import numpy as np
import numpy.typing as npt

__all__ = ["heated_depth", "shear_warming_rate"]

Real = npt.NDArray[np.float64]
Values = float | Real


def shear_warming_rate(
    shear_rate: Values, *, viscosity: Values, density: Values, heat_capacity: Values
) -> Real:
    """Return how fast a liquid warms by its own shear without losses, K/s: eta gamma^2 / (rho c).

    Parameters
    ----------
    shear_rate : array_like
        Root mean square shear rate, 1/s (`containment.physics.generalised_newtonian.surface_shear_rate`).
    viscosity, density, heat_capacity : array_like
        Pa s; kg/m^3; J/(kg K).

    Notes
    -----
    A held layer moves with its vessel like a solid: it shears at the waves and menisci that remain, not as a whole. The
    rate is the largest there can be at that shear; losses to the walls lower it.

    References
    ----------
    Energy balance.

    Examples
    --------
    >>> float(shear_warming_rate(100.0, viscosity=10.0, density=1410.0, heat_capacity=2000.0).round(4))
    0.0355
    """
    rate = np.asarray(shear_rate, np.float64)
    result: Real = viscosity * rate * rate / (np.asarray(density, np.float64) * heat_capacity)
    return result


def heated_depth(
    time: Values, *, thermal_conductivity: Values, density: Values, heat_capacity: Values
) -> Real:
    """Return how deep the warmth of a heated wall has reached after a time, m: 2 sqrt(alpha t).

    Parameters
    ----------
    time : array_like
        s.
    thermal_conductivity, density, heat_capacity : array_like
        W/(m K); kg/m^3; J/(kg K).

    Notes
    -----
    Where erfc(1) = 16 % of the wall's step in temperature is felt; conduction into a half space, no convection. A layer
    that hangs from a hot base is stably stratified, one over a hot wall below is not.

    References
    ----------
    Carslaw & Jaeger, Conduction of Heat in Solids, chapter 2 (from memory).

    Examples
    --------
    >>> depth = heated_depth(60.0, thermal_conductivity=0.3, density=1261.0, heat_capacity=2400.0)
    >>> float((1e3 * depth).round(2))
    4.88
    """
    diffusivity = thermal_conductivity / (np.asarray(density, np.float64) * heat_capacity)
    result: Real = 2.0 * np.sqrt(diffusivity * np.asarray(time, np.float64))
    return result
