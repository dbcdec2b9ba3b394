"""What moving a limit is worth, in everyday words: what it earns, saves or costs.

An objective whose unit is known is taken for what it is counted in: to be maximized, it is
earned; to be minimized, it is spent. Without a unit it is the objective that improves.
"""

from __future__ import annotations

import enum
import math
from decimal import ROUND_HALF_EVEN, Context, Decimal

import numpy as np

from lpview.decimals import PRINTED_DIGITS
from lpview.ledger import Ledger
from lpview.model import LinearProgram
from lpview.outcomes import Optimal
from lpview.prices import LinePrices, Move, Then
from lpview.report.numbers import number
from lpview.report.price_words import improves
from lpview.report.prices import active, is_lower
from lpview.report.units import Units, in_units, units_of

WRITTEN_OUT = 1e-9, 1e15
"""Sizes between which numbers are written without an exponent."""
SURE_DIGITS = 9
"""Significant digits beyond which a number that is cut is taken for rounding."""


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


def written_out(value: float, digits: int = PRINTED_DIGITS, rounding: str = ROUND_HALF_EVEN) -> str:
    """A number without an exponent as far as that can be read, and with all digits before its
    decimal mark.

    Parameters
    ----------
    digits
        Significant digits, at least.
    rounding
        How the others are left off, a name of `decimal`. Whatever is not rounded to the
        nearest is so first, at `SURE_DIGITS`, so that 0.4999999999 is not cut to 0.4999.
    """
    size = abs(value)
    if size == 0 or math.isinf(value) or math.isnan(value):
        return number(value)
    readable = WRITTEN_OUT[0] <= size < WRITTEN_OUT[1]
    if readable:
        digits = max(digits, math.floor(math.log10(size)) + 1)
    known = Decimal(float(value))
    if rounding != ROUND_HALF_EVEN:
        known = Context(prec=max(SURE_DIGITS, digits + 2)).plus(known)
    rounded = Context(prec=digits, rounding=rounding).plus(known)
    return format(rounded.normalize(), "f") if readable else number(float(rounded))


def written_amount(value: float, unit: str) -> str:
    """The same with its unit, at the digits that everything is printed with."""
    return in_units(written_out(value), unit)


def gain(change: float, sign: float, unit: str) -> str:
    """What a change of the objective is: ``earns 2 EUR``; ``sign`` is that of the sense."""
    if change == 0:
        return "changes nothing"
    better, size = improves(change, sign), abs(change)
    if not unit:
        return f"{'improves' if better else 'worsens'} the objective by {written_out(size)}"
    verb = ("saves" if sign > 0 else "earns") if better else "costs"
    return f"{verb} {written_amount(size, unit)}"


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


def _at_once(move: Move) -> str:
    if move.then is Then.UNBOUNDED:
        return "lets the objective improve without limit"
    return "leaves no plan"


def _far(move: Move, way: str, units: Units) -> str:
    if move.then is Then.NEVER:
        return f"however much {way}"
    far = units.many(written_out(move.distance))
    if move.then is Then.NOT_FOUND:
        surely = f"for {far} {way} at least, but " if move.distance > 0 else "but "
        return f"{surely}how far that holds was not found out"
    ends = {
        Then.INFEASIBLE: ", and beyond that no plan is left",
        Then.UNBOUNDED: ", and beyond that the objective improves without limit",
    }
    return f"for up to {far} {way}{ends.get(move.then, '')}"


def end_of(entry: Ledger, limit: Limit) -> float:
    """The side or bound itself."""
    return entry.lower if limit is Limit.LOWER else entry.upper


def is_rate_same(prices: LinePrices, found: Optimal, line: int) -> bool:
    """Whether a limit is worth the same both ways, so that one price says it all."""
    moves = active(found, line, prices)
    if moves is None or (math.isinf(moves.up.rate) and math.isinf(moves.down.rate)):
        return True
    return bool(np.isclose(moves.up.rate, moves.down.rate, rtol=1e-9, atol=0.0))
