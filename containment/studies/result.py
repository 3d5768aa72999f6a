"""What a study gives back: records and arrays, counts, probabilities and sensitivities."""

import json
import math
from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np
import numpy.typing as npt

from containment.errors import InputError
from containment.studies.inputs import record_key
from containment.studies.plan import Plan
from containment.studies.records import read_lines
from containment.studies.statistics import HoldingProbability, Sensitivity, holding_probability, sensitivity

__all__ = ["StudyResult"]


@dataclass(frozen=True, kw_only=True)
class StudyResult:
    """The result of a study.

    Attributes
    ----------
    plan : Plan
        What was asked.
    versions : dict
        Of the software and the property tables.
    counts : dict
        Cases by verdict: ``held``, ``marginal``, ``not held``, ``error``, and those of the held ones that are ``unproven``.
    path : Path or None
        The file of the records; None where they are kept in memory.
    resumed : int
        Cases that were there already when the study went on.
    repaired : int
        Bytes of a torn end of the file that were cut off.

    Examples
    --------
    >>> import containment as ct
    >>> result = ct.sweep(name="custom", density=1410.0, viscosity=10.0, surface_tension=0.08, cylinder="70 mm",
    ...                   depth="30 mm", frequency=["50 Hz"], acceleration=["10 g_n", "40 g_n"])
    >>> result["verdict"].tolist()
    ['not held', 'held']
    """

    plan: Plan
    versions: Mapping[str, str]
    counts: Mapping[str, int]
    path: Path | None = None
    resumed: int = 0
    repaired: int = 0
    _lines: tuple[bytes, ...] = field(default=(), repr=False)

    def __len__(self) -> int:
        """Return the number of cases."""
        return self.plan.cases

    def __getitem__(self, key: str) -> npt.NDArray[Any]:
        """Return one column as an array, one value a case; see `columns`."""
        columns = self.columns()
        if key not in columns:
            raise InputError(f"column: {key!r} is not there; expected one of {', '.join(columns)}")
        return columns[key]

    @property
    def records(self) -> Iterator[dict[str, Any]]:
        """Records one after the other, in the order of the cases: what `pandas.DataFrame` takes as it is."""
        return (json.loads(line) for line in self.lines())

    def lines(self) -> Iterator[bytes]:
        """Yield the records as JSON lines."""
        if self.path is not None:
            found = read_lines(self.path)
            next(found)
            yield from found
            return
        for block in self._lines:
            yield from block.splitlines(keepends=True)

    @property
    def keys(self) -> tuple[str, ...]:
        """Keys of a record; ``error`` is absent in the records of cases without one."""
        return ("i", *(record_key(name) for name in self.plan.varying), *self.plan.responses, "error")

    def columns(self) -> dict[str, npt.NDArray[Any]]:
        """Return the records as arrays: numbers as float with not-a-number for null, the rest as objects.

        The dictionary is what `pandas.DataFrame` and `polars.DataFrame` take as it is.
        """
        keys = self.keys
        rows: dict[str, list[Any]] = {key: [] for key in keys}
        for record in self.records:
            for key in keys:
                rows[key].append(record.get(key))
        return {key: _array(key, values) for key, values in rows.items()}

    def grid(self, key: str) -> npt.NDArray[Any]:
        """Return a column in the shape of the plan: one dimension an axis, and the draws last where there are any."""
        return self[key].reshape(self.plan.shape)

    def points(self) -> list[dict[str, Any]]:
        """Return the inputs of each grid point that the draws are taken at, by record key."""
        from containment.studies.sampling import cases_of

        found = []
        names = [name for axis in self.plan.axes for name in axis.values]
        for start in range(0, self.plan.cases, self.plan.draws):
            inputs = cases_of(self.plan, start, start + 1).inputs(0)
            found.append({record_key(name): inputs[name] for name in names})
        return found

    def holding_probabilities(self) -> list[HoldingProbability]:
        """Return the probability of holding at each grid point; empty without uncertain inputs.

        A draw counts as held only with the verdict held: marginal, unproven and failed ones count as not held. Of a
        ``sensitivity`` plan the draws of both matrices count, the mixed ones do not: these are not independent of them.
        """
        if not self.plan.uncertain:
            return []
        held = self._held().reshape(-1, self.plan.draws)
        if self.plan.method == "sensitivity":
            held = held[:, : 2 * self.plan.count]
        return [holding_probability(int(row.sum()), len(row)) for row in held]

    def sensitivities(self) -> list[tuple[Sensitivity | None, Sensitivity | None]]:
        """Return Sobol' indices at each grid point: of holding (1 or 0), and of the logarithm of the margin.

        None where a response does not vary, or, for the margin, is not known for every draw. Empty without a
        ``sensitivity`` plan.
        """
        if self.plan.method != "sensitivity":
            return []
        names, draws = tuple(self.plan.uncertain), self.plan.draws
        held = self._held().astype(float).reshape(-1, draws)
        margins = np.full(held.shape, np.nan)
        if "margin" in self.plan.responses:
            with np.errstate(divide="ignore", invalid="ignore"):
                margins = np.log(self["margin"].reshape(-1, draws))
        return [
            (sensitivity("held", h, names, seed=self.plan.seed), sensitivity("log margin", m, names, seed=self.plan.seed))
            for h, m in zip(held, margins, strict=True)
        ]

    def _held(self) -> npt.NDArray[np.bool_]:
        """Return which cases are held; where a proof was asked for, only with it."""
        found = np.zeros(self.plan.cases, dtype=bool)
        proof = "proven" in self.plan.responses and self.plan.proven
        for record in self.records:
            found[record["i"]] = record["verdict"] == "held" and (not proof or record["proven"] is True)
        return found

    @property
    def proof_left_out(self) -> bool:
        """Whether held cases are held by the edges of the window alone, without the count of growing modes."""
        return self.plan.question == "operating point" and not self.plan.proven

    def to_dict(self) -> dict[str, Any]:
        """Return the summary as plain JSON types: the plan, the counts, and the statistics where there are any."""
        chances = self.holding_probabilities()
        indices = self.sensitivities()
        return {
            "schema": 1,
            "plan": self.plan.to_dict(),
            "fingerprint": self.plan.fingerprint,
            "versions": dict(self.versions),
            "cases": self.plan.cases,
            "resumed": self.resumed,
            "counts": dict(self.counts),
            "proof": None if self.plan.question == "bed" else not self.proof_left_out,
            "points": [
                {
                    "inputs": inputs,
                    "holding_probability": chance.to_dict(),
                    "sensitivity": [index.to_dict() for index in indices[i] if index] if indices else [],
                }
                for i, (inputs, chance) in enumerate(zip(self.points() if chances else [], chances, strict=True))
            ],
        }


def _array(key: str, values: list[Any]) -> npt.NDArray[Any]:
    if key == "i":
        return np.array(values, dtype=np.int64)
    if any(isinstance(value, str | bool | list) for value in values) or all(value is None for value in values):
        found = np.empty(len(values), dtype=object)
        found[:] = values
        return found
    return np.array([math.nan if value is None else value for value in values], dtype=np.float64)
