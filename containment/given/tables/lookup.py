"""Find an entry by its name: in the user's tables first, then in those that come with the package."""

import functools
import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from pathlib import Path
from typing import Any, Final, TypeVar

from containment.data_files import data_file
from containment.errors import ContainmentError, InputError
from containment.given.tables.building import build
from containment.given.tables.entries import DriveEntry, GrainEntry, LiquidEntry
from containment.given.tables.faults import Faults, shown
from containment.given.tables.rows import KINDS_OF_ENTRY, Row, read_rows

__all__ = [
    "drive_entry",
    "drive_names",
    "grain_entry",
    "grain_names",
    "liquid_entry",
    "liquid_names",
    "name_key",
    "table_notices",
]

Entry = TypeVar("Entry", LiquidEntry, GrainEntry, DriveEntry)

_FILES: Final = {"liquid": "liquids.csv", "grain": "grains.csv", "drive": "drives.csv"}
_WORDS: Final = {"liquid": "liquid", "grain": "granular material", "drive": "drive"}
_NAME: Final = re.compile(r"[^\W_][\w .,+/%()'-]{0,79}")


def name_key(name: str) -> str:
    """Return what names are compared by: letters and digits, whatever the case, blanks, hyphens and underscores.

    Examples
    --------
    >>> name_key("ISO-VG 460") == name_key("iso_vg_460")
    True
    """
    return re.sub(r"[\s_\-%,]+", "", name).casefold()


@dataclass(slots=True)
class _Table:
    """The rows of a file by kind and entry, and which entry a name or synonym means."""

    faults: Faults
    rows: dict[tuple[str, str], list[Row]]
    meant: dict[tuple[str, str], str]
    built: dict[tuple[str, str], Any]
    origin: str

    def entry(self, kind: str, key: str) -> Any:
        """Return the entry of a key, built at its first use."""
        if (kind, key) not in self.built:
            self.built[kind, key] = build(self.rows[kind, key], self.faults, origin=self.origin)
        return self.built[kind, key]


def _table(path: Path, *, trusted: bool) -> _Table:
    rows, faults = read_rows(path, trusted=trusted)
    table = _Table(faults, {}, {}, {}, "built in" if trusted else faults.file)
    name, key = "", ""
    for row in rows:
        if row.kind not in KINDS_OF_ENTRY:
            reason = f"{shown(row.kind)} is not a kind of entry; expected {', '.join(KINDS_OF_ENTRY)}"
            faults.add(row.line, "kind", reason)
            continue
        if row.name != name:  # the rows of an entry stand together
            name, key = row.name, name_key(row.name)
        if not trusted and (not key or not _NAME.fullmatch(row.name)):
            faults.add(row.line, "name", f"{shown(row.name)} is not a name; expected letters, digits, blanks and hyphens")
            continue
        if key == "custom":
            faults.add(row.line, "name", "'custom' is kept for a liquid given by its three properties")
            continue
        entry = table.rows.setdefault((row.kind, key), [])
        if entry and entry[0].name != row.name:
            faults.add(row.line, "name", f"{shown(row.name)} and {shown(entry[0].name)} are the same name")
        if not entry:
            _note_meaning(table, row, key)
        entry.append(row)
        if row.field == "synonym":
            _note_meaning(table, row, key, name_key(row.value))
    return table


def _note_meaning(table: _Table, row: Row, key: str, synonym: str | None = None) -> None:
    other = table.meant.setdefault((row.kind, key if synonym is None else synonym), key)
    if other != key:
        said = shown(row.name if synonym is None else row.value)
        meaning = shown(table.rows[row.kind, other][0].name)
        table.faults.add(row.line, "name", f"{said} already means {meaning}")


@functools.cache
def _built_in(kind: str) -> _Table:
    return _table(data_file(_FILES[kind]), trusted=True)


@functools.lru_cache(maxsize=32)
def _users(path: Path, stamp: int, size: int) -> _Table:
    """Return a user's table, all of it built, so that every fault is known."""
    table = _table(path, trusted=False)
    for kind, key in table.rows:
        table.entry(kind, key)
    table.faults.raise_if_any()
    if not table.rows:
        raise InputError(f"table {table.faults.file}: has no entry; expected at least one row below the header")
    return table


def _tables(tables: Sequence[str | Path]) -> list[_Table]:
    found: list[_Table] = []
    problems: list[str] = []
    for path in (Path(table) for table in tables):
        try:
            stat = path.stat()
            found.append(_users(path.resolve(), stat.st_mtime_ns, stat.st_size))
        except InputError as error:
            problems.append(str(error))
        except (OSError, ValueError) as error:  # ValueError: a null character in the name
            name = "".join(c if c.isprintable() else "?" for c in path.name[:80])
            reason = getattr(error, "strerror", None) or "not a name of a file"
            problems.append(f"table {name}: cannot be read ({reason}); expected a CSV or TOML file")
    if problems:
        raise InputError("\n".join(problems))
    return found


