"""What a solver run is asked for and what it claims, apart from any solver.

A claim is only that: an optimum is checked by :mod:`lpview.kkt`, and "infeasible"
and "unbounded" need a certificate (:mod:`lpview.repair`).
"""

from __future__ import annotations

import enum
import threading
import time
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace

from lpview.answer import Answer, Basis
from lpview.model import LinearProgram


class Method(enum.Enum):
    """How to solve."""

    CHOOSE = "choose"
    """Leave the choice to the solver."""
    SIMPLEX = "simplex"
    """The simplex method, which ends in a basis."""
    INTERIOR_POINT = "interior-point"
    """An interior-point method, followed by crossover to a basis unless told not to."""


class Claim(enum.Enum):
    """The solver's own word on how a run ended."""

    OPTIMAL = "optimal"
    """An optimal plan was found."""
    INFEASIBLE = "infeasible"
    """No plan satisfies every line."""
    UNBOUNDED = "unbounded"
    """Feasible plans improve the objective without limit."""
    INFEASIBLE_OR_UNBOUNDED = "infeasible or unbounded"
    """One of the two; the solver did not find out which."""
    TIME_LIMIT = "time limit reached"
    """Stopped by the time limit."""
    ITERATION_LIMIT = "iteration limit reached"
    """Stopped by the iteration limit."""
    INTERRUPTED = "interrupted"
    """Stopped by the person at the keyboard."""
    UNKNOWN = "no result"
    """The solver gave up; its message says more."""

    @property
    def is_stop(self) -> bool:
        """Whether a limit or a person stopped the run."""
        return self in (Claim.TIME_LIMIT, Claim.ITERATION_LIMIT, Claim.INTERRUPTED)


@dataclass(frozen=True)
class SolveSettings:
    """What is asked of a solver."""

    method: Method = Method.CHOOSE
    """How to solve."""
    crossover: bool = True
    """Whether an interior-point run goes on to a basis."""
    feasibility: float = 1e-9
    """The solver's own primal and dual feasibility tolerance."""
    time_limit: float | None = None
    """Seconds, or None for no limit."""
    iteration_limit: int | None = None
    """Simplex iterations, or None for no limit."""
    start: Basis | None = None
    """A basis to begin at, with the simplex method, or None."""


@dataclass(frozen=True)
class SolverRun:
    """The record of one run."""

    claim: Claim
    """How it ended, by the solver's word."""
    message: str
    """The solver's own words for that."""
    iterations: int
    """Simplex, interior-point and crossover iterations together."""
    seconds: float
    """Elapsed time of the run."""
    options: Mapping[str, str]
    """Every solver option that was set, by name."""
    rescaled: bool
    """Whether lines were rescaled by powers of two to fit the solver's numbers."""
    solver: str
    """Name and version of what answered."""


@dataclass(frozen=True)
class Solved:
    """The solver claims an optimum."""

    answer: Answer
    """Its plan, prices and basis, for the model as given."""
    run: SolverRun
    """The record of the run."""


@dataclass(frozen=True)
class Unsolved:
    """The solver claims anything else."""

    run: SolverRun
    """The record of the run."""


@dataclass
class Watch:
    """Lets another thread follow a run and stop it; the only mutable thing here."""

    stop: threading.Event = field(default_factory=threading.Event)
    """Set it to end the run at the next chance."""
    iterations: int = 0
    """Iterations so far."""


Solver = Callable[[LinearProgram, SolveSettings, Watch], Solved | Unsolved]
"""Anything that solves; tests put a lying one in its place."""


Ask = Callable[[LinearProgram, SolveSettings], Solved | Unsolved]
"""A solver within somebody's time limit, for auxiliary models."""


def within(solve: Solver, watch: Watch, limit: float | None, started: float) -> Ask:
    """A solver whose runs end when ``limit`` seconds after ``started`` are over.

    ``started`` is a reading of `time.monotonic`.
    """

    def ask(lp: LinearProgram, settings: SolveSettings) -> Solved | Unsolved:
        if limit is not None:
            left = max(0.0, limit - (time.monotonic() - started))
            settings = replace(settings, time_limit=left)
        return solve(lp, settings, watch)

    return ask
