"""Counting into cells, and moving over the pattern."""

from __future__ import annotations

import numpy as np
import pytest

from lpview.screen.picture_grid import Axis, count
from lpview.screen.picture_view import (
    Stretch,
    View,
    at,
    at_selected,
    closer,
    everything,
    lay_out,
    moved,
    paged,
    whole,
    wider,
)
from tests.screen.patterns import pattern


@pytest.mark.parametrize("dots", [(1, 1), (4, 2)])
@pytest.mark.parametrize("rows", [(0, 97), (3, 40), (90, 97), (5, 6)])
@pytest.mark.parametrize("columns", [(0, 61), (10, 31), (60, 61)])
def test_every_coefficient_of_the_block_is_counted_in_its_cell(dots, rows, columns):
    p = pattern(97, 61)
    down, across = Axis(*rows, 11, dots[0]), Axis(*columns, 13, dots[1])
    grid = count(p, down, across)
    expected = np.zeros((down.used, across.used, 4), int)
    row_cell, column_cell = cells_of(down), cells_of(across)
    for i, j in zip(*p.A.nonzero(), strict=True):
        if rows[0] <= i < rows[1] and columns[0] <= j < columns[1]:
            cell = row_cell[i], column_cell[j]
            kind = {(0, 0): 0, (0, 1): 1, (1, 0): 2, (1, 1): 3}
            expected[*cell, kind[int(p.zero_slack[i]), int(p.nonzero[j])]] += 1
    assert np.array_equal(grid.by_kind, expected)
    assert grid.cells.sum() == p.A[slice(*rows)][:, slice(*columns)].nnz


def cells_of(axis):
    return {line: cell for cell in range(axis.used) for line in axis.lines_of(cell)}


@pytest.mark.parametrize("dots", [1, 2, 4])
@pytest.mark.parametrize("lines", [1, 2, 3, 9, 10, 11, 19, 20, 21, 39, 40, 41, 1000, 12345])
def test_cells_part_the_lines_in_order(lines, dots):
    axis = Axis(7, 7 + lines, 10, dots)
    assert 1 <= axis.used <= 10
    held = [line for cell in range(axis.used) for line in axis.lines_of(cell)]
    assert held == list(range(7, 7 + lines))
    cells = [cell for cell in range(axis.used) for _ in axis.lines_of(cell)]
    assert [axis.cell_of(line) for line in held] == cells
    assert (axis.unit_of(np.array(held)) // axis.units_in_cell).tolist() == cells
    assert all(axis.lines_of(cell) for cell in range(axis.used))


@pytest.mark.parametrize("is_ascii", [True, False])
@pytest.mark.parametrize(("m", "n"), [(1000, 3000), (70, 5), (1, 700), (18, 80)])
def test_narrowing_ends_at_a_cell_each_and_widening_at_everything(m, n, is_ascii):
    p, size = pattern(m, n, 0.01), (80, 22)
    start = at(p, whole(p), m // 2, n // 3)
    view, layout = lay_out(p, start, size, is_ascii)
    for _ in range(20):
        before = view
        view, layout = lay_out(p, closer(p, view, layout), size, is_ascii)
        assert view.rows.start <= m // 2 < view.rows.stop
        assert view.columns.start <= n // 3 < view.columns.stop
        assert view.rows.lines <= before.rows.lines and view.columns.lines <= before.columns.lines
    assert layout.rows.is_one_each and layout.columns.is_one_each
    assert view.rows.lines == min(m, layout.rows.cells)
    assert view.columns.lines == min(n, layout.columns.cells)
    for _ in range(20):
        view, layout = lay_out(p, wider(p, view), size, is_ascii)
    assert view == everything(p, view) == start


def test_arrows_visit_every_cell_and_then_move_the_block():
    p = pattern(1000, 30, 0.05)
    view, layout = lay_out(p, View(Stretch(0, 68, 0), Stretch(0, 30, 0)), (80, 22), False)
    seen = [view.rows.line]
    while len(seen) < 2000:
        following, layout = lay_out(p, moved(p, view, layout, 1, 0), (80, 22), False)
        if following == view:
            break
        view = following
        assert view.rows.lines == 68 and view.rows.start <= view.rows.line < view.rows.stop
        seen.append(view.rows.line)
    assert seen == list(range(0, 1000, 4))
    for _ in seen:
        view, layout = lay_out(p, moved(p, view, layout, -1, 0), (80, 22), False)
    assert view.rows == Stretch(0, 68, 0)


def test_pages_go_on_by_a_block_and_stop_at_the_ends():
    p = pattern(1000, 1000, 0.001)
    view = View(Stretch(100, 200, 150), Stretch(0, 50, 5))
    assert paged(p, view, 1, 0) == View(Stretch(200, 300, 250), view.columns)
    assert paged(p, view, 0, -1) == View(view.rows, Stretch(0, 50, 0))
    for _ in range(30):
        view = paged(p, view, 1, 1)
    assert view == View(Stretch(900, 1000, 999), Stretch(950, 1000, 999))


@pytest.mark.parametrize("selected", [0, 29, 30, 49])
def test_the_cursor_starts_on_a_coefficient_of_the_selected_line(selected):
    p = pattern(30, 20, 0.3)
    view = at_selected(p, whole(p), selected)
    row, column = view.rows.line, view.columns.line
    assert p.A.toarray()[row, column] != 0
    assert selected in (row, 30 + column)


def test_a_narrowed_block_survives_another_size():
    p = pattern(1000, 1000, 0.01)
    view, layout = lay_out(p, at(p, whole(p), 500, 500), (80, 22), False)
    view, layout = lay_out(p, closer(p, view, layout), (80, 22), False)
    for size in [(200, 58), (30, 8), (80, 22)]:
        view, layout = lay_out(p, view, size, False)
        assert view.rows.start <= 500 < view.rows.stop <= 1000
        assert view.columns.start <= 500 < view.columns.stop <= 1000
