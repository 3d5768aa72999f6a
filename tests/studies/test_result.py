"""What a study gives back, and the tables that other programs read."""

import csv
import json
import math
import sys

import numpy as np
import pytest

import containment as ct
from containment.errors import InputError
from containment.studies.export import export, table_format
from tests.studies.plans import CUP, SYRUP

SWEEP = {**SYRUP, **CUP, "frequency": [40.0, 50.0, 60.0], "acceleration": np.array([100.0, 300.0])}


@pytest.fixture(scope="module")
def result():
    return ct.sweep(**SWEEP)


def test_columns_are_arrays_of_one_value_a_case(result):
    columns = result.columns()
    assert list(columns) == ["i", "frequency_Hz", "acceleration_m_s2", "verdict", "proven", "binding", "margin",
                             "lower_acceleration_m_s2", "upper_acceleration_m_s2", "error"]  # fmt: skip
    assert columns["frequency_Hz"].tolist() == [40.0, 40.0, 50.0, 50.0, 60.0, 60.0]
    assert columns["margin"].dtype == np.float64 and columns["i"].dtype == np.int64
    assert result["lower_acceleration_m_s2"][2] == result["lower_acceleration_m_s2"][3]
    with pytest.raises(InputError, match="column: 'speed'"):
        result["speed"]


def test_a_grid_has_the_shape_of_its_axes(result):
    assert result.grid("margin").shape == (3, 2)
    window = ct.holding_window(
        ct.Liquid(density=1410.0, viscosity=10.0, surface_tension=0.08), ct.Cylinder(diameter=0.07, depth=0.03),
        frequencies=[40.0, 50.0, 60.0],
    )  # fmt: skip
    assert result.grid("lower_acceleration_m_s2")[:, 0] == pytest.approx(window.lower)
    assert result.grid("upper_acceleration_m_s2")[:, 1] == pytest.approx(window.upper)


def test_the_length_and_the_records(result):
    assert len(result) == 6 == len(list(result.records))
    assert next(result.records)["verdict"] == "not held"


def test_dataframes_take_records_and_columns_as_they_are(result):
    pandas = pytest.importorskip("pandas")
    assert pandas.DataFrame(result.columns()).shape == (6, 10)
    frame = pandas.DataFrame(result.records)
    assert frame["verdict"].tolist() == result["verdict"].tolist()


def test_polars_takes_them_too(result):
    polars = pytest.importorskip("polars")
    assert polars.DataFrame(list(result.records)).height == 6
    assert polars.DataFrame(result.columns()).height == 6


def test_neither_dataframe_library_is_needed():
    assert not {"polars"} & {name.partition(".")[0] for name in sys.modules if name.startswith("containment")}


def test_a_sweep_refuses_what_a_plan_refuses():
    with pytest.raises(InputError, match="'lenght' is not an input"):
        ct.sweep(**SWEEP, lenght=3.0)


def test_a_sweep_of_grains():
    found = ct.sweep(name="wheat flour", cylinder="300 mm", depth="0.5 m", outlet=["20 mm", "200 mm"])
    assert found.plan.question == "bed"
    assert found["largest_outlet_m"].shape == (2,)


def test_the_summary_is_plain_json(result):
    summary = json.loads(json.dumps(result.to_dict(), allow_nan=False))
    assert summary["cases"] == 6 and summary["proof"] is True
    assert sum(summary["counts"][key] for key in ("held", "marginal", "not held", "error")) == 6
    assert summary["points"] == []


def test_csv_has_one_row_a_record_and_empty_fields_for_null(tmp_path):
    found = ct.sweep(name="glycerol", **CUP, temperature=["20 degC", "3000 K"], frequency=60.0, acceleration=500.0)
    path = tmp_path / "table.csv"
    assert export(found, path) == 2
    first, second = csv.DictReader(path.open(newline=""))
    assert first["verdict"] in ("held", "marginal", "not held") and first["error"] == ""
    assert second["verdict"] == "" and "outside the range" in second["error"]
    assert math.isclose(float(first["temperature_K"]), 293.15)


def test_parquet_keeps_the_types(tmp_path, result):
    parquet = pytest.importorskip("pyarrow.parquet")
    path = tmp_path / "table.parquet"
    assert export(result, path) == 6
    table = parquet.read_table(path)
    assert table["verdict"].to_pylist() == result["verdict"].tolist()
    assert table["margin"].to_pylist() == result["margin"].tolist()


def test_an_unknown_ending_and_a_missing_library_are_one_line(monkeypatch):
    with pytest.raises(InputError, match="expected .csv or .parquet"):
        table_format("table.xlsx")
    monkeypatch.setitem(sys.modules, "pyarrow.parquet", None)
    with pytest.raises(InputError, match="needs pyarrow"):
        table_format("table.parquet")
