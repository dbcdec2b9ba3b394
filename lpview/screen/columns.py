"""The columns of the two tables: what they show, and which of them fit a width.

Both tables share one layout, so that the spine runs straight down the screen: the
primal side to its left, the price side to its right. As width shrinks, columns go
in a fixed order; name, one primal number, spine and price always stay. The table that
shows how its lines are linked to the other one has that coefficient in place of the
rates where there is not room for both.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from lpview.kkt import Side
from lpview.labels import Label
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.report.names import fitted, safe, width
from lpview.report.numbers import fitted_number, number
from lpview.screen.price_book import DOWN, DOWN_FAR, UP, UP_FAR, PriceBook

NUMBER = 12
"""Cells of a number; the widest one at six digits, ``-1.23457e-10``, fits."""
RATE = 9
"""Cells of a rate; ``-0.468022`` fits."""
SIDES = 24
"""Cells of a pair of sides."""
NARROWEST_NAME, ENOUGH_NAME, WIDEST_NAME = 18, 30, 60
"""Cells that names get at least, before columns that matter less, and at most."""
LEAST_NAME = 12
"""Cells that names keep beside a unit."""
LEAST_LABEL = 5
"""Cells below which a longer label is left out."""
UNIT, WIDEST_UNIT = "unit", 8
"""Head of the units, and cells that they get at most."""
GAP = 2
"""Cells between columns."""


@dataclass(frozen=True)
class Column:
    """One column of a table."""

    title: str
    """Its head, which is also what it is called when sorting by it."""
    cells: int
    """Its width."""
    text: Callable[[int], str]
    """What it shows for a line of its table."""
    keys: Vector | None
    """What it sorts by; None where it cannot be sorted by."""
    mark: Callable[[int], str] = lambda _: ""
    """A mark of one cell after it, in the gap, or nothing."""


@dataclass(frozen=True)
class TableColumns:
    """The columns of one table, each side from the spine outwards."""

    kind: str
    """``CONSTRAINT`` or ``VARIABLE``, the head of the names."""
    primal: tuple[Column, ...]
    """Left of the spine, the last to go first."""
    prices: tuple[Column, ...]
    """Right of the spine, the last to go first."""
    labels: Mapping[int, Label]
    """What is known about lines beside their names."""


@dataclass(frozen=True)
class Layout:
    """How many columns of each side fit, and the cells that are left for names."""

    name: int
    """Cells of the name."""
    primal: int
    """Columns left of the spine."""
    prices: int
    """Columns right of the spine, before the link column."""
    is_link_apart: bool
    """Whether the link column has room of its own; else it takes that of the rates."""
    unit: int = 0
    """Cells of the unit beside the first number; 0 where there is none or no room."""


_STEPS = (
    # What there is then: left of the spine, right of it, room for the link; further cells.
    (1, 3, False, 2 * (GAP + RATE) - (GAP + NUMBER), NARROWEST_NAME),
    (2, 3, False, GAP + NUMBER, NARROWEST_NAME),
    (3, 3, False, GAP + SIDES, NARROWEST_NAME),
    (3, 3, True, GAP + NUMBER, ENOUGH_NAME),
    (3, 4, True, GAP + len("complementarity"), ENOUGH_NAME),
    (3, 6, True, 2 * (GAP + NUMBER), ENOUGH_NAME),
)
"""Rates, row value, sides, link, complementarity, distances: as they appear with width, each
with the cells that it takes and those that it leaves for names."""


@dataclass(frozen=True)
class Widths:
    """Cells that the texts of a table's lines take at most."""

    name: int
    """Names."""
    with_label: int
    """Names with their labels."""
    unit: int
    """Units; 0 where there are none."""

    def joined(self, other: Widths) -> Widths:
        """Room for both."""
        return Widths(
            max(self.name, other.name),
            max(self.with_label, other.with_label),
            max(self.unit, other.unit),
        )


def widths_of(names: Sequence[str], labels: Mapping[int, Label]) -> Widths:
    """What the lines of one table take."""
    longest = max((width(name) for name in names), default=1)
    named = [
        width(safe(names[k])) + GAP + width(safe(known.label))
        for k, known in labels.items()
        if known.label
    ]
    units = [width(safe(known.unit)) for known in labels.values() if known.unit]
    unit = min(max(units), WIDEST_UNIT) if units else 0
    return Widths(longest, max(named, default=longest), max(unit, len(UNIT)) if units else 0)


