"""What a report consists of, before it becomes text or Markdown."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True)
class Sentence:
    """One line of prose."""

    text: str
    """The line, without a line break."""
    strong: bool = False
    """Whether it is a verdict or a heading."""


Pairs = tuple[tuple[str, str], ...]
"""Labels and texts."""


@dataclass(frozen=True)
class Facts:
    """Labelled facts, one a line."""

    pairs: Pairs
    """Label and text of each."""


@dataclass(frozen=True)
class Table:
    """A table with a title."""

    title: str
    """One line above the table; may be empty."""
    header: tuple[str, ...]
    """Column heads."""
    rows: tuple[tuple[str, ...], ...]
    """Cells, as many in each row as there are heads; safe to print."""
    numeric: tuple[bool, ...]
    """Per column, whether its cells are numbers, which stand to the right."""


@dataclass(frozen=True)
class Command:
    """Something to copy into a shell, to the letter."""

    label: str
    """What it is for."""
    text: str
    """The command, on one line."""


Block = Sentence | Facts | Table | Command
Document = tuple[Block, ...]
