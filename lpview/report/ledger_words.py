"""What a ledger means, in sentences that hold for every verified answer.

The optimal objective is convex in each side and bound when minimizing, concave when
maximizing, and a dual value is the slope of a line that it never crosses. So a price
of 2 says: one unit looser improves the objective by at most 2, one unit tighter
worsens it by at least 2 or leaves no plan. That is true of every optimal dual value,
whether or not it is the only one; for small steps both are exact where it is.

Where the prices were worked out (`lpview.prices`), what they found is said instead.
"""

from __future__ import annotations

import numpy as np

from lpview.ledger import Ledger
from lpview.marks import FAULTS, Flag
from lpview.outcomes import Optimal
from lpview.prices import LinePrices
from lpview.report.numbers import count
from lpview.report.price_words import price_sentences
from lpview.report.units import Units, amount, units_of


def meaning(found: Optimal, entry: Ledger, prices: LinePrices | None = None) -> tuple[str, ...]:
    """What the ledger of a line says, a sentence or more a line of text.

    ``prices``, where they were worked out, replace what one price alone can promise.
    """
    faults = [_FAULT_WORDS[flag] for flag in entry.flags if flag in FAULTS]
    if faults:
        return ("Not as it should be: " + "; ".join(faults) + ".",)
    if not found.passed:
        return ("The check failed elsewhere, so these numbers are the answer's claim only.",)
    if entry.priced and _is_left_over(entry):
        return ("Within the tolerance only: it has a price at a limit that it does not sit at.",)
    units = units_of(found.head, entry.line)
    if prices is not None:
        place = _row_place(entry, units)
        if not entry.is_row:
            place = f"{_place(entry, units)}: {_account(entry, units)}."
        has_end = np.isfinite(entry.slack) or not entry.is_row
        return (place, *(price_sentences(found, entry.line, prices) if has_end else ()))
    words = (_row if entry.is_row else _column)(entry, units)
    return (words, _certainty(found)) if entry.priced else (words,)


_FAULT_WORDS = {
    Flag.VIOLATED: "the value lies outside its limits",
    Flag.WRONG_SIGN: "the sign of its price names a limit that does not exist",
    Flag.PRODUCT: "it has a price and room at the same time",
}


def _is_left_over(entry: Ledger) -> bool:
    """Whether a price beyond the zero tolerance names a limit that is not reached."""
    end = entry.lower if entry.named_lower else entry.upper
    return entry.room or bool(np.isinf(end))


def _row(entry: Ledger, units: Units) -> str:
    place = _row_place(entry, units)
    if np.isinf(entry.slack) or (entry.room and not entry.priced):
        return place
    if entry.priced:
        where = f"on its {_end(entry)}" if entry.paired else "on its right-hand side"
        return f"{place} {_steps(entry, where, units)}"
    return f"{place.removesuffix('.')}, without a price of its own. {_without_price(entry)}"


def _row_place(entry: Ledger, units: Units) -> str:
    """Where a row stands."""
    if np.isinf(entry.slack):
        return "It has no side, so it cannot hold the plan back."
    if entry.room and not entry.priced:
        return f"It does not hold the plan back: {amount(entry.slack, units.own)} to spare."
    if not entry.paired:
        return "It is an equality."
    if entry.priced:
        return "It holds the plan back."
    return f"It is used up to its {_nearest(entry)}."


def _column(entry: Ledger, units: Units) -> str:
    place, account = _place(entry, units), _account(entry, units)
    if not entry.priced:
        words = f"{place}: {account}."
        return words if entry.room else f"{words} {_without_price(entry)}"
    if not entry.paired:
        return f"{place}: {account}. {_steps(entry, 'on that value', units)}"
    if _is_out(entry):
        return f"It is out of the plan: {account}. {_forced(entry, units)}"
    return f"{place}: {account}. {_steps(entry, f'on that {_end(entry)}', units)}"


def _account(entry: Ledger, units: Units) -> str:
    cost, used, price = (
        amount(value, units.price) for value in (entry.cost, entry.used, entry.price)
    )
    if not entry.priced:
        return (
            f"its cost {cost} and what it uses at the dual values, {used}, are equal within the "
            "zero tolerance"
        )
    return f"its cost {cost} less what it uses at the dual values, {used}, is {price}"


def _place(entry: Ledger, units: Units) -> str:
    """Where a column stands."""
    if not entry.paired:
        return f"It is fixed at {amount(entry.lower, units.own)}"
    value = amount(entry.value, units.own)
    if entry.room:
        return f"It is in the plan at {value}, where no bound holds it"
    if _is_out(entry):
        return "It is out of the plan"
    end = _end(entry) if entry.priced else _nearest(entry)
    return f"It is in the plan at its {end}, {value}"


def _is_out(entry: Ledger) -> bool:
    """Whether a column rests at a bound of 0."""
    end = _end(entry) if entry.priced else _nearest(entry)
    return not entry.room and (entry.lower if end.startswith("lower") else entry.upper) == 0.0


def _end(entry: Ledger) -> str:
    """The side or bound that the price names."""
    kind = "side" if entry.is_row else "bound"
    return f"lower {kind}" if entry.named_lower else f"upper {kind}"


def _nearest(entry: Ledger) -> str:
    kind = "side" if entry.is_row else "bound"
    return f"lower {kind}" if entry.below <= entry.above else f"upper {kind}"


def _steps(entry: Ledger, where: str, units: Units) -> str:
    """What one unit of a limit is worth; the price names the limit by its sign."""
    looser, tighter = ("less", "more") if entry.named_lower else ("more", "less")
    size, one = amount(abs(entry.price), units.objective), units.one
    return (
        f"One {one} {looser} {where} improves the objective by at most {size}; one {one} "
        f"{tighter} worsens it by at least {size}, or leaves no plan."
    )


def _forced(entry: Ledger, units: Units) -> str:
    below = " below 0" if not entry.named_lower else ""
    size = amount(abs(entry.price), units.objective)
    return (
        f"Each {units.one} of it that is forced in{below} worsens the objective by at least "
        f"{size}, or leaves no plan."
    )


def _without_price(entry: Ledger) -> str:
    """A line at its limit without a price."""
    if Flag.DEGENERATE in entry.flags:
        return "It is basic there, so the plan is degenerate: dual values may not be the only ones."
    if Flag.OTHER_PLAN in entry.flags:
        return "It is not basic there, so another plan may be just as good."
    return "Its price of 0 may not be the only one."


def _certainty(found: Optimal) -> str:
    """Whether a price is known to be the only one."""
    exact = "For small steps both are exact if this price is the only one"
    if Flag.DEGENERATE not in found.marks.flags:
        return f"{exact}, which is not known without a basis."
    degenerate = int(np.count_nonzero(found.marks.flags[Flag.DEGENERATE]))
    if degenerate:
        return f"{exact}; it may not be, for the plan is degenerate in {count(degenerate, 'line')}."
    return "For small steps both are exact: no line is degenerate, so this price is the only one."
