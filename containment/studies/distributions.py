"""Distributions of uncertain inputs, drawn by their quantile functions."""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.errors import InputError
from containment.studies.inputs import INPUTS, input_value

__all__ = ["DISTRIBUTIONS", "Distribution", "distribution"]

Real = npt.NDArray[np.float64]

DISTRIBUTIONS: Final = {
    # name: (parameters that are needed, parameters that may be given)
    "normal": (("mean", "sd"), ("low", "high")),
    "lognormal": (("median", "factor"), ("low", "high")),
    "uniform": (("low", "high"), ()),
    "triangular": (("low", "mode", "high"), ()),
}

_FARTHEST: Final = 6.0
"""Standard deviations within which an untruncated distribution must stay inside the bounds of its input."""


@dataclass(frozen=True, slots=True)
class Distribution:
    """The distribution of one input, SI.

    Attributes
    ----------
    kind : str
        A key of `DISTRIBUTIONS`.
    values : dict
        Its parameters: ``mean`` and ``sd``; ``median`` and ``factor``, the ratio of the 84 % point to the median (a
        plain number); ``low``, ``mode``, ``high``. ``low`` and ``high`` truncate a normal or a lognormal one.
    """

    kind: str
    values: Mapping[str, float]

    def quantile(self, probability: npt.ArrayLike) -> Real:
        """Return the value below which the input lies with a probability between 0 and 1.

        Notes
        -----
        A truncated distribution is the distribution under the condition that the value lies inside: probabilities are
        spread evenly between those of its ends.

        Examples
        --------
        >>> Distribution("triangular", {"low": 0.0, "mode": 1.0, "high": 2.0}).quantile([0.0, 0.5, 1.0]).tolist()
        [0.0, 1.0, 2.0]
        """
        p = np.asarray(probability, np.float64)
        v = self.values
        if self.kind == "uniform":
            return np.asarray(v["low"] + p * (v["high"] - v["low"]))
        if self.kind == "triangular":
            low, mode, high = v["low"], v["mode"], v["high"]
            rising = low + np.sqrt(p * (high - low) * (mode - low))
            falling = high - np.sqrt((1.0 - p) * (high - low) * (high - mode))
            return np.where(p * (high - low) <= mode - low, rising, falling)
        from scipy.special import ndtr, ndtri

        log = self.kind == "lognormal"
        centre = math.log(v["median"]) if log else v["mean"]
        spread = math.log(v["factor"]) if log else v["sd"]
        ends = [
            None if name not in v else ((math.log(v[name]) if log else v[name]) - centre) / spread for name in ("low", "high")
        ]
        below = 0.0 if ends[0] is None else float(ndtr(ends[0]))
        above = 0.0 if ends[1] is None else float(ndtr(-ends[1]))
        # from whichever tail is nearer, so that neither loses digits
        left = below + p * (1.0 - below - above)
        right = above + (1.0 - p) * (1.0 - below - above)
        z = np.where(left <= 0.5, ndtri(left), -ndtri(right))
        value = centre + spread * z
        value = np.exp(value) if log else value
        inside: Real = np.clip(value, v.get("low", -math.inf), v.get("high", math.inf))
        return inside

    def to_dict(self) -> dict[str, Any]:
        """Return the distribution as plain JSON types, SI."""
        return {"distribution": self.kind, **dict(sorted(self.values.items()))}


