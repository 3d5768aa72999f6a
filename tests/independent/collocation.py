"""The plain route to the Floquet multipliers of a shaken viscous layer: Chebyshev collocation, full Radau IIA steps.

Unknowns are W at the Chebyshev points of the whole depth and the surface displacement zeta. The momentum equation holds
at the inner points, the four conditions at the boundaries replace the outer ones, and the differential-algebraic system
E y' = B(t) y that results is stepped as it stands: every step factorises the full system of its stages. Slow (20 ms a
multiplier) and limited to layers of a few boundary-layer thicknesses by the rounding of the fourth derivative, but free
of every device of `time_stepping`.
"""

from __future__ import annotations

import math

import numpy as np


def chebyshev_derivative(order: int) -> tuple[np.ndarray, np.ndarray]:
    """Points cos(pi j / order), from 1 to -1, and the matrix that differentiates a polynomial given there."""
    j = np.arange(order + 1)
    x = np.cos(math.pi * j / order)
    # Differences of cosines as products of sines, and rows that annul constants, keep the high derivatives accurate.
    upper, lower = np.meshgrid(j, j, indexing="ij")
    gap = 2 * np.sin(math.pi * (upper + lower) / (2 * order)) * np.sin(math.pi * (lower - upper) / (2 * order))
    np.fill_diagonal(gap, 1.0)
    edge = np.where((j == 0) | (j == order), 2.0, 1.0) * (-1.0) ** j
    matrix = edge[:, None] / edge[None, :] / gap
    np.fill_diagonal(matrix, 0.0)
    np.fill_diagonal(matrix, -matrix.sum(axis=1))
    return x, matrix


def three_stage_radau() -> tuple[np.ndarray, np.ndarray]:
    """Nodes and matrix of the three-stage Radau IIA method, order 5 (from memory; the tests check its conditions)."""
    r = math.sqrt(6.0)
    nodes = np.array([(4 - r) / 10, (4 + r) / 10, 1.0])
    matrix = np.array(
        [
            [(88 - 7 * r) / 360, (296 - 169 * r) / 1800, (-2 + 3 * r) / 225],
            [(296 + 169 * r) / 1800, (88 + 7 * r) / 360, (-2 - 3 * r) / 225],
            [(16 - r) / 36, (16 + r) / 36, 1 / 9],
        ]
    )
    return nodes, matrix


def multipliers_by_collocation(
    *,
    wavenumber: float,
    depth: float,
    density: float,
    viscosity: float,
    surface_tension: float,
    acceleration: float,
    frequency: float,
    gravity: float = -9.80665,
    order: int = 24,
    steps: int = 200,
) -> np.ndarray:
    """Floquet multipliers, largest modulus first, from `order` + 1 Chebyshev points and `steps` steps a period."""
    k2 = wavenumber**2
    nu = viscosity / density
    x, d_x = chebyshev_derivative(order)
    d = d_x * (2.0 / depth)  # x = 1, the first point, is the surface z = h; x = -1, the last, the base
    n = order + 1
    one = np.eye(n)
    d2 = d @ d
    laplacian = d2 - k2 * one

    inertia = np.zeros((n + 1, n + 1))
    flow = np.zeros((n + 1, n + 1))
    inner = slice(2, n - 2)
    inertia[inner, :n] = laplacian[inner]
    flow[inner, :n] = nu * (laplacian @ laplacian)[inner]
    # Normal stress at the surface, over rho: DW' - nu (D^3 - 3 k^2 D) W = -k^2 (G + gamma k^2 / rho) zeta.
    inertia[0, :n] = d[0]
    flow[0, :n] = nu * (d2 @ d - 3 * k2 * d)[0]
    flow[1, :n] = (d2 + k2 * one)[0]  # no tangential stress
    flow[n - 2, n - 1] = 1.0  # W = 0 at the base
    flow[n - 1, :n] = d[n - 1]  # DW = 0 at the base
    inertia[n, n] = 1.0
    flow[n, 0] = 1.0  # zeta' = W at the surface
    scale = 1.0 / np.maximum(np.abs(inertia).max(axis=1), np.abs(flow).max(axis=1) / frequency)
    inertia *= scale[:, None]
    flow *= scale[:, None]

    nodes, a = three_stage_radau()
    h = 1.0 / frequency / steps
    size = n + 1
    state: np.ndarray = np.eye(size)
    for step in range(steps):
        system = np.kron(np.eye(3), inertia) - h * np.kron(a, flow)
        for i, node in enumerate(nodes):
            g = gravity - acceleration * math.cos(2 * math.pi * (step + node) / steps)
            force = -k2 * (g + surface_tension * k2 / density) * scale[0]
            # Stage i feels the force of zeta at stage i: it enters through column i of the method's matrix.
            for row in range(3):
                system[row * size, i * size + n] -= h * a[row, i] * force
        stages = np.linalg.solve(system, np.tile(inertia @ state, (3, 1)))
        state = np.array(stages[2 * size :])
    values = np.linalg.eigvals(state)
    return values[np.argsort(-np.abs(values))]
