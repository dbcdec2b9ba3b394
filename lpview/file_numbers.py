"""The numbers of a model as pairs of doubles, and the sums that the check makes of them.

Sums and differences are accurate to about ``2**-90`` of their largest term and are about
the numbers of the file, not their doubles (`lpview.accurate`, `lpview.decimals.low_parts`).
"""

from __future__ import annotations

import numpy as np
from scipy.sparse import csc_array, csr_array

from lpview import accurate
from lpview.accurate import Pair
from lpview.decimals import low_parts
from lpview.model import LinearProgram, Vector


class FileNumbers:
    """A model's numbers as pairs of doubles, good to 32 digits; made once a check."""

    def __init__(self, lp: LinearProgram) -> None:
        self.lp = lp
        low = low_parts(lp, "A")
        self.by_row: Pair = (lp.A.data, low)
        self.by_column: Pair = (lp.A_by_column.data, low[lp.by_column_order])
        self.c: Pair = (lp.c, low_parts(lp, "c"))
        self.row_ends = self._ends("row_lower", "row_upper")
        self.column_ends = self._ends("lower", "upper")
        self.offset = np.array([lp.offset, *low_parts(lp, "offset")])

    def _ends(self, low: str, high: str) -> tuple[Pair, Pair]:
        return (
            (getattr(self.lp, low), low_parts(self.lp, low)),
            (getattr(self.lp, high), low_parts(self.lp, high)),
        )

    def row_values(self, x: Vector, low: Vector | None = None) -> tuple[Pair, Vector]:
        """``A x`` as a pair, and the largest ``|a_ij x_j|`` of each row.

        ``low``, here and below, is what is to be added to the doubles given.
        """
        return _products(self.by_row, x, low, self.lp.A)

    def reduced_costs(self, y: Vector, low: Vector | None = None) -> tuple[Pair, Vector]:
        """``c - A'y`` as a pair, and the largest of ``|c_j|`` and ``|a_ij y_i|``."""
        sums, term = _products(self.by_column, y, low, self.lp.A_by_column)
        term = np.maximum(term, np.abs(self.lp.c))
        price = accurate.minus(self.c, sums)
        rounding = np.abs(price[0]) <= term * 2.0**-95
        return (np.where(rounding, 0.0, price[0]), np.where(rounding, 0.0, price[1])), term

    def objective(self, x: Vector, low: Vector | None = None) -> tuple[float, float]:
        """``c'x + offset`` as a pair."""
        p, e = accurate.two_product(self.c[0], x)
        more = [] if low is None else [self.c[0] * low]
        return accurate.total([p, e, self.c[1] * x, *more, self.offset])


def _products(
    a: Pair, v: Vector, low: Vector | None, places: csr_array | csc_array
) -> tuple[Pair, Vector]:
    """Sums of ``a`` times the entries of ``v`` over the segments of a sparse matrix."""
    starts = places.indptr
    more = [] if low is None else [a[0] * low[places.indices]]
    v = v[places.indices]
    p, e = accurate.two_product(a[0], v)
    term = np.zeros(len(starts) - 1)
    filled = np.flatnonzero(np.diff(starts))
    if filled.size:
        term[filled] = np.maximum.reduceat(np.abs(p), starts[:-1][filled])
    return accurate.segment_sums([p, e, a[1] * v, *more], starts), term
