"""The verdict screen of a liquid layer: the answer first, then the numbers that it rests on."""

import math

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.faces.screen import Screen, quantity_text, seconds_text, vessel_text
from containment.judgement.case import spectrum_of
from containment.judgement.findings import Answer
from containment.judgement.operating_point import OperatingPoint
from containment.judgement.verdict import Verdict
from containment.judgement.window import HoldingPoint

__all__ = ["headline", "liquid_screen", "vessel_text"]


def _stroke(frequency: float, acceleration: float, factor: float) -> str:
    return f"{2e3 * factor * acceleration / (2.0 * math.pi * frequency) ** 2:.3g} mm peak to peak"


def _drive_point(frequency: float, acceleration: float, factor: float) -> str:
    return f"{frequency:.4g} Hz and {quantity_text(acceleration, 'm/s^2')} ({_stroke(frequency, acceleration, factor)})"


def headline(verdict: Verdict) -> tuple[str, str, str]:
    """Return the word, the sentence and the reason that open the screen."""
    name = verdict.liquid.name if verdict.liquid.name != "custom" else "the liquid"
    time = verdict.allowance.dwell
    span = "" if time is None else f" for {seconds_text(time)}"
    if verdict.question == "operating point":
        assert verdict.point is not None
        at = _drive_point(verdict.point.frequency, verdict.point.acceleration, verdict.amplitude_factor)
        if verdict.answer is Answer.HELD and not verdict.point.strictly_inside:
            word = f"HELD FOR {seconds_text(time or 0.0).upper()}, NOT FOR EVER"
            return word, f"{name} stays in the upside-down vessel for that time at {at}, and falls later", verdict.reason
        if verdict.answer is Answer.HELD:
            return "HELD", f"{name} stays in the upside-down vessel{span} at {at}", verdict.reason
        if verdict.answer is Answer.MARGINAL:
            word = "MARGINAL" if verdict.proven else "NOT PROVEN"
            return word, f"do not rely on {name} staying in the upside-down vessel{span} at {at}", verdict.reason
        return "NOT HELD", f"{name} does not stay in the upside-down vessel{span} at {at}", verdict.reason
    if verdict.holds_unshaken:
        word = "STAYS UNSHAKEN" if verdict.answer is Answer.HELD else "MARGINAL UNSHAKEN"
        if verdict.unshaken.growth_rate > 0.0:
            word = f"STAYS UNSHAKEN FOR {seconds_text(time or 0.0).upper()}, NOT FOR EVER"
        return word, f"{name} hangs in the upside-down vessel{span} without a drive", verdict.reason
    if verdict.answer is Answer.NOT_HELD:
        return "CANNOT BE HELD", f"no drive within the limits keeps {name} in the upside-down vessel{span}", verdict.reason
    if verdict.answer is Answer.MARGINAL:
        word = "BARELY" if verdict.proven else "NOT PROVEN"
        return word, f"do not rely on any drive to keep {name} in the upside-down vessel{span}", verdict.reason
    assert verdict.window is not None and verdict.window.minimum_acceleration is not None
    least = verdict.window.minimum_acceleration
    word = "CAN BE HELD" if time is None else f"CAN BE HELD FOR {seconds_text(time).upper()}"
    start = _drive_point(least.frequency, least.acceleration, verdict.amplitude_factor)
    return word, f"shaking keeps {name} in the upside-down vessel, from {start}", verdict.reason


def liquid_screen(
    verdict: Verdict, *, plain: bool = False, detail: bool = False, onto: Screen | None = None
) -> Screen:
    """Build the screen of a verdict, or put it onto the page of a report."""
    screen = Screen(plain=plain) if onto is None else onto
    screen.verdict(verdict.answer, *headline(verdict))
    _case(screen, verdict)
    if verdict.point is not None:
        _point(screen, verdict, verdict.point)
    if verdict.window is not None:
        _corners(screen, verdict)
    _at_rest(screen, verdict)
    _held_over(screen, verdict)
    screen.limits(verdict.limits)
    screen.cautions(verdict.cautions)
    screen.heading("Assumed")
    screen.listing(verdict.assumptions)
    if detail:
        _detail(screen, verdict)
    return screen


