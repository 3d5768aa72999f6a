"""A screen as a picture: what the terminal shows, as an SVG whose text can be read and selected."""

import re
from html import escape
from typing import Final

__all__ = ["screen_svg"]

_ADVANCE: Final = 7.83
"""Width of a character of the type in px: 0.602 em at 13 px, as of most fixed-width types."""

_LINE: Final = 17.0
_HARD: Final = "\u00a0"  # a blank that no viewer runs together with the next
_MARGIN: Final = 18.0
_COLOURS: Final = {"HELD": "#14694f", "CAN BE HELD": "#14694f", "STAYS": "#14694f", "NOT": "#a63d00", "CANNOT": "#a63d00"}


def screen_svg(text: str, *, command: str = "") -> str:
    r"""Return a plain screen as SVG.

    Parameters
    ----------
    text : str
        As printed with ``--plain``: the verdict first, headings in capitals.
    command : str
        Shown above after a prompt; empty for none.

    Examples
    --------
    >>> picture = screen_svg("HELD: it stays\n\nCASE\n  a < b")
    >>> "a\u00a0&lt;\u00a0b" in picture, picture.startswith("<svg")
    (True, True)
    """
    lines = ([f"$ {part}" if i == 0 else part for i, part in enumerate(command.split("\n"))] + [""]) if command else []
    start = len(lines)
    lines += text.rstrip("\n").split("\n")
    columns = max(map(len, lines), default=0)
    width, height = columns * _ADVANCE + 2.0 * _MARGIN, len(lines) * _LINE + 2.0 * _MARGIN
    colour = next((c for word, c in _COLOURS.items() if lines[start].startswith(word)), "#8a6100")
    rows = []
    for i, line in enumerate(lines):
        if not line.strip():
            continue
        style = ""
        word, colon, rest = line.partition(":")
        shown = escape(line, quote=False)
        if i < start:
            style = ' fill="#4a5058"'
        elif i == start and colon and word.isupper():
            shown = f'<tspan fill="{colour}">{escape(word + colon, quote=False)}</tspan>{escape(rest, quote=False)}'
            style = ' font-weight="700"'
        elif re.fullmatch(r"[A-Z][A-Z ,-]*", line):
            style = ' font-weight="700"'
        y = _MARGIN + (i + 0.75) * _LINE
        length = f'{len(line) * _ADVANCE:.2f}'  # keeps columns upright in whatever type is there
        whole = re.sub(r" (?![a-z-]+=)", _HARD, shown) if "<" in shown else shown.replace(" ", _HARD)
        rows.append(f'<text x="{_MARGIN:g}" y="{y:.2f}" textLength="{length}"{style}>{whole}</text>')
    label = escape(" ".join(lines[start].split()), quote=True)
    return "\n".join(
        [
            f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {width:.0f} {height:.0f}" width="{width:.0f}" '
            f'height="{height:.0f}" role="img" aria-label="{label}">',
            f'<rect width="{width:.0f}" height="{height:.0f}" rx="6" fill="#fbfbfa" stroke="#c9ced4"/>',
            '<g font-family="DejaVu Sans Mono, Menlo, Consolas, monospace" font-size="13" fill="#22262b">',
            *rows,
            "</g>",
            "</svg>",
            "",
        ]
    )
