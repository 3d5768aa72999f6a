r"""Response of a viscous layer on a rigid base to a motion of its free surface: exact linear theory, one fluid.

A surface displacement zeta exp(s t) of wavenumber k meets the normal stress Z(s; k) s zeta, with Z the impedance of
the layer. With it the coefficient of the harmonic s in a shaken layer is

    A(s; k) = (2 / rho) [ rho G0 + gamma k^2 + s Z(s; k) ],      F(s) = s k^2 Z(s)

The textbook form of F is a quotient of two expressions that both vanish as s -> 0, the numerator twice. Here both are
expanded in x = q/k - 1, with q^2 = k^2 + s/nu, and the common factors are cancelled by hand, so that nothing is lost
at small s, and only decaying exponentials are left, so that nothing overflows:

    Z = mu k [ p1 (1 + E^2) + 2 p2 E + p3 G^2 ] / { (2 + x) [ 1 - E^2 - (2 + x) (e + eq) G ] }
    e = exp(-k h),  eq = exp(-q h),  E = e eq,  G = (e - eq) / x
    p1 = 4 + 8 x + 4 x^2 + x^3,  p2 = p1 + 2 x^2,  p3 = (2 + x) (8 + 12 x + 8 x^2 + 4 x^3 + x^4)

Deep layer: Z -> mu k p1 / (2 + x). Quasi-steady: Z(0) = 2 mu k (cosh 2kh + 1 + 2 k^2 h^2) / (sinh 2kh - 2kh).
"""

from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY

