"""Prices found in the background: what is asked next, and what is told when.

`lpview.prices` is not for several threads: one thread at a time asks it, begun whenever
something is left to ask and ended when nothing is. The selected line comes first, however
often the selection moves, then all rows, then all columns. What is found travels to the
screen as messages, a few a second. Knows no widgets.
"""

from __future__ import annotations

import threading
import time
from collections import deque
from collections.abc import Callable
from dataclasses import dataclass

from textual.message import Message

from lpview.cli import told
from lpview.marks import Mask
from lpview.model import Vector
from lpview.outcomes import Optimal
from lpview.prices import NoPrices, Prices, work_out
from lpview.screen.price_book import Result, State
from lpview.warm import Descent, Index, Lost, Vertex, WarmMaker, WarmModel

EVERY = 0.1
"""Seconds between two messages with lines that nobody is waiting for."""

QUIET = 0.05
"""Seconds without a key before the next question: keys are answered first."""

MOST_FAILED = 10
"""Lines that may fail before the work is given up."""


class PricesBegun(Message):
    """It is known which prices are not unique."""

    def __init__(self, not_unique: Mask) -> None:
        super().__init__()
        self.not_unique = not_unique


class PricesFound(Message):
    """Some lines were examined."""

    def __init__(self, lines: dict[int, Result]) -> None:
        super().__init__()
        self.lines = lines


class PricesEnded(Message):
    """Nothing is examined any more: all is done, it was stopped, or it cannot be done."""

    def __init__(self, state: State, reason: str = "") -> None:
        super().__init__()
        self.state, self.reason = state, reason


@dataclass(frozen=True)
class Question:
    """Something that is asked beside the lines, and before them."""

    about: object
    """What it is about, for whoever gets the answer."""
    ask: Callable[[Prices], object]
    """Asks it, in the thread."""


class Answered(Message):
    """A question has its answer, or ``problem`` says why not."""

    def __init__(self, about: object, answer: object, problem: str = "") -> None:
        super().__init__()
        self.about, self.answer, self.problem = about, answer, problem


class _LeftError(Exception):
    """Nobody waits for the question that was about to be asked."""


