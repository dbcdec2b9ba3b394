"""Sums of products far more accurate than one double.

Error-free transformations: a product is split exactly into its rounded value and
its error (Dekker 1971, "A floating-point technique for extending the available
precision", section 5), and the parts are summed by extracting, level by level,
what all terms of a row share (Rump, Ogita, Oishi 2008, "Accurate floating-point
summation, part I", section 3). Results are pairs ``(high, low)`` of doubles whose
sum is the value; the error left is below ``2**-90`` times the largest term, so
that it lies far below any residual that is reported.

Exact as long as no product leaves the range 1e-290 to 1e290; beyond it results
may be infinite or not a number, which every verdict counts as failed.
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

from lpview.model import Vector

Pair = tuple[Vector, Vector]
Starts = NDArray[np.integer]

_LEVELS = 3
_SPLIT = 134217729.0  # 2**27 + 1


def two_product(a: Vector, b: Vector) -> Pair:
    """The rounded products and their exact errors, elementwise."""
    p = a * b
    ah, bh = a * _SPLIT, b * _SPLIT
    ah, bh = ah - (ah - a), bh - (bh - b)
    al, bl = a - ah, b - bh
    return p, ((ah * bh - p) + ah * bl + al * bh) + al * bl


def two_sum(a: Vector, b: Vector) -> Pair:
    """The rounded sums and their exact errors, elementwise (Knuth)."""
    s = a + b
    t = s - a
    return s, (a - (s - t)) + (b - t)


def minus(value: Pair, other: Pair) -> Pair:
    """The difference of two pairs, with an error near ``2**-100`` of the larger one."""
    s, e = two_sum(value[0], -other[0])
    return two_sum(s, e + (value[1] - other[1]))


def plus(value: Pair, other: Pair) -> Pair:
    """The sum of two pairs, with an error near ``2**-100`` of the larger one."""
    s, e = two_sum(value[0], other[0])
    return two_sum(s, e + (value[1] + other[1]))


def times(value: Pair, other: Pair) -> Pair:
    """The product of two pairs, elementwise, with a relative error near ``2**-100``."""
    p, e = two_product(value[0], other[0])
    return two_sum(p, e + (value[0] * other[1] + value[1] * other[0]))


def segment_sums(parts: Sequence[Vector], starts: Starts) -> Pair:
    """Sum ``parts`` over the segments ``starts[i]:starts[i + 1]``.

    Parameters
    ----------
    parts
        Arrays of one length; all of their entries in a segment are added up.
    starts
        Segment boundaries, shape ``(k + 1,)``, as in a compressed sparse matrix.

    Returns
    -------
    pair of arrays of shape ``(k,)``; 0 for an empty segment.
    """
    sizes = np.diff(starts)
    total = (np.zeros(len(sizes)), np.zeros(len(sizes)))
    filled = np.flatnonzero(sizes)
    if not filled.size:
        return total
    heads = starts[:-1][filled]
    widths = sizes[filled]
    headroom = 2.0 ** np.ceil(np.log2(widths * len(parts) + 2.0))
    rest = [np.array(part) for part in parts]
    sums: Pair = (np.zeros(len(filled)), np.zeros(len(filled)))
    for _ in range(_LEVELS):
        level = _extract(rest, heads, widths, headroom)
        sums = plus(sums, (level, np.zeros_like(level)))
    total[0][filled], total[1][filled] = sums
    return total


def _extract(rest: list[Vector], heads: Starts, widths: Starts, headroom: Vector) -> Vector:
    """Take the leading bits of all terms out of ``rest``; their sums are exact."""
    largest = np.zeros(len(heads))
    for part in rest:
        np.maximum(largest, np.maximum.reduceat(np.abs(part), heads), out=largest)
    _, exponent = np.frexp(largest)
    sigma = np.repeat(np.ldexp(headroom, exponent), widths)
    level = np.zeros(len(heads))
    for part in rest:
        lead = (sigma + part) - sigma
        part -= lead
        level += np.add.reduceat(lead, heads)
    return level


def total(parts: Sequence[Vector]) -> tuple[float, float]:
    """The sum of all entries of all parts, as a pair of floats."""
    flat = np.concatenate([np.ravel(part) for part in parts]) if parts else np.zeros(0)
    high, low = segment_sums([flat], np.array([0, flat.size]))
    return float(high[0]), float(low[0])
