"""Mistakes of an input: where, what was expected, what was found, what to do.

Mistakes are collected while reading, so that one run reports many of them, and
are raised together as one `InputError`.
"""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from typing import NamedTuple

LIMIT = 20
"""Mistakes that are printed; the others are counted."""

LONGEST = 60
"""Characters of the input that a message repeats."""

ERROR_CELLS = frozenset(("#N/A", "#REF!", "#VALUE!", "#NAME?", "#DIV/0!", "#NUM!", "#NULL!"))
"""What a spreadsheet exports where a formula failed."""

ERROR_ADVICE = "mend it in the spreadsheet and export again"
"""What to do about an error cell."""

_ERROR = "the spreadsheet error "


@dataclass(frozen=True)
class Mistake:
    """One thing that is wrong with an input; ``str()`` is its one-line message."""

    file: str
    """The file as the user named it."""
    expected: str
    """What should stand there, in words."""
    got: str
    """What stands there, in words; input text only through `quoted`."""
    line: int = 0
    """Line of the file, counted from 1; 0 for the file as a whole."""
    block: str = ""
    """Name of the block without brackets; empty outside of blocks."""
    field: str = ""
    """Header of the cell, or what the line is; empty for the file as a whole."""
    advice: str = ""
    """What to do, where that is not obvious."""
    name: str = ""
    """An unknown name, for which the nearest of ``choices`` is suggested."""
    choices: Sequence[str] = ()
    """Names that would have been right."""

    def __str__(self) -> str:
        where = printable(self.file) + (f":{self.line}" if self.line else "")
        block = f"[{self.block}] " if self.block else ""
        field = f"{shortened(self.field)}: " if self.field else ""
        text = f"{where}: {block}{field}expected {self.expected}, got {self.got}"
        mend = ERROR_ADVICE if self.got.startswith(_ERROR) else ""
        return "; ".join(filter(None, (text, self._suggestion(), self.advice or mend)))

    def _suggestion(self) -> str:
        if not self.choices:
            return ""
        from difflib import get_close_matches  # only when something is wrong

        folded = {choice.casefold(): choice for choice in self.choices}
        near = get_close_matches(self.name.casefold(), folded, n=1, cutoff=0.6)
        return f"did you mean {quoted(folded[near[0]])}?" if near else ""


class InputError(ValueError):
    """An input cannot be used; ``str()`` has one line per mistake, `LIMIT` at most."""

    def __init__(self, mistakes: Iterable[Mistake]) -> None:
        self.mistakes = tuple(mistakes)
        """Every mistake found, in the order of files and lines."""
        super().__init__(self.mistakes)

    def __str__(self) -> str:
        lines = [str(mistake) for mistake in self.mistakes[:LIMIT]]
        if len(self.mistakes) > LIMIT:
            lines.append(f"and {len(self.mistakes) - LIMIT} more")
        return "\n".join(lines)


class Mistakes:
    """Collects the mistakes of one reading."""

    def __init__(self) -> None:
        self.found: list[Mistake] = []
        """Mistakes in the order in which they were found."""

    def add(self, mistake: Mistake) -> None:
        """Remember a mistake."""
        self.found.append(mistake)

    def among(self, block: str) -> bool:
        """Whether anything is wrong with the blocks of this name."""
        return any(mistake.block == block for mistake in self.found)

    def stop(self, files: Sequence[str]) -> None:
        """Raise `InputError`, in the order of ``files`` and lines, if any was found."""
        if self.found:
            order = {file: place for place, file in enumerate(files)}
            raise InputError(sorted(self.found, key=lambda m: (order[m.file], m.line)))


class Problem(NamedTuple):
    """What is wrong, apart from where."""

    expected: str
    """What should stand there, in words."""
    got: str
    """What stands there, in words."""
    advice: str = ""
    """What to do, where that is not obvious."""


@dataclass(frozen=True)
class Place:
    """A block of a file (or a whole file), and where its mistakes are collected."""

    file: str
    """The file as the user named it."""
    block: str
    """Name of the block without brackets; empty outside of blocks."""
    mistakes: Mistakes
    """Where they are collected."""

    def wrong(self, line: int, field: str, problem: Problem) -> None:
        """Remember a mistake."""
        expected, got, advice = problem
        self.mistakes.add(Mistake(self.file, expected, got, line, self.block, field, advice))

    def unknown(
        self, line: int, field: str, problem: Problem, name: str, choices: Sequence[str]
    ) -> None:
        """Remember an unknown name, with the names that would have been right."""
        expected, got, advice = problem
        mistake = Mistake(self.file, expected, got, line, self.block, field, advice)
        self.mistakes.add(replace(mistake, name=name, choices=choices))


def quoted(text: str) -> str:
    """Text of the input as a message repeats it: quoted, harmless and short."""
    if not text:
        return "an empty cell"
    error = _ERROR if text in ERROR_CELLS else ""
    return f"{error}'{shortened(text)}'"


def shortened(text: str) -> str:
    """`printable` text, cut where it is very long."""
    return printable(text if len(text) <= LONGEST else text[: LONGEST - 1] + "…")


def printable(text: str) -> str:
    """The text with every character escaped that could move a terminal's cursor."""
    if text.isprintable():
        return text
    return "".join(c if c.isprintable() else ascii(c)[1:-1] for c in text)
