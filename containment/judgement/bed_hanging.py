"""Judgement of a bed with a free lower face: hanging in its tube as a plug, or carried for a time by trapped gas."""

import math
from typing import Final

from containment.constants import STANDARD_GRAVITY
from containment.judgement.bed_case import BedCase, Judged, Mechanism, better, worse
from containment.judgement.bed_face import lower_face, powder_below_arch
from containment.judgement.bed_upright import QUIET_GAMMA
from containment.judgement.findings import Answer, seconds_text
from containment.physics.bed.below_arch import shallow_factor
from containment.physics.bed.permeability import permeability, reynolds_number
from containment.physics.bed.powder_group import powder_group
from containment.physics.bed.trapped_gas import pocket_swing, sink_velocity, sudden_drop, support_time
from containment.physics.bed.wall_plug import plug_load, wall_shear_strength

__all__ = ["FREE_FLOWING", "judge_open_bottom", "judge_pocket"]

FREE_FLOWING: Final = (
    "dry free-flowing grains are never held upside-down by shaking: nothing binds them, no mean force pushes them back, "
    "and each stroke throws them off"
)
"""The one sentence that a free-flowing bed upside-down gets."""

_RAINS: Final = "grains of the lower face weigh more than their contacts bear: they rain off"
_UNLOADED: Final = "each stroke may unload the arch that presses the plug against the wall"
_SPALLS: Final = "the plug itself is carried, but pieces may break off below the arch that carries it"


def judge_open_bottom(case: BedCase) -> Judged:
    """Return what a bed in a tube without bottom does: the wall must carry it, and its lower face must hold together."""
    found = _supports(case)
    answer, reason, binding = _hanging(case, *found)
    return Judged(
        answer=answer, reason=reason, binding=binding.name, mechanisms=found,
        holding_time=0.0 if answer is Answer.NOT_HELD else None,
    )  # fmt: skip


def judge_pocket(case: BedCase) -> Judged:
    """Return what a bed upside-down under a pocket of gas does: a plug holds it for good, the gas for a time."""
    plug, face, below = _supports(case)
    answer, reason, binding = _hanging(case, plug, face, below)
    drop, span, time = _gas(case)
    found = (plug, face, below, drop, span)
    assert drop.answer is not None and span.answer is not None and face.answer is not None
    carried = worse(drop.answer, span.answer, face.answer)
    if better(answer, carried) is answer and answer is not Answer.NOT_HELD:
        return Judged(answer=answer, reason=reason, binding=binding.name, mechanisms=found)
    if case.material.free_flowing or face.answer is Answer.NOT_HELD:
        # the gas could stand in for the wall, but nothing stands in for the lower face
        why = FREE_FLOWING if case.material.free_flowing else _RAINS
        return Judged(answer=Answer.NOT_HELD, reason=why, binding=face.name, mechanisms=found, holding_time=0.0)
    if drop.answer is Answer.NOT_HELD:
        return Judged(
            answer=Answer.NOT_HELD, binding=drop.name, mechanisms=found, holding_time=0.0,
            reason="the wall does not carry it, and it drops and swings further than allowed on the gas",
        )  # fmt: skip
    wanted = "for ever" if case.dwell is None else f"for {seconds_text(case.dwell)}"
    word = {
        Answer.HELD: f"the trapped gas carries it for about {seconds_text(time)}, and no longer",
        Answer.MARGINAL: f"the trapped gas carries it for about {seconds_text(time)} as long as no channel opens in the bed",
        Answer.NOT_HELD: f"the trapped gas carries it for about {seconds_text(time)}, not {wanted}",
    }
    weakest = face if face.answer is carried and carried is Answer.MARGINAL and span.answer is Answer.HELD else span
    return Judged(answer=carried, reason=word[carried], binding=weakest.name, mechanisms=found, holding_time=time)


def _supports(case: BedCase) -> tuple[Mechanism, Mechanism, Mechanism]:
    slope = min(case.material.wall_friction, 1.0)
    return _plug(case), lower_face(case), powder_below_arch(case, span=case.vessel.narrowest, slope=slope)


def _hanging(case: BedCase, plug: Mechanism, face: Mechanism, below: Mechanism) -> tuple[Answer, str, Mechanism]:
    """Return what the plug says with its lower face, why, and what binds."""
    assert plug.answer is not None and face.answer is not None and below.answer is not None
    if case.material.free_flowing:
        return Answer.NOT_HELD, FREE_FLOWING, face
    answer = worse(plug.answer, face.answer, below.answer)
    if answer is Answer.HELD:
        return answer, "the wall carries the bed as a plug", min(plug, face, key=lambda m: m.ratio or 0.0)
    binding = next(m for m in (plug, face, below) if m.answer is answer)
    if binding is below:
        short = (below.ratio or 0.0) < 1.0
        return answer, _SPALLS if short else case.shortfall(f"the {below.name}", math.inf), below
    if answer is Answer.MARGINAL:
        if binding is plug and (plug.ratio or 0.0) >= case.strength_margin and case.gamma > QUIET_GAMMA:
            return answer, _UNLOADED, plug
        return answer, case.shortfall(f"the {binding.name}", binding.ratio or 0.0), binding
    if binding is plug:
        share = float(shallow_factor(depth=case.vessel.depth, span=case.vessel.narrowest or math.inf))
        if share < 1.0 and (plug.ratio or 0.0) >= share:  # a deep bed would be carried
            return answer, "the bed is too shallow for an arch that would carry it between the walls", plug
        return answer, "the powder is too weak for the wall to carry it: the plug slides out", plug
    return answer, _RAINS, face


