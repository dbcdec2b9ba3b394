"""Prices of a basis in exact fractions, by elimination on the dense matrix."""

from __future__ import annotations

from fractions import Fraction

import numpy as np

from lpview.decimals import exact_value


def exact_matrix(lp):
    """The coefficients of the file, dense, ``m`` lists of ``n`` fractions."""
    dense = [[Fraction(0)] * lp.n for _ in range(lp.m)]
    odd = lp.odd.get("A", {})
    for i in range(lp.m):
        for k in range(lp.A.indptr[i], lp.A.indptr[i + 1]):
            dense[i][lp.A.indices[k]] = exact_value(lp.A.data[k], odd.get(k))
    return dense


def exact_costs(lp):
    odd = lp.odd.get("c", {})
    return [exact_value(cost, odd.get(j)) for j, cost in enumerate(lp.c.tolist())]


def inverse(matrix):
    """The inverse of a square matrix of fractions; None where there is none."""
    size = len(matrix)
    work = [[*row, *(Fraction(i == j) for j in range(size))] for i, row in enumerate(matrix)]
    for k in range(size):
        pivot = next((i for i in range(k, size) if work[i][k]), None)
        if pivot is None:
            return None
        work[k], work[pivot] = work[pivot], work[k]
        work[k] = [entry / work[k][k] for entry in work[k]]
        for i in range(size):
            if i != k and work[i][k]:
                factor = work[i][k]
                work[i] = [a - factor * b for a, b in zip(work[i], work[k], strict=True)]
    return [row[size:] for row in work]


def one_norm(matrix):
    return max(sum(map(abs, column)) for column in zip(*matrix, strict=True))


def transposed(matrix):
    return [list(column) for column in zip(*matrix, strict=True)]


def product(matrix, vector):
    return [sum(a * v for a, v in zip(row, vector, strict=True)) for row in matrix]


def basis_matrix(lp, basis):
    """``A[R, C]`` as fractions, and its rows and columns."""
    rows, columns = np.flatnonzero(basis.row != 1), np.flatnonzero(basis.column == 1)
    dense = exact_matrix(lp)
    return [[dense[i][j] for j in columns] for i in rows], rows, columns
