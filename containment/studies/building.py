"""From the inputs of one case to the objects that are judged."""

import dataclasses
from collections.abc import Mapping
from typing import Any

from containment.given.drive import DriveLimits
from containment.given.liquid import Liquid, liquid
from containment.given.motion import Motion, waveform
from containment.given.surroundings import Surroundings
from containment.given.vessel import Annulus, Box, Cylinder, Slot, Unbounded, Vessel
from containment.given.waveforms import Waveform
from containment.judgement.bed_verdict import BedVerdict, assess_bed
from containment.judgement.verdict import MARGIN_FACTOR, Verdict, assess
from containment.studies.inputs import SIZES

__all__ = ["assessed", "bed_assessed", "drive_of", "liquid_of", "margin_of", "shape_of", "surroundings_of", "vessel_of"]

_DRIVE = ("max_stroke", "max_velocity", "max_acceleration", "max_force", "moving_mass")
_AROUND = (
    "surface", "film_modulus", "below_depth", "interfacial_tension", "cushion", "polytropic_exponent", "ambient_pressure",
    "tilt",
)  # fmt: skip


def vessel_of(inputs: Mapping[str, Any]) -> Vessel:
    """Return the vessel."""
    rest = {"depth": inputs["depth"], "contact_line": inputs.get("contact_line", "sliding")}
    if "cylinder" in inputs:
        return Cylinder(diameter=inputs["cylinder"], **rest)
    if "box_width" in inputs:
        return Box(width=inputs["box_width"], length=inputs["box_length"], **rest)
    if "annulus_inner" in inputs:
        return Annulus(inner_diameter=inputs["annulus_inner"], outer_diameter=inputs["annulus_outer"], **rest)
    if "slot" in inputs:
        return Slot(width=inputs["slot"], **rest)
    return Unbounded(**rest)


def liquid_of(inputs: Mapping[str, Any]) -> Liquid:
    """Return the liquid."""
    made = liquid(
        inputs["name"], temperature=inputs.get("temperature", "20 degC"), density=inputs.get("density"),
        viscosity=inputs.get("viscosity"), surface_tension=inputs.get("surface_tension"), tables=inputs.get("table", ()),
    )  # fmt: skip
    if "rheology" in inputs:
        from containment.given.rheology import parse_rheology

        made = dataclasses.replace(made, rheology=parse_rheology(inputs["rheology"], "rheology"))
    if "solids" in inputs:
        from containment.given.slurry import slurry

        made = slurry(
            made, solids=inputs["solids"], max_packing=inputs["max_packing"], particle_density=inputs.get("particle_density")
        )
    return made


def shape_of(inputs: Mapping[str, Any]) -> Waveform:
    """Return the shape of the motion."""
    second = inputs.get("second_harmonic")
    pair = None if second is None else (second, inputs.get("second_harmonic_phase", 0.0))
    return waveform(second_harmonic=pair, crank_ratio=inputs.get("crank_ratio"))


def _motion_of(inputs: Mapping[str, Any]) -> Motion | None:
    if "frequency" not in inputs:
        return None
    size = next(name for name in SIZES if name in inputs)
    second = inputs.get("second_harmonic")
    return Motion(
        frequency=inputs["frequency"],
        second_harmonic=None if second is None else (second, inputs.get("second_harmonic_phase", 0.0)),
        crank_ratio=inputs.get("crank_ratio"),
        **{size: inputs[size]},
    )


def drive_of(inputs: Mapping[str, Any]) -> DriveLimits:
    """Return the drive's limits: those of the named class, single values replaced where given."""
    values: dict[str, Any] = {}
    if "drive" in inputs:
        from containment.given.tables import drive_entry

        entry = drive_entry(inputs["drive"], tables=tuple(inputs.get("table", ())))
        values = {field: getattr(entry, field) for field in (*_DRIVE, "frequency_range", "name")}
    values |= {field: inputs[field] for field in _DRIVE if field in inputs}
    if "lowest_frequency" in inputs:
        values["frequency_range"] = (inputs["lowest_frequency"], inputs["highest_frequency"])
    return DriveLimits(**values)


def surroundings_of(inputs: Mapping[str, Any]) -> Surroundings:
    """Return what surrounds the layer."""
    below = None
    if "below" in inputs:
        below = liquid(inputs["below"], temperature=inputs.get("temperature", "20 degC"), tables=inputs.get("table", ()))
    return Surroundings(below=below, **{name: inputs[name] for name in _AROUND if name in inputs})


def margin_of(inputs: Mapping[str, Any]) -> float:
    """Return the ratio to an edge below which a layer is marginal."""
    return float(inputs.get("margin", MARGIN_FACTOR))


def assessed(inputs: Mapping[str, Any]) -> Verdict:
    """Return the verdict on one liquid case."""
    motion = _motion_of(inputs)
    return assess(
        liquid_of(inputs), vessel_of(inputs), motion, dwell=inputs.get("dwell"), unevenness=inputs.get("unevenness"),
        amplification=inputs.get("amplification"), drive=drive_of(inputs), surroundings=surroundings_of(inputs),
        shape=shape_of(inputs) if motion is None else None, margin_factor=margin_of(inputs),
    )  # fmt: skip


def bed_assessed(inputs: Mapping[str, Any]) -> BedVerdict:
    """Return the verdict on one granular case."""
    from containment.given.grains import grains

    properties = (
        "bulk_density", "particle_density", "particle_diameter", "wall_friction", "angle_of_repose", "cohesion",
        "yield_strength",
    )  # fmt: skip
    material = grains(
        inputs["name"], tables=inputs.get("table", ()), **{name: inputs[name] for name in properties if name in inputs}
    )
    rest = (
        "freeboard", "outlet", "slot_outlet", "open_bottom", "pocket", "dwell", "allowed_drop", "restitution", "moisture",
        "ambient_pressure",
    )  # fmt: skip
    factor = {"margin_factor": inputs["margin"]} if "margin" in inputs else {}
    return assess_bed(
        material, vessel_of(inputs), _motion_of(inputs), drive=drive_of(inputs), **factor,
        **{name: inputs[name] for name in rest if name in inputs},
    )  # fmt: skip
