"""What the screen knows of the prices so far, and the words for what it does not know.

Filled by the messages of `lpview.screen.pricing`; numbers and words only, no widgets.
"""

from __future__ import annotations

import enum
import math
from collections.abc import Mapping

import numpy as np

from lpview.marks import Mask
from lpview.outcomes import Optimal
from lpview.prices import LinePrices, Move, Then
from lpview.report.numbers import fitted_number
from lpview.report.prices import active

UNKNOWN = "."
"""Stands where a number is not known yet."""

NOT_UNIQUE = "*"
"""Stands after a price that is not unique."""

NO_PLAN, NO_LIMIT = "no plan", "no limit"
"""Stand for the rate of a move that leaves no plan, or no limit, at once."""

UP, DOWN, UP_FAR, DOWN_FAR = range(4)
"""What is shown of the move of a line's active side or bound, each way: rate, distance."""

Result = LinePrices | str
"""What was found about a line, or in words why nothing was."""


class State(enum.Enum):
    """How far the work is."""

    BEGINNING = "beginning"
    """Nothing is known yet."""
    EXAMINING = "examining"
    """It is known which prices are not unique; line after line is examined."""
    STOPPED = "stopped"
    """The person stopped it; what was found stays."""
    DONE = "done"
    """Every line was examined."""
    NONE = "none"
    """There are no prices to examine; `PriceBook.reason` says why."""


class PriceBook:
    """Everything found about the prices of one answer, line by line."""

    def __init__(self, found: Optimal) -> None:
        self._found = found
        size = found.marks.room.size
        self.state = State.BEGINNING if size else State.DONE
        self.reason = ""
        """Why there are no prices, with `State.NONE`."""
        self.not_unique: Mask = np.zeros(size, dtype=bool)
        """Lines whose price is not unique, as far as known; shape ``(m + n,)``."""
        self.numbers = np.full((4, size), np.nan)
        """What to sort by, one row for each of `UP` to `DOWN_FAR`; nan where not known."""
        self._is_begun = False
        self._lines: dict[int, LinePrices] = {}
        self._failed: dict[int, str] = {}

    def begin(self, not_unique: Mask) -> None:
        """It is known which prices are not unique; lines that were examined keep theirs."""
        self.state, self._is_begun = State.EXAMINING, True
        self.not_unique[:] = not_unique
        for line, prices in self._lines.items():
            self.not_unique[line] = not prices.is_unique

    def put(self, lines: Mapping[int, Result]) -> None:
        """Some lines were examined."""
        for line, result in lines.items():
            if isinstance(result, str):
                self._failed[line] = result
                continue
            self._lines[line] = result
            self.not_unique[line] = not result.is_unique
            moves = active(self._found, line, result)
            if moves is not None:
                up, down = moves.up, moves.down
                self.numbers[:, line] = up.rate, down.rate, up.distance, down.distance

    def end(self, state: State, reason: str) -> None:
        """Nothing is examined any more."""
        self.state, self.reason = state, reason

    def go_on(self) -> None:
        """Something is examined again."""
        if self.state is State.STOPPED:
            self.state = State.EXAMINING if self._is_begun else State.BEGINNING

    def line(self, line: int) -> LinePrices | None:
        """Everything about a line; None where it was not examined."""
        return self._lines.get(line)

    # In words ----------------------------------------------------------------

    def progress(self) -> str:
        """How far the work is, for the verdict strip."""
        known, size = len(self._lines) + len(self._failed), self.not_unique.size
        if self.state is State.BEGINNING:
            return "prices: beginning"
        if self.state is State.NONE:
            return "prices: not examined"
        if self.state is State.DONE:
            failed = f", {len(self._failed)} failed" if self._failed else ""
            return f"prices: {np.count_nonzero(self.not_unique)} not unique{failed}"
        stopped = ", stopped" if self.state is State.STOPPED else ""
        return f"prices {known} of {size}{stopped}"

    def missing(self, line: int) -> str:
        """Why a line's prices are not there, for its ledger; empty where they are."""
        if line in self._lines:
            return ""
        if line in self._failed:
            return f"prices: {self._failed[line]}"
        if self.state is State.NONE:
            return f"prices were not examined: {self.reason}"
        if self.state is State.STOPPED:
            return "prices: stopped before this line"
        return "prices: being worked out"

    def cell(self, what: int, line: int, cells: int) -> str:
        """One of `UP` to `DOWN_FAR` for a line, in at most so many cells."""
        prices = self._lines.get(line)
        if prices is None:
            return "" if self.state is State.NONE else UNKNOWN
        moves = active(self._found, line, prices)
        if moves is None:
            return ""
        move = moves.up if what in (UP, UP_FAR) else moves.down
        return _rate(move, cells) if what in (UP, DOWN) else _distance(move, cells)

    def mark(self, line: int) -> str:
        """`NOT_UNIQUE` for a price that is not."""
        return NOT_UNIQUE if self.not_unique[line] else ""


def _rate(move: Move, cells: int) -> str:
    if math.isinf(move.rate):
        return NO_LIMIT if move.then is Then.UNBOUNDED else NO_PLAN
    return fitted_number(move.rate, cells)


def _distance(move: Move, cells: int) -> str:
    if math.isinf(move.rate):
        return ""
    if move.then is Then.NEVER:
        return "however far"
    return "not found" if move.then is Then.NOT_FOUND else fitted_number(move.distance, cells)
