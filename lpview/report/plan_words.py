"""The verdict on a plan from elsewhere, and what is known about it, in words."""

from __future__ import annotations

import numpy as np

from lpview.given import Written
from lpview.outcomes import Examination, NoOptimum, NotEstablished, Optimal
from lpview.planned import Against, CheckedPlan, Multipliers, violated, worst_limit
from lpview.repair.search import Infeasible
from lpview.report.document import Pairs
from lpview.report.names import fitted, line_name
from lpview.report.numbers import count, in_full, number, residual
from lpview.report.units import amount, in_units, objective_unit, units_of


def verdict(checked: CheckedPlan) -> str:
    """What the check of a plan comes to, in one sentence."""
    judgement = checked.judgement
    if checked.found.plan.y is not None:
        return _verdict_with_prices(checked)
    if judgement.feasible:
        return f"feasible as written{_beside_optimum(checked)}: {_holds(checked, 'row and bound')}"
    lines = violated(checked.found, judgement)
    beyond = sum(not one.within for one in lines)
    broken = f"{count(len(lines), 'line')} violated"
    if beyond:
        return f"NOT FEASIBLE as written nor within its rounding: {broken}, {beyond} beyond it"
    each = "which" if len(lines) == 1 else "each of which, by itself,"
    accepted = _accepted(checked)
    return f"NOT FEASIBLE as written: {broken}, {each} holds within its rounding{accepted}"


def _accepted(checked: CheckedPlan) -> str:
    """What is said where a plan that fails as written passes all the same."""
    return "; accepted, as --rounded asks" if checked.passed else ""


def _verdict_with_prices(checked: CheckedPlan) -> str:
    judgement = checked.judgement
    failing = [condition.value for condition in judgement.failing(rounded=False)]
    still = [condition.value for condition in judgement.failing(rounded=True)]
    if not failing:
        every = _holds(checked, "condition")
        return f"optimal as written, verified by its own prices: {every}"
    if still == failing:
        return f"NOT VERIFIED as written nor within its rounding: the check fails {listed(failing)}"
    start = f"NOT VERIFIED as written: the check fails {listed(failing)}"
    if not still:
        each = "within its rounding every condition holds, line by line"
        return f"{start}; {each}{_accepted(checked)}"
    return f"{start}; within its rounding still {listed(still)}"


def _holds(checked: CheckedPlan, what: str) -> str:
    own = " or within its own limit" if checked.judgement.limits.given.any() else ""
    return f"every {what} holds at {residual(checked.judgement.tolerance)} scaled{own}"


def _beside_optimum(checked: CheckedPlan) -> str:
    """How the first line goes on about a feasible plan."""
    against = checked.against
    if against is None:
        return "; " + _without_optimum(checked.outcome)
    if against.multipliers is Multipliers.THOSE_FOUND:
        return " and optimal"
    away = amount(abs(against.distance), objective_unit(checked.outcome.head))
    if against.multipliers is Multipliers.ON_THE_EDGE:
        return f", {away} from the optimum, within the tolerance of it but not line by line"
    if against.distance < 0:
        return f", {away} better than the optimum, which only the violations allowed make possible"
    return f", {away} from the optimum"


def _without_optimum(outcome: Examination) -> str:
    if isinstance(outcome, NoOptimum):
        infeasible = isinstance(outcome.certificate, Infeasible)
        return "yet the model is infeasible" if infeasible else "but no plan is optimal"
    return "the optimum is not known"


def listed(parts: list[str]) -> str:
    """``a``, ``a and b``, ``a, b and c``."""
    return ", ".join(parts[:-1]) + (" and " if parts[:-1] else "") + parts[-1]


def facts(checked: CheckedPlan) -> Pairs:
    """Everything that is known about a plan besides its conditions."""
    return (
        ("plan", _columns(checked)),
        ("rounding", _rounding(checked)),
        *_limits(checked),
        ("objective", _objective(checked)),
        ("optimum", _optimum(checked)),
        *_multipliers(checked),
    )


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
        (plan.x, "values", m),
        (plan.y, "dual values", 0),
        (plan.z, "reduced costs", m),
    ):
        if part is None or not part.half.any():
            continue
        k = int(np.argmax(part.half))
        name = line_name(checked.found.model, first + k)
        coarse.append(f"{noun} to within {number(float(part.half[k]))} ({name})")
    if not coarse:
        return "none: every number is taken as exact"
    return f"at the coarsest {', '.join(coarse)}; each line is judged by itself"


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
    told = f"the worst is {name}, violated by {amount(violation, unit)} of {amount(limit, unit)}"
    return (("limits", f"{have}; {told} allowed"),)


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
    unit = objective_unit(checked.outcome.head)
    away = amount(abs(against.distance), unit)
    relative = ""
    if against.relative is not None and against.distance:
        relative = f" ({residual(abs(against.relative))} relative)"
    if against.distance < 0:
        text = f"the plan is {away} better{relative}"
    else:
        text = (
            f"the plan is {away} from it{relative}" if against.distance else "the plan attains it"
        )
    if checked.judgement.feasible:
        return text
    return f"{text}, which means nothing for a plan that is not feasible"


_MULTIPLIERS = {
    Multipliers.THOSE_FOUND: "those of the optimum make this plan optimal",
    Multipliers.NONE: "none make this plan optimal (weak duality)",
    Multipliers.ON_THE_EDGE: "not settled at this tolerance: beside the prices of the optimum the "
    "gap is within it, a product is not",
    Multipliers.NOT_FEASIBLE: "none make a plan optimal that is not feasible",
}


def _multipliers(checked: CheckedPlan) -> Pairs:
    """Whether any dual values make the plan optimal, as written and within its rounding."""
    against = checked.against
    if against is None:
        return ()
    text = _MULTIPLIERS[against.multipliers]
    if against.multipliers is not Multipliers.THOSE_FOUND:
        text += (
            "; within its rounding some plan may be optimal, line by line"
            if against.could_be
            else "; no plan within its rounding is optimal"
        )
    return (("dual values", text),)