class Pricing:
    """The questions that are left, and the thread that asks them.

    `begin` says whether a thread has to be started; it then runs `run`. Everything else
    is called by the screen, at any time, and waits for nothing.
    """

    def __init__(self, found: Optimal, post: Callable[[Message], object]) -> None:
        self._found, self._post = found, post
        self._lock = threading.Lock()
        self._left = threading.Event()
        self._is_cancelled: Callable[[], bool] = lambda: False
        self._prices: Prices | NoPrices | None = None
        self._questions: deque[Question] = deque()
        self._is_answering = False
        self._is_known = bytearray(found.marks.room.size)
        self._place = 0
        self._selected = -1
        self._quiet_until = 0.0
        self._batch: dict[int, Result] = {}
        self._posted = -EVERY
        self._failed = 0
        self._running = False
        self.is_paused = False
        """Whether lines wait until `go_on`."""

    # For the screen ----------------------------------------------------------

    def select(self, line: int) -> None:
        """Examine a line next; -1 for none."""
        self._selected = line

    def give_way(self) -> None:
        """A key was pressed: wait a moment before the next question."""
        self._quiet_until = time.monotonic() + QUIET

    def pause(self) -> None:
        """Examine no further line after the present one."""
        self.is_paused = True

    def go_on(self) -> None:
        """Examine lines again."""
        self.is_paused = False

    def ask(self, question: Question) -> None:
        """Ask something before any further line, paused or not."""
        with self._lock:
            self._questions.append(question)

    def leave(self) -> None:
        """Stop for good, before the solver is asked again."""
        self._left.set()

    def begin(self) -> bool:
        """Whether there is something to do and no thread that does it: start one then."""
        with self._lock:
            is_needed = bool(self._questions) or self._has_line
            if self._running or self._left.is_set() or not is_needed:
                return False
            self._running = True
            return True

    # In the thread -----------------------------------------------------------

    def run(self, warm: WarmMaker, is_cancelled: Callable[[], bool] = lambda: False) -> None:
        """Ask until nothing is left; raises nothing."""
        self._is_cancelled = is_cancelled
        while True:
            try:
                self._ask_all(warm)
                return
            except _LeftError:
                with self._lock:
                    if self._is_left or (self.is_paused and not self._questions):
                        self._end()
                        return
            except Exception as error:  # said on the screen; the terminal sees no traceback
                self._prices = NoPrices(told(error)[0])

    def _ask_all(self, warm: WarmMaker) -> None:
        while (task := self._next()) is not None:
            prices = self._prepared(warm)
            if isinstance(task, Question):
                self._answer(task, prices)
            elif isinstance(prices, Prices):
                self._wait_for_quiet()
                self._examine(task, prices)

    def _next(self) -> Question | int | None:
        """What to ask now; None ends the thread, and another may be started."""
        with self._lock:
            self._is_answering = bool(self._questions)
            if self._questions:
                return self._questions.popleft()
            line = self._next_line() if self._has_line else None
            if line is None:
                self._end()
            return line

    @property
    def _has_line(self) -> bool:
        is_refused = isinstance(self._prices, NoPrices)
        return not self.is_paused and not is_refused and self._is_known.find(0) >= 0

    def _next_line(self) -> int:
        line = self._selected
        if 0 <= line < len(self._is_known) and not self._is_known[line]:
            return line
        self._place = self._is_known.find(0, self._place)
        return self._place

    def _end(self) -> None:
        """No thread asks any more; only with the lock held."""
        self._running = False
        self._flush()
        if isinstance(self._prices, NoPrices):
            self._say(PricesEnded(State.NONE, self._prices.reason))
        else:
            is_done = self._is_known.find(0) < 0
            self._say(PricesEnded(State.DONE if is_done else State.STOPPED))

    def _prepared(self, warm: WarmMaker) -> Prices | NoPrices:
        if self._prices is None:
            self._prices = work_out(self._found, self._interruptible(warm))
            if isinstance(self._prices, Prices):
                self._say(PricesBegun(self._prices.partition.price_moves.copy()))
        return self._prices

    def _examine(self, line: int, prices: Prices) -> None:
        result: Result
        try:
            result = prices.line(line)
        except _LeftError:
            raise
        except Exception as error:  # said in the ledger of that line
            result = told(error)[0]
            self._failed += 1
            self.is_paused |= self._failed % MOST_FAILED == 0
            self._prices = None  # it may have been left in the middle of something
        self._is_known[line] = 1
        self._batch[line] = result
        if line == self._selected or time.monotonic() - self._posted >= EVERY:
            self._flush()

    def _answer(self, question: Question, prices: Prices | NoPrices) -> None:
        if isinstance(prices, NoPrices):
            problem = f"prices were not examined: {prices.reason}"
            self._say(Answered(question.about, None, problem))
            return
        try:
            self._say(Answered(question.about, question.ask(prices)))
        except _LeftError:
            raise
        except Exception as error:  # said on the screen
            self._prices = None  # it may have been left in the middle of something
            self._say(Answered(question.about, None, told(error)[0]))

    def _flush(self) -> None:
        if self._batch:
            batch, self._batch = self._batch, {}
            self._posted = time.monotonic()
            self._say(PricesFound(batch))

    def _say(self, message: Message) -> None:
        if not self._is_left:
            self._post(message)

    @property
    def _is_left(self) -> bool:
        return self._left.is_set() or self._is_cancelled()

    def _wait_for_quiet(self) -> None:
        """Give way to keys; raise `_LeftError` once nobody waits any more."""
        while True:
            is_wanted = self._is_answering or self._prices is not None or not self.is_paused
            if self._is_left or not is_wanted:
                raise _LeftError
            left = self._quiet_until - time.monotonic()
            if left <= 0:
                return
            self._left.wait(left)

    def _interruptible(self, warm: WarmMaker) -> WarmMaker:
        return lambda G, box: _Interruptible(warm(G, box), self._wait_for_quiet)


class _Interruptible:
    """A model kept open that asks first whether it is to be solved at all."""

    def __init__(self, model: WarmModel, check: Callable[[], None]) -> None:
        self._model, self._check = model, check
        self.set_columns, self.set_rows = model.set_columns, model.set_rows

    def least(self, index: Index, costs: Vector) -> Vertex | Descent | Lost:
        """Minimize, unless nobody waits for it."""
        self._check()
        return self._model.least(index, costs)
