"""The property tables as data: JSON and CSV, SI units with the unit in the key."""

import csv
import io
from collections.abc import Mapping, Sequence
from typing import Any

from containment.given.tables import DriveEntry, GrainEntry, LiquidEntry, Property

__all__ = ["csv_of", "json_of", "value_at"]

_UNITS = {"density": "kg_m3", "viscosity": "Pa_s", "surface_tension": "N_m", "vapour_pressure": "Pa"}


def value_at(of: Property | None, kelvin: float) -> float | None:
    """Return a property's value, None where it is not stated or the temperature is outside its range."""
    if of is None or not of.range_K[0] - 1e-6 <= kelvin <= of.range_K[1] + 1e-6:
        return None
    return float(of.value(kelvin))


def json_of(entry: LiquidEntry | GrainEntry | DriveEntry, kelvin: float) -> dict[str, Any]:
    """Return an entry as plain JSON types, its values at a temperature (K)."""
    common: dict[str, Any] = {"name": entry.name, "title": entry.title, "synonyms": list(entry.synonyms), "table": entry.origin}
    if isinstance(entry, LiquidEntry):
        common |= {f"{p.name}_{_UNITS[p.name]}": value_at(p, kelvin) for p in entry.properties}
        if entry.vapour_pressure is None:
            common |= {"vapour_pressure_Pa": 0.0, "vapour_pressure_note": entry.vapour_pressure_note}
        common |= {
            "range_K": list(entry.range_K),
            "flash_point_K": entry.flash_point_K,
            "rheology": dict(entry.rheology) if entry.rheology is not None else None,
            "properties": {p.name: _property(p) for p in entry.properties},
        }
    elif isinstance(entry, GrainEntry):
        common |= {
            "bulk_density_kg_m3": entry.bulk_density,
            "particle_density_kg_m3": entry.particle_density,
            "d10_m": entry.d10,
            "d50_m": entry.d50,
            "d90_m": entry.d90,
            "angle_of_repose_rad": entry.angle_of_repose_rad,
            "wall_friction": entry.wall_friction,
            "unconfined_yield_strength_Pa": entry.unconfined_yield_strength_Pa,
            "free_flowing": entry.unconfined_yield_strength_Pa is None,
            "sources": dict(entry.sources),
            "source_read": dict(entry.source_read),
            "relative_uncertainty": dict(entry.uncertainty),
        }
    else:
        return common | {
            "max_stroke_m": entry.max_stroke,
            "max_velocity_m_s": entry.max_velocity,
            "max_acceleration_m_s2": entry.max_acceleration,
            "max_force_N": entry.max_force,
            "moving_mass_kg": entry.moving_mass,
            "frequency_range_Hz": list(entry.frequency_range) if entry.frequency_range is not None else None,
            "note": entry.note,
            "source": entry.source,
        }
    return common | {"hazards": list(entry.hazards), "notes": list(entry.notes)}


def _property(of: Property) -> dict[str, Any]:
    return {
        "law": of.law,
        "coefficients": dict(of.coefficients),
        "unit": of.unit,
        "range_K": list(of.range_K),
        "relative_uncertainty": of.relative_uncertainty,
        "source": of.source,
        "source_read": of.source_read,
    }


def csv_of(entries: Mapping[str, Sequence[Any]], kelvin: float) -> str:
    """Return the plain numbers of all entries as CSV, one row an entry; a cell that holds nothing is not stated."""
    rows = []
    for kind, found in entries.items():
        for entry in found:
            row: dict[str, Any] = {"kind": kind}
            for key, value in json_of(entry, kelvin).items():
                if key == "range_K":
                    row |= {"from_K": value[0], "to_K": value[1]}
                elif key == "frequency_range_Hz":
                    row |= {"lowest_Hz": value[0], "highest_Hz": value[1]} if value else {}
                elif value is None or isinstance(value, (str, float, int)):
                    row[key] = value
            rows.append(row)
    columns = list(dict.fromkeys(key for row in rows for key in row))
    stream = io.StringIO()
    writer = csv.DictWriter(stream, columns or ["kind", "name"], lineterminator="\n")
    writer.writeheader()
    writer.writerows(rows)
    return stream.getvalue()
