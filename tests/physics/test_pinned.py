"""Pinned contact line: shapes at rest, waves, and holding window, each against an independent route."""

import numpy as np
import pytest
import scipy.linalg
from scipy.special import jn_zeros, jnp_zeros, jv, yv

from containment.constants import STANDARD_GRAVITY as G_N
from containment.errors import InputError, NotComputableError
from containment.physics.dispersion import Layer
from containment.physics.pinned import pinned_edges, pinned_lower_roots
from containment.physics.pinned_hill import PinnedHalf, reach_factors
from containment.physics.pinned_static import (
    pinned_wave_frequencies,
    rim_modes,
    static_pinned_count,
    static_pinned_growth,
)
from containment.physics.rim_modes import RimModes, annulus_rim, cylinder_rim

SYRUP = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)


def critical(rim, low, high):
    """Return the k at which the pinned shape of an unshaken layer is neutral: sum of b^2 / (k_j^2 - k^2) = 0."""

    def value(k):
        return np.linalg.det((rim.heights / (rim.wavenumbers**2 - k * k)) @ rim.heights.T)

    return scipy.optimize.brentq(value, low, high, xtol=1e-13)


def truncated(order, modes, radius=1.0):
    zeros = jnp_zeros(order, modes)
    return RimModes(order, zeros / radius, np.sqrt(2.0 / (1.0 - (order / zeros) ** 2))[None] / radius, modes)


@pytest.mark.parametrize("order", [0, 1, 2, 3, 7, 15])
def test_critical_radius_at_rest_is_a_bessel_zero(order):
    # textbook capillarity: J_m(k r) with J_m(k R) = 0; for m = 0 the volume is kept, which gives J_2(k R) = 0
    expected = jn_zeros(order, 1)[0] if order else jn_zeros(2, 1)[0]
    rim = cylinder_rim(radius=1.0, order=order, discrete=30, reach=1e3, nodes=20)
    assert critical(rim, expected - 0.2, expected + 0.2) == pytest.approx(expected, rel=1e-8)


@pytest.mark.parametrize("order", [1, 2, 5])
def test_critical_ring_at_rest_is_a_zero_of_the_cross_product(order):
    def cross(k):
        return jv(order, 0.4 * k) * yv(order, k) - jv(order, k) * yv(order, 0.4 * k)

    k = np.linspace(2.0, 12.0, 400)
    i = np.flatnonzero(np.diff(np.sign(cross(k))))[0]
    expected = scipy.optimize.brentq(cross, k[i], k[i + 1], xtol=1e-13)
    rim = annulus_rim(inner=0.4, outer=1.0, order=order, discrete=40, reach=1e3, nodes=20)
    assert critical(rim, expected - 0.02, expected + 0.02) == pytest.approx(expected, rel=1e-8)


def test_a_sum_cut_short_is_too_stiff_and_converges_like_one_over_m():
    # 3.8317: first zero of J_1; 3.8366 at M = 160 from an independent prototype of the cut sum
    at = {m: critical(truncated(1, m), 3.7, 4.2) for m in (80, 160, 320)}
    assert at[160] == pytest.approx(3.8366, abs=5e-5)
    assert at[80] > at[160] > at[320] > jn_zeros(1, 1)[0]
    assert 2.0 * at[320] - at[160] == pytest.approx(jn_zeros(1, 1)[0], abs=2e-5)


@pytest.mark.parametrize("order", [0, 1, 4])
@pytest.mark.parametrize("kind, dims", [("cylinder", (0.03,)), ("annulus", (0.01, 0.03))])
def test_sums_do_not_depend_on_where_the_discrete_modes_end(kind, dims, order):
    values = []
    for discrete in (32, 33, 60, 120):
        rim = rim_modes(kind, dims, order, discrete=discrete, nodes=24, reach=1e6)
        # viscous and capillary: 1/k, then 1/k^2 from k = 1e5 on
        f = 1.0 / (rim.wavenumbers**2 + 1e5j * rim.wavenumbers + 1e4)
        values.append((rim.heights * f) @ rim.heights.T)
    scale = np.abs(values[-1]).max()
    for value in values[:-1]:
        np.testing.assert_allclose(value, values[-1], atol=3e-8 * scale)


def test_static_growth_counts_and_orders_the_shapes_that_fall():
    for order in range(4):
        rim = rim_modes("cylinder", (0.035,), order, discrete=40, nodes=24, reach=1e6)
        rates = static_pinned_growth(SYRUP, "cylinder", (0.035,), order)
        assert len(rates) == static_pinned_count(SYRUP, rim, 0.0)
        assert np.all(np.diff(rates) < 0.0)
        # pinned shapes interlace with the sliding ones: the fastest sliding mode is never slower
        assert static_pinned_count(SYRUP, rim, rates[0] * (1 + 1e-6)) == 0


