"""The matrix of a layer against the four boundary conditions solved in 120 and more digits, an independent route."""

import mpmath as mp
import numpy as np
import pytest

from containment.physics.dispersion import Layer
from containment.physics.surface_matrix import layer_matrix, reduced_root, surface_entries, surface_matrix

CASES = [
    (reduced_depth, size, angle)
    for reduced_depth in (1e-3, 0.04, 0.3, 0.9, 1.7, 6.0, 40.0)
    for size in (0.0, 1e-8, 1e-3, 0.4, 30.0, 4e3)
    for angle in (0.0, 1.1, -1.5707)
]


def solved(x, reduced_depth):
    """Return M11, M12, M21, M22 over mu k from the conditions at the base and the surface (unit k)."""
    q, depth = 1 + mp.mpc(x), mp.mpf(reduced_depth)

    def derivatives(z):
        c, s, cq, sq = mp.cosh(z), mp.sinh(z), mp.cosh(q * z), mp.sinh(q * z)
        return [[c, s, cq, sq], [s, c, q * sq, q * cq], [c, s, q**2 * cq, q**2 * sq], [s, c, q**3 * sq, q**3 * cq]]

    base, top = derivatives(mp.mpf(0)), derivatives(depth)
    system = mp.matrix([base[0], base[1], top[0], top[1]])
    stresses = []
    for given in ([0, 0, 1, 0], [0, 0, 0, 1]):
        c = mp.lu_solve(system, mp.matrix(given))
        w = [sum(c[i] * row[i] for i in range(4)) for row in top]
        stresses += [(q * q + 2) * w[1] - w[3], w[2] + w[0]]
    return stresses


@pytest.fixture(autouse=True)
def digits():
    with mp.workdps(400):
        yield


@pytest.mark.parametrize(("reduced_depth", "size", "angle"), CASES)
def test_entries_and_slopes(reduced_depth, size, angle):
    x = complex(reduced_root(np.array(size * np.exp(1j * angle))))
    if abs(x) * reduced_depth > 300.0:
        pytest.skip("beyond the digits of the reference")
    m, slope = surface_matrix(x, reduced_depth)
    for entry, alone in zip(m, surface_entries(x, reduced_depth), strict=True):
        assert complex(entry) == complex(alone)
    tolerance = 3e-14 / min(1.0, reduced_depth)
    at = mp.mpc(x) if x else mp.mpf(10) ** -60
    step = mp.mpf(10) ** -30 * max(abs(x), 1e-6)
    here, above, below = solved(at, reduced_depth), solved(at + step, reduced_depth), solved(at - step, reduced_depth)
    # reciprocity: the two couplings of the reference agree
    assert abs(here[1] - here[2]) <= mp.mpf(10) ** -20 * (abs(here[1]) + 1)
    for entry, entry_x, i in zip(m, slope, (0, 1, 3), strict=True):
        expected, expected_x = complex(here[i]), complex((above[i] - below[i]) / (2 * step))
        assert abs(complex(entry) - expected) <= tolerance * abs(expected) + 1e-50
        assert abs(complex(entry_x) - expected_x) <= 10 * tolerance * abs(expected_x)


@pytest.mark.parametrize("depth", [3e-4, 3e-3, 0.03, 0.3, np.inf])
def test_clean_surface_is_the_layer_s_impedance(depth):
    layer = Layer(density=1261.0, viscosity=1.41, surface_tension=0.0634, depth=depth)
    k = np.geomspace(5.0, 5e3, 40)
    s = np.geomspace(1e-9, 1e6, 31)[:, None] * np.exp(1.3j)
    m, _ = layer_matrix(s, k, density=1261.0, viscosity=1.41, depth=depth)
    z = m.normal - m.coupling**2 / m.tangential
    assert np.abs(z / layer.impedance(s, k) - 1.0).max() < 2e-12


def test_scaling_with_the_units():
    """Lengths times 10, times times 5, masses times 3: M is a stress per velocity, kg/(m^2 s)."""
    s, k = np.array([0.3 + 40j, 2.0 + 0.1j]), np.array([50.0, 900.0])
    one, _ = layer_matrix(s, k, density=1200.0, viscosity=0.7, depth=0.004)
    two, _ = layer_matrix(s / 5, k / 10, density=1200.0 * 3 / 1000, viscosity=0.7 * 3 / 50, depth=0.04)
    for a, b in zip(one, two, strict=True):
        np.testing.assert_allclose(b, a * 3 / 500, rtol=1e-12)


def test_large_arguments_do_not_overflow():
    with np.errstate(all="raise", under="ignore"):
        m, slope = surface_matrix(np.array([1e7 * (1 + 1j), 1e5 + 0j, 0j]), np.array([1e4, 1e5, 1e6]))
    assert all(np.isfinite(entry).all() for entry in (*m, *slope))
