"""A basis solved exactly, and what is wrong with it, exactly.

With the basic columns ``C`` and the nonbasic rows ``R``, the plan solves
``A[R, C] x_C = b_R - A[R, N] x_N`` and the dual values ``A[R, C]' y_R = c_C``. Where the
plan keeps every side and bound and every price has a sign that its line allows, both are
optimal: prices stand on nonbasic lines only, and those sit at an end.

Almost all of the signs are plain in doubles; a sum is worked out in integers only where its
rounding could matter.
"""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass
from fractions import Fraction
from typing import Any

import numpy as np
from numpy.typing import NDArray

from lpview.answer import Basis, LineStatus, Statuses
from lpview.basis import BasisMatrix
from lpview.model import LinearProgram, Vector
from lpview.proof.integers import End, Integers
from lpview.proof.linear import solve, system
from lpview.proof.results import ExactVector

Between = Callable[[], None]
Mask = NDArray[np.bool_]

ROUNDING = 2.0**-52
"""A sum of doubles is trusted to this times the sum of its terms' sizes, for each term and a
few more: twice the worst that can happen."""


VANISHING, TINY = 1e-290, 1e-280
"""Added to factors and to sums before `ROUNDING`: far more than what underflow can lose, and
what is so small is worked out in integers."""


@dataclass(frozen=True, eq=False)
class BasisSolution:
    """The plan and the dual values of a basis."""

    x: ExactVector
    """The plan, ``n`` entries."""
    y: ExactVector
    """Dual values, ``m`` entries."""
    outside: dict[int, Fraction]
    """By how much lines leave their sides or bounds, positive above and negative below;
    lines numbered as in `lpview.kkt`, those that keep them left out."""
    wrong: dict[int, Fraction]
    """Prices of a sign that their line does not allow, in the model's own sense."""
    value: Vector
    """Row values, then the plan, as doubles, shape ``(m + n,)``."""
    price: Vector
    """Dual values, then reduced costs, as doubles, shape ``(m + n,)``."""
    zero_slack: Mask
    """Lines exactly at an end, shape ``(m + n,)``."""
    zero_price: Mask
    """Lines whose price is exactly 0, shape ``(m + n,)``."""

    @property
    def bits(self) -> int:
        """Bits of the largest numerator or denominator."""
        numbers = (*self.x.numerators, *self.y.numerators, self.x.denominator, self.y.denominator)
        return max(abs(number).bit_length() for number in numbers)


def solve_basis(
    numbers: Integers, basis: Basis, matrix: BasisMatrix, between: Between
) -> BasisSolution:
    """Solve a basis exactly.

    Raises
    ------
    lpview.proof.linear.NotSolvedError
        Floating factors do not suffice.
    """
    basis = _with_ends(numbers.lp, basis)
    x = _plan(numbers, basis, matrix, between)
    y, scaled = _dual_values(numbers, matrix, between)
    value, zero_slack, outside = _values(numbers, basis, x)
    price, zero_price, wrong = _prices(numbers, basis, scaled, y)
    return BasisSolution(x, y, outside, wrong, value, price, zero_slack, zero_price)


def _with_ends(lp: LinearProgram, basis: Basis) -> Basis:
    """The basis with lines free that rest on an end that does not exist."""
    return Basis(
        _freed(basis.column, lp.lower, lp.upper), _freed(basis.row, lp.row_lower, lp.row_upper)
    )


def _freed(statuses: Statuses, low: Vector, high: Vector) -> Statuses:
    freed = statuses.copy()
    freed[(statuses == LineStatus.LOWER) & np.isinf(low)] = LineStatus.FREE
    freed[(statuses == LineStatus.UPPER) & np.isinf(high)] = LineStatus.FREE
    return freed


