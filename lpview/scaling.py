"""Powers of two that bring a model within what the solver can hold.

A solver drops coefficients below a threshold and takes numbers beyond another for
infinite. Rows, columns and the objective are therefore rescaled by powers of two,
which change no digit, and only where something lies outside; what cannot be
brought inside is refused by name. The scaled model is::

    x_j = 2**column[j] x'_j,   row i times 2**row[i],   objective times 2**cost
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from lpview.model import LinearProgram, Vector

Exponents = NDArray[np.int64]


@dataclass(frozen=True)
class Limits:
    """Sizes that a solver keeps as they are."""

    smallest: float
    """Coefficients of this size and below are dropped."""
    wary: float
    """Rows with coefficients of this size and below are rescaled where that helps."""
    ample: float
    """Rows with coefficients above this size are rescaled where that helps."""
    largest: float
    """Coefficients above this size are refused."""
    infinite: float
    """Costs, sides and bounds of this size and above count as infinite."""


class NotRepresentableError(ValueError):
    """The solver cannot be given the model's own numbers; the message names the line."""


@dataclass(frozen=True)
class Scaling:
    """Exponents of two; all zero means the model is passed on as it is."""

    row: Exponents
    """Shape ``(m,)``."""
    column: Exponents
    """Shape ``(n,)``."""
    cost: int
    """Of the objective."""

    @property
    def is_none(self) -> bool:
        """Whether nothing is rescaled."""
        return not (self.row.any() or self.column.any() or self.cost)

    def apply(self, lp: LinearProgram) -> LinearProgram:
        """The scaled model (its doubles only; exact odd values stay with ``lp``)."""
        if self.is_none:
            return lp
        A = lp.A.copy()
        rows = np.repeat(np.arange(lp.m), np.diff(A.indptr))
        A.data = np.ldexp(A.data, (self.row[rows] + self.column[A.indices]).astype(np.int32))
        return replace(
            lp,
            c=_shift(lp.c, self.column + self.cost),
            A=A,
            row_lower=_shift(lp.row_lower, self.row),
            row_upper=_shift(lp.row_upper, self.row),
            lower=_shift(lp.lower, -self.column),
            upper=_shift(lp.upper, -self.column),
            offset=float(np.ldexp(lp.offset, self.cost)),
            odd={},
        )

    def plan(self, x: Vector) -> Vector:
        """The original plan of a scaled one."""
        return _shift(x, self.column)

    def duals(self, y: Vector) -> Vector:
        """The original dual values of scaled ones."""
        return _shift(y, self.row - self.cost)

    def reduced_costs(self, z: Vector) -> Vector:
        """The original reduced costs of scaled ones."""
        return _shift(z, -self.column - self.cost)


def _shift(values: Vector, exponents: Exponents) -> Vector:
    # What no double holds becomes infinite; the check of an answer fails there.
    with np.errstate(over="ignore"):
        shifted: Vector = np.ldexp(values, exponents.astype(np.int32))
    return shifted


def scaling_for(lp: LinearProgram, limits: Limits) -> Scaling:
    """The exponents that bring ``lp`` inside ``limits``, zero where it is inside.

    Raises `NotRepresentableError` where powers of two do not suffice.
    """
    column = _bound_exponents(lp, limits)
    scaling = Scaling(np.zeros(lp.m, np.int64), column, 0)
    scaling = replace(scaling, row=_row_exponents(scaling.apply(lp), limits))
    largest = float(np.max(np.abs(scaling.apply(lp).c), initial=abs(lp.offset)))
    if largest >= limits.infinite:
        scaling = replace(scaling, cost=-int(np.ceil(np.log2(largest / limits.largest))))
    _refuse_what_is_left(scaling.apply(lp), limits)
    return scaling


def _bound_exponents(lp: LinearProgram, limits: Limits) -> Exponents:
    """Shrink columns whose finite bounds would be taken for infinite."""
    ends = np.stack([np.abs(lp.lower), np.abs(lp.upper)])
    largest = np.max(np.where(np.isfinite(ends), ends, 0.0), axis=0, initial=0.0)
    over = largest >= limits.infinite
    exponents = np.zeros(lp.n, np.int64)
    exponents[over] = np.ceil(np.log2(largest[over] / limits.largest))
    return exponents


def _row_exponents(lp: LinearProgram, limits: Limits) -> Exponents:
    """Centre the coefficients of rows that lie outside, then keep sides finite."""
    exponents = np.zeros(lp.m, np.int64)
    ends = np.stack([np.abs(lp.row_lower), np.abs(lp.row_upper)])
    side = np.max(np.where(np.isfinite(ends), ends, 0.0), axis=0, initial=0.0)
    A = lp.A
    filled = np.flatnonzero(np.diff(A.indptr))
    small, large = np.ones(lp.m), np.ones(lp.m)
    if filled.size:
        starts = A.indptr[:-1][filled]
        small[filled] = np.minimum.reduceat(np.abs(A.data), starts)
        large[filled] = np.maximum.reduceat(np.abs(A.data), starts)
    bad = (small <= limits.wary) | (large > limits.ample)
    middle = -np.rint(np.log2(small) / 2 + np.log2(large) / 2)
    exponents[bad] = middle[bad]
    over = np.flatnonzero(_shift(side, exponents) >= limits.infinite)
    exponents[over] = -np.ceil(np.log2(side[over] / limits.infinite * 2)).astype(np.int64)
    return exponents


def _refuse_what_is_left(lp: LinearProgram, limits: Limits) -> None:
    A = lp.A
    size = np.abs(A.data)
    outside = np.flatnonzero((size <= limits.smallest) | (size > limits.largest))
    if outside.size:
        row = int(np.searchsorted(A.indptr, outside[0], side="right")) - 1
        raise NotRepresentableError(
            f"row {lp.rows[row]}: expected coefficients and right-hand side that fit "
            "together within the solver's range of numbers, got sizes too far apart; "
            "state the row or its variables in other units"
        )
    for kind, names, ends in (
        ("row", lp.rows, (lp.row_lower, lp.row_upper)),
        ("column", lp.columns, (lp.lower, lp.upper, lp.c)),
    ):
        for values in ends:
            over = np.flatnonzero(np.isfinite(values) & (np.abs(values) >= limits.infinite))
            if over.size:
                raise NotRepresentableError(
                    f"{kind} {names[int(over[0])]}: expected numbers below "
                    f"{limits.infinite:g}, which the solver takes for infinite, got a "
                    "larger one; state it in other units"
                )
