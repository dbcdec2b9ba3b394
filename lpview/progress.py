"""Long work in a thread of its own, so that Ctrl-C and a progress line get through."""

from __future__ import annotations

import os
import signal
import sys
import time
from collections.abc import Callable
from typing import TypeVar

from lpview.meanwhile import Meanwhile
from lpview.run import Watch

QUIET_SECONDS = 1.0
"""Work shorter than this shows no progress."""
TICK_SECONDS = 0.1
"""How often the progress line changes."""

SOLVING = ("solving", "iteration")
"""What is done, and what counts it, unless something else is said."""

Result = TypeVar("Result")


def watched(
    work: Callable[[], Result], watch: Watch, label: str, doing: tuple[str, str] = SOLVING
) -> Result:
    """Do ``work``, showing progress on standard error where that is a terminal.

    The first Ctrl-C sets ``watch.stop`` and waits for the work to end by itself;
    the second leaves at once with exit status 4. Exceptions of the work are raised here.
    ``doing`` says what is done, and what ``watch.iterations`` counts.
    """
    line = _ProgressLine(label, watch, doing)

    def on_interrupt(_signal: int, _frame: object) -> None:
        if watch.stop.is_set():
            line.clear()
            os._exit(4)
        watch.stop.set()

    before = signal.signal(signal.SIGINT, on_interrupt)
    try:
        running = Meanwhile(work)
        while running.is_running(TICK_SECONDS):
            line.show()
    finally:
        line.clear()
        signal.signal(signal.SIGINT, before)
    return running.result()


class _ProgressLine:
    """One line of a terminal, rewritten in place."""

    def __init__(self, label: str, watch: Watch, doing: tuple[str, str]) -> None:
        self._label, self._watch, self._doing = label, watch, doing
        self._started = time.monotonic()
        self._shown = False

    def show(self) -> None:
        """Rewrite the line, once the work has taken long enough."""
        seconds = time.monotonic() - self._started
        if seconds < QUIET_SECONDS or not sys.stderr.isatty():
            return
        doing, counted = self._doing
        doing = "stopping" if self._watch.stop.is_set() else doing
        text = f"{self._label}: {doing}, {seconds:.0f} s, {counted} {self._watch.iterations}"
        sys.stderr.write(f"\r{text}\x1b[K")
        sys.stderr.flush()
        self._shown = True

    def clear(self) -> None:
        """Leave no trace of the line."""
        if self._shown:
            sys.stderr.write("\r\x1b[K")
            sys.stderr.flush()
            self._shown = False
