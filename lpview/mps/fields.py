"""Data lines to fields, in free format or in fixed columns.

Free format has blanks between fields, and fixed format names with blanks inside them in
fixed columns. A file is in free format unless only fixed columns make sense of it; where
both do and names would differ, it is refused.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Collection, Iterable, Mapping, Sequence
from dataclasses import dataclass, field

from lpview.blocks.mistakes import InputError, Mistake, Mistakes, Place, Problem, quoted
from lpview.mps.sections import Sections

MARKER = "'MARKER'"
"""What stands in place of a row where integer columns begin or end."""

VALUELESS = frozenset(("FR", "MI", "PL", "BV"))
"""Bounds without a number."""

Line = tuple[int, list[str]]
"""Number of a line, and its fields: ROWS letter, name; COLUMNS column, row, number, and
again row, number; RHS and RANGES set, row, number, and again; BOUNDS kind, set, column,
number. A missing set or number is empty."""

_BLANKS = re.compile(r"[^ \t\f\v]+")
_NUMBER = re.compile(r"[+-]?(?:\.?[0-9]|inf|nan)", re.IGNORECASE)
_GAPS = ((0, 1), (3, 4), (12, 14), (22, 24), (36, 39), (47, 49))
_WIDTH = 61
_DATA = ("ROWS", "COLUMNS", "RHS", "RANGES", "BOUNDS")
_EXPECTED = {
    "ROWS": "one of N, E, L, G, and a name",
    "COLUMNS": "a column, and once or twice a row and a number",
    "RHS": "a set, and once or twice a row and a number",
    "RANGES": "a set, and once or twice a row and a number",
    "BOUNDS": "a kind of bound, a set, a column and a number",
}


@dataclass
class Fields:
    """The fields of all data lines in one of the two formats."""

    lines: dict[str, list[Line]] = field(default_factory=dict)
    """By name of the section."""
    bad: list[tuple[str, int, str]] = field(default_factory=list)
    """Section, number and text of lines that this format makes no sense of."""
    sensible: bool = True
    """Whether there is none of them, and numbers stand where numbers should."""
    comments: list[int] = field(default_factory=list)
    """Lines with a comment at their end."""


def read_fields(sections: Sections, file: str, mistakes: Mistakes) -> Fields:
    """The fields of all data lines; tells of lines that have the wrong number of them.

    Raises `InputError` where the two formats differ and both make sense.
    """
    free = _free(sections)
    if not free.sensible:
        fixed = _fixed(sections)
        if fixed is not None:
            return fixed
    elif _has_inner_blanks(sections):
        fixed = _fixed(sections)
        if fixed is not None and fixed.lines != free.lines:
            _refuse_both(free, fixed, file)
    for name, number, text in free.bad:
        problem = Problem(_EXPECTED[name], quoted(text.strip()))
        Place(file, name, mistakes).wrong(number, "", problem)
    return free


def _refuse_both(free: Fields, fixed: Fields, file: str) -> None:
    for name in _DATA:
        for (number, one), (_, other) in zip(free.lines[name], fixed.lines[name], strict=True):
            if one != other:
                got = f"{quoted(' | '.join(one))} or, in fixed columns, {quoted(' | '.join(other))}"
                advice = "write names without blanks inside them"
                raise InputError(
                    [Mistake(file, "fields that can be told apart", got, number, name, "", advice)]
                )


def _has_inner_blanks(sections: Sections) -> bool:
    return any(" " in line[4:12].strip() for name in _DATA[:2] for _, line in sections.lines(name))


def _free(sections: Sections) -> Fields:
    found = Fields()
    shapes: Mapping[str, Callable[[list[str], Collection[str]], list[str] | None]] = {
        "ROWS": _row,
        "COLUMNS": _column,
        "RHS": _side,
        "RANGES": _side,
        "BOUNDS": _bound,
    }
    known: set[str] = set()
    for name in _DATA:
        lines: list[Line] = []
        for number, line in sections.lines(name):
            # The quick way knows more blanks than the format does.
            plain = line.isascii() and line.isprintable()
            words = line.split() if plain else _BLANKS.findall(line)
            if "$" in line or "*" in line:
                words = _without_comment(words, name, known, found.comments, number)
            fields = shapes[name](words, known)
            if fields is None:
                found.bad.append((name, number, line))
            else:
                lines.append((number, fields))
        found.lines[name] = lines
        if name == "ROWS":
            known = {fields[1] for _, fields in lines}
        if name == "RANGES":
            known = {fields[0] for _, fields in found.lines["COLUMNS"]}
    found.sensible = not found.bad and _numbers_in_place(found)
    return found


def _without_comment(
    words: list[str], name: str, known: Collection[str], comments: list[int], number: int
) -> list[str]:
    """The words before a comment: one that begins with $ or * and is no name."""
    first = {"ROWS": 2, "COLUMNS": 3, "RHS": 2, "RANGES": 2, "BOUNDS": 2}[name]
    for place in range(first, len(words)):
        if words[place][0] in "$*" and words[place] not in known:
            comments.append(number)
            return words[:place]
    return words


def _row(words: list[str], _known: Collection[str]) -> list[str] | None:
    return words if len(words) == 2 else None


def _column(words: list[str], _known: Collection[str]) -> list[str] | None:
    return words if len(words) in (3, 5) else None


def _side(words: list[str], _known: Collection[str]) -> list[str] | None:
    if len(words) in (2, 4):
        return ["", *words]
    return words if len(words) in (3, 5) else None


def _bound(words: list[str], columns: Collection[str]) -> list[str] | None:
    if len(words) == 4:
        return words
    if len(words) == 2:
        return [words[0], "", words[1], ""]
    if len(words) != 3:
        return None
    kind, first, last = words
    if kind in VALUELESS and last in columns:
        # A set named like a column, or a column with a number that is a column's name.
        return None if first in columns and _NUMBER.match(last) else [kind, first, last, ""]
    if first in columns or _NUMBER.match(last):
        return [kind, "", first, last]
    return [kind, first, last, ""]


def _numbers_in_place(found: Fields) -> bool:
    for name in ("COLUMNS", "RHS", "RANGES"):
        for _, fields in found.lines[name]:
            if not _NUMBER.match(fields[2]) and fields[1] != MARKER:
                return False
            if len(fields) == 5 and not _NUMBER.match(fields[4]):
                return False
    return all(
        _NUMBER.match(fields[3]) or (not fields[3] and fields[0] in VALUELESS)
        for _, fields in found.lines["BOUNDS"]
    )


def _fixed(sections: Sections) -> Fields | None:
    """The fields in fixed columns; None where a line does not keep to them."""
    found = Fields()
    for name in _DATA:
        lines = [
            (number, _slices(line, number, found.comments)) for number, line in sections.lines(name)
        ]
        shaped = [(number, _shaped(name, parts)) for number, parts in lines if parts is not None]
        kept = [(number, fields) for number, fields in shaped if fields is not None]
        if len(kept) < len(lines):
            return None
        found.lines[name] = kept
    return found if _numbers_in_place(found) else None


def _slices(line: str, number: int, comments: list[int]) -> list[str] | None:
    """The six fields of a line; None where something stands between them."""
    if "\t" in line:
        return None
    for place in (14, 39):
        if line[place : place + 1] == "$":
            comments.append(number)
            line = line[:place]
    if len(line) > _WIDTH:
        if line[_WIDTH:].strip():
            comments.append(number)
        line = line[:_WIDTH]
    if any(line[start:end].strip() for start, end in _GAPS):
        return None
    ends = ((1, 3), (4, 12), (14, 22), (24, 36), (39, 47), (49, 61))
    return [line[start:end].strip() for start, end in ends]


def _shaped(name: str, parts: Sequence[str]) -> list[str] | None:
    """The fields that a section uses; None where others are filled too."""
    kind, first, second, number, third, last = parts
    if name == "ROWS":
        return [kind, first] if kind and first and not _any(second, number, third, last) else None
    if name == "BOUNDS":
        return [kind, first, second, number] if kind and not _any(third, last) else None
    if kind:
        return None
    if name == "COLUMNS" and second == MARKER:
        return [first, second, third or number]
    return [first, second, number, *((third, last) if _any(third, last) else ())]


def _any(*texts: str) -> bool:
    return any(texts)


def pairs(lines: Iterable[Line], start: int) -> list[tuple[int, str, str, str]]:
    """Line, first field, and each pair of a name and a number of COLUMNS, RHS or RANGES."""
    found = []
    for line, fields in lines:
        found.append((line, fields[0], fields[start], fields[start + 1]))
        if len(fields) == 5:
            found.append((line, fields[0], fields[3], fields[4]))
    return found
