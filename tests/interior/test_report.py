"""What the blocks say, sentence by sentence."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from lpview.blocks import read_model
from lpview.priced import StoppedEarlyError
from lpview.prices import NoPrices
from lpview.prices.digits import digits
from lpview.prices.interior import find_interior
from lpview.prices.redundant import Need, RowSide, redundant_sides
from lpview.report.digits import digits_blocks
from lpview.report.document import Facts, Sentence, Table
from lpview.report.interior import NO_POINT_NEEDED, interior_blocks
from lpview.report.redundant import redundant_blocks
from lpview.run import Claim
from lpview.solver import solve, warm_model
from tests.check.helpers import examined
from tests.check.test_netlib import FOLDER
from tests.dual.models import INF, model

STRICT = model("maximize", {"x": 1, "y": 0}, {"r": (-INF, {"x": 3, "y": 4}, 1.2)}, {})
MEET = model(
    "maximize", {"x": 1, "y": 1},
    {"low": (3, {"x": 1, "y": 1}, INF), "high": (-INF, {"x": 2, "y": 2}, 6)}, {},
)  # fmt: skip


def said(blocks):
    return [block.text for block in blocks if isinstance(block, Sentence)]


def tables(blocks):
    return [block for block in blocks if isinstance(block, Table)]


def interior_said(lp, full=False):
    found = examined(lp)
    return interior_blocks(found, find_interior(found, solve), full)


def test_a_strictly_feasible_plan():
    blocks = interior_said(STRICT)
    assert said(blocks) == [
        "A strictly feasible plan exists (the Slater condition holds): one plan satisfies every "
        "inequality with a margin of 0.1, the largest there is.",
        "The margin of a bound is its slack, that of a row its slack over the Euclidean norm of "
        "its coefficients. Largest scaled violation there: 0.",
        "There are no equality rows.",
        "So the optimal dual solutions are a bounded set, and every price has limits.",
        "The dual has a strictly feasible solution.",
        "So the optimal plans are a bounded set.",
        NO_POINT_NEEDED,
    ]
    (point,) = tables(blocks)
    assert point.rows == (("x", "0.1"), ("y", "0.1"))


def test_a_margin_at_the_cap_is_not_called_the_largest():
    wide = replace(STRICT, row_upper=np.array([500.0]))
    first = said(interior_said(wide))[0]
    assert first.endswith("with a margin of 1, and no larger one was looked for.")


def test_implied_equalities():
    blocks = interior_said(MEET)
    assert said(blocks) == [
        "No plan is strictly feasible (the Slater condition fails): 2 inequalities are implied "
        "equalities, without slack in every feasible plan.",
        "Proof: in every feasible plan their slacks, each times its multiplier, add up to at most "
        "0 (rounding in the multipliers: 0, scaled).",
        "There are no equality rows.",
        "So the optimal dual solutions are an unbounded set (they would be bounded exactly if the "
        "equality rows were independent and some plan were strictly feasible). Prices without a "
        "limit: 2 lines: row low, row high. To move such a line in at least one direction (an "
        "equality perhaps in both), by however little, leaves no plan; in a direction that leaves "
        "plans its rate is finite and may be quoted.",
        "The dual has a strictly feasible solution.",
        "So the optimal plans are a bounded set.",
        NO_POINT_NEEDED,
    ]
    (table,) = tables(blocks)
    assert [row[:2] for row in table.rows] == [("row low", ">= 3"), ("row high", "<= 6")]


def test_dependent_rows():
    rows = {"one": (4, {"x": 1, "y": 1}, 4), "two": (8, {"x": 2, "y": 2}, 8)}
    text = said(interior_said(model("minimize", {"x": 1, "y": 2}, rows, {})))
    assert (
        "The 2 equality rows are dependent over the columns that are not fixed: their rank is 1. "
        "Part of the dependence: 2 lines: row one, row two." in text
    )
    alone = said(interior_said(model("minimize", {"x": 1, "y": 2}, {"one": rows["one"]}, {})))
    assert "The 1 equality row is independent over the columns that are not fixed." in alone


def test_a_single_implied_equality():
    lp = model("maximize", {"x": 1}, {"r": (-INF, {"x": 1}, 0)}, {"x": (-INF, 5)})
    assert said(interior_said(lp))[0].startswith("A strictly feasible plan exists")
    rows = {"r": (1, {"x": 1}, INF), "empty": (0, {}, INF)}
    first = said(interior_said(model("minimize", {"x": 1}, rows, {})))[0]
    assert "1 inequality is an implied equality, without slack" in first


def test_plans_that_go_on():
    lp = model("minimize", {"x": 1, "y": 0}, {"r": (2, {"x": 1}, INF)}, {})
    text = said(interior_said(lp))
    assert "The dual has no strictly feasible solution." in text
    assert (
        "So the optimal plans are an unbounded set: they go on for ever without a change of the "
        "objective. Values without a limit: column y." in text
    )


def test_long_lists_are_cut_unless_the_full_report_is_asked_for():
    found = examined(read_model(FOLDER / "brandy.csv").model)
    interior = find_interior(found, solve)
    short = interior_blocks(found, interior)
    assert [(t.title, len(t.rows)) for t in tables(short)] == [("implied equalities: 20 of 43", 20)]
    assert any("27 lines: " in text and text.endswith(" and 22 more.") for text in said(short))
    full = interior_blocks(found, interior, full=True)
    assert [(t.title, len(t.rows)) for t in tables(full)] == [("implied equalities: 43 of 43", 43)]
    assert not any(" more." in text for text in said(full))


@pytest.mark.parametrize(
    ("blocks", "text"),
    [
        (interior_blocks, "strictly feasible points were not examined: no"),
        (redundant_blocks, "redundant rows were not looked for: no"),
        (digits_blocks, "digits were not estimated: no"),
    ],
)
def test_nothing_known(blocks, text):
    assert said(blocks(examined(STRICT), NoPrices("no"))) == [text]


ROWS = {
    "most": (-INF, {"x": 1}, 3),
    "again": (-INF, {"x": 2}, 6),
    "far": (-5, {"x": 1}, 10),
}
REPEATED = model("maximize", {"x": 1}, ROWS, {})


def test_redundant_rows():
    found = examined(REPEATED)
    blocks = redundant_blocks(found, redundant_sides(found, warm_model))
    assert said(blocks) == [
        "4 sides of inequality rows examined: reached by no feasible plan 2, implied by the other "
        "lines 2, needed 0.",
        "The sides that no feasible plan reaches can all be left out at once.",
        "Each implied side can be left out alone, but perhaps not all at once: of two equal rows "
        "each is implied by the other.",
    ]
    far, implied = tables(blocks)
    assert far.rows == (("far", ">=", "-5", "0", "5"), ("far", "<=", "10", "3", "7"))
    assert [row[0] for row in implied.rows] == ["most", "again"]


def test_stopped_while_looking_for_redundant_rows():
    def between():
        raise StoppedEarlyError(Claim.INTERRUPTED)

    found = examined(REPEATED)
    text = said(redundant_blocks(found, redundant_sides(found, warm_model, between)))
    assert text[0].startswith("stopped: 1 of 4 sides of rows examined (interrupted): ")


def test_sides_without_an_answer_are_named():
    found = examined(REPEATED)
    known = redundant_sides(found, warm_model)
    lost = RowSide(2, True, 10.0, float("nan"), Need.NOT_FOUND)
    text = said(redundant_blocks(found, replace(known, sides=(*known.sides[:3], lost))))
    assert text[-1] == "The solver gave no usable answer for: row far upper side."


def test_digits_in_words():
    found = examined(STRICT)
    facts, sentence = digits_blocks(found, digits(found))
    assert isinstance(facts, Facts)
    # The last digit is rounding, which machines do differently.
    assert {key: text.replace("16", "15") for key, text in facts.pairs} == {
        "condition of the basis": "1: a relative change of the basis's coefficients can grow by "
        "this factor, about 0 digits",
        "coefficients": "sizes 3 to 4; most apart in row r (ratio 1.3), in column x (ratio 1)",
        "digits of the objective": "15",
        "digits of the plan": "at least 15 in each variable that is not zero (fewest in column x)",
        "digits of the dual values": "at least 15 in each dual value that is not zero (fewest in "
        "row r)",
    }
    assert isinstance(sentence, Sentence)


def test_digits_in_full_list_every_line():
    found = examined(STRICT)
    plan, prices = tables(digits_blocks(found, digits(found), full=True))
    assert [row[0] for row in plan.rows] == ["x", "y"]
    assert [row[0] for row in prices.rows] == ["r"]
    assert all(0 <= int(row[1]) <= 16 for row in (*plan.rows, *prices.rows))
