r"""Periodic motions of the base that are not a pure sine: what they are made of, and what their peaks are.

A motion is a sum of harmonics of one frequency with fixed ratios; its level a is the acceleration of the fundamental:

    upward acceleration of the base = a Re sum over m of c_m exp(i m w t),   abs(c_1) = 1

The peak of the acceleration, the amplitude (half the stroke) and the peak velocity follow from the level by factors.
"""

import cmath
import math
from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.errors import InputError

__all__ = ["PURE_SINE", "Waveform", "crank_and_rod", "two_frequency"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

_PHASES: Final = 4096
_LARGEST_ROD_RATIO: Final = 0.9


@dataclass(frozen=True, slots=True)
class Waveform:
    """Shape of a periodic vertical motion.

    Parameters
    ----------
    components : tuple of complex
        c_1, c_2, ... c_M: ratio and phase of each harmonic of the upward acceleration; abs(c_1) = 1, c_M not 0.
    left_out : float
        Bound of the sum of abs(c_m) over the harmonics that were left out.

    Raises
    ------
    InputError
        The fundamental is missing: the motion then has another period.

    Examples
    --------
    >>> wave = Waveform((1.0, 0.5))
    >>> round(wave.peak_acceleration, 6), round(wave.amplitude, 6)  # the second harmonic adds little to the stroke
    (1.5, 1.0)
    """

    components: tuple[complex, ...]
    left_out: float = 0.0

    def __post_init__(self) -> None:
        if not self.components or abs(abs(self.components[0]) - 1.0) > 1e-12:
            raise InputError(
                f"components {self.components} of a motion: the first must have modulus 1; the others are relative to it"
            )
        if self.components[-1] == 0.0:
            raise InputError(f"components {self.components} of a motion: the last must not be 0")

    @property
    def total(self) -> float:
        """Sum of abs(c_m): no peak of the acceleration exceeds it times the level."""
        return float(sum(abs(c) for c in self.components))

    @property
    def peak_acceleration(self) -> float:
        """Largest size of the acceleration, either way, over the level."""
        return float(np.max(np.abs(self._series(0))))

    @property
    def peak_upward_acceleration(self) -> float:
        """Largest upward acceleration over the level: with it the layer in an inverted vessel weighs most."""
        return float(np.max(self._series(0)))

    @property
    def peak_downward_acceleration(self) -> float:
        """Largest downward acceleration over the level."""
        return float(-np.min(self._series(0)))

    @property
    def peak_velocity(self) -> float:
        """Peak velocity times w over the level."""
        return float(np.max(np.abs(self._series(1))))

    @property
    def amplitude(self) -> float:
        """Half the stroke times w^2 over the level."""
        return float(0.5 * np.ptp(self._series(2)))

    def coupling(self, *, inverted: bool = True) -> Complex:
        """Return the c_m of G0 - G(t) = a Re sum of c_m exp(i m w t), G along the inward normal of the surface.

        An upward acceleration of the base strengthens the pull away from the base of a hanging layer, and presses a
        layer that lies on its base.
        """
        sign = 1.0 if inverted else -1.0
        return sign * np.array(self.components, np.complex128)

    def _series(self, integrations: int) -> Real:
        turn = 2.0 * np.pi * np.arange(_PHASES) / _PHASES
        m = np.arange(1, len(self.components) + 1)
        c = np.array(self.components, np.complex128) / (1j * m) ** integrations
        result: Real = np.real(np.exp(1j * turn[:, None] * m) @ c)
        return result


PURE_SINE: Final = Waveform((1.0,))
"""The pure sine: level = peak acceleration."""


def two_frequency(*, ratio: float, phase: float = 0.0) -> Waveform:
    """Return a cosine with its second harmonic, upward acceleration = a [cos(w t) + ratio cos(2 w t + phase)].

    Parameters
    ----------
    ratio : float
        Acceleration of the second harmonic over that of the fundamental, >= 0.
    phase : float
        rad; it says where the second harmonic stands when the fundamental's acceleration is at its upward peak.

    Examples
    --------
    >>> round(two_frequency(ratio=0.3, phase=0.0).peak_upward_acceleration, 6)
    1.3
    """
    if not 0.0 <= ratio < math.inf:
        raise InputError(f"ratio {ratio} of the second harmonic: must be at least 0")
    return Waveform((1.0, ratio * cmath.exp(1j * phase))) if ratio > 0.0 else PURE_SINE


def crank_and_rod(*, rod_ratio: float, crank_below: bool = True, accuracy: float = 1e-5) -> Waveform:
    r"""Return the motion of a slider driven by a crank of radius r through a rod of length l.

    Parameters
    ----------
    rod_ratio : float
        r / l, from 0 (a pure sine: scotch yoke) up to 0.9.
    crank_below : bool
        Whether the crank turns below the vessel; the sharper of the two peaks of the acceleration is then downward.
    accuracy : float
        Harmonics are left out while the sum of what is left out stays below this share of the fundamental.

    Returns
    -------
    Waveform
        Its level is the acceleration of the fundamental, r w^2.

    Notes
    -----
    x = r cos t + l sqrt(1 - (r/l)^2 sin^2 t), t = w time. The square root has even harmonics only; they fall like
    (r/2l)^m. Constant speed of the crank, no play.

    Examples
    --------
    >>> wave = crank_and_rod(rod_ratio=0.25)
    >>> round(wave.peak_downward_acceleration, 4), round(wave.peak_upward_acceleration, 2)  # 1 + r/l; about 1 - r/l
    (1.25, 0.75)
    """
    if not 0.0 <= rod_ratio <= _LARGEST_ROD_RATIO:
        raise InputError(f"rod ratio {rod_ratio} (crank radius over rod length): must be from 0 to {_LARGEST_ROD_RATIO}")
    if not 0.0 < accuracy < 1.0:
        raise InputError(f"accuracy {accuracy} of the harmonics of a crank: must lie between 0 and 1")
    if rod_ratio == 0.0:
        return PURE_SINE
    turn = 2.0 * np.pi * np.arange(_PHASES) / _PHASES
    sine2 = (rod_ratio * np.sin(turn)) ** 2
    # sqrt(1 - z) - 1 without loss for a long rod
    shape = -sine2 / (1.0 + np.sqrt(1.0 - sine2)) / rod_ratio
    series = 2.0 * np.fft.rfft(shape).real / _PHASES
    m = np.arange(len(series))
    # half a turn later than the top of the stroke: the fundamental's upward acceleration is at its peak
    acceleration = -(m.astype(np.float64) ** 2) * series
    acceleration[1::2] = 0.0
    acceleration = acceleration[: len(series) // 2]  # the rest is rounding
    sizes = np.abs(acceleration)
    remaining = np.cumsum(sizes[::-1])[::-1]
    enough = np.flatnonzero(remaining < accuracy)
    last = max(int(enough[0]) - 1, 1) if len(enough) else len(acceleration) - 1
    last -= last % 2 if last > 1 else 0
    kept = acceleration[1 : last + 1] * (1.0 if crank_below else -1.0)
    kept[0] = 1.0
    return Waveform(tuple(complex(c) for c in kept), float(remaining[last + 1]))
