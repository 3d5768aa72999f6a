"""A drive point judged: edges at its frequency, growth rates of all modes, and the proof that none was missed."""

import math
from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import NotComputableError
from containment.given.waveforms import PURE_SINE
from containment.judgement.case import Case
from containment.physics.completeness import INTEGER_TOLERANCE, Count, count_growing
from containment.physics.edges import Edges, edge_errors, matters, nodes_up_to
from containment.physics.floquet import exponents, growing_exponents
from containment.physics.hill import Half, rows_needed
from containment.physics.layers import LayerModel

__all__ = ["OperatingPoint", "growing_modes", "judged_point"]

Real = npt.NDArray[np.float64]

_NODES_PER_E_FOLD: Final = 40
_MOST_MODES_IN_FULL: Final = 160
_FINEST: Final = 1e-6
_FARTHEST: Final = 1e8
_MOST_NODES: Final = 4000
_FAR: Final = 1.5
"""Factor beyond an edge from which a point is not counted in full."""


@dataclass(frozen=True, slots=True, kw_only=True)
class OperatingPoint:
    """What happens at a drive point.

    Attributes
    ----------
    frequency, acceleration : float
        Hz and peak m/s^2.
    edges, strict : Edges
        At this frequency, for the growth allowance and for no growth at all.
    growth_rate : float
        Largest real part of an exponent over all modes, 1/s: proven where it is above the allowance, the slowest decay
        found where it is below.
    worst_wavenumber : float
        Of that mode, 1/m.
    worst_subharmonic : bool
        Whether it answers at half the drive frequency.
    growing_modes : int
        Modes with an exponent beyond the allowance; bands of wavenumber count once where every wavenumber counts.
    proven : bool
        Whether the winding number of every mode that can matter is an integer.
    modes_checked : int
        Wavenumbers whose winding number was computed; all others are excluded by a bound.
    farthest_from_integer : float
        Largest distance of a winding number from an integer.
    lower_error, upper_error : float
        Estimated relative errors of the edges for the allowance; not-a-number where there is no edge.
    complete : bool
        Whether all modes that can matter were counted; far outside the edges only a choice of them is.
    """

    frequency: float
    acceleration: float
    edges: Edges
    strict: Edges
    growth_rate: float
    worst_wavenumber: float
    worst_subharmonic: bool
    growing_modes: int
    proven: bool
    modes_checked: int
    farthest_from_integer: float
    lower_error: float
    upper_error: float
    complete: bool = True

    @property
    def lower(self) -> float:
        """Lower edge for the allowance, m/s^2."""
        return float(self.edges.lower[0])

    @property
    def upper(self) -> float:
        """Upper edge for the allowance, m/s^2; may be infinite."""
        return float(self.edges.upper[0])

    @property
    def inside(self) -> bool:
        """Whether the point lies between the edges and no mode grows beyond the allowance."""
        return self.lower < self.acceleration < self.upper and self.growing_modes == 0

    @property
    def strictly_inside(self) -> bool:
        """Whether the point lies between the edges for no growth at all."""
        return bool(self.strict.lower[0] < self.acceleration < self.strict.upper[0]) and not self.growth_rate > 0.0


def judged_point(case: Case, *, frequency: float, acceleration: float) -> OperatingPoint:
    """Judge a drive point, Hz and peak m/s^2."""
    f = np.array([frequency])
    w = 2.0 * math.pi * frequency
    growth = case.allowance.growth
    edges = case.edges(f)
    strict = edges if growth == 0.0 else case.edges(f, growth=0.0)
    if case.vessel.contact_line == "pinned" or case.waveform is not PURE_SINE:
        return _counted_by_order(case, edges, strict, acceleration)
    low, high = (float(gain[0]) for gain in case.gain(f))
    if case.surroundings.cushion is None:
        errors = tuple(float(error[0]) for error in edge_errors(case.layer, edges, growth=growth))
    else:
        errors = (math.nan, math.nan)  # the gas spring is known far less well than the thresholds
    far = not float(edges.lower[0]) / _FAR < acceleration < float(edges.upper[0]) * _FAR
    parts = [_counted(case, case.layer, w, acceleration * gain, far) for gain in dict.fromkeys((low, high))]
    if case.surroundings.cushion is not None:
        parts.append(_counted(case, case.layer_with(gravity=STANDARD_GRAVITY), w, acceleration * high, far))
    worst = max(parts, key=lambda part: part.growth_rate)
    return OperatingPoint(
        frequency=frequency, acceleration=acceleration, edges=edges, strict=strict, growth_rate=worst.growth_rate,
        worst_wavenumber=worst.wavenumber, worst_subharmonic=worst.subharmonic,
        growing_modes=max(part.growing for part in parts), proven=all(part.proven for part in parts),
        modes_checked=sum(part.checked for part in parts),
        farthest_from_integer=max(part.distance for part in parts), lower_error=errors[0], upper_error=errors[1],
        complete=not far,
    )  # fmt: skip


