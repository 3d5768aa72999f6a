r"""Rectangular vessel with the contact line pinned along all four sides.

The sliding modes cos(p pi x/W) cos(q pi y/L) of one parity in x and one in y are held at rest by one multiplier for
every q along the sides x = 0, W and one for every p along the sides y = 0, L:

    A_n,pq zeta_n,pq - a (zeta_{n-1,pq} + zeta_{n+1,pq}) = b_p lambda_n,q + b_q mu_n,p

Both sums run to infinity, as in `containment.physics.rim_modes`: discrete indices first, then nodes that stand for the
rest, the same ones for the modes and for the multipliers. At a corner the two sets of conditions say the same, and one
condition (of the smallest q) is left out for it. Otherwise this is `containment.physics.pinned_hill`, whose counts hold;
the multipliers of one family meet those of the other only in single modes, which is used to keep the matrices small.
"""

import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import Final, Self

import numpy as np
import numpy.typing as npt

from containment.physics.hill import LayerModel
from containment.physics.pinned_hill import SPARE_ROWS, harmonics_at_work
from containment.physics.rim_modes import RimModes, end_weights, nodes_beyond

__all__ = ["BoxHalf", "BoxLines", "box_lines", "box_rim"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]
Whole = npt.NDArray[np.intp]

_LARGEST_EXPONENT: Final = 300.0

_RIGID: Final = 1e30
"""Coefficient of the uniform mode, m/s^2: the volume is kept."""


@dataclass(frozen=True, slots=True)
class BoxLines:
    """Wavenumbers along the two sides for one pair of parities, with the heights at the sides.

    Attributes
    ----------
    along_x, along_y : array, shape (P,) and (Q,)
        p pi/W and q pi/L, 1/m.
    height_x, height_y : array, shape (P,) and (Q,)
        Height at the side of the cosine of unit norm, times the square root of the weight in the sum, 1/sqrt(m).
    """

    along_x: Real
    along_y: Real
    height_x: Real
    height_y: Real

    @property
    def wavenumbers(self) -> Real:
        """Wavenumbers of the modes, shape (P, Q), 1/m."""
        return np.hypot(self.along_x[:, None], self.along_y[None, :])


def box_lines(*, dims: Sequence[float], parity: int, discrete: Sequence[int], nodes: int, reach: float) -> BoxLines:
    """Return the lines of a box.

    Parameters
    ----------
    dims : sequence of float
        W, L, m.
    parity : int
        0 to 3: bit 0 set for shapes odd about the middle in x, bit 1 in y.
    discrete : sequence of int
        Indices to take one by one along x and along y, at least 14.
    nodes : int
        Nodes for the indices between the last discrete one and `reach`.
    reach : float
        Wavenumber (1/m) from which on the summands fall like 1/k^2.
    """
    lines: list[tuple[Real, Real]] = []
    for side, length in enumerate(dims):
        index = 2.0 * np.arange(discrete[side]) + (parity >> side & 1)
        weight = end_weights(discrete[side])
        more, step = nodes_beyond(float(index[-1]), max(reach * length / math.pi, 30.0 * float(index[-1])), nodes)
        index, weight = np.concatenate([index, more]), np.concatenate([weight, 0.5 * step])
        height = np.sqrt(weight * np.where(index == 0.0, 1.0, 2.0) / length)
        lines.append((np.asarray(index * (math.pi / length), np.float64), np.asarray(height, np.float64)))
    return BoxLines(lines[0][0], lines[1][0], lines[0][1], lines[1][1])


def box_rim(lines: BoxLines, parity: int) -> RimModes:
    """Return the modes of a box with every condition along its sides as a rim of its own, for the layer at rest."""
    p, q = len(lines.along_x), len(lines.along_y)
    heights = np.zeros((p + q - 1, p, q))
    for j in range(1, q):
        heights[j - 1, :, j] = lines.height_x
    for i in range(p):
        heights[q - 1 + i, i, :] = lines.height_y
    k = lines.wavenumbers.ravel()
    kept = k > 0.0
    return RimModes(parity, k[kept], heights.reshape(p + q - 1, -1)[:, kept], p)


