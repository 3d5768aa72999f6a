"""The holding window drawn with characters: plain ASCII, one colour, any width from 60 columns."""

from collections.abc import Callable, Sequence
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.faces.chart_axes import LogAxis
from containment.faces.window_view import WindowView
from containment.judgement.findings import seconds_text

__all__ = ["CORNER_SIGNS", "POINT_SIGN", "held_words", "marginal_words", "window_chart", "window_signs"]

CORNER_SIGNS: Final = "123"
POINT_SIGN: Final = "@"
_LOWER: Final = "v"
_UPPER: Final = "^"
_INSIDE: Final = "."
_HELD: Final = ":"
_DRIVE: Final = "="
_PULL_OFF: Final = "~"
_SEARCHED: Final = "-"
_LABEL: Final = 8

Field = list[list[str]]
Real = npt.NDArray[np.float64]


def window_chart(view: WindowView, *, width: int = 76, height: int = 20) -> list[str]:
    """Return the lines of the chart: axes logarithmic, frequency to the right.

    Parameters
    ----------
    view : WindowView
        What is drawn.
    width : int
        Columns of the longest line, at least 40.
    height : int
        Rows of the field.

    Returns
    -------
    list of str
        ASCII. The signs are told by `window_signs`.
    """
    x = LogAxis(low=float(view.frequency[0]), high=float(view.frequency[-1]), cells=width - _LABEL - 2)
    y = LogAxis(low=view.lowest, high=view.highest, cells=height)
    field: Field = [[" "] * x.cells for _ in range(height)]
    columns = [_nearest(view.frequency, x.value(i)) for i in range(x.cells)]
    _fill(field, view, y, columns)
    for sign, curve in _curves(view):
        _trace(field, sign, [y.clipped(float(curve[node])) for node in columns])
    marks = [(sign, mark) for sign, mark in zip(CORNER_SIGNS, view.corners, strict=False)]
    if view.point is not None:
        marks.append((POINT_SIGN, view.point))
    for sign, mark in reversed(marks):  # of marks in one cell the first is seen; the legend has them all
        column, row = x.cell(mark.frequency), y.cell(mark.value)
        if column is not None and row is not None:
            field[row][column] = sign
    _name_the_areas(field, view, y, columns)
    return _framed(field, view, x, y)


def window_signs(view: WindowView, chart: Sequence[str]) -> list[tuple[str, str]]:
    """Return the signs that are drawn in the lines of a chart and what they mean, marks apart."""
    field = "".join(line[_LABEL + 2 :] for line in chart[1:-3])
    return [(sign, words) for sign, words in _signs(view) if sign in field]


def _signs(view: WindowView) -> list[tuple[str, str]]:
    ceiling, held = view.ceiling, view.held
    signs = []
    if held.any():
        low, high = view.safe
        if np.any(low < high):
            signs.append((_HELD, held_words(view)))
        signs.append((_INSIDE, marginal_words(view)))
    if np.any(np.isfinite(view.lower) & (view.lower > 0.0)):
        signs.append((_LOWER, "falls below this edge"))
    if np.isfinite(view.upper).any():
        signs.append((_UPPER, "waves break it up above this edge"))
    if _inside(view, view.drive):
        signs.append((_DRIVE, "as far as the drive reaches"))
    if _inside(view, view.pull_off):
        signs.append((_PULL_OFF, "pulls off its base above"))
    if _inside(view, view.searched):
        cut = bool(np.any(held & (ceiling == view.searched)))
        signs.append((_SEARCHED, "end of the search: 60 mm amplitude" + (", nothing is claimed above" if cut else "")))
    return signs


def held_words(view: WindowView) -> str:
    """Return what the sign or shade of the held area means."""
    parts = (("drag of the walls", view.dragged), ("a skin", view.covered))
    counted = [name for name, part in parts if part is not None]
    also = f", {' and '.join(counted)} counted" if counted else ""
    span = "held" if view.dwell is None else f"held for {seconds_text(view.dwell)}"
    return f"{span}: a factor of {view.margin_factor:g} or more from every edge{also}"


def marginal_words(view: WindowView) -> str:
    """Return what the sign or shade of the rest between the edges means."""
    if view.doubtful:
        return "between the edges, but marginal at best: see the verdict"
    low, high = view.safe
    return "between the edges, but closer than that: marginal" if np.any(low < high) else (
        f"between the edges, but nowhere by a factor of {view.margin_factor:g}: marginal"
    )


