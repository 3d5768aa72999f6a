"""The cases of a plan: which inputs case number i has."""

import functools
from dataclasses import dataclass
from typing import Any

import numpy as np
import numpy.typing as npt

from containment.studies.plan import Plan

__all__ = ["Cases", "cases_of", "draws_of"]

Real = npt.NDArray[np.float64]

_NEAREST_TO_THE_END = 2.0**-54
"""Probabilities are kept this far from 0 and 1, where quantiles of unbounded distributions are infinite."""


@dataclass(frozen=True, slots=True)
class Cases:
    """Some consecutive cases of a plan.

    Attributes
    ----------
    start, stop : int
        Numbers of the first case and of the one after the last.
    fixed : dict
        Inputs that all of them share.
    columns : dict
        Inputs that vary, one value a case: arrays of float, or lists of words.
    """

    start: int
    stop: int
    fixed: dict[str, Any]
    columns: dict[str, Any]

    def __len__(self) -> int:
        """Return the number of cases."""
        return self.stop - self.start

    def inputs(self, i: int) -> dict[str, Any]:
        """Return all inputs of the i-th of these cases."""
        return {**self.fixed, **{name: _python(column[i]) for name, column in self.columns.items()}}


def cases_of(plan: Plan, start: int, stop: int) -> Cases:
    """Return the cases of a plan from number `start` up to, not including, `stop`.

    Examples
    --------
    >>> from containment.studies.plan_reading import plan_from
    >>> plan = plan_from({
    ...     "fixed": {"name": "water", "cylinder": 0.07, "depth": 0.03},
    ...     "vary": {"acceleration": [100.0, 200.0], "frequency": [40.0, 50.0, 60.0]},
    ... })
    >>> cases = cases_of(plan, 1, 4)  # the size of the motion is the inner loop
    >>> cases.columns["frequency"].tolist(), cases.columns["acceleration"].tolist()
    ([40.0, 50.0, 50.0], [200.0, 100.0, 200.0])
    """
    columns: dict[str, Any] = {}
    points, draw = np.divmod(np.arange(start, stop), plan.draws)
    for axis in reversed(plan.axes):
        points, step = np.divmod(points, len(axis))
        for name, values in axis.values.items():
            if isinstance(values[0], float):
                columns[name] = np.asarray(values)[step]
            else:
                columns[name] = [values[j] for j in step]
    if plan.uncertain:
        drawn = draws_of(plan)
        for j, name in enumerate(plan.uncertain):
            columns[name] = drawn[draw, j]
    return Cases(start, stop, dict(plan.fixed), {name: columns[name] for name in plan.varying})


def draws_of(plan: Plan) -> Real:
    """Return the draws of the uncertain inputs, SI, shape (draws, inputs).

    Notes
    -----
    ``random``: independent. ``latin hypercube``: one draw in each of `count` equally likely strata of every input.
    ``sobol``: a scrambled Sobol' sequence. ``sensitivity``: the rows of matrix A, those of B, and then for each input
    those of A with that input's column taken from B; A and B are the halves of the columns of one scrambled sequence.

    References
    ----------
    McKay, M. D., Beckman, R. J. & Conover, W. J. (1979), Technometrics 21, 239-245; Sobol', I. M. (1967), USSR Comput.
    Math. Math. Phys. 7, 86-112; Saltelli, A. et al. (2010), Comput. Phys. Commun. 181, 259-270 (from memory).
    """
    return _drawn(plan.fingerprint, _Held(plan))


class _Held:
    """A plan that counts as equal to any other: the fingerprint beside it tells plans apart."""

    def __init__(self, plan: Plan) -> None:
        self.plan = plan

    def __eq__(self, other: object) -> bool:
        return isinstance(other, _Held)

    def __hash__(self) -> int:
        return 0


@functools.lru_cache(maxsize=2)
def _drawn(fingerprint: str, held: _Held) -> Real:
    from scipy.stats import qmc

    plan = held.plan
    n, d = plan.count, len(plan.uncertain)
    if plan.method == "random":
        unit = np.random.default_rng(plan.seed).random((n, d))
    elif plan.method == "latin hypercube":
        unit = qmc.LatinHypercube(d, seed=plan.seed).random(n)
    elif plan.method == "sobol":
        unit = qmc.Sobol(d, seed=plan.seed).random_base2(n.bit_length() - 1)
    else:
        both = qmc.Sobol(2 * d, seed=plan.seed).random_base2(n.bit_length() - 1)
        a, b = both[:, :d], both[:, d:]
        mixed = [np.where(np.arange(d) == j, b, a) for j in range(d)]
        unit = np.concatenate([a, b, *mixed])
    unit = np.clip(unit, _NEAREST_TO_THE_END, 1.0 - _NEAREST_TO_THE_END)
    drawn = np.stack([found.quantile(unit[:, j]) for j, found in enumerate(plan.uncertain.values())], axis=1)
    drawn.setflags(write=False)
    return drawn


def _python(value: Any) -> Any:
    return float(value) if isinstance(value, np.floating) else value
