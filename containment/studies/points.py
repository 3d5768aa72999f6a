"""Many drive points judged as arrays: the same edges, limits and answers as `containment.assess`, without its texts.

Edges depend on liquid, vessel and frequency only, so each pair of liquid and frequency is solved once, however many sizes of
the motion are asked for.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import ContainmentError
from containment.given.drive import DriveLimits
from containment.judgement.case import Case
from containment.judgement.companions import COVERED_LOWER, COVERED_UPPER, WALL_DRAG
from containment.judgement.findings import Answer
from containment.judgement.operating_point import growing_modes
from containment.judgement.verdict import assess
from containment.studies.edge_values import EdgeValues

__all__ = ["GROWING", "LOWER", "UPPER", "Judged", "judged_points"]

Real = npt.NDArray[np.float64]
Flags = npt.NDArray[np.bool_]

LOWER: Final = "lower edge"
UPPER: Final = "upper edge"
GROWING: Final = "growing modes"
PULL_OFF: Final = "pull-off from the base"


@dataclass(frozen=True, slots=True)
class Judged:
    """What is said of each point; arrays of one value a point.

    Attributes
    ----------
    answer : array of text
        Values of `Answer`.
    proven : array of bool
        Whether the count of growing modes is proven to be none.
    binding : array of object
        Name of the limit that is passed first, or is nearest.
    margin : array
        Smaller of the ratios to the two edges; infinite where there is none.
    error : list of str or None
        What kept a point from being judged.
    """

    answer: npt.NDArray[np.str_]
    proven: Flags
    binding: npt.NDArray[np.object_]
    margin: Real
    error: list[str | None]


def judged_points(
    cases: Sequence[Case],
    which: npt.NDArray[np.intp],
    frequency: Real,
    acceleration: Real,
    edges: EdgeValues,
    *,
    drive: DriveLimits,
    factor: float,
    proof: bool,
) -> Judged:
    """Judge drive points of layers over open gas, shaken as a sine, with a sliding contact line.

    Parameters
    ----------
    cases : sequence of Case
        Layers that share vessel, surroundings and allowance.
    which : array of int, shape (points,)
        The case of each point.
    frequency, acceleration : array, shape (points,)
        Hz and peak m/s^2.
    edges : EdgeValues
        At these points.
    drive : DriveLimits
        What the shaker can do.
    factor : float
        Ratio to an edge below which the answer is marginal.
    proof : bool
        Whether to count the growing modes of every point between the edges; without it none is proven.
    """
    a, e = acceleration, edges
    with np.errstate(divide="ignore", invalid="ignore"):
        ratios: list[tuple[str, Real]] = [(LOWER, np.where(e.lower == 0.0, np.inf, a / e.lower)), (UPPER, e.upper / a)]
    margin = np.minimum(ratios[0][1], ratios[1][1])
    inside = (e.lower < a) & (a < e.upper)
    limits = _limits(cases, which, frequency, a, drive)
    broken = np.zeros(len(a), dtype=bool)
    first_broken = np.full(len(a), None, dtype=object)
    for name, ok, ratio in limits:
        first_broken[~ok & ~broken] = name
        broken |= ~ok
        if ratio is not None:
            ratios.append((name, ratio))
    pulled = limits[0][2]
    tight = pulled < factor if pulled is not None else np.zeros(len(a), dtype=bool)

    growing = np.zeros(len(a), dtype=bool)
    proven = np.zeros(len(a), dtype=bool)
    error: list[str | None] = [None] * len(a)
    if proof:
        for i in np.flatnonzero(inside & ~broken):
            try:
                count, sure = growing_modes(cases[which[i]], frequency=float(frequency[i]), acceleration=float(a[i]))
                growing[i], proven[i] = count > 0, sure
            except ContainmentError as failed:
                error[i] = str(failed)

    doubt, beside = _doubt(e, a, factor)
    ratios += beside
    doubt |= e.tilted_too_far(a)
    doubt |= cases[0].vessel.kind == "slot"
    marginal = e.spans(a) | tight | doubt | (margin < factor)
    if proof:
        marginal |= ~proven
    rest = inside & (e.lower == 0.0) & ~marginal & ~broken & ~growing
    for i in np.unique(which[rest]):
        case = cases[i]
        if case.unshaken.growth_rate == 0.0 and not _held_at_rest(case, factor):
            marginal |= rest & (which == i)

    held = inside & ~growing & ~broken
    answer = np.where(held, np.where(marginal, Answer.MARGINAL.value, Answer.HELD.value), Answer.NOT_HELD.value)
    names = np.array([name for name, _ in ratios], dtype=object)
    binding = names[np.argmin(np.stack([np.where(np.isnan(r), np.inf, r) for _, r in ratios]), axis=0)]
    binding = np.where(a <= e.lower, LOWER, np.where(a >= e.upper, UPPER, np.where(growing, GROWING, binding)))
    binding = np.where(inside & ~growing & broken, first_broken, binding)
    return Judged(answer, proven & held, binding, margin, error)


def _limits(
    cases: Sequence[Case], which: npt.NDArray[np.intp], f: Real, a: Real, drive: DriveLimits
) -> list[tuple[str, Flags, Real | None]]:
    """Return name, whether it is kept, and ratio of the limits that break a verdict, in the order of `assess`."""
    w = 2.0 * math.pi * f
    pressure = cases[0].surroundings.ambient_pressure
    depth = cases[0].vessel.depth
    density = np.array([case.liquid.density for case in cases])[which]
    vapour = np.array([case.liquid.vapour_pressure or 0.0 for case in cases])[which]
    weight = density * depth * (STANDARD_GRAVITY + a)
    found: list[tuple[str, Flags, Real | None]] = [(PULL_OFF, pressure - weight > vapour, (pressure - vapour) / weight)]
    mass = np.array([(drive.moving_mass or 0.0) + (case.product_mass or 0.0) for case in cases])[which]
    for name, value, bound in (
        ("stroke of the drive", 2.0 * a / (w * w), drive.max_stroke),
        ("velocity of the drive", a / w, drive.max_velocity),
        ("acceleration of the drive", a, drive.max_acceleration),
        ("force of the drive", mass * a, drive.max_force),
    ):
        if bound is not None:
            found.append((name, value <= bound * (1.0 + 1e-9), bound / value))
    if drive.frequency_range is not None:
        low, high = drive.frequency_range
        found.append(("lowest frequency of the drive", f >= low * (1.0 - 1e-9), None))
        found.append(("highest frequency of the drive", f <= high * (1.0 + 1e-9), None))
    return found


def _doubt(e: EdgeValues, a: Real, factor: float) -> tuple[Flags, list[tuple[str, Real]]]:
    """Return where limits beside the edges make an answer marginal, and their ratios; not-a-number where there is none."""
    with np.errstate(divide="ignore", invalid="ignore"):
        dragged = np.where(np.isfinite(e.dragged) & (e.dragged > 0.0) & (e.lower > 0.0), a / e.dragged, np.nan)
        skin_low = np.where(np.isfinite(e.covered_lower) & (e.covered_lower > 0.0), a / e.covered_lower, np.nan)
        skin_high = np.where(np.isfinite(e.covered_upper), e.covered_upper / a, np.nan)
        doubt = (e.lower > 0.0) & ((a <= e.dragged) | (dragged < factor))
        doubt |= (a <= e.covered_lower) | (a >= e.covered_upper)
    return doubt, [(WALL_DRAG, dragged), (COVERED_LOWER, skin_low), (COVERED_UPPER, skin_high)]


def _held_at_rest(case: Case, factor: float) -> bool:
    """Return whether a layer that needs no shaking is held whatever its contact angle: asked without a drive."""
    verdict: Any = assess(case.liquid, case.vessel, surroundings=case.surroundings, margin_factor=factor)
    return bool(verdict.held)
