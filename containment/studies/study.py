"""Carrying out a study, from the plan to the result."""

from collections.abc import Callable, Mapping
from concurrent.futures import Executor
from pathlib import Path
from typing import Any

from containment.errors import InputError
from containment.studies.inputs import INPUTS
from containment.studies.plan import Plan
from containment.studies.plan_reading import plan_from, read_plan
from containment.studies.records import RecordFile, header_line, verdicts_of
from containment.studies.result import StudyResult
from containment.studies.running import blocks_from, dask_executor, process_executor
from containment.studies.versions import versions_of

__all__ = ["carried_out", "study", "sweep"]


def study(
    plan: Mapping[str, Any] | str | Path | Plan,
    *,
    out: str | Path | None = None,
    executor: Executor | None = None,
    workers: int = 1,
    scheduler: str | None = None,
    progress: Callable[[int, int], None] | None = None,
) -> StudyResult:
    """Carry out a parameter study.

    Parameters
    ----------
    plan : mapping, path or Plan
        Tables ``study``, ``fixed``, ``vary``, ``together``, ``uncertain`` and ``sample`` as in a plan file, or the path of
        such a file. In a mapping plain numbers count as SI; in a file they are refused.
    out : path, optional
        File of the records (JSON lines). Where it exists already the study goes on from there, if the plan and the versions
        are the same. By default the records are kept in memory.
    executor : concurrent.futures.Executor, optional
        Where the cases are evaluated; it must be able to import this package.
    workers : int
        Processes to be started where neither an executor nor a scheduler is given; 1: in this process. A script that
        starts more than one needs ``if __name__ == "__main__":``. With an executor: how many work at once.
    scheduler : str, optional
        Address of a dask.distributed scheduler.
    progress : callable, optional
        Called with the number of cases done and of all cases, after each block.

    Returns
    -------
    StudyResult
        The same, to the last bit, whatever executor was used.

    Raises
    ------
    InputError
        A plan with faults, or a file that belongs to another plan.
    StudyFileError, StudyError
        The file cannot be written, or the workers failed; what was recorded is kept.

    Examples
    --------
    >>> import containment as ct
    >>> result = ct.study({
    ...     "fixed": {"name": "custom", "density": 1410.0, "surface_tension": 0.08, "cylinder": "70 mm", "depth": "30 mm",
    ...               "frequency": "50 Hz", "acceleration": "31 g_n"},
    ...     "uncertain": {"viscosity": {"distribution": "uniform", "low": "6 Pa*s", "high": "14 Pa*s"}},
    ...     "sample": {"method": "latin hypercube", "count": 40},
    ... })
    >>> chance = result.holding_probabilities()[0]
    >>> chance.draws, 0.0 < chance.low < chance.probability < chance.high < 1.0
    (40, True)
    """
    if isinstance(plan, Plan):
        checked = plan
    elif isinstance(plan, Mapping):
        checked = plan_from(plan)
    else:
        checked = read_plan(plan)
    if sum((executor is not None, scheduler is not None)) > 1:
        raise InputError("scheduler: given with an executor; expected one of the two")
    if isinstance(workers, bool) or not isinstance(workers, int) or not 1 <= workers <= 1024:
        raise InputError(f"workers: {workers!r} is not allowed; expected a whole number from 1 to 1024")
    return carried_out(
        checked, out=out, executor=executor, workers=workers, scheduler=scheduler, progress=progress or (lambda done, of: None)
    )


def carried_out(
    plan: Plan,
    *,
    out: str | Path | None,
    executor: Executor | None,
    workers: int,
    scheduler: str | None,
    progress: Callable[[int, int], None],
) -> StudyResult:
    """Carry out a plan that has been checked; see `study`."""
    versions = versions_of(plan)
    file = None if out is None else RecordFile(out, header_line(plan.to_dict(), plan.fingerprint, versions))
    own: Executor | None = None
    disconnect: Callable[[], None] | None = None
    kept: list[bytes] = []
    counts: dict[str, int] = dict.fromkeys(("held", "marginal", "not held", "error", "unproven"), 0)
    resumed = file.done if file else 0
    repaired = file.repaired if file else 0
    try:
        if resumed < plan.cases:
            if scheduler is not None:
                executor, workers, disconnect = dask_executor(scheduler)
            elif executor is None and min(workers, len(plan.blocks())) > 1:
                executor = own = process_executor(workers)
            progress(resumed, plan.cases)
        done = resumed
        for block, count in blocks_from(plan, resumed, executor, workers=workers):
            if file is not None:
                lines, fresh = block.lines, block.counts
                if block.start < file.done:  # the first of its records were there already
                    lines, fresh = _rest(block.lines, file.done - block.start)
                file.append(lines, block.start + count - file.done, fresh)
            else:
                kept.append(block.lines)
                for key, value in block.counts.items():
                    counts[key] += value
            done = block.start + count
            progress(done, plan.cases)
        if file is not None:
            file.sync()
            counts.update(file.counts)
    finally:
        if file is not None:
            file.close()
        if own is not None:
            own.shutdown(wait=True, cancel_futures=True)
        if disconnect is not None:
            disconnect()
    return StudyResult(
        plan=plan, versions=versions, counts=counts, path=None if out is None else Path(out), resumed=resumed,
        repaired=repaired, _lines=tuple(kept),
    )  # fmt: skip


def _rest(lines: bytes, known: int) -> tuple[bytes, dict[str, int]]:
    """Return the lines after the first `known` ones, and how they count."""
    rest = lines.splitlines(keepends=True)[known:]
    counts: dict[str, int] = {}
    for line in rest:
        for key in verdicts_of(line):
            counts[key] = counts.get(key, 0) + 1
    return b"".join(rest), counts


def sweep(**inputs: Any) -> StudyResult:
    """Judge a grid: inputs that are lists or arrays are varied against each other, all others are fixed.

    Parameters
    ----------
    **inputs
        Named like the options of the command line with underscores: ``name``, ``temperature``, ``cylinder``, ``depth``,
        ``frequency``, ``acceleration``, ``dwell``... Text with a unit, pint quantities, or plain SI numbers. ``proof=False``
        leaves out the count of growing modes; by default it is carried out for up to 10,000 cases.

    Raises
    ------
    InputError
        All that is wrong with the inputs.

    Examples
    --------
    >>> import containment as ct
    >>> result = ct.sweep(name="custom", density=1410.0, viscosity=[5.0, 10.0], surface_tension=0.08, cylinder="70 mm",
    ...                   depth="30 mm", frequency="50 Hz", acceleration=["10 g_n", "40 g_n"])
    >>> result.grid("verdict").tolist()
    [['not held', 'held'], ['not held', 'held']]
    """
    study_table = {"proof": inputs.pop("proof")} if "proof" in inputs else {}
    varied: dict[str, Any] = {}
    fixed: dict[str, Any] = {}
    for name, value in inputs.items():
        many = isinstance(value, list | tuple | range) or getattr(value, "ndim", 0) == 1
        if many and name != "table":
            varied[name] = list(value)
        else:
            fixed[name] = value
    if any(INPUTS[name].subject == "grains" for name in inputs if name in INPUTS):
        study_table["kind"] = "grains"
    return study(plan_from({"study": study_table, "fixed": fixed, "vary": varied}))
