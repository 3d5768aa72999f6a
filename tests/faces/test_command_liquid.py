"""`containment liquid`: exit statuses, bad input, JSON, screens for every kind of stream, and what is loaded."""

import json
import math
import os
import pty
import re
import subprocess
import sys

import pytest

from containment.faces.command import main

SYRUP = ["liquid", "custom", "--density", "1410kg/m**3", "--viscosity", "10Pa*s", "--surface-tension", "80mN/m"]
CUP = [*SYRUP, "--cylinder", "70mm", "--depth", "30mm"]
HELD = [*CUP, "--frequency", "50Hz", "--acceleration", "40g_n"]


def without(arguments, *options):
    """Return arguments with some options and their values left out."""
    kept, skip = [], False
    for argument in arguments:
        if skip:
            skip = False
        elif argument in options:
            skip = True
        else:
            kept.append(argument)
    return kept


def run(arguments, **environment):
    """Run the program as a process of its own."""
    clean = {k: v for k, v in os.environ.items() if k not in ("NO_COLOR", "FORCE_COLOR", "COLUMNS", "PYTHONIOENCODING")}
    return subprocess.run(
        [sys.executable, "-m", "containment", *arguments], capture_output=True, env=clean | environment, timeout=60, check=False
    )


# --- exit statuses ----------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("arguments", "status", "verdict"),
    [
        (HELD, 0, "held"),
        ([*CUP, "--frequency", "50Hz", "--acceleration", "15g_n"], 1, "not held"),
        ([*CUP, "--frequency", "50Hz", "--acceleration", "95g_n"], 1, "not held"),
        ([*CUP, "--frequency", "50Hz", "--acceleration", "24g_n"], 3, "marginal"),
        ([*CUP, "--frequency", "50Hz", "--acceleration", "80g_n"], 3, "marginal"),
        ([*CUP, "--frequency", "50Hz", "--acceleration", "40g_n", "--max-acceleration", "30g_n"], 1, "not held"),
        ([*CUP, "--max-acceleration", "5g_n"], 1, "not held"),
        (CUP, 0, "held"),
        ([*SYRUP, "--cylinder", "3mm", "--depth", "10mm"], 0, "held"),
    ],
)
def test_exit_status_goes_with_the_verdict(capsys, arguments, status, verdict):
    assert main([*arguments, "--json"]) == status
    captured = capsys.readouterr()
    assert captured.err == ""
    assert json.loads(captured.out)["verdict"] == verdict


