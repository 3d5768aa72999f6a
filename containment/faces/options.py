"""Options that the sub-commands share: vessel, drive point, drive limits, output."""

import argparse
from typing import TYPE_CHECKING, Any

from containment.errors import InputError

if TYPE_CHECKING:  # --help and argument errors need argparse only: what loads numpy is imported where it is used
    from containment.given.drive import DriveLimits
    from containment.given.motion import Motion
    from containment.given.vessel import Vessel
    from containment.given.waveforms import Waveform

__all__ = [
    "add_drive_limits",
    "add_drive_point",
    "add_output",
    "add_vessel",
    "drive_from",
    "motion_from",
    "quantity",
    "shape_from",
    "vessel_from",
]

_SHAPES = ("cylinder", "box", "annulus", "slot", "unbounded")
_SIZES = ("acceleration", "amplitude", "stroke", "velocity")


def quantity(options: argparse.Namespace, name: str, kind: str, **bounds: Any) -> float | None:
    """Return the SI value of an option, or None where it is not given."""
    from containment.given.quantities import parse_quantity, si_value

    text = getattr(options, name)
    if text is None:
        return None
    option = "--" + name.replace("_", "-")
    parse_quantity(text, kind, option)
    return si_value(text, kind, option, **bounds)


def add_vessel(parser: argparse.ArgumentParser, *, depth: str) -> None:
    """Add the vessel's options; `depth` says whose depth it is."""
    group = parser.add_argument_group("vessel (one shape)")
    group.add_argument("--cylinder", metavar="DIAMETER", help="round vessel, inner diameter, such as 70mm")
    group.add_argument("--box", metavar="WIDTHxLENGTH", help="rectangular vessel, such as 60mmx80mm")
    group.add_argument("--annulus", metavar="INNERxOUTER", help="ring-shaped vessel, inner and outer diameter")
    group.add_argument("--slot", metavar="WIDTH", help="long slot")
    group.add_argument("--unbounded", action="store_true", help="layer without side walls")
    group.add_argument("--depth", metavar="DEPTH", help=f"depth of the {depth}, such as 30mm")
    group.add_argument(
        "--contact-line", choices=("sliding", "pinned"), metavar="WHICH", help="sliding, or pinned at a brimful rim"
    )


def add_drive_point(parser: argparse.ArgumentParser) -> None:
    """Add the options of a drive point."""
    group = parser.add_argument_group("drive point (frequency with exactly one size)")
    group.add_argument("--frequency", metavar="F", help="such as 50Hz or 3000rpm")
    group.add_argument("--acceleration", metavar="A", help="peak, such as 25g_n or 245m/s**2")
    group.add_argument("--amplitude", metavar="X", help="zero to peak: half the stroke, such as 2.5mm")
    group.add_argument("--stroke", metavar="X", help="peak to peak: twice the amplitude, such as 5mm")
    group.add_argument("--velocity", metavar="V", help="peak, such as 0.8m/s")
    group.add_argument("--second-harmonic", metavar="R@PHASE", help="of the acceleration, such as 0.2@90deg")
    group.add_argument("--crank-ratio", metavar="R", help="crank radius over rod length, of a crank drive")


def add_drive_limits(parser: argparse.ArgumentParser) -> None:
    """Add the options of the drive's limits."""
    group = parser.add_argument_group("drive limits, from the data sheet")
    group.add_argument("--drive", metavar="NAME", help="a class of drives from the drive table")
    group.add_argument("--max-stroke", metavar="X", help="peak to peak")
    group.add_argument("--max-velocity", metavar="V", help="peak")
    group.add_argument("--max-acceleration", metavar="A", help="peak")
    group.add_argument("--max-force", metavar="N", help="peak; needs the moving mass")
    group.add_argument("--moving-mass", metavar="M", help="mass that moves besides the product")
    group.add_argument("--frequency-range", metavar="LO:HI", help="such as 5Hz:60Hz")


def add_output(parser: argparse.ArgumentParser) -> "argparse._ArgumentGroup":
    """Add the options of the output and return their group."""
    group = parser.add_argument_group("output")
    group.add_argument("--json", action="store_true", help="one JSON object, SI units, nothing else")
    group.add_argument("--plain", action="store_true", help="no colour and no boxes")
    group.add_argument("--detail", action="store_true", help="sources, method and digits as well")
    return group


