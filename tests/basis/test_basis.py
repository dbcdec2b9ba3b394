"""Prices of a basis, its condition, and what that explains."""

from __future__ import annotations

import itertools
import subprocess
import sys
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.sparse import csr_array

from lpview.answer import Basis, LineStatus
from lpview.basis import (
    RESIDUAL,
    BasisMatrix,
    BasisPrices,
    PriceDifference,
    SingularBasis,
    basis_prices,
    compare_prices,
    factor_basis,
)
from lpview.model import LinearProgram, Sense, frozen_odd
from tests.basis import exact
from tests.strategies import linear_programs

LOWER, BASIC, UPPER, FREE = LineStatus


def model(matrix, costs, sense=Sense.MINIMIZE, odd=None):
    matrix = np.array(matrix, float).reshape(-1, len(costs))
    m, n = matrix.shape
    return LinearProgram(
        name="small",
        sense=sense,
        columns=tuple(f"x{j}" for j in range(n)),
        rows=tuple(f"r{i}" for i in range(m)),
        c=np.array(costs, float),
        A=csr_array(matrix),
        row_lower=np.zeros(m),
        row_upper=np.full(m, np.inf),
        lower=np.zeros(n),
        upper=np.full(n, np.inf),
        odd=frozen_odd(odd or {}),
    )


def basis(columns, rows):
    return Basis(np.array(columns, np.int8), np.array(rows, np.int8))


GLASSHOUSE = model([[15, 2], [5.2, 0], [4, 0]], [30, 1.6], Sense.MAXIMIZE)
"""Maximize 30 tomato + 1.6 basil; rows heat, bench, water."""


def test_two_bases_of_a_degenerate_vertex_by_hand():
    # Tomato basic with heat: 15 y = 30, z = (0, 1.6 - 2 x 2).
    by_heat = basis_prices(GLASSHOUSE, basis([BASIC, LOWER], [UPPER, BASIC, BASIC]))
    assert by_heat.y.tolist() == [2, 0, 0]
    assert by_heat.z == pytest.approx([0, -2.4], abs=1e-15)
    # Tomato basic with water: 4 y = 30, z = (0, 1.6).
    by_water = basis_prices(GLASSHOUSE, basis([BASIC, LOWER], [BASIC, BASIC, UPPER]))
    assert (by_water.y.tolist(), by_water.z.tolist()) == ([0, 0, 7.5], [0, 1.6])
    apart = compare_prices(by_heat.y, by_water.y, by_heat.explained)
    assert apart == PriceDifference(largest=7.5, row=2, beyond=2)


def test_two_columns_by_hand():
    # min 8a + 7b + c: 2p + 4q = 8 and p + 5q = 7 give p = 2, q = 1; row 1 is basic.
    lp = model([[2, 1, 1], [7, 8, 9], [4, 5, 1]], [8, 7, 1])
    found = basis_prices(lp, basis([BASIC, BASIC, FREE], [LOWER, BASIC, LOWER]))
    assert found.y == pytest.approx([2, 0, 1], abs=1e-15)
    assert found.z == pytest.approx([0, 0, 1 - 3], abs=1e-14)
    assert found.explained[1] == 0
    assert (found.explained[[0, 2]] > 0).all()


def test_plan_and_prices_of_the_factored_matrix_by_hand():
    lp = model([[2, 1, 1], [7, 8, 9], [4, 5, 1]], [8, 7, 1])
    matrix = factor_basis(lp, basis([BASIC, BASIC, LOWER], [LOWER, BASIC, UPPER]))
    assert isinstance(matrix, BasisMatrix)
    assert (matrix.rows.tolist(), matrix.columns.tolist()) == ([0, 2], [0, 1])
    # 2a + b = 5, 4a + 5b = 13: a = 2, b = 1.
    assert matrix.plan(np.array([5.0, 13.0])) == pytest.approx([2, 1], abs=1e-15)
    assert matrix.prices(np.array([8.0, 7.0])) == pytest.approx([2, 1], abs=1e-15)


def test_condition_of_a_diagonal_is_one_whatever_its_units():
    lp = model(np.diag([1.0, 2.0**40, 2.0**-90]), [1, 1, 1])
    found = basis_prices(lp, basis([BASIC] * 3, [LOWER] * 3))
    assert found.condition == 1
    assert found.y.tolist() == [1, 2.0**-40, 2.0**90]


