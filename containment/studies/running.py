"""Carrying out a plan: blocks handed to an executor, their results taken in the order of the cases."""

import contextlib
import importlib
import multiprocessing
import os
import signal
import threading
from collections import deque
from collections.abc import Callable, Iterator
from concurrent.futures import Executor, Future, ProcessPoolExecutor
from concurrent.futures.process import BrokenProcessPool
from typing import Any, Final

from containment.errors import ContainmentError
from containment.studies.batch import Block, evaluated_block
from containment.studies.plan import Plan

__all__ = ["StudyError", "blocks_from", "dask_executor", "process_executor", "usable_cores"]

_WAITING_PER_WORKER: Final = 4
"""Blocks that are handed out ahead of need, so that no worker waits for the next one."""
_MOST_DEATHS: Final = 3
"""Times that workers may die on a block before the study gives up on it."""
_PATIENCE: Final = 10
"""Seconds for the scheduler of a cluster to answer."""
_THREADS: Final = ("OPENBLAS_NUM_THREADS", "OMP_NUM_THREADS", "MKL_NUM_THREADS")


class StudyError(ContainmentError):
    """A study cannot go on; what was recorded is kept."""


def usable_cores() -> int:
    """Return the number of cores that this process may use."""
    try:
        return len(os.sched_getaffinity(0))
    except AttributeError:  # not on every system
        return os.cpu_count() or 1


def blocks_from(plan: Plan, first_case: int, executor: Executor | None, *, workers: int = 1) -> Iterator[tuple[Block, int]]:
    """Yield the blocks of a plan in order with their number of cases, from the block of a case on.

    Parameters
    ----------
    plan : Plan
        The plan.
    first_case : int
        The first case that is wanted; a block that it lies in is evaluated whole, so that its results stay the same.
    executor : concurrent.futures.Executor or None
        Where the blocks are evaluated; None: here, one after the other.
    workers : int
        How many work at once, for the number of blocks that are handed out ahead.

    Raises
    ------
    StudyError
        A block failed in a way that is not a matter of one case, again and again.
    """
    todo = [(start, stop) for start, stop in plan.blocks() if stop > first_case]
    if executor is None:
        for start, stop in todo:
            yield evaluated_block(plan, start, stop), stop - start
        return
    waiting: deque[tuple[tuple[int, int], Future[Block]]] = deque()
    ahead = iter(todo)
    try:
        while True:
            while len(waiting) < max(1, workers) * _WAITING_PER_WORKER and (span := next(ahead, None)) is not None:
                waiting.append((span, executor.submit(evaluated_block, plan, *span)))
            if not waiting:
                return
            (start, stop), future = waiting[0]
            block = future.result()
            waiting.popleft()
            yield block, stop - start
    finally:
        for _, future in waiting:
            future.cancel()


def process_executor(workers: int) -> Executor:
    """Return an executor of processes that end with this one, however it ends; it replaces workers that die.

    The processes are started afresh, not forked: threads and locks of this process are not theirs. A script that starts a
    study with several processes therefore needs ``if __name__ == "__main__":``.
    """
    return _LastingPool(workers)


class _LastingPool(Executor):
    """A pool of processes that is set up again, and its blocks handed out again, when a worker dies."""

    def __init__(self, workers: int) -> None:
        self.workers = workers
        self._deaths = 0
        self._pool = self._new()
        self._lock = threading.Lock()

    def _new(self) -> ProcessPoolExecutor:
        return ProcessPoolExecutor(
            self.workers, mp_context=multiprocessing.get_context("spawn"), initializer=_start_worker
        )

    def submit(self, fn: Callable[..., Any], /, *args: Any, **kwargs: Any) -> "Future[Any]":
        """Hand out a call."""
        return _LastingFuture(self, fn, args, kwargs)

    def hand_out(self, fn: Callable[..., Any], args: tuple[Any, ...], kwargs: dict[str, Any]) -> "tuple[Any, Future[Any]]":
        """Hand out a call to the pool as it is now; one thread to a worker while its processes are started."""
        with self._lock, _one_thread_each():
            try:
                return self._pool, self._pool.submit(fn, *args, **kwargs)
            except BrokenProcessPool:
                self._replace(self._pool)
                return self._pool, self._pool.submit(fn, *args, **kwargs)

    def renew(self, broken: Any) -> None:
        """Set up the pool again after a worker died, once for each pool."""
        with self._lock:
            if broken is self._pool:
                self._replace(broken)

    def _replace(self, broken: ProcessPoolExecutor) -> None:
        broken.shutdown(wait=False, cancel_futures=True)
        self._pool = self._new()

    def shutdown(self, wait: bool = True, *, cancel_futures: bool = False) -> None:
        """End the processes."""
        self._pool.shutdown(wait=wait, cancel_futures=cancel_futures)


class _LastingFuture(Future[Any]):
    """The result of a call that is handed out again when its worker dies."""

    def __init__(self, pool: _LastingPool, fn: Callable[..., Any], args: tuple[Any, ...], kwargs: dict[str, Any]) -> None:
        super().__init__()
        self._owner = pool
        self._call = (fn, args, kwargs)
        self._made_by, self._inner = pool.hand_out(*self._call)

    def result(self, timeout: float | None = None) -> Any:
        """Wait for the result."""
        for _ in range(_MOST_DEATHS):
            try:
                return self._inner.result(timeout)
            except BrokenProcessPool:
                self._owner.renew(self._made_by)
                self._made_by, self._inner = self._owner.hand_out(*self._call)
        try:
            return self._inner.result(timeout)
        except BrokenProcessPool as error:
            raise StudyError(
                f"workers died {_MOST_DEATHS + 1} times on cases from {self._call[1][1]} (too little memory?); give fewer "
                "--workers and start again: the study goes on from there"
            ) from error

    def cancel(self) -> bool:
        """Cancel the call where it has not begun."""
        return self._inner.cancel()


@contextlib.contextmanager
def _one_thread_each() -> Iterator[None]:
    """Let worker processes that start now use one thread each for linear algebra."""
    before = {name: os.environ.get(name) for name in _THREADS}
    try:
        os.environ.update({name: "1" for name in _THREADS if before[name] is None})
        yield
    finally:
        for name, value in before.items():
            if value is None:
                os.environ.pop(name, None)


def _start_worker() -> None:
    """Leave Ctrl-C to the parent, and end when the parent ends, even when it is killed."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    parent = multiprocessing.parent_process()
    if parent is not None:
        threading.Thread(target=_end_with, args=(parent.sentinel,), daemon=True).start()


def _end_with(sentinel: int) -> None:
    from multiprocessing.connection import wait

    wait([sentinel])
    os._exit(1)


def dask_executor(address: str) -> tuple[Executor, int, Callable[[], None]]:
    """Return the executor of a dask.distributed cluster, the number of its threads, and what disconnects from it.

    Raises
    ------
    StudyError
        dask.distributed is not installed, or the scheduler does not answer.
    """
    try:
        distributed: Any = importlib.import_module("distributed")
    except ImportError as error:
        raise StudyError("--scheduler: needs dask.distributed; pip install 'containment[cluster]'") from error
    try:
        client = distributed.Client(address, timeout=_PATIENCE, set_as_default=False)
    except (OSError, ValueError, TimeoutError) as error:
        raise StudyError(f"--scheduler: {address[:80]!r} does not answer: {' '.join(str(error).split())[:200]}") from error
    threads = sum(client.nthreads().values())
    return client.get_executor(pure=False, retries=_MOST_DEATHS), max(1, threads), client.close
