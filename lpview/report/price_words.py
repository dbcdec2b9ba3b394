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
        sentences.append(_moves_sentence(about, name, moves))
    if prices.cost is not None:
        sentences.append(_moves_sentence(about, "its cost", prices.cost))
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
    )


def _uniqueness(about: _About, prices: LinePrices) -> str:
    noun = "dual value" if about.is_row else "reduced cost"
    if prices.is_unique:
        return f"Its {noun} {number(prices.least)} is the only one."
    if not prices.price_found:
        return (
            f"Its {noun} is not the only one; {number(prices.least)} and "
            f"{number(prices.greatest)} were seen, and the solver gave no usable answer beyond."
        )
    return (
        f"Its {noun} is {any_number(prices.least, prices.greatest)}; "
        f"the answer shown has {number(about.price)}."
    )


def any_number(least: float, greatest: float) -> str:
    """``any number from 0 to 3``, also where an end is infinite."""
    if math.isinf(least) and math.isinf(greatest):
        return "any number at all"
    if math.isinf(greatest):
        return f"any number from {number(least)} up, without limit"
    if math.isinf(least):
        return f"any number from {number(greatest)} down, without limit"
    return f"any number from {number(least)} to {number(greatest)}"


def _sides(about: _About, prices: LinePrices) -> list[tuple[str, Moves]]:
    """The ends that exist, the nearest first; one where they move together."""
    if not about.paired:
        assert prices.lower is not None
        return [("its right-hand side" if about.is_row else "its fixed value", prices.lower)]
    ends = [(f"its lower {about.end}", prices.lower), (f"its upper {about.end}", prices.upper)]
    ordered = ends if about.lower_first else ends[::-1]
    return [(name, moves) for name, moves in ordered if moves is not None]


def _moves_sentence(about: _About, name: str, moves: Moves) -> str:
    up, down = moves.up, moves.down
    if all(move.rate == 0 and move.then is Then.NEVER for move in (up, down)):
        return f"No move of {name} changes anything."
    first = move_clause(up, True, about.sign, f" on {name}")
    return f"{first[0].upper()}{first[1:]}; {move_clause(down, False, about.sign)}."


def move_clause(move: Move, up: bool, sign: float, where: str = "") -> str:
    """What moving a number one way is worth, how far, and what happens then.

    ``sign`` is `lpview.model.Sense.sign`, ``where`` names the number.
    """
    way = "more" if up else "less"
    if math.isinf(move.rate):
        if move.then is Then.UNBOUNDED:
            return f"any {way}{where} lets the objective improve without limit"
        return f"any {way}{where} leaves no plan"
    change = move.rate if up else -move.rate
    return f"each unit {way}{where} {effect(change, sign)}, {_reach(move)}"


def effect(change: float, sign: float) -> str:
    """What a change of the objective is to the person who optimizes it."""
    if change == 0:
        return "changes nothing"
    verb = "improves" if sign * change < 0 else "worsens"
    return f"{verb} the objective by {number(abs(change))}"


def _reach(move: Move) -> str:
    if move.then is Then.NEVER:
        return "however many"
    units = f"{number(move.distance)} unit" + ("" if move.distance == 1 else "s")
    if move.then is Then.NOT_FOUND:
        surely = f"surely for {units}, but " if move.distance > 0 else "but "
        return f"{surely}how far that holds was not found out"
    return f"for {units}, {AFTERWARDS[move.then]}"


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
        return [f"Over all optimal plans {what} is {any_number(least, greatest)}."]
    return [] if held or about.is_row else [f"It is {number(least)} in every optimal plan."]
