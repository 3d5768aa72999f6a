"""Natural frequency of a brimful cylinder, contact line pinned at the rim.

Source: Henderson, D. M. & Miles, J. W. (1994), Surface-wave damping in a circular cylinder with a fixed contact line,
J. Fluid Mech. 275, 285-299: radius 27.66 mm, depth 38 mm, clean water; (1, 0) wave at 4.65 Hz measured. The values are
from memory; the paper was not at hand.
"""

import numpy as np
import pytest

from containment.constants import STANDARD_GRAVITY
from containment.physics.pinned_static import pinned_wave_frequencies

TANK = dict(density=998.0, surface_tension=0.0724, depth=0.038, gravity=STANDARD_GRAVITY)


def test_first_wave_is_within_one_percent_of_the_measured_one():
    wave = pinned_wave_frequencies("cylinder", (0.02766,), 1, count=1, **TANK)[0]
    assert wave == pytest.approx(4.65, rel=0.01)
    # viscosity and the boundary layers lower it: the inviscid value lies above the measured one
    assert wave > 4.65


def test_a_pinned_wave_is_faster_than_the_sliding_one():
    k = 1.841183781340659 / 0.02766  # first zero of J_1' (DLMF table 10.21)
    sliding = np.sqrt((STANDARD_GRAVITY * k + 0.0724 / 998.0 * k**3) * np.tanh(k * 0.038)) / (2.0 * np.pi)
    assert pinned_wave_frequencies("cylinder", (0.02766,), 1, count=1, **TANK)[0] > sliding


def test_frequencies_scale_with_the_dimensions():
    c = 3.0
    scaled = TANK | {"depth": TANK["depth"] * c, "surface_tension": TANK["surface_tension"] * c * c}
    one = pinned_wave_frequencies("cylinder", (0.02766,), 2, count=3, **TANK)
    two = pinned_wave_frequencies("cylinder", (0.02766 * c,), 2, count=3, **scaled)
    np.testing.assert_allclose(two * np.sqrt(c), one, rtol=1e-9)
