"""The widest direction of a cone, and the multipliers that hold every other line.

A cone is a model without costs whose sides and bounds are 0 or infinite. A line with one
end, 0, *can move* if some direction of the cone takes it off that end. All lines that can
move do so along one direction, because directions add up, and a single linear program
finds it (Freund, Roundy and Todd 1985, "Identifying the set of always-active constraints
in a system of linear inequalities by a single linear program", MIT Sloan working paper
1674-85)::

    maximize sum t   subject to   movement of line k inwards >= t_k,   0 <= t_k <= 1

A cone may be scaled, so that every ``t`` is 0 or 1 at the optimum; what lies between is
not settled. The dual values of the optimum are multipliers of the lines: at least 1 on
every line with ``t = 0``, 0 on the others, and together the zero vector. They prove that
those lines cannot move.
"""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass, replace

import numpy as np
from scipy.sparse import csr_array, hstack

from lpview.kkt import Condition, measure
from lpview.model import LinearProgram, Sense, Vector
from lpview.prices.lines import Mask
from lpview.run import Method, Solved, SolveSettings, Unsolved
from lpview.warm import Lost

Ask = Callable[[LinearProgram, SolveSettings], Solved | Unsolved]
"""Solves an auxiliary model; a time limit and a way to stop are its own affair."""

SETTLED = 1e-6
"""How far from 0 and from 1 a ``t`` may lie."""

POSITIVE = 0.5
"""What movement or multiplier, measured, must be left of the 1 that was asked for."""


@dataclass(frozen=True, eq=False)
class Widest:
    """Which lines of a cone can move."""

    direction: Vector
    """A direction along which all of them move, shape ``(n,)``."""
    drift: float
    """Largest scaled residual of the direction, whose movements count from 1 up: how far
    it leaves the cone."""
    moves: Mask
    """Lines with one end that move, shape ``(m + n,)``."""
    held: Mask
    """Lines with one end that cannot, shape ``(m + n,)``."""
    open: Mask
    """Lines with one end of which neither could be shown, shape ``(m + n,)``."""
    y: Vector
    """Multipliers of the rows, shape ``(m,)``: positive for a lower end, negative for an
    upper one, at least 1 in size on rows that are held."""
    z: Vector
    """Multipliers of the columns, ``-A'y``, shape ``(n,)``, likewise."""
    misplaced: float
    """Largest multiplier of a line without that end, scaled likewise."""


def cone(lp: LinearProgram, low: Vector, high: Vector) -> LinearProgram:
    """The cone with the coefficients of ``lp``.

    ``low`` is 0 or ``-inf``, ``high`` 0 or ``inf``, for all lines, shape ``(m + n,)``.
    """
    return replace(
        lp,
        sense=Sense.MINIMIZE,
        c=np.zeros(lp.n),
        row_lower=low[: lp.m].copy(),
        row_upper=high[: lp.m].copy(),
        lower=low[lp.m :].copy(),
        upper=high[lp.m :].copy(),
        offset=0.0,
        odd={"A": lp.odd["A"]} if "A" in lp.odd else {},
    )


def widest(directions: LinearProgram, ask: Ask) -> Widest | Lost:
    """Find the widest direction of a cone, and measure what was found."""
    one = _one_ended(directions)
    if not one.any():
        nothing = np.zeros_like(one)
        x, y = np.zeros(directions.n), np.zeros(directions.m)
        return Widest(x, 0.0, nothing, nothing, nothing, y, x, 0.0)
    question = _Question(directions)
    answer: Solved | Unsolved | None = None
    for settings in _settings():
        answer = ask(question.program, settings)
        if isinstance(answer, Solved):
            x, t, y = question.read(answer)
            return _measured(directions, one, x, t, y)
        if answer.run.claim.is_stop:
            break
    assert isinstance(answer, Unsolved)
    return Lost(answer.run.message)


def _settings() -> Iterator[SolveSettings]:
    """Ways to ask, until one works: solvers do fail on such models now and then."""
    yield SolveSettings()
    yield SolveSettings(method=Method.SIMPLEX)
    yield SolveSettings(method=Method.INTERIOR_POINT)


