"""Growing exponents of a pinned layer, against two routes in time: coupled Hill equations, and viscous layers."""

import math

import numpy as np
import pytest
import scipy.linalg
from scipy.integrate import solve_ivp
from scipy.special import jnp_zeros

from containment.constants import STANDARD_GRAVITY as G_N
from containment.physics.dispersion import Layer
from containment.physics.pinned import pinned_edges, pinned_lower_roots
from containment.physics.pinned_growth import (
    order_matters,
    pinned_fastest_growth,
    pinned_growing,
    pinned_growing_count,
    rim_growing_count,
)
from containment.physics.pinned_hill import PinnedHalf, reach_factors
from containment.physics.pinned_static import rim_modes, static_pinned_growth
from containment.physics.rim_modes import RimModes, annulus_rim
from tests.independent.depth_elements import depth_modes

SYRUP = Layer(density=1410.0, viscosity=10.0, surface_tension=0.08, depth=0.03)


def disc(order, modes, radius):
    zeros = jnp_zeros(order, modes)
    return RimModes(order, zeros / radius, np.sqrt(2.0 / (1.0 - (order / zeros) ** 2))[None] / radius, modes)


def ring(order, modes):
    whole = annulus_rim(inner=0.01, outer=0.03, order=order, discrete=28, reach=1e5, nodes=8)
    return RimModes(order, whole.wavenumbers[:modes], whole.heights[:, :modes], modes)


def half_system(layer, rim, w, growth, stop, *, subharmonic):
    return PinnedHalf.of(
        layer,
        rim.wavenumbers[None],
        rim.heights[None],
        np.array([w]),
        reach_factors(layer.density, layer.viscosity, layer.surface_tension, np.array([w])),
        growth,
        np.array([stop]),
        subharmonic=subharmonic,
        extra=8,
    )


def inviscid_multipliers(layer, rim, w, a):
    """Floquet multipliers of M z'' + K(t) z = 0 on the surfaces that keep the rim at rest (deep, no viscosity)."""
    free = scipy.linalg.null_space(rim.heights)
    k = rim.wavenumbers
    mass = free.T @ (free / k[:, None])
    tension = free.T @ (layer.surface_tension / layer.density * k[:, None] ** 2 * free)
    size = free.shape[1]

    def rate(t, flat):
        y = flat.reshape(2 * size, 2 * size)
        stiffness = tension + (layer.gravity - a * math.cos(w * t)) * np.eye(size)
        return np.concatenate([y[size:], -np.linalg.solve(mass, stiffness @ y[:size])]).ravel()

    run = solve_ivp(rate, (0.0, 2.0 * np.pi / w), np.eye(2 * size).ravel(), method="DOP853", rtol=1e-10, atol=1e-12)
    return np.linalg.eigvals(run.y[:, -1].reshape(2 * size, 2 * size))


@pytest.mark.parametrize("rim", [disc(1, 6, 0.03), disc(0, 5, 0.03), ring(1, 7)], ids=["m = 1", "m = 0", "ring"])
@pytest.mark.parametrize("a", [40.0, 120.0, 240.0])
def test_growing_exponents_of_a_nearly_inviscid_layer_are_those_of_coupled_hill_equations(rim, a):
    layer = Layer(density=1000.0, viscosity=1e-6, surface_tension=0.05, depth=math.inf)
    w = 2.0 * np.pi * 30.0
    sizes = np.abs(inviscid_multipliers(layer, rim, w, a))
    assert not np.any((sizes > 1.0 + 1e-6) & (sizes < 1.0 + 1e-2)), "too close to neutral to compare"
    count, distance = rim_growing_count(layer, rim, w, a)
    assert distance < 0.01
    assert count == int(np.sum(sizes > 1.0 + 1e-2))


def viscous_map(layer, rim, w, a, steps):
    """Period map of the viscous layer: velocity modes in depth of every sliding mode, tied together at the rim.

    c' = -rates c - f k^2 [(rho G(t) + gamma k^2) zeta - b . lambda], zeta' = sum of f c, with lambda such that
    sum of b zeta'' = 0. Exponentials at midpoints, so the error falls like the square of the step.
    """
    parts = [
        depth_modes(
            wavenumber=k, depth=layer.depth, density=layer.density, viscosity=layer.viscosity, layer=layer.depth, points=14
        )
        for k in rim.wavenumbers
    ]
    sizes = [len(part.rates) for part in parts]
    first = np.concatenate([[0], np.cumsum(sizes)])
    velocities, modes = first[-1], len(parts)
    gather = np.zeros((modes, velocities))
    rates, force = np.zeros(velocities), np.zeros((velocities, modes))
    for j, part in enumerate(parts):
        here = slice(first[j], first[j + 1])
        rates[here] = part.rates
        gather[j, here] = part.surface
        force[here, j] = part.surface * rim.wavenumbers[j] ** 2
    b = rim.heights
    reply = np.linalg.solve(b @ gather @ force @ b.T, b @ gather)
    tie = np.eye(velocities) - force @ b.T @ reply
    step = 2.0 * np.pi / w / steps
    state = np.eye(velocities + modes)
    for i in range(steps):
        pull = layer.gravity - a * math.cos(w * (i + 0.5) * step)
        generator = np.zeros_like(state)
        generator[:velocities, :velocities] = tie * -rates
        stiffness = layer.density * pull + layer.surface_tension * rim.wavenumbers**2
        generator[:velocities, velocities:] = -(tie @ force) * stiffness
        generator[velocities:, :velocities] = gather
        state = scipy.linalg.expm(generator * step) @ state
    # motions that lift the rim are no motions of the layer
    free = scipy.linalg.block_diag(scipy.linalg.null_space(b @ gather), scipy.linalg.null_space(b))
    return np.linalg.eigvals(free.T @ state @ free)


