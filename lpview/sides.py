"""The one-sided form of a model, and the way back to the last digit.

In one-sided form every row has one side or is an equality, and every column is
``x >= 0``, ``x <= 0`` or free. A two-sided row becomes two rows; a finite bound
other than 0 becomes a row; a fixed column becomes free with an equality row, also
when it is fixed at 0; a row without sides is left out, because its dual value is 0
in every answer. `Places` says where everything went, so that `fold` can undo it.
"""

from __future__ import annotations

import itertools
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csr_array, vstack

from lpview.model import LinearProgram, ModelError, Vector, frozen_odd

Index = NDArray[np.intp]
Mask = NDArray[np.bool_]
Exact = Mapping[int, Fraction]

NOWHERE = -1
"""Place of a side or bound that has no row in the one-sided form."""


@dataclass(frozen=True, eq=False)
class Coefficients:
    """Some rows of coefficients, to the last digit."""

    A: csr_array
    """Their doubles, shape ``(k, n)``."""
    odd: Exact
    """Exact values of odd numbers, by position in ``A.data``."""


@dataclass(frozen=True, eq=False)
class Places:
    """Where each side and bound of a model stands among the rows of its form."""

    name: str
    """Name of the original model."""
    rows: tuple[str, ...]
    """Names of the ``m`` original rows."""
    row_lower: Index
    """Row of the form that holds a row's lower side, or `NOWHERE`, shape ``(m,)``."""
    row_upper: Index
    """The same for the upper side; an equality has both in one row."""
    lower: Index
    """Row of the form that holds a column's lower bound, or `NOWHERE`: ``(n,)``."""
    upper: Index
    """The same for the upper bound; a fixed column has both in one row."""
    unlimited: Coefficients
    """The ``k`` rows without sides, in order; no row of the form stands for them."""


@dataclass(frozen=True, eq=False)
class OneSided:
    """A model in one-sided form, with the way back."""

    program: LinearProgram
    """The form: the model's columns; its rows that have sides, then bound rows."""
    places: Places
    """Where each side and bound of the model stands in ``program``."""


def one_sided(lp: LinearProgram) -> OneSided:
    """Write ``lp`` in one-sided form; see the module.

    Columns keep their names and order. Rows that are not split keep their names;
    new ones are called after their line, such as ``heat lower side``, ``tomato
    upper bound`` or ``tomato fixed``, with a number added where that is taken.
    """
    low, high, source = _spread(
        np.isfinite(lp.row_lower), np.isfinite(lp.row_upper), lp.is_equality, 0
    )
    bound_low, bound_high, bounded = _spread(
        np.isfinite(lp.lower) & ((lp.lower != 0.0) | lp.is_fixed),
        np.isfinite(lp.upper) & ((lp.upper != 0.0) | lp.is_fixed),
        lp.is_fixed,
        source.size,
    )
    given = _coefficients(lp)
    unlimited = _rows_of(given, np.flatnonzero((low == NOWHERE) & (high == NOWHERE)))
    places = Places(lp.name, lp.rows, low, high, bound_low, bound_high, unlimited)
    units = csr_array(
        (np.ones(bounded.size), bounded, np.arange(bounded.size + 1)),
        shape=(bounded.size, lp.n),
    )
    body = _stacked(_rows_of(given, source), Coefficients(units, {}))
    return OneSided(_form(lp, places, _form_names(lp, places, source), body), places)


def fold(program: LinearProgram, places: Places) -> LinearProgram:
    """The original model, read back from its one-sided form; undoes `one_sided`.

    ``program`` is the form or the dual of its dual. A split row takes its
    coefficients from the row of its lower side. Raises `ModelError` if the rows
    and columns of ``program`` cannot be those of the form.
    """
    _require_shape(program, places)
    kept = np.where(places.row_lower != NOWHERE, places.row_lower, places.row_upper)
    left_out = np.flatnonzero(kept == NOWHERE)
    kept[left_out] = program.m + np.arange(left_out.size)
    body = _rows_of(_stacked(_coefficients(program), places.unlimited), kept)
    odd = {
        field: _odd_at(program.odd.get(side, {}), getattr(places, field))
        for field, side in _SIDE_OF.items()
    }
    none = np.full(len(places.rows), np.inf)
    return LinearProgram(
        name=places.name,
        sense=program.sense,
        columns=program.columns,
        rows=places.rows,
        c=program.c,
        A=body.A,
        row_lower=_taken(program.row_lower, places.row_lower, -none),
        row_upper=_taken(program.row_upper, places.row_upper, none),
        lower=_taken(program.row_lower, places.lower, program.lower),
        upper=_taken(program.row_upper, places.upper, program.upper),
        offset=program.offset,
        odd=frozen_odd({**_objective_odd(program), **odd, "A": body.odd}),
    )


_SIDE_OF = {
    "row_lower": "row_lower",
    "row_upper": "row_upper",
    "lower": "row_lower",
    "upper": "row_upper",
}
"""The side of the form's row that holds each kind of end of the original model."""