def distribution(name: str, given: Any, *, bare_numbers: bool) -> Distribution:
    """Return the distribution of an input from what a plan says.

    Parameters
    ----------
    name : str
        The input, a numeric one.
    given : mapping
        ``distribution`` and its parameters; see `DISTRIBUTIONS`.
    bare_numbers : bool
        Whether plain numbers count as SI.

    Raises
    ------
    InputError
        An unknown distribution, parameters that are missing, unknown or out of order, or values beyond the bounds of the
        input.

    Examples
    --------
    >>> given = {"distribution": "lognormal", "median": "10 Pa*s", "factor": 1.2}
    >>> distribution("viscosity", given, bare_numbers=False).values["median"]
    10.0
    """
    if not isinstance(given, Mapping) or given.get("distribution") not in DISTRIBUTIONS:
        raise InputError(f"{name}: expected a table with distribution = one of {', '.join(DISTRIBUTIONS)}")
    kind = str(given["distribution"])
    needed, optional = DISTRIBUTIONS[kind]
    unknown = [key for key in given if key != "distribution" and key not in needed + optional]
    missing = [key for key in needed if key not in given]
    if unknown or missing:
        said = f"{', '.join(unknown)} not known" if unknown else f"{', '.join(missing)} missing"
        extra = f" and, to truncate it, {', '.join(optional)}" if optional else ""
        raise InputError(f"{name}: {said}; a {kind} distribution takes {', '.join(needed)}{extra}")
    values: dict[str, float] = {}
    for key, value in given.items():
        if key == "factor":
            values[key] = _plain(value, f"{name} factor")
        elif key == "sd":
            values[key] = _spread(name, value, bare_numbers=bare_numbers)
        elif key != "distribution":
            try:
                values[key] = float(input_value(name, value, bare_numbers=bare_numbers))
            except InputError as error:
                raise InputError(f"{key} of {error}") from error
    _check_order(name, kind, values)
    return Distribution(kind, values)


def _plain(value: Any, name: str) -> float:
    if isinstance(value, bool) or not isinstance(value, int | float) or not 1.0 < value <= 1e3:
        raise InputError(f"{name}: {str(value)[:40]!r} is not allowed; expected a plain number above 1, at most 1000")
    return float(value)


def _spread(name: str, value: Any, *, bare_numbers: bool) -> float:
    """Read a standard deviation: a difference, which for a temperature must be in kelvin."""
    kind = INPUTS[name].kind
    if kind == "temperature" and isinstance(value, str) and not value.strip().endswith("K"):
        raise InputError(f"sd of {name}: {value[:40]!r} is not a difference of temperatures; expected kelvin, such as 2K")
    from containment.given.quantities import parse_quantity, si_value

    if not bare_numbers and not isinstance(value, str) and kind != "ratio":
        parse_quantity(str(value), kind, f"sd of {name}")
    return si_value(value, kind, f"sd of {name}", above=0.0)


def _check_order(name: str, kind: str, values: Mapping[str, float]) -> None:
    ordered = [values[key] for key in ("low", "mode", "high") if key in values]
    if ordered != sorted(ordered) or ("low" in values and "high" in values and not values["low"] < values["high"]):
        raise InputError(f"{name}: low, mode and high of the {kind} distribution do not rise: {ordered}")
    if kind in ("uniform", "triangular"):
        return
    low, high = INPUTS[name].bounds
    if kind == "normal":
        reach = _FARTHEST * values["sd"]
        lowest, highest = values["mean"] - reach, values["mean"] + reach
        inside = values.get("low", -math.inf) < values["mean"] < values.get("high", math.inf)
    else:
        if not values["median"] > 0.0:
            raise InputError(f"{name}: a lognormal distribution needs a median above 0")
        if not values.get("low", 1.0) > 0.0:
            raise InputError(f"{name}: low of a lognormal distribution must be above 0")
        reach = values["factor"] ** _FARTHEST
        lowest, highest = values["median"] / reach, values["median"] * reach
        inside = values.get("low", 0.0) < values["median"] < values.get("high", math.inf)
    if not inside:
        raise InputError(f"{name}: low and high must lie on either side of the centre of the {kind} distribution")
    for end, reached, bound in (("low", lowest < low, low), ("high", highest > high, high)):
        if reached and end not in values:
            raise InputError(
                f"{name}: the {kind} distribution reaches past {bound:g} (SI), which is not allowed; truncate it: give {end}"
            )
