"""`containment window`: numbers, exit statuses, axes, files, what it refuses, and that its held area is held."""

import csv
import io
import json
import math
import subprocess
import sys

import numpy as np
import pytest

import containment as ct
from containment.faces.command import main
from containment.faces.report_liquid import view_of
from containment.faces.window_view import window_view
from containment.judgement.case import Case, allowance

SYRUP = ["custom", "--density", "1410kg/m^3", "--viscosity", "10Pa*s", "--surface-tension", "80mN/m"]
CUP = ["--cylinder", "70mm", "--depth", "30mm"]
CASE = [*SYRUP, *CUP]
G = 9.80665


def rows_of(capsys, *more):
    status = main(["window", *CASE, "--rows", *more])
    out = capsys.readouterr()
    assert out.err == ""
    return status, list(csv.DictReader(io.StringIO(out.out)))


def number(text):
    return float(text) if text else math.inf


def test_rows_are_those_of_the_library(capsys):
    status, rows = rows_of(capsys)
    assert status == 0
    f = np.array([float(row["frequency_Hz"]) for row in rows])
    liquid = ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08)
    window = ct.holding_window(liquid, ct.Cylinder(diameter=0.07, depth=0.03), frequencies=f)
    for name, array in (("lower", window.lower), ("upper", window.upper), ("ceiling", window.ceiling)):
        shown = np.array([number(row[f"{name}_acceleration_m_s2"]) for row in rows])
        known = np.isfinite(array)
        assert np.array_equal(known, np.isfinite(shown))
        assert np.allclose(shown[known], array[known], rtol=1e-9)
    assert [row["held"] == "true" for row in rows] == list(window.held)


@pytest.mark.parametrize(("against", "unit", "power", "factor"), [("stroke", "m", 2, 2.0), ("velocity", "m_s", 1, 1.0)])
def test_other_axes_follow_from_a_sine(capsys, against, unit, power, factor):
    """Of A cos(w t): stroke 2 A = 2 a / w^2, peak velocity a / w."""
    _, rows = rows_of(capsys)
    _, others = rows_of(capsys, "--against", against)
    for row, other in zip(rows[::20], others[::20], strict=True):
        w = 2.0 * math.pi * float(row["frequency_Hz"])
        for name in ("lower", "upper"):
            a, b = number(row[f"{name}_acceleration_m_s2"]), number(other[f"{name}_{against}_{unit}"])
            assert b == pytest.approx(factor * a / w**power, rel=1e-8) or (math.isinf(a) and math.isinf(b))


def test_stroke_of_a_crank_is_what_the_crank_makes():
    """A slider-crank with constant speed has a stroke of 2 r; its peak acceleration is r w^2 (1 + r/l)."""
    case = Case(
        ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08), ct.Cylinder(diameter=0.07, depth=0.03),
        allowance(depth=0.03), ct.Surroundings(), ct.waveform(crank_ratio=0.25),
    )
    motion = ct.Motion(frequency=50.0, stroke=0.008, crank_ratio=0.25)
    assert motion.acceleration == pytest.approx(0.004 * (2 * math.pi * 50.0) ** 2 * 1.25, rel=1e-4)
    limits = ct.DriveLimits(max_stroke=0.01, frequency_range=(40.0, 60.0))
    view = window_view(case, None, limits, against="stroke", point=(motion.frequency, motion.acceleration), nodes=3)
    assert view.point.value == pytest.approx(8.0, rel=1e-9)
    assert view.point.stroke == pytest.approx(0.008, rel=1e-9)
    inside = (view.frequency >= 40.0) & (view.frequency <= 60.0)
    assert view.drive[inside] == pytest.approx(np.full(np.count_nonzero(inside), 10.0), rel=1e-9)


def test_json_is_one_object_with_verdict_rows_and_case(capsys):
    assert main(["window", *CASE, "--json", "--dwell", "60s"]) == 0
    out = capsys.readouterr()
    found = json.loads(out.out, parse_constant=lambda name: pytest.fail(f"{name} in JSON"))
    assert found["verdict"] == "held" and found["window"]["against"] == "acceleration"
    sizes = {len(column) for name, column in found["window"].items() if name != "against"}
    assert len(sizes) == 1
    assert found["case"]["process"] == {"dwell": "60s"}
    least = found["minimum_acceleration"]
    i = found["window"]["frequency_Hz"].index(pytest.approx(least["frequency_Hz"]))
    assert found["window"]["lower_acceleration_m_s2"][i] == pytest.approx(least["acceleration_m_s2"], rel=1e-6)


