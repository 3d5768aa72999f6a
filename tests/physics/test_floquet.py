"""Growth rates at a drive point: at thresholds, at rest, against the bracketed search and the time-stepped route."""

import numpy as np
import pytest

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.dispersion import Layer
from containment.physics.edges import first_roots
from containment.physics.floquet import determinant, exponents, growing_exponents, static_growth_rate
from containment.physics.hill import Half, rows_needed
from tests.independent import time_stepping

# Water: handbook values at 20 degC (from memory). The others are invented.
LAYERS = {
    "syrup": Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03),
    "oil": Layer(density=960.0, viscosity=0.1, surface_tension=0.021, depth=0.004),
    "water": Layer(density=998.2, viscosity=1.002e-3, surface_tension=0.0728, depth=0.02),
    "stiff": Layer(density=1400.0, viscosity=120.0, surface_tension=0.08, depth=0.1),
}


@pytest.mark.parametrize("growth", [0.01, 0.3, 4.0])
@pytest.mark.parametrize("frequency", [17.0, 50.0, 300.0])
@pytest.mark.parametrize("name", LAYERS)
@pytest.mark.parametrize("subharmonic", [False, True])
def test_growth_at_a_threshold_is_the_growth_it_was_asked_for(name, frequency, growth, subharmonic):
    layer = LAYERS[name]
    k = np.geomspace(30.0, 2500.0, 9)
    w = 2.0 * np.pi * frequency
    at = first_roots(layer, k, np.full(9, w), growth, np.full(9, 0.05 * w * w), subharmonic=subharmonic)
    for kk, a in zip(k[np.isfinite(at)], at[np.isfinite(at)], strict=True):
        _, slope = determinant(layer, np.array([growth + (0.5j * w if subharmonic else 0.0)]), np.array([kk]), w, a, 40)
        # Newton's step from the growth asked for is the error of the growth; thresholds are known to 1e-12
        assert abs(1.0 / slope[0]) < 1e-8 * growth + 1e-9 * w
        found = growing_exponents(layer, np.array([kk]), w, a, above=0.5 * growth)
        if found.subharmonic[0] == subharmonic and found.exponent[0].real < 1.5 * growth:
            assert found.exponent[0].real == pytest.approx(growth, rel=1e-8, abs=1e-9 * w)


@pytest.mark.parametrize("name", LAYERS)
def test_hardly_shaken_is_at_rest(name):
    """The growth differs from the static one at second order in the acceleration."""
    layer = LAYERS[name]
    k = np.array([20.0, 60.0, 150.0, 300.0])
    for frequency in (20.0, 200.0):
        w = 2.0 * np.pi * frequency
        rest = static_growth_rate(layer, k)
        shaken = growing_exponents(layer, k, w, 1e-4)
        np.testing.assert_allclose(shaken.exponent.real, rest, rtol=1e-8)
        assert not shaken.subharmonic.any()
        newton = exponents(layer, k, w, 1e-4)
        np.testing.assert_allclose(newton.exponent.real, rest, rtol=1e-8)


def test_static_growth_is_the_root_at_rest():
    for layer in LAYERS.values():
        k = np.geomspace(1.0, 3000.0, 40)
        rate = static_growth_rate(layer, k)
        unstable = layer.stiffness(k) < 0.0
        assert (rate[~unstable] == 0.0).all()
        assert (rate[unstable] > 0.0).all()
        left = layer.coefficient(rate[unstable] * (1.0 - 1e-9), k[unstable]).real
        right = layer.coefficient(rate[unstable] * (1.0 + 1e-9), k[unstable]).real
        assert ((left < 0.0) & (right > 0.0)).all()
    assert static_growth_rate(layer, np.array([[50.0, 60.0]])).shape == (1, 2)


@pytest.mark.parametrize("name", LAYERS)
def test_static_growth_meets_the_time_stepped_route(name):
    layer = LAYERS[name]
    for k in (20.0, 80.0, 200.0):
        expected = time_stepping.static_growth_rate(
            wavenumber=k, depth=layer.depth, density=layer.density, viscosity=layer.viscosity,
            surface_tension=layer.surface_tension,
        )  # fmt: skip
        assert static_growth_rate(layer, k) == pytest.approx(expected, rel=1e-7)


def test_static_growth_scales():
    """Lengths times c at the same gravity: rates divided by sqrt(c)."""
    c = 3.1
    layer = LAYERS["syrup"]
    big = Layer(
        density=layer.density, viscosity=layer.viscosity * c**1.5, surface_tension=layer.surface_tension * c * c,
        depth=layer.depth * c,
    )  # fmt: skip
    k = np.array([20.0, 52.6, 200.0])
    np.testing.assert_allclose(static_growth_rate(big, k / c) * np.sqrt(c), static_growth_rate(layer, k), rtol=1e-10)


