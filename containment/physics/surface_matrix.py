r"""Response of a viscous layer on a rigid base to both velocities of its surface: the matrix the variants are built on.

The surface moves with the normal velocity w and the tangential velocity i v, v = w'(z)/k. The stresses that move it,
N (normal) and T (tangential, T = mu (w'' + k^2 w)/k), are linear in w and v with a symmetric matrix M(s; k):

    N = M11 w + M12 v,    T = M12 w + M22 v

Every layer of one or two liquids follows from it by what the surface does with v:

    clean surface             T = 0                   Z = M11 - M12^2 / M22
    film of modulus E         T = -(E k^2 / s) v      Z = M11 - s M12^2 / (s M22 + E k^2)
    inextensible film         v = 0                   Z = M11
    second liquid beyond      M11, M22 add, M12 subtract (the mirror turns its sign), then as a clean surface

With a = (q + k) h, b = (q - k) h, q^2 = k^2 + rho s/mu, S(y) = sinh(y)/y and D = S(a/2)^2 - S(b/2)^2, the solution
of (d^2 - q^2)(d^2 - k^2) w = 0 with w = w' = 0 on the base gives

    M11 = (2 mu q / (k h)) [S(a) + S(b)] / D
    M22 = (2 mu / h) [S(a) - S(b)] / D
    M12 = -mu [ (q - k) + 2 q S(b/2)^2 / D ]

Nothing here is 0/0 at s = 0. Multiplied by exp(-a) only decaying exponentials are left; where a is small the
differences are summed as series with the common factor a^2 - b^2 = 4 q k h^2 taken out.
"""

import math
from typing import Final, NamedTuple

import numpy as np
import numpy.typing as npt

__all__ = [
    "SurfaceMatrix",
    "layer_entries",
    "layer_matrix",
    "reduced_root",
    "surface_entries",
    "surface_matrix",
]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

_SERIES_BELOW: Final = 2.0
"""Below this |a| the differences come from their series; 16 terms leave 2^32 / 33! = 5e-28."""

_TERMS: Final = 16


class SurfaceMatrix(NamedTuple):
    """The three entries of M / (mu k), each an array of complex, or their slopes."""

    normal: Complex
    coupling: Complex
    tangential: Complex


def reduced_root(s_over_nu_k2: Complex) -> Complex:
    """Return x = q/k - 1 from s/(nu k^2), without loss at small s.

    Examples
    --------
    >>> complex(reduced_root(np.array(1e-20 + 0j)))
    (5e-21+0j)
    """
    return s_over_nu_k2 / (1.0 + np.sqrt(1.0 + s_over_nu_k2))


def surface_entries(x: npt.ArrayLike, kh: npt.ArrayLike) -> SurfaceMatrix:
    """Return M / (mu k) alone, in about half the time; see `surface_matrix`.

    Examples
    --------
    >>> complex(surface_entries(0.5, 0.7).normal) == complex(surface_matrix(0.5, 0.7)[0].normal)
    True
    """
    return SurfaceMatrix(*_entries(x, kh, slope=False))


def surface_matrix(x: npt.ArrayLike, kh: npt.ArrayLike) -> tuple[SurfaceMatrix, SurfaceMatrix]:
    """Return M / (mu k) and its slope by x, for x = q/k - 1 and the reduced depth k h; the two broadcast.

    Parameters
    ----------
    x : array of complex
        q/k - 1, see `reduced_root`.
    kh : array of float
        Wavenumber times depth; may be infinite.

    Returns
    -------
    tuple of SurfaceMatrix
        M11, M12, M22 over mu k, and their derivatives by x.

    Notes
    -----
    Newtonian liquid or complex viscosity, small slopes, no-slip base. Relative accuracy about 1e-14 / min(1, k h): for
    a thin layer with abs(a) > 2 the difference S(a) - S(b) loses log10(1/kh) digits.

    References
    ----------
    Derived from the linearised Navier-Stokes equations as in Kumar, K. & Tuckerman, L. S. (1994), J. Fluid Mech. 279,
    49-68 (from memory); the closed form of the matrix was worked out for this package.

    Examples
    --------
    A thin film, slow motion: 12 mu / (k^2 h^3) under a skin, 3 mu / (k^2 h^3) with a clean surface.

    >>> m, _ = surface_matrix(0.0, 1e-3)
    >>> clean = m.normal - m.coupling**2 / m.tangential
    >>> bool(abs(m.normal * 1e-9 - 12.0) < 1e-4), bool(abs(clean * 1e-9 - 3.0) < 1e-4)
    (True, True)
    """
    m = _entries(x, kh, slope=True)
    return SurfaceMatrix(*m[:3]), SurfaceMatrix(*m[3:])


