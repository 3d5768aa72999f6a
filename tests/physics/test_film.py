"""A surface film: limits, the proven bound, the slope, and thresholds by a route that shares no code."""

import mpmath as mp
import numpy as np
import pytest
from scipy.optimize import brentq
from scipy.special import jnp_zeros

from containment.constants import STANDARD_GRAVITY as G
from containment.errors import InputError
from containment.physics.dispersion import Layer
from containment.physics.edges import first_roots, hold_edges
from containment.physics.film import COVERED, FilmedLayer
from containment.physics.wavenumbers import cylinder

THICK = {"density": 1410.0, "viscosity": 10.0, "surface_tension": 0.08, "depth": 0.03}
THIN = {"density": 1261.0, "viscosity": 1.41, "surface_tension": 0.0634, "depth": 0.006}
WATERY = {"density": 1000.0, "viscosity": 1e-3, "surface_tension": 0.05, "depth": 0.01}
RIGHT = np.geomspace(1e-8, 1e7, 61)[:, None, None] * np.exp(1j * np.linspace(-0.5, 0.5, 9) * np.pi)[:, None]


def edges(layer, frequency, radius=0.035):
    capillary = np.sqrt(layer.density * G / layer.surface_tension)
    return hold_edges(layer, cylinder(radius), [frequency], capillary_wavenumber=capillary, depth=layer.depth)


@pytest.mark.parametrize("liquid", [THICK, THIN, WATERY])
def test_no_film_is_the_clean_layer(liquid):
    k = np.geomspace(5.0, 3e3, 30)
    s = RIGHT[:, :, 0, None]
    clean, none = Layer(**liquid), FilmedLayer(**liquid, film_modulus=0.0)
    np.testing.assert_allclose(none.coefficient(s, k), clean.coefficient(s, k), rtol=1e-9)
    faint = FilmedLayer(**liquid, film_modulus=1e-14)
    some = s[np.abs(s[:, 0, 0]) > 1.0]
    np.testing.assert_allclose(faint.coefficient(some, k), clean.coefficient(some, k), rtol=1e-7)


@pytest.mark.parametrize("liquid", [THICK, THIN, WATERY])
def test_stiff_film_is_the_inextensible_one(liquid):
    k = np.geomspace(5.0, 3e3, 30)
    s = RIGHT[:, :, 0, None]
    some = s[np.abs(s[:, 0, 0]) < 1e4]
    stiff, skin = FilmedLayer(**liquid, film_modulus=1e15), FilmedLayer(**liquid, film_modulus=COVERED)
    np.testing.assert_allclose(stiff.coefficient(some, k), skin.coefficient(some, k), rtol=1e-7)


@pytest.mark.parametrize("modulus", [0.0, 1e-4, 0.03, 5.0, 1e4, COVERED])
@pytest.mark.parametrize("liquid", [THICK, THIN, WATERY])
def test_slope_is_the_derivative(liquid, modulus):
    layer = FilmedLayer(**liquid, film_modulus=modulus)
    k = np.array([20.0, 300.0, 2e3])
    s = np.array([0.5 + 3j, 40j, 2.0 - 500j, 1e4 + 0j])[:, None]
    step = 1e-4 * np.abs(s)
    slope = layer.coefficient_and_slope(s, k)[1]
    one, two = ((layer.coefficient(s + h, k) - layer.coefficient(s - h, k)) / (2 * h) for h in (step, 2 * step))
    np.testing.assert_allclose((4 * one - two) / 3, slope, rtol=1e-6)
    np.testing.assert_allclose(layer.coefficient_and_slope(s, k)[0], layer.coefficient(s, k), rtol=1e-13)


