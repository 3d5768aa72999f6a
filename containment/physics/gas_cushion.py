"""A layer that floats on gas trapped in a vessel closed below: a mass on the gas's spring.

The whole layer then moves by its own amplitude, not the vessel's. Both its faces matter: the lower one hangs, the upper
one lies upright, and each is to be checked at the layer's acceleration. Neither face has a rigid base behind it; a theory
that assumes one is good where k h is above about 2 for the modes that bind.
"""

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY

__all__ = ["compressed_gap", "cushion_pressure", "cushion_resonance", "motion_ratio", "vessel_acceleration"]

Real = npt.NDArray[np.float64]
Values = float | Real


def cushion_pressure(
    *,
    ambient_pressure: Values,
    density: Values,
    depth: Values,
    gravity: float = STANDARD_GRAVITY,
) -> Real:
    """Return the absolute pressure of the gas that carries a layer at rest, Pa: p + rho g h.

    Examples
    --------
    >>> float(cushion_pressure(ambient_pressure=101325.0, density=1000.0, depth=0.05).round(2))
    101815.33
    """
    result: Real = np.asarray(ambient_pressure, np.float64) + gravity * np.asarray(density, np.float64) * depth
    return result


def compressed_gap(
    gap: Values,
    *,
    ambient_pressure: Values,
    density: Values,
    depth: Values,
    exponent: float = 1.0,
    gravity: float = STANDARD_GRAVITY,
) -> Real:
    """Return the height of the trapped gas once the layer rests on it, m.

    Parameters
    ----------
    gap : array_like
        Height of the gas at ambient pressure, m.
    ambient_pressure, density, depth : array_like
        Pa; kg/m^3; m.
    exponent : float
        Polytropic exponent of the filling: 1 when slow (default), the ratio of heat capacities when sudden.

    Notes
    -----
    Straight walls, ideal gas, no leak. It matters where rho g h is not small against the ambient pressure.

    Examples
    --------
    >>> float(compressed_gap(0.1, ambient_pressure=101325.0, density=1000.0, depth=0.5).round(5))
    0.09538
    """
    p = np.asarray(ambient_pressure, np.float64)
    loaded = cushion_pressure(ambient_pressure=p, density=density, depth=depth, gravity=gravity)
    result: Real = np.asarray(gap, np.float64) * (p / loaded) ** (1.0 / exponent)
    return result


def cushion_resonance(
    *,
    pressure: Values,
    density: Values,
    depth: Values,
    gap: Values,
    exponent: float = 1.4,
) -> Real:
    """Return the natural frequency of the layer on its gas, Hz: w_0^2 = n p / (rho h H).

    Parameters
    ----------
    pressure : array_like
        Absolute pressure of the trapped gas, Pa (`cushion_pressure`).
    density, depth : array_like
        rho, kg/m^3, and h, m, of the layer.
    gap : array_like
        Height H of the gas column under load, m (`compressed_gap`).
    exponent : float
        Polytropic exponent of the oscillation: 1.4 for diatomic gas without heat exchange (default), 1 for a thin gap
        whose walls keep it isothermal (the thermal penetration sqrt(2 alpha/w) is 0.4 mm for air at 50 Hz; from memory).

    Notes
    -----
    Rigid layer, amplitude small against the gap, no leak, straight walls without friction.

    References
    ----------
    Ideal-gas spring, as in Apffel, B. et al. (2020), Nature 585, 48-52 (setting; formula from memory).

    Examples
    --------
    >>> float(cushion_resonance(pressure=101815.0, density=1000.0, depth=0.05, gap=0.1).round(1))
    26.9
    """
    stiffness = exponent * np.asarray(pressure, np.float64) / gap
    result: Real = np.sqrt(stiffness / (np.asarray(density, np.float64) * depth)) / (2.0 * np.pi)
    return result


def motion_ratio(frequency: Values, *, resonance: Values, damping_ratio: Values = 0.0) -> Real:
    """Return the amplitude of the layer over that of the vessel: 1 for slow shaking, large at resonance, then falling.

    Parameters
    ----------
    frequency, resonance : array_like
        Drive frequency and natural frequency, Hz.
    damping_ratio : array_like
        Fraction of critical damping between layer and vessel (wall friction, gas losses); 0 gives w0^2/abs(w0^2 - w^2).

    Notes
    -----
    Linear mass on spring and damper, both from the vessel: sqrt((1 + (2 d r)^2) / ((1 - r^2)^2 + (2 d r)^2)), r = w/w0.
    Use damping only if it was measured. Without damping the value at resonance is infinite.

    References
    ----------
    Transmissibility, any textbook of mechanical vibration (Den Hartog; from memory).

    Examples
    --------
    >>> [float(motion_ratio(f, resonance=50.0).round(4)) for f in (5.0, 25.0, 100.0)]
    [1.0101, 1.3333, 0.3333]
    """
    r = np.asarray(frequency, np.float64) / resonance
    loss = (2.0 * np.asarray(damping_ratio, np.float64) * r) ** 2
    below = (1.0 - r * r) ** 2 + loss
    with np.errstate(divide="ignore"):
        result: Real = np.sqrt((1.0 + loss) / below)
    return result


def vessel_acceleration(
    layer_acceleration: Values,
    frequency: Values,
    *,
    resonance: Values,
    damping_ratio: Values = 0.0,
) -> Real:
    """Return the peak acceleration of the vessel that gives the layer its own, m/s^2.

    Examples
    --------
    >>> float(vessel_acceleration(100.0, 25.0, resonance=50.0))
    75.0
    """
    ratio = motion_ratio(frequency, resonance=resonance, damping_ratio=damping_ratio)
    result: Real = np.asarray(layer_acceleration, np.float64) / ratio
    return result
