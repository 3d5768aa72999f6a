"""A granular bed in its vessel and setting, with the drive and what the process asks for."""

import math
from dataclasses import dataclass, replace
from typing import Any, Final

from containment.constants import STANDARD_GRAVITY
from containment.given.bed_setting import BedSetting
from containment.given.grains import Grains
from containment.given.vessel import Annulus, Box, Cylinder, Slot, Vessel
from containment.judgement.findings import Answer
from containment.physics.bed.throw import GRAIN_KICKS
from containment.physics.bed.wall_plug import perimeter_over_area

__all__ = ["BED_MARGIN", "BedCase", "Judged", "Mechanism", "better", "worse"]

BED_MARGIN: Final = 2.0
"""Ratio to a bound below which a bed is marginal: strengths of powders scatter by about so much from lot to lot, with
moisture and with time (common practice; adjustable)."""

_DEEP_BED: Final = 10.0
_ORDER: Final = (Answer.NOT_HELD, Answer.MARGINAL, Answer.HELD)


def better(*answers: Answer) -> Answer:
    """Return the best of the answers: for supports of which one is enough."""
    return max(answers, key=_ORDER.index)


def worse(*answers: Answer) -> Answer:
    """Return the worst of the answers: for conditions that must all be met."""
    return min(answers, key=_ORDER.index)


@dataclass(frozen=True, slots=True, kw_only=True)
class Mechanism:
    """What holds, or loses, a bed: a value against its bound.

    Attributes
    ----------
    name : str
        In trade terms.
    answer : Answer or None
        What this mechanism alone says; None for a figure that judges nothing.
    value, bound : float or None
        Both in `unit`; None where there is none, or where it is not finite.
    source : str
        Of the formula; ``common practice`` or ``from memory`` where there is none.
    ratio : float or None
        How far the bound is away, above 1 on the good side.
    remark : str
        One sentence for the reader, may be empty.
    """

    name: str
    answer: Answer | None
    value: float | None
    bound: float | None
    unit: str
    source: str
    ratio: float | None = None
    remark: str = ""

    @property
    def holds(self) -> bool | None:
        """Whether it holds the bed, with its margin; None for a figure that judges nothing."""
        return None if self.answer is None else self.answer is Answer.HELD

    def to_dict(self) -> dict[str, Any]:
        """Return the mechanism as plain JSON types."""
        return {
            "name": self.name,
            "holds": self.holds,
            "answer": None if self.answer is None else self.answer.value,
            "value": self.value,
            "bound": self.bound,
            "unit": self.unit,
            "ratio": self.ratio,
            "source": self.source,
            "remark": self.remark,
        }


@dataclass(frozen=True, slots=True, kw_only=True)
class Judged:
    """What a setting says at one level of shaking.

    Attributes
    ----------
    answer : Answer
        Of the setting.
    reason : str
        What binds, in one sentence.
    binding : str
        Name of the mechanism that binds.
    mechanisms : tuple of Mechanism
        All that were judged.
    holding_time : float or None
        Time after which the bed is lost, s; None where no limit is known.
    """

    answer: Answer
    reason: str
    binding: str
    mechanisms: tuple[Mechanism, ...]
    holding_time: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class BedCase:
    """A bed to be judged; all values SI.

    Attributes
    ----------
    gamma : float
        A w^2/g; 0 at rest.
    frequency : float or None
        Hz; None where no drive point is given.
    dwell : float or None
        Time for which it has to stay, s; None for ever.
    allowed_drop : float
        By which a bed on trapped gas may sink, m.
    restitution : float or None
        Of a single grain on the bed's surface; None to take `GRAIN_KICKS`.
    margin : float
        Ratio to a bound below which an answer is marginal.
    """

    material: Grains
    vessel: Vessel
    setting: BedSetting
    gamma: float
    frequency: float | None
    ambient_pressure: float
    dwell: float | None
    allowed_drop: float
    restitution: float | None
    margin: float

    def at(self, gamma: float) -> "BedCase":
        """Return the case at another level of shaking."""
        return replace(self, gamma=gamma)

    @property
    def load(self) -> float:
        """Weight per volume at the worst moment of a stroke, N/m^3: rho_b (1 + Gamma) g."""
        return float(self.material.bulk_density * STANDARD_GRAVITY * (1.0 + self.gamma))

    @property
    def strength_margin(self) -> float:
        """Ratio that a strength must keep: the margin, or more where the strength's uncertainty is stated larger."""
        spread = min(self.material.uncertainty.get("yield_strength", 0.0), 0.9)
        return max(self.margin, 1.0 / (1.0 - spread))

    def graded(self, ratio: float) -> Answer:
        """Return what a strength says that exceeds its load by a ratio; a typical strength is at best marginal."""
        if ratio < 1.0:
            return Answer.NOT_HELD
        return Answer.HELD if ratio >= self.strength_margin and self.material.strength_measured else Answer.MARGINAL

    def shortfall(self, name: str, ratio: float) -> str:
        """Return why a strength that bears its load is no better than marginal."""
        if ratio < self.strength_margin:
            return f"{name} has a factor of {ratio:.3g} in hand, less than {self.strength_margin:.3g}"
        return f"{name} would bear it with a typical strength from the table: measure the lot in hand"

    @property
    def perimeter_ratio(self) -> float:
        """Perimeter over area of the vessel's section, 1/m."""
        match self.vessel:
            case Cylinder():
                return perimeter_over_area("cylinder", self.vessel.diameter)
            case Annulus():
                return perimeter_over_area("annulus", self.vessel.inner_diameter, self.vessel.outer_diameter)
            case Box():
                return perimeter_over_area("box", self.vessel.width, self.vessel.length)
            case Slot():
                return perimeter_over_area("slot", self.vessel.width)
        return 0.0

    @property
    def widest(self) -> float | None:
        """Widest horizontal extent, m: diameter or diagonal; None where the vessel has no end."""
        match self.vessel:
            case Cylinder():
                return float(self.vessel.diameter)
            case Annulus():
                return float(self.vessel.outer_diameter)
            case Box():
                return float(math.hypot(self.vessel.width, self.vessel.length))
        return None

    @property
    def product_mass(self) -> float | None:
        """Mass of the bed, kg; None where the vessel has no end."""
        area = self.vessel.area
        return None if area is None else float(area * self.vessel.depth * self.material.bulk_density)

    @property
    def grain_restitution(self) -> float:
        """Restitution of a grain on the surface, given or taken from the depth of the bed in grains."""
        if self.restitution is not None:
            return self.restitution
        deep = self.vessel.depth >= _DEEP_BED * self.material.d90
        return GRAIN_KICKS["deep" if deep else "shallow"]
