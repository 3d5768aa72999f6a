"""Map of verdicts over two inputs, from the results of a study."""

import json
import math
from collections.abc import Iterable, Sequence
from pathlib import Path
from typing import TYPE_CHECKING, Any, Final

import numpy as np
import numpy.typing as npt

from containment.constants import ABSOLUTE_ZERO_CELSIUS, STANDARD_GRAVITY
from containment.errors import InputError
from containment.faces.picture_style import COLOURS, INK, entitle, halo, new_picture, tidy_log_axis

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

__all__ = ["MapPoints", "draw_study_map", "draw_verdict_map", "map_points"]

Real = npt.NDArray[np.float64]

_ORDER: Final = ("not held", "marginal", "held")
_MOST_SIGNS: Final = 2500
_LOGARITHMIC_FROM: Final = 8.0

_SUFFIXES: Final = {
    # ending of a key: (unit shown, factor, offset)
    "_Pa_s": ("Pa s", 1.0, 0.0), "_kg_m3": ("kg/m^3", 1.0, 0.0), "_N_m": ("mN/m", 1e3, 0.0),
    "_m_s2": ("g_n", 1.0 / STANDARD_GRAVITY, 0.0), "_m_s": ("m/s", 1.0, 0.0), "_Hz": ("Hz", 1.0, 0.0),
    "_Pa": ("kPa", 1e-3, 0.0), "_kg": ("kg", 1.0, 0.0), "_rad": ("deg", 180.0 / math.pi, 0.0),
    "_K": ("degC", 1.0, ABSOLUTE_ZERO_CELSIUS), "_m": ("mm", 1e3, 0.0), "_N": ("N", 1.0, 0.0), "_s": ("s", 1.0, 0.0),
}  # fmt: skip


class MapPoints:
    """Cases of a study with two of their inputs and their answers.

    Parameters
    ----------
    x, y : sequence of float
        The two inputs.
    answers : sequence of str
        "held", "marginal" or "not held".
    left_out : int
        Cases without an answer or without one of the inputs.
    """

    def __init__(self, x: Sequence[float], y: Sequence[float], answers: Sequence[str], left_out: int = 0) -> None:
        self.x, self.y = np.asarray(x, dtype=np.float64), np.asarray(y, dtype=np.float64)
        self.answers = np.array([_ORDER.index(answer) for answer in answers], dtype=np.int64)
        self.left_out = left_out

    def grid(self) -> tuple[Real, Real, npt.NDArray[np.int64]] | None:
        """Return the axes and the table of answers where the cases fill a grid once, else None."""
        xs, ys = np.unique(self.x), np.unique(self.y)
        if len(xs) < 3 or len(ys) < 3 or len(xs) * len(ys) != len(self.x):
            return None
        table = np.full((len(ys), len(xs)), -1)
        table[np.searchsorted(ys, self.y), np.searchsorted(xs, self.x)] = self.answers
        return None if np.any(table < 0) else (xs, ys, table)


def map_points(file: str | Path, *, x: str, y: str, answer: str = "verdict") -> MapPoints:
    """Read the cases of a file of JSON lines.

    Parameters
    ----------
    file : path
        One JSON object a line. Cases with an input but without an answer (failed ones) are counted and left out; a header,
        which has no inputs, is not counted.
    x, y, answer : str
        Where the inputs and the answer stand in an object, with points between levels, such as ``inputs.viscosity``.

    Raises
    ------
    InputError
        A file that cannot be read, a line that is not JSON, or no case with both inputs and an answer.
    """
    path = Path(file)
    found: list[tuple[float, float, str]] = []
    left_out = 0
    try:
        with path.open(encoding="utf-8") as lines:
            for number, line in enumerate(lines, 1):
                if not line.strip():
                    continue
                try:
                    record = json.loads(line)
                except ValueError as error:
                    raise InputError(f"{path.name}, line {number}: not JSON; expected one object a line") from error
                values = (_at(record, x), _at(record, y), _at(record, answer))
                if _is_number(values[0]) and _is_number(values[1]) and values[2] in _ORDER:
                    found.append((float(values[0]), float(values[1]), values[2]))
                elif any(value is not None for value in values):
                    left_out += 1
    except (OSError, UnicodeDecodeError) as error:
        raise InputError(f"{path.name}: cannot be read: {error}") from error
    if not found:
        raise InputError(f"{path.name}: no case has {x}, {y} and {answer}; expected numbers under the first two")
    xs, ys, answers = zip(*found, strict=True)
    return MapPoints(xs, ys, answers, left_out)


def draw_study_map(file: str | Path, *, x: str, y: str, title: str = "") -> "Figure":
    """Return the map of a study's file over two of its inputs, in trade units, by the keys of its records.

    Parameters
    ----------
    file : path
        JSON lines of a study.
    x, y : str
        Keys with their SI unit, such as ``frequency_Hz`` and ``acceleration_m_s2``.
    title : str
        Set above.
    """
    points = map_points(file, x=x, y=y)
    labels, logarithmic = [], []
    for name, axis in ((x, "x"), (y, "y")):
        words, unit, factor, offset = _read_key(name)
        values = getattr(points, axis) * factor + offset
        setattr(points, axis, values)
        labels.append(f"{words} [{unit}]" if unit else words)
        logarithmic.append(bool(values.min() > 0.0 and values.max() > _LOGARITHMIC_FROM * values.min()))
    return draw_verdict_map(
        points, x_label=labels[0], y_label=labels[1], title=title, logarithmic=(logarithmic[0], logarithmic[1])
    )


def _read_key(name: str) -> tuple[str, str, float, float]:
    """Return the words of a key, its trade unit, and what turns SI into it."""
    last = name.rpartition(".")[2]
    for ending, (unit, factor, offset) in _SUFFIXES.items():
        if last.endswith(ending):
            return last.removesuffix(ending).replace("_", " "), unit, factor, offset
    return last.replace("_", " "), "", 1.0, 0.0


