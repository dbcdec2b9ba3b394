"""A second route to the oracle's numbers: every basis of a tiny program, one by one.

A choice of m basic lines among the m rows and n columns fixes prices (basic lines have
price zero) and, with every nonbasic line at one of its ends or, without ends, at 0, a
plan. Every minimal face of the feasible plans and of the feasible prices holds a point
found in this way, so whatever is finite is attained at one; infinite ends are not seen.
"""

from __future__ import annotations

from collections.abc import Iterator
from fractions import Fraction
from itertools import combinations, product
from math import inf

from tests.prices.exact import Program

Vector = list[Fraction]


def basic_plans(program: Program) -> list[Vector]:
    """Feasible basic plans, some of them more than once."""
    return [x for x in _candidates(program) if _feasible(program, x)]


def basic_prices(program: Program) -> list[tuple[Vector, Fraction]]:
    """Feasible basic prices of all lines, inside signs, each with the dual objective."""
    m, found = len(program.rows), []
    for basic in combinations(range(len(program.ends)), m):
        sides = [Fraction(0) if k < m else program.c[k - m] for k in basic]
        y = _solution([program.price_lines[k] for k in basic], sides)
        if y is not None:
            z = [c - _dot(a, y) for c, a in zip(program.c, program.price_lines[m:], strict=True)]
            objective = _dual_objective(program, [*y, *z])
            if objective is not None:
                found.append(([*y, *z], objective))
    return found


def _candidates(program: Program) -> Iterator[Vector]:
    lines = range(len(program.ends))
    for nonbasic in combinations(lines, len(program.c)):
        choices = [_places(*program.ends[k]) for k in nonbasic]
        for sides in product(*choices):
            x = _solution([program.lines[k] for k in nonbasic], list(sides))
            if x is not None:
                yield x


def _places(low, high) -> list[Fraction]:
    return sorted({end for end in (low, high) if abs(end) < inf}) or [Fraction(0)]


def _feasible(program: Program, x: Vector) -> bool:
    pairs = zip(program.lines, program.ends, strict=True)
    return all(low <= _dot(line, x) <= high for line, (low, high) in pairs)


def _dual_objective(program: Program, prices: Vector) -> Fraction | None:
    """Price times the end that its sign names, summed; None where that end is missing."""
    pairs = [(p, e[0] if p > 0 else e[1]) for p, e in zip(prices, program.ends, strict=True) if p]
    if any(abs(end) == inf for _, end in pairs):
        return None
    return sum((price * end for price, end in pairs), Fraction(0))


def _dot(a: Vector, b: Vector) -> Fraction:
    return sum((p * q for p, q in zip(a, b, strict=True)), Fraction(0))


def _solution(matrix: list[Vector], sides: Vector) -> Vector | None:
    """The solution of a square system; None where it is singular."""
    work = [[*row, side] for row, side in zip(matrix, sides, strict=True)]
    for k in range(len(work)):
        pivot = next((i for i in range(k, len(work)) if work[i][k]), None)
        if pivot is None:
            return None
        work[k], work[pivot] = work[pivot], work[k]
        work[k] = [a / work[k][k] for a in work[k]]
        for i, row in enumerate(work):
            if i != k and row[k]:
                work[i] = [a - row[k] * b for a, b in zip(row, work[k], strict=True)]
    return [row[-1] for row in work]
