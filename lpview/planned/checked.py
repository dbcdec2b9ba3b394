"""Everything known about a plan, for reports and the exit status."""

from __future__ import annotations

from dataclasses import dataclass

from lpview.file_numbers import FileNumbers
from lpview.outcomes import Examination, NoOptimum, Optimal
from lpview.planned.judging import Judged, judged
from lpview.planned.limits import Limits
from lpview.planned.measuring import Measured
from lpview.planned.optimum import Against, Multipliers, against_optimum


@dataclass(frozen=True, eq=False)
class CheckedPlan:
    """A plan, measured and judged, beside what a solver has to say about the model."""

    found: Measured
    """What was measured."""
    judgement: Judged
    """What it comes to."""
    outcome: Examination
    """The model solved and checked, whatever came of it."""
    against: Against | None
    """The plan beside the optimum; None where no checked optimum is known."""
    rounded: bool
    """Whether it is enough that conditions hold within the rounding."""

    @property
    def passed(self) -> bool:
        """Whether every condition that can be judged passed as written; whatever the solver
        says."""
        return not self.judgement.failing(rounded=False)

    @property
    def accepted(self) -> bool:
        """The same, or within the rounding, where that is enough."""
        return not self.judgement.failing(self.rounded)

    @property
    def optimal(self) -> bool | None:
        """Whether some dual values, its own or those of the optimum, make the plan optimal, as
        written; None where that is not known."""
        if not self.judgement.feasible:
            return False
        own = self.found.plan.y is not None and self.passed
        if isinstance(self.outcome, NoOptimum):
            return None if own else False
        multipliers = self.against.multipliers if self.against else None
        if own or multipliers is Multipliers.THOSE_FOUND:
            return True
        return False if multipliers is Multipliers.NONE else None


def checked_plan(
    found: Measured,
    outcome: Examination,
    limits: Limits,
    rounded: bool,
    numbers: FileNumbers | None = None,
) -> CheckedPlan:
    """Judge a plan that was measured, beside the examination of its model."""
    judgement = judged(found, outcome.head.request.tolerance, limits)
    against = None
    if isinstance(outcome, Optimal) and outcome.passed:
        against = against_optimum(found, judgement, outcome, numbers)
    return CheckedPlan(found, judgement, outcome, against, rounded)
