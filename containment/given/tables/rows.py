"""Rows of a property table: one row a property, many rows an entry.

Columns: kind, name, property, law, coefficients, unit, t_min, t_max, uncertainty, read, text; the heads of t_min and t_max
carry their unit in brackets, such as ``t_min [degC]``. Lines that start with # are comments.
"""

import csv
import re
from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from typing import Final

from containment.errors import InputError

__all__ = ["COLUMNS", "Fault", "Record", "Row", "names_match", "read_rows", "records_of", "shown"]

COLUMNS: Final = (
    "kind", "name", "property", "law", "coefficients", "unit", "t_min", "t_max", "uncertainty", "read", "text",
)  # fmt: skip
_REQUIRED: Final = ("kind", "name", "property", "coefficients", "text")
_WITH_UNIT: Final = ("t_min", "t_max")
_TEMPERATURE_UNITS: Final = ("degC", "degF", "K")
_LONGEST_CELL: Final = 2000
_HEAD: Final = re.compile(r"\s*([a-z_]+)\s*(?:\[\s*([^\]]*?)\s*\])?\s*")
_CONTROL: Final = re.compile(r"[\x00-\x1f\x7f-\x9f\u200b-\u200f\u2028-\u202e\u2060-\u2069\ufeff]")


@dataclass(frozen=True, slots=True)
class Fault:
    """A fault of a table file: line (from 1), column, reason."""

    line: int
    column: str
    reason: str

    def __str__(self) -> str:
        """Return the fault in one line."""
        return f"line {self.line}, {self.column}: {self.reason}"


@dataclass(frozen=True, slots=True)
class Row:
    """One row: its line and its cells by column; the unit of a temperature column under ``unit of t_min``."""

    line: int
    cells: Mapping[str, str]

    def __getitem__(self, column: str) -> str:
        """Return a cell, empty where the table has no such column."""
        return self.cells.get(column, "")


@dataclass(slots=True)
class Record:
    """The rows of one entry."""

    kind: str
    name: str
    rows: list[Row]
    origin: str

    @property
    def synonyms(self) -> tuple[str, ...]:
        """Other names of the entry."""
        words = [word.strip() for row in self.rows if row["property"] == "synonyms" for word in row["text"].split(";")]
        return tuple(word for word in words if word)


def shown(text: str, most: int = 40) -> str:
    """Return a cell for a message: one printable line of bounded length, in quotes."""
    clean = "".join(c if c.isprintable() else "?" for c in text[: most + 1])
    return repr(clean if len(text) <= most else clean[: most - 3] + "...")


def names_match(name: str) -> str:
    """Return the form in which names are compared: lower case, blanks, underscores and hyphens alike.

    Examples
    --------
    >>> names_match("  Castor_Oil ") == names_match("castor oil") == names_match("castor-oil")
    True
    """
    return re.sub(r"[\s_-]+", "-", name.strip().lower())


def _heads(line: int, cells: list[str], faults: list[Fault]) -> list[tuple[str, str]]:
    heads: list[tuple[str, str]] = []
    for cell in cells:
        match = _HEAD.fullmatch(cell)
        column, unit = (match.group(1), match.group(2) or "") if match else ("", "")
        if column not in COLUMNS:
            faults.append(Fault(line, "header", f"{shown(cell)} is not a column; expected {', '.join(COLUMNS)}"))
        elif column in [head for head, _ in heads]:
            faults.append(Fault(line, "header", f"{shown(column)} stands twice; expected each column once"))
        elif column in _WITH_UNIT and unit not in _TEMPERATURE_UNITS:
            faults.append(Fault(line, "header", f"{shown(cell)} needs its unit, such as {column} [degC]"))
        elif column not in _WITH_UNIT and unit:
            faults.append(Fault(line, "header", f"{shown(cell)}: units of values stand in the column 'unit'"))
        heads.append((column, unit))
    present = [head for head, _ in heads]
    for column in _REQUIRED:
        if column not in present:
            faults.append(Fault(line, "header", f"the column {column!r} is missing"))
    return heads


def read_rows(lines: Iterable[str]) -> tuple[list[Row], list[Fault]]:
    """Return the rows of a table in CSV, and its faults of form."""
    rows: list[Row] = []
    faults: list[Fault] = []
    heads: list[tuple[str, str]] | None = None
    reader = csv.reader(lines, strict=True)
    try:
        for cells in reader:
            line = reader.line_num
            if not cells or cells[0].lstrip().startswith("#") or not any(cells):
                continue
            if heads is None:
                heads = _heads(line, cells, faults)
                if faults:
                    return rows, faults
                continue
            if len(cells) != len(heads):
                faults.append(Fault(line, "row", f"{len(cells)} cells; expected {len(heads)}, as in the header"))
                continue
            found = {}
            for (column, unit), cell in zip(heads, cells, strict=True):
                found[column] = cell.strip()
                if unit:
                    found["unit of " + column] = unit
                if len(cell) > _LONGEST_CELL:
                    faults.append(Fault(line, column, f"{len(cell)} characters; at most {_LONGEST_CELL} are allowed"))
                elif _CONTROL.search(cell):
                    faults.append(Fault(line, column, f"{shown(cell)} holds a character that cannot be printed"))
                elif cell[:1] in ("=", "@"):
                    faults.append(Fault(line, column, f"{shown(cell)} looks like a spreadsheet formula; write its value"))
            rows.append(Row(line, found))
    except csv.Error as error:
        faults.append(Fault(reader.line_num, "row", f"not readable as CSV ({error})"))
    if heads is None and not faults:
        faults.append(Fault(1, "header", f"the table is empty; expected the columns {', '.join(COLUMNS)}"))
    return rows, faults


def records_of(rows: Iterable[Row], origin: str) -> dict[tuple[str, str], Record]:
    """Return the rows grouped by kind and name, in the order of the file."""
    records: dict[tuple[str, str], Record] = {}
    for row in rows:
        key = (row["kind"], names_match(row["name"]))
        record = records.get(key)
        if record is None:
            records[key] = record = Record(row["kind"], row["name"], [], origin)
        record.rows.append(row)
    return records


def refuse(faults: Iterable[Fault], origin: str) -> None:
    """Raise one error that tells all faults.

    Raises
    ------
    InputError
        Where there is any fault.
    """
    told = list(faults)
    if told:
        most = 20
        lines = "; ".join(str(fault) for fault in told[:most])
        more = f"; and {len(told) - most} more" if len(told) > most else ""
        raise InputError(f"table {origin}: {len(told)} fault{'s' if len(told) > 1 else ''}: {lines}{more}")