def test_static_shapes_of_order_one_follow_the_zeros_of_j1():
    # J_1 has four zeros below R / l_c = 14.55, so four shapes fall
    critical_radius = 0.035 / np.sqrt(0.08 / (1410.0 * G_N))
    expected = int(np.sum(jn_zeros(1, 10) < critical_radius))
    assert expected == 4
    assert len(static_pinned_growth(SYRUP, "cylinder", (0.035,), 1)) == expected


def test_a_thin_core_hardly_changes_a_shape_that_is_at_rest_in_the_middle():
    ring = static_pinned_growth(SYRUP, "annulus", (0.002, 0.035), 4)
    disc = static_pinned_growth(SYRUP, "cylinder", (0.035,), 4)
    np.testing.assert_allclose(ring, disc, rtol=1e-4)


def eigenvalue_route(layer, rim, w, growth, rows, *, subharmonic):
    """Return all real positive accelerations that are neutral, from the dense two-sided eigenvalue problem."""
    shift = 0.5 if subharmonic else 0.0
    n = np.arange(-rows - 1 if subharmonic else -rows, rows + 1) + shift
    free = scipy.linalg.null_space(rim.heights)
    kept = free.shape[1]
    diagonal = np.zeros((len(n) * kept, len(n) * kept), complex)
    coupling = np.zeros_like(diagonal)
    for i, number in enumerate(n):
        block = slice(i * kept, (i + 1) * kept)
        diagonal[block, block] = free.T @ (layer.coefficient(growth + 1j * number * w, rim.wavenumbers)[:, None] * free)
        if i:
            before = slice((i - 1) * kept, i * kept)
            coupling[block, before] = coupling[before, block] = np.eye(kept)
    inverse = scipy.linalg.eigvals(np.linalg.solve(diagonal, coupling))
    real = inverse[(np.abs(inverse.imag) < 1e-9 * np.abs(inverse).max()) & (inverse.real > 1e-6)].real
    return np.sort(1.0 / real)


@pytest.mark.parametrize("subharmonic", [False, True])
@pytest.mark.parametrize("growth", [0.0, 0.5])
@pytest.mark.parametrize("rims", [1, 2])
def test_roots_equal_those_of_the_dense_eigenvalue_problem(subharmonic, growth, rims):
    w = 2.0 * np.pi * 30.0
    if rims == 1:
        rim = truncated(1, 12, radius=0.03)
    else:
        whole = annulus_rim(inner=0.01, outer=0.03, order=1, discrete=28, reach=1e5, nodes=8)
        rim = RimModes(1, whole.wavenumbers[:12], whole.heights[:, :12], 12)
    roots = eigenvalue_route(SYRUP, rim, w, growth, 7, subharmonic=subharmonic)
    stop = np.array([150.0 * G_N])
    reach = reach_factors(1410.0, 10.0, 0.08, np.array([w]))
    half = PinnedHalf.of(
        SYRUP,
        rim.wavenumbers[None],
        rim.heights[None],
        np.array([w]),
        reach,
        growth,
        stop,
        subharmonic=subharmonic,
        extra=8,
    )
    roots = roots[roots < stop]
    assert len(roots) >= 1
    for root in roots:
        below, above = half.count(np.array([root * (1 - 1e-6)]))[0], half.count(np.array([root * (1 + 1e-6)]))[0]
        assert abs(above - below) == 1
    # between the roots the count stays
    for a, b in zip(roots[:-1], roots[1:], strict=True):
        if b > 1.01 * a:
            assert half.count(np.array([a * 1.001]))[0] == half.count(np.array([b * 0.999]))[0]


def test_four_lower_roots_of_order_one_and_the_cut_sum_below_them():
    roots = pinned_lower_roots(SYRUP, "cylinder", (0.035,), 1, frequency=50.0)
    assert len(roots) == 4
    assert np.all(np.diff(roots) > 0.0)
    # the sum over 40 modes, by the dense eigenvalue problem: 14.1 to 20.3 g_n; its last root is too low: unsafe
    cut = eigenvalue_route(SYRUP, truncated(1, 40, radius=0.035), 2.0 * np.pi * 50.0, 0.0, 4, subharmonic=False)[:4]
    assert cut[-1] < roots[-1]
    # the cut sum tends to the roots, slowly: the viscous part falls like 1/k up to k = 2 mu w / gamma
    np.testing.assert_allclose(cut, roots, rtol=0.04)
    np.testing.assert_allclose(roots / G_N, [13.8896, 17.6951, 19.8290, 20.7539], rtol=1e-5)


