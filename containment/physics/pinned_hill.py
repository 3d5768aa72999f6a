r"""Hill systems of a shaken layer with its contact line pinned at the rim, at a real growth rate.

For one circumferential order the sliding modes j and the harmonics n obey, with b_j the heights at the rim and one
multiplier lambda_n for each harmonic (two in a ring: one for each rim),

    A_nj zeta_nj - a (zeta_{n-1,j} + zeta_{n+1,j}) = b_j lambda_n,      sum over j of b_j zeta_nj = 0

The system is conjugate about its middle, and complex symmetric, so it is the stationarity of a real quadratic form. All
of it but the middle row can be eliminated by continued fractions, mode by mode; a real symmetric matrix is left:

    harmonic      Q zeta_0 = b lambda_0 for real zeta_0: Q is the effective stiffness of the surface under shaking
    subharmonic   Q zeta_0 - a conj(zeta_0) = b lambda_0: neutral where a singular value of Q, on the surfaces that
                  keep the rim at rest, equals a (generalises abs(A_0 - a^2 C) = a)

The code keeps the multipliers and eliminates the modes, which leaves a real symmetric matrix of a size that does not
grow with the number of modes. By Sylvester's law and Haynsworth's rule its inertia counts

    harmonic      the surfaces of negative effective stiffness (at a = 0: the statically unstable pinned shapes)
    subharmonic   the singular values of Q below a

and its determinant times those of the eliminated parts changes sign wherever one of them is passed.

References
----------
Kumar, K. & Tuckerman, L. S. (1994), J. Fluid Mech. 279, 49-68 (rows). Haynsworth, E. V. (1968), Linear Algebra and its
Applications 1, 73-81 (inertia; from memory).
"""

from dataclasses import dataclass
from typing import Final, Self

import numpy as np
import numpy.typing as npt

from containment.physics.hill import LayerModel

__all__ = ["PinnedHalf", "harmonics_at_work", "reach_factors", "summed_inverse"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]
Whole = npt.NDArray[np.intp]

_LARGEST_EXPONENT: Final = 300.0

SPARE_ROWS: Final = 5
"""Rows beyond 2 n*: enough to find the edges to 1e-8; they are refined with more."""


