"""Cohesion of a bed: strengths from one another, the arch over an outlet, grains that hang from the lower face."""

import math

import numpy as np
import numpy.typing as npt

__all__ = [
    "arch_outlet",
    "arch_stress",
    "bond_number",
    "contact_force",
    "arch_shape_factor",
    "tensile_strength",
    "yield_strength_from_cohesion",
]

Real = npt.NDArray[np.float64]
Values = float | Real


def yield_strength_from_cohesion(cohesion: Values, *, friction_angle: Values = 0.0) -> Real:
    """Return the unconfined yield strength of a straight yield locus, Pa: 2 c cos(f)/(1 - sin(f)).

    Parameters
    ----------
    cohesion : array_like
        c, shear strength at no normal stress, Pa.
    friction_angle : array_like
        Angle f of internal friction, rad; 0 gives the least strength, 2 c, whatever the angle is.

    References
    ----------
    Mohr-Coulomb, textbook.

    Examples
    --------
    >>> float(yield_strength_from_cohesion(100.0))
    200.0
    >>> float(yield_strength_from_cohesion(100.0, friction_angle=0.5235988).round(1))
    346.4
    """
    f = np.asarray(friction_angle, np.float64)
    result: Real = 2.0 * np.asarray(cohesion, np.float64) * np.cos(f) / (1.0 - np.sin(f))
    return result


def tensile_strength(yield_strength: Values, *, friction_angle: Values) -> Real:
    """Return the uniaxial tensile strength of a straight yield locus, Pa: sigma_c (1 - sin(f))/(1 + sin(f)).

    Notes
    -----
    The yield locus of a powder bends down towards tension: an estimate, taken low by a high angle. Measure it where it binds.

    References
    ----------
    Mohr-Coulomb, textbook.

    Examples
    --------
    >>> float(tensile_strength(300.0, friction_angle=0.5235988).round(1))
    100.0
    """
    s = np.sin(np.asarray(friction_angle, np.float64))
    result: Real = np.asarray(yield_strength, np.float64) * (1.0 - s) / (1.0 + s)
    return result


def arch_shape_factor(*, slot: bool, half_angle: float = 0.0) -> float:
    """Return the factor H of the arch over an outlet: 2 + t/60 round, 1 + t/180 slot, t the hopper's half angle in degrees.

    Parameters
    ----------
    slot : bool
        Slot, or round outlet.
    half_angle : float
        Between the hopper's wall and the vertical, rad; 0 (default) gives the weakest arch.

    References
    ----------
    Jenike (1964), Utah Bulletin 123, in the straight-line form of textbooks (read in a public course solution).

    Examples
    --------
    >>> arch_shape_factor(slot=False), arch_shape_factor(slot=True)
    (2.0, 1.0)
    """
    degrees = math.degrees(half_angle)
    return 1.0 + degrees / 180.0 if slot else 2.0 + degrees / 60.0


def arch_stress(*, outlet: Values, bulk_density: Values, gamma: Values, shape_factor: float, gravity: float) -> Real:
    """Return the strength that an arch over an outlet needs, Pa: rho_b (1 + Gamma) g B / H.

    Parameters
    ----------
    outlet, bulk_density : array_like
        Diameter or slot width B, m; kg/m^3.
    gamma : array_like
        A w^2/g: the arch moves with the vessel and weighs 1 + Gamma times as much once in each stroke.
    shape_factor : float
        `arch_shape_factor`.
    gravity : float
        m/s^2.

    References
    ----------
    At rest: Jenike (1964). Shaken: force balance in the moving frame, no shock.

    Examples
    --------
    >>> s = arch_stress(outlet=0.1, bulk_density=600.0, gamma=0.0, shape_factor=2.0, gravity=9.80665)
    >>> float(s.round(1))
    294.2
    """
    load = np.asarray(bulk_density, np.float64) * gravity * (1.0 + np.asarray(gamma, np.float64))
    result: Real = load * np.asarray(outlet, np.float64) / shape_factor
    return result


def arch_outlet(*, yield_strength: Values, bulk_density: Values, gamma: Values, shape_factor: float, gravity: float) -> Real:
    """Return the largest outlet over which an arch stands, m: H sigma_c / (rho_b (1 + Gamma) g).

    Parameters
    ----------
    yield_strength : array_like
        Unconfined yield strength sigma_c at the stress that consolidates the arch, Pa.
    bulk_density, gamma, shape_factor, gravity
        As in `arch_stress`.

    References
    ----------
    As `arch_stress`.

    Examples
    --------
    >>> b = arch_outlet(yield_strength=1820.0, bulk_density=900.0, gamma=0.0, shape_factor=2.492, gravity=9.81)
    >>> float(b.round(3))
    0.514
    """
    load = np.asarray(bulk_density, np.float64) * gravity * (1.0 + np.asarray(gamma, np.float64))
    result: Real = shape_factor * np.asarray(yield_strength, np.float64) / load
    return result


def contact_force(tensile: Values, *, diameter: Values, voidage: Values) -> Real:
    """Return the force of one contact behind a tensile strength, N: sigma_t d^2 e/(1 - e).

    Notes
    -----
    Equal spheres packed at random, coordination number near pi/e.

    References
    ----------
    Rumpf (1962), in Knepper, Agglomeration (from memory).

    Examples
    --------
    >>> float(contact_force(100.0, diameter=1e-4, voidage=0.5) * 1e6)
    1.0
    """
    e = np.asarray(voidage, np.float64)
    result: Real = np.asarray(tensile, np.float64) * np.square(np.asarray(diameter, np.float64)) * e / (1.0 - e)
    return result


def bond_number(force: Values, *, diameter: Values, particle_density: Values, gravity: float) -> Real:
    """Return the granular Bond number: the force of one contact over the weight of a grain.

    Notes
    -----
    A grain on the lower face hangs while the Bond number exceeds 1 + Gamma.

    References
    ----------
    Common practice; force balance.

    Examples
    --------
    >>> float(bond_number(1e-6, diameter=1e-4, particle_density=2500.0, gravity=9.80665).round(1))
    77.9
    """
    weight = math.pi / 6.0 * np.asarray(diameter, np.float64) ** 3 * np.asarray(particle_density, np.float64) * gravity
    result: Real = np.asarray(force, np.float64) / weight
    return result
