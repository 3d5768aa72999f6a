"""Shape of one mode of the vessel: the surface from below, and a section through the layer."""

import math
from typing import TYPE_CHECKING, Any

import numpy as np
import numpy.typing as npt

from containment.faces.picture_style import COLOURS, INK, new_row
from containment.given.vessel import Annulus, Box, Cylinder, Slot, Vessel
from containment.judgement.case import spectrum_of

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = ["draw_mode", "mode_shape"]

Real = npt.NDArray[np.float64]

_NODES = 101


def mode_shape(vessel: Vessel, wavenumber: float) -> tuple[Real, Real, Real] | None:
    """Return coordinates x, y (m) and height of the surface (largest 1, not-a-number outside) of the mode at a wavenumber.

    Returns
    -------
    tuple of array, shape (n, n), or None
        None where the vessel has no modes one by one there, or its contact line is pinned (its shapes are sums of these).

    Examples
    --------
    >>> from containment.given.vessel import Box
    >>> x, y, z = mode_shape(Box(width=0.06, length=0.08, depth=0.03), 39.3)  # half a wave along the longer side
    >>> bool(abs(z[0, 0] + z[-1, 0]) < 1e-12), bool(abs(z[0, 0] - z[0, -1]) < 1e-12)
    (True, True)
    """
    spectrum = spectrum_of(vessel)
    if vessel.contact_line == "pinned" or not len(spectrum.discrete) or not wavenumber < spectrum.continuous_from:
        return None
    i = int(np.argmin(np.abs(spectrum.discrete - wavenumber)))
    k, p, q = float(spectrum.discrete[i]), int(spectrum.first[i]), int(spectrum.second[i])
    match vessel:
        case Box(width=width, length=length):
            x, y = np.meshgrid(np.linspace(0.0, width, _NODES), np.linspace(0.0, length, _NODES))
            z = np.cos(p * math.pi * x / width) * np.cos(q * math.pi * y / length)
        case Slot(width=width):
            x, y = np.meshgrid(np.linspace(0.0, width, _NODES), np.linspace(0.0, width, _NODES))
            z = np.cos(p * math.pi * x / width)
        case Cylinder(diameter=outer) | Annulus(outer_diameter=outer):
            from scipy.special import jv, jvp, yv, yvp

            x, y = np.meshgrid(*(np.linspace(-0.5 * outer, 0.5 * outer, _NODES),) * 2)
            r, angle = np.hypot(x, y), np.arctan2(y, x)
            inner = 0.5 * vessel.inner_diameter if isinstance(vessel, Annulus) else 0.0
            z = jv(p, k * r)
            if inner > 0.0:  # no slope at either wall
                with np.errstate(invalid="ignore"):
                    z = z - jvp(p, k * inner) / yvp(p, k * inner) * yv(p, k * np.maximum(r, inner))
            z = np.where((r <= 0.5 * outer) & (r >= inner), z * np.cos(p * angle), np.nan)
        case _:
            return None
    return x, y, z / np.nanmax(np.abs(z))


