r"""Layer whose surface carries an elastic film (surfactant, skin): the tangential condition of the surface changes.

A film of dilational modulus E resists stretching: the tangential stress T = mu (w'' + k^2 w)/k at the surface becomes
-(E k^2 / s) v, v = w'/k. With the matrix of `containment.physics.surface_matrix`

    Z = M11 - s M12^2 / (s M22 + E k^2)

E = 0 is the clean surface, E -> infinity the inextensible film, Z = M11. Written like this nothing is 0/0 at s = 0.
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import InputError
from containment.physics.coefficient_bounds import CoefficientBounds
from containment.physics.surface_matrix import SurfaceMatrix, layer_entries, layer_matrix

__all__ = ["COVERED", "FilmedLayer"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

COVERED = np.inf
"""Modulus of an inextensible film."""


@dataclass(frozen=True, slots=True, kw_only=True)
class FilmedLayer:
    """A layer of one liquid on a rigid base with an insoluble elastic film on its surface, SI.

    Parameters
    ----------
    density, viscosity, surface_tension, depth, gravity : float
        As for `containment.physics.dispersion.Layer`; the tension is that of the covered surface at rest.
    film_modulus : float
        Dilational elastic modulus E, N/m: 0 clean, infinite (`COVERED`, default) inextensible.

    Raises
    ------
    InputError
        The modulus is negative or not a number.

    Notes
    -----
    Insoluble film without surface viscosity, modulus independent of frequency, small slopes. The film is felt at the
    drive frequency once E is not small against mu w / k, which for 1 Pa s at 50 Hz and a wavelength of 60 mm is 3 N/m:
    surfactants (some 0.1 N/m at most, from memory) matter for thin liquids, short waves and slow growth, where s is
    small; an inextensible film is rather a skin. Which modulus raises
    a threshold most depends on the case: the range from clean to inextensible is no proven bound on what lies between.

    References
    ----------
    Kumar, S. & Matar, O. K. (2004), J. Colloid Interface Sci. 273, 581-588 (surfactant-covered liquids under vertical
    vibration; from memory, not read for this). Derived anew from the momentum equations.

    Examples
    --------
    A thin film that creeps meets four times the resistance under a skin.

    >>> thin = {"density": 1e3, "viscosity": 1.0, "surface_tension": 0.03, "depth": 1e-4}
    >>> clean, skin = FilmedLayer(**thin, film_modulus=0.0), FilmedLayer(**thin, film_modulus=COVERED)
    >>> k = np.array(10.0)
    >>> round(float(skin.static_impedance(k) / clean.static_impedance(k)), 4)
    4.0
    """

    density: float
    viscosity: float
    surface_tension: float
    depth: float
    gravity: float = -STANDARD_GRAVITY
    film_modulus: float = COVERED

    def __post_init__(self) -> None:
        if not self.film_modulus >= 0.0:
            raise InputError(f"film modulus: {self.film_modulus} N/m; it must be 0 or more (infinite: inextensible)")

    def stiffness(self, wavenumber: npt.ArrayLike) -> Real:
        """Return rho G0 + gamma k^2, Pa/m: negative where the layer at rest falls, film or not."""
        k = np.asarray(wavenumber, dtype=np.float64)
        return self.density * self.gravity + self.surface_tension * k * k

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k), m/s^2, for complex s (1/s) and wavenumber k (1/m); the two broadcast."""
        s = np.asarray(s, np.complex128)
        k = np.asarray(wavenumber, np.float64)
        m = layer_entries(s, k, density=self.density, viscosity=self.viscosity, depth=self.depth)
        value = m.normal
        if self.film_modulus == 0.0:
            value = value - m.coupling * m.coupling / m.tangential
        elif np.isfinite(self.film_modulus):
            value = value - s * m.coupling * m.coupling / (s * m.tangential + self.film_modulus * k * k)
        return 2.0 / self.density * (self.stiffness(k) + s * value)

    def coefficient_and_slope(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> tuple[Complex, Complex]:
        """Return A(s; k) and dA/ds."""
        s = np.asarray(s, np.complex128)
        k = np.asarray(wavenumber, np.float64)
        m, m_s = self._matrix(s, k)
        value, slope = s * m.normal, m.normal + s * m_s.normal
        if self.film_modulus == 0.0:
            ratio = m.coupling / m.tangential
            value = value - s * ratio * m.coupling
            slope = slope - ratio * (m.coupling + s * (2.0 * m_s.coupling - ratio * m_s.tangential))
        elif np.isfinite(self.film_modulus):
            share = s * m.coupling / (s * m.tangential + self.film_modulus * k * k)
            value = value - share * s * m.coupling
            slope = slope - share * (
                2.0 * (m.coupling + s * m_s.coupling) - share * (m.tangential + s * m_s.tangential)
            )
        factor = 2.0 / self.density
        return factor * (self.stiffness(k) + value), factor * slope

    def static_impedance(self, wavenumber: npt.ArrayLike) -> Real:
        """Return the resistance that Re Z never falls below for Re s >= 0, Pa s/m.

        Slow motion meets it for a clean surface and for an inextensible film. Under a film of finite modulus slow
        motion meets the inextensible value, but fast motion may not, so the clean value is returned.
        """
        return self._slow_values(np.asarray(wavenumber, np.float64))[0]

    def inertia(self, wavenumber: npt.ArrayLike) -> Real:
        """Return rho times the squared norm of the slow velocity field of unit surface speed, kg/m^2."""
        return self._slow_values(np.asarray(wavenumber, np.float64))[1]

    def added_mass(self, wavenumber: npt.ArrayLike) -> Real:
        """Return a proven lower bound of Im(Z + c/s) / Im s + c / abs(s)^2 over Re s >= 0, kg/m^2.

        No field of unit surface speed has less kinetic energy than the potential flow (Kelvin), rho / (k tanh kh). A
        film of finite modulus acts as a spring of unknown share in the motion: nothing is proven, and 0 returned.
        """
        k = np.asarray(wavenumber, np.float64)
        if 0.0 < self.film_modulus < np.inf:
            return np.zeros_like(k)
        result: Real = self.density / (k * np.tanh(k * self.depth))
        return result

    def bounds(self, wavenumber: npt.ArrayLike) -> CoefficientBounds:
        """Return the constants of the proven bound of the coefficient; see `smallest_coefficient`."""
        k = np.asarray(wavenumber, np.float64)
        z0, z1 = self._slow_values(k)
        heavy = z1
        if 0.0 < self.film_modulus < np.inf:
            m, m_s = self._matrix(np.zeros(k.shape, np.complex128), k)
            heavy = z0 * _largest_ratio(m_s, m)
        return CoefficientBounds(stiffness=self.stiffness(k), floor=z0, resistance=z0, inertia=heavy)

    def smallest_coefficient(self, wavenumber: npt.ArrayLike) -> Real:
        r"""Return a proven lower bound of abs(A(s; k)), m/s^2, over all s with Re s >= 0.

        Clean and inextensible: as in `containment.physics.coefficient_bounds` with the slow field of each.

        In between: the stress per displacement is S = c + E k^2 abs(v)^2 + s x^H M(s) x with x = (1, v), v the
        tangential velocity of the solution, because the tangential balance makes the second component vanish. With
        fixed surface velocities x, x^H M(s) x = r + s n(s), r = x^H M(0) x, abs(n) <= x^H M'(0) x <= q r, where q is
        the largest eigenvalue of M'(0) relative to M(0). So abs(S) >= abs(s) r and abs(S) >= c - abs(s) r -
        abs(s)^2 q r, hence abs(S) >= r y with q y^2 + 2 y = c/r. As y(c/r) is concave and 0 at 0, r y(c/r) does not
        fall when r grows, and r is at least its minimum over v, the clean Z0: the bound is Z0 y with Z0 q for the
        inertia.
        """
        return 2.0 / self.density * self.bounds(wavenumber).smallest()

    def averaged_threshold(self, wavenumber: npt.ArrayLike, frequency: npt.ArrayLike) -> Real:
        """Return the leading-order (time-averaged) estimate of the acceleration that holds k, m/s^2; no film in it."""
        k = np.asarray(wavenumber, np.float64)
        w = 2.0 * np.pi * np.asarray(frequency, np.float64)
        driving = np.maximum(-self.stiffness(k), 0.0) / self.density
        result: Real = w * np.sqrt(2.0 * driving / (k * np.tanh(k * self.depth)))
        return result

    def _matrix(self, s: Complex, k: Real) -> tuple[SurfaceMatrix, SurfaceMatrix]:
        """Return M and dM/ds."""
        return layer_matrix(s, k, density=self.density, viscosity=self.viscosity, depth=self.depth)

    def _slow_values(self, k: Real) -> tuple[Real, Real]:
        m, m_s = self._matrix(np.zeros(k.shape, np.complex128), k)
        z0, z1 = m.normal.real, m_s.normal.real
        if np.isfinite(self.film_modulus):
            ratio = m.coupling.real / m.tangential.real
            z0 = z0 - ratio * m.coupling.real
            z1 = z1 - ratio * (2.0 * m_s.coupling.real - ratio * m_s.tangential.real)
        return z0.copy(), z1.copy()


def _largest_ratio(slope: SurfaceMatrix, static: SurfaceMatrix) -> Real:
    """Return the largest eigenvalue of the 2 x 2 slope relative to the static matrix, s."""
    a, b, d = static.normal.real, static.coupling.real, static.tangential.real
    p, q, r = slope.normal.real, slope.coupling.real, slope.tangential.real
    below = a * d - b * b
    half = 0.5 * (p * d + r * a - 2.0 * q * b)
    # the discriminant is non-negative for symmetric positive matrices; rounding may leave it just below 0
    result: Real = (half + np.sqrt(np.maximum(half * half - below * (p * r - q * q), 0.0))) / below
    return result
