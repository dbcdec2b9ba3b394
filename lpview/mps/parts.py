"""Everything that an MPS file says, section by section."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass

from lpview.model import Sense
from lpview.mps.bounds import Bounds
from lpview.mps.matrix import Columns, Rows
from lpview.mps.sides import Ends, PerRow


@dataclass(frozen=True)
class Parts:
    """What stands in a file, before a linear program is made of it."""

    file: str
    """The file as the user named it."""
    sense: Sense
    """What OBJSENSE says."""
    rows: Rows
    """ROWS."""
    columns: Columns
    """COLUMNS."""
    rhs: PerRow
    """RHS."""
    ranges: PerRow
    """RANGES."""
    bounds: Bounds
    """BOUNDS."""
    row_lower: Ends
    """Lower sides of the constraints."""
    row_upper: Ends
    """Upper sides of the constraints."""
    first: Mapping[str, int]
    """Line of the header of each section."""
