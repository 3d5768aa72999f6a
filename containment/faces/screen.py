"""The screen: built first, printed once. Shared by all sub-commands.

Everything reads without colour; the width comes from the terminal on stdout alone; numbers are never clipped; the text
is never taken as markup; a stream that cannot carry a character gets its plain ASCII stand-in.
"""

import io
import os
import sys
from collections.abc import Iterable, Sequence
from typing import TYPE_CHECKING, Final

from containment.given.vessel import Annulus, Box, Cylinder, Slot, Vessel
from containment.judgement.findings import Answer, Caution, Limit, seconds_text

if TYPE_CHECKING:
    from rich.console import RenderableType

__all__ = ["Screen", "quantity_text", "seconds_text", "vessel_text"]

_PIPED_WIDTH: Final = 80
_NARROWEST: Final = 60
_WIDEST: Final = 110
_STYLE: Final = {Answer.HELD: "bold green", Answer.MARGINAL: "bold yellow", Answer.NOT_HELD: "bold red"}

_TRADE_UNITS: Final = {
    # SI unit: (factor, trade unit)
    "m": (1e3, "mm"),
    "m/s^2": (1.0 / 9.80665, "g_n"),
    "Pa": (1e-3, "kPa"),
    "rad": (57.29577951308232, "deg"),
}


def quantity_text(value: float | None, unit: str, digits: int = 3) -> str:
    """Return a value in the unit that the trade reads it in.

    Examples
    --------
    >>> quantity_text(0.0047, "m"), quantity_text(245.2, "m/s^2"), quantity_text(None, "m")
    ('4.7 mm', '25 g_n', '-')
    """
    if value is None or value != value:
        return "-"
    factor, shown = _TRADE_UNITS.get(unit, (1.0, unit))
    if unit == "Pa" and abs(value) < 100.0:
        factor, shown = 1.0, "Pa"
    scaled = value * factor
    if abs(scaled) == float("inf"):
        return "none"
    text = f"{scaled:.{digits}g}"
    if "e" in text and 1e-3 <= abs(scaled) < 1e6:
        text = f"{scaled:.0f}"
    return f"{text} {shown}".rstrip()


def vessel_text(vessel: Vessel) -> str:
    """Return the vessel in words, lengths in mm."""

    def mm(value: float) -> str:
        return f"{1e3 * value:.4g}"

    match vessel:
        case Cylinder():
            return f"cylinder of {mm(vessel.diameter)} mm diameter"
        case Box():
            return f"box of {mm(vessel.width)} mm x {mm(vessel.length)} mm"
        case Annulus():
            return f"ring of {mm(vessel.inner_diameter)} mm inner and {mm(vessel.outer_diameter)} mm outer diameter"
        case Slot():
            return f"slot of {mm(vessel.width)} mm width"
    return "layer without side walls"


class Screen:
    """A screen that is collected and then printed at once."""

    def __init__(self, *, plain: bool = False) -> None:
        self._parts: list[RenderableType] = []
        self._terminal = sys.stdout.isatty() or bool(os.environ.get("FORCE_COLOR"))
        self.boxes = self._terminal and not plain
        self._colour = self.boxes and not os.environ.get("NO_COLOR") and os.environ.get("TERM") != "dumb"
        self.width = _PIPED_WIDTH
        if sys.stdout.isatty():
            try:
                self.width = os.get_terminal_size(sys.stdout.fileno()).columns or _PIPED_WIDTH
            except (OSError, ValueError):
                self.width = _PIPED_WIDTH
        self.width = min(max(self.width, _NARROWEST), _WIDEST)

    def verdict(self, answer: Answer, word: str, sentence: str, reason: str) -> None:
        """Add the answer: the word, one sentence, and what it rests on."""
        from rich import box
        from rich.panel import Panel
        from rich.text import Text

        text = Text.assemble((f"{word}: ", _STYLE[answer]), (sentence, "bold"), ("\n" + reason[:1].upper() + reason[1:] + "."))
        if self.boxes:
            self._parts.append(Panel(text, box=box.HEAVY_EDGE if self._unicode() else box.ASCII, style=_STYLE[answer][5:]))
        else:
            self._parts.append(text)

    def heading(self, text: str) -> None:
        """Add a heading."""
        from rich.text import Text

        self._parts.append(Text("\n" + text.upper(), style="bold"))

    def rows(self, rows: Iterable[Sequence[str]], *, right: Sequence[int] = ()) -> None:
        """Add rows in columns; columns whose number is in `right` are set flush right and never folded."""
        from rich.padding import Padding
        from rich.table import Table
        from rich.text import Text

        rows = [list(row) for row in rows]
        if not rows:
            return
        grid = Table.grid(padding=(0, 2, 0, 0))
        last = len(rows[0]) - 1
        for i in range(len(rows[0])):
            widest = max(len(row[i]) for row in rows)
            fixed = i in right or (i < last and widest <= 36)
            grid.add_column(
                justify="right" if i in right else "left", no_wrap=fixed, min_width=widest if fixed else None,
                overflow="fold",
            )  # fmt: skip
        for row in rows:
            grid.add_row(*(Text(cell) for cell in row))
        self._parts.append(Padding(grid, (0, 0, 0, 2)))

    def listing(self, lines: Iterable[str]) -> None:
        """Add a list of sentences."""
        self.rows([("-", line) for line in lines])

    def text(self, text: str) -> None:
        """Add a paragraph, set in like the rows."""
        from rich.padding import Padding
        from rich.text import Text

        self._parts.append(Padding(Text(text), (0, 0, 0, 2)))

    def limits(self, limits: Iterable[Limit]) -> None:
        """Add the table of limits."""
        rows = [
            (
                "ok" if limit.ok else "NOT MET",
                limit.name,
                quantity_text(limit.value, limit.unit),
                "bound " + quantity_text(limit.bound, limit.unit),
                f"x {limit.ratio:.3g}" if limit.ratio is not None else "",
            )
            for limit in limits
        ]
        if rows:
            self.heading("Other limits")
            self.rows(rows, right=(2, 3, 4))

    def cautions(self, cautions: Iterable[Caution]) -> None:
        """Add the cautions."""
        self.heading("Cautions")
        self.rows([(caution.topic, caution.text) for caution in cautions])

    def _unicode(self) -> bool:
        try:
            "\u2588\u2580".encode(sys.stdout.encoding or "ascii")
        except (UnicodeEncodeError, LookupError):
            return False
        return True

    def render(self) -> str:
        """Return the screen as text."""
        from rich.console import Console

        stream = io.StringIO()
        console = Console(
            file=stream, width=self.width, force_terminal=self._colour, no_color=not self._colour,
            color_system="standard" if self._colour else None, legacy_windows=False, markup=False, highlight=False,
            emoji=False, soft_wrap=False,
        )  # fmt: skip
        for part in self._parts:
            console.print(part)
        return "\n".join(line.rstrip() for line in stream.getvalue().split("\n")) if not self._colour else stream.getvalue()

    def show(self) -> None:
        """Print the screen on stdout."""
        encoding = sys.stdout.encoding or "ascii"
        text = self.render()
        try:
            text.encode(encoding)
        except UnicodeEncodeError:
            text = text.encode("ascii", "replace").decode("ascii")
        sys.stdout.write(text)
        sys.stdout.flush()
