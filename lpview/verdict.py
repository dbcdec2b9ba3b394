"""Judging what :mod:`lpview.kkt` measured: one verdict per condition."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from lpview.kkt import Condition, Measurement, Residuals


@dataclass(frozen=True)
class Verdict:
    """One condition, judged against a tolerance."""

    condition: Condition
    """Which condition."""
    absolute: float
    """Largest absolute residual."""
    scaled: float
    """Largest scaled residual; the one that is judged."""
    relative: float
    """Largest relative residual."""
    worst: int | None
    """Line with the largest scaled residual; None where it is 0, and for the gap."""
    tolerance: float
    """Largest scaled residual allowed."""
    passed: bool | None
    """None where the condition holds by definition (no reduced costs reported)."""


def judge(measurement: Measurement, tolerance: float) -> tuple[Verdict, ...]:
    """One verdict per condition; passed where the largest scaled residual is within."""
    return tuple(
        _verdict(condition, measurement.residuals.get(condition), tolerance)
        for condition in Condition
    )


def _verdict(condition: Condition, found: Residuals | None, tolerance: float) -> Verdict:
    if found is None:
        return Verdict(condition, 0.0, 0.0, 0.0, None, tolerance, None)
    if not found.absolute.size:
        return Verdict(condition, 0.0, 0.0, 0.0, None, tolerance, True)
    scaled = found.scaled
    worst = int(np.argmax(scaled))  # a nan counts as largest
    line = None if condition is Condition.GAP or scaled[worst] == 0 else worst
    return Verdict(
        condition,
        absolute=float(np.max(found.absolute)),
        scaled=float(scaled[worst]),
        relative=float(np.max(found.relative)),
        worst=line,
        tolerance=tolerance,
        passed=bool(scaled[worst] <= tolerance),
    )
