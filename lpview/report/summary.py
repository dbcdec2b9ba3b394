"""One page in plain sentences, for whoever decides on the plan and solves no models.

What the best plan comes to and how sure that is; the limits that hold it back, and what
moving each of them is worth; what is not known. No symbols, no words of mathematics beyond
those that cannot be avoided; names and units stay as the person gave them.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import replace

from lpview.model import Sense
from lpview.outcomes import Examination, Head, Optimal
from lpview.priced import Priced
from lpview.proof.exact import contradicts, with_exact_zeros
from lpview.proof.results import (
    NotProved,
    Proof,
    ProvedInfeasible,
    ProvedOptimal,
    ProvedUnbounded,
)
from lpview.report import asking
from lpview.report.check import CAUTION
from lpview.report.document import Command, Document, Sentence
from lpview.report.heads import noticed, title
from lpview.report.names import fitted
from lpview.report.proof import interval_words
from lpview.report.summary_limits import Prices, limits, summary_lines
from lpview.report.summary_scope import of_a_plan, scope_sentences
from lpview.report.summary_without import (
    Page,
    proved_infeasible,
    proved_unbounded,
    without_answer,
)
from lpview.report.units import objective_unit
from lpview.report.worth import written_amount, written_out

__all__ = ["summary_lines", "summary_report"]

COUNTED = {1: "one", 2: "two", 3: "three", 4: "four", 5: "five", 6: "six", 7: "seven", 8: "eight"}
COUNTED |= {9: "nine", 10: "ten", 11: "eleven", 12: "twelve"}
"""Numbers in words."""


def summary_report(
    found: Examination, prices: Prices = None, proof: Proof | None = None
) -> Document:
    """The page; at most some 25 sentences.

    Parameters
    ----------
    prices
        Those of `lpview.priced.price_page`, as far as they were asked for and found.
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


def _page(found: Examination, prices: Prices, proof: Proof | None) -> Page:
    if isinstance(proof, ProvedInfeasible):
        return proved_infeasible(found.head, proof)
    if isinstance(proof, ProvedUnbounded):
        return proved_unbounded(found.head, proof)
    if isinstance(proof, ProvedOptimal):
        return _proved_optimal(found, prices, proof)
    if isinstance(found, Optimal):
        return _optimal(found, prices, proof)
    headline, body = without_answer(found)
    return headline, body + _not_proved(proof)


def _proved_optimal(found: Examination, prices: Prices, proof: ProvedOptimal) -> Page:
    head, objective = found.head, float(proof.objective)
    aside = scope_sentences(head, bound=objective)
    worth = _comes_to(head, objective, "The best plan")
    if not isinstance(found, Optimal):
        return of_a_plan(head, "there is a best plan, but it is not at hand"), [
            *aside,
            f"{worth}; this is proved in exact arithmetic.",
            "The solver has not given that plan, so nothing is said of its limits.",
        ]
    found = with_exact_zeros(found, proof)
    sure = [*aside, f"{worth}.", "It is proved in exact arithmetic that no plan is better."]
    if not found.passed:
        sure.append(
            f"The numbers of the plan at hand carry rounding: the check fails "
            f"{_failed(found)}, so nothing is said of its limits."
        )
        return "the best value is proved, the plan at hand is not exact", sure
    headline = of_a_plan(head, f"{_a_best_plan(prices)} is proved")
    return headline, [*sure, *limits(found, prices)]


def _optimal(found: Optimal, prices: Prices, proof: Proof | None) -> Page:
    head, measured = found.head, found.measurement
    objective = measured.primal_objective
    if not found.passed:
        return "NOT VERIFIED", [
            *scope_sentences(head),
            f"{_comes_to(head, objective, 'By its own word the solver has a plan that')}.",
            f"The check of that plan fails {_failed(found)}: do not act on it before that is "
            "cleared up.",
            *_not_proved(proof),
            "Nothing is said of its limits, for the prices may be wrong too.",
        ]
    return of_a_plan(head, f"{_a_best_plan(prices)} was found and verified"), [
        # No plan is better than the dual objective, whole numbers or not.
        *scope_sentences(head, bound=measured.dual_objective),
        f"{_comes_to(head, objective, 'The best plan found')}.",
        "It is verified: every condition of a best plan was worked out anew from the numbers of "
        f"the file, and each holds {_to_digits(head.request.tolerance)}.",
        *_not_proved(proof),
        *limits(found, prices),
    ]


def _a_best_plan(prices: Prices) -> str:
    only = isinstance(prices, Priced) and prices.plan_dimension == 0
    return "the best plan" if only else "a best plan"


def _to_digits(tolerance: float) -> str:
    """What a residual within the tolerance means, which is over ``max(1, largest term)``."""
    # Rounding must not make two digits of 1e-3.
    digits = math.floor(-math.log10(tolerance) + 1e-9)
    if digits < 1:
        return (
            f"within {written_out(tolerance)} times its largest number ({written_out(tolerance)} "
            "where its numbers are below 1)"
        )
    text, end = COUNTED.get(digits, str(digits)), "" if digits == 1 else "s"
    return f"to {text} digit{end} ({text} decimal{end} where its numbers are below 1)"


def _comes_to(head: Head, value: float, plan: str) -> str:
    """What a plan is worth, in the sense of the model."""
    unit, label = objective_unit(head), fitted(head.labels.objective.label)
    after = f" ({label})" if label else ""
    minimizing = head.model.sense is Sense.MINIMIZE
    if not unit:
        aim = f"{'lower' if minimizing else 'higher'} is better"
        return f"{plan} reaches an objective of {written_out(value)}{after}; {aim}"
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
    """What reading noticed, as sentences."""
    notes = head.notes
    empty, words = notes.empty_coefficients + notes.empty_costs, []
    if empty:
        cells = (
            "1 empty cell of the model was"
            if empty == 1
            else f"{empty} empty cells of the model were"
        )
        words.append(f"{cells} taken as 0.")
    others = replace(notes, empty_coefficients=0, empty_costs=0)
    words += [f"{text[0].upper()}{text[1:]}." for text in noticed(others)]
    return words + _decimals(notes.most_decimals)


_WHERE = {
    "c": "costs",
    "offset": "the constant",
    "A": "coefficients",
    "b": "limits of rows",
    "bounds": "limits of amounts",
}
"""Blocks in the words of the page."""


def _decimals(most: Mapping[str, int]) -> list[str]:
    """How many decimals the file has: a spreadsheet exports what it displays."""
    if not most:
        return []
    parts = ", ".join(f"{places} in {_WHERE[block]}" for block, places in most.items())
    return [f"The file writes its numbers with at most this many decimals: {parts}."]
