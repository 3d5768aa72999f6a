"""From the rows of a granular material to its entry."""

from typing import Final

from containment.given.tables.entries import GrainEntry
from containment.given.tables.faults import shown
from containment.given.tables.fields import Fields

__all__ = ["GRAIN_FIELDS", "GRAIN_NUMBERS", "grain_from_rows"]

GRAIN_NUMBERS: Final = {
    # field: (kind of unit, least, most), SI
    "bulk_density": ("density", 1.0, 3e4),
    "particle_density": ("density", 1.0, 3e4),
    "d10": ("length", 1e-8, 1.0),
    "d50": ("length", 1e-8, 1.0),
    "d90": ("length", 1e-8, 1.0),
    "angle_of_repose": ("angle", 0.01, 1.57),
    "wall_friction": ("ratio", 0.0, 5.0),
    "unconfined_yield_strength": ("pressure", 0.0, 1e7),
}
"""Numbers of a granular material and the bounds of what is believed."""

GRAIN_FIELDS: Final = (*GRAIN_NUMBERS, "title", "synonym", "hazard", "note")
"""Fields that a granular material may have."""

_STRENGTH: Final = "unconfined_yield_strength"


def grain_from_rows(fields: Fields) -> GrainEntry | None:
    """Return the granular material, or None where a number is missing or faulty."""
    numbers: dict[str, float] = {}
    free_flowing = fields.text(_STRENGTH).lower() == "free-flowing"
    for name, (kind, least, most) in GRAIN_NUMBERS.items():
        row = fields.one.get(name)
        if row is None:
            fields.missing(name)
        elif not (name == _STRENGTH and free_flowing):
            value = fields.number(row, kind, least=least, most=most)
            if value is not None:
                numbers[name] = value
    stated = {name: row for name, row in fields.one.items() if name in GRAIN_NUMBERS}
    sources = {name: fields.source(row) for name, row in stated.items()}
    read = {name: fields.read(row) for name, row in stated.items()}
    uncertainty = {name: fields.uncertainty(row) for name, row in stated.items() if name in numbers}
    if len(numbers) + free_flowing < len(GRAIN_NUMBERS):
        return None
    if not numbers["d10"] <= numbers["d50"] <= numbers["d90"]:
        fields.faults.add(fields.line, "value", f"d10, d50, d90 of {shown(fields.name)} do not rise")
    if not numbers["bulk_density"] < numbers["particle_density"]:
        reason = f"the bulk density of {shown(fields.name)} is not below the particle density"
        fields.faults.add(fields.line, "value", reason)
    return GrainEntry(
        **fields.common(), bulk_density=numbers["bulk_density"], particle_density=numbers["particle_density"],
        d10=numbers["d10"], d50=numbers["d50"], d90=numbers["d90"], angle_of_repose_rad=numbers["angle_of_repose"],
        wall_friction=numbers["wall_friction"], unconfined_yield_strength_Pa=numbers.get(_STRENGTH), sources=sources,
        source_read=read, uncertainty=uncertainty, hazards=fields.texts("hazard"), notes=fields.texts("note"),
    )  # fmt: skip
