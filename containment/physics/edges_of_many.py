"""Lower and upper edges of many layers at once, each of another liquid and at a frequency of its own, in one vessel.

The search is that of `containment.physics.edges`, with the same bounds and the same march; only that there one layer meets
many frequencies, and here each frequency has its own layer.
"""

import dataclasses
from collections.abc import Callable
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import NotComputableError
from containment.physics.dispersion import Layer
from containment.physics.edges import AMPLITUDE_BOUND, Edges, extreme, first_roots, hold_edges, likely_breaker, nodes_up_to
from containment.physics.exclusion import Floor, matters, not_excluded
from containment.physics.wavenumbers import Spectrum

__all__ = ["LayerStack", "edges_of_many", "lower_edges_of_many"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]
Chosen = npt.NDArray[np.intp]

_LARGEST_TABLE: Final = 8_000
"""Entries of a table (layers, wavenumbers) that is evaluated at once: what fits into the processor's cache."""
_LOWER_STRIDE: Final = 4.0
_FARTHEST: Final = 1e8


@dataclass(frozen=True, slots=True, kw_only=True)
class LayerStack:
    """Layers of different liquids in one vessel, evaluated side by side; SI.

    Parameters
    ----------
    density, viscosity, surface_tension : array, shape (layers,)
        rho, kg/m^3; mu, Pa s; gamma, N/m.
    depth, gravity : float
        As for `containment.physics.dispersion.Layer`.
    film_modulus : float, optional
        Of a film on the surface of each, N/m; infinite for one that does not stretch.
    wall_factor : callable, optional
        lambda_w of the side walls' drag by wavenumber; see `containment.physics.wall_drag`.

    Notes
    -----
    Its methods take wavenumbers of shape (layers,), one for each layer, and s that broadcasts with them.

    Examples
    --------
    >>> stack = LayerStack(density=np.array([1410.0, 1261.0]), viscosity=np.array([10.0, 1.41]),
    ...                    surface_tension=np.array([0.08, 0.0634]), depth=0.03)
    >>> one = Layer(density=1261.0, viscosity=1.41, surface_tension=0.0634, depth=0.03)
    >>> k = np.array([52.6, 52.6])
    >>> bool(abs(stack.coefficient(300j, k)[1] / one.coefficient(300j, k[1]) - 1.0) < 1e-13)
    True
    """

    density: Any
    viscosity: Real
    surface_tension: Real
    depth: float
    gravity: float = -STANDARD_GRAVITY
    film_modulus: float | None = None
    wall_factor: Callable[[Real], Real] | None = None

    def __len__(self) -> int:
        """Return the number of layers."""
        return len(self.density)

    def take(self, chosen: Chosen) -> "LayerStack":
        """Return chosen layers."""
        return dataclasses.replace(
            self, density=self.density[chosen], viscosity=self.viscosity[chosen],
            surface_tension=self.surface_tension[chosen],
        )  # fmt: skip

    def one(self, i: int) -> Any:
        """Return one of the layers by itself."""
        return self._model(float(self.density[i]), float(self.viscosity[i]), float(self.surface_tension[i]))

    def columns(self) -> Any:
        """Return a layer whose every wavenumber, an array of shape (1, wavenumbers), meets every liquid: a table."""
        return self._model(self.density[:, None], self.viscosity[:, None], self.surface_tension[:, None])

    def _model(self, density: Any, viscosity: Any, surface_tension: Any) -> Any:
        common = {
            "density": density, "viscosity": viscosity, "surface_tension": surface_tension, "depth": self.depth,
            "gravity": self.gravity,
        }  # fmt: skip
        if self.film_modulus is not None and self.film_modulus > 0.0:
            from containment.physics.film import FilmedLayer

            return FilmedLayer(**common, film_modulus=self.film_modulus)
        if self.wall_factor is not None:
            from containment.physics.wall_drag import DraggedLayer

            return DraggedLayer(layer=Layer(**common), wall_factor=self.wall_factor)
        return Layer(**common)

    def _row(self) -> Any:
        return self._model(self.density, self.viscosity, self.surface_tension)

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k), m/s^2."""
        k = np.asarray(wavenumber, np.float64)
        s = np.asarray(s, np.complex128)
        s = np.broadcast_to(s, np.broadcast_shapes(s.shape, k.shape))
        # as a table of one row: a layer splits single rows by depth, which would part the wavenumbers from their liquids
        found: Complex = self._row().coefficient(np.atleast_2d(s), k[None, :])
        return found if s.ndim == 2 else found[0]

    def stiffness(self, wavenumber: npt.ArrayLike) -> Real:
        """Return rho G0 + gamma k^2, Pa/m."""
        return self._of_row("stiffness", wavenumber)

    def static_impedance(self, wavenumber: npt.ArrayLike) -> Real:
        """Return Z(0; k), Pa s/m."""
        return self._of_row("static_impedance", wavenumber)

    def added_mass(self, wavenumber: npt.ArrayLike) -> Real:
        """Return a proven floor of Im Z / Im s, kg/m^2."""
        return self._of_row("added_mass", wavenumber)

    def smallest_coefficient(self, wavenumber: npt.ArrayLike) -> Real:
        """Return a proven lower bound of abs(A(s; k)) over Re s >= 0, m/s^2."""
        return self._of_row("smallest_coefficient", wavenumber)

    def _of_row(self, name: str, wavenumber: npt.ArrayLike) -> Real:
        k = np.asarray(wavenumber, np.float64)
        found: Real = getattr(self._row(), name)(k[None, :])[0]
        return found


def edges_of_many(
    stack: LayerStack,
    spectrum: Spectrum,
    frequency: Real,
    *,
    growth: float = 0.0,
    amplitude_bound: float = AMPLITUDE_BOUND,
    capillary_wavenumber: Real,
) -> Edges:
    """Return the edges of the window of each layer at its frequency.

    Parameters
    ----------
    stack : LayerStack
        The layers.
    spectrum : Spectrum
        The vessel's wavenumbers.
    frequency : array, shape (layers,)
        Hz.
    growth, amplitude_bound : float
        See `containment.physics.edges.hold_edges`.
    capillary_wavenumber : array, shape (layers,)
        1/l_c of each, 1/m.

    Raises
    ------
    NotComputableError
        For some layer no wavenumber can be found above which waves provably do not matter.
    """
    w = 2.0 * np.pi * frequency
    cap = amplitude_bound * w * w
    k, needed, breaks, breaks_k = _wavenumbers(stack, spectrum, w, cap, growth, capillary_wavenumber)
    iw, ik = np.nonzero(needed)
    kk, ww, top = k[ik], w[iw], np.minimum(cap, breaks)[iw]
    flat, every = stack.take(iw), np.arange(len(iw))
    floor = _floor(flat, kk, growth)
    upper, upper_wave = breaks.copy(), breaks_k.copy()
    upper_sub = np.isfinite(upper)

    def note(root: Real, at_w: Chosen, at_k: Real, subharmonic: bool) -> None:
        best, where = extreme(root, at_w, np.arange(len(root)), len(w), np.minimum)
        better = np.flatnonzero((best < upper) & (where >= 0))
        upper[better], upper_wave[better], upper_sub[better] = best[better], at_k[where[better]], subharmonic

    stop = np.minimum(top, upper[iw])
    sub = not_excluded(flat, floor, every, kk, ww, stop, growth, subharmonic=True)
    note(first_roots(flat.take(sub), kk[sub], ww[sub], growth, stop[sub], subharmonic=True), iw[sub], kk[sub], True)
    stop = np.minimum(top, upper[iw])
    stable = np.flatnonzero(floor.rest >= 0.0)
    doubt = not_excluded(
        flat.take(stable), floor, stable, kk[stable], ww[stable], stop[stable], growth, subharmonic=False
    )
    rest = stable[doubt]
    note(first_roots(flat.take(rest), kk[rest], ww[rest], growth, stop[rest], subharmonic=False), iw[rest], kk[rest], False)

    # modes that fall at rest: the root that holds them, and the next one, which breaks them up
    lw, lk = _falling(stack, k, growth)
    kl, wl = k[lk], w[lw]
    stop = np.minimum(upper, cap)[lw]
    low, second = np.full(len(lk), np.inf), np.full(len(lk), np.inf)
    low_stack = stack.take(lw)
    first_roots(low_stack, kl, wl, growth, stop, subharmonic=False, stride=_LOWER_STRIDE, into=low, second=second)
    late = np.flatnonzero(np.isinf(low) & (stop < cap[lw]))
    low[late] = first_roots(
        low_stack.take(late), kl[late], wl[late], growth, cap[lw[late]], subharmonic=False, stride=_LOWER_STRIDE
    )
    note(second, lw, kl, False)
    lower, lower_k = extreme(low, lw, lk, len(w), np.maximum)
    lower_wave = np.where(lower_k >= 0, k[lower_k], np.nan)
    upper[upper > cap] = np.inf
    edges = Edges(frequency, lower, upper, lower_wave, upper_wave, upper_sub)
    return _single_where_continuous(stack, spectrum, edges, growth, amplitude_bound, capillary_wavenumber)


def lower_edges_of_many(
    stack: LayerStack, spectrum: Spectrum, frequency: Real, *, growth: float, amplitude_bound: float, capillary_wavenumber: Real
) -> Real:
    """Return the lower edge alone of each layer at its frequency, m/s^2, as `Case.lower_edge` has it for one."""
    top = capillary_wavenumber
    start = spectrum.continuous_from
    discrete = spectrum.discrete
    pairs = [(i, discrete[discrete < top[i]]) for i in range(len(stack))]
    if start < float(top.max()):
        pairs = [
            (i, np.concatenate([k, np.geomspace(start, top[i], 100)]) if start < top[i] else k) for i, k in pairs
        ]
    iw = np.repeat(np.arange(len(stack)), [len(k) for _, k in pairs])
    kk = np.concatenate([k for _, k in pairs])
    some = stack.take(iw)
    falls = np.flatnonzero(some.coefficient(growth, kk).real < 0.0)
    w = 2.0 * np.pi * frequency[iw[falls]]
    roots = first_roots(some.take(falls), kk[falls], w, growth, amplitude_bound * w * w, subharmonic=False)
    return extreme(roots, iw[falls], falls, len(stack), np.maximum)[0]


def _wavenumbers(
    stack: LayerStack, spectrum: Spectrum, w: Real, cap: Real, growth: float, capillary: Real
) -> tuple[Real, npt.NDArray[np.bool_], Real, Real]:
    """Find wavenumbers that reach past every one that matters, which of them do, and where some mode of each breaks up."""
    depth = stack.depth
    reach = 4.0 * max(float(capillary.max()), 3.0 / depth if np.isfinite(depth) else 0.0)
    breaks, breaks_k = np.full(len(w), np.inf), np.full(len(w), np.nan)
    some = np.arange(len(w))
    while reach < _FARTHEST:
        k = nodes_up_to(spectrum, reach, min(float(capillary.min()), 1.0 / depth))
        if len(some):
            mine = stack.take(some)
            best, size = likely_breaker(_Table(mine), k, w[some], growth)  # type: ignore[arg-type]
            stop = np.minimum(cap[some], 4.0 * size)
            root = first_roots(mine, k[best], w[some], growth, stop, subharmonic=True)
            better = root < breaks[some]
            breaks[some[better]], breaks_k[some[better]] = root[better], k[best[better]]
            some = some[best > 0.7 * len(k)]
        ceiling = np.minimum(cap, breaks)
        needed = np.empty((len(w), len(k)), dtype=bool)
        for part in _parts(len(w), len(k)):
            needed[part] = matters(stack.take(part).columns(), k[None, :], w[part, None], ceiling[part, None])
        if not needed[:, -1].any() and (not np.isfinite(depth) or k[-1] * depth >= 3.0):
            return k, needed, breaks, breaks_k
        reach *= 2.0
    raise NotComputableError(
        "no wavenumber was found above which waves provably do not matter: the surface tension or the viscosity is too "
        "small for this theory at these frequencies"
    )


@dataclass(frozen=True, slots=True)
class _Table:
    """A stack whose wavenumbers come as one row for all layers, or as one row for each."""

    stack: LayerStack

    def coefficient(self, s: Complex, wavenumber: Real) -> Complex:
        found: Complex = self.stack.columns().coefficient(s, np.atleast_2d(wavenumber))
        return found


def _floor(flat: LayerStack, k: Real, growth: float) -> Floor:
    """Return the proven floors of pairs of layer and wavenumber."""
    found = [Floor.of(flat.take(part), k[part], growth) for part in _parts(len(k), 1)]
    return Floor(*(np.concatenate([getattr(f, name) for f in found]) for name in ("zeta", "mobility", "spring", "rest")))


def _parts(layers: int, wavenumbers: int) -> list[Chosen]:
    size = max(1, _LARGEST_TABLE // max(1, wavenumbers))
    return [np.arange(start, min(start + size, layers)) for start in range(0, layers, size)]


def _falling(stack: LayerStack, k: Real, growth: float) -> tuple[Chosen, Chosen]:
    """Return the pairs of layer and wavenumber that fall at rest; k rises, and none beyond 1/l_c falls."""
    with np.errstate(divide="ignore"):
        longest = np.sqrt(max(0.0, -stack.gravity) * float((stack.density / stack.surface_tension).max()))
    k = k[: int(np.searchsorted(k, longest * (1.0 + 1e-9), side="right"))]
    rows, columns = [], []
    for part in _parts(len(stack), len(k)):
        i, j = np.nonzero(stack.take(part).columns().coefficient(growth, k[None, :]).real < 0.0)
        rows.append(part[i])
        columns.append(j)
    return np.concatenate(rows), np.concatenate(columns)


def _single_where_continuous(
    stack: LayerStack, spectrum: Spectrum, edges: Edges, growth: float, amplitude_bound: float, capillary: Real
) -> Edges:
    """Find again, one by one, edges that bind where every wavenumber counts: they need zooming in on the wavenumber."""
    start = spectrum.continuous_from
    for i in np.flatnonzero((edges.upper_wavenumber >= start) | (edges.lower_wavenumber >= start) | (start == 0.0)):
        alone = hold_edges(
            stack.one(int(i)), spectrum, edges.frequency[i], growth=growth, amplitude_bound=amplitude_bound,
            capillary_wavenumber=float(capillary[i]), depth=stack.depth,
        )  # fmt: skip
        for name in ("lower", "upper", "lower_wavenumber", "upper_wavenumber", "upper_subharmonic"):
            getattr(edges, name)[i] = getattr(alone, name)[0]
    return edges
