"""The objective: ``[c]`` with the names of all columns, and ``[offset]``."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from fractions import Fraction

import numpy as np

from lpview.blocks.cells import Cells, Numbers, column, read_numbers
from lpview.blocks.ends import Piece, read_pair
from lpview.blocks.mistakes import ERROR_CELLS, Problem, quoted
from lpview.blocks.names import read_names
from lpview.blocks.structure import Block
from lpview.model import Sense, Vector

SENSES = {sense.value: sense for sense in Sense}
"""Senses by their word."""


@dataclass(frozen=True)
class Objective:
    """What ``[c]`` says."""

    sense: Sense
    """Minimize or maximize."""
    names: tuple[str, ...]
    """Names of the columns in order."""
    c: Vector
    """Their costs."""
    odd: Mapping[int, Fraction]
    """Exact values of odd costs, by index."""
    bounds: Sequence[Piece]
    """Bounds given beside the costs."""
    empty_costs: int
    """Empty cells read as a cost of 0."""
    decimals: int
    """The most digits after a decimal mark."""


@dataclass(frozen=True)
class _Costs:
    """One ``[c]`` block."""

    names: Cells
    """Names of its columns."""
    numbers: Numbers
    """Their costs."""


def read_objective(blocks: Sequence[Block]) -> Objective:
    """The objective from all ``[c]`` blocks."""
    parts = [_tall(block) if block.fixed else _wide(block) for block in blocks]
    names = read_names([part.names for part in parts])
    odd: dict[int, Fraction] = {}
    bounds: list[Piece] = []
    start = 0
    for part in parts:
        places = range(start, start + len(part.names.texts))
        odd |= {places[k]: value for k, value in part.numbers.odd.items()}
        if len(part.names.block.fixed) > 2:
            ends = read_pair(part.names.block, 2, (0.0, np.inf), "lower bound")
            bounds.append(Piece(part.names.block, places, *ends))
        start = places.stop
    decimals = [part.numbers.decimals for part in parts] + [p.decimals for p in bounds]
    return Objective(
        sense=_sense(blocks),
        names=names,
        c=np.concatenate([np.zeros(0), *(part.numbers.values for part in parts)]),
        odd=odd,
        bounds=bounds,
        empty_costs=sum(part.numbers.empty for part in parts),
        decimals=max(decimals, default=0),
    )


def _tall(block: Block) -> _Costs:
    """Columns and costs, one a line."""
    return _costs(column(block, 0), column(block, 1))


def _wide(block: Block) -> _Costs:
    """The columns of the header and the one line of costs below it."""
    names, width, lines = block.header[1:], len(block.header), block.lines[:1]
    for line in block.lines[1:2]:
        got = quoted(block.flat[width])
        problem = Problem("one line of costs", f"another one beginning with {got}")
        block.place.wrong(line, "line", problem)
    if not lines:
        problem = Problem("a line of costs below the header", "no line")
        block.place.wrong(block.header_line, "line", problem)
    elif block.flat[0] in ERROR_CELLS:
        Cells(block, block.header[:1], lines, block.flat[:1]).wrong(0, "a label")
    header = Cells(block, ("column",), [block.header_line] * len(names), names)
    return _costs(header, Cells(block, names, lines, block.flat[1:width]))


def _costs(names: Cells, costs: Cells) -> _Costs:
    return _Costs(names, read_numbers(costs, {"": 0.0}))


def _sense(blocks: Sequence[Block]) -> Sense:
    """The one sense of all ``[c]`` blocks."""
    found = Sense.MINIMIZE
    for place, block in enumerate(blocks):
        sense = SENSES.get(block.argument.casefold())
        if sense is None:
            problem = Problem("minimize or maximize", quoted(block.argument))
            advice = "write [c],minimize or [c],maximize"
            block.place.wrong(block.line, "sense", problem._replace(advice=advice))
        elif place and sense is not found:
            problem = Problem(f"{found.value} as above", quoted(block.argument))
            block.place.wrong(block.line, "sense", problem)
        else:
            found = sense
    return found


def read_offset(blocks: Sequence[Block]) -> Numbers:
    """The constant of the objective, one number, and 0 without ``[offset]``."""
    for block in blocks:
        return read_numbers(Cells(block, ("number",), (block.line,), (block.argument,)))
    return Numbers(np.zeros(1))
