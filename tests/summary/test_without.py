"""The page where there is no plan to act on, and where something is proved."""

from __future__ import annotations

import re
from dataclasses import replace
from fractions import Fraction

import numpy as np
import pytest
from scipy.optimize import Bounds, LinearConstraint, milp

from lpview.examination import check_answer
from lpview.labels import Label
from lpview.model import Sense
from lpview.outcomes import NotEstablished, Stopped
from lpview.proof.results import NotProved
from lpview.report import text
from lpview.report.summary import summary_report
from lpview.run import Claim
from tests.check.helpers import examined, line_of
from tests.dual.models import INF, model
from tests.labels.models import (
    glasshouse,
    labelled,
    labelled_glasshouse,
)
from tests.summary.pages import (
    END,
    page,
    proved,
    shipped,
)


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
        "No plan satisfies all limits together; these 2 contradict each other: heat (heating, at "
        "least 5 kWh), bench (at most 3).\n"
        "This was checked on the numbers of the file.\n"
        f"At least one of them has to give way before there is anything to decide on.\n{END}"
    )
    found = shipped("winter-infeasible")
    assert (
        "these 4 contradict each other, as 1 amount cannot be below 0: hospital (at least 130), "
        "bench (at most 150), the amount of chard (exactly 12), heat (at most 904).\n"
    ) in page(found)
    certain = text.render(summary_report(found, proof=proved(found.head.model)))
    assert (
        "these 3 contradict each other, in view of the limits of single amounts: bench (at most "
        "150), heat (at most 904), hospital (at least 130).\n"
    ) in certain
    assert "This is proved in exact arithmetic.\n" in certain


@pytest.mark.parametrize("sense", ["minimize", "maximize"])
def test_the_limits_that_contradict_each_other_do_so_by_themselves(sense):
    """As printed, and solved again without all other limits."""
    found = shipped("winter-infeasible")
    found = examined(replace(found.head.model, sense=Sense(sense)))
    lp, sentence = found.head.model, page(found).splitlines()[1]
    low, high = np.full(lp.m + lp.n, -INF), np.full(lp.m + lp.n, INF)
    low[lp.m :] = np.where(lp.lower == 0, 0.0, -INF)
    named = re.findall(
        r"(?:the amount of )?(\w+) \((at least|at most|exactly) ([\d.]+)\)", sentence
    )
    assert len(named) == 4
    for name, end, value in named:
        line = line_of(lp, name)
        if end != "at most":
            low[line] = float(value)
        if end != "at least":
            high[line] = float(value)

    def status(low, high):
        return milp(
            np.zeros(lp.n),
            constraints=LinearConstraint(lp.A, low[: lp.m], high[: lp.m]),
            bounds=Bounds(low[lp.m :], high[lp.m :]),
        ).status

    assert status(low, high) == 2
    for name, *_ in named[:2]:
        freed = [end.copy() for end in (low, high)]
        freed[0][line_of(lp, name)], freed[1][line_of(lp, name)] = -INF, INF
        assert status(*freed) == 0


def test_one_limit_that_cannot_be_kept():
    lp = model("minimize", {"x": 1}, {"r": (-INF, {"x": 1}, -2)}, {})
    assert page(examined(lp)).startswith(
        "model.csv: there is no plan\n"
        "No plan satisfies all limits together; this limit cannot be kept, as 1 amount cannot be "
        "below 0: r (at most -2).\n"
        "This was checked on the numbers of the file.\n"
        "It has to give way before there is anything to decide on.\n"
    )


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
    unknown = text.render(summary_report(found, proof=proved(found.head.model, found)))
    assert unknown.startswith("model.csv: a best plan is proved\n")


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
