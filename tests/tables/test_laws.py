"""Laws over temperature, against the reference library `chemicals`, scipy and values written out by hand."""

import chemicals
import numpy as np
import pytest
from chemicals.dippr import EQ101, EQ116
from hypothesis import given
from hypothesis import strategies as st
from scipy.interpolate import PchipInterpolator

from containment.given.tables.laws import LAWS, shape_preserving

KELVIN = np.linspace(275.0, 370.0, 39)


def law(name, kelvin=KELVIN, **coefficients):
    return LAWS[name].function(np.asarray(kelvin, dtype=float), coefficients)


def test_vogel_and_andrade_by_hand():
    # A exp(B/(T - T0)) with B/(T - T0) = ln 2: twice A
    assert law("vogel", 300.0, A=3.0, B=100.0 * np.log(2.0), T0=200.0) == pytest.approx(6.0)
    assert law("andrade", 300.0, A=3.0, B=300.0 * np.log(2.0)) == pytest.approx(6.0)
    np.testing.assert_allclose(law("andrade", A=2.0, B=900.0), law("vogel", A=2.0, B=900.0, T0=0.0))


def test_polynomial_and_rational_take_degrees_celsius():
    assert law("polynomial", 283.15, c0=1.0, c1=2.0, c2=3.0, c5=1e-3) == pytest.approx(1 + 20 + 300 + 100)
    assert law("rational", 283.15, c0=1.0, c1=2.0, d1=0.1, d2=0.01) == pytest.approx(21.0 / 3.0)


def test_walther_goes_through_its_two_points():
    # ASTM D341: lg lg(v + 0.7) is a straight line over lg T; the line through 100 mm2/s at 40 and 11.4 at 100 degC
    w = [np.log10(np.log10(v + 0.7)) for v in (100.0, 11.4)]
    t = np.log10([313.15, 373.15])
    B = (w[0] - w[1]) / (t[1] - t[0])
    A = w[0] + B * t[0]
    np.testing.assert_allclose(law("walther", [313.15, 373.15], A=A, B=B), [100.0, 11.4], rtol=1e-12)


def test_ppds9_against_the_reference_library():
    row = chemicals.viscosity.mu_data_VDI_PPDS_7.loc["56-81-5"]
    ours = law("ppds9", A=row.A, B=row.B, C=row.C, D=row.D, E=row.E)
    theirs = [chemicals.viscosity.PPDS9(T, row.A, row.B, row.C, row.D, row.E) for T in KELVIN]
    np.testing.assert_allclose(ours, theirs, rtol=1e-12)


def test_ln_series_against_the_reference_library():
    row = chemicals.viscosity.mu_data_Perrys_8E_2_313.loc["57-55-6"]
    ours = law("ln_series", A=row.C1, B=row.C2, C=row.C3, D=row.C4, E=row.C5)
    theirs = [EQ101(T, row.C1, row.C2, row.C3, row.C4, row.C5) for T in KELVIN]
    np.testing.assert_allclose(ours, theirs, rtol=1e-12)


def test_critical_density_against_the_reference_library():
    row = chemicals.volume.rho_data_VDI_PPDS_2.loc["107-21-1"]
    ours = law("critical_density", rc=row.rhoc, Tc=row.Tc, A=row.A, B=row.B, C=row.C, D=row.D)
    theirs = [EQ116(T, row.Tc, row.rhoc, row.A, row.B, row.C, row.D) for T in KELVIN]
    np.testing.assert_allclose(ours, theirs, rtol=1e-12)


def test_wagner_against_the_reference_library():
    row = chemicals.vapor_pressure.Psat_data_WagnerPoling.loc["108-93-0"]
    ours = law("wagner", A=row.A, B=row.B, C=row.C, D=row.D, Tc=row.Tc, Pc=row.Pc)
    theirs = [chemicals.vapor_pressure.Wagner(T, row.Tc, row.Pc, row.A, row.B, row.C, row.D) for T in KELVIN]
    np.testing.assert_allclose(ours, theirs, rtol=1e-12)


def test_antoine_against_the_reference_library():
    theirs = [chemicals.vapor_pressure.Antoine(T, 10.11564, 1687.537, -42.98) for T in KELVIN]
    np.testing.assert_allclose(law("antoine", A=10.11564, B=1687.537, C=-42.98), theirs, rtol=1e-12)


