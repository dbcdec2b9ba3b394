"""A program in a real pseudo-terminal, read through a terminal emulator.

    with Terminal(["lpview", "winter.csv"], columns=80, rows=24) as terminal:
        terminal.wait_for("optimal")
        terminal.press("down", "enter")
        ...
        terminal.press("q")
        assert terminal.exit_status == 0
        assert terminal.left_clean()

Nothing waits on a clock: `Terminal.wait_for` reads until the screen is as wanted. It
looks only at whole frames of a program that marks them (the emulator says that it
understands the marks), so it never sees half of an old frame and half of a new one.
"""

from __future__ import annotations

import fcntl
import os
import select
import signal
import struct
import subprocess
import termios
import time
from collections.abc import Callable, Mapping, Sequence
from typing import Self

from tests.screen.emulator import FRAME, Cell, Emulator

PATIENCE = 20.0
"""Seconds after which a screen that does not come, or a program that does not end, fails."""

KEYS = {
    "up": "\x1b[A", "down": "\x1b[B", "right": "\x1b[C", "left": "\x1b[D",
    "home": "\x1b[H", "end": "\x1b[F", "pageup": "\x1b[5~", "pagedown": "\x1b[6~",
    "insert": "\x1b[2~", "delete": "\x1b[3~", "backspace": "\x7f", "enter": "\r",
    "escape": "\x1b", "tab": "\t", "shift+tab": "\x1b[Z", "space": " ",
    "ctrl+up": "\x1b[1;5A", "ctrl+down": "\x1b[1;5B", "shift+up": "\x1b[1;2A",
    "shift+down": "\x1b[1;2B", "ctrl+home": "\x1b[1;5H", "ctrl+end": "\x1b[1;5F",
    "f1": "\x1bOP", "f2": "\x1bOQ", "f3": "\x1bOR", "f4": "\x1bOS", "f5": "\x1b[15~",
}  # fmt: skip
"""What a terminal sends for keys that have a name."""

# A leader of a session that opens a terminal gets it as its own; no code runs between
# fork and exec, which is not safe beside the threads of a solver.
_START = ["sh", "-c", 'exec "$@" <>"$0" >&0 2>&0']

_DROPPED = ("COLUMNS", "LINES", "NO_COLOR", "FORCE_COLOR", "CLICOLOR_FORCE", "TERM_PROGRAM")
_USUAL = {"TERM": "xterm-256color", "COLORTERM": "truecolor", "LANG": "C.UTF-8"}


