"""One page in plain sentences, for whoever decides on the plan and solves no models.

What the best plan comes to and how sure that is; the limits that hold it back, and what
moving each of them is worth; what is not known. No symbols, no words of mathematics beyond
those that cannot be avoided; names and units stay as the person gave them.
"""

from __future__ import annotations

from collections.abc import Sequence

from lpview.model import Sense
from lpview.outcomes import Examination, Head, NoOptimum, NotEstablished, Optimal, Stopped
from lpview.proof.exact import contradicts, with_exact_zeros
from lpview.proof.results import (
    NotProved,
    Proof,
    ProvedInfeasible,
    ProvedOptimal,
    ProvedUnbounded,
)
from lpview.repair.search import Infeasible
from lpview.report import asking
from lpview.report.certificate import contradiction, moving
from lpview.report.check import CAUTION
from lpview.report.document import Command, Document, Sentence
from lpview.report.heads import noticed, title
from lpview.report.names import fitted, safe
from lpview.report.proof import interval_words
from lpview.report.summary_limits import Prices, limits, named, summary_lines, with_label
from lpview.report.units import objective_unit
from lpview.report.worth import written_amount, written_out

__all__ = ["summary_lines", "summary_report"]


def summary_report(
    found: Examination, prices: Prices = None, proof: Proof | None = None
) -> Document:
    """The page; at most some 25 sentences.

    Parameters
    ----------
    prices
        Those of `summary_lines` at least, as far as they were asked for and found.
    proof
        What was proved, where that was asked for; it decides.
    """
    found = asking(found, "--summary")
    headline, body = _page(found, prices, proof)
    head = found.head
    if proof is not None and contradicts(found, proof):
        body.append(f"The solver says {head.run.claim.value}, and the proof settles that it errs.")
    return (
        Sentence(f"{title(head)}: {headline}", strong=True),
        *map(Sentence, body),
        *map(Sentence, _warnings(head)),
        Sentence(CAUTION),
        Command("reproduce", head.request.command),
    )


Page = tuple[str, list[str]]
"""A headline, and sentences."""


def _page(found: Examination, prices: Prices, proof: Proof | None) -> Page:
    if isinstance(proof, ProvedInfeasible):
        return _proved_infeasible(found.head, proof)
    if isinstance(proof, ProvedUnbounded):
        by_size = sorted(range(len(proof.ray)), key=lambda j: -abs(proof.ray.numerators[j]))
        growing = [j for j in by_size if proof.ray.numerators[j]]
        return _unbounded(found.head, growing, "This is proved in exact arithmetic.")
    if isinstance(found, Optimal):
        return _optimal(found, prices, proof)
    if isinstance(proof, ProvedOptimal):
        worth = _comes_to(found.head, float(proof.objective), "The best plan")
        return "there is a best plan, but it is not at hand", [
            f"{worth}; this is proved in exact arithmetic.",
            "The solver has not given that plan, so nothing is said of its limits.",
        ]
    headline, body = _without_answer(found)
    return headline, body + _not_proved(proof)


# Without a plan --------------------------------------------------------------


def _without_answer(found: NoOptimum | NotEstablished | Stopped) -> Page:
    head = found.head
    if isinstance(found, NotEstablished):
        return "nothing is established", [
            "What the solver says could not be confirmed, so there is no plan to act on.",
            f"Why it is not confirmed: {safe(found.reason)}",
        ]
    if isinstance(found, Stopped):
        return "stopped before there was a result", [
            f"The work ended early ({head.run.claim.value}), so there is no plan to act on.",
            "Nothing is known of the model's best plan, not even whether there is one.",
        ]
    if isinstance(found.certificate, Infeasible):
        lines = contradiction(head.model, found.certificate.farkas).lines.tolist()
        return _infeasible(head, lines, "This was checked on the numbers of the file.")
    return _unbounded(
        head, moving(found.certificate.ray), "This was checked on the numbers of the file."
    )


def _infeasible(head: Head, lines: Sequence[int], sure: str) -> Page:
    contradict = "this limit contradicts" if len(lines) == 1 else f"these {len(lines)} contradict"
    ends = "itself" if len(lines) == 1 else "each other"
    return "there is no plan", [
        f"No plan satisfies all limits together; {contradict} {ends}: "
        f"{named([with_label(head, line) for line in lines])}.",
        sure,
        "At least one of them has to give way before there is anything to decide on.",
    ]


