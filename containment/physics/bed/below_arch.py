r"""What an arch needs around it: a bed deep enough to hold it, and powder under it that hangs by itself.

A bed whose lower face is flat does not end at its arch. The lens between arch and face is carried by tension, however
strong the arch is; where the tension is too much, pieces break off until the face has the shape of the arch. In a bed
that is shallow for its span the arch has to be flat and thin, and bears less.
"""

import numpy as np
import numpy.typing as npt

__all__ = ["arch_rise", "hanging_stress", "shallow_factor"]

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


def shallow_factor(*, depth: Values, span: Values) -> Real:
    """Return the share of its load that an arch still bears in a bed of limited depth: 2 depth/span, at most 1.

    Parameters
    ----------
    depth, span : array_like
        Of the bed, m; between the supports, m.

    Notes
    -----
    An arch of rise f and thickness t that carries a bed of depth h over the span B is pressed by rho g h B^2/(8 f t). With
    f + t = h that is least for f = t = h/2: rho g B^2/(2 h), which exceeds the rho g B of a deep slot below h = B/2. The
    same share is taken for a round opening.

    References
    ----------
    Three-hinged arch, textbook statics.

    Examples
    --------
    >>> float(shallow_factor(depth=0.01, span=0.08)), float(shallow_factor(depth=0.05, span=0.08))
    (0.25, 1.0)
    """
    result: Real = np.minimum(1.0, 2.0 * np.asarray(depth, np.float64) / np.asarray(span, np.float64))
    return result
