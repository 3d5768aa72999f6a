"""Wavenumbers of the surface modes of a vessel: free-slip side walls, contact line free to slide at 90 degrees."""

import functools
import math
from dataclasses import dataclass
from typing import Final

import numpy as np
import numpy.typing as npt

from containment.data_files import data_file
from containment.physics.crossings import refined

__all__ = ["Spectrum", "annulus", "box", "cylinder", "slot", "unbounded"]

Real = npt.NDArray[np.float64]

CYLINDER_DISCRETE_BELOW: Final = 64.0
"""Up to this k R the modes of a cylinder are taken one by one (537); above, they lie closer than 0.1 % on average."""

_MOST_DISCRETE: Final = 600
"""Number of modes of a box or an annulus that are taken one by one."""

_SLOT_MOST: Final = 1000
"""Number of modes of a slot that are taken one by one (they lie pi/W apart, 0.1 % at the last)."""


@dataclass(frozen=True, slots=True)
class Spectrum:
    """Wavenumbers of a vessel: one by one up to `continuous_from`, every wavenumber above it.

    Taking every wavenumber where the modes lie dense can only make the verdict more cautious.

    Attributes
    ----------
    discrete : array, shape (modes,)
        Wavenumbers in rising order, 1/m.
    first, second : array of int, shape (modes,)
        The two mode numbers of each.
    shape : str
        What the two numbers count: "cylinder", "box", "annulus", "slot", "unbounded".
    continuous_from : float
        Above this every wavenumber counts, 1/m; 0 for an unbounded layer.
    """

    discrete: Real
    first: npt.NDArray[np.int64]
    second: npt.NDArray[np.int64]
    shape: str
    continuous_from: float

    def mode_name(self, wavenumber: float) -> str:
        """Return the trade description of the mode at a wavenumber."""
        length = f"wavelength {2e3 * math.pi / wavenumber:.3g} mm"
        if not len(self.discrete) or wavenumber >= self.continuous_from:
            return length
        i = int(np.argmin(np.abs(self.discrete - wavenumber)))
        p, q = int(self.first[i]), int(self.second[i])
        if self.shape in ("cylinder", "annulus"):
            what = "ring-shaped" if p == 0 else f"{p} nodal diameter{'s' if p > 1 else ''}"
            return f"mode ({p},{q}), {what}, {length}"
        if self.shape == "box":
            return f"mode ({p},{q}), {p} and {q} half-waves, {length}"
        return f"mode {p}, {p} half-wave{'s' if p > 1 else ''} across, {length}"


@functools.cache
def _cylinder_table() -> tuple[npt.NDArray[np.int64], npt.NDArray[np.int64], Real]:
    with data_file("cylinder_modes.csv").open(encoding="ascii") as lines:
        rows = [line.split(",") for line in lines if not line.startswith("#")]
    orders = np.array([(int(row[0]), int(row[1])) for row in rows], dtype=np.int64)
    return orders[:, 0], orders[:, 1], np.array([float(row[2]) for row in rows])


def cylinder(radius: float) -> Spectrum:
    """Return the spectrum of a round vessel: k = j'(m,n) / R, the smallest 1.8412 / R.

    Parameters
    ----------
    radius : float
        R, m.

    References
    ----------
    Lamb, H. (1932), Hydrodynamics, 6th ed., article 191 (from memory). Zeros: DLMF 10.21.

    Examples
    --------
    >>> round(float(cylinder(0.035).discrete[0] * 0.035), 4)
    1.8412
    """
    order, rank, zeros = _cylinder_table()
    return Spectrum(zeros / radius, order, rank, "cylinder", CYLINDER_DISCRETE_BELOW / radius)


def box(width: float, length: float) -> Spectrum:
    """Return the spectrum of a rectangular vessel: k = pi sqrt((p/W)^2 + (q/L)^2), p + q > 0; sides in m.

    Examples
    --------
    >>> round(float(box(0.06, 0.08).discrete[0]), 3)  # pi / 80 mm
    39.27
    """
    # about W L k^2 / (4 pi) modes lie below k, plus those along the sides
    most = math.sqrt(4.0 * math.pi * _MOST_DISCRETE / (width * length))
    if max(width, length) / min(width, length) > 50.0:
        most = max(most, 50.0 * math.pi / max(width, length))
    p = np.arange(int(most * width / math.pi) + 1)
    q = np.arange(int(most * length / math.pi) + 1)
    k = np.pi * np.sqrt((p[:, None] / width) ** 2 + (q[None, :] / length) ** 2)
    inside = (k > 0.0) & (k <= most)
    first, second = np.nonzero(inside)
    order = np.argsort(k[inside], kind="stable")
    return Spectrum(k[inside][order], first[order], second[order], "box", most)


