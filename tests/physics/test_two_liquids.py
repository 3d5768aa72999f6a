"""Two liquids: limits, symmetry, the proven bound, and the eight conditions solved directly."""

import mpmath as mp
import numpy as np
import pytest

from containment.errors import InputError
from containment.physics.dispersion import Layer
from containment.physics.two_liquids import TwoLiquids

PAIRS = {
    "oil under syrup": (1410.0, 10.0, 0.03, 880.0, 0.05, 0.05, 0.03),
    "thin": (1346.0, 7.2e-3, 1.6e-3, 949.0, 20e-3, 8.4e-3, 0.035),
    "deep": (1000.0, 1e-3, np.inf, 1.2, 1.8e-5, np.inf, 0.072),
    "viscous beyond": (1100.0, 0.01, 2e-3, 1000.0, 30.0, 1e-3, 0.01),
}
NAMES = (
    "layer_density", "layer_viscosity", "layer_depth", "beyond_density", "beyond_viscosity", "beyond_depth",
    "interfacial_tension",
)  # fmt: skip
RIGHT = np.geomspace(1e-8, 1e7, 61)[:, None, None] * np.exp(1j * np.linspace(-0.5, 0.5, 9) * np.pi)[:, None]


def pair(name, **changes):
    return TwoLiquids(**{**dict(zip(NAMES, PAIRS[name], strict=True)), **changes})


def eight_conditions(liquids, s, k):
    """Return A(s; k) from the velocity fields of both liquids: two walls, four conditions at the interface."""
    s, k = mp.mpc(s), mp.mpf(k)

    def columns(rho, mu, depth):
        """Derivatives 0-3 at the wall and the interface; z runs from the wall to the interface."""
        q = mp.sqrt(k * k + rho * s / mu)
        found = []
        for z in (mp.mpf(0), depth):
            factors = (
                (k, mp.exp(k * (z - depth))),
                (-k, mp.exp(-k * z)),
                (q, mp.exp(q * (z - depth))),
                (-q, mp.exp(-q * z)),
            )
            found.append([[(r**n) * e for r, e in factors] for n in range(4)])
        return q, found

    r1, m1, h1, r2, m2, h2, tension = (mp.mpf(getattr(liquids, name)) for name in NAMES)
    q1, (wall1, top1) = columns(r1, m1, h1)
    q2, (wall2, top2) = columns(r2, m2, h2)
    # the second liquid's z points the other way: odd derivatives change sign, w does not in the common frame
    top2 = [[(-1) ** n * e for e in row] for n, row in enumerate(top2)]
    nothing = [mp.mpf(0)] * 4
    rows = [
        wall1[0] + nothing,
        wall1[1] + nothing,
        nothing + wall2[0],
        nothing + wall2[1],
        top1[0] + nothing,
        nothing + top2[0],
        top1[1] + [-e for e in top2[1]],
        [m1 * (top1[2][i] + k**2 * top1[0][i]) for i in range(4)]
        + [-m2 * (top2[2][i] + k**2 * top2[0][i]) for i in range(4)],
    ]
    c = mp.lu_solve(mp.matrix(rows), mp.matrix([0, 0, 0, 0, 1, 1, 0, 0]))

    def stress(mu, q, top, offset):
        w1, w3 = (sum(c[offset + i] * top[n][i] for i in range(4)) for n in (1, 3))
        return mu / k**2 * ((q * q + 2 * k * k) * w1 - w3)

    z = stress(m1, q1, top1, 0) - stress(m2, q2, top2, 4)
    return 2 / abs(r1 - r2) * ((r1 - r2) * mp.mpf(liquids.gravity) + tension * k * k + s * z)


@pytest.mark.parametrize("name", ["oil under syrup", "thin", "viscous beyond"])
@pytest.mark.parametrize("s", [1e-3, 0.3 + 2j, 40j, 5.0 - 900j])
@pytest.mark.parametrize("k", [30.0, 400.0])
def test_against_the_eight_conditions(name, s, k):
    liquids = pair(name)
    with mp.workdps(60):
        expected = complex(eight_conditions(liquids, s, k))
    assert complex(liquids.coefficient(s, k)) == pytest.approx(expected, rel=1e-11)