BAD = [
    # arguments, and words that the line must have
    ([], ("COMMAND",)),
    (["frobnicate"], ("frobnicate",)),
    (["liquid"], ("NAME",)),
    (SYRUP, ("--cylinder", "--box", "--annulus", "--slot", "--unbounded")),
    ([*SYRUP, "--cylinder", "70mm"], ("--depth",)),
    ([*CUP, "--slot", "10mm"], ("--cylinder", "--slot", "exactly one")),
    ([*SYRUP, "--cylinder", "70mm", "--depth", "-3mm"], ("--depth", "-3mm", "at least")),
    ([*SYRUP, "--cylinder", "70mm", "--depth", "0mm"], ("--depth", "0mm", "at least")),
    ([*SYRUP, "--cylinder", "70mm", "--depth", "30"], ("--depth", "'30'", "no unit", "mm")),
    ([*SYRUP, "--cylinder", "70mm", "--depth", "30kg"], ("--depth", "30kg", "length")),
    ([*SYRUP, "--cylinder", "nanmm", "--depth", "30mm"], ("--cylinder", "nanmm")),
    ([*SYRUP, "--cylinder", "1e400mm", "--depth", "30mm"], ("--cylinder", "1e400mm", "too large")),
    ([*SYRUP, "--cylinder", "0x46mm", "--depth", "30mm"], ("--cylinder", "0x46mm")),
    ([*SYRUP, "--cylinder", "70,5mm", "--depth", "30mm"], ("--cylinder", "70,5mm", "decimal point")),
    ([*SYRUP, "--cylinder", "٧٠mm", "--depth", "30mm"], ("--cylinder", "not a number")),
    ([*SYRUP, "--cylinder", "7" * 9000 + "mm", "--depth", "30mm"], ("--cylinder", "777", "...")),
    ([*SYRUP, "--cylinder", "70mm\n\x1b[31m", "--depth", "30mm"], ("--cylinder", "unit")),
    ([*SYRUP, "--cylinder", "[bold red]70mm[/]", "--depth", "30mm"], ("--cylinder", "[bold red]")),
    ([*SYRUP, "--box", "60mm", "--depth", "30mm"], ("--box", "60mm", "60mmx80mm")),
    ([*SYRUP, "--box", "60mmx-80mm", "--depth", "30mm"], ("--box", "-80mm")),
    ([*SYRUP, "--box", "60mmx80mmx90mm", "--depth", "30mm"], ("--box",)),
    ([*SYRUP, "--box", "[red]x" * 3000, "--depth", "30mm"], ("--box",)),
    ([*SYRUP, "--annulus", "80mmx60mm", "--depth", "30mm"], ("annulus", "inner", "smaller")),
    ([*CUP, "--frequency", "50Hz"], ("--frequency", "--acceleration", "--stroke")),
    ([*CUP, "--acceleration", "40g_n"], ("--acceleration", "--frequency")),
    ([*CUP, "--frequency", "50Hz", "--stroke", "2mm", "--amplitude", "1mm"], ("--stroke", "--amplitude", "exactly one")),
    ([*CUP, "--frequency", "50Hz", "--acceleration", "40g"], ("--acceleration", "40g", "g_n")),
    ([*CUP, "--frequency", "50Hz", "--acceleration", "40"], ("--acceleration", "'40'", "g_n")),
    ([*CUP, "--frequency", "300rad/s", "--acceleration", "40g_n"], ("--frequency", "300rad/s", "angular")),
    ([*CUP, "--frequency", "18000deg/s", "--acceleration", "40g_n"], ("--frequency", "angular")),
    ([*CUP, "--frequency", "50", "--acceleration", "40g_n"], ("--frequency", "'50'", "Hz")),
    ([*CUP, "--frequency", "-50Hz", "--acceleration", "40g_n"], ("--frequency", "-50Hz")),
    ([*CUP, "--frequency", "5Hz", "--stroke", "500mm"], ("amplitude", "250 mm", "60 mm")),
    ([*CUP, "--temperature", "20"], ("--temperature", "'20'", "degC")),
    ([*CUP, "--temperature", "-300degC"], ("--temperature", "-300degC")),
    ([*CUP, "--dwell", "0s"], ("--dwell", "0s")),
    ([*CUP, "--dwell", "nan s"], ("--dwell", "nan s")),
    ([*CUP, "--margin", "0.5"], ("--margin", "0.5", "at least 1")),
    ([*CUP, "--frequency-range", "60Hz:5Hz"], ("frequency range", "60", "smaller")),
    ([*CUP, "--frequency-range", "60Hz"], ("--frequency-range", "60Hz", "LO:HI")),
    ([*CUP, "--max-force", "100N"], ("max force", "moving mass")),
    ([*CUP, "--drive", "no such drive"], ("drive", "no such drive")),
    ([*CUP, "--depth", "20mm"], ("--depth", "more than once")),
    ([*CUP, "--frobnicate", "x\ny\x1b[31m"], ("unrecognized", "--frobnicate")),
    ([*CUP, "--dep", "3mm"], ("unrecognized", "--dep")),
    ([*without(CUP, "--viscosity"), "--viscosity", "0Pa*s"], ("viscosity", "at least")),
    (without(CUP, "--viscosity"), ("viscosity", "missing")),
    ([*without(CUP, "--viscosity"), "--viscosity", "-1Pa*s"], ("viscosity", "at least")),
    ([*without(CUP, "--density"), "--density", "1410"], ("--density", "'1410'", "kg/m**3")),
]


