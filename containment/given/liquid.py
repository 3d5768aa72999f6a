"""Liquids: a custom one from its properties, or one from the property table at a temperature."""

from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import TYPE_CHECKING, Any

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.errors import InputError
from containment.given.quantities import si_value

if TYPE_CHECKING:
    from containment.given.tables import LiquidEntry

__all__ = ["PROPERTY_BOUNDS", "Liquid", "liquid", "liquid_at"]

PROPERTY_BOUNDS = {
    # property: (kind, least, most), SI; far outside what is poured
    "density": ("density", 1.0, 3e4),
    "viscosity": ("viscosity", 1e-6, 1e6),
    "surface_tension": ("surface tension", 0.0, 10.0),
}


@dataclass(frozen=True, slots=True, kw_only=True)
class Liquid:
    """A Newtonian liquid at one temperature.

    Parameters
    ----------
    density, viscosity, surface_tension : str or pint.Quantity or float
        rho (kg/m^3), dynamic viscosity mu (Pa s), gamma (N/m).
    name : str
        Name of the liquid.
    temperature : float or None
        K, where known.
    vapour_pressure : float or None
        Pa; 0 where negligible, None where unknown.
    uncertainty : mapping
        Relative uncertainty of a property by its name, where stated.
    hazards : tuple of (topic, sentence)
        What the table entry says.
    flash_point : float or None
        K.
    sources : mapping
        Source of each property by its name.
    rheology : mapping or None
        Model and parameters of a liquid that is not Newtonian.
    entry : LiquidEntry or None
        Table entry that all properties come from.

    Raises
    ------
    InputError
        A property that cannot be read or is out of bounds.

    Examples
    --------
    >>> Liquid(density="1.41 g/cm**3", viscosity="10 Pa*s", surface_tension="80 mN/m").viscosity
    10.0
    """

    density: Any
    viscosity: Any
    surface_tension: Any
    name: str = "custom"
    temperature: float | None = None
    vapour_pressure: float | None = None
    uncertainty: Mapping[str, float] = field(default_factory=dict)
    hazards: tuple[tuple[str, str], ...] = ()
    flash_point: float | None = None
    sources: Mapping[str, str] = field(default_factory=dict)
    rheology: Mapping[str, Any] | None = None
    entry: Any = field(default=None, repr=False, compare=False)

    def __post_init__(self) -> None:
        for name, (kind, least, most) in PROPERTY_BOUNDS.items():
            value = si_value(getattr(self, name), kind, name.replace("_", " "), least=least, most=most)
            object.__setattr__(self, name, value)

    def to_dict(self) -> dict[str, Any]:
        """Return the liquid as plain JSON types."""
        return {
            "name": self.name,
            "temperature_K": self.temperature,
            "density_kg_m3": self.density,
            "viscosity_Pa_s": self.viscosity,
            "surface_tension_N_m": self.surface_tension,
            "vapour_pressure_Pa": self.vapour_pressure,
            "relative_uncertainty": dict(self.uncertainty),
            "sources": dict(self.sources),
        }


def liquid(
    name: str,
    *,
    temperature: Any = "20 degC",
    density: Any = None,
    viscosity: Any = None,
    surface_tension: Any = None,
    tables: Sequence[str | Path] = (),
) -> Liquid:
    """Return a liquid from the property table at a temperature, single properties overridden where given.

    Parameters
    ----------
    name : str
        Name in the table, or ``custom`` with all three properties given.
    temperature : str or pint.Quantity or float
        K as a plain number.
    density, viscosity, surface_tension : optional
        Values that take the place of the table's.
    tables : sequence of path
        User tables that are searched first.

    Raises
    ------
    InputError
        An unknown name, a temperature outside the range of a property that is not overridden, a bad value.

    Examples
    --------
    >>> round(liquid("water", temperature="25 degC").density)
    997
    """
    kelvin = si_value(temperature, "temperature", "temperature", above=0.0, most=5000.0)
    given = {"density": density, "viscosity": viscosity, "surface_tension": surface_tension}
    if name.strip().lower() == "custom":
        missing = [key.replace("_", " ") for key, value in given.items() if value is None]
        if missing:
            raise InputError(f"custom liquid: {', '.join(missing)} missing; give density, viscosity and surface tension")
        return Liquid(**given, temperature=kelvin, sources=dict.fromkeys(given, "given by the user"))
    from containment.given.tables import liquid_entry

    return liquid_at(liquid_entry(name, tables=[Path(table) for table in tables]), kelvin, overrides=given)


def liquid_at(entry: "LiquidEntry", temperature: float, *, overrides: Mapping[str, Any] | None = None) -> Liquid:
    """Return the liquid of a table entry at a temperature, K, single properties overridden where given.

    Raises
    ------
    InputError
        A temperature outside the range of a property that is not overridden.
    """
    values: dict[str, Any] = {}
    sources: dict[str, str] = {}
    uncertainty: dict[str, float] = {}
    overrides = overrides or {}
    for key in PROPERTY_BOUNDS:
        if overrides.get(key) is not None:
            values[key], sources[key] = overrides[key], "given by the user"
            continue
        law = getattr(entry, key)
        try:
            values[key] = float(law.value(temperature))
        except InputError as error:
            low, high = (kelvin_end + ABSOLUTE_ZERO_CELSIUS for kelvin_end in law.range_K)
            raise InputError(
                f"temperature: {temperature + ABSOLUTE_ZERO_CELSIUS:.4g} degC is outside the range of the "
                f"{key.replace('_', ' ')} of {entry.name}; the table holds from {low:.4g} to {high:.4g} degC"
            ) from error
        sources[key] = law.source
        uncertainty[key] = float(law.relative_uncertainty)
    pressure: float | None = 0.0
    if entry.vapour_pressure is not None:
        low, high = entry.vapour_pressure.range_K
        pressure = float(entry.vapour_pressure.value(temperature)) if low <= temperature <= high else None
    return Liquid(
        **values,
        name=entry.name,
        temperature=temperature,
        vapour_pressure=pressure,
        uncertainty=uncertainty,
        hazards=tuple(_hazard(item) for item in entry.hazards),
        flash_point=entry.flash_point_K,
        sources=sources,
        rheology=entry.rheology,
        entry=None if any(value is not None for value in overrides.values()) else entry,
    )


def _hazard(item: Any) -> tuple[str, str]:
    topic, _, sentence = item.partition(": ") if isinstance(item, str) else (item[0], "", item[1])
    return topic, sentence or topic
