"""Distributions and draws against scipy.stats, which this package does not use for them."""

import copy

import numpy as np
import pytest
from scipy import stats

from containment.studies.distributions import distribution
from containment.studies.plan_reading import plan_from
from containment.studies.sampling import cases_of, draws_of
from tests.studies.plans import DRAWN

P = np.array([1e-9, 1e-3, 0.1, 0.5, 0.7, 0.999, 1 - 1e-9])


def made(name="viscosity", **given):
    return distribution(name, given, bare_numbers=True)


@pytest.mark.parametrize(
    ("ours", "theirs"),
    [
        (made(distribution="normal", mean=10.0, sd=0.5), stats.norm(10.0, 0.5)),
        (made(distribution="normal", mean=10.0, sd=4.0, low=1.0, high=12.0), stats.truncnorm(-2.25, 0.5, 10.0, 4.0)),
        (made(distribution="lognormal", median=10.0, factor=1.3), stats.lognorm(np.log(1.3), scale=10.0)),
        (made(distribution="uniform", low=2.0, high=5.0), stats.uniform(2.0, 3.0)),
        (made(distribution="triangular", low=2.0, mode=3.0, high=6.0), stats.triang(0.25, 2.0, 4.0)),
        (made(distribution="triangular", low=2.0, mode=2.0, high=6.0), stats.triang(0.0, 2.0, 4.0)),
    ],
)
def test_quantiles(ours, theirs):
    assert ours.quantile(P) == pytest.approx(theirs.ppf(P), rel=1e-9)


def test_a_truncated_lognormal_is_a_truncated_normal_of_the_logarithm():
    ours = made(distribution="lognormal", median=10.0, factor=2.0, low=5.0, high=40.0)
    theirs = stats.truncnorm(-1.0, 2.0, np.log(10.0), np.log(2.0))
    assert np.log(ours.quantile(P)) == pytest.approx(theirs.ppf(P), rel=1e-9)
    assert ours.quantile(0.0) == pytest.approx(5.0) and ours.quantile(1.0) == pytest.approx(40.0)


def test_a_difference_of_temperatures_is_not_shifted():
    drawn = distribution("temperature", {"distribution": "normal", "mean": "25 degC", "sd": "2 K"}, bare_numbers=False)
    assert drawn.quantile(0.8413447460685429) == pytest.approx(298.15 + 2.0)


def with_sample(**sample):
    given = copy.deepcopy(DRAWN)
    given["uncertain"]["depth"] = {"distribution": "uniform", "low": "28 mm", "high": "32 mm"}
    given["fixed"].pop("depth")
    given["sample"] = {"seed": 3, **sample}
    return plan_from(given)


def test_a_latin_hypercube_has_one_draw_in_each_stratum():
    drawn = draws_of(with_sample(method="latin hypercube", count=50))
    strata = np.floor((drawn[:, 1] - 0.028) / 0.004 * 50).astype(int)
    assert sorted(strata) == list(range(50))


def test_sobol_draws_are_those_of_scipy():
    drawn = draws_of(with_sample(method="sobol", count=64))
    unit = stats.qmc.Sobol(2, seed=3).random(64)
    assert drawn[:, 1] == pytest.approx(0.028 + 0.004 * unit[:, 1])
    assert drawn[:, 0] == pytest.approx(stats.lognorm(np.log(1.3), scale=10.0).ppf(unit[:, 0]))


def test_draws_for_sensitivity_are_two_matrices_and_their_mixtures():
    plan = with_sample(method="sensitivity", count=16)
    drawn = draws_of(plan)
    assert len(drawn) == plan.draws == 16 * 4
    a, b, first, second = drawn.reshape(4, 16, 2)
    assert np.array_equal(first, np.stack([b[:, 0], a[:, 1]], axis=1))
    assert np.array_equal(second, np.stack([a[:, 0], b[:, 1]], axis=1))
    assert not np.any(a == b)


@pytest.mark.parametrize("method", ["random", "latin hypercube", "sobol"])
def test_the_seed_decides_and_every_grid_point_has_the_same_draws(method):
    plan = with_sample(method=method, count=32)
    assert np.array_equal(draws_of(plan), draws_of(with_sample(method=method, count=32)))
    assert not np.array_equal(draws_of(plan), draws_of(with_sample(method=method, count=32, seed=4)))
    both = cases_of(plan, 0, plan.cases).columns["viscosity"].reshape(2, 32)
    assert np.array_equal(both[0], both[1])
    part = cases_of(plan, 20, 40).columns["viscosity"]
    assert np.array_equal(part, both.ravel()[20:40])
