"""Side-wall drag: the closed forms against numerical quadrature, the lookup, the bound, the known damping."""

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.special import jv, jvp, yv, yvp

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.dispersion import Layer
from containment.physics.edges import first_roots
from containment.physics.film import COVERED, FilmedLayer
from containment.physics.viscoelastic import ComplexViscosity, ViscoelasticLayer
from containment.physics.wall_drag import (
    DraggedLayer,
    WallFactors,
    annulus_wall_factors,
    boundary_layer_share,
    box_wall_factors,
    cylinder_wall_factors,
    slot_wall_factors,
)
from containment.physics.wall_factors import cylinder_wall_factor, largest_cylinder_wall_factor, slot_wall_factor
from containment.physics.wavenumbers import annulus, box, cylinder, slot

DEPTHS = [0.002, 0.02, 0.2]


def over_depth(k, depth):
    """Return the integrals of cosh^2 and sinh^2 (k z) over the depth, by quadrature."""
    scale = np.cosh(k * depth) ** 2
    return (
        quad(lambda z: np.cosh(k * z) ** 2 / scale, 0, depth, epsrel=1e-12)[0],
        quad(lambda z: np.sinh(k * z) ** 2 / scale, 0, depth, epsrel=1e-12)[0],
    )


def ring(k, m, radii, f, f_slope, depth):
    """Return lambda_w of f(r) cos(m theta) cosh(kz): gradients squared over the walls and over the volume."""
    cosh2, sinh2 = over_depth(k, depth)
    inner, outer = radii
    turn = 2.0 if m == 0 else 1.0  # 2 pi or pi over the angle, for the parts with cos^2
    sine = 0.0 if m == 0 else 1.0

    def squares(r):
        return (
            turn * (f_slope(r) ** 2 * cosh2 + k * k * f(r) ** 2 * sinh2) + sine * (m / r * f(r)) ** 2 * cosh2
        )

    volume = quad(lambda r: r * squares(r), inner, outer, epsrel=1e-11, limit=200)[0]
    wall = sum(r * squares(r) for r in radii if r > 0)
    return wall / volume


@pytest.mark.parametrize("depth", DEPTHS)
@pytest.mark.parametrize("i", [0, 1, 2, 3, 7, 40])
def test_cylinder_by_quadrature(depth, i):
    modes, radius = cylinder(0.035), 0.035
    k, m = modes.discrete[i], int(modes.first[i])
    expected = ring(k, m, (0.0, radius), lambda r: jv(m, k * r), lambda r: k * jvp(m, k * r), depth)
    found = cylinder_wall_factors(modes, radius=radius, depth=depth)(modes.discrete)[i]
    assert found == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("depth", DEPTHS)
@pytest.mark.parametrize("i", [0, 1, 3, 10, 40])
def test_annulus_by_quadrature(depth, i):
    inner, outer = 0.02, 0.05
    modes = annulus(inner, outer)
    k, m = modes.discrete[i], int(modes.first[i])
    a, b = yvp(m, k * inner), jvp(m, k * inner)
    expected = ring(
        k, m, (inner, outer), lambda r: jv(m, k * r) * a - yv(m, k * r) * b,
        lambda r: k * (jvp(m, k * r) * a - yvp(m, k * r) * b), depth,
    )  # fmt: skip
    found = annulus_wall_factors(modes, inner=inner, outer=outer, depth=depth)(modes.discrete)[i]
    assert found == pytest.approx(expected, rel=1e-6)


@pytest.mark.parametrize("depth", DEPTHS)
@pytest.mark.parametrize("i", [0, 1, 2, 3, 4, 25])
def test_box_by_quadrature(depth, i):
    width, length = 0.06, 0.083
    modes = box(width, length)
    kx, ky, k = np.pi * modes.first[i] / width, np.pi * modes.second[i] / length, modes.discrete[i]
    cosh2, sinh2 = over_depth(k, depth)

    def mean(function, side):
        return quad(function, 0, side, epsrel=1e-12, limit=200)[0]

    def squares(side, wave):
        return mean(lambda x: np.cos(wave * x) ** 2, side), mean(lambda x: np.sin(wave * x) ** 2, side)

    (cx, sx), (cy, sy) = squares(width, kx), squares(length, ky)
    volume = (kx**2 * sx * cy + ky**2 * cx * sy) * cosh2 + k**2 * cx * cy * sinh2
    wall = 2 * (ky**2 * sy * cosh2 + k**2 * cy * sinh2) + 2 * (kx**2 * sx * cosh2 + k**2 * cx * sinh2)
    found = box_wall_factors(modes, width=width, length=length, depth=depth)(modes.discrete)[i]
    assert found == pytest.approx(wall / volume, rel=1e-7)


