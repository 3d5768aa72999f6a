"""Which cases need no evaluation: proven floors of the coefficients, and what Worpitzky's theorem makes of them."""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol, Self

import numpy as np
import numpy.typing as npt

__all__ = ["BoundedLayer", "Floor", "layer_of", "matters", "not_excluded"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]
Flags = npt.NDArray[np.bool_]


class BoundedLayer(Protocol):
    """What the edges need to know of a layer: see `containment.physics.dispersion.Layer`."""

    @property
    def density(self) -> float:
        """Density, kg/m^3."""
        ...

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k)."""
        ...

    def stiffness(self, wavenumber: npt.ArrayLike) -> Real:
        """Return the static stiffness."""
        ...

    def static_impedance(self, wavenumber: npt.ArrayLike) -> Real:
        """Return Z(0; k)."""
        ...

    def added_mass(self, wavenumber: npt.ArrayLike) -> Real:
        """Return a proven floor of Im Z / Im s, 0 where there is none."""
        ...

    def smallest_coefficient(self, wavenumber: npt.ArrayLike) -> Real:
        """Return a lower bound of abs(A) over Re s >= 0."""
        ...


def layer_of(layer: BoundedLayer, chosen: npt.NDArray[np.intp]) -> BoundedLayer:
    """Return the layer of chosen cases: the same for all, or, of a `LayerStack`, which has one a case, theirs."""
    take: Callable[[npt.NDArray[np.intp]], BoundedLayer] | None = getattr(layer, "take", None)
    return layer if take is None else take(chosen)


def matters(layer: BoundedLayer, k: Real, w: Real, acceleration: Real) -> Flags:
    r"""Return which wavenumbers could have an exponent with Re s >= 0 at an acceleration; the three broadcast.

    False is a proof, for every s = sigma + i y with sigma >= 0. By Floquet shift abs(y) <= w/2. With m the bound of
    `smallest_coefficient` and zeta = (2/rho) Z0, abs(A_n) >= max(m, zeta abs(s_n)) and abs(s_n) >= abs(n w + y). Hence

        abs(A_0 A_{+-1}) >= min over abs(y) of max(m, zeta abs(y)) zeta (w - abs(y)) = m zeta (w - min(m/zeta, w/2)),
        abs(A_n A_{n+1}) >= zeta^2 (3/4) w^2 for the other neighbours,

    and Worpitzky's theorem excludes a solution while 4 a^2 is below both. A deep layer has Z0 = 2 mu k and m rising
    with k, so once k h >= 3 and the test fails to bind, no larger k matters either.
    """
    m = layer.smallest_coefficient(k)
    zeta = 2.0 / layer.density * layer.static_impedance(k)
    turn = np.divide(m, zeta, out=np.zeros(np.broadcast_shapes(m.shape, zeta.shape)), where=zeta > 0.0)
    nearest = m * zeta * (w - np.minimum(turn, 0.5 * w))
    result: Flags = ~(np.minimum(nearest, 0.75 * (zeta * w) ** 2) > 4.0 * acceleration**2)
    # diagonal dominance needs no pairs
    return result & ~(m > 2.0 * acceleration)


@dataclass(frozen=True, slots=True)
class Floor:
    r"""Proven lower bounds of abs(A(s)) over Re s >= 0, for each wavenumber.

    abs(A) >= zeta abs(s) as in `Layer.smallest_coefficient`. The field of the layer carries at least the kinetic energy
    of the potential flow of the same surface speed (Kelvin), so Im Z >= y M with M = rho / (k tanh kh), and
    abs(A) >= (2/rho) abs(s) Im(Z + c/s) >= 2 y^2 / (k tanh kh) - (2/rho) c for stiffness c >= 0 and s = sigma + i y.
    """

    zeta: Real
    mobility: Real
    spring: Real
    rest: Real

    @classmethod
    def of(cls, layer: BoundedLayer, k: Real, growth: float) -> Self:
        """Take the bounds of a layer at wavenumbers k, and its coefficient at rest, A(growth; k)."""
        return cls(
            2.0 / layer.density * layer.static_impedance(k),
            2.0 / layer.density * layer.added_mass(k),
            2.0 / layer.density * np.maximum(layer.stiffness(k), 0.0),
            np.ascontiguousarray(layer.coefficient(growth, k).real),
        )

    def at(self, chosen: npt.NDArray[np.intp], y: Real) -> Real:
        """Return the bound for the chosen wavenumbers at imaginary parts y of s."""
        result: Real = np.maximum(self.zeta[chosen] * y, self.mobility[chosen] * y * y - self.spring[chosen])
        return result


def not_excluded(
    layer: BoundedLayer,
    floor: Floor,
    ik: npt.NDArray[np.intp],
    k: Real,
    w: Real,
    ceiling: Real,
    growth: float,
    *,
    subharmonic: bool,
) -> npt.NDArray[np.intp]:
    """Return the cases where a root below the ceiling is not excluded.

    Let t = 2 a^2 / abs(A_2). While a^2 <= abs(A_n A_{n+1}) / 4 for n >= 2 (Worpitzky), the fraction C = 1 / (A_1 - T)
    has abs(T) <= t, for this and every smaller a. Hence no root lies below a where

        subharmonic  abs(A_0) - a^2 / (abs(A_1) - t) > a
        harmonic     2 a^2 max(0, Re A_1 + t) / (abs(A_1) - t)^2 < A_0

    Both are the easier to meet the larger abs(A_0) and abs(A_1). First all coefficients are replaced by their proven
    floors (Re A_1 by abs(A_1)); where that leaves a doubt A_0 and A_1 are evaluated, and last A_2.
    """
    shift = 0.5 if subharmonic else 0.0
    left = np.arange(len(k))
    for evaluated in (0, 2, 3):
        here, kl, wl, a = ik[left], k[left], w[left], ceiling[left]
        a2 = a * a
        first = floor.at(here, shift * wl) if subharmonic else floor.rest[here]
        second, third, fourth = (floor.at(here, (n + shift) * wl) for n in (1, 2, 3))
        real = second
        if evaluated >= 2:
            mine = layer_of(layer, left)
            exact = mine.coefficient(growth + 1j * (1.0 + shift) * wl, kl)
            second, real = np.abs(exact), exact.real
            if subharmonic:
                first = np.abs(mine.coefficient(growth + 1j * shift * wl, kl))
        if evaluated >= 3:
            third = np.maximum(third, np.abs(mine.coefficient(growth + 1j * (2.0 + shift) * wl, kl)))
        with np.errstate(divide="ignore"):
            t = np.where(third > 0.0, 2.0 * a2 / third, np.inf)
        gap = second - t
        clear = gap > 0.0
        with np.errstate(divide="ignore", invalid="ignore"):
            if subharmonic:
                clear &= first - a2 / gap > a
            else:
                clear &= 2.0 * a2 * np.maximum(0.0, real + t) < first * gap * gap
        clear &= third * fourth >= 4.0 * a2
        if evaluated >= 3:  # else the next product is larger, as the floors rise with n
            clear &= fourth * floor.at(here, (4.0 + shift) * wl) >= 4.0 * a2
        left = left[~clear]
    return left
