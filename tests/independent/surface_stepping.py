"""The surface of a layer and its decaying motions, stepped over one period by an implicit Radau IIA method."""

from __future__ import annotations

from collections.abc import Callable
from functools import lru_cache

import numpy as np

from tests.independent.depth_elements import DepthModes

STAGES = 5
"""Stages of the Radau IIA method (order 2 STAGES - 1)."""


@lru_cache(maxsize=8)
def radau(stages: int) -> tuple[np.ndarray, np.ndarray]:
    """Nodes (stages,) and matrix (stages, stages) of Radau IIA: collocation at the right Radau points of [0, 1]."""
    legendre = np.polynomial.legendre.Legendre
    if stages == 1:
        nodes = np.array([1.0])
    else:
        # The right Radau points are the zeros of P_s - P_(s-1); x = 1 is one of them.
        radau_polynomial = legendre.basis(stages) - legendre.basis(stages - 1)
        roots = np.sort(radau_polynomial.roots().real)
        derivative = radau_polynomial.deriv()
        for _ in range(3):
            roots = roots - radau_polynomial(roots) / derivative(roots)
        nodes = (np.append(roots[:-1], 1.0) + 1.0) / 2
    powers = np.arange(stages)
    vandermonde = nodes[:, None] ** powers
    integrals = nodes[:, None] ** (powers + 1) / (powers + 1)
    return nodes, np.linalg.solve(vandermonde.T, integrals.T).T


def frozen_exponents(modes: DepthModes, stiffness: float) -> np.ndarray:
    """Exponents of the layer under a constant force per displacement."""
    n = len(modes.rates)
    matrix = np.zeros((n + 1, n + 1))
    matrix[np.arange(n), np.arange(n)] = -modes.rates
    matrix[:n, n] = -stiffness * modes.surface
    matrix[n, :n] = modes.surface
    return np.linalg.eigvals(matrix)


def period_map(
    modes: DepthModes, stiffness: Callable[[np.ndarray], np.ndarray], *, period: float, steps: int, stages: int = STAGES
) -> np.ndarray:
    """Monodromy matrix of c_j' = -rate_j c_j - f_j stiffness(t) zeta, zeta' = sum f_j c_j; shape (n + 1, n + 1).

    The motions meet only in zeta, so each step is solved for the values of zeta at the stages, one small matrix a step.
    """
    nodes, a = radau(stages)
    h = period / steps
    n = len(modes.rates)
    f = modes.surface
    # The stages of one motion: P (c_j 1 - h f_j A q), q = stiffness * zeta at the stages, P = (1 + h rate_j A)^-1.
    p = np.linalg.inv(np.eye(stages) + h * modes.rates[:, None, None] * a)
    p_a = p @ a
    gather = np.ones((stages, n + 1))
    gather[:, :n] = (h * a @ p.sum(axis=2).T) * f
    feedback = h**2 * a @ np.tensordot(f**2, p_a, axes=1)
    t = (np.arange(steps)[:, None] + nodes) * h
    q = stiffness(t)
    # zeta at the stages is solve @ gather @ state; rows below give q at the stages and zeta at the end of the step.
    solve = np.linalg.inv(np.eye(stages) + feedback * q[:, None, :])
    answer = np.concatenate([q[:, :, None] * solve, solve[:, -1:, :]], axis=1)
    spread = np.zeros((n + 1, stages + 1))
    spread[:n, :stages] = -h * f[:, None] * p_a[:, -1, :]
    spread[n, stages] = 1.0
    decay = np.append(p[:, -1, :].sum(axis=1), 0.0)[:, None]
    state = np.eye(n + 1)
    for step in answer:
        state = decay * state + spread @ (step @ (gather @ state))
    return state