@pytest.mark.parametrize("modulus", [0.0, 1e-4, 0.03, 5.0, 1e4, COVERED])
@pytest.mark.parametrize("liquid", [THICK, THIN, WATERY])
def test_no_coefficient_is_below_the_bound(liquid, modulus):
    layer = FilmedLayer(**liquid, film_modulus=modulus)
    k = np.geomspace(10.0, 1e4, 60)
    bound = layer.smallest_coefficient(k)
    size = np.abs(layer.coefficient(RIGHT, k))
    assert np.all(size >= bound * (1 - 1e-12))
    floor = 2 / layer.density * layer.static_impedance(k) * np.abs(RIGHT[..., :1])
    held = layer.stiffness(k) > 0
    assert np.all((size >= floor * (1 - 1e-9))[..., held])
    assert np.all(bound[held] > 0) and np.all(bound[~held] == 0)
    spring = np.maximum(layer.stiffness(k), 0)
    massive = 2 / layer.density * (layer.added_mass(k) * RIGHT.imag[..., :1] ** 2 - spring)
    assert np.all((size >= massive * (1 - 1e-9))[..., held])
    # and the bound is of use: not absurdly far below what occurs
    assert np.median((size.min(axis=(0, 1)) / np.where(held, bound, np.inf))[held]) < 100


def test_at_rest_slow_motion_is_resisted_fourfold_in_a_thin_film():
    """Lubrication: h^3/(3 mu) becomes h^3/(12 mu) under an inextensible film (textbook; from memory)."""
    thin = {"density": 900.0, "viscosity": 2.0, "surface_tension": 0.03, "depth": 1e-4}
    k = np.array([10.0, 30.0])
    skin = FilmedLayer(**thin, film_modulus=COVERED).static_impedance(k)
    clean = FilmedLayer(**thin, film_modulus=0.0).static_impedance(k)
    np.testing.assert_allclose(skin * k**2 * 1e-12 / 2.0, 12.0, rtol=1e-4)
    np.testing.assert_allclose(clean * k**2 * 1e-12 / 2.0, 3.0, rtol=1e-4)


def test_high_frequency_damping_by_a_film():
    """Deep water of low viscosity: a skin adds mu q, so sqrt(rho mu w / 2), to the resistance (Lamb, from memory)."""
    layer = FilmedLayer(density=1e3, viscosity=1e-3, surface_tension=0.0, depth=np.inf, film_modulus=COVERED)
    k, w = np.array(400.0), 2e3
    z = layer.coefficient(1j * w, k) - 2 / 1e3 * layer.stiffness(k)
    z = z * 1e3 / 2 / (1j * w)
    assert abs(z.real / (np.sqrt(1e3 * 1e-3 * w / 2) * 1.0) - 1) < 0.05


def test_bad_modulus():
    for bad in (-1.0, np.nan):
        with pytest.raises(InputError, match="film modulus"):
            FilmedLayer(**THICK, film_modulus=bad)


@pytest.mark.parametrize(
    ("liquid", "frequency", "modulus", "lower", "upper"),
    [
        (THICK, 50.0, 0.0, 21.335, 81.766),
        (THICK, 50.0, COVERED, 23.035, 82.329),
        (THIN, 60.0, 0.0, 47.108, 53.986),
        (THIN, 60.0, COVERED, 59.936, 56.225),
    ],
)
def test_window_of_a_cylinder_of_70_mm(liquid, frequency, modulus, lower, upper):
    """The values were computed by the independent route below, all modes up to k R = 60."""
    result = edges(FilmedLayer(**liquid, film_modulus=modulus), frequency)
    assert result.lower[0] / G == pytest.approx(lower, abs=6e-4)
    assert result.upper[0] / G == pytest.approx(upper, abs=6e-4)


