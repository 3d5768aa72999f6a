"""First roots of many functions at once: cases built to break a naive scan."""

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from containment.physics.crossings import first_crossing, refined
from containment.physics.dispersion import Layer
from containment.physics.edges import first_roots
from containment.physics.hill import Half


class Functions:
    """Plain functions of the acceleration, one a case."""

    def __init__(self, functions):
        self.functions = list(functions)

    def margin(self, acceleration):
        return np.array([f(a) for f, a in zip(self.functions, acceleration, strict=True)])

    def take(self, chosen):
        return Functions(self.functions[i] for i in chosen)


def crossing(functions, start, stop, turns=0.01):
    n = len(functions)
    return first_crossing(Functions(functions), np.full(n, start), np.full(n, stop), turns=np.full(n, turns))


@pytest.mark.parametrize("gap", [1e-3, 1e-4, 1e-5, 1e-6])
@pytest.mark.parametrize("fall", [0.0, 1.0, 4.0, 10.0])
def test_close_pairs_are_not_stepped_over(gap, fall):
    """Two roots a factor exp(gap) apart, anywhere, on a magnitude that falls like a^-fall besides."""
    rng = np.random.default_rng(int(1e6 * gap) + int(fall))
    middle = rng.uniform(np.log(1.2), np.log(30.0), 200)
    functions = [lambda a, m=m: ((np.log(a) - m) ** 2 - 0.25 * gap * gap) * a**-fall for m in middle]
    found = crossing(functions, 1.0, 60.0)
    np.testing.assert_allclose(found, np.exp(middle - 0.5 * gap), rtol=1e-3 * gap + 1e-11)


def test_a_touching_dip_without_roots_is_no_root():
    functions = [lambda a, m=m: (np.log(a) - m) ** 2 + 1e-13 for m in np.linspace(0.5, 3.0, 50)]
    assert np.isinf(crossing(functions, 1.0, 30.0)).all()


def test_single_roots_to_twelve_digits():
    roots = np.geomspace(1.001, 29.0, 40)
    found = crossing([lambda a, r=r: r - a for r in roots], 1.0, 30.0)
    np.testing.assert_allclose(found, roots, rtol=2e-12)


def test_nothing_to_search_and_roots_beyond_the_end():
    assert crossing([lambda a: 5.0 - a], 3.0, 2.0)[0] == np.inf
    assert crossing([lambda a: 5.0 - a], 1.0, 4.999)[0] == np.inf
    assert crossing([lambda a: 5.0 - a], 1.0, 5.001)[0] == pytest.approx(5.0, rel=1e-12)


def test_refined_meets_roots_of_steep_and_flat_functions():
    roots = np.geomspace(1e-6, 1e6, 25)

    def function(a):
        return np.sinh(3.0 * np.log(a / roots)) ** 3  # triple root: flat at the root, steep away from it

    np.testing.assert_allclose(refined(function, roots * 0.3, roots * 7.0), roots, rtol=1e-11)


# Layers with a tongue whose boundary turns back in wavenumber: inside the bracket of k (1/m) two roots meet and vanish.
FOLDS = {
    "viscous and shallow, subharmonic": (1261.0, 1.41, 0.0634, 0.006, 60.0, True, 1100.0, 1400.0),
    "viscous, harmonic": (1000.0, 1.0, 0.05, 0.03, 100.0, False, 1700.0, 2100.0),
    "stable at rest, subharmonic pair above another": (1000.0, 1.0, 0.05, 0.03, 100.0, True, 1500.0, 1900.0),
    "shallow, second pair": (1261.0, 1.41, 0.0634, 0.006, 60.0, True, 700.0, 900.0),
}


def function_at(layer, k, w, subharmonic):
    """Return the determinant as a function of many accelerations at one wavenumber."""
    half = Half.of(layer, np.full(1, k), np.full(1, w), 0.0, 60, subharmonic=subharmonic)
    return lambda a: half.take(np.zeros(len(a), dtype=np.intp)).margin(np.asarray(a, dtype=np.float64))


def sign_changes(function, levels):
    positive = function(levels) > 0.0
    return np.flatnonzero(positive[1:] != positive[:-1])


def dip(function, x, reach, sign):
    """Return place (log a) and depth of the lowest point of sign * function near x."""
    grid = np.linspace(x - reach, x + reach, 401)
    at = int(np.clip(np.argmin(sign * function(np.exp(grid))), 1, 399))
    best = minimize_scalar(
        lambda y: sign * function([np.exp(y)])[0], bounds=(grid[at - 1], grid[at + 1]), method="bounded",
        options={"xatol": 1e-13},
    )  # fmt: skip
    return float(best.x), float(best.fun)


