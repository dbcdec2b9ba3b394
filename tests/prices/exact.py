"""Rates and ranges around the optimum of a small linear program, in exact fractions.

An oracle that shares nothing with the package but the fields of a `LinearProgram`
without odd numbers. Every number comes from extremes of a linear function over a
polyhedron (`simplex.py`):

- plans: the feasible x whose cost is the optimum;
- prices: the (y, z) with the signs that one optimal plan calls for (complementary
  slackness makes them all optimal, and every optimal pair is among them);
- moves: the optimum as a function v of the size t >= 0 of a move. Below, "inside" is
  always minimizing, maximizing turned round.

*A side moves.* Inside, v is convex, so (v(t) - v(0)) / t grows with t and its infimum is
the rate r at 0. With s = 1/t and w = x/t that is ``min c'w - v(0) s`` over a cone cut by
the moved sides, one linear program. The optimum is linear as far as a plan exists with
``c'x <= v(0) + r t``: the greatest t, over x and t together.

*A cost moves.* Inside, v is concave and r the least of x_j, with its direction, over the
optimal plans. ``v(t) = v(0) + r t`` as long as no x beats it:
``t <= (c'x - v(0)) / (r - d x_j)`` for all x whose divisor is positive; scaled to divisor
1 that is one linear program again, in w = s x, where s = 0 stands for rays. Rays alone
say when the optimum is lost.

Lines are numbered rows first, then columns.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from fractions import Fraction
from functools import cached_property, lru_cache
from math import inf

from lpview.model import LinearProgram, Sense
from tests.prices.simplex import Ends, Number, Region, rank

ZERO, ONE = Fraction(0), Fraction(1)
LOWER, UPPER, BOTH = "lower", "upper", "both"
Move = tuple[Number, Number, str]
"""Rate of the stated objective per unit of increase, distance, what comes then."""


def value(model: LinearProgram) -> Number | str:
    """The optimal objective, or "infeasible" or "unbounded"."""
    return program(model).value


def price_interval(model: LinearProgram, line: int) -> Ends:
    """Least and greatest dual value or reduced cost over all optimal prices."""
    return program(model).prices[line]


def value_interval(model: LinearProgram, line: int) -> Ends:
    """Least and greatest row value or variable over all optimal plans."""
    return program(model).values[line]


def side_move(model: LinearProgram, line: int, which: str, direction: int) -> Move:
    """What moving a side ("lower", "upper", "both") up (1) or down (-1) does."""
    return program(model).side_move(line, which, direction)


def cost_move(model: LinearProgram, column: int, direction: int) -> Move:
    """What moving a column's cost up (1) or down (-1) does; columns count from 0."""
    return program(model).cost_move(column, direction)


def zero_slack(model: LinearProgram, line: int, side: str) -> str | None:
    """How often the slack is zero over the optimal plans: "always", "sometimes", "never".

    None where that side is absent or the two sides are one number.
    """
    found = program(model)
    low, high = found.ends[line]
    end = low if side == LOWER else high
    if abs(end) == inf or low == high:
        return None
    least, greatest = found.values[line]
    nearest, farthest = (least, greatest) if side == LOWER else (greatest, least)
    return "always" if farthest == end else "sometimes" if nearest == end else "never"


def dimensions(model: LinearProgram) -> tuple[int, int]:
    """Dimensions of the optimal plans and of the optimal prices.

    What is constant over a face spans the complement of the face's directions.
    """
    found = program(model)
    m, n = len(found.rows), len(found.c)
    plans = [
        vector
        for vector, (least, greatest) in zip(found.lines, found.values, strict=True)
        if least == greatest
    ]
    prices = [
        vector
        for vector, (least, greatest) in zip(found.price_lines, found.prices, strict=True)
        if least == greatest
    ]
    return n - rank([*plans, found.c]), m - rank(prices)


