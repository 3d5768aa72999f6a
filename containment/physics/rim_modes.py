r"""Sliding modes of a round or ring-shaped vessel with the weight of each at the rim, summed to infinity.

A pinned rim needs sums over all sliding modes of one order m, sum over j of b_j b_j^T f(k_j), with b_j the height at
the rim of the mode of unit norm. Cut after M modes they converge like 1/M only, and make the surface too stiff. Here
the first J modes are summed one by one and the rest by Euler and Maclaurin's formula: the integral over the density of
modes dj/dk (Gauss nodes in log k, the last panel in 1/k), with the end corrections put on the last discrete modes by
backward differences. The nodes act as further modes of positive weight.

The density follows from the phase of J' + i Y': with N^2(x) = J'^2 + Y'^2 it turns by 2 (x^2 - m^2) / (pi x^3 N^2).
"""

import math
from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.physics.crossings import refined

__all__ = ["RimModes", "annulus_rim", "cylinder_rim", "end_weights", "nodes_beyond"]

Real = npt.NDArray[np.float64]

FEWEST_DISCRETE: Final = 14
"""The end corrections need this many modes summed one by one."""

_BACKWARD: Final = 6
"""Number of modes that carry the end corrections."""


@dataclass(frozen=True, slots=True)
class RimModes:
    """Modes of one circumferential order and their weights at the rim or rims.

    Attributes
    ----------
    order : int
        Circumferential order m.
    wavenumbers : array, shape (modes,)
        k_j, 1/m: the first `discrete` are modes of the vessel, the others nodes that stand for the rest.
    heights : array, shape (rims, modes)
        Height at each rim of the mode of unit norm, times the square root of the weight in the sum, 1/m.
    discrete : int
        Number of modes taken one by one.
    """

    order: int
    wavenumbers: Real
    heights: Real
    discrete: int


def cylinder_rim(*, radius: float, order: int, discrete: int, reach: float, nodes: int) -> RimModes:
    """Return the modes of a round vessel and their heights at the rim.

    Parameters
    ----------
    radius : float
        R, m.
    order : int
        Circumferential order m >= 0; for m = 0 the uniform mode is left out (the volume is kept).
    discrete : int
        Modes to take one by one, at least 14.
    reach : float
        Wavenumber (1/m) from which on the summands fall like 1/k^2.
    nodes : int
        Nodes for the modes between the last discrete one and `reach`.

    Notes
    -----
    The mode J_m(k r) cos(m theta) with J_m'(k R) = 0 has b^2 = 2 / (R^2 (1 - m^2/(k R)^2)), up to a factor for each m.

    References
    ----------
    DLMF 10.18 (modulus and phase), 10.21 (zeros), 2.10 (Euler-Maclaurin).

    Examples
    --------
    The static pinned shape with m = 1 loses its hold at k R = 3.8317, where the sum of b^2/(k_j^2 - k^2) vanishes.

    >>> rim = cylinder_rim(radius=1.0, order=1, discrete=24, reach=1e3, nodes=12)
    >>> k = 3.831705970207512
    >>> bool(abs(np.sum(rim.heights[0] ** 2 / (rim.wavenumbers**2 - k**2))) < 1e-7)
    True
    """
    from scipy.special import jnp_zeros  # slow to import, and only pinned rims need it

    zeros = jnp_zeros(order, discrete)
    weights = end_weights(discrete)
    heights = np.sqrt(2.0 * weights / (1.0 - (order / zeros) ** 2)) / radius
    x, dx = nodes_beyond(float(zeros[-1]), max(reach * radius, 30.0 * float(zeros[-1])), nodes)
    # b^2 dj/dx: the factors x^2 - m^2 cancel
    beyond = np.sqrt(dx * 4.0 / (math.pi**2 * x * _modulus_squared(order, x))) / radius
    return RimModes(
        order,
        np.concatenate([zeros, x]) / radius,
        np.concatenate([heights, beyond])[None, :],
        discrete,
    )


