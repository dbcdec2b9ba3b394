"""Several right-hand sides moved together, against what the one-row prices say."""

from __future__ import annotations

import math
from collections.abc import Sequence

from lpview.outcomes import Optimal
from lpview.prices import Alone, Then, Together
from lpview.report import asking
from lpview.report.document import Document, Sentence, Table
from lpview.report.names import fitted
from lpview.report.numbers import in_full, number
from lpview.report.price_words import AFTERWARDS, effect
from lpview.report.prices import closing, opening
from lpview.report.units import labelled, objective_unit

Moves = Sequence[tuple[int, float]]
"""Rows, numbered from 0, and by how much the right-hand side of each moves."""


def asking_moves(found: Optimal, moves: Moves) -> Optimal:
    """The same answer, as asked for by its command with the moves."""
    words: list[str] = []
    for row, amount in moves:
        text = f"{found.head.model.rows[row]}={in_full(amount)}"
        # A name that begins like an option has to be tied to its own.
        words += [f"--move={text}"] if text.startswith("-") else ["--move", text]
    return asking(found, *words)


def together_report(found: Optimal, together: Together) -> Document:
    """What the moves are worth together, and what each is worth alone."""
    lp, unit = found.head.model, objective_unit(found.head)
    in_unit = f" in {unit}" if unit else ""
    header = ("row", "amount", "moved", f"change for each unit of t, alone{in_unit}")
    cells = tuple(
        (
            fitted(lp.rows[alone.row]),
            number(alone.amount),
            _side(found, alone),
            number(alone.rate),
        )
        for alone in together.separate
    )
    table = Table("each row moved alone", header, cells, (False, True, False, True))
    return (
        *opening(found),
        Sentence(_together(together, lp.sense.sign, unit)),
        Sentence(_alone(together, lp.sense.sign, unit)),
        labelled(found.head, table, [alone.row for alone in together.separate], units=True),
        *closing(found),
    )


def _side(found: Optimal, alone: Alone) -> str:
    if not found.marks.paired[alone.row]:
        return "right-hand side"
    return "upper side" if alone.is_high else "lower side"


def _together(together: Together, sign: float, unit: str) -> str:
    if math.isnan(together.rate):
        return "What these rows are worth moved together was not found out."
    if math.isinf(together.rate):
        them = "it leaves" if len(together.separate) == 1 else "together they leave"
        return f"Moved by any part of these amounts, {them} no plan."
    worth = effect(together.rate, sign, unit)
    change = f"Moved together by t times these amounts, each unit of t {worth}"
    if together.then is Then.NEVER:
        return f"{change}, however large t is."
    if together.then is Then.NOT_FOUND:
        return f"{change}; how far that holds was not found out."
    return f"{change}, for t up to {number(together.distance)}, {AFTERWARDS[together.then]}."


def _alone(together: Together, sign: float, unit: str) -> str:
    """What adding up the one-row rates would have said."""
    rates = [alone.rate for alone in together.separate]
    if len(rates) == 1:
        return "It is one row, so there is nothing to add up."
    if not all(map(math.isfinite, rates)):
        return "Moved alone, at least one of them leaves no plan, so prices cannot be added."
    added = together.sum_of_separate
    near = 1e-9 * max(1.0, *map(abs, rates))
    if abs(added - together.rate) <= near:
        return "The one-row rates add up to the same."
    return (
        f"The one-row rates would have said that each unit of t {effect(added, sign, unit)}: no "
        "single dual solution attains them all."
    )
