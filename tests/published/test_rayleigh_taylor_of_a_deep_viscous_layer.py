"""Fastest fall of a deep viscous layer without surface tension.

Source: Chandrasekhar, S. (1961), Hydrodynamic and Hydromagnetic Stability, chapter X, table of the mode of maximum
instability for density ratio 1: k = 0.4907 (g/nu^2)^(1/3), rate 0.4599 (g^2/nu)^(1/3). From memory; the further digits,
0.490673 and 0.459863, were computed by an independent route and are found here once more from the closed form.
"""

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.dispersion import Layer
from containment.physics.floquet import static_growth_rate


def fastest(viscosity):
    layer = Layer(density=1000.0, viscosity=viscosity, surface_tension=0.0, depth=np.inf)
    nu = viscosity / 1000.0
    unit_k, unit_s = (G / nu**2) ** (1 / 3), (G**2 / nu) ** (1 / 3)
    best = minimize_scalar(
        lambda x: -float(static_growth_rate(layer, x * unit_k)), bounds=(0.2, 1.0), method="bounded", options={"xatol": 1e-9}
    )
    return best.x, -best.fun / unit_s


@pytest.mark.parametrize("viscosity", [1e-3, 1.0, 50.0])
def test_fastest_mode(viscosity):
    k, rate = fastest(viscosity)
    assert k == pytest.approx(0.490673, abs=2e-5)  # the maximum is flat: a rate to 1e-12 gives k to about 1e-6
    assert rate == pytest.approx(0.459863, abs=1e-6)


def test_the_closed_form_has_the_same_maximum():
    """(s + 2 k^2)^2 - 4 k^3 sqrt(k^2 + s) = k in units of g and nu."""

    def rate(k):
        return brentq(lambda s: (s + 2 * k * k) ** 2 - 4 * k**3 * np.sqrt(k * k + s) - k, 0.0, 2.0, xtol=1e-15)

    best = minimize_scalar(lambda k: -rate(k), bounds=(0.2, 1.0), method="bounded", options={"xatol": 1e-10})
    assert best.x == pytest.approx(0.4907, abs=5e-5)
    assert -best.fun == pytest.approx(0.4599, abs=5e-5)
    assert -best.fun == pytest.approx(0.459863, abs=1e-6)