@pytest.mark.parametrize(("arguments", "words"), BAD)
def test_bad_input_is_one_line_and_status_2(capsys, arguments, words):
    try:
        status = main(arguments)
    except SystemExit as leaving:
        status = leaving.code
    captured = capsys.readouterr()
    assert status == 2
    assert captured.out == ""
    assert captured.err.endswith("\n")
    line = captured.err[:-1]
    assert line.isprintable()
    assert len(line) < 450
    assert line.startswith("containment")
    for word in words:
        assert word in line


def test_bad_input_of_a_process_shows_no_traceback():
    done = run([*SYRUP, "--cylinder", "x\x1b[31m", "--depth", "30mm"])
    assert done.returncode == 2
    assert done.stdout == b""
    assert done.stderr.count(b"\n") == 1
    assert b"Traceback" not in done.stderr
    assert b"\x1b" not in done.stderr


# --- JSON ---------------------------------------------------------------------------------------------------------------

CORNER = {"frequency_Hz", "acceleration_m_s2", "amplitude_m", "upper_acceleration_m_s2"}
TOP = {
    "schema", "verdict", "holds_unshaken", "question", "liquid", "vessel", "dwell_s", "allowed_growth_1_s", "unshaken",
    "minimum_acceleration", "minimum_frequency", "recommended", "operating_point", "averaged_estimate_m_s2", "limits",
    "cautions", "assumptions",
}  # fmt: skip
POINT = {
    "frequency_Hz", "acceleration_m_s2", "amplitude_m", "lower_acceleration_m_s2", "upper_acceleration_m_s2",
    "growth_rate_1_s", "worst_wavenumber_1_m", "unstable_modes", "proven",
}  # fmt: skip


def every_value(node):
    if isinstance(node, dict):
        for value in node.values():
            yield from every_value(value)
    elif isinstance(node, list):
        for value in node:
            yield from every_value(value)
    else:
        yield node


@pytest.mark.parametrize(
    "arguments",
    [
        HELD,
        CUP,
        [*CUP, "--dwell", "60s"],
        [*CUP, "--dwell", "60s", "--frequency", "50Hz", "--stroke", "6mm"],
        [*CUP, "--max-acceleration", "5g_n"],
        [*SYRUP, "--cylinder", "3mm", "--depth", "10mm"],
        [*SYRUP, "--cylinder", "3mm", "--depth", "10mm", "--frequency", "200Hz", "--acceleration", "1g_n"],
        [*SYRUP, "--unbounded", "--depth", "10mm"],
        [*SYRUP, "--unbounded", "--depth", "10mm", "--dwell", "5s", "--frequency", "100Hz", "--velocity", "1m/s"],
        [*SYRUP, "--slot", "30mm", "--depth", "10mm"],
        [*SYRUP, "--box", "60 mm x 80 mm", "--depth", "30mm", "--frequency", "3000rpm", "--amplitude", "4mm"],
        [*SYRUP, "--annulus", "40mmx70mm", "--depth", "30mm", "--frequency", "50Hz", "--acceleration", "1g_n"],
    ],
)
def test_json_keeps_its_schema(capsys, arguments):
    status = main([*arguments, "--json"])
    captured = capsys.readouterr()
    assert captured.err == ""
    found = json.loads(captured.out, parse_constant=lambda name: pytest.fail(f"{name} in the output"))
    assert set(found) >= TOP
    assert found["schema"] == 1
    assert found["verdict"] in ("held", "marginal", "not held")
    assert found["question"] == ("operating point" if "--frequency" in arguments else "minimum drive")
    assert status in (0, 1, 3)
    assert (status == 1) == (found["verdict"] == "not held")
    assert set(found["liquid"]) >= {"name", "temperature_K", "density_kg_m3", "viscosity_Pa_s", "surface_tension_N_m"}
    assert set(found["unshaken"]) == {"growth_rate_1_s", "wavenumber_1_m", "time_to_spill_s"}
    for name in ("minimum_acceleration", "minimum_frequency", "recommended"):
        if found[name] is not None:
            assert set(found[name]) == CORNER | ({"margin"} if name == "recommended" else set())
    if "--frequency" in arguments:
        assert set(found["operating_point"]) >= POINT
        assert isinstance(found["operating_point"]["proven"], bool)
        assert isinstance(found["operating_point"]["unstable_modes"], int)
    else:
        assert found["operating_point"] is None
    for limit in found["limits"]:
        assert set(limit) >= {"name", "value", "bound", "unit", "ok", "source"}
        assert isinstance(limit["ok"], bool)
        assert limit["source"]
    assert all(set(caution) == {"topic", "text"} for caution in found["cautions"])
    assert all(isinstance(line, str) and line for line in found["assumptions"])
    for value in every_value(found):
        assert not isinstance(value, float) or math.isfinite(value)


