r"""Drag of the side walls: the oscillating boundary layer added to the exact theory, which has free-slip walls.

The walls' boundary layer multiplies the inertia of a mode by 1 + lambda_w sqrt(nu/s), which adds

    s^2 rho lambda_w sqrt(nu/s) / (k tanh kh)

to the stress per displacement rho G0 + gamma k^2 + s Z. It weakens the hold of slow modes and damps waves: for a
cautious verdict take it for the lower side of the window and leave it out for the upper one.
"""

from collections.abc import Callable
from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.physics.coefficient_bounds import CoefficientBounds
from containment.physics.dispersion import Layer
from containment.physics.film import FilmedLayer
from containment.physics.viscoelastic import ViscoelasticLayer
from containment.physics.wall_factors import (
    annulus_wall_factor,
    box_wall_factor,
    cylinder_wall_factor,
    largest_cylinder_wall_factor,
    slot_wall_factor,
)
from containment.physics.wavenumbers import Spectrum

__all__ = [
    "DraggedLayer",
    "WallFactors",
    "annulus_wall_factors",
    "boundary_layer_share",
    "box_wall_factors",
    "cylinder_wall_factors",
    "slot_wall_factors",
]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

_SAME: Final = 1e-9
"""Relative distance below which two wavenumbers count as the same mode."""


def boundary_layer_share(frequency: npt.ArrayLike, *, kinematic_viscosity: float, width: float) -> Real:
    """Return sqrt(nu/w) / width: the drag of the walls is a boundary layer's while this is small, say below 0.1.

    Parameters
    ----------
    frequency : array_like
        Drive frequency, Hz.
    kinematic_viscosity, width : float
        nu, m^2/s, and the narrowest width of the vessel (a diameter, a gap), m.

    Examples
    --------
    >>> float(boundary_layer_share(50.0, kinematic_viscosity=1e-6, width=0.07).round(5))
    0.00081
    """
    w = 2.0 * np.pi * np.asarray(frequency, np.float64)
    result: Real = np.sqrt(kinematic_viscosity / w) / width
    return result


@dataclass(frozen=True, slots=True, eq=False)
class WallFactors:
    """lambda_w as a function of the wavenumber: looked up for the vessel's modes, a bound between and beyond them.

    The factor belongs to a mode, not to a wavenumber, but the thresholds ask by wavenumber. The modes are looked up by
    their wavenumber (to 1e-9 relative); where several share one (a square box, chance) the largest factor is taken. Any
    other wavenumber gets the value of `beyond`, which must be above the factor of every mode near it: more drag raises
    the lower side, so this is cautious there.

    Attributes
    ----------
    wavenumber : array, shape (modes,)
        In rising order, 1/m.
    factor : array, shape (modes,)
        lambda_w, 1/m.
    beyond : callable
        Factor for any other wavenumber, 1/m.
    """

    wavenumber: Real
    factor: Real
    beyond: Callable[[Real], Real]

    def __call__(self, wavenumber: npt.ArrayLike) -> Real:
        """Return lambda_w, 1/m, of each wavenumber."""
        k = np.asarray(wavenumber, np.float64)
        result = self.beyond(k)
        if not len(self.wavenumber):
            return result
        last = len(self.wavenumber) - 1
        left = np.searchsorted(self.wavenumber, k * (1.0 - _SAME)).clip(0, last)
        right = (np.searchsorted(self.wavenumber, k * (1.0 + _SAME), side="right") - 1).clip(0, last)
        # the modes left..right are within the tolerance; more than two are all looked at
        found = right >= left
        best = np.maximum(self.factor[left], self.factor[right])
        for step in range(1, int((right - left).max(initial=0))):
            best = np.maximum(best, self.factor[np.minimum(left + step, np.maximum(right, left))])
        near = found & (np.abs(self.wavenumber[left] - k) <= 2.0 * _SAME * k)
        result = np.where(near, best, result)
        return result


def cylinder_wall_factors(spectrum: Spectrum, *, radius: float, depth: float) -> WallFactors:
    """Return the factors of a round vessel's modes; between them the bound for waves along the wall.

    Examples
    --------
    >>> from containment.physics.wavenumbers import cylinder
    >>> modes = cylinder(0.035)
    >>> float(cylinder_wall_factors(modes, radius=0.035, depth=0.03)(modes.discrete[0]).round(2))
    44.79
    """
    factor = cylinder_wall_factor(spectrum.discrete, spectrum.first, radius=radius, depth=depth)
    return WallFactors(
        spectrum.discrete, factor, lambda k: largest_cylinder_wall_factor(np.maximum(k, 1.8 / radius), radius=radius)
    )


