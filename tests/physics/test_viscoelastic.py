"""Viscoelastic layers: limits in the relaxation time, the proven bound, the slope, deep limits in closed form."""

import mpmath as mp
import numpy as np
import pytest

from containment.constants import STANDARD_GRAVITY as G
from containment.errors import InputError
from containment.physics.dispersion import Layer
from containment.physics.edges import first_roots
from containment.physics.viscoelastic import ComplexViscosity, ViscoelasticLayer

BODY = {"density": 1100.0, "surface_tension": 0.06, "depth": 0.02}
LIQUIDS = {
    "newtonian": ComplexViscosity.newtonian(viscosity=3.0),
    "maxwell": ComplexViscosity.maxwell(viscosity=3.0, relaxation=0.02),
    "jeffreys": ComplexViscosity.jeffreys(viscosity=3.0, relaxation=0.05, retardation=0.01),
    "gel": ComplexViscosity.kelvin_voigt(viscosity=1.0, modulus=30.0),
    "soft gel": ComplexViscosity.kelvin_voigt(viscosity=0.01, modulus=3.0),
}
K = np.geomspace(10.0, 5e3, 50)
RIGHT = np.geomspace(1e-8, 1e6, 57)[:, None, None] * np.exp(1j * np.linspace(-0.5, 0.5, 9) * np.pi)[:, None]


def layer(name, **changes):
    return ViscoelasticLayer(**{**BODY, "liquid": LIQUIDS[name], **changes})


def test_newtonian_is_the_layer():
    s = RIGHT[:, :, 0, None]
    plain = Layer(**BODY, viscosity=3.0)
    np.testing.assert_allclose(layer("newtonian").coefficient(s, K), plain.coefficient(s, K), rtol=1e-9)
    np.testing.assert_allclose(layer("newtonian").static_impedance(K), plain.static_impedance(K), rtol=1e-11)
    np.testing.assert_allclose(layer("newtonian").inertia(K), plain.inertia(K), rtol=1e-9)
    assert np.all(layer("newtonian").smallest_coefficient(K) >= plain.smallest_coefficient(K) * (1 - 1e-9))


def test_vanishing_relaxation_time():
    s = np.array([0.1, 2 + 30j, 500j])[:, None]
    plain = Layer(**BODY, viscosity=3.0).coefficient(s, K)
    short = ComplexViscosity.maxwell(viscosity=3.0, relaxation=1e-14)
    np.testing.assert_allclose(layer("maxwell", liquid=short).coefficient(s, K), plain, rtol=1e-9)
    equal = ComplexViscosity.jeffreys(viscosity=3.0, relaxation=0.3, retardation=0.3)
    np.testing.assert_allclose(layer("maxwell", liquid=equal).coefficient(s, K), plain, rtol=1e-9)
    weak = ComplexViscosity.kelvin_voigt(viscosity=3.0, modulus=1e-12)
    np.testing.assert_allclose(layer("maxwell", liquid=weak).coefficient(s, K), plain, rtol=1e-9)


@pytest.mark.parametrize("name", list(LIQUIDS))
def test_each_frequency_is_a_newtonian_layer_of_complex_viscosity(name):
    """The deep closed form F = rho [(s + 2 nu k^2)^2 - 4 nu^2 k^3 q] with nu*(s), in 50 digits."""
    deep = layer(name, depth=np.inf)
    for s in (0.3 + 2j, 150j, 40.0 + 900j):
        for k in (30.0, 800.0):
            with mp.workdps(50):
                nu = mp.mpc(complex(deep.liquid.at(s))) / 1100
                q = mp.sqrt(mp.mpf(k) ** 2 + mp.mpc(s) / nu)
                f = (mp.mpc(s) + 2 * nu * k**2) ** 2 - 4 * nu**2 * mp.mpf(k) ** 3 * q
                expected = complex(2 * (-mp.mpf(G) + mp.mpf(0.06) * k**2 / 1100 + f / k))
            assert complex(deep.coefficient(s, k)) == pytest.approx(expected, rel=1e-10)


