"""Faulty and hostile tables: every fault in one message, with its line and column, and never anything but InputError."""

import re
from pathlib import Path

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from containment.errors import InputError
from containment.given.tables import drive_entry, grain_entry, liquid_entry, liquid_names
from tests.tables.writing import HEADER, LIQUID, changed, write


def faults_of(path):
    with pytest.raises(InputError) as caught:
        liquid_names([path])
    return str(caught.value)


@pytest.mark.parametrize(
    ("field", "cells", "line", "column", "reason"),
    [
        ("density", {"value": "c0=nine"}, 4, "value", "'nine' is not a number"),
        ("density", {"value": "c0=nan"}, 4, "value", "'nan' is not a number"),
        ("density", {"value": "c0=1e999"}, 4, "value", "'1e999' is not a number"),
        ("density", {"value": "c0=1_000"}, 4, "value", "'1_000' is not a number"),
        ("density", {"value": "c1=-0.65"}, 4, "value", "needs c0"),
        ("density", {"value": "c0=910; c0=920"}, 4, "value", "'c0' is there twice"),
        ("density", {"value": "c0=910; x=1"}, 4, "value", "'x' is not a coefficient of polynomial"),
        ("density", {"value": "910"}, 4, "value", "'910' is not of the form"),
        ("density", {"value": "c0=-910"}, 4, "value", "the density would be -910"),
        ("density", {"value": "c0=910; c1=-12"}, 4, "value", "expected 1 to 30000"),
        ("density", {"unit": "kg/m"}, 4, "unit", "is not a density"),
        ("density", {"unit": "stone/pint"}, 4, "unit", "unknown unit"),
        ("density", {"unit": ""}, 4, "unit", "has no unit"),
        ("density", {"law": "magic"}, 4, "law", "'magic' is not a law"),
        ("density", {"from_": "80"}, 4, "from", "is empty"),
        ("density", {"from_": "cold"}, 4, "from", "'cold' is not a number with a unit"),
        ("density", {"from_": "-300"}, 4, "from", "not a temperature"),
        ("density", {"from_": ""}, 4, "from", "is missing"),
        ("density", {"to": ""}, 4, "to", "is missing"),
        ("density", {"uncertainty": ""}, 4, "uncertainty", "missing"),
        ("density", {"uncertainty": "300"}, 4, "uncertainty", "not between 0 and 200 %"),
        ("density", {"source": ""}, 4, "source", "no source"),
        ("density", {"read": "perhaps"}, 4, "read", "neither yes nor no"),
        ("viscosity", {"value": "A=0.05; B=900; T0=300"}, 5, "value", "the viscosity would be"),
        ("viscosity", {"value": "A=0.05; B=9000; T0=150"}, 5, "value", "the viscosity would be"),
        ("viscosity", {"law": "walther", "value": "A=9; B=3.5"}, 5, "unit", "kinematic"),
        ("viscosity", {"law": "tabulated", "value": "20:1"}, 5, "value", "two points"),
        ("viscosity", {"law": "tabulated_log", "value": "0:1; 80:-1"}, 5, "value", "above 0"),
        ("surface_tension", {"value": "0"}, 6, "value", "the surface_tension would be 0"),
        ("flash_point", {"value": "warm"}, 8, "value", "is not a number with a unit"),
        ("flash_point", {"unit": "mm"}, 8, "value", "is not a temperature"),
        ("hazard", {"value": "slippery floors"}, 9, "value", "is not 'topic: sentence'"),
        ("hazard", {"value": "haunted: by night."}, 9, "value", "is not 'topic: sentence'"),
        ("synonym", {"value": ""}, 3, "value", "is empty"),
        ("title", {"field": "colour"}, 2, "field", "'colour' is not a field of a liquid"),
        ("title", {"kind": "gas"}, 2, "kind", "'gas' is not a kind"),
        ("title", {"name": "-"}, 2, "name", "is not a name"),
    ],
)
def test_one_fault_is_reported_with_its_place(tmp_path, field, cells, line, column, reason):
    text = faults_of(write(tmp_path, changed(field, **cells)))
    found = [entry for entry in text.splitlines()[1:] if entry.startswith(f"  line {line}, {column}: ")]
    assert found, text
    assert any(reason in entry for entry in found), text


