r"""Layer whose contact line is pinned at the rim (brimful vessel): shapes at rest and holding acceleration when shaken.

The surface is made of the sliding modes, held at rest along the rim by one Lagrange multiplier for each circumferential
order and harmonic (two in a ring). The sums over the modes are taken to infinity: a sum cut after M modes is too stiff,
which is the unsafe side, and in a viscous liquid converges more slowly than 1/M until k exceeds 2 mu w / gamma.

Every order has as many lower roots as it has statically unstable pinned shapes, and the layer holds above the last of
them. It breaks up at the first root that follows, harmonic or subharmonic.

References
----------
Kumar, K. & Tuckerman, L. S. (1994), J. Fluid Mech. 279, 49-68 (rows of the shaken layer).
"""

import math
from collections.abc import Sequence
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.physics.crossings import first_crossing, refined
from containment.physics.hill import Half, rows_needed
from containment.physics.pinned_box_edges import box_edges
from containment.physics.pinned_hill import PinnedHalf, harmonics_at_work, reach_factors
from containment.physics.pinned_search import PinnedEdges, bisected, edge_error, last_above, last_lower_root
from containment.physics.pinned_static import (
    PinnedLayer,
    Sums,
    check_pinned,
    rim_modes,
    sharp_resonance,
    smallest_stiffness,
    static_pinned_count,
    sums_for,
)
from containment.physics.rim_modes import RimModes

__all__ = ["PinnedEdges", "pinned_edges", "pinned_lower_roots"]

Real = npt.NDArray[np.float64]
Whole = npt.NDArray[np.int64]

_ORDERS_AT_ONCE: Final = 6


def pinned_lower_roots(
    layer: PinnedLayer,
    kind: str,
    dims: Sequence[float],
    order: int,
    *,
    frequency: float,
    growth: float = 0.0,
    amplitude_bound: float = 0.06,
) -> Real:
    """Return all lower roots of one order at one frequency, peak acceleration in m/s^2, in rising order.

    Parameters
    ----------
    layer, kind, dims, order
        As for `static_pinned_growth`.
    frequency : float
        Hz.
    growth : float
        Allowed growth rate, 1/s.
    amplitude_bound : float
        Largest amplitude (zero-to-peak) to search, m; roots above it come out infinite.

    Examples
    --------
    >>> from containment.physics.dispersion import Layer
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> roots = pinned_lower_roots(layer, "cylinder", (0.035,), 1, frequency=50.0)
    >>> [round(float(a) / 9.80665, 2) for a in roots]
    [13.89, 17.7, 19.83, 20.75]
    """
    check_pinned(layer, kind, dims)
    frequencies = np.array([frequency])
    sums = sums_for(layer, kind, dims, frequencies)
    rim = rim_modes(kind, dims, order, discrete=sums.discrete, nodes=sums.nodes, reach=sums.reach)
    stop = amplitude_bound * (2.0 * np.pi * frequencies) ** 2
    half, start = _halves(layer, [rim], frequencies, growth, stop, subharmonic=False)
    count = int(static_pinned_count(layer, rim, growth))
    roots = []
    for left in range(count - 1, -1, -1):
        low, high = last_above(half, start, stop, left)
        roots.append(float(bisected(half, low, high, left)[0]) if np.isfinite(high[0]) else math.inf)
    return np.array(roots)


