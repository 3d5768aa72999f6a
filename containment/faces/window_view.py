"""The holding window as a reader looks at it: edges, drive and marks in trade units over one stretch of frequency."""

import math
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import InputError
from containment.given.drive import DriveLimits
from containment.given.vessel import Box
from containment.given.waveforms import PURE_SINE, Waveform
from containment.judgement.case import Case
from containment.judgement.companions import dragged_layer
from containment.judgement.limits import pull_off_acceleration
from containment.judgement.rheology import depends_on_shear
from containment.judgement.verdict import MARGIN_FACTOR
from containment.judgement.window import SEARCH_RANGE, HoldingPoint, HoldingWindow

__all__ = ["AXES", "Axis", "Mark", "WindowView", "refuse_without_window", "window_view"]

Real = npt.NDArray[np.float64]

_NODES: Final = 201
_SLOW_NODES: Final = 31
_DRAG_NODES: Final = 17
_MOST_DECADES: Final = 4.0


@dataclass(frozen=True, slots=True, kw_only=True)
class Axis:
    """What the window is drawn against.

    Attributes
    ----------
    name : str
        "acceleration", "stroke" or "velocity".
    label, unit : str
        Words and trade unit for the axis.
    si_unit : str
        Suffix of the column in rows and JSON.
    si_factor : float
        SI value of one trade unit.
    """

    name: str
    label: str
    unit: str
    si_unit: str
    si_factor: float

    def shown(self, frequency: Any, acceleration: Any, shape: Waveform = PURE_SINE) -> Real:
        """Return peak accelerations (m/s^2) at frequencies (Hz) as values on this axis, in the trade unit."""
        w = 2.0 * math.pi * np.asarray(frequency, dtype=np.float64)
        a = np.asarray(acceleration, dtype=np.float64)
        if self.name == "stroke":
            a = 2.0 * a / w**2 * (shape.amplitude / shape.peak_acceleration)
        elif self.name == "velocity":
            a = a / w * (shape.peak_velocity / shape.peak_acceleration)
        return a / self.si_factor


