"""Lines to cells, one by one: comments, blank lines, quotes, and their mistakes."""

from __future__ import annotations

import csv
import re
from collections.abc import Iterator

from lpview.blocks.mistakes import ERROR_CELLS, Place, Problem, quoted
from lpview.blocks.source import SEPARATORS, Source

_NUMBER_LIKE = re.compile(r"[+-]?[\d.,/]*\d[\d.,/]*([eE][+-]?\d+)?")

_MOST_LINES = 5
"""Lines over which a quoted cell is followed to see whether it ends at all."""


def is_comment(first_cell: str) -> bool:
    """Whether a line with this first cell is a comment."""
    return first_cell == "#" or first_cell.startswith("# ")


def filled_lines(
    source: Source, text: str, first: int, place: Place
) -> Iterator[tuple[int, list[str]]]:
    """The lines of ``text`` that hold data, with their numbers and trimmed cells.

    Parameters
    ----------
    text
        Some whole lines of ``source``.
    first
        Number of the first of them.
    place
        Told of every line whose quotes are broken; such a line is left out.
    """
    lines = text.split("\n")
    if "#" in text:
        lines = ["" if _is_comment_line(line, source.separator) else line for line in lines]
    for number, raw in enumerate(_rows(source, lines, first, place), first):
        cells = [cell.strip() for cell in raw]
        if any(cells) and not is_comment(cells[0]):
            yield number, cells


def without_comments(source: Source, text: str, first: int) -> tuple[list[str], list[int]]:
    """The lines of ``text`` that are neither blank nor a comment, and their numbers."""
    lines = text.split("\n")
    blanks = source.separator + '" \t\u00a0'
    kept = [
        place
        for place, line in enumerate(lines)
        if line.strip(blanks) and not ("#" in line and _is_any_comment(source, line))
    ]
    return [lines[place] for place in kept], [first + place for place in kept]


def commented_data(
    source: Source, text: str, first: int, width: int
) -> tuple[tuple[int, str], ...]:
    """Comments that read like data, such as a row that is called ``# of shelves``.

    They have as many cells as their header, and a number in the last one that is filled.
    """
    found = []
    for number, line in enumerate(text.split("\n") if "#" in text else (), first):
        if "#" not in line or quote_problem(source, line):
            continue
        cells = source.cells(line)
        filled = [cell for cell in cells if cell]
        is_data = 1 < len(filled) <= width <= len(cells) and _NUMBER_LIKE.fullmatch(filled[-1])
        if is_data and is_comment(cells[0]):
            found.append((number, cells[0]))
    return tuple(found)


def _is_any_comment(source: Source, line: str) -> bool:
    """Whether a line is a comment, in quotes or not."""
    if _is_comment_line(line, source.separator):
        return True
    return not quote_problem(source, line) and is_comment(source.cells(line)[0])


def _is_comment_line(line: str, separator: str) -> bool:
    """Whether a line is a comment, before any quote in it is given a meaning."""
    start = line.lstrip()
    return start.startswith("#") and is_comment(start.split(separator, 1)[0].strip())


def _rows(source: Source, lines: list[str], first: int, place: Place) -> list[list[str]]:
    """The cells of every line; none for a line that cannot be split."""
    if not any('"' in line for line in lines):
        return [line.split(source.separator) for line in lines]
    try:
        rows = list(source.rows(lines))
    except csv.Error:
        rows = []
    if len(rows) == len(lines):
        return rows  # no quoted cell has run on into another line
    rows = []
    while len(rows) < len(lines):
        try:
            rows.append(source.cells(lines[len(rows)]))
        except csv.Error as error:
            spoilt, problem = _quote_problem(source, lines[len(rows) :], error)
            place.wrong(first + len(rows), "line", problem)
            rows += [[]] * spoilt
    return rows


def _quote_problem(source: Source, lines: list[str], error: csv.Error) -> tuple[int, Problem]:
    """How many lines broken quotes spoil, and what to say about it."""
    if "limit" in str(error):
        most = csv.field_size_limit()
        return 1, Problem(f"cells of at most {most} characters", "a longer one")
    if "expected after" in str(error):
        advice = "write a quote inside a quoted cell twice"
        expected = "a separator after the closing quote"
        return 1, Problem(expected, quoted(lines[0]), advice)
    for count in range(2, min(len(lines), _MOST_LINES) + 1):
        try:
            rows = list(source.rows([line + "\n" for line in lines[:count]]))
        except csv.Error:
            continue
        if len(rows) == 1:
            got = f"a quoted cell that runs over {count} lines"
            return count, Problem("each cell on one line", got, "take the line break out")
    return 1, Problem("a closing quote on the same line", quoted(lines[0]))


def quote_problem(source: Source, line: str) -> Problem | None:
    """What to say about a line by itself if its quotes are broken."""
    try:
        source.cells(line)
    except csv.Error as error:
        return _quote_problem(source, [line], error)[1]
    return None


def width_problem(source: Source, cells: list[str], width: int) -> Problem | None:
    """What to say about a line that has not as many cells as its header."""
    filled = len(cells)
    while filled > width and not cells[filled - 1]:
        filled -= 1
    if filled == width:
        return None
    is_block = cells[0].startswith("[") and cells[0].endswith("]")
    advice = "a block line holds only the block's name" if is_block else ""
    if filled > width and source.separator == "," and source.decimal == "comma":
        advice = "put numbers with a decimal comma in quotes"
    wrong = Problem(f"{width} cells as in the header", str(filled), advice)
    return separator_problem(source, cells) or wrong


def separator_problem(source: Source, cells: list[str]) -> Problem | None:
    """What to say about a line that was written with another separator."""
    usual = SEPARATORS[source.separator]
    for other, name in SEPARATORS.items():
        if other != source.separator and len(cells) == 1 and other in cells[0]:
            advice = "use one separator in the whole file"
            got = f"{name} in {quoted(cells[0])}"
            return Problem(f"cells separated by {usual}", got, advice)
    return None


def error_comments(source: Source) -> Iterator[tuple[int, str]]:
    """Line numbers and texts of a spreadsheet's error cells inside comments."""
    if "#" not in source.text or not any(e in source.text for e in ERROR_CELLS):
        return
    for number, line in enumerate(source.text.split("\n"), 1):
        head, *rest = (cell.strip().strip('"') for cell in line.split(source.separator))
        if is_comment(head):
            yield from ((number, cell) for cell in rest if cell in ERROR_CELLS)
