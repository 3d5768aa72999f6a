"""The temperatures that the example names are those at which single verdicts change."""

import re

import containment as ct
from tests.examples.running import output_of


def verdict_at(celsius):
    syrup = ct.liquid("glucose syrup 42 DE", temperature=f"{celsius} degC")
    point = ct.Motion(frequency="60 Hz", acceleration="45 g_n")
    return ct.assess(syrup, ct.Cylinder(diameter="70 mm", depth="30 mm"), point, dwell="60 s")


def test_the_band_of_temperature():
    low, high = map(int, re.search(r"keep it from (\d+) to (\d+) degC", output_of("how_warm_may_it_get.py")).groups())
    assert verdict_at(low).held and verdict_at(high).held
    assert not verdict_at(low - 1).held and not verdict_at(high + 1).held
    assert verdict_at(low - 6).point.acceleration < verdict_at(low - 6).point.lower  # colder: too weak for its viscosity


def test_the_chances_fall_towards_the_warm_end():
    rows = re.findall(r"(\d+) degC +([\d.]+) % \(([\d.]+) to ([\d.]+)\)", output_of("how_warm_may_it_get.py"))
    assert [int(row[0]) for row in rows] == [40, 46, 52]
    chances = [tuple(map(float, row[1:])) for row in rows]
    assert all(low <= chance <= high for chance, low, high in chances)
    assert chances[1][0] >= max(chances[0][0], chances[2][0])
