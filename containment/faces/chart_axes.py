"""Logarithmic axes in characters: where a value falls, and which values are written beside it."""

import math
from collections.abc import Sequence
from dataclasses import dataclass

__all__ = ["LogAxis"]


@dataclass(frozen=True, slots=True, kw_only=True)
class LogAxis:
    """A logarithmic axis of whole cells.

    Parameters
    ----------
    low, high : float
        Ends, both positive; the centre of the first and of the last cell.
    cells : int
        Number of cells.

    Examples
    --------
    >>> axis = LogAxis(low=1.0, high=100.0, cells=21)
    >>> axis.cell(10.0), axis.cell(1000.0) is None, axis.ticks(least_gap=5)
    (10, True, [(0, '1'), (5, '3'), (10, '10'), (15, '30'), (20, '100')])
    """

    low: float
    high: float
    cells: int

    def cell(self, value: float) -> int | None:
        """Return the cell of a value, or None outside."""
        if not (math.isfinite(value) and value > 0.0):
            return None
        at = round(math.log(value / self.low) / math.log(self.high / self.low) * (self.cells - 1))
        return at if 0 <= at < self.cells else None

    def clipped(self, value: float) -> int:
        """Return the cell of a value, the nearest end outside; one beyond the last for infinity, -1 for 0."""
        if value <= 0.0:
            return -1
        if math.isinf(value):
            return self.cells
        at = math.log(value / self.low) / math.log(self.high / self.low) * (self.cells - 1)
        return int(min(max(round(at), -1), self.cells))

    def value(self, cell: float) -> float:
        """Return the value at the centre of a cell."""
        return self.low * math.exp(math.log(self.high / self.low) * cell / max(self.cells - 1, 1))

    def ticks(self, *, least_gap: int) -> list[tuple[int, str]]:
        """Return cells and texts of round values that lie at least `least_gap` cells apart."""
        decades = range(math.floor(math.log10(self.low)) - 1, math.ceil(math.log10(self.high)) + 1)
        for steps in ((1, 1.5, 2, 3, 4, 5, 6, 8), (1, 2, 3, 5), (1, 2, 5), (1, 3), (1,)):
            found = self._placed([step * 10.0**decade for decade in decades for step in steps])
            if all(b[0] - a[0] >= least_gap for a, b in zip(found, found[1:], strict=False)) and len(found) >= 2:
                return found
        return self._thinned(self._placed([10.0**decade for decade in decades]), least_gap)

    def _placed(self, values: Sequence[float]) -> list[tuple[int, str]]:
        return [(cell, f"{value:.6g}") for value in values if (cell := self.cell(value)) is not None]

    @staticmethod
    def _thinned(ticks: list[tuple[int, str]], least_gap: int) -> list[tuple[int, str]]:
        kept: list[tuple[int, str]] = []
        for tick in ticks:
            if not kept or tick[0] - kept[-1][0] >= least_gap:
                kept.append(tick)
        return kept
