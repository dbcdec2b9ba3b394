"""The mirror turned round: the rebuilt dual as the model under review.

Nothing is solved. The prices of an examined answer are a plan of the dual and its
plan is the dual's prices (`lpview.dual.dual_answer`); they are measured, judged and
flagged there by the code that checks every answer. What is slack on one side is
price on the other, so room and price change places in the marks of each line.
"""

from __future__ import annotations

import hashlib
import shlex
from dataclasses import dataclass, replace

import numpy as np

from lpview.blocks import write_blocks
from lpview.decimals import number_text
from lpview.dual import DualProgram, build_dual, dual_answer
from lpview.examination import check_answer
from lpview.kkt import Side
from lpview.labels import NO_LABELS, Label, Labels
from lpview.outcomes import Head, Optimal, Request
from lpview.reading import Notes
from lpview.sides import NOWHERE, Index


@dataclass(frozen=True, eq=False)
class Turned:
    """An examination of the dual, and which line is which."""

    found: Optimal
    """The examination of the dual; its plan is the prices of the model's answer."""
    to_dual: Index
    """Line of the dual for each line of the model, shape ``(m + n,)``, numbered as in
    `lpview.kkt`: a row's dual variable, on the side that its price names (the nearest
    one without a price), and a column's row. -1 for a row without sides."""
    to_primal: Index
    """Line of the model for each line of the dual; every one has such a line. Two
    dual variables lead to the same two-sided row, and a bound's to its column."""


def turn(found: Optimal) -> Turned:
    """Review the dual of an examined model with the answer at hand, unsolved.

    A price that names a side or bound that does not exist becomes a violation in
    the dual, and a violation a price of the wrong sign: what fails there fails here.
    """
    pair = build_dual(found.head.model)
    to_primal = _to_primal(found, pair)
    # The check's own reduced costs: an answer may report others.
    exact = replace(found.answer, z=found.measurement.columns.price)
    head = _head(found.head, pair, _labels(found.head, pair.program.m, to_primal))
    return Turned(check_answer(head, dual_answer(pair, exact)), _to_dual(found, pair), to_primal)


def _labels(head: Head, m: int, to_primal: Index) -> Labels:
    """Each line of the dual keeps the label of its own; units and groups do not turn.

    ``m`` counts the rows of the dual.
    """
    if not head.labels.rows and not head.labels.columns:
        return NO_LABELS
    own = head.model.m
    known = [
        (head.labels.row(line) if line < own else head.labels.column(line - own)).label
        for line in to_primal.tolist()
    ]
    rows, columns = (
        {k: Label(text) for k, text in enumerate(part) if text} for part in (known[:m], known[m:])
    )
    return Labels(rows, columns)


def _head(head: Head, pair: DualProgram, labels: Labels) -> Head:
    """What was asked, of the dual; the run is the one that answered the model."""
    digest = hashlib.sha256(write_blocks(pair.program).encode()).hexdigest()
    request = replace(
        head.request,
        source=f"dual of {head.request.source}",
        command=_command(head.request),
    )
    return Head(pair.program, Notes(0, 0, (), (), {}), digest, request, head.run, labels)


def _command(request: Request) -> str:
    """How to have the dual solved and checked on its own."""
    words = ["lpview", "check", "-"]
    for option, size in (("--tolerance", request.tolerance), ("--zero", request.zero)):
        if size != Request.__dataclass_fields__[option[2:]].default:
            words += [option, number_text(size)]
    return f"{shlex.join(['lpview', 'dual', request.source])} | {shlex.join(words)}"


def _to_dual(found: Optimal, pair: DualProgram) -> Index:
    lp, places = found.head.model, pair.form.places
    low, high = places.row_lower, places.row_upper
    variable = np.where(_is_lower(found.measurement.rows, found.marks.priced[: lp.m]), low, high)
    variable = np.where(variable == NOWHERE, np.maximum(low, high), variable)
    lines = np.where(variable == NOWHERE, NOWHERE, lp.n + variable)
    return np.concatenate([lines, np.arange(lp.n)])


def _is_lower(side: Side, priced: np.ndarray) -> np.ndarray:
    """Whether a line belongs to its lower end, by its price or else by its slack."""
    return np.where(priced, side.named_lower, side.below <= side.above)


def _to_primal(found: Optimal, pair: DualProgram) -> Index:
    lp, places = found.head.model, pair.form.places
    variables = np.full(pair.program.n, NOWHERE)
    for first, ends in (
        (0, (places.row_lower, places.row_upper)),
        (lp.m, (places.lower, places.upper)),
    ):
        for place in ends:
            stands = np.flatnonzero(place != NOWHERE)
            variables[place[stands]] = first + stands
    return np.concatenate([lp.m + np.arange(lp.n), variables])
