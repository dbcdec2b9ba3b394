"""Whole numbers on the page: what is ignored or kept stands before anything else."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import Bounds, LinearConstraint, milp

from lpview import cli
from lpview.integers import relaxed
from lpview.mps import read_mps
from lpview.outcomes import Stopped
from lpview.reading import InPlace, Scope
from lpview.report import text
from lpview.report.summary import summary_report
from lpview.run import Claim
from tests.check.helpers import examined
from tests.dual.models import INF, model
from tests.labels.models import labelled, labelled_glasshouse, labelled_mixture
from tests.summary.pages import page, proved

MPS = Path(__file__).parents[1] / "data" / "mps"

RELAXED = Scope(InPlace.RELAXED, 2)
FIXED = Scope(InPlace.FIXED, 2, "plan.csv")
IGNORED = "The model asks for whole numbers in 2 columns; this page ignores that."
HELD = "2 columns were held at the whole numbers of plan.csv"


def scoped(lp, scope):
    return labelled(examined(lp), {}, scope=scope)


@pytest.mark.parametrize(
    ("found", "bound"),
    [
        (labelled_mixture(scope=RELAXED), "costs at least 25 EUR"),
        (labelled_mixture("maximize", scope=RELAXED), "loses at least 25 EUR"),
        (labelled_glasshouse(scope=RELAXED), "earns at most 480 EUR"),
        (labelled_glasshouse("minimize", scope=RELAXED), "brings in at most 480 EUR"),
    ],
)
def test_the_relaxation_is_told_before_its_plan(found, bound):
    lines = page(found).splitlines()
    assert lines[0].endswith(": whole numbers aside, the best plan was found and verified")
    assert lines[1] == f"{IGNORED} A plan in whole numbers {bound}."


@pytest.mark.parametrize(
    ("sense", "cost", "words"),
    [
        # 2/3 and -2/3, rounded so that the sentence stays true.
        ("minimize", 1, "at least 0.666666"),
        ("minimize", -1, "at least -0.666667"),
        ("maximize", 1, "at most 0.666667"),
        ("maximize", -1, "at most -0.666666"),
    ],
)
def test_the_bound_is_rounded_so_that_it_stays_true(sense, cost, words):
    lp = model(sense, {"x": cost}, {"r": (2 / 3, {"x": 1}, 2 / 3)}, {})
    found = examined(lp)
    head = replace(found.head, notes=replace(found.head.notes, scope=Scope(InPlace.RELAXED, 1)))
    said = "The model asks for whole numbers in 1 column; this page ignores that. A plan in whole"
    assert f"{said} numbers has an objective of {words}.\n" in page(replace(found, head=head))


def test_the_bound_of_a_real_model_holds_for_its_whole_numbers(capsys):
    """small_mip.mps; the best plan in whole numbers is found here by scipy."""
    assert cli.main(["check", str(MPS / "small_mip.mps"), "--relax", "--summary"]) == 0
    said = capsys.readouterr().out.replace("\n  ", " ")
    assert (
        f"{IGNORED} A plan in whole numbers has an objective of at least 3.23684.\n"
        "The best plan found reaches an objective of 3.23684; lower is better.\n"
    ) in said
    reading = read_mps(MPS / "small_mip.mps")
    lp, whole = reading.model, np.zeros(reading.model.n)
    whole[list(reading.integers)] = 1
    best = milp(
        lp.c,
        integrality=whole,
        constraints=LinearConstraint(lp.A, lp.row_lower, lp.row_upper),
        bounds=Bounds(lp.lower, lp.upper),
    )
    assert best.status == 0 and best.fun + lp.offset >= 3.23684
    assert relaxed(reading).notes.scope == RELAXED


def test_whole_numbers_of_a_plan_are_told_before_anything_else():
    lines = page(labelled_mixture(scope=FIXED)).splitlines()
    assert lines[0].endswith(": with these whole numbers, the best plan was found and verified")
    assert lines[1] == f"{HELD}; another choice may be better."
    one = page(labelled_mixture(scope=replace(FIXED, columns=1))).splitlines()
    assert one[1].startswith("1 column was held at the whole numbers of plan.csv;")


def test_no_plan_with_and_without_whole_numbers():
    lp = model("minimize", {"x": 1}, {"r": (5, {"x": 1}, INF), "s": (-INF, {"x": 1}, 3)}, {})
    for proof in (None, proved(lp)):
        held = text.render(summary_report(scoped(lp, FIXED), proof=proof)).splitlines()
        assert held[0].endswith(": there is no plan with these whole numbers")
        assert held[1] == f"{HELD}; another choice may have a plan."
        aside = text.render(summary_report(scoped(lp, RELAXED), proof=proof)).splitlines()
        assert aside[0].endswith("): there is no plan")
        assert aside[1] == f"{IGNORED[:-1]}, and still there is no plan."


def test_other_outcomes_with_whole_numbers():
    lp = model("maximize", {"x": 1}, {"r": (0, {"x": 1}, INF)}, {})
    for scope, words in ((RELAXED, IGNORED), (FIXED, f"{HELD}.")):
        unbounded = scoped(lp, scope)
        assert page(unbounded).splitlines()[1] == words
        head = replace(unbounded.head, run=replace(unbounded.head.run, claim=Claim.TIME_LIMIT))
        assert text.render(summary_report(Stopped(head))).splitlines()[1] == words


def test_a_proof_with_whole_numbers():
    found = labelled_glasshouse(scope=RELAXED)
    lines = page(found, proved(found.head.model, found)).splitlines()
    assert lines[0].endswith(": whole numbers aside, the best plan is proved")
    assert lines[1] == f"{IGNORED} A plan in whole numbers earns at most 480 EUR."


def test_words_of_a_scope():
    assert RELAXED.words == "linear relaxation: 2 integer columns taken as continuous"
    assert replace(FIXED, columns=1).words == (
        "1 integer column fixed at the values of plan.csv; prices hold only for these integer "
        "values"
    )
