"""Prices recomputed from a basis by a factorization of our own.

A basis with ``k`` basic columns ``C`` and as many nonbasic rows ``R`` fixes the
prices by itself: ``A[R, C]' y_R = c_C``, and ``y_i = 0`` in every basic row, in
either sense. The solver's own prices come from its own factorization of the same
matrix, so the two differ by rounding alone, as far as the condition of the matrix
explains it, unless the solver's prices do not belong to that basis.

Rows and columns of the matrix are scaled by powers of two before it is factored.
Norms of inverses are estimated by Hager's method in Higham's form (Higham 1988,
"FORTRAN codes for estimating the one-norm of a real or complex matrix", ACM TOMS
14, algorithm 4.1), which is deterministic and almost never off by a factor of 3.
The error bound is the componentwise one of Arioli, Demmel and Duff (1989, "Solving
sparse linear systems with sparse backward error").
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import Any, Literal

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csc_array

from lpview.accurate import minus, segment_sums, two_product
from lpview.answer import Basis, LineStatus
from lpview.decimals import low_parts_of
from lpview.model import LinearProgram, Vector

Index = NDArray[np.intp]
Exact = Mapping[int, Fraction]
Operator = Callable[[Vector], Vector]

RESIDUAL = 1e-12
"""Prices count as those of the basis if in each basic column they leave at most this
times ``|c_j| + sum_i |a_ij y_i|``. It is some thousand roundings: a solver updates
its factors many times and is content with less than working precision."""


@dataclass(frozen=True, eq=False)
class BasisPrices:
    """The prices that a basis fixes."""

    y: Vector
    """Dual values, shape ``(m,)``, signs as in `lpview.model`; 0 in basic rows."""
    z: Vector
    """Reduced costs ``c - A'y`` in plain double arithmetic, shape ``(n,)``."""
    condition: float
    """Condition number of the scaled basis matrix in the one-norm, estimated; 1 for
    a basis without columns."""
    explained: Vector
    """Shape ``(m,)``, units of ``y``: how far other prices of this basis can lie
    from ``y`` if they leave residuals up to `RESIDUAL`; 0 in basic rows."""


@dataclass(frozen=True)
class SingularBasis:
    """A basis that fixes no prices."""

    reason: str
    """Why, as the end of a sentence that begins with "the basis"."""


@dataclass(frozen=True)
class PriceDifference:
    """How far two vectors of dual values lie apart."""

    largest: float
    """Largest absolute difference; 0 without rows, nan where a value is nan."""
    row: int | None
    """Index of the row where it occurs; None where the largest difference is 0."""
    beyond: int
    """Number of rows that differ by more than was allowed."""


@dataclass(frozen=True, eq=False)
class BasisMatrix:
    """The matrix ``A[R, C]`` of a basis, shape ``(k, k)``, scaled and factored."""

    rows: Index
    """The nonbasic rows ``R``, ascending, shape ``(k,)``."""
    columns: Index
    """The basic columns ``C``, ascending, shape ``(k,)``."""
    condition: float
    """Condition number of ``scaled'`` in the one-norm, estimated; 1 for ``k = 0``."""
    scaled: csc_array
    """``D_C A[R, C]' D_R``, whose largest entries are near 1."""
    row_scale: Vector
    """Diagonal of ``D_R``, shape ``(k,)``, powers of two."""
    column_scale: Vector
    """Diagonal of ``D_C``, shape ``(k,)``, powers of two."""
    factors: Any
    """Triangular factors of ``scaled``, as scipy keeps them; None for ``k = 0``."""

    def prices(self, costs: Vector) -> Vector:
        """The solution ``y_R`` of ``A[R, C]' y_R = costs``, shapes ``(k,)`` or ``(k, b)``."""
        scaled = _times(self.column_scale, costs)
        return _times(self.row_scale, _solved(self.factors, scaled))

    def plan(self, sides: Vector) -> Vector:
        """The solution ``x_C`` of ``A[R, C] x_C = sides``, shapes ``(k,)`` or ``(k, b)``."""
        scaled = _times(self.row_scale, sides)
        return _times(self.column_scale, _solved(self.factors, scaled, "T"))


