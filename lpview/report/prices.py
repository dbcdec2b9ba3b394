"""Prices as a document: which are the only ones, and how far their rates hold."""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence

import numpy as np

from lpview.ledger import ledger
from lpview.marks import Mask
from lpview.model import LinearProgram
from lpview.outcomes import Optimal
from lpview.priced import Priced, widest, worth_most
from lpview.prices import LinePrices, Move, Moves, NoPrices
from lpview.report import asking
from lpview.report.check import CAUTION, provenance, shape, verdict
from lpview.report.document import Block, Command, Document, Facts, Sentence, Table
from lpview.report.heads import about_reading, title
from lpview.report.interior import interior_fact
from lpview.report.ledger import heading, line_options
from lpview.report.names import fitted, line_name
from lpview.report.numbers import count, number
from lpview.report.price_words import price_sentences
from lpview.report.units import amount, labelled, price_header, units_of

MOST_ROWS = 8
"""Rows of each table unless the full report is asked for."""
MOST_NAMED = 5
"""Lines named in a sentence unless the full report is asked for."""
MOST_IN_CHECK = 3
"""Widest prices named in the report of the check."""


def prices_report(priced: Priced, full: bool = False) -> Document:
    """The report of ``lpview prices``; at most 40 lines of text unless ``full``."""
    return (
        *opening(priced.found),
        *_stopped(priced),
        *map(Sentence, dimensions(priced)),
        *_tables(priced, full),
        Facts((("infeasible at once", infeasible_at_once(priced, full)), *_around(priced))),
        Facts(provenance(priced.found.head)),
        *closing(priced.found),
    )


def lines_report(priced: Priced, lines: Sequence[int]) -> Document:
    """The prices of some lines in sentences."""
    found = _asking(priced.found, lines)
    blocks: list[Block] = []
    for line in lines:
        blocks.append(Sentence(heading(ledger(found, line), found.head), strong=True))
        known = priced.lines.get(line)
        words = ("Not examined.",) if known is None else price_sentences(priced.found, line, known)
        blocks += map(Sentence, words)
    return (*opening(found), *_stopped(priced), *blocks, *closing(found))


def no_prices_report(found: Optimal, no: NoPrices, lines: Sequence[int] = ()) -> Document:
    """Why there are none; ``lines`` were asked for."""
    found = _asking(found, lines)
    return (
        *opening(found),
        Sentence(problem(no)),
        *closing(found),
    )


def _asking(found: Optimal, lines: Sequence[int]) -> Optimal:
    return asking(found, *line_options(found.head.model, lines)) if lines else found


def opening(found: Optimal) -> tuple[Block, ...]:
    """Verdict, shape and warnings, with which every report on prices begins."""
    head = found.head
    return (
        Sentence(f"{title(head)}: {verdict(found)}", strong=True),
        Sentence("; ".join([shape(head.model), *about_reading(head)])),
    )


def closing(found: Optimal) -> tuple[Block, ...]:
    """What every report ends with."""
    return Command("reproduce", found.head.request.command), Sentence(CAUTION)


def _stopped(priced: Priced) -> tuple[Block, ...]:
    return tuple(map(Sentence, filter(None, [problem(priced)])))


def problem(priced: Priced | NoPrices) -> str:
    """Why not everything that was asked for is known; empty where it is."""
    if isinstance(priced, NoPrices):
        return f"prices were not examined: {priced.reason}"
    if priced.stopped is None:
        return ""
    if not priced.asked:
        return f"stopped: price intervals were not finished ({priced.stopped.value})"
    done = len(priced.lines)
    return f"stopped: {done} of {count(priced.asked, 'line')} examined ({priced.stopped.value})"


def lines_of(priced: Priced | NoPrices) -> Mapping[int, LinePrices]:
    """The lines that were examined."""
    return {} if isinstance(priced, NoPrices) else priced.lines


def dimensions(priced: Priced) -> tuple[str, str]:
    """How large the sets of optimal plans and of optimal dual solutions are, in words."""
    lp = priced.found.head.model
    plans = plan_dimension(lp, priced.plan_dimension, priced.value_moves)
    if priced.price_dimension == 0:
        return plans, "The optimal dual solution is the only one, and so is every price."
    return plans, (
        f"The optimal dual solutions form a set of dimension {priced.price_dimension}: "
        f"{not_unique(priced)}."
    )


def plan_dimension(lp: LinearProgram, dimension: int, value_moves: Mask) -> str:
    """How large the set of optimal plans is, in words."""
    if dimension == 0:
        return "The optimal plan is the only one."
    moving = int(np.count_nonzero(value_moves[lp.m :]))
    return (
        f"The optimal plans form a set of dimension {dimension}: {moving} of "
        f"{count(lp.n, 'variable')} {'is' if moving == 1 else 'are'} not the same in all of them."
    )


