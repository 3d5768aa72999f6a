"""The verdict on a liquid layer as an object: what was asked, the answer, and all that it rests on."""

import math
from dataclasses import dataclass
from typing import Any

from containment.given.drive import DriveLimits
from containment.given.liquid import Liquid
from containment.given.surroundings import Surroundings
from containment.given.vessel import Vessel
from containment.judgement.case import Allowance, Unshaken, cushion_state
from containment.judgement.findings import Answer, Caution, Limit
from containment.judgement.operating_point import OperatingPoint
from containment.judgement.ranges import DriveChoice, HeldOver
from containment.judgement.window import HoldingPoint, HoldingWindow

__all__ = ["Verdict"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Verdict:
    """The verdict, with all that it rests on.

    Attributes
    ----------
    answer : Answer
        Held, marginal or not held.
    question : str
        "operating point" or "minimum drive".
    reason : str
        What binds, in one sentence.
    proven : bool
        Whether the count of growing modes is proven at the drive point (or at the recommended one).
    spans_edge : bool
        Whether the stated uncertainty of the properties reaches across an edge.
    window : HoldingWindow or None
        Where the layer would be held: without a drive point, or with one that does not hold.
    held_over : HeldOver or None
        Ranges of viscosity and temperature over which the drive point holds, where asked for.
    amplitude_factor : float
        Half the stroke times w^2 over the peak acceleration of the motion: 1 for a sine.
    drives_that_could : tuple of DriveChoice
        Generic classes of drives that could hold the layer, where no drive is stated.
    """

    answer: Answer
    question: str
    reason: str
    proven: bool
    spans_edge: bool
    liquid: Liquid
    vessel: Vessel
    surroundings: Surroundings
    drive: DriveLimits
    allowance: Allowance
    margin_factor: float
    unshaken: Unshaken
    holds_unshaken: bool
    window: HoldingWindow | None
    point: OperatingPoint | None
    strict_window: HoldingWindow | None
    averaged_estimate: float
    limits: tuple[Limit, ...]
    cautions: tuple[Caution, ...]
    assumptions: tuple[str, ...]
    worst_mode: str
    held_over: HeldOver | None = None
    drives_that_could: tuple[DriveChoice, ...] = ()
    amplitude_factor: float = 1.0

    @property
    def held(self) -> bool:
        """Whether the answer is held: not marginal, not 'not held'."""
        return self.answer is Answer.HELD

    def to_dict(self) -> dict[str, Any]:
        """Return the verdict as plain JSON types, SI, finite or None."""
        point = self.point
        window = self.window

        def corner(name: str, *, margin: bool = False) -> dict[str, Any] | None:
            found: HoldingPoint | None = getattr(window, name) if window else None
            return found.to_dict(margin=margin) if found else None

        result: dict[str, Any] = {
            "schema": 1,
            "verdict": self.answer.value,
            "reason": self.reason,
            "proven": self.proven,
            "holds_unshaken": self.holds_unshaken,
            "question": self.question,
            "liquid": self.liquid.to_dict(),
            "vessel": self.vessel.to_dict(),
            "surroundings": self.surroundings.to_dict(),
            "trapped_gas": (
                cushion_state(self.liquid, self.vessel, self.surroundings)
                if self.surroundings.cushion is not None
                else None
            ),
            "dwell_s": self.allowance.dwell,
            "allowed_growth_1_s": self.allowance.growth,
            "unevenness_m": self.allowance.unevenness,
            "amplification": self.allowance.amplification,
            "margin_factor": self.margin_factor,
            "properties_span_edge": self.spans_edge,
            "unshaken": {
                "growth_rate_1_s": self.unshaken.growth_rate,
                "wavenumber_1_m": self.unshaken.wavenumber,
                "time_to_spill_s": self.unshaken.time_to_spill,
            },
            "minimum_acceleration": corner("minimum_acceleration"),
            "minimum_frequency": corner("minimum_frequency"),
            "recommended": corner("recommended", margin=True),
            "no_window_reason": (window.reason or None) if window else None,
            "strict_minimum_acceleration": (
                self.strict_window.minimum_acceleration.to_dict()
                if self.strict_window and self.strict_window.minimum_acceleration
                else None
            ),
            "operating_point": None,
            "held_over": self.held_over.to_dict() if self.held_over else None,
            "drives_that_could": [choice.to_dict() for choice in self.drives_that_could],
            "averaged_estimate_m_s2": _finite(self.averaged_estimate),
            "limits": [limit.to_dict() for limit in self.limits],
            "cautions": [caution.to_dict() for caution in self.cautions],
            "assumptions": list(self.assumptions),
        }
        if point is not None:
            result["operating_point"] = {
                "frequency_Hz": point.frequency,
                "acceleration_m_s2": point.acceleration,
                "amplitude_m": self.amplitude_factor * point.acceleration / (2.0 * math.pi * point.frequency) ** 2,
                "lower_acceleration_m_s2": _finite(point.lower),
                "upper_acceleration_m_s2": _finite(point.upper),
                "lower_relative_error": _finite(point.lower_error),
                "upper_relative_error": _finite(point.upper_error),
                "strict_lower_acceleration_m_s2": _finite(float(point.strict.lower[0])),
                "strict_upper_acceleration_m_s2": _finite(float(point.strict.upper[0])),
                "strictly_held": point.strictly_inside,
                "growth_rate_1_s": _finite(point.growth_rate),
                "worst_wavenumber_1_m": _finite(point.worst_wavenumber),
                "worst_mode": self.worst_mode,
                "worst_answers_at_half_frequency": point.worst_subharmonic,
                "unstable_modes": point.growing_modes,
                "modes_checked": point.modes_checked,
                "all_modes_counted": point.complete,
                "proven": point.proven,
            }
        return result


def _finite(value: float) -> float | None:
    return value if math.isfinite(value) else None
