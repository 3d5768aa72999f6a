"""Reading plans: what they mean, and every fault at once."""

import copy

import numpy as np
import pytest

from containment.errors import InputError
from containment.studies.inputs import INPUTS
from containment.studies.plan_reading import plan_from, read_plan
from containment.studies.sampling import cases_of
from tests.studies.plans import CUP, DRAWN, GRID, SYRUP, toml_plan


def faults(given, **options):
    with pytest.raises(InputError) as caught:
        plan_from(given, **options)
    return str(caught.value).splitlines()


def changed(plan, table, **values):
    result = copy.deepcopy(plan)
    result.setdefault(table, {}).update(values)
    return {key: {k: v for k, v in part.items() if v is not None} for key, part in result.items()}


def test_a_grid_is_the_product_of_its_axes_with_the_size_of_the_motion_innermost():
    varied = {"acceleration": [1.0, 2.0], "cylinder": [0.05, 0.07], "frequency": [40, 50, 60]}
    plan = plan_from({"fixed": {**SYRUP, "depth": 0.03}, "vary": varied})
    cases = cases_of(plan, 0, plan.cases)
    assert plan.shape == (2, 3, 2)
    seen = list(zip(cases.columns["cylinder"], cases.columns["frequency"], cases.columns["acceleration"], strict=True))
    assert seen == [(d, f, a) for d in (0.05, 0.07) for f in (40.0, 50.0, 60.0) for a in (1.0, 2.0)]


def test_inputs_that_go_together_are_one_axis():
    plan = plan_from(
        {"fixed": CUP, "together": [{"name": ["glycerol", "castor oil"], "temperature": ["20 degC", "40 degC"]}]}
    )
    assert plan.cases == 2
    assert plan.question == "minimum drive"
    assert cases_of(plan, 1, 2).inputs(0) == {
        "cylinder": 0.07, "depth": 0.03, "name": "castor oil", "temperature": pytest.approx(313.15),
    }  # fmt: skip


@pytest.mark.parametrize(
    ("given", "values"),
    [
        ({"from": "10 Hz", "to": "40 Hz", "count": 4}, [10.0, 20.0, 30.0, 40.0]),
        ({"from": "10 Hz", "to": "40 Hz", "count": 3, "spacing": "geometric"}, [10.0, 20.0, 40.0]),
        ({"from": "10 Hz", "to": "41 Hz", "step": "10 Hz"}, [10.0, 20.0, 30.0, 40.0]),
        ({"from": "600 rpm", "to": "1200 rpm", "count": 2}, [10.0, 20.0]),
        (["10 Hz", "12 Hz"], [10.0, 12.0]),
    ],
)
def test_ranges_and_lists(given, values):
    plan = plan_from({"fixed": {**SYRUP, **CUP, "acceleration": 100.0}, "vary": {"frequency": given}})
    assert plan.axes[0].values["frequency"] == pytest.approx(values)


def test_a_step_of_temperature_is_a_difference():
    given = {"fixed": {"name": "glycerol", **CUP}, "vary": {"temperature": {"from": "20 degC", "to": "24 degC", "step": "2 K"}}}
    assert np.diff(plan_from(given).axes[0].values["temperature"]) == pytest.approx([2.0, 2.0])
    assert "kelvin" in faults(changed(given, "vary", temperature={"from": "20 degC", "to": "24 degC", "step": "2 degC"}))[1]


def test_every_fault_is_named_at_once():
    found = faults(
        {
            "study": {"kind": "liquid", "speed": 1},
            "fixed": {"nam": "custom", "depth": "-3 mm", "cylinder": "70 mm", "slot": "5 mm"},
            "vary": {"acceleration": [], "viscosity": {"from": "2 Pa*s", "to": "1 Pa*s", "count": 3}},
            "uncertain": {"density": {"distribution": "normal", "mean": "1000 kg/m**3"}},
            "extra": {},
        }
    )
    text = "\n".join(found)
    assert int(found[0].split()[1]) == len(found) - 1 >= 9
    words = ("extra", "'speed'", "'nam'", "depth", "cylinder, slot", "acceleration", "viscosity", "sd missing", "count")
    for word in words:
        assert word in text, word


@pytest.mark.parametrize(
    ("table", "values", "says"),
    [
        ("fixed", {"cylinder": None}, "vessel: no shape"),
        ("fixed", {"cylinder": None, "box_width": "60 mm"}, "box_length: missing"),
        ("fixed", {"box": "60mmx80mm"}, "box_width and box_length"),
        ("fixed", {"depth": None}, "depth: missing"),
        ("fixed", {"name": None}, "name: missing"),
        ("fixed", {"name": "no such liquid"}, "no such liquid"),
        ("fixed", {"viscosity": None}, "viscosity missing"),
        ("fixed", {"drive": "no such drive"}, "no such drive"),
        ("fixed", {"surface": "dirty"}, "'clean' or 'covered'"),
        ("fixed", {"tilt": "40 deg"}, "tilt"),
        ("fixed", {"max_force": "500 N"}, "moving_mass"),
        ("fixed", {"solids": 0.3}, "max_packing"),
        ("fixed", {"bulk_density": "600 kg/m**3"}, "not an input of liquid"),
        ("fixed", {"frequency": "50 Hz"}, "more than once"),
        ("fixed", {"stroke": "5 mm"}, "exactly one of acceleration"),
        ("fixed", {"unbounded": False}, "unbounded"),
        ("vary", {"frequency": None}, "without frequency"),
        ("vary", {"acceleration": None}, "no size"),
        ("vary", {"surface": {"from": 1, "to": 2, "count": 3}}, "no range"),
        ("vary", {"frequency": {"from": "10 Hz", "to": "20 Hz"}}, "count or step"),
        ("vary", {"frequency": {"from": "10 Hz", "to": "20 Hz", "count": 1}}, "at least 2"),
        ("vary", {"frequency": "50 Hz"}, "expected a list"),
        ("vary", {"frequency": ["50 Hz", "fifty"]}, "fifty"),
        ("study", {"proof": "yes"}, "true or false"),
        ("study", {"responses": ["colour"]}, "responses"),
        ("study", {"kind": "gas"}, "'liquid' or 'grains'"),
        ("sample", {"count": 10}, "without [uncertain]"),
    ],
)
def test_faults_of_a_grid(table, values, says):
    assert says in "\n".join(faults(changed(GRID, table, **values)))