def box_wall_factors(spectrum: Spectrum, *, width: float, length: float, depth: float) -> WallFactors:
    """Return the factors of a rectangular vessel's modes; between them 4/W + 4/L, which no mode exceeds."""
    factor = box_wall_factor(spectrum.first, spectrum.second, width=width, length=length, depth=depth)
    return WallFactors(spectrum.discrete, factor, lambda k: np.full_like(k, 4.0 / width + 4.0 / length))


def annulus_wall_factors(spectrum: Spectrum, *, inner: float, outer: float, depth: float) -> WallFactors:
    """Return the factors of a ring-shaped vessel's modes; between them twice the largest (an estimate)."""
    factor = annulus_wall_factor(spectrum.discrete, spectrum.first, inner=inner, outer=outer, depth=depth)
    return WallFactors(spectrum.discrete, factor, lambda k: np.full_like(k, 2.0 * factor.max(initial=0.0)))


def slot_wall_factors(spectrum: Spectrum, *, width: float, depth: float) -> WallFactors:
    """Return the factors of the waves across a slot; the same formula at any other wavenumber."""
    factor = slot_wall_factor(spectrum.discrete, width=width, depth=depth)
    return WallFactors(spectrum.discrete, factor, lambda k: slot_wall_factor(k, width=width, depth=depth))