def drive_points(count, seed):
    rng = np.random.default_rng(seed)
    for _ in range(count):
        layer = Layer(
            density=rng.uniform(700, 1600), viscosity=10.0 ** rng.uniform(-3, 2), surface_tension=rng.uniform(0.02, 0.09),
            depth=10.0 ** rng.uniform(-2.7, -0.9),
        )  # fmt: skip
        w = 2.0 * np.pi * 10.0 ** rng.uniform(0.8, 2.8)
        yield layer, 10.0 ** rng.uniform(1.3, 3.4, 6), w, w * w * 10.0 ** rng.uniform(-4.5, -1.6)


def test_newton_and_the_bracketed_search_agree_on_growing_modes():
    compared = 0
    for layer, k, w, a in drive_points(60, seed=1):
        bracketed, newton = growing_exponents(layer, k, w, a), exponents(layer, k, w, a)
        for b, n in zip(bracketed.exponent, newton.exponent, strict=True):
            if np.isfinite(b.real) and np.isfinite(n.real) and n.real > 0.0:
                # Newton may settle on a lesser one of several growing exponents, never on a greater one
                assert n.real <= b.real * (1.0 + 1e-8) or abs(n.imag) > 1e-6 * w
                compared += abs(n.real / b.real - 1.0) < 1e-8
    assert compared > 100


def test_growth_meets_the_time_stepped_route():
    """Largest multiplier of the time-stepped layer, wherever that route reaches."""
    compared = skipped = 0
    for layer, k, w, a in drive_points(25, seed=2):
        found = growing_exponents(layer, k, w, a)
        for kk, s in zip(k, found.exponent, strict=True):
            try:
                value, error = time_stepping.largest_multiplier_checked(
                    wavenumber=kk, depth=layer.depth, density=layer.density, viscosity=layer.viscosity,
                    surface_tension=layer.surface_tension, acceleration=a, frequency=w / (2.0 * np.pi),
                )  # fmt: skip
            except time_stepping.OutOfReachError:
                skipped += 1
                continue
            if error > 1e-7 * abs(value):
                skipped += 1
                continue
            rate = w / (2.0 * np.pi) * np.log(abs(value))
            if np.isfinite(s.real):
                assert rate == pytest.approx(s.real, rel=1e-5, abs=1e-6 * w)
                compared += 1
            else:
                assert rate < 1e-6 * w
    print(f"growing modes compared {compared}, skipped {skipped}")
    assert compared > 40


def test_determinant_changes_sign_with_the_half_system():
    """At a real growth rate the phase is real: its sign is that of the conditions that the thresholds come from."""
    for layer, k, w, a in drive_points(20, seed=4):
        for subharmonic in (False, True):
            growth = 0.7
            rows = rows_needed(a / (w * w), float(k.max())) + 8
            margin = Half.of(layer, k, np.full(6, w), growth, rows, subharmonic=subharmonic).margin(np.full(6, a))
            s = np.full(6, growth + (0.5j * w if subharmonic else 0.0))
            phase, _ = determinant(layer, s, k, w, a, rows)
            if subharmonic:  # one row is left over at the end: its phase is that of its coefficient
                phase = phase * np.conj(np.exp(1j * np.angle(layer.coefficient(growth + 1j * (rows + 0.5) * w, k))))
            np.testing.assert_allclose(np.abs(phase.imag), 0.0, atol=0.02)
            np.testing.assert_array_equal(phase.real > 0.0, margin > 0.0)


def test_logarithmic_derivative_is_the_derivative():
    for layer, k, w, a in drive_points(15, seed=5):
        s = np.full(6, 0.02 * w + 0.21j * w)
        step = 1e-6 * w
        middle = determinant(layer, s, k, w, a, 30)[1]
        above, below = (determinant(layer, s + sign * 1j * step, k, w, a, 30)[0] for sign in (1, -1))
        turn = np.angle(above * np.conj(below)) / (2.0 * step)
        np.testing.assert_allclose(turn, middle.real, rtol=1e-3, atol=1e-5 / w + 1e-4 * np.abs(middle).max())


@pytest.mark.parametrize("frequency", [1.0, 5.0, 50.0])
def test_upright_waves_decay(frequency):
    """An upright layer that is hardly shaken only damps: every exponent has a negative real part."""
    layer = Layer(density=998.2, viscosity=1.002e-3, surface_tension=0.0728, depth=0.02, gravity=G)
    k = np.array([30.0, 100.0, 400.0])
    w = 2.0 * np.pi * frequency
    assert np.isnan(growing_exponents(layer, k, w, 1e-5).exponent.real).all()
    slow = exponents(layer, k, w, 1e-5).exponent.real
    assert (slow < 0.0).all()
