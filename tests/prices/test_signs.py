"""Small models, each worked by hand: prices, rates up and down, distances, what comes then.

A line is stated by its interval of prices, its interval of values, and for each of its numbers
the move up, the move down, and whether zero slack there is shared by all optimal plans. Here
are rows of all kinds; columns stand in `test_signs_columns`.
"""

from __future__ import annotations

import numpy as np
import pytest

from lpview.prices import Prices, Then, ZeroSlack, work_out
from lpview.solver import warm_model
from tests.check.helpers import examined, line_of
from tests.dual.models import INF, model
from tests.prices.test_textbook_ranges import turned_round


def line(price, value, lower=None, upper=None, cost=None, both=None):
    """One line as stated; ``price`` and ``value`` are a number or (least, greatest).

    ``both`` are the moves of an equality row or a fixed column.
    """
    return price, value, {"lower": lower or both, "upper": upper or both, "cost": cost}


def assert_lines(lp, stated):
    """Compare all lines with what is stated, and once more with costs negated."""
    assert set(stated) == {*lp.rows, *lp.columns}
    for sign, turned in ((1, lp), (-1, turned_round(lp))):
        found = work_out(examined(turned), warm_model)
        assert isinstance(found, Prices)
        for name, (price, value, moves) in stated.items():
            seen = found.line(line_of(lp, name))
            low, high = np.broadcast_to(price, 2)
            assert seen.least == near(low if sign > 0 else -high), name
            assert seen.greatest == near(high if sign > 0 else -low), name
            low, high = np.broadcast_to(value, 2)
            assert (seen.least_value, seen.greatest_value) == (near(low), near(high)), name
            for field, texts in moves.items():
                assert_moves(seen, field, texts, sign, f"{name} {field}")


def assert_moves(seen, field, texts, sign, where):
    """Compare the moves of one number with texts such as "2 for 4, infeasible"."""
    moves = getattr(seen, field)
    if texts is None:
        assert moves is None, where
        assert field == "cost" or getattr(seen, f"{field}_zero") is None, where
        return
    # A negated cost goes down where the stated one goes up, and its rate is still the value.
    ways = ("down", "up") if field == "cost" and sign < 0 else ("up", "down")
    sign = 1 if field == "cost" else sign
    for way, text in zip(ways, texts[:2], strict=True):
        move = getattr(moves, way)
        numbers, then = text.split(", ")
        rate, distance = (float(part) for part in numbers.split(" for "))
        assert move.rate == near(sign * rate), f"{where} {way}"
        assert move.distance == near(distance), f"{where} {way}"
        assert move.then is Then(then), f"{where} {way}"
    if field != "cost":
        zero = ZeroSlack[texts[2].upper()] if len(texts) > 2 else None
        assert getattr(seen, f"{field}_zero") is zero, where


def near(value):
    return pytest.approx(float(value), rel=1e-9, abs=1e-12)


def table(*entries):
    return [pytest.param(lp, stated, id=title) for title, lp, stated in entries]


