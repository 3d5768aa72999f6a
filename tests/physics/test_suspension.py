"""Suspensions: limits known from elsewhere, scaling, refusals; the slurry as a liquid."""

import json
import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from containment.errors import InputError
from containment.faces.command import main
from containment.given.liquid import Liquid
from containment.given.slurry import slurry
from containment.physics.suspension import suspension_density, suspension_viscosity, viscosity_sensitivity


def test_dilute_limit_is_einsteins():
    # Einstein 1906/1911: mu (1 + 2.5 phi), from memory
    for phi in (1e-6, 1e-4):
        slope = (float(suspension_viscosity(1.0, solids=phi, max_packing=0.64)) - 1.0) / phi
        assert slope == pytest.approx(2.5, rel=5e-3)


def test_second_order_is_near_that_of_spheres():
    # Batchelor & Green 1972: 5.2 phi^2 for spheres without Brownian motion, from memory
    phi = 1e-3
    second = (float(suspension_viscosity(1.0, solids=phi, max_packing=0.64)) - 1.0 - 2.5 * phi) / phi**2
    assert second == pytest.approx(5.2, rel=0.05)


def test_meets_maron_and_pierce_where_the_exponent_is_two():
    # Maron & Pierce 1956: (1 - phi/phi_m)^-2, from memory; the law's exponent is 2 for [eta] phi_m = 2
    phi = np.linspace(0.0, 0.5, 11)
    np.testing.assert_allclose(
        suspension_viscosity(1.0, solids=phi, max_packing=0.625, intrinsic=3.2), (1.0 - phi / 0.625) ** -2, rtol=1e-13
    )


@settings(max_examples=60, deadline=None)
@given(
    mu=st.floats(1e-4, 1e4), packed=st.floats(0.3, 0.8), share=st.floats(0.01, 0.85), factor=st.floats(0.01, 100.0)
)
def test_scales_with_the_liquid_and_rises_with_solids(mu, packed, share, factor):
    phi = share * packed
    value = float(suspension_viscosity(mu, solids=phi, max_packing=packed))
    assert value > mu
    assert float(suspension_viscosity(factor * mu, solids=phi, max_packing=packed)) == pytest.approx(factor * value, rel=1e-12)
    assert float(suspension_viscosity(mu, solids=1.01 * phi, max_packing=packed)) > value
    assert float(suspension_viscosity(mu, solids=phi, max_packing=1.01 * packed)) < value


def test_sensitivities_are_the_slopes():
    step = 1e-6
    by_solids, by_packing = viscosity_sensitivity(solids=0.4, max_packing=0.62)

    def ln(phi, packed):
        return math.log(float(suspension_viscosity(1.0, solids=phi, max_packing=packed)))

    assert float(by_solids) == pytest.approx((ln(0.4 + step, 0.62) - ln(0.4 - step, 0.62)) / (2 * step), rel=1e-7)
    assert float(by_packing) == pytest.approx((ln(0.4, 0.62 + step) - ln(0.4, 0.62 - step)) / (2 * step), rel=1e-7)


def test_density_is_mass_over_volume():
    # one litre of each: 1.0 kg and 2.65 kg in 2 litres
    assert float(suspension_density(1000.0, particle_density=2650.0, solids=0.5)) == pytest.approx(3.65 / 2e-3)


@pytest.mark.parametrize(
    ("solids", "packed", "said"),
    [(0.6, 0.64, "solids: 0.6"), (-0.1, 0.64, "solids: -0.1"), (math.nan, 0.64, "solids"), (0.3, 0.0, "max packing"),
     (0.3, 1.2, "max packing")],
)  # fmt: skip
def test_refuses_what_jams_or_makes_no_sense(solids, packed, said):
    with pytest.raises(InputError, match=said):
        suspension_viscosity(1.0, solids=solids, max_packing=packed)


def test_slurry_keeps_what_belongs_to_the_liquid_and_says_that_it_is_an_estimate():
    base = Liquid(
        density=1261.0, viscosity=1.41, surface_tension=0.064, name="glycerol", hazards=(("slippery", "Slips."),),
        uncertainty={"viscosity": 0.05}, vapour_pressure=0.01, flash_point=433.0,
    )  # fmt: skip
    made = slurry(base, solids="35 %", max_packing=0.64, particle_density="2500 kg/m**3")
    assert made.surface_tension == base.surface_tension
    assert made.flash_point == base.flash_point
    assert made.hazards[0] == ("slippery", "Slips.")
    assert "estimate" in made.hazards[-1][1]
    assert "thins" in made.hazards[-1][1]
    assert made.uncertainty["viscosity"] > 0.05
    none = slurry(base, solids=0.0, max_packing=0.64, particle_density=2500.0)
    assert (none.density, none.viscosity) == (base.density, base.viscosity)


def test_slurry_refuses_a_liquid_that_is_not_newtonian():
    base = Liquid(density=1e3, viscosity=1.0, surface_tension=0.07, rheology={"model": "power-law"})
    with pytest.raises(InputError, match="not Newtonian"):
        slurry(base, solids=0.3, max_packing=0.64, particle_density=2500.0)


def test_slurry_without_particle_density_says_so():
    base = Liquid(density=1e3, viscosity=1.0, surface_tension=0.07)
    made = slurry(base, solids=0.2, max_packing=0.64)
    assert made.density == 1e3
    assert "no particle density" in made.sources["density"]
    assert "give the particle density" in made.hazards[-1][1]


SLURRY = ["liquid", "glycerol", "--cylinder", "70mm", "--depth", "30mm", "--json"]


def test_solids_reach_the_verdict(capsys):
    main([*SLURRY, "--solids", "0.35", "--max-packing", "0.64", "--particle-density", "2500kg/m**3"])
    with_solids = json.loads(capsys.readouterr().out)
    main(SLURRY)
    without = json.loads(capsys.readouterr().out)
    # (1 - 0.35/0.64)^-1.6 = exp(1.6 * 0.79159)
    assert with_solids["liquid"]["viscosity_Pa_s"] / without["liquid"]["viscosity_Pa_s"] == pytest.approx(3.5486, rel=1e-4)
    assert with_solids["liquid"]["density_kg_m3"] == pytest.approx(0.65 * without["liquid"]["density_kg_m3"] + 0.35 * 2500.0)
    assert "suspension" in [caution["topic"] for caution in with_solids["cautions"]]


@pytest.mark.parametrize(
    ("options", "said"),
    [
        (["--solids", "0.35"], "--max-packing"),
        (["--max-packing", "0.64"], "--solids"),
        (["--particle-density", "2500kg/m**3"], "--solids"),
        (["--solids", "0.7", "--max-packing", "0.64"], "solids: 0.7"),
        (["--solids", "2", "--max-packing", "0.64"], "--solids"),
        (["--solids", "0.3", "--max-packing", "0"], "--max-packing"),
    ],
)
def test_bad_solids_are_one_line_and_status_2(capsys, options, said):
    assert main([*SLURRY, *options]) == 2
    captured = capsys.readouterr()
    assert captured.out == ""
    assert said in captured.err
    assert captured.err.count("\n") == 1
