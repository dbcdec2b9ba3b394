"""The sentences on one line, whole, in both senses; numbers worked out by hand."""

from __future__ import annotations

import pytest

from lpview.ledger import ledger
from lpview.prices import LinePrices, Move, Moves, Then, ZeroSlack
from lpview.report.ledger_words import meaning
from lpview.report.price_words import any_number, move_clause, price_sentences
from tests.check.helpers import examined, line_of
from tests.dual.models import INF, model
from tests.price_report.models import found_glasshouse, ready


def said(found, name):
    line = line_of(found.head.model, name)
    return price_sentences(found, line, ready(found).line(line))


HEAT_MOVES = (
    "Each unit more on its upper side improves the objective by 0.8, however many; each unit "
    "less worsens the objective by 2, for 300 units, then no plan is left."
)


@pytest.mark.parametrize(
    ("sense", "interval", "shown"),
    [("maximize", "0.8 to 2", "2"), ("minimize", "-2 to -0.8", "-2")],
)
def test_a_row_reads_the_same_in_both_senses_but_for_the_sign(sense, interval, shown):
    assert said(found_glasshouse(sense), "heat") == (
        f"Its dual value is any number from {interval}; the answer shown has {shown}.",
        HEAT_MOVES,
        "Every optimal plan reaches its upper side.",
    )


def test_a_row_with_slack():
    assert said(found_glasshouse(), "bench") == (
        "Its dual value 0 is the only one.",
        "Each unit more on its upper side changes nothing, however many; each unit less changes "
        "nothing, for 16 units, then the rate changes.",
        "No optimal plan reaches its upper side.",
    )


def test_a_column_in_the_plan():
    # Worth 30 against basil's 1.6 * 15 / 2 = 12: its income may fall by 18.
    assert said(found_glasshouse(), "tomato") == (
        "Its reduced cost 0 is the only one.",
        "Each unit more on its lower bound changes nothing, for 20 units, then no plan is left; "
        "each unit less changes nothing, however many.",
        "Each unit more on its upper bound changes nothing, however many; each unit less "
        "changes nothing, for 20 units, then the rate changes.",
        "Each unit more on its cost improves the objective by 20, however many; each unit less "
        "worsens the objective by 20, for 18 units, then the rate changes.",
        "No optimal plan reaches its lower bound or its upper bound.",
        "It is 20 in every optimal plan.",
    )


def test_a_column_out_of_the_plan():
    assert said(found_glasshouse(), "basil") == (
        "Its reduced cost is any number from -2.4 to 0; the answer shown has -2.4.",
        "Each unit more on its lower bound worsens the objective by 2.4, for 150 units, then no "
        "plan is left; each unit less changes nothing, however many.",
        "Each unit more on its cost changes nothing, for 2.4 units, then the rate changes; each "
        "unit less changes nothing, however many.",
        "Every optimal plan reaches its lower bound.",
    )


def loose():
    return examined(
        model(
            "minimize",
            {"near": 1, "far": 1, "spare": 0},
            {
                "need": (4, {"near": 1, "far": 1}, 4),
                "again": (8, {"near": 2, "far": 2}, 8),
                "slack": (-INF, {"near": 1, "spare": -1}, 5),
                "nothing": (-INF, {"near": 1}, INF),
            },
            {"far": (0, 3)},
        )
    )


def test_an_equality_that_cannot_be_moved_alone():
    first, *others = said(loose(), "need")
    assert first.startswith("Its dual value is any number at all; the answer shown has ")
    assert others == [
        "Any more on its right-hand side leaves no plan; any less leaves no plan.",
    ]


def test_a_variable_without_a_greatest_value_and_without_a_cost_to_lose():
    assert said(loose(), "spare") == (
        "Its reduced cost 0 is the only one.",
        "No move of its lower bound changes anything.",
        "Each unit more on its cost changes nothing, however many; any less lets the objective "
        "improve without limit.",
        "Some optimal plans reach its lower bound, others do not.",
        "Over all optimal plans it is any number from 0 up, without limit.",
    )


