"""The same numerals under plain names, for the solver's own reader.

Names such as ``RHS``, blanks, comments and encodings cannot mislead it then; what the
numerals, relations, ranges and bounds mean is left to it.
"""

from __future__ import annotations

from collections.abc import Iterator

from lpview.model import Sense
from lpview.mps.fields import VALUELESS
from lpview.mps.matrix import LEFT_OUT
from lpview.mps.parts import Parts


def plain_copy(parts: Parts) -> str:
    """The text of the copy, in free format: columns ``c0``..., rows ``r0``..., N rows too."""
    return "\n".join([*_head(parts), *_columns(parts), *_sides(parts), *_bounds(parts), "ENDATA\n"])


def _head(parts: Parts) -> Iterator[str]:
    yield "NAME copy"
    if parts.sense is Sense.MAXIMIZE:
        yield "OBJSENSE\n MAX"
    yield "ROWS"
    for k, kind in enumerate(parts.rows.kinds):
        yield f" {kind} r{k}"


def _columns(parts: Parts) -> Iterator[str]:
    yield "COLUMNS"
    columns, texts = parts.columns, parts.columns.entries.texts
    marked, last = False, -1
    for column, row, text in zip(columns.column.tolist(), columns.row.tolist(), texts, strict=True):
        if column != last and (column in columns.marked) is not marked:
            marked, last = not marked, column
            yield f" m 'MARKER' '{'INTORG' if marked else 'INTEND'}'"
        yield f" c{column} r{row} {text}"
    if marked:
        yield " m 'MARKER' 'INTEND'"


def _sides(parts: Parts) -> Iterator[str]:
    for name, found in (("RHS", parts.rhs), ("RANGES", parts.ranges)):
        yield name
        for row, text in zip(found.row.tolist(), found.numerals.texts, strict=True):
            if parts.rows.kept[row] != LEFT_OUT:  # it would take these for the objective's
                yield f" s r{row} {text}"


def _bounds(parts: Parts) -> Iterator[str]:
    yield "BOUNDS"
    for kind, column, text in parts.bounds.records:
        yield f" {kind} s c{column} {'' if kind in VALUELESS else text}"
    for column in parts.bounds.opened:
        yield f" MI s c{column}"  # what we take it for; its versions differ here
