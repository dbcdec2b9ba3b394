"""The check of a plan from elsewhere as JSON, format 1; README.md documents every field.

The answer that is checked is the plan, and so the fields about an answer are about it;
``status`` and ``certificate`` are about the model, as ever, ``answer`` is null. What needs
dual values is null where the plan has none. A *line* is ``{"row": name}`` or ``{"column":
name}``. Fields that are here only:

``passed``
    Whether every condition that can be judged passed as written, whatever was asked for.
``accepted``
    The same, or with ``--rounded`` within the rounding: true for exit status 0.
``residuals``, each
    ``standing``: "judged", "no prices given", or "holds by definition" (no reduced costs
    given); ``passed`` is null unless "judged". ``worst``: the line worst over what is allowed.
    ``limit``: the limit of that row, if it has one, which then counts in place of
    ``tolerance``. ``within_rounding``: ``absolute``, ``scaled``, ``relative`` and ``passed``
    once more, for the least residuals within the rounding. ``failing``: all lines that fail
    it as written, the worst over what is allowed first: a line with ``residual``,
    ``allowed`` (both in the line's unit) and ``within_rounding`` (whether it passes there);
    empty for the duality gap, which is of no line.
``constraints``, each
    ``limit``: the row's own limit, or null.
``variables``, each
    ``listed``: whether the plan has a value for it, else it is 0; ``half_unit``: half a unit
    of the last digit written, 0 for fractions and for columns not listed.
``plan``
    ``file``, ``sha256``; ``rounded``: whether ``--rounded`` was given; ``feasible`` and
    ``feasible_within_rounding``; ``optimal``: whether dual values, its own or those of the
    optimum, make it optimal as written: true, false (also where it is not feasible), or null
    where that is not known; ``columns_listed``, ``columns_not_listed``; ``unknown``: names
    that the model lacks; ``coarsest``: ``column`` and ``half_unit`` of the coarsest value,
    null where all are exact; ``objective_least`` and ``objective_greatest`` within the
    rounding; ``violated``: lines outside their sides or bounds as written, the worst over
    what is allowed first, with ``violation``, ``allowed`` and ``within_rounding``;
    ``limits``: null without any, else ``rows`` (how many have one), and of the row that is
    ``worst`` over its limit the ``violation`` and the ``limit``; ``optimum``.
``plan.optimum``, null where no checked optimum is known
    ``objective``: the optimal one; ``distance``: how much worse the plan's objective is in
    the direction of the sense, negative where it is better; ``relative``: that over the size
    of the optimal objective, null where that is 0; ``dual_values``: in words, whether dual
    values make the plan optimal; ``possible_within_rounding``: false where no plan within
    the rounding is optimal; ``lines``: what each line costs against the optimum, without
    those that cost nothing by ``--zero``, the largest first: a line with ``price`` (of the
    optimum), ``distance`` (to the side that the price names, negative beyond it) and
    ``product`` (size of the price times distance, negative where a violation gains);
    ``lines_together``: the sum of these products.
"""

from __future__ import annotations

import math
from typing import Any

import numpy as np

from lpview.kkt import Side
from lpview.marks import Flag, mark
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.planned import CheckedPlan, PlanVerdict, failing_lines, violated, worst_limit
from lpview.planned.judging import Found
from lpview.report import json
from lpview.report.json import label, numbers, plain, records
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
        "accepted": checked.accepted,
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
        **label(checked.outcome.head.labels.objective),
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
        "failing": [
            {
                **_line(checked, one.line),
                "residual": plain(one.size),
                "allowed": plain(one.allowed),
                "within_rounding": one.within,
            }
            for one in failing_lines(checked.found, checked.judgement, verdict.condition)
        ],
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
    return records(
        {
            "row": lp.rows,
            "value": numbers(side.value),
            "lower": numbers(lp.row_lower),
            "upper": numbers(lp.row_upper),
            "slack": numbers(side.slack),
            "slack_lower": numbers(side.below),
            "slack_upper": numbers(side.above),
            "dual_value": _or_none(None if y is None else y.values, lp.m),
            "complementarity": _products(checked, side),
            "flags": flags,
            "limit": [None if np.isnan(limit) else limit for limit in limits.tolist()],
        },
        checked.outcome.head.labels.rows,
    )


def _variables(checked: CheckedPlan, flags: list[list[str]]) -> list[dict[str, Any]]:
    lp, side = checked.found.model, checked.found.written.columns
    plan = checked.found.plan
    price = plan.z.values if plan.z is not None else None if plan.y is None else side.price
    return records(
        {
            "column": lp.columns,
            "value": numbers(plan.x.values),
            "lower": numbers(lp.lower),
            "upper": numbers(lp.upper),
            "cost": numbers(lp.c),
            "reduced_cost": _or_none(price, lp.n),
            "complementarity": _products(checked, side),
            "flags": flags,
            "listed": plan.x.listed.tolist(),
            "half_unit": numbers(plan.x.half),
        },
        checked.outcome.head.labels.columns,
    )


def _products(checked: CheckedPlan, side: Side) -> list[Any]:
    priced = checked.found.plan.y is not None
    return _or_none(side.complementarity if priced else None, side.value.size)


def _or_none(values: Vector | None, size: int) -> list[Any]:
    return [None] * size if values is None else numbers(values)


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
        "optimal": checked.optimal,
        "columns_listed": int(np.count_nonzero(plan.x.listed)),
        "columns_not_listed": plan.x.unlisted,
        "unknown": list(plan.unknown),
        "coarsest": _coarsest(checked),
        "objective_least": plain(span.least),
        "objective_greatest": plain(span.greatest),
        "violated": [
            {
                **_line(checked, one.line),
                "violation": plain(one.size),
                "allowed": plain(one.allowed),
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
        "lines": [
            {
                **_line(checked, one.line),
                "price": plain(one.price),
                "distance": plain(one.distance),
                "product": plain(one.product),
            }
            for one in against.lines
        ],
        "lines_together": plain(math.fsum(one.product for one in against.lines)),
    }
