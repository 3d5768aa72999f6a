"""Property tables: liquids, granular materials, drives, each with its sources."""

from containment.given.tables.entries import DriveEntry, GrainEntry, LiquidEntry, Property
from containment.given.tables.lookup import (
    drive_entry,
    drive_names,
    grain_entry,
    grain_names,
    liquid_entry,
    liquid_names,
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
]
