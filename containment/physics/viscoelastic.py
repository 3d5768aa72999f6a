r"""Layer of a linearly viscoelastic liquid: the viscosity becomes a function of s, mu*(s).

Replace mu by mu*(s) in every harmonic: q^2 = k^2 + rho s/mu*(s), Z = mu* k z(q/k - 1, k h), z the reduced impedance of
a clean surface. Written with the product s mu*(s) and the quotient 1/mu*(s) nothing is infinite at s = 0, where
Kelvin-Voigt leaves a static elastic stiffness G Z0/mu beside gravity and tension.
"""

from dataclasses import dataclass
from typing import Self

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import InputError
from containment.physics.coefficient_bounds import CoefficientBounds
from containment.physics.surface_matrix import reduced_root, surface_entries, surface_matrix

__all__ = ["ComplexViscosity", "ViscoelasticLayer"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]


@dataclass(frozen=True, slots=True, kw_only=True)
class ComplexViscosity:
    r"""Linear viscoelastic liquid mu*(s) = solvent + polymer / (1 + relaxation s) + modulus / s, SI.

    Build it by `newtonian`, `maxwell`, `jeffreys` or `kelvin_voigt`.

    Attributes
    ----------
    solvent : float
        Viscosity that does not relax, Pa s.
    polymer : float
        Viscosity that relaxes, Pa s.
    relaxation : float
        Relaxation time lambda, s.
    modulus : float
        Elastic modulus G that never relaxes, Pa.

    Examples
    --------
    >>> liquid = ComplexViscosity.jeffreys(viscosity=2.0, relaxation=0.5, retardation=0.1)
    >>> complex(liquid.at(np.array(0.0)).round(12)), complex(liquid.at(np.array(1e12)).round(6))
    ((2+0j), (0.4+0j))
    """

    solvent: float
    polymer: float = 0.0
    relaxation: float = 0.0
    modulus: float = 0.0

    def __post_init__(self) -> None:
        for name in ("solvent", "polymer", "relaxation", "modulus"):
            value = getattr(self, name)
            if not 0.0 <= value < np.inf:
                raise InputError(f"{name} of a complex viscosity: {value}; it must be 0 or more and finite")
        if self.viscosity <= 0.0:
            raise InputError(f"viscosity: {self.viscosity} Pa s; it must be above 0")

    @classmethod
    def newtonian(cls, *, viscosity: float) -> Self:
        """Return a Newtonian liquid, mu* = mu."""
        return cls(solvent=viscosity)

    @classmethod
    def maxwell(cls, *, viscosity: float, relaxation: float) -> Self:
        """Return a Maxwell liquid, mu* = mu / (1 + lambda s)."""
        return cls(solvent=0.0, polymer=viscosity, relaxation=relaxation)

    @classmethod
    def jeffreys(cls, *, viscosity: float, relaxation: float, retardation: float) -> Self:
        """Return a Jeffreys (Oldroyd-B) liquid, mu* = mu (1 + lambda_2 s) / (1 + lambda s), 0 <= lambda_2 <= lambda.

        Raises
        ------
        InputError
            The retardation time exceeds the relaxation time, or the relaxation time is 0.
        """
        if not 0.0 <= retardation <= relaxation or relaxation == 0.0:
            raise InputError(
                f"retardation time: {retardation} s; it must lie between 0 and the relaxation time, {relaxation} s"
            )
        solvent = viscosity * retardation / relaxation
        return cls(solvent=solvent, polymer=viscosity - solvent, relaxation=relaxation)

    @classmethod
    def kelvin_voigt(cls, *, viscosity: float, modulus: float) -> Self:
        """Return a Kelvin-Voigt solid, mu* = mu + G/s: a gel that recovers its shape."""
        return cls(solvent=viscosity, modulus=modulus)

    @property
    def viscosity(self) -> float:
        """Viscosity to slow motion, without the elastic part, Pa s."""
        return self.solvent + self.polymer

    def at(self, s: npt.ArrayLike) -> Complex:
        """Return mu*(s), Pa s; infinite at s = 0 where there is an elastic modulus."""
        s = np.asarray(s, np.complex128)
        value: Complex = self._relaxing(s)[0]
        if self.modulus:
            value = value + self.modulus / s
        return value

    def product(self, s: Complex) -> tuple[Complex, Complex]:
        """Return s mu*(s), Pa, and its slope, Pa s."""
        value, slope = self._relaxing(s)
        return s * value + self.modulus, value + s * slope

    def inverse(self, s: Complex) -> tuple[Complex, Complex]:
        """Return 1/mu*(s), 1/(Pa s), and its slope, 1/Pa."""
        value, slope = self._relaxing(s)
        if not self.modulus:
            return 1.0 / value, -slope / (value * value)
        whole = s * value + self.modulus
        return s / whole, (self.modulus - s * s * slope) / (whole * whole)

    def _relaxing(self, s: Complex) -> tuple[Complex, Complex]:
        """Return mu* without its elastic part, and the slope."""
        share = 1.0 / (1.0 + self.relaxation * s)
        return self.solvent + self.polymer * share, -self.polymer * self.relaxation * share * share


