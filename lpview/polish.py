"""Taking the rounding out of a solver's answer, and nothing else.

A solver stops with the rounding of thousands of updates in its plan and prices:
a product of a price near 1e3 and a slack near 1e-11 then exceeds 1e-9 although the
basis is right. Here the basis is solved again by our own factorization, its
residuals summed from the file's digits and carried in pairs of doubles (iterative
refinement; Higham 2002, "Accuracy and Stability of Numerical Algorithms", section
12.1), and rounded once. An answer that is off by more than rounding is not touched,
so that a wrong one still fails its check.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from lpview.accurate import Pair, two_sum
from lpview.answer import Answer, Basis, LineStatus
from lpview.basis import BasisMatrix
from lpview.file_numbers import FileNumbers
from lpview.kkt import Condition
from lpview.model import LinearProgram, Vector
from lpview.verdict import Verdict

ROUNDING = 1e-6
"""Scaled residuals beyond this are no rounding: the answer stays as it is."""

ROUNDS = 3
"""Refinement steps; each gains the digits that the condition leaves over."""


@dataclass(frozen=True)
class OwnNumbers:
    """The answer that was checked is the solver's own."""


@dataclass(frozen=True)
class Polished:
    """The answer that was checked had its rounding taken out."""

    condition: Condition
    """The condition that the solver's own numbers fail worst."""
    scaled: float
    """Their scaled residual there."""


Origin = OwnNumbers | Polished


def is_rounding(verdicts: tuple[Verdict, ...]) -> bool:
    """Whether something failed, and nothing by more than rounding explains."""
    failed = any(verdict.passed is False for verdict in verdicts)
    return failed and all(verdict.scaled <= ROUNDING for verdict in verdicts)


def worst_failure(verdicts: tuple[Verdict, ...]) -> Verdict:
    """The verdict with the largest scaled residual."""
    return max(verdicts, key=lambda verdict: verdict.scaled)


def polished(
    lp: LinearProgram, answer: Answer, basis: Basis, matrix: BasisMatrix, numbers: FileNumbers
) -> Answer:
    """The answer with plan and dual values solved again from its basis.

    The reported reduced costs stay, so that stationarity still compares them.
    """
    x = _resting(lp, basis)
    y = np.where(basis.row == LineStatus.BASIC, 0.0, answer.y)
    x[matrix.columns] = answer.x[matrix.columns]
    plan: Pair = (x, np.zeros(lp.n))
    prices: Pair = (y, np.zeros(lp.m))
    with np.errstate(over="ignore", invalid="ignore"):
        for _ in range(ROUNDS):
            plan = _nearer_plan(lp, basis, matrix, numbers, plan)
            prices = _nearer_prices(lp, matrix, numbers, prices)
    return replace(answer, x=plan[0] + 0.0, y=prices[0] + 0.0)


def _resting(lp: LinearProgram, basis: Basis) -> Vector:
    """Nonbasic columns at the bound that the basis names, 0 elsewhere."""
    at_lower, at_upper = basis.column == LineStatus.LOWER, basis.column == LineStatus.UPPER
    x = np.where(at_lower, lp.lower, np.where(at_upper, lp.upper, 0.0))
    return np.where(np.isfinite(x), x, 0.0)


def _nearer_plan(
    lp: LinearProgram, basis: Basis, matrix: BasisMatrix, numbers: FileNumbers, x: Pair
) -> Pair:
    rows = matrix.rows
    at_upper = basis.row[rows] == LineStatus.UPPER
    low, high = numbers.row_ends
    side = tuple(np.where(at_upper, high[k][rows], low[k][rows]) for k in (0, 1))
    value, _ = numbers.row_values(x[0])
    gap = (side[0] - value[0][rows]) + (side[1] - value[1][rows]) - (lp.A @ x[1])[rows]
    gap = np.where(np.isfinite(gap), gap, 0.0)  # a free row rests nowhere in particular
    return _moved(x, matrix.columns, matrix.plan(gap))


def _nearer_prices(lp: LinearProgram, matrix: BasisMatrix, numbers: FileNumbers, y: Pair) -> Pair:
    reduced, _ = numbers.reduced_costs(y[0])
    gap = (reduced[0] - lp.A_by_column.T @ y[1])[matrix.columns]
    return _moved(y, matrix.rows, matrix.prices(gap))


def _moved(values: Pair, where: np.ndarray, step: Vector) -> Pair:
    high, low = values[0].copy(), values[1].copy()
    high[where], low[where] = two_sum(high[where], low[where] + step)
    return high, low
