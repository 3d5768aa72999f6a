r"""Shear-thinning and yield-stress products: viscosity curves, the shear rate that a layer sees, the plug in a tube.

The exact theory is linear and needs one viscosity. A layer that is held lies at rest in its vessel, so an infinitesimal
disturbance sees the viscosity at zero shear rate (infinite for a power law or a yield stress); a disturbance of
amplitude zeta sees a lower one where the product thins. Both ends are evaluated:

    slowest  gamma = shear rate of a slow fall or of nothing at all    ->  eta_high
    fastest  gamma = shear rate of the surface moving at the drive     ->  eta_low

and the window is computed at both. Between them the window is expected, not proven, to lie between the two: the lower
side usually rises with the viscosity (take it at eta_high) and the upper side too (take it at eta_low). Thixotropy and
ageing are not in these curves.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import InputError, NotComputableError

__all__ = [
    "Carreau",
    "Cross",
    "HerschelBulkley",
    "PowerLaw",
    "ViscosityCurve",
    "consistent_viscosity",
    "plug_acceleration",
    "plug_yield_stress",
    "surface_shear_rate",
]

Real = npt.NDArray[np.float64]


class ViscosityCurve(Protocol):
    """A viscosity that depends on the shear rate, monotonically."""

    def viscosity(self, shear_rate: npt.ArrayLike) -> Real:
        """Return eta, Pa s, at a shear rate, 1/s."""
        ...


def _check(**values: float) -> None:
    for name, value in values.items():
        if not 0.0 <= value < np.inf:
            raise InputError(f"{name.replace('_', ' ')}: {value}; it must be 0 or more and finite")


@dataclass(frozen=True, slots=True, kw_only=True)
class Carreau:
    """eta = eta_inf + (eta_0 - eta_inf) [1 + (lambda gamma)^2]^((n - 1)/2).

    References
    ----------
    Carreau, P. J. (1972), Trans. Soc. Rheol. 16, 99-127 (from memory).

    Examples
    --------
    >>> float(Carreau(zero_shear=10.0, infinite_shear=0.1, time=1.0, index=0.5).viscosity(0.0))
    10.0
    """

    zero_shear: float
    infinite_shear: float
    time: float
    index: float

    def __post_init__(self) -> None:
        _check(zero_shear=self.zero_shear, infinite_shear=self.infinite_shear, time=self.time, index=self.index)

    def viscosity(self, shear_rate: npt.ArrayLike) -> Real:
        """Return eta, Pa s, at a shear rate, 1/s."""
        rate = self.time * np.abs(np.asarray(shear_rate, np.float64))
        result: Real = self.infinite_shear + (self.zero_shear - self.infinite_shear) * (1.0 + rate * rate) ** (
            0.5 * (self.index - 1.0)
        )
        return result


@dataclass(frozen=True, slots=True, kw_only=True)
class Cross:
    """eta = eta_inf + (eta_0 - eta_inf) / [1 + (lambda gamma)^m].

    References
    ----------
    Cross, M. M. (1965), J. Colloid Sci. 20, 417-437 (from memory).

    Examples
    --------
    >>> float(Cross(zero_shear=10.0, infinite_shear=0.0, time=2.0, exponent=1.0).viscosity(0.5))
    5.0
    """

    zero_shear: float
    infinite_shear: float
    time: float
    exponent: float

    def __post_init__(self) -> None:
        _check(
            zero_shear=self.zero_shear, infinite_shear=self.infinite_shear, time=self.time, exponent=self.exponent
        )

    def viscosity(self, shear_rate: npt.ArrayLike) -> Real:
        """Return eta, Pa s, at a shear rate, 1/s."""
        rate = self.time * np.abs(np.asarray(shear_rate, np.float64))
        result: Real = self.infinite_shear + (self.zero_shear - self.infinite_shear) / (1.0 + rate**self.exponent)
        return result


@dataclass(frozen=True, slots=True, kw_only=True)
class HerschelBulkley:
    """eta = tau_y / gamma + K gamma^(n - 1): infinite at rest where there is a yield stress or n < 1.

    References
    ----------
    Herschel, W. H. & Bulkley, R. (1926), Kolloid-Z. 39, 291-300 (from memory).

    Examples
    --------
    >>> float(HerschelBulkley(yield_stress=20.0, consistency=3.0, index=1.0).viscosity(10.0))
    5.0
    """

    yield_stress: float
    consistency: float
    index: float

    def __post_init__(self) -> None:
        _check(yield_stress=self.yield_stress, consistency=self.consistency, index=self.index)

    def viscosity(self, shear_rate: npt.ArrayLike) -> Real:
        """Return eta, Pa s, at a shear rate, 1/s."""
        rate = np.abs(np.asarray(shear_rate, np.float64))
        with np.errstate(divide="ignore"):
            result: Real = self.consistency * rate ** (self.index - 1.0)
            if self.yield_stress:
                result = result + self.yield_stress / rate
        return result


@dataclass(frozen=True, slots=True, kw_only=True)
class PowerLaw:
    """eta = K gamma^(n - 1): a fit over a range of rates, not to be trusted outside it.

    Examples
    --------
    >>> float(PowerLaw(consistency=3.0, index=0.5).viscosity(9.0))
    1.0
    """

    consistency: float
    index: float

    def __post_init__(self) -> None:
        _check(consistency=self.consistency, index=self.index)

    def viscosity(self, shear_rate: npt.ArrayLike) -> Real:
        """Return eta, Pa s, at a shear rate, 1/s."""
        return HerschelBulkley(yield_stress=0.0, consistency=self.consistency, index=self.index).viscosity(shear_rate)


def surface_shear_rate(
    amplitude: npt.ArrayLike,
    rate: npt.ArrayLike,
    resistance: npt.ArrayLike,
    *,
    wavenumber: npt.ArrayLike,
    viscosity: npt.ArrayLike,
    depth: npt.ArrayLike,
) -> Real:
    r"""Return the shear rate of a layer whose surface moves, 1/s.

    Parameters
    ----------
    amplitude : array_like
        Amplitude zeta of the surface, m.
    rate : array_like
        abs(s): angular frequency of the motion or growth rate of a fall, 1/s.
    resistance : array_like
        Re Z(s; k) of the layer at that s with that viscosity, Pa s/m.
    wavenumber, viscosity, depth : array_like
        k, 1/m; eta, Pa s; h, m.

    Returns
    -------
    array
        Shear rate, 1/s.

    Notes
    -----
    The power per area that the surface feeds in, Re Z abs(s zeta)^2 / 4 in the mean over time and place, is dissipated
    as eta times the squared shear rate; the value is the root mean square if all of it is dissipated within the smaller
    of h and 1/k. Some is dissipated beyond, and the shear gathers in part of that depth (boundary layers at high
    frequency): as a mean it is an upper bound, against the largest local rate, where thinning goes furthest, an estimate.

    Examples
    --------
    Deep, slow: Re Z = 2 mu k, so the rate is k abs(s) zeta (a factor sqrt(2) less for the mean over place).

    >>> float(surface_shear_rate(1e-3, 300.0, 2 * 1.0 * 100.0, wavenumber=100.0, viscosity=1.0, depth=1.0).round(2))
    21.21
    """
    k, zeta = np.asarray(wavenumber, np.float64), np.asarray(amplitude, np.float64)
    moving = np.minimum(depth, 1.0 / k)
    power = 0.25 * np.asarray(resistance, np.float64) * (np.asarray(rate, np.float64) * zeta) ** 2
    result: Real = np.sqrt(power / (np.asarray(viscosity, np.float64) * moving))
    return result


def consistent_viscosity(
    curve: ViscosityCurve, shear_rate: Callable[[float], float], *, lowest: float = 1e-7, highest: float = 1e9
) -> float:
    """Return the viscosity that is its own: eta at the shear rate that the layer sees with that viscosity.

    Parameters
    ----------
    curve : ViscosityCurve
        Viscosity against shear rate.
    shear_rate : callable
        Shear rate, 1/s, that the layer sees with a given viscosity, Pa s; not rising with it.
    lowest, highest : float
        Range that is searched, Pa s.

    Raises
    ------
    NotComputableError
        No viscosity in the range is consistent: the product solidifies at that motion (power law, yield stress) or
        thins without end.

    Notes
    -----
    Bisection in the logarithm to 1e-12. Where the curve thins faster than the rate falls there may be several answers:
    the one returned then depends on the range; ask for both ends.

    Examples
    --------
    >>> curve = Cross(zero_shear=8.0, infinite_shear=0.0, time=1.0, exponent=1.0)
    >>> round(consistent_viscosity(curve, lambda eta: 3.0), 9)
    2.0
    """

    def excess(log_eta: float) -> float:
        eta = float(np.exp(log_eta))
        return float(curve.viscosity(shear_rate(eta))) - eta

    low, high = float(np.log(lowest)), float(np.log(highest))
    if not (excess(low) > 0.0 > excess(high)):
        raise NotComputableError(
            f"viscosity at the layer's own shear rate: none between {lowest:g} and {highest:g} Pa s is consistent; the "
            "product acts as a solid at this motion, or thins without end"
        )
    while high - low > 1e-12 * max(1.0, abs(low)):
        middle = 0.5 * (low + high)
        if middle in (low, high):
            break
        if excess(middle) > 0.0:
            low = middle
        else:
            high = middle
    return float(np.exp(0.5 * (low + high)))


def plug_yield_stress(
    acceleration: npt.ArrayLike, *, density: float, radius: float, gravity: float = STANDARD_GRAVITY
) -> Real:
    """Return the yield stress that a plug needs to stay in an open tube by itself, Pa: rho (g + a) R/2.

    Parameters
    ----------
    acceleration : array_like
        Peak acceleration of the tube, m/s^2; 0 at rest.
    density, radius, gravity : float
        rho, kg/m^3; R, m; g, m/s^2.

    Notes
    -----
    The weight of a length L, pi R^2 L rho (g + a), against the wall's shear, 2 pi R L tau_y: exact for a plug that does
    not slip. Shaking only adds to the load. Slip at a wet wall, vibration that breaks the structure and creep below
    the yield stress all weaken it.

    References
    ----------
    Force balance. Common practice.

    Examples
    --------
    >>> float(plug_yield_stress(0.0, density=1200.0, radius=0.01).round(2))
    58.84
    """
    result: Real = 0.5 * density * radius * (gravity + np.asarray(acceleration, np.float64))
    return result


def plug_acceleration(
    yield_stress: npt.ArrayLike, *, density: float, radius: float, gravity: float = STANDARD_GRAVITY
) -> Real:
    """Return the largest peak acceleration at which a plug still stays, m/s^2; negative where it falls at rest.

    Examples
    --------
    >>> float(plug_acceleration(117.6798, density=1200.0, radius=0.01).round(4))
    9.8066
    """
    result: Real = 2.0 * np.asarray(yield_stress, np.float64) / (density * radius) - gravity
    return result
