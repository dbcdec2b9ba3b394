"""Proving what a model comes to: optimal, infeasible or unbounded, exactly.

Each is the exact optimum of a program of its own: the model itself; the least total amount
by which rows must give way (positive: its dual values are Farkas multipliers; zero: its plan
is feasible); the steepest ray within a box of the recession cone. So one way of proving an
optimal basis proves them all, and no solver is believed anywhere.
"""

from __future__ import annotations

import time
from collections.abc import Callable
from dataclasses import dataclass, replace
from fractions import Fraction
from typing import TypeVar

import numpy as np

from lpview.answer import Basis, LineStatus
from lpview.basis import SingularBasis, factor_basis
from lpview.model import LinearProgram, ModelError, Vector, frozen_odd
from lpview.proof.basis import BasisSolution, solve_basis
from lpview.proof.bound import best_bound, from_doubles
from lpview.proof.integers import Integers, integers_of
from lpview.proof.linear import NotSolvedError
from lpview.proof.refine import next_basis
from lpview.proof.results import (
    Effort,
    ExactVector,
    NotProved,
    Proof,
    ProvedInfeasible,
    ProvedOptimal,
    ProvedUnbounded,
)
from lpview.repair.certificate import recession
from lpview.repair.search import least_violation
from lpview.run import Ask, Claim, Method, Solved, SolveSettings, Unsolved
from lpview.scaling import NotRepresentableError

Answered = TypeVar("Answered")

ROUNDS = 20
"""Bases tried at most before giving up."""


class StoppedError(Exception):
    """Raised by ``between`` to end the work; its text says why."""


@dataclass(frozen=True, eq=False)
class _Optimum:
    """A basis that is exactly optimal."""

    solution: BasisSolution
    basis: Basis
    effort: Effort


@dataclass(frozen=True, eq=False)
class _Failure:
    """No basis was shown to be optimal."""

    reason: str
    claim: Claim
    last: BasisSolution | None
    effort: Effort | None


def prove(
    lp: LinearProgram,
    basis: Basis | None,
    ask: Ask,
    settings: SolveSettings,
    between: Callable[[], None] = lambda: None,
    guess: Vector | None = None,
) -> Proof:
    """Prove what a model comes to.

    Parameters
    ----------
    basis
        Where to begin; None where the solver found none.
    ask
        A solver for this model and the auxiliary ones.
    between
        Called after each small step; raises `StoppedError` to end the work.
    guess
        Dual values that someone reports, shape ``(m,)``: where nothing is proved they may
        still give a bound.
    """
    work = _Work(ask, replace(settings, method=Method.SIMPLEX, iteration_limit=None), between)
    numbers = integers_of(lp)
    guesses = [] if guess is None else [from_doubles(guess)]
    failure = _Failure("nothing was tried", Claim.UNKNOWN, None, None)
    try:
        tried = work.optimum(numbers, basis, is_main=True)
        if isinstance(tried, _Optimum):
            return _optimal(numbers, tried)
        failure = tried
        return _without_optimum(numbers, failure, work, guesses)
    except StoppedError as error:
        failure = replace(failure, reason=str(error), last=work.last or failure.last)
        return _not_proved(numbers, failure, None, guesses)


def _optimal(numbers: Integers, found: _Optimum) -> ProvedOptimal:
    solution = found.solution
    x = solution.x
    return ProvedOptimal(
        objective=numbers.objective(x.numerators, x.denominator),
        x=x,
        y=solution.y,
        zero_slack=solution.zero_slack,
        zero_price=solution.zero_price,
        basis=found.basis,
        effort=found.effort,
    )


def _without_optimum(
    numbers: Integers, failure: _Failure, work: _Work, guesses: list[ExactVector]
) -> Proof:
    """What else it may come to: infeasible, unbounded, or not found out."""
    lp = numbers.lp
    program = integers_of(exact_least_violation(lp))
    nearest = work.optimum(program, None)
    if isinstance(nearest, _Failure):
        nearest = work.optimum(program, excesses_basic(program.lp, lp.n))
    if isinstance(nearest, _Failure):
        return _not_proved(numbers, failure, None, guesses)
    x = nearest.solution.x
    violation = Fraction(sum(x.numerators[lp.n :]), x.denominator)
    if violation > 0:
        return ProvedInfeasible(nearest.solution.y, violation, nearest.effort)
    plan = ExactVector(x.numerators[: lp.n], x.denominator)
    steepest = work.optimum(integers_of(exact_recession(lp)), None)
    if isinstance(steepest, _Optimum):
        ray = steepest.solution.x
        rate = numbers.objective(ray.numerators, ray.denominator) - numbers.offset
        if rate:
            return ProvedUnbounded(plan, ray, rate, steepest.effort)
    return _not_proved(numbers, failure, plan, guesses)


def _not_proved(
    numbers: Integers, failure: _Failure, plan: ExactVector | None, guesses: list[ExactVector]
) -> NotProved:
    """The interval that holds anyway."""
    last = failure.last
    if plan is None and last is not None and not last.outside:
        plan = last.x
    primal = None if plan is None else numbers.objective(plan.numerators, plan.denominator)
    dual = best_bound(numbers, [*guesses, *([] if last is None else [last.y])])
    minimizing = numbers.lp.sense.sign > 0
    return NotProved(
        reason=failure.reason,
        lower=dual if minimizing else primal,
        upper=primal if minimizing else dual,
        has_plan=plan is not None,
        effort=failure.effort,
    )


