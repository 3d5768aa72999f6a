r"""Proven lower bounds of a layer's coefficient over all s with Re s >= 0, for every variant of the layer.

Let S(s) = c + s Z(s) be the stress per unit surface displacement (A = 2 S / rho). Each variant proves, for Re s >= 0,

    floor        abs(S) >= f abs(s)
    small s      abs(S) >= c - b abs(s) - m abs(s)^2 - d abs(s)^(3/2)     for abs(s) <= reach

with c > 0. The first grows with abs(s) and the second falls; with y the root of m y^2 + (b + f) y + d y^(3/2) = c, or
anything smaller, and y <= reach, abs(S) >= f y for every such s: beyond y by the first, below it by the second.

Where the constants come from. v is the velocity field of a unit normal velocity of the surface at s, v0 the Stokes
field of the same (s = 0), L the Stokes operator with the homogeneous conditions of the layer: self-adjoint, its
eigenvalues ell > 0 where the base is rigid.

- Power: S = c + integral (s^2 rho abs(v)^2 + 2 s mu* abs(e)^2) + springs, springs >= 0. Hence Re(S/s) >= min Re(mu*)
  times the least 2 abs(e)^2 that any field of unit surface speed has, which is that of v0 (Helmholtz): f = min Re(mu*)
  Z0/mu.
- Reciprocity: Z(s) = mu* Z0/mu + s rho (v, v0), and expansion in the eigenfields gives abs((v, v0)) <= norm(v0)^2
  max over ell of abs(mu* ell / (s rho + mu* ell)). For real mu* and Re s >= 0 that factor is at most 1, so
  abs(Z) <= Z0 + abs(s) Z1 with Z1 = Z'(0) = rho norm(v0)^2: b = Z0, m = Z1.

References
----------
Dissipation theorem: Lamb, H. (1932), Hydrodynamics, 6th ed., article 344 (from memory). The rest was derived for this
package.
"""

from dataclasses import dataclass

import numpy as np
import numpy.typing as npt

__all__ = ["CoefficientBounds"]

Real = npt.NDArray[np.float64]


@dataclass(frozen=True, slots=True, kw_only=True)
class CoefficientBounds:
    """Constants of the two bounds of abs(S), arrays of one value a wavenumber.

    Attributes
    ----------
    stiffness : array
        c, Pa/m; where it is not positive S has a zero, and the bound is 0.
    floor : array
        f, Pa s/m.
    resistance : array
        b, Pa s/m.
    inertia : array
        m, kg/m^2.
    drag : array
        d, Pa s^(3/2)/m.
    reach : array
        Largest abs(s) at which the second bound holds, 1/s.

    Examples
    --------
    >>> one = np.ones(1)
    >>> float(CoefficientBounds(stiffness=3 * one, floor=one, resistance=one, inertia=one).smallest()[0])
    1.0
    """

    stiffness: Real
    floor: Real
    resistance: Real
    inertia: Real
    drag: Real | float = 0.0
    reach: Real | float = np.inf

    def smallest(self) -> Real:
        """Return the lower bound of abs(S) over all s with Re s >= 0, Pa/m."""
        c = np.maximum(self.stiffness, 0.0)
        half = 0.5 * (self.resistance + self.floor)
        below = half + np.sqrt(half * half + self.inertia * c)
        y = c / np.where(below > 0.0, below, np.inf)
        # d y^(3/2) <= (d/2) (t y^2 + y/t) for every t > 0; t = y^(-1/2) of the undragged root makes it nearly equal
        root = np.sqrt(y)
        heavier = self.inertia + 0.5 * self.drag / np.where(root > 0.0, root, np.inf)
        half = half + 0.25 * self.drag * root
        below = half + np.sqrt(half * half + heavier * c)
        y = c / np.where(below > 0.0, below, np.inf)
        result: Real = self.floor * np.minimum(y, self.reach)
        return result
