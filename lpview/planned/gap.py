"""How far the dual objective of a plan's prices may be from the one as written.

The dual objective is a sum over lines of ``g(p) = p e(p)``, where ``e(p)`` is the end that
the sign of the price ``p`` names, or 0 where that end is infinite. Write ``g(p) = p e +
d(p)`` with the end ``e`` of the price as written: the first terms of all lines add up to a
linear function of the dual values, whose rate for ``y_i`` is ``e_i - sum_j a_ij e_j`` and
whose range over the rounding is exact; ``d`` is 0 unless the interval of the price reaches
across 0, and is then bounded line by line.
"""

from __future__ import annotations

import numpy as np

from lpview import accurate
from lpview.accurate import Pair
from lpview.file_numbers import FileNumbers
from lpview.kkt import Measurement, Side
from lpview.model import Vector

UPWARD = 1.0 + 2.0**-50
"""Makes up for the rounding of a radius, which is a few units of ``2**-53``."""

ERROR = 2.0**-85
"""Bounds the error of an accurate sum, beside its largest term."""


def gap_radii(
    numbers: FileNumbers, found: Measurement, around: Vector, half: Vector
) -> tuple[float, float]:
    """How far the dual objective may fall and rise within the rounding of its prices.

    Parameters
    ----------
    around
        Radii of all prices, shape ``(m + n,)``.
    half
        Half units of the dual values, shape ``(m,)``.

    Returns
    -------
    pair of floats >= 0, upper bounds; the dual objective need not reach them both.
    """
    m, sign = numbers.lp.m, numbers.lp.sense.sign
    with np.errstate(over="ignore", invalid="ignore"):
        rows, row_jump = _ends(found.rows, numbers.row_ends, sign, around[:m])
        columns, column_jump = _ends(found.columns, numbers.column_ends, sign, around[m:])
        through, term = numbers.row_values(*columns)
        rate = np.abs(accurate.minus(rows, through)[0])
        rate += ERROR * np.maximum(term, np.abs(rows[0]))
        linear = float(accurate.total([rate * half])[0])
        jumps = np.concatenate([row_jump, column_jump])
        falls = float(accurate.total([np.maximum(-jumps, 0.0)])[0])
        rises = float(accurate.total([np.maximum(jumps, 0.0)])[0])
    return (linear + falls) * UPWARD, (linear + rises) * UPWARD


def _ends(side: Side, ends: tuple[Pair, Pair], sign: float, around: Vector) -> tuple[Pair, Vector]:
    """Ends that the prices as written name, and the most that ``d`` comes to, with its sign."""
    lower, upper = (_finite(end) for end in ends)
    # Where the price is 0 either end will do; that of a positive one is taken.
    at_lower = side.named_lower | (side.price == 0)
    named: Pair = (
        np.where(at_lower, lower[0], upper[0]),
        np.where(at_lower, lower[1], upper[1]),
    )
    across = np.maximum(around - np.abs(side.price), 0.0)
    apart = accurate.minus(upper, lower)[0]
    # Beyond 0 the price is negative if it names the lower end, minimizing, and positive else.
    other = np.where(at_lower, apart, -apart)
    beyond = np.where(at_lower, -sign, sign) * across
    return named, other * beyond * UPWARD


def _finite(end: Pair) -> Pair:
    known = np.isfinite(end[0])
    return np.where(known, end[0], 0.0), np.where(known, end[1], 0.0)
