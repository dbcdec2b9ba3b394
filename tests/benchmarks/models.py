"""Examined models of any size, built without solving anything.

An answer is chosen first, and sides, bounds and costs are put around it, so that the
answer is optimal but for rounding; measuring, judging and marking are the package's own.
"""

from __future__ import annotations

from types import MappingProxyType

import numpy as np
from scipy.sparse import csr_array

from lpview.answer import Answer, Basis, LineStatus
from lpview.kkt import measure
from lpview.marks import mark
from lpview.model import LinearProgram, Sense, Vector
from lpview.outcomes import DualNotSolved, Head, NoBasisRoute, Optimal, Request, Rounded
from lpview.polish import OwnNumbers
from lpview.reading import Notes
from lpview.run import Claim, SolverRun
from lpview.verdict import judge

WIDE_ROW = "budget(all)"
"""Name of the one row that has a coefficient in every column; it stands in the middle."""

TICK = 1e-3
"""Values and coefficients are multiples of this or of coarser steps."""


def examined(lines: int, each: int = 9) -> Optimal:
    """An examination of a model with so many rows and as many columns.

    Parameters
    ----------
    each
        Coefficients of every row but the wide one: in all ``lines * (each + 1)`` at most.
    """
    rng = np.random.default_rng(lines)
    A = _coefficients(rng, lines, each)
    x, y, z, at_bound = _answer(rng, lines)
    value, slack = A @ x, _steps(rng, lines, 1000)
    tight = (y != 0) | (rng.random(lines) < 0.1)
    row_upper = np.where(tight, value, value + slack)
    lp = LinearProgram(
        name="synthetic",
        sense=Sense.MAXIMIZE,
        columns=tuple(_names(lines, ("ship", "grow", "store", "hire", "buy"))),
        rows=tuple(_names(lines, ("stock", "heat", "bench", "hours"), WIDE_ROW)),
        c=A.T @ y + z,
        A=A,
        row_lower=np.where(rng.random(lines) < 0.1, value - 1000.0, -np.inf),
        row_upper=row_upper,
        lower=np.where(at_bound, x, 0.0),
        upper=np.where(rng.random(lines) < 0.3, x + 100.0, np.inf),
    )
    return _optimal(lp, Answer(x, y, z, _basis(y, z)))


def _steps(rng: np.random.Generator, size: int, most: int) -> Vector:
    return rng.integers(1, most * 1000, size) * TICK


def _coefficients(rng: np.random.Generator, lines: int, each: int) -> csr_array:
    """Random columns for every row, and one row across all of them."""
    row = np.repeat(np.arange(lines), each)
    column = rng.integers(0, lines, lines * each)
    keep = row != lines // 2
    row = np.concatenate([row[keep], np.full(lines, lines // 2)])
    column = np.concatenate([column[keep], np.arange(lines)])
    data = rng.integers(1, 400, row.size) * 0.25
    A = csr_array((data, (row, column)), shape=(lines, lines))
    A.sum_duplicates()
    A.sort_indices()
    return A


def _answer(rng: np.random.Generator, lines: int) -> tuple[Vector, Vector, Vector, np.ndarray]:
    """A plan, prices for a third of the rows, and reduced costs where a bound holds."""
    x = _steps(rng, lines, 100)
    y = np.where(rng.random(lines) < 0.3, _steps(rng, lines, 10), 0.0)
    at_bound = rng.random(lines) < 0.4
    z = np.where(at_bound & (rng.random(lines) < 0.9), -_steps(rng, lines, 10), 0.0)
    return np.where(at_bound & (rng.random(lines) < 0.8), 0.0, x), y, z, at_bound


def _names(lines: int, families: tuple[str, ...], wide: str = "") -> list[str]:
    size = len(families)
    names = [f"{families[i % size]}[site {i // 52},week {i % 52}]" for i in range(lines)]
    if wide:
        names[lines // 2] = wide
    return names


def _basis(y: Vector, z: Vector) -> Basis:
    """Priced rows stay at their upper side, priced columns at their lower bound."""
    row = np.where(y != 0, LineStatus.UPPER, LineStatus.BASIC).astype(np.int8)
    column = np.where(z != 0, LineStatus.LOWER, LineStatus.BASIC).astype(np.int8)
    return Basis(column, row)


def _optimal(lp: LinearProgram, answer: Answer) -> Optimal:
    request = Request("synthetic.csv", "lpview check synthetic.csv")
    run = SolverRun(Claim.OPTIMAL, "optimal", lp.m, 1.0, MappingProxyType({}), False, "none")
    head = Head(lp, Notes(0, 0, (), (), {}), "0" * 64, request, run)
    found = measure(lp, answer.x, answer.y, answer.z)
    return Optimal(
        head=head,
        answer=answer,
        origin=OwnNumbers(),
        measurement=found,
        verdicts=judge(found, request.tolerance),
        marks=mark(lp, found, answer.basis, request.tolerance, request.zero),
        basis_route=NoBasisRoute("nothing was solved"),
        dual_route=DualNotSolved("nothing was solved"),
        rounded=Rounded(6, 0.0, 0.0, None),
    )
