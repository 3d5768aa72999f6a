"""Liquids that are not Newtonian: the limits in which they become Newtonian, and what they refuse."""

import pytest

import containment as ct
from containment.given.rheology import parse_rheology

CUP = ct.Cylinder(diameter="70 mm", depth="30 mm")
AT_60 = ct.Motion(frequency="60 Hz", acceleration="45 g_n")
G = 9.80665


def syrup(rheology=None):
    return ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08, rheology=rheology)


def edges(rheology):
    point = ct.assess(syrup(rheology), CUP, AT_60).point
    return point.lower / G, point.upper / G


def test_jeffreys_with_equal_times_is_newtonian():
    same = parse_rheology("jeffreys: viscosity=10Pa*s, relaxation=5ms, retardation=5ms", "x")
    assert edges(same) == pytest.approx(edges(None), rel=1e-9)


def test_short_relaxation_is_newtonian_and_long_is_not():
    plain = edges(None)
    short = edges(parse_rheology("jeffreys: viscosity=10Pa*s, relaxation=2us, retardation=1us", "x"))
    long = edges(parse_rheology("jeffreys: viscosity=10Pa*s, relaxation=10ms, retardation=2ms", "x"))
    assert short == pytest.approx(plain, rel=1e-2)
    assert long[1] < 0.5 * plain[1]  # elastic resonance breaks the surface up early


def test_soft_gel_is_newtonian_and_stiff_gel_needs_no_shaking():
    soft = edges(parse_rheology("kelvin-voigt: viscosity=10Pa*s, modulus=0.001Pa", "x"))
    assert soft == pytest.approx(edges(None), rel=1e-3)
    # a gel of modulus G stands at rest where 2 G k exceeds rho g (deep half-space: Z0 = 2 mu k, so G Z0 / mu = 2 G k)
    stiff = ct.assess(syrup(parse_rheology("kelvin-voigt: viscosity=10Pa*s, modulus=500Pa", "x")), CUP)
    assert stiff.unshaken.growth_rate == 0.0
    weak = ct.assess(syrup(parse_rheology("kelvin-voigt: viscosity=10Pa*s, modulus=50Pa", "x")), CUP)
    assert weak.unshaken.growth_rate > 0.0


def test_constant_curve_is_newtonian_but_never_a_clean_held():
    flat = parse_rheology("carreau: zero_shear=10Pa*s, infinite_shear=10Pa*s, time=1s, index=0.5", "x")
    verdict = ct.assess(syrup(flat), CUP, AT_60)
    assert verdict.liquid.viscosity == pytest.approx(10.0, rel=1e-9)
    assert verdict.point.lower / G == pytest.approx(edges(None)[0], rel=1e-9)
    assert verdict.answer.value == "marginal"


def test_shear_thinning_needs_a_drive_point():
    with pytest.raises(ct.InputError, match="drive point"):
        ct.assess(syrup(parse_rheology("power-law: consistency=5, index=0.5", "x")), CUP)


def test_pure_maxwell_is_refused_with_a_way_out():
    with pytest.raises(ct.InputError, match="jeffreys"):
        ct.assess(syrup(parse_rheology("maxwell: viscosity=10Pa*s, relaxation=10ms", "x")), CUP, AT_60)


def test_plug_by_yield_stress():
    paste = ct.Liquid(
        density=1000.0, viscosity=10.0, surface_tension=0.06,
        rheology=parse_rheology("herschel-bulkley: yield_stress=100Pa, consistency=12, index=0.4", "x"),
    )  # fmt: skip
    tube = ct.Cylinder(diameter="10 mm", depth="30 mm")
    verdict = ct.assess(paste, tube, ct.Motion(frequency="60 Hz", acceleration="2 g_n"))
    (plug,) = [limit for limit in verdict.limits if limit.name.startswith("yield stress")]
    # rho (g + a) R / 2 by hand: 1000 * 3 * 9.80665 * 0.005 / 2
    assert plug.bound == pytest.approx(73.55, abs=0.01)
    assert plug.ok


@pytest.mark.parametrize(
    "text",
    ["newton: viscosity=1Pa*s", "maxwell", "maxwell: viscosity=1Pa*s", "maxwell: viscosity=1, relaxation=1s",
     "maxwell: viscosity=1Pa*s, relaxation=1s, modulus=2Pa", "kelvin-voigt: viscosity=1Pa*s, modulus=-2Pa"],
)  # fmt: skip
def test_bad_rheology_is_refused(text):
    with pytest.raises(ct.InputError, match="--rheology"):
        parse_rheology(text, "--rheology")
