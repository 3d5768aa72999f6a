"""The grains sub-command: one line for bad input, JSON, the screen at 80 columns without colour."""

import json
import os
import subprocess
import sys

import pytest

CUP = ("--cylinder", "70mm", "--depth", "50mm")
SHAKEN = ("--frequency", "25Hz", "--acceleration", "3g_n")
SAND = ("custom", "--bulk-density", "1500kg/m**3", "--particle-density", "2650kg/m**3", "--particle-diameter", "0.3mm")


def run(*arguments, **environment):
    return subprocess.run(
        [sys.executable, "-m", "containment", "grains", *arguments], capture_output=True, text=True, timeout=60,
        env=os.environ | environment,
    )  # fmt: skip


@pytest.mark.parametrize(
    ("arguments", "status", "word"),
    [
        ((*SAND, *CUP, "--freeboard", "50mm", *SHAKEN), 0, "HELD: "),
        ((*SAND, *CUP, "--freeboard", "2mm", *SHAKEN), 1, "NOT HELD: "),
        ((*SAND, *CUP, "--outlet", "1mm"), 3, "MARGINAL AT REST: "),
        ((*SAND, *CUP, "--open-bottom", *SHAKEN), 1, "NOT HELD: "),
        (("dry sand", *CUP, "--pocket", "20mm"), 1, "NOT HELD AT REST: "),
    ],
)
def test_screen_answers_first_and_fits(arguments, status, word):
    done = run(*arguments, NO_COLOR="1", COLUMNS="200")
    assert done.returncode == status and done.stderr == ""
    assert done.stdout.startswith(word)
    assert "\x1b" not in done.stdout and max(map(len, done.stdout.splitlines())) <= 80
    for heading in ("CASE", "WHAT HOLDS IT, WHAT LOSES IT", "HOW FAR IT GOES", "CAUTIONS", "ASSUMED"):
        assert f"\n{heading}\n" in done.stdout


def test_free_flowing_sentence_is_on_the_screen():
    done = run(*SAND, *CUP, "--open-bottom", *SHAKEN)
    assert "never held upside-down by shaking" in " ".join(done.stdout.split())


def test_json_alone():
    done = run(*SAND, *CUP, "--outlet", "10mm", *SHAKEN, "--json")
    found = json.loads(done.stdout, parse_constant=lambda c: pytest.fail(f"{c} in JSON"))
    assert done.returncode == 1 and found["verdict"] == "not held" and found["operating_point"]["gamma"] == pytest.approx(3.0)
    assert found["setting"] == {"kind": "outlet", "size_m": 0.01}


def test_ascii_stream():
    done = run("dry sand", *CUP, "--freeboard", "50mm", *SHAKEN, "--detail", PYTHONIOENCODING="ascii", PYTHONUTF8="0")
    assert done.returncode == 0 and done.stdout.isascii()


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ((*SAND, *CUP), ("--freeboard", "exactly one")),
        ((*SAND, *CUP, "--outlet", "1mm", "--pocket", "1mm"), ("--outlet, --pocket",)),
        ((*SAND, *CUP, "--outlet", "10"), ("--outlet", "no unit")),
        ((*SAND, *CUP, "--outlet", "-1mm"), ("--outlet", "at least")),
        ((*SAND, *CUP, "--outlet", "90mm"), ("wider than the vessel",)),
        ((*SAND, *CUP, "--freeboard", "1mm", "--contact-line", "pinned"), ("--contact-line", "leave it out")),
        ((*SAND, *CUP, "--freeboard", "1mm", *SHAKEN, "--crank-ratio", "0.2"), ("--crank-ratio",)),
        ((*SAND, *CUP, "--freeboard", "1mm", "--cohesion", "5mm"), ("--cohesion", "pressure")),
        ((*SAND, *CUP, "--freeboard", "1mm", "--cohesion", "5Pa", "--yield-strength", "5Pa"), ("one of the two",)),
        ((*SAND, *CUP, "--freeboard", "1mm", "--moisture", "0.4"), ("moisture", "separate liquid bridges")),
        (("no such powder", *CUP, "--freeboard", "1mm"), ("no such powder",)),
        ((*SAND, "--depth", "5mm", "--freeboard", "1mm"), ("--cylinder",)),
        ((*SAND, *CUP, "--freeboard", "1mm", "--frequency", "5Hz"), ("--frequency", "--acceleration")),
    ],
)
def test_bad_input_is_one_line(arguments, words):
    done = run(*arguments)
    assert done.returncode == 2 and done.stdout == ""
    assert done.stderr.count("\n") == 1 and all(word in done.stderr for word in words)
