"""The verdict on a liquid layer in an upside-down vessel."""

import math
from dataclasses import dataclass
from typing import Any, Final

import numpy as np

from containment.constants import STANDARD_ATMOSPHERE
from containment.errors import InputError
from containment.given.drive import DriveLimits
from containment.given.liquid import Liquid
from containment.given.motion import Motion
from containment.given.quantities import si_value
from containment.given.vessel import Cylinder, Vessel
from containment.judgement.case import Allowance, Case, Unshaken, allowance
from containment.judgement.case_notes import assumptions, averaged_estimate, case_cautions
from containment.judgement.findings import Answer, Caution, Limit
from containment.judgement.limits import drive_limits, pull_off_acceleration, pull_off_limit
from containment.judgement.no_window import why_no_window
from containment.judgement.operating_point import OperatingPoint, judged_point
from containment.judgement.window import SEARCH_RANGE, HoldingPoint, HoldingWindow, search_window

__all__ = ["MARGIN_FACTOR", "Verdict", "assess", "holding_window"]

MARGIN_FACTOR: Final = 1.25
"""Ratio to either edge below which a verdict is marginal (common practice; adjustable)."""

WETTING_BOND_NUMBER: Final = 0.842
"""Critical Bond number of a round tube for a liquid that wets it fully: Concus 1968; Masica, Petrash & Otto 1964
(from memory)."""


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
    """

    answer: Answer
    question: str
    reason: str
    proven: bool
    spans_edge: bool
    liquid: Liquid
    vessel: Vessel
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
            "averaged_estimate_m_s2": _finite(self.averaged_estimate),
            "limits": [limit.to_dict() for limit in self.limits],
            "cautions": [caution.to_dict() for caution in self.cautions],
            "assumptions": list(self.assumptions),
        }
        if point is not None:
            result["operating_point"] = {
                "frequency_Hz": point.frequency,
                "acceleration_m_s2": point.acceleration,
                "amplitude_m": point.acceleration / (2.0 * math.pi * point.frequency) ** 2,
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
                "proven": point.proven,
            }
        return result


def _finite(value: float) -> float | None:
    return value if math.isfinite(value) else None


def assess(
    liquid: Liquid,
    vessel: Vessel,
    motion: Motion | None = None,
    *,
    dwell: Any = None,
    unevenness: Any = None,
    amplification: Any = None,
    drive: DriveLimits | None = None,
    ambient_pressure: Any = STANDARD_ATMOSPHERE,
    margin_factor: Any = MARGIN_FACTOR,
) -> Verdict:
    """Return the verdict on a layer: at a drive point, or, without one, whether any drive within the limits holds it.

    Parameters
    ----------
    liquid : Liquid
        See `containment.liquid`.
    vessel : Vessel
        Cylinder, Box, Annulus, Slot or Unbounded.
    motion : Motion, optional
        The drive point.
    dwell : str or pint.Quantity or float, optional
        Time upside-down, s; for ever by default.
    unevenness, amplification : optional
        Initial unevenness of the surface (m) and the factor by which it may grow within the dwell.
    drive : DriveLimits, optional
        What the shaker can do.
    ambient_pressure : str or pint.Quantity or float
        Absolute, Pa.
    margin_factor : float
        Ratio to either edge below which the verdict is marginal.

    Raises
    ------
    InputError
        An input that cannot be used.
    NotComputableError
        Inputs for which the theory here gives no result.

    Examples
    --------
    >>> import containment as ct
    >>> syrup = ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
    >>> cup = ct.Cylinder(diameter="70 mm", depth="30 mm")
    >>> verdict = ct.assess(syrup, cup, ct.Motion(frequency="50 Hz", acceleration="40 g_n"))
    >>> verdict.answer.value, verdict.proven
    ('held', True)
    """
    drive = drive or DriveLimits()
    pressure = si_value(ambient_pressure, "pressure", "ambient pressure", above=0.0, most=1e8)
    factor = si_value(margin_factor, "ratio", "margin factor", least=1.0, most=100.0)
    bear = allowance(depth=vessel.depth, dwell=dwell, unevenness=unevenness, amplification=amplification)
    case = _case(liquid, vessel, bear, drive)
    judge = _at_a_point if motion is not None else _minimum_drive
    return judge(case, motion, drive, pressure, factor)


def holding_window(
    liquid: Liquid,
    vessel: Vessel,
    *,
    frequencies: Any = None,
    dwell: Any = None,
    unevenness: Any = None,
    amplification: Any = None,
    drive: DriveLimits | None = None,
    ambient_pressure: Any = STANDARD_ATMOSPHERE,
) -> HoldingWindow:
    """Return the holding window over frequency.

    Parameters
    ----------
    liquid, vessel, dwell, unevenness, amplification, drive, ambient_pressure
        As in `assess`.
    frequencies : array_like, optional
        Hz; by default a geometric net over the drive's range, or 2 to 2000 Hz.

    Raises
    ------
    InputError
        An input that cannot be used.

    Examples
    --------
    >>> import containment as ct
    >>> syrup = ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
    >>> window = ct.holding_window(syrup, ct.Cylinder(diameter="70 mm", depth="30 mm"))
    >>> point = window.minimum_acceleration
    >>> round(point.acceleration / 9.80665, 1), round(point.frequency, 1)
    (19.2, 15.6)
    """
    drive = drive or DriveLimits()
    pressure = si_value(ambient_pressure, "pressure", "ambient pressure", above=0.0, most=1e8)
    bear = allowance(depth=vessel.depth, dwell=dwell, unevenness=unevenness, amplification=amplification)
    case = _case(liquid, vessel, bear, drive)
    nodes = None
    if frequencies is not None:
        nodes = np.atleast_1d(np.asarray(frequencies, dtype=np.float64))
        if nodes.ndim != 1 or not len(nodes) or not np.all(np.isfinite(nodes) & (nodes > 0.0)):
            raise InputError("frequencies: expected one row of positive, finite numbers in Hz")
    return _window(case, drive, pressure, nodes=nodes)


def _case(liquid: Liquid, vessel: Vessel, bear: Allowance, drive: DriveLimits) -> Case:
    if vessel.contact_line != "sliding":
        raise InputError("contact line: 'pinned' is not available yet for shaken layers; expected 'sliding'")
    if liquid.rheology is not None:
        raise InputError(
            f"liquid: {liquid.name} is not Newtonian; give the viscosity of a Newtonian stand-in with name 'custom'"
        )
    case = Case(liquid, vessel, bear)
    if drive.max_force is not None and case.product_mass is None:
        raise InputError(f"max force: a {vessel.kind} has no end, so the product has no mass; leave the force out")
    return case


def _other_ceiling(case: Case, drive: DriveLimits, pressure: float, f: Any) -> Any:
    pull = pull_off_acceleration(
        density=case.liquid.density, depth=case.vessel.depth, vapour_pressure=case.liquid.vapour_pressure or 0.0,
        ambient_pressure=pressure,
    )  # fmt: skip
    return np.minimum(drive.largest_acceleration(f, product_mass=case.product_mass or 0.0), pull)


def _window(
    case: Case, drive: DriveLimits, pressure: float, *, growth: float | None = None, nodes: Any = None
) -> HoldingWindow:
    window = search_window(
        lambda f: case.edges(f, growth=growth),
        lambda f: _other_ceiling(case, drive, pressure, f),
        frequency_range=drive.frequency_range or SEARCH_RANGE,
        frequencies=nodes,
    )
    return why_no_window(case, window, drive)


def _at_a_point(case: Case, motion: Motion | None, drive: DriveLimits, pressure: float, factor: float) -> Verdict:
    assert motion is not None
    if motion.amplitude > case.amplitude_bound * (1.0 + 1e-9):
        raise InputError(
            f"motion: amplitude {1e3 * motion.amplitude:.4g} mm (zero to peak) is beyond the searched range; it must be at "
            f"most {1e3 * case.amplitude_bound:g} mm"
        )
    point = judged_point(case, frequency=motion.frequency, acceleration=motion.acceleration)
    limits = _limits(case, drive, pressure, motion.frequency, motion.acceleration)
    a = motion.acceleration
    below = math.inf if point.lower == 0.0 else a / point.lower
    above = point.upper / a
    spans = point.inside and _spans_edge(case, motion)
    broken = [limit for limit in limits if not limit.ok]
    tight = [limit for limit in limits if limit.ok and limit.ratio is not None and limit.ratio < factor
             and not limit.source.startswith("the drive")]  # fmt: skip
    unit = "half the drive frequency" if point.worst_subharmonic else "the drive frequency"
    if a <= point.lower:
        answer, reason = Answer.NOT_HELD, "too weak: the layer falls before the shaking holds it"
    elif a >= point.upper:
        wave = "half the drive frequency" if point.edges.upper_subharmonic[0] else "the drive frequency"
        answer, reason = Answer.NOT_HELD, f"too strong: waves at {wave} break up the surface"
    elif point.growing_modes:
        answer, reason = Answer.NOT_HELD, f"a mode grows, answering at {unit}"
    elif broken:
        answer, reason = Answer.NOT_HELD, f"the limit is passed: {broken[0].name}"
    elif not point.proven:
        answer, reason = Answer.MARGINAL, "no growing mode was found, but that none was missed is not proven"
    elif min(below, above) < factor:
        side = "lower" if below < above else "upper"
        answer, reason = Answer.MARGINAL, f"only a factor of {min(below, above):.3g} to the {side} edge"
    elif spans:
        answer, reason = Answer.MARGINAL, "the stated uncertainty of the properties reaches across an edge"
    elif tight:
        answer, reason = Answer.MARGINAL, f"only a factor of {tight[0].ratio:.3g} to the limit: {tight[0].name}"
    else:
        answer, reason = Answer.HELD, "every mode dies out" if point.strictly_inside else "no mode outgrows the dwell"
    rests = case.unshaken.growth_rate <= case.allowance.growth
    worst = point.worst_wavenumber
    window = _window(case, drive, pressure) if answer is Answer.NOT_HELD and not rests else None
    return Verdict(
        answer=answer, question="operating point", reason=reason, proven=point.proven, spans_edge=spans,
        liquid=case.liquid, vessel=case.vessel, drive=drive, allowance=case.allowance, margin_factor=factor,
        unshaken=case.unshaken, holds_unshaken=rests, window=window, strict_window=None, point=point,
        averaged_estimate=averaged_estimate(case, motion.frequency), limits=tuple(limits),
        cautions=case_cautions(case, motion.frequency, a), assumptions=assumptions(case, drive),
        worst_mode=case.spectrum.mode_name(worst) if math.isfinite(worst) else "",
    )  # fmt: skip


def _minimum_drive(case: Case, motion: Motion | None, drive: DriveLimits, pressure: float, factor: float) -> Verdict:
    rests = case.unshaken.growth_rate <= case.allowance.growth
    window = strict = best = None
    if not rests:
        window = _window(case, drive, pressure)
        strict = window if case.allowance.growth == 0.0 else _window(case, drive, pressure, growth=0.0)
        best = window.recommended
    point, limits, cautions = None, [], [*case_cautions(case, None, None)]
    proven = True
    if best is not None and not rests:
        checked = judged_point(case, frequency=best.frequency, acceleration=best.acceleration)
        proven = checked.proven and checked.growing_modes == 0
        limits = _limits(case, drive, pressure, best.frequency, best.acceleration)
        cautions = [*case_cautions(case, best.frequency, best.acceleration)]
    if rests:
        answer, reason = _at_rest(case, factor)
    elif best is None:
        answer, reason = Answer.NOT_HELD, window.reason if window else ""
    elif not proven:
        answer, reason = Answer.MARGINAL, "a window was found, but that no mode was missed in it is not proven"
    elif best.margin < factor:
        answer, reason = Answer.MARGINAL, f"the window is narrow: at best a factor of {best.margin:.3g} to its nearer edge"
    else:
        answer, reason = Answer.HELD, "there is a window between falling and breaking up"
    least = window.minimum_acceleration if window else None
    at = least.frequency if least else _typical_frequency(window)
    return Verdict(
        answer=answer, question="minimum drive", reason=reason, proven=proven, spans_edge=False,
        liquid=case.liquid, vessel=case.vessel, drive=drive, allowance=case.allowance, margin_factor=factor,
        unshaken=case.unshaken, holds_unshaken=rests, window=window, strict_window=strict, point=point,
        averaged_estimate=averaged_estimate(case, at), limits=tuple(limits), cautions=tuple(cautions),
        assumptions=assumptions(case, drive), worst_mode="",
    )  # fmt: skip


def _typical_frequency(window: HoldingWindow | None) -> float:
    if window is None:
        return 1.0  # nothing falls, so that the estimate is 0 at any frequency
    return float(window.frequencies[int(np.argmin(window.lower))])


def _at_rest(case: Case, factor: float) -> tuple[Answer, str]:
    """Judge a layer that needs no shaking; a liquid that wets the wall lets go earlier than the flat surface says."""
    if case.unshaken.growth_rate > 0.0:
        return Answer.HELD, "even unshaken it grows no faster than the dwell allows"
    size = float(case.spectrum.discrete[0]) / case.capillary_wavenumber
    if isinstance(case.vessel, Cylinder):
        bond = (0.5 * case.vessel.diameter * case.capillary_wavenumber) ** 2
        if bond < WETTING_BOND_NUMBER:
            return Answer.HELD, "the surface tension holds it without shaking, at any contact angle"
    if size < factor:
        return Answer.MARGINAL, f"the surface tension holds it unshaken, by a factor of only {size:.3g} in size"
    return (
        Answer.MARGINAL,
        "the surface tension holds it unshaken only if the contact angle is near 90 degrees; a liquid that wets the wall "
        "lets go",
    )


def _limits(case: Case, drive: DriveLimits, pressure: float, frequency: float, acceleration: float) -> list[Limit]:
    return [
        pull_off_limit(
            density=case.liquid.density, depth=case.vessel.depth, vapour_pressure=case.liquid.vapour_pressure,
            acceleration=acceleration, ambient_pressure=pressure,
        ),
        *drive_limits(drive, frequency=frequency, acceleration=acceleration, product_mass=case.product_mass),
    ]  # fmt: skip


def _spans_edge(case: Case, motion: Motion) -> bool:
    """Return whether the point leaves the window at any corner of the stated uncertainty of the properties."""
    spread = case.liquid.uncertainty
    names = [name for name in ("viscosity", "surface_tension", "density") if spread.get(name, 0.0) > 0.0]
    corners: list[dict[str, float]] = [{}]
    for name in names[:2] if spread.get("density", 0.0) < 0.02 else names:
        value = getattr(case.liquid, name)
        corners = [{**c, name: value * (1.0 + sign * min(spread[name], 0.9))} for c in corners for sign in (-1, 1)]
    for corner in corners if names else []:
        values = {n: corner.get(n, getattr(case.liquid, n)) for n in ("density", "viscosity", "surface_tension")}
        edges = Case(Liquid(**values), case.vessel, case.allowance).edges(np.array([motion.frequency]))
        if not edges.lower[0] < motion.acceleration < edges.upper[0]:
            return True
    return False
