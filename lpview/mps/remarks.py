"""What is remarkable about a file, in words that go on after "noticed while reading:"."""

from __future__ import annotations

from collections.abc import Iterator

import numpy as np

from lpview.blocks.mistakes import quoted
from lpview.decimals import number_text
from lpview.mps.bounds import UPPER
from lpview.mps.fields import Fields
from lpview.mps.matrix import LEFT_OUT, OBJECTIVE
from lpview.mps.parts import Parts
from lpview.mps.sections import Sections

SMALL = 1e-12
"""Coefficients of this size and below are dropped by the solver's own reader."""


def remarks(parts: Parts, fields: Fields, sections: Sections) -> tuple[str, ...]:
    """All remarks on a file."""
    return (
        *_rows(parts),
        *_constant(parts),
        *_coefficients(parts),
        *_bounds(parts),
        *_long_numerals(parts),
        *_left_out(fields, sections),
    )


def _rows(parts: Parts) -> Iterator[str]:
    rows = parts.rows
    if "N" not in rows.kinds:
        yield "no N row, so that every cost is 0"
    if rows.dropped:
        numbers = np.concatenate([parts.columns.row, parts.rhs.row, parts.ranges.row])
        lost = int(np.count_nonzero(rows.kept[numbers] == LEFT_OUT))
        names = ", ".join(map(quoted, rows.dropped[:5])) + (
            f" and {len(rows.dropped) - 5} more" if len(rows.dropped) > 5 else ""
        )
        objective = rows.names[rows.kinds.index("N")]
        yield (
            f"the first N row {quoted(objective)} is the objective; left out, with "
            f"{_count(lost, 'number')}: {names}"
        )


def _constant(parts: Parts) -> Iterator[str]:
    numerals = parts.rhs.numerals
    for k, row in enumerate(parts.rhs.row.tolist()):
        if parts.rows.kept[row] == OBJECTIVE and numerals.numbers.values[k] != 0:
            constant = number_text(-float(numerals.numbers.values[k]))
            yield (
                f"right-hand side {numerals.texts[k]} of the objective on line "
                f"{numerals.lines[k]} taken as the constant {constant} (readers differ here)"
            )


def _coefficients(parts: Parts) -> Iterator[str]:
    columns, texts = parts.columns, parts.columns.entries.texts
    values = columns.entries.numbers.values
    zeros = int(np.count_nonzero(values == 0))
    if zeros:
        yield f"{_count(zeros, 'number')} of COLUMNS written as 0"
    small = (values != 0) & (np.abs(values) <= SMALL) & (parts.rows.kept[columns.row] >= 0)
    for k in np.flatnonzero(small)[:1].tolist():
        column, row = columns.names[columns.column[k]], parts.rows.names[columns.row[k]]
        yield (
            f"{_count(int(small.sum()), 'coefficient')} of at most {SMALL:g} in size, kept here, "
            f"though solvers drop them: first {texts[k]} of {quoted(column)} in {quoted(row)} "
            f"on line {columns.entries.lines[k]}"
        )


def _bounds(parts: Parts) -> Iterator[str]:
    bounds, names = parts.bounds, parts.columns.names
    if bounds.opened:
        first = bounds.opened[0]
        yield (
            f"{_count(len(bounds.opened), 'column')} with a negative upper bound and no lower "
            f"bound, taken as having none (readers differ here): first {quoted(names[first])} on "
            f"line {bounds.lines[first]}"
        )
    bounded = {column for kind, column, _ in bounds.records if kind in UPPER}
    below = [column for kind, column, _ in bounds.records if kind == "MI" and column not in bounded]
    if below:
        yield (
            f"{_count(len(below), 'column')} with MI alone, taken as having no upper bound "
            f"(readers differ here): first {quoted(names[below[0]])} on line "
            f"{bounds.lines[below[0]]}"
        )
    if bounds.binary:
        first = bounds.binary[0]
        yield (
            f"{_count(len(bounds.binary), 'integer column')} without bounds, taken as 0 to 1 "
            f"(readers differ here): first {quoted(names[first])} on line "
            f"{parts.columns.lines[first]}"
        )
    if bounds.large:
        first = bounds.large[0]
        yield (
            f"{_count(len(bounds.large), 'bound')} of at least 1e20 in size, taken for none: "
            f"first {bounds.numerals.texts[first]} on line {bounds.numerals.lines[first]}"
        )
    if bounds.ignored:
        yield (
            f"{_count(len(bounds.ignored), 'number')} beside FR, MI, PL or BV left out: first on "
            f"line {bounds.ignored[0]}"
        )


def _long_numerals(parts: Parts) -> Iterator[str]:
    groups = (
        parts.columns.entries,
        parts.rhs.numerals,
        parts.ranges.numerals,
        parts.bounds.numerals,
    )
    long = sorted((group.lines[k], group.texts[k]) for group in groups for k in group.numbers.odd)
    if long:
        line, text = long[0]
        yield (
            f"{_count(len(long), 'numeral')} with more digits than a double holds: first "
            f"{quoted(text)} on line {line}; solvers take the nearest double, check and proof the "
            "numeral as written"
        )


def _left_out(fields: Fields, sections: Sections) -> Iterator[str]:
    lines = fields.comments
    if lines:
        what = _count(len(lines), "comment")
        yield f"{what} at the ends of lines left out: first on line {lines[0]}"
    if sections.after:
        yield f"{_count(sections.after, 'line')} after ENDATA left out"


def _count(number: int, what: str) -> str:
    return f"{number} {what}" + ("" if number == 1 else "s")
