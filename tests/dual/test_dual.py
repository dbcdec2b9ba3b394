"""The dual program."""

from __future__ import annotations

import re
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given
from scipy.sparse import csr_array

from lpview.decimals import parse
from lpview.dual import build_dual, dual, one_sided
from lpview.model import LinearProgram, ModelError, Sense, frozen_odd, identical
from tests.dual.models import INF, model
from tests.dual.textbook import textbook_dual, textbook_form, written
from tests.strategies import linear_programs


@given(linear_programs())
def test_dual_is_the_textbooks(lp):
    assert written(build_dual(lp).program) == textbook_dual(textbook_form(lp))


@given(linear_programs())
def test_dual_of_dual_is_the_form(lp):
    form = one_sided(lp)
    assert identical(dual(dual(form)), form.program)
    assert identical(dual(dual(form.program)), form.program)


@given(linear_programs())
def test_input_is_left_alone(lp):
    before = [np.copy(a) for a in (lp.c, lp.A.data, lp.A.indices, lp.row_lower, lp.lower)]
    build_dual(lp)
    after = (lp.c, lp.A.data, lp.A.indices, lp.row_lower, lp.lower)
    assert all(np.array_equal(a, b) for a, b in zip(before, after, strict=True))


def test_minimization_by_hand():
    # min 2a + 3b + c + 9 with a + b >= 4, a - c <= 5, b + 2c = 6; b <= 0, c free.
    # Dual: max 4p + 5q + 6r + 9, p >= 0, q <= 0, r free,
    #       a >= 0: p + q <= 2;  b <= 0: p + r >= 3;  c free: -q + 2r = 1.
    lp = model(
        "minimize",
        {"a": 2, "b": 3, "c": 1},
        {
            "p": (4, {"a": 1, "b": 1}, INF),
            "q": (-INF, {"a": 1, "c": -1}, 5),
            "r": (6, {"b": 1, "c": 2}, 6),
        },
        {"b": (-INF, 0), "c": (-INF, INF)},
        offset=9,
    )
    hand = model(
        "maximize",
        {"p": 4, "q": 5, "r": 6},
        {
            "a": (-INF, {"p": 1, "q": 1}, 2),
            "b": (3, {"p": 1, "r": 1}, INF),
            "c": (1, {"q": -1, "r": 2}, 1),
        },
        {"q": (-INF, 0), "r": (-INF, INF)},
        offset=9,
    )
    assert identical(build_dual(lp).program, hand)
    assert identical(dual(hand), lp)


def test_maximization_by_hand():
    # max 30 tomato + 1.6 basil with 15 tomato + 2 basil <= 300, 4 tomato >= 8,
    # 10 <= tomato + basil <= 40, tomato <= 25.
    # Dual: min 300 heat + 8 order + 10 low + 40 high + 25 bound,
    #       heat, high, bound >= 0, order, low <= 0,
    #       tomato: 15 heat + 4 order + low + high + bound >= 30
    #       basil:   2 heat           + low + high         >= 1.6
    lp = model(
        "maximize",
        {"tomato": 30, "basil": 1.6},
        {
            "heat": (-INF, {"tomato": 15, "basil": 2}, 300),
            "order": (8, {"tomato": 4}, INF),
            "space": (10, {"tomato": 1, "basil": 1}, 40),
        },
        {"tomato": (0, 25)},
    )
    low, high, bound = "space lower side", "space upper side", "tomato upper bound"
    hand = model(
        "minimize",
        {"heat": 300, "order": 8, low: 10, high: 40, bound: 25},
        {
            "tomato": (30, {"heat": 15, "order": 4, low: 1, high: 1, bound: 1}, INF),
            "basil": (1.6, {"heat": 2, low: 1, high: 1}, INF),
        },
        {"order": (-INF, 0), low: (-INF, 0)},
    )
    assert identical(build_dual(lp).program, hand)


def test_odd_numbers_move_with_their_places():
    # [[1/3, 2], [1/7, 1/9]] is stored as 1/3, 2, 1/7, 1/9; transposed 1/3, 1/7, 2, 1/9.
    odd = {k: Fraction(1, k) for k in (3, 7, 9, 11, 13)}
    lp = LinearProgram(
        name="odd",
        sense=Sense.MINIMIZE,
        columns=("x", "y"),
        rows=("r", "s"),
        c=np.array([1.0, parse("1/11")[0]]),
        A=csr_array(np.array([[1 / 3, 2], [1 / 7, 1 / 9]])),
        row_lower=np.array([1.0, -INF]),
        row_upper=np.array([INF, parse("1/13")[0]]),
        lower=np.array([0.0, -INF]),
        upper=np.array([INF, INF]),
        odd=frozen_odd(
            {
                "A": {0: odd[3], 2: odd[7], 3: odd[9]},
                "c": {1: odd[11]},
                "row_upper": {1: odd[13]},
            }
        ),
    )
    found = dual(lp)
    assert {field: dict(values) for field, values in found.odd.items()} == {
        "A": {0: odd[3], 1: odd[7], 3: odd[9]},
        "c": {1: odd[13]},
        "row_lower": {1: odd[11]},
        "row_upper": {1: odd[11]},
    }
    assert found.A.data.tolist() == [1 / 3, 1 / 7, 2, 1 / 9]


def test_no_rows_and_no_columns():
    lp = model("maximize", {"x": 2}, {}, {"x": (-INF, 0)})
    found = build_dual(lp).program
    assert (found.m, found.n, found.sense) == (1, 0, Sense.MINIMIZE)
    assert (found.row_lower.tolist(), found.row_upper.tolist()) == ([-INF], [2])
    empty = model("minimize", {}, {"r": (3, {}, INF)}, {})
    found = build_dual(empty).program
    assert (found.m, found.n, found.c.tolist()) == (0, 1, [3])


@pytest.mark.parametrize(
    ("lp", "message"),
    [
        (
            model("minimize", {"x": 1}, {"heat": (1, {"x": 1}, 2)}, {}),
            "row heat: expected one side or an equality, got 1.0 to 2.0",
        ),
        (
            model("minimize", {"x": 1}, {"heat": (-INF, {"x": 1}, INF)}, {}),
            "row heat: expected one side or an equality, got -inf to inf",
        ),
        (
            model("minimize", {"x": 1}, {}, {"x": (0, 5)}),
            "column x: expected >= 0, <= 0 or free, got 0.0 to 5.0",
        ),
        (
            model("minimize", {"x": 1}, {}, {"x": (0, 0)}),
            "column x: expected >= 0, <= 0 or free, got 0.0 to 0.0",
        ),
    ],
)
def test_a_program_that_is_not_one_sided_is_refused(lp, message):
    with pytest.raises(ModelError, match=re.escape(message)):
        dual(lp)
    assert dual(one_sided(lp)).n == one_sided(lp).program.m
