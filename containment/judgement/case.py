"""One case to be judged: liquid, vessel and growth allowance, turned into the arrays that the physics takes."""

import dataclasses
import functools
import math
from dataclasses import dataclass
from functools import cached_property
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.constants import STANDARD_GRAVITY
from containment.errors import InputError
from containment.given.liquid import Liquid
from containment.given.quantities import si_value
from containment.given.surroundings import Surroundings
from containment.given.vessel import Annulus, Box, Cylinder, Slot, Vessel
from containment.given.waveforms import PURE_SINE, Waveform
from containment.physics import wavenumbers
from containment.physics.edges import AMPLITUDE_BOUND, Edges, first_roots, hold_edges
from containment.physics.floquet import static_growth_rate
from containment.physics.layers import LayerModel, layer_model

__all__ = ["Allowance", "Case", "Unshaken", "allowance", "cushion_state", "spectrum_of"]

Real = npt.NDArray[np.float64]

_UNEVENNESS: Final = 1e-4
"""Assumed initial unevenness of the surface, m, where none is given (common practice: a tenth of a millimetre)."""
_UNEVENNESS_OF_DEPTH: Final = 0.01
_BEARABLE_OF_DEPTH: Final = 0.1
_CUSHION_DAMPING: Final = 0.1


@dataclass(frozen=True, slots=True, kw_only=True)
class Allowance:
    """What the process can bear.

    Attributes
    ----------
    dwell : float or None
        Time upside-down, s; None for ever.
    unevenness : float
        Initial unevenness of the surface, m.
    amplification : float
        Factor by which it may grow within the dwell.
    """

    dwell: float | None
    unevenness: float
    amplification: float

    @property
    def growth(self) -> float:
        """Allowed growth rate, 1/s: ln(amplification) / dwell, 0 for ever."""
        return 0.0 if self.dwell is None else math.log(self.amplification) / self.dwell


def allowance(*, depth: float, dwell: Any = None, unevenness: Any = None, amplification: Any = None) -> Allowance:
    """Return the allowance from what is given, the rest assumed from the depth (m).

    The unevenness is taken as 0.1 mm or a hundredth of the depth, whichever is less, and the process is taken to bear
    a surface that is out of level by a tenth of the depth; the amplification is their ratio.

    Raises
    ------
    InputError
        A dwell that is not positive, an unevenness not below the depth, an amplification not above 1.
    """
    seconds = None if dwell is None else si_value(dwell, "time", "dwell", least=1e-3, most=1e10)
    uneven = min(_UNEVENNESS, _UNEVENNESS_OF_DEPTH * depth)
    if unevenness is not None:
        uneven = si_value(unevenness, "length", "unevenness", above=0.0, most=0.5 * depth)
    if amplification is not None:
        factor = si_value(amplification, "ratio", "amplification", above=1.0, most=1e6)
    else:
        factor = _BEARABLE_OF_DEPTH * depth / uneven
        if not factor > 1.0:
            raise InputError(
                f"unevenness: {uneven:g} m is not below a tenth of the depth, {0.1 * depth:g} m; give a smaller one, or "
                "the amplification that the process can bear"
            )
    return Allowance(dwell=seconds, unevenness=uneven, amplification=factor)


@functools.lru_cache(maxsize=16)
def spectrum_of(vessel: Vessel) -> wavenumbers.Spectrum:
    """Return the wavenumbers of a vessel."""
    match vessel:
        case Cylinder():
            return wavenumbers.cylinder(0.5 * vessel.diameter)
        case Box():
            return wavenumbers.box(vessel.width, vessel.length)
        case Annulus():
            return wavenumbers.annulus(0.5 * vessel.inner_diameter, 0.5 * vessel.outer_diameter)
        case Slot():
            return wavenumbers.slot(vessel.width)
    return wavenumbers.unbounded()


def cushion_state(liquid: Liquid, vessel: Vessel, around: Surroundings) -> dict[str, float]:
    """Return the trapped gas under the layer's weight: its pressure (Pa) and height (m), and the resonance on it (Hz)."""
    from containment.physics.gas_cushion import compressed_gap, cushion_pressure, cushion_resonance

    load = {"ambient_pressure": around.ambient_pressure, "density": liquid.density, "depth": vessel.depth}
    pressure = float(cushion_pressure(**load))
    gap = float(compressed_gap(around.cushion, **load))
    resonance = cushion_resonance(
        pressure=pressure, density=liquid.density, depth=vessel.depth, gap=gap, exponent=around.polytropic_exponent
    )
    return {"pressure_Pa": pressure, "height_m": gap, "resonance_Hz": float(resonance)}


@dataclass(frozen=True, slots=True, kw_only=True)
class Unshaken:
    """The layer without shaking.

    Attributes
    ----------
    growth_rate : float
        Largest growth rate over the modes, 1/s; 0 where the surface tension alone holds the layer.
    wavenumber : float or None
        Of the fastest mode, 1/m.
    time_to_spill : float or None
        ln(h / unevenness) / growth rate, s; None where nothing grows.
    """

    growth_rate: float
    wavenumber: float | None
    time_to_spill: float | None


