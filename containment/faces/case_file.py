"""Case files: what was asked, kept as TOML, so that a check can be reviewed, compared and run again.

The keys are the options' own names without the dashes, under a section for what they describe; values are the text that
the option takes. An option on the command line takes the place of the file's.
"""

import argparse
import json
from pathlib import Path
from typing import Any, Final

from containment.errors import InputError

__all__ = ["SECTIONS", "add_case", "apply_case", "case_of", "remark", "save_case"]

SCHEMA: Final = 1
_LARGEST: Final = 1_000_000

SECTIONS: Final[dict[str, dict[str, tuple[str, ...]]]] = {
    # command: section: options
    "liquid": {
        "liquid": (
            "name", "temperature", "density", "viscosity", "surface-tension", "rheology", "table", "solids", "max-packing",
            "particle-density",
        ),
        "vessel": ("cylinder", "box", "annulus", "slot", "unbounded", "depth", "contact-line"),
        "motion": ("frequency", "acceleration", "amplitude", "stroke", "velocity", "second-harmonic", "crank-ratio"),
        "drive": (
            "drive", "max-stroke", "max-velocity", "max-acceleration", "max-force", "moving-mass", "frequency-range",
        ),
        "process": ("dwell", "unevenness", "amplification", "margin"),
        "surroundings": (
            "surface", "film-modulus", "cushion", "polytropic-exponent", "below", "below-depth", "interfacial-tension",
            "tilt", "ambient-pressure",
        ),
    },
    "grains": {
        "material": (
            "name", "bulk-density", "particle-density", "particle-diameter", "cohesion", "yield-strength", "wall-friction",
            "angle-of-repose", "moisture", "table",
        ),
        "setting": ("freeboard", "outlet", "slot-outlet", "open-bottom", "pocket"),
        "vessel": ("cylinder", "box", "annulus", "slot", "unbounded", "depth", "contact-line"),
        "motion": ("frequency", "acceleration", "amplitude", "stroke", "velocity", "second-harmonic", "crank-ratio"),
        "drive": (
            "drive", "max-stroke", "max-velocity", "max-acceleration", "max-force", "moving-mass", "frequency-range",
        ),
        "process": ("dwell", "allowed-drop", "restitution", "margin", "ambient-pressure"),
    },
}  # fmt: skip
"""Which options a case keeps; `window` takes the case of `liquid`."""

_ONE_OF: Final = (
    # where one of these is given on the command line, those of the file give way
    ("cylinder", "box", "annulus", "slot", "unbounded"),
    ("acceleration", "amplitude", "stroke", "velocity"),
    ("second-harmonic", "crank-ratio"),
    ("surface", "film-modulus"),
    ("freeboard", "outlet", "slot-outlet", "open-bottom", "pocket"),
)
_DRIVE: Final = SECTIONS["liquid"]["drive"]
_FLAGS: Final = ("unbounded", "open-bottom")
_LISTS: Final = ("table",)


def add_case(parser: argparse.ArgumentParser) -> None:
    """Add the options of case files."""
    group = parser.add_argument_group("case file (TOML)")
    group.add_argument("--case", metavar="FILE", help="read the case; options given here prevail")
    group.add_argument("--save-case", metavar="FILE", help="write the case, to be run again")


def _sections(options: argparse.Namespace) -> dict[str, tuple[str, ...]]:
    return SECTIONS[_command(options)]


def _command(options: argparse.Namespace) -> str:
    return "liquid" if options.command == "window" else str(options.command)


def _attribute(name: str) -> str:
    return name.replace("-", "_")


def case_of(options: argparse.Namespace) -> dict[str, Any]:
    """Return the case as plain JSON types: the command, and what was given in each section."""
    found: dict[str, Any] = {"schema": SCHEMA, "command": _command(options)}
    for section, names in _sections(options).items():
        given = {name: getattr(options, _attribute(name), None) for name in names}
        kept = {name: value for name, value in given.items() if value not in (None, False)}
        if kept:
            found[section] = kept
    return found


def apply_case(options: argparse.Namespace, required: str) -> None:
    """Fill in from the case file what the command line leaves open, and check that a name is given.

    Parameters
    ----------
    options : Namespace
        The parsed command line; filled in place.
    required : str
        What NAME may be, for the message where it is missing.

    Raises
    ------
    InputError
        A file that cannot be read, is not TOML, or has a section, key or value that is not one of a case.
    """
    if options.case is not None:
        kept = _read(options.case, _command(options))
        given = {name for names in _sections(options).values() for name in names if _given(options, name)}
        for name, value in kept.items():
            rivals = next((group for group in _ONE_OF if name in group), (name,))
            if given.isdisjoint(rivals) and not (name in _DRIVE and "drive" in given):
                setattr(options, _attribute(name), value)
    if options.name is None:
        raise InputError(f"NAME: missing; expected {required}, or --case FILE")


