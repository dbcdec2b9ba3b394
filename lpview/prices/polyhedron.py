"""Polyhedra of values or of prices, kept open in a solver, and the ends of their lines.

Both kinds are steps ``d`` from a known point of all lines: ``x`` and ``v = (A x, x)`` for
values, ``y`` and ``p = (y, c - A'y)`` for prices. Each line has limits, and asking for the
end of a line minimizes or maximizes its entry. Only the lines that can move take part; the
others stay where the known point has them.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csr_array

from lpview.model import Vector
from lpview.prices.lines import Index, Lines, Mask
from lpview.warm import Box, Descent, Lost, Vertex, WarmMaker, WarmModel

LONG = 1e-6
"""A direction is a ray of a line if, cut off at 1, it moves the line at least so far."""


@dataclass(frozen=True, eq=False)
class End:
    """A point at which one line is least or greatest."""

    step: Vector
    """Difference from the known point, shape of the polyhedron's lines."""
    ray: Vector | None
    """A direction in which that line goes on for ever, or None; same shape."""


@dataclass(frozen=True, eq=False)
class Shape:
    """The movement of some lines: ``entries(d) = (d, G d)`` on ``free`` then ``bound``."""

    free: Index
    """Lines that are variables of the steps, shape ``(k,)``."""
    bound: Index
    """Lines that follow from them, shape ``(r,)``."""
    G: csr_array
    """How they follow, shape ``(r, k)``."""

    @property
    def lines(self) -> Index:
        """All lines that take part."""
        return np.concatenate([self.free, self.bound])

    def parts(self) -> list[Shape]:
        """The same in pieces that have nothing to do with each other."""
        from scipy.sparse import block_array
        from scipy.sparse.csgraph import connected_components

        if not self.free.size:
            return []
        graph = block_array([[None, self.G.T], [self.G, None]])
        if self.bound.size == 0:
            labels = np.arange(self.free.size)
        else:
            labels = connected_components(graph, directed=False)[1]
        return [self._part(labels == label) for label in np.unique(labels[: self.free.size])]

    def _part(self, inside: Mask) -> Shape:
        k = self.free.size
        columns, rows = np.flatnonzero(inside[:k]), np.flatnonzero(inside[k:])
        return Shape(self.free[columns], self.bound[rows], self.G[rows][:, columns])


def value_shape(lines: Lines, moves: Mask) -> Shape:
    """Movement of values when the columns among ``moves`` move."""
    m = lines.m
    return _shape(lines.lp.A, np.flatnonzero(moves[m:]), m, 0, 1.0)


def price_shape(lines: Lines, moves: Mask) -> Shape:
    """Movement of prices when the dual values of the rows among ``moves`` move."""
    m = lines.m
    return _shape(lines.lp.A.T.tocsr(), np.flatnonzero(moves[:m]), 0, m, -1.0)


def _shape(G: csr_array, columns: Index, first: int, first_bound: int, sign: float) -> Shape:
    part = G[:, columns]
    rows = np.flatnonzero(np.diff(part.indptr))
    part = part[rows]
    if sign < 0:
        part = -part
    return Shape(first + columns, first_bound + rows, part)


class Polyhedron:
    """All steps of a shape within the limits of its lines.

    ``low`` and ``high`` are limits of entries, ``base`` the known point; shapes
    ``(m + n,)``. The base must lie within the limits.
    """

    def __init__(
        self, shape: Shape, base: Vector, low: Vector, high: Vector, warm: WarmMaker
    ) -> None:
        self.shape, self.lines = shape, shape.lines
        self._k = shape.free.size
        self._position = np.full(base.size, -1, dtype=np.int32)
        self._position[self.lines] = np.arange(self.lines.size)
        self._base = base[self.lines]
        self._low, self._high = low[self.lines], high[self.lines]
        self._model = warm(shape.G, self._box())
        self._warm = warm
        self._cone: WarmModel | None = None
        self._every = np.arange(self._k, dtype=np.int32)

    def _box(self) -> Box:
        low = np.minimum(self._low - self._base, 0.0)
        high = np.maximum(self._high - self._base, 0.0)
        return Box(low[self._k :], high[self._k :], low[: self._k], high[: self._k])

    def step_of(self, end: End, line: int) -> float:
        """How far one line is from the known point, 0 where it takes no part."""
        position = int(self._position[line])
        return float(end.step[position]) if position >= 0 else 0.0

    def limit(self, lines: Index, low: Vector, high: Vector) -> None:
        """Give some lines other limits, which must include the base.

        Lines that take no part stay where they are, whatever their limits.
        """
        part = self._position[lines] >= 0
        at, low, high = self._position[lines[part]], low[part], high[part]
        self._low[at], self._high[at], self._cone = low, high, None
        base = self._base[at]
        low, high = np.minimum(low - base, 0.0), np.maximum(high - base, 0.0)
        free = at < self._k
        if free.any():
            self._model.set_columns(at[free], low[free], high[free])
        if not free.all():
            self._model.set_rows(at[~free] - self._k, low[~free], high[~free])

    def end(self, line: int, greatest: bool) -> End | Lost:
        """Where one line is least or greatest."""
        if self._position[line] < 0:
            return End(np.zeros(self.lines.size), None)
        return self._found(*self._entry(line, greatest))

    def _entry(self, line: int, greatest: bool) -> tuple[NDArray[np.int32], Vector]:
        """The costs whose least sum is wanted, by variable."""
        position = int(self._position[line])
        sign = -1.0 if greatest else 1.0
        if position < self._k:
            return np.array([position], np.int32), np.array([sign])
        G, row = self.shape.G, position - self._k
        part = slice(G.indptr[row], G.indptr[row + 1])
        return G.indices[part].astype(np.int32), sign * G.data[part]

    def ray(self, line: int, greatest: bool) -> End | None:
        """A ray along which one line goes on for ever, from the known point, or None."""
        return self._ray(*self._entry(line, greatest))

    def least_sum(self, weights: Vector) -> End | Lost:
        """Where a weighted sum of all lines (in the order of ``lines``) is least."""
        costs = weights[: self._k] + self.shape.G.T @ weights[self._k :]
        return self._found(self._every, costs)

    def _found(self, index: NDArray[np.int32], costs: Vector) -> End | Lost:
        found = self._model.least(index, costs)
        if isinstance(found, Vertex):
            return End(self._entries(found.x), None)
        if isinstance(found, Descent):
            return End(self._entries(found.x), self._entries(found.ray))
        return self._ray(index, costs) or found

    def _ray(self, index: NDArray[np.int32], costs: Vector) -> End | None:
        """A ray along which the costs fall, from the known point.

        Asked of the recession cone, cut off at 1, so that nothing rests on rays that a
        solver may or may not return.
        """
        if self._cone is None:
            low = np.where(np.isfinite(self._low), 0.0, -1.0)
            high = np.where(np.isfinite(self._high), 0.0, 1.0)
            k = self._k
            self._cone = self._warm(self.shape.G, Box(low[k:], high[k:], low[:k], high[:k]))
        found = self._cone.least(index, costs)
        if not isinstance(found, Vertex):
            return None
        length = -float(costs @ found.x[index])
        if length < LONG:
            return None
        return End(np.zeros(self.lines.size), self._entries(found.x) / length)

    def _entries(self, d: Vector) -> Vector:
        return np.concatenate([d, self.shape.G @ d])
