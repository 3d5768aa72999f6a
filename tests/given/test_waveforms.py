"""Motions that are not a pure sine: their make-up, and the thresholds of a layer under them."""

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import solve_ivp
from scipy.optimize import brentq

from containment.constants import STANDARD_GRAVITY as G_N
from containment.errors import InputError
from containment.given.waveforms import PURE_SINE, Waveform, crank_and_rod, two_frequency
from containment.physics.crossings import first_crossing
from containment.physics.dispersion import Layer
from containment.physics.hill import Half
from containment.physics.motion_hill import MotionHalf, fastest_growth, growing_count, motion_rows
from tests.independent.time_stepping import growth_rate, multipliers

SYRUP = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
LIGHT_OIL = Layer(density=950.0, viscosity=0.05, surface_tension=0.03, depth=0.01)
W = 2.0 * math.pi * 50.0


def first_root(layer, k, w, coupling, *, subharmonic, growth=0.0, stop=60.0 * G_N):
    k, w = np.array([k]), np.array([w])
    rows = motion_rows(coupling, stop / w[0] ** 2, k[0])
    half = MotionHalf.of(layer, k, w, growth, rows, coupling, subharmonic=subharmonic)
    return float(first_crossing(half, half.root_free_below(), np.array([stop]), turns=np.sqrt(k) / w)[0])


# --- make-up of the motions


def test_crank_and_rod_follows_from_differentiating_its_position():
    rod, n = 0.3, 200_000
    t = 2.0 * np.pi * np.arange(n) / n
    x = np.cos(t) + np.sqrt(1.0 - (rod * np.sin(t)) ** 2) / rod
    h = t[1]
    acceleration = (np.roll(x, -1) - 2.0 * x + np.roll(x, 1)) / h**2
    wave = crank_and_rod(rod_ratio=rod, accuracy=1e-9)
    assert wave.peak_downward_acceleration == pytest.approx(-acceleration.min(), rel=1e-5)
    assert wave.peak_upward_acceleration == pytest.approx(acceleration.max(), rel=1e-5)
    assert wave.amplitude == pytest.approx(np.ptp(x) / 2.0, rel=1e-8)
    velocity = np.gradient(x, h)
    assert wave.peak_velocity == pytest.approx(np.abs(velocity).max(), rel=1e-5)


@pytest.mark.parametrize("rod", [0.05, 0.2, 0.4])
def test_crank_harmonics_are_those_of_the_handbook_series(rod):
    # inertia forces of the slider-crank, handbook series in r/l (from memory): second r/l + (r/l)^3/4 + 15 (r/l)^5/128,
    # fourth (r/l)^3/4 + 3 (r/l)^5/16, with the fundamental as 1
    c = crank_and_rod(rod_ratio=rod, accuracy=1e-10).components
    assert abs(c[1]) == pytest.approx(rod + rod**3 / 4 + 15 * rod**5 / 128, abs=0.2 * rod**7)
    assert abs(c[3]) == pytest.approx(rod**3 / 4 + 3 * rod**5 / 16, abs=0.3 * rod**7)
    assert c[0] == 1.0 and c[2] == 0.0


def test_harmonics_of_a_crank_are_kept_to_the_stated_accuracy():
    full = crank_and_rod(rod_ratio=0.5, accuracy=1e-13)
    for accuracy in (1e-2, 1e-4, 1e-6):
        wave = crank_and_rod(rod_ratio=0.5, accuracy=accuracy)
        missing = sum(abs(c) for c in full.components[len(wave.components) :])
        assert missing <= wave.left_out < accuracy
        assert missing == pytest.approx(wave.left_out, rel=1e-3, abs=1e-12)


def test_turning_the_crank_over_swaps_the_peaks():
    below, above = crank_and_rod(rod_ratio=0.3), crank_and_rod(rod_ratio=0.3, crank_below=False)
    assert below.peak_upward_acceleration == pytest.approx(above.peak_downward_acceleration)
    assert below.peak_downward_acceleration == pytest.approx(1.3, rel=1e-4)


