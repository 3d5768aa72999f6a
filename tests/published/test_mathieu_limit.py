"""Without viscosity a mode obeys Mathieu's equation: thresholds on its characteristic curves, DLMF chapter 28.

zeta'' + k tanh(kh) (G(t) + gamma k^2/rho) zeta = 0 with G = G0 - a cos(w t) (Benjamin & Ursell 1954) is Mathieu's
equation y'' + (alpha - 2 q cos 2x) y = 0 with x = w t/2, alpha = 4 W^2/w^2, W^2 = k tanh(kh) (G0 + gamma k^2/rho), and
2 q = 4 k tanh(kh) a / w^2. Reference library: scipy.special.mathieu_a, mathieu_b. The edge of the first zone of the
quadrupole ion trap (alpha = 0), q = 0.908046: from memory (0.908 throughout that literature), found here from the curve.
The pendulum: Stephenson 1908, Kapitza 1951, Landau & Lifshitz, Mechanics, section 30 (from memory): A^2 w^2 > 2 g l.
"""

import numpy as np
import pytest
from scipy.optimize import brentq
from scipy.special import mathieu_a, mathieu_b

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.dispersion import Layer
from containment.physics.edges import first_roots

DENSITY, TENSION, FREQUENCY = 1000.0, 0.05, 40.0
W = 2.0 * np.pi * FREQUENCY


def layer_of(viscosity, depth, gravity=-G):
    return Layer(density=DENSITY, viscosity=viscosity, surface_tension=TENSION, depth=depth, gravity=gravity)


def threshold(layer, k, *, subharmonic, most=0.06):
    return float(first_roots(layer, np.array([k]), np.array([W]), 0.0, np.array([most * W * W]), subharmonic=subharmonic)[0])


def mathieu_level(layer, k, curve, low=1e-9, high=30.0):
    """Acceleration at which alpha(k) lies on a characteristic curve."""
    stiffness = k * np.tanh(k * layer.depth) if np.isfinite(layer.depth) else k
    alpha = 4.0 * stiffness * (layer.gravity + TENSION * k * k / DENSITY) / W**2
    q = brentq(lambda q: curve(q) - alpha, low, high, xtol=1e-14)
    return q * W**2 / (2.0 * stiffness)


@pytest.mark.parametrize("depth", [np.inf, 0.02, 0.004])
def test_falling_mode_is_held_from_the_curve_a0_and_breaks_up_at_b1(depth):
    """k below the capillary cut-off: alpha < 0. Viscosity enters like its square root: three values, extrapolated."""
    k = 120.0
    for subharmonic, curve in ((False, lambda q: mathieu_a(0, q)), (True, lambda q: mathieu_b(1, q))):
        errors = []
        for viscosity in (1e-6, 1e-8):
            layer = layer_of(viscosity, depth)
            errors.append(threshold(layer, k, subharmonic=subharmonic) / mathieu_level(layer, k, curve) - 1.0)
        assert abs(errors[1]) < 2e-4
        assert abs(errors[1]) < 0.2 * abs(errors[0]) + 1e-9


@pytest.mark.parametrize("depth", [np.inf, 0.02])
@pytest.mark.parametrize("k", [600.0, 760.0, 900.0])
def test_stiff_mode_breaks_up_at_a1_or_b1(depth, k):
    """Either side of the subharmonic resonance alpha = 1: a_1 falls from it, b_1 ... they meet there at q = 0."""
    layer = layer_of(1e-8, depth)
    stiffness = k * np.tanh(k * depth) if np.isfinite(depth) else k
    alpha = 4.0 * stiffness * (-G + TENSION * k * k / DENSITY) / W**2
    curve = (lambda q: mathieu_b(1, q)) if alpha < 1.0 else (lambda q: mathieu_a(1, q))
    assert threshold(layer, k, subharmonic=True) == pytest.approx(mathieu_level(layer, k, curve, high=3.0), rel=2e-3)


def test_ion_trap_edge():
    """Neither gravity nor tension (alpha = 0): the first zone ends at q = 0.908046."""
    assert brentq(lambda q: mathieu_b(1, q), 0.5, 1.5, xtol=1e-14) == pytest.approx(0.908046, abs=5e-7)
    k = 100.0
    layer = Layer(density=DENSITY, viscosity=1e-9, surface_tension=0.0, depth=np.inf, gravity=0.0)
    q = 2.0 * k * threshold(layer, k, subharmonic=True) / W**2
    assert q == pytest.approx(0.908046, rel=1e-4)


def test_inverted_pendulum_in_the_fast_limit():
    """A^2 w^2 -> 2 g l, with l = 1/k for a deep mode without tension: from the curve a_0 and from the layer."""
    k = 30.0
    for frequency, tolerance in ((50.0, 3e-3), (400.0, 1e-4)):
        w = 2.0 * np.pi * frequency
        layer = Layer(density=DENSITY, viscosity=1e-9, surface_tension=0.0, depth=np.inf)
        a = first_roots(layer, np.array([k]), np.array([w]), 0.0, np.array([0.06 * w * w]), subharmonic=False)[0]
        assert (a / w) ** 2 == pytest.approx(2.0 * G / k, rel=tolerance)
