"""ROWS and COLUMNS: names, costs and coefficients."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.blocks.mistakes import Place, Problem, quoted
from lpview.blocks.names import name_problem
from lpview.mps.fields import MARKER, Line, pairs
from lpview.mps.numerals import Numerals, read_numerals

Places = NDArray[np.int64]

NO_COMMENT = "a comment that begins in the first column, or a name that does not begin with *"
"""What is expected of a first field that looks like a comment."""

_ONCE = "every pair of a column and a row once"

OBJECTIVE, LEFT_OUT = -1, -2
"""In place of an index: the first N row, and the others."""


@dataclass(frozen=True)
class Rows:
    """What ROWS says."""

    names: tuple[str, ...]
    """All names in order, those of N rows too."""
    kinds: tuple[str, ...]
    """``N``, ``E``, ``L`` or ``G`` of each."""
    lines: Sequence[int]
    """Line of each."""
    index: Mapping[str, int]
    """Place of each name among all."""
    kept: Places
    """For each, its place among the constraints, or `OBJECTIVE` or `LEFT_OUT`."""

    @property
    def constraints(self) -> tuple[str, ...]:
        """Names without those of N rows."""
        return tuple(n for n, kind in zip(self.names, self.kinds, strict=True) if kind != "N")

    @property
    def dropped(self) -> tuple[str, ...]:
        """Names of N rows after the first."""
        return tuple(
            n for n, k in zip(self.names, self.kept.tolist(), strict=True) if k == LEFT_OUT
        )


@dataclass(frozen=True)
class Columns:
    """What COLUMNS says."""

    names: tuple[str, ...]
    """Names in order."""
    lines: Sequence[int]
    """First line of each."""
    index: Mapping[str, int]
    """Place of each name."""
    marked: frozenset[int]
    """Columns between INTORG and INTEND."""
    column: Places
    """Column of each entry."""
    row: Places
    """Row of each entry, among all rows."""
    entries: Numerals
    """The numbers."""


def read_rows(lines: Sequence[Line], place: Place) -> Rows:
    """Names and kinds of all rows; tells of wrong and repeated ones."""
    index: dict[str, int] = {}
    where: list[int] = []
    kinds: list[str] = []
    for number, (kind, name) in lines:
        if kind not in ("N", "E", "L", "G"):
            place.wrong(number, "", Problem("one of N, E, L, G", quoted(kind)))
        elif name in index:
            advice = f"it is on line {where[index[name]]} too"
            place.wrong(number, "name", Problem("every row once", quoted(name), advice))
        else:
            _tell_bad_name(name, number, place)
            index[name] = len(index)
            where.append(number)
            kinds.append(kind)
    free = [k for k, kind in enumerate(kinds) if kind == "N"]
    kept = np.cumsum([kind != "N" for kind in kinds], dtype=np.int64) - 1
    kept[free] = LEFT_OUT
    kept[free[:1]] = OBJECTIVE
    return Rows(tuple(index), tuple(kinds), where, index, kept)


def read_columns(lines: Sequence[Line], rows: Rows, place: Place) -> Columns:
    """All columns and their entries; tells of whatever is wrong with them."""
    marked, data = _markers(lines, place)
    found = pairs(data, 1)
    index: dict[str, int] = {}
    where: list[int] = []
    integer: set[int] = set()
    column: list[int] = []
    last: str | None = None
    for number, name, _, _ in found:
        if name != last:
            if name in index:
                advice = f"it began on line {where[index[name]]}"
                problem = Problem("all lines of a column together", f"{quoted(name)} again", advice)
                place.wrong(number, "column", problem)
            else:
                _tell_bad_name(name, number, place)
                index[name] = len(index)
                where.append(number)
                if number in marked:
                    integer.add(index[name])
            last = name
        column.append(index[name])
    numbers = [line for line, _, _, _ in found]
    at = look_up([row for _, _, row, _ in found], numbers, rows.index, place, "row")
    entries = read_numerals([text for _, _, _, text in found], numbers, place)
    columns = np.array(column, np.int64)
    _tell_repeated(columns, at, numbers, (tuple(index), rows.names), place)
    return Columns(tuple(index), where, index, frozenset(integer), columns, at, entries)


def _markers(lines: Sequence[Line], place: Place) -> tuple[set[int], Sequence[Line]]:
    """Lines of integer columns, and all lines without the markers."""
    if not any(fields[1] == MARKER for _, fields in lines):
        return set(), lines
    marked: set[int] = set()
    data: list[Line] = []
    begun = 0
    for number, fields in lines:
        if fields[1] != MARKER:
            data.append((number, fields))
            if begun:
                marked.add(number)
            continue
        wanted, got = "INTEND" if begun else "INTORG", fields[2].strip("'")
        if got in ("SOSORG", "SOSEND"):
            problem = Problem("a linear program", f"special ordered sets ({quoted(got)})")
            place.wrong(number, "marker", problem)
            continue
        if fields[2] != f"'{wanted}'":
            place.wrong(number, "marker", Problem(f"the marker '{wanted}'", quoted(got)))
        begun = 0 if begun else number
    if begun:
        place.wrong(begun, "marker", Problem("the marker 'INTEND' after it", "none"))
    return marked, data


def _tell_bad_name(name: str, line: int, place: Place) -> None:
    problem = name_problem(name)
    if not problem and name[0] == "*" and place.block == "COLUMNS":
        problem = NO_COMMENT
    if problem:
        place.wrong(line, "name", Problem(problem, quoted(name) if name else "none"))


def look_up(
    names: Sequence[str], lines: Sequence[int], index: Mapping[str, int], place: Place, kind: str
) -> Places:
    """Places of names, -1 for unknown ones, which are told once each."""
    places = np.array([index.get(name, -1) for name in names], np.int64)
    unknown: dict[str, list[int]] = {}
    for k in np.flatnonzero(places < 0).tolist():
        unknown.setdefault(names[k], []).append(lines[k])
    for name, at in unknown.items():
        times = f" {often(len(at))}" if len(at) > 1 else ""
        problem = Problem(
            f"a {kind} of {kind.upper()}S", (quoted(name) if name else "none") + times
        )
        place.unknown(at[0], kind, problem, name, tuple(index) if name else ())
    return places


def _tell_repeated(
    column: Places,
    row: Places,
    lines: Sequence[int],
    names: tuple[Sequence[str], Sequence[str]],
    place: Place,
) -> None:
    known = np.flatnonzero(row >= 0)
    key = column[known] * (len(names[1]) + 1) + row[known]
    if np.unique(key).size == key.size:
        return
    at = [lines[k] for k in known.tolist()]
    for first, second, times in repeated(key.tolist()):
        k = known[first]
        pair = f"{quoted(names[0][column[k]])} in {quoted(names[1][row[k]])} {often(times)}"
        place.wrong(at[second], "", Problem(_ONCE, pair, beside(at[first], at[second])))


def repeated(keys: Sequence[int]) -> list[tuple[int, int, int]]:
    """First and second place of every key that is there more than once, and how often."""
    places: dict[int, list[int]] = {}
    for place, key in enumerate(keys):
        places.setdefault(key, []).append(place)
    return [(at[0], at[1], len(at)) for at in places.values() if len(at) > 1]


def often(times: int) -> str:
    """How often, in words."""
    return "twice" if times == 2 else f"{times} times"


def beside(first: int, line: int) -> str:
    """Advice on where the first of several stands."""
    return "" if first == line else f"line {first} has it too"
