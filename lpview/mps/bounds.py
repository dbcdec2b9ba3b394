"""BOUNDS: bounds of the columns, and more columns that are integer."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, field
from fractions import Fraction

import numpy as np

from lpview.blocks.mistakes import Place, Problem, quoted
from lpview.decimals import exact_value, number_text
from lpview.mps.fields import VALUELESS, Line
from lpview.mps.matrix import Columns, Places, beside, look_up, often
from lpview.mps.numerals import NO_NUMERALS, Numerals, exact, read_ends
from lpview.mps.sides import tell_other_sets

LOWER = frozenset(("LO", "LI", "FX", "FR", "MI", "BV"))
"""Kinds that say what the lower bound is."""
UPPER = frozenset(("UP", "UI", "FX", "FR", "PL", "BV"))
"""Kinds that say what the upper bound is."""
INTEGER = frozenset(("LI", "UI", "BV"))
"""Kinds that make a column integer."""
SEMI = {"SC": "semi-continuous", "SI": "semi-integer"}
"""Kinds that no linear program has."""


@dataclass
class Bounds:
    """Bounds of all columns."""

    lower: list[float]
    """Lower bounds, ``-inf`` for none."""
    upper: list[float]
    """Upper bounds, ``inf`` for none."""
    odd_lower: dict[int, Fraction] = field(default_factory=dict)
    """Exact lower bounds where they are no shortest decimals."""
    odd_upper: dict[int, Fraction] = field(default_factory=dict)
    """Exact upper bounds where they are no shortest decimals."""
    lines: dict[int, int] = field(default_factory=dict)
    """Last line that says anything about a column."""
    integer: set[int] = field(default_factory=set)
    """Columns that must be integer."""
    opened: list[int] = field(default_factory=list)
    """Columns with a negative upper bound and no lower one, taken as unbounded below."""
    binary: list[int] = field(default_factory=list)
    """Marked columns without any bound, taken as 0 or 1."""
    large: list[int] = field(default_factory=list)
    """Numerals that were taken for infinite, by place."""
    ignored: list[int] = field(default_factory=list)
    """Lines with a number that their kind of bound does not use."""
    records: list[tuple[str, int, str]] = field(default_factory=list)
    """Kind, column and numeral of every bound."""
    numerals: Numerals = NO_NUMERALS
    """All numerals."""


def read_bounds(lines: Sequence[Line], columns: Columns, place: Place) -> Bounds:
    """Bounds of all columns; tells of whatever is wrong."""
    n = len(columns.names)
    bounds = Bounds([0.0] * n, [np.inf] * n, integer=set(columns.marked))
    tell_other_sets([(line, fields[1]) for line, fields in lines], place)
    numbers = [line for line, _ in lines]
    at = look_up([fields[2] for _, fields in lines], numbers, columns.index, place, "column")
    kept = _known_kinds(lines, at, place, bounds)
    given = [k for k in kept if lines[k][1][0] not in VALUELESS]
    texts = [lines[k][1][3] for k in given]
    ends, large = read_ends(texts, [numbers[k] for k in given], place)
    bounds.numerals, bounds.large = ends, large
    number = {k: j for j, k in enumerate(given)}
    lower: dict[int, int] = {}
    upper: dict[int, int] = {}
    again: dict[tuple[str, int], list[int]] = {}  # end and column: lines, the first one too
    for k in kept:
        kind, line, column = lines[k][1][0], numbers[k], int(at[k])
        if column < 0 or number.get(k) in ends.numbers.wrong:
            continue
        bounds.lines[column] = line
        bounds.records.append((kind, column, lines[k][1][3] if k in number else ""))
        for word, kinds, first in (("lower", LOWER, lower), ("upper", UPPER, upper)):
            if kind in kinds and first.setdefault(column, line) != line:
                again.setdefault((word, column), [first[column]]).append(line)
        _set(bounds, kind, column, (ends, number.get(k, -1)), (line, place))
    for (word, column), at_lines in again.items():
        got = f"{quoted(columns.names[column])} {often(len(at_lines))}"
        problem = Problem(f"one {word} bound of a column", got, beside(*at_lines[:2]))
        place.wrong(at_lines[1], "column", problem)
    _defaults(bounds, columns, lower, upper)
    _tell_crossed(bounds, columns, place)
    return bounds


def _known_kinds(lines: Sequence[Line], at: Places, place: Place, bounds: Bounds) -> list[int]:
    """Places of lines of a kind that a linear program may have."""
    kept, semi = [], dict[str, list[int]]()
    for k, (line, fields) in enumerate(lines):
        kind = fields[0]
        if kind in SEMI:
            semi.setdefault(kind, []).append(k)
        elif kind not in LOWER | UPPER:
            expected = "one of LO, UP, FX, FR, MI, PL, BV, LI, UI"
            place.wrong(line, "kind", Problem(expected, quoted(kind)))
        else:
            if kind in VALUELESS and fields[3]:
                bounds.ignored.append(line)
            kept.append(k)
    for kind, places in semi.items():
        s = "s" if len(places) > 1 else ""
        name = quoted(lines[places[0]][1][2])
        got = f"{len(places)} {SEMI[kind]} column{s}, such as {name}"
        place.wrong(lines[places[0]][0], "", Problem("a linear program", got))
    return kept


def _set(
    bounds: Bounds, kind: str, column: int, number: tuple[Numerals, int], where: tuple[int, Place]
) -> None:
    ends, k = number
    value = float(ends.numbers.values[k]) if k >= 0 else 0.0
    odd = ends.numbers.odd.get(k)
    line, place = where
    if kind in INTEGER:
        bounds.integer.add(column)
        if k >= 0 and np.isfinite(value) and exact(ends.numbers, k).denominator != 1:
            problem = Problem(f"a whole number with {kind}", quoted(ends.texts[k]))
            place.wrong(line, "number", problem)
    wrong_end = (kind in LOWER and value == np.inf) or (kind in UPPER and value == -np.inf)
    if wrong_end or (kind == "FX" and np.isinf(value)):
        problem = Problem(f"a finite number with {kind}", quoted(ends.texts[k]))
        place.wrong(line, "number", problem)
        return
    low, high = {"FR": (-np.inf, np.inf), "MI": (-np.inf, np.inf), "BV": (0.0, 1.0)}.get(
        kind, (value, value if kind != "PL" else np.inf)
    )
    if kind in LOWER:
        bounds.lower[column] = low
        _keep(bounds.odd_lower, column, odd)
    if kind in UPPER:
        bounds.upper[column] = high
        _keep(bounds.odd_upper, column, odd)


def _keep(odd: dict[int, Fraction], column: int, number: Fraction | None) -> None:
    if number is not None:
        odd[column] = number


def _defaults(
    bounds: Bounds, columns: Columns, lower: dict[int, int], upper: dict[int, int]
) -> None:
    for column in upper:
        if column not in lower and bounds.upper[column] < 0:
            bounds.lower[column] = -np.inf
            bounds.opened.append(column)
    for column in sorted(columns.marked):
        if column not in lower and column not in upper:
            bounds.upper[column] = 1.0
            bounds.binary.append(column)


def _tell_crossed(bounds: Bounds, columns: Columns, place: Place) -> None:
    for column, (low, high) in enumerate(zip(bounds.lower, bounds.upper, strict=True)):
        if low < high or not (np.isfinite(low) and np.isfinite(high)):
            continue
        below, above = bounds.odd_lower.get(column), bounds.odd_upper.get(column)
        if exact_value(low, below) > exact_value(high, above):
            expected = f"at least the lower bound {number_text(low, below)}"
            got = f"the upper bound {number_text(high, above)} of {quoted(columns.names[column])}"
            place.wrong(bounds.lines[column], "", Problem(expected, got))
