"""A block of cases, worked on at once: cases that share all but the liquid and the drive point go through as arrays."""

from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any, Final

import numpy as np
import numpy.typing as npt

from containment.errors import ContainmentError
from containment.given.waveforms import PURE_SINE
from containment.judgement.case import Case, allowance
from containment.judgement.verdict import _case as checked_case
from containment.studies.building import drive_of, liquid_of, margin_of, surroundings_of, vessel_of
from containment.studies.edge_values import EdgeValues, edges_in_parts
from containment.studies.inputs import SIZES, record_key
from containment.studies.lines import lines_of
from containment.studies.plan import COSTLY_RESPONSE, Plan
from containment.studies.points import Judged, judged_points
from containment.studies.sampling import Cases, cases_of
from containment.studies.single import judged_alone, message_of

__all__ = ["Block", "evaluated_block"]

Real = npt.NDArray[np.float64]

_OF_THE_LIQUID: Final = ("name", "temperature", "density", "viscosity", "surface_tension")
_OF_THE_POINT: Final = ("frequency", *SIZES)


@dataclass(slots=True)
class Block:
    """What came out of a block: a finished line of text for each case, and counts of the answers.

    Attributes
    ----------
    start : int
        Number of the first case.
    lines : bytes
        JSON lines, in the order of the cases.
    counts : dict
        Cases by verdict; those with an error under ``error``, those that are held without proof under ``unproven``.
    """

    start: int
    lines: bytes
    counts: dict[str, int] = field(default_factory=dict)


def evaluated_block(plan: Plan, start: int, stop: int) -> Block:
    """Evaluate the cases of a plan from number `start` up to `stop`.

    It depends on its arguments alone, so that it gives the same bytes wherever and whenever it runs with the same
    versions of the software.
    """
    cases = cases_of(plan, start, stop)
    columns: dict[str, list[Any]] = {key: [None] * len(cases) for key in plan.responses}
    errors: list[str | None] = [None] * len(cases)
    arrays = plan.question == "operating point" and COSTLY_RESPONSE not in plan.responses
    for where in _groups(cases) if arrays else [np.arange(len(cases))]:
        if not arrays or not _as_arrays(plan, cases, where, columns, errors):
            _alone(plan, cases, where, columns, errors)
    for i, error in enumerate(errors):
        if error is not None:
            for key in plan.responses:
                columns[key][i] = None
    names = {record_key(name): column for name, column in cases.columns.items()}
    return Block(start, lines_of(start, names, columns, errors), _counts(columns, errors))


def _alone(
    plan: Plan, cases: Cases, where: npt.NDArray[np.intp], columns: dict[str, list[Any]], errors: list[str | None]
) -> None:
    """Judge cases one by one."""
    for i in where.tolist():
        found, errors[i] = judged_alone(plan, cases.inputs(i))
        for key in plan.responses:
            columns[key][i] = found.get(key)


def _counts(columns: dict[str, list[Any]], errors: Sequence[str | None]) -> dict[str, int]:
    counts = {"held": 0, "marginal": 0, "not held": 0, "error": 0, "unproven": 0}
    for verdict in columns["verdict"]:
        if verdict is not None:
            counts[verdict] += 1
    counts["error"] = sum(error is not None for error in errors)
    if "proven" in columns:
        pairs = zip(columns["verdict"], columns["proven"], strict=True)
        counts["unproven"] = sum(verdict == "held" and not proven for verdict, proven in pairs)
    return counts


def _groups(cases: Cases) -> list[npt.NDArray[np.intp]]:
    """Return cases that share all inputs but those of the liquid and of the drive point."""
    apart = [name for name in cases.columns if name not in _OF_THE_LIQUID + _OF_THE_POINT]
    return _equal(cases, apart)


def _equal(cases: Cases, names: Sequence[str]) -> list[npt.NDArray[np.intp]]:
    """Return the cases that agree in some inputs, in the order of their first."""
    if not names:
        return [np.arange(len(cases))]
    found: dict[tuple[Any, ...], list[int]] = {}
    for i, key in enumerate(zip(*(cases.columns[name] for name in names), strict=True)):
        found.setdefault(key, []).append(i)
    return [np.array(where) for where in found.values()]


