"""Growth rate over wavenumber at a drive point, with the modes of the vessel marked."""

import math
from typing import TYPE_CHECKING, Any

import numpy as np

from containment.faces.picture_style import COLOURS, INK, entitle, halo, new_picture, tidy_log_axis
from containment.judgement.growth_curve import GrowthCurve
from containment.physics.wavenumbers import Spectrum

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["draw_growth", "growth_words"]


def draw_growth(curve: GrowthCurve, spectrum: Spectrum, title: str) -> "Figure":
    """Return the picture of growth rates: without shaking, and at the drive point."""
    figure, axes = new_picture(height=3.7)
    k = curve.wavenumber
    top = 1.25 * max(float(curve.at_rest.max()), float(np.nanmax(curve.shaken, initial=0.0)), 2.0 * curve.allowed, 0.1)
    nearest = -float(np.nanmax(curve.mode_rates)) if len(curve.mode_rates) else 0.0
    bottom = -max(top, 2.5 * nearest)
    axes.set_xscale("log")
    axes.set_xlim(k[0], k[-1])
    axes.set_ylim(bottom, top)
    axes.axhspan(curve.allowed, top, color="#fbeee6", zorder=0.5, linewidth=0)
    axes.axhline(0.0, color=INK, linewidth=0.8, zorder=2)
    if curve.allowed > 0.0:
        axes.axhline(curve.allowed, color=COLOURS["falls"], linewidth=0.8, linestyle=(0, (1, 1.5)), zorder=2)
    rest = np.where(curve.at_rest > 0.0, curve.at_rest, np.nan)
    axes.plot(k, rest, color=COLOURS["falls"], linestyle=(0, (6, 1.2)), zorder=3)
    axes.plot(k, curve.shaken, color=COLOURS["breaks up"], zorder=3)
    if len(curve.modes):
        axes.plot(curve.modes, curve.mode_rates, "o", color=COLOURS["breaks up"], markersize=3.2, markerfacecolor="white",
                  markeredgewidth=0.9, zorder=4)  # fmt: skip
        axes.axvspan(float(k[0]), 0.96 * float(curve.modes[0]), color="white", alpha=0.75, zorder=3.5, linewidth=0)
        axes.text(math.sqrt(float(k[0] * curve.modes[0])), 0.5 * bottom, "longer than\nthe vessel", ha="center", va="center",
                  fontsize=7, rotation=90, color=COLOURS["drive"], zorder=4)  # fmt: skip
        _name_modes(axes, curve, spectrum, bottom, top)
    if np.isfinite(rest).any():
        i = int(np.nanargmax(rest))
        halo(axes.annotate("without shaking", (k[i], float(rest[i])), xytext=(0, 4), textcoords="offset points", ha="center",
                           va="bottom", color=COLOURS["falls"], fontsize=8, zorder=5))  # fmt: skip
    right = int(np.flatnonzero(np.isfinite(curve.shaken) & (curve.shaken > bottom))[-1])
    halo(axes.annotate("at the drive point", (k[right], float(curve.shaken[right])), xytext=(-6, 8), textcoords="offset points",
                       ha="right", va="bottom", color=COLOURS["breaks up"], fontsize=8, zorder=5))  # fmt: skip
    allowed = "grows faster than the dwell allows" if curve.allowed > 0.0 else "grows"
    axes.text(0.99, 0.98, allowed, transform=axes.transAxes, ha="right", va="top", fontsize=8, style="italic")
    axes.annotate("dies out", (0.99, 0.0), xycoords=("axes fraction", "data"), xytext=(0, -3), textcoords="offset points",
                  ha="right", va="top", fontsize=8, style="italic")  # fmt: skip
    axes.set_xlabel("wavenumber [1/m]; circles: modes of the vessel" if len(curve.modes) else "wavenumber [1/m]")
    axes.set_ylabel("growth rate [1/s]")
    tidy_log_axis(axes, "x")
    upper = axes.secondary_xaxis("top", functions=(_wavelength, _wavelength))
    upper.set_xlabel("wavelength [mm]")
    upper.xaxis.label.set(fontsize=8.5, color=INK)
    upper.tick_params(labelsize=8.5, colors=INK)
    upper.minorticks_off()
    lengths = [v for d in range(-2, 5) for v in (10.0**d, 2.0 * 10.0**d, 5.0 * 10.0**d) if k[0] <= 2e3 * math.pi / v <= k[-1]]
    upper.set_xticks(lengths, [f"{v:g}" for v in lengths])
    entitle(axes, title)
    return figure


def _wavelength(x: Any) -> Any:
    return 2e3 * np.pi / np.maximum(x, 1e-12)


def _name_modes(axes: "Axes", curve: GrowthCurve, spectrum: Spectrum, bottom: float, top: float) -> None:
    """Name the longest mode and the one that dies out most slowly, or grows fastest."""
    worst = int(np.nanargmax(curve.mode_rates)) if np.isfinite(curve.mode_rates).any() else 0
    for i in dict.fromkeys((0, worst)):
        rate = float(curve.mode_rates[i])
        if not bottom < rate < top:
            continue
        name = spectrum.mode_name(float(curve.modes[i])).rsplit(", ", 1)[0]
        what = f"{name}\n{rate:.3g} 1/s" + (", governs" if i == worst else "")
        halo(axes.annotate(
            what, (float(curve.modes[i]), rate), xytext=(10, 5), textcoords="offset points", ha="left", va="bottom",
            fontsize=7.5, zorder=6, arrowprops={"arrowstyle": "-", "linewidth": 0.6},
        ))  # fmt: skip


def growth_words(curve: GrowthCurve, title: str) -> str:
    """Return the picture in words."""
    rest = float(curve.at_rest.max())
    parts = [f"Growth rate over wavenumber: {title}. Without shaking the fastest wave grows at {rest:.3g} 1/s."]
    if len(curve.mode_rates) and np.isfinite(curve.mode_rates).any():
        parts.append(f"At the drive point the governing mode has {float(np.nanmax(curve.mode_rates)):.3g} 1/s.")
    return " ".join(parts)
