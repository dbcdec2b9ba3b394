"""Waiting for what the screen does in the background, and never just for a time."""

from __future__ import annotations

import time
from collections.abc import Callable
from typing import Any

from lpview.screen.price_book import State

FOR_EVER = 100.0
"""Seconds after which what is waited for will never come."""


async def until(pilot: Any, is_so: Callable[[], bool]) -> None:
    """Let the program go on until something is so."""
    started = time.monotonic()
    while not is_so():
        await pilot.pause()
        assert time.monotonic() - started < FOR_EVER, "waited in vain"


async def until_priced(pilot: Any) -> None:
    """Let the program go on until nothing is left to be found out about prices."""
    screen = pilot.app.screen
    await until(pilot, lambda: screen.book.state in (State.DONE, State.NONE))
    await pilot.pause()
