"""What a study's numbers depend on besides its plan: versions of the software, and the property tables."""

import hashlib
from pathlib import Path

from containment.data_files import data_file
from containment.studies.plan import Plan

__all__ = ["versions_of"]

_TABLES = ("liquids.csv", "grains.csv", "drives.csv")


def versions_of(plan: Plan) -> dict[str, str]:
    """Return the versions of the packages that compute, and digests of the property tables and of the user's own."""
    from importlib.metadata import version

    found = {name: version(name) for name in ("containment", "numpy", "scipy")}
    files = [data_file(name) for name in _TABLES]
    found["property tables"] = _digest(files)
    own = [Path(name) for name in plan.fixed.get("table", ())]
    if own:
        found["own tables"] = _digest(own)
    return found


def _digest(files: list[Path]) -> str:
    whole = hashlib.sha256()
    for file in files:
        whole.update(hashlib.sha256(file.read_bytes()).digest())
    return whole.hexdigest()[:12]
