"""The holding window as a picture: edges, held area, what the drive reaches, marks."""

import math
from typing import TYPE_CHECKING, Any

import numpy as np
import numpy.typing as npt

from containment.faces.chart_window import CORNER_SIGNS, held_words, marginal_words
from containment.faces.picture_labels import Labels
from containment.faces.picture_style import COLOURS, INK, entitle, halo, new_picture, tidy_log_axis
from containment.faces.screen import quantity_text
from containment.faces.window_view import Mark, WindowView

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["draw_window", "window_words"]

Real = npt.NDArray[np.float64]


def draw_window(view: WindowView, title: str) -> "Figure":
    """Return the picture of a window.

    Parameters
    ----------
    view : WindowView
        What is drawn.
    title : str
        Set above it, as plain text.
    """
    key = _key(view)
    figure, axes = new_picture(height=4.1 + 0.125 * len(key))
    axes.set_xscale("log")
    axes.set_yscale("log")
    axes.set_xlim(view.frequency[0], view.frequency[-1])
    axes.set_ylim(view.lowest, view.highest)
    axes.set_xlabel("frequency [Hz]")
    axes.set_ylabel(f"{view.axis.label} [{view.axis.unit}]")
    entitle(axes, title)
    figure.supxlabel("\n".join(key), x=0.012, ha="left", fontsize=7.5)
    tidy_log_axis(axes, "x")
    tidy_log_axis(axes, "y")
    axes.grid(which="major", color="#d9dce0", linewidth=0.5)
    axes.set_axisbelow(True)
    figure.draw_without_rendering()  # the layout is settled before words are turned along the curves
    labels = Labels(axes, view)
    _areas(axes, view)
    _marks(axes, view)
    if view.held.any():
        labels.name_held_area()
    _curves(axes, view, labels)
    return figure


def _areas(axes: "Axes", view: WindowView) -> None:
    f, floor = view.frequency, view.lowest
    lower, ceiling = np.maximum(view.lower, floor), np.minimum(view.ceiling, view.highest)
    axes.fill_between(f, lower, ceiling, where=view.held.tolist(), color=COLOURS["marginal"], linewidth=0, zorder=1)
    low, high = np.maximum(view.safe[0], floor), np.minimum(view.safe[1], view.highest)
    safe = low < high
    axes.fill_between(f, low, high, where=safe.tolist(), color=COLOURS["held"], linewidth=0, zorder=1.1)
    if view.covered is not None:
        _lost_under_a_skin(axes, view)


def _lost_under_a_skin(axes: "Axes", view: WindowView) -> None:
    """Hatch what is held with a clean surface only."""
    assert view.covered is not None
    f, lower, ceiling = view.frequency, np.maximum(view.lower, view.lowest), np.minimum(view.ceiling, view.highest)
    style: dict[str, Any] = {
        "facecolor": "none", "edgecolor": INK, "hatch": "////", "linewidth": 0, "alpha": 0.45, "zorder": 1.2,
    }  # fmt: skip
    low = np.minimum(view.covered[0], ceiling)
    axes.fill_between(f, lower, low, where=(view.held & (low > lower)).tolist(), **style)
    high = np.maximum(view.covered[1], lower)
    axes.fill_between(f, high, ceiling, where=(view.held & (high < ceiling)).tolist(), **style)


def _curves(axes: "Axes", view: WindowView, labels: Labels) -> None:
    for curve, kind, words, dash, width, side, share in (
        (view.lower, "falls", "falls below", "-", 1.6, -1, 0.7),
        (view.upper, "breaks up", "waves break it up above", (0, (6, 1.2)), 1.6, 1, 0.55),
        (view.drive, "drive", "drive reaches", (0, (4, 2, 1, 2)), 1.2, 1, 0.3),
        (view.pull_off, "pull-off", "pulls off its base above", (0, (1, 1.5)), 1.3, 1, 0.2),
        (view.searched, "searched", "end of search, 60 mm amplitude", (0, (2, 3)), 1.2, 1, 0.6),
    ):
        near = np.isfinite(curve) & (curve > 0.2 * view.lowest) & (curve < 5.0 * view.highest)
        shown = np.where(near, curve, np.nan)
        inside = (shown > view.lowest) & (shown < view.highest)
        if inside.any():
            axes.plot(view.frequency, shown, color=COLOURS[kind], linestyle=dash, linewidth=width, zorder=3)
            labels.write_along(shown, words, COLOURS[kind], side=side, share=share)


