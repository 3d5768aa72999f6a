"""Thresholds of a shaken layer by a dense eigenvalue solve: the rival that the benchmarks time and compare.

The harmonics of the surface obey A_n zeta_n = a (zeta_(n-1) + zeta_(n+1)). Truncated to a finite band this is the
generalised eigenvalue problem diag(A) zeta = a T zeta, whose eigenvalues 1/a are those of diag(1/A) T. The coefficients
come from the caller.
"""

from __future__ import annotations

import numpy as np


def thresholds(coefficients: np.ndarray, *, tolerance: float = 1e-6) -> np.ndarray:
    """Real positive drive levels a at which the truncated system has a solution, ascending.

    Parameters
    ----------
    coefficients : ndarray, shape (m,)
        A_n for consecutive n: -N..N for harmonic motions, -N..N - 1 (of n + 1/2) for subharmonic ones.
    tolerance : float
        An eigenvalue counts as real when its imaginary part is below this share of its modulus.

    Returns
    -------
    ndarray
        Thresholds in the units of the coefficients. Rounding splits close pairs of real eigenvalues, and loses small
        ones, when the band is wide: the matrix is far from normal. Such roots are missing from the answer.

    Raises
    ------
    ValueError
        If the coefficients are not a finite, nonzero, one-dimensional array of at least two.

    Examples
    --------
    >>> thresholds(np.array([5.0, 2.0, 5.0])).round(9)
    array([2.23606798])
    """
    a_n = np.asarray(coefficients)
    if a_n.ndim != 1 or a_n.size < 2 or not np.all(np.isfinite(a_n)) or np.any(a_n == 0):
        raise ValueError(f"coefficients must be a finite, nonzero array of two or more, got shape {a_n.shape}")
    beside = np.eye(a_n.size, k=1) + np.eye(a_n.size, k=-1)
    inverse_levels = np.linalg.eigvals(beside / a_n[:, None])
    real = (np.abs(inverse_levels.imag) <= tolerance * np.abs(inverse_levels)) & (inverse_levels.real > 0)
    # An odd band has one eigenvalue 0 (an infinite level), which rounding turns into a tiny one.
    real &= np.abs(inverse_levels) > 1e-13 * np.abs(inverse_levels).max()
    return np.sort(1.0 / inverse_levels[real].real)
