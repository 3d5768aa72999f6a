"""What ``--help`` says besides the options: how a command is called, real examples, exit statuses."""

import argparse
import os
import sys
from typing import Final

__all__ = ["EXAMPLES", "HelpFormatter", "epilog", "usage"]

_EXITS: Final = "exit status: 0 held, 1 not held, 2 bad input, 3 marginal or unproven, 4 failure"

_PAGE: Final = 66
"""Lines of a printed page."""

_USAGE: Final = {
    "liquid": "containment liquid NAME --cylinder DIAMETER --depth DEPTH [options]",
    "window": "containment window NAME --cylinder DIAMETER --depth DEPTH [options]",
    "grains": "containment grains NAME --outlet D --cylinder D --depth DEPTH [options]",
    "study": "containment study PLAN.toml --out FILE.jsonl [options]",
    "table": "containment table [NAME] [options]",
}

EXAMPLES: Final[dict[str, tuple[str, ...]]] = {
    # command: lines to be typed; a test runs them
    "liquid": (
        "containment liquid glycerol --cylinder 70mm --depth 30mm",
        "containment liquid glycerol --cylinder 70mm --depth 30mm --frequency 100Hz \\\n"
        "    --acceleration 60g_n --dwell 60s --report check.html",
        "containment liquid custom --density 1350kg/m^3 --viscosity 8Pa*s \\\n"
        "    --surface-tension 70mN/m --box 60mmx80mm --depth 20mm --max-stroke 25mm",
    ),
    "window": (
        "containment window glycerol --cylinder 70mm --depth 30mm",
        "containment window glycerol --cylinder 70mm --depth 30mm --dwell 60s \\\n"
        "    --frequency 100Hz --acceleration 60g_n --chart window.svg",
        "containment window glycerol --box 60mmx80mm --depth 20mm --max-stroke 25mm \\\n"
        "    --against stroke --rows",
    ),
    "grains": (
        "containment grains \"wheat flour\" --outlet 60mm --cylinder 300mm --depth 500mm",
        "containment grains rice --freeboard 40mm --cylinder 300mm --depth 100mm \\\n"
        "    --frequency 30Hz --acceleration 2g_n",
        "containment grains \"wheat flour\" --pocket 20mm --cylinder 80mm --depth 40mm \\\n    --dwell 2s",
    ),
    "table": (
        "containment table --text syrup",
        "containment table glycerol --temperature 40degC",
        "containment table --kind liquid --min-viscosity 1Pa*s --csv",
    ),
}


class HelpFormatter(argparse.RawDescriptionHelpFormatter):
    """Options and their help side by side, in lines of at most 100 columns."""

    def __init__(self, prog: str) -> None:
        super().__init__(prog, max_help_position=30, width=min(_columns(), 100))

    def format_help(self) -> str:
        """Return the text; where it is long the groups follow each other without a blank line, so that it fits a page."""
        text = super().format_help()
        if text.count("\n") <= _PAGE:
            return text
        start = text.find("\nexamples:")
        head, groups, tail = text.partition("\n\n")[0], text.partition("\n\n")[2][: start - len(text)], text[start:]
        return f"{head}\n\n{groups.replace(chr(10) * 2, chr(10)).rstrip()}\n{tail}"


def _columns() -> int:
    """Return the columns of the terminal, or of the environment, 80 where there is neither."""
    given = os.environ.get("COLUMNS", "")
    if given.isdigit() and int(given) >= 40:
        return int(given)
    try:
        return max(os.get_terminal_size(sys.stdout.fileno()).columns, 60)
    except (OSError, ValueError, AttributeError):  # not a terminal
        return 80


def usage(command: str) -> str | None:
    """Return how a command is called, or None for what argparse makes of it."""
    return _USAGE.get(command)


def epilog(command: str) -> str:
    """Return what stands below the options."""
    examples = EXAMPLES.get(command, ())
    lines = ["examples:", *(f"  {example}" for example in examples), ""] if examples else []
    return "\n".join([*lines, _EXITS])
