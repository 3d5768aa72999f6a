"""Case files: what is saved is what is read, every fault is told at once, the command line prevails."""

import argparse
import json
import shutil
import tomllib

import pytest
from hypothesis import given
from hypothesis import strategies as st

from containment.faces import case_file
from containment.faces.command import main

SYRUP = ["custom", "--density", "1410kg/m^3", "--viscosity", "10Pa*s", "--surface-tension", "80mN/m"]
CASE = [*SYRUP, "--cylinder", "70mm", "--depth", "30mm", "--frequency", "50Hz", "--acceleration", "40g_n", "--dwell", "60s"]
OUTPUT = {
    "help", "json", "plain", "detail", "report", "case", "save_case", "against", "chart", "rows",
}  # fmt: skip


def options_of(command):
    """Return the options that a command takes, by asking its parser."""
    import importlib

    parser = argparse.ArgumentParser()
    importlib.import_module(f"containment.faces.command_{command}").add_arguments(parser)
    return {action.dest for action in parser._actions}


@pytest.mark.parametrize("command", ["liquid", "window", "grains"])
def test_every_option_is_kept_by_a_case_or_is_about_output(command):
    sections = case_file.SECTIONS["liquid" if command == "window" else command]
    kept = {name.replace("-", "_") for names in sections.values() for name in names}
    assert options_of(command) - OUTPUT == kept


def test_saved_case_gives_the_same_verdict(capsys, tmp_path):
    file = tmp_path / "case.toml"
    status = main(["liquid", *CASE, "--json", "--save-case", str(file)])
    first = json.loads(capsys.readouterr().out)
    assert main(["liquid", "--case", str(file), "--json"]) == status == 0
    assert json.loads(capsys.readouterr().out) == first
    document = tomllib.loads(file.read_text(encoding="utf-8"))
    assert document == first["case"]
    assert document["motion"] == {"frequency": "50Hz", "acceleration": "40g_n"}
    assert "# verdict when saved" in file.read_text(encoding="utf-8")


def test_window_takes_the_case_of_liquid(capsys, tmp_path):
    file = tmp_path / "case.toml"
    main(["liquid", *CASE, "--save-case", str(file)])
    capsys.readouterr()
    assert main(["window", "--case", str(file), "--json"]) == 0
    assert json.loads(capsys.readouterr().out)["case"]["command"] == "liquid"


@pytest.mark.parametrize(
    ("more", "section", "expected"),
    [
        (["--stroke", "8mm"], "motion", {"frequency": "50Hz", "stroke": "8mm"}),
        (["--box", "60mmx80mm"], "vessel", {"box": "60mmx80mm", "depth": "30mm"}),
        (["--depth", "20mm"], "vessel", {"cylinder": "70mm", "depth": "20mm"}),
        (["--viscosity", "8Pa*s"], "liquid", {
            "name": "custom", "density": "1410kg/m^3", "viscosity": "8Pa*s", "surface-tension": "80mN/m"}),
    ],
)  # fmt: skip
def test_command_line_prevails(capsys, tmp_path, more, section, expected):
    file = tmp_path / "case.toml"
    main(["liquid", *CASE, "--save-case", str(file)])
    capsys.readouterr()
    assert main(["liquid", "--case", str(file), *more, "--json"]) in (0, 1, 3)
    assert json.loads(capsys.readouterr().out)["case"][section] == expected


def test_every_fault_is_told_at_once(capsys, tmp_path):
    file = tmp_path / "bad.toml"
    file.write_text(
        'schema = 7\ncommand = "grains"\n[liquid]\nname = "custom"\ncolour = "red"\n[vessel]\nunbounded = "yes"\n'
        "depth = true\n[kettle]\nvolume = 3\n",
        encoding="utf-8",
    )
    assert main(["liquid", "--case", str(file)]) == 2
    out = capsys.readouterr()
    assert out.out == "" and out.err.count("\n") == 1
    for words in ("schema", "command", "liquid.colour", "vessel.unbounded", "vessel.depth", "kettle"):
        assert words in out.err


