"""The border where units are checked: text or pint quantities in, SI floats out.

The registry holds only the units that the trade uses with this tool, so that building it costs milliseconds.
"""

import functools
import math
import re
from typing import TYPE_CHECKING, Any, Final

from containment.constants import ABSOLUTE_ZERO_CELSIUS, STANDARD_GRAVITY
from containment.errors import InputError

if TYPE_CHECKING:
    import pint

__all__ = ["KINDS", "angular_frequency", "parse_quantity", "registry", "si_value"]

_DEFINITIONS: Final = f"""\
pico- = 1e-12 = p-
nano- = 1e-9 = n-
micro- = 1e-6 = µ- = μ- = u-
milli- = 1e-3 = m-
centi- = 1e-2 = c-
deci- = 1e-1 = d-
hecto- = 1e2 = h-
kilo- = 1e3 = k-
mega- = 1e6 = M-
giga- = 1e9 = G-
meter = [length] = m = metre
second = [time] = s = sec
gram = [mass] = g
kelvin = [temperature]; offset: 0 = K
mole = [substance] = mol
radian = [] = rad
degree = 0.017453292519943295 * radian = deg
percent = 0.01 = pct
minute = 60 * second = min
hour = 60 * minute = h = hr
day = 24 * hour = d
inch = 0.0254 * meter = in
foot = 0.3048 * meter = ft
liter = 1e-3 * meter ** 3 = L = l = litre
hertz = 1 / second = Hz
newton = kilogram * meter / second ** 2 = N
pascal = newton / meter ** 2 = Pa
bar = 1e5 * pascal
atmosphere = 101325 * pascal = atm
pound_force_per_square_inch = 6894.757293168361 * pascal = psi
poise = 0.1 * pascal * second = P
stokes = 1e-4 * meter ** 2 / second = St
joule = newton * meter = J
watt = joule / second = W
dyne = 1e-5 * newton = dyn
standard_gravity = {STANDARD_GRAVITY!r} * meter / second ** 2 = g_n = g_0
tonne = 1000 * kilogram = t
pound = 0.45359237 * kilogram = lb
pound_force = 4.4482216152605 * newton = lbf
degree_Celsius = kelvin; offset: {-ABSOLUTE_ZERO_CELSIUS!r} = °C = celsius = degC
degree_Fahrenheit = 5 / 9 * kelvin; offset: 255.3722222222222 = °F = fahrenheit = degF
"""

KINDS: Final[dict[str, tuple[str, str]]] = {
    # kind: (SI unit as pint reads it, example shown in messages)
    "length": ("m", "70mm"),
    "time": ("s", "60s"),
    "temperature": ("K", "25degC"),
    "density": ("kg/m**3", "1261kg/m**3"),
    "viscosity": ("Pa*s", "1.41Pa*s"),
    "kinematic viscosity": ("m**2/s", "1000mm**2/s"),
    "surface tension": ("N/m", "63.4mN/m"),
    "frequency": ("Hz", "50Hz"),
    "acceleration": ("m/s**2", "25g_n"),
    "velocity": ("m/s", "0.8m/s"),
    "force": ("N", "500N"),
    "mass": ("kg", "12kg"),
    "pressure": ("Pa", "101.3kPa"),
    "angle": ("rad", "2deg"),
    "ratio": ("dimensionless", "0.3"),
    "growth rate": ("1/s", "0.3/s"),
    "elastic modulus of a film": ("N/m", "20mN/m"),
}
"""Kinds of quantity: SI unit and an example for messages."""

_NUMBER: Final = re.compile(r"\s*([+-]?(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE][+-]?[0-9]+)?)\s*(.*?)\s*", re.DOTALL)
_TURNS: Final = {"rpm": 1.0 / 60.0, "r/min": 1.0 / 60.0, "rev/min": 1.0 / 60.0, "1/min": 1.0 / 60.0, "rps": 1.0}


@functools.cache
def registry() -> "pint.UnitRegistry[float]":
    """Return the registry of the units in use (built once)."""
    import pint

    made: pint.UnitRegistry[float] = pint.UnitRegistry(None, cache_folder=None)
    made.load_definitions(_DEFINITIONS.splitlines())
    return made


def angular_frequency(frequency: float) -> float:
    """Return 2 pi times a frequency in Hz, in rad/s: the one place where turns become radians."""
    return 2.0 * math.pi * frequency


def _shown(text: object) -> str:
    """Return a value as one printable line of bounded length."""
    shown = repr(text) if isinstance(text, str) else str(text)
    shown = "".join(c if c.isprintable() else "?" for c in shown)
    return shown if len(shown) <= 60 else shown[:57] + "..."


def _expected(kind: str) -> str:
    unit, example = KINDS[kind]
    if kind == "ratio":
        return "a plain number such as 0.3"
    article = "an" if kind[0] in "aeiou" else "a"
    return f"{article} {kind} with its unit, such as {example}"


