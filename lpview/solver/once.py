"""One solve from nothing: a model in, an answer or a claim out.

The solver is handed the model's own numbers, rescaled by powers of two where it
would drop or misread them (:mod:`lpview.scaling`), and its answer is carried back
to the model as given. What it says is recorded as a claim, never believed here.
"""

from __future__ import annotations

import time
from typing import Any

import highspy
import numpy as np

from lpview import trivial
from lpview.answer import Answer, Basis, LineStatus, Statuses
from lpview.decimals import number_text
from lpview.model import LinearProgram, Vector
from lpview.run import Claim, Method, Solved, SolverRun, SolveSettings, Unsolved, Watch
from lpview.scaling import Scaling, scaling_for
from lpview.solver.highs import LIMITS, SMALL_COEFFICIENT, pass_model, quiet_highs

_STATUS = highspy.HighsModelStatus
_CLAIMS = {
    _STATUS.kOptimal: Claim.OPTIMAL,
    _STATUS.kInfeasible: Claim.INFEASIBLE,
    _STATUS.kUnbounded: Claim.UNBOUNDED,
    _STATUS.kUnboundedOrInfeasible: Claim.INFEASIBLE_OR_UNBOUNDED,
    _STATUS.kTimeLimit: Claim.TIME_LIMIT,
    _STATUS.kIterationLimit: Claim.ITERATION_LIMIT,
    _STATUS.kInterrupt: Claim.INTERRUPTED,
}
_METHODS = {
    Method.CHOOSE: "choose",
    Method.SIMPLEX: "simplex",
    Method.INTERIOR_POINT: "ipm",
}


def solve(
    lp: LinearProgram, settings: SolveSettings | None = None, watch: Watch | None = None
) -> Solved | Unsolved:
    """Solve a model; a model without rows or without columns is answered by us.

    Raises `NotRepresentableError` where the solver cannot be given the model's own
    numbers. ``watch.stop`` ends a simplex or interior-point run within milliseconds.
    """
    settings, watch = settings or SolveSettings(), watch or Watch()
    if not lp.m or not lp.n:
        return trivial.solve(lp)
    scaling = scaling_for(lp, LIMITS)
    scaled = scaling.apply(lp)
    options = _options(settings)
    highs = quiet_highs()
    for name, value in options.items():
        highs.setOptionValue(name, value)
    pass_model(highs, scaled)
    if settings.start is not None:
        highs.setBasis(_highs_basis(settings.start))
    _follow(highs, watch)
    started = time.perf_counter()
    highs.run()
    seconds = time.perf_counter() - started
    run = _record(highs, options, scaling, seconds)
    if run.claim is not Claim.OPTIMAL:
        return Unsolved(run)
    return Solved(_answer(highs, scaled, scaling), run)


def _options(settings: SolveSettings) -> dict[str, Any]:
    options: dict[str, Any] = {
        "solver": _METHODS[settings.method],
        "run_crossover": "on" if settings.crossover else "off",
        "primal_feasibility_tolerance": settings.feasibility,
        "dual_feasibility_tolerance": settings.feasibility,
        "ipm_optimality_tolerance": settings.feasibility,
        "small_matrix_value": SMALL_COEFFICIENT,
    }
    if settings.time_limit is not None:
        options["time_limit"] = float(settings.time_limit)
    if settings.iteration_limit is not None:
        options["simplex_iteration_limit"] = settings.iteration_limit
    return options


def _follow(highs: Any, watch: Watch) -> None:
    """Report iterations to ``watch`` and let it stop the run."""
    kinds = highspy._core.cb.HighsCallbackType

    def on_callback(_kind: Any, _text: str, out: Any, back: Any, _data: Any) -> None:
        watch.iterations = max(out.simplex_iteration_count, out.ipm_iteration_count, 0)
        back.user_interrupt = watch.stop.is_set()

    highspy._core._Highs.setCallback(highs, on_callback, None)
    highs.startCallback(kinds.kCallbackSimplexInterrupt)
    highs.startCallback(kinds.kCallbackIpmInterrupt)


def _record(highs: Any, options: dict[str, Any], scaling: Scaling, seconds: float) -> SolverRun:
    status = highs.getModelStatus()
    info = highs.getInfo()
    counts = (
        info.simplex_iteration_count,
        info.ipm_iteration_count,
        info.crossover_iteration_count,
    )
    return SolverRun(
        claim=_CLAIMS.get(status, Claim.UNKNOWN),
        message=highs.modelStatusToString(status),
        iterations=sum(max(count, 0) for count in counts),
        seconds=seconds,
        options={name: _option_text(value) for name, value in options.items()},
        rescaled=not scaling.is_none,
        solver=f"HiGHS {highs.version()}",
    )


def _answer(highs: Any, lp: LinearProgram, scaling: Scaling) -> Answer:
    solution = highs.getSolution()
    basis = highs.getBasis()
    # Adding 0.0 turns a negative zero into a plain one.
    return Answer(
        x=scaling.plan(np.array(solution.col_value)) + 0.0,
        y=scaling.duals(np.array(solution.row_dual)) + 0.0,
        z=scaling.reduced_costs(np.array(solution.col_dual)) + 0.0,
        basis=_basis(lp, basis) if basis.valid else None,
    )


def _basis(lp: LinearProgram, basis: Any) -> Basis:
    return Basis(
        column=_statuses(basis.col_status, lp.lower, lp.upper),
        row=_statuses(basis.row_status, lp.row_lower, lp.row_upper),
    )


def _highs_basis(start: Basis) -> Any:
    kinds = {int(kind): kind for kind in highspy.HighsBasisStatus.__members__.values()}
    basis = highspy.HighsBasis()
    basis.col_status = [kinds[status] for status in start.column.tolist()]
    basis.row_status = [kinds[status] for status in start.row.tolist()]
    basis.valid = True
    return basis


def _statuses(found: list[Any], low: Vector, high: Vector) -> Statuses:
    """Our statuses; HiGHS's plain "nonbasic" rests on the end that exists."""
    codes = np.array([int(status) for status in found], dtype=np.int8)
    plain = codes == int(highspy.HighsBasisStatus.kNonbasic)
    codes[plain & np.isfinite(high)] = LineStatus.UPPER
    codes[plain & np.isfinite(low)] = LineStatus.LOWER
    codes[plain & ~np.isfinite(low) & ~np.isfinite(high)] = LineStatus.FREE
    return codes


def _option_text(value: Any) -> str:
    return number_text(value) if isinstance(value, float) else str(value)
