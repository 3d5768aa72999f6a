"""Laws fitted to a user's own measured points: which law, how well, and the row of the table that says it."""

import csv
import io
import math
import re
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.errors import InputError
from containment.given.quantities import parse_quantity
from containment.given.tables.faults import Faults, shown
from containment.given.tables.laws import LAWS
from containment.given.tables.rows import file_text

__all__ = ["Fit", "PropertyFits", "fit_points"]

Array = npt.NDArray[np.float64]

_QUANTITIES: Final = {
    # column: (kind of unit, unit that the fitted row is written in)
    "temperature": ("temperature", "K"),
    "density": ("density", "kg/m**3"),
    "viscosity": ("viscosity", "Pa*s"),
    "kinematic_viscosity": ("kinematic viscosity", "mm**2/s"),
    "surface_tension": ("surface tension", "mN/m"),
    "vapour_pressure": ("pressure", "Pa"),
}
_TRADE_FACTOR: Final = {"mm**2/s": 1e6, "mN/m": 1e3}
_HEAD: Final = re.compile(r"\s*([a-z_ ]+?)\s*\[\s*([^\]]+?)\s*\]\s*")
_MOST_POINTS: Final = 5000


@dataclass(frozen=True, slots=True, kw_only=True)
class Fit:
    """A law fitted to points.

    Parameters
    ----------
    law : str
        One of `laws.LAWS`.
    coefficients : mapping
        Of the law.
    residuals : array of shape (n,)
        Law over measured, minus 1.
    spread : float
        Root mean square of the residuals with the degrees of freedom that are left; 0 for a law through the points.
    """

    law: str
    coefficients: Mapping[str, float]
    residuals: Array
    spread: float


@dataclass(frozen=True, slots=True, kw_only=True)
class PropertyFits:
    """The fits of one property, the one to take first.

    Parameters
    ----------
    name, unit : str
        Property and the unit of the law.
    temperatures, values : array of shape (n,)
        Points in K and in `unit`.
    fits : tuple of Fit
        The recommended one first.
    """

    name: str
    unit: str
    temperatures: Array
    values: Array
    fits: tuple[Fit, ...]


def fit_points(path: Path) -> tuple[PropertyFits, ...]:
    """Return the fits to the points of a file.

    Parameters
    ----------
    path : Path
        CSV whose head names ``temperature [degC]`` and properties with their unit, such as ``viscosity [mPa*s]``; a cell may
        stay empty where a property was not measured at a temperature.

    Raises
    ------
    InputError
        A file that cannot be used; every fault is told with its line and column.
    """
    columns = _columns(path)
    kelvin = columns.pop("temperature")
    found = []
    for name, values in columns.items():
        measured = np.isfinite(values)
        order = np.argsort(kelvin[measured], kind="stable")
        found.append(_fits(name, kelvin[measured][order], values[measured][order]))
    return tuple(found)


def _columns(path: Path) -> dict[str, Array]:
    """Return the columns in the units that rows are written in."""
    name = "".join(c if c.isprintable() else "?" for c in path.name)
    faults = Faults(name)
    reader = csv.reader(io.StringIO(file_text(path, name), newline=""), strict=True)
    heads: list[tuple[str, str]] = []
    points: list[list[float]] = []
    try:
        for cells in reader:
            if not any(cell.strip() for cell in cells) or cells[0].lstrip().startswith("#"):
                continue
            if not heads:
                heads = _heads(cells, reader.line_num, faults)
                faults.raise_if_any()
            elif len(cells) != len(heads):
                faults.add(reader.line_num, "row", f"has {len(cells)} cells where the header has {len(heads)}")
            else:
                pairs = zip(cells, heads, strict=True)
                points.append([_cell(cell, *head, reader.line_num, faults) for cell, head in pairs])
            if len(points) > _MOST_POINTS:
                raise InputError(f"table {name}: more than {_MOST_POINTS} points; expected fewer")
    except csv.Error as error:
        faults.add(reader.line_num, "row", f"is not CSV ({error})")
    if not heads:
        faults.add(1, "header", "the file is empty; expected 'temperature [degC],viscosity [mPa*s]' and points below")
    faults.raise_if_any()
    table = np.array(points, dtype=np.float64).reshape(-1, len(heads))
    columns = {head: table[:, i] for i, (head, _) in enumerate(heads)}
    for head, values in columns.items():
        kelvin = columns["temperature"][np.isfinite(values)]
        if len(kelvin) < 2 or np.ptp(kelvin) < 1.0:
            faults.add(1, head, f"has {len(kelvin)} points within 1 K; expected at least two temperatures")
    faults.raise_if_any()
    return columns


def _heads(cells: list[str], line: int, faults: Faults) -> list[tuple[str, str]]:
    heads: list[tuple[str, str]] = []
    for cell in cells:
        match = _HEAD.fullmatch(cell)
        column = match.group(1).replace(" ", "_") if match else ""
        if match is None or column not in _QUANTITIES:
            faults.add(line, "header", f"{shown(cell)} is not a quantity with its unit; expected {', '.join(_QUANTITIES)}")
            continue
        if column in [known for known, _ in heads]:
            faults.add(line, "header", f"{shown(cell)} is there twice")
        try:
            parse_quantity(f"300 {match.group(2)}", _QUANTITIES[column][0], "unit")
        except InputError as error:
            faults.add(line, "header", str(error))
        heads.append((column, match.group(2)))
    named = [known for known, _ in heads]
    if "temperature" not in named:
        faults.add(line, "header", "no column 'temperature [degC]'")
    elif len(named) < 2:
        faults.add(line, "header", "no property beside the temperature")
    if "viscosity" in named and "kinematic_viscosity" in named:
        faults.add(line, "header", "viscosity and kinematic_viscosity are both there; expected one of them")
    return heads


