"""The page for whoever decides: whole, in both senses, and true of the model solved again."""

from __future__ import annotations

import re
import textwrap
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import linprog

from lpview.answer import Answer
from lpview.blocks import read_model
from lpview.examination import check_answer, examine
from lpview.labels import Label
from lpview.model import Sense
from lpview.outcomes import NotEstablished, Request, Stopped
from lpview.priced import StoppedEarlyError, price_lines
from lpview.prices import NoPrices
from lpview.proof.prove import prove
from lpview.proof.results import NotProved
from lpview.report import markdown, text
from lpview.report.summary import summary_report
from lpview.report.summary_limits import MOST_LIMITS, summary_lines
from lpview.report.worth import written_out
from lpview.run import Claim, SolveSettings
from lpview.solver import solve
from tests.check.helpers import examined
from tests.dual.models import INF, model
from tests.labels.models import (
    GLASSHOUSE,
    glasshouse,
    labelled,
    labelled_glasshouse,
    labelled_mixture,
    mixture,
    nothing_between,
    prices_of,
)

MODELS = Path(__file__).parents[2] / "models"

VERIFIED = (
    "It is verified: every condition of a best plan was worked out anew from the numbers of the "
    "file, and holds within 0.000000001 of the largest number in it.\n"
)
END = """A verified optimum is only as good as the model; local rules and licensed practice decide.
reproduce  lpview check model.csv --summary
"""


def page(found, proof=None, lines=None):
    """The page with the prices of its limits."""
    asked = summary_lines(found) if lines is None else lines
    priced = price_lines(found, prices_of(found), asked, nothing_between)
    return text.render(summary_report(found, priced, proof))


def shipped(name):
    source = str(MODELS / f"{name}.csv")
    request = Request(source=f"{name}.csv", command=f"lpview check {name}.csv")
    return examine(read_model(source), request, solve)


def ask(lp, settings=None):
    return solve(lp, settings or SolveSettings())


def proved(lp, found=None):
    basis = None if found is None else found.answer.basis
    return prove(lp, basis, ask, SolveSettings())


# Whole pages -----------------------------------------------------------------


@pytest.mark.parametrize(
    ("sense", "comes_to", "gains"),
    [("maximize", "earns", "earns"), ("minimize", "brings in", "saves")],
)
def test_prices_that_are_not_the_same_up_and_down(sense, comes_to, gains):
    # Prices by hand in models/spring.csv; the ranges are solved again below.
    assert page(labelled_glasshouse(sense)) == (
        "model.csv: a best plan was found and verified\n"
        f"The best plan found {comes_to} 480 EUR.\n{VERIFIED}"
        "These 3 limits hold it back, the one that matters most first:\n"
        f"Limit bench (bench space), at most 100 m2: each m2 more {gains} 2 EUR, for up to 40 m2 "
        "more; each m2 less costs 3.33333 EUR, for up to 45 m2 less.\n"
        "Limit hours (packing hall), at most 110 h: each h more changes nothing, however much "
        "more; each h less costs 1.33333 EUR, for up to 60 h less.\n"
        "Limit water, at most 70 hl: each hl more changes nothing, however much more; each hl "
        "less costs 4 EUR, for up to 20 hl less.\n"
        "More and less are not worth the same, so no single price is right, for: bench, hours, "
        "water.\n"
        f"No other plan is as good.\n{END}"
    )


@pytest.mark.parametrize(
    ("sense", "comes_to", "gains"), [("minimize", "costs", "saves"), ("maximize", "loses", "earns")]
)
def test_each_kind_of_limit(sense, comes_to, gains):
    assert page(labelled_mixture(sense)) == (
        "model.csv: a best plan was found and verified\n"
        f"The best plan found {comes_to} 25 EUR.\n{VERIFIED}"
        "These 4 limits hold it back, the one that matters most first:\n"
        f"Limit energy (metabolizable energy), at least 850 MJ: each MJ less required {gains} "
        "0.15 EUR, for up to 12 MJ less; each MJ more required costs 0.15 EUR, for up to 160 MJ "
        "more, and beyond that no plan is left.\n"
        f"Limit weight, exactly 100 kg: each kg more required {gains} 1 EUR, for up to 1.5 kg "
        "more; each kg less required costs 1 EUR, for up to 16 kg less, and beyond that no plan "
        "is left.\n"
        f"Limit on the amount of oats (rolled oats), at most 10 kg: each kg more {gains} 0.3 EUR, "
        "for up to 4 kg more; each kg less costs 0.3 EUR, for up to 10 kg less, and beyond that "
        "no plan is left.\n"
        "Limit on the amount of salt, exactly 50 g: each g more required costs 0.01 EUR, however "
        f"much more; each g less required {gains} 0.01 EUR, however much less.\n"
        f"No other plan is as good.\n{END}"
    )


