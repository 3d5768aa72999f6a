"""Rheology of a liquid that is not Newtonian, as text: a model and its parameters with units."""

import re
from typing import Any, Final

from containment.errors import InputError
from containment.given.quantities import parse_quantity

__all__ = ["LINEAR_MODELS", "MODELS", "SHEAR_MODELS", "parse_rheology"]

LINEAR_MODELS: Final = {
    # linearly viscoelastic: a complex viscosity
    "maxwell": ("viscosity", "relaxation"),
    "jeffreys": ("viscosity", "relaxation", "retardation"),
    "kelvin-voigt": ("viscosity", "modulus"),
}
SHEAR_MODELS: Final = {
    # a viscosity that depends on the shear rate
    "carreau": ("zero_shear", "infinite_shear", "time", "index"),
    "cross": ("zero_shear", "infinite_shear", "time", "exponent"),
    "power-law": ("consistency", "index"),
    "herschel-bulkley": ("yield_stress", "consistency", "index"),
}
MODELS: Final = {**LINEAR_MODELS, **SHEAR_MODELS}

_KINDS: Final = {
    "viscosity": "viscosity",
    "zero_shear": "viscosity",
    "infinite_shear": "viscosity",
    "relaxation": "time",
    "retardation": "time",
    "time": "time",
    "modulus": "pressure",
    "yield_stress": "pressure",
    "consistency": "ratio",  # Pa s^n: a plain number
    "index": "ratio",
    "exponent": "ratio",
}


def parse_rheology(text: str, name: str) -> dict[str, Any]:
    """Return a model and its parameters, SI, from text.

    Parameters
    ----------
    text : str
        ``MODEL:key=value,key=value``; values with units, the consistency in Pa s^n as a plain number.
    name : str
        Name of the input, for messages.

    Raises
    ------
    InputError
        An unknown model, or a parameter that is missing, unknown or cannot be read.

    Examples
    --------
    >>> parse_rheology("jeffreys: viscosity=10Pa*s, relaxation=10ms, retardation=2ms", "--rheology")["relaxation"]
    0.01
    """
    model, _, rest = text.partition(":")
    model = model.strip().lower().replace("_", "-")
    if model not in MODELS:
        raise InputError(f"{name}: {model[:40]!r} is not a model; expected one of {', '.join(MODELS)}")
    wanted = MODELS[model]
    found: dict[str, Any] = {"model": model}
    for part in filter(None, (piece.strip() for piece in rest.split(","))):
        key, equals, value = (piece.strip() for piece in part.partition("="))
        key = re.sub(r"[\s-]+", "_", key)
        if key not in wanted or not equals or key in found:
            raise InputError(f"{name}: {part[:40]!r} does not fit; {model} takes {', '.join(wanted)}, each once")
        found[key] = parse_quantity(value, _KINDS[key], f"{name} {key}")
        if found[key] < 0.0:
            raise InputError(f"{name} {key}: {value[:40]!r} is not allowed; it must be at least 0")
    missing = [key for key in wanted if key not in found]
    if missing:
        raise InputError(f"{name}: {', '.join(missing)} missing; {model} takes {', '.join(wanted)}")
    return found
