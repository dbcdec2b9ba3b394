"""Prices on the screen: found in the background, shown as they come, and asked about.

`lpview.screen.pricing` does the work in a thread; what it finds arrives here as messages
and goes into the book that tables, strip and ledger draw from.
"""

from __future__ import annotations

import math
import re
from collections.abc import Callable
from functools import partial
from typing import TYPE_CHECKING

from textual import events
from textual.worker import get_current_worker

from lpview.marks import Flag, with_prices
from lpview.model import LinearProgram
from lpview.outcomes import Optimal
from lpview.prices import Prices, Together, move_together
from lpview.screen.finding import FindingScreen
from lpview.screen.outcome import PageScreen
from lpview.screen.pane import LinesPane
from lpview.screen.price_book import State
from lpview.screen.pricing import (
    Answered,
    PricesBegun,
    PricesEnded,
    PricesFound,
    Pricing,
    Question,
)
from lpview.screen.table import MirrorTable

if TYPE_CHECKING:
    from lpview.report.together import Moves

TOGETHER = "rows moved together"
"""What the prompt asks for."""

_AMOUNT = re.compile(r"=([-+]?(?:\d+\.?\d*|\.\d+)(?:e[-+]?\d+)?)(?=\s|$)", re.IGNORECASE)
"""An equals sign and a number, at the end of a word."""


class PricedScreen(FindingScreen):
    """Linked panes whose prices are examined in the background."""

    def __init__(self, found: Optimal, ascii_marks: bool = False) -> None:
        super().__init__(found, ascii_marks)
        self.pricing = Pricing(found, self.post_message)
        self.marks_without_prices = found.marks
        self._is_stopped = False

    # The work ----------------------------------------------------------------

    def on_screen_resume(self) -> None:
        """Examine prices whenever this screen is on top, once it is drawn, until all is known."""
        self.call_after_refresh(self.examine_prices)

    def on_unmount(self) -> None:
        """Nobody waits for prices any more."""
        self.pricing.leave()

    def examine_prices(self) -> None:
        """Go on examining, unless the person has stopped it."""
        if not self._is_stopped:
            self.pricing.go_on()
            self._start()

    def rest_prices(self) -> None:
        """Examine nothing until `examine_prices`."""
        self.pricing.pause()

    def _start(self) -> None:
        if self.pricing.begin():
            self.book.go_on()
            self.strip.refresh()
            self.run_worker(partial(work, self.pricing), group="prices", thread=True)

    def action_pause_prices(self) -> None:
        """Stop examining prices, or go on."""
        if self.book.state in (State.DONE, State.NONE):
            self.say(self.book.missing(self.line) or self.book.progress())
            return
        self._is_stopped = not self._is_stopped
        if self._is_stopped:
            self.rest_prices()
            self.say("prices: stopped; the same key goes on")
        else:
            self.examine_prices()
            self.say("prices: going on")

    def follow_selection(self, pane: LinesPane) -> None:
        """The selected line is examined next."""
        super().follow_selection(pane)
        self.pricing.select(self.line)

    def takes_key(self, event: events.Key) -> bool:
        """Keys are answered before further questions are asked."""
        self.pricing.give_way()
        return super().takes_key(event)

    # What it finds -----------------------------------------------------------

    def on_prices_begun(self, message: PricesBegun) -> None:
        """The filter and the marks of prices that are not unique."""
        self.book.begin(message.not_unique)
        self.marks = with_prices(self.marks_without_prices, self.book.not_unique)
        self.constraints.refresh()
        self.variables.refresh()
        self.strip.refresh()

    def on_prices_found(self, message: PricesFound) -> None:
        """Rates of the lines in sight, sentences of the one selected, progress."""
        self.book.put(message.lines)
        for table in (self.constraints, self.variables):
            if table.shows(message.lines):
                table.refresh()
        if self.line in message.lines:
            self.ledger.show_prices()
        self.strip.refresh()

    def on_prices_ended(self, message: PricesEnded) -> None:
        """All is known, or the ledger says why not."""
        if message.state is State.STOPPED and not self.pricing.is_paused:
            return  # it goes on already
        self.book.end(message.state, message.reason)
        for table in (self.constraints, self.variables):
            self._arrange_anew(table)
            table.refresh()
        self.ledger.show_prices()
        self.strip.refresh()

    def _arrange_anew(self, table: MirrorTable) -> None:
        """Sort and filter by what has been found since."""
        view, flag = table.view, Flag.NOT_UNIQUE
        if view.flag_word == flag.value:
            part = self.marks.flags[flag][table.first_line :][: len(view.names)]
            view.limit_to_flag(flag.value, part)
            table.to_selected()
        if not table.folded and any(c.title == view.sort_word for c in table.columns.prices):
            table.sort_by(view.sort_word, view.descending)

    # Asking about prices -----------------------------------------------------

    def action_curve(self) -> None:
        """The value curve of the selected line."""
        from lpview.screen.curve_screen import CurveScreen
        from lpview.screen.curve_text import numbers_of

        numbers = numbers_of(self.found, self.line) if self.line >= 0 else ()
        if not numbers:
            self.say("there is no side to move" if self.line >= 0 else "there is no line")
        elif not self.found.passed:
            self.say("no value curve: the answer failed its check")
        else:
            self.app.push_screen(CurveScreen(self.found, numbers, self.ascii_marks))

    def action_together(self) -> None:
        """Ask which rows to move together."""
        lp, line = self.found.head.model, self.line
        value = f"{lp.rows[line]}=+1 " if 0 <= line < lp.m else ""
        self.ask(TOGETHER, "ROW=+1 ROW=-2.5", value)

    @property
    def prompts(self) -> dict[str, Callable[[], None]]:
        """Moving rows together is asked for in the prompt too."""
        return {**super().prompts, "plus": self.action_together}

    def take_answer(self, purpose: str, text: str) -> None:
        """Work out what the rows are worth, in the thread that knows the prices."""
        if purpose != TOGETHER:
            super().take_answer(purpose, text)
            return
        moves = moves_in(text, self.found.head.model)
        if isinstance(moves, str):
            self.say(moves)
            return
        self.say(f"{TOGETHER}: being worked out")
        self.pricing.ask(Question(moves, partial(_moved, moves)))
        self._start()

    def on_answered(self, message: Answered) -> None:
        """What the rows are worth, on a page; or why that is not known."""
        from lpview.report import text
        from lpview.report.together import asking_moves, together_report
        from lpview.screen.ticket import for_prices

        self.say(message.problem)
        if isinstance(message.answer, Together):
            moves: Moves = message.about  # type: ignore[assignment]
            found = asking_moves(for_prices(self.found), moves)
            self.app.push_screen(PageScreen(text.render(together_report(found, message.answer))))


