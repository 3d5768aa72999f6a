"""What reading the tables loads, and that nothing in the built-in ones is faulty."""

import subprocess
import sys

import pytest

from containment.data_files import data_file
from containment.given.tables.building import build
from containment.given.tables.lookup import name_key
from containment.given.tables.rows import read_rows

ALL = """
import sys
from containment.given.tables import *
for names, entry in ((liquid_names, liquid_entry), (grain_names, grain_entry), (drive_names, drive_entry)):
    for name in names():
        entry(name)
print(*sorted(sys.modules))
"""


def test_reading_all_tables_loads_nothing_heavy():
    done = subprocess.run([sys.executable, "-c", ALL], capture_output=True, text=True, check=True)
    loaded = {module.split(".")[0] for module in done.stdout.split()}
    assert "numpy" in loaded
    assert not loaded & {"pint", "scipy", "rich", "tomllib", "difflib", "pandas"}


@pytest.mark.parametrize("file", ["liquids.csv", "grains.csv", "drives.csv"])
def test_the_built_in_tables_stand_the_same_search_for_faults_as_a_user_s(file):
    rows, faults = read_rows(data_file(file))  # hostile cells included
    entries = {}
    for row in rows:
        entries.setdefault(row.name, []).append(row)
    names = [name_key(row.value if row.field == "synonym" else row.name) for row in rows if row.field in ("title", "synonym")]
    assert len(names) == len(set(names))
    for of_one in entries.values():
        assert build(of_one, faults, origin="checked as a user's") is not None, of_one[0].name
        assert [row.line for row in of_one] == list(range(of_one[0].line, of_one[0].line + len(of_one)))  # stand together
        assert of_one[0].field == "title"
    faults.raise_if_any()


def test_counts_of_the_tables():
    for file, least in (("liquids.csv", 40), ("grains.csv", 15), ("drives.csv", 8)):
        rows, _ = read_rows(data_file(file), trusted=True)
        assert len({row.name for row in rows}) >= least


def test_no_source_is_said_to_be_read_that_says_it_is_from_memory_alone():
    for file in ("liquids.csv", "grains.csv"):
        for row in read_rows(data_file(file), trusted=True)[0]:
            if row.read == "yes":
                assert "read" in row.source, (row.name, row.field)
            if row.read == "no":
                assert "memory" in row.source or "this entry" in row.source, (row.name, row.field)
