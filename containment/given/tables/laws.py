"""Laws of a property over temperature: name, coefficients, formula.

A law takes the temperature in K and its coefficients and returns the property in the unit that the table states.
t stands for the temperature in degC, T for K.
"""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.constants import ABSOLUTE_ZERO_CELSIUS

__all__ = ["LAWS", "Law", "shape_preserving"]

Array = npt.NDArray[np.float64]
Coefficients = Mapping[str, float]


@dataclass(frozen=True, slots=True)
class Law:
    """A named law.

    Parameters
    ----------
    formula : str
        What it computes, for the reader.
    required : tuple of str
        Coefficients that must be given; ``()`` where the law takes any number of them.
    optional : tuple of str
        Coefficients that are 0 where they are not given.
    function : callable
        Value at temperatures in K, in the unit that the table states.
    """

    formula: str
    required: tuple[str, ...]
    optional: tuple[str, ...]
    function: Callable[[Array, Coefficients], Any]


def _polynomial(kelvin: Array, c: Coefficients) -> Any:
    t = kelvin + ABSOLUTE_ZERO_CELSIUS
    result: Any = 0.0
    for i in range(5, -1, -1):
        result = result * t + c.get(f"c{i}", 0.0)
    return result


def _rational(kelvin: Array, c: Coefficients) -> Any:
    t = kelvin + ABSOLUTE_ZERO_CELSIUS
    return _polynomial(kelvin, c) / (1.0 + t * (c["d1"] + t * c.get("d2", 0.0)))


def _inverse_powers(kelvin: Array, c: Coefficients) -> Any:
    x = kelvin / 300.0
    return sum(c[f"a{i}"] * x ** c[f"n{i}"] for i in range(1, 5) if f"a{i}" in c)


def _walther(kelvin: Array, c: Coefficients) -> Any:
    return 10.0 ** (10.0 ** (c["A"] - c["B"] * np.log10(kelvin))) - 0.7


def _ppds9(kelvin: Array, c: Coefficients) -> Any:
    ratio = (c["C"] - kelvin) / (kelvin - c["D"])
    third = np.cbrt(ratio)
    return c["E"] * np.exp(third * (c["A"] + c["B"] * ratio))


def _critical_density(kelvin: Array, c: Coefficients) -> Any:
    x = 1.0 - kelvin / c["Tc"]
    return c["rc"] + c["A"] * x**0.35 + c["B"] * x ** (2.0 / 3.0) + c["C"] * x + c["D"] * x ** (4.0 / 3.0)


def _wagner(kelvin: Array, c: Coefficients) -> Any:
    x = 1.0 - kelvin / c["Tc"]
    return c["Pc"] * np.exp((c["A"] * x + c["B"] * x**1.5 + c["C"] * x**2.5 + c["D"] * x**5) * c["Tc"] / kelvin)


def _critical_tension(kelvin: Array, c: Coefficients) -> Any:
    x = 1.0 - kelvin / c["Tc"]
    return c["A"] * x ** c["n"] * (1.0 + c.get("b", 0.0) * x)


def _glycerol_water_viscosity(kelvin: Array, c: Coefficients) -> Any:
    t, w = kelvin + ABSOLUTE_ZERO_CELSIUS, c["w"]
    water = 1.790 * np.exp((-1230.0 - t) * t / (36100.0 + 360.0 * t))
    glycerol = 12100.0 * np.exp((-1233.0 + t) * t / (9900.0 + 70.0 * t))
    a = 0.705 - 0.0017 * t
    b = (4.9 + 0.036 * t) * a**2.5
    share = 1.0 - w + a * b * w * (1.0 - w) / (a * w + b * (1.0 - w))
    return water**share * glycerol ** (1.0 - share)


def _sucrose_viscosity(kelvin: Array, c: Coefficients) -> Any:
    t = kelvin + ABSOLUTE_ZERO_CELSIUS
    x = 100.0 * c["w"] / (1900.0 - 1800.0 * c["w"])
    return 10.0 ** (22.46 * x - 0.114 + (30.0 - t) / (91.0 + t) * (1.1 + 43.1 * x**1.25))


