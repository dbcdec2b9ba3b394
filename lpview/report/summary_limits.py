"""The limits on the page for whoever decides: which hold the plan back, and what each is worth."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from lpview.ledger import ledger
from lpview.marks import Flag, Mask
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.priced import Priced
from lpview.prices import NoPrices
from lpview.report.names import safe
from lpview.report.numbers import count, number
from lpview.report.summary_moves import without_plan_words
from lpview.report.summary_names import limit_name, named, nobody_set, with_label
from lpview.report.summary_worth import bounds_words, moves_words
from lpview.report.units import units_of
from lpview.report.worth import SURE_DIGITS, end_of, is_rate_same, limit_of, written_amount

MOST_LIMITS = 7
"""Limits shown."""

Prices = Priced | NoPrices | None
"""What is known of the prices; None where they were not asked for."""


@dataclass(frozen=True)
class Reached:
    """The limits at which the plan is; numbered as in `lpview.kkt`.

    Both lists are by falling |price times limit|, then falling |price|, then in model order.
    """

    holding: tuple[int, ...]
    """Those that have a price, in this answer or in another optimal dual solution."""
    perhaps: tuple[int, ...]
    """Those without a price in this answer, where others are not known."""
    idle: int
    """How many have no price in any optimal dual solution, as far as that is known."""

    @property
    def shown(self) -> tuple[int, ...]:
        """Those on the page."""
        return (*self.holding, *self.perhaps)[:MOST_LIMITS]


def summary_lines(found: Optimal) -> tuple[int, ...]:
    """The limits that the page shows, whose prices it needs; numbered as in `lpview.kkt`.

    Which limits can have a price is taken from the marks of `lpview.marks.NEED_PRICES`,
    where the answer has them.
    """
    return reached(found).shown


def reached(found: Optimal) -> Reached:
    """The limits at which the plan is, and which of them hold it back."""
    lp, rows, columns = found.head.model, found.measurement.rows, found.measurement.columns
    below = np.concatenate([rows.below, columns.below])
    above = np.concatenate([rows.above, columns.above])
    counts = ~found.marks.room & np.isfinite(np.minimum(below, above))
    counts &= ~(nobody_set(lp) & (below <= above))
    priced, not_unique = found.marks.priced, found.marks.flags.get(Flag.NOT_UNIQUE)
    size = np.where(priced, np.abs(np.concatenate([rows.price, columns.price])), 0.0)
    worth = size * np.abs(np.concatenate([rows.end, columns.end]))

    def ordered(mask: Mask) -> tuple[int, ...]:
        lines = np.flatnonzero(counts & mask)
        order = np.lexsort((-_sure(size[lines]), -_sure(worth[lines])))
        return tuple(lines[order].tolist())

    if not_unique is None:
        return Reached(ordered(priced), ordered(~priced), 0)
    can_have = priced | not_unique
    return Reached(ordered(can_have), (), int(np.count_nonzero(counts & ~can_have)))


def _sure(sizes: Vector) -> Vector:
    """Sizes without the digits that may be rounding, which must not rank equal ones."""
    return np.array([float(number(size, SURE_DIGITS)) for size in sizes.tolist()])


def limits(found: Optimal, prices: Prices) -> list[str]:
    """The limits that hold the plan back, and what is not known of them."""
    at = reached(prices.found if isinstance(prices, Priced) else found)
    body = [_heading(at), *(_limit(found, line, prices) for line in at.shown)]
    if at.idle:
        body.append(
            f"The plan also reaches {count(at.idle, 'limit')} that could move a little without "
            "changing the result."
        )
    if isinstance(prices, Priced):
        body += without_plan_words(prices, at.shown)
    return [*body, *_about_prices(found, prices, at.shown)]


def _heading(at: Reached) -> str:
    holding, perhaps, shown = len(at.holding), len(at.perhaps), len(at.shown)
    if not shown:
        return "No limit holds it back."
    if shown == 1:
        return f"This limit {'holds' if holding else 'may hold'} it back:"
    if shown == holding + perhaps:
        hold = "hold it back or may" if perhaps else "hold it back"
        order = f"{hold}, the largest price times limit first" if holding else "may hold it back"
        return f"These {shown} limits {order}:"
    if not holding:
        return f"{perhaps} limits may hold it back, such as these {shown}:"
    verb, more = "holds" if holding == 1 else "hold", f" and {perhaps} more may" * bool(perhaps)
    first = f"these {shown} come first by price times limit"
    return f"{count(holding, 'limit')} {verb} it back{more}; {first}:"


def _limit(found: Optimal, line: int, prices: Prices) -> str:
    entry, limit = ledger(found, line), limit_of(found, line)
    what = f"Limit {'on ' * (not entry.is_row)}{with_label(found.head, line)}"
    end = written_amount(end_of(entry, limit), units_of(found.head, line).own)
    if isinstance(prices, Priced) and line in prices.lines:
        words = moves_words(found, line, prices.lines[line])
    else:
        words = bounds_words(found, line)
    return f"{what}, {limit.value} {end}: {words}."


def _about_prices(found: Optimal, prices: Prices, shown: Sequence[int]) -> list[str]:
    """What is not known of what limits are worth, and what else follows from the prices."""
    if prices is None:
        return ["How far these numbers hold, and whether they are the only ones, was not examined."]
    if isinstance(prices, NoPrices):
        return [f"How far these numbers hold was not examined: {safe(prices.reason)}."]
    sentences = []
    lp, known = found.head.model, [line for line in shown if line in prices.lines]
    several = [k for k in known if not is_rate_same(prices.lines[k], found, k)]
    if several:
        names = named([limit_name(lp, line) for line in several])
        sentences.append(
            "More and less are not worth the same, so no single price is right, for: " + names + "."
        )
    if len(known) < len(shown):
        why = "" if prices.stopped is None else f" ({prices.stopped.value})"
        sentences.append(
            f"Only {len(known)} of these {len(shown)} limits were examined both ways{why}; of the "
            "others it is said what any price allows."
        )
    return [*sentences, *_others(prices)]


def _others(prices: Priced) -> list[str]:
    """Whether other plans are as good."""
    if prices.plan_dimension == 0:
        return ["No other plan is as good."]
    m = prices.found.head.model.m
    moves = int(np.count_nonzero(prices.value_moves[m:]))
    listed = f"{count(moves, 'amount')} may differ in them (lpview plans lists them)"
    return [f"Other plans are just as good; {listed}."]
