"""The oracle against published values.

Sources are named with attribution from memory; the numbers marked "ours" were worked
out in exact fractions by code that is not this one.
"""

from fractions import Fraction
from math import inf

import pytest

from tests.dual.models import INF, model
from tests.prices import exact
from tests.prices.exact import BOTH, LOWER, UPPER, cost_move, side_move


def at_most(sense, costs, *rows):
    """A model of nonnegative columns with rows ``(coefficients, upper side)``."""
    names = [f"x{j + 1}" for j in range(len(costs))]
    return model(
        sense,
        dict(zip(names, costs, strict=True)),
        {
            f"r{i + 1}": (-INF, dict(zip(names, terms, strict=True)), side)
            for i, (terms, side) in enumerate(rows)
        },
        {},
    )


def wyndor(b1=4, b3=18, c1=3):
    return at_most("maximize", (c1, 5), ((1, 0), b1), ((0, 2), 12), ((3, 2), b3))


def radiation():
    return model(
        "minimize",
        {"x1": 0.4, "x2": 0.5},
        {
            "critical": (-INF, {"x1": 0.3, "x2": 0.1}, 2.7),
            "tumour": (6, {"x1": 0.5, "x2": 0.5}, 6),
            "centre": (6, {"x1": 0.6, "x2": 0.4}, INF),
        },
        {},
    )


def giapetto():
    return at_most("maximize", (3, 2), ((2, 1), 100), ((1, 1), 80), ((1, 0), 40))


def dakota():
    rows = ((8, 6, 1), 48), ((4, 2, 1.5), 20), ((2, 1.5, 0.5), 8)
    return at_most("maximize", (60, 30, 20), *rows)


def three_lines():
    return at_most("maximize", (1, 1), ((1, 0), 1), ((0, 1), 1), ((1, 1), 2))


def two_redundant():
    rows = ((1, 0), 2), ((0, 1), 2), ((1, 1), 4), ((2, 1), 6)
    return at_most("maximize", (3, 2), *rows)


RATINGS = ((8, 7, 9, 9), (5, 2, 7, 8), (6, 1, 4, 9), (2, 3, 2, 6))


def assignment(without_last=False):
    people = {f"u{i + 1}": (1, {f"{i}{j}": 1 for j in range(4)}, 1) for i in range(4)}
    jobs = {f"v{j + 1}": (1, {f"{i}{j}": 1 for i in range(4)}, 1) for j in range(4)}
    rows = {**people, **jobs}
    if without_last:
        del rows["v4"]
    costs = {f"{i}{j}": RATINGS[i][j] for i in range(4) for j in range(4)}
    return model("maximize", costs, rows, {})


def intervals(lp, kind=exact.price_interval):
    return [kind(lp, k) for k in range(lp.m + lp.n)]


def single(found):
    """Numbers of intervals that must be points."""
    assert all(least == greatest for least, greatest in found)
    return [least for least, _ in found]


def side_range(lp, line, which=UPPER):
    """The side's values at the far ends of its two moves."""
    at = Fraction(str((lp.row_lower if which == LOWER else lp.row_upper).tolist()[line]))
    return tuple(at + d * side_move(lp, line, which, d)[1] for d in (-1, 1))


def cost_range(lp, column):
    at = Fraction(str(lp.c.tolist()[column]))
    return tuple(at + d * cost_move(lp, column, d)[1] for d in (-1, 1))


def rates(lp, line, which=UPPER):
    """Left and right rate."""
    return tuple(side_move(lp, line, which, d)[0] for d in (-1, 1))


# The published ranges (Hillier & Lieberman, section 3.1 and the duality chapter; Winston,
# chapters 3, 5 and 6), attribution from memory.
@pytest.mark.parametrize(
    ("lp", "objective", "x", "y", "z", "sides", "costs"),
    [
        (
            wyndor(),
            36,
            [2, 6],
            [0, Fraction(3, 2), 1],
            [0, 0],
            [(2, inf), (6, 18), (12, 24)],
            [(0, Fraction(15, 2)), (2, inf)],
        ),
        (
            giapetto(),
            180,
            [20, 60],
            [1, 1, 0],
            [0, 0],
            [(80, 120), (60, 100), (20, inf)],
            [(2, 4), (Fraction(3, 2), 3)],
        ),
        (
            dakota(),
            280,
            [2, 0, 8],
            [0, 10, 10],
            [0, -5, 0],
            [(24, inf), (16, 24), (Fraction(20, 3), 10)],
            [(56, 80), (-inf, 35), (15, Fraction(45, 2))],
        ),
    ],
    ids=["wyndor", "giapetto", "dakota"],
)
def test_published_ranges(lp, objective, x, y, z, sides, costs):
    assert exact.value(lp) == objective
    assert single(intervals(lp, exact.value_interval))[lp.m :] == x
    assert single(intervals(lp)) == [*y, *z]
    assert [side_range(lp, i) for i in range(lp.m)] == sides
    assert [cost_range(lp, j) for j in range(lp.n)] == costs
    assert exact.dimensions(lp) == (0, 0)


def test_radiation():
    # Hillier & Lieberman, section 3.4, attribution from memory.
    lp = radiation()
    assert exact.value(lp) == Fraction("5.25")
    assert single(intervals(lp)) == [Fraction(-1, 2), Fraction(11, 10), 0, 0, 0]
    assert single(intervals(lp, exact.value_interval))[2:] == [
        Fraction("6.3"),
        Fraction("7.5"),
        Fraction("4.5"),
    ]
    assert side_range(lp, 0) == (Fraction("2.4"), Fraction("3.6"))
    assert side_range(lp, 1, BOTH) == (Fraction("5.5"), Fraction("13.5"))
    assert side_range(lp, 2, LOWER) == (-inf, Fraction("6.3"))
    assert [cost_range(lp, j) for j in range(2)] == [
        (-inf, Fraction("0.5")),
        (Fraction("0.4"), inf),
    ]


