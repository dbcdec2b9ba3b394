"""Every rate and every distance against solving again: at both ends, and just past them.

For the textbook models, those of `test_theory` and those worked by hand in `test_signs`: over
its distance the optimal objective is linear, and beyond it is what is said to come: another
rate, no plan, no optimum.
"""

from __future__ import annotations

import pytest

from lpview.prices import Then
from tests.prices.test_signs import ROWS
from tests.prices.test_signs_columns import BOUNDS, DEGENERATE
from tests.prices.test_textbook_cases import INF, model_of, moved, objective_of, stated_number
from tests.prices.test_textbook_ranges import BOTH, found_for
from tests.prices.test_theory import assignment, transportation
from tests.prices.test_theory import found_for as found_in

MODELS = [
    *(pytest.param(model_of(case["file"]), case["file"], id=name) for name, case in BOTH.items()),
    pytest.param(transportation(), None, id="transportation"),
    pytest.param(assignment(), None, id="assignment"),
    pytest.param(assignment(last=False), None, id="assignment, last row dropped"),
    *(pytest.param(p.values[0], None, id=p.id) for p in (*ROWS, *BOUNDS, *DEGENERATE)),
]


def moves_of(line):
    """Field, direction and move of everything that can be moved about a line."""
    for field in ("lower", "upper", "cost"):
        moves = getattr(line, field)
        if moves is not None:
            yield field, 1, moves.up
            yield field, -1, moves.down


def assert_linear(lp, k, field, direction, move, objective):
    """Solve half way and at the end, or far out where there is none."""
    size = max(1, abs(float(stated_number(lp, k, field))))
    reach = move.distance if move.distance < INF else 100 * size
    for part in (0.5, 1 - 1e-9):
        step = direction * reach * part
        again = objective_of(moved(lp, k, field, step), field)
        assert again is not None, (k, field, direction)
        expected = objective + move.rate * step
        assert again == pytest.approx(expected, rel=1e-8, abs=1e-8), (k, field, direction)


def assert_what_comes_then(lp, k, field, direction, move, objective):
    """Solve a little past the end."""
    step = direction * (move.distance + 0.01 * max(1, move.distance))
    beyond = objective_of(moved(lp, k, field, step), field)
    assert (beyond is None) == (move.then is not Then.RATE_CHANGES), (k, field, direction)
    if beyond is not None:
        # Minimizing, the optimum is convex in a side and concave in a cost.
        bend = lp.sense.sign * (beyond - objective - move.rate * step)
        assert (-bend if field == "cost" else bend) > 1e-7, (k, field, direction)
    else:
        assert move.then is (Then.UNBOUNDED if field == "cost" else Then.INFEASIBLE)


@pytest.mark.parametrize(("lp", "file"), MODELS)
def test_ends_of_all_ranges_by_solving_again(lp, file):
    found = found_for(file, 1) if file else found_in(lp)
    objective = objective_of(lp, "cost")
    for k in range(lp.m + lp.n):
        for field, direction, move in moves_of(found.line(k)):
            assert (move.distance == INF) == (move.then is Then.NEVER)
            if move.distance > 0:
                assert_linear(lp, k, field, direction, move, objective)
            if move.then is not Then.NEVER:
                assert_what_comes_then(lp, k, field, direction, move, objective)
