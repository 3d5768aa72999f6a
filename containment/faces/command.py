"""The command line: sub-commands, exit statuses, errors in one line."""

import argparse
import importlib
import os
import sys
from collections.abc import Sequence
from typing import Final, NoReturn

from containment.errors import ContainmentError, NotComputableError
from containment.faces.help_texts import HelpFormatter, epilog, usage

__all__ = ["main"]

SUBCOMMANDS: Final = {
    # name: (module with add_arguments(parser) and run(options) -> int, one line of help)
    "liquid": ("containment.faces.command_liquid", "verdict for a liquid layer in an upside-down vessel"),
    "grains": ("containment.faces.command_grains", "verdict for a granular bed in a shaken vessel"),
    "window": ("containment.faces.command_window", "the holding window over frequency, as a chart or rows"),
    "study": ("containment.faces.command_study", "a parameter study from a plan"),
    "table": ("containment.faces.command_table", "the property tables, or one entry with its sources"),
}

_MAY_REPEAT: Final = ("--table",)


class _Parser(argparse.ArgumentParser):
    """An argument parser whose errors are one clear line and exit status 2."""

    def error(self, message: str) -> NoReturn:
        """Print one line on stderr and leave with status 2."""
        sys.stderr.write(f"{self.prog}: {_one_line(message)}\n")
        raise SystemExit(2)


def main(arguments: Sequence[str] | None = None) -> int:
    """Run the command line and return its exit status."""
    try:
        return _main(arguments)
    except KeyboardInterrupt:
        return 130


def _main(arguments: Sequence[str] | None) -> int:
    arguments = list(sys.argv[1:] if arguments is None else arguments)
    chosen = arguments[0] if arguments else ""
    parser = _Parser(
        prog="containment",
        description="Does the liquid, or the bed, stay in the vessel while it is shaken?",
        epilog=epilog(""),
        formatter_class=HelpFormatter,
    )
    parser.add_argument("--version", action="version", version=_version(chosen))
    if chosen in ("--completion", "--help", "-h") or chosen.startswith("--completion="):
        from containment.faces.completion import Completion

        parser.add_argument("--completion", metavar="SHELL", action=Completion, commands=SUBCOMMANDS,
                            help="print a completion script for bash, zsh or fish")  # fmt: skip
    commands = parser.add_subparsers(dest="command", metavar="COMMAND", required=True)
    for name, (module, line) in SUBCOMMANDS.items():
        sub = commands.add_parser(
            name, help=line, description=line, usage=usage(name), epilog=epilog(name), formatter_class=HelpFormatter,
            allow_abbrev=False, add_help=False,
        )
        sub.add_argument("-h", "--help", action="help", help=argparse.SUPPRESS)
        if name == chosen:  # only the chosen sub-command's module is imported
            importlib.import_module(module).add_arguments(sub)
    arguments = _with_negative_values_joined(arguments)
    for option in _repeated(arguments):
        parser.error(f"{option}: given more than once; expected once")
    options = parser.parse_args(arguments)
    return _run(SUBCOMMANDS[options.command][0], options)


def _with_negative_values_joined(arguments: list[str]) -> list[str]:
    """Join ``--depth -3mm`` to ``--depth=-3mm``, so that a negative value is judged as a value, not as an option."""
    joined: list[str] = []
    for argument in arguments:
        negative = len(argument) > 1 and argument[0] == "-" and (argument[1].isdigit() or argument[1] == ".")
        if negative and joined and joined[-1].startswith("--") and "=" not in joined[-1]:
            joined[-1] += "=" + argument
        else:
            joined.append(argument)
    return joined


def _repeated(arguments: list[str]) -> list[str]:
    """Return the options that are given twice: argparse would drop the first value without a word."""
    names = [argument.partition("=")[0] for argument in arguments if argument.startswith("--")]
    return sorted({name for name in names if names.count(name) > 1 and name not in _MAY_REPEAT})


def _one_line(message: str) -> str:
    """Return a message as one printable line of bounded length, whatever was typed; the faults of a table are many."""
    heading, *faults = message.splitlines() or [""]
    joined = heading + ": " * bool(faults) + "; ".join(fault.strip() for fault in faults)
    line = "".join(c if c.isprintable() else "?" for c in joined)
    most = 6000 if faults else 400
    return line if len(line) <= most else line[: most - 3] + "..."


def _run(module: str, options: argparse.Namespace) -> int:
    try:
        status: int = importlib.import_module(module).run(options)
        sys.stdout.flush()
    except NotComputableError as error:
        sys.stderr.write(f"containment: not computable: {_one_line(str(error))}\n")
        return 3
    except ContainmentError as error:
        sys.stderr.write(f"containment: {_one_line(str(error))}\n")
        return 2
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())  # nothing more can be said to a closed pipe
        return 141
    except Exception as error:
        if os.environ.get("CONTAINMENT_TRACEBACK"):
            raise
        sys.stderr.write(
            f"containment: internal failure: {type(error).__name__}: {error} (set CONTAINMENT_TRACEBACK=1 for more)\n"
        )
        return 4
    return status


def _version(chosen: str) -> str:
    if chosen != "--version":
        return ""
    from importlib.metadata import version

    return f"containment {version('containment')}"
