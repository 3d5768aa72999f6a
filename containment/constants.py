"""Constants with their sources, SI."""

from typing import Final

__all__ = ["ABSOLUTE_ZERO_CELSIUS", "STANDARD_ATMOSPHERE", "STANDARD_GRAVITY"]

STANDARD_GRAVITY: Final = 9.80665
"""Standard acceleration of free fall g_n, m/s^2 (3rd CGPM, 1901; exact by definition)."""

STANDARD_ATMOSPHERE: Final = 101325.0
"""Standard atmosphere, Pa (10th CGPM, 1954; exact by definition)."""

ABSOLUTE_ZERO_CELSIUS: Final = -273.15
"""Absolute zero on the Celsius scale, degC (exact by definition)."""
