"""A study's verdicts are those of `containment.assess`, whichever way they go through the physics."""

import json
import math

import numpy as np
import pytest

import containment as ct
from containment.judgement.case import Case, allowance
from containment.physics.edges_of_many import LayerStack, edges_of_many
from containment.studies.batch import evaluated_block
from containment.studies.building import assessed
from containment.studies.plan_reading import plan_from
from containment.studies.sampling import cases_of
from tests.studies.plans import CUP, SYRUP

VESSELS = [
    {"cylinder": 0.07},
    {"cylinder": 0.006},
    {"box_width": 0.05, "box_length": 0.08},
    {"annulus_inner": 0.03, "annulus_outer": 0.08},
    {"slot": 0.03},
]
CIRCUMSTANCES = [
    {}, {"surface": "clean"}, {"surface": "covered"}, {"film_modulus": 0.02}, {"tilt": 0.02}, {"dwell": 60.0}, {"margin": 1.0},
    {"max_stroke": 0.005, "max_velocity": 1.0, "max_acceleration": 300.0}, {"ambient_pressure": 20e3},
    {"lowest_frequency": 30.0, "highest_frequency": 80.0}, {"max_force": 200.0, "moving_mass": 1.0},
]  # fmt: skip


def records(plan):
    return [json.loads(line) for start, stop in plan.blocks() for line in evaluated_block(plan, start, stop).lines.splitlines()]


def compare(plan):
    """Compare every record of a plan with the verdict on its case; return how many differ in kind."""
    cases = cases_of(plan, 0, plan.cases)
    answers = []
    for i, record in enumerate(records(plan)):
        verdict = assessed(cases.inputs(i))
        point = verdict.point
        assert record["verdict"] == verdict.answer.value, (record, verdict.reason)
        answers.append(record["verdict"])
        if plan.proven:
            assert record["proven"] == (verdict.proven and record["verdict"] != "not held")
        else:
            assert record["proven"] is False
        for key, value in (("lower_acceleration_m_s2", point.lower), ("upper_acceleration_m_s2", point.upper)):
            assert record[key] == (pytest.approx(value, rel=1e-9) if math.isfinite(value) else None)
    return answers


@pytest.mark.parametrize("seed", range(6))
def test_grids_of_drive_points(seed):
    rng = np.random.default_rng(seed)
    vessel = VESSELS[seed % len(VESSELS)]
    around = CIRCUMSTANCES[rng.integers(len(CIRCUMSTANCES))]
    if "slot" in vessel and "max_force" in around:
        around = {}
    liquid = SYRUP if seed % 2 else {"name": "glycerol", "temperature": 298.0}
    compare(
        plan_from(
            {
                "fixed": {**liquid, **vessel, **around, "depth": float(rng.choice([0.01, 0.03]))},
                "vary": {
                    "frequency": sorted(rng.uniform(20.0, 150.0, 2)), "acceleration": sorted(9.8 * rng.uniform(2.0, 70.0, 4)),
                },
            }
        )
    )  # fmt: skip


@pytest.mark.parametrize("around", CIRCUMSTANCES, ids=lambda around: next(iter(around), "plain"))
def test_every_circumstance_in_a_cup(around):
    levels = ["20 g_n", "24 g_n", "40 g_n", "90 g_n"]
    compare(plan_from({"fixed": {**SYRUP, **CUP, **around, "frequency": "50 Hz"}, "vary": {"acceleration": levels}}))


def test_a_grid_has_all_three_answers():
    plan = plan_from({"fixed": {**SYRUP, **CUP, "frequency": "50 Hz"}, "vary": {"acceleration": [100.0, 230.0, 400.0, 900.0]}})
    assert set(compare(plan)) == {"held", "marginal", "not held"}


@pytest.mark.parametrize("size", [{"stroke": "6 mm"}, {"amplitude": "3 mm"}, {"velocity": "0.9 m/s"}])
def test_sizes_of_the_motion(size):
    compare(plan_from({"fixed": {**SYRUP, **CUP, **size}, "vary": {"frequency": ["50 Hz", "60 Hz"]}}))


