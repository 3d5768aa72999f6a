"""`containment study` as its users meet it."""

import json
import os
import pty
import subprocess
import sys

import pytest

from containment.faces.command import main
from tests.studies.plans import toml_plan

DRAWN = """
[study]
title = "Uncertain syrup (invented)"
proof = false
[fixed]
name = "custom"
density = "1410 kg/m**3"
cylinder = "70 mm"
depth = "30 mm"
frequency = "50 Hz"
[vary]
acceleration = ["26 g_n", "31 g_n"]
[uncertain]
viscosity = {distribution = "lognormal", median = "10 Pa*s", factor = 1.3}
surface_tension = {distribution = "normal", mean = "80 mN/m", sd = "3 mN/m"}
[sample]
method = "sensitivity"
count = 32
"""


@pytest.fixture
def drawn(tmp_path):
    path = tmp_path / "drawn.toml"
    path.write_text(DRAWN)
    return path


def run(capfd, *arguments):
    with_status = None
    try:
        status = main(["study", *map(str, arguments)])
    except SystemExit as left:
        with_status = left.code
        status = left.code
    out, err = capfd.readouterr()
    assert "Traceback" not in err
    return (status if with_status is None else with_status), out, err


def test_the_screen_says_chances_and_what_matters(capfd, drawn):
    status, out, err = run(capfd, drawn, "--workers", 1)
    assert (status, err) == (0, "")
    for text in ("UNCERTAIN SYRUP", "PROBABILITY OF HOLDING", "26 g_n", "31 g_n", "of 64", "SOBOL", "viscosity", "Clopper"):
        assert text in out, text
    assert "held by the edges, not proven" in out and "the proof was left out" in out
    assert "marginal, unproven and failed cases never count as held" in " ".join(out.split())
    assert max(map(len, out.splitlines())) <= 80


def test_json_is_one_object_and_nothing_else(capfd, drawn):
    status, out, err = run(capfd, drawn, "--workers", 1, "--json")
    found = json.loads(out)
    assert (status, err) == (0, "")
    assert found["cases"] == 256 and found["proof"] is False
    points = found["points"]
    assert [point["inputs"] for point in points] == [{"acceleration_m_s2": 26 * 9.80665}, {"acceleration_m_s2": 31 * 9.80665}]
    assert 0.0 <= points[1]["holding_probability"]["low"] <= points[1]["holding_probability"]["probability"] <= 1.0
    assert set(points[1]["sensitivity"][0]["indices"]) == {"viscosity", "surface_tension"}


def test_records_go_to_the_file_and_are_resumed(capfd, tmp_path):
    plan, out = toml_plan(tmp_path, 20), tmp_path / "records.jsonl"
    assert run(capfd, plan, "--out", out, "--workers", 1)[0] == 0
    whole = out.read_bytes()
    out.write_bytes(whole[:-5000])
    status, text, _ = run(capfd, plan, "--out", out, "--workers", 1)
    assert status == 0 and out.read_bytes() == whole
    assert "went on from" in text and "mended" in text


def test_an_export_at_the_end(capfd, tmp_path):
    table = tmp_path / "table.csv"
    assert run(capfd, toml_plan(tmp_path, 2), "--workers", 1, "--export", table)[0] == 0
    assert len(table.read_text().splitlines()) == 201


def test_the_plan_alone_is_checked(capfd, tmp_path):
    status, out, _ = run(capfd, toml_plan(tmp_path, 20), "--check")
    assert (status, out) == (0, "The plan has no faults: 2000 cases of operating point, without proof (proof = false).\n")
    status, out, _ = run(capfd, toml_plan(tmp_path, 20), "--check", "--json")
    assert json.loads(out)["plan"]["cases"] == 2000


def test_cases_without_a_verdict_are_told_by_the_status(capfd, tmp_path):
    plan = toml_plan(tmp_path, 2)
    plan.write_text(plan.read_text().replace('"30 Hz"', '"5 Hz"'))
    status, out, _ = run(capfd, plan, "--workers", 1)
    assert status == 3
    assert "the records of failed cases say under error" in " ".join(out.split())


@pytest.mark.parametrize(
    ("arguments", "says"),
    [
        (["PLAN", "--workers", "0"], "--workers: '0'"),
        (["PLAN", "--workers", "many"], "--workers: 'many'"),
        (["PLAN", "--workers", "2", "--scheduler", "tcp://x:1"], "--workers: given with --scheduler"),
        (["PLAN", "--export", "x.xlsx"], "--export: 'x.xlsx'"),
        (["none.toml"], "plan: 'none.toml' cannot be read"),
        (["PLAN", "--speed", "3"], "--speed"),
        ([], "PLAN.toml"),
        (["LARGE"], "--out: missing"),
    ],
)
def test_bad_input_is_one_line(capfd, tmp_path, arguments, says):
    large = tmp_path / "large.toml"
    large.write_text(toml_plan(tmp_path, 2).read_text().replace("count = 2}", "count = 20000}"))
    named = [{"PLAN": str(toml_plan(tmp_path, 2)), "LARGE": str(large)}.get(a, a) for a in arguments]
    status, out, err = run(capfd, *named)
    assert (status, out) == (2, "")
    assert says in err and err.count("\n") == 1


def test_every_fault_of_a_plan_is_in_the_one_line(capfd, drawn):
    drawn.write_text(DRAWN.replace("depth", "dept").replace('"26 g_n"', '"26 g"').replace("count = 32", "count = 33"))
    status, _, err = run(capfd, drawn)
    assert status == 2 and err.count("\n") == 1
    for text in ("'dept' is not an input of liquid; expected depth", "write g_n", "power of 2", "depth: missing"):
        assert text in err, text


def command(plan, *more):
    return [sys.executable, "-m", "containment", "study", str(plan), "--workers", "1", *more]


def test_nothing_of_the_progress_is_left_in_a_pipe(tmp_path):
    done = subprocess.run(command(toml_plan(tmp_path, 2)), capture_output=True, text=True, check=True)
    assert done.stderr == "" and "\x1b" not in done.stdout


@pytest.mark.skipif(os.name != "posix", reason="a terminal of a POSIX system")
def test_progress_shows_on_a_terminal_with_rate_and_time_left(tmp_path):
    ours, theirs = pty.openpty()
    plan = toml_plan(tmp_path, 600)
    process = subprocess.Popen(command(plan, "--out", str(tmp_path / "o.jsonl")), stdout=subprocess.PIPE, stderr=theirs,
                               env={**os.environ, "TERM": "xterm", "COLUMNS": "100"})  # fmt: skip
    os.close(theirs)
    seen = b""
    while True:
        try:
            piece = os.read(ours, 4096)
        except OSError:
            break
        if not piece:
            break
        seen += piece
    out, _ = process.communicate()
    os.close(ours)
    assert process.returncode == 0
    assert b"60000" in seen and b"a second" in seen and b"0:00:" in seen
    assert b"\x1b" not in out
    quiet = subprocess.run(command(toml_plan(tmp_path, 2), "--json"), capture_output=True, text=True, check=True)
    assert quiet.stderr == ""


def test_the_help_needs_nothing_heavy(tmp_path):
    code = (
        "import sys\nfrom containment.faces.command import main\n"
        "try:\n    main(['study', '--help'])\nexcept SystemExit:\n    pass\n"
        "print([m for m in ('numpy', 'scipy', 'pint', 'rich', 'distributed') if m in sys.modules], file=sys.stderr)"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert done.stderr.strip() == "[]"
    assert "--scheduler" in done.stdout
