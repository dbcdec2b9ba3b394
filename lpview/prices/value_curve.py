"""Asking for a value curve, and cutting it to what was asked for."""

from __future__ import annotations

import math
import time
from collections.abc import Sequence
from dataclasses import replace

from lpview.examination import check_answer, examine
from lpview.model import LinearProgram
from lpview.outcomes import Examination, Optimal, SecondRoute, Stopped
from lpview.prices.curve import Beyond, Curve, NoCurve, Piece, Recorded, Why, is_same, size
from lpview.prices.number import Number
from lpview.prices.walk import Ask, Place, Walk
from lpview.prices.work import Prices
from lpview.reading import Reading
from lpview.run import Claim, Solved, Solver, Watch
from lpview.warm import WarmMaker

BREAKPOINTS = 3
"""Breakpoints looked for each way unless a span is asked for."""


def value_curve(
    found: Optimal,
    number: Number,
    ask: Ask,
    warm: WarmMaker,
    span: tuple[float, float] | None = None,
    record: Sequence[int] = (),
    steps: int = 0,
) -> Curve | NoCurve:
    """Find the value curve of one number.

    Parameters
    ----------
    found
        The verified answer at the number as it stands.
    ask
        Solves and checks the model with the number moved, in the same way.
    warm
        As for `lpview.prices.work_out`.
    span
        Least and greatest number to look at; by default up to the third breakpoint each
        way and one more piece.
    record
        Lines whose values and prices are found at every place of the table
        (`Curve.places`).
    steps
        Equal steps of that table over the span.
    """
    walk = Walk(found.head.model, number, ask, warm)
    start = walk.start(found, span)
    if isinstance(start, NoCurve):
        return start
    low, high = span or (-math.inf, math.inf)
    most = BREAKPOINTS if span is None else None
    below, under = walk.along(start, False, low, most)
    above, over = walk.along(start, True, high, most)
    pieces = _joined([*below[::-1], *above])
    if span is None:
        pieces, under, over = _cut(pieces, start.at, (under, over))
    if not pieces and start.at != number.of(found.head.model):
        reason = f"within the span there is an optimum at {start.at:.12g} only"
        return NoCurve(Why.ONE_POINT, f"{reason}; it is {start.objective:.12g}")
    ends = (pieces[0].start, pieces[-1].end) if pieces else (start.at, start.at)
    curve = Curve(
        lp=found.head.model,
        number=number,
        now=number.of(found.head.model),
        objective=found.measurement.primal_objective,
        span=span or ends,
        pieces=tuple(pieces),
        below=under,
        above=over,
        joints=tuple(walk.joints),
        unsolved=walk.unsolved,
        stopped=walk.stopped,
        steps=steps,
    )
    return _recorded(curve, walk, start, record) if record else curve


def asking(found: Optimal, solve: Solver, watch: Watch, deadline: float | None = None) -> Ask:
    """Solves and checks other models as the one of ``found`` was; ``deadline`` is a reading
    of `time.monotonic`."""
    head = found.head

    def ask(lp: LinearProgram) -> Examination:
        left = None if deadline is None else deadline - time.monotonic()
        if watch.stop.is_set() or (left is not None and left <= 0):
            claim = Claim.INTERRUPTED if watch.stop.is_set() else Claim.TIME_LIMIT
            return Stopped(replace(head, model=lp, run=replace(head.run, claim=claim)))
        settings = replace(head.request.solve, time_limit=left)
        result = solve(lp, settings, watch)
        if isinstance(result, Solved):
            return check_answer(replace(head, model=lp, run=result.run), result.answer)
        # Whatever the claim, it needs a certificate.
        request = replace(head.request, solve=settings, second_route=SecondRoute.NEVER)
        return examine(Reading(lp, head.notes, head.labels), request, solve, watch)

    return ask


def _recorded(curve: Curve, walk: Walk, start: Place, lines: Sequence[int]) -> Curve:
    """The same curve with the values and prices of some lines along it."""
    found: dict[int, dict[float, Recorded | None]] = {line: {} for line in lines}
    for at in curve.places:
        place = start if at == start.at else walk.place(at)
        if place is Beyond.STOPPED:
            break
        for line in lines:
            seen = _seen(place.prices, line) if isinstance(place, Place) else None
            found[line][at] = seen
    return replace(curve, recorded=found, stopped=walk.stopped)


def _seen(prices: Prices, line: int) -> Recorded:
    return Recorded(*prices.value_interval(line), *prices.interval(line))


def _joined(pieces: list[Piece]) -> list[Piece]:
    """Pieces in order, one where the rate does not change."""
    joined: list[Piece] = []
    for piece in pieces:
        if joined and is_same(joined[-1].rate, piece.rate):
            last = joined.pop()
            piece = Piece(last.start, piece.end, last.rate, last.anchor, last.objective)
        joined.append(piece)
    return joined


def _cut(
    pieces: list[Piece], now: float, beyond: tuple[Beyond, Beyond]
) -> tuple[list[Piece], Beyond, Beyond]:
    """The same with long outermost pieces cut, so that a picture shows what matters.

    A piece that ends where no optimum is left stays whole.
    """
    under, over = beyond
    if not pieces:
        return pieces, under, over
    pieces = pieces[:]
    # The piece with the number as it stands first: it gives the other its measure.
    ends = (False, True) if now <= pieces[0].end else (True, False)
    for is_upper in ends:
        if (over if is_upper else under).is_end:
            continue
        k, other = (-1, -2) if is_upper else (0, 1)
        piece = pieces[k]
        inner = piece.start if is_upper else piece.end
        around = pieces[other] if len(pieces) > 1 else None
        length = _shown(piece, around, now, inner)
        if is_upper:
            pieces[k] = replace(piece, end=min(piece.end, _base(inner, now) + length))
        else:
            pieces[k] = replace(piece, start=max(piece.start, _base(inner, now) - length))
    return pieces, under, over


def _base(inner: float, now: float) -> float:
    return now if math.isinf(inner) else inner


def _shown(piece: Piece, around: Piece | None, now: float, inner: float) -> float:
    """How much of an outermost piece is shown: as much as of its neighbour."""
    length = around.end - around.start if around is not None else 0.0
    own = 2 * abs(now - _base(inner, now)) if piece.start <= now <= piece.end else 0.0
    return max(length if math.isfinite(length) else 0.0, own) or size(now)
