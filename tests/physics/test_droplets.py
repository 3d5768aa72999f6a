"""Droplet ejection: exponents of both branches, where they meet, and the two readings of the frequency."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from containment.physics.droplets import droplet_ejection_acceleration

WATER = {"density": 998.0, "viscosity": 1e-3, "surface_tension": 0.0728}
SYRUP = {"density": 1410.0, "viscosity": 10.0, "surface_tension": 0.08}


def test_values():
    """Goodridge et al. 1996, 1997 (coefficients from memory), evaluated by hand at 50 Hz of the waves."""
    assert droplet_ejection_acceleration(50.0, **WATER, cautious=False) == pytest.approx(23.3, abs=0.05)
    assert droplet_ejection_acceleration(50.0, **SYRUP, cautious=False) == pytest.approx(612.4, abs=0.5)


@given(f=st.floats(5.0, 500.0))
def test_scaling(f):
    thin, thick = (droplet_ejection_acceleration(f, **liquid, cautious=False) for liquid in (WATER, SYRUP))
    assert droplet_ejection_acceleration(8 * f, **WATER, cautious=False) == pytest.approx(16 * thin)
    assert droplet_ejection_acceleration(4 * f, **SYRUP, cautious=False) == pytest.approx(8 * thick)
    heavier = {**WATER, "surface_tension": 8 * WATER["surface_tension"]}
    assert droplet_ejection_acceleration(f, **heavier, cautious=False) == pytest.approx(2 * thin)
    thicker = {**SYRUP, "viscosity": 4 * SYRUP["viscosity"]}
    assert droplet_ejection_acceleration(f, **thicker, cautious=False) == pytest.approx(2 * thick)
    # the cautious reading is the other one at half the frequency, and lower
    for liquid in (WATER, SYRUP):
        half = droplet_ejection_acceleration(0.5 * f, **liquid, cautious=False)
        assert droplet_ejection_acceleration(f, **liquid) == pytest.approx(half)


def test_units_change_nothing_but_the_unit():
    """Lengths times 10, masses times 3, times times 5: an acceleration."""
    for liquid in (WATER, SYRUP):
        scaled = {
            "density": liquid["density"] * 3 / 1000,
            "viscosity": liquid["viscosity"] * 3 / 50,
            "surface_tension": liquid["surface_tension"] * 3 / 25,
        }
        expected = droplet_ejection_acceleration(60.0, **liquid) * 10 / 25
        assert droplet_ejection_acceleration(12.0, **scaled) == pytest.approx(expected)


def test_branches_meet_where_stated():
    """w nu^3 (rho/gamma)^2 about 6e-5: below it the thin branch, above it the thick one."""
    rho, gamma, w = 1000.0, 0.07, 300.0
    for share, branch in ((0.5, 4 / 3), (2.0, 3 / 2)):
        nu = (share * 6.35e-5 * gamma**2 / rho**2 / w) ** (1 / 3)
        low, high = (
            droplet_ejection_acceleration(
                f, density=rho, viscosity=nu * rho, surface_tension=gamma, cautious=False
            )
            for f in (w / 6.283185307, w / 6.283185307 * 1.001)
        )
        assert (high / low - 1) / 0.001 == pytest.approx(branch, abs=2e-3)
