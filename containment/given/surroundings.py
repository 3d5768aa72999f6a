"""What surrounds the layer: the state of its surface, a liquid or trapped gas below it, pressure, tilt."""

from dataclasses import dataclass
from typing import Any

from containment.constants import STANDARD_ATMOSPHERE
from containment.errors import InputError
from containment.given.liquid import Liquid
from containment.given.quantities import si_value

__all__ = ["Surroundings"]


@dataclass(frozen=True, slots=True, kw_only=True)
class Surroundings:
    """Surroundings of a layer.

    Parameters
    ----------
    surface : {"clean", "covered"} or None
        Whether the free surface is clean or covered by a skin that does not stretch; None where nobody has said: the
        clean one is taken, and the verdict asks whether the other would change it.
    film_modulus : str or pint.Quantity or float, optional
        Dilational modulus of a film that is neither, N/m.
    below : Liquid, optional
        A lighter liquid that fills the space under the layer, down to a lid.
    below_depth : str or pint.Quantity or float, optional
        Its depth, m.
    interfacial_tension : str or pint.Quantity or float, optional
        Between the two liquids, N/m.
    cushion : str or pint.Quantity or float, optional
        Height of trapped gas on which the layer floats, m, before the layer's weight is on it.
    polytropic_exponent : float
        Of the trapped gas: 1 isothermal, 1.4 adiabatic air.
    ambient_pressure : str or pint.Quantity or float
        Absolute, Pa.
    tilt : str or pint.Quantity or float, optional
        Of the vessel, rad.

    Raises
    ------
    InputError
        A value that cannot be used, or one without its companion.
    """

    surface: str | None = None
    film_modulus: Any = None
    below: Liquid | None = None
    below_depth: Any = None
    interfacial_tension: Any = None
    cushion: Any = None
    polytropic_exponent: Any = 1.4
    ambient_pressure: Any = STANDARD_ATMOSPHERE
    tilt: Any = None

    def __post_init__(self) -> None:
        for name, kind, bounds in (
            ("film_modulus", "elastic modulus of a film", {"least": 0.0, "most": 1e6}),
            ("below_depth", "length", {"least": 1e-6, "most": 1e3}),
            ("interfacial_tension", "surface tension", {"above": 0.0, "most": 10.0}),
            ("cushion", "length", {"least": 1e-6, "most": 1e2}),
            ("polytropic_exponent", "ratio", {"least": 1.0, "most": 5.0 / 3.0}),
            ("ambient_pressure", "pressure", {"above": 0.0, "most": 1e8}),
            ("tilt", "angle", {"least": 0.0, "most": 0.5}),
        ):
            value = getattr(self, name)
            if value is not None:
                checked = si_value(value, kind, name.replace("_", " "), **bounds)
                object.__setattr__(self, name, checked)
        if self.surface not in (None, "clean", "covered"):
            raise InputError(f"surface: {self.surface!r} is not known; expected 'clean' or 'covered'")
        if self.film_modulus is not None and self.surface is not None:
            raise InputError("film modulus: given with the surface's state; give one of the two")
        parts = (self.below, self.below_depth, self.interfacial_tension)
        if any(part is not None for part in parts) and any(part is None for part in parts):
            raise InputError("below: expected the liquid below, its depth and the interfacial tension, all three")
        if self.below is not None and self.cushion is not None:
            raise InputError("cushion: given with a liquid below; give one of the two")
        if self.below is not None and (self.surface == "covered" or self.film_modulus is not None):
            raise InputError("surface: a film between two liquids is not modelled; leave the film or the liquid below out")

    def to_dict(self) -> dict[str, Any]:
        """Return the surroundings as plain JSON types."""
        return {
            "surface": self.surface,
            "film_modulus_N_m": self.film_modulus,
            "below": self.below.to_dict() if self.below else None,
            "below_depth_m": self.below_depth,
            "interfacial_tension_N_m": self.interfacial_tension,
            "cushion_m": self.cushion,
            "polytropic_exponent": self.polytropic_exponent if self.cushion is not None else None,
            "ambient_pressure_Pa": self.ambient_pressure,
            "tilt_rad": self.tilt,
        }
