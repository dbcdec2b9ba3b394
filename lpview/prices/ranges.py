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
from lpview.prices.intervals import GREATEST, LEAST, ZERO, Face
from lpview.prices.lines import Index, Lines
from lpview.prices.polyhedron import Polyhedron, Shape, price_shape, value_shape
from lpview.prices.ratios import Mirror, Ratios, price_mirror, ratios, value_mirror
from lpview.prices.results import Move, Then
from lpview.prices.tableau import Tableau
from lpview.warm import Lost, WarmMaker


class Ranges:
    """Moves of every side, bound and cost, found when asked for."""

    def __init__(
        self, lines: Lines, tableau: Tableau, prices: Face, plans: Face, warm: WarmMaker
    ) -> None:
        self._lines, self._prices, self._plans = lines, prices, plans
        everything = np.ones(lines.value.size, dtype=bool)
        every_value, every_price = value_shape(lines, everything), price_shape(lines, everything)
        self._sides = _Ratios(value_mirror(lines, tableau))
        self._costs = _Ratios(price_mirror(lines, tableau))
        low, high = lines.low, lines.high
        self._complementary = _Asked(every_value, lines.value, lines.value_size, warm)
        self._feasible = _Asked(every_value, lines.value, lines.value_size, warm)
        self._feasible.always(low, high)
        self._complementary_prices = _Asked(every_price, lines.price, lines.price_size, warm)
        self._feasible_prices = _Asked(every_price, lines.price, lines.price_size, warm)
        allowed = np.where(np.isfinite(high), -np.inf, 0.0), np.where(np.isfinite(low), np.inf, 0.0)
        self._feasible_prices.always(*allowed)

    def prepare(self) -> None:
        """Read all distances off the basis at once, which is quicker than one by one."""
        lines = self._lines
        priced = (lines.price != 0) | lines.equal
        self._sides.read(np.flatnonzero(~lines.basic & priced))
        columns = np.arange(lines.value.size) >= lines.m
        self._costs.read(np.flatnonzero(lines.basic & columns & ~lines.at_end))

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
            if own <= found.distance:
                return Move(rate, own, Then.NEVER if math.isinf(own) else Then.INFEASIBLE)
            if found.distance > 0 and found.is_end:
                then = self._after_found_side(line, up, end, tightens, found)
                return Move(rate, found.distance, then)
        return self._solved_side(line, up, rate, (end, limit), tightens)

    def _after_found_side(
        self, line: int, up: bool, end: float, tightens: bool, found: _One
    ) -> Then:
        if tightens and found.is_last:
            return Then.INFEASIBLE
        if not tightens or found.alone:
            return Then.RATE_CHANGES
        return self._after_side(line, up, end + found.distance if up else end - found.distance)

    def _solved_side(
        self, line: int, up: bool, rate: float, span: tuple[float, float], tightens: bool
    ) -> Move:
        """The same by asking: the end of the line over plans complementary to its prices."""
        lines, (end, limit) = self._lines, span
        point = self._prices.ends.at(GREATEST if up else LEAST, line)
        point = np.where(np.abs(point) <= ZERO * lines.price_size, 0.0, point)
        released = (end, limit) if up else (limit, end)
        reach = self._complementary.reach(line, up, lines.value_limits(point), released)
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
        released = None
        if lines.equal[line]:
            low = min(level, float(lines.value[line]))
            high = max(level, float(lines.value[line]))
            released = (low, math.inf) if up else (-math.inf, high)
        beyond = self._feasible.is_beyond(line, up, level, released)
        if beyond is None:
            return Then.NOT_FOUND
        return Then.RATE_CHANGES if beyond else Then.INFEASIBLE

    def cost(self, line: int, up: bool) -> Move:
        """Move the cost of a column (``line`` counts rows first)."""
        lines = self._lines
        low, high = float(lines.low[line]), float(lines.high[line])
        rate = self._plans.interval(line)[LEAST if up else GREATEST]
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
        limits = _price_limits(lines, point)
        released = (-math.inf, 0.0) if up else (0.0, math.inf)
        reach = self._complementary_prices.reach(line, not up, limits, released)
        if reach is None:
            return Move(rate, 0.0, Then.NOT_FOUND)
        if math.isinf(reach):
            return Move(rate, math.inf, Then.NEVER)
        return Move(rate, abs(reach), self._after_cost(line, up, reach))

    def _after_found_cost(self, line: int, up: bool, found: _One) -> Then:
        if self._cannot_be_unbounded(line, up):
            return Then.RATE_CHANGES
        if found.is_last or found.alone:
            return Then.UNBOUNDED if found.is_last else Then.RATE_CHANGES
        return self._after_cost(line, up, -found.distance if up else found.distance)

    def _cannot_be_unbounded(self, line: int, up: bool) -> bool:
        """A variable that cannot go where the cost pushes it cannot go for ever."""
        return bool(np.isfinite(self._lines.low[line] if up else self._lines.high[line]))

    def _after_cost(self, line: int, up: bool, level: float) -> Then:
        if self._cannot_be_unbounded(line, up):
            return Then.RATE_CHANGES
        released = (-math.inf, max(0.0, level)) if up else (min(0.0, level), math.inf)
        low, high = self._feasible_prices.limits_of(line)
        released = (min(released[0], low), max(released[1], high))
        beyond = self._feasible_prices.is_beyond(line, not up, level, released)
        if beyond is None:
            return Then.NOT_FOUND
        return Then.RATE_CHANGES if beyond else Then.UNBOUNDED


