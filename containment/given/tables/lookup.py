"""Names to entries: user tables first, then the built-in ones."""

import functools
from collections.abc import Callable, Iterable, Sequence
from pathlib import Path
from typing import Any, Final, TypeVar

from containment.data_files import data_file
from containment.errors import InputError
from containment.given.tables.building import build_drive, build_grain, build_liquid
from containment.given.tables.entries import DriveEntry, GrainEntry, LiquidEntry
from containment.given.tables.rows import Fault, Record, names_match, read_rows, records_of, refuse, shown

__all__ = ["drive_entry", "drive_names", "grain_entry", "grain_names", "liquid_entry", "liquid_names"]

_FILES: Final = {"liquid": "liquids.csv", "grain": "grains.csv", "drive": "drives.csv"}
_CALLED: Final = {"liquid": "liquid", "grain": "material", "drive": "drive"}
_Entry = TypeVar("_Entry")


@functools.cache
def _built_in(kind: str) -> dict[str, Record]:
    """Return the built-in records of a kind by name."""
    path = data_file(_FILES[kind])
    with path.open(encoding="utf-8", newline="") as stream:
        rows, faults = read_rows(stream)
    refuse(faults, path.name)
    return {name: record for (of, name), record in records_of(rows, "built in").items() if of == kind}


def _user_records(tables: Iterable[str | Path], kind: str) -> dict[str, Record]:
    from containment.given.tables.user_table import user_records

    found: dict[str, Record] = {}
    for table in tables:
        for (of, name), record in user_records(Path(table)).items():
            if of == kind:
                found.setdefault(name, record)
    return found


def _records(kind: str, tables: Sequence[str | Path]) -> dict[str, Record]:
    if not tables:
        return _built_in(kind)
    return {**_built_in(kind), **_user_records(tables, kind)}


@functools.cache
def _built_in_synonyms(kind: str) -> dict[str, str]:
    return _synonyms(_built_in(kind))


def _synonyms(records: dict[str, Record]) -> dict[str, str]:
    return {names_match(other): name for name, record in records.items() for other in record.synonyms}


def _find(kind: str, name: str, tables: Sequence[str | Path]) -> Record:
    if not isinstance(name, str):
        raise InputError(f"{_CALLED[kind]}: {name!r} is not a name; expected text")
    wanted = names_match(name)
    records = _records(kind, tables)
    if wanted in records:
        return records[wanted]
    synonyms = _synonyms(records) if tables else _built_in_synonyms(kind)
    if wanted in synonyms:
        return records[synonyms[wanted]]
    import difflib

    close = difflib.get_close_matches(wanted[:80], [*records, *synonyms], n=12, cutoff=0.55)
    parts = [known for known in records if wanted and (wanted in known or known in wanted)]
    told: list[str] = []
    for match in (*parts, *close):
        known = records[synonyms.get(match, match)].name
        if known not in told:
            told.append(known)
    hint = f"did you mean {', '.join(told[:5])}?" if told else "no name is close;"
    raise InputError(f"{_CALLED[kind]}: {shown(name)} is not in the table; {hint} 'containment table' lists all")


def _entry(
    kind: str, name: str, tables: Sequence[str | Path], build: Callable[[Record, list[Fault]], _Entry | None]
) -> _Entry:
    record = _find(kind, name, tables)
    faults: list[Fault] = []
    entry = build(record, faults)
    refuse(faults, record.origin)
    assert entry is not None
    return entry


def _names(kind: str, tables: Sequence[str | Path]) -> list[str]:
    return sorted((record.name for record in _records(kind, tables).values()), key=_by_number)


def _by_number(name: str) -> list[Any]:
    """Sort ``oil 100`` before ``oil 1000`` and after ``oil 50``."""
    import re

    return [(int(part), "") if part.isdigit() else (0, part) for part in re.split(r"(\d+)", name)]


def liquid_entry(name: str, tables: Sequence[str | Path] = ()) -> LiquidEntry:
    """Return a liquid by its name or a synonym.

    Parameters
    ----------
    name : str
        Case does not matter; blanks, underscores and hyphens are alike.
    tables : sequence of path
        User tables, searched first.

    Returns
    -------
    LiquidEntry

    Raises
    ------
    InputError
        An unknown name (the text offers the closest), or a table that cannot be used.

    Examples
    --------
    >>> glycerol = liquid_entry("Glycerol")
    >>> round(glycerol.viscosity.value(293.15), 2)
    1.41
    """
    return _entry("liquid", name, tables, build_liquid)


def grain_entry(name: str, tables: Sequence[str | Path] = ()) -> GrainEntry:
    """Return a granular material by its name or a synonym; see `liquid_entry`.

    Examples
    --------
    >>> grain_entry("dry sand").unconfined_yield_strength_Pa is None
    True
    """
    return _entry("grain", name, tables, build_grain)


def drive_entry(name: str, tables: Sequence[str | Path] = ()) -> DriveEntry:
    """Return a class of drives by its name or a synonym; see `liquid_entry`.

    Examples
    --------
    >>> drive_entry("voice coil").frequency_range
    (2.0, 200.0)
    """
    return _entry("drive", name, tables, build_drive)


def liquid_names(tables: Sequence[str | Path] = ()) -> list[str]:
    """Return the names of all liquids, sorted."""
    return _names("liquid", tables)


def grain_names(tables: Sequence[str | Path] = ()) -> list[str]:
    """Return the names of all granular materials, sorted."""
    return _names("grain", tables)


def drive_names(tables: Sequence[str | Path] = ()) -> list[str]:
    """Return the names of all classes of drives, sorted."""
    return _names("drive", tables)
