"""The screen on a synthetic examination, for `tests.benchmarks.screen` to drive.

    python -m tests.benchmarks.screen_child LINES LOG

Writes to LOG, a line each: ``memory BYTES``, resident when the examination is built and
nothing of the screen is imported, and ``solved SECONDS``, the monotonic clock (which all
processes share) when the worker hands the examination over.
"""

from __future__ import annotations

import ctypes
import gc
import sys
import time
from pathlib import Path
from typing import TYPE_CHECKING

from tests.benchmarks.models import examined

if TYPE_CHECKING:
    from textual.app import App

    from lpview.outcomes import Optimal

SETTLE = 0.4
"""Seconds of pretended solving, so that the working screen stands when it ends."""


def app_for(found: Optimal, log: Path) -> App[int]:
    """The program with a worker that has nothing left to do; adapt it here if it changes."""
    from lpview.screen.app import LpviewApp, Work

    def examine(*_: object) -> Optimal:
        time.sleep(SETTLE)
        with log.open("a") as stream:
            stream.write(f"solved {time.monotonic()!r}\n")
        return found

    return LpviewApp(Work("synthetic.csv", examine))


def resident(field: str = "VmRSS", process: str = "self") -> int:
    """Memory of a process in bytes: resident now, or at most (``VmHWM``)."""
    for line in Path(f"/proc/{process}/status").read_text().splitlines():
        name, _, rest = line.partition(":")
        if name == field:
            return int(rest.split()[0]) * 1024
    raise LookupError(field)


def give_back() -> None:
    """Return freed memory to the system and forget the most that was ever resident."""
    gc.collect()
    ctypes.CDLL(None).malloc_trim(0)
    Path("/proc/self/clear_refs").write_text("5")


def main(lines: int, log: Path) -> None:
    """Build, note the memory, and open the screen."""
    found = examined(lines)
    give_back()
    log.write_text(f"memory {resident()}\n")
    app_for(found, log).run()


if __name__ == "__main__":
    main(int(sys.argv[1]), Path(sys.argv[2]))