def _proved_infeasible(head: Head, proof: ProvedInfeasible) -> Page:
    rows = [i for i, n in enumerate(proof.y.numerators) if n]
    proved = "This is proved in exact arithmetic."
    if not rows:
        return "there is no plan", [
            "No plan satisfies all limits together: limits of single amounts contradict each "
            "other.",
            proved,
        ]
    headline, (first, *others) = _infeasible(head, rows, proved)
    within = "in view of the limits of single amounts"
    first = first.replace("contradict each other:", f"contradict each other, {within}:")
    return headline, [first.replace("contradicts itself:", f"cannot be kept, {within}:"), *others]


def _unbounded(head: Head, columns: Sequence[int], sure: str) -> Page:
    lp = head.model
    better = "lower" if lp.sense is Sense.MINIMIZE else "higher"
    return "there is no best plan", [
        f"The objective can be made {better} without limit, which no real plan can: a limit is "
        "missing, or a cost has the wrong sign.",
        f"What goes on for ever: {named([with_label(head, lp.m + j) for j in columns])}.",
        sure,
    ]


# With a plan -----------------------------------------------------------------


def _optimal(found: Optimal, prices: Prices, proof: Proof | None) -> Page:
    head = found.head
    if isinstance(proof, ProvedOptimal):
        found = with_exact_zeros(found, proof)
        worth = _comes_to(head, float(proof.objective), "The best plan")
        sure = [f"{worth}.", "It is proved in exact arithmetic that no plan is better."]
        if not found.passed:
            sure.append(
                f"The numbers of the plan at hand carry rounding: the check fails "
                f"{_failed(found)}, so nothing is said of its limits."
            )
            return "the best value is proved, the plan at hand is not exact", sure
        return "the best plan is proved", [*sure, *limits(found, prices)]
    objective = found.measurement.primal_objective
    tolerance = written_out(head.request.tolerance)
    if not found.passed:
        return "NOT VERIFIED", [
            f"{_comes_to(head, objective, 'By its own word the solver has a plan that')}.",
            f"The check of that plan fails {_failed(found)}: do not act on it before that is "
            "cleared up.",
            *_not_proved(proof),
            "Nothing is said of its limits, for the prices may be wrong too.",
        ]
    return "a best plan was found and verified", [
        f"{_comes_to(head, objective, 'The best plan found')}.",
        "It is verified: every condition of a best plan was worked out anew from the numbers of "
        f"the file, and holds within {tolerance} of the largest number in it.",
        *_not_proved(proof),
        *limits(found, prices),
    ]


def _comes_to(head: Head, value: float, plan: str) -> str:
    """What a plan is worth, in the sense of the model."""
    unit, label = objective_unit(head), fitted(head.labels.objective.label)
    after = f" ({label})" if label else ""
    minimizing = head.model.sense is Sense.MINIMIZE
    if not unit:
        direction = "low" if minimizing else "high"
        aim = f", to be as {direction} as possible"
        return f"{plan} brings the objective{after} to {written_out(value)}{aim}"
    positive, negative = ("costs", "brings in") if minimizing else ("earns", "loses")
    verb = negative if value < 0 else positive
    return f"{plan} {verb} {written_amount(abs(value), unit)}{after}"


def _failed(found: Optimal) -> str:
    words = [v.condition.value for v in found.verdicts if v.passed is False]
    return ", ".join(words[:-1]) + (" and " if words[:-1] else "") + words[-1]


def _not_proved(proof: Proof | None) -> list[str]:
    if not isinstance(proof, NotProved):
        return []
    certain = interval_words(proof)
    return [
        f"A proof in exact arithmetic was tried and not reached: {proof.reason}.",
        f"What is certain without it: {certain}.",
    ]


def _warnings(head: Head) -> list[str]:
    """Scope and remarks, as sentences."""
    scope = head.notes.scope
    words = [f"All of this is about the model as it was read: {safe(scope)}."] if scope else []
    return words + [f"{text[0].upper()}{text[1:]}." for text in noticed(head)]
