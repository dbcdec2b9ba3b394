"""What the prices of one line say, in sentences.

Each direction of each number is a clause of its own: what a unit is worth, for how many
units that holds, and what happens then. "Improves" and "worsens" are meant in the sense of
the model.
"""

from __future__ import annotations

import math
from dataclasses import dataclass

from lpview.outcomes import Optimal
from lpview.prices import LinePrices, Move, Moves, Then, ZeroSlack
from lpview.report.numbers import number
from lpview.report.units import NO_UNITS, Units, amount, units_of

AFTERWARDS = {
    Then.RATE_CHANGES: "then the rate changes",
    Then.INFEASIBLE: "then no plan is left",
    Then.UNBOUNDED: "then the objective improves without limit",
}
"""What happens at the end of a valid range."""


def price_sentences(found: Optimal, line: int, prices: LinePrices) -> tuple[str, ...]:
    """Everything about the prices of a line numbered as in `lpview.kkt`.

    Whether its price is the only one; what moving each side or bound and the cost is worth,
    both ways and how far; which optimal plans reach it; and its values over those plans.
    """
    about = _about(found, line)
    sentences = [_uniqueness(about, prices)]
    for name, moves in _sides(about, prices):
        sentences.append(_moves_sentence(about, name, moves, about.units))
    if prices.cost is not None:
        in_price = Units(about.units.price, about.units.objective)
        sentences.append(_moves_sentence(about, "its cost", prices.cost, in_price))
    sentences += _zero_slack(about, prices)
    sentences += _values(about, prices)
    return tuple(sentences)


@dataclass(frozen=True)
class _About:
    """What the words depend on besides the prices."""

    is_row: bool
    paired: bool
    lower_first: bool
    price: float
    sign: float
    units: Units

    @property
    def end(self) -> str:
        return "side" if self.is_row else "bound"


def _about(found: Optimal, line: int) -> _About:
    lp = found.head.model
    is_row = line < lp.m
    k = line if is_row else line - lp.m
    side = found.measurement.rows if is_row else found.measurement.columns
    return _About(
        is_row=is_row,
        paired=bool(found.marks.paired[line]),
        lower_first=bool(side.below[k] <= side.above[k]),
        price=float(side.price[k]) if found.marks.priced[line] else 0.0,
        sign=lp.sense.sign,
        units=units_of(found.head, line),
    )


def _uniqueness(about: _About, prices: LinePrices) -> str:
    noun, unit = "dual value" if about.is_row else "reduced cost", about.units.price
    if prices.is_unique:
        return f"Its {noun} {amount(prices.least, unit)} is the only one."
    if not prices.price_found:
        seen = f"{number(prices.least)} and {amount(prices.greatest, unit)}"
        return (
            f"Its {noun} is not the only one; {seen} were seen, and the solver gave no usable "
            "answer beyond."
        )
    return (
        f"Its {noun} is {any_number(prices.least, prices.greatest, unit)}; "
        f"the answer shown has {number(about.price)}."
    )


def any_number(least: float, greatest: float, unit: str = "") -> str:
    """``any number from 0 to 3 kWh``, also where an end is infinite."""
    if math.isinf(least) and math.isinf(greatest):
        return "any number at all"
    if math.isinf(greatest):
        return f"any number from {amount(least, unit)} up, without limit"
    if math.isinf(least):
        return f"any number from {amount(greatest, unit)} down, without limit"
    return f"any number from {number(least)} to {amount(greatest, unit)}"


def _sides(about: _About, prices: LinePrices) -> list[tuple[str, Moves]]:
    """The ends that exist, the nearest first; one where they move together."""
    if not about.paired:
        assert prices.lower is not None
        return [("its right-hand side" if about.is_row else "its fixed value", prices.lower)]
    ends = [(f"its lower {about.end}", prices.lower), (f"its upper {about.end}", prices.upper)]
    ordered = ends if about.lower_first else ends[::-1]
    return [(name, moves) for name, moves in ordered if moves is not None]


def _moves_sentence(about: _About, name: str, moves: Moves, units: Units) -> str:
    up, down = moves.up, moves.down
    if all(move.rate == 0 and move.then is Then.NEVER for move in (up, down)):
        return f"No move of {name} changes anything."
    first = move_clause(up, True, about.sign, f" on {name}", units)
    return f"{first[0].upper()}{first[1:]}; {move_clause(down, False, about.sign, '', units)}."


def move_clause(move: Move, up: bool, sign: float, where: str = "", units: Units = NO_UNITS) -> str:
    """What moving a number one way is worth, how far, and what happens then.

    ``sign`` is `lpview.model.Sense.sign`, ``where`` names the number, which is counted in
    ``units``.
    """
    way = "more" if up else "less"
    if math.isinf(move.rate):
        if move.then is Then.UNBOUNDED:
            return f"any {way}{where} lets the objective improve without limit"
        return f"any {way}{where} leaves no plan"
    change = move.rate if up else -move.rate
    worth = effect(change, sign, units.objective)
    return f"each {units.one} {way}{where} {worth}, {_reach(move, units)}"


def improves(change: float, sign: float) -> bool:
    """Whether a change of the objective is for the better; ``sign`` is that of the sense."""
    return sign * change < 0


def effect(change: float, sign: float, unit: str = "") -> str:
    """What a change of the objective is to the person who optimizes it."""
    if change == 0:
        return "changes nothing"
    verb = "improves" if improves(change, sign) else "worsens"
    return f"{verb} the objective by {amount(abs(change), unit)}"


def _reach(move: Move, units: Units) -> str:
    if move.then is Then.NEVER:
        return "however many"
    far = units.many(number(move.distance))
    if move.then is Then.NOT_FOUND:
        surely = f"surely for {far}, but " if move.distance > 0 else "but "
        return f"{surely}how far that holds was not found out"
    return f"for {far}, {AFTERWARDS[move.then]}"


def _zero_slack(about: _About, prices: LinePrices) -> list[str]:
    lower, upper = f"its lower {about.end}", f"its upper {about.end}"
    if prices.lower_zero is prices.upper_zero is ZeroSlack.NEVER:
        return [f"No optimal plan reaches {lower} or {upper}."]
    ends = [(lower, prices.lower_zero), (upper, prices.upper_zero)]
    ordered = ends if about.lower_first else ends[::-1]
    return [_ZERO[zero].format(name) for name, zero in ordered if zero is not None]


_ZERO = {
    ZeroSlack.ALWAYS: "Every optimal plan reaches {}.",
    ZeroSlack.SOMETIMES: "Some optimal plans reach {}, others do not.",
    ZeroSlack.NEVER: "No optimal plan reaches {}.",
    ZeroSlack.NOT_SETTLED: "Within rounding it could not be settled whether every optimal plan "
    "reaches {}.",
}


def _values(about: _About, prices: LinePrices) -> list[str]:
    """Values over all optimal plans, where the sentences before have not said them."""
    held = ZeroSlack.ALWAYS in (prices.lower_zero, prices.upper_zero) or not about.paired
    least, greatest = prices.least_value, prices.greatest_value
    if not prices.value_found:
        return ["The solver gave no usable answer on how far its value can go in optimal plans."]
    what = "its row value" if about.is_row else "it"
    if least != greatest:
        return [f"Over all optimal plans {what} is {any_number(least, greatest, about.units.own)}."]
    if held or about.is_row:
        return []
    return [f"It is {amount(least, about.units.own)} in every optimal plan."]
