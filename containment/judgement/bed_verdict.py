"""The verdict on a granular bed that is shaken vertically."""

import math
from collections.abc import Callable
from dataclasses import dataclass, replace
from typing import Any, Final

from containment.constants import STANDARD_ATMOSPHERE, STANDARD_GRAVITY
from containment.errors import InputError
from containment.given.bed_setting import bed_setting
from containment.given.drive import DriveLimits
from containment.given.grains import Grains
from containment.given.motion import Motion
from containment.given.quantities import si_value
from containment.given.vessel import Vessel
from containment.given.waveforms import PURE_SINE
from containment.judgement.bed_behaviour import BedBehaviour, bed_behaviour
from containment.judgement.bed_case import BED_MARGIN, BedCase, Judged, Mechanism
from containment.judgement.bed_face import BELOW_ARCH
from containment.judgement.bed_hanging import judge_open_bottom, judge_pocket
from containment.judgement.bed_notes import bed_assumptions, bed_cautions
from containment.judgement.bed_outlet import judge_outlet
from containment.judgement.bed_upright import QUIET_GAMMA, judge_upright
from containment.judgement.findings import Answer, Caution, Limit
from containment.judgement.limits import drive_limits
from containment.physics.bed.liquid_bridge import BRIDGE_SATURATION, saturation

__all__ = ["BedVerdict", "assess_bed"]

_JUDGES: Final[dict[str, Callable[[BedCase], Judged]]] = {
    "freeboard": judge_upright,
    "outlet": judge_outlet,
    "slot_outlet": judge_outlet,
    "open_bottom": judge_open_bottom,
    "pocket": judge_pocket,
}
_LARGEST_GAMMA: Final = 1e3
_FINEST_GAMMA: Final = 1e-9
_ALLOWED_DROP_OF_DEPTH: Final = 0.1
_OPENINGS: Final = (1e-6, 1e3)


@dataclass(frozen=True, slots=True, kw_only=True)
class BedVerdict:
    """The verdict on a bed, with all that it rests on.

    Attributes
    ----------
    answer : Answer
        Held, marginal or not held.
    question : str
        "operating point", or "minimum drive": the bed at rest, and the least drive that makes it flow.
    reason, binding : str
        What binds, in one sentence, and the name of the mechanism.
    holding_time : float or None
        Time after which the bed is lost, s: 0 at once, None where no limit is known.
    largest_gamma : float or None
        Largest A w^2/g that is still held, at the frequency given; None where none is, or where any is.
    flow_gamma : float or None
        Smallest A w^2/g at which the bed is not held; 0 at rest, None where none up to 1000 is known.
    largest_outlet : float or None
        Largest outlet, or open tube of that shape, that is still held at this level of shaking, m; None where none is.
    """

    answer: Answer
    question: str
    reason: str
    binding: str
    case: BedCase
    drive: DriveLimits
    motion: Motion | None
    mechanisms: tuple[Mechanism, ...]
    behaviour: BedBehaviour
    holding_time: float | None
    largest_gamma: float | None
    flow_gamma: float | None
    largest_outlet: float | None
    limits: tuple[Limit, ...]
    cautions: tuple[Caution, ...]
    assumptions: tuple[str, ...]

    @property
    def held(self) -> bool:
        """Whether the answer is held: not marginal, not 'not held'."""
        return self.answer is Answer.HELD

    @property
    def material(self) -> Grains:
        """The material."""
        return self.case.material

    def to_dict(self) -> dict[str, Any]:
        """Return the verdict as plain JSON types, SI, finite or None."""
        point = self.motion
        return {
            "schema": 1,
            "verdict": self.answer.value,
            "reason": self.reason,
            "binding": self.binding,
            "question": self.question,
            "material": self.material.to_dict(),
            "vessel": {key: value for key, value in self.case.vessel.to_dict().items() if key != "contact_line"},
            "setting": self.case.setting.to_dict(),
            "dwell_s": self.case.dwell,
            "margin_factor": self.case.margin,
            "operating_point": None
            if point is None
            else {
                "frequency_Hz": point.frequency,
                "acceleration_m_s2": point.acceleration,
                "amplitude_m": point.amplitude,
                "gamma": self.case.gamma,
            },
            "mechanisms": [mechanism.to_dict() for mechanism in self.mechanisms],
            "holding_time_s": self.holding_time,
            "largest_gamma": self.largest_gamma,
            "smallest_gamma_to_flow": self.flow_gamma,
            "largest_outlet_m": self.largest_outlet,
            "behaviour": self.behaviour.to_dict(),
            "limits": [limit.to_dict() for limit in self.limits],
            "cautions": [caution.to_dict() for caution in self.cautions],
            "assumptions": list(self.assumptions),
        }


