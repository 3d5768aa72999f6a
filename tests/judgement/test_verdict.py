"""Verdicts: the answer and what it rests on, corners of the window, limits, dwell, and that nothing weak is called held."""

import math

import numpy as np
import pytest

import containment as ct
from containment.constants import STANDARD_GRAVITY as G
from containment.errors import InputError
from containment.judgement.case import Case, allowance
from containment.judgement.findings import Answer, exit_status, seconds_text
from containment.judgement.limits import drive_limits, pull_off_acceleration, pull_off_limit
from tests.independent import time_stepping

SYRUP = ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
GLYCEROL = ct.Liquid(density=1261.0, viscosity=1.41, surface_tension=0.0634)  # handbook values at 20 degC, from memory
STIFF = ct.Liquid(density=974.0, viscosity=12.1, surface_tension=0.0212)
CUP = ct.Cylinder(diameter="70 mm", depth="30 mm")


def at(liquid, vessel, frequency, level, **others):
    return ct.assess(liquid, vessel, ct.Motion(frequency=frequency, acceleration=level * G), **others)


# --- edges and corners ------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("liquid", "least", "near"),
    # computed by a separate prototype on a coarse net of frequencies
    [(GLYCEROL, 6.5, 15.0), (SYRUP, 19.3, 17.0), (STIFF, 68.8, 33.0)],
)
def test_least_acceleration_of_the_cup(liquid, least, near):
    point = ct.holding_window(liquid, CUP).minimum_acceleration
    assert point.acceleration / G == pytest.approx(least, rel=0.02)
    assert point.frequency == pytest.approx(near, rel=0.15)


def test_corners_lie_where_nothing_better_is_near():
    window = ct.holding_window(SYRUP, CUP)
    least, slowest, best = window.minimum_acceleration, window.minimum_frequency, window.recommended
    case = Case(SYRUP, CUP, allowance(depth=0.03))
    f = np.unique(np.concatenate([np.linspace(0.97, 1.03, 13) * p.frequency for p in (least, slowest, best)]))
    edges = case.edges(f)
    open_here = edges.lower < edges.upper
    assert edges.lower[open_here].min() >= least.acceleration * (1.0 - 1e-5)
    assert f[open_here].min() >= slowest.frequency * (1.0 - 1e-5)
    assert least.frequency >= slowest.frequency
    assert best.margin > 1.5
    assert best.acceleration == pytest.approx(math.sqrt(best.lower * best.ceiling))


def test_edges_of_the_verdict_are_those_of_the_time_stepped_route():
    """Binding modes of both sides, 1 part in 1e7: the tool promises digits that are known."""
    point = at(SYRUP, CUP, 50.0, 40.0).point
    for value, wave in ((point.lower, point.edges.lower_wavenumber[0]), (point.upper, point.edges.upper_wavenumber[0])):
        stepped = time_stepping.threshold(
            bracket=(0.9 * value, 1.1 * value), wavenumber=float(wave), depth=0.03, density=1410.0, viscosity=10.0,
            surface_tension=0.08, frequency=50.0,
        )  # fmt: skip
        assert value == pytest.approx(stepped, rel=1e-7)


def test_growth_rate_of_the_verdict_is_that_of_the_time_stepped_route():
    for level in (15.0, 95.0):
        point = at(SYRUP, CUP, 50.0, level).point
        stepped = time_stepping.growth_rate(
            wavenumber=point.worst_wavenumber, depth=0.03, density=1410.0, viscosity=10.0, surface_tension=0.08,
            frequency=50.0, acceleration=level * G,
        )  # fmt: skip
        assert point.growth_rate == pytest.approx(stepped, rel=1e-6)


# --- answers ------------------------------------------------------------------------------------------------------------


def test_answers_along_a_sweep_of_the_acceleration():
    levels = [1.0, 15.0, 21.0, 22.0, 26.0, 30.0, 45.0, 62.0, 72.0, 81.0, 83.0, 120.0]
    answers = [at(SYRUP, CUP, 50.0, level).answer for level in levels]
    assert answers[0] is answers[-1] is Answer.NOT_HELD
    order = [("not held", 3), ("marginal", None), ("held", None), ("marginal", None), ("not held", None)]
    runs = [answers[0].value]
    for answer in answers[1:]:
        if answer.value != runs[-1]:
            runs.append(answer.value)
    assert runs == [name for name, _ in order]


