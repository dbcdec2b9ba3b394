"""Exit statuses of every command."""

from __future__ import annotations

from collections.abc import Sequence

DONE, FAILED, USAGE, NO_OPTIMUM, NOT_ESTABLISHED = 0, 1, 2, 3, 4
"""Exit statuses of every command; README.md says what each means."""

_WORST_FIRST = (USAGE, FAILED, NOT_ESTABLISHED, NO_OPTIMUM, DONE)
"""Of several models, the first of these that occurred is the exit status."""


def worst(statuses: Sequence[int]) -> int:
    """The exit status for several models."""
    return next(status for status in _WORST_FIRST if status in statuses)