def test_without_labels_the_objective_improves_by_units():
    assert page(examined(mixture())) == (
        "model.csv: a best plan was found and verified\n"
        f"The best plan found brings the objective to 25, to be as low as possible.\n{VERIFIED}"
        "These 4 limits hold it back, the one that matters most first:\n"
        "Limit energy, at least 850: each unit less required improves the objective by 0.15, for "
        "up to 12 units less; each unit more required worsens the objective by 0.15, for up to "
        "160 units more, and beyond that no plan is left.\n"
        "Limit weight, exactly 100: each unit more required improves the objective by 1, for up "
        "to 1.5 units more; each unit less required worsens the objective by 1, for up to 16 "
        "units less, and beyond that no plan is left.\n"
        "Limit on the amount of oats, at most 10: each unit more improves the objective by 0.3, "
        "for up to 4 units more; each unit less worsens the objective by 0.3, for up to 10 units "
        "less, and beyond that no plan is left.\n"
        "Limit on the amount of salt, exactly 50: each unit more required worsens the objective "
        "by 0.01, however much more; each unit less required improves the objective by 0.01, "
        "however much less.\n"
        f"No other plan is as good.\n{END}"
    )


def test_without_prices_it_says_what_is_true_of_any():
    found = labelled_mixture()
    body = (
        "These 4 limits hold it back, the one that matters most first:\n"
        "Limit energy (metabolizable energy), at least 850 MJ: one MJ less required saves at most "
        "0.15 EUR; one MJ more required costs at least 0.15 EUR, or leaves no plan.\n"
        "Limit weight, exactly 100 kg: one kg more required saves at most 1 EUR; one kg less "
        "required costs at least 1 EUR, or leaves no plan.\n"
        "Limit on the amount of oats (rolled oats), at most 10 kg: one kg more saves at most 0.3 "
        "EUR; one kg less costs at least 0.3 EUR, or leaves no plan.\n"
        "Limit on the amount of salt, exactly 50 g: one g less required saves at most 0.01 EUR; "
        "one g more required costs at least 0.01 EUR, or leaves no plan.\n"
    )
    unknown = "How far these numbers hold, and whether they are the only ones, was not examined.\n"
    assert text.render(summary_report(found)).endswith(body + unknown + END)
    no = NoPrices("the answer has no basis")
    why = "How far these numbers hold was not examined: the answer has no basis.\n"
    assert text.render(summary_report(found, no)).endswith(body + why + END)


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


# True of the model solved again ----------------------------------------------

CLAUSE = re.compile(
    r"each (?:unit|\S+) (?P<way>more|less)(?: required)? "
    r"(?P<verb>earns|saves|costs|changes nothing|"
    r"improves the objective by|worsens the objective by)(?: (?P<rate>[\d.]+))?.*?, "
    r"(?:for up to (?P<far>[\d.]+)|however much)"
)


def optimum(lp, line, step):
    """The optimal objective with a line's limits moved, by another way into a solver."""
    low = np.concatenate([lp.row_lower, lp.lower])
    high = np.concatenate([lp.row_upper, lp.upper])
    side = _moving(lp, line)
    low[line] += step * ("low" in side)
    high[line] += step * ("high" in side)
    A, m = lp.A.toarray(), lp.m
    sign = lp.sense.sign
    found = linprog(
        sign * lp.c,
        A_ub=np.vstack([A[np.isfinite(high[:m])], -A[np.isfinite(low[:m])]]),
        b_ub=np.concatenate([high[:m][np.isfinite(high[:m])], -low[:m][np.isfinite(low[:m])]]),
        bounds=np.stack([low[m:], high[m:]], axis=1),
    )
    return sign * found.fun + lp.offset if found.status == 0 else None


def _moving(lp, line):
    """Which ends of a line the page is about, in these models of one-sided lines."""
    low = np.concatenate([lp.row_lower, lp.lower])[line]
    high = np.concatenate([lp.row_upper, lp.upper])[line]
    if low == high:
        return ("low", "high")
    return ("high",) if np.isfinite(high) else ("low",)


