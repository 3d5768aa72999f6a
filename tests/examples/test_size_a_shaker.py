"""The shaker that the example sizes holds every vessel of the family, and a weaker one does not."""

import math
import re

import containment as ct
from tests.examples.running import output_of


def test_the_shaker_holds_the_family():
    out = output_of("size_a_shaker.py")
    level, frequency = map(float, re.search(r"least acceleration: ([\d.]+) g_n at ([\d.]+) Hz", out).groups())
    assert len(re.findall(r"mm: held, proven", out)) == 3
    fluid = ct.Liquid(density=1260.0, viscosity=1.4, surface_tension=0.064)
    clean = ct.Surroundings(surface="clean")
    for diameter in (0.04, 0.055, 0.07):
        cup = ct.Cylinder(diameter=diameter, depth=0.025)
        point = ct.Motion(frequency=frequency, acceleration=level * 1.003 * 9.80665)  # printed to 0.1 g_n
        assert ct.assess(fluid, cup, point, dwell="60 s", surroundings=clean).held
    weaker = ct.Motion(frequency=frequency, acceleration=level * 0.95 * 9.80665)
    assert not ct.assess(fluid, ct.Cylinder(diameter=0.07, depth=0.025), weaker, dwell="60 s", surroundings=clean).held


def test_the_data_sheet_follows_from_the_point():
    out = output_of("size_a_shaker.py")
    level, frequency = map(float, re.search(r"least acceleration: ([\d.]+) g_n at ([\d.]+) Hz", out).groups())
    sheet = {name: float(value) for name, value in re.findall(r"  (\w+) +([\d.]+) (?:mm|m/s|g_n|N)", out)}
    w = 2.0 * math.pi * frequency
    assert math.isclose(sheet["stroke"], 1.3 * 2e3 * level * 9.80665 / w**2, rel_tol=0.01)
    assert math.isclose(sheet["velocity"], 1.3 * level * 9.80665 / w, rel_tol=0.01)
    assert math.isclose(sheet["acceleration"], 1.3 * level, rel_tol=0.01)
    mass = 4.0 + 1260.0 * 0.025 * math.pi / 4 * (0.04**2 + 0.055**2 + 0.07**2)
    assert math.isclose(sheet["force"], 1.3 * mass * level * 9.80665, rel_tol=0.01)
