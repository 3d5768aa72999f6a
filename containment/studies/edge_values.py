"""Edges of the window at many drive points, and beside them those that `assess` looks at when it doubts.

That is: with the drag of the walls, under a skin, at the corners of the stated uncertainty, and of the modes that tilt.
"""

import dataclasses
import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.errors import ContainmentError
from containment.given.liquid import Liquid
from containment.judgement.case import Case
from containment.judgement.companions import dragged_layer, tilt_modes
from containment.physics.edges import Edges, first_roots
from containment.physics.edges_of_many import LayerStack, edges_of_many, lower_edges_of_many
from containment.physics.layers import LayerModel
from containment.physics.wall_drag import DraggedLayer

__all__ = ["EdgeValues", "edges_in_parts", "edges_of_case"]

Real = npt.NDArray[np.float64]
Flags = npt.NDArray[np.bool_]

_FEW_FREQUENCIES: Final = 8
"""Frequencies a layer up to which many layers go side by side rather than one after the other with all its frequencies."""


@dataclass(frozen=True, slots=True)
class EdgeValues:
    """Edges at points; arrays of one value a point, m/s^2.

    Attributes
    ----------
    lower, upper : array
        See `Edges`.
    dragged : array
        Lower edge with the drag of the side walls; not-a-number where it is not modelled.
    covered_lower, covered_upper : array
        If a skin covers the surface; not-a-number where somebody has said what covers it.
    corners : sequence of (lower, upper)
        At the corners of the stated uncertainty of the properties.
    tilt : tuple or None
        Of a vessel that is tilted: angle (rad), depth (m), heights (m) and falling stiffness over density (m/s^2) of its
        modes, lower edges of these modes (points, modes), and where no mean position exists.
    """

    lower: Real
    upper: Real
    dragged: Real
    covered_lower: Real
    covered_upper: Real
    corners: Sequence[tuple[Real, Real]] = ()
    tilt: "TiltedModes | None" = None

    def take(self, at: npt.NDArray[np.intp]) -> "EdgeValues":
        """Return the values at chosen points."""
        return EdgeValues(
            self.lower[at], self.upper[at], self.dragged[at], self.covered_lower[at], self.covered_upper[at],
            [(low[at], high[at]) for low, high in self.corners],
            None if self.tilt is None else dataclasses.replace(self.tilt, lower=self.tilt.lower[at]),
        )  # fmt: skip

    def spans(self, acceleration: Real) -> Flags:
        """Return which points leave the window at some corner of the uncertainty, of those that are between the edges."""
        found = np.zeros(len(acceleration), dtype=bool)
        for low, high in self.corners:
            found |= ~((low < acceleration) & (acceleration < high))
        return found

    def tilted_too_far(self, acceleration: Real) -> Flags:
        """Return which points the tilt of the vessel brings to a tenth of the depth or more."""
        if self.tilt is None:
            return np.zeros(len(acceleration), dtype=bool)
        return self.tilt.too_far(acceleration) & (self.lower > 0.0)


@dataclass(frozen=True, slots=True)
class TiltedModes:
    """Modes that a tilt moves: see `containment.physics.tilt`."""

    angle: float
    depth: float
    case: Case
    wavenumber: Real
    height: Real
    lower: Real

    def too_far(self, acceleration: Real) -> Flags:
        """Return where the mean surface moves a tenth of the depth; where a mode falls slowly there is no mean surface."""
        from containment.physics import tilt

        liquid = self.case.liquid
        stiffness = tilt.mean_stiffness(
            self.wavenumber, acceleration[:, None], self.lower, density=liquid.density, surface_tension=liquid.surface_tension
        )
        bound = tilt.largest_tilt(self.height, stiffness, freeboard=0.1 * self.depth)
        unknown = np.any((self.case.layer.stiffness(self.wavenumber) < 0.0) & (self.lower == 0.0), axis=1)
        result: Flags = ~unknown & ~(self.angle < bound)
        return result


