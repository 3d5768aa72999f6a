"""``containment study``: a parameter study from a plan."""

import argparse
import sys
from collections.abc import Callable
from typing import TYPE_CHECKING, Any

from containment.errors import InputError

if TYPE_CHECKING:
    from containment.studies.plan import Plan
    from containment.studies.result import StudyResult

__all__ = ["add_arguments", "run"]

_LARGEST_IN_MEMORY = 200_000


def add_arguments(parser: argparse.ArgumentParser) -> None:
    """Add the sub-command's options."""
    parser.add_argument("plan", metavar="PLAN.toml", help="what is fixed, varied and uncertain")
    group = parser.add_argument_group("records")
    group.add_argument("--out", metavar="FILE.jsonl", help="appended to as results come; an existing one goes on")
    group.add_argument("--export", metavar="FILE.csv|parquet", help="all records as a table, at the end")
    group = parser.add_argument_group("execution")
    group.add_argument("--workers", metavar="N", help="processes; default one for each core")
    group.add_argument("--scheduler", metavar="ADDRESS", help="of a dask.distributed cluster, such as tcp://host:8786")
    group.add_argument("--check", action="store_true", help="check the plan, say how many cases it has, and stop")
    group = parser.add_argument_group("output")
    group.add_argument("--json", action="store_true", help="one JSON object, SI units, nothing else")
    group.add_argument("--plain", action="store_true", help="no colour, no boxes, no progress")


def run(options: argparse.Namespace) -> int:
    """Carry out the study and print its summary; return the exit status."""
    import json

    from containment.studies.plan_reading import read_plan
    from containment.studies.running import usable_cores

    workers = _workers(options, usable_cores())
    plan = read_plan(options.plan)
    if options.check:
        return _checked(plan, as_json=options.json)
    if options.export is not None:
        from containment.studies.export import table_format

        table_format(options.export)  # before hours of work, not after
    if options.out is None and plan.cases > _LARGEST_IN_MEMORY:
        raise InputError(f"--out: missing; {plan.cases} cases are too many to keep in memory, at most {_LARGEST_IN_MEMORY}")
    result = _carried_out(plan, options, workers)
    if options.export is not None:
        from containment.studies.export import export

        export(result, options.export)
    if options.json:
        print(json.dumps(result.to_dict(), allow_nan=False, ensure_ascii=False, indent=2))
    else:
        from containment.faces.screen_study import study_screen

        study_screen(result, plain=options.plain).show()
    return 3 if result.counts["error"] else 0


def _workers(options: argparse.Namespace, cores: int) -> int:
    if options.workers is None:
        return cores
    if options.scheduler is not None:
        raise InputError("--workers: given with --scheduler; the cluster has its own workers: leave one of the two out")
    if not (options.workers.isascii() and options.workers.isdigit() and 1 <= int(options.workers) <= 1024):
        raise InputError(f"--workers: {options.workers!r} is not allowed; expected a whole number from 1 to 1024")
    return int(options.workers)


def _checked(plan: "Plan", *, as_json: bool) -> int:
    import json

    if as_json:
        print(json.dumps({"schema": 1, "plan": plan.to_dict(), "fingerprint": plan.fingerprint}, allow_nan=False, indent=2))
    else:
        proof = "" if plan.question == "bed" else ", proven one by one" if plan.proven else ", without proof (proof = false)"
        print(f"The plan has no faults: {plan.cases} cases of {plan.question}{proof}.")
    return 0


def _carried_out(plan: "Plan", options: argparse.Namespace, workers: int) -> "StudyResult":
    from containment.studies.study import carried_out

    arguments: dict[str, Any] = {
        "out": options.out, "executor": None, "workers": workers, "scheduler": options.scheduler,
    }  # fmt: skip
    if options.json or options.plain or not sys.stderr.isatty():
        return carried_out(plan, progress=lambda done, of: None, **arguments)
    return _with_progress(lambda told: carried_out(plan, progress=told, **arguments), plan)


def _with_progress(work: Callable[[Callable[[int, int], None]], "StudyResult"], plan: "Plan") -> "StudyResult":
    """Show rate and time left on the terminal's error stream, so that the output stays clean."""
    from rich.console import Console
    from rich.progress import BarColumn, MofNCompleteColumn, Progress, TextColumn, TimeRemainingColumn

    with Progress(
        TextColumn("cases"), BarColumn(), MofNCompleteColumn(), TextColumn("{task.fields[rate]}"), TimeRemainingColumn(),
        console=Console(stderr=True, highlight=False, markup=False), transient=True,
    ) as bar:  # fmt: skip
        task = bar.add_task("", total=plan.cases, rate="")

        def told(done: int, of: int) -> None:
            speed = bar.tasks[0].speed
            bar.update(task, completed=done, total=of, rate=f"{speed:.3g} a second" if speed else "")

        return work(told)
