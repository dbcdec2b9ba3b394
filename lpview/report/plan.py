"""The report on a plan from elsewhere."""

from __future__ import annotations

import numpy as np

from lpview.model import LinearProgram, Vector
from lpview.planned import CheckedPlan, PlanVerdict, Standing, violated
from lpview.report.check import CAUTION, provenance, shape
from lpview.report.document import Block, Command, Document, Facts, Sentence, Table
from lpview.report.heads import noticed, title
from lpview.report.names import fitted, line_name, safe
from lpview.report.numbers import number, residual
from lpview.report.plan_words import facts, verdict
from lpview.report.units import label_of, labelled, price_header, with_column

MOST_VIOLATED = 10
"""Violated lines shown unless the full report is asked for."""
MOST_LEFT = 7
"""Lines shown that leave something on the table, unless the full report is asked for."""

_PASSED = {True: "passed", False: "FAILED"}


def report(checked: CheckedPlan, full: bool = False) -> Document:
    """The report on a plan; at most 40 lines of text unless ``full``."""
    head = checked.outcome.head
    plan = checked.found.plan
    words = f"{title(head)} with {safe(plan.file)}: {verdict(checked)}"
    return (
        Sentence(words, strong=True),
        Sentence("; ".join([shape(head.model), *noticed(head)])),
        _conditions(checked),
        Facts(facts(checked)),
        *_violated(checked, full),
        *_left(checked, full),
        Facts((("plan SHA-256", plan.sha256), *provenance(head))),
        Command("reproduce", head.request.command),
        Sentence(CAUTION),
    )


def _conditions(checked: CheckedPlan) -> Table:
    verdicts = checked.judgement.verdicts
    header = (
        *("condition", "as written", "within rounding", "worst line"),
        *("scaled", "absolute", "tolerance"),
    )
    rows = tuple(_condition(checked, verdict) for verdict in verdicts)
    table = Table("", header, rows, (False, False, False, False, True, True, True))
    worst = [-1 if v.worst is None or v.worst.line is None else v.worst.line for v in verdicts]
    labels = [fitted(label_of(checked.outcome.head, k).label) if k >= 0 else "" for k in worst]
    return with_column(table, 4, "label", labels) if any(labels) else table


def _condition(checked: CheckedPlan, verdict: PlanVerdict) -> tuple[str, ...]:
    name, worst = verdict.condition.value, verdict.worst
    tolerance = residual(checked.judgement.tolerance)
    if verdict.written is None or verdict.within is None:
        standing = verdict.standing.value
        also = standing if verdict.standing is Standing.BY_DEFINITION else "not judged"
        return (name, standing, also, "none", "not computed", "not computed", tolerance)
    passed = (_PASSED[verdict.written.passed], _PASSED[verdict.within.passed])
    if worst is None:
        return (name, *passed, "none", "0", "0", tolerance)
    line = "none" if worst.line is None else line_name(checked.found.model, worst.line)
    if worst.limit is not None:
        tolerance = f"{number(worst.limit)} absolute"
    return (name, *passed, line, residual(worst.scaled), residual(worst.absolute), tolerance)


def _violated(checked: CheckedPlan, full: bool) -> tuple[Block, ...]:
    lines = violated(checked.found, checked.judgement)
    shown = lines if full else lines[:MOST_VIOLATED]
    if not lines:
        return ()
    lp, values = checked.found.model, _values(checked)
    rows = tuple(
        (
            line_name(lp, one.line),
            number(float(values[one.line])),
            side_text(checked, one.line),
            number(one.violation),
            number(one.allowed),
            "yes" if one.within else "no",
        )
        for one in shown
    )
    table = Table(
        f"violated lines, the worst first: {len(shown)} of {len(lines)}",
        ("line", "value", "side", "violation", "allowed", "within rounding"),
        rows,
        (False, True, True, True, True, False),
    )
    return (labelled(checked.outcome.head, table, [one.line for one in shown], units=True),)


def side_text(checked: CheckedPlan, line: int) -> str:
    """The side of a violated line that is violated, as ``<= 10``."""
    lp, found = checked.found.model, checked.found.written
    below = np.concatenate([found.rows.below, found.columns.below])[line]
    above = np.concatenate([found.rows.above, found.columns.above])[line]
    low, high = _ends(lp, line)
    if low == high:
        return f"= {number(low)}"
    return f">= {number(low)}" if below < above else f"<= {number(high)}"


def _ends(lp: LinearProgram, line: int) -> tuple[float, float]:
    if line < lp.m:
        return float(lp.row_lower[line]), float(lp.row_upper[line])
    return float(lp.lower[line - lp.m]), float(lp.upper[line - lp.m])


def _values(checked: CheckedPlan) -> Vector:
    found = checked.found.written
    return np.concatenate([found.rows.value, found.columns.value])


def _left(checked: CheckedPlan, full: bool) -> tuple[Block, ...]:
    """What lines leave on the table, where the plan is feasible and not optimal."""
    against, head = checked.against, checked.outcome.head
    if against is None or not checked.judgement.feasible or not against.left:
        return ()
    shown = against.left if full else against.left[:MOST_LEFT]
    rows = tuple(
        (
            line_name(head.model, one.line),
            number(one.price),
            number(one.distance),
            number(one.product),
        )
        for one in shown
    )
    table = Table(
        "what lines leave on the table by the prices of the optimum: "
        f"{len(shown)} of {len(against.left)}, together {number(against.gap)}"
        f"{price_header(head)}",
        ("line", "price", "distance to its side", "price x distance"),
        rows,
        (False, True, True, True),
    )
    return (labelled(head, table, [one.line for one in shown], units=True),)