def _cell(cell: str, column: str, unit: str, line: int, faults: Faults) -> float:
    if not cell.strip() and column != "temperature":
        return math.nan
    try:
        if not re.fullmatch(r"\s*[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?\s*", cell):
            raise InputError(f"{shown(cell)} is not a plain number")
        kind, written = _QUANTITIES[column]
        value = parse_quantity(f"{cell.strip()} {unit}", kind, column) * _TRADE_FACTOR.get(written, 1.0)
        if not value > 0.0:
            raise InputError(f"{shown(cell)} is not allowed; expected more than 0")
    except InputError as error:
        faults.add(line, column, str(error))
        return math.nan
    return value


def _fits(name: str, kelvin: Array, values: Array) -> PropertyFits:
    """Fit the laws that suit a property and put the recommended one first."""
    distinct = len(np.unique(kelvin))
    candidates: dict[str, tuple[int, Callable[[Array, Array], dict[str, float] | None]]]
    if name in ("density", "surface_tension"):
        candidates = {
            "polynomial 1": (2, lambda T, y: _polynomial(T, y, 1)),
            "polynomial 2": (4, lambda T, y: _polynomial(T, y, 2)),
        }
    elif name == "kinematic_viscosity":
        candidates = {"walther": (2, _walther), "andrade": (2, _andrade), "vogel": (4, _vogel)}
    else:
        candidates = {"andrade": (2, _andrade), "vogel": (4, _vogel)}
    fits = []
    for candidate, (needed, fit) in candidates.items():
        coefficients = fit(kelvin, values) if distinct >= needed else None
        if coefficients is not None:
            fits.append(_judged(candidate.split()[0], coefficients, kelvin, values))
    if distinct == len(kelvin) >= 3:
        fits.append(_through(name, kelvin, values))
    # the smallest spread is taken; where points are as few as coefficients none has any, and the law of the trade goes first
    fits.sort(key=lambda fit: (fit.law.startswith("tabulated"), round(fit.spread, 9), fit.law != "walther"))
    unit = _QUANTITIES[name][1]
    return PropertyFits(name=name, unit=unit, temperatures=kelvin, values=values, fits=tuple(fits))


def _judged(law: str, coefficients: Mapping[str, float], kelvin: Array, values: Array) -> Fit:
    residuals = np.asarray(LAWS[law].function(kelvin, coefficients)) / values - 1.0
    free = max(len(kelvin) - len(coefficients), 1)
    spread = float(np.sqrt(np.sum(residuals**2) / free))
    return Fit(law=law, coefficients=coefficients, residuals=residuals, spread=spread)


def _through(name: str, kelvin: Array, values: Array) -> Fit:
    law = "tabulated" if name in ("density", "surface_tension") else "tabulated_log"
    points = {f"{t + ABSOLUTE_ZERO_CELSIUS:.6g}": float(y) for t, y in zip(kelvin, values, strict=True)}
    return Fit(law=law, coefficients=points, residuals=np.zeros_like(values), spread=0.0)


def _line(x: Array, y: Array, degree: int = 1) -> Array:
    return np.asarray(np.polynomial.polynomial.polyfit(x, y, degree), dtype=np.float64)


def _polynomial(kelvin: Array, values: Array, degree: int) -> dict[str, float]:
    t = kelvin + ABSOLUTE_ZERO_CELSIUS
    return {f"c{i}": float(c) for i, c in enumerate(_line(t, values, degree))}


def _andrade(kelvin: Array, values: Array) -> dict[str, float]:
    a, b = _line(1.0 / kelvin, np.log(values))
    return {"A": float(np.exp(a)), "B": float(b)}


def _walther(kelvin: Array, values: Array) -> dict[str, float] | None:
    if np.min(values) <= 0.31:  # log10 log10(v + 0.7) needs v + 0.7 above 1
        return None
    a, b = _line(np.log10(kelvin), np.log10(np.log10(values + 0.7)))
    return {"A": float(a), "B": float(-b)}


def _vogel(kelvin: Array, values: Array) -> dict[str, float] | None:
    """Fit ln y = ln A + B/(T - T0): linear in ln A and B, so only T0 is searched, by ever finer grids."""
    low, high = 0.0, float(kelvin[0]) - 5.0
    ln = np.log(values)

    def error(zero: float) -> float:
        x = 1.0 / (kelvin - zero)
        return float(np.sum((np.polynomial.polynomial.polyval(x, _line(x, ln)) - ln) ** 2))

    for _ in range(12):
        grid = np.linspace(low, high, 25)
        best = int(np.argmin([error(float(zero)) for zero in grid]))
        low, high = float(grid[max(best - 1, 0)]), float(grid[min(best + 1, 24)])
    zero = 0.5 * (low + high)
    a, b = _line(1.0 / (kelvin - zero), ln)
    if b <= 0.0 or zero < 1.0:
        return None
    return {"A": float(np.exp(a)), "B": float(b), "T0": zero}


