"""Answers of rescaled models are those of the model as given."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from lpview.run import Solved
from lpview.scaling import scaling_for
from lpview.solver import LIMITS, solve
from tests.check.helpers import correct, verdicts
from tests.check.small_models import MODELS


def scaled_twin(lp, row, column, cost):
    """The model in other units: rows, columns and objective by powers of two."""
    A = lp.A.copy()
    rows = np.repeat(np.arange(lp.m), np.diff(A.indptr))
    A.data = A.data * 2.0 ** (row[rows] + column[A.indices])
    return replace(
        lp,
        c=lp.c * 2.0 ** (column + cost),
        A=A,
        row_lower=lp.row_lower * 2.0**row,
        row_upper=lp.row_upper * 2.0**row,
        lower=lp.lower / 2.0**column,
        upper=lp.upper / 2.0**column,
        offset=lp.offset * 2.0**cost,
    )


@pytest.mark.parametrize("name", MODELS)
@pytest.mark.parametrize("power", [-45, 60])
def test_results_are_carried_back_through_the_scaling(name, power):
    """Rows so small or large that they are rescaled give the answer of the model."""
    case = MODELS[name]
    lp = case.lp
    row = np.full(lp.m, power)
    twin = scaled_twin(lp, row, np.zeros(lp.n, int), 0)
    result = solve(twin)
    assert isinstance(result, Solved)
    assert result.run.rescaled
    own = correct(lp)
    assert result.answer.x.tolist() == own.x.tolist()
    y, z = result.answer.y * 2.0**row, result.answer.z
    assert all(v.passed for v in verdicts(lp, result.answer.x, y, z).values())
    assert result.answer.basis.column.tolist() == own.basis.column.tolist()


@pytest.mark.parametrize("name", MODELS)
@pytest.mark.parametrize("cost", [70, 90])
def test_costs_are_carried_back_through_the_scaling(name, cost):
    lp = MODELS[name].lp
    twin = scaled_twin(lp, np.zeros(lp.m, int), np.zeros(lp.n, int), cost)
    result, own = solve(twin), correct(lp)
    assert isinstance(result, Solved)
    assert result.run.rescaled
    assert result.answer.x.tolist() == own.x.tolist()
    assert (result.answer.y / 2.0**cost).tolist() == own.y.tolist()
    assert (result.answer.z / 2.0**cost).tolist() == own.z.tolist()


@pytest.mark.parametrize("name", ["ranges", "debts"])
def test_bounds_are_carried_back_through_the_scaling(name):
    """Columns counted in units so small that their bounds reach beyond 1e20."""
    lp = MODELS[name].lp
    column = np.full(lp.n, -70)
    twin = scaled_twin(lp, np.zeros(lp.m, int), column, 0)
    result, own = solve(twin), correct(lp)
    assert isinstance(result, Solved)
    assert result.run.rescaled
    assert (result.answer.x * 2.0**-70).tolist() == own.x.tolist()
    assert (result.answer.z * 2.0**70).tolist() == pytest.approx(
        (lp.c - lp.A.T @ result.answer.y).tolist()
    )


def test_a_model_within_the_limits_is_passed_on_as_it_is():
    for case in MODELS.values():
        scaling = scaling_for(case.lp, LIMITS)
        assert scaling.is_none
        assert scaling.apply(case.lp) is case.lp
        assert not solve(case.lp).run.rescaled