def test_one_of_several_optimal_plans():
    said_of_far = said(loose(), "far")
    assert said_of_far[-1] == "Over all optimal plans it is any number from 0 to 3."
    ends = {sentence for sentence in said_of_far if sentence.startswith("Some optimal plans")}
    assert ends == {
        "Some optimal plans reach its lower bound, others do not.",
        "Some optimal plans reach its upper bound, others do not.",
    }


def test_a_fixed_column():
    lp = model(
        "minimize",
        {"x": 2, "y": 3},
        {"r": (5, {"x": 1, "y": 1}, INF)},
        {"y": (1, 1)},
    )
    # One unit more of y replaces one of x and costs 3 - 2, for the 4 units that x has; then
    # it costs 3. One unit less saves 1, as far as it goes.
    assert said(examined(lp), "y") == (
        "Its reduced cost 1 is the only one.",
        "Each unit more on its fixed value worsens the objective by 1, for 4 units, then the "
        "rate changes; each unit less improves the objective by 1, however many.",
        "Each unit more on its cost worsens the objective by 1, however many; each unit less "
        "improves the objective by 1, however many.",
    )


def test_the_ledger_says_what_was_found_in_place_of_what_may_be():
    found = found_glasshouse()
    prices = ready(found)
    entry = ledger(found, 0)
    assert meaning(found, entry, prices.line(0)) == (
        "It holds the plan back.",
        *said(found, "heat"),
    )
    assert "at most 2" in meaning(found, entry)[0]
    basil = ledger(found, 4)
    assert meaning(found, basil, prices.line(4))[0] == (
        "It is out of the plan: its cost 1.6 less what it uses at the dual values, 4, is -2.4."
    )
    everything = loose()
    free = line_of(everything.head.model, "nothing")
    assert meaning(everything, ledger(everything, free), ready(everything).line(free)) == (
        "It has no side, so it cannot hold the plan back.",
    )


@pytest.mark.parametrize(
    ("move", "up", "sign", "clause"),
    [
        (Move(2, 3, Then.RATE_CHANGES), True, 1,
         "each unit more worsens the objective by 2, for 3 units, then the rate changes"),
        (Move(2, 1, Then.INFEASIBLE), False, 1,
         "each unit less improves the objective by 2, for 1 unit, then no plan is left"),
        (Move(2, 3, Then.UNBOUNDED), True, -1,
         "each unit more improves the objective by 2, for 3 units, then the objective improves "
         "without limit"),
        (Move(-2, INF, Then.NEVER), False, -1,
         "each unit less improves the objective by 2, however many"),
        (Move(-INF, 0, Then.INFEASIBLE), False, 1, "any less leaves no plan"),
        (Move(INF, 0, Then.UNBOUNDED), False, 1,
         "any less lets the objective improve without limit"),
        (Move(1, 0, Then.NOT_FOUND), True, 1,
         "each unit more worsens the objective by 1, but how far that holds was not found out"),
        (Move(1, 4, Then.NOT_FOUND), True, 1,
         "each unit more worsens the objective by 1, surely for 4 units, but how far that holds "
         "was not found out"),
    ],
)  # fmt: skip
def test_every_kind_of_move_has_its_clause(move, up, sign, clause):
    assert move_clause(move, up, sign) == clause


def test_intervals_in_words():
    assert any_number(0, 3) == "any number from 0 to 3"
    assert any_number(1, INF) == "any number from 1 up, without limit"
    assert any_number(-INF, 1) == "any number from 1 down, without limit"
    assert any_number(-INF, INF) == "any number at all"


def test_every_answer_about_zero_slack_has_its_sentence():
    found = found_glasshouse()
    still = Moves(Move(0, INF, Then.NEVER), Move(0, INF, Then.NEVER))
    begins = []
    for zero in ZeroSlack:
        prices = LinePrices(0, 0, 0, 0, None, still, None, None, zero)
        begins.append(price_sentences(found, 0, prices)[-1].split(" its ")[0])
    assert begins == [
        "Every optimal plan reaches",
        "Some optimal plans reach",
        "No optimal plan reaches",
        "Within rounding it could not be settled whether every optimal plan reaches",
    ]
