r"""Hill determinants of a layer that is shaken sinusoidally, at a real growth rate.

With zeta = sum over n of zeta_n exp(s_n t), s_n = sigma + i (n + alpha) w, the rows are

    A_n zeta_n = a (zeta_{n-1} + zeta_{n+1}),   A_{-n} = conj(A_n)  (alpha = 0, harmonic),
                                                A_{-1-n} = conj(A_n)  (alpha = 1/2, subharmonic)

so the two halves of the tridiagonal system are conjugate, and the determinant follows from one half. The tail
determinants, each row divided by its A_n, obey D_n = D_{n+1} - a^2 / (A_n A_{n+1}) D_{n+2}, D = 1 past the last row;
the continued fraction is C(a) = D_2 / (A_1 D_1). Multiplied by abs(D_1)^2 the two conditions

    harmonic  A_0 = 2 a^2 Re C(a),      subharmonic  abs(A_0 - a^2 C(a)) = a

have no poles: they are entire in a, and change sign exactly at the real neutral accelerations. Rounding acts like a
relative change of the A_n by a few units in the last place.

References
----------
Kumar, K. & Tuckerman, L. S. (1994), J. Fluid Mech. 279, 49-68. Kumar, K. (1996), Proc. R. Soc. A 452, 1113-1126.
"""

from dataclasses import dataclass
from typing import Protocol, Self

import numpy as np
import numpy.typing as npt

__all__ = ["Half", "LayerModel", "rows_needed"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]


class LayerModel(Protocol):
    """What the thresholds need to know of a layer."""

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k)."""
        ...


def rows_needed(amplitude: float, wavenumber: float) -> int:
    """Return the number N of rows beyond the first that the harmonics up to an amplitude (m) need.

    The coefficients grow like 2 n^2 w^2 / k, so rows matter up to n* = sqrt(a k)/w = sqrt(A k); N = 2 n* + 8.
    """
    return int(np.ceil(2.0 * np.sqrt(max(amplitude, 0.0) * wavenumber))) + 8


@dataclass(frozen=True, slots=True)
class Half:
    """One half of the Hill system for many cases (wavenumber, frequency) at once.

    Attributes
    ----------
    first : array of complex, shape (cases,)
        A_0; real for the harmonic system.
    second : array of complex, shape (cases,)
        1 / A_1.
    links : array of complex, shape (rows - 1, cases)
        1 / (A_n A_{n+1}), n = 1 ...
    subharmonic : bool
        Which of the two systems it is.
    """

    first: Complex
    second: Complex
    links: Complex
    subharmonic: bool

    @classmethod
    def of(cls, layer: LayerModel, k: Real, w: Real, growth: float, rows: int, *, subharmonic: bool) -> Self:
        """Evaluate the coefficients for cases (k, w), arrays of one shape, and `rows` rows beyond the first."""
        steps = np.arange(rows + 1)[:, None] + (0.5 if subharmonic else 0.0)
        coefficients = layer.coefficient(growth + 1j * steps * w, k)
        return cls.from_coefficients(coefficients, subharmonic=subharmonic)

    @classmethod
    def from_coefficients(cls, coefficients: Complex, *, subharmonic: bool) -> Self:
        """Take coefficients A_0 ... A_N, shape (N + 1, cases), N >= 1."""
        inverse = 1.0 / coefficients[1:]
        return cls(coefficients[0].copy(), inverse[0].copy(), inverse[:-1] * inverse[1:], subharmonic)

    def __len__(self) -> int:
        """Return the number of cases."""
        return len(self.first)

    def take(self, chosen: npt.NDArray[np.bool_] | npt.NDArray[np.intp]) -> "Half":
        """Return the chosen cases."""
        return Half(self.first[chosen], self.second[chosen], self.links[:, chosen], self.subharmonic)

    def margin(self, acceleration: Real) -> Real:
        """Return the determinant, scaled by positive factors, at a peak acceleration for each case, m/s^2.

        Harmonic: negative below the first root of a statically unstable mode, positive above it. Subharmonic: positive
        below the first root, negative inside the first tongue.
        """
        b = acceleration * acceleration
        last = np.ones(self.first.shape, np.complex128)
        this = last.copy()
        spare = np.empty_like(last)
        for row, link in enumerate(self.links[::-1]):
            np.multiply(link, b, out=spare)
            spare *= last
            np.subtract(this, spare, out=spare)
            last, this, spare = this, spare, last
            if row % 32 == 31:  # keep the numbers in range; a positive factor changes no sign
                size = 1.0 / np.maximum(np.abs(this), np.abs(last))
                this *= size
                last *= size
        fraction = b * self.second * last  # a^2 C D_1
        if self.subharmonic:
            left = self.first * this - fraction
            result = _squared(left) - b * _squared(this)
            result *= _squared(self.second)
            return result
        result = self.first.real * _squared(this) - 2.0 * (fraction.real * this.real + fraction.imag * this.imag)
        result *= np.abs(self.second)
        return result

    def root_free_below(self) -> Real:
        """Return an acceleration below which no root can lie, m/s^2.

        Worpitzky: the continued fraction is free of poles and zeros while a^2 <= abs(A_n A_{n+1}) / 4 for all n; here
        n runs over both halves, so the subharmonic pair (A_{-1}, A_0) = (conj A_0, A_0) counts as well.
        """
        product = np.abs(self.first / self.second)
        if self.subharmonic:
            np.minimum(product, _squared(self.first), out=product)
        if len(self.links):
            np.minimum(product, 1.0 / np.abs(self.links).max(axis=0), out=product)
        result: Real = 0.5 * np.sqrt(product)
        return result


def _squared(z: Complex) -> Real:
    result: Real = z.real * z.real + z.imag * z.imag
    return result
