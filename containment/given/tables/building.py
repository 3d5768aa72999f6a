"""From the rows of an entry to the entry, all faults of its rows collected."""

import math
import re
from collections.abc import Mapping
from typing import Any, Final

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.errors import InputError
from containment.given.quantities import parse_quantity
from containment.given.tables.entries import DriveEntry, GrainEntry, LiquidEntry, Property
from containment.given.tables.laws import LAWS
from containment.given.tables.rows import Fault, Record, Row, shown

__all__ = ["build_drive", "build_grain", "build_liquid"]

_KNOWN_FACTORS: Final = {
    # the units of the built-in tables, so that no unit library is loaded for them
    ("density", "kg/m3"): 1.0,
    ("viscosity", "Pa*s"): 1.0,
    ("viscosity", "mPa*s"): 1e-3,
    ("kinematic viscosity", "mm2/s"): 1e-6,
    ("surface tension", "N/m"): 1.0,
    ("surface tension", "mN/m"): 1e-3,
    ("pressure", "Pa"): 1.0,
    ("length", "mm"): 1e-3,
    ("length", "um"): 1e-6,
    ("angle", "deg"): math.pi / 180.0,
    ("velocity", "m/s"): 1.0,
    ("acceleration", "m/s2"): 1.0,
    ("acceleration", "g_n"): 9.80665,
    ("force", "N"): 1.0,
    ("mass", "kg"): 1.0,
    ("frequency", "Hz"): 1.0,
    ("ratio", ""): 1.0,
}
_LIQUID: Final = {
    "density": "density",
    "viscosity": "viscosity",
    "surface_tension": "surface tension",
    "vapour_pressure": "pressure",
}
_GRAIN: Final = {
    "bulk_density": "density",
    "particle_density": "density",
    "d10": "length",
    "d50": "length",
    "d90": "length",
    "angle_of_repose": "angle",
    "wall_friction": "ratio",
    "unconfined_yield_strength": "pressure",
}
_GRAIN_FIELD: Final = {
    "angle_of_repose": "angle_of_repose_rad", "unconfined_yield_strength": "unconfined_yield_strength_Pa",
}  # fmt: skip
_DRIVE: Final = {
    "max_stroke": "length",
    "max_velocity": "velocity",
    "max_acceleration": "acceleration",
    "max_force": "force",
    "moving_mass": "mass",
    "min_frequency": "frequency",
    "max_frequency": "frequency",
}
_WORDS: Final = ("title", "synonyms", "hazard", "note")
_TOPICS: Final = ("flammable", "toxic", "corrosive", "irritant", "slippery", "hot", "sticky", "environment", "dust")
_KINEMATIC_UNITS: Final = {"mm2/s", "mm**2/s", "mm^2/s", "mm²/s", "cst", "st", "m2/s", "m**2/s", "m^2/s", "m²/s", "cm2/s"}
_NUMBER: Final = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?")


