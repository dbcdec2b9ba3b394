"""One wrong number in a correct answer fails the intended condition at the intended line.

The sizes in the comments are the scaled residuals that compete for the worst line.
"""

from __future__ import annotations

import numpy as np
import pytest

from lpview.kkt import Condition, measure
from tests.check.helpers import correct, line_of, name_of, verdicts
from tests.check.small_models import MODELS

PRIMAL, DUAL = Condition.PRIMAL, Condition.DUAL
STATIONARITY, PRODUCT, GAP = Condition.STATIONARITY, Condition.COMPLEMENTARITY, Condition.GAP

# model, vector, line, wrong value, condition, worst line, its scaled residual
WRONG = [
    # n is 1 over its upper bound 0 (1 of 1); high is 9 of 8 (1 of 8).
    ("blend", "x", "n", 1, PRIMAL, "n", 1),
    # low lacks 0.5 of 10, even 0.5 of 5.
    ("blend", "x", "a", 3.5, PRIMAL, "even", 0.1),
    # f, fixed at 3, is off by 1 (of 4); high 9 of 8; even 6 of 5 (term 5).
    ("blend", "x", "f", 4, PRIMAL, "f", 0.25),
    # loose is 105 above the side that 1/4 names: 26.25 of 25.
    ("blend", "y", "loose", 0.25, PRODUCT, "loose", 1.05),
    # high sits at its upper side, the price names its lower one: 24 of 24; b 5 of 6.
    ("blend", "y", "high", 3, PRODUCT, "high", 1),
    # a free row has no side for a price.
    ("blend", "y", "open", 0.5, DUAL, "open", 0.5),
    # z(a) = -1/2 without an upper bound (of 3), z(g) = 1/4 though free (of 3).
    ("blend", "y", "even", 1.5, DUAL, "a", 0.5 / 3),
    ("blend", "z", "b", 4.75, STATIONARITY, "b", 0.25 / 6),
    ("blend", "z", "f", 7, STATIONARITY, "f", 14 / 9),
    ("blend", "z", "g", 1e-6, STATIONARITY, "g", 1e-6 / 3),
    ("blend", "x", "b", 1.5, GAP, None, 3 / 13),
    # w is 1/2 over its bound (1/2 of 1); top 13.5 of 12 (1.5 of 12).
    ("crew", "x", "w", 0.5, PRIMAL, "w", 0.5),
    # h, fixed at -1, is off by 1 of 2; tie 9 of 7 (2 of 7).
    ("crew", "x", "h", -2, PRIMAL, "h", 0.5),
    # bottom is -4 of -3 (1 of 6), tie 8 of 7 (1 of 7).
    ("crew", "x", "r", 6, PRIMAL, "bottom", 1 / 6),
    # bottom 1 of 4, tie 2 of 16.
    ("crew", "x", "r", 6, PRODUCT, "bottom", 0.25),
    # spare has room 33: 0.33 of 0.5; s then costs 0.01 at 6: 0.06.
    ("crew", "y", "spare", 0.01, PRODUCT, "spare", 0.33),
    # bottom sits at its lower side, the price names its upper one: 33 of 30.
    ("crew", "y", "bottom", 1, PRODUCT, "bottom", 1.1),
    # spare has no lower side: 1/2; r 1/2 of 2, s 1/2 of 2.
    ("crew", "y", "spare", -0.5, DUAL, "spare", 0.5),
    # z(r) = -1 - (1 - 3) = 1 of 3, though free.
    ("crew", "y", "tie", -3, DUAL, "r", 1 / 3),
    ("crew", "z", "w", 2.5, STATIONARITY, "w", 0.5 / 8),
    ("crew", "z", "p", -3, STATIONARITY, "p", 6 / 5),
    # dual 27 + 3 - 14 by the rows, 11 - 2.5 - 4 by p, q, h: 20.5.
    ("crew", "y", "top", 2.25, GAP, None, 1.5 / 20.5),
    # r3 is 19.5 of 18 (1.5 of 18).
    ("doors", "x", "x1", 2.5, PRIMAL, "r3", 1.5 / 18),
    ("doors", "x", "x1", 2.5, PRODUCT, "r3", 1.5 / 19.5),
    # r1 may not have a negative price (1); z(x1) = 1 of 3 without an upper bound.
    ("doors", "y", "r1", -1, DUAL, "r1", 1),
    # z(x2) = 5 - 2.5 - 2 = 1/2 of 5.
    ("doors", "y", "r2", 1.25, DUAL, "x2", 0.1),
    ("doors", "z", "x2", 0.5, STATIONARITY, "x2", 0.1),
    ("doors", "y", "r3", 1.5, GAP, None, 9 / 45),
    # sum is 3 of 4; v stays.
    ("ranges", "x", "u", 2, PRIMAL, "sum", 0.25),
    # v is 1/2 under its bound 1; sum 3.5 of 4.
    ("ranges", "x", "v", 0.5, PRIMAL, "v", 0.5),
    # apart has room 1 below: 1 of 2; u then names 5: 2 of 5.
    ("ranges", "y", "apart", 1, PRODUCT, "apart", 0.5),
    ("ranges", "z", "v", -1, STATIONARITY, "v", 2 / 3),
    # dual 4 + 2 by sum and v.
    ("ranges", "y", "sum", 1, GAP, None, 3 / 9),
    # tie is 1 of 3; limit is -3.5, inside.
    ("debts", "x", "t", 3, PRIMAL, "tie", 1 / 3),
    # z(t) = 0 - (1.5 - 1) = -1/2 of 1.5, though free; e has 1/2 at its bound.
    ("debts", "y", "tie", 1.5, DUAL, "t", 1 / 3),
    # z(t) = 1/2 of 1.5.
    ("debts", "y", "limit", -3, DUAL, "t", 1 / 3),
    ("debts", "z", "e", 0, STATIONARITY, "e", 0.5),
    # dual 4 - 2 + 10 by limit, e, d.
    ("debts", "y", "limit", -1, GAP, None, 1 / 12),
    # part is 7.25 of 7 (0.25 of 8.75).
    ("mixing", "x", "k", 5, PRIMAL, "part", 0.25 / 8.75),
    # both is at 6.5 of 6: 1.5 of 19.5.
    ("mixing", "x", "k", 5, PRODUCT, "both", 1.5 / 19.5),
    # m names its upper bound: z(m) = 4 - 5 = -1 of 5; k -2 of 5, though free.
    ("mixing", "y", "both", 5, DUAL, "k", 0.4),
    # both has no upper side: 1; k 3 + 1 = 4 of 3.
    ("mixing", "y", "both", -1, DUAL, "k", 4 / 3),
    ("mixing", "z", "k", -0.25, STATIONARITY, "k", 0.25 / 3),
    ("mixing", "x", "m", 2, GAP, None, 2 / 21.5),
]


