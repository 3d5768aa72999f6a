"""Wavenumbers of vessels against scipy's Bessel zeros, finite differences and simple limits; none may be missing."""

import numpy as np
import pytest
from scipy.linalg import eigh_tridiagonal
from scipy.special import jnp_zeros, jvp, yvp

from containment.physics.wavenumbers import CYLINDER_DISCRETE_BELOW, annulus, box, cylinder, slot, unbounded


def test_every_row_of_the_table_is_a_zero_and_none_is_missing():
    spectrum = cylinder(1.0)
    expected = sorted(
        (zero, m, n)
        for m in range(66)  # j'(m,1) > m, DLMF 10.21.3
        for n, zero in enumerate(jnp_zeros(m, 25), 1)
        if zero < CYLINDER_DISCRETE_BELOW
    )
    assert len(spectrum.discrete) == len(expected)
    np.testing.assert_allclose(spectrum.discrete, [row[0] for row in expected], rtol=4e-15)
    assert spectrum.first.tolist() == [row[1] for row in expected]
    assert spectrum.second.tolist() == [row[2] for row in expected]
    assert spectrum.continuous_from == CYLINDER_DISCRETE_BELOW
    assert np.all(np.diff(spectrum.discrete) > 0.0)


def test_smallest_zeros_are_the_published_ones():
    """DLMF table 10.21.3 / Abramowitz & Stegun table 9.5 (from memory): 1.84118, 3.05424, 3.83171, 4.20119, 5.31755."""
    np.testing.assert_allclose(cylinder(1.0).discrete[:5], [1.84118, 3.05424, 3.83171, 4.20119, 5.31755], atol=5e-6)


def test_number_of_modes_follows_weyl():
    """N(k) = area k^2 / 4 pi + perimeter k / 4 pi for free-slip walls, each pair of sine and cosine counted (Weyl)."""
    spectrum = cylinder(1.0)
    counted = np.sum(np.where(spectrum.first == 0, 1, 2))
    k = CYLINDER_DISCRETE_BELOW
    assert counted == pytest.approx(k * k / 4.0 + k / 2.0, rel=0.01)
    ring = annulus(0.02, 0.05)
    counted = np.sum(np.where(ring.first == 0, 1, 2))
    k = ring.continuous_from
    assert counted == pytest.approx(0.25 * (0.05**2 - 0.02**2) * k * k + 0.5 * 0.07 * k, rel=0.02)


@pytest.mark.parametrize(("width", "length"), [(0.06, 0.08), (0.06, 0.06), (0.003, 0.5), (0.5, 0.4), (0.01, 0.9)])
def test_box_has_every_pair_of_half_waves(width, length):
    spectrum = box(width, length)
    p, q = np.meshgrid(np.arange(3000), np.arange(3000), indexing="ij", sparse=True)
    k = np.sqrt((np.pi * p / width) ** 2 + (np.pi * q / length) ** 2)
    expected = np.sort(k[(k > 0.0) & (k <= spectrum.continuous_from)])
    np.testing.assert_allclose(spectrum.discrete, expected, rtol=1e-13)
    assert spectrum.discrete[0] == pytest.approx(np.pi / max(width, length), rel=1e-14)
    named = np.pi * np.hypot(spectrum.first / width, spectrum.second / length)
    np.testing.assert_allclose(named, spectrum.discrete, rtol=1e-13)


def test_box_does_not_care_how_it_is_turned():
    np.testing.assert_allclose(box(0.03, 0.11).discrete, box(0.11, 0.03).discrete, rtol=1e-13)


def test_slot_and_unbounded():
    spectrum = slot(0.02)
    np.testing.assert_allclose(spectrum.discrete, np.pi / 0.02 * np.arange(1, 1001), rtol=1e-14)
    assert spectrum.continuous_from > spectrum.discrete[-1]
    assert spectrum.continuous_from - spectrum.discrete[-1] <= np.pi / 0.02
    free = unbounded()
    assert len(free.discrete) == 0
    assert free.continuous_from == 0.0


RINGS = [(0.02, 0.05), (0.001, 0.05), (0.045, 0.05), (0.0495, 0.05), (0.1, 0.25), (5e-5, 0.05)]


def cross_product(m, k, inner, outer):
    return jvp(m, k * inner) * yvp(m, k * outer) - jvp(m, k * outer) * yvp(m, k * inner)


@pytest.mark.parametrize(("inner", "outer"), RINGS)
def test_ring_modes_solve_the_cross_product(inner, outer):
    """J_m'(k R1) Y_m'(k R2) = J_m'(k R2) Y_m'(k R1): a sign change within 1e-9 of every wavenumber."""
    spectrum = annulus(inner, outer)
    m, k = spectrum.first, spectrum.discrete
    with np.errstate(all="ignore"):
        below, above = (cross_product(m, k * (1.0 + step), inner, outer) for step in (-1e-9, 1e-9))
    finite = np.isfinite(below) & np.isfinite(above)  # Y_m' of a thin core overflows for many nodal diameters
    assert np.all(np.sign(below[finite]) == -np.sign(above[finite]))
    assert np.count_nonzero(finite) > 0.4 * len(k)


