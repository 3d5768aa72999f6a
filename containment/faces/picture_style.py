"""How the pictures look: one set of colours, line kinds and type sizes; told apart without colour as well.

The three hues differ in lightness and lie apart for readers with any of the common colour-vision deficiencies; every line
has a dash pattern and a label of its own besides.
"""

from typing import TYPE_CHECKING, Any, Final

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["COLOURS", "INK", "entitle", "halo", "new_picture", "new_row", "tidy_log_axis"]

INK: Final = "#22262b"
"""Text, axes, marks."""

COLOURS: Final = {
    "falls": "#a63d00",  # burnt orange, dark
    "breaks up": "#2457a8",  # blue
    "held": "#bfe3d4",  # pale green-blue, light
    "marginal": "#e6f3ee",
    "drive": "#5b6068",
    "pull-off": "#8a4f9e",
    "searched": "#9aa0a6",
    "better": "#2457a8",
    "worse": "#a63d00",
}


def new_picture(*, width: float = 6.9, height: float = 4.6) -> "tuple[Figure, Axes]":
    """Return an empty picture and its axes; sizes in inch (6.9 in fit the text width of A4 and Letter)."""
    figure, (axes,) = new_row(width=width, height=height, ratios=(1.0,))
    return figure, axes


def new_row(*, width: float = 6.9, height: float, ratios: tuple[float, ...]) -> "tuple[Figure, list[Axes]]":
    """Return an empty picture with axes side by side, their widths in the given ratios."""
    import matplotlib
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    style: Any = {
        "font.family": ["DejaVu Sans"], "font.size": 8.5, "axes.edgecolor": INK, "axes.labelcolor": INK,
        "text.color": INK, "xtick.color": INK,
        "ytick.color": INK, "axes.spines.top": False, "axes.spines.right": False, "axes.linewidth": 0.8,
        "lines.linewidth": 1.6, "lines.solid_capstyle": "round", "hatch.linewidth": 0.5,
    }  # fmt: skip
    with matplotlib.rc_context(style):
        figure = Figure(figsize=(width, height), layout="constrained")
        FigureCanvasAgg(figure)
        row = figure.subplots(1, len(ratios), width_ratios=ratios, squeeze=False)[0]
    return figure, list(row)


def entitle(axes: "Axes", title: str) -> None:
    """Set a title, flush left, as plain text, folded where it is long."""
    import textwrap

    axes.set_title(
        "\n".join(textwrap.wrap(title, 78)[:4]), loc="left", fontsize=9.5, fontweight="bold", parse_math=False, color=INK
    )


def halo(text: Any) -> None:
    """Put a light ground under a text, so that it reads on lines and shades (an outline would turn text into paths)."""
    text.set_bbox({"facecolor": "white", "alpha": 0.7, "edgecolor": "none", "pad": 0.6})


def tidy_log_axis(axes: "Axes", which: str) -> None:
    """Write plain numbers at 1, 2 and 5 of every decade (1 alone where there are many decades)."""
    import math

    from matplotlib.ticker import FuncFormatter, LogLocator, NullFormatter

    axis = axes.xaxis if which == "x" else axes.yaxis
    low, high = axes.get_xlim() if which == "x" else axes.get_ylim()
    decades = math.log10(high / low)
    subs: tuple[float, ...] = (1.0, 2.0, 5.0) if decades <= 3.2 else (1.0,)
    if decades < 0.8:
        subs = (1.0, 1.5, 2.0, 3.0, 4.0, 5.0, 6.0, 8.0)
    axis.set_major_locator(LogLocator(base=10.0, subs=subs, numticks=50))
    axis.set_major_formatter(FuncFormatter(lambda value, _: f"{value:.6g}"))
    axis.set_minor_locator(LogLocator(base=10.0, subs=tuple(range(2, 10)), numticks=50))
    axis.set_minor_formatter(NullFormatter())