@pytest.mark.parametrize("sense", ["minimize", "maximize"])
@pytest.mark.parametrize("lp_of", [glasshouse, mixture])
@pytest.mark.parametrize("with_units", [True, False])
def test_every_number_is_true_of_the_model_solved_again(lp_of, sense, with_units):
    lp = lp_of(sense)
    found = examined(lp)
    if with_units:
        found = labelled(found, GLASSHOUSE if lp_of is glasshouse else {})
    before, checked = optimum(lp, 0, 0.0), 0
    limits = [line for line in page(found).splitlines() if line.startswith("Limit ")]
    for line, sentence in zip(summary_lines(found), limits, strict=True):
        clauses = list(CLAUSE.finditer(sentence))
        assert {clause["way"] for clause in clauses} == {"more", "less"}
        for clause in clauses:
            far = float(clause["far"] or 50.0)
            direction = 1 if clause["way"] == "more" else -1
            worse = 0 if clause["rate"] is None else float(clause["rate"])
            worse *= 1 if clause["verb"].startswith(("costs", "worsens")) else -1
            for step in (far / 3, far):
                after = optimum(lp, line, direction * step)
                change = lp.sense.sign * (after - before)
                assert change == pytest.approx(worse * step, rel=1e-5, abs=1e-7)
            if clause["far"]:
                beyond = optimum(lp, line, direction * far * 1.1)
                text_after = sentence[clause.end() :].split(";")[0]
                assert ("no plan is left" in text_after) == (beyond is None)
                if beyond is not None:
                    change = lp.sense.sign * (beyond - before)
                    assert change > worse * far * 1.1 + 1e-6
            checked += 1
    assert checked == 2 * len(limits) >= 6


# Doubt -----------------------------------------------------------------------


def test_stopped_prices_say_which_limits_were_not_examined():
    found, calls = labelled_mixture(), []

    def stop():
        calls.append(1)
        if len(calls) > 2:
            raise StoppedEarlyError(Claim.INTERRUPTED)

    priced = price_lines(found, prices_of(found), [0, 1, 3, 5], stop)
    shown = text.render(summary_report(found, priced))
    assert "Limit energy (metabolizable energy), at least 850 MJ: each MJ less" in shown
    assert "Limit weight, exactly 100 kg: each kg more" in shown
    assert "at most 10 kg: one kg more saves at most 0.3 EUR" in shown
    assert (
        f"Only 2 of these 4 limits were examined both ways ({Claim.INTERRUPTED.value}); of the "
        "others it is said what any price allows.\n"
    ) in shown


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


def test_scope_and_remarks_stand_on_the_page():
    found = labelled_glasshouse(
        scope="linear relaxation: 2 integer columns taken as continuous",
        remarks=("costs, negated", "bench twice"),
        empty_costs=1,
    )
    lines = page(found).splitlines()
    scope = "linear relaxation: 2 integer columns taken as continuous"
    assert lines[0] == f"model.csv ({scope}): a best plan was found and verified"
    assert lines[-4:-2] == [
        f"All of this is about the model as it was read: {scope}.",
        "Noticed while reading: 1 empty cost read as 0; costs, negated; bench twice.",
    ]


def test_a_model_without_anything_that_holds_it_back():
    found = examined(model("minimize", {"x": 1}, {"r": (-INF, {"x": 1}, 5)}, {}))
    assert page(found) == (
        "model.csv: a best plan was found and verified\n"
        f"The best plan found brings the objective to 0, to be as low as possible.\n{VERIFIED}"
        f"No limit holds it back.\nNo other plan is as good.\n{END}"
    )


def test_other_plans_that_are_as_good_are_told():
    found = examined(model("maximize", {"x": 1, "y": 1}, {"r": (-INF, {"x": 1, "y": 1}, 5)}, {}))
    assert "Other plans are just as good; 2 amounts may differ in them.\n" in page(found)
    assert "This limit holds it back:\nLimit r, at most 5: " in page(found)


def test_a_large_model_takes_one_page():
    found = shipped("season")
    shown = page(found)
    assert len(shown.splitlines()) <= 25
    assert sum(len(textwrap.wrap(line, 80)) for line in shown.splitlines()) <= 40
    assert sum(line.startswith("Limit ") for line in shown.splitlines()) == MOST_LIMITS
    assert re.search(r"The plan also reaches \d+ further limits with a price", shown)


# Other outcomes --------------------------------------------------------------


def test_no_plan():
    small = model(
        "minimize",
        {"x": 1, "y": 1},
        {"heat": (5, {"x": 1}, INF), "bench": (-INF, {"x": 1}, 3), "hours": (0, {"y": 1}, 9)},
        {},
    )
    known = {"heat": Label("heating", "kWh"), "hours": Label("packing")}
    assert text.render(summary_report(labelled(examined(small), known))) == (
        "model.csv: there is no plan\n"
        "No plan satisfies all limits together; these 2 contradict each other: heat (heating), "
        "bench.\n"
        "This was checked on the numbers of the file.\n"
        f"At least one of them has to give way before there is anything to decide on.\n{END}"
    )
    found = shipped("winter-infeasible")
    certain = text.render(summary_report(found, proof=proved(found.head.model)))
    assert "contradict each other, in view of the limits of single amounts: " in certain
    assert "This is proved in exact arithmetic.\n" in certain


