"""Speed and memory against plain rivals, ratios in one run: `pytest tests/benchmarks -s`.

Not part of the timed test run. Times are the best of a few repetitions on an otherwise idle machine, one thread.
"""

import os
import subprocess
import sys
import time

import numpy as np
import pytest

import containment as ct
from containment.judgement.case import Case, allowance
from containment.physics.dispersion import Layer
from containment.physics.edges import AMPLITUDE_BOUND, first_roots
from containment.physics.exclusion import matters
from containment.physics.hill import rows_needed
from tests.independent.dense_floquet import thresholds

SYRUP = ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
CUP = ct.Cylinder(diameter="70 mm", depth="30 mm")
FREQUENCIES = np.geomspace(5.0, 2000.0, 200)
SAMPLE = 400
"""Pairs of mode and frequency on which the dense route is timed."""


def best_of(function, repetitions=5):
    """Return the shortest time of a call, s."""
    times = []
    for _ in range(repetitions):
        start = time.perf_counter()
        function()
        times.append(time.perf_counter() - start)
    return min(times)


@pytest.fixture(scope="module")
def window():
    """Edges at 200 frequencies, and how long they take."""
    case = Case(SYRUP, CUP, allowance(depth=CUP.depth))
    case.edges(FREQUENCIES)
    return case, case.edges(FREQUENCIES), best_of(lambda: case.edges(FREQUENCIES))


def modes_of(case, edges):
    """Every wavenumber up to twice the largest one that binds anywhere: what a route without bounds would have to solve."""
    highest = 2.0 * np.nanmax(np.concatenate([edges.lower_wavenumber, edges.upper_wavenumber]))
    k = case.spectrum.discrete
    return k[k <= highest]


def dense_thresholds(layer, k, w, rows):
    """First harmonic and subharmonic levels by numpy.linalg.eigvals on the truncated matrices of one mode."""
    n = np.arange(-rows, rows + 1)
    found = []
    for steps in (n, n[:-1] + 0.5):
        levels = thresholds(layer.coefficient(1j * steps * w, np.full(len(steps), k)))
        found.append(levels[0] if levels.size else np.inf)
    return found


def test_window_against_the_dense_eigenvalue_route(window):
    case, edges, taken = window
    layer, k = case.layer, modes_of(case, edges)
    rng = np.random.default_rng(1)
    pairs = [(float(rng.choice(k)), 2.0 * np.pi * float(rng.choice(FREQUENCIES))) for _ in range(SAMPLE)]

    def rows_of(kk, w):
        # as far as the edges reach: no more rows than the thresholds themselves need
        reached = np.minimum(edges.upper, AMPLITUDE_BOUND * (2 * np.pi * FREQUENCIES) ** 2)
        return rows_needed(float(np.interp(w / (2 * np.pi), FREQUENCIES, reached)) / (w * w), kk)

    start = time.perf_counter()
    dense = [dense_thresholds(layer, kk, w, rows_of(kk, w)) for kk, w in pairs]
    each = (time.perf_counter() - start) / SAMPLE

    agree = compared = 0
    for (kk, w), levels in zip(pairs, dense, strict=True):
        most = float(np.interp(w / (2 * np.pi), FREQUENCIES, edges.upper))
        for subharmonic, level in zip((False, True), levels, strict=True):
            if level < min(most, AMPLITUDE_BOUND * w * w):
                one = (np.array([kk]), np.array([w]), 0.0, np.array([1.001 * level]))
                compared += 1
                agree += abs(first_roots(layer, *one, subharmonic=subharmonic)[0] / level - 1.0) < 1e-6
    whole = each * len(k) * len(FREQUENCIES)
    # what "every mode" means: the pairs that the product's own bounds leave, all of which its edges cover
    bounded = case.spectrum.discrete[None, :]
    w = 2.0 * np.pi * FREQUENCIES[:, None]
    ceiling = np.minimum(edges.upper[:, None], AMPLITUDE_BOUND * w * w)
    every = int(np.count_nonzero(matters(layer, bounded, w, ceiling)))
    print(
        f"\nwindow of {len(FREQUENCIES)} frequencies: {1e3 * taken:.0f} ms; dense route: {1e3 * each:.2f} ms a pair of mode "
        f"and frequency, scaled from {SAMPLE} pairs to {len(k)} modes: {whole:.0f} s; ratio {whole / taken:.0f}; "
        f"to all {every} pairs that can matter: {each * every:.0f} s, ratio {each * every / taken:.0f}; "
        f"same number in {agree} of {compared} thresholds compared"
    )
    assert compared > 20
    assert agree >= 0.95 * compared  # the dense route loses real eigenvalues now and then
    assert whole / taken > 100.0


