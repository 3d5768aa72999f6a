"""Motions of the base: a vertical sine, given by its frequency and one measure of its size."""

from dataclasses import dataclass
from typing import Any

from containment.errors import InputError
from containment.given.quantities import angular_frequency, si_value

__all__ = ["FREQUENCY_RANGE", "Motion"]

FREQUENCY_RANGE = (0.1, 1e5)
"""Frequencies that are accepted, Hz."""


@dataclass(frozen=True, slots=True, init=False)
class Motion:
    """A vertical sine, A cos(w t).

    Parameters
    ----------
    frequency : str or pint.Quantity or float
        Hz; text may say rpm.
    acceleration, amplitude, stroke, velocity : str or pint.Quantity or float
        Exactly one: peak acceleration A w^2 (m/s^2), amplitude A (zero to peak, m), stroke 2 A (peak to peak, m), peak
        velocity A w (m/s).

    Raises
    ------
    InputError
        None or more than one measure of size, or a value out of range.

    Examples
    --------
    >>> round(Motion(frequency="50 Hz", stroke="5 mm").acceleration, 2)
    246.74
    """

    frequency: float
    acceleration: float

    def __init__(
        self,
        *,
        frequency: Any,
        acceleration: Any = None,
        amplitude: Any = None,
        stroke: Any = None,
        velocity: Any = None,
    ) -> None:
        given = {"acceleration": acceleration, "amplitude": amplitude, "stroke": stroke, "velocity": velocity}
        named = [name for name, value in given.items() if value is not None]
        if len(named) != 1:
            said = "none is given" if not named else f"given: {', '.join(named)}"
            raise InputError(
                f"motion: {said}; expected exactly one of acceleration (peak), amplitude (zero to peak), stroke (peak to "
                "peak), velocity (peak)"
            )
        f = si_value(frequency, "frequency", "frequency", least=FREQUENCY_RANGE[0], most=FREQUENCY_RANGE[1])
        w = angular_frequency(f)
        kind = {"amplitude": "length", "stroke": "length"}.get(named[0], named[0])
        size = si_value(given[named[0]], kind, named[0], above=0.0, most=1e9)
        factor = {"acceleration": 1.0, "amplitude": w * w, "stroke": 0.5 * w * w, "velocity": w}[named[0]]
        object.__setattr__(self, "frequency", f)
        object.__setattr__(self, "acceleration", size * factor)

    @property
    def angular_frequency(self) -> float:
        """Angular frequency w, rad/s."""
        return angular_frequency(self.frequency)

    @property
    def amplitude(self) -> float:
        """Amplitude A, zero to peak, m."""
        return self.acceleration / self.angular_frequency**2

    @property
    def stroke(self) -> float:
        """Stroke 2 A, peak to peak, m."""
        return 2.0 * self.amplitude

    @property
    def velocity(self) -> float:
        """Peak velocity A w, m/s."""
        return self.acceleration / self.angular_frequency
