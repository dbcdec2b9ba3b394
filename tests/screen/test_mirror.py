"""The mirror by the library's pilot: messages and bound state, on shipped models."""

from __future__ import annotations

import asyncio
import threading
from collections.abc import Awaitable, Callable
from pathlib import Path
from typing import Any

import numpy as np
import pytest
from textual import events

from lpview.blocks import read_model
from lpview.examination import examine
from lpview.marks import Flag
from lpview.outcomes import Optimal, Request
from lpview.report import text
from lpview.report.check import report
from lpview.screen.app import LpviewApp, Work
from lpview.screen.check_page import CheckPage
from lpview.screen.mirror import MirrorScreen
from lpview.screen.outcome import MessageScreen, OutcomeScreen, PageScreen
from lpview.screen.turning import TurnedScreen
from lpview.solver import solve
from lpview.turned import turn

MODELS = Path(__file__).parents[2] / "models"


def examined(name: str) -> Any:
    source = str(MODELS / name)
    request = Request(source=source, command=f"lpview check {source}")
    return examine(read_model(source), request, solve)


SEASON, SPRING, WINTER = examined("season.csv"), examined("spring.csv"), examined("winter.csv")


def drive(found: Any, script: Callable[..., Awaitable[None]], size: tuple[int, int] = (80, 24)):
    """Open the app on a finished examination and run ``script(pilot, screen)``."""

    async def go() -> int | None:
        app = LpviewApp(Work("model.csv", lambda watch, say: found))
        async with app.run_test(size=size) as pilot:
            await app.workers.wait_for_complete()
            await pilot.pause()
            await script(pilot, app.screen)
            await pilot.pause()
        return app.return_value

    return asyncio.run(go())


def lines_of(pane: Any) -> list[str]:
    return [pane.render_line(y).text for y in range(pane.size.height)]


def test_it_opens_on_the_first_constraint_with_its_partners_and_ledger():
    async def script(pilot, screen):
        assert isinstance(screen, MirrorScreen)
        assert screen.focused is screen.constraints and screen.line == 0
        lp = SEASON.head.model
        linked = np.sort(lp.A[[0]].indices)
        assert screen.variables.view.order.tolist() == linked.tolist()
        assert screen.ledger.term_count == linked.size
        assert "linked to stock[cucumber,week 1]" in screen.variables.status()

    drive(SEASON, script)


def test_moving_updates_partners_and_ledger_in_the_same_frame():
    async def script(pilot, screen):
        before = screen.ledger.entry
        screen.constraints.move_to(5)
        assert screen.line == 5 and screen.ledger.entry is not before
        assert set(screen.variables.link.lines) == set(SEASON.head.model.A[[5]].indices)

    drive(SEASON, script)


def test_one_frame_at_80x24_shows_the_row_and_two_linked_reduced_costs():
    async def script(pilot, screen):
        row = lines_of(screen.constraints)[2]
        side = SEASON.measurement
        assert "stock[cucumber,week 1]" in row and " 0 " in row and "-9.03" in row
        shown = lines_of(screen.variables)[2:]
        linked = SEASON.head.model.A[[0]].indices
        values = [f"{side.columns.price[j]:.6g}".replace("e-0", "e-") for j in linked]
        assert sum(any(value in line for line in shown) for value in values) >= 2

    drive(SEASON, script)


@pytest.mark.parametrize("size", [(80, 24), (120, 40), (200, 60)])
def test_spines_stand_in_one_column_and_lines_fit(size):
    async def script(pilot, screen):
        for pane in (screen.constraints, screen.variables):
            heads = lines_of(pane)[1]
            assert len(heads) == size[0]
        marks = [
            {
                line.index(mark)
                for line in lines_of(pane)[2:]
                for mark in ("●", "○", "= ")
                if mark in line
                and ("●○" in line or "○●" in line)
                and mark == line[min(line.find(m) for m in "●○" if m in line)]
            }
            for pane in (screen.constraints, screen.variables)
        ]
        assert len(marks[0] | marks[1]) == 1

    drive(WINTER, script, size)


def test_enter_follows_and_the_way_back_and_forward():
    async def script(pilot, screen):
        first = screen.line
        await pilot.press("enter")
        assert screen.leading is screen.variables
        second = screen.line
        strongest = int(SEASON.head.model.A[[0]].indices[0])
        assert second >= SEASON.head.model.m and isinstance(strongest, int)
        await pilot.press("enter")
        third = screen.line
        assert third < SEASON.head.model.m
        await pilot.press("left_square_bracket")
        assert screen.line == second
        await pilot.press("left_square_bracket")
        assert screen.line == first
        await pilot.press("left_square_bracket")
        assert screen.line == first  # there is nothing before it
        await pilot.press("right_square_bracket", "right_square_bracket")
        assert screen.line == third

    drive(SEASON, script)