@pytest.mark.parametrize(
    ("table", "values", "says"),
    [
        ("sample", {"count": None}, "count"),
        ("sample", {"method": "guess"}, "method"),
        ("sample", {"method": "sobol"}, "power of 2"),
        ("sample", {"seed": -1}, "seed"),
        ("uncertain", {"surface": {"distribution": "uniform", "low": 0, "high": 1}}, "is a word"),
        ("uncertain", {"depth": {"distribution": "cauchy"}}, "distribution"),
        ("uncertain", {"viscosity": {"distribution": "normal", "mean": "10 Pa*s", "sd": "5 Pa*s"}}, "truncate"),
        ("uncertain", {"viscosity": {"distribution": "lognormal", "median": "10 Pa*s", "factor": 0.9}}, "above 1"),
        ("uncertain", {"viscosity": {"distribution": "uniform", "low": "9 Pa*s", "high": "8 Pa*s"}}, "do not rise"),
        ("uncertain", {"viscosity": {"distribution": "uniform", "low": "9 Pa*s", "high": "10 m"}}, "high of viscosity"),
        ("uncertain", {"viscosity": {"distribution": "triangular", "low": 1.0, "high": 2.0}}, "mode missing"),
        ("uncertain", {"temperature": {"distribution": "normal", "mean": "20 degC", "sd": "2 degC"}}, "kelvin"),
        ("uncertain", {"viscosity": {"distribution": "normal", "mean": 10.0, "sd": 0.5, "low": 11.0}}, "either side"),
    ],
)
def test_faults_of_draws(table, values, says):
    assert says in "\n".join(faults(changed(DRAWN, table, **values)))


def test_a_file_refuses_bare_numbers_and_names_the_unit(tmp_path):
    path = toml_plan(tmp_path)
    assert read_plan(path).cases == 2000
    path.write_text(path.read_text().replace('"70 mm"', "70"))
    with pytest.raises(InputError, match="cylinder: '70' has no unit; expected a length"):
        read_plan(path)


@pytest.mark.parametrize("text", ["[fixed", 'a = "b', "\x00"])
def test_a_file_that_is_not_toml(tmp_path, text):
    path = tmp_path / "plan.toml"
    path.write_text(text)
    with pytest.raises(InputError, match="plan: .*TOML"):
        read_plan(path)


def test_a_file_that_cannot_be_read(tmp_path):
    with pytest.raises(InputError, match="cannot be read"):
        read_plan(tmp_path / "none.toml")


def test_the_fingerprint_follows_the_meaning_not_the_writing():
    one = plan_from(GRID)
    same = plan_from(changed(GRID, "fixed", depth=0.03, cylinder="7 cm"))
    assert one.fingerprint == same.fingerprint == plan_from(changed(GRID, "study", title="x")).fingerprint
    assert one.fingerprint != plan_from(changed(GRID, "fixed", depth="31 mm")).fingerprint
    assert plan_from(DRAWN).fingerprint != plan_from(changed(DRAWN, "sample", seed=6)).fingerprint


def test_blocks_cover_all_cases_once():
    for given in (GRID, DRAWN, changed(GRID, "study", proof=True)):
        plan = plan_from(given)
        ends = [end for span in plan.blocks() for end in span]
        assert ends[0] == 0 and ends[-1] == plan.cases and ends[1:-1:2] == ends[2::2]


def test_proof_is_the_default_for_small_plans_only():
    assert plan_from(changed(GRID, "study", proof=None)).proven
    large = changed(GRID, "vary", acceleration={"from": "5 g_n", "to": "100 g_n", "count": 400})
    assert not plan_from(changed(large, "study", proof=None)).proven


def test_every_option_of_the_command_line_has_its_input():
    """Options that judge a case, by their long names; what only shapes the output has no place in a plan."""
    import argparse

    from containment.faces import command_grains, command_liquid

    output = {"json", "plain", "detail", "report", "save_case", "case", "help", "chart"}
    pairs = {"box", "annulus", "frequency_range"}
    for module, subject in ((command_liquid, "liquid"), (command_grains, "grains")):
        parser = argparse.ArgumentParser()
        module.add_arguments(parser)
        options = {action.dest for action in parser._actions}
        missing = options - output - pairs - set(INPUTS)
        assert not missing, (subject, missing)
