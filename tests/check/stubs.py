"""Solvers that lie, and what the command makes of them."""

from __future__ import annotations

import json
from dataclasses import replace

from lpview import cli
from lpview.run import Solved
from lpview.solver import solve
from tests.check.helpers import written
from tests.check.small_models import MODELS

FEASIBLE = MODELS["doors"].lp


def about_the_answer(change):
    """A solver that changes the answer of the model and is honest about any other."""

    def lying(lp, settings, watch):
        result = solve(lp, settings, watch)
        if lp.rows != FEASIBLE.rows or lp.columns != FEASIBLE.columns:
            return result
        assert isinstance(result, Solved)
        return replace(result, answer=change(result.answer))

    return lying


def once(result):
    """A solver that gives ``result`` first and is honest afterwards."""
    left = [result]

    def lying(lp, settings, watch):
        return left.pop() if left else solve(lp, settings, watch)

    return lying


def always(result_for):
    def lying(lp, settings, watch):
        return result_for(lp)

    return lying


def status_of(lp, solver, folder, monkeypatch, *options):
    """Exit status and JSON report of the command, with the solver in HiGHS's place."""
    monkeypatch.setattr("lpview.solver.solve", solver)
    report = folder / "report.json"
    path = written(lp, folder)
    words = ["check", str(path), "--format", "json", "--output", str(report), *options]
    return cli.main(words), json.loads(report.read_text("utf-8"))
