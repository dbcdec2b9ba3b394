"""Optimal plans as a document: which variables are not the same in all of them."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from lpview.marks import Mask
from lpview.outcomes import Optimal
from lpview.priced import Interval
from lpview.prices.partition import Partition
from lpview.report.check import provenance
from lpview.report.document import Document, Facts, Sentence, Table
from lpview.report.names import fitted
from lpview.report.numbers import count, number
from lpview.report.prices import closing, opening, plan_dimension
from lpview.report.units import amount, labelled, units_of
from lpview.run import Claim

MOST_COLUMNS = 20
"""Variables shown unless the full report is asked for."""


def plans_report(
    found: Optimal,
    partition: Partition,
    intervals: Mapping[int, Interval],
    stopped: Claim | None,
    full: bool = False,
) -> Document:
    """The report of ``lpview plans``; at most 40 lines of text unless ``full``.

    Parameters
    ----------
    partition
        Which variables are not the same in all optimal plans.
    intervals
        Least and greatest value of the lines of those that were examined.
    stopped
        What ended the work early, if anything did.
    """
    lp = found.head.model
    moving = moving_columns(lp.m, partition.value_moves)
    early: tuple[Sentence, ...] = ()
    if stopped is not None:
        done = f"{len(intervals)} of {count(len(moving), 'variable')} examined"
        early = (Sentence(f"stopped: {done} ({stopped.value})"),)
    return (
        *opening(found),
        *early,
        Sentence(plan_dimension(lp, partition.plan_dimension, partition.value_moves)),
        *((_table(found, moving, intervals, full),) if moving else ()),
        Facts(provenance(found.head)),
        *closing(found),
    )


def moving_columns(m: int, value_moves: Mask) -> list[int]:
    """Lines of the columns whose value is not the same in all optimal plans."""
    lines: list[int] = (m + np.flatnonzero(value_moves[m:])).tolist()
    return lines


def _table(
    found: Optimal, moving: Sequence[int], intervals: Mapping[int, Interval], full: bool
) -> Table:
    lp, x = found.head.model, found.answer.x
    order = sorted(intervals, key=lambda line: (intervals[line][0] - intervals[line][1], line))
    shown = order if full else order[:MOST_COLUMNS]
    rows = tuple(
        (
            fitted(lp.columns[line - lp.m]),
            number(float(x[line - lp.m])),
            *map(number, intervals[line]),
        )
        for line in shown
    )
    what = "variables that are not the same in all optimal plans"
    title = f"{what}: {len(shown)} of {len(moving)} shown"
    header = ("column", "value in the answer", "least", "greatest")
    table = Table(title, header, rows, (False, True, True, True))
    return labelled(found.head, table, shown, units=True)


def end_sentence(found: Optimal, line: int, greatest: bool, end: float, with_ray: bool) -> str:
    """What was written: a plan with the least or greatest value, or a ray beside it."""
    lp, word = found.head.model, "greatest" if greatest else "least"
    name = fitted(lp.columns[line - lp.m])
    if np.isfinite(end):
        value = amount(end, units_of(found.head, line).own)
        return f"column {name} has its {word} value of all optimal plans here: {value}" + (
            "; there is no ray" if with_ray else ""
        )
    return (
        f"column {name} has no {word} value: the plan is optimal, and so is every plan along a ray "
        f"from it, which {'is in the other file' if with_ray else '--ray FILE writes'}"
    )
