"""The holding window over frequency, and its corners: least acceleration, lowest frequency, largest margin."""

import math
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.physics.edges import Edges

__all__ = ["HoldingPoint", "HoldingWindow", "SEARCH_RANGE", "search_window"]

Real = npt.NDArray[np.float64]

SEARCH_RANGE: Final = (2.0, 2000.0)
"""Frequencies that are searched where the drive states no range, Hz."""

_NODES: Final = 49
_LEVELS: Final = 5
_PER_LEVEL: Final = 16
_EDGE_PRECISION: Final = 1e-5
_MARGIN_PRECISION: Final = 1e-3
_ZOOM: Final = 9
_ZOOMS: Final = 8
_SHARPEST_PEAKS: Final = 4


@dataclass(frozen=True, slots=True, kw_only=True)
class HoldingPoint:
    """A drive point that holds, or the edge where holding begins.

    Attributes
    ----------
    frequency : float
        Hz.
    acceleration : float
        Peak, m/s^2.
    lower, upper : float
        Edges of the window at this frequency, m/s^2; upper is infinite where nothing bounds it.
    ceiling : float
        Least of the upper edge and of what the drive and the other limits allow, m/s^2.
    lower_wavenumber, upper_wavenumber : float
        Of the modes that bind, 1/m; not-a-number where there is none.
    amplitude_factor : float
        Half the stroke times w^2 over the peak acceleration: 1 for a sine.
    """

    frequency: float
    acceleration: float
    lower: float
    upper: float
    ceiling: float
    lower_wavenumber: float
    upper_wavenumber: float
    amplitude_factor: float = 1.0

    @property
    def amplitude(self) -> float:
        """Amplitude, half the stroke, m."""
        return self.amplitude_factor * self.acceleration / (2.0 * math.pi * self.frequency) ** 2

    @property
    def margin(self) -> float:
        """Smaller of the ratios to the lower edge and to the ceiling."""
        below = math.inf if self.lower == 0.0 else self.acceleration / self.lower
        return min(below, self.ceiling / self.acceleration if self.acceleration else math.inf)

    def to_dict(self, *, margin: bool = False) -> dict[str, Any]:
        """Return the point as plain JSON types."""
        result: dict[str, Any] = {
            "frequency_Hz": self.frequency,
            "acceleration_m_s2": self.acceleration,
            "amplitude_m": self.amplitude,
            "upper_acceleration_m_s2": self.upper if math.isfinite(self.upper) else None,
        }
        if margin:
            result["margin"] = self.margin if math.isfinite(self.margin) else None
        return result


@dataclass(frozen=True, slots=True, kw_only=True)
class HoldingWindow:
    """Edges over frequency and the corners of the window.

    Attributes
    ----------
    frequencies, lower, upper, ceiling : array
        Hz and m/s^2, one value a frequency; see `Edges`. The ceiling is the least of the upper edge, the drive and the
        other limits.
    drive_ceiling : array
        What the drive and the other limits allow, m/s^2; may be infinite.
    lower_wavenumber, upper_wavenumber : array
        Of the binding modes, 1/m.
    minimum_acceleration, minimum_frequency, recommended : HoldingPoint or None
        Least acceleration that holds, lowest frequency that holds, and the point of largest margin; None without a
        window.
    reason : str
        Why there is no window, and what would open one; empty where there is one.
    """

    frequencies: Real
    lower: Real
    upper: Real
    ceiling: Real
    drive_ceiling: Real
    lower_wavenumber: Real
    upper_wavenumber: Real
    minimum_acceleration: HoldingPoint | None
    minimum_frequency: HoldingPoint | None
    recommended: HoldingPoint | None
    reason: str = ""

    @property
    def held(self) -> npt.NDArray[np.bool_]:
        """Where the window is open."""
        result: npt.NDArray[np.bool_] = self.lower < self.ceiling
        return result


@dataclass(frozen=True, slots=True)
class _Sample:
    edges: Edges
    ceiling: Real

    @property
    def openness(self) -> Real:
        """Log of ceiling over lower edge: positive where the window is open."""
        with np.errstate(divide="ignore", invalid="ignore"):
            result = np.log(self.ceiling) - np.log(self.edges.lower)
        return np.where(np.isnan(result), -np.inf, result)

    @property
    def held(self) -> npt.NDArray[np.bool_]:
        result: npt.NDArray[np.bool_] = self.edges.lower < self.ceiling
        return result

    def point(self, i: int, acceleration: float, amplitude_factor: float) -> HoldingPoint:
        e = self.edges
        return HoldingPoint(
            frequency=float(e.frequency[i]), acceleration=acceleration, lower=float(e.lower[i]),
            upper=float(e.upper[i]), ceiling=float(self.ceiling[i]),
            lower_wavenumber=float(e.lower_wavenumber[i]), upper_wavenumber=float(e.upper_wavenumber[i]),
            amplitude_factor=amplitude_factor,
        )  # fmt: skip