@pytest.mark.parametrize(
    ("more", "status"),
    [
        ([], 0),
        (["--max-acceleration", "5g_n"], 1),
        (["--frequency", "50Hz", "--acceleration", "40g_n"], 0),
        (["--frequency", "50Hz", "--acceleration", "15g_n"], 1),
        (["--frequency", "50Hz", "--acceleration", "24g_n"], 3),
        (["--frequency-range", "16Hz:18Hz"], 3),
    ],
)
def test_exit_status_is_that_of_liquid(capsys, more, status):
    assert main(["window", *CASE, *more]) == status
    assert main(["liquid", *CASE, *more]) == status


REFUSED = [
    (["--rows", "--json"], ("--rows", "--json")),
    (["--chart", "window.bmp"], ("--chart", "window.bmp", ".svg")),
    (["--chart", "no/such/folder/window.svg"], ("--chart", "no/such/folder")),
    (["--report", "report.docx"], ("--report", "report.docx", ".html")),
    (["--report", "no/such/folder/report.html"], ("--report", "no/such/folder")),
    (["--against", "force"], ("--against", "force", "stroke")),
    (["--rheology", "power-law:consistency=10Pa*s,index=0.5"], ("shear rate", "containment liquid")),
]


@pytest.mark.parametrize(("more", "words"), REFUSED)
def test_what_is_refused_is_told_in_one_line(capsys, more, words):
    if "power-law" in str(more):
        more = ["--rheology", "power-law:consistency=10,index=0.5"]
    try:
        status = main(["window", *CASE, *more])
    except SystemExit as stop:
        status = stop.code
    out = capsys.readouterr()
    assert status == 2 and out.out == ""
    assert out.err.count("\n") == 1
    assert all(word in out.err for word in words), out.err


def test_window_of_a_pinned_box_is_refused(capsys):
    box = [*SYRUP, "--box", "60mmx80mm", "--depth", "20mm", "--contact-line", "pinned"]
    assert main(["window", *box]) == 2
    assert "--contact-line" in capsys.readouterr().err


def test_missing_matplotlib_is_one_clear_line(capsys, monkeypatch, tmp_path):
    monkeypatch.setattr("containment.faces.picture_file.drawable", lambda: False)
    assert main(["window", *CASE, "--chart", str(tmp_path / "x.svg")]) == 2
    out = capsys.readouterr()
    assert out.err.count("\n") == 1 and "matplotlib" in out.err and "containment[plot]" in out.err
    assert not (tmp_path / "x.svg").exists()


@pytest.mark.parametrize("command", ["liquid", "window"])
def test_matplotlib_is_loaded_for_pictures_only(command):
    code = f"""
import sys
from containment.faces.command import main
main([{command!r}, *{CASE!r}])
assert not any(name.split(".")[0] in ("matplotlib", "PIL") for name in sys.modules), "matplotlib was loaded"
"""
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, timeout=120, check=False)
    assert done.returncode == 0, done.stderr


@pytest.mark.parametrize("seed", [1, 2, 3])
def test_points_of_the_held_area_are_held_and_those_outside_the_edges_are_not(seed):
    """The shade of the chart and the verdict, which counts every mode, have to agree."""
    rng = np.random.default_rng(seed)
    liquid = ct.Liquid(
        density=rng.uniform(900.0, 1500.0), viscosity=10.0 ** rng.uniform(0.0, 1.3), surface_tension=rng.uniform(0.03, 0.08)
    )
    vessel = ct.Cylinder(diameter=rng.uniform(0.03, 0.09), depth=rng.uniform(0.01, 0.04))
    case = Case(liquid, vessel, allowance(depth=vessel.depth))
    view = view_of(case, ct.assess(liquid, vessel))
    low, high = view.safe
    open_ = np.flatnonzero(low < high)
    assert len(open_), f"seed {seed}: no held area to test"
    for i in rng.choice(open_, 4):
        a = math.exp(rng.uniform(math.log(low[i] * 1.001), math.log(high[i] * 0.999))) * G
        verdict = ct.assess(liquid, vessel, ct.Motion(frequency=view.frequency[i], acceleration=a))
        tilt = any("tilt" in limit.name and not limit.ok for limit in verdict.limits)
        assert verdict.held or tilt, f"seed {seed}: {view.frequency[i]} Hz, {a / G} g_n: {verdict.reason}"
    for i in rng.choice(np.flatnonzero(np.isfinite(view.lower)), 3):
        a = 0.97 * float(view.lower[i]) * G
        assert not ct.assess(liquid, vessel, ct.Motion(frequency=view.frequency[i], acceleration=a)).held


def test_a_doubtful_window_has_no_held_area():
    """A slot is judged across its width only: nothing there may be called held."""
    liquid, vessel = ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08), ct.Slot(width=0.01, depth=0.03)
    view = view_of(Case(liquid, vessel, allowance(depth=0.03)), ct.assess(liquid, vessel))
    assert view.held.any()
    assert not np.any(view.safe[0] < view.safe[1])
