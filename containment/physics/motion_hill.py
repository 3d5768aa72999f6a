r"""Hill systems of a layer whose base moves periodically, but not as a pure sine.

With G(t) = G0 - a Re sum over m of c_m exp(i m w t) the rows of `containment.physics.hill` become banded:

    A_n zeta_n = a sum over m of [ c_m zeta_{n-m} + conj(c_m) zeta_{n+m} ],   m = 1 ... M

At a real growth rate zeta is real in time, so that again zeta_{-n} = conj(zeta_n) (harmonic) or zeta_{-1-n} =
conj(zeta_n) (subharmonic). The rows n >= M touch non-negative n only and are eliminated from the last one inwards, as
complex unknowns. The rows n < M that are left also touch conjugates, and are written out in real and imaginary parts;
the real determinant of this core is the determinant of the two-sided system divided by the squared moduli of the
eliminated pivots. For M = 1 this is the continued fraction of `Half`, and the result equals its margin.
"""

from dataclasses import dataclass
from typing import Self

import numpy as np
import numpy.typing as npt

from containment.physics.hill import LayerModel, rows_needed
from containment.physics.winding import damping_for, exponents_beyond, largest_rate

__all__ = ["MotionHalf", "fastest_growth", "growing_count", "motion_rows"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]
Chosen = npt.NDArray[np.bool_] | npt.NDArray[np.intp]


def motion_rows(coupling: Complex, amplitude: float, wavenumber: float) -> int:
    """Return the number of rows beyond the first that a motion needs; amplitude = level / w^2, m."""
    return rows_needed(amplitude * float(np.sum(np.abs(coupling))), wavenumber) + len(coupling) - 1


@dataclass(frozen=True, slots=True)
class MotionHalf:
    """One half of the Hill system for many cases (wavenumber, frequency) at once; the level a is the unknown.

    Attributes
    ----------
    coefficients : array of complex, shape (rows + 1, cases)
        A_n, n = 0 ... N.
    coupling : array of complex, shape (M,)
        c_m, see `containment.given.waveforms.Waveform.coupling`.
    subharmonic : bool
        Which of the two systems it is.

    Examples
    --------
    The acceleration (of the fundamental) above which a crank with rod ratio 0.25 holds one mode, against a pure sine:

    >>> from containment.physics.crossings import first_crossing
    >>> from containment.physics.dispersion import Layer
    >>> from containment.given.waveforms import PURE_SINE, crank_and_rod
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> k, w = np.array([60.0]), np.array([314.16])
    >>> for motion in (PURE_SINE, crank_and_rod(rod_ratio=0.25)):
    ...     half = MotionHalf.of(layer, k, w, 0.0, 16, motion.coupling(), subharmonic=False)
    ...     root = first_crossing(half, half.root_free_below(), np.array([600.0]), turns=np.sqrt(k) / w)
    ...     print(round(float(root[0]), 1))
    194.9
    191.3
    """

    coefficients: Complex
    coupling: Complex
    subharmonic: bool

    @classmethod
    def of(
        cls, layer: LayerModel, k: Real, w: Real, growth: float, rows: int, coupling: Complex, *, subharmonic: bool
    ) -> Self:
        """Evaluate the coefficients for cases (k, w), arrays of one shape, and `rows` rows beyond the first."""
        steps = np.arange(max(rows, len(coupling)) + 1)[:, None] + (0.5 if subharmonic else 0.0)
        return cls(layer.coefficient(growth + 1j * steps * w, k), coupling, subharmonic)

    def __len__(self) -> int:
        """Return the number of cases."""
        return len(self.coefficients[0])

    def take(self, chosen: Chosen) -> "MotionHalf":
        """Return the chosen cases."""
        return MotionHalf(self.coefficients[:, chosen], self.coupling, self.subharmonic)

    def margin(self, acceleration: Real) -> Real:
        """Return the determinant, scaled by positive factors, at a level for each case, m/s^2.

        Signs as for `containment.physics.hill.Half.margin`: harmonic negative below the first root of a statically
        unstable mode, subharmonic positive below the first root.
        """
        a_n, c = self.coefficients, self.coupling
        width = len(c)
        column: Complex = -acceleration.astype(np.complex128) * c[:, None]
        row = np.conj(column)
        window = _first_window(a_n[-width - 1 :], row, column)
        sizes = np.ones(len(self))
        for n in range(len(a_n) - 1, width - 1, -1):
            pivot = window[-1, -1]
            sizes *= _squared(pivot) / _squared(a_n[n])
            core = _eliminated(window, pivot)
            if n > width:
                window = _widened(core, a_n[n - width - 1], row, column)
        return sizes * self._core_determinant(core, acceleration)

    def _core_determinant(self, core: Complex, a: Real) -> Real:
        width = len(self.coupling)
        shift = 1 if self.subharmonic else 0
        conjugate = np.zeros((width, width, 1), np.complex128)
        for n in range(1 - shift, width):
            for p in range(1 - shift, width):
                if n + p + shift <= width:
                    conjugate[n, p] = self.coupling[n + p + shift - 1]
        conjugate = a * conjugate
        if not self.subharmonic:
            # row 0 is its own conjugate: twice the real part of its upper half
            core = core.copy()
            core[0, 0] -= 0.5 * self.coefficients[0]
            core[0] *= 2.0
        real = np.concatenate([core.real - conjugate.real, -core.imag - conjugate.imag], axis=1)
        imag = np.concatenate([core.imag - conjugate.imag, core.real + conjugate.real], axis=1)
        if not self.subharmonic:
            real, imag = np.delete(real, width, axis=1), np.delete(imag, width, axis=1)[1:]
        size = np.abs(self.coefficients[1:width])
        real[1:] /= size[:, None]  # rows n >= 1 by their coefficients, as the pivots
        matrix = np.concatenate([real, imag])
        matrix[len(matrix) - len(size) :] /= size[:, None]
        scale = np.abs(self.coefficients[1])
        result: Real = np.linalg.det(np.moveaxis(matrix, -1, 0)) / (scale * scale if self.subharmonic else scale)
        return result

    def root_free_below(self) -> Real:
        """Return a level below which no root can lie, m/s^2.

        Rows and columns divided by the roots of abs(A_n) leave the identity less a sum of M shifted diagonals and their
        transposes, whose norms are at most a abs(c_m) max 1/sqrt(abs(A_n A_{n+m})) each; n runs over both halves.
        """
        inverse = 1.0 / np.abs(self.coefficients)
        both = np.concatenate([inverse[::-1] if self.subharmonic else inverse[:0:-1], inverse])
        bound = np.zeros(len(self))
        for m, c in enumerate(self.coupling, 1):
            bound += 2.0 * np.abs(c) * np.sqrt(np.max(both[:-m] * both[m:], axis=0))
        result: Real = 1.0 / bound
        return result


