"""Judgement of a bed over an outlet: too coarse to pass, arched by cohesion, arched by chance, or pouring."""

import math
from typing import Final

from containment.constants import STANDARD_GRAVITY
from containment.judgement.bed_case import BedCase, Judged, Mechanism, better, worse
from containment.judgement.bed_face import BELOW_ARCH, lower_face, powder_below_arch
from containment.judgement.bed_upright import QUIET_GAMMA
from containment.judgement.findings import Answer, seconds_text
from containment.physics.bed.arching import ARCH_RATIO, grains_before_arch, lasting_arch_outlet, passes_outlet
from containment.physics.bed.below_arch import shallow_factor
from containment.physics.bed.cohesion import arch_outlet, arch_shape_factor
from containment.physics.bed.discharge import SHAKEN_FACTOR, discharge_rate, slot_discharge_rate

__all__ = ["judge_outlet"]

_TOO_FINE: Final = 4e-4
_ARCH: Final = "cohesive arch"


def judge_outlet(case: BedCase) -> Judged:
    """Return what a bed over a round outlet or a slot does at the case's level of shaking."""
    coarse, arch, chance = _too_coarse(case), _cohesive_arch(case), _chance_arch(case)
    # the arch alone does not hold the bed: what is below it has to hang
    arched = [arch]
    if not case.material.free_flowing:
        size = case.setting.size or 0.0
        arched += [lower_face(case, opening=size), powder_below_arch(case, span=size, slope=1.0)]
    cohesive = worse(*(m.answer for m in arched if m.answer is not None))
    supports = ((coarse, coarse.answer), (arch, cohesive), (chance, chance.answer))
    answer = better(*(said for _, said in supports if said is not None))
    held_by = next(m for m, said in supports if said is answer)
    weakest = next(m for m in arched if m.answer is cohesive)
    figures = _discharge(case)
    found = (coarse, *arched, chance, *figures)
    if answer is Answer.NOT_HELD:
        binding, reason = _why_lost(case, weakest, chance, figures[0])
        return Judged(answer=answer, reason=reason, binding=binding.name, mechanisms=found, holding_time=0.0)
    if held_by is arch:
        reason = "the cohesive arch bears the load"
        if answer is Answer.MARGINAL:
            return Judged(answer=answer, reason=_why_doubtful(case, weakest), binding=weakest.name, mechanisms=found)
    elif held_by is coarse:
        reason = f"the grains are too coarse for the outlet, as long as none is finer than {1e3 * coarse.value:.3g} mm" if (
            answer is Answer.HELD and coarse.value is not None
        ) else "most grains are too coarse for the outlet, but finer ones sift through"
    else:
        reason = "only an arch formed by chance blocks the outlet, and any knock may break it"
    return Judged(answer=answer, reason=reason, binding=held_by.name, mechanisms=found)


def _why_lost(case: BedCase, weakest: Mechanism, chance: Mechanism, flow: Mechanism) -> tuple[Mechanism, str]:
    """Return what loses a bed that nothing holds, and why in one sentence."""
    if not case.material.free_flowing:
        if weakest.name != _ARCH:
            return weakest, "the arch would bear the load, but coarse grains rain from its lower face"
        if (weakest.ratio or 0.0) >= 1.0:
            return weakest, "the bed lands on its arch in each stroke, and the arch has too little in hand for that shock"
        share = float(shallow_factor(depth=case.vessel.depth, span=case.setting.size or math.inf))
        if share < 1.0 and (weakest.ratio or 0.0) >= share:  # a deep bed would arch
            return weakest, "the bed is too shallow for an arch that would bear it over so wide an outlet"
        return weakest, "the outlet is wider than the powder can arch over"
    if float(lasting_arch_outlet(diameter=case.material.d10)) > (case.setting.size or 0.0) > 0.0:
        return chance, "each stroke unloads the grains' arch and breaks it" if _round(case) else (
            "no size is known below which a slot stays blocked"
        )
    return flow, "the grains flow freely through the outlet"


def _why_doubtful(case: BedCase, weakest: Mechanism) -> str:
    """Return why a cohesive arch is no better than marginal."""
    if weakest.name == BELOW_ARCH and (weakest.ratio or 0.0) < 1.0:
        return "the arch would bear the load, but pieces may break off below it"
    if weakest.name == _ARCH and case.gamma > QUIET_GAMMA and case.material.strength_measured:
        return "the arch would bear the load, but the bed may lift off and land on it in each stroke"
    name = {_ARCH: "the cohesive arch"}.get(weakest.name, f"the {weakest.name}")
    return case.shortfall(name, weakest.ratio or 0.0)