def test_json_is_one_object_and_nothing_else():
    done = run([*HELD, "--json"])
    assert done.returncode == 0
    assert done.stderr == b""
    assert json.loads(done.stdout)["verdict"] == "held"
    assert b"\x1b" not in done.stdout


# --- screens ------------------------------------------------------------------------------------------------------------

ESCAPE = re.compile(rb"\x1b")
NUMBERS = [b"40 g_n", b"50 Hz", b"7.95 mm", b"21.34 g_n", b"81.77 g_n"]


def on_a_terminal(arguments, columns, **environment):
    """Run the program on a pseudo-terminal of a width and return what it shows."""
    import fcntl
    import struct
    import termios

    leader, follower = pty.openpty()
    fcntl.ioctl(follower, termios.TIOCSWINSZ, struct.pack("HHHH", 40, columns, 0, 0))
    clean = {k: v for k, v in os.environ.items() if k not in ("NO_COLOR", "FORCE_COLOR", "COLUMNS", "PYTHONIOENCODING")}
    process = subprocess.Popen(
        [sys.executable, "-m", "containment", *arguments], stdin=follower, stdout=follower, stderr=subprocess.PIPE,
        env=clean | {"TERM": "xterm-256color", "LANG": "C.UTF-8", "PYTHONUTF8": "1"} | environment, close_fds=True,
    )  # fmt: skip
    os.close(follower)
    shown = b""
    while True:
        try:
            more = os.read(leader, 65536)
        except OSError:
            break
        if not more:
            break
        shown += more
    process.wait(timeout=60)
    os.close(leader)
    assert process.stderr.read() == b""
    return shown


def widths(shown):
    text = re.sub(r"\x1b\[[0-9;]*m", "", shown.decode("utf-8"))
    return [len(line.rstrip("\r")) for line in text.split("\n")]


def test_piped_screen_is_plain_and_80_columns():
    done = run(HELD)
    assert done.returncode == 0
    assert not ESCAPE.search(done.stdout)
    assert max(widths(done.stdout)) <= 80
    assert done.stdout.startswith(b"HELD")
    for number in NUMBERS:
        assert number in done.stdout


def test_ascii_only_streams_get_ascii():
    done = run(HELD, PYTHONIOENCODING="ascii")
    assert done.returncode == 0
    assert done.stderr == b""
    done.stdout.decode("ascii")
    assert b"?" not in done.stdout
    for number in NUMBERS:
        assert number in done.stdout


