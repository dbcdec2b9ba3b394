"""The largest margin by which all inequalities can hold at once.

The margin of a row's side is the slack over the row's Euclidean norm, that of a bound the
slack itself: distances, in the space of the plans, to where the inequality ends. With the
margin ``s`` as one more variable, at most `CAP`, this is a linear program. Columns are
counted from their bound moved inwards by ``s``, so that a bound needs no row unless the
column has two. Equality rows and fixed columns are no inequalities.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from scipy.sparse import csr_array, hstack, vstack

from lpview.kkt import Condition, measure
from lpview.model import LinearProgram, Sense, Vector
from lpview.prices.cone import Ask
from lpview.prices.lines import Index
from lpview.run import Method, Solved, SolveSettings
from lpview.warm import Lost

CAP = 1.0
"""No larger margin is looked for: most feasible sets go on for ever."""


@dataclass(frozen=True, eq=False)
class Margin:
    """A point with a large margin, measured, and how much larger one could be."""

    x: Vector
    """The point, shape ``(n,)``."""
    margin: float
    """Its margin, at most `CAP`; negative where an inequality is violated."""
    at_most: float
    """No point has a larger margin, capped, by the dual values of the linear program."""
    violation: float
    """Largest scaled violation of any line there, equality rows included."""


def largest_margin(lp: LinearProgram, ask: Ask) -> Margin | Lost:
    """Find the point with the largest margin, and measure it."""
    question, shift = _question(lp)
    message = ""
    for method in (Method.CHOOSE, Method.SIMPLEX):
        answer = ask(question, SolveSettings(method=method))
        if isinstance(answer, Solved):
            x = answer.answer.x[: lp.n] + answer.answer.x[lp.n] * shift
            at_most = measure(question, answer.answer.x, answer.answer.y).dual_objective
            return margin_at(lp, x, at_most)
        message = answer.run.message
        if answer.run.claim.is_stop:
            break
    return Lost(message)


def margin_at(lp: LinearProgram, x: Vector, at_most: float = CAP) -> Margin:
    """Measure the margin of a point."""
    found = measure(lp, x, np.zeros(lp.m))
    unequal = np.concatenate([~lp.is_equality, ~lp.is_fixed])
    slack = np.concatenate([found.rows.slack, found.columns.slack])
    size = np.concatenate([_norms(lp), np.ones(lp.n)])
    counts = unequal & (size > 0)
    least = float(np.min(slack[counts] / size[counts], initial=CAP))
    violation = float(np.max(found.residuals[Condition.PRIMAL].scaled, initial=0.0))
    return Margin(x, least, min(CAP, max(at_most, least)), violation)


def _norms(lp: LinearProgram) -> Vector:
    norms: Vector = np.sqrt(np.asarray(lp.A.multiply(lp.A).sum(axis=1)).ravel())
    return norms


def _question(lp: LinearProgram) -> tuple[LinearProgram, Vector]:
    """The linear program, and the shift: ``x = x' + s * shift``."""
    n, equal, fixed = lp.n, lp.is_equality, lp.is_fixed
    norm = _norms(lp)
    below, above = np.isfinite(lp.row_lower) & ~equal, np.isfinite(lp.row_upper) & ~equal
    low, high = np.isfinite(lp.lower) & ~fixed, np.isfinite(lp.upper) & ~fixed
    shift = np.where(low, 1.0, np.where(high, -1.0, 0.0))
    along = lp.A @ shift
    two_rows, two_columns = np.flatnonzero(below & above), np.flatnonzero(low & high)
    first = along + np.where(below, -norm, np.where(above, norm, 0.0))
    bounds = _units(two_columns, n)
    G = vstack(
        [
            hstack([lp.A, first[:, None]]),
            hstack([lp.A[two_rows], (along + norm)[two_rows][:, None]]),
            hstack([bounds, np.full((two_columns.size, 1), 2.0)]),
        ],
        format="csr",
    )
    none = np.full(two_rows.size + two_columns.size, -np.inf)
    only_above = np.where(above & below, np.inf, lp.row_upper)
    question = LinearProgram(
        name="largest margin",
        sense=Sense.MAXIMIZE,
        columns=tuple(str(j) for j in range(n + 1)),
        rows=tuple(str(i) for i in range(G.shape[0])),
        c=np.concatenate([np.zeros(n), [1.0]]),
        A=_canonical(G),
        row_lower=np.concatenate([lp.row_lower, none]),
        row_upper=np.concatenate([only_above, lp.row_upper[two_rows], lp.upper[two_columns]]),
        lower=np.concatenate([lp.lower, [0.0]]),
        upper=np.concatenate([np.where(low & high, np.inf, lp.upper), [CAP]]),
    )
    return question, shift


def _units(columns: Index, n: int) -> csr_array:
    k = columns.size
    return csr_array((np.ones(k), (np.arange(k), columns)), shape=(k, n))


def _canonical(G: csr_array) -> csr_array:
    G = csr_array(G)
    G.sum_duplicates()
    G.eliminate_zeros()
    return G
