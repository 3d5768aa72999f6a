"""A report as Markdown: tables, lists and charts in characters; text from outside is escaped."""

import re

from containment.faces.report_page import (
    Block,
    Heading,
    Listing,
    Paragraph,
    Picture,
    Preformatted,
    ReportPage,
    Table,
    VerdictBox,
)

__all__ = ["markdown_report"]


def markdown_report(page: ReportPage, *, when: str, made_by: str) -> str:
    """Return the page as Markdown (with tables, as most renderers take them)."""
    parts = [f"# {_text(page.title)}", f"{_text(when)}, {_text(made_by)}"]
    parts += [_block(block) for block in page.blocks]
    parts += [
        "## Review",
        "| | Name | Signature | Date |\n|---|---|---|---|\n| Prepared by | | | |\n| Reviewed by | | | |\n| Released by | | | |",
    ]
    return "\n\n".join(parts) + "\n"


def _text(text: str) -> str:
    """Escape what Markdown or HTML would take as markup; one line."""
    clean = "".join(c if c.isprintable() else " " for c in text.encode("utf-8", "replace").decode("utf-8"))
    clean = clean.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;")
    clean = re.sub(r"([\\`*_{}\[\]|~#])", r"\\\1", clean)
    clean = re.sub(r"^(\s*)([-+=])", r"\1\\\2", clean)
    clean = re.sub(r"^(\s*\d+)([.)])(?=\s|$)", r"\1\\\2", clean)  # else the beginning of a numbered list
    return re.sub(r"(?i)\b(https?|ftp)://", r"\1:\\/\\/", clean).replace("@", "&#64;")


def _block(block: Block) -> str:
    match block:
        case VerdictBox():
            return f"> **{_text(block.word)}**: {_text(block.sentence)}.\n>\n> {_text(block.reason)}."
        case Heading():
            return f"## {_text(block.text)}"
        case Table():
            width = max(len(row) for row in block.rows)
            head = list(block.head) or [""] * width
            rule = ["---:" if i in block.right else "---" for i in range(width)]
            rows = [[_text(cell) for cell in row] + [""] * (width - len(row)) for row in block.rows]
            return "\n".join("| " + " | ".join(cells) + " |" for cells in ([_text(h) for h in head], rule, *rows))
        case Listing():
            return "\n".join(f"- {_text(line)}" for line in block.lines)
        case Paragraph():
            return _text(block.text)
        case Preformatted():
            longest = max((len(run) for run in re.findall(r"`+", block.text)), default=0)
            fence = "`" * max(3, longest + 1)
            lines = ("".join(c if c.isprintable() else "?" for c in line) for line in block.text.split("\n"))
            return fence + "text\n" + "\n".join(lines) + "\n" + fence
        case Picture():
            return f"*{_text(block.caption)}*"
