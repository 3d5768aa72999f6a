"""Property tables: liquids, granular materials and drives by generic names; a user's own tables beside them."""

from containment.given.tables.entries import DriveEntry, GrainEntry, LiquidEntry, Property
from containment.given.tables.lookup import (
    drive_entry,
    drive_names,
    grain_entry,
    grain_names,
    liquid_entry,
    liquid_names,
    table_notices,
)

__all__ = [
    "DriveEntry",
    "GrainEntry",
    "LiquidEntry",
    "Property",
    "drive_entry",
    "drive_names",
    "grain_entry",
    "grain_names",
    "liquid_entry",
    "liquid_names",
    "table_notices",
]