@dataclass(frozen=True, slots=True, kw_only=True)
class ViscoelasticLayer:
    """A layer of a linearly viscoelastic liquid on a rigid no-slip base, clean surface, SI.

    Parameters
    ----------
    density, surface_tension, depth, gravity : float
        As for `containment.physics.dispersion.Layer`.
    liquid : ComplexViscosity
        mu*(s).

    Notes
    -----
    Linear viscoelasticity: strains of the moving surface small enough for the moduli to be constant. The state at rest
    carries no stress. For a Kelvin-Voigt gel that state is taken as the shape in which it set.

    References
    ----------
    Kumar, S. (1999), Phys. Fluids 11, 1970-1981; Mueller, H. W. & Zimmermann, W. (1999), Europhys. Lett. 45, 169-174
    (both from memory).

    Examples
    --------
    >>> gel = ComplexViscosity.kelvin_voigt(viscosity=1.0, modulus=50.0)
    >>> layer = ViscoelasticLayer(density=1e3, surface_tension=0.03, depth=np.inf, liquid=gel)
    >>> round(float(layer.stiffness(np.array(200.0))), 2)  # -rho g + gamma k^2 + 2 G k
    11393.35
    """

    density: float
    surface_tension: float
    depth: float
    liquid: ComplexViscosity
    gravity: float = -STANDARD_GRAVITY

    @property
    def viscosity(self) -> float:
        """Viscosity to slow motion, Pa s."""
        return self.liquid.viscosity

    def stiffness(self, wavenumber: npt.ArrayLike) -> Real:
        """Return rho G0 + gamma k^2 + G Z0/mu, Pa/m: negative where the layer at rest falls."""
        k = np.asarray(wavenumber, np.float64)
        elastic = self.liquid.modulus * self._slow_values(k)[0] if self.liquid.modulus else 0.0
        return self.density * self.gravity + self.surface_tension * k * k + elastic

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k), m/s^2, for complex s (1/s) and wavenumber k (1/m); the two broadcast."""
        s = np.asarray(s, np.complex128)
        k = np.asarray(wavenumber, np.float64)
        x = reduced_root(self.density / (k * k) * s * self.liquid.inverse(s)[0])
        m = surface_entries(x, k * self.depth)
        z = m.normal - m.coupling * m.coupling / m.tangential
        at_rest = self.density * self.gravity + self.surface_tension * k * k
        return 2.0 / self.density * (at_rest + k * self.liquid.product(s)[0] * z)

    def coefficient_and_slope(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> tuple[Complex, Complex]:
        """Return A(s; k) and dA/ds."""
        s = np.asarray(s, np.complex128)
        k = np.asarray(wavenumber, np.float64)
        product, product_s = self.liquid.product(s)
        inverse, inverse_s = self.liquid.inverse(s)
        scale = self.density / (k * k)
        x = reduced_root(scale * s * inverse)
        z, z_x = _clean(x, k * self.depth)
        x_s = scale * (inverse + s * inverse_s) / (2.0 * (1.0 + x))
        factor = 2.0 / self.density
        at_rest = self.density * self.gravity + self.surface_tension * k * k
        return factor * (at_rest + k * product * z), factor * k * (product_s * z + product * z_x * x_s)

    def static_impedance(self, wavenumber: npt.ArrayLike) -> Real:
        """Return the resistance that Re(S/s) never falls below for Re s >= 0, Pa s/m: that of the solvent alone.

        It is 0 for a Maxwell liquid, which at high frequency is an elastic solid without losses.
        """
        return self.liquid.solvent * self._slow_values(np.asarray(wavenumber, np.float64))[0]

    def inertia(self, wavenumber: npt.ArrayLike) -> Real:
        """Return rho times the squared norm of the slow velocity field of unit surface speed, kg/m^2."""
        return self._slow_values(np.asarray(wavenumber, np.float64))[1]

    def added_mass(self, wavenumber: npt.ArrayLike) -> Real:
        """Return a proven lower bound of Im(Z + c/s) / Im s + c / abs(s)^2 over Re s >= 0, kg/m^2.

        Newtonian: no field of unit surface speed has less kinetic energy than the potential flow (Kelvin). Elasticity
        acts as a spring of unknown share in the motion: nothing is proven, and 0 returned.
        """
        k = np.asarray(wavenumber, np.float64)
        if self.liquid.modulus or self.liquid.polymer:
            return np.zeros_like(k)
        result: Real = self.density / (k * np.tanh(k * self.depth))
        return result

    def bounds(self, wavenumber: npt.ArrayLike) -> CoefficientBounds:
        """Return the constants of the proven bound of the coefficient; see `smallest_coefficient`."""
        k = np.asarray(wavenumber, np.float64)
        z0, z1 = self._slow_values(k)
        simple = self.liquid.polymer == 0.0 and self.liquid.modulus == 0.0
        quarter_wave = 0.5 * np.pi / self.depth
        reach = 0.5 * self.liquid.solvent / self.density * (k * k + quarter_wave * quarter_wave)
        return CoefficientBounds(
            stiffness=self.stiffness(k),
            floor=self.liquid.solvent * z0,
            resistance=self.liquid.viscosity * z0,
            inertia=z1 if simple else 2.0 * z1,
            reach=np.inf if simple else reach,
        )

    def smallest_coefficient(self, wavenumber: npt.ArrayLike) -> Real:
        r"""Return a proven lower bound of abs(A(s; k)), m/s^2, over all s with Re s >= 0.

        `containment.physics.coefficient_bounds` with these constants, z0 = Z0/mu:

        - floor: for Re s >= 0 the real parts of 1/(1 + lambda s) and of G/s are not negative, so Re mu* >= solvent;
        - small s: s Z = s mu* z0 + s^2 rho (v, v0). The first term is G z0, counted with the stiffness, and at most
          (solvent + polymer) z0 abs(s). In the second, abs(1 + s rho/(mu* ell)) >= 1 - abs(s) rho/(abs(mu*) ell) with
          abs(mu*) >= Re mu* >= solvent; while abs(s) <= solvent ell_1/(2 rho) that is at least 1/2, and the inertia is
          at most 2 Z1. ell_1, the smallest eigenvalue of the Stokes operator, is at least k^2 + (pi/2h)^2: with no
          tangential stress and no normal velocity at a flat surface 2 abs(e)^2 integrates to abs(grad v)^2, and every
          component vanishes at the base.

        Without a solvent (Maxwell) nothing is dissipated at high frequency, resonances have no lower bound that is
        known here, and the bound returned is 0: every mode must then be evaluated.
        """
        return 2.0 / self.density * self.bounds(wavenumber).smallest()

    def averaged_threshold(self, wavenumber: npt.ArrayLike, frequency: npt.ArrayLike) -> Real:
        """Return the leading-order (time-averaged) estimate of the acceleration that holds k, m/s^2.

        The static elasticity of a gel counts; that of its fast motion does not.
        """
        k = np.asarray(wavenumber, np.float64)
        w = 2.0 * np.pi * np.asarray(frequency, np.float64)
        driving = np.maximum(-self.stiffness(k), 0.0) / self.density
        result: Real = w * np.sqrt(2.0 * driving / (k * np.tanh(k * self.depth)))
        return result

    def _slow_values(self, k: Real) -> tuple[Real, Real]:
        """Return Z0/mu, 1/m, and Z1, kg/m^2, of slow motion: neither depends on the viscosity."""
        z, z_x = _clean(np.zeros(k.shape, np.complex128), k * self.depth)
        return k * z.real, 0.5 * self.density / k * z_x.real


def _clean(x: Complex, kh: Real) -> tuple[Complex, Complex]:
    """Return the reduced impedance of a clean surface, Z/(mu* k), and its slope by x."""
    m, m_x = surface_matrix(x, kh)
    ratio = m.coupling / m.tangential
    return m.normal - ratio * m.coupling, m_x.normal - ratio * (2.0 * m_x.coupling - ratio * m_x.tangential)
