"""Which block of the sparsity pattern is shown, and moving over it; no drawing."""

from __future__ import annotations

from dataclasses import dataclass, replace

from lpview.screen.picture_grid import Axis, Pattern, positions, row_of, steps

DOTS = (4, 2)
"""Dots of a cell, down and across, where the terminal shows them."""

HEADER_LINES, MARK_COLUMNS, FOOT_LINES = 4, 2, 1
"""Cells that are not picture: above it, at its left, and below."""

WIDEST_NAMES = 20
"""Cells that names at the left may take."""


@dataclass(frozen=True)
class Stretch:
    """Lines shown in one direction, and the one under the cursor."""

    start: int
    """First line shown."""
    stop: int
    """One past the last."""
    line: int
    """The line under the cursor, one of those shown; 0 where there is none."""

    @property
    def lines(self) -> int:
        """Lines shown."""
        return self.stop - self.start


@dataclass(frozen=True)
class View:
    """The block that is shown."""

    rows: Stretch
    """Constraints."""
    columns: Stretch
    """Variables."""


@dataclass(frozen=True)
class Layout:
    """Where everything stands, in cells."""

    width: int
    """Of the whole drawing."""
    height: int
    """Of the whole drawing."""
    names: int
    """Width of the names at the left; 0 where several rows share a cell."""
    rows: Axis
    """Constraints of the picture."""
    columns: Axis
    """Variables of the picture."""
    is_ascii: bool
    """Whether only plain characters are drawn."""

    @property
    def left(self) -> int:
        """Cells to the left of the picture."""
        return self.names + MARK_COLUMNS


def whole(pattern: Pattern) -> View:
    """Everything, with the cursor on the first lines."""
    return View(Stretch(0, pattern.m, 0), Stretch(0, pattern.n, 0))


def lay_out(
    pattern: Pattern, view: View, size: tuple[int, int], is_ascii: bool
) -> tuple[View, Layout]:
    """Fit a view to a size: a block that would leave cells empty is shown with more around it.

    Parameters
    ----------
    size
        Width and height of the whole drawing in cells.
    """
    across, down = size
    dots = (1, 1) if is_ascii else DOTS
    height = max(down - HEADER_LINES - FOOT_LINES, 1)
    rows = _settled(view.rows, height, dots[0], pattern.m)
    row_axis = Axis(rows.start, rows.stop, height, dots[0])
    names = _names_width(pattern, row_axis, across)
    room = max(across - names - MARK_COLUMNS, 1)
    columns = _settled(view.columns, room, dots[1], pattern.n)
    column_axis = Axis(columns.start, columns.stop, room, dots[1])
    return View(rows, columns), Layout(across, down, names, row_axis, column_axis, is_ascii)


