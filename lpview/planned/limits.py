"""Limits that rows have of their own: the largest violation allowed, in the row's unit."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from lpview.blocks.mistakes import InputError, Mistake, quoted
from lpview.model import LinearProgram, Vector


@dataclass(frozen=True, eq=False)
class Limits:
    """The largest violation allowed on each line that has a limit of its own."""

    amount: Vector
    """In the row's own unit, >= 0, shape ``(m + n,)``; nan for a line without one."""

    @property
    def given(self) -> NDArray[np.bool_]:
        """Lines that have one, shape ``(m + n,)``."""
        return ~np.isnan(self.amount)


def limits_of(lp: LinearProgram, source: str, asked: Sequence[tuple[str, float]]) -> Limits:
    """The limits of all lines; of several patterns that match a row the last one counts.

    Parameters
    ----------
    source
        The model as the person named it, for messages.
    asked
        Patterns and amounts: ``*`` stands for any characters, also none, ``?`` for one; all
        others for themselves. A pattern must match a whole name.

    Raises
    ------
    InputError
        For patterns that match no row.
    """
    amount = np.full(lp.m + lp.n, np.nan)
    mistakes = []
    for pattern, most in asked:
        rows = [i for i, name in enumerate(lp.rows) if _matches(pattern, name)]
        amount[rows] = most
        if not rows:
            expected = "a pattern that matches a row"
            mistakes.append(
                Mistake(
                    source,
                    expected,
                    quoted(pattern),
                    field="--limit",
                    name=pattern,
                    choices=lp.rows,
                )
            )
    if mistakes:
        raise InputError(mistakes)
    return Limits(amount)


def _matches(pattern: str, name: str) -> bool:
    """Whether a pattern matches a whole name; goes back to the last star only, so never long."""
    at = here = 0
    star = resume = -1
    while here < len(name):
        if at < len(pattern) and pattern[at] == "*":
            star, resume = at, here
            at += 1
        elif at < len(pattern) and pattern[at] in ("?", name[here]):
            at, here = at + 1, here + 1
        elif star >= 0:
            resume += 1
            at, here = star + 1, resume
        else:
            return False
    return not pattern[at:].strip("*")
