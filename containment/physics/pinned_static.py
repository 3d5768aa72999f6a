r"""Layer at rest whose contact line is pinned at the rim (brimful): growth rates, and how finely to sum its modes.

The surface is made of the sliding modes, held at rest along the rim by one Lagrange multiplier for each order
(two in a ring). With M(s) = sum over j of b_j b_j^T / A(s; k_j) a shape grows at the rate s where M(s) is singular.

References
----------
Benjamin, T. B. & Scott, J. C. (1979), J. Fluid Mech. 92, 241-267 (pinned edge; from memory).
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final, Protocol

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import InputError, NotComputableError
from containment.physics.pinned_box import box_lines, box_rim
from containment.physics.rim_modes import FEWEST_DISCRETE, RimModes, annulus_rim, cylinder_rim

__all__ = [
    "PinnedLayer",
    "Sums",
    "check_pinned",
    "pinned_wave_frequencies",
    "rim_modes",
    "sharp_resonance",
    "smallest_stiffness",
    "static_pinned_count",
    "static_pinned_growth",
    "sums_for",
]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

_MOST_DISCRETE: Final = 240
_MOST_DISCRETE_BOX: Final = 40


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
class Sums:
    """How finely the sums over the modes are taken."""

    discrete: int
    nodes: int
    reach: float


def rim_modes(kind: str, dims: Sequence[float], order: int, *, discrete: int, nodes: int, reach: float) -> RimModes:
    """Return the modes of one circumferential order.

    Parameters
    ----------
    kind : str
        "cylinder" with dims (radius,), "annulus" with dims (inner radius, outer radius), "box" with dims (W, L), m.
    dims : sequence of float
    order, discrete, nodes, reach
        See `containment.physics.rim_modes.cylinder_rim`.
    """
    if kind == "cylinder":
        return cylinder_rim(radius=dims[0], order=order, discrete=discrete, nodes=nodes, reach=reach)
    if kind == "box":
        if order not in (0, 1, 2, 3):
            raise InputError(f"order {order} of a box: must be its parities, 0 to 3")
        lines = box_lines(dims=dims, parity=order, discrete=(discrete, discrete), nodes=nodes, reach=reach)
        return box_rim(lines, order)
    return annulus_rim(inner=dims[0], outer=dims[1], order=order, discrete=discrete, nodes=nodes, reach=reach)


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
        Circumferential order m; for a box the parities, see `containment.physics.pinned_box.box_lines`.
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
    Water pinned at the rim does not fall while R < 3.8317 l_c; when it slides, it does not while R < 1.8412 l_c.

    >>> from containment.physics.dispersion import Layer
    >>> water = Layer(density=998.0, viscosity=1e-3, surface_tension=0.0728, depth=0.05)
    >>> [len(static_pinned_growth(water, "cylinder", (radius,), 1)) for radius in (0.0104, 0.0105)]
    [0, 1]
    """
    check_pinned(layer, kind, dims)
    rim = rim_modes(kind, dims, order, discrete=_fewest(layer, kind, dims), nodes=24, reach=1e4 * _cut_off(layer))

    def faster(s: float) -> int:
        return int(static_pinned_count(layer, rim, s))

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


def pinned_wave_frequencies(
    kind: str,
    dims: Sequence[float],
    order: int,
    *,
    density: float,
    surface_tension: float,
    depth: float,
    gravity: float,
    count: int,
) -> Real:
    """Return the natural frequencies of the waves of one order of an inviscid layer that is stable at rest.

    Parameters
    ----------
    kind, dims, order
        Vessel and circumferential order.
    density, surface_tension, depth, gravity : float
        rho (kg/m^3), gamma (N/m), h (m), G0 (m/s^2, positive for an upright layer).
    count : int
        Number of waves.

    Returns
    -------
    array, shape (count,)
        Hz, in rising order.

    Raises
    ------
    InputError
        The layer at rest falls.

    Notes
    -----
    Inviscid, small slopes, flat surface at rest (filled exactly to the brim).

    Examples
    --------
    >>> waves = pinned_wave_frequencies(
    ...     "cylinder", (0.02766,), 1, density=997.0, surface_tension=0.0724, depth=0.038, gravity=9.80665, count=1
    ... )
    >>> round(float(waves[0]), 2)
    4.68
    """
    rim = rim_modes(kind, dims, order, discrete=4 * FEWEST_DISCRETE + 2 * count, nodes=24, reach=1e3 / _span(kind, dims))
    k = rim.wavenumbers
    stiffness = gravity + surface_tension / density * k * k
    inertia = 1.0 / (k * np.tanh(k * depth))
    if _count(rim, stiffness):
        raise InputError(f"gravity {gravity} m/s^2, pinned layer, order {order}: falls at rest, so it has no wave")

    def slower(w: float) -> int:
        return _count(rim, stiffness - w * w * inertia)

    result = []
    for wave in range(count):
        low, high = 0.0, 1.1 * math.sqrt(stiffness[0] / inertia[0])
        while slower(high) <= wave:
            low, high = high, 2.0 * high
        while high - low > 1e-12 * high:
            mid = 0.5 * (low + high)
            low, high = (low, mid) if slower(mid) > wave else (mid, high)
        result.append(0.5 * (low + high) / (2.0 * math.pi))
    return np.array(result)