def _names_width(pattern: Pattern, rows: Axis, across: int) -> int:
    """Names stand at the left where every row has a line of its own and there is room."""
    if not rows.lines or not rows.is_one_each:
        return 0
    return min(WIDEST_NAMES, across // 4, pattern.widest_row_name + 1)


def _settled(stretch: Stretch, cells: int, dots: int, total: int) -> Stretch:
    """As many lines as fill the cells at the thickness that the stretch allows."""
    wanted = [room for room in _rooms(cells, dots) if room >= stretch.lines]
    return _around(stretch, min([*wanted, total]) if wanted else stretch.lines, total)


def _rooms(cells: int, dots: int) -> list[int]:
    """How many lines fill the cells at each thickness, fewest first."""
    return [cells * dots // k for k in steps(dots)]


def _around(stretch: Stretch, lines: int, total: int) -> Stretch:
    """So many lines, moved as little as possible from where the stretch is."""
    start = stretch.start
    if lines < stretch.lines:
        start = stretch.line - lines // 2
    start = min(max(start, 0), total - lines)
    return replace(stretch, start=start, stop=start + lines)


def _closer(stretch: Stretch, rooms: list[int], total: int) -> Stretch:
    """About half as many lines around the cursor, as long as they fill the cells."""
    lines = stretch.lines // 2
    if lines < rooms[-1]:
        half = max(lines, 1)
        lines = min(rooms, key=lambda room: max(room / half, half / room))
    return _around(stretch, min(lines, stretch.lines), total)


def closer(pattern: Pattern, view: View, layout: Layout) -> View:
    """Narrow the view to a block around the cursor."""
    rows = _closer(view.rows, _rooms(layout.rows.cells, layout.rows.dots), pattern.m)
    row_axis = Axis(rows.start, rows.stop, layout.rows.cells, layout.rows.dots)
    # The names that come into sight take cells from the columns.
    names = _names_width(pattern, row_axis, layout.width)
    room = max(layout.width - names - MARK_COLUMNS, 1)
    return View(rows, _closer(view.columns, _rooms(room, layout.columns.dots), pattern.n))


def wider(pattern: Pattern, view: View) -> View:
    """Twice as many lines each way, around the cursor."""
    return View(_wider(view.rows, pattern.m), _wider(view.columns, pattern.n))


def _wider(stretch: Stretch, total: int) -> Stretch:
    lines = min(2 * stretch.lines, total)
    start = min(max(stretch.line - lines // 2, 0), total - lines)
    return replace(stretch, start=start, stop=start + lines)


def everything(pattern: Pattern, view: View) -> View:
    """All lines, with the cursor where it is."""
    rows = replace(view.rows, start=0, stop=pattern.m)
    return View(rows, replace(view.columns, start=0, stop=pattern.n))


def moved(pattern: Pattern, view: View, layout: Layout, down: int, across: int) -> View:
    """The cursor so many cells further; at an edge the block moves on by a cell."""
    return View(
        _stepped(view.rows, layout.rows, down, pattern.m),
        _stepped(view.columns, layout.columns, across, pattern.n),
    )


def _stepped(stretch: Stretch, axis: Axis, cells: int, total: int) -> Stretch:
    if not cells or not axis.lines:
        return stretch
    cell = axis.cell_of(stretch.line) + cells
    if 0 <= cell < axis.used:
        return replace(stretch, line=axis.lines_of(cell).start)
    shift = cells * max(1, axis.lines // axis.used)
    line = axis.stop if cells > 0 else axis.start + shift
    on = _reaching(replace(stretch, start=stretch.start + shift), axis.lines, line, total)
    return stretch if on.start == stretch.start else on


def paged(pattern: Pattern, view: View, down: int, across: int) -> View:
    """So many blocks further."""
    return View(
        _turned(view.rows, down, pattern.m),
        _turned(view.columns, across, pattern.n),
    )


def _turned(stretch: Stretch, blocks: int, total: int) -> Stretch:
    shift = blocks * stretch.lines
    start = stretch.start + shift
    return _reaching(replace(stretch, start=start), stretch.lines, stretch.line + shift, total)


def _reaching(stretch: Stretch, lines: int, line: int, total: int) -> Stretch:
    """So many lines from the stretch's start, held within all, and the cursor on one."""
    start = min(max(stretch.start, 0), total - lines)
    line = min(max(line, start), max(start + lines - 1, 0))
    return Stretch(start, start + lines, line)


def at(pattern: Pattern, view: View, row: int, column: int) -> View:
    """The cursor on a coefficient's place; the block moves only where it must."""
    return View(_at(view.rows, row, pattern.m), _at(view.columns, column, pattern.n))


def _at(stretch: Stretch, line: int, total: int) -> Stretch:
    start = stretch.start
    if not start <= line < stretch.stop:
        start = line - stretch.lines // 2
    return _reaching(replace(stretch, start=start), stretch.lines, line, total)


def at_selected(pattern: Pattern, view: View, selected: int | None) -> View:
    """The cursor on the first coefficient of a line, numbered as in `lpview.kkt`."""
    if selected is None or not pattern.m or not pattern.n:
        return view
    if selected < pattern.m:
        own = pattern.A.indices[pattern.A.indptr[selected] : pattern.A.indptr[selected + 1]]
        return at(pattern, view, selected, int(own[0]) if own.size else view.columns.line)
    return _at_column(pattern, view, selected - pattern.m)


def _at_column(pattern: Pattern, view: View, column: int) -> View:
    own = positions(pattern, range(pattern.m), range(column, column + 1))
    row = row_of(pattern, int(own[0])) if own.size else view.rows.line
    return at(pattern, view, row, column)
