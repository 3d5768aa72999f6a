"""One case judged by itself, the way of `containment.assess`: for what does not go through the physics as arrays."""

import math
from collections.abc import Mapping
from typing import Any

from containment.errors import ContainmentError
from containment.judgement.bed_verdict import BedVerdict
from containment.judgement.findings import Answer, Limit
from containment.judgement.result import Verdict
from containment.studies.building import assessed, bed_assessed
from containment.studies.plan import Plan
from containment.studies.points import GROWING, LOWER, UPPER

__all__ = ["judged_alone", "message_of"]


def judged_alone(plan: Plan, inputs: Mapping[str, Any]) -> tuple[dict[str, Any], str | None]:
    """Return the responses of a case, or nothing and what kept it from being judged.

    Whatever goes wrong belongs to this case: it is kept with it, and never counts as held.
    """
    try:
        if plan.question == "bed":
            return _of_bed(bed_assessed(inputs)), None
        verdict = assessed(inputs)
        return (_of_point(verdict) if verdict.question == "operating point" else _of_window(verdict)), None
    except Exception as error:
        return {}, message_of(error)


def message_of(error: Exception) -> str:
    """Return an error as one line; one that was not raised on purpose with its type."""
    text = " ".join(str(error).split())
    return text if isinstance(error, ContainmentError) else f"internal: {type(error).__name__}: {text}"


def _of_point(verdict: Verdict) -> dict[str, Any]:
    point = verdict.point
    assert point is not None
    a = point.acceleration
    below = math.inf if point.lower == 0.0 else a / point.lower
    above = point.upper / a
    return {
        "verdict": verdict.answer.value,
        "proven": point.proven and verdict.answer is not Answer.NOT_HELD,
        "binding": _binding(verdict, below, above),
        "margin": min(below, above),
        "lower_acceleration_m_s2": point.lower,
        "upper_acceleration_m_s2": point.upper,
        "growth_rate_1_s": point.growth_rate,
    }


def _binding(verdict: Verdict, below: float, above: float) -> str:
    """Return the name of the limit that is passed first, or is nearest."""
    point = verdict.point
    assert point is not None
    if point.acceleration <= point.lower:
        return LOWER
    if point.acceleration >= point.upper:
        return UPPER
    if point.growing_modes:
        return GROWING
    hard = [limit for limit in verdict.limits if not limit.ok and "edge" not in limit.name and "tilt" not in limit.name]
    if hard:
        return _short(hard[0])
    ratios = [(below, LOWER), (above, UPPER), *((x.ratio, _short(x)) for x in verdict.limits if x.ratio is not None)]
    return min(ratios, key=lambda pair: pair[0])[1]


def _short(limit: Limit) -> str:
    return limit.name.partition(" (")[0]


def _of_window(verdict: Verdict) -> dict[str, Any]:
    window = verdict.window
    least, lowest, best = (
        getattr(window, name) if window else None for name in ("minimum_acceleration", "minimum_frequency", "recommended")
    )
    return {
        "verdict": verdict.answer.value,
        "proven": verdict.proven,
        "reason": verdict.reason,
        "minimum_acceleration_m_s2": least.acceleration if least else None,
        "minimum_acceleration_at_Hz": least.frequency if least else None,
        "minimum_frequency_Hz": lowest.frequency if lowest else None,
        "recommended_frequency_Hz": best.frequency if best else None,
        "recommended_acceleration_m_s2": best.acceleration if best else None,
        "margin": best.margin if best else None,
        "unshaken_growth_rate_1_s": verdict.unshaken.growth_rate,
    }


def _of_bed(verdict: BedVerdict) -> dict[str, Any]:
    return {
        "verdict": verdict.answer.value,
        "binding": verdict.binding,
        "holding_time_s": verdict.holding_time,
        "largest_gamma": verdict.largest_gamma,
        "smallest_gamma_to_flow": verdict.flow_gamma,
        "largest_outlet_m": verdict.largest_outlet,
    }
