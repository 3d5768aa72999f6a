"""What goes with every verdict on a bed: cautions that apply, each with its reason, and what is taken for granted."""

import math
from typing import Final

from containment.judgement.bed_case import BedCase
from containment.judgement.bed_upright import QUIET_GAMMA
from containment.judgement.cautions import machine_cautions, product_cautions, trial_cautions
from containment.judgement.findings import Answer, Caution
from containment.physics.bed.powder_group import powder_group, segregates, sifts_through

__all__ = ["bed_assumptions", "bed_cautions"]

_EXPLOSIBLE_BELOW: Final = 500e-6
_INHALABLE_BELOW: Final = 100e-6
_CHARGES_BELOW: Final = 500e-6


def bed_cautions(
    case: BedCase, answer: Answer, *, acceleration: float | None, moisture: float | None = None
) -> tuple[Caution, ...]:
    """Return the cautions of a case, at a peak acceleration (m/s^2) where a drive point is given."""
    material = case.material
    found: list[Caution] = []
    hanging = case.setting.kind in ("open_bottom", "pocket")
    if hanging or case.setting.kind in ("outlet", "slot_outlet"):
        where = "upside-down" if case.setting.kind == "pocket" else "above an opening"
        found.append(
            Caution(
                topic="falling product",
                text=f"The bed is {where}: powders let go without warning and all at once. Keep people out from below, shut "
                "the opening mechanically for any work there, put a catch tray under it.",
            )
        )
    if case.setting.kind == "freeboard" and answer is not Answer.HELD:
        found.append(
            Caution(
                topic="thrown product",
                text="Grains may fly over the rim: cover the vessel, shield eyes, keep what they could fall into closed.",
            )
        )
    if not material.free_flowing and (hanging or answer is not Answer.NOT_HELD):
        found.append(
            Caution(
                topic="measure the cohesion",
                text="The verdict stands on a strength that moisture, drying, charge, time and consolidation change several "
                "times over: measure it on the lot in hand (shear cell), not in a table"
                + (", and under vibration, which weakens powders." if acceleration is not None else "."),
            )
        )
    found += product_cautions(material.hazards, temperature=None)
    topics = {topic for topic, _ in material.hazards}
    if "dust explosion" not in topics and material.d10 < _EXPLOSIBLE_BELOW and material.name == "custom":
        found.append(
            Caution(
                topic="dust explosion",
                text=f"Grains of {1e6 * material.d10:.0f} um are fine enough: if the product is combustible, its dust can "
                "explode (500 um is the usual border, NFPA 652, from memory). Find out before anything raises a cloud.",
            )
        )
    if "inhalation" not in topics and material.d10 < _INHALABLE_BELOW:
        found.append(
            Caution(
                topic="inhalation",
                text=f"A tenth of it is finer than {1e6 * material.d10:.0f} um and can be breathed in (below about 100 um, "
                "ISO 7708, from memory): enclose it, extract the dust.",
            )
        )
    if acceleration is not None and material.d50 < _CHARGES_BELOW and not moisture:
        found.append(
            Caution(
                topic="static charge",
                text="Dry fine grains that rub on a wall charge it and themselves: earth the vessel and all metal near it; a "
                "spark may light dust or vapour, and charge changes how the powder sticks.",
            )
        )
    if acceleration is not None and case.frequency is not None:
        if segregates(fine=material.d10, coarse=material.d90) and case.gamma > 1.0:
            sifting = " (the fine grains even fall between the coarse ones at rest)" if sifts_through(
                fine=material.d10, coarse=material.d90
            ) else ""
            found.append(
                Caution(
                    topic="segregation",
                    text=f"Sizes spread {material.d90 / material.d10:.2g}-fold: shaken above Gamma 1 they part, from about "
                    f"1.3-fold on{sifting}. A blend does not stay blended.",
                )
            )
        found.append(
            Caution(
                topic="settling",
                text="Shaking packs the bed denser: its level sinks, and a powder gains strength, so that afterwards it may "
                "not flow where it did before.",
            )
        )
        found += machine_cautions(frequency=case.frequency, acceleration=acceleration)
    return (*found, *trial_cautions(stand_in="a harmless powder"))


def bed_assumptions(case: BedCase, *, moisture: float | None = None) -> tuple[str, ...]:
    """Return what the verdict takes for granted."""
    material, kind = case.material, case.setting.kind
    lines = ["vertical sine, rigid vessel, no tilt, no knocks, no gas blown in or out"]
    if case.frequency is not None:
        lines.append("steady drive: run-up and run-down pass other frequencies and are not covered")
    lines += material.assumed
    if kind == "freeboard":
        lines.append(
            "the bed flies as one inelastic body without gas or wall friction, both of which lower the throw; level fill; "
            f"nothing leaves the base up to Gamma {QUIET_GAMMA:g}"
        )
        source = "as given" if case.restitution is not None else "assumed for a bed of this depth in grains"
        lines.append(f"restitution of a grain on the surface: {case.grain_restitution:g}, {source}")
        lines.append("grains that others strike in flight are not covered")
    if kind in ("outlet", "slot_outlet"):
        lines.append("flat bottom (the weakest arch); the outlet is round or a slot with sharp edges, open to the air")
        lines.append("an arch of grains without cohesion is never counted as holding")
    if kind in ("open_bottom", "pocket"):
        lines.append("what holds is the strength of the powder and the friction of the wall; no lid, no cloth, no grid below")
        lines.append("the plug is whole, from wall to wall, without cracks; its lower face is flat")
        if material.sources.get("wall_friction") not in (None, "given by the user"):
            lines.append(
                f"wall friction {material.wall_friction:.3g} is a typical one from the table: measure it on your wall"
            )
    if kind == "pocket":
        lines.append(
            f"gas-tight above the bed, air at 20 degC, {1e-3 * case.ambient_pressure:.4g} kPa; no channels; the bed may sink "
            f"{1e3 * case.allowed_drop:.3g} mm"
        )
    if not material.free_flowing:
        spread = case.strength_margin
        if case.gamma > 0.0:
            lines.append("strength as at rest, though vibration is known to weaken powders (common practice)")
        lines.append(f"strengths of powders scatter: a factor of {spread:.3g} is asked for")
        lines.append("the yield strength is that of the powder near the opening, where little weighs on it")
        lines.append("tensile strength from the yield strength by a straight yield locus at the angle of repose, "
                     f"{math.degrees(material.angle_of_repose):.0f} degrees")
    if moisture is not None:
        lines.append("the strength of liquid bridges is shown and not credited: roughness lowers it, often tenfold")
    if powder_group(diameter=material.d50, particle_density=material.particle_density) == "A":
        lines.append("settled bed: freshly filled or aerated it may run like a liquid (group A)")
    return tuple(lines)
