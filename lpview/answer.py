"""An answer to a linear program: the plan, its prices and, where known, its basis.

Whoever gives the answer (a solver, a file, a person), it is a claim until it is
checked. Signs are those of `lpview.model`.
"""

from __future__ import annotations

import enum
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.model import Vector

Statuses = NDArray[np.int8]


class LineStatus(enum.IntEnum):
    """Where a basis puts a line: a row (by its row value) or a column."""

    LOWER = 0
    """Nonbasic, held at its lower side or bound; also any equality or fixed line."""
    BASIC = 1
    """Basic: its value follows from the nonbasic lines, and its price is 0."""
    UPPER = 2
    """Nonbasic, held at its upper side or bound."""
    FREE = 3
    """Nonbasic without being held at an end: a free line resting at 0."""


@dataclass(frozen=True, eq=False)
class Basis:
    """The status of every line; ``m`` of the ``n + m`` lines should be basic."""

    column: Statuses
    """`LineStatus` values of the columns, shape ``(n,)``."""
    row: Statuses
    """`LineStatus` values of the rows, shape ``(m,)``."""

    def __post_init__(self) -> None:
        for statuses in (self.column, self.row):
            statuses.flags.writeable = False


@dataclass(frozen=True, eq=False)
class Answer:
    """A plan with its prices, as reported; nothing here has been checked."""

    x: Vector
    """Values of the variables, shape ``(n,)``, column units."""
    y: Vector
    """Dual values, shape ``(m,)``, objective unit per row unit."""
    z: Vector
    """Reduced costs as reported, shape ``(n,)``, objective unit per column unit."""
    basis: Basis | None
    """The basis behind the plan; None where the method ends without one."""

    def __post_init__(self) -> None:
        for array in (self.x, self.y, self.z):
            array.flags.writeable = False