def test_nothing_is_held_outside_its_margin():
    """Held only where both edges are a factor 1.25 away, or the factor asked for."""
    point = at(SYRUP, CUP, 50.0, 40.0).point
    lower, upper = point.lower / G, point.upper / G
    assert at(SYRUP, CUP, 50.0, lower * 1.249).answer is Answer.MARGINAL
    assert at(SYRUP, CUP, 50.0, upper / 1.249).answer is Answer.MARGINAL
    assert at(SYRUP, CUP, 50.0, 40.0, margin_factor=2.5).answer is Answer.MARGINAL


def test_uncertain_properties_make_a_verdict_marginal():
    def with_spread(u):
        return ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08, uncertainty={"viscosity": u})

    assert at(with_spread(0.02), CUP, 50.0, 40.0).answer is Answer.HELD
    wide = at(with_spread(0.9), CUP, 50.0, 40.0)
    assert wide.answer is Answer.MARGINAL
    assert wide.spans_edge


def test_thin_liquid_in_a_wide_vessel_has_no_window_and_says_why():
    water = ct.Liquid(density=998.2, viscosity=1.002e-3, surface_tension=0.0728)
    verdict = ct.assess(water, CUP)
    assert verdict.answer is Answer.NOT_HELD
    assert "waves break up the surface before it is held" in verdict.reason
    assert verdict.to_dict()["minimum_acceleration"] is None


def test_what_is_said_to_open_a_window_opens_one():
    water = ct.Liquid(density=998.2, viscosity=1.002e-3, surface_tension=0.0728)
    reason = ct.assess(water, CUP).reason
    words = reason.split()
    viscosity = float(words[words.index("about") + 1])
    thicker = ct.Liquid(density=998.2, viscosity=viscosity, surface_tension=0.0728)
    assert ct.holding_window(thicker, CUP).minimum_acceleration is not None


# --- unshaken -----------------------------------------------------------------------------------------------------------


def test_time_to_spill():
    """ln(depth / unevenness) / rate, with the rate of the independent route."""
    rest = ct.assess(SYRUP, CUP, ct.Motion(frequency=50.0, acceleration=40.0 * G)).unshaken
    rate = time_stepping.static_growth_rate(
        wavenumber=rest.wavenumber, depth=0.03, density=1410.0, viscosity=10.0, surface_tension=0.08
    )
    assert rest.growth_rate == pytest.approx(rate, rel=1e-7)
    assert rest.time_to_spill == pytest.approx(math.log(0.03 / 1e-4) / rate, rel=1e-7)


def test_a_wide_vessel_at_rest_is_never_called_held():
    for diameter in (0.02, 0.07, 0.5):
        case = Case(SYRUP, ct.Cylinder(diameter=diameter, depth=0.03), allowance(depth=0.03))
        assert case.unshaken.growth_rate > 0.0


# --- dwell --------------------------------------------------------------------------------------------------------------


def test_dwell_allows_growth_and_says_so():
    """Allowed rate ln(b)/t; for 0.3 1/s the prototype's least acceleration is 16 g_n instead of 19.3."""
    bear = allowance(depth=0.03, dwell=10.0)
    assert bear.growth == pytest.approx(math.log(30.0) / 10.0)  # a tenth of the depth over 0.1 mm
    verdict = ct.assess(SYRUP, CUP, dwell=math.log(30.0) / 0.3)
    assert verdict.allowance.growth == pytest.approx(0.3)
    assert verdict.window.minimum_acceleration.acceleration / G == pytest.approx(16.0, rel=0.02)
    assert verdict.strict_window.minimum_acceleration.acceleration / G == pytest.approx(19.3, rel=0.02)
    found = verdict.to_dict()
    assert found["strict_minimum_acceleration"]["acceleration_m_s2"] > found["minimum_acceleration"]["acceleration_m_s2"]


