"""Valid ranges: how far the one-sided rate of a side, bound or cost stays what it is.

The optimal objective is a convex piecewise linear function of each side and bound, and a
concave one of each cost, as if minimizing. Let prices ``p`` be optimal and attain the rate
of a side in one direction. They stay dual feasible however far the side moves, so the
objective keeps that rate exactly as long as some feasible plan is complementary to ``p``:
the distance is the end of the line itself over those plans, its own limit released. (Any
attaining ``p`` gives the same answer, which therefore does not depend on a basis.) For a
cost, plans and prices change places. Adler and Monteiro (1992, "A geometric view of
parametric linear programming", Algorithmica 8) show the same for optimal partitions.

Most distances are read off the basis by `lpview.prices.ratios`, with a proof in one line;
the others are asked of the polyhedra. Everything here is as if minimizing.
"""

from __future__ import annotations

import math

import numpy as np

from lpview.model import Vector
from lpview.prices.asked import Asked, KnownRatios, OneRatio
from lpview.prices.intervals import GREATEST, LEAST, ZERO, Face
from lpview.prices.lines import Index, Lines, Mask
from lpview.prices.polyhedron import price_shape, value_shape
from lpview.prices.ratios import TIE, price_mirror, value_mirror
from lpview.prices.results import Move, Then
from lpview.prices.tableau import Tableau
from lpview.warm import WarmMaker

ROUGH = 1e-7
"""What counts as zero at a point found by the solver where `ZERO` leads nowhere."""


