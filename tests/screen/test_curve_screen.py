"""The page of a value curve: which numbers have one, its lines, and following it in a thread."""

from __future__ import annotations

import asyncio
import threading
from collections.abc import Awaitable, Callable
from dataclasses import replace
from typing import Any

import pytest

from lpview.blocks import read_model_bytes
from lpview.examination import examine
from lpview.outcomes import Optimal, Request
from lpview.prices.curve import Beyond, Curve, NoCurve, Why
from lpview.prices.number import Number, Part
from lpview.report.names import width
from lpview.run import Watch
from lpview.screen import curve_screen as module
from lpview.screen.app import LpviewApp, Work
from lpview.screen.curve_screen import CurveScreen, follow
from lpview.screen.curve_text import curve_lines, named, numbers_of
from lpview.solver import solve
from tests.screen import models
from tests.screen.waiting import until

TWO_SIDED = (
    models.blocks([("x", 3)], [("between", "x", 1), ("free", "x", 1), ("same", "x", 0)], [])
    + "[b]\nrow,lower,upper\nbetween,1,4\nfree,none,none\nsame,0,0\n"
    + "[bounds]\ncolumn,lower,upper\nx,0,9\n"
)
"""x is 4, and may go from 1; one row has no side, one has two that meet."""


def examined(content: str) -> Optimal:
    request = Request("model.csv", "lpview check model.csv")
    found = examine(read_model_bytes(content.encode(), "model.csv"), request, solve)
    assert isinstance(found, Optimal)
    return found


GLASSHOUSE, TWO = examined(models.GLASSHOUSE), examined(TWO_SIDED)
HEAT, TOMATO = 0, 3


def curve_of(found: Optimal, number: Number) -> Curve:
    made = follow(found, number, Watch())
    assert isinstance(made, Curve)
    return made


# Without widgets -------------------------------------------------------------


def test_the_numbers_of_a_line_begin_with_the_one_that_is_asked_for_most():
    assert numbers_of(GLASSHOUSE, HEAT) == (Number(HEAT, Part.UPPER),)
    assert [number.part for number in numbers_of(GLASSHOUSE, TOMATO)] == [
        Part.COST,
        Part.LOWER,
        Part.UPPER,
    ]
    assert [number.part for number in numbers_of(TWO, 0)] == [Part.UPPER, Part.LOWER]
    assert numbers_of(TWO, 1) == ()
    assert numbers_of(TWO, 2) == (Number(2, Part.BOTH),)
    fixed = examined(models.GLASSHOUSE.replace("tomato,0,40", "tomato,5,5"))
    assert [number.part for number in numbers_of(fixed, TOMATO)] == [Part.COST, Part.BOTH]


def test_a_number_is_named_before_its_curve_is_known():
    lp = GLASSHOUSE.head.model
    assert named(lp, Number(HEAT, Part.UPPER)) == "row heat, upper side"
    assert named(lp, Number(TOMATO, Part.COST)) == "column tomato, cost"
    assert named(lp, Number(TOMATO, Part.LOWER)) == "column tomato, lower bound"
    assert named(TWO.head.model, Number(2, Part.BOTH)) == "row same, right-hand side"


@pytest.mark.parametrize("plain", [False, True], ids=["round", "ascii"])
@pytest.mark.parametrize("size", [(80, 23), (120, 39), (40, 10)])
def test_the_page_has_the_plot_and_every_breakpoint(size, plain):
    """Heat: 2 a unit up to 300, where tomato is limited by water, then 0.8 (by hand)."""
    curve = curve_of(GLASSHOUSE, Number(HEAT, Part.UPPER))
    lines = curve_lines(curve, size, plain)
    assert lines[0] == "value curve of the right-hand side of row heat"
    assert lines[1].startswith("concave, as theory demands: 2 pieces, 1 breakpoint")
    listed = [line.split() for line in lines[-5:-1]]
    assert listed[0] == ["right-hand", "side", "objective", "rate", "below", "rate", "above"]
    assert listed[1][:2] == ["0", "0"]
    assert listed[2] == ["300", "600", "2", "0.8", "breakpoint,", "as", "it", "stands"]
    assert lines[-1].startswith("below 0: no plan is left; above ")
    drawn = "\n".join(lines[3:-5])
    assert ("@" if plain else "●") in drawn and ("+" if plain else "┴") in drawn
    assert not plain or all(line.isascii() for line in lines)
    if size[0] >= 80:
        assert all(width(line) <= size[0] for line in lines)
    if size[1] >= 23:
        assert len(lines) <= size[1]


def test_a_curve_of_one_point_and_one_that_was_stopped_say_so():
    squeezed = examined(
        models.blocks(
            [("x", 1)], [("most", "x", 1), ("least", "x", 1)], [("most", "=", 4), ("least", "=", 4)]
        )
    )
    lines = curve_lines(curve_of(squeezed, Number(0, Part.BOTH)), (80, 23), False)
    assert "a single point" in lines[1] and any(line.split()[:1] == ["4"] for line in lines)
    curve = curve_of(GLASSHOUSE, Number(HEAT, Part.UPPER))
    stopped = replace(curve, stopped=True, above=Beyond.STOPPED, joints=(1.0,))
    text = "\n".join(curve_lines(stopped, (80, 23), False))
    assert "stopped before the curve was complete" in text
    assert "not looked at: stopped before" in text and "do not rely on it" in text


# On the screen ---------------------------------------------------------------

Script = Callable[..., Awaitable[None]]
OPEN: list[threading.Event] = []
"""Events that a thread waits for in the test that runs."""


