"""The verdict screen of a granular bed: the answer first, then what holds and loses it."""

from containment.faces.screen import Screen, quantity_text, seconds_text, vessel_text
from containment.judgement.bed_case import Mechanism
from containment.judgement.bed_verdict import BedVerdict
from containment.judgement.findings import Answer
from containment.physics.bed.powder_group import GROUP_MEANING

__all__ = ["grains_headline", "grains_screen"]

_WORD = {Answer.HELD: "holds", Answer.MARGINAL: "marginal", Answer.NOT_HELD: "no"}


def _place(verdict: BedVerdict) -> str:
    setting = verdict.case.setting
    size = quantity_text(setting.size, "m")
    return {
        "freeboard": f"below the rim, {size} above the bed",
        "outlet": f"above the outlet of {size}",
        "slot_outlet": f"above the slot of {size}",
        "open_bottom": "in the tube without bottom",
        "pocket": f"upside-down under {size} of gas",
    }[setting.kind]


def grains_headline(verdict: BedVerdict) -> tuple[str, str, str]:
    """Return the word, the sentence and the reason that open the screen."""
    name = verdict.material.name if verdict.material.name != "custom" else "the bed"
    point = verdict.motion
    when = (
        "at rest"
        if point is None
        else f"at {point.frequency:.4g} Hz and {quantity_text(point.acceleration, 'm/s^2')} "
        f"({quantity_text(point.stroke, 'm')} peak to peak)"
    )
    word = {Answer.HELD: "HELD", Answer.MARGINAL: "MARGINAL", Answer.NOT_HELD: "NOT HELD"}[verdict.answer]
    if point is None:
        word += " AT REST"
    if verdict.answer is Answer.HELD and verdict.holding_time is not None:
        word += f" FOR {seconds_text(verdict.case.dwell or 0.0).upper()}, NOT FOR EVER"
    verb = {
        Answer.HELD: f"{name} stays {_place(verdict)} {when}",
        Answer.MARGINAL: f"do not rely on it that {name} stays {_place(verdict)} {when}",
        Answer.NOT_HELD: f"{name} does not stay {_place(verdict)} {when}",
    }[verdict.answer]
    return word, verb, verdict.reason


def grains_screen(
    verdict: BedVerdict, *, plain: bool = False, detail: bool = False, onto: Screen | None = None
) -> Screen:
    """Build the screen of a verdict, or put it onto the page of a report."""
    screen = Screen(plain=plain) if onto is None else onto
    screen.verdict(verdict.answer, *grains_headline(verdict))
    _case(screen, verdict)
    _mechanisms(screen, verdict)
    _reach(screen, verdict)
    _behaviour(screen, verdict)
    screen.limits(verdict.limits)
    screen.cautions(verdict.cautions)
    screen.heading("Assumed")
    screen.listing(verdict.assumptions)
    if detail:
        _detail(screen, verdict)
    return screen


def _case(screen: Screen, verdict: BedVerdict) -> None:
    material, case = verdict.material, verdict.case
    factor, unit = (1e3, "mm") if material.d50 >= 1e-3 else (1e6, "um")
    sizes = f"{factor * material.d50:.4g} {unit}"
    if not material.one_size:
        sizes += f" (a tenth below {factor * material.d10:.3g}, a tenth above {factor * material.d90:.3g} {unit})"
    strength = "none: free-flowing"
    if not material.free_flowing:
        strength = f"{material.yield_strength:.4g} Pa unconfined" + (
            "" if material.strength_measured else ", typical: measure it"
        )
    screen.heading("Case")
    screen.rows(
        [
            ("material", material.name),
            ("grains", sizes),
            ("bulk density", f"{material.bulk_density:.4g} kg/m^3, {100.0 * material.voidage:.3g} % pores"),
            ("strength", strength),
            ("vessel", f"{vessel_text(case.vessel)}, bed {1e3 * case.vessel.depth:.4g} mm deep"),
            ("has to stay", "for ever" if case.dwell is None else f"for {seconds_text(case.dwell)}"),
        ]
    )


def _mechanisms(screen: Screen, verdict: BedVerdict) -> None:
    screen.heading("What holds it, what loses it")
    rows = []
    for m in verdict.mechanisms:
        if m.answer is None and m.bound is None:
            continue
        word = _WORD[m.answer] if m.answer is not None else "-"
        bound = "for ever" if m.bound is None and m.unit == "s" else quantity_text(m.bound, m.unit)
        factor = f"x {m.ratio:.3g}" if m.ratio is not None else ""
        rows.append((word, m.name, quantity_text(m.value, m.unit), "bound " + bound, factor))
    screen.rows(rows, right=(2, 3, 4))
    figures = [m for m in verdict.mechanisms if m.answer is None and m.bound is None]
    screen.rows([(m.name, quantity_text(m.value, m.unit), m.remark) for m in figures])
    screen.rows([("binds", f"{verdict.binding}{_remark(verdict.mechanisms, verdict.binding)}")])