@pytest.mark.parametrize("columns", [80, 60, 40, 200])
def test_terminal_of_any_width_keeps_its_numbers(columns):
    shown = on_a_terminal(HELD, columns)
    assert ESCAPE.search(shown)
    plain = re.sub(rb"\x1b\[[0-9;]*m", b"", shown)
    assert "…".encode() not in plain
    flat = b" ".join(plain.replace("┃".encode(), b" ").replace("│".encode(), b" ").split())
    for number in NUMBERS:
        assert number in flat
    assert max(widths(shown)) <= max(columns, 60)


def test_no_color_leaves_no_escape_at_all():
    for environment in ({"NO_COLOR": "1"}, {"TERM": "dumb"}):
        assert not ESCAPE.search(on_a_terminal(HELD, 80, **environment))
    assert not ESCAPE.search(on_a_terminal([*HELD, "--plain"], 80))


def test_closed_pipe_is_no_failure():
    process = subprocess.Popen(
        f"{sys.executable} -m containment {' '.join(map(repr, HELD))} | head -1; exit ${{PIPESTATUS[0]}}",
        shell=True, executable="/bin/bash", stdout=subprocess.PIPE, stderr=subprocess.PIPE,
    )  # fmt: skip
    out, err = process.communicate(timeout=60)
    assert out.count(b"\n") == 1
    assert b"Traceback" not in err
    assert err == b""
    assert process.returncode in (0, 141)


def test_reader_that_has_gone_before_the_first_line():
    process = subprocess.Popen(
        f"{sys.executable} -m containment {' '.join(map(repr, HELD))} --json | true; exit ${{PIPESTATUS[0]}}",
        shell=True, executable="/bin/bash", stdout=subprocess.PIPE, stderr=subprocess.PIPE,
    )  # fmt: skip
    _, err = process.communicate(timeout=60)
    assert err == b""
    assert process.returncode in (0, 141)


# --- what is loaded -----------------------------------------------------------------------------------------------------


def loaded_by(arguments):
    code = (
        "import sys\nfrom containment.faces.command import main\n"
        f"try:\n    main({arguments!r})\nexcept SystemExit:\n    pass\n"
        "sys.stderr.write('LOADED ' + ' '.join(sorted(sys.modules)) + '\\n')"
    )
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, timeout=60, check=True)
    return set(done.stderr.rpartition("LOADED ")[2].split())


@pytest.mark.parametrize("arguments", [["--help"], ["frobnicate"], ["--version"], []])
def test_help_and_argument_errors_need_argparse_alone(arguments):
    assert not loaded_by(arguments) & {"numpy", "pint", "rich", "scipy"}


@pytest.mark.parametrize("arguments", [["liquid", "--help"], [*CUP, "--frobnicate"], ["liquid"]])
def test_help_of_the_subcommand_loads_neither_units_nor_screen(arguments):
    assert not loaded_by(arguments) & {"pint", "rich", "scipy"}


def test_a_verdict_on_a_cylinder_needs_no_scipy():
    for arguments in (HELD, CUP, [*HELD, "--json"]):
        # the bare package may come with pint, which tries what else is installed; what is slow are its parts
        assert not loaded_by(arguments) & {"scipy.special", "scipy.optimize", "scipy.linalg", "matplotlib"}


def test_json_needs_no_rich():
    assert "rich" not in loaded_by([*HELD, "--json"])


def test_help_names_every_option_of_the_interface(capsys):
    with pytest.raises(SystemExit) as leaving:
        main(["liquid", "--help"])
    assert leaving.value.code == 0
    text = capsys.readouterr().out
    for option in (
        "--cylinder", "--box", "--annulus", "--slot", "--unbounded", "--depth", "--temperature", "--density", "--viscosity",
        "--surface-tension", "--table", "--frequency", "--acceleration", "--amplitude", "--stroke", "--velocity",
        "--max-stroke", "--max-velocity", "--max-acceleration", "--max-force", "--moving-mass", "--frequency-range",
        "--drive", "--dwell", "--ambient-pressure", "--json", "--plain", "--detail",
    ):  # fmt: skip
        assert option in text
