r"""Flight of a bed over its shaken base: take-off, gap, landing, and the pattern of landings.

The bed moves as one completely inelastic body over a base at A sin(w t). Everything is in units of the drive: phases in
rad, times in 1/w, velocities in g/w, lengths in g/w^2, so that Gamma = A w^2/g and the gas drag alone remain. Over the
base the gap s grows from the launch phase p as

    s'' + D s' = Gamma sin(p + t) - 1,    s(0) = s'(0) = 0,

D = mu/(K rho_b w) being the drag of the gas that has to follow through the pores (0: no gas). The bed lands at the first
return to s = 0. If the base there falls faster than free fall it throws the bed again at once, otherwise the bed rides
until Gamma sin(p) = 1.
"""

import math
from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

__all__ = [
    "FIRST_DOUBLING",
    "UNBROKEN_FLIGHT",
    "Flight",
    "flight",
    "landing_pattern",
    "largest_gap",
    "take_off_gamma",
    "take_off_phase",
    "take_off_velocity",
]

Real = npt.NDArray[np.float64]
Values = float | Real

UNBROKEN_FLIGHT: Final = math.sqrt(1.0 + math.pi**2)
"""Gamma from which a flight lasts a whole period, so that the bed no longer rides between flights: 3.297."""

FIRST_DOUBLING: Final = math.sqrt(4.0 + math.pi**2)
"""Gamma from which long and short flights alternate: 3.724. Flights of one period start at cos(p) = pi/Gamma; a small
change of p is multiplied by 1 - Gamma sin(p) from one landing to the next, which passes -1 there."""

_STEP: Final = 0.05
_LARGEST_GAMMA: Final = 1e4


def take_off_gamma(*, bulk_density: Values, depth: Values, tensile_strength: Values = 0.0, gravity: float) -> Real:
    """Return the Gamma above which a bed leaves its base: 1 + sigma_t/(rho_b g h).

    Parameters
    ----------
    bulk_density, depth : array_like
        rho_b, kg/m^3; h, m.
    tensile_strength : array_like
        Strength sigma_t of the bond between bed and base, Pa; 0 for free-flowing grains.
    gravity : float
        g, m/s^2.

    Notes
    -----
    Wall friction and gas, which delay the take-off, are left out.

    References
    ----------
    Gamma = 1 without cohesion: common practice; with cohesion: force balance.

    Examples
    --------
    >>> float(take_off_gamma(bulk_density=500.0, depth=0.1, tensile_strength=490.3325, gravity=9.80665))
    2.0
    """
    weight = np.asarray(bulk_density, np.float64) * gravity * np.asarray(depth, np.float64)
    result: Real = 1.0 + np.asarray(tensile_strength, np.float64) / weight
    return result


def take_off_phase(gamma: Values) -> Real:
    """Return the phase of the base at which a bed without cohesion leaves it, rad: sin(p) = 1/Gamma; NaN for Gamma < 1.

    Examples
    --------
    >>> float(take_off_phase(2.0).round(6))
    0.523599
    """
    g = np.asarray(gamma, np.float64)
    result: Real = np.where(g >= 1.0, np.arcsin(1.0 / np.maximum(g, 1.0)), np.nan)
    return result


def take_off_velocity(*, acceleration: Values, angular_frequency: Values, gravity: float) -> Real:
    """Return the velocity with which a bed without cohesion leaves the base, m/s: sqrt((A w)^2 - (g/w)^2); 0 for Gamma < 1.

    Examples
    --------
    >>> v = take_off_velocity(acceleration=19.6133, angular_frequency=100.0, gravity=9.80665)
    >>> float(v.round(4))
    0.1699
    """
    a = np.asarray(acceleration, np.float64)
    result: Real = np.sqrt(np.maximum(a * a - gravity * gravity, 0.0)) / np.asarray(angular_frequency, np.float64)
    return result


@dataclass(frozen=True, slots=True, kw_only=True)
class Flight:
    """One flight of a bed, in units of the drive.

    Attributes
    ----------
    launch_phase, duration : float
        Phase of the base at take-off, rad; time in the air times w, rad.
    landing_velocity : float
        Speed with which the bed meets the base, times w/g.
    gap : float
        Largest gap between bed and base, times w^2/g.
    """

    launch_phase: float
    duration: float
    landing_velocity: float
    gap: float


