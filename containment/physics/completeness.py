r"""Proof that no exponent of a mode was missed: the number of growing exponents as a winding number.

Along s = sigma + i y, y from 0 to w/2, the determinant of the Hill system is continuous and, where no exponent lies on
the line, never 0. Let B_n = A_n + c with c >= 0 such that rho G0 + gamma k^2 + c rho/2 > 0: a layer that is stable at
rest. Energy gives Im B(sigma + i y) > 0 for sigma >= 0, y > 0 (dissipation and inertia both resist), so the principal
arguments of the B_n are continuous along the line, and B has no zero to its right. The determinant divided by the
product of the B_n is, but for the truncation, periodic in y with period w and tends to 1 far to the right; the
argument principle on the strip of width w and the symmetry between s and its conjugate give

    number of exponents with Re s > sigma = -(1/pi) [ change of arg det - change of sum of arg B_n ],  y from 0 to w/2

and the second change is arg B(sigma + i (N + 1/2) w): all other terms cancel in conjugate pairs. The result is an
integer but for the truncation; how far it is from one is returned with it.

The path is halved until on each piece the change of the argument is small and the logarithmic derivative times the
length is small at both ends. A zero close to the line, and also a close pair of them, makes that derivative large at a
distance, so the pair cannot hide between two nodes.
"""

from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.physics.floquet import SlopedLayer, determinant
from containment.physics.hill import rows_needed

__all__ = ["Count", "INTEGER_TOLERANCE", "count_growing"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

INTEGER_TOLERANCE: Final = 0.05
"""A count further from an integer than this proves nothing."""

_FIRST_PIECES: Final = 4
_DEEPEST: Final = 40
_LONGEST_PIECE: Final = 1.2
"""Largest logarithmic derivative times length of a piece."""
_LARGEST_TURN: Final = 1.0
"""Largest change of the argument over a piece, rad."""


@dataclass(frozen=True, slots=True)
class Count:
    """Number of exponents beyond the growth level for each mode.

    Attributes
    ----------
    growing : array of int, shape (modes,)
        The count.
    proven : array of bool, shape (modes,)
        Whether the path was resolved and the winding number is an integer to `INTEGER_TOLERANCE`.
    distance : array, shape (modes,)
        Distance of the winding number from the integer.
    """

    growing: npt.NDArray[np.int64]
    proven: npt.NDArray[np.bool_]
    distance: Real


def count_growing(
    layer: SlopedLayer, k: Real, w: float, acceleration: float, *, growth: float = 0.0, extra_rows: int = 0
) -> Count:
    """Count the exponents with a real part above `growth` for each mode.

    Parameters
    ----------
    layer : SlopedLayer
        The layer.
    k : array, shape (modes,)
        Wavenumbers, 1/m.
    w, acceleration : float
        Angular frequency, rad/s, and peak acceleration, m/s^2.
    growth : float
        Growth level, 1/s, >= 0.
    extra_rows : int
        Rows added to the usual truncation.
    """
    rows = rows_needed(acceleration / (w * w), float(k.max(initial=0.0))) + extra_rows
    count = len(k)
    marks = np.linspace(0.0, 0.5 * w, _FIRST_PIECES + 1)
    phase, slope = _on_path(layer, np.tile(marks, count), np.repeat(k, len(marks)), w, acceleration, growth, rows)
    phase, slope = phase.reshape(count, -1), slope.reshape(count, -1)
    mode = np.repeat(np.arange(count), _FIRST_PIECES)
    y0, y1 = np.tile(marks[:-1], count), np.tile(marks[1:], count)
    p0, p1 = phase[:, :-1].ravel(), phase[:, 1:].ravel()
    d0, d1 = slope[:, :-1].ravel(), slope[:, 1:].ravel()
    turned = np.zeros(count)
    resolved = np.ones(count, dtype=bool)
    for _ in range(_DEEPEST):
        turn = np.angle(p1 * np.conj(p0))
        steep = np.maximum(d0, d1) * (y1 - y0)
        fine = (np.abs(turn) <= _LARGEST_TURN) & (steep <= _LONGEST_PIECE)
        np.add.at(turned, mode[fine], turn[fine])
        rest = np.flatnonzero(~fine)
        if not len(rest):
            break
        middle = 0.5 * (y0[rest] + y1[rest])
        pm, dm = _on_path(layer, middle, k[mode[rest]], w, acceleration, growth, rows)
        mode = np.concatenate([mode[rest], mode[rest]])
        y0, y1 = np.concatenate([y0[rest], middle]), np.concatenate([middle, y1[rest]])
        p0, p1 = np.concatenate([p0[rest], pm]), np.concatenate([pm, p1[rest]])
        d0, d1 = np.concatenate([d0[rest], dm]), np.concatenate([dm, d1[rest]])
    else:
        resolved[mode] = False
    top = layer.coefficient(growth + 1j * (rows + 0.5) * w, k)
    lift = np.maximum(0.0, -layer.coefficient(0.0, k).real) + np.abs(top) * 1e-9
    winding = -(turned - np.angle(top + lift)) / np.pi
    nearest = np.round(winding)
    distance = np.abs(winding - nearest)
    proven = resolved & (distance <= INTEGER_TOLERANCE) & (nearest >= 0)
    return Count(nearest.astype(np.int64), proven, distance)


def _on_path(
    layer: SlopedLayer, y: Real, k: Real, w: float, acceleration: float, growth: float, rows: int
) -> tuple[Complex, Real]:
    phase, slope = determinant(layer, np.asarray(growth + 1j * y, np.complex128), k, w, acceleration, rows)
    return phase, np.abs(slope)
