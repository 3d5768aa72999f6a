r"""Share of the side walls in the motion of a mode: the factor of the oscillating boundary layer.

    lambda_w = integral over the side wall of abs(grad phi)^2 dS / integral over the volume of abs(grad phi)^2 dV

with phi = f(x, y) cosh(k z) the potential mode, z from the base. Over the depth (H = k h)

    C = integral of cosh^2 = h/2 + sinh(2H)/(4k),   S = integral of sinh^2 = sinh(2H)/(4k) - h/2,
    volume = k sinh(H) cosh(H) integral of f^2,

so that with c = C / (sinh(2H)/(2k)) and s = S / (sinh(2H)/(2k)), c + s = 1, every shape needs only integrals of f along
the wall. The base's own friction is in the exact theory of the layer and does not belong here.
"""

import numpy as np
import numpy.typing as npt

__all__ = [
    "annulus_wall_factor",
    "box_wall_factor",
    "cylinder_wall_factor",
    "largest_cylinder_wall_factor",
    "slot_wall_factor",
]

Real = npt.NDArray[np.float64]


def _shares(kh: Real) -> tuple[Real, Real]:
    """Return C and S over sinh(2H)/(2k): 1/2 + H/sinh(2H) and 1/2 - H/sinh(2H)."""
    kh = np.minimum(kh, 350.0)
    safe = np.where(kh == 0.0, 1.0, kh)
    ratio = np.where(kh == 0.0, 0.5, -2.0 * safe * np.exp(-2.0 * safe) / np.expm1(-4.0 * safe))
    # the difference 1/2 - H/sinh 2H loses digits for small H, where its series takes over
    h2 = kh * kh
    near = h2 / 3.0 * (1.0 - 7.0 * h2 / 15.0 * (1.0 - 62.0 * h2 / 147.0))
    return 0.5 + ratio, np.where(kh < 0.03, near, 0.5 - ratio)


def cylinder_wall_factor(
    wavenumber: npt.ArrayLike, diameters: npt.ArrayLike, *, radius: float, depth: float
) -> Real:
    """Return lambda_w of the modes of a round vessel, 1/m.

    Parameters
    ----------
    wavenumber : array_like
        k = j'(m,n)/R, 1/m.
    diameters : array_like of int
        Number m of nodal diameters of each mode.
    radius, depth : float
        R and h, m; h may be infinite.

    Notes
    -----
    Exact for the potential mode. Deep: (1 + m^2/(kR)^2) / (1 - m^2/(kR)^2) / R.

    References
    ----------
    Damping by the walls: Case, K. M. & Parkinson, W. C. (1957), J. Fluid Mech. 2, 172-184 (from memory).

    Examples
    --------
    >>> float(cylinder_wall_factor(3.8317 / 0.05, 0, radius=0.05, depth=np.inf).round(6))
    20.0
    """
    k = np.asarray(wavenumber, np.float64)
    turn = (np.asarray(diameters, np.float64) / (k * radius)) ** 2
    c, s = _shares(k * depth)
    result: Real = 2.0 / radius * (turn * c + s) / (1.0 - turn)
    return result


def largest_cylinder_wall_factor(wavenumber: npt.ArrayLike, *, radius: float) -> Real:
    """Return a value above lambda_w of every mode of a round vessel near a wavenumber, for k R >= 1.8, 1/m.

    Notes
    -----
    The largest belongs to waves that run along the wall, n = 1: j'(m,1) = m + 0.8086 m^(1/3) + ... gives about
    1.24 (kR)^(2/3) / R; 2.5 (kR)^(2/3) / R lies above every mode with kR < 64 at every depth (checked mode by mode).

    References
    ----------
    DLMF 10.21.40 (zeros of large order; from memory).

    Examples
    --------
    >>> float(largest_cylinder_wall_factor(1000.0, radius=0.064).round(1))
    625.0
    """
    k = np.asarray(wavenumber, np.float64)
    result: Real = 2.5 * (k * radius) ** (2.0 / 3.0) / radius
    return result


def annulus_wall_factor(
    wavenumber: npt.ArrayLike, diameters: npt.ArrayLike, *, inner: float, outer: float, depth: float
) -> Real:
    """Return lambda_w of the modes of a ring-shaped vessel, both walls counted, 1/m.

    Parameters
    ----------
    wavenumber : array_like
        k, 1/m.
    diameters : array_like of int
        Number m of nodal diameters of each mode.
    inner, outer, depth : float
        R1 < R2 and h, m.

    Examples
    --------
    A thin core adds little to the round vessel's value:

    >>> k = 3.8317 / 0.05
    >>> float(annulus_wall_factor(k, 0, inner=1e-5, outer=0.05, depth=0.2).round(1))
    20.0
    """
    from scipy.special import jv, jvp, yv, yvp  # slow to import, and only a ring needs it

    k, m = np.broadcast_arrays(np.asarray(wavenumber, np.float64), np.asarray(diameters))
    j_slope, y_slope = jvp(m, k * outer), yvp(m, k * outer)
    size = np.hypot(j_slope, y_slope)
    # f is flat at the outer wall by construction and at the inner one because k is a root
    f_in, f_out = ((jv(m, k * r) * y_slope - yv(m, k * r) * j_slope) / size for r in (inner, outer))
    # the strongest rotation inside the core makes f_in lose its digits where it is negligible against f_out
    f_in = np.where(np.isfinite(f_in), f_in, 0.0)
    c, s = _shares(k * depth)
    norm = 0.5 * ((outer**2 - (m / k) ** 2) * f_out**2 - (inner**2 - (m / k) ** 2) * f_in**2)
    along = sum(r * f**2 * ((m / (k * r)) ** 2 * c + s) for r, f in ((inner, f_in), (outer, f_out)))
    result: Real = along / norm
    return result


def box_wall_factor(
    first: npt.ArrayLike, second: npt.ArrayLike, *, width: float, length: float, depth: float
) -> Real:
    """Return lambda_w of the modes cos(p pi x/W) cos(q pi y/L) of a rectangular vessel, 1/m.

    Parameters
    ----------
    first, second : array_like of int
        p and q, not both 0.
    width, length, depth : float
        W, L and h, m.

    Examples
    --------
    >>> float(box_wall_factor(1, 0, width=0.06, length=1e9, depth=np.inf).round(4))  # a long slot: 2/W
    33.3333
    """
    p, q = np.broadcast_arrays(np.asarray(first, np.float64), np.asarray(second, np.float64))
    kx, ky = np.pi * p / width, np.pi * q / length
    k2 = kx * kx + ky * ky
    c, s = _shares(np.sqrt(k2) * depth)
    # mean squares over a side: cos^2 has 1/2, or 1 where the mode does not vary along it; at a wall cos^2 = 1
    along_x, along_y = np.where(p > 0, 0.5, 1.0), np.where(q > 0, 0.5, 1.0)
    walls_x = 2.0 * length * ((1.0 - along_y) * ky * ky / k2 * c + along_y * s)  # at x = 0 and W
    walls_y = 2.0 * width * ((1.0 - along_x) * kx * kx / k2 * c + along_x * s)
    result: Real = (walls_x + walls_y) / (width * length * along_x * along_y)
    return result


def slot_wall_factor(wavenumber: npt.ArrayLike, *, width: float, depth: float) -> Real:
    """Return lambda_w of the waves across a long slot, 1/m: 2/W when deep.

    Examples
    --------
    >>> float(slot_wall_factor(np.pi / 0.01, width=0.01, depth=np.inf))
    200.0
    """
    k = np.asarray(wavenumber, np.float64)
    result: Real = 4.0 / width * _shares(k * depth)[1]
    return result
