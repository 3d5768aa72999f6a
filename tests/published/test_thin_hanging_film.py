"""Fastest fall of a thin film under a ceiling.

Source: Fermigier, M., Limat, L., Wesfreid, J. E., Boudinet, P. & Quilliet, C. (1992), J. Fluid Mech. 236, 349-383, from
memory: wavelength 2 pi sqrt(2) l_c and rate h^3 (rho g)^2 / (12 mu gamma), the limit of a film much thinner than the
capillary length l_c (lubrication, Reynolds 1886).
"""

import numpy as np
import pytest
from scipy.optimize import minimize_scalar

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.dispersion import Layer
from containment.physics.floquet import static_growth_rate

RHO, MU, GAMMA = 970.0, 1.0, 0.0207
CAPILLARY = np.sqrt(GAMMA / (RHO * G))


@pytest.mark.parametrize(("thickness", "tolerance"), [(0.02, 2e-3), (0.002, 2e-5)])
def test_fastest_mode_of_a_film(thickness, tolerance):
    """The film is `thickness` capillary lengths thick; corrections are of second order in it."""
    depth = thickness * CAPILLARY
    layer = Layer(density=RHO, viscosity=MU, surface_tension=GAMMA, depth=depth)
    best = minimize_scalar(
        lambda x: -float(static_growth_rate(layer, x / CAPILLARY)), bounds=(0.4, 0.95), method="bounded",
        options={"xatol": 1e-9},
    )  # fmt: skip
    assert 2.0 * np.pi / best.x == pytest.approx(2.0 * np.pi * np.sqrt(2.0), rel=max(tolerance, 1e-4))
    assert -best.fun == pytest.approx(depth**3 * (RHO * G) ** 2 / (12.0 * MU * GAMMA), rel=tolerance)


def test_rate_of_every_wavenumber():
    """s = h^3 k^2 (rho g - gamma k^2) / (3 mu): the same lubrication limit."""
    depth = 1e-3 * CAPILLARY
    layer = Layer(density=RHO, viscosity=MU, surface_tension=GAMMA, depth=depth)
    k = np.array([0.1, 0.3, 0.9]) / CAPILLARY
    expected = depth**3 * k**2 * (RHO * G - GAMMA * k**2) / (3.0 * MU)
    np.testing.assert_allclose(static_growth_rate(layer, k), expected, rtol=1e-5)
