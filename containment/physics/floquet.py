"""Floquet exponents of a shaken layer: growth rates of its modes at a drive point.

The two-sided Hill system A_n zeta_n = a (zeta_{n-1} + zeta_{n+1}), n = -N ... N, A_n = A(s + i n w; k), has a solution
where its determinant vanishes. Both tails are folded by the recurrence of `containment.physics.hill`; with the
analytic derivative dA/ds the logarithmic derivative of the determinant comes along, which Newton's method uses to find
exponents and the count of `containment.physics.completeness` uses to choose its steps.
"""

from dataclasses import dataclass
from typing import Final, Protocol

import numpy as np
import numpy.typing as npt

from containment.physics.crossings import refined
from containment.physics.hill import Half, rows_needed

__all__ = ["Exponents", "SlopedLayer", "determinant", "exponents", "growing_exponents", "static_growth_rate"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

_NEWTON_STEPS: Final = 40
_CASES_AT_ONCE: Final = 1500


class SlopedLayer(Protocol):
    """What the exponents need to know of a layer: see `containment.physics.dispersion.Layer`."""

    def coefficient(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> Complex:
        """Return A(s; k)."""
        ...

    def coefficient_and_slope(self, s: npt.ArrayLike, wavenumber: npt.ArrayLike) -> tuple[Complex, Complex]:
        """Return A(s; k) and dA/ds."""
        ...


@dataclass(frozen=True, slots=True)
class Exponents:
    """The exponent with the largest real part of each mode.

    Attributes
    ----------
    exponent : array of complex, shape (modes,)
        1/s, imaginary part in [0, w/2]; not-a-number where none was found.
    subharmonic : array of bool, shape (modes,)
        Whether the mode answers at half the drive frequency (imaginary part w/2) rather than at it or between.
    """

    exponent: Complex
    subharmonic: npt.NDArray[np.bool_]


def determinant(
    layer: SlopedLayer, s: Complex, k: Real, w: float, acceleration: float, rows: int
) -> tuple[Complex, Complex]:
    """Return the phase of the determinant and its logarithmic derivative.

    Parameters
    ----------
    s : array of complex, shape (cases,)
        Trial exponents, 1/s.
    k : array, shape (cases,)
        Wavenumbers, 1/m.
    w, acceleration : float
        Angular frequency, rad/s, and peak acceleration, m/s^2.
    rows : int
        N; the rows run from -N to N.

    Returns
    -------
    tuple of array, shape (cases,)
        Determinant divided by its modulus, and d ln(determinant)/ds, s.
    """
    n = np.arange(-rows, rows + 1)[:, None]
    a_n, slope = layer.coefficient_and_slope(s + 1j * w * n, k)
    relative = slope / a_n
    inverse = 1.0 / a_n
    b = acceleration * acceleration
    up = _tail(inverse[rows + 1 :], relative[rows + 1 :], b)
    down = _tail(inverse[:rows][::-1], relative[:rows][::-1], b)
    # det / product of A = D+ D- - (a^2 / A_0) (E+ D- + E- D+), with E = D_2 / A_1 of each side
    centre = b * inverse[rows]
    cross = up.second * down.first + down.second * up.first
    cross_slope = (
        up.second_slope * down.first + up.second * down.first_slope
        + down.second_slope * up.first + down.second * up.first_slope
    )
    value = up.first * down.first - centre * cross
    value_slope = (
        up.first_slope * down.first + up.first * down.first_slope - centre * (cross_slope - relative[rows] * cross)
    )
    with np.errstate(divide="ignore", invalid="ignore"):  # exactly at an exponent: phase 0, infinite slope
        phase = np.prod(a_n / np.abs(a_n), axis=0) * np.where(value == 0.0, 0.0, value / np.abs(value))
        return phase, relative.sum(axis=0) + np.where(value == 0.0, np.inf, value_slope / value)


@dataclass(frozen=True, slots=True)
class _Tail:
    first: Complex
    first_slope: Complex
    second: Complex
    second_slope: Complex


def _tail(inverse: Complex, relative: Complex, b: float) -> _Tail:
    """Fold the rows 1 ... N of one side: D_1, D_2/A_1 and their derivatives."""
    last = np.ones(inverse.shape[1:], np.complex128)
    this = last.copy()
    last_slope = np.zeros_like(last)
    this_slope = np.zeros_like(last)
    for n in range(len(inverse) - 2, -1, -1):
        link = b * inverse[n] * inverse[n + 1]
        value = this - link * last
        slope = this_slope - link * (last_slope - (relative[n] + relative[n + 1]) * last)
        last, this, last_slope, this_slope = this, value, this_slope, slope
        if n % 16 == 0:  # positive factors change neither phase nor logarithmic derivative, and keep the numbers in range
            size = 1.0 / np.maximum(np.abs(this), np.abs(last))
            last, this, last_slope, this_slope = last * size, this * size, last_slope * size, this_slope * size
    second = inverse[0] * last
    return _Tail(this, this_slope, second, inverse[0] * last_slope - relative[0] * second)


def static_growth_rate(layer: SlopedLayer, wavenumber: npt.ArrayLike) -> Real:
    """Return the growth rate of each wavenumber of the layer at rest, 1/s; 0 where it is stable.

    Parameters
    ----------
    wavenumber : array_like
        k, 1/m.

    Returns
    -------
    array
        The real s > 0 with A(s; k) = 0. A rises with s, so there is at most one.

    References
    ----------
    Chandrasekhar, S. (1961), Hydrodynamic and Hydromagnetic Stability, chapter X.

    Examples
    --------
    >>> from containment.physics.dispersion import Layer
    >>> layer = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)
    >>> [round(float(s), 3) for s in static_growth_rate(layer, [52.6, 500.0])]
    [5.768, 0.0]
    """
    k = np.asarray(wavenumber, dtype=np.float64)
    flat = k.ravel()
    result = np.zeros(flat.shape)
    falls = np.flatnonzero(layer.coefficient(0.0, flat).real < 0.0)
    if len(falls):
        kf = flat[falls]
        high = np.ones(len(falls))
        while True:
            low_still = layer.coefficient(high, kf).real < 0.0
            if not low_still.any():
                break
            high[low_still] *= 4.0
        result[falls] = refined(
            lambda s: layer.coefficient(s, kf).real, high * 1e-12, high, precision=1e-14
        )
    return result.reshape(k.shape)


def growing_exponents(layer: SlopedLayer, k: Real, w: float, acceleration: float, *, above: float = 0.0) -> Exponents:
    """Return the largest real growth rate above a level of each mode, at the drive frequency or half of it.

    The determinants at a real growth rate are positive where it is large; the largest sign change going down is
    bracketed on a geometric net and refined. Modes without a sign change get not-a-number.
    """
    best = np.full(len(k), np.nan)
    answer = np.zeros(len(k), dtype=bool)
    for subharmonic in (False, True):
        rate = _largest_real_rate(layer, k, w, acceleration, above, subharmonic)
        better = np.isfinite(rate) & ~(best >= rate)
        best[better], answer[better] = rate[better], subharmonic
    return Exponents(best + 1j * np.where(answer, 0.5 * w, 0.0), answer)


def _largest_real_rate(
    layer: SlopedLayer, k: Real, w: float, acceleration: float, above: float, subharmonic: bool
) -> Real:
    rows = rows_needed(acceleration / (w * w), float(k.max(initial=0.0)))
    frequency = np.full(1, w)

    def sign_of(sigma: Real, chosen: npt.NDArray[np.intp]) -> Real:
        steps = np.arange(rows + 1)[:, None] + (0.5 if subharmonic else 0.0)
        half = Half.from_coefficients(
            layer.coefficient(sigma + 1j * steps * frequency, k[chosen]), subharmonic=subharmonic
        )
        return half.margin(np.full(len(chosen), acceleration))

    everything = np.arange(len(k))
    result = np.full(len(k), np.nan)
    growing = everything[sign_of(np.full(len(k), above), everything) < 0.0]
    if not len(growing):
        return result
    # upwards until the sign is positive and stays so over a net up to where the mode's inertia rules
    top = max(4.0 * w, 4.0 * float(np.sqrt(2.0 * acceleration * k[growing].max())), 10.0 * above)
    net = above + top * np.concatenate([[0.0], np.geomspace(1e-6, 1.0, 25)])
    low = np.full(len(growing), net[0])
    high = np.full(len(growing), np.nan)
    for sigma in net[1:]:
        negative = sign_of(np.full(len(growing), sigma), growing) < 0.0
        low[negative], high[negative] = sigma, np.nan
        turned = ~negative & np.isnan(high)
        high[turned] = sigma
    some = np.flatnonzero(np.isfinite(high))
    chosen = growing[some]
    floor = np.maximum(low[some] - above, 1e-9 * (high[some] - above))
    root = refined(lambda t: sign_of(above + t, chosen), floor, high[some] - above, precision=1e-13)
    result[chosen] = above + root
    return result


def exponents(layer: SlopedLayer, k: Real, w: float, acceleration: float) -> Exponents:
    """Return the exponent of largest real part that Newton's method finds for each mode, growing or decaying.

    Starts at the drive frequency, at half of it, between, and at the free motions of the layer at rest. For decaying
    modes this is the slowest decay found, not a proof that there is none slower; that nothing grows is proven apart,
    by `containment.physics.completeness`.
    """
    free = _free_motion(layer, k)
    # not exactly at a zero of a coefficient, where its row cannot be divided by it
    free = 1.001 * free.real + 1j * (_folded(free.imag, w) + 1e-4 * w)
    starts = np.stack([np.zeros_like(free), np.full_like(free, 0.25j * w), np.full_like(free, 0.5j * w), free])
    rows = rows_needed(acceleration / (w * w), float(k.max(initial=0.0)))
    s = starts.ravel()
    kk = np.tile(k, len(starts))
    settled = np.zeros(len(s), dtype=bool)
    active = np.arange(len(s))
    longest = 0.3 * w
    for _ in range(_NEWTON_STEPS):
        if not len(active):
            break
        with np.errstate(all="ignore"):  # a start that runs away turns into not-a-number and is dropped
            step = 1.0 / determinant(layer, s[active], kk[active], w, acceleration, rows)[1]
            size = np.abs(step)
            step = np.where(size > longest, step * (longest / size), step)
        s[active] -= step
        done = (size <= 1e-12 * (np.abs(s[active]) + 1e-3 * w))
        settled[active[done]] = True
        active = active[~done & np.isfinite(s[active])]
    s = np.where(settled, s.real + 1j * np.abs(_folded(s.imag, w)), np.nan)
    table = s.reshape(len(starts), -1)
    real = np.where(np.isfinite(table.real), table.real, -np.inf)
    best = table[np.argmax(real, axis=0), np.arange(len(k))]
    return Exponents(best, np.abs(best.imag - 0.5 * w) < 1e-6 * w)


def _folded(imaginary: Real, w: float) -> Real:
    """Shift imaginary parts into [-w/2, w/2]: exponents are known up to i n w."""
    result: Real = imaginary - w * np.round(imaginary / w)
    return result


def _free_motion(layer: SlopedLayer, k: Real) -> Complex:
    """Return one decaying or growing free motion of the layer at rest for each mode, roughly (it is only a start)."""
    far = 1e3
    inertia = np.abs(layer.coefficient(far * 1j, k)) / far**2
    s = np.sqrt(-layer.coefficient(0.0, k) / inertia + 0j)
    for _ in range(12):
        with np.errstate(all="ignore"):
            value, slope = layer.coefficient_and_slope(s, k)
            s = s - value / slope
        s = np.where(np.isfinite(s), s, 0.0)
    return s