@pytest.mark.parametrize("name", MODELS)
def test_the_correct_answer_passes_without_residual(name):
    case = MODELS[name]
    for verdict in verdicts(case.lp, case.x, case.y, case.z).values():
        assert (verdict.absolute, verdict.worst, verdict.passed) == (0, None, True)


@pytest.mark.parametrize("name", MODELS)
def test_the_solver_finds_the_same_plan(name):
    case, answer = MODELS[name], correct(MODELS[name].lp)
    assert answer.x == pytest.approx(case.x, abs=1e-12)
    found = verdicts(case.lp, answer.x, answer.y, answer.z)
    assert all(verdict.passed for verdict in found.values())


@pytest.mark.parametrize(("name", "part", "line", "value", "condition", "worst", "scaled"), WRONG)
def test_one_wrong_number(name, part, line, value, condition, worst, scaled):
    case = MODELS[name]
    verdict = verdicts(case.lp, **case.with_one(part, line, value))[condition]
    assert verdict.passed is False
    assert name_of(case.lp, verdict.worst) == worst
    assert verdict.scaled == pytest.approx(scaled, rel=1e-12)


def test_every_condition_has_wrong_answers_at_rows_and_columns():
    for condition in (PRIMAL, DUAL, PRODUCT):
        worst = {(case[0], case[5]) for case in WRONG if case[4] is condition}
        kinds = {line in MODELS[name].lp.rows for name, line in worst}
        assert True in kinds
        assert False in kinds or condition is PRODUCT  # a column's stands below
    assert {case[4] for case in WRONG} == set(Condition)


