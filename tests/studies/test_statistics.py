"""Probability of holding and sensitivity against published values and reference libraries."""

import numpy as np
import pytest
from scipy import stats

import containment as ct
from containment.errors import InputError
from containment.studies.statistics import holding_probability, sensitivity
from tests.studies.plans import DRAWN


@pytest.mark.parametrize(("held", "draws"), [(0, 10), (1, 10), (5, 10), (10, 10), (97, 100), (3, 4000)])
@pytest.mark.parametrize("confidence", [0.9, 0.95, 0.99])
def test_interval_against_the_exact_binomial_test(held, draws, confidence):
    ours = holding_probability(held, draws, confidence=confidence)
    theirs = stats.binomtest(held, draws).proportion_ci(confidence, method="exact")
    assert (ours.low, ours.high) == pytest.approx((theirs.low, theirs.high), abs=1e-12)


def test_all_held_has_the_closed_form_of_the_interval():
    """Clopper & Pearson: with all n held, the lower end is (alpha/2)^(1/n)."""
    assert holding_probability(50, 50).low == pytest.approx(0.025 ** (1 / 50))
    assert holding_probability(50, 50).high == 1.0
    assert holding_probability(0, 50).high == pytest.approx(1.0 - 0.025 ** (1 / 50))


def test_the_interval_covers_the_truth_at_least_as_often_as_it_says():
    rng = np.random.default_rng(1)
    for truth in (0.02, 0.5, 0.99):
        counts = rng.binomial(60, truth, 2000)
        inside = sum(e.low <= truth <= e.high for e in (holding_probability(int(k), 60) for k in counts))
        assert inside / 2000 >= 0.95 - 3 * (0.95 * 0.05 / 2000) ** 0.5


def test_refused_counts():
    for held, draws in ((-1, 10), (11, 10), (0, 0)):
        with pytest.raises(InputError):
            holding_probability(held, draws)
    with pytest.raises(InputError):
        holding_probability(1, 2, confidence=1.0)


def ishigami(x, a=7.0, b=0.1):
    return np.sin(x[:, 0]) + a * np.sin(x[:, 1]) ** 2 + b * x[:, 2] ** 4 * np.sin(x[:, 0])


def test_indices_of_the_function_of_ishigami_and_homma():
    """Ishigami & Homma (1990), a = 7, b = 0.1. Their variances in closed form, worked out here from the integrals:
    V1 = (1 + b pi^4/5)^2 / 2, V2 = a^2/8, V13 = 8 b^2 pi^8 / 225."""
    n, d = 4096, 3
    both = -np.pi + 2 * np.pi * stats.qmc.Sobol(2 * d, seed=1).random(n)
    a, b = both[:, :d], both[:, d:]
    rows = np.concatenate([a, b, *(np.where(np.arange(d) == j, b, a) for j in range(d))])
    found = sensitivity("x", ishigami(rows), ["x1", "x2", "x3"])
    v1, v2, v13 = 0.5 * (1 + 0.1 * np.pi**4 / 5) ** 2, 49.0 / 8.0, 8 * 0.01 * np.pi**8 / 225
    total = v1 + v2 + v13
    assert found.first_order == pytest.approx((v1 / total, v2 / total, 0.0), abs=0.02)
    assert found.total_order == pytest.approx(((v1 + v13) / total, v2 / total, v13 / total), abs=0.02)
    assert [name for name, *_ in found.ranked()] == ["x1", "x2", "x3"]
    for j in range(3):
        assert found.first_low[j] <= found.first_order[j] <= found.first_high[j]
        assert found.total_low[j] <= found.total_order[j] <= found.total_high[j]


def test_nothing_is_said_of_what_does_not_vary_or_is_not_known():
    assert sensitivity("x", np.ones(12), ["a"]) is None
    assert sensitivity("x", np.array([1.0, np.nan] * 6), ["a"]) is None