@pytest.mark.parametrize("name", list(LIQUIDS))
def test_slope_is_the_derivative(name):
    it = layer(name)
    k = np.array([20.0, 300.0, 2e3])
    s = np.array([0.5 + 3j, 40j, 2.0 - 500j, 30.0])[:, None]
    step = 2e-4 * np.abs(s)
    one, two = ((it.coefficient(s + h, k) - it.coefficient(s - h, k)) / (2 * h) for h in (step, 2 * step))
    np.testing.assert_allclose((4 * one - two) / 3, it.coefficient_and_slope(s, k)[1], rtol=1e-6)
    np.testing.assert_allclose(it.coefficient_and_slope(s, k)[0], it.coefficient(s, k), rtol=1e-13)


@pytest.mark.parametrize("name", list(LIQUIDS))
def test_no_coefficient_is_below_the_bound(name):
    it = layer(name)
    bound = it.smallest_coefficient(K)
    size = np.abs(it.coefficient(RIGHT, K))
    held = it.stiffness(K) > 0
    assert np.all(size >= bound * (1 - 1e-12))
    floor = 2 / it.density * it.static_impedance(K) * np.abs(RIGHT[..., :1])
    assert np.all((size >= floor * (1 - 1e-9))[..., held])
    spring = np.maximum(it.stiffness(K), 0)
    massive = 2 / it.density * (it.added_mass(K) * RIGHT.imag[..., :1] ** 2 - spring)
    assert np.all((size >= massive * (1 - 1e-9))[..., held])
    if name == "maxwell":
        assert np.all(bound == 0)
    else:
        assert np.all(bound[held] > 0)


def test_static_stiffness_of_a_gel():
    """Slow motion meets G Z0/mu, 2 G k when deep: the coefficient at s = 0."""
    gel = layer("gel")
    np.testing.assert_allclose(gel.coefficient(0.0, K), 2 / 1100 * gel.stiffness(K), rtol=1e-12)
    np.testing.assert_allclose(gel.coefficient(1e-9, K), 2 / 1100 * gel.stiffness(K), rtol=1e-6)
    deep = layer("gel", depth=np.inf)
    np.testing.assert_allclose(deep.stiffness(K), -1100 * G + 0.06 * K**2 + 60.0 * K, rtol=1e-12)


def test_gel_holds_the_surface_that_a_liquid_drops():
    """A modulus above (rho g - gamma k^2) mu / Z0 needs no shaking; just below it, little; the liquid, the most."""
    k = np.array([1.8412 / 0.035])
    plain = layer("gel", liquid=ComplexViscosity.newtonian(viscosity=1.0))
    enough = -plain.stiffness(k)[0] / plain.static_impedance(k)[0]
    roots = [
        first_roots(
            layer("gel", liquid=ComplexViscosity.kelvin_voigt(viscosity=1.0, modulus=share * enough)),
            k, np.array([300.0]), 0.0, np.array([2000.0]), subharmonic=False,
        )[0]
        for share in (1e-9, 0.5, 0.99)
    ]  # fmt: skip
    assert roots[0] > roots[1] > roots[2] > 0
    stiff = layer("gel", liquid=ComplexViscosity.kelvin_voigt(viscosity=1.0, modulus=1.001 * enough))
    assert stiff.stiffness(k)[0] > 0


def test_scaling_with_the_units():
    """Lengths times 10, masses times 3, times times 5."""
    a = layer("jeffreys")
    liquid = ComplexViscosity.jeffreys(viscosity=3.0 * 3 / 50, relaxation=0.25, retardation=0.05)
    b = ViscoelasticLayer(
        density=1100.0 * 3 / 1000, surface_tension=0.06 * 3 / 25, depth=0.2, liquid=liquid, gravity=a.gravity * 10 / 25
    )
    s = np.array([0.2, 3 + 80j])[:, None]
    np.testing.assert_allclose(b.coefficient(s / 5, K / 10), a.coefficient(s, K) * 10 / 25, rtol=1e-11)


@pytest.mark.parametrize(
    ("make", "text"),
    [
        (lambda: ComplexViscosity.jeffreys(viscosity=1.0, relaxation=0.1, retardation=0.2), "retardation time: 0.2 s"),
        (lambda: ComplexViscosity.maxwell(viscosity=1.0, relaxation=-0.1), "relaxation"),
        (lambda: ComplexViscosity.kelvin_voigt(viscosity=0.0, modulus=1.0), "viscosity: 0.0 Pa s"),
        (lambda: ComplexViscosity.kelvin_voigt(viscosity=1.0, modulus=np.nan), "modulus"),
    ],
)
def test_bad_input(make, text):
    with pytest.raises(InputError, match=text):
        make()
