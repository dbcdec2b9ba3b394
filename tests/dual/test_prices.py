"""Duality between a model and its dual, and prices mapped back."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from scipy.optimize import linprog

from lpview.answer import Answer
from lpview.dual import build_dual, original_answer, prices
from lpview.model import Sense
from tests.dual.models import INF, feasible_pairs, model

CLOSE = 1e-7


def objective(lp, x):
    return float(lp.c @ x + lp.offset)


def dual_objective(lp, y, z):
    """Offset plus each price times the end that its sign names."""
    total = lp.offset
    for price, low, high in (
        *zip(y, lp.row_lower, lp.row_upper, strict=True),
        *zip(z, lp.lower, lp.upper, strict=True),
    ):
        if price:
            total += price * (low if lp.sense.sign * price > 0 else high)
    return total


def within(low, values, high, slack=0.0):
    return bool(((low - slack <= values) & (values <= high + slack)).all())


def solved(lp):
    """An answer found by another solver, with dual values signed as in the model."""
    sign, A = lp.sense.sign, lp.A.toarray()
    upper, lower = np.isfinite(lp.row_upper), np.isfinite(lp.row_lower)
    same = lp.is_equality
    upper, lower = upper & ~same, lower & ~same
    found = linprog(
        sign * lp.c,
        A_ub=np.vstack([A[upper], -A[lower]]),
        b_ub=np.concatenate([lp.row_upper[upper], -lp.row_lower[lower]]),
        A_eq=A[same],
        b_eq=lp.row_lower[same],
        bounds=np.column_stack([lp.lower, lp.upper]),
        method="highs",
    )
    assert found.status == 0, found.message
    y = np.zeros(lp.m)
    rates = found.ineqlin.marginals
    y[upper] += rates[: upper.sum()]
    y[lower] -= rates[upper.sum() :]
    y[same] = found.eqlin.marginals
    z = found.lower.marginals + found.upper.marginals
    return Answer(np.array(found.x), sign * y, sign * z, None)


def values_of(pair, lp, y, z):
    """Values of the dual's variables, from prices of the model's lines."""
    places, values = pair.form.places, np.zeros(pair.program.n)
    for prices_of, low, high in (
        (y, places.row_lower, places.row_upper),
        (z, places.lower, places.upper),
    ):
        for price, at_low, at_high in zip(prices_of, low, high, strict=True):
            at = at_low if lp.sense.sign * price > 0 else at_high
            if at >= 0:
                values[at] = price
    return values


@given(feasible_pairs())
def test_weak_duality_of_feasible_pairs(drawn):
    lp, x, y, z = drawn
    pair = build_dual(lp)
    values, program = values_of(pair, lp, y, z), pair.program
    assert within(program.lower, values, program.upper)
    assert within(program.row_lower, program.A @ values, program.row_upper)
    assert objective(program, values) == dual_objective(lp, y, z)
    form = pair.form.program
    assert within(form.row_lower, form.A @ x, form.row_upper)
    assert within(form.lower, x, form.upper)
    assert lp.sense.sign * (objective(lp, x) - objective(program, values)) >= 0


@given(feasible_pairs())
def test_prices_undo_the_split(drawn):
    lp, _, y, z = drawn
    pair = build_dual(lp)
    found = prices(pair, values_of(pair, lp, y, z))
    assert (found.y.tolist(), found.z.tolist()) == (y.tolist(), z.tolist())


@given(feasible_pairs())
def test_strong_duality(drawn):
    lp = drawn[0]
    pair = build_dual(lp)
    assert pair.program.n == 0 or objective(lp, solved(lp).x) == pytest.approx(
        objective(pair.program, solved(pair.program).x), abs=CLOSE
    )


@given(feasible_pairs())
def test_an_answer_to_the_dual_answers_the_model(drawn):
    lp, _, _, _ = drawn
    pair = build_dual(lp)
    if pair.program.n == 0:
        return
    other = solved(pair.program)
    answer = original_answer(pair, other)
    best = objective(lp, solved(lp).x)
    assert within(lp.lower, answer.x, lp.upper, CLOSE)
    assert within(lp.row_lower, lp.A @ answer.x, lp.row_upper, CLOSE)
    assert objective(lp, answer.x) == pytest.approx(best, abs=CLOSE)
    assert np.allclose(answer.z, lp.c - lp.A.T @ answer.y, atol=CLOSE)
    y, z = (np.where(np.abs(v) < CLOSE, 0.0, v) for v in (answer.y, answer.z))
    for price, low, high in (
        *zip(y, lp.row_lower, lp.row_upper, strict=True),
        *zip(z, lp.lower, lp.upper, strict=True),
    ):
        assert price <= 0 or (low if lp.sense is Sense.MINIMIZE else high) not in (INF, -INF)
        assert price >= 0 or (high if lp.sense is Sense.MINIMIZE else low) not in (INF, -INF)
    assert dual_objective(lp, y, z) == pytest.approx(best, abs=CLOSE)


def test_two_sided_row_and_fixed_column_by_hand():
    # max 3a + 2b with 2 <= a + b <= 6, a fixed at 4, b >= 0: a = 4, b = 2, value 16.
    # One more unit of the upper side buys one b: y = 2, and z_a = 3 - 2 = 1, z_b = 0.
    lp = model(
        "maximize",
        {"a": 3, "b": 2},
        {"space": (2, {"a": 1, "b": 1}, 6)},
        {"a": (4, 4)},
    )
    pair = build_dual(lp)
    assert pair.program.columns == ("space lower side", "space upper side", "a fixed")
    # min 2p + 6q + 4r, p <= 0, q >= 0, r free: p + q + r = 3, p + q >= 2: 12 + 4.
    other = solved(pair.program)
    assert other.x == pytest.approx([0, 2, 1])
    answer = original_answer(pair, other)
    assert answer.x == pytest.approx([4, 2])
    assert (answer.y, answer.z) == (pytest.approx([2]), pytest.approx([1, 0]))


def test_negative_variable_at_its_lower_bound_by_hand():
    # min x - 2y with x + y >= -3, -5 <= x <= 0, y <= 0, y free of other limits.
    # y = 0, then x >= -3: value -3. Price of the row 1, z = (1 - 1, -2 - 1) = (0, -3).
    lp = model(
        "minimize",
        {"x": 1, "y": -2},
        {"floor": (-3, {"x": 1, "y": 1}, INF)},
        {"x": (-5, 0), "y": (-INF, 0)},
    )
    pair = build_dual(lp)
    assert pair.program.columns == ("floor", "x lower bound")
    answer = original_answer(pair, solved(pair.program))
    assert answer.x == pytest.approx([-3, 0])
    assert (answer.y, answer.z) == (pytest.approx([1]), pytest.approx([0, -3]))


def test_both_sides_and_both_bounds_add_up_by_hand():
    # A dual point that is feasible but wasteful: space lower -1 and upper 3 make 2;
    # bounds of a: lower -1, upper 2 make 1; the unused row has price 0.
    lp = model(
        "maximize",
        {"a": 3, "b": 2},
        {"idle": (-INF, {"a": 9}, INF), "space": (2, {"a": 1, "b": 1}, 6)},
        {"a": (1, 4)},
    )
    pair = build_dual(lp)
    assert pair.program.columns[2:] == ("a lower bound", "a upper bound")
    found = prices(pair, np.array([-1.0, 3.0, -1.0, 2.0]))
    assert (found.y.tolist(), found.z.tolist()) == ([0, 2], [1, 0])


def test_inputs_of_prices_are_left_alone():
    lp = model("minimize", {"x": 1}, {"r": (1, {"x": 1}, INF)}, {"x": (2, 3)})
    values = np.array([0.25, 0.5, -0.5])
    values.flags.writeable = False
    found = prices(build_dual(lp), values)
    assert (found.y.tolist(), found.z.tolist()) == ([0.25], [0.75])
