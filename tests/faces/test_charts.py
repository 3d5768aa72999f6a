"""Charts in characters: they fit, stay in ASCII, and show what the numbers say."""

import math
import os
import pty
import subprocess
import sys

import numpy as np
import pytest

import containment as ct
from containment.faces.chart_axes import LogAxis
from containment.faces.chart_window import window_chart, window_signs
from containment.faces.report_liquid import view_of
from containment.judgement.case import Case, allowance

G = 9.80665
CASES = {
    "syrup": (dict(density=1410.0, viscosity=10.0, surface_tension=0.08), 0.07, (50.0, 40.0 * G)),
    "thin": (dict(density=998.0, viscosity=0.001, surface_tension=0.072), 0.07, None),
    "narrow": (dict(density=1410.0, viscosity=10.0, surface_tension=0.08), 0.003, None),
    "glycerol": (dict(density=1261.0, viscosity=1.41, surface_tension=0.0634), 0.07, (100.0, 60.0 * G)),
}


def view_for(name, against="acceleration"):
    properties, diameter, point = CASES[name]
    liquid, vessel = ct.Liquid(**properties), ct.Cylinder(diameter=diameter, depth=0.03)
    motion = None if point is None else ct.Motion(frequency=point[0], acceleration=point[1])
    return view_of(Case(liquid, vessel, allowance(depth=0.03)), ct.assess(liquid, vessel, motion), against=against)


@pytest.mark.parametrize("name", CASES)
@pytest.mark.parametrize("against", ["acceleration", "stroke", "velocity"])
@pytest.mark.parametrize("width", [40, 56, 76, 116])
def test_chart_fits_and_is_ascii(name, against, width):
    view = view_for(name, against)
    lines = window_chart(view, width=width, height=18)
    assert max(map(len, lines)) <= width + 2
    assert all(line.isascii() and line.isprintable() for line in lines)
    assert lines[0] == f"{view.axis.label} [{view.axis.unit}]" and lines[-1].strip() == "frequency [Hz]"
    field = "".join(line[10:] for line in lines[1:-3])
    for sign, _ in window_signs(view, lines):
        assert sign in field, f"{sign} is explained but not drawn"


@pytest.mark.parametrize("name", ["syrup", "glycerol"])
def test_edges_and_point_stand_where_the_numbers_say(name):
    view = view_for(name)
    width, height = 86, 24
    lines = window_chart(view, width=width, height=height)
    field = [line[10:].replace("waves break it up", " " * 17).ljust(width - 10) for line in lines[1 : height + 1]]
    x = LogAxis(low=float(view.frequency[0]), high=float(view.frequency[-1]), cells=width - 10)
    y = LogAxis(low=view.lowest, high=view.highest, cells=height)
    at = [(row, line.index("@")) for row, line in enumerate(field) if "@" in line]
    assert at == [(height - 1 - y.cell(view.point.value), x.cell(view.point.frequency))]
    step = math.log(view.highest / view.lowest) / (height - 1)
    for column in range(0, x.cells, 3):
        node = int(np.argmin(np.abs(np.log(view.frequency / x.value(column)))))
        rows = [height - 1 - i for i, line in enumerate(field) if line[column] == "v"]
        for row in rows:
            assert abs(math.log(y.value(row) / view.lower[node])) <= 1.6 * step
        for row, line in enumerate(field):
            if line[column] == ":":
                value = y.value(height - 1 - row)
                assert view.lower[node] * view.margin_factor < value < view.ceiling[node]


def test_no_held_sign_without_a_window():
    chart = window_chart(view_for("thin"))
    signs = dict(window_signs(view_for("thin"), chart))
    assert ":" not in signs and "." not in signs and "v" in signs and "^" in signs
    assert "HELD" not in "".join(chart)


@pytest.mark.parametrize(("low", "high", "cells"), [(7.7, 880.0, 66), (0.3, 0.9, 20), (1e-3, 1e5, 18), (19.0, 21.0, 30)])
def test_ticks_are_round_and_stand_at_their_values(low, high, cells):
    axis = LogAxis(low=low, high=high, cells=cells)
    ticks = axis.ticks(least_gap=2)
    assert all(b[0] - a[0] >= 2 for a, b in zip(ticks, ticks[1:], strict=False))
    for cell, text in ticks:
        assert axis.cell(float(text)) == cell
        assert float(f"{float(text):.2g}") == float(text)