def test_critical_tension_against_the_reference_library():
    # IAPWS form for water; the library writes the same as a REFPROP sum of two terms
    theirs = [chemicals.interface.REFPROP_sigma(T, 647.096, 0.2358, 1.256, -0.2358 * 0.625, 2.256) for T in KELVIN]
    np.testing.assert_allclose(law("critical_tension", A=0.2358, n=1.256, b=-0.625, Tc=647.096), theirs, rtol=1e-12)


@pytest.mark.parametrize(
    ("share", "expected"),
    [
        # Segur & Oberstar, Ind. Eng. Chem. 43 (1951) 2117-2120, mPa s at 10, 20, 30, 40, 60, 80 degC; from memory
        (0.60, (17.4, 10.8, 7.19, 5.08, 2.85, 1.84)),
        (0.70, (38.8, 22.5, 14.1, 9.40, 4.86, 2.90)),
        (0.80, (116.0, 60.1, 33.9, 20.8, 9.42, 5.13)),
        (0.90, (498.0, 219.0, 109.0, 60.0, 22.5, 11.0)),
        (0.95, (1270.0, 523.0, 237.0, 121.0, 39.9, 16.7)),
    ],
)
def test_glycerol_water_against_measured_viscosities(share, expected):
    kelvin = np.array([10.0, 20.0, 30.0, 40.0, 60.0, 80.0]) + 273.15
    # the formula's own comparison with these data reports up to 5 %
    np.testing.assert_allclose(law("glycerol_water_viscosity", kelvin, w=share), expected, rtol=0.06)


def test_sucrose_against_handbook_viscosities():
    # Handbook of Chemistry and Physics, mPa s, as tabulated in public code (read): 60 % at 20, 40, 60, 80 degC
    kelvin = np.array([20.0, 40.0, 60.0, 80.0]) + 273.15
    np.testing.assert_allclose(law("sucrose_viscosity", kelvin, w=0.60), [56.5, 21.28, 9.83, 5.40], rtol=0.06)
    # the same at 20 degC, relative to water, for 50, 56, 64, 70, 74 %
    relative = [15.40, 32.06, 119.9, 480.6, 1628.0]
    ours = [float(law("sucrose_viscosity", 293.15, w=w)) for w in (0.50, 0.56, 0.64, 0.70, 0.74)]
    np.testing.assert_allclose(ours, np.array(relative) * 1.002, rtol=0.06)


POINTS = st.lists(
    st.tuples(st.floats(0.1, 20.0), st.floats(-50.0, 50.0)), min_size=2, max_size=9
).map(lambda steps: (np.cumsum([s for s, _ in steps]), np.round([y for _, y in steps], 6)))  # no denormal numbers


@given(POINTS)
def test_shape_preserving_is_pchip(points):
    x, y = points
    at = np.linspace(x[0], x[-1], 57)
    np.testing.assert_allclose(shape_preserving(x, y, at), PchipInterpolator(x, y)(at), rtol=1e-9, atol=1e-9)


@given(POINTS)
def test_shape_preserving_never_leaves_the_points(points):
    x, y = points
    values = shape_preserving(x, y, np.linspace(x[0], x[-1], 101))
    assert values.min() >= y.min() - 1e-9 and values.max() <= y.max() + 1e-9


def test_tabulated_laws_go_through_their_points():
    table = {"20": 1.4, "40": 0.28, "60": 0.08, "25.5": 0.9}
    kelvin = np.array([293.15, 298.65, 313.15, 333.15])
    np.testing.assert_allclose(law("tabulated", kelvin, **table), [1.4, 0.9, 0.28, 0.08])
    np.testing.assert_allclose(law("tabulated_log", kelvin, **table), [1.4, 0.9, 0.28, 0.08])


def test_values_scale_with_the_law_s_leading_coefficient():
    for name, leading, rest in (
        ("vogel", "A", {"B": 800.0, "T0": 150.0}),
        ("andrade", "A", {"B": 800.0}),
        ("ppds9", "E", {"A": 1.0, "B": 1.0, "C": 700.0, "D": 50.0}),
        ("critical_tension", "A", {"n": 1.2, "Tc": 700.0}),
        ("wagner", "Pc", {"A": -8.0, "B": 1.0, "C": -5.0, "D": 1.0, "Tc": 600.0}),
        ("constant", "c", {}),
    ):
        np.testing.assert_allclose(law(name, **{leading: 7.0}, **rest), 7.0 * law(name, **{leading: 1.0}, **rest))


def test_every_law_names_its_coefficients_and_its_formula():
    for name, of in LAWS.items():
        assert of.formula, name
        assert len(set(of.required) | set(of.optional)) == len(of.required) + len(of.optional)
