"""Pictures as files: SVG, PNG or PDF, by matplotlib where it is installed."""

import importlib.util
import io
import re
from pathlib import Path
from typing import TYPE_CHECKING, Final

from containment.errors import InputError

if TYPE_CHECKING:
    from contextlib import AbstractContextManager

    from matplotlib.figure import Figure

__all__ = ["drawable", "inline_svg", "refuse_unless_drawable", "save_picture"]

_KINDS: Final = (".svg", ".png", ".pdf")
_DOTS_PER_INCH: Final = 200


def drawable() -> bool:
    """Return whether pictures can be drawn: whether matplotlib is installed."""
    return importlib.util.find_spec("matplotlib") is not None


def refuse_unless_drawable(file: str, option: str) -> None:
    """Refuse a file that no picture can be written to, before anything is computed.

    Raises
    ------
    InputError
        Another ending than .svg, .png or .pdf, a folder that is not there, or no matplotlib.
    """
    path = Path(file)
    if path.suffix.lower() not in _KINDS:
        raise InputError(f"{option}: {file!r} is not a picture that can be written; expected a name in .svg, .png or .pdf")
    if not path.parent.is_dir():
        raise InputError(f"{option}: {file!r} cannot be written: there is no folder {str(path.parent)!r}")
    if not drawable():
        raise InputError(f"{option}: pictures need matplotlib; expected it installed: pip install 'containment[plot]'")


def save_picture(figure: "Figure", file: str, option: str) -> None:
    """Write a picture in the format that the file's name says.

    Raises
    ------
    InputError
        A file that cannot be written.
    """
    path = Path(file)
    kind = path.suffix.lower().removeprefix(".")
    stamp = {"svg": {"Date": None}, "pdf": {"CreationDate": None}, "png": {}}[kind]  # equal input, equal file
    try:
        with _settled():
            figure.savefig(path, format=kind, dpi=_DOTS_PER_INCH, metadata=stamp)
    except OSError as error:
        raise InputError(f"{option}: {file!r} cannot be written: {error.strerror}") from error


def inline_svg(figure: "Figure", *, name: str, text: str) -> str:
    """Return a picture as an SVG element to be set into a page.

    Parameters
    ----------
    figure : Figure
        The picture.
    name : str
        A word of letters that no other picture of the page has; every id of the picture begins with it.
    text : str
        What the picture shows, for readers who do not see it; escaped here.
    """
    from html import escape

    stream = io.StringIO()
    with _settled():
        figure.savefig(stream, format="svg", metadata={"Date": None})
    svg = stream.getvalue()
    svg = svg[svg.index("<svg") :]
    svg = re.sub(r"<metadata>.*?</metadata>", "", svg, flags=re.DOTALL)
    svg = re.sub(r'\bd="[^"]*"', lambda path: re.sub(r"(\.\d\d)\d+", r"\1", path.group()), svg)  # hundredths of a point do
    svg = re.sub(r'\bid="', f'id="{name}-', svg)
    svg = re.sub(r'(href="#|url\(#)', rf"\g<1>{name}-", svg)
    svg = re.sub(r'(<svg[^>]*?) width="[^"]*"', r"\1", svg, count=1)
    svg = re.sub(r'(<svg[^>]*?) height="[^"]*"', r"\1", svg, count=1)
    label = escape(text, quote=True)
    return svg.replace("<svg", f'<svg role="img" aria-label="{label}"', 1).strip()


def _settled() -> "AbstractContextManager[None]":
    """Return the settings under which files are written: text stays text, ids do not change from run to run."""
    import matplotlib

    return matplotlib.rc_context({"svg.fonttype": "none", "svg.hashsalt": "containment", "pdf.fonttype": 42})
