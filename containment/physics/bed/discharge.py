"""Discharge of a bed through an outlet: rate of free-flowing grains, corrections that have a source, time to empty."""

from typing import Final

import numpy as np
import numpy.typing as npt

__all__ = ["SHAKEN_FACTOR", "discharge_rate", "pressure_factor", "slot_discharge_rate"]

Real = npt.NDArray[np.float64]
Values = float | Real

SHAKEN_FACTOR: Final = 1.0
"""Rate of a gently shaken bed over that at rest: Janda et al., Europhys. Lett. 87, 24002 (2009), abstract read: vibration
does not change the rate to speak of, in the continuous as in the intermittent regime."""

_RATE: Final = 0.58
_EMPTY_RIM: Final = 1.4
_SLOT_RATE: Final = 1.03


def discharge_rate(
    *,
    outlet: Values,
    diameter: Values,
    bulk_density: Values,
    gravity: float,
    rate_coefficient: float = _RATE,
    rim_coefficient: float = _EMPTY_RIM,
) -> Real:
    """Return the rate through a round outlet, kg/s: C rho_b sqrt(g) (D - k d)^(5/2); 0 below k d.

    Parameters
    ----------
    outlet, diameter : array_like
        D and grain diameter d, m.
    bulk_density : array_like
        rho_b, kg/m^3.
    gravity : float
        m/s^2.
    rate_coefficient, rim_coefficient : float
        C (0.55 to 0.65) and k (1.4 to about 3, the more the less round the grains).

    Notes
    -----
    For grains above about 0.4 mm (finer ones flow slower, against their own gas), D above 6 d, a bed wider than 2.5 D and
    than D + 30 d, and higher than 1.2 times its width. Small outlets flow slower than this.

    References
    ----------
    Beverloo, Leniger & van de Velde (1961), Chem. Eng. Sci. 15, 260 (coefficients from memory). Ranges: Mankoc et al.
    (2007), Granular Matter 9, 407 (read).

    Examples
    --------
    >>> w = discharge_rate(outlet=0.02, diameter=0.001, bulk_density=1500.0, gravity=9.80665)
    >>> float(w.round(3))
    0.129
    """
    clear = np.maximum(np.asarray(outlet, np.float64) - rim_coefficient * np.asarray(diameter, np.float64), 0.0)
    result: Real = rate_coefficient * np.asarray(bulk_density, np.float64) * gravity**0.5 * clear**2.5
    return result


def slot_discharge_rate(
    *,
    width: Values,
    length: Values,
    diameter: Values,
    bulk_density: Values,
    gravity: float,
    rim_coefficient: float = _EMPTY_RIM,
) -> Real:
    """Return the rate through a slot, kg/s: 1.03 rho_b sqrt(g) (L - k d)(W - k d)^(3/2); 0 below k d.

    Parameters
    ----------
    width, length : array_like
        W and L > W, m. A length of 1 m gives the rate per metre nearly.
    diameter, bulk_density, gravity, rim_coefficient
        As in `discharge_rate`.

    References
    ----------
    Myers & Sellers; Nedderman (1992), Statics and Kinematics of Granular Materials (from memory).

    Examples
    --------
    >>> w = slot_discharge_rate(width=0.02, length=0.1, diameter=0.001, bulk_density=1500.0, gravity=9.80665)
    >>> float(w.round(3))
    1.21
    """
    rim = rim_coefficient * np.asarray(diameter, np.float64)
    across = np.maximum(np.asarray(width, np.float64) - rim, 0.0)
    along = np.maximum(np.asarray(length, np.float64) - rim, 0.0)
    result: Real = _SLOT_RATE * np.asarray(bulk_density, np.float64) * gravity**0.5 * along * across**1.5
    return result


def pressure_factor(*, pressure_gradient: Values, bulk_density: Values, gravity: float) -> Real:
    """Return the rate with gas flowing through the outlet over that without: sqrt(1 + (dp/dz)/(rho_b g)).

    Parameters
    ----------
    pressure_gradient : array_like
        Pressure gradient of the gas at the outlet, Pa/m; positive where the gas leaves with the grains.
    bulk_density : array_like
        kg/m^3.
    gravity : float
        m/s^2.

    Returns
    -------
    numpy.ndarray
        0 where the gas that enters carries the grains: the outlet is choked.

    References
    ----------
    Crewdson, Ormond & Nedderman (1977), Powder Technology 16, 197 (from memory).

    Examples
    --------
    >>> float(pressure_factor(pressure_gradient=-14709.975, bulk_density=1500.0, gravity=9.80665))
    0.0
    """
    weight = np.asarray(bulk_density, np.float64) * gravity
    result: Real = np.sqrt(np.maximum(1.0 + np.asarray(pressure_gradient, np.float64) / weight, 0.0))
    return result
