"""The screen of a study: counts, probabilities of holding, and what matters most."""

from typing import TYPE_CHECKING, Any

from containment.faces.screen import Screen, quantity_text
from containment.studies.inputs import INPUTS, record_key
from containment.studies.result import StudyResult

if TYPE_CHECKING:
    from containment.studies.statistics import HoldingProbability, Sensitivity

__all__ = ["study_screen"]

_MOST_ROWS = 40
_UNITS = {"length": "m", "acceleration": "m/s^2", "pressure": "Pa", "angle": "rad", "temperature": "K", "frequency": "Hz",
          "viscosity": "Pa s", "density": "kg/m^3", "surface tension": "N/m", "velocity": "m/s", "time": "s", "force": "N",
          "mass": "kg"}  # fmt: skip


def study_screen(result: StudyResult, *, plain: bool) -> Screen:
    """Return the screen of a study."""
    screen = Screen(plain=plain)
    plan, counts = result.plan, result.counts
    cases = plan.cases
    screen.heading(plan.title or f"study of {plan.question}s")
    asked = {"operating point": "a drive point", "minimum drive": "whether any drive within the limits holds", "bed": "a bed"}
    rows = [("asked", asked[plan.question]), ("cases", str(cases)), ("varied", _names(v for x in plan.axes for v in x.values))]
    if plan.uncertain:
        rows.append(("uncertain", _names(plan.uncertain)))
        rows.append(("draws", f"{plan.count} by {plan.method}, seed {plan.seed}"))
    if result.path is not None:
        rows.append(("records", str(result.path)))
    if result.resumed:
        rows.append(("went on from", f"{result.resumed} cases that were there"))
    if result.repaired:
        rows.append(("mended", f"a torn end of {result.repaired} bytes was cut off and evaluated again"))
    screen.rows(rows)
    screen.heading("Verdicts")
    held = "held by the edges, not proven" if result.proof_left_out else "held"
    screen.rows(
        [
            (held, str(counts["held"]), _share(counts["held"], cases)),
            ("marginal or not proven", str(counts["marginal"]), _share(counts["marginal"], cases)),
            ("not held", str(counts["not held"]), _share(counts["not held"], cases)),
            ("failed: no verdict", str(counts["error"]), _share(counts["error"], cases)),
        ],
        right=(1, 2),
    )
    if chances := result.holding_probabilities():
        _chances(screen, result, chances)
    if indices := result.sensitivities():
        _indices(screen, result, indices)
    screen.heading("Mind")
    screen.listing(_notes(result))
    return screen


def _names(names: Any) -> str:
    return ", ".join(name.replace("_", " ") for name in names) or "nothing"


def _share(count: int, cases: int) -> str:
    return f"{100.0 * count / cases:.1f} %"


def _chances(screen: Screen, result: StudyResult, chances: "list[HoldingProbability]") -> None:
    screen.heading("Probability of holding")
    rows = [
        (
            _point_text(inputs), f"{100.0 * chance.probability:.1f} %",
            f"{100.0 * chance.low:.1f} to {100.0 * chance.high:.1f} %", f"{chance.held} of {chance.draws}",
        )
        for inputs, chance in zip(result.points(), chances, strict=True)
    ]  # fmt: skip
    screen.rows(rows[:_MOST_ROWS], right=(1, 2, 3))
    if len(rows) > _MOST_ROWS:
        screen.text(f"{len(rows) - _MOST_ROWS} more points: --json has them all")
    screen.text(f"Interval of {100.0 * chances[0].confidence:.0f} % confidence (Clopper and Pearson 1934).")


def _indices(screen: Screen, result: StudyResult, indices: "list[tuple[Sensitivity | None, Sensitivity | None]]") -> None:
    screen.heading("What matters most (Sobol' indices)")
    for inputs, pair in list(zip(result.points(), indices, strict=True))[:_MOST_ROWS]:
        for name, found in zip(("whether it is held", "margin"), pair, strict=True):
            where = f" at {_point_text(inputs)}" if inputs else ""
            if found is None:
                screen.text(f"{name}{where}: does not vary, or is not known for every draw")
                continue
            screen.text(f"{name}{where}:")
            low = dict(zip(found.inputs, zip(found.total_low, found.total_high, strict=True), strict=True))
            screen.rows(
                [
                    (
                        key.replace("_", " "), f"total {total:.2f}", f"({low[key][0]:.2f} to {low[key][1]:.2f})",
                        f"by itself {first:.2f}",
                    )
                    for key, first, total in found.ranked()
                ],
                right=(1, 2, 3),
            )  # fmt: skip


def _point_text(inputs: dict[str, Any]) -> str:
    """Return the inputs of a grid point in the units of the trade."""
    by_key = {record_key(name): name for name in INPUTS}
    parts = []
    for key, value in inputs.items():
        name = by_key[key]
        if not isinstance(value, float):
            parts.append(str(value))
        elif INPUTS[name].kind == "temperature":
            parts.append(f"{value - 273.15:.4g} degC")
        else:
            parts.append(quantity_text(value, _UNITS.get(INPUTS[name].kind, ""), 4))
    return ", ".join(parts) or "all draws"


def _notes(result: StudyResult) -> list[str]:
    plan, counts = result.plan, result.counts
    notes = ["marginal, unproven and failed cases never count as held"]
    if result.proof_left_out:
        notes.append(
            "the proof was left out (proof = false, or more than 10000 cases): held means between the edges with all margins; "
            "prove the cases that you rely on with containment liquid"
        )
    if plan.uncertain:
        if plan.fixed.get("margin") != 1.0:
            notes.append("held includes the margin to the edges on top of what is drawn; margin = 1 in the plan drops it")
        if plan.method != "random":
            notes.append(f"the interval is that of independent draws; for {plan.method} draws it is an estimate")
    if counts["error"]:
        notes.append("the records of failed cases say under error what was wrong")
    notes.append("a verdict is a feasibility check, not an approval: whatever it says, keep people out from below")
    return notes
