"""A solver that lies is caught: every outcome, through the library and the command."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest

from lpview import cli, exit_status
from lpview.answer import Basis
from lpview.kkt import Condition
from lpview.outcomes import NoOptimum, NotEstablished, Optimal, SecondRoute, Stopped
from lpview.polish import OwnNumbers, Polished
from lpview.repair.search import Infeasible, Unbounded
from lpview.run import Claim
from lpview.solver import solve
from tests.check.helpers import (
    changed,
    correct,
    examined,
    failing,
    line_of,
    solved,
    unsolved,
    written,
)
from tests.check.small_models import MODELS
from tests.check.stubs import FEASIBLE, about_the_answer, always, once, status_of
from tests.dual.models import INF, model

PRIMAL, DUAL = Condition.PRIMAL, Condition.DUAL
STATIONARITY, PRODUCT, GAP = Condition.STATIONARITY, Condition.COMPLEMENTARITY, Condition.GAP

INFEASIBLE = model(
    "minimize", {"v": 1}, {"low": (3, {"v": 1}, INF), "high": (-INF, {"v": 1}, 2)}, {}
)
UNBOUNDED = model("maximize", {"v": 1, "w": 1}, {"r": (-INF, {"v": 1, "w": -1}, 2)}, {})


WRONG_ANSWERS = {
    "dual value too large": ({"y": {2: 1.5}}, {GAP, STATIONARITY}),
    "dual value of the wrong sign": ({"y": {1: -1.5}}, {DUAL, GAP, STATIONARITY}),
    "dual value left out": ({"y": {2: 0.0}}, {DUAL, GAP, STATIONARITY}),
    "reduced cost": ({"z": {0: 0.25}}, {STATIONARITY}),
    "reduced cost, slightly": ({"z": {0: 2e-9 * 3}}, {STATIONARITY}),
    "reduced cost, within rounding": ({"z": {0: 1e-7}}, {STATIONARITY}),
    "infeasible plan": ({"x": {0: 3.0}}, {PRIMAL, PRODUCT, GAP}),
    "plan that is not optimal": ({"x": {0: 1.0}}, {PRODUCT, GAP}),
    "negative value": ({"x": {0: -1.0}}, {PRIMAL, PRODUCT, GAP}),
    "value nan": ({"x": {0: math.nan}}, {PRIMAL, GAP}),
    "value infinite": ({"x": {0: math.inf}}, {PRIMAL, GAP}),
    "dual value nan": ({"y": {2: math.nan}}, {GAP, STATIONARITY}),
    "dual value infinite": ({"y": {2: math.inf}}, {STATIONARITY, GAP}),
    "reduced cost nan": ({"z": {1: math.nan}}, {STATIONARITY}),
    "dual value beyond rounding": ({"y": {2: 1.0 + 1e-7}}, {STATIONARITY}),
}


@pytest.mark.parametrize("name", WRONG_ANSWERS)
def test_a_wrong_answer_fails(name, tmp_path, monkeypatch):
    changes, expected = WRONG_ANSWERS[name]
    lying = about_the_answer(lambda answer: changed(answer, **changes))
    found = examined(FEASIBLE, lying)
    assert isinstance(found, Optimal)
    assert not found.passed
    assert failing(found) >= expected
    code, report = status_of(FEASIBLE, lying, tmp_path, monkeypatch)
    assert code == exit_status.FAILED
    assert (report["status"], report["passed"]) == ("optimal", False)
    failed = {r["condition"] for r in report["residuals"] if r["passed"] is False}
    assert {condition.value for condition in expected} <= failed


@pytest.mark.parametrize("size", [1e-8, 1e-7, 9e-7, 1e-5, 1e-3])
def test_a_wrong_price_is_never_polished_into_passing(size):
    """Its basis does not have these prices, however close they are."""
    lying = about_the_answer(lambda answer: changed(answer, y={2: answer.y[2] + size}))
    found = examined(FEASIBLE, lying)
    assert not found.passed
    assert found.origin == OwnNumbers()
    assert found.answer.y[2] == 1 + size


@pytest.mark.parametrize("size", [2e-6, 1e-5, 1e-3, 1])
def test_a_wrong_plan_is_never_polished_into_passing(size):
    lying = about_the_answer(lambda answer: changed(answer, x={0: answer.x[0] + 18 * size}))
    found = examined(FEASIBLE, lying)
    assert not found.passed
    assert found.origin == OwnNumbers()
    assert found.answer.x[0] == 2 + 18 * size


def test_a_wrong_basis_does_not_polish_a_good_answer_away():
    """The rounded answer stays, since the basis named does not have its prices."""
    wrong = Basis(np.array([0, 1], np.int8), np.array([1, 2, 1], np.int8))
    lying = about_the_answer(lambda answer: replace(changed(answer, x={0: 2 + 1e-8}), basis=wrong))
    found = examined(FEASIBLE, lying)
    assert found.origin == OwnNumbers()
    assert not found.passed
    assert found.basis_route.difference.beyond


def test_rounding_is_taken_out_and_said():
    lying = about_the_answer(lambda answer: changed(answer, x={0: 2 + 6e-8}))
    found = examined(FEASIBLE, lying)
    assert found.passed
    assert found.answer.x.tolist() == [2, 6]
    # r3 was over by 18e-8 of 18.
    assert isinstance(found.origin, Polished)
    assert found.origin.scaled == pytest.approx(1e-8, rel=1e-6)


def test_a_good_answer_is_left_as_it_is():
    found = examined(FEASIBLE)
    assert found.passed
    assert found.origin == OwnNumbers()
    assert (found.answer.x == correct(FEASIBLE).x).all()


def test_reduced_costs_are_compared_even_when_the_plan_is_polished():
    lying = about_the_answer(lambda answer: changed(answer, x={0: 2 + 6e-8}, z={1: 2e-8}))
    found = examined(FEASIBLE, lying)
    assert failing(found) == {STATIONARITY}
    assert found.answer.z[1] == 2e-8


@pytest.mark.parametrize("value", [2.0, 2.5, 3.0, 1e9])
def test_optimal_for_an_infeasible_model(value, tmp_path, monkeypatch):
    def lying(lp, settings, watch):
        if lp.n != 1:
            return solve(lp, settings, watch)
        return solved([value], [1, 0], [0])

    found = examined(INFEASIBLE, lying)
    assert isinstance(found, Optimal)
    assert failing(found) >= {PRIMAL}
    code, report = status_of(INFEASIBLE, lying, tmp_path, monkeypatch)
    assert (code, report["passed"]) == (exit_status.FAILED, False)


def test_optimal_for_an_unbounded_model(tmp_path, monkeypatch):
    lying = once(solved([2, 0], [1], [0, 2]))
    found = examined(UNBOUNDED, lying)
    assert failing(found) >= {DUAL}
    assert found.verdicts[1].worst == line_of(UNBOUNDED, "w")
    code, _ = status_of(UNBOUNDED, once(solved([2, 0], [1], [0, 2])), tmp_path, monkeypatch)
    assert code == exit_status.FAILED


CLAIMS = [Claim.INFEASIBLE, Claim.UNBOUNDED, Claim.INFEASIBLE_OR_UNBOUNDED, Claim.UNKNOWN]


@pytest.mark.parametrize("claim", CLAIMS)
@pytest.mark.parametrize("name", MODELS)
def test_no_optimum_claimed_where_there_is_one(claim, name):
    found = examined(MODELS[name].lp, once(unsolved(claim)))
    assert isinstance(found, NotEstablished)
    assert "a feasible plan exists" in found.reason


@pytest.mark.parametrize("claim", CLAIMS)
def test_no_optimum_claimed_where_there_is_one_at_the_command(claim, tmp_path, monkeypatch):
    code, report = status_of(FEASIBLE, once(unsolved(claim)), tmp_path, monkeypatch)
    assert code == exit_status.NOT_ESTABLISHED
    assert (report["status"], report["passed"]) == ("not established", None)
    assert (report["certificate"], report["objective"]) == (None, None)
    assert report["settings"]["claim"] == claim.value


@pytest.mark.parametrize("claim", CLAIMS)
def test_the_certificate_decides_and_not_the_claim(claim, tmp_path, monkeypatch):
    found = examined(INFEASIBLE, once(unsolved(claim)))
    assert isinstance(found, NoOptimum)
    assert isinstance(found.certificate, Infeasible)
    assert found.certificate.dual_infeasible is False
    found = examined(UNBOUNDED, once(unsolved(claim)))
    assert isinstance(found, NoOptimum)
    assert isinstance(found.certificate, Unbounded)
    code, report = status_of(INFEASIBLE, once(unsolved(claim)), tmp_path, monkeypatch)
    assert (code, report["status"], report["passed"]) == (
        exit_status.NO_OPTIMUM,
        "infeasible",
        None,
    )
    code, report = status_of(UNBOUNDED, once(unsolved(claim)), tmp_path, monkeypatch)
    assert (code, report["status"], report["passed"]) == (exit_status.NO_OPTIMUM, "unbounded", None)


@pytest.mark.parametrize("claim", CLAIMS)
@pytest.mark.parametrize("lp", [FEASIBLE, INFEASIBLE, UNBOUNDED])
def test_a_solver_that_fails_at_everything_establishes_nothing(claim, lp):
    found = examined(lp, always(lambda _: unsolved(claim)))
    assert isinstance(found, NotEstablished)
    assert claim.value in found.reason


@pytest.mark.parametrize("value", [0.0, 1.0, -1.0, 1e12, math.nan, math.inf])
@pytest.mark.parametrize("name", MODELS)
def test_garbage_certificates_are_refused(value, name):
    """The claim is false and the auxiliary models are answered with garbage too."""

    def lying(lp):
        vectors = [np.full(size, value) for size in (lp.n, lp.m, lp.n)]
        return unsolved(Claim.INFEASIBLE) if lp is MODELS[name].lp else solved(*vectors)

    found = examined(MODELS[name].lp, always(lying))
    assert isinstance(found, NotEstablished)


def test_a_row_with_a_tiny_coefficient_is_not_proved_infeasible():
    """`1e-10 v >= 1` holds at v = 1e10, whatever multipliers are offered."""
    lp = model("minimize", {"v": 1}, {"r": (1, {"v": 1e-10}, INF)}, {})

    def lying(part):
        if part is lp:
            return unsolved(Claim.INFEASIBLE)
        return solved(np.zeros(part.n), np.ones(part.m), np.zeros(part.n))

    assert isinstance(examined(lp, always(lying)), NotEstablished)


def test_a_row_with_a_tiny_coefficient_is_not_proved_unbounded():
    """`1e-10 v <= 1` ends at v = 1e10, whatever ray is offered."""
    lp = model("maximize", {"v": 1}, {"r": (-INF, {"v": 1e-10}, 1)}, {})

    def lying(part):
        if part is lp:
            return unsolved(Claim.UNBOUNDED)
        plan = np.ones(part.n) if part.n == lp.n else np.zeros(part.n)
        return solved(plan, np.zeros(part.m), np.zeros(part.n))

    assert isinstance(examined(lp, always(lying)), NotEstablished)


STOPS = [Claim.TIME_LIMIT, Claim.ITERATION_LIMIT, Claim.INTERRUPTED]


@pytest.mark.parametrize("claim", STOPS)
def test_a_stop_is_a_stop(claim, tmp_path, monkeypatch):
    assert isinstance(examined(INFEASIBLE, once(unsolved(claim))), Stopped)
    code, report = status_of(INFEASIBLE, once(unsolved(claim)), tmp_path, monkeypatch)
    assert (code, report["status"]) == (exit_status.NOT_ESTABLISHED, "stopped")


def test_a_lie_about_the_dual_does_not_touch_the_verdict():
    def lying(lp, settings, watch):
        result = solve(lp, settings, watch)
        if lp.rows == FEASIBLE.rows:
            return result
        return replace(result, answer=changed(result.answer, x={0: 5.0}, y={0: 99.0}))

    found = examined(FEASIBLE, lying, second_route=SecondRoute.ALWAYS)
    assert found.passed
    assert found.dual_route.agrees is False
    assert examined(FEASIBLE, second_route=SecondRoute.ALWAYS).dual_route.agrees is True


@pytest.mark.parametrize("form", ["text", "markdown", "json"])
@pytest.mark.parametrize("value", [math.nan, math.inf])
@pytest.mark.parametrize("part", ["x", "y", "z"])
def test_every_format_can_say_what_is_no_number(form, value, part, tmp_path, monkeypatch):
    lying = about_the_answer(lambda answer: changed(answer, **{part: {1: value}}))
    monkeypatch.setattr("lpview.solver.solve", lying)
    report = tmp_path / "report"
    words = ["check", str(written(FEASIBLE, tmp_path)), "--format", form, "--output", str(report)]
    assert cli.main(words) == exit_status.FAILED
    text = report.read_text("utf-8")
    assert "nan" in text or str(value) in text  # a difference of infinities is nan
