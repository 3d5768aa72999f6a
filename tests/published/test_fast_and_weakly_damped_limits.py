"""Two limits of the viscous theory.

Averaged threshold A^2 w^2 = 2 (g - gamma k^2/rho) / (k tanh kh) of an inverted mode: the mean force of a fast field,
Landau & Lifshitz, Mechanics, section 30 (from memory). The figures 0.59993 m/s and 1.0006, 1.0002, 1.00005 were computed
by an independent time-stepped route, for a nearly inviscid layer and g = 9.81 m/s^2; viscosity adds a correction of the
order sqrt(nu/w).

Weakly damped Faraday threshold of a deep layer at resonance, A w -> 4 nu k: the damped Mathieu equation with the
damping 2 nu k^2 of Lamb 1932, article 348 (from memory).
"""

import numpy as np
import pytest
from scipy.optimize import minimize_scalar

from containment.constants import STANDARD_GRAVITY as G
from containment.physics.dispersion import Layer
from containment.physics.edges import first_roots, hold_edges
from containment.physics.wavenumbers import unbounded


@pytest.mark.parametrize(
    ("frequency", "ratio", "digits"), [(100.0, 1.0006, 1e-4), (200.0, 1.0002, 1e-4), (400.0, 1.00005, 1e-5)]
)
def test_inverted_mode_approaches_the_averaged_threshold(frequency, ratio, digits):
    layer = Layer(density=1000.0, viscosity=1e-5, surface_tension=0.05, depth=0.02, gravity=-9.81)  # as in those figures
    k, w = np.pi / 0.05, 2.0 * np.pi * frequency
    exact = first_roots(layer, np.array([k]), np.array([w]), 0.0, np.array([0.02 * w * w]), subharmonic=False)[0]
    averaged = float(layer.averaged_threshold(k, frequency))
    assert averaged / w == pytest.approx(0.59993, abs=5e-6)
    assert exact / averaged == pytest.approx(ratio, abs=0.6 * digits)


def test_viscous_correction_of_the_averaged_threshold_falls_like_the_boundary_layer():
    """Ratio less 1, less its inviscid part: halved where the frequency is fourfold."""
    k, corrections = np.pi / 0.05, []
    for frequency in (400.0, 1600.0):
        w = 2.0 * np.pi * frequency
        ratios = []
        for viscosity in (1e-7, 0.01):
            layer = Layer(density=1000.0, viscosity=viscosity, surface_tension=0.05, depth=0.02)
            a = first_roots(layer, np.array([k]), np.array([w]), 0.0, np.array([0.02 * w * w]), subharmonic=False)[0]
            ratios.append(a / float(layer.averaged_threshold(k, frequency)))
        corrections.append(ratios[1] - ratios[0])
    assert corrections[0] / corrections[1] == pytest.approx(2.0, rel=0.05)


@pytest.mark.parametrize(("viscosity", "tolerance"), [(1e-4, 0.05), (1e-5, 0.015), (1e-6, 0.005)])
def test_weakly_damped_threshold_of_a_deep_layer(viscosity, tolerance):
    density, tension, frequency = 1000.0, 0.07, 60.0
    layer = Layer(density=density, viscosity=viscosity, surface_tension=tension, depth=np.inf, gravity=G)
    w = 2.0 * np.pi * frequency
    resonance = np.roots([tension / density, 0.0, G, -w * w / 4.0])
    k = float(resonance[np.isreal(resonance)].real[0])

    def level(x):
        return first_roots(layer, np.array([k * x]), np.array([w]), 0.0, np.array([1.0]), subharmonic=True)[0]

    width = viscosity * k * k / density / w
    best = minimize_scalar(level, bounds=(1.0 - 3.0 * width, 1.0 + 3.0 * width), method="bounded", options={"xatol": 1e-9})
    assert best.fun / w == pytest.approx(4.0 * viscosity / density * k, rel=tolerance)


def test_viscosity_first_shortens_and_then_lengthens_the_wave_at_onset():
    """Kumar & Tuckerman, J. Fluid Mech. 279 (1994) 49-68, in the abstract: at small viscosities the wavelength at onset
    falls with rising viscosity, at higher ones it rises. Compared at one frequency on a deep upright layer."""
    waves = []
    for viscosity in (1e-4, 1e-3, 1e-2, 2e-2, 0.05, 0.1, 1.0):
        layer = Layer(density=1000.0, viscosity=viscosity, surface_tension=0.05, depth=1.0, gravity=G)
        found = hold_edges(layer, unbounded(), [60.0], capillary_wavenumber=np.sqrt(1000.0 * G / 0.05), depth=1.0)
        waves.append(2.0 * np.pi / found.upper_wavenumber[0])
    least = int(np.argmin(waves))
    assert 0 < least < len(waves) - 1
    assert np.all(np.diff(waves[: least + 1]) < 0.0)
    assert np.all(np.diff(waves[least:]) > 0.0)
