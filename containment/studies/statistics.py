"""Probability of holding and which uncertainty matters most, from the answers of a study's cases."""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.errors import InputError

__all__ = ["CONFIDENCE", "HoldingProbability", "Sensitivity", "holding_probability", "sensitivity"]

Real = npt.NDArray[np.float64]

CONFIDENCE: Final = 0.95


@dataclass(frozen=True, slots=True, kw_only=True)
class HoldingProbability:
    """Share of the draws that are held, with its confidence interval.

    Attributes
    ----------
    held, draws : int
        Draws that are held, and all draws: a marginal, unproven or failed one counts as not held.
    probability, low, high : float
        Their ratio and the ends of the interval.
    confidence : float
        Of the interval.
    """

    held: int
    draws: int
    probability: float
    low: float
    high: float
    confidence: float

    def to_dict(self) -> dict[str, Any]:
        """Return the values as plain JSON types."""
        return {
            "held": self.held, "draws": self.draws, "probability": self.probability, "low": self.low, "high": self.high,
            "confidence": self.confidence,
        }  # fmt: skip


def holding_probability(held: int, draws: int, *, confidence: float = CONFIDENCE) -> HoldingProbability:
    """Return the probability of holding and its exact two-sided confidence interval.

    Parameters
    ----------
    held, draws : int
        Draws that are held without doubt, and all draws.
    confidence : float
        Between 0 and 1.

    Notes
    -----
    The interval of Clopper and Pearson holds its confidence for every probability, at the price of some width: even with
    all of n draws held it does not reach 1 from below closer than about 3.7/n at 95 %. It is exact for independent draws;
    a Latin hypercube's share of held draws scatters about as much or less (Stein 1987, for additive effects), so that
    there it is an estimate that is too wide as a rule, not a guarantee.

    References
    ----------
    Clopper, C. J. & Pearson, E. S. (1934), Biometrika 26, 404-413; Stein, M. (1987), Technometrics 29, 143-151 (both from
    memory).

    Examples
    --------
    >>> estimate = holding_probability(100, 100)
    >>> estimate.probability, round(estimate.low, 4), estimate.high
    (1.0, 0.9638, 1.0)
    """
    if not 0 <= held <= draws or draws < 1:
        raise InputError(f"draws: {held} held of {draws} is not a share; expected 0 <= held <= draws, at least 1 draw")
    if not 0.0 < confidence < 1.0:
        raise InputError(f"confidence: {confidence:g} is not allowed; it must lie between 0 and 1")
    from scipy.special import betaincinv

    tail = 0.5 * (1.0 - confidence)
    low = 0.0 if held == 0 else float(betaincinv(held, draws - held + 1, tail))
    high = 1.0 if held == draws else float(betaincinv(held + 1, draws - held, 1.0 - tail))
    return HoldingProbability(
        held=held, draws=draws, probability=held / draws, low=low, high=high, confidence=confidence
    )


@dataclass(frozen=True, slots=True, kw_only=True)
class Sensitivity:
    """Sobol' indices of one response.

    Attributes
    ----------
    response : str
        "held" (1 or 0) or "log margin".
    inputs : tuple of str
        The uncertain inputs.
    first_order, total_order : tuple of float
        Share of the variance that an input explains by itself, and with all its interactions; None where the response
        does not vary or is not known for every draw.
    first_low, first_high, total_low, total_high : tuple of float
        Ends of bootstrapped confidence intervals.
    """

    response: str
    inputs: tuple[str, ...]
    first_order: tuple[float, ...]
    total_order: tuple[float, ...]
    first_low: tuple[float, ...]
    first_high: tuple[float, ...]
    total_low: tuple[float, ...]
    total_high: tuple[float, ...]

    def ranked(self) -> list[tuple[str, float, float]]:
        """Return inputs with their first and total order indices, the one that matters most first."""
        rows = zip(self.inputs, self.first_order, self.total_order, strict=True)
        return sorted(rows, key=lambda row: -row[2])

    def to_dict(self) -> dict[str, Any]:
        """Return the indices as plain JSON types."""
        return {
            "response": self.response,
            "indices": {
                name: {
                    "first_order": self.first_order[j], "first_interval": [self.first_low[j], self.first_high[j]],
                    "total_order": self.total_order[j], "total_interval": [self.total_low[j], self.total_high[j]],
                }
                for j, name in enumerate(self.inputs)
            },
        }  # fmt: skip


def sensitivity(
    response: str, values: Real, inputs: Sequence[str], *, seed: int = 1, confidence: float = CONFIDENCE
) -> Sensitivity | None:
    """Return the Sobol' indices of a response over the draws of a ``sensitivity`` plan.

    Parameters
    ----------
    response : str
        Its name.
    values : array, shape (n (d + 2),)
        Of the rows of A, those of B, and of A with one column after the other taken from B.
    inputs : sequence of str
        The d inputs.
    seed : int
        Of the bootstrap.
    confidence : float
        Of the bootstrapped intervals.

    Returns
    -------
    Sensitivity or None
        None where a value is not finite, or where all are the same: then nothing matters, or nothing is known.

    References
    ----------
    Sobol', I. M. (1993), Math. Modelling Comput. Exp. 1, 407-414; Saltelli, A. et al. (2010), Comput. Phys. Commun. 181,
    259-270, as computed by `scipy.stats.sobol_indices`.
    """
    d = len(inputs)
    if not np.all(np.isfinite(values)) or math.isclose(float(np.ptp(values)), 0.0, abs_tol=0.0):
        return None
    from scipy.stats import sobol_indices

    rows = np.asarray(values, np.float64).reshape(d + 2, -1)
    found = sobol_indices(
        func={"f_A": rows[None, 0], "f_B": rows[None, 1], "f_AB": rows[2:, None, :]}, n=rows.shape[1]
    )
    spread = _bootstrapped(rows, seed=seed, confidence=confidence)
    return Sensitivity(
        response=response, inputs=tuple(inputs), first_order=_floats(found.first_order), total_order=_floats(found.total_order),
        first_low=_floats(spread[0]), first_high=_floats(spread[1]), total_low=_floats(spread[2]),
        total_high=_floats(spread[3]),
    )  # fmt: skip


def _floats(values: Any) -> tuple[float, ...]:
    return tuple(float(value) for value in np.ravel(values))


def _bootstrapped(rows: Real, *, seed: int, confidence: float, times: int = 999) -> tuple[Real, Real, Real, Real]:
    """Return percentile intervals of both indices, rows drawn anew with replacement."""
    rng = np.random.default_rng(seed)
    n = rows.shape[1]
    first, total = np.empty((times, len(rows) - 2)), np.empty((times, len(rows) - 2))
    for t in range(times):
        some = rows[:, rng.integers(n, size=n)]
        a, b, mixed = some[0], some[1], some[2:]
        variance = np.var(some[:2])
        if variance == 0.0:
            first[t], total[t] = 0.0, 0.0
            continue
        first[t] = np.mean((b - np.mean(some[:2])) * (mixed - a), axis=1) / variance
        total[t] = 0.5 * np.mean((a - mixed) ** 2, axis=1) / variance
    ends = [50.0 * (1.0 - confidence), 50.0 * (1.0 + confidence)]
    low_high = [np.percentile(index, ends, axis=0) for index in (first, total)]
    return low_high[0][0], low_high[0][1], low_high[1][0], low_high[1][1]
