"""Viscosity of a table liquid over temperature, with the range over which the drive point still holds."""

from typing import TYPE_CHECKING

import numpy as np

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.faces.picture_style import COLOURS, INK, entitle, halo, new_picture, tidy_log_axis
from containment.given.liquid import Liquid
from containment.judgement.ranges import HeldOver

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["draw_viscosity", "viscosity_words"]


def draw_viscosity(liquid: Liquid, over: HeldOver | None) -> "Figure | None":
    """Return the picture, or None for a liquid that is not from the table or does not change with temperature."""
    if liquid.entry is None or liquid.temperature is None:
        return None
    low, high = liquid.entry.range_K
    if not high > low:
        return None
    low, high = _worth_showing(low, high, liquid.temperature, over)
    kelvin = np.linspace(low, high, 200)
    viscosity = np.asarray(liquid.entry.viscosity.value(kelvin), dtype=np.float64)
    figure, axes = new_picture(height=3.0)
    axes.set_yscale("log")
    t = kelvin + ABSOLUTE_ZERO_CELSIUS
    axes.set_xlim(t[0], t[-1])
    axes.set_ylim(0.7 * viscosity.min(), 1.5 * viscosity.max())
    spread = liquid.uncertainty.get("viscosity", 0.0)
    if spread:
        axes.fill_between(t, viscosity * (1.0 - min(spread, 0.9)), viscosity * (1.0 + spread), color=COLOURS["breaks up"],
                          alpha=0.18, linewidth=0, zorder=2)  # fmt: skip
    axes.plot(t, viscosity, color=COLOURS["breaks up"], zorder=3)
    if over is not None and over.temperature is not None:
        first, last = (end + ABSOLUTE_ZERO_CELSIUS for end in over.temperature)
        axes.axvspan(first, last, color=COLOURS["held"], zorder=1, linewidth=0)
        axes.annotate("held", (0.5 * (first + last), 0.0), xycoords=("data", "axes fraction"), xytext=(0, 5), ha="center",
                      textcoords="offset points", va="bottom", fontsize=10, fontweight="bold")  # fmt: skip
    now = liquid.temperature + ABSOLUTE_ZERO_CELSIUS
    axes.plot([now], [liquid.viscosity], "X", color="white", markerfacecolor=INK, markersize=9, zorder=5)
    right = now > 0.6 * (t[0] + t[-1])
    halo(axes.annotate(f"{now:.4g} degC, {liquid.viscosity:.3g} Pa s", (now, liquid.viscosity), xytext=(-9 if right else 9, 5),
                       textcoords="offset points", ha="right" if right else "left", va="bottom", fontsize=8,
                       zorder=6))  # fmt: skip
    axes.set_xlabel("temperature [degC]")
    axes.set_ylabel("viscosity [Pa s]")
    tidy_log_axis(axes, "y")
    axes.grid(which="major", color="#d9dce0", linewidth=0.5)
    axes.set_axisbelow(True)
    entitle(axes, f"{liquid.name}: viscosity over temperature")
    return figure


def _worth_showing(low: float, high: float, now: float, over: HeldOver | None) -> tuple[float, float]:
    """Return the temperatures around the present one and the range that holds, K, within those of the table."""
    ends = over.temperature if over is not None and over.temperature is not None else (now, now)
    around = max(ends[1] - ends[0], 25.0)
    return max(low, min(ends[0], now) - around), min(high, max(ends[1], now) + around)


def viscosity_words(liquid: Liquid, over: HeldOver | None) -> str:
    """Return the picture in words."""
    now = (liquid.temperature or 0.0) + ABSOLUTE_ZERO_CELSIUS
    words = f"Viscosity of {liquid.name} over temperature; {liquid.viscosity:.3g} Pa s at {now:.4g} degC."
    if over is not None and over.temperature is not None:
        first, last = (end + ABSOLUTE_ZERO_CELSIUS for end in over.temperature)
        words += f" The drive point holds from {first:.3g} to {last:.3g} degC."
    return words
