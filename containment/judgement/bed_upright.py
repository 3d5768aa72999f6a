"""Judgement of a bed in an upright open vessel: it and its grains must stay below the rim."""

import math
from typing import Final

from containment.constants import STANDARD_GRAVITY
from containment.judgement.bed_case import BedCase, Judged, Mechanism, worse
from containment.judgement.findings import Answer
from containment.physics.bed.cohesion import tensile_strength
from containment.physics.bed.flight import take_off_gamma
from containment.physics.bed.throw import bed_rise, grain_rise_bound, heap_rise, surface_throw

__all__ = ["BED_ROOM", "QUIET_GAMMA", "judge_upright"]

BED_ROOM: Final = 1.25
"""Freeboard over the throw of the bed below which it is marginal (common practice): the bed loosens as it flies."""

QUIET_GAMMA: Final = 0.8
"""Gamma up to which nothing leaves the base, whatever the frequency: below 1 with room for the bed's own resonance, which
can make its surface shake more than its base (common practice)."""


def judge_upright(case: BedCase) -> Judged:
    """Return what an upright bed does at the case's level of shaking."""
    g, gamma, room = STANDARD_GRAVITY, case.gamma, case.setting.size or 0.0
    found = [_take_off(case)]
    if gamma <= QUIET_GAMMA:
        return Judged(
            answer=Answer.HELD, binding=found[0].name, mechanisms=tuple(found),
            reason=f"the bed rides on its base: Gamma {gamma:.3g} lifts nothing (it takes more than 1)",
        )  # fmt: skip
    if case.frequency is None:
        return Judged(
            answer=Answer.MARGINAL, binding=found[0].name, mechanisms=tuple(found),
            reason="how high it is thrown depends on the frequency, which is not given",
        )  # fmt: skip
    w = 2.0 * math.pi * case.frequency
    a = gamma * g
    rise = bed_rise(acceleration=a, angular_frequency=w, gravity=g)
    throw = float(surface_throw(velocity=a / w, gravity=g)) if gamma > 1.0 else 0.0
    bound = float(
        grain_rise_bound(velocity=a / w, amplitude=a / w**2, restitution=case.grain_restitution, gravity=g)
    )
    found += [
        _height(
            "throw of the bed", rise, room, held=room >= BED_ROOM * rise, possible=room > rise or rise == 0.0,
            source="completely inelastic bed (Mehta & Luck 1990, from memory)",
            remark=f"its surface over the vessel; held with a factor of {BED_ROOM:g}",
        ),
        _height(
            "throw of single grains", bound, room, held=room > bound, possible=room > throw,
            source="bound of a grain that bounces on the moving surface (Barroso et al. 2009, abstract read)",
            remark=f"at the base's own speed they fly {1e3 * throw:.3g} mm; restitution {case.grain_restitution:g}",
        ),
    ]  # fmt: skip
    if gamma > 1.0:
        found.append(_heap(case, rise, room))
    answer = worse(*(m.answer for m in found[1:] if m.answer is not None))
    last = next(m for m in found[1:] if m.answer is answer)
    if answer is Answer.HELD:
        last = max(found[1:], key=lambda m: m.value or 0.0)
        reason = f"even the highest throw stays {1e3 * (room - (last.value or 0.0)):.3g} mm below the rim"
    elif answer is Answer.NOT_HELD:
        reason = f"the {last.name} passes the rim"
    elif last is found[1]:
        reason = "the throw of the bed comes close to the rim"
    else:
        reason = f"the bed itself stays in, but the {last.name} may pass the rim"
    return Judged(answer=answer, reason=reason, binding=last.name, mechanisms=tuple(found))


def _take_off(case: BedCase) -> Mechanism:
    material = case.material
    needed = 1.0
    remark = "from there it flies in every stroke; that alone loses nothing"
    if not material.free_flowing:
        tension = float(tensile_strength(material.yield_strength, friction_angle=material.angle_of_repose))
        needed = float(
            take_off_gamma(
                bulk_density=material.bulk_density, depth=case.vessel.depth, tensile_strength=tension,
                gravity=STANDARD_GRAVITY,
            )
        )  # fmt: skip
        remark = f"with its cohesion to the base perhaps from Gamma {needed:.3g}; not credited"
    return Mechanism(
        name="Gamma against take-off", answer=None, value=case.gamma, bound=1.0, unit="",
        source="force balance, common practice", ratio=1.0 / case.gamma if case.gamma else None, remark=remark,
    )  # fmt: skip


def _heap(case: BedCase, rise: float, room: float) -> Mechanism:
    width = case.widest
    name, source = "heap thrown against one wall", "angle of repose as a bound; heaping: Hsiau & Pan 1998, opening read"
    if width is None:
        return Mechanism(
            name=name, answer=Answer.MARGINAL, value=None, bound=room, unit="m", source=source,
            remark="a vessel without end does not bound the heap",
        )  # fmt: skip
    high = rise + float(heap_rise(width=width, angle=case.material.angle_of_repose))
    remark = "gas that the bed pumps drives the heaping"
    return _height(name, high, room, held=room > high, possible=True, source=source, remark=remark)


def _height(
    name: str, value: float, room: float, *, held: bool, possible: bool, source: str, remark: str
) -> Mechanism:
    answer = Answer.HELD if held else Answer.MARGINAL if possible else Answer.NOT_HELD
    return Mechanism(
        name=name, answer=answer, value=value, bound=room, unit="m", source=source, remark=remark,
        ratio=room / value if value > 0.0 else None,
    )  # fmt: skip