@dataclass(frozen=True, slots=True)
class BoxHalf:
    """The Hill systems of one pair of parities at many frequencies; the cases are worked one after another.

    Attributes
    ----------
    coefficients : array of complex, shape (rows + 1, cases, P, Q)
        A_n,pq.
    lines : BoxLines
        The modes.
    reach : array, shape (2, cases)
        See `containment.physics.pinned_hill.harmonics_at_work`.
    subharmonic : bool
        Which of the two systems it is.
    reference : array, shape (cases,)
        Logarithm of the determinant at a small acceleration, taken off.
    extra : int
        Rows beyond the usual ones.
    """

    coefficients: Complex
    lines: BoxLines
    reach: Real
    subharmonic: bool
    reference: Real
    extra: int = 0

    @classmethod
    def of(
        cls,
        layer: LayerModel,
        lines: BoxLines,
        w: Real,
        reach: Real,
        growth: float,
        stop: Real,
        *,
        subharmonic: bool,
        extra: int = 0,
    ) -> Self:
        """Evaluate the coefficients for accelerations up to `stop`; w and stop have the shape (cases,)."""
        rows = int(2.0 * np.max(harmonics_at_work(stop, reach))) + SPARE_ROWS + extra
        k = lines.wavenumbers
        uniform = k == 0.0
        flat = np.where(uniform, 1.0, k).ravel()
        steps = np.arange(rows + 1)[:, None, None] + (0.5 if subharmonic else 0.0)
        a_n = layer.coefficient(growth + 1j * steps * w[:, None], flat).reshape(rows + 1, len(w), *k.shape)
        a_n[:, :, uniform] = _RIGID
        bare = cls(a_n, lines, reach, subharmonic, np.zeros(len(w)), extra)
        reference = np.array([bare._determinant(i, 1e-3 * float(a))[0] for i, a in enumerate(stop)])
        return cls(a_n, lines, reach, subharmonic, reference, extra)

    def __len__(self) -> int:
        """Return the number of cases."""
        return len(self.reach[0])

    def take(self, chosen: npt.NDArray[np.bool_] | Whole) -> "BoxHalf":
        """Return the chosen cases."""
        return BoxHalf(
            self.coefficients[:, chosen],
            self.lines,
            self.reach[:, chosen],
            self.subharmonic,
            self.reference[chosen],
            self.extra,
        )

    def margin(self, acceleration: Real) -> Real:
        """Return a function of the acceleration, one a case, that is positive where the count is 0; 0 at every root."""
        pairs = [self._determinant(i, float(a)) for i, a in enumerate(acceleration)]
        logs = np.array([pair[0] for pair in pairs])
        size = np.exp(np.clip(logs - self.reference, -_LARGEST_EXPONENT, _LARGEST_EXPONENT))
        return np.where(np.array([pair[1] for pair in pairs]) > 0, -size, size)

    def count(self, acceleration: Real) -> Whole:
        """Return the number of surfaces of negative effective stiffness, or of singular values below a."""
        return np.array([self._determinant(i, float(a))[1] for i, a in enumerate(acceleration)], dtype=np.intp)

    def _determinant(self, case: int, a: float) -> tuple[float, int]:
        top = float(harmonics_at_work(np.array([a]), self.reach[:, case : case + 1])[0])
        rows = min(len(self.coefficients) - 1, int(2.0 * top) + SPARE_ROWS + self.extra)
        a_n = self.coefficients[: rows + 1, case]
        ratio = np.empty_like(a_n)
        ratio[rows] = a / a_n[rows]
        for n in range(rows - 1, 0, -1):
            ratio[n] = a / (a_n[n] - a * ratio[n + 1])
        block = _inverse(a, a_n[1:], ratio[1:])
        descent = np.concatenate([np.ones_like(a_n[:1]), np.cumprod(ratio[1:], axis=0)])
        if self.subharmonic:
            cells, logs, negative = _subharmonic_cells(a, a_n[0], a_n[0] - a * ratio[1], descent, block)
        else:
            cells, logs, negative = _harmonic_cells(a_n[0].real, (a_n[0] - 2.0 * a * ratio[1]).real, descent, block)
        size = np.abs(a_n)
        more, positive = self._inertia(cells, 1.0 / np.concatenate([size, size if self.subharmonic else size[1:]]))
        multipliers = len(self.lines.along_x) + len(self.lines.along_y) - 1
        return logs + more, negative + positive - multipliers * (rows + 1)

    def _inertia(self, cells: Real, typical: Real) -> tuple[float, int]:
        """Return the logarithm of the determinant and the number of positive eigenvalues of the multipliers' matrix.

        `cells` has the shape (d, d, P, Q), d reals a multiplier; `typical` the sizes of its diagonal, (d, P, Q). The
        multipliers of the sides x = 0, W are eliminated, each by its own d x d block.
        """
        bx, by = self.lines.height_x, self.lines.height_y
        # (Q, d, d) and (P, d, d)
        of_q = np.einsum("p,depq->qde", bx**2, cells)[1:]
        of_p = np.einsum("q,depq->pde", by**2, cells)
        scale_q = 1.0 / np.sqrt(np.einsum("p,dpq->qd", bx**2, typical))[1:]
        scale_p = 1.0 / np.sqrt(np.einsum("q,dpq->pd", by**2, typical))
        of_q *= scale_q[:, :, None] * scale_q[:, None, :]
        of_p *= scale_p[:, :, None] * scale_p[:, None, :]
        d, count_p, count_q = len(cells), len(bx), len(by) - 1
        cross = cells[:, :, :, 1:] * (bx[:, None] * by[None, 1:])
        cross = cross.transpose(3, 0, 2, 1) * scale_q[:, :, None, None] * scale_p[None, None, :, :]
        cross = cross.reshape(count_q, d, count_p * d)
        first = np.linalg.eigvalsh(of_q)
        solved = np.linalg.solve(of_q, cross)
        matrix = -(cross.reshape(count_q * d, -1).T @ solved.reshape(count_q * d, -1))
        diagonal = np.arange(count_p)
        matrix = matrix.reshape(count_p, d, count_p, d)
        matrix[diagonal, :, diagonal, :] += of_p
        matrix = matrix.reshape(count_p * d, count_p * d)
        second = np.linalg.eigvalsh(0.5 * (matrix + matrix.T))
        logs = sum(float(np.sum(np.log(np.maximum(np.abs(each), 1e-300)))) for each in (first, second))
        return logs, int(np.sum(first > 0.0) + np.sum(second > 0.0))