def test_held_for_the_dwell_is_not_held_for_ever():
    verdict = at(SYRUP, CUP, 15.6, 18.5, dwell="10 s", margin_factor=1.0)
    assert verdict.point.inside
    assert not verdict.point.strictly_inside
    assert verdict.to_dict()["operating_point"]["strictly_held"] is False
    assert at(SYRUP, CUP, 15.6, 18.5, margin_factor=1.0).answer is Answer.NOT_HELD


@pytest.mark.parametrize(
    "arguments",
    [{"dwell": 0.0}, {"dwell": -5.0}, {"dwell": "5"}, {"dwell": math.nan}, {"unevenness": 0.02}, {"unevenness": "0 mm"},
     {"amplification": 1.0}, {"amplification": math.inf}],
)  # fmt: skip
def test_allowance_refuses(arguments):
    with pytest.raises(InputError):
        allowance(depth=0.03, **arguments)


def test_allowance_scales():
    """Twice the dwell, half the growth; the same amplification whatever the dwell."""
    one, two = (allowance(depth=0.03, dwell=t) for t in (5.0, 10.0))
    assert one.growth == pytest.approx(2.0 * two.growth)
    assert allowance(depth=0.03, dwell=5.0, amplification=math.e).growth == pytest.approx(0.2)
    assert allowance(depth=0.03).growth == 0.0


# --- limits -------------------------------------------------------------------------------------------------------------


def test_pull_off_is_hydrostatics():
    """p - rho h (g + a): for 1261 kg/m^3 and 30 mm, 101325 Pa carry 273.1 g_n of weight, one of which is gravity."""
    a = pull_off_acceleration(density=1261.0, depth=0.03, vapour_pressure=0.0)
    assert (a + G) * 1261.0 * 0.03 == pytest.approx(101325.0)
    assert pull_off_acceleration(density=1261.0, depth=0.06, vapour_pressure=0.0) + G == pytest.approx(0.5 * (a + G))
    assert pull_off_acceleration(density=1000.0, depth=20.0, vapour_pressure=0.0) == 0.0  # more than 10 m of water
    ok = pull_off_limit(density=1261.0, depth=0.03, vapour_pressure=0.0, acceleration=0.99 * a)
    bad = pull_off_limit(density=1261.0, depth=0.03, vapour_pressure=2000.0, acceleration=0.99 * a)
    assert ok.ok and not bad.ok
    assert ok.value == pytest.approx(0.01 * a * 1261.0 * 0.03)


def test_pull_off_makes_a_deep_layer_not_held():
    """0.4 m of syrup at 40 g_n: rho h (g + a) = 227 kPa, beyond the atmosphere."""
    deep = ct.Cylinder(diameter="20 mm", depth="400 mm")
    verdict = at(SYRUP, deep, 60.0, 40.0)
    assert verdict.answer is Answer.NOT_HELD
    assert any("pull-off" in limit.name and not limit.ok for limit in verdict.limits)


def test_drive_limits_are_compared_in_their_own_measure():
    drive = ct.DriveLimits(
        max_stroke="5 mm", max_velocity="1 m/s", max_acceleration="50 g_n", max_force="2 kN", moving_mass="5 kg",
        frequency_range=(10.0, 100.0),
    )  # fmt: skip
    w = 2.0 * math.pi * 50.0
    limits = drive_limits(drive, frequency=50.0, acceleration=300.0, product_mass=1.0)
    found = {limit.name.split(" (")[0]: limit for limit in limits}
    assert found["stroke of the drive"].value == pytest.approx(600.0 / w**2)
    assert not found["stroke of the drive"].ok
    assert found["velocity of the drive"].value == pytest.approx(300.0 / w)
    assert found["velocity of the drive"].ok
    assert found["force of the drive"].value == pytest.approx(1800.0)
    assert found["force of the drive"].ok
    assert found["highest frequency of the drive"].ok
    assert not drive_limits(drive, frequency=101.0, acceleration=1.0, product_mass=1.0)[-1].ok