def _plan(numbers: Integers, basis: Basis, matrix: BasisMatrix, between: Between) -> ExactVector:
    resting = _resting(numbers.column_ends, basis.column)
    right = [
        _rest_of_row(numbers, int(i), _at(numbers.row_ends, int(i), int(basis.row[i])), resting)
        for i in matrix.rows
    ]
    common = math.lcm(*(v.denominator for v in (*right, *resting.values())))
    scales = numbers.scale_sizes[matrix.rows]
    part = system(numbers.positions[matrix.rows][:, matrix.columns], numbers.coefficients)
    found, denominator = solve(
        part,
        [v.numerator * (common // v.denominator) for v in right],
        lambda b: matrix.plan(b / scales),
        between,
    )
    numerators = [0] * numbers.lp.n
    for j, v in resting.items():
        numerators[j] = v.numerator * (common // v.denominator) * denominator
    for j, n in zip(matrix.columns.tolist(), found, strict=True):
        numerators[j] = n
    return ExactVector(tuple(numerators), common * denominator)


def _resting(ends: tuple[list[End], list[End]], statuses: np.ndarray) -> dict[int, Fraction]:
    """Where nonbasic columns rest; those at 0 left out."""
    places = np.flatnonzero(statuses != LineStatus.BASIC).tolist()
    values = {j: _at(ends, j, int(statuses[j])) for j in places}
    return {j: v for j, v in values.items() if v}


def _at(ends: tuple[list[End], list[End]], k: int, status: int) -> Fraction:
    if status == LineStatus.FREE:
        return Fraction(0)
    end = ends[1 if status == LineStatus.UPPER else 0][k]
    return Fraction(0) if end is None else end


def _rest_of_row(
    numbers: Integers, i: int, side: Fraction, resting: dict[int, Fraction]
) -> Fraction:
    """What the basic columns have to add up to in a scaled row."""
    A = numbers.lp.A
    begin, end = int(A.indptr[i]), int(A.indptr[i + 1])
    total = side * numbers.scale[i]
    for k, j in zip(range(begin, end), A.indices[begin:end].tolist(), strict=True):
        if j in resting:
            total -= numbers.coefficients[k] * resting[j]
    return total


def _dual_values(
    numbers: Integers, matrix: BasisMatrix, between: Between
) -> tuple[ExactVector, ExactVector]:
    """Dual values, and the same divided by the scales of the rows."""
    scales = numbers.scale_sizes[matrix.rows]
    positions = numbers.positions[matrix.rows][:, matrix.columns].T.tocsr()
    found, denominator = solve(
        system(positions, numbers.coefficients),
        [numbers.costs[j] for j in matrix.columns.tolist()],
        lambda c: matrix.prices(c) / scales,
        between,
    )
    scaled = [0] * numbers.lp.m
    for i, n in zip(matrix.rows.tolist(), found, strict=True):
        scaled[i] = n
    common = denominator * numbers.cost_scale
    y = tuple(n * s for n, s in zip(scaled, numbers.scale, strict=True))
    return ExactVector(y, common), ExactVector(tuple(scaled), common)


def doubles(numbers: ExactVector) -> Vector:
    """Each entry as the nearest double, infinite where none is near."""
    return np.array([quotient(n, numbers.denominator) for n in numbers.numerators])


def quotient(top: int, bottom: int) -> float:
    """A fraction as a double, infinite where none is near; ``bottom`` is positive."""
    try:
        return top / bottom
    except OverflowError:
        return math.inf if top > 0 else -math.inf


def _values(
    numbers: Integers, basis: Basis, x: ExactVector
) -> tuple[Vector, Mask, dict[int, Fraction]]:
    """All values as doubles; exactly which are at an end, and how far some are outside."""
    lp, A = numbers.lp, numbers.lp.A
    plan = doubles(x)
    with np.errstate(over="ignore", invalid="ignore"):
        rows = A @ plan
        size = _sizes(abs(A), plan, np.diff(A.indptr))
    outside: dict[int, Fraction] = {}
    zero = np.concatenate([_at_end(basis.row), _at_end(basis.column)])
    near = _near(rows, size, lp.row_lower, lp.row_upper)
    for i in np.flatnonzero(near & _loose(basis.row, lp.row_lower, lp.row_upper)).tolist():
        begin, end = int(A.indptr[i]), int(A.indptr[i + 1])
        terms = zip(numbers.coefficients[begin:end], A.indices[begin:end].tolist(), strict=True)
        total = sum(a * x.numerators[j] for a, j in terms)
        value = Fraction(total, x.denominator * numbers.scale[i])
        low, high = numbers.row_ends[0][i], numbers.row_ends[1][i]
        zero[i] = value in (low, high)
        _note(outside, i, value, low, high)
    near = _near(plan, np.abs(plan) * 8 + TINY, lp.lower, lp.upper)
    for j in np.flatnonzero(near & _loose(basis.column, lp.lower, lp.upper)).tolist():
        low, high = numbers.column_ends[0][j], numbers.column_ends[1][j]
        zero[lp.m + j] = x[j] in (low, high)
        _note(outside, lp.m + j, x[j], low, high)
    return np.concatenate([rows, plan]), zero, outside


def _loose(statuses: Statuses, low: Vector, high: Vector) -> Mask:
    """Lines that no end holds, and those whose two ends only a longer number tells apart."""
    loose: Mask = ~_at_end(statuses) | (low == high)
    return loose


def _at_end(statuses: Statuses) -> Mask:
    held: Mask = (statuses == LineStatus.LOWER) | (statuses == LineStatus.UPPER)
    return held


def _sizes(A: Any, values: Vector, counts: NDArray[np.integer]) -> Vector:
    """What `ROUNDING` times bounds the error of ``A @ values`` by, underflow included."""
    sizes: Vector = (A @ (np.abs(values) + VANISHING)) * (counts + 8) + TINY
    return sizes


def _near(value: Vector, size: Vector, low: Vector, high: Vector) -> NDArray[np.bool_]:
    """Values that are not plainly inside; a nan counts as not."""
    ends = np.maximum(_finite(low), _finite(high))
    with np.errstate(over="ignore", invalid="ignore"):
        margin = ROUNDING * np.maximum(size, 8 * ends)
        inside: NDArray[np.bool_] = (value - low > margin) & (high - value > margin)
    return ~inside


def _finite(ends: Vector) -> Vector:
    return np.where(np.isfinite(ends), np.abs(ends), 0.0)


def _note(outside: dict[int, Fraction], line: int, value: Fraction, low: End, high: End) -> None:
    if low is not None and value < low:
        outside[line] = value - low
    if high is not None and value > high:
        outside[line] = value - high


def _prices(
    numbers: Integers, basis: Basis, scaled: ExactVector, y: ExactVector
) -> tuple[Vector, Mask, dict[int, Fraction]]:
    """All prices as doubles; exactly which are 0, and those of a wrong sign."""
    lp, A = numbers.lp, numbers.lp.A_by_column
    dual = doubles(y)
    counts = np.diff(A.indptr)
    with np.errstate(over="ignore", invalid="ignore"):
        reduced = lp.c - lp.A.T @ dual
        size = np.abs(lp.c) * (counts + 8) + _sizes(abs(lp.A).T, dual, counts)
    basic = basis.column == LineStatus.BASIC
    zero = np.concatenate([np.array([n == 0 for n in y.numerators], dtype=bool), basic])
    wrong: dict[int, Fraction] = {}
    sign = int(lp.sense.sign)
    for i in np.flatnonzero(basis.row != LineStatus.BASIC).tolist():
        allowed = lp.is_equality[i] or _is_allowed(sign * y.numerators[i], int(basis.row[i]))
        if not allowed:
            wrong[i] = y[i]
    margin = ROUNDING * size
    toward = sign * reduced * np.where(basis.column == LineStatus.UPPER, -1.0, 1.0)
    plain = (toward > margin) & (basis.column != LineStatus.FREE)
    plain |= lp.is_fixed & (np.abs(reduced) > margin)
    for j in np.flatnonzero(~basic & ~plain).tolist():
        begin, end = int(A.indptr[j]), int(A.indptr[j + 1])
        total = numbers.costs[j] * (scaled.denominator // numbers.cost_scale)
        places = lp.by_column_order[begin:end].tolist()
        for k, i in zip(places, A.indices[begin:end].tolist(), strict=True):
            total -= numbers.coefficients[k] * scaled.numerators[i]
        zero[lp.m + j] = total == 0
        price = Fraction(total, scaled.denominator)
        reduced[j] = quotient(total, scaled.denominator)
        if not lp.is_fixed[j] and not _is_allowed(sign * total, int(basis.column[j])):
            wrong[lp.m + j] = price
    reduced[basic] = 0.0
    return np.concatenate([dual, reduced]), zero, wrong


def _is_allowed(price: int, status: int) -> bool:
    """Whether a price, as if minimizing, has a sign that the line's end allows."""
    if status == LineStatus.LOWER:
        return price >= 0
    return price <= 0 if status == LineStatus.UPPER else price == 0