def test_three_lines_through_a_vertex():
    # The standard illustration of two-sided shadow prices (Strum 1969; Aucamp & Steinberg
    # 1982; Akgul 1984), citations from memory; numbers ours.
    lp = three_lines()
    assert exact.value(lp) == 2
    assert intervals(lp)[:3] == [(0, 1)] * 3
    assert [rates(lp, i) for i in range(3)] == [(1, 0)] * 3
    assert exact.dimensions(lp) == (0, 1)
    assert {exact.zero_slack(lp, i, UPPER) for i in range(3)} == {"always"}


def test_wyndor_at_the_ends_of_its_ranges():  # ours
    lp = wyndor(b3=24)
    assert exact.value(lp) == 42
    assert intervals(lp)[:3] == [(0, 3), (Fraction(3, 2), Fraction(5, 2)), (0, 1)]
    assert [rates(lp, i) for i in range(3)] == [(3, 0), (Fraction(5, 2), Fraction(3, 2)), (1, 0)]
    assert [side_range(lp, i) for i in range(3)] == [(0, inf), (0, 24), (12, inf)]
    # Two moves that do nothing alone are worth 3 together.
    assert [exact.value(wyndor(*b)) for b in ((5, 24), (4, 27), (5, 27))] == [42, 42, 45]

    lp = wyndor(b3=12)
    assert exact.value(lp) == 30
    assert intervals(lp)[:4] == [
        (0, 0),
        (0, Fraction(3, 2)),
        (1, Fraction(5, 2)),
        (Fraction(-9, 2), 0),
    ]
    assert [rates(lp, i) for i in (1, 2)] == [(Fraction(3, 2), 0), (Fraction(5, 2), 1)]
    assert [side_range(lp, i) for i in (1, 2)] == [(0, inf), (0, 24)]

    lp = wyndor(c1=7.5)
    assert exact.value(lp) == 45
    assert intervals(lp, exact.value_interval)[3:] == [(2, 4), (3, 6)]
    assert single(intervals(lp))[:3] == [0, 0, Fraction(5, 2)]
    assert [[cost_move(lp, j, d)[0] for d in (-1, 1)] for j in (0, 1)] == [[2, 4], [3, 6]]
    assert exact.dimensions(lp) == (1, 0)
    assert exact.zero_slack(lp, 0, UPPER) == "sometimes"


def test_two_redundant_lines():  # ours
    lp = two_redundant()
    assert exact.value(lp) == 10
    assert intervals(lp)[:4] == [(0, 3), (0, 2), (0, 2), (0, Fraction(3, 2))]
    assert [rates(lp, i) for i in range(4)] == [(3, 0), (2, 0), (2, 0), (Fraction(3, 2), 0)]


def test_assignment():
    # Kuhn 1955, data from memory; numbers ours.
    lp = assignment()
    assert exact.value(lp) == 27
    assert intervals(lp)[:8] == [(-inf, inf)] * 8
    assert {side_move(lp, i, BOTH, 1) for i in range(8)} == {(-inf, 0, "infeasible")}
    assert {side_move(lp, i, BOTH, -1) for i in range(8)} == {(inf, 0, "infeasible")}
    chosen = single(intervals(lp, exact.value_interval))[8:]
    assert [k for k, x in enumerate(chosen) if x == 1] == [0, 6, 11, 13]

    lp = assignment(without_last=True)
    u, v = [(10, 11), (8, 9), (9, 9), (6, 7)], [(-3, -2), (-4, -3), (-2, -1)]
    assert intervals(lp)[:7] == u + v


def test_no_slater_point():
    # Gauvin 1977, citation from memory; numbers ours. max x, x <= 0, -x <= 0, x free.
    rows = {"a": (-INF, {"x": 1}, 0), "b": (-INF, {"x": -1}, 0)}
    lp = model("maximize", {"x": 1}, rows, {"x": (-INF, INF)})
    assert intervals(lp)[:2] == [(1, inf), (0, inf)]
    assert side_move(lp, 0, UPPER, 1) == (1, inf, "never")
    assert side_move(lp, 0, UPPER, -1) == (inf, 0, "infeasible")


def test_without_optimum():
    infeasible = at_most("minimize", (1,), ((1,), -1))
    unbounded = at_most("maximize", (1,), ((-1,), 0))
    assert [exact.value(lp) for lp in (infeasible, unbounded)] == ["infeasible", "unbounded"]
    with pytest.raises(ValueError, match="unbounded"):
        exact.value_interval(unbounded, 0)


def test_costs_that_lose_the_optimum():
    # min x + y, x - y <= 0, x free of a lower bound but for x >= -y: rays (1, 1), (-1, 1).
    rows = {"a": (-INF, {"x": 1, "y": -1}, 0), "b": (0, {"x": 1, "y": 1}, INF)}
    lp = model("minimize", {"x": 0, "y": 1}, rows, {"x": (-INF, INF)})
    assert [cost_move(lp, 0, d) for d in (1, -1)] == [(0, 1, "unbounded")] * 2
    assert cost_move(lp, 1, -1) == (0, 1, "unbounded")
    flat = model("minimize", {"x": 0, "y": 0}, rows, {"x": (-INF, INF)})
    assert cost_move(flat, 0, 1) == (-inf, 0, "unbounded")
    assert cost_move(flat, 0, -1) == (inf, 0, "unbounded")
