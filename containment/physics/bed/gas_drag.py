"""Gas in a shaken bed: whether it matters for the flight, and whether it can be taken as incompressible."""

import numpy as np
import numpy.typing as npt

from containment.physics.bed.permeability import AIR_VISCOSITY, permeability

__all__ = ["flight_drag", "gas_compliance"]

Real = npt.NDArray[np.float64]
Values = float | Real


def flight_drag(
    *,
    diameter: Values,
    voidage: Values,
    bulk_density: Values,
    angular_frequency: Values,
    gas_viscosity: float = AIR_VISCOSITY,
) -> Real:
    """Return the drag number D of a bed in flight over a closed base: mu/(K rho_b w).

    Parameters
    ----------
    diameter, voidage, bulk_density : array_like
        m; e; kg/m^3.
    angular_frequency : array_like
        rad/s.
    gas_viscosity : float
        Pa s.

    Notes
    -----
    Below about 0.1 the gas does not matter; above about 1 it rules, and the flight is much lower than `flight` says
    without drag (`flight(..., drag=D)` has it). The gap fills only through the bed: a base that lets gas through, or slits
    at the wall, lowers D.

    References
    ----------
    Kroll (1954), Forschung 20, 2; Gutman (1976), Trans. IChemE 54, 174 (both from memory).

    Examples
    --------
    >>> D = flight_drag(diameter=1e-4, voidage=0.4, bulk_density=1500.0, angular_frequency=157.08)
    >>> float(D.round(2))
    7.82
    """
    k = permeability(diameter=diameter, voidage=voidage)
    result: Real = gas_viscosity / (k * np.asarray(bulk_density, np.float64) * np.asarray(angular_frequency, np.float64))
    return result


def gas_compliance(
    *,
    diameter: Values,
    voidage: Values,
    depth: Values,
    angular_frequency: Values,
    ambient_pressure: Values,
    gas_viscosity: float = AIR_VISCOSITY,
) -> Real:
    """Return the time in which pressure spreads through a bed, times w: mu e h^2 w/(K p).

    Notes
    -----
    Well below 1 the gas in the pores is as good as incompressible, which `flight` with drag takes for granted; above,
    pressure waves stay in the bed and neither model holds.

    References
    ----------
    Gutman (1976), as `flight_drag` (from memory); diffusion of pressure in porous media, textbook.

    Examples
    --------
    >>> t = gas_compliance(diameter=1e-4, voidage=0.4, depth=0.1, angular_frequency=157.08, ambient_pressure=101325.0)
    >>> float(t.round(2))
    11.43
    """
    k = permeability(diameter=diameter, voidage=voidage)
    time = gas_viscosity * np.asarray(voidage, np.float64) * np.square(np.asarray(depth, np.float64)) / (
        k * np.asarray(ambient_pressure, np.float64)
    )
    result: Real = time * np.asarray(angular_frequency, np.float64)
    return result
