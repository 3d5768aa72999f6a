"""The free lower face of a bed that an arch carries: its grains, and the powder between arch and face, have to hang."""

from typing import Final

from containment.constants import STANDARD_GRAVITY
from containment.judgement.bed_case import BedCase, Mechanism
from containment.judgement.findings import Answer
from containment.physics.bed.below_arch import arch_rise, hanging_stress
from containment.physics.bed.cohesion import bond_number, contact_force, tensile_strength

__all__ = ["BELOW_ARCH", "lower_face", "powder_below_arch"]

BELOW_ARCH: Final = "powder below the arch"


def lower_face(case: BedCase, *, opening: float | None = None) -> Mechanism:
    """Return whether the heaviest grain that can fall hangs from its contacts; `opening` (m) stops wider grains."""
    material = case.material
    coarsest = material.d90 if opening is None else min(material.d90, opening)
    tension = float(tensile_strength(material.yield_strength, friction_angle=material.angle_of_repose))
    force = float(contact_force(tension, diameter=material.d50, voidage=material.voidage))
    # the contact is that of the mean grain; the heaviest grain has to hang from such a contact
    bond = float(
        bond_number(force, diameter=coarsest, particle_density=material.particle_density, gravity=STANDARD_GRAVITY)
    )
    needed = 1.0 + case.gamma
    return Mechanism(
        name="lower face of the bed", answer=case.graded(bond / needed), value=needed, bound=bond,
        unit="", ratio=bond / needed, source="Rumpf 1962, from memory; force balance",
        remark=f"Bond number of the coarse grains ({1e3 * coarsest:.3g} mm) on contacts of the mean strength",
    )  # fmt: skip


def powder_below_arch(case: BedCase, *, span: float | None, slope: float) -> Mechanism:
    """Return whether the powder between an arch of that span (m) and the flat lower face hangs by its tension.

    Where it does not, pieces may break off though the arch stays: marginal, as shear on their sides may still hold them.
    """
    name, source = BELOW_ARCH, "funicular arch, force balance; tension by a straight yield locus"
    strength = float(
        tensile_strength(case.material.yield_strength, friction_angle=case.material.angle_of_repose)
    )
    if span is None:
        return Mechanism(
            name=name, answer=Answer.NOT_HELD, value=None, bound=strength, unit="Pa", source=source, remark="no wall"
        )
    thick = float(arch_rise(span=span, slope=slope))
    load = float(
        hanging_stress(
            thickness=thick, bulk_density=case.material.bulk_density, gamma=case.gamma, gravity=STANDARD_GRAVITY
        )
    )
    ratio = strength / load if load > 0.0 else None
    enough = ratio is None or ratio >= 1.0
    # load and strength are both on the cautious side already: no further margin is asked for
    sure = enough and case.material.strength_measured and not case.material.free_flowing
    return Mechanism(
        name=name, answer=Answer.HELD if sure else Answer.MARGINAL, value=load, bound=strength, unit="Pa", ratio=ratio,
        source=source, remark=f"{1e3 * thick:.3g} mm of powder hang between the arch and the flat lower face",
    )  # fmt: skip
