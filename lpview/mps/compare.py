"""Two readings of one file: whatever they understood differently is refused."""

from __future__ import annotations

from collections.abc import Iterator, Sequence

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csc_array

from lpview.blocks.mistakes import InputError, Mistake, quoted
from lpview.decimals import number_text
from lpview.model import LinearProgram, Vector
from lpview.mps.parts import Parts
from lpview.solver.mps_file import DROPPED, FileModel, read_mps_text

ADVICE = "the file is not used, since its two readings differ"


def compare(text: str, parts: Parts, lp: LinearProgram) -> None:
    """Have the solver read the copy ``text`` of ``lp``.

    Raises `InputError` with every line of the file where it understood something else.
    """
    other = read_mps_text(text)
    if other is None:
        expected = "a file that the solver's own reader accepts"
        raise InputError([Mistake(parts.file, expected, "one that it refuses")])
    found = sorted(_differences(parts, lp, other), key=lambda mistake: mistake.line)
    if found:
        raise InputError(found)


def _differences(parts: Parts, lp: LinearProgram, other: FileModel) -> Iterator[Mistake]:
    shape = f"{len(other.rows)} rows and {len(other.columns)} columns"
    if other.columns != [f"c{k}" for k in range(lp.n)] or other.rows != _row_names(parts):
        got = f"{shape} by the solver's own reader"
        yield Mistake(parts.file, f"{lp.m} rows and {lp.n} columns", got, advice=ADVICE)
        return
    if other.sense is not lp.sense:
        yield _mistake(parts, "OBJSENSE", 0, "sense", (lp.sense.value, other.sense.value))
    if other.offset != lp.offset:
        pair = number_text(lp.offset), number_text(other.offset)
        yield _mistake(parts, "RHS", 0, "constant of the objective", pair)
    yield from _vectors(parts, lp, other)
    yield from _coefficients(parts, lp, other)
    for column in sorted(other.integers ^ parts.bounds.integer):
        pair = "an integer column", "a continuous one"
        if column in other.integers:
            pair = "a continuous column", "an integer one"
        yield _mistake(
            parts, "COLUMNS", parts.columns.lines[column], quoted(lp.columns[column]), pair
        )


def _row_names(parts: Parts) -> list[str]:
    return [f"r{k}" for k, kind in enumerate(parts.rows.kinds) if kind != "N"]


def _vectors(parts: Parts, lp: LinearProgram, other: FileModel) -> Iterator[Mistake]:
    row_lines = [parts.rows.lines[k] for k in np.flatnonzero(parts.rows.kept >= 0).tolist()]
    column_lines = parts.columns.lines
    bounds = [parts.bounds.lines.get(k, line) for k, line in enumerate(column_lines)]
    low, high = parts.row_lower.plain, parts.row_upper.plain
    for section, what, lines, names, ours, theirs in (
        ("COLUMNS", "cost", column_lines, lp.columns, lp.c, other.c),
        ("ROWS", "lower side", row_lines, lp.rows, low, other.row_lower),
        ("ROWS", "upper side", row_lines, lp.rows, high, other.row_upper),
        ("BOUNDS", "lower bound", bounds, lp.columns, lp.lower, other.lower),
        ("BOUNDS", "upper bound", bounds, lp.columns, lp.upper, other.upper),
    ):
        for k in _unequal(ours, theirs).tolist():
            pair = number_text(float(ours[k])), _text(float(theirs[k]))
            yield _mistake(parts, section, lines[k], f"{what} of {quoted(names[k])}", pair)


def _unequal(ours: Vector, theirs: Vector) -> NDArray[np.intp]:
    return np.flatnonzero(~(ours == theirs))  # nan differs from everything


def _text(value: float) -> str:
    return "nan" if np.isnan(value) else number_text(value)


def _coefficients(parts: Parts, lp: LinearProgram, other: FileModel) -> Iterator[Mistake]:
    ours = lp.A_by_column
    small = np.abs(ours.data) <= DROPPED
    if small.any():  # these are remarked on, and stay in the model
        ours = ours.copy()
        ours.data[small] = 0.0
        ours.eliminate_zeros()
    if _same(ours, other.A):
        return
    lines = parts.columns.entries.lines
    difference = (ours - other.A).tocoo()
    for row, column in _places(difference):
        name = f"coefficient of {quoted(lp.columns[column])} in {quoted(lp.rows[row])}"
        at = np.flatnonzero(
            (parts.columns.column == column) & (parts.rows.kept[parts.columns.row] == row)
        )
        pair = number_text(float(ours[row, column])), _text(float(other.A[row, column]))
        yield _mistake(parts, "COLUMNS", lines[int(at[0])] if at.size else 0, name, pair)


def _places(difference: csc_array) -> Sequence[tuple[int, int]]:
    keep = ~(difference.data == 0)
    return list(zip(difference.row[keep].tolist(), difference.col[keep].tolist(), strict=True))


def _same(first: csc_array, second: csc_array) -> bool:
    return all(
        np.array_equal(getattr(first, part), getattr(second, part))
        for part in ("indptr", "indices", "data")
    )


def _mistake(parts: Parts, section: str, line: int, field: str, pair: tuple[str, str]) -> Mistake:
    got = f"{pair[1]} by the solver's own reader"
    line = line or parts.first.get(section, 0)
    return Mistake(parts.file, pair[0], got, line, section, field, ADVICE)
