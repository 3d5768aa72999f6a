"""Growth rate over wavenumber at a drive point, beside that of the layer at rest: what shaking does to each wave."""

import math
from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.given.waveforms import PURE_SINE
from containment.judgement.case import Case
from containment.judgement.rheology import depends_on_shear
from containment.physics.floquet import exponents, growing_exponents, static_growth_rate

__all__ = ["GrowthCurve", "growth_curve"]

Real = npt.NDArray[np.float64]

_NODES: Final = 241
_MOST_MODES: Final = 60


@dataclass(frozen=True, slots=True, kw_only=True)
class GrowthCurve:
    """Growth rates, 1/s, over wavenumbers, 1/m.

    Attributes
    ----------
    wavenumber, shaken, at_rest : array, shape (nodes,)
        Largest growth rate found at the drive point (not-a-number where none was found), and that without shaking, 0 where
        the surface tension holds the wave.
    modes, mode_rates : array, shape (modes,)
        The longest modes of the vessel and their growth rates at the drive point; empty without walls.
    allowed : float
        Growth rate that the dwell allows.
    """

    wavenumber: Real
    shaken: Real
    at_rest: Real
    modes: Real
    mode_rates: Real
    allowed: float


def growth_curve(case: Case, *, frequency: float, acceleration: float) -> GrowthCurve | None:
    """Return the growth rates at a drive point (Hz, peak m/s^2), or None where they are not known mode by mode.

    Parameters
    ----------
    case : Case
        Liquid and vessel; a contact line that slides, a sine, no trapped gas.
    frequency, acceleration : float
        Drive point.

    Notes
    -----
    Rates above 0 are the largest there are at the drive frequency or half of it; those below are the slowest decay that
    Newton's method finds, which is not a proof: the verdict counts apart.

    Examples
    --------
    >>> from containment.given.liquid import Liquid
    >>> from containment.given.vessel import Cylinder
    >>> from containment.judgement.case import Case, allowance
    >>> syrup = Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
    >>> case = Case(syrup, Cylinder(diameter=0.07, depth=0.03), allowance(depth=0.03))
    >>> curve = growth_curve(case, frequency=50.0, acceleration=400.0)
    >>> bool(curve.at_rest.max() > 1.0), bool(curve.mode_rates.max() < 0.0)
    (True, True)
    """
    if depends_on_shear(case.liquid) or case.vessel.contact_line == "pinned":
        return None
    if case.waveform is not PURE_SINE or case.surroundings.cushion is not None:
        return None
    w = 2.0 * math.pi * frequency
    modes = case.spectrum.discrete[:_MOST_MODES]
    longest = float(modes[0]) if len(modes) else 0.1 * case.capillary_wavenumber
    top = 3.0 * max(case.capillary_wavenumber, longest, _resonant(case, w))
    k = np.geomspace(0.7 * longest, top, _NODES)
    return GrowthCurve(
        wavenumber=k, shaken=_rates(case, k, w, acceleration), at_rest=static_growth_rate(case.layer, k), modes=modes,
        mode_rates=_rates(case, modes, w, acceleration) if len(modes) else np.zeros(0), allowed=case.allowance.growth,
    )  # fmt: skip


def _resonant(case: Case, w: float) -> float:
    """Return about the wavenumber that answers at half the drive frequency, from gamma k^3 / rho = w^2 / 4."""
    return float((0.25 * w * w * case.liquid.density / case.liquid.surface_tension) ** (1.0 / 3.0))


def _rates(case: Case, k: Real, w: float, acceleration: float) -> Real:
    decaying = exponents(case.layer, k, w, acceleration).exponent.real
    growing = growing_exponents(case.layer, k, w, acceleration).exponent.real
    result: Real = np.where(np.isfinite(growing), growing, np.where(decaying > 0.0, np.nan, decaying))
    return result
