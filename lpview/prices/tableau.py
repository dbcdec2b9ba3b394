"""How values and prices of all lines move together at a basis.

The basic values follow from the nonbasic ones, ``v_B = T v_N``, and the nonbasic prices
from the basic ones, ``p_N = d_N - T' p_B``. The matrix ``T`` is never formed; its columns
and rows are solved for in blocks, each as a direction over all lines.
"""

from __future__ import annotations

from collections.abc import Iterator
from functools import cached_property
from typing import Any

import numpy as np
from scipy.sparse import csr_array

from lpview.basis import BasisMatrix
from lpview.model import Vector
from lpview.prices.lines import Index, Lines

BLOCK_NUMBERS = 4_000_000
"""Doubles in one block of directions; 32 MB."""

NOISE = 1e-11
"""Entries of a direction below this times its largest entry are rounding."""


EXPLICIT = 2500
"""Bases of up to so many columns are inverted once; that pays after some hundred solves."""


class Tableau:
    """Directions at one basis."""

    def __init__(self, lines: Lines, matrix: BasisMatrix) -> None:
        lp = lines.lp
        self.lines, self._matrix = lines, matrix
        self._A, self._transposed = lp.A, lp.A.T.tocsr()
        self._resting = np.setdiff1d(np.arange(lp.n), matrix.columns)
        self._basic_rows = np.setdiff1d(np.arange(lp.m), matrix.rows)
        self._into_rows = lp.A[matrix.rows][:, self._resting]
        self._into_columns = lp.A[self._basic_rows][:, matrix.columns].T.tocsr()

    def value_direction(self, own: Vector) -> Vector:
        """How all values move when the nonbasic ones move as ``own`` says.

        ``own`` has shape ``(m + n, b)`` and counts on nonbasic lines only; so has the
        result, which agrees with it there.
        """
        matrix, m = self._matrix, self.lines.m
        x = np.zeros((self.lines.lp.n, own.shape[1]))
        x[self._resting] = own[m + self._resting]
        sides = own[matrix.rows] - self._into_rows @ x[self._resting]
        x[matrix.columns] = self._plan(sides)
        rows = self._A @ x
        rows[matrix.rows] = own[matrix.rows]
        return _cleaned(np.concatenate([rows, x]))

    def price_direction(self, own: Vector) -> Vector:
        """How all prices move when the basic ones move as ``own`` says; shapes as above."""
        matrix, m = self._matrix, self.lines.m
        y = np.zeros((m, own.shape[1]))
        y[self._basic_rows] = own[self._basic_rows]
        costs = -own[m + matrix.columns] - self._into_columns @ y[self._basic_rows]
        y[matrix.rows] = self._dual_values(costs)
        z = -(self._transposed @ y)
        z[matrix.columns] = own[m + matrix.columns]
        return _cleaned(np.concatenate([y, z]))

    @cached_property
    def _inverse(self) -> Any:
        """``A[R, C]`` inverted: sparse where that is quicker to apply, else dense."""
        inverse = self._matrix.plan(np.eye(self._matrix.rows.size))
        inverse = _cleaned(inverse)
        sparse = csr_array(inverse)
        return sparse if sparse.nnz < 0.1 * inverse.size else inverse

    @cached_property
    def _inverse_transposed(self) -> Any:
        inverse = self._inverse.T
        return inverse.tocsr() if hasattr(inverse, "tocsr") else np.ascontiguousarray(inverse)

    def _plan(self, sides: Vector) -> Vector:
        if min(*sides.shape) <= 2 or sides.shape[0] > EXPLICIT:
            return self._matrix.plan(sides)
        plan: Vector = self._inverse @ sides
        return plan

    def _dual_values(self, costs: Vector) -> Vector:
        if min(*costs.shape) <= 2 or costs.shape[0] > EXPLICIT:
            return self._matrix.prices(costs)
        prices: Vector = self._inverse_transposed @ costs
        return prices

    def value_directions(self, nonbasic: Index) -> Iterator[tuple[Index, Vector]]:
        """Columns of ``T``: blocks of nonbasic lines with their directions, one a column."""
        for block in self._blocks(nonbasic):
            yield block, self.value_direction(self._units(block))

    def price_directions(self, basic: Index) -> Iterator[tuple[Index, Vector]]:
        """Rows of ``-T``: blocks of basic lines with their directions, one a column."""
        for block in self._blocks(basic):
            yield block, self.price_direction(self._units(block))

    def _blocks(self, lines: Index) -> Iterator[Index]:
        size = max(1, BLOCK_NUMBERS // max(self.lines.value.size, 1))
        for start in range(0, lines.size, size):
            yield lines[start : start + size]

    def _units(self, block: Index) -> Vector:
        own = np.zeros((self.lines.value.size, block.size))
        own[block, np.arange(block.size)] = 1.0
        return own


def _cleaned(directions: Vector) -> Vector:
    largest = np.abs(directions).max(axis=0, initial=0.0)
    directions[np.abs(directions) <= NOISE * largest] = 0.0
    return directions
