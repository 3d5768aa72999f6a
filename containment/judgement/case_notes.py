"""What goes with every verdict on a liquid: assumptions, cautions, and the averaged estimate for explanation."""

import math

import numpy as np

from containment.constants import STANDARD_GRAVITY
from containment.given.drive import DriveLimits
from containment.given.waveforms import PURE_SINE
from containment.judgement.case import Case, cushion_state
from containment.judgement.cautions import machine_cautions, product_cautions, trial_cautions
from containment.judgement.companions import gas_caution
from containment.judgement.findings import Caution, seconds_text
from containment.judgement.window import SEARCH_RANGE

__all__ = ["assumptions", "averaged_estimate", "case_cautions"]


def averaged_estimate(case: Case, frequency: float) -> float:
    """Return the largest averaged estimate over the modes that fall at rest, m/s^2; 0 where none does."""
    k = case.spectrum.discrete
    top = case.capillary_wavenumber
    k = k[k < top]
    if case.unshaken.growth_rate == 0.0:
        return 0.0
    if not len(k):
        if case.spectrum.continuous_from >= top:
            return 0.0
        k = np.geomspace(max(case.spectrum.continuous_from, 1e-3 * top), 0.999 * top, 400)
    return float(np.max(case.layer.averaged_threshold(k, frequency)))


def case_cautions(case: Case, frequency: float | None, acceleration: float | None) -> tuple[Caution, ...]:
    """Return the cautions of a case, at a drive point (Hz, peak m/s^2) where one is meant."""
    liquid = case.liquid
    found: list[Caution] = []
    time = case.unshaken.time_to_spill
    if time is not None and case.unshaken.growth_rate > case.allowance.growth:
        found.append(
            Caution(
                topic="loss of power",
                text=f"Without shaking the product falls within about {seconds_text(time)}: a power failure, a stop or a "
                "trip drops it. Keep people, hands and heads out from below; put a catch tray under it; turn the vessel "
                "upright before any planned stop.",
            )
        )
    if frequency is not None and acceleration is not None:
        found.append(
            Caution(
                topic="start and stop",
                text="Bring the shaker to the point while the vessel is upright, then turn it; sweeping through other "
                "frequencies and levels upside-down leaves the window.",
            )
        )
        if case.surroundings.ambient_pressure > 1.01 * liquid.density * STANDARD_GRAVITY * case.vessel.depth:
            found.append(gas_caution(case, frequency, acceleration))
    found += product_cautions(liquid.hazards, temperature=liquid.temperature, flash_point=liquid.flash_point)
    if frequency is not None and acceleration is not None:
        found += machine_cautions(frequency=frequency, acceleration=acceleration)
    return (*found, *trial_cautions())


def assumptions(case: Case, drive: DriveLimits) -> tuple[str, ...]:
    """Return what the verdict takes for granted."""
    bear = case.allowance
    lines = [
        "linear theory: small slopes; a surface already far out of level, or splashed, may fall inside the window",
        f"{_liquid_text(case)} of one temperature, {_surface_text(case)}, no bubbles; rigid vessel moving vertically "
        + ("as a sine" if case.waveform is PURE_SINE else "with the stated harmonics; accelerations are its peaks"),
        _wall_text(case),
        f"amplitudes up to {1e3 * case.amplitude_bound:g} mm (zero to peak) are searched",
        f"unevenness at the start {1e3 * bear.unevenness:.3g} mm",
    ]
    if drive.frequency_range is None:
        lines.append(f"frequencies from {SEARCH_RANGE[0]:g} to {SEARCH_RANGE[1]:g} Hz are searched")
    if bear.dwell is not None:
        lines.append(
            f"upside-down for {bear.dwell:.4g} s: waves may grow {bear.amplification:.3g}-fold in that time, "
            f"{bear.growth:.3g} 1/s"
        )
    if case.spectrum.continuous_from and math.isfinite(case.spectrum.continuous_from):
        lines.append(
            f"modes one by one down to a wavelength of {2e3 * math.pi / case.spectrum.continuous_from:.3g} mm; below it "
            "every wavelength counts"
        )
    if case.surroundings.cushion is not None:
        gas = cushion_state(case.liquid, case.vessel, case.surroundings)
        lines.append(
            f"trapped gas {1e3 * gas['height_m']:.3g} mm high under its weight, resonance {gas['resonance_Hz']:.3g} Hz; "
            "accelerations are the vessel's, the layer moves more below resonance and less above"
        )
        lines.append(
            "layer floating on trapped gas: a spring without leak; both surfaces are taken as if the other side were a rigid "
            "base, good for wavelengths below about three depths; near resonance take the edges as estimates"
        )
    if case.vessel.kind == "unbounded":
        longest = 2.0 * math.pi / (1e-3 * min(case.capillary_wavenumber, 1.0 / case.vessel.depth))
        lines.append(f"no side walls: every wavelength up to {longest:.3g} m counts; longer waves hardly move in the dwell")
    if case.vessel.kind == "slot":
        lines.append("slot: waves across its width only; along its length longer waves may fall")
    if case.liquid.vapour_pressure is None:
        lines.append("vapour pressure unknown, taken as 0")
    return tuple(lines)


def _surface_text(case: Case) -> str:
    around = case.surroundings
    if around.below is not None:
        return f"clean interface with {around.below.name} below"
    if around.film_modulus is not None:
        return f"surface film of {1e3 * around.film_modulus:.3g} mN/m"
    return "surface covered by a skin" if around.surface == "covered" else "clean surface"


def _wall_text(case: Case) -> str:
    if case.vessel.contact_line == "pinned":
        return (
            "contact line held at the rim of a brimful vessel; drag of the side walls, a skin and tilt are not judged for it; "
            "error bounds of its edges are estimates"
        )
    text = "contact line free to slide at 90 degrees; the small waves that the meniscus sends out are left out; "
    if case.waveform is not PURE_SINE:
        return text + "drag of the side walls, a skin and tilt are not judged for this motion"
    return text + "the drag of the side walls counts against the lower edge and is left out of the upper one"


def _liquid_text(case: Case) -> str:
    if case.liquid.rheology is None:
        return "Newtonian liquid"
    return f"linearly viscoelastic liquid ({case.liquid.rheology['model']})"
