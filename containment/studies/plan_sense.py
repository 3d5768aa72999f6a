"""Whether the inputs of a plan make cases at all: one vessel, a whole drive point, a product that is known."""

from collections.abc import Collection
from typing import Any

from containment.errors import InputError
from containment.studies.inputs import SIZES, VESSEL_SHAPES
from containment.studies.plan import Plan

__all__ = ["faults_of_sense"]

_SETTINGS = ("freeboard", "outlet", "slot_outlet", "open_bottom", "pocket")
_COMPANIONS = (
    # (input, what must be given with it)
    ("max_packing", ("solids",)),
    ("solids", ("max_packing",)),
    ("below", ("below_depth", "interfacial_tension")),
    ("below_depth", ("below",)),
    ("interfacial_tension", ("below",)),
    ("polytropic_exponent", ("cushion",)),
    ("max_force", ("moving_mass",)),
    ("lowest_frequency", ("highest_frequency",)),
    ("highest_frequency", ("lowest_frequency",)),
    ("second_harmonic_phase", ("second_harmonic",)),
)
_EITHER = (("second_harmonic", "crank_ratio"), ("below", "cushion"), ("cohesion", "yield_strength"))


def faults_of_sense(plan: Plan, given: Collection[str]) -> list[str]:
    """Return what is missing, or too much, for every case of a plan; `given` are all inputs that it mentions."""
    return [*_vessel(given), *_drive_point(plan, given), *_product(plan, given), *_pairs(plan, given)]


def _vessel(given: Collection[str]) -> list[str]:
    shapes = [shape for shape, names in VESSEL_SHAPES.items() if any(name in given for name in names)]
    faults = []
    if len(shapes) != 1:
        said = "no shape is given" if not shapes else "given: " + ", ".join(shapes)
        faults.append(
            f"vessel: {said}; expected exactly one of cylinder, box_width with box_length, annulus_inner with "
            "annulus_outer, slot, unbounded"
        )
    else:
        faults += [f"{name}: missing; a {shapes[0]} needs it" for name in VESSEL_SHAPES[shapes[0]] if name not in given]
    if "depth" not in given:
        faults.append("depth: missing; expected a length with its unit, such as 30mm")
    return faults


def _drive_point(plan: Plan, given: Collection[str]) -> list[str]:
    sizes = [name for name in SIZES if name in given]
    if "frequency" not in given:
        return [f"{sizes[0]}: given without frequency; give both for a drive point, or neither"] if sizes else []
    if len(sizes) != 1:
        said = "no size" if not sizes else " and ".join(sizes)
        return [f"frequency: given with {said}; expected exactly one of {', '.join(SIZES)}"]
    return []


def _product(plan: Plan, given: Collection[str]) -> list[str]:
    if "name" not in given:
        return ["name: missing; expected a name of the property table, or 'custom'"]
    names = _values(plan, "name")
    faults = []
    needed = ("bulk_density", "particle_diameter") if plan.subject == "grains" else (
        "density", "viscosity", "surface_tension"
    )  # fmt: skip
    if any(name.strip().lower() == "custom" for name in names):
        missing = [name for name in needed if name not in given]
        if missing:
            faults.append(f"custom {plan.subject}: {', '.join(missing)} missing; expected {', '.join(needed)}")
    tables = tuple(plan.fixed.get("table", ()))
    from containment.given import tables as property_tables

    look_up = property_tables.grain_entry if plan.subject == "grains" else property_tables.liquid_entry
    for key, find in (("name", look_up), ("below", property_tables.liquid_entry), ("drive", property_tables.drive_entry)):
        for name in dict.fromkeys(_values(plan, key)):
            if key == "name" and name.strip().lower() == "custom":
                continue
            try:
                find(name, tables=tables)
            except InputError as error:
                faults.append(str(error).replace("\n", "; "))
    if plan.subject == "grains":
        settings = [name for name in _SETTINGS if name in given]
        if len(settings) != 1:
            said = "none is given" if not settings else "given: " + ", ".join(settings)
            faults.append(f"setting: {said}; expected exactly one of {', '.join(_SETTINGS)}")
    if "rheology" in given:
        from containment.given.rheology import parse_rheology

        for text in _values(plan, "rheology"):
            try:
                parse_rheology(text, "rheology")
            except InputError as error:
                faults.append(str(error))
    return faults


def _values(plan: Plan, name: str) -> list[Any]:
    if name in plan.fixed:
        return [plan.fixed[name]]
    return [value for axis in plan.axes for value in axis.values.get(name, ())]


def _pairs(plan: Plan, given: Collection[str]) -> list[str]:
    faults = [
        f"{name}: given without {other}; expected both"
        for name, others in _COMPANIONS
        for other in others
        if name in given and other not in given and not (name == "max_force" and "drive" in given)
    ]
    faults += [f"{a}: given with {b}; expected one of the two" for a, b in _EITHER if a in given and b in given]
    if "table" in given and "table" not in plan.fixed:
        faults.append("table: a table of properties is the same for all cases; expected under [fixed]")
    return faults
