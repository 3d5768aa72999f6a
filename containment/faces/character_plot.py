"""A curve drawn with characters, for the terminal."""

import math
from collections.abc import Sequence

__all__ = ["character_plot"]


def character_plot(
    x: Sequence[float],
    y: Sequence[float],
    *,
    width: int = 56,
    height: int = 9,
    logarithmic: bool = False,
    x_unit: str = "",
    y_unit: str = "",
) -> list[str]:
    """Return the lines of a plot of y over x.

    Parameters
    ----------
    x : sequence of float
        Rising.
    y : sequence of float
        Finite; positive where the scale is logarithmic.
    width, height : int
        Columns and rows of the field.
    logarithmic : bool
        Whether the y scale is logarithmic.
    x_unit, y_unit : str
        Written at the axes.

    Returns
    -------
    list of str
        Plain ASCII, none longer than `width` + 15 characters.

    Examples
    --------
    >>> for line in character_plot([0.0, 1.0, 2.0], [1.0, 10.0, 100.0], width=11, height=3, logarithmic=True):
    ...     print(line)
              100 |          *
               10 |     *
                1 |*
                  +-----------
                   0        2
    """
    scaled = [math.log10(value) for value in y] if logarithmic else list(y)
    low, high = min(scaled), max(scaled)
    span = high - low or 1.0
    left, right = x[0], x[-1]
    field = [[" "] * width for _ in range(height)]
    for at, value in zip(x, scaled, strict=True):
        column = int((at - left) / (right - left) * (width - 1)) if right > left else 0
        row = round((high - value) / span * (height - 1))
        field[row][column] = "*"
    lines = []
    for i, row_cells in enumerate(field):
        label = ""
        if i in (0, height // 2, height - 1):
            value = high - span * i / (height - 1)
            label = f"{10.0**value if logarithmic else value:.4g}"
        lines.append(f"{label:>13} |{''.join(row_cells)}".rstrip())
    lines.append(" " * 14 + "+" + "-" * width)
    first, last = f"{left:.4g}", f"{right:.4g}"
    between = width - len(first) - len(last) - 1
    lines.append(" " * 15 + first + x_unit.center(max(between, 1)) + last)
    return ([y_unit.rjust(13)] if y_unit else []) + lines