def test_window_against_one_evaluation_of_the_coefficients(window, monkeypatch):
    """All coefficients that the search evaluates, evaluated once more in the same pieces and nothing else."""
    case, _, taken = window
    calls = []
    honest = Layer.coefficient

    def recorded(self, s, wavenumber):
        calls.append((np.asarray(s, np.complex128), np.asarray(wavenumber, float)))
        return honest(self, s, wavenumber)

    monkeypatch.setattr(Layer, "coefficient", recorded)
    case.edges(FREQUENCIES)
    monkeypatch.undo()
    count = sum(np.broadcast(s, k).size for s, k in calls)
    alone = best_of(lambda: [honest(case.layer, s, k) for s, k in calls])
    print(
        f"\nwindow: {1e3 * taken:.0f} ms; its {count} coefficients in {len(calls)} pieces alone: {1e3 * alone:.0f} ms; "
        f"ratio {taken / alone:.2f}"
    )
    assert taken / alone < 6.0


def test_one_proven_verdict(window):
    motion = ct.Motion(frequency="50 Hz", acceleration="40 g_n")
    verdict = ct.assess(SYRUP, CUP, motion)
    assert verdict.held and verdict.proven
    taken = best_of(lambda: ct.assess(SYRUP, CUP, motion), 7)
    clean = ct.Surroundings(surface="clean")
    alone = best_of(lambda: ct.assess(SYRUP, CUP, motion, surroundings=clean), 7)
    print(f"\none proven verdict, all modes: {1e3 * taken:.0f} ms; with the surface stated to be clean {1e3 * alone:.0f} ms")
    assert taken < 0.5


COMMAND = [
    "-m", "containment", "liquid", "custom", "--density", "1410kg/m**3", "--viscosity", "10Pa*s", "--surface-tension", "80mN/m",
    "--cylinder", "70mm", "--depth", "30mm", "--frequency", "50Hz", "--acceleration", "40g_n",
]  # fmt: skip
BARE = ["-c", "import numpy, pint, rich.console, rich.table; u = pint.UnitRegistry(); u.Quantity('70 mm').to('m')"]


def process(arguments):
    environment = os.environ | {"OPENBLAS_NUM_THREADS": "1"}
    done = subprocess.run([sys.executable, *arguments], capture_output=True, env=environment, check=False)
    assert done.returncode == 0, done.stderr


def test_shell_command_against_a_bare_process():
    for arguments in (COMMAND, BARE):
        process(arguments)
    command, bare = (best_of(lambda a=a: process(a)) for a in (COMMAND, BARE))
    print(
        f"\ncontainment liquid from the shell: {1e3 * command:.0f} ms; bare process with numpy, pint, rich: "
        f"{1e3 * bare:.0f} ms; ratio {command / bare:.2f}"
    )
    assert command / bare < 3.0


MEMORY = """
import resource, sys
import containment as ct
water = ct.Liquid(density=998.2, viscosity=1.002e-3, surface_tension=0.0728)
vessel = ct.Cylinder(diameter=0.5, depth=0.05)
motion = ct.Motion(frequency=2000.0, acceleration={level})
verdict = ct.assess(water, vessel, motion)
print(verdict.answer.value, resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024.0)
"""


@pytest.mark.parametrize("level", [50.0, 500.0, 5000.0])
def test_memory_of_a_wide_vessel_of_water_at_2_khz(level):
    start = time.perf_counter()
    done = subprocess.run([sys.executable, "-c", MEMORY.format(level=level)], capture_output=True, text=True, check=True)
    answer, peak = done.stdout.rsplit(maxsplit=1)
    print(f"\n0.5 m of water, 2 kHz, {level:g} m/s^2: {answer}, peak {float(peak):.0f} MB, {time.perf_counter() - start:.1f} s")
    assert float(peak) < 400.0