def test_a_long_rod_is_a_pure_sine():
    assert crank_and_rod(rod_ratio=0.0) is PURE_SINE
    assert crank_and_rod(rod_ratio=1e-7).components == (1.0,)
    assert two_frequency(ratio=0.0, phase=1.0) is PURE_SINE


@given(ratio=st.floats(0.01, 5.0), phase=st.floats(0.0, 6.3))
@settings(max_examples=30, deadline=None)
def test_two_frequency_peaks(ratio, phase):
    wave = two_frequency(ratio=ratio, phase=phase)
    assert wave.peak_acceleration <= wave.total * (1 + 1e-12)
    assert wave.peak_acceleration >= max(1.0, ratio) * (1 - 1e-6)
    t = np.linspace(0.0, 2.0 * np.pi, 20_001)
    series = np.cos(t) + ratio * np.cos(2.0 * t + phase)
    assert wave.peak_upward_acceleration == pytest.approx(series.max(), rel=1e-5, abs=1e-5)
    assert wave.peak_downward_acceleration == pytest.approx(-series.min(), rel=1e-5, abs=1e-5)
    travel = -np.cos(t) - ratio * np.cos(2.0 * t + phase) / 4.0
    assert wave.amplitude == pytest.approx(np.ptp(travel) / 2.0, rel=1e-5)


def test_inputs_out_of_range_are_refused():
    for wrong in (-0.1, 0.95, math.nan):
        with pytest.raises(InputError, match="rod ratio"):
            crank_and_rod(rod_ratio=wrong)
    with pytest.raises(InputError, match="accuracy"):
        crank_and_rod(rod_ratio=0.3, accuracy=0.0)
    with pytest.raises(InputError, match="ratio"):
        two_frequency(ratio=-1.0)
    with pytest.raises(InputError, match="first must have modulus 1"):
        Waveform((0.0, 1.0))
    with pytest.raises(InputError, match="last must not be 0"):
        Waveform((1.0, 0.0))


# --- the Hill system


@pytest.mark.parametrize("layer", [SYRUP, LIGHT_OIL])
@pytest.mark.parametrize("subharmonic", [False, True])
def test_a_pure_sine_gives_the_continued_fraction_to_rounding(layer, subharmonic):
    k, w = np.array([60.0, 150.0, 400.0, 1000.0]), np.full(4, W)
    half = Half.of(layer, k, w, 0.3, 24, subharmonic=subharmonic)
    motion = MotionHalf.of(layer, k, w, 0.3, 24, PURE_SINE.coupling(), subharmonic=subharmonic)
    for a in (3.0, 100.0, 3000.0):
        np.testing.assert_allclose(motion.margin(np.full(4, a)), half.margin(np.full(4, a)), rtol=1e-12)
    np.testing.assert_allclose(motion.root_free_below(), half.root_free_below(), rtol=1e-14)
    few = np.array([2, 0])
    np.testing.assert_array_equal(motion.take(few).margin(np.full(2, 50.0)), motion.margin(np.full(4, 50.0))[few])


@pytest.mark.parametrize("wave", [two_frequency(ratio=0.5, phase=0.7), crank_and_rod(rod_ratio=0.3), Waveform((1, 0, 0.3j))])
@pytest.mark.parametrize("subharmonic", [False, True])
def test_margin_is_the_determinant_of_the_two_sided_system(wave, subharmonic):
    k, rows, c = np.array([60.0, 400.0]), 20, wave.coupling()
    motion = MotionHalf.of(LIGHT_OIL, k, np.full(2, W), 0.3, rows, c, subharmonic=subharmonic)
    n = np.arange(-rows - subharmonic, rows + 1)
    for a in (30.0, 300.0):
        for i, value in enumerate(motion.margin(np.full(2, a))):
            diagonal = LIGHT_OIL.coefficient(0.3 + 1j * (n + 0.5 * subharmonic) * W, k[i])
            matrix = np.diag(diagonal)
            for m, cm in enumerate(c, 1):
                matrix = matrix - a * (np.diag(np.full(len(n) - m, cm), -m) + np.diag(np.full(len(n) - m, np.conj(cm)), m))
            first, second = np.abs(motion.coefficients[:2, i])
            kept = np.abs(diagonal)
            kept[n == 0] = 1.0
            kept[n == -subharmonic] = 1.0
            expected = np.linalg.det(matrix / kept[:, None]) / second ** (1 + subharmonic)
            assert value == pytest.approx(expected.real, rel=1e-11)
            assert abs(expected.imag) < 1e-9 * abs(expected.real)
            assert first > 0.0


