"""Whether any multipliers make a plan optimal, against routes of their own.

The claim: complementarity with any one optimal dual solution decides. The other routes are
a linear program for multipliers on the lines that the plan holds tight (solved by scipy),
and the definition of an optimal plan.
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import assume, settings
from hypothesis import given as drawn
from hypothesis import strategies as st
from scipy.optimize import linprog

from lpview.outcomes import NotEstablished, Optimal
from lpview.planned import Multipliers
from lpview.report.plan import report
from lpview.report.plan_verdict import verdict
from lpview.report.text import render
from tests.check.helpers import examined
from tests.dual.models import INF, feasible_pairs, model
from tests.plan.helpers import checked, wyndor


def multipliers_exist(lp, x):
    """Whether ``c = A'y + z`` has a solution with signs that the tight ends of ``x`` allow."""
    A = lp.A.toarray()
    values = [*(A @ x), *x]
    lows, highs = [*lp.row_lower, *lp.lower], [*lp.row_upper, *lp.upper]
    bounds = []
    for value, low, high in zip(values, lows, highs, strict=True):
        lower, upper = value == low, value == high
        positive, negative = (lower, upper) if lp.sense.sign > 0 else (upper, lower)
        bounds.append((None if negative else 0, None if positive else 0))
    equations = np.hstack([A.T, np.eye(lp.n)])
    done = linprog(np.zeros(lp.m + lp.n), A_eq=equations, b_eq=lp.c, bounds=bounds)
    assert done.status in (0, 2)
    return done.status == 0


def texts(x):
    return [repr(float(value)) for value in x]


@settings(max_examples=120)
@drawn(feasible_pairs(), st.booleans())
def test_complementarity_with_one_dual_decides_for_all(pair, at_optimum):
    lp, x, _, _ = pair
    found = examined(lp)
    assert isinstance(found, Optimal) and found.passed
    if at_optimum:
        x = np.round(found.answer.x, 9)
        assume(np.array_equal(x, np.round(x)))
    against = checked(lp, texts(x), outcome=found).against
    exist = multipliers_exist(lp, x)
    assert against.multipliers is (Multipliers.THOSE_FOUND if exist else Multipliers.NONE)
    value = float(lp.c @ x) + lp.offset
    attains = value == pytest.approx(found.measurement.primal_objective, abs=1e-9)
    assert attains == exist


@settings(max_examples=60)
@drawn(feasible_pairs())
def test_what_the_lines_cost_adds_up_to_the_distance(pair):
    lp, x, _, _ = pair
    against = checked(lp, texts(x)).against
    products = [line.product for line in against.lines]
    assert all(product > -1e-9 for product in products)
    assert products == sorted(products, reverse=True)
    assert sum(products) == pytest.approx(against.distance, abs=1e-8)
    assert against.gap == pytest.approx(against.distance, abs=1e-8)


def several():
    """Maximize a + b, a + b <= 4 twice: every plan with a + b = 4 is optimal, and any split of
    the price 1 between the two rows is an optimal dual solution."""
    rows = {"r": (-INF, {"a": 1, "b": 1}, 4), "s": (-INF, {"a": 1, "b": 1}, 4)}
    return model("maximize", {"a": 1, "b": 1}, rows, {})


@pytest.mark.parametrize("plan", [("4", "0"), ("0", "4"), ("1.5", "2.5"), ("1/3", "11/3")])
@pytest.mark.parametrize("y", [(1, 0), (0, 1), (0.25, 0.75)])
def test_any_optimal_dual_solution_fits_any_optimal_plan(plan, y):
    lp = several()
    found = examined(lp)
    answer = replace(found.answer, y=np.array(y, float), z=np.zeros(2))
    found = replace(found, answer=answer)
    assert checked(lp, plan, outcome=found).against.multipliers is Multipliers.THOSE_FOUND
    other = checked(lp, ("1", "2"), outcome=found).against
    assert (other.multipliers, other.distance) == (Multipliers.NONE, 1)
    assert sum(line.product for line in other.lines) == 1


def test_a_plan_whose_rounding_reaches_the_optimum():
    """(2.0, 5.9) is 0.5 from the optimum: plant 2 has 0.2 of slack at 1.5, plant 3 has 0.2 at
    1. Half units of 0.05 move them by 0.1 and 0.25, so that plant 2 cannot be tight; with 5.96
    it has 0.08 and moves by 0.01."""
    assert not checked(wyndor(), ("2.0", "5.9")).against.could_be
    assert checked(wyndor(), ("2", "6.0")).against.could_be
    assert not checked(wyndor(), ("2.0", "5.96")).against.could_be
    assert checked(wyndor(), ("2.03", "6.0")).against.could_be
    assert not checked(wyndor(), ("2.04", "6.0")).against.could_be  # beyond its rounding
    # The prices of the optimum have no rounding, whatever the plan's own have.
    assert not checked(wyndor(), ("2.0", "5.9"), ("0", "2", "1")).against.could_be


def test_lines_that_are_tight_for_different_plans_only():
    """Minimize 2a with a + b >= 4 and a - b >= 0: the optimum is 4 with prices 1 and 1. At
    a = 5/2 exactly and b = 2 to a half unit, b = 1.5 makes one row tight and b = 2.5 the other,
    but the objective is 5 in any case. At a = 2 to a half unit it may be 4."""
    rows = {"r": (4, {"a": 1, "b": 1}, INF), "s": (0, {"a": 1, "b": -1}, INF)}
    lp = model("minimize", {"a": 2, "b": 0}, rows, {})
    against = checked(lp, ("5/2", "2")).against
    assert (against.distance, against.could_be) == (1, False)
    assert checked(lp, ("2", "2")).against.could_be


def test_within_the_tolerance_of_the_objective_but_not_line_by_line():
    """Maximize a with a <= 1 beside a constant of 1e9: a = 0.99999 is 1e-5 off, 1e-14 of the
    objective; the product 1e-5 is 1e-5 of its terms."""
    lp = model("maximize", {"a": 1}, {"r": (-INF, {"a": 1}, 1)}, {}, offset=1e9)
    against = checked(lp, ("0.99999",)).against
    assert against.multipliers is Multipliers.ON_THE_EDGE


def test_an_optimum_of_zero_has_no_relative_distance():
    lp = model("minimize", {"a": 1}, {"r": (-INF, {"a": 1}, 9)}, {})
    against = checked(lp, ("3",)).against
    assert (against.optimum, against.distance, against.relative) == (0, 3, None)


def test_an_answer_that_fails_its_check_is_no_optimum():
    lp = wyndor()
    found = examined(lp)
    failed = tuple(replace(v, passed=False) for v in found.verdicts)
    assert checked(lp, ("2", "6"), outcome=replace(found, verdicts=failed)).against is None


def test_outcomes_that_say_nothing_are_told_as_such():
    lp = wyndor()
    best = examined(lp)
    failed = replace(best, verdicts=tuple(replace(v, passed=False) for v in best.verdicts))
    lost = NotEstablished(best.head, "no certificate was found.")
    for outcome, why in (
        (failed, "not known: the solver's answer fails the check"),
        (lost, "not known, the solver's claim could not be confirmed: no certificate was found."),
    ):
        found = checked(lp, ("2", "6"), outcome=outcome)
        assert found.passed and found.against is None
        assert f"optimum      {why}\n" in render(report(found))
        assert verdict(found) == ("feasible as written (1e-9 scaled), the optimum is not known")