ROWS = table(
    (
        # x = 4. More of r earns 2 a unit for ever, less costs 2 until x = 0.
        "upper side active, maximizing",
        model("maximize", {"x": 2}, {"r": (-INF, {"x": 1}, 4)}, {}),
        {
            "r": line(2, 4, upper=("2 for inf, never", "2 for 4, infeasible", "always")),
            "x": line(
                0,
                4,
                lower=("0 for 4, infeasible", "0 for inf, never", "never"),
                cost=("4 for inf, never", "4 for 2, rate changes"),
            ),
        },
    ),
    (
        # x = 2. Below r = 0 the bound x >= 0 takes over. With a cost below 0 x would grow.
        "lower side active, minimizing",
        model("minimize", {"x": 3}, {"r": (2, {"x": 1}, INF)}, {}),
        {
            "r": line(3, 2, lower=("3 for inf, never", "3 for 2, rate changes", "always")),
            "x": line(
                0,
                2,
                lower=("0 for 2, rate changes", "0 for inf, never", "never"),
                cost=("2 for inf, never", "2 for 3, unbounded"),
            ),
        },
    ),
    (
        # x = 3, as small as it may be. Nothing else holds x: the rate never changes.
        "lower side active, maximizing, free variable",
        model("maximize", {"x": -1}, {"r": (3, {"x": 1}, INF)}, {"x": (-INF, INF)}),
        {
            "r": line(-1, 3, lower=("-1 for inf, never", "-1 for inf, never", "always")),
            "x": line(0, 3, cost=("3 for 1, unbounded", "3 for inf, never")),
        },
    ),
    (
        # x = -2 with 2x <= -4; a unit of r is half a unit of x.
        "upper side active, minimizing, free variable",
        model("minimize", {"x": -1}, {"r": (-INF, {"x": 2}, -4)}, {"x": (-INF, INF)}),
        {
            "r": line(-0.5, -4, upper=("-0.5 for inf, never", "-0.5 for inf, never", "always")),
            "x": line(0, -2, cost=("-2 for 1, unbounded", "-2 for inf, never")),
        },
    ),
    (
        # x = 4, y = 0; y costs 1 more than x. Below r = 0 there is no plan.
        "equality, minimizing",
        model("minimize", {"x": 1, "y": 2}, {"r": (4, {"x": 1, "y": 1}, 4)}, {}),
        {
            "r": line(1, 4, both=("1 for inf, never", "1 for 4, infeasible")),
            "x": line(
                0,
                4,
                lower=("0 for 4, infeasible", "0 for inf, never", "never"),
                cost=("4 for 1, rate changes", "4 for inf, never"),
            ),
            "y": line(
                1,
                0,
                lower=("1 for 4, infeasible", "1 for inf, never", "always"),
                cost=("0 for inf, never", "0 for 1, rate changes"),
            ),
        },
    ),
    (
        # x = 3, y = 0: the only way to r = 3; each unit of y needs one of x: -1 - 2. Below
        # r = 0 it is y = -r. A y allowed below 0 would be used until x = 0, at y = -3.
        "equality, maximizing",
        model("maximize", {"x": -2, "y": -1}, {"r": (3, {"x": 1, "y": -1}, 3)}, {}),
        {
            "r": line(-2, 3, both=("-2 for inf, never", "-2 for 3, rate changes")),
            "x": line(
                0,
                3,
                lower=("0 for 3, rate changes", "0 for inf, never", "never"),
                cost=("3 for 3, unbounded", "3 for inf, never"),
            ),
            "y": line(
                -3,
                0,
                lower=("-3 for inf, never", "-3 for 3, rate changes", "always"),
                cost=("0 for 3, unbounded", "0 for inf, never"),
            ),
        },
    ),
    (
        # x = 3. The lower side may rise to the upper, 8, and the upper may fall to 3.
        "two-sided, lower side active",
        model("minimize", {"x": 2}, {"r": (3, {"x": 1}, 8)}, {}),
        {
            "r": line(
                2,
                3,
                lower=("2 for 5, infeasible", "2 for 3, rate changes", "always"),
                upper=("0 for inf, never", "0 for 5, infeasible", "never"),
            ),
            "x": line(
                0,
                3,
                lower=("0 for 3, rate changes", "0 for inf, never", "never"),
                cost=("3 for inf, never", "3 for 2, rate changes"),
            ),
        },
    ),
    (
        # x = 4 with 6 <= 2x <= 8.
        "two-sided, upper side active",
        model("maximize", {"x": 3}, {"r": (6, {"x": 2}, 8)}, {}),
        {
            "r": line(
                1.5,
                8,
                lower=("0 for 2, infeasible", "0 for inf, never", "never"),
                upper=("1.5 for inf, never", "1.5 for 2, infeasible", "always"),
            ),
            "x": line(
                0,
                4,
                lower=("0 for 4, infeasible", "0 for inf, never", "never"),
                cost=("4 for inf, never", "4 for 3, rate changes"),
            ),
        },
    ),
    (
        # x = 1 at its bound, 2x = 2: a range for each side. x may rise to 5 and fall to -1.
        "two-sided, slack to both sides",
        model("minimize", {"x": 1}, {"r": (-2, {"x": 2}, 10)}, {"x": (1, INF)}),
        {
            "r": line(
                0,
                2,
                lower=("0 for 4, rate changes", "0 for inf, never", "never"),
                upper=("0 for inf, never", "0 for 8, infeasible", "never"),
            ),
            "x": line(
                1,
                1,
                lower=("1 for 4, infeasible", "1 for 2, rate changes", "always"),
                cost=("1 for inf, never", "1 for 1, rate changes"),
            ),
        },
    ),
    (
        # Rows without coefficients and without sides beside x = 1 at its bound.
        "empty row and open row",
        model(
            "minimize",
            {"x": 1},
            {"empty": (-1, {}, 3), "open": (-INF, {"x": 4}, INF)},
            {"x": (1, INF)},
        ),
        {
            "empty": line(
                0,
                0,
                lower=("0 for 1, infeasible", "0 for inf, never", "never"),
                upper=("0 for inf, never", "0 for 3, infeasible", "never"),
            ),
            "open": line(0, 4),
            "x": line(
                1,
                1,
                lower=("1 for inf, never", "1 for inf, never", "always"),
                cost=("1 for inf, never", "1 for 1, unbounded"),
            ),
        },
    ),
    (
        # r >= 2 and s <= 2 on the same sum: the price of r less that of s is 1.
        "opposite sides meet, minimizing",
        model(
            "minimize",
            {"x": 1, "y": 2},
            {"r": (2, {"x": 1, "y": 1}, INF), "s": (-INF, {"x": 1, "y": 1}, 2)},
            {},
        ),
        {
            "r": line(
                (1, INF),
                2,
                lower=("inf for 0, infeasible", "1 for 2, rate changes", "always"),
            ),
            "s": line(
                (-INF, 0),
                2,
                upper=("0 for inf, never", "-inf for 0, infeasible", "always"),
            ),
            "x": line(
                0,
                2,
                lower=("0 for 2, infeasible", "0 for inf, never", "never"),
                cost=("2 for 1, rate changes", "2 for inf, never"),
            ),
            "y": line(
                1,
                0,
                lower=("1 for 2, infeasible", "1 for inf, never", "always"),
                cost=("0 for inf, never", "0 for 1, rate changes"),
            ),
        },
    ),
    (
        # x <= 2 stated twice: more of one does not help, less of either costs.
        "the same limit twice, minimizing",
        model(
            "minimize",
            {"x": -1},
            {"r": (-INF, {"x": 1}, 2), "s": (-INF, {"x": 2}, 4)},
            {},
        ),
        {
            "r": line((-1, 0), 2, upper=("0 for inf, never", "-1 for 2, infeasible", "always")),
            "s": line((-0.5, 0), 4, upper=("0 for inf, never", "-0.5 for 4, infeasible", "always")),
            "x": line(
                0,
                2,
                lower=("0 for 2, infeasible", "0 for inf, never", "never"),
                cost=("2 for 1, rate changes", "2 for inf, never"),
            ),
        },
    ),
)


@pytest.mark.parametrize(("lp", "stated"), ROWS)
def test_rows(lp, stated):
    assert_lines(lp, stated)
