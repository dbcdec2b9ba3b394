"""The verdict strip: status, objective, one gauge per condition, counts, and progress."""

from __future__ import annotations

import math
from pathlib import PurePath

import numpy as np
from rich.segment import Segment
from textual.strip import Strip
from textual.widget import Widget

from lpview.kkt import Condition
from lpview.marks import Flag
from lpview.outcomes import Optimal
from lpview.report.heads import title
from lpview.report.names import fitted, width
from lpview.report.numbers import number
from lpview.report.units import in_units, objective_unit
from lpview.screen.pane import FAULT, HEADING, PLAIN, Runs
from lpview.screen.price_book import PriceBook
from lpview.screen.spine import Glyphs
from lpview.verdict import Verdict

LINES = (
    (),
    (Condition.PRIMAL, Condition.DUAL, Condition.STATIONARITY),
    (Condition.COMPLEMENTARITY, Condition.GAP),
)
"""Which gauges stand in which line of the strip; the first line has none."""

LOWEST = -17.0
"""Decimal exponent at which a gauge is empty; at the tolerance it is full."""

LONGEST_GAUGE = 12
"""Cells of a gauge at most."""

MOST_DIGITS = 12
"""Digits of the objective, where they fit."""

LEAST_DIGITS = 6
"""Digits of the objective, however narrow the screen."""

SHORTEST_NAME = 16
"""Cells that the model's name keeps before the objective loses digits."""


def strip_lines(
    found: Optimal, cells: int, glyphs: Glyphs, progress: str, proof: str = ""
) -> list[Runs]:
    """The strip at a width, line by line.

    ``progress`` is that of the prices; ``proof``, where there is one or it is being worked
    out, stands in place of the check's own word.
    """
    judged = {verdict.condition: verdict for verdict in found.verdicts}
    middle, last = ([judged[condition] for condition in line] for line in LINES[1:])
    room = cells - len(progress) - 2
    return [
        _first(found, cells, glyphs, proof),
        _gauges(middle, cells, glyphs),
        [*_gauges(last, room, glyphs), (progress, PLAIN)],
    ]


def _first(found: Optimal, cells: int, glyphs: Glyphs, proof: str) -> Runs:
    flags = found.marks.flags
    word, style = ("verified", HEADING) if found.passed else ("NOT VERIFIED", FAULT)
    if proof:
        word, style = proof, FAULT if proof.isupper() else HEADING
    counts = [f"zero slack {np.count_nonzero(flags[Flag.ZERO_SLACK])}"]
    if Flag.DEGENERATE in flags:
        counts.append(f"degenerate {np.count_nonzero(flags[Flag.DEGENERATE])}")
    head = found.head
    name = title(head, PurePath(head.request.source).name)
    unit = objective_unit(head)
    for digits in range(MOST_DIGITS, LEAST_DIGITS - 1, -1):
        objective = in_units(number(found.measurement.primal_objective, digits), unit)
        sense = head.model.sense.value
        tail = f"  {sense}  optimal {objective} {word}  {'  '.join(counts)}"
        if width(tail) + min(width(name), SHORTEST_NAME) <= cells:
            break
    return [(fitted(name, max(cells - width(tail), 1), glyphs.more) + tail, style)]


def _gauges(verdicts: list[Verdict], cells: int, glyphs: Glyphs) -> Runs:
    texts = [_text(verdict) for verdict in verdicts]
    words = sum(len(verdict.condition.value) for verdict in verdicts) + sum(map(len, texts))
    spare = cells - words - 4 * len(verdicts) + 2
    bar = min(max(spare // len(verdicts), 1), LONGEST_GAUGE)
    runs: Runs = []
    for verdict, text in zip(verdicts, texts, strict=True):
        style = FAULT if verdict.passed is False else PLAIN
        runs.append((f"{verdict.condition.value} {_gauge(verdict, bar, glyphs)} {text}  ", style))
    return runs


def _text(verdict: Verdict) -> str:
    if verdict.passed is None:
        return "by definition"
    return number(verdict.scaled, 1) + (" FAILED" if not verdict.passed else "")


def _gauge(verdict: Verdict, bar: int, glyphs: Glyphs) -> str:
    """Residual against tolerance on a log scale, full where it fails."""
    share = 0.0
    if verdict.passed is False:
        share = 1.0
    elif verdict.scaled > 0:
        top = math.log10(verdict.tolerance)
        share = (math.log10(verdict.scaled) - LOWEST) / max(top - LOWEST, 1.0)
    share = min(max(share, 0.0), 1.0)
    if bar < 3:
        return glyphs.bars[round(share * (len(glyphs.bars) - 1))]
    filled = round(share * bar)
    return glyphs.filled_bar * filled + glyphs.empty_bar * (bar - filled)


class VerdictStrip(Widget):
    """Draws the strip of one examination."""

    DEFAULT_CSS = "VerdictStrip { height: 3; }"

    def __init__(self, found: Optimal, glyphs: Glyphs, book: PriceBook) -> None:
        super().__init__(id="strip")
        self.found, self.glyphs, self.book = found, glyphs, book
        self.proof = ""

    def render_line(self, y: int) -> Strip:
        """One line of the strip."""
        progress = self.book.progress()
        lines = strip_lines(self.found, self.size.width, self.glyphs, progress, self.proof)
        segments = [Segment(text, style) for text, style in lines[y]] if y < len(lines) else []
        return Strip(segments).adjust_cell_length(self.size.width, self.rich_style)
