"""Rows of a table file, CSV or TOML: what is written, not yet what it means.

Both forms say the same: an entry of a kind (liquid, grain, drive) has fields, and a field has a law or a value, a unit, a
range of temperature, an uncertainty, a source, and whether that source was read.
"""

import csv
import io
import re
from collections.abc import Iterator
from pathlib import Path
from typing import Any, Final, NamedTuple

from containment.errors import InputError
from containment.given.tables.faults import Faults, shown

__all__ = ["COLUMNS", "KINDS_OF_ENTRY", "Row", "file_text", "read_rows"]

KINDS_OF_ENTRY: Final = ("liquid", "grain", "drive")
COLUMNS: Final = ("kind", "name", "field", "law", "value", "unit", "from", "to", "uncertainty", "source", "read")
_NEEDED: Final = ("kind", "name", "field", "value")
_WITH_UNIT: Final = ("from", "to", "uncertainty")

_MOST_BYTES: Final = 2_000_000
_LONGEST_CELL: Final = 2_000
_MOST_ROWS: Final = 20_000
_MARKUP: Final = re.compile(r"<[A-Za-z/!?]|&#|\[/?[a-z@#][^\]]*\]", re.IGNORECASE)
_FORMULA: Final = re.compile(r"\s*[=@|]|\s*[+-](?!\s*(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?(?:[\s:;%]|$))")
_HEADER: Final = re.compile(r"\s*([A-Za-z_]+)\s*(?:\[([^\]]*)\])?\s*")
_NUMBER: Final = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?")


class Row(NamedTuple):
    """A field of an entry, as text; `low`, `high` and `uncertainty` carry their unit."""

    line: int
    kind: str
    name: str
    field: str
    law: str = ""
    value: str = ""
    unit: str = ""
    low: str = ""
    high: str = ""
    uncertainty: str = ""
    source: str = ""
    read: str = ""


def read_rows(path: Path, *, trusted: bool = False) -> tuple[list[Row], Faults]:
    """Return the rows of a table file and the faults found so far.

    Parameters
    ----------
    path : Path
        A file that ends in ``.csv`` or ``.toml``, UTF-8, at most 2 MB.
    trusted : bool
        Leave out the search for hostile cells: only for the tables that come with the package.

    Raises
    ------
    InputError
        The file cannot be read as text at all.
    """
    name = "".join(c if c.isprintable() else "?" for c in path.name)
    faults = Faults(name)
    text = file_text(path, name)
    if path.suffix.lower() == ".toml":
        from containment.given.tables.toml_rows import toml_rows

        rows = list(toml_rows(text, faults))
    elif path.suffix.lower() == ".csv":
        rows = list(_csv_rows(text, faults))
    else:
        raise InputError(f"table {name}: the name ends in {shown(path.suffix)}; expected .csv or .toml")
    if not trusted:
        for row in rows:
            _look_for_hostile_cells(row, faults)
    return rows, faults


def file_text(path: Path, name: str) -> str:
    """Return the text of a user's file.

    Raises
    ------
    InputError
        The file cannot be read, is too large, is binary or not UTF-8; `name` names it in the message.
    """
    try:
        if not path.is_file():
            raise InputError(f"table {name}: not found, or not a file; expected a CSV or TOML file")
        with path.open("rb") as stream:
            data = stream.read(_MOST_BYTES + 1)
    except OSError as error:
        raise InputError(f"table {name}: cannot be read ({error.strerror}); expected a CSV or TOML file") from error
    if len(data) > _MOST_BYTES:
        raise InputError(f"table {name}: larger than {_MOST_BYTES // 1_000_000} MB; expected a table of text")
    if b"\0" in data:
        raise InputError(f"table {name}: holds binary data; expected CSV or TOML text in UTF-8")
    try:
        return data.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = data[: error.start].count(b"\n") + 1
        raise InputError(f"table {name}: line {line} is not UTF-8 text; save the file in UTF-8") from error


