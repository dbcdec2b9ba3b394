"""The dual linear program, written from A, b and c alone; algebra only.

A model is first put in one-sided form (`lpview.sides`), and the dual of that is
read off the textbook's table (Bertsimas and Tsitsiklis 1997, "Introduction to
Linear Optimization", section 4.2), which works in either direction::

    minimize             maximize
    row >= b_i           variable y_i >= 0
    row <= b_i           variable y_i <= 0
    row  = b_i           variable y_i free
    variable x_j >= 0    row <= c_j
    variable x_j <= 0    row >= c_j
    variable x_j free    row  = c_j

A variable of the dual is named after its row, a row of the dual after its column.
The dual values of either program are values of the other's variables, with the
signs of `lpview.model`, and the dual of the dual is the one-sided form itself.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.sparse import csr_array

from lpview.answer import Answer, Basis, LineStatus
from lpview.model import LinearProgram, ModelError, Odd, Sense, Vector, frozen_odd
from lpview.sides import NOWHERE, Exact, Index, Mask, OneSided, fold, one_sided

__all__ = [
    "DualProgram",
    "OneSided",
    "Prices",
    "build_dual",
    "dual",
    "dual_answer",
    "fold",
    "one_sided",
    "original_answer",
    "prices",
]


@dataclass(frozen=True, eq=False)
class DualProgram:
    """The dual of a model, as a linear program of its own."""

    form: OneSided
    """The one-sided form of the model, with the places of its sides and bounds."""
    program: LinearProgram
    """The dual: a variable for each row of the form, a row for each of its columns."""


@dataclass(frozen=True, eq=False)
class Prices:
    """Prices of the original model's lines."""

    y: Vector
    """Dual values, shape ``(m,)``, objective unit per row unit."""
    z: Vector
    """Reduced costs ``c - A'y``, shape ``(n,)``, objective unit per column unit."""


def build_dual(lp: LinearProgram) -> DualProgram:
    """The dual of ``lp``, by way of its one-sided form."""
    form = one_sided(lp)
    return DualProgram(form, dual(form))


def dual(form: OneSided | LinearProgram) -> LinearProgram:
    """The dual of a linear program in one-sided form, which is in that form too.

    Raises `ModelError` if a row has two different sides or none, or if a column
    is not ``x >= 0``, ``x <= 0`` or free.
    """
    lp = form.program if isinstance(form, OneSided) else form
    _require_one_sided(lp)
    turn = 1 if lp.sense is Sense.MINIMIZE else -1
    # Minimizing, a row without an upper side is `>=` and its variable y >= 0.
    at_least, at_most = (lp.row_upper == np.inf, lp.row_lower == -np.inf)[::turn]
    below, above = (lp.lower == -np.inf, lp.upper == np.inf)[::turn]
    return LinearProgram(
        name=f"dual of {lp.name}",
        sense=lp.sense.other,
        columns=lp.rows,
        rows=lp.columns,
        c=np.where(np.isfinite(lp.row_lower), lp.row_lower, lp.row_upper),
        A=_transposed(lp),
        row_lower=np.where(below, lp.c, -np.inf),
        row_upper=np.where(above, lp.c, np.inf),
        lower=np.where(at_least, 0.0, -np.inf),
        upper=np.where(at_most, 0.0, np.inf),
        offset=lp.offset,
        odd=_dual_odd(lp, below, above),
    )


def prices(pair: DualProgram, values: Vector) -> Prices:
    """Prices of the original model's lines, from values of the dual's variables.

    Parameters
    ----------
    pair
        What `build_dual` made of the model.
    values
        Values of the dual's variables, shape ``(pair.program.n,)``.

    Returns
    -------
    y
        Per row the sum of the values that belong to its sides; 0 for a row without.
    z
        ``c - A'y`` over the model's own rows. It is what the values of a column's
        bound rows and the slack of its row in the dual add up to.
    """
    places = pair.form.places
    y = _at(values, places.row_lower)
    apart = places.row_upper != places.row_lower
    y += np.where(apart, _at(values, places.row_upper), 0.0)
    of_rows = values.copy()
    for place in (places.lower, places.upper):
        of_rows[place[place != NOWHERE]] = 0.0
    return Prices(y, pair.form.program.c - pair.program.A @ of_rows)


def original_answer(pair: DualProgram, answer: Answer) -> Answer:
    """An answer to the original model, from an answer to its dual.

    The plan is the dual values of the dual's rows, whose signs agree with the
    model's bounds as they stand; `prices` gives the rest. No basis is carried.
    """
    found = prices(pair, answer.x)
    return Answer(x=answer.y.copy(), y=found.y, z=found.z, basis=None)


