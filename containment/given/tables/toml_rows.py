"""Rows of a table that is written in TOML."""

import re
import tomllib
from collections.abc import Iterator
from typing import Any, Final

from containment.given.tables.faults import Faults, shown
from containment.given.tables.rows import COLUMNS, KINDS_OF_ENTRY, Row

__all__ = ["toml_rows"]

_LISTS: Final = {"synonyms": "synonym", "hazards": "hazard", "notes": "note"}
_KEYS: Final = COLUMNS[3:]


def toml_rows(text: str, faults: Faults) -> Iterator[Row]:
    """Yield the rows of a TOML table: ``[liquid.NAME]`` with one sub-table or value a field.

    Parameters
    ----------
    text : str
        The file's.
    faults : Faults
        Gets what is wrong with the form.
    """
    try:
        document = tomllib.loads(text)
    except (tomllib.TOMLDecodeError, RecursionError) as error:
        line = re.search(r"at line (\d+)", str(error))
        faults.add(int(line.group(1)) if line else 1, "file", f"is not TOML ({str(error)[:100]})")
        return
    for kind, entries in document.items():
        if kind not in KINDS_OF_ENTRY or not isinstance(entries, dict):
            expected = ", ".join(f"[{known}.NAME]" for known in KINDS_OF_ENTRY)
            faults.add(_line(text, kind), shown(kind), f"is not a kind of entry; expected {expected}")
            continue
        for name, fields in entries.items():
            if not isinstance(fields, dict) or not fields:
                faults.add(_line(text, name), shown(name), "is not a table of fields")
                continue
            for field, content in fields.items():
                yield from _field_rows(_line(text, name, field), kind, name, field, content, faults)


def _field_rows(line: int, kind: str, name: str, field: str, content: Any, faults: Faults) -> Iterator[Row]:
    if field in _LISTS:
        if not isinstance(content, list) or not all(isinstance(item, str) for item in content):
            faults.add(line, field, "is not a list of texts")
            return
        for item in content:
            yield Row(line, kind, name, _LISTS[field], value=item)
    elif isinstance(content, dict):
        unknown = [key for key in content if key not in _KEYS]
        if unknown:
            faults.add(line, field, f"has the key {shown(unknown[0])}; expected {', '.join(_KEYS)}")
            return
        cells = {key: _text(content.get(key, "")) for key in _KEYS}
        low, high = cells.pop("from"), cells.pop("to")
        cells["law"] = cells["law"].lower()
        yield Row(line, kind, name, field, low=low, high=high, **cells)
    elif isinstance(content, list):
        faults.add(line, field, "is a list; expected a text or a table with law, value, unit, from, to")
    else:
        value = _text(content)
        number = re.fullmatch(r"([+-]?[\d.]+(?:[eE][+-]?\d+)?)\s*(\D.*)", value) if field not in ("title", "name") else None
        if number:  # "210 degC" in one text
            yield Row(line, kind, name, field, value=number.group(1), unit=number.group(2))
        else:
            yield Row(line, kind, name, field, value=value)


def _text(content: Any) -> str:
    if isinstance(content, bool):
        return "yes" if content else "no"
    if isinstance(content, dict):  # coefficients = {A = 1.0, B = 2.0}
        return "; ".join(f"{key}={_text(value)}" for key, value in content.items())
    return str(content).strip()


def _line(text: str, *keys: str) -> int:
    """Return the line of a key that stands behind the others, for messages (0 where it cannot be told)."""
    lines, found = text.splitlines(), 0
    for key in keys:
        pattern = re.compile(rf"(?:^|[\s\[.\"'{{,]){re.escape(key)}(?:[\s\].\"'=}}]|$)")
        following = (i for i in range(max(found - 1, 0), len(lines)) if pattern.search(lines[i].split("#")[0]))
        found = next(following, found - 1) + 1
    return found
