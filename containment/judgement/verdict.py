"""The verdict on a liquid layer in an upside-down vessel."""

import dataclasses
import math
from typing import Any, Final

import numpy as np

from containment.errors import InputError
from containment.given.drive import DriveLimits
from containment.given.liquid import Liquid
from containment.given.motion import Motion
from containment.given.quantities import si_value
from containment.given.surroundings import Surroundings
from containment.given.vessel import Box, Cylinder, Slot, Vessel
from containment.given.waveforms import PURE_SINE, Waveform
from containment.judgement.case import Allowance, Case, allowance
from containment.judgement.case_notes import assumptions, averaged_estimate, case_cautions
from containment.judgement.companions import COVERED_LOWER, COVERED_UPPER, TILT, WALL_DRAG, companion_limits
from containment.judgement.findings import Answer, Limit
from containment.judgement.limits import drive_limits, pull_off_acceleration, pull_off_limit
from containment.judgement.no_window import why_no_window
from containment.judgement.operating_point import judged_point
from containment.judgement.ranges import drives_that_could, held_over
from containment.judgement.result import Verdict
from containment.judgement.rheology import depends_on_shear, plug_limit, refuse_where_unknown, stand_ins
from containment.judgement.window import SEARCH_RANGE, HoldingWindow, search_window

__all__ = ["MARGIN_FACTOR", "Verdict", "assess", "holding_window"]

MARGIN_FACTOR: Final = 1.25
"""Ratio to either edge below which a verdict is marginal (common practice; adjustable)."""

WETTING_BOND_NUMBER: Final = 0.842
"""Critical Bond number of a round tube for a liquid that wets it fully: Concus 1968; Masica, Petrash & Otto 1964
(from memory)."""