def _entries(x: npt.ArrayLike, kh: npt.ArrayLike, *, slope: bool) -> list[Complex]:
    x, kh = np.broadcast_arrays(np.asarray(x, np.complex128), np.asarray(kh, np.float64))
    shape = x.shape
    x, kh = x.ravel(), kh.ravel()
    entries = np.empty((6 if slope else 3, len(x)), np.complex128)
    deep = np.isinf(kh)
    shallow = ~deep & (np.abs((2.0 + x) * np.where(deep, 1.0, kh)) < _SERIES_BELOW)
    rest = ~(deep | shallow)
    for chosen, rule in ((deep, _deep), (shallow, _shallow), (rest, _closed)):
        if chosen.all():
            entries = rule(x, kh, slope)
        elif chosen.any():
            entries[:, chosen] = rule(x[chosen], kh[chosen], slope)
    return [row.reshape(shape) for row in entries]


def layer_entries(s: Complex, wavenumber: Real, *, density: float, viscosity: float, depth: float) -> SurfaceMatrix:
    """Return M, Pa s/m, alone; see `layer_matrix`.

    Examples
    --------
    >>> m = layer_entries(np.zeros(1, complex), np.array([100.0]), density=1e3, viscosity=1.0, depth=np.inf)
    >>> float(m.normal[0].real)
    200.0
    """
    k = wavenumber
    x = reduced_root(s / (viscosity / density * k * k))
    scale = viscosity * k
    return SurfaceMatrix(*(scale * entry for entry in surface_entries(x, k * depth)))


def layer_matrix(
    s: Complex, wavenumber: Real, *, density: float, viscosity: float, depth: float
) -> tuple[SurfaceMatrix, SurfaceMatrix]:
    """Return M, Pa s/m, and dM/ds of a Newtonian layer on a rigid base; s (1/s) and k (1/m) broadcast.

    Examples
    --------
    >>> m, _ = layer_matrix(np.zeros(1, complex), np.array([100.0]), density=1e3, viscosity=1.0, depth=np.inf)
    >>> [float(entry[0].real) for entry in (m.normal, m.tangential)]  # 2 mu k
    [200.0, 200.0]
    """
    k = wavenumber
    rate = viscosity / density * k * k
    x = reduced_root(s / rate)
    m, m_x = surface_matrix(x, k * depth)
    scale = viscosity * k
    by_s = scale / (2.0 * (1.0 + x) * rate)
    return SurfaceMatrix(*(scale * entry for entry in m)), SurfaceMatrix(*(by_s * entry for entry in m_x))


def _deep(x: Complex, kh: Real, slope: bool) -> Complex:
    if not slope:
        return np.stack([(1.0 + x) * (2.0 + x), -x, 2.0 + x])
    one = np.ones_like(x)
    return np.stack([(1.0 + x) * (2.0 + x), -x, 2.0 + x, 3.0 + 2.0 * x, -one, one])