def work(pricing: Pricing) -> None:
    """What the thread does."""
    from lpview.solver import warm_model

    worker = get_current_worker()
    pricing.run(warm_model, lambda: worker.is_cancelled)


def _moved(moves: Moves, prices: Prices) -> Together:
    return move_together(prices, moves)


def moves_in(text: str, lp: LinearProgram) -> Moves | str:
    """Rows and amounts in ``ROW=+1 ROW=-2.5``, or what is wrong with them.

    A name may have blanks and equals signs of its own: it ends at the last amount that
    leaves the name of a row.
    """
    rows = {name: row for row, name in enumerate(lp.rows)}
    moves: list[tuple[int, float]] = []
    left = text.strip()
    while left:
        ends = [(left[: at.start()].strip(), at) for at in _AMOUNT.finditer(left)]
        if not ends:
            return f"expected ROW=+1 ROW=-2.5, got {left}"
        name, end = next((pair for pair in ends[::-1] if pair[0] in rows), ends[0])
        if name not in rows:
            return f"expected the name of a row, got {name or 'nothing'}"
        moves.append((rows[name], float(end[1])))
        left = left[end.end() :].strip()
    return _problem(moves, lp) or moves


def _problem(moves: Moves, lp: LinearProgram) -> str:
    """What cannot be asked about these moves."""
    if not moves:
        return "expected ROW=+1 ROW=-2.5, got nothing"
    if len({row for row, _ in moves}) < len(moves):
        return "expected each row once"
    for row, amount in moves:
        if not math.isfinite(amount) or amount == 0:
            return f"{lp.rows[row]}: expected an amount that is finite and not 0"
        if math.isinf(lp.row_lower[row]) and math.isinf(lp.row_upper[row]):
            return f"{lp.rows[row]}: it has no side to move"
    return ""
