"""From the rows of an entry to the entry; what is wrong goes to the file's faults."""

import math
from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field
from typing import Any, Final

import numpy as np

from containment.errors import InputError
from containment.given.tables.entries import DriveEntry, GrainEntry, LiquidEntry, Property
from containment.given.tables.faults import Faults, shown
from containment.given.tables.laws import LAWS
from containment.given.tables.rows import Row
from containment.given.tables.units import factor_of, number_of, ratio_of, temperature_of

__all__ = ["GRAIN_FIELDS", "HAZARD_TOPICS", "LIQUID_PROPERTIES", "RHEOLOGY_MODELS", "build"]

HAZARD_TOPICS: Final = (
    "flammable", "toxic", "corrosive", "irritant", "slippery", "hot", "sticky", "environment", "reactive", "dust explosion",
    "inhalation", "static", "table",
)  # fmt: skip
"""Topics that a hazard may have; its row reads ``topic: sentence``."""

LIQUID_PROPERTIES: Final = {
    # field: (kinds of unit that state it, least, most), SI
    "density": (("density",), 1.0, 3e4),
    "viscosity": (("viscosity", "kinematic viscosity"), 1e-6, 1e6),
    "surface_tension": (("surface tension",), 1e-5, 10.0),
    "vapour_pressure": (("pressure",), 0.0, 1e7),
}
"""Properties of a liquid."""

RHEOLOGY_MODELS: Final = {
    "maxwell": ("viscosity", "relaxation"),
    "jeffreys": ("viscosity", "relaxation", "retardation"),
    "kelvin-voigt": ("viscosity", "modulus"),
    "carreau": ("zero_shear", "infinite_shear", "time", "index"),
    "cross": ("zero_shear", "infinite_shear", "time", "exponent"),
    "power-law": ("consistency", "index"),
    "herschel-bulkley": ("yield_stress", "consistency", "index"),
}
"""Models of a liquid that is not Newtonian and their parameters in SI, as the physics names them."""

