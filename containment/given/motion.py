"""Motions of the base, given by their frequency and one measure of their size; by default a vertical sine."""

from dataclasses import dataclass
from typing import Any

from containment.errors import InputError
from containment.given.quantities import angular_frequency, si_value
from containment.given.waveforms import PURE_SINE, Waveform, crank_and_rod, two_frequency

__all__ = ["FREQUENCY_RANGE", "Motion", "waveform"]

FREQUENCY_RANGE = (0.1, 1e5)
"""Frequencies that are accepted, Hz."""


@dataclass(frozen=True, slots=True, init=False)
class Motion:
    """A vertical periodic motion: by default the sine A cos(w t).

    Parameters
    ----------
    frequency : str or pint.Quantity or float
        Hz; text may say rpm.
    acceleration, amplitude, stroke, velocity : str or pint.Quantity or float
        Exactly one: peak acceleration (m/s^2), amplitude (half the stroke, m), stroke (peak to peak, m), peak velocity
        (m/s), each of the whole motion.
    second_harmonic : float or (float, angle), optional
        Acceleration of the second harmonic over that of the fundamental, and its phase (text or rad).
    crank_ratio : float, optional
        Crank radius over rod length of a crank-and-rod exciter below the vessel.

    Raises
    ------
    InputError
        None or more than one measure of size, two shapes at once, or a value out of range.

    Examples
    --------
    >>> round(Motion(frequency="50 Hz", stroke="5 mm").acceleration, 2)
    246.74
    >>> round(Motion(frequency="50 Hz", stroke="5 mm", crank_ratio=0.25).acceleration, 2)  # 1 + r/l times as much
    308.41
    """

    frequency: float
    acceleration: float
    waveform: Waveform

    def __init__(
        self,
        *,
        frequency: Any,
        acceleration: Any = None,
        amplitude: Any = None,
        stroke: Any = None,
        velocity: Any = None,
        second_harmonic: Any = None,
        crank_ratio: Any = None,
    ) -> None:
        given = {"acceleration": acceleration, "amplitude": amplitude, "stroke": stroke, "velocity": velocity}
        named = [name for name, value in given.items() if value is not None]
        if len(named) != 1:
            said = "none is given" if not named else f"given: {', '.join(named)}"
            raise InputError(
                f"motion: {said}; expected exactly one of acceleration (peak), amplitude (zero to peak), stroke (peak to "
                "peak), velocity (peak)"
            )
        shape = waveform(second_harmonic=second_harmonic, crank_ratio=crank_ratio)
        f = si_value(frequency, "frequency", "frequency", least=FREQUENCY_RANGE[0], most=FREQUENCY_RANGE[1])
        w = angular_frequency(f)
        kind = {"amplitude": "length", "stroke": "length"}.get(named[0], named[0])
        size = si_value(given[named[0]], kind, named[0], above=0.0, most=1e9)
        a = shape.peak_acceleration
        factor = {
            "acceleration": 1.0,
            "amplitude": w * w * a / shape.amplitude,
            "stroke": 0.5 * w * w * a / shape.amplitude,
            "velocity": w * a / shape.peak_velocity,
        }[named[0]]
        object.__setattr__(self, "frequency", f)
        object.__setattr__(self, "acceleration", size * factor)
        object.__setattr__(self, "waveform", shape)

    @property
    def angular_frequency(self) -> float:
        """Angular frequency w, rad/s."""
        return angular_frequency(self.frequency)

    @property
    def amplitude(self) -> float:
        """Amplitude, half the stroke, m."""
        shape = self.waveform
        return self.acceleration / self.angular_frequency**2 * shape.amplitude / shape.peak_acceleration

    @property
    def stroke(self) -> float:
        """Stroke, peak to peak, m."""
        return 2.0 * self.amplitude

    @property
    def velocity(self) -> float:
        """Peak velocity, m/s."""
        shape = self.waveform
        return self.acceleration / self.angular_frequency * shape.peak_velocity / shape.peak_acceleration


def waveform(*, second_harmonic: Any = None, crank_ratio: Any = None) -> Waveform:
    """Return the shape of a motion: a pure sine, or one with a second harmonic, or that of a crank and rod.

    Raises
    ------
    InputError
        Both shapes at once, or a ratio out of range.
    """
    if second_harmonic is not None and crank_ratio is not None:
        raise InputError("motion: second harmonic and crank ratio are both given; expected one shape")
    if second_harmonic is not None:
        pair = second_harmonic if isinstance(second_harmonic, tuple) else (second_harmonic, 0.0)
        ratio = si_value(pair[0], "ratio", "second harmonic", least=0.0, most=100.0)
        return two_frequency(ratio=ratio, phase=si_value(pair[1], "angle", "phase of the second harmonic"))
    if crank_ratio is not None:
        return crank_and_rod(rod_ratio=si_value(crank_ratio, "ratio", "crank ratio", least=0.0, most=0.9), accuracy=1e-4)
    return PURE_SINE
