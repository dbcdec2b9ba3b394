"""Movements of prices, or of values, on some lines alone.

At a basis all price movements follow from the basic prices, all value movements from the
nonbasic values. Those that leave every other line where it is are the null vectors of a
part of the tableau, whose rank is found by a factorization with pivoting.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass

import numpy as np

from lpview.model import Vector
from lpview.prices.lines import Index, Lines, Mask
from lpview.prices.tableau import Tableau

ZERO = 1e-9
"""Entries of a direction below this times its largest one are rounding."""

RANK = 1e-9
"""Diagonal entries of a factorization below this times the largest count as zero."""


@dataclass(frozen=True, eq=False)
class Within:
    """All movements on the allowed lines."""

    dimension: int
    """Dimension of their linear space."""
    lines: Mask
    """Lines that move in some of them, shape ``(m + n,)``."""
    along: Vector
    """One of them, in which nearly all of those lines move, shape ``(m + n,)``."""


def prices_within(lines: Lines, tableau: Tableau, allowed: Mask) -> Within:
    """Movements of the prices of ``allowed`` lines, all other prices staying."""
    own, others = np.flatnonzero(lines.basic & allowed), np.flatnonzero(~lines.basic & ~allowed)
    return _within(own, others, allowed, tableau.price_directions, tableau.price_direction)


def values_within(lines: Lines, tableau: Tableau, allowed: Mask) -> Within:
    """Movements of the values of ``allowed`` lines, all other values staying."""
    own, others = np.flatnonzero(~lines.basic & allowed), np.flatnonzero(lines.basic & ~allowed)
    return _within(own, others, allowed, tableau.value_directions, tableau.value_direction)


def _within(
    own: Index,
    others: Index,
    allowed: Mask,
    directions: Callable[[Index], Iterator[tuple[Index, Vector]]],
    direction: Callable[[Vector], Vector],
) -> Within:
    # Scaled by its direction, so that rounding can be told from entries before any other
    # scaling makes it large.
    K, size = np.zeros((own.size, others.size)), np.ones(own.size)
    begin = 0
    for block, found in directions(own):
        part = slice(begin, begin + block.size)
        size[part] = np.abs(found).max(axis=0)
        K[part] = (found[others] / size[part]).T
        begin += block.size
    K[np.abs(K) <= ZERO] = 0.0
    w, rank = _null_vectors(K)
    whole = np.zeros((allowed.size, 2))
    whole[own] = w / size[:, None]
    moved = direction(whole)
    largest = np.abs(moved).max(axis=0, initial=0.0)
    moves = allowed & (np.abs(moved) > ZERO * largest).any(axis=1)
    return Within(own.size - rank, moves, np.where(moves, moved[:, 0], 0.0))


def _null_vectors(K: Vector) -> tuple[Vector, int]:
    """Two generic vectors ``w``, shape ``(d, 2)``, with ``w' K = 0``, and the rank of ``K``.

    Drawn from a fixed seed; two, so that one unlucky draw hides nothing: an entry that is
    0 in both is 0 in all.
    """
    from scipy.linalg import qr

    rows = _to_one(np.abs(K).max(axis=1, initial=0.0))
    K = K * rows[:, None]
    K = K[:, K.any(axis=0)]
    w = np.random.default_rng(0).uniform(1, 2, (rows.size, 2))
    rank = 0
    if K.size:
        K = K * _to_one(np.abs(K).max(axis=0))
        Q, R, _ = qr(K, mode="economic", pivoting=True)
        sizes = np.abs(np.diag(R))
        rank = int(np.count_nonzero(sizes > RANK * sizes[0]))
        w -= Q[:, :rank] @ (Q[:, :rank].T @ w)
    if rows.size == rank:
        w *= 0.0
    return w * rows[:, None], rank


def _to_one(size: Vector) -> Vector:
    return 1.0 / np.where(size > 0, size, 1.0)