class Ranges:
    """Moves of every side, bound and cost, found when asked for."""

    def __init__(
        self, lines: Lines, tableau: Tableau, prices: Face, plans: Face, warm: WarmMaker
    ) -> None:
        self._lines, self._prices, self._plans = lines, prices, plans
        everything = np.ones(lines.value.size, dtype=bool)
        every_value, every_price = value_shape(lines, everything), price_shape(lines, everything)
        self._sides = KnownRatios(value_mirror(lines, tableau))
        self._costs = KnownRatios(price_mirror(lines, tableau))
        low, high = lines.low, lines.high
        allowed = np.where(np.isfinite(high), -np.inf, 0.0), np.where(np.isfinite(low), np.inf, 0.0)
        self._plan_space = Asked(every_value, lines.value, (low, high), lines.value_size, warm)
        self._price_space = Asked(every_price, lines.price, allowed, lines.price_size, warm)

    def prepare(self) -> None:
        """Read all distances off the basis at once, which is quicker than one by one."""
        lines = self._lines
        priced = (lines.price != 0) | lines.equal
        self._sides.read(np.flatnonzero(~lines.basic & priced))
        columns = np.arange(lines.value.size) >= lines.m
        self._costs.read(np.flatnonzero(lines.basic & columns & ~lines.at_end))
        self._plan_space.spread(*self._side_levels())
        self._price_space.spread(*self._cost_levels())

    def _side_levels(self) -> tuple[Index, Mask, Vector]:
        """Where it will be asked whether plans lie beyond: lines, ways up, levels."""
        lines = self._lines
        asked: list[tuple[int, bool, float]] = []
        for line in np.flatnonzero(~lines.equal).tolist():
            for is_high, end in ((False, lines.low[line]), (True, lines.high[line])):
                if math.isinf(end):
                    continue
                up = not is_high
                at_end = (lines.at_high if is_high else lines.at_low)[line]
                level = self._plans.interval(line)[GREATEST if up else LEAST]
                if at_end and self._prices.interval(line)[GREATEST if up else LEAST] != 0:
                    if lines.basic[line] or lines.price[line] == 0:
                        continue
                    step = self._sides.of(line, up).distance
                    level = end + step if up else end - step
                asked.append((line, up, float(level)))
        return _levels(asked)

    def _cost_levels(self) -> tuple[Index, Mask, Vector]:
        """The same for prices, at the bounds where a falling price lets a variable go."""
        lines = self._lines
        asked: list[tuple[int, bool, float]] = []
        for line in np.flatnonzero(lines.at_end & ~lines.equal).tolist():
            if line >= lines.m and not (
                np.isfinite(lines.low[line]) and np.isfinite(lines.high[line])
            ):
                up = bool(lines.at_low[line])
                level = self._prices.interval(line)[GREATEST if up else LEAST]
                asked.append((line, up, float(level)))
        return _levels(asked)

    def side(self, line: int, is_high: bool, up: bool) -> Move:
        """Move one side or bound (both together where they meet)."""
        lines = self._lines
        end = float(lines.high[line] if is_high else lines.low[line])
        equal = bool(lines.equal[line])
        rate = 0.0
        if equal or (lines.at_high if is_high else lines.at_low)[line]:
            rate = _cleared(
                self._prices.interval(line)[GREATEST if up else LEAST], lines.price_size[line]
            )
        if self._prices.ends.lost[line]:
            return Move(rate, 0.0, Then.NOT_FOUND)
        if math.isinf(rate):
            return Move(rate, 0.0, Then.INFEASIBLE)
        tightens = up != is_high
        if rate != 0 or equal:
            return self._held_side(line, up, rate, end, tightens or equal)
        if not tightens:
            return Move(0.0, math.inf, Then.NEVER)
        reach = self._plans.interval(line)[GREATEST if up else LEAST]
        if math.isinf(reach):
            return Move(0.0, math.inf, Then.NEVER)
        return Move(0.0, abs(reach - end), self._after_side(line, up, reach))

    def _held_side(self, line: int, up: bool, rate: float, end: float, tightens: bool) -> Move:
        """A side that holds its line: the value moves with it, at most to ``limit``."""
        lines = self._lines
        limit = math.inf if up else -math.inf
        if tightens and not lines.equal[line]:
            limit = float(lines.high[line] if up else lines.low[line])
        if not lines.basic[line] and _same(rate, lines.price[line], lines.price_size[line]):
            found = self._sides.of(line, up)
            own = abs(limit - end)
            if own <= found.distance * (1 + TIE):
                return Move(rate, own, Then.NEVER if math.isinf(own) else Then.INFEASIBLE)
            if found.distance > 0 and found.is_end:
                then = self._after_found_side(line, up, end, tightens, found)
                return Move(rate, found.distance, then)
        return self._solved_side(line, up, rate, (end, limit), tightens)

    def _after_found_side(
        self, line: int, up: bool, end: float, tightens: bool, found: OneRatio
    ) -> Then:
        if tightens and found.is_last:
            return Then.INFEASIBLE
        if not tightens or found.goes_on:
            return Then.RATE_CHANGES
        return self._after_side(line, up, end + found.distance if up else end - found.distance)

    def _solved_side(
        self, line: int, up: bool, rate: float, span: tuple[float, float], tightens: bool
    ) -> Move:
        """The same by asking: the end of the line over plans complementary to its prices."""
        lines, (end, limit) = self._lines, span
        point = self._prices.ends.at(GREATEST if up else LEAST, line)
        released = (end, limit) if up else (limit, end)
        reach = None
        for zero in (ZERO, ROUGH):
            # A rate that holds holds for some distance: none at all means that rounding
            # was taken for a price, which keeps a line where it need not stay.
            prices = np.where(np.abs(point) <= zero * lines.price_size, 0.0, point)
            reach = self._plan_space.reach(line, up, lines.value_limits(prices), released)
            if reach is not None and not _same(reach, end, lines.value_size[line]):
                break
        if reach is not None and _same(reach, end, lines.value_size[line]):
            return Move(rate, 0.0, Then.NOT_FOUND)
        if reach is None:
            return Move(rate, 0.0, Then.NOT_FOUND)
        if math.isinf(reach):
            return Move(rate, math.inf, Then.NEVER)
        if not tightens:
            return Move(rate, abs(reach - end), Then.RATE_CHANGES)
        if _same(reach, limit, lines.value_size[line]):
            return Move(rate, abs(limit - end), Then.INFEASIBLE)
        return Move(rate, abs(reach - end), self._after_side(line, up, reach))

    def _after_side(self, line: int, up: bool, level: float) -> Then:
        """Whether any plan lies beyond ``level``."""
        lines = self._lines
        known = self._by_basis(self._sides, line, up, level, bool(lines.basic[line]), lines.value)
        if known is not None:
            return Then.RATE_CHANGES if known else Then.INFEASIBLE
        beyond = self._plan_space.is_beyond(line, up, level, bool(lines.equal[line]))
        if beyond is None:
            return Then.NOT_FOUND
        return Then.RATE_CHANGES if beyond else Then.INFEASIBLE

    def cost(self, line: int, up: bool) -> Move:
        """Move the cost of a column (``line`` counts rows first)."""
        lines = self._lines
        low, high = float(lines.low[line]), float(lines.high[line])
        rate = self._plans.interval(line)[LEAST if up else GREATEST]
        if self._plans.ends.lost[line]:
            return Move(rate, 0.0, Then.NOT_FOUND)
        if math.isinf(rate):
            return Move(rate, 0.0, Then.UNBOUNDED)
        if lines.equal[line]:
            return Move(rate, math.inf, Then.NEVER)
        at_low, at_high = (
            _same(rate, low, lines.value_size[line]),
            _same(rate, high, lines.value_size[line]),
        )
        if not (at_low or at_high):
            return self._held_cost(line, up, rate)
        if up == at_low:
            return Move(rate, math.inf, Then.NEVER)
        reach = self._prices.interval(line)[GREATEST if at_low else LEAST]
        if math.isinf(reach):
            return Move(rate, math.inf, Then.NEVER)
        return Move(rate, abs(reach), self._after_cost(line, up, reach))

    def _held_cost(self, line: int, up: bool, rate: float) -> Move:
        """The cost of a variable between its bounds: its reduced cost stays 0."""
        lines = self._lines
        if lines.basic[line] and _same(rate, lines.value[line], lines.value_size[line]):
            found = self._costs.of(line, up)
            if math.isinf(found.distance):
                return Move(rate, math.inf, Then.NEVER)
            if found.distance > 0 and found.is_end:
                return Move(rate, found.distance, self._after_found_cost(line, up, found))
        point = self._plans.ends.at(LEAST if up else GREATEST, line)
        released = (-math.inf, 0.0) if up else (0.0, math.inf)
        reach = None
        for zero in (ZERO, ROUGH):
            limits = _price_limits(lines, point, zero)
            reach = self._price_space.reach(line, not up, limits, released)
            if reach is not None and not _same(reach, 0.0, lines.price_size[line]):
                break
        if reach is not None and _same(reach, 0.0, lines.price_size[line]):
            return Move(rate, 0.0, Then.NOT_FOUND)
        if reach is None:
            return Move(rate, 0.0, Then.NOT_FOUND)
        if math.isinf(reach):
            return Move(rate, math.inf, Then.NEVER)
        return Move(rate, abs(reach), self._after_cost(line, up, reach))

    def _after_found_cost(self, line: int, up: bool, found: OneRatio) -> Then:
        if self._cannot_be_unbounded(line, up):
            return Then.RATE_CHANGES
        if found.is_last or found.goes_on:
            return Then.UNBOUNDED if found.is_last else Then.RATE_CHANGES
        return self._after_cost(line, up, -found.distance if up else found.distance)

    def _by_basis(
        self, ratios: KnownRatios, line: int, up: bool, level: float, follows: bool, entry: Vector
    ) -> bool | None:
        """Whether a line goes beyond where it is, if the basis says so."""
        here = follows and level == entry[line]
        return ratios.beyond(line, up) if here else None

    def _cannot_be_unbounded(self, line: int, up: bool) -> bool:
        """A variable that cannot go where the cost pushes it cannot go for ever."""
        return bool(np.isfinite(self._lines.low[line] if up else self._lines.high[line]))

    def _after_cost(self, line: int, up: bool, level: float) -> Then:
        if self._cannot_be_unbounded(line, up):
            return Then.RATE_CHANGES
        nonbasic = not self._lines.basic[line]
        known = self._by_basis(self._costs, line, not up, level, nonbasic, self._lines.price)
        if known is not None:
            return Then.RATE_CHANGES if known else Then.UNBOUNDED
        beyond = self._price_space.is_beyond(line, not up, level, True)
        if beyond is None:
            return Then.NOT_FOUND
        return Then.RATE_CHANGES if beyond else Then.UNBOUNDED


def _levels(asked: list[tuple[int, bool, float]]) -> tuple[Index, Mask, Vector]:
    finite = [one for one in asked if math.isfinite(one[2])]
    lines, ups, levels = zip(*finite, strict=True) if finite else ((), (), ())
    return np.array(lines, dtype=np.intp), np.array(ups, dtype=bool), np.array(levels)


def _price_limits(lines: Lines, value: Vector, zero: float) -> tuple[Vector, Vector]:
    """Limits of prices complementary to another plan than the one at hand."""
    at_low = (np.abs(value - lines.low) <= zero * lines.value_size) | lines.equal
    at_high = (np.abs(value - lines.high) <= zero * lines.value_size) | lines.equal
    return np.where(at_high, -np.inf, 0.0), np.where(at_low, np.inf, 0.0)


def _cleared(number: float, size: float) -> float:
    return 0.0 if abs(number) <= ZERO * size else number


def _same(first: float, second: float, size: float) -> bool:
    return first == second or abs(first - second) <= ZERO * size