def edges_of_case(case: Case, frequency: Real, acceleration: Real) -> EdgeValues:
    """Return the edges of one layer at points of given frequencies and accelerations, each frequency solved once.

    What lies beside the edges is found only where some point is between them: elsewhere it changes nothing.

    Raises
    ------
    NotComputableError
        See `containment.physics.edges.hold_edges`.
    """
    f, at = np.unique(frequency, return_inverse=True)
    edges = case.edges(f)
    some = _between(edges, at, acceleration)
    fs = f[some]
    beside = _Beside(len(f), some)
    drag_layer = dragged_layer(case)
    dragged = beside.of(lambda: _lower_edges(case, fs, drag_layer) if drag_layer else None)
    covered = beside.pair(lambda: case.edges(fs, layer=case.layer_with(surface="covered")) if asks_for_skin(case) else None)
    corners = [beside.pair(corner.edges, fs) for corner in corner_cases(case)]
    tilt = None
    if case.surroundings.tilt:
        waves, heights = tilt_modes(case)
        if len(waves):
            lowers = np.stack([case.lower_roots(float(x), waves) for x in f])
            tilt = TiltedModes(case.surroundings.tilt, case.vessel.depth, case, waves, heights, lowers)
    return EdgeValues(edges.lower, edges.upper, dragged, *covered, corners, tilt).take(at)


def _between(edges: Edges, at: npt.NDArray[np.intp], acceleration: Real) -> npt.NDArray[np.intp]:
    """Return the frequencies at which some point lies between the edges."""
    inside = (edges.lower[at] < acceleration) & (acceleration < edges.upper[at])
    return np.unique(at[inside])


@dataclass(frozen=True, slots=True)
class _Beside:
    """Values that are found for some of many entries; not-a-number for the others, and where there is nothing to find."""

    count: int
    some: npt.NDArray[np.intp]

    def of(self, find: Callable[[], Real | None]) -> Real:
        whole = np.full(self.count, np.nan)
        if len(self.some) and (found := find()) is not None:
            whole[self.some] = found
        return whole

    def pair(self, find: Callable[..., Edges | None], *arguments: Any) -> tuple[Real, Real]:
        found = find(*arguments) if len(self.some) else None
        return (
            self.of(lambda: None if found is None else found.lower), self.of(lambda: None if found is None else found.upper)
        )  # fmt: skip


def edges_in_parts(
    cases: Sequence[Case], which: npt.NDArray[np.intp], frequency: Real, acceleration: Real
) -> Iterator[tuple[npt.NDArray[np.intp], "EdgeValues | Exception"]]:
    """Yield the points of layers, in parts, with their edges or with what kept these from being computed.

    Parameters
    ----------
    cases : sequence of Case
        Layers that share vessel, surroundings and allowance.
    which : array of int, shape (points,)
        The layer of each point.
    frequency, acceleration : array, shape (points,)
        Hz and peak m/s^2.
    """
    for group in _side_by_side(cases, which, frequency):
        mine = np.flatnonzero(np.isin(which, group))
        if len(group) > 1:
            try:
                yield mine, edges_of_cases(cases, which[mine], frequency[mine], acceleration[mine])
                continue
            except (ContainmentError, ArithmeticError, ValueError):
                pass  # one layer spoils the others: each for itself
        for i in group:
            mine = np.flatnonzero(which == i)
            try:
                yield mine, edges_of_case(cases[i], frequency[mine], acceleration[mine])
            except (ContainmentError, ArithmeticError, ValueError):  # one frequency spoils the others: each for itself
                for f in np.unique(frequency[mine]):
                    at = mine[frequency[mine] == f]
                    try:
                        yield at, edges_of_case(cases[i], frequency[at], acceleration[at])
                    except (ContainmentError, ArithmeticError, ValueError) as error:
                        yield at, error


def _side_by_side(cases: Sequence[Case], which: npt.NDArray[np.intp], frequency: Real) -> list[list[int]]:
    """Return which layers go through the physics side by side: those that meet few frequencies each."""
    used = [int(i) for i in np.unique(which)]
    around = cases[0].surroundings
    alone = [[i] for i in used]
    if around.below is not None or around.tilt:
        return alone
    pairs = len(np.unique(np.stack([which, frequency]), axis=1).T)
    if pairs > _FEW_FREQUENCIES * len(used):
        return alone
    groups: dict[int, list[int]] = {}
    for i in used:
        groups.setdefault(len(corner_cases(cases[i])), []).append(i)
    return list(groups.values())


