"""``containment liquid``: verdict for a liquid layer in an upside-down vessel."""

import argparse
from typing import TYPE_CHECKING, Final

from containment.errors import InputError
from containment.faces import case_file, report_file
from containment.faces import options as shared

if TYPE_CHECKING:
    from containment.given.liquid import Liquid
    from containment.given.surroundings import Surroundings
    from containment.judgement.case import Case
    from containment.judgement.verdict import Verdict

__all__ = [
    "NAMES", "add_arguments", "add_case_arguments", "add_liquid", "case_from", "liquid_from", "run", "verdict_from",
]  # fmt: skip

ROOM_TEMPERATURE: Final = 293.15
"""Taken where no temperature is given, K."""

NAMES: Final = "a liquid of the property table, or custom"


def add_liquid(parser: argparse.ArgumentParser) -> None:
    """Add the options of the liquid."""
    group = parser.add_argument_group("liquid")
    group.add_argument("name", metavar="NAME", nargs="?", help=NAMES)
    group.add_argument("--temperature", metavar="T", help="default 20degC")
    group.add_argument("--density", metavar="RHO", help="in place of the table's, such as 1261kg/m**3")
    group.add_argument("--viscosity", metavar="MU", help="dynamic, likewise, such as 1.41Pa*s")
    group.add_argument("--surface-tension", metavar="GAMMA", help="likewise, such as 63mN/m")
    group.add_argument(
        "--rheology",
        metavar="MODEL:...",
        help="such as maxwell:viscosity=8Pa*s,relaxation=9ms",
    )
    group.add_argument("--table", metavar="FILE", action="append", help="a table of your own; may be repeated")
    group.add_argument("--solids", metavar="FRACTION", help="solids suspended in it by volume, such as 0.35")
    group.add_argument("--max-packing", metavar="FRACTION", help="of these solids at their closest, such as 0.64")
    group.add_argument("--particle-density", metavar="RHO", help="of the solids; default that of the liquid")


def add_process(parser: argparse.ArgumentParser) -> None:
    """Add what the process asks for."""
    group = parser.add_argument_group("process")
    group.add_argument("--dwell", metavar="TIME", help="how long it is upside-down; default for ever")
    group.add_argument("--unevenness", metavar="X", help="of the surface at first; 0.1mm or depth/100")
    group.add_argument("--amplification", metavar="B", help="factor by which it may grow in the dwell")
    group.add_argument("--margin", metavar="FACTOR", help="to either edge, below which it is marginal; 1.25")


def add_surroundings(parser: argparse.ArgumentParser) -> None:
    """Add what surrounds the layer."""
    group = parser.add_argument_group("surroundings")
    group.add_argument("--surface", choices=("clean", "covered"), help="free surface clean, or under a skin")
    group.add_argument("--film-modulus", metavar="E", help="of a surface film in between, such as 20mN/m")
    group.add_argument("--cushion", metavar="GAP", help="height of trapped gas that the layer floats on")
    group.add_argument("--polytropic-exponent", metavar="N", help="of that gas; default 1.4")
    group.add_argument("--below", metavar="NAME", help="a lighter liquid under the layer, down to a lid")
    group.add_argument("--below-depth", metavar="DEPTH", help="its depth")
    group.add_argument("--interfacial-tension", metavar="T", help="between the two liquids")
    group.add_argument("--tilt", metavar="ANGLE", help="of the vessel, such as 1deg")
    group.add_argument("--ambient-pressure", metavar="P", help="absolute; default 101.325kPa")


def surroundings_from(options: argparse.Namespace) -> "Surroundings":
    """Return the surroundings that the options describe."""
    from containment.given.liquid import liquid
    from containment.given.surroundings import Surroundings

    below = None
    if options.below is not None:
        temperature = _temperature(options)
        below = liquid(options.below, temperature=temperature, tables=options.table or ())
    values = {
        name: shared.quantity(options, name, kind)
        for name, kind in (
            ("film_modulus", "elastic modulus of a film"),
            ("cushion", "length"),
            ("polytropic_exponent", "ratio"),
            ("below_depth", "length"),
            ("interfacial_tension", "surface tension"),
            ("tilt", "angle"),
            ("ambient_pressure", "pressure"),
        )
    }
    given = {name: value for name, value in values.items() if value is not None}
    return Surroundings(surface=options.surface, below=below, **given)


def add_case_arguments(parser: argparse.ArgumentParser) -> None:
    """Add the options that describe a case, which `containment window` takes as well."""
    add_liquid(parser)
    shared.add_vessel(parser, depth="layer")
    shared.add_drive_point(parser)
    shared.add_drive_limits(parser)
    add_process(parser)
    add_surroundings(parser)


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Add the sub-command's options."""
    add_case_arguments(parser)
    report_file.add_report(shared.add_output(parser))
    case_file.add_case(parser)