def drive(found: Any, script: Script, size: tuple[int, int] = (80, 24), plain: bool = False):
    async def go() -> None:
        app = LpviewApp(Work("model.csv", lambda watch, say: found), plain)
        async with app.run_test(size=size) as pilot:
            await until(pilot, lambda: hasattr(app.screen, "book"))
            try:
                await script(pilot, app.screen)
            finally:
                for event in OPEN:
                    event.set()
                OPEN.clear()

    asyncio.run(go())


async def opened(pilot: Any) -> CurveScreen:
    await pilot.press("v")
    await until(pilot, lambda: isinstance(pilot.app.screen, CurveScreen))
    page = pilot.app.screen
    assert isinstance(page, CurveScreen)
    return page


def shown(page: CurveScreen) -> list[str]:
    return [page.lines.render_line(y).text for y in range(page.lines.size.height)]


@pytest.mark.parametrize("plain", [False, True], ids=["round", "ascii"])
@pytest.mark.parametrize("size", [(80, 24), (120, 40)])
def test_the_curve_of_the_selected_row_is_drawn_and_escape_closes(size, plain):
    async def script(pilot, screen):
        page = await opened(pilot)
        await until(pilot, lambda: isinstance(page.lines.shown, Curve))
        await pilot.pause()
        lines = shown(page)
        assert lines[0].rstrip() == "value curve of the right-hand side of row heat"
        assert any(line.split()[:4] == ["300", "600", "2", "0.8"] for line in lines)
        assert all(width(line) == size[0] for line in lines)
        assert not plain or all(line.isascii() for line in lines)
        await pilot.resize_terminal(60, 20)
        await pilot.pause()
        assert all(width(line) == 60 for line in shown(page))
        await pilot.press("escape")
        assert pilot.app.screen is screen

    drive(GLASSHOUSE, script, size, plain)


def test_a_column_opens_on_its_cost_and_a_key_goes_round_its_numbers():
    async def script(pilot, screen):
        screen.show_line(TOMATO)
        page = await opened(pilot)
        titles = []
        for _ in range(4):
            await until(pilot, lambda: not page.is_following)
            titles.append(page.lines.texts[0])
            await pilot.press("v")
        assert "the cost of column tomato" in titles[0]
        assert "lower bound" in titles[1] and "upper bound" in titles[2]
        assert titles[3] == titles[0]
        assert len(page.outcomes) == 3

    drive(GLASSHOUSE, script)


def test_a_row_without_sides_has_no_curve_and_a_single_number_stays():
    async def script(pilot, screen):
        screen.show_line(1)
        await pilot.press("v")
        assert pilot.app.screen is screen
        assert str(screen.query_one("#message").render()) == "there is no side to move"
        screen.show_line(2)
        page = await opened(pilot)
        await until(pilot, lambda: not page.is_following)
        before = page.lines.shown
        await pilot.press("v")
        assert page.lines.shown is before and not page.is_following

    drive(TWO, script)


@pytest.fixture
def held(monkeypatch):
    """Following that lasts until the watch is stopped or the event set."""
    go_on = threading.Event()
    watches: list[Watch] = []

    def slowly(found: Optimal, moving: Number, watch: Watch) -> Any:
        watches.append(watch)
        watch.iterations = 17
        OPEN.append(go_on)
        while not (go_on.wait(0.01) or watch.stop.is_set()):
            pass
        if watch.stop.is_set():
            return NoCurve(Why.STOPPED, "stopped")
        return follow(found, moving, watch)

    monkeypatch.setattr(module, "follow", slowly)
    return go_on, watches


def test_progress_is_shown_and_escape_stops_then_closes(held):
    async def script(pilot, screen):
        page = await opened(pilot)
        await until(pilot, lambda: "iteration 17; Escape stops" in page.lines.texts[0])
        assert page.lines.texts[0].startswith("row heat, upper side: following the value curve, ")
        assert page.is_following
        await pilot.press("escape")
        await until(pilot, lambda: not page.is_following)
        assert pilot.app.screen is page
        assert page.lines.texts == ["row heat, upper side: no value curve: stopped"]
        await pilot.press("escape")
        assert pilot.app.screen is screen

    drive(GLASSHOUSE, script)


def test_another_number_gives_up_the_one_that_is_followed(held):
    go_on, watches = held

    async def script(pilot, screen):
        screen.show_line(TOMATO)
        page = await opened(pilot)
        await until(pilot, lambda: len(watches) == 1)
        await pilot.press("v")
        await until(pilot, lambda: len(watches) == 2)
        assert watches[0].stop.is_set() and not watches[1].stop.is_set()
        go_on.set()
        await until(pilot, lambda: not page.is_following)
        assert list(page.outcomes) == [Number(TOMATO, Part.LOWER)]

    drive(GLASSHOUSE, script)


def test_leaving_the_program_stops_following(held):
    _, watches = held

    async def script(pilot, screen):
        await opened(pilot)
        await until(pilot, lambda: len(watches) == 1)
        await pilot.press("q")

    drive(GLASSHOUSE, script)
    assert watches[0].stop.is_set()


def test_a_curve_that_fails_is_said_in_a_line(monkeypatch):
    def broken(*_: Any) -> Any:
        raise ZeroDivisionError("by zero")

    monkeypatch.setattr(module, "value_curve", broken)

    async def script(pilot, screen):
        page = await opened(pilot)
        await until(pilot, lambda: not page.is_following)
        assert "no value curve" in page.lines.texts[0]
        assert "ZeroDivisionError: by zero" in page.lines.texts[0]

    drive(GLASSHOUSE, script)


def test_a_page_longer_than_the_screen_is_scrolled_through():
    async def script(pilot, screen):
        page = await opened(pilot)
        await until(pilot, lambda: not page.is_following)
        assert page.lines.line_count > page.lines.visible_lines
        await pilot.press("end")
        assert shown(page)[-1].startswith("below 0: no plan is left")

    drive(GLASSHOUSE, script, (80, 12))
