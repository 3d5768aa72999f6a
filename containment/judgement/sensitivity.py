"""How far the margin at a drive point moves when one input at a time is a little off."""

import dataclasses
import math
from dataclasses import dataclass
from typing import Any, Final

import numpy as np

from containment.errors import ContainmentError
from containment.given.vessel import Annulus, Box, Cylinder, Slot
from containment.judgement.case import Case
from containment.judgement.rheology import depends_on_shear

__all__ = ["Sensitivity", "margin_at", "sensitivities"]

_CHANGE: Final = 0.1
"""Relative change of an input whose uncertainty is not stated."""


@dataclass(frozen=True, slots=True, kw_only=True)
class Sensitivity:
    """Margin with one input low and high, all else unchanged.

    Attributes
    ----------
    name : str
        The input, in trade terms.
    change : float
        Relative change either way.
    stated : bool
        Whether the change is the stated uncertainty rather than the tenth that is taken for all others.
    low, high : float
        Margin with the input lowered and raised: smaller of the ratios to the two edges, below 1 outside them.
    """

    name: str
    change: float
    stated: bool
    low: float
    high: float

    @property
    def least(self) -> float:
        """The smaller of the two margins."""
        return min(self.low, self.high)


def margin_at(case: Case, *, frequency: float, acceleration: float) -> float:
    """Return the smaller of the ratios of a drive point (Hz, peak m/s^2) to the two edges of the ideal layer.

    Below 1 the point lies outside; infinite where neither edge is met within the amplitudes searched.
    """
    edges = case.edges(np.array([frequency]))
    lower, upper = float(edges.lower[0]), float(edges.upper[0])
    below = math.inf if lower == 0.0 else acceleration / lower
    return min(below, upper / acceleration)


def sensitivities(case: Case, *, frequency: float, acceleration: float) -> tuple[Sensitivity, ...]:
    """Return the sensitivities of the margin at a drive point, the smallest margin first.

    Each input is changed alone: liquid properties by their stated uncertainty, all else by a tenth. The frequency is
    changed at equal acceleration. Empty where edges are not computed in an instant (pinned box, viscosity that depends on
    the shear rate).

    Examples
    --------
    >>> from containment.given.liquid import Liquid
    >>> from containment.given.vessel import Cylinder
    >>> from containment.judgement.case import Case, allowance
    >>> syrup = Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
    >>> case = Case(syrup, Cylinder(diameter=0.07, depth=0.03), allowance(depth=0.03))
    >>> found = sensitivities(case, frequency=50.0, acceleration=400.0)
    >>> [row.name for row in found if row.name in ("acceleration", "frequency")]
    ['acceleration', 'frequency']
    """
    if depends_on_shear(case.liquid) or (isinstance(case.vessel, Box) and case.vessel.contact_line == "pinned"):
        return ()
    found = []
    for name in ("viscosity", "density", "surface_tension"):
        if name == "surface_tension" and case.surroundings.below is not None:
            continue  # the tension between the two liquids counts there
        if name == "viscosity" and case.liquid.rheology is not None:
            continue  # its model counts there
        change = case.liquid.uncertainty.get(name, 0.0) or _CHANGE
        stated = bool(case.liquid.uncertainty.get(name, 0.0))
        found.append(_changed(case, name.replace("_", " "), "liquid", (name,), change, stated, frequency, acceleration))
    widths: dict[type, tuple[str, tuple[str, ...]]] = {
        Cylinder: ("diameter", ("diameter",)), Box: ("width and length", ("width", "length")),
        Annulus: ("both diameters", ("inner_diameter", "outer_diameter")), Slot: ("width", ("width",)),
    }  # fmt: skip
    lengths = [("depth", ("depth",)), *([widths[type(case.vessel)]] if type(case.vessel) in widths else [])]
    for name, fields in lengths:
        found.append(_changed(case, name, "vessel", fields, _CHANGE, False, frequency, acceleration))
    for name in ("frequency", "acceleration"):
        at = [{"frequency": frequency, "acceleration": acceleration} for _ in (0, 1)]
        for values, sign in zip(at, (-1.0, 1.0), strict=True):
            values[name] *= 1.0 + sign * _CHANGE
        low, high = (margin_at(case, **values) for values in at)
        found.append(Sensitivity(name=name, change=_CHANGE, stated=False, low=low, high=high))
    return tuple(sorted((row for row in found if row is not None), key=lambda row: row.least))


def _changed(
    case: Case, name: str, part: str, fields: tuple[str, ...], change: float, stated: bool, frequency: float,
    acceleration: float,
) -> Sensitivity | None:  # fmt: skip
    margins = []
    for sign in (-1.0, 1.0):
        whole: Any = getattr(case, part)
        factor = 1.0 + sign * min(change, 0.9)
        try:
            altered = dataclasses.replace(whole, **{field: getattr(whole, field) * factor for field in fields})
            margins.append(
                margin_at(dataclasses.replace(case, **{part: altered}), frequency=frequency, acceleration=acceleration)
            )
        except ContainmentError:  # beyond what the input may be: nothing can be said of it
            return None
    return Sensitivity(name=name, change=change, stated=stated, low=margins[0], high=margins[1])