def _inward(directions: LinearProgram) -> Vector:
    """1 where a line may rise and not fall, -1 where it may fall and not rise, else 0."""
    low = np.concatenate([directions.row_lower, directions.lower])
    high = np.concatenate([directions.row_upper, directions.upper])
    return np.where(low == high, 0.0, (low == 0).astype(float) - (high == 0).astype(float))


def _one_ended(directions: LinearProgram) -> Mask:
    one: Mask = _inward(directions) != 0
    return one


class _Question:
    """The linear program above, with every one-ended line turned so that it may rise.

    A one-ended column stands in it twice: once up to 1, which is its ``t``, and once for
    the rest of its movement. Lines that are free or never move need no ``t``.
    """

    def __init__(self, directions: LinearProgram) -> None:
        m, n = directions.m, directions.n
        inward = _inward(directions)
        turn = np.where(inward < 0, -1.0, 1.0)
        self._m, self._n, self._turn = m, n, turn
        fixed = directions.is_fixed
        self._columns = np.flatnonzero(~fixed)
        self._paid = np.flatnonzero(inward[m:] != 0)
        free_rows = np.isinf(directions.row_lower) & np.isinf(directions.row_upper)
        self._rows = np.flatnonzero(~free_rows)
        self._paid_rows = np.flatnonzero(inward[:m] != 0)
        self.program = self._program(directions, inward)

    def _program(self, directions: LinearProgram, inward: Vector) -> LinearProgram:
        m, rows, columns = self._m, self._rows, self._columns
        A = csr_array(directions.A[rows]).astype(float)
        A.data *= np.repeat(self._turn[rows], np.diff(A.indptr)) * self._turn[m + A.indices]
        at = np.searchsorted(rows, self._paid_rows)
        t = self._paid_rows.size
        slack = csr_array((-np.ones(t), (at, np.arange(t))), shape=(rows.size, t))
        G = csr_array(hstack([A[:, columns], A[:, self._paid], slack], format="csr"))
        G.sort_indices()
        k, paid = columns.size, self._paid.size + t
        return LinearProgram(
            name="widest direction",
            sense=Sense.MAXIMIZE,
            columns=_numbers(k + paid),
            rows=_numbers(rows.size),
            c=np.concatenate([np.zeros(k), np.ones(paid)]),
            A=G,
            row_lower=np.zeros(rows.size),
            row_upper=np.where(inward[rows] != 0, np.inf, 0.0),
            lower=np.concatenate(
                [np.where(inward[m + columns] != 0, 0.0, -np.inf), np.zeros(paid)]
            ),
            upper=np.concatenate([np.full(k, np.inf), np.ones(paid)]),
        )

    def read(self, found: Solved) -> tuple[Vector, Vector, Vector]:
        """The direction, every line's ``t`` (0 where it has none), and the multipliers."""
        m, k, x = self._m, self._columns.size, found.answer.x
        direction, t, y = np.zeros(self._n), np.zeros(m + self._n), np.zeros(m)
        direction[self._columns] = x[:k]
        split = k + self._paid.size
        direction[self._paid] += x[k:split]
        t[m + self._paid], t[self._paid_rows] = x[k:split], x[split:]
        # Maximizing, the price of a row ">=" is negative.
        y[self._rows] = 0.0 - found.answer.y
        return direction * self._turn[m:], t, y * self._turn[:m]


def _numbers(count: int) -> tuple[str, ...]:
    return tuple(str(number) for number in range(count))


def _measured(directions: LinearProgram, one: Mask, x: Vector, t: Vector, y: Vector) -> Widest:
    found = measure(directions, x, y)
    movement = np.abs(np.concatenate([found.rows.value, found.columns.value]))
    multiplier = np.abs(np.concatenate([found.rows.price, found.columns.price]))
    moves = one & (t >= 1 - SETTLED) & (movement > POSITIVE)
    held = one & (t <= SETTLED) & (multiplier > POSITIVE)
    residuals = found.residuals
    return Widest(
        direction=x,
        drift=float(np.max(residuals[Condition.PRIMAL].scaled, initial=0.0)),
        moves=moves,
        held=held,
        open=one & ~moves & ~held,
        y=y,
        z=found.columns.price,
        misplaced=float(np.max(residuals[Condition.DUAL].scaled, initial=0.0)),
    )