def _csv_rows(text: str, faults: Faults) -> Iterator[Row]:
    reader = csv.reader(io.StringIO(text, newline=""), strict=True)
    try:
        header = next((cells for cells in reader if cells and not cells[0].startswith("#")), None)
        if header is None:
            faults.add(1, "header", f"the file is empty; expected the columns {', '.join(COLUMNS)}")
            return
        places = _places(header, reader.line_num, faults)
        if places is None:
            return
        count = len(header)
        order = [places.get(column, (count, ""))[0] for column in COLUMNS]
        units = [places.get(column, (count, ""))[1] for column in _WITH_UNIT]
        for cells in reader:
            if not cells or cells[0].startswith("#"):
                continue
            if len(cells) != count:
                if any(cell.strip() for cell in cells):
                    reason = f"has {len(cells)} cells where the header has {count}; put quotes round commas"
                    faults.add(reader.line_num, "row", reason)
                continue
            cells.append("")  # what a column that is not there reads
            kind, name, field, law, value, unit, low, high, uncertainty, source, read = (
                cells[place].strip() for place in order
            )
            if low or high:
                low, high = _with_unit(low, units[0]), _with_unit(high, units[1])
            if uncertainty:
                uncertainty = _with_unit(uncertainty, units[2])
            yield Row(
                reader.line_num, kind.lower(), name, field.lower(), law.lower(), value, unit, low, high, uncertainty,
                source, read,
            )  # fmt: skip
            if reader.line_num > _MOST_ROWS:
                faults.add(reader.line_num, "row", f"more than {_MOST_ROWS} lines; expected a smaller table")
                return
    except csv.Error as error:
        faults.add(reader.line_num, "row", f"is not CSV ({error}); expected commas between cells and quotes in pairs")


def _with_unit(cell: str, unit: str) -> str:
    return f"{cell} {unit}" if unit and cell and _NUMBER.fullmatch(cell) else cell


def _places(header: list[str], line: int, faults: Faults) -> dict[str, tuple[int, str]] | None:
    """Return the place and the unit of each column."""
    places: dict[str, tuple[int, str]] = {}
    before = len(faults.found)
    for i, cell in enumerate(header):
        match = _HEADER.fullmatch(cell)
        column = match.group(1).lower() if match else ""
        if match is None or column not in COLUMNS:
            faults.add(line, "header", f"{shown(cell)} is not a column; expected {', '.join(COLUMNS)}")
        elif column in places:
            faults.add(line, "header", f"{shown(cell)} is there twice; expected each column once")
        elif match.group(2) and column not in _WITH_UNIT:
            faults.add(line, "header", f"{shown(cell)} cannot carry a unit; only {', '.join(_WITH_UNIT)} can")
        else:
            places[column] = (i, (match.group(2) or "").strip())
    for column in _NEEDED:
        if column not in places and len(faults.found) == before:
            faults.add(line, "header", f"the column {column} is missing; expected {', '.join(COLUMNS)}")
    return None if len(faults.found) > before else places


def _look_for_hostile_cells(row: Row, faults: Faults) -> None:
    cells: dict[str, Any] = {
        "kind": row.kind, "name": row.name, "field": row.field, "law": row.law, "value": row.value, "unit": row.unit,
        "from": row.low, "to": row.high, "uncertainty": row.uncertainty, "source": row.source, "read": row.read,
    }  # fmt: skip
    for column, cell in cells.items():
        if not cell:
            continue
        if len(cell) > _LONGEST_CELL:
            faults.add(row.line, column, f"has {len(cell)} characters; at most {_LONGEST_CELL} are allowed")
        elif not cell.isprintable():
            faults.add(row.line, column, f"{shown(cell)} holds control characters; expected plain text")
        elif _FORMULA.match(cell):
            reason = f"{shown(cell)} looks like a spreadsheet formula; expected plain text or a number"
            faults.add(row.line, column, reason)
        elif _MARKUP.search(cell):
            faults.add(row.line, column, f"{shown(cell)} holds markup; expected plain text")
