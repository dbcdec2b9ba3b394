"""A model kept open in a solver and asked again and again, apart from any solver.

Each question changes a few limits or costs and starts where the last one ended, which
makes it hundreds of times quicker than a solve from nothing.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import NDArray
from scipy.sparse import csr_array

from lpview.model import Vector

Index = NDArray[np.int32]


@dataclass(frozen=True, eq=False)
class Vertex:
    """The least value is attained."""

    x: Vector
    """Where, shape ``(n,)``."""


@dataclass(frozen=True, eq=False)
class Descent:
    """There is no least value."""

    x: Vector
    """A feasible point, shape ``(n,)``."""
    ray: Vector
    """A direction in which the costs fall for ever, shape ``(n,)``; a claim to be checked."""


@dataclass(frozen=True)
class Lost:
    """The solver gave no answer that can be used."""

    message: str
    """Its own words."""


class WarmModel(Protocol):
    """``G x`` and ``x`` within limits, kept open; at first all costs are 0."""

    def set_columns(self, index: Index, low: Vector, high: Vector) -> None:
        """Give these columns other bounds."""

    def set_rows(self, index: Index, low: Vector, high: Vector) -> None:
        """Give these rows other sides."""

    def least(self, index: Index, costs: Vector) -> Vertex | Descent | Lost:
        """Minimize ``costs @ x[index]``."""


@dataclass(frozen=True, eq=False)
class Box:
    """The limits of a `WarmModel`."""

    row_low: Vector
    """Shape ``(m,)``; ``-inf`` for none."""
    row_high: Vector
    """Shape ``(m,)``; ``inf`` for none."""
    low: Vector
    """Of the columns, shape ``(n,)``; ``-inf`` for none."""
    high: Vector
    """Of the columns, shape ``(n,)``; ``inf`` for none."""


WarmMaker = Callable[[csr_array, Box], WarmModel]
"""Opens a model; raises `lpview.scaling.NotRepresentableError`."""
