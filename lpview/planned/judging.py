"""Judging what `lpview.planned.measuring` measured: two verdicts per condition."""

from __future__ import annotations

import enum
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.kkt import Condition, Residuals
from lpview.model import Vector
from lpview.planned.limits import Limits
from lpview.planned.measuring import Measured


class Standing(enum.Enum):
    """Whether a condition can be judged."""

    JUDGED = "judged"
    """It is."""
    NO_PRICES = "no prices given"
    """The plan has no dual values."""
    BY_DEFINITION = "holds by definition"
    """The plan has no reduced costs, which are then ``c - A'y``."""


@dataclass(frozen=True)
class Found:
    """One condition, as written or within the rounding."""

    passed: bool
    """Whether every line is within what is allowed."""
    absolute: float
    """Largest absolute residual."""
    scaled: float
    """Largest scaled residual, also of lines with a limit of their own."""
    relative: float
    """Largest relative residual."""


@dataclass(frozen=True)
class Worst:
    """The line whose residual, as written, is largest beside what is allowed there."""

    line: int | None
    """Numbered as in `lpview.kkt`; None for the gap."""
    scaled: float
    """Its scaled residual."""
    absolute: float
    """Its absolute residual."""
    limit: float | None
    """Its own limit; None where the tolerance, scaled, is what is allowed."""


@dataclass(frozen=True)
class PlanVerdict:
    """Both verdicts on one condition."""

    condition: Condition
    """Which condition."""
    standing: Standing
    """Whether it can be judged."""
    written: Found | None
    """As written; None where it cannot be judged."""
    within: Found | None
    """Within the rounding; None where it cannot be judged."""
    worst: Worst | None
    """None where it cannot be judged, or no line has a residual."""


@dataclass(frozen=True)
class Judged:
    """All conditions."""

    verdicts: tuple[PlanVerdict, ...]
    """One per condition, in the order of every report."""
    tolerance: float
    """Largest scaled residual allowed, except on lines with a limit."""
    limits: Limits
    """The limits."""

    def of(self, condition: Condition) -> PlanVerdict:
        """The verdict on one condition."""
        return next(v for v in self.verdicts if v.condition is condition)

    @property
    def feasible(self) -> bool:
        """Primal feasibility as written."""
        return self._passed(Condition.PRIMAL, rounded=False)

    @property
    def feasible_within(self) -> bool:
        """Primal feasibility within the rounding."""
        return self._passed(Condition.PRIMAL, rounded=True)

    def failing(self, rounded: bool) -> tuple[Condition, ...]:
        """Conditions that fail, as written or within the rounding."""
        return tuple(
            v.condition
            for v in self.verdicts
            if v.written is not None and not self._passed(v.condition, rounded)
        )

    def _passed(self, condition: Condition, rounded: bool) -> bool:
        verdict = self.of(condition)
        found = verdict.within if rounded else verdict.written
        return found is not None and found.passed


@dataclass(frozen=True)
class Failing:
    """A line that fails a condition, as written: its residual is more than is allowed."""

    line: int
    """Numbered as in `lpview.kkt`."""
    size: float
    """Its absolute residual."""
    allowed: float
    """What is allowed there, in the same unit."""
    within: bool
    """Whether it holds within the rounding."""


def judged(found: Measured, tolerance: float, limits: Limits) -> Judged:
    """Judge every condition, as written and within the rounding."""
    verdicts = tuple(_verdict(found, condition, tolerance, limits) for condition in Condition)
    return Judged(verdicts, tolerance, limits)


def violated(found: Measured, judgement: Judged) -> tuple[Failing, ...]:
    """Every line outside its sides or bounds, the worst over what is allowed first."""
    return failing_lines(found, judgement, Condition.PRIMAL)


def failing_lines(found: Measured, judgement: Judged, condition: Condition) -> tuple[Failing, ...]:
    """Every line that fails a condition, the worst over what is allowed first.

    None where the condition cannot be judged, and for the gap, which is of no line.
    """
    if condition is Condition.GAP or condition not in found.within:
        return ()
    written, within = found.written.residuals[condition], found.within[condition]
    tolerance = judgement.tolerance
    limits = judgement.limits if condition is Condition.PRIMAL else None
    excess = _beside_allowed(written, tolerance, limits)
    lines = np.flatnonzero(~(excess <= 1.0))
    order = lines[np.lexsort((-written.scaled[lines], -excess[lines]))]
    holds = _beside_allowed(within, tolerance, limits) <= 1.0
    allowed = tolerance * np.maximum(1.0, written.term)
    if limits is not None:
        allowed = np.where(limits.given, limits.amount, allowed)
    return tuple(
        Failing(k, float(written.absolute[k]), float(allowed[k]), bool(holds[k]))
        for k in order.tolist()
    )


def worst_limit(found: Measured, limits: Limits) -> tuple[int, float, float] | None:
    """Row with the largest violation beside its own limit, the violation and the limit.

    None where no row has a limit; a row that is not violated where none is.
    """
    rows = np.flatnonzero(limits.given)
    if not rows.size:
        return None
    violation = found.written.residuals[Condition.PRIMAL].absolute[rows]
    k = int(np.argmax(_ratio(violation, limits.amount[rows])))
    return int(rows[k]), float(violation[k]), float(limits.amount[rows[k]])


def _verdict(
    found: Measured, condition: Condition, tolerance: float, limits: Limits
) -> PlanVerdict:
    if condition not in found.within:
        given = found.plan.y is not None
        standing = Standing.BY_DEFINITION if given else Standing.NO_PRICES
        return PlanVerdict(condition, standing, None, None, None)
    own = limits if condition is Condition.PRIMAL else None
    written, within = found.written.residuals[condition], found.within[condition]
    return PlanVerdict(
        condition,
        Standing.JUDGED,
        _found(written, tolerance, own),
        _found(within, tolerance, own),
        _worst(written, condition, tolerance, own),
    )


def _found(part: Residuals, tolerance: float, limits: Limits | None) -> Found:
    if not part.absolute.size:
        return Found(True, 0.0, 0.0, 0.0)
    return Found(
        passed=bool((_beside_allowed(part, tolerance, limits) <= 1.0).all()),
        absolute=float(np.max(part.absolute)),
        scaled=float(np.max(part.scaled)),
        relative=float(np.max(part.relative)),
    )


def _worst(
    part: Residuals, condition: Condition, tolerance: float, limits: Limits | None
) -> Worst | None:
    beside = _beside_allowed(part, tolerance, limits)
    if not beside.size:
        return None
    line = int(np.argmax(beside))  # a nan counts as largest
    size = float(part.absolute[line])
    if size == 0:
        return None
    limit = None
    if limits is not None and bool(limits.given[line]):
        limit = float(limits.amount[line])
    number = None if condition is Condition.GAP else line
    return Worst(number, float(part.scaled[line]), size, limit)


def _beside_allowed(part: Residuals, tolerance: float, limits: Limits | None) -> Vector:
    """Residuals over what is allowed: at most 1 where they pass, nan where not a number."""
    beside = _ratio(part.scaled, np.full(part.absolute.shape, tolerance))
    if limits is None:
        return beside
    own: NDArray[np.bool_] = limits.given
    return np.where(own, _ratio(part.absolute, np.where(own, limits.amount, 1.0)), beside)


def _ratio(size: Vector, allowed: Vector) -> Vector:
    """At most 1 where a size is allowed, more than 1 where not; 0 for nothing beside nothing."""
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        # The quotient of two different doubles is never rounded to 1.
        return np.where(size == 0, 0.0, size / allowed)
