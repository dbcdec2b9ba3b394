"""The exact check itself, against cases worked by hand (sums in the comments)."""

from __future__ import annotations

import json
from fractions import Fraction as F  # noqa: N817 (many short expected values)
from pathlib import Path

import pytest

from tests.oracle import check, check_report
from tests.reading import INF, read

NONE = (0, 0, 0)

# Both limits of a row, a free and a fixed column, an offset and a third.
LARGEST = """# two crops
[c],maximize
column,leek,kale,power
profit,5,4,-1/2
[offset],-3

[A]
row,leek,kale,power
bench,1,1,
energy,2,1/3,-1
staff,0,3,0

[b]
row,lower,upper
bench,2,10
energy,0,0
staff,,none

[bounds]
column,lower,upper
leek,,6
kale,3,3
power,none,
"""

# The same words in the tall form.
SMALLEST = """[c],minimize
column,cost,upper
leek,5,
kale,4,8

[A]
row,column,coefficient
bench,leek,1
bench,kale,2
heat,kale,-3

[b]
row,relation,rhs
bench,>=,10
heat,<=,-6
"""


@pytest.fixture
def largest(tmp_path: Path) -> Path:
    path = tmp_path / "largest.csv"
    path.write_text(LARGEST, encoding="utf-8")
    return path


@pytest.fixture
def smallest(tmp_path: Path) -> Path:
    path = tmp_path / "smallest.csv"
    path.write_text(SMALLEST, encoding="utf-8")
    return path


def test_the_file_is_read_as_written(largest: Path) -> None:
    model = read(largest)
    assert (model.sense, model.offset) == ("maximize", -3)
    assert model.costs == {"leek": 5, "kale": 4, "power": F(-1, 2)}
    assert model.sides == {"bench": (2, 10), "energy": (0, 0), "staff": (-INF, INF)}
    assert model.bounds == {"leek": (0, 6), "kale": (3, 3), "power": (-INF, INF)}
    assert model.rows["energy"] == {"leek": 2, "kale": F(1, 3), "power": -1}


def test_the_tall_form_is_read_as_written(smallest: Path) -> None:
    model = read(smallest)
    assert model.bounds == {"leek": (0, INF), "kale": (0, 8)}
    assert model.sides == {"bench": (10, INF), "heat": (-INF, -6)}
    assert model.rows == {"bench": {"leek": 1, "kale": 2}, "heat": {"kale": -3}}


def test_exact_optimum_has_no_residual_when_maximizing(largest: Path) -> None:
    # power = 2 leek + kale/3 = 13. energy: z(power) = -1/2 + y = 0, so y = 1/2.
    # z(leek) = 5 - 2/2 = 4 > 0 at its upper bound 6; z(kale) = 4 - 1/6 (fixed).
    # primal 5*6 + 4*3 - 13/2 - 3 = 65/2; dual -3 + 4*6 + (23/6)*3 = 65/2.
    z = [4, F(23, 6), 0]
    assert check(largest, [6, 3, 13], [0, F(1, 2), 0], z) == {
        "primal feasibility": NONE,
        "dual feasibility": NONE,
        "complementary slackness": NONE,
        "duality gap": NONE,
        "stationarity": NONE,
    }


def test_violated_sides_and_bounds(largest: Path) -> None:
    # leek 10 exceeds its bound 6 by 4: 4/10. bench: 10 + 3 = 13 exceeds 10 by 3: 3/10.
    # energy: 20 + 1 - 13 = 8 exceeds 0 by 8: 8/20. Largest 8; 2/5 both ways.
    found = check(largest, [10, 3, 13], [0, F(1, 2), 0])
    assert found["primal feasibility"] == (8, F(2, 5), F(2, 5))
    assert "stationarity" not in found


def test_scaled_and_relative_differ_below_one(smallest: Path) -> None:
    # leek -1/4 is below 0 by 1/4: scaled 1/4, relative 1. bench 31/4 lacks 9/4 of 10.
    # heat: -12 is far below -6. Worst absolute 9/4, scaled 1/4 (leek), relative 1 (leek).
    found = check(smallest, [-0.25, 4], [0, 0])
    assert found["primal feasibility"] == (F(9, 4), F(1, 4), 1)