def _case(screen: Screen, verdict: Verdict) -> None:
    liquid = verdict.liquid
    screen.heading("Case")
    warmth = "" if liquid.temperature is None else f" at {liquid.temperature + ABSOLUTE_ZERO_CELSIUS:.4g} degC"

    def spread(name: str) -> str:
        u = liquid.uncertainty.get(name, 0.0)
        return f" (+-{100.0 * u:.2g} %)" if u else ""

    time = verdict.allowance.dwell
    screen.rows(
        [
            ("liquid", liquid.name + warmth),
            ("viscosity", f"{liquid.viscosity:.4g} Pa s{spread('viscosity')}"),
            ("density", f"{liquid.density:.4g} kg/m^3{spread('density')}"),
            ("surface tension", f"{1e3 * liquid.surface_tension:.4g} mN/m{spread('surface_tension')}"),
            ("vessel", f"{vessel_text(verdict.vessel)}, {1e3 * verdict.vessel.depth:.4g} mm deep"),
            ("upside-down", "for ever" if time is None else f"for {seconds_text(time)}"),
        ]
    )


def _point(screen: Screen, verdict: Verdict, point: OperatingPoint) -> None:
    spectrum = spectrum_of(verdict.vessel)
    a = point.acceleration
    worst_error = max([e for e in (point.lower_error, point.upper_error) if math.isfinite(e)], default=0.0)
    known = min(4, max(1, int(-math.log10(max(worst_error, 1e-12)))))  # no digit that is not known

    def mode(wavenumber: float) -> str:
        if not math.isfinite(wavenumber) or wavenumber <= 0.0:
            return ""
        return spectrum.mode_name(wavenumber)

    def edge(name: str, value: float, ratio: float, wave: float) -> tuple[str, str, str, str]:
        if value == 0.0:
            return name, "never", "", "nothing needs holding"
        if math.isinf(value):
            return name, "-", "", "not within the amplitudes searched"
        return name, quantity_text(value, "m/s^2", known), f"x {ratio:.3g}", mode(wave)

    screen.heading("Margins at this frequency")
    e = point.edges
    rows = [
        edge("falls below", point.lower, a / point.lower if point.lower else 0.0, float(e.lower_wavenumber[0])),
        edge("breaks up above", point.upper, point.upper / a, float(e.upper_wavenumber[0])),
    ]
    if verdict.allowance.growth > 0.0:
        s = point.strict
        low, high = float(s.lower[0]), float(s.upper[0])
        rows += [
            edge("for ever: falls below", low, a / low if low else 0.0, float(s.lower_wavenumber[0])),
            edge("for ever: breaks up above", high, high / a, float(s.upper_wavenumber[0])),
        ]
    screen.rows(rows, right=(1, 2))
    screen.heading("Modes")
    rate = point.growth_rate
    if rate > 0.0:
        within = " (within the dwell's allowance)" if rate <= verdict.allowance.growth else ""
        motion = f"grows e-fold in {seconds_text(1.0 / rate)}{within}"
    elif rate < 0.0 and math.isfinite(rate):
        motion = f"dies out e-fold in {seconds_text(-1.0 / rate)}"
    else:
        motion = "neither grows nor dies out"
    how = "half the drive frequency" if point.worst_subharmonic else "the drive frequency or slower"
    facts = [("worst mode", f"{verdict.worst_mode or '-'}"), ("it", f"{motion}, answering at {how}")]
    count = point.growing_modes
    proof = f"{count or 'no'} growing mode{'' if count == 1 else 's'}: winding number of {point.modes_checked} modes, "
    proof += "all others excluded by a bound" if point.complete else "a choice; far outside the edges no more are counted"
    facts.append(("proof", proof if point.proven else f"NOT PROVEN: {proof}; a winding number is not an integer"))
    if verdict.spans_edge:
        facts.append(("properties", "their stated uncertainty reaches across an edge"))
    facts.append(
        ("averaged estimate", f"{quantity_text(verdict.averaged_estimate, 'm/s^2')}, for explanation only: often far too low")
    )
    screen.rows(facts)


