"""A bound on the optimal objective that any dual values give, exactly.

For every ``y`` and every plan, ``c'x = y'(A x) + (c - A'y)'x``, and each product is at least
what its sides or bounds allow (Neumaier and Shcherbina 2004, "Safe bounds in linear and
mixed-integer linear programming", Mathematical Programming 99). The bound is infinite where
a price names an end that does not exist.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator
from fractions import Fraction

import numpy as np

from lpview.model import Vector
from lpview.proof.integers import End, Integers
from lpview.proof.refine import reduced_numerators
from lpview.proof.results import ExactVector

SHRUNK = (40, 30, 20, 10)
"""Dual values are made smaller by one part in two to these powers, one after the other."""


def best_bound(numbers: Integers, candidates: Iterable[ExactVector]) -> Fraction | None:
    """The best bound that any of these dual values gives, or None.

    Values that give none are moved a little towards 0, where the costs alone are often
    dual feasible with room to spare.
    """
    sign = int(numbers.lp.sense.sign)
    bounds = []
    for y in candidates:
        tried = (dual_bound(numbers, moved) for moved in _nearby(numbers, y))
        bounds.append(next((bound for bound in tried if bound is not None), None))
    return max((b for b in bounds if b is not None), key=lambda b: sign * b, default=None)


def _nearby(numbers: Integers, y: ExactVector) -> Iterator[ExactVector]:
    yield y
    kept = _with_sides(numbers, y)
    yield kept
    for bits in SHRUNK:
        top = (1 << bits) - 1
        yield ExactVector(tuple(n * top for n in kept.numerators), kept.denominator << bits)


def _with_sides(numbers: Integers, y: ExactVector) -> ExactVector:
    """Without the dual values that name a side that does not exist."""
    sign = int(numbers.lp.sense.sign)
    low, high = numbers.row_ends
    kept = [
        n if (low[i] if sign * n > 0 else high[i]) is not None else 0
        for i, n in enumerate(y.numerators)
    ]
    return ExactVector(tuple(kept), y.denominator)


def from_doubles(values: Vector) -> ExactVector:
    """Doubles as they are, over one power of two; 0 for those that are no numbers."""
    values = np.where(np.isfinite(values), values, 0.0)
    ratios = [float(value).as_integer_ratio() for value in values]
    common = max((bottom for _, bottom in ratios), default=1)
    return ExactVector(tuple(top * (common // bottom) for top, bottom in ratios), common)


def dual_bound(numbers: Integers, y: ExactVector) -> Fraction | None:
    """The least objective that ``y`` leaves possible (greatest when maximizing), or None."""
    reduced, common = reduced_numerators(numbers, y)
    rows = [n * (common // y.denominator) for n in y.numerators]
    sign = int(numbers.lp.sense.sign)
    # Sums of integers, one for each denominator of an end, are quicker than of fractions.
    sums: dict[int, int] = {}
    for prices, ends in ((rows, numbers.row_ends), (reduced, numbers.column_ends)):
        for k, price in enumerate(prices):
            if price:
                end: End = ends[0 if sign * price > 0 else 1][k]
                if end is None:
                    return None
                sums[end.denominator] = sums.get(end.denominator, 0) + price * end.numerator
    return numbers.offset + sum((Fraction(n, d * common) for d, n in sums.items()), Fraction(0))
