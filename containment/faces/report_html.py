"""A report as one HTML page: no script, no network, prints on A4 and Letter, reads without its pictures."""

from html import escape
from typing import Final

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
from containment.judgement.findings import Answer

__all__ = ["html_report"]

_SIGNS: Final = {Answer.HELD: "\u2713", Answer.MARGINAL: "!", Answer.NOT_HELD: "\u2717"}
_CLASSES: Final = {Answer.HELD: "held", Answer.MARGINAL: "marginal", Answer.NOT_HELD: "lost"}

_SHORT: Final = 9
"""Rows up to which a table is kept on one page."""

_STYLE: Final = """
:root { color-scheme: light; }
* { box-sizing: border-box; }
html { font: 10.5pt/1.42 system-ui, "Segoe UI", "Helvetica Neue", Arial, sans-serif; color: #22262b; background: #fff; }
body { max-width: 48rem; margin: 0 auto; padding: 1.5rem 1.25rem 3rem; overflow-wrap: anywhere; }
h1 { font-size: 1.5rem; line-height: 1.2; margin: 0 0 .3rem; }
h2 { font-size: 1.02rem; margin: 1.5rem 0 .4rem; padding-bottom: .15rem; border-bottom: 1px solid #c9ced4; break-after: avoid; }
p { margin: .4rem 0; }
.when { color: #4a5058; margin: 0 0 1rem; font-size: .9rem; }
.verdict { display: flex; gap: .9rem; border: 2px solid; border-left-width: .7rem; padding: .7rem .9rem; margin: .8rem 0 1rem;
  break-inside: avoid; }
.verdict p { margin: .1rem 0 0; color: #22262b; }
.verdict .word { font-size: 1.25rem; font-weight: 700; margin: 0; }
.verdict .sign { font-size: 1.7rem; line-height: 1.1; font-weight: 700; }
.held { border-color: #14694f; } .held .word, .held .sign { color: #14694f; }
.marginal { border-color: #8a6100; border-style: dashed; border-left-style: solid; }
.marginal .word, .marginal .sign { color: #8a6100; }
.lost { border-color: #a63d00; border-style: double; border-left-style: solid; border-width: 4px; border-left-width: .7rem; }
.lost .word, .lost .sign { color: #a63d00; }
table { border-collapse: collapse; width: 100%; margin: .3rem 0 .6rem; font-variant-numeric: tabular-nums; }
td, th { text-align: left; vertical-align: top; padding: .22rem .7rem .22rem 0; border-bottom: 1px solid #eceef0;
  font-weight: 400; }
thead th { color: #4a5058; font-size: .85rem; border-bottom-color: #c9ced4; }
tbody th { width: 24%; max-width: 14rem; color: #22262b; overflow-wrap: break-word; }
table.headed tbody th { width: 48%; max-width: 24rem; }
@media (max-width: 36rem) { table { font-size: .84rem; } td.n, th.n { white-space: normal; } }
table.short { break-inside: avoid; }
td.n, th.n { text-align: right; white-space: nowrap; }
tr { break-inside: avoid; }
ul { margin: .3rem 0; padding-left: 1.2rem; } li { margin: .2rem 0; break-inside: avoid; }
figure { margin: .8rem 0 1rem; break-inside: avoid; }
figure svg { width: 100%; height: auto; display: block; }
figcaption { font-size: .85rem; color: #4a5058; margin-top: .2rem; }
pre { font: 8.6pt/1.25 ui-monospace, "DejaVu Sans Mono", Consolas, monospace; background: #f6f7f8; padding: .6rem .7rem;
  white-space: pre-wrap; break-inside: avoid; }
.sign-off { margin-top: 1.8rem; break-inside: avoid; }
.sign-off td { height: 2.6rem; border-bottom: 1px solid #22262b; } .sign-off td + td { border-left: .8rem solid #fff; }
.sign-off thead th { border-bottom: 0; }
@page { margin: 17mm 16mm 18mm; }
@media print {
  html { font-size: 9.5pt; } body { max-width: none; padding: 0; }
  pre { border: 1px solid #c9ced4; background: none; }
  h1, .verdict { break-after: avoid; }
}
"""


