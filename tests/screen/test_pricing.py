"""Prices in the background: the order of questions, stopping, every state, and what is shown."""

from __future__ import annotations

import asyncio
import contextlib
import threading
from collections.abc import Awaitable, Callable, Iterator
from typing import Any

import numpy as np
import pytest

from lpview import cli
from lpview.blocks import read_model, read_model_bytes
from lpview.examination import examine
from lpview.marks import Flag
from lpview.outcomes import Optimal, Request
from lpview.prices import LinePrices, Prices, work_out
from lpview.report.names import width
from lpview.run import Method, SolveSettings
from lpview.screen import pricing as module
from lpview.screen.app import LpviewApp, Work
from lpview.screen.columns import squeezed
from lpview.screen.outcome import PageScreen
from lpview.screen.price_book import PriceBook, State
from lpview.screen.priced_screen import moves_in
from lpview.screen.pricing import (
    EVERY,
    MOST_FAILED,
    Answered,
    PricesBegun,
    PricesEnded,
    PricesFound,
    Pricing,
    Question,
)
from lpview.screen.turning import TurnedScreen
from lpview.solver import solve, warm_model
from tests.screen import models
from tests.screen.waiting import until, until_priced


def examined(content: str, **options: Any) -> Optimal:
    request = Request("model.csv", "lpview check model.csv", **options)
    found = examine(read_model_bytes(content.encode(), "model.csv"), request, solve)
    assert isinstance(found, Optimal)
    return found


SQUEEZED = models.blocks(
    [("x", 1), ("y", 1)],
    [("most", "x", 1), ("least", "x", 1), ("other", "y", 1), ("free", "y", 1)],
    [("most", "<=", 4), ("least", ">=", 4), ("other", "<=", 3)],
)
SQUEEZED += "[b]\nrow,lower,upper\nfree,none,none\n"
"""x is 4 because two rows leave nothing else; the smallest tightening leaves no plan."""

NO_BASIS = SolveSettings(method=Method.INTERIOR_POINT, crossover=False)

GLASSHOUSE, TIGHT = examined(models.GLASSHOUSE), examined(SQUEEZED)
WITHOUT_BASIS = examined(models.GLASSHOUSE, solve=NO_BASIS, tolerance=1e-3)
FAILED = examined(models.GLASSHOUSE, solve=NO_BASIS, tolerance=1e-300)
SEASON = examine(read_model(str(models.SEASON)), Request("season.csv", "lpview check s"), solve)
assert isinstance(SEASON, Optimal)
BIG = examined(models.chain([f"r{k}" for k in range(1500)], [f"x{k}" for k in range(1500)]))


def whole(found: Optimal) -> dict[int, LinePrices]:
    prices = work_out(found, warm_model)
    assert isinstance(prices, Prices)
    return {line: prices.line(line) for line in range(found.marks.room.size)}


class Told(list[Any]):
    """Messages in the order in which they were posted."""

    def of(self, kind: type) -> list[Any]:
        return [message for message in self if isinstance(message, kind)]

    @property
    def order(self) -> list[int]:
        return [line for message in self.of(PricesFound) for line in message.lines]

    @property
    def lines(self) -> dict[int, Any]:
        return {k: v for message in self.of(PricesFound) for k, v in message.lines.items()}

    @property
    def state(self) -> State:
        return self.of(PricesEnded)[-1].state


def start(found: Optimal) -> tuple[Pricing, Told]:
    told = Told()
    return Pricing(found, told.append), told


def run(pricing: Pricing) -> None:
    """The thread's work in this one."""
    assert pricing.begin()
    pricing.run(warm_model)


@contextlib.contextmanager
def lines_asked(monkeypatch: Any, before: Callable[[int], None]) -> Iterator[None]:
    """Call ``before`` with every line that is about to be examined."""
    real = Prices.line

    def line(self: Prices, k: int) -> LinePrices:
        before(k)
        return real(self, k)

    monkeypatch.setattr(Prices, "line", line)
    yield
    monkeypatch.setattr(Prices, "line", real)


