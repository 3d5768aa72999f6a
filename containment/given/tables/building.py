"""From the rows of an entry to the entry; what is wrong goes to the file's faults."""

from collections.abc import Sequence

from containment.given.tables.drive_rows import DRIVE_FIELDS, drive_from_rows
from containment.given.tables.entries import DriveEntry, GrainEntry, LiquidEntry
from containment.given.tables.faults import Faults
from containment.given.tables.fields import Fields
from containment.given.tables.grain_rows import GRAIN_FIELDS, grain_from_rows
from containment.given.tables.liquid_rows import LIQUID_FIELDS, liquid_from_rows
from containment.given.tables.rows import Row

__all__ = ["build"]


def build(rows: Sequence[Row], faults: Faults, *, origin: str) -> LiquidEntry | GrainEntry | DriveEntry | None:
    """Return the entry that rows of one kind and name describe, or None where faults were noted.

    Parameters
    ----------
    rows : sequence of Row
        At least one.
    faults : Faults
        Gets what is wrong.
    origin : str
        File that the rows come from.
    """
    before = len(faults.found)
    kind = rows[0].kind
    allowed = {"liquid": LIQUID_FIELDS, "grain": GRAIN_FIELDS, "drive": DRIVE_FIELDS}[kind]
    fields = Fields.of(rows, faults, origin=origin, allowed=allowed)
    made: LiquidEntry | GrainEntry | DriveEntry | None
    if kind == "liquid":
        made = liquid_from_rows(fields)
    elif kind == "grain":
        made = grain_from_rows(fields)
    else:
        made = drive_from_rows(fields)
    return made if len(faults.found) == before else None
