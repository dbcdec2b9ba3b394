"""The value curve of one line over the whole screen, followed in a thread."""

from __future__ import annotations

import time
from collections.abc import Sequence
from functools import partial
from typing import ClassVar

from rich.style import Style
from textual.app import ComposeResult
from textual.binding import Binding, BindingType
from textual.message import Message
from textual.screen import Screen
from textual.widgets import Footer

from lpview.cli import told
from lpview.outcomes import Optimal
from lpview.prices.curve import Curve, NoCurve
from lpview.prices.number import Number
from lpview.prices.value_curve import asking, value_curve
from lpview.report.names import fitted
from lpview.run import Watch
from lpview.screen.curve_text import curve_lines, named
from lpview.screen.pane import HEADING, PLAIN, LinesPane, Runs
from lpview.screen.spine import ASCII, ROUND

KEYS: tuple[tuple[str, str, str], ...] = (
    ("v", "next_number", "another number of the line: its other side, its bounds"),
    ("escape", "leave", "stop following the curve, or close"),
    ("q,ctrl+q", "app.quit", "quit the program"),
)
"""Key, action and words of everything that can be done here."""

FOOTER = {"next_number": "Other number", "leave": "Stop or close", "app.quit": "Quit"}
"""Words of the footer."""

Outcome = Curve | NoCurve | str
"""A curve, or why there is none."""


def follow(found: Optimal, moving: Number, watch: Watch) -> Outcome:
    """Follow the curve of one number; raises nothing."""
    from lpview.solver import solve, warm_model

    try:
        return value_curve(found, moving, asking(found, solve, watch), warm_model)
    except Exception as error:  # said on the page; the terminal sees no traceback
        return told(error)[0]


class CurveLines(LinesPane):
    """The page as lines; a curve is drawn for the size at hand."""

    heading_lines = 0

    def __init__(self, plain: bool) -> None:
        super().__init__(id="curve")
        self.plain = plain
        self.shown: Curve | str = ""
        self.texts: list[str] = []

    def show(self, shown: Curve | str) -> None:
        """Show a curve, or say something instead."""
        self.shown = shown
        self._draw()
        self.show_cursor()
        self.refresh()

    def _draw(self) -> None:
        size = self.size.width, self.size.height
        shown = self.shown
        self.texts = [shown] if isinstance(shown, str) else curve_lines(shown, size, self.plain)
        self.cursor = min(self.cursor, len(self.texts) - 1)

    def on_resize(self) -> None:
        """Draw for the new size."""
        self._draw()

    @property
    def line_count(self) -> int:
        """Lines of the page."""
        return len(self.texts)

    def heading(self, width: int) -> list[Runs]:
        """None."""
        return []

    def content(self, index: int, width: int) -> Runs:
        """A line of the page; the cursor is there to scroll with, and underlined."""
        style = HEADING if index == 0 else PLAIN
        if index == self.cursor and self.line_count > self.visible_lines:
            style += Style(underline=True)
        more = (ASCII if self.plain else ROUND).more
        return [(fitted(self.texts[index], width, more), style)]


class CurveScreen(Screen[None]):
    """Curves of the numbers of one line, one at a time."""

    BINDINGS: ClassVar[list[BindingType]] = [
        Binding(key, action, FOOTER[action]) for key, action, _ in KEYS
    ]

    class Followed(Message):
        """A curve is there, or why it is not."""

        def __init__(self, number: Number, outcome: Outcome) -> None:
            super().__init__()
            self.number, self.outcome = number, outcome

    def __init__(self, found: Optimal, numbers: Sequence[Number], plain: bool) -> None:
        super().__init__()
        self.found, self.numbers = found, numbers
        self.lines = CurveLines(plain)
        self.at = 0
        """Which of the numbers is shown."""
        self.outcomes: dict[Number, Outcome] = {}
        """What was found, stopped ones too."""
        self._watch: Watch | None = None
        self._started = 0.0

    @property
    def number(self) -> Number:
        """The number that is shown."""
        return self.numbers[self.at]

    @property
    def is_following(self) -> bool:
        """Whether the curve of the number shown is being followed."""
        return self._watch is not None

    def compose(self) -> ComposeResult:
        """The page and the keys."""
        yield self.lines
        yield Footer(show_command_palette=False, compact=True)

    def on_mount(self) -> None:
        """Begin with the first number."""
        self.lines.focus()
        self.set_interval(0.2, self._show_progress)
        self._show_number()

    def on_unmount(self) -> None:
        """Nobody waits for the curve any more."""
        self._stop()

    def _show_number(self) -> None:
        """Show the curve, or begin to follow it."""
        self._stop()
        self._watch = None
        if self.number in self.outcomes:
            self._show(self.outcomes[self.number])
            return
        self._watch, self._started = Watch(), time.monotonic()
        self._show_progress()
        follower = partial(self._follow, self.number, self._watch)
        self.run_worker(follower, group="curve", thread=True)

    def _follow(self, number: Number, watch: Watch) -> None:
        outcome = follow(self.found, number, watch)
        if watch is self._watch:
            self.post_message(self.Followed(number, outcome))

    def _stop(self) -> None:
        if self._watch is not None:
            self._watch.stop.set()

    def on_curve_screen_followed(self, message: Followed) -> None:
        """Show what was found, unless another number is shown by now."""
        if message.number == self.number and self.is_following:
            self._watch = None
            self.outcomes[message.number] = message.outcome
            self._show(message.outcome)

    def _show(self, outcome: Outcome) -> None:
        if isinstance(outcome, Curve):
            self.lines.show(outcome)
            return
        reason = outcome.reason if isinstance(outcome, NoCurve) else outcome
        self.lines.show(f"{self._title_now}: no value curve: {reason}")

    def _show_progress(self) -> None:
        if self._watch is not None:
            doing = "stopping" if self._watch.stop.is_set() else "following the value curve"
            seconds = time.monotonic() - self._started
            done = f"{seconds:.0f} s, iteration {self._watch.iterations}"
            self.lines.show(f"{self._title_now}: {doing}, {done}; Escape stops")

    @property
    def _title_now(self) -> str:
        return named(self.found.head.model, self.number)

    def action_next_number(self) -> None:
        """The next number of the line, and round again."""
        if len(self.numbers) > 1:
            self.at = (self.at + 1) % len(self.numbers)
            self._show_number()

    def action_leave(self) -> None:
        """Stop following, and close when there is nothing to stop."""
        if self._watch is not None and not self._watch.stop.is_set():
            self._stop()
            self._show_progress()
        else:
            self.dismiss(None)