def test_all_faults_are_reported_at_once(tmp_path):
    rows = changed("density", unit="kg")
    rows = [row.replace("A=0.05", "A=much").replace("constant,32", "constant,wet") for row in rows]
    text = faults_of(write(tmp_path, [*rows, "liquid,half oil,density,constant,900,kg/m**3,0,80,1,own,no"]))
    assert text.startswith("table own.csv: 7 faults\n")
    for start in ("line 4, unit", "line 5, value", "line 6, value", "line 10, field: the viscosity of 'half oil'",
                  "line 10, field: the surface_tension", "line 10, field: the vapour_pressure"):  # fmt: skip
        assert f"\n  {start}" in text
    assert re.search(r"line 4.*line 5.*line 6.*line 10", text, re.DOTALL)


def test_many_faults_are_cut_short(tmp_path):
    rows = [f"liquid,oil {i},colour,,blue,,,,,," for i in range(60)]
    text = faults_of(write(tmp_path, rows))
    assert len(text.splitlines()) <= 43 and "more" in text.splitlines()[-1]


def test_faults_of_all_tables_are_reported_at_once(tmp_path):
    one = write(tmp_path, changed("density", unit="kg"), "one.csv")
    two = tmp_path / "two.txt"
    two.write_text("x")
    with pytest.raises(InputError) as caught:
        liquid_entry("water", [one, two, tmp_path / "three.csv"])
    assert all(f"table {name}" in str(caught.value) for name in ("one.csv", "two.txt", "three.csv"))


@pytest.mark.parametrize(
    ("header", "reason"),
    [
        (HEADER.replace("unit,", "unit,unit,"), "'unit' is there twice"),
        (HEADER.replace("source", "origin"), "'origin' is not a column"),
        (HEADER.replace("value", "value [mm]"), "cannot carry a unit"),
        ("kind,name,field", "the column value is missing"),
        (HEADER.replace("[degC]", "[parsec]"), "unknown unit"),
        (HEADER.replace("[%]", "[K]"), "not a ratio"),
    ],
)
def test_faulty_headers(tmp_path, header, reason):
    assert reason in faults_of(write(tmp_path, LIQUID, header=header))


def test_rows_of_the_wrong_length(tmp_path):
    assert "line 2, row: has 3 cells where the header has 11" in faults_of(write(tmp_path, ["liquid,a,b", *LIQUID]))


def test_the_same_field_or_name_twice(tmp_path):
    text = faults_of(write(tmp_path, [*LIQUID, LIQUID[2]]))
    assert "line 10, field: density of 'test oil' is there twice (first in line 4)" in text
    assert "are the same name" in faults_of(write(tmp_path, [*LIQUID, LIQUID[0].replace("test oil", "Test-Oil")]))


def test_a_synonym_that_means_two_things(tmp_path):
    second = [row.replace("test oil", "other oil") for row in LIQUID]
    assert "'trial fluid' already means 'test oil'" in faults_of(write(tmp_path, [*LIQUID, *second]))


def test_custom_is_no_name(tmp_path):
    assert "'custom' is kept" in faults_of(write(tmp_path, [row.replace("test oil", "Custom") for row in LIQUID]))


GRAIN = ["bulk_density,1400,kg/m**3", "particle_density,2600,kg/m**3", "d10,0.2,mm", "d50,0.3,mm", "d90,0.5,mm",
         "angle_of_repose,35,deg", "wall_friction,0.4,", "unconfined_yield_strength,free-flowing,"]  # fmt: skip