def _as_arrays(
    plan: Plan, cases: Cases, where: npt.NDArray[np.intp], columns: dict[str, list[Any]], errors: list[str | None]
) -> bool:
    """Judge cases that share their vessel and surroundings as arrays; return whether that was possible."""
    common = cases.inputs(int(where[0]))
    if "second_harmonic" in common or "crank_ratio" in common or "cushion" in common or "rheology" in common:
        return False
    if "solids" in common or common.get("contact_line") == "pinned":
        return False
    try:
        vessel, drive, around = vessel_of(common), drive_of(common), surroundings_of(common)
        bear = allowance(
            depth=vessel.depth, dwell=common.get("dwell"), unevenness=common.get("unevenness"),
            amplification=common.get("amplification"),
        )  # fmt: skip
    except ContainmentError as error:
        _fail(errors, where, error)
        return True
    liquids: list[Case] = []
    which = np.full(len(cases), -1)
    for same in _equal(cases, [name for name in cases.columns if name in _OF_THE_LIQUID]):
        mine = np.intersect1d(same, where, assume_unique=True)
        if not len(mine):
            continue
        try:
            case = checked_case(liquid_of(cases.inputs(int(mine[0]))), vessel, bear, drive, around, PURE_SINE)
        except ContainmentError as error:
            _fail(errors, mine, error)
            continue
        if case.liquid.rheology is not None:  # a table entry can be viscoelastic
            _alone(plan, cases, mine, columns, errors)
            continue
        which[mine] = len(liquids)
        liquids.append(case)
    some = where[which[where] >= 0]
    f, a = _drive_points(cases, some, common)
    bound = liquids[0].amplitude_bound if liquids else 0.0
    level = a / (2.0 * np.pi * f) ** 2
    for i in np.flatnonzero(level > bound * (1.0 + 1e-9)):
        errors[some[i]] = (
            f"motion: amplitude {1e3 * level[i]:.4g} mm (zero to peak) is beyond the searched range; it must be at most "
            f"{1e3 * bound:g} mm"
        )
    good = np.array([errors[i] is None for i in some], dtype=bool)
    some, f, a = some[good], f[good], a[good]
    if not len(some):
        return True
    for at, edges in edges_in_parts(liquids, which[some], f, a):
        if isinstance(edges, Exception):
            _fail(errors, some[at], edges)
            continue
        judged = judged_points(
            liquids, which[some[at]], f[at], a[at], edges, drive=drive, factor=margin_of(common), proof=plan.proven
        )
        _put(plan, columns, errors, some[at], judged, edges)
    return True


def _put(
    plan: Plan,
    columns: dict[str, list[Any]],
    errors: list[str | None],
    where: npt.NDArray[np.intp],
    judged: Judged,
    edges: EdgeValues,
) -> None:
    out: dict[str, Sequence[Any]] = {
        "verdict": judged.answer.tolist(),
        "proven": judged.proven.tolist(),
        "binding": judged.binding.tolist(),
        "margin": judged.margin.tolist(),
        "lower_acceleration_m_s2": edges.lower.tolist(),
        "upper_acceleration_m_s2": edges.upper.tolist(),
    }
    numbers = where.tolist()
    for key in plan.responses:
        column = columns[key]
        for i, value in zip(numbers, out[key], strict=True):
            column[i] = value
    for i, message in zip(numbers, judged.error, strict=True):
        if message is not None:
            errors[i] = message


def _fail(errors: list[str | None], where: npt.NDArray[np.intp], error: Exception) -> None:
    for i in where:
        errors[i] = message_of(error)


def _drive_points(cases: Cases, where: npt.NDArray[np.intp], common: dict[str, Any]) -> tuple[Real, Real]:
    """Return frequency (Hz) and peak acceleration (m/s^2) of cases whose motion is a sine, as `Motion` has them."""

    def column(name: str) -> Real:
        if name in cases.columns:
            return np.asarray(cases.columns[name], np.float64)[where]
        return np.full(len(where), float(common[name]))

    f = column("frequency")
    w = 2.0 * np.pi * f
    name = next(name for name in SIZES if name in common)
    factors: dict[str, Real] = {"acceleration": np.ones(1), "amplitude": w * w, "stroke": 0.5 * w * w, "velocity": w}
    return f, column(name) * factors[name]
