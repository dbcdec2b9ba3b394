"""From a key press to the finished frame, as a terminal receives it.

Only the bytes are looked at: nothing inside the measured program takes part, so what is
measured is what a person waits for: reading the key, computing, drawing, writing.

The bytes are stamped as they come and put through the emulator afterwards, so that its
own time is not counted. A frame is *finished* at the first moment from which the screen
is the same, in every character and style, as after the program has gone quiet; the
screen must then show what was asked for.
"""

from __future__ import annotations

import select
import time
from collections.abc import Callable
from pathlib import Path

from tests.screen.emulator import FRAME
from tests.screen.terminal import PATIENCE, Terminal

QUIET = 0.1
"""Seconds without a byte after which a frame counts as the last."""

Shown = Callable[[Terminal], bool]


class TimedTerminal(Terminal):
    """A terminal that says when its screen was finished."""

    def timed_press(
        self, key: str, shown: Shown, quiet: float = QUIET, styles: bool = True
    ) -> float:
        """Press a key; seconds until the frame that shows its effect was finished.

        Parameters
        ----------
        shown
            Whether the effect is on the screen.
        styles
            Whether a change of style alone counts; not where a cursor blinks.
        """
        started = time.monotonic()
        self.press(key)
        return self.finished(shown, quiet, styles) - started

    def processor(self) -> float:
        """Seconds of processor time that the program has used so far, in all its threads."""
        tasks = Path(f"/proc/{self.process.pid}/task").glob("*/schedstat")
        return sum(int(task.read_text().split()[0]) for task in tasks) / 1e9

    def finished(self, shown: Shown, quiet: float = QUIET, styles: bool = True) -> float:
        """The monotonic clock when the screen became what it is after going quiet."""
        stamps: list[tuple[float, object]] = []
        until = time.monotonic() + PATIENCE
        while not (stamps and shown(self)):
            if time.monotonic() > until or self.process.poll() is not None:
                raise AssertionError(f"not shown within {PATIENCE:g} s; the screen:\n{self.text}")
            for moment, data in self._collected(quiet):
                self.feed(data)
                stamps.append((moment, self._state(styles)))
        last = stamps[-1][1]
        return next(
            stamps[place][0]
            for place in range(len(stamps))
            if all(state == last for _, state in stamps[place:])
        )

    def first(self, shown: Shown) -> float:
        """The monotonic clock at the first whole frame that shows something."""
        while not (FRAME not in self.emulator.modes and shown(self)):
            moment, data = self._chunk(PATIENCE)
            if not data:
                raise AssertionError(f"not shown; the screen:\n{self.text}")
            self.feed(data)
        return moment

    def _collected(self, quiet: float) -> list[tuple[float, bytes]]:
        chunks = []
        while True:
            moment, data = self._chunk(quiet)
            if not data:
                return chunks
            chunks.append((moment, data))

    def _state(self, styles: bool) -> object:
        """What can be seen; never equal to anything while a frame is unfinished."""
        if FRAME in self.emulator.modes:
            return object()
        cells = self.emulator.cells
        if not styles:
            return self.emulator.lines
        return [[row[x] for x in range(cells.columns)] for row in self.emulator.rows]

    def _chunk(self, timeout: float) -> tuple[float, bytes]:
        """What comes next and when; nothing if it does not come."""
        ready, _, _ = select.select([self.fileno()], [], [], timeout)
        moment = time.monotonic()
        return moment, self.receive() if ready else b""