__all__ = ["Layer"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

_SERIES_BELOW: Final = 0.3
"""Below this |(q + k) h| the denominator comes from its series: the closed form loses 12 digits at 1e-6."""

_DEEP_FROM: Final = 20.0
"""From this k h on the base is not felt: what it adds is of relative size (k h)^2 exp(-2 k h) < 2e-15."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Layer:
    """A layer of one liquid on a rigid no-slip base, free surface on the other side, SI.

    Parameters
    ----------
    density : float
        rho, kg/m^3.
    viscosity : float
        Dynamic viscosity mu, Pa s; positive.
    surface_tension : float
        gamma, N/m; may be 0.
    depth : float
        h, m; may be infinite.
    gravity : float, optional
        G0, m/s^2, along the inward normal of the surface: negative for an inverted layer (default), positive for an
        upright one.

    Notes
    -----
    Newtonian liquid, clean surface, small slopes, side walls without drag.

    References
    ----------
    Kumar, K. & Tuckerman, L. S. (1994), J. Fluid Mech. 279, 49-68. Kumar, K. (1996), Proc. R. Soc. A 452, 1113-1126.

    Examples
    --------
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> round(float(layer.static_impedance(np.array(100.0))), 1)  # Pa s/m; 2 mu k would be 2000
    2255.5
    """

    density: float
    viscosity: float
    surface_tension: float
    depth: float
    gravity: float = -STANDARD_GRAVITY

    def stiffness(self, wavenumber: npt.ArrayLike) -> Real:
        """Return rho G0 + gamma k^2, Pa/m: negative where the layer at rest falls."""
        k = np.asarray(wavenumber, dtype=np.float64)
        return self.density * self.gravity + self.surface_tension * k * k

    def impedance(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return Z(s; k), Pa s/m, for complex s (1/s) and wavenumber k (1/m); the two broadcast."""
        k = np.asarray(wavenumber, np.float64)
        return self._impedance(np.asarray(s, np.complex128), k)

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k), m/s^2, for complex s (1/s) and wavenumber k (1/m); the two broadcast."""
        s = np.asarray(s, np.complex128)
        k = np.asarray(wavenumber, np.float64)
        result: Complex = self._impedance(s, k) * s
        result += self.stiffness(k)
        result *= 2.0 / self.density
        return result

    def coefficient_and_slope(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> tuple[Complex, Complex]:
        """Return A(s; k) and dA/ds."""
        s = np.asarray(s, np.complex128)
        k = np.asarray(wavenumber, np.float64)
        z, slope = self._impedance_and_slope(s, k)
        factor = 2.0 / self.density
        return factor * (self.stiffness(k) + s * z), factor * (z + s * slope)

    def static_impedance(self, wavenumber: npt.ArrayLike) -> Real:
        """Return Z(0; k), Pa s/m: the resistance of the layer to slow motion."""
        k = np.asarray(wavenumber, np.float64)
        return self._impedance(np.zeros(k.shape, np.complex128), k).real.copy()

    def inertia(self, wavenumber: npt.ArrayLike) -> Real:
        """Return dZ/ds at s = 0, kg/m^2: rho times the squared norm of the slow velocity field of unit surface speed."""
        k = np.asarray(wavenumber, np.float64)
        return self._impedance_and_slope(np.zeros(k.shape, np.complex128), k)[1].real.copy()

    def added_mass(self, wavenumber: npt.ArrayLike) -> Real:
        """Return rho / (k tanh kh), kg/m^2: the inertia that every motion of the surface carries at least (Kelvin)."""
        k = np.asarray(wavenumber, np.float64)
        result: Real = self.density / (k * np.tanh(k * self.depth))
        return result

    def smallest_coefficient(self, wavenumber: npt.ArrayLike) -> Real:
        r"""Return a proven lower bound of abs(A(s; k)), m/s^2, over all s with Re s >= 0.

        Where the layer at rest is unstable to k, A has a zero and the bound is 0. Otherwise let c be the stiffness.

        1. The power that drives the surface is dissipated or stored: for unit surface speed, with v the velocity field,
           Z = integral of (s rho abs(v)^2 + 2 mu abs(e)^2). No field of unit surface speed dissipates less than the slow
           one (Helmholtz), so Re Z(s) >= Z0 = Z(0), hence abs(c + s Z) = abs(s) abs(Z + c/s) >= abs(s) Z0.
        2. By reciprocity Z(s) - Z0 = s rho (v, v0), v0 the slow field. In the decaying fields of the layer with its
           surface at rest (rates l_j > 0) v - v0 = -sum of s/(s + l_j) (v0, f_j) f_j, so (v, v0) is the part of
           norm(v0)^2 outside their span plus the sum of l_j/(s + l_j) abs((v0, f_j))^2, and abs((v, v0)) <= norm(v0)^2.
           Hence abs(Z) <= Z0 + abs(s) Z1 with Z1 = Z'(0) = rho norm(v0)^2, and abs(c + s Z) >= c - abs(s) Z0 -
           abs(s)^2 Z1.

        The first grows and the second falls with abs(s); they cross at Z1 x^2 + 2 Z0 x = c, and
        abs(A) >= (2/rho) Z0 x for every s.

        A mode with smallest_coefficient > 2 a cannot grow at peak acceleration a, whatever the frequency: its rows
        A_n zeta_n = a (zeta_{n-1} + zeta_{n+1}) are diagonally dominant for every s with Re s >= 0.
        """
        k = np.asarray(wavenumber, np.float64)
        c = np.maximum(self.stiffness(k), 0.0)
        z0, z1 = self.static_impedance(k), self.inertia(k)
        x = c / (z0 + np.sqrt(z0 * z0 + z1 * c))
        result: Real = 2.0 / self.density * z0 * x
        return result

    def averaged_threshold(self, wavenumber: npt.ArrayLike, frequency: npt.ArrayLike) -> Real:
        """Return the leading-order (time-averaged) estimate of the acceleration that holds k, m/s^2.

        A^2 w^2 > 2 (g - gamma k^2/rho) / (k tanh kh): an explanation beside the exact value, and often far too low.
        """
        k = np.asarray(wavenumber, np.float64)
        w = 2.0 * np.pi * np.asarray(frequency, np.float64)
        driving = np.maximum(-self.stiffness(k), 0.0) / self.density
        result: Real = w * np.sqrt(2.0 * driving / (k * np.tanh(k * self.depth)))
        return result

    def _impedance(self, s: Complex, k: Real) -> Complex:
        deep = k * self.depth >= _DEEP_FROM
        if k.ndim == 1 and s.ndim >= 1 and deep.any() and not deep.all():
            # deep modes need no exponentials, which is most of the work
            shape = np.broadcast_shapes(s.shape, k.shape)
            whole = np.broadcast_to(s, shape)
            result = np.empty(shape, np.complex128)
            for part in (np.flatnonzero(deep), np.flatnonzero(~deep)):
                result[..., part] = self._impedance(whole[..., part], k[part])
            return result
        x = s / ((self.viscosity / self.density) * k * k)
        x /= 1.0 + np.sqrt(1.0 + x)
        two = x + 2.0
        p1 = x + 4.0
        p1 *= x
        p1 += 8.0
        p1 *= x
        p1 += 4.0
        if deep.all():
            p1 *= self.viscosity * k
            p1 /= two
            return p1
        kh = k * self.depth
        e = np.exp(-kh)
        u = x * kh
        eu = np.exp(-u)
        big_g = _decay_quotient(u, eu)
        big_g *= e * kh
        both = eu * (e * e)
        squared = both * both
        p4 = p1 * x
        p4 += 8.0 * x
        p4 += 8.0
        numerator = p1 * (squared + 1.0)
        numerator += 2.0 * both * (p1 + 2.0 * x * x)
        numerator += two * p4 * big_g * big_g
        denominator = 1.0 - squared
        denominator -= two * big_g * (e * (1.0 + eu))
        shallow = np.abs(two * kh) < _SERIES_BELOW
        if shallow.any():
            denominator = np.where(shallow, _shallow_denominator(two * kh, u, both)[0], denominator)
        denominator *= two
        numerator /= denominator
        numerator *= self.viscosity * k
        impedance: Complex = numerator
        return impedance

    def _impedance_and_slope(self, s: Complex, k: Real) -> tuple[Complex, Complex]:
        nu = self.viscosity / self.density
        deep = k * self.depth >= _DEEP_FROM
        if k.ndim == 1 and s.ndim >= 1 and deep.any() and not deep.all():
            shape = np.broadcast_shapes(s.shape, k.shape)
            whole = np.broadcast_to(s, shape)
            both_of = np.empty((2, *shape), np.complex128)
            for part in (np.flatnonzero(deep), np.flatnonzero(~deep)):
                both_of[0][..., part], both_of[1][..., part] = self._impedance_and_slope(whole[..., part], k[part])
            return both_of[0], both_of[1]
        r = np.sqrt(1.0 + s / (nu * k * k))
        x = (s / (nu * k * k)) / (1.0 + r)
        two = 2.0 + x
        p1 = ((x + 4.0) * x + 8.0) * x + 4.0
        p1_x = (3.0 * x + 8.0) * x + 8.0
        scale = self.viscosity * k
        by_s = 1.0 / (2.0 * r * nu * k * k)
        if deep.all():
            z = scale * p1 / two
            return z, (scale * p1_x - z) / two * by_s
        kh = k * self.depth
        e = np.exp(-kh)
        u = x * kh
        eu = np.exp(-u)
        g = _decay_quotient(u, eu)
        big_g = (e * kh) * g
        eq = e * eu
        both = e * eq
        p2 = p1 + 2.0 * x * x
        p4 = p1 * x + 8.0 * x + 8.0
        numerator = p1 * (1.0 + both * both) + 2.0 * p2 * both + two * p4 * (big_g * big_g)
        denominator = 1.0 - both * both - two * (e + eq) * big_g
        eq_x = -kh * eq
        both_x = e * eq_x
        g_x = (e * kh * kh) * _decay_quotient_slope(u, eu, g)
        p4_x = p1_x * x + p1 + 8.0
        numerator_x = (
            p1_x * (1.0 + both * both) + 2.0 * p1 * both * both_x
            + 2.0 * ((p1_x + 4.0 * x) * both + p2 * both_x)
            + (p4 + two * p4_x) * (big_g * big_g) + 2.0 * two * p4 * big_g * g_x
        )
        denominator_x = -2.0 * both * both_x - (e + eq) * big_g - two * (eq_x * big_g + (e + eq) * g_x)
        shallow = np.abs(two * kh) < _SERIES_BELOW
        if shallow.any():
            value, along = _shallow_denominator(two * kh, u, both)
            denominator = np.where(shallow, value, denominator)
            denominator_x = np.where(shallow, along * kh, denominator_x)
        z = scale * numerator / (two * denominator)
        return z, z * (numerator_x / numerator - denominator_x / denominator - 1.0 / two) * by_s


def _decay_quotient(u: Complex, eu: Complex) -> Complex:
    """Return (1 - exp(-u)) / u."""
    small = np.abs(u) < 0.05
    if not small.any():
        return (1.0 - eu) / u
    result = np.ones_like(u)
    np.divide(1.0 - eu, u, out=result, where=~small)
    v = u[small]
    result[small] = 1.0 - v / 2.0 * (1.0 - v / 3.0 * (1.0 - v / 4.0 * (1.0 - v / 5.0 * (1.0 - v / 6.0 * (1.0 - v / 7.0)))))
    return result


def _decay_quotient_slope(u: Complex, eu: Complex, g: Complex) -> Complex:
    """Return d/du of (1 - exp(-u)) / u."""
    small = np.abs(u) < 0.05
    if not small.any():
        return (eu - g) / u
    result = np.ones_like(u)
    np.divide(eu - g, u, out=result, where=~small)
    v = u[small]
    # sum over j >= 1 of (-1)^j j v^(j-1) / (j + 1)!
    result[small] = -0.5 + v * (1 / 3 - v * (1 / 8 - v * (1 / 30 - v * (1 / 144 - v * (1 / 840 - v / 5760)))))
    return result


def _shallow_denominator(a: Complex, b: Complex, both: Complex) -> tuple[Complex, Complex]:
    """Return 2 exp(-a) (sinh a - a sinh(b)/b) from its series, and its slope where a and b grow together."""
    a2, b2 = a * a, b * b
    total = np.zeros_like(a)
    slope = np.zeros_like(a)
    factorial = 1.0
    for j in range(1, 8):
        factorial *= (2 * j) * (2 * j + 1)
        total = total + (a2**j - b2**j) / factorial
        slope = slope + (2 * j) * (a2 ** (j - 1) * a - b2 ** (j - 1) * b) / factorial
    value = 2.0 * both * a * total
    return value, value * (1.0 / a - 1.0) + 2.0 * both * a * slope
