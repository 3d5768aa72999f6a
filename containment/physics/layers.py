"""The models of a layer, chosen by what is on it and under it."""

from collections.abc import Callable, Mapping
from typing import Any, Protocol

import numpy as np
import numpy.typing as npt

from containment.physics.dispersion import Layer
from containment.physics.exclusion import BoundedLayer

__all__ = ["LayerModel", "layer_model"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]


class LayerModel(BoundedLayer, Protocol):
    """What every model of a layer offers: coefficients, their slopes, floors, and the averaged estimate."""

    def coefficient_and_slope(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> tuple[Complex, Complex]:
        """Return A(s; k) and dA/ds."""
        ...

    def averaged_threshold(self, wavenumber: npt.ArrayLike, frequency: npt.ArrayLike) -> Real:
        """Return the time-averaged estimate of the acceleration that holds k, m/s^2."""
        ...


def layer_model(
    *,
    density: float,
    viscosity: float,
    tension: float,
    depth: float,
    gravity: float,
    film_modulus: float | None = None,
    below: tuple[float, float, float] | None = None,
    rheology: Mapping[str, Any] | None = None,
) -> LayerModel:
    """Return the model of a layer, SI.

    Parameters
    ----------
    density, viscosity, tension, depth, gravity : float
        As for `containment.physics.dispersion.Layer`.
    film_modulus : float, optional
        Dilational modulus of a film on the surface, N/m; infinite for one that does not stretch.
    below : tuple of float, optional
        Density, viscosity and depth of a second liquid beyond the surface, down to a rigid lid.
    rheology : mapping, optional
        Model and parameters of a linearly viscoelastic liquid, in place of the viscosity.
    """
    if below is not None:
        from containment.physics.two_liquids import TwoLiquids

        return TwoLiquids(
            layer_density=density, layer_viscosity=viscosity, layer_depth=depth, beyond_density=below[0],
            beyond_viscosity=below[1], beyond_depth=below[2], interfacial_tension=tension, gravity=gravity,
        )  # fmt: skip
    if rheology is not None:
        from containment.physics.viscoelastic import ComplexViscosity, ViscoelasticLayer

        makers: dict[str, Callable[..., ComplexViscosity]] = {
            "maxwell": ComplexViscosity.maxwell, "jeffreys": ComplexViscosity.jeffreys,
            "kelvin-voigt": ComplexViscosity.kelvin_voigt,
        }  # fmt: skip
        make = makers[rheology["model"]]
        keys = ("viscosity", "relaxation", "retardation", "modulus")
        return ViscoelasticLayer(
            density=density, surface_tension=tension, depth=depth, gravity=gravity,
            liquid=make(**{key: float(rheology[key]) for key in keys if key in rheology}),
        )  # fmt: skip
    common = {
        "density": density, "viscosity": viscosity, "surface_tension": tension, "depth": depth, "gravity": gravity,
    }  # fmt: skip
    if film_modulus is not None and film_modulus > 0.0:
        from containment.physics.film import FilmedLayer

        return FilmedLayer(**common, film_modulus=film_modulus)
    return Layer(**common)
