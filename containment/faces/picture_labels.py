"""Labels of a window's picture: words along curves and in areas, kept clear of one another."""

from typing import TYPE_CHECKING, Any, Final

import numpy as np
import numpy.typing as npt

from containment.faces.picture_style import halo
from containment.faces.window_view import WindowView

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["Labels"]

Real = npt.NDArray[np.float64]

_PER_LETTER: Final = 6.0
"""Mean width of a letter of the labels, in pixels of the layout (100 to the inch)."""

_CLEAR: Final = 22.0
"""Distance in pixels at which two labels do not disturb each other."""


class Labels:
    """Places the labels of one picture, whose layout is settled, each clear of those before it."""

    def __init__(self, axes: "Axes", view: WindowView) -> None:
        self._axes, self._view = axes, view
        marks = [mark for mark in (*view.corners, view.point) if mark is not None]
        self._taken: list[tuple[float, float]] = [self._pixel(mark.frequency, mark.value) for mark in marks]

    def _pixel(self, x: float, y: float) -> tuple[float, float]:
        place = self._axes.transData.transform((x, y))
        return float(place[0]), float(place[1])

    def _place(self, x: float, y: float) -> tuple[float, float]:
        place = self._axes.transData.inverted().transform((x, y))
        return float(place[0]), float(place[1])

    def _clearance(self, points: list[tuple[float, float]]) -> float:
        return min([float(np.hypot(x - p, y - q)) for x, y in points for p, q in self._taken], default=1e3)

    def name_held_area(self) -> None:
        """Write HELD where the area that is held with the margin has most room; nothing where there is none."""
        view = self._view
        low, high = np.maximum(view.safe[0], view.lowest), np.minimum(view.safe[1], view.highest)
        best, place = 12.0, None
        open_ = low < high
        floor = self._axes.transData.transform(np.column_stack([view.frequency, np.where(open_, low, view.highest)]))
        roof = self._axes.transData.transform(np.column_stack([view.frequency, np.where(open_, high, view.lowest)]))
        across, bottoms, tops = floor[:, 0], floor[:, 1], roof[:, 1]
        for i in np.flatnonzero(open_)[::3]:
            x, bottom, top = across[i], bottoms[i], tops[i]
            under = [x - 24.0, x, x + 24.0]
            low_there, high_there = np.interp(under, across, bottoms).max(), np.interp(under, across, tops).min()
            for share in (0.3, 0.5, 0.7):
                y = bottom + share * (top - bottom)
                if not low_there + 8.0 < y < high_there - 8.0:
                    continue
                clear = self._clearance([(x - 20.0, y), (x, y), (x + 20.0, y)])
                room = min(top - y, y - bottom, 50.0) + min(clear, 40.0)
                if room > best and clear > 14.0:
                    best, place = room, (x, y)
        if place is None:
            return
        self._taken += [(place[0] + shift, place[1]) for shift in (-20.0, 0.0, 20.0)]
        word = self._axes.text(*self._place(*place), "HELD", ha="center", va="center", fontsize=12, fontweight="bold", zorder=5)
        word.set_in_layout(False)

    def write_along(self, curve: Real, words: str, colour: str, *, side: int, share: float) -> None:
        """Write words along a curve (not-a-number where it is not drawn), above (1) or below (-1) it.

        They go to about a share of its visible length, or where they are clear of other labels; a curve that is too short
        for them is labelled beside its middle.
        """
        view = self._view
        seen = np.flatnonzero(np.isfinite(curve) & (curve > view.lowest) & (curve < view.highest))
        if len(seen) < 2:
            return
        path = self._axes.transData.transform(np.column_stack([view.frequency[seen], curve[seen]]))
        along = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(path, axis=0).T))])
        half = 0.5 * len(words) * _PER_LETTER

        def at(length: float) -> tuple[float, float]:
            return float(np.interp(length, along, path[:, 0])), float(np.interp(length, along, path[:, 1]))

        if along[-1] < 2.0 * half + 8.0:
            self._beside(at(0.5 * float(along[-1])), words, colour)
            return
        choices = []
        for wish in (share, 0.5, 0.35, 0.65, 0.2, 0.8, 0.1, 0.9):
            centre = float(np.clip(wish * along[-1], half + 4.0, along[-1] - half - 4.0))
            covered = [at(centre + s * half) for s in (-1.0, -0.5, 0.0, 0.5, 1.0)]
            clear = self._clearance(covered)
            choices.append((clear, centre, covered))
            if clear > _CLEAR:
                break
        _, centre, covered = choices[-1] if choices[-1][0] > _CLEAR else max(choices)
        if np.hypot(covered[4][0] - covered[0][0], covered[4][1] - covered[0][1]) < 1.5 * half:  # too ragged to follow
            self._beside(at(centre), words, colour)
            return
        self._taken += covered
        (x0, y0), (x1, y1) = covered[1], covered[3]
        self._write(
            at(centre), words, colour, (0, 4 * side), ha="center", va="bottom" if side > 0 else "top",
            rotation=float(np.degrees(np.arctan2(y1 - y0, x1 - x0))), rotation_mode="anchor",
        )  # fmt: skip

    def _beside(self, pixel: tuple[float, float], words: str, colour: str) -> None:
        left = pixel[0] > self._axes.transAxes.transform((0.5, 0.0))[0]
        self._taken.append(pixel)
        self._write(pixel, words, colour, (-5 if left else 5, 0), ha="right" if left else "left", va="center")

    def _write(self, pixel: tuple[float, float], words: str, colour: str, shift: tuple[int, int], **style: Any) -> None:
        text = self._axes.annotate(
            words, self._place(*pixel), xytext=shift, textcoords="offset points", color=colour, fontsize=8, zorder=4, **style
        )
        text.set_in_layout(False)
        halo(text)
