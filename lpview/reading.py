"""A model as it arrived: the linear program, and what every report says about the reading."""

from __future__ import annotations

import enum
from collections.abc import Mapping
from dataclasses import dataclass, replace

from lpview.labels import NO_LABELS, Labels
from lpview.model import LinearProgram


class InPlace(enum.Enum):
    """What can stand in place of integer columns."""

    RELAXED = "relaxed"
    """The linear relaxation: any value within their bounds."""
    FIXED = "fixed"
    """The whole numbers of a plan."""


@dataclass(frozen=True)
class Scope:
    """What stands in place of a model's integer columns."""

    kind: InPlace
    """Whether they are relaxed or fixed."""
    columns: int
    """How many they are."""
    file: str = ""
    """The plan with the whole numbers, safe to print; empty for the relaxation."""

    @property
    def words(self) -> str:
        """The same in words, for the first line of a report."""
        columns = f"{self.columns} integer column" + ("" if self.columns == 1 else "s")
        if self.kind is InPlace.RELAXED:
            return f"linear relaxation: {columns} taken as continuous"
        return (
            f"{columns} fixed at the values of {self.file}; prices hold only for these integer "
            "values"
        )


@dataclass(frozen=True)
class Notes:
    """What is not wrong with an input, but every report of it states."""

    empty_coefficients: int
    """Empty cells of wide ``[A]`` blocks, read as 0."""
    empty_costs: int
    """Empty costs, read as 0."""
    rows_without_coefficients: tuple[str, ...]
    """Rows in which no coefficient differs from 0."""
    names_alike: tuple[tuple[str, str], ...]
    """Pairs of columns and pairs of rows whose names differ only in case or in
    blanks inside them."""
    most_decimals: Mapping[str, int]
    """Digits after the decimal mark, at most, by name of the block."""
    remarks: tuple[str, ...] = ()
    """Anything else that reading noticed or was told to do, each in words that go on
    after "noticed while reading:"."""
    scope: Scope | None = None
    """What stands in place of the model's integer columns; None for a linear program as it
    is."""

    @property
    def scope_words(self) -> str:
        """The scope in words; empty where there is none."""
        return self.scope.words if self.scope else ""


@dataclass(frozen=True)
class Reading:
    """A model that was read, with what there is to say about it."""

    model: LinearProgram
    """The linear program; integer columns are in it as if they were none."""
    notes: Notes
    """What every report states."""
    labels: Labels = NO_LABELS
    """Labels, units and groups that came with the model."""
    integers: tuple[int, ...] = ()
    """Columns, by index, whose values the file wants to be whole numbers."""

    def remarked(self, remark: str) -> Reading:
        """The same with one more thing that every report says of it."""
        notes = replace(self.notes, remarks=(*self.notes.remarks, remark))
        return replace(self, notes=notes)
