"""Extremes of a linear function over a small polyhedron, in exact arithmetic.

The two-phase simplex with Bland's rule, which cannot cycle (Bland 1977, Mathematics of
Operations Research 2: 103-107). The tableau holds integers over one common
denominator: every entry is a minor of the first tableau, so each division comes out
even (Edmonds 1967, J. Res. Natl. Bur. Standards 71B: 241-245; both from memory).
Shares nothing with the package.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction
from math import inf, lcm

Number = Fraction | float
"""A fraction, or plus or minus infinity."""
Ends = tuple[Number, Number]


@dataclass(frozen=True)
class Stand:
    """A variable as ``start + sum of step * column`` over nonnegative columns."""

    start: Fraction
    parts: tuple[tuple[int, int], ...]


class Region:
    """All x with ``ends`` around the products with ``rows``, and with ``bounds``."""

    def __init__(
        self, rows: Sequence[Sequence[Fraction]], ends: Sequence[Ends], bounds: Sequence[Ends]
    ) -> None:
        self.stands: list[Stand] = []
        self.width = 0
        self.table: list[list[int]] = []
        self.basis: list[int] = []
        self.common = 1
        raw: list[tuple[list[tuple[int, int]], int, int]] = []
        crossed = any(low > high for low, high in [*ends, *bounds])
        for low, high in bounds:
            self._stand_for(low, high, raw)
        for row, (low, high) in zip(rows, ends, strict=True):
            self._add_row(row, low, high, raw)
        self.empty = crossed or not self._start(raw)

    def least(self, costs: Sequence[Fraction]) -> Number:
        """Least value of ``costs`` times x; ``-inf`` where there is none."""
        if self.empty:
            raise ValueError("the region is empty")
        scale = lcm(*(cost.denominator for cost in costs))
        own = [0] * self.width
        for cost, stand in zip(costs, self.stands, strict=True):
            for column, step in stand.parts:
                own[column] += cost.numerator * (scale // cost.denominator) * step
        if not self._improve(own):
            return -inf
        return sum((c * x for c, x in zip(costs, self.point(), strict=True) if c), Fraction(0))

    def greatest(self, costs: Sequence[Fraction]) -> Number:
        """Greatest value of ``costs`` times x; ``inf`` where there is none."""
        return -self.least([-cost for cost in costs])

    def point(self) -> list[Fraction]:
        """The vertex of the tableau; after a finite `least`, it attains that."""
        value = {
            column: Fraction(line[-1], self.common)
            for column, line in zip(self.basis, self.table, strict=True)
        }
        return [
            stand.start + sum(step * value.get(column, 0) for column, step in stand.parts)
            for stand in self.stands
        ]

    def _new(self) -> int:
        self.width += 1
        return self.width - 1

    def _stand_for(self, low: Number, high: Number, raw: list) -> None:
        if low == high:
            self.stands.append(Stand(Fraction(low), ()))
        elif low > -inf:
            column = self._new()
            self.stands.append(Stand(Fraction(low), ((column, 1),)))
            if high < inf:
                length = Fraction(high) - Fraction(low)
                raw.append(([(column, length.denominator), (self._new(), 1)], length.numerator, 1))
        elif high < inf:
            self.stands.append(Stand(Fraction(high), ((self._new(), -1),)))
        else:
            self.stands.append(Stand(Fraction(0), ((self._new(), 1), (self._new(), -1))))

    def _add_row(self, row: Sequence[Fraction], low: Number, high: Number, raw: list) -> None:
        if low == -inf and high == inf:
            return
        pairs = [(a, stand) for a, stand in zip(row, self.stands, strict=True) if a]
        constant = sum((a * stand.start for a, stand in pairs if stand.start), Fraction(0))
        finite = [Fraction(end) - constant for end in (low, high) if abs(end) < inf]
        scale = lcm(*(number.denominator for number in [*(a for a, _ in pairs), *finite]))
        terms = [
            (column, a.numerator * (scale // a.denominator) * step)
            for a, stand in pairs
            for column, step in stand.parts
        ]
        sides = [int(number * scale) for number in finite]
        if low == high:
            raw.append((terms, sides[0], 0))
        elif high < inf:
            slack = self._new()
            raw.append(([*terms, (slack, 1)], sides[-1], 1))
            if low > -inf:
                raw.append(([(slack, 1), (self._new(), 1)], sides[1] - sides[0], 1))
        else:
            raw.append(([*terms, (self._new(), -1)], sides[0], -1))

    def _start(self, raw: list) -> bool:
        """First tableau and phase one; -1 in the basis is an artificial column."""
        for terms, side, slack in raw:
            line = [0] * (self.width + 1)
            for column, a in terms:
                line[column] += a
            line[-1] = side
            if side < 0 or (side == 0 and slack < 0):
                line, slack = [-a for a in line], -slack
            self.table.append(line)
            # The row's own slack is the last of its terms and stands in no other row
            # before; a second use (two-sided rows) comes later and is not its own.
            self.basis.append(terms[-1][0] if slack > 0 else -1)
        self._clear_basic_columns()
        if -1 not in self.basis:
            return True
        self._improve(None)
        if any(b == -1 and line[-1] for b, line in zip(self.basis, self.table, strict=True)):
            return False
        self._drive_out()
        return True

    def _clear_basic_columns(self) -> None:
        """Take a basic slack out of the second row that it stands in."""
        for i, column in enumerate(self.basis):
            for k, line in enumerate(self.table):
                if column >= 0 and k != i and line[column]:
                    factor = line[column]
                    self.table[k] = [
                        a - factor * b for a, b in zip(line, self.table[i], strict=True)
                    ]
        for i, line in enumerate(self.table):
            if line[-1] < 0:
                self.table[i], self.basis[i] = [-a for a in line], -1

    def _drive_out(self) -> None:
        for i in reversed(range(len(self.basis))):
            if self.basis[i] == -1:
                line = self.table[i]
                column = next((k for k in range(self.width) if line[k]), None)
                if column is None:
                    del self.table[i], self.basis[i]
                else:
                    self._pivot(i, column)

    def _improve(self, own: list[int] | None) -> bool:
        """Pivot until optimal (True) or unbounded; None minimizes the artificial columns."""
        while True:
            weights = [int(b == -1) if own is None else own[b] if b >= 0 else 0 for b in self.basis]
            column = self._entering(own, weights)
            if column is None:
                return True
            row = self._leaving(column)
            if row is None:
                return False
            self._pivot(row, column)

    def _entering(self, own: list[int] | None, weights: list[int]) -> int | None:
        used = [(w, line) for w, line in zip(weights, self.table, strict=True) if w]
        basic = set(self.basis)
        for k in range(self.width):
            cost = 0 if own is None else own[k] * self.common
            if k not in basic and cost < sum(w * line[k] for w, line in used):
                return k
        return None

    def _leaving(self, column: int) -> int | None:
        best = None
        for i, line in enumerate(self.table):
            if line[column] <= 0:
                continue
            if best is None:
                best = i
                continue
            # Ratios compared crosswise: both denominators are positive.
            ahead = line[-1] * self.table[best][column] - self.table[best][-1] * line[column]
            if ahead < 0 or (ahead == 0 and self.basis[i] < self.basis[best]):
                best = i
        return best

    def _pivot(self, row: int, column: int) -> None:
        chosen, pivot, common = self.table[row], self.table[row][column], self.common
        for i, line in enumerate(self.table):
            if i != row:
                f = line[column]
                if f:
                    pairs = zip(line, chosen, strict=True)
                    self.table[i] = [(pivot * a - f * b) // common for a, b in pairs]
                elif pivot != common:
                    self.table[i] = [pivot * a // common for a in line]
        self.basis[row], self.common = column, pivot
        if pivot < 0:
            self.table = [[-a for a in line] for line in self.table]
            self.common = -pivot


def rank(vectors: Sequence[Sequence[Fraction]]) -> int:
    """Number of linearly independent vectors."""
    left, found = [list(vector) for vector in vectors], 0
    while left:
        vector = left.pop()
        place = next((k for k, a in enumerate(vector) if a), None)
        if place is None:
            continue
        found += 1
        for i, other in enumerate(left):
            if other[place]:
                factor = other[place] / vector[place]
                left[i] = [a - factor * b for a, b in zip(other, vector, strict=True)]
    return found
