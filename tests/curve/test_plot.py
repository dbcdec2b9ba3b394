"""The plot: shape, marks, axes and numbers, in braille and in plain characters."""

from __future__ import annotations

import pytest
from hypothesis import given
from hypothesis import strategies as st

from lpview.report.plot import plot

# x1 <= 4, 2 x2 <= b, 3 x1 + 2 x2 <= 18, maximize 3 x1 + 5 x2, over b.
CORNERS = [(0, 12), (6, 27), (18, 45), (30, 45)]

PLAIN = """\
        45 |                         ...o...................
           |                     .....
           |                 ..@..
           |             .....
           |         o....
           |       ...
           |    ...
           |  ...
        12 |...
           +---------+------------------+-------------------
            0                                             30
            no plan is left                          goes on
"""


def test_the_whole_picture():
    drawn = plot([CORNERS], CORNERS[1:3], (12, 36), (60, 12), True, ("no plan is left", "goes on"))
    assert drawn == PLAIN.splitlines()


@pytest.mark.parametrize("plain", [True, False])
def test_marks_stand_over_their_ticks_and_on_the_line(plain):
    point, now, tick = "o@+" if plain else "○●┴"
    drawn = plot([CORNERS], CORNERS[1:3], (12, 36), (60, 12), plain)
    bare = plot([CORNERS], [], None, (60, 12), plain)
    axis = next(line for line in drawn if tick in line[12:])
    for row, line in enumerate(drawn[: drawn.index(axis)]):
        for column in (k for k, mark in enumerate(line) if mark in (point, now)):
            assert (line[column] == now) or axis[column] == tick
            assert bare[row][column] not in (" ", tick)
    text = "\n".join(drawn)
    assert text.count(point) == 2 and text.count(now) == 1
    assert plain == text.isascii()


def test_one_number_throughout_stands_in_the_middle():
    drawn = plot([[(0, 5), (6, 5)]], [], None, (40, 8), True)
    assert sum("5" in line.split("|")[0] for line in drawn) == 1
    assert [k for k, line in enumerate(drawn) if "." in line] == [3]


def test_nothing_to_draw():
    assert plot([], [], None, (60, 12)) == []


numbers = st.floats(-1e300, 1e300) | st.integers(-9, 9).map(float)
points = st.tuples(numbers, numbers)


@given(
    st.lists(st.lists(points, min_size=1, max_size=5).map(sorted), min_size=1, max_size=3),
    st.lists(points, max_size=2),
    st.none() | points,
    st.integers(20, 90),
    st.integers(5, 30),
    st.booleans(),
    st.sampled_from([("", ""), ("no plan is left", "the same rate, however far")]),
)
def test_any_numbers_fit_any_size(lines, marked, now, wide, high, plain, ends):
    drawn = plot(lines, marked, now, (wide, high), plain, ends)
    assert len(drawn) == high
    assert all(len(line) <= wide for line in drawn)
