"""Checking a plan that another system or a person produced.

Every condition is judged twice: *as written*, on the exact numbers of the plan's file,
and *within its rounding*, where each value may be anywhere within half a unit of its last
written digit, each line by itself. `measured` carries the rounding through the lines,
`judged` judges, `against_optimum` compares with the checked answer of a solver, and
`checked_plan` does all three; none of them solves.
"""

from lpview.planned.checked import CheckedPlan, checked_plan
from lpview.planned.judging import (
    Failing,
    Judged,
    PlanVerdict,
    Standing,
    failing_lines,
    judged,
    violated,
    worst_limit,
)
from lpview.planned.limits import Limits, limits_of
from lpview.planned.measuring import Interval, Measured, measured
from lpview.planned.optimum import Against, LineCost, Multipliers, against_optimum

__all__ = [
    "Against",
    "CheckedPlan",
    "Failing",
    "Interval",
    "Judged",
    "Limits",
    "LineCost",
    "Measured",
    "Multipliers",
    "PlanVerdict",
    "Standing",
    "against_optimum",
    "checked_plan",
    "failing_lines",
    "judged",
    "limits_of",
    "measured",
    "violated",
    "worst_limit",
]
