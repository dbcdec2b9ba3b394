"""A walk whose answers are spoiled, stopped or wrong on the way."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from lpview.outcomes import NotEstablished, Stopped
from lpview.prices.curve import Beyond, Why
from lpview.prices.value_curve import asking
from lpview.run import Watch
from lpview.solver import solve
from tests.curve.helpers import answer, curve_of, number_of

# The glass model (Hillier and Lieberman, from memory): row r2 breaks at 6 and 18.


def glass(ask, span=None):
    found = answer("textbook/a1.csv")
    number = number_of(found, row="r2")
    own = asking(found, solve, Watch())
    return curve_of(found, number, span, lambda lp: ask(lp, number.of(lp), own))


def nothing(lp):
    return NotEstablished(replace(answer("textbook/a1.csv").head, model=lp), "spoiled")


def test_a_breakpoint_without_an_answer_is_where_two_lines_meet():
    def ask(lp, at, own):
        return nothing(lp) if at == 18 else own(lp)

    found = glass(ask)
    assert [p.at for p in found.breakpoints] == pytest.approx([6, 18], rel=1e-9)
    assert [p.rate for p in found.pieces] == pytest.approx([2.5, 1.5, 0])
    assert found.unsolved == 1 and found.is_joined


def test_no_answer_near_a_breakpoint_is_not_found():
    def ask(lp, at, own):
        return nothing(lp) if abs(at - 18) < 0.1 else own(lp)

    found = glass(ask)
    assert found.above is Beyond.NOT_FOUND
    assert found.ends[1] == pytest.approx(18) and found.below is Beyond.INFEASIBLE


def test_what_was_found_before_the_end_of_time_is_kept():
    def ask(lp, at, own):
        return Stopped(replace(answer("textbook/a1.csv").head, model=lp)) if at == 18 else own(lp)

    found = glass(ask)
    assert found.stopped and found.above is Beyond.STOPPED
    assert [p.rate for p in found.pieces] == pytest.approx([2.5, 1.5])


def test_time_is_up_before_the_first_answer():
    found = answer("textbook/a1.csv")
    number = number_of(found, row="r2")
    made = curve_of(found, number, (13.0, 15.0), asking(found, solve, Watch(), deadline=0.0))
    assert made.why is Why.STOPPED


def test_a_person_stops_it():
    found, watch = answer("textbook/a1.csv"), Watch()
    watch.stop.set()
    made = curve_of(found, number_of(found, row="r2"), None, asking(found, solve, watch))
    assert made.stopped and {made.above, made.below} & {Beyond.STOPPED}


def test_an_objective_off_the_piece_is_noticed():
    """The right costs times 1.01 at one place: a checked answer, but to another model."""

    def ask(lp, at, own):
        return own(replace(lp, c=lp.c * 1.01) if at == 18 else lp)

    found = glass(ask)
    assert not found.is_joined and max(found.joints) == pytest.approx(0.01, rel=0.2)


def test_a_wrong_bend_is_noticed():
    """Beyond 18 another model answers, whose rate there is 5 instead of 0."""

    def ask(lp, at, own):
        if at < 18:
            return own(lp)
        other = {"c": np.array([3.0, 15.0]), "row_upper": lp.row_upper + np.array([0, 0, 1000])}
        return own(replace(lp, **other))

    found = glass(ask, (12.0, 30.0))
    assert [p.rate for p in found.pieces] == pytest.approx([1.5, 7.5])
    assert not found.bends_rightly
