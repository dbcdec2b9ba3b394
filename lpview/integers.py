"""What stands in place of integer columns, since a linear program has none.

Either they are refused, or taken as continuous (the linear relaxation), or fixed at the
whole numbers of a plan. The report says which, in its first line.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace
from fractions import Fraction

import numpy as np

from lpview.blocks.mistakes import InputError, Mistake, printable, quoted
from lpview.decimals import exact_value, number_text
from lpview.given import GivenPlan
from lpview.model import LinearProgram, frozen_odd
from lpview.reading import InPlace, Reading, Scope

ADVICE = (
    "--relax checks its linear relaxation, "
    "--fix-integers PLAN.csv checks the rest at a plan's integer values"
)
"""What to do with a model that has integer columns."""


def linear(reading: Reading, source: str) -> Reading:
    """The reading as it is. Raises `InputError` where it has integer columns.

    Parameters
    ----------
    source
        The model as the person named it.
    """
    if not reading.integers:
        return reading
    name = quoted(reading.model.columns[reading.integers[0]])
    got = f"{_columns(reading.integers)}, such as {name}"
    raise InputError([Mistake(source, "a linear program", got, advice=ADVICE)])


def relaxed(reading: Reading) -> Reading:
    """The linear relaxation: integer columns may take any value within their bounds."""
    if not reading.integers:
        return reading.remarked("no integer columns to relax")
    scope = Scope(InPlace.RELAXED, len(reading.integers))
    return replace(reading, integers=(), notes=replace(reading.notes, scope=scope))


def fixed(reading: Reading, plan: GivenPlan, source: str) -> Reading:
    """The linear program that is left when a plan's whole numbers are kept.

    Parameters
    ----------
    plan
        Its value is both bounds of every integer column, 0 where it lists none.
    source
        The model as the person named it.

    Raises
    ------
    InputError
        Values are no whole numbers, or outside of the column's bounds.
    """
    if not reading.integers:
        return reading.remarked("no integer columns to fix")
    values = {j: exact_value(plan.x.values[j], plan.x.odd.get(j)) for j in reading.integers}
    mistakes = [m for j in values if (m := _mistake(reading.model, j, values[j], plan, source))]
    if mistakes:
        raise InputError(mistakes)
    unlisted = [j for j in values if not plan.x.listed[j]]
    if unlisted:
        first = quoted(reading.model.columns[unlisted[0]])
        verb, was = ("is", "was") if len(unlisted) == 1 else ("are", "were")
        remark = (
            f"{len(unlisted)} of {_columns(reading.integers)} {verb} not in "
            f"{printable(plan.file)} and {was} fixed at 0, the first {first}"
        )
        reading = reading.remarked(remark)
    scope = Scope(InPlace.FIXED, len(reading.integers), printable(plan.file))
    model = _fixed_model(reading.model, values)
    return replace(reading, model=model, integers=(), notes=replace(reading.notes, scope=scope))


def _mistake(
    lp: LinearProgram, j: int, value: Fraction, plan: GivenPlan, source: str
) -> Mistake | None:
    """What is wrong with the value of an integer column, if anything is."""
    low, high = float(lp.lower[j]), float(lp.upper[j])
    below, above = lp.odd.get("lower", {}).get(j), lp.odd.get("upper", {}).get(j)
    beyond = (np.isfinite(low) and value < exact_value(low, below)) or (
        np.isfinite(high) and value > exact_value(high, above)
    )
    if value.denominator == 1 and not beyond:
        return None
    expected = "a whole number"
    if beyond:
        bounds = f"{number_text(low, below)} to {number_text(high, above)}"
        expected += f" within the bounds {bounds} of {printable(source)}"
    got = number_text(float(plan.x.values[j]), plan.x.odd.get(j))
    if not plan.x.listed[j]:
        got = "no value, which stands for 0"
    return Mistake(plan.file, expected, got, field=f"column {quoted(lp.columns[j])}")


def _fixed_model(lp: LinearProgram, values: dict[int, Fraction]) -> LinearProgram:
    lower, upper = lp.lower.copy(), lp.upper.copy()
    odd = {part: dict(numbers) for part, numbers in lp.odd.items()}
    for part, ends in (("lower", lower), ("upper", upper)):
        kept = odd.setdefault(part, {})
        for j, value in values.items():
            ends[j] = float(value)
            kept.pop(j, None)
            if value != exact_value(ends[j]):
                kept[j] = value
    return replace(lp, lower=lower, upper=upper, odd=frozen_odd(odd))


def _columns(columns: Sequence[int]) -> str:
    return f"{len(columns)} integer column" + ("" if len(columns) == 1 else "s")
