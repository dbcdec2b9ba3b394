"""A proof in a report: its verdict, the exact objective, and which zeros are exact."""

from __future__ import annotations

from fractions import Fraction

import numpy as np

from lpview.marks import Mask
from lpview.model import LinearProgram
from lpview.outcomes import Examination, Optimal
from lpview.proof.exact import contradicts, exact_line, only_look_zero
from lpview.proof.results import (
    Effort,
    NotProved,
    Proof,
    ProvedInfeasible,
    ProvedOptimal,
    ProvedUnbounded,
)
from lpview.report.document import Pairs
from lpview.report.exact_numbers import digits_of, exact_text, in_digits
from lpview.report.names import line_name
from lpview.report.numbers import count, residual

MOST_NAMED = 5
"""Lines named unless the full report is asked for."""


def proof_verdict(found: Examination, proof: Proof, checked: str) -> str:
    """The outcome in one sentence; ``checked`` is that of the check."""
    if isinstance(proof, NotProved):
        return f"{checked}; not proved"
    claim = found.head.run.claim.value
    although = f", although the solver says {claim}" if contradicts(found, proof) else ""
    if isinstance(proof, ProvedOptimal):
        failed = isinstance(found, Optimal) and not found.passed
        doubles = "; the answer in doubles is off by its rounding" if failed else ""
        return f"proved optimal in exact arithmetic{although}{doubles}"
    kind = "infeasible" if isinstance(proof, ProvedInfeasible) else "unbounded"
    return f"proved {kind} in exact arithmetic{although}"


def proof_facts(found: Examination, proof: Proof, full: bool = False) -> Pairs:
    """What was proved, exactly. ``found`` has the marks of the tolerance."""
    if isinstance(proof, ProvedOptimal):
        facts = [
            ("proof", f"exact objective {exact_text(proof.objective)}; {_effort(proof.effort)}")
        ]
        if isinstance(found, Optimal):
            facts.append(("exact zeros", _zeros(found, proof, full)))
        return tuple(facts)
    if isinstance(proof, ProvedInfeasible):
        text = f"the lines contradict each other by {exact_text(proof.contradiction)}"
        return (
            ("proof", f"{text}; {_effort(proof.effort)}"),
            ("exact multipliers", _multipliers(found.head.model, proof, full)),
        )
    if isinstance(proof, ProvedUnbounded):
        text = f"a feasible plan and a ray of rate {exact_text(proof.rate)}"
        return (("proof", f"{text}; {_effort(proof.effort)}"),)
    return (("proof", f"not reached: {proof.reason}"), ("what is rigorous", interval_words(proof)))


def interval_words(proof: NotProved) -> str:
    """Where the optimal objective lies, as far as that is certain."""
    low = "no bound below" if proof.lower is None else f"at least {digits_of(proof.lower, 12)}"
    high = "no bound above" if proof.upper is None else f"at most {digits_of(proof.upper, 12)}"
    words = f"the optimal objective has {low} and {high}"
    if proof.lower is not None or proof.upper is not None:
        words = f"the optimal objective is {low}, {high}".replace("is no bound", "has no bound")
    if proof.has_plan:
        return words
    return f"{words}, if there is any plan at all: no exactly feasible one is known"


def _multipliers(lp: LinearProgram, proof: ProvedInfeasible, full: bool) -> str:
    """Rows and their multipliers; those of bounds follow from them."""
    rows = [i for i, n in enumerate(proof.y.numerators) if n]
    shown = rows if full else rows[:MOST_NAMED]
    words = [f"{line_name(lp, i)} {exact_text(proof.y[i], 12)}" for i in shown]
    more = f" and {len(rows) - len(shown)} more" if len(rows) > len(shown) else ""
    return f"{', '.join(words)}{more}" or "none: the bounds contradict the sides by themselves"


def _effort(effort: Effort) -> str:
    words = f"numbers of up to {count(effort.bits, 'bit')}"
    if effort.steps == 1:
        return f"{words}; the first basis needed no refinement"
    off = [
        f"{name} by {residual(float(size))}"
        for name, size in (
            ("a side or bound", effort.primal_violation),
            ("a price's sign", effort.dual_violation),
        )
        if size
    ]
    return f"{words}; {effort.steps} bases solved, the first was off: {' and '.join(off)}"


def _zeros(found: Optimal, proof: ProvedOptimal, full: bool) -> str:
    lp = found.head.model
    slack, price = only_look_zero(found, proof)
    exact = (
        f"{count(int(np.count_nonzero(proof.zero_slack)), 'slack')}, "
        f"{count(int(np.count_nonzero(proof.zero_price)), 'price')}"
    )
    looks = [
        f"{what} of {_named(lp, lines, full)}"
        for what, lines in (("slack", slack), ("price", price))
        if lines.any()
    ]
    return f"{exact}; only look like zero: {'; '.join(looks) or 'none'}"


def _named(lp: LinearProgram, lines: Mask, full: bool) -> str:
    hits = np.flatnonzero(lines).tolist()
    shown = hits if full else hits[:MOST_NAMED]
    more = f" and {len(hits) - len(shown)} more" if len(hits) > len(shown) else ""
    return ", ".join(line_name(lp, k) for k in shown) + more


def exact_sentences(lp: LinearProgram, proof: ProvedOptimal, line: int) -> tuple[str, ...]:
    """The exact numbers of one line."""
    exact = exact_line(lp, proof, line)
    kind, price = ("row value", "dual value") if line < lp.m else ("value", "reduced cost")
    slacks = [
        f"slack to its {name} {exact_text(slack)}"
        for name, slack in (("lower end", exact.below), ("upper end", exact.above))
        if slack is not None
    ]
    numbers = [f"{kind} {exact_text(exact.value)}", *slacks, f"{price} {exact_text(exact.price)}"]
    return (f"Exactly: {', '.join(numbers)}.",)


def proof_json(proof: Proof | None) -> dict[str, object]:
    """The JSON field ``proof``, and the status where the proof decides it."""
    if proof is None:
        return {"proof": None}
    verdict = _VERDICTS[type(proof)]
    decided = {} if isinstance(proof, NotProved) else {"status": verdict.split()[-1]}
    return {**decided, "proof": _fields(proof, verdict)}


def _fields(proof: Proof, verdict: str) -> dict[str, object]:
    effort = proof.effort
    objective = proof.objective if isinstance(proof, ProvedOptimal) else None
    interval = (proof.lower, proof.upper) if isinstance(proof, NotProved) else (None, None)
    return {
        "verdict": verdict,
        "objective_numerator": None if objective is None else in_digits(objective.numerator),
        "objective_denominator": None if objective is None else in_digits(objective.denominator),
        "seconds": None if effort is None else effort.seconds,
        "steps": None if effort is None else effort.steps,
        "primal_violation": None if effort is None else float(effort.primal_violation),
        "dual_violation": None if effort is None else float(effort.dual_violation),
        "bits": None if effort is None else effort.bits,
        "interval_lower": _end(proof, interval[0], "-inf"),
        "interval_upper": _end(proof, interval[1], "inf"),
        "reason": proof.reason if isinstance(proof, NotProved) else None,
    }


_VERDICTS = {
    ProvedOptimal: "proved optimal",
    ProvedInfeasible: "proved infeasible",
    ProvedUnbounded: "proved unbounded",
    NotProved: "not proved",
}


def _end(proof: Proof, bound: Fraction | None, none: str) -> float | str | None:
    """One end of the rigorous interval; a proved optimum has none."""
    if not isinstance(proof, NotProved):
        return None
    return none if bound is None else float(bound)
