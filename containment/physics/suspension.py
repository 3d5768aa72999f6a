"""Viscosity and density of a suspension of solids in a liquid, from the volume fraction of solids."""

import numpy as np
import numpy.typing as npt

from containment.errors import InputError

__all__ = ["EINSTEIN", "LARGEST_SHARE", "suspension_density", "suspension_viscosity", "viscosity_sensitivity"]

Real = npt.NDArray[np.float64]

EINSTEIN = 2.5
"""Intrinsic viscosity of rigid spheres (Einstein 1906, corrected 1911; from memory)."""

LARGEST_SHARE = 0.9
"""Solids over closest packing up to which the law is used: nearer to it the suspension jams and has a yield stress."""


def _share(solids: npt.ArrayLike, max_packing: npt.ArrayLike) -> tuple[Real, Real]:
    phi, packed = np.asarray(solids, np.float64), np.asarray(max_packing, np.float64)
    if not np.all((packed > 0.0) & (packed <= 1.0)):
        raise InputError(f"max packing: {_first(packed)} is not allowed; expected above 0 and at most 1, such as 0.64")
    if not np.all((phi >= 0.0) & (phi <= LARGEST_SHARE * packed)):
        raise InputError(
            f"solids: {_first(phi)} is not allowed; expected from 0 to {LARGEST_SHARE:g} of the closest packing, "
            f"here {LARGEST_SHARE * float(packed.min()):.3g}: beyond it the suspension jams"
        )
    return phi, packed


def _first(values: Real) -> str:
    return f"{float(values.flat[0]):g}"


def suspension_viscosity(
    liquid_viscosity: npt.ArrayLike,
    *,
    solids: npt.ArrayLike,
    max_packing: npt.ArrayLike,
    intrinsic: float = EINSTEIN,
) -> Real:
    """Return the viscosity of a suspension of hard particles that do not attract each other.

    Parameters
    ----------
    liquid_viscosity : array_like
        mu of the liquid, Pa s.
    solids : array_like
        phi, volume of solids over volume of suspension.
    max_packing : array_like
        phi_m, the volume fraction at which the particles jam: 0.58 to 0.64 for spheres of one size, more for a wide spread of
        sizes, less for flakes and fibres.
    intrinsic : float
        [eta]; 2.5 for spheres, 3 to 5 for grains with corners.

    Returns
    -------
    array
        mu (1 - phi/phi_m)^(-[eta] phi_m), Pa s, of the broadcast shape.

    Raises
    ------
    InputError
        phi above 0.9 phi_m or below 0, phi_m outside 0 to 1, an intrinsic viscosity below 1.

    Notes
    -----
    Meant for particles well above 1 um that neither attract each other nor settle while it matters, at low rates of shear.
    From phi of about 0.3 real suspensions thin with shear; from about 0.5 they may have a yield stress: measure them.

    References
    ----------
    I. M. Krieger, T. J. Dougherty, Trans. Soc. Rheol. 3 (1959) 137-152 (from memory).

    Examples
    --------
    >>> round(float(suspension_viscosity(1.0, solids=0.35, max_packing=0.64)), 2)
    3.55
    """
    phi, packed = _share(solids, max_packing)
    if not 1.0 <= intrinsic <= 100.0:
        raise InputError(f"intrinsic viscosity: {intrinsic:g} is not allowed; expected 1 to 100, 2.5 for spheres")
    result: Real = np.asarray(liquid_viscosity, np.float64) * (1.0 - phi / packed) ** (-intrinsic * packed)
    return result


def viscosity_sensitivity(
    *, solids: npt.ArrayLike, max_packing: npt.ArrayLike, intrinsic: float = EINSTEIN
) -> tuple[Real, Real]:
    """Return how the logarithm of the viscosity moves with the solids and with the closest packing.

    Returns
    -------
    tuple of two arrays
        d ln mu / d phi and d ln mu / d phi_m.

    Examples
    --------
    >>> by_solids, by_packing = viscosity_sensitivity(solids=0.35, max_packing=0.64)
    >>> round(float(by_solids), 2), round(float(by_packing), 2)
    (5.52, -1.04)
    """
    phi, packed = _share(solids, max_packing)
    left = 1.0 - phi / packed
    by_solids: Real = intrinsic / left
    by_packing: Real = -intrinsic * (np.log(left) + phi / (packed * left))
    return by_solids, by_packing


def suspension_density(
    liquid_density: npt.ArrayLike, *, particle_density: npt.ArrayLike, solids: npt.ArrayLike
) -> Real:
    """Return the density of a suspension: (1 - phi) rho_liquid + phi rho_particle, kg/m^3.

    Raises
    ------
    InputError
        A fraction outside 0 to 1, or a density that is not positive.

    Examples
    --------
    >>> float(suspension_density(1000.0, particle_density=2500.0, solids=0.4))
    1600.0
    """
    phi = np.asarray(solids, np.float64)
    liquid, particle = np.asarray(liquid_density, np.float64), np.asarray(particle_density, np.float64)
    if not np.all((phi >= 0.0) & (phi < 1.0)):
        raise InputError(f"solids: {_first(phi)} is not allowed; expected 0 to 1")
    if not (np.all(liquid > 0.0) and np.all(particle > 0.0)):
        raise InputError("density: not allowed; that of the liquid and of the particles must be above 0")
    result: Real = (1.0 - phi) * liquid + phi * particle
    return result
