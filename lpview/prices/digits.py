"""How many digits of an answer to believe.

A basis fixes plan and prices exactly: ``A[R, C] x_C = sides`` and ``A[R, C]' y_R = c_C``,
with the nonbasic lines at their ends. What is reported differs by rounding. With ``B`` for
``A[R, C]``, the error of a plan ``x`` is ``B^-1 r``, where ``r`` is what ``x`` leaves of
the equations; ``r`` is summed from the file's digits (`lpview.accurate`), and ``B^-1 r`` is
added to ``x`` in pairs of doubles, several times (iterative refinement; Higham 2002,
"Accuracy and Stability of Numerical Algorithms", section 12.1). The error of each line is
then estimated by::

    |x_j - refined x_j| + |last step_j|

where the last step is rounding far below the first term while the condition of ``B`` stays
below ``1e15`` or so, and makes the estimate large beyond. A bound on every error that the
condition allows, ``|B^-1| (|r| + eps |A| |x|)``, would say less: it is often off by orders
of magnitude. Digits are ``-log10`` of the error over the size of the refined number, from
0 to 16, which is what a double holds.

This is about rounding. The condition says how far the answer follows changes of the
numbers: a relative change of ``t`` in the scaled coefficients of the basis changes the plan
by up to about the condition times ``t``.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.accurate import Pair, minus, total, two_product, two_sum
from lpview.answer import Basis, LineStatus
from lpview.basis import BasisMatrix, SingularBasis, factor_basis
from lpview.file_numbers import FileNumbers
from lpview.model import LinearProgram, Vector
from lpview.outcomes import Optimal
from lpview.prices.lines import Index, Mask
from lpview.prices.results import NoPrices

MOST = 16.0
"""Digits of a double, rounded up."""

ROUNDS = 4
"""Refinement steps, of which the first one shows the error and the last one the doubt."""

NOTHING = 1e-25
"""Errors below this times the largest number beside them are none."""


@dataclass(frozen=True)
class Spread:
    """Sizes of the coefficients of one kind of line."""

    largest: float
    """Largest over smallest coefficient, in size, of the line where that is most; 1 for a
    model without coefficients."""
    line: int | None
    """That line, numbered as in `lpview.kkt`."""


@dataclass(frozen=True, eq=False)
class Digits:
    """What is to be believed of an answer."""

    condition: float
    """Condition number of the scaled basis matrix in the one-norm, estimated."""
    smallest: float
    """Smallest coefficient of the model in size; 0 without coefficients."""
    largest: float
    """Largest one."""
    by_row: Spread
    """The row whose coefficients differ most."""
    by_column: Spread
    """The column whose coefficients differ most."""
    objective: float
    """Digits of the primal objective, 0 to 16."""
    x: Vector
    """Digits of each variable, shape ``(n,)``, 0 to 16."""
    y: Vector
    """Digits of each dual value, shape ``(m,)``, 0 to 16."""
    x_error: Vector
    """Estimated error of each variable, shape ``(n,)``, its own unit."""
    y_error: Vector
    """Estimated error of each dual value, shape ``(m,)``, its own unit."""
    worst_column: int | None
    """The variable with fewest digits among those that are not zero; None if all are."""
    worst_row: int | None
    """The row with fewest digits among those with a price; None if there are none."""


def digits(found: Optimal) -> Digits | NoPrices:
    """Estimate how many digits of a checked answer are right."""
    basis, lp = found.answer.basis, found.head.model
    if basis is None:
        return NoPrices("the answer comes without a basis (leave --no-crossover out)")
    matrix = factor_basis(lp, basis)
    if isinstance(matrix, SingularBasis):
        return NoPrices(f"the basis {matrix.reason}")
    numbers = FileNumbers(lp)
    with np.errstate(over="ignore", invalid="ignore"):
        plan, x_step = _refined_plan(lp, basis, matrix, numbers, found.answer.x)
        prices, y_step = _refined_prices(lp, basis, matrix, numbers, found.answer.y)
        x_error = _error(found.answer.x, plan, x_step)
        y_error = _error(found.answer.y, prices, y_step)
        objective, objective_error = _objective(found, numbers, plan, x_step)
    x, y = _digits(x_error, plan), _digits(y_error, prices)
    zero, m = found.head.request.zero, lp.m
    smallest, largest = _sizes(lp.A.data)
    return Digits(
        condition=matrix.condition,
        smallest=smallest,
        largest=largest,
        by_row=_spread(lp.A.data, lp.A.indptr, 0),
        by_column=_spread(lp.A_by_column.data, lp.A_by_column.indptr, m),
        objective=float(_digits(np.array([objective_error]), objective)[0]),
        x=x,
        y=y,
        x_error=x_error,
        y_error=y_error,
        worst_column=_worst(x, np.abs(found.answer.x) > zero),
        worst_row=_worst(y, found.marks.priced[:m]),
    )


def _refined_plan(
    lp: LinearProgram, basis: Basis, matrix: BasisMatrix, numbers: FileNumbers, x: Vector
) -> tuple[Pair, Vector]:
    """The plan of the basis in pairs of doubles, and the last step that led there."""
    low, high = numbers.column_ends
    at_low, at_high = basis.column == LineStatus.LOWER, basis.column == LineStatus.UPPER
    rest = [np.where(at_low, low[k], np.where(at_high, high[k], 0.0)) for k in (0, 1)]
    resting = np.isfinite(rest[0])
    plan: Pair = (np.where(resting, rest[0], 0.0), np.where(resting, rest[1], 0.0))
    plan[0][matrix.columns], plan[1][matrix.columns] = x[matrix.columns], 0.0
    rows, step = matrix.rows, np.zeros(lp.n)
    at_upper = basis.row[rows] == LineStatus.UPPER
    sides = tuple(
        np.where(at_upper, above[rows], below[rows])
        for below, above in zip(*numbers.row_ends, strict=True)
    )
    for _ in range(ROUNDS):
        value, _ = numbers.row_values(plan[0])
        gap = minus((sides[0], sides[1]), (value[0][rows], value[1][rows]))[0]
        gap = gap - (lp.A @ plan[1])[rows]
        # A free row that rests nowhere in particular fixes nothing.
        gap = np.where(np.isfinite(sides[0]), gap, 0.0)
        plan = _moved(plan, matrix.columns, matrix.plan(gap), step)
    return plan, step


def _refined_prices(
    lp: LinearProgram, basis: Basis, matrix: BasisMatrix, numbers: FileNumbers, y: Vector
) -> tuple[Pair, Vector]:
    """The prices of the basis, likewise."""
    prices: Pair = (np.where(basis.row == LineStatus.BASIC, 0.0, y), np.zeros(lp.m))
    step = np.zeros(lp.m)
    for _ in range(ROUNDS):
        reduced, _ = numbers.reduced_costs(prices[0])
        gap = (reduced[0] - lp.A_by_column.T @ prices[1])[matrix.columns]
        prices = _moved(prices, matrix.rows, matrix.prices(gap), step)
    return prices, step


def _moved(values: Pair, where: Index, by: Vector, step: Vector) -> Pair:
    """The values with a step added, which is also written into ``step``."""
    high, low = values[0].copy(), values[1].copy()
    high[where], error = two_sum(high[where], by)
    high[where], low[where] = two_sum(high[where], low[where] + error)
    step[where] = by
    return high, low


def _error(reported: Vector, refined: Pair, step: Vector) -> Vector:
    error: Vector = np.abs(minus((reported, np.zeros_like(reported)), refined)[0]) + np.abs(step)
    least = NOTHING * float(np.max(np.abs(refined[0]), initial=0.0))
    return np.where(np.isnan(error), np.inf, np.where(error <= least, 0.0, error))


def _objective(
    found: Optimal, numbers: FileNumbers, plan: Pair, step: Vector
) -> tuple[Pair, float]:
    """The objective of the refined plan, and the error of the reported one."""
    (c, c_low), (x, x_low) = numbers.c, plan
    high, low = two_product(c, x)
    exact = total([high, low, c_low * x, c * x_low, numbers.offset])
    doubt = float(np.abs(c) @ np.abs(step))
    reported = found.measurement.primal_objective
    error = abs(total([np.array([reported, -exact[0], -exact[1]])])[0]) + doubt
    pair = (np.array([exact[0]]), np.array([exact[1]]))
    return pair, error if np.isfinite(error) else float("inf")


def _digits(error: Vector, refined: Pair) -> Vector:
    """Digits of numbers with these errors; those of 0 are all right or all wrong."""
    size = np.abs(refined[0] + refined[1])
    with np.errstate(divide="ignore", invalid="ignore"):
        count = -np.log10(error / size)
    count = np.where(error == 0.0, MOST, np.where(size == 0.0, 0.0, count))
    return np.clip(np.where(np.isnan(count), 0.0, count), 0.0, MOST) + 0.0


def _worst(count: Vector, among: Mask) -> int | None:
    if not among.any():
        return None
    return int(np.argmin(np.where(among, count, np.inf)))


def _sizes(coefficients: Vector) -> tuple[float, float]:
    if not coefficients.size:
        return 0.0, 0.0
    sizes = np.abs(coefficients)
    return float(sizes.min()), float(sizes.max())


def _spread(coefficients: Vector, starts: NDArray[np.integer], first: int) -> Spread:
    filled = np.flatnonzero(np.diff(starts))
    if not filled.size:
        return Spread(1.0, None)
    sizes, heads = np.abs(coefficients), starts[:-1][filled]
    ratio = np.maximum.reduceat(sizes, heads) / np.minimum.reduceat(sizes, heads)
    worst = int(np.argmax(ratio))
    return Spread(float(ratio[worst]), first + int(filled[worst]))
