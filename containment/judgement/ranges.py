"""Over which viscosity and temperature a drive point still holds, and which classes of drives could do a job."""

import dataclasses
import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Final

import numpy as np

from containment.errors import InputError
from containment.given.drive import DriveLimits
from containment.given.liquid import Liquid, liquid_at
from containment.judgement.case import Case
from containment.judgement.window import HoldingWindow

__all__ = ["DriveChoice", "HeldOver", "drives_that_could", "held_over"]

_WIDEST: Final = 100.0
_STEP: Final = 1.5
_HALVINGS: Final = 6
_TEMPERATURES: Final = 9


@dataclass(frozen=True, slots=True, kw_only=True)
class HeldOver:
    """Ranges over which a drive point lies between the edges.

    Attributes
    ----------
    viscosity : tuple of float
        Pa s, all else unchanged; searched to a hundredth and to a hundredfold.
    temperature : tuple of float or None
        K, all properties following the table; None where the liquid is not from the table or was overridden.
    """

    viscosity: tuple[float, float]
    temperature: tuple[float, float] | None

    def to_dict(self) -> dict[str, Any]:
        """Return the ranges as plain JSON types."""
        return {
            "viscosity_Pa_s": list(self.viscosity),
            "temperature_K": list(self.temperature) if self.temperature else None,
        }


def held_over(case: Case, *, frequency: float, acceleration: float) -> HeldOver:
    """Return the ranges of viscosity and temperature over which a point that holds (Hz, peak m/s^2) still holds."""

    def inside(liquid: Liquid) -> bool:
        edges = dataclasses.replace(case, liquid=liquid).edges(np.array([frequency]))
        return bool(edges.lower[0] < acceleration < edges.upper[0])

    def at_viscosity(value: float) -> bool:
        return inside(dataclasses.replace(case.liquid, viscosity=value))

    mu = case.liquid.viscosity
    thin = _walked(at_viscosity, mu, 1.0 / _STEP, mu / _WIDEST)
    thick = _walked(at_viscosity, mu, _STEP, mu * _WIDEST)
    return HeldOver(viscosity=(thin, thick), temperature=_temperatures(case, inside))


def _walked(holds: Callable[[float], bool], start: float, factor: float, end: float) -> float:
    """Walk away from a value that holds by a factor, then halve the last step; return the last value that holds."""
    good = start
    while (good < end) if factor > 1.0 else (good > end):
        value = good * factor
        if not holds(value):
            bad = value
            for _ in range(_HALVINGS):
                middle = math.sqrt(good * bad)
                good, bad = (middle, bad) if holds(middle) else (good, middle)
            return good
        good = value
    return good


def _temperatures(case: Case, inside: Callable[[Liquid], bool]) -> tuple[float, float] | None:
    now = case.liquid.temperature
    if case.liquid.entry is None or now is None:
        return None
    low, high = case.liquid.entry.range_K

    def holds(kelvin: float) -> bool:
        try:
            return inside(liquid_at(case.liquid.entry, kelvin))
        except InputError:  # outside the range of a property
            return False

    ends = []
    for end in (low, high):
        good, bad = now, None
        for kelvin in np.linspace(now, end, _TEMPERATURES)[1:]:
            if not holds(float(kelvin)):
                bad = float(kelvin)
                break
            good = float(kelvin)
        if bad is not None:
            for _ in range(_HALVINGS):
                middle = 0.5 * (good + bad)
                good, bad = (middle, bad) if holds(middle) else (good, middle)
        ends.append(good)
    return ends[0], ends[1]


@dataclass(frozen=True, slots=True, kw_only=True)
class DriveChoice:
    """What a generic class of drives could do for a window.

    Attributes
    ----------
    name : str
        Of the class.
    margin : float
        Largest ratio to the nearer edge over the nodes of the window; below 1 it cannot hold.
    frequency : float
        Where that is, Hz.
    """

    name: str
    margin: float
    frequency: float

    def to_dict(self) -> dict[str, Any]:
        """Return the choice as plain JSON types."""
        return {"name": self.name, "margin": self.margin, "frequency_Hz": self.frequency}


def drives_that_could(case: Case, window: HoldingWindow) -> tuple[DriveChoice, ...]:
    """Return the generic classes of drives that could hold a layer, best first; from the nodes of its window."""
    from containment.given.tables import drive_entry, drive_names

    found = []
    for name in drive_names():
        entry = drive_entry(name)
        limits = DriveLimits(
            max_stroke=entry.max_stroke, max_velocity=entry.max_velocity, max_acceleration=entry.max_acceleration,
            max_force=entry.max_force, moving_mass=entry.moving_mass, frequency_range=entry.frequency_range,
        )  # fmt: skip
        reach = limits.largest_acceleration(
            window.frequencies, product_mass=case.product_mass or 0.0, shape=case.waveform
        )
        top = np.minimum(reach, window.ceiling)
        with np.errstate(divide="ignore", invalid="ignore"):
            margin = np.sqrt(np.where(window.lower > 0.0, top / window.lower, 0.0))
        best = int(np.argmax(np.nan_to_num(margin)))
        if margin[best] > 1.0:
            found.append(
                DriveChoice(name=name, margin=float(margin[best]), frequency=float(window.frequencies[best]))
            )
    return tuple(sorted(found, key=lambda choice: -choice.margin))
