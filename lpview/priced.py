"""A verified answer with its prices, as far as they were asked for and found.

`lpview.prices` finds what it is asked for. Here it is decided what to ask: everything, some
lines, or what a report on one page shows; and what was found by the time the work was
stopped is kept.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, field, replace

import numpy as np

from lpview.marks import Flag, Mask, with_prices
from lpview.outcomes import Optimal
from lpview.prices import LinePrices, NoPrices, Prices
from lpview.prices.interior import Interior
from lpview.run import Claim

Interval = tuple[float, float]


class StoppedEarlyError(Exception):
    """Raised between two steps to end the work; ``claim`` says why."""

    def __init__(self, claim: Claim) -> None:
        super().__init__(claim.value)
        self.claim = claim


@dataclass(frozen=True, eq=False)
class Priced:
    """What is known of the prices; lines are numbered as in `lpview.kkt`."""

    found: Optimal
    """The answer, its marks with those of `lpview.marks.NEED_PRICES`."""
    lines: Mapping[int, LinePrices]
    """The lines that were examined."""
    asked: int
    """How many were to be examined."""
    intervals: Mapping[int, Interval]
    """Least and greatest price of the lines whose price is not unique, as far as found."""
    value_moves: Mask
    """Lines whose value is not the same in all optimal plans, shape ``(m + n,)``."""
    plan_dimension: int
    """Dimension of the set of optimal plans."""
    price_dimension: int
    """Dimension of the set of optimal dual solutions."""
    stopped: Claim | None
    """What ended the work before all lines asked for were examined; None if nothing did."""
    interior: Interior | NoPrices | None = None
    """Strictly feasible points and what follows from them; None where not asked for."""

    @property
    def not_unique(self) -> Mask:
        """Lines whose price is not unique, shape ``(m + n,)``."""
        return self.found.marks.flags[Flag.NOT_UNIQUE]


Between = Callable[[], None]
"""Called between two steps; raises `StoppedEarlyError` to end the work."""


def price_everything(found: Optimal, prices: Prices, between: Between) -> Priced:
    """Examine every line, those first whose price is not unique."""
    size = prices.lines.value.size
    asking = _Asking(prices, between, size)

    def ask() -> None:
        asking.ask_intervals()
        asking.ask(np.flatnonzero(prices.partition.price_moves).tolist())
        prices.everything(between)
        # Nothing is left to be found, so that nothing can stop this any more.
        asking.lines.update({line: prices.line(line) for line in range(size)})

    return asking.priced(found, ask)


def price_lines(found: Optimal, prices: Prices, lines: Sequence[int], between: Between) -> Priced:
    """Examine some lines."""
    asking = _Asking(prices, between, len(set(lines)))
    return asking.priced(found, lambda: asking.ask(lines))


def price_report(found: Optimal, prices: Prices, most: int | None, between: Between) -> Priced:
    """Examine what a report shows.

    These are the rows with the widest intervals, ``most`` at the most, and as many rows of
    unique price that are worth most (all of both for None); and every line with an endless
    interval, where some move leaves no plan at once.
    """
    asking = _Asking(prices, between, 0)

    def ask() -> None:
        asking.ask_intervals()
        endless = [k for k, ends in asking.intervals.items() if np.isinf(ends).any()]
        rows = widest(asking.intervals, prices.lines.m)[:most]
        wanted = [*rows, *endless, *worth_most(found, prices.partition.price_moves)[:most]]
        asking.asked = len(set(wanted))
        asking.ask(wanted)

    return asking.priced(found, ask)


Choose = Callable[[Optimal], Sequence[int]]
"""The lines to examine, by an answer whose marks tell which prices are not unique."""


def price_page(found: Optimal, prices: Prices, choose: Choose, between: Between) -> Priced:
    """Examine what a page of sentences tells: some lines, and all price intervals.

    An endless interval belongs to a move that leaves no plan at once (`without_plan`). The
    lines come first, for they are few and matter most; intervals may leave fewer prices that
    are not unique, and with it other lines to choose.
    """
    asking = _Asking(prices, between, 0)

    def ask_chosen() -> None:
        chosen = choose(asking.marked(found))
        asking.asked = len({*chosen, *asking.lines})
        asking.ask([line for line in chosen if line not in asking.lines])

    def ask() -> None:
        ask_chosen()
        asking.ask_intervals()
        ask_chosen()

    return asking.priced(found, ask)


def without_plan(priced: Priced) -> list[tuple[int, bool]]:
    """Moves that leave no plan however small they are, as far as intervals are known.

    Each is a line and whether it is moved up, in model order. What moves is the lower side or
    bound up and the upper one down; both together where they meet.
    """
    up_is_greatest = priced.found.head.model.sense.sign > 0
    moves = []
    for line, (least, greatest) in sorted(priced.intervals.items()):
        endless = (np.isinf(greatest), np.isinf(least))
        ways = endless if up_is_greatest else endless[::-1]
        moves += [
            (line, up) for up, is_endless in zip((True, False), ways, strict=True) if is_endless
        ]
    return moves


def widest(intervals: Mapping[int, Interval], m: int) -> list[int]:
    """Rows by falling width of their price interval, equal ones in model order."""
    width = {k: ends[1] - ends[0] for k, ends in intervals.items() if k < m}
    return sorted((k for k in width if width[k] > 0), key=lambda k: (-width[k], k))


def worth_most(found: Optimal, not_unique: Mask) -> list[int]:
    """Rows with a price, and that the only one, by falling |dual value times side|."""
    rows, m = found.measurement.rows, found.head.model.m
    worth = np.abs(rows.price * rows.end)
    chosen = np.flatnonzero(found.marks.priced[:m] & ~not_unique[:m])
    ordered: list[int] = chosen[np.argsort(-worth[chosen], kind="stable")].tolist()
    return ordered


@dataclass
class _Asking:
    """What has been found so far."""

    prices: Prices
    between: Between
    asked: int
    lines: dict[int, LinePrices] = field(default_factory=dict)
    intervals: dict[int, Interval] = field(default_factory=dict)

    def ask_intervals(self) -> None:
        """All price intervals at once, which is quicker than one after the other."""
        self.prices.intervals(self.between)
        for line in np.flatnonzero(self.prices.partition.price_moves).tolist():
            self.intervals[line] = self.prices.interval(line)

    def ask(self, lines: Sequence[int]) -> None:
        for line in lines:
            self.between()
            self.lines[line] = self.prices.line(line)

    def marked(self, found: Optimal) -> Optimal:
        """The answer, marked by what is known so far."""
        not_unique = self.prices.partition.price_moves.copy()
        for line, (least, greatest) in self.intervals.items():
            not_unique[line] = least < greatest
        for line, examined in self.lines.items():
            not_unique[line] = not examined.is_unique
        return replace(found, marks=with_prices(found.marks, not_unique))

    def priced(self, found: Optimal, ask: Callable[[], None]) -> Priced:
        """Ask, and keep what is known at the end or when stopped."""
        stopped = None
        try:
            ask()
        except StoppedEarlyError as error:
            stopped = error.claim
        partition = self.prices.partition
        return Priced(
            found=self.marked(found),
            lines=self.lines,
            asked=self.asked,
            intervals=self.intervals,
            value_moves=partition.value_moves,
            plan_dimension=partition.plan_dimension,
            price_dimension=partition.price_dimension,
            stopped=stopped,
        )
