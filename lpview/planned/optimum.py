"""A plan against the optimum: how far it is, and whether any multipliers make it optimal.

For a feasible plan ``x`` and the checked dual values of any optimum, the objective of
``x`` exceeds the optimal one (falls short of it, maximizing) by the sum over all lines of
``|price|`` times the distance to the side that the price names. So multipliers that make
``x`` optimal exist exactly where all these products are 0, and then those dual values are
such multipliers: it does not matter which optimal dual solution was found. Where the sum is
not 0, weak duality bounds every other dual objective by the optimal one, so that none closes
the gap (Dantzig 1963, "Linear Programming and Extensions", chapter 6; Chvátal 1983, "Linear
Programming", chapter 5; both from memory).
"""

from __future__ import annotations

import enum
from dataclasses import dataclass

import numpy as np

from lpview.file_numbers import FileNumbers
from lpview.kkt import Condition, Measurement, Residuals, measure
from lpview.outcomes import Optimal
from lpview.planned.judging import Judged
from lpview.planned.measuring import (
    NOTHING,
    Interval,
    Measured,
    Radii,
    distances,
    least_products,
    prices,
)


class Multipliers(enum.Enum):
    """Whether any dual values make a plan optimal."""

    THOSE_FOUND = "the dual values of the optimum make it optimal"
    """Every product and the gap are within the tolerance."""
    NONE = "no dual values make it optimal"
    """The gap to the optimum exceeds the tolerance."""
    ON_THE_EDGE = "not settled at this tolerance"
    """The gap is within the tolerance, a product is not."""
    NOT_FEASIBLE = "not judged, for the plan is not feasible"
    """The plan is not feasible as written."""


@dataclass(frozen=True)
class LineCost:
    """What one line costs a plan against the optimum."""

    line: int
    """Numbered as in `lpview.kkt`."""
    price: float
    """Its price in the optimum's dual solution."""
    distance: float
    """Distance of the plan to the side that the price names; negative beyond it."""
    product: float
    """``|price|`` times that distance, objective units; negative where a violation gains."""


@dataclass(frozen=True)
class Against:
    """A plan beside the checked optimum of a solver."""

    optimum: float
    """The optimal objective."""
    distance: float
    """How far the plan's objective is from it in the direction of the sense, so that a
    feasible plan has at least 0; negative where the plan's objective is better."""
    relative: float | None
    """The distance over the size of the optimal objective; None where that is 0."""
    multipliers: Multipliers
    """Whether any dual values make it optimal, as written."""
    could_be: bool
    """Whether some plan within the rounding may be optimal; False is certain within the
    tolerance."""
    gap: float
    """Between the plan's objective and the dual objective of the optimum's dual values:
    what all lines cost together, however little each does."""
    lines: tuple[LineCost, ...]
    """Every line whose product is not zero, by what counts as zero, scaled; the largest
    first."""

    @property
    def costing(self) -> tuple[LineCost, ...]:
        """Lines that cost something."""
        return tuple(one for one in self.lines if one.product > 0)

    @property
    def gaining(self) -> tuple[LineCost, ...]:
        """Lines whose violation gains something."""
        return tuple(one for one in self.lines if one.product < 0)


def against_optimum(
    found: Measured, judgement: Judged, best: Optimal, numbers: FileNumbers | None = None
) -> Against:
    """Compare a plan with a solver's answer that passed its check.

    Parameters
    ----------
    numbers
        ``FileNumbers(best.head.model)``, where the caller has it already.
    """
    lp, x = found.model, found.plan.x.values
    with np.errstate(over="ignore", invalid="ignore"):
        beside = measure(lp, x, best.answer.y, None, numbers, found.low)
    optimum = best.measurement.primal_objective
    distance = lp.sense.sign * (found.objective.value - optimum) + 0.0  # never -0.0
    return Against(
        optimum=optimum,
        distance=distance,
        relative=distance / abs(optimum) if optimum else None,
        multipliers=_multipliers(judgement, beside),
        could_be=_could_be(found, judgement, beside, optimum),
        gap=beside.gap,
        lines=_lines(beside, best.head.request.zero),
    )


def _could_be(found: Measured, judgement: Judged, beside: Measurement, optimum: float) -> bool:
    """Whether the rounding leaves room for an optimal plan.

    No plan within it is optimal where a line cannot hold, where a price of an optimal dual
    solution, measured ``beside`` the plan, stays away from its side, or where all objectives
    are off the optimal one. The reverse is not said: each line is looked at by itself.
    """
    lp, tolerance = found.model, judgement.tolerance
    if not judgement.feasible_within:
        return False
    exact = Radii(found.radii.value, np.zeros(lp.m + lp.n))
    with np.errstate(over="ignore", invalid="ignore"):
        products = Residuals(
            least_products(beside, exact), beside.residuals[Condition.COMPLEMENTARITY].term
        )
    return _all_within(products, tolerance) and _reaches(found.objective, optimum, tolerance)


def _reaches(objective: Interval, optimum: float, tolerance: float) -> bool:
    room = tolerance * max(1.0, abs(optimum))
    return objective.least <= optimum + room and objective.greatest >= optimum - room


def _multipliers(judgement: Judged, beside: Measurement) -> Multipliers:
    if not judgement.feasible:
        return Multipliers.NOT_FEASIBLE
    tolerance = judgement.tolerance
    if not _all_within(beside.residuals[Condition.GAP], tolerance):
        return Multipliers.NONE
    products = beside.residuals[Condition.COMPLEMENTARITY]
    return Multipliers.THOSE_FOUND if _all_within(products, tolerance) else Multipliers.ON_THE_EDGE


def _all_within(part: Residuals, tolerance: float) -> bool:
    return bool((part.scaled <= tolerance).all())


def _lines(beside: Measurement, zero: float) -> tuple[LineCost, ...]:
    price, distance = prices(beside), distances(beside)
    product = np.abs(price) * distance
    term = beside.residuals[Condition.COMPLEMENTARITY].term
    # Where nothing but 0 counts as zero, the rounding of the check itself still does.
    least = np.maximum(zero * np.maximum(1.0, term), NOTHING * term)
    lines = np.flatnonzero(np.abs(product) > least)
    order = lines[np.argsort(-np.abs(product[lines]), kind="stable")]
    return tuple(
        LineCost(k, float(price[k]), float(distance[k]), float(product[k])) for k in order.tolist()
    )
