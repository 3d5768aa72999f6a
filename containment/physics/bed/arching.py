"""Arches of grains over an outlet: when one can last, and how much flows before it forms."""

from typing import Final

import numpy as np
import numpy.typing as npt

__all__ = ["ARCH_RATIO", "grains_before_arch", "lasting_arch_outlet", "passes_outlet"]

Real = npt.NDArray[np.float64]
Values = float | Real

ARCH_RATIO: Final = {"spheres": 4.94, "elongated": 6.15}
"""Outlet to grain diameter above which no arch lasted at rest: Zuriguel et al., Phys. Rev. E 71, 051303 (2005), spheres
and rice (abstract read: a finite critical size that depends on shape, not material; figures from memory)."""

_EXPONENT: Final = 6.9
_GRAINS: Final = 9900.0


def passes_outlet(*, outlet: Values, smallest_grain: Values) -> npt.NDArray[np.bool_]:
    """Return whether grains pass: they do once the outlet is wider than the smallest of them.

    Notes
    -----
    Shaken beds flow through outlets down to one grain diameter: Janda et al., Europhys. Lett. 87, 24002 (2009), abstract
    read. A slot counts with its width.

    Examples
    --------
    >>> bool(passes_outlet(outlet=0.5e-3, smallest_grain=1e-3))
    False
    """
    result: npt.NDArray[np.bool_] = np.asarray(outlet, np.float64) >= np.asarray(smallest_grain, np.float64)
    return result


def lasting_arch_outlet(*, diameter: Values, shape: str = "spheres") -> Real:
    """Return the outlet below which grains without cohesion can form an arch that lasts at rest, m.

    Parameters
    ----------
    diameter : array_like
        Grain diameter, m; for mixed sizes the smallest that make up the bed (d10) is the cautious choice.
    shape : {"spheres", "elongated"}
        See `ARCH_RATIO`.

    Raises
    ------
    KeyError
        Another shape.

    Examples
    --------
    >>> float(lasting_arch_outlet(diameter=2e-3).round(5))
    0.00988
    """
    result: Real = ARCH_RATIO[shape] * np.asarray(diameter, np.float64)
    return result


def grains_before_arch(ratio: Values) -> Real:
    """Return how many spheres flow on average before an arch stops them, at rest; infinite above the critical ratio.

    Parameters
    ----------
    ratio : array_like
        Outlet to grain diameter.

    Notes
    -----
    9900 / (4.94 - ratio)^6.9, fitted to spheres between ratios of 2 and 4.7.

    References
    ----------
    Zuriguel et al. (2005), as `ARCH_RATIO` (abstract read: a power law that diverges at a finite size; figures from memory).

    Examples
    --------
    >>> float(grains_before_arch(3.0).round(0))
    102.0
    """
    gap = ARCH_RATIO["spheres"] - np.asarray(ratio, np.float64)
    with np.errstate(over="ignore"):
        result: Real = np.where(gap > 0.0, _GRAINS / np.where(gap > 0.0, gap, 1.0) ** _EXPONENT, np.inf)
    return result