def assess_bed(
    material: Grains,
    vessel: Vessel,
    motion: Motion | None = None,
    *,
    freeboard: Any = None,
    outlet: Any = None,
    slot_outlet: Any = None,
    open_bottom: bool = False,
    pocket: Any = None,
    dwell: Any = None,
    allowed_drop: Any = None,
    restitution: Any = None,
    moisture: Any = None,
    drive: DriveLimits | None = None,
    ambient_pressure: Any = STANDARD_ATMOSPHERE,
    margin_factor: Any = BED_MARGIN,
) -> BedVerdict:
    """Return the verdict on a bed in one of five settings, at a drive point or, without one, at rest.

    Parameters
    ----------
    material : Grains
        See `containment.grains`.
    vessel : Vessel
        Its depth is the bed's.
    motion : Motion, optional
        The drive point: a vertical sine.
    freeboard, outlet, slot_outlet, open_bottom, pocket
        Exactly one: wall above the bed in an upright open vessel (m); diameter of a round outlet (m); width of a slot (m);
        a tube without bottom; height of the gas above the bed in an upside-down vessel (m).
    dwell : str or pint.Quantity or float, optional
        Time for which it has to stay, s; for ever by default.
    allowed_drop : str or pint.Quantity or float, optional
        By which a bed on trapped gas may sink, m; a tenth of its depth by default.
    restitution : float, optional
        Of a grain on the bed's surface; 0.3 for a deep bed, 0.9 for one below ten grains, by default.
    moisture : float, optional
        Mass of liquid on the grains over their dry mass: shows the strength of liquid bridges, credits nothing.
    drive : DriveLimits, optional
        What the shaker can do.
    ambient_pressure : str or pint.Quantity or float
        Absolute, Pa.
    margin_factor : float
        Ratio to a bound below which the verdict is marginal.

    Raises
    ------
    InputError
        An input that cannot be used, or a moisture beyond what separate liquid bridges hold.

    Examples
    --------
    >>> import containment as ct
    >>> flour = ct.grains("custom", bulk_density=520.0, particle_density=1450.0, particle_diameter="75 um",
    ...                   yield_strength="700 Pa", wall_friction=0.4)
    >>> tube = ct.Cylinder(diameter="50 mm", depth="80 mm")
    >>> verdict = assess_bed(flour, tube, ct.Motion(frequency="50 Hz", acceleration="1 g_n"), open_bottom=True)
    >>> verdict.answer.value, verdict.binding
    ('marginal', 'plug on the wall')
    """
    drive = drive or DriveLimits()
    if motion is not None and motion.waveform != PURE_SINE:
        raise InputError("motion: a bed is judged for a pure vertical sine only; leave second harmonic and crank ratio out")
    setting = bed_setting(
        freeboard=freeboard, outlet=outlet, slot_outlet=slot_outlet, open_bottom=open_bottom, pocket=pocket
    )
    _check_fit(setting.kind, setting.size, vessel)
    depth = float(vessel.depth)
    case = BedCase(
        material=material,
        vessel=vessel,
        setting=setting,
        gamma=0.0 if motion is None else motion.acceleration / STANDARD_GRAVITY,
        frequency=None if motion is None else motion.frequency,
        ambient_pressure=si_value(ambient_pressure, "pressure", "ambient pressure", above=0.0, most=1e8),
        dwell=None if dwell is None else si_value(dwell, "time", "dwell", least=1e-3, most=1e10),
        allowed_drop=_ALLOWED_DROP_OF_DEPTH * depth
        if allowed_drop is None
        else si_value(allowed_drop, "length", "allowed drop", above=0.0, most=1e3),
        restitution=None if restitution is None else si_value(restitution, "ratio", "restitution", least=0.0, most=0.99),
        margin=si_value(margin_factor, "ratio", "margin factor", least=1.0, most=100.0),
    )
    if case.gamma > _LARGEST_GAMMA:
        raise InputError(f"motion: Gamma {case.gamma:.4g} is beyond the searched range; it must be at most {_LARGEST_GAMMA:g}")
    if drive.max_force is not None and case.product_mass is None:
        raise InputError(f"max force: a {vessel.kind} has no end, so the bed has no mass; leave the force out")
    damp = None if moisture is None else si_value(moisture, "ratio", "moisture", least=0.0, most=10.0)
    if damp is not None:
        _check_moisture(damp, material)
    judge = _JUDGES[setting.kind]
    judged = judge(case)
    acceleration = None if motion is None else motion.acceleration
    limits: list[Limit] = []
    if motion is not None:
        limits = drive_limits(
            drive, frequency=motion.frequency, acceleration=motion.acceleration, product_mass=case.product_mass
        )
    broken = [limit for limit in limits if not limit.ok]
    answer, reason, binding = judged.answer, judged.reason, judged.binding
    if broken and answer is not Answer.NOT_HELD:
        answer, reason, binding = Answer.NOT_HELD, f"a limit is not met: {broken[0].name}", broken[0].name
    return BedVerdict(
        answer=answer,
        question="minimum drive" if motion is None else "operating point",
        reason=reason,
        binding=binding,
        case=case,
        drive=drive,
        motion=motion,
        mechanisms=judged.mechanisms,
        behaviour=bed_behaviour(case, moisture=damp),
        holding_time=judged.holding_time,
        largest_gamma=_change_of_answer(case, judge, lambda a: a is Answer.HELD)[0],
        flow_gamma=_first_flow(case, judge),
        largest_outlet=_largest_outlet(case, judge, judged),
        limits=tuple(limits),
        cautions=bed_cautions(case, answer, acceleration=acceleration, moisture=damp),
        assumptions=bed_assumptions(case, moisture=damp),
    )


