r"""Layer whose contact line is pinned at the rim (brimful vessel): shapes at rest and holding acceleration when shaken.

The surface is made of the sliding modes, held at rest along the rim by one Lagrange multiplier for each circumferential
order and harmonic (two in a ring). The sums over the modes are taken to infinity: a sum cut after M modes is too stiff,
which is the unsafe side, and in a viscous liquid converges more slowly than 1/M until k exceeds 2 mu w / gamma.

Every order has as many lower roots as it has statically unstable pinned shapes, and the layer holds above the last of
them. It breaks up at the first root that follows, harmonic or subharmonic.

References
----------
Benjamin, T. B. & Scott, J. C. (1979), J. Fluid Mech. 92, 241-267 (pinned edge; from memory). Kumar, K. & Tuckerman, L. S.
(1994), J. Fluid Mech. 279, 49-68 (rows of the shaken layer).
"""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from typing import Final, Protocol

import numpy as np
import numpy.typing as npt

from containment.errors import InputError, NotComputableError
from containment.physics.crossings import first_crossing, refined
from containment.physics.hill import Half, rows_needed
from containment.physics.pinned_hill import PinnedHalf, harmonics_at_work, reach_factors
from containment.physics.rim_modes import FEWEST_DISCRETE, RimModes, annulus_rim, cylinder_rim

__all__ = ["PinnedEdges", "PinnedLayer", "pinned_edges", "pinned_lower_roots", "rim_modes", "static_pinned_growth"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]
Whole = npt.NDArray[np.int64]

_MOST_DISCRETE: Final = 240
_ORDERS_AT_ONCE: Final = 6
_LOWER_STEP: Final = 0.3
"""Step in log a of the march to the last lower root: the count of shapes that still fall can't be stepped over."""


