"""Granular materials: a custom one from its properties, or one from the property table."""

import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any, Final

from containment.errors import InputError
from containment.given.quantities import si_value

__all__ = ["Grains", "grain", "grains"]

_BOUNDS: Final = {
    # property: (kind, least, most), SI; far outside what is handled
    "bulk_density": ("density", 1.0, 2e4),
    "particle_density": ("density", 1.0, 3e4),
    "d10": ("length", 1e-8, 1.0),
    "d50": ("length", 1e-8, 1.0),
    "d90": ("length", 1e-8, 1.0),
    "angle_of_repose": ("angle", 0.0, 0.5 * math.pi),
    "wall_friction": ("ratio", 0.0, 3.0),
    "yield_strength": ("pressure", 0.0, 1e7),
}
_SPHERES_PACKED: Final = 0.6
_REPOSE: Final = math.radians(40.0)


@dataclass(frozen=True, slots=True, kw_only=True)
class Grains:
    """A granular material.

    Parameters
    ----------
    bulk_density : str or pint.Quantity or float
        rho_b, kg/m^3.
    d50 : str or pint.Quantity or float
        Grain diameter that half of the mass is finer than, m.
    particle_density : str or pint.Quantity or float, optional
        kg/m^3; bulk density over 0.6 where it is not known.
    d10, d90 : str or pint.Quantity or float, optional
        Diameters that 10 and 90 % of the mass are finer than, m; by default `d50`: all grains alike.
    angle_of_repose : str or pint.Quantity or float, optional
        rad; 40 degrees where it is not known.
    wall_friction : float, optional
        Coefficient; 0 where it is not known, which is the cautious side for a plug.
    yield_strength : str or pint.Quantity or float, optional
        Unconfined yield strength, Pa; 0 for free-flowing grains.
    name : str
        Name of the material.
    uncertainty, sources : mapping
        Relative uncertainty, and source, of a property by its name, where stated.
    hazards : tuple of (topic, sentence)
        What the table entry says.
    strength_measured : bool
        Whether the yield strength belongs to the lot in hand; a typical value never makes a bed count as held.
    assumed : tuple of str
        What was not given and what was taken for it.

    Raises
    ------
    InputError
        A property that cannot be read or is out of bounds, a bulk density not below the particle density, diameters
        that do not rise from d10 to d90.

    Examples
    --------
    >>> sand = Grains(bulk_density="1600 kg/m**3", particle_density="2650 kg/m**3", d50="0.3 mm")
    >>> round(sand.voidage, 3), sand.free_flowing
    (0.396, True)
    """

    bulk_density: Any
    d50: Any
    particle_density: Any = None
    d10: Any = None
    d90: Any = None
    angle_of_repose: Any = None
    wall_friction: Any = None
    yield_strength: Any = 0.0
    name: str = "custom"
    uncertainty: Mapping[str, float] = field(default_factory=dict)
    sources: Mapping[str, str] = field(default_factory=dict)
    hazards: tuple[tuple[str, str], ...] = ()
    strength_measured: bool = True
    assumed: tuple[str, ...] = ()

    def __post_init__(self) -> None:
        assumed = list(self.assumed)
        for name, (kind, least, most) in _BOUNDS.items():
            value = getattr(self, name)
            if value is not None:
                object.__setattr__(self, name, si_value(value, kind, name.replace("_", " "), least=least, most=most))
        if self.particle_density is None:
            object.__setattr__(self, "particle_density", self.bulk_density / _SPHERES_PACKED)
            assumed.append("particle density not given: bulk density over 0.6 taken")
        if self.d10 is None and self.d90 is None:
            assumed.append("one grain diameter given: all grains are taken as that size, none finer and none coarser")
        for name in ("d10", "d90"):
            if getattr(self, name) is None:
                object.__setattr__(self, name, self.d50)
        if self.angle_of_repose is None:
            object.__setattr__(self, "angle_of_repose", _REPOSE)
            assumed.append("angle of repose not given: 40 degrees taken")
        if self.wall_friction is None:
            object.__setattr__(self, "wall_friction", 0.0)
            assumed.append("wall friction not given: taken as 0, so that no plug is credited to the wall")
        if self.angle_of_repose >= math.radians(89.0):
            raise InputError(f"angle of repose: {math.degrees(self.angle_of_repose):.3g} degrees; it must be below 89")
        if not self.bulk_density < self.particle_density:
            raise InputError(
                f"bulk density: {self.bulk_density:g} kg/m^3 is not below the particle density, "
                f"{self.particle_density:g} kg/m^3; a bed has pores"
            )
        if not self.d10 <= self.d50 <= self.d90:
            raise InputError(
                f"grain diameters: d10 {self.d10:g} m, d50 {self.d50:g} m, d90 {self.d90:g} m; they must not fall"
            )
        object.__setattr__(self, "assumed", tuple(assumed))

    @property
    def voidage(self) -> float:
        """Share of the bed that is pores: 1 - rho_b/rho_p."""
        return float(1.0 - self.bulk_density / self.particle_density)

    @property
    def free_flowing(self) -> bool:
        """Whether the material has no strength of its own."""
        return bool(self.yield_strength == 0.0)

    @property
    def one_size(self) -> bool:
        """Whether all grains count as alike."""
        return bool(self.d10 == self.d90)

    def to_dict(self) -> dict[str, Any]:
        """Return the material as plain JSON types."""
        return {
            "name": self.name,
            "bulk_density_kg_m3": self.bulk_density,
            "particle_density_kg_m3": self.particle_density,
            "voidage": self.voidage,
            "d10_m": self.d10,
            "d50_m": self.d50,
            "d90_m": self.d90,
            "angle_of_repose_rad": self.angle_of_repose,
            "wall_friction": self.wall_friction,
            "unconfined_yield_strength_Pa": self.yield_strength,
            "free_flowing": self.free_flowing,
            "strength_measured": self.strength_measured,
            "relative_uncertainty": dict(self.uncertainty),
            "sources": dict(self.sources),
        }


