"""The body of a report on a model without an optimum: its certificate."""

from __future__ import annotations

import numpy as np

from lpview.model import LinearProgram, Vector
from lpview.outcomes import NoOptimum
from lpview.repair.certificate import NOISE, Farkas, Ray
from lpview.repair.search import Infeasible
from lpview.report.document import Block, Facts, Sentence, Table
from lpview.report.names import fitted
from lpview.report.numbers import count, number, residual

MOST_LINES = 20
"""Lines of a certificate shown unless the full report is asked for."""

_DUAL = {
    True: "infeasible too",
    False: "feasible",
    None: "not established",
}


def body(found: NoOptimum, full: bool) -> tuple[Block, ...]:
    """The certificate and what it means."""
    lp, certificate = found.head.model, found.certificate
    if isinstance(certificate, Infeasible):
        return _infeasible(lp, certificate, full)
    return _unbounded(lp, certificate.ray, full)


def _infeasible(lp: LinearProgram, certificate: Infeasible, full: bool) -> tuple[Block, ...]:
    farkas = certificate.farkas
    return (
        Sentence(
            "Each multiplier times its side or bound, added up, would have to be at most 0 "
            f"for any plan, and is {number(farkas.contradiction)}."
        ),
        Sentence(_reach(farkas)),
        _multipliers(lp, farkas, full),
        Facts((("the dual is", _DUAL[certificate.dual_infeasible]),)),
    )


def _reach(farkas: Farkas) -> str:
    if np.isinf(farkas.reach):
        return "Every multiplier names a side or bound that exists, so no plan at all is left."
    return (
        f"Rounding in the multipliers (relative {residual(farkas.misplaced)}) leaves open only "
        f"plans whose values add up to {number(farkas.reach)} and more."
    )


def _multipliers(lp: LinearProgram, farkas: Farkas, full: bool) -> Table:
    """Lines of the contradiction, the largest multiplier times end first."""
    multiplier = np.concatenate([farkas.y, farkas.z])
    rounding = np.abs(multiplier) <= NOISE * np.abs(multiplier).max(initial=0.0)
    multiplier = np.where(rounding, 0.0, multiplier)
    low = np.concatenate([lp.row_lower, lp.lower])
    high = np.concatenate([lp.row_upper, lp.upper])
    named = np.where(multiplier > 0, low, high)
    used = np.flatnonzero((multiplier != 0) & np.isfinite(named))
    order = used[np.argsort(-np.abs(multiplier[used]), kind="stable")]
    shown = order if full else order[:MOST_LINES]
    rows = []
    for line in shown.tolist():
        is_row = line < lp.m
        relation = "=" if low[line] == high[line] else ">=" if multiplier[line] > 0 else "<="
        name = lp.rows[line] if is_row else lp.columns[line - lp.m]
        rows.append(
            (
                f"{'row' if is_row else 'column'} {fitted(name)}",
                number(multiplier[line]),
                f"{relation} {number(named[line])}",
                "side" if is_row else "bound",
            )
        )
    title = f"lines that contradict each other: {shown.size} of {used.size}"
    header = ("line", "multiplier", "limit", "kind")
    return Table(title, header, tuple(rows), (False, True, True, False))


def _unbounded(lp: LinearProgram, ray: Ray, full: bool) -> tuple[Block, ...]:
    return (
        Sentence(
            f"From a feasible plan (scaled violation {residual(ray.violation)}), each step along "
            f"the ray changes the objective by {number(ray.rate)} and keeps every line within "
            f"its sides and bounds (relative drift {residual(ray.drift)})."
        ),
        _moving(lp, ray.x, ray.direction, full),
    )


def _moving(lp: LinearProgram, x: Vector, direction: Vector, full: bool) -> Table:
    moving = np.flatnonzero(direction)
    order = moving[np.argsort(-np.abs(direction[moving]), kind="stable")]
    shown = order if full else order[:MOST_LINES]
    verb = "moves" if moving.size == 1 else "move"
    title = f"{count(moving.size, 'column')} {verb} along the ray: {shown.size} shown"
    cells = tuple(
        (fitted(lp.columns[j]), number(x[j]), number(direction[j]), number(lp.c[j]))
        for j in shown.tolist()
    )
    return Table(title, ("column", "value", "step", "cost"), cells, (False, True, True, True))
