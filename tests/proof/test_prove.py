"""Proofs against published answers and against the exact simplex; each is checked again."""

from __future__ import annotations

import tomllib
from dataclasses import replace
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from lpview.answer import Basis, LineStatus
from lpview.blocks import read_model
from lpview.proof.prove import prove
from lpview.proof.results import NotProved, ProvedOptimal
from lpview.run import Claim, Solved, SolveSettings
from tests.check.helpers import unsolved
from tests.prices.draws import any_models, models_with_optimum
from tests.proof.fooling import basis
from tests.proof.test_prove_check import (
    DOORS,
    ENDLESS,
    PATIENCE,
    SHORT,
    ask,
    exactly,
    faults,
    fractions,
    giving_up,
    interval_faults,
    proved,
    said,
    solver_basis,
    truth,
)
from tests.strategies import linear_programs

FOLDER = Path(__file__).parents[1] / "data" / "textbook"
CASES = tomllib.loads((FOLDER / "cases.toml").read_text("utf-8"))["case"]


def expected(case) -> Fraction | str:
    """What a textbook case comes to; ``cases.toml`` names the source of each."""
    return Fraction(case["objective"]) if case["status"] == "optimal" else case["status"]


def stated(table, names) -> list[Fraction]:
    return [Fraction(table.get(name, "0")) for name in names]


@pytest.mark.parametrize("case", CASES, ids=lambda case: case["id"])
def test_a_textbook_case(case):
    lp = read_model(FOLDER / case["file"]).model
    proof = proved(lp)
    assert said(proof) == expected(case)
    assert faults(lp, proof) == []
    if case.get("x_unique"):
        assert fractions(proof.x) == stated(case["x"], lp.columns)
    if case.get("y_unique"):
        assert fractions(proof.y) == stated(case["y"], lp.rows)


def resting(lp) -> Basis:
    """All rows basic; every column rests at an end that it has, or at 0."""
    column = np.full(lp.n, LineStatus.FREE)
    column[np.isfinite(lp.upper)] = LineStatus.UPPER
    column[np.isfinite(lp.lower)] = LineStatus.LOWER
    return Basis(column.astype(np.int8), np.full(lp.m, LineStatus.BASIC, np.int8))


def violations_at_rest(lp) -> tuple[Fraction, Fraction]:
    """Largest violation and largest wrong price of `resting`, whose prices are the costs."""
    exact, column = exactly(lp), resting(lp).column.tolist()
    x, wrong = [], [Fraction(0)]
    for status, cost, (low, high) in zip(column, exact.c, exact.ends[lp.m :], strict=True):
        x.append({LineStatus.LOWER: low, LineStatus.UPPER: high}.get(status, Fraction(0)))
        signs = {LineStatus.LOWER: (1,), LineStatus.UPPER: (-1,)}.get(status, ())
        if low != high and cost and exact.sign * (1 if cost > 0 else -1) not in signs:
            wrong.append(abs(cost))
    outside = [
        max(low - value, value - high, Fraction(0))
        for value, (low, high) in zip(exact.values(x), exact.ends, strict=True)
    ]
    return max(outside, default=Fraction(0)), max(wrong)


@given(models_with_optimum())
def test_a_model_with_an_optimum(lp):
    proof = proved(lp)
    assert isinstance(proof, ProvedOptimal)
    assert proof.objective == truth(lp)
    assert faults(lp, proof) == []


@given(any_models())
def test_any_model(lp):
    proof = proved(lp)
    assert said(proof) == truth(lp)
    assert faults(lp, proof) == []


@given(linear_programs(max_rows=4, max_columns=4, nasty_names=False))
def test_a_model_with_numbers_that_no_double_holds(lp):
    proof = proved(lp)
    if isinstance(proof, NotProved) and defeats_doubles(lp):
        assert interval_faults(proof, truth(lp)) == []
    else:
        assert said(proof) == truth(lp)
        assert faults(lp, proof) == []


