"""Tornado of sensitivities: how far the margin moves when one input at a time is off."""

import math
from collections.abc import Sequence
from typing import TYPE_CHECKING

from containment.faces.picture_style import COLOURS, INK, entitle, new_picture
from containment.judgement.sensitivity import Sensitivity

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["draw_tornado", "tornado_words"]


def draw_tornado(rows: Sequence[Sensitivity], margin: float, *, margin_factor: float, title: str) -> "Figure | None":
    """Return the picture, the smallest margin on top, or None where no margin is finite.

    Parameters
    ----------
    rows : sequence of Sensitivity
        Those whose margins are infinite are left out.
    margin : float
        With no input changed.
    margin_factor : float
        Below which a verdict is marginal.
    title : str
        Set above.
    """
    shown = [row for row in rows if math.isfinite(row.low) and math.isfinite(row.high) and min(row.low, row.high) > 0.0]
    if not shown or not math.isfinite(margin):
        return None
    figure, axes = new_picture(height=1.2 + 0.32 * len(shown))
    ends = [value for row in shown for value in (row.low, row.high)] + [margin, 1.0, margin_factor]
    left, right = min(ends), max(ends)
    span = right - left
    axes.set_xlim(left - 0.12 * span, right + 0.12 * span)
    axes.set_ylim(len(shown) - 0.4, -0.8)
    axes.axvspan(axes.get_xlim()[0], 1.0, color="#fbeee6", zorder=0.5, linewidth=0)
    axes.axvspan(1.0, margin_factor, color="#f5f5f3", zorder=0.5, linewidth=0)
    for i, row in enumerate(shown):
        for value, kind, shift in ((row.low, "falls", -0.17), (row.high, "breaks up", 0.17)):
            axes.barh(i + shift, value - margin, left=margin, height=0.32, color=COLOURS[kind], zorder=3,
                      hatch="////" if kind == "falls" else "", edgecolor="white", linewidth=0.0)  # fmt: skip
            if abs(value - margin) > 0.01 * span:
                sign = 1 if value > margin else -1
                axes.annotate(
                    f"{value:#.3g}", (value, i + shift), xytext=(3 * sign, 0), textcoords="offset points", va="center",
                    ha="left" if sign > 0 else "right", fontsize=6.5, zorder=5,
                )  # fmt: skip
    axes.axvline(margin, color=INK, linewidth=1.0, zorder=4)
    axes.axvline(1.0, color=COLOURS["falls"], linewidth=1.0, linestyle=(0, (4, 2)), zorder=2)
    axes.axvline(margin_factor, color=COLOURS["drive"], linewidth=0.9, linestyle=(0, (1, 1.5)), zorder=2)
    for x, words in ((1.0, "edge"), (margin_factor, "marginal below"), (margin, f"margin {margin:.3g}")):
        axes.annotate(words, (x, -0.8), xytext=(2, -1), textcoords="offset points", fontsize=7, va="top", ha="left", zorder=6)
    axes.set_yticks(
        range(len(shown)), [f"{row.name}, {100 * row.change:.2g} %{'' if row.stated else '*'}" for row in shown]
    )
    axes.tick_params(axis="y", length=0)
    axes.set_xlabel("margin: factor to the nearer edge")
    taken = "" if all(row.stated for row in shown) else " * a tenth, where no uncertainty is stated."
    figure.supxlabel(f"Hatched: input lowered. Plain: input raised.{taken}", x=0.012, ha="left", fontsize=7.5)
    entitle(axes, title)
    return figure


def tornado_words(rows: Sequence[Sensitivity], margin: float) -> str:
    """Return the picture in words."""
    parts = [f"Sensitivity of the margin of {margin:.3g}, one input at a time:"]
    parts += [
        f"{row.name} {100 * row.change:.2g} % lower {row.low:#.3g}, higher {row.high:#.3g};"
        for row in rows if math.isfinite(row.low) and math.isfinite(row.high)
    ]  # fmt: skip
    return " ".join(parts)
