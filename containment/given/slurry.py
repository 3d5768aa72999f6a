"""A slurry: solids suspended in a liquid, as one liquid of its own."""

import dataclasses
import math
from typing import Any, Final

from containment.errors import InputError
from containment.given.liquid import Liquid
from containment.given.quantities import si_value

__all__ = ["slurry"]

_SOLIDS_ERROR: Final = 0.01  # how well a volume fraction is known, common practice
_PACKING_ERROR: Final = 0.02  # how well the closest packing is known, common practice
_THINS_FROM: Final = 0.3  # volume fraction from which suspensions thin with shear, common practice


def slurry(
    liquid: Liquid, *, solids: Any, max_packing: Any, particle_density: Any = None, intrinsic: Any = 2.5
) -> Liquid:
    """Return a liquid with solids in it as one liquid; its surface tension and vapour pressure stay the liquid's.

    Parameters
    ----------
    liquid : Liquid
        Newtonian.
    solids, max_packing : str or pint.Quantity or float
        Volume fraction of solids and that of their closest packing.
    particle_density : str or pint.Quantity or float, optional
        kg/m^3 as a plain number; where it is left out the density stays the liquid's, and the slurry says so.
    intrinsic : float
        Intrinsic viscosity: 2.5 for spheres, 3 to 5 for grains with corners.

    Raises
    ------
    InputError
        A value that is not allowed (see `physics.suspension`), or a liquid that is not Newtonian.

    Examples
    --------
    >>> syrup = Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
    >>> made = slurry(syrup, solids=0.35, max_packing=0.64, particle_density=2500.0)
    >>> round(made.viscosity, 1), round(made.density)
    (35.5, 1792)
    """
    from containment.physics.suspension import suspension_density, suspension_viscosity, viscosity_sensitivity

    if liquid.rheology is not None:
        raise InputError(f"solids: {liquid.name} is not Newtonian; the law for suspensions needs a Newtonian liquid")
    phi = si_value(solids, "ratio", "solids", least=0.0, most=1.0)
    packed = si_value(max_packing, "ratio", "max packing", above=0.0, most=1.0)
    heavy = liquid.density
    mixed = "taken as the liquid's: no particle density is given"
    if particle_density is not None:
        heavy = si_value(particle_density, "density", "particle density", least=1.0, most=3e4)
        mixed = "mixed by volume from liquid and particles"
    shape = si_value(intrinsic, "ratio", "intrinsic viscosity", least=1.0, most=100.0)
    viscosity = float(suspension_viscosity(liquid.viscosity, solids=phi, max_packing=packed, intrinsic=shape))
    by_solids, by_packing = viscosity_sensitivity(solids=phi, max_packing=packed, intrinsic=shape)
    spread = math.hypot(
        liquid.uncertainty.get("viscosity", 0.0), float(by_solids) * _SOLIDS_ERROR, float(by_packing) * _PACKING_ERROR
    )
    law = f"Krieger & Dougherty 1959 (from memory) with {phi:.3g} of solids and a closest packing of {packed:.3g}"
    sentence = (
        f"The viscosity is an estimate for {phi:.3g} of solids by volume, good to some {100.0 * spread:.0f} % at best: "
        "measure it. Solids settle, in the turned vessel towards the opening."
    )
    if phi >= _THINS_FROM:
        sentence += " At this fraction it thins with shear, so the layer may flow more easily while it is shaken."
    if particle_density is None:
        sentence += " Its density is taken as the liquid's: heavier solids make it fall sooner; give the particle density."
    return dataclasses.replace(
        liquid,
        name=f"{liquid.name} with {100.0 * phi:.3g} vol% solids",
        density=float(suspension_density(liquid.density, particle_density=heavy, solids=phi)),
        viscosity=viscosity,
        uncertainty={**liquid.uncertainty, "viscosity": spread},
        hazards=(*liquid.hazards, ("suspension", sentence)),
        sources={
            **liquid.sources,
            "viscosity": f"{law} over: {liquid.sources.get('viscosity', 'given by the user')}",
            "density": mixed,
        },
    )
