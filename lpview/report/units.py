"""Labels and units beside names and numbers: shown where known, and nothing where not.

A price is the objective's unit per unit of its line. It is printed with a unit only where
that of the objective is known; a line without one counts in ``unit``.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

from lpview.labels import Label
from lpview.outcomes import Head
from lpview.report.document import Table
from lpview.report.names import fitted
from lpview.report.numbers import number

LONGEST_LABEL = 24
"""Cells that a label takes in a table, where numbers need the room."""
LONGEST_UNIT = 20
"""Cells that a unit may take."""


@dataclass(frozen=True)
class Units:
    """What the numbers of one line are counted in; texts that are safe to print."""

    own: str = ""
    """Of the row value, or of the variable; empty where not known."""
    objective: str = ""
    """Of the objective; empty where not known."""

    @property
    def one(self) -> str:
        """What its limits move by: ``kWh``, or ``unit``."""
        return self.own or "unit"

    @property
    def price(self) -> str:
        """Of its dual value, reduced cost or cost: ``EUR per kWh``."""
        return f"{self.objective} per {self.one}" if self.objective else ""

    def many(self, text: str) -> str:
        """A written amount of what its limits move by: ``40 kWh``, ``1 unit``, ``2 units``."""
        return f"{text} {self.own or ('unit' if text == '1' else 'units')}"


NO_UNITS = Units()
"""For a line about which nothing is known."""


def label_of(head: Head, line: int) -> Label:
    """What is known about a line, numbered as in `lpview.kkt`, beside its name."""
    m = head.model.m
    return head.labels.row(line) if line < m else head.labels.column(line - m)


def units_of(head: Head, line: int) -> Units:
    """What the numbers of a line are counted in."""
    return Units(fitted(label_of(head, line).unit, LONGEST_UNIT), objective_unit(head))


def objective_unit(head: Head) -> str:
    """The unit of the objective; empty where not known."""
    return fitted(head.labels.objective.unit, LONGEST_UNIT)


def in_units(text: str, unit: str) -> str:
    """A number's text with its unit, if that is known and the number has any."""
    return f"{text} {unit}" if unit and text not in ("inf", "-inf", "nan") else text


def amount(value: float, unit: str) -> str:
    """A number with its unit."""
    return in_units(number(value), unit)


def price_header(head: Head) -> str:
    """What prices of a table are counted in, as the end of its title; empty where not known."""
    unit = objective_unit(head)
    return f"; prices in {unit} per unit of the line" if unit else ""


def labelled(head: Head, table: Table, lines: Sequence[int], units: bool = False) -> Table:
    """A table with the labels of its lines, and their units, where there are any.

    They stand in columns of their own after the first one. ``lines`` are those of the
    table's first rows, numbered as in `lpview.kkt`; -1 stands for none.
    """
    known = [label_of(head, line) if line >= 0 else Label() for line in lines]
    columns = [("label", [fitted(one.label, LONGEST_LABEL) for one in known])]
    if units:
        columns.append(("unit", [fitted(one.unit, LONGEST_UNIT) for one in known]))
    for title, cells in reversed(columns):
        if any(cells):
            table = with_column(table, 1, title, cells)
    return table


def with_column(table: Table, at: int, title: str, cells: Sequence[str]) -> Table:
    """A table with one more column of text; rows beyond ``cells`` have nothing in it."""
    filled = [*cells, *[""] * (len(table.rows) - len(cells))]
    return replace(
        table,
        header=(*table.header[:at], title, *table.header[at:]),
        rows=tuple(
            (*row[:at], cell, *row[at:]) for row, cell in zip(table.rows, filled, strict=True)
        ),
        numeric=(*table.numeric[:at], False, *table.numeric[at:]),
    )