def layout(width: int, cursor: int, spine: int, widths: Widths) -> Layout:
    """Fit columns into ``width`` cells, the more important ones first.

    Labels come before sides, which the ledger shows too; otherwise units and labels take what
    is left when nothing else fits.
    """
    longest = widths.name
    left = width - cursor - spine - 3 * (GAP + NUMBER) - GAP
    primal, prices, is_apart = 1, 1, True
    for *chosen, cells, enough in _STEPS:
        wanted = min(longest, enough)
        if chosen[0] == 3 and widths.with_label > longest:
            label = min(widths.with_label, ENOUGH_NAME)
            wanted = max(wanted, label + (1 + widths.unit if widths.unit else 0))
        if left - cells < max(NARROWEST_NAME, wanted):
            break
        primal, prices, is_apart = chosen[0], chosen[1], bool(chosen[2])
        left -= cells
    unit = widths.unit
    if unit and left - (1 + unit) >= max(min(longest, ENOUGH_NAME), LEAST_NAME):
        left -= 1 + unit
    else:
        unit = 0
    longest = max(longest, widths.with_label)
    name = max(min(left, WIDEST_NAME, max(longest, NARROWEST_NAME)), 1)
    return Layout(name, primal, prices, is_apart, unit)


def named(name: str, label: str, cells: int, more: str) -> str:
    """A safe name in at most so many cells, and its label after it where there is room."""
    text = squeezed(name, cells, more)
    room = cells - width(text) - GAP
    if not label or room < min(width(safe(label)), LEAST_LABEL):
        return text
    return text + " " * GAP + fitted(label, room, more)


def squeezed(name: str, cells: int, more: str) -> str:
    """A safe name in at most so many cells, cut in its middle: both its ends tell it apart."""
    name = safe(name)
    if width(name) <= cells:
        return name
    head = (cells - width(more) + 1) // 2
    tail = _begin(name[::-1], cells - width(more) - head)[::-1]
    while tail and not width(tail[0]):  # a combining mark whose letter was cut off
        tail = tail[1:]
    return _begin(name, head) + more + tail


def _begin(text: str, cells: int) -> str:
    """As many characters as fit."""
    used = 0
    for place, character in enumerate(text):
        used += width(character)
        if used > cells:
            return text[:place]
    return text


def constraint_columns(found: Optimal, book: PriceBook) -> TableColumns:
    """Columns of the constraints."""
    lp, side = found.head.model, found.measurement.rows
    return TableColumns(
        "CONSTRAINT",
        (
            _numbers("slack", side.slack),
            _numbers("row value", side.value),
            _pair("sides", lp.row_lower, lp.row_upper, lp.is_equality),
        ),
        _price_side("dual value", side, book, 0),
        found.head.labels.rows,
    )


def variable_columns(found: Optimal, book: PriceBook) -> TableColumns:
    """Columns of the variables."""
    lp, side = found.head.model, found.measurement.columns
    return TableColumns(
        "VARIABLE",
        (
            _numbers("value", side.value),
            _numbers("distance", side.slack),
            _pair("bounds", lp.lower, lp.upper, lp.is_fixed),
        ),
        _price_side("reduced cost", side, book, lp.m),
        found.head.labels.columns,
    )


def _price_side(title: str, side: Side, book: PriceBook, first: int) -> tuple[Column, ...]:
    """Price, rates, complementarity, distances; ``first`` is the number of the first line."""

    def moved(title: str, what: int, cells: int) -> Column:
        keys = book.numbers[what, first : first + side.price.size]
        return Column(title, cells, lambda line: book.cell(what, first + line, cells), keys)

    price = _numbers(title, side.price)
    return (
        replace(price, mark=lambda line: book.mark(first + line)),
        moved("up", UP, RATE),
        moved("down", DOWN, RATE),
        _complementarity(side),
        moved("how far up", UP_FAR, NUMBER),
        moved("how far down", DOWN_FAR, NUMBER),
    )


def _numbers(title: str, values: Vector) -> Column:
    return Column(title, NUMBER, lambda line: fitted_number(float(values[line]), NUMBER), values)


def _complementarity(side: Side) -> Column:
    values = side.complementarity
    cells = len("complementarity")
    return Column(
        "complementarity", cells, lambda line: fitted_number(float(values[line]), cells), values
    )


def _pair(title: str, low: Vector, high: Vector, same: NDArray[np.bool_]) -> Column:
    def text(line: int) -> str:
        return ends_text(float(low[line]), float(high[line]), bool(same[line]))

    return Column(title, SIDES, text, None)


def ends_text(low: float, high: float, same: bool) -> str:
    """A pair of ends in words of comparison: ``<= 5``, ``= 5``, ``2 .. 5``, ``free``."""
    if same:
        return f"= {number(low)}"
    if np.isinf(low) and np.isinf(high):
        return "free"
    if np.isinf(low):
        return f"<= {fitted_number(high, NUMBER)}"
    if np.isinf(high):
        return f">= {fitted_number(low, NUMBER)}"
    half = (SIDES - 4) // 2
    return f"{fitted_number(low, half)} .. {fitted_number(high, half)}"
