"""The edges of a pinned layer's window, and the march to the last lower root."""

import math
from dataclasses import dataclass
from typing import Final, Protocol

import numpy as np
import numpy.typing as npt

from containment.physics.crossings import Cases, refined

__all__ = ["CountedCases", "PinnedEdges", "bisected", "edge_error", "last_above", "last_lower_root"]

Real = npt.NDArray[np.float64]
Whole = npt.NDArray[np.int64]

_LOWER_STEP: Final = 0.3
"""Step in log a of the march to the last lower root: the count of shapes that still fall can't be stepped over."""


class CountedCases(Cases, Protocol):
    """Functions of the acceleration that also count the shapes which fall."""

    def __len__(self) -> int:
        """Return the number of cases."""
        ...

    def count(self, acceleration: Real) -> npt.NDArray[np.intp]:
        """Return the number of shapes that fall."""
        ...

    def take(self, chosen: npt.NDArray[np.intp]) -> "CountedCases":
        """Return the chosen cases."""
        ...


@dataclass(frozen=True, slots=True)
class PinnedEdges:
    """Holding window of a pinned layer.

    Attributes
    ----------
    frequencies : array, shape (F,)
        Hz.
    lower, upper : array, shape (F,)
        Peak acceleration, m/s^2: held for lower < a < upper. `lower` is 0 where nothing needs holding and infinite
        where no amplitude up to the bound holds; `upper` is infinite where nothing breaks up below the bound.
    lower_error, upper_error : array, shape (F,)
        Estimated bound of the numerical error, m/s^2: four times the change on refining the sums (half as many modes
        again, more nodes, more harmonics). An estimate, not a proof.
    lower_order, upper_order : array of int, shape (F,)
        Circumferential order that sets the edge; -1 where there is none.
    upper_subharmonic : array of bool, shape (F,)
        Whether the wave at the upper edge answers at half the drive frequency.
    """

    frequencies: Real
    lower: Real
    upper: Real
    lower_error: Real
    upper_error: Real
    lower_order: Whole
    upper_order: Whole
    upper_subharmonic: npt.NDArray[np.bool_]


def last_above(half: CountedCases, start: Real, stop: Real, left: int) -> tuple[Real, Real]:
    """Return brackets of the acceleration above which at most `left` shapes fall; infinite beyond `stop`."""
    low, high = np.zeros(len(start)), np.full(len(start), np.inf)
    many = half.count(start) > left
    high[~many] = 0.0
    index = np.flatnonzero(many)
    at = start[index]
    low[index] = at
    while len(index):
        after = np.minimum(at * math.exp(_LOWER_STEP), stop[index])
        passed = half.take(index).count(after) <= left
        low[index] = np.where(passed | (after < stop[index]), at, stop[index])
        high[index[passed]] = after[passed]
        keep = ~passed & (after < stop[index])
        index, at = index[keep], after[keep]
    return low, high


def bisected(half: CountedCases, low: Real, high: Real, left: int) -> Real:
    """Return the point in each bracket from which on at most `left` falling shapes are left, to 1e-10."""
    low, high = low.copy(), high.copy()
    for _ in range(50):
        mid = np.sqrt(low * high)
        still = half.count(mid) > left
        low, high = np.where(still, mid, low), np.where(still, high, mid)
        if np.all(high <= low * (1.0 + 1e-10)):
            break
    return np.sqrt(low * high)


def last_lower_root(half: CountedCases, start: Real, stop: Real) -> Real:
    """Return the acceleration above which no shape falls, infinite beyond `stop`."""
    low, high = last_above(half, start, stop, 0)
    finite = np.flatnonzero(np.isfinite(high))
    result = np.full(len(low), np.inf)
    if len(finite):
        part = half.take(finite)
        result[finite] = refined(part.margin, low[finite], high[finite], precision=1e-9, take=part.take)
    return result


def edge_error(coarse: Real, fine: Real) -> Real:
    """Return the estimated error of edges from a run with finer sums; infinite where that run lost the root."""
    with np.errstate(invalid="ignore"):
        change = np.where(np.isfinite(coarse), 4.0 * np.abs(fine - coarse) + 1e-9 * coarse, 0.0)
    return np.where(np.isnan(fine), np.inf, change)
