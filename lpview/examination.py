"""From a model to everything known about its answer, shared by all who print it.

A solver claims; what is built here is checked. Each outcome is a type of its own, in
:mod:`lpview.outcomes`.
"""

from __future__ import annotations

import hashlib
import time
from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from lpview.answer import Answer
from lpview.basis import (
    BasisMatrix,
    SingularBasis,
    compare_prices,
    factor_basis,
    import_factorization,
    matrix_prices,
)
from lpview.blocks import write_blocks
from lpview.decimals import PRINTED_DIGITS, printed
from lpview.dual import build_dual, original_answer
from lpview.file_numbers import FileNumbers
from lpview.kkt import Condition, Measurement, measure
from lpview.marks import mark
from lpview.meanwhile import Meanwhile
from lpview.model import LinearProgram
from lpview.outcomes import (
    BasisRoute,
    DualNotSolved,
    DualSolved,
    Examination,
    Head,
    NoBasisRoute,
    NoOptimum,
    NotEstablished,
    Optimal,
    Request,
    Rounded,
    SecondRoute,
    Stopped,
)
from lpview.polish import Origin, OwnNumbers, Polished, is_rounding, polished, worst_failure
from lpview.reading import Reading
from lpview.repair.search import Nothing, find_certificate
from lpview.run import Claim, Solved, Solver, SolveSettings, Unsolved, Watch
from lpview.scaling import NotRepresentableError
from lpview.verdict import Verdict, judge

LEAST_ITERATIONS = 200
"""The second route may always take this many iterations, however quick the primal."""


def examine(
    reading: Reading, request: Request, solve: Solver, watch: Watch | None = None
) -> Examination:
    """Solve a model and check what the solver says.

    Parameters
    ----------
    solve
        The solver; only its answer and claim come back, and neither is believed.
    watch
        Lets another thread follow and stop the work.

    Raises
    ------
    lpview.scaling.NotRepresentableError
        The solver cannot be given the model's own numbers.
    """
    watch = watch or Watch()
    lp = reading.model
    ask = _within_time_limit(request.solve, solve, watch)
    prepared = Meanwhile(lambda: _prepared(lp))
    result = ask(lp, request.solve)
    sha256, numbers = prepared.result()
    head = Head(lp, reading.notes, sha256, request, result.run, reading.labels)
    if isinstance(result, Solved):
        return _check(head, result.answer, ask, numbers)
    if result.run.claim.is_stop:
        return Stopped(head)
    try:
        found = find_certificate(lp, lambda part: ask(part, request.solve), request.tolerance)
    except NotRepresentableError as error:
        found = Nothing(f"the auxiliary model is out of the solver's range: {error}")
    if not isinstance(found, Nothing):
        return NoOptimum(head, found)
    if watch.stop.is_set():
        return Stopped(replace(head, run=replace(head.run, claim=Claim.INTERRUPTED)))
    return NotEstablished(head, found.reason)


def check_answer(head: Head, answer: Answer) -> Optimal:
    """Check an answer to ``head.model`` that needs no solving; solves nothing."""
    return _check(head, answer, None, FileNumbers(head.model))


def _prepared(lp: LinearProgram) -> tuple[str, FileNumbers]:
    """What the check needs and no solver has a part in: digest, exact numbers, imports."""
    import_factorization()
    return hashlib.sha256(write_blocks(lp).encode()).hexdigest(), FileNumbers(lp)


Ask = Callable[[LinearProgram, SolveSettings], Solved | Unsolved]


def _within_time_limit(settings: SolveSettings, solve: Solver, watch: Watch) -> Ask:
    """A solver whose runs share one time limit."""
    started: list[float] = []

    def ask(lp: LinearProgram, wanted: SolveSettings) -> Solved | Unsolved:
        if not started:
            # The first run gets the limit to the digit, so that reports are alike.
            started.append(time.monotonic())
        elif settings.time_limit is not None:
            left = settings.time_limit - (time.monotonic() - started[0])
            wanted = replace(wanted, time_limit=max(left, 0.0))
        return solve(lp, wanted, watch)

    return ask