@pytest.mark.parametrize(
    "content",
    [b"", b"\x00\xff\xfe", b"[vessel", b'schema = 1\ncommand = "liquid"\n[liquid]\nname = "a"\nname = "b"\n', b"x" * 2_000_000,
     b'schema = 1\ncommand = "liquid"\nvessel = 3\n', b'schema = 1\ncommand = "liquid"\n[vessel]\ndepth = nan\n'],
)  # fmt: skip
def test_hostile_files_are_refused_in_one_line(capsys, tmp_path, content):
    file = tmp_path / "case.toml"
    file.write_bytes(content)
    assert main(["liquid", "--case", str(file)]) == 2
    out = capsys.readouterr()
    assert out.out == "" and out.err.count("\n") == 1 and out.err.isprintable() is False and "\x00" not in out.err


@pytest.mark.parametrize("name", ["no such file.toml", ".", "nul\0name"])
def test_files_that_cannot_be_read_or_written(capsys, tmp_path, name):
    assert main(["liquid", "--case", str(tmp_path / name)]) == 2
    assert "--case" in capsys.readouterr().err
    if name != "no such file.toml":
        assert main(["liquid", *CASE, "--save-case", str(tmp_path / name)]) == 2
        assert "--save-case" in capsys.readouterr().err


def test_name_is_asked_for(capsys):
    assert main(["liquid", "--cylinder", "70mm"]) == 2
    assert "NAME" in capsys.readouterr().err


def test_bare_numbers_are_refused_as_on_the_command_line(capsys, tmp_path):
    file = tmp_path / "case.toml"
    file.write_text(
        'schema = 1\ncommand = "liquid"\n[liquid]\nname = "glycerol"\n[vessel]\ncylinder = 70\ndepth = "30mm"\n',
        encoding="utf-8",
    )
    assert main(["liquid", "--case", str(file)]) == 2
    assert "--cylinder: '70' has no unit" in capsys.readouterr().err


def test_tables_are_found_from_where_the_case_is(capsys, tmp_path, monkeypatch):
    """A case and its table can be moved together, and the case run from anywhere."""
    here, there = tmp_path / "here", tmp_path / "there"
    here.mkdir()
    monkeypatch.chdir(tmp_path)
    (here / "mine.csv").write_text(
        "kind,name,field,law,value,unit,from [degC],to [degC],uncertainty,source,read\n"
        + "".join(
            f"liquid,my paste,{field},constant,{value},{unit},10,40,0.05,own measurement,yes\n"
            for field, value, unit in (("density", 1350, "kg/m**3"), ("viscosity", 8, "Pa*s"), ("surface_tension", 70, "mN/m"))
        )
        + "liquid,my paste,vapour_pressure_note,,non-volatile,,,,,own measurement,yes\n"
        + "liquid,my paste,title,,invented paste,,,,,own measurement,yes\n",
        encoding="utf-8",
    )
    arguments = ["liquid", "my paste", "--table", "here/mine.csv", "--cylinder", "70mm", "--depth", "30mm"]
    status = main([*arguments, "--save-case", "here/case.toml"])
    assert status in (0, 1, 3), capsys.readouterr().err
    assert 'table = ["mine.csv"]' in (here / "case.toml").read_text(encoding="utf-8")
    shutil.move(here, there)
    assert main(["liquid", "--case", str(there / "case.toml"), "--json"]) == status


@given(
    st.dictionaries(
        st.sampled_from([name for names in case_file.SECTIONS["liquid"].values() for name in names if name != "unbounded"]),
        st.text(min_size=1), min_size=1,
    )
)  # fmt: skip
def test_any_text_survives(tmp_path_factory, given_values):
    folder = tmp_path_factory.mktemp("case")
    file = folder / "case.toml"
    values = {name.replace("-", "_"): value for name, value in given_values.items()}
    values["name"] = values.get("name", "x")
    values.pop("table", None)
    options = argparse.Namespace(command="liquid", case=None, save_case=str(file), **values)
    case_file.save_case(options, "a remark\nwith \x1b[31m a break")
    names = [name.replace("-", "_") for names in case_file.SECTIONS["liquid"].values() for name in names]
    empty = argparse.Namespace(command="liquid", case=str(file), **dict.fromkeys(names))
    case_file.apply_case(empty, "a liquid")
    clean = {name: value.encode("utf-8", "replace").decode("utf-8") for name, value in values.items()}
    read = {name: value for name, value in vars(empty).items() if value is not None}
    assert read == clean | {"command": "liquid", "case": str(file)}
