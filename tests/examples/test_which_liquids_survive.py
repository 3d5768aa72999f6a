"""What the example says of each liquid is the verdict on it."""

import re

import containment as ct
from tests.examples.running import output_of


def test_every_liquid_has_its_verdict():
    out = output_of("which_liquids_survive.py")
    cup, point = ct.Cylinder(diameter="40 mm", depth="20 mm"), ct.Motion(frequency="80 Hz", stroke="4 mm")
    rows = re.findall(r"^(.{20}) (held|marginal|not held) +nearest limit: (.*)$", out, flags=re.MULTILINE)
    assert len(rows) == 10
    survivors = 0
    for name, answer, rest in rows:
        liquid = ct.liquid(name.strip(), temperature="30 degC")
        verdict = ct.assess(liquid, cup, point, dwell="30 s")
        assert verdict.answer.value == answer
        survivors += verdict.held
        if "holds from" in rest:
            level, frequency = map(float, re.search(r"holds from (\d+) g_n at (\d+) Hz", rest).groups())
            least = ct.assess(liquid, cup, dwell="30 s").window.minimum_acceleration
            assert round(least.acceleration / 9.80665) == level and round(least.frequency) == frequency
        else:
            assert verdict.held or "no drive holds it" in rest
    assert out.splitlines()[-1] == f"{survivors} of 10 survive"
    assert 0 < survivors < 10
