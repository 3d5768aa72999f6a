"""A real dask.distributed cluster on this machine: two worker processes, one of them killed."""

import os
import signal
import threading
import time

import pytest

import containment as ct
from containment.studies import running
from containment.studies.running import StudyError, dask_executor
from tests.studies.plans import DRAWN

distributed = pytest.importorskip("distributed")

PLAN = {**DRAWN, "sample": {"method": "latin hypercube", "count": 700, "seed": 5}}


@pytest.fixture(scope="module")
def cluster():
    with distributed.LocalCluster(
        n_workers=2, threads_per_worker=1, processes=True, dashboard_address=None, silence_logs=50
    ) as made:
        yield made


@pytest.fixture(scope="module")
def serial():
    return b"".join(ct.study(PLAN).lines())


def test_a_cluster_gives_the_same_bytes(cluster, serial, tmp_path):
    result = ct.study(PLAN, scheduler=cluster.scheduler_address, out=tmp_path / "s.jsonl")
    assert b"".join(result.lines()) == serial
    assert len(serial.splitlines()) == 1400


@pytest.mark.skipif(os.name != "posix", reason="signals of a POSIX system")
def test_a_worker_killed_in_the_middle_changes_nothing(cluster, serial):
    pids = [worker.pid for worker in cluster.workers.values()]
    killed = []

    def kill_one(done, of):
        if not killed and done > 0:
            killed.append(pids[0])
            threading.Thread(target=os.kill, args=(pids[0], signal.SIGKILL)).start()

    result = ct.study(PLAN, scheduler=cluster.scheduler_address, progress=kill_one)
    assert killed
    assert b"".join(result.lines()) == serial
    time.sleep(0.1)


def test_a_scheduler_that_does_not_answer_is_one_line(monkeypatch):
    monkeypatch.setattr(running, "_PATIENCE", 1)
    for address in ("tcp://127.0.0.1:9", "nonsense://x"):
        with pytest.raises(StudyError, match="--scheduler: .* does not answer"):
            dask_executor(address)
