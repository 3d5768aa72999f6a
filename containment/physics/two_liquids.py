r"""Interface between two viscous liquids of finite depth, each on its own rigid wall: the general matching.

The eight unknowns of the two velocity fields reduce to the interface's two velocities: each layer answers with its
matrix M (`containment.physics.surface_matrix`). The mirror image of a layer turns the sign of M12 only, so

    Z = M11 + M11' - (M12 - M12')^2 / (M22 + M22')

where the prime marks the second liquid. The interface rises against (rho - rho') G0 + gamma k^2, and the base's motion
works on rho - rho' alike, so the coefficient of a harmonic is

    A(s; k) = (2 / abs(rho - rho')) [ (rho - rho') G0 + gamma k^2 + s Z ]
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import InputError
from containment.physics.coefficient_bounds import CoefficientBounds
from containment.physics.surface_matrix import layer_entries, layer_matrix

__all__ = ["TwoLiquids"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]


@dataclass(frozen=True, slots=True, kw_only=True)
class TwoLiquids:
    """A layer on the base and a second liquid beyond its free side, each on a rigid no-slip wall, SI.

    Parameters
    ----------
    layer_density, layer_viscosity, layer_depth : float
        rho, kg/m^3; mu, Pa s; h, m (may be infinite) of the layer on the base.
    beyond_density, beyond_viscosity, beyond_depth : float
        The same of the second liquid, between the interface and the opposite wall.
    interfacial_tension : float
        gamma, N/m.
    gravity : float, optional
        G0, m/s^2, along the inward normal of the layer: negative (default) where the layer hangs over the second
        liquid, positive where it lies under it.

    Raises
    ------
    InputError
        The densities are equal: vertical shaking then does nothing to the interface.

    Notes
    -----
    Newtonian immiscible liquids, clean interface, small slopes, walls at rest in the shaken frame.

    References
    ----------
    Kumar, K. & Tuckerman, L. S. (1994), J. Fluid Mech. 279, 49-68 (two layers of finite depth; from memory).

    Examples
    --------
    >>> pair = TwoLiquids(
    ...     layer_density=1346.0, layer_viscosity=7.2e-3, layer_depth=1.6e-3,
    ...     beyond_density=949.0, beyond_viscosity=20e-3, beyond_depth=8.4e-3,
    ...     interfacial_tension=0.035, gravity=9.80665,
    ... )
    >>> round(float(pair.stiffness(np.array(500.0))), 1)
    12643.2
    """

    layer_density: float
    layer_viscosity: float
    layer_depth: float
    beyond_density: float
    beyond_viscosity: float
    beyond_depth: float
    interfacial_tension: float
    gravity: float = -STANDARD_GRAVITY

    def __post_init__(self) -> None:
        if self.layer_density == self.beyond_density:
            raise InputError(
                f"density below the layer: {self.beyond_density} kg/m^3; it must differ from the layer's, or shaking "
                "does nothing to the interface"
            )

    @property
    def density(self) -> float:
        """Difference of the densities without its sign, kg/m^3: what scales the coefficient, A = (2/density) S."""
        return abs(self.layer_density - self.beyond_density)

    @property
    def depth(self) -> float:
        """Smaller of the two depths, m."""
        return min(self.layer_depth, self.beyond_depth)

    def stiffness(self, wavenumber: npt.ArrayLike) -> Real:
        """Return (rho - rho') G0 + gamma k^2, Pa/m: negative where the interface at rest overturns."""
        k = np.asarray(wavenumber, dtype=np.float64)
        return (self.layer_density - self.beyond_density) * self.gravity + self.interfacial_tension * k * k

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k), m/s^2, for complex s (1/s) and wavenumber k (1/m); the two broadcast."""
        s = np.asarray(s, np.complex128)
        k = np.asarray(wavenumber, np.float64)
        near = layer_entries(
            s, k, density=self.layer_density, viscosity=self.layer_viscosity, depth=self.layer_depth
        )
        far = layer_entries(
            s, k, density=self.beyond_density, viscosity=self.beyond_viscosity, depth=self.beyond_depth
        )
        coupling = near.coupling - far.coupling
        z = near.normal + far.normal - coupling * coupling / (near.tangential + far.tangential)
        return 2.0 / self.density * (self.stiffness(k) + s * z)

    def coefficient_and_slope(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> tuple[Complex, Complex]:
        """Return A(s; k) and dA/ds."""
        s = np.asarray(s, np.complex128)
        k = np.asarray(wavenumber, np.float64)
        z, slope = self._impedance(s, k)
        factor = 2.0 / self.density
        return factor * (self.stiffness(k) + s * z), factor * (z + s * slope)

    def static_impedance(self, wavenumber: npt.ArrayLike) -> Real:
        """Return Z(0; k), Pa s/m: the resistance of both liquids to slow motion of the interface."""
        k = np.asarray(wavenumber, np.float64)
        return self._impedance(np.zeros(k.shape, np.complex128), k)[0].real.copy()

    def inertia(self, wavenumber: npt.ArrayLike) -> Real:
        """Return dZ/ds at s = 0, kg/m^2: the density-weighted squared norm of the slow field of both liquids."""
        k = np.asarray(wavenumber, np.float64)
        return self._impedance(np.zeros(k.shape, np.complex128), k)[1].real.copy()

    def added_mass(self, wavenumber: npt.ArrayLike) -> Real:
        """Return a proven lower bound of Im(Z + c/s) / Im s + c / abs(s)^2 over Re s >= 0, kg/m^2.

        No field of unit interface speed has less kinetic energy than the potential flow of both liquids (Kelvin).
        """
        k = np.asarray(wavenumber, np.float64)
        near, far = np.tanh(k * self.layer_depth), np.tanh(k * self.beyond_depth)
        return (self.layer_density / near + self.beyond_density / far) / k

    def bounds(self, wavenumber: npt.ArrayLike) -> CoefficientBounds:
        """Return the constants of the proven bound of the coefficient."""
        z0 = self.static_impedance(wavenumber)
        return CoefficientBounds(
            stiffness=self.stiffness(wavenumber), floor=z0, resistance=z0, inertia=self.inertia(wavenumber)
        )

    def smallest_coefficient(self, wavenumber: npt.ArrayLike) -> Real:
        """Return a proven lower bound of abs(A(s; k)), m/s^2, over all s with Re s >= 0.

        The derivation of `containment.physics.coefficient_bounds` holds word for word with the fields of both liquids
        together: velocity and stress are continuous at the interface, the Stokes operator is self-adjoint in the inner
        product weighted with the density, and both liquids only dissipate and store kinetic energy.
        """
        return 2.0 / self.density * self.bounds(wavenumber).smallest()

    def averaged_threshold(self, wavenumber: npt.ArrayLike, frequency: npt.ArrayLike) -> Real:
        """Return the leading-order (time-averaged) estimate of the acceleration that holds k, m/s^2.

        a^2 > 2 w^2 (-c) [rho coth(k h) + rho' coth(k h')] / [k (rho - rho')^2], c the stiffness.
        """
        k = np.asarray(wavenumber, np.float64)
        w = 2.0 * np.pi * np.asarray(frequency, np.float64)
        driving = np.maximum(-self.stiffness(k), 0.0)
        result: Real = w / self.density * np.sqrt(2.0 * driving * self.added_mass(k))
        return result

    def _impedance(self, s: Complex, k: Real) -> tuple[Complex, Complex]:
        """Return Z and dZ/ds."""
        near, near_s = layer_matrix(
            s, k, density=self.layer_density, viscosity=self.layer_viscosity, depth=self.layer_depth
        )
        far, far_s = layer_matrix(
            s, k, density=self.beyond_density, viscosity=self.beyond_viscosity, depth=self.beyond_depth
        )
        ratio = (near.coupling - far.coupling) / (near.tangential + far.tangential)
        z = near.normal + far.normal - ratio * (near.coupling - far.coupling)
        slope = near_s.normal + far_s.normal - ratio * (
            2.0 * (near_s.coupling - far_s.coupling) - ratio * (near_s.tangential + far_s.tangential)
        )
        return z, slope

