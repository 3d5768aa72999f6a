"""The border where units are checked: what is read, what is refused, and in which words."""

import math

import numpy as np
import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from containment.errors import InputError
from containment.given.quantities import KINDS, angular_frequency, parse_quantity, si_value

# Factors: SI brochure (9th ed., 2019), NIST SP 811 for inch, foot, pound, psi, Fahrenheit.
READ = [
    ("70mm", "length", 0.07),
    ("70 mm", "length", 0.07),
    ("7e1mm", "length", 0.07),
    ("+.07 m", "length", 0.07),
    ("2.5 in", "length", 0.0635),
    ("1 ft", "length", 0.3048),
    ("25 degC", "temperature", 298.15),
    ("-10degC", "temperature", 263.15),
    ("77 degF", "temperature", 298.15),
    ("300 K", "temperature", 300.0),
    ("2.5 Pa*s", "viscosity", 2.5),
    ("1000 mPa.s", "viscosity", 1.0),
    ("1000 cP", "viscosity", 1.0),
    ("10 P", "viscosity", 1.0),
    ("1000 mPa s", "viscosity", 1.0),
    ("1 cSt", "kinematic viscosity", 1e-6),
    ("1000 mm2/s", "kinematic viscosity", 1e-3),
    ("63.4 mN/m", "surface tension", 0.0634),
    ("63.4 dyn/cm", "surface tension", 0.0634),
    ("1.26 g/cm3", "density", 1260.0),
    ("1.26 g/cm^3", "density", 1260.0),
    ("1260 kg/m³", "density", 1260.0),
    ("50 Hz", "frequency", 50.0),
    ("0.05 kHz", "frequency", 50.0),
    ("3000 rpm", "frequency", 50.0),
    ("3000 1/min", "frequency", 50.0),
    ("3000 r/min", "frequency", 50.0),
    ("50/s", "frequency", 50.0),
    ("25 g_n", "acceleration", 245.16625),
    ("245.16625 m/s**2", "acceleration", 245.16625),
    ("245.16625m/s2", "acceleration", 245.16625),
    ("0.8 m/s", "velocity", 0.8),
    ("1 atm", "pressure", 101325.0),
    ("14.7 psi", "pressure", 14.7 * 6894.757293168361),
    ("90 min", "time", 5400.0),
    ("2 h", "time", 7200.0),
    ("180 deg", "angle", math.pi),
    ("30 %", "ratio", 0.3),
    ("0.3", "ratio", 0.3),
    ("2 t", "mass", 2000.0),
    ("1 kN", "force", 1000.0),
]


@pytest.mark.parametrize(("text", "kind", "expected"), READ)
def test_what_the_trade_writes_is_read(text, kind, expected):
    assert parse_quantity(text, kind, "--x") == pytest.approx(expected, rel=1e-12)


REFUSED = [
    # text, kind, a word that the message must have
    ("70", "length", "no unit"),
    ("", "length", "not a number"),
    ("mm", "length", "not a number"),
    ("nan m", "length", "not a number"),
    ("inf m", "length", "not a number"),
    ("-inf m", "length", "not a number"),
    ("1e400 m", "length", "too large"),
    ("1e308 km", "length", "not finite"),
    ("0x10mm", "length", "unknown unit"),
    ("1_000 mm", "length", "unit"),
    ("70,5 mm", "length", "decimal point"),
    ("1,000 mm", "length", "decimal point"),
    ("٧٠ mm", "length", "not a number"),
    ("７０mm", "length", "not a number"),
    ("70 kg", "length", "not a length"),
    ("70 mm mm", "length", "not a length"),
    ("70 furlong", "length", "unknown unit"),
    ("70 mm; rm", "length", "unit"),
    ("70 3mm", "length", "unit"),
    ("70 mm*2", "length", "unit"),
    ("70 mm + 1 mm", "length", "unit"),
    ("70 __import__('os')", "length", "unit"),
    ("70 mm**400", "length", "not a length"),
    ("[red]70mm", "length", "not a number"),
    ("70[red]mm", "length", "unit"),
    ("70mm\x1b[31m", "length", "unit"),
    ("20", "temperature", "no unit"),
    ("25 g", "acceleration", "g_n"),
    ("25 G", "acceleration", "g_n"),
    ("25 gn", "acceleration", "g_n"),
    ("300 rad/s", "frequency", "angular"),
    ("18000 deg/s", "frequency", "angular"),
    ("50 Hz", "acceleration", "not a"),
    ("2.5 Pa", "viscosity", "not a"),
    ("1 m2/s", "viscosity", "not a"),
    ("0.3 m", "ratio", "not a"),
    ("5 Nm", "force", "unit"),
]