class PinnedLayer(Protocol):
    """What a pinned surface needs to know of a layer; `containment.physics.dispersion.Layer` is one."""

    @property
    def density(self) -> float:
        """Return rho, kg/m^3."""
        ...

    @property
    def viscosity(self) -> float:
        """Return mu, Pa s."""
        ...

    @property
    def surface_tension(self) -> float:
        """Return gamma, N/m."""
        ...

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k), m/s^2."""
        ...

    def static_impedance(self, wavenumber: npt.ArrayLike) -> Real:
        """Return Z(0; k), Pa s/m."""
        ...


@dataclass(frozen=True, slots=True)
class PinnedEdges:
    """Holding window of a pinned layer.

    Attributes
    ----------
    frequencies : array, shape (F,)
        Hz.
    lower, upper : array, shape (F,)
        Peak acceleration, m/s^2: held for lower < a < upper. `lower` is 0 where nothing needs holding and infinite
        where no amplitude up to the bound holds; `upper` is infinite where nothing breaks up below the bound.
    lower_error, upper_error : array, shape (F,)
        Estimated bound of the numerical error, m/s^2: four times the change on refining the sums (half as many modes
        again, more nodes, more harmonics). An estimate, not a proof.
    lower_order, upper_order : array of int, shape (F,)
        Circumferential order that sets the edge; -1 where there is none.
    """

    frequencies: Real
    lower: Real
    upper: Real
    lower_error: Real
    upper_error: Real
    lower_order: Whole
    upper_order: Whole


@dataclass(frozen=True, slots=True)
class _Sums:
    """How finely the sums over the modes are taken."""

    discrete: int
    nodes: int
    reach: float


def rim_modes(kind: str, dims: Sequence[float], order: int, *, discrete: int, nodes: int, reach: float) -> RimModes:
    """Return the modes of one circumferential order.

    Parameters
    ----------
    kind : str
        "cylinder" with dims (radius,), or "annulus" with dims (inner radius, outer radius), m.
    dims : sequence of float
    order, discrete, nodes, reach
        See `containment.physics.rim_modes.cylinder_rim`.

    Raises
    ------
    InputError
        The vessel is of another kind: the sides of a box meet in corners, whose multipliers couple.
    """
    if kind == "cylinder" and len(dims) == 1:
        return cylinder_rim(radius=dims[0], order=order, discrete=discrete, nodes=nodes, reach=reach)
    if kind == "annulus" and len(dims) == 2:
        return annulus_rim(inner=dims[0], outer=dims[1], order=order, discrete=discrete, nodes=nodes, reach=reach)
    raise InputError(
        f"pinned contact line in a vessel of kind {kind!r} with {len(dims)} dimensions: only a cylinder (radius) and an "
        "annulus (inner, outer radius) can be computed"
    )


def static_pinned_growth(
    layer: PinnedLayer, kind: str, dims: Sequence[float], order: int, *, precision: float = 1e-10
) -> Real:
    """Return the growth rates of the pinned shapes of one order that fall when the layer is not shaken.

    Parameters
    ----------
    layer : PinnedLayer
        The layer.
    kind, dims
        Vessel, see `rim_modes`.
    order : int
        Circumferential order m.
    precision : float
        Relative precision of the growth rates.

    Returns
    -------
    array, shape (shapes,)
        s, 1/s, in falling order; empty when the layer at rest holds.

    Notes
    -----
    With M(s) = sum over j of b_j b_j^T / A(s; k_j), the number of shapes that grow faster than s is the number of
    negative A(s; k_j) plus the number of positive eigenvalues of M less the number of rims; s is bisected on it.

    Examples
    --------
    Water, 20 mm across, does not fall when the rim pins it, as R < 3.8317 l_c; when it slides it falls, as R > 1.8412 l_c.

    >>> from containment.physics.dispersion import Layer
    >>> water = Layer(density=998.0, viscosity=1e-3, surface_tension=0.0728, depth=0.05)
    >>> [len(static_pinned_growth(water, "cylinder", (radius,), 1)) for radius in (0.0104, 0.0105)]
    [0, 1]
    """
    _check(layer)
    rim = rim_modes(kind, dims, order, discrete=_fewest(layer, dims), nodes=24, reach=1e4 * _cut_off(layer))

    def faster(s: float) -> int:
        return int(_static_count(layer, rim, s))

    count = faster(0.0)
    rates = []
    for shape in range(count):
        low, high = 0.0, 1.0
        while faster(high) > shape:
            low, high = high, 4.0 * high
        while high - low > precision * high and high > 1e-12:
            mid = 0.5 * (low + high) if low > 0.0 else 0.25 * high
            low, high = (mid, high) if faster(mid) > shape else (low, mid)
        rates.append(0.5 * (low + high))
    return np.array(rates)


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
    [13.89, 17.7, 19.83, 20.77]
    """
    _check(layer)
    frequencies = np.array([frequency])
    sums = _sums(layer, kind, dims, frequencies)
    rim = rim_modes(kind, dims, order, discrete=sums.discrete, nodes=sums.nodes, reach=sums.reach)
    stop = amplitude_bound * (2.0 * np.pi * frequencies) ** 2
    half, start = _halves(layer, [rim], frequencies, growth, stop, subharmonic=False)
    count = int(_static_count(layer, rim, growth))
    return np.array([float(_last_above(half, start, stop, left)[0]) for left in range(count - 1, -1, -1)])


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
    (20.77, 1)
    """
    _check(layer)
    f = np.asarray(frequencies, np.float64)
    sums = _sums(layer, kind, dims, f)
    finer = _Sums(sums.discrete + sums.discrete // 2, sums.nodes + 8, 3.0 * sums.reach)
    w = 2.0 * np.pi * f
    stop = amplitude_bound * w * w
    lower, upper = np.zeros(len(f)), np.full(len(f), np.inf)
    lower_order, upper_order = np.full(len(f), -1), np.full(len(f), -1)
    upper_subharmonic = np.zeros(len(f), np.bool_)
    beyond = 1.1 * _resonance(layer, 0.5 * w)
    first = 0
    while True:
        orders = range(first, first + _ORDERS_AT_ONCE)
        rims = [rim_modes(kind, dims, m, discrete=sums.discrete, nodes=sums.nodes, reach=sums.reach) for m in orders]
        falling = np.array([_static_count(layer, rim, growth) for rim in rims])
        longest = np.array([rim.wavenumbers[0] for rim in rims])
        if first and not falling.any() and np.min(longest) > np.max(beyond):
            cap = np.minimum(upper, stop)
            if np.all(_sliding_upper(layer, longest, w, growth, cap) >= cap):
                break
        low, high, subharmonic = _block_edges(layer, rims, falling, f, growth, np.minimum(upper, stop), stop)
        higher = np.max(low, axis=0) > lower
        lower_order[higher] = first + np.argmax(low, axis=0)[higher]
        lower = np.maximum(lower, np.max(low, axis=0))
        less = np.min(high, axis=0) < upper
        which = np.argmin(high, axis=0)
        upper_order[less] = first + which[less]
        upper_subharmonic[less] = subharmonic[which, np.arange(len(f))][less]
        upper = np.minimum(upper, np.min(high, axis=0))
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
        _error(lower, better_lower),
        _error(upper, better_upper),
        lower_order,
        upper_order,
    )


def _block_edges(
    layer: PinnedLayer, rims: list[RimModes], falling: Whole, f: Real, growth: float, cap: Real, stop: Real
) -> tuple[Real, Real, npt.NDArray[np.bool_]]:
    """Return for each order and frequency the last lower root, the first upper root up to `cap`, and its kind."""
    shape = (len(rims), len(f))
    half, start = _halves(layer, rims, f, growth, stop, subharmonic=False)
    caps, stops = np.tile(cap, len(rims)), np.tile(stop, len(rims))
    low = np.zeros(half.heights.shape[0])
    chosen = np.flatnonzero(np.repeat(falling > 0, len(f)))
    if len(chosen):
        low[chosen] = _last_above(half.take(chosen), start[chosen], stops[chosen], 0)
        start[chosen] = low[chosen] * (1.0 + 1e-9)
    turns = _turns(half, caps)
    start = np.where(np.isfinite(start), start, 2.0 * caps)
    harmonic = first_crossing(half, start, caps, turns=turns)
    half, start = _halves(layer, rims, f, growth, stop, subharmonic=True)
    subharmonic = first_crossing(half, start, np.minimum(caps, harmonic), turns=turns)
    return low.reshape(shape), np.minimum(harmonic, subharmonic).reshape(shape), (subharmonic < harmonic).reshape(shape)


def _last_above(half: PinnedHalf, start: Real, stop: Real, left: int) -> Real:
    """Return the acceleration from which on at most `left` shapes are left that fall; infinity if beyond `stop`."""
    result = np.full(len(start), np.inf)
    index = np.flatnonzero(half.count(start) > left)
    result[half.count(start) <= left] = 0.0
    low = start[index]
    brackets: list[tuple[npt.NDArray[np.intp], Real, Real]] = []
    while len(index):
        high = np.minimum(low * math.exp(_LOWER_STEP), stop[index])
        passed = half.take(index).count(high) <= left
        if passed.any():
            brackets.append((index[passed], low[passed], high[passed]))
        keep = ~passed & (high < stop[index])
        index, low = index[keep], high[keep]
    if brackets:
        where = np.concatenate([b[0] for b in brackets])
        part = half.take(where)
        root = _bisected(
            lambda a: part.count(a) > left, np.concatenate([b[1] for b in brackets]), np.concatenate([b[2] for b in brackets])
        )
        result[where] = root
    return result


def _bisected(falls: Callable[[Real], npt.NDArray[np.bool_]], low: Real, high: Real) -> Real:
    """Return the point in each bracket where `falls` turns from true to false, to 1e-10."""
    low, high = low.copy(), high.copy()
    while np.max(high / low) > 1.0 + 1e-10:
        mid = np.sqrt(low * high)
        still = falls(mid)
        low, high = np.where(still, mid, low), np.where(still, high, mid)
    return np.sqrt(low * high)


def _refined_edge(
    layer: PinnedLayer,
    kind: str,
    dims: Sequence[float],
    sums: _Sums,
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


def _error(coarse: Real, fine: Real) -> Real:
    with np.errstate(invalid="ignore"):
        change = np.where(np.isfinite(coarse), 4.0 * np.abs(fine - coarse) + 1e-9 * coarse, 0.0)
    return np.where(np.isnan(fine), np.inf, change)


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
    rows = int(2.0 * np.max(harmonics_at_work(np.tile(stop, len(rims)), reach))) + 8 + spare
    half = PinnedHalf.of(layer, k, b, ws, reach, growth, rows, subharmonic=subharmonic)
    least = np.repeat([np.min(layer.static_impedance(rim.wavenumbers)) for rim in rims], count)
    d = 2.0 / layer.density * ws * least
    if subharmonic:
        return half, 0.25 * d
    q = np.repeat([_smallest_stiffness(layer, rim, growth) for rim in rims], count)
    return half, 0.5 * np.minimum(np.sqrt(q * d), d)


def _smallest_stiffness(layer: PinnedLayer, rim: RimModes, growth: float) -> float:
    """Return about half the size of the static stiffness of the pinned shape nearest to neutral, m/s^2."""
    a0 = layer.coefficient(growth, rim.wavenumbers).real
    # the shapes near neutral hardly feel modes much stiffer; leaving these out keeps the small eigenvalues accurate
    kept = a0 < 1e4 * max(abs(float(np.min(a0))), float(np.partition(a0, 3)[3]))
    basis = np.linalg.qr(rim.heights[:, kept].T, mode="complete")[0][:, len(rim.heights) :]
    values = np.linalg.eigvalsh(basis.T @ (a0[kept, None] * basis))
    return 0.5 * float(np.min(np.abs(values)))


def _static_count(layer: PinnedLayer, rim: RimModes, s: float) -> int:
    """Return the number of pinned shapes that grow faster than s when the layer is not shaken."""
    a0 = layer.coefficient(s, rim.wavenumbers).real
    matrix = (rim.heights / a0) @ rim.heights.T
    scale = 1.0 / np.sqrt(np.sum(rim.heights**2 / np.abs(a0), axis=1))
    positive = np.sum(np.linalg.eigvalsh(matrix * scale[:, None] * scale) > 0.0)
    return int(np.sum(a0 < 0.0) + positive - len(rim.heights))


def _sliding_upper(layer: PinnedLayer, k: Real, w: Real, growth: float, cap: Real) -> Real:
    """Return the first acceleration up to `cap` at which one of the sliding modes k breaks up, for each frequency."""
    ks, ws, caps = np.repeat(k, len(w)), np.tile(w, len(k)), np.tile(cap, len(k))
    rows = max(rows_needed(float(c), float(np.max(k))) for c in cap / w**2)
    result = np.full(len(ks), np.inf)
    for subharmonic in (False, True):
        half = Half.of(layer, ks, ws, growth, rows, subharmonic=subharmonic)
        start = half.root_free_below()
        result = np.minimum(result, first_crossing(half, start, caps, turns=np.sqrt(ks) / ws))
    return np.min(result.reshape(len(k), len(w)), axis=0)


def _turns(half: PinnedHalf, stop: Real) -> Real:
    return harmonics_at_work(stop, half.reach) / np.sqrt(stop)


def _resonance(layer: PinnedLayer, w: Real) -> Real:
    """Return the wavenumber of the inviscid deep wave of angular frequency w under tension alone, 1/m."""
    # gravity pulls the inverted layer down: k^2 - (k_c)^2 instead of k^2; k < k_tension + k_c bounds it
    return (layer.density * w * w / layer.surface_tension) ** (1.0 / 3.0) + _cut_off(layer)


def _cut_off(layer: PinnedLayer) -> float:
    return math.sqrt(layer.density * 9.80665 / layer.surface_tension)


def _fewest(layer: PinnedLayer, dims: Sequence[float]) -> int:
    return max(2 * FEWEST_DISCRETE, math.ceil(2.0 * _cut_off(layer) * _span(dims) / math.pi))


def _span(dims: Sequence[float]) -> float:
    return dims[0] if len(dims) == 1 else dims[-1] - dims[0]


def _sums(layer: PinnedLayer, kind: str, dims: Sequence[float], f: Real) -> _Sums:
    """Return how finely to sum: every mode up to well past the resonances that viscosity leaves sharp."""
    w = 2.0 * np.pi * float(np.max(f))
    nu = layer.viscosity / layer.density
    shortest = 1.3 * _cut_off(layer)
    for n in (0.5, 1.0, 1.5, 2.0, 2.5, 3.0):
        k = float(_resonance(layer, np.array([n * w]))[0])
        if nu * k * k < n * w:
            shortest = max(shortest, 1.3 * k)
    families = 1 if kind == "cylinder" else 2
    discrete = families * FEWEST_DISCRETE + math.ceil(shortest * _span(dims) / math.pi)
    if discrete > _MOST_DISCRETE:
        raise NotComputableError(
            f"pinned contact line at {float(np.max(f)):.4g} Hz: {discrete} modes of each order would have to be summed one "
            f"by one, at most {_MOST_DISCRETE} can be; the vessel is too wide for its waves, or the frequency too high"
        )
    reach = 10.0 * max(shortest, 6.0 * layer.viscosity * w / layer.surface_tension)
    start = discrete * math.pi / _span(dims)
    return _Sums(discrete, math.ceil(1.6 * math.log(max(reach / start, 30.0))) + 6, reach)


def _check(layer: PinnedLayer) -> None:
    if not layer.surface_tension > 0.0:
        raise InputError(
            f"surface tension {layer.surface_tension} N/m with a pinned contact line: must be positive, "
            "a rim holds the surface by tension alone"
        )
