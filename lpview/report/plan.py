"""The report on a plan from elsewhere."""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np

from lpview.kkt import Condition
from lpview.model import LinearProgram, Vector
from lpview.outcomes import Head
from lpview.planned import (
    CheckedPlan,
    Failing,
    LineCost,
    Multipliers,
    PlanVerdict,
    Standing,
    failing_lines,
    violated,
)
from lpview.report.check import CAUTION, provenance, shape
from lpview.report.document import Block, Command, Document, Facts, Sentence, Table
from lpview.report.heads import about_reading, title
from lpview.report.names import line_name, safe
from lpview.report.numbers import count, number, residual
from lpview.report.plan_verdict import not_shown, verdict
from lpview.report.plan_words import LINES_OF, facts, how_it_fails
from lpview.report.units import amount, labelled, objective_unit, price_header

MOST_VIOLATED = 10
"""Violated lines shown unless the full report is asked for."""
MOST_COSTING = 7
"""Lines shown that cost or gain something, unless the full report is asked for."""
MOST_OF_EACH = 3
"""The same where both kinds are shown."""
DIGITS = 12
"""Significant digits of the value and side of a violated line."""

_PASSED = {True: "passed", False: "FAILED"}
_WORST_FIRST = "worst first, by {} over what is allowed"


def report(checked: CheckedPlan, full: bool = False) -> Document:
    """The report on a plan; at most 40 lines of text unless ``full``."""
    head = checked.outcome.head
    plan = checked.found.plan
    words = f"{title(head)} with {safe(plan.file)}: {verdict(checked)}"
    beside = not_shown(checked)
    return (
        Sentence(words, strong=True),
        Sentence("; ".join([shape(head.model), *about_reading(head)])),
        *((Sentence(beside),) if beside else ()),
        _conditions(checked),
        Facts(facts(checked)),
        *_violated(checked, full),
        *(_failing(checked) if full else ()),
        *_against(checked, full),
        Facts((("plan SHA-256", plan.sha256), *provenance(head))),
        Command("reproduce", head.request.command),
        Sentence(CAUTION),
    )


def _conditions(checked: CheckedPlan) -> Table:
    """The conditions; without dual values only the one that does not need any."""
    header = (
        *("condition", "as written", "within rounding", "worst line"),
        *("scaled", "absolute", "tolerance"),
    )
    rows = tuple(
        _condition(checked, verdict)
        for verdict in checked.judgement.verdicts
        if verdict.standing is not Standing.NO_PRICES
    )
    return Table("", header, rows, (False, False, False, False, True, True, True))


def _condition(checked: CheckedPlan, verdict: PlanVerdict) -> tuple[str, ...]:
    name, worst = verdict.condition.value, verdict.worst
    tolerance = residual(checked.judgement.tolerance)
    if verdict.written is None or verdict.within is None:
        holds = "by definition"
        return (name, holds, holds, "none", "not computed", "not computed", tolerance)
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
    values = _values(checked)
    rows = tuple(
        (
            line_name(checked.found.model, one.line),
            *_value_and_side(checked, one.line, float(values[one.line])),
            *_sizes(one),
        )
        for one in shown
    )
    order = _WORST_FIRST.format("violation")
    table = Table(
        f"violated lines, {order}: {len(shown)} of {len(lines)}",
        ("line", "value", "side", "violation", "allowed", "within rounding"),
        rows,
        (False, True, True, True, True, False),
    )
    return (labelled(checked.outcome.head, table, [one.line for one in shown], units=True),)


def _sizes(one: Failing) -> tuple[str, str, str]:
    return number(one.size), number(one.allowed), "yes" if one.within else "no"


def _value_and_side(checked: CheckedPlan, line: int, value: float) -> tuple[str, str]:
    """Both to so many digits that they are not the same where the numbers are not."""
    relation, end = side_of(checked, line)
    digits = DIGITS
    while number(value, digits) == number(end, digits) and value != end:
        digits += 1
    return number(value, digits), f"{relation} {number(end, digits)}"


def side_of(checked: CheckedPlan, line: int) -> tuple[str, float]:
    """The side of a violated line that is violated, as ``("<=", 10.0)``."""
    lp, found = checked.found.model, checked.found.written
    below = np.concatenate([found.rows.below, found.columns.below])[line]
    above = np.concatenate([found.rows.above, found.columns.above])[line]
    low, high = _ends(lp, line)
    if low == high:
        return "=", low
    return (">=", low) if below < above else ("<=", high)


def _ends(lp: LinearProgram, line: int) -> tuple[float, float]:
    if line < lp.m:
        return float(lp.row_lower[line]), float(lp.row_upper[line])
    return float(lp.lower[line - lp.m]), float(lp.upper[line - lp.m])


def _values(checked: CheckedPlan) -> Vector:
    found = checked.found.written
    return np.concatenate([found.rows.value, found.columns.value])


def _failing(checked: CheckedPlan) -> tuple[Block, ...]:
    """All lines that fail a condition on prices, a table for each condition."""
    return tuple(
        _failing_table(checked, condition, lines)
        for condition in LINES_OF
        if (lines := failing_lines(checked.found, checked.judgement, condition))
    )


def _failing_table(checked: CheckedPlan, condition: Condition, lines: Sequence[Failing]) -> Table:
    rows = tuple(
        (
            line_name(checked.found.model, one.line),
            how_it_fails(checked, condition, one.line),
            *_sizes(one),
        )
        for one in lines
    )
    order = _WORST_FIRST.format("residual")
    table = Table(
        f"lines that fail {condition.value}, {order}: {len(lines)} of {len(lines)}",
        ("line", LINES_OF[condition], "residual", "allowed", "within rounding"),
        rows,
        (False, False, True, True, False),
    )
    return labelled(checked.outcome.head, table, [one.line for one in lines])


def _against(checked: CheckedPlan, full: bool) -> tuple[Block, ...]:
    """What lines cost and what violations gain, where the plan is feasible and not optimal."""
    against, head = checked.against, checked.outcome.head
    if against is None or not checked.judgement.feasible:
        return ()
    if against.multipliers is Multipliers.THOSE_FOUND:
        return ()
    most = MOST_OF_EACH if against.costing and against.gaining else MOST_COSTING
    return tuple(
        _cost_table(head, what, lines, len(lines) if full else most)
        for what, lines in (
            ("what each line costs against the optimum", against.costing),
            ("what the allowed violations gain", against.gaining),
        )
        if lines
    )


def _cost_table(head: Head, what: str, lines: Sequence[LineCost], most: int) -> Table:
    shown = lines[:most]
    gain = lines[0].product < 0
    distance = "violation" if gain else "distance to its side"
    rows = tuple(
        (
            line_name(head.model, one.line),
            number(one.price),
            number(abs(one.distance)),
            number(abs(one.product)),
        )
        for one in shown
    )
    together = amount(abs(math.fsum(one.product for one in lines)), objective_unit(head))
    of = count(len(lines), "line")
    table = Table(
        f"{what}: {len(shown)} of {of}, together {together} by the prices of the optimum"
        f"{price_header(head)}",
        ("line", "price", distance, "|price| x " + ("violation" if gain else "distance")),
        rows,
        (False, True, True, True),
    )
    return labelled(head, table, [one.line for one in shown], units=True)
