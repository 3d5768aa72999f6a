"""User tables: both forms, units, precedence, notices. All liquids here are invented."""

import os

import numpy as np
import pytest

from containment.errors import InputError
from containment.given.liquid import liquid
from containment.given.tables import (
    drive_entry,
    grain_entry,
    liquid_entry,
    liquid_names,
    table_notices,
)
from tests.tables.writing import LIQUID, changed, write

TOML = """\
# an invented oil
[liquid."test oil"]
title = "Test oil (invented)"
synonyms = ["trial fluid"]
flash_point = "210 degC"
hazards = ["slippery: makes floors slippery."]
vapour_pressure_note = "negligible, as measured"

[liquid."test oil".density]
law = "polynomial"
value = {c0 = 910, c1 = -0.65}
unit = "kg/m**3"
from = "0 degC"
to = "80 degC"
uncertainty = "1 %"
source = "own measurement"
read = false

[liquid."test oil".viscosity]
law = "vogel"
value = "A=0.05; B=900; T0=150"
unit = "cP"
from = "32 degF"
to = "353.15 K"
uncertainty = 0.05
source = "own measurement"
read = "no"

[liquid."test oil".surface_tension]
value = 32
unit = "dyn/cm"
from = "0 degC"
to = "80 degC"
uncertainty = "5 %"
source = "own measurement"
read = "no"
"""


def test_csv_entry_has_the_values_of_its_rows(tmp_path):
    oil = liquid_entry("test oil", [write(tmp_path, LIQUID)])
    assert oil.title == "Test oil (invented)" and oil.synonyms == ("trial fluid",) and oil.origin == "own.csv"
    assert oil.density.value(293.15) == pytest.approx(910 - 13.0)
    assert oil.viscosity.value(300.0) == pytest.approx(0.05e-3 * np.exp(900.0 / 150.0))
    assert oil.surface_tension.value(293.15) == pytest.approx(0.032)
    assert oil.vapour_pressure is None and oil.vapour_pressure_note == "negligible, as measured"
    assert oil.flash_point_K == pytest.approx(483.15)
    assert oil.range_K == pytest.approx((273.15, 353.15))
    assert oil.viscosity.relative_uncertainty == pytest.approx(0.05) and not oil.viscosity.source_read


def test_toml_says_the_same_as_csv(tmp_path):
    path = tmp_path / "own.toml"
    path.write_text(TOML, encoding="utf-8")
    one, two = liquid_entry("test oil", [write(tmp_path, LIQUID)]), liquid_entry("test oil", [path])
    kelvin = np.linspace(274.0, 353.0, 7)
    for name in ("density", "viscosity", "surface_tension"):
        np.testing.assert_allclose(getattr(one, name).value(kelvin), getattr(two, name).value(kelvin), rtol=1e-12)
        assert getattr(one, name).range_K == pytest.approx(getattr(two, name).range_K)
        assert getattr(one, name).relative_uncertainty == pytest.approx(getattr(two, name).relative_uncertainty)
    assert one.flash_point_K == pytest.approx(two.flash_point_K)
    assert (one.title, one.synonyms, one.hazards) == (two.title, two.synonyms, two.hazards)


@pytest.mark.parametrize(
    ("unit", "factor"), [("mPa*s", 1e-3), ("Pa*s", 1.0), ("cP", 1e-3), ("P", 0.1), ("kg/(m*s)", 1.0)]
)
def test_units_of_viscosity(tmp_path, unit, factor):
    path = write(tmp_path, changed("viscosity", law="constant", value="120", unit=unit))
    assert liquid_entry("test oil", [path]).viscosity.value(300.0) == pytest.approx(120 * factor)


@pytest.mark.parametrize(("unit", "factor"), [("mm**2/s", 1e-6), ("mm2/s", 1e-6), ("cSt", 1e-6), ("St", 1e-4)])
def test_a_kinematic_viscosity_becomes_dynamic_by_the_density(tmp_path, unit, factor):
    path = write(tmp_path, changed("viscosity", law="constant", value="120", unit=unit))
    assert liquid_entry("test oil", [path]).viscosity.value(293.15) == pytest.approx(120 * factor * 897.0)


def test_a_kinematic_viscosity_holds_no_further_than_the_density(tmp_path):
    rows = changed("viscosity", law="constant", value="120", unit="cSt", from_="-40", to="200")
    assert liquid_entry("test oil", [write(tmp_path, rows)]).viscosity.range_K == pytest.approx((273.15, 353.15))


def test_header_units_are_converted(tmp_path):
    header = "kind,name,field,law,value,unit,from [degF],to [K],uncertainty,source,read"
    rows = [row.replace(",0,80,1,", ",32,353.15,0.01,").replace(",0,80,5,", ",32,353.15,5 %,") for row in LIQUID]
    oil = liquid_entry("test oil", [write(tmp_path, rows, header=header)])
    assert oil.range_K == pytest.approx((273.15, 353.15))
    assert oil.density.relative_uncertainty == pytest.approx(0.01)
    assert oil.viscosity.relative_uncertainty == pytest.approx(0.05)


def test_columns_may_stand_in_any_order_and_comments_and_blank_lines_are_skipped(tmp_path):
    columns = "read,kind,name,field,law,value,unit,from [degC],to [degC],uncertainty [%],source"
    rows = []
    for row in LIQUID:
        cells = row.replace('"negligible, as measured"', "negligible").split(",")
        rows.append(",".join([cells[-1], *cells[:-1]]))
    path = write(tmp_path, ["# a comment, with a comma", "", *rows], header="# first line\n" + columns)
    assert liquid_entry("test oil", [path]).density.value(293.15) == pytest.approx(897.0)