def dual_answer(pair: DualProgram, answer: Answer) -> Answer:
    """An answer to the dual, from an answer to the original model; solves nothing.

    The dual's plan is the model's prices: a row's dual value goes to the side that
    its sign names (to its only side, whatever the sign), a column's reduced cost to
    the row of the bound that its sign names; a bound of 0, and one that does not
    exist, has no such row, and what is left there is the slack of the column's row
    in the dual. The dual values of the dual are the model's plan. A row without
    sides has no place, so its price, which should be 0, is dropped.

    ``answer.z`` should be ``c - A'y`` to the last digit: the dual's rows are as far
    from it as those reduced costs are. `original_answer` is the way back.
    """
    places, values = pair.form.places, np.zeros(pair.program.n)
    low, high = places.row_lower, places.row_upper
    low, high = np.where(low == NOWHERE, high, low), np.where(high == NOWHERE, low, high)
    lower_sign = pair.form.program.sense.sign
    for price, at_low, at_high in (
        (answer.y, low, high),
        (answer.z, places.lower, places.upper),
    ):
        place = np.where(lower_sign * price > 0, at_low, at_high)
        stands = place != NOWHERE
        values[place[stands]] = price[stands]
    return Answer(
        x=values,
        y=answer.x.copy(),
        z=pair.program.c - pair.form.program.A @ answer.x,
        basis=None if answer.basis is None else _dual_basis(pair, answer.basis),
    )


def _dual_basis(pair: DualProgram, basis: Basis) -> Basis | None:
    """The basis of the dual that belongs to a basis of the model.

    In the form a line of the model that is held at a row of the form leaves that
    row nonbasic and all else basic; a column held at a bound of 0, or free, is
    itself nonbasic. The dual's basic lines are the form's nonbasic ones. None where
    a row without sides is nonbasic: without it the form has a basic line too many.
    """
    places, program = pair.form.places, pair.program
    low = np.where(places.row_lower == NOWHERE, places.row_upper, places.row_lower)
    high = np.where(places.row_upper == NOWHERE, places.row_lower, places.row_upper)
    row_at = np.where(basis.row == LineStatus.UPPER, high, low)
    column_at = np.where(basis.column == LineStatus.UPPER, places.upper, places.lower)
    row_held, column_held = basis.row != LineStatus.BASIC, basis.column != LineStatus.BASIC
    if (row_held & (row_at == NOWHERE)).any():
        return None
    basic = np.zeros(program.n, dtype=bool)
    basic[row_at[row_held]] = True
    basic[column_at[column_held & (column_at != NOWHERE)]] = True
    itself = column_held & (column_at == NOWHERE)
    at_zero = np.where(program.upper == 0.0, LineStatus.UPPER, LineStatus.FREE)
    resting = np.where(program.lower == 0.0, LineStatus.LOWER, at_zero)
    side = np.where(np.isfinite(program.row_lower), LineStatus.LOWER, LineStatus.UPPER)
    return Basis(
        column=np.where(basic, LineStatus.BASIC, resting).astype(np.int8),
        row=np.where(itself, LineStatus.BASIC, side).astype(np.int8),
    )


def _at(values: Vector, place: Index) -> Vector:
    """The values at ``place``, and 0 where that is `NOWHERE`."""
    # The entry put at the end is the one that NOWHERE, the last index, finds.
    found: Vector = np.append(values, 0.0)[place]
    return found


def _transposed(lp: LinearProgram) -> csr_array:
    by_column = lp.A_by_column
    return csr_array((by_column.data, by_column.indices, by_column.indptr), shape=(lp.n, lp.m))


def _dual_odd(lp: LinearProgram, below: Mask, above: Mask) -> Odd:
    """Exact numbers of the dual, whose row ``j`` has the sides ``below`` and ``above``."""
    costs = lp.odd.get("c", {})
    return frozen_odd(
        {
            "c": {**lp.odd.get("row_lower", {}), **lp.odd.get("row_upper", {})},
            "A": _transposed_odd(lp),
            "row_lower": {j: exact for j, exact in costs.items() if below[j]},
            "row_upper": {j: exact for j, exact in costs.items() if above[j]},
            "offset": lp.odd.get("offset", {}),
        }
    )


def _transposed_odd(lp: LinearProgram) -> Exact:
    odd = lp.odd.get("A", {})
    if not odd:
        return odd
    new = np.empty(lp.A.nnz, dtype=np.intp)
    new[lp.by_column_order] = np.arange(lp.A.nnz)
    return {int(new[position]): exact for position, exact in odd.items()}


def _require_one_sided(lp: LinearProgram) -> None:
    one = (lp.row_lower == -np.inf) ^ (lp.row_upper == np.inf)
    for i in np.flatnonzero(~(one | lp.is_equality))[:1].tolist():
        raise ModelError(
            f"row {lp.rows[i]}: expected one side or an equality, got "
            f"{lp.row_lower[i]} to {lp.row_upper[i]}; write the one-sided form first"
        )
    ends = np.isin(lp.lower, (0.0, -np.inf)) & np.isin(lp.upper, (0.0, np.inf))
    for j in np.flatnonzero(~ends | (lp.lower == lp.upper))[:1].tolist():
        raise ModelError(
            f"column {lp.columns[j]}: expected >= 0, <= 0 or free, got "
            f"{lp.lower[j]} to {lp.upper[j]}; write the one-sided form first"
        )
