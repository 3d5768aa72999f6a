"""``containment grains``: verdict for a granular bed in a shaken vessel."""

import argparse
from typing import TYPE_CHECKING, Any, Final

from containment.errors import InputError
from containment.faces import case_file, report_file
from containment.faces import options as shared

if TYPE_CHECKING:
    from containment.given.grains import Grains

__all__ = ["add_arguments", "run"]

_NAMES: Final = "a granular material of the property table, or custom"
_SETTINGS: Final = ("freeboard", "outlet", "slot_outlet", "pocket")


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Add the sub-command's options."""
    parser.add_argument_group("material").add_argument("name", metavar="NAME", nargs="?", help=_NAMES)
    group = parser.add_argument_group("setting (one)")
    group.add_argument("--freeboard", metavar="H", help="upright and open: height of the wall above the bed")
    group.add_argument("--outlet", metavar="DIAMETER", help="over a round outlet of a hopper or tube")
    group.add_argument("--slot-outlet", metavar="WIDTH", help="over a slot")
    group.add_argument("--open-bottom", action="store_true", help="in a tube without bottom")
    group.add_argument("--pocket", metavar="HEIGHT", help="upside-down, with that much gas above the bed")
    group = parser.add_argument_group("material, in place of the table's")
    group.add_argument("--bulk-density", metavar="RHO", help="such as 600kg/m**3")
    group.add_argument("--particle-density", metavar="RHO", help="such as 1500kg/m**3")
    group.add_argument("--particle-diameter", metavar="D", help="one for all grains, such as 80um")
    group.add_argument("--cohesion", metavar="C", help="measured shear strength at no normal stress, such as 200Pa")
    group.add_argument("--yield-strength", metavar="SIGMA", help="measured unconfined yield strength, such as 700Pa")
    group.add_argument("--wall-friction", metavar="MU", help="coefficient, such as 0.4")
    group.add_argument("--angle-of-repose", metavar="ANGLE", help="such as 35deg")
    group.add_argument("--moisture", metavar="RATIO", help="liquid on the grains over dry mass: shown, not credited")
    group.add_argument("--table", metavar="FILE", action="append", help="a table of your own; may be repeated")
    shared.add_vessel(parser, depth="bed")
    shared.add_drive_point(parser)
    shared.add_drive_limits(parser)
    group = parser.add_argument_group("process")
    group.add_argument("--dwell", metavar="TIME", help="how long it has to stay; default for ever")
    group.add_argument("--allowed-drop", metavar="X", help="of a bed on trapped gas; default depth/10")
    group.add_argument("--restitution", metavar="E", help="of a grain on the surface; default 0.3, shallow bed 0.9")
    group.add_argument("--margin", metavar="FACTOR", help="factor to a bound below which it is marginal; 2")
    group.add_argument("--ambient-pressure", metavar="P", help="absolute; default 101.325kPa")
    report_file.add_report(shared.add_output(parser))
    case_file.add_case(parser)


def _material_from(options: argparse.Namespace) -> "Grains":
    from containment.given.grains import grains

    kinds = {
        "bulk_density": "density",
        "particle_density": "density",
        "particle_diameter": "length",
        "cohesion": "pressure",
        "yield_strength": "pressure",
        "wall_friction": "ratio",
        "angle_of_repose": "angle",
    }
    values = {name: shared.quantity(options, name, kind) for name, kind in kinds.items()}
    return grains(options.name, tables=options.table or (), **values)


def _setting_from(options: argparse.Namespace) -> dict[str, Any]:
    given = [name for name in (*_SETTINGS, "open_bottom") if getattr(options, name) not in (None, False)]
    if len(given) != 1:
        said = "none is given" if not given else "given: " + ", ".join("--" + name.replace("_", "-") for name in given)
        raise InputError(
            f"setting: {said}; expected exactly one of --freeboard, --outlet, --slot-outlet, --open-bottom, --pocket"
        )
    if given[0] == "open_bottom":
        return {"open_bottom": True}
    least = 0.0 if given[0] in ("freeboard", "pocket") else 1e-6
    return {given[0]: shared.quantity(options, given[0], "length", least=least, most=1e3)}


def _refuse_what_a_bed_has_not(options: argparse.Namespace) -> None:
    for name, why in (
        ("contact_line", "a bed has no contact line"),
        ("second_harmonic", "a bed is judged for a pure vertical sine only"),
        ("crank_ratio", "a bed is judged for a pure vertical sine only"),
    ):
        value = getattr(options, name, None)
        if value is not None:
            raise InputError(f"--{name.replace('_', '-')}: {value!r} is not allowed: {why}; leave it out")


def run(options: argparse.Namespace) -> int:
    """Judge the bed and print the verdict; return the exit status."""
    from containment.constants import STANDARD_ATMOSPHERE
    from containment.judgement.bed_case import BED_MARGIN
    from containment.judgement.bed_verdict import assess_bed
    from containment.judgement.findings import exit_status

    if options.report is not None:
        report_file.refuse_unless_writable(options.report)
    case_file.apply_case(options, _NAMES)
    _refuse_what_a_bed_has_not(options)
    setting = _setting_from(options)
    factor = shared.quantity(options, "margin", "ratio", least=1.0, most=100.0)
    pressure = shared.quantity(options, "ambient_pressure", "pressure", above=0.0, most=1e8)
    verdict = assess_bed(
        _material_from(options),
        shared.vessel_from(options),
        shared.motion_from(options),
        dwell=shared.quantity(options, "dwell", "time", least=1e-3, most=1e10),
        allowed_drop=shared.quantity(options, "allowed_drop", "length", above=0.0, most=1e3),
        restitution=shared.quantity(options, "restitution", "ratio", least=0.0, most=0.99),
        moisture=shared.quantity(options, "moisture", "ratio", least=0.0, most=10.0),
        drive=shared.drive_from(options),
        ambient_pressure=STANDARD_ATMOSPHERE if pressure is None else pressure,
        margin_factor=BED_MARGIN if factor is None else factor,
        **setting,
    )
    if options.report is not None:
        from containment.faces.report_grains import report_grains

        report_grains(options, verdict)
    if options.save_case is not None:
        case_file.save_case(options, case_file.remark(verdict.answer.value, verdict.reason))
    if options.json:
        import json

        result = {**verdict.to_dict(), "case": case_file.case_of(options)}
        print(json.dumps(result, allow_nan=False, ensure_ascii=False, indent=2))
    else:
        from containment.faces.screen_grains import grains_screen

        grains_screen(verdict, plain=options.plain, detail=options.detail).show()
    return exit_status(verdict.answer)