def _first_window(a_n: Complex, row: Complex, column: Complex) -> Complex:
    """Return the last M + 1 rows and columns of the half system, shape (M + 1, M + 1, cases)."""
    size = len(a_n)
    window = np.zeros((size, size, a_n.shape[1]), np.complex128)
    for i in range(size):
        window[i, i] = a_n[i]
        window[i, i + 1 :] = row[: size - 1 - i]
        window[i + 1 :, i] = column[: size - 1 - i]
    return window


def _eliminated(window: Complex, pivot: Complex) -> Complex:
    """Eliminate the last row and column."""
    last = window[-1, :-1] * (1.0 / pivot)
    return window[:-1, :-1] - window[:-1, -1:] * last


def _widened(core: Complex, a_n: Complex, row: Complex, column: Complex) -> Complex:
    """Put the next row and column before the eliminated core."""
    size = len(core) + 1
    window = np.empty((size, size, core.shape[2]), np.complex128)
    window[1:, 1:] = core
    window[0, 0] = a_n
    window[0, 1:] = row
    window[1:, 0] = column
    return window


def growing_count(
    layer: LayerModel,
    k: float,
    w: float,
    level: float,
    coupling: Complex,
    *,
    growth: float = 0.0,
    rows: int | None = None,
) -> tuple[int, float]:
    """Count the exponents of one mode with a real part above `growth` by a winding number.

    Parameters
    ----------
    layer : LayerModel
        The layer.
    k, w, level : float
        Wavenumber (1/m), angular frequency (rad/s), and level of the motion (m/s^2).
    coupling : array of complex, shape (M,)
        c_m.
    growth : float
        1/s, >= 0.
    rows : int, optional
        Rows on either side; by default what `motion_rows` says.

    Returns
    -------
    count : int
    distance : float
        Distance of the winding number from the integer; above 0.05 the count proves nothing.

    Notes
    -----
    See `containment.physics.winding`; the rows run from -N to N.


    Examples
    --------
    >>> from containment.physics.dispersion import Layer
    >>> from containment.given.waveforms import crank_and_rod
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> motion = crank_and_rod(rod_ratio=0.25).coupling()
    >>> [growing_count(layer, 60.0, 314.16, level, motion)[0] for level in (100.0, 250.0)]
    [1, 0]
    """
    if rows is None:
        rows = motion_rows(coupling, level / (w * w), k)
    n = np.arange(-rows, rows + 1)[:, None]
    rest = float(layer.coefficient(0.0, k).real)
    lift = max(0.0, -2.0 * rest)
    damping = float(damping_for(np.array(rest + lift), np.array(k), w))

    def track(y: Real) -> tuple[Complex, Real]:
        s = growth + 1j * (y + n * w)
        a_n = layer.coefficient(s, np.full(len(y), k))
        width = len(coupling)
        column = np.repeat(-coupling[:, None] * level, len(y), axis=1)
        window = _first_window(a_n[-width - 1 :], np.conj(column), column)
        total = np.zeros(len(y), np.complex128)
        damped = a_n + lift + damping * s
        for i in range(len(a_n) - 1, -1, -1):
            pivot = window[-1, -1]
            total += np.log(pivot / damped[i])
            if i == 0:
                break
            core = _eliminated(window, pivot)
            window = _widened(core, a_n[i - width - 1], np.conj(column), column) if i > width else core
        return total, (np.angle(damped) - np.angle(a_n + lift)).sum(axis=0)

    return exponents_beyond(track, w)


def fastest_growth(
    layer: LayerModel, k: float, w: float, level: float, coupling: Complex, *, precision: float = 1e-8
) -> float:
    """Return the largest growth rate of one mode, 1/s: the Floquet exponent with the largest real part, 0 if none grows.

    Parameters
    ----------
    layer, k, w, level, coupling
        As for `growing_count`, on which the rate is bisected.
    precision : float
        Precision relative to w.

    Raises
    ------
    NotComputableError
        A winding number is not an integer: an exponent lies on the path, or the truncation is too coarse.

    Examples
    --------
    >>> from containment.physics.dispersion import Layer
    >>> from containment.given.waveforms import PURE_SINE
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> round(fastest_growth(layer, 60.0, 314.16, 0.01, PURE_SINE.coupling()), 3)  # hardly shaken: the layer falls
    5.969
    """
    return largest_rate(
        lambda rate: growing_count(layer, k, w, level, coupling, growth=rate), w, precision=precision
    )


def _squared(z: Complex) -> Real:
    result: Real = z.real * z.real + z.imag * z.imag
    return result
