"""Rows that could be left out: sides that no plan reaches, and sides implied by the rest.

Each side of an inequality row is released alone, all else kept, and the row value is driven
as far beyond it as the rest allows, which is one linear program. Where it stops short of
the side, no feasible plan reaches that side; where it stops at the side, the rest implies
it. (Telgen 1983, "Identifying redundant constraints and implicit equalities in systems of
linear constraints", Management Science 29, calls these strongly and weakly redundant.)

Sides that no plan reaches can all be left out at once: on the way from a feasible plan to
a point beyond some of them, the first that is met would be met by a feasible plan. Implied
sides can each be left out alone; two equal rows are each implied by the other.
"""

from __future__ import annotations

import enum
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

from lpview.outcomes import Optimal
from lpview.priced import StoppedEarlyError
from lpview.prices.begin import verified_lines
from lpview.prices.intervals import ZERO
from lpview.prices.lines import Lines
from lpview.prices.results import NoPrices
from lpview.run import Claim
from lpview.scaling import NotRepresentableError
from lpview.warm import Box, Vertex, WarmMaker, WarmModel

FAR = 1e-2
"""A side is needed if the row value can go this far beyond it, scaled; no more is asked."""


class Need(enum.Enum):
    """What a side of a row is to the set of feasible plans."""

    UNREACHED = "no feasible plan reaches it"
    """The row value stops short of it, whether it is there or not."""
    IMPLIED = "implied by the other lines"
    """The row value reaches it and could not go beyond it without it."""
    NEEDED = "needed"
    """Without it there would be other plans."""
    NOT_FOUND = "not found"
    """The solver gave no answer that can be used."""


@dataclass(frozen=True)
class RowSide:
    """One side of an inequality row, examined."""

    row: int
    """The row."""
    is_upper: bool
    """Whether it is the upper side, else the lower."""
    side: float
    """Its number."""
    reach: float
    """The greatest row value (the least, for a lower side) without it, cut off a little
    beyond it; nan where it was not found."""
    need: Need
    """What that comes to."""

    @property
    def distance(self) -> float:
        """How far short of the side the row value stops; 0 where it reaches it."""
        short = self.side - self.reach if self.is_upper else self.reach - self.side
        return short if self.need is Need.UNREACHED else 0.0


@dataclass(frozen=True)
class Redundant:
    """The sides that were examined."""

    sides: tuple[RowSide, ...]
    """In the order in which they were examined."""
    asked: int
    """How many were to be examined."""
    stopped: Claim | None
    """What ended the work early; None if nothing did."""

    def having(self, need: Need) -> tuple[RowSide, ...]:
        """The sides with one outcome, in order."""
        return tuple(side for side in self.sides if side.need is need)


def inequality_sides(found: Optimal, rows: Sequence[int] | None = None) -> list[tuple[int, bool]]:
    """Sides of inequality rows, as ``(row, is_upper)``; of all rows unless some are named."""
    lp = found.head.model
    wanted = range(lp.m) if rows is None else rows
    return [
        (i, is_upper)
        for i in wanted
        if not lp.is_equality[i]
        for is_upper in (False, True)
        if np.isfinite((lp.row_upper if is_upper else lp.row_lower)[i])
    ]


def redundant_sides(
    found: Optimal,
    warm: WarmMaker,
    between: Callable[[], None] = lambda: None,
    rows: Sequence[int] | None = None,
) -> Redundant | NoPrices:
    """Examine the sides of inequality rows, one linear program each.

    Parameters
    ----------
    found
        An answer that passed its check.
    between
        Called after each side; may raise `lpview.priced.StoppedEarlyError`, and then what
        is known by that time is returned.
    rows
        Rows to examine; all of them unless given.
    """
    lines = verified_lines(found)
    if isinstance(lines, NoPrices):
        return lines
    questions = inequality_sides(found, rows)
    sides: list[RowSide] = []
    stopped = None
    try:
        examiner = _Examiner(lines, warm)
        for row, is_upper in questions:
            sides.append(examiner.examine(row, is_upper))
            between()
    except NotRepresentableError as error:
        return NoPrices(f"its numbers do not fit the solver's: {error}")
    except StoppedEarlyError as error:
        stopped = error.claim
    return Redundant(tuple(sides), len(questions), stopped)


class _Examiner:
    """All feasible plans as steps from the known one, kept open in a solver."""

    def __init__(self, lines: Lines, warm: WarmMaker) -> None:
        self._lines, self._warm = lines, warm
        self._low = np.minimum(lines.low - lines.value, 0.0)
        self._high = np.maximum(lines.high - lines.value, 0.0)
        self._model: WarmModel | None = None

    def examine(self, row: int, is_upper: bool) -> RowSide:
        """Release one side a little and see how far the row value goes."""
        lines = self._lines
        side = float((lines.high if is_upper else lines.low)[row])
        size = max(1.0, abs(side), float(lines.value_size[row]))
        released = (side - float(lines.value[row])) + (FAR * size if is_upper else -FAR * size)
        step = self._furthest(row, is_upper, released)
        if step is None:
            # Thousands of changes to one factorization can end badly; begin anew.
            self._model = None
            step = self._furthest(row, is_upper, released)
        if step is None:
            return RowSide(row, is_upper, side, float("nan"), Need.NOT_FOUND)
        reach = float(lines.value[row]) + step
        excess = reach - side if is_upper else side - reach
        if excess > ZERO * size:
            return RowSide(row, is_upper, side, reach, Need.NEEDED)
        if excess < -ZERO * size:
            return RowSide(row, is_upper, side, reach, Need.UNREACHED)
        return RowSide(row, is_upper, side, side, Need.IMPLIED)

    def _furthest(self, row: int, is_upper: bool, released: float) -> float | None:
        """How far the row value can go from the known plan, one side released."""
        A, low, high = self._lines.lp.A, self._low[row], self._high[row]
        part = slice(A.indptr[row], A.indptr[row + 1])
        if part.start == part.stop:
            return 0.0
        index, terms = A.indices[part].astype(np.int32), A.data[part]
        one = np.array([row], np.int32)
        ends = (low, released) if is_upper else (released, high)
        model = self._open()
        model.set_rows(one, np.array([ends[0]]), np.array([ends[1]]))
        found = model.least(index, -terms if is_upper else terms)
        model.set_rows(one, np.array([low]), np.array([high]))
        return float(terms @ found.x[index]) if isinstance(found, Vertex) else None

    def _open(self) -> WarmModel:
        if self._model is None:
            low, high, m = self._low, self._high, self._lines.m
            box = Box(low[:m], high[:m], low[m:], high[m:])
            self._model = self._warm(self._lines.lp.A, box)
        return self._model
