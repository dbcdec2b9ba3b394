"""What moving a limit is worth, in everyday words: what it earns, saves or costs.

An objective whose unit is known is taken for what it is counted in: to be maximized, it is
earned; to be minimized, it is spent. Without a unit it is the objective that improves.
"""

from __future__ import annotations

import enum
import math
from decimal import Decimal

import numpy as np

from lpview.ledger import Ledger, ledger
from lpview.model import LinearProgram
from lpview.outcomes import Optimal
from lpview.prices import LinePrices, Move, Then
from lpview.report.numbers import number
from lpview.report.prices import active, is_lower
from lpview.report.units import Units, in_units, units_of

WRITTEN_OUT = 1e-9, 1e15
"""Sizes between which numbers are written without an exponent."""


class Limit(enum.Enum):
    """Which way a limit holds."""

    UPPER = "at most"
    """An upper side or bound."""
    LOWER = "at least"
    """A lower side or bound."""
    BOTH = "exactly"
    """An equality row or fixed column: both ends move together."""


def limit_of(found: Optimal, line: int) -> Limit:
    """The limit that a line sits at, else the nearest; for a line that has any."""
    if not found.marks.paired[line]:
        return Limit.BOTH
    return Limit.LOWER if is_lower(found, line) else Limit.UPPER


def written_out(value: float) -> str:
    """A number of at least six digits, without an exponent as far as that can be read."""
    size = abs(value)
    if not WRITTEN_OUT[0] <= size < WRITTEN_OUT[1]:
        return number(value)
    digits = max(6, math.floor(math.log10(size)) + 1)
    return format(Decimal(number(value, digits)), "f")


def written_amount(value: float, unit: str) -> str:
    """The same with its unit."""
    return in_units(written_out(value), unit)


def gain(change: float, sign: float, unit: str) -> str:
    """What a change of the objective is: ``earns 2 EUR``; ``sign`` is that of the sense."""
    if change == 0:
        return "changes nothing"
    better, size = sign * change < 0, abs(change)
    if not unit:
        return f"{'improves' if better else 'worsens'} the objective by {written_out(size)}"
    verb = ("saves" if sign > 0 else "earns") if better else "costs"
    return f"{verb} {written_amount(size, unit)}"


def many(amount: float, units: Units) -> str:
    """``40 kWh``, ``1 unit``, ``2 units``."""
    return f"{written_out(amount)} {units.own or ('unit' if amount == 1 else 'units')}"


def step_sentence(found: Optimal, line: int, prices: LinePrices) -> str:
    """What one unit more and one less of a line's limit is worth; empty where that says nothing.

    It says something where the unit of the objective is known and the limit has a rate.
    """
    units, moves = units_of(found.head, line), active(found, line, prices)
    if not (units.objective and found.passed and moves):
        return ""
    if moves.up.rate == 0 == moves.down.rate:
        return ""
    lp, where = found.head.model, _where(found, line)
    more = _step(moves.up, True, lp, units, where)
    return f"{more[0].upper()}{more[1:]}; {_step(moves.down, False, lp, units)}."


def _where(found: Optimal, line: int) -> str:
    limit = limit_of(found, line)
    if line >= found.head.model.m:
        ends = {Limit.UPPER: "upper bound", Limit.LOWER: "lower bound", Limit.BOTH: "fixed value"}
        return f" on its {ends[limit]}"
    return "" if limit is Limit.UPPER else " required"


def _step(move: Move, up: bool, lp: LinearProgram, units: Units, where: str = "") -> str:
    way = "more" if up else "less"
    if math.isinf(move.rate):
        return f"any {way}{where} {_at_once(move)}"
    worth = gain(move.rate if up else -move.rate, lp.sense.sign, units.objective)
    if move.distance >= 1:
        return f"one {units.one} {way}{where} {worth}"
    return f"each {units.one} {way}{where} {worth}, {_far(move, way, units)}"


def moves_words(found: Optimal, line: int, prices: LinePrices) -> str:
    """What moving a line's limit is worth, looser first, both ways and how far."""
    moves, limit = active(found, line, prices), limit_of(found, line)
    assert moves is not None
    lp, units = found.head.model, units_of(found.head, line)
    ways = [(moves.up, True), (moves.down, False)]
    if limit is Limit.LOWER:
        ways.reverse()
    return "; ".join(_clause(move, up, lp, units, limit) for move, up in ways)


def _clause(move: Move, up: bool, lp: LinearProgram, units: Units, limit: Limit) -> str:
    way = "more" if up else "less"
    named = way if limit is Limit.UPPER else f"{way} required"
    if math.isinf(move.rate):
        return f"any {named} {_at_once(move)}"
    worth = gain(move.rate if up else -move.rate, lp.sense.sign, units.objective)
    return f"each {units.one} {named} {worth}, {_far(move, way, units)}"


def _at_once(move: Move) -> str:
    if move.then is Then.UNBOUNDED:
        return "lets the objective improve without limit"
    return "leaves no plan"


def _far(move: Move, way: str, units: Units) -> str:
    if move.then is Then.NEVER:
        return f"however much {way}"
    far = many(move.distance, units)
    if move.then is Then.NOT_FOUND:
        surely = f"for {far} {way} at least, but " if move.distance > 0 else "but "
        return f"{surely}how far that holds was not found out"
    ends = {
        Then.INFEASIBLE: ", and beyond that no plan is left",
        Then.UNBOUNDED: ", and beyond that the objective improves without limit",
    }
    return f"for up to {far} {way}{ends.get(move.then, '')}"


def bounds_words(found: Optimal, line: int) -> str:
    """What the price in the answer says of moving a line's limit, whichever price it is.

    It is the slope of a line that the optimal objective never crosses
    (`lpview.report.ledger_words`), so it bounds what every whole step is worth.
    """
    entry, limit, units = ledger(found, line), limit_of(found, line), units_of(found.head, line)
    required = "" if limit is Limit.UPPER else " required"
    if not entry.priced:
        return (
            f"it has no price in this answer, but each {units.one} {_tighter(limit)}{required} may "
            "still cost something, or leave no plan"
        )
    looser = "less" if entry.named_lower else "more"
    tighter = "more" if entry.named_lower else "less"
    sign, size = found.head.model.sense.sign, abs(entry.price)
    best, worst = (
        gain(-sign * size, sign, units.objective),
        gain(sign * size, sign, units.objective),
    )
    return (
        f"one {units.one} {looser}{required} {_at('at most', best, size, units)}; one {units.one} "
        f"{tighter}{required} {_at('at least', worst, size, units)}, or leaves no plan"
    )


def _tighter(limit: Limit) -> str:
    return {Limit.UPPER: "less", Limit.LOWER: "more", Limit.BOTH: "more or less"}[limit]


def _at(words: str, worth: str, size: float, units: Units) -> str:
    """``earns at most 2 EUR``."""
    text = written_amount(size, units.objective)
    return f"{worth.removesuffix(text)}{words} {text}"


def end_of(entry: Ledger, limit: Limit) -> float:
    """The side or bound itself."""
    return entry.lower if limit is Limit.LOWER else entry.upper


def is_rate_same(prices: LinePrices, found: Optimal, line: int) -> bool:
    """Whether a limit is worth the same both ways, so that one price says it all."""
    moves = active(found, line, prices)
    if moves is None or (math.isinf(moves.up.rate) and math.isinf(moves.down.rate)):
        return True
    return bool(np.isclose(moves.up.rate, moves.down.rate, rtol=1e-9, atol=0.0))
