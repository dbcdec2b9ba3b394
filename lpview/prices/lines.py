"""All lines of a model at one optimal answer, rows and columns alike, as if minimizing.

A line is a row (its value is ``a_i x``) or a column (its value is ``x_j``), numbered as
in `lpview.kkt`. Values of all lines together form the vectors ``v = (A x, x)``, prices
``p = (y, z)``, and ``v`` moves in a linear space to which all movements of ``p`` are
orthogonal. Everything below the result types works with these two vectors and turns a
maximization round once, here: prices are multiplied by -1.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.answer import Basis, LineStatus
from lpview.kkt import Measurement
from lpview.marks import Marks
from lpview.model import LinearProgram, Vector

Mask = NDArray[np.bool_]
Index = NDArray[np.intp]


@dataclass(frozen=True, eq=False)
class Lines:
    """Every array has shape ``(m + n,)``."""

    lp: LinearProgram
    """The model, in its own sense."""
    value: Vector
    """Row values, then the plan; exactly the end where the slack is zero."""
    price: Vector
    """Dual values, then reduced costs, minimizing; exactly 0 where they count as zero."""
    low: Vector
    """Lower sides, then lower bounds."""
    high: Vector
    """Upper sides, then upper bounds."""
    at_low: Mask
    """Zero slack to the lower end."""
    at_high: Mask
    """Zero slack to the upper end; with ``at_low`` for equalities and fixed columns."""
    equal: Mask
    """Equality rows and fixed columns."""
    basic: Mask
    """Basic lines, ``m`` of them."""
    value_size: Vector
    """Sizes that value differences are judged against: largest term, at least 1."""
    price_size: Vector
    """The same for prices."""

    @property
    def m(self) -> int:
        """Number of rows, which is also the number of the first column's line."""
        return self.lp.m

    @property
    def at_end(self) -> Mask:
        """Zero slack to either end."""
        return self.at_low | self.at_high

    def price_limits(self) -> tuple[Vector, Vector]:
        """Least and greatest price that each line may have beside this plan.

        Zero slack to the lower end allows positive prices, to the upper negative ones.
        These limits make up the optimal dual face: prices are complementary to any one
        optimal plan.
        """
        return np.where(self.at_high, -np.inf, 0.0), np.where(self.at_low, np.inf, 0.0)

    def value_limits(self, price: Vector) -> tuple[Vector, Vector]:
        """Least and greatest value of each line in a plan complementary to ``price``."""
        low = np.where(price < 0, self.high, self.low)
        high = np.where(price > 0, self.low, self.high)
        return low, high


def lines_of(lp: LinearProgram, found: Measurement, marks: Marks, basis: Basis) -> Lines:
    """Put the lines of a checked answer together."""
    rows, columns = found.rows, found.columns
    low = np.concatenate([lp.row_lower, lp.lower])
    high = np.concatenate([lp.row_upper, lp.upper])
    below = np.concatenate([rows.below, columns.below])
    above = np.concatenate([rows.above, columns.above])
    basic = np.concatenate([basis.row == LineStatus.BASIC, basis.column == LineStatus.BASIC])
    equal = ~marks.paired
    at_low = (~marks.room & (below <= above)) | equal
    at_high = (~marks.room & (below > above)) | equal
    value = np.concatenate([rows.value, columns.value])
    value = np.where(at_low, low, np.where(at_high, high, value))
    price = lp.sense.sign * np.concatenate([rows.price, columns.price])
    return Lines(
        lp=lp,
        value=value,
        price=np.where(marks.priced & ~basic, price, 0.0),
        low=low,
        high=high,
        at_low=at_low,
        at_high=at_high,
        equal=equal,
        basic=basic,
        value_size=_size(rows.value_term, columns.value_term, value),
        price_size=_size(rows.price_term, columns.price_term, price),
    )


def _size(rows: Vector, columns: Vector, itself: Vector) -> Vector:
    size: Vector = np.maximum(np.concatenate([rows, columns]), np.abs(itself))
    return np.maximum(size, 1.0)
