"""The columns of the two tables: what they show, and which of them fit a width.

Both tables share one layout, so that the spine runs straight down the screen: the
primal side to its left, the price side to its right. As width shrinks, columns go
in a fixed order; name, one primal number, spine and price always stay.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.kkt import Side
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.report.numbers import fitted_number, number

NUMBER = 12
"""Cells of a number; the widest one at six digits, ``-1.23457e-10``, fits."""
SIDES = 24
"""Cells of a pair of sides."""
NARROWEST_NAME, WIDEST_NAME = 18, 60
"""Cells that names get at least and at most."""
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


@dataclass(frozen=True)
class TableColumns:
    """The columns of one table, each side from the spine outwards."""

    kind: str
    """``CONSTRAINT`` or ``VARIABLE``, the head of the names."""
    primal: tuple[Column, ...]
    """Left of the spine, the last to go first."""
    prices: tuple[Column, ...]
    """Right of the spine, the last to go first."""


@dataclass(frozen=True)
class Layout:
    """How many columns of each side fit, and the cells that are left for names."""

    name: int
    """Cells of the name."""
    primal: int
    """Columns left of the spine."""
    prices: int
    """Columns right of the spine, before the link column."""


def layout(width: int, cursor: int, spine: int, most: Layout) -> Layout:
    """Fit columns into ``width`` cells, the more important ones first.

    ``most`` says how many there are on each side, and the longest name.
    """
    left = width - cursor - spine - 3 * (GAP + NUMBER) - GAP
    chosen = {"primal": 1, "prices": 1}
    # In this order they appear: row value, sides, complementarity.
    for side, cells in (("primal", NUMBER), ("primal", SIDES), ("prices", NUMBER + 3)):
        spare = left - cells - GAP
        enough = NARROWEST_NAME if side == "primal" else min(most.name, 30)
        if chosen[side] < getattr(most, side) and spare >= max(NARROWEST_NAME, enough):
            chosen[side] += 1
            left = spare
    return Layout(max(min(left, WIDEST_NAME, max(most.name, NARROWEST_NAME)), 1), **chosen)


def constraint_columns(found: Optimal) -> TableColumns:
    """Columns of the constraints."""
    lp, side = found.head.model, found.measurement.rows
    return TableColumns(
        "CONSTRAINT",
        (
            _numbers("slack", side.slack),
            _numbers("row value", side.value),
            _pair("sides", lp.row_lower, lp.row_upper, lp.is_equality),
        ),
        (_numbers("dual value", side.price), _complementarity(side)),
    )


def variable_columns(found: Optimal) -> TableColumns:
    """Columns of the variables."""
    lp, side = found.head.model, found.measurement.columns
    return TableColumns(
        "VARIABLE",
        (
            _numbers("value", side.value),
            _numbers("distance", side.slack),
            _pair("bounds", lp.lower, lp.upper, lp.is_fixed),
        ),
        (_numbers("reduced cost", side.price), _complementarity(side)),
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
