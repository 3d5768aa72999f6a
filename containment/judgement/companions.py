"""Limits beside the edges of an ideal layer: drag of the walls, a covered surface, tilt, droplets, gas at the base."""

import math
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.given.vessel import Annulus, Box, Cylinder, Slot
from containment.given.waveforms import PURE_SINE
from containment.judgement.case import Case
from containment.judgement.findings import Caution, Limit
from containment.judgement.operating_point import OperatingPoint
from containment.physics.layers import LayerModel

__all__ = ["companion_limits", "dragged_layer", "gas_caution", "tilt_modes"]

Real = npt.NDArray[np.float64]

WALL_DRAG: Final = "lower edge with the drag of the side walls"
COVERED_LOWER: Final = "lower edge if a skin covers the surface"
COVERED_UPPER: Final = "upper edge if a skin covers the surface"
TILT: Final = "tilt at which the mean surface moves a tenth of the depth"

_THIN_LAYER: Final = 0.1
"""sqrt(nu/w) over the width up to which the drag of the walls is a boundary layer's (common practice)."""


def companion_limits(case: Case, point: OperatingPoint) -> list[Limit]:
    """Return the limits beside the edges at a drive point."""
    if case.vessel.contact_line == "pinned" or case.waveform is not PURE_SINE:
        return []  # these limits are known for a sliding contact line and a sine; the assumptions say so
    return [*_wall_drag(case, point), *_covered(case, point), *_tilt(case, point), *_droplets(case, point)]


def _edge_limit(name: str, value: float, bound: float, *, above: bool, source: str, remark: str) -> Limit:
    """Return a limit that the acceleration must stay above, or below."""
    finite = bound if math.isfinite(bound) else None
    ok = value > bound if above else value < bound
    ratio = None if finite is None or bound == 0.0 else (value / bound if above else bound / value)
    return Limit(name=name, value=value, bound=finite, unit="m/s^2", ok=ok, source=source, ratio=ratio, remark=remark)


def dragged_layer(case: Case) -> LayerModel | None:
    """Return the layer with the drag of its side walls, for the lower edge; None where that is not modelled."""
    vessel, around = case.vessel, case.surroundings
    if vessel.narrowest is None or around.below is not None or around.cushion is not None:
        return None
    from containment.physics import wall_drag
    from containment.physics.dispersion import Layer

    if not isinstance(case.layer, Layer):
        return None
    spectrum, depth = case.spectrum, vessel.depth
    match vessel:
        case Cylinder():
            factors = wall_drag.cylinder_wall_factors(spectrum, radius=0.5 * vessel.diameter, depth=depth)
        case Box():
            factors = wall_drag.box_wall_factors(spectrum, width=vessel.width, length=vessel.length, depth=depth)
        case Annulus():
            factors = wall_drag.annulus_wall_factors(
                spectrum, inner=0.5 * vessel.inner_diameter, outer=0.5 * vessel.outer_diameter, depth=depth
            )
        case Slot():
            factors = wall_drag.slot_wall_factors(spectrum, width=vessel.width, depth=depth)
        case _:
            return None
    return wall_drag.DraggedLayer(layer=case.layer, wall_factor=factors)


def _wall_drag(case: Case, point: OperatingPoint) -> list[Limit]:
    """Return the lower edge with the drag of the walls, which weakens the hold; the upper edge is left without it."""
    layer = dragged_layer(case) if point.lower > 0.0 else None
    if layer is None:
        return []
    from containment.physics import wall_drag

    share = float(
        wall_drag.boundary_layer_share(
            point.frequency, kinematic_viscosity=case.liquid.viscosity / case.liquid.density,
            width=case.vessel.narrowest,  # type: ignore[arg-type]
        )
    )
    lower = case.lower_edge(point.frequency, layer=layer)
    remark = f"boundary layer {share:.2g} of the width"
    if share > _THIN_LAYER:
        remark += "; too thick for the formula, an estimate only"
    return [
        _edge_limit(
            WALL_DRAG, point.acceleration, lower, above=True, remark=remark,
            source="boundary layer at the walls, leading order (Miles 1967, from memory)",
        )
    ]  # fmt: skip


def _covered(case: Case, point: OperatingPoint) -> list[Limit]:
    around = case.surroundings
    if case.liquid.rheology is not None:
        return []
    if around.surface is not None or around.film_modulus is not None or around.below is not None:
        return []
    edges = case.edges(np.array([point.frequency]), layer=case.layer_with(surface="covered"))
    source = "layer under a film that does not stretch"
    remark = "nobody said whether the surface is clean (--surface); a range, not a bound, for films between"
    a = point.acceleration
    return [
        _edge_limit(COVERED_LOWER, a, float(edges.lower[0]), above=True, source=source, remark=remark),
        _edge_limit(COVERED_UPPER, a, float(edges.upper[0]), above=False, source=source, remark=remark),
    ]


