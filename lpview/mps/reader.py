"""An MPS file to a reading of its linear program."""

from __future__ import annotations

from pathlib import Path
from types import MappingProxyType

import numpy as np
from scipy.sparse import csr_array

from lpview.blocks.mistakes import Mistakes, Place
from lpview.blocks.names import names_alike
from lpview.blocks.source import read_bytes
from lpview.model import LinearProgram, frozen_odd
from lpview.mps.bounds import read_bounds
from lpview.mps.copy import plain_copy
from lpview.mps.fields import Fields, read_fields
from lpview.mps.matrix import OBJECTIVE, read_columns, read_rows
from lpview.mps.numerals import most_decimals
from lpview.mps.parts import Parts
from lpview.mps.remarks import remarks
from lpview.mps.sections import Sections, read_sections
from lpview.mps.sides import offset, read_per_row, row_sides
from lpview.mps.text import model_name, text_of
from lpview.reading import Notes, Reading


def read_mps(path: str | Path) -> Reading:
    """Read a ``.mps`` file, or one packed by gzip.

    Raises `InputError` with all mistakes found, if there are any.
    """
    return _read(read_bytes(str(path)), str(path), model_name(path))


def read_mps_bytes(data: bytes, name: str) -> Reading:
    """Read MPS that is in memory, such as standard input.

    Parameters
    ----------
    data
        The bytes of one file.
    name
        Its name in messages, and the name of the model.

    Raises `InputError` with all mistakes found, if there are any.
    """
    return _read(data, name, name)


def _read(data: bytes, file: str, name: str) -> Reading:
    from lpview.mps.compare import compare  # the solver is loaded only where it is used

    mistakes = Mistakes()
    sections = read_sections(text_of(data, file), file, mistakes)
    mistakes.stop([file])
    fields = read_fields(sections, file, mistakes)
    parts = _parts(sections, fields, file, mistakes)
    lp = _model(parts, name)
    compare(plain_copy(parts), parts, lp)
    notes = _notes(parts, lp, remarks(parts, fields, sections))
    return Reading(lp, notes, integers=tuple(sorted(parts.bounds.integer)))


def _parts(sections: Sections, fields: Fields, file: str, mistakes: Mistakes) -> Parts:
    def place(name: str) -> Place:
        return Place(file, name, mistakes)

    lines = fields.lines
    rows = read_rows(lines["ROWS"], place("ROWS"))
    if mistakes.among("ROWS"):
        mistakes.stop([file])  # what follows would be about names that are not known
    columns = read_columns(lines["COLUMNS"], rows, place("COLUMNS"))
    rhs = read_per_row(lines["RHS"], rows, place("RHS"))
    ranges = read_per_row(lines["RANGES"], rows, place("RANGES"))
    bounds = read_bounds(lines["BOUNDS"], columns, place("BOUNDS"))
    mistakes.stop([file])
    low, high = row_sides(rows, rhs, ranges)
    first = {name: section.line for name, section in sections.by_name.items()}
    return Parts(file, sections.sense, rows, columns, rhs, ranges, bounds, low, high, first)


def _model(parts: Parts, name: str) -> LinearProgram:
    columns, bounds = parts.columns, parts.bounds
    kept, numbers = parts.rows.kept[columns.row], columns.entries.numbers
    costs = np.flatnonzero(kept == OBJECTIVE)
    c = np.zeros(len(columns.names))
    c[columns.column[costs]] = numbers.values[costs]
    A, places = _matrix(parts)
    constant, odd_constant = offset(parts.rows, parts.rhs)
    odd = {
        "c": {int(columns.column[k]): v for k, v in numbers.odd.items() if kept[k] == OBJECTIVE},
        "A": {places[k]: value for k, value in numbers.odd.items() if k in places},
        "row_lower": parts.row_lower.odd,
        "row_upper": parts.row_upper.odd,
        "lower": bounds.odd_lower,
        "upper": bounds.odd_upper,
        "offset": {} if odd_constant is None else {0: odd_constant},
    }
    return LinearProgram(
        name=name,
        sense=parts.sense,
        columns=columns.names,
        rows=parts.rows.constraints,
        c=c,
        A=A,
        row_lower=parts.row_lower.values,
        row_upper=parts.row_upper.values,
        lower=np.array(bounds.lower, float),
        upper=np.array(bounds.upper, float),
        offset=constant,
        odd=frozen_odd(odd),
    )


def _matrix(parts: Parts) -> tuple[csr_array, dict[int, int]]:
    """The coefficients by row, and where in them each odd number of COLUMNS stands."""
    columns = parts.columns
    kept, numbers = parts.rows.kept[columns.row], columns.entries.numbers
    used = np.flatnonzero((kept >= 0) & (numbers.values != 0))
    order = used[np.lexsort((columns.column[used], kept[used]))]
    m, n = len(parts.rows.constraints), len(columns.names)
    starts = np.zeros(m + 1, np.int64)
    np.cumsum(np.bincount(kept[order], minlength=m), out=starts[1:])
    A = csr_array((numbers.values[order], columns.column[order], starts), shape=(m, n))
    where = {k: place for place, k in enumerate(order.tolist())} if numbers.odd else {}
    return A, {k: where[k] for k in numbers.odd if k in where}


def _notes(parts: Parts, lp: LinearProgram, remarks: tuple[str, ...]) -> Notes:
    columns, texts = parts.columns, parts.columns.entries.texts
    kept = parts.rows.kept[columns.row]
    empty = np.flatnonzero(np.diff(lp.A.indptr) == 0).tolist()
    sides = [*parts.rhs.numerals.texts, *parts.ranges.numerals.texts]
    written = {
        "c": [texts[k] for k in np.flatnonzero(kept == OBJECTIVE).tolist()],
        "A": [texts[k] for k in np.flatnonzero(kept >= 0).tolist()],
        "b": sides,
        "bounds": parts.bounds.numerals.texts,
    }
    decimals = {name: most_decimals(found) for name, found in written.items() if found}
    return Notes(
        empty_coefficients=0,
        empty_costs=0,
        rows_without_coefficients=tuple(lp.rows[row] for row in empty),
        names_alike=names_alike(lp.columns) + names_alike(lp.rows),
        most_decimals=MappingProxyType(decimals),
        remarks=remarks,
    )
