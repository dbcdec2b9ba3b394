"""What the tests of the check share: readings, requests, verdicts by name."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path

import numpy as np

from lpview.answer import Answer
from lpview.blocks import write_blocks
from lpview.examination import examine
from lpview.kkt import measure
from lpview.outcomes import Request, SecondRoute
from lpview.reading import Notes, Reading
from lpview.run import Claim, Solved, SolverRun, Unsolved
from lpview.solver import solve
from lpview.verdict import judge

TOLERANCE = 1e-9


def reading(lp):
    return Reading(lp, Notes(0, 0, (), (), {}))


def request(**changes):
    wanted = {"second_route": SecondRoute.NEVER, **changes}
    return Request(source="model.csv", command="lpview check model.csv", **wanted)


def examined(lp, solver=solve, **changes):
    return examine(reading(lp), request(**changes), solver)


def verdicts(lp, x, y, z=None, tolerance=TOLERANCE):
    """Verdicts of an answer, by condition."""
    vectors = [None if part is None else np.array(part, float) for part in (x, y, z)]
    found = judge(measure(lp, *vectors), tolerance)
    return {verdict.condition: verdict for verdict in found}


def failing(found):
    """Conditions that an examination fails."""
    return {verdict.condition for verdict in found.verdicts if verdict.passed is False}


def line_of(lp, name):
    """Number of the line with this name, which is a row's or a column's."""
    return lp.rows.index(name) if name in lp.rows else lp.m + lp.columns.index(name)


def name_of(lp, line):
    return None if line is None else [*lp.rows, *lp.columns][line]


def written(lp, folder: Path) -> Path:
    path = folder / "model.csv"
    path.write_text(write_blocks(lp), encoding="utf-8")
    return path


def run_record(claim, iterations=5):
    return SolverRun(claim, claim.value, iterations, 0.0, {}, False, "a stub")


def solved(x, y, z, basis=None):
    parts = (np.array(part, float) for part in (x, y, z))
    return Solved(Answer(*parts, basis), run_record(Claim.OPTIMAL))


def unsolved(claim):
    return Unsolved(run_record(claim))


def correct(lp):
    """The real solver's answer, which must exist."""
    result = solve(lp)
    assert isinstance(result, Solved)
    return result.answer


def changed(answer, **parts):
    """The answer with entries of ``x``, ``y`` or ``z`` replaced, by index."""
    new = {}
    for part, entries in parts.items():
        new[part] = getattr(answer, part).copy()
        for index, value in entries.items():
            new[part][index] = value
    return replace(answer, **new)
