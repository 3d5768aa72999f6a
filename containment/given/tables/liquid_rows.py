"""From the rows of a liquid to its entry."""

from typing import Any, Final

import numpy as np

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.errors import InputError
from containment.given.rheology import MODELS as RHEOLOGY_MODELS
from containment.given.tables.entries import LiquidEntry, Property
from containment.given.tables.faults import shown
from containment.given.tables.fields import Fields
from containment.given.tables.laws import LAWS
from containment.given.tables.rows import Row
from containment.given.tables.units import factor_of, number_of, temperature_of

__all__ = ["LIQUID_FIELDS", "LIQUID_PROPERTIES", "liquid_from_rows"]

LIQUID_PROPERTIES: Final = {
    # field: (kinds of unit that state it, least, most), SI
    "density": (("density",), 1.0, 3e4),
    "viscosity": (("viscosity", "kinematic viscosity"), 1e-6, 1e6),
    "surface_tension": (("surface tension",), 1e-5, 10.0),
    "vapour_pressure": (("pressure",), 0.0, 1e7),
}
"""Properties of a liquid and the bounds of what is believed."""

LIQUID_FIELDS: Final = (
    *LIQUID_PROPERTIES, "title", "synonym", "hazard", "note", "flash_point", "vapour_pressure_note", "rheology",
)  # fmt: skip
"""Fields that a liquid may have."""

def liquid_from_rows(fields: Fields) -> LiquidEntry | None:
    """Return the liquid, or None where a property is missing or faulty."""
    density = _property(fields, "density", None)
    viscosity = _property(fields, "viscosity", density)
    tension = _property(fields, "surface_tension", None)
    pressure = _property(fields, "vapour_pressure", None)
    note = fields.text("vapour_pressure_note")
    if "vapour_pressure" not in fields.one and not note:
        fields.missing("vapour_pressure (or vapour_pressure_note that says why it is negligible)")
    flash: float | None = None
    if "flash_point" in fields.one:
        row = fields.one["flash_point"]
        flash = fields.guarded(row, "value", temperature_of, f"{row.value} {row.unit}")
    rheology = _rheology(fields)
    if density is None or viscosity is None or tension is None:
        return None
    entry = LiquidEntry(
        **fields.common(), density=density, viscosity=viscosity, surface_tension=tension, vapour_pressure=pressure,
        vapour_pressure_note=note, flash_point_K=flash, hazards=fields.texts("hazard"), notes=fields.texts("note"),
        rheology=rheology,
    )  # fmt: skip
    low, high = entry.range_K
    if not low < high:
        fields.faults.add(fields.line, "from", f"the ranges of {shown(fields.name)} do not overlap")
        return None
    return entry


def _property(fields: Fields, name: str, density: Property | None) -> Property | None:
    """Return a property, None where it is not stated or faulty; only the vapour pressure may be left out."""
    row = fields.one.get(name)
    if row is None:
        if name != "vapour_pressure":
            fields.missing(name)
        return None
    before = len(fields.faults.found)
    law = row.law or "constant"
    coefficients = _coefficients(fields, row, law)
    kinds = LIQUID_PROPERTIES[name][0]
    kinematic = len(kinds) > 1 and _is_kinematic(row.unit)
    kind = kinds[1] if kinematic else kinds[0]
    if law == "walther" and not kinematic:
        fields.faults.add(row.line, "unit", "walther gives a kinematic viscosity; expected a unit such as mm**2/s")
    factor = fields.guarded(row, "unit", lambda unit: factor_of(unit, kind), row.unit)
    low = fields.temperature(row, "from", row.low)
    high = fields.temperature(row, "to", row.high)
    uncertainty, read, source = fields.uncertainty(row), fields.read(row), fields.source(row)
    if len(fields.faults.found) > before or low is None or high is None or factor is None:
        return None
    if law.startswith("tabulated") and not _inside(coefficients, low, high):
        fields.faults.add(row.line, "from", "the range goes beyond the points; nothing is extrapolated")
        return None
    if kinematic:
        if density is None:
            fields.faults.add(row.line, "unit", "a kinematic viscosity needs the density, which is missing or faulty")
            return None
        low, high = max(low, density.range_K[0]), min(high, density.range_K[1])
    if not low < high:
        fields.faults.add(row.line, "from", f"the range {row.low} to {row.high} is empty; the first must be smaller")
        return None
    made = Property(
        name=name, law=law, coefficients=coefficients, range_K=(low, high), relative_uncertainty=uncertainty,
        source=source, source_read=read, factor=factor, unit=row.unit, density=density if kinematic else None,
    )  # fmt: skip
    if fields.origin != "built in":  # the tests look at those that come with the package
        _look_at_values(fields, row, made)
    return made


def _inside(points: dict[str, float], low: float, high: float) -> bool:
    ends = sorted(float(t) - ABSOLUTE_ZERO_CELSIUS for t in points)
    return low >= ends[0] - 1e-6 and high <= ends[-1] + 1e-6


def _is_kinematic(unit: str) -> bool:
    if "/" not in unit and "St" not in unit and "stokes" not in unit:
        return False
    try:
        factor_of(unit, "kinematic viscosity")
    except InputError:
        return False
    return True


def _look_at_values(fields: Fields, row: Row, made: Property) -> None:
    """Note a value that is not finite or out of bounds anywhere in the range."""
    _, least, most = LIQUID_PROPERTIES[made.name]
    kelvin = np.linspace(*made.range_K, 257)
    with np.errstate(all="ignore"):
        values = np.asarray(made.value(kelvin))
    bad = ~(np.isfinite(values) & (values >= least) & (values <= most))
    if np.any(bad):
        i = int(np.argmax(bad))
        at = f"{kelvin[i] + ABSOLUTE_ZERO_CELSIUS:.4g} degC"
        reason = f"the {made.name} would be {values[i]:.3g} at {at}; expected {least:g} to {most:g} (SI)"
        fields.faults.add(row.line, "value", reason)


def _coefficients(fields: Fields, row: Row, name: str) -> dict[str, float]:
    if name not in LAWS:
        fields.faults.add(row.line, "law", f"{shown(name)} is not a law; expected {', '.join(LAWS)}")
        return {}
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


def _rheology(fields: Fields) -> dict[str, Any] | None:
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
            reason = f"{shown(part.strip())} does not fit; {row.law} takes {', '.join(expected)}, each once"
            fields.faults.add(row.line, "value", reason)
            continue
        value = fields.guarded(row, "value", number_of, text)
        if value is not None and value < 0.0:
            fields.faults.add(row.line, "value", f"{key} is {value:g}; expected 0 or more")
        made[key] = value
    missing = [key for key in expected if key not in made]
    if missing:
        fields.faults.add(row.line, "value", f"the model {row.law} needs {', '.join(missing)} as well")
    made.update(
        source=fields.source(row), source_read=fields.read(row), relative_uncertainty=fields.uncertainty(row)
    )
    return made
