"""What a program's bytes make of a terminal: cells, switched modes, the clipboard.

The cells are kept by an emulator library. It knows only one screen, and draws or
swallows text after sequences that it does not know, so bytes are sorted here first:
modes, clipboard, and questions to the terminal never reach it.
"""

from __future__ import annotations

import base64
import codecs
import re
import unicodedata
from collections.abc import Mapping
from dataclasses import dataclass

import pyte
from wcwidth import wcwidth

FRAME = 2026
"""Private mode that is on while a frame is being drawn ("synchronized output")."""

ALTERNATE = {47, 1047, 1049}
"""Private modes of the alternate screen."""

CLEAN = {
    "alternate screen": {*ALTERNATE},
    "mouse tracking": {9, 1000, 1001, 1002, 1003, 1005, 1006, 1015, 1016},
    "focus reports": {1004},
    "bracketed paste": {2004},
    "unfinished frame": {FRAME},
    "resize reports": {2048},
}
"""Private modes that a program must switch off again."""

USUAL = {"hidden cursor": 25, "no line wrap": 7}
"""Private modes that are on at first; words for them off."""

_SEQUENCE = re.compile(
    r"\x1b(?:"
    r"\[(?P<prefix>[<-?]?)(?P<numbers>[\d:;]*)(?P<between>[ -/]*)(?P<final>[@-~])"
    r"|\](?P<command>[^\x07\x1b]*)(?:\x07|\x1b\\)"
    r"|P[^\x1b]*\x1b\\"
    r")"
)
_UNFINISHED = re.compile(r"\x1b(?:\[[0-?]*[ -/]*|[\]P][^\x07\x1b]*\x1b?|)\Z")


@dataclass(frozen=True)
class Cell:
    """One cell of the screen."""

    char: str
    """Its character with any combining marks; empty for the right half of a wide one."""
    fg: str
    """Colour of the character: ``default``, a name such as ``red``, or six hex digits."""
    bg: str
    """Colour behind it, likewise."""
    bold: bool
    """Whether it is drawn bold."""
    reverse: bool
    """Whether the two colours are exchanged."""


class _Cells(pyte.Screen):
    """The library's screen, less two faults, and counting what does not fit."""

    overflows = 0

    def draw(self, data: str) -> None:
        """Draw text without the characters at which the library would drop the rest."""
        shown = [char for char in data if wcwidth(char) > 0 or unicodedata.combining(char)]
        if self.cursor.x + sum(map(wcwidth, shown)) > self.columns:
            self.overflows += 1
        super().draw("".join(shown))


class Emulator:
    """Takes a program's output; says what stands on the screen and what is switched on."""

    def __init__(self, columns: int, rows: int) -> None:
        self.raw = bytearray()
        self.modes = set(USUAL.values())
        self.clipboard: str | None = None
        self.frames = 0
        self.answers: list[bytes] = []
        self._keyboard = 0
        self._decoder = codecs.getincrementaldecoder("utf-8")("replace")
        self._rest = ""
        self._main, self._other = _Cells(columns, rows), _Cells(columns, rows)
        self._streams = {id(cells): pyte.Stream(cells) for cells in (self._main, self._other)}

    @property
    def cells(self) -> _Cells:
        """The screen that is shown: the main one or the alternate one."""
        return self._other if self.modes & ALTERNATE else self._main

    @property
    def overflows(self) -> int:
        """How often a piece of text reached beyond the last column."""
        return self._main.overflows + self._other.overflows

    @property
    def lines(self) -> list[str]:
        """The lines of the screen: every one is ``columns`` *cells* wide.

        A wide character takes two cells but stands once in the text, so ``len(line)``
        is less by one for each: compare cells with `cell`, widths with ``wcswidth``.
        """
        width = range(self.cells.columns)
        return ["".join(row[x].data for x in width) for row in self.rows]

    @property
    def rows(self) -> list[Mapping[int, pyte.screens.Char]]:
        """The library's own cells, by line and column."""
        cells = self.cells
        return [cells.buffer[y] for y in range(cells.lines)]

    def cell(self, x: int, y: int) -> Cell:
        """The cell in a column and a line, both from 0."""
        found = self.cells.buffer[y][x]
        return Cell(found.data, found.fg, found.bg, found.bold, found.reverse)

    @property
    def left_on(self) -> tuple[str, ...]:
        """What is switched otherwise than a program finds it, in words."""
        words = [word for word, modes in CLEAN.items() if self.modes & modes]
        words += [word for word, mode in USUAL.items() if mode not in self.modes]
        return tuple(words + ["keyboard protocol"] * (self._keyboard > 0))

    def resize(self, columns: int, rows: int) -> None:
        """Change the size of both screens."""
        for cells in (self._main, self._other):
            cells.resize(rows, columns)

    def feed(self, data: bytes) -> None:
        """Take output, cut anywhere; `answers` then holds replies to the program."""
        self.raw += data
        text = self._rest + self._decoder.decode(data)
        cut = _UNFINISHED.search(text)
        self._rest = text[cut.start() :] if cut else ""
        place = 0
        text = text[: cut.start()] if cut else text
        for found in _SEQUENCE.finditer(text):
            self._draw(text[place : found.start()])
            place = found.end()
            self._obey(found)
        self._draw(text[place:])

    def _draw(self, text: str) -> None:
        self._streams[id(self.cells)].feed(text)

    def _obey(self, found: re.Match[str]) -> None:
        command, final = found["command"], found["final"]
        if command is not None:
            self._command(command)
        elif final is None:
            return  # a device control string
        elif found["prefix"] == "?" and final in "hl":
            self._switch(found["numbers"], final == "h")
            self._draw(found[0])
        elif found["between"] == "$" and final == "p" and found["numbers"] == str(FRAME):
            self.answers.append(b"\x1b[?%d;2$y" % FRAME)
        elif final == "u" and found["prefix"] in ("<", ">"):
            self._keyboard += 1 if found["prefix"] == ">" else -1
        elif not found["prefix"] and not found["between"]:
            self._draw(found[0])

    def _switch(self, numbers: str, on: bool) -> None:
        for mode in map(int, filter(None, numbers.split(";"))):
            if mode == FRAME and not on and FRAME in self.modes:
                self.frames += 1
            (self.modes.add if on else self.modes.discard)(mode)

    def _command(self, text: str) -> None:
        number, _, rest = text.partition(";")
        if number == "52":
            content = rest.partition(";")[2]
            self.clipboard = base64.b64decode(content, validate=True).decode()
