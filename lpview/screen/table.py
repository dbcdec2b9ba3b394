"""One table of the mirror: constraints or variables, or their families, line by line."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, field

import numpy as np
from rich.style import Style

from lpview.families import Summary
from lpview.labels import NO_LABEL
from lpview.marks import FAULTS
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.report.names import fitted, width
from lpview.report.numbers import fitted_number
from lpview.screen.columns import (
    GAP,
    NUMBER,
    UNIT,
    Column,
    Layout,
    TableColumns,
    layout,
    named,
    widths_of,
)
from lpview.screen.pane import (
    CURSOR,
    CURSOR_AWAY,
    FAULT,
    HEADING,
    LIT,
    PLAIN,
    QUIET,
    LinesPane,
    Runs,
)
from lpview.screen.spine import WIDTH, Glyphs, spine
from lpview.screen.view import Lines, TableView

CURSOR_CELLS = 2
"""Cells before the names, where the selected line is marked."""

FAMILY_CELLS = (7, 10, 10, 14, 12)
"""Cells of the columns of families: counts, the largest price, the worth."""


@dataclass(frozen=True)
class Link:
    """How the lines of this table stand to the line selected in the other one."""

    title: str = ""
    """Head of the link column; empty where nothing is selected there."""
    lines: Lines = field(default_factory=lambda: np.zeros(0, np.intp))
    """The linked lines, ascending."""
    coefficients: Vector = field(default_factory=lambda: np.zeros(0))
    """What each shares with the other line."""

    def coefficient(self, line: int) -> float | None:
        """The coefficient that a line shares with the other one, if it does."""
        place = int(np.searchsorted(self.lines, line))
        linked = place < self.lines.size and self.lines[place] == line
        return float(self.coefficients[place]) if linked else None


class MirrorTable(LinesPane):
    """A table that draws its visible lines from the examination's arrays."""

    heading_lines = 2

    def __init__(
        self,
        found: Optimal,
        columns: TableColumns,
        first_line: int,
        names: tuple[str, ...],
        families: Summary,
        glyphs: Glyphs,
        **options: str | None,
    ) -> None:
        super().__init__(**options)
        self.found, self.columns, self.glyphs = found, columns, glyphs
        self.first_line = first_line
        labels = {k: known.label for k, known in columns.labels.items() if known.label}
        self.view = TableView(names, labels)
        self.families = families
        self.folded = False
        self.link = Link()
        self.on_moved: Callable[[LinesPane], None] = lambda _: None
        self._fit: tuple[int, Layout] | None = None
        self.widths = widths_of(names, columns.labels)

    # What there is -----------------------------------------------------------

    @property
    def line_count(self) -> int:
        """Lines or families shown."""
        return len(self.families.count) if self.folded else int(self.view.order.size)

    @property
    def global_line(self) -> int:
        """The selected line, numbered as in `lpview.kkt`; -1 where there is none."""
        return -1 if self.view.line < 0 else self.first_line + self.view.line

    def moved(self) -> None:
        """The cursor's place becomes the selected line, or that of the family."""
        if self.folded:
            self.view.line = int(self.families.families.members(self.cursor)[0])
        else:
            self.view.select(self.cursor)
        self.on_moved(self)

    def select_line(self, line: int) -> None:
        """Put the cursor on a line of this table, if it is shown."""
        self.view.line = line
        self.to_selected()

    def to_selected(self) -> None:
        """Bring the cursor to the selected line or its family, after any rearranging."""
        if self.folded:
            self.cursor = int(self.families.families.of_line[self.view.line])
        else:
            self.cursor = max(self.view.position, 0)
        self.show_cursor()

    def fold(self, folded: bool) -> None:
        """Show families, or lines."""
        self.folded = folded and bool(self.view.names)
        if self.folded:
            self.view.limit_to_family("", None)
        self.to_selected()

    def open_family(self) -> None:
        """Show the lines of the family under the cursor."""
        groups = self.families.families
        members = groups.members(self.cursor)
        self.folded = False
        self.view.limit_to_family(groups.labels[self.cursor], members)
        self.select_line(int(members[0]))

    def limit_to_linked(self, name: str, linked: Lines | None) -> None:
        """Show only lines linked to the other table's, or all again."""
        self.view.limit_to_linked(name, linked)
        self.to_selected()

    # Sorting -----------------------------------------------------------------

    def sortable(self) -> list[Column]:
        """Columns that can be sorted by, from the names outwards."""
        both = (*self.columns.primal, *self.columns.prices)
        return [column for column in both if column.keys is not None]

    def sort_by_next(self) -> None:
        """From file order through names and columns, and round again."""
        words = ["", "name", *(column.title for column in self.sortable())]
        word = words[(words.index(self.view.sort_word) + 1) % len(words)]
        self.sort_by(word, self.view.descending)

    def sort_by(self, word: str, descending: bool) -> None:
        """Sort by a column's title, ``name``, or nothing."""
        keys = next((c.keys for c in self.sortable() if c.title == word), None)
        if word == "name":
            # Ranks instead of texts: sorting Python strings is the quicker way.
            names = self.view.names
            keys = np.empty(len(names))
            keys[sorted(range(len(names)), key=names.__getitem__)] = np.arange(len(names))
        self.view.sort(word, keys, descending)
        self.folded = False
        self.to_selected()

    # Drawing -----------------------------------------------------------------

    def heading(self, width_: int) -> list[Runs]:
        """A line on what is shown, and the heads of the columns."""
        style = HEADING if self.has_focus else PLAIN
        return [[(fitted(self.status(), width_, self.glyphs.more), style)], self._heads(width_)]

    def status(self) -> str:
        """Pane, line n of m, filters, sort: always visible."""
        mark = self.glyphs.cursor if self.has_focus else " "
        if self.folded:
            place = f"family {self.cursor + 1} of {self.line_count}"
            return f"{mark} {self.columns.kind}  {place}  all"
        view = self.view
        position = view.position + 1
        parts = [f"{mark} {self.columns.kind}  {position} of {view.order.size}"]
        limits = [view.flag_word, view.family_word and f"family {view.family_word}"]
        limits += [view.search and f"{view.searched} has {view.search}"]
        if view.linked_to:
            limits = [f"linked to {view.linked_to}"]
        parts.append(", ".join(limit for limit in limits if limit) or "all")
        if view.sort_word or view.descending:
            arrow = self.glyphs.down if view.descending else self.glyphs.up
            parts.append(f"by {view.sort_word or 'file order'} {arrow}")
        return "  ".join(parts)

    def shared_layout(self, width_: int) -> Layout:
        """The layout that both tables use, so that the spine runs straight down."""
        if self._fit is None or self._fit[0] != width_:
            self._fit = width_, layout(width_, CURSOR_CELLS, WIDTH, self.widths)
        return self._fit[1]

    def share_layout_with(self, other: MirrorTable) -> None:
        """Give both tables room for the longest name, label and unit of either."""
        self.widths = self.widths.joined(other.widths)
        self._fit = None

    def _heads(self, width_: int) -> Runs:
        fit = self.shared_layout(width_)
        space = " " * GAP
        if self.folded:
            texts = ("lines", "zero slack", "degenerate", self._largest, self._worth)
            return [(self._family_line("family", texts, width_, " "), QUIET)]
        left = [_right(c.title, c.cells) for c in reversed(self.columns.primal[: fit.primal])]
        left[-1] += self._beside(UNIT, fit)
        link = fitted(self.link.title, NUMBER, self.glyphs.more)
        right = self._right_side(fit, lambda column: column.title, lambda _: "", link)
        cells = ["  " + _left("name", fit.name), *left, " " * WIDTH, right]
        return [(space.join(cells), QUIET)]

    def _right_side(
        self, fit: Layout, text: Callable[[Column], str], mark: Callable[[Column], str], link: str
    ) -> str:
        """The price side of a line or of the heads, each cell with the gap behind it."""
        columns = self.columns.prices[: fit.prices]
        if self.link.title and not fit.is_link_apart:
            columns = columns[:1]
        cells = [
            _right(text(column), column.cells) + _left(mark(column), GAP) for column in columns
        ]
        return "".join(cells) + _right(link, NUMBER)

    def content(self, index: int, width_: int) -> Runs:
        """One line or family."""
        is_cursor = index == self.cursor
        mark = self.glyphs.cursor if is_cursor else " "
        if self.folded:
            return self._family(index, width_, mark, self._style(is_cursor, lit=False))
        line = int(self.view.order[index])
        text = self._line(line, width_, mark)
        return [(text, self._style(is_cursor, self.link.coefficient(line) is not None, line))]

    def _style(self, is_cursor: bool, lit: bool, line: int = -1) -> Style:
        style = LIT if lit else PLAIN
        flags = self.found.marks.flags
        if line >= 0 and any(flags[fault][self.first_line + line] for fault in FAULTS):
            style = FAULT
        if not is_cursor:
            return style
        return style + (CURSOR if self.has_focus else CURSOR_AWAY)

    def _line(self, line: int, width_: int, mark: str) -> str:
        fit = self.shared_layout(width_)
        left = [_right(c.text(line), c.cells) for c in reversed(self.columns.primal[: fit.primal])]
        known = self.columns.labels.get(line, NO_LABEL)
        left[-1] += self._beside(known.unit, fit)
        shared = self.link.coefficient(line)
        link = "" if shared is None else fitted_number(shared, NUMBER)
        right = self._right_side(fit, lambda c: c.text(line), lambda c: c.mark(line), link)
        marks = spine(self.found.marks, self.first_line + line, self.glyphs)
        name = named(self.view.names[line], known.label, fit.name, self.glyphs.more)
        name = _left(name, fit.name)
        return (" " * GAP).join([mark + " " + name, *left, marks, right])

    def _beside(self, unit: str, fit: Layout) -> str:
        """A unit behind a number, where units are shown."""
        return " " + _left(fitted(unit, fit.unit, self.glyphs.more), fit.unit) if fit.unit else ""

    def shows(self, lines: Iterable[int]) -> bool:
        """Whether any of these lines, numbered as in `lpview.kkt`, is in sight."""
        if self.folded:
            return False
        seen = self.view.order[self.top : self.top + self.visible_lines] + self.first_line
        return not set(seen.tolist()).isdisjoint(lines)

    def _family(self, index: int, width_: int, mark: str, style: Style) -> Runs:
        summary = self.families
        label = summary.families.labels[index]
        degenerate = summary.degenerate
        cells = [
            str(summary.count[index]),
            str(summary.zero_slack[index]),
            "not known" if degenerate is None else str(degenerate[index]),
            fitted_number(float(summary.largest[index]), NUMBER),
            fitted_number(float(summary.worth[index]), NUMBER),
        ]
        return [(self._family_line(label, cells, width_, mark), style)]

    def _family_line(self, name: str, cells: Sequence[str], width_: int, mark: str) -> str:
        space = CURSOR_CELLS + sum(FAMILY_CELLS) + GAP * len(FAMILY_CELLS)
        room = max(min(width_ - space, self.shared_layout(width_).name), 8)
        name = _left(fitted(name, room, self.glyphs.more), room)
        texts = (_right(cell, wide) for cell, wide in zip(cells, FAMILY_CELLS, strict=True))
        return (" " * GAP).join([mark + " " + name, *texts])

    @property
    def _largest(self) -> str:
        return f"|{self.columns.prices[0].title}|"

    @property
    def _worth(self) -> str:
        return "price x side" if self.columns.kind == "CONSTRAINT" else "cost x value"


def _left(text: str, cells: int) -> str:
    return text + " " * max(cells - width(text), 0)


def _right(text: str, cells: int) -> str:
    return " " * max(cells - width(text), 0) + text
