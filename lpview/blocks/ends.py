"""Two ends of every line: the sides of rows (``[b]``) and the bounds of columns."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np
from numpy.typing import NDArray

from lpview.blocks.cells import Cells, Numbers, column, read_numbers
from lpview.blocks.even import filled, find
from lpview.blocks.mistakes import shortened
from lpview.blocks.names import Index, look_up, read_names
from lpview.blocks.structure import Block
from lpview.decimals import exact_value
from lpview.model import Vector

AT_MOST, AT_LEAST, EQUAL = range(3)

RELATIONS = {"<=": AT_MOST, "≤": AT_MOST, ">=": AT_LEAST, "≥": AT_LEAST, "=": EQUAL}
"""Relations of a row by their spelling."""

_NO_LOWER = {"none": -np.inf, "-inf": -np.inf}
_NO_UPPER = {"none": np.inf, "inf": np.inf}


@dataclass(frozen=True)
class Piece:
    """Ends of some of the rows or columns."""

    block: Block
    """Where they stand."""
    places: Sequence[int] | NDArray[np.int64]
    """Which rows or columns."""
    lower: Numbers
    """Their lower ends; ``-inf`` for none."""
    upper: Numbers
    """Their upper ends; ``inf`` for none."""

    @property
    def decimals(self) -> int:
        """The most digits after a decimal mark."""
        return max(self.lower.decimals, self.upper.decimals)


@dataclass(frozen=True)
class Ends:
    """Ends of all rows or all columns."""

    lower: Vector
    """Lower ends; ``-inf`` where there is none."""
    upper: Vector
    """Upper ends; ``inf`` where there is none."""
    odd_lower: Mapping[int, Fraction]
    """Exact values of odd lower ends, by index."""
    odd_upper: Mapping[int, Fraction]
    """Exact values of odd upper ends, by index."""


def joined(pieces: Sequence[Piece], size: int) -> Ends:
    """The pieces put together; 0 and no upper end where there is none."""
    lower, upper = np.zeros(size), np.full(size, np.inf)
    odd_lower: dict[int, Fraction] = {}
    odd_upper: dict[int, Fraction] = {}
    for piece in pieces:
        places = np.asarray(piece.places, dtype=np.int64)
        lower[places], upper[places] = piece.lower.values, piece.upper.values
        odd_lower |= {int(places[k]): value for k, value in piece.lower.odd.items()}
        odd_upper |= {int(places[k]): value for k, value in piece.upper.odd.items()}
    return Ends(lower, upper, odd_lower, odd_upper)


@dataclass(frozen=True)
class Rows:
    """What ``[b]`` says."""

    names: tuple[str, ...]
    """Names of the rows in order."""
    pieces: Sequence[Piece]
    """Their sides."""


def read_rows(blocks: Sequence[Block]) -> Rows:
    """Rows and their sides from all ``[b]`` blocks."""
    names = read_names([column(block, 0) for block in blocks])
    pieces: list[Piece] = []
    start = 0
    for block in blocks:
        places = range(start, start + len(block.lines))
        start = places.stop
        if block.fixed[1] == "relation":
            pieces.append(Piece(block, places, *_relations(block)))
        else:
            sides = read_pair(block, 1, (-np.inf, np.inf), "lower side")
            pieces.append(Piece(block, places, *sides))
    return Rows(names, pieces)


def _relations(block: Block) -> tuple[Numbers, Numbers]:
    relations, numbers = column(block, 1), read_numbers(column(block, 2))
    kinds = find(relations.texts, RELATIONS)
    if kinds is None:
        kinds = np.zeros(len(relations.texts), dtype=np.int64)
        for place, text in enumerate(relations.texts):
            if text not in RELATIONS:
                relations.wrong(place, "<=, >= or =")
    no_lower, no_upper = kinds == AT_MOST, kinds == AT_LEAST
    return _one_end(numbers, no_lower, -np.inf), _one_end(numbers, no_upper, np.inf)


def _one_end(numbers: Numbers, missing: NDArray[np.bool_], infinite: float) -> Numbers:
    """One side of every row: the right-hand side, or none where it is missing."""
    values = np.where(missing, infinite, numbers.values)
    odd = {place: value for place, value in numbers.odd.items() if not missing[place]}
    return Numbers(values, odd, decimals=numbers.decimals)


def read_pair(
    block: Block, place: int, default: tuple[float, float], what: str
) -> tuple[Numbers, Numbers]:
    """Lower and upper ends from two columns; tells where the lower is above.

    Parameters
    ----------
    place
        Place of the lower ends in the header; the upper ones follow.
    default
        What empty cells mean.
    what
        Name of a lower end, for messages.
    """
    lower_cells, upper_cells = column(block, place), column(block, place + 1)
    lower = read_numbers(lower_cells, {"": default[0]} | _NO_LOWER)
    upper = read_numbers(upper_cells, {"": default[1]} | _NO_UPPER)
    for k in np.flatnonzero(lower.values >= upper.values).tolist():
        if k in lower.wrong or k in upper.wrong:
            continue
        low = exact_value(lower.values[k], lower.odd.get(k))
        if low > exact_value(upper.values[k], upper.odd.get(k)):
            _tell_crossed(lower_cells, upper_cells, k, what)
    return lower, upper


def _tell_crossed(lower: Cells, upper: Cells, place: int, what: str) -> None:
    text = lower.texts[place]
    advice = "" if text else f"an empty {what} is 0; write none for no {what}"
    upper.wrong(place, f"at least the {what} {shortened(text or '0')}", advice)


def read_bounds(
    blocks: Sequence[Block], index: Index | None, costs: Sequence[Piece]
) -> list[Piece]:
    """Bounds of columns from all ``[bounds]`` blocks.

    Parameters
    ----------
    index
        Place of every column; None when they are not known.
    costs
        Bounds that stand beside the costs already.
    """
    first: dict[int, int] = {}
    for piece in costs if blocks else ():
        first |= _given(piece)
    pieces = []
    for block in blocks:
        names = column(block, 0)
        ends = read_pair(block, 1, (0.0, np.inf), "lower bound")
        places = look_up(names, index, "a column of [c]")
        if places is None:
            continue
        for k, place in enumerate(places.tolist()):
            if place in first:
                names.wrong(k, "bounds once", f"line {first[place]} has them too")
            first.setdefault(place, names.line(k))
        pieces.append(Piece(block, places, *ends))
    return pieces


def _given(piece: Piece) -> dict[int, int]:
    """Lines of the columns for which a block with costs has any bound, by place."""
    lower, upper = column(piece.block, 2), column(piece.block, 3)
    given = {*filled(lower.texts).tolist(), *filled(upper.texts).tolist()}
    return {int(piece.places[k]): lower.line(k) for k in given}