AXES: Final = {
    axis.name: axis
    for axis in (
        Axis(name="acceleration", label="peak acceleration", unit="g_n", si_unit="m_s2", si_factor=STANDARD_GRAVITY),
        Axis(name="stroke", label="stroke, peak to peak", unit="mm", si_unit="m", si_factor=1e-3),
        Axis(name="velocity", label="peak velocity", unit="m/s", si_unit="m_s", si_factor=1.0),
    )
}
"""The axes by their names."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Mark:
    """A drive point that is marked: its name, its place (Hz, unit of the axis), its acceleration (m/s^2) and stroke (m)."""

    name: str
    frequency: float
    value: float
    acceleration: float
    stroke: float
    margin: float | None = None


@dataclass(frozen=True, slots=True, kw_only=True)
class WindowView:
    """The window over one stretch of frequency, values in the unit of its axis.

    Attributes
    ----------
    axis : Axis
        What it is drawn against.
    frequency : array, shape (nodes,)
        Hz.
    lower, upper : array, shape (nodes,)
        Edges; infinite where there is none within the amplitudes searched, lower 0 where nothing needs holding.
    drive, pull_off, searched : array, shape (nodes,)
        What the drive reaches (infinite where not stated), where the layer pulls off its base, and the end of the search.
    covered : tuple of two arrays, or None
        Edges if a skin covers the surface, where nobody has said whether it is clean.
    dragged : array, shape (nodes,), or None
        Lower edge with the drag of the side walls, between a few frequencies by its ratio to the ideal one.
    margin_factor : float
        Factor to the edges and to the pull-off below which a point is marginal.
    doubtful : bool
        Whether no point may be called held, however far from the edges: the verdict says why.
    dwell : float or None
        Time for which it holds, s; None for ever.
    corners : tuple of Mark
        Least acceleration, lowest frequency, largest margin; empty without a window.
    point : Mark or None
        The drive point asked for.
    lowest, highest : float
        Sensible ends of the axis.
    """

    axis: Axis
    frequency: Real
    lower: Real
    upper: Real
    drive: Real
    pull_off: Real
    searched: Real
    covered: tuple[Real, Real] | None
    dragged: Real | None
    margin_factor: float
    doubtful: bool
    dwell: float | None
    corners: tuple[Mark, ...]
    point: Mark | None
    lowest: float
    highest: float

    @property
    def ceiling(self) -> Real:
        """Least of the upper edge, the drive, the pull-off and the end of the search."""
        return np.minimum(np.minimum(self.upper, self.drive), np.minimum(self.pull_off, self.searched))

    @property
    def held(self) -> npt.NDArray[np.bool_]:
        """Where the window is open."""
        result: npt.NDArray[np.bool_] = self.lower < self.ceiling
        return result

    @property
    def safe(self) -> tuple[Real, Real]:
        """Ends of what is held with the margin, drag of the walls and a skin counted; nothing where not low < high."""
        low = (self.lower if self.dragged is None else np.maximum(self.lower, self.dragged)) * self.margin_factor
        high = np.minimum(np.minimum(self.upper, self.pull_off) / self.margin_factor, self.ceiling)
        if self.covered is not None:
            low, high = np.maximum(low, self.covered[0]), np.minimum(high, self.covered[1])
        return (np.full_like(low, np.inf), high) if self.doubtful else (low, high)

    def stretches(self) -> list[tuple[int, int]]:
        """Return first and last node of every stretch of frequencies over which the window is open."""
        padded = np.concatenate([[False], self.held, [False]]).astype(np.int8)
        turns = np.flatnonzero(np.diff(padded))
        return [(int(i), int(j) - 1) for i, j in zip(turns[::2], turns[1::2], strict=True)]

    def rows(self) -> dict[str, list[float | bool | None]]:
        """Return the numbers in SI, column by column; None where there is no value."""
        unit, si = self.axis.si_unit, self.axis.si_factor

        def column(values: Real) -> list[float | bool | None]:
            return [float(v) * si if math.isfinite(v) else None for v in values]

        name = self.axis.name
        return {
            "frequency_Hz": [float(f) for f in self.frequency],
            f"lower_{name}_{unit}": column(self.lower),
            f"upper_{name}_{unit}": column(self.upper),
            f"drive_{name}_{unit}": column(self.drive),
            f"pull_off_{name}_{unit}": column(self.pull_off),
            f"ceiling_{name}_{unit}": column(self.ceiling),
            "held": [bool(h) for h in self.held],
        }


def refuse_without_window(case: Case) -> None:
    """Refuse a case whose edges over frequency are not computed.

    Raises
    ------
    InputError
        A viscosity that depends on the shear rate, or a box whose contact line is pinned.
    """
    if depends_on_shear(case.liquid):
        raise InputError(
            f"liquid: the viscosity of {case.liquid.name} depends on the shear rate, which a window over frequency does not "
            "know; expected a drive point with 'containment liquid'"
        )
    if isinstance(case.vessel, Box) and case.vessel.contact_line == "pinned":
        raise InputError(
            "--contact-line: 'pinned' is not available for the window of a box; expected a drive point with 'containment "
            "liquid'"
        )


def window_view(
    case: Case,
    window: HoldingWindow | None,
    drive: DriveLimits,
    *,
    against: str = "acceleration",
    point: tuple[float, float] | None = None,
    margin_factor: float = MARGIN_FACTOR,
    doubtful: bool = False,
    nodes: int | None = None,
) -> WindowView:
    """Return the view of a window.

    Parameters
    ----------
    case : Case
        What is held.
    window : HoldingWindow or None
        Its corners and coarse edges; None where the layer needs no holding.
    drive : DriveLimits
        What the drive reaches.
    against : str
        One of `AXES`.
    point : tuple of float, optional
        Frequency (Hz) and peak acceleration (m/s^2) of the drive point.
    margin_factor : float
        Factor below which a point is marginal.
    doubtful : bool
        Whether no point may be called held.
    nodes : int, optional
        Number of frequencies; the corners' own frequencies come on top.
    """
    axis = AXES[against]
    slow = case.vessel.contact_line == "pinned" or case.waveform is not PURE_SINE
    corners = _corners(case, window, axis)
    low, high = _stretch(window, drive, point)
    f = np.geomspace(low, high, nodes or (_SLOW_NODES if slow else _NODES))
    f = np.unique(np.concatenate([f, [mark.frequency for mark in corners if low <= mark.frequency <= high]]))
    edges = case.edges(f)
    gain = case.gain(f)[1]
    pull = pull_off_acceleration(
        density=case.liquid.density, depth=case.vessel.depth, vapour_pressure=case.liquid.vapour_pressure or 0.0,
        ambient_pressure=case.surroundings.ambient_pressure,
    )  # fmt: skip
    searched = case.amplitude_bound * (2.0 * math.pi * f) ** 2 * case.waveform.peak_acceleration
    reach = drive.largest_acceleration(f, product_mass=case.product_mass or 0.0, shape=case.waveform)

    def shown(acceleration: Any) -> Real:
        return axis.shown(f, acceleration, case.waveform)

    mark = None
    if point is not None:
        mark = _mark("drive point", axis, *point, case.waveform)
    parts = {
        "lower": shown(edges.lower), "upper": shown(edges.upper), "drive": shown(reach),
        "pull_off": shown(pull / gain), "searched": shown(searched / gain),
    }  # fmt: skip
    around = case.surroundings
    said = around.surface is not None or around.film_modulus is not None or around.below is not None
    skin = None if said or slow or case.liquid.rheology is not None else case.edges(f, layer=case.layer_with(surface="covered"))
    bottom, top = _ends(parts, [*corners, *([mark] if mark else [])])
    return WindowView(
        axis=axis, frequency=f, corners=corners, point=mark, lowest=bottom, highest=top, margin_factor=margin_factor,
        doubtful=doubtful, dwell=case.allowance.dwell, covered=None if skin is None else (shown(skin.lower), shown(skin.upper)),
        dragged=None if slow else _dragged(case, f, edges.lower, parts["lower"]), **parts,
    )  # fmt: skip


def _dragged(case: Case, f: Real, lower: Real, shown: Real) -> Real | None:
    """Return the lower edge with the drag of the walls, in the unit shown; the ratio to the ideal one changes slowly."""
    known = np.flatnonzero(np.isfinite(lower) & (lower > 0.0))
    layer = dragged_layer(case) if len(known) else None
    if layer is None:
        return None
    some = known[np.unique(np.linspace(0, len(known) - 1, _DRAG_NODES).round().astype(np.intp))]
    ratio = np.array([case.lower_edge(float(f[i]), layer=layer) for i in some]) / lower[some]
    result: Real = shown * np.interp(np.log(f), np.log(f[some]), np.maximum(ratio, 1.0))
    return result


def _corners(case: Case, window: HoldingWindow | None, axis: Axis) -> tuple[Mark, ...]:
    if window is None or window.recommended is None:
        return ()

    def mark(name: str, point: HoldingPoint | None, *, margin: bool = False) -> Mark:
        assert point is not None
        known = margin and math.isfinite(point.margin)
        return _mark(name, axis, point.frequency, point.acceleration, case.waveform, point.margin if known else None)

    return (
        mark("least acceleration", window.minimum_acceleration),
        mark("lowest frequency", window.minimum_frequency),
        mark("largest margin", window.recommended, margin=True),
    )


def _mark(
    name: str, axis: Axis, frequency: float, acceleration: float, shape: Waveform, margin: float | None = None
) -> Mark:
    stroke = AXES["stroke"]
    return Mark(
        name=name, frequency=frequency, acceleration=acceleration, margin=margin,
        value=float(axis.shown(frequency, acceleration, shape)),
        stroke=float(stroke.shown(frequency, acceleration, shape)) * stroke.si_factor,
    )  # fmt: skip


def _stretch(
    window: HoldingWindow | None, drive: DriveLimits, point: tuple[float, float] | None
) -> tuple[float, float]:
    """Return the frequencies worth showing: where it holds and a little around, with the drive's range and the point."""
    low, high = drive.frequency_range or SEARCH_RANGE
    if drive.frequency_range is None and window is not None:
        open_ = window.frequencies[window.held]
        some = [*open_, *([window.minimum_frequency.frequency] if window.minimum_frequency else [])]
        if not some:  # no window: where at least one edge is known
            some = list(window.frequencies[np.isfinite(window.lower) | np.isfinite(window.upper)]) or [low, high]
        low, high = max(low, 0.5 * min(some)), min(high, 1.5 * max(some))
    elif drive.frequency_range is not None:
        low, high = low / 1.25, high * 1.25
    if point is not None:
        low, high = min(low, point[0] / 1.5), max(high, point[0] * 1.5)
    return low, high


def _ends(parts: dict[str, Real], marks: list[Mark]) -> tuple[float, float]:
    """Return the ends of the axis: all that is held, the marks, and the edges around them."""
    lower, upper = parts["lower"], parts["upper"]
    ceiling = np.min([parts[name] for name in ("upper", "drive", "pull_off", "searched")], axis=0)
    held = lower < ceiling
    values = [mark.value for mark in marks]
    if held.any():
        values += [*lower[held], *ceiling[held]]
    else:
        values += [*lower, *upper]
        near = ceiling[np.isfinite(lower)]
        values += [*near]
    known = np.array([v for v in values if math.isfinite(v) and v > 0.0])
    if not len(known):
        known = np.array([0.1, 10.0])
    low, high = float(known.min()) / 1.6, float(known.max()) * 1.6
    if marks and high / low > 10.0**_MOST_DECADES:
        low = max(low, min(mark.value for mark in marks) / 30.0)
    return max(low, high * 10.0**-_MOST_DECADES), high


