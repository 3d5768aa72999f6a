"""Holding window of a rectangular layer that is pinned along all four sides."""

from collections.abc import Sequence

import numpy as np
import numpy.typing as npt

from containment.physics.crossings import first_crossing, refined
from containment.physics.pinned_box import BoxHalf, BoxLines, box_lines, box_rim
from containment.physics.pinned_hill import harmonics_at_work, reach_factors
from containment.physics.pinned_search import PinnedEdges, edge_error, last_lower_root
from containment.physics.pinned_static import (
    PinnedLayer,
    Sums,
    smallest_stiffness,
    static_pinned_count,
    sums_for,
)

__all__ = ["box_edges"]

Real = npt.NDArray[np.float64]


def box_edges(
    layer: PinnedLayer, dims: Sequence[float], frequencies: Real, *, growth: float, amplitude_bound: float
) -> PinnedEdges:
    """Return the edges over the four pairs of parities; see `containment.physics.pinned.pinned_edges`.

    Notes
    -----
    The orders that set the edges are the parities: 0 even in x and y, 1 odd in x, 2 odd in y, 3 odd in both. A few
    seconds a frequency: each evaluation of a determinant takes some 15 ms.
    """
    f = frequencies
    sums = sums_for(layer, "box", dims, f)
    finer = Sums(sums.discrete + sums.discrete // 4, sums.nodes + 6, 3.0 * sums.reach)
    w = 2.0 * np.pi * f
    stop = amplitude_bound * w * w
    lower, upper = np.zeros(len(f)), np.full(len(f), np.inf)
    lower_order, upper_order = np.full(len(f), -1), np.full(len(f), -1)
    subharmonic = np.zeros(len(f), np.bool_)
    parities = [0, 1, 3] if dims[0] == dims[1] else [0, 1, 2, 3]
    for parity in parities:
        lines = _lines(dims, parity, sums)
        rim = box_rim(lines, parity)
        half = _half(layer, lines, w, growth, stop, subharmonic=False)
        d = 2.0 / layer.density * w * float(np.min(layer.static_impedance(rim.wavenumbers)))
        start = 0.5 * np.minimum(np.sqrt(smallest_stiffness(layer, rim, growth) * d), d)
        if static_pinned_count(layer, rim, growth):
            low = last_lower_root(half, start, stop)
            start = np.where(np.isfinite(low), low * (1.0 + 1e-8), 2.0 * stop)
            higher = low > lower
            lower[higher], lower_order[higher] = low[higher], parity
        for kind in (True, False):
            cap = np.minimum(upper, stop)
            cases = _half(layer, lines, w, growth, stop, subharmonic=True) if kind else half
            turns = harmonics_at_work(cap, cases.reach) / np.sqrt(cap)
            root = first_crossing(cases, 0.25 * d if kind else start, cap, turns=turns)
            less = root < upper
            upper[less], upper_order[less], subharmonic[less] = root[less], parity, kind
    better = []
    for edge, order, kinds in (
        (lower, lower_order, np.zeros(len(f), np.bool_)),
        (upper, upper_order, subharmonic),
    ):
        again = edge.copy()
        for i in np.flatnonzero((order >= 0) & np.isfinite(edge)):
            lines = _lines(dims, int(order[i]), finer)
            here = np.array([i])
            case = _half(layer, lines, w[here], growth, 1.2 * edge[here], subharmonic=bool(kinds[i]), extra=3)
            again[i] = _nearby(case, float(edge[i]))
        better.append(again)
    values = [np.where(np.isnan(fine), edge, fine) for edge, fine in zip((lower, upper), better, strict=True)]
    return PinnedEdges(
        f,
        values[0],
        values[1],
        edge_error(lower, better[0]),
        edge_error(upper, better[1]),
        lower_order,
        upper_order,
        subharmonic,
    )


def _nearby(case: BoxHalf, edge: float) -> float:
    """Return the root near an edge found with coarser sums; not a number if there is none within 1 %."""
    for width in (1e-5, 1e-3, 1e-2):
        low, high = np.array([edge * (1.0 - width)]), np.array([edge * (1.0 + width)])
        if (case.margin(low)[0] > 0.0) != (case.margin(high)[0] > 0.0):
            return float(refined(case.margin, low, high, precision=1e-10)[0])
    return float("nan")


def _lines(dims: Sequence[float], parity: int, sums: Sums) -> BoxLines:
    return box_lines(
        dims=dims, parity=parity, discrete=(sums.discrete, sums.discrete), nodes=sums.nodes, reach=sums.reach
    )


def _half(
    layer: PinnedLayer,
    lines: BoxLines,
    w: Real,
    growth: float,
    stop: Real,
    *,
    subharmonic: bool,
    extra: int = 0,
) -> BoxHalf:
    reach = reach_factors(layer.density, layer.viscosity, layer.surface_tension, w)
    return BoxHalf.of(layer, lines, w, reach, growth, stop, subharmonic=subharmonic, extra=extra)
