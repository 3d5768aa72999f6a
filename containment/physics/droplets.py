"""Droplet ejection from a surface that carries waves.

A flat held surface has no crests to shed droplets from: these thresholds speak of waves, and matter where waves exist,
above the upper side of the holding window, on another surface of the same layer, or at a meniscus.
"""

from typing import Final

import numpy as np
import numpy.typing as npt

__all__ = ["droplet_ejection_acceleration"]

Real = npt.NDArray[np.float64]
Values = float | Real

_LOW_VISCOSITY: Final = 0.261
"""Coefficient of (gamma/rho)^(1/3) w^(4/3) (Goodridge et al. 1996, 1997; from memory)."""

_HIGH_VISCOSITY: Final = 1.306
"""Coefficient of sqrt(nu) w^(3/2) (Goodridge et al. 1997; from memory)."""


def droplet_ejection_acceleration(
    frequency: Values,
    *,
    density: Values,
    viscosity: Values,
    surface_tension: Values,
    cautious: bool = True,
) -> Real:
    """Return the peak acceleration at which waves begin to shed droplets, m/s^2.

    Parameters
    ----------
    frequency : array_like
        Drive frequency, Hz.
    density, viscosity, surface_tension : array_like
        rho, kg/m^3; mu, Pa s; gamma, N/m.
    cautious : bool
        Which frequency the w of the formula is: the waves', half of the drive's (True, default: 2.5 to 2.8 times lower
        threshold), or the drive's (False).

    Returns
    -------
    array
        The larger of 0.261 (gamma/rho)^(1/3) w^(4/3), which holds for thin liquids, and 1.306 sqrt(nu) w^(3/2), which
        takes over where w nu^3 (rho/gamma)^2 exceeds about 6e-5.

    Notes
    -----
    Measured on upright layers with capillary waves, 20 to 60 Hz, water to glycerol mixtures (from memory). Whether w is
    the drive's or the waves' could not be settled in the source, which was not at hand: hence the cautious reading. An
    inverted layer was not among the experiments; gravity then helps droplets away.

    References
    ----------
    Goodridge, C. L., Shi, W. T. & Lathrop, D. P. (1996), Phys. Rev. Lett. 76, 1824-1827; Goodridge, C. L., Shi, W. T.,
    Hentschel, H. G. E. & Lathrop, D. P. (1997), Phys. Rev. E 56, 472-475. Coefficients from memory.

    Examples
    --------
    >>> water = {"density": 998.0, "viscosity": 1e-3, "surface_tension": 0.0728}
    >>> float(droplet_ejection_acceleration(50.0, **water, cautious=False).round(1))
    23.3
    """
    w = 2.0 * np.pi * np.asarray(frequency, np.float64) * (0.5 if cautious else 1.0)
    rho = np.asarray(density, np.float64)
    thin = _LOW_VISCOSITY * np.cbrt(surface_tension / rho) * w ** (4.0 / 3.0)
    thick = _HIGH_VISCOSITY * np.sqrt(viscosity / rho) * w**1.5
    result: Real = np.maximum(thin, thick)
    return result
