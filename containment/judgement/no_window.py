"""Why a layer has no holding window, and what would open one: tried out, not guessed."""

import dataclasses
import math

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.given.drive import DriveLimits
from containment.given.liquid import Liquid
from containment.given.vessel import Annulus, Box, Cylinder, Slot, Vessel
from containment.judgement.case import Case
from containment.judgement.window import HoldingWindow

__all__ = ["why_no_window"]

Real = npt.NDArray[np.float64]

_TRIED_VISCOSITIES = (2.0, 5.0, 10.0, 30.0, 100.0, 300.0, 1000.0, 1e4)
_TRIED_SIZES = (0.8, 0.6, 0.4, 0.25, 0.15, 0.1, 0.05)


def why_no_window(case: Case, window: HoldingWindow, drive: DriveLimits) -> HoldingWindow:
    """Return the window, with the reason filled in where nothing holds within the limits."""
    if window.minimum_acceleration is not None or case.unshaken.growth_rate <= case.allowance.growth:
        return window
    waves_allow = window.lower < window.upper
    finite = np.isfinite(window.lower)
    if not finite.any():
        if case.vessel.kind == "unbounded" and case.allowance.growth == 0.0:
            reason = "a layer without side walls always has a wave long enough to fall; state a dwell, or give the vessel walls"
        else:
            reason = (
                f"no amplitude up to {1e3 * case.amplitude_bound:g} mm holds its slowest modes for ever; "
                + ("state the dwell" if case.allowance.dwell is None else "a shorter dwell is needed")
            )
    elif waves_allow.any():
        i = int(np.flatnonzero(waves_allow)[np.argmin(window.lower[waves_allow])])
        least, f = float(window.lower[i]), float(window.frequencies[i])
        stroke = 2e3 * least / (2.0 * math.pi * f) ** 2
        ends = ["the drive"] if drive.stated else []
        what = " or ".join([*ends, "pull-off from the base", f"the amplitude searched ({1e3 * case.amplitude_bound:g} mm)"])
        reason = (
            f"{what} ends below what holds: about {least / STANDARD_GRAVITY:.3g} g_n at {f:.3g} Hz "
            f"({stroke:.3g} mm peak to peak) is needed"
        )
    else:
        reason = "waves break up the surface before it is held, at every frequency; " + _what_would_open(case, window)
    return dataclasses.replace(window, reason=reason)


def _what_would_open(case: Case, window: HoldingWindow) -> str:
    """Try higher viscosity and smaller vessels on the frequencies of the window, until one opens."""
    thin = slice(None, None, max(1, len(window.frequencies) // 16))
    f, most = window.frequencies[thin], window.drive_ceiling[thin]
    found = []
    viscosity = case.liquid.viscosity
    for factor in _TRIED_VISCOSITIES:
        thicker = Liquid(
            density=case.liquid.density, viscosity=viscosity * factor, surface_tension=case.liquid.surface_tension
        )
        if viscosity * factor > 1e3:
            break
        if _opens(dataclasses.replace(case, liquid=thicker), f, most):
            found.append(f"a viscosity of about {viscosity * factor:.2g} Pa s would open a window")
            break
    for factor in _TRIED_SIZES:
        smaller = _scaled(case.vessel, factor)
        if smaller is not None and _opens(dataclasses.replace(case, vessel=smaller), f, most):
            found.append(f"so would the same vessel at {factor:g} of its width" if found else
                         f"the same vessel at {factor:g} of its width would open one")  # fmt: skip
            break
    return "; ".join(found) if found else "neither a higher viscosity nor a smaller vessel opens one within what was tried"


def _opens(case: Case, frequencies: Real, most: Real) -> bool:
    edges = case.edges(frequencies)
    return bool(np.any(edges.lower < np.minimum(edges.upper, most)))


def _scaled(vessel: Vessel, factor: float) -> Vessel | None:
    match vessel:
        case Cylinder():
            return dataclasses.replace(vessel, diameter=vessel.diameter * factor)
        case Box():
            return dataclasses.replace(vessel, width=vessel.width * factor, length=vessel.length * factor)
        case Annulus():
            return dataclasses.replace(
                vessel, inner_diameter=vessel.inner_diameter * factor, outer_diameter=vessel.outer_diameter * factor
            )
        case Slot():
            return dataclasses.replace(vessel, width=vessel.width * factor)
    return None
