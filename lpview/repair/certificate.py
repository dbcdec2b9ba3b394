"""Certificates that a model has no optimum, and the check that accepts them.

Farkas multipliers (Farkas 1902; Schrijver 1986, "Theory of Linear and Integer
Programming", section 7.3) are dual values ``y`` of the model with zero costs whose
dual objective is positive: no plan can then exist, since a plan would bound it by
0. An unbounded model is certified by a feasible plan and a ray along which every
line stays within its ends while the objective improves.

Both are measured by the same check as an optimum (:mod:`lpview.kkt`), on the
numbers of the file, and judged at the same tolerance: a plan scaled, multipliers and
rays relative to their terms, since these have no size of their own.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from lpview.kkt import Condition, Measurement, measure
from lpview.model import LinearProgram, Sense, Vector


@dataclass(frozen=True)
class Farkas:
    """Multipliers that contradict feasibility."""

    y: Vector
    """One multiplier per row, shape ``(m,)``, largest size 1: positive for the
    lower side, negative for the upper."""
    z: Vector
    """The multipliers of the bounds, ``-A'y``, shape ``(n,)``, same signs."""
    contradiction: float
    """What the multipliers add up to: 0 would have to be at least this, > 0."""
    misplaced: float
    """Largest size, over its largest term, of a multiplier whose side is infinite; 0
    is flawless. Relative and not scaled, so that no small coefficient passes as 0."""
    reach: float
    """No plan exists whose values, in total size over the columns with such a
    multiplier, stay below this; ``inf`` where there is none."""
    accepted: bool
    """Whether the check accepts it at the tolerance."""


@dataclass(frozen=True)
class Ray:
    """A feasible plan and a direction that improves the objective for ever."""

    x: Vector
    """The plan, shape ``(n,)``, column units."""
    direction: Vector
    """The ray, shape ``(n,)``, largest size 1."""
    rate: float
    """Change of the objective per unit along the ray: < 0 minimizing, > 0 maximizing."""
    violation: float
    """Largest scaled residual of the plan's feasibility."""
    drift: float
    """Largest relative residual of the ray: how fast a line leaves its ends."""
    accepted: bool
    """Whether the check accepts both at the tolerance."""


def without_costs(lp: LinearProgram) -> LinearProgram:
    """The feasibility problem: the same lines, nothing to optimize."""
    odd = {name: lp.odd[name] for name in lp.odd if name not in ("c", "offset")}
    return replace(lp, sense=Sense.MINIMIZE, c=np.zeros(lp.n), offset=0.0, odd=odd)


def recession(lp: LinearProgram, reach: float = np.inf) -> LinearProgram:
    """Directions in which every line stays within its ends, within ``-reach..reach``."""
    odd = {name: lp.odd[name] for name in lp.odd if name in ("c", "A")}
    return replace(
        lp,
        row_lower=np.where(np.isfinite(lp.row_lower), 0.0, -np.inf),
        row_upper=np.where(np.isfinite(lp.row_upper), 0.0, np.inf),
        lower=np.where(np.isfinite(lp.lower), 0.0, -reach),
        upper=np.where(np.isfinite(lp.upper), 0.0, reach),
        offset=0.0,
        odd=odd,
    )


NOISE = 1e-12
"""Parts of a certificate this small beside its largest are first taken for rounding."""


def check_farkas(lp: LinearProgram, y: Vector, tolerance: float) -> Farkas:
    """Measure and judge Farkas multipliers; ``y`` may have any size but 0."""
    cleared = _farkas(lp, _cleared(_of_size_one(y)), tolerance)
    return cleared if cleared.accepted else _farkas(lp, _of_size_one(y), tolerance)


def _of_size_one(values: Vector) -> Vector:
    size = float(np.max(np.abs(values), initial=0.0))
    return values / size if 0 < size < np.inf else np.zeros_like(values)


def _cleared(values: Vector) -> Vector:
    """Without the solver's rounding, which would else be judged as if it were meant."""
    return np.where(np.abs(values) <= NOISE, 0.0, values)


def _farkas(lp: LinearProgram, y: Vector, tolerance: float) -> Farkas:
    found = measure(without_costs(lp), np.zeros(lp.n), y)
    misplaced = found.residuals[Condition.DUAL]
    worst = float(np.max(misplaced.relative, initial=0.0))
    total = float(np.sum(misplaced.absolute))
    terms = max(1.0, *(float(np.max(np.abs(t), initial=0.0)) for t in _terms(found)))
    reach = found.dual_objective / total if total > 0 else np.inf
    return Farkas(
        y=y,
        z=found.columns.price,
        contradiction=found.dual_objective,
        misplaced=worst,
        reach=reach,
        accepted=bool(found.dual_objective > tolerance * terms and worst <= tolerance),
    )


def _terms(found: Measurement) -> tuple[Vector, Vector]:
    """What the contradiction is added up from."""
    return found.rows.price * found.rows.end, found.columns.price * found.columns.end


def check_ray(lp: LinearProgram, x: Vector, direction: Vector, tolerance: float) -> Ray:
    """Measure and judge a plan and a ray; ``direction`` may have any size but 0."""
    cleared = _ray(lp, x, _cleared(_of_size_one(direction)), tolerance)
    return cleared if cleared.accepted else _ray(lp, x, _of_size_one(direction), tolerance)


def _ray(lp: LinearProgram, x: Vector, direction: Vector, tolerance: float) -> Ray:
    no_prices = np.zeros(lp.m)
    plan = measure(lp, x, no_prices).residuals[Condition.PRIMAL]
    along = measure(recession(lp), direction, no_prices)
    violation = float(np.max(plan.scaled, initial=0.0))
    drift = float(np.max(along.residuals[Condition.PRIMAL].relative, initial=0.0))
    rate = along.primal_objective
    terms = max(1.0, float(np.max(np.abs(lp.c * direction), initial=0.0)))
    improves = -lp.sense.sign * rate > tolerance * terms
    return Ray(
        x=x,
        direction=direction,
        rate=rate,
        violation=violation,
        drift=drift,
        accepted=bool(improves and violation <= tolerance and drift <= tolerance),
    )
