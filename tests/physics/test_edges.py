"""Edges of the holding window: against brute force, with nothing left out, and by the properties that they must have."""

import functools

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import containment.physics.edges as edges_module
from containment.constants import STANDARD_GRAVITY as G
from containment.errors import NotComputableError
from containment.physics import wavenumbers
from containment.physics.dispersion import Layer
from containment.physics.edges import AMPLITUDE_BOUND, edge_errors, first_roots, hold_edges
from containment.physics.exclusion import matters
from containment.physics.hill import Half

# Handbook values at 20 degC (CRC Handbook, from memory); the syrups are invented.
LIQUIDS = {
    "water": (998.2, 1.002e-3, 0.0728),
    "ethanol": (789.0, 1.2e-3, 0.0224),
    "mercury": (13546.0, 1.55e-3, 0.486),
    "glycerol": (1261.0, 1.41, 0.0634),
    "syrup": (1410.0, 10.0, 0.08),
    "stiff": (976.0, 58.0, 0.0215),
}


def layer_of(name, depth, gravity=-G):
    density, viscosity, tension = LIQUIDS[name]
    return Layer(density=density, viscosity=viscosity, surface_tension=tension, depth=depth, gravity=gravity)


def edges_of(layer, spectrum, frequency, **others):
    capillary = float(np.sqrt(layer.density * G / layer.surface_tension))
    return hold_edges(layer, spectrum, frequency, capillary_wavenumber=capillary, depth=layer.depth, **others)


def every_wavenumber(layer, spectrum, w, most):
    """All modes one by one and, where every wavenumber counts, 400 an e-fold; eight times past the resonance."""
    resonance = (layer.density * w * w / layer.surface_tension) ** (1.0 / 3.0)
    reach = 8.0 * max(resonance, float(np.sqrt(layer.density * G / layer.surface_tension)), 3.0 / layer.depth)
    k = spectrum.discrete[spectrum.discrete < reach]
    start = spectrum.continuous_from or most
    if start < reach:
        k = np.concatenate([k, np.exp(np.arange(np.log(start), np.log(reach), 1.0 / 400.0))])
    return k


def signs_on_the_way(layer, k, w, growth, start, stop, subharmonic):
    """Yield the sign of the determinant of each mode at levels so close that one harmonic turns by a hundredth."""
    for first in range(0, len(k), 300):
        part = k[first : first + 300]
        rows = int(2.0 * np.sqrt(stop * part.max()) / w) + 14
        half = Half.of(layer, part, np.full(len(part), w), growth, rows, subharmonic=subharmonic)
        turns = np.sqrt(part.max()) / w
        a = start
        while a < stop:
            yield slice(first, first + len(part)), a, half.margin(np.full(len(part), a)) > 0.0
            a *= np.exp(0.03 / max(1.0, np.sqrt(a) * turns))
        yield slice(first, first + len(part)), stop, half.margin(np.full(len(part), stop)) > 0.0


CASES = [
    # liquid, vessel, depth, Hz, growth
    ("water", ("cylinder", 0.02), 0.01, 60.0, 0.0),
    ("water", ("cylinder", 0.02), 0.01, 700.0, 0.0),
    ("water", ("cylinder", 0.0055), 0.02, 2000.0, 0.0),
    ("water", ("cylinder", 0.25), 0.05, 61.7, 0.0),
    ("water", ("unbounded",), 0.004, 30.0, 2.0),
    ("water", ("unbounded",), 0.05, 2000.0, 0.5),
    ("ethanol", ("cylinder", 0.01), 0.003, 10.0, 0.0),
    ("ethanol", ("box", 0.03, 0.2), 0.02, 120.0, 0.0),
    ("mercury", ("cylinder", 0.03), 0.02, 400.0, 0.0),
    ("mercury", ("slot", 0.02), 0.01, 1500.0, 0.0),
    ("glycerol", ("cylinder", 0.035), 0.03, 15.0, 0.0),
    ("glycerol", ("cylinder", 0.035), 0.006, 60.0, 0.0),
    ("glycerol", ("annulus", 0.01, 0.035), 0.03, 30.0, 0.1),
    ("glycerol", ("unbounded",), 0.002, 40.0, 1.0),
    ("syrup", ("cylinder", 0.035), 0.03, 50.0, 0.0),
    ("syrup", ("cylinder", 0.035), 0.03, 50.0, 0.3),
    ("syrup", ("box", 0.06, 0.08), 0.03, 200.0, 0.0),
    ("stiff", ("cylinder", 0.035), 0.03, 8.0, 0.0),
    ("stiff", ("cylinder", 0.25), 0.1, 25.0, 0.5),
]


