"""The rows of one entry, sorted by field, and how single cells are read."""

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass, field
from typing import Any, Final, TypeVar

from containment.errors import InputError
from containment.given.tables.faults import Faults, shown
from containment.given.tables.rows import Row
from containment.given.tables.units import factor_of, number_of, ratio_of, temperature_of

__all__ = ["HAZARD_TOPICS", "Fields"]

Value = TypeVar("Value")

HAZARD_TOPICS: Final = (
    "flammable", "toxic", "corrosive", "irritant", "slippery", "hot", "sticky", "environment", "reactive",
    "dust explosion", "inhalation", "static",
)  # fmt: skip
"""Topics that a hazard of a table may have; its row reads ``topic: sentence``."""

_MANY: Final = ("synonym", "hazard", "note")
_YES_NO: Final = {"yes": True, "true": True, "no": False, "false": False}


@dataclass(slots=True)
class Fields:
    """The rows of one entry by field; what is wrong with them goes to the file's faults."""

    kind: str
    name: str
    line: int
    origin: str
    faults: Faults
    one: dict[str, Row] = field(default_factory=dict)
    many: dict[str, list[Row]] = field(default_factory=dict)

    @classmethod
    def of(cls, rows: Sequence[Row], faults: Faults, *, origin: str, allowed: Sequence[str]) -> "Fields":
        """Sort rows of one entry, of which there is at least one, into the allowed fields."""
        first = rows[0]
        fields = cls(first.kind, first.name, first.line, origin, faults)
        for row in rows:
            if row.field not in allowed:
                reason = f"{shown(row.field)} is not a field of a {row.kind}; expected {', '.join(allowed)}"
                faults.add(row.line, "field", reason)
            elif not row.value:
                faults.add(row.line, "value", f"the {row.field} of {shown(row.name)} is empty")
            elif row.field in _MANY:
                fields.many.setdefault(row.field, []).append(row)
            elif row.field in fields.one:
                before = fields.one[row.field].line
                faults.add(row.line, "field", f"{row.field} of {shown(row.name)} is there twice (first in line {before})")
            else:
                fields.one[row.field] = row
        for row in fields.many.get("hazard", ()):
            topic, colon, sentence = row.value.partition(": ")
            if topic not in HAZARD_TOPICS or not colon or not sentence.strip():
                expected = f"'topic: sentence' with a topic of {', '.join(HAZARD_TOPICS)}"
                faults.add(row.line, "value", f"{shown(row.value)} is not {expected}")
        return fields

    def texts(self, name: str) -> tuple[str, ...]:
        """Return the texts of a field that may be there many times."""
        return tuple(row.value for row in self.many.get(name, ()))

    def text(self, name: str, default: str = "") -> str:
        """Return the text of a field that is there once or not at all."""
        return self.one[name].value if name in self.one else default

    def missing(self, name: str) -> None:
        """Note that a field is missing."""
        self.faults.add(self.line, "field", f"the {name} of {shown(self.name)} is missing")

    def guarded(self, row: Row, column: str, read: Callable[[str], Value], text: str) -> Value | None:
        """Return what `read` makes of the text, or None with the fault noted."""
        try:
            return read(text)
        except InputError as error:
            self.faults.add(row.line, column, str(error))
            return None

    def number(self, row: Row, kind: str, *, least: float, most: float) -> float | None:
        """Return a number with the row's unit in SI."""
        value = self.guarded(row, "value", number_of, row.value)
        factor = self.guarded(row, "unit", lambda unit: factor_of(unit, kind), row.unit)
        if value is None or factor is None:
            return None
        result = float(f"{value * factor:.14g}")  # 0.16 mm is 0.00016 m, not 0.00015999...
        if not least <= result <= most:
            reason = f"{row.value} {row.unit} is not between {least:g} and {most:g} (SI)"
            self.faults.add(row.line, "value", reason)
            return None
        return result

    def temperature(self, row: Row, column: str, text: str) -> float | None:
        """Return an end of a range in K."""
        if not text:
            reason = f"the range of {row.field} is missing; expected a temperature such as 20 degC"
            self.faults.add(row.line, column, reason)
            return None
        return self.guarded(row, column, temperature_of, text)

    def uncertainty(self, row: Row) -> float:
        """Return the relative uncertainty."""
        if not row.uncertainty:
            self.faults.add(row.line, "uncertainty", f"missing for {row.field}; expected one such as 2 %")
            return math.nan
        value = self.guarded(row, "uncertainty", ratio_of, row.uncertainty)
        if value is not None and not 0.0 <= value <= 2.0:
            self.faults.add(row.line, "uncertainty", f"{shown(row.uncertainty)} is not between 0 and 200 %")
        return math.nan if value is None else value

    def source(self, row: Row) -> str:
        """Return the source, which nothing goes without."""
        if not row.source:
            reason = f"the {row.field} of {shown(self.name)} has no source; write 'own measurement' or 'unknown'"
            self.faults.add(row.line, "source", reason)
        return row.source

    def read(self, row: Row) -> bool:
        """Return whether the source was read."""
        if row.read.lower() not in _YES_NO:
            self.faults.add(row.line, "read", f"{shown(row.read)} is neither yes nor no: was the source read?")
        return _YES_NO.get(row.read.lower(), False)

    def common(self) -> dict[str, Any]:
        """Return what all kinds of entries have."""
        return {
            "name": self.name,
            "title": self.text("title", self.name),
            "synonyms": self.texts("synonym"),
            "origin": self.origin,
        }
