"""The KKT conditions of an answer, measured line by line.

Measures and does not judge (:mod:`lpview.verdict` does); knows no solver: takes a
model, a plan ``x``, dual values ``y`` and, where the answer reports them, reduced
costs ``z``. Signs, sides, residuals and the gap are those of :mod:`lpview.model`.
All sums and differences are accurate to about
``2**-90`` of their largest term and are about the numbers of the file, not their
doubles (:mod:`lpview.accurate`, :func:`lpview.decimals.low_parts`), so that the
rounding of the check itself stays far below any residual that it reports.

Lines are numbered through: rows ``0..m-1``, then columns ``m..m+n-1``.
"""

from __future__ import annotations

import enum
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview import accurate
from lpview.accurate import Pair
from lpview.file_numbers import FileNumbers
from lpview.model import LinearProgram, Vector


class Condition(enum.Enum):
    """The five conditions of a verified optimum, in the order of every report."""

    PRIMAL = "primal feasibility"
    """Every row within its sides, every column within its bounds."""
    DUAL = "dual feasibility"
    """Every price has a sign whose side or bound exists."""
    STATIONARITY = "stationarity"
    """The reported reduced costs are ``c - A'y``."""
    COMPLEMENTARITY = "complementary slackness"
    """Every price times the distance to its side is zero."""
    GAP = "duality gap"
    """Primal and dual objective agree."""


@dataclass(frozen=True)
class Residuals:
    """One condition over its lines."""

    absolute: Vector
    """Size of each residual, >= 0, in the unit of its line."""
    term: Vector
    """Largest term that entered each residual, same unit."""

    @property
    def scaled(self) -> Vector:
        """``absolute / max(1, term)``."""
        with np.errstate(invalid="ignore", over="ignore"):  # beyond the doubles: nan, which fails
            return self.absolute / np.maximum(1.0, self.term)

    @property
    def relative(self) -> Vector:
        """``absolute / term``, and 0 where the residual is 0."""
        with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
            return np.where(self.absolute == 0.0, 0.0, self.absolute / self.term)


@dataclass(frozen=True)
class Side:
    """What the check finds about one kind of line: rows (``k = m``) or columns."""

    value: Vector
    """Row values ``a_i x``, or the plan ``x``; shape ``(k,)``."""
    below: Vector
    """Value minus lower end; ``inf`` without one, negative where violated."""
    above: Vector
    """Upper end minus value; ``inf`` without one, negative where violated."""
    price: Vector
    """Dual values ``y``, or reduced costs ``c - A'y``."""
    named_lower: NDArray[np.bool_]
    """Whether the sign of the price names the lower end (else the upper)."""
    complementarity: Vector
    """``|price|`` times the distance to the end its sign names; 0 for price 0."""
    value_term: Vector
    """Largest term of the value: ``|a_ij x_j|``, or ``|x_j|``."""
    price_term: Vector
    """Largest term of the price: ``|y_i|``, or ``|c_j|`` and ``|a_ij y_i|``."""
    dual_objective: Pair
    """Price times the end its sign names, 0 where that end is infinite."""
    misplaced: Vector
    """``|price|`` where its sign names an infinite end, else 0."""
    end: Vector
    """The end that the sign names; 0 where it is infinite."""

    @property
    def slack(self) -> Vector:
        """Distance to the nearest end; ``inf`` where the line has none."""
        return np.minimum(self.below, self.above)


@dataclass(frozen=True)
class Measurement:
    """Everything the check measures; no judgement yet."""

    rows: Side
    """The constraints."""
    columns: Side
    """The variables."""
    primal_objective: float
    """``c'x + offset``."""
    dual_objective: float
    """Offset plus every price times the end that its sign names."""
    gap: float
    """Primal minus dual objective, turned round when maximizing."""
    at_stake: float
    """Objective at stake in the residuals: each violation times its multiplier."""
    residuals: dict[Condition, Residuals]
    """By condition; without ``STATIONARITY`` where no reduced costs were reported."""


@dataclass(frozen=True)
class Low:
    """What a file's numbers have beyond their nearest doubles; None where they are doubles."""

    x: Vector | None = None
    """Of the plan, shape ``(n,)``."""
    y: Vector | None = None
    """Of the dual values, shape ``(m,)``."""
    z: Vector | None = None
    """Of the reduced costs, shape ``(n,)``."""


NO_LOW = Low()
"""For an answer of doubles."""


