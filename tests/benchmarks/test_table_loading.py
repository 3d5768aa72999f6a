"""Loading the property tables against importing numpy, in one run."""

import subprocess
import sys
import time

from containment.given.tables import (
    drive_entry,
    drive_names,
    grain_entry,
    grain_names,
    liquid_entry,
    liquid_names,
    lookup,
)


def load_all():
    lookup._built_in.cache_clear()
    for names, entry in ((liquid_names, liquid_entry), (grain_names, grain_entry), (drive_names, drive_entry)):
        for name in names():
            entry(name)


def load_one():
    lookup._built_in.cache_clear()
    liquid_entry("glycerol")


def best_of(function, repetitions):
    times = []
    for _ in range(repetitions):
        start = time.perf_counter()
        function()
        times.append(time.perf_counter() - start)
    return min(times)


IMPORT = "import time, pathlib, {before}; t = time.perf_counter(); import {module}; print(time.perf_counter() - t)"


def importing(module, before):
    code = IMPORT.format(module=module, before=before)
    return min(float(subprocess.check_output([sys.executable, "-c", code], text=True)) for _ in range(7))


def test_loading_all_tables_costs_a_fraction_of_importing_numpy():
    numpy = importing("numpy", "sys")
    package = importing("containment.given.tables", "numpy, containment.given.quantities")
    every, one = best_of(load_all, 20), best_of(load_one, 20)
    print(
        f"\nimport numpy {1e3 * numpy:.1f} ms; import of the tables' code {1e3 * package:.1f} ms; "
        f"one liquid {1e3 * one:.1f} ms; all entries of all tables {1e3 * every:.1f} ms"
    )
    assert every < 0.25 * numpy
    assert one < 0.1 * numpy
