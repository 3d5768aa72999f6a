"""Limits other than the waves: pull-off from the base, and what the drive can do. Shared by liquids and beds."""

import math
from typing import Final

from containment.constants import STANDARD_ATMOSPHERE, STANDARD_GRAVITY
from containment.given.drive import DriveLimits
from containment.given.waveforms import PURE_SINE, Waveform
from containment.judgement.findings import Limit

__all__ = ["DATA_SHEET", "drive_limits", "pull_off_acceleration", "pull_off_limit"]

DATA_SHEET: Final = "the drive's data sheet, as given"


def pull_off_acceleration(
    *, density: float, depth: float, vapour_pressure: float, ambient_pressure: float = STANDARD_ATMOSPHERE
) -> float:
    """Return the peak acceleration at which the pressure at the base falls to the vapour pressure, m/s^2.

    p_ambient - rho h (g + a) = p_vapour, for a layer that hangs below its base; 0 where it pulls off at rest.

    Notes
    -----
    Rigid layer, no gas in solution, no tensile strength of the liquid: the liquid may bear more, an aerated one less.

    Examples
    --------
    >>> round(pull_off_acceleration(density=1261.0, depth=0.03, vapour_pressure=0.0) / 9.80665)
    272
    """
    return max(0.0, (ambient_pressure - vapour_pressure) / (density * depth) - STANDARD_GRAVITY)


def pull_off_limit(
    *,
    density: float,
    depth: float,
    vapour_pressure: float | None,
    acceleration: float,
    ambient_pressure: float = STANDARD_ATMOSPHERE,
) -> Limit:
    """Return the pull-off limit at a peak acceleration, m/s^2."""
    vapour = vapour_pressure or 0.0
    weight = density * depth * (STANDARD_GRAVITY + acceleration)
    pressure = ambient_pressure - weight
    remark = "dissolved or entrained gas comes out earlier: de-aerate the product"
    if vapour_pressure is None:
        remark = "vapour pressure unknown, taken as 0; " + remark
    return Limit(
        name="pull-off from the base (lowest absolute pressure there)", value=pressure, bound=vapour, unit="Pa",
        ok=pressure > vapour, ratio=(ambient_pressure - vapour) / weight,
        source="hydrostatics of a rigid layer, p - rho h (g + a)", remark=remark,
    )  # fmt: skip


def drive_limits(
    drive: DriveLimits,
    *,
    frequency: float,
    acceleration: float,
    product_mass: float | None,
    shape: Waveform = PURE_SINE,
) -> list[Limit]:
    """Return the drive's limits at a drive point (Hz, peak m/s^2 of the whole motion) with the product on it (kg)."""
    w = 2.0 * math.pi * frequency
    mass = (drive.moving_mass or 0.0) + (product_mass or 0.0)
    level = acceleration / shape.peak_acceleration
    rows = (
        ("stroke of the drive (peak to peak)", 2.0 * shape.amplitude * level / (w * w), drive.max_stroke, "m"),
        ("velocity of the drive (peak)", shape.peak_velocity * level / w, drive.max_velocity, "m/s"),
        ("acceleration of the drive (peak)", acceleration, drive.max_acceleration, "m/s^2"),
        ("force of the drive (peak)", mass * acceleration, drive.max_force, "N"),
    )
    limits = [
        Limit(
            name=name, value=value, bound=bound, unit=unit, ok=value <= bound * (1.0 + 1e-9), ratio=bound / value,
            source=DATA_SHEET,
            remark=f"moving mass {drive.moving_mass:g} kg and product {product_mass or 0.0:.3g} kg" if unit == "N" else "",
        )
        for name, value, bound, unit in rows
        if bound is not None
    ]  # fmt: skip
    if drive.frequency_range is not None:
        low, high = drive.frequency_range
        for name, bound, ok in (
            ("lowest frequency of the drive", low, frequency >= low * (1.0 - 1e-9)),
            ("highest frequency of the drive", high, frequency <= high * (1.0 + 1e-9)),
        ):
            limits.append(Limit(name=name, value=frequency, bound=bound, unit="Hz", ok=ok, source=DATA_SHEET))
    return limits
