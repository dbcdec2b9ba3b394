"""The dual as the model under review: nothing is solved, and everything still holds."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from hypothesis import HealthCheck, assume, given, settings

from lpview.answer import Answer, Basis, LineStatus
from lpview.blocks import read_model
from lpview.dual import build_dual, dual_answer, original_answer
from lpview.examination import check_answer
from lpview.kkt import Condition
from lpview.marks import Flag
from lpview.outcomes import DualNotSolved, Optimal
from lpview.scaling import NotRepresentableError
from lpview.turned import turn
from tests.check.helpers import examined, failing
from tests.dual.models import INF, feasible_pairs, model
from tests.strategies import linear_programs

NETLIB = sorted(
    path
    for path in (Path(__file__).parents[1] / "data" / "netlib").glob("*.csv")
    if path.stem != "values"
)
MODELS = Path(__file__).parents[2] / "models"


def objective(lp, x):
    return float(lp.c @ x + lp.offset)


def plain_rows(lp):
    """Rows that one row of the one-sided form stands for."""
    return np.flatnonzero(np.isfinite(lp.row_lower) ^ np.isfinite(lp.row_upper) | lp.is_equality)


def plain_columns(lp):
    """Columns without a bound row: nonnegative, nonpositive or free."""
    ends = np.isin(lp.lower, (0.0, -INF)) & np.isin(lp.upper, (0.0, INF)) & ~lp.is_fixed
    return lp.m + np.flatnonzero(ends)


def plain(lp):
    return np.concatenate([plain_rows(lp), plain_columns(lp)])


def check_turned(found):
    """Everything that holds for the dual of a verified model."""
    lp, turned = found.head.model, turn(found)
    dual = turned.found
    assert found.passed
    if too_wide(lp) and not dual.passed:
        return
    assert dual.passed or only_rounding(dual), failing(dual)
    assert isinstance(dual.dual_route, DualNotSolved)
    close = 1e-9 * max(1.0, abs(found.measurement.primal_objective))
    assert abs(dual.measurement.primal_objective - found.measurement.dual_objective) <= close
    assert abs(dual.measurement.dual_objective - found.measurement.primal_objective) <= close
    np.testing.assert_allclose(dual.answer.y, found.answer.x, rtol=1e-7, atol=1e-7)
    check_maps(found, turned)
    basis = dual.answer.basis
    if basis is not None and found.answer.basis is not None:
        basics = sum(int((part == LineStatus.BASIC).sum()) for part in (basis.row, basis.column))
        assert basics == dual.head.model.m == lp.n


def only_rounding(found):
    """Whether the products alone fail, and by no more than a few roundings of doubles.

    A large variable times the rounding of its reduced cost exceeds any tolerance: with
    numbers of 1e19 no double is a better answer. The same product stands at a row of
    the model, where it is small beside price times side.
    """
    sides = (found.measurement.rows, found.measurement.columns)
    smallest = 4 * np.finfo(float).eps
    rows, columns = (side.complementarity for side in sides)
    of_rows = np.abs(sides[0].price) * np.maximum(sides[0].value_term, np.abs(sides[0].end))
    of_columns = np.abs(sides[1].value) * sides[1].price_term
    return failing(found) == {Condition.COMPLEMENTARITY} and bool(
        (rows <= smallest * of_rows).all() and (columns <= smallest * of_columns).all()
    )


def too_wide(lp):
    """Whether what the tolerance lets pass at a bound moves a row by more than nothing.

    Then an infeasible model can pass at 1e-9, and its dual, which is unbounded, fails.
    """
    return bool((1e-9 * np.abs(lp.A.data) > 1e-3).any())


def check_maps(found, turned):
    lp, dual = found.head.model, turned.found.head.model
    assert turned.to_dual.shape == (lp.m + lp.n,)
    assert turned.to_primal.shape == (dual.m + dual.n,)
    there = np.flatnonzero(turned.to_dual >= 0)
    assert (turned.to_primal[turned.to_dual[there]] == there).all()
    assert (turned.to_primal >= 0).all()
    missing = np.flatnonzero(turned.to_dual < 0)
    assert all(np.isinf(lp.row_lower[i]) and np.isinf(lp.row_upper[i]) for i in missing)
    for j in range(lp.n):
        assert dual.rows[turned.to_dual[lp.m + j]] == lp.columns[j]


def check_mirrored_marks(found, turned):
    """Room on one side is price on the other, where one line stands for one line."""
    lines = plain(found.head.model)
    marks, dual = found.marks, turned.found.marks
    at = turned.to_dual[lines]
    paired = marks.paired[lines] & dual.paired[at]  # a free column's row is an equality
    assert (dual.room[at] == marks.priced[lines])[paired].all()
    assert (dual.priced[at] == marks.room[lines])[paired].all()
    if Flag.DEGENERATE in marks.flags and Flag.DEGENERATE in dual.flags:
        basis, other = found.answer.basis, turned.found.answer.basis
        basic = np.concatenate([basis.row, basis.column]) == LineStatus.BASIC
        dual_basic = np.concatenate([other.row, other.column]) == LineStatus.BASIC
        assert (basic[lines] != dual_basic[at]).all()


@given(linear_programs(nasty_names=False))
@settings(max_examples=80, deadline=None, suppress_health_check=[HealthCheck.filter_too_much])
def test_the_dual_of_a_verified_model_is_verified(lp):
    try:
        found = examined(lp)
    except NotRepresentableError:  # numbers too far apart for the solver
        found = None
    assume(isinstance(found, Optimal) and found.passed)
    check_turned(found)


@given(feasible_pairs())
@settings(max_examples=150, deadline=None)
def test_a_model_with_an_optimum_turns(drawn):
    found = examined(drawn[0])
    check_turned(found)
    assert turn(found).found.passed
    check_mirrored_marks(found, turn(found))


@given(feasible_pairs())
@settings(max_examples=60, deadline=None)
def test_turning_twice_gives_the_marks_back(drawn):
    found = examined(drawn[0])
    lp, once = drawn[0], turn(found)
    twice = turn(once.found)
    assert twice.found.passed
    lines = plain(lp)
    again = twice.to_dual[once.to_dual[lines]]
    for mask in ("room", "priced", "paired"):
        np.testing.assert_array_equal(
            getattr(twice.found.marks, mask)[again], getattr(found.marks, mask)[lines]
        )
    for flag in found.marks.flags.keys() & twice.found.marks.flags.keys():
        np.testing.assert_array_equal(
            twice.found.marks.flags[flag][again], found.marks.flags[flag][lines], flag.value
        )
    np.testing.assert_array_equal(twice.found.measurement.columns.value, found.answer.x)


@pytest.mark.parametrize("path", NETLIB, ids=lambda path: path.stem)
def test_real_models_turn(path):
    found = examined(read_model(path).model)
    check_turned(found)
    assert turn(found).found.passed
    assert turn(found).found.answer.basis is not None


@pytest.mark.parametrize("name", ["winter", "vans", "spring", "season"])
def test_shipped_models_turn_into_their_dual(name):
    found = examined(read_model(MODELS / f"{name}.csv").model)
    check_turned(found)
    assert turn(found).found.passed
    check_mirrored_marks(found, turn(found))


def worked():
    """Two sides, a box, a fixed and a free column, by hand: see the numbers below."""
    return model(
        "maximize",
        {"a": 3, "b": 1, "f": 2, "g": 0},
        {
            "cap": (2, {"a": 1, "b": 1, "f": 1}, 10),
            "tie": (0, {"b": 1, "g": -1}, 0),
            "loose": (-INF, {"a": 1}, INF),
        },
        {"a": (0, 4), "f": (1, 1), "g": (-INF, INF)},
    )


# a = 4 at its bound, f = 1, b = g = 5; y_cap = 1, y_tie = 0; z_a = 2, z_f = 1, z_b = 0.
# The form has the rows: cap lower side, cap upper side, tie, a upper bound, f fixed.


def test_a_worked_model_turns_to_the_numbers_of_the_hand():
    found = examined(worked())
    turned = turn(found)
    dual = turned.found
    assert dual.head.model.columns == (
        *("cap lower side", "cap upper side", "tie", "a upper bound", "f fixed"),
    )
    np.testing.assert_allclose(dual.answer.x, [0, 1, 0, 2, 1], atol=1e-12)
    np.testing.assert_allclose(dual.answer.y, [4, 5, 1, 5], atol=1e-12)
    # Side less row value; minimizing, a variable >= 0 has a reduced cost >= 0.
    np.testing.assert_allclose(dual.answer.z, [-8, 0, 0, 0, 0], atol=1e-12)
    assert turned.to_dual.tolist() == [4 + 1, 4 + 2, -1, 0, 1, 2, 3]
    assert turned.to_primal.tolist() == [3, 4, 5, 6, 0, 0, 1, 3, 5]
    assert objective(dual.head.model, dual.answer.x) == pytest.approx(19)


def test_the_head_says_what_is_reviewed_and_how_to_see_it_again():
    found = examined(worked(), tolerance=1e-8)
    dual = turn(found).found
    assert dual.head.request.source == "dual of model.csv"
    command = "lpview dual model.csv | lpview check - --tolerance 1e-8"
    assert dual.head.request.command == command
    assert dual.head.sha256 != found.head.sha256


def test_a_row_at_no_price_is_its_nearest_side():
    lp = model("minimize", {"x": 1}, {"r": (-1, {"x": 1}, 7)}, {"x": (0, INF)})
    found = examined(lp)
    turned = turn(found)
    assert found.answer.y.tolist() == [0]
    assert turned.found.head.model.columns[turned.to_dual[0] - 1] == "r lower side"


def test_what_fails_in_the_model_fails_in_its_dual():
    found = examined(worked())
    answer = found.answer
    violated = replace(answer, x=answer.x + np.array([0, 1.0, 0, 0]))
    wrong = replace(answer, y=answer.y * np.array([-1.0, 1, 1]))
    for bad, there, here in (
        (violated, Condition.PRIMAL, Condition.DUAL),
        (wrong, Condition.COMPLEMENTARITY, Condition.COMPLEMENTARITY),
    ):
        checked = check_answer(found.head, bad)
        assert there in failing(checked)
        assert here in failing(turn(checked).found)


def test_a_price_without_a_side_is_a_violation_in_the_dual():
    lp = model("minimize", {"x": 1}, {"r": (1, {"x": 1}, INF)}, {"x": (-INF, INF)})
    found = examined(lp)
    bad = check_answer(found.head, replace(found.answer, y=np.array([-1.0])))
    dual = turn(bad).found
    assert Condition.DUAL in failing(bad)
    assert dual.marks.flags[Flag.VIOLATED][turn(bad).to_dual[0]]


def test_an_answer_without_a_basis_turns_without_one():
    found = examined(worked())
    bare = check_answer(found.head, replace(found.answer, basis=None))
    dual = turn(bare).found
    assert dual.passed and dual.answer.basis is None
    assert Flag.DEGENERATE not in dual.marks.flags


def test_a_nonbasic_row_without_sides_leaves_the_dual_without_a_basis():
    lp = model("minimize", {"x": 1}, {"r": (-INF, {"x": 1}, INF)}, {"x": (0, INF)})
    statuses = (np.array([LineStatus.BASIC], np.int8), np.array([LineStatus.FREE], np.int8))
    answer = Answer(np.zeros(1), np.zeros(1), np.ones(1), Basis(*statuses))
    assert dual_answer(build_dual(lp), answer).basis is None


@given(feasible_pairs())
@settings(deadline=None)
def test_there_and_back_is_the_same_answer(drawn):
    lp, x, y, _ = drawn
    pair = build_dual(lp)
    y = np.where(np.isinf(lp.row_lower) & np.isinf(lp.row_upper), 0.0, y)
    answer = Answer(x, y, lp.c - lp.A.T @ y, None)
    back = original_answer(pair, dual_answer(pair, answer))
    np.testing.assert_array_equal(back.x, x)
    np.testing.assert_array_equal(back.y, y)
    np.testing.assert_allclose(back.z, answer.z, atol=1e-12)


def test_the_answer_is_not_changed():
    found = examined(worked())
    before = [part.copy() for part in (found.answer.x, found.answer.y, found.answer.z)]
    turn(found)
    for part, copy in zip((found.answer.x, found.answer.y, found.answer.z), before, strict=True):
        np.testing.assert_array_equal(part, copy)
