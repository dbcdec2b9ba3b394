"""From parsed options to the open screen; imports nothing numeric before the first frame."""

from __future__ import annotations

import argparse
from collections.abc import Callable
from typing import TYPE_CHECKING

from lpview.screen.app import Work, run

if TYPE_CHECKING:
    from lpview.outcomes import Examination
    from lpview.run import Watch


def launch(options: argparse.Namespace) -> int:
    """Open the mirror on one model; returns the exit status."""

    def examine(watch: Watch, say: Callable[[str], None]) -> Examination:
        from lpview.commands.arriving import examined_quietly

        return examined_quietly(options.model, options, watch, say)

    return run(Work(options.model, examine), options.ascii)