@pytest.mark.parametrize("rim", [disc(1, 4, 0.03), ring(1, 5)], ids=["disc", "ring"])
def test_neutral_accelerations_are_neutral_in_the_time_stepped_viscous_layer(rim):
    layer = Layer(density=1200.0, viscosity=0.5, surface_tension=0.03, depth=0.02)
    w = 2.0 * np.pi * 30.0
    for subharmonic in (False, True):
        half = half_system(layer, rim, w, 0.0, 60.0 * G_N, subharmonic=subharmonic)
        grid = np.geomspace(5.0, 60.0 * G_N, 400)
        counts = np.array([half.count(np.array([a]))[0] for a in grid])
        changes = np.flatnonzero(np.diff(counts))
        assert len(changes)
        low, high = grid[changes[0]], grid[changes[0] + 1]
        while high > low * (1.0 + 1e-9):
            mid = math.sqrt(low * high)
            low, high = (mid, high) if half.count(np.array([mid]))[0] == counts[changes[0]] else (low, mid)
        wanted = -1.0 if subharmonic else 1.0
        coarse, fine = (
            np.min(np.abs(viscous_map(layer, rim, w, low, steps) - wanted)) for steps in (100, 200)
        )
        assert fine < 1e-3
        assert fine < 0.3 * coarse  # second order in the step, towards the neutral multiplier


@pytest.mark.parametrize("rim", [disc(1, 4, 0.03), ring(1, 5)], ids=["disc", "ring"])
@pytest.mark.parametrize("a", [2.0, 100.0, 200.0, 400.0])
def test_count_is_that_of_the_time_stepped_viscous_layer(rim, a):
    layer = Layer(density=1200.0, viscosity=0.5, surface_tension=0.03, depth=0.02)
    w = 2.0 * np.pi * 30.0
    expected = int(np.sum(np.abs(viscous_map(layer, rim, w, a, 100)) > 1.0))
    assert rim_growing_count(layer, rim, w, a) == (expected, pytest.approx(0.0, abs=0.01))


def test_count_falls_by_one_at_every_lower_root():
    roots = pinned_lower_roots(SYRUP, "cylinder", (0.035,), 1, frequency=50.0)
    for passed, root in enumerate(roots):
        for a, expected in ((root * 0.999, 4 - passed), (root * 1.001, 3 - passed)):
            count, distance = pinned_growing_count(SYRUP, "cylinder", (0.035,), 1, frequency=50.0, acceleration=a)
            assert (count, distance < 0.01) == (expected, True)


@pytest.mark.parametrize("kind, dims", [("cylinder", (0.035,)), ("annulus", (0.015, 0.035))])
def test_nothing_grows_between_the_edges_and_something_beyond(kind, dims):
    edges = pinned_edges(SYRUP, kind, dims, [50.0], growth=0.2)
    low, high = float(edges.lower[0]), float(edges.upper[0])
    points = [(0.999 * low, True), (1.001 * low, False), (0.999 * high, False), (1.001 * high, True)]
    for a, grows in points if kind == "cylinder" else points[1::2]:
        found = pinned_growing(SYRUP, kind, dims, frequency=50.0, acceleration=a, growth=0.2)
        assert found.proven
        assert (found.growing > 0) == grows


def test_growth_of_a_layer_that_is_hardly_shaken_is_that_at_rest():
    for order in (0, 1, 2):
        rest = static_pinned_growth(SYRUP, "cylinder", (0.035,), order)[0]
        rate = pinned_fastest_growth(SYRUP, "cylinder", (0.035,), order, frequency=50.0, acceleration=1e-4)
        assert rate == pytest.approx(rest, rel=1e-5)


def test_growth_at_the_edge_of_a_growth_allowance_is_the_allowance():
    edges = pinned_edges(SYRUP, "cylinder", (0.035,), [50.0], growth=0.3)
    order = int(edges.lower_order[0])
    rate = pinned_fastest_growth(
        SYRUP, "cylinder", (0.035,), order, frequency=50.0, acceleration=float(edges.lower[0])
    )
    assert rate == pytest.approx(0.3, rel=1e-4)


def test_orders_that_are_left_out_do_not_grow():
    w = 2.0 * np.pi * 50.0
    left_out = 0
    for order in range(10, 60, 7):
        rim = rim_modes("cylinder", (0.035,), order, discrete=24, nodes=20, reach=1e6)
        if not order_matters(SYRUP, rim, w, 30.0 * G_N):
            left_out += 1
            assert rim_growing_count(SYRUP, rim, w, 30.0 * G_N)[0] == 0
    assert left_out >= 2