def _find(kind: str, name: str, tables: Sequence[str | Path], expected: type[Entry]) -> Entry:
    key = name_key(name)
    searched = [*_tables(tables), _built_in(kind)]
    for place, table in enumerate(searched):
        meant = table.meant.get((kind, key))
        if meant is None:
            continue
        entry = table.entry(kind, meant)
        if not isinstance(entry, expected):
            table.faults.raise_if_any()
            raise ContainmentError(f"table {table.faults.file}: {name} could not be built")
        hidden = [other for other in searched[place + 1 :] if (kind, key) in other.meant]
        return _with_notice(entry, hidden[0].origin) if hidden else entry
    raise InputError(f"{_WORDS[kind]}: {shown(name)} is not in the table; {_offered(kind, key, searched)}")


def _with_notice(entry: Entry, hidden: str) -> Entry:
    notice = f"{entry.name} is the entry of {entry.origin}, which takes the place of the one that is {_whose(hidden)}."
    if isinstance(entry, DriveEntry):
        return replace(entry, note=f"{entry.note} {notice}".strip())
    return replace(entry, hazards=(*entry.hazards, f"table: {notice}"))


def _whose(origin: str) -> str:
    return origin if origin == "built in" else f"in {origin}"


def _offered(kind: str, key: str, searched: Sequence[_Table]) -> str:
    import difflib

    meanings: dict[str, str] = {}
    for table in searched:
        for (of_kind, known), meant in table.meant.items():
            if of_kind == kind:
                meanings.setdefault(known, table.rows[kind, meant][0].name)
    close = difflib.get_close_matches(key[:80], meanings, n=6, cutoff=0.6)
    if len(key) >= 3:
        close += [known for known in meanings if key in known]
    names = list(dict.fromkeys(meanings[known] for known in close))[:5]
    command = "see 'containment table'"
    return f"close to it: {', '.join(names)}; {command}" if names else command


def _names(kind: str, tables: Sequence[str | Path]) -> tuple[str, ...]:
    names: dict[str, str] = {}
    for table in (*_tables(tables), _built_in(kind)):
        for of_kind, key in table.rows:
            if of_kind == kind:
                names.setdefault(key, table.rows[kind, key][0].name)
    return tuple(names.values())


def table_notices(tables: Sequence[str | Path]) -> tuple[str, ...]:
    """Return a sentence for each name or synonym of the user's tables that hides another entry.

    Raises
    ------
    InputError
        A table is faulty.

    Examples
    --------
    >>> table_notices(())
    ()
    """
    found = _tables(tables)
    notices: list[str] = []
    for place, table in enumerate(found):
        for (kind, known), meant in table.meant.items():
            hidden = [t for t in (*found[place + 1 :], _built_in(kind)) if (kind, known) in t.meant]
            if hidden:
                name = table.rows[kind, meant][0].name
                other = hidden[0].rows[kind, hidden[0].meant[kind, known]][0].name
                notices.append(f"{name} of {table.origin} takes the place of {other}, {_whose(hidden[0].origin)}")
    return tuple(dict.fromkeys(notices))


def liquid_names(tables: Sequence[str | Path] = ()) -> tuple[str, ...]:
    """Return the names of all liquids, the user's first.

    Examples
    --------
    >>> "glycerol" in liquid_names()
    True
    """
    return _names("liquid", tables)


def grain_names(tables: Sequence[str | Path] = ()) -> tuple[str, ...]:
    """Return the names of all granular materials, the user's first.

    Examples
    --------
    >>> "dry sand" in grain_names()
    True
    """
    return _names("grain", tables)


def drive_names(tables: Sequence[str | Path] = ()) -> tuple[str, ...]:
    """Return the names of all drives, the user's first.

    Examples
    --------
    >>> "voice coil" in drive_names()
    True
    """
    return _names("drive", tables)


def liquid_entry(name: str, tables: Sequence[str | Path] = ()) -> LiquidEntry:
    """Return a liquid by its name or a synonym.

    Parameters
    ----------
    name : str
        Case, blanks, hyphens and underscores do not matter.
    tables : sequence of path
        The user's tables, CSV or TOML; searched first, in their order.

    Raises
    ------
    InputError
        An unknown name (close ones are offered), or a table with faults, of which all are listed.

    Examples
    --------
    >>> round(liquid_entry("Castor_Oil").viscosity.value(293.15), 2)
    0.97
    """
    return _find("liquid", name, tables, LiquidEntry)


def grain_entry(name: str, tables: Sequence[str | Path] = ()) -> GrainEntry:
    """Return a granular material by its name or a synonym; as `liquid_entry`.

    Examples
    --------
    >>> grain_entry("dry sand").unconfined_yield_strength_Pa is None
    True
    """
    return _find("grain", name, tables, GrainEntry)


def drive_entry(name: str, tables: Sequence[str | Path] = ()) -> DriveEntry:
    """Return a drive by its name or a synonym; as `liquid_entry`.

    Examples
    --------
    >>> drive_entry("voice-coil").max_stroke
    0.025
    """
    return _find("drive", name, tables, DriveEntry)