class _One:
    """What the basis says about one move."""

    def __init__(self, found: Ratios, way: int, k: int) -> None:
        self.distance = float(found.distance[way, k])
        self.is_end = bool(found.is_end[way, k])
        self.is_last = bool(found.is_last[way, k])
        self.alone = bool(found.alone[way, k])


class _Ratios:
    """Ratios of all lines read so far."""

    def __init__(self, mirror: Mirror) -> None:
        self._mirror = mirror
        self._known: dict[int, tuple[Ratios, int]] = {}

    def read(self, lines: Index) -> None:
        new = np.array([k for k in lines.tolist() if k not in self._known], dtype=np.intp)
        if new.size:
            found = ratios(self._mirror, new)
            self._known.update({k: (found, at) for at, k in enumerate(new.tolist())})

    def of(self, line: int, up: bool) -> _One:
        self.read(np.array([line]))
        found, at = self._known[line]
        return _One(found, int(up), at)


def _price_limits(lines: Lines, value: Vector) -> tuple[Vector, Vector]:
    """Limits of prices complementary to another plan than the one at hand."""
    at_low = (np.abs(value - lines.low) <= ZERO * lines.value_size) | lines.equal
    at_high = (np.abs(value - lines.high) <= ZERO * lines.value_size) | lines.equal
    return np.where(at_high, -np.inf, 0.0), np.where(at_low, np.inf, 0.0)


def _cleared(number: float, size: float) -> float:
    return 0.0 if abs(number) <= ZERO * size else number


def _same(first: float, second: float, size: float) -> bool:
    return first == second or abs(first - second) <= ZERO * size


class _Asked:
    """A polyhedron opened when first asked, with what its points have shown."""

    def __init__(self, shape: Shape, base: Vector, size: Vector, warm: WarmMaker) -> None:
        self._shape, self._base, self._size, self._warm = shape, base, size, warm
        self._polyhedron: Polyhedron | None = None
        self._low, self._high = base.copy(), base.copy()
        self._least, self._greatest = base.copy(), base.copy()

    def always(self, low: Vector, high: Vector) -> None:
        """The limits, where every question has the same ones."""
        self._low, self._high = low, high

    def limits_of(self, line: int) -> tuple[float, float]:
        return float(self._low[line]), float(self._high[line])

    def reach(
        self, line: int, up: bool, limits: tuple[Vector, Vector], released: tuple[float, float]
    ) -> float | None:
        """How far a line goes within ``limits``, its own ones released."""
        low, high = limits
        if self._polyhedron is None:
            self._low, self._high = low, high
        else:
            other = np.flatnonzero((low != self._low) | (high != self._high))
            if other.size:
                self._polyhedron.limit(other, low[other], high[other])
            self._low, self._high = low, high
        return self._ask(line, up, released)[0]

    def is_beyond(
        self, line: int, up: bool, level: float, released: tuple[float, float] | None
    ) -> bool | None:
        """Whether a line can go beyond a level; None where that was not found out."""
        size = ZERO * max(1.0, abs(level), float(self._size[line]))
        if released is None and self._seen_beyond(line, up, level, size):
            return True
        reach, step = self._ask(line, up, released)
        if reach is None:
            return None
        if released is None and step is not None:
            self._least = np.minimum(self._least, self._base + step)
            self._greatest = np.maximum(self._greatest, self._base + step)
        return reach > level + size if up else reach < level - size

    def _seen_beyond(self, line: int, up: bool, level: float, size: float) -> bool:
        seen = self._greatest[line] - level if up else level - self._least[line]
        return bool(seen > size)

    def _ask(
        self, line: int, up: bool, released: tuple[float, float] | None
    ) -> tuple[float | None, Vector | None]:
        if self._polyhedron is None:
            self._polyhedron = Polyhedron(
                self._shape,
                self._base,
                self._low,
                self._high,
                self._warm,
            )
        one = np.array([line])
        if released is not None:
            self._polyhedron.limit(one, np.array([released[0]]), np.array([released[1]]))
        try:
            found = self._polyhedron.end(line, up)
            if isinstance(found, Lost):
                return None, None
            if found.ray is not None:
                return math.inf if up else -math.inf, None
        finally:
            if released is not None:
                self._polyhedron.limit(one, self._low[one], self._high[one])
        step = np.zeros(self._base.size)
        step[self._polyhedron.lines] = found.step
        return float(self._base[line] + step[line]), step
