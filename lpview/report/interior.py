"""Strictly feasible points, redundant rows and digits as parts of a document."""

from __future__ import annotations

import numpy as np

from lpview.marks import Mask
from lpview.model import LinearProgram
from lpview.outcomes import Head, Optimal
from lpview.prices.interior import ImpliedEqualities, Interior
from lpview.prices.margin import CAP, Margin
from lpview.prices.results import NoPrices
from lpview.report.document import Block, Sentence, Table
from lpview.report.names import fitted, line_name
from lpview.report.numbers import count, number, residual
from lpview.report.units import amount, labelled, units_of

Blocks = tuple[Block, ...]

MOST_LINES = 20
"""Lines of a table unless the full report is asked for."""
MOST_NAMED = 5
"""Lines named in a sentence unless the full report is asked for."""

NO_POINT_NEEDED = "For a linear program the KKT conditions need no strictly feasible point."


def interior_blocks(found: Optimal, interior: Interior | NoPrices, full: bool = False) -> Blocks:
    """What strictly feasible points there are, and what follows from that."""
    lp = found.head.model
    if isinstance(interior, NoPrices):
        return (Sentence(f"strictly feasible points were not examined: {interior.reason}"),)
    strict = interior.strict
    plan = (
        _margin(found.head, strict, full)
        if isinstance(strict, Margin)
        else _implied(found.head, strict, interior.open, full)
    )
    return (
        *plan,
        Sentence(_dependence(lp, interior, full)),
        Sentence(_prices(lp, interior, full)),
        Sentence(_dual(interior)),
        Sentence(_plans(lp, interior, full)),
        Sentence(NO_POINT_NEEDED),
    )


def interior_fact(lp: LinearProgram, interior: Interior | NoPrices) -> str:
    """The same in a line."""
    if isinstance(interior, NoPrices):
        return f"not examined: {interior.reason}"
    strict = interior.strict
    if isinstance(strict, Margin):
        return f"some plan satisfies every inequality with a margin of {number(strict.margin)}"
    return f"no plan; never slack: {_named(lp, strict.lines, False)}"


def _margin(head: Head, strict: Margin, full: bool) -> Blocks:
    lp = head.model
    margin, at_most = number(strict.margin), number(strict.at_most)
    largest = "the largest there is" if margin == at_most else f"and none has more than {at_most}"
    if strict.margin >= CAP * (1 - 1e-9):
        largest = "and no larger one was looked for"
    shown = range(lp.n) if full else range(min(lp.n, MOST_LINES))
    cells = tuple((fitted(lp.columns[j]), number(float(strict.x[j]))) for j in shown)
    title = f"the strictly feasible plan: {len(cells)} of {count(lp.n, 'column')}"
    table = Table(title, ("column", "value"), cells, (False, True))
    return (
        Sentence(
            "A strictly feasible plan exists (the Slater condition holds): one plan satisfies "
            f"every inequality with a margin of {margin}, {largest}."
        ),
        Sentence(
            "The margin of a bound is its slack, that of a row its slack over the Euclidean norm "
            f"of its coefficients. Largest scaled violation there: {residual(strict.violation)}."
        ),
        labelled(head, table, [lp.m + j for j in shown], units=True),
    )


def _implied(head: Head, strict: ImpliedEqualities, unsettled: Mask, full: bool) -> Blocks:
    lp = head.model
    lines = np.flatnonzero(strict.lines)
    multiplier = np.concatenate([strict.y, strict.z])
    low = np.concatenate([lp.row_lower, lp.lower])
    high = np.concatenate([lp.row_upper, lp.upper])
    limit, relation = np.where(multiplier > 0, low, high), np.where(multiplier > 0, ">=", "<=")
    shown = (lines if full else lines[:MOST_LINES]).tolist()
    cells = tuple(
        (
            line_name(lp, k),
            f"{relation[k]} {amount(float(limit[k]), units_of(head, k).own)}",
            number(abs(float(multiplier[k]))),
        )
        for k in shown
    )
    title = f"implied equalities: {len(cells)} of {lines.size}"
    table = Table(title, ("line", "limit", "multiplier"), cells, (False, True, True))
    noun = "inequality is an implied equality"
    if lines.size > 1:
        noun = "inequalities are implied equalities"
    return (
        Sentence(
            "No plan is strictly feasible (the Slater condition fails): "
            f"{lines.size} {noun}, without slack in every feasible plan."
        ),
        Sentence(
            "Proof: in every feasible plan their slacks, each times its multiplier, add up to at "
            f"most {residual(strict.total)} (rounding in the multipliers: "
            f"{residual(strict.misplaced)}, scaled)."
        ),
        *_unsettled(lp, unsettled, full),
        labelled(head, table, shown),
    )


def _unsettled(lp: LinearProgram, unsettled: Mask, full: bool) -> Blocks:
    if not unsettled.any():
        return ()
    named = _named(lp, unsettled, full)
    return (Sentence(f"Within rounding neither slack nor its absence could be shown of {named}."),)


def _dependence(lp: LinearProgram, interior: Interior, full: bool) -> str:
    equalities = int(np.count_nonzero(lp.is_equality))
    if not equalities:
        return "There are no equality rows."
    over = "over the columns that are not fixed"
    if not interior.dependent_rows:
        return f"The {count(equalities, 'equality row')} {_be(equalities)} independent {over}."
    return (
        f"The {count(equalities, 'equality row')} {_be(equalities)} dependent {over}: their rank "
        f"is {equalities - interior.dependent_rows}. Part of the dependence: "
        f"{_named(lp, interior.dependent, full)}."
    )


def _be(amount: int) -> str:
    return "is" if amount == 1 else "are"


def _prices(lp: LinearProgram, interior: Interior, full: bool) -> str:
    rule = (
        "they would be bounded exactly if the equality rows were independent and some plan were "
        "strictly feasible"
    )
    if interior.prices_bounded:
        return "So the optimal dual solutions are a bounded set, and every price has limits."
    return (
        f"So the optimal dual solutions are an unbounded set ({rule}). Prices without a limit: "
        f"{_named(lp, interior.price_unbounded, full)}. To move such a line in at least one "
        "direction (an equality perhaps in both), by however little, leaves no plan; in a "
        "direction that leaves plans its rate is finite and may be quoted."
    )


def _dual(interior: Interior) -> str:
    if interior.dual_is_strict:
        return "The dual has a strictly feasible solution."
    return "The dual has no strictly feasible solution."


def _plans(lp: LinearProgram, interior: Interior, full: bool) -> str:
    if interior.plans_bounded:
        return "So the optimal plans are a bounded set."
    columns = interior.value_unbounded.copy()
    columns[: lp.m] = False
    why = ""
    if interior.dependent_columns:
        free = count(interior.dependent_columns, "dimension")
        why = f" ({free} of them along columns and rows without any limits)"
    return (
        f"So the optimal plans are an unbounded set{why}: they go on for ever without a change of "
        f"the objective. Values without a limit: {_named(lp, columns, full)}."
    )


def _named(lp: LinearProgram, lines: Mask, full: bool) -> str:
    """How many lines, and the first of them by name."""
    all_of_them = np.flatnonzero(lines).tolist()
    shown = all_of_them if full else all_of_them[:MOST_NAMED]
    names = ", ".join(line_name(lp, k) for k in shown)
    if len(shown) < len(all_of_them):
        names += f" and {len(all_of_them) - len(shown)} more"
    return names if len(all_of_them) == 1 else f"{count(len(all_of_them), 'line')}: {names}"