def measure(
    lp: LinearProgram,
    x: Vector,
    y: Vector,
    z: Vector | None = None,
    numbers: FileNumbers | None = None,
    low: Low = NO_LOW,
) -> Measurement:
    """Measure every KKT residual of an answer.

    Parameters
    ----------
    x, y
        Plan, shape ``(n,)``, and dual values, shape ``(m,)``, signs as in
        :mod:`lpview.model`.
    z
        Reduced costs that the answer reports, shape ``(n,)``, or None. Only
        stationarity looks at them; everything else uses ``c - A'y``.
    numbers
        ``FileNumbers(lp)``, where the caller has it already.
    low
        What is to be added to ``x``, ``y`` and ``z``, where these are the doubles
        nearest to numbers of a file.
    """
    numbers = numbers or FileNumbers(lp)
    with np.errstate(over="ignore", invalid="ignore"):
        row_value, row_term = numbers.row_values(x, low.x)
        price, price_term = numbers.reduced_costs(y, low.y)
        sign = lp.sense.sign
        plan, duals = _pair(x, low.x), _pair(y, low.y)
        rows = _side(sign, row_value, row_term, duals, np.abs(y), numbers.row_ends)
        columns = _side(sign, plan, np.abs(x), price, price_term, numbers.column_ends)
        primal = numbers.objective(x, low.x)
        products = (*rows.dual_objective, *columns.dual_objective, numbers.offset)
        dual = accurate.total(products)
        gap = sign * accurate.total([np.array([*primal, -dual[0], -dual[1]])])[0]
        residuals = _residuals(rows, columns, (primal[0], dual[0], gap))
        if z is not None:
            off = np.abs(accurate.minus(price, _pair(z, low.z))[0])
            # Rows have no such condition, but are counted like all lines.
            rows_too = (np.zeros(lp.m), off), (np.zeros(lp.m), price_term)
            residuals[Condition.STATIONARITY] = Residuals(*map(np.concatenate, rows_too))
        stake = _at_stake(rows, columns)
    return Measurement(rows, columns, primal[0], dual[0], gap, stake, residuals)


def _pair(values: Vector, low: Vector | None) -> Pair:
    return values, np.zeros_like(values) if low is None else low


def _side(
    sign: float, value: Pair, value_term: Vector, price: Pair, price_term: Vector,
    ends: tuple[Pair, Pair],
) -> Side:  # fmt: skip
    below = accurate.minus(value, ends[0])
    above = accurate.minus(ends[1], value)
    named_lower = sign * price[0] > 0
    end: Pair = tuple(np.where(named_lower, a, b) for a, b in zip(*ends, strict=True))  # type: ignore[assignment]
    distance: Pair = tuple(np.where(named_lower, a, b) for a, b in zip(below, above, strict=True))  # type: ignore[assignment]
    finite = np.isfinite(end[0]) & (price[0] != 0)
    distance = tuple(np.where(finite, part, 0.0) for part in distance)  # type: ignore[assignment]
    end = tuple(np.where(finite, part, 0.0) for part in end)  # type: ignore[assignment]
    return Side(
        value=value[0],
        below=_clear(below, ends[0]),
        above=_clear(above, ends[1]),
        price=price[0],
        named_lower=named_lower,
        complementarity=np.abs(accurate.times(price, distance)[0]),
        value_term=value_term,
        price_term=price_term,
        dual_objective=accurate.times(price, end),
        misplaced=np.where(finite, 0.0, np.abs(price[0])),
        end=end[0],
    )


def _clear(distance: Pair, end: Pair) -> Vector:
    """Distances with ``inf`` where there is no end (there the difference is nan)."""
    return np.where(np.isinf(end[0]), np.inf, distance[0])


def _residuals(
    rows: Side, columns: Side, objectives: tuple[float, float, float]
) -> dict[Condition, Residuals]:
    both = (rows, columns)
    primal, dual, gap = objectives

    def joined(parts: list[Vector]) -> Vector:
        return np.concatenate(parts)

    return {
        Condition.PRIMAL: Residuals(
            joined([_violation(s) for s in both]),
            joined([_violation_term(s) for s in both]),
        ),
        Condition.DUAL: Residuals(
            joined([s.misplaced for s in both]), joined([s.price_term for s in both])
        ),
        Condition.COMPLEMENTARITY: Residuals(
            joined([s.complementarity for s in both]),
            joined([np.abs(s.price) * np.maximum(np.abs(s.value), np.abs(s.end)) for s in both]),
        ),
        Condition.GAP: Residuals(np.array([abs(gap)]), np.array([max(abs(primal), abs(dual))])),
    }


def _violation(side: Side) -> Vector:
    worst: Vector = np.maximum(-side.slack, 0.0)
    return np.where(np.isnan(side.value), np.nan, worst)


def _violation_term(side: Side) -> Vector:
    """Largest of the value's terms and the violated end (its size from the slack)."""
    end = np.where(side.below < side.above, side.value - side.below, side.value + side.above)
    return np.maximum(side.value_term, np.where(np.isfinite(end), np.abs(end), 0.0))


def _at_stake(rows: Side, columns: Side) -> float:
    """Violations times prices, and misplaced prices times what they act on."""
    stake = 0.0
    for side in (rows, columns):
        moved = np.where(np.isfinite(side.slack), np.abs(side.slack), np.abs(side.value))
        stake += float(np.sum(_violation(side) * np.abs(side.price)))
        stake += float(np.sum(side.misplaced * moved))
    return stake
