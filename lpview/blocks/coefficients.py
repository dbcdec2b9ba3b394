"""The coefficients: ``[A]``, wide or as triplets, to a sparse matrix."""

from __future__ import annotations

from bisect import bisect_right
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction
from itertools import accumulate

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csr_array

from lpview.blocks.cells import Cells, Numbers, column, read_numbers
from lpview.blocks.even import filled, take
from lpview.blocks.mistakes import quoted
from lpview.blocks.names import Index, look_up, tell_repeated
from lpview.blocks.structure import Block
from lpview.model import Vector

Places = NDArray[np.int64]


@dataclass(frozen=True)
class Coefficients:
    """What ``[A]`` says."""

    A: csr_array
    """The matrix, canonical: sorted, without zeros."""
    odd: Mapping[int, Fraction]
    """Exact values of odd coefficients, by position in ``A.data``."""
    empty: int
    """Empty cells of wide blocks, read as 0."""
    decimals: int
    """The most digits after a decimal mark."""


@dataclass(frozen=True)
class _Entries:
    """The coefficients of one block in the order of the file."""

    cells: Cells
    """Their cells, without empty ones."""
    numbers: Numbers
    """The coefficients."""
    rows: Places | None
    """Their rows; None when some are not known."""
    columns: Places | None
    """Their columns; None when some are not known."""
    empty: int = 0
    """Empty cells that were left out."""


def read_coefficients(
    blocks: Sequence[Block], rows: Index | None, columns: Index | None
) -> Coefficients:
    """The matrix from all ``[A]`` blocks.

    Parameters
    ----------
    rows, columns
        Place of every row and column; None when they are not known. Then, and
        after any other mistake, the matrix may be empty.
    """
    read = [_triplets if block.fixed else _wide for block in blocks]
    parts = [get(b, rows, columns) for get, b in zip(read, blocks, strict=True)]
    shape = len(rows or ()), len(columns or ())
    empty = sum(part.empty for part in parts)
    decimals = max((part.numbers.decimals for part in parts), default=0)
    key = _keys(parts, shape[1])
    if key is None:
        return Coefficients(csr_array(shape), {}, empty, decimals)
    values = np.concatenate([part.numbers.values for part in parts])
    order = _order(key)
    if order is not None:
        key, values = key[order], values[order]
        _tell_repeated_pairs(parts, order, key, list(rows or ()), list(columns or ()))
    matrix = _matrix(key, values, shape)
    return Coefficients(matrix, _odd(parts, values, order), empty, decimals)


def _keys(parts: Sequence[_Entries], n: int) -> Places | None:
    """``row * n + column`` of all coefficients; None when some are not known."""
    keys = [
        part.rows * n + part.columns
        for part in parts
        if part.rows is not None and part.columns is not None
    ]
    return np.concatenate(keys) if keys and len(keys) == len(parts) else None


def _triplets(block: Block, rows: Index | None, columns: Index | None) -> _Entries:
    cells = column(block, 2)
    row_places = look_up(column(block, 0), rows, "a row of [b]")
    column_places = look_up(column(block, 1), columns, "a column of [c]")
    return _Entries(cells, read_numbers(cells), row_places, column_places)


def _wide(block: Block, rows: Index | None, columns: Index | None) -> _Entries:
    """Coefficients under the names of columns; empty cells hold none."""
    names, width = block.header[1:], len(block.header)
    header = Cells(block, ("column",), [block.header_line] * len(names), names)
    row_names = Cells(block, ("row",), block.lines, block.flat[::width])
    repeated = tell_repeated([header]) | tell_repeated([row_names])
    column_places = look_up(header, columns, "a column of [c]")
    row_places = look_up(row_names, rows, "a row of [b]")
    given = filled(block.flat)
    given = given[given % width != 0]  # the first cell of a line is a name
    texts = take(block.flat, given)
    cells = Cells(block, block.header, block.lines, texts, given.tolist())
    if repeated:
        row_places = None
    if row_places is not None and column_places is not None:
        row_places = row_places[given // width]
        column_places = column_places[given % width - 1]
    empty = len(block.flat) - len(block.lines) - len(texts)
    return _Entries(cells, read_numbers(cells), row_places, column_places, empty)


def _order(key: Places) -> Places | None:
    """The order that sorts the keys; None when they are sorted and all different."""
    if (key[1:] > key[:-1]).all():
        return None
    return np.argsort(key, kind="stable")


def _tell_repeated_pairs(
    parts: Sequence[_Entries],
    order: Places,
    key: Places,
    rows: Sequence[str],
    columns: Sequence[str],
) -> None:
    """Tell of coefficients whose row and column had one before.

    Parameters
    ----------
    order
        Places in the file of the coefficients in sorted order.
    key
        Sorted keys ``row * n + column``.
    """
    ends = list(accumulate(len(part.cells.texts) for part in parts))

    def cell(place: int) -> tuple[Cells, int]:
        part = bisect_right(ends, place)
        return parts[part].cells, place - (ends[part - 1] if part else 0)

    for k in np.flatnonzero(key[1:] == key[:-1]).tolist():
        row, col = divmod(int(key[k]), len(columns))
        cells, place = cell(int(order[k + 1]))
        before, earlier = cell(int(order[k]))
        pair = f"{quoted(rows[row])} and {quoted(columns[col])} again"
        advice = f"line {before.line(earlier)} has one"
        cells.wrong(place, "one coefficient for a row and a column", advice, pair)


def _matrix(key: Places, values: Vector, shape: tuple[int, int]) -> csr_array:
    """The matrix of sorted keys ``row * n + column``, without zeros."""
    if not values.all():
        key, values = key[values != 0], values[values != 0]
    rows, columns = np.divmod(key, max(shape[1], 1))
    starts = np.searchsorted(rows, np.arange(shape[0] + 1))
    return csr_array((values, columns, starts), shape=shape)


def _odd(parts: Sequence[_Entries], values: Vector, order: Places | None) -> dict[int, Fraction]:
    """Exact values by position in the matrix, from those by place in the file."""
    starts = accumulate((len(part.cells.texts) for part in parts), initial=0)
    odd = {
        start + place: value
        for start, part in zip(starts, parts, strict=False)
        for place, value in part.numbers.odd.items()
    }
    if not odd:
        return odd
    position = np.cumsum(values != 0) - 1
    if order is not None:
        in_order, position = position, np.empty_like(position)
        position[order] = in_order
    return {int(position[place]): value for place, value in odd.items()}
