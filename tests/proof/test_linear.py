"""Integer systems solved exactly, against elimination in fractions."""

from __future__ import annotations

from fractions import Fraction
from math import comb

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.linalg import lu_factor, lu_solve
from scipy.sparse import csr_array

from lpview.proof.linear import NotSolvedError, solve, system

PATIENCE = 300
"""Steps after which these tests give a system up."""


def eliminated(rows: list[list[int]], right: list[int]) -> list[Fraction] | None:
    """The solution by Gauss's elimination in fractions, or None if the matrix is singular."""
    lines = [[*map(Fraction, row), Fraction(b)] for row, b in zip(rows, right, strict=True)]
    for k in range(len(lines)):
        place = next((i for i in range(k, len(lines)) if lines[i][k]), None)
        if place is None:
            return None
        lines[k], lines[place] = lines[place], lines[k]
        lines[k] = [a / lines[k][k] for a in lines[k]]
        for i, line in enumerate(lines):
            if i != k and line[k]:
                lines[i] = [a - line[k] * b for a, b in zip(line, lines[k], strict=True)]
    return [line[-1] for line in lines]


def matrix(rows: list[list[int]]):
    """The system of these rows; its positions are mixed up, as those of a transpose are."""
    k = len(rows)
    cells = [(j, i) for j in range(k) for i in range(k) if rows[i][j]]
    places = np.zeros((k, k), np.int64)
    for number, (j, i) in enumerate(cells, 1):
        places[i, j] = number
    return system(csr_array(places), [rows[i][j] for j, i in cells])


def approximately(rows: list[list[int]]):
    """A floating solver of rows scaled to size 1."""
    sizes = [max(map(abs, row), default=1) or 1 for row in rows]
    scaled = [[a / size for a in row] for row, size in zip(rows, sizes, strict=True)]
    factors = lu_factor(np.array(scaled, float)) if rows else None
    return lambda b: lu_solve(factors, b / np.array(sizes, float))


def solved(rows, right, approximate=None) -> list[Fraction]:
    left = iter(range(PATIENCE))

    def between():
        if next(left, None) is None:
            raise AssertionError(f"neither solved nor refused in {PATIENCE} steps")

    approximate = approximate or approximately(rows)
    numerators, denominator = solve(matrix(rows), right, approximate, between)
    assert denominator > 0
    assert all(type(number) is int for number in (*numerators, denominator))
    return [Fraction(number, denominator) for number in numerators]


@st.composite
def systems(draw, entries):
    k = draw(st.integers(1, 6))
    rows = draw(st.lists(st.lists(entries, min_size=k, max_size=k), min_size=k, max_size=k))
    return rows, draw(st.lists(entries, min_size=k, max_size=k))


SMALL = st.sampled_from([*([0] * 6), *range(-9, 10)])
WORDS = st.integers(-(2**40), 2**40)
LONG = st.one_of(st.just(0), st.integers(-(10**40), 10**40))


@given(systems(SMALL))
def test_small_integers(drawn):
    check(*drawn)


@given(systems(WORDS))
def test_integers_of_forty_bits(drawn):
    check(*drawn)


@settings(max_examples=30)
@given(systems(LONG))
def test_integers_that_no_machine_word_holds(drawn):
    check(*drawn)


@given(systems(SMALL), st.integers(60, 200))
def test_right_hand_sides_that_no_machine_word_holds(drawn, bits):
    rows, right = drawn
    check(rows, [(b << bits) + b for b in right])


def check(rows, right):
    expected = eliminated(rows, right)
    if expected is not None and np.linalg.cond(np.array(rows, float)) < 1e12:
        assert solved(rows, right) == expected


def hilbert(k: int) -> list[list[int]]:
    """Hilbert's matrix times the least common multiple of its denominators' own rows."""
    common = k * comb(2 * k - 1, k) * 5040
    return [[common // (i + j + 1) for j in range(k)] for i in range(k)]


@pytest.mark.parametrize("k", [2, 4, 6, 8, 10])
def test_an_ill_conditioned_matrix(k):
    rows = hilbert(k)
    right = [1] + [0] * (k - 1)
    assert solved(rows, right) == eliminated(rows, right)


@pytest.mark.filterwarnings("ignore::scipy.linalg.LinAlgWarning")
def test_a_matrix_too_ill_conditioned_for_its_factors(monkeypatch):
    rows = [[10**9 + 1, 10**9], [10**9, 10**9 - 1]]  # determinant -1, condition 4e18
    assert solved(rows, [1, 0]) == [1 - 10**9, 10**9]  # by elimination, as it is small
    monkeypatch.setattr("lpview.proof.linear.SMALL", 0)
    with pytest.raises(NotSolvedError):
        solved(rows, [1, 0])


@pytest.mark.filterwarnings("ignore::scipy.linalg.LinAlgWarning")
@pytest.mark.parametrize("right", [[1, 2], [1, 1]])
def test_a_singular_matrix_is_refused(right):
    with pytest.raises(NotSolvedError):
        solved([[1, 1], [2, 2]], right)


@pytest.mark.parametrize("wrong", [0.0, 1.0, 1e300, np.inf, np.nan])
def test_a_solver_that_returns_anything_is_refused(wrong, monkeypatch):
    anything = lambda b: np.full(2, wrong)  # noqa: E731
    assert solved([[2, 1], [1, 3]], [1, 1], anything) == [Fraction(2, 5), Fraction(1, 5)]
    monkeypatch.setattr("lpview.proof.linear.SMALL", 0)
    with pytest.raises(NotSolvedError):
        solved([[2, 1], [1, 3]], [1, 1], anything)


@pytest.mark.parametrize("last", [4, 3.0001, 3.0000001])
def test_factors_of_another_matrix_never_give_a_wrong_answer(last):
    near = approximately([[2, 1], [1, last]])
    try:
        found = solved([[2, 1], [1, 3]], [1, 1], near)
    except NotSolvedError:
        return
    assert found == [Fraction(2, 5), Fraction(1, 5)]


def test_nothing_to_solve():
    assert solved([], []) == []
    assert solved([[7]], [0]) == [0]


@pytest.mark.parametrize(("a", "b"), [(3, 1), (-7, 10**30), (2**62, 2**63), (10**25, 7), (1, 1)])
def test_one_equation(a, b):
    assert solved([[a]], [b]) == [Fraction(b, a)]


def test_a_triangle_of_many_digits():
    k = 60
    rows = [[3 if i == j else 1 if j < i else 0 for j in range(k)] for i in range(k)]
    assert solved(rows, [1] * k) == eliminated(rows, [1] * k)


def test_an_end_of_the_work_comes_through():
    class EndedError(Exception):
        pass

    def between():
        raise EndedError

    with pytest.raises(EndedError):
        solve(matrix([[3]]), [1], approximately([[3]]), between)
