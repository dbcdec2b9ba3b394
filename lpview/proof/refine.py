"""From a basis that is not exactly optimal to one that is nearer.

What is left to be solved around an exact basic solution ``(x, y)`` is a program of its own:
distances to sides and bounds, and prices, each scaled up until the largest violation is 1,
so that a floating solver cannot overlook it (Gleixner, Steffy and Wolter 2016, "Iterative
refinement for linear programming", INFORMS Journal on Computing 28). Row values become
variables of that program, because they carry prices too.
"""

from __future__ import annotations

import math
from dataclasses import replace
from fractions import Fraction
from itertools import pairwise

import numpy as np
from scipy.sparse import csr_array, hstack, identity

from lpview.answer import Basis, LineStatus
from lpview.model import LinearProgram, Vector
from lpview.proof.basis import BasisSolution, quotient
from lpview.proof.integers import End, Integers
from lpview.proof.results import ExactVector
from lpview.run import Ask, Claim, Method, SolveSettings, Unsolved

FAR = 1e15
"""Scaled distances beyond this are no limit to what a violation asks for."""

MOST_BITS = 200
"""Distances and prices are scaled up by at most so many powers of two."""


def next_basis(
    numbers: Integers, basis: Basis, solution: BasisSolution, ask: Ask, settings: SolveSettings
) -> Basis | Unsolved:
    """A basis for the scaled-up rest of the problem, solved from ``basis``."""
    rest = _rest(numbers, solution)
    m, n = numbers.lp.m, numbers.lp.n
    start = Basis(np.concatenate([basis.column, basis.row]), np.full(m, LineStatus.LOWER, np.int8))
    wanted = SolveSettings(
        method=Method.SIMPLEX,
        feasibility=settings.feasibility,
        time_limit=settings.time_limit,
        start=start,
    )
    result = ask(rest, wanted)
    if isinstance(result, Unsolved) and result.run.claim is Claim.UNKNOWN:
        # Now and then a run from a given basis ends without a status.
        result = ask(rest, replace(wanted, start=None))
    if isinstance(result, Unsolved):
        return result
    found = result.answer.basis
    if found is None:
        return Unsolved(result.run)
    row = found.column[n:].copy()
    # A row of the rest that is basic is redundant there: its value is basic here.
    row[found.row == LineStatus.BASIC] = LineStatus.BASIC
    return Basis(found.column[:n].copy(), row)


def _rest(numbers: Integers, solution: BasisSolution) -> LinearProgram:
    lp = numbers.lp
    by_value = _power(solution.outside.values())
    by_price = _power(solution.wrong.values())
    values = _row_values(numbers, solution.x)
    reduced = reduced_costs(numbers, solution.y)
    plan = [solution.x[j] for j in range(lp.n)]
    below = _distances(numbers.column_ends[0], plan, by_value, -np.inf)
    above = _distances(numbers.column_ends[1], plan, by_value, np.inf)
    row_below = _distances(numbers.row_ends[0], values, by_value, -np.inf)
    row_above = _distances(numbers.row_ends[1], values, by_value, np.inf)
    prices = [*reduced, *(solution.y[i] for i in range(lp.m))]
    A = csr_array(hstack([lp.A, -identity(lp.m)], format="csr"))
    A.sort_indices()
    return LinearProgram(
        name=f"{lp.name}: rest",
        sense=lp.sense,
        columns=tuple(map(str, range(lp.n + lp.m))),
        rows=lp.rows,
        c=np.array([_double(p * by_price) for p in prices]),
        A=A,
        row_lower=np.zeros(lp.m),
        row_upper=np.zeros(lp.m),
        lower=np.concatenate([below, row_below]),
        upper=np.concatenate([above, row_above]),
    )


def _power(violations: object) -> int:
    """The power of two that makes the largest violation about 1."""
    largest = max((abs(v) for v in violations), default=Fraction(0))  # type: ignore[attr-defined]
    if largest == 0 or largest >= 1:
        return 1
    bits = largest.denominator.bit_length() - largest.numerator.bit_length()
    return 1 << min(max(bits, 0), MOST_BITS)


def _distances(ends: list[End], values: list[Fraction], by: int, none: float) -> Vector:
    scaled = [
        none if end is None else _double((end - value) * by)
        for end, value in zip(ends, values, strict=True)
    ]
    return np.array([none if abs(v) > FAR else v for v in scaled])


def _double(value: Fraction) -> float:
    return quotient(value.numerator, value.denominator)


def _row_values(numbers: Integers, x: ExactVector) -> list[Fraction]:
    A = numbers.lp.A
    values = []
    for i in range(numbers.lp.m):
        begin, end = int(A.indptr[i]), int(A.indptr[i + 1])
        terms = zip(numbers.coefficients[begin:end], A.indices[begin:end].tolist(), strict=True)
        total = sum(a * x.numerators[j] for a, j in terms)
        values.append(Fraction(total, x.denominator * numbers.scale[i]))
    return values


def reduced_costs(numbers: Integers, y: ExactVector) -> list[Fraction]:
    """``c - A'y``, exactly, in the model's own sense."""
    numerators, denominator = reduced_numerators(numbers, y)
    return [Fraction(n, denominator) for n in numerators]


def reduced_numerators(numbers: Integers, y: ExactVector) -> tuple[list[int], int]:
    """``c - A'y`` over one denominator, which is that of ``y`` times the scales."""
    lp, A = numbers.lp, numbers.lp.A_by_column
    common = math.lcm(numbers.cost_scale, *set(numbers.scale))
    used = [n * (common // s) for n, s in zip(y.numerators, numbers.scale, strict=True)]
    cost = common // numbers.cost_scale * y.denominator
    order, indices = lp.by_column_order.tolist(), A.indices.tolist()
    totals = []
    for j, (begin, end) in enumerate(pairwise(A.indptr.tolist())):
        terms = (numbers.coefficients[order[k]] * used[indices[k]] for k in range(begin, end))
        totals.append(numbers.costs[j] * cost - sum(terms))
    return totals, common * y.denominator
