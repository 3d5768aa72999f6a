"""Units of a table: the few that built-in tables use are known here, all others go through pint at the border."""

import re
from typing import Final

from containment.constants import ABSOLUTE_ZERO_CELSIUS
from containment.errors import InputError
from containment.given.quantities import parse_quantity

__all__ = ["factor_of", "number_of", "ratio_of", "temperature_of"]

_KNOWN: Final = {
    # (kind, unit): factor to SI; spares the built-in tables the import of pint
    ("density", "kg/m**3"): 1.0,
    ("viscosity", "Pa*s"): 1.0,
    ("viscosity", "mPa*s"): 1e-3,
    ("kinematic viscosity", "mm**2/s"): 1e-6,
    ("surface tension", "N/m"): 1.0,
    ("surface tension", "mN/m"): 1e-3,
    ("pressure", "Pa"): 1.0,
    ("pressure", "kPa"): 1e3,
    ("length", "m"): 1.0,
    ("length", "mm"): 1e-3,
    ("length", "um"): 1e-6,
    ("angle", "deg"): 0.017453292519943295,
    ("ratio", ""): 1.0,
    ("velocity", "m/s"): 1.0,
    ("acceleration", "g_n"): 9.80665,
    ("acceleration", "m/s**2"): 1.0,
    ("force", "N"): 1.0,
    ("force", "kN"): 1e3,
    ("mass", "kg"): 1.0,
    ("mass", "g"): 1e-3,
    ("frequency", "Hz"): 1.0,
}
_NUMBER: Final = re.compile(r"\s*([+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?)\s*")
_QUANTITY: Final = re.compile(_NUMBER.pattern + r"(.*?)\s*")


def number_of(text: str) -> float:
    """Return a plain decimal number.

    Raises
    ------
    InputError
        The text is not a finite decimal number.

    Examples
    --------
    >>> number_of(" -1.5e-3 ")
    -0.0015
    """
    match = _NUMBER.fullmatch(text)
    value = float(match.group(1)) if match else float("inf")
    if not abs(value) < 1e300:
        raise InputError(f"'{text[:40]}' is not a number; expected one such as 1.5 or 2e-3")
    return value


def factor_of(unit: str, kind: str) -> float:
    """Return what a unit of a kind (one of `quantities.KINDS`) is worth in SI.

    Raises
    ------
    InputError
        The unit is missing, unknown, or of another kind.

    Examples
    --------
    >>> factor_of("mPa*s", "viscosity"), factor_of("cP", "viscosity")
    (0.001, 0.001)
    """
    known = _KNOWN.get((kind, unit))
    if known is not None:
        return known
    try:
        return parse_quantity(f"1 {unit}", kind, "unit")
    except InputError as error:
        raise InputError(str(error).removeprefix("unit: ").replace(f"'1 {unit}'", f"'{unit}'", 1)) from error


def temperature_of(text: str) -> float:
    """Return a temperature with its unit in K.

    Examples
    --------
    >>> temperature_of("20 degC")
    293.15
    """
    match = _QUANTITY.fullmatch(text)
    if match and match.group(2) == "degC":
        value = float(match.group(1)) - ABSOLUTE_ZERO_CELSIUS
    else:
        value = _converted(text, "temperature")
    if not 0.0 < value <= 5000.0:
        raise InputError(f"'{text[:40]}' is not a temperature between absolute zero and 5000 K")
    return value


def ratio_of(text: str) -> float:
    """Return a ratio, plain or in per cent.

    Examples
    --------
    >>> ratio_of("2 %"), ratio_of("0.02")
    (0.02, 0.02)
    """
    match = _QUANTITY.fullmatch(text)
    if match and match.group(2) in ("", "%"):
        return float(match.group(1)) * (0.01 if match.group(2) else 1.0)
    return _converted(text, "ratio")


def _converted(text: str, kind: str) -> float:
    try:
        return parse_quantity(text, kind, kind)
    except InputError as error:
        raise InputError(str(error).removeprefix(f"{kind}: ")) from error