@dataclass(frozen=True)
class Case:
    """A liquid in a vessel, with what the process can bear."""

    liquid: Liquid
    vessel: Vessel
    allowance: Allowance
    surroundings: Surroundings = Surroundings()
    waveform: Waveform = PURE_SINE
    amplitude_bound: float = AMPLITUDE_BOUND

    @cached_property
    def layer(self) -> LayerModel:
        """The layer, for the physics."""
        return self.layer_with()

    def layer_with(self, *, surface: str | None = None, gravity: float = -STANDARD_GRAVITY) -> LayerModel:
        """Return the layer with another state of its surface, or upright with positive gravity."""
        around = self.surroundings
        film = around.film_modulus
        if (surface or around.surface) == "covered":
            film = math.inf
        elif surface == "clean":
            film = None
        below = around.below
        return layer_model(
            density=self.liquid.density, viscosity=self.liquid.viscosity, depth=self.vessel.depth, gravity=gravity,
            tension=self.liquid.surface_tension if below is None else around.interfacial_tension,
            film_modulus=film, below=None if below is None else (below.density, below.viscosity, around.below_depth),
            rheology=self.liquid.rheology,
        )  # fmt: skip

    @cached_property
    def spectrum(self) -> wavenumbers.Spectrum:
        """The vessel's wavenumbers."""
        return spectrum_of(self.vessel)

    @property
    def capillary_wavenumber(self) -> float:
        """1 / l_c, 1/m: wavelengths shorter than 2 pi l_c stand at rest; infinite without surface tension."""
        around = self.surroundings
        tension = self.liquid.surface_tension if around.below is None else around.interfacial_tension
        density = self.liquid.density - (around.below.density if around.below else 0.0)
        return math.inf if tension == 0.0 else math.sqrt(max(density, 0.0) * STANDARD_GRAVITY / tension)

    @property
    def product_mass(self) -> float | None:
        """Mass of the layer, kg; None where the vessel has no end."""
        area = self.vessel.area
        return None if area is None else area * self.vessel.depth * self.liquid.density

    def edges(
        self, frequency: npt.ArrayLike, *, growth: float | None = None, layer: LayerModel | None = None
    ) -> Edges:
        """Return the edges of the window at given frequencies (Hz), for the allowance or another growth rate or layer."""
        edges = self._layer_edges(layer or self.layer, frequency, growth)
        if self.surroundings.cushion is None:
            return edges
        # a layer on gas has a second surface, facing up, on which the same motion raises ordinary waves
        other = self._layer_edges(self.layer_with(gravity=STANDARD_GRAVITY), frequency, growth)
        low, high = self.gain(edges.frequency)
        first = other.upper < edges.upper
        return Edges(
            edges.frequency, edges.lower / low, np.minimum(edges.upper, other.upper) / high, edges.lower_wavenumber,
            np.where(first, other.upper_wavenumber, edges.upper_wavenumber),
            np.where(first, other.upper_subharmonic, edges.upper_subharmonic),
        )  # fmt: skip

    def _layer_edges(self, layer: LayerModel, frequency: npt.ArrayLike, growth: float | None) -> Edges:
        sigma = self.allowance.growth if growth is None else growth
        if self.vessel.contact_line == "pinned":
            return self._pinned_edges(frequency, sigma)
        limits: dict[str, Any] = {
            "growth": sigma, "amplitude_bound": self.amplitude_bound,
            "capillary_wavenumber": self.capillary_wavenumber, "depth": self.vessel.depth,
        }  # fmt: skip
        if self.waveform is PURE_SINE:
            return hold_edges(layer, self.spectrum, frequency, **limits)
        from containment.physics.motion_edges import motion_edges

        edges = motion_edges(layer, self.spectrum, frequency, self.waveform.coupling(), **limits)
        peak = self.waveform.peak_acceleration
        return dataclasses.replace(edges, lower=edges.lower * peak, upper=edges.upper * peak)

    @property
    def rim(self) -> tuple[str, tuple[float, ...]]:
        """Kind and dimensions (radii, sides; m) of a vessel whose contact line is pinned."""
        match self.vessel:
            case Cylinder(diameter=d):
                return "cylinder", (0.5 * d,)
            case Annulus(inner_diameter=d, outer_diameter=e):
                return "annulus", (0.5 * d, 0.5 * e)
            case Box(width=d, length=e):
                return "box", (d, e)
        raise InputError(f"contact line: 'pinned' is not available for a {self.vessel.kind}; expected 'sliding'")

    def _pinned_edges(self, frequency: npt.ArrayLike, growth: float) -> Edges:
        from containment.physics.pinned import pinned_edges

        kind, dims = self.rim
        f = np.atleast_1d(np.asarray(frequency, dtype=np.float64))
        found = pinned_edges(
            self.layer, kind, dims, f, growth=growth, amplitude_bound=self.amplitude_bound  # type: ignore[arg-type]
        )
        none = np.full(len(f), np.nan)
        cap = self.amplitude_bound * (2.0 * np.pi * f) ** 2
        return Edges(
            f, found.lower, np.where(found.upper > cap, np.inf, found.upper), none, none.copy(), found.upper_subharmonic
        )

    def lower_edge(self, frequency: float, *, layer: LayerModel) -> float:
        """Return the lower edge alone at one frequency (Hz), for another layer, m/s^2."""
        top = self.capillary_wavenumber
        k = self.spectrum.discrete
        k = k[k < top]
        start = self.spectrum.continuous_from
        if start < top:
            k = np.concatenate([k, np.geomspace(start, top, 100)])
        return float(self.lower_roots(frequency, k, layer=layer).max(initial=0.0))

    def lower_roots(self, frequency: float, wavenumber: Real, *, layer: LayerModel | None = None) -> Real:
        """Return from which acceleration of the layer on each wavenumber is held, m/s^2; 0 for those that stand at rest."""
        model = layer or self.layer
        w = np.full(len(wavenumber), 2.0 * math.pi * frequency)
        falls = np.flatnonzero(model.coefficient(self.allowance.growth, wavenumber).real < 0.0)
        result = np.zeros(len(wavenumber))
        result[falls] = first_roots(
            model, wavenumber[falls], w[falls], self.allowance.growth, self.amplitude_bound * w[falls] ** 2,
            subharmonic=False,
        )  # fmt: skip
        return result

    def gain(self, frequency: npt.ArrayLike) -> tuple[Real, Real]:
        """Return how much more the layer moves than the vessel, taken low and taken high; 1 without a cushion.

        A layer on trapped gas moves with the gas as a spring. Taken high: no damping. Taken low: a tenth of critical
        damping (common practice where none was measured), so that near resonance neither edge is flattered.
        """
        f = np.asarray(frequency, dtype=np.float64)
        around = self.surroundings
        if around.cushion is None:
            return np.ones(f.shape), np.ones(f.shape)
        from containment.physics.gas_cushion import motion_ratio

        resonance = cushion_state(self.liquid, self.vessel, around)["resonance_Hz"]
        low = motion_ratio(f, resonance=resonance, damping_ratio=_CUSHION_DAMPING)
        high = motion_ratio(f, resonance=resonance)
        return np.minimum(low, high), np.minimum(np.maximum(low, high), 1e6)

    @cached_property
    def unshaken(self) -> Unshaken:
        """What the layer does without shaking: the fastest of all its modes."""
        if self.vessel.contact_line == "pinned":
            return self._unshaken_pinned()
        top = self.capillary_wavenumber
        k = self.spectrum.discrete
        k = k[k < top]
        start = self.spectrum.continuous_from
        if start < top:
            k = np.concatenate([k, np.geomspace(start or 1e-4 * min(top, 1.0 / self.vessel.depth), top, 200)])
        if not len(k):
            return Unshaken(growth_rate=0.0, wavenumber=None, time_to_spill=None)
        rate = static_growth_rate(self.layer, k)
        best = int(np.argmax(rate))
        fastest, at = float(rate[best]), float(k[best])
        spread = 0.1
        while at > start and spread > 1e-9:
            near = np.clip(at * np.exp(np.linspace(-spread, spread, 21)), start, top)
            rate = static_growth_rate(self.layer, near)
            if rate.max() >= fastest:
                fastest, at = float(rate.max()), float(near[np.argmax(rate)])
            spread /= 8.0
        if not fastest > 0.0:
            return Unshaken(growth_rate=0.0, wavenumber=None, time_to_spill=None)
        return Unshaken(growth_rate=fastest, wavenumber=at, time_to_spill=self._time_to_spill(fastest))

    def _time_to_spill(self, rate: float) -> float:
        return math.log(self.vessel.depth / self.allowance.unevenness) / rate

    def _unshaken_pinned(self) -> Unshaken:
        """Take orders upwards until one stands at rest: higher orders consist of shorter waves."""
        from containment.physics.pinned_static import static_pinned_growth

        kind, dims = self.rim
        fastest = 0.0
        for order in range(4 if kind == "box" else 200):
            rates = static_pinned_growth(
                self.layer, kind, dims, order, precision=1e-2 if kind == "box" else 1e-10  # type: ignore[arg-type]
            )
            if not len(rates) and order > 1 and kind != "box":
                break
            fastest = max(fastest, float(rates.max(initial=0.0)))
        if fastest == 0.0:
            return Unshaken(growth_rate=0.0, wavenumber=None, time_to_spill=None)
        return Unshaken(growth_rate=fastest, wavenumber=None, time_to_spill=self._time_to_spill(fastest))
