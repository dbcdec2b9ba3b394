"""Value curves that textbooks print, or that follow from what they print."""

from __future__ import annotations

import math
from fractions import Fraction
from functools import cache

import pytest

from lpview.model import Sense
from lpview.prices.curve import Beyond, Curve, NoCurve, Why
from lpview.prices.number import Number, Part
from tests.curve.helpers import answer, curve, curve_of, number_of
from tests.prices.test_textbook_cases import RANGES, pieces_of

INFEASIBLE, FOR_EVER, GOES_ON = Beyond.INFEASIBLE, Beyond.FOR_EVER, Beyond.GOES_ON


def near(value):
    return pytest.approx(float(value), rel=1e-9, abs=1e-9)


# Hillier and Lieberman, section 3.1 (attribution from memory): with x1 <= b1, 2 x2 <= b2,
# 3 x1 + 2 x2 <= b3 the whole curves follow by hand from the corners of the drawing. The
# ranges [2, inf), [6, 18], [12, 24], [0, 15/2] and [2, inf) of that book are among the pieces.
GLASS = {
    "r1": ([0, 2], [3, 0], {0: 30, 2: 36}, INFEASIBLE),
    "r2": ([0, 6, 18], ["5/2", "3/2", 0], {0: 12, 6: 27, 18: 45}, INFEASIBLE),
    "r3": ([0, 12, 24], ["5/2", 1, 0], {0: 0, 12: 30, 24: 42}, INFEASIBLE),
    "x1": ([-math.inf, 0, "15/2"], [0, 2, 4], {0: 30, 3: 36, "15/2": 45}, FOR_EVER),
    "x2": ([-math.inf, 0, 2], [0, 3, 6], {0: 12, 2: 18, 5: 36}, FOR_EVER),
}


@pytest.mark.parametrize("name", GLASS)
def test_glass_doors_and_windows(name):
    starts, rates, heights, below = GLASS[name]
    found = curve("textbook/a1.csv", **({"row": name} if name[0] == "r" else {"cost": name}))
    assert [p.rate for p in found.pieces] == [near(Fraction(rate)) for rate in rates]
    assert [p.at for p in found.breakpoints] == [near(Fraction(at)) for at in starts[1:]]
    for at, objective in heights.items():
        assert found.at(float(Fraction(at))) == near(objective)
    assert (found.below, found.above) == (below, FOR_EVER)
    if below is INFEASIBLE:
        assert found.ends[0] == near(starts[0])
    assert found.should_be_convex == (name[0] == "x")
    assert found.bends_rightly and found.is_joined and found.unsolved == 0


def test_parametric_right_hand_side():
    """Bazaraa, Jarvis and Sherali, chapter 6 (attribution from memory): both right-hand sides
    move, 6 - lambda and 4 + lambda; z = -12 + 2 lambda up to 6, infeasible beyond. Only the
    first has a price, so that its own curve at 6 - lambda is the same function."""
    first, second = (curve("textbook/a12.csv", row=row) for row in ("r1", "r2"))
    for parameter in (0, 1, 1.5, 2, 3, 5, 6):
        assert first.at(6.0 - parameter) == near(-12 + 2 * parameter)
        assert second.rates(4.0 + parameter)[1] == 0
    assert first.below is INFEASIBLE and first.ends[0] == near(0)
    assert first.above is second.above is FOR_EVER
    assert second.below is INFEASIBLE and second.ends[0] == near(-6)
    assert first.should_be_convex and len(first.pieces) == 1


def test_cost_at_a_breakpoint():
    """Dantzig 1963, section 3.3, widely reproduced version: the value breaks at c11 = 0.225
    with slopes 50 (on [0.216, 0.225]) and 0, at c21 = 0.225 with 325 and 275 (up to 0.234)."""
    first, second = (curve("textbook/a13.csv", cost=name) for name in ("x11", "x21"))
    assert first.rates(0.225) == (near(50), near(0))
    piece = first.piece_of(0.22)
    assert (piece.start, piece.end) == (near(0.216), near(0.225))
    assert second.rates(0.225) == (near(325), near(275))
    assert second.piece_of(0.23).end == near(0.234)
    assert not first.should_be_convex and first.bends_rightly
    assert first.at(0.225) == second.at(0.225) == near(Fraction(6147, 40))


def stated():
    for case in RANGES:
        for k, piece in enumerate(pieces_of(case)):
            if piece.end is not None:
                number = f"{case['id']} {piece.line} {piece.field} {piece.direction}"
                yield pytest.param(case["file"], piece, id=f"{number} {k}")