def vessel_of(shape, *sizes):
    return getattr(wavenumbers, shape)(*sizes)


@pytest.mark.parametrize(("liquid", "vessel", "depth", "frequency", "growth"), CASES)
def test_brute_force_finds_no_other_edge(liquid, vessel, depth, frequency, growth):
    layer, spectrum, w = layer_of(liquid, depth), vessel_of(*vessel), 2.0 * np.pi * frequency
    found = edges_of(layer, spectrum, [frequency], growth=growth)
    lower, upper = float(found.lower[0]), float(found.upper[0])
    cap = AMPLITUDE_BOUND * w * w
    k = every_wavenumber(layer, spectrum, w, 1e-3 * min(np.sqrt(layer.density * G / layer.surface_tension), 1.0 / depth))
    falls = layer.coefficient(growth, k).real < 0.0

    # unsafe direction: up to the upper edge no mode may turn unstable, and at the lower edge every mode must be held
    stop = min(cap, upper * (1.0 - 1e-6))
    for _, a, positive in signs_on_the_way(layer, k, w, growth, 1e-5 * stop, stop, True):
        assert positive.all(), f"a wave at half the frequency at {a}, below {upper}"
    for part, a, positive in signs_on_the_way(layer, k, w, growth, 1e-5 * stop, stop, False):
        unstable = ~positive & ~falls[part]
        assert not unstable.any(), f"a wave at the frequency at {a}, below {upper}"
        if a >= lower * (1.0 + 1e-6):
            assert positive.all(), f"a mode is not held at {a}, above {lower}"

    # the other direction: each edge is attained by its mode
    for value, wave, subharmonic in (
        (lower, found.lower_wavenumber[0], False), (upper, found.upper_wavenumber[0], bool(found.upper_subharmonic[0])),
    ):  # fmt: skip
        if 0.0 < value < np.inf:
            half = Half.of(layer, np.full(1, wave), np.full(1, w), growth, 60, subharmonic=subharmonic)
            below, above = (half.margin(np.full(1, value * (1.0 + step)))[0] for step in (-1e-8, 1e-8))
            assert below * above < 0.0
    if falls.any():
        assert lower > 0.0


def test_brute_force_meets_lower_edges_that_are_out_of_reach():
    """Lower edge infinite: some falling mode indeed has no first root within 60 mm."""
    layer, spectrum = layer_of("water", 0.05), wavenumbers.cylinder(0.25)
    found = edges_of(layer, spectrum, [5.0])
    assert np.isinf(found.lower[0])
    w = 2.0 * np.pi * 5.0
    k = spectrum.discrete[:1]
    for _, _, positive in signs_on_the_way(layer, k, w, 0.0, 1e-5, AMPLITUDE_BOUND * w * w, False):
        assert not positive.any()


def test_unbounded_layer_for_ever_is_never_held():
    found = edges_of(layer_of("glycerol", 0.01), wavenumbers.unbounded(), [20.0, 200.0])
    assert np.isinf(found.lower).all()


