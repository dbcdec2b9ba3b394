"""Flags and marks of every line, worked out by hand in the comments."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given, settings

from lpview.answer import Basis, LineStatus
from lpview.kkt import measure
from lpview.marks import NEED_BASIS, NEED_PRICES, Flag, mark
from lpview.solver import solve
from tests.check.helpers import examined, line_of, name_of
from tests.check.small_models import MODELS
from tests.dual.models import INF, feasible_pairs, model

B, LOW, UP = LineStatus.BASIC, LineStatus.LOWER, LineStatus.UPPER


def basis(column, row):
    return Basis(np.array(column, np.int8), np.array(row, np.int8))


def marked(lp, x, y, found_basis=None, tolerance=1e-9, zero=1e-9):
    found = measure(lp, np.array(x, float), np.array(y, float))
    return mark(lp, found, found_basis, tolerance, zero)


def lines(lp, mask):
    return [name_of(lp, line) for line in np.flatnonzero(mask)]


# Maximize 2v + w; the vertex (2, 2) lies on three lines.
#   a: v <= 2         value 2, slack 0
#   b: v + w <= 4     value 4, slack 0
#   c: w <= 2         value 2, slack 0
#   d: v - w in -1..3 value 0, slack 1 (to the lower side)
#   e: v + u = 2      value 2, equality
#   f: no sides
# With y = (1, 1, 0, 0, 0, 0): z(v) = 2 - 2 = 0, z(w) = 1 - 1 = 0, z(u) = 0, z(k) = -1.
# u sits at 0 with no price; k is fixed at 5.
DEGENERATE = model(
    "maximize",
    {"v": 2, "w": 1, "u": 0, "k": -1},
    {
        "a": (-INF, {"v": 1}, 2),
        "b": (-INF, {"v": 1, "w": 1}, 4),
        "c": (-INF, {"w": 1}, 2),
        "d": (-1, {"v": 1, "w": -1}, 3),
        "e": (2, {"v": 1, "u": 1}, 2),
        "f": (-INF, {"v": 1, "u": -1}, INF),
    },
    {"k": (5, 5)},
)
X, Y = [2, 2, 0, 5], [1, 1, 0, 0, 0, 0]
# v and w are basic for the nonbasic a and b; c, d, f are basic, u is basic for e.
BASIS = basis([B, B, B, LOW], [UP, UP, B, B, LOW, B])
# The same vertex with u nonbasic and e basic (e has no room to be basic in, but
# basic lines may sit at a side: that is what degenerate means).
OTHER_BASIS = basis([B, B, LOW, LOW], [UP, UP, B, B, B, B])


def test_flags_of_a_degenerate_vertex():
    marks = marked(DEGENERATE, X, Y, BASIS)
    flagged = {flag: lines(DEGENERATE, mask) for flag, mask in marks.flags.items()}
    assert flagged == {
        # every line at a side or bound: v and w are at none (0 .. inf).
        Flag.ZERO_SLACK: ["a", "b", "c", "e", "u", "k"],
        # basic and at a side or bound.
        Flag.DEGENERATE: ["c", "u"],
        # neither slack nor price; e is an equality row and k a fixed column.
        Flag.BOTH_ZERO: ["c", "u"],
        # nonbasic without a price: only e, and it is an equality row.
        Flag.OTHER_PLAN: [],
        Flag.VIOLATED: [],
        Flag.WRONG_SIGN: [],
        Flag.PRODUCT: [],
    }
    assert lines(DEGENERATE, marks.room) == ["d", "f", "v", "w"]
    assert lines(DEGENERATE, marks.priced) == ["a", "b", "k"]
    assert lines(DEGENERATE, ~marks.paired) == ["e", "k"]


def test_the_same_vertex_with_another_basis():
    marks = marked(DEGENERATE, X, Y, OTHER_BASIS)
    assert lines(DEGENERATE, marks.flags[Flag.DEGENERATE]) == ["c", "e"]
    assert lines(DEGENERATE, marks.flags[Flag.OTHER_PLAN]) == ["u"]
    assert lines(DEGENERATE, marks.flags[Flag.BOTH_ZERO]) == ["c", "u"]
    assert marks.of(line_of(DEGENERATE, "u")) == (
        Flag.ZERO_SLACK, Flag.BOTH_ZERO, Flag.OTHER_PLAN,
    )  # fmt: skip
    assert marks.of(line_of(DEGENERATE, "v")) == ()


def test_what_needs_a_basis_is_not_known_without_one():
    marks = marked(DEGENERATE, X, Y)
    assert set(marks.flags) == set(Flag) - {*NEED_BASIS, *NEED_PRICES}
    assert set(NEED_BASIS) == {Flag.DEGENERATE, Flag.OTHER_PLAN}
    assert marks.of(line_of(DEGENERATE, "c")) == (Flag.ZERO_SLACK, Flag.BOTH_ZERO)


def test_flags_of_violations():
    # v = 3: a over by 1, b 5 of 4, d 1 inside, e 3 of 2 (an equality).
    marks = marked(DEGENERATE, [3, 2, 0, 5], Y)
    assert lines(DEGENERATE, marks.flags[Flag.VIOLATED]) == ["a", "b", "e"]
    # Their prices 1 times 1: a and b; e has no price.
    assert lines(DEGENERATE, marks.flags[Flag.PRODUCT]) == ["a", "b"]
    # Slack beyond zero in size is room, on the wrong side too: never "zero slack".
    assert "a" not in lines(DEGENERATE, marks.flags[Flag.ZERO_SLACK])
    # k = 6 leaves its fixed value, w = -1 its bound; d is then 3, at its upper side.
    marks = marked(DEGENERATE, [2, -1, 0, 6], Y)
    assert lines(DEGENERATE, marks.flags[Flag.VIOLATED]) == ["w", "k"]


def test_flags_of_wrong_signs():
    # y(c) = -1 has no lower side to stand for, y(f) = 1/2 no side at all;
    # z(v) = 2 - 2 - 1/2 = -1/2 names the bound 0 from which v is 2 away;
    # z(w) = 1 - 1 + 1 = 1 and z(u) = 1/2 name an upper bound that does not exist.
    marks = marked(DEGENERATE, X, [1, 1, -1, 0, 0, 0.5])
    assert lines(DEGENERATE, marks.flags[Flag.WRONG_SIGN]) == ["c", "f", "w", "u"]
    assert lines(DEGENERATE, marks.flags[Flag.PRODUCT]) == ["v"]


def test_a_product_at_the_side_that_the_sign_names():
    # d is 1 above -1 and 3 below 3. Maximizing, y(d) = 1/4 names 3: 3/4.
    # z(v) = -1/4 at 2 of 0: 1/2; z(w) = 1/4 has no upper bound.
    marks = marked(DEGENERATE, X, [1, 1, 0, 0.25, 0, 0])
    assert lines(DEGENERATE, marks.flags[Flag.PRODUCT]) == ["d", "v"]
    assert lines(DEGENERATE, marks.flags[Flag.WRONG_SIGN]) == ["w"]
    # Both marks filled: room and a price.
    d = line_of(DEGENERATE, "d")
    assert marks.room[d]
    assert marks.priced[d]


@pytest.mark.parametrize("name", MODELS)
def test_correct_answers_have_no_fault(name):
    case = MODELS[name]
    marks = marked(case.lp, case.x, case.y)
    for flag in (Flag.VIOLATED, Flag.WRONG_SIGN, Flag.PRODUCT):
        assert lines(case.lp, marks.flags[flag]) == []
    # Nothing has room and a price at once.
    assert lines(case.lp, marks.room & marks.priced) == []


def test_two_sided_rows_are_marked_by_the_nearer_side():
    case = MODELS["blend"]
    marks = marked(case.lp, case.x, case.y)
    # low at its lower side, high at its upper, even an equality; loose and open
    # have room; b at 1, f fixed, n at 0; a and g have room.
    assert lines(case.lp, marks.flags[Flag.ZERO_SLACK]) == ["low", "high", "even", "b", "f", "n"]
    assert lines(case.lp, marks.priced) == ["low", "high", "even", "b", "f", "n"]
    assert lines(case.lp, marks.flags[Flag.BOTH_ZERO]) == []


@settings(max_examples=40, deadline=None)
@given(feasible_pairs())
def test_equality_rows_and_fixed_columns_are_never_both_zero(pair):
    lp, x, y, _ = pair
    marks = marked(lp, x, y)
    both = marks.flags[Flag.BOTH_ZERO]
    low = np.concatenate([lp.row_lower, lp.lower])
    high = np.concatenate([lp.row_upper, lp.upper])
    assert not both[low == high].any()
    value = np.concatenate([lp.A @ x, x])
    price = np.concatenate([y, lp.c - lp.A.T @ y])
    at_end = (value == low) | (value == high)
    assert both.tolist() == (at_end & (price == 0) & (low != high)).tolist()


def threshold_model(side=4.0):
    return model("minimize", {"v": 1}, {"r": (-INF, {"v": 1}, side)}, {"v": (0, 100)})


@pytest.mark.parametrize(("slack", "is_zero"), [(2.0**-10, True), (2.0**-10 + 2.0**-40, False)])
def test_slack_of_exactly_the_tolerance_counts_as_zero(slack, is_zero):
    # The largest term is v = 1/2 < 1, so that scaled means absolute here.
    lp = threshold_model(0.5 + slack)
    marks = marked(lp, [0.5], [0], zero=2.0**-10)
    assert marks.flags[Flag.ZERO_SLACK][0] == is_zero
    assert marks.room[0] != is_zero


@pytest.mark.parametrize(("slack", "is_zero"), [(2.0**-8, True), (2.0**-8 + 2.0**-40, False)])
def test_zero_slack_is_scaled_by_the_largest_term(slack, is_zero):
    # v = 4: 2**-10 of 4 is 2**-8.
    marks = marked(threshold_model(4 + slack), [4], [0], zero=2.0**-10)
    assert marks.flags[Flag.ZERO_SLACK][0] == is_zero


@pytest.mark.parametrize(("price", "is_zero"), [(-(2.0**-10), True), (-(2.0**-10) * 1.001, False)])
def test_a_price_of_exactly_the_tolerance_counts_as_zero(price, is_zero):
    marks = marked(threshold_model(), [4], [price], zero=2.0**-10)
    assert marks.flags[Flag.BOTH_ZERO][0] == is_zero
    assert marks.priced[0] != is_zero


@pytest.mark.parametrize(("over", "is_fault"), [(2.0**-10, False), (2.0**-10 * 1.001, True)])
def test_a_violation_of_exactly_the_tolerance_is_none(over, is_fault):
    # v = 1/2 + over of the side 1/2: nothing reaches 1, so scaled means absolute.
    marks = marked(threshold_model(0.5), [0.5 + over], [0], tolerance=2.0**-10)
    assert marks.flags[Flag.VIOLATED][0] == is_fault


@pytest.mark.parametrize(("price", "is_fault"), [(2.0**-10, False), (2.0**-10 * 1.001, True)])
def test_a_wrong_sign_of_exactly_the_tolerance_is_none(price, is_fault):
    marks = marked(threshold_model(), [4], [price], tolerance=2.0**-10)
    assert marks.flags[Flag.WRONG_SIGN][0] == is_fault


@pytest.mark.parametrize(("price", "is_fault"), [(2.0**-10, False), (2.0**-10 * 1.001, True)])
def test_a_product_of_exactly_the_tolerance_is_none(price, is_fault):
    # r is 1 off its side 4; its largest term is 4 times the price, below 1.
    marks = marked(threshold_model(), [3], [-price], tolerance=2.0**-10)
    assert marks.flags[Flag.PRODUCT][0] == is_fault


def test_the_examination_judges_by_the_tolerances_asked_for():
    lp = threshold_model()
    assert examined(lp, zero=5.0).marks.flags[Flag.ZERO_SLACK][0]  # 4 of slack
    assert not examined(lp, zero=1e-9).marks.flags[Flag.ZERO_SLACK][0]
    # v at 0 with price 1.
    assert not examined(lp, zero=2.0).marks.priced.any()


def test_marks_of_a_run_without_a_basis():
    result = solve(DEGENERATE)
    without = replace(result, answer=replace(result.answer, basis=None))
    found = examined(DEGENERATE, lambda *_: without)
    assert not set(NEED_BASIS) & set(found.marks.flags)
    assert set(NEED_BASIS) <= set(examined(DEGENERATE).marks.flags)


def test_lines_that_are_not_numbers_are_faults():
    marks = marked(DEGENERATE, [np.nan, 2, 0, 5], Y)
    assert "v" in lines(DEGENERATE, marks.flags[Flag.VIOLATED])
    assert {"a", "b", "d"} <= set(lines(DEGENERATE, marks.flags[Flag.VIOLATED]))