def _inside(view: WindowView, curve: Real) -> bool:
    return bool(np.any((curve >= view.lowest) & (curve <= view.highest)))


def _curves(view: WindowView) -> list[tuple[str, Real]]:
    """Return the curves from the least to the most important."""
    return [
        (_SEARCHED, view.searched), (_PULL_OFF, view.pull_off), (_DRIVE, view.drive), (_UPPER, view.upper),
        (_LOWER, view.lower),
    ]  # fmt: skip


def _nearest(frequency: Real, value: float) -> int:
    return int(np.argmin(np.abs(np.log(frequency / value))))


def _fill(field: Field, view: WindowView, y: LogAxis, columns: list[int]) -> None:
    for sign, (lower, upper) in ((_INSIDE, (view.lower, view.ceiling)), (_HELD, view.safe)):
        for i, node in enumerate(columns):
            for row in range(y.cells):
                if lower[node] < y.value(row) < upper[node]:
                    field[row][i] = sign


def _trace(field: Field, sign: str, rows: list[int]) -> None:
    """Draw a curve; where it is steep the rows between two columns are filled, so that it does not fall apart."""
    height = len(field)
    for i, row in enumerate(rows):
        before = rows[i - 1] if i else row
        steep = abs(row - before) > 1 and 0 <= before < height and 0 <= row < height
        start = (before + (1 if row > before else -1)) if steep else row
        for between in range(min(start, row), max(start, row) + 1):
            if 0 <= between < height:
                field[between][i] = sign


def _name_the_areas(field: Field, view: WindowView, y: LogAxis, columns: list[int]) -> None:
    """Write a word into each area that has room for it."""
    middle = len(columns) // 2
    height = len(field)

    def beyond(edge: Real, row: int, side: int) -> list[bool]:
        return [bool(np.isfinite(edge[node])) and side * (y.clipped(float(edge[node])) - row) > 1 for node in columns]

    _write(field, "HELD", over=_HELD, rows=range(height))
    if np.any(view.lower > 0.0):
        right = [i >= middle for i in range(len(columns))]
        _write(field, "falls", over=" ", rows=range(1, height // 2),
               where=lambda row: [a and b for a, b in zip(beyond(view.lower, row, 1), right, strict=True)])  # fmt: skip
    _write(field, "waves break it up", over=" ", rows=range(height // 2, height - 1),
           where=lambda row: beyond(view.upper, row, -1))  # fmt: skip


def _write(
    field: Field, word: str, *, over: str, rows: range, where: Callable[[int], list[bool]] | None = None
) -> None:
    """Write a word with a blank on either side into the longest run of one sign, where there is one."""
    best = (len(word) + 1, 0, 0)
    for row in rows:
        allowed = where(row) if where else [True] * len(field[row])
        start = 0
        for i in range(len(field[row]) + 1):
            if i == len(field[row]) or field[row][i] != over or not allowed[i]:
                best = max(best, (i - start, row, start))
                start = i + 1
    length, row, start = best
    if length > len(word) + 1:
        first = start + (length - len(word)) // 2 - 1
        field[row][first : first + len(word) + 2] = list(f" {word} ")


def _framed(field: Field, view: WindowView, x: LogAxis, y: LogAxis) -> list[str]:
    beside = dict(y.ticks(least_gap=2))
    lines = [f"{view.axis.label} [{view.axis.unit}]"]
    for row in range(y.cells - 1, -1, -1):
        label = beside.get(row, "")
        lines.append(f"{label:>{_LABEL}} {'+' if label else '|'}{''.join(field[row])}".rstrip())
    ticks = x.ticks(least_gap=6)
    rule, names = ["-"] * x.cells, [" "] * (x.cells + 4)
    for cell, text in ticks:
        rule[cell] = "+"
        start = max(cell - len(text) // 2, 0)
        names[start : start + len(text)] = list(text)
    lines.append(" " * (_LABEL + 1) + "+" + "".join(rule))
    lines.append((" " * (_LABEL + 2) + "".join(names)).rstrip())
    lines.append("frequency [Hz]".rjust(_LABEL + 2 + x.cells))
    return lines
