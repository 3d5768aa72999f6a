"""Largest Floquet multiplier of a shaken viscous layer by stepping the linear Navier-Stokes equations in time.

A check on the package that shares nothing with it: no impedance, no coefficients of harmonics, no continued fraction.
In depth the layer is resolved by clamped polynomials (`depth_elements`), in time one period is crossed in equal steps
of an implicit Radau IIA method. The same equations by Chebyshev collocation and full factorisation of every step stand
in `collocation`, and the tests hold one to the other.

In the frame of the vessel gravity along the inward normal of the surface is G(t) = G0 - sum_m a r_m cos(m w t + phi_m),
G0 = `gravity`: negative for a layer that hangs from its base, positive for one that lies on it. The default motion is
the pure cosine.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np
from scipy.optimize import brentq

from tests.independent.depth_elements import (
    DEEP,
    OutOfReachError,
    breakpoints,
    default_degree,
    depth_modes,
)
from tests.independent.surface_stepping import STAGES, frozen_exponents, period_map

__all__ = [
    "OutOfReachError",
    "growth_rate",
    "largest_multiplier",
    "largest_multiplier_checked",
    "multipliers",
    "static_growth_rate",
    "threshold",
]

COSINE = ((1, 1.0, 0.0),)
LARGEST_EXPONENT = 300.0
"""Growth exponents over half a period beyond this overflow."""
MOST_STEPS = 4000
STEPS_A_PERIOD = 24
STEPS_A_RADIAN = 0.75
"""Steps of the five-stage method for each unit of phase, or of growth exponent, of the free surface in a period."""

Components = tuple[tuple[int, float, float], ...]
"""Order, ratio and phase (rad) of each cosine of the drive."""


def _stiffness(*, wavenumber: float, density: float, surface_tension: float, gravity: float | np.ndarray) -> np.ndarray:
    """Return k^2 (rho G + gamma k^2): force on the motions per unit of surface displacement."""
    return np.asarray(wavenumber**2 * (density * np.asarray(gravity) + surface_tension * wavenumber**2))


def _check(**values: float) -> None:
    for name, value in values.items():
        least_included = name in ("acceleration", "surface_tension")
        if not (value >= 0 if least_included else value > 0):
            raise ValueError(f"{name} must be {'at least' if least_included else 'above'} 0, got {value}")


def _settings(
    *,
    wavenumber: float,
    depth: float,
    density: float,
    viscosity: float,
    surface_tension: float,
    acceleration: float,
    frequency: float,
    gravity: float = -9.80665,
    components: Components = COSINE,
    points: int | None = None,
    steps: int | None = None,
    layer: float | None = None,
    cut: float = DEEP,
    **_: float,
) -> dict[str, Any]:
    """Discretisation for a case: boundary layer to resolve, degree of the elements, steps a period.

    The steps follow the fastest motion of the surface at either extreme of gravity, and the fastest component of the
    drive.
    """
    crest = acceleration * sum(abs(ratio) for _, ratio, _ in components)
    fastest_component = max(m for m, _, _ in components)
    if layer is None:
        rate = max(2 * math.pi * frequency * fastest_component, math.sqrt(wavenumber * (crest + abs(gravity))))
        layer = math.sqrt(2 * viscosity / density / rate)
    if points is None:
        points = default_degree(breakpoints(wavenumber=wavenumber, depth=depth, layer=layer, cut=cut))
    if steps is None:
        modes = depth_modes(
            wavenumber=wavenumber,
            depth=depth,
            density=density,
            viscosity=viscosity,
            layer=layer,
            points=points,
            cut=cut,
        )
        falling, rising = (
            _stiffness(
                wavenumber=wavenumber, density=density, surface_tension=surface_tension, gravity=gravity + change
            )
            for change in (-crest, crest)
        )
        growth = max(0.0, frozen_exponents(modes, float(falling)).real.max()) / frequency
        turning = np.abs(frozen_exponents(modes, float(rising)).imag).max() / frequency
        if growth > 2 * LARGEST_EXPONENT:
            raise OutOfReachError(f"the surface grows by exp({growth / 2:.0f}) in half a period")
        steps = math.ceil(STEPS_A_PERIOD * fastest_component + STEPS_A_RADIAN * max(growth, turning))
        if steps > MOST_STEPS:
            raise OutOfReachError(f"{steps} steps a period, at most {MOST_STEPS} are affordable")
    return {"layer": layer, "points": points, "steps": steps}


def multipliers(
    *,
    wavenumber: float,
    depth: float,
    density: float,
    viscosity: float,
    surface_tension: float,
    acceleration: float,
    frequency: float,
    gravity: float = -9.80665,
    components: Components = COSINE,
    points: int | None = None,
    steps: int | None = None,
    stages: int = STAGES,
    start: float = 0.0,
    layer: float | None = None,
    cut: float | None = None,
) -> np.ndarray:
    """Floquet multipliers of the discretised layer, largest modulus first; parameters as in `largest_multiplier`.

    `start` is the phase of the drive (rad) at which the period begins: it moves no multiplier but does move the
    rounding. `layer` is the thickness of the boundary layers to resolve (m), to hold the elements fixed while the
    acceleration varies. `cut` is the depth, in units of 1/k, at which the layer is cut, `math.inf` for nowhere; the
    default is told in the notes on `largest_multiplier`.
    """
    _check(wavenumber=wavenumber, depth=depth, density=density, viscosity=viscosity, frequency=frequency)
    _check(acceleration=acceleration, surface_tension=surface_tension)
    if cut is None:
        case = {name: value for name, value in locals().items() if name != "cut"}
        return _cut_where_safe(**case)
    settings = _settings(
        wavenumber=wavenumber,
        depth=depth,
        density=density,
        viscosity=viscosity,
        surface_tension=surface_tension,
        acceleration=acceleration,
        frequency=frequency,
        gravity=gravity,
        components=components,
        points=points,
        steps=steps,
        layer=layer,
        cut=cut,
    )
    modes = depth_modes(
        wavenumber=wavenumber,
        depth=depth,
        density=density,
        viscosity=viscosity,
        layer=settings["layer"],
        points=settings["points"],
        cut=cut,
    )
    omega = 2 * math.pi * frequency

    def stiffness(t: np.ndarray) -> np.ndarray:
        shaking = np.zeros_like(t)
        for m, ratio, phase in components:
            shaking = shaking + ratio * np.cos(m * (omega * t + start) + phase)
        return _stiffness(
            wavenumber=wavenumber,
            density=density,
            surface_tension=surface_tension,
            gravity=gravity - acceleration * shaking,
        )

    matrix = period_map(modes, stiffness, period=1.0 / frequency, steps=settings["steps"], stages=stages)
    values = np.linalg.eigvals(matrix)
    return values[np.argsort(-np.abs(values))]


def _cut_where_safe(**case: Any) -> np.ndarray:
    """Multipliers of the layer cut at DEEP/k where that is harmless, of the whole depth where the motion reaches it."""
    values = multipliers(**case, cut=DEEP)
    k, depth = case["wavenumber"], case["depth"]
    if k * depth <= DEEP:
        return values
    growth = case["frequency"] * math.log(abs(values[0]))
    if growth > -0.5 * case["viscosity"] / case["density"] * k**2:
        return values
    if math.isinf(depth):
        raise OutOfReachError(f"growth rate {growth:g}/s: at infinite depth the liquid's interior decays no faster")
    return multipliers(**case, cut=math.inf)


def largest_multiplier(**case: Any) -> complex:
    """Largest Floquet multiplier by modulus, taken with an imaginary part of at least 0.

    Parameters
    ----------
    wavenumber : float
        k, 1/m.
    depth : float
        h, m; `math.inf` for a deep layer.
    density, viscosity, surface_tension : float
        rho (kg/m^3), mu (Pa s), gamma (N/m).
    acceleration : float
        Peak acceleration a of the drive, m/s^2.
    frequency : float
        Frequency of the drive, Hz.
    gravity : float
        G0, m/s^2; negative (the default, -9.80665) for a layer that hangs.
    components : tuple of (int, float, float)
        Order, ratio to `acceleration`, and phase of each cosine of the drive; one pure cosine by default.
    points : int, optional
        Degree of the polynomials on one element of depth.
    steps : int, optional
        Steps a period; by default enough for the fastest motion of the surface.

    Returns
    -------
    complex
        The multiplier over one period 1/frequency.

    Raises
    ------
    OutOfReachError
        If depth or time need more unknowns than are affordable, if the surface grows within a period beyond what double
        precision holds, or if an infinite depth has no answer of its own (see Notes). Elements grow geometrically, so
        neither k h nor thin boundary layers are out of reach by themselves.
    ValueError
        If a parameter is not positive.

    Notes
    -----
    A layer deeper than DEEP/k = 14/k is cut there. At growth rate s the slowest part of the motion fades with depth as
    exp(-q x), q^2 = k^2 + s/nu, so the base moves the multiplier by about exp(-2 q h): below 1e-12 for a neutral or
    growing layer, below 1e-8 for s > -nu k^2/2 (the tests double the cut). Where the largest multiplier decays faster,
    the whole depth is resolved; an infinite depth then raises OutOfReachError.

    Examples
    --------
    >>> case = dict(wavenumber=52.606, depth=0.03, density=1261.0, viscosity=1.41, surface_tension=0.0634)
    >>> case["frequency"] = 15.0
    >>> [abs(largest_multiplier(**case, acceleration=a)) > 1 for a in (0.0, 65.0)]
    [True, False]
    """
    value = multipliers(**case)[0]
    return complex(value.real, abs(value.imag))


def growth_rate(**case: Any) -> float:
    """Growth rate of the fastest motion over a period, 1/s; parameters as in `largest_multiplier`."""
    return float(case["frequency"] * math.log(abs(largest_multiplier(**case))))


def largest_multiplier_checked(**case: Any) -> tuple[complex, float]:
    """Largest multiplier and an estimate of its error, from a finer run that starts at the opposite phase of the drive.

    The opposite phase shows what rounding has taken: a surface that grows and shrinks by many powers of ten within a
    period loses digits. Returns the finer multiplier and its distance from the coarser run, the larger of that in
    modulus and that to the nearest multiplier.
    """
    coarse = multipliers(**case)
    settings = _settings(**case)
    finer = {
        "layer": settings["layer"],
        "points": settings["points"] + 4,
        "steps": math.ceil(1.6 * settings["steps"]),
        "start": case.get("start", 0.0) + math.pi,
    }
    fine = multipliers(**{**case, **finer})
    value = complex(fine[0].real, abs(fine[0].imag))
    nearest = float(np.abs(coarse - value).min())
    return value, max(nearest, abs(abs(coarse[0]) - abs(value)))


def threshold(*, bracket: tuple[float, float], growth: float = 0.0, tolerance: float = 1e-9, **case: Any) -> float:
    """Acceleration (m/s^2) inside `bracket` at which `growth_rate` equals `growth` (1/s), to the relative `tolerance`.

    Raises ValueError unless the growth rate less `growth` changes sign over the bracket. The elements of depth are held
    fixed over it.
    """
    fixed = {**case, **_settings(**case, acceleration=max(bracket))}

    def excess(acceleration: float) -> float:
        return growth_rate(**fixed, acceleration=acceleration) - growth

    ends = [excess(a) for a in bracket]
    if not ends[0] * ends[1] < 0:
        raise ValueError(f"growth less {growth:g}/s is {ends[0]:g} and {ends[1]:g} at {bracket}: none bracketed")
    return float(brentq(excess, *bracket, xtol=tolerance * max(bracket), rtol=max(tolerance, 1e-15)))


def static_growth_rate(
    *,
    wavenumber: float,
    depth: float,
    density: float,
    viscosity: float,
    surface_tension: float,
    gravity: float = -9.80665,
    points: int | None = None,
) -> float:
    """Growth rate of the layer at rest, 1/s: the largest real part among the exponents of the same motions.

    The eigenvalue solve leaves an error of rounding times the fastest rate, which swamps a slow film; Newton steps on
    s + force sum f_j^2/(s + rate_j) = 0, the same eigenvalue problem with the motions eliminated, take it away.
    """
    _check(wavenumber=wavenumber, depth=depth, density=density, viscosity=viscosity, surface_tension=surface_tension)
    force = float(_stiffness(wavenumber=wavenumber, density=density, surface_tension=surface_tension, gravity=gravity))
    # The free surface without viscosity turns or grows at this rate; its own layer is at least this thick.
    rate = math.sqrt(abs(force) / density / wavenumber)
    layer = math.sqrt(viscosity / density / rate) if rate > 0 else depth
    modes = depth_modes(
        wavenumber=wavenumber, depth=depth, density=density, viscosity=viscosity, layer=layer, points=points
    )
    exponents = frozen_exponents(modes, force)
    s = complex(exponents[np.argmax(exponents.real)])
    for _ in range(20):
        share = modes.surface**2 / (s + modes.rates)
        step = (s + force * share.sum()) / (1 - force * (share / (s + modes.rates)).sum())
        s -= step
        if abs(step) <= 1e-14 * abs(s):
            break
    return s.real
