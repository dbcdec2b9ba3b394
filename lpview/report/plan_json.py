"""The check of a plan from elsewhere as JSON, format 1; README.md documents every field.

The answer that is checked is the plan, and so the fields about an answer are about it;
``status`` and ``certificate`` are about the model, as ever.
"""

from __future__ import annotations

from typing import Any

import numpy as np

from lpview.kkt import Side
from lpview.marks import Flag, mark
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.planned import CheckedPlan, PlanVerdict, violated, worst_limit
from lpview.planned.judging import Found
from lpview.report import json
from lpview.report.json import plain
from lpview.report.names import line_kind_and_name

OF_PLANS = (Flag.ZERO_SLACK, Flag.VIOLATED)
"""Flags that need no prices."""


def render(checked: CheckedPlan) -> str:
    """One object."""
    return json.render(checked.outcome, [fields(checked)])


def fields(checked: CheckedPlan) -> dict[str, Any]:
    """The fields that are about the plan."""
    flags = _flags(checked)
    m = checked.found.model.m
    return {
        "passed": checked.passed,
        "objective": _objective(checked),
        "residuals": [_residual(checked, verdict) for verdict in checked.judgement.verdicts],
        "constraints": _constraints(checked, flags[:m]),
        "variables": _variables(checked, flags[m:]),
        "answer": None,
        "plan": _plan(checked),
    }


def _objective(checked: CheckedPlan) -> dict[str, Any]:
    found, priced = checked.found.written, checked.found.plan.y is not None
    return {
        "primal": plain(found.primal_objective),
        "dual": plain(found.dual_objective) if priced else None,
        "gap": plain(found.gap) if priced else None,
        "at_stake": plain(found.at_stake) if priced else None,
    }


def _residual(checked: CheckedPlan, verdict: PlanVerdict) -> dict[str, Any]:
    worst = verdict.worst
    return {
        "condition": verdict.condition.value,
        **_sizes(verdict.written),
        "tolerance": checked.judgement.tolerance,
        "passed": verdict.written.passed if verdict.written else None,
        "worst": None if worst is None or worst.line is None else _line(checked, worst.line),
        "standing": verdict.standing.value,
        "limit": worst.limit if worst else None,
        "within_rounding": {
            **_sizes(verdict.within),
            "passed": verdict.within.passed if verdict.within else None,
        },
    }


def _sizes(found: Found | None) -> dict[str, Any]:
    return {
        "absolute": plain(found.absolute) if found else None,
        "scaled": plain(found.scaled) if found else None,
        "relative": plain(found.relative) if found else None,
    }


def _line(checked: CheckedPlan, line: int) -> dict[str, str]:
    kind, name = line_kind_and_name(checked.found.model, line)
    return {kind: name}


def _constraints(checked: CheckedPlan, flags: list[list[str]]) -> list[dict[str, Any]]:
    lp, side = checked.found.model, checked.found.written.rows
    y, limits = checked.found.plan.y, checked.judgement.limits.amount[: lp.m]
    return _records(
        {
            "row": lp.rows,
            "value": _numbers(side.value),
            "lower": _numbers(lp.row_lower),
            "upper": _numbers(lp.row_upper),
            "slack": _numbers(side.slack),
            "slack_lower": _numbers(side.below),
            "slack_upper": _numbers(side.above),
            "dual_value": _or_none(None if y is None else y.values, lp.m),
            "complementarity": _products(checked, side),
            "flags": flags,
            "limit": [None if np.isnan(limit) else limit for limit in limits.tolist()],
        }
    )


def _variables(checked: CheckedPlan, flags: list[list[str]]) -> list[dict[str, Any]]:
    lp, side = checked.found.model, checked.found.written.columns
    plan = checked.found.plan
    price = plan.z.values if plan.z is not None else None if plan.y is None else side.price
    return _records(
        {
            "column": lp.columns,
            "value": _numbers(plan.x.values),
            "lower": _numbers(lp.lower),
            "upper": _numbers(lp.upper),
            "cost": _numbers(lp.c),
            "reduced_cost": _or_none(price, lp.n),
            "complementarity": _products(checked, side),
            "flags": flags,
            "listed": plan.x.listed.tolist(),
            "half_unit": _numbers(plan.x.half),
        }
    )


