"""Prices on the screen as they are found: columns, ledger, filter, stopping, every state."""

from __future__ import annotations

import asyncio
import threading
from collections.abc import Awaitable, Callable
from typing import Any

import pytest

from lpview import cli
from lpview.marks import Flag
from lpview.prices import LinePrices, Prices
from lpview.report.names import width
from lpview.screen.app import LpviewApp, Work
from lpview.screen.outcome import PageScreen
from lpview.screen.price_book import State
from lpview.screen.turning import TurnedScreen
from tests.screen import models
from tests.screen.priced import (
    BIG,
    FAILED,
    GLASSHOUSE,
    SEASON,
    TIGHT,
    WITHOUT_BASIS,
    examined,
    lines_asked,
)
from tests.screen.waiting import until, until_priced

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
        held.open.set()
        await until(pilot, lambda: screen.book.line(chosen) is not None)
        # The second line was being examined; the one selected meanwhile came next.
        assert held.asked[:3] == [0, 1, chosen]

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
