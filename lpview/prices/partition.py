"""Which lines can have slack in some optimal plan, and which a price in some optimal dual.

At an optimal basis only two kinds of lines are open: the basic ones with zero slack
(``D``) and the nonbasic ones with price zero (``Z``). With ``K = T[D, Z]``, oriented so
that slack and price of either end are positive, the optimal plans near this one are
``u_Z >= 0, K u_Z >= 0`` and the optimal duals ``w_D >= 0, -K' w_D >= 0``. By Tucker's
theorem on such pairs of cones exactly one of slack and price can be positive on each line
(Goldman and Tucker 1956, "Theory of linear programming"; Freund, Roundy and Todd 1985,
"Identifying the set of always-active constraints in a system of linear inequalities by a
single linear program", for finding all of them by linear programs). Both cones are
explored, and a line on which they disagree is left open rather than guessed.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.sparse import csr_array

from lpview.model import Vector
from lpview.prices.lines import Index, Lines, Mask
from lpview.prices.tableau import Tableau
from lpview.warm import Box, Vertex, WarmMaker

POSITIVE = 1e-7
"""What counts as positive in cones whose entries are scaled to 1 and cut off at 1."""

RANK = 1e-9
"""Diagonal entries of a factorization below this times the largest count as zero."""

STILL = 1e-9
"""Entries of a generic direction below this times its largest one do not move."""


class GivenUpError(Exception):
    """The partition could not be found; nothing about it can be said."""


@dataclass(frozen=True, eq=False)
class Partition:
    """The strictly complementary partition, and how far the optimal faces reach."""

    has_slack: Mask
    """Lines with slack in some optimal plan, shape ``(m + n,)``."""
    has_price: Mask
    """Lines with a price in some optimal dual; equalities and fixed columns always count."""
    settled: Mask
    """Where exactly one of the two could be shown."""
    value_moves: Mask
    """Lines whose value is not the same in all optimal plans."""
    price_moves: Mask
    """Lines whose price is not the same in all optimal duals."""
    plan_dimension: int
    """Dimension of the set of optimal plans."""
    price_dimension: int
    """Dimension of the set of optimal dual solutions ``(y, z)``."""


def partition(lines: Lines, tableau: Tableau, warm: WarmMaker) -> Partition:
    """Find the partition at an optimal basis.

    Raises
    ------
    GivenUpError
        The solver left a question open.
    lpview.scaling.NotRepresentableError
        The solver cannot be given the numbers.
    """
    D = np.flatnonzero(lines.basic & lines.at_end)
    Z = np.flatnonzero(~lines.basic & ~lines.equal & (lines.price == 0))
    has_slack = ~lines.at_end & ~lines.equal
    has_price = lines.equal | (lines.price != 0)
    settled = np.ones(lines.value.size, dtype=bool)
    K = _open_part(lines, tableau, D, Z)
    free, equal = ~lines.at_end[Z], lines.equal[D]
    slack_z, slack_d = _support(K, free, equal, warm)
    price_d, price_z = _support(-K.T, equal, free, warm)
    has_slack[Z], has_slack[D] = slack_z | free, slack_d
    has_price[D], has_price[Z] = price_d | equal, price_z
    settled[Z], settled[D] = has_slack[Z] ^ has_price[Z], has_slack[D] ^ has_price[D]
    stay, move = ~has_slack[D], has_slack[Z]
    left, right, rank = _null_vectors(K[stay][:, move])
    values = _unfold(lines, Z[move], right, tableau.value_direction)
    prices = _unfold(lines, D[stay], left, tableau.price_direction)
    return Partition(
        has_slack=has_slack,
        has_price=has_price,
        settled=settled,
        value_moves=values,
        price_moves=prices,
        plan_dimension=int(move.sum()) - rank,
        price_dimension=int(stay.sum()) - rank,
    )


def inward(lines: Lines, index: Index) -> Vector:
    """1 where slack is counted upwards (zero slack below, or none), else -1."""
    return np.where(lines.at_high[index] & ~lines.at_low[index], -1.0, 1.0)


def _open_part(lines: Lines, tableau: Tableau, D: Index, Z: Index) -> Vector:
    """``K``, oriented; dense, because its rank is wanted."""
    K = np.zeros((D.size, Z.size))
    if D.size <= Z.size:
        begin = 0
        for block, directions in tableau.price_directions(D):
            K[begin : begin + block.size] = -directions[Z].T
            begin += block.size
    else:
        begin = 0
        for block, directions in tableau.value_directions(Z):
            K[:, begin : begin + block.size] = directions[D]
            begin += block.size
    K *= inward(lines, D)[:, None] * inward(lines, Z)[None, :]
    return K


def _support(K: Vector, free: Mask, equal: Mask, warm: WarmMaker) -> tuple[Mask, Mask]:
    """Which entries of ``u`` and ``K u`` can be positive in ``u >= 0, K u >= 0``.

    ``free`` entries of ``u`` have any sign, ``equal`` rows of ``K u`` are 0. The cone is
    cut off at 1; as long as the sum of the entries not yet seen positive can be made
    positive, it adds to them.
    """
    d, z = K.shape
    in_u, in_Ku = np.zeros(z, bool), np.zeros(d, bool)
    if not z:
        return in_u, in_Ku
    if not d:
        return ~free, in_Ku
    K = _equilibrated(K)
    model = warm(
        csr_array(K),
        Box(np.zeros(d), np.where(equal, 0.0, 1.0), np.where(free, -1.0, 0.0), np.ones(z)),
    )
    columns = np.arange(z, dtype=np.int32)
    while True:
        wanted = (~in_u & ~free).astype(float) + (~in_Ku & ~equal).astype(float) @ K
        found = model.least(columns, -wanted)
        if not isinstance(found, Vertex):
            raise GivenUpError("the solver gave up on the optimal face")
        more_u = ~in_u & ~free & (found.x > POSITIVE)
        more_Ku = ~in_Ku & ~equal & (K @ found.x > POSITIVE)
        if not (more_u.any() or more_Ku.any()):
            return in_u, in_Ku
        in_u |= more_u
        in_Ku |= more_Ku


def _equilibrated(K: Vector) -> Vector:
    """``K`` with rows and columns scaled towards 1, which changes no sign and no cone."""
    for _ in range(3):
        for axis in (0, 1):
            size = np.abs(K).max(axis=axis, keepdims=True)
            K = K / np.where(size > 0, np.sqrt(size), 1.0)
    K[np.abs(K) < 1e-10] = 0.0
    return K


def _null_vectors(K: Vector) -> tuple[Vector, Vector, int]:
    """Two generic vectors each with ``w' K = 0`` and ``K u = 0``, and the rank of ``K``.

    An entry that is 0 in generic vectors is 0 in all; two of them, drawn from a fixed
    seed, so that one unlucky draw hides nothing.
    """
    from scipy.linalg import qr, solve_triangular

    draw = np.random.default_rng(0)
    d, z = K.shape
    left, right = draw.uniform(1, 2, (d, 2)), draw.uniform(1, 2, (z, 2))
    if not (d and z and K.any()):
        return left, right, 0
    Q, R, order = qr(K, mode="economic", pivoting=True)
    sizes = np.abs(np.diag(R))
    rank = int(np.count_nonzero(sizes > RANK * sizes[0]))
    left -= Q[:, :rank] @ (Q[:, :rank].T @ left)
    loose = right[rank:]
    bound = -solve_triangular(R[:rank, :rank], R[:rank, rank:] @ loose)
    right[order] = np.concatenate([bound, loose])
    return _nonzero(left, d > rank), _nonzero(right, z > rank), rank


def _nonzero(vectors: Vector, any_left: bool) -> Vector:
    largest = np.abs(vectors).max(axis=0, initial=0.0)
    return np.where(np.abs(vectors) <= STILL * largest, 0.0, vectors) if any_left else vectors * 0.0


def _unfold(lines: Lines, index: Index, own: Vector, direction: object) -> Mask:
    """Lines that move when ``index`` moves as two generic vectors say."""
    whole = np.zeros((lines.value.size, 2))
    whole[index] = own * inward(lines, index)[:, None]
    if not whole.any():
        return np.zeros(lines.value.size, bool)
    moved = direction(whole)  # type: ignore[operator]
    largest = np.abs(moved).max(axis=0)
    moves: Mask = (np.abs(moved) > STILL * largest).any(axis=1)
    return moves
