"""How a bed behaves at a drive point, beyond whether it stays: flight, landings, gas, stress, settling, cohesion."""

import math
from dataclasses import asdict, dataclass
from typing import Any, Final

from containment.constants import STANDARD_GRAVITY
from containment.judgement.bed_case import BedCase
from containment.physics.bed.cohesion import bond_number, contact_force, tensile_strength
from containment.physics.bed.flight import flight, landing_pattern
from containment.physics.bed.gas_drag import flight_drag, gas_compliance
from containment.physics.bed.liquid_bridge import bridge_force, bridge_strength
from containment.physics.bed.permeability import permeability
from containment.physics.bed.powder_group import compaction_drop, powder_group
from containment.physics.bed.wall_stress import lateral_stress_ratio, vertical_stress

__all__ = ["BedBehaviour", "bed_behaviour"]

_PATTERNS_UP_TO: Final = 12.0


@dataclass(frozen=True, slots=True, kw_only=True)
class BedBehaviour:
    """Figures that explain a verdict; SI, None where they do not apply.

    Attributes
    ----------
    powder_group : str
        Geldart group in air.
    gamma : float
        A w^2/g.
    flight_time_s, landing_velocity_m_s, gap_m : float or None
        Longest flight of the settled pattern without gas; speed of its landing; gap.
    flights_in_pattern : int or None
        Flights after which the pattern repeats; None where it does not, or where the bed rides.
    gap_with_gas_m : float or None
        Largest gap with the drag of gas that has to pass the bed.
    gas_drag, gas_compliance : float or None
        Both dimensionless: the gas matters above about 0.1; it counts as incompressible below about 1.
    permeability_m2 : float
        Of the bed.
    base_stress_at_rest_Pa, base_stress_bound_Pa : float
        With wall friction at rest; without it, shaken.
    level_drop_m : float
        By which shaking can lower the level.
    bond_number : float
        Of the mean grain, from the yield strength.
    bridge_strength_Pa, bridge_bond_number : float or None
        Of liquid bridges, an upper estimate; None where no moisture is given.
    """

    powder_group: str
    gamma: float
    flight_time_s: float | None
    landing_velocity_m_s: float | None
    gap_m: float | None
    flights_in_pattern: int | None
    gap_with_gas_m: float | None
    gas_drag: float | None
    gas_compliance: float | None
    permeability_m2: float
    base_stress_at_rest_Pa: float
    base_stress_bound_Pa: float
    level_drop_m: float
    bond_number: float
    bridge_strength_Pa: float | None
    bridge_bond_number: float | None

    def to_dict(self) -> dict[str, Any]:
        """Return the figures as plain JSON types."""
        return asdict(self)


def bed_behaviour(case: BedCase, *, moisture: float | None = None) -> BedBehaviour:
    """Return the figures of a case.

    Raises
    ------
    NotComputableError
        A moisture beyond what separate liquid bridges hold.
    """
    material, vessel, g = case.material, case.vessel, STANDARD_GRAVITY
    grain = {"diameter": material.d50, "voidage": material.voidage}
    tension = float(tensile_strength(material.yield_strength, friction_angle=material.angle_of_repose))
    weight = {"diameter": material.d50, "particle_density": material.particle_density, "gravity": g}
    time = landing = gap = gap_gas = drag = compliance = None
    count = None
    upright = case.setting.kind in ("freeboard", "outlet", "slot_outlet")
    if case.frequency is not None and case.gamma > 0.0:
        w = 2.0 * math.pi * case.frequency
        drag = float(flight_drag(**grain, bulk_density=material.bulk_density, angular_frequency=w))
        compliance = float(
            gas_compliance(**grain, depth=vessel.depth, angular_frequency=w, ambient_pressure=case.ambient_pressure)
        )
        first = flight(case.gamma) if upright else None
        if first is not None:
            pattern = landing_pattern(case.gamma, most=128) if case.gamma <= _PATTERNS_UP_TO else ()
            count = len(pattern) or None
            longest = max(pattern or (first,), key=lambda f: f.duration)
            time, landing = longest.duration / w, longest.landing_velocity * g / w
            gap = first.gap * g / w**2
            damped = flight(case.gamma, drag=drag)
            gap_gas = damped.gap * g / w**2 if damped is not None else 0.0
    rest = float(
        vertical_stress(
            depth=vessel.depth, bulk_density=material.bulk_density, perimeter_ratio=case.perimeter_ratio,
            wall_friction=material.wall_friction, stress_ratio=lateral_stress_ratio(material.angle_of_repose), gravity=g,
        )
    )  # fmt: skip
    bridge = bridge_bond = None
    if moisture is not None:
        bridge = bridge_strength(**grain, moisture=moisture, particle_density=material.particle_density)
        force = float(bridge_force(diameter=material.d50)) if moisture > 0.0 else 0.0
        bridge_bond = float(bond_number(force, **weight))
    return BedBehaviour(
        powder_group=powder_group(diameter=material.d50, particle_density=material.particle_density),
        gamma=case.gamma, flight_time_s=time, landing_velocity_m_s=landing, gap_m=gap, flights_in_pattern=count,
        gap_with_gas_m=gap_gas, gas_drag=drag, gas_compliance=compliance,
        permeability_m2=float(permeability(**grain)),
        base_stress_at_rest_Pa=rest, base_stress_bound_Pa=case.load * vessel.depth,
        level_drop_m=compaction_drop(depth=vessel.depth, voidage=material.voidage),
        bond_number=float(bond_number(contact_force(tension, **grain), **weight)),
        bridge_strength_Pa=bridge, bridge_bond_number=bridge_bond,
    )  # fmt: skip
