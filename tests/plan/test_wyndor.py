"""The published example with plans that are optimal, not optimal and not feasible.

Wyndor Glass; values as in `tests.plan.helpers.wyndor`. (4, 3) is another vertex of its
figure, with objective 27; (4, 6) breaks the third row by 6.
"""

from __future__ import annotations

from dataclasses import replace

import pytest

from lpview.kkt import Condition
from lpview.model import Sense
from lpview.planned import Multipliers, violated
from tests.plan.helpers import checked, passed, primal, wyndor

Y = ("0", "3/2", "1")


def test_the_published_plan_is_feasible_and_optimal():
    found = checked(wyndor(), ("2", "6"))
    against = found.against
    assert found.passed and found.judgement.feasible
    assert (against.optimum, against.distance, against.relative) == (36, 0, 0)
    assert against.multipliers is Multipliers.THOSE_FOUND
    assert against.lines == () and against.gap == 0


def test_only_feasibility_is_judged_without_prices():
    found = passed(wyndor(), ("2", "6"))
    assert found == {
        Condition.PRIMAL: (True, True),
        Condition.DUAL: None,
        Condition.STATIONARITY: None,
        Condition.COMPLEMENTARITY: None,
        Condition.GAP: None,
    }


def test_another_vertex_costs_nine():
    """By the prices (0, 3/2, 1): plant 2 has 12 - 6 left at 3/2 each, the others nothing."""
    found = checked(wyndor(), ("4", "3"))
    against = found.against
    assert found.passed
    assert (found.found.objective.value, against.optimum) == (27, 36)
    assert (against.distance, against.relative) == (9, 0.25)
    assert against.multipliers is Multipliers.NONE
    [left] = against.lines
    assert (left.line, left.price, left.distance, left.product) == (1, 1.5, 6, 9)
    assert against.gap == 9


def test_a_plan_that_breaks_a_row_is_better_than_the_optimum_and_fails():
    found = checked(wyndor(), ("4", "6"))
    [line] = violated(found.found, found.judgement)
    assert not found.passed and not found.judgement.feasible_within
    assert (line.line, line.size, line.within) == (2, 6, False)
    assert line.allowed == pytest.approx(18e-9)
    assert (found.found.objective.value, found.against.distance) == (42, -6)
    assert found.against.multipliers is Multipliers.NOT_FEASIBLE
    assert not found.against.could_be


def test_the_published_dual_values_verify_the_plan():
    found = passed(wyndor(), ("2", "6"), Y)
    assert found.pop(Condition.STATIONARITY) is None
    assert set(found.values()) == {(True, True)}
    assert passed(wyndor(), ("2", "6"), Y, ("0", "0"))[Condition.STATIONARITY] == (True, True)


@pytest.mark.parametrize(
    ("y", "failing"),
    [
        (("0", "3/2", "-1"), Condition.DUAL),
        (("1", "3/2", "1"), Condition.COMPLEMENTARITY),
        (("0", "2", "1"), Condition.GAP),
    ],
)
def test_wrong_dual_values_fail(y, failing):
    """A price of the wrong sign; one of a row with slack; one whose value no plan earns."""
    assert passed(wyndor(), ("2", "6"), y)[failing][0] is False


@pytest.mark.parametrize("sense", Sense)
def test_the_same_plan_in_both_senses(sense):
    lp = wyndor()
    if sense is Sense.MINIMIZE:
        lp = replace(lp, sense=sense, c=-lp.c)
    turned = 1 if sense is Sense.MAXIMIZE else -1
    found = checked(lp, ("4", "3"))
    assert found.against.distance == 9
    assert found.against.optimum == 36 * turned
    assert [one.price * turned for one in found.against.lines] == [1.5]
    y = [str(turned * price) for price in (0, 1.5, 1)]
    assert set(passed(lp, ("2", "6"), y).values()) == {(True, True), None}


def test_rounding_decides_between_written_and_within():
    """Three times 2.04 and twice 6.0 exceed 18 by 0.12, with 2.03 by 0.09; half units of 0.005
    and 0.05 make up for 3 times 0.005 and twice 0.05, which is 0.115."""
    assert primal(wyndor(), ("2.04", "6.0")) == (False, False)
    assert primal(wyndor(), ("2.03", "6.0")) == (False, True)
    assert primal(wyndor(), ("2.04", "6")) == (False, True)
    assert primal(wyndor(), ("2", "6.0001")) == (False, False)


def test_rounded_is_enough_where_asked_for():
    plan = ("2.03", "6.0")
    assert not checked(wyndor(), plan).accepted
    rounded = checked(wyndor(), plan, rounded=True)
    assert rounded.accepted and not rounded.passed
    assert not checked(wyndor(), ("4", "6"), rounded=True).accepted