def edges_of_cases(
    cases: Sequence[Case], which: npt.NDArray[np.intp], frequency: Real, acceleration: Real
) -> EdgeValues:
    """Return the edges of many layers that differ in their liquid, at points of given layer; see `edges_of_case`.

    Raises
    ------
    NotComputableError
        See `containment.physics.edges_of_many.edges_of_many`.
    """
    pairs, at = np.unique(np.stack([which.astype(np.float64), frequency]), axis=1, return_inverse=True)
    at = np.ravel(at)
    mine, f = [cases[int(i)] for i in pairs[0]], pairs[1]
    first = mine[0]
    around = first.surroundings
    common: dict[str, Any] = {"growth": first.allowance.growth, "amplitude_bound": first.amplitude_bound}

    def found(layers: Sequence[Case], at_f: Real, film: float | None) -> Edges:
        waves = np.array([case.capillary_wavenumber for case in layers])
        return edges_of_many(_stack(layers, film), first.spectrum, at_f, capillary_wavenumber=waves, **common)

    film = math.inf if around.surface == "covered" else None if around.surface == "clean" else around.film_modulus
    edges = found(mine, f, film)
    some = _between(edges, at, acceleration)
    few, fs = [mine[i] for i in some], f[some]
    beside = _Beside(len(f), some)
    drag_layer = dragged_layer(first)

    def drag() -> Real | None:
        if not isinstance(drag_layer, DraggedLayer):
            return None
        waves = np.array([case.capillary_wavenumber for case in few])
        stack = _stack(few, None, drag_layer.wall_factor)
        return lower_edges_of_many(stack, first.spectrum, fs, capillary_wavenumber=waves, **common)

    dragged = beside.of(drag)
    covered = beside.pair(lambda: found(few, fs, math.inf) if asks_for_skin(first) else None)
    at_corners = [corner_cases(case) for case in few]
    corners = [
        beside.pair(found, [corner[c] for corner in at_corners], fs, film)
        for c in range(len(at_corners[0]) if few else 0)
    ]
    return EdgeValues(edges.lower, edges.upper, dragged, *covered, corners).take(at)


def _stack(
    layers: Sequence[Case], film_modulus: float | None, wall_factor: Callable[[Real], Real] | None = None
) -> LayerStack:
    return LayerStack(
        density=np.array([case.liquid.density for case in layers]),
        viscosity=np.array([case.liquid.viscosity for case in layers]),
        surface_tension=np.array([case.liquid.surface_tension for case in layers]),
        depth=layers[0].vessel.depth, film_modulus=film_modulus, wall_factor=wall_factor,
    )  # fmt: skip


def asks_for_skin(case: Case) -> bool:
    """Return whether nobody has said what covers the surface, so that a skin has to be considered."""
    around = case.surroundings
    return around.surface is None and around.film_modulus is None and around.below is None and case.liquid.rheology is None


def corner_cases(case: Case) -> list[Case]:
    """Return the case at the corners of the stated uncertainty of its liquid's properties, as `assess` takes them."""
    spread = case.liquid.uncertainty
    names = [name for name in ("viscosity", "surface_tension", "density") if spread.get(name, 0.0) > 0.0]
    if not names:
        return []
    corners: list[dict[str, float]] = [{}]
    for name in names[:2] if spread.get("density", 0.0) < 0.02 else names:
        value = getattr(case.liquid, name)
        corners = [{**c, name: value * (1.0 + sign * min(spread[name], 0.9))} for c in corners for sign in (-1, 1)]
    plain = {name: getattr(case.liquid, name) for name in ("density", "viscosity", "surface_tension")}
    return [dataclasses.replace(case, liquid=Liquid(**{**plain, **corner})) for corner in corners]


def _lower_edges(case: Case, f: Real, layer: LayerModel) -> Real:
    """Return the lower edge of another layer at many frequencies, as `Case.lower_edge` has it for one."""
    top = case.capillary_wavenumber
    k = case.spectrum.discrete
    k = k[k < top]
    start = case.spectrum.continuous_from
    if start < top:
        k = np.concatenate([k, np.geomspace(start, top, 100)])
    growth = case.allowance.growth
    k = k[layer.coefficient(growth, k).real < 0.0]
    if not len(k):
        return np.zeros(len(f))
    w = np.repeat(2.0 * math.pi * f, len(k))
    roots = first_roots(
        layer, np.tile(k, len(f)), w, growth, case.amplitude_bound * w * w, subharmonic=False
    )
    result: Real = roots.reshape(len(f), -1).max(axis=1)
    return result