def search_window(
    edges_of: Callable[[Real], Edges],
    drive_ceiling: Callable[[Real], Real],
    *,
    frequency_range: tuple[float, float] = SEARCH_RANGE,
    frequencies: Real | None = None,
    amplitude_factor: float = 1.0,
    sparse: bool = False,
) -> HoldingWindow:
    """Search the window and refine its corners.

    Parameters
    ----------
    edges_of : callable
        Edges at an array of frequencies, Hz.
    drive_ceiling : callable
        Largest acceleration that the drive and the other limits allow at an array of frequencies, m/s^2.
    frequency_range : tuple
        Frequencies that are searched, Hz.
    frequencies : array, optional
        Nodes to be used instead of a geometric net over the range.
    amplitude_factor : float
        Half the stroke times w^2 over the peak acceleration of the motion: 1 for a sine.
    sparse : bool
        Fewer nodes, for edges that are slow to compute.

    Returns
    -------
    HoldingWindow
        Corners are refined by zooming between nodes: edges to 1e-5 in frequency, the point of largest margin to 1e-3.
        Where the openness of the window has a peak between nodes the peak is looked into, so that a narrow window is
        not overlooked.
    """
    nodes = np.geomspace(*frequency_range, _NODES // 2 if sparse else _NODES)
    if frequencies is not None:
        nodes = np.sort(np.asarray(frequencies, dtype=np.float64))

    def sample(f: Real) -> _Sample:
        edges = edges_of(f)
        return _Sample(edges, np.minimum(edges.upper, drive_ceiling(f)))

    coarse = sample(nodes)
    held_at: list[_Sample] = [coarse]
    openness = coarse.openness
    padded = np.concatenate([[-np.inf], openness, [-np.inf]])
    peaks = np.flatnonzero((padded[1:-1] >= padded[:-2]) & (padded[1:-1] >= padded[2:]) & np.isfinite(openness))
    hidden = [int(i) for i in peaks if openness[i] <= 0.0]
    hidden = sorted(hidden, key=lambda i: -openness[i])[:_SHARPEST_PEAKS]
    for i in hidden:
        low, high = nodes[max(i - 1, 0)], nodes[min(i + 1, len(nodes) - 1)]
        for _ in range(_ZOOMS):
            near = sample(np.geomspace(low, high, _ZOOM))
            best = int(np.argmax(near.openness))
            if near.openness[best] > 0.0:
                held_at.append(near)
                break
            f = near.edges.frequency
            low, high = f[max(best - 1, 0)], f[min(best + 1, _ZOOM - 1)]
    everything = _merged(held_at)
    corners: tuple[HoldingPoint | None, ...] = (None, None, None)
    if everything.held.any():
        corners = _corners(everything, sample, amplitude_factor, _PER_LEVEL // 2 if sparse else _PER_LEVEL)
    return HoldingWindow(
        frequencies=nodes, lower=coarse.edges.lower, upper=coarse.edges.upper, ceiling=coarse.ceiling,
        drive_ceiling=np.asarray(drive_ceiling(nodes), dtype=np.float64),
        lower_wavenumber=coarse.edges.lower_wavenumber, upper_wavenumber=coarse.edges.upper_wavenumber,
        minimum_acceleration=corners[0], minimum_frequency=corners[1], recommended=corners[2],
    )  # fmt: skip


def _merged(samples: list[_Sample]) -> _Sample:
    """Join samples in rising order of frequency."""
    f = np.concatenate([s.edges.frequency for s in samples])
    order = np.argsort(f, kind="stable")

    def join(name: str) -> Any:
        return np.concatenate([getattr(s.edges, name) for s in samples])[order]

    names = ("frequency", "lower", "upper", "lower_wavenumber", "upper_wavenumber", "upper_subharmonic")
    return _Sample(Edges(*(join(name) for name in names)), np.concatenate([s.ceiling for s in samples])[order])


def _corners(
    everything: _Sample, sample: Callable[[Real], _Sample], amplitude_factor: float, per_level: int
) -> tuple[HoldingPoint, HoldingPoint, HoldingPoint]:
    def least_lower(s: _Sample) -> Real:
        return np.where(s.held, s.edges.lower, np.inf)

    def lowest(s: _Sample) -> Real:
        return np.where(s.held, s.edges.frequency, np.inf)

    def narrowest(s: _Sample) -> Real:
        return np.where(s.held, -s.openness, np.inf)

    costs = {least_lower: _EDGE_PRECISION, lowest: _EDGE_PRECISION, narrowest: _MARGIN_PRECISION}
    for _ in range(_LEVELS):  # each level puts new nodes on both sides of the best one of each corner
        f = everything.edges.frequency
        new = []
        for cost, precision in costs.items():
            best = int(np.argmin(cost(everything)))
            low, high = f[max(best - 1, 0)], f[min(best + 1, len(f) - 1)]
            if high > low * (1.0 + precision):
                new.append(np.geomspace(low, high, per_level + 2)[1:-1])
        if not new:
            break
        everything = _merged([everything, sample(np.unique(np.concatenate(new)))])
    found = []
    for cost in costs:
        at = int(np.argmin(cost(everything)))
        lower, ceiling = float(everything.edges.lower[at]), float(everything.ceiling[at])
        inside = cost is narrowest and lower > 0.0 and math.isfinite(ceiling)
        found.append(everything.point(at, math.sqrt(lower * ceiling) if inside else lower, amplitude_factor))
    return found[0], found[1], found[2]
