"""A line plot in the cells of a terminal, as text: braille dots or plain characters.

Pure drawing: takes points, gives lines of text, knows nothing of what they mean.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise

from lpview.report.names import width as cells
from lpview.report.numbers import fitted_number

Point = tuple[float, float]
"""A place across, and a height."""

LABEL = 10
"""Most cells that a number at the axis takes."""

_DOTS = ((0x01, 0x08), (0x02, 0x10), (0x04, 0x20), (0x40, 0x80))
"""Bits of a braille character, by row and column of its dots."""


@dataclass(frozen=True)
class Marks:
    """Characters to draw with."""

    point: str
    """A point of interest."""
    now: str
    """The one point that stands out."""
    across: str
    """The axis below."""
    up: str
    """The axis on the left."""
    corner: str
    """Where the axes meet."""
    tick: str
    """Below a point of interest."""
    dot: str
    """A cell of the line; empty for braille dots."""


BRAILLE = Marks("○", "●", "─", "│", "└", "┴", "")
PLAIN = Marks("o", "@", "-", "|", "+", "+", ".")


def plot(
    lines: Sequence[Sequence[Point]],
    breakpoints: Sequence[Point],
    now: Point | None,
    size: tuple[int, int],
    plain: bool = False,
    ends: tuple[str, str] = ("", ""),
) -> list[str]:
    """Draw lines from point to point, with marks, axes and the numbers at their ends.

    Parameters
    ----------
    lines
        Points of each line, from left to right; a line of one point is a dot.
    breakpoints
        Points marked on the lines and on the axis below.
    now
        A point marked above all others, or None; left out where it lies outside.
    size
        Width and height of the whole, in cells; at least 20 by 5.
    plain
        Whether to draw with ASCII characters alone.
    ends
        What lies beyond the left and the right end, in a few words.

    Returns
    -------
    list of str
        As many lines as ``size`` is high, none wider than it is wide.
    """
    everything = [point for line in lines for point in line]
    if not everything:
        return []
    marks, (wide, high) = PLAIN if plain else BRAILLE, size
    frame = _Frame(everything, max(wide, 20) - LABEL - 2, max(high, 5) - 2 - any(ends))
    grid = frame.curve(lines, marks)
    for point in breakpoints:
        frame.put(grid, point, marks.point)
    if now is not None:
        frame.put(grid, now, marks.now)
    ticks = {frame.cell(point)[0] for point in breakpoints if frame.holds(point)}
    axis = "".join(marks.tick if k in ticks else marks.across for k in range(frame.columns))
    return [
        *(
            f"{label:>{LABEL}} {marks.up}{''.join(row)}".rstrip()
            for label, row in zip(frame.labels(), grid, strict=True)
        ),
        f"{'':{LABEL}} {marks.corner}{axis}",
        *frame.below(ends),
    ]


class _Frame:
    """The rectangle that is drawn on, and how numbers fall into it."""

    def __init__(self, points: Sequence[Point], columns: int, rows: int) -> None:
        across, heights = [x for x, _ in points], [y for _, y in points]
        self.left, self.right = min(across), max(across)
        self.bottom, self.top = min(heights), max(heights)
        self.columns, self.rows = columns, rows

    def holds(self, point: Point) -> bool:
        x, y = point
        return self.left <= x <= self.right and self.bottom <= y <= self.top

    def spot(self, point: Point, fine: tuple[int, int]) -> tuple[int, int]:
        """Column and row of a point, counted from the upper left, ``fine`` to a cell."""
        columns, rows = self.columns * fine[0], self.rows * fine[1]
        across = _share(point[0], self.left, self.right)
        up = _share(point[1], self.bottom, self.top)
        return round(across * (columns - 1)), round((1 - up) * (rows - 1))

    def cell(self, point: Point) -> tuple[int, int]:
        """The cell that the line passes through at a point, whatever it is drawn with."""
        column, row = self.spot(point, (2, 4))
        return column // 2, row // 4

    def put(self, grid: list[list[str]], point: Point, mark: str) -> None:
        if self.holds(point):
            column, row = self.cell(point)
            grid[row][column] = mark

    def curve(self, lines: Sequence[Sequence[Point]], marks: Marks) -> list[list[str]]:
        """The lines alone, a character a cell."""
        bits = [[0] * self.columns for _ in range(self.rows)]
        for line in lines:
            for column, row in _spots([self.spot(point, (2, 4)) for point in line]):
                bits[row // 4][column // 2] |= _DOTS[row % 4][column % 2]
        return [[_drawn(bit, marks) for bit in row] for row in bits]

    def labels(self) -> Iterator[str]:
        """A number beside the highest and the lowest row, where they differ."""
        flat = self.top == self.bottom
        for row in range(self.rows):
            if row == (self.rows - 1) // 2 if flat else row == 0:
                yield fitted_number(self.top, LABEL)
            else:
                lowest = row == self.rows - 1 and not flat
                yield fitted_number(self.bottom, LABEL) if lowest else ""

    def below(self, ends: tuple[str, str]) -> list[str]:
        """Numbers, and words if any, under both ends of the axis."""
        numbers = fitted_number(self.left, LABEL), fitted_number(self.right, LABEL)
        both = [numbers, ends] if any(ends) else [numbers]
        return [_apart(left, right, LABEL + 2, self.columns) for left, right in both]


def _share(value: float, least: float, greatest: float) -> float:
    """Where a value lies between two others, from 0 to 1; in the middle if they are one."""
    if greatest == least:
        return 0.5
    # Halves first: the difference of two doubles may be too large for one.
    return min(max((value / 2 - least / 2) / (greatest / 2 - least / 2), 0.0), 1.0)


def _spots(corners: Sequence[tuple[int, int]]) -> Iterable[tuple[int, int]]:
    """Every dot on the way from corner to corner."""
    yield from corners[:1]
    for (x, y), (to_x, to_y) in pairwise(corners):
        steps = max(abs(to_x - x), abs(to_y - y), 1)
        for k in range(1, steps + 1):
            yield round(x + (to_x - x) * k / steps), round(y + (to_y - y) * k / steps)


def _drawn(bits: int, marks: Marks) -> str:
    if not bits:
        return " "
    return marks.dot or chr(0x2800 + bits)


def _apart(left: str, right: str, indent: int, columns: int) -> str:
    """Two texts, one at each end; the right one on its own where both do not fit."""
    room = columns - cells(left) - cells(right)
    if room < 1:
        return (" " * indent + left)[: indent + columns]
    return (" " * indent + left + " " * room + right).rstrip()
