"""``containment table``: list the property tables, show one entry with its sources, fit measured points."""

import argparse
from collections.abc import Callable, Sequence
from typing import Any, Final

from containment.errors import InputError
from containment.faces import options as shared

__all__ = ["add_arguments", "run"]

KINDS: Final = ("liquid", "grain", "drive")


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Add the sub-command's options."""
    parser.add_argument("name", metavar="NAME", nargs="?", help="entry to show; without it, all are listed")
    group = parser.add_argument_group("choice")
    group.add_argument("--kind", choices=KINDS, help="liquids, granular materials or drives only")
    group.add_argument("--text", metavar="WORD", help="entries with this text in a name, synonym, title, note or hazard")
    group.add_argument("--min-viscosity", metavar="MU", help="liquids at least as viscous, such as 1Pa*s")
    group.add_argument("--max-viscosity", metavar="MU", help="liquids at most as viscous")
    group.add_argument("--temperature", metavar="T", default="20 degC", help="of the values shown; default 20degC")
    group.add_argument("--table", metavar="FILE", action="append", help="a table of your own; may be repeated")
    group.add_argument("--fit", metavar="FILE", help="fit laws to measured points (CSV) and print an entry to paste")
    output = parser.add_argument_group("output")
    form = output.add_mutually_exclusive_group()
    form.add_argument("--json", action="store_true", help="one JSON object, SI units, nothing else")
    form.add_argument("--csv", action="store_true", help="values at the temperature, SI units, one row an entry")
    output.add_argument("--plain", action="store_true", help="no colour and no boxes")


def run(options: argparse.Namespace) -> int:
    """Print what is asked for; return the exit status."""
    if options.fit is not None:
        return _fit(options)
    kelvin = shared.quantity(options, "temperature", "temperature", above=0.0, most=5000.0)
    assert kelvin is not None
    entries, left_out = _chosen(options, kelvin)
    if options.json:
        import json

        from containment.faces.table_rows import json_of

        found = {f"{kind}s": [json_of(entry, kelvin) for entry in entries[kind]] for kind in KINDS}
        print(json.dumps({"schema": 1, "temperature_K": kelvin, **found}, allow_nan=False, ensure_ascii=False, indent=2))
    elif options.csv:
        from containment.faces.table_rows import csv_of

        print(csv_of(entries, kelvin), end="")
    else:
        from containment.faces.screen_table import entry_screen, list_screen
        from containment.given.tables import table_notices

        if options.name is not None:
            screen = entry_screen([entry for kind in KINDS for entry in entries[kind]], kelvin, plain=options.plain)
        else:
            notices = table_notices(options.table or ())
            screen = list_screen(entries, kelvin, left_out=left_out, notices=notices, plain=options.plain)
        screen.show()
    return 0


def _chosen(options: argparse.Namespace, kelvin: float) -> tuple[dict[str, list[Any]], list[str]]:
    """Return the entries that are asked for by kind, and the liquids that the temperature leaves out of a filter."""
    from containment.given.tables import drive_entry, drive_names, grain_entry, grain_names, liquid_entry, liquid_names

    names: dict[str, Callable[..., Sequence[str]]] = {
        "liquid": liquid_names, "grain": grain_names, "drive": drive_names,
    }  # fmt: skip
    entry: dict[str, Callable[..., Any]] = {"liquid": liquid_entry, "grain": grain_entry, "drive": drive_entry}
    tables = tuple(options.table or ())
    kinds = [options.kind] if options.kind else list(KINDS)
    found: dict[str, list[Any]] = {kind: [] for kind in KINDS}
    if options.name is not None:
        errors = []
        for kind in kinds:
            try:
                found[kind].append(entry[kind](options.name, tables=tables))
            except InputError as error:
                errors.append(error)
        if len(errors) == len(kinds):
            raise _closest(errors)
    else:
        for kind in kinds:
            found[kind] = [entry[kind](name, tables=tables) for name in names[kind](tables)]
    return _filtered(found, options, kelvin)


def _closest(errors: Sequence[InputError]) -> InputError:
    """Return the error that says most: one that offers names, or the first."""
    return next((error for error in errors if "close to it" in str(error)), errors[0])


def _filtered(
    found: dict[str, list[Any]], options: argparse.Namespace, kelvin: float
) -> tuple[dict[str, list[Any]], list[str]]:
    left_out: list[str] = []
    if options.text is not None:
        wanted = options.text.strip().casefold()
        if not wanted:
            raise InputError("--text: '' is empty; expected a word to look for")
        found = {kind: [e for e in entries if wanted in _words(e)] for kind, entries in found.items()}
    least = shared.quantity(options, "min_viscosity", "viscosity", above=0.0)
    most = shared.quantity(options, "max_viscosity", "viscosity", above=0.0)
    if least is not None and most is not None and least > most:
        raise InputError(f"--max-viscosity: {options.max_viscosity!r} is below --min-viscosity {options.min_viscosity!r}")
    if least is not None or most is not None:
        kept = []
        for liquid in found["liquid"]:
            low, high = liquid.viscosity.range_K
            if not low - 1e-6 <= kelvin <= high + 1e-6:
                left_out.append(liquid.name)
            elif (least or 0.0) <= liquid.viscosity.value(kelvin) <= (most or float("inf")):
                kept.append(liquid)
        found = {"liquid": kept, "grain": [], "drive": []}
    return found, left_out


def _words(entry: Any) -> str:
    parts = [entry.name, entry.title, *entry.synonyms, *getattr(entry, "hazards", ()), *getattr(entry, "notes", ())]
    return "\n".join([*parts, getattr(entry, "note", "")]).casefold()


def _fit(options: argparse.Namespace) -> int:
    from pathlib import Path

    from containment.faces.screen_fit import fit_screen, pasteable_rows
    from containment.given.tables.fitting import fit_points

    if options.json or options.csv:
        raise InputError("--fit: cannot go with --json or --csv; it prints rows of a table")
    fits = fit_points(Path(options.fit))
    name = options.name or "my liquid"
    fit_screen(fits, plain=options.plain).show()
    print("\n" + pasteable_rows(fits, name=name), end="")  # not on the screen, which would fold the rows
    return 0
