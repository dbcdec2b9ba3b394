"""Redundant rows as parts of a document."""

from __future__ import annotations

from collections.abc import Sequence

from lpview.model import LinearProgram
from lpview.outcomes import Head, Optimal
from lpview.prices.redundant import Need, Redundant, RowSide
from lpview.prices.results import NoPrices
from lpview.report.document import Block, Sentence, Table
from lpview.report.interior import MOST_LINES
from lpview.report.names import fitted
from lpview.report.numbers import count, number
from lpview.report.units import labelled


def redundant_blocks(
    found: Optimal, redundant: Redundant | NoPrices, full: bool = False
) -> tuple[Block, ...]:
    """Which sides of rows could be left out."""
    lp = found.head.model
    if isinstance(redundant, NoPrices):
        return (Sentence(f"redundant rows were not looked for: {redundant.reason}"),)
    unreached, implied = redundant.having(Need.UNREACHED), redundant.having(Need.IMPLIED)
    blocks: list[Block] = [Sentence(_examined(redundant))]
    if unreached:
        blocks += (
            _sides(found.head, "no feasible plan reaches", unreached, full),
            Sentence("The sides that no feasible plan reaches can all be left out at once."),
        )
    if implied:
        blocks += (
            _sides(found.head, "implied by the other lines", implied, full),
            Sentence(
                "Each implied side can be left out alone, but perhaps not all at once: of two "
                "equal rows each is implied by the other."
            ),
        )
    lost = redundant.having(Need.NOT_FOUND)
    if lost:
        names = ", ".join(_side_name(lp, side) for side in lost)
        blocks.append(Sentence(f"The solver gave no usable answer for: {names}."))
    return tuple(blocks)


def _examined(redundant: Redundant) -> str:
    done, asked = len(redundant.sides), redundant.asked
    found = (
        f"reached by no feasible plan {len(redundant.having(Need.UNREACHED))}, "
        f"implied by the other lines {len(redundant.having(Need.IMPLIED))}, "
        f"needed {len(redundant.having(Need.NEEDED))}"
    )
    if redundant.stopped is not None:
        reason = redundant.stopped.value
        return f"stopped: {done} of {count(asked, 'side')} of rows examined ({reason}): {found}."
    return f"{count(done, 'side')} of inequality rows examined: {found}."


def _sides(head: Head, what: str, sides: Sequence[RowSide], full: bool) -> Table:
    lp, shown = head.model, sides if full else sides[:MOST_LINES]
    cells = tuple(
        (
            fitted(lp.rows[side.row]),
            "<=" if side.is_upper else ">=",
            number(side.side),
            number(side.reach),
            number(side.distance),
        )
        for side in shown
    )
    header = ("row", "relation", "side", "nearest row value", "distance")
    title = f"{what}: {len(cells)} of {len(sides)}"
    table = Table(title, header, cells, (False, False, True, True, True))
    return labelled(head, table, [side.row for side in shown], units=True)


def _side_name(lp: LinearProgram, side: RowSide) -> str:
    return f"row {fitted(lp.rows[side.row])} {'upper' if side.is_upper else 'lower'} side"