@pytest.mark.parametrize("columns", [40, 60, 80, 120, 200])
def test_screen_fits_terminals_narrow_and_wide(columns):
    """On a terminal of its own, whose width the program asks for."""
    import fcntl
    import struct
    import termios

    master, slave = pty.openpty()
    fcntl.ioctl(slave, termios.TIOCSWINSZ, struct.pack("HHHH", 40, columns, 0, 0))
    command = [sys.executable, "-m", "containment", "window", "glycerol", "--cylinder", "70mm", "--depth", "30mm", "--plain"]
    env = {k: v for k, v in os.environ.items() if k not in ("NO_COLOR", "FORCE_COLOR", "COLUMNS")}
    process = subprocess.Popen(command, stdout=slave, stderr=subprocess.STDOUT, env=env | {"TERM": "xterm"})
    os.close(slave)
    shown = b""
    while True:
        try:
            part = os.read(master, 65536)
        except OSError:
            break
        if not part:
            break
        shown += part
    assert process.wait(timeout=60) == 0
    lines = shown.decode().splitlines()
    assert max(map(len, lines)) <= max(columns, 60)
    assert any("frequency [Hz]" in line for line in lines)
    assert "\x1b" not in shown.decode()


def run(arguments, **environment):
    clean = {k: v for k, v in os.environ.items() if k not in ("NO_COLOR", "FORCE_COLOR", "COLUMNS", "PYTHONIOENCODING", "TERM")}
    return subprocess.run(
        [sys.executable, "-m", "containment", *arguments], capture_output=True, env=clean | environment, timeout=60, check=False
    )


WINDOW = ["window", "glycerol", "--cylinder", "70mm", "--depth", "30mm"]


@pytest.mark.parametrize("encoding", ["ascii", "cp437", "cp850", "cp1252", "utf-8"])
def test_any_code_page_carries_the_chart(encoding):
    done = run(WINDOW, PYTHONIOENCODING=encoding)
    assert done.returncode == 0 and done.stderr == b""
    assert done.stdout.isascii()


def test_colour_only_where_it_is_wanted():
    assert b"\x1b[" not in run(WINDOW).stdout
    assert b"\x1b[" in run(WINDOW, FORCE_COLOR="1", TERM="xterm").stdout
    assert b"\x1b" not in run(WINDOW, FORCE_COLOR="1", NO_COLOR="1").stdout
    assert b"\x1b" not in run(WINDOW, FORCE_COLOR="1", TERM="dumb").stdout
    assert b"\x1b" not in run([*WINDOW, "--plain"], FORCE_COLOR="1").stdout


def test_a_pipe_closed_early_is_no_failure():
    shell = f"{sys.executable} -m containment {' '.join(WINDOW)} --rows | head -1"
    done = subprocess.run(["sh", "-c", shell], capture_output=True, timeout=60, check=False)
    assert done.stdout.startswith(b"frequency_Hz,") and done.stderr == b""


def test_interrupt_leaves_with_130_and_no_traceback():
    import signal
    import time

    command = [sys.executable, "-m", "containment", "liquid", "glycerol", "--box", "60mmx80mm", "--depth", "20mm"]
    slow = [*command, "--contact-line", "pinned", "--frequency", "100Hz", "--acceleration", "60g_n"]
    process = subprocess.Popen(slow, stdout=subprocess.PIPE, stderr=subprocess.PIPE)
    time.sleep(2.0)
    if process.poll() is not None:
        pytest.skip("the machine was quicker than the interrupt")
    process.send_signal(signal.SIGINT)
    out, err = process.communicate(timeout=60)
    assert process.returncode == 130
    assert out == b"" and err == b""


def test_decimal_comma_is_explained():
    done = run([*WINDOW[:-1], "30,5mm"])
    assert done.returncode == 2
    assert b"decimal point" in done.stderr and done.stderr.count(b"\n") == 1
