"""Finding a value curve: from one verified answer to the next.

At an answer, `lpview.prices` says at which rate the optimal objective goes on and how far.
There the model is solved and checked again, and so on. That is exact up to rounding, needs
no end of the curve to be known beforehand (it finds them: no plan left, no limit), and each
piece is proved twice: a convex function that has a subgradient's value at another point is
linear in between, and the objective solved for at the end of a piece is compared with it.

Where rounding spoils the answer at a breakpoint, the next one is looked for slightly beyond,
and the breakpoint is where the two lines meet. (Eisner and Severance 1976, "Mathematical
techniques for efficient record segmentation in large shared databases", Journal of the ACM
23, find all breakpoints that way. It serves here only where it must: it needs an answer
beyond every breakpoint, and two lines that are nearly parallel meet nowhere exactly.)
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass

from lpview.model import LinearProgram, ModelError
from lpview.outcomes import Examination, NoOptimum, Optimal, Stopped
from lpview.prices.curve import (
    SAME,
    Beyond,
    NoCurve,
    Piece,
    Why,
    is_same,
    size,
    without_noise,
)
from lpview.prices.number import Number, Part
from lpview.prices.results import Move, Moves, NoPrices, Then
from lpview.prices.work import Prices, work_out
from lpview.repair.search import Infeasible
from lpview.scaling import NotRepresentableError
from lpview.warm import WarmMaker

NUDGES = (0.0, 1e-9, 1e-7, 1e-5)
"""How far beyond a breakpoint an answer is looked for, scaled, one after the other."""

Ask = Callable[[LinearProgram], Examination]
"""Solves and checks a model."""


@dataclass(frozen=True, eq=False)
class Place:
    """A number with the verified answer of its model."""

    at: float
    """The number."""
    objective: float
    """The optimal objective there."""
    prices: Prices
    """What is known around it."""


class Walk:
    """One number moved along, with what was seen on the way."""

    def __init__(self, lp: LinearProgram, number: Number, ask: Ask, warm: WarmMaker) -> None:
        self._lp, self._number, self._ask, self._warm = lp, number, ask, warm
        self.joints: list[float] = []
        self.unsolved = 0
        self.stopped = False

    def start(self, found: Optimal, span: tuple[float, float] | None) -> Place | NoCurve:
        """The number as it stands, or the end of the span that is nearest to it.

        Numbers with an optimum form an interval, so that there is none in the whole span
        where there is none at that end.
        """
        now = self._number.of(self._lp)
        at = now if span is None else min(max(now, span[0]), span[1])
        if math.isinf(at):
            return NoCurve(Why.NOT_FOUND, "there is no such bound, and no span to put one in")
        if is_same(at, self._number.other_end(self._lp)):
            reason = f"the two ends of the line meet at {at:.12g}, where the span begins or ends"
            return NoCurve(Why.ONE_POINT, reason)
        if at == now:
            prices = work_out(found, self._warm)
            if isinstance(prices, NoPrices):
                return NoCurve(Why.NOT_FOUND, f"prices were not examined: {prices.reason}")
            return Place(now, found.measurement.primal_objective, prices)
        place = self.place(at)
        return place if isinstance(place, Place) else _nothing_at(at, place)

    def place(self, at: float) -> Place | Beyond:
        """Solve and check with the number put there."""
        try:
            found = self._ask(self._number.moved(self._lp, at))
        except ModelError:
            return Beyond.INFEASIBLE
        except NotRepresentableError:
            return Beyond.NOT_FOUND
        if isinstance(found, Stopped):
            self.stopped = True
            return Beyond.STOPPED
        if isinstance(found, NoOptimum):
            is_infeasible = isinstance(found.certificate, Infeasible)
            return Beyond.INFEASIBLE if is_infeasible else Beyond.UNBOUNDED
        prices = work_out(found, self._warm) if isinstance(found, Optimal) else None
        if not isinstance(found, Optimal) or not isinstance(prices, Prices):
            return Beyond.NOT_FOUND
        return Place(at, found.measurement.primal_objective, prices)

    def along(
        self, start: Place, up: bool, limit: float, most: int | None
    ) -> tuple[list[Piece], Beyond]:
        """Pieces from a place in one direction, nearest first, and what lies beyond.

        At most to ``limit``, and at most ``most`` breakpoints and one more piece.
        """
        pieces: list[Piece] = []
        place, move, begin = start, self._move(start, up), start.at
        if begin == limit and math.isinf(move.distance):
            # Nothing in this direction; "for ever" is about the piece in the other one.
            same = is_same(move.rate, self._move(start, not up).rate)
            return pieces, Beyond.FOR_EVER if same else Beyond.GOES_ON
        while begin != limit:
            if not math.isfinite(move.rate):
                return pieces, _beyond(move.then)
            line = Piece(begin, begin, move.rate, place.at, place.objective)
            if len(pieces) == most:
                # Nobody asked for more: how far it goes is known, and that is enough.
                self._add(pieces, line, self._reach(place.at, move, up), up)
                return pieces, _beyond(move.then)
            step = self._step(line, place, move, up, limit)
            if step.end != begin:
                self._add(pieces, line, step.end, up)
            if step.place is None or step.move is None:
                return pieces, step.beyond
            place, move, begin = step.place, step.move, step.end
        return pieces, Beyond.GOES_ON

    def _add(self, pieces: list[Piece], line: Piece, end: float, up: bool) -> None:
        low, high = (line.start, end) if up else (end, line.start)
        pieces.append(Piece(low, high, line.rate, line.anchor, line.objective))

    def _step(self, line: Piece, place: Place, move: Move, up: bool, limit: float) -> _Step:
        """Follow one rate to its end."""
        while True:
            reach = self._reach(place.at, move, up)
            if abs(limit - line.start) <= abs(reach - line.start):
                self._joins(line, limit)
                goes_on = Beyond.FOR_EVER if math.isinf(reach) else Beyond.GOES_ON
                is_end = limit == reach and _beyond(move.then).is_end
                return _Step(limit, _beyond(move.then) if is_end else goes_on)
            other = self._number.other_end(self._lp)
            if is_same(reach, other):
                # Beyond it lower exceeds upper; there the two would move together.
                self._joins(line, other)
                return _Step(other, Beyond.INFEASIBLE)
            if _beyond(move.then).is_end:
                self._joins(line, reach)
                return _Step(reach, _beyond(move.then))
            found = self._turn(line, reach, up)
            if not found.same_rate or found.place is None or found.move is None:
                return found
            place, move = found.place, found.move

    def _turn(self, line: Piece, reach: float, up: bool) -> _Step:
        """The next rate, from the answer at a breakpoint or slightly beyond."""
        for nudge in NUDGES:
            step = nudge * size(reach)
            probe = self.place(reach + step if up else reach - step)
            if probe is Beyond.STOPPED:
                return _Step(reach, Beyond.STOPPED)
            if isinstance(probe, Beyond):
                if nudge and probe.is_end:
                    return _Step(reach, probe)
                continue
            move = self._move(probe, up)
            if not math.isfinite(move.rate):
                self._note(line, probe)
                return _Step(probe.at, _beyond(move.then))
            if not is_same(move.rate, line.rate):
                return self._corner(line, reach, probe, move)
            if move.distance > SAME * size(reach):
                return _Step(reach, Beyond.GOES_ON, probe, move, same_rate=True)
        return _Step(reach, Beyond.NOT_FOUND)

    def _corner(self, line: Piece, reach: float, probe: Place, move: Move) -> _Step:
        """Where a piece ends and the rate of ``probe`` begins."""
        if probe.at == reach:
            self._note(line, probe)
            return _Step(reach, Beyond.GOES_ON, probe, move)
        self.unsolved += 1
        meets = probe.at + (line.at(probe.at) - probe.objective) / (move.rate - line.rate)
        low, high = min(reach, probe.at), max(reach, probe.at)
        return _Step(min(max(meets, low), high), Beyond.GOES_ON, probe, move)

    def _joins(self, line: Piece, end: float) -> None:
        """Compare a piece with the objective solved for at its end, if there is one."""
        probe = Beyond.FOR_EVER if math.isinf(end) else self.place(end)
        if isinstance(probe, Place):
            self._note(line, probe)

    def _note(self, line: Piece, probe: Place) -> None:
        gap = abs(probe.objective - line.at(probe.at))
        self.joints.append(gap / size(probe.objective, line.objective))

    def _reach(self, at: float, move: Move, up: bool) -> float:
        reach = at + move.distance if up else at - move.distance
        return without_noise(reach, at)

    def _move(self, place: Place, up: bool) -> Move:
        line = place.prices.line(self._number.line)
        moves: dict[Part, Moves | None] = {
            Part.LOWER: line.lower,
            Part.UPPER: line.upper,
            Part.BOTH: line.lower,
            Part.COST: line.cost,
        }
        found = moves[self._number.part]
        if found is None:
            raise ValueError("the number that moves is not there")
        return found.up if up else found.down


@dataclass(frozen=True)
class _Step:
    """How one rate ended."""

    end: float
    beyond: Beyond
    place: Place | None = None
    move: Move | None = None
    same_rate: bool = False


def _nothing_at(at: float, found: Beyond) -> NoCurve:
    """What to say of a span whose end nearest to the number as it stands has no answer."""
    if found.is_end:
        what = "plan" if found is Beyond.INFEASIBLE else "limit to the objective"
        reason = (
            f"there is no {what} anywhere in the span: none at {at:.12g}, which is nearest to "
            "the number as it stands, and numbers that have an optimum form one interval"
        )
        return NoCurve(Why.NO_OPTIMUM, reason)
    if found is Beyond.STOPPED:
        return NoCurve(Why.STOPPED, "stopped before there was a result")
    return NoCurve(Why.NOT_FOUND, f"no verified answer was found at {at:.12g}, to begin with")


def _beyond(then: Then) -> Beyond:
    return {
        Then.RATE_CHANGES: Beyond.GOES_ON,
        Then.INFEASIBLE: Beyond.INFEASIBLE,
        Then.UNBOUNDED: Beyond.UNBOUNDED,
        Then.NEVER: Beyond.FOR_EVER,
        Then.NOT_FOUND: Beyond.NOT_FOUND,
    }[then]