def shape_preserving(x: Array, y: Array, at: Any) -> Array:
    """Return piecewise cubic Hermite values that keep the points' monotone shape.

    Parameters
    ----------
    x, y : array of shape (n,)
        Points, x rising, n at least 2.
    at : array_like
        Where the values are wanted, inside the points.

    Returns
    -------
    array of the shape of `at`

    References
    ----------
    F. N. Fritsch, J. Butland, SIAM J. Sci. Stat. Comput. 5 (1984) 300-304 (from memory).

    Examples
    --------
    >>> float(shape_preserving(np.array([0.0, 1.0, 2.0]), np.array([0.0, 1.0, 4.0]), 1.0))
    1.0
    """
    h, slope = np.diff(x), np.diff(y) / np.diff(x)
    d = np.zeros_like(y)
    if len(x) == 2:
        d[:] = slope[0]
    else:
        same = slope[:-1] * slope[1:] > 0.0
        w1, w2 = 2.0 * h[1:] + h[:-1], h[1:] + 2.0 * h[:-1]
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            d[1:-1] = np.where(same, (w1 + w2) / (w1 / slope[:-1] + w2 / slope[1:]), 0.0)
        d[0] = _end_slope(h[0], h[1], slope[0], slope[1])
        d[-1] = _end_slope(h[-1], h[-2], slope[-1], slope[-2])
    at = np.asarray(at, dtype=np.float64)
    i = np.clip(np.searchsorted(x, at, side="right") - 1, 0, len(x) - 2)
    s = (at - x[i]) / h[i]
    value: Array = (
        y[i] * (1.0 + 2.0 * s) * (1.0 - s) ** 2
        + h[i] * d[i] * s * (1.0 - s) ** 2
        + y[i + 1] * s**2 * (3.0 - 2.0 * s)
        + h[i] * d[i + 1] * s**2 * (s - 1.0)
    )
    return value


def _end_slope(h0: float, h1: float, s0: float, s1: float) -> float:
    d = ((2.0 * h0 + h1) * s0 - h0 * s1) / (h0 + h1)
    if d * s0 <= 0.0:
        return 0.0
    return 3.0 * s0 if s0 * s1 <= 0.0 and abs(d) > 3.0 * abs(s0) else d


def _points(c: Coefficients) -> tuple[Array, Array]:
    pairs = sorted((float(t) - ABSOLUTE_ZERO_CELSIUS, value) for t, value in c.items())
    return np.array([p[0] for p in pairs]), np.array([p[1] for p in pairs])


def _tabulated(kelvin: Array, c: Coefficients) -> Any:
    return shape_preserving(*_points(c), kelvin)


def _tabulated_log(kelvin: Array, c: Coefficients) -> Any:
    x, y = _points(c)
    return np.exp(shape_preserving(x, np.log(y), kelvin))


_TEN: Final = math.log(10.0)

LAWS: Final[dict[str, Law]] = {
    "constant": Law("c", ("c",), (), lambda T, c: c["c"] + 0.0 * T),
    "polynomial": Law("c0 + c1 t + ... + c5 t^5", ("c0",), ("c1", "c2", "c3", "c4", "c5"), _polynomial),
    "rational": Law(
        "(c0 + ... + c5 t^5) / (1 + d1 t + d2 t^2)", ("c0", "d1"), ("c1", "c2", "c3", "c4", "c5", "d2"), _rational
    ),
    "andrade": Law("A exp(B/T)", ("A", "B"), (), lambda T, c: c["A"] * np.exp(c["B"] / T)),
    "vogel": Law("A exp(B/(T - T0))", ("A", "B", "T0"), (), lambda T, c: c["A"] * np.exp(c["B"] / (T - c["T0"]))),
    "walther": Law("log10 log10(v + 0.7) = A - B log10 T, v in mm2/s", ("A", "B"), (), _walther),
    "ln_series": Law(
        "exp(A + B/T + C ln T + D T^E)", ("A", "B"), ("C", "D", "E"),
        lambda T, c: np.exp(c["A"] + c["B"] / T + c.get("C", 0.0) * np.log(T) + c.get("D", 0.0) * T ** c.get("E", 0.0)),
    ),
    "ppds9": Law("E exp(A x^(1/3) + B x^(4/3)), x = (C - T)/(T - D)", ("A", "B", "C", "D", "E"), (), _ppds9),
    "inverse_powers": Law(
        "sum of a_i (T/300 K)^n_i", ("a1", "n1"), ("a2", "n2", "a3", "n3", "a4", "n4"), _inverse_powers
    ),
    "critical_density": Law(
        "rc + A x^0.35 + B x^(2/3) + C x + D x^(4/3), x = 1 - T/Tc", ("rc", "Tc", "A", "B", "C", "D"), (),
        _critical_density,
    ),
    "critical_tension": Law("A x^n (1 + b x), x = 1 - T/Tc", ("A", "n", "Tc"), ("b",), _critical_tension),
    "wagner": Law(
        "Pc exp((A x + B x^1.5 + C x^2.5 + D x^5) Tc/T), x = 1 - T/Tc", ("A", "B", "C", "D", "Tc", "Pc"), (), _wagner
    ),
    "antoine": Law(
        "10^(A - B/(T + C))", ("A", "B", "C"), (), lambda T, c: np.exp(_TEN * (c["A"] - c["B"] / (T + c["C"])))
    ),
    "glycerol_water_viscosity": Law("Cheng 2008, mass fraction w of glycerol, mPa s", ("w",), (), _glycerol_water_viscosity),
    "sucrose_viscosity": Law("Genotelle 1978, mass fraction w of sucrose, mPa s", ("w",), (), _sucrose_viscosity),
    "tabulated": Law("shape-preserving cubic through t:value points", (), (), _tabulated),
    "tabulated_log": Law("shape-preserving cubic through the logarithms of t:value points", (), (), _tabulated_log),
}  # fmt: skip
"""The laws by name."""