class _Work:
    """Finds exactly optimal bases."""

    def __init__(self, ask: Ask, settings: SolveSettings, between: Callable[[], None]) -> None:
        self._ask, self._settings, self._between = ask, settings, between
        self.last: BasisSolution | None = None

    def optimum(
        self, numbers: Integers, basis: Basis | None, is_main: bool = False
    ) -> _Optimum | _Failure:
        """Solve bases exactly, each found from what the last one leaves, until one is optimal."""
        started = time.perf_counter()
        first: BasisSolution | None = None
        last: BasisSolution | None = None
        for step in range(1, ROUNDS + 1):
            self._between()
            found = self._usable(numbers, basis)
            if isinstance(found, _Failure):
                return replace(found, last=last)
            basis, solution = found
            last = solution
            if is_main:
                self.last = solution
            first = first or solution
            effort = Effort(
                seconds=time.perf_counter() - started,
                steps=step,
                bits=solution.bits,
                primal_violation=_largest(first.outside),
                dual_violation=_largest(first.wrong),
            )
            if not solution.outside and not solution.wrong:
                return _Optimum(solution, basis, effort)
            result = self._try(
                lambda b=basis, s=solution: next_basis(  # type: ignore[misc]
                    numbers, b, s, self._ask, self._settings
                )
            )
            if isinstance(result, (Unsolved, str)):
                claim = Claim.UNKNOWN if isinstance(result, str) else result.run.claim
                words = result if isinstance(result, str) else result.run.message
                return _Failure(f"the refined model ended with: {words}", claim, solution, effort)
            basis = result
        return _Failure(f"no optimal basis in {ROUNDS} rounds", Claim.UNKNOWN, last, effort)

    def _usable(
        self, numbers: Integers, basis: Basis | None
    ) -> tuple[Basis, BasisSolution] | _Failure:
        """A basis that can be solved exactly: this one, or one that the solver makes of it."""
        reason, claim = "the solver found no basis", Claim.UNKNOWN
        for again in (False, True):
            if basis is None or again:
                result = self._try(
                    lambda b=basis: self._ask(  # type: ignore[misc]
                        numbers.lp, replace(self._settings, start=b)
                    )
                )
                if not isinstance(result, Solved) or result.answer.basis is None:
                    if isinstance(result, Unsolved):
                        reason, claim = (
                            f"the solver ended with: {result.run.message}",
                            result.run.claim,
                        )
                    return _Failure(reason, claim, None, None)
                basis = result.answer.basis
            matrix = factor_basis(numbers.lp, basis)
            if isinstance(matrix, SingularBasis):
                reason = f"the basis {matrix.reason}"
                continue
            try:
                return basis, solve_basis(numbers, basis, matrix, self._between)
            except NotSolvedError as error:
                reason = f"the basis cannot be solved exactly: {error}"
        return _Failure(reason, claim, None, None)

    def _try(self, question: Callable[[], Answered]) -> Answered | str:
        try:
            return question()
        except (NotRepresentableError, ModelError) as error:
            return str(error)


def _largest(violations: dict[int, Fraction]) -> Fraction:
    return max((abs(v) for v in violations.values()), default=Fraction(0))


def exact_least_violation(lp: LinearProgram) -> LinearProgram:
    """`lpview.repair.search.least_violation` on the numbers as written."""
    program = least_violation(lp)
    shift = np.repeat(program.A.indptr[:-1] - lp.A.indptr[:-1], np.diff(lp.A.indptr))
    odd = {part: values for part, values in lp.odd.items() if part not in ("A", "c", "offset")}
    odd["A"] = {int(k + shift[k]): v for k, v in lp.odd.get("A", {}).items()}
    return replace(program, odd=frozen_odd(odd))


def excesses_basic(program: LinearProgram, n: int) -> Basis:
    """A feasible basis of a least violation, which needs no solver.

    The ``n`` columns of the model rest; in each row the excess that it then needs is basic,
    or the row itself. (The excesses of lower sides come first, then those of upper ones.)
    """
    low, high = program.lower[:n], program.upper[:n]
    column = np.full(program.n, LineStatus.LOWER, np.int8)
    column[:n] = np.where(
        np.isfinite(low),
        LineStatus.LOWER,
        np.where(np.isfinite(high), LineStatus.UPPER, LineStatus.FREE),
    )
    resting = np.where(np.isfinite(low), low, np.where(np.isfinite(high), high, 0.0))
    value = program.A[:, :n] @ resting
    row = np.full(program.m, LineStatus.BASIC, np.int8)
    place = n
    for ends, is_beyond, status in (
        (program.row_lower, value < program.row_lower, LineStatus.LOWER),
        (program.row_upper, value > program.row_upper, LineStatus.UPPER),
    ):
        sides = np.flatnonzero(np.isfinite(ends))
        column[place : place + sides.size][is_beyond[sides]] = LineStatus.BASIC
        row[is_beyond & np.isfinite(ends)] = status
        place += sides.size
    return Basis(column, row)


def exact_recession(lp: LinearProgram) -> LinearProgram:
    """`lpview.repair.certificate.recession` in a box, on the numbers as written."""
    program = recession(lp, reach=1.0)
    odd = {part: lp.odd[part] for part in ("A", "c") if part in lp.odd}
    return replace(program, odd=frozen_odd(odd))
