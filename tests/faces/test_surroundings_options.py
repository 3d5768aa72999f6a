"""Options for what surrounds the layer and for how it moves: each reaches the verdict and its JSON."""

import json
import math

import pytest

from containment.faces.command import main

SYRUP = ["liquid", "custom", "--density", "1410kg/m3", "--viscosity", "10Pa*s", "--surface-tension", "80mN/m"]
CUP = ["--cylinder", "70mm", "--depth", "30mm"]
POINT = ["--frequency", "50Hz", "--acceleration", "40g_n"]
G = 9.80665


def answer(capsys, *more, point=POINT, vessel=CUP):
    status = main([*SYRUP, *vessel, *point, *more, "--json"])
    return status, json.loads(capsys.readouterr().out)


def lower(result):
    return result["operating_point"]["lower_acceleration_m_s2"] / G


def test_pinned_rim(capsys):
    # 20.754 to 85.076 g_n: summed to infinity, and held against a dense eigenvalue problem in tests/physics/test_pinned.py
    status, result = answer(capsys, "--contact-line", "pinned")
    assert status == 0 and result["operating_point"]["proven"]
    assert lower(result) == pytest.approx(20.754, abs=2e-3)
    assert result["operating_point"]["upper_acceleration_m_s2"] / G == pytest.approx(85.076, abs=2e-3)


def test_pinned_box_wants_a_drive_point(capsys):
    assert main([*SYRUP, "--box", "60mmx80mm", "--depth", "15mm", "--contact-line", "pinned"]) == 2
    assert "drive point" in capsys.readouterr().err


def test_trapped_gas(capsys):
    _, result = answer(capsys, "--cushion", "100mm")
    gas = result["trapped_gas"]
    load = 1410.0 * G * 0.03
    height = 0.1 * 101325.0 / (101325.0 + load)
    w0 = math.sqrt(1.4 * (101325.0 + load) / (1410.0 * 0.03 * height))  # spring of the gas by hand
    assert gas["resonance_Hz"] == pytest.approx(w0 / (2.0 * math.pi), rel=1e-6)
    assert any("resonance" in line for line in result["assumptions"])


def test_crank_and_second_harmonic(capsys):
    _, sine = answer(capsys)
    _, crank = answer(capsys, "--crank-ratio", "0.2")
    _, none = answer(capsys, "--second-harmonic", "0")
    _, second = answer(capsys, "--second-harmonic", "30%@90deg")
    assert lower(none) == pytest.approx(lower(sine), rel=1e-12)
    assert lower(crank) > 1.1 * lower(sine)  # the peak of a crank's motion is sharper than what holds the layer
    assert lower(second) > 1.05 * lower(sine)
    assert crank["operating_point"]["proven"] and second["operating_point"]["proven"]


def test_skin_and_film(capsys):
    _, covered = answer(capsys, "--surface", "covered")
    _, film = answer(capsys, "--film-modulus", "20mN/m")
    assert lower(covered) == pytest.approx(23.035, abs=2e-3)  # computed by a separate determinant, tests/physics/test_film.py
    assert covered["surroundings"]["surface"] == "covered"
    assert lower(film) == pytest.approx(21.335, rel=2e-3)


def test_liquid_below(capsys):
    status, result = answer(
        capsys, "--below", "silicone oil 100", "--below-depth", "20mm", "--interfacial-tension", "30mN/m"
    )
    assert status == 1 and result["surroundings"]["below"]["name"].startswith("silicone oil")


def test_tilt_and_thin_air(capsys):
    _, level = answer(capsys)
    status, tilted = answer(capsys, "--tilt", "15deg")
    assert status == 3 and "tilt" in tilted["reason"]
    _, high = answer(capsys, "--ambient-pressure", "60kPa")
    pull = [next(limit for limit in r["limits"] if limit["name"].startswith("pull-off")) for r in (level, high)]
    assert pull[1]["value"] == pytest.approx(pull[0]["value"] - 41325.0)


def test_drive_class_and_ranges(capsys):
    _, result = answer(capsys, "--drive", "voice coil", point=[])
    assert result["recommended"] is None or result["recommended"]["frequency_Hz"] <= 200.0
    _, free = answer(capsys, point=[])
    assert free["drives_that_could"]
    _, detail = answer(capsys, "--detail")
    low, high = detail["held_over"]["viscosity_Pa_s"]
    assert low < 10.0 < high


@pytest.mark.parametrize(
    "more",
    [
        ["--second-harmonic", "0.2", "--crank-ratio", "0.2"],
        ["--crank-ratio", "2"],
        ["--second-harmonic", "x@y"],
        ["--cushion", "0mm"],
        ["--below", "water"],
        ["--tilt", "95deg"],
        ["--surface", "dirty"],
        ["--contact-line", "pinned", "--cushion", "5mm"],
    ],
)
def test_bad_surroundings_are_one_line(more, capsys):
    try:
        status = main([*SYRUP, *CUP, *POINT, *more])
    except SystemExit as leave:
        status = leave.code
    captured = capsys.readouterr()
    assert status == 2 and not captured.out
    assert captured.err.count("\n") == 1


def test_stroke_of_a_crank_is_the_stroke_that_was_asked_for(capsys):
    more = [*SYRUP, *CUP, "--frequency", "50Hz", "--stroke", "8mm", "--crank-ratio", "0.25"]
    main(more)
    assert "8 mm peak to peak" in capsys.readouterr().out.replace("\n", " ")
    main([*more, "--json"])
    assert json.loads(capsys.readouterr().out)["operating_point"]["amplitude_m"] == pytest.approx(0.004, rel=1e-3)
