"""The time-stepped route against published values, limits of other theories, a second discretisation, and itself."""

import math

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar
from scipy.special import jnp_zeros, mathieu_a, mathieu_b

from tests.independent.collocation import multipliers_by_collocation, three_stage_radau
from tests.independent.depth_elements import DEEP, breakpoints, depth_modes
from tests.independent.surface_stepping import frozen_exponents, period_map, radau
from tests.independent.time_stepping import (
    OutOfReachError,
    growth_rate,
    largest_multiplier,
    largest_multiplier_checked,
    multipliers,
    static_growth_rate,
    threshold,
)

G = 9.80665
# Invented liquids.
SYRUP = {"depth": 0.03, "density": 1261.0, "viscosity": 1.41, "surface_tension": 0.0634}
THIN = {"depth": 0.02, "density": 1000.0, "viscosity": 0.01, "surface_tension": 0.05}
RESIN = {"depth": 0.03, "density": 1410.0, "viscosity": 10.0, "surface_tension": 0.080}
PASTE = {"depth": 0.03, "density": 976.0, "viscosity": 58.0, "surface_tension": 0.0215}
POINTS = [
    {**SYRUP, "wavenumber": 52.6, "acceleration": 64.0, "frequency": 15.0},
    {**SYRUP, "wavenumber": 228.0, "acceleration": 98.0, "frequency": 15.0},
    {**SYRUP, "wavenumber": 109.0, "acceleration": 150.0, "frequency": 15.0, "gravity": G},
    {**RESIN, "wavenumber": 109.0, "acceleration": 189.0, "frequency": 17.0},
    {**PASTE, "wavenumber": 228.0, "acceleration": 3197.0, "frequency": 8.0},
    {**SYRUP, "depth": 0.004, "wavenumber": 150.0, "acceleration": 300.0, "frequency": 40.0},
]


# Layers at rest


def test_deep_viscous_layer_falls_as_chandrasekhar_says():
    # Chandrasekhar, Hydrodynamic and Hydromagnetic Stability (1961), chapter X: k_m and s_m, from memory.
    density, nu = 1000.0, 1e-3
    k_unit, s_unit = (G / nu**2) ** (1 / 3), (G**2 / nu) ** (1 / 3)

    def fall(k):
        return -static_growth_rate(
            wavenumber=k * k_unit, depth=math.inf, density=density, viscosity=nu * density, surface_tension=0.0
        )

    best = minimize_scalar(fall, bounds=(0.3, 0.8), method="bounded", options={"xatol": 1e-7})
    assert best.x == pytest.approx(0.4907, abs=1e-4)
    assert -best.fun / s_unit == pytest.approx(0.4599, abs=5e-5)


@pytest.mark.parametrize("depth", [1e-3, 1e-4, 1e-5])
def test_thin_hanging_film_drains_by_lubrication(depth):
    # Lubrication theory of a film on a ceiling: s = h^3 k^2 (rho g - gamma k^2) / (3 mu). Creeping flow (the Stokes
    # equations solved by hand) adds the factor 1 - 9 (k h)^2/5 at the next order.
    k, mu, force = 300.0, 10.0, 970.0 * G - 0.021 * 300.0**2
    film = {"wavenumber": k, "depth": depth, "density": 970.0, "viscosity": mu, "surface_tension": 0.021}
    departure = static_growth_rate(**film) / (depth**3 * k**2 * force / (3 * mu)) - 1
    assert departure == pytest.approx(-1.8 * (k * depth) ** 2, rel=0.2, abs=1e-6)


