"""What a proof changes about an examination: which zeros are zeros, and how it ended."""

from __future__ import annotations

from dataclasses import dataclass, replace
from fractions import Fraction

import numpy as np

from lpview.answer import LineStatus
from lpview.decimals import exact_value
from lpview.marks import Flag, Marks, Mask
from lpview.model import LinearProgram
from lpview.outcomes import Examination, NoOptimum, Optimal
from lpview.proof.results import Proof, ProvedInfeasible, ProvedOptimal, ProvedUnbounded
from lpview.repair.search import Infeasible


def with_exact_zeros(found: Optimal, proof: ProvedOptimal) -> Optimal:
    """The examination with marks and flags that follow exact zeros.

    Flags that say that the answer in doubles fails a condition stay.
    """
    marks = found.marks
    basic = np.concatenate(
        [proof.basis.row == LineStatus.BASIC, proof.basis.column == LineStatus.BASIC]
    )
    zero_slack, zero_price = proof.zero_slack, proof.zero_price
    flags = {
        **marks.flags,
        Flag.ZERO_SLACK: zero_slack,
        Flag.BOTH_ZERO: marks.paired & zero_slack & zero_price,
        Flag.DEGENERATE: basic & zero_slack,
        Flag.OTHER_PLAN: marks.paired & ~basic & zero_price,
    }
    ordered = {flag: flags[flag] for flag in Flag if flag in flags}
    return replace(found, marks=Marks(~zero_slack, ~zero_price, marks.paired, ordered))


def only_look_zero(found: Optimal, proof: ProvedOptimal) -> tuple[Mask, Mask]:
    """Lines whose slack, and lines whose price, counts as zero and is not; ``(m + n,)``.

    ``found`` has the marks of the tolerance.
    """
    slack = ~found.marks.room & ~proof.zero_slack
    price = ~found.marks.priced & ~proof.zero_price
    return slack, price


@dataclass(frozen=True)
class ExactLine:
    """The exact numbers of one row or column."""

    value: Fraction
    """Row value or variable."""
    below: Fraction | None
    """Slack to the lower side or bound; None without one."""
    above: Fraction | None
    """Slack to the upper one."""
    price: Fraction
    """Dual value or reduced cost, in the model's own sense."""


def exact_line(lp: LinearProgram, proof: ProvedOptimal, line: int) -> ExactLine:
    """Work out one line, numbered as in `lpview.kkt`."""
    if line < lp.m:
        begin, end = int(lp.A.indptr[line]), int(lp.A.indptr[line + 1])
        places, partners = range(begin, end), lp.A.indices[begin:end].tolist()
        value = sum(
            (_number(lp, "A", k) * proof.x[j] for k, j in zip(places, partners, strict=True)),
            Fraction(0),
        )
        ends = ("row_lower", "row_upper")
        return _exact_line(lp, value, ends, line, proof.y[line])
    j = line - lp.m
    A = lp.A_by_column
    begin, end = int(A.indptr[j]), int(A.indptr[j + 1])
    places, partners = lp.by_column_order[begin:end].tolist(), A.indices[begin:end].tolist()
    used = sum(
        (_number(lp, "A", k) * proof.y[i] for k, i in zip(places, partners, strict=True)),
        Fraction(0),
    )
    return _exact_line(lp, proof.x[j], ("lower", "upper"), j, _number(lp, "c", j) - used)


def _exact_line(
    lp: LinearProgram, value: Fraction, ends: tuple[str, str], k: int, price: Fraction
) -> ExactLine:
    low, high = (None if np.isinf(getattr(lp, end)[k]) else _number(lp, end, k) for end in ends)
    below = None if low is None else value - low
    above = None if high is None else high - value
    return ExactLine(value, below, above, price)


def _number(lp: LinearProgram, part: str, k: int) -> Fraction:
    values = lp.A.data if part == "A" else getattr(lp, part)
    return exact_value(float(values[k]), lp.odd.get(part, {}).get(k))


def contradicts(found: Examination, proof: Proof) -> bool:
    """Whether a proof says another thing than the solver."""
    if isinstance(proof, ProvedOptimal):
        return isinstance(found, NoOptimum)
    if isinstance(proof, ProvedInfeasible):
        certified = isinstance(found, NoOptimum) and isinstance(found.certificate, Infeasible)
        return isinstance(found, (Optimal, NoOptimum)) and not certified
    if isinstance(proof, ProvedUnbounded):
        certified = isinstance(found, NoOptimum) and not isinstance(found.certificate, Infeasible)
        return isinstance(found, (Optimal, NoOptimum)) and not certified
    return False