def determinant_conditions(liquid, modulus, k, w):
    """Return A_n of the harmonic and the subharmonic system from the four conditions of the layer, in 60 digits."""
    rho, mu, gamma, h = (mp.mpf(liquid[n]) for n in ("density", "viscosity", "surface_tension", "depth"))
    k = mp.mpf(k)

    def answer(s):
        c0 = -rho * mp.mpf(G) + gamma * k * k
        if s == 0:
            return 2 / rho * c0
        q = mp.sqrt(k * k + rho * s / mu)
        rows = []
        for z in (mp.mpf(0), h):
            e1, e2 = mp.exp(k * (z - h)), mp.exp(-k * z)
            e3, e4 = mp.exp(q * (z - h)), mp.exp(-q * z)
            rows.append([[(r**n) * e for r, e in ((k, e1), (-k, e2), (q, e3), (-q, e4))] for n in range(4)])
        base, top = rows
        if modulus == np.inf:
            tangential = top[1]
        else:
            tangential = [
                mu * (top[2][i] + k * k * top[0][i]) + mp.mpf(modulus) * k * k / s * top[1][i] for i in range(4)
            ]
        c = mp.lu_solve(mp.matrix([base[0], base[1], top[0], tangential]), mp.matrix([0, 0, 1, 0]))
        w1, w3 = (sum(c[i] * top[n][i] for i in range(4)) for n in (1, 3))
        z_n = mu / k**2 * ((q * q + 2 * k * k) * w1 - w3)
        return 2 / rho * (c0 + s * z_n)

    return [[complex(answer(1j * (n + alpha) * w)) for n in range(40)] for alpha in (0.0, 0.5)]


def first_root(conditions, subharmonic, low, high):
    """Return the first neutral acceleration by a dense scan of the determinant of the two-sided system."""
    half = np.array(conditions[1 if subharmonic else 0])
    full = np.concatenate([np.conj(half[::-1]), half if subharmonic else half[1:]])

    def value(a):
        # tridiagonal determinant, rows divided by their coefficient
        last, this = 1.0 + 0j, 1.0 + 0j
        for i in range(1, len(full)):
            last, this = this, this - a * a / (full[i] * full[i - 1]) * last
        return (this * full[len(half) - 1]).real if not subharmonic else this.real

    grid = np.geomspace(low, high, 400)
    values = [value(a) for a in grid]
    for a, b, va, vb in zip(grid, grid[1:], values, values[1:], strict=False):
        if (va > 0) != (vb > 0):
            return brentq(value, a, b, rtol=1e-12)
    return np.inf


@pytest.mark.parametrize(
    ("liquid", "frequency", "modulus", "lower"),
    [
        (THICK, 50.0, 0.0, 21.335),
        (THICK, 50.0, COVERED, 23.035),
        (THIN, 60.0, COVERED, 59.936),
        (THIN, 60.0, 0.3, None),
        (WATERY, 80.0, 0.01, None),
    ],
)
def test_lower_side_by_the_independent_route(liquid, frequency, modulus, lower):
    with mp.workdps(60):
        k = jnp_zeros(1, 1)[0] / 0.035
        conditions = determinant_conditions(liquid, modulus, k, 2 * np.pi * frequency)
    root = first_root(conditions, False, 0.3 * G, 200 * G)
    if lower is not None:
        assert root / G == pytest.approx(lower, abs=6e-4)
    layer = FilmedLayer(**liquid, film_modulus=modulus)
    ours = first_roots(
        layer, np.array([k]), np.array([2 * np.pi * frequency]), 0.0, np.array([200 * G]), subharmonic=False
    )
    assert ours[0] == pytest.approx(root, rel=1e-9)


@pytest.mark.parametrize(
    ("liquid", "frequency", "modulus"),
    [(THICK, 50.0, COVERED), (THIN, 60.0, COVERED), (THIN, 60.0, 0.0), (THIN, 60.0, 0.3)],
)
def test_upper_side_by_the_independent_route(liquid, frequency, modulus):
    result = edges(FilmedLayer(**liquid, film_modulus=modulus), frequency)
    with mp.workdps(60):
        conditions = determinant_conditions(liquid, modulus, result.upper_wavenumber[0], 2 * np.pi * frequency)
    root = first_root(conditions, bool(result.upper_subharmonic[0]), 5 * G, 200 * G)
    assert result.upper[0] == pytest.approx(root, rel=1e-9)