def test_no_best_plan():
    found = shipped("winter-unbounded")
    words = (
        "winter-unbounded.csv: there is no best plan\n"
        "The objective can be made higher without limit, which no real plan can: a limit is "
        "missing, or a cost has the wrong sign.\n"
    )
    assert text.render(summary_report(found)).startswith(words)
    certain = text.render(summary_report(found, proof=proved(found.head.model)))
    assert certain.startswith(words)
    assert (
        "What goes on for ever: the amount of grid.\nThis is proved in exact arithmetic.\n"
        in certain
    )


def test_nothing_established_and_stopped():
    head = labelled_glasshouse().head
    doubtful = NotEstablished(head, "its ray has a length of 0.")
    assert text.render(summary_report(doubtful)) == (
        "model.csv: nothing is established\n"
        "What the solver says could not be confirmed, so there is no plan to act on.\n"
        f"Why it is not confirmed: its ray has a length of 0.\n{END}"
    )
    run = replace(head.run, claim=Claim.TIME_LIMIT)
    assert text.render(summary_report(Stopped(replace(head, run=run)))) == (
        "model.csv: stopped before there was a result\n"
        f"The work ended early ({Claim.TIME_LIMIT.value}), so there is no plan to act on.\n"
        "Nothing is known of the model's best plan, not even whether there is one.\n" + END
    )


# Proofs ----------------------------------------------------------------------


def test_a_proved_optimum():
    found = labelled_glasshouse()
    shown = page(found, proved(found.head.model, found))
    assert shown.startswith(
        "model.csv: the best plan is proved\n"
        "The best plan earns 480 EUR.\n"
        "It is proved in exact arithmetic that no plan is better.\n"
        "These 3 limits hold it back"
    )


def test_a_proof_against_the_solver_and_one_without_its_plan():
    lp = glasshouse()
    found, proof = labelled_glasshouse(), proved(lp)
    against = proved(shipped("winter-infeasible").head.model)
    told = text.render(summary_report(found, proof=replace(against, y=proof.y)))
    assert told.startswith("model.csv: there is no plan\n")
    assert "The solver says optimal, and the proof settles that it errs.\n" in told
    lost = NotEstablished(found.head, "it was lost.")
    assert text.render(summary_report(lost, proof=proof)).startswith(
        "model.csv: there is a best plan, but it is not at hand\n"
        "The best plan earns 480 EUR; this is proved in exact arithmetic.\n"
    )
    answer = replace(found.answer, x=np.array([31.0, 40.0, 0.0]))
    wrong = summary_report(check_answer(found.head, answer), proof=proof)
    assert "the plan at hand carry rounding: the check fails primal feasibility" in text.render(
        wrong
    )


def test_a_proof_that_was_not_reached():
    found = labelled_glasshouse()
    tried = NotProved("time limit reached", Fraction(470), Fraction(490), True, None)
    assert (
        "A proof in exact arithmetic was tried and not reached: time limit reached.\n"
        "What is certain without it: the optimal objective is at least 470, at most 490.\n"
    ) in page(found, tried)


# Names and numbers -----------------------------------------------------------


@pytest.mark.parametrize(
    ("value", "shown"),
    [
        (1234567.0, "1234567"),
        (0.00001234, "0.00001234"),
        (-0.1, "-0.1"),
        (2 / 3, "0.666667"),
        (123456.789, "123457"),
        (98765432.1, "98765432"),
        (1e15, "1e15"),
        (1e-12, "1e-12"),
        (INF, "inf"),
        (0.0, "0"),
    ],
)
def test_numbers_are_written_out(value, shown):
    assert written_out(value) == shown


def test_names_labels_and_units_are_data():
    lp = replace(glasshouse(), rows=("be[nch", "*ho\x1burs*", "water"))
    known = {
        "be[nch": Label("[bold]\x1b[31m" + "x" * 300, "m\u202e2"),
        "*ho\x1burs*": Label("温室" * 40, "h`h"),
    }
    found = labelled(examined(lp), known, Label("", "€"))
    document = summary_report(found)
    shown = text.render(document)
    assert "\x1b" not in shown and "\u202e" not in shown
    assert "Limit be[nch ([bold]\\x1b[31mxxx" in shown and "one m\\u202e2 more" in shown
    assert "earns 480 €" in shown
    assert "\\*ho\\\\x1burs\\*" in markdown.render(document)
    assert Sense.MAXIMIZE.value not in shown