@cache
def curve_at(file, line, field):
    found = answer(file)
    lp = found.head.model
    meet = [*lp.is_equality, *lp.is_fixed][line] and field != "cost"
    return curve_of(found, Number(line, Part.BOTH if meet else Part(field)))


@pytest.mark.parametrize(("file", "piece"), [*stated()])
def test_every_stated_range_is_a_piece(file, piece):
    """All ranges of the textbook cases, AFIRO's too (sources beside them in ranges.toml)."""
    made = curve_at(f"textbook/{file}", piece.line, piece.field)
    assert isinstance(made, Curve) and made.bends_rightly and made.is_joined
    up, at = piece.direction > 0, float(piece.number)
    if piece.distance == 0:
        assert (made.above if up else made.below).is_end and made.ends[up] == near(at)
        return
    # What is endless is drawn in part.
    shown = min(piece.distance, abs(made.ends[up] - at))
    assert shown > 0
    inside = at + piece.direction * shown / 3
    own = made.piece_of(inside)
    assert own.rate == near(piece.rate)
    if math.isfinite(piece.distance):
        assert (own.end if up else own.start) == near(piece.end)
    else:
        assert (made.above if up else made.below) is FOR_EVER


# Wyndor at its range ends, computed exactly by hand: pieces [0, 12] and [12, 24].
@pytest.mark.parametrize(
    ("file", "row", "rates"),
    [("b2a", "r1", (3, 0)), ("b2a", "r2", (2.5, 1.5)), ("b2b", "r3", (2.5, 1))],
)
def test_the_number_as_it_stands_may_be_a_breakpoint(file, row, rates):
    found = curve(f"textbook/{file}.csv", row=row)
    assert found.rates(found.now) == tuple(map(near, rates))


def test_a_span_has_every_breakpoint_inside_and_nothing_else():
    found = curve("textbook/a1.csv", (3.0, 30.0), row="r2")
    assert [(p.start, p.end) for p in found.pieces] == [(3, near(6)), (near(6), near(18)), (18, 30)]
    assert (found.below, found.above) == (GOES_ON, FOR_EVER)
    assert found.at(2.9) is None and found.at(3.0) == near(19.5)


def test_a_span_may_leave_the_number_out():
    found = curve("textbook/a1.csv", (20.0, 30.0), row="r2")
    assert found.now == 12 and found.objective == near(36)
    assert [(p.start, p.end, p.rate) for p in found.pieces] == [(20, 30, 0)]
    assert found.at(12.0) is None or found.at(12.0) == near(36)


@pytest.mark.parametrize(
    ("span", "why"), [((-5.0, -1.0), Why.NO_OPTIMUM), ((-5.0, 0.0), Why.ONE_POINT)]
)
def test_a_span_without_an_optimum(span, why):
    found = answer("textbook/a1.csv")
    made = curve_of(found, number_of(found, row="r2"), span)
    assert isinstance(made, NoCurve) and made.why is why


def test_a_bound_that_is_not_there_yet():
    """x1 <= t in the glass model: 30 + 3 t up to x1 = 2, where it is optimal anyway."""
    found = answer("textbook/a1.csv")
    made = curve_of(found, number_of(found, upper="x1"), (0.0, 5.0))
    assert made.now == math.inf
    assert [(p.start, p.end, p.rate) for p in made.pieces] == [(0, near(2), near(3)), (2, 5, 0)]
    assert (made.below, made.above) == (INFEASIBLE, FOR_EVER)
    assert isinstance(curve_of(found, number_of(found, upper="x1")), NoCurve)


def test_an_unbounded_end():
    """SCAGR25's column x231 has costs below which there is no optimum."""
    found = answer("netlib/scagr25.csv")
    lp = found.head.model
    name = lp.columns[701 - lp.m]
    made = curve_of(found, number_of(found, cost=name))
    assert made.below is Beyond.UNBOUNDED and made.bends_rightly and made.is_joined


def test_both_ends_of_an_equality_move_together():
    """Hillier and Lieberman, section 3.4 (from memory): 0.5 x1 + 0.5 x2 = 6 is valid on
    [5.5, 13.5] at the price 11/10."""
    found = curve("textbook/a2.csv", row="r2")
    assert found.number.part is Part.BOTH and found.lp.sense is Sense.MINIMIZE
    piece = found.piece_of(6.0)
    assert (piece.start, piece.end, piece.rate) == (near(5.5), near(13.5), near(1.1))
