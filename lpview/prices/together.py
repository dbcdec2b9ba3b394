"""Several right-hand sides moved at once.

The rate of the optimal objective in a direction is the greatest (minimizing) or least
value of that direction over all optimal dual solutions. It is the sum of the one-row
rates only where one dual solution attains them all, so one-row prices must not be added
on a degenerate model.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.sparse import csr_array, hstack, vstack

from lpview.model import Vector
from lpview.prices.intervals import ZERO
from lpview.prices.lines import Lines, Mask
from lpview.prices.polyhedron import Polyhedron, price_shape
from lpview.prices.results import Then
from lpview.prices.work import Prices
from lpview.warm import Box, Descent, Lost, Vertex, WarmMaker


@dataclass(frozen=True)
class Alone:
    """What the one-row rate of a moved row says."""

    row: int
    """The row."""
    amount: float
    """How far its right-hand side moves per unit of the common step."""
    is_high: bool
    """Whether its upper side moves (for an equality both do)."""
    rate: float
    """Change of the objective per unit of the common step, moved alone."""


@dataclass(frozen=True)
class Together:
    """What moving several right-hand sides at once is worth, in the model's own sense."""

    rate: float
    """Change of the optimal objective per unit of the common step; infinite where the
    smallest step leaves no plan."""
    distance: float
    """How many units of the common step it holds for."""
    then: Then
    """What happens there."""
    separate: tuple[Alone, ...]
    """The rows one by one."""

    @property
    def sum_of_separate(self) -> float:
        """What adding up the one-row rates would have said; nan if they contradict."""
        return sum(alone.rate for alone in self.separate)


def move_together(prices: Prices, moves: Sequence[tuple[int, float]]) -> Together:
    """Move right-hand sides of rows by given amounts per unit of a common step.

    A row's active side moves, else its nearest one; both sides of an equality.

    Raises
    ------
    ValueError
        A row has no side, stands twice, or an amount is not a finite number but 0.
    """
    _validate(prices.lines, moves)
    lines, warm = prices.lines, prices.warm
    separate = tuple(_alone(prices, row, amount) for row, amount in moves)
    amounts = np.zeros(lines.value.size)
    for row, amount in moves:
        amounts[row] = amount
    point = _attaining(prices, amounts)
    sign = lines.lp.sense.sign
    if isinstance(point, Lost):
        return Together(math.nan, 0.0, Then.NOT_FOUND, separate)
    if point is None:
        return Together(sign * math.inf, 0.0, Then.INFEASIBLE, separate)
    rate = float(amounts @ point)
    is_high = np.zeros(lines.value.size, dtype=bool)
    for alone in separate:
        is_high[alone.row] = alone.is_high
    problem = _Step(lines, amounts, is_high, warm)
    distance = problem.longest(lines.value_limits(point))
    if distance is None:
        return Together(sign * rate, 0.0, Then.NOT_FOUND, separate)
    then = Then.NEVER
    if math.isfinite(distance):
        feasible = problem.longest((lines.low, lines.high))
        near = ZERO * max(1.0, distance)
        then = Then.NOT_FOUND
        if feasible is not None:
            then = Then.RATE_CHANGES if feasible > distance + near else Then.INFEASIBLE
    return Together(sign * rate + 0.0, distance, then, separate)


def _validate(lines: Lines, moves: Sequence[tuple[int, float]]) -> None:
    rows = [row for row, _ in moves]
    if len(set(rows)) < len(rows):
        raise ValueError("expected each row once")
    for row, amount in moves:
        if not math.isfinite(amount) or amount == 0:
            raise ValueError("expected amounts that are finite and not 0")
        if math.isinf(lines.low[row]) and math.isinf(lines.high[row]):
            raise ValueError(f"row {lines.lp.rows[row]}: it has no side to move")


def moved_side(lines: Lines, row: int) -> bool:
    """Whether the upper side is the one that a row's move means: active, else nearest."""
    if lines.at_low[row]:
        return False
    return bool(
        lines.at_high[row] or lines.high[row] - lines.value[row] < lines.value[row] - lines.low[row]
    )


def _alone(prices: Prices, row: int, amount: float) -> Alone:
    is_high = moved_side(prices.lines, row)
    found = prices.line(row)
    moves = found.upper if is_high else found.lower
    assert moves is not None  # the side that is active or nearest exists
    move = moves.up if amount > 0 else moves.down
    return Alone(row, amount, is_high, amount * move.rate)


def _attaining(prices: Prices, amounts: Vector) -> Vector | Lost | None:
    """Prices (as if minimizing) with the greatest ``amounts @ p``; None along a ray."""
    lines, moves = prices.lines, prices.partition.price_moves
    if not amounts[moves].any():
        return lines.price
    low, high = prices.price_limits
    polyhedron = Polyhedron(price_shape(lines, moves), lines.price, low, high, prices.warm)
    found = polyhedron.least_sum(-amounts[polyhedron.lines])
    if isinstance(found, Lost):
        return found
    if found.ray is not None:
        return None
    point = lines.price.copy()
    point[polyhedron.lines] += found.step
    return np.where(np.abs(point) <= ZERO * lines.price_size, 0.0, point)


class _Step:
    """The longest common step ``t`` for which some plan satisfies given limits.

    Steps of the plan and ``t`` are the variables. A moved side is a row ``a_i d - amount t``;
    a moved row that has another side as well stands a second time, without ``t``.
    """

    def __init__(self, lines: Lines, amounts: Vector, is_high: Mask, warm: WarmMaker) -> None:
        m = lines.m
        self._lines, self._warm, self._is_high = lines, warm, is_high
        self._moved = np.flatnonzero(amounts)
        t = csr_array(-amounts[:m, None])
        other = csr_array((self._moved.size, 1))
        G = vstack([hstack([lines.lp.A, t]), hstack([lines.lp.A[self._moved], other])])
        self._G = csr_array(G)
        self._G.sort_indices()

    def longest(self, limits: tuple[Vector, Vector]) -> float | None:
        lines, moved, m = self._lines, self._moved, self._lines.m
        low, high = limits[0] - lines.value, limits[1] - lines.value
        low, high = np.minimum(low, 0.0), np.maximum(high, 0.0)
        # A price holds a row at its moved side, an equality holds both: nothing is given up.
        held = (limits[0] == limits[1])[moved]
        up = self._is_high[moved]
        row_low, row_high = low[:m].copy(), high[:m].copy()
        row_low[moved[up & ~held]] = -np.inf
        row_high[moved[~up & ~held]] = np.inf
        own_low = np.where(up & ~lines.equal[moved], (lines.low - lines.value)[moved], -np.inf)
        own_high = np.where(~up & ~lines.equal[moved], (lines.high - lines.value)[moved], np.inf)
        box = Box(
            np.concatenate([row_low, np.minimum(own_low, 0.0)]),
            np.concatenate([row_high, np.maximum(own_high, 0.0)]),
            np.append(low[m:], 0.0),
            np.append(high[m:], np.inf),
        )
        last = np.array([lines.lp.n], dtype=np.int32)
        found = self._warm(self._G, box).least(last, np.array([-1.0]))
        if isinstance(found, Vertex):
            return float(found.x[-1])
        return math.inf if isinstance(found, Descent) else None
