"""A plan that another system or a person produced, with the digits in which it was written."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from fractions import Fraction
from types import MappingProxyType

import numpy as np
from numpy.typing import NDArray

from lpview.model import Vector


@dataclass(frozen=True, eq=False)
class Written:
    """Values of all columns, or of all rows, as a file writes them."""

    values: Vector
    """The nearest doubles, shape ``(k,)``; 0 for lines that are not listed."""
    half: Vector
    """Half a unit of the last written digit of each, shape ``(k,)``: 0.005 for ``1.50``,
    0.5 for ``20``, 500 for ``1e3``; 0 for fractions and for lines that are not listed."""
    listed: NDArray[np.bool_]
    """Which lines the file lists, shape ``(k,)``."""
    odd: Mapping[int, Fraction] = field(default_factory=lambda: MappingProxyType({}))
    """Exact values by index where they differ from the shortest decimal of the double."""

    def __post_init__(self) -> None:
        for array in (self.values, self.half, self.listed):
            array.flags.writeable = False

    @property
    def unlisted(self) -> int:
        """Lines that the file does not list, which are 0."""
        return int(np.count_nonzero(~self.listed))


@dataclass(frozen=True, eq=False)
class GivenPlan:
    """A plan from elsewhere."""

    file: str
    """The file as the person named it."""
    sha256: str
    """SHA-256 of its bytes, in hexadecimal."""
    x: Written
    """Values of the columns."""
    y: Written | None = None
    """Dual values of the rows; None where the file has none."""
    z: Written | None = None
    """Reduced costs of the columns; None where the file has none."""
    unknown: tuple[str, ...] = ()
    """Names that the model lacks, where these are counted instead of refused."""
