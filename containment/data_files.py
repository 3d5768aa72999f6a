"""Where the data files are, in a checkout and in an installed wheel."""

from pathlib import Path

from containment.errors import ContainmentError

__all__ = ["data_file"]


def data_file(name: str) -> Path:
    """Return the path of a data file that comes with the package.

    Raises
    ------
    ContainmentError
        The file is in neither of the two places: the installation is broken.
    """
    here = Path(__file__).resolve().parent
    for folder in (here / "data", here.parent / "data"):
        if (folder / name).is_file():
            return folder / name
    raise ContainmentError(f"data file {name}: not found beside the package in {here}; install the package again")