def liquid_from(options: argparse.Namespace) -> "Liquid":
    """Return the liquid that the options describe."""
    from pathlib import Path

    from containment.given.liquid import PROPERTY_BOUNDS, liquid

    values = {
        name: shared.quantity(options, name, kind, least=least, most=most)
        for name, (kind, least, most) in PROPERTY_BOUNDS.items()
    }
    for file in options.table or ():
        if not Path(file).is_file():
            raise InputError(f"--table: {file!r} is not a file that can be read")
    made = liquid(
        options.name,
        temperature=_temperature(options),
        tables=options.table or (),
        **values,
    )
    if options.rheology is not None:
        import dataclasses

        from containment.given.rheology import parse_rheology

        made = dataclasses.replace(made, rheology=parse_rheology(options.rheology, "--rheology"))
    return _with_solids(made, options)


def _temperature(options: argparse.Namespace) -> float:
    given = shared.quantity(options, "temperature", "temperature", above=0.0, most=5000.0)
    return ROOM_TEMPERATURE if given is None else given


def _with_solids(made: "Liquid", options: argparse.Namespace) -> "Liquid":
    """Return the liquid with the suspended solids that the options describe."""
    solids = shared.quantity(options, "solids", "ratio", least=0.0, most=1.0)
    packing = shared.quantity(options, "max_packing", "ratio", above=0.0, most=1.0)
    density = shared.quantity(options, "particle_density", "density", least=1.0, most=3e4)
    if solids is None:
        extra = "--max-packing" if packing is not None else "--particle-density" if density is not None else ""
        if extra:
            raise InputError(f"{extra}: given without --solids; expected both, or neither")
        return made
    if packing is None:
        raise InputError("--solids: given without --max-packing; expected both, such as --solids 0.35 --max-packing 0.64")
    from containment.given.slurry import slurry

    return slurry(made, solids=solids, max_packing=packing, particle_density=density)


def case_from(options: argparse.Namespace) -> "Case":
    """Return the case that the options describe, for pictures of it."""
    from containment.given.waveforms import PURE_SINE
    from containment.judgement.case import Case, allowance

    vessel, motion = shared.vessel_from(options), shared.motion_from(options)
    shape = motion.waveform if motion is not None else shared.shape_from(options) or PURE_SINE
    return Case(
        liquid_from(options), vessel, allowance(depth=vessel.depth, **_process_from(options)), surroundings_from(options), shape
    )


def _process_from(options: argparse.Namespace) -> dict[str, float | None]:
    return {
        "dwell": shared.quantity(options, "dwell", "time", least=1e-3, most=1e10),
        "unevenness": shared.quantity(options, "unevenness", "length", above=0.0),
        "amplification": shared.quantity(options, "amplification", "ratio", above=1.0, most=1e6),
    }


def verdict_from(options: argparse.Namespace, *, ranges: bool = False) -> "Verdict":
    """Judge the case that the options describe."""
    from containment.judgement.verdict import MARGIN_FACTOR, assess

    vessel = shared.vessel_from(options)
    motion = shared.motion_from(options)
    drive = shared.drive_from(options)
    factor = shared.quantity(options, "margin", "ratio", least=1.0, most=100.0)
    return assess(
        liquid_from(options),
        vessel,
        motion,
        drive=drive,
        surroundings=surroundings_from(options),
        shape=shared.shape_from(options) if motion is None else None,
        ranges=ranges,
        margin_factor=MARGIN_FACTOR if factor is None else factor,
        **_process_from(options),
    )


def run(options: argparse.Namespace) -> int:
    """Judge the case and print the verdict; return the exit status."""
    if options.report is not None:
        report_file.refuse_unless_writable(options.report)
    case_file.apply_case(options, NAMES)
    from containment.judgement.findings import exit_status

    verdict = verdict_from(options, ranges=options.detail or options.report is not None)
    if options.report is not None:
        from containment.faces.report_liquid import report_liquid

        report_liquid(options, case_from(options), verdict)
    if options.save_case is not None:
        case_file.save_case(options, case_file.remark(verdict.answer.value, verdict.reason))
    if options.json:
        import json

        result = {**verdict.to_dict(), "case": case_file.case_of(options)}
        print(json.dumps(result, allow_nan=False, ensure_ascii=False, indent=2))
    else:
        from containment.faces.screen_liquid import liquid_screen

        liquid_screen(verdict, plain=options.plain, detail=options.detail).show()
    return exit_status(verdict.answer, verdict.proven)