class _Rows:
    """The rows of an entry by property, with the faults that are found while they are read."""

    def __init__(self, record: Record, kinds: Mapping[str, str], others: tuple[str, ...], faults: list[Fault]) -> None:
        self.record, self.kinds, self.faults = record, kinds, faults
        self.single: dict[str, Row] = {}
        self.many: dict[str, list[Row]] = {}
        for row in record.rows:
            name = row["property"]
            if name in ("hazard", "note", "synonyms"):
                self.many.setdefault(name, []).append(row)
            elif name not in kinds and name not in others and name != "title":
                known = ", ".join((*kinds, *others, *_WORDS))
                self.fault(row, "property", f"{shown(name)} is not a property of a {record.kind}; expected {known}")
            elif name in self.single:
                self.fault(row, "property", f"{name} of {shown(record.name)} stands on line {self.single[name].line} already")
            else:
                self.single[name] = row

    def fault(self, row: Row, column: str, reason: str) -> None:
        self.faults.append(Fault(row.line, column, reason))

    def missing(self, name: str) -> None:
        self.faults.append(Fault(self.record.rows[0].line, "name", f"{shown(self.record.name)} has no row for {name}"))

    def words(self, name: str) -> tuple[str, ...]:
        return tuple(row["text"] for row in self.many.get(name, ()) if row["text"])

    def title(self) -> str:
        row = self.single.get("title")
        return row["text"] if row is not None else self.record.name

    def number(self, row: Row, column: str, text: str) -> float:
        if not _NUMBER.fullmatch(text) or not math.isfinite(float(text)):
            comma = " (write a decimal point)" if "," in text else ""
            self.fault(row, column, f"{shown(text)} is not a finite number{comma}")
            return math.nan
        return float(text)

    def factor(self, row: Row, kind: str) -> float:
        unit = row["unit"]
        known = _KNOWN_FACTORS.get((kind, unit))
        if known is not None:
            return known
        try:
            return parse_quantity(f"1 {unit}", kind, "unit")
        except InputError as error:
            self.fault(row, "unit", str(error).removeprefix("unit: "))
            return math.nan

    def scalar(self, name: str, *, least: float = 0.0, most: float = math.inf, above: bool = True) -> float:
        """Return the SI value of a property that does not depend on temperature."""
        row = self.single[name]
        value = self.number(row, "coefficients", row["coefficients"]) * self.factor(row, self.kinds[name])
        if value < least or value > most or (above and value == least):
            self.fault(row, "coefficients", f"{row['coefficients']} {row['unit']} is not allowed for {name}")
        return value

    def fraction(self, row: Row) -> float:
        text = row["uncertainty"]
        value = self.number(row, "uncertainty", text[:-1].strip() if text.endswith("%") else text) if text else math.nan
        value = value / 100.0 if text.endswith("%") else value
        if not text:
            self.fault(row, "uncertainty", "empty; expected a relative uncertainty such as 0.05 or 5 %")
        elif not 0.0 <= value < 10.0 and not math.isnan(value):
            self.fault(row, "uncertainty", f"{shown(text)} is not allowed; expected 0 to 10")
        return value

    def was_read(self, row: Row) -> bool:
        if row["read"] not in ("yes", "no", ""):
            self.fault(row, "read", f"{shown(row['read'])}: expected yes (the source was read) or no (from memory)")
        return row["read"] == "yes"

    def source(self, row: Row) -> str:
        if not row["text"]:
            self.fault(row, "text", f"{row['property']} has no source; name it, or write 'measured here'")
        return row["text"]

    def kelvin(self, row: Row, column: str) -> float:
        if not row[column]:
            self.fault(row, column, "empty; expected the end of the range where the law holds")
            return math.nan
        return to_kelvin(self.number(row, column, row[column]), row["unit of " + column])

    def coefficients(self, row: Row) -> dict[str, float]:
        name, text = row["law"] or "constant", row["coefficients"]
        law = LAWS.get(name)
        if law is None:
            self.fault(row, "law", f"{shown(name)} is not a law; expected {', '.join(LAWS)}")
            return {}
        if name == "constant" and "=" not in text:
            return {"c": self.number(row, "coefficients", text)}
        pairs: dict[str, float] = {}
        for part in filter(None, (p.strip() for p in text.split(";"))):
            key, _, value = (p.strip() for p in part.partition("=" if law.required else ":"))
            if law.required and key not in law.required and key not in law.optional:
                known = ", ".join((*law.required, *law.optional))
                self.fault(row, "coefficients", f"{shown(part)} is not a coefficient of {name}; expected {known}")
            elif key in pairs:
                self.fault(row, "coefficients", f"{shown(key)} stands twice")
            else:
                if not law.required:
                    self.number(row, "coefficients", key)
                pairs[key] = self.number(row, "coefficients", value)
        lacking = [key for key in law.required if key not in pairs]
        if lacking:
            self.fault(row, "coefficients", f"{', '.join(lacking)} missing for {name}: {law.formula}")
        if not law.required and len(pairs) < 2:
            self.fault(row, "coefficients", f"{shown(text)}: expected at least two points such as 20:1.4; 40:0.28")
        return pairs

    def property(self, name: str, density: Property | None) -> Property | None:
        """Return a property over temperature, checked at the ends and between; None where a fault was found."""
        row, before = self.single[name], len(self.faults)
        kind = self.kinds[name]
        if kind == "viscosity" and _is_kinematic(row["unit"]):
            kind = "kinematic viscosity"
        coefficients = self.coefficients(row)
        factor = self.factor(row, kind)
        low, high = self.kelvin(row, "t_min"), self.kelvin(row, "t_max")
        if low > high or low < 0.0:
            self.fault(row, "t_min", f"{row['t_min']} to {row['t_max']} is not a range of temperature")
        made = Property(
            name=name, law=row["law"] or "constant", coefficients=coefficients, range_K=(low, high),
            relative_uncertainty=self.fraction(row), source=self.source(row), source_read=self.was_read(row), factor=factor,
            unit=row["unit"], density=density if kind == "kinematic viscosity" else None,
        )  # fmt: skip
        return made if len(self.faults) == before else None


def _is_kinematic(unit: str) -> bool:
    return unit.replace(" ", "").lower() in _KINEMATIC_UNITS


def to_kelvin(value: float, unit: str) -> float:
    """Return a temperature in K."""
    if unit == "degF":
        return (value - 32.0) / 1.8 - ABSOLUTE_ZERO_CELSIUS
    return value - ABSOLUTE_ZERO_CELSIUS if unit == "degC" else value


