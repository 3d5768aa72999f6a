"""Surroundings of a layer: films, a second liquid, trapped gas, tilt, drag of the walls."""

import math

import numpy as np
import pytest

import containment as ct

G = 9.80665
SYRUP = ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
GLYCEROL = ct.Liquid(density=1261.0, viscosity=1.41, surface_tension=0.0634)
CUP = ct.Cylinder(diameter="70 mm", depth="30 mm")
AT_50 = ct.Motion(frequency="50 Hz", acceleration="40 g_n")


def limit(verdict, start):
    (found,) = [limit for limit in verdict.limits if limit.name.startswith(start)]
    return found


def edges(liquid, vessel, motion, **around):
    point = ct.assess(liquid, vessel, motion, surroundings=ct.Surroundings(**around)).point
    return point.lower / G, point.upper / G


def test_a_skin_moves_both_edges():
    # clean 21.3 to 81.8 g_n, covered 23.0 to 82.3: computed by a two-sided determinant from the momentum equations with
    # mpmath (tests/physics/test_film.py); the first three also by a separate prototype
    assert edges(SYRUP, CUP, AT_50, surface="clean") == pytest.approx((21.335, 81.766), abs=2e-3)
    assert edges(SYRUP, CUP, AT_50, surface="covered") == pytest.approx((23.035, 82.329), abs=2e-3)


def test_unknown_surface_is_asked_for_where_it_matters():
    shallow = ct.Cylinder(diameter="70 mm", depth="6 mm")
    point = ct.Motion(frequency="60 Hz", acceleration="50.5 g_n")
    # clean window 47.1 to 54.0 g_n, none at all under a skin (computed by two routes, as above)
    asked = ct.assess(GLYCEROL, shallow, point, margin_factor=1.0)
    sure = ct.assess(GLYCEROL, shallow, point, margin_factor=1.0, surroundings=ct.Surroundings(surface="clean"))
    covered = ct.assess(GLYCEROL, shallow, point, margin_factor=1.0, surroundings=ct.Surroundings(surface="covered"))
    assert asked.answer.value == "marginal" and "skin" in asked.reason
    assert sure.held
    assert covered.answer.value == "not held"


def test_drag_of_the_walls_raises_the_lower_edge_only():
    verdict = ct.assess(SYRUP, CUP, AT_50)
    drag = limit(verdict, "lower edge with the drag")
    assert drag.bound > verdict.point.lower
    assert drag.bound < 1.2 * verdict.point.lower
    # thinner boundary layer, less drag: the share of the drag falls like sqrt(nu)
    thin = ct.Liquid(density=1410.0, viscosity=2.5, surface_tension=0.08)
    other = ct.assess(thin, CUP, ct.Motion(frequency="50 Hz", acceleration="25 g_n"), margin_factor=1.0)
    first = drag.bound / verdict.point.lower - 1.0
    second = limit(other, "lower edge with the drag").bound / other.point.lower - 1.0
    assert second == pytest.approx(0.5 * first, rel=0.25)


def test_cushion_multiplies_the_motion():
    gap, exponent, pressure = 0.1, 1.4, 101325.0
    load = 1410.0 * G * 0.03
    height = gap * pressure / (pressure + load)  # isothermal loading
    w0 = math.sqrt(exponent * (pressure + load) / (1410.0 * 0.03 * height))
    gain = w0**2 / abs(w0**2 - (2.0 * math.pi * 50.0) ** 2)
    free = ct.assess(SYRUP, CUP, AT_50).point
    floating = ct.assess(SYRUP, CUP, AT_50, surroundings=ct.Surroundings(cushion=gap)).point
    assert floating.upper <= free.upper / gain * (1.0 + 1e-9)  # the upper surface may break up first
    assert floating.lower >= free.lower / gain * (1.0 - 1e-9)  # taken with damping
    assert floating.lower == pytest.approx(free.lower / gain, rel=0.1)


def test_cushion_upper_surface_is_an_ordinary_wave():
    # thin liquid: the upright surface breaks up at the ordinary Faraday threshold, far below any hold
    water = ct.Liquid(density=998.2, viscosity=1.0e-3, surface_tension=0.0728)
    verdict = ct.assess(
        water, CUP, ct.Motion(frequency="50 Hz", acceleration="5 g_n"), surroundings=ct.Surroundings(cushion="1 m")
    )
    assert verdict.answer.value == "not held"
    assert verdict.point.upper < 2.0 * G


def test_two_liquids_reduce_to_one_over_a_thin_gas():
    gas = ct.Liquid(density=1.0, viscosity=1e-6, surface_tension=0.02)
    alone = edges(SYRUP, CUP, AT_50)
    over = edges(SYRUP, CUP, AT_50, below=gas, below_depth="1 m", interfacial_tension=0.08)
    assert over == pytest.approx(alone, rel=5e-3)  # the gas still has a density of 0.07 %


def test_heavier_liquid_below_is_refused():
    brine = ct.Liquid(density=1500.0, viscosity=2e-3, surface_tension=0.08)
    around = ct.Surroundings(below=brine, below_depth="20 mm", interfacial_tension="30 mN/m")
    with pytest.raises(ct.InputError, match="not lighter"):
        ct.assess(SYRUP, CUP, AT_50, surroundings=around)


def test_tilt_tolerance_grows_with_the_drive():
    low = limit(ct.assess(SYRUP, CUP, ct.Motion(frequency="50 Hz", acceleration="30 g_n")), "tilt")
    high = limit(ct.assess(SYRUP, CUP, ct.Motion(frequency="50 Hz", acceleration="60 g_n")), "tilt")
    assert 0.0 < low.bound < high.bound
    tilted = ct.assess(SYRUP, CUP, AT_50, surroundings=ct.Surroundings(tilt="20 deg"))
    assert tilted.answer.value == "marginal" and "tilt" in tilted.reason


@pytest.mark.parametrize(
    "values",
    [
        {"surface": "dirty"},
        {"film_modulus": -1.0},
        {"film_modulus": "20 mN/m", "surface": "clean"},
        {"cushion": 0.0},
        {"cushion": math.nan},
        {"below_depth": "20 mm"},
        {"tilt": "90 deg"},
        {"ambient_pressure": 0.0},
        {"polytropic_exponent": 3.0},
    ],
)
def test_bad_surroundings_are_refused(values):
    with pytest.raises(ct.InputError):
        ct.Surroundings(**values)


def test_no_point_beyond_the_amplitude_that_is_searched():
    # a window that is open only at amplitudes beyond the search must not be offered
    light = ct.Liquid(density=950.0, viscosity=0.02, surface_tension=0.02)
    around = ct.Surroundings(below=light, below_depth="20 mm", interfacial_tension="30 mN/m")
    window = ct.holding_window(SYRUP, CUP, surroundings=around)
    for point in (window.minimum_acceleration, window.minimum_frequency, window.recommended):
        assert point is None or point.amplitude <= 0.06 * (1.0 + 1e-9)
    w = 2.0 * np.pi * window.frequencies
    assert np.all(window.ceiling <= 0.06 * w * w * (1.0 + 1e-9))
