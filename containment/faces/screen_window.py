"""The screen of a holding window: the answer, the chart, and what its signs mean."""

from containment.faces.chart_window import CORNER_SIGNS, POINT_SIGN, window_chart, window_signs
from containment.faces.screen import Screen, quantity_text, seconds_text
from containment.faces.screen_liquid import headline, vessel_text
from containment.faces.window_view import Mark, WindowView
from containment.judgement.verdict import Verdict

__all__ = ["mark_rows", "window_screen", "window_title"]


def window_screen(
    verdict: Verdict, view: WindowView, *, plain: bool = False, chart_file: str | None = None
) -> Screen:
    """Build the screen of a window."""
    screen = Screen(plain=plain)
    screen.verdict(verdict.answer, *headline(verdict))
    screen.heading("Holding window")
    screen.text(window_title(verdict))
    chart = window_chart(view, width=screen.width - 4, height=18 if screen.width < 100 else 24)
    screen.text("\n".join(["", *chart]))
    screen.rows(window_signs(view, chart))
    marks = mark_rows(view, verdict)
    if marks:
        screen.heading("Points")
        screen.rows(marks, right=(2, 3, 4))
    if verdict.holds_unshaken:
        screen.text("Nothing needs holding: the layer stays without shaking, and shaking can only break it up.")
    elif not view.corners:
        screen.text(verdict.window.reason[:1].upper() + verdict.window.reason[1:] + "." if verdict.window else "")
    screen.heading("More")
    lines = [] if chart_file is None else [f"drawn to {chart_file}"]
    lines.append(
        "edges of an ideal layer, exact within linear theory, joined from node to node; tilt, droplets and the uncertainty of "
        "the properties are judged by 'containment liquid' at a drive point"
    )
    screen.listing(lines)
    return screen


def window_title(verdict: Verdict) -> str:
    """Return what a window is of, in one line."""
    time = verdict.allowance.dwell
    return (
        f"{verdict.liquid.name}, {verdict.liquid.viscosity:.4g} Pa s; {vessel_text(verdict.vessel)}, "
        f"{1e3 * verdict.vessel.depth:.4g} mm deep; {'for ever' if time is None else 'for ' + seconds_text(time)}"
    )


def mark_rows(view: WindowView, verdict: Verdict) -> list[tuple[str, ...]]:
    """Return the marks of a chart: sign, name, frequency, acceleration, stroke, what else."""
    rows = [_row(sign, mark, "edge") for sign, mark in zip(CORNER_SIGNS, view.corners, strict=False)]
    if view.point is not None:
        rows.append(_row(POINT_SIGN, view.point, verdict.answer.value.upper()))
    return rows


def _row(sign: str, mark: Mark, otherwise: str) -> tuple[str, ...]:
    stroke = quantity_text(mark.stroke, "m")
    size = quantity_text(mark.acceleration, "m/s^2")
    note = otherwise if mark.margin is None else f"x {mark.margin:.3g}"
    return sign, mark.name, f"{mark.frequency:.4g} Hz", size, f"{stroke} p-p", note
