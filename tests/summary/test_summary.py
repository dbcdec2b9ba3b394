"""The page for whoever decides: whole, in both senses, and true of the model solved again."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from lpview.answer import Answer
from lpview.examination import check_answer
from lpview.priced import StoppedEarlyError, price_page
from lpview.prices import NoPrices
from lpview.report import text
from lpview.report.names import width
from lpview.report.summary import summary_report
from lpview.report.summary_limits import MOST_LIMITS, summary_lines
from lpview.run import Claim
from tests.check.helpers import examined
from tests.dual.models import INF, model
from tests.labels.models import (
    glasshouse,
    labelled_glasshouse,
    labelled_mixture,
    mixture,
    prices_of,
)
from tests.summary.pages import (
    END,
    NETLIB,
    VERIFIED,
    page,
    priced_for_page,
    read,
    sentences_of_limits,
    shipped,
)

# Whole pages -----------------------------------------------------------------


@pytest.mark.parametrize(
    ("sense", "comes_to", "gains"),
    [("maximize", "earns", "earns"), ("minimize", "brings in", "saves")],
)
def test_prices_that_are_not_the_same_up_and_down(sense, comes_to, gains):
    # Prices by hand in models/spring.csv; the ranges are solved again in test_true.py.
    assert page(labelled_glasshouse(sense)) == (
        "model.csv: the best plan was found and verified\n"
        f"The best plan found {comes_to} 480 EUR.\n{VERIFIED}"
        "These 3 limits hold it back, the largest price times limit first:\n"
        f"Limit bench (bench space), at most 100 m2: each m2 more {gains} 2 EUR (for 40 m2), each "
        "m2 less costs 3.333 EUR (for 45 m2).\n"
        "Limit hours (packing hall), at most 110 h: each h more changes nothing (however much), "
        "each h less costs 1.333 EUR (for 60 h).\n"
        "Limit water, at most 70 hl: each hl more changes nothing (however much), each hl less "
        "costs 4 EUR (for 20 hl).\n"
        "More and less are not worth the same, so no single price is right, for: bench, hours, "
        "water.\n"
        f"No other plan is as good.\n{END}"
    )


@pytest.mark.parametrize(
    ("sense", "comes_to", "gains"), [("minimize", "costs", "saves"), ("maximize", "loses", "earns")]
)
def test_each_kind_of_limit(sense, comes_to, gains):
    assert page(labelled_mixture(sense)) == (
        "model.csv: the best plan was found and verified\n"
        f"The best plan found {comes_to} 25 EUR.\n{VERIFIED}"
        "These 4 limits hold it back, the largest price times limit first:\n"
        "Limit energy (metabolizable energy), at least 850 MJ: each MJ required is worth 0.15 "
        f"EUR: less {gains} it (for 12 MJ), more costs it (for 160 MJ, then no plan is left).\n"
        f"Limit weight, exactly 100 kg: each kg required is worth 1 EUR: more {gains} it (for 1.5 "
        "kg), less costs it (for 16 kg, then no plan is left).\n"
        "Limit on the amount of oats (rolled oats), at most 10 kg: each kg is worth 0.3 EUR: more "
        f"{gains} it (for 4 kg), less costs it (for 10 kg, then no plan is left).\n"
        "Limit on the amount of salt, exactly 50 g: each g required is worth 0.01 EUR: more costs "
        f"it (however much), less {gains} it (however much).\n"
        f"No other plan is as good.\n{END}"
    )


def test_without_labels_the_objective_improves_by_units():
    assert page(examined(mixture())) == (
        "model.csv: the best plan was found and verified\n"
        f"The best plan found reaches an objective of 25; lower is better.\n{VERIFIED}"
        "These 4 limits hold it back, the largest price times limit first:\n"
        "Limit energy, at least 850: each unit required moves the objective by 0.15: less "
        "improves it (for 12 units), more worsens it (for 160 units, then no plan is left).\n"
        "Limit weight, exactly 100: each unit required moves the objective by 1: more improves it "
        "(for 1.5 units), less worsens it (for 16 units, then no plan is left).\n"
        "Limit on the amount of oats, at most 10: each unit moves the objective by 0.3: more "
        "improves it (for 4 units), less worsens it (for 10 units, then no plan is left).\n"
        "Limit on the amount of salt, exactly 50: each unit required moves the objective by 0.01: "
        "more worsens it (however much), less improves it (however much).\n"
        f"No other plan is as good.\n{END}"
    )
    # Where the rates differ, the objective is named once.
    assert (
        "Limit bench, at most 100: each unit more improves the objective by 2 (for 40 units), each "
        "unit less worsens it by 3.333 (for 45 units).\nLimit hours, at most 110: each unit more "
        "changes nothing (however much), each unit less worsens the objective by 1.333 (for 60 "
        "units).\n"
    ) in page(examined(glasshouse()))


def test_without_prices_it_says_what_is_true_of_any():
    found = labelled_mixture()
    body = (
        "These 4 limits hold it back, the largest price times limit first:\n"
        "Limit energy (metabolizable energy), at least 850 MJ: one MJ less required saves at most "
        "0.15 EUR, one MJ more costs at least 0.15 EUR, or leaves no plan.\n"
        "Limit weight, exactly 100 kg: one kg more required saves at most 1 EUR, one kg less "
        "costs at least 1 EUR, or leaves no plan.\n"
        "Limit on the amount of oats (rolled oats), at most 10 kg: one kg more saves at most 0.3 "
        "EUR, one kg less costs at least 0.3 EUR, or leaves no plan.\n"
        "Limit on the amount of salt, exactly 50 g: one g less required saves at most 0.01 EUR, "
        "one g more costs at least 0.01 EUR, or leaves no plan.\n"
    )
    unknown = "How far these numbers hold, and whether they are the only ones, was not examined.\n"
    shown = text.render(summary_report(found))
    assert shown.startswith("model.csv: a best plan was found and verified\n")
    assert shown.endswith(body + unknown + END)
    no = NoPrices("the answer has no basis")
    why = "How far these numbers hold was not examined: the answer has no basis.\n"
    assert text.render(summary_report(found, no)).endswith(body + why + END)
    # A price of 10/3 is rounded so that each bound stays true.
    other = text.render(summary_report(examined(glasshouse())))
    assert (
        "Limit bench, at most 100: one unit more improves the objective by at most 3.334, one "
        "unit less worsens it by at least 3.333, or leaves no plan.\n"
    ) in other


def test_without_prices_limits_with_one_come_first():
    """afiro: 13 limits have a price in the answer shown, 15 can have one."""
    found = read(NETLIB / "afiro.csv")
    shown = text.render(summary_report(found))
    head = "13 limits hold it back and 9 more may; these 7 come first by price times limit:\n"
    assert head in shown
    assert all(
        "at most" in line and "it has no price" not in line for line in sentences_of_limits(shown)
    )
    few = labelled_glasshouse()
    assert "These 3 limits hold it back or may, the largest price times limit first:\n" in (
        text.render(summary_report(few))
    )


def test_without_prices_a_limit_whose_price_is_0_may_still_cost_something():
    # Of the three rows two suffice for prices: with heat and hours priced, water has none.
    found = labelled_glasshouse()
    y = np.array([10 / 3, 4 / 3, 0.0])
    lp = found.head.model
    basis = found.answer.basis
    found = check_answer(found.head, Answer(found.answer.x, y, lp.c - lp.A.T @ y, basis))
    assert (
        "Limit water, at most 70 hl: it has no price in this answer, but each hl less may still "
        "cost something, or leave no plan.\n"
    ) in text.render(summary_report(found))


# Doubt -----------------------------------------------------------------------


def stopped_after(found, steps):
    """The prices of a page, stopped at a step."""
    calls = []

    def stop():
        calls.append(1)
        if len(calls) > steps:
            raise StoppedEarlyError(Claim.INTERRUPTED)

    return price_page(found, prices_of(found), summary_lines, stop)


def test_stopped_prices_say_which_limits_were_not_examined():
    found = labelled_mixture()
    shown = text.render(summary_report(found, stopped_after(found, 2)))
    assert "Limit energy (metabolizable energy), at least 850 MJ: each MJ required" in shown
    assert "Limit weight, exactly 100 kg: each kg required" in shown
    assert "at most 10 kg: one kg more saves at most 0.3 EUR" in shown
    assert (
        "Whether any other move leaves no plan at once was not found out.\n"
        f"Only 2 of these 4 limits were examined both ways ({Claim.INTERRUPTED.value}); of the "
        "others it is said what any price allows.\n"
    ) in shown


def test_lines_are_examined_before_all_intervals_are_asked_for():
    found = read(NETLIB / "recipe.csv")
    priced = stopped_after(found, MOST_LIMITS)
    assert tuple(priced.lines) == summary_lines(priced.found) and not priced.intervals
    shown = text.render(summary_report(found, priced))
    assert "Whether any other move leaves no plan at once was not found out.\n" in shown
    assert "With even slightly" not in shown and "Only " not in shown
    whole = priced_for_page(found)
    assert whole.asked == len(whole.lines) == MOST_LIMITS and whole.stopped is None
    assert "was not found out" not in page(found)


def test_an_answer_that_fails_its_check_is_not_to_be_acted_on():
    found = labelled_glasshouse()
    answer = replace(found.answer, x=np.array([31.0, 40.0, 0.0]))
    wrong = check_answer(found.head, answer)
    assert text.render(summary_report(wrong)) == (
        "model.csv: NOT VERIFIED\n"
        "By its own word the solver has a plan that earns 488 EUR.\n"
        "The check of that plan fails primal feasibility, complementary slackness and duality "
        "gap: do not act on it before that is cleared up.\n"
        f"Nothing is said of its limits, for the prices may be wrong too.\n{END}"
    )


def test_remarks_stand_on_the_page():
    found = labelled_glasshouse(
        remarks=("costs, negated", "bench twice"), empty_costs=1, empty_coefficients=2
    )
    assert page(found).splitlines()[-4:-2] == [
        "3 empty cells of the model were taken as 0.",
        "Noticed while reading: costs, negated; bench twice.",
    ]
    one = page(labelled_glasshouse(empty_coefficients=1)).splitlines()
    assert one[-3] == "1 empty cell of the model was taken as 0."
    assert not any("oticed" in line for line in one)


@pytest.mark.parametrize(
    ("tolerance", "words"),
    [
        (1e-9, "to nine digits (nine decimals where its numbers are below 1)"),
        (1e-3, "to three digits (three decimals where its numbers are below 1)"),
        (5e-7, "to six digits (six decimals where its numbers are below 1)"),
        (0.1, "to one digit (one decimal where its numbers are below 1)"),
        (1e-13, "to 13 digits (13 decimals where its numbers are below 1)"),
        (0.5, "within 0.5 times its largest number (0.5 where its numbers are below 1)"),
    ],
)
def test_the_tolerance_in_digits(tolerance, words):
    found = labelled_glasshouse()
    request = replace(found.head.request, tolerance=tolerance)
    shown = page(replace(found, head=replace(found.head, request=request)))
    assert f"from the numbers of the file, and each holds {words}.\n" in shown


def test_a_model_without_anything_that_holds_it_back():
    found = examined(model("minimize", {"x": 1}, {"r": (-INF, {"x": 1}, 5)}, {}))
    assert page(found) == (
        "model.csv: the best plan was found and verified\n"
        f"The best plan found reaches an objective of 0; lower is better.\n{VERIFIED}"
        f"No limit holds it back.\nNo other plan is as good.\n{END}"
    )


def test_other_plans_that_are_as_good_are_told():
    found = examined(model("maximize", {"x": 1, "y": 1}, {"r": (-INF, {"x": 1, "y": 1}, 5)}, {}))
    shown = page(found)
    assert shown.startswith("model.csv: a best plan was found and verified\n")
    other = "Other plans are just as good; 2 amounts may differ in them (lpview plans lists them)."
    assert other in shown.splitlines()
    assert "This limit holds it back:\nLimit r, at most 5: " in shown


def test_a_limit_that_is_reached_and_holds_nothing_back_is_only_counted():
    rows = {"r": (-INF, {"x": 1, "y": 1}, 5), "s": (1, {"x": 1}, INF), "t": (2, {"y": 1}, INF)}
    found = examined(model("maximize", {"x": 1, "y": 1}, rows, {}))
    reached = int((found.marks.room[:3] == 0).sum())
    assert reached == 2
    sentence = (
        "The plan also reaches 1 limit that could move a little without changing the result.\n"
    )
    assert sentence in page(found)


def test_one_unit_is_one_also_where_only_its_print_is():
    lp = model("maximize", {"x": 1}, {"r": (-INF, {"x": 1}, 1 + 1e-12)}, {})
    assert "less worsens it (for 1 unit, then no plan is left)" in page(examined(lp))


def test_a_large_model_takes_one_page():
    found = shipped("season")
    document = summary_report(found, priced_for_page(found))
    lines = text.render(document, text.PAGE).splitlines()
    assert len(lines) <= 25
    assert sum(-(-width(line) // 80) for line in lines) <= 45
    assert sum(line.startswith("Limit ") for line in lines) == MOST_LIMITS
