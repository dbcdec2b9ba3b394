"""The report with families of lines in place of single ones."""

from __future__ import annotations

from lpview.families import Kind, Summary, summarize
from lpview.outcomes import Examination, Optimal
from lpview.report import asking
from lpview.report.check import report
from lpview.report.document import Document, Table
from lpview.report.names import fitted
from lpview.report.numbers import count, number

MOST_FAMILIES = 20
"""Families of a kind shown unless the full report is asked for."""


def families_report(found: Examination, full: bool = False) -> Document:
    """The report, its families of rows and of columns in place of zero-slack rows.

    An examination without an answer has none, and its report is the usual one.
    """
    found = asking(found, "--families")
    if not isinstance(found, Optimal):
        return report(found, full)
    return report(found, full, tuple(families_table(found, kind, full) for kind in Kind))


def families_table(found: Optimal, kind: Kind, full: bool = False) -> Table:
    """The families of one kind, in order of first appearance; the rest in one line."""
    summary = summarize(found, kind)
    total = len(summary.families.labels)
    shown = total if full else min(total, MOST_FAMILIES)
    rows = [_cells(summary, k) for k in range(shown)]
    if shown < total:
        rows.append(_rest(summary, shown))
    lines = count(summary.families.of_line.size, kind.value)
    price, worth = {
        Kind.ROW: ("largest |dual value|", "dual value x side"),
        Kind.COLUMN: ("largest |reduced cost|", "cost x value"),
    }[kind]
    header = ("family", f"{kind.value}s", "zero slack", "degenerate", price, worth)
    title = f"families of {kind.value}s: {total} of {lines}"
    return Table(title, header, tuple(rows), (False, True, True, True, True, True))


def _cells(summary: Summary, family: int) -> tuple[str, ...]:
    degenerate = summary.degenerate
    return (
        fitted(summary.families.labels[family]),
        str(summary.count[family]),
        str(summary.zero_slack[family]),
        "not known" if degenerate is None else str(degenerate[family]),
        number(float(summary.largest[family])),
        number(float(summary.worth[family])),
    )


def _rest(summary: Summary, shown: int) -> tuple[str, ...]:
    degenerate = summary.degenerate
    return (
        f"and {len(summary.families.labels) - shown} more",
        str(summary.count[shown:].sum()),
        str(summary.zero_slack[shown:].sum()),
        "not known" if degenerate is None else str(degenerate[shown:].sum()),
        number(float(summary.largest[shown:].max())),
        number(float(summary.worth[shown:].sum())),
    )
