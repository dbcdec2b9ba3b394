"""The body of a report on a model without an optimum: its certificate."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.marks import Mask
from lpview.model import LinearProgram, Vector
from lpview.outcomes import Head, NoOptimum
from lpview.repair.certificate import NOISE, Farkas, Ray
from lpview.repair.search import Infeasible
from lpview.report.document import Block, Facts, Sentence, Table
from lpview.report.names import fitted, line_name
from lpview.report.numbers import count, number, residual
from lpview.report.units import amount, labelled, objective_unit, units_of

Index = NDArray[np.intp]

MOST_LINES = 20
"""Lines of a certificate shown unless the full report is asked for."""

_DUAL = {
    True: "infeasible too",
    False: "feasible",
    None: "not established",
}


def body(found: NoOptimum, full: bool) -> tuple[Block, ...]:
    """The certificate and what it means."""
    head, certificate = found.head, found.certificate
    if isinstance(certificate, Infeasible):
        return _infeasible(head, certificate, full)
    return _unbounded(head, certificate.ray, full)


def _infeasible(head: Head, certificate: Infeasible, full: bool) -> tuple[Block, ...]:
    farkas = certificate.farkas
    return (
        Sentence(
            "Each multiplier times its side or bound, added up, would have to be at most 0 "
            f"for any plan, and is {number(farkas.contradiction)}."
        ),
        Sentence(_reach(farkas)),
        _multipliers(head, farkas, full),
        Facts((("the dual is", _DUAL[certificate.dual_infeasible]),)),
    )


def _reach(farkas: Farkas) -> str:
    if np.isinf(farkas.reach):
        return "Every multiplier names a side or bound that exists, so no plan at all is left."
    return (
        f"Rounding in the multipliers (relative {residual(farkas.misplaced)}) leaves open only "
        f"plans whose values add up to {number(farkas.reach)} and more."
    )


@dataclass(frozen=True, eq=False)
class Contradiction:
    """The lines of a contradiction, numbered as in `lpview.kkt`; other arrays ``(m + n,)``."""

    lines: Index
    """Those with a multiplier, the largest multiplier first."""
    multiplier: Vector
    """What each is multiplied by; rounding is 0."""
    named: Vector
    """The side or bound that its multiplier names."""
    fixed: Mask
    """Equality rows and fixed columns."""


def contradiction(lp: LinearProgram, farkas: Farkas) -> Contradiction:
    """Which lines contradict each other."""
    multiplier = np.concatenate([farkas.y, farkas.z])
    rounding = np.abs(multiplier) <= NOISE * np.abs(multiplier).max(initial=0.0)
    multiplier = np.where(rounding, 0.0, multiplier)
    low = np.concatenate([lp.row_lower, lp.lower])
    high = np.concatenate([lp.row_upper, lp.upper])
    named = np.where(multiplier > 0, low, high)
    used = np.flatnonzero((multiplier != 0) & np.isfinite(named))
    order = used[np.argsort(-np.abs(multiplier[used]), kind="stable")]
    return Contradiction(order, multiplier, named, low == high)


def _multipliers(head: Head, farkas: Farkas, full: bool) -> Table:
    """Lines of the contradiction, the largest multiplier first."""
    lp = head.model
    found = contradiction(lp, farkas)
    shown = (found.lines if full else found.lines[:MOST_LINES]).tolist()
    rows = []
    for line in shown:
        relation = "=" if found.fixed[line] else ">=" if found.multiplier[line] > 0 else "<="
        rows.append(
            (
                line_name(lp, line),
                number(found.multiplier[line]),
                f"{relation} {amount(found.named[line], units_of(head, line).own)}",
                "side" if line < lp.m else "bound",
            )
        )
    title = f"lines that contradict each other: {len(shown)} of {found.lines.size}"
    header = ("line", "multiplier", "limit", "kind")
    return labelled(head, Table(title, header, tuple(rows), (False, True, True, False)), shown)


def _unbounded(head: Head, ray: Ray, full: bool) -> tuple[Block, ...]:
    rate = amount(ray.rate, objective_unit(head))
    return (
        Sentence(
            f"From a feasible plan (scaled violation {residual(ray.violation)}), each step along "
            f"the ray changes the objective by {rate} and keeps every line within "
            f"its sides and bounds (relative drift {residual(ray.drift)})."
        ),
        _moving(head, ray, full),
    )


def moving(ray: Ray) -> list[int]:
    """Columns that move along a ray, from 0, the fastest first."""
    columns = np.flatnonzero(ray.direction)
    order = np.argsort(-np.abs(ray.direction[columns]), kind="stable")
    fastest: list[int] = columns[order].tolist()
    return fastest


def _moving(head: Head, ray: Ray, full: bool) -> Table:
    lp, columns = head.model, moving(ray)
    shown = columns if full else columns[:MOST_LINES]
    verb = "moves" if len(columns) == 1 else "move"
    title = f"{count(len(columns), 'column')} {verb} along the ray: {len(shown)} shown"
    cells = tuple(
        (fitted(lp.columns[j]), number(ray.x[j]), number(ray.direction[j]), number(lp.c[j]))
        for j in shown
    )
    header = ("column", "value", "step", "cost")
    table = Table(title, header, cells, (False, True, True, True))
    return labelled(head, table, [lp.m + j for j in shown], units=True)