def test_search_narrows_as_it_is_typed_keeps_the_line_and_is_cleared():
    async def script(pilot, screen):
        await pilot.press("slash", *"HEAT", "space", "1")
        names = [screen.constraints.view.names[k] for k in screen.constraints.view.order]
        assert names and all("heat" in name and "1" in name for name in names)
        await pilot.press("enter")
        assert screen.focused is screen.constraints
        chosen = screen.line
        await pilot.press("escape")
        assert len(screen.constraints.view.order) == SEASON.head.model.m
        assert screen.line == chosen

    drive(SEASON, script)


@pytest.mark.parametrize("late", range(6))
def test_letters_typed_ahead_are_kept_in_order(late):
    """Whichever letters reach the pane and which the prompt, in whatever turn they are handled."""

    async def script(pilot, screen):
        pane = screen.constraints
        assert screen.takes_key(events.Key("slash", "/"))
        prompt = screen.query_one("#prompt")
        for letter in "bench"[late:]:  # the prompt may be the quicker one
            prompt.insert_text_at_cursor(letter)
        for letter in "bench"[:late]:
            assert pane.takes_key(events.Key(letter, letter))
        await pilot.pause()
        assert prompt.value == "bench"
        await pilot.press("[", "enter")
        assert pane.view.search == "bench["

    drive(SEASON, script)


def test_a_search_without_hits_says_so_and_does_not_break():
    async def script(pilot, screen):
        await pilot.press("slash", *"zzz", "enter")
        assert screen.constraints.view.order.size == 0
        assert "0 of 0" in screen.constraints.status()
        await pilot.press("down", "enter", "escape")
        assert screen.constraints.view.order.size == SEASON.head.model.m

    drive(SEASON, script)


def test_filters_by_flag_are_one_key_and_say_where_else_to_look():
    async def script(pilot, screen):
        await pilot.press("2")
        degenerate = SPRING.marks.flags[Flag.DEGENERATE][: SPRING.head.model.m]
        assert screen.constraints.view.order.tolist() == np.flatnonzero(degenerate).tolist()
        assert screen.line in np.flatnonzero(degenerate)
        await pilot.press("0")
        assert screen.constraints.view.order.size == SPRING.head.model.m

    drive(SPRING, script)

    async def elsewhere(pilot, screen):
        await pilot.press("2")
        message = str(screen.query_one("#message").render())
        assert message == "degenerate: no line of this table; 13 in the other table"

    drive(SEASON, elsewhere)


def test_sorting_either_way_keeps_the_selected_line():
    async def script(pilot, screen):
        screen.constraints.move_to(7)
        await pilot.press("s", "s")
        assert screen.constraints.view.sort_word == "slack"
        slack = SEASON.measurement.rows.slack[screen.constraints.view.order]
        assert (np.diff(slack) >= 0).all()
        assert screen.line == 7
        await pilot.press("r")
        slack = SEASON.measurement.rows.slack[screen.constraints.view.order]
        assert (np.diff(slack) <= 0).all()
        assert screen.line == 7

    drive(SEASON, script)


def test_first_last_page_and_a_line_by_number():
    async def script(pilot, screen):
        await pilot.press("end")
        assert screen.line == SEASON.head.model.m - 1
        await pilot.press("home")
        assert screen.line == 0
        await pilot.press("pagedown")
        assert screen.line == screen.constraints.visible_lines - 1
        await pilot.press("g", *"42", "enter")
        assert screen.line == 41
        await pilot.press("g", *"x", "enter")
        assert screen.line == 41

    drive(SEASON, script)


def test_next_and_previous_flagged_line():
    async def script(pilot, screen):
        await pilot.press("tab")
        flags = SEASON.marks.flags
        mask = np.zeros(SEASON.marks.room.size, dtype=bool)
        for flag, hits in flags.items():
            mask |= hits if flag is not Flag.ZERO_SLACK else False
        expected = np.flatnonzero(mask[SEASON.head.model.m :]) + SEASON.head.model.m
        await pilot.press("home", "full_stop")
        ahead = expected[expected > SEASON.head.model.m]
        assert screen.line == ahead[0]
        await pilot.press("full_stop", "comma")
        assert screen.line == ahead[0]

    drive(SEASON, script)


def test_the_other_table_shows_linked_lines_or_all():
    async def script(pilot, screen):
        linked = screen.variables.view.order.size
        await pilot.press("l")
        assert screen.variables.view.order.size == SEASON.head.model.n
        await pilot.press("down")
        assert screen.variables.view.order.size == SEASON.head.model.n
        await pilot.press("up", "l")
        assert screen.variables.view.order.size == linked

    drive(SEASON, script)


def test_families_fold_and_open():
    async def script(pilot, screen):
        await pilot.press("f")
        assert screen.constraints.folded
        shown = "\n".join(lines_of(screen.constraints))
        assert "heat" in shown and "degenerate" in shown
        await pilot.press("down", "enter")
        assert not screen.constraints.folded
        assert screen.constraints.view.family_word == "heat"
        assert screen.constraints.view.order.size == 12
        await pilot.press("f")
        assert screen.constraints.folded

    drive(SEASON, script)


