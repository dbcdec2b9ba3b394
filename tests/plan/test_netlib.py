"""Rounded optimal plans of real models: both verdicts against fractions.

The models are those of ``tests/data/netlib``; the plans are the solver's, written to a few
digits after the decimal point.
"""

from __future__ import annotations

from fractions import Fraction
from functools import cache
from pathlib import Path

import pytest

from lpview.blocks import read_model
from lpview.planned import Multipliers, Standing
from tests.check.helpers import examined
from tests.plan import exact
from tests.plan.helpers import checked, verdicts

DATA = Path(__file__).parents[1] / "data" / "netlib"
MODELS = (
    *("adlittle", "afiro", "beaconfd", "blend", "israel"),
    *("recipe", "sc205", "scagr25", "share2b", "stocfor1"),
)
DIGITS = (2, 4, 6)


@cache
def answer(name):
    return examined(read_model(str(DATA / f"{name}.csv")).model)


def rounded(values, digits):
    return [f"{value:.{digits}f}" for value in values]


def plan_of(name, digits):
    found = answer(name).answer
    return [rounded(part, digits) for part in (found.x, found.y, found.z)]


@pytest.mark.parametrize("digits", DIGITS)
@pytest.mark.parametrize("name", MODELS)
def test_both_verdicts_on_every_condition_are_those_of_fractions(name, digits):
    lp = answer(name).head.model
    x, y, z = plan_of(name, digits)
    correct, _ = exact.residuals(lp, x, y, z)
    found = verdicts(lp, x, y, z)
    assert len(correct) == len(found.verdicts) == 5
    for verdict in found.verdicts:
        lines = correct[verdict.condition.value]
        for part, which in ((verdict.written, 0), (verdict.within, 1)):
            scaled = max(line[which] / max(1, line[2]) for line in lines)
            assert part.passed == (scaled <= Fraction(1, 10**9))
            assert part.scaled == pytest.approx(float(scaled), rel=1e-9, abs=1e-20)
            largest = max(line[which] for line in lines)
            assert part.absolute == pytest.approx(float(largest), rel=1e-9, abs=1e-15)


@pytest.mark.parametrize("name", MODELS)
def test_the_plan_alone_is_judged_alike(name):
    lp = answer(name).head.model
    x, y, z = plan_of(name, 2)
    alone, priced = (verdicts(lp, x, *prices).verdicts for prices in ((), (y, z)))
    assert alone[0] == priced[0]
    assert {verdict.standing for verdict in alone[1:]} == {Standing.NO_PRICES}


def test_some_of_these_verdicts_differ():
    """Guards the comparison above: rounding that breaks a plan, and that explains it."""
    seen = {
        (first.written.passed, first.within.passed)
        for name in MODELS
        for digits in DIGITS
        for first in [verdicts(answer(name).head.model, plan_of(name, digits)[0]).verdicts[0]]
    }
    assert (False, True) in seen and (True, True) in seen


@pytest.mark.parametrize("name", MODELS)
def test_an_optimal_plan_may_be_optimal_within_its_rounding(name):
    """The solver's plan is within the rounding of its own digits."""
    found = checked(answer(name).head.model, plan_of(name, 4)[0], outcome=answer(name))
    assert found.judgement.feasible_within
    assert found.against.could_be


@pytest.mark.parametrize("name", MODELS)
def test_the_solver_s_own_plan_to_the_last_digit_is_optimal(name):
    x = [repr(value) for value in answer(name).answer.x.tolist()]
    found = checked(answer(name).head.model, x, outcome=answer(name))
    assert found.passed and found.judgement.feasible
    assert found.against.multipliers is Multipliers.THOSE_FOUND
    assert found.against.distance == pytest.approx(0, abs=1e-9 * abs(found.against.optimum))