def defeats_doubles(lp) -> bool:
    """Whether a solver may lose the way: coefficients of 1e19 beside 1, or a model that has an
    optimum, or a plan, only as long as its numbers are not rounded."""
    rounded = truth(replace(lp, odd={}))
    large = np.abs(lp.A.data).max(initial=0.0) > 1e15
    return bool(large) or kind(rounded) != kind(truth(lp))


def kind(value: Fraction | str) -> str:
    return value if isinstance(value, str) else "optimal"


@given(models_with_optimum())
def test_a_proof_from_a_basis_far_from_optimal(lp):
    proof = proved(lp, resting(lp))
    assert said(proof) == truth(lp)
    assert faults(lp, proof) == []
    effort = proof.effort
    assert (effort.primal_violation, effort.dual_violation) == violations_at_rest(lp)
    assert (effort.steps == 1) == (violations_at_rest(lp) == (0, 0))


@settings(max_examples=50)
@given(any_models(), st.data())
def test_a_proof_from_any_basis_at_all(lp, data):
    nonbasic = st.sampled_from([LineStatus.LOWER, LineStatus.UPPER, LineStatus.FREE])
    rest = data.draw(st.lists(nonbasic, min_size=lp.n, max_size=lp.n))
    drawn = data.draw(st.permutations([*rest, *[LineStatus.BASIC] * lp.m]))
    proof = proved(lp, basis(drawn[: lp.n], drawn[lp.n :]))
    assert said(proof) == truth(lp)
    assert faults(lp, proof) == []


def test_effort_of_a_basis_that_is_optimal_at_once():
    effort = proved(DOORS, solver_basis(DOORS)).effort
    assert (effort.steps, effort.primal_violation, effort.dual_violation) == (1, 0, 0)
    assert effort.bits == 3  # of the 6 among x = (2, 6) / 1 and y = (0, 3, 2) / 2
    assert 0 <= effort.seconds < 60


@pytest.mark.parametrize("lp", [DOORS, SHORT, ENDLESS], ids=["optimal", "infeasible", "unbounded"])
@pytest.mark.parametrize("claim", [Claim.INFEASIBLE, Claim.UNBOUNDED, Claim.UNKNOWN])
def test_a_claim_alone_proves_nothing(lp, claim):
    proof = proved(lp, None, lambda *_: unsolved(claim))
    assert said(proof).startswith("not proved")
    assert interval_faults(proof, truth(lp)) == []


@pytest.mark.parametrize("lp", [DOORS, SHORT, ENDLESS], ids=["optimal", "infeasible", "unbounded"])
def test_a_solver_that_never_leaves_a_basis_ends_the_proof(lp):
    def lazy(asked, settings):
        result = ask(asked, settings)
        if not isinstance(result, Solved):
            return result
        return replace(result, answer=replace(result.answer, basis=resting(asked)))

    proof = proved(lp, resting(lp), lazy)
    assert said(proof).startswith("not proved")
    assert interval_faults(proof, truth(lp)) == []


def test_the_solver_is_asked_for_a_basis_whatever_the_method():
    asked = []

    def note(lp, wanted):
        asked.append(wanted.method.value)
        return ask(lp, wanted)

    wanted = SolveSettings(crossover=False, iteration_limit=0)
    assert said(prove(DOORS, None, note, wanted, giving_up(PATIENCE))) == 36
    assert asked == ["simplex"]


@given(models_with_optimum(), st.data())
def test_reported_dual_values_bound_the_optimum_where_nothing_else_was_worked_out(lp, data):
    prices = st.sampled_from([0.0, 0.1, 1.0, -1.0, 0.5, -2.0, 1e-300, 1e300])
    guess = np.array(data.draw(st.lists(prices, min_size=lp.m, max_size=lp.m)))
    proof = prove(lp, None, ask, SolveSettings(), giving_up(0), guess)
    assert interval_faults(proof, truth(lp)) == []
    assert not proof.has_plan


def test_the_optimal_dual_values_bound_the_optimum_by_itself():
    proof = prove(DOORS, None, ask, SolveSettings(), giving_up(0), np.array([0.0, 1.5, 1.0]))
    assert (proof.lower, proof.upper) == (None, 36)
