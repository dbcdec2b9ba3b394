"""Work done in a second thread while the solver, which lets other threads run, is busy."""

from __future__ import annotations

import threading
from collections.abc import Callable
from typing import Generic, TypeVar

Result = TypeVar("Result")


class Meanwhile(Generic[Result]):
    """Starts a function at once; `result` waits for it."""

    def __init__(self, work: Callable[[], Result]) -> None:
        self._work = work
        self._results: list[Result] = []
        self._error: BaseException | None = None
        self._thread = threading.Thread(target=self._run, daemon=True)
        self._thread.start()

    def _run(self) -> None:
        try:
            self._results.append(self._work())
        except BaseException as error:
            self._error = error

    def is_running(self, seconds: float) -> bool:
        """Whether the work still goes on after waiting for so long."""
        self._thread.join(seconds)
        return self._thread.is_alive()

    def result(self) -> Result:
        """What the function returned; raises here what it raised there."""
        self._thread.join()
        if self._error is not None:
            raise self._error
        return self._results[0]
