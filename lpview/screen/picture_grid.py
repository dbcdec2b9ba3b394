"""The sparsity pattern counted into the cells of a terminal; no drawing, no screen."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csr_array

from lpview.report.names import safe, width

Mask = NDArray[np.bool_]
Integers = NDArray[np.intp]

KINDS = ("neither", "column", "row", "both")
"""What a coefficient lies in: a nonzero column, a zero-slack row, both; by number."""

ROW = 2
"""Added to a coefficient's kind for a zero-slack row; 1 is added for a nonzero column."""


@dataclass(frozen=True, eq=False)
class Pattern:
    """A matrix with the names and the state of its lines."""

    A: csr_array
    """Coefficients, shape ``(m, n)``: sorted indices, no stored zero."""
    rows: tuple[str, ...]
    """Names of the ``m`` constraints."""
    columns: tuple[str, ...]
    """Names of the ``n`` variables."""
    zero_slack: Mask
    """Rows with zero slack, shape ``(m,)``."""
    nonzero: Mask
    """Columns whose value is not zero, shape ``(n,)``."""

    @property
    def m(self) -> int:
        """Number of constraints."""
        return len(self.rows)

    @property
    def n(self) -> int:
        """Number of variables."""
        return len(self.columns)

    @cached_property
    def widest_row_name(self) -> int:
        """Terminal cells that the longest name of a constraint takes."""
        return max((width(safe(name)) for name in self.rows), default=0)


@dataclass(frozen=True)
class Axis:
    """One direction of the picture: the lines that it shows, and their cells.

    A line takes 4, 2 or 1 dots where it can, so that it never straddles two cells;
    where there are more lines than dots, neighbours share a dot.
    """

    start: int
    """First line shown."""
    stop: int
    """One past the last line shown."""
    cells: int
    """Terminal cells available, at least 1."""
    dots: int
    """Dots in a cell: 4 down and 2 across, or 1 where characters stand for density."""

    @property
    def lines(self) -> int:
        """Lines shown."""
        return self.stop - self.start

    @property
    def thickness(self) -> int:
        """Dots that a line takes; 1 also where lines share a dot."""
        fits = [k for k in steps(self.dots) if k * self.lines <= self.cells * self.dots]
        return fits[0] if fits else 1

    @property
    def units(self) -> int:
        """Places that can be told apart: lines, or dots where lines share them."""
        return min(self.lines, self.cells * self.dots)

    @property
    def units_in_cell(self) -> int:
        """Units that a full cell holds."""
        return self.dots // self.thickness

    @property
    def used(self) -> int:
        """Cells that the lines take."""
        return -(-self.units // self.units_in_cell)

    @property
    def is_one_each(self) -> bool:
        """Whether every line has cells of its own."""
        return self.used == self.lines

    def unit_of(self, lines: Integers) -> Integers:
        """The units of some lines that are shown."""
        return (lines - self.start) * self.units // self.lines

    def all_units(self) -> Integers:
        """The unit of every line shown, in order."""
        return self.unit_of(np.arange(self.start, self.stop))

    def cell_of(self, line: int) -> int:
        """The cell of a line that is shown."""
        return (line - self.start) * self.units // self.lines // self.units_in_cell

    def lines_of(self, cell: int) -> range:
        """The lines in a cell."""
        return range(self._first(cell), self._first(cell + 1))

    def _first(self, cell: int) -> int:
        unit = min(cell * self.units_in_cell, self.units)
        return self.start - (-unit * self.lines // self.units)


def steps(dots: int) -> tuple[int, ...]:
    """Dots that a line may take in a cell of so many, most first."""
    return tuple(k for k in (4, 2, 1) if k <= dots)


@dataclass(frozen=True, eq=False)
class Grid:
    """How many coefficients of each kind fall where."""

    rows: Axis
    """The rows shown."""
    columns: Axis
    """The columns shown."""
    units: Integers
    """Coefficients, shape ``(rows.units, columns.units, 4)``, last by `KINDS`."""

    @cached_property
    def by_kind(self) -> Integers:
        """Coefficients of each cell, shape ``(rows.used, columns.used, 4)``."""
        down, across = self.rows.units_in_cell, self.columns.units_in_cell
        height, width = self.rows.used, self.columns.used
        padded = np.zeros((height * down, width * across, len(KINDS)), np.intp)
        padded[: self.rows.units, : self.columns.units] = self.units
        sums = np.zeros((height, width, len(KINDS)), np.intp)
        # A slice for each unit of a cell: reducing over such short axes is ten times slower.
        for unit in np.ndindex(down, across):
            sums += padded[unit[0] :: down, unit[1] :: across]
        return sums

    @cached_property
    def cells(self) -> Integers:
        """Coefficients of each cell, shape ``(rows.used, columns.used)``."""
        return _summed(self.by_kind)

    @cached_property
    def dots(self) -> Mask:
        """Dots that are set, shape ``(rows.used * rows.dots, columns.used * columns.dots)``."""
        taken = _summed(self.units) > 0
        thick = taken.repeat(self.rows.thickness, 0).repeat(self.columns.thickness, 1)
        all_dots = np.zeros(
            (self.rows.used * self.rows.dots, self.columns.used * self.columns.dots), np.bool_
        )
        all_dots[: thick.shape[0], : thick.shape[1]] = thick
        return all_dots


def _summed(by_kind: Integers) -> Integers:
    """All kinds together."""
    sums: Integers = by_kind[..., 0].copy()
    for kind in range(1, len(KINDS)):
        sums += by_kind[..., kind]
    return sums


def count(pattern: Pattern, rows: Axis, columns: Axis) -> Grid:
    """Count the coefficients of a block; only its rows are looked at.

    Both axes must show at least one line.
    """
    across = columns.units + 1  # the last one takes what lies outside the block
    row_base = rows.all_units() * (across * len(KINDS))
    row_base += ROW * pattern.zero_slack[rows.start : rows.stop]
    column_base = np.full(pattern.n, columns.units * len(KINDS), np.intp)
    own = columns.all_units() * len(KINDS) + pattern.nonzero[columns.start : columns.stop]
    column_base[columns.start : columns.stop] = own
    ends = pattern.A.indptr[rows.start : rows.stop + 1]
    place = column_base[pattern.A.indices[ends[0] : ends[-1]]]
    place += np.repeat(row_base, np.diff(ends))
    counts = np.bincount(place, minlength=rows.units * across * len(KINDS))
    return Grid(rows, columns, counts.reshape(rows.units, across, len(KINDS))[:, :-1])


def positions(pattern: Pattern, rows: range, columns: range) -> Integers:
    """Positions in ``A.data`` of the coefficients in a block, by row, then column."""
    A = pattern.A
    first, last = int(A.indptr[rows.start]), int(A.indptr[rows.stop])
    indices = A.indices[first:last]
    inside = (indices >= columns.start) & (indices < columns.stop)
    return np.flatnonzero(inside) + first


def row_of(pattern: Pattern, position: int) -> int:
    """The row of a position in ``A.data``."""
    return int(np.searchsorted(pattern.A.indptr, position, side="right")) - 1
