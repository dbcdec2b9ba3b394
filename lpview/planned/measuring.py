"""A plan's residuals, as written and within its rounding.

Each number ``v`` of a plan's file, written to a half unit ``h`` of its last digit, stands
for the interval ``[v - h, v + h]``. Carried through the terms of a line, each line by
itself, this gives a radius

- of a row value, ``sum_j |a_ij| h_j``, and of a variable, ``h_j``;
- of a dual value, ``h_i``, and of ``c_j - sum_i a_ij y_i``, ``sum_i |a_ij| h_i``.

The residual *within the rounding* is the least absolute residual over these intervals. In
a line no number occurs twice, so that it is attained; only that of the duality gap may be
smaller than any that is attained (`lpview.planned.gap`). Radii are upper bounds, at most
1e-15 of their size too large.
"""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from lpview import accurate
from lpview.decimals import low_parts_of
from lpview.file_numbers import FileNumbers
from lpview.given import GivenPlan, Written
from lpview.kkt import Condition, Low, Measurement, Residuals, Side, measure
from lpview.model import LinearProgram, Vector
from lpview.planned.gap import UPWARD, gap_radii

NOTHING = 2.0**-90
"""A residual of this size beside its largest term is rounding of the check itself."""


@dataclass(frozen=True)
class Interval:
    """A number and what it may be."""

    value: float
    """As written."""
    least: float
    """Least within the rounding."""
    greatest: float
    """Greatest within the rounding."""


@dataclass(frozen=True)
class Radii:
    """How far each number of a line may be from the one as written; rows, then columns."""

    value: Vector
    """Of row values and variables, shape ``(m + n,)``."""
    price: Vector
    """Of dual values and of ``c - A'y``, shape ``(m + n,)``; 0 where no prices are given."""


@dataclass(frozen=True, eq=False)
class Measured:
    """What there is to say about a plan before it is judged."""

    model: LinearProgram
    """The model."""
    plan: GivenPlan
    """The plan."""
    low: Low
    """What its numbers have beyond their doubles."""
    radii: Radii
    """Its rounding, line by line."""
    written: Measurement
    """As written; all about prices is meaningless where the plan has none."""
    within: dict[Condition, Residuals]
    """Least residuals within the rounding, over the same terms."""
    objective: Interval
    """``c'x + offset``."""


def measured(lp: LinearProgram, plan: GivenPlan, numbers: FileNumbers | None = None) -> Measured:
    """Measure a plan.

    Parameters
    ----------
    numbers
        ``FileNumbers(lp)``, where the caller has it already.
    """
    # Numbers out of all proportion give nan, which every judgement counts as failed.
    with np.errstate(over="ignore", invalid="ignore"):
        return _measured(lp, plan, numbers or FileNumbers(lp))


def _measured(lp: LinearProgram, plan: GivenPlan, numbers: FileNumbers) -> Measured:
    low = Low(*(None if part is None else _low(part) for part in (plan.x, plan.y, plan.z)))
    y = np.zeros(lp.m) if plan.y is None else plan.y.values
    z = None if plan.z is None else plan.z.values
    found = _settled(measure(lp, plan.x.values, y, z, numbers, low))
    radii = _radii(lp, plan)
    reach = upward(np.abs(lp.c) * plan.x.half)
    value, around = found.primal_objective, float(accurate.total([reach])[0]) * UPWARD
    return Measured(
        model=lp,
        plan=plan,
        low=low,
        radii=radii,
        written=found,
        within=_within(numbers, plan, found, radii, around),
        objective=Interval(value, value - around, value + around),
    )


def upward(sizes: Vector) -> Vector:
    """Upper bounds of sizes that were rounded a few times."""
    return sizes * UPWARD


def clear(sizes: Vector, around: Vector) -> Vector:
    """What is left of sizes >= 0 when they may change by so much; nan stays nan."""
    return np.maximum(sizes - around, 0.0)


def _low(part: Written) -> Vector:
    return low_parts_of(part.values, part.odd)