def build_liquid(record: Record, faults: list[Fault]) -> LiquidEntry | None:
    """Return the liquid of a record, or None with its faults appended."""
    before = len(faults)
    rows = _Rows(record, _LIQUID, ("flash_point", "rheology"), faults)
    found: dict[str, Property | None] = {}
    pressure: Property | None = None
    note = ""
    for name in ("density", "viscosity", "surface_tension"):
        if name in rows.single:
            found[name] = rows.property(name, found.get("density"))
        else:
            rows.missing(name)
    row = rows.single.get("vapour_pressure")
    if row is None:
        rows.missing("vapour_pressure (law 'negligible' where it is)")
    elif row["law"] == "negligible":
        note = row["text"]
    else:
        pressure, note = rows.property("vapour_pressure", None), ""
    flash = rows.single.get("flash_point")
    flash_kelvin = None
    if flash is not None:
        unit = flash["unit"]
        if unit not in ("degC", "degF", "K"):
            rows.fault(flash, "unit", f"{shown(unit)}: expected degC, degF or K")
        flash_kelvin = to_kelvin(rows.number(flash, "coefficients", flash["coefficients"]), unit)
    hazards = rows.words("hazard")
    for hazard_row in rows.many.get("hazard", ()):
        topic, colon, _ = hazard_row["text"].partition(": ")
        if not colon or topic not in _TOPICS:
            said = shown(hazard_row["text"])
            rows.fault(hazard_row, "text", f"{said}: expected 'topic: sentence' with a topic of {', '.join(_TOPICS)}")
    rheology = _rheology(rows)
    if len(faults) > before:
        return None
    density, viscosity, tension = found["density"], found["viscosity"], found["surface_tension"]
    assert density is not None and viscosity is not None and tension is not None
    return LiquidEntry(
        name=record.name, title=rows.title(), synonyms=record.synonyms, density=density, viscosity=viscosity,
        surface_tension=tension, vapour_pressure=pressure, vapour_pressure_note=note, flash_point_K=flash_kelvin,
        hazards=hazards, notes=rows.words("note"), rheology=rheology, origin=record.origin,
    )  # fmt: skip


def _rheology(rows: _Rows) -> Mapping[str, Any] | None:
    row = rows.single.get("rheology")
    if row is None:
        return None
    values: dict[str, Any] = {"model": row["law"]}
    for part in filter(None, (p.strip() for p in row["coefficients"].split(";"))):
        key, _, value = (p.strip() for p in part.partition("="))
        values[key] = rows.number(row, "coefficients", value)
    values["source"] = row["text"]
    return values


def build_grain(record: Record, faults: list[Fault]) -> GrainEntry | None:
    """Return the granular material of a record, or None with its faults appended."""
    before = len(faults)
    rows = _Rows(record, _GRAIN, (), faults)
    values: dict[str, float | None] = {}
    sources: dict[str, str] = {}
    was_read: dict[str, bool] = {}
    uncertainty: dict[str, float] = {}
    for name in _GRAIN:
        row = rows.single.get(name)
        if row is None:
            rows.missing(name)
            continue
        field = _GRAIN_FIELD.get(name, name)
        free = name == "unconfined_yield_strength" and row["law"] == "free-flowing"
        values[field] = None if free else rows.scalar(name)
        sources[field], was_read[field] = rows.source(row), rows.was_read(row)
        if not free:
            uncertainty[field] = rows.fraction(row)
    if len(faults) > before:
        return None
    d10, d50, d90 = values["d10"], values["d50"], values["d90"]
    assert d10 is not None and d50 is not None and d90 is not None
    if not d10 <= d50 <= d90:
        rows.fault(rows.single["d10"], "coefficients", "the diameters must rise: d10, d50, d90")
        return None
    return GrainEntry(
        name=record.name, title=rows.title(), synonyms=record.synonyms, sources=sources, source_read=was_read,
        uncertainty=uncertainty, hazards=rows.words("hazard"), notes=rows.words("note"), origin=record.origin,
        **values,  # type: ignore[arg-type]
    )  # fmt: skip


def build_drive(record: Record, faults: list[Fault]) -> DriveEntry | None:
    """Return the class of drives of a record, or None with its faults appended."""
    before = len(faults)
    rows = _Rows(record, _DRIVE, (), faults)
    values = {name: rows.scalar(name, above=name != "moving_mass") for name in _DRIVE if name in rows.single}
    ends = [values.pop(name, None) for name in ("min_frequency", "max_frequency")]
    if (ends[0] is None) != (ends[1] is None):
        rows.missing("min_frequency" if ends[0] is None else "max_frequency")
    frequencies = (ends[0], ends[1]) if ends[0] is not None and ends[1] is not None else None
    if "max_force" in values and "moving_mass" not in values:
        rows.missing("moving_mass, which goes with max_force")
    if not values and frequencies is None:
        rows.missing("any limit")
    if len(faults) > before:
        return None
    stated = [row["text"] for row in rows.single.values() if row["property"] in _DRIVE and row["text"]]
    return DriveEntry(
        name=record.name, title=rows.title(), synonyms=record.synonyms, frequency_range=frequencies,
        note=" ".join(rows.words("note")), source=stated[0] if stated else "common practice", origin=record.origin,
        **{field: values.get(field) for field in
           ("max_stroke", "max_velocity", "max_acceleration", "max_force", "moving_mass")},
    )  # fmt: skip
