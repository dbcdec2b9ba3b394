"""Every valid range and interval of the textbook cases, in the stated sense and the other.

The other sense has the negated costs, and the negated optimum. Plans and distances stay.
Prices and the rates of sides are negated, while up stays up, so that a rate of the wrong
direction shows in one of the two. A cost itself is negated: its up is now its down, and its
rate is still the value of the variable.
"""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction
from functools import cache

import numpy as np
import pytest

from lpview.model import frozen_odd
from lpview.prices import Prices, Then, ZeroSlack, work_out
from lpview.solver import warm_model
from tests.check.helpers import examined
from tests.prices.test_textbook_cases import (
    CASES,
    INF,
    RANGES,
    facts_of,
    model_of,
    number,
    pieces_of,
    pieces_with_bases,
    stated_interval,
)

SENSES = [pytest.param(1, id="as stated"), pytest.param(-1, id="other sense")]
BOTH = {case["id"]: case for case in [*CASES.values(), *RANGES]}
"""Every case by its identifier; ranges where there are any."""


def cases(wanted=lambda case: True):
    return [pytest.param(case, id=name) for name, case in BOTH.items() if wanted(case)]


def near(value):
    return pytest.approx(float(value), rel=1e-9, abs=1e-12)


def turned_round(lp):
    """The same model with negated costs in the other sense."""
    odd = {name: dict(values) for name, values in lp.odd.items()}
    for name in ("c", "offset"):
        odd[name] = {k: -value for k, value in odd.get(name, {}).items()}
    costs = 0.0 - lp.c
    return replace(lp, sense=lp.sense.other, c=costs, offset=0.0 - lp.offset, odd=frozen_odd(odd))


@cache
def found_for(file, sign):
    lp = model_of(file)
    found = work_out(examined(lp if sign > 0 else turned_round(lp)), warm_model)
    assert isinstance(found, Prices)
    return found


def move_of(found, piece, sign=1):
    """The move along a piece as stated; ``sign`` is -1 where costs are negated."""
    moves = getattr(found.line(piece.line), piece.field)
    direction = sign * piece.direction if piece.field == "cost" else piece.direction
    return moves.up if direction > 0 else moves.down


def assert_interval(least, greatest, interval, sign=1):
    low, high = interval if sign > 0 else (-interval[1], -interval[0])
    assert least == near(low)
    assert greatest == near(high)


@pytest.mark.parametrize("sign", SENSES)
@pytest.mark.parametrize("case", cases(pieces_of))
def test_valid_ranges(case, sign):
    found = found_for(case["file"], sign)
    for piece in pieces_of(case):
        move = move_of(found, piece, sign)
        assert move.rate == near(piece.rate if piece.field == "cost" else sign * piece.rate)
        if piece.end is None:
            continue
        assert move.distance == near(piece.distance)
        assert (move.then is Then.NEVER) == (piece.distance == INF)
        if piece.distance == 0:
            assert move.then is Then.INFEASIBLE
        assert move.then is not (Then.INFEASIBLE if piece.field == "cost" else Then.UNBOUNDED)


@pytest.mark.parametrize("sign", SENSES)
@pytest.mark.parametrize("case", cases())
def test_both_sides_of_an_equality_move_together(case, sign):
    lp, found = model_of(case["file"]), found_for(case["file"], sign)
    for k in np.flatnonzero(lp.is_equality):
        line = found.line(int(k))
        assert line.lower == line.upper is not None
        assert line.lower_zero is line.upper_zero is None