def draw_mode(vessel: Vessel, wavenumber: float) -> "Figure | None":
    """Return the picture of the mode at a wavenumber, or None where it has no shape of its own."""
    shape = mode_shape(vessel, wavenumber)
    if shape is None:
        return None
    from matplotlib.colors import LinearSegmentedColormap

    x, y, z = (1e3 * shape[0], 1e3 * shape[1], shape[2])
    figure, (plan, section) = new_row(height=3.3, ratios=(1.0, 1.25))
    ramp = LinearSegmentedColormap.from_list("height", [COLOURS["breaks up"], "#f7f7f5", COLOURS["falls"]])
    rings: Any = {"colors": INK, "linewidths": 0.6}
    drawn = [
        plan.contourf(x, y, z, levels=np.linspace(-1.0, 1.0, 21), cmap=ramp),
        plan.contour(x, y, z, levels=(0.25, 0.5, 0.75), linestyles="solid", **rings),
        plan.contour(x, y, z, levels=(-0.75, -0.5, -0.25), linestyles="dashed", **rings),
        plan.contour(x, y, z, levels=(0.0,), colors=INK, linewidths=1.6),
    ]
    wall = _outline(plan, vessel)
    if wall is not None:
        for lines in drawn:
            lines.set_clip_path(wall)
    plan.set_aspect("equal")
    plan.set_xlabel("x [mm]")
    plan.set_ylabel("y [mm]")
    plan.set_title("Surface from below", loc="left", fontsize=8.5, fontweight="bold")
    _section(section, vessel, x, y, z)
    figure.supxlabel(
        "Solid lines: hangs lower. Dashed: drawn up. Heavy line: stays. Shape only; its size is drawn at will.", x=0.012,
        ha="left", fontsize=7.5,
    )  # fmt: skip
    return figure


def _outline(axes: Any, vessel: Vessel) -> Any:
    """Draw the walls; return the outer one where it is round."""
    from matplotlib.patches import Circle

    radii: tuple[float, ...] = ()
    if isinstance(vessel, Cylinder):
        radii = (0.5 * vessel.diameter,)
    elif isinstance(vessel, Annulus):
        radii = (0.5 * vessel.inner_diameter, 0.5 * vessel.outer_diameter)
    outer = None
    for radius in radii:
        outer = axes.add_patch(Circle((0.0, 0.0), 1e3 * radius, fill=False, edgecolor=INK, linewidth=1.4, clip_on=False))
    for side in ("top", "right", "bottom", "left"):
        axes.spines[side].set_visible(not radii and not isinstance(vessel, Slot))
    return outer


def _section(axes: Any, vessel: Vessel, x: Real, y: Real, z: Real) -> None:
    """Draw the layer under its base, cut through the middle or along the side where it moves most."""
    rows, columns = np.nan_to_num(z[_NODES // 2]), np.nan_to_num(z[:, _NODES // 2])
    if isinstance(vessel, Box):
        rows, columns = z[0], z[:, 0]
    across = np.ptp(rows) >= np.ptp(columns)
    at, height = (x[0], rows) if across else (y[:, 0], columns)
    known = np.isfinite(z[_NODES // 2] if across else z[:, _NODES // 2])
    depth = 1e3 * vessel.depth
    surface = np.where(known, -depth - 0.18 * depth * height, np.nan)
    axes.fill_between(at, 0.0, surface, color=COLOURS["held"], linewidth=0)
    axes.plot(at, surface, color=COLOURS["breaks up"], linewidth=1.6)
    axes.plot(at, np.where(known, -depth, np.nan), color=INK, linewidth=0.8, linestyle=(0, (4, 3)))
    left, right = float(at[0]), float(at[-1])
    axes.fill_between([left, right], 0.0, 0.08 * depth, color=COLOURS["searched"], linewidth=0)
    core = 1e3 * 0.5 * vessel.inner_diameter if isinstance(vessel, Annulus) else None
    for wall in (left, right) if core is None else (left, right, -core, core):
        axes.plot([wall, wall], [0.08 * depth, -1.35 * depth], color=INK, linewidth=1.4)
    axes.text(0.5 * (left + right), 0.1 * depth, "base of the vessel", ha="center", va="bottom", fontsize=8)
    axes.set_xlabel(f"{'x' if across else 'y'} [mm]")
    axes.set_ylabel("below the base [mm]")
    axes.set_ylim(-1.4 * depth, 0.28 * depth)
    where = "along the wall" if isinstance(vessel, Box) else "through the middle"
    axes.set_title(f"Section {where}", loc="left", fontsize=8.5, fontweight="bold")
    ticks = [0.0, -0.5 * depth, -depth]
    axes.set_yticks(ticks, [f"{abs(t):.3g}" for t in ticks])
