"""Cautions: hazards that apply to a case, each with its reason. Shared by liquids and beds.

Figures of directives and standards are cited as orientation, never as a statement of compliance.
"""

from collections.abc import Iterable
from typing import Final

from containment.judgement.findings import Caution

__all__ = ["GOVERNING_RULES", "machine_cautions", "product_cautions", "trial_cautions"]

GOVERNING_RULES: Final = Caution(
    topic="governing rules",
    text="This is a feasibility check, not an approval: local codes and the judgement of licensed practice prevail.",
)

_AUDIBLE_FROM: Final = 20.0
_HAND_ARM: Final = (8.0, 1000.0)
_WHOLE_BODY: Final = (0.5, 80.0)


def machine_cautions(*, frequency: float, acceleration: float) -> list[Caution]:
    """Return the cautions of a shaking machine at a drive point (Hz, peak m/s^2)."""
    found = []
    rms = acceleration / 2.0**0.5
    if _HAND_ARM[0] <= frequency <= _HAND_ARM[1]:
        found.append(
            Caution(
                topic="hand-arm vibration",
                text=f"The table moves at {rms:.0f} m/s^2 r.m.s.; nobody should hold or steady it. EU 2002/44/EC asks for "
                "action from 2.5 and stops at 5 m/s^2 over eight hours.",
            )
        )
    if _WHOLE_BODY[0] <= frequency <= _WHOLE_BODY[1]:
        found.append(
            Caution(
                topic="whole-body vibration",
                text=f"At {frequency:.3g} Hz the floor carries it: isolate the machine. EU 2002/44/EC asks for action from "
                "0.5 and stops at 1.15 m/s^2 over eight hours.",
            )
        )
    if frequency >= _AUDIBLE_FROM:
        found.append(
            Caution(
                topic="noise",
                text="Measure it at the work place: EU 2003/10/EC acts from 80 dB(A) and limits at 87; US 29 CFR 1910.95 "
                "acts from 85 dB(A) and permits 90.",
            )
        )
    found.append(
        Caution(
            topic="fasteners and guards",
            text=f"Everything on the table bears {acceleration / 9.80665 + 1.0:.0f} times its weight: lock fasteners, guard "
            "against loose parts, assess the machine (ISO 12100).",
        )
    )
    return found


def product_cautions(
    hazards: Iterable[tuple[str, str]],
    *,
    temperature: float | None,
    flash_point: float | None = None,
) -> list[Caution]:
    """Return the cautions of the product: what its table entry says, heat, and closeness to the flash point (K)."""
    found = [Caution(topic=topic, text=sentence) for topic, sentence in hazards]
    if temperature is not None and temperature >= 316.0:
        found.append(
            Caution(
                topic="hot product",
                text=f"At {temperature - 273.15:.0f} degC a spill burns: above about 43 degC contact is judged by time and "
                "material (ISO 13732-1). Shield people from below and from the side.",
            )
        )
    if temperature is not None and flash_point is not None and temperature > flash_point - 15.0:
        found.append(
            Caution(
                topic="ignition",
                text=f"The product is within 15 K of its flash point ({flash_point - 273.15:.0f} degC) or above it: keep "
                "ignition sources away and have the area classified.",
            )
        )
    return found


def trial_cautions(*, stand_in: str = "a harmless liquid") -> list[Caution]:
    """Return what holds for every verdict; `stand_in` is what a first trial is made with."""
    return [
        Caution(topic="trial first", text=f"Try it at small scale, with {stand_in} and a full catch tray, first."),
        GOVERNING_RULES,
    ]