def pinned_edges(
    layer: PinnedLayer,
    kind: str,
    dims: Sequence[float],
    frequencies: npt.ArrayLike,
    *,
    growth: float = 0.0,
    amplitude_bound: float = 0.06,
) -> PinnedEdges:
    """Return the lower and upper holding acceleration of a pinned layer over all its shapes.

    Parameters
    ----------
    layer : PinnedLayer
        The layer; its surface tension must be positive, since a rim can pull at the liquid by nothing else.
    kind, dims
        Vessel, see `rim_modes`.
    frequencies : array, shape (F,)
        Hz.
    growth : float
        Allowed growth rate, 1/s.
    amplitude_bound : float
        Largest amplitude (zero-to-peak) to search, m.

    Returns
    -------
    PinnedEdges

    Raises
    ------
    InputError
        No surface tension, or a vessel that can't be computed.
    NotComputableError
        The waves at these frequencies are too short against the vessel for the sums over its modes.

    Notes
    -----
    Orders are taken from 0 upwards. The last block of orders must lie beyond the subharmonic resonance and its longest
    sliding modes must hold above the edge found so far: higher orders consist of shorter waves still.

    Examples
    --------
    >>> from containment.physics.dispersion import Layer
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> edges = pinned_edges(layer, "cylinder", (0.035,), [50.0])
    >>> round(float(edges.lower[0]) / 9.80665, 2), int(edges.lower_order[0])
    (20.75, 1)
    """
    check_pinned(layer, kind, dims)
    f = np.asarray(frequencies, np.float64)
    if kind == "box":
        return box_edges(layer, dims, f, growth=growth, amplitude_bound=amplitude_bound)
    sums = sums_for(layer, kind, dims, f)
    finer = Sums(sums.discrete + sums.discrete // 2, sums.nodes + 8, 3.0 * sums.reach)
    w = 2.0 * np.pi * f
    stop = amplitude_bound * w * w
    lower, upper = np.zeros(len(f)), np.full(len(f), np.inf)
    lower_order, upper_order = np.full(len(f), -1), np.full(len(f), -1)
    upper_subharmonic = np.zeros(len(f), np.bool_)
    beyond = sharp_resonance(layer, 0.5 * w)
    first = 0
    active = np.arange(len(f))
    while len(active):
        orders = range(first, first + _ORDERS_AT_ONCE)
        rims = [rim_modes(kind, dims, m, discrete=sums.discrete, nodes=sums.nodes, reach=sums.reach) for m in orders]
        falling = np.array([static_pinned_count(layer, rim, growth) for rim in rims])
        if first and not falling.any():
            longest = np.array([rim.wavenumbers[0] for rim in rims])
            cap = np.minimum(upper, stop)[active]
            holds = _sliding_upper(layer, longest, w[active], growth, cap) >= cap
            active = active[~(holds & (np.min(longest) > beyond[active]))]
            if not len(active):
                break
        cap = np.minimum(upper, stop)[active]
        low, high, subharmonic = _block_edges(layer, rims, falling, f[active], growth, cap, stop[active])
        here, across = np.arange(len(active)), np.max(low, axis=0)
        higher = across > lower[active]
        lower_order[active[higher]] = first + np.argmax(low, axis=0)[higher]
        lower[active] = np.maximum(lower[active], across)
        which = np.argmin(high, axis=0)
        less = high[which, here] < upper[active]
        upper_order[active[less]] = first + which[less]
        upper_subharmonic[active[less]] = subharmonic[which, here][less]
        upper[active] = np.minimum(upper[active], high[which, here])
        first += _ORDERS_AT_ONCE

    def again(edge: Real, order: Whole, chosen: npt.NDArray[np.bool_], subharmonic: bool) -> Real:
        return _refined_edge(layer, kind, dims, finer, f, growth, edge, order, chosen, subharmonic=subharmonic)

    better_lower = again(lower, lower_order, np.ones(len(f), np.bool_), False)
    better_upper = again(upper, upper_order, upper_subharmonic, True)
    better_upper = again(better_upper, upper_order, ~upper_subharmonic, False)
    return PinnedEdges(
        f,
        np.where(np.isnan(better_lower), lower, better_lower),
        np.where(np.isnan(better_upper), upper, better_upper),
        edge_error(lower, better_lower),
        edge_error(upper, better_upper),
        lower_order,
        upper_order,
        upper_subharmonic,
    )


def _block_edges(
    layer: PinnedLayer, rims: list[RimModes], falling: Whole, f: Real, growth: float, cap: Real, stop: Real
) -> tuple[Real, Real, npt.NDArray[np.bool_]]:
    """Return for each order and frequency the last lower root, the first upper root up to `cap`, and its kind."""
    shape = (len(rims), len(f))
    half, start = _halves(layer, rims, f, growth, stop, subharmonic=False)
    caps, stops = np.tile(cap, len(rims)), np.tile(stop, len(rims))
    low = np.zeros(len(half))
    chosen = np.flatnonzero(np.repeat(falling > 0, len(f)))
    if len(chosen):
        low[chosen] = last_lower_root(half.take(chosen), start[chosen], stops[chosen])
        start[chosen] = low[chosen] * (1.0 + 1e-8)
    sub, sub_start = _halves(layer, rims, f, growth, stop, subharmonic=True)
    subharmonic = first_crossing(sub, sub_start, caps, turns=_turns(sub, caps))
    # only the least root of all orders counts, so the harmonic search may end there
    caps = np.minimum(caps, np.tile(np.min(subharmonic.reshape(shape), axis=0), len(rims)))
    start = np.where(np.isfinite(start), start, 2.0 * caps)
    harmonic = first_crossing(half, start, caps, turns=_turns(half, caps))
    return low.reshape(shape), np.minimum(harmonic, subharmonic).reshape(shape), (subharmonic < harmonic).reshape(shape)


def _refined_edge(
    layer: PinnedLayer,
    kind: str,
    dims: Sequence[float],
    sums: Sums,
    f: Real,
    growth: float,
    edge: Real,
    order: Whole,
    chosen: npt.NDArray[np.bool_],
    *,
    subharmonic: bool,
) -> Real:
    """Return the edges again with finer sums; not a number where the root is not within 1 % any more."""
    result = edge.copy()
    index = np.flatnonzero(chosen & (order >= 0) & np.isfinite(edge) & (edge > 0.0))
    for m in np.unique(order[index]):
        here = index[order[index] == m]
        rim = rim_modes(kind, dims, int(m), discrete=sums.discrete, nodes=sums.nodes, reach=sums.reach)
        half, _ = _halves(layer, [rim], f[here], growth, 1.5 * edge[here], subharmonic=subharmonic, spare=6)
        low, high = edge[here] * (1.0 - 1e-4), edge[here] * (1.0 + 1e-4)
        for width in (1e-3, 1e-2):
            bad = (half.margin(low) > 0.0) == (half.margin(high) > 0.0)
            low, high = np.where(bad, edge[here] * (1.0 - width), low), np.where(bad, edge[here] * (1.0 + width), high)
        bad = (half.margin(low) > 0.0) == (half.margin(high) > 0.0)
        root = refined(half.margin, low, high, precision=1e-10)
        result[here] = np.where(bad, np.nan, root)
    return result


def _halves(
    layer: PinnedLayer,
    rims: list[RimModes],
    f: Real,
    growth: float,
    stop: Real,
    *,
    subharmonic: bool,
    spare: int = 0,
) -> tuple[PinnedHalf, Real]:
    """Return the Hill systems of all orders and frequencies (frequencies vary fastest), and where no root lies below.

    On surfaces that keep the rim at rest the blocks n >= 1 are at least d = (2/rho) w min Z0 away from singular, since
    Im(s Z) >= Im(s) Z0 for every mode; the block n = 0 at least q, the smallest static stiffness in size. A block
    tridiagonal system with couplings a is regular while a^2 < q d / 4 and a < d / 2.
    """
    w = 2.0 * np.pi * f
    count = len(f)
    k = np.repeat(np.stack([rim.wavenumbers for rim in rims]), count, axis=0)
    b = np.repeat(np.stack([rim.heights for rim in rims]), count, axis=0)
    ws = np.tile(w, len(rims))
    reach = reach_factors(layer.density, layer.viscosity, layer.surface_tension, ws)
    half = PinnedHalf.of(layer, k, b, ws, reach, growth, np.tile(stop, len(rims)), subharmonic=subharmonic, extra=spare)
    least = np.repeat([np.min(layer.static_impedance(rim.wavenumbers)) for rim in rims], count)
    d = 2.0 / layer.density * ws * least
    if subharmonic:
        return half, 0.25 * d
    q = np.repeat([smallest_stiffness(layer, rim, growth) for rim in rims], count)
    return half, 0.5 * np.minimum(np.sqrt(q * d), d)


def _sliding_upper(layer: PinnedLayer, k: Real, w: Real, growth: float, cap: Real) -> Real:
    """Return the first acceleration up to `cap` at which one of the sliding modes k breaks up, for each frequency."""
    ks, ws, caps = np.repeat(k, len(w)), np.tile(w, len(k)), np.tile(cap, len(k))
    rows = max(rows_needed(float(c), float(np.max(k))) for c in cap / w**2)
    result = np.full(len(ks), np.inf)
    for subharmonic in (False, True):
        half = Half.of(layer, ks, ws, growth, rows, subharmonic=subharmonic)
        start = half.root_free_below()
        result = np.minimum(result, first_crossing(half, start, caps, turns=np.sqrt(ks) / ws))
    least: Real = np.min(result.reshape(len(k), len(w)), axis=0)
    return least


def _turns(half: PinnedHalf, stop: Real) -> Real:
    result: Real = harmonics_at_work(stop, half.reach) / np.sqrt(stop)
    return result
