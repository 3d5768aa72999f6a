"""Records of a study as a table for other programs: CSV, or Parquet where pyarrow is installed."""

import csv
import importlib
import itertools
from collections.abc import Iterator
from pathlib import Path
from typing import Any, Final

from containment.errors import InputError
from containment.studies.records import StudyFileError
from containment.studies.result import StudyResult

__all__ = ["FORMATS", "export", "table_format"]

FORMATS: Final = (".csv", ".parquet")
_ROWS_AT_ONCE: Final = 50_000


def table_format(path: str | Path) -> str:
    """Return the format that a file's name asks for: ``.csv`` or ``.parquet``.

    Raises
    ------
    InputError
        Another ending, or Parquet without pyarrow.
    """
    ending = Path(path).suffix.lower()
    if ending not in FORMATS:
        raise InputError(f"--export: {str(path)!r} has no ending that is known; expected {' or '.join(FORMATS)}")
    if ending == ".parquet":
        try:
            importlib.import_module("pyarrow.parquet")
        except ImportError as error:
            raise InputError("--export: Parquet needs pyarrow; pip install 'containment[parquet]', or give a .csv") from error
    return ending


def export(result: StudyResult, path: str | Path) -> int:
    """Write the records of a study as a table, some at a time; return the number of rows.

    Columns are those of the records, words and null included; CSV has an empty field for null.

    Raises
    ------
    InputError
        See `table_format`.
    StudyFileError
        The file cannot be written.
    """
    write = _to_csv if table_format(path) == ".csv" else _to_parquet
    try:
        return write(result, Path(path))
    except OSError as error:
        raise StudyFileError(f"--export: {str(path)!r} cannot be written: {error.strerror or error}") from error


def _pieces(result: StudyResult) -> Iterator[list[dict[str, Any]]]:
    records = result.records
    while piece := list(itertools.islice(records, _ROWS_AT_ONCE)):
        yield piece


def _to_csv(result: StudyResult, path: Path) -> int:
    rows = 0
    with path.open("w", newline="", encoding="utf-8") as file:
        writer = csv.DictWriter(file, result.keys, restval="")
        writer.writeheader()
        for piece in _pieces(result):
            writer.writerows(piece)
            rows += len(piece)
    return rows


def _to_parquet(result: StudyResult, path: Path) -> int:
    arrow: Any = importlib.import_module("pyarrow")
    parquet: Any = importlib.import_module("pyarrow.parquet")
    inputs = {**{name: values[0] for axis in result.plan.axes for name, values in axis.values.items()},
              **dict.fromkeys(result.plan.uncertain, 0.0)}  # fmt: skip
    texts = {"verdict", "binding", "reason", "error", *(name for name, value in inputs.items() if isinstance(value, str))}
    flags = {"proven", *(name for name, value in inputs.items() if isinstance(value, bool))}

    def kind(key: str) -> Any:
        if key == "i":
            return arrow.int64()
        return arrow.string() if key in texts else arrow.bool_() if key in flags else arrow.float64()

    schema = arrow.schema([(key, kind(key)) for key in result.keys])
    rows = 0
    with parquet.ParquetWriter(path, schema) as writer:
        for piece in _pieces(result):
            writer.write_table(arrow.Table.from_pylist(piece, schema=schema))
            rows += len(piece)
    return rows