def basis_prices(lp: LinearProgram, basis: Basis) -> BasisPrices | SingularBasis:
    """Solve for the prices that ``basis`` fixes, for the numbers of the file."""
    matrix = factor_basis(lp, basis)
    return matrix if isinstance(matrix, SingularBasis) else matrix_prices(lp, matrix)


def factor_basis(lp: LinearProgram, basis: Basis) -> BasisMatrix | SingularBasis:
    """Scale and factor the matrix of ``basis``, and estimate its condition.

    It counts as singular when its condition number is ``2**52`` or more.
    """
    columns = np.flatnonzero(basis.column == LineStatus.BASIC)
    rows = np.flatnonzero(basis.row != LineStatus.BASIC)
    if rows.size != columns.size:
        return SingularBasis(
            f"has {columns.size} basic columns for {rows.size} nonbasic rows, "
            "which should be equally many"
        )
    scaled, row_scale, column_scale = _scaled(lp, rows, columns)
    try:
        factors = _factors(scaled)
    except RuntimeError:  # what scipy raises for a pivot that is exactly 0
        return SingularBasis("has an exactly singular matrix")
    with np.errstate(over="ignore", invalid="ignore"):
        condition = _condition(scaled, factors)
    if not condition < 2.0**52:
        return SingularBasis(
            f"has a matrix that is singular to working precision (condition about {condition:.0e})"
        )
    return BasisMatrix(rows, columns, condition, scaled, row_scale, column_scale, factors)


def matrix_prices(lp: LinearProgram, matrix: BasisMatrix) -> BasisPrices:
    """The prices that a factored basis fixes.

    One step of refinement, its residual summed from the file's digits, makes them
    good to about working precision while ``condition`` is well below ``1e16``.
    """
    y, explained = np.zeros(lp.m), np.zeros(lp.m)
    costs = lp.c[matrix.columns]
    y[matrix.rows] = matrix.prices(costs)
    y[matrix.rows] += matrix.prices(_residual(lp, matrix.columns, y))
    explained[matrix.rows] = _explained(matrix, y[matrix.rows], costs)
    return BasisPrices(y, lp.c - lp.A.T @ y, matrix.condition, explained)


def compare_prices(first: Vector, second: Vector, allowed: Vector) -> PriceDifference:
    """Compare two vectors of dual values, shape ``(m,)``, row by row.

    ``allowed`` is, per row, what the condition of the basis explains, plus what the
    tolerance of whoever found ``second`` leaves open. A row beyond it only makes it
    probable that the prices are not unique; to be sure takes a proof.
    """
    apart = np.abs(first - second)
    if not apart.any():
        return PriceDifference(0.0, None, 0)
    row = int(np.argmax(apart))  # a nan counts as largest, and as beyond
    beyond = int(np.count_nonzero(~(apart <= allowed)))
    return PriceDifference(float(apart[row]), row, beyond)


def _scaled(lp: LinearProgram, rows: Index, columns: Index) -> tuple[csc_array, Vector, Vector]:
    """The transposed basis matrix, scaled; and the scales of its rows and columns."""
    # Stored by row, A[R, C] is its transpose stored by column. The transpose is
    # factored because real bases fill in up to three times less that way.
    by_row = lp.A[rows][:, columns]
    size = np.abs(by_row.data)
    row_of = np.repeat(np.arange(rows.size), np.diff(by_row.indptr))
    column_scale = _to_one(by_row.indices, size, columns.size)
    row_scale = _to_one(row_of, size * column_scale[by_row.indices], rows.size)
    data = by_row.data * column_scale[by_row.indices] * row_scale[row_of]
    parts = (data, by_row.indices, by_row.indptr)
    return csc_array(parts, shape=by_row.shape[::-1]), row_scale, column_scale


def _to_one(line: Index, size: Vector, count: int) -> Vector:
    """Powers of two that bring each line's largest size into ``[0.5, 1)``."""
    largest = np.zeros(count)
    np.maximum.at(largest, line, size)
    scale: Vector = np.ldexp(1.0, -np.frexp(largest)[1])
    return scale