def radial_eigenvalues(m, inner, outer, points):
    """Wavenumbers of (r f')' / r - m^2 f / r^2 = -k^2 f, f' = 0 at both walls, by finite volumes of equal width."""
    edges = np.linspace(inner, outer, points + 1)
    centres = 0.5 * (edges[1:] + edges[:-1])
    step = edges[1] - edges[0]
    flux = edges[1:-1] / step
    diagonal = np.zeros(points)
    diagonal[:-1] += flux
    diagonal[1:] += flux
    diagonal += m * m * step / centres
    volume = centres * step
    root = np.sqrt(volume)
    values = eigh_tridiagonal(diagonal / volume, -flux / (root[1:] * root[:-1]), eigvals_only=True)
    return np.sqrt(np.maximum(values, 0.0))


@pytest.mark.parametrize(("inner", "outer"), RINGS[:5])
def test_no_ring_mode_is_missing(inner, outer):
    """For every number of nodal diameters the count and the values agree with finite volumes across the gap."""
    spectrum = annulus(inner, outer)
    most = spectrum.continuous_from
    for m in range(0, int(most * outer) + 1, max(1, int(most * outer) // 12)):
        mine = spectrum.discrete[spectrum.first == m]
        theirs = radial_eigenvalues(m, inner, outer, 900)
        theirs = theirs[theirs > 0.01 * np.pi / (outer - inner)] if m == 0 else theirs  # k = 0 is rounding
        # finite volumes are a little low: stay away from the end of the list
        clear = most * 0.985
        assert np.count_nonzero(mine < clear) == np.count_nonzero(theirs[: len(mine) + 3] < clear)
        compared = mine[mine < clear]
        np.testing.assert_allclose(compared, theirs[: len(compared)], rtol=5e-3)


def test_a_thin_core_leaves_the_cylinder():
    """The wavenumbers move by order (R1/R2)^2: DLMF 10.21(x)."""
    ring, tube = annulus(1e-4, 0.05), cylinder(0.05)
    np.testing.assert_allclose(ring.discrete[:40], tube.discrete[:40], rtol=2e-4)
    assert ring.first[:40].tolist() == tube.first[:40].tolist()


def test_a_thin_ring_is_a_bent_slot():
    """k^2 -> (m / R)^2 + (n pi / gap)^2 with the mean radius R: the curvature enters at second order."""
    inner, outer = 0.0495, 0.05
    spectrum = annulus(inner, outer)
    mean, gap = 0.5 * (inner + outer), outer - inner
    low = spectrum.discrete < 0.9 * np.pi / gap
    np.testing.assert_allclose(spectrum.discrete[low], spectrum.first[low] / mean, rtol=2e-4)
    assert spectrum.first[low].tolist() == list(range(1, np.count_nonzero(low) + 1))
    rest = spectrum.discrete[~low & (spectrum.discrete < 1.5 * np.pi / gap)]
    m = spectrum.first[~low & (spectrum.discrete < 1.5 * np.pi / gap)]
    either = np.minimum(
        np.abs(rest / np.hypot(m / mean, np.pi / gap) - 1.0), np.abs(rest / np.maximum(m / mean, 1e-9) - 1.0)
    )
    assert either.max(initial=0.0) < 1e-3


@pytest.mark.parametrize("make", [lambda c: cylinder(0.04 * c), lambda c: box(0.03 * c, 0.05 * c), lambda c: slot(0.02 * c),
                                  lambda c: annulus(0.02 * c, 0.05 * c)])  # fmt: skip
def test_wavenumbers_scale_inversely_with_size(make):
    one, two = make(1.0), make(7.3)
    np.testing.assert_allclose(two.discrete * 7.3, one.discrete, rtol=1e-11)
    assert two.continuous_from * 7.3 == pytest.approx(one.continuous_from, rel=1e-12)


def test_modes_have_trade_names():
    tube = cylinder(0.035)
    assert tube.mode_name(float(tube.discrete[0])).startswith("mode (1,1), 1 nodal diameter, wavelength 119 mm")
    ring_shaped = float(tube.discrete[2])
    assert "ring-shaped" in tube.mode_name(ring_shaped)
    assert tube.mode_name(1e5) == "wavelength 0.0628 mm"
    assert "half-wave" in slot(0.02).mode_name(np.pi / 0.02)
    assert "half-waves" in box(0.02, 0.03).mode_name(float(box(0.02, 0.03).discrete[3]))
    assert unbounded().mode_name(628.3).startswith("wavelength 10 mm")