def growing_modes(case: Case, *, frequency: float, acceleration: float) -> tuple[int, bool]:
    """Return the count of growing modes of a layer over open gas under a sine, and whether it is proven.

    The same count as in `judged_point`, without edges and growth rates: Hz and peak m/s^2.
    """
    w = 2.0 * math.pi * frequency
    k, _, resolved = _wavenumbers(case, case.layer, w, acceleration)
    if not len(k):
        return 0, resolved
    count = _settled_count(case.layer, k, w, acceleration, case.allowance.growth)
    return int(np.count_nonzero(count.growing > 0)), resolved and bool(count.proven.all())


def _counted_by_order(case: Case, edges: Edges, strict: Edges, acceleration: float) -> OperatingPoint:
    """Judge a pinned layer, or one under a motion that is not a pure sine: counts as above, one order or mode at a time."""
    frequency = float(edges.frequency[0])
    w = 2.0 * math.pi * frequency
    growth = case.allowance.growth
    counted, proven, growing, distance, rate, worst = 0, True, 0, 0.0, math.nan, math.nan
    if case.vessel.contact_line == "pinned":
        from containment.physics.pinned_growth import pinned_fastest_growth, pinned_growing

        kind, dims = case.rim
        try:
            found = pinned_growing(
                case.layer, kind, dims, frequency=frequency, acceleration=acceleration, growth=growth  # type: ignore[arg-type]
            )
            counted, proven, growing = found.orders, found.proven, found.growing
            if growing and found.worst_order >= 0:
                rate = pinned_fastest_growth(
                    case.layer, kind, dims, found.worst_order, frequency=frequency, acceleration=acceleration  # type: ignore[arg-type]
                )
        except NotComputableError:  # a box has edges but no count
            proven = False
    else:
        from containment.physics.motion_hill import fastest_growth, growing_count

        level = acceleration / case.waveform.peak_acceleration
        coupling = case.waveform.coupling()
        k, _, proven = _wavenumbers(case, case.layer, w, level * case.waveform.total)
        counted = len(k)
        counts = [growing_count(case.layer, float(mode), w, level, coupling, growth=growth) for mode in k]
        distance = max((d for _, d in counts), default=0.0)
        proven = proven and distance <= INTEGER_TOLERANCE
        modes = [float(mode) for mode, (n, _) in zip(k, counts, strict=True) if n > 0]
        growing = len(modes)
        if modes:
            rates = [fastest_growth(case.layer, mode, w, level, coupling, precision=1e-5) for mode in modes[:20]]
            rate, worst = max(zip(rates, modes, strict=False))
    return OperatingPoint(
        frequency=frequency, acceleration=acceleration, edges=edges, strict=strict, growth_rate=rate,
        worst_wavenumber=worst, worst_subharmonic=False, growing_modes=growing, proven=proven, modes_checked=counted,
        farthest_from_integer=distance, lower_error=math.nan, upper_error=math.nan,
    )  # fmt: skip


@dataclass(frozen=True, slots=True)
class _Counted:
    growing: int
    proven: bool
    checked: int
    distance: float
    growth_rate: float
    wavenumber: float
    subharmonic: bool


def _counted(case: Case, layer: LayerModel, w: float, acceleration: float, far: bool) -> _Counted:
    """Count the growing modes of a layer that moves with a peak acceleration, and find the fastest.

    Far outside the edges nothing needs proof: a choice of the longer modes tells how fast it goes.
    """
    growth = case.allowance.growth
    if far:
        k = nodes_up_to(case.spectrum, 8.0 * case.capillary_wavenumber, min(case.capillary_wavenumber, 1.0 / case.vessel.depth))
        k = k[np.unique(np.round(np.geomspace(1, len(k), _MOST_MODES_IN_FULL)).astype(np.intp)) - 1]
        band, resolved = np.full(len(k), -1), True
    else:
        k, band, resolved = _wavenumbers(case, layer, w, acceleration)
    if not len(k):
        return _Counted(0, resolved, 0, 0.0, 0.0, math.nan, False)
    count = _settled_count(layer, k, w, acceleration, growth)
    growing = count.growing > 0
    bands = growing & (band >= 0)
    starts = int(np.count_nonzero(bands[1:] & ~bands[:-1])) + int(bands[0])
    if growing.any():
        where = k[growing]
        found = growing_exponents(layer, where, w, acceleration, above=growth)
        if not np.isfinite(found.exponent).any():  # grows at neither the drive frequency nor half of it
            found = exponents(layer, where, w, acceleration)
    else:
        where = _slowest(k)
        found = exponents(layer, where, w, acceleration)
    real = np.where(np.isfinite(found.exponent.real), found.exponent.real, -np.inf)
    worst = int(np.argmax(real))
    return _Counted(
        int(np.count_nonzero(growing & (band < 0))) + starts, resolved and bool(count.proven.all()), len(k),
        float(count.distance.max()), float(real[worst]), float(where[worst]), bool(found.subharmonic[worst]),
    )  # fmt: skip