def test_slot_by_quadrature():
    width, depth = 0.01, 0.004
    for k in slot(width).discrete[:4]:
        cosh2, sinh2 = over_depth(k, depth)
        volume = 0.5 * width * k * k * (cosh2 + sinh2)
        found = slot_wall_factors(slot(width), width=width, depth=depth)(np.array([k]))[0]
        assert found == pytest.approx(2 * k * k * sinh2 / volume, rel=1e-9)


@pytest.mark.parametrize("depth", [1e-3, 0.1, 1.0, np.inf])
def test_bounds_between_the_modes(depth):
    modes = cylinder(1.0)
    exact = cylinder_wall_factor(modes.discrete, modes.first, radius=1.0, depth=depth)
    assert np.all(largest_cylinder_wall_factor(modes.discrete, radius=1.0) > exact)
    rectangle = box(0.06, 0.083)
    factors = box_wall_factors(rectangle, width=0.06, length=0.083, depth=0.06 * depth)
    assert np.all(factors.factor <= 4 / 0.06 + 4 / 0.083)


def test_lookup():
    modes = np.array([1.0, 2.0, 2.0 * (1 + 1e-12), 5.0])
    factors = WallFactors(modes, np.array([7.0, 3.0, 4.0, 1.0]), lambda k: 10 * k)
    np.testing.assert_allclose(factors(np.array([0.5, 1.0, 2.0, 3.0, 5.0, 9.0])), [5.0, 7.0, 4.0, 30.0, 1.0, 90.0])
    # every mode of a spectrum is found, in any shape
    modes = box(0.06, 0.06)
    square = box_wall_factors(modes, width=0.06, length=0.06, depth=0.02)
    looked = square(modes.discrete[None, :])[0]
    assert np.all(looked >= square.factor) and np.all(looked < square.beyond(modes.discrete))


def test_scaling():
    """lambda_w is one over a length."""
    one = cylinder_wall_factor(100.0, 1, radius=0.04, depth=0.02)
    assert cylinder_wall_factor(10.0, 1, radius=0.4, depth=0.2) == pytest.approx(one / 10, rel=1e-12)
    assert slot_wall_factor(10.0, width=0.4, depth=0.2) == pytest.approx(
        slot_wall_factor(100.0, width=0.04, depth=0.02) / 10, rel=1e-12
    )
    assert boundary_layer_share(200.0, kinematic_viscosity=1e-4, width=0.05) == pytest.approx(
        0.5 * boundary_layer_share(50.0, kinematic_viscosity=1e-4, width=0.05)
    )


PLAIN = Layer(density=1000.0, viscosity=1e-3, surface_tension=0.07, depth=0.04, gravity=G)
LAYERS = {
    "water": PLAIN,
    "syrup": Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03),
    "film": FilmedLayer(density=1261.0, viscosity=1.41, surface_tension=0.0634, depth=0.006, film_modulus=0.05),
    "skin": FilmedLayer(density=1261.0, viscosity=1.41, surface_tension=0.0634, depth=0.006, film_modulus=COVERED),
    "gel": ViscoelasticLayer(
        density=1000.0, surface_tension=0.06, depth=0.02,
        liquid=ComplexViscosity.kelvin_voigt(viscosity=1.0, modulus=30.0),
    ),
    "jeffreys": ViscoelasticLayer(
        density=1000.0, surface_tension=0.06, depth=0.02,
        liquid=ComplexViscosity.jeffreys(viscosity=3.0, relaxation=0.05, retardation=0.01),
    ),
}  # fmt: skip
RIGHT = np.geomspace(1e-8, 1e6, 57)[:, None, None] * np.exp(1j * np.linspace(-0.5, 0.5, 9) * np.pi)[:, None]


