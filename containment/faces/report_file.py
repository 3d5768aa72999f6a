"""Reports as files: where they go, when and by what they were made, and what was asked for."""

import argparse
import os
import shlex
import sys
from pathlib import Path
from typing import TYPE_CHECKING, Final

from containment.errors import InputError
from containment.faces import case_file

if TYPE_CHECKING:
    from containment.faces.report_page import ReportPage

__all__ = ["add_report", "put_inputs", "refuse_unless_writable", "write_report"]

_HTML: Final = (".html", ".htm")
_MARKDOWN: Final = (".md", ".markdown")
_MONTHS: Final = (
    "January", "February", "March", "April", "May", "June", "July", "August", "September", "October", "November", "December",
)  # fmt: skip


def add_report(group: "argparse._ArgumentGroup") -> None:
    """Add the option of a report."""
    group.add_argument("--report", metavar="FILE", help="write a report to FILE.html or FILE.md")


def refuse_unless_writable(file: str) -> None:
    """Refuse the file of ``--report`` before anything is computed.

    Raises
    ------
    InputError
        Another ending than .html or .md, or a folder that is not there.
    """
    path = Path(file)
    if path.suffix.lower() not in (*_HTML, *_MARKDOWN):
        raise InputError(f"--report: {file!r} is not a report that can be written; expected a name in .html or .md")
    if not path.parent.is_dir():
        raise InputError(f"--report: {file!r} cannot be written: there is no folder {str(path.parent)!r}")


def wants_pictures(file: str) -> bool:
    """Return whether a report takes drawn pictures: a page of HTML, and matplotlib installed."""
    from containment.faces.picture_file import drawable

    return Path(file).suffix.lower() in _HTML and drawable()


def put_inputs(page: "ReportPage", options: argparse.Namespace) -> None:
    """Add what was asked for: the options as they were given, and how to run it again."""
    case = case_file.case_of(options)
    rows = []
    for section, entries in case.items():
        if isinstance(entries, dict):
            rows += [[f"{section}: {name}", _shown(value)] for name, value in entries.items()]
    page.heading("Inputs as given")
    page.rows(rows)
    page.text("To run it again:")
    page.preformatted(_command_line(case))


def _shown(value: object) -> str:
    return "yes" if value is True else ", ".join(map(str, value)) if isinstance(value, list) else str(value)


def _command_line(case: dict[str, object]) -> str:
    words = ["containment", str(case["command"])]
    for entries in case.values():
        if not isinstance(entries, dict):
            continue
        for name, value in entries.items():
            if name == "name":
                words.insert(2, shlex.quote(str(value)))
            elif value is True:
                words.append(f"--{name}")
            else:
                words += [f"--{name} {shlex.quote(str(item))}" for item in (value if isinstance(value, list) else [value])]
    lines, line = [], words[0]
    for word in words[1:]:
        if len(line) + len(word) > 84:
            lines.append(line + " \\")
            line = " "
        line += " " + word
    return "\n".join([*lines, line])


def write_report(page: "ReportPage", file: str) -> None:
    """Write the page in the format that the file's name says.

    Raises
    ------
    InputError
        A file that cannot be written.
    """
    when, made_by = _date(), _versions()
    if Path(file).suffix.lower() in _HTML:
        from containment.faces.report_html import html_report

        text = html_report(page, when=when, made_by=made_by)
    else:
        from containment.faces.report_markdown import markdown_report

        text = markdown_report(page, when=when, made_by=made_by)
    try:
        Path(file).write_text(text, encoding="utf-8", newline="\n")
    except OSError as error:
        raise InputError(f"--report: {file!r} cannot be written: {error.strerror}") from error


def _date() -> str:
    """Return today in words that no country reads otherwise; SOURCE_DATE_EPOCH settles it for equal files."""
    from datetime import UTC, datetime

    epoch = os.environ.get("SOURCE_DATE_EPOCH", "")
    moment = datetime.fromtimestamp(int(epoch), UTC) if epoch.isdigit() else datetime.now().astimezone()
    return f"{moment.day} {_MONTHS[moment.month - 1]} {moment.year}, {moment:%H:%M} {moment:%Z}".rstrip()


def _versions() -> str:
    from importlib.metadata import version

    python = ".".join(str(n) for n in sys.version_info[:3])
    parts = [f"{name} {version(name)}" for name in ("containment", "numpy", "scipy")]
    return ", ".join([*parts, f"Python {python}"])