def not_unique(priced: Priced) -> str:
    """How many prices are not unique, of how many."""
    lp = priced.found.head.model
    rows = int(np.count_nonzero(priced.not_unique[: lp.m]))
    columns = int(np.count_nonzero(priced.not_unique[lp.m :]))
    return (
        f"dual values of {rows} of {count(lp.m, 'row')} and reduced costs of {columns} of "
        f"{count(lp.n, 'column')} are not unique"
    )


def _tables(priced: Priced, full: bool) -> tuple[Table, ...]:
    """The widest prices, and the unique ones that are worth most, with their ranges."""
    lp = priced.found.head.model
    most = None if full else MOST_ROWS
    several = widest(priced.intervals, lp.m)
    single = worth_most(priced.found, priced.not_unique)
    tables = []
    for about, rows in (
        ("rows whose dual value is not unique, the widest first", several),
        ("rows whose dual value is unique, by |dual value times right-hand side|", single),
    ):
        shown = [line for line in rows if line in priced.lines][:most]
        if shown:
            tables.append(_table(priced, f"{about}: {len(shown)} of {len(rows)}", shown))
    return tuple(tables)


def _table(priced: Priced, about: str, rows: Sequence[int]) -> Table:
    found = priced.found
    header = ("row", "dual value", "up", "how far", "then", "down", "how far", "then")
    cells = []
    for line in rows:
        moves = active(found, line, priced.lines[line])
        price = float(found.measurement.rows.price[line]) if found.marks.priced[line] else 0.0
        cells.append(
            (
                fitted(found.head.model.rows[line]),
                number(price),
                *(_move_cells(moves.up) if moves else ("", "", "")),
                *(_move_cells(moves.down) if moves else ("", "", "")),
            )
        )
    numeric = (False, True, True, True, False, True, True, False)
    table = Table(about + price_header(found.head), header, tuple(cells), numeric)
    return labelled(found.head, table, rows, units=True)


def _move_cells(move: Move) -> tuple[str, str, str]:
    return number(move.rate), number(move.distance), move.then.value


def active(found: Optimal, line: int, prices: LinePrices) -> Moves | None:
    """The moves of the side or bound that the line sits at, else of the nearest."""
    return prices.lower if is_lower(found, line) else prices.upper


def is_lower(found: Optimal, line: int) -> bool:
    """Whether a line's active side or bound, else its nearest, is the lower one."""
    m = found.head.model.m
    k = line if line < m else line - m
    side = found.measurement.rows if line < m else found.measurement.columns
    below, above, named_lower = side.below[k], side.above[k], bool(side.named_lower[k])
    named = below if named_lower else above
    if found.marks.priced[line] and not found.marks.room[line] and np.isfinite(named):
        return named_lower
    return bool(below <= above)


def infeasible_at_once(priced: Priced, full: bool = False) -> str:
    """Moves that leave no plan, however small."""
    lp = priced.found.head.model
    named: list[str] = []
    for line in sorted(priced.lines):
        named += _moves_without_plan(lp, line, priced.lines[line], priced.found)
    if not named:
        return "no move" if priced.stopped is None else "no move found"
    shown = named if full else named[:MOST_NAMED]
    more = f" and {len(named) - len(shown)} more" if len(named) > len(shown) else ""
    return f"{count(len(named), 'move')}: {', '.join(shown)}{more}"


def _moves_without_plan(
    lp: LinearProgram, line: int, prices: LinePrices, found: Optimal
) -> list[str]:
    end = "side" if line < lp.m else "bound"
    sides = [(f"lower {end} ", prices.lower), (f"upper {end} ", prices.upper)]
    if not found.marks.paired[line]:
        sides = [("", prices.lower)]
    return [
        f"{line_name(lp, line)} {name}{way}"
        for name, moves in sides
        if moves is not None
        for way, move in (("up", moves.up), ("down", moves.down))
        if math.isinf(move.rate)
    ]


def check_facts(priced: Priced | NoPrices, full: bool = False) -> tuple[tuple[str, str], ...]:
    """What the report of the check says about the prices."""
    if isinstance(priced, NoPrices):
        return (("prices", f"not examined: {priced.reason}"),)
    return (
        ("prices", "; ".join(filter(None, [problem(priced), not_unique(priced)]))),
        ("widest prices", _widest_words(priced, full)),
        ("infeasible at once", infeasible_at_once(priced, full)),
        *_around(priced),
    )


def _around(priced: Priced) -> tuple[tuple[str, str], ...]:
    """What stands about the whole model beside its prices."""
    if priced.interior is None:
        return ()
    return (("strictly feasible", interior_fact(priced.found.head.model, priced.interior)),)


def _widest_words(priced: Priced, full: bool) -> str:
    lp = priced.found.head.model
    rows = [line for line in widest(priced.intervals, lp.m) if line in priced.lines]
    words = []
    for line in rows if full else rows[:MOST_IN_CHECK]:
        moves = active(priced.found, line, priced.lines[line])
        if moves is not None:
            unit = units_of(priced.found.head, line).price
            up, down = number(moves.up.rate), amount(moves.down.rate, unit)
            words.append(f"{line_name(lp, line)} up {up} and down {down}")
    return "; ".join(words) or "none"
