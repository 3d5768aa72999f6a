"""Tables that the user brings, in the format of the built-in ones; every fault is told at once."""

import functools
from pathlib import Path
from typing import Final

from containment.errors import InputError
from containment.given.tables.building import build_drive, build_grain, build_liquid
from containment.given.tables.rows import Fault, Record, read_rows, records_of, refuse, shown

__all__ = ["user_records"]

_LARGEST_BYTES: Final = 2_000_000
_BUILD: Final = {"liquid": build_liquid, "grain": build_grain, "drive": build_drive}


@functools.cache
def user_records(path: Path) -> dict[tuple[str, str], Record]:
    """Return the checked records of a user's table by kind and name.

    Raises
    ------
    InputError
        A file that cannot be read, or its faults, each with line, column and reason.
    """
    name = shown(path.name, 60)
    try:
        if path.stat().st_size > _LARGEST_BYTES:
            raise InputError(f"table {name}: {path.stat().st_size} bytes; at most {_LARGEST_BYTES} are allowed")
        raw = path.read_bytes()
    except OSError as error:
        raise InputError(f"table {name}: cannot be read ({error.strerror}); expected a CSV file") from error
    try:
        text = raw.decode("utf-8-sig")
    except UnicodeDecodeError as error:
        line = raw[: error.start].count(b"\n") + 1
        raise InputError(f"table {name}: line {line} is not UTF-8 text; save the table as UTF-8") from error
    rows, faults = read_rows(text.splitlines(keepends=True))
    records = records_of(rows, f"{path.name}")
    for record in records.values():
        build = _BUILD.get(record.kind)
        if build is None:
            kinds = ", ".join(_BUILD)
            faults.append(Fault(record.rows[0].line, "kind", f"{shown(record.kind)} is not a kind; expected {kinds}"))
        elif not record.name:
            faults.append(Fault(record.rows[0].line, "name", "empty; expected the entry's name"))
        else:
            build(record, faults)
    refuse(sorted(faults, key=lambda fault: fault.line), name)
    return records
