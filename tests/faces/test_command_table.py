"""`containment table`: lists, filters, one entry, JSON, CSV, user tables, fits, bad input."""

import csv
import io
import json
import math

import pytest

from containment.faces.character_plot import character_plot
from containment.faces.command import main
from containment.given.tables import drive_names, grain_names, liquid_entry, liquid_names


@pytest.fixture
def table(capsys):
    """Run the sub-command and return its status and both outputs."""

    def run(*arguments):
        try:
            status = main(["table", *arguments])
        except SystemExit as left:
            status = left.code
        captured = capsys.readouterr()
        return status, captured.out, captured.err

    return run


HEADER = "kind,name,field,law,value,unit,from [degC],to [degC],uncertainty [%],source,read\n"
OWN = HEADER + (
    "liquid,shop syrup,density,polynomial,c0=1400; c1=-0.5,kg/m**3,10,60,1,own measurement,yes\n"
    "liquid,shop syrup,viscosity,andrade,A=1e-9; B=6500,Pa*s,10,60,5,own measurement,yes\n"
    "liquid,shop syrup,surface_tension,,75,mN/m,10,60,5,own measurement,yes\n"
    "liquid,shop syrup,vapour_pressure_note,,negligible,,,,,,\n"
)


@pytest.fixture
def own(tmp_path):
    path = tmp_path / "own.csv"
    path.write_text(OWN, encoding="utf-8")
    return str(path)


# --- lists ------------------------------------------------------------------------------------------------------------


def test_list_names_every_entry(table):
    status, out, err = table()
    assert (status, err) == (0, "")
    for name in (*liquid_names(), *grain_names(), *drive_names()):
        assert f"  {name} " in out
    assert max(len(line) for line in out.splitlines()) <= 80


def test_json_lists_every_entry_with_finite_numbers(table):
    status, out, _ = table("--json")
    assert status == 0
    found = json.loads(out, parse_constant=lambda text: pytest.fail(text))
    assert [e["name"] for e in found["liquids"]] == list(liquid_names())
    assert [e["name"] for e in found["grains"]] == list(grain_names())
    assert [e["name"] for e in found["drives"]] == list(drive_names())
    glycerol = next(e for e in found["liquids"] if e["name"] == "glycerol")
    assert glycerol["viscosity_Pa_s"] == liquid_entry("glycerol").viscosity.value(293.15)
    assert set(glycerol["properties"]) >= {"density", "viscosity", "surface_tension"}
    for entry in found["liquids"]:
        for of in entry["properties"].values():
            assert of["source"]
            assert isinstance(of["source_read"], bool)


def test_csv_has_one_row_an_entry(table):
    status, out, _ = table("--csv", "--temperature", "40degC")
    rows = list(csv.DictReader(io.StringIO(out)))
    assert status == 0
    assert len(rows) == len(liquid_names()) + len(grain_names()) + len(drive_names())
    water = next(row for row in rows if row["name"] == "water")
    # 992.2 kg/m3 at 40 degC: handbook value
    assert float(water["density_kg_m3"]) == pytest.approx(992.2, abs=0.1)


@pytest.mark.parametrize("kind", ["liquid", "grain", "drive"])
def test_kind_leaves_the_others_out(table, kind):
    _, out, _ = table("--json", "--kind", kind)
    found = json.loads(out)
    assert [key for key in ("liquids", "grains", "drives") if found[key]] == [f"{kind}s"]


# --- filters ----------------------------------------------------------------------------------------------------------


def test_viscosity_filter_keeps_exactly_the_liquids_in_bounds(table):
    _, out, _ = table("--json", "--min-viscosity", "1Pa*s", "--max-viscosity", "20Pa*s")
    found = json.loads(out)
    kept = {e["name"] for e in found["liquids"]}
    for name in liquid_names():
        law = liquid_entry(name).viscosity
        if law.range_K[0] <= 293.15 <= law.range_K[1]:
            assert (name in kept) == (1.0 <= law.value(293.15) <= 20.0)
        else:
            assert name not in kept
    assert found["grains"] == found["drives"] == []


def test_viscosity_filter_says_what_the_temperature_leaves_out(table):
    _, out, _ = table("--min-viscosity", "1Pa*s", "--temperature", "140degC")
    assert "LEFT OUT" in out
    assert "140 degC" in out
    assert "water" in out.split("LEFT OUT")[1]


def test_text_filter_looks_into_names_synonyms_and_hazards(table):
    _, out, _ = table("--json", "--text", "POISON")
    assert "mercury" in [e["name"] for e in json.loads(out)["liquids"]]
    status, out, _ = table("--text", "zzzz")
    assert status == 0
    assert "No entry matches." in out


# --- one entry --------------------------------------------------------------------------------------------------------


def test_entry_shows_values_laws_sources_and_hazards(table):
    status, out, _ = table("Glycerol")
    assert status == 0
    entry = liquid_entry("glycerol")
    for of in entry.properties:
        assert of.law in out
        assert " ".join(of.source.split()[:3]) in " ".join(out.split())
    assert "slippery" in out
    assert "logarithmic scale" in out
    assert "1261 kg/m^3" in out