def test_condition_by_hand():
    # Entries are scaled to [[1/2, 1/2], [1/2, 1/4]], whose inverse is
    # [[-2, 4], [4, -4]]: one-norms 1 and 8.
    lp = model([[8, 8], [8, 4]], [1, 1])
    assert basis_prices(lp, basis([BASIC] * 2, [LOWER] * 2)).condition == 8
    # Halves, whose columns add up to 1 at most and whose rows to 3/2; the columns
    # of the inverse [[2, -2, -2], [0, 2, 0], [0, 0, 2]] add up to 4 at most.
    lp = model([[8, 8, 8], [0, 8, 0], [0, 0, 8]], [1, 1, 1])
    assert basis_prices(lp, basis([BASIC] * 3, [LOWER] * 3)).condition == 4


@pytest.mark.parametrize(
    ("matrix", "columns", "rows", "reason"),
    [
        ([[1, 2], [2, 4]], [1, 1], [0, 0], "has an exactly singular matrix"),
        ([[1, 0], [2, 0]], [1, 1], [0, 0], "has an exactly singular matrix"),
        (
            [[1, 2], [3, 4]],
            *([1, 1], [0, 1]),
            "has 2 basic columns for 1 nonbasic rows, which should be equally many",
        ),
    ],
)
def test_a_singular_basis(matrix, columns, rows, reason):
    found = basis_prices(model(matrix, [1, 1]), basis(columns, rows))
    assert found == SingularBasis(reason)


def test_singular_to_working_precision():
    lp = model([[1, 1], [1, 1 + 2.0**-52]], [1, 1])
    found = basis_prices(lp, basis([BASIC] * 2, [LOWER] * 2))
    assert isinstance(found, SingularBasis)
    assert found.reason == (
        "has a matrix that is singular to working precision (condition about 2e+16)"
    )


@pytest.mark.parametrize("sense", Sense)
def test_all_rows_basic(sense):
    lp = model([[1, 2], [3, 4]], [5, 6], sense)
    found = basis_prices(lp, basis([LOWER, UPPER], [BASIC, BASIC]))
    assert (found.y.tolist(), found.z.tolist()) == ([0, 0], [5, 6])
    assert (found.condition, found.explained.tolist()) == (1, [0, 0])


def test_no_rows():
    found = basis_prices(model([], [5, 6]), basis([LOWER, FREE], []))
    assert (found.y.tolist(), found.z.tolist(), found.condition) == ([], [5, 6], 1)


def test_no_columns():
    lp = model(np.zeros((2, 1)), [1])
    lp = LinearProgram(
        *("none", Sense.MINIMIZE, (), lp.rows, np.zeros(0), csr_array((2, 0))),
        *(lp.row_lower, lp.row_upper, np.zeros(0), np.zeros(0)),
    )
    assert basis_prices(lp, basis([], [BASIC, BASIC])).y.tolist() == [0, 0]


def test_refinement_finds_the_prices_of_the_files_numbers():
    # 1 / (i + 2j + 1), whose doubles are another matrix with other prices.
    size = 7
    fractions = [[Fraction(1, i + 2 * j + 1) for j in range(size)] for i in range(size)]
    positions = enumerate(itertools.chain(*fractions))
    odd = {"A": {k: f for k, f in positions if Fraction(repr(float(f))) != f}}
    matrix = [[float(entry) for entry in row] for row in fractions]
    lp = model(matrix, [1.0] * size, odd=odd)
    found = basis_prices(lp, basis([BASIC] * size, [LOWER] * size))
    back = exact.inverse(fractions)
    right = exact.product(exact.transposed(back), [Fraction(1)] * size)
    expected = np.array([float(value) for value in right])
    plain = np.linalg.solve(np.array(matrix).T, np.ones(size))
    assert np.abs(plain - expected).max() > 1e-9 * np.abs(expected).max()
    assert found.condition > 1e8
    # One step leaves about the first error squared: near working precision.
    assert found.y == pytest.approx(expected, rel=1e-12)


@st.composite
def lp_and_basis(draw):
    lp = draw(linear_programs(nasty_names=False))
    size = draw(st.integers(0, min(lp.m, lp.n)))
    columns = draw(st.permutations(range(lp.n)))[:size]
    rows = draw(st.permutations(range(lp.m)))[:size]
    nonbasic = st.sampled_from([LOWER, UPPER, FREE])
    column_status = [BASIC if j in columns else draw(nonbasic) for j in range(lp.n)]
    row_status = [draw(nonbasic) if i in rows else BASIC for i in range(lp.m)]
    return lp, basis(column_status, row_status)


@given(lp_and_basis())
def test_random_bases_against_fractions(drawn):
    lp, status = drawn
    matrix, rows, columns = exact.basis_matrix(lp, status)
    found, back = basis_prices(lp, status), exact.inverse(matrix)
    scaled = _true_condition(lp, status, back)
    if isinstance(found, SingularBasis):
        assert scaled > 1e13
        return
    if scaled > 1e10:
        assert found.condition > 1e8
        return
    assert scaled / 10 <= found.condition <= scaled * (1 + 1e-9)
    costs = [exact.exact_costs(lp)[j] for j in columns]
    expected = np.zeros(lp.m)
    expected[rows] = [float(v) for v in exact.product(exact.transposed(back), costs)]
    assert (np.abs(found.y - expected) <= 1e-3 * found.explained).all()
    assert np.allclose(found.z, lp.c - lp.A.T @ found.y, rtol=1e-14)


