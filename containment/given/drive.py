"""What a shaker can do: stroke, velocity, acceleration, force and frequency range, as its data sheet gives them."""

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

from containment.errors import InputError
from containment.given.motion import FREQUENCY_RANGE
from containment.given.quantities import si_value
from containment.given.waveforms import PURE_SINE, Waveform

if TYPE_CHECKING:
    import numpy as np
    import numpy.typing as npt

__all__ = ["DriveLimits"]

_KINDS = {
    "max_stroke": "length",
    "max_velocity": "velocity",
    "max_acceleration": "acceleration",
    "max_force": "force",
    "moving_mass": "mass",
}


@dataclass(frozen=True, slots=True, kw_only=True)
class DriveLimits:
    """Limits of a drive; None where a limit is not stated.

    Parameters
    ----------
    max_stroke, max_velocity, max_acceleration, max_force, moving_mass : str or pint.Quantity or float, optional
        Peak to peak (m), peak (m/s), peak (m/s^2), peak (N), and the mass that is moved besides the product (kg).
    frequency_range : tuple of two, optional
        Lowest and highest frequency, Hz.
    name : str
        Name of the drive, for the screen.

    Raises
    ------
    InputError
        A value that is not positive, a range that is empty, or a force without the moving mass.

    Examples
    --------
    >>> limits = DriveLimits(max_stroke="25 mm", max_velocity="1 m/s")
    >>> [round(float(a), 1) for a in limits.largest_acceleration([5.0, 50.0], product_mass=0.1)]
    [12.3, 314.2]
    """

    max_stroke: Any = None
    max_velocity: Any = None
    max_acceleration: Any = None
    max_force: Any = None
    moving_mass: Any = None
    frequency_range: Any = None
    name: str = ""

    def __post_init__(self) -> None:
        for field, kind in _KINDS.items():
            value = getattr(self, field)
            if value is not None:
                checked = si_value(value, kind, field.replace("_", " "), least=0.0 if field == "moving_mass" else None)
                if field != "moving_mass" and not checked > 0.0:
                    raise InputError(f"{field.replace('_', ' ')}: {value!s} is not allowed; it must be greater than 0")
                object.__setattr__(self, field, checked)
        if self.max_force is not None and self.moving_mass is None:
            raise InputError("max force: the moving mass is missing; give the mass that is moved besides the product")
        if self.frequency_range is not None:
            low, high = (
                si_value(f, "frequency", "frequency range", least=FREQUENCY_RANGE[0], most=FREQUENCY_RANGE[1])
                for f in self.frequency_range
            )
            if not low < high:
                raise InputError(
                    f"frequency range: {low:g} Hz to {high:g} Hz is empty; the first must be the smaller"
                )
            object.__setattr__(self, "frequency_range", (low, high))

    @property
    def stated(self) -> bool:
        """Whether any limit is stated."""
        return any(getattr(self, field) is not None for field in (*_KINDS, "frequency_range"))

    def largest_acceleration(
        self, frequency: "npt.ArrayLike", *, product_mass: float, shape: Waveform = PURE_SINE
    ) -> "npt.NDArray[np.float64]":
        """Return the largest peak acceleration that the drive reaches at a frequency with the product on it, m/s^2.

        Infinite where no limit is stated; 0 outside the frequency range.
        """
        import numpy as np  # not needed for reading options

        f = np.asarray(frequency, dtype=np.float64)
        w = 2.0 * math.pi * f
        most = np.full(f.shape, np.inf)
        if self.max_stroke is not None:
            most = np.minimum(most, 0.5 * self.max_stroke * w * w * shape.peak_acceleration / shape.amplitude)
        if self.max_velocity is not None:
            most = np.minimum(most, self.max_velocity * w * shape.peak_acceleration / shape.peak_velocity)
        if self.max_acceleration is not None:
            most = np.minimum(most, self.max_acceleration)
        if self.max_force is not None:
            most = np.minimum(most, self.max_force / (self.moving_mass + product_mass))
        if self.frequency_range is not None:
            low, high = self.frequency_range
            most = np.where((f < low * (1.0 - 1e-12)) | (f > high * (1.0 + 1e-12)), 0.0, most)
        return most
