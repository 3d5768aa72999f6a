"""What a verdict is made of, the same for liquids and granular beds: limits, cautions, the three answers."""

import enum
from dataclasses import asdict, dataclass
from typing import Any

__all__ = ["Answer", "Caution", "Limit", "exit_status", "seconds_text"]


class Answer(enum.StrEnum):
    """The three answers of a verdict."""

    HELD = "held"
    MARGINAL = "marginal"
    NOT_HELD = "not held"


@dataclass(frozen=True, slots=True, kw_only=True)
class Limit:
    """One named limit: a value against its bound.

    Attributes
    ----------
    name : str
        What is limited, in trade terms.
    value, bound : float or None
        The value met and the bound that it must respect, both in `unit`; None when either is unbounded.
    unit : str
        SI unit of both.
    ok : bool
        Whether the bound is respected.
    source : str
        Source of the formula or of the bound; ``common practice`` or ``from memory`` where there is none.
    ratio : float or None
        How far the bound is away, above 1 on the good side; None where a ratio says nothing.
    remark : str
        One sentence for the reader, may be empty.
    """

    name: str
    value: float | None
    bound: float | None
    unit: str
    ok: bool
    source: str
    ratio: float | None = None
    remark: str = ""

    def to_dict(self) -> dict[str, Any]:
        """Return the limit as plain JSON types."""
        return asdict(self)


@dataclass(frozen=True, slots=True, kw_only=True)
class Caution:
    """A hazard that applies to the case, with its reason."""

    topic: str
    text: str

    def to_dict(self) -> dict[str, Any]:
        """Return the caution as plain JSON types."""
        return asdict(self)


def exit_status(answer: Answer, proven: bool = True) -> int:
    """Return the exit status of the command line: 0 held, 1 not held, 3 marginal or not proven."""
    if answer is Answer.NOT_HELD:
        return 1
    return 0 if answer is Answer.HELD and proven else 3


def seconds_text(seconds: float) -> str:
    """Return a time in s, min, h or days, to two digits.

    Examples
    --------
    >>> seconds_text(0.973), seconds_text(110.0), seconds_text(600.0)
    ('0.97 s', '110 s', '10 min')
    """
    for limit, size, unit in ((120.0, 1.0, "s"), (7200.0, 60.0, "min"), (172800.0, 3600.0, "h")):
        if seconds < limit:
            value = seconds / size
            return f"{value:.0f} {unit}" if value >= 99.5 else f"{value:.2g} {unit}"
    return f"{seconds / 86400.0:.3g} days"
