"""The body of a report on an answer: conditions, objectives, prices, flagged lines."""

from __future__ import annotations

import numpy as np

from lpview.basis import PriceDifference
from lpview.marks import FAULTS, NEED_PRICES, Flag
from lpview.outcomes import BasisRoute, DualSolved, Optimal
from lpview.polish import OwnNumbers
from lpview.report.document import Block, Facts, Pairs, Table
from lpview.report.names import fitted, line_name
from lpview.report.numbers import count, in_full, number, residual
from lpview.report.units import (
    in_units,
    labelled,
    objective_unit,
    price_header,
    units_of,
)
from lpview.verdict import Verdict

MOST_ROWS = 10
"""Zero-slack rows shown unless the full report is asked for."""
FEWER_ROWS = 4
"""So many fewer where prices are reported too."""
FEWER_FOR_PROOF = 4
"""So many fewer where a proof is reported too."""
MOST_FLAGGED = 10
"""Other flagged lines named unless the full report is asked for."""

_PASSED = {True: "passed", False: "FAILED", None: "holds by definition"}


def body(
    found: Optimal,
    full: bool,
    tables: tuple[Table, ...] = (),
    prices: Pairs = (),
    proved: bool = False,
) -> tuple[Block, ...]:
    """Everything between the verdict and the provenance.

    ``tables``, if any, stand in place of the zero-slack rows; facts about prices, if any,
    stand with the flags, and leave room for fewer of these rows; so does a proof above.
    """
    most = MOST_ROWS - FEWER_ROWS * bool(prices) - FEWER_FOR_PROOF * proved
    return (
        _conditions(found),
        Facts(_objectives(found) + _routes(found)),
        *(tables or (_zero_slack_rows(found, full, most),)),
        Facts(_flags(found, full) + prices),
    )


def _conditions(found: Optimal) -> Table:
    rows = tuple(_condition(found, verdict) for verdict in found.verdicts)
    header = (
        "condition",
        "verdict",
        "worst line",
        "scaled",
        "absolute",
        "relative",
        "tolerance",
    )
    return Table("", header, rows, (False, False, False, True, True, True, True))


def _condition(found: Optimal, verdict: Verdict) -> tuple[str, ...]:
    line = "none" if verdict.worst is None else line_name(found.head.model, verdict.worst)
    sizes = (verdict.scaled, verdict.absolute, verdict.relative, verdict.tolerance)
    if verdict.passed is None:
        return (
            verdict.condition.value,
            _PASSED[None],
            line,
            *("not computed",) * 3,
            residual(sizes[3]),
        )
    return (verdict.condition.value, _PASSED[verdict.passed], line, *map(residual, sizes))


def _objectives(found: Optimal) -> tuple[tuple[str, str], ...]:
    measured, rounded = found.measurement, found.rounded
    if rounded.line is None:
        printed = "every line holds exactly"
    else:
        printed = (
            f"{line_name(found.head.model, rounded.line)} is violated by "
            f"{in_units(residual(rounded.absolute), units_of(found.head, rounded.line).own)} "
            f"(scaled {residual(rounded.scaled)})"
        )
    primal, dual, gap, at_stake = (
        in_units(text, objective_unit(found.head))
        for text in (
            in_full(measured.primal_objective),
            in_full(measured.dual_objective),
            residual(measured.gap),
            residual(measured.at_stake),
        )
    )
    return (
        (
            "objective",
            f"primal {primal}, dual {dual}, gap {gap}, at stake in the residuals {at_stake}",
        ),
        (f"plan at {rounded.digits} digits", printed),
        ("answer", _origin(found)),
    )


def _origin(found: Optimal) -> str:
    origin = found.origin
    if isinstance(origin, OwnNumbers):
        return "the solver's own"
    return (
        f"rounding taken out; the solver's own has {residual(origin.scaled)} scaled "
        f"in {origin.condition.value}"
    )


def _routes(found: Optimal) -> tuple[tuple[str, str], ...]:
    basis, dual = found.basis_route, found.dual_route
    if isinstance(basis, BasisRoute):
        condition = residual(basis.prices.condition)
        first = f"done: {_agreement(found, basis.difference)}; condition {condition} after scaling"
    else:
        first = f"not done: {basis.reason}"
    if isinstance(dual, DualSolved):
        same = "same objective" if dual.agrees else f"OTHER OBJECTIVE {in_full(dual.objective)}"
        second = f"done: {same}; {_agreement(found, dual.difference)}"
    else:
        second = f"not done: {dual.reason}"
    return (("prices from the basis", first), ("prices from the dual", second))


def _agreement(found: Optimal, difference: PriceDifference) -> str:
    if difference.row is None:
        return "prices agree to the last digit"
    most = f"most {residual(difference.largest)}, {line_name(found.head.model, difference.row)}"
    if not difference.beyond:
        return f"prices agree within rounding, {most}"
    verb = "differs" if difference.beyond == 1 else "differ"
    return f"prices probably not unique: {count(difference.beyond, 'row')} {verb}, {most}"


def _zero_slack_rows(found: Optimal, full: bool, most: int) -> Table:
    lp, rows = found.head.model, found.measurement.rows
    zero = np.flatnonzero(found.marks.flags[Flag.ZERO_SLACK][: lp.m])
    worth = np.abs(rows.price * rows.end)
    order = zero[np.argsort(-worth[zero], kind="stable")]
    shown = order if full else order[:most]
    title = f"zero-slack rows by |dual value times right-hand side|: {shown.size} of {zero.size}"
    cells = tuple(
        (
            fitted(lp.rows[i]),
            number(rows.value[i]),
            number(rows.slack[i]),
            number(rows.price[i]),
            number(worth[i]),
        )
        for i in shown.tolist()
    )
    title += price_header(found.head)
    header = ("row", "row value", "slack", "dual value", "|price x side|")
    table = Table(title, header, cells, (False, True, True, True, True))
    return labelled(found.head, table, shown.tolist(), units=True)


def _flags(found: Optimal, full: bool) -> tuple[tuple[str, str], ...]:
    """A line for the faults, then one per other flag, with names until there are enough."""
    left = found.marks.room.size if full else MOST_FLAGGED
    faults = []
    for flag in FAULTS:
        text, named = _flagged(found, flag, left)
        left -= named
        faults += [f"{flag.value} {text}"] if found.marks.flags[flag].any() else []
    lines = [("faults", "; ".join(faults) or f"none ({', '.join(f.value for f in FAULTS)})")]
    for flag in (flag for flag in Flag if flag not in FAULTS):
        if flag in NEED_PRICES and flag not in found.marks.flags:
            continue
        listed = full or flag is not Flag.ZERO_SLACK
        text, named = _flagged(found, flag, left * listed)
        left -= named
        lines.append((flag.value, text))
    return tuple(lines)


def _flagged(found: Optimal, flag: Flag, most: int) -> tuple[str, int]:
    """Counts of rows and columns, names of at most ``most``, and how many were named."""
    lp, mask = found.head.model, found.marks.flags.get(flag)
    if mask is None:
        return "not known without a basis", 0
    hits = np.flatnonzero(mask)
    in_rows = int(np.count_nonzero(mask[: lp.m]))
    text = f"{count(in_rows, 'row')}, {count(hits.size - in_rows, 'column')}"
    named = [line_name(lp, line) for line in hits[:most].tolist()]
    if not named:
        return text, 0
    more = f" and {hits.size - len(named)} more" if hits.size > len(named) else ""
    return f"{text}: {', '.join(named)}{more}", len(named)
