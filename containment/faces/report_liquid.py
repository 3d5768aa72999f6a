"""The report on a liquid layer: the screen's words, with pictures of the case."""

import argparse
import math
from typing import TYPE_CHECKING

from containment.errors import ContainmentError
from containment.faces.chart_window import window_chart, window_signs
from containment.faces.report_file import put_inputs, wants_pictures, write_report
from containment.faces.report_page import ReportPage, Table, VerdictBox
from containment.faces.screen import quantity_text
from containment.faces.screen_liquid import liquid_screen
from containment.faces.screen_window import mark_rows, window_title
from containment.faces.window_view import WindowView, refuse_without_window, window_view
from containment.given.vessel import Slot
from containment.judgement.case import Case
from containment.judgement.findings import Answer
from containment.judgement.verdict import Verdict, holding_window

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["report_liquid", "view_of"]


def view_of(case: Case, verdict: Verdict, *, against: str = "acceleration") -> WindowView:
    """Return the view of the window around a verdict.

    Raises
    ------
    InputError
        A case without a window over frequency.
    """
    refuse_without_window(case)
    window = verdict.window
    if window is None and not verdict.holds_unshaken:  # a drive point that holds says nothing of the rest
        window = holding_window(
            case.liquid, case.vessel, dwell=case.allowance.dwell, unevenness=case.allowance.unevenness,
            amplification=case.allowance.amplification, drive=verdict.drive, surroundings=case.surroundings,
            shape=case.waveform,
        )  # fmt: skip
    point = None if verdict.point is None else (verdict.point.frequency, verdict.point.acceleration)
    no_drive_asked = verdict.question == "minimum drive" or verdict.holds_unshaken
    doubtful = isinstance(case.vessel, Slot) or (verdict.answer is Answer.MARGINAL and no_drive_asked)
    return window_view(
        case, window, verdict.drive, against=against, point=point, margin_factor=verdict.margin_factor, doubtful=doubtful
    )


def report_liquid(options: argparse.Namespace, case: Case, verdict: Verdict) -> None:
    """Write the report that ``--report`` asks for."""
    name = "a liquid" if verdict.liquid.name == "custom" else verdict.liquid.name
    page = ReportPage(title=f"Upside-down hold of {name}")
    drawn = wants_pictures(options.report)
    liquid_screen(verdict, detail=True, onto=page)
    rest, page.blocks = page.blocks, []
    page.blocks.append(rest[0])
    assert isinstance(rest[0], VerdictBox)
    _window(page, options, case, verdict, drawn=drawn)
    page.blocks += rest[1:]
    if drawn:
        _pictures(page, case, verdict)
    else:
        _sensitivities(page, case, verdict)
    put_inputs(page, options)
    page.heading("What this is")
    page.text(
        "A feasibility check by linear theory. It approves nothing: local codes and the judgement of licensed practice "
        "prevail. Whoever signs below has checked that the inputs are those of the plant and that the assumptions hold there."
    )
    write_report(page, options.report)


def _window(
    page: ReportPage, options: argparse.Namespace, case: Case, verdict: Verdict, *, drawn: bool
) -> None:
    try:
        view = view_of(case, verdict)
    except ContainmentError:  # the limits and assumptions say what is not modelled
        return
    title = window_title(verdict)
    if drawn:
        from containment.faces.picture_file import inline_svg
        from containment.faces.picture_window import draw_window, window_words

        words = window_words(view, title)
        caption = "Holding window: where shaking holds the layer, over frequency."
        page.picture(inline_svg(draw_window(view, title), name="window", text=words), caption)
        return
    page.heading("Holding window")
    page.text(title)
    if options.report.lower().endswith((".html", ".htm")):
        page.text("Drawn with characters: the pictures of this report need matplotlib (extra: plot), which is not installed.")
    chart = window_chart(view, width=78, height=20)
    page.preformatted("\n".join(chart))
    page.rows([list(row) for row in window_signs(view, chart)])
    page.blocks.append(Table([list(row) for row in mark_rows(view, verdict)], (2, 3, 4)))


def _point(verdict: Verdict) -> tuple[float, float] | None:
    """Return the drive point asked for, or the one of largest margin."""
    if verdict.point is not None:
        return verdict.point.frequency, verdict.point.acceleration
    if verdict.window is not None and verdict.window.recommended is not None:
        return verdict.window.recommended.frequency, verdict.window.recommended.acceleration
    return None


def _at(point: tuple[float, float]) -> str:
    return f"at {point[0]:.4g} Hz and {quantity_text(point[1], 'm/s^2')}"


def _pictures(page: ReportPage, case: Case, verdict: Verdict) -> None:
    from containment.faces.picture_growth import draw_growth, growth_words
    from containment.faces.picture_mode import draw_mode
    from containment.faces.picture_tornado import draw_tornado, tornado_words
    from containment.faces.picture_viscosity import draw_viscosity, viscosity_words
    from containment.judgement.growth_curve import growth_curve
    from containment.judgement.sensitivity import margin_at, sensitivities

    pictures: list[tuple[str, Figure | None, str]] = []
    point = _point(verdict)
    at = {"frequency": point[0], "acceleration": point[1]} if point is not None else {}
    if point is not None:
        curve = growth_curve(case, **at)
        if curve is not None:
            title = f"Growth rate over wavenumber {_at(point)}"
            pictures.append((title, draw_growth(curve, case.spectrum, title), growth_words(curve, title)))
    figure = draw_viscosity(verdict.liquid, verdict.held_over)
    pictures.append(("Viscosity over temperature", figure, viscosity_words(verdict.liquid, verdict.held_over)))
    rows = sensitivities(case, **at) if point is not None else ()
    if point is not None and rows:
        margin = margin_at(case, **at)
        title = f"Margin {_at(point)} when one input at a time is off"
        figure = draw_tornado(rows, margin, margin_factor=verdict.margin_factor, title=title)
        pictures.append((title, figure, tornado_words(rows, margin)))
    if verdict.point is not None and math.isfinite(verdict.point.worst_wavenumber):
        title = f"Shape of the worst mode: {verdict.worst_mode}"
        words = f"{title}. The surface from below with its nodal lines, and a section through the layer."
        pictures.append((title, draw_mode(verdict.vessel, verdict.point.worst_wavenumber), words))
    shown = [(caption, figure, words) for caption, figure, words in pictures if figure is not None]
    if not shown:
        return
    from containment.faces.picture_file import inline_svg

    page.heading("Pictures")
    for i, (caption, figure, words) in enumerate(shown):
        page.picture(inline_svg(figure, name=f"picture{i}", text=words), caption + ".")


def _sensitivities(page: ReportPage, case: Case, verdict: Verdict) -> None:
    """Add the sensitivities as a table, where no pictures are drawn."""
    from containment.judgement.sensitivity import margin_at, sensitivities

    point = _point(verdict)
    if point is None:
        return
    at = {"frequency": point[0], "acceleration": point[1]}
    rows = [
        [row.name, f"{100.0 * row.change:.2g} %", f"{row.low:#.3g}", f"{row.high:#.3g}"]
        for row in sensitivities(case, **at)
        if math.isfinite(row.low) and math.isfinite(row.high)
    ]
    if rows:
        page.heading("When one input at a time is off")
        page.text(f"Factor to the nearer edge {_at(point)}: {margin_at(case, **at):.3g}.")
        page.blocks.append(Table(rows, (1, 2, 3), ("input", "change", "lowered", "raised")))