@pytest.mark.parametrize("depth", [0.03, 1e-3, np.inf])
def test_one_liquid_limit(depth):
    layer = Layer(density=1261.0, viscosity=1.41, surface_tension=0.0634, depth=depth)
    k = np.geomspace(20.0, 3e3, 25)
    s = np.geomspace(1e-3, 1e5, 21)[:, None] * np.exp(0.45j * np.pi)
    vacuum = TwoLiquids(
        layer_density=1261.0, layer_viscosity=1.41, layer_depth=depth, beyond_density=1e-13, beyond_viscosity=1e-16,
        beyond_depth=0.05, interfacial_tension=0.0634,
    )  # fmt: skip
    np.testing.assert_allclose(vacuum.coefficient(s, k), layer.coefficient(s, k), rtol=1e-10)


@pytest.mark.parametrize("name", list(PAIRS))
def test_turning_the_vessel_over_changes_nothing(name):
    """The second liquid as the layer and gravity turned round: the same interface."""
    a = pair(name)
    values = PAIRS[name]
    turned = TwoLiquids(**dict(zip(NAMES, (*values[3:6], *values[:3], values[6]), strict=True)), gravity=-a.gravity)
    k = np.geomspace(30.0, 2e3, 9)
    s = np.array([0.0, 1e-3, 3 + 40j, 700j])[:, None]
    np.testing.assert_allclose(turned.coefficient(s, k), a.coefficient(s, k), rtol=1e-12)


@pytest.mark.parametrize("name", list(PAIRS))
def test_no_coefficient_is_below_the_bound(name):
    liquids = pair(name)
    k = np.geomspace(10.0, 1e4, 60)
    size = np.abs(liquids.coefficient(RIGHT, k))
    bound = liquids.smallest_coefficient(k)
    held = liquids.stiffness(k) > 0
    assert np.all(size >= bound * (1 - 1e-12))
    floor = 2 / liquids.density * liquids.static_impedance(k) * np.abs(RIGHT[..., :1])
    assert np.all((size >= floor * (1 - 1e-9))[..., held])
    assert np.all(bound[held] > 0) and np.all(bound[~held] == 0)
    spring = np.maximum(liquids.stiffness(k), 0)
    massive = 2 / liquids.density * (liquids.added_mass(k) * RIGHT.imag[..., :1] ** 2 - spring)
    assert np.all((size >= massive * (1 - 1e-9))[..., held])


@pytest.mark.parametrize("name", list(PAIRS))
def test_slope_and_slow_limit(name):
    liquids = pair(name)
    k = np.array([30.0, 500.0])
    s = np.array([2.0 + 1j, 300j])[:, None]
    step = 1e-4 * np.abs(s)
    one, two = ((liquids.coefficient(s + h, k) - liquids.coefficient(s - h, k)) / (2 * h) for h in (step, 2 * step))
    np.testing.assert_allclose((4 * one - two) / 3, liquids.coefficient_and_slope(s, k)[1], rtol=1e-6)
    np.testing.assert_allclose(liquids.coefficient_and_slope(s, k)[0], liquids.coefficient(s, k), rtol=1e-13)
    slope = liquids.coefficient_and_slope(0.0, k)[1]
    np.testing.assert_allclose(slope, 2 / liquids.density * liquids.static_impedance(k), rtol=1e-12)


def test_scaling_with_the_units():
    """Lengths times 10, masses times 3, times times 5."""
    a = pair("thin")
    l, m, t = 10.0, 3.0, 5.0  # noqa: E741
    d, v, g = m / l**3, m / (l * t), m / t**2
    values = [x * f for x, f in zip(PAIRS["thin"], (d, v, l, d, v, l, g), strict=True)]
    b = TwoLiquids(**dict(zip(NAMES, values, strict=True)), gravity=a.gravity * l / t**2)
    s, k = np.array([2.0 + 90j, 0.1]), np.array([120.0, 700.0])
    np.testing.assert_allclose(b.coefficient(s / t, k / l), a.coefficient(s, k) * l / t**2, rtol=1e-12)
    ours, scaled = a.averaged_threshold(k, 20.0), b.averaged_threshold(k / l, 20.0 / t)
    np.testing.assert_allclose(scaled, ours * l / t**2, rtol=1e-12)


def test_equal_densities_are_refused():
    with pytest.raises(InputError, match="density below the layer"):
        pair("thin", beyond_density=1346.0)
