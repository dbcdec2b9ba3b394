"""The limits on the page for whoever decides: which hold the plan back, and what each is worth."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from lpview.ledger import ledger
from lpview.model import LinearProgram
from lpview.outcomes import Head, Optimal
from lpview.priced import Priced
from lpview.prices import NoPrices
from lpview.report.names import fitted, safe
from lpview.report.numbers import count
from lpview.report.prices import active
from lpview.report.units import label_of, units_of
from lpview.report.worth import (
    bounds_words,
    end_of,
    is_rate_same,
    limit_of,
    moves_words,
    written_amount,
)

MOST_LIMITS = 7
"""Limits shown."""
MOST_NAMED = 7
"""Lines named in a sentence."""

Prices = Priced | NoPrices | None
"""What is known of the prices; None where they were not asked for."""


def summary_lines(found: Optimal) -> list[int]:
    """The limits that the page shows, whose prices it needs; numbered as in `lpview.kkt`."""
    return _reached(found)[:MOST_LIMITS]


def _reached(found: Optimal) -> list[int]:
    """Limits without room, by falling |price times limit|, equal ones in model order.

    An amount of 0 that rests at its lower bound is no limit that anybody set.
    """
    lp, measured = found.head.model, found.measurement
    resting = (lp.lower == 0.0) & ~lp.is_fixed & (measured.columns.below <= measured.columns.above)
    counts = ~np.concatenate([np.zeros(lp.m, dtype=bool), resting])
    counts &= np.isfinite(np.concatenate([measured.rows.slack, measured.columns.slack]))
    worth = np.abs(
        np.concatenate(
            [
                measured.rows.price * measured.rows.end,
                measured.columns.price * measured.columns.end,
            ]
        )
    )
    lines = np.flatnonzero(counts & ~found.marks.room)
    ordered: list[int] = lines[np.argsort(-worth[lines], kind="stable")].tolist()
    return ordered


def limits(found: Optimal, prices: Prices) -> list[str]:
    """The limits that hold the plan back, and what is not known of them."""
    every = _reached(found)
    known = prices.lines if isinstance(prices, Priced) else {}
    shown = []
    for line in every[:MOST_LIMITS]:
        moves = active(found, line, known[line]) if line in known else None
        if moves is None or moves.up.rate or moves.down.rate:
            shown.append(line)
    further = every[MOST_LIMITS:]
    if not shown and not further:
        return ["No limit holds it back.", *_about_prices(found, prices, [])]
    words = "This limit holds" if len(shown) == 1 else f"These {len(shown)} limits hold"
    return [
        f"{words} it back, the one that matters most first:"
        if len(shown) > 1
        else f"{words} it back:",
        *(_limit(found, line, prices) for line in shown),
        *_further(found, further),
        *_about_prices(found, prices, shown),
    ]


def _limit(found: Optimal, line: int, prices: Prices) -> str:
    entry, limit = ledger(found, line), limit_of(found, line)
    what = f"Limit {'on ' * (not entry.is_row)}{with_label(found.head, line)}"
    end = written_amount(end_of(entry, limit), units_of(found.head, line).own)
    if isinstance(prices, Priced) and line in prices.lines:
        words = moves_words(found, line, prices.lines[line])
    else:
        words = bounds_words(found, line)
    return f"{what}, {limit.value} {end}: {words}."


def _further(found: Optimal, lines: Sequence[int]) -> list[str]:
    priced = int(np.count_nonzero(found.marks.priced[list(lines)])) if lines else 0
    parts = []
    if priced:
        parts.append(f"{count(priced, 'further limit')} with a price")
    if len(lines) > priced:
        parts.append(f"{count(len(lines) - priced, 'further limit')} without one in this answer")
    return [f"The plan also reaches {' and '.join(parts)}."] if parts else []


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
    return [f"Other plans are just as good; {count(moves, 'amount')} may differ in them."]


def named(names: Sequence[str]) -> str:
    """The first names of a list, and how many more there are."""
    more = f" and {len(names) - MOST_NAMED} more" if len(names) > MOST_NAMED else ""
    return ", ".join(names[:MOST_NAMED]) + more


def limit_name(lp: LinearProgram, line: int) -> str:
    """``heat``, or ``the amount of tomato`` for a column."""
    if line < lp.m:
        return fitted(lp.rows[line])
    return f"the amount of {fitted(lp.columns[line - lp.m])}"


def with_label(head: Head, line: int) -> str:
    """The same with the label of the line, if it has one."""
    label = fitted(label_of(head, line).label)
    return limit_name(head.model, line) + (f" ({label})" if label else "")
