"""One number of a model, and the model with that number moved."""

from __future__ import annotations

import enum
import math
from dataclasses import dataclass, replace

from lpview.model import LinearProgram, Vector, frozen_odd
from lpview.outcomes import Optimal


class Part(enum.Enum):
    """Which number of a line moves."""

    LOWER = "lower"
    """Its lower side or bound."""
    UPPER = "upper"
    """Its upper side or bound."""
    BOTH = "both"
    """Both together: the right-hand side of an equality, or a fixed value."""
    COST = "cost"
    """The cost of a column."""


@dataclass(frozen=True)
class Number:
    """One number of a model."""

    line: int
    """Row, or column after the rows, as in `lpview.kkt`."""
    part: Part
    """Which of its numbers."""

    def of(self, lp: LinearProgram) -> float:
        """The number as it stands; infinite where there is no such side or bound."""
        name, index = self._places(lp)[0]
        return float(getattr(lp, name)[index])

    def moved(self, lp: LinearProgram, at: float) -> LinearProgram:
        """The model with this number put at a double.

        Raises `lpview.model.ModelError` where that puts a lower end above its upper.
        """
        odd = {name: dict(values) for name, values in lp.odd.items()}
        changed: dict[str, Vector] = {}
        for name, index in self._places(lp):
            changed[name] = getattr(lp, name).copy()
            changed[name][index] = at
            # The exact value of the number that stood there says nothing any more.
            odd.get(name, {}).pop(index, None)
        return replace(lp, **changed, odd=frozen_odd(odd))  # type: ignore[arg-type]

    def other_end(self, lp: LinearProgram) -> float:
        """The end of the same line that this number cannot pass; infinite without one."""
        if self.part is Part.LOWER:
            return Number(self.line, Part.UPPER).of(lp)
        if self.part is Part.UPPER:
            return Number(self.line, Part.LOWER).of(lp)
        return math.inf

    def _places(self, lp: LinearProgram) -> list[tuple[str, int]]:
        """Fields of the model, and the index there."""
        if self.part is Part.COST:
            return [("c", self.line - lp.m)]
        prefix, index = ("row_", self.line) if self.line < lp.m else ("", self.line - lp.m)
        parts = ("lower", "upper") if self.part is Part.BOTH else (self.part.value,)
        return [(prefix + part, index) for part in parts]


def side_of(found: Optimal, row: int) -> Number | None:
    """The side of a row that is active, else the nearest; None for a row without sides."""
    if not found.marks.paired[row]:
        return Number(row, Part.BOTH)
    rows = found.measurement.rows
    below, above = float(rows.below[row]), float(rows.above[row])
    if math.isinf(below) and math.isinf(above):
        return None
    if found.marks.priced[row]:
        return Number(row, Part.LOWER if rows.named_lower[row] else Part.UPPER)
    return Number(row, Part.LOWER if below <= above else Part.UPPER)


def bound_of(lp: LinearProgram, column: int, is_upper: bool) -> Number:
    """One bound of a column, or both together where they meet."""
    if lp.is_fixed[column]:
        return Number(lp.m + column, Part.BOTH)
    return Number(lp.m + column, Part.UPPER if is_upper else Part.LOWER)
