"""Entries of the property tables: liquids, granular materials, drives."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.errors import InputError
from containment.given.tables.laws import LAWS

__all__ = ["DriveEntry", "GrainEntry", "LiquidEntry", "Property"]

_ROUNDING_K = 1e-6  # temperatures converted from other scales meet the ends of a range


@dataclass(frozen=True, slots=True, kw_only=True)
class Property:
    """A property over temperature.

    Parameters
    ----------
    name : str
        Such as ``viscosity``.
    law : str
        One of `LAWS`.
    coefficients : mapping
        Of the law.
    factor : float
        SI value of the unit that the law is stated in.
    range_K : tuple of two
        Where the law holds, K.
    relative_uncertainty : float
        About one standard deviation, batch to batch spread included where it is known.
    source : str
        Where it comes from.
    source_read : bool
        Whether the source was read; False where the figures are from memory.
    unit : str
        The unit that the law is stated in.
    density : Property or None
        Where the law gives a kinematic viscosity: the density that makes it dynamic.
    """

    name: str
    law: str
    coefficients: Mapping[str, float]
    range_K: tuple[float, float]
    relative_uncertainty: float
    source: str
    source_read: bool
    factor: float = 1.0
    unit: str = ""
    density: "Property | None" = None

    def value(self, temperature_K: Any) -> Any:
        """Return the SI value at a temperature.

        Parameters
        ----------
        temperature_K : float or array_like
            K.

        Returns
        -------
        float or array
            Of the shape of the temperature.

        Raises
        ------
        InputError
            A temperature outside the range, or one that is not finite.
        """
        kelvin = np.asarray(temperature_K, dtype=np.float64)
        low, high = self.range_K
        outside = ~((kelvin >= low - _ROUNDING_K) & (kelvin <= high + _ROUNDING_K))
        if np.any(outside):
            bad = float(kelvin[outside].flat[0]) + ABSOLUTE_ZERO_CELSIUS
            raise InputError(
                f"temperature: {bad:.5g} degC is outside the range of the {self.name.replace('_', ' ')}, which holds "
                f"from {low + ABSOLUTE_ZERO_CELSIUS:.5g} to {high + ABSOLUTE_ZERO_CELSIUS:.5g} degC"
            )
        result = LAWS[self.law].function(kelvin, self.coefficients) * self.factor
        if self.density is not None:
            result = result * self.density.value(kelvin)
        return float(result) if kelvin.ndim == 0 else result


@dataclass(frozen=True, slots=True, kw_only=True)
class LiquidEntry:
    """A liquid of the table.

    Parameters
    ----------
    name, title : str
        Name in the table and in words.
    synonyms : tuple of str
        Other names that find it.
    density, viscosity, surface_tension : Property
        In kg/m^3, Pa s (dynamic), N/m.
    vapour_pressure : Property or None
        Pa; None where negligible.
    vapour_pressure_note : str
        Why it is negligible, or the caution that goes with it.
    flash_point_K : float or None
        Closed cup where the source says so; None where there is none or none is known (see the hazards).
    hazards : tuple of str
        Each ``topic: sentence``.
    notes : tuple of str
        What the engineer should know of the entry.
    rheology : mapping or None
        Model and parameters of a liquid that is not Newtonian; None for a Newtonian one.
    origin : str
        File that the entry comes from.
    """

    name: str
    title: str
    synonyms: tuple[str, ...]
    density: Property
    viscosity: Property
    surface_tension: Property
    vapour_pressure: Property | None
    vapour_pressure_note: str
    flash_point_K: float | None
    hazards: tuple[str, ...]
    notes: tuple[str, ...]
    rheology: Mapping[str, Any] | None = None
    origin: str = "built in"

    @property
    def range_K(self) -> tuple[float, float]:
        """Where density, viscosity and surface tension all hold, K."""
        ranges = [p.range_K for p in (self.density, self.viscosity, self.surface_tension)]
        return max(low for low, _ in ranges), min(high for _, high in ranges)

    @property
    def properties(self) -> tuple[Property, ...]:
        """The properties that are stated, in the order of reading."""
        found = (self.density, self.viscosity, self.surface_tension, self.vapour_pressure)
        return tuple(p for p in found if p is not None)


@dataclass(frozen=True, slots=True, kw_only=True)
class GrainEntry:
    """A granular material of the table; cohesion, wall friction and density are to be measured on the lot in hand.

    Parameters
    ----------
    bulk_density, particle_density : float
        kg/m^3, poured loosely; of the particle.
    d10, d50, d90 : float
        Diameters that 10, 50 and 90 % of the mass are finer than, m.
    angle_of_repose_rad : float
        Poured, rad.
    wall_friction : float
        Coefficient on smooth steel.
    unconfined_yield_strength_Pa : float or None
        Of the loosely filled material at low consolidation, Pa; None where it is free-flowing.
    sources, source_read, uncertainty : mapping
        By the name of the field.
    """

    name: str
    title: str
    synonyms: tuple[str, ...]
    bulk_density: float
    particle_density: float
    d10: float
    d50: float
    d90: float
    angle_of_repose_rad: float
    wall_friction: float
    unconfined_yield_strength_Pa: float | None
    sources: Mapping[str, str] = field(default_factory=dict)
    source_read: Mapping[str, bool] = field(default_factory=dict)
    uncertainty: Mapping[str, float] = field(default_factory=dict)
    hazards: tuple[str, ...] = ()
    notes: tuple[str, ...] = ()
    origin: str = "built in"


@dataclass(frozen=True, slots=True, kw_only=True)
class DriveEntry:
    """A generic class of drives; typical limits for a first estimate, the data sheet prevails.

    Parameters
    ----------
    max_stroke, max_velocity, max_acceleration, max_force, moving_mass : float or None
        Peak to peak (m), peak (m/s), peak (m/s^2), peak (N), mass moved besides the product (kg); None where not
        limited.
    frequency_range : tuple of two or None
        Hz.
    """

    name: str
    title: str
    synonyms: tuple[str, ...]
    max_stroke: float | None
    max_velocity: float | None
    max_acceleration: float | None
    max_force: float | None
    moving_mass: float | None
    frequency_range: tuple[float, float] | None
    note: str
    source: str = "common practice"
    origin: str = "built in"
