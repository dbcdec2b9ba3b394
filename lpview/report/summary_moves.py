"""Moves that leave no plan at once, on the page for whoever decides."""

from __future__ import annotations

from collections.abc import Sequence

from lpview.priced import Priced, without_plan
from lpview.report.numbers import count
from lpview.report.prices import is_lower
from lpview.report.summary_names import limit_name, nobody_set

MOST_MOVES = 5
"""Moves that are named."""

WAYS = ("less of", "more required of", "less required of", "more or less required of")
"""What can be moved, and which way, in the order in which it is told."""


def without_plan_words(priced: Priced, told: Sequence[int]) -> list[str]:
    """Which moves leave no plan at once; of the lines in ``told`` the page has told it."""
    moves = _moves(priced, told)
    sentences = []
    if moves:
        sentences.append(
            f"With even slightly {_named(priced, moves[:MOST_MOVES])}, no plan is left."
        )
    if len(moves) > MOST_MOVES:
        further = count(len(moves) - MOST_MOVES, "further limit")
        sentences.append(f"The same holds for {further}.")
    if priced.stopped is not None:
        sentences.append("Whether any other move leaves no plan at once was not found out.")
    return sentences


def _moves(priced: Priced, told: Sequence[int]) -> list[tuple[str, int]]:
    """A way and a line for each move, in model order."""
    found = priced.found
    ways: dict[tuple[int, bool | None], str] = {}
    nobody = nobody_set(found.head.model)
    known = {line for line in told if line in priced.lines}
    for line, up in without_plan(priced):
        if not found.marks.paired[line]:
            if line not in known:
                ways[line, None] = WAYS[3] if (line, None) in ways else WAYS[1 if up else 2]
        elif not (up and nobody[line]) and not (line in known and is_lower(found, line) == up):
            ways[line, up] = WAYS[1 if up else 0]
    return [(way, line) for (line, _), way in ways.items()]


def _named(priced: Priced, moves: Sequence[tuple[str, int]]) -> str:
    """``less of u10 or u11, or more required of heat``."""
    parts = []
    for way in WAYS:
        names = [limit_name(priced.found.head.model, line) for each, line in moves if each == way]
        if names:
            *others, last = names
            parts.append(f"{way} {', '.join(others)}{' or ' * bool(others)}{last}")
    return ", or ".join(parts)