@dataclass(frozen=True, slots=True, kw_only=True, eq=False)
class DraggedLayer:
    """A layer of one liquid with the drag of the vessel's side walls.

    Parameters
    ----------
    layer : Layer, FilmedLayer or ViscoelasticLayer
        The layer between free-slip walls.
    wall_factor : callable
        lambda_w(k), 1/m, for arrays of wavenumbers: a `WallFactors`, or any function that gives each wavenumber its
        mode's factor.

    Notes
    -----
    Leading order in the thickness of the boundary layer: use it while sqrt(nu/w) is small against the width
    (`boundary_layer_share`). It knows nothing of the contact line, whose resistance is not small in a narrow vessel.
    For a slow mode (growth rate sigma) the boundary layer is sqrt(nu/sigma) thick and fills the vessel: the formula
    then underrates the drag, which is on the cautious side for the growth of a falling mode.

    References
    ----------
    Miles, J. W. (1967), Proc. R. Soc. A 297, 459-475 (surface-wave damping in closed basins; from memory).

    Examples
    --------
    >>> plain = Layer(density=1e3, viscosity=1e-2, surface_tension=0.05, depth=0.02)
    >>> dragged = DraggedLayer(layer=plain, wall_factor=lambda k: np.full_like(k, 2 / 0.05))
    >>> k = np.array([63.0])
    >>> bool(dragged.coefficient(300j, k).imag[0] > plain.coefficient(300j, k).imag[0])
    True
    """

    layer: Layer | FilmedLayer | ViscoelasticLayer
    wall_factor: Callable[[Real], Real]

    @property
    def density(self) -> float:
        """Density of the liquid, kg/m^3."""
        return self.layer.density

    @property
    def depth(self) -> float:
        """Depth of the layer, m."""
        return self.layer.depth

    def stiffness(self, wavenumber: npt.ArrayLike) -> Real:
        """Return the static stiffness, Pa/m; the walls do not change it."""
        return self.layer.stiffness(wavenumber)

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k), m/s^2, for complex s (1/s) and wavenumber k (1/m); the two broadcast."""
        s = np.asarray(s, np.complex128)
        return self.layer.coefficient(s, wavenumber) + self._drag(s, np.asarray(wavenumber, np.float64))[0]

    def coefficient_and_slope(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> tuple[Complex, Complex]:
        """Return A(s; k) and dA/ds."""
        s = np.asarray(s, np.complex128)
        value, slope = self.layer.coefficient_and_slope(s, wavenumber)
        drag, drag_slope = self._drag(s, np.asarray(wavenumber, np.float64))
        return value + drag, slope + drag_slope

    def static_impedance(self, wavenumber: npt.ArrayLike) -> Real:
        """Return the resistance that Re(S/s) never falls below for Re s >= 0, Pa s/m; the drag only adds to it."""
        return self.layer.static_impedance(wavenumber)

    def inertia(self, wavenumber: npt.ArrayLike) -> Real:
        """Return rho times the squared norm of the slow velocity field between free-slip walls, kg/m^2."""
        return self.layer.inertia(wavenumber)

    def added_mass(self, wavenumber: npt.ArrayLike) -> Real:
        """Return the layer's own bound, kg/m^2: the drag's imaginary part only adds to it for a Newtonian liquid."""
        k = np.asarray(wavenumber, np.float64)
        if isinstance(self.layer, Layer):
            result: Real = self.layer.density / (k * np.tanh(k * self.layer.depth))
            return result
        return self.layer.added_mass(k)

    def bounds(self, wavenumber: npt.ArrayLike) -> CoefficientBounds:
        """Return the constants of the proven bound of the coefficient; see `smallest_coefficient`."""
        k = np.asarray(wavenumber, np.float64)
        own = _own_bounds(self.layer, k)
        scale = self._scale(k)
        elastic = self.layer.liquid.modulus if isinstance(self.layer, ViscoelasticLayer) else 0.0
        return CoefficientBounds(
            stiffness=own.stiffness,
            floor=own.floor,
            resistance=own.resistance + scale * np.sqrt(elastic / self.density),
            inertia=own.inertia,
            drag=scale * np.sqrt(self.layer.viscosity / self.density),
            reach=own.reach,
        )

    def smallest_coefficient(self, wavenumber: npt.ArrayLike) -> Real:
        r"""Return a proven lower bound of abs(A(s; k)), m/s^2, over all s with Re s >= 0.

        With b = rho lambda_w/(k tanh kh) the drag adds T = b s^2 / sqrt(rho s/mu*). For Re s >= 0 and a passive liquid
        arg(mu*) lies between -arg(s) and 0 (arg(s) >= 0), so arg(T/s) = (arg s + arg mu*)/2 is between 0 and pi/4:
        Re(T/s) >= 0 and the layer's floor stays. And abs(T) = b abs(s) sqrt(abs(s mu*)/rho) <=
        b abs(s) [sqrt(mu abs(s)/rho) + sqrt(G/rho)], mu the viscosity to slow motion, G the modulus of a gel: terms of
        order 3/2 and 1 in the second bound of `containment.physics.coefficient_bounds`.
        """
        return 2.0 / self.density * self.bounds(wavenumber).smallest()

    def averaged_threshold(self, wavenumber: npt.ArrayLike, frequency: npt.ArrayLike) -> Real:
        """Return the leading-order (time-averaged) estimate of the acceleration that holds k, m/s^2; no drag in it."""
        return self.layer.averaged_threshold(wavenumber, frequency)

    def _scale(self, k: Real) -> Real:
        result: Real = self.density * self.wall_factor(k) / (k * np.tanh(k * self.depth))
        return result

    def _drag(self, s: Complex, k: Real) -> tuple[Complex, Complex]:
        """Return the drag's part of A and of its slope."""
        if isinstance(self.layer, ViscoelasticLayer):
            inverse, inverse_s = self.layer.liquid.inverse(s)
        else:
            inverse, inverse_s = np.full_like(s, 1.0 / self.layer.viscosity), np.zeros_like(s)
        # s^2 / sqrt(rho s / mu*): 0 at s = 0
        under = self.density * s * inverse
        under_s = self.density * (inverse + s * inverse_s)
        root = np.sqrt(np.where(s == 0.0, 1.0, under))
        value = s * s / root
        slope = (2.0 * s - 0.5 * s * s * under_s / np.where(s == 0.0, 1.0, under)) / root
        factor = 2.0 / self.density * self._scale(k)
        return factor * value, factor * slope


def _own_bounds(layer: Layer | FilmedLayer | ViscoelasticLayer, k: Real) -> CoefficientBounds:
    if not isinstance(layer, Layer):
        return layer.bounds(k)
    z0 = layer.static_impedance(k)
    return CoefficientBounds(stiffness=layer.stiffness(k), floor=z0, resistance=z0, inertia=layer.inertia(k))