def import_factorization() -> None:
    """Import what `factor_basis` needs, which takes as long as many a solve."""
    import scipy.sparse.linalg  # noqa: F401


def _factors(scaled: csc_array) -> Any:
    if not scaled.shape[0]:
        return None
    # Here and not above: this import takes as long as many a whole solve.
    from scipy.sparse.linalg import splu

    return splu(scaled)


def _solved(factors: Any, right: Vector, trans: Literal["N", "T"] = "N") -> Vector:
    solution: Vector = right if factors is None else factors.solve(right, trans=trans)
    return solution


def _times(scale: Vector, values: Vector) -> Vector:
    """Each entry, or each row of a matrix, times its scale."""
    product: Vector = scale * values if values.ndim == 1 else scale[:, None] * values
    return product


def _condition(scaled: csc_array, factors: Any) -> float:
    if factors is None:
        return 1.0
    norm = float(abs(scaled).sum(axis=1).max())
    return norm * _one_norm(
        lambda v: _solved(factors, v, "T"), lambda v: _solved(factors, v), scaled.shape[0]
    )


def _explained(matrix: BasisMatrix, y: Vector, costs: Vector) -> Vector:
    """Largest change of ``y`` under residuals up to `RESIDUAL`, estimated."""
    if not y.size:
        return y
    terms = abs(matrix.scaled) @ np.abs(y / matrix.row_scale)
    terms += np.abs(matrix.column_scale * costs)
    norm = _one_norm(
        lambda v: terms * _solved(matrix.factors, v, "T"),
        lambda v: _solved(matrix.factors, terms * v),
        y.size,
    )
    return RESIDUAL * norm * matrix.row_scale


def _residual(lp: LinearProgram, columns: Index, y: Vector) -> Vector:
    """``c_j - sum_i a_ij y_i`` of the columns, from the file's digits."""
    A = lp.A_by_column
    counts = np.diff(A.indptr)[columns]
    starts = np.concatenate([[0], np.cumsum(counts)])
    position = np.arange(starts[-1]) + np.repeat(A.indptr[columns] - starts[:-1], counts)
    a, prices = A.data[position], y[A.indices[position]]
    odd = lp.odd.get("A", {})
    low = _low_parts(a, odd, lp.by_column_order[position])
    product, error = two_product(a, prices)
    sums = segment_sums([product, error, low * prices], starts)
    c = lp.c[columns]
    return minus((c, _low_parts(c, lp.odd.get("c", {}), columns)), sums)[0]


def _low_parts(values: Vector, odd: Exact, index: Index) -> Vector:
    """Low parts of ``values``, whose odd numbers are given by their ``index``."""
    if not odd:
        return low_parts_of(values, {})
    keys = np.fromiter(odd, dtype=np.intp)
    hits = np.flatnonzero(np.isin(index, keys)).tolist()
    return low_parts_of(values, {k: odd[int(index[k])] for k in hits})


def _one_norm(apply: Operator, adjoint: Operator, size: int) -> float:
    """Estimate the one-norm of a linear operator on vectors of ``size``; never more.

    ``adjoint`` applies the transpose. At most eleven applications.
    """
    applied = apply(np.full(size, 1.0 / size))
    norm = float(np.abs(applied).sum())
    signs = np.where(applied < 0.0, -1.0, 1.0)
    slopes = np.abs(adjoint(signs))
    for _ in range(4):
        best = int(np.argmax(slopes))
        applied = apply(np.eye(1, size, best)[0])
        found = float(np.abs(applied).sum())
        if not found > norm:
            break
        norm = found
        turned = np.where(applied < 0.0, -1.0, 1.0)
        if np.array_equal(turned, signs):
            break
        signs, slopes = turned, np.abs(adjoint(turned))
        if slopes[best] == slopes.max():
            break
    # Higham's guard against the rare matrix that hides from all of these.
    steps = np.arange(size)
    guard = apply((1.0 + steps / max(size - 1, 1)) * np.where(steps % 2, -1.0, 1.0))
    return max(norm, 2.0 * float(np.abs(guard).sum()) / (3.0 * size))
