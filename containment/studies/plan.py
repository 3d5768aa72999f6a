"""The plan of a study: what is fixed, varied and uncertain, and how many cases that makes."""

import hashlib
import json
import math
from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any, Final

from containment.studies.distributions import Distribution
from containment.studies.inputs import INPUTS, SIZES

__all__ = ["METHODS", "RESPONSES", "Axis", "Plan"]

METHODS: Final = ("random", "latin hypercube", "sobol", "sensitivity")
"""How uncertain inputs are drawn; ``sensitivity`` draws the two matrices that Sobol' indices need."""

RESPONSES: Final[dict[str, tuple[str, ...]]] = {
    # question: keys of what comes out, in the order of a record
    "operating point": (
        "verdict", "proven", "binding", "margin", "lower_acceleration_m_s2", "upper_acceleration_m_s2", "growth_rate_1_s",
    ),
    "minimum drive": (
        "verdict", "proven", "reason", "minimum_acceleration_m_s2", "minimum_acceleration_at_Hz", "minimum_frequency_Hz",
        "recommended_frequency_Hz", "recommended_acceleration_m_s2", "margin", "unshaken_growth_rate_1_s",
    ),
    "bed": (
        "verdict", "binding", "holding_time_s", "largest_gamma", "smallest_gamma_to_flow", "largest_outlet_m",
    ),
}  # fmt: skip

COSTLY_RESPONSE: Final = "growth_rate_1_s"
"""Left out unless it is asked for: it takes longer than all others together."""

_PROOF_BY_DEFAULT_UP_TO: Final = 10_000


@dataclass(frozen=True, slots=True)
class Axis:
    """Inputs that are varied together: one axis of the grid.

    Attributes
    ----------
    values : dict
        Values of each input, all of one length.
    """

    values: Mapping[str, tuple[Any, ...]]

    def __len__(self) -> int:
        """Return the number of steps."""
        return len(next(iter(self.values.values())))

    @property
    def depth_of_loop(self) -> int:
        """Cost of a step: that of its costliest input, which is the one of the outermost loop."""
        return min(INPUTS[name].depth_of_loop for name in self.values)


@dataclass(frozen=True, slots=True, kw_only=True)
class Plan:
    """A plan that has been checked, in SI.

    Cases are numbered from 0: the grid of all axes, the last axis fastest, and within each grid point the draws of the
    uncertain inputs, the same ones at every point.

    Attributes
    ----------
    subject : {"liquid", "grains"}
        What is judged.
    title : str
        For the screen.
    fixed : dict
        Inputs that stay as they are.
    axes : tuple of Axis
        In the order of the loops: dear changes outside, the drive point innermost.
    uncertain : dict
        Distributions by the input they belong to.
    method : str
        One of `METHODS`; empty without uncertain inputs.
    count : int
        Draws; for ``sensitivity`` the rows of each of the two matrices.
    seed : int
        Of the draws.
    proof : bool or None
        Whether every case that is inside its window is proven by the count of growing modes; None to decide by the number
        of cases.
    responses : tuple of str
        Keys of what a record holds of what comes out.
    """

    subject: str
    title: str = ""
    fixed: Mapping[str, Any] = field(default_factory=dict)
    axes: tuple[Axis, ...] = ()
    uncertain: Mapping[str, Distribution] = field(default_factory=dict)
    method: str = ""
    count: int = 0
    seed: int = 1
    proof: bool | None = None
    responses: tuple[str, ...] = ()

    @property
    def question(self) -> str:
        """What is asked of each case, a key of `RESPONSES`."""
        if self.subject == "grains":
            return "bed"
        return "operating point" if "frequency" in self.names else "minimum drive"

    @property
    def names(self) -> frozenset[str]:
        """All inputs that are given."""
        return frozenset((*self.fixed, *self.varying))

    @property
    def varying(self) -> tuple[str, ...]:
        """Inputs that differ between cases, in the order of the loops."""
        return (*(name for axis in self.axes for name in axis.values), *self.uncertain)

    @property
    def shape(self) -> tuple[int, ...]:
        """Steps of each axis, then the draws where there are any."""
        return (*(len(axis) for axis in self.axes), *((self.draws,) if self.uncertain else ()))

    @property
    def draws(self) -> int:
        """Draws of the uncertain inputs at each grid point; 1 without any."""
        if not self.uncertain:
            return 1
        return self.count * (len(self.uncertain) + 2) if self.method == "sensitivity" else self.count

    @property
    def cases(self) -> int:
        """Number of cases."""
        return math.prod(self.shape)

    @property
    def proven(self) -> bool:
        """Whether the count of growing modes is carried out."""
        return self.cases <= _PROOF_BY_DEFAULT_UP_TO if self.proof is None else self.proof

    @property
    def size_of_motion(self) -> str | None:
        """Which measure of the motion's size is given."""
        return next((name for name in SIZES if name in self.names), None)

    @property
    def block(self) -> int:
        """Cases that are worked on at once.

        It depends on the plan alone: results of a block may differ in the last digits from those of other blocks, so the
        same plan always makes the same blocks, on one core or on a hundred.
        """
        if self.subject == "grains":
            return 32
        if self.question == "minimum drive":
            return 4
        if self.proven or COSTLY_RESPONSE in self.responses:
            return 32
        inner = math.prod(len(axis) for axis in self.axes if axis.depth_of_loop >= INPUTS["frequency"].depth_of_loop)
        if self.uncertain or inner < 256:
            return 256
        sizes = math.prod(len(axis) for axis in self.axes if axis.depth_of_loop > INPUTS["frequency"].depth_of_loop)
        return sizes * max(1, 16384 // sizes) if sizes <= 32768 else 16384

    def blocks(self) -> list[tuple[int, int]]:
        """Return the first case of each block and the one after its last."""
        size = self.block
        return [(start, min(start + size, self.cases)) for start in range(0, self.cases, size)]

    def to_dict(self) -> dict[str, Any]:
        """Return the plan as plain JSON types, SI: plans that ask for the same have the same dictionary."""
        return {
            "subject": self.subject,
            "question": self.question,
            "title": self.title,
            "fixed": {name: _plain(value) for name, value in sorted(self.fixed.items())},
            "axes": [{name: [_plain(v) for v in values] for name, values in axis.values.items()} for axis in self.axes],
            "uncertain": {name: drawn.to_dict() for name, drawn in self.uncertain.items()},
            "method": self.method,
            "count": self.count,
            "seed": self.seed if self.uncertain else None,
            "proof": self.proven,
            "responses": list(self.responses),
            "cases": self.cases,
        }

    @property
    def fingerprint(self) -> str:
        """What tells whether two plans are the same; the title does not count."""
        text = json.dumps({**self.to_dict(), "title": ""}, sort_keys=True, allow_nan=False)
        return hashlib.sha256(text.encode()).hexdigest()[:16]


def _plain(value: Any) -> Any:
    return list(value) if isinstance(value, tuple) else value