@dataclass(frozen=True)
class Program:
    """A linear program in fractions, minimizing; everything in inside signs but answers."""

    sign: int
    """1 when the model minimizes and -1 when it maximizes."""
    c: list[Fraction]
    """Costs times ``sign``."""
    offset: Fraction
    """Constant, as stated."""
    rows: list[list[Fraction]]
    """Dense coefficients."""
    ends: list[Ends]
    """Sides of rows, then bounds of columns."""

    @cached_property
    def lines(self) -> list[list[Fraction]]:
        """Every line as a linear function of x."""
        return [*self.rows, *_identity(len(self.c))]

    @cached_property
    def price_lines(self) -> list[list[Fraction]]:
        """Every line's price, up to a constant and a sign, as a linear function of y."""
        return [*_identity(len(self.rows)), *_columns(self.rows, len(self.c))]

    @cached_property
    def optimum(self) -> Number | None:
        """Least cost without the offset; None where there is no plan."""
        return None if self._feasible.empty else self._feasible.least(self.c)

    @property
    def value(self) -> Number | str:
        """The optimal objective as stated, or a word."""
        if self.optimum is None:
            return "infeasible"
        return "unbounded" if self.optimum == -inf else self.sign * self.optimum + self.offset

    @cached_property
    def plan(self) -> list[Fraction]:
        """One optimal plan."""
        self._feasible.least(self.c)
        return self._feasible.point()

    @cached_property
    def values(self) -> list[Ends]:
        """Ends of every line over the optimal plans."""
        m = len(self.rows)
        ends = [*self.ends[:m], (self._optimal, self._optimal)]
        face = Region([*self.rows, self.c], ends, self.ends[m:])
        return [(face.least(line), face.greatest(line)) for line in self.lines]

    @cached_property
    def price_face(self) -> Region:
        """All optimal y: rows of this region are the sums ``A'y``."""
        signs = [self.price_ends(k) for k in range(len(self.ends))]
        m = len(self.rows)
        sums = [
            (cost - high, cost - low) for cost, (low, high) in zip(self.c, signs[m:], strict=True)
        ]
        return Region(self.price_lines[m:], sums, signs[:m])

    @cached_property
    def prices(self) -> list[Ends]:
        """Ends of every line's price over all optimal prices, as stated."""
        m, found = len(self.rows), []
        for k, line in enumerate(self.price_lines):
            least, greatest = self.price_face.least(line), self.price_face.greatest(line)
            if k >= m:
                cost = self.c[k - m]
                least, greatest = cost - greatest, cost - least
            found.append((least, greatest) if self.sign > 0 else (-greatest, -least))
        return found

    def side_move(self, line: int, which: str, direction: int) -> Move:
        """See the module."""
        moved = {(line, end): direction for end in ((LOWER, UPPER) if which == BOTH else (which,))}
        cone = self._cone(moved)
        if cone.empty:
            return direction * self.sign * inf, ZERO, "infeasible"
        rate = cone.least([*self.c, -self._optimal])
        upwards = [ZERO] * len(self.c) + [ONE]
        reach = self._along(moved, None).greatest(upwards)
        distance = self._along(moved, rate).greatest(upwards)
        then = "never" if distance == inf else "rate changes"
        if reach == distance < inf:
            then = "infeasible"
        return direction * self.sign * rate, distance, then

    def cost_move(self, column: int, direction: int) -> Move:
        """See the module."""
        inside = direction * self.sign
        least, greatest = self.values[len(self.rows) + column]
        rate = least if inside > 0 else -greatest
        if rate == -inf:
            return direction * self.sign * rate, ZERO, "unbounded"
        unit = [Fraction(inside * (j == column)) for j in range(len(self.c))]
        divisor = [*(-d for d in unit), rate]
        rivals, rays = self._cone({}, divisor), self._cone({}, divisor, rays=True)
        never = (direction * self.sign * rate, inf, "never")
        if rivals.empty:
            return never
        distance = rivals.least([*self.c, -self._optimal])
        lost = inf if rays.empty else rays.least([*self.c, ZERO])
        then = "unbounded" if lost == distance else "rate changes"
        return direction * self.sign * rate, distance, then

    @cached_property
    def _feasible(self) -> Region:
        m = len(self.rows)
        return Region(self.rows, self.ends[:m], self.ends[m:])

    @property
    def _optimal(self) -> Fraction:
        if not isinstance(self.optimum, Fraction):
            raise ValueError(f"the model is {self.value}")
        return self.optimum

    def price_ends(self, k: int) -> Ends:
        """Where the price of a line may lie, by where the optimal plan puts the line."""
        low, high = self.ends[k]
        at = sum((a * x for a, x in zip(self.lines[k], self.plan, strict=True)), ZERO)
        return (-inf if at == high else ZERO), (inf if at == low else ZERO)

    def _one_sided(self) -> Iterator[tuple[list[Fraction], Fraction, str, int]]:
        """Every finite side and bound: line as a function of x, number, which, line."""
        for k, (line, ends) in enumerate(zip(self.lines, self.ends, strict=True)):
            for which, end in zip((LOWER, UPPER), ends, strict=True):
                if abs(end) < inf:
                    yield line, Fraction(end), which, k

    def _cone(
        self,
        moved: Mapping[tuple[int, str], int],
        divisor: list[Fraction] | None = None,
        rays: bool = False,
    ) -> Region:
        """Scaled plans (w, s): every side times s, plus its move; rays have s = 0."""
        rows, ends = [], []
        for line, end, which, k in self._one_sided():
            rows.append([*line, -end])
            side = Fraction(moved.get((k, which), 0))
            ends.append((side, inf) if which == LOWER else (-inf, side))
        if divisor:
            rows.append(divisor)
            ends.append((ONE, ONE))
        scale = (ZERO, ZERO) if rays else (ZERO, inf)
        return Region(rows, ends, [(-inf, inf)] * len(self.c) + [scale])

    def _along(self, moved: Mapping[tuple[int, str], int], rate: Number | None) -> Region:
        """Plans with the size of the move (x, t), at most at the cost that ``rate`` says."""
        rows, ends = [], []
        for line, end, which, k in self._one_sided():
            rows.append([*line, -Fraction(moved.get((k, which), 0))])
            ends.append((end, inf) if which == LOWER else (-inf, end))
        if rate is not None:
            rows.append([*self.c, -Fraction(rate)])
            ends.append((-inf, self._optimal))
        return Region(rows, ends, [(-inf, inf)] * len(self.c) + [(ZERO, inf)])


@lru_cache(maxsize=16)
def program(model: LinearProgram) -> Program:
    """The model in fractions; it is kept, because models compare by identity."""
    if model.odd:
        raise ValueError("models with odd numbers are not for this oracle")
    sign = 1 if model.sense is Sense.MINIMIZE else -1
    sides = zip(_numbers(model.row_lower), _numbers(model.row_upper), strict=True)
    bounds = zip(_numbers(model.lower), _numbers(model.upper), strict=True)
    return Program(
        sign,
        [sign * Fraction(cost) for cost in _numbers(model.c)],
        Fraction(str(model.offset)),
        [[Fraction(a) for a in _numbers(row)] for row in model.A.toarray()],
        [*sides, *bounds],
    )


def _numbers(vector) -> list[Number]:
    """A number of a file is the shortest decimal of its double."""
    return [v if abs(v) == inf else Fraction(str(v)) for v in vector.tolist()]


def _identity(size: int) -> list[list[Fraction]]:
    return [[Fraction(i == k) for k in range(size)] for i in range(size)]


def _columns(rows: list[list[Fraction]], n: int) -> list[list[Fraction]]:
    return [[row[j] for row in rows] for j in range(n)]
