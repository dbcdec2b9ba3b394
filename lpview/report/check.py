"""What the check of a model reports, for every outcome, before it is rendered."""

from __future__ import annotations

import platform

from lpview import __version__
from lpview.model import LinearProgram
from lpview.outcomes import Examination, Head, NoOptimum, NotEstablished, Optimal, Stopped
from lpview.proof.exact import contradicts, with_exact_zeros
from lpview.proof.results import Proof, ProvedOptimal
from lpview.repair.search import Infeasible
from lpview.report import answer, certificate
from lpview.report.document import Block, Command, Document, Facts, Pairs, Sentence, Table
from lpview.report.heads import about_reading, title
from lpview.report.names import safe
from lpview.report.numbers import count, residual
from lpview.report.proof import proof_facts, proof_verdict

CAUTION = (
    "A verified optimum is only as good as the model; local rules and licensed practice decide."
)
"""What every report ends with."""


BESIDE_THE_PROOF = "What follows is what the solver answered; by the proof it settles nothing."
"""Said where a proof says another thing than the solver."""


def report(
    found: Examination,
    full: bool = False,
    tables: tuple[Table, ...] = (),
    prices: Pairs = (),
    proof: Proof | None = None,
) -> Document:
    """The report of an examination; at most 40 lines of text unless ``full``.

    ``tables``, if any, stand in place of an answer's zero-slack rows. ``prices`` are facts
    about an answer's prices, where these were asked for; so is ``proof``, which decides the
    verdict, and which zeros are zeros.
    """
    head = found.head
    words = verdict(found)
    facts: Pairs = ()
    if proof is not None:
        words, facts = proof_verdict(found, proof, words), proof_facts(found, proof, full)
        if isinstance(found, Optimal) and isinstance(proof, ProvedOptimal):
            found = with_exact_zeros(found, proof)
    beside = proof is not None and isinstance(found, Optimal) and contradicts(found, proof)
    return (
        Sentence(f"{title(head)}: {words}", strong=True),
        Sentence("; ".join([shape(head.model), *about_reading(head)])),
        *((Facts(facts),) if facts else ()),
        *((Sentence(BESIDE_THE_PROOF),) if beside else ()),
        *_body(found, full, tables, prices, bool(facts)),
        Facts(provenance(head)),
        Command("reproduce", head.request.command),
        Sentence(CAUTION),
    )


def verdict(found: Examination) -> str:
    """The outcome in one sentence."""
    if isinstance(found, Optimal):
        failed = [v.condition.value for v in found.verdicts if v.passed is False]
        tolerance = residual(found.head.request.tolerance)
        if failed:
            return f"NOT VERIFIED: the solver says optimal, but the check fails {_and(failed)}"
        return f"optimal, verified: every condition passed at {tolerance} scaled"
    if isinstance(found, NoOptimum):
        if isinstance(found.certificate, Infeasible):
            return "infeasible, certified: the lines contradict each other"
        return "unbounded, certified: the objective improves without limit"
    if isinstance(found, NotEstablished):
        return "not established: the solver's claim could not be confirmed"
    return f"stopped before there was a result: {found.head.run.claim.value}"


def _and(parts: list[str]) -> str:
    return ", ".join(parts[:-1]) + (" and " if parts[:-1] else "") + parts[-1]


def shape(lp: LinearProgram) -> str:
    """Sense and size, in a line."""
    return (
        f"{lp.sense.value}, {count(lp.m, 'constraint')}, {count(lp.n, 'variable')}, "
        f"{count(lp.A.nnz, 'nonzero coefficient')}"
    )


def _body(
    found: Examination, full: bool, tables: tuple[Table, ...], prices: Pairs, proved: bool
) -> tuple[Block, ...]:
    if isinstance(found, Optimal):
        return answer.body(found, full, tables, prices, proved)
    if isinstance(found, NoOptimum):
        return certificate.body(found, full)
    if isinstance(found, NotEstablished):
        claim = found.head.run
        return (
            Sentence(f"the solver's claim: {claim.claim.value} ({safe(claim.message)})"),
            Sentence(f"why it is not confirmed: {found.reason}"),
        )
    return (Sentence(_advice(found)),)


def _advice(found: Stopped) -> str:
    run = found.head.run
    return (
        f"{count(run.iterations, 'iteration')} were done; allow more with --time-limit SECONDS, "
        "or choose another --method"
    )


def provenance(head: Head) -> Pairs:
    """What it takes to get the same report again."""
    request, run = head.request, head.run
    options = ", ".join(f"{name} {value}" for name, value in run.options.items())
    rescaled = "; lines rescaled by powers of two" if run.rescaled else ""
    labels = head.labels.sha256
    return (
        ("model SHA-256", head.sha256),
        *((("labels SHA-256", labels),) if labels else ()),
        (
            "made with",
            f"lpview {__version__}, {run.solver}, Python {platform.python_version()}; tolerance "
            f"{residual(request.tolerance)}, zero {residual(request.zero)}",
        ),
        ("solver options", (options or "none") + rescaled),
    )