@pytest.mark.parametrize(
    ("liquid", "vessel", "depth"),
    [
        ("water", ("cylinder", 0.02), 0.01), ("water", ("cylinder", 0.25), 0.03), ("glycerol", ("cylinder", 0.035), 0.006),
        ("syrup", ("box", 0.06, 0.08), 0.03), ("mercury", ("slot", 0.02), 0.002), ("stiff", ("cylinder", 0.25), 0.2),
    ],
)  # fmt: skip
@pytest.mark.parametrize("growth", [0.0, 0.4])
def test_leaving_modes_out_changes_nothing(monkeypatch, liquid, vessel, depth, growth):
    """Every wavenumber evaluated, though a bound excludes it, gives the same edges."""
    layer, spectrum = layer_of(liquid, depth), vessel_of(*vessel)
    f = np.geomspace(8.0, 1500.0, 9)
    pruned = edges_of(layer, spectrum, f, growth=growth)

    def all_but_the_last(layer, k, w, acceleration):
        flags = np.ones(np.broadcast_shapes(k.shape, w.shape), dtype=bool)
        flags[:, -1] = matters(layer, k, w, acceleration)[:, -1]
        return flags

    monkeypatch.setattr(edges_module, "matters", all_but_the_last)
    monkeypatch.setattr(edges_module, "not_excluded", lambda layer, floor, ik, k, *rest, **names: np.arange(len(k)))
    whole = edges_of(layer, spectrum, f, growth=growth)
    np.testing.assert_allclose(pruned.lower, whole.lower, rtol=1e-9)
    np.testing.assert_allclose(pruned.upper, whole.upper, rtol=1e-9)
    np.testing.assert_array_equal(pruned.upper_subharmonic, whole.upper_subharmonic)


@pytest.mark.parametrize("liquid", ["water", "glycerol", "stiff"])
def test_excluded_cases_have_no_root(liquid):
    """`matters` says that no exponent grows: then neither determinant changes sign up to that acceleration."""
    layer = layer_of(liquid, 0.01)
    rng = np.random.default_rng(5)
    k = 10.0 ** rng.uniform(1.5, 4.5, 400)
    w = 2.0 * np.pi * 10.0 ** rng.uniform(0.7, 3.3, 400)
    a = 10.0 ** rng.uniform(-1, 4, 400)
    out = ~matters(layer, k, w, a) & (a < AMPLITUDE_BOUND * w * w)
    assert np.count_nonzero(out) > 40
    for subharmonic in (False, True):
        assert np.isinf(first_roots(layer, k[out], w[out], 0.0, a[out], subharmonic=subharmonic)).all()


def test_many_frequencies_at_once_are_the_same_as_one_by_one():
    layer, spectrum = layer_of("glycerol", 0.03), wavenumbers.cylinder(0.035)
    f = np.array([9.0, 15.0, 47.0, 300.0, 2000.0])
    together = edges_of(layer, spectrum, f)
    for i, one in enumerate(f):
        alone = edges_of(layer, spectrum, [one])
        assert together.lower[i] == pytest.approx(alone.lower[0], rel=1e-10)
        assert together.upper[i] == pytest.approx(alone.upper[0], rel=1e-10)


def test_upright_layer_has_no_lower_edge():
    found = edges_of(layer_of("water", 0.02, gravity=G), wavenumbers.cylinder(0.04), [20.0, 60.0, 200.0])
    assert (found.lower == 0.0).all()
    assert np.isfinite(found.upper).all()
    assert np.isnan(found.lower_wavenumber).all()


@settings(max_examples=12, deadline=None)
@given(
    liquid=st.sampled_from(sorted(LIQUIDS)), radius=st.floats(3e-3, 0.08), depth=st.floats(1e-3, 0.1),
    frequency=st.floats(6.0, 900.0), growth=st.floats(0.01, 3.0),
)  # fmt: skip
def test_bearing_more_growth_widens_the_window(liquid, radius, depth, frequency, growth):
    layer, spectrum = layer_of(liquid, depth), wavenumbers.cylinder(radius)
    strict, lenient = (edges_of(layer, spectrum, [frequency], growth=s) for s in (0.0, growth))
    if strict.lower[0] < strict.upper[0]:
        assert lenient.lower[0] <= strict.lower[0] * (1.0 + 1e-9)
        assert lenient.upper[0] >= strict.upper[0] * (1.0 - 1e-9)


