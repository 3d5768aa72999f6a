"""The example plan, from the command line."""

import json
import subprocess
import sys

from containment.studies.building import assessed
from containment.studies.plan_reading import read_plan
from containment.studies.sampling import cases_of
from tests.examples.running import EXAMPLES


def test_the_chances_rise_with_the_level(tmp_path):
    plan = EXAMPLES / "uncertain_syrup.toml"
    out = tmp_path / "records.jsonl"
    command = [sys.executable, "-m", "containment", "study", str(plan), "--out", str(out), "--workers", "1", "--json"]
    done = subprocess.run(command, capture_output=True, text=True, check=True)
    found = json.loads(done.stdout)
    chances = [point["holding_probability"] for point in found["points"]]
    assert [chance["draws"] for chance in chances] == [100, 100, 100]
    assert chances[0]["probability"] < chances[1]["probability"] <= chances[2]["probability"]
    assert found["proof"] is True and found["counts"]["unproven"] == 0
    records = [json.loads(line) for line in out.read_text().splitlines()[1:]]
    cases = cases_of(read_plan(plan), 0, 300)
    for i in (0, 57, 130, 299):
        assert assessed(cases.inputs(i)).answer.value == records[i]["verdict"]