def test_a_drive_that_is_too_weak_holds_nothing():
    verdict = ct.assess(SYRUP, CUP, drive=ct.DriveLimits(max_acceleration="15 g_n"))
    assert verdict.answer is Answer.NOT_HELD
    assert "the drive" in verdict.reason
    passed = at(SYRUP, CUP, 50.0, 40.0, drive=ct.DriveLimits(max_velocity="1 m/s"))
    assert passed.answer is Answer.NOT_HELD
    assert "velocity" in passed.reason


def test_recommended_point_respects_the_drive_and_is_held():
    drive = ct.DriveLimits(max_stroke="8 mm", max_velocity="1.5 m/s", max_acceleration="45 g_n", frequency_range=(10.0, 200.0))
    window = ct.holding_window(SYRUP, CUP, drive=drive)
    best = window.recommended
    assert 2.0 * best.amplitude <= 8e-3 * (1.0 + 1e-6)
    assert best.acceleration <= 45.0 * G * (1.0 + 1e-6)
    assert best.acceleration / (2.0 * math.pi * best.frequency) <= 1.5 * (1.0 + 1e-6)
    verdict = ct.assess(SYRUP, CUP, ct.Motion(frequency=best.frequency, acceleration=best.acceleration), drive=drive)
    assert verdict.answer is not Answer.NOT_HELD


def test_amplitudes_that_are_not_searched_are_refused():
    with pytest.raises(InputError, match="60 mm"):
        ct.assess(SYRUP, CUP, ct.Motion(frequency=5.0, amplitude=0.061))


# --- proofs and scales ------------------------------------------------------------------------------------------------------


def test_a_verdict_that_is_not_proven_never_leaves_with_status_0():
    assert exit_status(Answer.HELD, proven=True) == 0
    assert exit_status(Answer.HELD, proven=False) == 3
    assert exit_status(Answer.MARGINAL) == 3
    assert exit_status(Answer.NOT_HELD, proven=False) == 1


def test_a_count_that_proves_nothing_makes_the_verdict_marginal(monkeypatch):
    import containment.judgement.operating_point as module

    honest = module.count_growing

    def doubtful(*arguments, **names):
        count = honest(*arguments, **names)
        count.proven[0] = False
        return count

    monkeypatch.setattr(module, "count_growing", doubtful)
    verdict = at(SYRUP, CUP, 50.0, 40.0)
    assert verdict.answer is Answer.MARGINAL
    assert not verdict.proven
    assert "not proven" in verdict.reason


def test_a_growing_mode_that_the_edges_miss_is_still_not_held(monkeypatch):
    """The count has the last word: with edges that know nothing, the point beyond break-up is not held."""
    import containment.judgement.operating_point as module

    def blind(case, frequency, **names):
        edges = honest(case, frequency, **names)
        edges.lower[:], edges.upper[:] = 0.0, np.inf
        return edges

    honest = module.Case.edges
    monkeypatch.setattr(module.Case, "edges", blind)
    for level in (15.0, 95.0):
        verdict = at(SYRUP, CUP, 50.0, level)
        assert verdict.answer is Answer.NOT_HELD
        assert verdict.point.growing_modes > 0


def test_similar_vessels_get_the_same_answer():
    """Lengths times c at the same gravity: accelerations stay, frequencies fall like c^(-1/2)."""
    c = 1.7
    big = ct.Liquid(density=1410.0, viscosity=10.0 * c**1.5, surface_tension=0.08 * c * c)
    cup = ct.Cylinder(diameter=0.07 * c, depth=0.03 * c)
    one, two = at(SYRUP, CUP, 50.0, 40.0).point, at(big, cup, 50.0 / math.sqrt(c), 40.0).point
    assert two.lower == pytest.approx(one.lower, rel=1e-8)
    assert two.upper == pytest.approx(one.upper, rel=1e-8)


def test_times_are_told_in_words():
    times = (0.5, 45.0, 300.0, 3.0 * 3600.0, 4.0 * 86400.0)
    assert [seconds_text(t) for t in times] == ["0.5 s", "45 s", "5 min", "3 h", "4 days"]
