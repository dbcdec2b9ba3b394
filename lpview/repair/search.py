"""Looking for a certificate where a solver claims that there is no optimum.

Two auxiliary models answer whatever the claim was: the *least violation* (the
least total amount by which rows must give way, bounds kept), whose dual values are
Farkas multipliers where it is positive and whose plan is feasible where it is
zero; and the *steepest ray* within a box of the recession cone. Neither relies on
rays that a solver may or may not return.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from scipy.sparse import csr_array, hstack

from lpview.kkt import Condition, measure
from lpview.model import LinearProgram, Sense, Vector
from lpview.repair.certificate import Farkas, Ray, check_farkas, check_ray, recession
from lpview.run import Solved, Unsolved

SolveAuxiliary = Callable[[LinearProgram], Solved | Unsolved]


@dataclass(frozen=True)
class Infeasible:
    """No plan exists: the multipliers were accepted."""

    farkas: Farkas
    """The accepted multipliers."""
    dual_infeasible: bool | None
    """Whether the dual is infeasible too; None where neither was certified."""


@dataclass(frozen=True)
class Unbounded:
    """The objective has no limit: the plan and its ray were accepted."""

    ray: Ray
    """The accepted plan and ray."""


@dataclass(frozen=True)
class Nothing:
    """Neither certificate was found or accepted."""

    reason: str
    """Why, in a sentence."""


def find_certificate(
    lp: LinearProgram, solve: SolveAuxiliary, tolerance: float
) -> Infeasible | Unbounded | Nothing:
    """Find and check a certificate for ``lp``, whatever the solver's claim was."""
    nearest = solve(least_violation(lp))
    if isinstance(nearest, Unsolved):
        return Nothing(f"the least violation was not found: {nearest.run.message}")
    farkas = check_farkas(lp, nearest.answer.y, tolerance)
    steepest = solve(recession(lp, reach=1.0))
    if farkas.accepted:
        return Infeasible(farkas, _dual_infeasible(lp, steepest, tolerance))
    if isinstance(steepest, Unsolved):
        return Nothing(f"no ray was found: {steepest.run.message}")
    ray = check_ray(lp, nearest.answer.x[: lp.n], steepest.answer.x, tolerance)
    if ray.accepted:
        return Unbounded(ray)
    return Nothing(_why_not(farkas, ray, lp, tolerance))


def least_violation(lp: LinearProgram) -> LinearProgram:
    """Minimize the total amount by which rows leave their sides, bounds kept.

    Its columns are those of ``lp`` without costs, then a nonnegative excess for
    each finite side; its rows are those of ``lp``, so that its dual values are one
    per row, between -1 and 1.
    """
    below = np.flatnonzero(np.isfinite(lp.row_lower))
    above = np.flatnonzero(np.isfinite(lp.row_upper))
    rows = np.concatenate([below, above])
    sizes = np.concatenate([np.ones(below.size), -np.ones(above.size)])
    excess = csr_array((sizes, (rows, np.arange(rows.size))), shape=(lp.m, rows.size))
    A = hstack([lp.A, excess], format="csr")
    A.sort_indices()
    zeros, ones = np.zeros(rows.size), np.ones(rows.size)
    return LinearProgram(
        name=f"{lp.name}: least violation",
        sense=Sense.MINIMIZE,
        columns=tuple(str(number) for number in range(lp.n + rows.size)),
        rows=lp.rows,
        c=np.concatenate([np.zeros(lp.n), ones]),
        A=A,
        row_lower=np.array(lp.row_lower),
        row_upper=np.array(lp.row_upper),
        lower=np.concatenate([lp.lower, zeros]),
        upper=np.concatenate([lp.upper, np.full(rows.size, np.inf)]),
    )


def _dual_infeasible(
    lp: LinearProgram, steepest: Solved | Unsolved, tolerance: float
) -> bool | None:
    """True by an improving ray, False by a dual feasible ``y``, else None."""
    if isinstance(steepest, Unsolved):
        return None
    ray = _ray_alone(lp, steepest.answer.x, tolerance)
    if ray:
        return True
    found = measure(lp, np.zeros(lp.n), steepest.answer.y).residuals[Condition.DUAL]
    return False if np.max(found.scaled, initial=0.0) <= tolerance else None


def _ray_alone(lp: LinearProgram, direction: Vector, tolerance: float) -> bool:
    """Whether a ray improves the objective, where no plan exists to start from."""
    return check_ray(recession(lp), np.zeros(lp.n), direction, tolerance).accepted


def _why_not(farkas: Farkas, ray: Ray, lp: LinearProgram, tolerance: float) -> str:
    if ray.violation > tolerance:
        return (
            "no plan was found that is feasible within the tolerance (scaled violation "
            f"{ray.violation:.2g}), and no multipliers that contradict feasibility "
            f"beyond it (contradiction {farkas.contradiction:.2g})"
        )
    return (
        "a feasible plan exists, but no ray that improves the objective without limit "
        f"(rate {-lp.sense.sign * ray.rate:.2g}, drift {ray.drift:.2g})"
    )
