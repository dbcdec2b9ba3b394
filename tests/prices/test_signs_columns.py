"""More small models worked by hand: bounds, fixed and free columns, costs; see `test_signs`."""

from __future__ import annotations

import pytest

from tests.dual.models import INF, model
from tests.prices.test_signs import assert_lines, line, table

BOUNDS = table(
    (
        # x - y <= 2 lets x rise to 6 with y = 4. From x <= 2 on y is 0 and x earns 5. Above
        # r = 6 the row is slack. A y that costs 5 is not worth it; one that earns has no end.
        "upper bound active, maximizing",
        model(
            "maximize",
            {"x": 5, "y": -1},
            {"r": (-INF, {"x": 1, "y": -1}, 2)},
            {"x": (0, 6)},
        ),
        {
            "r": line(1, 2, upper=("1 for 4, rate changes", "1 for inf, never", "always")),
            "x": line(
                4,
                6,
                lower=("0 for 6, infeasible", "0 for inf, never", "never"),
                upper=("4 for inf, never", "4 for 4, rate changes", "always"),
                cost=("6 for inf, never", "6 for 4, rate changes"),
            ),
            "y": line(
                0,
                4,
                lower=("0 for 4, rate changes", "0 for inf, never", "never"),
                cost=("4 for 1, unbounded", "4 for 4, rate changes"),
            ),
        },
    ),
    (
        # x = -5 with 2x <= -10 and -10 <= x <= -4.
        "negative variable between its bounds, maximizing",
        model("maximize", {"x": 1}, {"r": (-INF, {"x": 2}, -10)}, {"x": (-10, -4)}),
        {
            "r": line(
                0.5, -10, upper=("0.5 for 2, rate changes", "0.5 for 10, infeasible", "always")
            ),
            "x": line(
                0,
                -5,
                lower=("0 for 5, infeasible", "0 for inf, never", "never"),
                upper=("0 for inf, never", "0 for 1, rate changes", "never"),
                cost=("-5 for inf, never", "-5 for 1, rate changes"),
            ),
        },
    ),
    (
        # x = -1, y = 0; y costs 3 more than x. x may fall to -3 and no further: then y.
        "negative variable, lower side active, minimizing",
        model("minimize", {"x": 1, "y": 4}, {"r": (-1, {"x": 1, "y": 1}, INF)}, {"x": (-3, INF)}),
        {
            "r": line(1, -1, lower=("1 for inf, never", "1 for 2, rate changes", "always")),
            "x": line(
                0,
                -1,
                lower=("0 for 2, rate changes", "0 for inf, never", "never"),
                cost=("-1 for 3, rate changes", "-1 for 1, unbounded"),
            ),
            "y": line(
                3,
                0,
                lower=("3 for 2, rate changes", "3 for inf, never", "always"),
                cost=("0 for inf, never", "0 for 3, rate changes"),
            ),
        },
    ),
    (
        # x = -2, y = 0, x + y = -2 >= -6. Below x = -6 y must make up; a y below 0 is gladly
        # used until the row holds at y = -4.
        "upper bound of a negative variable active, maximizing",
        model(
            "maximize",
            {"x": 1, "y": -1},
            {"r": (-6, {"x": 1, "y": 1}, INF)},
            {"x": (-INF, -2)},
        ),
        {
            "r": line(0, -2, lower=("0 for 4, rate changes", "0 for inf, never", "never")),
            "x": line(
                1,
                -2,
                upper=("1 for inf, never", "1 for 4, rate changes", "always"),
                cost=("-2 for inf, never", "-2 for 1, rate changes"),
            ),
            "y": line(
                -1,
                0,
                lower=("-1 for inf, never", "-1 for 4, rate changes", "always"),
                cost=("0 for 1, unbounded", "0 for inf, never"),
            ),
        },
    ),
    (
        # x = 2, y = 3: y is cheaper, -2 against -3, and full.
        "upper bound active, lower side active, maximizing",
        model("maximize", {"x": -3, "y": -2}, {"r": (5, {"x": 1, "y": 1}, INF)}, {"y": (0, 3)}),
        {
            "r": line(-3, 5, lower=("-3 for inf, never", "-3 for 2, rate changes", "always")),
            "x": line(
                0,
                2,
                lower=("0 for 2, rate changes", "0 for inf, never", "never"),
                cost=("2 for 1, rate changes", "2 for inf, never"),
            ),
            "y": line(
                1,
                3,
                lower=("0 for 3, infeasible", "0 for inf, never", "never"),
                upper=("1 for 2, rate changes", "1 for 3, infeasible", "always"),
                cost=("3 for inf, never", "3 for 1, rate changes"),
            ),
        },
    ),
    (
        # x = -1 at its upper bound, x + y = 2, y = 3: minimizing, x earns 2 a unit over y.
        "upper bound active, minimizing",
        model("minimize", {"x": -1, "y": 1}, {"r": (2, {"x": 1, "y": 1}, 2)}, {"x": (-4, -1)}),
        {
            "r": line(1, 2, both=("1 for inf, never", "1 for 3, rate changes")),
            "x": line(
                -2,
                -1,
                lower=("0 for 3, infeasible", "0 for inf, never", "never"),
                upper=("-2 for 3, rate changes", "-2 for 3, infeasible", "always"),
                cost=("-1 for 2, rate changes", "-1 for inf, never"),
            ),
            "y": line(
                0,
                3,
                lower=("0 for 3, rate changes", "0 for inf, never", "never"),
                cost=("3 for inf, never", "3 for 2, rate changes"),
            ),
        },
    ),
    (
        # y = 5 - x makes 5 + 2x: x stays at 0 until its cost falls below that of y.
        "free variable in an equality",
        model("minimize", {"x": 3, "y": 1}, {"r": (5, {"x": 1, "y": 1}, 5)}, {"y": (-INF, INF)}),
        {
            "r": line(1, 5, both=("1 for inf, never", "1 for inf, never")),
            "x": line(
                2,
                0,
                lower=("2 for inf, never", "2 for inf, never", "always"),
                cost=("0 for inf, never", "0 for 2, unbounded"),
            ),
            "y": line(0, 5, cost=("5 for 2, unbounded", "5 for inf, never")),
        },
    ),
    (
        # f = 2 leaves x = 6; a unit of f costs two of x at 3 and earns 4. f = 5 leaves none.
        "fixed column",
        model("maximize", {"x": 3, "f": 4}, {"r": (-INF, {"x": 1, "f": 2}, 10)}, {"f": (2, 2)}),
        {
            "r": line(3, 10, upper=("3 for inf, never", "3 for 6, infeasible", "always")),
            "x": line(
                0,
                6,
                lower=("0 for 6, infeasible", "0 for inf, never", "never"),
                cost=("6 for inf, never", "6 for 3, rate changes"),
            ),
            "f": line(
                -2,
                2,
                both=("-2 for 3, infeasible", "-2 for inf, never"),
                cost=("2 for inf, never", "2 for inf, never"),
            ),
        },
    ),
)