def _given(options: argparse.Namespace, name: str) -> bool:
    return getattr(options, _attribute(name), None) not in (None, False)


def _read(file: str, command: str) -> dict[str, Any]:
    """Return the options that a case file holds; every fault of it is told at once."""
    import tomllib

    path = Path(file)
    try:
        if path.stat().st_size > _LARGEST:
            raise InputError(f"--case: {file!r} is larger than {_LARGEST // 1000} kB; expected a case file")
        document = tomllib.loads(path.read_bytes().decode("utf-8"))
    except (OSError, ValueError) as error:  # a TOML error and a wrong encoding are ValueErrors
        what = error.strerror if isinstance(error, OSError) else str(error)
        raise InputError(f"--case: {file!r} cannot be read as a case file: {what}") from error
    faults, kept = [], {}
    if document.pop("schema", None) != SCHEMA:
        faults.append(f"schema: missing or not known; expected schema = {SCHEMA}")
    found = document.pop("command", None)
    if found != command:
        faults.append(f"command: {found!r} is not what is run; expected command = {command!r}")
    known = SECTIONS[command]
    for section, entries in document.items():
        if section not in known or not isinstance(entries, dict):
            faults.append(f"{section}: not a section; expected one of {', '.join(known)}")
            continue
        for name, value in entries.items():
            fault = _fault(section, name, value, known[section])
            if fault:
                faults.append(fault)
            else:
                kept[name] = _option_value(name, value, path.parent)
    if faults:
        raise InputError("\n".join([f"--case: {file!r} has faults", *faults]))
    return kept


def _fault(section: str, name: str, value: Any, known: tuple[str, ...]) -> str:
    if name not in known:
        return f"{section}.{name}: not known; expected one of {', '.join(known)}"
    if name in _FLAGS:
        return "" if isinstance(value, bool) else f"{section}.{name}: {value!r} is not allowed; expected true or false"
    if name in _LISTS:
        good = isinstance(value, list) and all(isinstance(item, str) for item in value)
        return "" if good else f"{section}.{name}: {value!r} is not allowed; expected a list of file names"
    if isinstance(value, str) or (isinstance(value, int | float) and not isinstance(value, bool)):
        return ""
    return f'{section}.{name}: {value!r} is not allowed; expected text with a unit, such as "70mm"'


def _option_value(name: str, value: Any, folder: Path) -> Any:
    if name in _FLAGS:
        return value
    if name in _LISTS:  # names of files are meant from where the case file is
        return [str(folder / item) for item in value]
    return value if isinstance(value, str) else repr(value)


def save_case(options: argparse.Namespace, remark: str) -> None:
    """Write the case to the file of ``--save-case``, with one line of remark.

    Raises
    ------
    InputError
        A file that cannot be written.
    """
    path = Path(options.save_case)
    case = case_of(options)
    lines = [f"# containment {case['command']} --case {_plain(path.name)}", f"# {_plain(remark)}", ""]
    lines += [f"schema = {case.pop('schema')}", f"command = {_text(case.pop('command'))}"]
    for section, entries in case.items():
        lines += ["", f"[{section}]"]
        for name, value in entries.items():
            if name in _LISTS:
                value = [_from(path.parent, item) for item in value]
            lines.append(f"{name} = {_toml(value)}")
    try:
        path.write_text("\n".join(lines) + "\n", encoding="utf-8", newline="\n")
    except (OSError, ValueError) as error:
        what = error.strerror if isinstance(error, OSError) else str(error)
        raise InputError(f"--save-case: {options.save_case!r} cannot be written: {what}") from error


def remark(answer: str, reason: str) -> str:
    """Return what a saved case says of its verdict."""
    from importlib.metadata import version

    return f"verdict when saved, by version {version('containment')}: {answer} ({reason})"


def _from(folder: Path, file: str) -> str:
    """Return a file's name as seen from a folder, so that case and table can be moved together."""
    import os

    try:
        return Path(os.path.relpath(Path(file).absolute(), folder.absolute())).as_posix()
    except ValueError:  # on another drive
        return Path(file).absolute().as_posix()


def _toml(value: Any) -> str:
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, list):
        return "[" + ", ".join(_text(item) for item in value) + "]"
    return _text(str(value))


def _text(value: str) -> str:
    """Return a TOML basic string; JSON's escapes are TOML's, but for the one control character that JSON lets pass."""
    clean = value.encode("utf-8", "replace").decode("utf-8")  # bytes of a file name that are no text
    return json.dumps(clean, ensure_ascii=False).replace("\x7f", "\\u007F")


def _plain(text: str) -> str:
    return "".join(c if c.isprintable() else "?" for c in text.encode("utf-8", "replace").decode("utf-8"))