def _marks(axes: "Axes", view: WindowView) -> None:
    for sign, mark in _signed(view):
        if not (view.frequency[0] <= mark.frequency <= view.frequency[-1] and view.lowest <= mark.value <= view.highest):
            continue
        place = (mark.frequency, mark.value)
        if mark is view.point:
            axes.plot(*([v] for v in place), "X", color="white", markerfacecolor=INK, markersize=9, zorder=6)
            halo(axes.annotate("drive point", place, xytext=(0, -7), textcoords="offset points", ha="center", va="top",
                               fontsize=8, fontweight="bold", zorder=7))  # fmt: skip
        else:
            box = {"boxstyle": "round,pad=0.25,rounding_size=0.8", "facecolor": "white", "edgecolor": INK, "linewidth": 0.9}
            axes.text(*place, sign, ha="center", va="center", fontsize=7, fontweight="bold", zorder=6, bbox=box)


def _signed(view: WindowView) -> list[tuple[str, Mark]]:
    """Return the marks with their numbers; marks in one place share them."""
    found: list[tuple[str, Mark]] = []
    for sign, mark in zip(CORNER_SIGNS, view.corners, strict=False):
        at = [i for i, (_, other) in enumerate(found) if math.isclose(other.frequency, mark.frequency, rel_tol=1e-3)]
        if at and math.isclose(found[at[0]][1].value, mark.value, rel_tol=1e-3):
            found[at[0]] = (f"{found[at[0]][0]}, {sign}", found[at[0]][1])
        else:
            found.append((sign, mark))
    return [*found, *([("X", view.point)] if view.point else [])]


def _key(view: WindowView) -> list[str]:
    """Return the lines below the picture: the marks, and what the shades mean."""
    lines = []
    for sign, mark in zip(CORNER_SIGNS, view.corners, strict=False):
        margin = "" if mark.margin is None else f", a factor of {mark.margin:.3g} from the nearer edge"
        lines.append(f"{sign}  {mark.name}: {_size(mark)}{margin}")
    if view.point is not None:
        lines.append(f"X  drive point: {_size(view.point)}")
    if view.held.any():
        if np.any(view.safe[0] < view.safe[1]):
            lines.append(f"Dark shade: {held_words(view)}.")
        skin = view.covered
        lost = skin is not None and bool(np.any(view.held & ((skin[0] > view.lower) | (skin[1] < view.ceiling))))
        lines.append(f"Pale shade: {marginal_words(view)}." + (" Hatched: lost if a skin covers the surface." if lost else ""))
    return lines


def _size(mark: Mark) -> str:
    size = quantity_text(mark.acceleration, "m/s^2")
    return f"{mark.frequency:.4g} Hz, {size}, stroke {quantity_text(mark.stroke, 'm')} peak to peak"


def window_words(view: WindowView, title: str) -> str:
    """Return the picture in words, for those who do not see it."""
    parts = [f"Holding window, {view.axis.label} over frequency: {title}."]
    for mark in view.corners:
        parts.append(f"{mark.name.capitalize()}: {mark.frequency:.3g} Hz, {quantity_text(mark.acceleration, 'm/s^2')}.")
    if not view.corners:
        parts.append("There is no window.")
    if view.point is not None:
        size = quantity_text(view.point.acceleration, "m/s^2")
        parts.append(f"Drive point: {view.point.frequency:.3g} Hz, {size}.")
    return " ".join(parts)