def _is_number(value: Any) -> bool:
    return isinstance(value, int | float) and not isinstance(value, bool) and math.isfinite(value)


def _at(record: Any, name: str) -> Any:
    """Return what stands under a name, taken whole or level by level."""
    if isinstance(record, dict) and name in record:
        return record[name]
    for level in name.split("."):
        record = record.get(level) if isinstance(record, dict) else None
    return record


def draw_verdict_map(
    points: MapPoints, *, x_label: str, y_label: str, title: str = "", logarithmic: tuple[bool, bool] = (False, False)
) -> "Figure":
    """Return the map: areas where the cases fill a grid, signs where they are scattered.

    Parameters
    ----------
    points : MapPoints
        The cases.
    x_label, y_label : str
        With units.
    title : str
        Set above.
    logarithmic : tuple of bool
        Which axes are logarithmic.
    """
    figure, axes = new_picture(height=4.4)
    for which, log in zip("xy", logarithmic, strict=True):
        if log:
            (axes.set_xscale if which == "x" else axes.set_yscale)("log")
    grid = points.grid()
    if grid is not None:
        _areas(axes, *grid, logarithmic)
    else:
        _signs(axes, points)
    for which, log in zip("xy", logarithmic, strict=True):
        if log:
            tidy_log_axis(axes, which)
    axes.set_xlabel(x_label, parse_math=False)
    axes.set_ylabel(y_label, parse_math=False)
    entitle(axes, title)
    counts = [f"{int(np.count_nonzero(points.answers == i))} {name}" for i, name in reversed(list(enumerate(_ORDER)))]
    if points.left_out:
        counts.append(f"{points.left_out} without an answer, left out")
    figure.supxlabel("Cases: " + ", ".join(counts), x=0.012, ha="left", fontsize=7.5)
    return figure


def _edges_of(values: Real, log: bool) -> Real:
    """Return the borders of the cells around grid values."""
    v = np.log(values) if log else values
    inner = 0.5 * (v[1:] + v[:-1])
    ends = np.concatenate([[2.0 * v[0] - inner[0]], inner, [2.0 * v[-1] - inner[-1]]])
    return np.exp(ends) if log else ends


def _areas(
    axes: "Axes", xs: Real, ys: Real, table: npt.NDArray[np.int64], logarithmic: tuple[bool, bool]
) -> None:
    from matplotlib.collections import LineCollection
    from matplotlib.colors import ListedColormap

    ramp = ListedColormap(["#fbeee6", COLOURS["marginal"], COLOURS["held"]])
    x, y = _edges_of(xs, logarithmic[0]), _edges_of(ys, logarithmic[1])
    axes.pcolormesh(x, y, table, cmap=ramp, vmin=-0.5, vmax=2.5, zorder=1)
    for level, colour, dash in ((0.5, COLOURS["falls"], "dashed"), (1.5, INK, "solid")):
        above = table > level  # borders run along the cells: nothing is smoothed between cases
        upright = [[(x[j + 1], y[i]), (x[j + 1], y[i + 1])] for i, j in np.argwhere(above[:, 1:] != above[:, :-1])]
        along = [[(x[j], y[i + 1]), (x[j + 1], y[i + 1])] for i, j in np.argwhere(above[1:] != above[:-1])]
        axes.add_collection(LineCollection(upright + along, colors=colour, linestyles=dash, linewidths=1.1, zorder=2))
    for i, word in enumerate(_ORDER):
        inside = table == i
        if np.count_nonzero(inside) >= max(4, 0.02 * table.size):
            row, column = _deepest(inside)
            style: dict[str, Any] = {"fontsize": 11 if i == 2 else 9, "fontweight": "bold" if i == 2 else "normal"}
            halo(axes.text(xs[column], ys[row], word.upper() if i == 2 else word, ha="center", va="center", zorder=4, **style))


def _deepest(inside: npt.NDArray[np.bool_]) -> tuple[int, int]:
    """Return the cell of an area that lies farthest from its border."""
    depth = np.zeros(inside.shape, dtype=np.int64)
    left = inside.copy()
    while left.any():
        depth += left
        padded = np.pad(left, 1)
        left = left & padded[:-2, 1:-1] & padded[2:, 1:-1] & padded[1:-1, :-2] & padded[1:-1, 2:]
    best = np.argwhere(depth == depth.max())
    middle = best.mean(axis=0)
    row, column = best[int(np.argmin(np.abs(best - middle).sum(axis=1)))]
    return int(row), int(column)


def _signs(axes: "Axes", points: MapPoints) -> None:
    step = max(1, math.ceil(len(points.x) / _MOST_SIGNS))
    x, y, answers = (values[::step] for values in (points.x, points.y, points.answers))
    size = float(np.clip(4000.0 / max(len(x), 1), 6.0, 36.0))
    looks: Iterable[tuple[int, dict[str, Any]]] = (
        (0, {"marker": "x", "color": COLOURS["falls"], "linewidths": 0.9}),
        (1, {"marker": "D", "facecolors": "white", "edgecolors": INK, "linewidths": 0.7}),
        (2, {"marker": "o", "facecolors": COLOURS["breaks up"], "edgecolors": "white", "linewidths": 0.3}),
    )
    for i, look in looks:
        some = answers == i
        if some.any():
            axes.scatter(x[some], y[some], s=size * (0.7 if i == 1 else 1.0), label=_ORDER[i], zorder=2 + i, **look)
    axes.legend(loc="upper left", bbox_to_anchor=(1.0, 1.0), frameon=False, fontsize=8, handletextpad=0.2)