GRAIN_FIELDS: Final = {
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
"""Numbers of a granular material."""

_DRIVE_FIELDS: Final = {
    "max_stroke": "length",
    "max_velocity": "velocity",
    "max_acceleration": "acceleration",
    "max_force": "force",
    "moving_mass": "mass",
}
_TEXTS: Final = {
    "liquid": ("title", "synonym", "hazard", "note", "flash_point", "vapour_pressure_note", "rheology"),
    "grain": ("title", "synonym", "hazard", "note"),
    "drive": ("title", "synonym", "note", "source", "frequency_range"),
}
_MANY: Final = ("synonym", "hazard", "note")
_YES_NO: Final = {"yes": True, "true": True, "no": False, "false": False}


@dataclass(slots=True)
class _Fields:
    """The rows of one entry by field, and the faults of the file."""

    kind: str
    name: str
    faults: Faults
    origin: str
    line: int
    one: dict[str, Row] = field(default_factory=dict)
    many: dict[str, list[Row]] = field(default_factory=dict)

    def texts(self, name: str) -> tuple[str, ...]:
        return tuple(row.value for row in self.many.get(name, ()))

    def text(self, name: str, default: str = "") -> str:
        return self.one[name].value if name in self.one else default

    def guarded(self, row: Row, column: str, read: Callable[[str], Any], text: str) -> Any:
        """Return what `read` makes of the text, or None with the fault noted."""
        try:
            return read(text)
        except InputError as error:
            self.faults.add(row.line, column, str(error))
            return None


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
    first = rows[0]
    fields = _Fields(first.kind, first.name, faults, origin, first.line)
    properties: Mapping[str, Any] = {"liquid": LIQUID_PROPERTIES, "grain": GRAIN_FIELDS, "drive": _DRIVE_FIELDS}[first.kind]
    allowed = (*properties, *_TEXTS[first.kind])
    for row in rows:
        if row.field not in allowed:
            faults.add(row.line, "field", f"{shown(row.field)} is not a field of a {row.kind}; expected {', '.join(allowed)}")
        elif not row.value:
            faults.add(row.line, "value", f"the {row.field} of {shown(row.name)} is empty")
        elif row.field in _MANY:
            fields.many.setdefault(row.field, []).append(row)
        elif row.field in fields.one:
            faults.add(row.line, "field", f"{row.field} of {shown(row.name)} is there twice (first in line {fields.one[row.field].line})")
        else:
            fields.one[row.field] = row
    for row in fields.many.get("hazard", ()):
        topic, colon, sentence = row.value.partition(": ")
        if topic not in HAZARD_TOPICS or not colon or not sentence.strip():
            faults.add(row.line, "value", f"{shown(row.value)} is not 'topic: sentence' with a topic of {', '.join(HAZARD_TOPICS)}")
    made = {"liquid": _liquid, "grain": _grain, "drive": _drive}[first.kind](fields)
    return made if len(faults.found) == before else None


def _liquid(fields: _Fields) -> LiquidEntry | None:
    density = _property(fields, "density", None)
    viscosity = _property(fields, "viscosity", density)
    tension = _property(fields, "surface_tension", None)
    pressure = _property(fields, "vapour_pressure", None)
    note = fields.text("vapour_pressure_note")
    if "vapour_pressure" not in fields.one and not note:
        fields.faults.add(fields.line, "field", f"{shown(fields.name)} has neither vapour_pressure nor vapour_pressure_note")
    flash: float | None = None
    if "flash_point" in fields.one:
        row = fields.one["flash_point"]
        flash = fields.guarded(row, "value", temperature_of, f"{row.value} {row.unit}")
    rheology = _rheology(fields)
    if density is None or viscosity is None or tension is None:
        return None
    entry = LiquidEntry(
        name=fields.name, title=fields.text("title", fields.name), synonyms=fields.texts("synonym"), density=density,
        viscosity=viscosity, surface_tension=tension, vapour_pressure=pressure, vapour_pressure_note=note, flash_point_K=flash,
        hazards=fields.texts("hazard"), notes=fields.texts("note"), rheology=rheology, origin=fields.origin,
    )  # fmt: skip
    low, high = entry.range_K
    if not low < high:
        fields.faults.add(fields.line, "from", f"the ranges of {shown(fields.name)} do not overlap")
        return None
    return entry


def _property(fields: _Fields, name: str, density: Property | None) -> Property | None:
    """Return a property, None where it is not stated or faulty; only the vapour pressure may be left out."""
    row = fields.one.get(name)
    if row is None:
        if name != "vapour_pressure":
            fields.faults.add(fields.line, "field", f"the {name} of {shown(fields.name)} is missing")
        return None
    before = len(fields.faults.found)
    law = row.law or "constant"
    coefficients: dict[str, float] = {}
    if law not in LAWS:
        fields.faults.add(row.line, "law", f"{shown(law)} is not a law; expected {', '.join(LAWS)}")
    else:
        coefficients = _coefficients(fields, row, law)
    kinds = LIQUID_PROPERTIES[name][0]
    kinematic = len(kinds) > 1 and _is_kinematic(row.unit)
    kind = kinds[1] if kinematic else kinds[0]
    if law == "walther" and not kinematic:
        fields.faults.add(row.line, "law", "walther gives a kinematic viscosity; expected the unit mm**2/s")
    factor = fields.guarded(row, "unit", lambda unit: factor_of(unit, kind), row.unit)
    ends = [_temperature(fields, row, column, text) for column, text in (("from", row.low), ("to", row.high))]
    uncertainty, read = _uncertainty(fields, row), _read(fields, row)
    if not row.source:
        fields.faults.add(row.line, "source", f"the {name} of {shown(fields.name)} has no source; write 'own measurement' or 'unknown'")
    if len(fields.faults.found) > before:
        return None
    low, high = ends
    if law.startswith("tabulated"):
        points = sorted(float(t) + 273.15 for t in coefficients)
        if low < points[0] - 1e-6 or high > points[-1] + 1e-6:
            fields.faults.add(row.line, "from", "the range goes beyond the points; nothing is extrapolated")
    if kinematic:
        if density is None:
            fields.faults.add(row.line, "unit", "a kinematic viscosity needs the density, which is missing or faulty")
            return None
        low, high = max(low, density.range_K[0]), min(high, density.range_K[1])
    if not low < high:
        fields.faults.add(row.line, "from", f"the range {row.low} to {row.high} is empty; the first must be the smaller")
        return None
    made = Property(
        name=name, law=law, coefficients=coefficients, range_K=(low, high), relative_uncertainty=uncertainty, source=row.source,
        source_read=read, factor=factor, unit=row.unit, density=density if kinematic else None,
    )  # fmt: skip
    if fields.origin != "built in" and len(fields.faults.found) == before:
        _look_at_values(fields, row, made)
    return made


def _is_kinematic(unit: str) -> bool:
    if "/" not in unit and "St" not in unit:
        return False
    try:
        factor_of(unit, "kinematic viscosity")
    except InputError:
        return False
    return True


def _look_at_values(fields: _Fields, row: Row, made: Property) -> None:
    """Note a value that is not finite or out of bounds anywhere in the range."""
    _, least, most = LIQUID_PROPERTIES[made.name]
    kelvin = np.linspace(*made.range_K, 65)
    with np.errstate(all="ignore"):
        values = np.asarray(made.value(kelvin))
    bad = ~(np.isfinite(values) & (values >= least) & (values <= most))
    if np.any(bad):
        i = int(np.argmax(bad))
        fields.faults.add(
            row.line, "value",
            f"the {made.name} would be {values[i]:.3g} at {kelvin[i] - 273.15:.4g} degC; expected {least:g} to {most:g} (SI)",
        )  # fmt: skip


def _coefficients(fields: _Fields, row: Row, name: str) -> dict[str, float]:
    law = LAWS[name]
    tabulated = name.startswith("tabulated")
    if name == "constant" and "=" not in row.value:
        value = fields.guarded(row, "value", number_of, row.value)
        return {} if value is None else {"c": value}
    found: dict[str, float] = {}
    for part in row.value.split(";"):
        key, sign, text = (piece.strip() for piece in part.partition(":" if tabulated else "="))
        if not sign:
            form = "20:1.41; 40:0.28" if tabulated else "A=1.5; B=800"
            fields.faults.add(row.line, "value", f"{shown(part.strip())} is not of the form {form}")
            continue
        if tabulated:
            point = fields.guarded(row, "value", number_of, key)
            key = "" if point is None else repr(point)
        elif key not in law.required and key not in law.optional:
            expected = ", ".join((*law.required, *law.optional))
            fields.faults.add(row.line, "value", f"{shown(key)} is not a coefficient of {name}; expected {expected}")
            continue
        if key in found:
            fields.faults.add(row.line, "value", f"{shown(key)} is there twice")
        value = fields.guarded(row, "value", number_of, text)
        if value is not None and key:
            found[key] = value
    missing = [key for key in law.required if key not in found]
    if missing and not tabulated:
        fields.faults.add(row.line, "value", f"the law {name} needs {', '.join(missing)} as well")
    if tabulated and len(found) < 2:
        fields.faults.add(row.line, "value", "a tabulated law needs two points or more")
    if name == "tabulated_log" and any(value <= 0.0 for value in found.values()):
        fields.faults.add(row.line, "value", "tabulated_log needs values above 0")
    return found


def _temperature(fields: _Fields, row: Row, column: str, text: str) -> Any:
    if not text:
        fields.faults.add(row.line, column, f"the range of {row.field} is missing; expected a temperature such as 20 degC")
        return None
    return fields.guarded(row, column, temperature_of, text)


def _uncertainty(fields: _Fields, row: Row) -> float:
    if not row.uncertainty:
        fields.faults.add(row.line, "uncertainty", f"missing for {row.field}; expected one such as 2 %")
        return math.nan
    value = fields.guarded(row, "uncertainty", ratio_of, row.uncertainty)
    if value is not None and not 0.0 <= value <= 2.0:
        fields.faults.add(row.line, "uncertainty", f"{shown(row.uncertainty)} is not between 0 and 200 %")
    return math.nan if value is None else float(value)


def _read(fields: _Fields, row: Row) -> bool:
    if row.read.lower() not in _YES_NO:
        fields.faults.add(row.line, "read", f"{shown(row.read)} is neither yes nor no: was the source read?")
    return _YES_NO.get(row.read.lower(), False)


def _rheology(fields: _Fields) -> dict[str, Any] | None:
    row = fields.one.get("rheology")
    if row is None:
        return None
    if row.law not in RHEOLOGY_MODELS:
        fields.faults.add(row.line, "law", f"{shown(row.law)} is not a model; expected {', '.join(RHEOLOGY_MODELS)}")
        return None
    expected = RHEOLOGY_MODELS[row.law]
    made: dict[str, Any] = {"model": row.law}
    for part in row.value.split(";"):
        key, _, text = (piece.strip() for piece in part.partition("="))
        if key not in expected or key in made:
            fields.faults.add(row.line, "value", f"{shown(part.strip())} does not fit; {row.law} takes {', '.join(expected)} once each")
            continue
        value = fields.guarded(row, "value", number_of, text)
        if value is not None and value < 0.0:
            fields.faults.add(row.line, "value", f"{key} is {value:g}; expected 0 or more")
        made[key] = value
    missing = [key for key in expected if key not in made]
    if missing:
        fields.faults.add(row.line, "value", f"the model {row.law} needs {', '.join(missing)} as well")
    made.update(source=row.source, source_read=_read(fields, row), relative_uncertainty=_uncertainty(fields, row))
    return made


def _number(fields: _Fields, row: Row, kind: str, bounds: tuple[float, float]) -> float | None:
    value = fields.guarded(row, "value", number_of, row.value)
    factor = fields.guarded(row, "unit", lambda unit: factor_of(unit, kind), row.unit)
    if value is None or factor is None:
        return None
    result = float(f"{float(value) * float(factor):.14g}")  # 0.16 mm is 0.00016 m, not 0.00015999...
    if not bounds[0] <= result <= bounds[1]:
        fields.faults.add(row.line, "value", f"{row.value} {row.unit} is not between {bounds[0]:g} and {bounds[1]:g} (SI)")
        return None
    return result


def _grain(fields: _Fields) -> GrainEntry | None:
    numbers: dict[str, float | None] = {}
    for name, (kind, least, most) in GRAIN_FIELDS.items():
        row = fields.one.get(name)
        if row is None:
            fields.faults.add(fields.line, "field", f"the {name} of {shown(fields.name)} is missing")
        elif name == "unconfined_yield_strength" and row.value.lower() == "free-flowing":
            numbers[name] = None
        else:
            numbers[name] = _number(fields, row, kind, (least, most))
    stated = {name: row for name, row in fields.one.items() if name in GRAIN_FIELDS}
    for row in stated.values():
        if not row.source:
            fields.faults.add(row.line, "source", f"the {row.field} has no source; write 'own measurement' or 'unknown'")
    read = {name: _read(fields, row) for name, row in stated.items()}
    uncertainty = {name: _uncertainty(fields, row) for name, row in stated.items() if numbers.get(name) is not None}
    n = {name: value for name, value in numbers.items() if value is not None}
    if len(n) + ("unconfined_yield_strength" not in n) < len(GRAIN_FIELDS):
        return None
    if not n["d10"] <= n["d50"] <= n["d90"]:
        fields.faults.add(fields.line, "value", f"d10, d50, d90 of {shown(fields.name)} do not rise")
    if not n["bulk_density"] < n["particle_density"]:
        fields.faults.add(fields.line, "value", f"the bulk density of {shown(fields.name)} is not below the particle density")
    return GrainEntry(
        name=fields.name, title=fields.text("title", fields.name), synonyms=fields.texts("synonym"),
        bulk_density=n["bulk_density"], particle_density=n["particle_density"], d10=n["d10"], d50=n["d50"], d90=n["d90"],
        angle_of_repose_rad=n["angle_of_repose"], wall_friction=n["wall_friction"],
        unconfined_yield_strength_Pa=n.get("unconfined_yield_strength"),
        sources={name: row.source for name, row in stated.items()}, source_read=read, uncertainty=uncertainty,
        hazards=fields.texts("hazard"), notes=fields.texts("note"), origin=fields.origin,
    )  # fmt: skip


def _drive(fields: _Fields) -> DriveEntry | None:
    numbers: dict[str, float | None] = {}
    for name, kind in _DRIVE_FIELDS.items():
        row = fields.one.get(name)
        numbers[name] = _number(fields, row, kind, (0.0 if name == "moving_mass" else 1e-12, 1e9)) if row else None
    if numbers["max_force"] is not None and numbers["moving_mass"] is None:
        fields.faults.add(fields.line, "field", f"{shown(fields.name)} has max_force without moving_mass")
    frequencies: tuple[float, float] | None = None
    row = fields.one.get("frequency_range")
    if row is not None:
        low, colon, high = row.value.partition(":")
        ends = [fields.guarded(row, "value", number_of, end) for end in (low, high)] if colon else [None, None]
        factor = fields.guarded(row, "unit", lambda unit: factor_of(unit, "frequency"), row.unit)
        if ends[0] is None or ends[1] is None or factor is None or not 0.0 < ends[0] < ends[1]:
            fields.faults.add(row.line, "value", f"{shown(row.value)} is not a range such as 5:60")
        else:
            frequencies = (ends[0] * factor, ends[1] * factor)
    if frequencies is None and all(value is None for value in numbers.values()):
        fields.faults.add(fields.line, "field", f"{shown(fields.name)} states no limit at all")
    return DriveEntry(
        name=fields.name, title=fields.text("title", fields.name), synonyms=fields.texts("synonym"),
        max_stroke=numbers["max_stroke"], max_velocity=numbers["max_velocity"], max_acceleration=numbers["max_acceleration"],
        max_force=numbers["max_force"], moving_mass=numbers["moving_mass"], frequency_range=frequencies,
        note=" ".join(fields.texts("note")), source=fields.text("source", "common practice"), origin=fields.origin,
    )  # fmt: skip
