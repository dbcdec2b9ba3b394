"""The sparsity pattern as drawn text, against counts made one coefficient at a time."""

from __future__ import annotations

import unicodedata
from dataclasses import replace

import numpy as np
import pytest
from scipy.sparse import csr_array

from lpview.report.names import width
from lpview.screen.picture import DENSITIES, STYLES, draw, ranked
from lpview.screen.picture_grid import KINDS, Pattern
from lpview.screen.picture_text import (
    DRAWN,
    PLAIN,
    WORD_STYLES,
    cell_at,
    coefficient_under_cursor,
    describe,
)
from lpview.screen.picture_view import (
    HEADER_LINES,
    Stretch,
    View,
    at,
    closer,
    everything,
    lay_out,
    moved,
    paged,
    whole,
    wider,
)
from tests.screen.patterns import drawn, pattern, texts

SIZES = [(80, 22), (120, 38), (200, 58), (30, 10), (7, 6), (1, 1), (0, 0)]
NASTY = ("[b]x[/]", "p[/]q", "平衡平衡平衡平衡平衡平衡", "n" * 300, "a\x1b[31mb", "e\u0301" * 9)


def body(layout, lines):
    """The picture alone, without margins and words; names at the left must be narrow."""
    shown = lines[HEADER_LINES : HEADER_LINES + layout.rows.used]
    return [text[layout.left :] for text in texts(shown)]


def some_views(p, size, is_ascii):
    view, layout = lay_out(p, whole(p), size, is_ascii)
    yield view
    for _ in range(2):
        view, layout = lay_out(p, closer(p, view, layout), size, is_ascii)
        yield view
    view = paged(p, view, 1, 1)
    yield view
    yield at(p, view, max(p.m - 1, 0), max(p.n - 1, 0))


@pytest.mark.parametrize("is_ascii", [True, False])
@pytest.mark.parametrize("size", SIZES)
@pytest.mark.parametrize(
    ("m", "n"), [(1, 1), (1, 500), (500, 1), (6, 6), (300, 90), (0, 5), (5, 0)]
)
def test_no_line_is_wider_than_the_size(size, m, n, is_ascii):
    names = NASTY if max(m, n) <= len(NASTY) else None
    p = pattern(m, n, names=names)
    for view in some_views(p, size, is_ascii):
        for selected in (None, m + n - 1):
            lines = drawn(p, view, size, is_ascii, selected)[2]
            assert len(lines) <= size[1]
            assert max((width(text) for text in texts(lines)), default=0) <= size[0]
            styles = {style for line in lines for _, style in line}
            assert styles <= {*STYLES, *WORD_STYLES}


def test_ascii_draws_plain_characters_only():
    p = pattern(300, 90)
    for view in some_views(p, (80, 22), True):
        for selected in (0, 301):
            assert "".join(texts(drawn(p, view, (80, 22), True, selected)[2])).isascii()


def dots_of(character):
    """The dots of a character, numbered as its Unicode name numbers them."""
    if character == " ":
        return set()
    return {int(dot) for dot in unicodedata.name(character).removeprefix("BRAILLE PATTERN DOTS-")}


