"""Labels, units and groups of lines: shown and searched; nothing numerical depends on them."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from types import MappingProxyType


@dataclass(frozen=True)
class Label:
    """What is known about a line, or about the objective, beside its name."""

    label: str = ""
    """A longer name for people; empty for none."""
    unit: str = ""
    """Its unit, such as ``kWh``: of the row value, of the variable, of the objective."""
    group: str = ""
    """The family it belongs to; empty where its name decides."""


NO_LABEL = Label()
"""For lines about which nothing is known beside the name."""


@dataclass(frozen=True)
class Labels:
    """The labels of a model."""

    rows: Mapping[int, Label] = field(default_factory=lambda: MappingProxyType({}))
    """Labels of rows by index; rows without any are left out."""
    columns: Mapping[int, Label] = field(default_factory=lambda: MappingProxyType({}))
    """Labels of columns by index; columns without any are left out."""
    objective: Label = NO_LABEL
    """Of the objective; its group means nothing."""
    sha256: str = ""
    """SHA-256 of the canonical ``[labels]`` block; empty where no labels were given."""

    def row(self, index: int) -> Label:
        """What is known about a row."""
        return self.rows.get(index, NO_LABEL)

    def column(self, index: int) -> Label:
        """What is known about a column."""
        return self.columns.get(index, NO_LABEL)


NO_LABELS = Labels()
"""For a model without labels."""