def _plug(case: BedCase) -> Mechanism:
    material, around = case.material, case.perimeter_ratio
    source = "arch between vertical walls, derived; after Walker 1966, abstract read"
    strength = float(wall_shear_strength(material.yield_strength, wall_friction=material.wall_friction))
    if around == 0.0:
        return Mechanism(
            name="plug on the wall", answer=Answer.NOT_HELD, value=None, bound=strength, unit="Pa", source=source,
            remark="no wall",
        )  # fmt: skip
    load = float(
        plug_load(
            bulk_density=material.bulk_density, gamma=case.gamma, perimeter_ratio=around, gravity=STANDARD_GRAVITY
        )
    )
    span = case.vessel.narrowest or math.inf
    share = float(shallow_factor(depth=case.vessel.depth, span=span))
    strength *= share
    ratio = strength / load
    answer = Answer.NOT_HELD if material.free_flowing else case.graded(ratio)
    remark = "free-flowing: nothing presses it against the wall" if material.free_flowing else "weight times 1 + Gamma"
    if share < 1.0 and not material.free_flowing:
        remark += f"; the bed is too shallow for a full arch, which bears {share:.3g} of it"
    if case.gamma > QUIET_GAMMA and not material.free_flowing:
        # the wall's friction lives on the thrust of the arch, which a bed without weight for part of a stroke has not
        answer = worse(answer, Answer.MARGINAL)
        remark += f"; above Gamma {QUIET_GAMMA:g} {_UNLOADED}"
    return Mechanism(
        name="plug on the wall", answer=answer, value=load, bound=strength, unit="Pa", ratio=ratio, source=source,
        remark=remark,
    )  # fmt: skip


def _gas(case: BedCase) -> tuple[Mechanism, Mechanism, float]:
    """Return the drop and the time of the gas support, and that time, s."""
    material, depth, pocket = case.material, case.vessel.depth, case.setting.size or 0.0
    g, p = STANDARD_GRAVITY, case.ambient_pressure
    bed = {"pocket": pocket, "bulk_density": material.bulk_density, "depth": depth, "ambient_pressure": p}
    first = float(sudden_drop(**bed, gravity=g))
    swing = 0.0
    if case.gamma > 0.0 and case.frequency is not None and pocket > 0.0:
        w = 2.0 * math.pi * case.frequency
        # the tighter of the two permeabilities in use leaks, and so damps, less
        k = float(permeability(diameter=material.d50, voidage=material.voidage))
        swing = pocket_swing(amplitude=case.gamma * g / (w * w), angular_frequency=w, permeability=k, **bed)
    total = first + swing
    allowed = case.allowed_drop
    # at the heaviest moment of the stroke: a bound also where the bed meets the lid and gas is let in but not out
    velocity = float(
        sink_velocity(
            bulk_density=material.bulk_density, diameter=material.d50, voidage=material.voidage,
            gravity=g * (1.0 + case.gamma),
        )
    )  # fmt: skip
    time = float(support_time(allowed_drop=allowed, first_drop=total, velocity=velocity))
    drop = Mechanism(
        name="drop until the gas carries it", answer=Answer.HELD if total < allowed else Answer.NOT_HELD,
        value=total if math.isfinite(total) else None, bound=allowed, unit="m",
        ratio=allowed / total if total > 0.0 and math.isfinite(total) else None,
        source="isothermal gas, energy balance; swing of a mass on the gas as a spring",
        remark="let go at once, and swinging at its worst on the gas" if swing else "let go at once",
    )  # fmt: skip
    channels = powder_group(diameter=material.d50, particle_density=material.particle_density) == "C"
    if case.dwell is None or time < case.dwell:
        answer = Answer.NOT_HELD
    else:
        sure = time >= case.margin * case.dwell and not channels and case.gamma <= QUIET_GAMMA
        answer = Answer.HELD if sure else Answer.MARGINAL
    reynolds = float(reynolds_number(velocity, diameter=material.d50))
    span = Mechanism(
        name="time on the trapped gas", answer=answer, value=time, bound=case.dwell, unit="s",
        ratio=time / case.dwell if case.dwell else None,
        source="Darcy, Ergun 1952; permeability of spheres of d50",
        remark=f"sinks at {1e3 * velocity:.3g} mm/s, Reynolds number {reynolds:.2g}"
        + ("; cohesive powder cracks, and one channel ends it" if channels else "")
        + ("; strokes above Gamma 1 may crack it" if case.gamma > QUIET_GAMMA and not channels else ""),
    )  # fmt: skip
    return drop, span, time
