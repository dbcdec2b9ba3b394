"""The ledger of some lines as a document: terms, totals, and what they mean."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence
from types import MappingProxyType

import numpy as np

from lpview.ledger import Ledger, ledger
from lpview.marks import Flag
from lpview.model import LinearProgram
from lpview.outcomes import Examination, Head, Optimal
from lpview.prices import LinePrices
from lpview.proof.exact import contradicts, with_exact_zeros
from lpview.proof.results import Proof, ProvedOptimal
from lpview.report import asking
from lpview.report.check import CAUTION, report, verdict
from lpview.report.document import Block, Command, Document, Facts, Sentence, Table
from lpview.report.heads import reading_sentence, title
from lpview.report.ledger_words import meaning
from lpview.report.names import fitted
from lpview.report.numbers import count, number, residual
from lpview.report.proof import exact_sentences, proof_verdict
from lpview.report.units import Units, amount, in_units, label_of, labelled, units_of

NONE: Mapping[int, LinePrices] = MappingProxyType({})
"""No prices were worked out."""
MOST_TERMS = 20
"""Terms shown unless the full ledger is asked for; the others as their sum."""


def ledger_report(
    found: Examination,
    lines: Sequence[int],
    full: bool = False,
    prices: Mapping[int, LinePrices] = NONE,
    problem: str = "",
    proof: Proof | None = None,
) -> Document:
    """The ledgers of lines numbered as in `lpview.kkt`, and how to get them again.

    ``found.head.request.command`` is the command of the check; the options that name
    the lines are added to it. An examination without an answer has no ledgers, and
    the usual report says why. ``prices`` has those of lines where they were worked out,
    ``problem`` says why some were not. A ``proof`` decides the verdict and gives exact numbers.
    """
    found = asking(found, *line_options(found.head.model, lines))
    if not isinstance(found, Optimal):
        return report(found, full, proof=proof)
    head, words = found.head, verdict(found)
    if proof is not None:
        words = proof_verdict(found, proof, words)
        if contradicts(found, proof):
            return report(found, full, proof=proof)  # a ledger of no plan says nothing
        if isinstance(proof, ProvedOptimal):
            found = with_exact_zeros(found, proof)
    return (
        Sentence(f"{title(head)}: {words}", strong=True),
        *reading_sentence(head),
        *([Sentence(problem)] if problem else []),
        *(
            block
            for line in lines
            for block in ledger_blocks(found, line, full, prices.get(line), proof)
        ),
        Command("reproduce", head.request.command),
        Sentence(CAUTION),
    )


def line_options(lp: LinearProgram, lines: Sequence[int]) -> list[str]:
    """``--row NAME`` or ``--column NAME`` for each line, as words of a command."""
    words: list[str] = []
    for line in lines:
        option, name = ("--row", lp.rows[line]) if line < lp.m else ("--column", "")
        name = name or lp.columns[line - lp.m]
        # A name that begins like an option has to be tied to its own.
        words += [f"{option}={name}"] if name.startswith("-") else [option, name]
    return words


def ledger_blocks(
    found: Optimal,
    line: int,
    full: bool = False,
    prices: LinePrices | None = None,
    proof: Proof | None = None,
) -> tuple[Block, ...]:
    """The ledger of one line: its terms, what they add up to, what that means."""
    entry = ledger(found, line)
    return (
        _terms(found.head, entry, full),
        Facts(_totals(entry, units_of(found.head, line))),
        *map(Sentence, meaning(found, entry, prices)),
        *map(Sentence, _exactly(found, line, proof)),
    )


def _exactly(found: Optimal, line: int, proof: Proof | None) -> tuple[str, ...]:
    if not isinstance(proof, ProvedOptimal):
        return ()
    return exact_sentences(found.head.model, proof, line)


def heading(entry: Ledger, head: Head) -> str:
    """The line with its limits: ``row heat (heating) <= 300 kWh``, ``column tomato 0 to 40``."""
    kind = "row" if entry.is_row else "column"
    label = label_of(head, entry.line)
    name = fitted(entry.name) + (f" ({fitted(label.label)})" if label.label else "")
    return f"{kind} {name} {limits(entry, units_of(head, entry.line).own)}"


def limits(entry: Ledger, unit: str = "") -> str:
    """Sides or bounds: ``<= 300 kWh``, ``>= 0``, ``= 5``, ``0 to 40``, ``without limits``."""
    low, high = entry.lower, entry.upper
    if low == high and not entry.paired:
        return f"= {amount(low, unit)}"
    if math.isinf(low) and math.isinf(high):
        return "without sides" if entry.is_row else "free"
    if math.isinf(low):
        return f"<= {amount(high, unit)}"
    if math.isinf(high):
        return f">= {amount(low, unit)}"
    return f"{number(low)} to {amount(high, unit)}"


def _terms(head: Head, entry: Ledger, full: bool) -> Table:
    lp, terms = head.model, entry.terms
    names, first = (lp.columns, lp.m) if entry.is_row else (lp.rows, 0)
    total = terms.product.size
    shown = total if full else min(total, MOST_TERMS)
    rows = [
        (fitted(names[k]), *map(number, numbers))
        for k, *numbers in zip(
            terms.partner[:shown].tolist(),
            terms.coefficient[:shown].tolist(),
            terms.factor[:shown].tolist(),
            terms.product[:shown].tolist(),
            strict=True,
        )
    ]
    if shown < total:
        rest = math.fsum(terms.product[shown:]) if np.isfinite(terms.product).all() else math.nan
        rows.append((f"and {total - shown} more", "", "", number(rest)))
    header = (
        ("column", "coefficient", "value", "coefficient x value")
        if entry.is_row
        else ("row", "coefficient", "dual value", "coefficient x dual value")
    )
    cost = amount(entry.cost, units_of(head, entry.line).price)
    begin = "" if entry.is_row else f", cost {cost} less"
    words = f"{heading(entry, head)}{begin}: {count(total, 'term')}"
    table = Table(words, header, tuple(rows), (False, True, True, True))
    return labelled(head, table, [first + k for k in terms.partner[:shown].tolist()])


def _totals(entry: Ledger, units: Units) -> tuple[tuple[str, str], ...]:
    product = in_units(residual(entry.complementarity), units.objective)
    value, slack = amount(entry.value, units.own), amount(entry.slack, units.own)
    price = amount(entry.price, units.price)
    flags = ", ".join(flag.value for flag in entry.flags) or "none"
    if entry.status is None:
        flags += f" ({Flag.DEGENERATE.value} is not known without a basis)"
    if entry.is_row:
        numbers = (
            ("row value", value),
            ("slack", slack),
            ("dual value", price),
            ("slack times dual value", product),
        )
    else:
        numbers = (
            ("reduced cost", price),
            ("value", value),
            ("distance to its nearest bound", slack),
            ("distance times reduced cost", product),
        )
    return (*numbers, ("flags", flags))