@given(ratio=st.floats(0.05, 2.0), phase=st.floats(0.0, 6.28), k=st.floats(30.0, 900.0))
@settings(max_examples=25, deadline=None)
def test_no_sign_changes_below_the_bound_that_is_free_of_roots(ratio, phase, k):
    c = two_frequency(ratio=ratio, phase=phase).coupling()
    for subharmonic in (False, True):
        half = MotionHalf.of(SYRUP, np.array([k]), np.array([W]), 0.0, 20, c, subharmonic=subharmonic)
        bound = half.root_free_below()
        signs = {float(np.sign(half.margin(bound * x)[0])) for x in np.linspace(1e-3, 1.0, 40)}
        assert len(signs) == 1


def test_shifting_the_clock_changes_nothing():
    """cos(w t) + r cos(2 w t + phi), half a period later: the fundamental changes sign, the second harmonic does not."""
    one = first_root(SYRUP, 120.0, W, np.array([1.0, 0.4 * np.exp(0.9j)]), subharmonic=False)
    two = first_root(SYRUP, 120.0, W, np.array([-1.0, 0.4 * np.exp(0.9j)]), subharmonic=False)
    three = first_root(SYRUP, 120.0, W, np.array([1j, -0.4 * np.exp(0.9j)]), subharmonic=False)
    assert two == pytest.approx(one, rel=1e-11)
    assert three == pytest.approx(one, rel=1e-11)


def test_roots_scale_with_the_dimensions():
    """Lengths x c, times x sqrt(c), tension x c^2, viscosity x c^1.5 leave a/g unchanged."""
    s = 2.3
    other = Layer(density=1410.0, viscosity=10.0 * s**1.5, surface_tension=0.08 * s**2, depth=0.03 * s)
    c = crank_and_rod(rod_ratio=0.3).coupling()
    for subharmonic in (False, True):
        one = first_root(SYRUP, 150.0, W, c, subharmonic=subharmonic, growth=0.2, stop=1e4)
        two = first_root(other, 150.0 / s, W / s**0.5, c, subharmonic=subharmonic, growth=0.2 / s**0.5, stop=1e4)
        assert two == pytest.approx(one, rel=1e-10)


# --- against independent routes


def hill_equation_trace(k, w, a, wave, layer, gravity):
    """Trace of the period map of the inviscid deep layer: zeta'' + k [G(t) + gamma k^2/rho] zeta = 0."""
    stiffness = layer.surface_tension * k * k / layer.density

    def rate(t, y):
        pull = gravity - a * sum((c * np.exp(1j * m * w * t)).real for m, c in enumerate(wave.coupling(), 1))
        return [y[1], -k * (pull + stiffness) * y[0], y[3], -k * (pull + stiffness) * y[2]]

    run = solve_ivp(rate, (0.0, 2.0 * np.pi / w), [1.0, 0.0, 0.0, 1.0], method="DOP853", rtol=1e-11, atol=1e-13)
    return run.y[0, -1] + run.y[3, -1]


@pytest.mark.parametrize(
    "wave", [two_frequency(ratio=0.4, phase=0.0), two_frequency(ratio=0.4, phase=2.0), crank_and_rod(rod_ratio=0.3)]
)
def test_nearly_inviscid_roots_are_those_of_the_hill_equation(wave):
    layer = Layer(density=1000.0, viscosity=1e-7, surface_tension=0.05, depth=math.inf)
    k, w = 60.0, 2.0 * np.pi * 30.0
    for subharmonic, trace in ((False, 2.0), (True, -2.0)):
        root = first_root(layer, k, w, wave.coupling(), subharmonic=subharmonic, stop=3000.0)
        assert np.isfinite(root)
        expected = brentq(
            lambda a, trace=trace: hill_equation_trace(k, w, a, wave, layer, -G_N) - trace, 0.98 * root, 1.02 * root, rtol=1e-10
        )
        assert root == pytest.approx(expected, rel=1e-6)