def test_every_entry_can_be_shown(table):
    for name in (*liquid_names(), *grain_names(), *drive_names()):
        status, out, err = table(name)
        assert (status, err) == (0, ""), name
        assert name.upper() in out
        assert max(len(line) for line in out.splitlines()) <= 80, name


def test_unknown_name_offers_close_ones(table):
    status, out, err = table("glicerol")
    assert (status, out) == (2, "")
    assert "glycerol" in err
    assert err.count("\n") == 1


# --- user tables ------------------------------------------------------------------------------------------------------


def test_own_table_is_listed_and_shown(table, own):
    _, out, _ = table("--table", own, "--json", "--kind", "liquid")
    names = [e["name"] for e in json.loads(out)["liquids"]]
    assert "shop syrup" in names
    assert len(names) == len(liquid_names()) + 1
    status, out, _ = table("shop syrup", "--table", own)
    assert status == 0
    assert "from own.csv" in out


def test_name_that_hides_a_built_in_one_is_reported(table, tmp_path):
    path = tmp_path / "own.csv"
    path.write_text(OWN.replace("shop syrup", "Glycerol"), encoding="utf-8")
    _, out, _ = table("--table", str(path))
    assert "takes the place of" in " ".join(out.split())
    _, out, _ = table("glycerol", "--table", str(path))
    assert "takes the place of" in " ".join(out.split())


def test_markup_and_escapes_from_a_table_never_reach_the_terminal(table, tmp_path):
    path = tmp_path / "own.csv"
    path.write_text(OWN.replace("own measurement", "\x1b[31mred"), encoding="utf-8")
    status, out, err = table("--table", str(path))
    assert (status, out) == (2, "")
    assert "\x1b" not in err


# --- bad input --------------------------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("arguments", "said"),
    [
        (["--min-viscosity", "1"], "--min-viscosity"),
        (["--min-viscosity", "1kg"], "--min-viscosity"),
        (["--min-viscosity", "5Pa*s", "--max-viscosity", "1Pa*s"], "--max-viscosity"),
        (["--temperature", "20"], "--temperature"),
        (["--temperature", "-400degC"], "--temperature"),
        (["--kind", "gas"], "--kind"),
        (["--text", " "], "--text"),
        (["--json", "--csv"], "--csv"),
        (["--table", "no-such-file.csv"], "no-such-file.csv"),
        (["--fit", "no-such-file.csv"], "no-such-file.csv"),
    ],
)
def test_bad_input_is_one_line_and_status_2(table, arguments, said):
    status, out, err = table(*arguments)
    assert (status, out) == (2, "")
    assert said in err
    assert err.count("\n") == 1


# --- fits -------------------------------------------------------------------------------------------------------------

def shop_oil(t):
    """Viscosity in Pa s of an invented oil at t in degC."""
    return 2e-5 * math.exp(1400.0 / (t + 273.15 - 160.0))


POINTS = "temperature [degF],viscosity [cP],density [g/cm3],surface_tension [dyn/cm]\n" + "".join(
    f"{1.8 * t + 32.0:.6f},{1e3 * shop_oil(t):.8g},{0.97 - 7e-4 * t:.6f},{39.0 - 0.07 * t:.6f}\n"
    for t in (5, 15, 25, 40, 60, 80, 100)
)


def test_fit_prints_rows_that_can_be_used_as_a_table(table, tmp_path):
    points = tmp_path / "points.csv"
    points.write_text(POINTS, encoding="utf-8")
    status, out, _ = table("shop oil", "--fit", str(points))
    assert status == 0
    rows = out[out.index("kind,name,field") :]
    own = tmp_path / "own.csv"
    own.write_text(rows + "liquid,shop oil,vapour_pressure_note,,negligible,,,,,,\n", encoding="utf-8")
    entry = liquid_entry("shop oil", tables=[own])
    # the laws that the points were made from
    assert entry.viscosity.value(303.15) == pytest.approx(shop_oil(30.0), rel=1e-4)
    assert entry.density.value(303.15) == pytest.approx(970.0 - 0.7 * 30.0, rel=1e-5)
    assert entry.surface_tension.value(303.15) == pytest.approx(0.0369, rel=1e-5)


def test_plot_puts_ends_and_middle_where_they_belong():
    lines = character_plot([0.0, 5.0, 10.0], [1.0, 10.0, 100.0], width=21, height=5, logarithmic=True)
    field = [line[15:] for line in lines[:5]]
    assert field[0].index("*") == 20
    assert field[2].index("*") == 10
    assert field[4].index("*") == 0


def test_every_fault_of_a_table_is_told_in_one_line(table, tmp_path):
    path = tmp_path / "faulty.csv"
    rows = "".join(f"liquid,syrup,colour {i},,amber,,,,,,\n" for i in range(12))
    path.write_text(HEADER + rows, encoding="utf-8")
    status, out, err = table("--table", str(path))
    assert (status, out) == (2, "")
    assert err.count("\n") == 1
    for line in range(2, 14):
        assert f"line {line}, field" in err
