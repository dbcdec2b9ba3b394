"""Flags and spine marks: what each line is, judged within stated tolerances.

Lines are numbered as in :mod:`lpview.kkt`: rows first, then columns. The words
are those of :mod:`lpview.model`, "Flags".
"""

from __future__ import annotations

import enum
from collections.abc import Mapping
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from lpview.answer import Basis, LineStatus
from lpview.kkt import Condition, Measurement, Side
from lpview.model import LinearProgram

Mask = NDArray[np.bool_]


class Flag(enum.Enum):
    """Words for a line, the same in reports, filters and marks."""

    ZERO_SLACK = "zero slack"
    """The value sits at a side or bound, within the zero tolerance."""
    DEGENERATE = "degenerate"
    """A basic line with zero slack, which carries no price of its own."""
    BOTH_ZERO = "both zero"
    """A complementary pair with slack and price both zero."""
    OTHER_PLAN = "possible other plan"
    """A nonbasic line whose price is zero."""
    NOT_UNIQUE = "price not unique"
    """The price is not the same in all optimal dual solutions."""
    VIOLATED = "violated"
    """The value lies outside its ends, beyond the tolerance."""
    WRONG_SIGN = "wrong sign"
    """The price names a side or bound that does not exist, beyond the tolerance."""
    PRODUCT = "product not zero"
    """Price times the distance to its side exceeds the tolerance."""


NEED_BASIS = (Flag.DEGENERATE, Flag.OTHER_PLAN)
"""Flags that cannot be known for an answer without a basis."""

NEED_PRICES = (Flag.NOT_UNIQUE,)
"""Flags that are known only once prices have been worked out (`with_prices`)."""


FAULTS = {
    Flag.VIOLATED: Condition.PRIMAL,
    Flag.WRONG_SIGN: Condition.DUAL,
    Flag.PRODUCT: Condition.COMPLEMENTARITY,
}
"""Flags of lines that break a condition, with that condition."""


@dataclass(frozen=True)
class Marks:
    """Masks over all lines, shape ``(m + n,)`` each."""

    room: Mask
    """Slack beyond the zero tolerance: the left mark of the spine."""
    priced: Mask
    """Price beyond the zero tolerance: the right mark of the spine."""
    paired: Mask
    """Lines with a complementary pair: neither equality rows nor fixed columns."""
    flags: Mapping[Flag, Mask]
    """Lines that carry each flag; those of `NEED_BASIS` only with a basis, those of
    `NEED_PRICES` only with prices."""

    def of(self, line: int) -> tuple[Flag, ...]:
        """The flags of one line, in the order of `Flag`."""
        return tuple(flag for flag, mask in self.flags.items() if mask[line])


def mark(
    lp: LinearProgram,
    found: Measurement,
    basis: Basis | None,
    tolerance: float,
    zero: float,
) -> Marks:
    """Judge every line.

    Parameters
    ----------
    tolerance
        Largest scaled residual that is not yet a violation, wrong sign or product.
    zero
        Scaled size up to which a slack or a price counts as zero.
    """
    room = _joined(~_slack_is_zero(found.rows, zero), ~_slack_is_zero(found.columns, zero))
    priced = _joined(_has_price(found.rows, zero), _has_price(found.columns, zero))
    paired = ~_joined(lp.is_equality, lp.is_fixed)
    flags = {Flag.ZERO_SLACK: ~room, Flag.BOTH_ZERO: paired & ~room & ~priced}
    if basis is not None:
        basic = _joined(basis.row == LineStatus.BASIC, basis.column == LineStatus.BASIC)
        flags[Flag.DEGENERATE] = basic & ~room
        flags[Flag.OTHER_PLAN] = paired & ~basic & ~priced
    for flag, condition in FAULTS.items():
        flags[flag] = ~(found.residuals[condition].scaled <= tolerance)
    return Marks(room, priced, paired, {flag: flags[flag] for flag in Flag if flag in flags})


def with_prices(marks: Marks, not_unique: Mask) -> Marks:
    """The same marks, with the lines whose price is not unique; shape ``(m + n,)``."""
    flags = {**marks.flags, Flag.NOT_UNIQUE: not_unique}
    return replace(marks, flags={flag: flags[flag] for flag in Flag if flag in flags})


def _slack_is_zero(side: Side, zero: float) -> Mask:
    term = np.maximum(side.value_term, np.abs(side.value))
    at_end: Mask = np.abs(side.slack) <= zero * np.maximum(1.0, term)
    return at_end


def _has_price(side: Side, zero: float) -> Mask:
    has: Mask = np.abs(side.price) > zero * np.maximum(1.0, side.price_term)
    return has


def _joined(rows: Mask, columns: Mask) -> Mask:
    return np.concatenate([rows, columns])