def _radii(lp: LinearProgram, plan: GivenPlan) -> Radii:
    of_rows = sums(lp.A.data, lp.A.indices, lp.A.indptr, plan.x.half)
    value = np.concatenate([of_rows, upward(plan.x.half)])
    if plan.y is None:
        return Radii(value, np.zeros(lp.m + lp.n))
    A = lp.A_by_column
    of_columns = sums(A.data, A.indices, A.indptr, plan.y.half)
    return Radii(value, np.concatenate([upward(plan.y.half), of_columns]))


def sums(
    data: Vector, indices: NDArray[np.integer], starts: NDArray[np.integer], half: Vector
) -> Vector:
    """Upper bounds of ``sum |a| h`` over the segments of a sparse matrix."""
    return upward(accurate.segment_sums([np.abs(data) * half[indices]], starts)[0])


def _within(
    numbers: FileNumbers, plan: GivenPlan, found: Measurement, radii: Radii, around: float
) -> dict[Condition, Residuals]:
    was = found.residuals
    primal = was[Condition.PRIMAL]
    within = {Condition.PRIMAL: replace(primal, absolute=clear(primal.absolute, radii.value))}
    if plan.y is None:
        return within
    dual = was[Condition.DUAL]
    within[Condition.DUAL] = replace(dual, absolute=clear(dual.absolute, radii.price))
    if plan.z is not None:
        reach = radii.price + np.concatenate([np.zeros(numbers.lp.m), upward(plan.z.half)])
        off = was[Condition.STATIONARITY]
        within[Condition.STATIONARITY] = replace(off, absolute=clear(off.absolute, reach))
    products = was[Condition.COMPLEMENTARITY]
    least = least_products(found, radii)
    # The product as written is one of them, however the two are rounded.
    least = np.minimum(least, products.absolute)
    within[Condition.COMPLEMENTARITY] = replace(products, absolute=least)
    below, above = gap_radii(numbers, found, radii.price, plan.y.half)
    sign = numbers.lp.sense.sign
    low, high = found.gap - around, found.gap + around
    low, high = (low - above, high + below) if sign > 0 else (low - below, high + above)
    least_gap = np.maximum(np.array([low]), np.array([-high]))
    within[Condition.GAP] = replace(was[Condition.GAP], absolute=np.maximum(least_gap, 0.0))
    return within


def least_products(found: Measurement, radii: Radii) -> Vector:
    """Least ``|price|`` times distance over both intervals.

    It is 0 where the price may be 0, so that no price changes its sign here, or the side
    that it names.
    """
    price, distance = prices(found), distances(found)
    return clear(np.abs(price), radii.price) * clear(np.abs(distance), radii.value)


def prices(found: Measurement) -> Vector:
    """Prices of all lines, shape ``(m + n,)``."""
    return np.concatenate([found.rows.price, found.columns.price])


def distances(found: Measurement) -> Vector:
    """Signed distance of all lines to the side that their price names, negative beyond it;
    0 where there is no such side or no price."""
    return np.concatenate([_distance(side) for side in (found.rows, found.columns)])


def _distance(side: Side) -> Vector:
    named = np.where(side.named_lower, side.below, side.above)
    return np.where(np.isinf(named) | (side.price == 0), 0.0, named)


def _settled(found: Measurement) -> Measurement:
    """The same without the rounding of the check itself, so that 0.1 + 0.2 is at most 0.3."""
    residuals = {
        condition: replace(part, absolute=_without(part.absolute, part.term))
        for condition, part in found.residuals.items()
    }
    rows, columns = _tidy(found.rows), _tidy(found.columns)
    return replace(found, rows=rows, columns=columns, residuals=residuals)


def _tidy(side: Side) -> Side:
    size = np.maximum(side.value_term, np.abs(side.value))
    return replace(side, below=_without(side.below, size), above=_without(side.above, size))


def _without(sizes: Vector, terms: Vector) -> Vector:
    return np.where(np.abs(sizes) <= terms * NOTHING, 0.0, sizes)