def _closed(x: Complex, kh: Real, slope: bool) -> Complex:
    q, two = 1.0 + x, 2.0 + x
    u = x * kh
    e, eq = np.exp(-kh), np.exp(-(u + kh))
    both = e * eq
    near = np.abs(u) < 0.5
    g = np.where(near, 0.0, e - eq) / np.where(near, 1.0, x)  # (e - eq)/x
    tame = u[near]
    if len(tame):
        safe = np.where(tame == 0.0, 1.0, tame)
        g[near] = (e * kh)[near] * np.where(tame == 0.0, 1.0, -np.expm1(-tame) / safe)
    sums = e + eq
    tg = two * g
    product = tg * sums
    odd = 1.0 - both * both
    below = (1.0 - both) ** 2 - tg * tg
    m11 = q * two * (odd + product) / below
    m22 = two * (odd - product) / below
    share = 2.0 * q * tg * tg / below
    if not slope:
        return np.stack([m11, -(x + share), m22])
    g_x = (kh * eq - g) / np.where(near, 1.0, x)
    g_x[near] = (e * kh * kh)[near] * _quotient_slope(tame)
    tg_x = g + two * g_x
    product_x = tg_x * sums - tg * kh * eq
    odd_x = 2.0 * kh * both * both
    below_x = 2.0 * (1.0 - both) * kh * both - 2.0 * tg * tg_x
    share_x = 2.0 * tg * (tg + 2.0 * q * tg_x) / below - share * below_x / below
    return np.stack(
        [
            m11,
            -(x + share),
            m22,
            ((q + two) * (odd + product) + q * two * (odd_x + product_x)) / below - m11 * below_x / below,
            -(1.0 + share_x),
            (odd - product + two * (odd_x - product_x)) / below - m22 * below_x / below,
        ]
    )


def _quotient_slope(u: Complex) -> Complex:
    """Return d/du of (1 - exp(-u)) / u from its series, for abs(u) < 0.5."""
    total = np.zeros_like(u)
    for j in range(14, 0, -1):
        total = total * u + (-1.0) ** j * j / math.factorial(j + 1)
    return total


def _shallow(x: Complex, kh: Real, slope: bool) -> Complex:
    u, v = ((2.0 + x) * kh) ** 2, (x * kh) ** 2  # a^2 and b^2
    u_x, v_x = 2.0 * (2.0 + x) * kh * kh, 2.0 * x * kh * kh
    plus, plus_x = np.full_like(u, 2.0), np.zeros_like(u)  # S(a) + S(b)
    square, square_x = np.ones_like(u), np.zeros_like(u)  # S(b/2)^2
    minus, minus_x = np.zeros_like(u), np.zeros_like(u)  # [S(a) - S(b)] / (a^2 - b^2)
    below, below_x = np.zeros_like(u), np.zeros_like(u)  # D / (a^2 - b^2)
    p, p_x = np.ones_like(u), np.zeros_like(u)  # (a^2j - b^2j) / (a^2 - b^2)
    ua, va = np.ones_like(u), np.ones_like(u)  # a^2(j-1), b^2(j-1)
    for j in range(1, _TERMS + 1):
        odd, even = 1.0 / math.factorial(2 * j + 1), 2.0 / math.factorial(2 * j + 2)
        minus, below = minus + odd * p, below + even * p
        if slope:
            plus_x = plus_x + odd * j * (ua * u_x + va * v_x)
            square_x = square_x + even * j * va * v_x
            minus_x, below_x = minus_x + odd * p_x, below_x + even * p_x
            p_x = u_x * p + u * p_x + j * va * v_x
        ua, va = ua * u, va * v
        plus, square = plus + odd * (ua + va), square + even * va
        p = u * p + va
    m11 = plus / (2.0 * kh**3 * below)
    m22 = 2.0 * minus / (kh * below)
    share = square / (2.0 * kh * kh * below)
    if not slope:
        return np.stack([m11, -(x + share), m22])
    ratio = below_x / below
    return np.stack(
        [
            m11,
            -(x + share),
            m22,
            plus_x / (2.0 * kh**3 * below) - m11 * ratio,
            -(1.0 + square_x / (2.0 * kh * kh * below) - share * ratio),
            2.0 * minus_x / (kh * below) - m22 * ratio,
        ]
    )