def grains(
    name: str,
    *,
    bulk_density: Any = None,
    particle_density: Any = None,
    particle_diameter: Any = None,
    wall_friction: Any = None,
    angle_of_repose: Any = None,
    cohesion: Any = None,
    yield_strength: Any = None,
    tables: Sequence[str | Path] = (),
) -> Grains:
    """Return a granular material from the property table, single properties overridden where given.

    Parameters
    ----------
    name : str
        Name in the table, or ``custom`` with at least the bulk density and the particle diameter given.
    bulk_density, particle_density, wall_friction, angle_of_repose : optional
        As in `Grains`.
    particle_diameter : optional
        One diameter for all grains, m.
    cohesion, yield_strength : optional
        Shear strength c at no normal stress, or the unconfined yield strength, Pa: one of them. A cohesion counts as the
        yield strength 2 c, the least that any angle of friction gives.
    tables : sequence of path
        User tables that are searched first.

    Raises
    ------
    InputError
        An unknown name, a missing property, both strengths, a bad value.

    Examples
    --------
    >>> grains("custom", bulk_density="600 kg/m**3", particle_diameter="50 um", cohesion="200 Pa").yield_strength
    400.0
    """
    if cohesion is not None and yield_strength is not None:
        raise InputError("cohesion: given with yield strength; expected one of the two")
    strength = yield_strength
    if cohesion is not None:
        strength = 2.0 * si_value(cohesion, "pressure", "cohesion", least=0.0, most=1e6)
    given = {
        "bulk_density": bulk_density,
        "particle_density": particle_density,
        "wall_friction": wall_friction,
        "angle_of_repose": angle_of_repose,
        "yield_strength": strength,
        "d50": particle_diameter,
    }
    values: dict[str, Any] = {key: value for key, value in given.items() if value is not None}
    sources = dict.fromkeys(values, "given by the user")
    assumed: tuple[str, ...] = ()
    if strength is not None and cohesion is not None:
        assumed = ("yield strength taken as twice the cohesion, the least for any angle of friction",)
    if name.strip().lower() == "custom":
        missing = [word for key, word in (("bulk_density", "bulk density"), ("d50", "particle diameter")) if key not in values]
        if missing:
            raise InputError(f"custom grains: {' and '.join(missing)} missing; give at least both")
        if strength is None:
            assumed = (*assumed, "no cohesion given: taken as free-flowing")
        return Grains(**values, sources=sources, assumed=assumed)
    from containment.given.tables import grain_entry

    entry = grain_entry(name, tables=[Path(table) for table in tables])
    table_values = {
        "bulk_density": entry.bulk_density,
        "particle_density": entry.particle_density,
        "angle_of_repose": entry.angle_of_repose_rad,
        "wall_friction": entry.wall_friction,
        "yield_strength": entry.unconfined_yield_strength_Pa or 0.0,
    }
    if "d50" not in values:
        table_values |= {"d10": entry.d10, "d50": entry.d50, "d90": entry.d90}
    names = {"angle_of_repose": "angle_of_repose_rad", "yield_strength": "unconfined_yield_strength_Pa"}
    uncertainty: dict[str, float] = {}
    for key, value in table_values.items():
        if key not in values:
            values[key] = value
            sources[key] = _named(entry.sources, names.get(key, key), "property table")
            uncertainty[key] = float(_named(entry.uncertainty, names.get(key, key), 0.0))
    return Grains(
        **values, name=entry.name, uncertainty=uncertainty, sources=sources, assumed=assumed,
        strength_measured=strength is not None,
        hazards=tuple(_hazard(text) for text in entry.hazards),
    )  # fmt: skip


def _named(mapping: Mapping[str, Any], name: str, otherwise: Any) -> Any:
    """Return the value of a field, whether its key carries the unit or not."""
    bare = name.removesuffix("_rad").removesuffix("_Pa")
    return mapping.get(name, mapping.get(bare, otherwise))


def _hazard(text: str) -> tuple[str, str]:
    topic, colon, sentence = text.partition(": ")
    return (topic, sentence[:1].upper() + sentence[1:]) if colon else ("material", text)


grain = grains
"""The same: one grain material."""
