"""Judgement of a bed with a free lower face: hanging in its tube as a plug, or carried for a time by trapped gas."""

import math
from typing import Final

from containment.constants import STANDARD_GRAVITY
from containment.judgement.bed_case import BedCase, Judged, Mechanism, better, worse
from containment.judgement.bed_upright import QUIET_GAMMA
from containment.judgement.findings import Answer, seconds_text
from containment.physics.bed.cohesion import bond_number, contact_force, tensile_strength
from containment.physics.bed.permeability import reynolds_number
from containment.physics.bed.powder_group import powder_group
from containment.physics.bed.trapped_gas import carrying_drop, pocket_frequency, sink_velocity, support_time
from containment.physics.bed.wall_plug import plug_load, wall_shear_strength

__all__ = ["FREE_FLOWING", "judge_open_bottom", "judge_pocket"]

FREE_FLOWING: Final = (
    "dry free-flowing grains are never held upside-down by shaking: nothing binds them, no mean force pushes them back, "
    "and each stroke throws them off"
)
"""The one sentence that a free-flowing bed upside-down gets."""


def judge_open_bottom(case: BedCase) -> Judged:
    """Return what a bed in a tube without bottom does: the wall must carry it, and its lower face must hold together."""
    plug, face = _plug(case), _lower_face(case)
    answer, reason, binding = _hanging(case, plug, face)
    return Judged(
        answer=answer, reason=reason, binding=binding, mechanisms=(plug, face),
        holding_time=0.0 if answer is Answer.NOT_HELD else None,
    )  # fmt: skip


def judge_pocket(case: BedCase) -> Judged:
    """Return what a bed upside-down under a pocket of gas does: a plug holds it for good, the gas for a time."""
    plug, face = _plug(case), _lower_face(case)
    answer, reason, binding = _hanging(case, plug, face)
    drop, span, time = _gas(case)
    found = (plug, face, drop, span)
    assert drop.answer is not None and span.answer is not None and face.answer is not None
    carried = worse(drop.answer, span.answer, face.answer)
    if better(answer, carried) is answer and answer is not Answer.NOT_HELD:
        return Judged(answer=answer, reason=reason, binding=binding, mechanisms=found)
    if case.material.free_flowing:
        return Judged(answer=Answer.NOT_HELD, reason=FREE_FLOWING, binding=face.name, mechanisms=found, holding_time=0.0)
    if face.answer is Answer.NOT_HELD:
        return Judged(answer=Answer.NOT_HELD, reason=reason, binding=face.name, mechanisms=found, holding_time=0.0)
    if drop.answer is Answer.NOT_HELD:
        return Judged(
            answer=Answer.NOT_HELD, binding=drop.name, mechanisms=found, holding_time=0.0,
            reason="the wall does not carry it, and it drops further than allowed before the gas does",
        )  # fmt: skip
    wanted = "for ever" if case.dwell is None else f"for {seconds_text(case.dwell)}"
    word = {
        Answer.HELD: f"the trapped gas carries it for about {seconds_text(time)}, and no longer",
        Answer.MARGINAL: f"the trapped gas carries it for about {seconds_text(time)} as long as no channel opens in the bed",
        Answer.NOT_HELD: f"the trapped gas carries it for about {seconds_text(time)}, not {wanted}",
    }
    weakest = face if face.answer is carried and carried is Answer.MARGINAL and span.answer is Answer.HELD else span
    return Judged(answer=carried, reason=word[carried], binding=weakest.name, mechanisms=found, holding_time=time)


def _hanging(case: BedCase, plug: Mechanism, face: Mechanism) -> tuple[Answer, str, str]:
    assert plug.answer is not None and face.answer is not None
    if case.material.free_flowing:
        return Answer.NOT_HELD, FREE_FLOWING, face.name
    answer = worse(plug.answer, face.answer)
    binding = face if (face.ratio or 0.0) < (plug.ratio or 0.0) else plug
    if answer is Answer.HELD:
        return answer, "the wall carries the bed as a plug", binding.name
    binding = face if face.answer is answer and plug.answer is not answer else plug
    if answer is Answer.MARGINAL:
        return answer, case.shortfall(f"the {binding.name}", binding.ratio or 0.0), binding.name
    if binding is plug:
        return answer, "the powder is too weak for the wall to carry it: the plug slides out", plug.name
    return answer, "grains of the lower face weigh more than their contacts bear: they rain off", face.name


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
    ratio = strength / load
    answer = Answer.NOT_HELD if material.free_flowing else case.graded(ratio)
    remark = "free-flowing: nothing presses it against the wall" if material.free_flowing else "weight times 1 + Gamma"
    return Mechanism(
        name="plug on the wall", answer=answer, value=load, bound=strength, unit="Pa", ratio=ratio, source=source,
        remark=remark,
    )  # fmt: skip


def _lower_face(case: BedCase) -> Mechanism:
    material = case.material
    tension = float(tensile_strength(material.yield_strength, friction_angle=material.angle_of_repose))
    force = float(contact_force(tension, diameter=material.d50, voidage=material.voidage))
    # the contact is that of the mean grain; the heaviest grain has to hang from such a contact
    bond = float(
        bond_number(force, diameter=material.d90, particle_density=material.particle_density, gravity=STANDARD_GRAVITY)
    )
    needed = 1.0 + case.gamma
    return Mechanism(
        name="lower face of the bed", answer=case.graded(bond / needed), value=needed, bound=bond,
        unit="", ratio=bond / needed, source="Rumpf 1962, from memory; force balance",
        remark="Bond number of the coarse grains (d90) on contacts of the mean strength",
    )  # fmt: skip


def _gas(case: BedCase) -> tuple[Mechanism, Mechanism, float]:
    """Return the drop and the time of the gas support, and that time, s."""
    material, depth, pocket = case.material, case.vessel.depth, case.setting.size or 0.0
    g, p = STANDARD_GRAVITY, case.ambient_pressure
    first = float(
        carrying_drop(
            pocket=pocket, bulk_density=material.bulk_density, depth=depth, ambient_pressure=p, gravity=g
        )
    )
    swing = 0.0
    if case.gamma > 0.0 and case.frequency is not None and pocket > 0.0:
        own = float(
            pocket_frequency(pocket=pocket, bulk_density=material.bulk_density, depth=depth, ambient_pressure=p)
        )
        r2 = (case.frequency / own) ** 2
        amplitude = case.gamma * g / (2.0 * math.pi * case.frequency) ** 2
        # below its resonance on the gas the bed swings by the undamped answer; the quasi-static part of the load is the
        # least, so that a fast drive is not credited with standing still
        swing = amplitude * r2 / abs(1.0 - r2) if r2 < 1.0 else max(amplitude * r2 / (r2 - 1.0), amplitude)
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
        source="isothermal gas, force balance; swing of a mass on the gas as a spring", remark="bound: the allowed drop",
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