def _settled_count(layer: LayerModel, k: Real, w: float, acceleration: float, growth: float) -> Count:
    """Count, and count again with more rows where a winding number is not an integer."""
    count = count_growing(layer, k, w, acceleration, growth=growth)
    for extra in (10, 40):
        open_ = np.flatnonzero(~count.proven)
        if not len(open_):
            break
        again = count_growing(layer, k[open_], w, acceleration, growth=growth, extra_rows=extra)
        for name in ("growing", "proven", "distance"):
            getattr(count, name)[open_] = getattr(again, name)
    return count


def _slowest(k: Real) -> Real:
    """Thin out the modes for the search of the slowest decay, where they are many."""
    if len(k) <= _MOST_MODES_IN_FULL:
        return k
    chosen = np.unique(np.round(np.geomspace(1, len(k), _MOST_MODES_IN_FULL)).astype(np.intp)) - 1
    result: Real = k[chosen]
    return result


def _wavenumbers(
    case: Case, layer: LayerModel, w: float, acceleration: float
) -> tuple[Real, npt.NDArray[np.int64], bool]:
    """Return the wavenumbers that can matter; the second array is -1 for modes taken one by one, else >= 0.

    Where every wavenumber counts, nodes are set and halved until the Hill determinants change by less than a factor of
    two from node to node, and no parabola through three of them comes near zero between two, so that no band of growth
    hides there. The last value says whether that was reached, and that no larger wavenumber matters.
    """
    spectrum = case.spectrum
    discrete = spectrum.discrete
    if len(discrete):
        discrete = discrete[matters(layer, discrete, np.array(w), np.array(acceleration))]
    start = spectrum.continuous_from or 1e-3 * min(case.capillary_wavenumber, 1.0 / case.vessel.depth)
    reach = 4.0 * max(case.capillary_wavenumber, 3.0 / case.vessel.depth, start)
    while matters(layer, np.array([reach]), np.array(w), np.array(acceleration))[0] and reach < _FARTHEST:
        reach *= 1.5
    nodes = start * np.exp(np.arange(int(_NODES_PER_E_FOLD * math.log(reach / start)) + 2) / _NODES_PER_E_FOLD)
    needed = matters(layer, nodes, np.array(w), np.array(acceleration))
    bounded = reach < _FARTHEST
    if not needed.any():
        return discrete, np.full(len(discrete), -1), bounded
    last = int(np.flatnonzero(needed)[-1])
    nodes, resolved = _resolved(layer, nodes[: last + 2], w, acceleration, case.allowance.growth)
    band = np.concatenate([np.full(len(discrete), -1), np.zeros(len(nodes), dtype=np.int64)])
    return np.concatenate([discrete, nodes]), band, bounded and resolved


def _resolved(
    layer: LayerModel, nodes: Real, w: float, acceleration: float, growth: float
) -> tuple[Real, bool]:
    rows = rows_needed(acceleration / (w * w), float(nodes[-1]))

    def margins(k: Real) -> Real:
        each = np.full(len(k), w)
        push = np.full(len(k), acceleration)
        return np.stack([
            Half.of(layer, k, each, growth, rows, subharmonic=sub).margin(push) for sub in (False, True)
        ])

    values = margins(nodes)
    for _ in range(24):
        coarse = _doubtful(np.log(nodes), values) & (nodes[1:] / nodes[:-1] > 1.0 + _FINEST)
        if not coarse.any():
            return nodes, True
        if len(nodes) + np.count_nonzero(coarse) > _MOST_NODES:
            return nodes, False
        middle = np.sqrt(nodes[:-1][coarse] * nodes[1:][coarse])
        values = np.concatenate([values, margins(middle)], axis=1)
        nodes = np.concatenate([nodes, middle])
        order = np.argsort(nodes)
        nodes, values = nodes[order], values[:, order]
    return nodes, False


def _doubtful(x: Real, values: Real) -> npt.NDArray[np.bool_]:
    """Return the intervals between nodes in which a function of one sign at both ends could still reach zero."""
    left, right = np.abs(values[:, :-1]), np.abs(values[:, 1:])
    same = np.sign(values[:, :-1]) == np.sign(values[:, 1:])
    doubt = same & (np.maximum(left, right) > 2.0 * np.minimum(left, right))
    if values.shape[1] >= 3:
        step = np.diff(x)
        first = np.diff(values, axis=1) / step
        bend = np.diff(first, axis=1) / (x[2:] - x[:-2])  # of the parabola through three nodes, halved
        for side in (0, 1):  # its value at the vertex, in the interval on either side of the middle node
            start = values[:, 1:-1]
            # measured from the middle node: value + slope_m t + bend t^2
            middle_slope = first[:, :-1] + bend * step[:-1]
            with np.errstate(divide="ignore", invalid="ignore"):
                t = -0.5 * middle_slope / bend
                vertex = start - 0.25 * middle_slope**2 / bend
            inside = (t > 0.0) & (t < step[1:]) if side == 1 else (t < 0.0) & (t > -step[:-1])
            low = np.sign(start) * vertex < 0.5 * np.abs(start)
            interval = np.zeros_like(doubt)
            interval[:, side : side + inside.shape[1]] = inside & low
            doubt |= same & interval
    result: npt.NDArray[np.bool_] = doubt.any(axis=0)
    return result
