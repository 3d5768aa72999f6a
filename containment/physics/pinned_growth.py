r"""Growth of a pinned layer at a drive point: how many exponents grow, and how fast the fastest does.

With T_j the two-sided tridiagonal system of the sliding mode j, the exponents of one circumferential order are the zeros
of prod over j of det T_j times det M, M = sum over j of b_j b_j^T T_j^{-1}. Both are compared with a layer that is
stable at rest and not shaken, B_nj = A_nj + c, whose determinant is prod B_nj times prod over n of det m_n, with
m_n = sum over j of b_j b_j^T / B_nj. On the path Im B has the sign of Im s_n, so that Im m_n is definite: the arguments
of the B and of the eigenvalues of the m_n are continuous, and the rest is `containment.physics.winding`. The same holds
with a damping d_j s added to the B_nj.
"""

from collections.abc import Sequence
from dataclasses import dataclass
from typing import Protocol

import numpy as np
import numpy.typing as npt

from containment.errors import NotComputableError
from containment.physics.pinned_hill import SPARE_ROWS, harmonics_at_work, reach_factors, summed_inverse
from containment.physics.pinned_static import PinnedLayer, check_pinned, rim_modes, sums_for
from containment.physics.rim_modes import RimModes
from containment.physics.winding import INTEGER_TOLERANCE, damping_for, exponents_beyond, largest_rate

__all__ = [
    "BoundedPinnedLayer",
    "PinnedCount",
    "order_matters",
    "pinned_fastest_growth",
    "pinned_growing",
    "pinned_growing_count",
    "rim_growing_count",
]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]


class BoundedPinnedLayer(PinnedLayer, Protocol):
    """What the proof that high orders do not grow needs to know of a layer besides."""

    def stiffness(self, wavenumber: npt.ArrayLike) -> Real:
        """Return rho G0 + gamma k^2, Pa/m."""
        ...

    def inertia(self, wavenumber: npt.ArrayLike) -> Real:
        """Return dZ/ds at s = 0, kg/m^2."""
        ...


@dataclass(frozen=True, slots=True)
class PinnedCount:
    """Growing exponents of a pinned layer at a drive point, over all orders.

    Attributes
    ----------
    growing : int
        Their number; those of an order m > 0 count once.
    proven : bool
        Whether every count is an integer to 0.05 and the orders that were not counted provably do not grow.
    orders : int
        Number of orders that were counted.
    worst_order : int
        Order with the most growing exponents; -1 if there are none.
    """

    growing: int
    proven: bool
    orders: int
    worst_order: int


def _refuse_box(kind: str) -> None:
    if kind == "box":
        raise NotComputableError(
            "growing exponents of a box with a pinned contact line: too many conditions along its sides to count them; "
            "its edges can be computed"
        )


def order_matters(layer: BoundedPinnedLayer, rim: RimModes, w: float, acceleration: float) -> bool:
    r"""Return whether a pinned surface of one order could have an exponent with Re s >= 0; False is a proof.

    On surfaces that keep the rim at rest the block of the harmonic s_n is a form with the values A(s_n; k_j), and its
    inverse has a norm of at most 1/dist, with dist the distance of their convex hull from 0. Both lower bounds of
    abs(A) in `Layer.smallest_coefficient` bound the same linear function of A for all j, Re(A/s) and Re A, and so bound
    the hull: with f = min Z0 over j, dist >= (2/rho) f abs(s), and dist >= (2/rho) min over j of
    (c_j - Z0_j abs(s) - 2 Z1_j abs(s)^2). The rest is `containment.physics.exclusion.matters`, with blocks for numbers.
    """
    k = rim.wavenumbers
    c = layer.stiffness(k)
    if float(np.min(c)) <= 0.0:
        return True
    z0, z1 = layer.static_impedance(k), layer.inertia(k)
    floor = float(np.min(z0))
    half = 0.5 * (z0 + floor)
    crossing = float(np.min(c / (half + np.sqrt(half * half + 2.0 * z1 * c))))
    zeta = 2.0 / layer.density * floor
    least = zeta * crossing
    nearest = least * zeta * (w - min(crossing, 0.5 * w))
    pairs = min(nearest, 0.75 * (zeta * w) ** 2) > 4.0 * acceleration**2
    return not (pairs or least > 2.0 * acceleration)