class Terminal:
    """One program in its own pseudo-terminal; use it as a context manager.

    Parameters
    ----------
    words
        The program and its arguments.
    env
        Variables on top of this process's, less those that describe its own terminal;
        None takes one away.
    """

    def __init__(
        self,
        words: Sequence[str | os.PathLike[str]],
        columns: int = 80,
        rows: int = 24,
        env: Mapping[str, str | None] | None = None,
        cwd: str | os.PathLike[str] | None = None,
    ) -> None:
        self.emulator = Emulator(columns, rows)
        self._pty, slave = os.openpty()
        self._set_size(columns, rows)
        self._flags = termios.tcgetattr(slave)[:4]
        ended, alive = os.pipe()
        self.process = subprocess.Popen(
            [*_START, os.ttyname(slave), *map(os.fspath, words)],
            env=_environment(env or {}), cwd=cwd, start_new_session=True, pass_fds=[alive],
        )  # fmt: skip
        os.close(alive)
        # Kept open, so that a program that leaves cannot take what it wrote with it.
        self._slave, self._ended = slave, ended
        self._closed = False

    def __enter__(self) -> Self:
        return self

    def __exit__(self, *_: object) -> None:
        self.close()

    # What the person does ----------------------------------------------------

    def press(self, *keys: str) -> None:
        """Press keys by name ("down", "ctrl+c"), or type a text.

        Escape must be the last of a call: with the next key it would be another key.
        """
        if "escape" in keys[:-1]:
            raise ValueError("escape: wait for what it does before the next key")
        self.send("".join(map(_sent, keys)).encode())

    def click(self, x: int, y: int) -> None:
        """Press and release the left mouse button on a cell, both from 0."""
        self.send(f"\x1b[<0;{x + 1};{y + 1}M\x1b[<0;{x + 1};{y + 1}m".encode())

    def send(self, data: bytes) -> None:
        """Send bytes as they are."""
        os.write(self._pty, data)

    def resize(self, columns: int, rows: int) -> None:
        """Change the size of the window; the program is told by the system."""
        self.emulator.resize(columns, rows)
        self._set_size(columns, rows)

    def hang_up(self) -> None:
        """Send the signal of a closed window, while the terminal can still be looked at."""
        self.process.send_signal(signal.SIGHUP)

    def close_window(self, timeout: float = PATIENCE) -> int:
        """Take the terminal away from the program, as a closed window does; its exit status."""
        os.close(self._pty)
        self._pty = -1
        if not select.select([self._ended], [], [], timeout)[0]:
            raise AssertionError(f"not ended within {timeout:g} s of the window's end")
        return self.process.wait()

    # What the person sees ----------------------------------------------------

    @property
    def lines(self) -> list[str]:
        """The lines of the screen; see `Emulator.lines` on wide characters."""
        return self.emulator.lines

    @property
    def text(self) -> str:
        """The screen as one text, without blanks at the ends of lines."""
        return "\n".join(line.rstrip() for line in self.lines)

    @property
    def clipboard(self) -> str | None:
        """What the program last sent to the terminal's clipboard; None for nothing."""
        return self.emulator.clipboard

    @property
    def overflows(self) -> int:
        """How often text reached beyond the last column; a resize may add one or two,
        by a frame that was made for the size before."""
        return self.emulator.overflows

    def cell(self, x: int, y: int) -> Cell:
        """The cell in a column and a line, both from 0."""
        return self.emulator.cell(x, y)

    def places(self, char: str) -> list[tuple[int, int]]:
        """Column and line, from 0, of every cell with a character, line by line."""
        cells = self.emulator.cells
        return [
            (x, y)
            for y in range(cells.lines)
            for x in range(cells.columns)
            if self.cell(x, y).char == char
        ]

    def wait_for(
        self, wanted: str | Callable[[Terminal], object], timeout: float = PATIENCE
    ) -> None:
        """Read until a text stands on one line of the screen, or a condition holds."""
        holds = wanted if callable(wanted) else lambda self: any(wanted in x for x in self.lines)
        until = time.monotonic() + timeout
        while not (self._is_whole and holds(self)):
            if not self._read(until - time.monotonic()):
                late = time.monotonic() >= until
                why = f"within {timeout:g} s" if late else "before the program ended"
                name = wanted if isinstance(wanted, str) else wanted.__name__
                raise AssertionError(f"{name!r} did not come {why}; the screen:\n{self.text}")

    def read_until_quiet(self, quiet: float = 0.1) -> None:
        """Read until nothing has come for so many seconds; to see that nothing changes."""
        while self._read(quiet):
            pass

    # How it ends -------------------------------------------------------------

    def wait_until_ended(self, timeout: float = PATIENCE) -> int:
        """Read until the program has ended; its exit status, or less than 0 for a signal."""
        until = time.monotonic() + timeout
        while self._read(until - time.monotonic()):
            pass
        if self.process.returncode is None and time.monotonic() >= until:
            raise AssertionError(f"not ended within {timeout:g} s; the screen:\n{self.text}")
        return self.process.wait()

    @property
    def exit_status(self) -> int:
        """The exit status, waited for."""
        return self.wait_until_ended()

    @property
    def left_on(self) -> tuple[str, ...]:
        """What an ended program left switched on in the terminal, in words."""
        changed = termios.tcgetattr(self._slave)[:4] != self._flags
        return (*self.emulator.left_on, *["line settings"] * changed)

    def left_clean(self) -> bool:
        """True; fails with what an ended program left switched on."""
        self.wait_until_ended()
        if self.left_on:
            raise AssertionError(f"left switched on: {', '.join(self.left_on)}")
        return True

    def close(self) -> None:
        """End the program if it has not ended, and give everything back."""
        if self._closed:
            return
        self._closed = True
        if self.process.poll() is None:
            self.process.kill()
        self.process.wait()
        for number in filter(lambda number: number >= 0, (self._pty, self._slave, self._ended)):
            os.close(number)

    # Bytes -------------------------------------------------------------------

    @property
    def _is_whole(self) -> bool:
        return FRAME not in self.emulator.modes

    def _read(self, timeout: float) -> bool:
        """Take what has come, waiting for it; False if nothing comes, or ever will."""
        ready, _, _ = select.select([self._pty, self._ended], [], [], max(timeout, 0.0))
        if self._pty not in ready:
            if self._ended in ready:
                self.process.wait()
            return False
        self.feed(self.receive())
        return True

    def fileno(self) -> int:
        """The terminal's end of the pseudo-terminal, for ``select``."""
        return self._pty

    def receive(self) -> bytes:
        """Take what the program has written, or wait for it, unseen."""
        return os.read(self._pty, 1 << 16)

    def feed(self, data: bytes) -> None:
        """Put received bytes on the screen, and answer what they ask."""
        self.emulator.feed(data)
        for answer in self.emulator.answers:
            self.send(answer)
        self.emulator.answers.clear()

    def _set_size(self, columns: int, rows: int) -> None:
        fcntl.ioctl(self._pty, termios.TIOCSWINSZ, struct.pack("HHHH", rows, columns, 0, 0))


def _environment(changes: Mapping[str, str | None]) -> dict[str, str]:
    own = {name: os.environ[name] for name in os.environ if name not in _DROPPED}
    return {
        name: value for name, value in {**own, **_USUAL, **changes}.items() if value is not None
    }


def _sent(key: str) -> str:
    if key in KEYS:
        return KEYS[key]
    head, plus, letter = key.rpartition("+")
    if plus and head == "ctrl" and len(letter) == 1:
        return chr(ord(letter.upper()) & 0x1F)
    return key
