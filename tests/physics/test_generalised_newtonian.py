"""Viscosity curves, the shear rate in a layer against the field it stands for, and the plug in a tube."""

import numpy as np
import pytest
from scipy.integrate import quad

from containment.constants import STANDARD_GRAVITY as G
from containment.errors import InputError, NotComputableError
from containment.physics.dispersion import Layer
from containment.physics.generalised_newtonian import (
    Carreau,
    Cross,
    HerschelBulkley,
    PowerLaw,
    consistent_viscosity,
    plug_acceleration,
    plug_yield_stress,
    surface_shear_rate,
)

RATES = np.geomspace(1e-4, 1e5, 50)


def test_limits_of_the_curves():
    carreau = Carreau(zero_shear=20.0, infinite_shear=0.2, time=0.3, index=0.4)
    cross = Cross(zero_shear=20.0, infinite_shear=0.2, time=0.3, exponent=0.6)
    for curve in (carreau, cross):
        eta = curve.viscosity(RATES)
        assert np.all(np.diff(eta) < 0) and np.all((eta > 0.2) & (eta < 20.0))
        assert curve.viscosity(1e15) == pytest.approx(0.2, rel=1e-3)
    # far out a Carreau liquid thins like a power law of the same index
    thin = Carreau(zero_shear=20.0, infinite_shear=0.0, time=0.3, index=0.4).viscosity(np.array([1e6, 1e7]))
    assert np.log(thin[1] / thin[0]) / np.log(10) == pytest.approx(-0.6, abs=1e-6)
    # index 1 (exponent 0: half way) is Newtonian
    np.testing.assert_allclose(Carreau(zero_shear=3.0, infinite_shear=0.1, time=1.0, index=1.0).viscosity(RATES), 3.0)
    np.testing.assert_allclose(HerschelBulkley(yield_stress=0, consistency=2.0, index=1.0).viscosity(RATES), 2.0)
    np.testing.assert_allclose(
        HerschelBulkley(yield_stress=50.0, consistency=2.0, index=0.5).viscosity(RATES) * RATES, 50 + 2 * RATES**0.5
    )
    assert PowerLaw(consistency=2.0, index=0.5).viscosity(0.0) == np.inf
    assert HerschelBulkley(yield_stress=1.0, consistency=2.0, index=1.0).viscosity(0.0) == np.inf


def test_curves_scale_with_the_time():
    a = Carreau(zero_shear=20.0, infinite_shear=0.2, time=0.3, index=0.4).viscosity(RATES)
    b = Carreau(zero_shear=40.0, infinite_shear=0.4, time=0.03, index=0.4).viscosity(10 * RATES)
    np.testing.assert_allclose(b, 2 * a)
    c = Cross(zero_shear=20.0, infinite_shear=0.2, time=0.3, exponent=0.7).viscosity(RATES)
    d = Cross(zero_shear=40.0, infinite_shear=0.4, time=0.03, exponent=0.7).viscosity(10 * RATES)
    np.testing.assert_allclose(d, 2 * c)


def test_shear_rate_is_the_mean_square_of_the_field():
    """Deep Stokes flow w = W (1 + k y) exp(-k y) cos kx, y from the surface: integrate 2 e:e over the depth."""
    k, speed = 80.0, 0.02
    u = lambda y: speed * k * y * np.exp(-k * y)  # noqa: E731  amplitude of the horizontal velocity
    w = lambda y: speed * (1 + k * y) * np.exp(-k * y)  # noqa: E731
    du = lambda y: speed * k * (1 - k * y) * np.exp(-k * y)  # noqa: E731
    dw = lambda y: -speed * k * k * y * np.exp(-k * y)  # noqa: E731
    # 2 e:e = 4 (dw/dy)^2 cos^2 + (du/dy - dw/dx)^2 sin^2, mean over place 1/2; the field is the amplitude in time
    squares = quad(lambda y: 0.5 * (4 * dw(y) ** 2 + (du(y) - k * w(y)) ** 2), 0, 40 / k)[0]
    assert u(0.0) == 0.0
    in_time = np.sqrt(0.5 * squares * k)
    layer = Layer(density=1000.0, viscosity=500.0, surface_tension=0.0, depth=np.inf)
    z = float(layer.impedance(1e-6, k).real)
    found = surface_shear_rate(speed / 7.0, 7.0, z, wavenumber=k, viscosity=500.0, depth=np.inf)
    assert found == pytest.approx(in_time, rel=1e-6)


def test_shear_rate_scales():
    base = surface_shear_rate(1e-3, 100.0, 3.0, wavenumber=50.0, viscosity=2.0, depth=0.01)
    assert surface_shear_rate(3e-3, 100.0, 3.0, wavenumber=50.0, viscosity=2.0, depth=0.01) == pytest.approx(3 * base)
    assert surface_shear_rate(1e-3, 500.0, 3.0, wavenumber=50.0, viscosity=2.0, depth=0.01) == pytest.approx(5 * base)
    assert surface_shear_rate(1e-2, 100.0, 0.3, wavenumber=5.0, viscosity=2.0, depth=0.1) == pytest.approx(base)


def test_consistent_viscosity():
    cross = Cross(zero_shear=10.0, infinite_shear=0.1, time=0.2, exponent=0.8)
    rate = lambda eta: 300.0 / (1 + eta)  # noqa: E731
    eta = consistent_viscosity(cross, rate)
    assert float(cross.viscosity(rate(eta))) == pytest.approx(eta, rel=1e-10)
    with pytest.raises(NotComputableError, match="acts as a solid"):
        consistent_viscosity(HerschelBulkley(yield_stress=50.0, consistency=1.0, index=1.0), lambda eta: 1e-12)


def test_plug():
    assert plug_yield_stress(0.0, density=1000.0, radius=0.02) == pytest.approx(1000 * G * 0.01)
    assert plug_yield_stress(3 * G, density=1000.0, radius=0.02) == pytest.approx(4 * 1000 * G * 0.01)
    assert plug_yield_stress(5.0, density=2000.0, radius=0.06) == pytest.approx(
        6 * plug_yield_stress(5.0, density=1000.0, radius=0.02)
    )
    assert plug_acceleration(plug_yield_stress(7.0, density=900.0, radius=0.01), density=900.0, radius=0.01) == (
        pytest.approx(7.0)
    )
    assert plug_acceleration(1.0, density=900.0, radius=0.01) < 0


def test_bad_input():
    with pytest.raises(InputError, match="zero shear: -1"):
        Carreau(zero_shear=-1.0, infinite_shear=0.0, time=1.0, index=0.5)
    with pytest.raises(InputError, match="yield stress"):
        HerschelBulkley(yield_stress=np.nan, consistency=1.0, index=0.5)
