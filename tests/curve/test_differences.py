"""Value curves against solving again: inside, at both ends and beyond, in both senses."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from lpview.decimals import exact_value
from lpview.model import ModelError
from lpview.outcomes import NoOptimum, Optimal
from lpview.prices.curve import Beyond, Curve, Why
from lpview.prices.number import Number, Part, bound_of, side_of
from tests.check.helpers import examined
from tests.curve.helpers import answer, curve, curve_of, number_of
from tests.prices.draws import models_with_optimum
from tests.strategies import linear_programs


def numbers_of(found):
    """Every cost, active side and bound that there is."""
    lp = found.head.model
    sides = [side_of(found, i) for i in range(lp.m)]
    bounds = [bound_of(lp, j, upper) for j in range(lp.n) for upper in (False, True)]
    return [
        *(Number(lp.m + j, Part.COST) for j in range(lp.n)),
        *(side for side in sides if side is not None),
        *(bound for bound in bounds if np.isfinite(bound.of(lp))),
    ]


def objective(lp):
    found = examined(lp)
    assert isinstance(found, Optimal)
    return pytest.approx(found.measurement.primal_objective, rel=1e-7, abs=1e-7)


def assert_right_inside(made):
    low, high = made.ends
    for start, end in [(low, high), *((p.start, p.end) for p in made.pieces)]:
        for share in (0.0, 0.13, 0.5, 0.77, 1.0):
            place = min(start + share * (end - start), end)  # rounding may go beyond the end
            other = examined(made.number.moved(made.lp, place))
            if share in (0.0, 1.0) and isinstance(other, NoOptimum):
                continue  # rounding took the very end
            assert isinstance(other, Optimal)
            assert made.at(place) == pytest.approx(
                other.measurement.primal_objective, rel=1e-7, abs=1e-7
            )


def assert_right_beyond(made):
    low, high = made.ends
    for end, beyond, way, k in ((low, made.below, -1, 0), (high, made.above, 1, -1)):
        place = end + way * 0.37 * max(1, abs(end))
        if beyond is Beyond.GOES_ON:
            continue
        try:
            moved = made.number.moved(made.lp, place)
        except ModelError:
            assert beyond is Beyond.INFEASIBLE
            continue
        if beyond is Beyond.FOR_EVER:
            if made.pieces:
                assert made.pieces[k].at(place) == objective(moved)
        else:
            assert beyond.is_end
            assert isinstance(examined(moved), NoOptimum)


@settings(max_examples=20, deadline=None)
@given(st.data(), models_with_optimum())
def test_against_solving_again(data, lp):
    found = examined(lp)
    number = data.draw(st.sampled_from(numbers_of(found)))
    now = number.of(lp)
    spans = [None, (now - 7.25, now + 9.125), (now + 0.5, now + 3.0), (now - 4.0, now)]
    span = data.draw(st.sampled_from(spans))
    made = curve_of(found, number, span)
    if not isinstance(made, Curve):
        assert made.why in (Why.NO_OPTIMUM, Why.ONE_POINT)
        assert span is not None and not span[0] < now < span[1]
        return
    assert made.bends_rightly and made.is_joined and made.unsolved == 0
    if span is not None and made.pieces:
        assert span[0] <= made.ends[0] <= made.ends[1] <= span[1]
        for k, beyond in ((0, made.below), (1, made.above)):
            assert beyond.is_end or made.ends[k] == span[k]
    assert_right_inside(made)
    assert_right_beyond(made)


@pytest.mark.parametrize(
    "names",
    [{"row": "e5"}, {"row": "u3"}, {"row": "e7"}, {"cost": "x8"}, {"cost": "x20"}, {"lower": "x5"}],
)
def test_afiro_against_solving_again(names):
    made = curve("netlib/afiro.csv", **names)
    assert made.pieces and made.bends_rightly and made.is_joined
    assert_right_inside(made)
    assert_right_beyond(made)


@settings(max_examples=25, deadline=None)
@given(st.data(), linear_programs())
def test_one_number_is_moved_and_nothing_else(data, lp):
    if not lp.n:
        return
    column = data.draw(st.integers(0, lp.n - 1))
    lines = [Number(lp.m + column, Part.COST), bound_of(lp, column, False)]
    number = data.draw(st.sampled_from(lines))
    before = number.of(lp)
    if not np.isfinite(before):
        return
    moved = number.moved(lp, before)
    kept = {name: dict(values) for name, values in lp.odd.items()}
    for name, index in [("c", column)] if number.part is Part.COST else [("lower", column)]:
        kept.get(name, {}).pop(index, None)
        assert exact_value(getattr(moved, name)[index]) == exact_value(before)
    if number.part is Part.BOTH:
        kept.get("upper", {}).pop(column, None)
    assert {k: dict(v) for k, v in moved.odd.items()} == {k: v for k, v in kept.items() if v}
    for name in ("c", "row_lower", "row_upper", "lower", "upper"):
        assert np.array_equal(getattr(moved, name), getattr(lp, name))


def test_moving_a_number_leaves_the_model_alone():
    found = answer("textbook/a1.csv")
    number = number_of(found, row="r2")
    moved = number.moved(found.head.model, 15.0)
    assert (number.of(found.head.model), number.of(moved)) == (12, 15)
    assert moved.row_upper.tolist() == [4, 15, 18]
    assert found.head.model.row_upper.tolist() == [4, 12, 18]
