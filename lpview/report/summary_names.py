"""What limits are called on the page for whoever decides, and which of them nobody set."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from lpview.marks import Mask
from lpview.model import LinearProgram
from lpview.outcomes import Head
from lpview.report.names import fitted
from lpview.report.units import label_of

MOST_NAMED = 7
"""Lines named in a sentence."""


def nobody_set(lp: LinearProgram) -> Mask:
    """Lines whose lower end is no limit that anybody set, shape ``(m + n,)``.

    These are columns with a lower bound of 0: nobody asks for less than nothing of a thing.
    """
    return np.concatenate([np.zeros(lp.m, dtype=bool), (lp.lower == 0.0) & ~lp.is_fixed])


def named(names: Sequence[str]) -> str:
    """The first names of a list, and how many more there are."""
    more = f" and {len(names) - MOST_NAMED} more" if len(names) > MOST_NAMED else ""
    return ", ".join(names[:MOST_NAMED]) + more


def limit_name(lp: LinearProgram, line: int) -> str:
    """``heat``, or ``the amount of tomato`` for a column."""
    if line < lp.m:
        return fitted(lp.rows[line])
    return f"the amount of {fitted(lp.columns[line - lp.m])}"


def with_label(head: Head, line: int, limit: str = "") -> str:
    """The same with the label of the line, if it has one, and a text on its limit, if any."""
    about = ", ".join(filter(None, [fitted(label_of(head, line).label), limit]))
    return limit_name(head.model, line) + (f" ({about})" if about else "")
