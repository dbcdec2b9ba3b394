"""Every textbook case, solved and examined: status, objective, plan, prices, slacks."""

from __future__ import annotations

import math
import tomllib
from fractions import Fraction
from pathlib import Path

import numpy as np
import pytest

from lpview.blocks import read_model
from lpview.outcomes import NoOptimum, Optimal, SecondRoute
from lpview.repair.certificate import check_farkas, check_ray
from lpview.repair.search import Infeasible, Unbounded
from tests.check.helpers import examined

FOLDER = Path(__file__).parents[1] / "data" / "textbook"
CASES = tomllib.loads((FOLDER / "cases.toml").read_text("utf-8"))["case"]


def having(status):
    return [pytest.param(case, id=case["id"]) for case in CASES if case["status"] == status]


def found_for(case, kind):
    lp = read_model(FOLDER / case["file"]).model
    found = examined(lp, second_route=SecondRoute.ALWAYS)
    assert isinstance(found, kind)
    return lp, found


def near(value):
    return pytest.approx(value, rel=1e-9, abs=1e-9)


def assert_stated(names, values, stated, intervals):
    """Values as stated, or within the interval of all optima where there are several."""
    for name, value in zip(names, values, strict=True):
        if name in intervals:
            low, high = (
                float(Fraction(t)) if "inf" not in t else float(t) for t in intervals[name]
            )
            slip = 1e-9 * max([1, *(abs(end) for end in (low, high) if math.isfinite(end))])
            assert low - slip <= value <= high + slip, name
        else:
            assert value == near(float(Fraction(stated.get(name, "0")))), name


@pytest.mark.parametrize("case", having("optimal"))
def test_optimum(case):
    lp, found = found_for(case, Optimal)
    assert found.passed
    objective = near(float(Fraction(case["objective"])))
    assert found.measurement.primal_objective == objective
    assert found.measurement.dual_objective == objective
    assert_stated(lp.columns, found.answer.x, case["x"], case.get("x_interval", {}))
    assert_stated(lp.rows, found.answer.y, case["y"], case.get("y_interval", {}))


@pytest.mark.parametrize("case", having("optimal"))
def test_slacks_and_reduced_costs(case):
    lp, found = found_for(case, Optimal)
    if case["x_unique"]:
        slack = dict(zip(lp.rows, found.measurement.rows.slack, strict=True))
        for row, stated in case["row_slacks"].items():
            assert slack[row] == near(float(Fraction(stated)))
    intervals = case.get("reduced_cost_interval", {})
    stated = case["reduced_costs"] | dict.fromkeys(intervals, "0")
    places = [k for k, column in enumerate(lp.columns) if column in stated]
    for reduced in (found.answer.z, found.measurement.columns.price):
        assert_stated([lp.columns[k] for k in places], reduced[places], stated, intervals)


@pytest.mark.parametrize("case", having("optimal"))
def test_prices_by_two_more_routes(case):
    """From the basis, and from the dual solved as a model of its own."""
    _, found = found_for(case, Optimal)
    assert found.basis_route.difference.beyond == 0
    assert found.dual_route.agrees
    assert found.dual_route.objective == near(float(Fraction(case["objective"])))
    if case["y_unique"]:
        assert found.dual_route.difference.largest == near(0)


@pytest.mark.parametrize("case", having("infeasible"))
def test_infeasible(case):
    lp = read_model(FOLDER / case["file"]).model
    contradictions = []
    for certificate in case["certificates"]:
        y = [-float(Fraction(certificate["rows"].get(row, "0"))) for row in lp.rows]
        contradictions.append(check_farkas(lp, np.array(y), 1e-9).contradiction)
    if max(contradictions) <= 1e-9:
        # Infeasible exactly, but feasible within the tolerance, and said to be so.
        found = examined(lp)
        assert isinstance(found, Optimal)
        assert found.passed
        assert 0 < found.verdicts[0].absolute <= 1e-9
        return
    _, found = found_for(case, NoOptimum)
    assert isinstance(found.certificate, Infeasible)
    assert found.certificate.farkas.contradiction > 1e-3
    assert found.certificate.dual_infeasible is case["dual_infeasible"]


@pytest.mark.parametrize("case", having("unbounded"))
def test_unbounded(case):
    lp, found = found_for(case, NoOptimum)
    assert isinstance(found.certificate, Unbounded)
    ray = found.certificate.ray
    assert math.copysign(1, ray.rate) == math.copysign(1, Fraction(case["rate"]))
    assert check_ray(lp, ray.x, ray.direction, 1e-12).accepted


def test_there_are_cases_of_every_status():
    assert len(having("optimal")) >= 25
    assert len(having("infeasible")) >= 4
    assert len(having("unbounded")) >= 3