def rim_growing_count(
    layer: PinnedLayer, rim: RimModes, w: float, acceleration: float, *, growth: float = 0.0, extra_rows: int = 3
) -> tuple[int, float]:
    """Count the exponents with a real part above `growth` for given modes at the rim.

    Parameters
    ----------
    layer : PinnedLayer
        The layer.
    rim : RimModes
        Modes of one circumferential order.
    w, acceleration : float
        Angular frequency (rad/s) and peak acceleration (m/s^2).
    growth : float
        1/s, >= 0.
    extra_rows : int
        Rows beyond those of the search for edges.

    Returns
    -------
    count : int
    distance : float
        Distance of the winding number from the integer; above 0.05 the count proves nothing.
    """
    a = max(acceleration, 1e-12)
    reach = reach_factors(layer.density, layer.viscosity, layer.surface_tension, np.array([w]))
    rows = int(2.0 * harmonics_at_work(np.array([a]), reach)[0]) + SPARE_ROWS + extra_rows
    k, b = rim.wavenumbers, rim.heights
    n = np.arange(-rows, rows + 1)[:, None, None]
    rest = layer.coefficient(0.0, k).real
    lift = 2.0 * max(0.0, -float(np.min(rest)))
    damping = damping_for(rest + lift, k, w)

    def track(y: Real) -> tuple[Complex, Real]:
        s = growth + 1j * (y[:, None] + n * w)
        diagonal = layer.coefficient(s, k)
        heights = np.broadcast_to(b, (len(y), *b.shape))
        level = np.full((len(y), 1), a)
        ratio = np.empty_like(diagonal)
        ratio[-1] = level / diagonal[-1]
        for i in range(len(diagonal) - 2, -1, -1):
            ratio[i] = level / (diagonal[i] - level * ratio[i + 1])
        stable = diagonal + lift
        damped = stable + damping * s
        modes = np.log(level / ratio / damped).sum(axis=(0, 2))
        size = len(diagonal) * len(b)
        inverse = summed_inverse(level, diagonal, ratio, heights).reshape(len(y), size, size)
        at_rim, at_rim_damped = (np.einsum("rk,nyk,sk->nyrs", b, 1.0 / each, b) for each in (stable, damped))
        scale = 1.0 / np.sqrt(np.abs(np.einsum("nyrr->ynr", at_rim_damped))).reshape(len(y), size)
        sign, logarithm = np.linalg.slogdet(inverse * scale[:, :, None] * scale[:, None, :])
        held, held_damped = (np.linalg.eigvals(each) for each in (at_rim, at_rim_damped))
        scaled = np.log(held_damped).sum(axis=(0, 2)) + 2.0 * np.log(scale).sum(axis=1)
        turned = (np.angle(damped) - np.angle(stable)).sum(axis=(0, 2))
        turned += (np.angle(held_damped) - np.angle(held)).sum(axis=(0, 2))
        return modes + np.log(sign) + logarithm - scaled, turned

    return exponents_beyond(track, w)


def pinned_growing_count(
    layer: PinnedLayer,
    kind: str,
    dims: Sequence[float],
    order: int,
    *,
    frequency: float,
    acceleration: float,
    growth: float = 0.0,
) -> tuple[int, float]:
    """Count the exponents of one circumferential order with a real part above `growth` at a drive point.

    Parameters
    ----------
    layer, kind, dims, order
        See `containment.physics.pinned_static.static_pinned_growth`.
    frequency, acceleration : float
        Hz and m/s^2 (peak).
    growth : float
        1/s, >= 0.

    Returns
    -------
    count : int
        An m > 0 counts once, though each shape can be turned by a right angle.
    distance : float
        Distance of the winding number from the integer; above 0.05 the count proves nothing.

    Examples
    --------
    >>> from containment.physics.dispersion import Layer
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> point = dict(frequency=50.0)
    >>> for a in (100.0, 200.0, 300.0, 1000.0):  # the four lower roots lie from 136 to 204, the upper one at 920 m/s^2
    ...     print(pinned_growing_count(layer, "cylinder", (0.035,), 1, frequency=50.0, acceleration=a)[0])
    4
    1
    0
    1
    """
    check_pinned(layer, kind, dims)
    _refuse_box(kind)
    sums = sums_for(layer, kind, dims, np.array([frequency]))
    rim = rim_modes(kind, dims, order, discrete=sums.discrete, nodes=sums.nodes, reach=sums.reach)
    return rim_growing_count(layer, rim, 2.0 * np.pi * frequency, acceleration, growth=growth)


def pinned_fastest_growth(
    layer: PinnedLayer,
    kind: str,
    dims: Sequence[float],
    order: int,
    *,
    frequency: float,
    acceleration: float,
    precision: float = 1e-8,
) -> float:
    """Return the largest growth rate of one circumferential order at a drive point, 1/s; 0 if nothing grows.

    Raises
    ------
    NotComputableError
        A winding number is not an integer, or the vessel is a box.

    Examples
    --------
    >>> from containment.physics.dispersion import Layer
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> drive = dict(frequency=50.0, acceleration=1e-3)
    >>> round(pinned_fastest_growth(layer, "cylinder", (0.035,), 1, **drive), 4)  # hardly shaken: as at rest
    4.8366
    """
    check_pinned(layer, kind, dims)
    _refuse_box(kind)
    w = 2.0 * np.pi * frequency
    sums = sums_for(layer, kind, dims, np.array([frequency]))
    rim = rim_modes(kind, dims, order, discrete=sums.discrete, nodes=sums.nodes, reach=sums.reach)
    return largest_rate(
        lambda rate: rim_growing_count(layer, rim, w, acceleration, growth=rate), w, precision=precision
    )


def pinned_growing(
    layer: BoundedPinnedLayer,
    kind: str,
    dims: Sequence[float],
    *,
    frequency: float,
    acceleration: float,
    growth: float = 0.0,
) -> PinnedCount:
    """Count the exponents with a real part above `growth` over all orders of a pinned layer at a drive point.

    Orders are taken from 0 upwards until one is proven not to grow and is stable at rest; higher orders consist of
    shorter waves, whose floors are higher.

    Examples
    --------
    >>> from containment.physics.dispersion import Layer
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> held = pinned_growing(layer, "cylinder", (0.035,), frequency=50.0, acceleration=300.0)
    >>> held.growing, held.proven
    (0, True)
    """
    check_pinned(layer, kind, dims)
    _refuse_box(kind)
    w = 2.0 * np.pi * frequency
    sums = sums_for(layer, kind, dims, np.array([frequency]))
    total, proven, order, most, worst = 0, True, 0, 0, -1
    while True:
        rim = rim_modes(kind, dims, order, discrete=sums.discrete, nodes=sums.nodes, reach=sums.reach)
        if not order_matters(layer, rim, w, acceleration):
            break
        count, distance = rim_growing_count(layer, rim, w, acceleration, growth=growth)
        proven = proven and distance <= INTEGER_TOLERANCE
        total += count
        if count > most:
            most, worst = count, order
        order += 1
    return PinnedCount(total, proven, order, worst)
