"""What is known about a plan from elsewhere besides its verdict, in words."""

from __future__ import annotations

import numpy as np

from lpview.given import Written
from lpview.kkt import Condition
from lpview.outcomes import NoOptimum, NotEstablished, Optimal
from lpview.planned import (
    Against,
    CheckedPlan,
    Multipliers,
    failing_lines,
    worst_limit,
)
from lpview.planned.measuring import distances, prices
from lpview.repair.search import Infeasible
from lpview.report.document import Pairs
from lpview.report.names import fitted, line_name
from lpview.report.numbers import count, in_full, number, residual
from lpview.report.plan_verdict import away, not_shown
from lpview.report.units import amount, in_units, objective_unit, units_of

MOST_NAMED = 5
"""Lines that are named of each condition on prices that fails."""

LINES_OF = {
    Condition.DUAL: "wrong sign",
    Condition.STATIONARITY: "stationarity",
    Condition.COMPLEMENTARITY: "product not zero",
}
"""Conditions on the prices of lines, and what is said of a line that fails one."""


def facts(checked: CheckedPlan) -> Pairs:
    """Everything that is known about a plan besides its conditions."""
    return (
        ("plan", _columns(checked)),
        ("rounding", _rounding(checked)),
        *_limits(checked),
        *_prices(checked),
        ("objective", _objective(checked)),
        ("optimum", _optimum(checked)),
        *_multipliers(checked),
    )


def _prices(checked: CheckedPlan) -> Pairs:
    """That there are no prices, or the lines that fail the conditions on them."""
    if checked.found.plan.y is None:
        none = "the plan file has none, so only primal feasibility is judged"
        return (("dual values", none),)
    return tuple(
        (fails, text)
        for condition, fails in LINES_OF.items()
        if (text := _failing(checked, condition))
    )


def _failing(checked: CheckedPlan, condition: Condition) -> str:
    lines = failing_lines(checked.found, checked.judgement, condition)
    if not lines:
        return ""
    lp, named = checked.found.model, lines[:MOST_NAMED]
    worst = [
        f"{line_name(lp, one.line)} ({how_it_fails(checked, condition, one.line)})" for one in named
    ]
    if len(lines) > len(named):
        worst.append(f"and {len(lines) - len(named)} more")
    beyond = sum(not one.within for one in lines)
    order = ", worst first" if len(lines) > 1 else ""
    return f"{count(len(lines), 'line')}, {beyond} beyond the rounding{order}: {', '.join(worst)}"


def how_it_fails(checked: CheckedPlan, condition: Condition, line: int) -> str:
    """The numbers by which a line fails a condition on its price."""
    found = checked.found
    m = found.model.m
    price = number(float(prices(found.written)[line]))
    kind = "dual value" if line < m else "reduced cost"
    if condition is Condition.STATIONARITY:
        given = found.plan.z.values[line - m] if found.plan.z else 0.0
        return f"{number(float(given))} in the file, {price} by its dual values"
    if condition is Condition.DUAL:
        return f"{kind} {price}"
    distance = float(distances(found.written)[line])
    where = "beyond" if distance < 0 else "from"
    return f"{kind} {price}, {number(abs(distance))} {where} its side"


def _columns(checked: CheckedPlan) -> str:
    plan = checked.found.plan
    parts = [_listing(plan.x, "column")]
    if plan.y is not None:
        parts.append("dual values of " + _listing(plan.y, "row"))
    if plan.z is not None:
        parts.append("reduced costs of " + _listing(plan.z, "column"))
    if plan.unknown:
        names = count(len(plan.unknown), "name")
        more = ", the first " if len(plan.unknown) > 1 else " "
        parts.append(f"{names} ignored that the model lacks:{more}{fitted(plan.unknown[0])}")
    return "; ".join(parts)


def _listing(part: Written, noun: str) -> str:
    there = count(int(np.count_nonzero(part.listed)), noun)
    return f"{there} listed" + (f", {part.unlisted} not (taken as 0)" if part.unlisted else "")


