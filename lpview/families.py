"""Families: lines grouped by what their names begin with, or as their labels say.

A name's family is what stands before its first ``[``, ``(``, ``.`` or digit 0 to 9,
without blanks, ``_`` and ``-`` at the end: ``flow[a,b]`` and ``flow[b,c]`` are of the family
``flow``, ``make_3`` of ``make``; a name without any of these is a family by itself.
Where only such blanks stand before, they are the family's label (``-`` of ``-1``); a
name that begins with such a mark belongs to that mark's family, which is ``[``, ``(``
or ``.``, or ``0-9`` for all digits. No other label holds one of these, so families
never run into each other. A line that is put into a group (`lpview.labels`) belongs to the
family of that label instead, which may be the one of other lines' names.
"""

from __future__ import annotations

import enum
from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.kkt import Side
from lpview.labels import Label
from lpview.marks import Flag
from lpview.model import Vector
from lpview.outcomes import Optimal

Index = NDArray[np.intp]

DIGITS = "0-9"
"""Label of the family of names that begin with a digit."""

_MARKED = str.maketrans(dict.fromkeys("(.0123456789", "["))
_END = " \t\u00a0_-"


class Kind(enum.Enum):
    """Which lines."""

    ROW = "row"
    """The constraints."""
    COLUMN = "column"
    """The variables."""


@dataclass(frozen=True, eq=False)
class Families:
    """Lines of one kind, grouped, in order of first appearance."""

    labels: tuple[str, ...]
    """A label for each of the ``f`` families."""
    of_line: Index
    """The family of each of the ``k`` lines, shape ``(k,)``."""
    order: Index
    """The lines, family after family, in model order within each, shape ``(k,)``."""
    start: Index
    """Where each family begins in ``order``, and its end, shape ``(f + 1,)``."""

    def members(self, family: int) -> Index:
        """The lines of one family, ascending."""
        return self.order[self.start[family] : self.start[family + 1]]


@dataclass(frozen=True, eq=False)
class Summary:
    """What the families of one kind hold; arrays of shape ``(f,)``."""

    families: Families
    """The families."""
    count: Index
    """Lines."""
    zero_slack: Index
    """Lines with zero slack."""
    degenerate: Index | None
    """Degenerate lines; None for an answer without a basis."""
    largest: Vector
    """Largest ``|dual value|`` of rows, ``|reduced cost|`` of columns."""
    worth: Vector
    """Columns: cost times value, summed. Rows: dual value times the side that its
    sign names, summed, which is what they add to the dual objective."""


def families(names: Sequence[str], groups: Mapping[int, str] | None = None) -> Families:
    """Group names; none is empty. ``groups`` has those of lines that do not go by name."""
    heads = _heads(names)
    label = {head: head.rstrip(_END) or head for head in dict.fromkeys(heads)}
    if groups:
        heads = [groups.get(k) or label[head] for k, head in enumerate(heads)]
        label = {head: head for head in heads}
    number: dict[str, int] = {}
    family = {head: number.setdefault(label[head], len(number)) for head in dict.fromkeys(heads)}
    of_line = np.fromiter(map(family.__getitem__, heads), dtype=np.intp, count=len(heads))
    # A stable sort of small integers takes a time that grows with their number alone.
    small = of_line.astype(np.uint16) if len(number) < 2**16 else of_line
    order = np.argsort(small, kind="stable")
    start = np.concatenate([[0], np.cumsum(np.bincount(of_line, minlength=len(number)))])
    return Families(tuple(number), of_line, order, start.astype(np.intp))


def _heads(names: Sequence[str]) -> list[str]:
    """What each name begins with, blanks at its end included, or its first mark."""
    lines = "\n".join(names).translate(_MARKED).split("\n")
    if len(lines) != len(names):  # a line break inside a name
        lines = [name.translate(_MARKED) for name in names]
    heads = [line.partition("[")[0] for line in lines]
    if "" in heads:
        firsts = zip(heads, names, strict=True)
        heads = [head or (name[0] if name[0] in "[(." else DIGITS) for head, name in firsts]
    return heads


def summarize(found: Optimal, kind: Kind) -> Summary:
    """Count and add up the families of the rows or of the columns of an answer."""
    lp, measured = found.head.model, found.measurement
    is_row = kind is Kind.ROW
    labels = found.head.labels.rows if is_row else found.head.labels.columns
    groups = families(lp.rows if is_row else lp.columns, groups_of(labels))
    lines = slice(0, lp.m) if is_row else slice(lp.m, lp.m + lp.n)
    side: Side = measured.rows if is_row else measured.columns
    degenerate = found.marks.flags.get(Flag.DEGENERATE)
    worth = side.price * side.end if is_row else lp.c * side.value
    return Summary(
        families=groups,
        count=np.diff(groups.start),
        zero_slack=_summed(groups, found.marks.flags[Flag.ZERO_SLACK][lines]).astype(np.intp),
        degenerate=None
        if degenerate is None
        else _summed(groups, degenerate[lines]).astype(np.intp),
        largest=_largest(groups, np.abs(side.price)),
        worth=_summed(groups, worth),
    )


def groups_of(labels: Mapping[int, Label]) -> dict[int, str]:
    """The groups of lines that have one."""
    return {k: known.group for k, known in labels.items() if known.group}


def _summed(groups: Families, values: NDArray[np.generic]) -> Vector:
    sums = np.bincount(groups.of_line, values.astype(float), len(groups.labels))
    return np.asarray(sums, dtype=float)


def _largest(groups: Families, values: Vector) -> Vector:
    if not values.size:
        return np.zeros(0)
    # No family is empty, as reduceat needs it.
    largest: Vector = np.maximum.reduceat(values[groups.order], groups.start[:-1])
    return largest