def test_a_layer_that_needs_no_shaking():
    fixed = {"name": "water", "depth": "5 mm", "frequency": "50 Hz"}
    for diameter in ("3 mm", "5 mm", "8 mm"):
        compare(plan_from({"fixed": {**fixed, "cylinder": diameter}, "vary": {"acceleration": ["0.1 g_n", "5 g_n"]}}))


@pytest.mark.parametrize("proof", [True, False])
def test_liquids_side_by_side(proof):
    """Other liquids at one or few frequencies; a table's liquid brings the corners of its uncertainty."""
    uncertain = {"temperature": {"distribution": "uniform", "low": "20 degC", "high": "60 degC"}}
    drawn = {"study": {"proof": proof}, "uncertain": uncertain, "sample": {"count": 8}}
    if proof:
        compare(plan_from({**drawn, "fixed": {"name": "glycerol", **CUP, "frequency": "60 Hz", "acceleration": "50 g_n"}}))
    custom = {**drawn, "uncertain": {
        "viscosity": {"distribution": "lognormal", "median": 2.0, "factor": 3.0},
        "frequency": {"distribution": "uniform", "low": 20.0, "high": 100.0},
    }}  # fmt: skip
    fixed = {"name": "custom", "density": 1400.0, "surface_tension": 0.06, "box_width": 0.05, "box_length": 0.08, "depth": 0.03}
    plan = plan_from({**custom, "fixed": {**fixed, "surface": "clean", "acceleration": 300.0}})
    if proof:
        compare(plan)
    else:
        held = [record["verdict"] for record in records(plan)]
        again = [record["verdict"] for record in records(plan_from({**custom, "study": {"proof": True}, "fixed": {
            **fixed, "surface": "clean", "acceleration": 300.0}}))]  # fmt: skip
        assert held == again


def test_what_does_not_go_as_arrays_goes_one_by_one():
    fixed = {**SYRUP, **CUP, "frequency": "50 Hz", "acceleration": "40 g_n"}
    for extra in ({"contact_line": "pinned"}, {"second_harmonic": 0.1}, {"cushion": "20 mm"}):
        assert compare(plan_from({"fixed": {**fixed, **extra}}))


def test_growth_is_given_where_it_is_asked_for():
    plan = plan_from(
        {
            "study": {"responses": ["growth_rate_1_s", "margin"]},
            "fixed": {**SYRUP, **CUP, "frequency": "50 Hz"}, "vary": {"acceleration": [100.0, 400.0]},
        }
    )  # fmt: skip
    falling, held = records(plan)
    assert falling["growth_rate_1_s"] > 0.0 > held["growth_rate_1_s"]
    assert set(held) == {"i", "acceleration_m_s2", "verdict", "proven", "margin", "growth_rate_1_s"}


def test_least_drives():
    plan = plan_from({"fixed": CUP, "together": [{"name": ["glycerol", "water"], "temperature": ["25 degC", "20 degC"]}]})
    for record, name, warmth in zip(records(plan), ("glycerol", "water"), ("25 degC", "20 degC"), strict=True):
        verdict = ct.assess(ct.liquid(name, temperature=warmth), ct.Cylinder(diameter="70 mm", depth="30 mm"))
        assert record["verdict"] == verdict.answer.value
        least = verdict.window.minimum_acceleration
        assert record["minimum_acceleration_m_s2"] == (pytest.approx(least.acceleration) if least else None)


def test_beds():
    plan = plan_from(
        {
            "study": {"kind": "grains"},
            "fixed": {"name": "custom", "bulk_density": "600 kg/m**3", "particle_diameter": "80 um", "cylinder": "300 mm",
                      "depth": "500 mm", "frequency": "50 Hz"},
            "vary": {"outlet": ["5 mm", "60 mm"], "cohesion": ["50 Pa", "900 Pa"], "acceleration": ["0.2 g_n", "3 g_n"]},
        }
    )  # fmt: skip
    cases = cases_of(plan, 0, plan.cases)
    found = set()
    for i, record in enumerate(records(plan)):
        inputs = cases.inputs(i)
        grains = ct.grains("custom", **{k: inputs[k] for k in ("bulk_density", "particle_diameter", "cohesion")})
        verdict = ct.assess_bed(
            grains, ct.Cylinder(diameter=0.3, depth=0.5), ct.Motion(frequency=50.0, acceleration=inputs["acceleration"]),
            outlet=inputs["outlet"],
        )  # fmt: skip
        assert (record["verdict"], record["binding"]) == (verdict.answer.value, verdict.binding)
        found.add(record["verdict"])
    assert len(found) > 1