@pytest.mark.parametrize("depth", [1e-3, 0.01, 0.1, math.inf])
def test_very_viscous_layer_falls_as_creeping_flow(depth):
    # Stokes flow over a rigid base, solved by hand: s = (rho g - gamma k^2)/(2 mu k)
    # (sinh 2x - 2x)/(cosh 2x + 1 + 2 x^2), x = k h.
    k, mu = 100.0, 1e4
    x = min(k * depth, 300.0)
    shape = (math.sinh(2 * x) - 2 * x) / (math.cosh(2 * x) + 1 + 2 * x**2)
    expected = (970.0 * G - 0.021 * k**2) / (2 * mu * k) * shape
    film = {"wavenumber": k, "depth": depth, "density": 970.0, "viscosity": mu, "surface_tension": 0.021}
    assert static_growth_rate(**film) == pytest.approx(expected, rel=1e-6)
    assert growth_rate(**film, acceleration=0.0, frequency=0.1) == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize(("k", "depth"), [(50.0, 0.01), (50.0, 0.2), (800.0, 0.02)])
def test_nearly_inviscid_surface_waves(k, depth):
    # Classical: w0^2 = (g k + gamma k^3 / rho) tanh kh; on deep liquid the damping is 2 nu k^2 (Lamb, Hydrodynamics).
    density, gamma, mu = 1000.0, 0.07, 1e-5
    w0 = math.sqrt((G * k + gamma * k**3 / density) * math.tanh(k * depth))
    layer = math.sqrt(2 * mu / density / w0)
    modes = depth_modes(wavenumber=k, depth=depth, density=density, viscosity=mu, layer=layer)
    exponents = frozen_exponents(modes, k**2 * (density * G + gamma * k**2))
    wave = exponents[np.argmax(exponents.imag)]
    assert wave.imag == pytest.approx(w0, rel=2e-3)
    if k * depth > 5:
        assert wave.real == pytest.approx(-2 * mu / density * k**2, rel=2e-2)


def test_unshaken_multiplier_is_the_static_growth_over_a_period():
    for case in POINTS:
        still = {**case, "acceleration": 0.0}
        rest = {name: value for name, value in case.items() if name not in ("acceleration", "frequency")}
        assert growth_rate(**still) == pytest.approx(static_growth_rate(**rest), rel=1e-7)


def test_energy_never_rises_without_shaking():
    k, stiffness = 120.0, 120.0**2 * (1261.0 * G + 0.0634 * 120.0**2)
    modes = depth_modes(wavenumber=k, depth=0.03, density=1261.0, viscosity=0.2, layer=1e-3)
    # Energy is (sum c_j^2 + stiffness zeta^2) / 2; the map must not lengthen any state in that measure.
    scale = np.append(np.ones(len(modes.rates)), math.sqrt(stiffness))
    for steps in (5, 40):
        matrix = period_map(modes, lambda t: np.full_like(t, stiffness), period=0.05, steps=steps)
        assert np.linalg.norm(matrix * scale[:, None] / scale, 2) <= 1 + 1e-10


# Limits of the shaken layer


def test_thresholds_tend_to_the_mathieu_curves_as_viscosity_vanishes():
    # zeta'' + k tanh(kh) (G(t) + gamma k^2 / rho) zeta = 0 is Mathieu's equation; its curves are scipy's (DLMF 28).
    k, frequency = 100.0, 40.0
    reach, w = k * math.tanh(k * THIN["depth"]), 2 * math.pi * frequency
    level = 4 * reach * (-G + THIN["surface_tension"] * k**2 / THIN["density"]) / w**2
    for curve, order in ((mathieu_a, 0), (mathieu_b, 1)):
        edge = brentq(lambda q, curve=curve, order=order: curve(order, q) - level, 1e-6, 5.0) * w**2 / (2 * reach)
        errors = [
            threshold(
                wavenumber=k, frequency=frequency, bracket=(0.9 * edge, 1.1 * edge), **{**THIN, "viscosity": viscosity}
            )
            / edge
            - 1
            for viscosity in (1e-3, 1e-4, 1e-5)
        ]
        # The layer at the base takes up sqrt(nu): a tenth of the viscosity leaves 1/sqrt(10) of the departure.
        assert np.allclose(np.divide(errors[:2], errors[1:]), math.sqrt(10), rtol=0.02)
        assert 0 < errors[2] < 5e-5