def test_synonyms_and_spellings_find_the_entry(tmp_path):
    path = write(tmp_path, LIQUID)
    for name in ("TEST OIL", "test_oil", "Test-Oil", "testoil", "Trial Fluid", " trial-fluid "):
        assert liquid_entry(name, [path]).name == "test oil"


def test_a_name_that_hides_a_built_in_one_is_reported(tmp_path):
    rows = [row.replace("test oil", "Glycerol") for row in LIQUID]
    path = write(tmp_path, rows)
    entry = liquid_entry("glycerol", [path])
    assert entry.origin == "own.csv"
    assert any(h.startswith("table: ") and "own.csv" in h and "built in" in h for h in entry.hazards)
    assert table_notices([path]) == ("Glycerol of own.csv takes the place of glycerol, built in",)
    assert liquid_entry("glycerol").origin == "built in"  # without the table


def test_a_synonym_that_hides_a_built_in_one_is_reported(tmp_path):
    path = write(tmp_path, changed("synonym", value="quicksilver"))
    assert liquid_entry("quicksilver", [path]).name == "test oil"
    assert table_notices([path]) == ("test oil of own.csv takes the place of mercury, built in",)


def test_the_first_of_two_tables_is_asked_first(tmp_path):
    one = write(tmp_path, LIQUID, "one.csv")
    two = write(tmp_path, changed("surface_tension", value="40"), "two.csv")
    entry = liquid_entry("test oil", [two, one])
    assert entry.surface_tension.value(300.0) == pytest.approx(0.040)
    assert any("two.csv" in h and "one.csv" in h for h in entry.hazards)
    assert liquid_names([two, one]).count("test oil") == 1


def test_a_table_that_changes_on_disk_is_read_again(tmp_path):
    path = write(tmp_path, LIQUID)
    assert liquid_entry("test oil", [path]).surface_tension.value(300.0) == pytest.approx(0.032)
    write(tmp_path, changed("surface_tension", value="41"))
    os.utime(path, ns=(1, 1))  # a coarse clock would not tell the two apart
    assert liquid_entry("test oil", [path]).surface_tension.value(300.0) == pytest.approx(0.041)


def test_grains_and_drives_may_stand_in_the_same_table(tmp_path):
    rows = [
        *LIQUID,
        *(
            f"grain,test grit,{field},,{value},{unit},,,10,own measurement,yes"
            for field, value, unit in (
                ("bulk_density", "1.4", "g/cm**3"), ("particle_density", "2600", "kg/m**3"), ("d10", "0.2", "mm"),
                ("d50", "300", "um"), ("d90", "0.5", "mm"), ("angle_of_repose", "35", "deg"),
                ("wall_friction", "0.4", ""), ("unconfined_yield_strength", "0.3", "kPa"),
            )
        ),
        "drive,test shaker,max_stroke,,1,in,,,,,",
        "drive,test shaker,frequency_range,,300:3600,1/min,,,,,",
        "drive,test shaker,max_force,,2,kN,,,,,",
        "drive,test shaker,moving_mass,,500,g,,,,,",
    ]  # fmt: skip
    path = write(tmp_path, rows)
    grit = grain_entry("test grit", [path])
    assert grit.bulk_density == pytest.approx(1400.0) and grit.d50 == pytest.approx(3e-4)
    assert grit.angle_of_repose_rad == pytest.approx(np.radians(35.0))
    assert grit.unconfined_yield_strength_Pa == pytest.approx(300.0)
    assert grit.uncertainty["d50"] == pytest.approx(0.1) and grit.source_read["d50"]
    shaker = drive_entry("test shaker", [path])
    assert shaker.max_stroke == pytest.approx(0.0254) and shaker.max_force == pytest.approx(2000.0)
    assert shaker.frequency_range == pytest.approx((5.0, 60.0)) and shaker.moving_mass == pytest.approx(0.5)
    assert shaker.max_velocity is None and shaker.source == "not stated"


def test_rheology_rows(tmp_path):
    row = "liquid,test oil,rheology,herschel-bulkley,yield_stress=30; consistency=12; index=0.42,,,,40,own,no"
    entry = liquid_entry("test oil", [write(tmp_path, [*LIQUID, row])])
    assert entry.rheology is not None
    assert entry.rheology["model"] == "herschel-bulkley" and entry.rheology["yield_stress"] == 30.0
    assert entry.rheology["relative_uncertainty"] == pytest.approx(0.4)


def test_a_liquid_for_the_verdict_comes_from_the_user_s_table(tmp_path):
    oil = liquid("test oil", temperature="25 degC", tables=[write(tmp_path, LIQUID)])
    assert oil.viscosity == pytest.approx(0.05e-3 * np.exp(900.0 / 148.15))
    with pytest.raises(InputError, match="outside the range"):
        liquid("test oil", temperature="90 degC", tables=[write(tmp_path, LIQUID)])


def test_tabulated_points_hold_between_their_ends_only(tmp_path):
    rows = changed("viscosity", law="tabulated_log", value="0:900; 20:250; 50:60; 80:20")
    entry = liquid_entry("test oil", [write(tmp_path, rows)])
    np.testing.assert_allclose(entry.viscosity.value([273.15, 293.15, 323.15]), [0.9, 0.25, 0.06])
    with pytest.raises(InputError, match="own.csv: 1 fault\n.*from: the range goes beyond the points"):
        rows = changed("viscosity", law="tabulated_log", value="0:900; 20:250; 50:60; 70:20")
        liquid_entry("test oil", [write(tmp_path, rows)])