def parse_quantity(text: str, kind: str, name: str) -> float:
    """Return the SI value of a quantity given as text with a unit.

    Parameters
    ----------
    text : str
        Number and unit, for example ``70mm`` or ``25 degC``.
    kind : str
        One of `KINDS`.
    name : str
        Name of the input, for messages.

    Returns
    -------
    float
        Value in the SI unit of the kind.

    Raises
    ------
    InputError
        No number, no unit, an unknown unit, a unit of another kind, or a value that is not finite.

    Examples
    --------
    >>> parse_quantity("70 mm", "length", "--cylinder")
    0.07
    >>> parse_quantity("3000 rpm", "frequency", "--frequency")
    50.0
    """
    match = _NUMBER.fullmatch(text)
    decimal_comma = re.match(r"\s*[+-]?\d*,\d", text)
    if match is None or decimal_comma:
        hint = " (write a decimal point, not a comma)" if decimal_comma else ""
        raise InputError(f"{name}: {_shown(text)} is not a number with a unit{hint}; expected {_expected(kind)}")
    number, unit = float(match.group(1)), match.group(2)
    if not math.isfinite(number):
        raise InputError(f"{name}: {_shown(text)} is too large to be a number; expected {_expected(kind)}")
    if not unit:
        if kind == "ratio":
            return number
        raise InputError(f"{name}: {_shown(text)} has no unit; expected {_expected(kind)}")
    if kind == "ratio" and unit == "%":
        return number / 100.0
    if kind == "frequency":
        if unit.replace(" ", "") in _TURNS:
            return number * _TURNS[unit.replace(" ", "")]
        if "rad" in unit or "deg" in unit:
            raise InputError(f"{name}: {_shown(text)} is an angular frequency; expected {_expected(kind)}")
    if kind == "acceleration" and unit in {"g", "G", "gn", "gee"}:
        raise InputError(
            f"{name}: {_shown(text)}: 'g' is the gram; for standard gravity write g_n, such as {match.group(1)}g_n"
        )
    return _converted(number, _tidied(unit), kind, name, text)


def _tidied(unit: str) -> str:
    """Accept the usual ways of writing products and powers: ``mPa.s``, ``mPa s``, ``mm2/s``, ``mm^2/s``, ``kg/m³``."""
    unit = f"1{unit}" if unit.startswith("/") else unit
    unit = unit.replace("·", "*").replace("²", "**2").replace("³", "**3").replace("^", "**")
    unit = re.sub(r"(?<=[A-Za-z])\.(?=[A-Za-z])", "*", unit)
    unit = re.sub(r"(?<=[A-Za-z])\s+(?=[A-Za-z])", "*", unit)
    return re.sub(r"(?<=[A-Za-z])(?<!_)([23])(?![0-9])", r"**\1", unit)


def _converted(number: float, unit: str, kind: str, name: str, given: object) -> float:
    import pint

    try:
        value = registry().Quantity(number, unit)
        result = float(value.to(KINDS[kind][0]).magnitude)
    except pint.UndefinedUnitError as error:
        raise InputError(f"{name}: {_shown(given)} has an unknown unit; expected {_expected(kind)}") from error
    except pint.DimensionalityError as error:
        raise InputError(f"{name}: {_shown(given)} is not a {kind}; expected {_expected(kind)}") from error
    except Exception as error:  # pint's unit parser raises tokenizer, syntax, type and assertion errors of many kinds
        raise InputError(f"{name}: {_shown(given)} is not a unit that can be read; expected {_expected(kind)}") from error
    if not math.isfinite(result):
        raise InputError(f"{name}: {_shown(given)} is not finite; expected {_expected(kind)}")
    return result


def _from_quantity(value: Any, kind: str, name: str) -> float:
    """Convert a pint quantity by its own registry, which knows units that ours does not."""
    if kind == "frequency" and any(u in str(value.units) for u in ("radian", "turn", "revolution", "rpm", "degree")):
        raise InputError(f"{name}: {_shown(value)} is an angular frequency; expected {_expected(kind)}")
    try:
        return float(value.to(KINDS[kind][0]).magnitude)
    except Exception as error:  # errors of the foreign registry, and array magnitudes
        raise InputError(f"{name}: {_shown(value)} is not a {kind}; expected {_expected(kind)}") from error


def si_value(
    value: Any,
    kind: str,
    name: str,
    *,
    above: float | None = None,
    least: float | None = None,
    most: float | None = None,
) -> float:
    """Return the SI value of text with a unit, a pint quantity, or a plain SI number.

    Parameters
    ----------
    value : str or pint.Quantity or float
        The input; a plain number is taken in the SI unit of the kind.
    kind : str
        One of `KINDS`.
    name : str
        Name of the input, for messages.
    above, least, most : float, optional
        The value must be greater than `above`, not less than `least`, not more than `most`; SI.

    Returns
    -------
    float
        SI value.

    Raises
    ------
    InputError
        The input cannot be read, is not finite or is out of bounds.

    Examples
    --------
    >>> si_value("30 mm", "length", "depth", above=0.0)
    0.03
    >>> si_value(0.03, "length", "depth", above=0.0)
    0.03
    """
    if isinstance(value, str):
        result = parse_quantity(value, kind, name)
    elif hasattr(value, "magnitude") and hasattr(value, "units"):
        result = _from_quantity(value, kind, name)
    else:
        try:
            if isinstance(value, bool):
                raise TypeError
            result = float(value)
        except (TypeError, ValueError, OverflowError) as error:
            raise InputError(f"{name}: {_shown(value)} is not a quantity; expected {_expected(kind)}") from error
    unit = KINDS[kind][0]
    unit = "" if unit == "dimensionless" else f" {unit}"
    if not math.isfinite(result):
        raise InputError(f"{name}: {_shown(value)} is not finite; expected {_expected(kind)}")
    if above is not None and not result > above:
        raise InputError(f"{name}: {_shown(value)} is not allowed; it must be greater than {above:g}{unit}")
    if least is not None and result < least:
        raise InputError(f"{name}: {_shown(value)} is not allowed; it must be at least {least:g}{unit}")
    if most is not None and result > most:
        raise InputError(f"{name}: {_shown(value)} is not allowed; it must be at most {most:g}{unit}")
    return result