@dataclass(frozen=True, slots=True)
class PinnedHalf:
    """The Hill system of many cases (circumferential order, frequency) at once.

    Attributes
    ----------
    coefficients : array of complex, shape (rows + 1, cases, modes)
        A_nj, n = 0 ... N.
    heights : array, shape (cases, rims, modes)
        b_j, 1/m.
    scale : array, shape (cases, rows + 1, rims)
        Scale of each multiplier, which gives the rows of the matrix a comparable size.
    reach : array, shape (2, cases)
        Factors c1 and c2: the harmonics up to n* = min(c1 a^(3/4), c2 a^(2/3)) are at work, see `reach`.
    subharmonic : bool
        Which of the two systems it is.
    extra : int
        Rows beyond 2 n* + 5.
    """

    coefficients: Complex
    heights: Real
    scale: Real
    reach: Real
    subharmonic: bool
    extra: int = 0

    @classmethod
    def of(
        cls,
        layer: LayerModel,
        wavenumbers: Real,
        heights: Real,
        w: Real,
        reach: Real,
        growth: float,
        stop: Real,
        *,
        subharmonic: bool,
        extra: int = 0,
    ) -> Self:
        """Evaluate the coefficients for accelerations up to `stop`.

        Shapes: wavenumbers (cases, modes), heights (cases, rims, modes), w and stop (cases,), reach (2, cases).
        """
        rows = int(2.0 * np.max(harmonics_at_work(stop, reach))) + SPARE_ROWS + extra
        steps = np.arange(rows + 1)[:, None, None] + (0.5 if subharmonic else 0.0)
        coefficients = layer.coefficient(growth + 1j * steps * w[:, None], wavenumbers)
        scale = 1.0 / np.sqrt(np.einsum("crk,nck->cnr", heights**2, 1.0 / np.abs(coefficients)))
        return cls(coefficients, heights, scale, reach, subharmonic, extra)

    def __len__(self) -> int:
        """Return the number of cases."""
        return len(self.heights)

    def take(self, chosen: npt.NDArray[np.bool_] | Whole) -> "PinnedHalf":
        """Return the chosen cases."""
        return PinnedHalf(
            self.coefficients[:, chosen],
            self.heights[chosen],
            self.scale[chosen],
            self.reach[:, chosen],
            self.subharmonic,
            self.extra,
        )

    def margin(self, acceleration: Real) -> Real:
        """Return a function of the peak acceleration (m/s^2, one for each case) that is positive where the count is 0.

        Its magnitude is that of the determinant, scaled by positive factors, and vanishes at every root.
        """
        size, count = self._determinant(acceleration)
        return np.where(count > 0, -size, size)

    def count(self, acceleration: Real) -> Whole:
        """Return the number of surfaces of negative effective stiffness, or of singular values below a."""
        return self._determinant(acceleration)[1]

    def _determinant(self, acceleration: Real) -> tuple[Real, Whole]:
        a = acceleration[:, None]
        top = float(np.max(harmonics_at_work(acceleration, self.reach), initial=0.0))
        rows = min(len(self.coefficients) - 1, int(2.0 * top) + SPARE_ROWS + self.extra)
        A = self.coefficients[: rows + 1]  # noqa: N806
        ratio = np.empty_like(A)  # a / (A_n - a^2 / (A_{n+1} - ...)): zeta_n / zeta_{n-1} outside the rim's reach
        ratio[rows] = a / A[rows]
        for n in range(rows - 1, 0, -1):
            np.divide(a, A[n] - a * ratio[n + 1], out=ratio[n])
        block = summed_inverse(a, A[1:], ratio[1:], self.heights)
        descent = np.empty((rows + 1, *A.shape[1:]), np.complex128)  # h_n, with h_0 = 1
        descent[0] = 1.0
        np.cumprod(ratio[1:], axis=0, out=descent[1:])
        if self.subharmonic:
            return self._subharmonic(a, A[0] - a * ratio[1], descent, block)
        return self._harmonic(A[0].real - 2.0 * a * ratio[1].real, A[0].real, descent, block)

    def _harmonic(self, g: Real, g0: Real, descent: Complex, block: Complex) -> tuple[Real, Whole]:
        cases, rims, modes = self.heights.shape
        rows = len(descent) - 1
        # v_j = (1, 2 Re h, -2 Im h): the combination of (lambda_0, Re lambda_n, Im lambda_n) that drives zeta_0j
        v = np.concatenate([descent.real[:1], 2.0 * descent.real[1:], -2.0 * descent.imag[1:]])
        drive = np.einsum("vck,crk->cvrk", v, self.heights).reshape(cases, rims * (1 + 2 * rows), modes)
        matrix = (drive / g[:, None, :]) @ drive.transpose(0, 2, 1)
        size = rims * rows
        p = 2.0 * block.reshape(cases, size, size)
        _add_form(matrix, p, rims, rims + size)
        scale = self.scale[:, : rows + 1].reshape(cases, rims * (1 + rows))
        scale = np.concatenate([scale, scale[:, rims:]], axis=1)
        logs = np.sum(np.log(np.abs(g / g0)), axis=1)
        return _inertia(matrix, scale, logs, np.sum(g < 0.0, axis=1) - size - rims)

    def _subharmonic(self, a: Real, g: Complex, descent: Complex, block: Complex) -> tuple[Real, Whole]:
        cases, rims, modes = self.heights.shape
        rows = len(descent) - 1
        d = a * a - (g.real**2 + g.imag**2)
        # zeta_0 = x + i y; b h . lambda drives x by its real part and y by minus its imaginary part
        real, imag = descent.real, descent.imag
        shape = (cases, 2 * rims * (1 + rows), modes)
        on_x = np.einsum("vck,crk->cvrk", np.concatenate([real, -imag]), self.heights).reshape(shape)
        on_y = np.einsum("vck,crk->cvrk", np.concatenate([-imag, -real]), self.heights).reshape(shape)
        by_d = 1.0 / d[:, None, :]
        gr, gi, aa = g.real[:, None, :], g.imag[:, None, :], a[:, :, None]
        left_x = by_d * ((-gr - aa) * on_x + gi * on_y)
        left_y = by_d * (gi * on_x + (gr - aa) * on_y)
        matrix = left_x @ on_x.transpose(0, 2, 1) + left_y @ on_y.transpose(0, 2, 1)
        size = rims * rows
        _add_form(matrix, block.reshape(cases, size, size), rims, 2 * rims + size)
        scale = self.scale[:, : rows + 1].reshape(cases, rims * (1 + rows))
        first = self.coefficients[0]
        logs = np.sum(np.log(np.abs(d) / (first.real**2 + first.imag**2)), axis=1)
        return _inertia(matrix, np.concatenate([scale, scale], axis=1), logs, np.sum(d > 0.0, axis=1) - size - rims)


