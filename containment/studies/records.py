"""The file of a study: a header and one JSON line a case, in the order of their numbers, appended to and never rewritten.

The records that are on the disk are always those of the first n cases. Whatever kills the writer, what is lost is the end of
the file at most: a line that is torn, or blocks that the system had not written out. Both are cut off when the study goes on,
and these cases are evaluated again.
"""

import json
import os
import sys
import time
from collections.abc import Iterator, Mapping
from pathlib import Path
from types import TracebackType
from typing import Any, Final, Self

from containment.errors import ContainmentError, InputError

__all__ = ["RecordFile", "StudyFileError", "header_line", "read_lines", "verdicts_of"]

_FORMAT: Final = "containment study 1"
_BEGINNING: Final = b'{"format":"containment study'
_SYNC_EVERY: Final = 1.0
"""Seconds between calls that force records out to the disk, so that a power failure costs little."""


class StudyFileError(ContainmentError):
    """The file of a study cannot be read, locked or written."""


def header_line(plan: Mapping[str, Any], fingerprint: str, versions: Mapping[str, str]) -> bytes:
    """Return the first line of a study's file: format, plan, fingerprint, versions of what computes."""
    header = {"format": _FORMAT, "fingerprint": fingerprint, "versions": dict(versions), "plan": dict(plan)}
    return json.dumps(header, allow_nan=False, separators=(",", ":")).encode("ascii") + b"\n"


class RecordFile:
    """The file of a study, open and locked for appending.

    Parameters
    ----------
    path : str or Path
        A new file, or one of the same plan that is to go on.
    header : bytes
        What its first line must be.

    Attributes
    ----------
    done : int
        Records that are in it: those of cases 0 up to `done`.
    counts : dict
        Of these, by verdict; see `containment.studies.batch.Block`.
    repaired : int
        Bytes of a torn end that were cut off.

    Raises
    ------
    StudyFileError
        The file is in use by another study, is damaged elsewhere than at its end, or cannot be written.
    InputError
        It belongs to another plan, or to other versions of the software.
    """

    def __init__(self, path: str | Path, header: bytes) -> None:
        self.path = Path(path)
        self.done = 0
        self.counts: dict[str, int] = {}
        self.repaired = 0
        self._header = header
        self._synced = time.monotonic()
        try:
            # without a buffer: what could not be written must not be tried again later
            self._file = open(  # noqa: SIM115
                os.open(self.path, os.O_RDWR | os.O_CREAT | getattr(os, "O_BINARY", 0), 0o666), "r+b", buffering=0
            )
        except OSError as error:
            raise StudyFileError(f"--out: {str(self.path)!r} cannot be opened: {error.strerror}") from error
        try:
            self._lock()
            self._recover()
        except BaseException:
            self._file.close()
            raise

    def __enter__(self) -> Self:
        """Return the file."""
        return self

    def __exit__(
        self, kind: type[BaseException] | None, error: BaseException | None, trace: TracebackType | None
    ) -> None:
        """Close the file and release the lock."""
        self.close()

    def append(self, lines: bytes, count: int, counts: Mapping[str, int]) -> None:
        """Append the lines of the next `count` cases.

        Raises
        ------
        StudyFileError
            The disk is full, or cannot be written; what was written before is kept.
        """
        try:
            self._write(lines)
            if time.monotonic() - self._synced > _SYNC_EVERY:
                self.sync()
        except OSError as error:
            self._cut(self._end)
            raise StudyFileError(
                f"{self.path}: cannot be written: {error.strerror}; the records of {self.done} cases are kept, and the study "
                "goes on from there when it is started again"
            ) from error
        self._end += len(lines)
        self.done += count
        for key, value in counts.items():
            self.counts[key] = self.counts.get(key, 0) + value

    def sync(self) -> None:
        """Force what was written out to the disk."""
        os.fsync(self._file.fileno())
        self._synced = time.monotonic()

    def _write(self, data: bytes) -> None:
        rest = memoryview(data)
        while len(rest):
            rest = rest[self._file.write(rest) :]

    def close(self) -> None:
        """Write everything out, close the file and release the lock."""
        if not self._file.closed:
            try:
                self.sync()
            except OSError:  # said already when the record was written
                pass
            finally:
                self._file.close()

    def _lock(self) -> None:
        """Lock the file for this process; the system releases the lock when the process ends, however it ends."""
        try:
            if sys.platform == "win32":
                import msvcrt

                self._file.seek(2**40)
                msvcrt.locking(self._file.fileno(), msvcrt.LK_NBLCK, 1)
            else:
                import fcntl

                fcntl.flock(self._file.fileno(), fcntl.LOCK_EX | fcntl.LOCK_NB)
        except OSError as error:
            raise StudyFileError(f"--out: {str(self.path)!r} is in use by another study that is still running") from error

    def _recover(self) -> None:
        """Find the end of the good records, and cut off what is torn behind it."""
        with open(self.path, "rb") as file:
            first = file.readline()
            whole = os.fstat(file.fileno()).st_size
            if not first.endswith(b"\n"):
                torn_header = self._header.startswith(first) or first.startswith(_BEGINNING) or not first.strip(b"\0")
                if not torn_header and (trouble := _other_study(self.path, first, self._header)):
                    raise trouble
                self.repaired = whole
                self._cut(0)
                self._write_header()
                return
            if first != self._header and (trouble := _other_study(self.path, first, self._header)):
                raise trouble
            self._end = len(first)
            torn = False
            for line in file:
                if b"\0" in line:  # a block that the system had not written out when the power went
                    break
                verdict = _whole_record(line, self.done)
                if verdict is None:
                    torn = True
                elif torn:
                    raise StudyFileError(
                        f"--out: {str(self.path)!r} is damaged after {self.done} records, with good records behind; mend it or "
                        "give another file"
                    )
                else:
                    self.done += 1
                    self._end += len(line)
                    for key in verdict:
                        self.counts[key] = self.counts.get(key, 0) + 1
        self.repaired = whole - self._end
        self._cut(self._end)

    def _write_header(self) -> None:
        try:
            self._write(self._header)
            self.sync()
            if os.name == "posix":  # the name of a new file has to reach the disk as well
                folder = os.open(self.path.resolve().parent, os.O_RDONLY)
                try:
                    os.fsync(folder)
                finally:
                    os.close(folder)
        except OSError as error:
            raise StudyFileError(f"{self.path}: cannot be written: {error.strerror}") from error
        self._end = len(self._header)

    def _cut(self, end: int) -> None:
        try:
            self._file.seek(end)
            self._file.truncate(end)
        except OSError as error:
            raise StudyFileError(f"{self.path}: its torn end cannot be cut off: {error.strerror}") from error