def _rounding(checked: CheckedPlan) -> str:
    plan, m = checked.found.plan, checked.found.model.m
    coarse = []
    for part, noun, first in (
        (plan.x, "", m),
        (plan.y, "dual values ", 0),
        (plan.z, "reduced costs ", m),
    ):
        if part is None or not part.half.any():
            continue
        k = int(np.argmax(part.half))
        name = line_name(checked.found.model, first + k)
        coarse.append(f"{noun}{number(float(part.half[k]))} ({name})")
    if not coarse:
        return "none: every number is taken as exact"
    return (
        f"values are known to half their last digit, at worst {', '.join(coarse)}; each line is "
        "judged alone, so that no one plan need satisfy all"
    )


def _limits(checked: CheckedPlan) -> Pairs:
    limits = checked.judgement.limits
    worst = worst_limit(checked.found, limits)
    if worst is None:
        return ()
    row, violation, limit = worst
    own = count(int(np.count_nonzero(limits.given)), "row")
    have = f"{own} with a limit of {'its' if own == '1 row' else 'their'} own"
    if violation == 0:
        return (("limits", f"{have}; none is violated"),)
    unit = units_of(checked.outcome.head, row).own
    name = line_name(checked.found.model, row)
    told = f"violated by {amount(violation, unit)}; {amount(limit, unit)} is allowed"
    return (("limits", f"{have}, worst {name}, {told}"),)


def _objective(checked: CheckedPlan) -> str:
    span = checked.found.objective
    unit = objective_unit(checked.outcome.head)
    text = in_units(in_full(span.value), unit)
    if span.least < span.greatest:
        text += f"; within the rounding from {number(span.least)} to "
        text += in_units(number(span.greatest), unit)
    found = checked.found.written
    if checked.found.plan.y is None:
        return text
    dual = in_units(in_full(found.dual_objective), unit)
    return f"{text}; dual {dual}, gap {in_units(residual(found.gap), unit)}"


def _optimum(checked: CheckedPlan) -> str:
    outcome, against = checked.outcome, checked.against
    if against is not None:
        optimum = in_units(in_full(against.optimum), objective_unit(outcome.head))
        return f"{optimum}, solved and checked; {_distance(checked, against)}"
    if isinstance(outcome, Optimal):
        return "not known: the solver's answer fails the check"
    if isinstance(outcome, NotEstablished):
        return f"not known, the solver's claim could not be confirmed: {outcome.reason}"
    if not isinstance(outcome, NoOptimum):
        return f"not known: stopped before there was a result ({outcome.head.run.claim.value})"
    if not isinstance(outcome.certificate, Infeasible):
        return "none: the model is unbounded, certified; the objective improves without limit"
    text = "none: the model is infeasible, certified"
    if not checked.judgement.feasible:
        return text
    return f"{text}; this plan contradicts that only within the violations that are allowed"


def _distance(checked: CheckedPlan, against: Against) -> str:
    if against.multipliers is Multipliers.THOSE_FOUND:
        to = f" to within {residual(abs(against.distance))}" if against.distance else ""
        return f"the plan attains it{to}"
    text = f"the plan is {away(checked, against)}" if against.distance else "the plan attains it"
    if checked.judgement.feasible:
        return text
    return f"{text}, which means nothing for a plan that is not feasible"


_MULTIPLIERS = {
    Multipliers.THOSE_FOUND: "the dual values of the optimum make this plan optimal",
    Multipliers.NONE: "no dual values make this plan optimal",
    Multipliers.ON_THE_EDGE: "not settled at this tolerance: beside the prices of the optimum the "
    "gap is within it, a product is not",
    Multipliers.NOT_FEASIBLE: Multipliers.NOT_FEASIBLE.value,
}


def _multipliers(checked: CheckedPlan) -> Pairs:
    """Whether any dual values make the plan optimal, as written and within its rounding."""
    against = checked.against
    if against is None or not_shown(checked):
        return ()
    text = _MULTIPLIERS[against.multipliers]
    if against.multipliers is not Multipliers.THOSE_FOUND:
        text += (
            "; within its rounding some plan may be optimal, line by line"
            if against.could_be
            else "; no plan within its rounding is optimal"
        )
    return (("multipliers", text),)