DEGENERATE = table(
    (
        # The row x <= 3 meets the bound x >= 3: its price may be anything from 1, the bound's
        # 1 less that.
        "row meets bound, maximizing",
        model("maximize", {"x": 1}, {"r": (-INF, {"x": 1}, 3)}, {"x": (3, INF)}),
        {
            "r": line((1, INF), 3, upper=("1 for inf, never", "inf for 0, infeasible", "always")),
            "x": line(
                (-INF, 0),
                3,
                lower=("-inf for 0, infeasible", "0 for inf, never", "always"),
                cost=("3 for inf, never", "3 for inf, never"),
            ),
        },
    ),
    (
        # u - v = r costs |r|, and u >= t makes v >= t too. Lower down nothing is gained.
        "absolute value, minimizing",
        model("minimize", {"u": 1, "v": 1}, {"r": (0, {"u": 1, "v": -1}, 0)}, {}),
        {
            "r": line((-1, 1), 0, both=("1 for inf, never", "-1 for inf, never")),
            "u": line(
                (0, 2),
                0,
                lower=("2 for inf, never", "0 for inf, never", "always"),
                cost=("0 for inf, never", "0 for 2, unbounded"),
            ),
            "v": line(
                (0, 2),
                0,
                lower=("2 for inf, never", "0 for inf, never", "always"),
                cost=("0 for inf, never", "0 for 2, unbounded"),
            ),
        },
    ),
    (
        # x in [0, 3] and y = 4 - x are equally good: a cost that moves picks one end.
        "many plans, maximizing",
        model(
            "maximize",
            {"x": 1, "y": 1},
            {"r": (-INF, {"x": 1, "y": 1}, 4), "s": (-INF, {"x": 2}, INF)},
            {"x": (0, 3)},
        ),
        {
            "r": line(1, 4, upper=("1 for inf, never", "1 for 4, infeasible", "always")),
            "s": line(0, (0, 6)),
            "x": line(
                0,
                (0, 3),
                lower=("0 for 3, infeasible", "0 for inf, never", "sometimes"),
                upper=("0 for inf, never", "0 for 3, infeasible", "sometimes"),
                cost=("3 for inf, never", "0 for inf, never"),
            ),
            "y": line(
                0,
                (1, 4),
                lower=("0 for 4, infeasible", "0 for inf, never", "never"),
                cost=("4 for inf, never", "1 for 1, rate changes"),
            ),
        },
    ),
    (
        # x = 1 + y for every y >= 0 costs 1: a cheaper x or y has no end at once.
        "plans without end, minimizing",
        model("minimize", {"x": 1, "y": -1}, {"r": (1, {"x": 1, "y": -1}, INF)}, {}),
        {
            "r": line(1, 1, lower=("1 for inf, never", "1 for inf, never", "always")),
            "x": line(
                0,
                (1, INF),
                lower=("0 for inf, never", "0 for inf, never", "never"),
                cost=("1 for inf, never", "inf for 0, unbounded"),
            ),
            "y": line(
                0,
                (0, INF),
                lower=("0 for inf, never", "0 for inf, never", "sometimes"),
                cost=("0 for inf, never", "inf for 0, unbounded"),
            ),
        },
    ),
    (
        # Every x + y = 3 is optimal, x down to minus infinity.
        "plans without end either way, minimizing",
        model(
            "minimize",
            {"x": 1, "y": 1},
            {"r": (3, {"x": 1, "y": 1}, 3)},
            {"x": (-INF, INF), "y": (-INF, 0)},
        ),
        {
            "r": line(1, 3, both=("1 for inf, never", "1 for inf, never")),
            "x": line(0, (3, INF), cost=("3 for inf, never", "inf for 0, unbounded")),
            "y": line(
                0,
                (-INF, 0),
                upper=("0 for inf, never", "0 for inf, never", "sometimes"),
                cost=("-inf for 0, unbounded", "0 for inf, never"),
            ),
        },
    ),
)


@pytest.mark.parametrize(("lp", "stated"), BOUNDS)
def test_bounds(lp, stated):
    assert_lines(lp, stated)


@pytest.mark.parametrize(("lp", "stated"), DEGENERATE)
def test_degenerate(lp, stated):
    assert_lines(lp, stated)
