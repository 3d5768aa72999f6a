"""From the rows of a drive to its entry."""

from typing import Final

from containment.given.tables.entries import DriveEntry
from containment.given.tables.faults import shown
from containment.given.tables.fields import Fields
from containment.given.tables.rows import Row
from containment.given.tables.units import factor_of, number_of

__all__ = ["DRIVE_FIELDS", "DRIVE_NUMBERS", "drive_from_rows"]

DRIVE_NUMBERS: Final = {
    "max_stroke": "length",
    "max_velocity": "velocity",
    "max_acceleration": "acceleration",
    "max_force": "force",
    "moving_mass": "mass",
}
"""Numbers of a drive and their kinds of unit."""

DRIVE_FIELDS: Final = (*DRIVE_NUMBERS, "frequency_range", "title", "synonym", "note", "source")
"""Fields that a drive may have."""


def drive_from_rows(fields: Fields) -> DriveEntry | None:
    """Return the drive; a limit that has no row is not limited."""
    numbers: dict[str, float | None] = {}
    for name, kind in DRIVE_NUMBERS.items():
        row = fields.one.get(name)
        least = 0.0 if name == "moving_mass" else 1e-12
        numbers[name] = None if row is None else fields.number(row, kind, least=least, most=1e9)
    if numbers["max_force"] is not None and numbers["moving_mass"] is None:
        fields.faults.add(fields.line, "field", f"{shown(fields.name)} has max_force without moving_mass")
    row = fields.one.get("frequency_range")
    frequencies = None if row is None else _frequencies(fields, row)
    if row is None and all(value is None for value in numbers.values()):
        fields.faults.add(fields.line, "field", f"{shown(fields.name)} states no limit at all")
    return DriveEntry(
        **fields.common(), max_stroke=numbers["max_stroke"], max_velocity=numbers["max_velocity"],
        max_acceleration=numbers["max_acceleration"], max_force=numbers["max_force"],
        moving_mass=numbers["moving_mass"], frequency_range=frequencies, note=" ".join(fields.texts("note")),
        source=fields.text("source", "not stated"),
    )  # fmt: skip


def _frequencies(fields: Fields, row: Row) -> tuple[float, float] | None:
    low, colon, high = row.value.partition(":")
    factor = fields.guarded(row, "unit", lambda unit: factor_of(unit, "frequency"), row.unit)
    first = fields.guarded(row, "value", number_of, low) if colon else None
    second = fields.guarded(row, "value", number_of, high) if colon else None
    if first is None or second is None or factor is None or not 0.0 < first < second:
        fields.faults.add(row.line, "value", f"{shown(row.value)} is not a range of frequencies such as 5:60")
        return None
    return first * factor, second * factor
