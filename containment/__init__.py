"""Does a viscous liquid, or a granular bed, stay in its vessel while it is shaken vertically?"""

import importlib
from typing import TYPE_CHECKING, Any, Final

_PUBLIC: Final = {
    # name: module that defines it; loaded at first use, so that importing the package costs nothing
    "InputError": "containment.errors",
    "NotComputableError": "containment.errors",
    "ContainmentError": "containment.errors",
}

__all__ = sorted(_PUBLIC)

if TYPE_CHECKING:
    from containment.errors import ContainmentError, InputError, NotComputableError


def __getattr__(name: str) -> Any:
    if name in _PUBLIC:
        return getattr(importlib.import_module(_PUBLIC[name]), name)
    raise AttributeError(f"module 'containment' has no attribute {name!r}")


def __dir__() -> list[str]:
    return __all__
