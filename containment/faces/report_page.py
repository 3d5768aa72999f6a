"""The page of a report: what a screen says, recorded block by block, with pictures, to be set as HTML or Markdown."""

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, field

from containment.faces.screen import Screen, quantity_text
from containment.judgement.findings import Answer, Caution, Limit

__all__ = ["Block", "Heading", "Listing", "Paragraph", "Picture", "Preformatted", "Table", "ReportPage", "VerdictBox"]


@dataclass(frozen=True, slots=True)
class VerdictBox:
    """The answer: the word, one sentence, and what it rests on."""

    answer: Answer
    word: str
    sentence: str
    reason: str


@dataclass(frozen=True, slots=True)
class Heading:
    """A heading of a section."""

    text: str


@dataclass(frozen=True, slots=True)
class Table:
    """Rows; the first cell of each names it. `head` names the columns where they need names."""

    rows: list[list[str]]
    right: tuple[int, ...] = ()
    head: tuple[str, ...] = ()


@dataclass(frozen=True, slots=True)
class Listing:
    """A list of sentences."""

    lines: list[str]


@dataclass(frozen=True, slots=True)
class Paragraph:
    """A paragraph."""

    text: str


@dataclass(frozen=True, slots=True)
class Preformatted:
    """Lines in a type of equal widths: a chart in characters, a case file."""

    text: str


@dataclass(frozen=True, slots=True)
class Picture:
    """A picture as an SVG element, with its caption, and the same in words."""

    svg: str
    caption: str


Block = VerdictBox | Heading | Table | Listing | Paragraph | Preformatted | Picture


@dataclass
class ReportPage(Screen):
    """Takes what is put on a screen, and keeps it as blocks.

    Attributes
    ----------
    title : str
        Of the report.
    blocks : list of Block
        In the order of the page.
    """

    title: str
    blocks: list[Block] = field(default_factory=list)

    def verdict(self, answer: Answer, word: str, sentence: str, reason: str) -> None:
        """Add the answer."""
        self.blocks.append(VerdictBox(answer, word, sentence, reason[:1].upper() + reason[1:]))

    def heading(self, text: str) -> None:
        """Add a heading."""
        self.blocks.append(Heading(text[:1].upper() + text[1:]))

    def rows(self, rows: Iterable[Sequence[str]], *, right: Sequence[int] = ()) -> None:
        """Add rows in columns."""
        kept = [list(row) for row in rows]
        if kept:
            self.blocks.append(Table(kept, tuple(right)))

    def listing(self, lines: Iterable[str]) -> None:
        """Add a list of sentences."""
        kept = list(lines)
        if kept:
            self.blocks.append(Listing(kept))

    def text(self, text: str) -> None:
        """Add a paragraph."""
        if text:
            self.blocks.append(Paragraph(text))

    def preformatted(self, text: str) -> None:
        """Add lines in a type of equal widths."""
        self.blocks.append(Preformatted(text))

    def picture(self, svg: str, caption: str) -> None:
        """Add a picture."""
        self.blocks.append(Picture(svg, caption))

    def limits(self, limits: Iterable[Limit]) -> None:
        """Add the table of limits, with their sources."""
        rows = [
            [
                limit.name, "ok" if limit.ok else "NOT MET", quantity_text(limit.value, limit.unit),
                quantity_text(limit.bound, limit.unit), f"x {limit.ratio:.3g}" if limit.ratio is not None else "",
            ]
            for limit in limits
        ]  # fmt: skip
        if rows:
            self.heading("Other limits")
            self.blocks.append(Table(rows, (2, 3, 4), ("limit", "", "value", "bound", "factor")))

    def cautions(self, cautions: Iterable[Caution]) -> None:
        """Add the cautions."""
        kept = [[caution.topic, caution.text] for caution in cautions]
        if kept:
            self.heading("Cautions")
            self.blocks.append(Table(kept))