def test_a_failing_case_is_kept_with_its_error_and_stops_nothing():
    plan = plan_from({"fixed": {"name": "glycerol", **CUP}, "vary": {"temperature": ["20 degC", "3000 K"], "frequency": [50.0],
                                                                     "acceleration": [10.0, 500.0]}})  # fmt: skip
    rows = records(plan)
    assert [row["verdict"] is None for row in rows] == [False, False, True, True]
    assert "outside the range of the" in rows[3]["error"]
    block = evaluated_block(plan, 0, 4)
    assert block.counts["error"] == 2 and block.counts["held"] + block.counts["marginal"] + block.counts["not held"] == 2


def test_an_amplitude_beyond_the_search_fails_with_the_text_of_assess():
    plan = plan_from({"fixed": {**SYRUP, **CUP, "frequency": 5.0}, "vary": {"acceleration": [30.0, 300.0]}})
    fine, beyond = records(plan)
    assert "error" not in fine
    with pytest.raises(ct.InputError) as caught:
        ct.assess(ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08), ct.Cylinder(diameter=0.07, depth=0.03),
                  ct.Motion(frequency=5.0, acceleration=300.0))  # fmt: skip
    assert beyond["error"] == str(caught.value)


def test_an_unproven_case_is_not_held(monkeypatch):
    from containment.studies import points

    monkeypatch.setattr(points, "growing_modes", lambda case, **at: (0, False))
    plan = plan_from({"fixed": {**SYRUP, **CUP, "frequency": 50.0, "acceleration": 400.0}})
    assert records(plan)[0]["verdict"] == "marginal"
    monkeypatch.setattr(points, "growing_modes", lambda case, **at: (1, True))
    assert records(plan)[0]["verdict"] == "not held"
    assert records(plan)[0]["binding"] == points.GROWING


@pytest.mark.parametrize(("film", "growth"), [(None, 0.0), (math.inf, 0.0), (None, 0.3)])
@pytest.mark.parametrize(
    "vessel", [ct.Cylinder(diameter=0.07, depth=0.03), ct.Slot(width=0.02, depth=0.005), ct.Unbounded(depth=0.01)]
)
def test_edges_of_many_liquids_are_those_of_each(vessel, film, growth):
    rng = np.random.default_rng(4)
    n = 12 if vessel.kind != "unbounded" else 3
    density, tension = rng.uniform(800.0, 1500.0, n), rng.uniform(0.02, 0.08, n)
    viscosity, f = np.exp(rng.uniform(-3.0, 4.0, n)), rng.uniform(15.0, 150.0, n)
    stack = LayerStack(density=density, viscosity=viscosity, surface_tension=tension, depth=vessel.depth, film_modulus=film)
    bear = allowance(depth=vessel.depth)
    cases = [
        Case(ct.Liquid(density=density[i], viscosity=viscosity[i], surface_tension=tension[i]), vessel, bear) for i in range(n)
    ]
    found = edges_of_many(
        stack, cases[0].spectrum, f, growth=growth, capillary_wavenumber=np.array([c.capillary_wavenumber for c in cases])
    )
    for i, case in enumerate(cases):
        alone = case.edges(f[i : i + 1], growth=growth, layer=case.layer_with(surface="covered" if film else None))
        assert found.lower[i] == pytest.approx(alone.lower[0], rel=1e-9)
        assert found.upper[i] == pytest.approx(alone.upper[0], rel=1e-9)
        assert found.upper_subharmonic[i] == alone.upper_subharmonic[0]
