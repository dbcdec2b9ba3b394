"""The words around the sparsity pattern: axes, legend, and what lies under the cursor."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from lpview.report.names import fitted, safe, width
from lpview.report.numbers import number
from lpview.screen.picture_grid import Axis, Integers, Pattern, positions, row_of
from lpview.screen.picture_view import HEADER_LINES, Layout, View

Run = tuple[str, str]
Line = list[Run]

WORD_STYLES = ("text", "margin", "pointer")
"""Names of the styles around the picture."""


@dataclass(frozen=True)
class Glyphs:
    """The characters of marks."""

    every: str
    """Margin: every line of the cell has the property."""
    some: str
    """Margin: some lines of the cell have it."""
    pointer: str
    """Left of the selected row."""
    pointer_down: str
    """Above the selected column."""
    along: str
    """The selected row where a cell is empty."""
    down: str
    """The selected column where a cell is empty."""
    own: str
    """A coefficient of the selected line."""
    more: str
    """The end of a name that was cut."""


DRAWN = Glyphs("█", "▒", "►", "▼", "─", "│", "●", "…")
"""For terminals that show them."""
PLAIN = Glyphs("#", "+", ">", "v", "-", "|", "X", "~")
"""For all others."""


def glyphs_of(layout: Layout) -> Glyphs:
    """The characters that a layout is drawn with."""
    return PLAIN if layout.is_ascii else DRAWN


def axis_text(kind: str, axis: Axis, names: tuple[str, ...], layout: Layout) -> Line:
    """``constraints 1-400 of 821: heat to bench``."""
    glyphs = glyphs_of(layout)
    if axis.lines == 1:
        text = f"{kind} {axis.start + 1} of {len(names)}: "
        room = layout.width - width(text)
        return [(text + cut(names[axis.start], room, glyphs), "text")]
    text = f"{kind}s {axis.start + 1}-{axis.stop} of {len(names)}: "
    room = layout.width - width(text) - len(" to ")
    first = cut(names[axis.start], room // 2, glyphs)
    last = cut(names[axis.stop - 1], room - width(first), glyphs)
    return [(f"{text}{first} to {last}", "text")]


def cut(name: str, cells: int, glyphs: Glyphs) -> str:
    """A name in at most so many cells, harmless, and marked where it was cut."""
    if cells < 1:
        return ""
    shown = fitted(name, cells)
    return shown if shown == safe(name) else shown[:-1] + glyphs.more


def clipped(line: Line, cells: int) -> Line:
    """A line in at most so many cells."""
    kept: Line = []
    for text, style in line:
        # Every character of the picture itself takes one cell.
        taken = width(text) if style in WORD_STYLES else len(text)
        while taken > cells:
            text = text[:-1]
            taken = width(text) if style in WORD_STYLES else len(text)
        if text:
            kept.append((text, style))
        cells -= taken
    return kept


def cell_at(layout: Layout, x: int, y: int) -> tuple[int, int] | None:
    """The cell of the picture (down, across) at a place of the drawing, or None."""
    down, across = y - HEADER_LINES, x - layout.left
    if 0 <= down < layout.rows.used and 0 <= across < layout.columns.used:
        return down, across
    return None


def coefficient_under_cursor(
    pattern: Pattern, view: View, layout: Layout
) -> tuple[int, int] | None:
    """Row and column of a coefficient in the cursor's cell, or None.

    Of several it is the one on the lines that the cursor was put on, else the first.
    """
    if not pattern.m or not pattern.n:
        return None
    position = _chosen(pattern, view, positions(pattern, *_under_cursor(view, layout)))
    if position is None:
        return None
    return row_of(pattern, position), int(pattern.A.indices[position])


def _chosen(pattern: Pattern, view: View, own: Integers) -> int | None:
    if not own.size:
        return None
    rows = np.searchsorted(pattern.A.indptr, own, side="right") - 1
    on_row = rows == view.rows.line
    on_column = pattern.A.indices[own] == view.columns.line
    return int(own[np.argmax(2 * on_row + on_column)])


def _under_cursor(view: View, layout: Layout) -> tuple[range, range]:
    rows, columns = layout.rows, layout.columns
    return (
        rows.lines_of(rows.cell_of(view.rows.line)),
        columns.lines_of(columns.cell_of(view.columns.line)),
    )


def describe(pattern: Pattern, view: View, layout: Layout) -> str:
    """What lies under the cursor, in a line."""
    if not pattern.m or not pattern.n:
        return ""
    rows, columns = _under_cursor(view, layout)
    own = positions(pattern, rows, columns)
    glyphs = glyphs_of(layout)
    chosen, block = _chosen(pattern, view, own), f" in {len(rows)} x {len(columns)} lines"
    row, column, value = view.rows.line, view.columns.line, "no coefficient"
    if chosen is not None:
        row, column = row_of(pattern, chosen), int(pattern.A.indices[chosen])
        value = number(float(pattern.A.data[chosen]))
    if own.size > 1:
        value = f"one of {own.size} coefficients{block}"
    elif not own.size and len(rows) * len(columns) > 1:
        value += block
    slack = " (zero slack)" if own.size < 2 and pattern.zero_slack[row] else ""
    nonzero = " (nonzero)" if own.size < 2 and pattern.nonzero[column] else ""
    fixed = "constraint " + slack + ", variable " + nonzero + ": " + value
    room = max(layout.width - width(fixed), 0)
    first = cut(pattern.rows[row], room // 2, glyphs)
    last = cut(pattern.columns[column], room - width(first), glyphs)
    text = f"constraint {first}{slack}, variable {last}{nonzero}: {value}"
    return "".join(part for part, _ in clipped([(text, "text")], layout.width))


def legend(most: int, layout: Layout, level: str) -> Line:
    """What the marks mean, the most needed first.

    Parameters
    ----------
    most
        Coefficients of the fullest cell.
    level
        End of the style names that show each kind most clearly.
    """
    glyphs = glyphs_of(layout)
    return [
        (f"at most {most} a cell; left {glyphs.every} ", "text"),
        ("zero slack", f"row{level}"),
        (f", top {glyphs.every} ", "text"),
        ("nonzero", f"column{level}"),
        (f", {glyphs.some} some; ", "text"),
        ("both", f"both{level}"),
        (f"; {glyphs.own} selected", "text"),
    ]
