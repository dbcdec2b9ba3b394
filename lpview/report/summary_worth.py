"""What moving a limit is worth, on the page for whoever decides: four digits and no more.

Distances are cut, never rounded up, so that a move as printed can still be made.
"""

from __future__ import annotations

import math
from decimal import ROUND_CEILING, ROUND_DOWN, ROUND_FLOOR

from lpview.ledger import ledger
from lpview.outcomes import Optimal
from lpview.prices import LinePrices, Move, Then
from lpview.report.price_words import improves
from lpview.report.prices import active
from lpview.report.units import Units, in_units, units_of
from lpview.report.worth import Limit, is_rate_same, limit_of, written_out

DIGITS = 4
"""Significant digits of rates and distances."""


def moves_words(found: Optimal, line: int, prices: LinePrices) -> str:
    """What moving a line's limit is worth, looser first, both ways and how far."""
    moves, limit = active(found, line, prices), limit_of(found, line)
    assert moves is not None
    ways = [(moves.up, True), (moves.down, False)]
    if limit is Limit.LOWER:
        ways.reverse()
    worth = _Worth(found, line)
    if math.isinf(moves.up.rate) and math.isinf(moves.down.rate):
        return f"any more or less{worth.required} leaves no plan"
    if is_rate_same(prices, found, line) and moves.up.rate:
        return worth.once(ways[0], ways[1])
    return worth.twice(ways[0], ways[1])


Way = tuple[Move, bool]
"""A move, and whether it goes up."""


class _Worth:
    """The words for one limit."""

    def __init__(self, found: Optimal, line: int) -> None:
        self.units = units_of(found.head, line)
        self.sign = found.head.model.sense.sign
        self.required = "" if limit_of(found, line) is Limit.UPPER else " required"

    def once(self, first: Way, second: Way) -> str:
        """Both ways, where their rate is the same."""
        size = written_out(abs(first[0].rate), DIGITS)
        whole = f"is worth {in_units(size, self.units.objective)}"
        if not self.units.objective:
            whole = f"moves the objective by {size}"
        verbs = [
            f"{_way(up)} {self.verb(move, up)} it ({self.far(move)})"
            for move, up in (first, second)
        ]
        return f"each {self.units.one}{self.required} {whole}: {', '.join(verbs)}"

    def twice(self, first: Way, second: Way) -> str:
        """Each way for itself; of what, and that it is required, is said once."""
        named = "it" if self.says_objective(first[0]) else "the objective"
        return (
            f"{self.clause(*first, self.required, 'the objective')}, "
            f"{self.clause(*second, '', named)}"
        )

    def says_objective(self, move: Move) -> bool:
        """Whether a clause names the objective."""
        return not self.units.objective and math.isfinite(move.rate) and move.rate != 0

    def clause(self, move: Move, up: bool, required: str, objective: str) -> str:
        """``each unit more improves the objective by 2 (for 40 units)``."""
        if math.isinf(move.rate):
            return f"any {_way(up)}{required} leaves no plan"
        each = f"each {self.units.one} {_way(up)}{required}"
        if move.rate == 0:
            return f"{each} changes nothing ({self.far(move)})"
        size = written_out(abs(move.rate), DIGITS)
        worth = in_units(size, self.units.objective)
        if not self.units.objective:
            worth = f"{objective} by {size}"
        return f"{each} {self.verb(move, up)} {worth} ({self.far(move)})"

    def verb(self, move: Move, up: bool) -> str:
        """What a move does, whose rate is not 0."""
        better = improves(move.rate if up else -move.rate, self.sign)
        return self.better if better else self.worse

    @property
    def better(self) -> str:
        if not self.units.objective:
            return "improves"
        return "saves" if self.sign > 0 else "earns"

    @property
    def worse(self) -> str:
        return "costs" if self.units.objective else "worsens"

    def far(self, move: Move) -> str:
        """How far a rate holds, and what happens then."""
        if move.then is Then.NEVER:
            return "however much"
        if move.then is Then.NOT_FOUND:
            surely = f"for {self.many(move.distance)} at least; " if move.distance > 0 else ""
            return f"{surely}how far was not found out"
        end = ", then no plan is left" if move.then is Then.INFEASIBLE else ""
        return f"for {self.many(move.distance)}{end}"

    def many(self, distance: float) -> str:
        """``46.2 litre``, cut so that the move as printed can still be made."""
        return self.units.many(written_out(distance, DIGITS, ROUND_DOWN))


def _way(up: bool) -> str:
    return "more" if up else "less"


def bounds_words(found: Optimal, line: int) -> str:
    """What the price in the answer says of moving a line's limit, whichever price it is.

    It is the slope of a line that the optimal objective never crosses
    (`lpview.report.ledger_words`), so it bounds what every whole step is worth.
    """
    entry, limit, worth = ledger(found, line), limit_of(found, line), _Worth(found, line)
    one, required = worth.units.one, worth.required
    if not entry.priced:
        tighter = {Limit.UPPER: "less", Limit.LOWER: "more", Limit.BOTH: "more or less"}[limit]
        return (
            f"it has no price in this answer, but each {one} {tighter}{required} may still cost "
            "something, or leave no plan"
        )
    looser, tighter = ("less", "more") if entry.named_lower else ("more", "less")
    best = worth_at("at most", abs(entry.price), worth.units, "the objective")
    worst = worth_at("at least", abs(entry.price), worth.units, "it")
    return (
        f"one {one} {looser}{required} {worth.better} {best}, one {one} {tighter} {worth.worse} "
        f"{worst}, or leaves no plan"
    )


def worth_at(words: str, size: float, units: Units, objective: str) -> str:
    """``at most 2 EUR``, rounded so that it stays true."""
    rounding = {"at most": ROUND_CEILING, "at least": ROUND_FLOOR}[words]
    text = in_units(written_out(size, DIGITS, rounding), units.objective)
    return f"{words} {text}" if units.objective else f"{objective} by {words} {text}"