# The queue -------------------------------------------------------------------


def test_rows_then_columns_and_everything_is_told():
    pricing, told = start(GLASSHOUSE)
    run(pricing)
    assert told.order == list(range(5))
    assert told.lines == whole(GLASSHOUSE)
    assert type(told[0]) is PricesBegun and type(told[-1]) is PricesEnded
    assert told.state is State.DONE
    assert not pricing.begin()


def test_the_selected_line_comes_first_whenever_the_selection_moves(monkeypatch):
    pricing, told = start(SEASON)
    pricing.select(200)
    moves = {200: 7, 7: 300}
    with lines_asked(monkeypatch, lambda k: pricing.select(moves.get(k, 300))):
        run(pricing)
    assert told.order[:5] == [200, 7, 300, 0, 1]
    rest = [k for k in range(SEASON.marks.room.size) if k not in (200, 7, 300)]
    assert told.order[3:] == rest


def test_the_selected_line_is_told_at_once_and_the_others_ten_times_a_second(monkeypatch):
    now = [0.0]

    def one_question(_: int) -> None:
        now[0] += 0.03

    monkeypatch.setattr(module.time, "monotonic", lambda: now[0])
    pricing, told = start(SEASON)
    pricing.select(5)
    with lines_asked(monkeypatch, one_question):
        run(pricing)
    messages = told.of(PricesFound)
    assert list(messages[0].lines) == [5]
    assert len(messages) <= 2 + now[0] / EVERY
    assert max(len(message.lines) for message in messages) <= 1 + EVERY / 0.03


def test_pausing_ends_between_two_lines_and_going_on_does_the_rest(monkeypatch):
    pricing, told = start(SEASON)

    def pause_at_four(k: int) -> None:
        if k == 4:
            pricing.pause()

    with lines_asked(monkeypatch, pause_at_four):
        run(pricing)
    assert told.order == [0, 1, 2, 3, 4] and told.state is State.STOPPED
    assert not pricing.begin()  # nothing to do while it is paused
    pricing.go_on()
    run(pricing)
    assert told.order == list(range(SEASON.marks.room.size)) and told.state is State.DONE
    assert len(told.of(PricesBegun)) == 1


def test_pausing_before_anything_is_known_ends_before_the_next_solve():
    pricing, told = start(SEASON)
    solves = []

    def counted(G: Any, box: Any) -> Any:
        pricing.pause()
        solves.append(1)
        return warm_model(G, box)

    assert pricing.begin()
    pricing.run(counted)
    assert len(solves) == 1 and [type(message) for message in told] == [PricesEnded]
    assert told.state is State.STOPPED
    pricing.go_on()
    run(pricing)
    assert told.state is State.DONE


def test_nobody_is_told_anything_after_leaving_and_no_question_is_asked(monkeypatch):
    pricing, told = start(SEASON)
    asked = []

    def leave_at_four(k: int) -> None:
        asked.append(k)
        if k == 4:
            pricing.leave()

    with lines_asked(monkeypatch, leave_at_four):
        run(pricing)
    assert asked[-1] == 4 and len(asked) == 5
    assert not told.of(PricesEnded) and not pricing.begin()


def test_a_cancelled_thread_ends_like_one_that_was_left():
    pricing, told = start(SEASON)
    assert pricing.begin()
    pricing.run(warm_model, lambda: True)
    assert told == []


def test_questions_come_before_lines_and_also_while_paused():
    pricing, told = start(GLASSHOUSE)
    pricing.pause()
    pricing.ask(Question("dimension", lambda prices: prices.price_dimension))
    run(pricing)
    (answer,) = told.of(Answered)
    assert (answer.about, answer.answer, answer.problem) == ("dimension", 1, "")
    assert told.order == [] and told.state is State.STOPPED
    pricing.go_on()
    pricing.ask(Question("late", lambda prices: told.order))
    run(pricing)
    assert told.of(Answered)[-1].answer == [] and told.state is State.DONE


