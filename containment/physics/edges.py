"""Lower and upper holding acceleration over all modes of a vessel, at many frequencies at once.

At a growth allowance sigma >= 0 a mode that falls at rest is held from its first harmonic root (lower side); any mode
breaks up into waves at its first subharmonic root or at the next harmonic one, whichever comes first (upper side).
The layer is held between the largest lower root and the smallest upper one.

Only modes that can matter are evaluated. A mode is left out where its continued fraction is shown to have no root
(Worpitzky) below an acceleration at which some other mode has already broken up; what is needed for that follows from
`Layer.smallest_coefficient` and from abs(A(s)) >= (2/rho) Z0 abs(s), both proven for all s with Re s >= 0.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.errors import NotComputableError
from containment.physics.crossings import first_crossing, refined
from containment.physics.exclusion import BoundedLayer, Floor, layer_of, matters, not_excluded
from containment.physics.hill import Half, rows_needed
from containment.physics.wavenumbers import Spectrum

__all__ = ["AMPLITUDE_BOUND", "Edges", "edge_errors", "extreme", "first_roots", "hold_edges", "likely_breaker", "matters",
           "nodes_up_to"]  # fmt: skip

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]
Flags = npt.NDArray[np.bool_]

AMPLITUDE_BOUND: Final = 0.06
"""Largest amplitude (zero to peak) that is searched, m: beyond what shaking machines have."""

_NODES_PER_E_FOLD: Final = 40
"""Density of wavenumber nodes where every wavenumber counts; extremes are refined afterwards."""

_CHUNK: Final = 6000
_SMALLEST_CHUNK: Final = 100
_LARGEST_BLOCK: Final = 150_000

_LOWER_STRIDE: Final = 4.0

_COARSE: Final = 24
"""Wavenumbers that are looked at on each of the two passes for a mode that breaks up early."""


@dataclass(frozen=True, slots=True)
class Edges:
    """Edges of the holding window; arrays of one value a frequency.

    Attributes
    ----------
    frequency : array
        Hz.
    lower, upper : array
        m/s^2; lower is 0 where nothing needs holding and infinite where nothing within the amplitude bound holds;
        upper is infinite where no wave breaks up within the amplitude bound.
    lower_wavenumber, upper_wavenumber : array
        1/m, of the mode that binds; not-a-number where there is none.
    upper_subharmonic : array of bool
        Whether the wave at the upper side answers at half the drive frequency.
    """

    frequency: Real
    lower: Real
    upper: Real
    lower_wavenumber: Real
    upper_wavenumber: Real
    upper_subharmonic: Flags


def first_roots(
    layer: BoundedLayer,
    k: Real,
    w: Real,
    growth: float,
    stop: Real,
    *,
    subharmonic: bool,
    start: Real | None = None,
    extra_rows: int = 0,
    stride: float = 1.0,
    into: Real | None = None,
    second: Real | None = None,
) -> Real:
    """Return the first root in acceleration of each case (k, w) up to `stop`, or infinity.

    Parameters
    ----------
    k, w : array, shape (cases,)
        Wavenumber, 1/m, and angular frequency, rad/s.
    growth : float
        Growth rate of the mode at the root, 1/s, >= 0.
    stop : array, shape (cases,)
        End of the search, m/s^2.
    subharmonic : bool
        Which tongue.
    start : array, optional
        Where to start; by default where the continued fraction is proven to be free of roots.
    extra_rows : int
        Rows added to the usual truncation, to show that it has converged.
    stride : float
        Factor on the step of the march where many harmonics are at work. On the lower side a pocket of hold that is
        stepped over only makes the verdict more cautious.
    into, second : array, optional
        Where the first roots go, and the next ones up to `stop`, which are sought only if `second` is given.
    """
    result = np.full(len(k), np.inf) if into is None else into
    rows = 2.0 * np.sqrt(stop * k) / w
    order = np.argsort(rows, kind="stable")
    first = 0
    while first < len(order):
        size = _CHUNK
        while True:  # fewer cases at once where many rows are needed, so that memory stays bounded
            part = order[first : first + size]
            count = rows_needed((0.5 * float(rows[part[-1]])) ** 2, 1.0) + extra_rows
            if size <= _SMALLEST_CHUNK or count * len(part) <= _LARGEST_BLOCK:
                break
            size //= 2
        first += len(part)
        half = Half.of(layer_of(layer, part), k[part], w[part], growth, count, subharmonic=subharmonic)
        begin = half.root_free_below() if start is None else start[part]
        near = np.flatnonzero(begin < stop[part])
        if len(near):
            chosen = part[near]
            result[chosen] = first_crossing(
                half.take(near) if len(near) < len(part) else half,
                begin[near],
                stop[chosen],
                turns=np.sqrt(k[chosen]) / w[chosen] / stride,
                from_root=start is not None,
            )
            if second is not None:
                again = near[np.isfinite(result[chosen])]
                after = part[again]
                second[after] = first_crossing(
                    half.take(again), result[after] * (1.0 + 1e-7), stop[after], turns=np.sqrt(k[after]) / w[after],
                    from_root=True,
                )  # fmt: skip
    return result


def hold_edges(
    layer: BoundedLayer,
    spectrum: Spectrum,
    frequency: npt.ArrayLike,
    *,
    growth: float = 0.0,
    amplitude_bound: float = AMPLITUDE_BOUND,
    capillary_wavenumber: float,
    depth: float,
) -> Edges:
    """Return the edges of the holding window at given frequencies.

    Parameters
    ----------
    layer : BoundedLayer
        The layer.
    spectrum : Spectrum
        The vessel's wavenumbers.
    frequency : array_like, shape (frequencies,)
        Hz.
    growth : float
        Allowed growth rate, 1/s, >= 0.
    amplitude_bound : float
        Largest amplitude that is searched, m.
    capillary_wavenumber, depth : float
        1/l_c (1/m) and depth (m) of the layer: where the wavenumber nodes start and how far they reach.

    Raises
    ------
    NotComputableError
        No wavenumber can be found above which waves provably do not matter.
    """
    f = np.atleast_1d(np.asarray(frequency, dtype=np.float64))
    w = 2.0 * np.pi * f
    cap = amplitude_bound * w * w
    nodes = _wavenumber_nodes(layer, spectrum, w, cap, growth, capillary_wavenumber, depth)
    k, iw, ik, ceiling = nodes.k, nodes.case_w, nodes.case_k, nodes.ceiling
    kk, ww, top = k[ik], w[iw], ceiling[iw]

    # the static sign decides which modes need holding; only they have a lower side
    floor = Floor.of(layer, k, growth)
    falls = floor.rest < 0.0
    upper, upper_wave = nodes.breaks.copy(), nodes.breaks_k.copy()
    upper_sub = np.isfinite(upper)

    def note(root: Real, at_w: npt.NDArray[np.intp], at_k: Real, subharmonic: bool) -> None:
        best, where = extreme(root, at_w, np.arange(len(root)), len(w), np.minimum)
        better = np.flatnonzero((best < upper) & (where >= 0))
        upper[better] = best[better]
        upper_wave[better] = at_k[where[better]]
        upper_sub[better] = subharmonic

    stop = np.minimum(top, upper[iw])
    sub = not_excluded(layer, floor, ik, kk, ww, stop, growth, subharmonic=True)
    note(first_roots(layer, kk[sub], ww[sub], growth, stop[sub], subharmonic=True), iw[sub], kk[sub], True)
    stop = np.minimum(top, upper[iw])
    stable = np.flatnonzero(~falls[ik])
    stable = stable[
        not_excluded(layer, floor, ik[stable], kk[stable], ww[stable], stop[stable], growth, subharmonic=False)
    ]
    note(first_roots(layer, kk[stable], ww[stable], growth, stop[stable], subharmonic=False), iw[stable], kk[stable], False)
    # modes that fall at rest: the root that holds them, and, below the ceiling, the next one, which breaks them up
    fall_k = np.flatnonzero(falls)
    lw, lk = np.repeat(np.arange(len(w)), len(fall_k)), np.tile(fall_k, len(w))
    stop = np.minimum(upper, cap)[lw]
    low = np.full(len(lk), np.inf)
    second = np.full(len(lk), np.inf)
    first_roots(layer, k[lk], w[lw], growth, stop, subharmonic=False, stride=_LOWER_STRIDE, into=low, second=second)
    rest = np.flatnonzero(np.isinf(low) & (stop < cap[lw]))
    if len(rest):  # sought up to the amplitude bound where waves break up first
        low[rest] = first_roots(
            layer, k[lk[rest]], w[lw[rest]], growth, cap[lw[rest]], subharmonic=False, stride=_LOWER_STRIDE
        )
    note(second, lw, k[lk], False)
    lower, lower_k = extreme(low, lw, lk, len(w), np.maximum)
    lower_wave = np.where(lower_k >= 0, k[lower_k], np.nan)
    if spectrum.continuous_from == 0.0 and growth == 0.0 and falls.any():
        lower[:], lower_wave[:] = np.inf, 0.0  # the acceleration needed grows without bound as k falls

    edges = Edges(f, lower, upper, lower_wave, upper_wave, upper_sub)
    if np.any(upper_wave >= spectrum.continuous_from) or np.any(lower_wave >= spectrum.continuous_from):
        edges = _refined_in_wavenumber(layer, spectrum, edges, w, cap, growth)
    edges.upper[edges.upper > cap] = np.inf
    return edges


@dataclass(frozen=True, slots=True)
class _Nodes:
    """Wavenumbers and the cases (frequency, wavenumber) that can matter below the ceiling of each frequency.

    `breaks` is the subharmonic root of one likely mode of wavenumber `breaks_k`, infinite where it has none; the
    ceiling is the smaller of it and of the amplitude bound.
    """

    k: Real
    case_w: npt.NDArray[np.intp]
    case_k: npt.NDArray[np.intp]
    ceiling: Real
    breaks: Real
    breaks_k: Real


def _wavenumber_nodes(
    layer: BoundedLayer, spectrum: Spectrum, w: Real, cap: Real, growth: float, capillary: float, depth: float
) -> _Nodes:
    """Find wavenumbers that reach past every one that matters, and an acceleration at which some mode breaks up."""
    reach = 4.0 * max(capillary, 3.0 / depth if np.isfinite(depth) else 0.0)
    breaks, breaks_k = np.full(len(w), np.inf), np.full(len(w), np.nan)
    some = np.arange(len(w))
    for _ in range(40):
        k = nodes_up_to(spectrum, reach, min(capillary, 1.0 / depth))
        if len(some):
            best, size = likely_breaker(layer, k, w[some], growth)
            stop = np.minimum(cap[some], 4.0 * size)
            root = first_roots(layer, k[best], w[some], growth, stop, subharmonic=True)
            better = root < breaks[some]
            breaks[some[better]], breaks_k[some[better]] = root[better], k[best[better]]
            some = some[best > 0.7 * len(k)]  # the others have their resonance behind them
        ceiling = np.minimum(cap, breaks)
        needed = matters(layer, k[None, :], w[:, None], ceiling[:, None])
        if not needed[:, -1].any() and (not np.isfinite(depth) or k[-1] * depth >= 3.0):
            case_w, case_k = np.nonzero(needed)
            return _Nodes(k, case_w, case_k, ceiling, breaks, breaks_k)
        reach *= 2.0
        if reach > 1e8:
            break
    raise NotComputableError(
        "no wavenumber was found above which waves provably do not matter: the surface tension or the viscosity is too "
        "small for this theory at these frequencies"
    )


def likely_breaker(
    layer: BoundedLayer, k: Real, w: Real, growth: float
) -> tuple[npt.NDArray[np.intp], Real]:
    """Return for each frequency a wavenumber near the first subharmonic resonance and the size of its A_0."""
    coarse = np.unique(np.round(np.geomspace(1, len(k), _COARSE)).astype(np.intp)) - 1
    size = np.abs(layer.coefficient(growth + 0.5j * w[:, None], k[coarse]))
    seen = np.argmin(size, axis=1)
    low, high = coarse[np.maximum(seen - 1, 0)], coarse[np.minimum(seen + 1, len(coarse) - 1)]
    fine = np.round(low[:, None] + (high - low)[:, None] * np.linspace(0.0, 1.0, _COARSE)).astype(np.intp)
    size = np.abs(layer.coefficient(growth + 0.5j * w[:, None], k[fine]))
    rows, seen = np.arange(len(w)), np.argmin(size, axis=1)
    return fine[rows, seen], size[rows, seen]


def nodes_up_to(spectrum: Spectrum, reach: float, slowest: float) -> Real:
    """Return the wavenumbers of a vessel up to a reach: its modes, and nodes where every wavenumber counts, 1/m."""
    start = spectrum.continuous_from or 1e-3 * slowest
    if reach <= start:
        k = spectrum.discrete
        return k[: max(np.searchsorted(k, reach) + 1, 12)]
    count = int(_NODES_PER_E_FOLD * np.log(reach / start)) + 2
    return np.concatenate([spectrum.discrete, start * np.exp(np.arange(count) / _NODES_PER_E_FOLD)])


def extreme(
    values: Real, at_w: npt.NDArray[np.intp], label: npt.NDArray[np.intp], count: int, pick: np.ufunc
) -> tuple[Real, npt.NDArray[np.intp]]:
    """Return the largest (or smallest) value of each frequency and the label of the case that has it, -1 for none."""
    best = np.full(count, 0.0 if pick is np.maximum else np.inf)
    pick.at(best, at_w, values)
    which = np.full(count, -1, dtype=np.intp)
    hit = values == best[at_w]
    which[at_w[hit]] = label[hit]
    return best, which


def _refined_in_wavenumber(
    layer: BoundedLayer, spectrum: Spectrum, edges: Edges, w: Real, cap: Real, growth: float
) -> Edges:
    """Zoom in on the binding wavenumber where every wavenumber counts."""
    start = spectrum.continuous_from
    step = 1.0 / _NODES_PER_E_FOLD

    def zoom(wave: Real, value: Real, roots: Callable[[Real, Real, Real], Real], sign: float) -> None:
        some = np.flatnonzero((wave >= start) & (wave > 0.0) & np.isfinite(value))
        spread = step
        while len(some) and spread > 1e-7:
            offsets = np.linspace(-spread, spread, 9)
            k = np.maximum(wave[some][:, None] * np.exp(offsets), start)
            ww = np.repeat(w[some], 9)
            stop = np.minimum(np.repeat(value[some] * 1.5, 9), np.repeat(cap[some], 9))
            found = roots(k.ravel(), ww, stop).reshape(-1, 9)
            if sign < 0.0:
                found = np.where(np.isfinite(found), found, -np.inf)
            pick = np.argmin(sign * found, axis=1)
            rows = np.arange(len(some))
            better = sign * found[rows, pick] < sign * value[some]
            value[some[better]] = found[rows, pick][better]
            wave[some[better]] = k[rows, pick][better]
            spread /= 4.0

    for subharmonic in (True, False):
        mine = edges.upper_subharmonic == subharmonic
        wave = np.where(mine, edges.upper_wavenumber, np.nan)
        value = edges.upper.copy()
        zoom(
            wave, value,
            lambda k, ww, stop, s=subharmonic: _upper_roots(layer, k, ww, growth, stop, subharmonic=s),  # type: ignore[misc]
            1.0,
        )
        edges.upper[mine] = value[mine]
        edges.upper_wavenumber[mine] = wave[mine]
    zoom(
        edges.lower_wavenumber, edges.lower,
        lambda k, ww, stop: first_roots(layer, k, ww, growth, stop, subharmonic=False),
        -1.0,
    )
    return edges


def _upper_roots(
    layer: BoundedLayer, k: Real, w: Real, growth: float, stop: Real, *, subharmonic: bool
) -> Real:
    """Return the root that breaks a mode up; for one that falls at rest, the harmonic root after the one that holds."""
    root = first_roots(layer, k, w, growth, stop, subharmonic=subharmonic)
    if subharmonic:
        return root
    falls = np.flatnonzero((layer.coefficient(growth, k).real < 0.0) & np.isfinite(root))
    if len(falls):
        root[falls] = first_roots(
            layer, k[falls], w[falls], growth, stop[falls], subharmonic=False, start=root[falls] * (1.0 + 1e-7)
        )
    return root


def edge_errors(layer: BoundedLayer, edges: Edges, *, growth: float) -> tuple[Real, Real]:
    """Return estimates of the relative errors of the lower and the upper edges; not-a-number where there is no edge.

    The binding root is found again with twice the rows, which shows the truncation, and with coefficients that are off
    by 1e-9, which shows how errors of the coefficients (below 1e-11, see the tests of the impedance) are passed on.
    """
    w = 2.0 * np.pi * edges.frequency
    both = []
    for value, wave, subharmonic in (
        (edges.lower, edges.lower_wavenumber, np.zeros(len(w), dtype=bool)),
        (edges.upper, edges.upper_wavenumber, edges.upper_subharmonic),
    ):
        error = np.full(len(w), np.nan)
        for kind in (False, True):
            some = np.flatnonzero(np.isfinite(value) & (value > 0.0) & (wave > 0.0) & (subharmonic == kind))
            if not len(some):
                continue
            k, a, ww = wave[some], value[some], w[some]
            rows = rows_needed(float(np.max(a / (ww * ww) * k)), 1.0)
            steps = np.arange(2 * rows + 1)[:, None] + (0.5 if kind else 0.0)
            exact = layer.coefficient(growth + 1j * steps * ww, k)
            off = exact * (1.0 + 1e-9 * np.exp(1j * np.arange(len(steps)))[:, None])
            near = np.array([0.999, 1.001])[:, None] * a
            doubled, disturbed = (
                refined(half.margin, near[0], near[1], precision=1e-14)
                for half in (Half.from_coefficients(c, subharmonic=kind) for c in (exact, off))
            )
            error[some] = np.abs(doubled / a - 1.0) + 1e-2 * np.abs(disturbed / doubled - 1.0) + 1e-12
        both.append(error)
    return both[0], both[1]
