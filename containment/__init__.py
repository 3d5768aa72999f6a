"""Does a viscous liquid, or a granular bed, stay in its vessel while it is shaken vertically?"""

import importlib
from typing import TYPE_CHECKING, Any, Final

_PUBLIC: Final = {
    # name: module that defines it; loaded at first use, so that importing the package costs nothing
    "InputError": "containment.errors",
    "NotComputableError": "containment.errors",
    "ContainmentError": "containment.errors",
    "Grains": "containment.given.grains",
    "grain": "containment.given.grains",
    "grains": "containment.given.grains",
    "BedVerdict": "containment.judgement.bed_verdict",
    "assess_bed": "containment.judgement.bed_verdict",
    "Liquid": "containment.given.liquid",
    "liquid": "containment.given.liquid",
    "slurry": "containment.given.slurry",
    "Cylinder": "containment.given.vessel",
    "Box": "containment.given.vessel",
    "Annulus": "containment.given.vessel",
    "Slot": "containment.given.vessel",
    "Unbounded": "containment.given.vessel",
    "Motion": "containment.given.motion",
    "waveform": "containment.given.motion",
    "DriveLimits": "containment.given.drive",
    "Surroundings": "containment.given.surroundings",
    "Verdict": "containment.judgement.verdict",
    "assess": "containment.judgement.verdict",
    "holding_window": "containment.judgement.verdict",
    "HoldingWindow": "containment.judgement.window",
    "StudyResult": "containment.studies.result",
    "study": "containment.studies.study",
    "sweep": "containment.studies.study",
}

__all__ = sorted(_PUBLIC)

if TYPE_CHECKING:
    from containment.errors import ContainmentError, InputError, NotComputableError
    from containment.given.drive import DriveLimits
    from containment.given.grains import Grains, grain, grains
    from containment.given.liquid import Liquid, liquid
    from containment.given.motion import Motion, waveform
    from containment.given.slurry import slurry
    from containment.given.surroundings import Surroundings
    from containment.given.vessel import Annulus, Box, Cylinder, Slot, Unbounded
    from containment.judgement.bed_verdict import BedVerdict, assess_bed
    from containment.judgement.verdict import Verdict, assess, holding_window
    from containment.judgement.window import HoldingWindow
    from containment.studies.result import StudyResult
    from containment.studies.study import study, sweep


def __getattr__(name: str) -> Any:
    if name in _PUBLIC:
        return getattr(importlib.import_module(_PUBLIC[name]), name)
    raise AttributeError(f"module 'containment' has no attribute {name!r}")


def __dir__() -> list[str]:
    return __all__