def test_a_question_that_fails_says_why_and_lines_go_on():
    pricing, told = start(GLASSHOUSE)
    pricing.ask(Question("broken", lambda prices: 1 // 0))
    run(pricing)
    assert "ZeroDivisionError" in told.of(Answered)[0].problem
    assert told.lines == whole(GLASSHOUSE)


def test_a_line_that_fails_is_told_in_words_and_the_work_begins_anew(monkeypatch):
    pricing, told = start(GLASSHOUSE)
    prepared = []

    def counted(*args: Any) -> Any:
        prepared.append(1)
        return work_out(*args)

    def broken(k: int) -> None:
        if k == 1:
            raise ZeroDivisionError("by zero")

    monkeypatch.setattr(module, "work_out", counted)
    with lines_asked(monkeypatch, broken):
        run(pricing)
    assert "ZeroDivisionError: by zero" in told.lines[1]
    assert {k: v for k, v in told.lines.items() if k != 1} == {
        k: v for k, v in whole(GLASSHOUSE).items() if k != 1
    }
    assert len(prepared) == 2 and told.state is State.DONE


def test_lines_that_fail_one_after_the_other_stop_the_work(monkeypatch):
    def broken(_: int) -> None:
        raise ZeroDivisionError

    pricing, told = start(SEASON)
    with lines_asked(monkeypatch, broken):
        run(pricing)
    assert len(told.order) == MOST_FAILED and told.state is State.STOPPED


@pytest.mark.parametrize(
    ("found", "reason"), [(WITHOUT_BASIS, "without a basis"), (FAILED, "failed its check")]
)
def test_where_there_are_no_prices_the_reason_is_told(found, reason):
    pricing, told = start(found)
    pricing.ask(Question("anything", lambda prices: None))
    run(pricing)
    assert told.state is State.NONE and reason in told.of(PricesEnded)[0].reason
    assert reason in told.of(Answered)[0].problem
    assert told.order == [] and not pricing.begin()


def test_work_that_cannot_even_begin_is_told(monkeypatch):
    def broken(*_: Any) -> Any:
        raise ZeroDivisionError("by zero")

    monkeypatch.setattr(module, "work_out", broken)
    pricing, told = start(GLASSHOUSE)
    run(pricing)
    assert told.state is State.NONE and "by zero" in told[-1].reason


def test_only_one_thread_is_started():
    pricing, told = start(GLASSHOUSE)
    assert pricing.begin() and not pricing.begin()
    pricing.run(warm_model)
    assert told.state is State.DONE


def test_keys_are_answered_before_further_questions(monkeypatch):
    """Every key puts the next question off; none is lost for it."""
    pricing, told = start(GLASSHOUSE)
    now, waited = [100.0], []
    monkeypatch.setattr(module.time, "monotonic", lambda: now[0])

    class Clock(threading.Event):
        def wait(self, timeout: float | None = None) -> bool:
            waited.append(timeout)
            now[0] += timeout or 0.0
            return self.is_set()

    pricing._left = Clock()
    with lines_asked(monkeypatch, lambda _: pricing.give_way()):
        run(pricing)
    assert waited == pytest.approx([module.QUIET] * len(waited)) and len(waited) >= 4
    assert told.state is State.DONE


# The book --------------------------------------------------------------------


def book_of(found: Optimal) -> PriceBook:
    book = PriceBook(found)
    pricing, told = start(found)
    run(pricing)
    book.begin(told[0].not_unique)
    book.put(told.lines)
    book.end(told.state, "")
    return book


def test_the_glasshouse_has_the_rates_of_its_two_vertices():
    """Heat one unit up lets basil in at 0.8; one down costs 2 of tomato (by hand)."""
    book = book_of(GLASSHOUSE)
    assert [book.cell(what, 0, 9) for what in range(4)] == ["0.8", "2", "however far", "300"]
    assert book.mark(0) == "*" and book.mark(1) == ""
    assert book.progress() == "prices: 3 not unique"


def test_moves_that_leave_no_plan_are_words_and_a_row_without_sides_has_none():
    book = book_of(TIGHT)
    most, least, free = 0, 1, 3
    assert book.cell(0, most, 9) == "1" or book.cell(0, most, 9) == "0"
    assert book.cell(1, most, 9) == "no plan" and book.cell(0, least, 9) == "no plan"
    assert book.cell(3, most, 12) == ""
    assert [book.cell(what, free, 12) for what in range(4)] == [""] * 4
    assert not any("inf" in book.cell(what, k, 12) for what in range(4) for k in range(6))


def test_what_is_not_known_is_a_dot_and_words():
    book = PriceBook(GLASSHOUSE)
    assert book.progress() == "prices: beginning" and book.cell(0, 0, 9) == "."
    book.begin(np.zeros(5, dtype=bool))
    book.put({1: "broken"})
    assert book.progress() == "prices 1 of 5" and book.missing(1) == "prices: broken"
    assert book.missing(0) == "prices: being worked out"
    book.end(State.STOPPED, "")
    assert book.progress() == "prices 1 of 5, stopped"
    assert book.missing(0) == "prices: stopped before this line"
    book.end(State.NONE, "because")
    assert book.progress() == "prices: not examined" and book.cell(0, 0, 9) == ""
    assert book.missing(0) == "prices were not examined: because"


@pytest.mark.parametrize(
    ("text", "moves"),
    [
        ("heat=+1", [(0, 1.0)]),
        ("heat=+1 water=-2.5e1", [(0, 1.0), (2, -25.0)]),
        ("  bench=.5   heat=3. ", [(1, 0.5), (0, 3.0)]),
        ("", "expected ROW=+1 ROW=-2.5, got nothing"),
        ("heat", "expected ROW=+1 ROW=-2.5, got heat"),
        ("heat=+1 hat=2", "expected the name of a row, got hat"),
        ("heat=+1 heat=2", "expected each row once"),
        ("heat=0", "heat: expected an amount that is finite and not 0"),
        ("heat=1e999", "heat: expected an amount that is finite and not 0"),
    ],
)
def test_rows_and_amounts_are_read(text, moves):
    assert moves_in(text, GLASSHOUSE.head.model) == moves


def test_names_with_blanks_and_equals_signs_are_read():
    names = ["week 1=2 a", "week 1", "b=3"]
    lp = examined(models.chain(names, ["x", "y", "z"])).head.model
    assert moves_in("week 1=2 a=5 b=3=-1 week 1=7", lp) == [(0, 5.0), (2, -1.0), (1, 7.0)]
    assert "no side to move" in str(moves_in("free=1", TIGHT.head.model))


def test_a_name_is_cut_in_its_middle():
    assert squeezed("ship[chard,Lindford,week 12]", 21, "…") == "ship[chard…d,week 12]"
    assert squeezed("heat", 4, "…") == "heat"
    for cells in range(1, 30):
        for name in ("暖房" * 10, "e\u0301" * 40, "x" * 40):
            assert width(squeezed(name, cells, "~")) <= cells


# On the screen ---------------------------------------------------------------

Script = Callable[..., Awaitable[None]]


def drive(found: Any, script: Script, size: tuple[int, int] = (80, 24), plain: bool = False):
    """Open the app on a finished examination and run ``script(pilot, screen)``."""

    async def go() -> None:
        app = LpviewApp(Work("model.csv", lambda watch, say: found), plain)
        async with app.run_test(size=size) as pilot:
            await until(pilot, lambda: hasattr(app.screen, "book"))
            try:
                await script(pilot, app.screen)
            finally:
                for gate in GATES:  # else the program would wait for its thread
                    gate.open.set()

    asyncio.run(go())


def lines_of(pane: Any) -> list[str]:
    return [pane.render_line(y).text for y in range(pane.size.height)]


def ledger_of(screen: Any) -> str:
    return " ".join(" ".join(screen.ledger._totals).split())


def message_of(screen: Any) -> str:
    return str(screen.query_one("#message").render())


GATES: list[Gate] = []
"""Those of the test that runs."""


class Gate:
    """Lets the worker examine so many lines and then has it wait, inside a question."""

    def __init__(self, monkeypatch: Any, lines: int) -> None:
        self.left, self.open, self.reached = lines, threading.Event(), threading.Event()
        self.asked: list[int] = []
        real = Prices.line

        def line(prices: Prices, k: int) -> LinePrices:
            self.asked.append(k)
            if len(self.asked) > self.left:
                self.reached.set()
                assert self.open.wait(60)
            return real(prices, k)

        monkeypatch.setattr(Prices, "line", line)


@pytest.fixture
def gate(monkeypatch):
    def make(lines: int) -> Gate:
        GATES.append(Gate(monkeypatch, lines))
        return GATES[-1]

    yield make
    GATES.clear()


@pytest.mark.parametrize("found", [SEASON, BIG], ids=["season", "three thousand lines"])
def test_keys_are_handled_while_a_question_is_being_answered(found, gate):
    held = gate(1)

    async def script(pilot, screen):
        await until(pilot, held.reached.is_set)
        await pilot.pause()
        if screen.constraints.folded:
            await pilot.press("enter")
        before = screen.line
        await pilot.press("down", "down", "down")
        assert screen.line == before + 3
        assert screen.book.state is State.EXAMINING
        size = found.marks.room.size
        assert f"prices 1 of {size}" in lines_of(screen.strip)[2]
        assert "prices: being worked out" in ledger_of(screen)
        await pilot.press("slash", *"1", "enter", "escape", "tab", "tab")
        assert screen.focused is screen.ledger
        chosen = screen.line
        held.left = len(held.asked) + 1
        held.open.set()
        await until(pilot, lambda: screen.book.line(chosen) is not None)
        # The line that was selected meanwhile came next.
        assert held.asked[held.left - 1] == chosen or held.asked[3] == chosen

    drive(found, script)


def test_rates_stand_beside_the_price_when_all_is_done():
    async def script(pilot, screen):
        await until_priced(pilot)
        heads, heat, bench, water = (line.split() for line in lines_of(screen.constraints)[1:5])
        assert heads == ["name", "slack", "dual", "value", "up", "down"]
        assert heat[-2:] == ["0.8", "2"] and heat[-3].endswith("*")
        assert bench[-2:] == ["0", "0"] and not bench[-3].endswith("*")
        # Water: (30 - 15 heat) / 4 with heat from 0.8 to 2 (by hand).
        assert water[-2:] == ["0", "4.5"]
        assert "prices: 3 not unique" in lines_of(screen.strip)[2]
        assert "Its dual value is any number from 0.8 to 2" in ledger_of(screen)
        # The other table shows how it is linked instead.
        assert "in heat" in lines_of(screen.variables)[1]

    drive(GLASSHOUSE, script)


@pytest.mark.parametrize("plain", [False, True], ids=["round", "ascii"])
@pytest.mark.parametrize(
    ("size", "heads"),
    [
        ((60, 20), ["slack", "dual value"]),
        ((80, 24), ["slack", "dual value", "up", "down"]),
        ((100, 30), ["row value", "slack", "dual value", "up", "down"]),
        ((120, 40), ["sides", "row value", "slack", "dual value", "up", "down"]),
        (
            (200, 60),
            [
                *("sides", "row value", "slack", "dual value", "up", "down", "complementarity"),
                *("how far up", "how far down"),
            ],
        ),
    ],
)
def test_columns_go_in_their_order_as_width_shrinks(size, heads, plain):
    async def script(pilot, screen):
        await until_priced(pilot)
        shown = lines_of(screen.constraints)
        places = [shown[1].index(head) for head in heads]
        assert places == sorted(places)
        every = ["sides", "row value", "complementarity", "how far up"]
        assert [head for head in every if head in shown[1]] == [h for h in every if h in heads]
        if "how far up" in heads:
            assert "however far" in shown[2] and " 300 " in f"{shown[2]} "
        for pane in (screen.strip, screen.constraints, screen.variables, screen.ledger):
            assert all(width(line) == size[0] for line in lines_of(pane))
            assert not plain or all(line.isascii() for line in lines_of(pane))

    drive(GLASSHOUSE, script, size, plain)


def test_a_move_that_leaves_no_plan_is_words_on_the_screen():
    async def script(pilot, screen):
        await until_priced(pilot)
        most = lines_of(screen.constraints)[2]
        assert most.split()[0] == "▸" and most.rstrip().endswith("no plan")
        assert "any less leaves no plan" in ledger_of(screen)
        assert lines_of(screen.constraints)[3].rstrip().endswith(" 0")  # least, down

    drive(TIGHT, script)


@pytest.mark.parametrize(
    ("found", "reason"),
    [(WITHOUT_BASIS, "the answer comes without a basis"), (FAILED, "the answer failed its check")],
)
def test_why_there_are_no_prices_is_said(found, reason):
    async def script(pilot, screen):
        await until(pilot, lambda: screen.book.state is State.NONE)
        assert "prices: not examined" in "".join(lines_of(screen.strip)) or not found.passed
        assert f"prices were not examined: {reason}" in ledger_of(screen)
        await pilot.press("8")
        assert reason in message_of(screen)
        await pilot.press("x")
        assert reason in message_of(screen)
        await pilot.press("plus", "enter")
        await until(pilot, lambda: f"prices were not examined: {reason}" in message_of(screen))

    drive(found, script)


def test_a_line_that_failed_says_so_in_its_ledger(monkeypatch):
    def broken(k: int) -> None:
        if k == 0:
            raise ZeroDivisionError("by zero")

    async def script(pilot, screen):
        await until_priced(pilot)
        assert "prices: 3 not unique, 1 failed" in lines_of(screen.strip)[2]
        assert "ZeroDivisionError: by zero" in ledger_of(screen)

    with lines_asked(monkeypatch, broken):
        drive(GLASSHOUSE, script, (120, 40))


def test_the_stop_key_stops_between_two_lines_and_goes_on(gate):
    held = gate(3)

    async def script(pilot, screen):
        await until(pilot, held.reached.is_set)
        await pilot.press("x")
        assert message_of(screen) == "prices: stopped; the same key goes on"
        held.left = 10_000
        held.open.set()
        await until(pilot, lambda: screen.book.state is State.STOPPED)
        assert len(held.asked) == 4
        assert "prices 4 of 360, stopped" in lines_of(screen.strip)[2]
        await pilot.press("end")
        assert "prices: stopped before this line" in ledger_of(screen)
        await pilot.press("question_mark", "escape")  # another page does not start it again
        assert len(held.asked) == 4
        await pilot.press("x")
        await until_priced(pilot)
        assert sorted(held.asked) == list(range(360))
        await pilot.press("x")
        assert "not unique" in message_of(screen)

    drive(SEASON, script)


def test_turning_the_mirror_stops_and_coming_back_goes_on(gate):
    held = gate(3)

    async def script(pilot, screen):
        await until(pilot, held.reached.is_set)
        await pilot.press("d")
        await until(pilot, lambda: isinstance(pilot.app.screen, TurnedScreen))
        assert screen.pricing.is_paused
        held.left = 10_000
        held.open.set()
        await until(pilot, lambda: screen.book.state is State.STOPPED)
        known = screen.book.progress()
        await until_priced(pilot)  # those of the dual
        assert screen.book.progress() == known
        await pilot.press("d")
        assert pilot.app.screen is screen
        await until_priced(pilot)
        assert screen.book.state is State.DONE

    drive(SEASON, script)


def test_leaving_ends_the_work_between_two_questions(gate):
    held = gate(3)

    async def script(pilot, screen):
        await until(pilot, held.reached.is_set)
        await pilot.press("q")
        held.left = 10_000
        held.open.set()

    drive(SEASON, script)
    assert len(held.asked) <= 5


def test_the_filter_of_prices_that_are_not_unique(gate):
    held = gate(0)

    async def script(pilot, screen):
        await until(pilot, lambda: screen.book.state is State.EXAMINING)
        # Known before any line is examined.
        await pilot.press("8")
        assert screen.constraints.view.flag_word == Flag.NOT_UNIQUE.value
        assert [screen.constraints.view.names[k] for k in screen.constraints.view.order] == [
            "heat",
            "water",
        ]
        held.open.set()
        await until_priced(pilot)
        assert screen.constraints.view.order.tolist() == [0, 2]
        await pilot.press("0", "tab", "8")
        assert [screen.variables.view.names[k] for k in screen.variables.view.order] == ["basil"]
        assert screen.found.marks is GLASSHOUSE.marks  # the check's own flags stay

    drive(GLASSHOUSE, script)


def test_sorting_by_a_rate_follows_what_was_found(gate):
    held = gate(0)

    async def script(pilot, screen):
        table = screen.constraints
        while table.view.sort_word != "down":
            await pilot.press("s")
        held.open.set()
        await until_priced(pilot)
        # Rates down: heat 2, bench 0, water 4.5.
        assert table.view.order.tolist() == [1, 0, 2]

    drive(GLASSHOUSE, script)


@pytest.mark.parametrize("line", range(5))
def test_the_saved_ledger_is_what_the_command_with_prices_prints(
    line, tmp_path, monkeypatch, capfdbinary
):
    monkeypatch.chdir(tmp_path)
    path = models.Case(models.GLASSHOUSE).write(tmp_path)
    lp = GLASSHOUSE.head.model
    option = ["--row", lp.rows[line]] if line < lp.m else ["--column", lp.columns[line - lp.m]]

    async def script(pilot, screen):
        await until_priced(pilot)
        screen.show_line(line)
        await pilot.press("w")
        assert message_of(screen).startswith("saved: model.ledger.txt")

    drive(GLASSHOUSE, script)
    assert cli.main(["check", path.name, *option, "--prices"]) == 0
    assert capfdbinary.readouterr().out == (tmp_path / "model.ledger.txt").read_bytes()


def test_a_ledger_saved_before_its_prices_are_known_is_the_plain_one(
    gate, tmp_path, monkeypatch, capfdbinary
):
    monkeypatch.chdir(tmp_path)
    models.Case(models.GLASSHOUSE).write(tmp_path)
    held = gate(0)

    async def script(pilot, screen):
        await until(pilot, held.reached.is_set)
        await pilot.press("w")
        held.open.set()

    drive(GLASSHOUSE, script)
    assert cli.main(["check", "model.csv", "--row", "heat"]) == 0
    assert capfdbinary.readouterr().out == (tmp_path / "model.ledger.txt").read_bytes()


def test_rows_moved_together_are_what_the_command_prints(tmp_path, monkeypatch, capfd):
    monkeypatch.chdir(tmp_path)
    models.Case(models.GLASSHOUSE).write(tmp_path)
    shown = []

    async def script(pilot, screen):
        await until_priced(pilot)
        await pilot.press("plus")
        prompt = screen.query_one("#prompt")
        assert prompt.value == "heat=+1 "
        await pilot.press(*"water=", *"+3", "enter")
        await until(pilot, lambda: isinstance(pilot.app.screen, PageScreen))
        shown.append(pilot.app.screen.text)
        await pilot.press("escape")
        assert pilot.app.screen is screen
        await pilot.press("plus", *"x", "enter")
        assert "expected ROW=+1 ROW=-2.5" in message_of(screen)

    drive(GLASSHOUSE, script)
    assert cli.main(["prices", "model.csv", "--move", "heat=1", "--move", "water=3"]) == 0
    assert capfd.readouterr().out == shown[0]


@pytest.mark.parametrize("name", [*models.OPTIMAL])
def test_every_model_is_priced_to_its_end(name):
    content = models.OPTIMAL[name].content
    assert isinstance(content, str)

    async def script(pilot, screen):
        await until_priced(pilot)
        assert screen.book.state is State.DONE
        assert "failed" not in screen.book.progress()
        for pane in (screen.strip, screen.constraints, screen.variables):
            assert all(width(line) == 80 for line in lines_of(pane))

    drive(examined(content), script)