def _spread(
    has_low: Mask, has_high: Mask, together: Mask, first: int
) -> tuple[Index, Index, Index]:
    """Give the ends of lines rows that follow each other from ``first`` on.

    Returns the row of each line's lower end, that of its upper end, and the line
    of each row; two ends that are ``together`` share one row.
    """
    count = np.where(together, 1, has_low.astype(np.intp) + has_high)
    start = first + np.cumsum(count) - count
    low = np.where(has_low, start, NOWHERE)
    high = np.where(has_high, start + count - 1, NOWHERE)
    return low, high, np.repeat(np.arange(count.size), count)


def _form(
    lp: LinearProgram, places: Places, names: tuple[str, ...], body: Coefficients
) -> LinearProgram:
    sides = {
        "row_lower": np.full(len(names), -np.inf),
        "row_upper": np.full(len(names), np.inf),
    }
    odd: dict[str, dict[int, Fraction]] = {side: {} for side in sides}
    for field, side in _SIDE_OF.items():
        place: Index = getattr(places, field)
        stands = place != NOWHERE
        sides[side][place[stands]] = getattr(lp, field)[stands]
        exact = lp.odd.get(field, {})
        odd[side] |= {int(place[i]): exact[i] for i in exact if stands[i]}
    return LinearProgram(
        name=f"one-sided form of {lp.name}",
        sense=lp.sense,
        columns=lp.columns,
        rows=names,
        c=lp.c,
        A=body.A,
        lower=np.where((lp.lower == 0.0) & ~lp.is_fixed, 0.0, -np.inf),
        upper=np.where((lp.upper == 0.0) & ~lp.is_fixed, 0.0, np.inf),
        offset=lp.offset,
        odd=frozen_odd({**_objective_odd(lp), **odd, "A": body.odd}),
        **sides,
    )


def _form_names(lp: LinearProgram, places: Places, source: Index) -> tuple[str, ...]:
    """Names of the form's rows."""
    names = [lp.rows[i] for i in source.tolist()]
    taken = set(lp.rows)
    low, high = places.row_lower.tolist(), places.row_upper.tolist()
    split = (places.row_lower != NOWHERE) & (places.row_upper > places.row_lower)
    for i in np.flatnonzero(split).tolist():
        names[low[i]] = _new_name(f"{lp.rows[i]} lower side", taken)
        names[high[i]] = _new_name(f"{lp.rows[i]} upper side", taken)
    ends = zip(lp.columns, places.lower.tolist(), places.upper.tolist(), strict=True)
    for column, lower, upper in ends:
        if lower == upper != NOWHERE:
            names.append(_new_name(f"{column} fixed", taken))
            continue
        if lower != NOWHERE:
            names.append(_new_name(f"{column} lower bound", taken))
        if upper != NOWHERE:
            names.append(_new_name(f"{column} upper bound", taken))
    return tuple(names)


def _new_name(wanted: str, taken: set[str]) -> str:
    """``wanted``, with the first number from 2 on that makes it new; now taken."""
    name = wanted
    for number in itertools.count(2):
        if name not in taken:
            break
        name = f"{wanted} {number}"
    taken.add(name)
    return name


def _require_shape(program: LinearProgram, places: Places) -> None:
    ends = (places.row_lower, places.row_upper, places.lower, places.upper)
    m, n = 1 + max(int(end.max(initial=NOWHERE)) for end in ends), places.lower.size
    if (program.m, program.n) != (m, n):
        raise ModelError(
            f"{program.name}: expected the {m} rows and {n} columns of the one-sided "
            f"form of {places.name}, got {program.m} and {program.n}"
        )


def _taken(sides: Vector, place: Index, otherwise: Vector) -> Vector:
    """The sides at ``place``, and ``otherwise`` where that is `NOWHERE`."""
    result = otherwise.copy()
    stands = place != NOWHERE
    result[stands] = sides[place[stands]]
    return result


def _odd_at(odd: Exact, place: Index) -> dict[int, Fraction]:
    """The odd numbers that stand at ``place``, by index in ``place``."""
    if not odd:
        return {}
    hits = np.flatnonzero(np.isin(place, np.fromiter(odd, dtype=np.intp)))
    return {i: odd[int(place[i])] for i in hits.tolist()}


def _objective_odd(lp: LinearProgram) -> dict[str, Exact]:
    return {field: lp.odd.get(field, {}) for field in ("c", "offset")}


def _coefficients(lp: LinearProgram) -> Coefficients:
    return Coefficients(lp.A, lp.odd.get("A", {}))


def _rows_of(given: Coefficients, rows: Index) -> Coefficients:
    """The given rows, in that order; a row may be taken more than once."""
    A: csr_array = given.A[rows]
    if not given.odd:
        return Coefficients(A, {})
    shift = given.A.indptr[rows] - A.indptr[:-1]
    position = np.arange(A.nnz) + np.repeat(shift, np.diff(A.indptr))
    return Coefficients(A, _odd_at(given.odd, position))


def _stacked(top: Coefficients, bottom: Coefficients) -> Coefficients:
    below = {top.A.nnz + position: exact for position, exact in bottom.odd.items()}
    return Coefficients(vstack([top.A, bottom.A], format="csr"), {**top.odd, **below})
