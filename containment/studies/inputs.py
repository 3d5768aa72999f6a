"""What a plan may fix, vary or draw: the inputs of a case by their names, kinds, bounds and cost of a change."""

import math
from dataclasses import dataclass
from typing import Any, Final

from containment.errors import InputError
from containment.given.quantities import KINDS, parse_quantity, si_value

__all__ = ["INPUTS", "SIZES", "VESSEL_SHAPES", "Input", "input_value", "inputs_of", "record_key"]

SIZES: Final = ("acceleration", "amplitude", "stroke", "velocity")
"""Measures of the size of a motion, of which a drive point has exactly one."""

VESSEL_SHAPES: Final = {
    # what says which vessel it is: the inputs of one shape
    "cylinder": ("cylinder",),
    "box": ("box_width", "box_length"),
    "annulus": ("annulus_inner", "annulus_outer"),
    "slot": ("slot",),
    "unbounded": ("unbounded",),
}

_VESSEL, _PRODUCT, _FREQUENCY, _SIZE = range(4)


@dataclass(frozen=True, slots=True)
class Input:
    """One input of a case.

    Attributes
    ----------
    kind : str
        A kind of quantity (`containment.given.quantities.KINDS`), or ``word``, ``flag``, ``words``.
    subject : {"both", "liquid", "grains"}
        Whose input it is.
    depth_of_loop : int
        Inputs of a higher number are varied in inner loops: a change of the drive point costs next to nothing, one of
        the vessel most.
    least, most, above : float or None
        Bounds, SI.
    choices : tuple of str
        Words that are allowed; empty for any.
    """

    kind: str
    subject: str = "both"
    depth_of_loop: int = _PRODUCT
    least: float | None = None
    most: float | None = None
    above: float | None = None
    choices: tuple[str, ...] = ()

    @property
    def numeric(self) -> bool:
        """Whether it can be varied over a range or drawn from a distribution."""
        return self.kind in KINDS

    @property
    def bounds(self) -> tuple[float, float]:
        """Lowest and highest value, SI; infinite where there is none."""
        low = self.least if self.least is not None else self.above
        return (-math.inf if low is None else low, math.inf if self.most is None else self.most)


def _length(depth_of_loop: int = _PRODUCT, subject: str = "both", least: float = 1e-6) -> Input:
    return Input("length", subject, depth_of_loop, least=least, most=1e3)


INPUTS: Final[dict[str, Input]] = {
    "name": Input("word"),
    "table": Input("words"),
    "cylinder": _length(_VESSEL),
    "box_width": _length(_VESSEL),
    "box_length": _length(_VESSEL),
    "annulus_inner": _length(_VESSEL),
    "annulus_outer": _length(_VESSEL),
    "slot": _length(_VESSEL),
    "unbounded": Input("flag", depth_of_loop=_VESSEL),
    "depth": _length(_VESSEL),
    "contact_line": Input("word", "liquid", _VESSEL, choices=("sliding", "pinned")),
    "temperature": Input("temperature", "liquid", above=0.0, most=5000.0),
    "density": Input("density", "liquid", least=1.0, most=3e4),
    "viscosity": Input("viscosity", "liquid", least=1e-6, most=1e6),
    "surface_tension": Input("surface tension", "liquid", least=0.0, most=10.0),
    "rheology": Input("word", "liquid"),
    "solids": Input("ratio", "liquid", least=0.0, most=1.0),
    "max_packing": Input("ratio", "liquid", above=0.0, most=1.0),
    "particle_density": Input("density", least=1.0, most=3e4),
    "surface": Input("word", "liquid", choices=("clean", "covered")),
    "film_modulus": Input("elastic modulus of a film", "liquid", least=0.0, most=1e6),
    "cushion": Input("length", "liquid", least=1e-6, most=1e2),
    "polytropic_exponent": Input("ratio", "liquid", least=1.0, most=5.0 / 3.0),
    "below": Input("word", "liquid"),
    "below_depth": _length(_PRODUCT, "liquid"),
    "interfacial_tension": Input("surface tension", "liquid", above=0.0, most=10.0),
    "tilt": Input("angle", "liquid", least=0.0, most=0.5),
    "ambient_pressure": Input("pressure", above=0.0, most=1e8),
    "dwell": Input("time", least=1e-3, most=1e10),
    "unevenness": Input("length", "liquid", above=0.0, most=1e3),
    "amplification": Input("ratio", "liquid", above=1.0, most=1e6),
    "margin": Input("ratio", least=1.0, most=100.0),
    "bulk_density": Input("density", "grains", least=1.0, most=2e4),
    "particle_diameter": Input("length", "grains", least=1e-8, most=1.0),
    "cohesion": Input("pressure", "grains", least=0.0, most=1e6),
    "yield_strength": Input("pressure", "grains", least=0.0, most=1e7),
    "wall_friction": Input("ratio", "grains", least=0.0, most=3.0),
    "angle_of_repose": Input("angle", "grains", least=0.0, most=0.5 * math.pi),
    "moisture": Input("ratio", "grains", least=0.0, most=10.0),
    "freeboard": _length(_PRODUCT, "grains", 0.0),
    "outlet": _length(_PRODUCT, "grains"),
    "slot_outlet": _length(_PRODUCT, "grains"),
    "open_bottom": Input("flag", "grains"),
    "pocket": _length(_PRODUCT, "grains", 0.0),
    "allowed_drop": Input("length", "grains", above=0.0, most=1e3),
    "restitution": Input("ratio", "grains", least=0.0, most=0.99),
    "drive": Input("word"),
    "max_stroke": Input("length", above=0.0),
    "max_velocity": Input("velocity", above=0.0),
    "max_acceleration": Input("acceleration", above=0.0),
    "max_force": Input("force", above=0.0),
    "moving_mass": Input("mass", least=0.0),
    "lowest_frequency": Input("frequency", least=0.1, most=1e5),
    "highest_frequency": Input("frequency", least=0.1, most=1e5),
    "second_harmonic": Input("ratio", "liquid", least=0.0, most=100.0),
    "second_harmonic_phase": Input("angle", "liquid"),
    "crank_ratio": Input("ratio", "liquid", least=0.0, most=0.9),
    "frequency": Input("frequency", depth_of_loop=_FREQUENCY, least=0.1, most=1e5),
    "acceleration": Input("acceleration", depth_of_loop=_SIZE, above=0.0, most=1e9),
    "amplitude": Input("length", depth_of_loop=_SIZE, above=0.0, most=1e9),
    "stroke": Input("length", depth_of_loop=_SIZE, above=0.0, most=1e9),
    "velocity": Input("velocity", depth_of_loop=_SIZE, above=0.0, most=1e9),
}
"""All inputs, named like the options of the command line with underscores; pairs of the command line are two inputs."""