def test_damping_of_a_wave_of_low_viscosity():
    """Decay rate of the walls' boundary layers: lambda_w sqrt(nu w0 / 8) (Case & Parkinson 1957, from memory)."""
    modes, radius = cylinder(0.03), 0.03
    dragged = DraggedLayer(layer=PLAIN, wall_factor=cylinder_wall_factors(modes, radius=radius, depth=0.04))
    k = modes.discrete[:1]
    rates = []
    for layer in (PLAIN, dragged):
        s = np.array([1j * np.sqrt((G * k[0] + 7e-5 * k[0] ** 3) * np.tanh(k[0] * 0.04))])
        for _ in range(20):
            value, slope = layer.coefficient_and_slope(s, k)
            s = s - value / slope
        rates.append(-s.real[0])
    natural = s.imag[0]
    expected = cylinder_wall_factor(k[0], 1, radius=radius, depth=0.04) * np.sqrt(1e-6 * natural / 8)
    assert rates[1] - rates[0] == pytest.approx(expected, rel=0.03)


@pytest.mark.parametrize("name", list(LAYERS))
def test_bound_and_slope_with_drag(name):
    k = np.geomspace(20.0, 4e3, 40)
    it = DraggedLayer(layer=LAYERS[name], wall_factor=lambda q: np.full_like(q, 90.0))
    size = np.abs(it.coefficient(RIGHT, k))
    bound = it.smallest_coefficient(k)
    held = it.stiffness(k) > 0
    assert np.all(size >= bound * (1 - 1e-12))
    assert np.all(bound[held] > 0) and np.all(bound[~held] == 0)
    assert np.all(bound <= LAYERS[name].smallest_coefficient(k) * 2)
    assert np.all((size >= 2 / it.density * it.static_impedance(k) * np.abs(RIGHT[..., :1]) * (1 - 1e-9))[..., held])
    massive = 2 / it.density * (it.added_mass(k) * RIGHT.imag[..., :1] ** 2 - np.maximum(it.stiffness(k), 0))
    assert np.all((size >= massive * (1 - 1e-9))[..., held])
    s = np.array([0.5 + 3j, 40j, 2.0 - 500j, 30.0])[:, None]
    step = 2e-4 * np.abs(s)
    one, two = ((it.coefficient(s + h, k) - it.coefficient(s - h, k)) / (2 * h) for h in (step, 2 * step))
    np.testing.assert_allclose((4 * one - two) / 3, it.coefficient_and_slope(s, k)[1], rtol=1e-6)
    np.testing.assert_allclose(it.coefficient(0.0, k), LAYERS[name].coefficient(0.0, k), rtol=1e-14)


def test_drag_weakens_the_hold():
    modes = cylinder(0.035)
    plain = Layer(density=1261.0, viscosity=1.41, surface_tension=0.0634, depth=0.03)
    dragged = DraggedLayer(layer=plain, wall_factor=cylinder_wall_factors(modes, radius=0.035, depth=0.03))
    k, w = modes.discrete[:1], np.array([2 * np.pi * 60])
    low = [first_roots(it, k, w, 0.0, np.array([900.0]), subharmonic=False)[0] for it in (plain, dragged)]
    assert low[0] < low[1] < 3 * low[0]


def test_drag_scales_with_the_units():
    """Lengths times 10, masses times 3, times times 5."""
    k = np.array([60.0, 900.0])
    s = np.array([0.3, 2 + 60j])[:, None]
    a = DraggedLayer(layer=LAYERS["syrup"], wall_factor=lambda q: np.full_like(q, 40.0))
    scaled = Layer(
        density=1410.0 * 3 / 1000, viscosity=10.0 * 3 / 50, surface_tension=0.08 * 3 / 25, depth=0.3,
        gravity=-G * 10 / 25,
    )  # fmt: skip
    b = DraggedLayer(layer=scaled, wall_factor=lambda q: np.full_like(q, 4.0))
    np.testing.assert_allclose(b.coefficient(s / 5, k / 10), a.coefficient(s, k) * 10 / 25, rtol=1e-11)
