"""``lpview check`` and ``prove``: solve and check each model, write one report for all."""

from __future__ import annotations

import argparse
import sys
import time
from dataclasses import dataclass
from typing import TYPE_CHECKING

from lpview import exit_status
from lpview.blocks import InputError
from lpview.commands.arriving import examined, lines_asked
from lpview.commands.leaving import rendered, status, write
from lpview.outcomes import Examination, Optimal
from lpview.report.document import Document, Pairs
from lpview.run import Watch
from lpview.scaling import NotRepresentableError

if TYPE_CHECKING:  # the check alone starts sooner without them
    from lpview.priced import Priced
    from lpview.prices import NoPrices
    from lpview.proof.results import Proof


def check(options: argparse.Namespace) -> list[int]:
    """``lpview check``: solve and check each model, write one report for all."""
    if options.plan is not None:
        from lpview.commands.plan import check_plan

        return check_plan(options)
    found: list[Checked] = []
    statuses: list[int] = []
    for source in options.models:
        try:
            found.append(_checked(source, options))
            statuses.append(_status(found[-1], options))
        except (InputError, NotRepresentableError) as error:
            sys.stderr.write(f"{error}\n")
            statuses.append(exit_status.USAGE)
    if found:
        write(_rendered(found, options), options.output)
    return statuses


def prove(options: argparse.Namespace) -> list[int]:
    """``lpview prove``: short for ``check --prove``."""
    return check(options)


@dataclass(frozen=True, eq=False)
class Checked:
    """One model's examination, and its prices where they were asked for and there are any."""

    found: Examination
    """What the check came to; its marks know of the prices."""
    priced: Priced | NoPrices | None = None
    """The prices; None where they were not asked for, or there is no answer."""
    proof: Proof | None = None
    """The proof; None where it was not asked for."""


def _checked(source: str, options: argparse.Namespace) -> Checked:
    watch, started = Watch(), time.monotonic()
    found = examined(source, options, watch, options.lines)
    priced = proof = None
    if (options.prices or options.summary) and isinstance(found, Optimal):
        from lpview.commands.prices import worked_out

        found, priced = worked_out(found, options, watch, started)
    if options.prove:
        from lpview.commands.proof import proved

        proof = proved(found, options, watch, started)
    return Checked(found, priced, proof)


def _status(checked: Checked, options: argparse.Namespace) -> int:
    statuses = [status(checked.found)]
    if checked.proof is not None:
        from lpview.commands.proof import proof_status

        statuses = [proof_status(checked.found, checked.proof)]
    # A page tells what it lacks; only who asks for prices is owed them.
    if checked.priced is not None and options.prices:
        from lpview.commands.prices import price_status

        statuses.append(price_status(checked.priced))
    return exit_status.worst(statuses)


def _rendered(checked: list[Checked], options: argparse.Namespace) -> str:
    if options.format == "json":
        from lpview.report import json

        added = [_added(one, options) for one in checked]
        found = [_with_exact_zeros(one) for one in checked]
        return json.render(found if len(options.models) > 1 else found[0], added)
    return "\n".join(
        rendered(_document(one, options), options.format, options.summary) for one in checked
    )


def _added(one: Checked, options: argparse.Namespace) -> dict[str, object]:
    """JSON fields of what was asked for beyond the check."""
    added: dict[str, object] = {}
    if options.prices:
        from lpview.report import price_json

        added.update(price_json.fields(one.priced))
    if options.prove:
        from lpview.proof.exact import contradicts
        from lpview.report.proof import proof_json

        added.update(proof_json(one.proof))
        if one.proof is not None and contradicts(one.found, one.proof):
            added["passed"] = None
    return added


def _with_exact_zeros(one: Checked) -> Examination:
    """The examination, its flags by exact zeros where there is a proof."""
    from lpview.proof.exact import with_exact_zeros
    from lpview.proof.results import ProvedOptimal

    if isinstance(one.proof, ProvedOptimal) and isinstance(one.found, Optimal):
        return with_exact_zeros(one.found, one.proof)
    return one.found


def _document(checked: Checked, options: argparse.Namespace) -> Document:
    """What was asked for: the report, its families, or the ledgers of some lines."""
    found, priced, proof = checked.found, checked.priced, checked.proof
    if options.summary:
        from lpview.report.summary import summary_report

        return summary_report(found, priced, proof)
    if options.families:
        from lpview.report.families import families_report

        return families_report(found, options.full)
    if options.lines:
        from lpview.report.ledger import ledger_report

        lines = lines_asked(found.head.model, "", options.lines)
        if priced is None:
            return ledger_report(found, lines, options.full, proof=proof)
        from lpview.report.prices import lines_of, problem

        known = lines_of(priced)
        return ledger_report(found, lines, options.full, known, problem(priced), proof)
    from lpview.report.check import report

    prices: Pairs = ()
    if priced is not None:
        from lpview.report.prices import check_facts

        prices = check_facts(priced, options.full)
    return report(found, options.full, prices=prices, proof=proof)
