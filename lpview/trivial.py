"""Models without rows or without columns, answered without a solver."""

from __future__ import annotations

import numpy as np

from lpview.answer import Answer, Basis, LineStatus
from lpview.model import LinearProgram, Vector
from lpview.run import Claim, Solved, SolverRun, Unsolved


def solve(lp: LinearProgram) -> Solved | Unsolved:
    """Answer a model with ``m = 0`` or ``n = 0``.

    Without rows each variable goes to the bound that its cost asks for; without
    columns every row value is 0, which its sides allow or not.
    """
    below, above = (lp.row_lower > 0).any(), (lp.row_upper < 0).any()
    if below or above:
        return Unsolved(_run(Claim.INFEASIBLE, "a row without terms that excludes 0"))
    wanted = lp.sense.sign * lp.c
    x = np.where(wanted > 0, lp.lower, np.where(wanted < 0, lp.upper, _nearest_to_zero(lp)))
    if not np.isfinite(x).all():
        return Unsolved(_run(Claim.UNBOUNDED, "a variable without the bound it is pushed to"))
    column = np.full(lp.n, LineStatus.FREE, dtype=np.int8)
    column[x == lp.upper] = LineStatus.UPPER
    column[x == lp.lower] = LineStatus.LOWER
    basis = Basis(column, np.full(lp.m, LineStatus.BASIC, dtype=np.int8))
    answer = Answer(x + 0.0, np.zeros(lp.m), np.array(lp.c), basis)
    return Solved(answer, _run(Claim.OPTIMAL, "optimal"))


def _nearest_to_zero(lp: LinearProgram) -> Vector:
    nearest: Vector = np.clip(0.0, lp.lower, lp.upper)
    return nearest


def _run(claim: Claim, message: str) -> SolverRun:
    return SolverRun(claim, message, 0, 0.0, {}, False, "none: no rows or no columns")
