"""Digits to believe, as parts of a document."""

from __future__ import annotations

import math

from lpview.model import LinearProgram
from lpview.outcomes import Head, Optimal
from lpview.prices.digits import Digits, Spread
from lpview.prices.results import NoPrices
from lpview.report.document import Block, Facts, Sentence, Table
from lpview.report.names import fitted, line_name
from lpview.report.numbers import count, number, residual
from lpview.report.units import labelled


def digits_blocks(
    found: Optimal, digits: Digits | NoPrices, full: bool = False
) -> tuple[Block, ...]:
    """How many digits of the answer to believe."""
    lp = found.head.model
    if isinstance(digits, NoPrices):
        return (Sentence(f"digits were not estimated: {digits.reason}"),)
    column, row = digits.worst_column, digits.worst_row
    plan = "no variable is different from zero"
    if column is not None:
        fewest = _whole(float(digits.x[column]))
        name = line_name(lp, lp.m + column)
        plan = f"at least {fewest} in each variable that is not zero (fewest in {name})"
    prices = "no row has a price"
    if row is not None:
        fewest, name = _whole(float(digits.y[row])), line_name(lp, row)
        prices = f"at least {fewest} in each dual value that is not zero (fewest in {name})"
    blocks: tuple[Block, ...] = (
        Facts(
            (
                ("condition of the basis", _condition(digits.condition)),
                ("coefficients", _coefficients(lp, digits)),
                ("digits of the objective", _whole(digits.objective)),
                ("digits of the plan", plan),
                ("digits of the dual values", prices),
            )
        ),
        Sentence(
            "Digits are estimated from the basis solved again more precisely; they count the "
            "rounding of this answer and take the numbers of the file as exact."
        ),
    )
    return (*blocks, *_tables(found.head, digits)) if full else blocks


def _condition(condition: float) -> str:
    lost = max(0, math.ceil(math.log10(max(condition, 1.0))))
    return (
        f"{residual(condition)}: a relative change of the basis's coefficients can grow by this "
        f"factor, about {count(lost, 'digit')}"
    )


def _coefficients(lp: LinearProgram, digits: Digits) -> str:
    if digits.by_row.line is None:
        return "none"
    within = ", ".join(f"in {_spread(lp, spread)}" for spread in (digits.by_row, digits.by_column))
    return f"sizes {number(digits.smallest)} to {number(digits.largest)}; most apart {within}"


def _spread(lp: LinearProgram, spread: Spread) -> str:
    assert spread.line is not None
    return f"{line_name(lp, spread.line)} (ratio {residual(spread.largest)})"


def _whole(digits: float) -> str:
    return str(math.floor(digits))


def _tables(head: Head, digits: Digits) -> tuple[Table, ...]:
    lp, tables = head.model, []
    for title, names, values, errors in (
        ("digits of the plan", lp.columns, digits.x, digits.x_error),
        ("digits of the dual values", lp.rows, digits.y, digits.y_error),
    ):
        cells = tuple(
            (fitted(name), _whole(float(value)), residual(float(error)))
            for name, value, error in zip(names, values, errors, strict=True)
        )
        kind, first = ("column", lp.m) if names is lp.columns else ("row", 0)
        table = Table(title, (kind, "digits", "estimated error"), cells, (False, True, True))
        tables.append(labelled(head, table, range(first, first + len(names))))
    return tuple(tables)