def _products(checked: CheckedPlan, side: Side) -> list[Any]:
    priced = checked.found.plan.y is not None
    return _or_none(side.complementarity if priced else None, side.value.size)


def _records(columns: dict[str, Any]) -> list[dict[str, Any]]:
    names = tuple(columns)
    return [dict(zip(names, line, strict=True)) for line in zip(*columns.values(), strict=True)]


def _numbers(values: Vector) -> list[Any]:
    return [plain(value) for value in values.tolist()]


def _or_none(values: Vector | None, size: int) -> list[Any]:
    return [None] * size if values is None else _numbers(values)


def _flags(checked: CheckedPlan) -> list[list[str]]:
    """Flags of every line; without prices only those that need none."""
    found, lp = checked.found, checked.found.model
    request = checked.outcome.head.request
    marks = mark(lp, found.written, None, request.tolerance, request.zero)
    words: list[list[str]] = [[] for _ in range(lp.m + lp.n)]
    beyond = np.zeros(lp.m + lp.n, bool)
    beyond[[one.line for one in violated(found, checked.judgement)]] = True
    for flag, mask in marks.flags.items():
        if found.plan.y is None and flag not in OF_PLANS:
            continue
        for line in np.flatnonzero(beyond if flag is Flag.VIOLATED else mask).tolist():
            words[line].append(flag.value)
    return words


def _plan(checked: CheckedPlan) -> dict[str, Any]:
    plan, judgement = checked.found.plan, checked.judgement
    span = checked.found.objective
    return {
        "file": plan.file,
        "sha256": plan.sha256,
        "rounded": checked.rounded,
        "feasible": judgement.feasible,
        "feasible_within_rounding": judgement.feasible_within,
        "columns_listed": int(np.count_nonzero(plan.x.listed)),
        "columns_not_listed": plan.x.unlisted,
        "unknown": list(plan.unknown),
        "coarsest": _coarsest(checked),
        "objective_least": plain(span.least),
        "objective_greatest": plain(span.greatest),
        "violated": [
            {
                **_line(checked, one.line),
                "violation": plain(one.violation),
                "allowed": one.allowed,
                "within_rounding": one.within,
            }
            for one in violated(checked.found, judgement)
        ],
        "limits": _limits(checked),
        "optimum": _optimum(checked),
    }


def _coarsest(checked: CheckedPlan) -> dict[str, Any] | None:
    half = checked.found.plan.x.half
    if not half.any():
        return None
    k = int(np.argmax(half))
    return {"column": checked.found.model.columns[k], "half_unit": plain(float(half[k]))}


def _limits(checked: CheckedPlan) -> dict[str, Any] | None:
    worst = worst_limit(checked.found, checked.judgement.limits)
    if worst is None:
        return None
    row, violation, limit = worst
    return {
        "rows": int(np.count_nonzero(checked.judgement.limits.given)),
        "worst": checked.found.model.rows[row],
        "violation": plain(violation),
        "limit": limit,
    }


def _optimum(checked: CheckedPlan) -> dict[str, Any] | None:
    """The plan beside the optimum; null where no checked optimum is known."""
    against = checked.against
    if against is None or not isinstance(checked.outcome, Optimal):
        return None
    return {
        "objective": plain(against.optimum),
        "distance": plain(against.distance),
        "relative": None if against.relative is None else plain(against.relative),
        "dual_values": against.multipliers.value,
        "possible_within_rounding": against.could_be,
        "left_on_the_table": [
            {
                **_line(checked, one.line),
                "price": plain(one.price),
                "distance": plain(one.distance),
                "product": plain(one.product),
            }
            for one in against.left
        ],
    }
