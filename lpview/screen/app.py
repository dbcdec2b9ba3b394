"""The application: reads and solves in a worker, then shows what came of it.

Nothing numeric is imported before the first frame; the worker does that, while
the screen already shows what is going on and can be left.
"""

from __future__ import annotations

import asyncio
import os
import signal
import sys
import threading
import time
from collections.abc import Callable, Iterable
from functools import partial
from typing import TYPE_CHECKING, Any, ClassVar

from textual import work
from textual.app import App, ComposeResult, SystemCommand
from textual.binding import Binding, BindingType
from textual.message import Message
from textual.screen import Screen
from textual.widgets import Footer, Static

if TYPE_CHECKING:
    from lpview.outcomes import Examination
    from lpview.run import Watch


STOPPED = 4
"""Exit status of what ended before its result."""

LAST_SECONDS = 2.0
"""How long an orderly end may take once the terminal has hung up."""


class Work:
    """What the worker does: injected, so that tests can put anything in its place."""

    def __init__(
        self, source: str, examine: Callable[[Watch, Callable[[str], None]], Examination]
    ) -> None:
        self.source = source
        self.examine = examine


class Finished(Message):
    """The worker has an examination."""

    def __init__(self, found: Examination) -> None:
        super().__init__()
        self.found = found


class Failed(Message):
    """The worker could not read or pass on the model."""

    def __init__(self, text: str, status: int) -> None:
        super().__init__()
        self.text, self.status = text, status


class WorkingScreen(Screen[None]):
    """Says what is being done, for how long, and how to stop it."""

    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("escape", "app.stop", "Stop"),
        Binding("q,ctrl+q", "app.quit", "Quit"),
    ]

    def __init__(self, source: str) -> None:
        super().__init__()
        self._source = source
        self._started = time.monotonic()
        self.step = "reading"
        self.iterations = 0
        self.stopping = False

    def compose(self) -> ComposeResult:
        """One line of text and the keys."""
        yield Static(self.text(), id="working", markup=False)
        yield Footer(show_command_palette=False)

    def on_mount(self) -> None:
        """Keep the line fresh."""
        self.set_interval(0.2, self.update_text)

    def update_text(self) -> None:
        """Show the time and iterations so far."""
        self.query_one("#working", Static).update(self.text())

    def text(self) -> str:
        """What is going on, in a line."""
        seconds = time.monotonic() - self._started
        step = "stopping" if self.stopping else self.step
        done = f", iteration {self.iterations}" if self.iterations else ""
        return f"{self._source}: {step}, {seconds:.0f} s{done}"


class LpviewApp(App[int]):
    """The keyboard program around one model."""

    TITLE = "lpview"
    ENABLE_COMMAND_PALETTE = True
    BINDINGS: ClassVar[list[BindingType]] = [
        Binding("ctrl+c", "quit", "Quit", show=False, priority=True)
    ]
    CSS = """
    Screen { background: $background; }
    #working { padding: 1 2; }
    """

    def __init__(self, work: Work, ascii_marks: bool = False) -> None:
        super().__init__()
        self.job = work
        self.ascii_marks = ascii_marks
        self.closing_text = ""
        self._watch: Any = None
        self._thread_stop = threading.Event()

    def on_mount(self) -> None:
        """Show what is being done, and begin."""
        self._leave_on_hangup()
        self.push_screen(WorkingScreen(self.job.source))
        self.set_interval(0.2, self._show_iterations)
        self.run_examination()

    def _leave_on_hangup(self) -> None:
        """End in order when the terminal goes away or the process is told to."""
        if threading.current_thread() is not threading.main_thread():
            return
        loop = asyncio.get_running_loop()
        for name in ("SIGHUP", "SIGTERM"):
            if hasattr(signal, name):
                loop.add_signal_handler(getattr(signal, name), self._leave_now)

    def _leave_now(self) -> None:
        self._thread_stop.set()
        # Where the terminal is gone already, closing it in order may wait for ever.
        last = threading.Timer(LAST_SECONDS, os._exit, (STOPPED,))
        last.daemon = True
        last.start()
        self.exit(STOPPED)

    @work(thread=True, exclusive=True)
    def run_examination(self) -> None:
        """Read, solve and check in a thread; the result arrives as a message."""
        try:
            self.post_message(Finished(self._examined()))
        except Exception as error:  # shown in a line; the terminal sees no traceback
            self.post_message(Failed(*_told(error)))

    def _examined(self) -> Examination:
        from lpview.run import Watch

        self._watch = Watch(stop=self._thread_stop)
        return self.job.examine(self._watch, self._say)

    @property
    def _working(self) -> WorkingScreen | None:
        """The screen of the work, while it is up; between screens there may be none."""
        top = self.screen_stack[-1] if self.screen_stack else None
        return top if isinstance(top, WorkingScreen) else None

    def _say(self, step: str) -> None:
        if working := self._working:
            working.step = step

    def _show_iterations(self) -> None:
        working = self._working
        if working and self._watch is not None:
            working.iterations = self._watch.iterations

    def action_stop(self) -> None:
        """End the solve at the next chance."""
        self._thread_stop.set()
        if working := self._working:
            working.stopping = True
            working.update_text()

    def get_system_commands(self, screen: Screen[Any]) -> Iterable[SystemCommand]:
        """The palette: every key's action in the words of the table, and the themes."""
        from lpview.screen.keys import KEYS, spelled

        for key in KEYS:
            name = key.action.partition("(")[0]
            if hasattr(screen, f"action_{name}"):
                act = partial(screen.run_action, key.action)
                yield SystemCommand(key.words, f"key: {spelled(key.key)}", act)
        yield SystemCommand("light, dark and other themes", "", self.action_change_theme)

    async def action_quit(self) -> None:
        """Leave with the exit status that the command line would have."""
        self._thread_stop.set()
        self.exit(self.return_status)

    return_status = STOPPED
    """Exit status if the program is left now: stopped, until there is a result."""

    def on_finished(self, message: Finished) -> None:
        """Show the mirror, or the report of any other outcome."""
        from lpview.commands.leaving import status
        from lpview.screen.outcome import screen_for

        self.return_status = status(message.found)
        self.switch_screen(screen_for(message.found, self.ascii_marks))

    def on_failed(self, message: Failed) -> None:
        """Show the message that the command line would print."""
        from lpview.screen.outcome import MessageScreen

        self.return_status = message.status
        self.closing_text = message.text
        self.switch_screen(MessageScreen(message.text))


def _told(error: Exception) -> tuple[str, int]:
    """The message and exit status that the command line would have."""
    from lpview.cli import told

    return told(error)


def needs_ascii() -> bool:
    """Whether the terminal is likely to lack the round marks."""
    encoding = (sys.stdout.encoding or "").lower().replace("-", "")
    return not encoding.startswith("utf") or os.environ.get("TERM", "") in ("linux", "vt100", "")


def run(work: Work, ascii_marks: bool) -> int:
    """Open the screen; returns the exit status."""
    app = LpviewApp(work, ascii_marks or needs_ascii())
    status = app.run()
    if app.closing_text:
        sys.stderr.write(app.closing_text + "\n")
    return app.return_status if status is None else status