def _check(head: Head, answer: Answer, ask: Ask | None, numbers: FileNumbers) -> Optimal:
    lp = head.model
    matrix: BasisMatrix | SingularBasis = SingularBasis("is missing: the method ends without one")
    if answer.basis is not None:
        matrix = factor_basis(lp, answer.basis)
    basis_route = _basis_route(lp, answer, matrix)
    judged = _judged(head, answer, OwnNumbers(), numbers)
    if is_rounding(judged.verdicts) and isinstance(basis_route, BasisRoute):
        judged = _better(judged, head, basis_route, matrix, numbers)
    return Optimal(
        head=head,
        answer=judged.answer,
        origin=judged.origin,
        measurement=judged.found,
        verdicts=judged.verdicts,
        marks=mark(lp, judged.found, answer.basis, head.request.tolerance, head.request.zero),
        basis_route=basis_route,
        dual_route=_dual_route(head, judged, basis_route, ask),
        rounded=_rounded(lp, judged.answer, numbers),
    )


@dataclass(frozen=True)
class _Judged:
    answer: Answer
    origin: Origin
    found: Measurement
    verdicts: tuple[Verdict, ...]


def _judged(head: Head, answer: Answer, origin: Origin, numbers: FileNumbers) -> _Judged:
    found = measure(head.model, answer.x, answer.y, answer.z, numbers)
    return _Judged(answer, origin, found, judge(found, head.request.tolerance))


def _better(
    own: _Judged,
    head: Head,
    route: BasisRoute,
    matrix: BasisMatrix | SingularBasis,
    numbers: FileNumbers,
) -> _Judged:
    """The polished answer, if the solver's prices are those of its basis and it helps."""
    basis = own.answer.basis
    if basis is None or isinstance(matrix, SingularBasis) or route.difference.beyond:
        return own
    worst = worst_failure(own.verdicts)
    origin = Polished(worst.condition, worst.scaled)
    answer = polished(head.model, own.answer, basis, matrix, numbers)
    other = _judged(head, answer, origin, numbers)
    return other if worst_failure(other.verdicts).scaled < worst.scaled else own


def _basis_route(
    lp: LinearProgram, answer: Answer, matrix: BasisMatrix | SingularBasis
) -> BasisRoute | NoBasisRoute:
    if isinstance(matrix, SingularBasis):
        return NoBasisRoute(f"the basis {matrix.reason}")
    prices = matrix_prices(lp, matrix)
    return BasisRoute(prices, compare_prices(answer.y, prices.y, prices.explained))


def _dual_route(
    head: Head, judged: _Judged, basis_route: BasisRoute | NoBasisRoute, ask: Ask | None
) -> DualSolved | DualNotSolved:
    settings, wanted = head.request.solve, head.request.second_route
    if ask is None:
        return DualNotSolved("nothing was solved for this check")
    if wanted is SecondRoute.NEVER:
        return DualNotSolved("not asked for")
    if wanted is SecondRoute.IF_QUICK:
        limit = max(head.run.iterations, LEAST_ITERATIONS)
        settings = replace(settings, iteration_limit=limit)
    pair = build_dual(head.model)
    try:
        result = ask(pair.program, settings)
    except NotRepresentableError:
        return DualNotSolved("its numbers do not fit the solver's")
    if isinstance(result, Unsolved):
        if result.run.claim is Claim.ITERATION_LIMIT:
            return DualNotSolved("it takes more iterations than the model itself")
        return DualNotSolved(f"the solver ended with: {result.run.claim.value}")
    other = original_answer(pair, result.answer)
    objective = FileNumbers(pair.program).objective(result.answer.x)[0]
    size = max(1.0, abs(objective), abs(judged.found.primal_objective))
    apart = abs(objective - judged.found.primal_objective)
    # The dual's own solver run leaves its own tolerance in its prices.
    allowed = np.full(head.model.m, head.request.tolerance)
    if isinstance(basis_route, BasisRoute):
        allowed += basis_route.prices.explained
    return DualSolved(
        objective=objective,
        agrees=bool(apart <= head.request.tolerance * size),
        difference=compare_prices(judged.answer.y, other.y, allowed),
        seconds=result.run.seconds,
    )


def _rounded(lp: LinearProgram, answer: Answer, numbers: FileNumbers) -> Rounded:
    x = np.array([printed(value) for value in answer.x.tolist()])
    found = measure(lp, x, np.zeros(lp.m), None, numbers).residuals[Condition.PRIMAL]
    scaled = found.scaled
    if not scaled.size or not scaled.any():
        return Rounded(PRINTED_DIGITS, 0.0, 0.0, None)
    line = int(np.argmax(scaled))
    return Rounded(PRINTED_DIGITS, float(found.absolute[line]), float(scaled[line]), line)
