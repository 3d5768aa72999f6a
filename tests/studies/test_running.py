"""Executors: the same bytes from each; workers and whole studies that are killed."""

import os
import random
import signal
import subprocess
import sys
import time
from concurrent.futures import Executor, Future, ThreadPoolExecutor
from pathlib import Path

import pytest

import containment as ct
from containment.studies.batch import evaluated_block
from containment.studies.plan_reading import plan_from
from containment.studies.running import StudyError, process_executor
from tests.studies.plans import DRAWN, GRID

posix = pytest.mark.skipif(os.name != "posix", reason="signals of a POSIX system")
KILLS = int(os.environ.get("CONTAINMENT_KILLS", "3"))


MANY_BLOCKS = """
[study]
proof = false
[fixed]
name = "custom"
density = "1410 kg/m**3"
surface_tension = "80 mN/m"
cylinder = "70 mm"
depth = "30 mm"
frequency = "50 Hz"
acceleration = "32 g_n"
surface = "clean"
[uncertain]
viscosity = {distribution = "lognormal", median = "10 Pa*s", factor = 1.3}
[sample]
count = 5000
"""


class Plain(Executor):
    """The least that an executor must do."""

    def submit(self, fn, /, *args, **kwargs):
        future = Future()
        future.set_result(fn(*args, **kwargs))
        return future


@pytest.fixture(scope="module")
def serial():
    return {name: b"".join(ct.study(plan).lines()) for name, plan in (("grid", GRID), ("drawn", DRAWN))}


@pytest.mark.parametrize("name", ["grid", "drawn"])
@pytest.mark.parametrize("make", [Plain, lambda: ThreadPoolExecutor(3)], ids=["plain", "threads"])
def test_any_executor_gives_the_same_bytes(serial, name, make):
    with make() as executor:
        result = ct.study({"grid": GRID, "drawn": DRAWN}[name], executor=executor, workers=3)
    assert b"".join(result.lines()) == serial[name]


def test_processes_give_the_same_bytes(serial, tmp_path):
    told = []
    result = ct.study(GRID, workers=2, out=tmp_path / "s.jsonl", progress=lambda done, of: told.append((done, of)))
    assert b"".join(result.lines()) == serial["grid"]
    assert told[0] == (0, 1200) and told[-1] == (1200, 1200) and told == sorted(told)


@posix
def test_a_worker_that_is_killed_is_replaced(serial):
    """The pool loses a process while its blocks are under way; the blocks are handed out again."""
    plan = plan_from(GRID)
    with process_executor(2) as pool:
        first = pool.submit(evaluated_block, plan, *plan.blocks()[0])
        first.result()
        killed = pool.submit(os.getpid).result()
        others = [pool.submit(evaluated_block, plan, *span) for span in plan.blocks()]
        os.kill(killed, signal.SIGKILL)
        assert b"".join(future.result().lines for future in others) == serial["grid"]


@posix
def test_a_block_that_kills_every_worker_is_given_up():
    with process_executor(1) as pool, pytest.raises(StudyError, match="workers died 4 times"):
        pool.submit(os.kill, 0, 0).result()  # harmless: the pool works
        pool.submit(_die, "block", "0").result()


def _die(*_):
    os.kill(os.getpid(), signal.SIGKILL)


def test_a_failing_executor_stops_the_study_and_keeps_what_was_recorded(tmp_path):
    class Breaking(Plain):
        count = 0

        def submit(self, fn, /, *args, **kwargs):
            self.count += 1
            if self.count > 5:
                raise RuntimeError("no more")
            return super().submit(fn, *args, **kwargs)

    path = tmp_path / "s.jsonl"
    with pytest.raises(RuntimeError, match="no more"):
        ct.study(DRAWN | {"sample": {"count": 800}}, executor=Breaking(), out=path)
    kept = ct.study(DRAWN | {"sample": {"count": 800}}, out=path)
    assert kept.resumed > 0 and kept.resumed % 256 == 0


def children_of(pid):
    found = []
    for entry in Path("/proc").iterdir():
        if entry.name.isdigit():
            try:
                fields = (entry / "stat").read_text().rpartition(")")[2].split()
            except OSError:
                continue
            if int(fields[1]) == pid:
                found.append(int(entry.name))
    return found


def alive(pid):
    try:
        return Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()[0] not in "ZX"
    except OSError:
        return False


@pytest.mark.skipif(not Path("/proc/self/stat").exists(), reason="looks processes up in /proc")
def test_a_study_killed_at_random_instants_loses_and_doubles_nothing(tmp_path):
    """SIGKILL to the study, wherever it is; its workers end with it; started again it goes on to the same bytes.

    CONTAINMENT_KILLS=50 kills it fifty times.
    """
    plan = tmp_path / "plan.toml"
    plan.write_text(MANY_BLOCKS)
    out, undisturbed = tmp_path / "killed.jsonl", tmp_path / "undisturbed.jsonl"
    ct.study(plan, out=undisturbed)
    expected = undisturbed.read_bytes()
    command = [sys.executable, "-m", "containment", "study", str(plan), "--out", str(out), "--workers", "2", "--json"]
    rng = random.Random(1)
    kills, starts, ends = 0, 0, set()
    while kills < KILLS:
        starts += 1
        assert starts < 20 * KILLS
        process = subprocess.Popen(command, stdout=subprocess.DEVNULL, stderr=subprocess.DEVNULL)
        deadline = time.monotonic() + rng.uniform(0.3, 3.0)
        while time.monotonic() < deadline and process.poll() is None:
            time.sleep(0.005)
        if process.poll() is not None:
            assert process.returncode == 0
            assert out.read_bytes() == expected
            out.unlink()
            continue
        workers = children_of(process.pid)
        process.kill()
        process.wait()
        kills += 1
        left = out.read_bytes() if out.exists() else b""
        assert expected.startswith(left)
        ends.add(len(left))
        patience = time.monotonic() + 10.0
        while any(alive(pid) for pid in workers) and time.monotonic() < patience:
            time.sleep(0.05)
        assert not any(alive(pid) for pid in workers)
    subprocess.run(command, check=True, stdout=subprocess.DEVNULL)
    assert out.read_bytes() == expected
    print(f"\n{kills} kills in {starts} starts, {len(ends)} different lengths left behind; nothing lost, nothing twice")
