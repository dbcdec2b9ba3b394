"""The page for whoever decides on a model without a plan, or without a best one."""

from __future__ import annotations

from collections.abc import Sequence

from lpview.model import LinearProgram, Sense
from lpview.outcomes import Head, NoOptimum, NotEstablished, Stopped
from lpview.proof.results import ProvedInfeasible, ProvedUnbounded
from lpview.repair.search import Infeasible
from lpview.report.certificate import contradiction, moving
from lpview.report.names import safe
from lpview.report.numbers import count
from lpview.report.summary_names import named, nobody_set, with_label
from lpview.report.summary_scope import of_no_plan, scope_sentences
from lpview.report.units import units_of
from lpview.report.worth import Limit, written_amount

Page = tuple[str, list[str]]
"""A headline, and sentences."""

PROVED = "This is proved in exact arithmetic."
CHECKED = "This was checked on the numbers of the file."


def without_answer(found: NoOptimum | NotEstablished | Stopped) -> Page:
    """What the check came to, where that is no plan."""
    head = found.head
    if isinstance(found, NotEstablished):
        return "nothing is established", [
            *scope_sentences(head),
            "What the solver says could not be confirmed, so there is no plan to act on.",
            f"Why it is not confirmed: {safe(found.reason)}",
        ]
    if isinstance(found, Stopped):
        return "stopped before there was a result", [
            *scope_sentences(head),
            f"The work ended early ({head.run.claim.value}), so there is no plan to act on.",
            "Nothing is known of the model's best plan, not even whether there is one.",
        ]
    if isinstance(found.certificate, Infeasible):
        return _infeasible(head, found.certificate)
    return _unbounded(head, moving(found.certificate.ray), CHECKED)


def _infeasible(head: Head, certificate: Infeasible) -> Page:
    found = contradiction(head.model, certificate.farkas)
    lines, nobody = found.lines.tolist(), nobody_set(head.model)
    limits = {
        line: Limit.BOTH if found.fixed[line] else _side(found.multiplier[line]) for line in lines
    }
    bare = [k for k in lines if nobody[k] and limits[k] is Limit.LOWER]
    kept = [_with_limit(head, line, limits[line]) for line in lines if line not in bare]
    given = f"as {count(len(bare), 'amount')} cannot be below 0" if bare else ""
    return _no_plan(head, kept, given, CHECKED)


def proved_infeasible(head: Head, proof: ProvedInfeasible) -> Page:
    """The rows of a proof that there is no plan, if it needs any."""
    lp, y = head.model, proof.y.numerators
    limits = {
        row: Limit.BOTH if lp.is_equality[row] else _side(multiplier)
        for row, multiplier in enumerate(y)
        if multiplier
    }
    kept = [_with_limit(head, row, limit) for row, limit in limits.items()]
    return _no_plan(head, kept, "in view of the limits of single amounts", PROVED)


def proved_unbounded(head: Head, proof: ProvedUnbounded) -> Page:
    """The columns of a proof that there is no best plan, the fastest first."""
    ray = proof.ray.numerators
    growing = sorted((j for j, step in enumerate(ray) if step), key=lambda j: -abs(ray[j]))
    return _unbounded(head, growing, PROVED)


def _side(multiplier: float) -> Limit:
    return Limit.LOWER if multiplier > 0 else Limit.UPPER


def _with_limit(head: Head, line: int, limit: Limit) -> str:
    """``hospital (at least 130)``."""
    end = _end(head.model, line, limit)
    return with_label(head, line, f"{limit.value} {written_amount(end, units_of(head, line).own)}")


def _end(lp: LinearProgram, line: int, limit: Limit) -> float:
    k, is_row = (line, True) if line < lp.m else (line - lp.m, False)
    if limit is Limit.UPPER:
        return float((lp.row_upper if is_row else lp.upper)[k])
    return float((lp.row_lower if is_row else lp.lower)[k])


def _no_plan(head: Head, limits: Sequence[str], given: str, sure: str) -> Page:
    """``given`` is what makes the limits contradict each other, beside themselves."""
    contradict = f"these {len(limits)} contradict each other"
    if len(limits) == 1:
        contradict = "this limit cannot be kept"
    elif not limits:
        contradict = "limits of single amounts contradict each other"
    within = f", {given}" if given and limits else ""
    all_named = f": {named(limits)}" if limits else ""
    return of_no_plan(head, "there is no plan"), [
        *scope_sentences(head, has_plan=False),
        f"No plan satisfies all limits together; {contradict}{within}{all_named}.",
        sure,
        f"{'It' if len(limits) == 1 else 'At least one of them'} has to give way before there is "
        "anything to decide on.",
    ]


def _unbounded(head: Head, columns: Sequence[int], sure: str) -> Page:
    lp = head.model
    better = "lower" if lp.sense is Sense.MINIMIZE else "higher"
    return "there is no best plan", [
        *scope_sentences(head),
        f"The objective can be made {better} without limit, which no real plan can: a limit is "
        "missing, or a cost has the wrong sign.",
        f"What goes on for ever: {named([with_label(head, lp.m + j) for j in columns])}.",
        sure,
    ]