def _remark(mechanisms: tuple[Mechanism, ...], name: str) -> str:
    remark = next((m.remark for m in mechanisms if m.name == name and m.bound is not None), "")
    return f": {remark}" if remark else ""


def _reach(screen: Screen, verdict: BedVerdict) -> None:
    case = verdict.case
    at = "" if case.frequency is None else f" at {case.frequency:.4g} Hz"
    rows = []
    if verdict.largest_gamma is not None:
        rows.append(("held up to", f"{verdict.largest_gamma:.3g} g_n{at}"))
    elif verdict.flow_gamma is None and verdict.held:
        rows.append(("held up to", "no level of shaking up to 1000 g_n is known to loosen it"))
    else:
        rows.append(("held up to", "not counted as held at any level, not even at rest"))
    if verdict.flow_gamma == 0.0:
        rows.append(("lost from", "at rest already: no shaking is needed to make it flow"))
    elif verdict.flow_gamma is not None:
        why = "it passes the rim" if case.setting.kind == "freeboard" else "nothing is known to hold it; try whether it flows"
        rows.append(("lost from", f"{verdict.flow_gamma:.3g} g_n{at}: from there {why}"))
    else:
        rows.append(("lost from", "not known" if case.frequency is None else "not up to 1000 g_n"))
    if verdict.largest_outlet is not None:
        rows.append(("largest opening", f"{quantity_text(verdict.largest_outlet, 'm')} is still held at this level"))
    elif case.setting.kind in ("outlet", "slot_outlet", "open_bottom"):
        rows.append(("largest opening", "none is counted as held at this level"))
    if verdict.holding_time is not None:
        time = verdict.holding_time
        rows.append(("stays for", f"about {seconds_text(time)}" if time > 0.0 else "no time: it starts at once"))
    screen.heading("How far it goes")
    screen.rows(rows)


def _behaviour(screen: Screen, verdict: BedVerdict) -> None:
    b = verdict.behaviour
    rows = [("powder group", f"{b.powder_group}: {GROUP_MEANING[b.powder_group]}")]
    if b.flight_time_s is not None and b.landing_velocity_m_s is not None:
        how = {None: "in no repeating pattern", 1: "every flight alike", 2: "long and short flights alternate"}
        pattern = how.get(b.flights_in_pattern, f"repeating after {b.flights_in_pattern} flights")
        rows.append(
            (
                "flight",
                f"{1e3 * b.flight_time_s:.3g} ms, lands at {b.landing_velocity_m_s:.3g} m/s, rises up to "
                f"{quantity_text(b.gap_m, 'm')} over the vessel; {pattern}",
            )
        )
    elif b.gamma > 0.0 and verdict.case.setting.kind == "freeboard":
        rows.append(("flight", "none: the bed rides"))
    if b.gas_drag is not None and b.flight_time_s is not None:
        word = "does not matter" if b.gas_drag < 0.1 else "lowers the flight" if b.gas_drag < 1.0 else "rules the flight"
        lower = f"; with it up to {quantity_text(b.gap_with_gas_m, 'm')}" if b.gas_drag >= 0.1 else ""
        if (b.gas_compliance or 0.0) > 1.0:
            lower += "; the gas in the pores is compressed, so that this too is rough"
        rows.append(("gas in the pores", f"{word} (drag number {b.gas_drag:.2g}{lower})"))
    rows.append(
        (
            "stress at the base",
            f"{quantity_text(b.base_stress_at_rest_Pa, 'Pa')} at rest, up to "
            f"{quantity_text(b.base_stress_bound_Pa, 'Pa')} in this motion",
        )
    )
    if b.level_drop_m > 0.0:
        rows.append(("level", f"can sink by up to {quantity_text(b.level_drop_m, 'm')} as the bed packs"))
    if not verdict.material.free_flowing:
        rows.append(("Bond number", f"{b.bond_number:.3g}: a contact bears that many weights of the mean grain"))
    if b.bridge_strength_Pa is not None:
        rows.append(
            (
                "liquid bridges",
                f"up to {quantity_text(b.bridge_strength_Pa, 'Pa')} in tension, Bond number up to "
                f"{b.bridge_bond_number:.3g}: upper estimate, not credited",
            )
        )
    screen.heading("What the bed does")
    screen.rows(rows)


def _detail(screen: Screen, verdict: BedVerdict) -> None:
    screen.heading("Sources and method")
    rows = [(name.replace("_", " "), source) for name, source in verdict.material.sources.items()]
    rows += [(m.name, f"{m.source}. {m.remark}".rstrip(". ")) for m in verdict.mechanisms]
    rows += [(limit.name, f"{limit.source}. {limit.remark}".rstrip(". ")) for limit in verdict.limits]
    screen.rows(rows)