def test_fast_shaking_tends_to_the_averaged_threshold():
    # Averaging, as for the inverted pendulum (Landau & Lifshitz, Mechanics, section 30; from memory):
    # (A w)^2 = 2 (g - gamma k^2 / rho) / (k tanh kh), with corrections of the order 1/w^2 and sqrt(nu/w). The ratios of
    # the nearly inviscid layer were first computed by a separate prototype.
    k = math.pi / 0.05
    pull = G - THIN["surface_tension"] * k**2 / THIN["density"]
    averaged = math.sqrt(2 * pull / (k * math.tanh(k * THIN["depth"])))

    def ratio(frequency, viscosity):
        a, liquid = averaged * 2 * math.pi * frequency, {**THIN, "viscosity": viscosity}
        return threshold(wavenumber=k, frequency=frequency, bracket=(0.98 * a, 1.02 * a), **liquid) / a

    inviscid, thin, thick = ([ratio(f, mu) for f in (100.0, 200.0, 400.0)] for mu in (1e-5, 1e-2, 4e-2))
    assert inviscid == pytest.approx([1.0006, 1.0002, 1.00005], abs=6e-5)
    layer = np.subtract(thin, inviscid)
    assert np.allclose(np.subtract(thick, inviscid) / layer, 2.0, rtol=0.04)
    assert np.allclose(layer[:2] / layer[1:], math.sqrt(2), rtol=0.04)


def test_weakly_damped_faraday_threshold_on_deep_liquid():
    # Damped Mathieu equation at resonance with amplitude damping 2 nu k^2 (standard): A w -> 4 nu k, from below, with a
    # departure that goes as sqrt(nu), the share of the rotational layer at the surface.
    k, density, gamma = 400.0, 1000.0, 0.05
    frequency = math.sqrt(G * k + gamma * k**3 / density) / math.pi
    departures = []
    for viscosity in (1e-4, 1e-5, 1e-6):
        a = 4 * viscosity / density * k * 2 * math.pi * frequency
        found = threshold(
            wavenumber=k,
            depth=0.03,
            density=density,
            viscosity=viscosity,
            surface_tension=gamma,
            frequency=frequency,
            gravity=G,
            bracket=(0.5 * a, 2.0 * a),
        )
        departures.append(found / a - 1)
    assert -2e-3 < departures[-1] < 0
    assert np.allclose(np.divide(departures[:2], departures[1:]), math.sqrt(10), rtol=0.05)


# A round vessel of 70 mm, 30 mm deep; the numbers were first computed by a separate prototype of the project.

ROUND = np.sort(np.concatenate([jnp_zeros(m, 8) for m in range(25)]))[:60] / 0.035
"""Sliding modes j'_(m,n)/R; SciPy leaves out the trivial zero of J_0'."""


def test_syrup_is_held_from_a_frequency_near_15_hz_on():
    """The window opens where the longest mode's lower edge meets the ripples' upper one: about 6.5 g_n, 15 Hz."""
    longest, ripples = ROUND[0], ROUND[(ROUND * 0.035 > 4.0) & (ROUND * 0.035 < 8.0)]

    def low(frequency):
        return threshold(wavenumber=longest, frequency=frequency, bracket=(5 * G, 8 * G), **SYRUP)

    def rise(frequency):
        edge = low(frequency)
        return max(growth_rate(wavenumber=k, frequency=frequency, acceleration=edge, **SYRUP) for k in ripples)

    opens = brentq(rise, 14.5, 16.5, xtol=1e-3)
    assert opens == pytest.approx(15.0, abs=0.5)
    assert low(opens) / G == pytest.approx(6.5, abs=0.05)
    # Inside the window, a little past its opening, every mode decays.
    inside = {"frequency": 16.0, "acceleration": 6.8 * G, **SYRUP}
    assert max(growth_rate(wavenumber=k, **inside) for k in ROUND) < 0


