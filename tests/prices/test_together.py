"""Several right-hand sides moved at once, against models solved again exactly."""

from __future__ import annotations

from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from lpview.blocks import read_model_bytes
from lpview.model import LinearProgram
from lpview.prices import Prices, Then, Together, move_together, work_out
from lpview.prices.together import moved_side
from lpview.solver import warm_model
from tests.check.helpers import examined
from tests.prices.draws import models_with_optimum
from tests.prices.exact import value

WYNDOR_24 = b"""[c],maximize
column,cost
x1,3
x2,5
[A]
row,column,coefficient
r1,x1,1
r2,x2,2
r3,x1,3
r3,x2,2
[b]
row,relation,rhs
r1,<=,4
r2,<=,12
r3,<=,24
"""


WYNDOR = read_model_bytes(WYNDOR_24, "wyndor.csv").model


def worked_out(lp: LinearProgram) -> Prices:
    found = work_out(examined(lp), warm_model)
    assert isinstance(found, Prices)
    return found


def test_two_moves_that_are_worth_nothing_alone() -> None:
    """Wyndor with its third right-hand side at 24 (Hillier and Lieberman, section 3.1, one
    number changed; computed here exactly): +1 and +3 are worth 0 alone and 3 together."""
    found = move_together(worked_out(WYNDOR), [(0, 1.0), (2, 3.0)])
    assert found.rate == pytest.approx(3, rel=1e-9)
    assert [alone.rate for alone in found.separate] == [0, 0]
    assert found.then is Then.NEVER


def test_the_same_two_moves_back() -> None:
    """Left derivatives 3 and 1: alone -3 and -3; together -3 - 0 by the dual (3, 5/2, 0)
    and -3 by (0, 3/2, 1): the least of both is -3."""
    found = move_together(worked_out(WYNDOR), [(0, -1.0), (2, -3.0)])
    assert found.rate == pytest.approx(-3, rel=1e-9)
    assert [alone.rate for alone in found.separate] == [-3, -3]
    assert found.distance == pytest.approx(4, rel=1e-9)


@pytest.mark.parametrize("moves", [[(0, 1.0), (0, 2.0)], [(0, 0.0)], [(0, np.inf)]])
def test_what_is_refused(moves: list[tuple[int, float]]) -> None:
    with pytest.raises(ValueError, match="expected"):
        move_together(worked_out(WYNDOR), moves)


def moved(lp: LinearProgram, prices: Prices, moves: list[tuple[int, float]], t: float):
    low, high = lp.row_lower.copy(), lp.row_upper.copy()
    for row, amount in moves:
        is_high = moved_side(prices.lines, row)
        if prices.lines.equal[row] or not is_high:
            low[row] += amount * t
        if prices.lines.equal[row] or is_high:
            high[row] += amount * t
    if (low > high).any():
        return "infeasible"
    return value(replace(lp, row_lower=low, row_upper=high))


def disagreement(lp: LinearProgram, prices: Prices, moves: list[tuple[int, float]]) -> str:
    found: Together = move_together(prices, moves)
    start = value(lp)
    # The longest step within which nothing can be seen beyond a distance in this family.
    end = found.distance if np.isfinite(found.distance) else 8.0
    # Dyadic steps are exact in doubles and stay within the distance.
    inside = np.floor(end * 1024) / 1024
    for t in (inside / 2, inside):
        now = moved(lp, prices, moves, t)
        if isinstance(now, str):
            return f"{now} at {t} of {found}"
        if abs(float(now - start) - found.rate * t) > 1e-7:
            return f"{float(now - start)} at {t} of {found}"
    if np.isinf(found.distance):
        return "" if found.then is Then.NEVER else str(found)
    t = np.ceil(end * 1024 + 1) / 1024
    beyond = moved(lp, prices, moves, t)
    if isinstance(beyond, str):
        return "" if found.then is Then.INFEASIBLE else f"{beyond} beyond {found}"
    if found.then is not Then.RATE_CHANGES:
        return f"a plan beyond {found}"
    straight = Fraction(float(start)) + Fraction(found.rate) * Fraction(float(t))
    worse = (float(beyond) - float(straight)) * lp.sense.sign
    return "" if worse > 1e-7 else f"the same rate beyond {found}"


@settings(max_examples=60)
@given(models_with_optimum(), st.data())
def test_random_moves(lp: LinearProgram, data: st.DataObject) -> None:
    with_side = np.flatnonzero(np.isfinite(lp.row_lower) | np.isfinite(lp.row_upper)).tolist()
    assume(len(with_side) > 0)
    rows = data.draw(st.lists(st.sampled_from(with_side), min_size=1, max_size=3, unique=True))
    moves = [(row, data.draw(st.sampled_from((1.0, -1.0, 2.0, -2.0, 3.0)))) for row in rows]
    prices = worked_out(lp)
    found = move_together(prices, moves)
    if np.isinf(found.rate):
        assert moved(lp, prices, moves, 1 / 1024) == "infeasible"
        assert (found.distance, found.then) == (0, Then.INFEASIBLE)
        return
    assert disagreement(lp, prices, moves) == ""