@settings(max_examples=10, deadline=None)
@given(
    liquid=st.sampled_from(sorted(LIQUIDS)), width=st.floats(4e-3, 0.06), stretch=st.floats(1.0, 3.0),
    depth=st.floats(2e-3, 0.06), frequency=st.floats(8.0, 500.0),
)  # fmt: skip
def test_a_vessel_with_more_modes_never_holds_better(liquid, width, stretch, depth, frequency):
    """All modes of a box are modes of the box of twice its width; all of them are wavenumbers of the unbounded layer."""
    layer = layer_of(liquid, depth)
    small, big = (edges_of(layer, wavenumbers.box(w, width * stretch), [frequency]) for w in (width, 2.0 * width))
    free = edges_of(layer, wavenumbers.unbounded(), [frequency])
    assert big.lower[0] >= small.lower[0] * (1.0 - 1e-6)
    assert big.upper[0] <= small.upper[0] * (1.0 + 1e-6)
    assert free.upper[0] <= big.upper[0] * (1.0 + 1e-6)


@settings(max_examples=12, deadline=None)
@given(
    liquid=st.sampled_from(["water", "glycerol", "syrup"]), length=st.floats(0.3, 3.0), mass=st.floats(0.1, 10.0),
    frequency=st.floats(10.0, 300.0), growth=st.sampled_from([0.0, 0.5]),
)  # fmt: skip
def test_similar_layers_have_the_same_edges(liquid, length, mass, frequency, growth):
    """Lengths times c, times times sqrt(c), masses times m: at the same gravity every acceleration stays."""
    time = np.sqrt(length)
    density, viscosity, tension = LIQUIDS[liquid]
    one = layer_of(liquid, 0.01)
    other = Layer(
        density=density * mass / length**3, viscosity=viscosity * mass / (length * time),
        surface_tension=tension * mass / time**2, depth=0.01 * length,
    )  # fmt: skip
    here = edges_of(one, wavenumbers.cylinder(0.02), [frequency], growth=growth)
    there = edges_of(
        other, wavenumbers.cylinder(0.02 * length), [frequency / time], growth=growth / time,
        amplitude_bound=AMPLITUDE_BOUND * length,
    )  # fmt: skip
    np.testing.assert_allclose(there.lower, here.lower, rtol=1e-7)
    np.testing.assert_allclose(there.upper, here.upper, rtol=1e-7)


def test_estimated_errors_cover_the_true_ones():
    """Against roots found with 60 rows more."""
    for liquid, radius, depth in (("water", 0.02, 0.01), ("syrup", 0.035, 0.03), ("stiff", 0.035, 0.03)):
        layer, spectrum = layer_of(liquid, depth), wavenumbers.cylinder(radius)
        f = np.array([20.0, 50.0, 300.0])
        found = edges_of(layer, spectrum, f)
        lower_error, upper_error = edge_errors(layer, found, growth=0.0)
        for value, wave, error, kinds in (
            (found.lower, found.lower_wavenumber, lower_error, np.zeros(3, bool)),
            (found.upper, found.upper_wavenumber, upper_error, found.upper_subharmonic),
        ):
            for i in np.flatnonzero(np.isfinite(value) & (value > 0.0)):
                assert 0.0 < error[i] < 1e-8
                root = functools.partial(first_roots, layer, wave[i : i + 1], 2 * np.pi * f[i : i + 1], 0.0)
                better = root(value[i : i + 1] * 1.01, subharmonic=bool(kinds[i]), start=value[i : i + 1] * 0.99, extra_rows=60)
                assert abs(better[0] / value[i] - 1.0) <= 10.0 * error[i]
            assert np.isnan(error[~np.isfinite(value)]).all()


def test_a_liquid_without_tension_is_refused_rather_than_guessed():
    """Nothing then stiffens short waves, so that no bound excludes them."""
    layer = Layer(density=1000.0, viscosity=1e-3, surface_tension=0.0, depth=0.01)
    with pytest.raises(NotComputableError, match="no wavenumber"):
        hold_edges(layer, wavenumbers.cylinder(0.02), [5.0], capillary_wavenumber=400.0, depth=0.01)
