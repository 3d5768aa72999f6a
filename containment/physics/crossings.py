"""First sign changes of many functions at once, marched so that a close pair of roots is not stepped over.

Each function is smooth in log a. Between two nodes of equal sign a pair of roots can hide only in a dip of the
magnitude; wherever three nodes show one, its bottom is sought until the sign changes or the bottom has been found.
The step follows the number of harmonics at work, sqrt(a k)/w, which sets how fast the determinants turn.
"""

from collections.abc import Callable
from typing import Final, Protocol

import numpy as np
import numpy.typing as npt

__all__ = ["Cases", "first_crossing", "refined"]

Real = npt.NDArray[np.float64]
Chosen = npt.NDArray[np.intp]

_GOLDEN: Final = 0.3819660112501051
_FIRST_STEP: Final = 0.0025


class Cases(Protocol):
    """Many functions of the acceleration that can be evaluated for a chosen part of them."""

    def margin(self, acceleration: Real) -> Real:
        """Return the function values, one acceleration a case."""
        ...

    def take(self, chosen: Chosen) -> "Cases":
        """Return the chosen cases."""
        ...


def first_crossing(
    cases: Cases,
    start: Real,
    stop: Real,
    *,
    turns: Real,
    step: float = 0.16,
    precision: float = 1e-12,
    from_root: bool = False,
) -> Real:
    """Return the first root of each case in (start, stop], or infinity where there is none.

    Parameters
    ----------
    cases : Cases
        The functions.
    start, stop : array, shape (cases,)
        Range of acceleration, m/s^2. No case may have a root in the last step before `start`.
    turns : array, shape (cases,)
        sqrt(k)/w for each case: sqrt(a) times it is the number of harmonics at work.
    step : float
        Step in log a where one harmonic or fewer is at work.
    precision : float
        Relative width of the final brackets.
    from_root : bool
        Whether `start` lies just above a root: the first steps are then small, so that a pair close to it is seen.

    Returns
    -------
    array, shape (cases,)
        Root, m/s^2.
    """
    count = len(start)
    result = np.full(count, np.inf)
    index = np.flatnonzero(start < stop)
    low: list[Real] = []
    high: list[Real] = []
    active = cases.take(index)
    a1 = start[index]
    a0 = a1 * np.exp(-step)
    v0, v1 = active.margin(a0), active.margin(a1)
    found: list[Chosen] = []
    ramp = _FIRST_STEP if from_root else step
    while len(index):
        a2 = a1 * np.exp(min(ramp, step) / np.maximum(1.0, np.sqrt(a1) * turns[index]))
        ramp *= 2.0
        last = a1 >= stop[index]  # one step beyond the end, so that a pair in the last step is seen as well
        v2 = active.margin(a2)
        crossed = (v1 > 0.0) != (v2 > 0.0)
        if crossed.any():
            found.append(index[crossed])
            low.append(a1[crossed])
            high.append(a2[crossed])
        dip = ~crossed & (np.abs(v1) <= np.abs(v0)) & (np.abs(v1) <= np.abs(v2)) & ((v0 > 0.0) == (v1 > 0.0))
        done = crossed | last
        if dip.any():
            chosen = np.flatnonzero(dip)
            bottom = _bottom(
                active.take(chosen), a0[chosen], a1[chosen], a2[chosen], v1[chosen], np.maximum(np.abs(v0), np.abs(v2))[chosen]
            )
            hit = np.isfinite(bottom)
            if hit.any():
                found.append(index[chosen[hit]])
                low.append(a0[chosen[hit]])
                high.append(bottom[hit])
                done[chosen[hit]] = True
        if done.any():
            keep = np.flatnonzero(~done)
            index, active = index[keep], active.take(keep)
            a0, v0, a1, v1 = a1[keep], v1[keep], a2[keep], v2[keep]
        else:
            a0, v0, a1, v1 = a1, v1, a2, v2
    if found:
        where = np.concatenate(found)
        chosen_cases = cases.take(where)
        result[where] = refined(
            chosen_cases.margin, np.concatenate(low), np.concatenate(high), precision=precision, take=chosen_cases.take
        )
    return np.where(result <= stop, result, np.inf)


def _bottom(cases: Cases, a0: Real, a1: Real, a2: Real, v1: Real, outer: Real) -> Real:
    """Return a point of the other sign inside each dip, or infinity: golden sections on the magnitude in log a."""
    left, mid, right = np.log(a0), np.log(a1), np.log(a2)
    sign = np.sign(v1)
    best = np.abs(v1)
    width = right - left
    result = np.full(len(a0), np.inf)
    for _ in range(40):
        wider_right = (right - mid) > (mid - left)
        probe = np.where(wider_right, mid + _GOLDEN * (right - mid), mid - _GOLDEN * (mid - left))
        value = cases.margin(np.exp(probe)) * sign
        result = np.where((value <= 0.0) & np.isinf(result), np.exp(probe), result)
        lower = value < best
        left = np.where(lower, np.where(wider_right, mid, left), np.where(wider_right, left, probe))
        right = np.where(lower, np.where(wider_right, right, mid), np.where(wider_right, probe, right))
        best = np.where(lower, value, best)
        mid = np.where(lower, probe, mid)
        # settled where it is crossed, or where a parabola with a root inside the bracket would lie far below the best value
        narrow = 100.0 * outer * ((right - left) / width) ** 2 < best
        if np.all(np.isfinite(result) | narrow):
            break
    return result


def refined(
    function: Callable[[Real], Real],
    low: Real,
    high: Real,
    *,
    precision: float = 1e-12,
    take: Callable[[Chosen], Cases] | None = None,
) -> Real:
    """Return the root inside each bracket by Chandrupatla's method in log a.

    References
    ----------
    Chandrupatla, T. R. (1997), Advances in Engineering Software 28, 145-149.
    """
    index = np.arange(len(low))
    result = np.empty(len(low))
    x1, x2 = np.log(high), np.log(low)
    f1, f2 = function(high), function(low)
    t = np.full(len(low), 0.5)
    for _ in range(80):
        x = x1 + t * (x2 - x1)
        f = function(np.exp(x))
        same = (f > 0.0) == (f1 > 0.0)
        x3, f3 = np.where(same, x1, x2), np.where(same, f1, f2)
        x2, f2 = np.where(same, x2, x1), np.where(same, f2, f1)
        x1, f1 = x, f
        nearer = np.abs(f2) < np.abs(f1)
        best = np.where(nearer, x2, x1)
        width = np.abs(x2 - x1)
        done = (width <= precision) | (f1 == 0.0)
        result[index] = np.exp(best)
        if done.all():
            break
        with np.errstate(divide="ignore", invalid="ignore"):
            xi, phi = (x1 - x2) / (x3 - x2), (f1 - f2) / (f3 - f2)
            inverse = (phi * phi < xi) & ((1.0 - phi) ** 2 < 1.0 - xi)
            quadratic = f1 / (f2 - f1) * f3 / (f2 - f3) + (x3 - x1) / (x2 - x1) * f1 / (f3 - f1) * f2 / (f3 - f2)
        t = np.where(inverse & np.isfinite(quadratic), quadratic, 0.5)
        edge = 0.5 * precision / np.maximum(width, precision)
        t = np.clip(t, edge, 1.0 - edge)
        if take is not None and 2 * np.count_nonzero(done) > len(done):
            keep = np.flatnonzero(~done)
            index = index[keep]
            function = take(index).margin
            x1, x2, f1, f2, t = x1[keep], x2[keep], f1[keep], f2[keep], t[keep]
    return result