def _inverse(a: float, a_n: Complex, ratio: Complex) -> Complex:
    """Return the inverse of the rows n >= 1 of every mode, shape (N, N, P, Q)."""
    rows = len(a_n)
    forward = a_n[0]
    cells = np.empty_like(a_n)
    for n in range(rows):
        if n:
            forward = a_n[n] - a * a / forward
        cells[n] = 1.0 / (a / ratio[n] + forward - a_n[n])
    result = np.empty((rows, rows, *a_n.shape[1:]), np.complex128)
    for offset in range(rows):
        if offset:
            cells = cells[:-1] * ratio[offset:]
        for n in range(rows - offset):
            result[n, n + offset] = result[n + offset, n] = cells[n]
    return result


def _harmonic_cells(g0: Real, g: Real, descent: Complex, block: Complex) -> tuple[Real, float, int]:
    rows = len(block)
    v = np.concatenate([descent.real[:1], 2.0 * descent.real[1:], -2.0 * descent.imag[1:]])
    cells = (v / g)[:, None] * v[None, :]
    _add_form(cells, 2.0 * block, 1, 1 + rows)
    return cells, float(np.sum(np.log(np.abs(g / g0)))), int(np.sum(g < 0.0))


def _subharmonic_cells(a: float, first: Complex, g: Complex, descent: Complex, block: Complex) -> tuple[Real, float, int]:
    rows = len(block)
    d = a * a - (g.real**2 + g.imag**2)
    on_x = np.concatenate([descent.real, -descent.imag])
    on_y = np.concatenate([-descent.imag, -descent.real])
    left_x = ((-g.real - a) * on_x + g.imag * on_y) / d
    left_y = (g.imag * on_x + (g.real - a) * on_y) / d
    cells = left_x[:, None] * on_x[None, :] + left_y[:, None] * on_y[None, :]
    _add_form(cells, block, 1, 2 + rows)
    return cells, float(np.sum(np.log(np.abs(d) / (first.real**2 + first.imag**2)))), int(np.sum(d > 0.0))


def _add_form(cells: Real, p: Complex, real_from: int, imag_from: int) -> None:
    x, y = slice(real_from, real_from + len(p)), slice(imag_from, imag_from + len(p))
    cells[x, x] += p.real
    cells[y, y] -= p.real
    cells[x, y] -= p.imag
    cells[y, x] -= p.imag