def test_probability_of_holding_at_each_point_of_the_grid():
    result = ct.study(DRAWN)
    weak, strong = result.holding_probabilities()
    held = result.grid("verdict") == "held"
    assert (weak.held, strong.held) == tuple(held.sum(axis=1))
    assert weak.draws == strong.draws == 300
    assert weak.probability < strong.probability
    assert result.points() == [{"acceleration_m_s2": 28 * 9.80665}, {"acceleration_m_s2": 32 * 9.80665}]


def test_the_probability_is_that_of_the_viscosity_lying_where_it_is_held():
    """Independent of the draws: the viscosities between which the point is held, found by bisection, and their share."""
    result = ct.study(DRAWN)
    viscosity = np.array([r["viscosity_Pa_s"] for r in result.records]).reshape(2, 300)[1]
    held = (result.grid("verdict") == "held")[1]
    law = stats.lognorm(np.log(1.3), scale=10.0)
    ends = []
    for inside in (viscosity[held].min(), viscosity[held].max()):
        low = inside == viscosity[held].min()
        outside = viscosity[(viscosity < inside) if low else (viscosity > inside)]
        if not len(outside):
            ends.append(0.0 if low else np.inf)
            continue
        out = outside.max() if low else outside.min()
        for _ in range(12):
            middle = 0.5 * (inside + out)
            verdict = ct.assess(
                ct.Liquid(density=1410.0, viscosity=middle, surface_tension=0.08), ct.Cylinder(diameter=0.07, depth=0.03),
                ct.Motion(frequency=50.0, acceleration="32 g_n"),
            )  # fmt: skip
            inside, out = (middle, out) if verdict.held else (inside, middle)
        ends.append(inside)
    truth = law.cdf(ends[1]) - law.cdf(ends[0])
    chance = result.holding_probabilities()[1]
    assert chance.low < truth < chance.high
    assert chance.probability == pytest.approx(truth, abs=2 / 300)  # a Latin hypercube of one input: a stratum at each end


def test_what_is_not_surely_held_does_not_count(monkeypatch):
    from containment.studies import points

    proven = {**DRAWN, "study": {"proof": True}, "sample": {"count": 20}, "vary": {"acceleration": ["40 g_n"]}}
    assert ct.study(proven).holding_probabilities()[0].held > 10
    monkeypatch.setattr(points, "growing_modes", lambda case, **at: (0, False))
    unproven = ct.study(proven)
    assert unproven.holding_probabilities()[0].held == 0 and unproven.counts["held"] == 0
    monkeypatch.undo()
    hot = {
        "study": {"proof": False}, "fixed": {"name": "glycerol", "cylinder": 0.07, "depth": 0.03, "frequency": 60.0,
                                             "acceleration": 500.0},
        "uncertain": {"temperature": {"distribution": "uniform", "low": 150.0, "high": 293.0}}, "sample": {"count": 10},
    }  # fmt: skip
    failed = ct.study(hot)
    assert failed.counts["error"] >= 9
    assert failed.holding_probabilities()[0].held <= 1 and failed.holding_probabilities()[0].draws == 10


def test_the_viscosity_matters_most_where_the_hold_is_viscous():
    plan = {
        "study": {"proof": False},
        "fixed": {"name": "custom", "density": 1410.0, "cylinder": 0.07, "depth": 0.03, "frequency": 50.0,
                  "acceleration": 300.0},
        "uncertain": {
            "viscosity": {"distribution": "lognormal", "median": 10.0, "factor": 1.3},
            "surface_tension": {"distribution": "normal", "mean": 0.08, "sd": 0.002},
        },
        "sample": {"method": "sensitivity", "count": 128},
    }  # fmt: skip
    result = ct.study(plan)
    held, margin = result.sensitivities()[0]
    assert margin.ranked()[0][0] == "viscosity" and margin.ranked()[0][2] > 0.8
    assert held.ranked()[0][0] == "viscosity"
    assert result.holding_probabilities()[0].draws == 256  # both matrices, not their mixtures
