"""A plan from elsewhere: ``[x]``, and ``[y]`` and ``[z]`` where its prices are known."""

from __future__ import annotations

import hashlib
import re
from collections.abc import Sequence
from dataclasses import dataclass, replace
from fractions import Fraction
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray

from lpview.blocks.cells import Cells, column, read_numbers
from lpview.blocks.layout import PLAN_BLOCKS
from lpview.blocks.mistakes import Mistake, Mistakes, Problem, quoted
from lpview.blocks.names import Index, look_up, read_names
from lpview.blocks.source import from_bytes, read_bytes
from lpview.blocks.structure import Block, blocks_by_name
from lpview.given import GivenPlan, Written
from lpview.model import LinearProgram, Vector

Mask = NDArray[np.bool_]

IGNORE = "--ignore-unknown counts such names instead"
"""What to do about names that the model lacks."""

MOST_NAMED = 5
"""Columns without a value that are named one by one."""

_DECIMAL = re.compile(r"[+-]?(\d*)(?:[.,](\d*))?(?:[eE]([+-]?\d+))?", re.ASCII)


@dataclass(frozen=True)
class _Lines:
    """The lines of which one kind of block gives values."""

    kind: str
    """``column`` or ``row``."""
    names: Sequence[str]
    """All of them in order."""
    ignore_unknown: bool
    """Whether names that are none of these are counted instead of refused."""
    advice: str
    """What to do about them otherwise."""

    @property
    def index(self) -> Index:
        """Place of every name."""
        return {name: place for place, name in enumerate(self.names)}


def read_plan(
    file: str,
    lp: LinearProgram,
    decimal: str | None = None,
    *,
    needed: Sequence[int] | None = None,
    complete: bool = False,
    ignore_unknown: bool = False,
) -> GivenPlan:
    """A plan for a model; a file that begins with ``column,value`` needs no block line.

    Parameters
    ----------
    decimal
        ``"point"`` or ``"comma"``, the decimal mark of the model's file, which is that of the
        plan where its numbers show no other.
    needed
        The columns, by index, that the plan is asked for; None for all of them.
    complete
        Refuse a plan that leaves a column out. Otherwise such a column is 0, and is
        refused only where its bounds do not allow that.
    ignore_unknown
        Count names that the model lacks instead of refusing them.

    Raises `InputError` with all mistakes found, if there are any.
    """
    mistakes = Mistakes()
    data = read_bytes(file)
    source = replace(from_bytes(data, file), kinds=PLAN_BLOCKS, implied="x", usual=decimal)
    blocks = blocks_by_name([source], mistakes)
    advice = IGNORE if needed is None else ""
    columns = _Lines("column", lp.columns, ignore_unknown, advice)
    rows = _Lines("row", lp.rows, ignore_unknown, advice)
    unknown: list[str] = []
    x = _written(blocks["x"], columns, unknown)
    y = _written(blocks["y"], rows, unknown) if blocks["y"] else None
    z = _written(blocks["z"], columns, unknown) if blocks["z"] else None
    if blocks["x"] and not mistakes.among("x"):
        _tell_left_out(lp, x, mistakes, file, _needed(lp, needed, complete))
    if blocks["z"] and not blocks["y"] and not mistakes.among("y"):
        mistakes.add(Mistake(file, "the block [y] beside [z]", "none"))
    mistakes.stop([file])
    digest = hashlib.sha256(data).hexdigest()
    return GivenPlan(file, digest, x, y, z, tuple(dict.fromkeys(unknown)))


def _written(blocks: Sequence[Block], lines: _Lines, unknown: list[str]) -> Written:
    """The values of all blocks of one kind; names that are ignored go to ``unknown``."""
    size = len(lines.names)
    values, half, listed = np.zeros(size), np.zeros(size), np.zeros(size, dtype=bool)
    odd: dict[int, Fraction] = {}
    read_names([column(block, 0) for block in blocks])
    for block in blocks:
        names, cells = column(block, 0), column(block, 1)
        numbers = read_numbers(cells)
        kept = _kept(names, lines, unknown)
        where = "[b]" if lines.kind == "row" else "[c]"
        known = _picked(names, kept)
        what = f"a {lines.kind} of the model's {where}"
        places = look_up(known, lines.index, what, lines.advice)
        if places is None:
            continue
        values[places], listed[places] = numbers.values[kept], True
        half[places] = half_units([cells.texts[k] for k in kept])
        by_cell = dict(zip(kept, places.tolist(), strict=True))
        odd |= {by_cell[k]: exact for k, exact in numbers.odd.items() if k in by_cell}
    return Written(values, half, listed, MappingProxyType(odd))


def _kept(names: Cells, lines: _Lines, unknown: list[str]) -> list[int]:
    """Places of the names that are to be looked up."""
    if not lines.ignore_unknown:
        return list(range(len(names.texts)))
    index = lines.index
    kept = [k for k, name in enumerate(names.texts) if name in index]
    unknown += [name for name in names.texts if name not in index]
    return kept


def _picked(names: Cells, kept: Sequence[int]) -> Cells:
    """Some of the names, with their lines."""
    texts = list(names.texts)
    return Cells(
        names.block, names.fields, [names.lines[k] for k in kept], [texts[k] for k in kept]
    )


def half_units(texts: Sequence[str]) -> Vector:
    """Half a unit of the last written digit of each number; 0 for fractions.

    A zero is as coarse as its written digits, however large its exponent: ``0e5`` is ``0``,
    while ``0e-5`` is ``0.00000``.
    """
    halves = np.zeros(len(texts))
    for place, text in enumerate(texts):
        match = _DECIMAL.fullmatch(text)
        if match is None:
            continue
        whole, places = match[1], match[2] or ""
        # An exponent may have more digits than `int` reads; beyond 400 they are all the same.
        exponent = int(min(max(float(match[3] or 0), -400.0), 400.0))
        if not (whole + places).strip("0"):
            exponent = min(exponent, 0)
        halves[place] = float(f"5e{exponent - len(places) - 1}")
    return halves


def _needed(lp: LinearProgram, needed: Sequence[int] | None, complete: bool) -> Mask:
    """Columns that a plan must list: all of those asked for, or those that cannot be 0."""
    must = np.ones(lp.n, dtype=bool) if complete else (lp.lower > 0) | (lp.upper < 0)
    if needed is not None:
        asked = np.zeros(lp.n, dtype=bool)
        asked[list(needed)] = True
        must &= asked
    return must


def _tell_left_out(
    lp: LinearProgram, x: Written, mistakes: Mistakes, file: str, needed: Mask
) -> None:
    """Tell of columns that are not listed and must be."""
    places = np.flatnonzero(needed & ~x.listed).tolist()
    for place in places[:MOST_NAMED]:
        allows = lp.lower[place] <= 0 <= lp.upper[place]
        why = "none" if allows else "none, and its bounds do not allow 0"
        expected = f"a value for column {quoted(lp.columns[place])}"
        mistakes.add(Mistake(file, expected, why, block="x"))
    if len(places) > MOST_NAMED:
        problem = Problem("a value for every column", f"{len(places) - MOST_NAMED} more without")
        mistakes.add(Mistake(file, *problem[:2], block="x"))