@pytest.mark.parametrize(("text", "kind", "word"), REFUSED)
def test_what_cannot_be_meant_is_refused_in_one_line(text, kind, word):
    with pytest.raises(InputError) as caught:
        parse_quantity(text, kind, "--option")
    message = str(caught.value)
    assert message.startswith("--option: ")
    assert word in message
    assert message.isprintable()  # no line break, no control character
    assert len(message) < 250
    assert "expected" in message or "write g_n" in message


def test_very_long_text_is_cut_in_the_message():
    with pytest.raises(InputError) as caught:
        parse_quantity("7" * 5000 + "mm", "length", "depth")
    assert len(str(caught.value)) < 250


@given(st.text(max_size=40), st.sampled_from(sorted(KINDS)))
def test_any_text_is_read_or_refused(text, kind):
    try:
        value = parse_quantity(text, kind, "x")
    except InputError as error:
        assert str(error).isprintable()
    else:
        assert math.isfinite(value)


@given(st.from_regex(r"[0-9]{1,3} ?[a-zA-Z*/^.0-9+()-]{1,12}", fullmatch=True), st.sampled_from(["length", "frequency"]))
def test_any_unit_is_read_or_refused(text, kind):
    try:
        assert math.isfinite(parse_quantity(text, kind, "x"))
    except InputError as error:
        assert str(error).isprintable()


@given(st.floats(1e-9, 1e9))
def test_units_convert_there_and_back(value):
    assert parse_quantity(f"{value!r} mm", "length", "x") == pytest.approx(1e-3 * value, rel=1e-12)
    assert parse_quantity(f"{value!r} rpm", "frequency", "x") == pytest.approx(value / 60.0, rel=1e-12)


def test_plain_numbers_and_foreign_quantities():
    registry = pint.UnitRegistry()
    assert si_value(0.03, "length", "depth") == 0.03
    assert si_value(np.float64(0.03), "length", "depth") == 0.03
    assert si_value(registry.Quantity(3.0, "cm"), "length", "depth") == pytest.approx(0.03)
    assert si_value(registry.Quantity(25.0, "degC"), "temperature", "T") == pytest.approx(298.15)
    assert si_value(registry.Quantity(50.0, "Hz"), "frequency", "f") == pytest.approx(50.0)


@pytest.mark.parametrize("unit", ["rad/s", "rpm", "turn/s", "deg/s"])
def test_turning_rates_of_a_foreign_registry_are_refused(unit):
    """pint converts 1 rpm to 0.105 Hz without a word."""
    with pytest.raises(InputError, match="angular"):
        si_value(pint.UnitRegistry().Quantity(1.0, unit), "frequency", "f")


@pytest.mark.parametrize(
    "value", [None, True, [1.0], "x", object(), 1j, float("nan"), float("inf"), 10**400, np.array([1.0, 2.0])]
)
def test_what_is_no_quantity_is_refused(value):
    with pytest.raises(InputError):
        si_value(value, "length", "depth")


def test_bounds_name_the_value_and_what_is_allowed():
    with pytest.raises(InputError, match=r"depth: '-3mm' is not allowed; it must be greater than 0 m"):
        si_value("-3mm", "length", "depth", above=0.0)
    with pytest.raises(InputError, match="at least 1"):
        si_value(0.5, "length", "depth", least=1.0)
    with pytest.raises(InputError, match="at most 1"):
        si_value(1.5, "length", "depth", most=1.0)


def test_turns_become_radians_in_one_place():
    assert angular_frequency(1.0) == pytest.approx(2.0 * math.pi)