def test_wrong_signs_when_minimizing(smallest: Path) -> None:
    # bench (>=) with y = -1/2: no upper side, 1/2 of its own size 1/2.
    # heat (<=) with y = 2: no lower side, 2 of 2. z(leek) = 5.5, z(kale) = 4 + 1 + 6.
    found = check(smallest, [10, 2], [-0.5, 2])
    assert found["dual feasibility"] == (2, 1, 1)
    # z(leek) = 11/2 times 10 off its bound: 55 of 55. z(kale) = 11 times 2: 22.
    # gap: 58 - 0 (the two prices without a side count 0, both bounds are 0).
    assert found["complementary slackness"] == (55, 1, 1)
    assert found["duality gap"] == (58, 1, 1)


def test_wrong_signs_when_maximizing(largest: Path) -> None:
    # Free power has z = -1/2 + y(energy) = 3/2 at y = 2: terms 1/2 and 2, so 3/4.
    # staff has no side at all: y = 1 of 1.
    found = check(largest, [6, 3, 13], [0, 2, 1])
    assert found["dual feasibility"] == (F(3, 2), 1, 1)


def test_reported_reduced_costs_are_compared_with_rebuilt_ones(smallest: Path) -> None:
    # y = (2, 0): z = (5 - 2, 4 - 4). Reported 3 and 1/8: off by 1/8, largest term 4.
    found = check(smallest, [6, 2], [2, 0], [3, 0.125])
    assert found["stationarity"] == (F(1, 8), F(1, 32), F(1, 32))


def test_a_reduced_cost_out_of_nothing_is_infinite_in_relation(tmp_path: Path) -> None:
    path = tmp_path / "free.csv"
    path.write_text("[c],minimize\ncolumn,cost\nx,0\n\n[A]\nrow,x\n\n[b]\nrow,relation,rhs\n")
    assert check(path, [1], [], [0.5])["stationarity"] == (F(1, 2), F(1, 2), INF)


def test_product_uses_the_side_that_the_sign_names(largest: Path) -> None:
    # bench 9 of 2..10. Maximizing, y = 3/4 names 10: 3/4 times 1, of 3/4 times 10.
    # z(leek) = 5 - 3/4 - 1 = 13/4 at 6, z(power) = 0.
    found = check(largest, [6, 3, 13], [0.75, 0.5, 0])
    assert found["complementary slackness"] == (F(3, 4), F(1, 10), F(1, 10))
    # y = -3/4 names 2: 3/4 times 7 = 21/4 of 3/4 times 9, although 10 is nearer.
    found = check(largest, [6, 3, 13], [-0.75, 0.5, 0])
    assert found["complementary slackness"] == (F(21, 4), F(7, 9), F(7, 9))


def test_gap_of_a_feasible_pair_in_both_senses(largest: Path, smallest: Path) -> None:
    # Maximizing, leek 4 and power 9: 20 + 12 - 9/2 - 3 = 49/2, the dual is 65/2: 8.
    found = check(largest, [4, 3, 9], [0, 0.5, 0])
    assert found["duality gap"] == (8, F(16, 65), F(16, 65))
    # Minimizing, (6, 2): 38, and y = (2, 0) gives 20 + 0 = 20: 18 of 38.
    found = check(smallest, [6, 2], [2, 0])
    assert found["duality gap"] == (18, F(9, 19), F(9, 19))
    assert found["primal feasibility"] == found["dual feasibility"] == NONE


def test_floats_are_taken_exactly(smallest: Path) -> None:
    # 0.1 as a double is 3602879701896397 / 2**55; bench lacks 10 - 2 * 4 - that.
    found = check(smallest, [0.1, 4.0], [0.0, 0.0])
    assert found["primal feasibility"][0] == 2 - F(3602879701896397, 2**55)


def test_a_json_report_is_checked(smallest: Path) -> None:
    lines = [{"column": "leek", "value": 6.0, "reduced_cost": 3.0}]
    lines.append({"column": "kale", "value": 2.0, "reduced_cost": 0.0})
    report = {
        "constraints": [{"row": "bench", "dual_value": 2.0}, {"row": "heat", "dual_value": 0.0}],
        "variables": lines,
        "residuals": [{"condition": "stationarity", "passed": True}],
    }
    assert check_report(smallest, json.dumps(report)) == check(smallest, [6, 2], [2, 0], [3, 0])
    report["residuals"] = [{"condition": "stationarity", "passed": None}]
    assert "stationarity" not in check_report(smallest, json.dumps(report))
