"""Which lines a table shows, in which order, and which one is selected; no drawing."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

Lines = NDArray[np.intp]
Mask = NDArray[np.bool_]


@dataclass
class TableView:
    """The state of one table: filters, sort, selection. Lines are local to the table."""

    names: tuple[str, ...]
    """Names of all lines, in file order."""
    labels: Mapping[int, str] = field(default_factory=dict)
    """Labels of the lines that have one, searched together with their names."""
    search: str = ""
    """Words that a shown line's name or label must contain, any case; empty for none."""
    flag_word: str = ""
    """The flag that shown lines carry; empty for any."""
    linked_to: str = ""
    """Name of the line to which all shown ones are linked; empty for no such limit."""
    family_word: str = ""
    """The family that is open; empty for all."""
    sort_word: str = ""
    """Title of the column that the lines are sorted by; empty for file order."""
    descending: bool = False
    """Whether the order is reversed."""
    line: int = -1
    """The selected line; -1 where the table has none."""
    order: Lines = field(default_factory=lambda: np.zeros(0, np.intp))
    """The shown lines, as shown."""
    _flagged: Mask | None = None
    _linked: Lines | None = None
    _member: Mask | None = None
    _sorted: Lines | None = None
    _rank: Lines | None = None
    _folded_names: list[str] | None = None
    _found: Mask | None = None

    def __post_init__(self) -> None:
        self.line = 0 if self.names else -1
        self._arrange()

    @property
    def position(self) -> int:
        """Place of the selected line among the shown ones; -1 where it is not shown."""
        if self.line < 0 or not self.order.size:
            return -1
        hits = np.flatnonzero(self.order == self.line)
        return int(hits[0]) if hits.size else -1

    @property
    def searched(self) -> str:
        """What a search looks at."""
        return "name or label" if self.labels else "name"

    def select(self, position: int) -> None:
        """Select the line at a place, held within the shown ones."""
        if self.order.size:
            self.line = int(self.order[min(max(position, 0), self.order.size - 1)])

    def limit_to_words(self, text: str) -> None:
        """Show lines whose name and label contain every word of ``text``."""
        self.search = " ".join(text.split())
        self._found = self._matching(self.search) if self.search else None
        self._arrange()

    def limit_to_flag(self, word: str, carrying: Mask | None) -> None:
        """Show lines that carry a flag, given by its word and its mask."""
        self.flag_word, self._flagged = word, carrying
        self._arrange()

    def limit_to_family(self, word: str, members: Lines | None) -> None:
        """Show the members of a family, given by its name and its lines."""
        self.family_word, self._member = word, None
        if members is not None:
            self._member = np.zeros(len(self.names), dtype=bool)
            self._member[members] = True
        self._arrange()

    def limit_to_linked(self, name: str, linked: Lines | None) -> None:
        """Show the lines linked to another one; None shows all again."""
        self.linked_to, self._linked = name, linked
        self._arrange()

    def sort(self, word: str, keys: NDArray[Any] | None, descending: bool) -> None:
        """Sort by a column's keys, ties in file order; None is file order."""
        self.sort_word, self.descending = word, descending
        self._sorted = None
        if keys is not None:
            self._sorted = _stable_order(keys, descending)
        elif descending:
            self._sorted = np.arange(len(self.names))[::-1]
        self._rank = None
        if self._sorted is not None:
            self._rank = np.empty_like(self._sorted)
            self._rank[self._sorted] = np.arange(self._sorted.size)
        self._arrange()

    def _matching(self, words: str) -> Mask:
        if self._folded_names is None:
            self._folded_names = [name.casefold() for name in self.names]
            for line, label in self.labels.items():
                self._folded_names[line] += f" {label.casefold()}"
        found = np.ones(len(self.names), dtype=bool)
        for word in words.casefold().split():
            found &= np.fromiter((word in name for name in self._folded_names), bool, found.size)
        return found

    def _arrange(self) -> None:
        """Recompute the shown lines; the selected one stays, or its successor takes over."""
        before = self.position
        lines = self._limited() if self._linked is None else self._all_linked(self._linked)
        self.order = lines
        if self.position < 0 and lines.size:
            later = lines[lines > self.line] if self._rank is None else lines[:0]
            self.line = int(later[0] if later.size else lines[max(min(before, lines.size - 1), 0)])

    def _all_linked(self, linked: Lines) -> Lines:
        """The linked lines in the order of the table, whatever else limits it."""
        lines = np.sort(linked)
        return lines if self._rank is None else lines[np.argsort(self._rank[lines], kind="stable")]

    def _limited(self) -> Lines:
        """The lines that pass the person's own filters, sorted."""
        lines = np.arange(len(self.names)) if self._sorted is None else self._sorted
        for mask in (self._found, self._flagged, self._member):
            lines = lines if mask is None else lines[mask[lines]]
        return lines


def _stable_order(keys: NDArray[Any], descending: bool) -> Lines:
    """Order of ascending or descending keys; ties, and numbers that are none, keep file order."""
    if not descending:
        return np.argsort(keys, kind="stable")
    if keys.dtype.kind == "f":
        return np.argsort(-keys, kind="stable")
    return keys.size - 1 - np.argsort(keys[::-1], kind="stable")[::-1]
