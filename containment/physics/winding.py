r"""Winding of a determinant along the path that separates growing exponents from decaying ones.

Along s = growth + i y, y from 0 to w/2, the determinant of a periodically driven layer, divided by that of a layer which
is stable at rest, turns by -pi for every exponent to the right of the path (argument principle on a strip of width w,
and the symmetry between s and its conjugate).

What is followed along the path is the determinant over that of a strongly damped layer, which has no zero near the path
that could hide one of the determinant. The path is halved until on each piece the turn is small and the slope of the
logarithm at both ends, times the length, is too: a zero close to the path, and also a close pair of them, makes the
slope large at a distance, and so cannot hide between two nodes.
"""

from collections.abc import Callable
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.errors import NotComputableError

__all__ = ["INTEGER_TOLERANCE", "damping_for", "exponents_beyond", "largest_rate"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

INTEGER_TOLERANCE: Final = 0.05
"""A count further from an integer than this proves nothing."""

_LARGEST_TURN: Final = 1.0
"""Largest turn of the determinant over a piece, rad."""
_LARGEST_SLOPE: Final = 1.2
"""Largest slope of the logarithm times length of a piece, at either end."""
_SHORT: Final = 1e-3
"""Step for the slope over the length of the piece."""
_FIRST_PIECES: Final = 6
_SHORTEST: Final = 1e-11
"""Shortest piece over w: an exponent closer to the path than this is neither to its right nor to its left."""
_MOST_NODES: Final = 20_000


def damping_for(static: Real, wavenumber: Real, w: float) -> Real:
    """Return d, m/s, such that a layer with the coefficients A(s) + d s has no zero near the path.

    `static` is A(0) of a layer that is stable at rest. Deep and inviscid, A = 2 s^2/k + A(0), and d damps it critically.
    """
    natural = np.sqrt(np.maximum(0.5 * static * wavenumber, 0.0))
    result: Real = 4.0 * np.maximum(natural, 0.5 * w) / wavenumber
    return result


def exponents_beyond(track: Callable[[Real], tuple[Complex, Real]], w: float) -> tuple[int, float]:
    """Count the exponents to the right of a path.

    Parameters
    ----------
    track : callable
        At y of shape (nodes,), 1/s: the logarithm of the determinant over that of a strongly damped layer (imaginary
        part up to multiples of 2 pi), and the argument of the latter less that of a layer that is merely stable at
        rest, continuous in y.
    w : float
        Angular frequency of the drive, rad/s.

    Returns
    -------
    count : int
    distance : float
        Distance of the winding number from the integer; 0.5 where the path could not be resolved.

    Examples
    --------
    Two exponents at 1 +- 0.2 i against two at -1, w = 1000 (not quite periodic, so not quite an integer):

    >>> def track(y):
    ...     return np.log(((1j * y - 1.0) ** 2 + 0.04) / (1j * y + 1.0) ** 2), np.zeros_like(y)
    >>> exponents_beyond(track, 1e3)[0]
    2
    """
    y = np.linspace(0.0, 0.5 * w, _FIRST_PIECES + 1)
    left, right = y[:-1], y[1:]
    _, comparison = track(np.array([0.0, 0.5 * w]))
    turned = float(comparison[1] - comparison[0])
    nodes = 0
    while len(left):
        nodes += len(left)
        length = right - left
        if nodes > _MOST_NODES or float(np.min(length)) < _SHORTEST * w:
            return 0, 0.5
        short = _SHORT * length
        value = track(np.concatenate([left, left + short, right - short, right]))[0].reshape(4, -1)
        turn = _folded(value[3].imag - value[0].imag)
        slopes = [
            np.hypot(b.real - a.real, _folded(b.imag - a.imag)) / _SHORT
            for a, b in ((value[0], value[1]), (value[2], value[3]))
        ]
        good = (np.abs(turn) <= _LARGEST_TURN) & (np.maximum(slopes[0], slopes[1]) <= _LARGEST_SLOPE)
        turned += float(np.sum(turn[good]))
        middle = 0.5 * (left + right)[~good]
        left, right = np.concatenate([left[~good], middle]), np.concatenate([middle, right[~good]])
    winding = -turned / np.pi
    count = round(winding)
    return count, abs(winding - count)


def _folded(angle: Real) -> Real:
    result: Real = np.mod(angle + np.pi, 2.0 * np.pi) - np.pi
    return result


def largest_rate(count: Callable[[float], tuple[int, float]], w: float, *, precision: float) -> float:
    """Return the growth rate beyond which no exponent lies, 1/s, by bisection on a count; 0 where none grows.

    Raises
    ------
    NotComputableError
        A count is not an integer: an exponent lies on the path, or the truncation is too coarse.
    """

    def grows(rate: float) -> bool:
        number, distance = count(rate)
        if distance > INTEGER_TOLERANCE:
            raise NotComputableError(f"growth rate: the count of exponents beyond {rate:.6g} 1/s is off by {distance:.2g}")
        return number > 0

    if not grows(0.0):
        return 0.0
    low, high = 0.0, 0.01 * w
    while grows(high):
        low, high = high, 4.0 * high
    while high - low > precision * w:
        middle = 0.5 * (low + high)
        low, high = (middle, high) if grows(middle) else (low, middle)
    return 0.5 * (low + high)