def _check_fit(kind: str, size: float | None, vessel: Vessel) -> None:
    if kind in ("outlet", "slot_outlet") and vessel.narrowest is not None and size is not None and size > vessel.narrowest:
        word = "outlet" if kind == "outlet" else "slot outlet"
        raise InputError(
            f"{word}: {size:g} m is wider than the vessel, {vessel.narrowest:g} m; for a tube without bottom give open bottom"
        )


def _check_moisture(moisture: float, material: Grains) -> None:
    """Refuse more liquid than separate bridges hold: what is asked for with it is their strength."""
    grain = {"particle_density": material.particle_density, "voidage": material.voidage}
    most = BRIDGE_SATURATION / float(saturation(moisture=1.0, **grain))
    if moisture > most:
        raise InputError(
            f"moisture: {moisture:g} is more than separate liquid bridges hold; it must be at most {most:.3g} for this bed, or "
            "be left out"
        )


def _change_of_answer(
    case: BedCase, judge: Callable[[BedCase], Judged], good: Callable[[Answer], bool]
) -> tuple[float | None, float | None]:
    """Return the last Gamma whose answer is good and the first whose answer is not; None where all, or none, are."""
    if not good(judge(case.at(0.0)).answer):
        return None, None
    low, high = 0.0, 0.0625
    while good(judge(case.at(high)).answer):
        low, high = high, 2.0 * high
        if high > _LARGEST_GAMMA:
            return None, None
    while high - low > max(1e-7 * high, _FINEST_GAMMA):
        middle = 0.5 * (low + high)
        if good(judge(case.at(middle)).answer):
            low = middle
        else:
            high = middle
    return low, high


def _first_flow(case: BedCase, judge: Callable[[BedCase], Judged]) -> float | None:
    if judge(case.at(0.0)).answer is Answer.NOT_HELD:
        return 0.0
    return _change_of_answer(case, judge, lambda a: a is not Answer.NOT_HELD)[1]


def _largest_outlet(case: BedCase, judge: Callable[[BedCase], Judged], judged: Judged) -> float | None:
    """Return the largest opening that is held at the case's level of shaking, m."""
    if case.setting.kind in ("outlet", "slot_outlet"):

        def held(size: float) -> bool:
            return judge(replace(case, setting=replace(case.setting, size=size))).answer is Answer.HELD

        low, high = _OPENINGS
        if not held(low):
            return None
        while high > low * (1.0 + 1e-9):
            middle = (low * high) ** 0.5
            low, high = (middle, high) if held(middle) else (low, middle)
        return low
    if case.setting.kind == "open_bottom" and case.vessel.narrowest is not None and case.gamma <= QUIET_GAMMA:
        named = {m.name: m for m in judged.mechanisms}
        plug, face, below = named["plug on the wall"], named["lower face of the bed"], named[BELOW_ARCH]
        if face.answer is Answer.HELD and plug.ratio and not case.material.free_flowing:
            width, deep = case.vessel.narrowest, 2.0 * case.vessel.depth
            # both loads grow with the width of the tube; the plug's strength falls with it once the bed is shallow for it
            full = width * plug.ratio / case.strength_margin * max(1.0, width / deep)
            widest = full if full <= deep else math.sqrt(full * deep)
            return min(widest, width * (math.inf if below.ratio is None else below.ratio))
    return None