def test_dots_stand_where_the_coefficients_are():
    dense = np.zeros((80, 120))  # thinner than the 16 by 78 cells: a dot each
    places = [(0, 0), (1, 0), (3, 1), (4, 2), (6, 119), (79, 60), (78, 61)]
    for i, j in places:
        dense[i, j] = 1
    p = replace(pattern(80, 120), A=csr_array(dense))
    _, layout, lines = drawn(p, at(p, whole(p), 40, 3), size=(80, 25))
    numbers = {(0, 0): 1, (1, 0): 2, (2, 0): 3, (0, 1): 4, (1, 1): 5, (2, 1): 6, (3, 0): 7}
    expected = {}
    for i, j in places:
        dot = numbers.get((i % 4, j % 2), 8)
        expected.setdefault((i // 4, j // 2), set()).add(dot)
    shown = {
        (y, x): dots_of(character)
        for y, text in enumerate(body(layout, lines))
        for x, character in enumerate(text)
        if character != " "
    }
    assert shown == expected


def test_density_grows_with_the_count_and_one_coefficient_shows():
    ranks = ranked(np.array([[0, 1, 2, 5, 30, 900]])).tolist()[0]
    assert ranks[0] == 0 and ranks[1] == 1 and ranks[-1] == len(DENSITIES) - 1
    assert ranks == sorted(ranks) and len(set(ranks)) > 4
    assert ranked(np.array([[0, 1]])).tolist() == [[0, 5]]


def test_ascii_density_characters():
    p = replace(pattern(200, 100), A=csr_array(np.ones((200, 100))))
    A = np.ones((200, 100))
    A[:100, :50] = 0
    A[0, 0] = 1
    _, layout, lines = drawn(replace(p, A=csr_array(A)), at(p, whole(p), 199, 99), is_ascii=True)
    shown = body(layout, lines)
    assert shown[-1][0] == "@" and shown[1][1] == " " and shown[0][0] not in " @"


def styles_of(layout, lines, y):
    """Style of each cell of a line of the picture."""
    out = [style for text, style in lines[HEADER_LINES + y] for _ in text]
    return out[layout.left :]


def test_coefficients_are_told_apart_by_row_and_column():
    ones = np.ones((2, 3))
    ones[1, 2] = 0
    p = Pattern(
        csr_array(ones),
        ("heat", "bench"),
        ("x", "y", "z"),
        np.array([True, False]),
        np.array([False, True, False]),
    )
    _view, layout, lines = drawn(p, at(p, whole(p), 1, 2))
    kinds = [style.split("-")[0] for style in styles_of(layout, lines, 0)]
    assert kinds == ["row", "both", "row"]
    kinds = [style.split("-")[0] for style in styles_of(layout, lines, 1)]
    assert kinds == ["neither", "column", "cursor"]
    assert len(KINDS) == 4


@pytest.mark.parametrize(("is_ascii", "glyphs"), [(True, PLAIN), (False, DRAWN)])
def test_margins_say_every_some_or_none(is_ascii, glyphs):
    p = pattern(160, 6)
    slack = np.zeros(160, bool)
    view, layout = lay_out(p, whole(p), (80, 25), is_ascii)
    first, second = layout.rows.lines_of(0), layout.rows.lines_of(1)
    assert len(second) > 1
    slack[first.start : first.stop] = True
    slack[second.start] = True
    p = replace(p, zero_slack=slack, nonzero=np.array([1, 0, 0, 1, 0, 0], bool))
    lines = texts(draw(p, view, layout, None))
    marks = [line[layout.left - 1] for line in lines[HEADER_LINES : HEADER_LINES + 3]]
    assert marks == [glyphs.every, glyphs.some, " "]
    top = lines[HEADER_LINES - 1][layout.left :]
    assert top.rstrip() == f"{glyphs.every}  {glyphs.every}"


@pytest.mark.parametrize(("is_ascii", "glyphs"), [(True, PLAIN), (False, DRAWN)])
def test_the_selected_row_is_ruled_through(is_ascii, glyphs):
    A = np.zeros((10, 40))
    A[4, [0, 7, 39]] = 1
    A[5, :] = 1
    p = replace(pattern(10, 40), A=csr_array(A))
    _view, layout, lines = drawn(p, at(p, whole(p), 0, 0), is_ascii=is_ascii, selected=4)
    line = texts(lines)[HEADER_LINES + 4]
    assert line[layout.left - 2] == glyphs.pointer
    expected = [glyphs.along] * 40
    for j in (0, 7, 39):
        expected[j] = glyphs.own
    assert line[layout.left :] == "".join(expected)
    assert texts(lines)[HEADER_LINES - 2].strip() == ""
    assert styles_of(layout, lines, 4)[7:9] == ["selected", "cross"]


@pytest.mark.parametrize(("is_ascii", "glyphs"), [(True, PLAIN), (False, DRAWN)])
def test_the_selected_column_is_ruled_through(is_ascii, glyphs):
    A = np.zeros((10, 40))
    A[[0, 9], 6] = 1
    p = replace(pattern(10, 40), A=csr_array(A))
    _view, layout, lines = drawn(p, at(p, whole(p), 0, 0), is_ascii=is_ascii, selected=10 + 6)
    column = "".join(text[6] for text in body(layout, lines))
    assert column == glyphs.own + 8 * glyphs.down + glyphs.own
    assert texts(lines)[HEADER_LINES - 2].index(glyphs.pointer_down) == layout.left + 6


def test_a_selected_line_out_of_the_block_is_not_drawn():
    p = pattern(1000, 1000, 0.02)
    block = View(Stretch(400, 460, 430), Stretch(400, 460, 430))
    for selected in (3, 999, 1003, 1999):
        assert drawn(p, block, selected=selected)[2] == drawn(p, block)[2]


def test_words_name_what_is_shown():
    p = pattern(821, 90)
    lines = texts(drawn(p)[2])
    assert lines[0] == "constraints 1-821 of 821: r0 to r820"
    assert lines[1] == "variables 1-90 of 90: c0 to c89"
    lines = texts(drawn(pattern(1, 1))[2])
    assert lines[:2] == ["constraint 1 of 1: r0", "variable 1 of 1: c0"]


def test_names_stand_at_the_left_where_rows_have_lines_of_their_own():
    p = pattern(5, 5, names=NASTY)
    _view, layout, lines = drawn(p)
    shown = texts(lines)[HEADER_LINES : HEADER_LINES + 5]
    assert layout.names and shown[0].startswith("[b]x[/]") and shown[4].startswith("a\\x1b[31mb")
    assert {width(text) for text in shown} == {layout.left + 5}
    assert drawn(pattern(90, 5))[1].names == 0


@pytest.mark.parametrize(("m", "n", "word"), [(0, 3, "constraints"), (3, 0, "variables")])
def test_a_model_without_lines_says_so(m, n, word):
    p = pattern(m, n)
    view, layout, lines = drawn(p, selected=0)
    assert texts(lines) == [f"The model has no {word}: no pattern to draw."]
    assert describe(p, view, layout) == ""
    assert coefficient_under_cursor(p, view, layout) is None
    for change in (closer(p, view, layout), wider(p, view), everything(p, view)):
        assert change == view
    for change in (moved(p, view, layout, 1, 1), paged(p, view, 1, 1), at(p, view, 2, 2)):
        assert draw(p, *lay_out(p, change, (80, 22), False), 0) == lines
        assert 0 <= change.rows.line < max(m, 1) and 0 <= change.columns.line < max(n, 1)


def test_a_model_without_coefficients_is_drawn_empty():
    p = pattern(30, 30, 0)
    view, layout, lines = drawn(p, selected=4)
    assert set("".join(body(layout, lines))) == {" ", DRAWN.along}
    assert "no coefficient in 2 x 1 lines" in describe(p, view, layout)
    assert "at most 0 a cell" in texts(lines)[-1]


def test_what_lies_under_the_cursor_is_told():
    A = np.zeros((3, 4))
    A[1, 2] = -2.5
    p = Pattern(
        csr_array(A),
        ("a", "heat", "b"),
        ("x", "y", "[z]", "w"),
        np.array([0, 1, 0], bool),
        np.array([0, 0, 1, 0], bool),
    )
    view, layout = lay_out(p, at(p, whole(p), 1, 2), (80, 22), False)
    told = describe(p, view, layout)
    assert told == "constraint heat (zero slack), variable [z] (nonzero): -2.5"
    assert coefficient_under_cursor(p, view, layout) == (1, 2)
    view = moved(p, view, layout, 1, 1)
    assert describe(p, view, layout) == "constraint b, variable w: no coefficient"
    assert coefficient_under_cursor(p, view, layout) is None


def test_of_several_under_the_cursor_its_own_lines_come_first():
    A = np.zeros((320, 320))
    A[[100, 101, 101, 102], [101, 100, 101, 100]] = 1
    p = replace(pattern(320, 320), A=csr_array(A))
    chosen = {}
    for row, column in [(101, 101), (101, 102), (103, 100), (103, 103)]:
        view, layout = lay_out(p, at(p, whole(p), row, column), (50, 22), False)
        assert layout.rows.cell_of(100) == layout.rows.cell_of(103)
        assert layout.columns.cell_of(100) == layout.columns.cell_of(103)
        chosen[row, column] = coefficient_under_cursor(p, view, layout)
    assert chosen == {
        (101, 101): (101, 101),
        (101, 102): (101, 100),
        (103, 100): (101, 100),
        (103, 103): (100, 101),
    }


def test_many_coefficients_under_the_cursor_are_counted():
    p = replace(pattern(320, 320), A=csr_array(np.ones((320, 320))))
    view, layout = lay_out(p, at(p, whole(p), 100, 100), (80, 22), False)
    rows, columns = (
        layout.rows.lines_of(layout.rows.cell_of(100)),
        layout.columns.lines_of(layout.columns.cell_of(100)),
    )
    amount = len(rows) * len(columns)
    assert f"one of {amount} coefficients in {len(rows)} x {len(columns)} lines" in describe(
        p, view, layout
    )
    assert coefficient_under_cursor(p, view, layout) == (100, 100)


def test_places_of_the_drawing_are_cells_of_the_picture():
    p = pattern(5, 9)
    _view, layout, _ = drawn(p)
    left = layout.left
    assert cell_at(layout, left, HEADER_LINES) == (0, 0)
    assert cell_at(layout, left + 8, HEADER_LINES + 4) == (4, 8)
    outside = [(left - 1, HEADER_LINES), (left, HEADER_LINES - 1), (left + 9, 5), (left, 9)]
    assert [cell_at(layout, x, y) for x, y in outside] == [None] * 4


def test_nothing_given_is_changed():
    p = pattern(40, 40)
    before = [part.copy() for part in (p.A.data, p.A.indices, p.zero_slack, p.nonzero)]
    for is_ascii in (True, False):
        drawn(p, is_ascii=is_ascii, selected=3)
    after = (p.A.data, p.A.indices, p.zero_slack, p.nonzero)
    assert all(np.array_equal(*pair) for pair in zip(before, after, strict=True))


@pytest.mark.parametrize(("is_ascii", "end"), [(True, "~"), (False, "…")])
def test_a_name_that_was_cut_says_so(is_ascii, end):
    p = pattern(2, 2, names=("n" * 300, "m" * 20))
    view, _, lines = drawn(p, is_ascii=is_ascii)
    shown = texts(lines)
    assert shown[0].count(end) == 1 and shown[0].endswith("to " + "m" * 20)
    assert shown[HEADER_LINES].startswith("n" * 18 + end + " ")
    assert describe(p, *lay_out(p, view, (80, 22), is_ascii)).count(end) == 2