def _round(case: BedCase) -> bool:
    return case.setting.kind == "outlet"


def _too_coarse(case: BedCase) -> Mechanism:
    size, material = case.setting.size or 0.0, case.material
    answer = Answer.NOT_HELD
    if not passes_outlet(outlet=size, smallest_grain=material.d10):
        sure = material.one_size and size * case.margin <= material.d10
        answer = Answer.HELD if sure else Answer.MARGINAL
    return Mechanism(
        name="grains too coarse for the outlet", answer=answer, value=size, bound=material.d10, unit="m",
        ratio=material.d10 / size, source="geometry; shaken flow down to one grain diameter: Janda et al. 2009, abstract read",
        remark="d10 against the outlet: a tenth of the mass is finer" if not material.one_size else "all grains alike",
    )  # fmt: skip


def _cohesive_arch(case: BedCase) -> Mechanism:
    size, material = case.setting.size or 0.0, case.material
    factor = arch_shape_factor(slot=not _round(case))
    span = float(
        arch_outlet(
            yield_strength=material.yield_strength, bulk_density=material.bulk_density, gamma=case.gamma,
            shape_factor=factor, gravity=STANDARD_GRAVITY,
        )
    )  # fmt: skip
    share = float(shallow_factor(depth=case.vessel.depth, span=size))
    ratio = share * span / size
    answer = Answer.NOT_HELD
    remark = f"H = {factor:g}; weight times 1 + Gamma"
    if share < 1.0:
        remark += f"; the bed is too shallow for a full arch, which bears {share:.3g} of it"
    if material.free_flowing:
        remark = "free-flowing: no strength to arch with"
    else:
        answer = case.graded(ratio)
        if case.gamma > QUIET_GAMMA:  # a shock of unknown size: nothing less than the full margin may still count
            answer = Answer.MARGINAL if ratio >= case.strength_margin else Answer.NOT_HELD
            remark += f"; above Gamma {QUIET_GAMMA:g} the bed may lift and land on the arch; that shock is not covered"
    return Mechanism(
        name=_ARCH, answer=answer, value=size, bound=share * span, unit="m", ratio=ratio,
        source="Jenike 1964, textbook form read; shaken: force balance", remark=remark,
    )  # fmt: skip


def _chance_arch(case: BedCase) -> Mechanism:
    size, material = case.setting.size or 0.0, case.material
    widest = float(lasting_arch_outlet(diameter=material.d10))
    lasting = _round(case) and size < widest
    answer = Answer.MARGINAL if lasting and case.gamma < 1.0 else Answer.NOT_HELD
    remark = f"spheres, {ARCH_RATIO['spheres']:g} d10; elongated grains arch up to {ARCH_RATIO['elongated']:g}"
    if not _round(case):
        remark = "no sourced size for slots: not credited"
    elif lasting:
        before = float(grains_before_arch(size / material.d10))
        remark += f"; at rest about {max(before, 1.0):.2g} spheres pass before it forms"
    return Mechanism(
        name="arch of grains by chance", answer=answer, value=size, bound=widest, unit="m", ratio=widest / size,
        source="Zuriguel et al. 2005, abstract read, figures from memory; never better than marginal", remark=remark,
    )  # fmt: skip


def _discharge(case: BedCase) -> list[Mechanism]:
    size, material = case.setting.size or 0.0, case.material
    common = {"diameter": material.d50, "bulk_density": material.bulk_density, "gravity": STANDARD_GRAVITY}
    remark = "if nothing blocks it; shaking hardly changes it"
    if material.d50 < _TOO_FINE:
        remark = "an upper figure: so fine a powder flows slower, against its own gas"
    elif not material.free_flowing:
        remark = "an upper figure for a powder with cohesion"
    mass = case.product_mass
    if _round(case):
        rate = SHAKEN_FACTOR * float(discharge_rate(outlet=size, **common))
        unit, source = "kg/s", "Beverloo et al. 1961, coefficients from memory"
    else:
        length = case.widest if case.widest is not None else 1.0
        rate = SHAKEN_FACTOR * float(slot_discharge_rate(width=size, length=length, **common))
        unit, source = "kg/s", "Nedderman 1992, from memory"
        if case.vessel.kind in ("slot", "unbounded"):
            unit, mass = "kg/s per m", None
    if mass is not None and rate > 0.0:
        remark += f"; empties in {seconds_text(mass / rate)}"
    return [Mechanism(name="discharge rate", answer=None, value=rate, bound=None, unit=unit, source=source, remark=remark)]