def annulus_rim(*, inner: float, outer: float, order: int, discrete: int, reach: float, nodes: int) -> RimModes:
    """Return the modes of a ring-shaped vessel and their heights at the inner and the outer rim.

    Parameters
    ----------
    inner, outer : float
        R1 < R2, m.
    order, discrete, reach, nodes
        As for `cylinder_rim`.

    Notes
    -----
    The heights at the two rims have the same sign in every second mode and opposite signs in the others, so the two
    families are summed apart.

    Examples
    --------
    >>> rim = annulus_rim(inner=0.5, outer=1.0, order=1, discrete=24, reach=1e3, nodes=12)
    >>> round(float(rim.wavenumbers[0]), 4)
    1.3547
    """
    k = _annulus_zeros(order, inner, outer, discrete)
    sign = np.where(np.arange(discrete) % 2 == 0, 1.0, -1.0)
    if order == 0:
        sign = -sign  # the uniform mode, which is left out, is the first of its family
    weights = np.empty(discrete)
    families = [slice(discrete - 1 - 2 * ((discrete - 1) // 2), None, 2), slice(discrete % 2, None, 2)]
    parts_k, tails = [k], []
    for family in families:
        members = k[family]
        weights[family] = end_weights(len(members))
        q, dq = nodes_beyond(float(members[-1]), max(reach, 30.0 * float(members[-1])), nodes)
        first, second = _annulus_heights(order, inner, outer, q)
        density = 0.5 * dq * _annulus_density(order, inner, outer, q)
        tails.append(np.sqrt(density) * np.stack([first, sign[family][-1] * second]))
        parts_k.append(q)
    first, second = _annulus_heights(order, inner, outer, k)
    parts_b = [np.sqrt(weights) * np.stack([first, sign * second]), *tails]
    return RimModes(order, np.concatenate(parts_k), np.concatenate(parts_b, axis=1), discrete)


def end_weights(count: int) -> Real:
    """Return the weights of the summands 1 ... J when the integral from J on stands for the rest.

    sum from J on = integral + f(J)/2 - f'(J)/12 + f'''(J)/720 - f^(5)(J)/30240, derivatives by backward differences.
    """
    weights = np.ones(count)
    weights[-1] = 0.5
    offsets = -np.arange(_BACKWARD, dtype=np.float64)
    powers = np.vander(offsets, increasing=True).T  # row p: offsets^p
    wanted = np.zeros(_BACKWARD)
    wanted[1], wanted[3], wanted[5] = -1.0 / 12.0, 6.0 / 720.0, -120.0 / 30240.0  # p! times the coefficient
    weights[: -_BACKWARD - 1 : -1] += np.linalg.solve(powers, wanted)
    return weights


def nodes_beyond(start: float, reach: float, nodes: int) -> tuple[Real, Real]:
    """Return nodes and weights of the integral from `start` to infinity: Gauss in log x up to `reach`, then in 1/x."""
    t, w = np.polynomial.legendre.leggauss(nodes)
    half = 0.5 * math.log(reach / start)
    x = start * np.exp(half * (t + 1.0))
    u, v = np.polynomial.legendre.leggauss(max(4, nodes // 4))
    u, v = 0.5 * (u + 1.0), 0.5 * v
    return np.concatenate([x, reach / u]), np.concatenate([half * w * x, reach / u**2 * v])


def _modulus_squared(order: int, x: Real) -> Real:
    """Return J_m'(x)^2 + Y_m'(x)^2; far out by its expansion (DLMF 10.18.19)."""
    from scipy.special import jvp, yvp

    far = x > max(1e4, 300.0 * order)
    near = np.where(far, max(1.0, order), x)
    with np.errstate(over="ignore"):
        exact = jvp(order, near) ** 2 + yvp(order, near) ** 2
    expansion = 2.0 / (math.pi * x) * (1.0 - (4.0 * order**2 - 3.0) / (8.0 * x**2))
    result: Real = np.where(far, expansion, exact)
    return result


def _turning(order: int, x: Real) -> Real:
    """Return the derivative of the phase of J_m' + i Y_m'; negative below x = m."""
    result: Real = 2.0 * (x * x - order * order) / (math.pi * x**3 * _modulus_squared(order, x))
    return result


def _annulus_density(order: int, inner: float, outer: float, k: Real) -> Real:
    result: Real = (outer * _turning(order, k * outer) - inner * _turning(order, k * inner)) / math.pi
    return result


def _annulus_heights(order: int, inner: float, outer: float, k: Real) -> tuple[Real, Real]:
    """Return the heights at the rims of the mode of unit norm, without signs."""
    x1, x2 = k * inner, k * outer
    first = 1.0 / (x1 * np.sqrt(_modulus_squared(order, x1)))
    second = 1.0 / (x2 * np.sqrt(_modulus_squared(order, x2)))
    norm = 0.5 * ((outer**2 - (order / k) ** 2) * second**2 - (inner**2 - (order / k) ** 2) * first**2)
    return first / np.sqrt(norm), second / np.sqrt(norm)


def _annulus_phase(order: int, inner: float, outer: float, k: Real) -> Real:
    """Return the sine of the difference of the phases at the two rims; a rim in the shadow counts as Y' alone."""
    from scipy.special import jvp, yvp

    unit = []
    for radius in (inner, outer):
        with np.errstate(over="ignore"):
            j, y = jvp(order, k * radius), yvp(order, k * radius)
        size = np.hypot(j, y)
        shadow = ~np.isfinite(size)
        with np.errstate(invalid="ignore"):
            unit.append((np.where(shadow, 0.0, j / size), np.where(shadow, np.sign(y), y / size)))
    result: Real = unit[0][0] * unit[1][1] - unit[1][0] * unit[0][1]
    return result


def _annulus_zeros(order: int, inner: float, outer: float, count: int) -> Real:
    """Return the first zeros k of J_m'(k R1) Y_m'(k R2) - J_m'(k R2) Y_m'(k R1)."""
    spacing = math.pi / (outer - inner)
    low = 0.5 * max(order, 0.02) / outer
    high = low + spacing * (count + 2) + 2.0 * order / inner
    cells = 24 * math.ceil((high - low) / spacing) + 400
    # m = 1 ... in a thin ring has its first mode near m / R, close to the start: finer there
    nodes = np.union1d(np.linspace(low, high, cells), np.linspace(low, min(high, 2.0 * order / inner + low), 400))
    values = _annulus_phase(order, inner, outer, nodes)
    here = np.flatnonzero((values[1:] > 0.0) != (values[:-1] > 0.0))[:count]

    def at(k: Real) -> Real:
        return _annulus_phase(order, inner, outer, k)

    return refined(at, nodes[here], nodes[here + 1], precision=1e-13)