@pytest.mark.parametrize("kind, dims", [("cylinder", (0.035,)), ("annulus", (0.015, 0.035))])
def test_edges_are_the_extremes_over_the_orders_and_their_errors_are_small(kind, dims):
    edges = pinned_edges(SYRUP, kind, dims, [50.0])
    last = max(
        float(np.max(pinned_lower_roots(SYRUP, kind, dims, m, frequency=50.0), initial=0.0)) for m in range(15)
    )
    assert edges.lower[0] == pytest.approx(last, rel=1e-7)
    assert edges.upper[0] > edges.lower[0]
    assert edges.lower_error[0] < 1e-6 * edges.lower[0]
    assert edges.upper_error[0] < 1e-6 * edges.upper[0]


def test_edges_scale_with_the_dimensions():
    """Lengths x c, times x sqrt(c), tension x c^2, viscosity x c^1.5 leave a/g unchanged."""
    c = 1.7
    other = Layer(density=1410.0, viscosity=10.0 * c**1.5, surface_tension=0.08 * c**2, depth=0.03 * c)
    f = np.array([25.0, 60.0])
    one = pinned_edges(SYRUP, "cylinder", (0.035,), f, growth=0.2)
    two = pinned_edges(other, "cylinder", (0.035 * c,), f / c**0.5, growth=0.2 / c**0.5, amplitude_bound=0.06 * c)
    np.testing.assert_allclose(two.lower, one.lower, rtol=1e-7)
    np.testing.assert_allclose(two.upper, one.upper, rtol=1e-7)


def test_a_growth_allowance_lowers_the_acceleration_needed():
    lower = [pinned_edges(SYRUP, "cylinder", (0.035,), [40.0], growth=s).lower[0] for s in (0.0, 0.1, 0.5, 5.0)]
    assert lower[0] > lower[1] > lower[2] > lower[3] == 0.0  # 5 1/s is faster than the layer falls at rest


def test_a_vessel_below_the_critical_radius_needs_no_shaking():
    water = Layer(density=998.0, viscosity=1e-3, surface_tension=0.0728, depth=0.02)
    edges = pinned_edges(water, "cylinder", (0.0104,), [30.0, 50.0])
    assert np.all(edges.lower == 0.0)
    assert np.all(edges.lower_order == -1)
    assert np.all(np.isfinite(edges.upper))


def test_upright_waves_break_up_most_easily_at_twice_a_natural_frequency():
    tank = dict(density=997.0, surface_tension=0.0724, depth=0.038)
    natural = pinned_wave_frequencies("cylinder", (0.02766,), 1, gravity=G_N, count=1, **tank)[0]
    layer = Layer(viscosity=1e-3, gravity=G_N, **tank)
    f = 2.0 * natural * np.array([0.97, 1.0, 1.03])
    edges = pinned_edges(layer, "cylinder", (0.02766,), f, amplitude_bound=0.03)
    assert edges.upper_order[1] == 1
    assert edges.upper[1] < 0.3 * min(edges.upper[0], edges.upper[2])


def test_inputs_that_cannot_be_computed_are_refused():
    dry = Layer(density=1410.0, viscosity=10.0, surface_tension=0.0, depth=0.03)
    with pytest.raises(InputError, match="surface tension 0.0"):
        pinned_edges(dry, "cylinder", (0.035,), [50.0])
    with pytest.raises(InputError, match="'slot'"):
        pinned_edges(SYRUP, "slot", (0.06,), [50.0])
    with pytest.raises(InputError, match="must be positive"):
        pinned_edges(SYRUP, "cylinder", (0.0,), [50.0])
    with pytest.raises(InputError, match="rising order"):
        static_pinned_growth(SYRUP, "annulus", (0.035, 0.015), 0)
    with pytest.raises(InputError, match="falls at rest"):
        pinned_wave_frequencies(
            "cylinder", (0.05,), 1, density=1e3, surface_tension=0.07, depth=0.1, gravity=-G_N, count=1
        )
    water = Layer(density=998.0, viscosity=1e-3, surface_tension=0.0728, depth=0.02)
    with pytest.raises(NotComputableError, match="modes of each order"):
        pinned_edges(water, "cylinder", (0.5,), [200.0])
