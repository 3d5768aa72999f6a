"""Decaying motions of a viscous layer whose surface is held flat: the depth dependence of the time-stepped route.

The linear Navier-Stokes equations of one wavenumber are put in weak form (virtual power). For every test velocity v
with v = Dv = 0 at the rigid base,

    rho int(DW_t Dv + k^2 W_t v) + mu int[(D^2 + k^2)W (D^2 + k^2)v + 4 k^2 DW Dv] = -k^2 (rho G + gamma k^2) zeta v(h)

whose natural conditions at the surface are zero tangential stress, (D^2 + k^2)W = 0, and the balance of normal stress,
rho DW_t - mu (D^3 - 3 k^2 D)W = -k^2 (rho G + gamma k^2) zeta. Both forms on the left are symmetric and positive, so
the algebraic conditions leave no trace and the motions decouple: W = sum c_j(t) W_j(z), c_j' = -rate_j c_j - f_j k^2
(rho G + gamma k^2) zeta, and zeta' = sum f_j c_j with f_j = W_j(h). The trial functions are piecewise polynomials with
continuous slope, on elements that grow geometrically away from the surface and from the base.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from functools import lru_cache

import numpy as np
from numpy.polynomial import legendre
from scipy.linalg import eigh

DEEP = 14.0
"""Depths beyond DEEP/k are cut there unless told otherwise: the base moves a neutral surface by exp(-2 k h)."""
FIRST_ELEMENT = 4.0
"""Thickness of the element at a boundary, in units of the oscillating layer."""
GROWTH_OF_ELEMENTS = 3.0
WIDEST_ELEMENT = 5.0
"""Largest element, in units of 1/k."""
MOST_UNKNOWNS = 400


class OutOfReachError(ValueError):
    """The case needs more unknowns, or loses more digits, than this route affords."""


@dataclass(frozen=True)
class DepthModes:
    """Decay rates (1/s, ascending) and surface velocities f_j of the motions, both of shape (n,).

    The motions are normalised to rho int(DW^2 + k^2 W^2) = 1.
    """

    rates: np.ndarray
    surface: np.ndarray


def breakpoints(*, wavenumber: float, depth: float, layer: float, cut: float = DEEP) -> np.ndarray:
    """Ends of the elements from the base, or where the depth is cut, to the surface; `layer` is a boundary layer's."""
    whole = min(depth, cut / wavenumber)
    thickness = FIRST_ELEMENT * layer
    from_surface, from_base = [0.0], [0.0]
    surface_width, base_width = thickness, (WIDEST_ELEMENT / wavenumber if whole < depth else thickness)

    def widest(front: float) -> float:
        # Beyond DEEP/k from a boundary only smooth motions of the interior are left.
        return WIDEST_ELEMENT / wavenumber if front < DEEP / wavenumber else math.inf

    while True:
        left = whole - from_surface[-1] - from_base[-1]
        surface_step, base_step = (
            min(surface_width, widest(from_surface[-1])),
            min(base_width, widest(from_base[-1])),
        )
        # The narrower front advances, until one element closes the gap.
        if left <= 1.5 * min(surface_step, base_step):
            break
        if surface_step <= base_step:
            from_surface.append(from_surface[-1] + surface_step)
            surface_width = surface_step * GROWTH_OF_ELEMENTS
        else:
            from_base.append(from_base[-1] + base_step)
            base_width = base_step * GROWTH_OF_ELEMENTS
        if len(from_surface) + len(from_base) > MOST_UNKNOWNS // 12:
            raise OutOfReachError(f"k h = {wavenumber * depth:g}, layer/h = {layer / depth:g}: too many elements")
    return np.array(from_base + [whole - x for x in reversed(from_surface)])


def default_degree(ends: np.ndarray) -> int:
    """Degree of the polynomials between `ends`: more on a lone element, which has both boundary layers to carry."""
    return 24 if len(ends) == 2 else 14


@lru_cache(maxsize=32)
def _reference_integrals(degree: int) -> tuple[np.ndarray, np.ndarray, np.ndarray, np.ndarray]:
    """Integrals over [-1, 1] of vv, v'v', v''v'' and vv'' + v''v.

    The functions are four cubics (value, slope at each end) and bubbles with no value or slope at either end.
    """
    x, weight = legendre.leggauss(degree + 2)
    value = [(2 - 3 * x + x**3) / 4, (1 - x - x**2 + x**3) / 4, (2 + 3 * x - x**3) / 4, (-1 - x + x**2 + x**3) / 4]
    slope = [(-3 + 3 * x**2) / 4, (-1 - 2 * x + 3 * x**2) / 4, (3 - 3 * x**2) / 4, (-1 + 2 * x + 3 * x**2) / 4]
    bend = [1.5 * x, (-1 + 3 * x) / 2, -1.5 * x, (1 + 3 * x) / 2]
    p = legendre.legvander(x, degree).T
    for j in range(2, degree - 1):
        # P_j integrated twice; j >= 2 makes value and slope vanish at both ends.
        scale = math.sqrt(j + 0.5)
        upper, lower = (p[j + 2] - p[j]) / (2 * j + 3), (p[j] - p[j - 2]) / (2 * j - 1)
        value.append(scale * (upper - lower) / (2 * j + 1))
        slope.append(scale * (p[j + 1] - p[j - 1]) / (2 * j + 1))
        bend.append(scale * p[j])
    v, s, b = np.array(value), np.array(slope), np.array(bend)
    cross = (v * weight) @ b.T
    return (v * weight) @ v.T, (s * weight) @ s.T, (b * weight) @ b.T, cross + cross.T


@lru_cache(maxsize=256)
def depth_modes(
    *,
    wavenumber: float,
    depth: float,
    density: float,
    viscosity: float,
    layer: float,
    points: int | None = None,
    cut: float = DEEP,
) -> DepthModes:
    """Motions of the layer with its surface held flat, from elements of degree `points` fitted to boundary layers."""
    ends = breakpoints(wavenumber=wavenumber, depth=depth, layer=layer, cut=cut)
    half = np.diff(ends) / 2
    degree = default_degree(ends) if points is None else points
    if degree < 6:
        raise ValueError(f"points must be at least 6, got {points}")
    bubbles = degree - 3
    size = len(half) * (bubbles + 2)
    if size > MOST_UNKNOWNS:
        raise OutOfReachError(f"{size} unknowns in depth, at most {MOST_UNKNOWNS} are affordable")
    vv, ss, bb, cross = _reference_integrals(degree)
    k2 = wavenumber**2
    mass, drag = np.zeros((size + 2, size + 2)), np.zeros((size + 2, size + 2))
    top = 0
    for e, j in enumerate(half):
        # Unknowns: value and slope at each end (those of the base come first and are struck out), then the bubbles.
        bottom, top = top, e * (bubbles + 2) + 2
        here = np.array([bottom, bottom + 1, *range(top, top + 2 + bubbles)])
        scale = np.ones(4 + bubbles)
        scale[[1, 3]] = j / half.min()
        outer = np.outer(scale, scale)
        mass[np.ix_(here, here)] += density * outer * (ss / j + k2 * j * vv)
        drag[np.ix_(here, here)] += viscosity * outer * (bb / j**3 + k2 * cross / j + k2**2 * j * vv + 4 * k2 * ss / j)
    rates, shapes = eigh(drag[2:, 2:], mass[2:, 2:], check_finite=False)
    return DepthModes(rates=rates, surface=shapes[top - 2])
