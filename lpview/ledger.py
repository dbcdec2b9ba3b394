"""The ledger of one line: the terms that add up to it, and what they leave.

A row's terms are ``a_ij x_j``, which add up to the row value. A column's are
``a_ij y_i``; the cost ``c_j`` less all of them is the reduced cost. Made in a time
that depends on the terms of that line alone; totals, slack and products are those
of the check (`lpview.kkt`), never added up again here.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.answer import LineStatus
from lpview.marks import Flag
from lpview.model import Vector
from lpview.outcomes import Optimal

Index = NDArray[np.integer]


@dataclass(frozen=True, eq=False)
class Terms:
    """The ``k`` terms of a line, the largest product first, else in model order."""

    partner: Index
    """Columns of a row's terms or rows of a column's, from 0, shape ``(k,)``."""
    coefficient: Vector
    """``a_ij``, shape ``(k,)``."""
    factor: Vector
    """``x_j`` of a row's terms, ``y_i`` of a column's, shape ``(k,)``."""
    product: Vector
    """Coefficient times factor, shape ``(k,)``: in the unit of the row value, or of
    the cost; a column's products are taken off its cost."""


@dataclass(frozen=True, eq=False)
class Ledger:
    """Everything about one line of a checked answer; signs as in `lpview.model`."""

    line: int
    """Its number as in `lpview.kkt`: rows first, then columns."""
    is_row: bool
    """Whether it is a row; else it is a column."""
    name: str
    """Its name, as data."""
    terms: Terms
    """What adds up to a row's value, or is taken off a column's cost."""
    cost: float
    """``c_j``; 0 for a row."""
    value: float
    """Row value, or value of the variable."""
    lower: float
    """Lower side or bound; ``-inf`` without one."""
    upper: float
    """Upper side or bound; ``inf`` without one."""
    below: float
    """Value minus lower end; ``inf`` without one, negative where violated."""
    above: float
    """Upper end minus value; ``inf`` without one, negative where violated."""
    price: float
    """Dual value, or reduced cost ``c - A'y`` as the check found it."""
    named_lower: bool
    """Whether the sign of the price names the lower end, else the upper."""
    complementarity: float
    """``|price|`` times the distance to the end its sign names."""
    room: bool
    """Whether it has slack beyond the zero tolerance."""
    priced: bool
    """Whether it has a price beyond the zero tolerance."""
    paired: bool
    """Whether it has a complementary pair: no equality row and no fixed column."""
    status: LineStatus | None
    """Where the basis puts it; None for an answer without a basis."""
    flags: tuple[Flag, ...]
    """Its flags."""

    @property
    def slack(self) -> float:
        """Distance to the nearest end; ``inf`` without one."""
        return min(self.below, self.above)

    @property
    def used(self) -> float:
        """What a column takes off its cost: the cost less the reduced cost."""
        return self.cost - self.price


def ledger(found: Optimal, line: int) -> Ledger:
    """The ledger of a line numbered as in `lpview.kkt`."""
    lp = found.head.model
    return row_ledger(found, line) if line < lp.m else column_ledger(found, line - lp.m)


def row_ledger(found: Optimal, row: int) -> Ledger:
    """The ledger of a row, counted from 0."""
    lp, A = found.head.model, found.head.model.A
    part = slice(A.indptr[row], A.indptr[row + 1])
    terms = _sorted(A.indices[part], A.data[part], found.answer.x)
    return _ledger(found, row, terms, lp.rows[row], (lp.row_lower[row], lp.row_upper[row]))


def column_ledger(found: Optimal, column: int) -> Ledger:
    """The ledger of a column, counted from 0."""
    lp, A = found.head.model, found.head.model.A_by_column
    part = slice(A.indptr[column], A.indptr[column + 1])
    terms = _sorted(A.indices[part], A.data[part], found.answer.y)
    ends = (lp.lower[column], lp.upper[column])
    return _ledger(found, lp.m + column, terms, lp.columns[column], ends)


def _sorted(partner: Index, coefficient: Vector, factors: Vector) -> Terms:
    factor = factors[partner]
    product = coefficient * factor
    order = _largest_first(product)
    return Terms(partner[order], coefficient[order], factor[order], product[order])


def _largest_first(product: Vector) -> Index:
    """The order by falling size, equal sizes in model order.

    What a stable sort gives, in less than half its time on long lines: a screen
    asks for this at every key.
    """
    size = -np.abs(product)
    order = np.argsort(size)
    ranked = size[order]
    differs = ranked[1:] != ranked[:-1]
    if differs.all():
        return order
    rank = np.concatenate([[0], np.cumsum(differs)])
    by_rank_then_place: Index = np.sort(rank * size.size + order) % size.size
    return by_rank_then_place


def _ledger(
    found: Optimal, line: int, terms: Terms, name: str, ends: tuple[float, float]
) -> Ledger:
    lp, marks, basis = found.head.model, found.marks, found.answer.basis
    is_row = line < lp.m
    k = line if is_row else line - lp.m
    side = found.measurement.rows if is_row else found.measurement.columns
    status = None
    if basis is not None:
        status = LineStatus(int(basis.row[k] if is_row else basis.column[k]))
    return Ledger(
        line=line,
        is_row=is_row,
        name=name,
        terms=terms,
        cost=0.0 if is_row else float(lp.c[k]),
        value=float(side.value[k]),
        lower=float(ends[0]),
        upper=float(ends[1]),
        below=float(side.below[k]),
        above=float(side.above[k]),
        price=float(side.price[k]),
        named_lower=bool(side.named_lower[k]),
        complementarity=float(side.complementarity[k]),
        room=bool(marks.room[line]),
        priced=bool(marks.priced[line]),
        paired=bool(marks.paired[line]),
        status=status,
        flags=marks.of(line),
    )