def _whole_record(line: bytes, number: int) -> list[str] | None:
    """Return how a record counts, or None where it is not the whole record of case `number`."""
    if not line.endswith(b"}\n"):
        return None
    if not line.startswith(b'{"i":%d,' % number):
        return _good_elsewhere(line)
    try:
        return verdicts_of(line)
    except ValueError:
        return None


def verdicts_of(line: bytes) -> list[str]:
    """Return under which keys a record counts: its verdict, and whether it is held without proof; or as an error."""
    record = json.loads(line)
    if record.get("error") is not None:
        return ["error"]
    verdict = record.get("verdict")
    return [verdict, "unproven"] if verdict == "held" and record.get("proven") is False else [verdict]


def _good_elsewhere(line: bytes) -> list[str] | None:
    """Return None for a torn line; a whole record in the wrong place is damage, which must not be cut off."""
    try:
        record = json.loads(line)
    except ValueError:
        return None
    if isinstance(record, dict) and "i" in record:
        raise StudyFileError(f"--out: its record of case {record['i']} stands in the wrong place; mend it or give another file")
    return None


def _other_study(path: Path, found: bytes, expected: bytes) -> ContainmentError | None:
    """Return why a file cannot go on: another plan, other versions, or no study at all; None where only the title differs."""
    wanted = json.loads(expected)
    try:
        header = json.loads(found)
        same_format = header["format"] == _FORMAT
        versions, plan = dict(header["versions"]), dict(header["plan"])
    except (ValueError, KeyError, TypeError):
        same_format = False
    if not same_format:
        return InputError(f"--out: {str(path)!r} is not the file of a study; give another name")
    if header.get("fingerprint") != wanted["fingerprint"]:
        changed = [key for key in wanted["plan"] if key != "title" and plan.get(key) != wanted["plan"][key]]
        return InputError(
            f"--out: {str(path)!r} belongs to another plan (different: {', '.join(changed) or 'inputs'}); give another file, "
            "or the plan that it was started with"
        )
    other = [f"{key} {versions.get(key)} then, {value} now" for key, value in wanted["versions"].items()
             if versions.get(key) != value]  # fmt: skip
    if other:
        return InputError(f"--out: {str(path)!r} was started with other versions ({'; '.join(other)}); give another file")
    return None


def read_lines(path: str | Path) -> Iterator[bytes]:
    """Yield the lines of a study's file: the header, then the whole records; a torn end is left out."""
    with open(path, "rb") as file:
        for line in file:
            if line.endswith(b"}\n"):
                yield line