_UNIT_KEYS: Final = {
    "length": "m", "time": "s", "temperature": "K", "density": "kg_m3", "viscosity": "Pa_s", "surface tension": "N_m",
    "frequency": "Hz", "acceleration": "m_s2", "velocity": "m_s", "force": "N", "mass": "kg", "pressure": "Pa",
    "angle": "rad", "elastic modulus of a film": "N_m",
}  # fmt: skip


def inputs_of(subject: str) -> dict[str, Input]:
    """Return the inputs of liquids or of grains."""
    return {name: entry for name, entry in INPUTS.items() if entry.subject in ("both", subject)}


def record_key(name: str) -> str:
    """Return the key of an input in a record, with its SI unit.

    Examples
    --------
    >>> record_key("frequency"), record_key("margin"), record_key("name")
    ('frequency_Hz', 'margin_factor', 'name')
    """
    if name == "margin":  # a response of the same name is what came out
        return "margin_factor"
    unit = _UNIT_KEYS.get(INPUTS[name].kind)
    return f"{name}_{unit}" if unit else name


def input_value(name: str, value: Any, *, bare_numbers: bool) -> Any:
    """Return an input's value, checked: SI number, word, flag or tuple of words.

    Parameters
    ----------
    name : str
        A key of `INPUTS`.
    value : Any
        Text with a unit, a pint quantity, or what the kind asks for.
    bare_numbers : bool
        Whether a plain number counts as one in SI units; in a plan that is a file it is refused.

    Raises
    ------
    InputError
        A value that cannot be read or is out of bounds.

    Examples
    --------
    >>> input_value("depth", "30 mm", bare_numbers=False)
    0.03
    """
    entry = INPUTS[name]
    if entry.kind == "flag":
        if value is not True:
            raise InputError(f"{name}: {value!r} is not allowed; expected true, or leave it out")
        return True
    if entry.kind == "words":
        words = (value,) if isinstance(value, str) else tuple(value) if isinstance(value, list | tuple) else ()
        if not words or not all(isinstance(word, str) and word for word in words):
            raise InputError(f"{name}: {str(value)[:60]!r} is not allowed; expected a file name, or a list of them")
        return words
    if entry.kind == "word":
        if not isinstance(value, str) or not value.strip():
            raise InputError(f"{name}: {str(value)[:60]!r} is not allowed; expected text")
        if entry.choices and value not in entry.choices:
            raise InputError(f"{name}: {value[:60]!r} is not allowed; expected {' or '.join(map(repr, entry.choices))}")
        return value.strip()
    if not bare_numbers and not isinstance(value, str) and entry.kind != "ratio":
        parse_quantity(str(value), entry.kind, name)  # a bare number is refused with the unit that is expected
    return si_value(value, entry.kind, name, above=entry.above, least=entry.least, most=entry.most)