def test_the_check_page_links_to_worst_lines():
    async def script(pilot, screen):
        await pilot.press("c")
        page = pilot.app.screen
        assert isinstance(page, CheckPage)
        assert page.check.lines_of_text == text.render(report(SEASON)).splitlines()
        await pilot.press("enter")
        assert pilot.app.screen is screen
        assert screen.line == SEASON.verdicts[0].worst

    drive(SEASON, script)


def test_help_lists_every_key_and_closes():
    async def script(pilot, screen):
        await pilot.press("question_mark")
        page = pilot.app.screen
        assert isinstance(page, PageScreen)
        assert "the whole residual check" in page.text and "  [ " in page.text
        await pilot.press("escape")
        assert pilot.app.screen is screen

    drive(WINTER, script)


def test_the_mirror_turns_and_comes_back_with_the_same_line():
    async def script(pilot, screen):
        await pilot.press("down")  # heat
        await pilot.press("d")
        await pilot.app.workers.wait_for_complete()
        await pilot.pause()
        turned = pilot.app.screen
        assert isinstance(turned, TurnedScreen)
        assert turned.leading is turned.variables
        assert turned.variables.view.names[turned.variables.view.line] == "heat"
        assert turned.found.passed
        await pilot.press("d")
        assert pilot.app.screen is screen and screen.line == 1

    drive(WINTER, script)


@pytest.mark.parametrize("line", range(WINTER.head.model.m + WINTER.head.model.n))
def test_every_line_is_found_again_in_the_dual_and_back(line):
    async def script(pilot, screen):
        screen.show_line(line)
        await pilot.press("d")
        await pilot.app.workers.wait_for_complete()
        await pilot.pause()
        assert pilot.app.screen.line == turn(WINTER).to_dual[line]
        await pilot.press("d")
        await pilot.pause()
        assert pilot.app.screen is screen and screen.line == line

    drive(WINTER, script)


@pytest.fixture
def held_turn(monkeypatch):
    """Turning that lasts until the event is set, as on a model of a million coefficients."""
    go_on = threading.Event()

    def slowly(found: Optimal) -> Any:
        assert go_on.wait(60)
        return turn(found)

    monkeypatch.setattr("lpview.turned.turn", slowly)
    return go_on


def test_the_screen_can_be_used_while_the_mirror_turns(held_turn):
    async def script(pilot, screen):
        await pilot.press("d", "down", "d")  # a second press does not turn twice
        assert pilot.app.screen is screen and screen.line == 1
        held_turn.set()
        await pilot.app.workers.wait_for_complete()
        await pilot.pause()
        assert isinstance(pilot.app.screen, TurnedScreen)
        await pilot.press("d")
        assert pilot.app.screen is screen and screen.line == 0

    drive(WINTER, script)


def test_escape_gives_up_turning_and_it_can_be_asked_for_again(held_turn):
    async def script(pilot, screen):
        await pilot.press("d", "escape")
        assert str(screen.query_one("#message").render()) == "the mirror was not turned"
        held_turn.set()
        await pilot.pause()
        assert pilot.app.screen is screen
        await pilot.press("d")
        while not isinstance(pilot.app.screen, TurnedScreen):
            await pilot.pause()

    drive(WINTER, script)


def test_a_turn_that_fails_is_said_in_a_line(monkeypatch):
    def broken(found: Optimal) -> Any:
        raise ZeroDivisionError("by zero")

    monkeypatch.setattr("lpview.turned.turn", broken)

    async def script(pilot, screen):
        await pilot.press("d")
        await pilot.app.workers.wait_for_complete()
        await pilot.pause()
        assert pilot.app.screen is screen
        assert "ZeroDivisionError: by zero" in str(screen.query_one("#message").render())

    drive(WINTER, script)


def test_the_ticket_is_what_the_command_prints(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)

    async def script(pilot, screen):
        await pilot.press("t")
        assert pilot.app.clipboard == Path("winter.ticket.txt").read_text()
        assert str(screen.query_one("#message").render()) == (
            "saved: winter.ticket.txt; also sent to the terminal's clipboard"
        )

    drive(WINTER, script)
    assert Path("winter.ticket.txt").read_text() == text.render(report(WINTER))


def test_every_outcome_has_a_screen_that_says_what_to_do():
    async def script(pilot, screen):
        assert isinstance(screen, OutcomeScreen)
        assert "infeasible, certified" in screen.text and "What to do:" in screen.text
        await pilot.press("q")

    assert drive(examined("winter-infeasible.csv"), script) == 3


def test_bad_input_shows_the_message_and_leaves_with_status_two():
    def unreadable(watch: Any, say: Any) -> Optimal:
        return read_model("gone.csv")  # type: ignore[return-value]

    async def go() -> int | None:
        app = LpviewApp(Work("gone.csv", unreadable))
        async with app.run_test(size=(80, 24)) as pilot:
            await app.workers.wait_for_complete()
            await pilot.pause()
            assert isinstance(app.screen, MessageScreen)
            expected = "gone.csv: expected a file or folder, got nothing of that name"
            assert app.screen.text.startswith(expected)
            await pilot.press("q")
        assert app.closing_text == expected
        return app.return_status

    assert asyncio.run(go()) == 2
