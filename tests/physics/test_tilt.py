"""Tilt: the projections of x on the modes, sum rules, the static limit, scaling."""

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import jnp_zeros, jv, jvp, yv, yvp

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.tilt import (
    annulus_tilt_heights,
    box_tilt_heights,
    cylinder_tilt_heights,
    largest_tilt,
    mean_stiffness,
    tilted_rise,
)
from containment.physics.wavenumbers import annulus


def test_cylinder_projection_by_quadrature():
    radius = 0.035
    for k in jnp_zeros(1, 6) / radius:
        top = quad(lambda r: r * r * jv(1, k * r), 0, radius)[0]  # noqa: B023
        below = quad(lambda r: r * jv(1, k * r) ** 2, 0, radius)[0]  # noqa: B023
        assert cylinder_tilt_heights(k, radius=radius) == pytest.approx(top / below * jv(1, k * radius), rel=1e-9)


def test_annulus_projection_by_quadrature():
    inner, outer = 0.02, 0.05
    modes = annulus(inner, outer)
    ours = modes.discrete[modes.first == 1][:4]
    for k in ours:
        a, b = yvp(1, k * outer), jvp(1, k * outer)
        f = lambda r: jv(1, k * r) * a - yv(1, k * r) * b  # noqa: B023, E731
        top = quad(lambda r: r * r * f(r), inner, outer, epsabs=1e-16)[0]  # noqa: B023
        below = quad(lambda r: r * f(r) ** 2, inner, outer, epsabs=1e-16)[0]  # noqa: B023
        expected = top / below * f(outer)
        assert annulus_tilt_heights(k, inner=inner, outer=outer) == pytest.approx(expected, rel=1e-7)
    many = modes.discrete[modes.first == 1]
    assert annulus_tilt_heights(many, inner=inner, outer=outer).sum() == pytest.approx(outer, rel=0.05)


def test_sums_give_the_half_width():
    assert cylinder_tilt_heights(jnp_zeros(1, 1000) / 0.035, radius=0.035).sum() == pytest.approx(0.035, rel=3e-4)
    assert box_tilt_heights(np.arange(1, 4000), width=0.06).sum() == pytest.approx(0.03, rel=2e-4)


def test_box_projection_by_quadrature():
    width = 0.06
    for p in (1, 2, 3, 5):
        top = quad(lambda x: (x - width / 2) * np.cos(p * np.pi * x / width), 0, width)[0]  # noqa: B023
        assert box_tilt_heights(p, width=width) == pytest.approx(abs(top / (width / 2)), abs=1e-12)


def test_without_tension_the_surface_is_level_again():
    """All modes of one stiffness s: the surface rises by g sin(theta)/s times the half width, a level surface for s = g."""
    heights = cylinder_tilt_heights(jnp_zeros(1, 3000) / 0.035, radius=0.035)
    rise = tilted_rise(heights, np.full(3000, G), tilt=0.05)
    assert rise == pytest.approx(0.035 * np.sin(0.05), rel=2e-4)


def test_stiffness():
    rho, gamma = 1000.0, 0.07
    k = np.array([50.0, 1000.0])
    at_edge = mean_stiffness(k, 100.0, np.array([100.0, np.nan]), density=rho, surface_tension=gamma)
    assert at_edge[0] == 0.0
    assert at_edge[1] == pytest.approx(gamma * 1e6 / rho - G)
    twice = mean_stiffness(k, 200.0, np.array([100.0, 0.0]), density=rho, surface_tension=gamma)
    assert twice[0] == pytest.approx(3 * (G - gamma * 2500 / rho))
    assert mean_stiffness(50.0, 90.0, 100.0, density=rho, surface_tension=gamma) == 0.0


def test_fast_limit_of_the_stiffness():
    """(g - gamma k^2/rho)(a^2/a_low^2 - 1) with the averaged a_low is a^2 k tanh(kh)/(2 w^2) less the static pull."""
    from containment.physics.dispersion import Layer

    layer = Layer(density=1000.0, viscosity=1e-3, surface_tension=0.05, depth=0.02)
    k, f, a = np.array([60.0, 120.0]), 200.0, 900.0
    low = layer.averaged_threshold(k, f)
    expected = a**2 * k * np.tanh(k * 0.02) / (2 * (2 * np.pi * f) ** 2) - (G - 5e-5 * k**2)
    found = mean_stiffness(k, a, low, density=1000.0, surface_tension=0.05)
    np.testing.assert_allclose(found, expected, rtol=1e-10)


def test_rise_scales_and_inverts():
    heights, stiffness = np.array([0.02, 0.004, 0.0]), np.array([8.0, 30.0, 0.0])
    rise = tilted_rise(heights, stiffness, tilt=0.02)
    assert tilted_rise(3 * heights, stiffness, tilt=0.02) == pytest.approx(3 * rise)
    assert tilted_rise(heights, 2 * stiffness, tilt=0.02) == pytest.approx(rise / 2)
    assert largest_tilt(heights, stiffness, freeboard=float(rise)) == pytest.approx(0.02)
    assert largest_tilt(heights, stiffness, freeboard=10.0) == pytest.approx(np.pi / 2)
    # a mode that is not held slopes without end, unless the vessel stands straight
    lost = np.array([0.0, 30.0, 1.0])
    assert tilted_rise(heights, lost, tilt=1e-6) == np.inf
    assert tilted_rise(heights, lost, tilt=0.0) == 0.0
    assert largest_tilt(heights, lost, freeboard=0.01) == 0.0
