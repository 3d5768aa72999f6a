"""Edges of the holding window under a periodic motion that is not a pure sine.

The rules are those of `containment.physics.edges`; the rows are banded (`containment.physics.motion_hill`). Where every
wavenumber counts the nodes are taken as they are: the edges are then known to the spacing of the nodes only.
"""

from typing import Final

import numpy as np
import numpy.typing as npt

from containment.errors import NotComputableError
from containment.physics.crossings import first_crossing
from containment.physics.edges import Edges, extreme, nodes_up_to
from containment.physics.exclusion import BoundedLayer, matters
from containment.physics.motion_hill import MotionHalf, motion_rows
from containment.physics.wavenumbers import Spectrum

__all__ = ["motion_edges", "motion_first_roots"]

Real = npt.NDArray[np.float64]
Complex = npt.NDArray[np.complex128]

_CHUNK: Final = 3000


def motion_first_roots(
    layer: BoundedLayer,
    k: Real,
    w: Real,
    growth: float,
    stop: Real,
    coupling: Complex,
    *,
    subharmonic: bool,
    start: Real | None = None,
) -> Real:
    """Return the first root in the level of the motion of each case (k, w) up to `stop`, or infinity.

    As `containment.physics.edges.first_roots`; the level is the acceleration of the fundamental, m/s^2.
    """
    result = np.full(len(k), np.inf)
    order = np.argsort(stop * k / w**2, kind="stable")
    for first in range(0, len(order), _CHUNK):
        part = order[first : first + _CHUNK]
        most = part[-1]
        rows = motion_rows(coupling, float(stop[most] / w[most] ** 2), float(k[most]))
        half = MotionHalf.of(layer, k[part], w[part], growth, rows, coupling, subharmonic=subharmonic)
        begin = half.root_free_below() if start is None else start[part]
        near = np.flatnonzero(begin < stop[part])
        if len(near):
            chosen = part[near]
            turns = np.sqrt(k[chosen] * float(np.sum(np.abs(coupling)))) / w[chosen]
            result[chosen] = first_crossing(
                half.take(near), begin[near], stop[chosen], turns=turns, from_root=start is not None
            )
    return result


def motion_edges(
    layer: BoundedLayer,
    spectrum: Spectrum,
    frequency: npt.ArrayLike,
    coupling: Complex,
    *,
    growth: float,
    amplitude_bound: float,
    capillary_wavenumber: float,
    depth: float,
) -> Edges:
    """Return the edges of the holding window in the level of the motion (acceleration of its fundamental), m/s^2.

    Parameters
    ----------
    layer, spectrum, frequency, growth, amplitude_bound, capillary_wavenumber, depth
        As for `containment.physics.edges.hold_edges`.
    coupling : array of complex, shape (M,)
        See `containment.given.waveforms.Waveform.coupling`.

    Raises
    ------
    NotComputableError
        No wavenumber can be found above which waves provably do not matter.
    """
    f = np.atleast_1d(np.asarray(frequency, dtype=np.float64))
    w = 2.0 * np.pi * f
    cap = amplitude_bound * w * w
    total = float(np.sum(np.abs(coupling)))
    reach = 4.0 * max(capillary_wavenumber, 3.0 / depth)
    upper, upper_wave = np.full(len(w), np.inf), np.full(len(w), np.nan)
    upper_sub = np.zeros(len(w), dtype=bool)
    lower, lower_wave = np.zeros(len(w)), np.full(len(w), np.nan)
    done = 0.0
    while True:
        nodes = nodes_up_to(spectrum, reach, min(capillary_wavenumber, 1.0 / depth))
        k = nodes[nodes > done]
        stop = np.minimum(upper, cap)
        needed = matters(layer, k[None, :], w[:, None], stop[:, None] * total)
        iw, ik = np.nonzero(needed)
        kk, ww = k[ik], w[iw]
        falls = layer.coefficient(growth, kk).real < 0.0
        # lower edges are wanted up to the amplitude bound even where waves have broken up below
        low = np.full(len(kk), np.nan)
        fall = np.flatnonzero(falls)
        low[fall] = motion_first_roots(layer, kk[fall], ww[fall], growth, cap[iw[fall]], coupling, subharmonic=False)
        best, where = extreme(low[fall], iw[fall], fall, len(w), np.maximum)
        higher = np.flatnonzero((best > lower) & (where >= 0))
        lower[higher], lower_wave[higher] = best[higher], kk[where[higher]]
        for subharmonic in (True, False):
            stop = np.minimum(upper, cap)[iw] * (1.0 + 1e-9)
            start = None
            chosen = np.arange(len(kk))
            if not subharmonic:
                chosen = np.flatnonzero(~falls)
            roots = motion_first_roots(
                layer, kk[chosen], ww[chosen], growth, stop[chosen], coupling, subharmonic=subharmonic, start=start
            )
            if not subharmonic:
                again = fall[np.isfinite(low[fall]) & (low[fall] < stop[fall])]
                second = motion_first_roots(
                    layer, kk[again], ww[again], growth, stop[again], coupling, subharmonic=False,
                    start=low[again] * (1.0 + 1e-7),
                )  # fmt: skip
                roots, chosen = np.concatenate([roots, second]), np.concatenate([chosen, again])
            best, where = extreme(roots, iw[chosen], chosen, len(w), np.minimum)
            less = np.flatnonzero((best < upper) & (where >= 0))
            upper[less], upper_wave[less], upper_sub[less] = best[less], kk[where[less]], subharmonic
        done = float(nodes[-1])
        still = matters(layer, np.array([done]), w, np.minimum(upper, cap) * total)
        if not still.any() and done * depth >= 3.0:
            break
        reach *= 2.0
        if reach > 1e7:
            raise NotComputableError("no wavenumber was found above which waves provably do not matter under this motion")
    if spectrum.continuous_from == 0.0 and growth == 0.0 and np.isfinite(lower_wave).any():
        lower[:], lower_wave[:] = np.inf, 0.0
    upper[upper > cap] = np.inf
    return Edges(f, lower, upper, lower_wave, upper_wave, upper_sub)
