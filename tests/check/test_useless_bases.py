"""Answers without a basis, or with one that fixes nothing, are checked all the same."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from lpview import exit_status
from lpview.answer import Basis, LineStatus
from lpview.outcomes import NoBasisRoute, Optimal
from lpview.polish import OwnNumbers
from tests.check.helpers import changed, examined
from tests.check.stubs import FEASIBLE, about_the_answer, status_of


def statuses(column, row):
    return Basis(np.array(column, np.int8), np.array(row, np.int8))


# x1, x2 and r1 are basic in truth.
BASES = {
    "none": None,
    "too many basic lines": statuses([1, 1], [1, 1, 1]),
    "no basic line": statuses([0, 0], [2, 2, 2]),
    "singular": statuses([1, 0], [1, 2, 1]),  # x1 has no coefficient in r2
    "codes that mean nothing": statuses([7, -3], [9, 99, -128]),
}


@pytest.mark.parametrize("name", BASES)
@pytest.mark.parametrize("size", [0.0, 1e-8])
def test_an_answer_with_a_useless_basis(name, size, tmp_path, monkeypatch):
    lying = about_the_answer(
        lambda answer: replace(changed(answer, x={0: 2 + size}), basis=BASES[name])
    )
    found = examined(FEASIBLE, lying)
    assert isinstance(found, Optimal)
    assert isinstance(found.basis_route, NoBasisRoute)
    assert found.passed is (size == 0)
    assert found.origin == OwnNumbers()
    code, report = status_of(FEASIBLE, lying, tmp_path, monkeypatch)
    assert code == (exit_status.FAILED if size else exit_status.DONE)
    assert report["answer"]["basis"] is (name != "none")
    assert report["answer"]["prices_from_basis"]["done"] is False


@pytest.mark.parametrize("status", [LineStatus.UPPER, LineStatus.FREE])
def test_a_basis_at_bounds_that_do_not_exist(status):
    """x1 and x2 are nonbasic "at" an infinite upper bound, all rows basic."""
    basis = statuses([status, status], [1, 1, 1])
    lying = about_the_answer(lambda answer: replace(changed(answer, x={0: 2 + 1e-8}), basis=basis))
    found = examined(FEASIBLE, lying)
    assert not found.passed
    assert np.isfinite(found.answer.x).all()
