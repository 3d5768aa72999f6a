r"""What hangs below an arch: an arch bends upwards between its supports, and the powder under it has to hang from it.

A bed whose lower face is flat does not end at its arch. The lens between arch and face is carried by tension, however
strong the arch is; where the tension is too much, pieces break off until the face has the shape of the arch.
"""

import numpy as np
import numpy.typing as npt

__all__ = ["arch_rise", "hanging_stress"]

Real = npt.NDArray[np.float64]
Values = float | Real


def arch_rise(*, span: Values, slope: Values) -> Real:
    """Return how high an arch rises between its supports, m: span slope / 4.

    Parameters
    ----------
    span : array_like
        Width between the supports, m.
    slope : array_like
        Tangent of the arch's angle at the support: 1 where the support bears any shear, the coefficient of friction of a
        smoother wall (see `wall_plug`).

    Notes
    -----
    Under a load that is even over the plan an arch of even thrust is a parabola, whose slope grows in proportion to the
    distance from the crown. A dome whose rings bear nothing is flatter (span slope / 6), so this is the cautious side.

    References
    ----------
    Force balance of a funicular arch, textbook statics.

    Examples
    --------
    >>> float(arch_rise(span=0.08, slope=1.0)), float(arch_rise(span=0.08, slope=0.5))
    (0.02, 0.01)
    """
    result: Real = 0.25 * np.asarray(span, np.float64) * np.asarray(slope, np.float64)
    return result


def hanging_stress(*, thickness: Values, bulk_density: Values, gamma: Values, gravity: float) -> Real:
    """Return the tension under a layer that hangs, Pa: rho_b (1 + Gamma) g t.

    Parameters
    ----------
    thickness : array_like
        t of what hangs, m.
    bulk_density, gamma : array_like
        kg/m^3; A w^2/g: once in each stroke it weighs 1 + Gamma times as much.
    gravity : float
        m/s^2.

    Notes
    -----
    Shear on the sides of what hangs, which helps, is left out.

    References
    ----------
    Force balance.

    Examples
    --------
    >>> float(hanging_stress(thickness=0.02, bulk_density=500.0, gamma=1.0, gravity=9.80665).round(2))
    196.13
    """
    load = np.asarray(bulk_density, np.float64) * gravity * (1.0 + np.asarray(gamma, np.float64))
    result: Real = load * np.asarray(thickness, np.float64)
    return result