@pytest.mark.parametrize("sign", SENSES)
@pytest.mark.parametrize("case", cases(lambda case: "y" in facts_of(case)))
def test_price_intervals(case, sign):
    lp, facts, found = model_of(case["file"]), facts_of(case), found_for(case["file"], sign)
    for i, row in enumerate(lp.rows):
        line = found.line(i)
        assert_interval(line.least, line.greatest, stated_interval(facts, row, "y"), sign)
    apart = facts.get("reduced_cost_interval", {})
    for j, column in enumerate(lp.columns):
        line = found.line(lp.m + j)
        if column in apart:
            interval = [number(text) for text in apart[column]]
            assert_interval(line.least, line.greatest, interval, sign)
        elif column in facts.get("reduced_costs", {}):
            stated = [Fraction(facts["reduced_costs"][column])] * 2
            assert_interval(line.least, line.greatest, stated, sign)


@pytest.mark.parametrize("sign", SENSES)
@pytest.mark.parametrize("case", cases(lambda case: "x" in facts_of(case)))
def test_value_intervals(case, sign):
    lp, facts, found = model_of(case["file"]), facts_of(case), found_for(case["file"], sign)
    for j, column in enumerate(lp.columns):
        line = found.line(lp.m + j)
        interval = stated_interval(facts, column, "x")
        assert_interval(line.least_value, line.greatest_value, interval)
    if facts.get("x_unique"):
        x = np.array([float(Fraction(facts["x"].get(name, "0"))) for name in lp.columns])
        for i, value in enumerate(lp.A @ x):
            line = found.line(i)
            assert line.least_value == pytest.approx(value, rel=1e-9, abs=1e-9)
            assert line.greatest_value == pytest.approx(value, rel=1e-9, abs=1e-9)


@pytest.mark.parametrize("case", cases(lambda case: facts_of(case).get("x_unique")))
def test_zero_slack_of_the_only_plan_is_always_there(case):
    """A textbook row has one side, and `row_slacks` is the distance to it."""
    lp, facts, found = model_of(case["file"]), facts_of(case), found_for(case["file"], 1)
    for i, row in enumerate(lp.rows):
        if not lp.is_equality[i]:
            line = found.line(i)
            tight = Fraction(facts["row_slacks"][row]) == 0
            seen = {line.lower_zero, line.upper_zero} - {None}
            assert seen == {ZeroSlack.ALWAYS if tight else ZeroSlack.NEVER}


@pytest.mark.parametrize("sign", SENSES)
@pytest.mark.parametrize("case", cases())
def test_dimensions(case, sign):
    facts, found = facts_of(case), found_for(case["file"], sign)
    stated = {
        "plan_dimension": 0 if facts.get("x_unique") else case.get("plan_dimension"),
        "price_dimension": 0 if facts.get("y_unique") else case.get("price_dimension"),
    }
    for name, dimension in stated.items():
        if dimension is not None:
            assert getattr(found, name) == dimension
    # One interval that is not a point is enough.
    if "x" in facts:
        assert (found.plan_dimension > 0) == bool(facts.get("x_interval"))
    if "y" in facts:
        assert (found.price_dimension > 0) == bool(facts.get("y_interval"))


@pytest.mark.parametrize(("left", "right", "bases"), [*pieces_with_bases()])
def test_ranges_are_those_of_the_optimum_and_not_of_a_basis(left, right, bases, request):
    """Whatever one basis would say lies within what is said here."""
    name = request.node.callspec.id.split()[0]
    found = found_for(BOTH[name]["file"], 1)
    low = float(left.number) - move_of(found, left).distance
    high = float(right.number) + move_of(found, right).distance
    for ends in bases:
        assert ends[0] >= low - 1e-9
        assert ends[1] <= high + 1e-9


def test_some_ranges_are_of_no_basis():
    """The demands of B4, one of A13, and B1's third row: no basis holds so far."""
    wider = [
        (BOTH[parameter.id.split()[0]]["file"], left, right)
        for parameter in pieces_with_bases()
        for left, right, bases in [parameter.values]
        if [left.end, right.end] not in bases and left.rate == right.rate
    ]
    assert len(wider) == 4
    for file, left, right in wider:
        found = found_for(file, 1)
        assert move_of(found, left).distance == near(left.distance)
        assert move_of(found, right).distance == near(right.distance)