def html_report(page: ReportPage, *, when: str, made_by: str) -> str:
    """Return the page as HTML.

    Parameters
    ----------
    page : ReportPage
        What it says.
    when, made_by : str
        Date, and the versions that made it.
    """
    body = []
    pictures = 0
    for block in page.blocks:
        pictures += isinstance(block, Picture)
        body.append(_block(block, pictures))
    policy = "default-src 'none'; style-src 'unsafe-inline'"  # a browser then loads and runs nothing, whatever a name holds
    return "\n".join(
        [
            "<!DOCTYPE html>",
            '<html lang="en">',
            "<head>",
            '<meta charset="utf-8">',
            f'<meta http-equiv="Content-Security-Policy" content="{policy}">',
            '<meta name="viewport" content="width=device-width, initial-scale=1">',
            f"<title>{_text(page.title)}</title>",
            f"<style>{_STYLE}</style>",
            "</head>",
            "<body>",
            "<header>",
            f"<h1>{_text(page.title)}</h1>",
            f'<p class="when">{_text(when)} \u00b7 {_text(made_by)}</p>',
            "</header>",
            "<main>",
            *body,
            _SIGN_OFF,
            "</main>",
            "</body>",
            "</html>",
            "",
        ]
    )


_SIGN_OFF: Final = """<section class="sign-off" aria-label="Signatures">
<h2>Review</h2>
<table>
<thead><tr><th scope="col"></th><th scope="col">Name</th><th scope="col">Signature</th><th scope="col">Date</th></tr></thead>
<tbody>
<tr><th scope="row">Prepared by</th><td></td><td></td><td></td></tr>
<tr><th scope="row">Reviewed by</th><td></td><td></td><td></td></tr>
<tr><th scope="row">Released by</th><td></td><td></td><td></td></tr>
</tbody>
</table>
</section>"""


def _text(text: str) -> str:
    """Return text that is safe in elements and attributes; what cannot be printed becomes a visible sign."""
    clean = text.encode("utf-8", "replace").decode("utf-8")
    return escape("".join(c if c.isprintable() or c == "\n" else "\ufffd" for c in clean), quote=True)


def _block(block: Block, number: int) -> str:
    match block:
        case VerdictBox():
            return (
                f'<div class="verdict {_CLASSES[block.answer]}" role="region" aria-label="Verdict">'
                f'<div class="sign" aria-hidden="true">{_SIGNS[block.answer]}</div>'
                f'<div><p class="word">{_text(block.word)}</p><p>{_text(block.sentence)}.</p>'
                f"<p>{_text(block.reason)}.</p></div></div>"
            )
        case Heading():
            return f"<h2>{_text(block.text)}</h2>"
        case Table():
            return _table(block)
        case Listing():
            return "<ul>" + "".join(f"<li>{_text(line)}</li>" for line in block.lines) + "</ul>"
        case Paragraph():
            return f"<p>{_text(block.text)}</p>"
        case Preformatted():
            return f"<pre>{_text(block.text)}</pre>"
        case Picture():
            return f"<figure>{block.svg}<figcaption>Figure {number}. {_text(block.caption)}</figcaption></figure>"


def _table(table: Table) -> str:
    def cell(i: int, text: str) -> str:
        kind = ' class="n"' if i in table.right else ""
        if i == 0:
            return f'<th scope="row"{kind}>{_text(text)}</th>'
        return f"<td{kind}>{_text(text)}</td>"

    head = ""
    if table.head:
        cells = (f'<th scope="col"{" class=n" if i in table.right else ""}>{_text(t)}</th>' for i, t in enumerate(table.head))
        head = f"<thead><tr>{''.join(cells)}</tr></thead>"
    rows = ("<tr>" + "".join(cell(i, text) for i, text in enumerate(row)) + "</tr>" for row in table.rows)
    kinds = " ".join(word for word, known in (("headed", head), ("short", len(table.rows) <= _SHORT)) if known)
    return f'<table class="{kinds}">{head}<tbody>{"".join(rows)}</tbody></table>'