def assess(
    liquid: Liquid,
    vessel: Vessel,
    motion: Motion | None = None,
    *,
    dwell: Any = None,
    unevenness: Any = None,
    amplification: Any = None,
    drive: DriveLimits | None = None,
    surroundings: Surroundings | None = None,
    shape: Waveform | None = None,
    ambient_pressure: Any = None,
    margin_factor: Any = MARGIN_FACTOR,
    ranges: bool = False,
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
    surroundings : Surroundings, optional
        State of the surface, liquid or gas below, tilt.
    shape : Waveform, optional
        Shape of the motion where no drive point is given: see `containment.waveform`.
    ambient_pressure : str or pint.Quantity or float, optional
        Absolute, Pa; in place of that of the surroundings.
    margin_factor : float
        Ratio to either edge below which the verdict is marginal.
    ranges : bool
        Whether to look for the viscosity and the temperature over which a drive point still holds.

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
    factor = si_value(margin_factor, "ratio", "margin factor", least=1.0, most=100.0)
    bear = allowance(depth=vessel.depth, dwell=dwell, unevenness=unevenness, amplification=amplification)
    if motion is not None and shape is not None:
        raise InputError("motion: its shape is given twice; give it with the motion")
    form = motion.waveform if motion is not None else shape or PURE_SINE
    case = _case(liquid, vessel, bear, drive, _around(surroundings, ambient_pressure), form)
    if depends_on_shear(liquid):
        return _sheared(case, motion, drive, factor)
    if motion is not None:
        return _at_a_point(case, motion, drive, factor, ranges=ranges)
    if isinstance(vessel, Box) and vessel.contact_line == "pinned":
        raise InputError("contact line: a pinned box is judged at a drive point only; give its frequency and size")
    return _minimum_drive(case, drive, factor)


def holding_window(
    liquid: Liquid,
    vessel: Vessel,
    *,
    frequencies: Any = None,
    dwell: Any = None,
    unevenness: Any = None,
    amplification: Any = None,
    drive: DriveLimits | None = None,
    surroundings: Surroundings | None = None,
    shape: Waveform | None = None,
    ambient_pressure: Any = None,
) -> HoldingWindow:
    """Return the holding window over frequency.

    Parameters
    ----------
    liquid, vessel, dwell, unevenness, amplification, drive, surroundings, shape, ambient_pressure
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
    bear = allowance(depth=vessel.depth, dwell=dwell, unevenness=unevenness, amplification=amplification)
    case = _case(liquid, vessel, bear, drive, _around(surroundings, ambient_pressure), shape or PURE_SINE)
    nodes = None
    if frequencies is not None:
        nodes = np.atleast_1d(np.asarray(frequencies, dtype=np.float64))
        if nodes.ndim != 1 or not len(nodes) or not np.all(np.isfinite(nodes) & (nodes > 0.0)):
            raise InputError("frequencies: expected one row of positive, finite numbers in Hz")
    return _window(case, drive, nodes=nodes)


def _around(surroundings: Surroundings | None, ambient_pressure: Any) -> Surroundings:
    around = surroundings or Surroundings()
    return around if ambient_pressure is None else dataclasses.replace(around, ambient_pressure=ambient_pressure)


def _case(
    liquid: Liquid, vessel: Vessel, bear: Allowance, drive: DriveLimits, around: Surroundings, shape: Waveform
) -> Case:
    if vessel.contact_line == "pinned" and (around.cushion is not None or around.below is not None):
        raise InputError("contact line: 'pinned' is not modelled over trapped gas or another liquid; expected 'sliding'")
    if shape is not PURE_SINE and (vessel.contact_line == "pinned" or around.cushion is not None):
        raise InputError(
            "motion: a motion that is not a pure sine is not modelled for a pinned contact line or over trapped gas"
        )
    if around.below is not None and not around.below.density < liquid.density:
        raise InputError(
            f"below: {around.below.name} of {around.below.density:.4g} kg/m^3 is not lighter than {liquid.name} of "
            f"{liquid.density:.4g} kg/m^3; the lower liquid must be the lighter one"
        )
    case = Case(liquid, vessel, bear, around, shape)
    refuse_where_unknown(case)
    tension = liquid.surface_tension if around.below is None else around.interfacial_tension
    if tension == 0.0:
        raise InputError(
            "surface tension: 0 N/m is not allowed here; without it every short wave falls and no finite drive holds"
        )
    if drive.max_force is not None and case.product_mass is None:
        raise InputError(f"max force: a {vessel.kind} has no end, so the product has no mass; leave the force out")
    return case


def _other_ceiling(case: Case, drive: DriveLimits, f: Any) -> Any:
    pull = pull_off_acceleration(
        density=case.liquid.density, depth=case.vessel.depth, vapour_pressure=case.liquid.vapour_pressure or 0.0,
        ambient_pressure=case.surroundings.ambient_pressure,
    )  # fmt: skip
    shape = case.waveform
    searched = case.amplitude_bound * (2.0 * math.pi * np.asarray(f)) ** 2 * shape.peak_acceleration  # nothing known beyond
    reached = drive.largest_acceleration(f, product_mass=case.product_mass or 0.0, shape=shape)
    return np.minimum(reached, np.minimum(pull, searched) / case.gain(f)[1])


def _window(
    case: Case, drive: DriveLimits, *, growth: float | None = None, nodes: Any = None
) -> HoldingWindow:
    window = search_window(
        lambda f: case.edges(f, growth=growth),
        lambda f: _other_ceiling(case, drive, f),
        frequency_range=drive.frequency_range or SEARCH_RANGE,
        frequencies=nodes,
        amplitude_factor=case.waveform.amplitude / case.waveform.peak_acceleration,
        sparse=case.vessel.contact_line == "pinned" or case.waveform is not PURE_SINE,
    )
    return why_no_window(case, window, drive)


def _sheared(case: Case, motion: Motion | None, drive: DriveLimits, factor: float) -> Verdict:
    """Judge a liquid whose viscosity depends on the shear rate: the worst of its Newtonian stand-ins."""
    if motion is None:
        raise InputError(
            f"liquid: the viscosity of {case.liquid.name} depends on the shear rate; give a drive point (frequency, size)"
        )
    order = [Answer.NOT_HELD, Answer.MARGINAL, Answer.HELD]
    judged = [
        (name, _at_a_point(dataclasses.replace(case, liquid=liquid), motion, drive, factor, ranges=False))
        for name, liquid in stand_ins(case, frequency=motion.frequency)
    ]
    name, worst = min(judged, key=lambda pair: order.index(pair[1].answer))
    shown = ", ".join(f"{v.liquid.viscosity:.3g} Pa s {n}" for n, v in judged)
    plug = plug_limit(case, motion.acceleration)
    answer, reason = worst.answer, f"{worst.reason} (with the viscosity {name})"
    if answer is Answer.HELD:  # the shear rate is an estimate, so that it cannot carry a clean answer
        answer = Answer.MARGINAL
        reason = "held with each viscosity tried, but the shear rate that the layer sees is an estimate"
    return dataclasses.replace(
        worst, answer=answer, reason=reason, limits=(*worst.limits, *([plug] if plug else [])),
        assumptions=(*worst.assumptions, f"viscosity that depends on the shear rate, taken as {shown}; the worst counts"),
    )  # fmt: skip


def _at_a_point(case: Case, motion: Motion, drive: DriveLimits, factor: float, *, ranges: bool) -> Verdict:
    level = motion.acceleration / motion.waveform.peak_acceleration / motion.angular_frequency**2
    if level > case.amplitude_bound * (1.0 + 1e-9):
        raise InputError(
            f"motion: amplitude {1e3 * level:.4g} mm (zero to peak) is beyond the searched range; it must be at "
            f"most {1e3 * case.amplitude_bound:g} mm"
        )
    point = judged_point(case, frequency=motion.frequency, acceleration=motion.acceleration)
    limits = _limits(case, drive, motion.frequency, motion.acceleration)
    a = motion.acceleration
    below = math.inf if point.lower == 0.0 else a / point.lower
    above = point.upper / a
    spans = point.inside and _spans_edge(case, motion.frequency, motion.acceleration)
    beside = companion_limits(case, point) if point.inside else []
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
        answer, reason = Answer.NOT_HELD, f"a limit is not met: {broken[0].name}"
    elif not point.proven:
        answer, reason = Answer.MARGINAL, "no growing mode was found, but that none was missed is not proven"
    elif min(below, above) < factor:
        side = "lower" if below < above else "upper"
        answer, reason = Answer.MARGINAL, f"only a factor of {min(below, above):.3g} to the {side} edge"
    elif spans:
        answer, reason = Answer.MARGINAL, "the stated uncertainty of the properties reaches across an edge"
    elif tight:
        answer, reason = Answer.MARGINAL, f"only a factor of {tight[0].ratio:.3g} to the limit: {tight[0].name}"
    elif doubt := _doubt(beside, factor) or _slot_doubt(case):
        answer, reason = Answer.MARGINAL, doubt
    elif point.lower == 0.0 and case.unshaken.growth_rate == 0.0 and _at_rest(case, factor)[0] is not Answer.HELD:
        answer, reason = _at_rest(case, factor)
    else:
        answer, reason = Answer.HELD, "every mode dies out" if point.strictly_inside else "no mode outgrows the dwell"
    rests = case.unshaken.growth_rate <= case.allowance.growth
    worst = point.worst_wavenumber
    slow = isinstance(vessel := case.vessel, Box) and vessel.contact_line == "pinned"
    window = _window(case, drive) if answer is Answer.NOT_HELD and not rests and not slow else None
    return Verdict(
        answer=answer, question="operating point", reason=reason, proven=point.proven, spans_edge=spans,
        liquid=case.liquid, vessel=case.vessel, surroundings=case.surroundings, drive=drive,
        allowance=case.allowance, margin_factor=factor,
        amplitude_factor=case.waveform.amplitude / case.waveform.peak_acceleration,
        unshaken=case.unshaken, holds_unshaken=rests, window=window, strict_window=None, point=point,
        averaged_estimate=averaged_estimate(case, motion.frequency), limits=(*limits, *beside),
        cautions=case_cautions(case, motion.frequency, a), assumptions=assumptions(case, drive),
        worst_mode=case.spectrum.mode_name(worst) if math.isfinite(worst) else "",
        held_over=held_over(case, frequency=motion.frequency, acceleration=a) if ranges and point.inside else None,
    )  # fmt: skip


def _doubt(beside: list[Limit], factor: float) -> str:
    """Return why limits beside the edges make a verdict marginal, or nothing."""
    for limit in beside:
        if limit.name == WALL_DRAG and (not limit.ok or (limit.ratio is not None and limit.ratio < factor)):
            if limit.ok:
                return f"only a factor of {limit.ratio:.3g} to the lower edge with the drag of the side walls"
            return "the drag of the side walls lets it fall"
        if limit.name in (COVERED_LOWER, COVERED_UPPER) and not limit.ok:
            return "a skin on the surface would let it go; if the surface is surely clean, say --surface clean"
        if limit.name == TILT and not limit.ok:
            return "the tilt moves the mean surface by more than a tenth of the depth"
    return ""


def _slot_doubt(case: Case) -> str:
    if isinstance(case.vessel, Slot):
        return "only waves across the slot are counted; along its length longer waves may fall: give --box WIDTHxLENGTH"
    return ""


def _minimum_drive(case: Case, drive: DriveLimits, factor: float) -> Verdict:
    rests = case.unshaken.growth_rate <= case.allowance.growth
    window = strict = best = None
    if not rests:
        window = _window(case, drive)
        strict = window if case.allowance.growth == 0.0 else _window(case, drive, growth=0.0)
        best = window.recommended
    point, limits, cautions = None, [], [*case_cautions(case, None, None)]
    proven, beside = True, []
    if best is not None and not rests:
        checked = judged_point(case, frequency=best.frequency, acceleration=best.acceleration)
        proven = checked.proven and checked.growing_modes == 0
        beside = companion_limits(case, checked) if checked.inside else []
        limits = [*_limits(case, drive, best.frequency, best.acceleration), *beside]
        cautions = [*case_cautions(case, best.frequency, best.acceleration)]
    if rests:
        answer, reason = _at_rest(case, factor)
    elif best is None:
        answer, reason = Answer.NOT_HELD, window.reason if window else ""
    elif not proven:
        answer, reason = Answer.MARGINAL, "a window was found, but that no mode was missed in it is not proven"
    elif best.margin < factor:
        answer, reason = Answer.MARGINAL, f"the window is narrow: at best a factor of {best.margin:.3g} to its nearer edge"
    elif _spans_edge(case, best.frequency, best.acceleration):
        answer, reason = Answer.MARGINAL, "there is a window, but the uncertainty of the properties reaches across its edges"
    elif doubt := _doubt(beside, factor) or _slot_doubt(case):
        answer, reason = Answer.MARGINAL, f"there is a window, but at its point of largest margin: {doubt}"
    else:
        answer, reason = Answer.HELD, "there is a window between falling and breaking up"
    least = window.minimum_acceleration if window else None
    at = least.frequency if least else _typical_frequency(window)
    return Verdict(
        answer=answer, question="minimum drive", reason=reason, proven=proven, spans_edge=False,
        liquid=case.liquid, vessel=case.vessel, surroundings=case.surroundings, drive=drive,
        allowance=case.allowance, margin_factor=factor,
        amplitude_factor=case.waveform.amplitude / case.waveform.peak_acceleration,
        unshaken=case.unshaken, holds_unshaken=rests, window=window, strict_window=strict, point=point,
        averaged_estimate=averaged_estimate(case, at), limits=tuple(limits), cautions=tuple(cautions),
        assumptions=assumptions(case, drive), worst_mode="",
        drives_that_could=drives_that_could(case, window) if window is not None and not drive.stated else (),
    )  # fmt: skip


def _typical_frequency(window: HoldingWindow | None) -> float:
    if window is None:
        return 1.0  # nothing falls, so that the estimate is 0 at any frequency
    return float(window.frequencies[int(np.argmin(window.lower))])


def _at_rest(case: Case, factor: float) -> tuple[Answer, str]:
    """Judge a layer that needs no shaking; a liquid that wets the wall lets go earlier than the flat surface says."""
    if slot := _slot_doubt(case):
        return Answer.MARGINAL, slot
    if case.unshaken.growth_rate > 0.0:
        return Answer.HELD, "even unshaken it grows no faster than the dwell allows"
    if case.vessel.contact_line == "pinned":
        return Answer.HELD, "the surface tension holds it without shaking, as long as the rim holds the contact line"
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


def _limits(case: Case, drive: DriveLimits, frequency: float, acceleration: float) -> list[Limit]:
    return [
        pull_off_limit(
            density=case.liquid.density, depth=case.vessel.depth, vapour_pressure=case.liquid.vapour_pressure,
            acceleration=acceleration * float(case.gain(frequency)[1]), ambient_pressure=case.surroundings.ambient_pressure,
        ),
        *drive_limits(
            drive, frequency=frequency, acceleration=acceleration, product_mass=case.product_mass, shape=case.waveform
        ),
    ]  # fmt: skip


def _spans_edge(case: Case, frequency: float, acceleration: float) -> bool:
    """Return whether the point leaves the window at any corner of the stated uncertainty of the properties."""
    spread = case.liquid.uncertainty
    names = [name for name in ("viscosity", "surface_tension", "density") if spread.get(name, 0.0) > 0.0]
    corners: list[dict[str, float]] = [{}]
    for name in names[:2] if spread.get("density", 0.0) < 0.02 else names:
        value = getattr(case.liquid, name)
        corners = [{**c, name: value * (1.0 + sign * min(spread[name], 0.9))} for c in corners for sign in (-1, 1)]
    for corner in corners if names else []:
        values = {n: corner.get(n, getattr(case.liquid, n)) for n in ("density", "viscosity", "surface_tension")}
        edges = dataclasses.replace(case, liquid=Liquid(**values)).edges(np.array([frequency]))
        if not edges.lower[0] < acceleration < edges.upper[0]:
            return True
    return False
