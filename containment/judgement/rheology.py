"""Liquids that are not Newtonian: a complex viscosity, or the viscosity at the shear rate that the layer sees."""

import dataclasses
import math
from collections.abc import Mapping
from typing import TYPE_CHECKING, Any

import numpy as np

from containment.errors import InputError
from containment.given.liquid import Liquid
from containment.given.rheology import LINEAR_MODELS, SHEAR_MODELS
from containment.given.vessel import Cylinder, Slot
from containment.judgement.case import Case
from containment.judgement.findings import Limit

if TYPE_CHECKING:
    from containment.physics.generalised_newtonian import ViscosityCurve

__all__ = ["depends_on_shear", "is_linear", "plug_limit", "refuse_where_unknown", "stand_ins"]


def is_linear(liquid: Liquid) -> bool:
    """Return whether a liquid is linearly viscoelastic."""
    return liquid.rheology is not None and liquid.rheology["model"] in LINEAR_MODELS


def depends_on_shear(liquid: Liquid) -> bool:
    """Return whether the viscosity of a liquid depends on the shear rate."""
    return liquid.rheology is not None and liquid.rheology["model"] in SHEAR_MODELS


def _curve(rheology: Mapping[str, Any]) -> "ViscosityCurve":
    from containment.physics import generalised_newtonian as curves

    model = rheology["model"]
    values = {key: float(rheology[key]) for key in SHEAR_MODELS[model]}
    made = {
        "carreau": curves.Carreau, "cross": curves.Cross, "power-law": curves.PowerLaw,
        "herschel-bulkley": curves.HerschelBulkley,
    }[model]  # fmt: skip
    result: ViscosityCurve = made(**values)
    return result


def stand_ins(case: Case, *, frequency: float) -> list[tuple[str, Liquid]]:
    """Return the Newtonian liquids that stand for a shear-dependent one at a drive frequency, Hz, with their names.

    The surface moves with its unevenness at the start and with the most that the process bears, at the drive frequency,
    in the longest mode; the viscosity at either shear rate is made consistent with the rate that it gives itself. In the
    limit of no motion the curve's own value at rest counts as well, where it is finite. The verdict takes the worst: the
    shear rate is an estimate, and the range between a bound only where both edges move one way with the viscosity.

    Raises
    ------
    NotComputableError
        No viscosity is consistent with the shear rate: the product acts as a solid.
    """
    from containment.physics.generalised_newtonian import consistent_viscosity, surface_shear_rate

    assert case.liquid.rheology is not None
    curve = _curve(case.liquid.rheology)
    discrete = case.spectrum.discrete
    k = float(discrete[0]) if len(discrete) else 0.5 * case.capillary_wavenumber
    w = 2.0 * math.pi * frequency
    bear = case.allowance

    def newtonian(viscosity: float) -> Liquid:
        return dataclasses.replace(case.liquid, viscosity=viscosity, rheology=None)

    def rate_at(amplitude: float, viscosity: float) -> float:
        layer = dataclasses.replace(case, liquid=newtonian(viscosity)).layer
        coefficient = layer.coefficient(np.array([1j * w]), np.array([k]))[0]
        resistance = 0.5 * case.liquid.density * float(coefficient.imag) / w
        return float(
            surface_shear_rate(amplitude, w, resistance, wavenumber=k, viscosity=viscosity, depth=case.vessel.depth)
        )

    found = []
    borne = bear.unevenness * bear.amplification
    amplitudes = (("as uneven as at the start", bear.unevenness), ("as uneven as is borne", borne))
    for name, amplitude in amplitudes:
        eta = consistent_viscosity(
            curve, lambda eta, a=amplitude: rate_at(a, eta), lowest=2e-6, highest=5e5  # type: ignore[misc]
        )
        found.append((name, newtonian(eta)))
    rest = float(curve.viscosity(0.0))
    if math.isfinite(rest) and rest > 0.0:
        found.append(("at rest", newtonian(rest)))
    return found


def plug_limit(case: Case, acceleration: float) -> Limit | None:
    """Return whether the yield stress holds a plug in an open tube or slot by itself, at a peak acceleration, m/s^2."""
    rheology = case.liquid.rheology
    if rheology is None or "yield_stress" not in rheology or not isinstance(case.vessel, Cylinder | Slot):
        return None
    from containment.physics.generalised_newtonian import plug_yield_stress

    # a slot bears the weight on two walls: the radius of a tube of the same load is its width
    radius = 0.5 * case.vessel.diameter if isinstance(case.vessel, Cylinder) else case.vessel.width
    needed = float(plug_yield_stress(acceleration, density=case.liquid.density, radius=radius))
    value = float(rheology["yield_stress"])
    return Limit(
        name="yield stress that holds a plug by itself in an open tube", value=value, bound=needed, unit="Pa",
        ok=value > needed, ratio=value / needed, source="force balance at the wall (common practice)",
        remark="shaking harms a plug: it is held best at rest",
    )  # fmt: skip


def refuse_where_unknown(case: Case) -> None:
    """Raise where a liquid that is not Newtonian meets surroundings that are not modelled for it."""
    around = case.surroundings
    if case.liquid.rheology is None:
        return
    if case.vessel.contact_line == "pinned" or around.below is not None or around.cushion is not None:
        raise InputError(f"liquid: {case.liquid.name} is not Newtonian; it is judged with a sliding contact line over gas only")
    if case.liquid.rheology["model"] == "maxwell":
        raise InputError(
            f"liquid: {case.liquid.name} as a pure Maxwell liquid has no viscosity at high frequency, so that no wave can be "
            "proven not to matter; give a jeffreys model with a small retardation"
        )
    if is_linear(case.liquid) and (around.surface == "covered" or around.film_modulus is not None):
        raise InputError(f"surface: a film on {case.liquid.name}, which is viscoelastic, is not modelled; leave it out")