def _true_condition(lp, status, back):
    """Exact condition number of the scaled matrix; inf where it is singular."""
    if back is None:
        return np.inf
    if not back:
        return 1.0
    matrix, _, _ = exact.basis_matrix(lp, status)
    right = [_power(max(map(abs, column))) for column in zip(*matrix, strict=True)]
    matrix = [[a * r for a, r in zip(row, right, strict=True)] for row in matrix]
    left = [_power(max(map(abs, row))) for row in matrix]
    matrix = [[a * s for a in row] for row, s in zip(matrix, left, strict=True)]
    return float(exact.one_norm(matrix) * exact.one_norm(exact.inverse(matrix)))


def _power(size):
    return Fraction(2) ** -int(np.frexp(float(size))[1])


@given(lp_and_basis(), st.data())
def test_prices_with_small_residuals_are_explained(drawn, data):
    lp, status = drawn
    found = basis_prices(lp, status)
    matrix, rows, columns = exact.basis_matrix(lp, status)
    if isinstance(found, SingularBasis) or found.condition > 1e10 or not matrix:
        return
    y = [Fraction(value) for value in found.y[rows].tolist()]
    sizes = [list(map(abs, column)) for column in zip(*matrix, strict=True)]
    terms = exact.product(sizes, list(map(abs, y)))
    costs = [abs(exact.exact_costs(lp)[j]) for j in columns]
    signs = data.draw(st.lists(st.sampled_from([-1, 1]), min_size=len(y), max_size=len(y)))
    left = [
        sign * (term + cost) * Fraction(RESIDUAL)
        for sign, term, cost in zip(signs, terms, costs, strict=True)
    ]
    moved = exact.product(exact.transposed(exact.inverse(matrix)), left)
    # The estimate may fall short of the worst case a little, never by a factor of 10.
    assert (np.abs([float(v) for v in moved]) <= 10 * found.explained[rows]).all()


def test_what_is_explained_is_tight_by_hand():
    # p + q / 2^20 = 3 and p - q / 2^20 = 1: p = 2, q = 2^20. Terms 3 + 3 and 1 + 3,
    # times the inverse [[1, 1], [1, -1]] / 2: the worst change of p is 5 residuals,
    # that of q 2^20 times as much.
    lp = model([[1, 1], [2.0**-20, -(2.0**-20)]], [3, 1])
    found = basis_prices(lp, basis([BASIC] * 2, [LOWER] * 2))
    assert found.y.tolist() == [2, 2**20]
    assert found.explained.tolist() == [5 * RESIDUAL, 5 * RESIDUAL * 2**20]


def test_compare_prices_counts_rows_beyond_what_is_allowed():
    first, allowed = np.array([1.0, 2.0, 3.0, 0.0]), np.array([0.1, 0.1, 0.1, 0.0])
    second = np.array([1.05, 2.5, 2.0, 0.0])
    assert compare_prices(first, second, allowed) == PriceDifference(1.0, 2, 2)
    assert compare_prices(first, first, allowed) == PriceDifference(0.0, None, 0)
    none = np.zeros(0)
    assert compare_prices(none, none, none) == PriceDifference(0.0, None, 0)


def test_a_price_that_is_no_number_is_the_largest_difference():
    first, second = np.array([5.0, np.nan, 1.0]), np.array([1.0, 2.0, 1.0])
    found = compare_prices(first, second, np.full(3, 9.0))
    assert np.isnan(found.largest)
    assert (found.row, found.beyond) == (1, 1)


def test_the_same_basis_gives_the_same_numbers_twice():
    generator = np.random.default_rng(5)
    matrix = generator.integers(-3, 4, (30, 40)) * (generator.random((30, 40)) < 0.3)
    matrix[:, :30] += 7 * np.eye(30, dtype=int)
    lp = model(matrix, generator.integers(1, 9, 40))
    status = basis([BASIC] * 30 + [LOWER] * 10, [LOWER] * 30)
    first, second = basis_prices(lp, status), basis_prices(lp, status)
    assert isinstance(first, BasisPrices)
    assert first.condition == second.condition
    assert first.explained.tolist() == second.explained.tolist()
    assert np.abs(first.z[:30]).max() < 1e-14


def test_factoring_is_imported_only_when_needed():
    code = "import sys, lpview.basis; sys.exit('scipy.sparse.linalg' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], check=False).returncode == 0
