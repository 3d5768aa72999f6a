"""Hill determinants: against full matrices, dense eigenvalues, doubled truncation, and the proven root-free range."""

import mpmath as mp
import numpy as np
import pytest

from containment.physics.dispersion import Layer
from containment.physics.edges import first_roots
from containment.physics.hill import Half, rows_needed
from tests.independent.dense_floquet import thresholds

SYRUP = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
THIN = Layer(density=998.0, viscosity=1e-3, surface_tension=0.0728, depth=0.01)
CASES = [(SYRUP, 52.6, 50.0), (SYRUP, 400.0, 17.0), (THIN, 300.0, 60.0), (THIN, 800.0, 60.0), (THIN, 2000.0, 400.0)]


def half_of(layer, k, f, *, subharmonic, rows=12, growth=0.0):
    return Half.of(layer, np.array([k]), np.array([2 * np.pi * f]), growth, rows, subharmonic=subharmonic)


def both_sided(layer, k, f, *, subharmonic, rows=12, growth=0.0):
    """Coefficients from the most negative row to the most positive one."""
    n = np.arange(-rows - 1, rows + 1) + 0.5 if subharmonic else np.arange(-rows, rows + 1)
    return layer.coefficient(growth + 2j * np.pi * f * n, np.full(len(n), k))


@pytest.mark.parametrize("subharmonic", [False, True])
@pytest.mark.parametrize(("layer", "k", "f"), CASES)
@pytest.mark.parametrize("growth", [0.0, 3.0])
def test_margin_is_the_determinant_of_the_whole_matrix(layer, k, f, subharmonic, growth):
    """Row by row divided by A_n; the scale is A_0 (harmonic) or its squared modulus, and positive."""
    half = half_of(layer, k, f, subharmonic=subharmonic, growth=growth)
    whole = both_sided(layer, k, f, subharmonic=subharmonic, growth=growth)
    a0 = complex(half.first[0])
    for a in np.geomspace(1.0, 3000.0, 7):
        # elimination at 40 digits: with many harmonics at work LU in doubles loses the determinant
        with mp.workdps(40):
            size = len(whole)
            matrix = mp.matrix(size, size)
            for i in range(size):
                matrix[i, i] = 1
                for j in (i - 1, i + 1):
                    if 0 <= j < size:
                        matrix[i, j] = -mp.mpf(a) / mp.mpc(complex(whole[i]))
            expected = complex(mp.det(matrix))
        assert abs(expected.imag) < 1e-9 * abs(expected.real)
        scale = abs(half.second[0]) ** (2 if subharmonic else 1) * (abs(a0) ** 2 if subharmonic else a0.real)
        assert half.margin(np.array([a]))[0] == pytest.approx(scale * expected.real, rel=1e-8)


@pytest.mark.parametrize("subharmonic", [False, True])
@pytest.mark.parametrize(("layer", "k", "f"), CASES)
def test_first_root_is_the_smallest_dense_eigenvalue(layer, k, f, subharmonic):
    """Few rows, where numpy.linalg.eigvals still keeps its real eigenvalues."""
    levels = thresholds(both_sided(layer, k, f, subharmonic=subharmonic, rows=9))
    w = np.array([2 * np.pi * f])
    root = first_roots(layer, np.array([k]), w, 0.0, 0.05 * w * w, subharmonic=subharmonic)[0]
    if levels.size and levels[0] < 0.01 * w[0] ** 2:
        assert root == pytest.approx(levels[0], rel=1e-7)
    else:
        assert root > 0.01 * w[0] ** 2


@pytest.mark.parametrize("subharmonic", [False, True])
def test_no_root_in_the_range_that_is_proven_free(subharmonic):
    rng = np.random.default_rng(7)
    for _ in range(60):
        layer = Layer(
            density=1200.0, viscosity=10.0 ** rng.uniform(-3.3, 2.3), surface_tension=0.05,
            depth=10.0 ** rng.uniform(-3, -0.7),
        )  # fmt: skip
        k, f = 10.0 ** rng.uniform(1, 3.6), 10.0 ** rng.uniform(0.7, 3.3)
        half = half_of(layer, k, f, subharmonic=subharmonic, growth=rng.choice([0.0, 1.0]))
        free = half.root_free_below()[0]
        below = np.array([half.margin(np.array([a]))[0] for a in free * np.linspace(1e-6, 0.999999, 60)])
        assert (below > 0).all() or (below < 0).all()
        # the sign says what it promises: negative where the layer at rest falls (harmonic), else positive
        assert (below[0] < 0) == (not subharmonic and half.first[0].real < 0)


def test_twice_the_rows_move_no_threshold():
    """The rule N = 2 n* + 8 within 60 mm of amplitude, over the whole range of the tool."""
    rng = np.random.default_rng(3)
    worst, seen = 0.0, 0
    for _ in range(120):
        layer = Layer(
            density=rng.uniform(700, 2000), viscosity=10.0 ** rng.uniform(-3.3, 2.3), surface_tension=rng.uniform(0.02, 0.1),
            depth=10.0 ** rng.uniform(-3, -0.7),
        )  # fmt: skip
        k = 10.0 ** rng.uniform(0.8, 3.7, 4)
        w = np.full(4, 2 * np.pi * 10.0 ** rng.uniform(0.7, 3.3))
        for subharmonic in (False, True):
            one, two = (
                first_roots(layer, k, w, 0.0, 0.06 * w * w, subharmonic=subharmonic, extra_rows=extra)
                for extra in (0, rows_needed(0.06, float(k.max())))
            )
            assert (np.isfinite(one) == np.isfinite(two)).all()
            some = np.isfinite(one)
            seen += np.count_nonzero(some)
            worst = max(worst, np.abs(one[some] / two[some] - 1.0).max(initial=0.0))
    assert seen > 300
    # where roots are close to each other they are the square root of the rounding away, never more
    assert worst < 1e-7


def test_thresholds_scale_with_the_dimensions():
    """Lengths times c, times times c^(1/2) at the same gravity: accelerations stay."""
    c = 2.7
    big = Layer(
        density=SYRUP.density, viscosity=SYRUP.viscosity * c**1.5, surface_tension=SYRUP.surface_tension * c * c,
        depth=SYRUP.depth * c,
    )  # fmt: skip
    k, w = np.array([52.6, 120.0, 300.0]), np.full(3, 2 * np.pi * 50.0)
    for subharmonic in (False, True):
        one = first_roots(SYRUP, k, w, 0.0, 0.05 * w * w, subharmonic=subharmonic)
        two = first_roots(big, k / c, w / np.sqrt(c), 0.0, 0.05 * w * w, subharmonic=subharmonic)
        np.testing.assert_allclose(two, one, rtol=1e-10)


def test_take_keeps_cases_apart():
    k = np.array([60.0, 200.0, 700.0])
    half = Half.of(THIN, k, np.full(3, 400.0), 0.0, 10, subharmonic=True)
    push = np.array([5.0, 50.0, 500.0])
    assert len(half) == 3
    np.testing.assert_array_equal(half.take(np.array([2, 0])).margin(push[[2, 0]]), half.margin(push)[[2, 0]])
    np.testing.assert_array_equal(half.take(k > 100.0).margin(push[1:]), half.margin(push)[1:])


def test_rows_follow_the_harmonics_at_work():
    """N = 2 sqrt(A k) + 8."""
    assert rows_needed(0.0, 100.0) == 8
    assert rows_needed(0.04, 100.0) == 12
    assert rows_needed(-1.0, 100.0) == 8