def slot(width: float) -> Spectrum:
    """Return the spectrum of a long slot, for waves across it: k = p pi / W; width in m.

    Examples
    --------
    >>> round(float(slot(0.01).discrete[0]), 2)
    314.16
    """
    p = np.arange(1, _SLOT_MOST + 1)
    return Spectrum(p.astype(np.float64) * (np.pi / width), p, np.zeros_like(p), "slot", (_SLOT_MOST + 0.5) * math.pi / width)


def unbounded() -> Spectrum:
    """Return the spectrum of a layer without side walls: every wavenumber."""
    none = np.zeros(0, dtype=np.int64)
    return Spectrum(np.zeros(0), none, none, "unbounded", 0.0)


def annulus(inner: float, outer: float) -> Spectrum:
    """Return the spectrum of a ring-shaped vessel: J_m'(k R1) Y_m'(k R2) = J_m'(k R2) Y_m'(k R1).

    Parameters
    ----------
    inner, outer : float
        R1 < R2, m.

    Notes
    -----
    The cross product is divided by the moduli, which leaves the sine of a phase difference: a bounded function whose
    zeros lie at least about pi / (R2 - R1) apart for one m. It is sampled 16 times in that length.

    References
    ----------
    DLMF 10.21(x), 10.18 (modulus and phase).

    Examples
    --------
    >>> round(float(annulus(0.0001, 0.035).discrete[0] * 0.035), 3)  # a thin core hardly changes a round vessel
    1.841
    """
    area = math.pi * (outer**2 - inner**2)
    most = math.sqrt(8.0 * math.pi * _MOST_DISCRETE / area)
    most = max(most, 4.0 / (inner + outer))
    highest = int(most * outer) + 2
    nodes = np.linspace(0.0, most, max(64, int(16 * most * (outer - inner) / math.pi)))[1:]
    found: list[tuple[float, int, int]] = []
    for m in range(highest + 1):
        if m > most * outer:
            break
        # the first zero for m lies below m / R2 only by rounding: k R2 > m for every mode with m nodal diameters
        k = nodes if m == 0 else np.concatenate([[0.5 * m / outer], nodes[nodes > 0.5 * m / outer]])
        if m:
            k = np.union1d(k, np.linspace(0.5 * m / outer, 1.5 * m / inner if inner > 0 else most, 64))
            k = k[k <= most * 1.0000001]
        values = _cross(m, k, inner, outer)
        here = np.flatnonzero(np.sign(values[1:]) * np.sign(values[:-1]) < 0.0)
        if len(here):
            roots = refined(
                functools.partial(_cross_at, m, inner, outer), k[here], k[here + 1], precision=1e-13
            )
            found.extend((float(root), m, n) for n, root in enumerate(roots, 1))
    found.sort()
    zeros = np.array([row[0] for row in found])
    orders = np.array([(row[1], row[2]) for row in found], dtype=np.int64).reshape(-1, 2)
    return Spectrum(zeros, orders[:, 0], orders[:, 1], "annulus", most)


def _cross_at(m: int, inner: float, outer: float, k: Real) -> Real:
    return _cross(m, k, inner, outer)


def _cross(m: int, k: Real, inner: float, outer: float) -> Real:
    from scipy.special import jvp, yvp  # slow to import, and only a ring needs it

    unit = []
    for radius in (inner, outer):
        j, y = jvp(m, k * radius), yvp(m, k * radius)
        size = np.hypot(j, y)
        infinite = ~np.isfinite(size)
        with np.errstate(invalid="ignore"):
            unit.append((np.where(infinite, 0.0, j / size), np.where(infinite, np.sign(y), y / size)))
    result: Real = unit[0][0] * unit[1][1] - unit[1][0] * unit[0][1]
    return result