@pytest.mark.parametrize(
    ("before", "after", "reason"),
    [
        ("d50,0.3", "d50,0.6", "d10, d50, d90 of 'grit' do not rise"),
        ("1400", "2700", "not below the particle density"),
        ("free-flowing", "some", "'some' is not a number"),
        ("35,deg", "95,deg", "is not between"),
        ("0.4,", "0.4,N", "ratio"),
        ("d90,0.5,mm", "d95,0.5,mm", "the d90 of 'grit' is missing"),
    ],
)
def test_faulty_grains(tmp_path, before, after, reason):
    cells = [item.replace(before, after).split(",") for item in GRAIN]
    rows = [f"grain,grit,{field},,{value},{unit},,,10,own,no" for field, value, unit in cells]
    with pytest.raises(InputError) as caught:
        grain_entry("grit", [write(tmp_path, rows)])
    assert reason in str(caught.value)


@pytest.mark.parametrize(
    ("rows", "reason"),
    [
        (["title,a drive,"], "states no limit at all"),
        (["max_force,10,N"], "max_force without moving_mass"),
        (["frequency_range,60:5,Hz"], "'60:5' is not a range"),
        (["frequency_range,5,Hz"], "'5' is not a range"),
        (["max_stroke,0,mm"], "is not between"),
        (["max_stroke,5,Hz"], "is not a length"),
    ],
)
def test_faulty_drives(tmp_path, rows, reason):
    lines = [f"drive,d,{f},,{v},{u},,,,," for f, v, u in (row.split(",") for row in rows)]
    with pytest.raises(InputError) as caught:
        drive_entry("d", [write(tmp_path, lines)])
    assert reason in str(caught.value)


@pytest.mark.parametrize(
    ("row", "reason"),
    [
        ("maxwell,viscosity=1; relaxation=x", "'x' is not a number"),
        ("maxwell,viscosity=1", "needs relaxation"),
        ("maxwell,viscosity=1; relaxation=-1", "expected 0 or more"),
        ("maxwell,viscosity=1; relaxation=1; index=1", "'index=1' does not fit"),
        ("jelly,viscosity=1", "'jelly' is not a model"),
    ],
)
def test_faulty_rheology(tmp_path, row, reason):
    text = faults_of(write(tmp_path, [*LIQUID, f"liquid,test oil,rheology,{row},,,,40,own,no"]))
    assert reason in text


# hostile files


def test_a_huge_cell(tmp_path):
    path = tmp_path / "huge.csv"
    path.write_text(HEADER + "\nliquid," + "x" * 10_000_000 + "\n")
    assert "larger than 2 MB" in faults_of(path)
    path.write_text(HEADER + "\nliquid," + "x" * 1_000_000 + ",title,,t,,,,,,\n")
    assert "field larger than field limit" in faults_of(path)
    path.write_text(HEADER + "\nliquid,oil,note,," + "x" * 50_000 + ",,,,,,\n")
    assert "line 2, value: has 50000 characters" in faults_of(path)


@pytest.mark.parametrize(
    ("content", "reason"),
    [
        (b"\x7fELF\x02\x01\x01\x00\x00", "binary data"),
        (b"PK\x03\x04\x14\x00\x00\x00", "binary data"),
        (HEADER.encode("utf-16"), "binary data"),
        (HEADER.encode() + "\nliquid,Öl,title,,Öl,,,,,,\n".encode("latin-1"), "line 2 is not UTF-8"),
        (b"", "the file is empty"),
        (b"\n\n\n", "the file is empty"),
        (b"# only a comment\n", "the file is empty"),
        (HEADER.encode() + b"\n", "has no entry"),
        (HEADER.encode() + b'\nliquid,"oil,title,,t\n', "is not CSV"),
        (b"a;b;c\n1;2;3\n", "is not a column"),
    ],
)
def test_files_that_are_no_table(tmp_path, content, reason):
    path = tmp_path / "own.csv"
    path.write_bytes(content)
    assert reason in faults_of(path)


def test_a_byte_order_mark_and_windows_line_ends_are_fine(tmp_path):
    path = tmp_path / "own.csv"
    path.write_bytes(b"\xef\xbb\xbf" + "\r\n".join([HEADER, *LIQUID]).encode())
    assert liquid_entry("test oil", [path]).density.value(293.15) == pytest.approx(897.0)


