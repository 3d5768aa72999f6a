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
from containment.physics.completeness import INTEGER_TOLERANCE, count_growing
from containment.physics.edges import Edges, edge_errors, matters
from containment.physics.floquet import exponents, growing_exponents
from containment.physics.hill import Half, rows_needed
from containment.physics.layers import LayerModel

__all__ = ["OperatingPoint", "judged_point"]

Real = npt.NDArray[np.float64]

_NODES_PER_E_FOLD: Final = 40
_MOST_MODES_IN_FULL: Final = 160
_FINEST: Final = 1e-6


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
    parts = [_counted(case, case.layer, w, acceleration * gain) for gain in dict.fromkeys((low, high))]
    if case.surroundings.cushion is not None:
        parts.append(_counted(case, case.layer_with(gravity=STANDARD_GRAVITY), w, acceleration * high))
    worst = max(parts, key=lambda part: part.growth_rate)
    return OperatingPoint(
        frequency=frequency, acceleration=acceleration, edges=edges, strict=strict, growth_rate=worst.growth_rate,
        worst_wavenumber=worst.wavenumber, worst_subharmonic=worst.subharmonic,
        growing_modes=max(part.growing for part in parts), proven=all(part.proven for part in parts),
        modes_checked=sum(part.checked for part in parts),
        farthest_from_integer=max(part.distance for part in parts), lower_error=errors[0], upper_error=errors[1],
    )  # fmt: skip


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
        k, _ = _wavenumbers(case, case.layer, w, level * case.waveform.total)
        counted = len(k)
        counts = [growing_count(case.layer, float(mode), w, level, coupling, growth=growth) for mode in k]
        distance = max((d for _, d in counts), default=0.0)
        proven = distance <= INTEGER_TOLERANCE
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


def _counted(case: Case, layer: LayerModel, w: float, acceleration: float) -> _Counted:
    """Count the growing modes of a layer that moves with a peak acceleration, and find the fastest."""
    growth = case.allowance.growth
    k, band = _wavenumbers(case, layer, w, acceleration)
    if not len(k):
        return _Counted(0, True, 0, 0.0, 0.0, math.nan, False)
    count = count_growing(layer, k, w, acceleration, growth=growth)
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
        int(np.count_nonzero(growing & (band < 0))) + starts, bool(count.proven.all()), len(k),
        float(count.distance.max()), float(real[worst]), float(where[worst]), bool(found.subharmonic[worst]),
    )  # fmt: skip


def _slowest(k: Real) -> Real:
    """Thin out the modes for the search of the slowest decay, where they are many."""
    if len(k) <= _MOST_MODES_IN_FULL:
        return k
    chosen = np.unique(np.round(np.geomspace(1, len(k), _MOST_MODES_IN_FULL)).astype(np.intp)) - 1
    result: Real = k[chosen]
    return result


def _wavenumbers(
    case: Case, layer: LayerModel, w: float, acceleration: float
) -> tuple[Real, npt.NDArray[np.int64]]:
    """Return the wavenumbers that can matter; the second array is -1 for modes taken one by one, else >= 0.

    Where every wavenumber counts, nodes are set and halved until the Hill determinants change by less than a factor of
    two from node to node, so that no band of growth hides between two of them.
    """
    spectrum = case.spectrum
    discrete = spectrum.discrete
    if len(discrete):
        discrete = discrete[matters(layer, discrete, np.array(w), np.array(acceleration))]
    start = spectrum.continuous_from or 1e-3 * min(case.capillary_wavenumber, 1.0 / case.vessel.depth)
    reach = 4.0 * max(case.capillary_wavenumber, 3.0 / case.vessel.depth, start)
    while matters(layer, np.array([reach]), np.array(w), np.array(acceleration))[0] and reach < 1e8:
        reach *= 1.5
    nodes = start * np.exp(np.arange(int(_NODES_PER_E_FOLD * math.log(reach / start)) + 2) / _NODES_PER_E_FOLD)
    needed = matters(layer, nodes, np.array(w), np.array(acceleration))
    if not needed.any():
        return discrete, np.full(len(discrete), -1)
    last = int(np.flatnonzero(needed)[-1])
    nodes = _resolved(layer, nodes[: last + 2], w, acceleration, case.allowance.growth)
    return np.concatenate([discrete, nodes]), np.concatenate([np.full(len(discrete), -1), np.zeros(len(nodes), int)])


def _resolved(layer: LayerModel, nodes: Real, w: float, acceleration: float, growth: float) -> Real:
    rows = rows_needed(acceleration / (w * w), float(nodes[-1]))

    def margins(k: Real) -> Real:
        each = np.full(len(k), w)
        push = np.full(len(k), acceleration)
        return np.stack([
            Half.of(layer, k, each, growth, rows, subharmonic=sub).margin(push) for sub in (False, True)
        ])

    values = margins(nodes)
    for _ in range(16):
        left, right = np.abs(values[:, :-1]), np.abs(values[:, 1:])
        same = np.sign(values[:, :-1]) == np.sign(values[:, 1:])
        steep = np.any(same & (np.maximum(left, right) > 2.0 * np.minimum(left, right)), axis=0)
        steep &= nodes[1:] / nodes[:-1] > 1.0 + _FINEST
        if not steep.any() or len(nodes) > 4000:
            break
        middle = np.sqrt(nodes[:-1][steep] * nodes[1:][steep])
        values = np.concatenate([values, margins(middle)], axis=1)
        nodes = np.concatenate([nodes, middle])
        order = np.argsort(nodes)
        nodes, values = nodes[order], values[:, order]
    return nodes