def _gap(gamma: float, phase: float, drag: float, t: Real) -> tuple[Real, Real]:
    """Return the gap and its rate of change at times t after the launch."""
    s0, c0, st, ct = math.sin(phase), math.cos(phase), np.sin(phase + t), np.cos(phase + t)
    if drag == 0.0:
        return gamma * (s0 + c0 * t - st) - 0.5 * t * t, gamma * (c0 - ct) - t
    # particular solution by undetermined coefficients, plus a decaying part that makes s(0) = s'(0) = 0, grouped so that
    # nothing of size 1/drag is left to cancel
    x = drag * t
    eased = -np.expm1(-x) / drag
    small = x < 0.02
    safe = np.where(small, 1.0, x)
    series = 1.0 + x * (-1.0 / 3.0 + x * (1.0 / 12.0 + x * (-1.0 / 60.0 + x * (1.0 / 360.0 - x / 2520.0))))
    fall = 0.5 * t * t * np.where(small, series, 2.0 * (np.expm1(-safe) + safe) / safe**2)
    f = gamma / (1.0 + drag * drag)
    start = c0 - drag * s0
    rate = f * (drag * st - ct + start * np.exp(-x)) - eased
    gap = f * (s0 - st - drag * (ct - c0) + start * eased) - fall
    return gap, rate


def _bisect(gamma: float, phase: float, drag: float, low: float, high: float, which: int) -> float:
    """Return where the gap (which = 0) or its rate (1) changes sign between two times."""
    s0, c0 = math.sin(phase), math.cos(phase)

    def positive(t: float) -> bool:
        if drag > 0.0:
            return bool(_gap(gamma, phase, drag, np.array([t]))[which][0] > 0.0)
        if which == 0:
            return gamma * (s0 + c0 * t - math.sin(phase + t)) - 0.5 * t * t > 0.0
        return gamma * (c0 - math.cos(phase + t)) - t > 0.0

    sign = positive(low)
    for _ in range(50):
        middle = 0.5 * (low + high)
        if positive(middle) == sign:
            low = middle
        else:
            high = middle
    return 0.5 * (low + high)


def _net(gamma: float, phase: float, drag: float, end: float) -> Real:
    """Return the times at which a flight is sampled: a net of 0.05 rad, without what a bound excludes.

    Without drag the gap lies within Gamma of the parabola Gamma (sin p + t cos p) - t^2/2. Where that exceeds Gamma there is
    no landing, and the largest gap is within 2 sqrt(Gamma) of its crest.
    """
    crest = gamma * math.cos(phase)
    reach = crest * crest - 2.0 * gamma * (1.0 - math.sin(phase))
    spans = [(0.0, end)]
    if drag == 0.0 and crest > 0.0 and reach > 0.0:
        half, around = math.sqrt(reach), 2.0 * math.sqrt(gamma)
        if half > around + 20.0:
            spans = [(0.0, crest - half + 1.0), (crest - around - 1.0, crest + around + 1.0), (crest + half - 1.0, end)]
    return np.concatenate([np.arange(1, int((b - a) / _STEP) + 2, dtype=np.float64) * _STEP + a for a, b in spans])