def static_pinned_count(layer: PinnedLayer, rim: RimModes, s: float) -> int:
    """Return the number of pinned shapes that grow faster than s when the layer is not shaken."""
    return _count(rim, layer.coefficient(s, rim.wavenumbers).real)


def _count(rim: RimModes, a0: Real) -> int:
    """Return the number of negative values of the form a0 on the surfaces that keep the rim at rest."""
    matrix = (rim.heights / a0) @ rim.heights.T
    scale = 1.0 / np.sqrt(np.sum(rim.heights**2 / np.abs(a0), axis=1))
    positive = np.sum(np.linalg.eigvalsh(matrix * scale[:, None] * scale) > 0.0)
    return int(np.sum(a0 < 0.0) + positive - len(rim.heights))


def smallest_stiffness(layer: PinnedLayer, rim: RimModes, growth: float) -> float:
    """Return the size of the static stiffness of the pinned shape nearest to neutral, m/s^2, a little below it.

    The number of shapes with a stiffness below x is the count for A - x, so x is bisected on the number in (-x, x).
    """
    a0 = layer.coefficient(growth, rim.wavenumbers).real
    low, high = 1e-9, 1e9
    while high > 1.05 * low:
        mid = math.sqrt(low * high)
        low, high = (low, mid) if _count(rim, a0 - mid) > _count(rim, a0 + mid) else (mid, high)
    return low


def sharp_resonance(layer: PinnedLayer, w: Real) -> Real:
    """Return a wavenumber beyond the resonance of angular frequency w where viscosity leaves it sharp, else 0, 1/m.

    The deep inviscid wave has w^2 = gamma k^3/rho -+ g k, so k < (rho w^2/gamma)^(1/3) + k_c.
    """
    k = (layer.density * w * w / layer.surface_tension) ** (1.0 / 3.0) + _cut_off(layer)
    return np.where(layer.viscosity / layer.density * k * k < w, 1.1 * k, 0.0)


def _cut_off(layer: PinnedLayer) -> float:
    return math.sqrt(layer.density * STANDARD_GRAVITY / layer.surface_tension)


def _fewest(layer: PinnedLayer, kind: str, dims: Sequence[float]) -> int:
    return max(2 * FEWEST_DISCRETE, math.ceil(2.0 * _cut_off(layer) * _span(kind, dims) / math.pi))


def _span(kind: str, dims: Sequence[float]) -> float:
    if kind == "box":
        return 0.5 * max(dims)  # of the cosines of one parity along a side, every second one
    return dims[0] if kind == "cylinder" else dims[-1] - dims[0]


def sums_for(layer: PinnedLayer, kind: str, dims: Sequence[float], f: Real) -> Sums:
    """Return how finely to sum: every mode up to well past the resonances that viscosity leaves sharp."""
    w = 2.0 * np.pi * float(np.max(f))
    harmonics = np.arange(1, 7) / 2.0
    shortest = 1.2 * max(_cut_off(layer), float(np.max(sharp_resonance(layer, harmonics * w))))
    families = 2 if kind == "annulus" else 1
    most = _MOST_DISCRETE_BOX if kind == "box" else _MOST_DISCRETE
    discrete = families * FEWEST_DISCRETE + math.ceil(shortest * _span(kind, dims) / math.pi)
    if discrete > most:
        raise NotComputableError(
            f"pinned contact line at {float(np.max(f)):.4g} Hz: {discrete} modes of each order would have to be summed "
            f"one by one, at most {most} can be; the vessel is too wide for its waves, or the frequency too "
            "high"
        )
    reach = 10.0 * max(shortest, 6.0 * layer.viscosity * w / layer.surface_tension)
    start = discrete * math.pi / _span(kind, dims)
    return Sums(discrete, math.ceil(1.6 * math.log(max(reach / start, 30.0))) + 6, reach)


def check_pinned(layer: PinnedLayer, kind: str, dims: Sequence[float]) -> None:
    """Refuse what a pinned contact line can't be computed for.

    Raises
    ------
    InputError
        No surface tension, another kind of vessel, or radii that are not positive and in rising order.
    """
    if not layer.surface_tension > 0.0:
        raise InputError(
            f"surface tension {layer.surface_tension} N/m with a pinned contact line: must be positive, "
            "a rim holds the surface by tension alone"
        )
    if (kind, len(dims)) not in (("cylinder", 1), ("annulus", 2), ("box", 2)):
        raise InputError(
            f"pinned contact line in a vessel of kind {kind!r} with {len(dims)} dimensions: must be a cylinder (radius), "
            "an annulus (inner, outer radius) or a box (width, length)"
        )
    if not all(0.0 < length < math.inf for length in dims):
        raise InputError(f"dimensions {tuple(dims)} m of the vessel ({kind}): must be positive")
    if kind == "annulus" and not dims[0] < dims[1]:
        raise InputError(f"radii {tuple(dims)} m of an annulus: must be in rising order")