def summed_inverse(a: Real, A: Complex, ratio: Complex, heights: Real) -> Complex:  # noqa: N803
    """Return the sum over the modes of b b^T times the inverse of a tridiagonal system.

    Parameters
    ----------
    a : array, shape (cases, 1)
        Acceleration; the couplings are -a.
    A : array of complex, shape (rows, cases, modes)
        Diagonals.
    ratio : array of complex, shape (rows, cases, modes)
        a / (A_n - a^2 / (A_{n+1} - ...)).
    heights : array, shape (cases, rims, modes)
        b.

    Returns
    -------
    array of complex, shape (cases, rows, rims, rows, rims)
    """
    rows = len(A)
    cases, rims, _ = heights.shape
    cells = np.empty_like(A)
    forward = A[0]
    for n in range(rows):
        if n:
            forward = A[n] - a * a / forward
        # a / ratio_n is the pivot from the other side
        cells[n] = 1.0 / (a / ratio[n] + forward - A[n])
    result = np.zeros((cases, rows, rims, rows, rims), np.complex128)
    index = np.arange(rows)
    for one in range(rims):
        for other in range(one + 1):
            part = cells * (heights[:, one] * heights[:, other])
            for offset in range(rows):
                if offset:
                    part = part[:-1] * ratio[offset:]
                value = np.add.reduce(part, axis=-1).T
                low, high = index[: rows - offset], index[offset:]
                for row, column in ((low, high), (high, low)):
                    result[:, row, one, column, other] = value
                    result[:, row, other, column, one] = value
    return result


def harmonics_at_work(acceleration: Real, reach: Real) -> Real:
    """Return n* for accelerations (m/s^2) and the factors of `reach_factors`."""
    result: Real = np.minimum(reach[0] * acceleration**0.75, reach[1] * acceleration ** (2.0 / 3.0))
    return result


def reach_factors(density: float, viscosity: float, surface_tension: float, w: Real) -> Real:
    """Return c1 and c2, shape (2, cases), from the liquid and the angular frequencies.

    A wave has harmonics up to sqrt(a k)/w at work, if its coefficients do not exceed 2 a anyway: by tension for
    k > sqrt(a rho/gamma), by viscosity (abs(A_n) > 4 nu k n w) for k^(3/2) > sqrt(a)/(2 nu). The shorter limit counts.
    """
    viscous = (2.0 * viscosity / density) ** (-1.0 / 3.0) if viscosity > 0.0 else np.inf
    return np.stack([(density / surface_tension) ** 0.25 / w, viscous / w])


def _add_form(matrix: Real, p: Complex, real_from: int, imag_from: int) -> None:
    """Add the real quadratic form Re(z^T P z) of z = x + i y to the parts of the matrix that hold x and y."""
    size = p.shape[-1]
    x, y = slice(real_from, real_from + size), slice(imag_from, imag_from + size)
    matrix[:, x, x] += p.real
    matrix[:, y, y] -= p.real
    matrix[:, x, y] -= p.imag
    matrix[:, y, x] -= p.imag


def _inertia(matrix: Real, scale: Real, logs: Real, offset: Whole) -> tuple[Real, Whole]:
    """Return the size of the determinant, and the count: positive eigenvalues plus what the eliminated parts add."""
    eigenvalues = np.linalg.eigvalsh(matrix * scale[:, :, None] * scale[:, None, :])
    logs = logs + np.sum(np.log(np.maximum(np.abs(eigenvalues), 1e-300)), axis=1)
    count = np.sum(eigenvalues > 0.0, axis=1) + offset
    return np.exp(np.clip(logs, -_LARGEST_EXPONENT, _LARGEST_EXPONENT)), count