def flight(gamma: float, launch_phase: float | None = None, *, drag: float = 0.0) -> Flight | None:
    """Return the flight that starts at a phase of the base, or None where the base does not throw the bed there.

    Parameters
    ----------
    gamma : float
        A w^2/g, up to 1e4.
    launch_phase : float, optional
        rad; by default where a riding bed takes off, arcsin(1/Gamma).
    drag : float
        D = mu/(K rho_b w) of the gas; 0 without gas, which gives the longest and highest flight.

    Raises
    ------
    ValueError
        Gamma or drag out of range.

    Notes
    -----
    One rigid, completely inelastic body; gas incompressible over a stroke (see `gas_drag.gas_compliance`). The flight is
    found between all minima of the gap, so that a touch of the base is not stepped over.

    References
    ----------
    Mehta, A. & Luck, J. M. (1990), Phys. Rev. Lett. 65, 393 (from memory). Gas: Kroll, W. (1954), Forschung 20, 2; Guerrero,
    Idler & Sanchez (2016), Ind. Eng. Chem. Res. (abstract and opening read: without drag it is the inelastic ball).

    Examples
    --------
    >>> import math
    >>> one = flight(math.sqrt(1.0 + math.pi**2))
    >>> round(one.duration / (2.0 * math.pi), 9), round(one.landing_velocity / math.pi, 9)
    (1.0, 2.0)
    """
    if not 0.0 <= gamma <= _LARGEST_GAMMA or not drag >= 0.0:
        raise ValueError(f"gamma {gamma!r} or drag {drag!r} is out of range")
    if gamma <= 1.0:
        return None
    phase = math.asin(1.0 / gamma) if launch_phase is None else launch_phase % (2.0 * math.pi)
    if gamma * math.sin(phase) < 1.0 - 1e-12:
        return None
    # s <= 2 Gamma + Gamma t - t^2/2 without drag, and drag only shortens the flight
    end = gamma + math.sqrt(gamma * gamma + 4.0 * gamma) + _STEP
    t = _net(gamma, phase, drag, end)
    gap, rate = _gap(gamma, phase, drag, t)
    below = np.flatnonzero(gap <= 0.0)
    last = int(below[0])  # the bound above makes the gap negative within the net
    if last == 0:
        return None  # lifts by less than the net resolves: gap under 1e-6 g/w^2
    low, high = float(t[last - 1]), float(t[last])
    for i in np.flatnonzero((rate[: last - 1] < 0.0) & (rate[1:last] >= 0.0)):
        dip = _bisect(gamma, phase, drag, float(t[i]), float(t[i + 1]), 1)
        if _gap(gamma, phase, drag, np.array([dip]))[0][0] <= 0.0:
            low, high = float(t[i]), dip
            break
    duration = _bisect(gamma, phase, drag, low, high, 0)
    peak = int(np.argmax(np.where(t < duration, gap, 0.0)))
    top = min(float(t[min(peak + 1, len(t) - 1)]), duration)
    crest = _bisect(gamma, phase, drag, float(t[peak - 1]) if peak else 0.2 * _STEP, top, 1)
    return Flight(
        launch_phase=phase,
        duration=duration,
        landing_velocity=-float(_gap(gamma, phase, drag, np.array([duration]))[1][0]),
        gap=max(0.0, float(_gap(gamma, phase, drag, np.array([crest]))[0][0])),
    )


def landing_pattern(gamma: float, *, drag: float = 0.0, most: int = 300) -> tuple[Flight, ...]:
    """Return the flights that repeat once the motion has settled; empty where the bed rides, or where none repeats.

    Parameters
    ----------
    gamma, drag : float
        As in `flight`.
    most : int
        Flights after which the search for a repetition is given up.

    Returns
    -------
    tuple of Flight
        One flight: every landing alike. Two: long and short ones alternate.

    Notes
    -----
    A bed that rides has forgotten its flight, so the flights between two rides repeat exactly. Patterns without a ride
    are taken as repeating when sixteen flights in a row agree with those before to 1e-6 rad.

    Examples
    --------
    >>> [len(landing_pattern(gamma)) for gamma in (0.5, 2.5, 3.5, 4.0)]
    [0, 1, 1, 2]
    """
    flights: list[Flight] = []
    ride = 0
    phase: float | None = None
    for count in range(most):
        one = flight(gamma, phase, drag=drag)
        if one is None and phase is None:
            return ()
        if one is not None:
            flights.append(one)
            landing = one.launch_phase + one.duration
            phase = landing if gamma * math.sin(landing) > 1.0 else None
        else:
            phase = None
        if phase is None:
            if len(flights) > ride and ride:
                return tuple(flights[ride:])
            ride = len(flights)
        elif count % 16 == 15 and len(flights) >= 32:
            recent = [f.duration for f in flights[-32:]]
            for period in (1, 2, 3, 4, 5, 6, 7, 8):
                if all(abs(recent[-i] - recent[-i - period]) < 1e-6 for i in range(1, 17)):
                    alike = max(recent[-period:]) - min(recent[-period:]) < 1e-3  # still closing in on one another
                    return tuple(flights[-1:] if alike else flights[-period:])
    return ()


def largest_gap(gamma: float, *, drag: float = 0.0) -> float:
    """Return the largest gap over any flight, times w^2/g; 0 where the bed rides.

    Notes
    -----
    Without drag a launch at the earliest phase gives the largest gap at every later phase: for a fixed later phase q the
    gap changes with the launch phase p by (q - p)(1 - Gamma sin p), which is never positive where the base throws. So
    this bounds every flight of every pattern. Drag only lowers it.

    Examples
    --------
    >>> largest_gap(0.9), round(largest_gap(2.0), 3)
    (0.0, 2.532)
    """
    one = flight(gamma, drag=drag)
    return 0.0 if one is None else one.gap