CASES = [
    (SYRUP, 60.0, 50.0, two_frequency(ratio=0.5, phase=0.0), False),
    (SYRUP, 60.0, 50.0, two_frequency(ratio=0.5, phase=2.5), False),
    (SYRUP, 60.0, 50.0, crank_and_rod(rod_ratio=0.4), False),
    (SYRUP, 250.0, 50.0, crank_and_rod(rod_ratio=0.4), True),
    (LIGHT_OIL, 120.0, 40.0, two_frequency(ratio=0.3, phase=1.0), False),
    (LIGHT_OIL, 500.0, 60.0, two_frequency(ratio=0.8, phase=0.5), True),
    (LIGHT_OIL, 500.0, 60.0, two_frequency(ratio=2.5, phase=0.5), False),
]


def stepped(layer, k, f, wave, a):
    components = tuple(
        (m, abs(c), float(np.angle(c))) for m, c in enumerate(wave.coupling(), 1) if abs(c) > 0.0
    )
    return dict(
        wavenumber=k,
        depth=layer.depth,
        density=layer.density,
        viscosity=layer.viscosity,
        surface_tension=layer.surface_tension,
        acceleration=a,
        frequency=f,
        components=components,
    )


@pytest.mark.parametrize("layer, k, f, wave, subharmonic", CASES)
def test_roots_are_neutral_in_the_time_stepped_layer(layer, k, f, wave, subharmonic):
    root = first_root(layer, k, 2.0 * np.pi * f, wave.coupling(), subharmonic=subharmonic, stop=4000.0)
    assert np.isfinite(root)
    values = multipliers(**stepped(layer, k, f, wave, root))
    wanted = -1.0 if subharmonic else 1.0
    assert np.min(np.abs(values - wanted)) < 2e-6


@pytest.mark.parametrize("layer, k, f, wave, subharmonic", CASES)
def test_growth_beside_the_roots_equals_that_of_the_time_stepped_layer(layer, k, f, wave, subharmonic):
    w, c = 2.0 * np.pi * f, wave.coupling()
    root = first_root(layer, k, w, c, subharmonic=subharmonic, stop=4000.0)
    grown = 0
    for a in (0.7 * root, 1.3 * root):
        expected = growth_rate(**stepped(layer, k, f, wave, a))
        rate = fastest_growth(layer, k, w, a, c)
        if expected > 0.0:
            grown += 1
            assert rate == pytest.approx(expected, rel=1e-4, abs=1e-5 * w)
        else:
            assert rate == 0.0
    assert grown >= 1


@pytest.mark.parametrize("layer, k, f, wave, subharmonic", CASES)
def test_count_of_growing_exponents_is_that_of_the_time_stepped_layer(layer, k, f, wave, subharmonic):
    w, c = 2.0 * np.pi * f, wave.coupling()
    root = first_root(layer, k, w, c, subharmonic=subharmonic, stop=4000.0)
    for a in (0.5 * root, 0.98 * root, 1.02 * root, 2.0 * root):
        count, distance = growing_count(layer, k, w, a, c)
        assert distance < 0.01
        assert count == int(np.sum(np.abs(multipliers(**stepped(layer, k, f, wave, a))) > 1.0))


def test_the_prescribed_growth_is_the_growth_at_the_root():
    c = two_frequency(ratio=0.5, phase=1.0).coupling()
    for growth in (0.1, 1.0):
        root = first_root(SYRUP, 60.0, W, c, subharmonic=False, growth=growth)
        assert fastest_growth(SYRUP, 60.0, W, root, c) == pytest.approx(growth, rel=1e-4)