def test_a_product_at_a_column():
    # v is 1/2 off the bound that its price 1 names (1/2 of 1.5); sum 1 of 9.
    case = MODELS["ranges"]
    verdict = verdicts(case.lp, **case.with_one("x", "v", 1.5))[PRODUCT]
    assert name_of(case.lp, verdict.worst) == "v"
    assert verdict.scaled == pytest.approx(1 / 3)


def test_a_wrong_reduced_cost_fails_stationarity_alone():
    for case in MODELS.values():
        wrong = case.with_one("z", case.lp.columns[0], case.z[0] + 1e-6)
        failed = {c for c, verdict in verdicts(case.lp, **wrong).items() if not verdict.passed}
        assert failed == {STATIONARITY}


@pytest.mark.parametrize(("name", "row"), [("blend", "low"), ("blend", "high"), ("crew", "top")])
def test_a_row_at_its_other_end(name, row):
    """The price stays, the row value moves from the named side to the other one."""
    case = MODELS[name]
    lp, i = case.lp, case.lp.rows.index(row)
    other = {lp.row_lower[i]: lp.row_upper[i], lp.row_upper[i]: lp.row_lower[i]}
    x = np.array(case.x, float)
    free = lp.columns.index({"blend": "g", "crew": "s"}[name])
    x[free] += other[(lp.A @ x)[i]] - (lp.A @ x)[i]
    found = measure(lp, x, np.array(case.y, float))
    line = line_of(lp, row)
    assert found.residuals[PRIMAL].absolute[line] == 0  # it sits exactly at a side
    assert found.rows.slack[i] == 0  # so that the nearest side would hide it
    width = lp.row_upper[i] - lp.row_lower[i]
    assert found.residuals[PRODUCT].absolute[line] == abs(case.y[i]) * width
    assert verdicts(lp, x, case.y)[PRODUCT].passed is False


@pytest.mark.parametrize("name", MODELS)
def test_every_price_on_an_infinite_side_fails_at_its_line(name):
    case = MODELS[name]
    lp, sign = case.lp, case.lp.sense.sign
    for row in range(lp.m):
        for side, price in ((lp.row_lower[row], sign), (lp.row_upper[row], -sign)):
            if np.isfinite(side):
                continue
            wrong = case.with_one("y", lp.rows[row], price)
            found = measure(lp, wrong["x"], wrong["y"]).residuals
            assert found[DUAL].absolute[row] == 1
            assert found[PRODUCT].absolute[row] == 0  # there is no distance to speak of
            assert verdicts(lp, **wrong)[DUAL].passed is False


def test_errors_that_cancel_in_a_sum_are_caught_line_by_line():
    # r2 has room 1.5 at price 1.5, r3 is over by 2.25 at price 1: together 0,
    # and both objectives are 36.
    case = MODELS["doors"]
    found = verdicts(case.lp, [3.25, 5.25], case.y, case.z)
    assert found[GAP].absolute == 0
    assert found[GAP].passed
    products = measure(case.lp, np.array([3.25, 5.25]), np.array(case.y)).residuals[PRODUCT]
    assert products.absolute.tolist() == [0, 2.25, 2.25, 0, 0]
    assert found[PRODUCT].passed is False
    assert found[PRIMAL].passed is False


def test_wrong_reduced_costs_that_cancel_are_caught_line_by_line():
    # At x = (2, 6) the errors 3 and -1 add up to 3 * 2 - 1 * 6 = 0.
    case = MODELS["doors"]
    verdict = verdicts(case.lp, case.x, case.y, [3, -1])[STATIONARITY]
    assert (verdict.passed, verdict.absolute) == (False, 3)


@pytest.mark.parametrize(("excess", "passed"), [(0.9e-9, True), (1.1e-9, False)])
def test_the_tolerance_is_scaled(excess, passed):
    # r3 has the largest term 12 and the side 18.
    case = MODELS["doors"]
    x = [2 + 18 * excess / 3, 6]
    assert verdicts(case.lp, x, case.y)[PRIMAL].passed is passed