@pytest.mark.parametrize("name", FOLDS)
def test_pairs_at_the_fold_of_a_real_tongue(name):
    """k goes to the fold until the pair is a factor 1 + 1e-3 ... 1e-6 apart; its first root must still be met."""
    density, mu, gamma, depth, f, subharmonic, pair_at, none_at = FOLDS[name]
    layer = Layer(density=density, viscosity=mu, surface_tension=gamma, depth=depth)
    w = 2.0 * np.pi * f
    cap = 0.06 * w * w
    levels = np.geomspace(1e-3 * cap, cap, 1500)
    fewest = len(sign_changes(function_at(layer, none_at, w, subharmonic), levels))
    assert len(sign_changes(function_at(layer, pair_at, w, subharmonic), levels)) == fewest + 2
    for _ in range(12):
        middle = 0.5 * (pair_at + none_at)
        if len(sign_changes(function_at(layer, middle, w, subharmonic), levels)) > fewest:
            pair_at = middle
        else:
            none_at = middle
    function = function_at(layer, pair_at, w, subharmonic)
    at = sign_changes(function, levels)
    first = at[np.argmin(np.diff(at))]
    sign = 1.0 if function(levels[first : first + 1])[0] > 0.0 else -1.0
    x = np.log(levels[first + 1])
    for _ in range(34):
        middle = 0.5 * (pair_at + none_at)
        place, depth_of_dip = dip(function_at(layer, middle, w, subharmonic), x, 0.05, sign)
        if depth_of_dip < 0.0:
            pair_at, x = middle, place
        else:
            none_at = middle
    fold = pair_at

    def pair(k):
        function = function_at(layer, k, w, subharmonic)
        place, depth_of_dip = dip(function, x, 0.05, sign)
        assert depth_of_dip < 0.0
        value = lambda y: sign * function([np.exp(y)])[0]  # noqa: E731
        return brentq(value, place - 0.1, place, xtol=1e-15), brentq(value, place, place + 0.1, xtol=1e-15)

    side = 1.0 if FOLDS[name][6] > FOLDS[name][7] else -1.0
    far = pair(fold * (1.0 + side * 1e-6))
    for gap in (1e-3, 1e-4, 1e-5, 1e-6):
        # the gap grows like the square root of the distance from the fold
        k = fold * (1.0 + side * 1e-6 * (gap / (far[1] - far[0])) ** 2)
        found = pair(k)
        assert 0.5 * gap < found[1] - found[0] < 2.0 * gap
        # from beyond the root before the pair, where there is one
        before = levels[sign_changes(function_at(layer, k, w, subharmonic), levels)]
        before = before[before < 0.97 * np.exp(found[0])]
        start = np.full(1, 1.02 * before[-1] if len(before) else levels[0])
        got = first_roots(
            layer, np.full(1, k), np.full(1, w), 0.0, np.full(1, cap), subharmonic=subharmonic, start=start, extra_rows=30
        )[0]
        assert got == pytest.approx(np.exp(found[0]), rel=0.05 * gap + 1e-9)


def test_first_roots_against_very_dense_marching():
    """400 random functions, 1,000 levels each: no sign change comes before the root that is found."""
    rng = np.random.default_rng(11)
    checked = 0
    for _ in range(50):
        layer = Layer(
            density=1200.0, viscosity=10.0 ** rng.uniform(-3.3, 2.0), surface_tension=rng.uniform(0.02, 0.08),
            depth=10.0 ** rng.uniform(-3, -0.7),
        )  # fmt: skip
        k = 10.0 ** rng.uniform(1.3, 3.5, 4)
        w = np.full(4, 2 * np.pi * 10.0 ** rng.uniform(0.7, 2.7))
        stop = 0.06 * w * w
        for subharmonic in (False, True):
            root = first_roots(layer, k, w, 0.0, stop, subharmonic=subharmonic)
            half = Half.of(layer, k, w, 0.0, int(2 * np.sqrt(0.06 * k.max())) + 16, subharmonic=subharmonic)
            start = half.margin(0.9 * half.root_free_below()) > 0.0
            for a in np.geomspace(1e-4, 1.0, 1000)[:, None] * np.minimum(stop, root)[None, :] * (1.0 - 1e-9):
                assert ((half.margin(a) > 0.0) == start).all()
            checked += np.count_nonzero(np.isfinite(root))
    assert checked > 100
