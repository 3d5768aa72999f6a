"""Vessels: the shapes of the layer, with their depth of fill."""

import math
from dataclasses import dataclass
from typing import Any, ClassVar

from containment.errors import InputError
from containment.given.quantities import si_value

__all__ = ["Annulus", "Box", "Cylinder", "Slot", "Unbounded", "Vessel"]

_LENGTHS = ("diameter", "width", "length", "inner_diameter", "outer_diameter", "depth")


@dataclass(frozen=True, slots=True, kw_only=True)
class _Shape:
    depth: Any
    contact_line: str = "sliding"

    kind: ClassVar[str]

    def __post_init__(self) -> None:
        for name in _LENGTHS:
            if hasattr(self, name):
                value = si_value(getattr(self, name), "length", name.replace("_", " "), least=1e-6, most=1e3)
                object.__setattr__(self, name, value)
        if self.contact_line not in ("sliding", "pinned"):
            raise InputError(f"contact line: {self.contact_line!r} is not known; expected 'sliding' or 'pinned'")

    @property
    def area(self) -> float | None:
        """Free surface, m^2; None where the shape has no end."""
        return None

    @property
    def narrowest(self) -> float | None:
        """Narrowest width of the opening, m; None where there is none."""
        return None

    def to_dict(self) -> dict[str, Any]:
        """Return the vessel as plain JSON types, lengths in m."""
        lengths = {f"{name}_m": getattr(self, name) for name in _LENGTHS if hasattr(self, name)}
        return {"shape": self.kind, **lengths, "contact_line": self.contact_line}


@dataclass(frozen=True, slots=True, kw_only=True)
class Cylinder(_Shape):
    """A round vessel.

    Parameters
    ----------
    diameter, depth : str or pint.Quantity or float
        Inner diameter and depth of fill; plain numbers in m.
    contact_line : {"sliding", "pinned"}
        Whether the rim of the surface slides along the wall or is held at the edge of a brimful vessel.

    Raises
    ------
    InputError
        A length that is not positive and finite, or an unknown contact line.

    Examples
    --------
    >>> Cylinder(diameter="70 mm", depth="30 mm").diameter
    0.07
    """

    diameter: Any
    kind: ClassVar[str] = "cylinder"

    @property
    def area(self) -> float | None:
        """Free surface, m^2."""
        return float(0.25 * math.pi * self.diameter**2)

    @property
    def narrowest(self) -> float | None:
        """The diameter, m."""
        return float(self.diameter)


@dataclass(frozen=True, slots=True, kw_only=True)
class Box(_Shape):
    """A rectangular vessel: `width`, `length` and `depth`, as in `Cylinder`.

    Examples
    --------
    >>> Box(width="60 mm", length="80 mm", depth="30 mm").area
    0.0048
    """

    width: Any
    length: Any
    kind: ClassVar[str] = "box"

    @property
    def area(self) -> float | None:
        """Free surface, m^2."""
        return float(self.width * self.length)

    @property
    def narrowest(self) -> float | None:
        """The shorter side, m."""
        return float(min(self.width, self.length))


@dataclass(frozen=True, slots=True, kw_only=True)
class Annulus(_Shape):
    """A ring-shaped vessel: `inner_diameter`, `outer_diameter` and `depth`, as in `Cylinder`.

    Examples
    --------
    >>> Annulus(inner_diameter="40 mm", outer_diameter="70 mm", depth="30 mm").narrowest
    0.015000000000000003
    """

    inner_diameter: Any
    outer_diameter: Any
    kind: ClassVar[str] = "annulus"

    def __post_init__(self) -> None:
        _Shape.__post_init__(self)
        if not self.inner_diameter < self.outer_diameter:
            raise InputError(
                f"annulus: inner diameter {self.inner_diameter:g} m is not smaller than outer diameter "
                f"{self.outer_diameter:g} m; the inner one must be the smaller"
            )
        if self.inner_diameter < 1e-3 * self.outer_diameter or self.inner_diameter > 0.99 * self.outer_diameter:
            raise InputError(
                f"annulus: inner diameter {self.inner_diameter:g} m to outer {self.outer_diameter:g} m is out of range; "
                "their ratio must lie between 0.001 (use a cylinder below) and 0.99 (use a slot above)"
            )

    @property
    def area(self) -> float | None:
        """Free surface, m^2."""
        return float(0.25 * math.pi * (self.outer_diameter**2 - self.inner_diameter**2))

    @property
    def narrowest(self) -> float | None:
        """The gap, m."""
        return float(0.5 * (self.outer_diameter - self.inner_diameter))


@dataclass(frozen=True, slots=True, kw_only=True)
class Slot(_Shape):
    """A long slot; waves across its `width` are considered.

    Examples
    --------
    >>> Slot(width="8 mm", depth="20 mm").narrowest
    0.008
    """

    width: Any
    kind: ClassVar[str] = "slot"

    @property
    def narrowest(self) -> float | None:
        """The width, m."""
        return float(self.width)


@dataclass(frozen=True, slots=True, kw_only=True)
class Unbounded(_Shape):
    """A layer without side walls: every wavelength counts."""

    kind: ClassVar[str] = "unbounded"


Vessel = Cylinder | Box | Annulus | Slot | Unbounded
"""Any of the vessels."""
