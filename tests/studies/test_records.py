"""The file of a study: nothing lost, nothing twice, whatever kills the writer."""

import json
import os
import subprocess
import sys

import pytest

import containment as ct
from containment.errors import InputError
from containment.studies import study as studies
from containment.studies.plan_reading import plan_from
from containment.studies.records import RecordFile, StudyFileError, header_line
from tests.studies.plans import GRID, SYRUP, toml_plan


@pytest.fixture(scope="module")
def whole(tmp_path_factory):
    """The undisturbed file of a study of 1200 cases in five blocks."""
    path = tmp_path_factory.mktemp("whole") / "study.jsonl"
    result = ct.study(GRID, out=path)
    assert result.counts["held"] > 0 and sum(result.counts[k] for k in ("held", "marginal", "not held", "error")) == 1200
    return path.read_bytes()


def test_the_header_says_what_was_asked_and_with_what(whole):
    header = json.loads(whole.splitlines()[0])
    assert header["plan"]["cases"] == 1200
    assert header["fingerprint"] == plan_from(GRID).fingerprint
    assert {"containment", "numpy", "scipy", "property tables"} <= set(header["versions"])
    drawn = plan_from({
        "fixed": {**SYRUP, "cylinder": 0.07}, "uncertain": {"depth": {"distribution": "uniform", "low": 0.02, "high": 0.03}},
        "sample": {"count": 3, "seed": 77},
    })  # fmt: skip
    assert json.loads(header_line(drawn.to_dict(), drawn.fingerprint, {}))["plan"]["seed"] == 77


def test_records_stand_in_order_each_once(whole):
    assert [json.loads(line)["i"] for line in whole.splitlines()[1:]] == list(range(1200))


CUTS = [0, 1, 40, 5_000, 70_000, -1, -2, -30, -200, -300, -1000]


@pytest.mark.parametrize("cut", CUTS)
def test_a_file_that_ends_anywhere_goes_on_to_the_same_bytes(tmp_path, whole, cut):
    path = tmp_path / "study.jsonl"
    path.write_bytes(whole[:cut] if cut else b"")
    result = ct.study(GRID, out=path)
    assert path.read_bytes() == whole
    assert result.resumed == max(0, whole[:cut].count(b"\n") - 1 if cut else 0)
    assert sum(result.counts[k] for k in ("held", "marginal", "not held", "error")) == 1200


def test_every_end_within_the_last_records_is_mended(tmp_path, whole):
    """Every single byte at which the last two records can be torn: what is left is whole records of the first cases."""
    plan = plan_from(GRID)
    path = tmp_path / "study.jsonl"
    header = whole.splitlines(keepends=True)[0]
    for end in range(len(whole) - 500, len(whole) + 1):
        path.write_bytes(whole[:end])
        with RecordFile(path, header) as file:
            assert file.done == whole[:end].count(b"\n") - 1
            assert sum(file.counts.get(k, 0) for k in ("held", "marginal", "not held")) == file.done
        left = path.read_bytes()
        assert whole.startswith(left) and left.endswith(b"}\n")
    assert file.done == plan.cases


def test_blocks_that_never_reached_the_disk_are_cut_off_with_all_behind_them(tmp_path, whole):
    path = tmp_path / "study.jsonl"
    path.write_bytes(whole[:100_000] + b"\0" * 4096 + whole[104_096:])
    result = ct.study(GRID, out=path)
    assert path.read_bytes() == whole
    assert 0 < result.resumed < 1200 and result.repaired > 4096


def test_damage_elsewhere_is_refused_and_left_alone(tmp_path, whole):
    path = tmp_path / "study.jsonl"
    lines = whole.splitlines(keepends=True)
    for damaged in (
        [*lines[:50], lines[50][:30] + b"\n", *lines[51:]], [*lines[:50], *lines[51:]], [*lines[:50], lines[49], *lines[50:]],
    ):  # fmt: skip
        path.write_bytes(b"".join(damaged))
        with pytest.raises(StudyFileError, match="damaged|wrong place"):
            ct.study(GRID, out=path)
        assert path.read_bytes() == b"".join(damaged)


def test_a_changed_plan_is_refused_and_told_where(tmp_path, whole):
    path = tmp_path / "study.jsonl"
    path.write_bytes(whole)
    other = {**GRID, "fixed": {**GRID["fixed"], "depth": "31 mm"}}
    with pytest.raises(InputError, match=r"another plan \(different: fixed\)"):
        ct.study(other, out=path)
    assert path.read_bytes() == whole


def test_another_title_is_the_same_plan(tmp_path, whole):
    path = tmp_path / "study.jsonl"
    path.write_bytes(whole[:-100])
    ct.study({**GRID, "study": {**GRID["study"], "title": "again"}}, out=path)
    assert path.read_bytes() == whole


