"""Speed of studies against their plain rivals, ratios in one run: `pytest tests/benchmarks/test_study_speed.py -s`."""

import os
import subprocess
import sys
import time

import numpy as np
import pytest

import containment as ct
from containment.studies.batch import evaluated_block
from containment.studies.building import assessed
from containment.studies.plan_reading import plan_from
from containment.studies.sampling import cases_of
from tests.studies.plans import CUP, SYRUP

WARMTH = {"temperature": {"distribution": "normal", "mean": "30 degC", "sd": "2 K", "low": "20 degC", "high": "40 degC"}}
PLANS = {
    "grid of drive points, one vessel": {
        "fixed": {**SYRUP, **CUP},
        "vary": {"frequency": {"from": "30 Hz", "to": "80 Hz", "count": 64},
                 "acceleration": {"from": "5 g_n", "to": "100 g_n", "count": 256}},
    },
    "uncertain liquid": {
        "fixed": {**SYRUP, **CUP, "frequency": "50 Hz", "acceleration": "32 g_n"},
        "uncertain": {"viscosity": {"distribution": "lognormal", "median": 10.0, "factor": 1.3},
                      "surface_tension": {"distribution": "normal", "mean": 0.08, "sd": 0.003}},
        "sample": {"count": 512},
    },
    "uncertain temperature of a liquid of the table": {
        "fixed": {"name": "glycerol", **CUP, "frequency": "60 Hz", "acceleration": "32 g_n"},
        "uncertain": WARMTH, "sample": {"count": 512},
    },
}  # fmt: skip
for _name in list(PLANS):  # fewer cases with proof, which takes longer
    few = {**PLANS[_name], "study": {"proof": True}}
    if "sample" in few:
        few["sample"] = {"count": 64}
    else:
        few["vary"] = {"frequency": {"from": "30 Hz", "to": "80 Hz", "count": 8},
                       "acceleration": {"from": "5 g_n", "to": "100 g_n", "count": 8}}  # fmt: skip
    PLANS[_name]["study"] = {"proof": False}
    PLANS[f"{_name}, each proven"] = few


SHELL = {
    "custom": ["--density", "1410kg/m**3", "--viscosity", "10Pa*s", "--surface-tension", "80mN/m", "--frequency", "50Hz"],
    "glycerol": ["--temperature", "30degC", "--frequency", "60Hz"],
}


def once_from_the_shell(liquid):
    command = [
        sys.executable, "-m", "containment", "liquid", liquid, *SHELL[liquid], "--cylinder", "70mm", "--depth", "30mm",
        "--acceleration", "32g_n", "--json",
    ]  # fmt: skip
    start = time.perf_counter()
    subprocess.run(command, capture_output=True, check=False, env=os.environ | {"OPENBLAS_NUM_THREADS": "1"})
    return time.perf_counter() - start


@pytest.mark.parametrize("name", PLANS)
def test_cases_a_second_on_one_core(name):
    given = dict(PLANS[name])
    given["fixed"] = {key: value for key, value in given["fixed"].items() if key not in given.get("uncertain", {})}
    plan = plan_from(given)
    evaluated_block(plan, *plan.blocks()[0])
    times = []
    for _ in range(3):
        start = time.perf_counter()
        for span in plan.blocks():
            evaluated_block(plan, *span)
        times.append((time.perf_counter() - start) / plan.cases)
    each = min(times)
    some = cases_of(plan, 0, plan.cases)
    rng = np.random.default_rng(1)
    chosen = rng.choice(plan.cases, 24, replace=False)
    start = time.perf_counter()
    for i in chosen:
        assessed(some.inputs(int(i)))
    loop = (time.perf_counter() - start) / len(chosen)
    shell = min(once_from_the_shell(given["fixed"]["name"]) for _ in range(3))
    print(
        f"\n{name}: {1 / each:.0f} cases a second; a loop over ct.assess {1e3 * loop:.1f} ms a case, {loop / each:.1f} times "
        f"as long; from the shell {1e3 * shell:.0f} ms, {shell / each:.0f} times as long"
    )
    assert loop / each > 3.0
    if not plan.proven:
        assert shell / each > 100.0


def test_records_cost_little_beside_the_physics(tmp_path):
    """What a study adds to its blocks: the plan, the file, the order; serial, on the cheapest cases."""
    plan = plan_from({**PLANS["grid of drive points, one vessel"]})
    start = time.perf_counter()
    for span in plan.blocks():
        evaluated_block(plan, *span)
    bare = time.perf_counter() - start
    start = time.perf_counter()
    ct.study(plan, out=tmp_path / "s.jsonl")
    whole = time.perf_counter() - start
    print(f"\n{plan.cases} cases: blocks alone {1e3 * bare:.0f} ms, with file {1e3 * whole:.0f} ms")
    assert whole < 2.0 * bare + 0.2
