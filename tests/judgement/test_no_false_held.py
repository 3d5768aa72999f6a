"""Cases built to draw a false 'held', or a wrong 'not held', out of the verdict. Each once did."""

import math

import numpy as np
import pytest

import containment as ct
from containment.judgement.case import Case, allowance
from containment.judgement.operating_point import _wavenumbers
from containment.physics.completeness import count_growing
from containment.physics.crossings import first_crossing

WATER = ct.Liquid(density=998.0, viscosity=1e-3, surface_tension=0.0728)
SYRUP = ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
CUP = ct.Cylinder(diameter="70 mm", depth="30 mm")


def test_capillary_hold_is_not_made_better_by_a_little_shaking():
    tube = ct.Cylinder(diameter="9.6 mm", depth="20 mm")  # held only near a contact angle of 90 degrees
    assert ct.assess(WATER, tube).answer.value == "marginal"
    assert ct.assess(WATER, tube, ct.Motion(frequency=50.0, acceleration=1e-3)).answer.value == "marginal"


def test_slot_is_never_a_clean_held():
    # a box of the same width falls by its waves along the length
    point = ct.Motion(frequency=50.0, acceleration=400.0)
    assert ct.assess(SYRUP, ct.Box(width=0.07, length=2.0, depth=0.03), point).answer.value == "not held"
    assert ct.assess(SYRUP, ct.Slot(width=0.07, depth=0.03), point).answer.value == "marginal"
    assert ct.assess(SYRUP, ct.Slot(width=0.07, depth=0.03)).answer.value == "marginal"


def test_a_narrow_band_between_wavenumber_nodes_is_found_by_the_count_alone():
    case = Case(WATER, ct.Cylinder(diameter=0.5, depth=0.05), allowance(depth=0.05))
    edges = case.edges([62.0])
    a, w = 1.02 * float(edges.upper[0]), 2.0 * math.pi * 62.0
    k, band, resolved = _wavenumbers(case, case.layer, w, a)
    nodes = k[band >= 0]
    assert resolved
    assert count_growing(case.layer, nodes, w, a).growing.any()


def test_uncertain_properties_count_for_the_least_drive_as_well():
    vague = ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08, uncertainty={"viscosity": 0.9})
    assert ct.assess(vague, CUP).answer.value == "marginal"


def test_no_tilt_where_a_mode_may_fall_within_the_dwell():
    verdict = ct.assess(SYRUP, CUP, ct.Motion(frequency=50.0, acceleration=400.0), dwell="3 s")
    assert not [limit for limit in verdict.limits if limit.name.startswith("tilt")]


def test_upper_edge_is_not_taken_for_the_root_that_holds():
    # thin layer in a wide vessel: the upper edge is the second harmonic root of a mode that falls at rest
    oil = ct.Liquid(density=1434.83, viscosity=0.58645, surface_tension=0.0444084)
    verdict = ct.assess(
        oil, ct.Cylinder(diameter=0.5, depth=2.8216e-3), ct.Motion(frequency=12.3297, acceleration=60.0),
        dwell=math.log(10.0) / 3.6254,
    )  # fmt: skip
    assert verdict.point.growing_modes == 0 and verdict.point.proven
    assert verdict.point.upper > 2.0 * verdict.point.lower
    assert verdict.held


def test_huge_amplitudes_are_not_held_and_raise_no_warning():
    oil = ct.Liquid(density=1000.0, viscosity=0.1, surface_tension=0.05)
    verdict = ct.assess(oil, CUP, ct.Motion(frequency=838.0, amplitude=0.052))
    assert verdict.answer.value == "not held" and not verdict.point.complete


def test_no_surface_tension_is_refused_in_one_line():
    with pytest.raises(ct.InputError, match="surface tension: 0 N/m"):
        ct.assess(ct.Liquid(density=1000.0, viscosity=0.1, surface_tension=0.0), CUP)


def test_very_deep_vessel_pulls_off():
    deep = ct.Cylinder(diameter=1.0, depth=900.0)
    assert ct.assess(SYRUP, deep, ct.Motion(frequency=50.0, acceleration=400.0)).answer.value == "not held"


class OneFunction:
    def __init__(self, function):
        self.margin = function

    def take(self, chosen):
        return self


ONE = np.array([1.0])


def test_pair_of_roots_in_the_last_step():
    # roots of (x - log 29.5)^2 = 1e-6 by hand: 29.5 exp(-+ 0.001)
    found = first_crossing(
        OneFunction(lambda a: (np.log(a) - np.log(29.5)) ** 2 - 1e-6), ONE, 30.0 * ONE, turns=0.0 * ONE
    )
    assert found[0] == pytest.approx(29.5 * math.exp(-1e-3), rel=1e-10)


def test_pair_of_roots_close_to_a_root_at_the_start():
    # log a ((log a - 0.08)^2 - 1e-4): after the root at 1 come exp(0.07) and exp(0.09)
    found = first_crossing(
        OneFunction(lambda a: np.log(a) * ((np.log(a) - 0.08) ** 2 - 1e-4)), ONE * (1.0 + 1e-7), 30.0 * ONE,
        turns=0.0 * ONE, from_root=True,
    )  # fmt: skip
    assert found[0] == pytest.approx(math.exp(0.07), rel=1e-9)


def test_roots_beyond_the_end_are_not_reported():
    found = first_crossing(OneFunction(lambda a: np.log(a) - np.log(3.1)), ONE, 3.0 * ONE, turns=0.0 * ONE)
    assert np.isinf(found[0])
