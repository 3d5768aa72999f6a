r"""A bed that hangs in its vessel as a plug, by the shear that a cohesive material passes to the wall.

Free-flowing grains cannot do it: at a free lower face nothing presses them against the wall, so that friction has nothing
to act on. A cohesive plug arches from wall to wall: the major stress sigma_c of the arch meets the wall under an angle b
and passes the shear (sigma_c/2) sin(2 b) at the normal stress sigma_c cos^2(b), so the wall's friction has to bear
tan(b). The shear is largest at b = 45 degrees; a smoother wall limits b to its own friction angle.
"""

from typing import TYPE_CHECKING

import numpy as np
import numpy.typing as npt

if TYPE_CHECKING:
    from collections.abc import Callable

__all__ = ["perimeter_over_area", "plug_gamma", "plug_load", "wall_shear_strength"]

Real = npt.NDArray[np.float64]
Values = float | Real


def wall_shear_strength(yield_strength: Values, *, wall_friction: Values) -> Real:
    """Return the shear that a cohesive arch passes to the wall at most, Pa.

    Parameters
    ----------
    yield_strength : array_like
        Unconfined yield strength sigma_c, Pa.
    wall_friction : array_like
        Coefficient m of friction on the wall.

    Returns
    -------
    numpy.ndarray
        sigma_c m/(1 + m^2) for m up to 1, sigma_c/2 above.

    Notes
    -----
    Wall adhesion without normal stress is left out. For a rough wall the plug's limit is the arch of a round opening,
    H = 2, or of a slot, H = 1 (`cohesion.arch_outlet`), as it must be.

    References
    ----------
    Stress in an arch between vertical walls, derived above; after Walker (1966), Chem. Eng. Sci. 21, 975 (abstract read:
    arching with the limited shear of a smooth wall).

    Examples
    --------
    >>> float(wall_shear_strength(1000.0, wall_friction=0.5)), float(wall_shear_strength(1000.0, wall_friction=2.0))
    (400.0, 500.0)
    """
    m = np.minimum(np.asarray(wall_friction, np.float64), 1.0)
    result: Real = np.asarray(yield_strength, np.float64) * m / (1.0 + m * m)
    return result


def perimeter_over_area(shape: str, *sizes: float) -> float:
    """Return wetted perimeter over area of a vessel's section, 1/m; 0 for an unbounded layer.

    Parameters
    ----------
    shape : {"cylinder", "box", "annulus", "slot", "unbounded"}
        Kind of section.
    *sizes : float
        Diameter; width and length; inner and outer diameter; width, m.

    Examples
    --------
    >>> perimeter_over_area("cylinder", 0.05), perimeter_over_area("slot", 0.05)
    (80.0, 40.0)
    """
    ratios: dict[str, Callable[..., float]] = {
        "cylinder": lambda d: 4.0 / d,
        "box": lambda w, length: 2.0 * (w + length) / (w * length),
        "annulus": lambda inner, outer: 4.0 / (outer - inner),
        "slot": lambda w: 2.0 / w,
        "unbounded": lambda: 0.0,
    }
    return float(ratios[shape](*sizes))


def plug_load(*, bulk_density: Values, gamma: Values, perimeter_ratio: Values, gravity: float) -> Real:
    """Return the wall shear that carries a plug, Pa: rho_b (1 + Gamma) g / (perimeter over area).

    Parameters
    ----------
    bulk_density, gamma : array_like
        kg/m^3; A w^2/g.
    perimeter_ratio : array_like
        `perimeter_over_area`, 1/m, above 0.
    gravity : float
        m/s^2.

    Notes
    -----
    For a tube of diameter D: 4 tau_w/D = rho_b (1 + Gamma) g. It does not depend on the length of the plug, as long as
    that is at least half the width (see `below_arch.shallow_factor`).

    References
    ----------
    Force balance.

    Examples
    --------
    >>> float(plug_load(bulk_density=600.0, gamma=1.0, perimeter_ratio=80.0, gravity=9.80665).round(2))
    147.1
    """
    load = np.asarray(bulk_density, np.float64) * gravity * (1.0 + np.asarray(gamma, np.float64))
    result: Real = load / np.asarray(perimeter_ratio, np.float64)
    return result


def plug_gamma(*, shear_strength: Values, bulk_density: Values, perimeter_ratio: Values, gravity: float) -> Real:
    """Return the Gamma up to which the wall carries a plug; negative where it does not at rest.

    Examples
    --------
    >>> float(plug_gamma(shear_strength=147.09975, bulk_density=600.0, perimeter_ratio=80.0, gravity=9.80665).round(9))
    1.0
    """
    rest = np.asarray(bulk_density, np.float64) * gravity
    result: Real = np.asarray(shear_strength, np.float64) * np.asarray(perimeter_ratio, np.float64) / rest - 1.0
    return result