def test_other_versions_are_refused(tmp_path, whole, monkeypatch):
    path = tmp_path / "study.jsonl"
    path.write_bytes(whole[:-100])
    real = studies.versions_of
    monkeypatch.setattr(studies, "versions_of", lambda plan: {**real(plan), "numpy": "0.0"})
    with pytest.raises(InputError, match="other versions .numpy .* then, 0.0 now"):
        ct.study(GRID, out=path)


@pytest.mark.parametrize("content", [b"hello\n", b'{"a": 1}\n', b"\x89PNG", b'[1, 2]\n{"i":0}\n'])
def test_a_file_that_is_no_study_is_never_touched(tmp_path, content):
    path = tmp_path / "other"
    path.write_bytes(content)
    with pytest.raises(InputError, match="not the file of a study"):
        ct.study(GRID, out=path)
    assert path.read_bytes() == content


def test_a_folder_or_a_missing_folder_is_one_line(tmp_path):
    for path in (tmp_path, tmp_path / "no" / "study.jsonl"):
        with pytest.raises(StudyFileError, match="cannot be opened"):
            ct.study(GRID, out=path)


def test_a_changed_table_of_the_user_counts_as_another_version(tmp_path):
    table = tmp_path / "own.csv"
    rows = "kind,name,field,law,value,unit,from [degC],to [degC],uncertainty [%],source,read\n" + "".join(
        f"liquid,own goo,{field},constant,{value},{unit},0,80,1,invented,yes\n"
        for field, value, unit in (("density", 1400, "kg/m**3"), ("viscosity", 10, "Pa*s"), ("surface_tension", 0.08, "N/m"))
    )
    table.write_text(rows + "liquid,own goo,vapour_pressure_note,,negligible (invented),,,,,invented,yes\n")
    plan = {"fixed": {"name": "own goo", "table": str(table), "cylinder": 0.07, "depth": 0.03, "frequency": 50.0},
            "vary": {"acceleration": [200.0, 300.0]}}  # fmt: skip
    path = tmp_path / "study.jsonl"
    assert ct.study(plan, out=path).counts["error"] == 0
    table.write_text(table.read_text().replace("constant,10", "constant,11"))
    with pytest.raises(InputError, match="own tables"):
        ct.study(plan, out=path)


def test_two_studies_cannot_write_one_file(tmp_path, whole):
    path = tmp_path / "study.jsonl"
    with RecordFile(path, whole.splitlines(keepends=True)[0]):
        code = "import sys, containment as ct\nfrom tests.studies.plans import GRID\nct.study(GRID, out=sys.argv[1])"
        done = subprocess.run([sys.executable, "-c", code, path], capture_output=True, text=True, check=False)
        assert done.returncode == 1 and "in use by another study" in done.stderr
    ct.study(GRID, out=path)
    assert path.read_bytes() == whole


FULL_DISK = """
import resource, signal, sys
signal.signal(signal.SIGXFSZ, signal.SIG_IGN)
resource.setrlimit(resource.RLIMIT_FSIZE, (int(sys.argv[2]), int(sys.argv[2])))
import containment as ct
from tests.studies.plans import GRID
ct.study(GRID, out=sys.argv[1])
"""


@pytest.mark.skipif(not hasattr(os, "fork"), reason="limits of a POSIX system")
@pytest.mark.parametrize("room", [500, 150_000])
def test_a_full_disk_keeps_whole_blocks_and_the_study_goes_on(tmp_path, whole, room):
    """The system refuses to let the file grow, in the middle of a block as a full disk does."""
    path = tmp_path / "study.jsonl"
    done = subprocess.run([sys.executable, "-c", FULL_DISK, path, str(room)], capture_output=True, text=True, check=False)
    assert done.returncode == 1 and "cannot be written: File too large" in done.stderr.splitlines()[-1]
    left = path.read_bytes()
    assert whole.startswith(left) and len(left) <= room
    result = ct.study(GRID, out=path)
    assert path.read_bytes() == whole and result.resumed == max(0, left.count(b"\n") - 1)


def test_the_command_line_names_the_fault_of_the_file(tmp_path):
    plan = toml_plan(tmp_path, 2)
    out = tmp_path / "study.jsonl"
    out.write_text("something else\n")
    command = [sys.executable, "-m", "containment", "study", str(plan), "--out", str(out)]
    done = subprocess.run(command, capture_output=True, text=True, check=False)
    assert (done.returncode, done.stdout) == (2, "")
    assert done.stderr.count("\n") == 1 and "--out" in done.stderr
