"""RHS and RANGES: sides of the rows, and the constant of the objective."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from lpview.blocks.mistakes import Place, Problem, quoted
from lpview.decimals import exact_value
from lpview.model import Vector
from lpview.mps.fields import Line, pairs
from lpview.mps.matrix import NO_COMMENT, OBJECTIVE, Places, Rows, beside, look_up, often, repeated
from lpview.mps.numerals import Numerals, exact, read_numerals

Odd = Mapping[int, Fraction]


@dataclass(frozen=True)
class PerRow:
    """Numbers of some of the rows: right-hand sides, or ranges."""

    row: Places
    """Row of each, among all rows; -1 for unknown ones."""
    numerals: Numerals
    """The numbers."""


@dataclass(frozen=True, eq=False)
class Ends:
    """Lower or upper ends of all lines."""

    values: Vector
    """The doubles that this package holds: nearest to the exact numbers."""
    odd: dict[int, Fraction]
    """Exact numbers where they are others than the shortest decimals of the doubles."""
    plain: Vector
    """What arithmetic in doubles makes of the numerals, as the solver's reader does."""


def read_per_row(lines: Sequence[Line], rows: Rows, place: Place) -> PerRow:
    """Right-hand sides or ranges; tells of unknown and repeated rows and of other sets."""
    tell_other_sets([(line, fields[0]) for line, fields in lines], place)
    found = pairs(lines, 1)
    numbers = [line for line, _, _, _ in found]
    at = look_up([row for _, _, row, _ in found], numbers, rows.index, place, "row")
    for first, second, times in repeated(at.tolist()):
        if at[first] >= 0:
            got = f"{quoted(rows.names[at[first]])} {often(times)}"
            advice = beside(numbers[first], numbers[second])
            place.wrong(numbers[second], "row", Problem("every row once", got, advice))
    if place.block == "RANGES":
        known = np.flatnonzero(at >= 0)
        for k in known[rows.kept[at[known]] == OBJECTIVE][:1].tolist():
            problem = Problem("a row with sides", f"the objective {quoted(rows.names[at[k]])}")
            place.wrong(numbers[k], "row", problem)
    return PerRow(at, read_numerals([text for _, _, _, text in found], numbers, place))


def tell_other_sets(sets: Sequence[tuple[int, str]], place: Place) -> None:
    """Tell where a second set begins: readers differ in what they make of it."""
    for line, name in sets:
        if name.startswith("*"):
            place.wrong(line, "set", Problem(NO_COMMENT, quoted(name)))
            return
        if name != sets[0][1]:
            got = f"{quoted(name) if name else 'no name'} after {_named(sets[0][1])}"
            problem = Problem("one set of numbers", got, "keep the set that is meant")
            place.wrong(line, "set", problem)
            return


def _named(name: str) -> str:
    return quoted(name) if name else "no name"


def row_sides(rows: Rows, rhs: PerRow, ranges: PerRow) -> tuple[Ends, Ends]:
    """Lower and upper sides of all constraints."""
    value = np.zeros(len(rows.names))
    value[rhs.row] = rhs.numerals.numbers.values
    odd = {int(rhs.row[k]): number for k, number in rhs.numerals.numbers.odd.items()}
    kinds = np.array(rows.kinds, dtype="U1")
    low = _one_end(value, odd, np.isin(kinds, ("E", "G")), -np.inf)
    high = _one_end(value, odd, np.isin(kinds, ("E", "L")), np.inf)
    for k, row in enumerate(ranges.row.tolist()):
        kind, width = rows.kinds[row], exact(ranges.numerals.numbers, k)
        if kind == "N":
            continue
        # An equality is widened upwards by a positive range, downwards by a negative one.
        above = kind == "G" or (kind == "E" and width > 0)
        width = abs(width) if above else -abs(width)
        size = abs(float(ranges.numerals.numbers.values[k]))
        number = exact_value(value[row], odd.get(row)) + width
        end = high if above else low
        end.values[row] = float(number) + 0.0
        end.plain[row] = value[row] + (size if above else -size)
        end.odd.pop(row, None)
        if number != exact_value(end.values[row]):
            end.odd[row] = number
    return _constraints_only(low, rows), _constraints_only(high, rows)


def _one_end(value: Vector, odd: Odd, there: NDArray[np.bool_], infinite: float) -> Ends:
    """The end of every row before any range: its right-hand side, or none."""
    values = np.where(there, value, infinite)
    kept = {row: number for row, number in odd.items() if there[row]}
    return Ends(values, kept, values.copy())


def _constraints_only(ends: Ends, rows: Rows) -> Ends:
    keep = rows.kept >= 0
    odd = {int(rows.kept[row]): number for row, number in ends.odd.items()}
    return Ends(ends.values[keep], odd, ends.plain[keep])


def offset(rows: Rows, rhs: PerRow) -> tuple[float, Fraction | None]:
    """The constant of the objective: minus the right-hand side of its row."""
    for k, row in enumerate(rhs.row.tolist()):
        if rows.kept[row] == OBJECTIVE:
            odd = rhs.numerals.numbers.odd.get(k)
            return 0.0 - float(rhs.numerals.numbers.values[k]), None if odd is None else -odd
    return 0.0, None