@pytest.mark.parametrize(
    ("liquid", "frequency", "edge"),
    [
        (RESIN, 17.0, 19.3),
        ({"depth": 0.03, "density": 974.0, "viscosity": 12.1, "surface_tension": 0.0212}, 33.0, 68.8),
        (PASTE, 8.0, 326.0),
    ],
)
def test_stiff_liquids_are_held_from(liquid, frequency, edge):
    cut_off = math.sqrt(liquid["density"] * G / liquid["surface_tension"])
    near = ROUND if liquid is RESIN else np.sort(np.concatenate([jnp_zeros(m, 12) for m in range(25)])) / 0.035
    half_a_digit = 0.5 if edge > 100 else 0.05
    near = near[near < 1.3 * cut_off]
    above, below = (
        max(growth_rate(wavenumber=k, frequency=frequency, acceleration=a * G, **liquid) for k in near)
        for a in (edge + half_a_digit, edge - half_a_digit)
    )
    assert above < 0 < below


# The second discretisation, and convergence


@pytest.mark.parametrize("case", POINTS)
def test_collocation_with_full_steps_gives_the_same(case):
    elements = multipliers(**case)
    points = multipliers_by_collocation(**case, order=24, steps=240)
    # The fourth derivative on 25 Chebyshev points costs about seven digits.
    assert abs(points[0]) == pytest.approx(abs(elements[0]), rel=1e-6)
    assert points[0].real == pytest.approx(elements[0].real, rel=1e-6)


def test_radau_matrices():
    for stages in (2, 3, 5):
        nodes, matrix = radau(stages)
        for power in range(1, 2 * stages):
            assert matrix[-1] @ nodes ** (power - 1) == pytest.approx(1 / power, rel=1e-12)
    assert np.allclose(three_stage_radau()[0], radau(3)[0], rtol=1e-13)
    assert np.allclose(three_stage_radau()[1], radau(3)[1], rtol=1e-12)


@pytest.mark.parametrize("stages", [2, 3, 5])
def test_order_in_time(stages):
    case = {**SYRUP, "viscosity": 0.05, "wavenumber": 100.0, "acceleration": 150.0, "frequency": 15.0}
    steps = (10, 20) if stages == 5 else (40, 80)
    reference = multipliers(**case, steps=640, stages=6)[0]
    coarse, fine = (abs(multipliers(**case, steps=n, stages=stages)[0] - reference) for n in steps)
    assert math.log2(coarse / fine) == pytest.approx(2 * stages - 1, abs=0.2)


def test_convergence_in_depth_is_exponential():
    case = {**SYRUP, "wavenumber": 100.0, "acceleration": 150.0, "frequency": 15.0, "steps": 60}
    reference = largest_multiplier(**case, points=30)
    errors = [abs(largest_multiplier(**case, points=points) - reference) for points in (6, 8, 10, 12)]
    assert all(later < 0.1 * earlier for earlier, later in zip(errors, errors[1:], strict=False))
    assert errors[-1] < 1e-6


@pytest.mark.parametrize("seed", range(25))
def test_the_mesh_the_cut_and_the_steps_do_not_show(seed):
    """Any liquid: the default settings, finer ones, thinner elements and twice the depth of the cut agree."""
    rng = np.random.default_rng(seed)
    frequency = 10 ** rng.uniform(0.5, 2.7)
    case = {
        "wavenumber": 10 ** rng.uniform(1.0, 4.0),
        "depth": 10 ** rng.uniform(-3.3, -0.7),
        "density": rng.uniform(700.0, 2000.0),
        "viscosity": 10 ** rng.uniform(-3.0, 2.0),
        "surface_tension": rng.uniform(0.015, 0.09),
        "frequency": frequency,
        "acceleration": min(10 ** rng.uniform(-1.0, 3.0) * G, 0.06 * (2 * math.pi * frequency) ** 2),
        "gravity": (-G, G)[seed % 2],
    }
    value, error = largest_multiplier_checked(**case)
    scale = max(1.0, abs(value))
    assert error < 1e-7 * scale
    plain = multipliers(**case)
    rate = max(2 * math.pi * frequency, math.sqrt(case["wavenumber"] * (case["acceleration"] + G)))
    layer = 0.4 * math.sqrt(2 * case["viscosity"] / case["density"] / rate)
    interior = -0.5 * case["viscosity"] / case["density"] * case["wavenumber"] ** 2
    cut = 2 * DEEP if frequency * math.log(abs(value)) > interior else math.inf
    other = multipliers(**case, layer=layer, cut=cut, start=1.0)
    assert abs(plain[0]) == pytest.approx(abs(other[0]), abs=1e-7 * scale)


