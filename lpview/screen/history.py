"""The lines visited by links and jumps, and where in them the person is."""

from __future__ import annotations


class History:
    """Back and forward through lines, as numbered in `lpview.kkt`."""

    def __init__(self) -> None:
        self._before: list[int] = []
        self._after: list[int] = []

    def visit(self, origin: int, target: int) -> None:
        """Remember where a jump came from; what lay ahead is forgotten."""
        if origin >= 0 and origin != target:
            self._before.append(origin)
            self._after.clear()

    def back(self, here: int) -> int | None:
        """The line visited before this one."""
        if not self._before:
            return None
        self._after.append(here)
        return self._before.pop()

    def forward(self, here: int) -> int | None:
        """The line visited after this one."""
        if not self._after:
            return None
        self._before.append(here)
        return self._after.pop()
