"""Faults of a table: all of a file are collected and reported at once."""

import re
from dataclasses import dataclass, field

from containment.errors import InputError

__all__ = ["Faults", "shown"]

_MOST_REPORTED = 40


def shown(text: str) -> str:
    r"""Return a cell as one printable line of bounded length, in quotes.

    Examples
    --------
    >>> shown("a\x1b[31mb")
    "'a?[31mb'"
    """
    clean = "".join(c if c.isprintable() else "?" for c in text[:60])
    return f"'{clean[:45]}...'" if len(text) > 48 else f"'{clean}'"


@dataclass(slots=True)
class Faults:
    """Faults of one file.

    Parameters
    ----------
    file : str
        Its name, for the message.
    """

    file: str
    found: list[tuple[int, str, str]] = field(default_factory=list)

    def add(self, line: int, column: str, reason: str) -> None:
        """Add a fault at a line (1 is the first) and a column or key."""
        if (line, column, reason) not in self.found:
            self.found.append((line, column, re.sub(r"\s*\n\s*", " ", reason)))

    def raise_if_any(self) -> None:
        """Raise an error that lists every fault.

        Raises
        ------
        InputError
            There is a fault.
        """
        if not self.found:
            return
        self.found.sort(key=lambda fault: fault[0])
        count = len(self.found)
        lines = [
            f"  line {line}, {column}: {reason}" if line else f"  {column}: {reason}"
            for line, column, reason in self.found[:_MOST_REPORTED]
        ]
        if count > _MOST_REPORTED:
            lines.append(f"  and {count - _MOST_REPORTED} more")
        heading = f"table {self.file}: {count} fault{'s' if count > 1 else ''}"
        raise InputError("\n".join([heading, *lines]))