def test_elements_reach_from_end_to_end_and_grow():
    ends = breakpoints(wavenumber=100.0, depth=0.05, layer=1e-4)
    widths = np.diff(ends)
    assert ends[0] == 0.0
    assert ends[-1] == 0.05
    assert np.all(widths > 0)
    assert widths[0] == pytest.approx(4e-4)
    assert widths[-1] == pytest.approx(4e-4)
    assert np.max(widths) < 7.6 / 100.0
    assert breakpoints(wavenumber=100.0, depth=1.0, layer=1e-4)[-1] == pytest.approx(DEEP / 100.0)


# Symmetries


def test_units_do_not_matter():
    """Lengths x 3, times x 0.2, masses x 7: the multiplier has no dimension and stays."""
    length, time, mass = 3.0, 0.2, 7.0
    for case in POINTS:
        scaled = {
            "wavenumber": case["wavenumber"] / length,
            "depth": case["depth"] * length,
            "density": case["density"] * mass / length**3,
            "viscosity": case["viscosity"] * mass / length / time,
            "surface_tension": case["surface_tension"] * mass / time**2,
            "acceleration": case["acceleration"] * length / time**2,
            "frequency": case["frequency"] / time,
            "gravity": case.get("gravity", -G) * length / time**2,
        }
        assert largest_multiplier(**scaled) == pytest.approx(largest_multiplier(**case), rel=1e-10)


def test_components_of_the_drive():
    case = POINTS[1]
    once = multipliers(**case)[0]
    # A component of order 2 at half the frequency is the same drive, seen over two of its periods.
    slow = {**case, "frequency": case["frequency"] / 2, "components": ((2, 1.0, 0.7),)}
    assert multipliers(**slow)[0] == pytest.approx(once**2, rel=1e-9)
    # Two equal cosines in phase are one of twice the level; the phase alone moves nothing.
    halves = {**case, "components": ((1, 0.5, 0.3), (1, 0.5, 0.3))}
    assert multipliers(**halves)[0] == pytest.approx(once, rel=1e-9)
    # A mixed drive goes over smoothly into the pure one.
    mixed = [multipliers(**case, components=((1, 1.0, 0.0), (2, r, 0.0)))[0].real for r in (0.0, 1e-4, 2e-4)]
    assert mixed[0] == pytest.approx(once.real, rel=1e-10)
    assert mixed[2] - mixed[1] == pytest.approx(mixed[1] - mixed[0], rel=1e-2)


# Refusals


def test_refusals():
    case = POINTS[0]
    for name in ("wavenumber", "depth", "density", "viscosity", "frequency"):
        with pytest.raises(ValueError, match=f"{name} must be above 0, got 0"):
            largest_multiplier(**{**case, name: 0.0})
    with pytest.raises(ValueError, match="acceleration must be at least 0, got -1"):
        largest_multiplier(**{**case, "acceleration": -1.0})
    with pytest.raises(ValueError, match="points must be at least 6, got 5"):
        largest_multiplier(**case, points=5)
    with pytest.raises(TypeError):
        largest_multiplier(**case, viscocity=1.0)
    with pytest.raises(ValueError, match="none bracketed"):
        threshold(bracket=(70.0, 75.0), wavenumber=52.6, frequency=15.0, **SYRUP)
    with pytest.raises(OutOfReachError, match="steps a period"):
        largest_multiplier(**{**case, "viscosity": 1e-3, "gravity": 1e9, "frequency": 1.0})
    with pytest.raises(OutOfReachError, match="grows by exp"):
        largest_multiplier(**{**case, "viscosity": 1e-3, "acceleration": 1e6, "frequency": 1.0})
    with pytest.raises(OutOfReachError, match="infinite depth"):
        largest_multiplier(
            **{**case, "viscosity": 1e-3, "depth": math.inf, "acceleration": 0.0, "gravity": G, "wavenumber": 900.0}
        )
