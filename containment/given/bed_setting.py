"""Where the bed is: upright and open, over an outlet, in an open-bottomed tube, or upside-down under a pocket of gas."""

from dataclasses import dataclass
from typing import Any, Final

from containment.errors import InputError
from containment.given.quantities import si_value

__all__ = ["BedSetting", "bed_setting"]

_WORDS: Final = {
    "freeboard": "freeboard",
    "outlet": "outlet",
    "slot_outlet": "slot outlet",
    "open_bottom": "open bottom",
    "pocket": "pocket",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class BedSetting:
    """A setting of a bed.

    Attributes
    ----------
    kind : {"freeboard", "outlet", "slot_outlet", "open_bottom", "pocket"}
        Upright and open; over a round outlet, or a slot; in a tube without bottom; upside-down with gas above.
    size : float or None
        Height of the freeboard, diameter of the outlet, width of the slot, height of the pocket, m.
    """

    kind: str
    size: float | None

    def to_dict(self) -> dict[str, Any]:
        """Return the setting as plain JSON types."""
        return {"kind": self.kind, "size_m": self.size}


def bed_setting(
    *,
    freeboard: Any = None,
    outlet: Any = None,
    slot_outlet: Any = None,
    open_bottom: bool = False,
    pocket: Any = None,
) -> BedSetting:
    """Return the setting: exactly one of five.

    Parameters
    ----------
    freeboard, outlet, slot_outlet, pocket : str or pint.Quantity or float, optional
        Height of the wall above the bed; diameter; width; height of the gas above the bed, m.
    open_bottom : bool
        A tube without bottom, open above.

    Raises
    ------
    InputError
        None or more than one, or a size out of range.

    Examples
    --------
    >>> bed_setting(outlet="20 mm")
    BedSetting(kind='outlet', size=0.02)
    """
    sizes = {"freeboard": freeboard, "outlet": outlet, "slot_outlet": slot_outlet, "pocket": pocket}
    named = [name for name, value in sizes.items() if value is not None] + (["open_bottom"] if open_bottom else [])
    if len(named) != 1:
        said = "none is given" if not named else "given: " + ", ".join(_WORDS[name] for name in named)
        raise InputError(
            f"setting: {said}; expected exactly one of freeboard, outlet, slot outlet, open bottom, pocket"
        )
    kind = named[0]
    if kind == "open_bottom":
        return BedSetting(kind=kind, size=None)
    # no freeboard, or no gas above the bed, is a case of its own: the bed is level with the rim, or touches the lid
    least = 0.0 if kind in ("freeboard", "pocket") else 1e-6
    return BedSetting(kind=kind, size=si_value(sizes[kind], "length", _WORDS[kind], least=least, most=1e3))
