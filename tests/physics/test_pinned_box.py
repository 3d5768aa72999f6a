"""Rectangular vessel pinned along its sides, against separable shapes and the general pinned system."""

import math

import numpy as np
import pytest
from scipy.optimize import brentq

from containment.constants import STANDARD_GRAVITY as G_N
from containment.errors import InputError, NotComputableError
from containment.physics.dispersion import Layer
from containment.physics.pinned import pinned_edges, pinned_lower_roots
from containment.physics.pinned_box import BoxHalf, BoxLines, box_lines, box_rim
from containment.physics.pinned_growth import pinned_growing, rim_growing_count
from containment.physics.pinned_hill import PinnedHalf, reach_factors
from containment.physics.pinned_static import static_pinned_count, static_pinned_growth

SYRUP = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
W, L = 0.013, 0.010
GAMMA_OVER_RHO = 5e-5


def count_at_rest(k, parity):
    """Return the number of shapes that fall where rho g / gamma = k^2."""
    layer = Layer(density=1000.0, viscosity=1.0, surface_tension=1000.0 * G_N / k**2, depth=1.0)
    lines = box_lines(dims=(W, L), parity=parity, discrete=(20, 20), nodes=12, reach=1e5)
    return static_pinned_count(layer, box_rim(lines, parity), 0.0)


@pytest.mark.parametrize("parity, p, q", [(1, 2, 1), (2, 1, 2), (3, 2, 2)])
def test_shapes_that_are_odd_fall_as_products_of_sines(parity, p, q):
    # pinned shapes odd about a middle keep the volume by themselves: sin(p pi x/W) sin(q pi y/L)
    k = math.pi * math.hypot(p / W, q / L)
    assert count_at_rest(k * (1.0 - 1e-7), parity) == 0
    assert count_at_rest(k * (1.0 + 1e-7), parity) == 1


def test_the_even_shape_keeps_its_volume():
    # sines of odd order under a uniform pressure; the volume, sum of 1/(m n)^2 / (k_mn^2 - k^2), vanishes
    m = np.arange(1, 3001, 2)
    squares = math.pi**2 * ((m[:, None] / W) ** 2 + (m[None, :] / L) ** 2)
    weights = 1.0 / (m[:, None] * m[None, :]) ** 2
    low, high = math.pi * math.hypot(1 / W, 1 / L), math.pi * math.hypot(3 / W, 1 / L)
    k = brentq(lambda k: np.sum(weights / (squares - k * k)), low * 1.001, high * 0.999, rtol=1e-12)
    assert count_at_rest(k * (1.0 - 1e-6), 0) == 0
    assert count_at_rest(k * (1.0 + 1e-6), 0) == 1


def small(parity):
    lines = box_lines(dims=(0.05, 0.06), parity=parity, discrete=(14, 14), nodes=3, reach=1e5)
    return BoxLines(lines.along_x[:5], lines.along_y[:4], lines.height_x[:5], lines.height_y[:4])


@pytest.mark.parametrize("parity", [0, 1, 3])
@pytest.mark.parametrize("subharmonic", [False, True])
def test_the_structured_system_is_the_general_one(parity, subharmonic):
    lines, w, stop = small(parity), np.array([2.0 * np.pi * 50.0]), np.array([2000.0])
    rim = box_rim(lines, parity)
    reach = reach_factors(1410.0, 10.0, 0.08, w)
    box = BoxHalf.of(SYRUP, lines, w, reach, 0.1, stop, subharmonic=subharmonic)
    general = PinnedHalf.of(
        SYRUP, rim.wavenumbers[None], rim.heights[None], w, reach, 0.1, stop, subharmonic=subharmonic
    )
    ratios = []
    for a in (20.0, 150.0, 180.0, 700.0, 1300.0, 1900.0):
        level = np.array([a])
        assert box.count(level)[0] == general.count(level)[0]
        ratios.append(float(box.margin(level)[0] / general.margin(level)[0]))
    np.testing.assert_allclose(ratios, ratios[0], rtol=1e-9)


def test_counts_at_both_kinds_of_roots_are_those_of_the_winding_number():
    lines, w = small(1), 2.0 * np.pi * 50.0
    rim, stop = box_rim(lines, 1), np.array([2000.0])
    reach = reach_factors(1410.0, 10.0, 0.08, np.array([w]))
    halves = [BoxHalf.of(SYRUP, lines, np.array([w]), reach, 0.0, stop, subharmonic=sub) for sub in (False, True)]
    for a in (20.0, 150.0, 250.0, 1300.0):
        expected = sum(int(half.count(np.array([a]))[0]) for half in halves)
        assert rim_growing_count(SYRUP, rim, w, a) == (expected, pytest.approx(0.0, abs=0.01))


def test_static_growth_does_not_depend_on_which_side_is_called_width():
    one, two = (static_pinned_growth(SYRUP, "box", dims, parity) for dims, parity in (((0.02, 0.03), 1), ((0.03, 0.02), 2)))
    assert len(one) >= 1
    np.testing.assert_allclose(one, two, rtol=1e-5)


def test_a_box_below_its_critical_size_needs_no_shaking_and_one_above_does():
    water = Layer(density=998.0, viscosity=1e-2, surface_tension=0.0728, depth=0.02)
    # critical: (2/W)^2 + (1/L)^2 = (1/(pi l_c))^2; a square of pi sqrt(5) l_c = 19.16 mm
    side = math.pi * math.sqrt(5.0) * math.sqrt(0.0728 / (998.0 * G_N))
    for factor, shapes in ((0.999, 0), (1.001, 1)):
        assert len(static_pinned_growth(water, "box", (factor * side, factor * side), 1)) == shapes
    edges = pinned_edges(water, "box", (0.9 * side, 0.9 * side), [40.0])
    assert edges.lower[0] == 0.0
    assert np.isfinite(edges.upper[0])


def test_edges_of_a_box_and_their_errors():
    edges = pinned_edges(SYRUP, "box", (0.03, 0.03), [50.0])
    last = max(
        float(np.max(pinned_lower_roots(SYRUP, "cylinder", (0.015,), m, frequency=50.0), initial=0.0)) for m in range(4)
    )
    # the inscribed circle is stiffer, so it is held by less
    assert edges.lower[0] > last
    assert edges.lower_error[0] < 1e-5 * edges.lower[0]
    assert edges.upper_error[0] < 1e-5 * edges.upper[0]


def test_what_cannot_be_computed_is_refused():
    with pytest.raises(NotComputableError, match="count"):
        pinned_growing(SYRUP, "box", (0.03, 0.03), frequency=50.0, acceleration=200.0)
    with pytest.raises(InputError, match="parities"):
        static_pinned_growth(SYRUP, "box", (0.03, 0.03), 4)
    with pytest.raises(NotComputableError, match="at most 40"):
        pinned_edges(SYRUP, "box", (0.6, 0.6), [50.0])
