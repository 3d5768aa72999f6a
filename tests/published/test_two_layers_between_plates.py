"""Waves between two viscous layers, and the fall of one liquid through another, against other people's values.

Perinet, Juric & Tuckerman, J. Fluid Mech. 635 (2009) 1-26: properties and critical wavelength 13.2 mm as in the movie
caption; the threshold 25.8 m/s^2 is from memory (and was computed by two other codes: 25.825 m/s^2, 13.205 mm).
Chandrasekhar 1961, viscous Rayleigh-Taylor, equal kinematic viscosities, no tension, deep: Atwood 1 from memory
(0.4907, 0.4599 in units of (g/nu^2)^(1/3) and (g^2/nu)^(1/3)); Atwood 0.5 and 0.1: computed by an independent route.
"""

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.edges import hold_edges
from containment.physics.two_liquids import TwoLiquids
from containment.physics.wavenumbers import unbounded


def test_faraday_threshold_of_two_layers():
    pair = TwoLiquids(
        layer_density=1346.0, layer_viscosity=7.2e-3, layer_depth=1.6e-3, beyond_density=949.0, beyond_viscosity=20e-3,
        beyond_depth=8.4e-3, interfacial_tension=0.035, gravity=9.8066,
    )  # fmt: skip
    capillary = np.sqrt(397.0 * G / 0.035)
    edges = hold_edges(pair, unbounded(), [12.0], capillary_wavenumber=capillary, depth=1.6e-3)
    assert 2e3 * np.pi / edges.upper_wavenumber[0] == pytest.approx(13.2, abs=0.02)
    assert edges.upper[0] == pytest.approx(25.8, abs=0.05)
    assert edges.upper_subharmonic[0]
    assert edges.lower[0] == 0.0


@pytest.mark.parametrize(
    ("atwood", "wavenumber", "rate"), [(1.0, 0.4907, 0.4599), (0.5, 0.4111, 0.2842), (0.1, 0.2442, 0.0966)]
)
def test_viscous_rayleigh_taylor(atwood, wavenumber, rate):
    nu, heavy = 1e-3, 1000.0
    light = heavy * (1 - atwood) / (1 + atwood) if atwood < 1 else 1e-9
    pair = TwoLiquids(
        layer_density=heavy, layer_viscosity=nu * heavy, layer_depth=np.inf, beyond_density=light,
        beyond_viscosity=nu * light, beyond_depth=np.inf, interfacial_tension=0.0,
    )  # fmt: skip
    unit_k, unit_s = (G / nu**2) ** (1 / 3), (G**2 / nu) ** (1 / 3)

    def growth(kappa):
        return brentq(lambda s: pair.coefficient(s * unit_s, kappa * unit_k).real, 1e-4, 2.0, xtol=1e-14)

    best = minimize_scalar(lambda kappa: -growth(kappa), bounds=(0.05, 1.5), method="bounded", options={"xatol": 1e-7})
    assert best.x == pytest.approx(wavenumber, abs=1e-4)
    assert -best.fun == pytest.approx(rate, abs=6e-5)
