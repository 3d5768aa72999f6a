"""What kind of powder it is for the gas between its grains, and what else shaking does to it."""

import math
from typing import Final

__all__ = ["COMPACTION_LIMIT", "GROUP_MEANING", "compaction_drop", "powder_group", "segregates", "sifts_through"]

GROUP_MEANING: Final = {
    "A": "holds gas for a while: shaken or freshly filled it may run like a liquid and flood through small openings",
    "B": "loses its gas at once: it behaves as dry sand does",
    "C": "cohesive: it arches, sticks and cracks; gas finds channels, so that what gas carries ends without warning",
    "D": "coarse: gas in the pores does not matter",
}
"""What the group means for holding and shaking (after Geldart 1973; wording for this use)."""

COMPACTION_LIMIT: Final = 0.64
"""Share of solids in spheres packed at random as densely as they go: Scott & Kilgour (1969) 0.6366 (from memory)."""

_COHESIVE_BELOW: Final = 30e-6
_FLOODS_BELOW: Final = 0.225
_SPOUTS_ABOVE: Final = 1e-3
_SEGREGATION_RATIO: Final = 1.3
_SIFTING_RATIO: Final = 1.0 / (2.0 / math.sqrt(3.0) - 1.0)


def powder_group(*, diameter: float, particle_density: float, gas_density: float = 1.204) -> str:
    """Return the Geldart group of a powder in a gas: A, B, C or D.

    Parameters
    ----------
    diameter : float
        Mean diameter, m.
    particle_density, gas_density : float
        kg/m^3.

    Notes
    -----
    C below 30 um; A below (rho_p - rho_g) d = 225 (g/cm^3) um; D above (rho_p - rho_g) d^2 = 10^6 (g/cm^3) um^2; B between.
    The border of C is wide (20 to 40 um) and depends on cohesion.

    References
    ----------
    Geldart (1973), Powder Technology 7, 285 (borders A/B and B/D from memory; 30 um read in a trade article).

    Examples
    --------
    >>> [powder_group(diameter=d, particle_density=2500.0) for d in (1e-5, 6e-5, 2e-4, 2e-3)]
    ['C', 'A', 'B', 'D']
    """
    heavier = particle_density - gas_density
    if diameter < _COHESIVE_BELOW:
        return "C"
    if heavier * diameter**2 > _SPOUTS_ABOVE:
        return "D"
    return "A" if heavier * diameter < _FLOODS_BELOW else "B"


def segregates(*, fine: float, coarse: float) -> bool:
    """Return whether grains of two sizes part when shaken: a size ratio above 1.3.

    References
    ----------
    Williams (1976), Powder Technology 15, 245 (from memory).

    Examples
    --------
    >>> segregates(fine=1e-3, coarse=1.2e-3), segregates(fine=1e-3, coarse=2e-3)
    (False, True)
    """
    return coarse / fine > _SEGREGATION_RATIO


def sifts_through(*, fine: float, coarse: float) -> bool:
    """Return whether fine grains fall through the gaps of densely packed coarse ones at rest: a ratio above 6.46.

    Notes
    -----
    The gap between three touching spheres passes a sphere of (2/sqrt(3) - 1) of their diameter.

    References
    ----------
    Geometry.

    Examples
    --------
    >>> sifts_through(fine=1e-3, coarse=6.4e-3), sifts_through(fine=1e-3, coarse=6.5e-3)
    (False, True)
    """
    return coarse / fine > _SIFTING_RATIO


def compaction_drop(*, depth: float, voidage: float) -> float:
    """Return by how much shaking can lower the level of a bed, m: depth (1 - (1 - e)/0.64); 0 where it is denser already.

    Examples
    --------
    >>> round(compaction_drop(depth=0.1, voidage=0.45), 4)
    0.0141
    """
    return max(0.0, depth * (1.0 - (1.0 - voidage) / COMPACTION_LIMIT))
