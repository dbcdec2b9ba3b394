"""Draws the sparsity pattern: lines of runs, each a text with the name of its style.

Rows run down and columns across. Darkness is how many coefficients fall in a cell,
against the fullest cell shown. The margins carry what the colours carry: at the left
the rows with zero slack, on top the columns whose value is not zero.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from lpview.report.names import width
from lpview.screen.picture_grid import (
    KINDS,
    Axis,
    Grid,
    Integers,
    Mask,
    Pattern,
    count,
    positions,
)
from lpview.screen.picture_text import Glyphs, Line, axis_text, clipped, cut, glyphs_of, legend
from lpview.screen.picture_view import Layout, View

Cells = NDArray[np.uint32]

DENSITIES = " .:+#@"
"""Plain characters from an empty cell to the fullest."""
RANKS = len(DENSITIES) - 1
LEVELS = 3
"""Style levels of density: faint, plain, strong."""

STYLES = (
    "blank",
    *(f"{kind}-{level}" for kind in KINDS for level in range(1, LEVELS + 1)),
    "cross",
    "selected",
    "cursor",
)
"""Names of the styles of cells; those of density are a kind and a level from 1 to 3."""
CROSS, SELECTED, CURSOR = (STYLES.index(name) for name in ("cross", "selected", "cursor"))


def draw(
    pattern: Pattern, view: View, layout: Layout, selected: int | None, grid: Grid | None = None
) -> list[Line]:
    """The whole drawing, no line wider and no more lines than the layout.

    Parameters
    ----------
    view, layout
        As `lpview.screen.picture_view.lay_out` made them.
    selected
        The selected line, numbered as in `lpview.kkt`, or None.
    grid
        The coefficients of these axes, where they have been counted already.
    """
    if not pattern.m or not pattern.n:
        missing = "constraints" if not pattern.m else "variables"
        return _fit([[(f"The model has no {missing}: no pattern to draw.", "text")]], layout)
    grid = grid or count(pattern, layout.rows, layout.columns)
    chars, styles = _cells(grid, layout.is_ascii)
    _mark_selected(chars, styles, pattern, layout, selected)
    styles[layout.rows.cell_of(view.rows.line), layout.columns.cell_of(view.columns.line)] = CURSOR
    head = [
        axis_text("constraint", layout.rows, pattern.rows, layout),
        axis_text("variable", layout.columns, pattern.columns, layout),
        *_top(pattern, layout, selected),
    ]
    body = _body(pattern, layout, selected, chars, styles)
    if layout.left + layout.columns.used > layout.width:
        body = _fit(body, layout)
    foot = [legend(int(grid.cells.max(initial=0)), layout, f"-{LEVELS}")]
    return [*_fit(head, layout), *body, *_fit(foot, layout)][: layout.height]


def _cells(grid: Grid, is_ascii: bool) -> tuple[Cells, Integers]:
    """Characters and styles of all cells."""
    ranks = ranked(grid.cells)
    if is_ascii:
        chars = _codes(DENSITIES)[ranks]
    else:
        chars = np.where(ranks > 0, 0x2800 + _bits(grid.dots), ord(" ")).astype(np.uint32)
    # The kind that most of a cell's coefficients have; of equals the stronger.
    kinds = len(KINDS) - 1 - np.argmax(grid.by_kind[..., ::-1], axis=2)
    levels = (ranks * LEVELS + RANKS - 1) // RANKS
    return chars, np.where(ranks > 0, kinds * LEVELS + levels, 0)


def ranked(cells: Integers) -> Integers:
    """Density from 0 (empty) to `RANKS` (as full as the fullest), on a log scale."""
    most = cells.max(initial=1)
    share = np.log1p(cells) / np.log1p(most)
    ranks: Integers = np.ceil(share * RANKS - 1e-9).astype(np.intp)
    return ranks


def _bits(dots: Mask) -> Integers:
    """Dots as the low byte of their character: its two columns of three, then the last row."""
    weights = np.array([[1, 8], [2, 16], [4, 32], [64, 128]])
    height, across = dots.shape
    bits: Integers = np.einsum(
        "iajb,ab->ij", dots.reshape(height // 4, 4, across // 2, 2).astype(np.intp), weights
    )
    return bits


def _codes(text: str) -> Cells:
    return np.array([ord(character) for character in text], np.uint32)


def _mark_selected(
    chars: Cells, styles: Integers, pattern: Pattern, layout: Layout, selected: int | None
) -> None:
    """Rule the selected line through the picture and put its coefficients on it."""
    if selected is None:
        return
    rows, columns, glyphs = layout.rows, layout.columns, glyphs_of(layout)
    is_row = selected < pattern.m
    own, other = (rows, columns) if is_row else (columns, rows)
    index = selected if is_row else selected - pattern.m
    if not own.start <= index < own.stop:
        return
    cell = own.cell_of(index)
    at = (cell, slice(None)) if is_row else (slice(None), cell)
    touched = np.unique(other.unit_of(_linked(pattern, layout, selected)) // other.units_in_cell)
    line_chars, line_styles = chars[at], styles[at]
    empty = line_styles == 0
    line_chars[empty] = ord(glyphs.along if is_row else glyphs.down)
    line_styles[empty] = CROSS
    line_chars[touched] = ord(glyphs.own)
    line_styles[touched] = SELECTED


def _linked(pattern: Pattern, layout: Layout, selected: int) -> Integers:
    """Columns of the selected row, or rows of the selected column, as far as shown."""
    rows = range(layout.rows.start, layout.rows.stop)
    columns = range(layout.columns.start, layout.columns.stop)
    if selected < pattern.m:
        own = positions(pattern, range(selected, selected + 1), columns)
        touched: Integers = pattern.A.indices[own].astype(np.intp)
        return touched
    column = selected - pattern.m
    own = positions(pattern, rows, range(column, column + 1))
    return np.searchsorted(pattern.A.indptr, own, side="right") - 1


def _top(pattern: Pattern, layout: Layout, selected: int | None) -> list[Line]:
    """Two lines of marks above the picture."""
    glyphs, columns, left = glyphs_of(layout), layout.columns, " " * layout.left
    pointers = [" "] * columns.used
    column = -1 if selected is None else selected - pattern.m
    if columns.start <= column < columns.stop:
        pointers[columns.cell_of(column)] = glyphs.pointer_down
    marks = _margin(columns, pattern.nonzero, glyphs)
    return [[(left + "".join(pointers), "pointer")], [(left + "".join(marks), "margin")]]


def _margin(axis: Axis, has: Mask, glyphs: Glyphs) -> list[str]:
    """A mark per cell: all of its lines have the property, or some, or none."""
    cells = axis.all_units() // axis.units_in_cell
    having = np.bincount(cells[has[axis.start : axis.stop]], minlength=axis.used)
    lines = np.bincount(cells, minlength=axis.used)
    choice = np.where(having == 0, 0, np.where(having < lines, 1, 2))
    return [(" ", glyphs.some, glyphs.every)[which] for which in choice.tolist()]


def _body(
    pattern: Pattern, layout: Layout, selected: int | None, chars: Cells, styles: Integers
) -> list[Line]:
    rows, glyphs = layout.rows, glyphs_of(layout)
    marks = _margin(rows, pattern.zero_slack, glyphs)
    pointed = -1
    if selected is not None and rows.start <= selected < rows.stop:
        pointed = rows.cell_of(selected)
    lines = []
    for cell, mark in enumerate(marks):
        line: Line = []
        if layout.names:
            name = cut(pattern.rows[rows.lines_of(cell).start], layout.names - 1, glyphs)
            line.append((name + " " * (layout.names - width(name)), "text"))
        line.append((glyphs.pointer if cell == pointed else " ", "pointer"))
        line.append((mark, "margin"))
        lines.append(line + _runs(chars[cell], styles[cell]))
    return lines + [[] for _ in range(rows.cells - rows.used)]


def _runs(chars: Cells, styles: Integers) -> Line:
    """Neighbours of one style as one run."""
    text = chars.astype("<u4").tobytes().decode("utf-32-le")
    starts = [0, *(np.flatnonzero(np.diff(styles)) + 1).tolist()]
    ends = [*starts[1:], len(text)]
    return [
        (text[start:end], STYLES[styles[start]]) for start, end in zip(starts, ends, strict=True)
    ]


def _fit(lines: list[Line], layout: Layout) -> list[Line]:
    return [clipped(line, layout.width) for line in lines[: layout.height]]
