"""The verdict on a plan from elsewhere, in words."""

from __future__ import annotations

from collections.abc import Sequence

from lpview.kkt import Condition
from lpview.outcomes import Examination, NoOptimum
from lpview.planned import Against, CheckedPlan, Multipliers, violated
from lpview.repair.search import Infeasible
from lpview.report.numbers import count, residual
from lpview.report.units import amount, objective_unit


def verdict(checked: CheckedPlan) -> str:
    """What the check of a plan comes to, in one sentence."""
    judgement = checked.judgement
    if checked.found.plan.y is not None:
        return _verdict_with_prices(checked)
    if judgement.feasible:
        return _verdict_feasible(checked)
    lines = violated(checked.found, judgement)
    beyond = sum(not one.within for one in lines)
    broken = f"{count(len(lines), 'line')} violated"
    if beyond:
        return f"NOT FEASIBLE as written nor within its rounding: {broken}, {beyond} beyond it"
    if checked.accepted:
        return f"NOT FEASIBLE as written, accepted within its rounding: {broken}"
    each = "which" if len(lines) == 1 else "each of which by itself"
    return f"NOT FEASIBLE as written: {broken}, {each} holds within its rounding"


def _verdict_with_prices(checked: CheckedPlan) -> str:
    judgement = checked.judgement
    failing, still = judgement.failing(rounded=False), judgement.failing(rounded=True)
    if not failing:
        return f"optimal as written ({_allowed(checked)}), verified by its own prices"
    if still == failing:
        return f"NOT VERIFIED, even within its rounding: fails {_named(failing)}"
    fail = f"{failing[0].value} fails" if len(failing) == 1 else f"{len(failing)} conditions fail"
    if still:
        return f"NOT VERIFIED: {fail}, within its rounding still {_named(still)}"
    if checked.accepted:
        return f"NOT VERIFIED as written, accepted within its rounding: {fail}"
    return f"NOT VERIFIED except within its rounding: fails {_named(failing)}"


def _named(conditions: Sequence[Condition]) -> str:
    """At most two conditions by name; the table says more."""
    if len(conditions) > 2:
        return f"{conditions[0].value} and {len(conditions) - 1} more conditions"
    return " and ".join(condition.value for condition in conditions)


def _allowed(checked: CheckedPlan) -> str:
    own = ", or own limit" if checked.judgement.limits.given.any() else ""
    return f"{residual(checked.judgement.tolerance)} scaled{own}"


def _verdict_feasible(checked: CheckedPlan) -> str:
    """The first line on a plan that is feasible as written."""
    against, allowed = checked.against, _allowed(checked)
    if against is None:
        return f"feasible as written ({allowed}), {_without_optimum(checked.outcome)}"
    if against.multipliers is Multipliers.THOSE_FOUND:
        return f"feasible as written and optimal ({allowed})"
    start = f"feasible as written ({allowed})"
    if against.multipliers is Multipliers.ON_THE_EDGE:
        return f"{start}, within the tolerance of the optimum but not line by line"
    if against.distance < 0:
        gained = amount(abs(against.distance), objective_unit(checked.outcome.head))
        return f"{start}, {gained} better only because it breaks limits"
    return f"{start}, {away(checked, against, ' than the optimum')}"


def away(checked: CheckedPlan, against: Against, than: str = "") -> str:
    """``6 worse (1.3 %)``; ``than`` says than what."""
    size = amount(abs(against.distance), objective_unit(checked.outcome.head))
    part = f" ({_percent(abs(against.relative))})" if against.relative is not None else ""
    return f"{size} {'better' if against.distance < 0 else 'worse'}{than}{part}"


def _percent(part: float) -> str:
    percent = 100 * part
    return f"{percent:.0f} %" if 10 <= percent < 1e6 else f"{residual(percent)} %"


def _without_optimum(outcome: Examination) -> str:
    if isinstance(outcome, NoOptimum):
        infeasible = isinstance(outcome.certificate, Infeasible)
        return "yet the model is infeasible" if infeasible else "but no plan is optimal"
    return "the optimum is not known"


def not_shown(checked: CheckedPlan) -> str:
    """What is said where a plan is optimal and its own prices do not show it; else nothing."""
    failing = checked.judgement.failing(rounded=False)
    against = checked.against
    if not failing or against is None or against.multipliers is not Multipliers.THOSE_FOUND:
        return ""
    if failing == (Condition.STATIONARITY,):
        return (
            "The plan is optimal, and the dual values in the file show it, but the reduced costs "
            "in the file are not theirs."
        )
    written = "" if checked.judgement.failing(rounded=True) else " as written"
    return (
        f"The plan is optimal, but the dual values in the file do not show it{written}; "
        "those of the optimum do."
    )