def tilt_modes(case: Case) -> tuple[Real, Real]:
    """Return the wavenumbers that a tilt moves (1/m) and the part of the slope that each takes at the wall (m).

    Both are empty where no tilt is considered.
    """
    vessel = case.vessel
    none = np.empty(0)
    if case.surroundings.below is not None or case.liquid.rheology is not None:
        return none, none
    from containment.physics import tilt

    spectrum = case.spectrum
    few = 40
    if isinstance(vessel, Cylinder):
        ones = spectrum.discrete[spectrum.first == 1][:few]
        return ones, tilt.cylinder_tilt_heights(ones, radius=0.5 * vessel.diameter)
    if isinstance(vessel, Annulus):
        ones = spectrum.discrete[spectrum.first == 1][:few]
        return ones, tilt.annulus_tilt_heights(ones, inner=0.5 * vessel.inner_diameter, outer=0.5 * vessel.outer_diameter)
    if isinstance(vessel, Slot | Box):
        width = max(vessel.width, vessel.length) if isinstance(vessel, Box) else vessel.width
        waves = np.arange(1, 2 * few, 2)
        return waves * math.pi / width, tilt.box_tilt_heights(waves, width=width)
    return none, none


def _tilt(case: Case, point: OperatingPoint) -> list[Limit]:
    ones, heights = tilt_modes(case) if point.lower > 0.0 and point.inside else (np.empty(0), np.empty(0))
    if not len(ones):
        return []
    from containment.physics import tilt

    a = point.acceleration * float(case.gain(point.frequency)[0])
    lower = case.lower_roots(point.frequency, ones)
    if np.any((case.layer.stiffness(ones) < 0.0) & (lower == 0.0)):
        return []  # a mode falls, slowly enough for the dwell: it has no mean position to tilt about
    stiffness = tilt.mean_stiffness(
        ones, a, lower, density=case.liquid.density, surface_tension=case.liquid.surface_tension
    )
    bound = float(tilt.largest_tilt(heights, stiffness, freeboard=0.1 * case.vessel.depth))
    asked = case.surroundings.tilt or 0.0
    return [
        Limit(
            name=TILT, value=asked, bound=bound, unit="rad", ok=asked < bound,
            source="mean force of fast shaking, leading order: an estimate (Landau & Lifshitz, section 30, from memory)",
            ratio=bound / asked if asked else None, remark="level the vessel to well within this",
        )
    ]  # fmt: skip


def _droplets(case: Case, point: OperatingPoint) -> list[Limit]:
    """Droplets are shed from waves: below the upper edge the surface carries none but those of the meniscus."""
    if case.surroundings.below is not None or not math.isfinite(point.upper):
        return []
    from containment.physics.droplets import droplet_ejection_acceleration

    ejection = float(
        droplet_ejection_acceleration(
            point.frequency, density=case.liquid.density, viscosity=case.liquid.viscosity,
            surface_tension=case.liquid.surface_tension,
        )
    )  # fmt: skip
    return [
        _edge_limit(
            "droplets from waves on the surface", point.acceleration, max(ejection, point.upper), above=False,
            source="Goodridge et al. 1997, coefficients from memory", remark="a flat surface sheds none",
        )
    ]  # fmt: skip


def gas_caution(case: Case, frequency: float, acceleration: float) -> Caution:
    """Return the caution on gas in the product: where its bubbles go, and what they do there."""
    around = case.surroundings
    if around.cushion is not None:
        from containment.physics.bubbles import bubble_sinking_distance

        moved = acceleration * float(case.gain(frequency)[1])
        distance = float(
            bubble_sinking_distance(moved, density=case.liquid.density, ambient_pressure=around.ambient_pressure)
        )
        sinks = distance < case.vessel.depth
        where = f"those deeper than {1e3 * distance:.3g} mm under the upper surface sink" if sinks else "they rise"
        return Caution(
            topic="gas in the product",
            text=f"Small bubbles are pushed by the vibration: {where} (Bleich 1956, from memory). They soften the product and "
            "the trapped gas below it: de-aerate.",
        )
    from containment.physics.bubbles import largest_gas_gap

    gap = float(
        largest_gas_gap(
            frequency, amplification=1.1, density=case.liquid.density, depth=case.vessel.depth,
            ambient_pressure=case.surroundings.ambient_pressure,
        )
    )  # fmt: skip
    return Caution(
        topic="gas in the product",
        text="Bubbles gather between layer and base, where none can leave: "
        f"{1e3 * gap:.2g} mm of gas there makes the layer move 10 % more than the vessel. De-aerate the product.",
    )