@pytest.mark.parametrize(
    "cell",
    ["=1+1", "-1*2", "+1+cmd", "=cmd|' /C calc'!A0", "+SUM(A1)", "@SUM(A1)", "-2+3+cmd", "|pipe", "<script>alert(1)</script>",
     "[bold red]hot[/]", "[link=http://x]y[/link]", "&#60;b&#62;", "a\x1b[31mred", "tab\tinside", "null\u202eevil"],
)  # fmt: skip
def test_hostile_cells(tmp_path, cell):
    text = faults_of(write(tmp_path, changed("title", value=cell)))
    assert text.startswith("table own.csv:") and "line 2, value:" in text
    assert "\x1b" not in text and "\u202e" not in text and "\t" not in text


def test_hostile_names_stay_on_one_line_of_print(tmp_path):
    path = write(tmp_path, LIQUID, "ev\x1b[31mil.csv")
    path.write_text("kind\n")
    assert "\x1b" not in faults_of(path)
    with pytest.raises(InputError) as caught:
        liquid_entry("x\x1b[31m\ny" * 50)
    assert "\x1b" not in str(caught.value) and "\n" not in str(caught.value) and len(str(caught.value)) < 200


def test_places_that_are_no_files(tmp_path):
    assert "not found, or not a file" in faults_of(tmp_path)
    assert "cannot be read" in faults_of(tmp_path / "nothing.csv")
    assert "cannot be read" in faults_of(tmp_path / ("n" * 5000 + ".csv"))
    assert "not a name of a file" in faults_of(tmp_path / "null\0.csv")
    assert "not found, or not a file" in faults_of(Path("/dev/null"))
    other = tmp_path / "own.xlsx"
    other.write_text("x")
    assert "expected .csv or .toml" in faults_of(other)


@pytest.mark.parametrize(
    ("text", "reason"),
    [
        ("[liquid.oil", "is not TOML"),
        ("[gas.air]\ntitle = 'x'\n", "'gas': is not a kind of entry"),
        ("liquid = 3\n", "'liquid': is not a kind of entry"),
        ("[liquid]\noil = 3\n", "'oil': is not a table of fields"),
        ("[liquid.oil]\nhazards = 'hot'\n", "hazards: is not a list of texts"),
        ("[liquid.oil]\n[liquid.oil.density]\nlaw='constant'\nvalue=900\nunits='kg'\n", "has the key 'units'"),
        ("a = " + "[" * 5000 + "]" * 5000, "is not TOML"),
        ("[liquid.oil]\nx = 1\nx = 2\n", "is not TOML"),
    ],
)
def test_faulty_toml(tmp_path, text, reason):
    path = tmp_path / "own.toml"
    path.write_text(text)
    assert reason in faults_of(path)


def test_toml_faults_carry_the_line_of_their_key(tmp_path):
    path = tmp_path / "own.toml"
    path.write_text(
        "# comment\n[liquid.oil]\ntitle = 'x'\nvapour_pressure_note = 'none'\n\n[liquid.oil.density]\n"
        "value = 'much'\nunit = 'kg/m**3'\nfrom = '0 degC'\nto = '9 degC'\nuncertainty = 0.1\nsource = 's'\nread = true\n"
    )
    assert "line 6, value: 'much' is not a number" in faults_of(path)


@settings(max_examples=150, deadline=None)
@given(data=st.binary(max_size=300))
def test_no_file_gets_more_than_an_input_error(tmp_path_factory, data):
    for name in ("f.csv", "f.toml"):
        path = tmp_path_factory.mktemp("fuzz") / name
        path.write_bytes(data)
        with pytest.raises(InputError):
            liquid_names([path])


@settings(max_examples=200, deadline=None)
@given(row=st.integers(0, len(LIQUID) - 1), column=st.integers(0, 10), cell=st.text(max_size=30))
def test_no_cell_gets_more_than_an_input_error(tmp_path_factory, row, column, cell):
    rows = [line.split(",") for line in LIQUID if '"' not in line]
    rows[row % len(rows)][column] = '"' + cell.replace('"', '""') + '"'
    path = write(tmp_path_factory.mktemp("fuzz"), [",".join(cells) for cells in rows])
    try:
        liquid_names([path])
    except InputError as error:
        assert str(error).isprintable() or "\n" in str(error)