def vessel_from(options: argparse.Namespace) -> "Vessel":
    """Return the vessel that the options describe."""
    from containment.given.vessel import Annulus, Box, Cylinder, Slot, Unbounded

    given = [shape for shape in _SHAPES if getattr(options, shape)]
    if len(given) != 1:
        said = "no shape is given" if not given else "given: " + ", ".join(f"--{shape}" for shape in given)
        raise InputError(f"vessel: {said}; expected exactly one of --cylinder, --box, --annulus, --slot, --unbounded")
    if options.depth is None:
        raise InputError("--depth: missing; expected a length with its unit, such as 30mm")
    depth = quantity(options, "depth", "length", least=1e-6, most=1e3)
    line = getattr(options, "contact_line", None) or "sliding"
    shape = given[0]
    if shape == "unbounded":
        return Unbounded(depth=depth, contact_line=line)
    if shape in ("cylinder", "slot"):
        size = quantity(options, shape, "length", least=1e-6, most=1e3)
        if shape == "cylinder":
            return Cylinder(diameter=size, depth=depth, contact_line=line)
        return Slot(width=size, depth=depth, contact_line=line)
    first, second = _pair(getattr(options, shape), f"--{shape}")
    if shape == "box":
        return Box(width=first, length=second, depth=depth, contact_line=line)
    return Annulus(inner_diameter=first, outer_diameter=second, depth=depth, contact_line=line)


def _pair(text: str, option: str) -> tuple[float, float]:
    from containment.given.quantities import parse_quantity

    first, cross, second = text.replace("×", "x").partition("x")
    if not cross:
        raise InputError(f"{option}: {text!r} is not two lengths; expected two with an x between, such as 60mmx80mm")
    a, b = parse_quantity(first, "length", option), parse_quantity(second, "length", option)
    for value in (a, b):
        if not 1e-6 <= value <= 1e3:
            raise InputError(f"{option}: {text!r} is not allowed; each length must lie between 1e-06 m and 1000 m")
    return a, b


def motion_from(options: argparse.Namespace) -> "Motion | None":
    """Return the drive point, or None where none is given."""
    from containment.given.motion import Motion

    sizes = [name for name in _SIZES if getattr(options, name) is not None]
    if options.frequency is None:
        if sizes:
            raise InputError(f"--{sizes[0]}: given without --frequency; give both for a drive point, or neither")
        return None
    if len(sizes) != 1:
        said = "no size" if not sizes else " and ".join(f"--{name}" for name in sizes)
        raise InputError(
            f"--frequency: given with {said}; expected exactly one of --acceleration, --amplitude, --stroke, --velocity"
        )
    name = sizes[0]
    kind = {"amplitude": "length", "stroke": "length"}.get(name, name)
    size = quantity(options, name, kind, above=0.0, most=1e9)
    frequency = quantity(options, "frequency", "frequency", least=0.1, most=1e5)
    return Motion(
        frequency=frequency,
        second_harmonic=_second_harmonic(options),
        crank_ratio=quantity(options, "crank_ratio", "ratio", least=0.0, most=0.9),
        **{name: size},
    )


def shape_from(options: argparse.Namespace) -> "Waveform | None":
    """Return the shape of the motion, or None for a pure sine."""
    from containment.given.motion import waveform

    second, crank = _second_harmonic(options), quantity(options, "crank_ratio", "ratio", least=0.0, most=0.9)
    return None if second is None and crank is None else waveform(second_harmonic=second, crank_ratio=crank)


def _second_harmonic(options: argparse.Namespace) -> tuple[float, float] | None:
    text = options.second_harmonic
    if text is None:
        return None
    from containment.given.quantities import parse_quantity

    ratio, at, phase = text.partition("@")
    option = "--second-harmonic"
    return parse_quantity(ratio, "ratio", option), parse_quantity(phase, "angle", option) if at else 0.0


def drive_from(options: argparse.Namespace) -> "DriveLimits":
    """Return the drive's limits: those of the named class, single values replaced where given."""
    from containment.given.drive import DriveLimits
    from containment.given.quantities import parse_quantity

    values: dict[str, Any] = {}
    if options.drive is not None:
        from containment.given.tables import drive_entry

        entry = drive_entry(options.drive, tables=tuple(getattr(options, "table", None) or ()))
        values = {field: getattr(entry, field) for field in (
            "max_stroke", "max_velocity", "max_acceleration", "max_force", "moving_mass", "frequency_range", "name",
        )}  # fmt: skip
    for name, kind in (
        ("max_stroke", "length"),
        ("max_velocity", "velocity"),
        ("max_acceleration", "acceleration"),
        ("max_force", "force"),
        ("moving_mass", "mass"),
    ):
        bounds = {"least": 0.0} if name == "moving_mass" else {"above": 0.0}
        value = quantity(options, name, kind, **bounds)
        if value is not None:
            values[name] = value
    if options.frequency_range is not None:
        low, colon, high = options.frequency_range.partition(":")
        if not colon:
            raise InputError(
                f"--frequency-range: {options.frequency_range!r} is not a range; expected LO:HI, such as 5Hz:60Hz"
            )
        if low.strip().replace(".", "", 1).isdigit():  # 5:60Hz
            low += high.lstrip("0123456789. ")
        values["frequency_range"] = tuple(parse_quantity(end, "frequency", "--frequency-range") for end in (low, high))
    return DriveLimits(**values)