def _corners(screen: Screen, verdict: Verdict) -> None:
    window = verdict.window
    assert window is not None

    def row(name: str, point: HoldingPoint | None, margin: str) -> tuple[str, ...]:
        if point is None:
            return name, "none", "", "", "", ""
        return (
            name, f"{point.frequency:.4g} Hz", quantity_text(point.acceleration, "m/s^2"),
            f"{2e3 * point.amplitude:.3g} mm p-p",
            "up to " + (quantity_text(point.ceiling, "m/s^2") if math.isfinite(point.ceiling) else "any"), margin,
        )  # fmt: skip

    screen.heading("Where it holds")
    best = window.recommended
    rows = [
        row("least acceleration", window.minimum_acceleration, "edge"),
        row("lowest frequency", window.minimum_frequency, "edge"),
        row("largest margin", best, f"x {best.margin:.3g}" if best and math.isfinite(best.margin) else ""),
    ]
    strict = verdict.strict_window
    if verdict.allowance.growth > 0.0 and strict is not None:
        rows.append(row("least for ever", strict.minimum_acceleration, "edge"))
    screen.rows(rows, right=(1, 2, 3, 4, 5))
    if window.reason:
        screen.text(window.reason[:1].upper() + window.reason[1:] + ".")
    if window.minimum_acceleration is not None and verdict.point is None:
        spectrum = spectrum_of(verdict.vessel)
        least = window.minimum_acceleration
        facts = []
        if math.isfinite(least.lower_wavenumber) and least.lower_wavenumber > 0.0:
            facts.append(("falls first", spectrum.mode_name(least.lower_wavenumber)))
        if math.isfinite(least.upper_wavenumber):
            facts.append(("breaks up first", spectrum.mode_name(least.upper_wavenumber)))
        facts.append(
            (
                "averaged estimate",
                f"{quantity_text(verdict.averaged_estimate, 'm/s^2')} at {least.frequency:.3g} Hz, for explanation only: "
                "often far too low",
            )
        )
        facts.append(
            ("proof", "no growing mode at the point of largest margin" + ("" if verdict.proven else ": NOT PROVEN"))
        )
        screen.rows(facts)
        screen.text("At an edge nothing is left in hand: give --frequency and a size to judge your own point.")


def _held_over(screen: Screen, verdict: Verdict) -> None:
    over = verdict.held_over
    if over is not None:
        screen.heading("Still held over")
        rows = [("viscosity", f"{over.viscosity[0]:.3g} to {over.viscosity[1]:.3g} Pa s, all else unchanged")]
        if over.temperature is not None:
            low, high = (kelvin + ABSOLUTE_ZERO_CELSIUS for kelvin in over.temperature)
            rows.append(("temperature", f"{low:.3g} to {high:.3g} degC; mind warming by shear and by a heated vessel"))
        screen.rows(rows)
    if verdict.question == "minimum drive" and verdict.window is not None and not verdict.drive.stated:
        screen.heading("Generic drives that could")
        choices = verdict.drives_that_could
        if choices:
            screen.rows(
                [(c.name, f"x {c.margin:.3g}", f"at {c.frequency:.3g} Hz") for c in choices], right=(1, 2)
            )
        else:
            screen.text("None of the classes in the drive table.")


def _at_rest(screen: Screen, verdict: Verdict) -> None:
    rest = verdict.unshaken
    screen.heading("Without shaking")
    if rest.growth_rate == 0.0:
        screen.text("The surface tension alone holds a flat surface that meets the wall at 90 degrees.")
        return
    assert rest.time_to_spill is not None
    mode = ""
    if rest.wavenumber is not None:  # a pinned layer's modes are sums of many wavenumbers
        mode = spectrum_of(verdict.vessel).mode_name(rest.wavenumber) + ", "
    screen.rows(
        [
            ("spills after", f"about {seconds_text(rest.time_to_spill)}"),
            ("fastest mode", f"{mode}e-fold in {seconds_text(1.0 / rest.growth_rate)}"),
        ]
    )


def _detail(screen: Screen, verdict: Verdict) -> None:
    screen.heading("Sources and method")
    rows = [(name.replace("_", " "), source) for name, source in verdict.liquid.sources.items()]
    rows += [(limit.name, f"{limit.source}. {limit.remark}".rstrip(". ")) for limit in verdict.limits]
    rows.append(
        (
            "thresholds",
            "exact linear theory of a viscous layer (Kumar & Tuckerman 1994, Kumar 1996): continued fraction in the "
            "harmonics, roots to 1e-12; growth by Floquet exponents; completeness by winding number",
        )
    )
    screen.rows(rows)
